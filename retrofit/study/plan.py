"""What is counted for one option: whose charge and leaks, and whether the refrigerant is changed at all."""

from __future__ import annotations

import datetime
from dataclasses import dataclass
from typing import NamedTuple

from retrofit.case import Case, Option
from retrofit.refrigerants import Refrigerant
from retrofit.study.charge import plant_charge
from retrofit.study.law import LawCheck
from retrofit.study.leaks import DAYS_PER_YEAR, LeakRate, leak_rate, leak_rate_today
from retrofit.study.losses import Loss
from retrofit.study.result import Entry
from retrofit.study.spread import FloatArray, Spread, single


class Use(NamedTuple):
    """Electricity of a year and its peak, numbers or arrays over draws; None if not known. [J], [W]

    `one_sided` are losses in it that the year of the plant as it is lacks: with any, the two are not compared.
    """

    electricity_J: FloatArray | float | None = None
    peak_W: FloatArray | float | None = None
    one_sided: tuple[Loss, ...] = ()


@dataclass(frozen=True)
class Plan:
    """One way to go on with the plant.

    Attributes:
        refrigerant: What is in the plant then.
        family: "as is" (the plant of today, nothing done), "keep", "convert" or "replace".
        charge_key, charge_kg: The input it comes from, and the full charge; None where `charge_missing` says why.
        leak: Refrigerant lost in a year.
        option: What the case says of this option, None if nothing.
        law: What the tables of law say; None without one.
    """

    refrigerant: Refrigerant
    family: str
    charge_key: str
    charge_kg: Spread | None
    charge_missing: str
    leak: LeakRate
    option: Option | None
    law: LawCheck | None

    @property
    def is_change(self) -> bool:
        """True if the old charge is taken out and another put in. [-]"""
        return self.family in ("convert", "replace")


def plan_as_is(case: Case, existing: Entry) -> Plan:
    """Return the plant of today, going on as it is: what every option is measured against.

    Args:
        case: The case.
        existing: The refrigerant in the plant.
    """
    charge = case.plant.charge_kg
    missing = "" if charge else "`charge` in [plant]"
    spread = None if charge is None else single(charge)
    leak = leak_rate_today(case)
    return Plan(existing.refrigerant, "as is", "plant.charge", spread, missing, leak, None, existing.law)


def plan_for(case: Case, entry: Entry, existing: Entry) -> Plan:
    """Return the plan of an option: a candidate, or for the refrigerant in the plant keeping it with its repairs.

    Args:
        case: The case.
        entry: The option.
        existing: The refrigerant in the plant.
    """
    name = entry.refrigerant.designation
    option = case.options.by_refrigerant.get(name) if case.options else None
    charge = plant_charge(case, entry, existing)
    spread = None
    if charge.lowest_kg is not None and charge.expected_kg is not None and charge.highest_kg is not None:
        spread = Spread(charge.lowest_kg, charge.expected_kg, charge.highest_kg)
    is_own = entry is not existing or (option is not None and option.charge_kg is not None)
    key = f"options.{name}.charge" if is_own else "plant.charge"
    family = "keep" if entry is existing else entry.family
    leak = leak_rate(case, entry, existing)
    return Plan(entry.refrigerant, family, key, spread, charge.reason, leak, option, entry.law)


def life_years(case: Case) -> float | None:
    """Return the remaining life: as the case gives it, or from the change to the day the plant ends. [years]

    Args:
        case: The case.
    """
    law = case.law
    if law is None or law.remaining_life_years is not None:
        return law.remaining_life_years if law else None
    if law.end is None or law.date_of_change is None or law.end <= law.date_of_change:
        return None
    return (law.end - law.date_of_change).days / DAYS_PER_YEAR


def start_year(case: Case, on: datetime.date | None = None) -> float | None:
    """Return when the remaining life begins, as a year and its part: the change, or else a day given.

    Args:
        case: The case.
        on: The day to take where the case gives no date of change.
    Returns: Such as 2027.25; None if neither is known. [years]
    """
    day = (case.law.date_of_change if case.law else None) or on
    if day is None:
        return None
    first, last = datetime.date(day.year, 1, 1), datetime.date(day.year + 1, 1, 1)
    return day.year + (day - first) / (last - first)
