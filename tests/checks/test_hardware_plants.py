"""Worked plants, by our own earlier calculation with a property library: what the table has to say of each.

The figures beside the plants are orientation, worked out once with CoolProp at constant efficiencies and rounded to
the digits shown; they are no published values. What is asserted is the verdict, and the figure within a tenth.
"""

import pytest

from retrofit.checks import assess
from retrofit.study import Verdict, compare

SPLIT = {
    "plant": {"oil": "mineral", "high_side_limit": "26 bar g", "highest_ambient": "63 degC"},
    "duty": {
        "cooling": "10.5 kW",
        "evaporating": "7 degC",
        "condensing": "55 degC",
        "useful_superheat": "5 K",
        "line_superheat": "5 K",
        "subcooling": "6 K",
    },
    "compressor": {"isentropic_efficiency": 0.655, "volumetric_efficiency": 0.92, "swept_volume": "10.9 m3/h"},
}
MARKET = {
    "plant": {"charge": "260 kg", "oil": "polyol ester", "high_side_limit": "28 bar g", "relief_setting": "28 bar g"},
    "duty": {"useful_superheat": "7 K", "line_superheat": "8 K", "subcooling": "3 K"},
    "compressor": {"isentropic_efficiency": 0.68, "volumetric_efficiency": 0.85, "swept_volume": "201 m3/h"},
    "lines": {
        "suction": {"diameter": "80 mm", "length": "40 m", "riser": "4 m", "lowest_load": "30 %"},
        "discharge": {"diameter": "54 mm", "length": "20 m", "riser": "3 m", "lowest_load": "30 %"},
        "liquid": {"diameter": "42 mm", "length": "40 m", "riser": "2 m"},
    },
    "valve": {"kind": "thermostatic"},
    "receiver": {"volume": "250 l"},
}
HEAT_PUMP = {
    "plant": {"high_side_limit": "42 bar g", "evaporator": "direct expansion", "controller": "fixed to refrigerant"},
    "duty": {"cooling": "10.5 kW", "evaporating": "-11 degC", "condensing": "50 degC", "subcooling": "4 K"},
    "compressor": {"isentropic_efficiency": 0.68, "volumetric_efficiency": 0.855, "swept_volume": "14.8 m3/h"},
}
COOLER = {
    "plant": {"oil": "polyol ester", "high_side_limit": "17 bar g"},
    "duty": {
        "cooling": "0.45 kW",
        "evaporating": "-10 degC",
        "condensing": "50 degC",
        "useful_superheat": "12 K",
        "line_superheat": "13 K",
        "subcooling": "8 K",
    },
    "valve": {"kind": "capillary"},
}


def rows(entry):
    """Return the hardware table of an entry by code."""
    return {item.code: item for item in entry.hardware}


def codes(entry, level):
    """Return the codes of an entry's findings of a level."""
    return {item.code for item in entry.findings if item.level == level}


@pytest.fixture(scope="module")
def market(case_with):
    """Return today's refrigerant of a medium-temperature rack, R404A, and R448A in it."""
    return assess(compare(case_with("R404A", ["R448A"], **MARKET))).entries


def test_market_valve_is_a_third_too_large(market):
    """R404A to R448A: the opening passes about 1.39 times the cooling where 1.07 is needed: a smaller orifice."""
    valve = market[1].hardware_numbers.valve

    assert valve.capacity_ratio == pytest.approx(1.39, rel=0.1)
    assert valve.load_ratio == pytest.approx(1.07, rel=0.05)
    assert rows(market[1])["expansion-valve"].verdict == "replace"


def test_market_lines_move_as_fast_but_carry_less(market):
    """10.0, 5.8 and 0.80 m/s today; at equal velocity rho v2 is 0.70 to 0.76 of it, worse for oil in risers."""
    old, new = (entry.hardware_numbers.new for entry in market)
    share = new.suction.lowest_momentum_flux_Pa / old.suction.lowest_momentum_flux_Pa

    assert old.suction.velocity_m_per_s == pytest.approx(10.0, rel=0.1)
    assert old.discharge.velocity_m_per_s == pytest.approx(5.8, rel=0.1)
    assert old.liquid.velocity_m_per_s == pytest.approx(0.80, rel=0.1)
    assert new.suction.velocity_m_per_s == pytest.approx(old.suction.velocity_m_per_s, rel=1e-6)
    assert share == pytest.approx(0.73, abs=0.05)
    assert rows(market[1])["suction-oil-return"].verdict in ("adjust", "replace")


def test_market_needs_a_little_more_charge(market):
    """Liquid of R448A is about 1.07 times as dense as that of R404A."""
    filling = market[1].hardware_numbers.filling

    assert filling.expected_kg / filling.old_kg == pytest.approx(1.07, rel=0.03)


def test_a_plant_for_28_bar_does_not_bear_63_degrees(case_with):
    """Bubble pressure at 63 degC: R404A 29.8 and R448A 30.5 bar g, both above 28 bar g."""
    plant = {**MARKET["plant"], "highest_ambient": "63 degC"}
    found = assess(compare(case_with("R404A", ["R448A"], **{**MARKET, "plant": plant}))).entries
    rest = [rows(entry)["standstill"] for entry in found]

    assert [item.measures[0].new / 1e5 for item in rest] == pytest.approx([29.8, 30.5], abs=0.3)
    assert [item.verdict for item in rest] == ["replace", "replace"]
    assert "standstill" in codes(found[1], "stop")
    assert "relief" in codes(found[1], "stop")


def test_a_split_for_26_bar_does_not_hold_r407c_at_rest(case_with):
    """R407C at 63 degC has 28.5 bar g: above the plate of 26, where R22 with 24.9 is below."""
    found = assess(compare(case_with("R22", ["R407C"], **SPLIT))).entries
    today, candidate = (rows(entry)["standstill"] for entry in found)

    assert candidate.measures[0].new / 1e5 == pytest.approx(28.5, abs=0.1)
    assert candidate.measures[0].old / 1e5 == pytest.approx(24.9, abs=0.1)
    assert (today.verdict, candidate.verdict) == ("unknown", "replace")
    assert found[1].verdict == Verdict.NOT_SUITABLE


def test_copper_in_a_cold_store_stops_ammonia(case_with):
    """Steel and aluminium coils would do; some copper stops R717 and leaves R507A alone."""
    plant = {"oil": "mineral", "evaporator": "pumped", "metals": ["steel", "aluminium", "copper"]}
    duty = {"cooling": "250 kW", "evaporating": "-32 degC", "condensing": "35 degC"}
    found = assess(compare(case_with("R22", ["R717", "R507A"], plant=plant, duty=duty))).candidates

    assert rows(found[0])["metals"].verdict == "replace"
    assert "metals" in codes(found[0], "stop")
    assert "metals" not in codes(found[1], "stop")


def test_a_heat_pump_has_no_conversion(case_with):
    """R410A to R32, R454B, R452B or R290: each is stopped, and none is called an easy change."""
    found = assess(compare(case_with("R410A", ["R32", "R454B", "R452B", "R290"], **HEAT_PUMP))).candidates

    assert [entry.verdict for entry in found] == [Verdict.NOT_SUITABLE] * 4
    assert all(rows(entry)["controller"].verdict == "replace" for entry in found)


def test_a_bottle_coolers_capillary_is_too_tight(case_with):
    """R134a to R513A: 0.83 of the flow needed, beyond the tenth that a capillary bears."""
    found = assess(compare(case_with("R134a", ["R513A"], **COOLER))).candidates[0]

    assert found.hardware_numbers.valve.fit == pytest.approx(0.83, abs=0.03)
    assert rows(found)["expansion-valve"].verdict == "replace"
    assert "expansion-valve" in codes(found, "work")
