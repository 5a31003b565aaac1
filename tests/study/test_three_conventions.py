"""The convention decides the sign: dew = dew, mean = mean, and the plant as installed, on one low-temperature rack.

Expected figures: own calculation for the trade notes this project started from (property library with cold flashes,
one stage, constant isentropic efficiency, volumetric efficiency 1 - 0.04 (PR^(1/1.12) - 1)), rounded to whole points;
not published. R404A at -30 / 40 degC with 20 K of superheat in all. The notes do not print three inputs: half of the
superheat is taken as useful, subcooling as 3 K, and exchangers in counterflow with 14 and 12 K at their inlets.
The isentropic efficiency follows from their discharge temperature for R404A, 91 degC. Agreement asked: 2 points, 2 K.
"mean" is there the midpoint of bubble and dew in both exchangers.
"""

from __future__ import annotations

from dataclasses import replace

import pytest
from scipy.optimize import brentq

from retrofit.cycle import Cycle, Settings, solve_cycle
from retrofit.equipment.balance import Exchanger, Machine, balance, condenser_difference, evaporator_difference
from retrofit.equipment.exchanger import Secondary
from retrofit.properties import Fluid, fluid

KELVIN = 273.15
T_EVAP, T_COND = KELVIN - 30.0, KELVIN + 40.0
HELD = Settings(useful_superheat_K=10.0, line_superheat_K=10.0, subcooling_K=3.0)
SWEPT = 0.1
# Refrigerant: capacity and COP against R404A in per cent at equal dew, equal mean, same plant; discharge degC.
EXPECTED = {
    "R448A": (-8, 10, 5, 12, 0, 11, 114),
    "R449A": (-8, 10, 4, 11, -1, 11, 112),
    "R407A": (-13, 9, 0, 11, -3, 12, 113),
    "R407F": (-6, 10, 8, 12, 2, 11, 123),
    "R452A": (-5, 4, 1, 4, -2, 3, 92),
    "R454C": (-19, 13, -5, 14, -8, 15, 101),
    "R290": (-5, 13, -6, 13, -3, 17, 98),
}


def volumetric(ratio: float) -> float:
    """Return the volumetric efficiency of the notes."""
    return 1.0 - 0.04 * (ratio ** (1 / 1.12) - 1.0)


def cycle_of(refrigerant: Fluid, p_evap: float, p_cond: float, isentropic: float) -> Cycle:
    """Return the cycle between two pressures with the efficiencies of the notes."""
    own = replace(HELD, isentropic_efficiency=isentropic, volumetric_efficiency=volumetric(p_cond / p_evap))
    return solve_cycle(refrigerant, p_evap, p_cond, own)


def capacity_of(cycle: Cycle) -> float:
    """Return the cooling of each cubic metre swept."""
    return float(cycle.volumetric_capacity_J_per_m3 * cycle.settings.volumetric_efficiency)


def at_midpoint(refrigerant: Fluid, T: float) -> float:
    """Return the pressure whose bubble and dew temperatures have a midpoint."""
    return float(
        brentq(
            lambda p: 0.5 * float(refrigerant.dew(p).T_K + refrigerant.bubble(p).T_K) - T,
            0.8 * float(refrigerant.p_dew(T)),
            1.2 * float(refrigerant.p_bubble(T)),
        )
    )


@pytest.fixture(scope="module")
def rack() -> tuple[Machine, Cycle, float]:
    """Return the rack with R404A: machine, cycle, and isentropic efficiency from its discharge temperature."""
    today = fluid("R404A")
    pressures = float(today.p_dew(T_EVAP)), float(today.p_dew(T_COND))
    isentropic = brentq(lambda e: float(cycle_of(today, *pressures, e).T_discharge_K) - (KELVIN + 91.0), 0.3, 1.0)
    cycle = cycle_of(today, *pressures, isentropic)
    flow = SWEPT * volumetric(float(cycle.pressure_ratio)) * cycle.density_suction_kg_per_m3
    cooling, heat = flow * cycle.refrigerating_effect_J_per_kg, flow * cycle.heat_rejected_J_per_kg
    evaporator = Exchanger(1.0, Secondary(T_EVAP + 14.0, float(cooling) / 5.0), "counterflow")
    condenser = Exchanger(1.0, Secondary(T_COND - 12.0, float(heat) / 6.0), "counterflow")
    machine = Machine(
        SWEPT,
        lambda ratio, p: (isentropic + 0.0 * ratio, volumetric(ratio)),
        replace(
            evaporator, conductance_W_per_K=float(cooling / evaporator_difference(today, cycle, cooling, evaporator))
        ),
        replace(condenser, conductance_W_per_K=float(heat / condenser_difference(today, cycle, heat, condenser))),
        HELD,
    )
    return machine, cycle, isentropic


@pytest.mark.parametrize("name", EXPECTED)
def test_three_columns_of_the_trade_notes(name: str, rack: tuple[Machine, Cycle, float]) -> None:
    """Capacity and COP against R404A by all three conventions agree with the notes within 2 points."""
    machine, today, isentropic = rack
    refrigerant = fluid(name)
    dew = cycle_of(refrigerant, float(refrigerant.p_dew(T_EVAP)), float(refrigerant.p_dew(T_COND)), isentropic)
    mean = cycle_of(refrigerant, at_midpoint(refrigerant, T_EVAP), at_midpoint(refrigerant, T_COND), isentropic)
    plant = balance(refrigerant, machine, T_EVAP, T_COND)
    cooling = float(plant.mass_flow_kg_per_s * plant.cycle.refrigerating_effect_J_per_kg)
    found = [
        *(value for cycle in (dew, mean) for value in (capacity_of(cycle) / capacity_of(today), cycle.cop / today.cop)),
        cooling / (SWEPT * capacity_of(today)),
        plant.cycle.cop / today.cop,
    ]

    *ratios, discharge = EXPECTED[name]
    assert [100.0 * (float(value) - 1.0) for value in found] == pytest.approx(ratios, abs=2.0)
    assert float(mean.T_discharge_K) - KELVIN == pytest.approx(discharge, abs=2.0)


def test_sign_of_the_capacity_depends_on_the_convention(rack: tuple[Machine, Cycle, float]) -> None:
    """R448A cools less at equal dew and more at equal mean temperatures, on the same compressor."""
    _, today, isentropic = rack
    blend = fluid("R448A")
    dew = cycle_of(blend, float(blend.p_dew(T_EVAP)), float(blend.p_dew(T_COND)), isentropic)
    mean = cycle_of(blend, at_midpoint(blend, T_EVAP), at_midpoint(blend, T_COND), isentropic)

    assert capacity_of(dew) < capacity_of(today) < capacity_of(mean)
