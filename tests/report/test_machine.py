"""The JSON and CSV of a comparison: the contract, key by key, and one truth in both."""

import csv
import io
import json
from math import isfinite

import jsonschema
import pytest

from retrofit.checks import assess
from retrofit.report.machine import comparison_csv, comparison_json
from retrofit.study import compare

# The contract retrofit.comparison/1 as a schema (JSON Schema, draft 2020-12). Other keys may be added, none taken away.
NUMBER, TEXT = {"type": "number"}, {"type": "string", "minLength": 1}
NUMBER_OR_NULL, TEXT_OR_NULL = {"type": ["number", "null"]}, {"type": ["string", "null"]}


def table(properties, **more):
    """Return the schema of an object that must have all these keys."""
    return {"type": "object", "properties": properties, "required": list(properties), **more}


STATE = table(
    {
        "name": TEXT,
        **dict.fromkeys(("p_Pa", "T_K", "h_J_per_kg", "s_J_per_kgK", "density_kg_per_m3"), NUMBER),
        "quality": {"type": ["number", "null"], "minimum": 0.0, "maximum": 1.0},
    }
)
NUMBERS = (
    "cooling_W",
    "p_evap_Pa",
    "p_cond_Pa",
    "pressure_ratio",
    "T_evap_dew_K",
    "T_evap_inlet_K",
    "T_cond_dew_K",
    "T_cond_bubble_K",
    "T_discharge_K",
    "T_discharge_isentropic_K",
    "cop",
    "volumetric_capacity_J_per_m3",
    "refrigerating_effect_J_per_kg",
    "mass_flow_kg_per_s",
    "suction_volume_flow_m3_per_s",
    "swept_volume_m3_per_s",
    "power_W",
    "heat_rejected_W",
)
STATES = {"type": "array", "items": STATE, "minItems": 4}
PERFORMANCE = table({**dict.fromkeys(NUMBERS, NUMBER), "states": STATES})
FINDING = table(
    {"code": TEXT, "level": {"enum": ["stop", "work", "note", "unknown"]}, "title": TEXT, "text": TEXT, "source": TEXT}
)
ENTRY = table(
    {
        "refrigerant": TEXT,
        "status": {"enum": ["ok", "not computed"]},
        "reason": TEXT_OR_NULL,
        "safety_class": TEXT_OR_NULL,
        **dict.fromkeys(("gwp_100yr_ar4", "gwp_100yr_ar5", "gwp_100yr_ar6"), NUMBER_OR_NULL),
        "model": {},
        "duty": {},
        "compressor": {},
        "plant": {},
        "relative": {},
        "verdict": {"enum": ["suitable", "suitable with modifications", "open", "not suitable"]},
        "findings": {"type": "array", "items": FINDING},
    },
    **{
        "if": {"properties": {"status": {"const": "ok"}}},
        "then": {
            "properties": {
                "reason": {"type": "null"},
                "model": table({"grade": TEXT, "estimated_pairs": {"type": "array"}}),
                "duty": PERFORMANCE,
                "compressor": PERFORMANCE,
                "relative": table(dict.fromkeys(("cop", "capacity"), NUMBER), additionalProperties=NUMBER),
            }
        },
        "else": {"properties": {"reason": TEXT, "duty": {"type": "null"}, "compressor": {"type": "null"}}},
    },
)
CONTRACT = table(
    {
        "schema": {"const": "retrofit.comparison/1"},
        "title": TEXT,
        "case_file": TEXT,
        "versions": table({"retrofit": TEXT, "coolprop": TEXT}),
        "basis_notes": table({"reading": {"enum": ["dew", "mean"]}, "match": {"enum": ["dew", "mean"]}}),
        "existing": ENTRY,
        "candidates": {"type": "array", "items": ENTRY, "minItems": 1},
    }
)
NAMES = ["R448A", "R455A", "R290", "R744", "R468A", "R1123"]


@pytest.fixture(scope="module")
def comparison(case_of):
    """Return a comparison with blends, a pure fluid and rows that cannot be computed."""
    return assess(compare(case_of("R404A", NAMES, duty={"subcooling": "3 K"})))


def refuse(word):
    """Refuse what is no JSON: NaN, Infinity."""
    raise AssertionError(f"{word} is not JSON")


@pytest.fixture(scope="module")
def read(comparison):
    """Return the JSON of the comparison, written and read by the strict rules."""
    return json.loads(json.dumps(comparison_json(comparison), allow_nan=False), parse_constant=refuse)


def test_the_schema_written_here_is_one():
    """The contract as written above is itself a valid schema, so that it can fail."""
    jsonschema.Draft202012Validator.check_schema(CONTRACT)
    with pytest.raises(jsonschema.ValidationError, match="'schema' is a required property"):
        jsonschema.validate({}, CONTRACT)


def test_json_keeps_the_contract(read):
    """Every key of the contract is there with its type, computed or not."""
    jsonschema.validate(read, CONTRACT, cls=jsonschema.Draft202012Validator)

    assert [entry["refrigerant"] for entry in read["candidates"]] == NAMES
    assert read["candidates"][3]["status"] == read["candidates"][4]["status"] == "not computed"


@pytest.mark.parametrize(("existing", "names"), [("R744", ["R448A"]), ("R717", ["R1270"]), ("R1123", ["R744"])])
def test_json_keeps_the_contract_in_odd_cases(case_of, existing, names):
    """Also where the existing refrigerant cannot be computed, is toxic, or has no class."""
    found = comparison_json(assess(compare(case_of(existing, names))))

    jsonschema.validate(found, CONTRACT, cls=jsonschema.Draft202012Validator)
    assert found["existing"]["refrigerant"] == existing


def test_states_are_complete_and_in_order(read):
    """All eight points beginning at the compressor inlet, the vapour fraction given between the phases only."""
    states = read["existing"]["duty"]["states"]

    assert [state["name"] for state in states] == [
        "compressor inlet",
        "discharge",
        "condenser dew point",
        "condenser bubble point",
        "expansion valve inlet",
        "evaporator inlet",
        "evaporator dew point",
        "evaporator outlet",
    ]
    has_quality = [state["quality"] is not None for state in states]
    assert has_quality == [False, False, True, True, False, True, True, False]
    assert [states[2]["quality"], states[3]["quality"], states[6]["quality"]] == [1.0, 0.0, 1.0]


def test_json_is_the_result(comparison, read):
    """What is written is what was computed, to the last bit."""
    for entry, written in zip(comparison.entries, [read["existing"], *read["candidates"]], strict=True):
        assert written["verdict"] == entry.verdict
        assert written["reason"] == entry.reason
        assert len(written["findings"]) == len(entry.findings)
        assert [caution["code"] for caution in written["cautions"]] == [caution.code for caution in entry.cautions]
        if entry.duty:
            assert {name: written["duty"][name] for name in NUMBERS} == {
                name: getattr(entry.duty, name) for name in NUMBERS
            }
            assert written["relative"] == dict(entry.relative)


def test_not_known_is_null(read):
    """A class that is not stated is null, and so is everything of a row that was not computed."""
    r1123, r744 = read["candidates"][5], read["candidates"][3]

    assert r1123["safety_class"] is None
    assert (r744["model"], r744["duty"], r744["compressor"], r744["relative"]) == (None, None, None, None)


def test_csv_is_the_json(comparison, read):
    """Each number of the CSV, read back, is the number of the JSON; what is not known is empty."""
    rows = list(csv.DictReader(io.StringIO(comparison_csv(comparison))))
    entries = [read["existing"], *read["candidates"]]

    assert [row["refrigerant"] for row in rows] == ["R404A", *NAMES]
    for row, entry in zip(rows, entries, strict=True):
        assert (row["status"], row["verdict"]) == (entry["status"], entry["verdict"])
        assert row["reason"] == (entry["reason"] or "")
        assert row["gwp_100yr_ar5"] == ("" if entry["gwp_100yr_ar5"] is None else repr(entry["gwp_100yr_ar5"]))
        for basis in ("duty", "compressor"):
            for name in NUMBERS:
                written = row[f"{basis}.{name}"]
                assert (float(written) if written else None) == (entry[basis] or {}).get(name)
        assert (float(row["relative.cop"]) if row["relative.cop"] else None) == (entry["relative"] or {}).get("cop")


def test_csv_names_a_unit_in_every_column_that_needs_one(comparison):
    """No column is a bare number without its unit, ratios apart."""
    header = comparison_csv(comparison).splitlines()[0].split(",")
    units = ("_W", "_Pa", "_K", "_kg", "_m3", "_s")
    no_unit = {"duty.pressure_ratio", "duty.cop", "compressor.pressure_ratio", "compressor.cop"}
    numbers = [name for name in header if name.startswith(("duty.", "compressor.")) and name not in no_unit]

    assert len(numbers) > 30
    assert [name for name in numbers if not name.endswith(units)] == []


def test_every_number_is_finite(read):
    """No infinity slips through as a large number."""

    def numbers(node):
        if isinstance(node, dict | list):
            for item in node.values() if isinstance(node, dict) else node:
                yield from numbers(item)
        elif isinstance(node, float):
            yield node

    found = list(numbers(read))

    assert len(found) > 300
    assert all(isfinite(number) for number in found)
