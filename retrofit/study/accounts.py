"""Emissions and money of every option of a result, beside the plant as it is."""

from __future__ import annotations

import datetime
from collections.abc import Mapping
from dataclasses import dataclass

from retrofit.study.emissions import Tewi, tewi
from retrofit.study.first_cost import FirstCost, first_cost
from retrofit.study.money import Appraisal, Saving, YearlyCost, appraise, yearly_cost, yearly_saving
from retrofit.study.plan import Plan, Use, plan_as_is, plan_for
from retrofit.study.result import Comparison
from retrofit.study.spread import Pick, low_base_high

NOT_KNOWN = Use()


@dataclass(frozen=True)
class Account:
    """One option: its warming, and its money if the case has a table for it.

    Attributes:
        plan: What is counted.
        tewi: Its warming.
        first_cost, yearly_cost, saving, appraisal: Its money; None without [money].
    """

    plan: Plan
    tewi: Tewi
    first_cost: FirstCost | None
    yearly_cost: YearlyCost | None
    saving: Saving | None
    appraisal: Appraisal | None


@dataclass(frozen=True)
class Accounts:
    """All options of a result.

    Attributes:
        as_is: The plant of today, going on as it is: what savings and CO2e avoided are counted against.
        options: Every computed option by designation; that of today's refrigerant is keeping the plant with its
            repairs. What is not computed is not priced.
    """

    as_is: Account
    options: Mapping[str, Account]


def accounts(
    comparison: Comparison, uses: Mapping[str, Use], pick: Pick = low_base_high, on: datetime.date | None = None
) -> Accounts:
    """Return emissions and money of every option.

    Args:
        comparison: A result; leak checks and bans need one that went through the checks.
        uses: Electricity of a year by designation; one that is not there is not known.
        pick: What to take of each input's spread: low, base and high if left out.
        on: Day the remaining life begins if the case gives no date of change.
    """
    existing = comparison.existing
    today = plan_as_is(comparison.case, existing)
    as_is = _account(comparison, today, None, today, uses, pick, on)
    options = {}
    for entry in comparison.entries:
        if not entry.is_computed and entry is not existing:
            continue
        plan = plan_for(comparison.case, entry, existing)
        options[entry.refrigerant.designation] = _account(comparison, plan, as_is, today, uses, pick, on)
    return Accounts(as_is, options)


def _account(
    comparison: Comparison,
    plan: Plan,
    as_is: Account | None,
    today: Plan,
    uses: Mapping[str, Use],
    pick: Pick,
    on: datetime.date | None,
) -> Account:
    case, use = comparison.case, uses.get(plan.refrigerant.designation, NOT_KNOWN)
    warming = tewi(case, plan, today, use, pick, on)
    if case.money is None:
        return Account(plan, warming, None, None, None, None)
    once, year = first_cost(case, plan, pick), yearly_cost(case, plan, use, pick)
    today_year, today_warming = (year, warming) if as_is is None else (as_is.yearly_cost or year, as_is.tewi)
    saving = yearly_saving(year, today_year)
    return Account(plan, warming, once, year, saving, appraise(case, once, saving, warming, today_warming, pick))
