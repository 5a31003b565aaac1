"""What options are weighed by: for each criterion one number an option, the lower the better, None if not known.

A criterion can be measured in more than one way. The one that is known for most options is taken, and the same for
all of them, so that no option is weighed by another measure than its rivals.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from retrofit.refrigerants import parse_safety_class
from retrofit.study.accounts import Account, Accounts
from retrofit.study.emissions import co2e_t, edition_of, gwp_of
from retrofit.study.plan import Use
from retrofit.study.result import Comparison, Entry
from retrofit.study.spread import FloatArray, at

CLASS_STEPS = {"1": 0.0, "2L": 1.0, "2": 2.0, "3": 3.0}
TOXIC_STEP = 2.0  # from A to B
SAFETY_CODES = ("safety-class", "room")
SUPPLY_POINTS = {"new": 1.0, "any": 2.0}
HARDWARE_POINTS = {"keep": 0.0, "adjust": 1.0, "replace": 2.0, "unknown": 2.0}
GWP_PER_POINT = 1000.0


@dataclass(frozen=True)
class Weighed:
    """One option as it is weighed.

    Attributes:
        entry: The option.
        account: Its emissions and money, in base values.
        use: Electricity of its year.
        is_kept: Whether it keeps today's refrigerant.
        edition: Report whose GWP counts.
        existing: Today's refrigerant.
    """

    entry: Entry
    account: Account
    use: Use
    is_kept: bool
    edition: str
    existing: Entry


Reading = Callable[[Weighed], float | None]


@dataclass(frozen=True)
class Measure:
    """One way to measure a criterion.

    Attributes:
        name: What is measured, for a reader.
        unit: Unit of its numbers: "J", "currency", "kg CO2e", "t CO2e", "points" or "".
        read: Its number for an option, None if not known.
        modelled: The part of that number that the model of the refrigerant makes, and so its band blurs.
    """

    name: str
    unit: str
    read: Reading
    modelled: Reading


@dataclass(frozen=True)
class Criterion:
    """A criterion as it was measured.

    Attributes:
        name: Its name, a key of CRITERIA.
        measure, unit: What was measured, and the unit of its numbers.
        values: The number of each option by designation, None if not known.
        modelled: The part of it that the model makes.
    """

    name: str
    measure: str
    unit: str
    values: Mapping[str, float | None]
    modelled: Mapping[str, float]


def criteria(comparison: Comparison, found: Accounts, uses: Mapping[str, Use], index: int = 0) -> tuple[Criterion, ...]:
    """Return every criterion, measured for every option.

    Args:
        comparison: A result that went through the checks.
        found: Emissions and money of its options.
        uses: Electricity of a year by designation.
        index: Which of their numbers to take: 0 of base values alone, 1 of low, base and high. [-]
    """
    edition = edition_of(comparison.case)
    options = []
    for entry in comparison.entries:
        if entry.refrigerant.designation not in found.options:
            continue
        name, is_kept = entry.refrigerant.designation, entry is comparison.existing
        use = uses.get(name, Use())
        options.append(Weighed(entry, found.options[name], use, is_kept, edition, comparison.existing))
    return tuple(_measured(name, measures(index), options) for name, measures in CRITERIA.items())


def gate(entry: Entry) -> str:
    """Return which gates stop an option, or why nothing is known of it; empty if it can be ranked.

    Args:
        entry: The option, after the checks.
    """
    if entry.stops:
        return "; ".join(dict.fromkeys(finding.title for finding in entry.stops))
    return "" if entry.is_computed else f"not computed: {entry.reason}"


def _measured(name: str, measures: tuple[Measure, ...], options: list[Weighed]) -> Criterion:
    """Measure a criterion in the way that is known for most options that can be ranked, the first of equals."""
    ranked = [option for option in options if not gate(option.entry)]
    best = max(measures, key=lambda measure: sum(measure.read(option) is not None for option in ranked))
    values = {option.entry.refrigerant.designation: best.read(option) for option in options}
    modelled = {option.entry.refrigerant.designation: best.modelled(option) or 0.0 for option in options}
    return Criterion(name, best.name, best.unit, values, modelled)


def _nothing(option: Weighed) -> float | None:
    return 0.0


def _energy(index: int) -> tuple[Measure, ...]:
    def year(option: Weighed) -> float | None:
        electricity = option.use.electricity_J
        return None if electricity is None or option.use.one_sided else _at(electricity, index)

    def plant(option: Weighed) -> float | None:
        installed = option.entry.plant
        return 1.0 / installed.same_cooling.cop if installed else None

    def cycle(option: Weighed) -> float | None:
        return 1.0 / option.entry.duty.cop if option.entry.duty else None

    return (
        Measure("electricity of a year", "J", year, year),
        Measure("electricity for each unit of cooling, 1/COP, on the plant as installed", "", plant, plant),
        Measure("electricity for each unit of cooling, 1/COP, at the temperatures of the case", "", cycle, cycle),
    )


def _first_cost(index: int) -> tuple[Measure, ...]:
    def total(option: Weighed) -> float | None:
        first = option.account.first_cost
        return None if first is None or first.total is None else _at(first.total, index)

    return (Measure("first cost", "currency", total, _nothing),)


def _climate(index: int) -> tuple[Measure, ...]:
    def total(option: Weighed) -> float | None:
        found = option.account.tewi.total_kg
        return None if found is None or option.use.one_sided else _at(found, index)

    def indirect(option: Weighed) -> float | None:
        found = option.account.tewi.indirect_kg
        return None if found is None else _at(found, index)

    def charge(option: Weighed) -> float | None:
        weight = co2e_t(option.account.plan, option.edition)
        return weight.base if weight else None

    return (
        Measure("warming over the remaining life", "kg CO2e", total, indirect),
        Measure("climate weight of the charge", "t CO2e", charge, _nothing),
    )


def _safety_works(index: int) -> tuple[Measure, ...]:
    def cost(option: Weighed) -> float | None:
        first = option.account.first_cost
        if first is None or option.is_kept:
            return None if first is None else _item(option, index) or 0.0
        return _item(option, index)

    return (
        Measure("safety works", "currency", cost, _nothing),
        Measure(
            "steps of safety class above today's, and one for each finding on class or room that asks for "
            "work or lacks data",
            "points",
            _safety_points,
            _nothing,
        ),
    )


def _item(option: Weighed, index: int) -> float | None:
    first = option.account.first_cost
    items = [item for item in first.items if item.code == "safety_works"] if first else []
    return _at(items[0].amount, index) if items else None


def _safety_points(option: Weighed) -> float | None:
    steps = [_class_step(entry) for entry in (option.existing, option.entry)]
    if steps[0] is None or steps[1] is None:
        return None
    asked = [
        finding
        for finding in option.entry.findings
        if finding.level in ("work", "unknown") and finding.code.startswith(SAFETY_CODES)
    ]
    return max(steps[1] - steps[0], 0.0) + len(asked)


def _class_step(entry: Entry) -> float | None:
    parsed = parse_safety_class(entry.refrigerant.safety_class.value)
    return None if parsed is None else CLASS_STEPS[parsed.flammability] + TOXIC_STEP * (parsed.toxicity == "B")


def _supply_risk(index: int) -> tuple[Measure, ...]:
    def gwp(option: Weighed) -> float | None:
        return gwp_of(option.entry.refrigerant, option.edition).value

    def points(option: Weighed) -> float | None:
        law, own = option.entry.law, gwp(option)
        if law is None or own is None:
            return None
        bans = [SUPPLY_POINTS.get(row.gas, 0.0) for row in law.rows if row.applies_from is not None]
        return sum(bans) + own / GWP_PER_POINT

    return (
        Measure(
            "2 for each row of law that ends any gas within the remaining life, 1 for one that ends new gas, and "
            "GWP/1000, since quotas are shared out by GWP",
            "points",
            points,
            _nothing,
        ),
        Measure("GWP, since quotas are shared out by it", "", gwp, _nothing),
    )


def _disruption(index: int) -> tuple[Measure, ...]:
    def points(option: Weighed) -> float | None:
        if option.is_kept:
            return 0.0
        if option.entry.is_new_plant:
            return HARDWARE_POINTS["replace"] * len(option.existing.hardware)
        rows = option.entry.hardware
        return sum(HARDWARE_POINTS[row.verdict] for row in rows) if rows else None

    name = "1 for each component to adjust, 2 for each to replace or not known; a new plant replaces all"
    return (Measure(name, "points", points, _nothing),)


def _at(value: FloatArray | float, index: int) -> float:
    return at(np.asarray(value, dtype=float), index)


CRITERIA: Mapping[str, Callable[[int], tuple[Measure, ...]]] = {
    "energy": _energy,
    "first cost": _first_cost,
    "climate": _climate,
    "safety works": _safety_works,
    "supply risk": _supply_risk,
    "disruption": _disruption,
}
"""How each criterion is measured, the best way first."""
