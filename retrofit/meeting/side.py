"""Two candidates side by side, with today's refrigerant beside them and every difference marked."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.report.rows import near
from retrofit.report.table import Cell, Group, Row, Table
from retrofit.study import Comparison
from retrofit.units import MISSING, UnitSystem, format_number

DIFFERENCES = {"temperature": "temperature difference"}  # kinds whose difference is of another kind
SAME, DIFFERS, CLOSE = "same", "differs", "close"


@dataclass(frozen=True)
class Line:
    """One quantity of the two: cells of today, first and second, their difference, and "same", "close" or "differs"."""

    label: str
    unit: str
    cells: tuple[Cell, ...]
    difference: str
    mark: str


@dataclass(frozen=True)
class Side:
    """The two side by side; each group is a heading with its lines."""

    names: tuple[str, ...]
    groups: tuple[tuple[str, tuple[Line, ...]], ...]
    findings: tuple[tuple[str, tuple[str, ...]], ...]


def side_by_side(view: Comparison, names: tuple[str, ...], table: Table, units: UnitSystem) -> Side | None:
    """Return two candidates side by side, None unless two are chosen and in sight.

    Args:
        view: What is in sight.
        names: Designations of the two. [-]
        table: The comparison table of the view.
        units: The reader's units.
    """
    places = {entry.refrigerant.designation: place for place, entry in enumerate(view.entries)}
    if len(names) != 2 or not all(name in places for name in names):
        return None
    chosen = (0, places[names[0]], places[names[1]])
    groups = tuple((group.heading, tuple(_line(row, chosen, units) for row in group.rows)) for group in table.groups)
    first, second = ({(f.level, f.title) for f in view.entries[place].findings} for place in chosen[1:])
    only = ((first - second), (second - first))
    findings = tuple(
        (table.columns[place], tuple(f.title for f in view.entries[place].findings if (f.level, f.title) in own))
        for place, own in zip(chosen[1:], only, strict=True)
    )
    return Side(tuple(table.columns[place] for place in chosen), groups, findings)


def _line(row: Row, chosen: tuple[int, int, int], units: UnitSystem) -> Line:
    cells = tuple(row.cells[place] for place in chosen)
    if not row.values or cells[1].text == cells[2].text:
        mark = SAME if cells[1].text == cells[2].text else DIFFERS
        return Line(row.label, row.unit, cells, "", mark)
    first, second = row.values[chosen[1]], row.values[chosen[2]]
    if first is None or second is None:
        return Line(row.label, row.unit, cells, MISSING, DIFFERS)
    difference = second - first
    is_close = bool(row.bands) and abs(difference) <= max(row.bands[place] for place in chosen[1:])
    text = _difference_text(row, difference, units)
    return Line(row.label, row.unit, cells, near(text) if is_close else text, CLOSE if is_close else DIFFERS)


def _difference_text(row: Row, difference: float, units: UnitSystem) -> str:
    if row.kind == "change":
        return format_number(100.0 * difference, 0, signed=True)
    kind = DIFFERENCES.get(row.kind, row.kind)
    if row.kind == "gauge pressure":
        kind = "pressure difference"
    return units.text(kind, difference, signed=True)


__all__ = ["Group", "Line", "Side", "side_by_side"]
