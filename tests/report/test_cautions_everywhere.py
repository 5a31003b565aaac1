"""Every refrigerant of the catalogue brings its cautions wherever it is shown: HTML, terminal, JSON and CSV."""

from __future__ import annotations

import csv
import datetime
import html
import io
import re

import pytest

from retrofit.checks import assess
from retrofit.refrigerants import cautions_for, change_cautions, designations, find, with_hyphens
from retrofit.report import render_html
from retrofit.report.catalogue import catalogue_text, refrigerant_text
from retrofit.report.machine import comparison_csv, comparison_json
from retrofit.report.terminal import comparison_text
from retrofit.study import Comparison, compare
from retrofit.units import SI

EXISTING = "R404A"
OTHERS = [name for name in designations() if name != EXISTING]
GROUPS = [OTHERS[i : i + 20] for i in range(0, len(OTHERS), 20)]
MADE_AT = datetime.datetime(2026, 12, 1, tzinfo=datetime.UTC)
DEFERENCE = ("ASHRAE", "local code", "licensed practice")


@pytest.fixture(scope="module", params=range(len(GROUPS)), ids=lambda i: f"group{i + 1}")
def result(request: pytest.FixtureRequest, case_of) -> Comparison:
    """Return an assessed comparison with a part of the catalogue as candidates."""
    return assess(compare(case_of(EXISTING, GROUPS[request.param])))


def expected(comparison: Comparison) -> dict[str, set[str]]:
    """Return the texts of the cautions each refrigerant has to bring, straight from the catalogue."""
    old = comparison.existing.refrigerant
    return {
        entry.refrigerant.designation: {
            caution.text
            for caution in (
                *cautions_for(entry.refrigerant),
                *(change_cautions(old, entry.refrigerant) if entry.family != "keep" else ()),
            )
        }
        for entry in comparison.entries
    }


def squeezed(text: str) -> str:
    """Return a text with every run of blanks as one, so that wrapping does not matter."""
    return re.sub(r"\s+", " ", text)


def test_html_carries_every_caution_above_the_numbers(result: Comparison) -> None:
    """The report shows the caution text of every refrigerant before the comparison begins."""
    page = html.unescape(render_html(result, units="si", made_at=MADE_AT))
    before = squeezed(re.sub(r"<[^>]+>", "", page[: page.index('id="comparison"')]))

    for name, texts in expected(result).items():
        assert texts, name
        for text in texts:
            assert squeezed(text) in before, name


def test_terminal_carries_every_caution_above_the_numbers(result: Comparison) -> None:
    """The terminal shows them before the first table, whatever its width."""
    for columns in (60, 100):
        printed = squeezed(comparison_text(result, SI, columns).split("Same duty", 1)[0])
        for name, texts in expected(result).items():
            assert with_hyphens(name) in printed
            for text in texts:
                assert squeezed(with_hyphens(text)) in printed, name


def test_json_carries_every_caution(result: Comparison) -> None:
    """Each entry of the JSON has the cautions of its refrigerant, each with code, level, title and source."""
    found = comparison_json(result)
    wanted = expected(result)

    for entry in (found["existing"], *found["candidates"]):
        assert {caution["text"] for caution in entry["cautions"]} == wanted[entry["refrigerant"]]
        assert all(caution["code"] and caution["level"] and caution["source"] for caution in entry["cautions"])


def test_csv_names_every_caution(result: Comparison) -> None:
    """Each line of the CSV names the cautions of its refrigerant."""
    for row in csv.DictReader(io.StringIO(comparison_csv(result))):
        for caution in cautions_for(find(row["refrigerant"])):
            assert caution.title in row["cautions"]


@pytest.mark.parametrize("name", designations())
def test_catalogue_pages_begin_with_the_cautions(name: str) -> None:
    """`retrofit refrigerants NAME` shows the cautions before the first value, and defers in every class caution."""
    item = find(name)
    shown = squeezed(refrigerant_text(item, 100, str).split("Safety class, ASHRAE 34", 1)[0])

    for caution in cautions_for(item):
        assert squeezed(with_hyphens(caution.text)) in shown
    assert all(word in squeezed(refrigerant_text(item, 100, str)) for word in DEFERENCE)


def test_catalogue_list_says_what_each_class_means_first() -> None:
    """The list of refrigerants begins with the title of every class caution, and with the deference."""
    chosen = [find(name) for name in designations()]
    shown = squeezed(catalogue_text(chosen, str).split("R11 ", 1)[0])

    for item in chosen:
        assert squeezed(cautions_for(item)[0].title) in shown
    assert all(word in shown for word in DEFERENCE)
