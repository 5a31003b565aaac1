"""The cycle obeys energy balance and second law, for random fluids and conditions."""

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from retrofit.cycle import Settings, solve_cycle, state_points
from retrofit.properties import fluid

KELVIN = 273.15
FLUIDS = ("R134a", "R32", "R717", "R290", "R600a", "R404A", "R410A", "R407C", "R448A", "R454B", "R455A", "R513A")
# Tables hold h to 1e-5 of the latent heat: of 200 kJ/kg at 273 K, 0.01 J/(kg K); R-717 has six times as much.
ENTROPY = 0.01
OF_LATENT = 1e-5


@st.composite
def cycles(draw, names=FLUIDS, line=True, efficiency=True):
    """Return a fluid and a cycle of it: random temperatures, superheats, subcooling and efficiency."""
    f = fluid(draw(st.sampled_from(names)))
    T_evap = draw(st.floats(238.15, 283.15))
    T_cond = draw(st.floats(T_evap + 8.0, min(f.T_critical_K - 12.0, 333.15)))
    chosen = Settings(
        useful_superheat_K=draw(st.floats(0.0, 20.0)),
        line_superheat_K=draw(st.floats(0.0, 20.0)) if line else 0.0,
        subcooling_K=draw(st.floats(0.0, 6.0)),
        isentropic_efficiency=draw(st.floats(0.4, 1.0)) if efficiency else 1.0,
    )
    cycle = solve_cycle(f.as_lenient(), f.p_dew(T_evap), f.p_dew(T_cond), chosen)
    assume(np.isfinite(cycle.T_discharge_K))  # hotter than the table goes: refused elsewhere
    return f, cycle


def _points(f, cycle):
    return {point.name: point for point in state_points(f, cycle)}


def _latent(f, cycle):
    return float(f.dew(cycle.p_evap_Pa).h_J_per_kg - f.bubble(cycle.p_evap_Pa).h_J_per_kg)


@given(cycles())
@settings(max_examples=150, deadline=None)
def test_energy_in_is_energy_out(drawn):
    """Evaporator, suction line and compressor together take up what the condenser gives off, to 1e-9."""
    f, cycle = drawn
    taken = cycle.refrigerating_effect_J_per_kg + cycle.line_heat_J_per_kg + cycle.work_J_per_kg
    at = _points(f, cycle)

    assert float(taken) == pytest.approx(float(cycle.heat_rejected_J_per_kg), rel=1e-9)
    # The same from the state points, which are found anew from pressure and superheat, subcooling or enthalpy.
    around = ("compressor inlet", "discharge", "expansion valve inlet", "evaporator inlet", "evaporator outlet")
    h = {name: float(at[name].h_J_per_kg) for name in around}
    assert h["evaporator inlet"] == pytest.approx(h["expansion valve inlet"], rel=1e-9)
    assert h["discharge"] - h["compressor inlet"] == pytest.approx(float(cycle.work_J_per_kg), rel=1e-9)
    effect = h["evaporator outlet"] - h["evaporator inlet"]
    assert effect == pytest.approx(float(cycle.refrigerating_effect_J_per_kg), rel=1e-9)


@given(cycles())
@settings(max_examples=150, deadline=None)
def test_entropy_never_falls(drawn):
    """Compression and expansion make entropy; each exchanger takes heat no warmer, and gives it no colder, than its own
    warmest and coldest state."""
    f, cycle = drawn
    at = _points(f, cycle)
    s = {name: float(point.s_J_per_kgK) for name, point in at.items()}
    T = {name: float(point.T_K) for name, point in at.items()}
    slack = OF_LATENT * _latent(f, cycle) / float(cycle.T_evap_dew_K) + ENTROPY

    assert s["discharge"] >= s["compressor inlet"] - slack
    assert s["evaporator inlet"] >= s["expansion valve inlet"] - slack
    taken = float(cycle.refrigerating_effect_J_per_kg)
    assert s["evaporator outlet"] - s["evaporator inlet"] >= taken / T["evaporator outlet"] - slack
    given_off = float(cycle.heat_rejected_J_per_kg)
    assert s["discharge"] - s["expansion valve inlet"] <= given_off / T["expansion valve inlet"] + slack


@given(cycles(line=False))
@settings(max_examples=150, deadline=None)
def test_cop_is_below_carnot(drawn):
    """COP stays under Carnot's between the entropy-mean temperatures of the two exchangers (heat over entropy)."""
    f, cycle = drawn
    at = _points(f, cycle)
    s = {name: float(point.s_J_per_kgK) for name, point in at.items()}
    T_low = float(cycle.refrigerating_effect_J_per_kg) / (s["evaporator outlet"] - s["evaporator inlet"])
    T_high = float(cycle.heat_rejected_J_per_kg) / (s["discharge"] - s["expansion valve inlet"])

    assert float(cycle.T_evap_inlet_K) - 1e-2 < T_low < float(at["evaporator outlet"].T_K) + 1e-2
    assert float(at["expansion valve inlet"].T_K) - 1e-2 < T_high < float(cycle.T_discharge_K) + 1e-2
    assert 0.0 < float(cycle.cop) < T_low / (T_high - T_low) * (1.0 + 1e-4)


@given(st.sampled_from(["R134a", "R32", "R717", "R290", "R600a"]), st.floats(233.15, 283.15), st.floats(10.0, 50.0))
@settings(max_examples=60, deadline=None)
def test_pure_saturated_cycle_is_below_carnot_of_its_stated_temperatures(name, T_evap, lift):
    """Without glide, superheat and subcooling, the stated temperatures themselves bound the COP."""
    f = fluid(name)
    cycle = solve_cycle(f, f.p_dew(T_evap), f.p_dew(T_evap + lift), Settings(0.0, 0.0, 0.0, 1.0))

    assert 0.5 * T_evap / lift < float(cycle.cop) < T_evap / lift


@given(cycles(efficiency=False))
@settings(max_examples=80, deadline=None)
def test_ideal_compression_keeps_entropy(drawn):
    """At an isentropic efficiency of one, real and isentropic discharge are one state of the suction entropy."""
    f, cycle = drawn
    at = _points(f, cycle)
    slack = OF_LATENT * _latent(f, cycle) / float(cycle.T_evap_dew_K) + ENTROPY

    assert cycle.T_discharge_K == cycle.T_discharge_isentropic_K
    assert float(at["discharge"].s_J_per_kgK) == pytest.approx(float(cycle.s_suction_J_per_kgK), abs=slack)


@given(cycles())
@settings(max_examples=150, deadline=None)
def test_what_went_in_comes_back(drawn):
    """Efficiency, superheat and subcooling are recovered from the states alone."""
    f, cycle = drawn
    set_to = cycle.settings
    h_ideal = f.h_at_entropy(cycle.p_cond_Pa, cycle.s_suction_J_per_kgK)
    real = f.above_bubble(cycle.p_cond_Pa, cycle.h_discharge_J_per_kg)
    at = _points(f, cycle)
    superheat = float(at["evaporator outlet"].T_K - f.dew(cycle.p_evap_Pa).T_K)

    efficiency = (h_ideal - cycle.h_suction_J_per_kg) / (real.h_J_per_kg - cycle.h_suction_J_per_kg)
    assert float(efficiency) == pytest.approx(set_to.isentropic_efficiency, rel=1e-9)
    assert float(real.T_K) == pytest.approx(float(cycle.T_discharge_K), abs=1e-6)
    assert superheat == pytest.approx(set_to.useful_superheat_K, abs=1e-6)
    assert float(cycle.T_suction_K - at["evaporator outlet"].T_K) == pytest.approx(set_to.line_superheat_K, abs=1e-6)
    subcooling = float(cycle.T_cond_bubble_K - at["expansion valve inlet"].T_K)
    assert subcooling == pytest.approx(set_to.subcooling_K, abs=1e-6)


@given(cycles())
@settings(max_examples=100, deadline=None)
def test_efficiency_from_pressures_and_temperatures(drawn):
    """The efficiency comes back from what a plant's instruments show: two pressures and two temperatures."""
    f, cycle = drawn
    dry = float(cycle.T_discharge_K - cycle.T_cond_dew_K)
    assume(dry > 0.5)  # a wet discharge has no temperature of its own
    suction = f.vapour(cycle.p_evap_Pa, cycle.T_suction_K - f.dew(cycle.p_evap_Pa).T_K)
    h_real = f.vapour(cycle.p_cond_Pa, cycle.T_discharge_K - f.dew(cycle.p_cond_Pa).T_K).h_J_per_kg
    ideal = f.h_at_entropy(cycle.p_cond_Pa, suction.s_J_per_kgK) - suction.h_J_per_kg
    efficiency = float(ideal / (h_real - suction.h_J_per_kg))

    # 1e-5 of the latent heat in each enthalpy, against the work
    allowed = 4.0 * OF_LATENT * _latent(f, cycle) / float(cycle.work_J_per_kg)
    assert efficiency == pytest.approx(cycle.settings.isentropic_efficiency, rel=allowed)


@given(cycles())
@settings(max_examples=60, deadline=None)
def test_a_refrigerant_against_itself_is_exactly_one(drawn):
    """The same refrigerant at the same conditions gives every ratio exactly 1 and every difference exactly 0."""
    f, cycle = drawn
    again = solve_cycle(f, cycle.p_evap_Pa, cycle.p_cond_Pa, cycle.settings)

    assert again.cop / cycle.cop == 1.0
    assert again.volumetric_capacity_J_per_m3 / cycle.volumetric_capacity_J_per_m3 == 1.0
    assert again.pressure_ratio / cycle.pressure_ratio == 1.0
    assert again.T_discharge_K - cycle.T_discharge_K == 0.0


def _rises(values):
    return bool(np.all(np.diff(values) > 0.0))


@pytest.mark.parametrize("name", FLUIDS)
def test_trends_with_temperature(name):
    """Warmer condensing: less COP and effect, hotter gas. Warmer evaporating: more COP and capacity, cooler gas."""
    f = fluid(name)
    T_cond, T_evap = np.linspace(298.15, 328.15, 13), np.linspace(238.15, 283.15, 13)
    by_cond = solve_cycle(f, f.p_dew(263.15), f.p_dew(T_cond), Settings(subcooling_K=2.0))
    by_evap = solve_cycle(f, f.p_dew(T_evap), f.p_dew(318.15), Settings(subcooling_K=2.0))

    assert _rises(-by_cond.cop)
    assert _rises(-by_cond.refrigerating_effect_J_per_kg)
    assert _rises(-by_cond.volumetric_capacity_J_per_m3)
    assert _rises(by_cond.T_discharge_K)
    assert _rises(by_cond.pressure_ratio)
    assert _rises(by_evap.cop)
    assert _rises(by_evap.volumetric_capacity_J_per_m3)
    assert _rises(-by_evap.T_discharge_K)
    assert _rises(-by_evap.pressure_ratio)


@pytest.mark.parametrize("name", FLUIDS)
def test_trends_with_settings(name):
    """Subcooling and efficiency help; a warmer suction line costs capacity and makes the gas hotter."""
    f = fluid(name)
    p_evap, p_cond = f.p_dew(263.15), f.p_dew(313.15)
    cooled = solve_cycle(f, p_evap, p_cond, Settings(subcooling_K=np.linspace(0.0, 10.0, 11)))
    better = solve_cycle(f, p_evap, p_cond, Settings(isentropic_efficiency=np.linspace(0.5, 1.0, 11)))
    warmer = solve_cycle(f, p_evap, p_cond, Settings(line_superheat_K=np.linspace(0.0, 30.0, 11)))

    assert _rises(cooled.cop)
    assert _rises(cooled.volumetric_capacity_J_per_m3)
    assert np.ptp(cooled.T_discharge_K) == 0.0
    assert _rises(better.cop)
    assert _rises(-better.T_discharge_K)
    assert np.ptp(better.volumetric_capacity_J_per_m3) == 0.0
    assert _rises(warmer.T_discharge_K)
    assert _rises(-warmer.volumetric_capacity_J_per_m3)
    assert _rises(warmer.line_heat_J_per_kg)
    assert np.ptp(warmer.refrigerating_effect_J_per_kg) == 0.0


def test_volumetric_efficiency_does_not_touch_the_cycle():
    """The volumetric efficiency belongs to the machine: states and volumetric capacity do not change with it."""
    f = fluid("R134a")
    one, other = (
        solve_cycle(f, f.p_dew(263.15), f.p_dew(313.15), Settings(volumetric_efficiency=value)) for value in (0.5, 1.0)
    )

    assert one.volumetric_capacity_J_per_m3 == other.volumetric_capacity_J_per_m3
    assert one.cop == other.cop


def test_r744_is_refused_above_its_critical_pressure():
    """A condensing pressure above the critical one has no dew point: refused with the range."""
    f = fluid("R744")
    with pytest.raises(ValueError, match="R744: dew pressure 90 bar is outside the range"):
        solve_cycle(f, f.p_dew(263.15), 90e5, Settings())
