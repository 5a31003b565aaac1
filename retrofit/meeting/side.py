"""Two candidates side by side, with today's refrigerant beside them and every difference marked."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.meeting.how import slug
from retrofit.report.rows import near
from retrofit.report.table import Cell, Group, Row, Table
from retrofit.study import Comparison, Entry
from retrofit.study.bands import pair_band
from retrofit.units import MISSING, UnitSystem, format_number

# Kinds whose difference is of another kind.
DIFFERENCES = {"temperature": "temperature difference", "gauge pressure": "pressure difference"}
# Rows and the band of the model that their differences are held against, by how the row's name begins.
BANDS = (
    ("pressures-", "pressure"),
    ("plant-settled-evaporating-pressure", "pressure"),
    ("plant-settled-condensing-pressure", "pressure"),
    ("plant-settled-pressure-ratio", "pressure"),
    ("temperatures-discharge", "T_discharge"),
    ("plant-settled-discharge", "T_discharge"),
    ("efficiency-cop", "cop"),
    ("plant-full-cop", "cop"),
    ("duty-compressor-power", "cop"),
    ("duty-power", "cop"),
    ("efficiency-", "capacity"),
    ("duty-", "capacity"),
    ("compressor-", "capacity"),
    ("plant-full-", "capacity"),
    ("plant-run-", "capacity"),
)
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
    pair = view.entries[chosen[1]], view.entries[chosen[2]]
    groups = tuple(
        (group.heading, tuple(_line(row, chosen, _band(group, row, pair), units) for row in group.rows))
        for group in table.groups
    )
    first, second = ({(f.level, f.title) for f in view.entries[place].findings} for place in chosen[1:])
    only = ((first - second), (second - first))
    findings = tuple(
        (table.columns[place], tuple(f.title for f in view.entries[place].findings if (f.level, f.title) in own))
        for place, own in zip(chosen[1:], only, strict=True)
    )
    return Side(tuple(table.columns[place] for place in chosen), groups, findings)


def _band(group: Group, row: Row, pair: tuple[Entry, Entry]) -> float | None:
    """Return the band that a difference between the two is held against: of a number relative, of a temperature in K.

    None where the numbers follow from the temperatures held equal, and so differ exactly.
    """
    name = next((band for start, band in BANDS if slug(group, row).startswith(start)), None)
    return None if name is None else pair_band(*pair, name)


def _line(row: Row, chosen: tuple[int, int, int], band: float | None, units: UnitSystem) -> Line:
    cells = tuple(row.cells[place] for place in chosen)
    if cells[1].text == cells[2].text:
        return Line(row.label, row.unit, cells, "", SAME)
    if not row.values:
        return Line(row.label, row.unit, cells, "", DIFFERS)
    first, second = row.values[chosen[1]], row.values[chosen[2]]
    if first is None or second is None:
        return Line(row.label, row.unit, cells, MISSING, DIFFERS)
    is_share = row.kind not in ("change", "temperature", "temperature difference") and first != 0.0
    size = abs(second / first - 1.0) if is_share else abs(second - first)
    text = _difference_text(row, second - first, units)
    if band is not None and size <= band:
        return Line(row.label, row.unit, cells, near(text), CLOSE)
    return Line(row.label, row.unit, cells, text, DIFFERS)


def _difference_text(row: Row, difference: float, units: UnitSystem) -> str:
    """Return a difference with the digits of the row it belongs to."""
    if row.kind == "change":
        return format_number(100.0 * difference, 0, signed=True)
    kind = DIFFERENCES.get(row.kind, row.kind)
    return units.text(kind, difference, decimals=units.displays[row.kind].decimals_for(row.values), signed=True)
