"""The plant as installed in the terminal: the basis same plant, the hardware in words, at any width."""

import re
from dataclasses import replace

import pytest

from retrofit.checks import assess
from retrofit.report.terminal import comparison_text
from retrofit.study import compare
from retrofit.units import IP, SI

RULE = "───"


def block(text, start):
    """Return the lines of the block that begins with some words."""
    lines = text.split("\n")
    at = next(i for i, line in enumerate(lines) if line.startswith(start))
    return lines[at : at + lines[at:].index("")]


def cells(text, designation):
    """Return the cells of a refrigerant in the table same plant."""
    row = next(line for line in block(text, "Same plant") if line.startswith(designation))
    return re.split(r"\s{2,}", row)[1:]


def number(cell):
    """Return a cell as a number."""
    return float(re.sub(r"[≈%\s\u202f]", "", cell).replace("−", "-"))


def test_numbers_of_the_same_plant_are_the_results(assessed):
    """Dew points, discharge, cooling, changes, running time and what is lacking, rounded to the digits shown."""
    result = assessed("harbour-market")
    text = comparison_text(result, SI, 100)
    *others, new_plant = result.candidates
    assert new_plant.is_new_plant
    for entry in others:
        evap, cond, discharge, cooling, capacity, cop, runs, lacks = cells(text, entry.refrigerant.display_name)

        assert number(evap) == pytest.approx(entry.plant.full.T_evap_dew_K - 273.15, abs=0.051)
        assert number(cond) == pytest.approx(entry.plant.full.T_cond_dew_K - 273.15, abs=0.051)
        assert number(discharge) == pytest.approx(entry.plant.full.T_discharge_K - 273.15, abs=0.051)
        assert number(cooling) == pytest.approx(entry.plant.full.cooling_W / 1e3, abs=0.051)
        assert number(capacity) == pytest.approx(100 * (entry.relative["plant_capacity"] - 1), abs=0.051)
        assert number(cop) == pytest.approx(100 * (entry.relative["plant_cop_same_cooling"] - 1), abs=0.051)
        assert number(runs) == pytest.approx(100 * entry.plant.operation.run_time_fraction, abs=0.51)
        unmet = entry.plant.operation.unmet_W
        assert lacks == "·" if unmet == 0 else number(lacks) == pytest.approx(unmet / 1e3, abs=0.051)
    assert "COP at the same cooling" in text


REASON = "R-454C not computed: a new plant is sized for the duty, and is not computed on the existing machine."


@pytest.mark.parametrize("basis", ["Same compressor", "Same plant"])
def test_a_new_plant_has_no_row_on_the_existing_machine_and_its_reason(basis, assessed):
    """Below the rows of the others stands why, and the table of the same duty has it."""
    text = comparison_text(assessed("harbour-market"), SI, 100)

    assert block(text, basis)[-1] == REASON
    assert sum(line.startswith("R-454C") for line in block(text, basis)) == 1
    assert sum(line.startswith("R-454C") for line in block(text, "Same duty")) == 1


def test_without_exchangers_a_new_plant_is_told_apart(assessed):
    """A conversion lacks [condenser]; a new plant would not be computed with it either."""
    result = assess(compare(replace(assessed("harbour-market").case, condenser=None, year=None)))
    lines = block(comparison_text(result, SI, 100), "Same plant")

    assert lines[1:] == ["Not computed: the case does not describe the exchangers: give [condenser].", REASON]


def test_the_speed_has_a_column_only_where_it_changes(assessed):
    """The heat pump of variable speed has one, the rack of fixed speed none."""
    assert "Speed" in "\n".join(block(comparison_text(assessed("coast-heat-pump"), SI, 100), "Same plant"))
    assert "Speed" not in "\n".join(block(comparison_text(assessed("harbour-market"), SI, 100), "Same plant"))


def test_inch_pound_units_are_used(assessed):
    """Degrees Fahrenheit and tons."""
    heading = "\n".join(block(comparison_text(assessed("harbour-market"), IP, 100), "Same plant"))

    assert "°F" in heading
    assert "ton" in heading
    assert "°C" not in heading


def test_a_point_beyond_the_compressor_s_data_is_marked(assessed):
    """An asterisk at the name, and what it means under the table."""
    result = assessed("harbour-market")
    first = result.candidates[0]
    outside = replace(first, plant=replace(first.plant, is_covered=False))
    text = comparison_text(replace(result, candidates=(outside, *result.candidates[1:])), SI, 100)
    lines = block(text, "Same plant")

    assert [line.split(" ")[0] for line in lines if "*" in line] == ["R-448A*", "*"]
    assert "outside the data of the compressor" in lines[-2]
    assert lines[-1] == REASON


def test_a_refrigerant_without_the_basis_has_its_reason(assessed):
    """It is not in the table, and a line says why."""
    result = assessed("harbour-market")
    lost = replace(result.candidates[0], plant=None, plant_reason="no pressures balance it")
    text = "\n".join(block(comparison_text(replace(result, candidates=(lost,)), SI, 100), "Same plant"))

    assert "R-448A not computed: no pressures balance it." in text


def test_without_exchangers_the_basis_says_what_to_give(case_of):
    """One line instead of a table."""
    lines = block(comparison_text(assess(compare(case_of())), SI, 100), "Same plant")

    assert (
        " ".join(lines[1:])
        == "Not computed: the case does not describe the exchangers: give [evaporator] and [condenser]."
    )


@pytest.mark.parametrize("columns", [60, 100, 200])
def test_every_verdict_is_shown_within_the_columns(assessed, columns):
    """Components are rows; refrigerants that do not fit beside each other go on below, none left out."""
    result = assessed("desert-split")
    text = comparison_text(result, SI, columns)
    part = text[text.index("\nHardware: ") : text.index("Charge against the room")]
    tables = [lines for lines in (piece.split("\n") for piece in part.split("\n\n")) if any(RULE in x for x in lines)]
    heads, rows = [], {}
    for lines in tables:
        at = next(i for i, line in enumerate(lines) if line.startswith(RULE))
        heads += re.split(r"\s{2,}", lines[at - 1].strip())
        for line in lines[at + 1 :]:
            name, *words = re.split(r"\s{2,}", line)
            rows.setdefault(name, []).extend(words)

    assert heads == ["today", *(entry.refrigerant.display_name for entry in result.candidates)]
    assert max(len(line) for lines in tables for line in lines if not line.startswith("Hardware")) <= columns
    for place, entry in enumerate(result.entries):
        for item in entry.hardware:
            assert rows[item.name][place] == item.verdict


def test_prose_on_plant_and_baseline_keeps_within_the_columns(assessed):
    """Only tables may be wider than 60 columns."""
    text = comparison_text(assessed("harbour-market"), SI, 60)
    lines = [*block(text, "The plant as found"), *block(text, "Same plant")[:4]]

    assert max(map(len, lines)) <= 60
