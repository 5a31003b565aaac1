"""README keeps its word: the output it shows is what the command prints, and its commands are the first blocks."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner

from retrofit.cli import main

ROOT = Path(__file__).resolve().parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")
BLOCKS = re.findall(r"^```(\w*)\n(.*?)^```$", README, re.M | re.S)


def test_first_two_blocks_are_the_two_commands() -> None:
    """The first block writes the report of a shipped case, the second runs the tests; each is one command."""
    (_, first), (_, second) = BLOCKS[:2]

    assert "retrofit report cases/harbour-market.toml" in first
    assert "pytest" in second
    assert first.count("\n") == second.count("\n") == 1


def test_tables_shown_are_the_tables_printed() -> None:
    """The terminal tables in README are what `retrofit compare` prints today."""
    shown = next(text for kind, text in BLOCKS if kind == "text" and "Same duty" in text)
    printed = CliRunner().invoke(main, ["compare", str(ROOT / "cases" / "harbour-market.toml")])

    assert printed.exit_code == 0
    assert shown.strip() in printed.output


def test_case_shown_is_part_of_the_case_shipped() -> None:
    """Every key of the case file in README has the value that the shipped case has, and it is a case by itself."""
    shown = tomllib.loads(next(text for kind, text in BLOCKS if kind == "toml"))
    shipped = tomllib.loads((ROOT / "cases" / "harbour-market.toml").read_text(encoding="utf-8"))
    keys = list(_keys(shown))

    assert len(keys) > 20
    assert set(keys) <= set(_keys(shipped))


def test_case_shown_can_be_compared(tmp_path: Path) -> None:
    """A reader who copies the block has a valid case file."""
    path = tmp_path / "plant.toml"
    path.write_text(next(text for kind, text in BLOCKS if kind == "toml"), encoding="utf-8")

    assert CliRunner().invoke(main, ["check", str(path)]).exit_code == 0


def _keys(table: dict[str, Any], above: str = "") -> Iterator[tuple[str, str]]:
    """Yield every key of a parsed file by its full name, with its value written out."""
    for name, value in table.items():
        if isinstance(value, dict):
            yield from _keys(value, f"{above}{name}.")
        else:
            yield f"{above}{name}", repr(value)


@pytest.mark.parametrize("name", ["DEVELOPERS.md", ".readme/report.png", ".ci/run"])
def test_files_named_exist(name: str) -> None:
    """Files that README and the project's rules name are there."""
    assert (ROOT / name).is_file()
