"""The plant as found: what readings say, which of them disagree, and readings in place of assumptions.

Checked against textbook examples and published saturation tables, against cycles solved the other way round, and
against figures of an invented plant. Every disagreement is made on purpose, and has to be named.
"""

import csv
import math
import tomllib
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from retrofit.case import Default, read_case
from retrofit.case.model import CaseFile
from retrofit.cycle import Settings, solve_cycle
from retrofit.properties import fluid
from retrofit.study import compare
from retrofit.study.baseline import baseline, case_with_readings
from retrofit.study.derivation import NAMES
from retrofit.study.doubts import DIFFERENT_HEAT, DIFFERENT_POWER
from retrofit.units import standard_atmosphere_Pa

PUBLISHED = Path(__file__).parents[1] / "published"
KELVIN = 273.15
RECOVERED = 1e-6  # relative: nothing but interpolation of the tables lies between the two ways
# R404A, -8/42 degC: invented readings of a supermarket plant that go together.
GOOD = {
    "suction_pressure": "3.6 bar g",
    "discharge_pressure": "18.0 bar g",
    "liquid_pressure": "17.8 bar g",
    "evaporator_outlet_temperature": "-1 degC",
    "suction_temperature": "7 degC",
    "discharge_temperature": "73 degC",
    "liquid_temperature": "38 degC",
    "power": "54 kW",
    "current": "92 A",
    "voltage": "400 V",
    "phases": 3,
    "power_factor": 0.85,
    "hours_per_day": "16 h",
}
MACHINE = {"swept_volume": "201 m3/h", "motor_efficiency": 0.92}
SECONDARY = {
    "evaporator_in": "2 degC",
    "evaporator_out": "-3 degC",
    "evaporator_flow": "24.5 kg/s",
    "evaporator_specific_heat": "1.006 kJ/(kg K)",
    "condenser_in": "32 degC",
    "condenser_out": "38 degC",
    "condenser_flow": "30 kg/s",
    "condenser_specific_heat": "1.006 kJ/(kg K)",
}
DEFAULTS = tuple(
    Default(key, shown, "assumed")
    for key, shown in (
        ("plant.altitude", "0 m"),
        ("duty.useful_superheat", "5 K"),
        ("duty.line_superheat", "0 K"),
        ("duty.subcooling", "0 K"),
        ("compressor.isentropic_efficiency", "0.70"),
        ("compressor.volumetric_efficiency", "0.90"),
    )
)


def case_read(case_of, readings, existing="R404A", *, compressor=MACHINE, plant=(), evaporator=None, **tables):
    """Return a case with readings and every default taken; `tables` go to duty."""
    case = case_of(
        existing, ["R134a" if existing != "R134a" else "R513A"], plant=plant, compressor=compressor, **tables
    )
    file = {
        "plant": {"refrigerant": existing, **dict(plant)},
        "duty": {"cooling": "120 kW", "evaporating": "-8 degC", "condensing": "42 degC"},
        "compare": {"candidates": ["R717"]},
        "readings": readings,
        "evaporator": evaporator,
    }
    read = CaseFile.model_validate(file, context={"p_ambient_Pa": case.plant.ambient_pressure_Pa})
    return replace(case, readings=read.readings, evaporator=read.evaporator, defaults=DEFAULTS)


def found_in(case):
    """Return the baseline of a case, its values by code, and its problems by code."""
    found = baseline(case, fluid(case.plant.refrigerant))
    values = {item.code: item.value for item in found.derived}
    problems = {problem.code: problem for problem in found.problems}
    return found, values, problems


def reason(found, code):
    """Return what is said of a value that is missing."""
    name = NAMES[code][0]
    return next(line for line in found.missing if line.startswith(f"{name}: "))


# -- against what is published ---------------------------------------------------------------------


def test_textbook_example_of_a_measured_cycle(case_of):
    """Cengel & Boles, Example 11-2: power, cooling and isentropic efficiency of R134a from measured states.

    By hand: m = 0.05 kg/s; P = 2.02 kW; Q = 7.93 kW; isentropic efficiency 0.939; COP 3.93. The example knows the
    mass flow and gives the power, here the power gives the mass flow.
    """
    examples = tomllib.loads((PUBLISHED / "cycle_examples.toml").read_text(encoding="utf-8"))["example"]
    example = next(item for item in examples if item["id"] == "Cengel-11-2")
    given, printed = example["conditions"], {item["quantity"]: item for item in example["values"]}
    readings = {
        "suction_pressure": f"{given['p_suction_kPa']} kPa a",
        "discharge_pressure": f"{given['p_discharge_kPa']} kPa a",
        "liquid_pressure": f"{given['p_liquid_kPa']} kPa a",
        "evaporator_outlet_temperature": f"{given['T_suction_C']} degC",
        "suction_temperature": f"{given['T_suction_C']} degC",
        "discharge_temperature": f"{given['T_discharge_C']} degC",
        "liquid_temperature": f"{given['T_liquid_C']} degC",
        "power": f"{printed['power']['printed']} kW",
    }
    case = case_read(case_of, readings, "R134a", compressor={"motor_efficiency": 1.0})

    _, values, _ = found_in(case)

    def near(quantity, factor=1.0):
        value = printed[quantity]["printed"] * factor
        # The printed power carries half a digit (0.25 %) into flow, cooling and COP.
        power_digit = printed["power"]["half_digit"] / printed["power"]["printed"]
        return pytest.approx(value, rel=example["accuracy"] + power_digit, abs=printed[quantity]["half_digit"] * factor)

    assert values["isentropic_efficiency"] == near("isentropic_efficiency")
    assert values["capacity"] == near("capacity", 1e3)
    assert values["cop"] == near("cop")
    assert values["mass_flow"] == pytest.approx(given["mass_flow_kg_per_s"], rel=example["accuracy"] + 0.0025)
    assert values["line_superheat"] == 0.0
    assert values["pressure_ratio"] == pytest.approx(800 / 140, rel=1e-12)


def published_dew_kPa(refrigerant, T_C):
    """Return a dew pressure and its accuracy from the published saturation tables."""
    with open(PUBLISHED / "property_values.csv", encoding="utf-8", newline="") as file:
        for row in csv.DictReader(file):
            if row["refrigerant"] == refrigerant and row["quantity"] == "p_dew_kPa" and row["T_C"] == str(T_C):
                return float(row["printed"]), float(row["source_accuracy"] or 0.0) + float(row["half_digit"]) / float(
                    row["printed"]
                )
    raise LookupError(refrigerant)


@pytest.mark.parametrize(("refrigerant", "low_C", "high_C"), [("R134a", -20, 40), ("R404A", -21, 42)])
def test_superheat_and_saturation_against_published_tables(case_of, refrigerant, low_C, high_C):
    """At pressures printed for two temperatures, dew temperatures are those, and superheat counts from there."""
    (low, low_rel), (high, high_rel) = published_dew_kPa(refrigerant, low_C), published_dew_kPa(refrigerant, high_C)
    readings = {
        "suction_pressure": f"{low} kPa a",
        "discharge_pressure": f"{high} kPa a",
        "evaporator_outlet_temperature": f"{low_C + 6} degC",
        "suction_temperature": f"{low_C + 11} degC",
    }
    _, values, _ = found_in(case_read(case_of, readings, refrigerant))

    # dT = dp / (dp/dT); over saturation lines p rises by some 2 % (warm) to 5 % (cold) a kelvin.
    within_K = 1e-3 + low_rel / 0.03
    assert values["suction_dew_temperature"] - KELVIN == pytest.approx(low_C, abs=within_K)
    assert values["discharge_dew_temperature"] - KELVIN == pytest.approx(high_C, abs=1e-3 + high_rel / 0.02)
    assert values["evaporator_superheat"] == pytest.approx(6.0, abs=within_K)
    assert values["compressor_superheat"] == pytest.approx(11.0, abs=within_K)
    assert values["line_superheat"] == pytest.approx(5.0, abs=1e-9)
    assert values["pressure_ratio"] == pytest.approx(high / low, rel=1e-9)


def test_subcooling_counts_from_the_bubble_line(case_of):
    """Liquid of R407C at 15.37 bar a, 5 K below its bubble point, has 5 K of subcooling whatever its glide.

    Bubble and dew differ by 4 to 6 K for this blend (common knowledge, from memory): 5 K below the bubble point is
    some 10 K below the dew point.
    """
    f = fluid("R407C")
    p = 15.37e5
    readings = {
        "liquid_pressure": "15.37 bar a",
        "liquid_temperature": f"{float(f.bubble(p).T_K) - KELVIN - 5.0:.6f} degC",
    }
    _, values, _ = found_in(case_read(case_of, readings, "R407C"))

    assert values["subcooling"] == pytest.approx(5.0, abs=1e-5)
    assert 4.0 < float(f.dew(p).T_K) - values["liquid_bubble_temperature"] < 6.0


# -- by hand ---------------------------------------------------------------------------------------


def test_power_of_the_current_by_hand(case_of):
    """Three phases: sqrt(3) x 400 V x 92 A x 0.85 = 54.18 kW; one phase: 230 V x 18.9 A x 0.95 = 4.130 kW."""
    three = {"current": "92 A", "voltage": "400 V", "phases": 3, "power_factor": 0.85}
    one = {"current": "18.9 A", "voltage": "230 V", "phases": 1, "power_factor": 0.95}

    for readings, by_hand in ((three, 54178.5), (one, 4129.65)):
        _, values, _ = found_in(case_read(case_of, readings))
        assert values["power_from_current"] == pytest.approx(by_hand, abs=0.1)
        assert values["electric_power"] == values["power_from_current"]
        assert values["shaft_power"] == pytest.approx(0.92 * by_hand, abs=0.1)


def test_secondary_sides_and_differences_by_hand(case_of):
    """24.5 kg/s x 1.006 kJ/(kg K) x 5 K = 123.2 kW taken in, 30 x 1.006 x 6 K = 181.1 kW given off."""
    _, values, problems = found_in(case_read(case_of, GOOD | SECONDARY))

    assert values["capacity_secondary"] == pytest.approx(123_235.0, rel=1e-9)
    assert values["heat_rejected_secondary"] == pytest.approx(181_080.0, rel=1e-9)
    assert values["evaporator_difference_in"] == pytest.approx(275.15 - values["suction_dew_temperature"], abs=1e-9)
    assert values["evaporator_difference_out"] == pytest.approx(270.15 - values["suction_dew_temperature"], abs=1e-9)
    mean = 0.5 * (values["discharge_dew_temperature"] + values["discharge_bubble_temperature"])
    assert values["condenser_difference_in"] == pytest.approx(mean - 305.15, abs=1e-9)
    assert values["condenser_difference_out"] == pytest.approx(mean - 311.15, abs=1e-9)
    assert not problems


def test_a_day_is_the_readings_over_the_hours(case_of):
    """54 kW for 16 of 24 hours is 36 kW on average, 864 kWh a day."""
    found, values, _ = found_in(case_read(case_of, GOOD))
    item = next(item for item in found.derived if item.code == "power_day_mean")

    assert values["power_day_mean"] == pytest.approx(36e3, rel=1e-12)
    assert values["cooling_day_mean"] == pytest.approx(values["capacity"] * 16 / 24, rel=1e-12)
    assert "864 kWh a day" in item.made_from


def test_altitude_changes_the_ratio(case_of):
    """A gauge counts from the air: at 2000 m (0.795 bar by ICAO Doc 7488) the same gauges mean a higher ratio."""
    readings = {"suction_pressure": "1.0 bar g", "discharge_pressure": "10.0 bar g"}
    _, low, _ = found_in(case_read(case_of, readings, "R134a"))
    found, high, _ = found_in(case_read(case_of, readings, "R134a", plant={"altitude": "2000 m"}))

    assert low["pressure_ratio"] == pytest.approx(11.01325 / 2.01325, rel=1e-9)
    assert high["pressure_ratio"] == pytest.approx(10.79495 / 1.79495, abs=1e-3)
    assert standard_atmosphere_Pa(2000.0) == pytest.approx(79495.0, abs=5.0)
    assert "2000 m" in next(item for item in found.derived if item.code == "pressure_ratio").made_from


def test_invented_supermarket_plant(case_of):
    """Readings of an invented plant that was made with an isentropic efficiency of 0.68 and 120 kW.

    Own calculation: its stated displacement goes with eta_v = 1 - 0.04 (ratio^(1/1.12) - 1) = 0.898. The discharge
    temperature is stated to 1 K of the 66 K it lies above suction, and the motor efficiency, not stated, is taken as
    0.92: 1.5 % on the isentropic efficiency, some 3 % on what follows from the power.
    """
    _, values, problems = found_in(case_read(case_of, GOOD))
    volumetric = 1.0 - 0.04 * (values["pressure_ratio"] ** (1.0 / 1.12) - 1.0)

    assert not problems
    assert values["isentropic_efficiency"] == pytest.approx(0.68, rel=0.015)
    assert values["volumetric_efficiency"] == pytest.approx(volumetric, rel=0.03)
    assert values["capacity"] == pytest.approx(120e3, rel=0.03)
    assert values["power_from_current"] == pytest.approx(54e3, rel=0.005)


# -- forwards and backwards ------------------------------------------------------------------------

EXACT = {"useful": 6.0, "line": 9.0, "subcooling": 4.0, "isentropic": 0.66, "volumetric": 0.81, "motor": 0.9}


def readings_of(name, loss=0.0, drop=0.0, flow=0.37):
    """Return exact readings of a plant that runs a solved cycle, the machine that runs it, and the cycle."""
    f = fluid(name)
    p_evap, p_cond = float(f.p_dew(264.0)), float(f.p_dew(313.0))
    cycle = solve_cycle(
        f,
        p_evap,
        p_cond,
        Settings(
            useful_superheat_K=EXACT["useful"],
            line_superheat_K=EXACT["line"],
            subcooling_K=EXACT["subcooling"],
            isentropic_efficiency=EXACT["isentropic"],
            volumetric_efficiency=EXACT["volumetric"],
            heat_loss_share=loss,
            suction_drop_K=drop,
        ),
    )
    shaft = flow * float(cycle.work_J_per_kg)
    swept = flow / (EXACT["volumetric"] * float(cycle.density_suction_kg_per_m3))
    cooling, rejected = (flow * float(x) for x in (cycle.refrigerating_effect_J_per_kg, cycle.heat_rejected_J_per_kg))
    kelvins = {
        "evaporator_outlet_temperature": float(cycle.T_evap_dew_K) + EXACT["useful"],
        "suction_temperature": float(cycle.T_suction_K),
        "discharge_temperature": float(cycle.T_discharge_K),
        "liquid_temperature": float(cycle.T_cond_bubble_K) - EXACT["subcooling"],
    }
    readings = {key: f"{T!r} K" for key, T in kelvins.items()} | {
        "suction_pressure": f"{float(cycle.p_suction_Pa) / 1e5!r} bar a",
        "discharge_pressure": f"{p_cond / 1e5!r} bar a",
        "liquid_pressure": f"{p_cond / 1e5!r} bar a",
        "power": f"{shaft / EXACT['motor']!r} W",
        "evaporator_in": "285 K",
        "evaporator_out": "280 K",
        "evaporator_flow": f"{cooling / 4000.0 / 5.0!r} kg/s",
        "evaporator_specific_heat": "4 kJ/(kg K)",
        "condenser_in": "295 K",
        "condenser_out": "300 K",
        "condenser_flow": f"{rejected / 4000.0 / 5.0!r} kg/s",
        "condenser_specific_heat": "4 kJ/(kg K)",
    }
    machine = {"swept_volume": f"{swept!r} m3/s", "motor_efficiency": EXACT["motor"], "volumetric_efficiency": 0.81}
    return readings, machine | ({"heat_loss": loss} if loss else {}), cycle


@pytest.mark.parametrize("loss", [0.0, 0.08])
@pytest.mark.parametrize("drop", [0.0, 1.5])
@pytest.mark.parametrize("name", ["R134a", "R404A", "R448A", "R717"])
def test_a_solved_cycle_is_recovered(case_of, name, drop, loss):
    """Readings made from a cycle give back what it was solved with, with and without glide, heat loss and drop."""
    flow = 0.37
    readings, machine, cycle = readings_of(name, loss, drop, flow)
    exchanger = {"inlet": "12 degC", "outlet": "7 degC", "arrangement": "counterflow", "pressure_drop": f"{drop} K"}
    case = case_read(case_of, readings, name, compressor=machine, evaporator=exchanger if drop else None)

    _, values, problems = found_in(case)

    recovered = {
        "evaporator_superheat": EXACT["useful"],
        "line_superheat": EXACT["line"],
        "compressor_superheat": EXACT["useful"] + EXACT["line"] + drop,
        "subcooling": EXACT["subcooling"],
        "isentropic_efficiency": EXACT["isentropic"],
        "volumetric_efficiency": EXACT["volumetric"],
        "mass_flow_from_power": flow,
        "mass_flow_from_swept_volume": flow,
        "isentropic_discharge_temperature": float(cycle.T_discharge_isentropic_K),
        "pressure_ratio": float(cycle.pressure_ratio),
        "capacity": flow * float(cycle.refrigerating_effect_J_per_kg),
        "heat_rejected": flow * float(cycle.heat_rejected_J_per_kg),
        "shaft_power": flow * float(cycle.work_J_per_kg),
        "cop": EXACT["motor"] * float(cycle.cop),
    }
    assert {code: values[code] for code in recovered} == pytest.approx(recovered, rel=RECOVERED)
    assert values["capacity_secondary"] == pytest.approx(recovered["capacity"], rel=RECOVERED)
    assert values["heat_balance_error"] == pytest.approx(0.0, abs=RECOVERED)
    assert set(problems) <= {"reading-against-case-evaporating"}


def test_every_value_says_from_what(case_of):
    """Each derived value names readings, of which each is one that was given."""
    found, _, _ = found_in(case_read(case_of, GOOD | SECONDARY))
    given_keys = set(GOOD | SECONDARY) | {f"compressor.{key}" for key in MACHINE}

    assert {item.code for item in found.derived} == set(NAMES)
    for item in found.derived:
        words = item.made_from.rpartition("; from ")[2].replace(" and ", ", ").split(", ")
        assert words
        assert set(words) <= given_keys
        assert (item.name, item.kind) == NAMES[item.code]
    assert not found.missing


def test_mass_flow_says_which_way(case_of):
    """By power where the motor's efficiency is known, else by swept volume with the case's volumetric efficiency."""
    by_power, _, _ = found_in(case_read(case_of, GOOD))
    by_volume, _, _ = found_in(case_read(case_of, GOOD, compressor={"swept_volume": "201 m3/h"}))

    words = [next(i for i in found.derived if i.code == "mass_flow").made_from for found in (by_power, by_volume)]
    assert words[0].startswith("by power")
    assert words[1].startswith("by swept volume")
    assert "0.9, assumed" in next(i for i in by_volume.derived if i.code == "mass_flow_from_swept_volume").made_from
    assert "volumetric_efficiency" not in {item.code for item in by_volume.derived}  # it would only come back


def test_no_readings_no_baseline(case_of):
    """A case without readings has no baseline, and stays as it is."""
    case = case_of("R404A")

    assert baseline(case, fluid("R404A")) is None
    assert case_with_readings(case, None) is case


def test_what_is_missing_says_what_it_needs(case_of):
    """An empty table of readings derives nothing and names the readings that each value needs."""
    found, values, problems = found_in(case_read(case_of, {}))

    assert not values
    assert not problems
    assert len(found.missing) == len(NAMES)
    assert reason(found, "subcooling").endswith("needs liquid_pressure and liquid_temperature")
    assert reason(found, "pressure_ratio").endswith("needs suction_pressure and discharge_pressure")
    assert reason(found, "evaporator_superheat").endswith("needs suction_pressure and evaporator_outlet_temperature")


# -- what does not go together ---------------------------------------------------------------------


@pytest.mark.parametrize(
    ("changed", "code", "number", "lost"),
    [
        ({"suction_temperature": "-12 degC"}, "reading-superheat", "−4.0", "compressor_superheat"),
        ({"evaporator_outlet_temperature": "-10 degC"}, "reading-superheat", "−2.0", "evaporator_superheat"),
        ({"suction_temperature": "90 degC", "discharge_temperature": "120 degC"}, "reading-superheat", "98.0",
         "isentropic_efficiency"),
        ({"suction_temperature": "-3 degC"}, "reading-line-superheat", "−2.0", "line_superheat"),
        ({"liquid_temperature": "43 degC"}, "reading-subcooling", "−1.8", "subcooling"),
        ({"liquid_temperature": "-20 degC"}, "reading-subcooling", "61.2", "subcooling"),
        ({"discharge_temperature": "58 degC"}, "reading-discharge-cold", "58.0", "isentropic_efficiency"),
        ({"discharge_temperature": "35 degC"}, "reading-discharge-cold", "6.9", "isentropic_efficiency"),
        ({"discharge_temperature": "160 degC"}, "reading-discharge-hot", "160.0", "isentropic_efficiency"),
        ({"discharge_pressure": "3.0 bar g"}, "reading-pressure-ratio", "0.87", "pressure_ratio"),
        ({"liquid_pressure": "18.6 bar g"}, "reading-liquid-pressure", "18.60", "subcooling"),
        ({"suction_pressure": "60 bar g"}, "reading-outside-model", "bar", "suction_dew_temperature"),
        ({"power": "64 kW"}, "reading-power", "54.2", "electric_power"),
        ({"power": "20 kW", "current": "34 A"}, "reading-volumetric-efficiency", "34", "volumetric_efficiency"),
        ({"evaporator_in": "-9 degC", "evaporator_out": "-12 degC"}, "reading-evaporator-crossing", "−9.0",
         "evaporator_difference_in"),
        ({"evaporator_out": "3 degC"}, "reading-evaporator-crossing", "3.0", "capacity_secondary"),
        ({"condenser_in": "43 degC", "condenser_out": "44 degC"}, "reading-condenser-crossing", "43.0",
         "condenser_difference_in"),
        ({"condenser_out": "47 degC"}, "reading-condenser-crossing", "47.0", "heat_rejected_secondary"),
        ({"condenser_flow": "20 kg/s"}, "reading-heat-balance", "120.7" , "heat_balance_error"),
    ],
)  # fmt: skip
def test_a_disagreement_is_named_and_not_used(case_of, changed, code, number, lost):
    """Each impossible reading is a problem with its numbers and an advice, and what rests on it is not derived."""
    found, values, problems = found_in(case_read(case_of, GOOD | SECONDARY | changed))

    assert code in problems
    problem = problems[code]
    if code != "reading-heat-balance":  # told in percent: checked by itself below
        assert number in " ".join(item.fact for item in found.problems if item.code == code)
    assert problem.level == "unknown"
    assert problem.title
    assert problem.advice
    assert problem.source
    assert lost not in values
    assert problem.title in reason(found, lost)


def test_the_other_readings_still_count(case_of):
    """A thermometer on the discharge pipe that is off takes away the efficiency, not superheat and pressure ratio."""
    _, values, _ = found_in(case_read(case_of, GOOD | {"discharge_temperature": "58 degC"}))
    _, whole, _ = found_in(case_read(case_of, GOOD))

    kept = ("suction_dew_temperature", "pressure_ratio", "compressor_superheat", "evaporator_superheat", "subcooling")
    assert {code: values[code] for code in kept} == {code: whole[code] for code in kept}
    assert {"isentropic_efficiency", "mass_flow_from_power", "volumetric_efficiency"}.isdisjoint(values)
    assert values["mass_flow"] == whole["mass_flow_from_swept_volume"]


def test_two_readings_that_nothing_vouches_for_are_both_in_doubt(case_of):
    """Of a pressure and a temperature alone, far from the case, a negative superheat says only that one is wrong."""
    readings = {"suction_pressure": "6.0 bar g", "suction_temperature": "-5 degC", "discharge_pressure": "18 bar g"}
    found, values, _ = found_in(case_read(case_of, readings))

    assert "suction_pressure and suction_temperature are in doubt" in reason(found, "compressor_superheat")
    assert "pressure_ratio" not in values
    assert "suction_dew_temperature" in values  # what the gauge says, and the problem is about


def test_the_heat_balance_by_hand(case_of):
    """Off by more than a tenth: (120 + 50 - 150) / 150 = 13 %; at 155 kW of heat given off it is 9.7 % and stands.

    By hand: 120 kW = 6 kg/s x 4 kJ/(kg K) x 5 K; 150 kW = 7.5 x 4 x 5 K, 155 kW = 7.75 x 4 x 5; shaft 50 kW.
    """
    readings = {
        "power": "50 kW",
        "evaporator_in": "12 degC",
        "evaporator_out": "7 degC",
        "evaporator_flow": "6 kg/s",
        "evaporator_specific_heat": "4 kJ/(kg K)",
        "condenser_in": "30 degC",
        "condenser_out": "35 degC",
        "condenser_specific_heat": "4 kJ/(kg K)",
    }
    machine = {"motor_efficiency": 1.0}
    good = case_read(case_of, readings | {"condenser_flow": "7.75 kg/s"}, compressor=machine)
    bad = case_read(case_of, readings | {"condenser_flow": "7.5 kg/s"}, compressor=machine)

    _, values, problems = found_in(good)
    assert values["heat_balance_error"] == pytest.approx(15.0 / 155.0, rel=1e-9)
    assert not problems
    found, values, problems = found_in(bad)
    assert "+13 %" in problems["reading-heat-balance"].fact
    assert {"capacity_secondary", "heat_rejected_secondary", "cop"}.isdisjoint(values)
    assert "in doubt" in reason(found, "capacity_secondary")
    assert pytest.approx(0.10) == DIFFERENT_HEAT


def test_two_sides_of_an_exchanger_disagree(case_of):
    """A water or air flow that makes a third more cooling than the refrigerant is named, and only it is in doubt."""
    one_side = {key: text for key, text in SECONDARY.items() if key.startswith("evaporator")}
    _, values, problems = found_in(case_read(case_of, GOOD | one_side | {"evaporator_flow": "33 kg/s"}))

    assert "166.0" in problems["reading-evaporator-sides"].fact  # 33 x 1.006 x 5 = 166.0 kW
    assert "capacity_secondary" not in values
    assert values["capacity"] == pytest.approx(123e3, rel=0.01)


def test_power_within_the_band_is_used(case_of):
    """A current 9.5 % below the meter is within what a power factor may be off by; 12.8 % is not.

    By hand: sqrt(3) x 400 V x 0.85 = 588.9 W/A; 83 A make 48.88 kW, 80 A make 47.11 kW; the meter reads 54 kW.
    """
    assert pytest.approx(0.10) == DIFFERENT_POWER
    _, values, problems = found_in(case_read(case_of, GOOD | {"current": "83 A"}))
    assert values["electric_power"] == 54e3
    assert not problems
    _, values, problems = found_in(case_read(case_of, GOOD | {"current": "80 A"}))
    assert "47.1" in problems["reading-power"].fact
    assert "shaft_power" not in values


def test_a_superheat_read_on_the_bubble_column_is_told(case_of):
    """R448A: 1 K of superheat on the dew line would be a usual 6 to 7 K on the bubble line (glide 5 to 6 K, known)."""
    f = fluid("R448A")
    dew_C = float(f.dew(4.0e5).T_K) - KELVIN
    glide = dew_C + KELVIN - float(f.bubble(4.0e5).T_K)
    for superheat in (1.0, -1.0):
        readings = {
            "suction_pressure": "4.0 bar a",
            "evaporator_outlet_temperature": f"{dew_C + superheat:.6f} degC",
        }
        _, _, problems = found_in(case_read(case_of, readings, "R448A", duty={"evaporating": f"{dew_C:.1f} degC"}))

        assert problems["reading-superheat-column"].level == "note"
        assert f"{superheat + glide:.1f}" in problems["reading-superheat-column"].fact
        assert ("reading-superheat" in problems) == (superheat < 0.0)


def test_a_subcooling_read_on_the_dew_column_is_told(case_of):
    """R407C: liquid 1 K above its bubble point is 4 K below its dew point, which looks like subcooling."""
    T_C = float(fluid("R407C").bubble(16e5).T_K) - KELVIN + 1.0
    readings = {"liquid_pressure": "16 bar a", "liquid_temperature": f"{T_C:.6f} degC"}
    _, values, problems = found_in(case_read(case_of, readings, "R407C"))

    assert {"reading-subcooling", "reading-subcooling-column"} <= set(problems)
    assert "subcooling" not in values


def test_pure_refrigerants_have_no_column_to_mistake(case_of):
    """Without glide there is one column, and no such hint."""
    dew_C = float(fluid("R134a").dew(2.0e5).T_K) - KELVIN
    readings = {"suction_pressure": "2.0 bar a", "evaporator_outlet_temperature": f"{dew_C + 1.0:.6f} degC"}
    _, _, problems = found_in(case_read(case_of, readings, "R134a"))

    assert "reading-superheat-column" not in problems


def test_a_gauge_far_from_the_case_is_told(case_of):
    """The case says evaporating at -8 degC, the gauge says -12: named with both, the values still derived."""
    p_bar = float(fluid("R404A").p_dew(KELVIN - 12.0)) / 1e5
    readings = {"suction_pressure": f"{p_bar:.5f} bar a", "evaporator_outlet_temperature": "-6 degC"}
    _, values, problems = found_in(case_read(case_of, readings))
    problem = problems["reading-against-case-evaporating"]

    assert problem.level == "work"
    assert "−8.0" in problem.fact
    assert "−12.0" in problem.fact
    assert values["evaporator_superheat"] == pytest.approx(6.0, abs=1e-3)


def test_a_pressure_drop_of_the_case_is_not_a_contradiction(case_of):
    """Evaporating at -8 degC with 2 K of drop is -10 degC at the compressor: a gauge that says -11 goes with it."""
    p_bar = float(fluid("R404A").p_dew(KELVIN - 11.0)) / 1e5
    readings = {"suction_pressure": f"{p_bar:.5f} bar a"}
    _, _, plain = found_in(case_read(case_of, readings, duty={"evaporating": "-7.9 degC"}))
    _, _, with_drop = found_in(case_read(case_of, readings, evaporator={"pressure_drop": "2 K"}))

    assert "reading-against-case-evaporating" in plain
    assert not with_drop


def test_part_load_hides_the_swept_volume(case_of):
    """At part load no one knows what of the swept volume ran, unless the compressor only starts and stops."""
    readings = GOOD | {"load": "60 %"}
    found, values, problems = found_in(case_read(case_of, readings))
    _, fixed, none = found_in(case_read(case_of, readings, compressor=MACHINE | {"speed": "fixed"}))

    assert "60" in problems["reading-part-load"].fact
    assert "volumetric_efficiency" not in values
    assert "compressor.swept_volume is in doubt" in reason(found, "volumetric_efficiency")
    assert "volumetric_efficiency" in fixed
    assert not none


# -- readings instead of assumptions ----------------------------------------------------------------


def test_readings_take_the_place_of_assumptions(case_of):
    """Every default that the readings give is replaced, and says so; other defaults stay."""
    case = case_read(case_of, GOOD)
    found, values, _ = found_in(case)

    new = case_with_readings(case, found)

    assert new.duty.useful_superheat_K == values["evaporator_superheat"]
    assert new.duty.line_superheat_K == values["line_superheat"]
    assert new.duty.subcooling_K == values["subcooling"]
    assert new.compressor.isentropic_efficiency == values["isentropic_efficiency"]
    assert new.compressor.volumetric_efficiency == values["volumetric_efficiency"]
    assert [default.key for default in new.defaults] == [default.key for default in case.defaults]
    assert new.defaults[0] == case.defaults[0]
    assert all(default.why.startswith("from readings: ") for default in new.defaults[1:])
    assert (new.duty.T_evap_K, new.duty.T_cond_K) == (case.duty.T_evap_K, case.duty.T_cond_K)


def test_what_was_written_stays_and_a_contradiction_is_told(case_of):
    """A value of the file is never overwritten; where readings say something else, that is a problem."""
    case = case_read(case_of, GOOD, compressor=MACHINE | {"isentropic_efficiency": 0.55}, duty={"subcooling": "9 K"})
    written = {"duty.subcooling": "9 K", "compressor.isentropic_efficiency": "0.55"}
    case = replace(case, given=written, defaults=tuple(d for d in DEFAULTS if d.key not in written))
    found, values, problems = found_in(case)

    new = case_with_readings(case, found)

    assert new.duty.subcooling_K == 9.0
    assert new.compressor.isentropic_efficiency == 0.55
    assert new.duty.useful_superheat_K == values["evaporator_superheat"]
    assert "9.0" in problems["reading-against-case-subcooling"].fact
    assert "55" in problems["reading-against-case-isentropic-efficiency"].fact
    assert {problem.level for problem in problems.values()} == {"work"}


def test_doubtful_readings_replace_nothing(case_of):
    """With a negative superheat and an impossible discharge temperature the assumptions stay."""
    case = case_read(case_of, {**GOOD, "evaporator_outlet_temperature": "-12 degC", "discharge_temperature": "50 degC"})
    found, values, _ = found_in(case)

    new = case_with_readings(case, found)

    assert new.duty.useful_superheat_K == 5.0
    assert new.duty.line_superheat_K == pytest.approx(values["compressor_superheat"] - 5.0, abs=1e-9)
    assert new.compressor == case.compressor
    assert new.duty.subcooling_K == values["subcooling"]


def test_a_case_file_goes_the_whole_way(tmp_path):
    """What the reader lists as assumed is replaced, what the file says stays."""
    keys = "\n".join(f"{key} = {text if isinstance(text, int | float) else repr(text)}" for key, text in GOOD.items())
    file = tmp_path / "plant.toml"
    file.write_text(
        '[plant]\nrefrigerant = "R404A"\n[duty]\ncooling = "120 kW"\nevaporating = "-8 degC"\n'
        'condensing = "42 degC"\nsubcooling = "2 K"\n[compressor]\nswept_volume = "201 m3/h"\nmotor_efficiency = 0.92\n'
        f'[compare]\ncandidates = ["R448A"]\n[readings]\n{keys}\n',
        encoding="utf-8",
    )
    case = read_case(file)
    found, values, problems = found_in(case)

    new = case_with_readings(case, found)

    assert not problems
    assert new.duty.subcooling_K == 2.0
    assert new.compressor.isentropic_efficiency == values["isentropic_efficiency"]
    replaced = {default.key for default in new.defaults if default.why.startswith("from readings: ")}
    assert replaced == {
        "duty.useful_superheat",
        "duty.line_superheat",
        "compressor.isentropic_efficiency",
        "compressor.volumetric_efficiency",
    }


def test_superheat_at_the_compressor_alone_keeps_the_whole(case_of):
    """Without a reading at the evaporator outlet the line has what the useful superheat of the case leaves of it."""
    readings = {key: text for key, text in GOOD.items() if key != "evaporator_outlet_temperature"}
    case = case_read(case_of, readings)
    found, values, _ = found_in(case)

    new = case_with_readings(case, found)

    assert new.duty.useful_superheat_K == 5.0
    assert new.duty.line_superheat_K == pytest.approx(values["compressor_superheat"] - 5.0, abs=1e-12)
    assert "5 K, assumed" in next(item for item in found.derived if item.code == "line_superheat").made_from
    more = case_read(case_of, readings, duty={"useful_superheat": "20 K"})
    assert "line_superheat" not in found_in(more)[1]


def test_the_study_uses_the_readings(case_of):
    """A comparison is made with the case that the readings complete, and carries the baseline."""
    case = case_read(case_of, GOOD)
    found, values, _ = found_in(case)

    compared = compare(case)

    assert compared.baseline == found
    assert compared.case == case_with_readings(case, found)
    duty = compared.existing.duty
    assert duty.T_suction_K - duty.T_evap_dew_K == pytest.approx(values["compressor_superheat"], abs=1e-6)
    # The efficiency is that of the readings: the discharge temperature comes out as it was read, within the 0.1 K
    # by which the gauges differ from -8 and 42 degC.
    assert duty.T_discharge_K - KELVIN == pytest.approx(73.0, abs=0.3)


# -- anything at all --------------------------------------------------------------------------------

TEMPERATURE = st.floats(-120.0, 250.0).map(lambda T: f"{T:.3f} degC")
SECONDARY_TEMPERATURE = st.floats(-100.0, 150.0).map(lambda T: f"{T:.3f} degC")
PRESSURE = st.floats(0.011, 299.0).map(lambda p: f"{p:.4f} bar a")
ANY_READINGS = st.fixed_dictionaries(
    {},
    optional={
        **{f"{place}_pressure": PRESSURE for place in ("suction", "discharge", "liquid")},
        **{f"{place}_temperature": TEMPERATURE for place in ("evaporator_outlet", "suction", "discharge", "liquid")},
        **{f"{way}_{end}": SECONDARY_TEMPERATURE for way in ("evaporator", "condenser") for end in ("in", "out")},
        **{f"{way}_flow": st.floats(0.001, 1e5).map(lambda m: f"{m} kg/s") for way in ("evaporator", "condenser")},
        **{f"{way}_specific_heat": st.just("4 kJ/(kg K)") for way in ("evaporator", "condenser")},
        "power": st.floats(0.01, 1e8).map(lambda p: f"{p} W"),
        "current": st.floats(0.001, 1e4).map(lambda i: f"{i} A"),
        "voltage": st.just("400 V"),
        "phases": st.sampled_from([1, 3]),
        "power_factor": st.floats(0.1, 1.0),
        "hours_per_day": st.floats(0.0, 24.0),
        "load": st.floats(0.01, 1.0),
    },
)


@settings(max_examples=200, deadline=None, derandomize=True, suppress_health_check=[HealthCheck.too_slow])
@given(
    readings=ANY_READINGS,
    name=st.sampled_from(["R134a", "R404A", "R448A", "R717", "R454C"]),
    machine=st.fixed_dictionaries(
        {},
        optional={
            "swept_volume": st.floats(0.01, 1e6).map(lambda v: f"{v} m3/h"),
            "motor_efficiency": st.floats(0.1, 1.0),  # the least that a case may say
            "heat_loss": st.floats(0.0, 0.9),
        },
    ),
)
def test_any_readings_give_values_or_reasons(case_of, readings, name, machine):
    """Nothing raises; every value is derived, finite and possible, or missing with its reason; never both."""
    _check(case_read(case_of, readings, name, compressor=machine))


NEAR = {
    **{f"{place}_pressure": (low, high, "bar g") for place, low, high in
       (("suction", 2.0, 6.0), ("discharge", 14.0, 22.0), ("liquid", 14.0, 22.0))},
    **{f"{place}_temperature": (low, high, "degC") for place, low, high in
       (("evaporator_outlet", -12.0, 10.0), ("suction", -12.0, 20.0), ("discharge", 45.0, 120.0), ("liquid", 25, 45))},
    "power": (20.0, 90.0, "kW"), "evaporator_in": (-8.0, 8.0, "degC"), "evaporator_out": (-12.0, 4.0, "degC"),
    "condenser_in": (25.0, 45.0, "degC"), "condenser_out": (30.0, 48.0, "degC"),
}  # fmt: skip


@settings(max_examples=200, deadline=None, derandomize=True, suppress_health_check=[HealthCheck.too_slow])
@given(st.fixed_dictionaries({key: st.floats(low, high) for key, (low, high, _) in NEAR.items()}))
def test_readings_near_a_plant_give_values_or_reasons(case_of, drawn):
    """The same around readings of an ordinary plant, where most of the derivation is reached."""
    readings = {key: f"{value:.4f} {NEAR[key][2]}" for key, value in drawn.items()}
    _check(case_read(case_of, GOOD | SECONDARY | readings))


def _check(case):
    found, values, _ = found_in(case)

    assert all(math.isfinite(value) for value in values.values())
    assert len(found.derived) + len(found.missing) == len(NAMES)
    for code, low, high in (
        ("isentropic_efficiency", 0.3, 1.0),
        ("volumetric_efficiency", 0.4, 1.0),
        ("heat_balance_error", -0.1, 0.1),
        ("evaporator_superheat", -0.01, 80.0),
        ("line_superheat", -0.01, 80.0),
        ("subcooling", -0.01, 50.0),
    ):
        assert code not in values or low - 1e-9 <= values[code] <= high + 1e-9
    new = case_with_readings(case, found)
    assert 0.0 < new.compressor.isentropic_efficiency <= 1.0
    assert 0.0 < new.compressor.volumetric_efficiency <= 1.0
    assert min(new.duty.useful_superheat_K, new.duty.line_superheat_K, new.duty.subcooling_K) >= 0.0
