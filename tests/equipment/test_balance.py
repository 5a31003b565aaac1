"""The balance of an existing plant: it returns to where it started, follows physics, and agrees with another solver."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from retrofit.cycle import Settings, solve_cycle
from retrofit.equipment import balance as module
from retrofit.equipment.balance import (
    CHUNK,
    Balance,
    Exchanger,
    Machine,
    balance,
    condenser_difference,
    evaporator_difference,
)
from retrofit.equipment.exchanger import Secondary
from retrofit.properties import fluid

SWEPT = 201.0 / 3600.0
SETTINGS = Settings(useful_superheat_K=7.0, line_superheat_K=8.0, subcooling_K=3.0)


def efficiencies(ratio: np.ndarray, p_suction: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return invented efficiencies that fall with the pressure ratio."""
    return 0.70 - 0.005 * ratio, 1.0 - 0.04 * (ratio ** (1 / 1.12) - 1.0)


def plant(existing: str = "R404A", arrangement: str = "crossflow", condenser_in_K: float = 305.15) -> Machine:
    """Return an invented plant whose conductances come from its point at -8 / 42 degC."""
    refrigerant = fluid(existing)
    p_evap, p_cond = refrigerant.p_dew(265.15), refrigerant.p_dew(315.15)
    isentropic, volumetric = efficiencies(p_cond / p_evap, p_evap)
    own = replace(SETTINGS, isentropic_efficiency=isentropic, volumetric_efficiency=volumetric)
    cycle = solve_cycle(refrigerant, p_evap, p_cond, own)
    flow = SWEPT * volumetric * cycle.density_suction_kg_per_m3
    cooling, heat = flow * cycle.refrigerating_effect_J_per_kg, flow * cycle.heat_rejected_J_per_kg
    evaporator = Exchanger(1.0, Secondary(275.15, float(cooling) / 5.0), arrangement)
    condenser = Exchanger(1.0, Secondary(condenser_in_K, float(heat) / 7.0), "crossflow")
    return Machine(
        SWEPT,
        efficiencies,
        replace(
            evaporator,
            conductance_W_per_K=float(cooling / evaporator_difference(refrigerant, cycle, cooling, evaporator)),
        ),
        replace(condenser, conductance_W_per_K=float(heat / condenser_difference(refrigerant, cycle, heat, condenser))),
        SETTINGS,
    )


def cooling_of(found: Balance) -> np.ndarray:
    """Return the cooling of a balanced plant."""
    return found.mass_flow_kg_per_s * found.cycle.refrigerating_effect_J_per_kg


@pytest.mark.parametrize("arrangement", ["counterflow", "crossflow", "flooded"])
def test_existing_refrigerant_returns_to_its_own_point(arrangement: str) -> None:
    """From a start far away, the plant settles where its conductances were taken from."""
    found = balance(fluid("R404A"), plant(arrangement=arrangement), 258.0, 325.0)

    assert found.is_solved
    assert found.cycle.T_evap_dew_K == pytest.approx(265.15, abs=1e-5)
    assert found.cycle.T_cond_dew_K == pytest.approx(315.15, abs=1e-5)


@pytest.mark.parametrize("name", ["R448A", "R452A", "R454C", "R455A", "R290", "R134a"])
def test_energy_is_conserved_and_residuals_are_small(name: str) -> None:
    """Cooling, line heat and power leave through the condenser, and both equations hold to 1e-6."""
    found = balance(fluid(name), plant(), 265.0, 315.0)
    cycle, flow = found.cycle, found.mass_flow_kg_per_s
    taken = flow * (cycle.refrigerating_effect_J_per_kg + cycle.line_heat_J_per_kg + cycle.work_J_per_kg)

    assert found.residual < 1e-6
    assert taken == pytest.approx(float(flow * cycle.heat_rejected_J_per_kg), rel=1e-9)


def test_array_of_conditions_is_the_same_as_one_by_one() -> None:
    """Every condition is solved for itself: alone, in an array, or across the border of a chunk."""
    warm = np.linspace(285.0, 315.0, CHUNK + 3)
    machine = plant()
    many = replace(machine, condenser=replace(machine.condenser, secondary=_medium(machine, warm)))

    found = balance(fluid("R448A"), many, 265.0, warm + 10.0)

    assert found.is_solved.all()
    assert found.cycle.cop.shape == warm.shape
    for place in (0, 1000, CHUNK - 1, CHUNK, CHUNK + 2):
        single = replace(machine, condenser=replace(machine.condenser, secondary=_medium(machine, warm[place])))
        alone = balance(fluid("R448A"), single, 265.0, warm[place] + 10.0)
        assert found.cycle.cop[place] == pytest.approx(float(alone.cycle.cop), rel=1e-7)


def _medium(machine: Machine, T_in_K: object) -> Secondary:
    return Secondary(T_in_K, machine.condenser.secondary.capacity_rate_W_per_K)  # type: ignore[arg-type]


def test_condition_without_solution_has_a_reason_and_touches_no_other() -> None:
    """A condenser inlet beyond the critical point gives NaN and a reason; its neighbours stay as they are."""
    machine = plant()
    both = replace(machine, condenser=replace(machine.condenser, secondary=_medium(machine, np.array([305.15, 400.0]))))

    found = balance(fluid("R404A"), both, 265.0, 315.0)

    assert found.is_solved.tolist() == [True, False]
    assert "critical" in str(found.reason[1])
    assert np.isnan(found.cycle.cop[1])
    assert found.cycle.T_cond_dew_K[0] == pytest.approx(315.15, abs=1e-5)


def test_superheat_that_the_medium_hardly_gives_holds_or_gives_way() -> None:
    """A refrigerant that hardly loads the evaporator: its gas comes up to the medium, or superheat takes its share.

    By hand: with 7 K held fixed at the outlet, evaporating stays 7 K below the medium at 275.15 K, at 268.15 K, less
    the hundredths of a kelvin at the outlet; a valve holds its superheat, so this is no lack of a solution.
    """
    rigid = plant()

    stiff = balance(fluid("R1233zd(E)"), rigid, 265.0, 315.0)
    found = balance(fluid("R1233zd(E)"), replace(rigid, superheat_share=0.65, subcooling_share=0.7), 265.0, 315.0)

    assert stiff.is_solved
    assert stiff.residual < 1e-6
    assert 268.15 - 0.02 < float(stiff.cycle.T_evap_dew_K) < 268.15
    assert found.is_solved
    assert found.cycle.settings.useful_superheat_K == pytest.approx(
        0.65 * (275.15 - float(found.cycle.T_evap_dew_K)), rel=1e-9
    )


# Loads from 2 % to 100 % of today's, what they are given off into, and the refrigerants. Gliding ones come within
# hundredths of a kelvin of the medium at the low end.
LOADS_W = np.linspace(0.02, 1.0, 50) * 105e3
AIRS_K = (277.15, 305.15)


@pytest.mark.parametrize("air_K", AIRS_K)
@pytest.mark.parametrize("arrangement", ["crossflow", "counterflow"])
@pytest.mark.parametrize("name", ["R404A", "R448A", "R454C", "R455A", "R290"])
def test_every_load_of_a_slowed_plant_balances(name: str, arrangement: str, air_K: float) -> None:
    """Power over load rises with the load, without a jump, and both equations hold.

    By physics: with constant efficiencies of the compressor a smaller load brings both temperatures closer to their
    media, hence less lift and less power for each watt; at no load the lift is that between the media, with the glide.
    """
    machine = replace(
        plant(arrangement=arrangement),
        efficiencies=lambda ratio, p: (0.0 * ratio + 0.65, 0.0 * ratio + 0.85),
        superheat_share=0.65,
        subcooling_share=0.7,
    )
    machine = replace(machine, condenser=replace(machine.condenser, secondary=_medium(machine, air_K)))
    found = balance(fluid(name), machine, 265.0, air_K + 10.0, LOADS_W)
    ratio = found.mass_flow_kg_per_s * found.cycle.work_J_per_kg / LOADS_W

    assert found.is_solved.all(), set(found.reason)
    assert found.residual.max() <= 1e-6
    assert np.all(np.diff(ratio) > 0.0)
    # No jump: no step is more than three times the mean of its two neighbours.
    steps = np.diff(ratio)
    assert np.all(steps[1:-1] < 1.5 * (steps[:-2] + steps[2:]))
    for place in (0, 3, 11, 30):
        alone = balance(fluid(name), machine, 265.0, air_K + 10.0, LOADS_W[place])
        assert float(alone.mass_flow_kg_per_s) == pytest.approx(found.mass_flow_kg_per_s[place], rel=2e-6)


def test_a_failed_search_is_not_told_as_physics(monkeypatch: pytest.MonkeyPatch) -> None:
    """A search stopped before its end says that it failed; it names no limit of the plant."""
    for name in ("MOST_STEPS", "FINISHING_STEPS"):
        monkeypatch.setattr(module, name, 0)
    monkeypatch.setattr(module._settled, "__defaults__", (0, module.SLOPE_STEP_K))
    found = balance(fluid("R404A"), plant(), 265.0, 320.0)

    assert not found.is_solved
    assert str(found.reason) == module.NOT_CONVERGED


def test_air_colder_than_what_is_cooled_leaves_nothing_to_compress() -> None:
    """A condenser in air 20 K below the evaporator's medium, with no control of the head pressure: no compression."""
    machine = replace(plant(), superheat_share=0.65, subcooling_share=0.7)
    machine = replace(machine, condenser=replace(machine.condenser, secondary=_medium(machine, 255.15)))
    found = balance(fluid("R404A"), machine, 265.0, 275.0, 20e3)

    assert not found.is_solved
    assert "nothing to compress" in str(found.reason)


def test_physics_of_hotter_condensers_and_larger_exchangers() -> None:
    """Warmer air costs capacity and power; a larger evaporator raises the evaporating temperature and capacity."""
    machine = plant()
    hot = replace(machine, condenser=replace(machine.condenser, secondary=_medium(machine, 310.15)))
    large = replace(
        machine,
        evaporator=replace(
            machine.evaporator, conductance_W_per_K=1.2 * np.asarray(machine.evaporator.conductance_W_per_K)
        ),
    )
    usual, hotter, larger = (balance(fluid("R404A"), item, 265.0, 315.0) for item in (machine, hot, large))

    assert cooling_of(hotter) < cooling_of(usual) < cooling_of(larger)
    assert hotter.cycle.cop < usual.cycle.cop < larger.cycle.cop
    assert larger.cycle.T_evap_dew_K > usual.cycle.T_evap_dew_K


def test_cooling_less_makes_cop_look_better_than_it_is() -> None:
    """A fluid of small capacity unloads the exchangers; at the same cooling most of its COP gain is gone.

    The trade's warning on same-conductance comparisons: COP has to be shown at the same cooling.
    """
    machine = plant()
    today = balance(fluid("R404A"), machine, 265.0, 315.0)
    small = balance(fluid("R134a"), machine, 265.0, 305.0)
    same = balance(fluid("R134a"), machine, 265.0, 315.0, load_W=float(cooling_of(today)))

    assert small.cycle.cop / today.cycle.cop > 1.3
    assert same.cycle.cop / today.cycle.cop < 1.2
    assert cooling_of(same) == pytest.approx(float(cooling_of(today)), rel=1e-9)
    assert same.swept_volume_m3_per_s > 1.5 * SWEPT


def test_pressure_drop_and_shell_loss_enter_the_balance() -> None:
    """A drop of 2 K before the compressor lowers its suction pressure and the cooling of the plant."""
    machine = plant()
    dropping = replace(machine, settings=replace(SETTINGS, suction_drop_K=2.0, heat_loss_share=0.05))

    found, usual = (balance(fluid("R404A"), item, 265.0, 315.0) for item in (dropping, machine))

    assert found.cycle.p_suction_Pa < found.cycle.p_evap_Pa
    assert cooling_of(found) < cooling_of(usual)


def test_agrees_with_a_solver_on_the_property_library() -> None:
    """R134a, flooded evaporator and crossflow condenser, against scipy on CoolProp's own pure-fluid calls.

    Independent: another solver, other property calls, and the condenser integrated over 400 parts by the
    midpoint rule instead of a few parts by logarithmic means. Tolerance 0.02 K for the difference in parts.
    """
    machine = plant("R134a", arrangement="flooded")
    found = balance(fluid("R134a"), machine, 265.0, 315.0)

    T_evap, T_cond = _by_property_library(machine)

    assert found.cycle.T_evap_dew_K == pytest.approx(T_evap, abs=0.02)
    assert found.cycle.T_cond_dew_K == pytest.approx(T_cond, abs=0.02)


def _by_property_library(machine: Machine) -> tuple[float, float]:
    from CoolProp.CoolProp import PropsSI
    from scipy.optimize import fsolve

    def lacks(T: np.ndarray) -> list[float]:
        p_e, p_c = (PropsSI("P", "T", t, "Q", 1, "R134a") for t in T)
        h_out = PropsSI("H", "P", p_e, "T", T[0] + 7.0, "R134a")
        h1, s1, rho = (PropsSI(key, "P", p_e, "T", T[0] + 15.0, "R134a") for key in "HSD")
        isentropic, volumetric = efficiencies(np.float64(p_c / p_e), np.float64(p_e))
        h2 = h1 + (PropsSI("H", "P", p_c, "S", s1, "R134a") - h1) / isentropic
        h3 = PropsSI("H", "P", p_c, "T", T[1] - 3.0, "R134a")
        flow = SWEPT * volumetric * rho
        cooling, heat = flow * (h_out - h3), flow * (h2 - h3)
        evaporator, condenser = machine.evaporator, machine.condenser
        rate_e, rate_c = (float(x.secondary.capacity_rate_W_per_K) for x in (evaporator, condenser))
        units = float(np.asarray(evaporator.conductance_W_per_K)) / rate_e
        possible = rate_e * (1.0 - np.exp(-units)) * (float(evaporator.secondary.T_in_K) - T[0])
        h = h2 + (np.arange(400) + 0.5) / 400 * (h3 - h2)
        hot = np.array([PropsSI("T", "P", p_c, "H", value, "R134a") for value in h])
        effectiveness = np.sum(heat / 400 / (hot - float(condenser.secondary.T_in_K))) / rate_c
        asked = -np.log1p(-min(effectiveness, 0.9999)) * rate_c
        return [possible / cooling - 1.0, float(np.asarray(condenser.conductance_W_per_K)) / asked - 1.0]

    T_evap, T_cond = fsolve(lacks, np.array([266.0, 314.0]), xtol=1e-8)
    return float(T_evap), float(T_cond)


@pytest.mark.parametrize("place", [0, 1])
def test_one_of_two_equations_is_not_a_balance(place: int, monkeypatch: pytest.MonkeyPatch) -> None:
    """Where the search leaves one exchanger 1 % short there is no solution, and the error is 1 %."""
    state = module._state

    def short(*arguments: object) -> object:
        found = state(*arguments)  # type: ignore[arg-type]
        lack = np.zeros_like(found.lack)
        lack[place] = 0.01 * found.needed[place]
        return replace(found, lack=lack)

    monkeypatch.setattr(module, "_state", short)
    found = balance(fluid("R404A"), plant(), 265.0, 315.0)

    assert not np.any(found.is_solved)
    assert float(found.residual) == pytest.approx(0.01, rel=1e-9)
