"""The remaining life in the terminal: cautions first, then numbers, each the one of the JSON."""

import re
from dataclasses import replace

import pytest

from retrofit.report.machine_year import year_json
from retrofit.report.terminal_year import year_text
from retrofit.units import IP, SI

J_PER_KWH = 3.6e6


@pytest.fixture(scope="module")
def text(lived):
    """Return what the terminal shows of a shipped case."""
    return year_text(lived("harbour-market"), SI, 100)


def rows(text, heading):
    """Return the cells of the table under a heading, row by row, without its heads."""
    block = text[text.index(heading) :].split("\n\n")[0].splitlines()
    start = next(place for place, line in enumerate(block) if line.startswith("───"))
    found = [re.split(r" {2,}", line) for line in block[start + 1 :]]
    return [row for row in found if len(row) > 4]


def number(cell):
    """Return the number of a cell."""
    return float(re.sub(r"[\s≈+%\u202f]|beyond", "", cell).replace("−", "-"))


def test_cautions_stand_above_the_numbers(text, lived):
    """Every caution of every refrigerant is there, before the first table."""
    titles = {caution.title for entry in lived("harbour-market").entries for caution in entry.cautions}

    assert titles
    assert all(" ".join(title.split()) in " ".join(text.split()) for title in titles)
    assert text.index("Cautions") < text.index("A year: same plant")


def test_numbers_are_those_of_the_json(text, lived):
    """Electricity, sum of the warming, first cost and payback of every option."""
    told = year_json(lived("harbour-market"))["options"]
    year, warming, money = (
        rows(text, head) for head in ("A year: same", "Warming over the remaining life (", "Money in")
    )

    assert [len(found) for found in (year, warming, money)] == [8, 8, 8]
    for a, b, c, option in list(zip(year, warming, money, told, strict=True))[1:]:
        assert number(a[1]) == pytest.approx(option["year"]["energy_J"] / J_PER_KWH, rel=6e-4)
        tonnes = option["emissions"]["total_kg"] / 1000.0
        assert number(b[7]) == pytest.approx(tonnes, rel=6e-4, abs=0.5)  # whole tonnes
        assert number(c[1]) == pytest.approx(option["money"]["first_cost_currency"]["base"], rel=6e-4)
        assert number(c[4]) == pytest.approx(option["money"]["payback_years"], abs=0.051)
        assert ("beyond" in c[4]) == (option["money"]["payback_years"] > option["emissions"]["life_years"])


def test_what_is_stopped_is_said(lived, text):
    """The gates of the freezer store's options stand in words; the harbour market has none, its last is a new plant."""
    flat = " ".join(year_text(lived("freezer-store"), SI, 100).split())

    assert "Stopped: R-452A (High pressure ratio); " in flat
    assert "R-454C (More hazardous safety class than the plant was designed for)" in flat
    assert "R-744 is not computed, and so not priced or ranked." in flat
    assert "Not ranked, whatever the weights: R-452A (High pressure ratio); " in flat
    assert "Stopped: " not in text
    assert "Not ranked" not in text


def test_what_is_assumed_is_said(text):
    """The meter, the seed and the limits assumed stand in words."""
    flat = " ".join(text.split())

    assert "ratio 1.02" in flat
    assert "Calibrated: power 54 kW read" in flat
    assert "with seed 1" in flat
    assert "Plus or minus assumed for: " in flat


def test_inch_pound_units_reach_every_table(lived):
    """The heat pump in inch-pound units: pounds and degrees Fahrenheit, no kilogram of charge and no kelvin limits."""
    text = year_text(lived("coast-heat-pump"), IP, 100)
    charge = text[text.index("Warming over the remaining life (TEWI)") :].splitlines()[2]

    assert charge.split()[0] == "lb"
    assert "°F" in text
    assert "°C" not in text


def test_hours_without_their_load_are_named(lived):
    """A candidate that leaves load unmet says so beside its lower electricity."""
    comparison = lived("coast-heat-pump")
    short = replace(comparison.life.years["R454B"], unmet_h=41.0, unmet_J=1.2e8)
    life = replace(comparison.life, years={**comparison.life.years, "R454B": short})

    text = " ".join(year_text(replace(comparison, life=life), SI, 100).split())

    assert "some of it unmet, so that part of a lower electricity is load not met: R-454B 41 h, 33.3 kWh" in text


def test_what_the_case_has_no_table_for_is_said(lived):
    """A case without a year, emissions or money is told what it would need, before anything else."""
    text = " ".join(year_text(lived("bottle-cooler"), SI, 100).split())

    assert (
        "Not computed: the electricity of a year, the warming and first cost and yearly cost. "
        "The case would need [year], [emissions] and [money]."
    ) in text
    assert "Not computed" not in " ".join(year_text(lived("harbour-market"), SI, 100).split())
