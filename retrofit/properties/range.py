"""How far a model goes: its critical temperature, and the temperatures its saturation lines are tabled for."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from retrofit.errors import ModelFaultError
from retrofit.properties.equation import EquationModel, Equilibrium
from retrofit.properties.grid import FloatArray

USUAL_LOWEST_K = 183.15  # -90 degC: below the coldest single-stage duty by a wide margin
LOW_BOILER_PRESSURE_PA = 20e3  # fluids of cascades are followed further down, to this pressure
LOWEST_PRESSURE_PA = 300.0  # no plant works below it
MARGIN_BELOW_CRITICAL_K = 2.0
DENSITY_EXPONENT = 0.33  # of (rho_liquid - rho_vapour) in (T_critical - T) close to the critical point


@dataclass(frozen=True)
class SaturationSpan:
    """Both saturation lines of a refrigerant, coarsely, and how far they reach.

    Attributes:
        bubble, dew: A checked equilibrium on each line, to start from.
        T_lowest_K, T_highest_K: Range the model is used in.
        T_critical_K, p_critical_Pa: Where the two phases meet; for a blend extrapolated from the lines.
    """

    bubble: Equilibrium
    dew: Equilibrium
    T_lowest_K: float
    T_highest_K: float
    T_critical_K: float
    p_critical_Pa: float

    def node_temperatures(self, largest_step_K: float, share: float) -> FloatArray:
        """Return temperatures from lowest to highest, closer together toward the critical point.

        Args:
            largest_step_K: Largest distance of two nodes. [K]
            share: Distance of two nodes as a share of the distance to the critical temperature. [-]
        Returns: Temperatures, shape (n,). [K]
        """
        nodes = [self.T_highest_K]
        while nodes[-1] > self.T_lowest_K:
            nodes.append(nodes[-1] - min(largest_step_K, share * (self.T_critical_K - nodes[-1])))
        depth = self.T_highest_K - np.array(nodes[::-1])
        steps: FloatArray = self.T_highest_K - depth * ((self.T_highest_K - self.T_lowest_K) / depth[0])
        steps[0], steps[-1] = self.T_lowest_K, self.T_highest_K
        return steps


def saturation_span(model: EquationModel) -> SaturationSpan:
    """Follow both saturation lines of a model to their ends.

    Args:
        model: Equation model.
    Returns: The span.
    Raises: ModelFaultError if the lines cannot be found.
    """
    bubble = model.bubble_start()
    end = _end_of_walk(model, bubble)
    dew = model.saturation(end.T_K, 1.0, end)
    tops = [model.critical_point] if model.critical_point else [_top(model, start) for start in (bubble, dew)]
    T_critical = min(T for T, _ in tops)
    p_critical = min(p for _, p in tops)
    lowest = max(_bottom(model, start) for start in (bubble, dew))
    return SaturationSpan(bubble, dew, lowest, T_critical - MARGIN_BELOW_CRITICAL_K, T_critical, p_critical)


def _end_of_walk(model: EquationModel, bubble: Equilibrium) -> Equilibrium:
    """Return the dew point at the pressure of a bubble point, reached by walking up in quality."""
    from retrofit.properties.two_phase import walk_qualities

    if model.mixture.is_pure:
        return bubble
    return walk_qualities(model, bubble, (0.02, 0.07, 0.15, 0.3, 0.5, 0.7, 0.85, 0.95, 1.0))[-1]


def _top(model: EquationModel, start: Equilibrium) -> tuple[float, float]:
    """Return temperature and pressure of the critical point as one saturation line points to it."""
    passed = [start]
    for step in (3.0, 0.5, 0.1):
        passed = _climb(model, passed, step)
    return _meeting(passed[-3:])


def _climb(model: EquationModel, passed: list[Equilibrium], step: float) -> list[Equilibrium]:
    """Go up in steps until the phases are alike or the line cannot be followed."""
    smallest_ratio = {3.0: 4.0, 0.5: 1.8, 0.1: 1.4}[step]
    passed = list(passed)
    try:
        while passed[-1].rho_liquid > smallest_ratio * passed[-1].rho_vapour:
            before = passed[-2] if len(passed) > 1 else None
            passed.extend(model.march(passed[-1], before, passed[-1].T_K + step))
    except ModelFaultError:
        pass  # the end of the line is what is looked for
    return passed


def _meeting(last: list[Equilibrium]) -> tuple[float, float]:
    """Extrapolate to where the densities meet: (rho' - rho'') ** (1/0.33) falls in a straight line."""
    T = np.array([point.T_K for point in last])
    gap = np.array([point.rho_liquid - point.rho_vapour for point in last]) ** (1.0 / DENSITY_EXPONENT)
    ln_p = np.log([point.p_Pa for point in last])
    slope = (gap[-1] - gap[0]) / (T[-1] - T[0])
    T_meet = float(T[-1] - gap[-1] / slope)
    rise = (ln_p[-1] - ln_p[0]) / (1.0 / T[-1] - 1.0 / T[0])
    return T_meet, float(np.exp(ln_p[-1] + rise * (1.0 / T_meet - 1.0 / T[-1])))


def _bottom(model: EquationModel, start: Equilibrium) -> float:
    """Return the lowest temperature a saturation line is used at."""
    last, before = start, None
    try:
        while (target := _next_below(last, model.T_floor_K)) < last.T_K:
            for new in model.march(last, before, target):
                before, last = last, new
    except ModelFaultError:
        return last.T_K + 1.0
    return last.T_K


def _next_below(last: Equilibrium, floor: float) -> float:
    """Return the next temperature down, or the present one where the line need not go further."""
    if last.p_Pa < LOWEST_PRESSURE_PA:
        return last.T_K
    if last.T_K > USUAL_LOWEST_K:
        return max(last.T_K - 2.0, USUAL_LOWEST_K, floor)
    return max(last.T_K - 2.0, floor) if last.p_Pa > LOW_BOILER_PRESSURE_PA else last.T_K
