"""From temperatures to pressures: what "equal temperatures" means for fluids that glide.

A fluid that glides has no single evaporating or condensing temperature. `dew` takes the dew point of each
exchanger. `mean` takes, in the evaporator, the mean of the temperature after the expansion valve and the dew
point; in the condenser the mean of dew and bubble point; each at the one pressure of that exchanger.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from retrofit.cycle.single_stage import Cycle, FloatArray
from retrofit.errors import NoSolutionError, OutsideValidRangeError
from retrofit.properties import Fluid
from retrofit.units import ZERO_C_K

CONVENTIONS = ("dew", "mean")
MOST_STEPS = 40
CLOSE_ENOUGH_K = 1e-10


@dataclass(frozen=True)
class Temperatures:
    """An evaporating and a condensing temperature and what they are.

    Attributes:
        T_evap_K, T_cond_K: The temperatures.
        convention: "dew" or "mean".
    """

    T_evap_K: ArrayLike
    T_cond_K: ArrayLike
    convention: str

    def __post_init__(self) -> None:
        if self.convention not in CONVENTIONS:
            raise ValueError(f"convention {self.convention!r} is neither of {CONVENTIONS}")


def cycle_temperatures(cycle: Cycle, convention: str) -> Temperatures:
    """Return the evaporating and condensing temperature of a cycle by a convention.

    Args:
        cycle: The cycle.
        convention: "dew" or "mean".
    Returns: The temperatures.
    """
    if convention == "dew":
        return Temperatures(cycle.T_evap_dew_K, cycle.T_cond_dew_K, convention)
    evaporating = 0.5 * (cycle.T_evap_inlet_K + cycle.T_evap_dew_K)
    condensing = 0.5 * (cycle.T_cond_dew_K + cycle.T_cond_bubble_K)
    return Temperatures(evaporating, condensing, convention)


def matched_pressures(
    fluid: Fluid, temperatures: Temperatures, subcooling_K: ArrayLike
) -> tuple[FloatArray, FloatArray]:
    """Return the pressures at which a fluid has the temperatures asked for.

    Args:
        fluid: Refrigerant.
        temperatures: Evaporating and condensing temperature and their convention.
        subcooling_K: Temperature below the bubble point at the expansion valve; it sets the temperature
            after the expansion, and so the mean in the evaporator. [K]
    Returns: Evaporating and condensing pressure. [Pa]
    Raises: OutsideValidRangeError if the fluid has no such temperatures, with the reason.
    """
    _check_reach(fluid, temperatures)
    if temperatures.convention == "dew":
        return fluid.p_dew(temperatures.T_evap_K), fluid.p_dew(temperatures.T_cond_K)
    p_cond = pressure_at_mean(fluid, temperatures.T_cond_K)
    h_inlet = fluid.liquid(p_cond, subcooling_K).h_J_per_kg
    p_evap = _evaporating_pressure_at_mean(fluid, np.asarray(temperatures.T_evap_K, dtype=float), h_inlet)
    return p_evap, p_cond


def _check_reach(fluid: Fluid, temperatures: Temperatures) -> None:
    """Say in the words of the trade why a temperature cannot be reached, before a range error would."""
    lowest, highest = fluid.T_range_K
    hottest, coldest = float(np.max(temperatures.T_cond_K)), float(np.min(temperatures.T_evap_K))
    if fluid.lenient:
        return
    if hottest >= fluid.T_critical_K:
        raise OutsideValidRangeError(
            f"condensing at {hottest - ZERO_C_K:.1f} degC is above the critical temperature of {fluid.designation}, "
            f"{fluid.T_critical_K - ZERO_C_K:.1f} degC: it could only give off heat as a supercritical fluid, "
            "which is not computed here"
        )
    if hottest > highest:
        raise OutsideValidRangeError(
            f"condensing at {hottest - ZERO_C_K:.1f} degC is too close to the critical temperature of "
            f"{fluid.designation}, {fluid.T_critical_K - ZERO_C_K:.1f} degC: its model is used up to "
            f"{highest - ZERO_C_K:.1f} degC"
        )
    if coldest < lowest:
        raise OutsideValidRangeError(
            f"evaporating at {coldest - ZERO_C_K:.1f} degC is below the range of the model of {fluid.designation}, "
            f"which begins at {lowest - ZERO_C_K:.1f} degC"
        )


def pressure_at_mean(fluid: Fluid, T_mean_K: ArrayLike) -> FloatArray:
    """Return the pressure at which dew and bubble point have a temperature as their mean. [Pa]

    Args:
        fluid: Refrigerant; a lenient one gives NaN where there is no such pressure.
        T_mean_K: Mean of dew and bubble point. [K]
    Raises: NoSolutionError if there is no such pressure within the range of the model.
    """
    T_mean, inside = np.asarray(T_mean_K, dtype=float), fluid.as_lenient()

    def mean(p: FloatArray) -> FloatArray:
        return 0.5 * (inside.dew(p).T_K + inside.bubble(p).T_K)

    start = np.sqrt(inside.p_dew(T_mean) * inside.p_bubble(T_mean))
    return _pressure_where(fluid, mean, T_mean, start, "condensing")


def _evaporating_pressure_at_mean(fluid: Fluid, T_mean: FloatArray, h_inlet: FloatArray) -> FloatArray:
    inside = fluid.as_lenient()

    def mean(p: FloatArray) -> FloatArray:
        return 0.5 * (inside.two_phase(p, h_inlet).T_K + inside.dew(p).T_K)

    return _pressure_where(fluid, mean, T_mean, inside.p_dew(T_mean), "evaporating")


def _pressure_where(
    fluid: Fluid, mean: Callable[[FloatArray], FloatArray], T_wanted: FloatArray, p: FloatArray, what: str
) -> FloatArray:
    """Solve mean(p) = T by Newton's method on ln p, with the slope of the dew line, then of the steps."""
    ln_p = np.log(p)
    miss = T_wanted - mean(p)
    slope = fluid.as_lenient().dew_slope(p)
    for _ in range(MOST_STEPS):
        if not np.any(np.abs(miss) > CLOSE_ENOUGH_K):
            break
        step = miss / slope
        new = T_wanted - mean(np.exp(ln_p + step))
        with np.errstate(divide="ignore", invalid="ignore"):
            seen = (miss - new) / step
        slope = np.where((seen > 0.3 * slope) & (seen < 3.0 * slope), seen, slope)
        ln_p, miss = ln_p + step, new
    solved = np.abs(miss) < 1e-6
    if np.all(solved):
        return np.exp(ln_p)
    if fluid.lenient:
        return np.where(solved, np.exp(ln_p), np.nan)
    worst = float(np.broadcast_to(T_wanted, solved.shape)[~solved].flat[0])
    lowest, highest = fluid.T_range_K
    raise NoSolutionError(
        f"{fluid.designation}: no pressure gives a mean {what} temperature of {worst - ZERO_C_K:.1f} degC within the "
        f"range of its model, {lowest - ZERO_C_K:.1f} to {highest - ZERO_C_K:.1f} degC"
    )
