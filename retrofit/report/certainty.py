"""How sure the numbers are, in the report: probabilities, quantiles, what moves them, and how the draws are made."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from retrofit.checks.money_words import INCOMPLETE
from retrofit.checks.outlook import KG_PER_T, TOLD, currency, result_text, rounded_text
from retrofit.checks.prospects import Prospect, compared, life_of_result, probability, quantile, ranked
from retrofit.figures.tornado import limits_text
from retrofit.report.judging import spelled
from retrofit.report.plain import plain
from retrofit.report.prospect_rows import Options, missing_of, shown_name
from retrofit.report.table import MOST_COLUMNS, Cell, Group, Row, Table
from retrofit.study import Comparison
from retrofit.study.life import Life
from retrofit.study.ranking import MEANING, SCALE
from retrofit.study.sums import ComparisonState
from retrofit.study.uncertain import Uncertain
from retrofit.units import MISSING, UnitSystem, format_number, listed

ORIGINS = {"case": "the case", "assumed": "assumed", "model": "the model"}
PROBABILITIES = (
    ("carries the cooling needed", "carries"),
    ("uses less electricity in a year", "uses_less"),
    ("costs less over the remaining life, discounted", "cheaper"),
    ("pays back within the remaining life", "pays_back"),
    ("warms less over the remaining life", "cleaner"),
)
RESTS_ON = {"uses_less": "energy", "cheaper": "npv", "pays_back": "npv", "cleaner": "emissions"}
DESIGN, YEARS, MONEY, LIFE = "Design point", "Electricity and warming", "Money", "Money over the remaining life"
GUIDE = (
    "as the Guide to the expression of uncertainty in measurement (JCGM 100:2008, 4.3.7) takes where only the limits "
    "are known"
)


def certainty_table(comparison: Comparison, options: Options) -> Table | None:
    """Return the table of probabilities; None without draws.

    Args:
        comparison: A result with its remaining life.
        options: The options.
    """
    life = life_of_result(comparison)
    if not life.certainty:
        return None
    rows = tuple(
        Row(label, "%", tuple(_share(options, option, name) for option in options.all)) for label, name in PROBABILITIES
    )
    groups = (Group("shares", f"Share of the {life.draws} draws in which it", rows),)
    basis = (
        "Basis: all inputs that may be off drawn together, every option with the same draws; against the plant as it "
        "is. The cooling needed is that of the design point, on the existing plant. "
        f"{_assumed_limits(life)}"
    )
    return Table("certainty", "How sure it is", basis, options.names, groups, options.notes.listed())


def _assumed_limits(life: Life) -> str:
    """Return in a sentence how many inputs have limits that the case does not give."""
    count = sum(item.origin == "assumed" for item in life.inputs)
    if not count:
        return "The case or the model gives the limits of every input."
    return f"Of {len(life.inputs)} inputs {count} have assumed limits, for the case gives none."


def _share(options: Options, option: Prospect, name: str) -> Cell:
    value = probability(option, name)
    is_itself = option.entry is options.all[0].entry and name == "uses_less"
    if is_itself or (option is options.all[0] and name != "carries"):
        return Cell(MISSING)
    if value is None and name == "carries" and option.account.plan.family == "replace" and option.certainty:
        mark = options.notes.mark(shown_name(option), "a new plant is sized to carry what is needed")
        return Cell("sized for it", is_number=False, marks=(mark,))
    rests_on = RESTS_ON.get(name, "energy")
    if value is None and rests_on == "npv" and compared(option, "npv").state is ComparisonState.INCOMPLETE:
        mark = options.notes.mark(shown_name(option), f"{INCOMPLETE} without {missing_of(rests_on)(option)}")
        return Cell(INCOMPLETE, is_number=False, marks=(mark,))
    if value is None:
        return options.unknown(option, missing_of(rests_on)(option))
    return Cell(chance(value))


def chance(value: float) -> str:
    """Return a probability in per cent for a cell, 0 and 100 for never and always alone.

    Args:
        value: The probability. [-]
    """
    whole = round(100.0 * value)
    return "< 1" if whole == 0 and value > 0.0 else "> 99" if whole == 100 and value < 1.0 else str(whole)


def spans(comparison: Comparison, options: Options, units: UnitSystem) -> Table | None:
    """Return the quantiles of every result that a reader may want; None without draws.

    Args:
        comparison: A result with its remaining life.
        options: The options.
        units: The reader's units.
    """
    known = [result for result in _results(comparison, units) if any(quantile(o, result.name) for o in options.all)]
    if not known:
        return None
    groups = _side_by_side(options, known) if len(options.names) > MOST_COLUMNS else _one_by_one(options, known)
    for option in options.all:
        if option.entry.is_new_plant and option.entry.plant_reason:
            options.notes.mark(shown_name(option), f"at the design point: {option.entry.plant_reason}")
    caption = "What 10, 50 and 90 per cent of the draws stay below"
    basis = "Basis: the same draws for every option; design point, existing plant, where no year is named."
    return Table("spans", caption, basis, options.names, groups, options.notes.listed())


Number = Callable[[float], float]


@dataclass(frozen=True)
class Result:
    """A result that a reader may want the range of: name, heading, unit, conversion, and the table it stands in."""

    name: str
    label: str
    unit: str
    to_number: Number
    group: str


def _one_by_one(options: Options, results: list[Result]) -> tuple[Group, ...]:
    """Return a group for each result, a row for each quantile."""
    return tuple(
        Group(
            result.name.replace("_", "-").lower(),
            result.label,
            tuple(
                options.quantiles(f"{percent} % of draws below", result.unit, result.name, place, result.to_number)
                for place, percent in enumerate((10, 50, 90))
            ),
        )
        for result in results
    )


def _side_by_side(options: Options, results: list[Result]) -> tuple[Group, ...]:
    """Return a few groups with one row for each result, its three quantiles in a cell."""
    found: dict[str, list[Row]] = {}
    for result in results:
        row = options.three_quantiles(result.label, result.unit, result.name, result.to_number)
        found.setdefault(result.group, []).append(row)
    return tuple(
        Group(name.replace(" ", "-").lower(), f"{name}: 10, 50 and 90 % of the draws stay below", tuple(rows))
        for name, rows in found.items()
    )


def _results(comparison: Comparison, units: UnitSystem) -> tuple[Result, ...]:
    """Return the results whose ranges are told."""
    money = currency(comparison)

    def shown(name: str, label: str, kind: str, group: str) -> Result:
        return Result(name, label, units.label(kind), lambda value: float(units.number(kind, value)), group)

    def as_is(name: str, label: str, unit: str, group: str, per: float = 1.0) -> Result:
        return Result(name, label, unit, lambda value: value / per, group)

    return (
        shown("cooling_W", "Cooling at full", "cooling", DESIGN),
        as_is("cop", "COP at today's cooling", "", DESIGN),
        shown("T_discharge_K", "Discharge temperature at full", "temperature", DESIGN),
        shown("energy_J", "Electricity of a year", "energy", YEARS),
        shown("energy_saving_J", "Electricity saved in a year", "energy", YEARS),
        as_is("tewi_kg", "Warming over the remaining life", "t CO2e", YEARS, KG_PER_T),
        as_is("avoided_t", "CO2e avoided over the remaining life", "t CO2e", YEARS),
        as_is("first_cost", "First cost", money, MONEY),
        as_is("yearly_saving", "Annual saving", money, MONEY),
        as_is("payback_years", "Simple payback", "years", MONEY),
        as_is("life_cost", "Life cost", money, LIFE),
        as_is("npv", "Net present value", money, LIFE),
        as_is("cost_per_t", "Cost of a tonne of CO2e avoided", f"{money}/t", LIFE),
    )


@dataclass(frozen=True)
class Drawn:
    """An input that may be off: key, what it is, value and limits as texts, origin, and why."""

    key: str
    name: str
    value: str
    low: str
    high: str
    unit: str
    shape: str
    origin: str
    why: str


def drawn_inputs(comparison: Comparison, units: UnitSystem) -> tuple[Drawn, ...]:
    """Return every input that may be off with its limits and where they come from.

    Args:
        comparison: A result with its remaining life.
        units: The reader's units.
    """
    money = currency(comparison)
    return tuple(_drawn(item, units, money) for item in life_of_result(comparison).inputs)


def _drawn(item: Uncertain, units: UnitSystem, money: str) -> Drawn:
    low, base, high = item.spread
    if item.kind:
        decimals = 1 if item.kind == "fraction" else None
        texts = [units.text(item.kind, value, decimals=decimals) for value in (base, low, high)]
        unit = units.label(item.kind)
    else:
        texts, unit = [rounded_text(value) for value in (base, low, high)], money
    shape = "triangular" if item.is_triangular else "rectangular"
    base_text, low_text, high_text = texts
    name, origin = plain(spelled(item.name)), ORIGINS[item.origin]
    return Drawn(item.key, name, base_text, low_text, high_text, unit, shape, origin, spelled(item.why))


@dataclass(frozen=True)
class Moved:
    """What moves a result of an option most: each input with its limits and the result at both."""

    option: str
    result: str
    base: str
    inputs: tuple[tuple[str, str, str, str], ...]


MOST_TOLD, MOST_RESULTS = 5, 2


def moved(comparison: Comparison, options: Options, units: UnitSystem) -> tuple[Moved, ...]:
    """Return what moves the results of every option most.

    Args:
        comparison: A result with its remaining life.
        options: The options.
        units: The reader's units.
    """
    found, money = [], currency(comparison)
    for option in options.all[1:]:
        known = option.certainty.swings if option.certainty else {}
        for name in [name for name in TOLD if known.get(name)][:MOST_RESULTS]:
            swings = known[name][:MOST_TOLD]
            rows = tuple(
                (
                    plain(spelled(swing.input.name)),
                    limits_text(swing, units, money),
                    result_text(comparison, units, name, swing.at_low),
                    result_text(comparison, units, name, swing.at_high),
                )
                for swing in swings
            )
            base = result_text(comparison, units, name, swings[0].base)
            found.append(Moved(shown_name(option), TOLD[name], base, rows))
    return tuple(found)


def method(comparison: Comparison) -> tuple[str, ...]:
    """Return how the draws are made, paragraph by paragraph.

    Args:
        comparison: A result with its remaining life.
    """
    life = life_of_result(comparison)
    if not life.certainty:
        return ("No draws were made: only base values stand here, and nothing is said of how sure they are.",)
    return (
        "A draw is one set of values of all inputs that may be off, each taken at random within its limits, and the "
        f"whole plant computed with it: design point, year, emissions and money. {life.draws} draws were made with "
        f"seed {life.seed}; the same seed gives the same numbers. They are a Latin hypercube: of each input every "
        f"one of {life.draws} equal shares of its distribution is taken once. Every option meets the same "
        "draws, so that what they have in common cancels where they are compared.",
        "An input with a plus or minus lies anywhere within it, nowhere more likely than elsewhere: a rectangular "
        f"distribution, {GUIDE}. One with low, base and high is triangular about its base. Inputs are taken as "
        "independent of each other. The limits themselves are estimates: measure what moves the answer most.",
        "What the model may be wrong by is an input too: a factor on capacity and on COP of each candidate against "
        "today's refrigerant, within the band of the model. The year of a draw comes from a map of the plant made for "
        f"that draw, brought to the year balanced hour by hour at the base. {_solved(life)}",
    )


def _solved(life: Life) -> str:
    """Return in a sentence which share of the draws has a solution."""
    shares = {name: found.solved for name, found in life.certainty.items()}
    if min(shares.values()) == 1.0:
        return "Every draw has a solution."
    if len(set(shares.values())) == 1:
        told = f"{format_number(100.0 * min(shares.values()), 1)} % of the draws, with every option"
    else:
        told = f"of {listed([f'{name} {format_number(100.0 * share, 1)} %' for name, share in shares.items()], 'and')}"
    return f"Solved were {told}; a draw without a solution is in none of the numbers."


@dataclass(frozen=True)
class Weights:
    """The ranking under even weights: rows of option, place, score, shares first and first alone; what it rests on."""

    rows: tuple[tuple[str, str, str, str, str, str], ...]
    criteria: tuple[tuple[str, str], ...]
    left_out: tuple[str, ...]
    scale: str


def weights(comparison: Comparison) -> Weights:
    """Return which option comes first by even weights, what it rests on, and what a gate stops.

    Args:
        comparison: An assessed result with its remaining life.
    """
    found, names = ranked(comparison), _display_names(comparison)
    order, stability = found.order, found.stability
    rows = []
    for name, place, total in zip(order.names, order.places, order.totals, strict=True):
        at = found.scores.names.index(name)
        first, alone = (stability.first[at], stability.alone[at]) if stability else (0.0, 0.0)
        missing = ", ".join(found.scores.unknown.get(name, ())) or MISSING
        numbers = (format_number(total, 2), format_number(100.0 * first, 0), format_number(100.0 * alone, 0))
        rows.append((names[name], str(place), *numbers, missing))
    return Weights(
        tuple(rows) if stability else (),
        tuple(zip(found.scores.criteria, found.scores.measures, strict=True)),
        found.scores.left_out,
        f"{SCALE[:1].upper()}{SCALE[1:]}. An equal place means {MEANING}.",
    )


def _display_names(comparison: Comparison) -> dict[str, str]:
    return {entry.refrigerant.designation: entry.refrigerant.display_name for entry in comparison.entries}
