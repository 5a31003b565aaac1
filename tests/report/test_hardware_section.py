"""The hardware on the page: a verdict for each component, the numbers behind it, and unknown that never looks good."""

import re
from dataclasses import replace

import pytest

from retrofit.checks import assess
from retrofit.report import render_html
from retrofit.report.hardware import hardware
from retrofit.study import Component, Measure, compare
from retrofit.study.hardware.numbers import OldNew, Setting
from retrofit.units import IP, SI, told

BLANK, VERDICTS = "\N{NO-BREAK SPACE}", ("keep", "adjust", "replace", "unknown")


def component(code, verdict, *measures, reason="It is so.", ask="Ask the maker.", threshold="above 1"):
    """Return a component as a check gives it."""
    return Component(code, code.capitalize(), verdict, measures, reason, threshold, "a book", ask)


@pytest.fixture(scope="module")
def plain(case_of):
    """Return a comparison of 12 candidates."""
    names = ["R448A", "R449A", "R452A", "R407A", "R407C", "R407F", "R407H", "R454C", "R455A", "R32", "R290", "R744"]
    return assess(compare(case_of(candidates=names)))


def with_hardware(comparison, make):
    """Return the comparison with the components that `make` gives for each place, today's first."""
    entries = [replace(entry, hardware=tuple(make(place))) for place, entry in enumerate(comparison.entries)]
    return replace(comparison, existing=entries[0], candidates=tuple(entries[1:]))


def test_every_verdict_of_the_result_is_in_the_matrix(shipped, assessed, page_of, read_page):
    """Components are rows, refrigerants columns, and each cell is the verdict of the result."""
    result, page = assessed(shipped), read_page(page_of(shipped, "si"))
    shown = {}
    for rows in (rows for name, rows in page.tables.items() if re.fullmatch(r"t-hardware-\d+", str(name))):
        for row in rows[1:]:
            shown |= {(name, row[0]): word for name, word in zip(rows[0][1:], row[1:], strict=True)}

    assert len(shown) > 50
    for entry in result.entries:
        for item in entry.hardware:
            name = re.sub(r"\bR(?=\d)", "R-", item.name)
            assert shown[entry.refrigerant.display_name, name] == item.verdict
    judged = {entry.refrigerant.display_name for entry in result.entries if entry.hardware}
    assert {word for (name, _), word in shown.items() if name not in judged} <= {"not judged", "–"}


def test_reasons_thresholds_sources_and_questions_are_told(shipped, assessed, page_of, read_page):
    """What each component of each refrigerant rests on stands on the page."""
    text = " ".join(read_page(page_of(shipped, "si")).text.split()).replace(BLANK, " ")

    def spelled(words):
        return " ".join(re.sub(r"(?<=[0-9])%", " %", re.sub(r"\bR(?=[0-9])", "R-", words.replace("`", ""))).split())

    result = assessed(shipped)
    shown = [(entry, item) for entry in result.candidates for item in entry.hardware]
    shown += [(result.existing, item) for item in result.existing.hardware if item.verdict != "keep"]
    for entry, item in shown:
        for sentence in re.split(r"(?<=\.) (?=[A-Z`])", told(item.reason, SI)):
            assert spelled(sentence.replace(entry.refrigerant.designation, "this refrigerant")) in text
    for entry in result.candidates:
        for item in entry.hardware:
            assert spelled(told(item.threshold, SI)) in text
            assert spelled(item.ask.replace(entry.refrigerant.designation, "this refrigerant")) in text


@pytest.mark.parametrize(
    ("units", "unit", "cells"),
    [  # 2 and 3 bar: 2e5 / 6894.757 = 29.0 and 43.5 psi
        (SI, "bar g", ["2.00", "3.00", "–"]),
        (IP, "psig", ["29.0", "43.5", "–"]),
    ],
)
def test_numbers_are_today_s_first_and_in_the_reader_s_units(plain, units, unit, cells):
    """A measure that differs is a column; one not known for a refrigerant is a dash, never left as today's."""
    new = [2e5, 3e5, None]
    result = with_hardware(
        replace(plain, candidates=plain.candidates[:2]),
        lambda place: [component("valve", "keep", Measure("Pressure", "gauge pressure", 2e5, new[place]))],
    )
    (block,) = hardware(result, units).differing

    assert block.headings == (("Pressure", unit),)
    assert [line.cells[0] for line in block.lines] == cells


def test_what_is_the_same_everywhere_is_told_once(plain):
    """A component with one verdict, one reason and no number that changes is one row for all candidates."""
    measure = Measure("Rated current", "current", 120.0, 120.0)
    result = with_hardware(plain, lambda place: [component("motor", "unknown", measure, reason="Not known: a.")])
    found = hardware(result, SI)

    assert found.differing == ()
    assert [(block.verdict, block.reason) for block in found.alike] == [("unknown", "Not known: a.")]
    assert found.alike[0].constants == (f"Rated current 120.0{BLANK}A",)


def test_a_designation_in_a_text_does_not_make_texts_different(plain):
    """A question that names the refrigerant is asked once, of this refrigerant."""

    def make(place):
        name = plain.entries[place].refrigerant.designation
        return [component("metals", "unknown", ask=f"Every metal that {name} touches.")]

    (block,) = hardware(with_hardware(plain, make), SI).alike

    assert [item.ask for item in block.held] == ["Every metal that this refrigerant touches."]


def test_thresholds_that_differ_name_the_refrigerants_they_are_for(plain):
    """Where candidates are held against different numbers each is told with its names."""
    result = with_hardware(
        replace(plain, candidates=plain.candidates[:2]),
        lambda place: [component("oil", "keep", reason=f"Case {place}.", threshold=f"above {place}")],
    )
    (block,) = hardware(result, SI).differing

    assert [(item.about, item.threshold) for item in block.held] == [("R-448A", "above 1"), ("R-449A", "above 2")]


def test_a_component_that_was_not_judged_never_reads_as_kept(plain):
    """A candidate without hardware is not judged; today's refrigerant without that component has a dash."""

    def make(place):
        return [] if place == 0 else [component("relief", VERDICTS[place % 4])] if place < 12 else []

    (first, second) = hardware(with_hardware(plain, make), SI).matrices
    words = dict(zip(first.columns + second.columns, first.rows[0][1] + second.rows[0][1], strict=True))

    assert words["R-404A"] == "–"
    assert words["R-744"] == "not judged"
    assert words["R-448A"] == "adjust"


def test_twelve_candidates_stand_in_parts_that_fit_a_page(plain, made_at, read_page):
    """No matrix has more than seven refrigerants, and together they have all of them in order."""
    result = with_hardware(plain, lambda place: [component("relief", VERDICTS[place % 4], reason=f"Case {place}.")])
    page = read_page(render_html(result, made_at=made_at))
    parts = [rows[0][1:] for name, rows in page.tables.items() if re.fullmatch(r"t-hardware-\d+", str(name))]

    assert max(map(len, parts)) <= 7
    assert [name for part in parts for name in part] == [entry.refrigerant.display_name for entry in result.entries]
    assert len(page.tables["t-component-relief"]) == 1 + len(result.entries)


def test_without_any_component_the_section_says_so(case_of, made_at, read_page):
    """The section stays, and there is no table that could look complete."""
    nothing = with_hardware(assess(compare(case_of("R404A", ["R448A"]))), lambda place: [])
    page = read_page(render_html(nothing, made_at=made_at))

    assert "No component was judged" in page.text
    assert not [name for name in page.tables if str(name).startswith("t-hardware")]


def test_set_points_go_from_old_to_new_gauge_pressure(assessed, made_at, read_page):
    """Today's column has the old setting, each candidate's the new one, less the air: 4.01325 bar a is 3.00 bar g."""

    def with_settings(entry, p_Pa, reason=""):
        setting = Setting("rack_set_point", "Set point", "mean evaporating", 266.15, OldNew(4.01325e5, p_Pa), reason)
        return replace(entry, hardware_numbers=replace(entry.hardware_numbers, settings=(setting,)))

    result = assessed("harbour-market")
    first, second, *_ = result.candidates
    changed = replace(
        result,
        existing=with_settings(result.existing, 4.01325e5),
        candidates=(with_settings(first, 3.51325e5), with_settings(second, None, "no pressure found")),
    )
    page = read_page(render_html(changed, made_at=made_at))
    row = page.tables["t-settings"][2]

    assert row == ["Set point: mean evaporating, −7.0 °C", "bar g", "3.00", "2.50", "–"]
    assert f"{second.refrigerant.display_name}: no pressure found" in page.text


def test_unknown_is_set_off_without_colour(page_of):
    """Each verdict has its own bar; that of unknown and not judged is broken, as among the findings."""
    html = page_of("harbour-market", "si")

    assert '<span class="verdict-mark unknown">unknown</span>' in html
    assert re.search(r"\.verdict-mark\.unknown, \.verdict-mark\.not-judged \{[^}]*dotted", html)
    assert re.search(r"\.verdict-mark\.replace \{[^}]*6px solid", html)
