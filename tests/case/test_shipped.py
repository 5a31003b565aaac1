"""The cases, the schema and the starting case that come with the project."""

import json
import math
import re
import tomllib
from pathlib import Path

import jsonschema
import numpy as np
import pytest
import tomlkit
from hypothesis import given
from hypothesis import strategies as st

from retrofit.case import SCHEMA_FILE, case_schema, new_case_text, read_case
from retrofit.case.model import FIELDS, TABLES
from retrofit.case.plant import OILS
from retrofit.case.thresholds import Threshold
from retrofit.case.values import unit_pattern
from retrofit.errors import CaseFileError, QuantityError
from retrofit.refrigerants import designations
from retrofit.units import KINDS, parse_quantity

LOGO = '<svg xmlns="http://www.w3.org/2000/svg"/>'
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
    told = ("evaporator.", "condenser.", "year.", "emissions.", "money.")
    core = [default.key for default in case.defaults if not default.key.startswith(told)]
    assert core == ["plant.altitude"]
    assert case.compressor.swept_volume_m3_per_s is not None


def test_one_shipped_case_has_an_unknown_charge_and_another_an_unknown_oil():
    """What is often missing on a real plant is missing in one of the ten each, so that its output can be seen."""
    cases = {path.stem: read_case(path) for path in CASES}

    assert [name for name, case in cases.items() if case.plant.charge_kg is None] == ["desert-split"]
    assert [name for name, case in cases.items() if case.plant.oil == "unknown"] == ["freezer-store"]


def test_current_and_power_of_the_shipped_cases_go_together():
    """Where both were read, the power factor is one of a motor under load, on the usual supply."""
    read = {path.stem: read_case(path) for path in CASES}
    cases = {name: case for name, case in read.items() if case.readings and case.readings.current_A}
    assert len(cases) >= 8

    for name, case in cases.items():
        is_single_phase = name in ("bottle-cooler", "desert-split")
        voltage_V = case.readings.voltage_V or (230.0 if is_single_phase else 400.0)
        apparent_VA = case.readings.current_A * voltage_V * (1.0 if is_single_phase else math.sqrt(3.0))
        assert case.readings.current_A < case.compressor.rated_current_A
        assert 0.65 < case.readings.power_W / apparent_VA < 1.0


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


def test_the_first_plant_shows_a_whole_year_with_nothing_assumed():
    """The harbour market states its year, emissions, money, options and widths; its prices are invented and say so."""
    path = next(path for path in CASES if path.stem == "harbour-market")
    case = read_case(path)

    assert case.year.metered_J == pytest.approx(1.08e12)  # 300 000 kWh
    assert case.emissions.leak_rate == case.law.annual_leak_rate == pytest.approx(0.15)
    assert case.emissions.grid_factor_kg_per_J == pytest.approx(0.35 / 3.6e6)
    assert (case.money.tariff.base, case.law.remaining_life_years) == (0.18, 8.0)
    assert set(case.options.by_refrigerant) == {"R404A", "R454C"}
    assert len(case.widths) >= 10
    assert not [default.key for default in case.defaults if default.key.startswith(("year.", "emissions."))]
    assert "every price is invented" in path.read_text("utf-8")


def test_shipped_years_are_told_in_each_way():
    """A climate, bins and a file of hours are among the ten, and a plant that heats."""
    years = {path.stem: case for path in CASES if (case := read_case(path)).year is not None}

    ways = {name: "file" if case.weather.text else case.weather.source for name, case in years.items()}
    assert set(ways.values()) == {"an invented climate", "bins of the case", "file"}
    assert [name for name, case in years.items() if case.year.serves == "heating"] == ["coast-heat-pump"]
    for case in years.values():
        largest = case.year.peak_load_W or case.duty.cooling_W
        assert 0.8 < largest / case.duty.cooling_W < 1.6  # a heat pump's heat is its cooling and its power


def test_the_hours_of_the_coast_follow_the_formula_they_state():
    """The file of hours is the formula in its remarks, rounded: no station measured it."""
    weather = read_case(next(path for path in CASES if path.stem == "coast-heat-pump")).weather
    t = np.arange(8760) + 0.5
    d = t / 24.0
    pi = np.pi
    T = 6 + 7 * np.cos(2 * pi * (d - 202) / 365) + 2.5 * np.cos(2 * pi * (t - 15) / 24)
    T = T + 3 * np.sin(2 * pi * d / 11) + 1.5 * np.sin(2 * pi * d / 4.3)

    assert weather.T_dry_bulb_K - 273.15 == pytest.approx(T, abs=0.05 + 1e-9)
    assert "no station measured it" in weather.text


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
        ("compressor", "efficiency_points", [[2, 0.6, 0.9]]),
        ("compressor", "efficiency_points", [[2, 0.6], [3, 0.7, 0.8]]),
        ("compressor", "steps", 2.5),
        ("plant", "metals", ["gold"]),
        ("plant", "oil_changes", "2"),
        ("readings", "phases", 2),
        ("readings", "hours_per_day", 25),
        ("readings", "suction_pressure", "3.6 bar"),
        ("evaporator", "ua_factor", "1.0"),
        ("evaporator", "ua_factor", {"R32": 0}),
        ("evaporator", "specific_heat", "4.19"),
        ("lines", "suction", {"length": "4 m"}),
        ("lines", "liquid", {"diameter": "28 mm", "lowest_load": "30 %"}),
        ("valve", "liquid_line_loss", "0.3 bar g"),
        ("receiver", "volume", 250),
        ("controls", "fan_steps", "12 bar g"),
        ("year", "bins", [["2 degC"]]),
        ("year", "bins", [["2 K deg", 4000]]),
        ("year", "serves", "both"),
        ("year", "climate", {"mean": "11"}),
        ("emissions", "leak_log", [["2025-03-02", "18 kg"]]),
        ("emissions", "grid_years", [["2027", "0.3 kg/kWh"]]),
        ("emissions", "grid_factor", "0.35"),
        ("money", "tariff", "0.18"),
        ("money", "tariff", [1, 2]),
        ("money", "refrigerant_price", {"R448A": "30"}),
        ("money", "change", {"labur": 1}),
        ("options", "R448A", {"labur": 1}),
        ("options", "R448A", 5),
        ("plus_minus", "duty", True),
        ("thresholds", "capacity", 0.9),
        ("thresholds", "capacity", {"wrok": 0.9}),
        ("compare", "candidates", "R448A"),
        ("compare", "candidates", []),
        ("compare", "candidates", ["R448A", "R999"]),
    ],
)
def test_the_schema_refuses_what_the_reader_refuses(table, key, value, validator, tmp_path):
    """A wrong form is marked by the editor and refused by the reader alike."""
    data = tomllib.loads(new_case_text())
    validator.validate(data)
    data.setdefault(table, {})[key] = value
    path = tmp_path / "case.toml"
    path.write_text(tomlkit.dumps(data), "utf-8")

    assert not validator.is_valid(data)
    with pytest.raises(CaseFileError):
        read_case(path)


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


@pytest.mark.parametrize(
    ("text", "kind"),
    [
        ("9 F deg", "temperature difference"),
        ("5 deg C", "temperature"),
        ("4 kJ/(kg K)", "specific heat"),
        ("5 k W", "power"),
    ],
)
def test_the_schema_accepts_blanks_inside_a_unit(text, kind):
    """What the reader takes with a blank inside its unit, an editor does not mark."""
    assert math.isfinite(parse_quantity(text, kind))
    assert re.search(unit_pattern(kind), text)


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
    """Each key of the file has a sentence that an editor can show, and no key can be null."""
    schema = case_schema()
    classes = {*TABLES.values(), Threshold}
    tables = [schema["$defs"][table.__name__] for table in classes]
    keys = [key for table in (schema, *tables) for key in table.get("properties", {}).values()]

    assert len(keys) == sum(len(table.model_fields) for table in classes) + len(schema["properties"])
    assert all(table["description"] for table in tables)
    assert all(key.get("description") or "$ref" in key for key in keys)
    assert "null" not in json.dumps(schema)


def test_a_new_case_reads_as_it_stands(tmp_path):
    """The starting case is valid, and its first line points the editor at the schema beside it."""
    path = tmp_path / "new.toml"
    path.write_text(new_case_text(), "utf-8")

    assert read_case(path).title == "My plant"
    assert new_case_text().splitlines()[0] == f"#:schema ./{SCHEMA_FILE}"


def opened(text, mark="# "):
    """Return a starting case with its remarks taken in: those that are keys or tables and begin with a mark."""
    return "\n".join(
        line.removeprefix(mark)
        if line.startswith(mark) and re.match(r"\[|[\w.]+ = ", line.removeprefix(mark))
        else line
        for line in text.splitlines()
    )


def test_a_new_case_reads_with_its_optional_keys_taken_in(tmp_path, validator):
    """Every key that the starting case shows as a remark is valid too, and leaves nothing to a default."""
    path = tmp_path / "new.toml"
    (tmp_path / "logo.svg").write_text(LOGO, "utf-8")
    path.write_text(opened(new_case_text()), "utf-8")

    case = read_case(path)

    assert case.defaults == ()
    assert case.plant.oil in OILS
    validator.validate(tomllib.loads(path.read_text("utf-8")))


def test_a_new_case_reads_with_the_other_ways_taken_in(tmp_path):
    """The ways that the starting case shows instead of another are valid when that other is left out."""
    text = new_case_text()
    without = (
        "isentropic",
        "volumetric",
        "#| efficiency_points",
        "#| mass_flow",
        "#| current",
        "#| return_gas",
        "# outlet",
        "# remaining_life",
        "# bins",
        "#| weather",
        "# leak_log",
        "# compressor.isentropic_efficiency",
        "# mounting = ",
    )
    for other in without:
        text = text.replace(f"\n{other}", f"\n# without {other}")
    text = text.replace('# speed = "variable"', 'speed = "steps"').replace("# lowest_speed", "# without lowest_speed")
    path = tmp_path / "new.toml"
    (tmp_path / "logo.svg").write_text(LOGO, "utf-8")
    path.write_text(opened(opened(text, "#| ")), "utf-8")

    case = read_case(path)

    assert case.compressor.polynomial.capacity == tuple(range(1, 11))
    assert case.compressor.steps == 4
    assert case.evaporator.flow_kg_per_s == 8.0
    assert (case.room.mounting, case.room.mounting_height_m) == (None, 2.5)
    assert case.year.climate.warmest_day == 200
    assert case.emissions.leak_rate == pytest.approx(0.15)


def test_a_new_case_mentions_every_key():
    """No key is left for the user to guess."""
    text = new_case_text()
    keys = set(re.findall(r"^(?:# |#\| )?(\w+) = ", text, re.MULTILINE))
    tables = set(re.findall(r"^(?:# |#\| )?\[([\w.]+)\]", text, re.MULTILINE))

    assert {key.rpartition(".")[2] for key in FIELDS} <= keys
    assert tables == {*TABLES, "options.R454C"} - {"lines", "options"}
