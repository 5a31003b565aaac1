"""What an option costs once, item by item, in the currency of the case; a lower bound where an item is missing."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from retrofit.case import Case, Range
from retrofit.study.emissions import edition_of, gwp_of
from retrofit.study.plan import Plan, life_years
from retrofit.study.spread import FloatArray, Pick, Spread, low_base_high, single
from retrofit.study.states import Family
from retrofit.study.sums import Missing, Sum, SumState

ITEMS = (
    ("recovery", "Recovery of the old charge"),
    ("refrigerant", "New charge"),
    ("reclaim_credit", "Credit for the old charge"),
    ("oil", "Oil"),
    ("driers", "Filter driers"),
    ("valves", "Expansion valves and nozzles"),
    ("seals", "Seals and gaskets"),
    ("relief", "Relief valves"),
    ("controls", "Controls"),
    ("labour", "Labour"),
    ("downtime", "Downtime and product"),
    ("safety_works", "Safety works"),
    ("new_plant", "New plant"),
)
CREDIT, PLANT, REFRIGERANT, LEVY = "reclaim_credit", "new_plant", "refrigerant", "levy"
# What an option needs without any item of its own that could be named.
WORK, REPAIRS, REPLACEMENT = "work", "repairs", "replacement"
NAMES = {
    **dict(ITEMS),
    LEVY: "Levy on the new charge",
    WORK: "Work of the change",
    REPAIRS: "Repair of leaks",
    REPLACEMENT: "Replacement of the new plant within the remaining life",
}
"""Name of every item by its code."""


@dataclass(frozen=True)
class CostItem:
    """One item: its code and name, its amount (a credit below 0) as numbers or draws, and where it comes from."""

    code: str
    name: str
    amount: FloatArray
    made_from: str


@dataclass(frozen=True)
class FirstCost:
    """What an option costs once.

    Attributes:
        items: The items counted, in their order.
        sum: Their sum, a lower bound where an item is missing; 0 for going on as today.
        not_counted: Codes of the items that nobody gave for any change; empty where nothing is changed.
        plant_life_years: Years that a new plant lasts; None without one.
    """

    items: tuple[CostItem, ...]
    sum: Sum
    not_counted: tuple[str, ...]
    plant_life_years: FloatArray | None = None

    @property
    def total(self) -> FloatArray | None:
        """Return the sum if every item that the option needs is known. [currency]"""
        return self.sum.total

    @property
    def at_least(self) -> FloatArray | None:
        """Return the sum of the items that are known; None if none is. [currency]"""
        return self.sum.known

    @property
    def state(self) -> SumState:
        """Return whether the sum is complete."""
        return self.sum.state

    @property
    def missing(self) -> tuple[Missing, ...]:
        """Return the items that the option needs and that are not known."""
        return self.sum.missing

    def amount_of(self, code: str) -> FloatArray | None:
        """Return the amount of an item; None if it is not counted. [currency]"""
        return next((item.amount for item in self.items if item.code == code), None)


def first_cost(case: Case, plan: Plan, pick: Pick = low_base_high) -> FirstCost:
    """Return what an option costs once.

    Args:
        case: The case, whose [money] and [options] hold the items.
        plan: The option. Keeping the plant costs what its own option says, and nothing else.
        pick: What to take of each item's spread.
    Returns: The items and their sum. A change needs its charge, a new plant its price, and every change the items that
        are given for any other; without one of them the sum is a lower bound. A credit is never needed.
    Raises: ValueError if the case has no money.
    """
    if case.money is None:
        raise ValueError("the case has no table [money]; give one")
    items = [item for item in _items(case, plan, pick) if item is not None]
    counted = {item.code for item in items}
    missing = tuple(_missing(case, plan, counted))
    # The credit is a sum that comes back, not work that can turn out dearer.
    works = sum((item.amount for item in items if item.code != CREDIT), np.asarray(0.0))
    items += _contingency(case, plan, works, pick)
    known = np.asarray(sum((item.amount for item in items), np.asarray(0.0))) if items or not missing else None
    life = _plant_life(case, plan)
    return FirstCost(
        tuple(items),
        Sum(known, missing),
        _not_counted(plan, counted | {item.code for item in missing}),
        None if life is None else pick(*life),
    )


def _missing(case: Case, plan: Plan, counted: set[str]) -> Iterator[Missing]:
    """Yield what an option needs and nobody gave."""
    name = plan.refrigerant.designation
    if not plan.is_change:
        own = plan.option
        is_repaired = own is not None and own.leak_rate is not None
        if is_repaired and not any(getattr(own, code) is not None for code, _ in ITEMS):
            yield Missing(REPAIRS, (f"options.{name}.labour",))
        return
    needed = _needed(case, plan)
    if plan.family != "replace" and not any(_given(case, plan, code) for code, _ in ITEMS):
        yield Missing(WORK, ("money.change.labour", f"options.{name}.labour"))
        needed &= {REFRIGERANT}
    for code, _ in ITEMS:
        if code in needed - counted:
            yield _missing_item(case, plan, code)
    if case.money and case.money.levy is not None and LEVY not in counted:
        yield _missing_charge(case, plan, LEVY) or Missing(LEVY, (), f"GWP of {name}")
    life, lasts = life_years(case), _plant_life(case, plan)
    if life is not None and lasts is not None and lasts[1].base < life:
        yield Missing(REPLACEMENT, (lasts[0],))


def _needed(case: Case, plan: Plan) -> set[str]:
    """Return the codes of what a change needs: its charge, a new plant its price, and what any other change costs."""
    change, today = case.money.change if case.money else None, case.plant.refrigerant
    options = case.options.by_refrigerant if case.options else {}
    others = [option for name, option in options.items() if name != today and name in case.compare.candidates]
    given = {
        code
        for code, _ in ITEMS
        for table in (change, *others)
        if table is not None and (found := getattr(table, code)) is not None and found.high > 0.0
    }
    own = {REFRIGERANT, PLANT} if plan.family == "replace" else {REFRIGERANT}
    return (given - {CREDIT, PLANT}) | own


def _missing_item(case: Case, plan: Plan, code: str) -> Missing:
    name = plan.refrigerant.designation
    if code != REFRIGERANT:
        shared = () if code == PLANT else (f"money.change.{code}",)
        return Missing(code, (*shared, f"options.{name}.{code}"))
    prices = dict(case.money.refrigerant_price or ()) if case.money else {}
    no_charge = _missing_charge(case, plan, code) if name in prices else None
    return no_charge or Missing(code, (f"money.refrigerant_price.{name}", f"options.{name}.refrigerant"))


def _missing_charge(case: Case, plan: Plan, code: str) -> Missing | None:
    if plan.charge_kg is not None:
        return None
    return Missing(code, charge_keys(case, plan))


def charge_keys(case: Case, plan: Plan) -> tuple[str, ...]:
    """Return the keys that give the charge of an option; a new plant has its own.

    Args:
        case: The case.
        plan: The option.
    """
    own = f"options.{plan.refrigerant.designation}.charge"
    is_own = plan.family == Family.REPLACE or case.plant.charge_kg is not None
    return (own,) if is_own else ("plant.charge", own)


def _not_counted(plan: Plan, told: set[str]) -> tuple[str, ...]:
    if not plan.is_change:
        return ()
    return tuple(code for code, _ in ITEMS if code not in told and (code != PLANT or plan.family == "replace"))


def _plant_life(case: Case, plan: Plan) -> tuple[str, Spread] | None:
    """Return the key and the years that a new plant lasts; None without one."""
    if plan.family != "replace" or case.money is None:
        return None
    own = plan.option.plant_life_years if plan.option else None
    if own is not None:
        return f"options.{plan.refrigerant.designation}.plant_life", single(own)
    return "money.new_plant_life", single(case.money.new_plant_life_years)


def _given(case: Case, plan: Plan, code: str) -> tuple[str, Range] | None:
    """Return key and sum of an item: the option's own, or for a change the one for every change."""
    own = getattr(plan.option, code) if plan.option else None
    if own is not None:
        return f"options.{plan.refrigerant.designation}.{code}", own
    change = case.money.change if case.money else None
    # A plant bought for one option is not part of every conversion.
    if change is None or not plan.is_change or (code == PLANT and plan.family != "replace"):
        return None
    shared = getattr(change, code)
    return None if shared is None else (f"money.change.{code}", shared)


def _items(case: Case, plan: Plan, pick: Pick) -> Iterator[CostItem | None]:
    for code, name in ITEMS:
        found = _given(case, plan, code)
        if found is None:
            yield _bought(case, plan, pick) if code == REFRIGERANT and plan.is_change else None
            continue
        key, given = found
        spread = Spread(*given)
        if code == CREDIT:
            spread = Spread(-given.high, -given.base, -given.low)
        yield CostItem(code, name, pick(key, spread), f"`{key}`")
    yield _levy(case, plan, pick) if plan.is_change else None


def price_of(case: Case, plan: Plan, pick: Pick) -> FloatArray | None:
    """Return the price of a kilogram of an option's refrigerant; None if not given. [currency/kg]

    Args:
        case: The case.
        plan: The option.
        pick: What to take of its spread.
    """
    prices = dict(case.money.refrigerant_price or ()) if case.money else {}
    name = plan.refrigerant.designation
    return pick(f"money.refrigerant_price.{name}", Spread(*prices[name])) if name in prices else None


def levy_per_kg(case: Case, plan: Plan, pick: Pick) -> FloatArray | None:
    """Return the levy on a kilogram of an option's refrigerant; None if levy or GWP is not given. [currency/kg]

    Args:
        case: The case.
        plan: The option.
        pick: What to take of its spread.
    """
    gwp = gwp_of(plan.refrigerant, edition_of(case)).value
    if case.money is None or case.money.levy is None:
        return None
    if case.money.levy.high == 0.0:
        return np.asarray(0.0)
    if gwp is None:
        return None
    return pick("money.levy", Spread(*case.money.levy)) * gwp / 1000.0


def _bought(case: Case, plan: Plan, pick: Pick) -> CostItem | None:
    price = price_of(case, plan, pick)
    if price is None or plan.charge_kg is None:
        return None
    amount = pick(plan.charge_key, plan.charge_kg) * price
    return CostItem(REFRIGERANT, dict(ITEMS)[REFRIGERANT], amount, "charge x price of a kilogram")


def _levy(case: Case, plan: Plan, pick: Pick) -> CostItem | None:
    levy = levy_per_kg(case, plan, pick)
    if levy is None or (plan.charge_kg is None and np.any(levy)):
        return None
    amount = levy if plan.charge_kg is None else pick(plan.charge_key, plan.charge_kg) * levy
    return CostItem(LEVY, NAMES[LEVY], amount, "charge x GWP x `money.levy`")


def _contingency(case: Case, plan: Plan, works: FloatArray, pick: Pick) -> list[CostItem]:
    own = plan.option.contingency if plan.option else None
    change = case.money.change if case.money and plan.is_change else None
    shared = change.contingency if change else None
    share, key = (own, "own") if own is not None else (shared, "change")
    if share is None:
        return []
    key = f"options.{plan.refrigerant.designation}.contingency" if key == "own" else "money.change.contingency"
    amount = works * pick(key, single(share))
    return [CostItem("contingency", "Contingency", amount, f"{share:.3g} of the items before the credit, `{key}`")]
