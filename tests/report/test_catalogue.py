"""The catalogue as JSON by its contract and as text with a source for every value."""

import json
import re

import jsonschema
import pytest

from retrofit.refrigerants import designations, find
from retrofit.report.catalogue import FIELDS, catalogue_json, catalogue_text, refrigerant_text

NUMBERS = (
    "lfl_kg_per_m3",
    "rcl_ppm",
    "rcl_kg_per_m3",
    "oel_ppm",
    "odp",
    "gwp_100yr_ar4",
    "gwp_100yr_ar5",
    "gwp_100yr_ar6",
    "gwp_eu_2024_573",
    "gwp_us_aim",
    "bubble_1atm_K",
    "dew_1atm_K",
)
# The contract retrofit.refrigerants/1 (JSON Schema, draft 2020-12).
CONTRACT = {
    "type": "object",
    "required": ["schema", "refrigerants"],
    "properties": {
        "schema": {"const": "retrofit.refrigerants/1"},
        "refrigerants": {
            "type": "array",
            "items": {
                "type": "object",
                "required": ["designation", "composition_mass_pct", "safety_class", *NUMBERS, "sources"],
                "properties": {
                    "designation": {"type": "string", "pattern": "^RE?[0-9]"},
                    "composition_mass_pct": {
                        "type": "object",
                        "minProperties": 1,
                        "additionalProperties": {"type": "number", "exclusiveMinimum": 0, "maximum": 100},
                    },
                    "safety_class": {"enum": ["A1", "A2L", "A2", "A3", "B1", "B2L", "B2", "B3", None]},
                    **{name: {"type": ["number", "null"]} for name in NUMBERS},
                    "sources": {
                        "type": "object",
                        "additionalProperties": {
                            "type": "object",
                            "required": ["source", "basis"],
                            "properties": {
                                "source": {"type": ["string", "null"]},
                                "basis": {"enum": ["read", "computed", "memory", None]},
                            },
                        },
                    },
                },
            },
        },
    },
}


@pytest.fixture(scope="module")
def everything():
    """Return the JSON of the whole catalogue, written and read by the strict rules."""
    found = catalogue_json([find(name) for name in designations()])
    return json.loads(json.dumps(found, allow_nan=False))


def test_json_keeps_the_contract(everything):
    """Every refrigerant has every key with its type."""
    jsonschema.validate(everything, CONTRACT, cls=jsonschema.Draft202012Validator)

    assert [item["designation"] for item in everything["refrigerants"]] == list(designations())


def test_compositions_add_up(everything):
    """Mass per cent of the components make 100."""
    for item in everything["refrigerants"]:
        assert sum(item["composition_mass_pct"].values()) == pytest.approx(100.0, abs=1e-4), item["designation"]


def test_every_value_given_has_a_source_and_a_basis(everything):
    """A number or a class without provenance does not leave the house."""
    for item in everything["refrigerants"]:
        for name in (*NUMBERS, "safety_class"):
            if item[name] is not None:
                assert item["sources"][name]["source"], (item["designation"], name)
                assert item["sources"][name]["basis"], (item["designation"], name)


def test_no_flammability_limit_of_a_refrigerant_that_is_not_flammable(everything):
    """It is null, and the class says why."""
    for item in everything["refrigerants"]:
        if item["safety_class"] in ("A1", "B1"):
            assert item["lfl_kg_per_m3"] is None, item["designation"]


def test_every_refrigerant_carries_cautions(everything):
    """In the JSON and, above the values, in the text."""
    for item in everything["refrigerants"]:
        assert item["cautions"], item["designation"]
        text = refrigerant_text(find(item["designation"]), 100, str)
        first = item["cautions"][0]
        assert text.index(f"{first['level'].upper()}  {first['title']}") < text.index("─")


def test_the_list_has_a_row_for_each_and_says_what_is_not_stated():
    """One line a refrigerant, with class and three editions of GWP; a class not known is not left blank."""
    lines = catalogue_text([find(name) for name in ("R404A", "R1123")], str).split("\n")
    r404a, r1123 = (next(line for line in lines if line.startswith(name)) for name in ("R-404A", "R-1123"))

    assert re.split(r"\s{2,}", r404a)[:5] == ["R-404A", "A1", "3922", "3943", "4728"]  # sums over IPCC editions
    assert "R-125/R-143a/R-134a 44/52/4" in r404a
    assert "not stated" in r1123


@pytest.mark.parametrize("name", ["R448A", "R717", "R1123"])
def test_one_refrigerant_is_shown_with_every_field_and_source(name):
    """Each field has its line, what is not known says so, and every source named is explained below."""
    item = find(name)
    table, _, sources = refrigerant_text(item, 100, str).partition("\nSources\n")
    named = [item.typical_use.source, *(getattr(item, field).source for field, _, _ in FIELDS)]

    assert [label for _, label, _ in FIELDS if label not in table] == []
    assert "not stated" in table
    keys = {key.strip() for text in named for key in text.split(";") if key.strip()}
    assert set(re.findall(r"^(\w+): ", sources, re.MULTILINE)) == keys


def test_a_blend_is_shown_with_its_components():
    """Percentages alone do not say of what."""
    assert refrigerant_text(find("R407C"), 100, str).startswith("R-407C  R-32/R-125/R-134a 23/25/52\n")


def test_values_in_the_text_are_those_of_the_catalogue():
    """Boiling points are turned into degC, and the molar mass into g/mol."""
    item = find("R134a")
    text = refrigerant_text(item, 100, str)
    dew = re.search(r"Dew point at 1 atm, °C\s+−([\d.]+)", text).group(1)

    assert -float(dew) == pytest.approx(item.dew_1atm_K.number - 273.15, abs=0.5 * 10.0 ** -len(dew.partition(".")[2]))
    assert re.search(r"Molar mass, g/mol\s+102\.03", text)  # by hand from atomic masses: C2H2F4 = 102.03


def test_no_line_about_one_refrigerant_is_too_long_for_a_wide_terminal():
    """Long prose stands below the table, not in a column of it."""
    for name in designations():
        longest = max(refrigerant_text(find(name), 100, str).split("\n"), key=len)

        assert len(longest) <= 160, longest
