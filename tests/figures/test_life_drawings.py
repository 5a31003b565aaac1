"""Figures of the remaining life: described, with their numbers and names in them, the same each time."""

import re
import xml.etree.ElementTree as ET
from pathlib import Path

import numpy as np
import pytest

from retrofit import figures
from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.checks.prospects import leading, prospects
from retrofit.figures.year import along, axis_of
from retrofit.study import compare
from retrofit.study.life import with_life
from retrofit.units import IP, SI

SVG = "{http://www.w3.org/2000/svg}"
CASE = Path(__file__).parents[2] / "cases" / "harbour-market.toml"


@pytest.fixture(scope="module")
def result():
    """Return a shipped case with its remaining life, of few draws."""
    return with_life(assess(compare(read_case(CASE))), draws=30)


@pytest.fixture(scope="module")
def drawings(result):
    """Return every figure of the remaining life by its name."""
    first = leading(result)
    found = [
        figures.energy_chart(result, SI), figures.ambient_chart(result, SI), figures.warming_chart(result),
        figures.payback_chart(result), figures.tornado_chart(result, first, "yearly_saving", SI),
        *(figures.map_chart(option, result.life.asked, SI) for option in prospects(result)[2:4]),
    ]  # fmt: skip
    return {drawing.name: drawing for drawing in found}


def words(drawing):
    """Return the texts written in a figure."""
    return ["".join(text.itertext()).strip() for text in ET.fromstring(drawing.svg).iter(f"{SVG}text")]


def test_each_describes_itself_and_meets_its_references(drawings):
    """Role, title and description are there; no id stands twice; hatches and clips are found in their own figure."""
    seen = []
    for drawing in drawings.values():
        root = ET.fromstring(drawing.svg)
        ids = [element.get("id") for element in root.iter() if element.get("id")]
        used = re.findall(r'url\(#([^)]+)\)|href="#([^"]+)"', drawing.svg)
        assert root.get("role") == "img"
        assert drawing.description
        assert root.find(f"{SVG}desc").text
        assert {one or other for one, other in used} <= set(ids)
        seen += ids
    assert len(seen) == len(set(seen))


def test_every_option_is_named_beside_its_line(result, drawings):
    """All candidates are named in the charts of the year and of warming; keeping the plant in those of the life."""
    names = {entry.refrigerant.display_name for entry in result.candidates}

    assert names <= set(words(drawings["year-energy"]))
    assert names <= set(words(drawings["year-ambient"]))
    assert names | {"R-404A kept"} <= set(words(drawings["warming"]))
    assert any(text.startswith("R-404A kept, 3.") for text in words(drawings["payback"]))


def test_sums_and_paybacks_are_those_of_the_result(result, drawings):
    """The sum beside each bar is its total in tonnes; the years beside a name are first cost over saving."""
    for option in prospects(result):
        total = float(option.account.tewi.total_kg) / 1000.0
        assert f"{total:,.0f}".replace(",", "\u202f") in words(drawings["warming"])
    within = [option for option in prospects(result)[1:] if float(option.account.appraisal.payback_years) <= 8.0]
    for option in within:
        years = float(option.account.first_cost.total) / float(option.account.saving.total)
        assert any(text.endswith(f", {years:.1f} y") for text in words(drawings["payback"]))


def test_refrigerant_is_hatched(drawings):
    """Bars of the refrigerant carry a pattern, so that the parts differ without colour."""
    assert "<pattern" in drawings["warming"].svg
    assert "<pattern" in next(d.svg for name, d in drawings.items() if name.startswith("tornado"))


def test_the_line_against_the_outdoors_is_that_of_the_design_point(result):
    """At the condenser's design inlet the map gives today's cooling at full on the plant as installed, within 0.5 %.

    The map has nodes 2.75 K apart and is read linearly between them; the plant is the same.
    """
    option, entry = prospects(result)[0], result.existing
    axis = axis_of(result, result.life.asked)
    line = along(option.year.map, option.year.map.cooling_W, axis)
    at = np.interp(result.case.condenser.inlet_K, option.year.map.T_sink_K, line)

    assert at == pytest.approx(entry.plant.full.cooling_W, rel=5e-3)


def test_the_same_result_gives_the_same_bytes(result, drawings):
    """Drawing again changes nothing; inch-pound units change the axis."""
    again = figures.ambient_chart(result, SI)

    assert again.svg == drawings["year-ambient"].svg
    assert "Outdoor temperature [°F]" in words(figures.ambient_chart(result, IP))
