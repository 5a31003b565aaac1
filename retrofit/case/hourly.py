"""Read the hours of a year from a CSV file, or name everything that is wrong with it, line by line.

The file has one heading and 8760 rows, parted by commas, decimals with a point:

    hour,dry_bulb [degC],wet_bulb [degC]
    1,4.2,3.1

Lines before the heading that begin with # are remarks. A row stands for the hour that begins at its time:
`hour` counts from 1 (1 January, 0:00 to 1:00) to 8760; `time` instead is local standard time such as
2025-01-01T00:00. Nothing is filled in, averaged or moved.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, NamedTuple

from retrofit.case.hours import NUMBER, TIME, TIMES, Complaint, hours_of_rows, hours_out_of_order
from retrofit.case.source import FileKind, text_of
from retrofit.case.values import outside
from retrofit.case.year import HOURS_OF_A_YEAR
from retrofit.errors import CaseFileError, Problem, QuantityError
from retrofit.units import KINDS, Unit, close_to, listed, parse_quantity, quoted

if TYPE_CHECKING:
    from retrofit.case.weather import Weather

MOST_LISTED = 20  # complaints about one file
MOST_COLUMNS = 20
MOST_ROWS = 110_000  # above what 5-minute data of a leap year has
WEATHER_FILE = FileKind(
    "a CSV file with 8760 hours",
    5_000_000,
    "put it beside the case file, or give bins or climate instead",
    "8760 hours take less than 1 MB",
)


class Limits(NamedTuple):
    """What a temperature of a column lies within, and why."""

    low: str
    high: str
    reason: str


_AIR = Limits("-60 degC", "60 degC", "outdoor air lies within it")
_WATER = Limits("-10 degC", "60 degC", "water and brine that plants draw lie within it")
TEMPERATURES = {"dry_bulb": _AIR, "wet_bulb": _AIR, "water": _WATER}
KNOWN = (*TIMES, *TEMPERATURES)
HEADING = "hour,dry_bulb [degC]"

_NOT_FINITE = re.compile(r"[+-]?(nan|inf|infinity)", re.IGNORECASE)


class Row(NamedTuple):
    """A line of the file that is neither empty nor a remark, as cells."""

    line: int
    cells: list[str]


@dataclass(frozen=True)
class Column:
    """A column that can be read: its name, its place in a row, and the unit of its heading."""

    name: str
    place: int
    unit_name: str = ""

    @property
    def unit(self) -> Unit:
        """The unit of a column of temperatures."""
        return KINDS["temperature"].units[self.unit_name]


def weather_of_file(path: str, name: str) -> Weather:
    """Return the weather that a CSV file of 8760 hours gives.

    Args:
        path: The file. [-]
        name: Its name as complaints show it. [-]
    Returns: Its hours, with the text of the file.
    Raises: CaseFileError with every problem, each with its line and column; the first ones and a count if many.
    """
    text = text_of(path, name, WEATHER_FILE)
    complaints: list[Complaint] = []
    rows = list(_rows(text))
    columns = _columns(rows, complaints)
    readings = {} if columns is None else _readings(columns, rows[0], rows[1:], complaints)
    if complaints:
        raise CaseFileError(name, _problems(complaints))
    from retrofit.case.weather import weather_of_hours  # needs numpy, which takes a while to load

    return weather_of_hours(name, text, readings["dry_bulb"], readings.get("wet_bulb"), readings.get("water"))


def _rows(text: str) -> Iterator[Row]:
    is_heading_next = True
    for number, line in enumerate(re.split(r"\r\n|\r|\n", text), start=1):
        if not line.strip() or (is_heading_next and line.lstrip().startswith("#")):
            continue
        is_heading_next = False
        yield Row(number, [_cell(cell) for cell in line.split(",")])


def _cell(text: str) -> str:
    bare = text.strip()
    return bare[1:-1].strip() if len(bare) > 1 and bare[0] == bare[-1] == '"' else bare


# The heading


def _columns(rows: Sequence[Row], complaints: list[Complaint]) -> list[Column] | None:
    """Return the columns that can be read, or None if the file has none of them."""
    line = rows[0].line if rows else 1
    whole = _not_a_table(rows)
    if whole:
        complaints.append(Complaint(line, "", whole))
        return None
    columns: list[Column] = []
    for place, heading in enumerate(rows[0].cells):
        try:
            columns.append(_column(heading, place, [column.name for column in columns]))
        except QuantityError as error:
            complaints.append(Complaint(line, _word(heading), str(error)))
    words = [_word(heading) for heading in rows[0].cells]
    complaints += [Complaint(line, *missing) for missing in _missing(words)]
    return columns


def _not_a_table(rows: Sequence[Row]) -> str:
    if not rows:
        return f"the file is empty; begin it with a heading, as in {HEADING}"
    cells = rows[0].cells
    for mark, name in ((";", "semicolons"), ("\t", "tabs")):
        if any(mark in cell for cell in cells):
            return f"columns are parted by {name}; part them by commas, and write decimals with a point, as in 4.2"
    if all(NUMBER.fullmatch(cell) or TIME.fullmatch(cell) for cell in cells):
        return f"there is no heading; name the columns on the first line, as in {HEADING}"
    if len(cells) > MOST_COLUMNS:
        return f"the heading has {len(cells)} columns; known are {listed(KNOWN, 'and')}: leave the others out"
    if len(rows) - 1 > MOST_ROWS:
        return f"there are {len(rows) - 1} rows; a year has {HOURS_OF_A_YEAR} hours, one a row"
    return ""


def _word(heading: str) -> str:
    found = re.match(r"\w+", heading, re.ASCII)
    return found.group()[:40] if found else ""


def _column(heading: str, place: int, before: Sequence[str]) -> Column:
    name = _word(heading)
    rest = heading[len(name) :].strip()
    if name not in KNOWN or (name in TIMES and rest):
        near = close_to(name or heading, KNOWN)
        raise QuantityError(
            f"there is no column {quoted(heading)}{near}; known are {listed(KNOWN, 'and')}: correct it or leave it out"
        )
    if name in before:
        raise QuantityError(f"the column {name} is there twice; keep one of them")
    if name in TIMES:
        if any(other in before for other in TIMES):
            raise QuantityError("hour and time both say when; keep one of them")
        return Column(name, place)
    unit = "".join(rest.removeprefix("[").removesuffix("]").split()).replace("°", "deg")
    shown_units = KINDS["temperature"].shown
    if not (rest.startswith("[") and rest.endswith("]") and unit):
        raise QuantityError(f"it has no unit; write it in brackets, as in {name} [degC] (allowed: {shown_units})")
    if unit not in KINDS["temperature"].units:
        near = close_to(unit, KINDS["temperature"].units)
        raise QuantityError(f"{quoted(unit)} is not a unit of temperature{near}; write {name} [degC] ({shown_units})")
    return Column(name, place, unit)


def _missing(words: Sequence[str]) -> Iterator[tuple[str, str]]:
    """Yield column and complaint for each column that is not in the heading, however misspelt its unit."""
    if not set(TIMES) & set(words):
        yield "hour", f"no column says when; add hour, from 1 to {HOURS_OF_A_YEAR}, or time, as in 2025-01-01T00:00"
    if "dry_bulb" not in words:
        yield "dry_bulb", "the column is missing; add it with its unit, as in dry_bulb [degC]"


# The rows


def _readings(
    columns: Sequence[Column], heading: Row, rows: Sequence[Row], complaints: list[Complaint]
) -> dict[str, list[float]]:
    """Return the temperatures of each column, complaining of whatever cannot be read or does not fit. [K]"""
    wanted = len(heading.cells)
    complaints += [Complaint(row.line, "", _ragged(len(row.cells), wanted)) for row in rows if len(row.cells) != wanted]
    times = [column for column in columns if column.name in TIMES]
    if times or not rows:
        name, place = (times[0].name, times[0].place) if times else ("hour", 0)
        cells = [(row.line, row.cells[place] if place < len(row.cells) else "") for row in rows]
        complaints += hours_out_of_order(name, heading.line, list(hours_of_rows(name, cells, complaints)))
    whole = [row for row in rows if len(row.cells) == wanted]
    found = {
        column.name: list(_kelvins(column, whole, complaints)) for column in columns if column.name in TEMPERATURES
    }
    if "dry_bulb" in found and "wet_bulb" in found:
        complaints += _too_wet(whole, found["dry_bulb"], found["wet_bulb"])
    return found


def _ragged(count: int, wanted: int) -> str:
    why = "; a decimal comma makes two cells of one: write a point" if count > wanted else ""
    return f"the row has {count} {'cell' if count == 1 else 'cells'}, the heading {wanted}{why}"


def _kelvins(column: Column, rows: Sequence[Row], complaints: list[Complaint]) -> Iterator[float]:
    limits, unit = TEMPERATURES[column.name], column.unit
    low, high = (parse_quantity(end, "temperature") for end in limits[:2])
    for row in rows:
        cell = row.cells[column.place]
        T_K = unit.to_SI(float(cell)) if NUMBER.fullmatch(cell) else float("nan")
        if not low <= T_K <= high:
            complaints.append(Complaint(row.line, column.name, _no_temperature(cell, column.unit_name, limits)))
            T_K = float("nan")
        yield T_K


def _no_temperature(cell: str, unit: str, limits: Limits) -> str:
    if not cell:
        return "the cell is empty; write the temperature, for nothing is filled in"
    if _NOT_FINITE.fullmatch(cell):
        return f"{quoted(cell)} is not a finite number; write the temperature, for nothing is filled in"
    if not NUMBER.fullmatch(cell):
        return f"{quoted(cell)} is no number; write the temperature without a unit, as in 4.2"
    return outside(f"{cell} {unit}", *limits)


def _too_wet(rows: Sequence[Row], dry_K: Sequence[float], wet_K: Sequence[float]) -> Iterator[Complaint]:
    for row, dry, wet in zip(rows, dry_K, wet_K, strict=True):
        if wet > dry + 1e-6:
            text = f"the wet bulb lies {wet - dry:.2g} K above the dry bulb, which no air has; correct one of them"
            yield Complaint(row.line, "wet_bulb", text)


# What is told of it


def _problems(complaints: Iterable[Complaint]) -> list[Problem]:
    """Return the first complaints in the order of lines, and a count of the rest."""
    first: dict[object, Complaint] = {}
    rows: dict[object, int] = {}
    for number, complaint in enumerate(sorted(complaints, key=lambda found: found.line)):
        group = complaint.once or number
        first.setdefault(group, complaint)
        rows[group] = rows.get(group, 0) + 1
    told = [_with_count(complaint, rows[group]) for group, complaint in first.items()]
    problems = [Problem(complaint.line, complaint.column, complaint.text) for complaint in told[:MOST_LISTED]]
    if len(told) > MOST_LISTED:
        rest = f"{len(told) - MOST_LISTED} more problems from here on; correct those above first"
        problems.append(Problem(told[MOST_LISTED].line, "", rest))
    return problems


def _with_count(complaint: Complaint, rows: int) -> Complaint:
    return complaint._replace(text=f"{complaint.text} (in {rows} rows)") if rows > 1 else complaint
