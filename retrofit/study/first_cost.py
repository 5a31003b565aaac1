"""What an option costs once, item by item, in the currency of the case."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from retrofit.case import Case, Range
from retrofit.study.emissions import edition_of, gwp_of
from retrofit.study.plan import Plan
from retrofit.study.spread import FloatArray, Pick, Spread, low_base_high, single

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
CREDIT, PLANT, REFRIGERANT = "reclaim_credit", "new_plant", "refrigerant"
NOTHING = Spread(0.0, 0.0, 0.0)


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
        total: Their sum; 0 for going on as today; None where `missing` says why.
        not_counted: Items that nobody gave, by name; empty where nothing is changed.
        missing: What is missing for a total; may be empty.
    """

    items: tuple[CostItem, ...]
    total: FloatArray | None
    not_counted: tuple[str, ...]
    missing: str


def first_cost(case: Case, plan: Plan, pick: Pick = low_base_high) -> FirstCost:
    """Return what an option costs once.

    Args:
        case: The case, whose [money] and [options] hold the items.
        plan: The option. Keeping the plant costs what its own option says, and nothing else.
        pick: What to take of each item's spread.
    Returns: The items and their sum. A change of which no item is given has no total, and a new plant none without
        its price.
    Raises: ValueError if the case has no money.
    """
    if case.money is None:
        raise ValueError("the case has no table [money]; give one")
    items = [item for item in _items(case, plan, pick) if item is not None]
    counted = {item.code for item in items}
    missing = _missing(case, plan, counted)
    # The credit is a sum that comes back, not work that can turn out dearer.
    works = sum((item.amount for item in items if item.code != CREDIT), np.asarray(0.0))
    items += _contingency(case, plan, works, pick)
    total = np.asarray(sum((item.amount for item in items), np.asarray(0.0)))
    return FirstCost(tuple(items), None if missing else total, _not_counted(plan, counted), missing)


def _missing(case: Case, plan: Plan, counted: set[str]) -> str:
    name = plan.refrigerant.designation
    if plan.family == "replace" and PLANT not in counted:
        return f"`new_plant` in [options.{name}]"
    given = [code for code, _ in ITEMS if _given(case, plan, code)]
    return f"items in [money.change] or [options.{name}]" if plan.is_change and not given else ""


def _not_counted(plan: Plan, counted: set[str]) -> tuple[str, ...]:
    if not plan.is_change:
        return ()
    return tuple(name for code, name in ITEMS if code not in counted and (code != PLANT or plan.family == "replace"))


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
    if case.money is None or case.money.levy is None or gwp is None:
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
    if levy is None or plan.charge_kg is None:
        return None
    amount = pick(plan.charge_key, plan.charge_kg) * levy
    return CostItem("levy", "Levy on the new charge", amount, "charge x GWP x `money.levy`")


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
