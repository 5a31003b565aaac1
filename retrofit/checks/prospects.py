"""What the remaining life holds for every option, and which differences from the plant as it is mean something."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from retrofit.study import Comparison, Entry
from retrofit.study.accounts import Account
from retrofit.study.bands import alike, band_of, groups_alike
from retrofit.study.criteria import criteria
from retrofit.study.life import Certainty, Life
from retrofit.study.plan import Use
from retrofit.study.ranking import Flip, Order, Scores, Stability, flip, order, rank_stability, score
from retrofit.study.spread import at
from retrofit.study.year import YearRun

KEPT = "kept, with its repairs"
DEEDS = {"as is": "as it is", "keep": KEPT, "convert": "converted", "replace": "new plant"}
NO_MONEY = "the case has no [money]"
NOT_GIVEN = "remaining life, `remaining_life` in [law]"
MODELLED_COSTS = ("energy", "demand")  # parts of a yearly cost that the model reckons
FAR_FROM_METER = 0.15  # common practice for a plausible model of a plant that is not tuned to its meter


@dataclass(frozen=True)
class Prospect:
    """One way to go on with the plant.

    Attributes:
        entry: Its refrigerant.
        name: Designation, with what sets it apart from another option of the same refrigerant.
        deed: What is done: "as it is", "kept, with its repairs", "converted" or "new plant".
        account, three: Emissions and money, in base values and with every input low, at its base and high.
        year: Its year; None where `no_year` says why.
        certainty: How sure its numbers are; None without draws.
    """

    entry: Entry
    name: str
    deed: str
    account: Account
    three: Account
    year: YearRun | None
    no_year: str
    certainty: Certainty | None


@dataclass(frozen=True)
class Difference:
    """How an option differs from the plant as it is in one quantity.

    Attributes:
        amount: Its number less that of the plant as it is; None where `missing` says why. [J, kg CO2e, currency]
        ratio: Amount over the number of the plant as it is; None for money, which has no such number.
        is_alike: Whether the model cannot tell them apart.
        missing: What is missing.
    """

    amount: float | None
    ratio: float | None
    is_alike: bool
    missing: str


def life_of_result(comparison: Comparison) -> Life:
    """Return the remaining life of a result.

    Args:
        comparison: A result with its remaining life.
    Raises: ValueError if it was not asked for.
    """
    if comparison.life is None:
        raise ValueError("the remaining life was not computed; ask `with_life` for it")
    return comparison.life


def prospects(comparison: Comparison) -> tuple[Prospect, ...]:
    """Return every option: the plant as it is, keeping it with its repairs if the case has that, and the candidates.

    A candidate that is not computed is not an option: it is neither priced nor ranked.

    Args:
        comparison: A result with its remaining life.
    """
    life, today = life_of_result(comparison), comparison.case.plant.refrigerant
    options = comparison.case.options.by_refrigerant if comparison.case.options else {}
    as_is = (life.accounts.as_is, life.three.as_is, life.as_is)
    found = [_prospect(comparison, comparison.existing, today, *as_is)]
    for entry in comparison.entries:
        name = entry.refrigerant.designation
        if (entry is comparison.existing and today not in options) or name not in life.accounts.options:
            continue
        label = f"{name} kept" if entry is comparison.existing else name
        both = life.accounts.options[name], life.three.options[name]
        found.append(_prospect(comparison, entry, label, *both, life.certainty.get(name)))
    return tuple(found)


def _prospect(
    comparison: Comparison, entry: Entry, name: str, account: Account, three: Account, certainty: Certainty | None
) -> Prospect:
    life, designation = life_of_result(comparison), entry.refrigerant.designation
    year, why = life.years.get(designation), life.no_year.get(designation, "")
    return Prospect(entry, name, DEEDS[account.plan.family], account, three, year, why, certainty)


# Differences


def difference(as_is: Prospect, option: Prospect, quantity: str) -> Difference:
    """Return how an option differs from the plant as it is.

    Args:
        as_is: The plant as it is.
        option: The option.
        quantity: "energy" or "saving" of a year, "emissions" or "cost" over the remaining life. [-]
    """
    here, there = _number(option, quantity), _number(as_is, quantity)
    if here is None or there is None:
        return Difference(None, None, False, _missing(option, quantity) or _missing(as_is, quantity))
    amount = here[0] - there[0]
    ratio = amount / there[0] if there[0] > 0.0 else None
    return Difference(amount, ratio, is_alike(as_is, option, quantity), "")


def is_alike(one: Prospect, other: Prospect, quantity: str) -> bool:
    """Say whether the model cannot tell two options apart; the same refrigerant on the same plant errs alike.

    Args:
        one, other: Options.
        quantity: As for `difference`. [-]
    """
    a, b = _number(one, quantity), _number(other, quantity)
    if a is None or b is None:
        return False
    if one.entry is other.entry:
        return a[0] == b[0]
    name = "emissions" if quantity == "emissions" else "energy"
    return alike(one.entry, other.entry, name, (a[0], b[0]), (a[1], b[1]))


def groups(options: Sequence[Prospect], quantity: str) -> tuple[tuple[Prospect, ...], ...]:
    """Return groups of options of different refrigerants that show no meaningful difference among themselves.

    Args:
        options: The options, of one refrigerant each.
        quantity: As for `difference`. [-]
    """
    known = [(option, number) for option in options if (number := _number(option, quantity)) is not None]
    entries = [option.entry for option, _ in known]
    found = groups_alike(entries, "emissions", [number[0] for _, number in known], [number[1] for _, number in known])
    return tuple(tuple(option for option, _ in known if option.entry in group) for group in found)


def _number(option: Prospect, quantity: str) -> tuple[float, float] | None:
    """Return a number of an option, and the part of it that the model of its refrigerant makes."""
    if quantity == "energy":
        return None if option.year is None else (option.year.energy_J, option.year.energy_J)
    if quantity == "emissions":
        warming = option.account.tewi
        if warming.total_kg is None or warming.indirect_kg is None:
            return None
        return float(warming.total_kg), float(warming.indirect_kg)
    cost, saving, extra = option.account.yearly_cost, option.account.saving, life_cost(option)
    if cost is None or saving is None or saving.total is None:
        return None
    modelled = float(sum((part for code in MODELLED_COSTS if (part := cost.parts[code]) is not None), np.asarray(0.0)))
    if quantity == "saving":
        return -float(saving.total), modelled
    return None if extra is None else (extra, modelled * float(option.account.tewi.life_years or 0.0))


def life_cost(option: Prospect) -> float | None:
    """Return what an option costs over the remaining life more than the plant as it is; None if not known. [currency]

    Args:
        option: The option.
    """
    extra = option.account.appraisal.extra_cost if option.account.appraisal else None
    return None if extra is None else float(extra[..., -1])


def _missing(option: Prospect, quantity: str) -> str:
    account = option.account
    if quantity == "energy":
        return option.no_year
    if quantity == "emissions":
        return "; ".join(account.tewi.missing)
    if account.first_cost is None or account.saving is None:
        return NO_MONEY
    found = [account.first_cost.missing] if account.first_cost.total is None else []
    if account.saving.total is None:
        found.append(next((words for words in account.saving.not_counted if words.startswith("energy")), "energy"))
    if account.tewi.life_years is None:
        found.append(NOT_GIVEN)
    return "; ".join(found)


def missing_words(option: Prospect, quantity: str) -> str:
    """Return what is missing for a quantity of an option; empty if nothing is.

    Args:
        option: The option.
        quantity: As for `difference`. [-]
    """
    return "" if _number(option, quantity) is not None else _missing(option, quantity)


def quantile(option: Prospect, name: str) -> tuple[float, float, float] | None:
    """Return the values that 10, 50 and 90 per cent of the draws stay below; None if not known. [unit of the result]

    Args:
        option: The option.
        name: Name of the result. [-]
    """
    found = option.certainty.quantiles.get(name) if option.certainty else None
    return None if found is None else (found.p10, found.p50, found.p90)


def probability(option: Prospect, name: str) -> float | None:
    """Return a share of the draws; None if not known, or of a new plant that is sized to carry what is needed. [-]

    Args:
        option: The option.
        name: "carries", "uses_less", "cheaper" or "cleaner". [-]
    """
    if option.certainty is None or (name == "carries" and option.account.plan.family == "replace"):
        return None
    value: float | None = getattr(option.certainty, name)
    return value


def first_cost_range(option: Prospect) -> tuple[float, float, float] | None:
    """Return first cost with every item low, at its base, and high; None if not known. [currency]

    Args:
        option: The option.
    """
    found = option.three.first_cost
    if found is None or found.total is None:
        return None
    return at(found.total, 0), at(found.total, 1), at(found.total, 2)


# Which comes first


@dataclass(frozen=True)
class Ranked:
    """Options in order under even weights.

    Attributes:
        scores: What they are ranked by.
        order: The order.
        stability: How often each comes first over all weightings; None if nothing can be ranked.
        flip: The smallest change of one weight that changes who comes first; None if none does.
    """

    scores: Scores
    order: Order
    stability: Stability | None
    flip: Flip | None


def ranked(comparison: Comparison) -> Ranked:
    """Return the options of a result in order under even weights.

    Args:
        comparison: An assessed result with its remaining life.
    """
    life = life_of_result(comparison)
    uses = {name: Use(year.energy_J, year.peak_W) for name, year in life.years.items()}
    measured = criteria(comparison, life.accounts, uses)
    bands = {entry.refrigerant.designation: band_of(entry, "cop") for entry in comparison.entries if entry.duty}
    scores = score(comparison, measured, bands)
    if not scores.names or not scores.criteria:
        return Ranked(scores, order(scores), None, None)
    stability = rank_stability(scores.scores, doubts=scores.doubts)
    return Ranked(scores, order(scores), stability, flip(scores))


def leading(comparison: Comparison) -> Prospect | None:
    """Return the candidate that the case recommends, else the one ranked first, else the first that has numbers.

    Args:
        comparison: An assessed result with its remaining life.
    """
    known = {option.entry.refrigerant.designation: option for option in prospects(comparison)[1:]}
    known = {
        name: option
        for name, option in known.items()
        if option.certainty is not None and option.entry is not comparison.existing
    }
    report = comparison.case.report
    named = [report.recommended] if report and report.recommended else []
    return next((known[name] for name in (*named, *ranked(comparison).order.names, *known) if name in known), None)
