"""What the remaining life holds for every option, and which differences from the plant as it is mean something."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from retrofit.checks.money_words import NO_LIFE, missing_items_words
from retrofit.study import Comparison, Entry
from retrofit.study.accounts import Account
from retrofit.study.bands import alike, groups_alike, pair_band
from retrofit.study.criteria import criteria
from retrofit.study.life import Certainty, Life
from retrofit.study.losses import Loss, one_sided_words
from retrofit.study.money import Payback, payback_of
from retrofit.study.ranking import Flip, Order, Scores, Stability, flip, order, rank_stability, score
from retrofit.study.spread import at
from retrofit.study.sums import ComparisonState, Sum
from retrofit.study.year import YearRun

KEPT = "kept, with its repairs"
DEEDS = {"as is": "as it is", "keep": KEPT, "convert": "converted", "replace": "new plant"}
NO_MONEY = "the case has no [money]"
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
        amount: Its number less that of the plant as it is; None where `missing` says why. [J, kg CO2e]
        ratio: Amount over the number of the plant as it is.
        is_alike: Whether the model cannot tell them apart.
        missing: What is missing, or why the two are not compared.
        one_sided: Losses that only one of the two counts: they are not compared.
    """

    amount: float | None
    ratio: float | None
    is_alike: bool
    missing: str
    one_sided: tuple[Loss, ...] = ()


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
        quantity: "energy" of a year, or "emissions" over the remaining life. [-]
    """
    here, there = _number(option, quantity), _number(as_is, quantity)
    if lacks := _one_sided(as_is, option):
        return Difference(None, None, False, one_sided_words(lacks), lacks)
    if here is None or there is None:
        return Difference(None, None, False, _missing(option, quantity) or _missing(as_is, quantity))
    amount = here[0] - there[0]
    ratio = amount / there[0] if there[0] > 0.0 else None
    return Difference(amount, ratio, is_alike(as_is, option, quantity), "")


def is_alike(one: Prospect, other: Prospect, quantity: str) -> bool:
    """Say whether the model cannot tell two options apart; the same refrigerant on the same plant errs alike.

    Args:
        one, other: Options.
        quantity: As for `difference`, or against the plant as it is "saving" of a year or "npv" of the remaining
            life. [-]
    """
    a, b = _number(one, quantity), _number(other, quantity)
    if a is None or b is None or _one_sided(one, other):
        return False
    if one.entry is other.entry:
        return a[0] == b[0]
    name = "emissions" if quantity == "emissions" else "energy"
    return alike(one.entry, other.entry, name, (a[0], b[0]), (a[1], b[1]))


def _one_sided(one: Prospect, other: Prospect) -> tuple[Loss, ...]:
    """Return the losses that the electricity of one of two options counts and that of the other lacks."""
    here, there = (option.year.one_sided if option.year else () for option in (one, other))
    return () if here == there else here or there


def groups(options: Sequence[Prospect], quantity: str) -> tuple[tuple[Prospect, ...], ...]:
    """Return groups of options of different refrigerants that show no meaningful difference among themselves.

    Args:
        options: The options, of one refrigerant each.
        quantity: As for `difference`. [-]
    """
    known = [
        (option, number)
        for option in options
        if (number := _number(option, quantity)) is not None and not _one_sided(options[0], option)
    ]
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
    cost, saving, appraisal = option.account.yearly_cost, option.account.saving, option.account.appraisal
    if cost is None or saving is None or saving.total is None or appraisal is None:
        return None
    modelled = float(sum((part for code in MODELLED_COSTS if (part := cost.parts[code]) is not None), np.asarray(0.0)))
    if quantity == "saving":
        return float(saving.total), modelled
    if appraisal.npv is None or appraisal.annuity_years is None:
        return None
    return float(appraisal.npv), modelled * float(appraisal.annuity_years)


def _missing(option: Prospect, quantity: str) -> str:
    account = option.account
    if quantity == "energy":
        return option.no_year
    if quantity == "emissions":
        return "; ".join(account.tewi.missing)
    if account.appraisal is None or account.saving is None:
        return NO_MONEY
    excluded = account.saving.excluded if quantity == "saving" else account.appraisal.excluded
    items = (*excluded, *(item for item in account.saving.not_counted if item.code == "energy"))
    no_life = quantity != "saving" and account.tewi.life_years is None
    return missing_items_words(items) + (f"; {NO_LIFE}" if items and no_life else NO_LIFE if no_life else "")


def missing_words(option: Prospect, quantity: str) -> str:
    """Return what is missing for a quantity of an option; empty if nothing is.

    Args:
        option: The option.
        quantity: As for `is_alike`. [-]
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
        name: "carries", "uses_less", "cheaper", "cleaner" or "pays_back". [-]
    """
    if option.certainty is None or (name == "carries" and option.account.plan.family == "replace"):
        return None
    value: float | None = getattr(option.certainty, name)
    return value


@dataclass(frozen=True)
class Headline:
    """A leading number: the median of the samples with its 10th and 90th percentile, without samples the base."""

    middle: float
    band: tuple[float, float] | None


def headline(option: Prospect, name: str) -> Headline | None:
    """Return a number of money as it leads.

    Args:
        option: The option.
        name: "first_cost", "yearly_saving", "payback_years", "npv", "life_cost" or "cost_per_t". [-]
    Returns: The number; None if it is not known, or rests on an incomplete sum or comparison.
    """
    account, appraisal = option.account, option.account.appraisal
    if appraisal is None or account.first_cost is None or account.saving is None:
        return None
    base = {
        "first_cost": account.first_cost.total,
        "yearly_saving": account.saving.total,
        "payback_years": appraisal.payback_years,
        "npv": appraisal.npv,
        "life_cost": appraisal.life_cost.total,
        "cost_per_t": appraisal.cost_per_t,
    }[name]
    drawn = quantile(option, name)
    if base is None:
        return None
    return Headline(float(base), None) if drawn is None else Headline(drawn[1], (drawn[0], drawn[2]))


def sum_of_option(option: Prospect, name: str) -> Sum | None:
    """Return what an option costs by base values; None without money in the case. [currency]

    Args:
        option: The option.
        name: "first_cost", "yearly_cost" or "life_cost". [-]
    """
    account = option.account
    if account.first_cost is None or account.yearly_cost is None or account.appraisal is None:
        return None
    sums = {"first_cost": account.first_cost.sum, "yearly_cost": account.yearly_cost.sum}
    return {**sums, "life_cost": account.appraisal.life_cost}[name]


@dataclass(frozen=True)
class Compared:
    """A sum of an option against the plant as it is, above 0 where the option saves money. [currency]

    Attributes:
        state: What it counts.
        amount: The sum if it counts every item; None else.
        of_known: The sum of the items known for both; None if there is none.
    """

    state: ComparisonState
    amount: float | None
    of_known: float | None


def compared(option: Prospect, quantity: str) -> Compared:
    """Return what an option saves against the plant as it is, in base values.

    Args:
        option: The option.
        quantity: "saving" of a year, or "npv" of the remaining life. [-]
    """
    saving, appraisal = option.account.saving, option.account.appraisal
    if saving is None or appraisal is None:
        return Compared(ComparisonState.UNKNOWN, None, None)
    if quantity == "saving":
        state, amount, known = saving.state, saving.total, saving.of_known
    else:
        state, amount, known = appraisal.state, appraisal.npv, appraisal.npv_of_known
    if known is None:
        return Compared(ComparisonState.UNKNOWN, None, None)
    return Compared(state, None if amount is None else float(amount), float(known))


def payback(option: Prospect) -> Payback:
    """Return the simple payback of an option by base values, beside the remaining life."""
    appraisal = option.account.appraisal
    if appraisal is None:
        return payback_of(None, None)
    years, life = appraisal.payback_years, appraisal.life_years
    return payback_of(None if years is None else float(years), None if life is None else float(life))


def payback_quantiles(option: Prospect) -> tuple[Payback, Payback, Payback] | None:
    """Return the simple payback at the 10th, 50th and 90th percentile, beside the base remaining life."""
    found, life = quantile(option, "payback_years"), payback(option).life_years
    if found is None:
        return None
    return payback_of(found[0], life), payback_of(found[1], life), payback_of(found[2], life)


def first_cost_range(option: Prospect) -> tuple[float, float, float] | None:
    """Return first cost with every item low, at its base, and high; a lower bound where an item is missing. [currency]

    Args:
        option: The option.
    Returns: The three sums; None if no item is known.
    """
    found = option.three.first_cost
    if found is None or found.at_least is None:
        return None
    return at(found.at_least, 0), at(found.at_least, 1), at(found.at_least, 2)


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
    uses = {name: year.use for name, year in life.years.items()}
    measured = criteria(comparison, life.accounts, uses)
    scores = score(comparison, measured, lambda a, b: pair_band(a, b, "cop"))
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
