"""The basis same plant on the page: numbers of the result, reasons where there are none, and what is marked.

The harbour market's last option is a new plant, which is not computed on the existing machine: its cells are dashes.
"""

import re
from dataclasses import replace

import pytest

from retrofit.checks import assess
from retrofit.report import render_html
from retrofit.report.plant import WHY_SAME_COOLING, plant_reason
from retrofit.study import compare
from retrofit.study.bands import pair_band
from retrofit.study.result import UAFactor

KELVIN = 273.15
ROWS = {  # label and unit in SI: value of the result in that unit
    ("Evaporating, dew point", "°C"): lambda plant: plant.full.T_evap_dew_K - KELVIN,
    ("Evaporating, mean", "°C"): lambda plant: plant.full.T_evap_mean_K - KELVIN,
    ("Condensing, dew point", "°C"): lambda plant: plant.full.T_cond_dew_K - KELVIN,
    ("Condensing, mean", "°C"): lambda plant: plant.full.T_cond_mean_K - KELVIN,
    ("Evaporating pressure, gauge", "bar g"): lambda plant: plant.full.p_evap_Pa / 1e5 - 1.01325,
    ("Condensing pressure, gauge", "bar g"): lambda plant: plant.full.p_cond_Pa / 1e5 - 1.01325,
    ("Pressure ratio", ""): lambda plant: plant.full.p_cond_Pa / plant.full.p_evap_Pa,
    ("Discharge temperature", "°C"): lambda plant: plant.full.T_discharge_K - KELVIN,
    ("Cooling at full", "kW"): lambda plant: plant.full.cooling_W / 1e3,
    ("Compressor power at full", "kW"): lambda plant: plant.full.power_W / 1e3,
    ("COP at full", ""): lambda plant: plant.full.cooling_W / plant.full.power_W,
    ("COP at the same cooling", ""): lambda plant: plant.same_cooling.cooling_W / plant.same_cooling.power_W,
    ("Running, share of the time", "%"): lambda plant: 100 * plant.operation.run_time_fraction,
    ("Compressor power, mean over the time", "kW"): lambda plant: plant.operation.mean_power_W / 1e3,
}
CHANGES = {
    "Cooling against today": ("plant_capacity", "capacity"),
    "COP at full against today": ("plant_cop", "cop"),
    "COP at the same cooling against today": ("plant_cop_same_cooling", "cop"),
    "Mean power against today": ("plant_mean_power", "capacity"),
}


def number(text):
    """Return the number of a cell without the sign of the band, and half a unit of its last digit."""
    plain = re.sub(r"[≈\s\u202f]", "", text).replace("−", "-")
    return float(plain), 0.5 * 10.0 ** -len(plain.partition(".")[2])


def on_the_machine(entries):
    """Return the refrigerants before the last, which is the one new plant."""
    *others, last = entries
    assert [last.is_new_plant, last.plant] == [True, None]
    assert not any(entry.is_new_plant for entry in others)
    return others


@pytest.fixture(scope="module")
def rows(page_of, read_page):
    """Return the rows of the comparison table of the harbour market from the basis same plant on."""
    table = read_page(page_of("harbour-market", "si")).tables["t-comparison"]
    start = next(i for i, row in enumerate(table) if row[0].startswith("Basis: same plant"))
    return table[start:]


@pytest.mark.parametrize(("label", "unit"), ROWS)
def test_the_rows_show_the_numbers_of_the_result(label, unit, rows, assessed):
    """Each cell is the number of the result on this basis within half its last digit."""
    row = next(row for row in rows if row[0] == label)

    assert row[1] == unit
    assert row[-1] == "–"
    for cell, entry in zip(row[2:-1], on_the_machine(assessed("harbour-market").entries), strict=True):
        shown, half = number(cell)
        assert shown == pytest.approx(ROWS[label, unit](entry.plant), abs=1.001 * half)


@pytest.mark.parametrize("label", CHANGES)
def test_changes_against_today_carry_the_sign_of_the_band(label, rows, assessed):
    """Changes are the ratios of the result, and those within the band of the model begin with ≈."""
    row, (name, quantity) = next(row for row in rows if row[0] == label), CHANGES[label]
    existing = assessed("harbour-market").existing

    assert row[2] == row[-1] == "–"
    for cell, entry in zip(row[3:-1], on_the_machine(assessed("harbour-market").candidates), strict=True):
        assert number(cell)[0] == pytest.approx(100 * (entry.relative[name] - 1), abs=0.501)
        assert cell.startswith("≈") == (abs(entry.relative[name] - 1) <= pair_band(existing, entry, quantity))


@pytest.mark.parametrize(("case", "at_least_W"), [("harbour-market", 1.0), ("office-chiller", 1e3)])
def test_cooling_that_is_lacking_is_told_and_none_where_none_is(case, at_least_W, assessed, page_of, read_page):
    """A refrigerant that runs all the time and lacks cooling says how much, the others none, a new plant a dash."""
    table = read_page(page_of(case, "si")).tables["t-comparison"]
    row = next(row for row in table if row[0].startswith("Cooling it lacks"))
    entries = assessed(case).entries
    lacking = [entry.plant.operation.unmet_W if entry.plant else None for entry in entries]

    assert [value is None for value in lacking] == [entry.is_new_plant for entry in entries]
    assert lacking.count(None) == 1
    assert max(filter(None, lacking)) > at_least_W
    for cell, value in zip(row[2:], lacking, strict=True):
        if not value:
            assert cell == ("–" if value is None else "none")
        else:
            assert number(cell)[0] == pytest.approx(value / 1e3, abs=0.0501)


def test_why_a_cop_is_compared_at_the_same_cooling_is_told(page_of, read_page):
    """The sentence stands above the table; the basis is explained in plain words and among the terms."""
    text = " ".join(read_page(page_of("harbour-market", "si")).text.split())

    assert WHY_SAME_COOLING in text
    assert "pressures float until all three agree" in text
    assert "Same duty, same compressor, same plant" in text


def test_a_plant_without_exchangers_says_what_to_give(case_of, made_at, read_page):
    """The basis is there with its reason: the tables to fill in; the sentence on its COP is not."""
    text = read_page(render_html(assess(compare(case_of())), made_at=made_at)).text

    assert "the case does not describe the exchangers: give [evaporator] and [condenser]" in text
    assert "not computed on the basis same plant" in text
    assert WHY_SAME_COOLING not in " ".join(text.split())


def page_with(comparison, made_at, read_page, **changes):
    """Return the rows of the comparison table with the plant of the first candidate changed."""
    first = comparison.candidates[0]
    other = replace(first, plant=replace(first.plant, **changes))
    changed = replace(comparison, candidates=(other, *comparison.candidates[1:]))
    return read_page(render_html(changed, made_at=made_at)).tables["t-comparison"]


def test_a_point_beyond_the_compressor_s_data_is_marked(assessed, made_at, read_page):
    """The row says no for that refrigerant alone."""
    table = page_with(assessed("harbour-market"), made_at, read_page, is_covered=False)
    row = next(row for row in table if row[0] == "Inside the compressor's data")

    assert row[2:] == ["yes", "no", "yes", "yes", "yes", "yes", "–"]


def test_ua_factors_and_what_they_do_are_told_if_there_are_any(assessed, made_at, read_page):
    """0.9 of the case and a calculated 0.95 stand in their rows, with what the second rests on; cooling −5 %."""
    result = assessed("harbour-market")
    cooling = result.candidates[0].plant.full.cooling_W
    factors = UAFactor.alone(0.9, "given"), UAFactor(0.95, 0.91, 0.99, "calculated", "dry coil", 0.2, 0.77, 5.0, 0.8)
    table = page_with(result, made_at, read_page, ua_factors=factors, cooling_with_equal_ua_W=cooling / 0.95)
    labels = {row[0]: row for row in table}

    assert labels["UA factor of the evaporator, calculated, not measured"][3] == "0.9"
    assert labels["UA factor of the condenser, calculated, not measured"][3] == "0.95 (0.91 to 0.99)"
    assert labels["Flow, share of the film: evaporator"][3] == "as the case gives it"
    assert labels["Flow, share of the film: condenser"][3] == "flow × 0.77; 20 % (10 to 30 %)"
    assert labels["What the UA factors do to the cooling"][3] == "−5"


def test_without_ua_factors_there_are_no_rows_of_them(assessed, made_at, read_page):
    """Rows of ones would only take room."""
    result, ones = assessed("harbour-market"), (UAFactor.alone(1.0, "given"),) * 2
    entries = [
        entry if entry.plant is None else replace(entry, plant=replace(entry.plant, ua_factors=ones))
        for entry in result.candidates
    ]
    page = read_page(render_html(replace(result, candidates=tuple(entries)), made_at=made_at))

    assert not [row for row in page.tables["t-comparison"] if "UA factor" in row[0]]


def test_a_refrigerant_that_does_not_balance_has_no_numbers_and_its_reason(assessed, made_at, read_page):
    """One that the plant cannot run with, and a new plant, read as a dash, their reasons among the notes."""
    result = assessed("harbour-market")
    first = replace(result.candidates[0], plant=None, plant_reason="no pressures balance it")
    changed = replace(result, candidates=(first, *result.candidates[1:]))
    page = read_page(render_html(changed, made_at=made_at))
    text = " ".join(page.text.split())
    row = next(row for row in page.tables["t-comparison"] if row[0] == "Cooling at full")

    assert [cell == "–" for cell in row[2:]] == [False, True, False, False, False, False, True]
    assert "R-448A: not computed on the basis same plant: no pressures balance it" in text
    assert "R-454C: not computed on the basis same plant: a new plant is sized for the duty" in text


def test_a_new_plant_is_not_sent_to_the_tables_of_the_exchangers(assessed, made_at, read_page):
    """Without [condenser] a conversion lacks that table; a new plant would not be computed with it either."""
    result = assess(compare(replace(assessed("harbour-market").case, condenser=None, year=None)))
    reasons = {entry.refrigerant.designation: plant_reason(result, entry) for entry in result.entries}

    assert reasons["R448A"] == "the case does not describe the exchangers: give [condenser]"
    assert reasons["R454C"] == "a new plant is sized for the duty, and is not computed on the existing machine"
    assert reasons["R454C"] in " ".join(read_page(render_html(result, made_at=made_at)).text.split())


def test_a_plant_of_variable_speed_shows_its_speed(assessed, page_of, read_page):
    """R-32 in the heat pump runs slower than full: the row of speeds is there, with its share."""
    result = assessed("coast-heat-pump")
    table = read_page(page_of("coast-heat-pump", "si")).tables["t-comparison"]
    row = next(row for row in table if row[0] == "Speed while it runs, share of full")

    for cell, entry in zip(row[2:], result.entries, strict=True):
        if entry.plant:
            assert number(cell)[0] == pytest.approx(100 * entry.plant.operation.speed_fraction, abs=0.501)
    assert "Speed while it runs" not in str(read_page(page_of("bottle-cooler", "si")).tables["t-comparison"])


def test_both_cooling_charts_stand_side_by_side_and_no_third_panel_without_the_basis(page_of):
    """With exchangers there is a chart of cooling and one of COP, each on two bases; without one of both."""
    with_plant, without = page_of("harbour-market", "si"), page_of("ice-rink", "si")

    for label in ("Cooling, same compressor", "Cooling, same plant", "COP, same duty", "COP, same plant and cooling"):
        assert f"{label}, against today [%]" in with_plant
    assert 'id="change-cop-title"' in with_plant
    assert 'id="change-cop-title"' not in without
    assert "Cooling, same plant" not in without
