"""The result of a case file, as the commands need it."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING

from retrofit.cli.shell import say_build

if TYPE_CHECKING:
    from retrofit.case import Case
    from retrofit.study import Comparison


def compared(case_file: Path, on: datetime | None) -> Comparison:
    """Return the assessed result of a case file.

    Args:
        case_file: The file.
        on: Day to read the tables of law for; today if None.
    Raises: CaseFileError if the file cannot be used.
    """
    from retrofit.case import read_case

    return assessed(read_case(case_file), on)


def assessed(case: Case, on: datetime | None) -> Comparison:
    """Return the assessed result of a case.

    Args:
        case: The case.
        on: Day to read the tables of law for; today if None.
    """
    from retrofit.checks import assess
    from retrofit.study import compare as compare_case

    return assess(compare_case(case, say_build), on.date() if on else None)


def with_life_if_asked(comparison: Comparison, *, in_short: bool = False) -> Comparison:
    """Return a result with the remaining life if its case asks for any of it.

    Args:
        comparison: An assessed result.
        in_short: Whether like hours are taken together and nothing is drawn, to see what can be told at all.
    """
    case = comparison.case
    if case.year is None and case.emissions is None and case.money is None:
        return comparison
    from retrofit.study.life import life_of, lived, with_life

    return lived(comparison, life_of(comparison, 0, hourly=False)) if in_short else with_life(comparison)
