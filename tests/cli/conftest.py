"""Case files on disk, and two ways to run the command: in this process, and as a process of its own."""

import os
import subprocess
import sys
from pathlib import Path

import pytest
from click.testing import CliRunner

from retrofit.cli import main

ROOT = Path(__file__).resolve().parents[2]
GOOD = """\
title = "Corner shop"
[plant]
refrigerant = "R134a"
[duty]
cooling = "20 kW"
evaporating = "-5 degC"
condensing = "40 degC"
[compare]
candidates = ["R513A", "R290"]
"""
BAD = """\
title = "Corner shop"
[plant]
refrigerant = "R134"
[duty]
coolinq = "20 kW"
evaporating = "-5"
condensing = "40 degC"
[compare]
candidates = ["R513A", "R513A"]
"""


@pytest.fixture
def good(tmp_path):
    """Return the path of a case file that can be used."""
    path = tmp_path / "shop.toml"
    path.write_text(GOOD, encoding="utf-8")
    return path


@pytest.fixture
def bad(tmp_path):
    """Return the path of a case file with five faults."""
    path = tmp_path / "bad.toml"
    path.write_text(BAD, encoding="utf-8")
    return path


@pytest.fixture
def run():
    """Return a function that runs the command in this process; an exception other than an exit is raised."""

    def invoke(*arguments):
        result = CliRunner().invoke(main, [str(item) for item in arguments], prog_name="retrofit")
        if result.exception and not isinstance(result.exception, SystemExit):
            raise result.exception
        return result

    return invoke


@pytest.fixture
def process():
    """Return a function that runs the command as a process of its own, with changes to the environment."""

    def start(*arguments, code=None, text=True, cwd=None, **environment):
        return subprocess.run(
            [sys.executable, *(("-c", code) if code else ("-m", "retrofit")), *(str(item) for item in arguments)],
            env={**os.environ, "PYTHONPATH": str(ROOT), **environment},
            capture_output=True,
            encoding="utf-8" if text else None,
            cwd=cwd,
            timeout=120,
            check=False,
        )

    return start
