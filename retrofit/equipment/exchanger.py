"""Evaporator and condenser against air, water or brine: the mean temperature difference a heat flow has.

The refrigerant's way through the exchanger is divided by enthalpy, so that glide, desuperheating, subcooling
and superheating count as what they are. In each part the temperature difference is the logarithmic mean.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]
ARRANGEMENTS = ("counterflow", "crossflow", "flooded")
SMALLEST_DIFFERENCE_K = 0.01  # below it a part of an exchanger counts as pinched


@dataclass(frozen=True)
class Secondary:
    """Air, water or brine through an exchanger.

    Attributes:
        T_in_K: Temperature at its inlet.
        capacity_rate_W_per_K: Mass flow times specific heat.
    """

    T_in_K: ArrayLike
    capacity_rate_W_per_K: ArrayLike


def mean_difference(
    T_refrigerant_K: FloatArray, share: FloatArray, heat_W: FloatArray, secondary: Secondary, arrangement: str
) -> FloatArray:
    """Return the mean temperature difference of an exchanger: heat flow over the conductance it asks for.

    Args:
        T_refrigerant_K: Refrigerant temperatures along its way, shape (nodes, ...). [K]
        share: Share of the heat exchanged up to each node, rising from 0 to 1, shape (nodes, ...). [-]
        heat_W: Heat into the refrigerant, negative in a condenser, shape (...). [W]
        secondary: Air, water or brine.
        arrangement: "counterflow", "crossflow" (air across the tubes, not mixed) or "flooded".
    Returns: Mean difference; where the temperatures would cross it goes on below zero, so that a solver sees
        which way to go, shape (...). [K]
    Raises: ValueError for another arrangement.
    Source: counterflow: conductance = sum over parts of heat / logarithmic mean difference. Crossflow: every
        part meets air at its inlet temperature, so 1 - exp(-UA/C) = sum(heat / difference) / C. Flooded: one
        refrigerant temperature, that of the last node (definition of effectiveness).
    """
    if arrangement not in ARRANGEMENTS:
        raise ValueError(f"arrangement {arrangement!r} is none of {', '.join(ARRANGEMENTS)}")
    heat, sign = np.abs(heat_W), np.sign(heat_W)
    rate = np.asarray(secondary.capacity_rate_W_per_K, dtype=float)
    lead = sign * (np.asarray(secondary.T_in_K, dtype=float) - T_refrigerant_K)
    if arrangement == "counterflow":
        # The refrigerant leaves where the secondary enters.
        return _mean_of_parts(lead - (1.0 - share) * heat / rate, share)
    if arrangement == "flooded":
        lead = np.broadcast_to(lead[-1], lead.shape)
    return _behind_effectiveness(_mean_of_parts(lead, share), heat / rate)


def _mean_of_parts(difference: FloatArray, share: FloatArray) -> FloatArray:
    """Return the mean of differences between nodes, weighted by heat over difference."""
    lowest = np.min(difference, axis=0)
    kept = np.maximum(difference, SMALLEST_DIFFERENCE_K)
    near, far = kept[:-1], kept[1:]
    ratio = np.log(far / near)
    close = np.abs(ratio) < 1e-5
    logarithmic = np.where(close, 0.5 * (near + far), (far - near) / np.where(close, 1.0, ratio))
    mean: FloatArray = 1.0 / np.sum(np.diff(share, axis=0) / logarithmic, axis=0)
    # No jump where the smallest difference closes: a solver has to see its way back.
    closing: FloatArray = np.where(lowest > 0.0, mean * np.minimum(1.0, lowest / SMALLEST_DIFFERENCE_K), lowest)
    return closing


def _behind_effectiveness(mean_lead: FloatArray, change: FloatArray) -> FloatArray:
    """Return heat / UA where heat / C = change and heat = C (1 - exp(-UA/C)) x mean lead."""
    possible = change < mean_lead * (1.0 - 1e-9)
    units = -np.log1p(-np.where(possible, change / np.where(possible, mean_lead, 1.0), 0.5))
    return np.where(possible, change / units, np.minimum(mean_lead - change, 0.0))
