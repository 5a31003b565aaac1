"""The command as a process: what it loads, its streams, a cold store, signals, and odd terminals."""

import json
import os
import signal
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
# Runs the command and prints, to the error stream, which of the heavy libraries it has loaded.
WATCHED = """
import sys
from retrofit.cli import main
try:
    main(prog_name="retrofit")
except SystemExit as leaving:
    status = leaving.code
heavy = ("CoolProp", "numpy", "scipy", "matplotlib", "jinja2", "pydantic")
print("loaded:", *(name for name in heavy if name in sys.modules), file=sys.stderr)
sys.exit(status)
"""


def loaded(finished):
    """Return the heavy libraries that a finished process had loaded."""
    assert finished.returncode == 0, finished.stderr
    return set(finished.stderr.splitlines()[-1].split()[1:])


def test_help_loads_nothing_heavy(process):
    """Help and version come at once."""
    assert loaded(process("--help", code=WATCHED)) == set()
    assert loaded(process("compare", "--help", code=WATCHED)) == set()


def test_commands_on_files_and_catalogue_do_not_load_the_property_library(process, good, tmp_path):
    """Neither new nor refrigerants computes anything, nor does check for a case without readings."""
    heavy = {"CoolProp", "scipy", "matplotlib", "jinja2"}

    assert not loaded(process("check", good, code=WATCHED)) & heavy
    assert not loaded(process("new", tmp_path / "new.toml", code=WATCHED)) & heavy
    assert not loaded(process("refrigerants", "R134a", code=WATCHED)) & heavy


def test_a_warm_comparison_loads_neither_property_library_nor_plotting(process, run, good):
    """With the tables in the store the numbers come from them alone."""
    run("compare", good)  # warms the store
    finished = process("compare", good, "--json", code=WATCHED)

    assert loaded(finished) == {"numpy", "pydantic"}
    assert json.loads(finished.stdout)["schema"] == "retrofit.comparison/1"


def test_progress_goes_to_the_error_stream_and_results_alone_to_the_output(process, good, tmp_path):
    """With a cold store the output is one clean JSON object; a second run has nothing to report."""
    store = tmp_path / "store"
    cold = process("compare", good, "--json", RETROFIT_STORE=str(store))
    warm = process("compare", good, "--json", RETROFIT_STORE=str(store))

    assert (cold.returncode, warm.returncode, warm.stderr) == (0, 0, "")
    assert [line.split(" of ")[1].split(",")[0] for line in cold.stderr.splitlines()] == ["R-134a", "R-513A", "R-290"]
    assert json.loads(cold.stdout) == json.loads(warm.stdout)
    assert len(list(store.iterdir())) == 3


def test_a_store_that_cannot_be_written_costs_time_not_results(process, good, tmp_path):
    """The store lies under a file, so that no folder can be made; the numbers are the same."""
    (tmp_path / "file").write_text("kept")
    finished = process("compare", good, "--json", RETROFIT_STORE=str(tmp_path / "file" / "store"))
    usual = process("compare", good, "--json")

    assert finished.returncode == 0
    assert json.loads(finished.stdout) == json.loads(usual.stdout)
    assert "Traceback" not in finished.stderr
    assert (tmp_path / "file").read_text() == "kept"


@pytest.mark.parametrize(("arguments", "status"), [(("refrigerants", "R32"), 0), (("refrigerants", "R3z"), 2)])
def test_exit_statuses_reach_the_shell(process, arguments, status):
    """What the command decides is what the shell sees."""
    assert process(*arguments).returncode == status


def test_an_error_of_ours_reaches_the_shell_as_1(process, good):
    """The report is refused before a single byte is written."""
    finished = process("new", good)

    assert (finished.returncode, finished.stdout) == (1, "")


@pytest.mark.parametrize(
    "arguments", [("refrigerants",), ("refrigerants", "--json"), ("pt", "R134a", "--step", "0.1 K")]
)
def test_a_closed_pipe_ends_quietly(arguments):
    """Whoever reads one line and leaves, as `head -1` does, sees no traceback."""
    environment = {**os.environ, "PYTHONPATH": str(ROOT)}
    command = [sys.executable, "-m", "retrofit", *arguments]
    with subprocess.Popen(command, env=environment, stdout=subprocess.PIPE, stderr=subprocess.PIPE) as started:
        assert started.stdout.readline()
        started.stdout.close()
        complaint = started.stderr.read()
        started.wait(timeout=60)

    assert complaint == b""


def test_a_pipe_closed_before_anything_is_written_ends_quietly():
    """The same where not even the first line finds a reader."""
    environment = {**os.environ, "PYTHONPATH": str(ROOT)}
    command = [sys.executable, "-m", "retrofit", "refrigerants"]
    with subprocess.Popen(command, env=environment, stdout=subprocess.PIPE, stderr=subprocess.PIPE) as started:
        started.stdout.close()
        complaint = started.stderr.read()
        started.wait(timeout=60)

    assert complaint == b""
    assert started.returncode == 1


def test_an_interrupt_while_tables_are_built_ends_quietly(good, tmp_path):
    """Ctrl-C leaves no traceback and no half table in the store; the status is 130, by the custom of shells."""
    store = tmp_path / "store"
    environment = {**os.environ, "PYTHONPATH": str(ROOT), "RETROFIT_STORE": str(store)}
    command = [sys.executable, "-m", "retrofit", "compare", str(good)]
    with subprocess.Popen(
        command, env=environment, stdout=subprocess.PIPE, stderr=subprocess.PIPE, encoding="utf-8"
    ) as started:
        assert started.stderr.readline().startswith("Building")
        started.send_signal(signal.SIGINT)
        output, complaint = started.communicate(timeout=60)

    assert (started.returncode, output) == (130, "")
    assert "Traceback" not in complaint
    assert complaint.splitlines()[-1].startswith("retrofit: stopped")
    assert not store.exists() or not list(store.glob(".half-*"))


@pytest.mark.parametrize("encoding", ["ascii", "latin-1", "cp1252", "utf-8"])
def test_any_encoding_of_the_output_keeps_every_sign(process, good, encoding):
    """A minus that the encoding lacks is a hyphen, never lost and never an error."""
    finished = process("compare", good, text=False, PYTHONIOENCODING=encoding)
    text = finished.stdout.decode("utf-8" if encoding == "ascii" else encoding)  # no terminal is plain ASCII today

    assert finished.returncode == 0, finished.stderr
    assert finished.stderr == b""
    evaporating = "evaporating {}5.0\N{NO-BREAK SPACE}°C"
    assert evaporating.format("−") in text or evaporating.format("-") in text
    assert "?" not in text.replace("Can it go on", "").split("Cautions")[1]


def test_the_locale_c_is_enough(process, good):
    """Without any locale set the output is still text."""
    for more in ({}, {"PYTHONUTF8": "0", "PYTHONCOERCECLOCALE": "0"}):
        finished = process("compare", good, text=False, LC_ALL="C", LANG="", **more)

        assert (finished.returncode, finished.stderr) == (0, b"")


def test_json_is_plain_ascii(process, tmp_path, good):
    """A title in any script comes out escaped, whatever the encoding, and reads back the same."""
    title = "Kühlhaus 冷媒"
    path = tmp_path / "case.toml"
    path.write_text(good.read_text().replace("Corner shop", title), encoding="utf-8")
    finished = process("compare", path, "--json", text=False, PYTHONIOENCODING="latin-1")

    assert finished.returncode == 0, finished.stderr
    assert finished.stdout.isascii()
    assert json.loads(finished.stdout)["title"] == title


def test_a_file_name_that_is_no_text_is_shown(process, tmp_path):
    """Bytes that are not UTF-8 in a path do not break the message."""
    name = os.fsencode(tmp_path) + b"/\xff.toml"
    finished = process("new", os.fsdecode(name), text=False)

    assert finished.returncode == 0, finished.stderr
    assert os.path.exists(name)


def in_a_terminal(arguments, **environment):
    """Run the command in a terminal and return what it shows."""
    import pty

    main_end, its_end = pty.openpty()
    settings = {**os.environ, "PYTHONPATH": str(ROOT), "TERM": "xterm", **environment}
    settings = {name: value for name, value in settings.items() if value is not None}
    command = [sys.executable, "-m", "retrofit", *(str(item) for item in arguments)]
    with subprocess.Popen(command, env=settings, stdin=its_end, stdout=its_end, stderr=its_end) as started:
        os.close(its_end)
        shown = b""
        try:
            while part := os.read(main_end, 65536):
                shown += part
        except OSError:  # the way Linux says that the other end is closed
            pass
        started.wait(timeout=60)
    os.close(main_end)
    return shown.decode()


def test_headings_are_bold_in_a_terminal_that_wants_it(good):
    """Bold on a terminal, nothing with NO_COLOR or a dumb one; see no-color.org for the first."""
    assert "\x1b[1mCautions\x1b[0m" in in_a_terminal(("compare", good), NO_COLOR=None)
    assert "\x1b" not in in_a_terminal(("compare", good), NO_COLOR="1")
    assert "\x1b" not in in_a_terminal(("compare", good), NO_COLOR=None, TERM="dumb")


@pytest.mark.parametrize("streams", [">&-", "2>&-", "<&- >&- 2>&-"])
@pytest.mark.parametrize("command", ["check {case}", "compare {case}", "refrigerants R448A", "check none.toml"])
def test_streams_that_are_closed_end_without_a_traceback(good, streams, command):
    """What cannot be said goes nowhere; the status still says whether it was done."""
    line = f"exec {sys.executable} -m retrofit {command.format(case=good)} {streams}"
    ended = subprocess.run(
        ["bash", "-c", line], env={**os.environ, "PYTHONPATH": str(ROOT)}, capture_output=True, timeout=120, check=False
    )

    assert ended.returncode == (2 if "none" in command else 0)
    assert b"Traceback" not in ended.stdout + ended.stderr


def test_a_report_where_nothing_but_its_folder_can_be_written(process, good, tmp_path):
    """Without a home: the report is there, what is lost is said in our own words, and no library says anything."""
    nowhere = "/proc/none"
    ended = process(
        "report", good, "-o", tmp_path / "a.html",
        HOME=nowhere, XDG_CACHE_HOME=nowhere, XDG_CONFIG_HOME=nowhere, RETROFIT_STORE=nowhere,
    )  # fmt: skip

    assert ended.returncode == 0
    assert (tmp_path / "a.html").exists()
    assert "retrofit: the property tables cannot be kept in /proc/none" in ended.stderr
    assert all(line.startswith(("Building the property tables", "retrofit: ")) for line in ended.stderr.splitlines())
