"""The money of every option in the report: first cost item by item, what a year costs, and whether it pays."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from retrofit.checks.money_words import (
    AT_LEAST_WORDS,
    INCOMPLETE,
    INCOMPLETE_WORDS,
    item_name,
    item_names,
    missing_items_words,
    payback_words,
    sum_text,
    years_text,
)
from retrofit.checks.outlook import currency, discounting_words, per_tonne_text, rounded_text
from retrofit.checks.prospects import (
    Prospect,
    compared,
    first_cost_range,
    is_alike,
    life_of_result,
    missing_words,
    payback,
    payback_quantiles,
    sum_of_option,
)
from retrofit.report.certainty import chance
from retrofit.report.prospect_rows import Options, Read, shown_name
from retrofit.report.rows import near
from retrofit.report.table import Cell, Group, Row, Table
from retrofit.study import Comparison
from retrofit.study.money import PARTS, AbatementState, PaybackState, abatement_of
from retrofit.study.spread import at
from retrofit.study.sums import ComparisonState, SumState
from retrofit.units import MISSING, format_number

NBSP = "\N{NO-BREAK SPACE}"

BAND = f"P10{NBSP}·{NBSP}P50{NBSP}·{NBSP}P90"


@dataclass(frozen=True)
class Costs:
    """First cost of an option item by item: name, low, base, high and where it comes from; and what is not counted."""

    name: str
    items: tuple[tuple[str, str, str, str, str], ...]
    total: tuple[str, str, str]
    missing: str
    not_counted: tuple[str, ...]


def money_table(comparison: Comparison, options: Options) -> Table | None:
    """Return the table of the money; None without money in the case.

    Args:
        comparison: A result with its remaining life.
        options: The options.
    """
    if comparison.case.money is None:
        return None
    unit = currency(comparison)
    groups = (
        Group("yearly", "Each year", _yearly(options, unit)),
        Group("once", "Paid once, and paid back", (*_first(options, unit), *_back(comparison, options))),
        Group("life", "Life cost and net present value", _life(comparison, options, unit)),
    )
    basis = (
        f"Basis: {unit} as the case gives them, prices as today over the remaining life. Annual saving and net present "
        "value are against the plant as it is; above 0 an option saves money. A sum without one of its items is at "
        f"least (≥) what is known of it; where an item is known for only one of two options they are {INCOMPLETE}, and "
        "nothing is said of which is cheaper."
    )
    return Table("money", "What it costs and saves", basis, options.names, groups, options.notes.listed())


def _sum_cell(options: Options, option: Prospect, name: str, note: str = "") -> Cell:
    """Return a sum: its number, the sign for at least where an item is missing, or unknown."""
    found = sum_of_option(option, name)
    if found is None or found.known is None:
        return options.unknown(option, missing_items_words(found.missing) if found else missing_words(option, "npv"))
    is_short = found.state is SumState.AT_LEAST
    notes = [f"{AT_LEAST_WORDS}: {missing_items_words(found.missing)}"] if is_short else []
    notes += [note] if note else []
    marks = tuple(options.notes.mark(shown_name(option), text) for text in notes)
    return Cell(sum_text(found.state, rounded_text(float(found.known))), marks=marks)


def _first(options: Options, unit: str) -> tuple[Row, ...]:
    def base(option: Prospect) -> Cell:
        first = option.account.first_cost
        codes = first.not_counted if first else ()
        note = f"no sum given for any option, so not counted: {_listed(codes)}" if codes else ""
        return _sum_cell(options, option, "first_cost", note)

    def spread(option: Prospect) -> Cell:
        found, first = first_cost_range(option), option.account.first_cost
        if found is None or first is None or found[0] >= found[2]:
            return Cell(MISSING)
        return Cell(sum_text(first.state, f"{rounded_text(found[0])} to {rounded_text(found[2])}"))

    return (
        Row("First cost", unit, tuple(base(option) for option in options.all)),
        Row("Every item low to every high", unit, tuple(spread(option) for option in options.all)),
        options.three_quantiles(f"First cost: {BAND}", unit, "first_cost", float),
    )


def _listed(codes: tuple[str, ...]) -> str:
    return ", ".join(item_name(code) for code in codes)


def _yearly(options: Options, unit: str) -> tuple[Row, ...]:
    rows = []
    for code, name in PARTS.items():
        if any(_part(option, code) is not None for option in options.all):
            label = f"{name[:1].upper()}{name[1:]}"
            rows.append(options.row(label, unit, _reading(code), rounded_text, _part_missing(code)))
    as_is = options.all[0]

    def saving(option: Prospect) -> Cell:
        found, amount = option.account.saving, compared(option, "saving").amount
        if option is as_is:
            return Cell(MISSING)
        if found is None or amount is None:
            return _not_compared(options, option, "saving")
        text = rounded_text(amount, signed=True)
        left_out = f"not counted, since it is known for neither: {item_names(found.not_counted)}"
        marks = (options.notes.mark(shown_name(option), left_out),) if found.not_counted else ()
        return Cell(near(text) if is_alike(as_is, option, "saving") else text, marks=marks)

    return (
        *rows,
        Row("Annual cost", unit, tuple(_sum_cell(options, option, "yearly_cost") for option in options.all)),
        Row("Annual saving against the plant as it is", unit, tuple(saving(option) for option in options.all)),
        options.three_quantiles(f"Annual saving: {BAND}", unit, "yearly_saving", float, signed=True),
    )


def _not_compared(options: Options, option: Prospect, quantity: str) -> Cell:
    """Return a cell of what is not compared: incomplete or unknown, with what it needs in a note."""
    found, needs = compared(option, quantity), missing_words(option, quantity)
    if found.state is not ComparisonState.INCOMPLETE or found.of_known is None:
        return options.unknown(option, needs)
    name = "annual saving" if quantity == "saving" else "net present value"
    text = f"{INCOMPLETE}: {INCOMPLETE_WORDS}. Needs {needs}. The items known for both come to"
    mark = options.notes.mark(shown_name(option), f"{text} {rounded_text(found.of_known, signed=True)} ({name})")
    return Cell(INCOMPLETE, is_number=False, marks=(mark,))


def _part(option: Prospect, code: str) -> float | None:
    found = option.account.yearly_cost.parts[code] if option.account.yearly_cost else None
    return None if found is None else float(found)


def _reading(code: str) -> Read:
    return lambda option: _part(option, code)


def _part_missing(code: str) -> Callable[[Prospect], str]:
    def why(option: Prospect) -> str:
        found = option.account.yearly_cost.missing.get(code) if option.account.yearly_cost else None
        return missing_items_words((found,)) if found else ""

    return why


def _back(comparison: Comparison, options: Options) -> tuple[Row, ...]:
    as_is = options.all[0]
    base = Row("Simple payback", "years", tuple(_payback(options, option) for option in options.all))
    if not life_of_result(comparison).certainty:
        return (base,)
    return (
        base,
        Row(f"Payback: {BAND}", "years", tuple(_paybacks(option, as_is) for option in options.all)),
        Row("Probability of paying back", "%", tuple(_pays_back(option, as_is) for option in options.all)),
    )


def _life(comparison: Comparison, options: Options, unit: str) -> tuple[Row, ...]:
    as_is, how = options.all[0], discounting_words(comparison)

    def npv(option: Prospect) -> Cell:
        amount = compared(option, "npv").amount
        if option is as_is:
            return Cell(MISSING)
        if amount is None:
            return _not_compared(options, option, "npv")
        text = rounded_text(amount, signed=True)
        return Cell(near(text) if is_alike(as_is, option, "npv") else text)

    return (
        Row("Residual value of the new plant", unit, tuple(_residual(options, option) for option in options.all)),
        Row(f"Life cost, {how}", unit, tuple(_sum_cell(options, option, "life_cost") for option in options.all)),
        Row(f"Net present value, {how}", unit, tuple(npv(option) for option in options.all)),
        options.three_quantiles(f"Net present value: {BAND}", unit, "npv", float, signed=True),
        Row("Cost of CO2e avoided", f"{unit}/t", tuple(_per_tonne(comparison, options, o) for o in options.all)),
        options.three_quantiles(f"Cost of CO2e avoided: {BAND}", f"{unit}/t", "cost_per_t", float),
    )


def _residual(options: Options, option: Prospect) -> Cell:
    """Return what a new plant is worth at the end of the remaining life, with how that comes about."""
    appraisal, first, own = option.account.appraisal, option.account.first_cost, option.account.plan.option
    if appraisal is None or appraisal.residual is None or first is None or first.plant_life_years is None:
        return Cell(MISSING)
    how = f"by straight line over its life of {float(first.plant_life_years):g} years"
    text = f"residual value at the end of the remaining life {'as given' if own and own.residual_value else how}"
    return Cell(rounded_text(float(appraisal.residual)), marks=(options.notes.mark(shown_name(option), text),))


def _payback(options: Options, option: Prospect) -> Cell:
    """Return the payback: a number of years, or its state in words."""
    found, as_is = payback(option), options.all[0]
    if option is as_is:
        return Cell(MISSING)
    if found.years is None and found.state is PaybackState.UNKNOWN:
        return _not_compared(options, option, "npv")
    is_said = found.state in (PaybackState.NEVER, PaybackState.BEYOND, PaybackState.UNKNOWN)
    marks = (options.notes.mark(shown_name(option), payback_words(found)),) if is_said else ()
    if found.years is None:
        return Cell(found.state.value, is_number=False, marks=marks)
    text = years_text(found)
    return Cell(near(text) if is_alike(as_is, option, "saving") else text, marks=marks)


def _paybacks(option: Prospect, as_is: Prospect) -> Cell:
    found = None if option is as_is else payback_quantiles(option)
    return Cell(MISSING if found is None else " · ".join(years_text(end) for end in found))


def _pays_back(option: Prospect, as_is: Prospect) -> Cell:
    value = None if option is as_is or option.certainty is None else option.certainty.pays_back
    return Cell(MISSING if value is None else chance(value))


def _per_tonne(comparison: Comparison, options: Options, option: Prospect) -> Cell:
    """Return the cost of a tonne of CO2e avoided: a number, or a word with its note."""
    appraisal = option.account.appraisal
    if option is options.all[0]:
        return Cell(MISSING)
    state = AbatementState.UNKNOWN if appraisal is None else abatement_of(appraisal)
    if state is AbatementState.NONE_AVOIDED:
        mark = options.notes.mark(shown_name(option), per_tonne_text(comparison, option))
        return Cell("none avoided", is_number=False, marks=(mark,))
    if appraisal is None or appraisal.cost_per_t is None or state is AbatementState.UNKNOWN:
        no_emissions = missing_words(option, "emissions")
        return options.unknown(option, no_emissions) if no_emissions else _not_compared(options, option, "npv")
    is_saving = state is AbatementState.SAVES
    marks = (options.notes.mark(shown_name(option), "below 0: saves money and CO2e"),) if is_saving else ()
    return Cell(rounded_text(float(appraisal.cost_per_t)), marks=marks)


def cost_items(options: Options) -> tuple[Costs, ...]:
    """Return the first cost of every option that costs something, item by item.

    Args:
        options: The options.
    """
    return tuple(
        found for option in options.all if (found := _costs(option)) is not None and (found.items or found.missing)
    )


def _costs(option: Prospect) -> Costs | None:
    first = option.three.first_cost
    if first is None:
        return None
    items = tuple(
        (item.name, *(_whole(at(item.amount, place)) for place in range(3)), item.made_from) for item in first.items
    )
    found = first_cost_range(option)
    ends = ("unknown",) * 3 if found is None else tuple(sum_text(first.state, _whole(end)) for end in found)
    missing, not_counted = missing_items_words(first.missing), tuple(item_name(code) for code in first.not_counted)
    return Costs(shown_name(option), items, (ends[0], ends[1], ends[2]), missing, not_counted)  # type: ignore[arg-type]


def _whole(amount: float) -> str:
    return format_number(amount, 0)
