"""Emissions and money of every option of a result, beside the plant as it is."""

from __future__ import annotations

import datetime
from collections.abc import Mapping
from dataclasses import dataclass

from retrofit.study.emissions import Tewi, tewi
from retrofit.study.first_cost import FirstCost, first_cost
from retrofit.study.money import Appraisal, Saving, YearlyCost, appraise, counted_alike, yearly_cost, yearly_saving
from retrofit.study.plan import Plan, Use, plan_as_is, plan_for
from retrofit.study.result import Comparison
from retrofit.study.spread import Pick, low_base_high

NOT_KNOWN = Use()
AS_IS = ""  # the plant as it is, among designations


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
    case, existing = comparison.case, comparison.existing
    today = plan_as_is(case, existing)
    plans = {AS_IS: today}
    plans |= {
        entry.refrigerant.designation: plan_for(case, entry, existing)
        for entry in comparison.entries
        if entry.is_computed or entry is existing
    }
    use = {name: uses.get(plan.refrigerant.designation, NOT_KNOWN) for name, plan in plans.items()}
    warming = {name: tewi(case, plan, today, use[name], pick, on) for name, plan in plans.items()}
    if case.money is None:
        found = {name: Account(plan, warming[name], None, None, None, None) for name, plan in plans.items()}
    else:
        yearly = counted_alike({name: yearly_cost(case, plan, use[name], pick) for name, plan in plans.items()})
        found = {}
        for name, plan in plans.items():
            saving = yearly_saving(yearly[name], yearly[AS_IS], use[name].one_sided)
            costs = first_cost(case, plan, pick), yearly[name], saving
            appraisal = appraise(case, plan, costs, warming[name], warming[AS_IS], pick)
            found[name] = Account(plan, warming[name], *costs, appraisal)
    return Accounts(found.pop(AS_IS), found)
