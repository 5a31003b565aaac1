"""The command itself: where it listens, how it ends, and what it says."""

import os
import re
import signal
import socket
import subprocess
import sys
import time
import urllib.request

import pytest

from retrofit.meeting.server import ARRIVES_S
from tests.meeting.conftest import ROOT


@pytest.fixture
def started(case_file):
    """Return a function that starts the command and gives process and address; it is ended after the test."""
    processes = []

    def start(*options):
        process = subprocess.Popen(
            [sys.executable, "-m", "retrofit", "meeting", str(case_file), "--no-browser", *options],
            env={**os.environ, "PYTHONPATH": str(ROOT)},
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            text=True,
        )
        processes.append(process)
        line = process.stdout.readline()
        found = re.search(r"http://127\.0\.0\.1:[0-9]+/", line)
        return process, found[0] if found else line + process.stderr.read()

    yield start
    for process in processes:
        process.kill()
        process.communicate()


def test_it_serves_and_ends_with_the_keyboard(started, case_file):
    """It says where the page is, answers there, survives what is no request at all, and ends cleanly by Ctrl-C."""
    process, address = started()
    port = int(address.rstrip("/").rpartition(":")[2])
    for rubbish in (b"\x00\xff\r\n\r\n", b"GET\r\n\r\n", b"POST /change HTTP/1.1\r\nContent-Length: -5\r\n\r\n", b""):
        with socket.create_connection(("127.0.0.1", port), timeout=5) as connection:
            connection.sendall(rubbish)
    silent = [socket.create_connection(("127.0.0.1", port), timeout=5) for _ in range(40)]
    with urllib.request.urlopen(address, timeout=4) as answer:  # before the silent ones are closed for their silence
        html = answer.read().decode()
    process.send_signal(signal.SIGINT)
    out, err = process.communicate(timeout=20)
    for connection in silent:
        connection.close()

    assert "Harbour market" in html
    assert process.returncode == 0
    assert "The meeting is over" in out
    assert "Traceback" not in err
    assert [path.name for path in case_file.parent.iterdir()] == ["market.toml"]


DRIPPED = {
    "in its head": b"GET / HTTP/1.1\r\nHost: 127.0.0.1\r\nX-Slow: ",
    "in its body": b"POST /change HTTP/1.1\r\nHost: 127.0.0.1\r\nContent-Type: application/x-www-form-urlencoded\r\n"
    b"Content-Length: 900\r\n\r\na=",
    "in pieces": b"POST /change HTTP/1.1\r\nHost: 127.0.0.1\r\nTransfer-Encoding: chunked\r\n"
    b"Content-Type: application/x-www-form-urlencoded\r\n\r\n9\r\na=",
}


@pytest.mark.parametrize("begun", DRIPPED.values(), ids=DRIPPED)
def test_connections_that_drip_do_not_keep_the_meeting(begun, started):
    """More connections than there are places, each with a byte a second: the page still comes, and they are closed."""
    _, address = started()
    port = int(address.rstrip("/").rpartition(":")[2])
    with urllib.request.urlopen(address, timeout=30) as answer:  # the first answer is computed
        answer.read()
    dripping = [socket.create_connection(("127.0.0.1", port), timeout=5) for _ in range(100)]
    begin = time.monotonic()
    for connection in dripping:
        connection.sendall(begun)
    with urllib.request.urlopen(f"{address}news?seen=1", timeout=20) as answer:
        status, waited = answer.status, time.monotonic() - begin
    alive = list(dripping)
    while alive and time.monotonic() - begin < ARRIVES_S + 15.0:
        time.sleep(1.0)
        alive = [connection for connection in alive if _drips(connection)]
    for connection in dripping:
        connection.close()

    assert status in (200, 204)
    assert waited < ARRIVES_S  # nobody had to be closed for the time it took
    assert alive == []


def _drips(connection):
    """Send one more byte, and say whether the other side still listens."""
    try:
        connection.sendall(b"1")
        connection.setblocking(False)
        return connection.recv(1000) != b"" and _drips(connection)
    except BlockingIOError:
        return True
    except OSError:
        return False
    finally:
        connection.setblocking(True)


def test_it_listens_on_this_machine_alone(started):
    """The port is open on 127.0.0.1 and on no other address of this machine."""
    process, address = started()
    port = int(address.rstrip("/").rpartition(":")[2])
    with socket.socket(socket.AF_INET, socket.SOCK_DGRAM) as probe:
        try:
            probe.connect(("192.0.2.1", 9))  # sends nothing: it only tells which address would be used
            other = probe.getsockname()[0]
        except OSError:
            other = "127.0.0.2"
    time.sleep(0.1)

    assert process.poll() is None
    with pytest.raises((ConnectionError, TimeoutError)):
        socket.create_connection((other, port), timeout=2).close()


def test_a_port_that_is_taken_is_told(started):
    """Another port is asked for in one line; no traceback."""
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        process, said = started("--port", str(taken.getsockname()[1]))
        process.wait(timeout=20)

    assert process.returncode == 1
    assert "cannot be had" in said
    assert "Traceback" not in said


def test_the_end_waits_for_a_revision_and_not_for_a_browser(started, case_file):
    """Ctrl-C while a revision is written: both files are there; an open connection that says nothing stops nothing."""
    process, address = started()
    port = int(address.rstrip("/").rpartition(":")[2])
    with urllib.request.urlopen(address, timeout=20) as answer:
        token = re.search(r'name="token" value="([^"]+)"', answer.read().decode())[1]
    form = f"token={token}&what=end".encode()
    head = f"POST /freeze HTTP/1.1\r\nHost: 127.0.0.1:{port}\r\nContent-Type: application/x-www-form-urlencoded\r\n"
    with (
        socket.create_connection(("127.0.0.1", port), timeout=5),
        socket.create_connection(("127.0.0.1", port), timeout=5) as asking,
    ):
        asking.sendall(head.encode() + f"Content-Length: {len(form)}\r\n\r\n".encode() + form)
        until = time.monotonic() + 20.0
        while not case_file.with_name("market-rev-a.toml").exists() and time.monotonic() < until:
            time.sleep(0.01)
        process.send_signal(signal.SIGINT)
        out, err = process.communicate(timeout=60)

    assert process.returncode == 0
    assert "The meeting is over" in out
    assert "Traceback" not in err
    assert sorted(path.name for path in case_file.parent.iterdir()) == [
        "market-rev-a.html", "market-rev-a.toml", "market.toml",
    ]  # fmt: skip
