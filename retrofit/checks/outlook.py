"""The remaining life in words: year, emissions, money, how sure they are, and what moves the answer most."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass

from retrofit.checks.answer import Matter, left_words, option_name
from retrofit.checks.money_words import (
    INCOMPLETE,
    INCOMPLETE_WORDS,
    NO_LIFE,
    PAYBACK_WORDS,
    abatement_words,
    missing_items_words,
    years_text,
)
from retrofit.checks.prospects import (
    DEEDS,
    FAR_FROM_METER,
    KEPT,
    NO_MONEY,
    Difference,
    Headline,
    Prospect,
    Ranked,
    compared,
    difference,
    groups,
    headline,
    is_alike,
    leading,
    life_of_result,
    missing_words,
    payback,
    payback_quantiles,
    probability,
    prospects,
    ranked,
)
from retrofit.study import Comparison, Level
from retrofit.study.bands import best_evidence, model_band, percent_text
from retrofit.study.emissions import Tewi
from retrofit.study.life import CAPACITY, Swing
from retrofit.study.money import Payback, PaybackState, abatement_of
from retrofit.study.ranking import stability_words
from retrofit.study.sums import ComparisonState
from retrofit.units import UnitSystem, format_number, listed, shown

NBSP = "\N{NO-BREAK SPACE}"
UNKNOWN = "unknown"
KG_PER_T = 1000.0
DIGITS = 4  # of a computed sum or energy: the model knows two of them, the others let sums be checked
STRONGEST = 3  # inputs that the sentence names
# Results whose strongest inputs are told, the first one known of an option first; and what each is in words.
TOLD = {
    "npv": "net present value",
    "yearly_saving": "annual saving",
    "avoided_t": "CO2e avoided over the remaining life",
    "energy_saving_J": "electricity saved in a year",
    "cop_ratio": "COP against today's",
    "capacity_ratio": "cooling at full against today's",
}
RATIOS = ("cop_ratio", "capacity_ratio")


@dataclass(frozen=True)
class Outlook:
    """The remaining life in words, names of refrigerants as designations.

    Attributes:
        year, emissions, money, certainty: Matters by section, those that there are.
        meter: The computed year against the meter; empty if the case has none.
        swing: What moves the answer most; empty without draws.
        ranking: Which option comes first under even weights, sentence by sentence.
        stopped: Which options a check stops or are not computed, whatever their numbers here; empty if none.
        absent: Which tables the case would need for what is not computed at all; empty if it has them.
    """

    year: tuple[Matter, ...]
    emissions: tuple[Matter, ...]
    money: tuple[Matter, ...]
    certainty: tuple[Matter, ...]
    meter: str
    swing: str
    ranking: tuple[str, ...]
    stopped: str
    absent: str

    @property
    def matters(self) -> tuple[Matter, ...]:
        """Return all matters in their order."""
        return (*self.year, *self.emissions, *self.money, *self.certainty)


def outlook(comparison: Comparison, units: UnitSystem) -> Outlook:
    """Return the remaining life in words.

    Args:
        comparison: An assessed result with its remaining life.
        units: The reader's units.
    """
    options = prospects(comparison)
    return Outlook(
        year=_there(_energy(options, units), _alike(options[1:], "energy"), _unmet(options, units)),
        emissions=_there(_emissions(options), _alike(options[1:], "emissions")),
        money=_there(*_money(comparison, options)) if comparison.case.money else (),
        certainty=_there(_certainty(comparison, options)),
        meter=meter_words(comparison, units),
        swing=swing_words(comparison, units),
        ranking=ranking_words(comparison, ranked(comparison)),
        stopped=_stopped(comparison),
        absent=_absent(comparison),
    )


def _there(*matters: Matter) -> tuple[Matter, ...]:
    return tuple(matter for matter in matters if matter.groups)


TABLES = {"year": "the electricity of a year", "emissions": "the warming", "money": "first cost and yearly cost"}


def _absent(comparison: Comparison) -> str:
    """Return which tables the case would need for what is not computed."""
    missing = [name for name in TABLES if getattr(comparison.case, name) is None]
    if not missing:
        return ""
    matters = listed([TABLES[name] for name in missing], "and")
    return f"Not computed: {matters}. The case would need {listed([f'[{name}]' for name in missing], 'and')}."


def _stopped(comparison: Comparison) -> str:
    """Return which options a check stops: their numbers stand beside the others' all the same."""
    found: dict[str, list[str]] = {}
    for entry in comparison.entries:
        if entry.stops:
            found.setdefault(entry.stops[0].title, []).append(entry.refrigerant.designation)
    sentences = []
    if found:
        told = "; ".join(f"{listed(names, 'and')} ({title})" for title, names in found.items())
        sentences.append(f"Stopped: {told}. Figures for information only; not proposed.")
    if missing := [entry.refrigerant.designation for entry in comparison.candidates if not entry.is_computed]:
        are = "are" if len(missing) > 1 else "is"
        sentences.append(f"{listed(missing, 'and')} {are} not computed, and so not priced or ranked.")
    return " ".join(sentences)


# Numbers as words


def percent(ratio: float | None, decimals: int = 0) -> str:
    """Return a relative difference in percent with its sign, or unknown.

    Args:
        ratio: The difference. [-]
        decimals: Decimals. [-]
    """
    return UNKNOWN if ratio is None else f"{format_number(100.0 * ratio, decimals, signed=True)}{NBSP}%"


def share(value: float | None) -> str:
    """Return a probability as whole percent, 0 and 100 for none and all alone; or unknown.

    Args:
        value: The probability. [-]
    """
    if value is None:
        return UNKNOWN
    whole = round(100.0 * value)
    if whole == 0 and value > 0.0:
        return f"less than 1{NBSP}%"
    return f"more than 99{NBSP}%" if whole == 100 and value < 1.0 else f"{whole}{NBSP}%"


def rounded_text(number: float, signed: bool = False) -> str:
    """Return a computed number with four digits at most, whole where it is large.

    Args:
        number: The number. [any]
        signed: Whether a plus sign stands before it. [-]
    """
    size = abs(number)
    if size == 0.0:
        return "0"
    if size >= 1000.0:
        places = DIGITS - 1 - math.floor(math.log10(size))
        return format_number(round(number, min(places, 0)), 0, signed=signed)
    return format_number(number, 0 if size >= 100.0 else 1 if size >= 10.0 else 2, signed=signed)


def money_text(comparison: Comparison, amount: float | None, signed: bool = False) -> str:
    """Return a sum with the currency of the case, or unknown.

    Args:
        comparison: The result.
        amount: The sum. [currency]
        signed: Whether a plus sign stands before it. [-]
    """
    if amount is None or not math.isfinite(amount):
        return UNKNOWN
    return f"{rounded_text(amount, signed)}{NBSP}{currency(comparison)}"


def currency(comparison: Comparison) -> str:
    """Return the currency of a case, fit to be shown."""
    return shown(comparison.case.money.currency) if comparison.case.money else ""


def energy_text(units: UnitSystem, energy_J: float | None, signed: bool = False) -> str:
    """Return an energy with its unit, or unknown.

    Args:
        units: The reader's units.
        energy_J: The energy. [J]
        signed: Whether a plus sign stands before it. [-]
    """
    if energy_J is None:
        return UNKNOWN
    return f"{rounded_text(float(units.number('energy', energy_J)), signed)}{NBSP}{units.label('energy')}"


def life_text(warming: Tewi) -> str:
    """Return the remaining life in words."""
    return "the remaining life" if warming.life_years is None else f"the remaining {float(warming.life_years):g} years"


# The year


Sorted = Sequence[tuple[str, list[str]]]


def _by_difference(
    options: Sequence[Prospect], quantity: str, words: tuple[str, str, str], amount: Callable[[Prospect], str]
) -> tuple[tuple[str, tuple[str, ...]], ...]:
    """Sort options by whether they differ from the plant as it is by more than the band; what is not known last."""
    less, near, more = words
    found: dict[str, list[str]] = {less: [], near: [], more: []}
    for option in options[1:]:
        if quantity == "energy" and option.deed == KEPT:
            continue  # the same plant: the same electricity
        change = difference(options[0], option, quantity)
        if change.amount is None:
            heading = change.missing if change.one_sided else _unknown(option, change.missing)
            found.setdefault(heading, []).append(option.name)
        else:
            where = near if change.is_alike else less if change.amount < 0.0 else more
            found[where].append(f"{option.name} {amount(option)}")
    return tuple((heading, tuple(names)) for heading, names in found.items() if names)


def _unknown(option: Prospect, missing: str) -> str:
    """Return what is missing, told so that options that lack the same stand together."""
    own = f"[options.{option.entry.refrigerant.designation}]"
    return f"unknown: missing {missing.replace(own, 'its table in [options]')}"


def _energy(options: tuple[Prospect, ...], units: UnitSystem) -> Matter:
    if all(option.year is None for option in options):
        return Matter("Electricity of a year", ())
    as_is = options[0]
    today = energy_text(units, as_is.year.energy_J if as_is.year else None)
    words = ("less", f"no meaningful difference, {_within(options)}", "more")
    found = _by_difference(options, "energy", words, lambda p: percent(difference(as_is, p, "energy").ratio))
    return Matter(f"Electricity of a year, against {today} with {as_is.name} as it is", found)


def _within(options: Sequence[Prospect]) -> str:
    band = model_band(evidence=best_evidence([option.entry for option in options]))["cop"].value
    return f"within the band of the model, ±{percent_text(band).replace('%', NBSP + '%')} or its own wider one"


def _alike(options: Sequence[Prospect], quantity: str) -> Matter:
    """Return which options the model cannot tell apart among themselves."""
    apart = [option for option in options if option.deed != KEPT]
    found = [listed([option.name for option in group], "and") for group in groups(apart, quantity)]
    about = {"energy": "Electricity of a year", "emissions": "Warming"}[quantity]
    return Matter(f"{about}, options among themselves", (("no meaningful difference", tuple(found)),) if found else ())


def _unmet(options: tuple[Prospect, ...], units: UnitSystem) -> Matter:
    """Return which options leave some of the load unmet: less electricity then buys less."""
    meets, lacks = [], []
    for option in options:
        if option.year is None:
            continue
        if option.year.unmet_h > 0.0:
            hours, energy = format_number(option.year.unmet_h, 0), energy_text(units, option.year.unmet_J)
            beside = capacity_words(option)
            lacks.append(f"{option.name} {hours}{NBSP}h, {energy}" + (f" ({beside})" if beside else ""))
        else:
            meets.append(option.name)
    words = "some of it unmet, so that part of a lower electricity is load not met"
    found = tuple((text, tuple(names)) for text, names in (("met in every hour", meets), (words, lacks)) if names)
    return Matter("Load of the year", found if lacks else ())


def capacity_words(option: Prospect) -> str:
    """Return what the checks say of an option's capacity at the design point, beside its unmet load of a year.

    Args:
        option: The option.
    Returns: The words; empty where they say nothing.
    """
    found = next((item for item in option.entry.findings if item.code == CAPACITY), None)
    if found is None or option.deed == DEEDS["replace"]:
        return ""
    verdict = "stopped for it" if found.level == Level.STOP else "to be modified for it"
    return f"at the design point too it delivers less than needed, and is {verdict}"


def meter_words(comparison: Comparison, units: UnitSystem) -> str:
    """Return the computed year of today's plant against the meter in words; empty if the case gives none.

    Args:
        comparison: A result with its remaining life.
        units: The reader's units.
    """
    year, asked = comparison.case.year, life_of_result(comparison)
    run = asked.years.get(comparison.case.plant.refrigerant)
    if year is None or year.metered_J is None:
        return ""
    metered = energy_text(units, year.metered_J)
    if run is None:
        return (
            f"The meter says {metered} a year; the year of today's plant is not computed, so it cannot be held to it."
        )
    ratio = run.energy_J / year.metered_J
    text = f"Computed for today's plant {energy_text(units, run.energy_J)}, metered {metered}: ratio {ratio:.2f}."
    if abs(ratio - 1.0) > FAR_FROM_METER:
        limit = f"{100 * FAR_FROM_METER:.0f}{NBSP}%"
        return (
            f"{text} They are more than {limit} apart: find out what the meter counts, and correct load and "
            "auxiliaries, before the sums are relied on. Nothing is scaled to the meter."
        )
    return f"{text} A check of the model, within {100 * FAR_FROM_METER:.0f}{NBSP}%; nothing is scaled to it."


# Emissions


def tonnes(mass_kg: float | None) -> str:
    """Return a warming in tonnes of CO2e, or unknown.

    Args:
        mass_kg: Warming. [kg CO2e]
    """
    return UNKNOWN if mass_kg is None else f"{rounded_text(mass_kg / KG_PER_T)}{NBSP}t{NBSP}CO2e"


def _emissions(options: tuple[Prospect, ...]) -> Matter:
    as_is = options[0]
    warming = as_is.account.tewi
    if all(option.account.tewi.total_kg is None for option in options):
        return Matter("Warming", ())
    today = tonnes(None if warming.total_kg is None else float(warming.total_kg))
    words = ("less", f"no meaningful difference, {_within(options)} in the electricity", "more")
    found = _by_difference(options, "emissions", words, lambda p: percent(difference(as_is, p, "emissions").ratio))
    return Matter(f"Warming over {life_text(warming)} (TEWI), against {today} with {as_is.name} as it is", found)


# Money


Groups = tuple[tuple[str, tuple[str, ...]], ...]


def _money(comparison: Comparison, options: tuple[Prospect, ...]) -> Iterator[Matter]:
    as_is = options[0]
    yield Matter(
        f"Net present value over {life_text(as_is.account.tewi)}, {discounting_words(comparison)}, first cost paid, "
        f"against {as_is.name} as it is; {_middle_words(comparison)}",
        _present_values(comparison, options),
    )
    yield Matter(
        f"Simple payback, first cost over annual saving; {_middle_words(comparison)}", _paybacks(comparison, options)
    )
    yield Matter(
        "Residual value of a new plant at the end of the remaining life, counted in its net present value",
        tuple(_residuals(comparison, options)),
    )


def _middle_words(comparison: Comparison) -> str:
    """Return what the leading figures are."""
    has_samples = bool(life_of_result(comparison).certainty)
    return "median (P10 to P90)" if has_samples else "base values, no Monte Carlo samples"


def discounting_words(comparison: Comparison) -> str:
    """Return at which rate money is discounted."""
    rate = comparison.case.money.discount_rate if comparison.case.money else 0.0
    return f"discounted at {100.0 * rate:g}{NBSP}%" if rate else "not discounted"


def _sorted(found: dict[str, list[str]]) -> Groups:
    return tuple((text, tuple(names)) for text, names in found.items() if names)


def _present_values(comparison: Comparison, options: tuple[Prospect, ...]) -> Groups:
    saves, near, costs = "saves money", f"no meaningful difference, {_within(options)} in the electricity", "costs more"
    found: dict[str, list[str]] = {saves: [], near: [], costs: []}
    for option in options[1:]:
        lead = headline(option, "npv")
        if lead is None:
            heading, name = incomplete_words(comparison, option)
            found.setdefault(heading, []).append(name)
            continue
        where = near if is_alike(options[0], option, "npv") else saves if lead.middle > 0.0 else costs
        found[where].append(f"{option.name} {_with_band(comparison, lead, signed=True)}")
    return _sorted(found)


def _with_band(comparison: Comparison, lead: Headline, signed: bool = False) -> str:
    band = "" if lead.band is None else " ({} to {})".format(*(rounded_text(end, signed) for end in lead.band))
    return f"{money_text(comparison, lead.middle, signed)}{band}"


def incomplete_words(comparison: Comparison, option: Prospect) -> tuple[str, str]:
    """Return why the net present value of an option is not said: the state with what it needs, and the option.

    Args:
        comparison: An assessed result with its remaining life.
        option: An option whose comparison is incomplete or unknown.
    """
    found, needs = compared(option, "npv"), missing_words(option, "npv")
    if found.state is not ComparisonState.INCOMPLETE:
        return f"{UNKNOWN}, needs {needs}", option.name
    known = money_text(comparison, found.of_known, signed=True)
    heading = f"{INCOMPLETE} without {needs}: {INCOMPLETE_WORDS}"
    return heading, f"{option.name} {known} on the items known for both"


def _paybacks(comparison: Comparison, options: tuple[Prospect, ...]) -> Groups:
    within = PAYBACK_WORDS[PaybackState.WITHIN]
    found: dict[str, list[str]] = {text: [] for text in (within, within + INSIDE_BAND, *PAYBACK_WORDS.values())}
    for option in options[1:]:
        heading, name = _payback_of_median(comparison, options[0], option)
        found.setdefault(heading, []).append(name)
    return _sorted(found)


INSIDE_BAND = ", but the saving is within the band of the model"


def _payback_of_median(comparison: Comparison, as_is: Prospect, option: Prospect) -> tuple[str, str]:
    """Return the state of an option's payback in words, and the option with its years."""
    drawn = payback_quantiles(option)
    found = payback(option) if drawn is None else drawn[1]
    if found.state is PaybackState.UNKNOWN and found.years is None:
        is_short = compared(option, "npv").state is ComparisonState.INCOMPLETE
        return INCOMPLETE if is_short else UNKNOWN, option.name
    is_near = found.state is PaybackState.WITHIN and is_alike(as_is, option, "saving")
    words = NO_LIFE if found.state is PaybackState.UNKNOWN else PAYBACK_WORDS[found.state]
    return words + (INSIDE_BAND if is_near else ""), f"{option.name}{_payback_years(option, found, drawn)}"


def _payback_years(option: Prospect, found: Payback, drawn: tuple[Payback, Payback, Payback] | None) -> str:
    """Return the years of a payback with its band and the probability of paying back; nothing of one that is none."""
    years = f" {years_text(found)} years" if found.years is not None else ""
    if drawn is None or found.state is PaybackState.NONE_NEEDED:
        return years
    chance = probability(option, "pays_back")
    parts = [f"{years_text(drawn[0])} to {years_text(drawn[2])}"]
    parts += [f"{share(chance)} probability of paying back"] if chance is not None else []
    return f"{years} ({', '.join(parts)})"


def _residuals(comparison: Comparison, options: Sequence[Prospect]) -> Iterator[tuple[str, tuple[str, ...]]]:
    """Yield how residual values come about, each with its options."""
    found: dict[str, list[str]] = {}
    for option in options:
        appraisal, first = option.account.appraisal, option.account.first_cost
        if appraisal is None or appraisal.residual is None or first is None or first.plant_life_years is None:
            continue
        given = option.account.plan.option.residual_value if option.account.plan.option else None
        life = f"{float(first.plant_life_years):g} years"
        text = "as the case gives it" if given is not None else f"by straight line over its life of {life}"
        found.setdefault(text, []).append(f"{option.name} {money_text(comparison, float(appraisal.residual))}")
    yield from ((text, tuple(names)) for text, names in found.items())


# How sure


def _certainty(comparison: Comparison, options: tuple[Prospect, ...]) -> Matter:
    draws, found = life_of_result(comparison).draws, []
    for text, name in (
        ("carries the cooling needed at the design point", "carries"),
        ("uses less electricity in a year than the plant as it is", "uses_less"),
        ("costs less over the remaining life", "cheaper"),
        ("pays back within the remaining life", "pays_back"),
        ("warms less over the remaining life", "cleaner"),
    ):
        names = tuple(
            f"{option.name} {share(probability(option, name))}"
            for option in options[1:]
            if probability(option, name) is not None
        )
        if names:
            found.append((text, names))
    return Matter(f"Share of {draws} draws of the inputs in which an option", tuple(found))


def told_result(option: Prospect) -> str | None:
    """Return the result of an option whose strongest inputs are told: money if known, else emissions, else energy.

    Args:
        option: The option.
    """
    swings = option.certainty.swings if option.certainty else {}
    return next((name for name in TOLD if swings.get(name)), None)


def result_text(comparison: Comparison, units: UnitSystem, name: str, value: float, signed: bool = True) -> str:
    """Return a value of a result whose inputs are told, with its unit.

    Args:
        comparison: The result.
        units: The reader's units.
        name: A key of `TOLD`. [-]
        value: The value. [SI, t CO2e or currency]
        signed: Whether a plus sign stands before it. [-]
    """
    if name in RATIOS:
        return percent(value - 1.0, 1)
    if name == "energy_saving_J":
        return energy_text(units, value, signed)
    if name == "avoided_t":
        return f"{rounded_text(value, signed)}{NBSP}t{NBSP}CO2e"
    return money_text(comparison, value, signed)


def swing_words(comparison: Comparison, units: UnitSystem) -> str:
    """Return in words which inputs move the answer most; empty without draws.

    Args:
        comparison: An assessed result with its remaining life.
        units: The reader's units.
    """
    option = leading(comparison)
    name = told_result(option) if option else None
    if option is None or name is None or option.certainty is None:
        return ""

    def reach(swing: Swing) -> str:
        ends = sorted((swing.at_low, swing.at_high))
        low, high = (result_text(comparison, units, name, value) for value in ends)
        return f"{input_words(swing)} ({low} to {high})"

    strongest = option.certainty.swings[name][:STRONGEST]
    base = result_text(comparison, units, name, strongest[0].base)
    return (
        f"What moves the answer most: for {option.name}, {TOLD[name]} ({base} with every input at its base), it is "
        f"{listed([reach(swing) for swing in strongest], 'and')}, each moved alone between its limits."
    )


def input_words(swing: Swing) -> str:
    """Return an input as running text: without its explanation, and with a small first letter."""
    if swing.input.origin == "model":
        return f"the model's {re.sub(r'R-(?=[0-9])', 'R', swing.input.name.removeprefix('Model: '))}"
    short = swing.input.name.partition(";")[0].partition(":")[0]
    return short if short[:2].isupper() else short[:1].lower() + short[1:]


# Which comes first


def ranking_words(comparison: Comparison, found: Ranked) -> tuple[str, ...]:
    """Return which option comes first under even weights, how stable that is, and what would change it.

    Args:
        comparison: An assessed result.
        found: The options in order.
    """
    if found.stability is None:
        return ("No option can be ranked: each is stopped or not computed, or no criterion is known.",)
    names = {entry.refrigerant.designation: option_name(entry) for entry in comparison.entries}
    left = left_words(comparison)
    if len(found.scores.names) == 1:
        only = f"Only {names[found.scores.names[0]]} can be ranked."
        return (only, *left, *ban_words(comparison, found.scores.names), *_gates(found))
    first = [name for name, place in zip(found.order.names, found.order.places, strict=True) if place == 1]
    tie = ", no meaningful difference among them" if len(first) > 1 else ""
    told = listed([names[name] for name in first], "and")
    sentences = [f"With even weights {told} come{'' if tie else 's'} first{tie}."]
    sentences += [*ban_words(comparison, first), *left]
    sentences.append(stability_words(found.scores, found.stability))
    if found.flip is not None:
        sentences.append(found.flip.words)
    else:
        sentences.append("No change of a single weight puts another option first by more than the band.")
    return (*sentences, *_gates(found))


def ban_words(comparison: Comparison, first: Sequence[str]) -> tuple[str, ...]:
    """Return what law ends within the remaining life for the options that come first, so that none does in silence.

    Args:
        comparison: An assessed result.
        first: Designations of the options that come first. [-]
    """
    return tuple(
        f"But {option_name(entry)}: {finding.title[:1].lower()}{finding.title[1:]}. {finding.fact}"
        for entry in comparison.entries
        if entry.refrigerant.designation in first
        for finding in entry.findings
        if finding.code == "law-ban"
    )


def _gates(found: Ranked) -> tuple[str, ...]:
    """Return which options are not ranked, and the gate of each."""
    by_gate: dict[str, list[str]] = {}
    for name, why in found.scores.not_ranked.items():
        by_gate.setdefault(why, []).append(name)
    gates = "; ".join(f"{listed(names, 'and')} ({why})" for why, names in by_gate.items())
    return (f"Not ranked, whatever the weights: {gates}.",) if gates else ()


# Page one


def costs_words(comparison: Comparison, units: UnitSystem) -> str:
    """Return in a few sentences what the options cost and save, for page one; empty without the remaining life.

    Args:
        comparison: An assessed result, with or without its remaining life.
        units: The reader's units.
    """
    if comparison.life is None:
        return ""
    as_is, *others = prospects(comparison)
    named = _named(comparison, others)
    life = life_of_result(comparison)
    parts = [f"Medians (P10 to P90) of {life.draws} Monte Carlo samples."] if life.certainty and named else []
    parts += [_cost_words(comparison, units, as_is, option) for option in named]
    more = len(others) - len(named)
    if more:
        parts.append(f"{more} more option{'s' if more > 1 else ''} in the sections on the remaining life.")
    return " ".join(parts)


MOST_ON_PAGE_ONE = 3


def _named(comparison: Comparison, options: Sequence[Prospect]) -> list[Prospect]:
    """Return the options that page one tells: those of the case, else the first that no check stops."""
    report = comparison.case.report
    chosen = [name for name in ((report.recommended, report.fallback) if report else ()) if name]
    if chosen:
        named = [option for option in options if option.entry.refrigerant.designation in chosen]
        return sorted(named, key=lambda option: chosen.index(option.entry.refrigerant.designation))
    open_ = [option for option in options if option.entry.can_be_chosen]
    return (open_ or list(options))[:MOST_ON_PAGE_ONE]


def _cost_words(comparison: Comparison, units: UnitSystem, as_is: Prospect, option: Prospect) -> str:
    year, warming = difference(as_is, option, "energy"), difference(as_is, option, "emissions")
    parts = [_year_words(year)]
    if comparison.case.money is not None:
        parts = [f"first cost {_first_cost_words(comparison, option)}", *parts, *_pays_words(comparison, as_is, option)]
    if warming.ratio is not None:
        near = ": no meaningful difference" if warming.is_alike else ""
        parts.append(f"warming {percent(warming.ratio)}{near}")
    return f"{option.name}: {'; '.join(parts)}."


def _pays_words(comparison: Comparison, as_is: Prospect, option: Prospect) -> Iterator[str]:
    """Yield payback and net present value for page one; of an incomplete comparison what it needs."""
    lead = headline(option, "npv")
    drawn = payback_quantiles(option)
    found = payback(option) if drawn is None else drawn[1]
    if found.state is PaybackState.UNKNOWN and found.years is None:
        yield f"payback and net present value {incomplete_words(comparison, option)[0]}"
        return
    near = INSIDE_BAND if found.state is PaybackState.WITHIN and is_alike(as_is, option, "saving") else ""
    if found.years is None:
        yield f"{PAYBACK_WORDS[found.state]}{_payback_years(option, found, drawn)}"
    else:
        beyond = f", {PAYBACK_WORDS[found.state]}" if found.state is PaybackState.BEYOND else ""
        yield f"payback{_payback_years(option, found, drawn)}{beyond}{near}"
    if lead is not None:
        yield f"net present value {_with_band(comparison, lead, signed=True)}"


def _year_words(change: Difference) -> str:
    ratio, is_near = change.ratio, change.is_alike
    if change.one_sided:
        return f"electricity {change.missing}"
    if ratio is None:
        return f"electricity unknown ({change.missing})"
    more = "less" if ratio < 0.0 else "more"
    if ratio == 0.0:
        return "the same electricity"
    amount = f"{format_number(abs(100.0 * ratio), 0)}{NBSP}%"
    return f"{amount} {more} electricity{': no meaningful difference' if is_near else ''}"


def _first_cost_words(comparison: Comparison, option: Prospect) -> str:
    first, lead = option.account.first_cost, headline(option, "first_cost")
    if lead is not None:
        return _with_band(comparison, lead)
    if first is None or first.at_least is None:
        return f"unknown (needs {missing_items_words(first.missing) if first else NO_MONEY})"
    needs = missing_items_words(first.missing)
    return f"at least {money_text(comparison, float(first.at_least))} without {needs}"


def per_tonne_text(comparison: Comparison, option: Prospect) -> str:
    """Return the cost of each tonne of CO2e avoided in words.

    Args:
        comparison: The result.
        option: The option.
    """
    appraisal = option.account.appraisal
    if appraisal is None:
        return UNKNOWN
    return abatement_words(abatement_of(appraisal), appraisal, lambda amount: money_text(comparison, amount))
