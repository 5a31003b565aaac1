"""Running the page on this machine: one port of 127.0.0.1, a bounded number of requests at a time, an end by Ctrl-C."""

from __future__ import annotations

import io
import logging
import signal
import socket
import threading
import time
import webbrowser
from collections.abc import Callable, Iterator
from contextlib import contextmanager, suppress
from typing import TYPE_CHECKING, Any

from retrofit.errors import PortError
from retrofit.meeting.app import create_app
from retrofit.meeting.security import LARGEST_REQUEST_BYTES
from retrofit.meeting.session import Session
from retrofit.meeting.writer import WRITING

if TYPE_CHECKING:
    from werkzeug.serving import BaseWSGIServer

ADDRESS = "127.0.0.1"
MOST_AT_ONCE = 64  # requests being read or answered; further ones wait in the queue of the system
ARRIVES_S = 5.0  # a request is here with its last byte, however slowly it comes, or its connection is closed
TAKEN_S = 30.0  # an answer is taken, or its connection is closed


class _Arriving(io.RawIOBase):
    """What comes in on a connection, up to one moment for all of it."""

    def __init__(self, connection: socket.socket) -> None:
        self.connection, self.until = connection, time.monotonic() + ARRIVES_S

    def readable(self) -> bool:
        return True

    def readinto(self, place: Any) -> int:
        left = self.until - time.monotonic()
        if left <= 0:
            raise TimeoutError("the request did not arrive in time")
        self.connection.settimeout(left)
        return self.connection.recv_into(place)


class _Places:
    """The places for connections: when all are taken, the one whose request has been arriving longest gives way."""

    def __init__(self) -> None:
        self._free = threading.BoundedSemaphore(MOST_AT_ONCE)
        self._lock = threading.Lock()
        self._arriving: dict[int, socket.socket] = {}

    def take(self, connection: socket.socket) -> None:
        """Wait for a place; who has one and is not done asking may lose it."""
        if not self._free.acquire(blocking=False):
            self._end_slowest()
            self._free.acquire()
        with self._lock:
            self._arriving[id(connection)] = connection

    def has_arrived(self, connection: socket.socket) -> None:
        """Note that a request is here as a whole: its connection stays until it is answered."""
        with self._lock:
            self._arriving.pop(id(connection), None)

    def leave(self, connection: socket.socket) -> None:
        """Give a place back."""
        self.has_arrived(connection)
        self._free.release()

    def _end_slowest(self) -> None:
        with self._lock:
            if slowest := next(iter(self._arriving), None):
                with suppress(OSError):
                    self._arriving.pop(slowest).shutdown(socket.SHUT_RDWR)


def make_server(session: Session, port: int = 0) -> BaseWSGIServer:
    """Return a server of a meeting, bound and ready to be run.

    Args:
        session: The meeting.
        port: Port of 127.0.0.1; 0 for any that is free. [-]
    Raises: PortError if the port is taken or not allowed.
    """
    from werkzeug.serving import ThreadedWSGIServer, WSGIRequestHandler

    places = _Places()

    class Handler(WSGIRequestHandler):
        def setup(self) -> None:
            super().setup()
            self.rfile = io.BufferedReader(_Arriving(self.connection))

        def run_wsgi(self) -> None:
            """Take the whole of what a form sends before it is answered."""
            length = self.headers.get("Content-Length", "0")
            is_plain = "Transfer-Encoding" not in self.headers and "Expect" not in self.headers
            is_short = length.isascii() and length.isdigit() and len(length) < 9
            if is_plain and is_short and int(length) <= LARGEST_REQUEST_BYTES:
                self.rfile = io.BytesIO(self.rfile.read(int(length)))
                places.has_arrived(self.connection)
            self.connection.settimeout(TAKEN_S)
            super().run_wsgi()

        def log(self, type: str, message: str, *args: Any) -> None:
            """Keep quiet: what is asked for is nobody's business."""

    class Server(ThreadedWSGIServer):
        daemon_threads = True

        def process_request(self, request: Any, client_address: Any) -> None:
            places.take(request)
            super().process_request(request, client_address)

        def process_request_thread(self, request: Any, client_address: Any) -> None:
            try:
                super().process_request_thread(request, client_address)
            finally:
                places.leave(request)

        def handle_error(self, request: Any, client_address: Any) -> None:
            """A browser that goes away in the middle of an answer is no error."""

    logging.getLogger("werkzeug").setLevel(logging.ERROR)
    try:
        return Server(ADDRESS, port, create_app(session), handler=Handler)
    except (OSError, SystemExit, OverflowError) as error:
        raise PortError(
            f"port {port} of this machine cannot be had; leave --port out to take any that is free"
        ) from error


def serve(session: Session, port: int, is_opened: bool, say: Callable[[str], None]) -> None:
    """Show a meeting's page until Ctrl-C.

    Args:
        session: The meeting.
        port: Port of 127.0.0.1; 0 for any that is free. [-]
        is_opened: Whether to open a browser. [-]
        say: Takes what to tell the user.
    Raises: PortError if the port cannot be had.
    """
    server = make_server(session, port)
    address = f"http://{ADDRESS}:{server.server_port}/"
    say(f"The meeting is at {address} on this machine only. Ctrl-C ends it; what was frozen is kept.")
    if is_opened:
        threading.Thread(target=webbrowser.open, args=(address,), daemon=True).start()
    try:
        with _ended_as_by_keyboard():
            server.serve_forever(poll_interval=0.1)
    except KeyboardInterrupt:
        pass
    finally:
        server.server_close()
    if any(thread.name == WRITING for thread in threading.enumerate()):
        say("A revision is being written and is finished first.")
    say("The meeting is over.")


@contextmanager
def _ended_as_by_keyboard() -> Iterator[None]:
    """Take the signal to end, as a machine that shuts down sends it, for Ctrl-C: what is being written is finished."""
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    before = signal.signal(signal.SIGTERM, signal.default_int_handler)
    try:
        yield
    finally:
        signal.signal(signal.SIGTERM, before)
