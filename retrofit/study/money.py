"""What a year and the remaining life cost with each option, and whether what is paid once comes back.

Numbers are arrays over draws or single numbers, in the currency of the case. Prices stay as they are over the
remaining life: nobody's forecast of a tariff is put in. An item that is known for one of two options alone is left out
of what is compared between them, and then nothing is said of whether one saves money.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from enum import StrEnum

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import Case
from retrofit.study.emissions import Tewi, leaked_kg_per_year
from retrofit.study.first_cost import PLANT, FirstCost, charge_keys, levy_per_kg, price_of
from retrofit.study.law_words import reason_text
from retrofit.study.losses import Loss, one_sided_words
from retrofit.study.plan import Plan, Use
from retrofit.study.spread import FloatArray, Pick, Spread, low_base_high, single
from retrofit.study.sums import ComparisonState, Missing, Sum, sum_of

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
    "payback": "simple payback = first cost / annual saving against the plant as it is; not discounted, residual value "
    "not counted",
    "net present value": "NPV = -first cost + sum of annual saving / (1 + rate)^t + residual value / (1 + rate)^life, "
    "at the end of each year; of a last part of a year that part, at the end of the life; above 0 it saves money",
    "life cost": "first cost + sum of annual cost / (1 + rate)^t - residual value / (1 + rate)^life",
    "residual value": "of a new plant that outlasts the remaining life: its price x (1 - remaining life / its life), "
    "by straight line, or as the case gives it",
    "cost per tonne": "-NPV / CO2e avoided over the remaining life; below 0 it saves money too",
}


@dataclass(frozen=True)
class YearlyCost:
    """What a year costs.

    Attributes:
        parts: Each part by its code in PARTS, None if not known.
        missing: What is missing for a part that is not known, by its code.
        needed: Codes of the parts that count: energy, and whatever is known of any option. A part that is known of none
            is missing for all alike.
    """

    parts: Mapping[str, FloatArray | None]
    missing: Mapping[str, Missing]
    needed: frozenset[str] = frozenset(PARTS)

    @property
    def sum(self) -> Sum:
        """Return the sum of the parts, a lower bound where one that counts is missing, none without the energy.

        [currency/year]
        """
        codes = self.missing.keys() & self.needed
        missing = tuple(self.missing[code] for code in PARTS if code in codes)
        return Sum(None, missing) if self.parts["energy"] is None else sum_of(self.parts, missing)

    @property
    def total(self) -> FloatArray | None:
        """Return the sum of the parts if all that count are known. [currency/year]"""
        return self.sum.total


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
    checks, no_checks = _leak_checks(plan)
    prices = {
        "energy": _price("tariff", money.tariff, pick),
        "demand": _price("demand_charge", money.demand_charge, pick),
        "top_up": price_of(case, plan, pick),
        "leak_checks": _price("leak_check", money.leak_check, pick),
        "levy": levy_per_kg(case, plan, pick),
        "service": _price("yearly_service", money.yearly_service, pick),
    }
    amounts: dict[str, tuple[ArrayLike | None, Missing]] = {
        "energy": (
            _per(use.electricity_J, J_PER_KWH),
            Missing("energy", () if case.year else ("year",), "electricity of a year is not computed"),
        ),
        "demand": (_per(use.peak_W, W_PER_KW), _no_peak(plan)),
        "top_up": (leak_kg, _no_leak("top_up", case, plan)),
        "leak_checks": (checks, no_checks),
        "levy": (leak_kg, _no_leak("levy", case, plan)),
        "service": (1.0, Missing("service")),
    }
    no_price = {
        "energy": Missing("energy", ("money.tariff",)),
        "demand": Missing("demand", ("money.demand_charge",)),
        "top_up": Missing("top_up", (f"money.refrigerant_price.{name}",)),
        "leak_checks": Missing("leak_checks", ("money.leak_check",)),
        "levy": Missing("levy", ("money.levy",)) if money.levy is None else Missing("levy", (), f"GWP of {name}"),
        "service": Missing("service", ("money.yearly_service",)),
    }
    parts: dict[str, FloatArray | None] = {}
    missing: dict[str, Missing] = {}
    for code, price in prices.items():
        amount, no_amount = amounts[code]
        if price is not None and not np.any(price):
            parts[code] = np.asarray(price, dtype=float)  # of a price of nothing the amount does not matter
        elif price is None or amount is None:
            parts[code], missing[code] = None, no_price[code] if price is None else no_amount
        else:
            parts[code] = np.asarray(price * np.asarray(amount, dtype=float))
    return YearlyCost(parts, missing)


def _price(name: str, given: Spread | tuple[float, float, float] | None, pick: Pick) -> FloatArray | None:
    return None if given is None else pick(f"money.{name}", Spread(*given))


def _per(amount: ArrayLike | None, unit: float) -> FloatArray | None:
    return None if amount is None else np.asarray(amount, dtype=float) / unit


def _no_peak(plan: Plan) -> Missing:
    """Return what is missing for the demand charge; a maker's seasonal COP gives no peak."""
    is_by_maker = plan.family == "replace" and plan.option is not None and plan.option.seasonal_cop is not None
    keys = (f"options.{plan.refrigerant.designation}.peak_power",) if is_by_maker else ()
    return Missing("demand", keys, "peak power of the year is not computed")


def _no_leak(code: str, case: Case, plan: Plan) -> Missing:
    """Return what is missing for the refrigerant lost in a year."""
    own = f"options.{plan.refrigerant.designation}"
    if plan.charge_kg is None:
        return Missing(code, charge_keys(case, plan))
    return Missing(code, ("emissions.leak_rate", f"{own}.leak_rate"), plan.leak.missing)


def _leak_checks(plan: Plan) -> tuple[float | None, Missing]:
    """Return how many leak checks the tables of law ask for in a year, as far as they can be told."""
    if plan.law is None:
        return None, Missing("leak_checks", ("law.jurisdiction",))
    if plan.law.leak_check_months:
        return MONTHS / plan.law.leak_check_months, Missing("leak_checks")
    reasons = "; ".join(map(reason_text, plan.law.leak_check_open))
    return (None if reasons else 0.0), Missing("leak_checks", (), f"time between leak checks: {reasons}")


def counted_alike(costs: Mapping[str, YearlyCost]) -> dict[str, YearlyCost]:
    """Return yearly costs that know of each other: a part that is known of any option counts for all.

    Args:
        costs: The yearly cost of every option, the plant as it is among them.
    """
    known = {code for cost in costs.values() for code, part in cost.parts.items() if part is not None}
    return {name: replace(cost, needed=frozenset(known | {"energy"})) for name, cost in costs.items()}


@dataclass(frozen=True)
class Saving:
    """Annual cost of the plant as it is less that of an option.

    Attributes:
        by_part: The saving by its code in PARTS; only parts that are known for both.
        state: Whether it counts every part, only those known for both, or is not known because the energy is not.
        of_known: The sum of `by_part`; None where the state is unknown. [currency/year]
        excluded: Parts that are known for one of the two alone.
        not_counted: Parts that are known for neither.
        one_sided: Losses in the option's energy that the plant as it is lacks: the two are not compared.
    """

    by_part: Mapping[str, FloatArray]
    state: ComparisonState
    of_known: FloatArray | None
    excluded: tuple[Missing, ...]
    not_counted: tuple[Missing, ...]
    one_sided: tuple[Loss, ...] = ()

    @property
    def total(self) -> FloatArray | None:
        """Return the saving if every part of it is known for both. [currency/year]"""
        return self.of_known if self.state is ComparisonState.COMPLETE else None


def yearly_saving(option: YearlyCost, as_is: YearlyCost, one_sided: tuple[Loss, ...] = ()) -> Saving:
    """Return what an option saves in a year; a part known for one of the two alone would tilt it and is left out.

    Args:
        option: What a year costs with the option.
        as_is: What a year costs with the plant as it is.
        one_sided: Losses that only the option's energy counts: with any, energy and its peak are not compared.
    """
    by_part: dict[str, FloatArray] = {}
    excluded, not_counted = [], []
    for code in PARTS:
        here, there = option.parts[code], as_is.parts[code]
        if one_sided and code in ("energy", "demand"):
            excluded.append(Missing(code, (), one_sided_words(one_sided)))
        elif here is not None and there is not None:
            by_part[code] = np.asarray(there - here)
        elif here is None and there is None:
            not_counted.append(option.missing[code])
        else:
            excluded.append(option.missing[code] if here is None else as_is.missing[code])
    if "energy" not in by_part:
        return Saving(by_part, ComparisonState.UNKNOWN, None, tuple(excluded), tuple(not_counted), one_sided)
    state = ComparisonState.INCOMPLETE if excluded else ComparisonState.COMPLETE
    return Saving(by_part, state, np.asarray(sum(by_part.values())), tuple(excluded), tuple(not_counted))


@dataclass(frozen=True)
class Appraisal:
    """Whether an option pays against the plant as it is; what rests on an incomplete comparison is None.

    Attributes:
        state: Whether the comparison counts every item, only those known for both, or cannot be made.
        excluded: Items left out because they are known for one of the two alone.
        payback_years: Simple payback; 0 without a first cost, infinite without a saving.
        npv: Net present value over the remaining life, above 0 where the option saves money.
        npv_of_known: The same of the items known for both, which does not show whether the option saves money.
        life_cost: First cost and discounted annual cost less residual value; a lower bound where items are missing.
        residual: Residual value at the end of the remaining life; None without a new plant or a remaining life.
        cost_per_t: Cost of each tonne of CO2e avoided, below 0 where it saves money too; NaN where none is avoided.
        avoided_t: CO2e avoided over the remaining life, below 0 if more is emitted.
        years, saved: Ends of the years from 0 to the remaining life, and what the option has saved by then, first cost
            paid, not discounted and without residual value (it crosses 0 at the payback); shape (..., m).
        life_years: Remaining life.
        annuity_years: Present value of one unit of money in each year of the remaining life.
    """

    state: ComparisonState
    excluded: tuple[Missing, ...]
    payback_years: FloatArray | None
    npv: FloatArray | None
    npv_of_known: FloatArray | None
    life_cost: Sum
    residual: FloatArray | None
    cost_per_t: FloatArray | None
    avoided_t: FloatArray | None
    years: FloatArray | None
    saved: FloatArray | None
    life_years: FloatArray | None
    annuity_years: FloatArray | None


def appraise(
    case: Case,
    plan: Plan,
    costs: tuple[FirstCost, YearlyCost, Saving],
    option: Tewi,
    as_is: Tewi,
    pick: Pick = low_base_high,
) -> Appraisal:
    """Return whether an option pays.

    Args:
        case: The case.
        plan: The option.
        costs: What it costs once and in a year, and what it saves in a year.
        option: Its warming, with the remaining life.
        as_is: Warming of the plant as it is.
        pick: What to take of the spread of discount rate and residual value.
    Source: FORMULAS.
    """
    first, yearly, saving = costs
    avoided = None
    if option.total_kg is not None and as_is.total_kg is not None and not saving.one_sided:
        avoided = np.asarray((as_is.total_kg - option.total_kg) / KG_PER_T)
    excluded = (*first.missing, *saving.excluded)
    state = ComparisonState.INCOMPLETE if excluded else ComparisonState.COMPLETE
    cost, gain, years, life = first.at_least, saving.of_known, option.years, option.life_years
    if cost is None or gain is None:
        state = ComparisonState.UNKNOWN
    is_complete = state is ComparisonState.COMPLETE
    payback = payback_years(cost, gain) if is_complete and cost is not None and gain is not None else None
    if years is None or life is None:
        unknown = Sum(None, (*first.missing, *yearly.sum.missing))
        return Appraisal(
            state, excluded, payback, None, None, unknown, None, None, avoided, None, None, None, None
        )  # fmt: skip
    rate = pick("money.discount_rate", single(case.money.discount_rate if case.money else 0.0))
    annuity = annuity_years(years, rate)
    residual = _residual(case, plan, first, life, pick)
    comes_back = 0.0 if residual is None else residual * (1.0 + rate) ** -life
    life_cost = _life_cost(first, yearly, annuity, comes_back)
    if cost is None or gain is None:
        return Appraisal(
            state, excluded, None, None, None, life_cost, residual, None, avoided, years, None, life, annuity
        )  # fmt: skip
    npv = np.asarray(gain * annuity - cost + comes_back)
    saved = np.asarray(np.asarray(gain)[..., None] * years - np.asarray(cost)[..., None])
    per_t = None if avoided is None else np.where(avoided > 0.0, -npv / np.where(avoided > 0.0, avoided, 1.0), np.nan)
    return Appraisal(
        state=state,
        excluded=excluded,
        payback_years=payback,
        npv=npv if is_complete else None,
        npv_of_known=npv,
        life_cost=life_cost,
        residual=residual,
        cost_per_t=per_t if is_complete else None,
        avoided_t=avoided,
        years=years,
        saved=saved if is_complete else None,
        life_years=life,
        annuity_years=annuity,
    )


def _life_cost(first: FirstCost, yearly: YearlyCost, annuity: FloatArray, comes_back: ArrayLike) -> Sum:
    """Return the present value of everything that an option costs."""
    a_year = yearly.sum
    missing = (*first.missing, *a_year.missing)
    if first.at_least is None or a_year.known is None:
        return Sum(None, missing)
    return Sum(np.asarray(first.at_least + a_year.known * annuity - np.asarray(comes_back)), missing)


def _residual(case: Case, plan: Plan, first: FirstCost, life: FloatArray, pick: Pick) -> FloatArray | None:
    """Return what a new plant is worth at the end of the remaining life; None without one. [currency]"""
    price, lasts = first.amount_of(PLANT), first.plant_life_years
    if price is None or lasts is None:
        return None
    given = plan.option.residual_value if plan.option else None
    if given is not None:
        return pick(f"options.{plan.refrigerant.designation}.residual_value", Spread(*given))
    return straight_line_residual(price, life, lasts)


def straight_line_residual(price: ArrayLike, age_years: ArrayLike, life_years: ArrayLike) -> FloatArray:
    """Return what is left of a price after some years, falling evenly to nothing over a life. [currency]

    Args:
        price: What was paid. [currency]
        age_years: Years since then. [years]
        life_years: Years over which the value falls to nothing. [years]
    Source: straight-line depreciation, definition.
    """
    left = np.maximum(1.0 - np.asarray(age_years, dtype=float) / np.asarray(life_years, dtype=float), 0.0)
    return np.asarray(np.asarray(price, dtype=float) * left)


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


def annuity_years(year_ends: ArrayLike, discount_rate: ArrayLike) -> FloatArray:
    """Return the present value of one unit of money paid at the end of each year. [years]

    Args:
        year_ends: Ends of the years, 0 first, the last one the life, shape (..., m). [years]
        discount_rate: Rate of a year. [-]
    Source: FORMULAS["net present value"]; of a last part of a year that part counts.
    """
    ends, rate = np.asarray(year_ends, dtype=float), np.asarray(discount_rate, dtype=float)[..., None]
    return np.asarray(np.sum(np.diff(ends, axis=-1) * (1.0 + rate) ** -ends[..., 1:], axis=-1))


def net_present_value(
    first_cost: ArrayLike, yearly_saving: ArrayLike, year_ends: ArrayLike, discount_rate: ArrayLike
) -> FloatArray:
    """Return the net present value of what is paid once and saved each year, without residual value. [currency]

    Args:
        first_cost: What is paid at the start. [currency]
        yearly_saving: What is saved in a whole year. [currency/year]
        year_ends: Ends of the years, 0 first, the last one the life, shape (..., m). [years]
        discount_rate: Rate of a year. [-]
    Source: FORMULAS["net present value"]; textbook definition with flows at the ends of years.
    """
    factor = annuity_years(year_ends, discount_rate)
    return np.asarray(np.asarray(yearly_saving, dtype=float) * factor - np.asarray(first_cost, dtype=float))


# States


class PaybackState(StrEnum):
    """Whether what is paid once comes back."""

    NEVER = "never"
    NONE_NEEDED = "none needed"
    WITHIN = "within"
    BEYOND = "beyond"
    UNKNOWN = "unknown"


@dataclass(frozen=True)
class Payback:
    """A simple payback: its state, its years where there are any, and the remaining life if it is given. [years]"""

    state: PaybackState
    years: float | None = None
    life_years: float | None = None


def payback_of(years: float | None, life_years: float | None) -> Payback:
    """Return what a simple payback is beside the remaining life: the one place that says so.

    Args:
        years: Years as `payback_years` gives them; None if not known. [years]
        life_years: Remaining life; None if not given. [years]
    Returns: The state; unknown also where the years are known and the remaining life is not.
    """
    if years is None:
        return Payback(PaybackState.UNKNOWN, None, life_years)
    if np.isinf(years):
        return Payback(PaybackState.NEVER, None, life_years)
    if years == 0.0:
        return Payback(PaybackState.NONE_NEEDED, None, life_years)
    if life_years is None:
        return Payback(PaybackState.UNKNOWN, years, None)
    return Payback(PaybackState.WITHIN if years <= life_years else PaybackState.BEYOND, years, life_years)


class AbatementState(StrEnum):
    """What it costs to avoid CO2e: money, less than nothing, or nothing is avoided."""

    COSTS = "costs"
    SAVES = "saves"
    NONE_AVOIDED = "none avoided"
    UNKNOWN = "unknown"


def abatement_of(found: Appraisal) -> AbatementState:
    """Return what it costs to avoid CO2e with an option, by base values.

    Args:
        found: Whether the option pays, in base values.
    """
    if found.avoided_t is None:
        return AbatementState.UNKNOWN
    if float(found.avoided_t) <= 0.0:
        return AbatementState.NONE_AVOIDED
    if found.cost_per_t is None:
        return AbatementState.UNKNOWN
    return AbatementState.SAVES if float(found.cost_per_t) < 0.0 else AbatementState.COSTS
