"""States of money in words, made once for every form: what is missing, how far a sum reaches, and a payback."""

from __future__ import annotations

from collections.abc import Callable, Iterable

from retrofit.study.first_cost import NAMES
from retrofit.study.money import PARTS, AbatementState, Appraisal, Payback, PaybackState
from retrofit.study.sums import Missing, SumState
from retrofit.units import format_number, listed

NO_LIFE = "remaining life needed (`law.remaining_life`)"
THIN_SPACE = "\N{NARROW NO-BREAK SPACE}"
AT_LEAST = f"≥{THIN_SPACE}"
LONGEST_YEARS = 100.0
INCOMPLETE = "incomplete"
INCOMPLETE_WORDS = "items known for only one option are excluded, so it is not said to save money"
AT_LEAST_WORDS = "at least: an item is missing"
PAYBACK_WORDS = {
    PaybackState.NEVER: "never pays back: no annual saving",
    PaybackState.NONE_NEEDED: "no payback needed: no first cost",
    PaybackState.WITHIN: "within the remaining life",
    PaybackState.BEYOND: "beyond the remaining life",
    PaybackState.UNKNOWN: "unknown",
}


def item_name(code: str) -> str:
    """Return the name of an item of first or annual cost, as running text.

    Args:
        code: Its code. [-]
    """
    if code in PARTS:
        return PARTS[code]
    name = NAMES[code]
    return f"{name[:1].lower()}{name[1:]}"


def item_names(items: Iterable[Missing]) -> str:
    """Return the names of items in a row, each once; empty if there is none."""
    names = list(dict.fromkeys(item_name(item.code) for item in items))
    return listed(names, "and") if names else ""


def missing_items_words(items: Iterable[Missing]) -> str:
    """Return which items are missing, each with the key that gives it, or the reason where no key does.

    Empty if none is.
    """
    names: dict[str, list[str]] = {}
    for item in items:
        names.setdefault(_given_by(item), []).append(item_name(item.code))
    return "; ".join(
        f"{listed(list(dict.fromkeys(found)), 'and')}{f' ({given})' if given else ''}" for given, found in names.items()
    )


def _given_by(item: Missing) -> str:
    key = f"`{item.keys[0]}`" if item.keys else ""
    return ": ".join(part for part in (item.reason, key) if part)


def sum_text(state: SumState, text: str) -> str:
    """Return a sum as a text, one that is a lower bound with the sign for at least.

    Args:
        state: What the sum is.
        text: Its number.
    """
    return f"{AT_LEAST}{text}" if state is SumState.AT_LEAST else text


def years_text(found: Payback) -> str:
    """Return a payback in a cell: its years, or its state where it has none; beyond a lifetime no number means much."""
    if found.years is None:
        return found.state.value
    return f">{THIN_SPACE}{LONGEST_YEARS:g}" if found.years > LONGEST_YEARS else format_number(found.years, 1)


def payback_words(found: Payback) -> str:
    """Return a payback as a sentence part that stands by itself."""
    if found.years is None:
        return "payback unknown" if found.state is PaybackState.UNKNOWN else PAYBACK_WORDS[found.state]
    years = f"payback in {years_text(found)} years"
    if found.life_years is None:
        return f"{years}; {NO_LIFE}"
    life = f"{found.life_years:g} years"
    if found.state is PaybackState.BEYOND:
        return f"{years}, beyond the remaining life of {life}: does not pay back"
    return f"{years}, within the remaining life of {life}"


def abatement_words(state: AbatementState, found: Appraisal, money: Callable[[float], str]) -> str:
    """Return the cost of each tonne of CO2e avoided in words.

    Args:
        state: What it costs to avoid CO2e.
        found: Whether the option pays, in base values.
        money: A sum as a text with its currency.
    """
    if state is AbatementState.NONE_AVOIDED:
        is_equal = found.avoided_t is not None and float(found.avoided_t) == 0.0
        return f"none avoided: it emits {'as much as' if is_equal else 'more than'} the plant as it is"
    if state is AbatementState.UNKNOWN or found.cost_per_t is None:
        what = "emissions are not known for both" if found.avoided_t is None else "net present value is not known"
        return f"unknown: {what}"
    cost = float(found.cost_per_t)
    if state is AbatementState.SAVES:
        return f"saves {money(-cost)} for each tonne of CO2e avoided"
    return f"{money(cost)} for each tonne of CO2e avoided"
