"""When each row of an hourly file stands: its hour of the year, and whether each hour is there once and in order."""

from __future__ import annotations

import datetime
import re
from collections.abc import Iterable, Iterator, Sequence
from typing import NamedTuple

from retrofit.case.year import HOURS_OF_A_YEAR
from retrofit.errors import QuantityError
from retrofit.units import quoted

TIMES = ("hour", "time")
# Rows that give away another step than an hour, or another year.
SHAPES = {
    12: "monthly data",
    365: "daily data",
    366: "daily data",
    2920: "three-hour data",
    2928: "three-hour data",
    4380: "two-hour data",
    4392: "two-hour data",
    17_520: "half-hour data",
    17_568: "half-hour data",
    35_040: "15-minute data",
    35_136: "15-minute data",
    52_560: "10-minute data",
    52_704: "10-minute data",
    105_120: "5-minute data",
    105_408: "5-minute data",
}
LEAP_HOURS = 8784

NUMBER = re.compile(r"[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]{1,3})?")
_HOUR = re.compile(r"([0-9]{1,6})(\.0*)?")
TIME = re.compile(r"([0-9]{4}-[0-9]{2}-[0-9]{2})[T ]([0-9]{2}):([0-9]{2})(:[0-9]{2}(?:\.[0-9]+)?)?(.*)")
_WRITTEN_TIME = "write local standard time, as in 2025-01-01T00:00"
_STANDARD_TIME = "; clocks put forward and back make such faults: use standard time all year"


class Complaint(NamedTuple):
    """What is wrong on a line; of those with the same `once` the first one speaks for all."""

    line: int
    column: str
    text: str
    once: str = ""


def hours_of_rows(
    name: str, cells: Iterable[tuple[int, str]], complaints: list[Complaint]
) -> Iterator[tuple[int, int | None]]:
    """Yield line and hour of the year of each row, None if its cell cannot be read.

    Args:
        name: Column that says when: "hour" or "time". [-]
        cells: Line and cell of each row. [-]
        complaints: Where cells that cannot be read are complained of. [-]
    """
    year = ""
    for line, cell in cells:
        try:
            if name == "time":
                hour = _hour_of_time(cell)
                year = year or cell[:4]
                if cell[:4] != year:
                    complaints.append(Complaint(line, name, f"the year changes from {year}; write one year", "year"))
            else:
                hour = _hour(cell)
            yield line, hour
        except _NoHourError as fault:
            complaints.append(Complaint(line, name, str(fault), fault.once))
            yield line, None


class _NoHourError(QuantityError):
    """A cell says no hour; `once` groups what one fault makes of many rows."""

    def __init__(self, message: str, once: str = "") -> None:
        super().__init__(message)
        self.once = once


def _hour(cell: str) -> int:
    found = _HOUR.fullmatch(cell)
    if found:
        return int(found.group(1))
    if not cell:
        raise _NoHourError(f"the cell is empty; write the hour, 1 to {HOURS_OF_A_YEAR}")
    if NUMBER.fullmatch(cell):
        raise _NoHourError(
            f"{quoted(cell)} is not a whole hour; write hourly means, 1 to {HOURS_OF_A_YEAR}", "fraction"
        )
    raise _NoHourError(f"{quoted(cell)} is no hour; write a count, 1 to {HOURS_OF_A_YEAR}, or name the column time")


def _hour_of_time(cell: str) -> int:
    """Return the hour of a year of 365 days that begins at a time; 1 on 1 January at 0:00."""
    found = TIME.fullmatch(cell)
    if not found:
        raise _NoHourError(f"{quoted(cell) if cell else 'an empty cell'} is no time; {_WRITTEN_TIME}")
    day_text, hour, minute, second, zone = found.groups()
    if zone:
        raise _NoHourError(f"{quoted(cell)} carries a time zone; {_WRITTEN_TIME}", "zone")
    if day_text[5:] == "02-29":
        raise _NoHourError("29 February is there; leave out its 24 hours: the year has 8760", "leap")
    try:
        day = datetime.date.fromisoformat(f"2025{day_text[4:]}")  # any year of 365 days
    except ValueError:
        raise _NoHourError(f"{quoted(cell)} is on no calendar; {_WRITTEN_TIME}") from None
    if int(hour) > 23:
        raise _NoHourError(f"{quoted(cell)} is on no clock; hours begin at 0:00 to 23:00", "clock")
    if int(minute) or float((second or ":0")[1:]):
        raise _NoHourError(
            f"{quoted(cell)} is not a full hour; write hourly means, each at the hour it begins", "minutes"
        )
    return 24 * (day.timetuple().tm_yday - 1) + int(hour) + 1


def hours_out_of_order(name: str, heading: int, hours: Sequence[tuple[int, int | None]]) -> Iterator[Complaint]:
    """Yield what is wrong with the order and number of hours.

    Args:
        name: Column that says when: "hour" or "time". [-]
        heading: Line of the heading. [-]
        hours: Line and hour of the year of each row, None if it cannot be read. [-]
    """
    line = hours[-1][0] if hours else heading
    shape = _shape(len(hours))
    read = [(at, hour) for at, hour in hours if hour is not None]
    if shape:
        yield Complaint(line, name, shape)
    elif read and read[0][1] == 0:
        yield Complaint(read[0][0], name, f"hours count from 1, the first of 1 January, to {HOURS_OF_A_YEAR}; add 1")
    elif read and 1 < read[0][1] and read[-1][1] < read[0][1] and len(hours) == HOURS_OF_A_YEAR:
        start = _told(name, read[0][1])
        how = "begin with 1 January, 0:00: move the rows from there on to the front"
        yield Complaint(read[0][0], name, f"the year begins elsewhere, at {start}; {how}")
    else:
        yield from _steps(name, line, hours)


def _shape(count: int) -> str:
    if count == LEAP_HOURS:
        return f"{count} rows are a leap year's; leave out 29 February, hours 1417 to 1440, and number on to 8760"
    if count in SHAPES:
        return f"{count} rows look like {SHAPES[count]}; write hourly means, {HOURS_OF_A_YEAR} rows"
    return "" if count else f"there are no rows below the heading; write {HOURS_OF_A_YEAR} of them"


def _steps(name: str, last_line: int, hours: Sequence[tuple[int, int | None]]) -> Iterator[Complaint]:
    clock = _STANDARD_TIME if name == "time" else ""
    before, unread = 0, 0
    seen: set[int] = set()
    present = {hour for _, hour in hours}
    for line, hour in hours:
        if hour is None:
            unread += 1
            continue
        if hour > HOURS_OF_A_YEAR or hour == 0:
            yield Complaint(line, name, f"hour {hour} is not in a year; allowed are 1 to {HOURS_OF_A_YEAR}")
        elif hour in seen:
            yield Complaint(line, name, f"{_told(name, hour)} is there twice; keep one row for it{clock}")
        elif hour < before:
            yield Complaint(line, name, f"{_told(name, hour)} stands after {_told(name, before)}; put rows in order")
        elif hour > before + 1 + unread:
            missing = [absent for absent in range(before + 1, min(hour, HOURS_OF_A_YEAR)) if absent not in present]
            if missing:
                span = _span(name, missing[0], missing[-1])
                yield Complaint(line, name, f"{span} missing before this line; add every hour, without a gap{clock}")
        seen.add(hour)
        before, unread = max(hour if hour <= HOURS_OF_A_YEAR else 0, before), 0
    if before + unread < HOURS_OF_A_YEAR:
        span = _span(name, before + 1, HOURS_OF_A_YEAR)
        yield Complaint(last_line, name, f"the file ends here and {span} missing; a year has {HOURS_OF_A_YEAR} rows")


def _span(name: str, first: int, last: int) -> str:
    if first == last:
        return f"{_told(name, first)} is"
    if name == "hour":
        return f"hours {first} to {last} are"
    return f"{_told(name, first)} to {_told(name, last)} are"


def _told(name: str, hour: int) -> str:
    if name == "hour":
        return f"hour {hour}"
    moment = datetime.datetime(2025, 1, 1) + datetime.timedelta(hours=hour - 1)
    return f"{moment.day} {moment:%B}, {moment.hour}:00"
