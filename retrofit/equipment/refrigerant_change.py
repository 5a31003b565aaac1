"""The same compressor with another refrigerant: its efficiencies from those with the refrigerant they are known for.

Three factors at equal dew temperatures and equal superheat at the compressor inlet, old refrigerant a and new one b:

    volumetric,b = volumetric,a  H_a/H_b  v(r_b)/v(r_a)
    isentropic,b = isentropic,a  H_a/H_b  e(r_b)/e(r_a)  X / ((1 - phi) X + phi)

with pressure ratio r, its curve v, e; suction heating H = 1 + h (T2s - T1)/T1, T1 at the inlet and T2s after isentropic
compression; X the isentropic power of each cubic metre drawn in, b over a, of which the share phi of the power taken
is lost whatever is pumped. The constants h and phi, the form of the factors and the curve of pistons come from 321
pairs of catalogue polynomials of 89 compressors listed with two refrigerants (EnergyPlus 25.2, data set
RefrigerationCompressorCurves.idf); `tests/bench/compressor_pairs.py` fits both constants anew.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.equipment.compressor import EfficiencyCurve, EfficiencyMap, monotone_slopes
from retrofit.properties import Fluid
from retrofit.properties.grid import Curve, Surface

FloatArray = NDArray[np.float64]
Pair = tuple[FloatArray, FloatArray]

SUCTION_HEATING = 0.5  # h
FIXED_LOSS = 0.12  # phi
HIGHEST_RATIO = 12.0  # of the pairs: beyond it the factors hold their values
# Pistons: r, volumetric and isentropic efficiency over those at r = 4; mean over the bodies of the data set.
PISTON = np.array(
    [
        [2.0, 2.5, 3.0, 3.5, 4.0, 5.0, 6.0, 7.0, 8.0, 9.0, 10.0, 11.0, 12.0],
        [1.109, 1.078, 1.05, 1.026, 1.0, 0.953, 0.914, 0.877, 0.844, 0.810, 0.776, 0.743, 0.711],
        [0.885, 0.953, 0.979, 0.991, 1.0, 1.007, 1.005, 0.996, 0.977, 0.964, 0.953, 0.940, 0.926],
    ]
)
# Kinds that the form is applied to; a turbo machine does not draw in a volume, so none of the three factors is its own.
DISPLACEMENT_KINDS = ("piston", "scroll", "screw", "rotary")
NOT_HEATED = ("R717",)  # (T2s - T1)/T1 of ammonia lies far outside the pairs
NODES = (17, 17)  # along suction pressure and pressure ratio
LEAST_LN_RATIO = 0.15
MARGIN_K = 1.0  # kept from the ends of the refrigerants' models


class Efficiencies(Protocol):
    """Isentropic and volumetric efficiency of a compressor with one refrigerant."""

    def at(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> Pair:
        """Return isentropic and volumetric efficiency. [-]

        Args:
            pressure_ratio: Discharge over suction pressure. [-]
            p_suction_Pa: Suction pressure. [Pa]
        """
        ...

    def covers(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> NDArray[np.bool_]:
        """Return where the data reach.

        Args:
            pressure_ratio: Discharge over suction pressure. [-]
            p_suction_Pa: Suction pressure. [Pa]
        """
        ...


@dataclass(frozen=True)
class Compression:
    """What a compressor meets of a refrigerant.

    Attributes:
        pressure_ratio: Discharge over suction pressure.
        heating: (T2s - T1)/T1, isentropic.
        power_density_J_per_m3: Isentropic work on each cubic metre drawn in.
        T_isentropic_K: Temperature after isentropic compression.
    """

    pressure_ratio: FloatArray
    heating: FloatArray
    power_density_J_per_m3: FloatArray
    T_isentropic_K: FloatArray


def compression(
    fluid: Fluid, p_suction_Pa: ArrayLike, p_discharge_Pa: ArrayLike, superheat_K: ArrayLike
) -> Compression:
    """Return what a compressor meets of a refrigerant between two pressures.

    Args:
        fluid: The refrigerant.
        p_suction_Pa: At the compressor inlet. [Pa]
        p_discharge_Pa: At its outlet. [Pa]
        superheat_K: At its inlet. [K]
    Raises: OutsideValidRangeError outside the range of the refrigerant's model (NaN if it is lenient).
    """
    suction = fluid.vapour(p_suction_Pa, superheat_K)
    h_isentropic = fluid.h_at_entropy(p_discharge_Pa, suction.s_J_per_kgK)
    T_isentropic = fluid.T_at_enthalpy(p_discharge_Pa, h_isentropic)
    return Compression(
        np.asarray(p_discharge_Pa) / np.asarray(p_suction_Pa),
        (T_isentropic - suction.T_K) / suction.T_K,
        suction.density_kg_per_m3 * (h_isentropic - suction.h_J_per_kg),
        T_isentropic,
    )


def heating_factor(old: Compression, new: Compression, h: ArrayLike = SUCTION_HEATING) -> FloatArray:
    """Return the factor on both efficiencies by heating of the suction gas inside the compressor, H_a/H_b. [-]

    Args:
        old, new: Compression of the refrigerants.
        h: Share of the isentropic temperature rise by which the gas is heated before it is drawn in. [-]
    """
    share = np.asarray(h, dtype=float)
    return np.asarray((1.0 + share * old.heating) / (1.0 + share * new.heating))


def loss_factor(power_ratio: ArrayLike, phi: ArrayLike = FIXED_LOSS) -> FloatArray:
    """Return the factor on the isentropic efficiency by losses that stay as they are, X/((1 - phi) X + phi). [-]

    Args:
        power_ratio: Isentropic power of each cubic metre drawn in, new over old: X. [-]
        phi: Share of the old power that is lost whatever is pumped. [-]
    """
    X, lost = np.asarray(power_ratio, dtype=float), np.asarray(phi, dtype=float)
    return np.asarray(X / ((1.0 - lost) * X + lost))


@dataclass(frozen=True, eq=False)
class Shape:
    """How both efficiencies of a kind of machine go with the pressure ratio; only quotients of it mean something."""

    curve: Curve

    def at(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> Pair:
        """Return numbers in proportion to isentropic and volumetric efficiency, the ends held. [-]

        Args:
            pressure_ratio: Discharge over suction pressure. [-]
            p_suction_Pa: Not used. [Pa]
        """
        ratio = np.clip(np.asarray(pressure_ratio, dtype=float), self.curve.x[0], self.curve.x[-1])
        isentropic, volumetric = self.curve(ratio, 0, 1)
        return np.asarray(isentropic), np.asarray(volumetric)


def piston_shape() -> Shape:
    """Return the curve of pistons from the table."""
    values = PISTON[[2, 1]]
    return Shape(Curve(PISTON[0], np.stack([values, monotone_slopes(PISTON[0], values)], axis=1)))


def shape_of(kind: str | None, own: Efficiencies) -> Shape | EfficiencyCurve | None:
    """Return the curve over the pressure ratio: the compressor's own, else that of its kind; None for none.

    A map gives its mean over the suction pressures: along them it holds a part of the fixed loss, which counts apart.

    Args:
        kind: Kind of compressor. [-]
        own: Its efficiencies with the refrigerant they are known for.
    """
    if isinstance(own, EfficiencyMap):
        return own.curve
    if isinstance(own, EfficiencyCurve) and np.isfinite(own.covered[1]):
        return own
    return piston_shape() if kind == "piston" else None


@dataclass(frozen=True, eq=False)
class ChangedEfficiencies:
    """Efficiencies of a compressor with a refrigerant that they are not known for.

    Attributes:
        own: Its efficiencies with the refrigerant that they are known for.
        shape: Its curve over the pressure ratio; None for none.
        old: Over ln of the new refrigerant's suction pressure, and over the way from the least to the highest pressure
            ratio there: ln of the old one's suction pressure and pressure ratio at the same dew temperatures, ln of
            H_a/H_b and of X.
        ln_p_highest: Highest discharge pressure of `old`.
    """

    own: Efficiencies
    shape: Shape | EfficiencyCurve | None
    old: Surface
    ln_p_highest: float

    def at(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> Pair:
        """Return isentropic and volumetric efficiency, at most 1. [-]

        Args:
            pressure_ratio: Discharge over suction pressure of the new refrigerant. [-]
            p_suction_Pa: Its suction pressure. [Pa]
        Raises: ValueError without a suction pressure.
        """
        if p_suction_Pa is None:
            raise ValueError("efficiencies with another refrigerant need its suction pressure")
        ratio, x = np.broadcast_arrays(np.asarray(pressure_ratio, dtype=float), np.log(p_suction_Pa))
        ln_p_old, ln_ratio_old, ln_heating, ln_X = self._old(x, ratio)
        if np.any(ratio > HIGHEST_RATIO):
            _, _, ln_heating, ln_X = self._old(x, np.minimum(ratio, HIGHEST_RATIO))
        old_ratio = np.exp(ln_ratio_old)
        isentropic, volumetric = self.own.at(old_ratio, np.exp(ln_p_old))
        heating = np.exp(ln_heating)
        isentropic, volumetric = isentropic * heating * loss_factor(np.exp(ln_X)), volumetric * heating
        if self.shape is not None:
            there, here = self.shape.at(ratio), self.shape.at(old_ratio)
            isentropic, volumetric = isentropic * there[0] / here[0], volumetric * there[1] / here[1]
        return np.minimum(isentropic, 1.0), np.minimum(volumetric, 1.0)

    def _old(self, ln_p_suction: FloatArray, pressure_ratio: FloatArray) -> list[FloatArray]:
        x = np.clip(ln_p_suction, self.old.x[0], self.old.x[-1])
        way = (np.log(pressure_ratio) - LEAST_LN_RATIO) / (self.ln_p_highest - x - LEAST_LN_RATIO)
        return self.old(x, np.clip(way, 0.0, 1.0), 0, 1, 2, 3)

    def covers(self, pressure_ratio: ArrayLike, p_suction_Pa: ArrayLike | None = None) -> NDArray[np.bool_]:
        """Return where the curve of the compressor reaches, by the pressure ratio; NaN is not covered.

        Args:
            pressure_ratio: Discharge over suction pressure. [-]
            p_suction_Pa: Not used: what carries over is the curve. [Pa]
        """
        curve = self.own.curve if isinstance(self.own, EfficiencyMap) else self.own
        return curve.covers(pressure_ratio)


def changed(
    own: Efficiencies,
    shape: Shape | EfficiencyCurve | None,
    old: Fluid,
    new: Fluid,
    superheat_K: float,
    T_evap_range_K: tuple[float, float],
    T_cond_highest_K: float,
) -> ChangedEfficiencies:
    """Return the efficiencies of a compressor with another refrigerant.

    Args:
        own: Its efficiencies with the old refrigerant.
        shape: Its curve over the pressure ratio, as of `shape_of`.
        old: The refrigerant that they are known for.
        new: The other one.
        superheat_K: At the compressor inlet, alike for both. [K]
        T_evap_range_K: Evaporating dew temperatures it may be asked at; the ends hold outside. [K]
        T_cond_highest_K: Highest condensing dew temperature it may be asked at. [K]
    Source: three factors, see the head of this module.
    """
    fluids = old.as_lenient(), new.as_lenient()
    T_low = max(T_evap_range_K[0], *(fluid.T_range_K[0] + MARGIN_K for fluid in fluids))
    T_top = min(T_cond_highest_K, *(fluid.T_range_K[1] - MARGIN_K for fluid in fluids))
    ln_p_top = float(np.log(fluids[1].p_dew(T_top)))
    # So that a pressure ratio of twice the least one is left at the warmest evaporation.
    T_high = min(T_evap_range_K[1], float(fluids[1].dew(np.exp(ln_p_top - 2.0 * LEAST_LN_RATIO)).T_K))
    ends = np.log(fluids[1].p_dew(np.array([T_low, T_high])))
    x, along_x = _nodes(NODES[0], float(ends[0]), float(ends[1]))
    way, along_way = _nodes(NODES[1], 0.0, 1.0)
    ln_ratio = LEAST_LN_RATIO + way * (ln_p_top - x[:, None] - LEAST_LN_RATIO)
    p_suction = np.exp(x)[:, None] * np.ones_like(way)
    p_discharge = p_suction * np.exp(ln_ratio)
    p_old = [fluids[0].p_dew(fluids[1].dew(p).T_K) for p in (p_suction, p_discharge)]
    before = compression(fluids[0], p_old[0], p_old[1], superheat_K)
    after = compression(fluids[1], p_suction, p_discharge, superheat_K)
    h = 0.0 if {old.designation, new.designation} & set(NOT_HEATED) else SUCTION_HEATING
    power = after.power_density_J_per_m3 / before.power_density_J_per_m3
    values = np.log([p_old[0], before.pressure_ratio, heating_factor(before, after, h), power])
    values = _filled(values)
    slopes_x = np.einsum("ij,qjk->qik", along_x, values)
    slopes_way = np.einsum("ij,qkj->qki", along_way, values)
    twist = np.einsum("ij,qjk->qik", along_x, slopes_way)
    nodes = np.stack([values, slopes_x, slopes_way, twist], axis=1).reshape(len(values), 4, -1)
    return ChangedEfficiencies(own, shape, Surface(x, way, nodes), ln_p_top)


def _nodes(count: int, low: float, high: float) -> tuple[FloatArray, FloatArray]:
    """Return Chebyshev nodes of an interval, and the matrix that makes slopes of values at them.

    Source: Trefethen, Spectral Methods in MATLAB (2000), chapter 6, from memory.
    """
    place = np.arange(count)
    unit = -np.cos(np.pi * place / (count - 1))
    weight = np.where((place == 0) | (place == count - 1), 2.0, 1.0) * (-1.0) ** place
    slopes = np.outer(weight, 1.0 / weight) / (unit[:, None] - unit + np.eye(count))
    slopes -= np.diag(slopes.sum(axis=1))
    return low + 0.5 * (high - low) * (unit + 1.0), slopes * 2.0 / (high - low)


def _filled(values: FloatArray) -> FloatArray:
    """Return values, shape (quantities, n, m), with those past the end of a model held from the next lower ratio."""
    found = values.copy()
    for place in range(1, found.shape[2]):
        missing = np.isnan(found[:, :, place])
        found[:, :, place] = np.where(missing, found[:, :, place - 1], found[:, :, place])
    return found
