"""The sheet of inputs: every key of the case, given, assumed or left out."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.case import Case, meaning, quantity
from retrofit.report.inputs import missing
from retrofit.report.spreadsheet.table import GAPS, Column, Content, Sheet, in_units
from retrofit.units import UnitSystem

COLUMNS = (
    Column("Key", width=34),
    Column("Meaning", width=60),
    Column("Number", width=14),
    Column("Unit", width=10),
    Column("As written or assumed", width=34),
    Column("Origin", width=12),
    Column("Why assumed", width=50),
    Column(GAPS, width=40),
)
WORDS_ONLY = "the value is a text or a list"
LEFT_OUT = "not given in the case, and nothing is assumed for it"


def inputs_sheet(case: Case, units: UnitSystem) -> Sheet:
    """Return the sheet.

    Args:
        case: The case.
        units: The reader's units.
    """
    return Sheet("Inputs", 1, COLUMNS, tuple(_rows(case, units)))


def _rows(case: Case, units: UnitSystem) -> Iterator[tuple[Content, ...]]:
    for key, written in case.given.items():
        if "." in key:
            yield _row(case, key, written, "given", None, units)
    for item in case.defaults:
        yield _row(case, item.key, item.shown_text, "assumed", item.why, units)
    for table in missing(case):
        for key in table.keys or ("",):
            name = f"{table.table}.{key}".rstrip(".")
            yield name, meaning(name) if key else "a whole table", None, None, None, "left out", None, LEFT_OUT


def _row(case: Case, key: str, written: str, origin: str, why: str | None, units: UnitSystem) -> tuple[Content, ...]:
    found = quantity(case, key)
    if found is None:
        return key, meaning(key), None, None, written, origin, why, WORDS_ONLY
    kind, value = found
    return key, meaning(key), in_units(kind, value, units), units.label(kind), written, origin, why, None
