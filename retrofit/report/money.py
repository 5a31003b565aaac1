"""The money of every option in the report: first cost item by item, what a year costs, and whether it pays."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from retrofit.checks.outlook import currency, payback_text, per_tonne_text, rounded_text
from retrofit.checks.prospects import Prospect, first_cost_range, is_alike, life_cost
from retrofit.report.prospect_rows import Options, Read, missing_of, shown_name
from retrofit.report.rows import near
from retrofit.report.table import Cell, Group, Row, Table
from retrofit.study import Comparison
from retrofit.study.money import PARTS
from retrofit.study.spread import at
from retrofit.units import MISSING, format_number


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
        Group("yearly", "A year", _yearly(options, unit)),
        Group("life", "Paid once, and the remaining life", (*_first(options, unit), *_life(comparison, options, unit))),
    )
    basis = (
        f"Basis: {unit} as the case gives them, prices as today over the remaining life; savings against the plant as "
        "it is. A part that is known for one of the two alone is left out of the saving, and named below."
    )
    return Table("money", "What it costs and saves", basis, options.names, groups, options.notes.listed())


def _first(options: Options, unit: str) -> tuple[Row, ...]:
    def base(option: Prospect) -> float | None:
        first = option.account.first_cost
        return None if first is None or first.total is None else float(first.total)

    def why(option: Prospect) -> str:
        return option.account.first_cost.missing if option.account.first_cost else ""

    def spread(option: Prospect) -> Cell:
        found = first_cost_range(option)
        is_range = found is not None and found[0] < found[2]
        return Cell(f"{rounded_text(found[0])} to {rounded_text(found[2])}" if found and is_range else MISSING)

    def note(option: Prospect) -> str:
        first = option.account.first_cost
        parts = first.not_counted if first else ()
        return f"no sum given, so not counted: {_listed(parts)}" if parts else ""

    return (
        options.row("First cost", unit, base, rounded_text, why, note),
        Row("Every item low to every high", unit, tuple(spread(option) for option in options.all)),
    )


def _listed(names: tuple[str, ...]) -> str:
    return ", ".join(name[:1].lower() + name[1:] for name in names)


def _yearly(options: Options, unit: str) -> tuple[Row, ...]:
    rows = []
    for code, name in PARTS.items():
        if any(_part(option, code) is not None for option in options.all):
            label = f"{name[:1].upper()}{name[1:]}"
            rows.append(options.row(label, unit, _reading(code), rounded_text, _part_missing(code)))
    as_is = options.all[0]

    def saving(option: Prospect) -> Cell:
        found = option.account.saving
        if option is as_is:
            return Cell(MISSING)
        if found is None or found.total is None:
            return options.unknown(option, missing_of("saving")(option) or "energy")
        text = rounded_text(float(found.total), signed=True)
        marks = (options.notes.mark(shown_name(option), _not_counted(found.not_counted)),) if found.not_counted else ()
        return Cell(near(text) if is_alike(as_is, option, "saving") else text, marks=marks)

    return (*rows, Row("Saving against the plant as it is", unit, tuple(saving(option) for option in options.all)))


def _not_counted(parts: tuple[str, ...]) -> str:
    """Return which parts are not counted, without what each would need, which may differ by option."""
    return f"not counted in the saving, not known on both sides: {', '.join(part.partition(' (')[0] for part in parts)}"


def _part(option: Prospect, code: str) -> float | None:
    found = option.account.yearly_cost.parts[code] if option.account.yearly_cost else None
    return None if found is None else float(found)


def _reading(code: str) -> Read:
    return lambda option: _part(option, code)


def _part_missing(code: str) -> Callable[[Prospect], str]:
    return lambda option: option.account.yearly_cost.missing.get(code, "") if option.account.yearly_cost else ""


def _life(comparison: Comparison, options: Options, unit: str) -> tuple[Row, ...]:
    as_is = options.all[0]

    def cost(option: Prospect) -> Cell:
        extra = life_cost(option)
        if option is as_is:
            return Cell(MISSING)
        if extra is None:
            return options.unknown(option, missing_of("cost")(option))
        text = rounded_text(extra, signed=True)
        return Cell(near(text) if is_alike(as_is, option, "cost") else text)

    rows = [
        Row("Simple payback", "years", tuple(_payback(options, option) for option in options.all)),
        Row("Cost against the plant as it is, with first cost", unit, tuple(cost(o) for o in options.all)),
        options.ranges("The same: 8 of 10 draws within", unit, "life_saving", lambda value: -value),
    ]
    if comparison.case.money is not None and comparison.case.money.discount_rate is not None:
        rate = format_number(100.0 * comparison.case.money.discount_rate, 1)
        label = f"Net present value at {rate}\N{NO-BREAK SPACE}%"
        rows.append(Row(label, unit, tuple(_npv(options, option) for option in options.all)))
    rows.append(
        Row("Cost of CO2e avoided", f"{unit}/t", tuple(_per_tonne(comparison, options, o) for o in options.all))
    )
    return tuple(rows)


def _payback(options: Options, option: Prospect) -> Cell:
    """Return the payback: a number of years, or in words that it does not come."""
    appraisal, as_is = option.account.appraisal, options.all[0]
    if option is as_is:
        return Cell(MISSING)
    if appraisal is None or appraisal.payback_years is None:
        return options.unknown(option, missing_of("cost")(option))
    years = float(appraisal.payback_years)
    words = payback_text(option)
    if math.isinf(years):
        return Cell("none", is_number=False, marks=(options.notes.mark(shown_name(option), words),))
    if years == 0.0:
        return Cell("nothing to pay", is_number=False)
    is_beyond = appraisal.life_years is not None and years > float(appraisal.life_years)
    marks = (options.notes.mark(shown_name(option), f"payback {words.partition(', ')[2]}"),) if is_beyond else ()
    text = format_number(years, 1)
    return Cell(near(text) if is_alike(as_is, option, "saving") else text, marks=marks)


def _npv(options: Options, option: Prospect) -> Cell:
    appraisal = option.account.appraisal
    if option is options.all[0]:
        return Cell(MISSING)
    if appraisal is None or appraisal.npv is None:
        return options.unknown(option, missing_of("cost")(option))
    text = rounded_text(float(appraisal.npv), signed=True)
    return Cell(near(text) if is_alike(options.all[0], option, "cost") else text)


def _per_tonne(comparison: Comparison, options: Options, option: Prospect) -> Cell:
    """Return the cost of a tonne of CO2e avoided: a number, or a word with its note."""
    appraisal = option.account.appraisal
    if option is options.all[0]:
        return Cell(MISSING)
    words = per_tonne_text(comparison, option)
    if words.startswith("unknown"):
        return options.unknown(option, words.partition(": ")[2])
    if words.startswith("none") or appraisal is None or appraisal.cost_per_t is None:
        return Cell("none", is_number=False, marks=(options.notes.mark(shown_name(option), words),))
    value = float(appraisal.cost_per_t)
    marks = (options.notes.mark(shown_name(option), "saves money and CO2e: a cost below 0"),) if value < 0.0 else ()
    return Cell(rounded_text(value), marks=marks)


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
    if first.total is None:
        total = ("unknown",) * 3
    else:
        total = tuple(_whole(at(first.total, place)) for place in range(3))  # type: ignore[assignment]
    return Costs(shown_name(option), items, total, first.missing, first.not_counted)  # type: ignore[arg-type]


def _whole(amount: float) -> str:
    return format_number(amount, 0)
