"""The first sheet: what the file is, what it was made with, how to read it, and every caution."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import datetime
from pathlib import PurePath

from retrofit.checks import answer, not_checked
from retrofit.checks.outlook import outlook
from retrofit.checks.prospects import life_of_result
from retrofit.report.agreeing import calibration_text
from retrofit.report.carried.made_with import versions_of
from retrofit.report.carried.result import fingerprint
from retrofit.report.cautioning import DEFERENCE, caution_groups
from retrofit.report.certainty import method
from retrofit.report.comparing import convention
from retrofit.report.emissions import left_out
from retrofit.report.judging import spelled
from retrofit.report.spreadsheet.table import Column, Sheet
from retrofit.study import Comparison
from retrofit.study.emissions import FORMULA
from retrofit.study.money import FORMULAS
from retrofit.units import UnitSystem

COLUMNS = (Column("Topic", width=14), Column("About", width=34), Column("Text", width=100), Column("Source", width=30))
HELD = {
    "Inputs": "Every key of the case: given, assumed with its reason, or left out.",
    "Results": "One row for each refrigerant, basis and value; of a year and the remaining life for each option.",
    "Points": "One row for each refrigerant and state point of its cycle.",
    "Year": "Months, then outdoor temperatures, of every option: the same year sorted twice, so add up one of them.",
    "Sources": "Every catalogue value, caution and threshold behind the results, with where it comes from.",
}
READING = (
    ("Numbers", "Numbers are not rounded; the format of a cell shows fewer digits than it holds."),
    ("Empty cells", "An empty cell is a value that is not known or does not exist, never zero; a column says why."),
    ("Ratios", "A ratio to today is the value with the candidate over the value with the refrigerant in the plant."),
    ("Verdicts", "A verdict covers what was checked here and nothing else; none says that a plant is without danger."),
)
AS_IS = (
    "Savings, net present value and CO2e avoided are against the plant as it is; above 0 the option saves, below 0 it "
    "costs or emits more."
)
BOUNDS = (
    "A sum that the column Lower bounds names lacks an item and is at least what stands there. Comparison says whether "
    "a saving counts every item; it is incomplete where one is known for only one of the two, and then left empty."
)
PRICES = "Prices stay as they are today, in the currency that the heading names; nothing is converted."
Row = tuple[str, str, str, str]


def read_me_sheet(comparison: Comparison, units: UnitSystem, made_at: datetime) -> Sheet:
    """Return the sheet.

    Args:
        comparison: An assessed result.
        units: The reader's units.
        made_at: The time to print.
    """
    life = _life(comparison, units) if comparison.life else ()
    rows = (*_about(comparison, units, made_at), *_cautions(comparison), *life, *_reading(comparison))
    return Sheet("Read me", 2, COLUMNS, tuple(rows))


def _about(comparison: Comparison, units: UnitSystem, made_at: datetime) -> Iterator[Row]:
    case = comparison.case
    yield "Report", "Refrigerant changeover, comparison of options", case.title, ""
    if case.about:
        yield "Report", "Plant", case.about, ""
    found = answer(comparison, units)
    yield "Report", "Answer", spelled(found.headline), ""
    for text in found.contradictions:
        yield "Report", "Readings against the model", spelled(text), ""
    yield "Report", "Case file", PurePath(case.path).name, ""
    yield "Report", "Made", made_at.isoformat(timespec="minutes"), ""
    yield "Report", "Units", {"si": "metric", "ip": "inch-pound"}[units.name], ""
    for name, version in versions_of(comparison).items():
        yield "Report", f"Version of {name}", version, ""
    if comparison.law:
        yield "Report", "Tables of law read for", comparison.law.on.isoformat(), ""
    yield "Report", "Fingerprint of the result", fingerprint(comparison), ""


def _cautions(comparison: Comparison) -> Iterator[Row]:
    yield "Caution", "All refrigerants", DEFERENCE, ""
    for group in caution_groups(comparison):
        for item in group.items:
            yield "Caution", item.about, f"{item.caution.title}. {item.caution.text}", item.caution.source
    for text in not_checked(comparison):
        yield "Not checked", "", spelled(text), ""


def _reading(comparison: Comparison) -> Iterator[Row]:
    yield "How to read", "Convention", convention(comparison), ""
    for about, text in READING:
        yield "How to read", about, text, ""
    has_year = comparison.life is not None and comparison.life.asked is not None
    for name, text in HELD.items():
        if name != "Year" or has_year:
            yield "Sheet", name, text, ""


def _life(comparison: Comparison, units: UnitSystem) -> Iterator[Row]:
    """Yield the answer of the remaining life, how it was drawn, and what is left out."""
    topic, words, life = "Remaining life", outlook(comparison, units), life_of_result(comparison)
    if calibrated := calibration_text(comparison, units):
        yield topic, "Calibration", spelled(calibrated), ""
    for text in (*(matter.text for matter in words.matters), words.stopped, words.meter, words.swing, *words.ranking):
        if text:
            yield topic, "Answer", spelled(text), ""
    yield topic, "Differences", AS_IS, ""
    if life.certainty:
        yield topic, "Draws", str(life.draws), ""
        yield topic, "Seed", str(life.seed), ""
    for text in method(comparison):
        yield topic, "How sure it is", spelled(text), ""
    if comparison.case.emissions:
        yield topic, "How warming is reckoned", FORMULA, ""
        for text in left_out(comparison):
            yield topic, "Left out, as in every TEWI", text, ""
    if comparison.case.money:
        for name, text in FORMULAS.items():
            yield topic, f"How {name} is reckoned", text, ""
        yield topic, "Money", PRICES, ""
        yield topic, "Sums", BOUNDS, ""
