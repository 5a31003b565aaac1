"""Figures of a result: valid, described, with the numbers and limits in them, and the same each time."""

import re
import xml.etree.ElementTree as ET
from concurrent.futures import ThreadPoolExecutor

import pytest

from retrofit import figures
from retrofit.checks import assess
from retrofit.study import compare
from retrofit.units import IP, SI

SVG = "{http://www.w3.org/2000/svg}"


@pytest.fixture(scope="module")
def result(case_of):
    """Return an assessed result with a nameplate pressure and a candidate that cannot be computed."""
    plant = {"high_side_limit": "28 bar g"}
    return assess(compare(case_of(candidates=("R448A", "R454C", "R744"), plant=plant)))


@pytest.fixture(scope="module")
def drawings(result):
    """Return every figure of the result."""
    return [
        *figures.overlay_charts(result, SI),
        *(figures.cycle_chart(result, place, SI) for place in range(3)),
        figures.pressure_chart(result, SI),
        figures.discharge_chart(result, SI),
        *figures.change_charts(result),
    ]


def words(drawing):
    """Return the texts written in a figure."""
    return ["".join(text.itertext()).strip() for text in ET.fromstring(drawing.svg).iter(f"{SVG}text")]


def test_a_figure_is_one_svg_that_describes_itself(drawings):
    """Each has role img, a title and a description by id, no size of its own and no style sheet."""
    for drawing in drawings:
        root = ET.fromstring(drawing.svg)
        ids = {element.get("id") for element in root.iter()}
        assert root.tag == f"{SVG}svg"
        assert root.get("role") == "img"
        assert set(root.get("aria-labelledby").split()) <= ids
        assert "width" not in root.attrib
        assert not list(root.iter(f"{SVG}style"))
        assert root.find(f"{SVG}desc").text


def test_ids_differ_between_figures_and_references_are_met(drawings):
    """No id stands in two figures, and every reference has its target in its own figure."""
    seen = []
    for drawing in drawings:
        ids = re.findall(r' id="([^"]+)"', drawing.svg)
        used = re.findall(r'url\(#([^)]+)\)|href="#([^"]+)"', drawing.svg)
        assert {one or other for one, other in used} <= set(ids)
        seen += ids

    assert len(seen) == len(set(seen))


def test_black_is_the_ink_of_the_page_and_text_is_text(drawings):
    """No black is written down, so that a dark page can turn it; words are text in the page's own font."""
    for drawing in drawings:
        assert "#000000" not in drawing.svg
        assert "currentColor" in drawing.svg
        assert "font-family" not in drawing.svg
        assert words(drawing)


def test_the_overlay_names_every_cycle_directly(result):
    """Each refrigerant that was computed is named in the chart, the others are not."""
    (overlay,) = figures.overlay_charts(result, SI)

    assert {"R-404A", "R-448A", "R-454C"} <= set(words(overlay))
    assert "R-744" not in words(overlay)
    assert "nameplate 28.0\N{NO-BREAK SPACE}bar g" in words(overlay)


def test_many_candidates_are_spread_over_several_overlays(case_of):
    """Eight candidates make two charts, with the existing refrigerant in both."""
    names = ("R448A", "R449A", "R407A", "R407F", "R452A", "R454C", "R507A", "R290")
    overlays = figures.overlay_charts(compare(case_of(candidates=names)), SI)

    assert len(overlays) == 2
    assert all("R-404A" in words(overlay) for overlay in overlays)
    assert {word for overlay in overlays for word in words(overlay)} >= {f"R-{name[1:]}" for name in names}


def test_a_cycle_of_another_width_does_not_squeeze_the_others(case_of):
    """Ammonia, whose latent heat is about six times that of R-22, has a chart of its own beside R-22."""
    overlays = figures.overlay_charts(compare(case_of(existing="R22", candidates=("R717", "R407C"))), SI)
    names = [[word for word in words(overlay) if word.startswith("R-")] for overlay in overlays]

    assert [sorted(group) for group in names] == [["R-22", "R-407C"], ["R-22", "R-717"]]


def test_the_pressure_axis_is_logarithmic(result):
    """Equal ratios of pressure lie equally far apart on the axis: 4 to 8 as 10 to 20 and 20 to 40 bar."""
    chart = ET.fromstring(figures.cycle_chart(result, 1, SI).svg)
    heights = {}
    for text in chart.iter(f"{SVG}text"):
        if (value := "".join(text.itertext()).strip()) in ("4", "8", "10", "20", "40") and float(text.get("x")) < 40.0:
            heights[float(value)] = float(text.get("y"))

    assert heights[4] - heights[8] == pytest.approx(heights[10] - heights[20], abs=0.01)
    assert heights[10] - heights[20] == pytest.approx(heights[20] - heights[40], abs=0.01)


def test_a_cycle_chart_numbers_all_points_and_marks_temperatures(result):
    """The numbers 1 to 8 stand in the chart, alone or together, and so do round saturation temperatures."""
    chart = words(figures.cycle_chart(result, 1, SI))
    numbers = {number for word in chart for number in word.split(", ") if re.fullmatch(r"[1-8](, [1-8])*", word)}

    assert numbers >= set("1267")
    assert sum(len(word.split(", ")) for word in chart if re.fullmatch(r"[1-8](, [1-8])+", word)) >= 3
    assert {"0", "10", "20"} <= set(chart)


def test_what_was_not_computed_keeps_its_row_and_says_so(result):
    """A refrigerant without numbers has its row in the charts with the words not computed, and no cycle chart."""
    chart = words(figures.discharge_chart(result, SI))

    assert {"R-744", "not computed"} <= set(chart)
    assert figures.cycle_chart(result, 3, SI) is None


@pytest.mark.parametrize(("units", "levels"), [(SI, ("107", "121")), (IP, ("225", "250"))])
def test_the_levels_of_the_checks_are_drawn_and_named(units, levels, result):
    """Discharge levels stand in the reader's units: 107 and 121 °C are 225 and 250 °F, as the trade press has them."""
    chart = words(figures.discharge_chart(result, units))

    assert f"ask the maker above {levels[0]}" in chart
    assert f"stop above {levels[1]}" in chart


def test_discharge_temperatures_in_the_chart_are_those_of_the_result(result):
    """The value beside each mark is the result's, in whole degrees."""
    chart = words(figures.discharge_chart(result, SI))
    for entry in result.entries[:3]:
        assert f"{entry.duty.T_discharge_K - 273.15:.0f}" in chart


def test_drawing_from_several_threads_gives_the_same_bytes(result):
    """Figures drawn at the same time do not disturb each other."""
    alone = figures.pressure_chart(result, SI).svg
    with ThreadPoolExecutor(4) as pool:
        together = list(pool.map(lambda _: figures.pressure_chart(result, SI).svg, range(4)))

    assert together == [alone] * 4


def test_a_result_without_numbers_draws_no_overlay(case_of):
    """If the existing refrigerant cannot be computed, there is nothing to draw cycles from."""
    result = compare(case_of(existing="R744", candidates=("R448A",)))

    assert figures.overlay_charts(result, SI) == ()
    assert "not computed" in words(figures.pressure_chart(result, SI))
