"""The JSON of the hardware table and of the plant as installed: every number with its unit, nothing invented."""

import json
from dataclasses import fields

import pytest

from retrofit.checks import assess
from retrofit.report.machine import comparison_json
from retrofit.study import Performance, compare
from retrofit.units import SI, told

AIR = {"medium": "air", "arrangement": "crossflow"}
TABLES = {
    "evaporator": {**AIR, "inlet": "2 degC", "outlet": "-2 degC"},
    "condenser": {**AIR, "inlet": "32 degC", "outlet": "37 degC"},
    "plant": {"high_side_limit": "28 bar g", "highest_ambient": "38 degC"},
    "controls": {"low_pressure_cut_out": "1.5 bar g"},
}


@pytest.fixture(scope="module")
def comparison(case_with):
    """Return an assessed comparison of a plant that balances, with a candidate that is not computed."""
    return assess(compare(case_with("R404A", ["R448A", "R744"], **TABLES)))


@pytest.fixture(scope="module")
def read(comparison):
    """Return its JSON, written and read."""
    return json.loads(json.dumps(comparison_json(comparison), allow_nan=False))


def test_each_component_is_the_one_of_the_result(comparison, read):
    """Code, verdict, reason, threshold, source and what to ask, row by row, computed or not."""
    for entry, written in zip(comparison.entries, [read["existing"], *read["candidates"]], strict=True):
        assert len(written["hardware"]) == len(entry.hardware) > 0
        for item, row in zip(entry.hardware, written["hardware"], strict=True):
            for name in ("code", "name", "verdict", "reason", "threshold", "source", "ask"):
                assert row[name] == told(getattr(item, name), SI)
            values = [(measure["old"], measure["new"]) for measure in row["measures"]]
            assert values == [(measure.old, measure.new) for measure in item.measures]


def test_each_measure_names_kind_and_unit(read):
    """Gauge pressures say that they count from the air."""
    measures = [m for entry in read["candidates"] for row in entry["hardware"] for m in row["measures"]]

    assert all(measure["kind"] and measure["unit"] for measure in measures)
    assert {m["unit"] for m in measures if m["kind"] == "gauge pressure"} == {"Pa above the air at the plant"}


def test_the_plant_as_installed_is_told_where_it_balances(comparison, read):
    """The performance at full, the same cooling, and how the duty is met; null for what is not computed."""
    found, plant = comparison.existing.plant, read["existing"]["plant"]

    assert {item.name: plant[item.name] for item in fields(Performance)} == {
        item.name: getattr(found.full, item.name) for item in fields(Performance)
    }
    assert plant["same_cooling"]["cop"] == found.same_cooling.cop
    assert plant["operation"]["run_time_fraction"] == found.operation.run_time_fraction
    assert [plant["ua_factors"][way]["factor"] for way in ("evaporator", "condenser")] == [1.0, 1.0]
    assert {one["origin"] for one in plant["ua_factors"].values()} == {"today"}
    assert plant["conductances_W_per_K"] == list(found.conductances_W_per_K)
    assert read["candidates"][1]["plant"] is None
