"""Rows of the sheet of results for a year and the remaining life of every option, in base values and of the draws."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from retrofit.checks.money_words import AT_LEAST_WORDS, item_name, item_names, missing_items_words, payback_words
from retrofit.checks.prospects import KEPT, Prospect, is_alike, payback, prospects, quantile, sum_of_option
from retrofit.report.judging import spelled
from retrofit.report.spreadsheet.measures import (
    A_YEAR,
    NEVER,
    REMAINING_LIFE,
    SUMS,
    Measure,
    column_of,
    is_itself,
    known,
    measures,
    reason,
    scale_of,
)
from retrofit.report.spreadsheet.table import Column, Content, in_units
from retrofit.study import Comparison, Entry
from retrofit.study.sums import SumState
from retrofit.units import UnitSystem, listed

BASE = "base"
DRAWN = {0: "10 % of draws below", 1: "50 % of draws below", 2: "90 % of draws below"}
ALIKE, NOT_COUNTED, IN_WORDS = "No meaningful difference in", "Not counted", "Payback in words"
BOUNDS, STATE = "Lower bounds", "Comparison"
OF_BASE = "only the base value is kept"
# By basis: what an option may show no meaningful difference from the plant as it is in.
COMPARED = {
    A_YEAR: {"energy": "electricity", "saving": "annual saving"},
    REMAINING_LIFE: {"emissions": "warming", "npv": "net present value"},
}
# By basis of the design point: heading in the sheet, name among the results of the draws, and kind. The draws hold the
# existing plant, or without its exchangers its compressor at today's temperatures.
AT_FULL = {
    "Cooling": ("cooling_W", "cooling"),
    "Compressor power": ("power_W", "power"),
    "Condensing pressure": ("p_cond_Pa", "pressure"),
    "Discharge temperature": ("T_discharge_K", "temperature"),
    "Cooling, ratio to today": ("capacity_ratio", "ratio"),
}
OF_PLANT = {
    "same plant, at full": AT_FULL,
    "same plant, at today's cooling": {"COP": ("cop", "ratio"), "COP, ratio to today": ("cop_ratio", "ratio")},
}
OF_COMPRESSOR = {"same compressor": AT_FULL | {"COP": ("cop", "ratio")}}


@dataclass(frozen=True)
class OptionRow:
    """A row: the option's refrigerant, its cells by heading, and why some of them are empty."""

    entry: Entry
    cells: dict[str, Content]
    gaps: list[str]


def option_columns(comparison: Comparison, units: UnitSystem) -> tuple[Column, ...]:
    """Return the columns that the rows of a year and the remaining life need beside those of the design point.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    options = prospects(comparison) if comparison.life else ()
    found = [
        column_of(measure, [known(measure, option) for option in options], comparison, units)
        for numbers in measures(comparison).values()
        for measure in numbers
    ]
    widths = {IN_WORDS: 30, STATE: 14, BOUNDS: 60, ALIKE: 30, NOT_COUNTED: 60} if found else {}
    return (*found, *(Column(heading, width=width) for heading, width in widths.items()))


def option_rows(comparison: Comparison, units: UnitSystem) -> Iterator[OptionRow]:
    """Yield the draws at the design point, then the rows of every option by basis: base values and those of the draws.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    for option in prospects(comparison) if comparison.life else ():
        if option.certainty is not None and option.deed != KEPT:  # at the design point the plant as it is
            yield from _design_rows(comparison, units, option)
    for basis, numbers in measures(comparison).items():
        options = prospects(comparison)
        for option in options:
            yield _base_row(comparison, units, basis, numbers, (options[0], option))
            if option.certainty is not None:
                for place in DRAWN:
                    yield _drawn_row(comparison, units, basis, numbers, option, place)


def _design_rows(comparison: Comparison, units: UnitSystem, option: Prospect) -> Iterator[OptionRow]:
    entry = option.entry
    there = OF_PLANT if entry.plant else OF_COMPRESSOR if entry.compressor else {}
    for basis, numbers in there.items():
        for place, value in DRAWN.items():
            row = _named(option, basis, value)
            for heading, (name, kind) in numbers.items():
                found = quantile(option, name)
                row[heading] = in_units(kind, found[place], units) if found else None
            yield OptionRow(entry, row, [f"all other numbers: {OF_BASE}"])


def _base_row(
    comparison: Comparison,
    units: UnitSystem,
    basis: str,
    numbers: tuple[Measure, ...],
    pair: tuple[Prospect, Prospect],
) -> OptionRow:
    as_is, option = pair
    row, gaps = _named(option, basis, BASE), dict[str, list[str]]()
    for measure in numbers:
        value = known(measure, option)
        row[measure.heading] = None if value is None else scale_of(measure.kind, comparison, units).to_number(value)
        if value is None:
            gaps.setdefault(reason(measure, option), []).append(measure.heading)
    return OptionRow(option.entry, row | _words(basis, as_is, option), _told(gaps))


def _drawn_row(
    comparison: Comparison,
    units: UnitSystem,
    basis: str,
    numbers: tuple[Measure, ...],
    option: Prospect,
    place: int,
) -> OptionRow:
    """Return the values that a share of the draws stays below; a payback without end is empty, and why."""
    row, gaps = _named(option, basis, DRAWN[place]), dict[str, list[str]]()
    for measure in numbers:
        found = quantile(option, measure.drawn) if measure.drawn and not is_itself(measure, option) else None
        if found is not None and math.isfinite(found[place]):
            row[measure.heading] = scale_of(measure.kind, comparison, units).to_number(found[place])
        elif measure.drawn:
            why = reason(measure, option) if found is None else NEVER
            gaps.setdefault(why, []).append(measure.heading)
    return OptionRow(option.entry, row, [*_told(gaps), f"all other numbers: {OF_BASE}"])


def _named(option: Prospect, basis: str, value: str) -> dict[str, Content]:
    return {"Basis": basis, "What is done": option.deed, "Value": value}


def _told(gaps: dict[str, list[str]]) -> list[str]:
    return [f"{', '.join(headings)}: {spelled(why)}" for why, headings in gaps.items()]


def _words(basis: str, as_is: Prospect, option: Prospect) -> dict[str, Content]:
    """Return what is to be said beside the numbers: what the model cannot tell apart, and what is not counted."""
    bounds: dict[str, Content] = {BOUNDS: spelled(_bounds(basis, option)) or None}
    if option is as_is:
        return bounds
    alike = [text for quantity, text in COMPARED[basis].items() if is_alike(as_is, option, quantity)]
    words: dict[str, Content] = bounds | {
        ALIKE: listed(alike, "and") if alike else None,
        NOT_COUNTED: _not_counted(basis, option),
    }
    saving, appraisal = option.account.saving, option.account.appraisal
    if saving is None or appraisal is None:
        return words
    if basis == A_YEAR:
        return words | {STATE: saving.state.value}
    return words | {STATE: appraisal.state.value, IN_WORDS: payback_words(payback(option))}


def _bounds(basis: str, option: Prospect) -> str:
    """Return which sums are lower bounds, and what they need to be complete."""
    found = ((heading, sum_of_option(option, name)) for heading, name in SUMS[basis].items())
    return "; ".join(
        f"{heading}: {AT_LEAST_WORDS}, {missing_items_words(part.missing)}"
        for heading, part in found
        if part is not None and part.state is SumState.AT_LEAST
    )


def _not_counted(basis: str, option: Prospect) -> str:
    saving, first = option.account.saving, option.account.first_cost
    if basis == A_YEAR:
        return spelled(item_names(saving.not_counted)) if saving and saving.not_counted else ""
    return "; ".join(item_name(code) for code in first.not_counted) if first else ""
