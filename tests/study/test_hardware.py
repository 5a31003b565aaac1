"""The numbers of the hardware: each against a hand calculation or a property library, and what is missing named."""

from math import log10, pi, sqrt

import pytest
from CoolProp.CoolProp import PropsSI

from retrofit.properties import fluid
from retrofit.study import compare

KELVIN = 273.15
GAS = {"diameter": "60 mm", "length": "20 m", "fittings": "5 m", "riser": "4 m", "lowest_load": "30 %"}
FULL = {
    "plant": {
        "charge": "100 kg",
        "highest_ambient": "43 degC",
        "altitude": "0 m",
        "oil_changes": 2,
        "oil_left": "30 %",
    },
    "duty": {"evaporating": "-5 degC", "condensing": "40 degC", "subcooling": "3 K", "line_superheat": "5 K"},
    "compressor": {"rated_current": "100 A", "highest_suction": "5 degC"},
    "condenser": {"medium": "air", "inlet": "30 degC", "outlet": "35 degC", "arrangement": "crossflow"},
    "readings": {"current": "80 A"},
    "lines": {
        "suction": {**GAS, "diameter": "100 mm"},
        "discharge": GAS,
        "liquid": {"diameter": "40 mm", "length": "30 m", "riser": "6 m"},
    },
    "valve": {"kind": "thermostatic"},
    "receiver": {"volume": "150 l"},
    "controls": {
        "low_pressure_cut_out": "0.5 bar g",
        "rack_set_point": "1.4 bar g",
        "head_pressure": "8 bar g",
        "fan_steps": ["8 bar g", "9 bar g"],
    },
}


@pytest.fixture(scope="module")
def pure(case_with):
    """Return the entries of R134a and R1234yf, both pure, in a plant with everything given but an evaporator."""
    return compare(case_with("R134a", ["R1234yf"], **FULL)).entries


@pytest.fixture(scope="module")
def numbers(pure):
    """Return the numbers of R1234yf beside R134a."""
    return pure[1].hardware_numbers


def of(case_with, *path, existing="R134a", new="R1234yf"):
    """Return the numbers with a key, table.key or table.line.key, taken away."""
    tables = {name: dict(table) for name, table in FULL.items()}
    table = tables
    for name in path[:-1]:
        table[name] = dict(table[name])
        table = table[name]
    table[path[-1]] = None
    if path[0] == "lines":
        lines = {line: {k: v for k, v in keys.items() if v is not None} for line, keys in tables["lines"].items()}
        tables["lines"] = lines
    return compare(case_with(existing, [new], **tables)).candidates[0].hardware_numbers


def test_todays_refrigerant_beside_itself_changes_nothing(pure):
    """Old and new are one and every ratio is 1."""
    own = pure[0].hardware_numbers

    assert own.old == own.new
    assert (own.valve.fit, own.distributor.mass_flow_ratio) == pytest.approx((1.0, 1.0), rel=1e-12)
    assert own.current_A.new == own.current_A.old == 80.0
    assert all(item.p_Pa.old == item.p_Pa.new for item in own.settings)


def test_on_the_hottest_day_condensing_is_as_much_warmer_as_the_air(numbers):
    """Air at 43 instead of 30 degC: condensing 13 K warmer where the plant is not balanced."""
    for side in (numbers.old, numbers.new):
        assert side.hottest.T_cond_mean_K == pytest.approx(40.0 + KELVIN + 13.0, abs=1e-4)
        assert side.hottest.T_evap_mean_K == pytest.approx(side.design.T_evap_mean_K, abs=1e-4)
    assert numbers.basis == "compressor"


def test_a_plant_that_balances_settles_near_that(case_with):
    """With both exchangers the balance itself has the hot air: condensing rises by a little less than the air."""
    evaporator = {"medium": "air", "inlet": "5 degC", "outlet": "1 degC", "arrangement": "crossflow"}
    found = compare(case_with("R134a", ["R1234yf"], evaporator=evaporator, **FULL)).existing.hardware_numbers
    rise = found.new.hottest.T_cond_mean_K - found.new.design.T_cond_mean_K

    assert found.basis == "plant"
    assert 0.8 * 13.0 < rise < 13.0
    assert found.new.hottest.cooling_W < found.new.design.cooling_W


def test_standstill_is_the_bubble_pressure_of_the_property_library(numbers):
    """At 43 degC, by CoolProp's reference equations."""
    for side in (numbers.old, numbers.new):
        expected = PropsSI("P", "T", 43.0 + KELVIN, "Q", 0, side.refrigerant)

        assert side.p_standstill_Pa == pytest.approx(expected, rel=1e-4)


def test_pull_down_is_the_same_compressor_at_the_highest_suction(numbers):
    """Swept volume stays, evaporating is at 5 degC dew, and more mass flow takes more power."""
    for side in (numbers.old, numbers.new):
        assert side.pull_down.T_evap_dew_K == pytest.approx(5.0 + KELVIN, abs=1e-3)
        assert side.pull_down.swept_volume_m3_per_s == pytest.approx(side.design.swept_volume_m3_per_s, rel=1e-9)
        assert side.pull_down.power_W > side.design.power_W


def test_current_goes_with_power(numbers):
    """80 A read, times the ratio of powers, at the design point and at pull-down."""
    old, new = numbers.old, numbers.new

    assert numbers.current_A.new == pytest.approx(80.0 * new.design.power_W / old.design.power_W, rel=1e-12)
    assert numbers.pull_down_current_A.new == pytest.approx(80.0 * new.pull_down.power_W / old.design.power_W)


def test_suction_velocity_is_volume_flow_over_area(numbers):
    """v = V / (pi D^2 / 4), and at 30 % load 0.3 times that; rho v2 with 0.3 squared."""
    new = numbers.new
    velocity = new.design.suction_volume_flow_m3_per_s / (0.25 * pi * 0.100**2)
    density = new.design.mass_flow_kg_per_s / new.design.suction_volume_flow_m3_per_s

    assert new.suction.velocity_m_per_s == pytest.approx(velocity, rel=1e-9)
    assert new.suction.momentum_flux_Pa == pytest.approx(density * velocity**2, rel=1e-9)
    assert new.suction.lowest_velocity_m_per_s == pytest.approx(0.3 * velocity, rel=1e-9)
    assert new.suction.lowest_momentum_flux_Pa == pytest.approx(0.09 * density * velocity**2, rel=1e-9)


def test_suction_friction_is_that_of_an_explicit_formula(numbers):
    """Swamee and Jain (1976) for the friction factor, within its 1 to 3 %; viscosity of R134a by CoolProp."""
    side = numbers.old
    p_Pa, T_K = side.design.p_evap_Pa, side.design.T_suction_K
    density, viscosity = (PropsSI(name, "P", p_Pa, "T", T_K, "R134a") for name in ("D", "V"))
    velocity = side.suction.velocity_m_per_s
    reynolds = density * velocity * 0.100 / viscosity

    factor = 0.25 / log10(1.5e-5 / 3.7 + 5.74 / reynolds**0.9) ** 2
    expected = factor * 25.0 / 0.100 * 0.5 * density * velocity**2
    T_after = PropsSI("T", "P", p_Pa - expected, "Q", 1, "R134a")

    assert side.suction.pressure_drop_Pa == pytest.approx(expected, rel=0.03)
    assert side.suction.saturation_drop_K == pytest.approx(side.design.T_evap_dew_K - T_after, rel=0.03)


def test_discharge_velocity_has_the_density_of_the_hot_gas(numbers):
    """m / (rho A) with the density of CoolProp at discharge."""
    side = numbers.new
    density = PropsSI("D", "P", side.design.p_cond_Pa, "T", side.design.T_discharge_K, "R1234yf")
    expected = side.design.mass_flow_kg_per_s / (density * 0.25 * pi * 0.060**2)

    assert side.discharge.velocity_m_per_s == pytest.approx(expected, rel=1e-3)


def test_liquid_riser_takes_the_weight_of_its_column(numbers):
    """rho g h with 6 m: about 11 kPa for each metre of R134a liquid (1150 kg/m3)."""
    density = PropsSI("D", "P", numbers.old.design.p_cond_Pa, "T", 37.0 + KELVIN, "R134a")

    assert numbers.old.liquid.static_head_Pa == pytest.approx(density * 9.80665 * 6.0, rel=1e-3)
    assert 10e3 < numbers.old.liquid.static_head_Pa / 6.0 < 12e3


def test_subcooling_left_starts_from_what_the_condenser_gives_today(numbers):
    """Today's at the valve is the case's 3 K; the candidate's differs by what each uses up on the way."""
    used = [side.liquid.subcooling_needed_K for side in (numbers.old, numbers.new)]

    assert numbers.subcooling_left_K.old == 3.0
    assert numbers.subcooling_left_K.new == pytest.approx(3.0 + used[0] - used[1], rel=1e-12)


def test_valve_passes_what_the_orifice_equation_says(case_with):
    """k = [q sqrt(rho dp)] new over old with states of CoolProp; losses of lines and distributor not counted."""
    found = of(case_with, "lines", "liquid", "length")

    def drive(side):
        p_cond, p_evap = side.design.p_cond_Pa, side.design.p_evap_Pa
        name, T_liquid = side.refrigerant, side.design.T_cond_bubble_K - 3.0
        density, h = (PropsSI(what, "P", p_cond, "T", T_liquid, name) for what in "DH")
        h_out = PropsSI("H", "P", p_evap, "T", side.design.T_evap_dew_K + 5.0, name)
        return (h_out - h) * sqrt(density * (p_cond - p_evap))

    expected = drive(found.new) / drive(found.old)
    load = found.new.design.cooling_W / found.old.design.cooling_W

    assert found.valve.losses.startswith("no loss of the liquid line")
    assert found.valve.capacity_ratio == pytest.approx(expected, rel=2e-3)
    assert found.valve.load_ratio == pytest.approx(load, rel=1e-12)
    assert found.valve.fit == pytest.approx(expected / load, rel=2e-3)


def test_the_line_takes_its_share_of_the_pressure_before_the_valve(numbers, case_with):
    """With friction and height of the liquid line known, less is left for the valve by just these."""
    without, line = of(case_with, "lines", "liquid", "length"), numbers.new.liquid
    lost = line.pressure_drop_Pa + line.static_head_Pa

    assert without.valve.pressure_difference_Pa.new - numbers.valve.pressure_difference_Pa.new == pytest.approx(lost)


def test_a_loss_given_goes_with_flow_squared_over_density(case_with):
    """1 bar of the line today becomes (m/m)^2 rho/rho bar: by hand from the numbers of both sides."""
    tables = {**FULL, "valve": {"kind": "thermostatic", "liquid_line_loss": "1 bar"}}
    found = compare(case_with("R134a", ["R1234yf"], **tables)).candidates[0].hardware_numbers
    old, new = found.old, found.new
    flow = new.design.mass_flow_kg_per_s / old.design.mass_flow_kg_per_s
    loss = 1e5 * flow**2 * old.liquid_density_kg_per_m3 / new.liquid_density_kg_per_m3
    left = new.design.p_cond_Pa - new.design.p_evap_Pa - loss

    assert found.valve.pressure_difference_Pa.new == pytest.approx(left, rel=1e-9)
    assert found.valve.pressure_difference_Pa.old == pytest.approx(old.design.p_cond_Pa - old.design.p_evap_Pa - 1e5)


def test_charge_goes_with_the_density_of_the_liquid(numbers):
    """100 kg times the densities of CoolProp 3 K below 40 degC, a tenth either way."""
    dense = [
        PropsSI("D", "P", side.design.p_cond_Pa, "T", side.design.T_cond_bubble_K - 3.0, side.refrigerant)
        for side in (numbers.old, numbers.new)
    ]
    expected = 100.0 * dense[1] / dense[0]
    filling = numbers.filling

    assert filling.expected_kg == pytest.approx(expected, rel=1e-3)
    assert (filling.lowest_kg, filling.highest_kg) == pytest.approx((0.9 * expected, 1.1 * expected), rel=1e-3)


def test_receiver_is_filled_at_the_warmer_of_condensing_and_ambient(numbers):
    """At 43 degC: mass over volume times density of saturated liquid by CoolProp."""
    filling = numbers.filling
    density = PropsSI("D", "T", 43.0 + KELVIN, "Q", 0, "R134a")

    assert filling.T_receiver_K == pytest.approx(43.0 + KELVIN)
    assert filling.receiver_share.old == pytest.approx(100.0 / (0.150 * density), rel=1e-3)


def test_old_oil_left_is_a_power_of_what_each_change_leaves(numbers):
    """30 % left twice: 0.3 x 0.3 = 9 %."""
    assert numbers.residual_oil == pytest.approx(0.09)


def test_set_points_keep_their_saturation_temperature(numbers):
    """For pure fluids dew and mean are one: the pressure of R1234yf where R134a has the set one, by CoolProp."""
    assert [item.key for item in numbers.settings] == [
        *("low_pressure_cut_out", "rack_set_point", "head_pressure", "fan_steps", "fan_steps")
    ]
    for item in numbers.settings:
        T_K = PropsSI("T", "P", item.p_Pa.old, "Q", 1, "R134a")

        assert item.T_K == pytest.approx(T_K, abs=0.01)
        assert item.p_Pa.new == pytest.approx(PropsSI("P", "T", T_K, "Q", 1, "R1234yf"), rel=1e-3)


def test_with_glide_a_coil_keeps_its_mean_and_a_switch_its_dew_temperature(case_with):
    """R404A to R448A: at the same mean the pressure is higher than at the same dew point, by half the glide."""
    controls = {"low_pressure_cut_out": "3 bar g", "evaporator_regulator": "3 bar g", "head_pressure": "15 bar g"}
    found = compare(case_with("R404A", ["R448A"], controls=controls)).candidates[0].hardware_numbers
    by_dew, by_mean, head = found.settings
    new = fluid("R448A")
    dew = float(new.dew(by_mean.p_Pa.new).T_K)
    condenser = 0.5 * (new.dew(head.p_Pa.new).T_K + new.bubble(head.p_Pa.new).T_K)

    assert by_dew.p_Pa.new == pytest.approx(float(new.p_dew(by_dew.T_K)), rel=1e-6)
    assert by_mean.p_Pa.new > by_dew.p_Pa.new
    assert dew - by_mean.T_K == pytest.approx(0.5 * found.new.design.glide_evap_K, abs=0.15)
    assert float(condenser) == pytest.approx(head.T_K, abs=1e-3)


def test_a_set_point_out_of_reach_says_why(case_with):
    """60 bar is beyond the dew line of R134a."""
    controls = {"low_pressure_cut_out": "60 bar g"}
    (item,) = compare(case_with("R134a", ["R1234yf"], controls=controls)).candidates[0].hardware_numbers.settings

    assert item.p_Pa.new is None
    assert "R134a" in item.reason


@pytest.mark.parametrize(
    ("path", "number", "word"),
    [
        (("plant", "highest_ambient"), "hottest", "highest_ambient"),
        (("plant", "highest_ambient"), "standstill", "highest_ambient"),
        (("condenser", "medium"), "hottest", "medium"),
        (("compressor", "highest_suction"), "pull_down", "highest_suction"),
        (("readings", "current"), "current", "current"),
        (("plant", "charge"), "filling", "charge"),
        (("plant", "oil_changes"), "residual_oil", "oil_changes"),
        (("plant", "oil_left"), "residual_oil", "oil_left"),
    ],
)
def test_what_is_missing_is_named(case_with, path, number, word):
    """A key left out leaves its number unknown and stands in the reason."""
    found = of(case_with, *path)

    gap = {**found.missing, **found.new.missing}[number]
    assert f"`{word}`" in gap.words
    assert any(key.rpartition(".")[2] == word for key in gap.keys)


def test_nothing_given_leaves_everything_unknown(case_with):
    """Without any table of hardware there are no lines, currents, charge, settings or hottest day."""
    found = compare(case_with("R134a", ["R1234yf"])).candidates[0].hardware_numbers
    new = found.new

    assert [new.hottest, new.pull_down, new.p_standstill_Pa, new.suction, new.discharge, new.liquid] == [None] * 6
    assert [found.filling, found.residual_oil, found.current_A.new, found.subcooling_left_K.new] == [None] * 4
    assert found.settings == ()


@pytest.mark.parametrize("medium", ["water", "brine"])
def test_the_hottest_air_says_nothing_on_a_condenser_cooled_by_water(case_with, medium):
    """Its highest temperature is not in the case, the reason says so and names its key; given, it is computed."""
    tables = {**FULL, "condenser": {**FULL["condenser"], "medium": medium}}
    found = compare(case_with("R134a", ["R1234yf"], **tables)).candidates[0].hardware_numbers.new

    assert found.hottest is None
    assert medium in found.missing["hottest"].words
    assert found.missing["hottest"].keys == ("condenser.highest_inlet",)

    tables["condenser"]["highest_inlet"] = "33 degC"  # 3 K above that of the duty
    given = compare(case_with("R134a", ["R1234yf"], **tables)).candidates[0]

    assert given.hardware_numbers.new.hottest.p_cond_Pa > given.duty.p_cond_Pa
    assert not given.hardware_numbers.new.missing["hottest"]


def test_a_highest_inlet_of_air_goes_before_the_hottest_air_around(case_with):
    """The air that a condenser draws while it runs may be cooler than the hottest around the plant at rest."""
    own = {**FULL["condenser"], "highest_inlet": FULL["plant"]["highest_ambient"]}
    same, around = (
        compare(case_with("R134a", ["R1234yf"], **{**FULL, "condenser": condenser})).candidates[0].hardware_numbers
        for condenser in (own, FULL["condenser"])
    )

    assert same.new.hottest == around.new.hottest


def test_a_current_read_at_part_load_is_not_used(case_with):
    """At 60 % load the current says nothing on full load."""
    tables = {**FULL, "readings": {"current": "80 A", "load": "60 %"}}
    found = compare(case_with("R134a", ["R1234yf"], **tables)).candidates[0].hardware_numbers

    assert found.current_A.new is None
    assert "60% load" in found.missing["current"].words


@pytest.mark.parametrize("key", ["length", "lowest_load"])
def test_a_line_without_length_or_lowest_load_keeps_its_velocity(case_with, key):
    """What does not depend on the key stays known."""
    flow = of(case_with, "lines", "suction", key).new.suction

    assert flow.velocity_m_per_s > 0.0
    assert (flow.pressure_drop_Pa is None) == (key == "length")
    assert (flow.flow_reversal is None) == (key == "lowest_load")


def test_above_the_critical_temperature_there_is_no_standstill_pressure(case_with):
    """R23 is supercritical at 43 degC (critical at 26 degC): no bound from saturation."""
    tables = {"plant": {"highest_ambient": "43 degC"}, "duty": {"evaporating": "-60 degC", "condensing": "-10 degC"}}
    found = compare(case_with("R23", ["R23"], **tables)).existing.hardware_numbers.new

    assert found.p_standstill_Pa is None
    assert "no liquid at 43 °C" in found.missing["standstill"].words


def test_where_the_hot_day_has_no_solution_the_reason_says_so(case_with):
    """R404A cannot condense at 75 degC, its critical temperature being 72 degC."""
    tables = {**FULL, "plant": {"highest_ambient": "65 degC"}}
    found = compare(case_with("R404A", ["R448A"], **tables)).existing.hardware_numbers.new

    assert found.hottest is None
    assert "critical temperature of R404A" in found.missing["hottest"].words


def test_a_day_on_which_todays_plant_does_not_run_counts_at_standstill_only(case_with):
    """At 60 degC R404A has no solution; R452A, with a critical temperature 3 K higher, has, but is not held to it."""
    tables = {**FULL, "plant": {"highest_ambient": "60 degC"}, "duty": {**FULL["duty"], "condensing": "42 degC"}}
    found = compare(case_with("R404A", ["R452A"], **tables)).candidates[0].hardware_numbers.new

    assert found.hottest is None
    assert "standstill only" in found.missing["hottest"].words
    assert found.p_standstill_Pa > 28e5
