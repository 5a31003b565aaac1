"""Compressor: its efficiencies over pressure ratio, and its motor.

`EfficiencyCurve` and `EfficiencyMap` are asked in the same way, `at(pressure_ratio, p_suction_Pa)`, and hold their
nearest value outside the data; `covers` says where that is. NaN goes in and comes out.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.errors import QuantityError
from retrofit.properties.grid import Curve, Surface, hermite_slope_weights

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]

FEWEST_POINTS = 2
ROUNDED_SHARE = 0.05  # of the first and last interval: there the curve turns level
ROUNDING = 1e-9  # allowed at the ends of a range, relative
RATIOS, SUCTIONS = 15, 9  # samples of a map from which its curve is made
MEASURED_AT = ("shaft", "electric")


@dataclass(frozen=True, eq=False)
class EfficiencyCurve:
    """Isentropic and volumetric efficiency over pressure ratio: through every point, monotone between points, with
    a continuous first derivative everywhere, and level beyond the first and last point.

    Attributes:
        curve: The two efficiencies over pressure ratio.
        covered: Lowest and highest pressure ratio of the data.
    """

    curve: Curve
    covered: tuple[float, float]

    @classmethod
    def constant(cls, isentropic: float, volumetric: float) -> EfficiencyCurve:
        """Return efficiencies that do not change; they cover every pressure ratio, as an assumption does.

        Args:
            isentropic: Isentropic efficiency. [-]
            volumetric: Volumetric efficiency. [-]
        Returns: The curve.
        Raises: QuantityError if one is not above 0 and at most 1.
        """
        _check_efficiencies("constant efficiency", isentropic, volumetric)
        values = np.array([[isentropic] * 2, [volumetric] * 2], dtype=float)
        return cls(Curve(np.array([1.0, 2.0]), np.stack([values, np.zeros_like(values)], axis=1)), (1.0, np.inf))

    @classmethod
    def through(cls, points: Sequence[Sequence[float]]) -> EfficiencyCurve:
        """Return the curve through points.

        Args:
            points: At least two of (pressure ratio, isentropic, volumetric efficiency), by rising ratio.
        Returns: The curve.
        Raises: QuantityError naming the point that is not so.
        Source: monotone piecewise cubic of Fritsch and Carlson (1980) with the slopes of Fritsch and Butland
            (1984), from memory; the turn to level in the last twentieth of the outer intervals is ours.
        """
        _check_points(points)
        table = np.asarray(points, dtype=float).T
        x, values = np.ascontiguousarray(table[0]), np.ascontiguousarray(table[1:])
        slopes = monotone_slopes(x, values)
        covered = (float(x[0]), float(x[-1]))
        return cls(_levelled(Curve(x, np.stack([values, slopes], axis=1))), covered)

    def at(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> tuple[FloatArray, FloatArray]:
        """Return isentropic and volumetric efficiency. [-]

        Args:
            pressure_ratio: Discharge over suction pressure, absolute. [-]
            p_suction_Pa: Not used: a curve knows the pressure ratio only. [Pa]
        Returns: Isentropic and volumetric efficiency, shaped like the pressure ratio. [-]
        """
        ratio = np.clip(np.asarray(pressure_ratio, dtype=float), self.curve.x[0], self.curve.x[-1])
        isentropic, volumetric = self.curve(ratio, 0, 1)
        return np.asarray(isentropic), np.asarray(volumetric)

    def covers(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> BoolArray:
        """Return where the data reach; NaN is not covered.

        Args:
            pressure_ratio: Discharge over suction pressure, absolute. [-]
            p_suction_Pa: Not used: a curve knows the pressure ratio only. [Pa]
        """
        low, high = self.covered
        ratio = np.asarray(pressure_ratio, dtype=float)
        return np.asarray((ratio >= low * (1.0 - ROUNDING)) & (ratio <= high * (1.0 + ROUNDING)))


def _check_points(points: Sequence[Sequence[float]]) -> None:
    if len(points) < FEWEST_POINTS:
        raise QuantityError(
            f"{len(points)} efficiency point(s) given, at least {FEWEST_POINTS} are needed; "
            "give constant efficiencies if no more is known"
        )
    before = 0.0
    for number, point in enumerate(points, start=1):
        where = f"efficiency point {number}"
        if len(point) != 3:
            raise QuantityError(
                f"{where} has {len(point)} values; write three: pressure ratio, isentropic and volumetric efficiency"
            )
        ratio, isentropic, volumetric = point
        if not 1.0 <= ratio < np.inf:
            raise QuantityError(f"{where}: pressure ratio {ratio:g} is not a number from 1 up")
        if ratio <= before:
            raise QuantityError(f"{where}: pressure ratio {ratio:g} does not rise above {before:g} of the one before")
        _check_efficiencies(where, isentropic, volumetric)
        before = ratio


def _check_efficiencies(where: str, isentropic: float, volumetric: float) -> None:
    for name, value in (("isentropic", isentropic), ("volumetric", volumetric)):
        if not 0.0 < value <= 1.0:
            raise QuantityError(f"{where}: {name} efficiency {value:g} is not above 0 and at most 1 (100 %)")


def monotone_slopes(x: FloatArray, values: FloatArray) -> FloatArray:
    """Return slopes at nodes with which piecewise cubics through them do not overshoot.

    Args:
        x: Node positions, rising, shape (n,), n at least 2. [any]
        values: Node values, shape (quantities, n). [any]
    Returns: Slopes, shaped like `values`. [unit of values / unit of x]
    Source: Fritsch and Butland (1984): weighted harmonic mean of the neighbouring secants, zero at an extremum;
        one-sided three-point slope at the ends, kept from overshooting. From memory.
    """
    width = np.diff(x)
    secant = np.diff(values, axis=1) / width
    if x.size == FEWEST_POINTS:
        return np.repeat(secant, 2, axis=1)
    left, right = secant[:, :-1], secant[:, 1:]
    w_left, w_right = 2.0 * width[1:] + width[:-1], width[1:] + 2.0 * width[:-1]
    same_way = left * right > 0.0
    weighted = np.where(same_way, w_left * right + w_right * left, 1.0)
    inner = np.where(same_way, (w_left + w_right) * left * right / weighted, 0.0)
    first = _end_slope(width[0], width[1], secant[:, 0], secant[:, 1])
    last = _end_slope(width[-1], width[-2], secant[:, -1], secant[:, -2])
    return np.concatenate([first[:, None], inner, last[:, None]], axis=1)


def _end_slope(width: float, next_width: float, secant: FloatArray, next_secant: FloatArray) -> FloatArray:
    slope = ((2.0 * width + next_width) * secant - width * next_secant) / (width + next_width)
    too_steep = (secant * next_secant <= 0.0) & (np.abs(slope) > 3.0 * np.abs(secant))
    slope = np.where(too_steep, 3.0 * secant, slope)
    return np.where(slope * secant > 0.0, slope, 0.0)


def _levelled(curve: Curve) -> Curve:
    """Return the curve turned level at both ends, within a short way, so that it meets the constants without a corner.

    The added nodes lie on the curve with its slope, so the rest of it stays as it is.
    """
    x, count = curve.x, len(curve.nodes)
    added = np.array([x[0] + ROUNDED_SHARE * (x[1] - x[0]), x[-1] - ROUNDED_SHARE * (x[-1] - x[-2])])
    quantities = range(count)
    on_it = np.stack([curve(added, *quantities), curve(added, *quantities, weights=hermite_slope_weights)], axis=1)
    nodes = curve.nodes.copy()
    nodes[:, 1, [0, -1]] = 0.0
    order = np.argsort(np.concatenate([x, added]))
    return Curve(np.concatenate([x, added])[order], np.concatenate([nodes, on_it], axis=2)[:, :, order])


@dataclass(frozen=True, eq=False)
class EfficiencyMap:
    """Isentropic and volumetric efficiency over suction and discharge pressure, measured with one refrigerant.

    Carried to another refrigerant by equal pressure ratio and equal suction pressure. Where that suction pressure
    lies outside the data, the nearest one that has the same pressure ratio counts: the pressure ratio decides first.

    Attributes:
        surface: The two efficiencies over ln p of suction and of discharge.
        curve: Their mean over the suction pressures at each pressure ratio.
        spread: Largest distance of isentropic and of volumetric efficiency from that mean: what the pressure ratio
            alone does not tell.
        notes: What is possible but unusual about the data, in words.
    """

    surface: Surface
    curve: EfficiencyCurve
    spread: tuple[float, float]
    notes: tuple[str, ...] = ()

    @classmethod
    def over(cls, ln_p_suction: FloatArray, ln_p_discharge: FloatArray, values: FloatArray) -> EfficiencyMap:
        """Return the map through values on a grid.

        Args:
            ln_p_suction: Logarithm of the suction pressures in Pa, rising, shape (n,). [-]
            ln_p_discharge: The same of the discharge pressures, all above, shape (m,). [-]
            values: Isentropic and volumetric efficiency, shape (2, n, m). [-]
        Returns: The map.
        Raises: QuantityError if an efficiency is not above 0 and at most 1.
        """
        _refuse("efficiency", values, ~((values > 0.0) & (values <= 1.0)), "above 0 and at most 1 (100 %)")
        surface = Surface.through(ln_p_suction, ln_p_discharge, values)
        ln_ratio = np.linspace(*_ratio_ends(surface), RATIOS)
        low, high = _suction_ends(surface, ln_ratio)
        x = np.linspace(low, high, SUCTIONS)
        sampled = np.array(surface(x, x + ln_ratio, 0, 1))
        mean = np.minimum(sampled.mean(axis=1), 1.0)  # a spline through values near 1 can pass it a little
        isentropic, volumetric = np.abs(sampled - mean[:, None]).max(axis=(1, 2))
        curve = EfficiencyCurve.through(np.array([np.exp(ln_ratio), *mean]).T.tolist())
        return cls(surface, curve, (float(isentropic), float(volumetric)))

    def at(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> tuple[FloatArray, FloatArray]:
        """Return isentropic and volumetric efficiency. [-]

        Args:
            pressure_ratio: Discharge over suction pressure, absolute. [-]
            p_suction_Pa: Suction pressure; without it, the mean over suction pressures is meant. [Pa]
        Returns: Isentropic and volumetric efficiency. [-]
        """
        if p_suction_Pa is None:
            return self.curve.at(pressure_ratio)
        ln_ratio = np.clip(_log(pressure_ratio), *_ratio_ends(self.surface))
        x = np.clip(_log(p_suction_Pa), *_suction_ends(self.surface, ln_ratio))
        isentropic, volumetric = self.surface(x, x + ln_ratio, 0, 1)
        return np.asarray(isentropic), np.asarray(volumetric)

    def covers(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> BoolArray:
        """Return where the data reach; NaN is not covered.

        Args:
            pressure_ratio: Discharge over suction pressure, absolute. [-]
            p_suction_Pa: Suction pressure; without it, only the pressure ratio is asked about. [Pa]
        """
        by_ratio = self.curve.covers(pressure_ratio)
        if p_suction_Pa is None:
            return by_ratio
        ln_ratio, x = _log(pressure_ratio), _log(p_suction_Pa)
        low, high = _suction_ends(self.surface, np.clip(ln_ratio, *_ratio_ends(self.surface)))
        return np.asarray(by_ratio & (x >= low - ROUNDING) & (x <= high + ROUNDING))


def _log(value: ArrayLike) -> FloatArray:
    """Return the logarithm, NaN where there is none."""
    given = np.asarray(value, dtype=float)
    return np.log(np.where(given > 0.0, given, np.nan))


def _ratio_ends(surface: Surface) -> tuple[float, float]:
    """Return the ends of ln(pressure ratio) of a map."""
    return float(surface.y[0] - surface.x[-1]), float(surface.y[-1] - surface.x[0])


def _suction_ends(surface: Surface, ln_ratio: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the ends of ln(suction pressure) of a map at pressure ratios it has."""
    low = np.maximum(surface.x[0], surface.y[0] - ln_ratio)
    return low, np.maximum(low, np.minimum(surface.x[-1], surface.y[-1] - ln_ratio))


# -- motor and suction gas -------------------------------------------------------------------------


def shaft_and_electric(
    power_W: ArrayLike, motor_efficiency: ArrayLike, measured_at: str = "shaft"
) -> tuple[FloatArray, FloatArray]:
    """Return shaft and electric power of a compressor from one of them.

    Args:
        power_W: Power at the shaft or taken from the mains. [W]
        motor_efficiency: Shaft power over electric power, drive included. [-]
        measured_at: Which of the two is given, "shaft" or "electric".
    Returns: Shaft power and electric power. [W]
    Raises: QuantityError if the motor efficiency is not above 0 and at most 1, or for another word.
    Source: definition of the efficiency of a motor.
    """
    efficiency = np.asarray(motor_efficiency, dtype=float)
    _refuse(
        "motor efficiency",
        efficiency,
        (efficiency <= 0.0) | (efficiency > 1.0),
        "above 0 and at most 1 (100 %)",
    )
    if measured_at not in MEASURED_AT:
        raise QuantityError(f"power measured at {measured_at!r} is neither of {', '.join(MEASURED_AT)}")
    power = np.asarray(power_W, dtype=float)
    if measured_at == "electric":
        return np.asarray(power * efficiency), np.asarray(power + 0.0 * efficiency)
    return np.asarray(power + 0.0 * efficiency), np.asarray(power / efficiency)


def _refuse(what: str, values: FloatArray, is_bad: BoolArray, allowed: str) -> None:
    if np.any(is_bad):
        raise QuantityError(f"{what} {float(values[is_bad].flat[0]):g} is not {allowed}")


# -- part load ---------------------------------------------------------------------------------------
