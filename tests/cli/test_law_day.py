"""The day the tables of law are read for can be named on the command line."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from click.testing import CliRunner

from retrofit.cli import main

CASE = str(Path(__file__).resolve().parents[2] / "cases" / "harbour-market.toml")


@pytest.mark.parametrize("day", ["2026-12-01", "2033-06-30"])
def test_the_day_named_is_the_day_read(day: str) -> None:
    """`--on` sets the day that the JSON says the tables were read for."""
    done = CliRunner().invoke(main, ["compare", CASE, "--json", "--on", day])

    assert done.exit_code == 0
    assert day in json.dumps(json.loads(done.stdout)["law"])


def test_a_day_that_is_none_is_wrong_usage() -> None:
    """Another form of date ends with status 2 and says which form is wanted."""
    done = CliRunner().invoke(main, ["compare", CASE, "--on", "1.4.2027"])

    assert done.exit_code == 2
    assert "%Y-%m-%d" in done.stderr
