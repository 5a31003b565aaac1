"""Time the balance of an existing plant: 12 candidates over 8760 conditions, and against a scripted solve.

Run by hand: python tests/bench/plant_balance.py
The scripted solve asks the property library's high-level interface for every state and solves the two equations
with scipy, for one condition of R448A. Exit status 1 if the year takes more than 10 s, a condition is not
solved to 1e-6, or a condition costs more than a thousandth of a scripted one.
"""

from __future__ import annotations

import sys
import time
from dataclasses import replace
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from retrofit.cycle import Settings, solve_cycle
from retrofit.equipment.balance import Exchanger, Machine, balance, condenser_difference, evaporator_difference
from retrofit.equipment.exchanger import Secondary
from retrofit.properties import fluid

CANDIDATES = "R404A R448A R449A R407A R407F R407H R452A R454A R454C R455A R513A R290".split()
SETTINGS = Settings(useful_superheat_K=7.0, line_superheat_K=8.0, subcooling_K=3.0)
SWEPT = 201.0 / 3600.0


def efficiencies(ratio: np.ndarray, p_suction: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return invented efficiencies that fall with the pressure ratio."""
    return 0.70 - 0.005 * ratio, 1.0 - 0.04 * (ratio ** (1 / 1.12) - 1.0)


def plant() -> Machine:
    """Return an invented rack whose conductances come from R404A at -8 / 42 degC."""
    today = fluid("R404A")
    p_evap, p_cond = today.p_dew(265.15), today.p_dew(315.15)
    isentropic, volumetric = efficiencies(p_cond / p_evap, p_evap)
    own = replace(SETTINGS, isentropic_efficiency=isentropic, volumetric_efficiency=volumetric)
    cycle = solve_cycle(today, p_evap, p_cond, own)
    flow = SWEPT * volumetric * cycle.density_suction_kg_per_m3
    cooling, heat = flow * cycle.refrigerating_effect_J_per_kg, flow * cycle.heat_rejected_J_per_kg
    evaporator = Exchanger(1.0, Secondary(275.15, float(cooling) / 5.0), "crossflow")
    condenser = Exchanger(1.0, Secondary(305.15, float(heat) / 7.0), "crossflow")
    differences = (
        evaporator_difference(today, cycle, cooling, evaporator),
        condenser_difference(today, cycle, heat, condenser),
    )
    return Machine(
        SWEPT,
        efficiencies,
        replace(evaporator, conductance_W_per_K=float(cooling / differences[0])),
        replace(condenser, conductance_W_per_K=float(heat / differences[1])),
        SETTINGS,
    )


def in_air(machine: Machine, T_K: object) -> Machine:
    """Return the plant with other air at the condenser."""
    medium = replace(machine.condenser.secondary, T_in_K=T_K)
    return replace(machine, condenser=replace(machine.condenser, secondary=medium))


def scripted_seconds(machine: Machine, conditions: list[float]) -> float:
    """Return the time for one condition of R448A by scipy on the high-level interface. [s]"""
    from CoolProp.CoolProp import PropsSI
    from scipy.optimize import fsolve

    from retrofit.properties.components import mixture_of
    from retrofit.properties.equation import EquationModel

    mixture = mixture_of("R448A")
    shares = zip(mixture.library_names, EquationModel(mixture).z, strict=True)
    name = "HEOS::" + "&".join(f"{part}[{share:.12f}]" for part, share in shares)

    def lacks(T: np.ndarray, air: float) -> list[float]:
        p_e, p_c = (PropsSI("P", "T", t, "Q", 1, name) for t in T)
        h_out = PropsSI("H", "P", p_e, "T", T[0] + 7.0, name)
        h1, s1, rho = (PropsSI(key, "P", p_e, "T", T[0] + 15.0, name) for key in "HSD")
        isentropic, volumetric = efficiencies(np.float64(p_c / p_e), np.float64(p_e))
        h2 = h1 + (PropsSI("H", "P", p_c, "S", s1, name) - h1) / isentropic
        h3 = PropsSI("H", "P", p_c, "T", PropsSI("T", "P", p_c, "Q", 0, name) - 3.0, name)
        flow = SWEPT * volumetric * rho
        asked = []
        for heat, start, end, p, T_in, exchanger in (
            (flow * (h_out - h3), h3, h_out, p_e, 275.15, machine.evaporator),
            (flow * (h2 - h3), h2, h3, p_c, air, machine.condenser),
        ):
            h = start + (np.arange(8) + 0.5) / 8 * (end - start)
            T_part = np.array([PropsSI("T", "P", p, "H", value, name) for value in h])
            rate = float(np.asarray(exchanger.secondary.capacity_rate_W_per_K))
            effectiveness = min(np.sum(heat / 8 / np.abs(T_in - T_part)) / rate, 0.999)
            asked.append(-np.log1p(-effectiveness) * rate / float(np.asarray(exchanger.conductance_W_per_K)) - 1.0)
        return asked

    begin = time.perf_counter()
    for air in conditions:
        fsolve(lacks, np.array([266.0, air + 11.0]), args=(air,), xtol=1e-7)
    return (time.perf_counter() - begin) / len(conditions)


def main() -> int:
    """Run both and print the numbers."""
    machine = plant()
    hours = np.arange(8760)
    air = np.maximum(288.0 + 10.0 * np.sin(hours * 2 * np.pi / 8760) + 5.0 * np.sin(hours * 2 * np.pi / 24), 283.15)
    fluids = [fluid(name) for name in CANDIDATES]
    begin, worst, unsolved = time.perf_counter(), 0.0, 0
    for refrigerant in fluids:
        found = balance(refrigerant, in_air(machine, air), 265.0, air + 10.0)
        unsolved += int(np.sum(~found.is_solved))
        worst = max(worst, float(found.residual.max()))
    year = time.perf_counter() - begin
    each = year / (len(fluids) * air.size)
    print(
        f"{len(fluids)} candidates x {air.size} conditions: {year:.2f} s (at most 10), {each * 1e6:.1f} us a condition"
    )
    print(f"largest residual {worst:.1e} (at most 1e-6), not solved {unsolved}")
    scripted = scripted_seconds(machine, [305.15])  # a minute or two: one condition says enough
    print(f"scripted: {scripted:.2f} s a condition, {scripted / each:.0f} times as much (at least 1000)")
    return int(year > 10.0 or worst > 1e-6 or unsolved > 0 or scripted / each < 1000.0)


if __name__ == "__main__":
    sys.exit(main())
