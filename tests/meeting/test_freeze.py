"""Freezing: a whole case file and its report beside the original, and nothing else anywhere."""

import contextlib
import fcntl
import os
import re
import signal
import subprocess
import sys
import threading
import time
import tomllib
from datetime import datetime

import pytest

from retrofit.case import as_key, as_toml, laid_over, read_case
from retrofit.checks import assess
from retrofit.errors import ReportError
from retrofit.meeting import session_of, writer
from retrofit.meeting.freeze import freeze, whole_toml
from retrofit.meeting.pair import publish, repair
from retrofit.report.carried import read_carried
from retrofit.study import compare
from tests.meeting.conftest import ROOT, Client, case_text

SHIPPED = sorted(path.stem for path in (ROOT / "cases").glob("*.toml"))


def test_a_frozen_case_is_the_meeting_s_case(client, case_file, read):
    """Read back, the revision has what was changed and added, and gives the numbers of the page."""
    before = case_file.read_bytes()
    client.change(**{"in.duty.condensing": "46 degC", "in.plant.oil": "x", "in.duty.line_superheat": ""})
    client.change("add", designation="R449A")
    client.change("note", **{"n.meeting": "Ask the maker\nof the compressors."})
    client.change("weigh", **{"w.energy": "9"})
    shown = client.session.moment().outcome.comparison
    page = client.change(path="/freeze", what="Hotter <b>roof</b>")
    revision = case_file.with_name("market-rev-a.toml")
    text, frozen = revision.read_text(encoding="utf-8"), assess(compare(read_case(revision)))

    assert [entry.duty for entry in frozen.entries] == [entry.duty for entry in shown.entries]
    assert [entry.verdict for entry in frozen.entries] == [entry.verdict for entry in shown.entries]
    assert frozen.case.given["duty.condensing"] == "46 degC"
    assert "duty.line_superheat" not in frozen.case.given
    assert frozen.case.report.revisions[-1].rev == "A"
    assert frozen.case.report.revisions[-1].what == "Hotter <b>roof</b>"
    assert "# a gauge" not in text
    assert "# nameplate" in text  # the original's own remarks are kept
    assert "Ask the maker" in text
    assert "Weight of energy: 9." in text
    assert "was 42 degC" in text
    assert "market-rev-a.html" in page
    assert "<b>roof" not in page
    assert case_file.read_bytes() == before


def test_the_report_of_a_revision_is_written_beside_it(client, case_file):
    """The report is the one of the frozen case, with its revision in it."""
    client.change(path="/freeze", what="First talk")
    report = case_file.with_name("market-rev-a.html").read_text(encoding="utf-8")

    assert "First talk" in report
    assert "Harbour market, medium-temperature rack" in report
    assert sorted(path.name for path in case_file.parent.iterdir()) == [
        "market-rev-a.html", "market-rev-a.toml", "market.toml",
    ]  # fmt: skip


def test_nothing_is_overwritten(client, case_file):
    """A name that is taken, as case or as report, is passed over."""
    case_file.with_name("market-rev-a.toml").write_text("mine", encoding="utf-8")
    case_file.with_name("market-rev-b.html").write_text("mine", encoding="utf-8")
    client.change(path="/freeze", what="")
    client.change(path="/freeze", what="")

    assert case_file.with_name("market-rev-a.toml").read_text(encoding="utf-8") == "mine"
    assert case_file.with_name("market-rev-b.html").read_text(encoding="utf-8") == "mine"
    assert not case_file.with_name("market-rev-b.toml").exists()
    assert case_file.with_name("market-rev-c.toml").exists()
    assert case_file.with_name("market-rev-d.html").exists()


def test_what_cannot_be_written_is_said_on_the_page(client, case_file, monkeypatch):
    """A report that fails leaves no half of a revision, and the page says why."""

    def fail(*parts, **named):
        raise ReportError("the disk is full")

    monkeypatch.setattr("retrofit.meeting.freeze.render_html", fail)
    page = client.change(path="/freeze", what="never")

    assert "Not frozen: the disk is full" in page
    assert [path.name for path in case_file.parent.iterdir()] == ["market.toml"]


def test_what_hindered_a_revision_is_not_said_beside_the_next(client, monkeypatch):
    """Once one is written, the page shows that one alone."""
    monkeypatch.setattr("retrofit.meeting.freeze.render_html", lambda *parts, **named: 1 / 0)
    assert "Not frozen" in client.change(path="/freeze", what="never")
    monkeypatch.undo()
    page = client.change(path="/freeze", what="at last")

    assert "market-rev-a.html" in page
    assert "Not frozen" not in page


def test_every_revision_lists_all_before_it(client, case_file, monkeypatch):
    """Those of the same meeting, and those of a meeting before it on the same case."""
    monkeypatch.setattr("retrofit.meeting.freeze.render_html", lambda *parts, **named: "<html></html>")
    for what in ("first", "second"):
        client.change(path="/freeze", what=what)
    later = Client(session_of(case_file))
    later.change(path="/freeze", what="third")
    listed = {
        letter: [
            (row.rev, row.what) for row in read_case(case_file.with_name(f"market-rev-{letter}.toml")).report.revisions
        ]
        for letter in "abc"
    }

    assert listed["a"] == [("A", "first")]
    assert listed["b"] == [("A", "first"), ("B", "second")]
    assert listed["c"] == [("A", "first"), ("B", "second"), ("C", "third")]


KILLED = """
import os, signal, sys
from datetime import datetime
from pathlib import Path
from retrofit.meeting import freeze, pair, session_of

at, count = int(sys.argv[1]), 0
def before(function):
    def run(*parts, **named):
        global count
        count += 1
        if count == at:
            os.kill(os.getpid(), getattr(signal, sys.argv[2]))
        return function(*parts, **named)
    return run

session = session_of("market.toml")
freeze.assess = freeze.whole = lambda *parts: None
freeze.compare = before(lambda case: None)
freeze.render_html = before(lambda *parts, **named: Path(sys.argv[3]).read_text(encoding="utf-8"))
os.fsync, os.link, pair.Path.unlink = before(os.fsync), before(os.link), before(pair.Path.unlink)
freeze.freeze(session.source, session.state, "killed", datetime(2027, 1, 15))
"""


@pytest.fixture(scope="module")
def drawn(tmp_path_factory):
    """Return the report of the revision that the killed processes write."""
    folder = tmp_path_factory.mktemp("drawn")
    (folder / "market.toml").write_text(case_text(has_year=False), encoding="utf-8")
    with contextlib.chdir(folder):
        session = session_of("market.toml")
        return folder / freeze(session.source, session.state, "killed", datetime(2027, 1, 15)).report


@pytest.mark.parametrize(
    ("at", "name"), [*((at, "SIGKILL") for at in range(1, 9)), *((at, "SIGTERM") for at in (4, 6))]
)
def test_a_killed_process_leaves_both_files_or_none(case_file, drawn, at, name):
    """Killed before any step: a revision is there whole or not at all, at the latest when the next meeting begins.

    The steps: solve, draw the page, write the case, write the report, name the report, name the case, tidy up twice.
    """
    code = [sys.executable, "-c", KILLED, str(at), name, str(drawn)]
    ended = subprocess.run(
        code, cwd=case_file.parent, env={**os.environ, "PYTHONPATH": str(ROOT)}, timeout=120, check=False
    )
    revision = case_file.with_name("market-rev-a.toml")
    report = revision.with_suffix(".html")

    assert ended.returncode == -getattr(signal, name)
    assert report.exists() or not revision.exists()  # never a revision without its report
    session_of(case_file)
    assert revision.exists() == report.exists() == (at > 5)
    assert [path.name for path in case_file.parent.iterdir() if path.name.startswith(".")] == []
    if at > 5:
        assert read_carried(report).case_text == revision.read_text(encoding="utf-8")


def test_what_another_meeting_is_writing_is_left_alone(case_file):
    """Only what an ended process left is tidied up."""
    half = case_file.with_name(".half-market-rev-a.toml.x1y2z3")
    half.write_text("half")
    with open(half, "rb") as held:
        fcntl.flock(held, fcntl.LOCK_EX)
        repair(case_file)
        assert half.exists()
    repair(case_file)
    assert not half.exists()


def test_two_meetings_never_take_one_name(case_file):
    """The name of the case, or of the report, is taken at the last moment: neither file is touched, nothing is left."""
    revision = case_file.with_name("market-rev-a.toml")
    for taken in (revision, revision.with_suffix(".html")):
        taken.write_text("theirs")
        assert publish(revision, "ours", "ours") is False
        assert taken.read_text() == "theirs"
        assert sorted(path.name for path in case_file.parent.iterdir()) == sorted(["market.toml", taken.name])
        taken.unlink()


def test_a_meeting_that_is_told_to_end_finishes_its_revision(case_file):
    """SIGTERM, as a machine that shuts down sends it, ends the meeting like Ctrl-C: both files are written first."""
    code = (
        "import os, signal, sys, threading\n"
        "from datetime import datetime\n"
        "from retrofit.meeting import session_of\n"
        "from retrofit.meeting.server import serve\n"
        "from retrofit.meeting.writer import Writer\n"
        "session = session_of(sys.argv[1])\n"
        "Writer(session, 0.0).begin('last', datetime.now())\n"
        "def say(text):\n"
        "    print(text)\n"
        "    if 'Ctrl-C' in text:\n"
        "        threading.Timer(0.3, os.kill, (os.getpid(), signal.SIGTERM)).start()\n"
        "serve(session, 0, False, say)\n"
    )
    ended = subprocess.run(
        [sys.executable, "-c", code, str(case_file)], cwd=ROOT, timeout=120, check=False, capture_output=True, text=True
    )

    assert ended.returncode == 0, ended.stderr
    assert "The meeting is over." in ended.stdout
    assert sorted(path.name for path in case_file.parent.iterdir()) == [
        "market-rev-a.html", "market-rev-a.toml", "market.toml",
    ]  # fmt: skip


@pytest.mark.parametrize("name", SHIPPED)
def test_a_case_written_anew_is_the_same_case(name):
    """Every shipped case, written out by our own writer, reads back equal (by Python's own parser)."""
    data = tomllib.loads((ROOT / "cases" / f"{name}.toml").read_text(encoding="utf-8"))

    assert tomllib.loads(whole_toml(data)) == data


@pytest.mark.parametrize(
    "text", ['a"b', "back\\slash", "tab\t", "\u00e9 \u2212 \U0001f9ca", "\x7f", "'''", "new\nline", ""]
)
def test_any_text_can_be_written(text):
    """Texts and keys with any character read back as they were."""
    assert tomllib.loads(f"{as_key(text)} = {as_toml([text, {text: text}])}") == {text: [text, {text: text}]}


def test_changes_leave_the_data_alone():
    """Laying changes over a case makes new data; the old stays as it was."""
    data = {"duty": {"cooling": "1 kW", "subcooling": "3 K"}, "compare": {"candidates": ["R290"]}}
    laid = laid_over(data, {"duty.cooling": "2 kW", "duty.subcooling": "", "plant.x": "0.5"}, ("R600a",))

    assert laid == {
        "duty": {"cooling": "2 kW"}, "compare": {"candidates": ["R290", "R600a"]}, "plant": {"x": 0.5},
    }  # fmt: skip
    assert data == {"duty": {"cooling": "1 kW", "subcooling": "3 K"}, "compare": {"candidates": ["R290"]}}


def test_the_name_comes_from_the_server(client, case_file):
    """Whatever a form says about names, the file is named after the case."""
    client.post(path="/freeze", what="../../elsewhere", name="../evil.toml", case_file="/tmp/evil.toml")

    assert [path.name for path in sorted(case_file.parent.iterdir())] == [
        "market-rev-a.html", "market-rev-a.toml", "market.toml",
    ]  # fmt: skip
    assert re.search(r"elsewhere", case_file.with_name("market-rev-a.toml").read_text(encoding="utf-8"))


def test_a_revision_of_the_case_is_counted_on(case_file):
    """A case that has revisions A and B gets C, in its table and in the names of the files."""
    text = case_file.read_text(encoding="utf-8")
    rows = 'revisions = [["A", "2026-11-20", "first", "x"], ["B", "2026-11-21", "second", "x"]]'
    case_file.write_text(text.replace("revisions = []", rows), encoding="utf-8")
    Client(session_of(case_file)).change(path="/freeze", what="third")

    frozen = read_case(case_file.with_name("market-rev-c.toml"))
    assert [row.rev for row in frozen.report.revisions] == ["A", "B", "C"]


def test_a_revision_that_takes_long_is_told_and_finished(client, case_file, read, monkeypatch):
    """The page says at once what is written, and renews itself without a script; later changes are not in it."""
    gate, whole = threading.Event(), writer.freeze
    monkeypatch.setattr(writer, "freeze", lambda *parts: gate.wait(30.0) and whole(*parts))
    own = client.app.extensions["meeting"].writer
    own.patience_s = 0.01
    page = client.change(path="/freeze", what="First talk")
    second = client.change(path="/freeze", what="Too soon")
    client.change(**{"in.duty.condensing": "47 degC"})
    gate.set()
    until = time.monotonic() + 60.0
    while own.is_writing and time.monotonic() < until:
        time.sleep(0.02)

    assert "Writing the revision and its report, 0 s so far" in read(page)[1]
    assert 'http-equiv="refresh"' in page
    assert "still being written" in read(second)[1]
    assert "market-rev-a.html" in client.page()
    assert 'http-equiv="refresh"' not in client.page()
    assert 'condensing = "42 degC"' in case_file.with_name("market-rev-a.toml").read_text(encoding="utf-8")


def test_a_fault_while_writing_is_told(client, case_file, monkeypatch):
    """A bug in the writing leaves no file, says that it was one, and the next revision is written."""
    monkeypatch.setattr(writer, "freeze", lambda *parts: 1 / 0)
    broken = client.change(path="/freeze", what="x")
    monkeypatch.undo()
    after = client.change(path="/freeze", what="y")

    assert "Not frozen: by a fault of the program" in broken
    assert "market-rev-a.html" in after


def test_what_a_window_has_not_seen_is_not_frozen_by_it(client, case_file):
    """Another window changed an input meanwhile: no revision is written, and the page names the change."""
    seen = client.session.version
    client.change(window="a", **{"in.duty.condensing": "45 degC"})
    client.post(path="/freeze", seen=seen, window="b", what="agreed")

    assert "Condensing: changed to 45 degC (was 42 degC) by another window meanwhile" in client.page()
    assert [path.name for path in case_file.parent.iterdir()] == ["market.toml"]
