"""Count complete cycles a second on one core, and compare them with the equation level.

Run from the top of the repository:

    python tests/bench/cycle_throughput.py [--cycles 1000000] [--checks 1000]

A complete cycle is: both saturation pressures from temperatures, the cycle, its COP, volumetric capacity and pressure
ratio. Conditions are random, in chunks of a year of hours. The equation level solves the same conditions state by
state with the property library, marching along the saturation lines. Allowed: pressures, COP and volumetric capacity
1e-4 relative, discharge temperature 0.05 K. Prints the numbers; ends with 1 if a tolerance is missed.
"""

from __future__ import annotations

import argparse
import sys
import time
from pathlib import Path

import numpy as np

TOP = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(TOP))

from retrofit.cycle import Settings, solve_cycle  # noqa: E402 - runs without an installed package
from retrofit.properties import fluid  # noqa: E402
from retrofit.properties.components import mixture_of  # noqa: E402
from retrofit.properties.equation import EquationModel, Equilibrium  # noqa: E402
from retrofit.properties.range import saturation_span  # noqa: E402

NAMES = ("R134a", "R454B", "R448A")
CHUNK = 8760
FIGURES = ("p_evap", "p_cond", "cop", "volumetric capacity", "pressure ratio", "T_discharge")
ALLOWED = dict.fromkeys(FIGURES, 1e-4) | {"T_discharge": 0.05}
FIELDS = ("T_evap", "T_cond", "useful", "line", "subcooling", "efficiency")


def conditions(random: np.random.Generator, count: int) -> dict[str, np.ndarray]:
    """Return random conditions of refrigeration and air conditioning, all in kelvin but the efficiency."""
    low = np.array([238.15, 293.15, 1.0, 0.0, 0.5, 0.6])
    high = np.array([283.15, 328.15, 15.0, 15.0, 10.0, 0.85])
    return dict(zip(FIELDS, random.uniform(low, high, (count, 6)).T, strict=True))


def from_tables(name: str, at: dict[str, np.ndarray]) -> dict[str, np.ndarray]:
    """Return the figures of complete cycles by the public interface."""
    f = fluid(name)
    p_evap, p_cond = f.p_dew(at["T_evap"]), f.p_dew(at["T_cond"])
    cycle = solve_cycle(f, p_evap, p_cond, Settings(at["useful"], at["line"], at["subcooling"], at["efficiency"]))
    figures = (p_evap, p_cond, cycle.cop, cycle.volumetric_capacity_J_per_m3, cycle.pressure_ratio, cycle.T_discharge_K)
    return dict(zip(FIGURES, figures, strict=True))


def _along(model: EquationModel, start: Equilibrium, T: np.ndarray) -> list[Equilibrium]:
    """Return the points of a saturation line at temperatures in any order."""
    order = np.argsort(T)
    points = model.trace(start, [float(value) for value in T[order]])
    return [points[place] for place in np.argsort(order)]


def from_equations(name: str, at: dict[str, np.ndarray]) -> dict[str, np.ndarray]:
    """Return the same figures from the equation level, state by state."""
    model = EquationModel(mixture_of(name))
    span = saturation_span(model)
    lines = zip(
        _along(model, span.dew, at["T_evap"]),
        _along(model, span.dew, at["T_cond"]),
        _along(model, span.bubble, at["T_cond"]),
        strict=True,
    )
    rows = []
    for i, (low, high, near) in enumerate(lines):
        bubble = model.at_pressure(high.p_Pa, near)
        liquid = model.liquid(high.p_Pa, bubble.T_K - at["subcooling"][i], bubble.density_kg_per_m3)
        out = model.gas(low.p_Pa, low.T_K + at["useful"][i], low.density_kg_per_m3)
        suction = model.gas(low.p_Pa, out.T_K + at["line"][i], out.density_kg_per_m3)
        ideal = model.gas_at_entropy(high.p_Pa, suction.s_J_per_kgK, high.T_K + 40.0)
        work = (ideal.h_J_per_kg - suction.h_J_per_kg) / at["efficiency"][i]
        effect = out.h_J_per_kg - liquid.h_J_per_kg
        real = model.gas_at_enthalpy(high.p_Pa, suction.h_J_per_kg + work, ideal.T_K + 10.0)
        capacity = effect * suction.density_kg_per_m3
        rows.append((low.p_Pa, high.p_Pa, effect / work, capacity, high.p_Pa / low.p_Pa, real.T_K))
    return dict(zip(FIGURES, np.array(rows).T, strict=True))


def speed(name: str, cycles: int) -> float:
    """Return complete cycles a second."""
    random = np.random.default_rng(1)
    chunks = [conditions(random, CHUNK) for _ in range(8)]
    from_tables(name, chunks[0])
    rounds = max(1, round(cycles / CHUNK))
    begun = time.perf_counter()
    for i in range(rounds):
        from_tables(name, chunks[i % len(chunks)])
    return rounds * CHUNK / (time.perf_counter() - begun)


def differences(name: str, count: int) -> dict[str, float]:
    """Return the largest difference of tables and equations for each figure: relative, or in kelvin."""
    at = conditions(np.random.default_rng(2), count)
    tables, equations = from_tables(name, at), from_equations(name, at)
    return {
        figure: float(
            np.max(np.abs(tables[figure] - equations[figure]) / (1.0 if figure[0] == "T" else equations[figure]))
        )
        for figure in FIGURES
    }


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("--cycles", type=int, default=1_000_000)
    parser.add_argument("--checks", type=int, default=1000)
    options = parser.parse_args()
    missed = 0
    for name in NAMES:
        rate, found = speed(name, options.cycles), differences(name, options.checks)
        late = [figure for figure, value in found.items() if not value <= ALLOWED[figure]]
        missed += len(late)
        print(f"{name}: {rate:,.0f} complete cycles a second; largest difference at {options.checks} conditions:")
        for figure, value in found.items():
            unit = " K" if figure[0] == "T" else ""
            print(f"  {figure:20} {value:.1e}{unit} (allowed {ALLOWED[figure]:g}{unit})", "MISSED" * (figure in late))
    return int(missed > 0)


if __name__ == "__main__":
    sys.exit(main())
