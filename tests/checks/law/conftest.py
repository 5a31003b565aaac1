"""What the tables of law say to a refrigerant and a charge, without solving a plant."""

import datetime

import pytest

from retrofit.case import areas
from retrofit.checks.law import law_for, shipped
from retrofit.refrigerants import find

MARKET = {"jurisdiction": "EU", "equipment": "supermarket", "date_of_change": "2027-04-01", "remaining_life": "8 years"}
READ_ON = datetime.date(2026, 12, 1)


def day(text):
    """Return a date."""
    return datetime.date.fromisoformat(text)


@pytest.fixture(scope="session")
def law_of(case_with):
    """Return a function that reads the tables that come with the tool for a new plant and a charge in kg.

    The tables are read on 2026-12-01, whatever the day a check begins.
    """

    def read(name, charge, on="2027-04-01", tables=None, cooling="120 kW", **law):
        how = {key: law.pop(key) for key in ("read_on", "is_new_plant", "heat_W") if key in law}
        sides = {side: {"medium": law.pop(side)} for side in ("evaporator", "condenser") if law.get(side)}
        given = {key: value for key, value in {**MARKET, **law}.items() if value is not None}
        case = case_with(law=given, duty={"cooling": cooling}, **sides)
        used = shipped().values() if tables is None else tables
        mine = [table for table in used if set(areas(given["jurisdiction"])) & set(table.jurisdictions)]
        spread = charge if isinstance(charge, tuple) or charge is None else (charge, charge, charge)
        return law_for(case, find(name), spread, mine, day(on), **{"read_on": READ_ON, "is_new_plant": True, **how})

    return read


@pytest.fixture(scope="session")
def in_force():
    """Return a function that gives the rows on a subject that are in force on the first day of a check."""

    def rows(check, subject, on=None):
        when = day(on) if on else check.start
        return [row for row in check.rows_on(subject) if row.in_force(when)]

    return rows
