"""Values that TOML writes without quotes: a date, and yes or no."""

from __future__ import annotations

import datetime
import re
from dataclasses import dataclass
from typing import Any

from retrofit.case.values import FileValue, outside
from retrofit.errors import QuantityError
from retrofit.units import described, quoted

_DATE = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}")


@dataclass(frozen=True)
class Day(FileValue):
    """A day of the calendar, as a TOML date or as the same in quotes, within a range."""

    low: str
    high: str
    reason: str

    def sample(self) -> str:
        """Return a date, as text."""
        return "2027-04-01"

    def form(self) -> str:
        """Return a date, as text."""
        return self.sample()

    def read(self, value: object, p_ambient_Pa: float | None = None) -> datetime.date:
        """Return the day."""
        found = day_of(value)
        if not datetime.date.fromisoformat(self.low) <= found <= datetime.date.fromisoformat(self.high):
            raise QuantityError(outside(found, self.low, self.high, self.reason))
        return found

    def json_schema(self) -> dict[str, Any]:
        """Return the pattern of the text; what stands for a TOML date in JSON is the same text."""
        return {"type": "string", "pattern": f"^{_DATE.pattern}$", "examples": [self.sample()]}


def day_of(value: object) -> datetime.date:
    """Return the day that a value of a TOML file means.

    Args:
        value: A TOML date, or its text such as "2027-04-01". [-]
    Raises: QuantityError if it is neither, carries a time, or is on no calendar.
    Source: ISO 8601, calendar date in the extended format.
    """
    if isinstance(value, datetime.date) and not isinstance(value, datetime.datetime):
        return value
    if not isinstance(value, str):
        what = "a date with a time" if isinstance(value, datetime.datetime) else described(value)
        raise QuantityError(f"{what} stands where a date is needed; write year, month and day, as in 2027-04-01")
    if not _DATE.fullmatch(value):
        raise QuantityError(f"{quoted(value)} is no date; write year, month and day, as in 2027-04-01")
    try:
        return datetime.date.fromisoformat(value)
    except ValueError:
        raise QuantityError(f"{quoted(value)} is on no calendar; write a day that exists, as in 2027-04-01") from None


@dataclass(frozen=True)
class YesNo(FileValue):
    """True or false."""

    def sample(self) -> str:
        """Return one of them, as text."""
        return "true"

    def form(self) -> str:
        """Return both, as text."""
        return "true or false"

    def read(self, value: object, p_ambient_Pa: float | None = None) -> bool:
        """Return it."""
        if not isinstance(value, bool):
            raise QuantityError(f"{described(value)} stands where true or false is needed; write it without quotes")
        return value

    def json_schema(self) -> dict[str, Any]:
        """Return its type."""
        return {"type": "boolean"}
