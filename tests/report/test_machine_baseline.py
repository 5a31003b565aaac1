"""The JSON of a comparison: the plant as found stands in it key by key, or null."""

import json
from dataclasses import replace

import pytest

from retrofit.case.model import CaseFile
from retrofit.checks import assess
from retrofit.report.machine import comparison_json
from retrofit.study import Baseline, Comparison, Derived, Finding, compare


@pytest.fixture(scope="module")
def bare(case_of):
    """Return a comparison of a case without readings."""
    return assess(compare(case_of("R134a", ["R513A"])))


@pytest.fixture(scope="module")
def read(case_of):
    """Return a comparison of a case with a few readings, one of them impossible."""
    case = case_of("R134a", ["R513A"])
    tables = {
        "plant": {"refrigerant": "R134a"},
        "duty": {"cooling": "120 kW", "evaporating": "-8 degC", "condensing": "42 degC"},
        "compare": {"candidates": ["R513A"]},
        "readings": {
            "suction_pressure": "2.0 bar a",
            "discharge_pressure": "10.7 bar a",
            "suction_temperature": "-30 degC",
        },
    }
    return assess(compare(replace(case, readings=CaseFile.model_validate(tables).readings)))


def test_without_readings_the_baseline_is_null(bare):
    """A case without readings has no baseline, and says so."""
    assert comparison_json(bare)["baseline"] is None


def test_a_compared_case_carries_its_baseline(read):
    """Readings of a case reach the JSON through the comparison: derived, problems and missing."""
    found = json.loads(json.dumps(comparison_json(read), allow_nan=False))["baseline"]

    assert set(found) == {"derived", "problems", "missing"}
    # 2.0 bar a of R134a is -10.1 degC on published saturation tables (from memory).
    dew = next(item for item in found["derived"] if item["code"] == "suction_dew_temperature")
    assert dew["value"] - 273.15 == pytest.approx(-10.1, abs=0.05)
    assert "reading-superheat" in [problem["code"] for problem in found["problems"]]
    assert any(line.startswith("Superheat at the compressor inlet: not derived") for line in found["missing"])


def test_every_key_of_a_baseline_is_written(bare):
    """Each field of what was derived and of each problem is written as it is, and the text of a problem beside."""
    derived = Derived("subcooling", "Subcooling", "temperature difference", 3.25, "by hand")
    problem = Finding("reading-x", "unknown", "Title", "Fact.", "Advice.", "source")
    made: Comparison = replace(bare, baseline=Baseline((derived,), (problem,), ("COP: needs power",)))

    assert comparison_json(made)["baseline"] == {
        "derived": [
            {
                "code": "subcooling",
                "name": "Subcooling",
                "kind": "temperature difference",
                "value": 3.25,
                "made_from": "by hand",
            }
        ],
        "problems": [
            {
                "code": "reading-x",
                "level": "unknown",
                "title": "Title",
                "fact": "Fact.",
                "advice": "Advice.",
                "source": "source",
                "missing": (),
                "decisive": False,
                "text": "Fact. Advice.",
            }
        ],
        "missing": ["COP: needs power"],
    }
