"""The cases, the schema and the starting case that come with the project."""

import math
import re
import tomllib
from pathlib import Path

import jsonschema
import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.case import SCHEMA_FILE, case_schema, new_case_text, read_case
from retrofit.case.model import OILS, TABLES
from retrofit.case.values import unit_pattern
from retrofit.errors import QuantityError
from retrofit.refrigerants import designations
from retrofit.units import KINDS, parse_quantity

CASES = sorted((Path(__file__).resolve().parents[2] / "cases").glob("*.toml"))


@pytest.fixture(scope="module")
def validator():
    """Return a validator of the schema, itself checked against draft 2020-12."""
    schema = case_schema()
    jsonschema.Draft202012Validator.check_schema(schema)
    return jsonschema.Draft202012Validator(schema)


def test_ten_cases_are_shipped():
    """One file for each of the ten plants."""
    assert len(CASES) == 10


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.stem)
def test_a_shipped_case_reads_and_states_its_plant(path):
    """Each is complete: it says whose plant it could be, and nothing of its duty is left to defaults."""
    case = read_case(path)

    assert "invented" in case.about
    assert case.title != path.stem
    assert [default.key for default in case.defaults] == ["plant.altitude"]
    assert case.plant.charge_kg is not None
    assert case.compressor.swept_volume_m3_per_s is not None


def test_the_first_plant_is_the_documented_one():
    """The harbour market has the inputs that the documentation works through."""
    case = read_case(next(path for path in CASES if path.stem == "harbour-market"))

    assert case.title == "Harbour market, medium-temperature rack"
    assert (case.plant.refrigerant, case.plant.charge_kg) == ("R404A", 260.0)
    assert (case.duty.cooling_W, case.duty.T_evap_K, case.duty.T_cond_K) == (120_000.0, 265.15, 315.15)
    assert (case.duty.useful_superheat_K, case.duty.line_superheat_K, case.duty.subcooling_K) == (
        7.0,
        8.0,
        3.0,
    )
    assert {"R448A", "R449A", "R407A", "R407H", "R452A", "R454C"} <= set(case.compare.candidates)


def test_one_shipped_case_compares_a_refrigerant_that_cannot_condense():
    """Carbon dioxide above its critical temperature, 30.98 °C (Span and Wagner 1996), is among the ten."""
    T_critical_K = 304.1282
    cases = [read_case(path) for path in CASES]

    assert any("R744" in case.compare.candidates and case.duty.T_cond_K > T_critical_K for case in cases)


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.stem)
def test_the_schema_accepts_a_shipped_case(path, validator):
    """An editor shows no fault in a shipped case."""
    validator.validate(tomllib.loads(path.read_text("utf-8")))


@pytest.mark.parametrize(
    ("table", "key", "value"),
    [
        ("plant", "refrigerant", "R404"),
        ("plant", "refrigerant", 404),
        ("plant", "charge", 260),
        ("plant", "charge", "260 kW"),
        ("plant", "oil", "POE"),
        ("plant", "high_side_limit", "28 bar"),
        ("plant", "colour", "red"),
        ("duty", "cooling", 120),
        ("duty", "cooling", "120"),
        ("duty", "cooling", "1,5 kW"),
        ("duty", "evaporating", "-8 degc"),
        ("duty", "subcooling", "3 degC"),
        ("duty", "reading", "bubble"),
        ("compressor", "isentropic_efficiency", 1.2),
        ("compare", "candidates", "R448A"),
        ("compare", "candidates", []),
        ("compare", "candidates", ["R448A", "R999"]),
    ],
)
def test_the_schema_refuses_what_the_reader_refuses(table, key, value, validator, tmp_path):
    """A wrong form is marked by the editor and refused by the reader alike."""
    data = tomllib.loads(new_case_text())
    validator.validate(data)
    data[table][key] = value

    assert not validator.is_valid(data)


@pytest.mark.parametrize("table", ["plant", "duty", "compare"])
def test_the_schema_wants_the_compulsory_tables(table, validator):
    """A file without one of the three tables is not valid."""
    data = tomllib.loads(new_case_text())
    del data[table]

    assert not validator.is_valid(data)


@pytest.mark.parametrize("spelling", ["R404A", "r404a", "R-404A", " R404A ", "404A"])
def test_the_schema_accepts_the_spellings_the_reader_accepts(spelling, validator, tmp_path):
    """An editor does not mark a spelling that is read."""
    text = new_case_text().replace('"R404A"', f'"{spelling}"')
    path = tmp_path / "case.toml"
    path.write_text(text, "utf-8")

    assert read_case(path).plant.refrigerant == "R404A"
    validator.validate(tomllib.loads(text))


def test_the_schema_knows_every_refrigerant_and_unit(validator):
    """Each designation and each spelling of a unit is valid in a case."""
    data = tomllib.loads(new_case_text())
    for name in designations():
        data["plant"]["refrigerant"] = name
        validator.validate(data)
    for unit in KINDS["power"].units:
        data["duty"]["cooling"] = f"5 {unit}"
        validator.validate(data)
    for mark in ("bar g", "barg", "bar(g)", "psia", "psi a", "MPa g", "kPa a"):
        data["plant"]["high_side_limit"] = f"5 {mark}"
        validator.validate(data)


@given(
    kind=st.sampled_from([kind for kind in KINDS if kind != "pressure"]),
    number=st.sampled_from(["5", "-8", "0.5", "1e3", ".5", "5.", "−1", "1,5", "1 000", ""]),
    blank=st.sampled_from(["", " ", "  "]),
    data=st.data(),
)
def test_the_schema_and_the_reader_agree_on_units(kind, number, blank, data):
    """What matches the pattern of a kind is what the reader takes, in every kind of unit."""
    unit = data.draw(st.sampled_from([unit for other in KINDS.values() for unit in other.units]))
    text = number + blank + unit.replace("deg", data.draw(st.sampled_from(["deg", "°"])))
    try:
        is_read = math.isfinite(parse_quantity(text, kind))
    except QuantityError:
        is_read = False

    assert bool(re.search(unit_pattern(kind), text)) == is_read


def test_the_schema_describes_every_key():
    """Each key of the file has a sentence that an editor can show."""
    schema = case_schema()
    tables = [schema["$defs"][table.__name__] for table in TABLES.values()]
    keys = [key for table in (schema, *tables) for key in table["properties"].values()]

    assert len(keys) == 6 + 6 + 7 + 3 + 2
    assert all(table["description"] for table in tables)
    assert all(key.get("description") or "$ref" in key for key in keys)


def test_a_new_case_reads_as_it_stands(tmp_path):
    """The starting case is valid, and its first line points the editor at the schema beside it."""
    path = tmp_path / "new.toml"
    path.write_text(new_case_text(), "utf-8")

    assert read_case(path).title == "My plant"
    assert new_case_text().splitlines()[0] == f"#:schema ./{SCHEMA_FILE}"


def test_a_new_case_reads_with_its_optional_keys_taken_in(tmp_path):
    """Every key that the starting case shows as a remark is valid too, and no key is left unmentioned."""
    lines = new_case_text().splitlines()
    opened = [line.removeprefix("# ") if line.startswith("# ") and " = " in line else line for line in lines]
    path = tmp_path / "new.toml"
    path.write_text("\n".join(opened), "utf-8")

    case = read_case(path)

    assert case.defaults == ()
    keys = {
        f"{name}.{field.alias}" for name, table in TABLES.items() for field in table.model_fields.values()
    }
    assert keys | {"title", "about"} == set(case.given)
    assert case.plant.oil in OILS
