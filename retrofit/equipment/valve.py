"""Expansion valve, capillary tube and distributor: what another refrigerant does through the same opening."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]


@dataclass(frozen=True)
class Throttle:
    """Refrigerant at the expansion valve or capillary tube.

    Attributes:
        refrigerating_effect_J_per_kg: Heat taken up in the evaporator by each kilogram.
        density_kg_per_m3: Density of the liquid before the valve.
        pressure_difference_Pa: Pressure before the valve less pressure after it, see `pressure_over_valve`.
    """

    refrigerating_effect_J_per_kg: ArrayLike
    density_kg_per_m3: ArrayLike
    pressure_difference_Pa: ArrayLike


@dataclass(frozen=True)
class ThrottleFit:
    """How an opening sized for one refrigerant suits another; arrays of one shape.

    Attributes:
        flow_ratio: Mass flow through the same opening, new over old.
        capacity_ratio: Cooling through the same opening, new over old.
        load_ratio: Cooling the new refrigerant has to do, new over old.
        fit: Capacity ratio over load ratio: 1 suits as today, below it is too small, above too large.
    """

    flow_ratio: FloatArray
    capacity_ratio: FloatArray
    load_ratio: FloatArray
    fit: FloatArray


def pressure_over_valve(p_cond_Pa: ArrayLike, p_evap_Pa: ArrayLike, *losses_Pa: ArrayLike) -> FloatArray:
    """Return the pressure difference left for the valve.

    Args:
        p_cond_Pa: Condensing pressure. [Pa]
        p_evap_Pa: Evaporating pressure. [Pa]
        losses_Pa: Whatever takes its share between them: liquid line, height, drier, distributor. [Pa]
    Returns: Pressure difference; not above zero if the losses take all of it. [Pa]
    """
    left: FloatArray = np.asarray(p_cond_Pa, dtype=float) - np.asarray(p_evap_Pa, dtype=float)
    for loss in losses_Pa:
        left = left - np.asarray(loss, dtype=float)
    return left


def throttle_fit(new: Throttle, old: Throttle, load_ratio: ArrayLike) -> ThrottleFit:
    """Return how the opening of today suits the new refrigerant.

    A valve maker's ratings differ from this rule by about a tenth. It holds for liquid before the valve: with flash
    gas neither refrigerant passes what is reckoned here. For a capillary tube it is a first estimate only.

    Args:
        new: The new refrigerant at the valve.
        old: The refrigerant of today.
        load_ratio: Cooling the new refrigerant has to do over cooling today. [-]
    Returns: The fit. Where no pressure is left for the new refrigerant nothing passes (0); where none is left for
        the old one there is nothing to compare with (NaN).
    Source: an orifice passes m = C A sqrt(2 rho dp) of an incompressible liquid; cooling is m times the
        refrigerating effect.
    """
    drive_new, drive_old = _drive(new), _drive(old)
    with np.errstate(divide="ignore", invalid="ignore"):
        flow = np.where(drive_old > 0.0, drive_new / drive_old, np.nan)
        effect = np.asarray(new.refrigerating_effect_J_per_kg) / np.asarray(old.refrigerating_effect_J_per_kg)
        fit = flow * effect / np.asarray(load_ratio, dtype=float)
    load = np.asarray(load_ratio, dtype=float)
    return ThrottleFit(*np.broadcast_arrays(flow, flow * effect, load, fit))


def _drive(throttle: Throttle) -> FloatArray:
    """Return sqrt(rho dp), 0 where no pressure is left."""
    left = np.asarray(throttle.pressure_difference_Pa, dtype=float)
    drive: FloatArray = np.sqrt(np.asarray(throttle.density_kg_per_m3) * np.where(left < 0.0, 0.0, left))
    return drive


@dataclass(frozen=True)
class Distribution:
    """What enters the distributor.

    Attributes:
        cooling_W: Cooling of the evaporator.
        refrigerating_effect_J_per_kg: Heat taken up in the evaporator by each kilogram.
        density_kg_per_m3: Density of liquid and vapour together after the expansion valve.
    """

    cooling_W: ArrayLike
    refrigerating_effect_J_per_kg: ArrayLike
    density_kg_per_m3: ArrayLike


@dataclass(frozen=True)
class DistributorLoading:
    """A distributor with another refrigerant; new over old, arrays of one shape.

    Attributes:
        mass_flow_ratio: Mass flow.
        volume_flow_ratio: Volume flow of liquid and vapour together at the inlet of the evaporator.
        pressure_drop_ratio: Pressure drop of nozzle and tubes: below 1 they share out the flow less evenly.
    """

    mass_flow_ratio: FloatArray
    volume_flow_ratio: FloatArray
    pressure_drop_ratio: FloatArray


def distributor_loading(new: Distribution, old: Distribution) -> DistributorLoading:
    """Return how a distributor is loaded with another refrigerant.

    Args:
        new: What enters with the new refrigerant.
        old: What enters today.
    Returns: The loading against today's.
    Source: m = Q / q; volume flow = m / rho; the drop of a nozzle goes with m^2 / rho, two phases taken as one
        homogeneous fluid.
    """
    density = np.asarray(new.density_kg_per_m3, dtype=float) / np.asarray(old.density_kg_per_m3, dtype=float)
    flow = _mass_flow(new) / _mass_flow(old)
    return DistributorLoading(*np.broadcast_arrays(flow, flow / density, flow**2 / density))


def _mass_flow(stream: Distribution) -> FloatArray:
    flow: FloatArray = np.asarray(stream.cooling_W, dtype=float) / np.asarray(stream.refrigerating_effect_J_per_kg)
    return flow
