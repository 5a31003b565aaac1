"""The plant as found on the page and in the terminal: derived values with what made them, and what does not fit."""

from dataclasses import replace

import pytest

from retrofit.report import render_html
from retrofit.report.terminal import comparison_text
from retrofit.study import Finding
from retrofit.units import SI


def test_derived_values_stand_with_what_they_were_made_from(assessed, page_of, read_page):
    """Each has a row, and what could not be derived names the reading it needs."""
    page, found = read_page(page_of("harbour-market", "si")), assessed("harbour-market").baseline
    rows = {row[0]: row for row in page.tables["t-found"]}
    text = " ".join(page.text.split())

    assert len(found.derived) > 4
    for item in found.derived:
        assert rows[item.name][2] == item.made_from.replace("`", "")
    assert len(found.missing) > 10
    for missing in found.missing:
        assert " ".join(missing.replace("`", "").split()) in text


def test_the_harbour_market_s_readings_say_what_its_survey_says(page_of, read_page):
    """92 A at 400 V, three phases and 0.85 are 54.2 kW by hand (√3·400·92·0.85); 19.01 over 4.61 bar are 4.12."""
    rows = {row[0]: row[1] for row in read_page(page_of("harbour-market", "si")).tables["t-found"]}

    assert rows["Electrical power by the current"] == "54.2 kW"
    assert rows["Pressure ratio"] == "4.12"


def test_a_problem_in_the_readings_is_told_before_the_values(assessed, made_at, read_page):
    """Its level, title, fact, advice and source stand on the page, and in the terminal."""
    result = assessed("harbour-market")
    problem = Finding("odd", "stop", "Current and power disagree", "92 A make 80 kW.", "Read again.", "a book")
    changed = replace(result, baseline=replace(result.baseline, problems=(problem,)))
    html, text = render_html(changed, made_at=made_at), comparison_text(changed, SI, 100)
    shown = " ".join(read_page(html).text.split())

    assert "Current and power disagree" in shown
    assert "92 A make 80 kW. Read again." in shown
    assert html.index("92 A make") < html.index('id="t-found"')
    assert "stop     Current and power disagree. 92 A make 80 kW. Read again." in text
    assert "Nothing in the readings contradicts" not in shown


def places(page):
    """Return the number or letter of each section by its title."""
    headings = [heading.partition(" ") for heading in page.headings]
    return {title: place for place, _, title in headings if place.isdigit() or (len(place) == 1 and place.isupper())}


@pytest.mark.parametrize("name", ["harbour-market", "trailer"])
def test_the_section_is_there_with_readings(name, page_of, read_page):
    """It follows the cautions, and the sections after it are counted on."""
    found = places(read_page(page_of(name, "si")))
    titles = list(found)

    assert titles.index("The plant as found") == titles.index("Cautions by safety class") + 1
    assert found["The plant as found"] == "4"
    assert int(found["Comparison on three bases"]) > 4


def test_without_readings_there_is_no_section_and_no_gap(assessed, made_at, read_page):
    """Main part and annex are counted without a gap, and the print's footer follows."""
    html = render_html(replace(assessed("harbour-market"), baseline=None), made_at=made_at)
    page = read_page(html)
    found = places(page)
    numbers = [int(place) for place in found.values() if place.isdigit()]
    letters = [place for place in found.values() if not place.isdigit()]

    assert "found" not in page.ids
    assert numbers == list(range(1, len(numbers) + 1))
    assert letters == list("ABCDEFGHIJKLMNOPQRSTUVWXYZ"[: len(letters)])
    assert min(len(numbers), len(letters)) > 5
    assert f"Cautions: section 3. Limits: section {found['Limits: what was not checked']}." in html
    assert "The plant as found" not in comparison_text(replace(assessed("harbour-market"), baseline=None), SI, 100)


def test_the_terminal_tells_the_derived_values(assessed):
    """Values stand in one paragraph, and how many more would need readings."""
    text = " ".join(comparison_text(assessed("harbour-market"), SI, 100).split())

    assert "pressure ratio 4.12" in text
    assert f"{len(assessed('harbour-market').baseline.missing)} more quantities need readings" in text
