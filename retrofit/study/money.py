"""What a year costs with each option, and whether what is paid once comes back.

Numbers are arrays over draws or single numbers, in the currency of the case. Prices stay as they are over the
remaining life: nobody's forecast of a tariff is put in.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import Case
from retrofit.study.emissions import Tewi, leaked_kg_per_year
from retrofit.study.first_cost import FirstCost, levy_per_kg, price_of
from retrofit.study.law_words import reason_text
from retrofit.study.plan import Plan, Use
from retrofit.study.spread import FloatArray, Pick, Spread, at, low_base_high, single

J_PER_KWH, W_PER_KW, KG_PER_T, MONTHS = 3.6e6, 1e3, 1e3, 12.0
PARTS = {
    "energy": "energy",
    "demand": "demand charge",
    "top_up": "refrigerant for leaks",
    "leak_checks": "leak checks",
    "levy": "levy on refrigerant for leaks",
    "service": "other service",
}
FORMULAS = {
    "payback": "simple payback = first cost / yearly saving against the plant as it is",
    "net present value": "NPV = -first cost + sum of yearly saving / (1 + rate)^t, at the end of each year; "
    "of a last part of a year that part, at the end of the life",
    "cost per tonne": "(first cost - yearly saving x remaining life) / CO2e avoided, not discounted",
}


@dataclass(frozen=True)
class YearlyCost:
    """What a year costs: each part by its code in PARTS, None if not known, and what is missing by that code."""

    parts: dict[str, FloatArray | None]
    missing: dict[str, str]

    @property
    def total(self) -> FloatArray | None:
        """Sum of the parts that are known; None if none is. [currency/year]"""
        known = [part for part in self.parts.values() if part is not None]
        return np.asarray(sum(known)) if known else None


def yearly_cost(case: Case, plan: Plan, use: Use, pick: Pick = low_base_high) -> YearlyCost:
    """Return what a year costs with an option, part by part.

    Args:
        case: The case, whose [money] holds the prices.
        plan: The option.
        use: Electricity of a year and its peak.
        pick: What to take of each price's spread.
    Raises: ValueError if the case has no money.
    """
    money = case.money
    if money is None:
        raise ValueError("the case has no table [money]; give one")
    name = plan.refrigerant.designation
    leak_kg = leaked_kg_per_year(plan, pick)
    leak_missing = plan.charge_missing or plan.leak.missing
    checks, checks_missing = _leak_checks(plan)
    found: dict[str, tuple[FloatArray | None, str]] = {
        "energy": _times(_price("tariff", money.tariff, pick), use.electricity_J, J_PER_KWH, "electricity of a year"),
        "demand": _times(_price("demand_charge", money.demand_charge, pick), use.peak_W, W_PER_KW, "peak of a year"),
        "top_up": _times((price_of(case, plan, pick), f"{name} in `refrigerant_price`"), leak_kg, 1.0, leak_missing),
        "leak_checks": _times(_price("leak_check", money.leak_check, pick), checks, 1.0, checks_missing),
        "levy": _times((levy_per_kg(case, plan, pick), f"`levy`, or GWP of {name}"), leak_kg, 1.0, leak_missing),
        "service": _price("yearly_service", money.yearly_service, pick),
    }
    parts = {code: amount for code, (amount, _) in found.items()}
    return YearlyCost(parts, {code: why for code, (amount, why) in found.items() if amount is None})


def _price(name: str, given: Spread | tuple[float, float, float] | None, pick: Pick) -> tuple[FloatArray | None, str]:
    return (None if given is None else pick(f"money.{name}", Spread(*given))), f"`{name}` in [money]"


def _times(
    price: tuple[FloatArray | None, str], amount: ArrayLike | None, unit: float, amount_missing: str
) -> tuple[FloatArray | None, str]:
    """Return price times amount, or what is missing for it."""
    known, price_missing = price
    if known is None or amount is None:
        return None, price_missing if known is None else amount_missing
    return np.asarray(known * np.asarray(amount, dtype=float) / unit), ""


def _leak_checks(plan: Plan) -> tuple[float | None, str]:
    """Return how many leak checks the tables of law ask for in a year, as far as they can be told."""
    if plan.law is None:
        return None, "`jurisdiction` in [law], or a table for it"
    if plan.law.leak_check_months:
        return MONTHS / plan.law.leak_check_months, ""
    reasons = "; ".join(map(reason_text, plan.law.leak_check_open))
    return (None, f"time between leak checks: {reasons}") if reasons else (0.0, "")


@dataclass(frozen=True)
class Saving:
    """Yearly cost of the plant as it is less that of an option; None where energy is not known on both sides.

    Attributes:
        by_part: The saving by its code in PARTS; only parts that are known on both sides.
        total: Their sum.
        not_counted: Parts left out, in words.
    """

    by_part: dict[str, FloatArray]
    total: FloatArray | None
    not_counted: tuple[str, ...]


def yearly_saving(option: YearlyCost, as_is: YearlyCost) -> Saving:
    """Return what an option saves in a year; a part known on one side only would tilt the comparison and is left out.

    Args:
        option: What a year costs with the option.
        as_is: What a year costs with the plant as it is.
    """
    by_part = {}
    for code in PARTS:
        here, there = option.parts[code], as_is.parts[code]
        if here is not None and there is not None:
            by_part[code] = np.asarray(there - here)
    left_out = tuple(
        f"{PARTS[code]} ({option.missing.get(code) or as_is.missing.get(code)})"
        for code in PARTS
        if code not in by_part
    )
    total = np.asarray(sum(by_part.values())) if "energy" in by_part else None
    return Saving(by_part, total, left_out)


@dataclass(frozen=True)
class Appraisal:
    """Whether an option pays; None where it cannot be told.

    Attributes:
        payback_years: Simple payback; 0 without a first cost, infinite without a saving.
        npv: Net present value over the remaining life; None without a discount rate too.
        cost_per_t: Cost of each tonne of CO2e avoided, below 0 where it saves money too; NaN where none is avoided.
        avoided_t: CO2e avoided over the remaining life against the plant as it is, below 0 if more is emitted.
        years, extra_cost: Ends of the years from 0 to the remaining life, and what the option has cost by then more
            than the plant as it is (it crosses 0 at the payback); shape (..., m).
        life_years: Remaining life.
    """

    payback_years: FloatArray | None
    npv: FloatArray | None
    cost_per_t: FloatArray | None
    avoided_t: FloatArray | None
    years: FloatArray | None
    extra_cost: FloatArray | None
    life_years: FloatArray | None

    @property
    def share_paid_back(self) -> float | None:
        """Share of the draws that pay back within the remaining life. [-]"""
        if self.payback_years is None or self.life_years is None:
            return None
        return float(np.mean(self.payback_years <= self.life_years))


def appraise(
    case: Case, first: FirstCost, saving: Saving, option: Tewi, as_is: Tewi, pick: Pick = low_base_high
) -> Appraisal:
    """Return whether an option pays.

    Args:
        case: The case.
        first: What the option costs once.
        saving: What it saves in a year.
        option: Its warming, with the remaining life.
        as_is: Warming of the plant as it is.
        pick: What to take of the discount rate's spread.
    Source: FORMULAS.
    """
    cost, gain, years = first.total, saving.total, option.years
    avoided = None
    if option.total_kg is not None and as_is.total_kg is not None:
        avoided = np.asarray((as_is.total_kg - option.total_kg) / KG_PER_T)
    if cost is None or gain is None:
        return Appraisal(None, None, None, avoided, years, None, option.life_years)
    payback = payback_years(cost, gain)
    if years is None or option.life_years is None:
        return Appraisal(payback, None, None, avoided, None, None, None)
    rate = case.money.discount_rate if case.money else None
    npv = None if rate is None else net_present_value(cost, gain, years, pick("money.discount_rate", single(rate)))
    net = cost - gain * option.life_years
    per_t = None if avoided is None else np.where(avoided > 0.0, net / np.where(avoided > 0.0, avoided, 1.0), np.nan)
    extra = np.asarray(cost)[..., None] - np.asarray(gain)[..., None] * years
    return Appraisal(payback, npv, per_t, avoided, years, extra, option.life_years)


def payback_years(first_cost: ArrayLike, yearly_saving: ArrayLike) -> FloatArray:
    """Return the simple payback: first cost over yearly saving. [years]

    Args:
        first_cost: What is paid once. [currency]
        yearly_saving: What is saved each year, below 0 if a year costs more. [currency/year]
    Returns: Years; 0 where nothing is paid and nothing lost, infinite where no saving pays back what was paid (so take
        quantiles as one of the draws, not between two).
    Source: definition.
    """
    cost, gain = np.broadcast_arrays(np.asarray(first_cost, dtype=float), np.asarray(yearly_saving, dtype=float))
    saves = gain > 0.0
    paid_back = np.maximum(cost, 0.0) / np.where(saves, gain, 1.0)
    return np.where(saves, paid_back, np.where((cost <= 0.0) & (gain == 0.0), 0.0, np.inf))


def net_present_value(
    first_cost: ArrayLike, yearly_saving: ArrayLike, year_ends: ArrayLike, discount_rate: ArrayLike
) -> FloatArray:
    """Return the net present value of what is paid once and saved each year. [currency]

    Args:
        first_cost: What is paid at the start. [currency]
        yearly_saving: What is saved in a whole year. [currency/year]
        year_ends: Ends of the years, 0 first, the last one the life, shape (..., m). [years]
        discount_rate: Rate of a year. [-]
    Source: FORMULAS["net present value"]; textbook definition with flows at the ends of years.
    """
    ends, rate = np.asarray(year_ends, dtype=float), np.asarray(discount_rate, dtype=float)[..., None]
    factors = np.sum(np.diff(ends, axis=-1) * (1.0 + rate) ** -ends[..., 1:], axis=-1)
    found: FloatArray = np.asarray(yearly_saving, dtype=float) * factors - np.asarray(first_cost, dtype=float)
    return found


# In words


def payback_words(found: Appraisal, index: int = 0) -> str:
    """Return the simple payback in words; what does not come back is said so.

    Args:
        found: Whether the option pays.
        index: Which of its numbers: 1 is the base of low, base and high. [-]
    """
    if found.payback_years is None:
        return "payback unknown: first cost or yearly saving is not known"
    years = at(found.payback_years, index)
    if np.isinf(years):
        return "no payback: a year costs more than, or as much as, with the plant as it is"
    if years == 0.0:
        return "nothing to pay back: no extra first cost"
    if found.life_years is None:
        return f"{years:.1f} years; the remaining life is not given"
    life = at(found.life_years, index)
    if years > life:
        return f"{years:.1f} years, beyond the remaining life of {life:g} years: it does not pay back"
    return f"{years:.1f} of the {life:g} years left"


def cost_per_tonne_words(found: Appraisal, currency: str, index: int = 0) -> str:
    """Return the cost of each tonne of CO2e avoided in words.

    Args:
        found: Whether the option pays.
        currency: Currency of the case. [-]
        index: Which of its numbers: 1 is the base of low, base and high. [-]
    """
    if found.avoided_t is None:
        return "unknown: emissions are not known on both sides"
    if at(found.avoided_t, index) < 0.0:
        return "none avoided: it emits more than the plant as it is"
    if at(found.avoided_t, index) == 0.0:
        return "none avoided: it emits as much as the plant as it is"
    if found.cost_per_t is None:
        return "unknown: first cost, yearly saving or remaining life is not known"
    cost = at(found.cost_per_t, index)
    if cost < 0.0:
        return f"saves money too: {-cost:,.0f} {currency} for each tonne of CO2e avoided"
    return f"{cost:,.0f} {currency} for each tonne of CO2e avoided"


def energy_words(option: Use, as_is: Use, band: float, index: int = 0) -> str:
    """Return a word of doubt where a saving of energy is smaller than the model can tell; else nothing.

    Args:
        option: Electricity of a year with the option.
        as_is: The same of the plant as it is.
        band: How far the model may be off, as a share. [-]
        index: Which of the numbers: 1 is the base of low, base and high. [-]
    """
    if option.electricity_J is None or as_is.electricity_J is None:
        return ""
    here, there = at(np.asarray(option.electricity_J), index), at(np.asarray(as_is.electricity_J), index)
    return _band_words("electricity", here - there, max(here, there), band)


def climate_words(option: Tewi, as_is: Tewi, band: float, index: int = 0) -> str:
    """Return a word of doubt where CO2e avoided is smaller than the model of the electricity can tell; else nothing.

    Args:
        option: Warming of the option.
        as_is: Warming of the plant as it is.
        band: How far the model of the electricity may be off, as a share. [-]
        index: Which of the numbers: 1 is the base of low, base and high. [-]
    """
    totals, indirect = (option.total_kg, as_is.total_kg), (option.indirect_kg, as_is.indirect_kg)
    if any(found is None for found in (*totals, *indirect)):
        return ""
    here, there = (at(found, index) for found in totals if found is not None)
    return _band_words("CO2e", here - there, max(at(found, index) for found in indirect if found is not None), band)


def _band_words(what: str, difference: float, modelled: float, band: float) -> str:
    if difference == 0.0 or abs(difference) > band * modelled:
        return ""
    return (
        f"the difference in {what}, {abs(difference) / modelled:.1%} of what is modelled, lies within the ±{band:.0%} "
        "of the model: no meaningful difference"
    )
