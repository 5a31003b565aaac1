"""Charge, receiver, recovery cylinders, standstill pressure and the climate weight of a charge."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.equipment.bounds import above_zero
from retrofit.properties import Fluid

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]

CHARGE_MARGIN = 0.10  # common practice: a first charge by density is right within about a tenth


@dataclass(frozen=True)
class Charge:
    """A first estimate of a charge: lowest, expected and highest, arrays of one shape.

    Attributes:
        lowest_kg, expected_kg, highest_kg: Mass.
    """

    lowest_kg: FloatArray
    expected_kg: FloatArray
    highest_kg: FloatArray


def charge_estimate(
    charge_today_kg: ArrayLike,
    density_today_kg_per_m3: ArrayLike,
    density_new_kg_per_m3: ArrayLike,
    margin: ArrayLike = CHARGE_MARGIN,
) -> Charge:
    """Return a first estimate of the charge of another refrigerant: the same volume of liquid.

    Args:
        charge_today_kg: Charge of today. [kg]
        density_today_kg_per_m3: Density of its liquid at the condenser outlet. [kg/m3]
        density_new_kg_per_m3: Density of the new liquid there. [kg/m3]
        margin: How far the estimate may be off, up and down, as a share of it. [-]
    Returns: The estimate. The plant is charged by sight glass, subcooling or level, never by this number alone.
    Raises: OutsideValidRangeError for a density not above zero.
    Source: m_new = m_old rho_new / rho_old.
    """
    today = above_zero("density of the liquid", density_today_kg_per_m3, "kg/m3")
    new = above_zero("density of the liquid", density_new_kg_per_m3, "kg/m3")
    expected = np.asarray(charge_today_kg, dtype=float) * new / today
    off = np.asarray(margin, dtype=float) * expected
    return Charge(*np.broadcast_arrays(expected - off, expected, expected + off))


@dataclass(frozen=True)
class VesselFill:
    """How full a vessel is with all of a charge pumped into it as liquid; arrays of one shape.

    Attributes:
        share: Volume of the liquid over volume of the vessel; above 1 it does not go in. The vapour above the
            liquid is not counted, so the share is a little too high.
        largest_charge_kg: Liquid that fills the vessel to the limit.
        is_liquid: Whether there is liquid at this temperature within the model; the numbers are NaN where not.
    """

    share: FloatArray
    largest_charge_kg: FloatArray
    is_liquid: BoolArray


def vessel_fill(
    fluid: Fluid, T_K: ArrayLike, volume_m3: ArrayLike, charge_kg: ArrayLike, limit: ArrayLike
) -> VesselFill:
    """Return how full a receiver or cylinder is.

    Args:
        fluid: Refrigerant.
        T_K: Temperature the vessel can reach; liquid expands on warming. [K]
        volume_m3: Volume inside. [m3]
        charge_kg: Charge pumped into it. [kg]
        limit: Share of the volume that liquid may fill; 0.8 to 0.9 is usual. [-]
    Returns: The fill, in the broadcast shape of everything given.
    Raises: OutsideValidRangeError for a volume not above zero.
    Source: m = limit V rho of saturated liquid.
    """
    volume = above_zero("volume of the vessel", volume_m3, "m3")
    density = _liquid_density(fluid, T_K)
    share = np.asarray(charge_kg, dtype=float) / (volume * density)
    largest = np.asarray(limit, dtype=float) * volume * density
    return VesselFill(*np.broadcast_arrays(share, largest, np.isfinite(density)))


def _liquid_density(fluid: Fluid, T_K: ArrayLike) -> FloatArray:
    """Return the density of saturated liquid, NaN outside the model's range."""
    inside = fluid.as_lenient()
    return inside.bubble(inside.p_bubble(T_K)).density_kg_per_m3


def cylinders_needed(
    fluid: Fluid, T_K: ArrayLike, charge_kg: ArrayLike, cylinder_m3: ArrayLike, limit: ArrayLike
) -> FloatArray:
    """Return how many recovery cylinders a charge needs.

    Args:
        fluid: Refrigerant.
        T_K: Highest temperature the cylinders reach. [K]
        charge_kg: Charge to recover. [kg]
        cylinder_m3: Volume inside one cylinder. [m3]
        limit: Share of it that liquid may fill. [-]
    Returns: Number of cylinders, whole; NaN where there is no liquid at that temperature. [-]
    Raises: OutsideValidRangeError for a volume not above zero.
    """
    one = vessel_fill(fluid, T_K, cylinder_m3, charge_kg, limit).largest_charge_kg
    # Rounding must not ask for one more where the charge fills the cylinders exactly.
    needed: FloatArray = np.ceil(np.asarray(charge_kg, dtype=float) / one - 1e-9)
    return needed


@dataclass(frozen=True)
class Standstill:
    """A plant at rest, all of it at one temperature; arrays of one shape.

    Attributes:
        T_K: The temperature.
        p_Pa: Bubble pressure there; NaN where the model gives none.
        is_above_critical: Whether the temperature is at or above the critical one: there is no liquid, and the
            pressure follows from charge and volume, without a bound from saturation.
    """

    T_K: FloatArray
    p_Pa: FloatArray
    is_above_critical: BoolArray


def standstill(fluid: Fluid, T_K: ArrayLike) -> Standstill:
    """Return the pressure of a plant at rest: that of liquid at its bubble point, if liquid is left.

    Args:
        fluid: Refrigerant.
        T_K: Highest temperature around the plant. [K]
    Returns: The standstill; within 2 K below the critical temperature the model ends and the pressure is NaN.
    """
    T = np.asarray(T_K, dtype=float)
    return Standstill(T, fluid.as_lenient().p_bubble(T), np.asarray(fluid.T_critical_K <= T))


def co2_equivalent_t(charge_kg: ArrayLike, gwp: ArrayLike) -> FloatArray:
    """Return the climate weight of a charge. [t CO2 equivalent]

    Args:
        charge_kg: Charge. [kg]
        gwp: Global warming potential, of whichever basis; NaN if it is not known. [-]
    """
    weight: FloatArray = np.asarray(charge_kg, dtype=float) * np.asarray(gwp, dtype=float) / 1000.0
    return weight
