"""The sheet of points: one row for each refrigerant and state point of its cycle."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.report.spreadsheet.table import GAPS, Column, Content, Sheet, as_rows, in_units, quantity_column
from retrofit.report.states import KINDS, on_reference
from retrofit.study import Comparison, Entry
from retrofit.units import UnitSystem

MOLAR = "Vapour, by mole"
ONE_PHASE = "one phase: no share of vapour"
Row = dict[str, Content]


def points_sheet(comparison: Comparison, units: UnitSystem) -> Sheet:
    """Return the sheet; enthalpy and entropy are counted from the reference named in each row.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    rows = [row for entry in comparison.entries for row in _rows(entry, units)]
    columns = (
        Column("Refrigerant"),
        Column("Point", decimals=0, width=8),
        Column("State", width=30),
        *(_column(entry_kind, comparison, units) for entry_kind in KINDS),
        Column(MOLAR, units.label("fraction"), 1),
        Column("Enthalpy and entropy counted from", width=50),
        Column(GAPS, width=40),
    )
    return Sheet("Points", 3, columns, as_rows(columns, rows))


def _column(kind: tuple[str, str, str], comparison: Comparison, units: UnitSystem) -> Column:
    heading, name, attribute = kind
    values = [getattr(point, attribute) for entry in comparison.entries for point in entry.points]
    column = quantity_column(heading, name, values, units)
    return Column(heading, column.unit, 1) if name == "fraction" else column


def _rows(entry: Entry, units: UnitSystem) -> Iterator[Row]:
    name = entry.refrigerant.display_name
    if entry.lines is None:
        yield {"Refrigerant": name, GAPS: f"not computed: {entry.reason}"}
        return
    zero = entry.lines.zeros[units.name]
    for number, (point, values) in enumerate(zip(entry.points, on_reference(entry, units), strict=True), start=1):
        yield {
            "Refrigerant": name,
            "Point": float(number),
            "State": point.name,
            **{heading: in_units(kind, values[attribute], units) for heading, kind, attribute in KINDS},
            MOLAR: in_units("fraction", point.molar_quality, units),
            "Enthalpy and entropy counted from": zero.name,
            GAPS: ONE_PHASE if point.quality is None else None,
        }
