"""The list of inputs: every key in its own kind of quantity, defaults with their reason, and what was left out."""

import pytest

from retrofit.case import read_case
from retrofit.report.inputs import defaults, fixed, inputs, missing
from retrofit.study import compare
from retrofit.units import IP, SI

CASE = """
title = "A plant"
[plant]
refrigerant = "R404A"
altitude = "500 m"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[evaporator]
medium = "air"
inlet = "2 degC"
outlet = "-3 degC"
arrangement = "crossflow"
pressure_drop = "1.5 K"
[condenser]
medium = "air"
inlet = "32 degC"
flow = "30 kg/s"
arrangement = "crossflow"
[readings]
suction_pressure = "3.6 bar g"
power_factor = 0.85
condenser_in = "32 degC"
[lines.suction]
diameter = "80 mm"
length = "40 m"
[valve]
distributor_loss = "1.5 bar"
[receiver]
volume = "250 l"
[compare]
candidates = ["R448A"]
"""
BLANK = "\N{NO-BREAK SPACE}"


@pytest.fixture(scope="module")
def case(tmp_path_factory):
    """Return a case with keys of every kind, nested ones too."""
    path = tmp_path_factory.mktemp("case") / "plant.toml"
    path.write_text(CASE, encoding="utf-8")
    return read_case(path)


@pytest.mark.parametrize(
    ("key", "si", "ip"),
    [  # by hand: 1.5 K * 1.8; 80 mm / 25.4; 40 m / 0.3048; 1.5 bar / 6.894757 kPa = 21.8 psi
        ("evaporator.pressure_drop", "1.5 K", "2.7 °F"),
        ("evaporator.outlet", "−3.0 °C", "26.6 °F"),
        ("lines.suction.diameter", "80.0 mm", "3.15 in"),
        ("lines.suction.length", "40.0 m", "131 ft"),
        ("valve.distributor_loss", "1.50 bar", "21.8 psi"),
        ("receiver.volume", "250.0 l", "8.83 ft³"),  # 0.250 m3 / 0.0283168
        ("readings.power_factor", "85.0 %", "85.0 %"),
        ("condenser.flow", "108 000 kg/h", "238 099 lb/h"),  # 30 * 3600; / 0.45359237
    ],
)
def test_each_key_is_shown_in_its_own_kind_of_quantity(case, key, si, ip):
    """A pressure drop in kelvin is a difference, a diameter is in mm or inches, a loss is no gauge pressure."""
    for units, wanted in ((SI, si), (IP, ip)):
        item = next(item for item in inputs(case, units) if item.key == key)

        assert item.used.replace(BLANK, " ").replace("\u202f", " ") == wanted
        assert item.meaning.endswith(".")


def test_a_gauge_reading_is_counted_from_the_air_at_the_altitude_of_the_plant(case):
    """3.6 bar g at 500 m, where the standard atmosphere is 0.9546 bar (ICAO Doc 7488), are 4.55 bar a."""
    item = next(item for item in inputs(case, SI) if item.key == "readings.suction_pressure")

    assert (item.written, item.used) == ("3.6 bar g", f"4.55{BLANK}bar a")


def test_a_default_of_zero_kelvin_is_no_temperature(shipped, assessed):
    """No pressure drop reads 0.0 K, never as a point on a scale: that would be −273.1 °C."""
    found = {item.key: item.used for item in defaults(assessed(shipped).case, SI)}

    assert not any("−273" in used for used in found.values())
    for key in ("evaporator.pressure_drop", "condenser.pressure_drop", "duty.subcooling"):
        assert found.get(key, f"0.0{BLANK}K") == f"0.0{BLANK}K"


def test_what_is_left_out_is_told_by_table(case):
    """One entry a table with the keys it lacks; a table that is not there is one entry without keys."""
    found = {item.table: item.keys for item in missing(case)}

    assert "liquid_pressure" in found["readings"]
    assert set(found["lines"]) == {"discharge", "liquid"}
    assert found["lines.suction"] == ("riser", "lowest_load")  # its fittings and roughness are defaults taken
    assert found["controls"] == ()
    assert "thresholds" not in found
    given = set(case.given) | {default.key for default in case.defaults}
    assert not {f"{table}.{key}" for table, keys in found.items() for key in keys} & given


def test_a_key_that_another_one_stands_for_is_not_missing(case):
    """An outlet makes a flow needless and a flow an outlet; neither is asked for beside the other."""
    found = {item.table: item.keys for item in missing(case)}

    assert "flow" not in found.get("evaporator", ())
    assert "specific_heat" not in found.get("evaporator", ())
    assert "outlet" not in found.get("condenser", ())


def test_one_way_to_give_the_weather_is_enough(assessed):
    """The three ways exclude each other, so with a climate neither a file nor bins are missing."""
    found = {item.table: item.keys for item in missing(assessed("harbour-market").case)}

    assert not {"weather", "bins", "climate"} & set(found["year"])
    assert "pumps" in found["year"]


def test_what_is_built_in_follows_the_case(case, case_of):
    """With exchangers the pressures float, without them temperatures are held; with points efficiencies vary."""
    points = {"efficiency_points": [[2, 0.62, 0.92], [4, 0.70, 0.86], [8, 0.66, 0.74]]}
    with_plant = " ".join(fixed(compare(case)))
    without = " ".join(fixed(compare(case_of(compressor=points))))

    assert "On the basis same plant they are found" in with_plant
    assert "the exchangers are not calculated" in without
    assert "the same for every refrigerant and pressure ratio" in with_plant
    assert "follow the pressure ratio" in without
