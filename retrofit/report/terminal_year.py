"""The remaining life as text for a terminal: answer, year, emissions, money, how sure it is, and what is missing."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence

from retrofit.checks.answer import Matter
from retrofit.checks.money_words import (
    AT_LEAST,
    INCOMPLETE,
    INCOMPLETE_WORDS,
    NO_LIFE,
    item_name,
    item_names,
    missing_items_words,
    sum_text,
    years_text,
)
from retrofit.checks.outlook import (
    KG_PER_T,
    TOLD,
    UNKNOWN,
    currency,
    discounting_words,
    life_text,
    outlook,
    percent,
    result_text,
    rounded_text,
    told_result,
)
from retrofit.checks.prospects import (
    Prospect,
    compared,
    difference,
    is_alike,
    leading,
    life_of_result,
    payback,
    probability,
    prospects,
    quantile,
    sum_of_option,
)
from retrofit.checks.reading_words import contradiction_words, duty_words
from retrofit.figures.tornado import limits_text
from retrofit.refrigerants import with_hyphens
from retrofit.report.certainty import chance, method
from retrofit.report.emissions import check_months
from retrofit.report.terminal import cautions_text
from retrofit.report.terminal_plant import NEAR, NOTHING, Emphasis
from retrofit.report.text_table import Column, paragraph, text_table
from retrofit.study import Comparison
from retrofit.study.money import AbatementState, PaybackState, abatement_of
from retrofit.study.sums import ComparisonState, Sum
from retrofit.study.year import YearRun
from retrofit.units import UnitSystem, format_number, listed, shown, told

NONE = "none"
Cells = tuple[Column, list[str]]


def year_text(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis = str) -> str:
    """Return the remaining life as text.

    Args:
        comparison: An assessed result with its remaining life.
        units: The reader's units.
        columns: Width to wrap prose to. [characters]
        strong: How a heading is set off; plain if left out.
    Returns: The text. The cautions stand above the numbers and cannot be left out.
    """
    words, options = outlook(comparison, units), prospects(comparison)
    parts = [
        strong(shown(comparison.case.title, 200)),
        "\n".join(
            paragraph(text, columns)
            for text in (told(duty_words(comparison), units), *contradiction_words(comparison, units))
            if text
        ),
        *(_matters(matters, columns) for matters in (words.year, words.emissions, words.money)),
        "\n".join(paragraph(text, columns) for text in (words.absent, words.stopped, words.meter, words.swing) if text),
        *cautions_text(comparison, columns, strong),
        _year(comparison, options, units, columns, strong),
        _emissions(comparison, options, units, columns, strong),
        _money(comparison, options, columns, strong),
        _certainty(comparison, options, strong),
        _swings(comparison, units, strong),
        "\n".join([strong("Which option comes first"), *(paragraph(text, columns) for text in words.ranking)]),
        _small_print(comparison, options, columns, strong),
    ]
    return "\n\n".join(part for part in parts if part)


def _matters(matters: Sequence[Matter], columns: int) -> str:
    lines = []
    for matter in matters:
        lines.append(paragraph(matter.about, columns))
        lines += [
            paragraph(f"{words}: {', '.join(names)}", columns, indent="    ", first="  ")
            for words, names in matter.groups
        ]
    return "\n".join(lines)


def _table(options: Sequence[Prospect], cells: Sequence[Cells]) -> str:
    names = [_name(option) for option in options]
    heads = [Column("", "", is_words=True), *(column for column, _ in cells)]
    return text_table(heads, [list(row) for row in zip(names, *(texts for _, texts in cells), strict=True)])


def _name(option: Prospect) -> str:
    return f"{option.name} (as it is)" if option.deed == "as it is" else option.name


def _told(
    options: Sequence[Prospect], read: Callable[[Prospect], float | None], show: Callable[[float], str]
) -> list[str]:
    values = [read(option) for option in options]
    return [UNKNOWN if value is None else show(value) for value in values]


def _change(as_is: Prospect, options: Sequence[Prospect], quantity: str) -> list[str]:
    found = []
    for option in options:
        change = difference(as_is, option, quantity)
        text = percent(change.ratio, 1)
        is_near = change.is_alike and option.entry is not as_is.entry
        found.append(NOTHING if option is as_is else f"{NEAR} {text}" if is_near else text)
    return found


def _span(options: Sequence[Prospect], name: str, to_number: Callable[[float], float]) -> list[Cells]:
    """Return columns with the ends of the range in which 8 of 10 draws lie; none without draws."""
    found = [quantile(option, name) for option in options]
    if not any(found):
        return []
    ends = ((0, "10 % of"), (2, "90 % of"))
    return [
        (Column(head, "draws <"), [NOTHING if ends_ is None else _end(ends_[place], to_number) for ends_ in found])
        for place, head in ends
    ]


def _percentiles(options: Sequence[Prospect], head: str, name: str) -> list[Cells]:
    """Return columns with the 10th, 50th and 90th percentile of a number against the plant as it is; none if unknown.

    Args:
        options: The options, the plant as it is first.
        head: What the number is called.
        name: Its name among the results of the samples.
    """
    found = [None if option is options[0] else quantile(option, name) for option in options]
    if not any(found):
        return []
    return [
        (Column(head, label), [NOTHING if ends is None else _signed_end(ends[place]) for ends in found])
        for place, label in enumerate(("P10", "P50", "P90"))
    ]


def _signed_end(value: float) -> str:
    return rounded_text(value, signed=True)


def _end(value: float, to_number: Callable[[float], float]) -> str:
    return rounded_text(to_number(value)) if math.isfinite(value) else "never"


# The year


def _year(
    comparison: Comparison, options: Sequence[Prospect], units: UnitSystem, columns: int, strong: Emphasis
) -> str:
    asked = life_of_result(comparison).asked
    if asked is None:
        return ""
    energy = units.label("energy")

    def read(name: str) -> Callable[[Prospect], float | None]:
        def value(option: Prospect) -> float | None:
            found: float | None = getattr(option.year, name) if option.year else None
            return found

        return value

    def kWh(value: float) -> str:
        return rounded_text(float(units.number("energy", value)))

    cells: list[Cells] = [
        (Column("Electricity", energy), _told(options, read("energy_J"), kWh)),
        (Column("vs as", "it is"), _change(options[0], options, "energy")),
        *_span(options, "energy_J", lambda value: float(units.number("energy", value))),
        (Column("Peak", units.label("power")), _told(options, read("peak_W"), lambda v: units.text("power", v))),
        (Column("Seasonal", "COP"), _told(options, read("seasonal_cop"), lambda v: format_number(v, 2))),
        (Column("Runs", "%"), _told(options, read("run_time_fraction"), lambda v: format_number(100.0 * v, 0))),
        (Column("Unmet", "h"), _told(options, read("unmet_h"), lambda v: format_number(v, 0))),
        (Column("Unmet", energy), _told(options, read("unmet_J"), kWh)),
    ]
    heading = strong("A year: same plant, every hour balanced, pressures floating")
    load = f"{'Heat' if asked.serves == 'heating' else 'Cooling'} to deliver {kWh(asked.load_J)} {energy}"
    lines = [heading, paragraph(f"{load}; weather: {shown(asked.source, 200)}.", columns), _table(options, cells)]
    machines: dict[str, list[str]] = {}
    for option in options:
        if option.year is not None:
            machines.setdefault(option.year.machine, []).append(option.name)
    lines.append(paragraph(_plants(machines), columns))
    lines += [paragraph(text, columns) for text in _year_notes(options)]
    return "\n".join(lines)


def _plants(machines: dict[str, list[str]]) -> str:
    return "; ".join(f"{machine}: {', '.join(dict.fromkeys(names))}" for machine, names in machines.items()) + "."


def _year_notes(options: Sequence[Prospect]) -> Iterator[str]:
    for option in options:
        if option.year is None:
            yield f"{option.name} has no year: {option.no_year}."
        elif option.year.not_solved_h:
            why = f": {option.year.reason}" if option.year.reason else ""
            yield f"{option.name}: {_hours(option.year)} without a solution, counted as unmet{why}."


def _hours(year: YearRun) -> str:
    return f"{format_number(year.not_solved_h, 0)} h"


# Emissions


def _emissions(
    comparison: Comparison, options: Sequence[Prospect], units: UnitSystem, columns: int, strong: Emphasis
) -> str:
    if comparison.case.emissions is None:
        return ""
    first = options[0].account.tewi

    def tonnes(name: str) -> list[str]:
        values = [getattr(option.account.tewi, name) for option in options]
        return [UNKNOWN if value is None else rounded_text(float(value) / KG_PER_T) for value in values]

    leaks = [option.account.plan.leak.spread for option in options]
    cells: list[Cells] = [
        (
            Column("Charge", units.label("mass")),
            _told(options, lambda o: o.account.plan.charge_kg.base if o.account.plan.charge_kg else None,
                  lambda v: units.text("mass", v)),
        ),
        (Column("GWP", first.gwp.edition), _told(options, lambda o: o.account.tewi.gwp.value, _gwp)),
        (Column("Leaks", "%/year"), [UNKNOWN if leak is None else format_number(100 * leak.base, 1) for leak in leaks]),
        (Column("Checks", "months"), [_checks(option) for option in options]),
        (Column("Direct", "t CO2e"), tonnes("direct_kg")),
        (Column("Indirect", "t CO2e"), tonnes("indirect_kg")),
        (Column("Sum", "t CO2e"), tonnes("total_kg")),
        (Column("vs as", "it is"), _change(options[0], options, "emissions")),
        *_span(options, "tewi_kg", lambda value: value / KG_PER_T),
    ]  # fmt: skip
    life = "remaining life not given" if first.life_years is None else f"{float(first.life_years):g} years"
    heading = strong(f"Warming over the remaining life (TEWI), {life}")
    left_out = f"Left out, as in every TEWI: {'; '.join(first.left_out)}."
    return "\n".join([heading, _table(options, cells), paragraph(left_out, columns)])


def _gwp(value: float) -> str:
    return format_number(value, 0 if value >= 10.0 else 2)


def _checks(option: Prospect) -> str:
    months, why = check_months(option)
    return format_number(months, 0) if months is not None else UNKNOWN if why else NONE


# Money


def _money(comparison: Comparison, options: Sequence[Prospect], columns: int, strong: Emphasis) -> str:
    if comparison.case.money is None:
        return ""
    unit = currency(comparison)
    as_is = options[0]

    def sums(name: str) -> list[str]:
        return [_sum(sum_of_option(option, name)) for option in options]

    paid: list[Cells] = [
        (Column("First cost", unit), sums("first_cost")),
        (Column("Annual", "cost"), sums("yearly_cost")),
        (Column("Annual", "saving"), [_signed(as_is, option, "saving") for option in options]),
        (Column("Payback", "years"), [_payback(as_is, option) for option in options]),
    ]
    if life_of_result(comparison).certainty:
        paid.append((Column("Pays", "back, %"), [_pays_back(as_is, option) for option in options]))
    whole: list[Cells] = [
        (Column("Life cost", unit), sums("life_cost")),
        (Column("NPV", unit), [_signed(as_is, option, "npv") for option in options]),
        *_percentiles(options, "NPV", "npv"),
        (Column(f"{unit} per t", "CO2e avoided"), [_per_tonne(as_is, option) for option in options]),
    ]
    life = life_text(as_is.account.tewi)
    signs = "Annual saving and net present value (NPV) above 0: the option saves money."
    costs = "Base values, with the percentiles P10, P50 and P90 of the NPV. Cost per t below 0: it saves money too."
    tables = (
        (
            f"Money in {unit}, prices as today, saving against the plant as it is",
            paid,
            (signs, *_signs_of_gaps(options)),
        ),
        (
            f"Life cost and net present value over {life}, {discounting_words(comparison)}",
            whole,
            (costs, *dict.fromkeys(_money_notes(options))),
        ),
    )
    return "\n\n".join(
        "\n".join([strong(heading), _table(options, cells), *(paragraph(text, columns) for text in texts)])
        for heading, cells, texts in tables
    )


def _signs_of_gaps(options: Sequence[Prospect]) -> Iterator[str]:
    """Yield what the signs of an incomplete sum or comparison mean, where there is one."""
    if any(option.account.appraisal and option.account.appraisal.life_cost.missing for option in options):
        yield f"{AT_LEAST.strip()} at least: an item is missing. {INCOMPLETE}: {INCOMPLETE_WORDS}."


def _pays_back(as_is: Prospect, option: Prospect) -> str:
    value = probability(option, "pays_back")
    if option is as_is:
        return NOTHING
    return _not_compared(option, "npv") if value is None else chance(value)


def _sum(found: Sum | None) -> str:
    return UNKNOWN if found is None or found.known is None else sum_text(found.state, rounded_text(float(found.known)))


def _not_compared(option: Prospect, quantity: str) -> str:
    """Return the state of a comparison that gives no number."""
    return INCOMPLETE if compared(option, quantity).state is ComparisonState.INCOMPLETE else UNKNOWN


def _signed(as_is: Prospect, option: Prospect, quantity: str) -> str:
    if option is as_is:
        return NOTHING
    value = compared(option, quantity).amount
    if value is None:
        return _not_compared(option, quantity)
    text = rounded_text(value, signed=True)
    return f"{NEAR} {text}" if is_alike(as_is, option, quantity) else text


def _payback(as_is: Prospect, option: Prospect) -> str:
    found = payback(option)
    if option is as_is:
        return NOTHING
    if found.years is None:
        return _not_compared(option, "npv") if found.state is PaybackState.UNKNOWN else found.state.value
    near = f"{NEAR} " if is_alike(as_is, option, "saving") else ""
    beyond = f" {found.state.value}" if found.state is PaybackState.BEYOND else ""
    return f"{near}{years_text(found)}{beyond}"


def _per_tonne(as_is: Prospect, option: Prospect) -> str:
    appraisal = option.account.appraisal
    if option is as_is:
        return NOTHING
    state = AbatementState.UNKNOWN if appraisal is None else abatement_of(appraisal)
    if state is AbatementState.NONE_AVOIDED:
        return NONE
    if appraisal is None or appraisal.cost_per_t is None or state is AbatementState.UNKNOWN:
        return _not_compared(option, "npv")
    return rounded_text(float(appraisal.cost_per_t))


def _money_notes(options: Sequence[Prospect]) -> Iterator[str]:
    """Yield what is not counted or not known, with the options it is true of."""
    found: dict[str, list[str]] = {}
    for option in options:
        for text in _left_open(option, options[0]):
            found.setdefault(text, []).append(option.name)
    for text, names in found.items():
        yield f"{text} ({', '.join(names)})."


def _left_open(option: Prospect, as_is: Prospect) -> Iterator[str]:
    saving, first, appraisal = option.account.saving, option.account.first_cost, option.account.appraisal
    if appraisal is not None and appraisal.life_cost.missing:
        yield f"Missing: {missing_items_words(appraisal.life_cost.missing)}"
    if saving is not None and saving.not_counted and option is not as_is:
        yield f"Not counted, since it is known for neither: {item_names(saving.not_counted)}"
    if first is not None and first.not_counted:
        parts = ", ".join(item_name(code) for code in first.not_counted)
        yield f"No sum given for any option, so not counted in the first cost: {parts}"
    if appraisal is not None and appraisal.life_years is None:
        yield f"No life cost or net present value: {NO_LIFE}"


# How sure


def _certainty(comparison: Comparison, options: Sequence[Prospect], strong: Emphasis) -> str:
    life = life_of_result(comparison)
    if not life.certainty:
        return ""

    def column(head: str, unit: str, name: str) -> Cells:
        return Column(head, unit), [_probability(options[0], option, name) for option in options]

    cells = [
        column("Carries the", "cooling", "carries"),
        column("Uses less", "electricity", "uses_less"),
        column("Costs less", "over the life", "cheaper"),
        column("Pays back", "in the life", "pays_back"),
        column("Warms less", "over the life", "cleaner"),
    ]
    heading = strong(f"How sure: share of {life.draws} draws of the inputs, %, against the plant as it is")
    return f"{heading}\n{_table(options, cells)}"


def _probability(as_is: Prospect, option: Prospect, name: str) -> str:
    value = probability(option, name)
    is_itself = option.entry is as_is.entry and name == "uses_less"
    if is_itself or (option is as_is and name != "carries"):
        return NOTHING
    if name == "carries" and option.account.plan.family == "replace":
        return "sized for it"
    if value is None:
        return _not_compared(option, "npv") if name in ("cheaper", "pays_back") else UNKNOWN
    return chance(value)


def _swings(comparison: Comparison, units: UnitSystem, strong: Emphasis) -> str:
    """Return the inputs that move the answer most for the option that comes first."""
    option = leading(comparison)
    name = told_result(option) if option else None
    if option is None or name is None or option.certainty is None:
        return ""
    swings, money = option.certainty.swings[name], currency(comparison)
    rows = [
        [
            swing.input.name.partition(";")[0],
            limits_text(swing, units, money),
            swing.input.origin,
            result_text(comparison, units, name, swing.at_low),
            result_text(comparison, units, name, swing.at_high),
        ]
        for swing in swings
    ]
    heads = [
        Column("Input", is_words=True), Column("Limits", is_words=True), Column("From", is_words=True),
        Column("At low"), Column("At high"),
    ]  # fmt: skip
    base = result_text(comparison, units, name, swings[0].base)
    heading = strong(f"What moves {TOLD[name]} of {with_hyphens(option.name)} most ({base} at the base)")
    return f"{heading}\n{text_table(heads, rows)}"


def _small_print(comparison: Comparison, options: Sequence[Prospect], columns: int, strong: Emphasis) -> str:
    case, life = comparison.case, life_of_result(comparison)
    assumed = [f"{item.key} = {item.shown_text}" for item in case.defaults]
    limits = [item.name.partition(";")[0] for item in life.inputs if item.origin == "assumed"]
    missing = dict.fromkeys(text for option in options for text in option.account.tewi.missing)
    parts = [
        f"Assumed, not in the case: {listed(assumed, 'and')}." if assumed else "",
        f"Plus or minus assumed for: {'; '.join(limits)}." if limits else "",
        f"Missing for the warming: {'; '.join(missing)}." if missing and case.emissions else "",
        *method(comparison),
        f"{NEAR} marks a difference inside the band of the model: no meaningful difference.",
        "Versions: " + ", ".join(f"{name} {number}" for name, number in comparison.versions.items()) + ".",
    ]
    return "\n".join([strong("Limits"), *(paragraph(part, columns) for part in parts if part)])
