"""The remaining life in the report, as finished texts: year, emissions, money, and how sure they are."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit import figures
from retrofit.checks.answer import Matter
from retrofit.checks.outlook import outlook, told_result
from retrofit.checks.prospects import KEPT, leading, life_of_result, prospects
from retrofit.figures import Drawing
from retrofit.report.assumed import with_signs
from retrofit.report.certainty import (
    Drawn,
    Moved,
    Weights,
    certainty_table,
    drawn_inputs,
    method,
    moved,
    spans,
    weights,
)
from retrofit.report.emissions import emissions_table, left_out
from retrofit.report.judging import spelled
from retrofit.report.money import Costs, cost_items, money_table
from retrofit.report.plain import plain
from retrofit.report.prospect_rows import Options
from retrofit.report.table import Notes, Table
from retrofit.report.year import year_parts, year_table
from retrofit.study import Comparison
from retrofit.study.emissions import FORMULA
from retrofit.study.money import FORMULAS
from retrofit.units import UnitSystem

Told = tuple[tuple[str, tuple[tuple[str, tuple[str, ...]], ...]], ...]


@dataclass(frozen=True)
class LifePart:
    """The remaining life as texts.

    Attributes:
        year_words, emissions_words, money_words, certainty_words: Matters, each a heading with groups of words and
            the options they are true of.
        stopped: Which options a check stops; empty if none.
        meter, swing: The meter, and what moves the answer most; empty if there is none.
        ranking: Sentences on which option comes first.
        year, emissions, money, certainty: Tables; None without what they need.
        year_parts: Parts of a year, for the annex.
        charts: Drawings by name, those that there are.
        maps: A map for each option that has one.
        costs: First cost item by item.
        spans, inputs, moved: Quantiles, inputs and their effect.
        method: How the draws are made.
        weights: The ranking under even weights.
        left_out: Parts of a life-cycle account that are not counted.
        formulas: How it is reckoned.
        currency: Currency of the case.
    """

    year_words: Told
    emissions_words: Told
    money_words: Told
    certainty_words: Told
    stopped: str
    meter: str
    swing: str
    ranking: tuple[str, ...]
    year: Table | None
    emissions: Table | None
    money: Table | None
    certainty: Table | None
    year_parts: Table | None
    energy_chart: Drawing | None
    ambient_chart: Drawing | None
    warming_chart: Drawing | None
    payback_chart: Drawing | None
    tornado: Drawing | None
    maps: tuple[Drawing, ...]
    costs: tuple[Costs, ...]
    spans: Table | None
    inputs: tuple[Drawn, ...]
    moved: tuple[Moved, ...]
    method: tuple[str, ...]
    weights: Weights
    left_out: tuple[str, ...]
    tewi_formula: str
    money_formulas: tuple[tuple[str, str], ...]
    currency: str


def life_part(comparison: Comparison, units: UnitSystem) -> LifePart | None:
    """Return the remaining life for the report; None if it was not computed.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    if comparison.life is None:
        return None
    axes = units.systems[0]  # of sentences and charts, which carry one system
    words, life = outlook(comparison, axes), life_of_result(comparison)
    all_ = prospects(comparison)

    def options() -> Options:
        return Options(all_, Notes())

    def signed(table: Table | None) -> Table | None:
        return with_signs(comparison, table, units)

    first = leading(comparison)
    result = told_result(first) if first else None
    money = comparison.case.money
    return LifePart(
        year_words=_told(words.year),
        emissions_words=_told(words.emissions),
        money_words=_told(words.money),
        certainty_words=_told(words.certainty),
        stopped=spelled(words.stopped),
        meter=words.meter,
        swing=spelled(plain(words.swing)),
        ranking=tuple(spelled(text) for text in words.ranking),
        year=signed(year_table(comparison, options(), units)),
        emissions=signed(emissions_table(comparison, options(), units) if comparison.case.emissions else None),
        money=signed(money_table(comparison, options())),
        certainty=signed(certainty_table(comparison, options())),
        year_parts=signed(year_parts(comparison, options(), units)),
        energy_chart=figures.energy_chart(comparison, axes),
        ambient_chart=figures.ambient_chart(comparison, axes),
        warming_chart=figures.warming_chart(comparison),
        payback_chart=figures.payback_chart(comparison),
        tornado=figures.tornado_chart(comparison, first, result, axes) if first and result else None,
        maps=_maps(comparison, axes),
        costs=cost_items(options()) if money else (),
        spans=spans(comparison, options(), axes),
        inputs=drawn_inputs(comparison, units),
        moved=moved(comparison, options(), axes),
        method=tuple(spelled(text) for text in method(comparison)),
        weights=weights(comparison),
        left_out=left_out(comparison) if life.accounts else (),
        tewi_formula=FORMULA,
        money_formulas=tuple(FORMULAS.items()),
        currency=plain(money.currency) if money else "",
    )


def _told(matters: tuple[Matter, ...]) -> Told:
    return tuple(
        (
            plain(spelled(matter.about)),
            tuple(
                (plain(spelled(words)), tuple(plain(spelled(name)) for name in names)) for words, names in matter.groups
            ),
        )
        for matter in matters
    )


def _maps(comparison: Comparison, units: UnitSystem) -> tuple[Drawing, ...]:
    asked = life_of_result(comparison).asked
    if asked is None:
        return ()
    options = (option for option in prospects(comparison) if option.deed != KEPT)  # the same plant as it is
    found = (figures.map_chart(option, asked, units) for option in options)
    return tuple(drawing for drawing in found if drawing is not None)
