"""Refrigerant lines: velocity, friction, what a pressure drop costs in saturation temperature, risers.

Suction and discharge lines are reckoned with the vapour at their inlet, the liquid line with liquid: one density
along the line. That holds while the pressure drop is a small share of the pressure, as it has to be in any line
that does its duty. A viscosity that is not known leaves friction unknown (NaN), and everything else known.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.equipment.bounds import above_zero
from retrofit.properties import Fluid

FloatArray = NDArray[np.float64]

GRAVITY_M_PER_S2 = 9.80665  # standard gravity, ISO 80000-3
# Drawn tubing, 0.0015 mm: L. F. Moody, Transactions of the ASME 66 (1944) 671, figure 2.
DRAWN_TUBE_ROUGHNESS_M = 1.5e-6
# Compressor oils lie between 0.87 and 1.0 kg/dm3; the heavy end asks for a little more velocity.
HEAVY_OIL_DENSITY_KG_PER_M3 = 1000.0


@dataclass(frozen=True)
class Line:
    """A pipe.

    Attributes:
        diameter_m: Inside diameter.
        length_m: Straight length.
        fittings_m: Straight length that has the pressure drop of its bends, valves and other fittings.
        roughness_m: Height of the roughness of the wall.
    """

    diameter_m: ArrayLike
    length_m: ArrayLike
    fittings_m: ArrayLike = 0.0
    roughness_m: ArrayLike = DRAWN_TUBE_ROUGHNESS_M


@dataclass(frozen=True)
class Stream:
    """What flows through it.

    Attributes:
        mass_flow_kg_per_s: Mass flow.
        density_kg_per_m3: Density.
        viscosity_Pa_s: Dynamic viscosity; NaN if it is not known.
    """

    mass_flow_kg_per_s: ArrayLike
    density_kg_per_m3: ArrayLike
    viscosity_Pa_s: ArrayLike


@dataclass(frozen=True)
class LineFlow:
    """The flow in a line; arrays of one shape.

    Attributes:
        velocity_m_per_s: Mean velocity.
        momentum_flux_Pa: Density times velocity squared: what drives oil along, and what friction grows with.
        reynolds: Reynolds number; NaN if the viscosity is not known.
        friction_factor: Darcy friction factor; NaN without a Reynolds number or without flow.
        pressure_drop_Pa: Of the straight length and the fittings; NaN if friction is not known.
    """

    velocity_m_per_s: FloatArray
    momentum_flux_Pa: FloatArray
    reynolds: FloatArray
    friction_factor: FloatArray
    pressure_drop_Pa: FloatArray


def line_flow(line: Line, stream: Stream) -> LineFlow:
    """Return the flow in a line.

    Args:
        line: The pipe.
        stream: What flows through it.
    Returns: The flow, in the broadcast shape of everything given.
    Raises: OutsideValidRangeError for a diameter or a density that is not above zero.
    Source: dp = f (L / D) rho v^2 / 2 (Darcy and Weisbach); f as `friction_factor`.
    """
    diameter = above_zero("inside diameter", line.diameter_m, "m")
    density = above_zero("density", stream.density_kg_per_m3, "kg/m3")
    velocity = np.asarray(stream.mass_flow_kg_per_s) / (density * 0.25 * np.pi * diameter**2)
    momentum = density * velocity**2
    with np.errstate(divide="ignore", invalid="ignore"):
        reynolds = density * velocity * diameter / np.asarray(stream.viscosity_Pa_s, dtype=float)
    factor = friction_factor(reynolds, np.asarray(line.roughness_m) / diameter)
    length = np.asarray(line.length_m, dtype=float) + np.asarray(line.fittings_m)
    drop = np.where(velocity == 0.0, 0.0, factor * length / diameter * 0.5 * momentum)
    return LineFlow(*np.broadcast_arrays(velocity, momentum, reynolds, factor, drop))


def friction_factor(reynolds: ArrayLike, relative_roughness: ArrayLike) -> FloatArray:
    """Return the Darcy friction factor of a round pipe.

    Args:
        reynolds: Reynolds number. [-]
        relative_roughness: Roughness over inside diameter. [-]
    Returns: Friction factor; NaN where the Reynolds number is unknown or not above zero. [-]
    Source: 64 / Re below Re = 2040; above, the equation of C. F. Colebrook (1939), solved to machine accuracy by
        the method of D. Clamond, Industrial and Engineering Chemistry Research 48 (2009) 3665.
    """
    from fluids.friction import friction_factor as solved

    Re, roughness = np.broadcast_arrays(np.asarray(reynolds, dtype=float), np.asarray(relative_roughness, dtype=float))
    found = np.full(Re.shape, np.nan)
    flows = np.isfinite(Re) & (Re > 0.0)
    found[flows] = [solved(*pair, Method="Clamond") for pair in zip(Re[flows], roughness[flows], strict=True)]
    return found


def saturation_drop(fluid: Fluid, p_Pa: ArrayLike, pressure_drop_Pa: ArrayLike, side: str) -> FloatArray:
    """Return how far a pressure drop lowers the saturation temperature.

    Args:
        fluid: Refrigerant.
        p_Pa: Pressure before the drop. [Pa]
        pressure_drop_Pa: Pressure drop; NaN if it is not known. [Pa]
        side: "dew" for suction and discharge lines, "bubble" for liquid lines.
    Returns: Difference of the saturation temperatures before and after; NaN if the drop is not known, infinite
        where it leaves less pressure than the model of the refrigerant reaches down to. [K]
    Raises: OutsideValidRangeError if `p_Pa` is outside the range of the model; ValueError for another side.
    """
    if side not in ("dew", "bubble"):
        raise ValueError(f"side {side!r} is neither dew nor bubble")
    state = fluid.dew if side == "dew" else fluid.bubble
    before, drop = state(p_Pa), np.asarray(pressure_drop_Pa, dtype=float)
    lowest = fluid.p_dew(fluid.T_range_K[0]) if side == "dew" else fluid.p_bubble(fluid.T_range_K[0])
    after = np.where(np.isnan(drop), before.p_Pa, before.p_Pa - drop)
    lost = before.T_K - state(np.maximum(after, lowest)).T_K
    return np.where(np.isnan(drop), np.nan, np.where(after < lowest, np.inf, lost))


@dataclass(frozen=True)
class OilReturn:
    """Whether vapour carries oil up a riser; arrays of one shape.

    Attributes:
        flow_reversal: Dimensionless vapour velocity j*: at about 0.8 to 1 a film on the wall turns round.
        lowest_velocity_m_per_s: Velocity at the threshold.
        lowest_load: Share of the flow given at which the threshold is met; above 1 the riser does not carry.
    """

    flow_reversal: FloatArray
    lowest_velocity_m_per_s: FloatArray
    lowest_load: FloatArray


def oil_return(
    velocity_m_per_s: ArrayLike,
    density_kg_per_m3: ArrayLike,
    diameter_m: ArrayLike,
    threshold: ArrayLike,
    oil_density_kg_per_m3: ArrayLike = HEAVY_OIL_DENSITY_KG_PER_M3,
) -> OilReturn:
    """Return how well vapour carries oil up a riser.

    Args:
        velocity_m_per_s: Velocity of the vapour, at the lowest load. [m/s]
        density_kg_per_m3: Density of the vapour. [kg/m3]
        diameter_m: Inside diameter. [m]
        threshold: Dimensionless velocity that counts as carrying, 0.8 to 1. [-]
        oil_density_kg_per_m3: Density of the oil. [kg/m3]
    Returns: The dimensionless velocity and what the threshold asks for.
    Raises: OutsideValidRangeError for a diameter or density not above zero, or vapour not lighter than the oil.
    Source: flow reversal of a film in a vertical pipe, j* = v sqrt(rho / (g D (rho_oil - rho))): G. B. Wallis,
        One-dimensional Two-phase Flow (1969), chapter 11.
    """
    density = above_zero("density", density_kg_per_m3, "kg/m3")
    diameter = above_zero("inside diameter", diameter_m, "m")
    oil = np.asarray(oil_density_kg_per_m3, dtype=float)
    lighter = above_zero("density of the oil less that of the vapour,", oil - density, "kg/m3")
    unit_velocity = np.sqrt(GRAVITY_M_PER_S2 * diameter * lighter / density)
    velocity = np.asarray(velocity_m_per_s, dtype=float)
    needed = np.asarray(threshold) * unit_velocity
    with np.errstate(divide="ignore"):
        load = np.where(velocity > 0.0, needed / velocity, np.inf)
    return OilReturn(*np.broadcast_arrays(velocity / unit_velocity, needed, load))


@dataclass(frozen=True)
class LiquidSupply:
    """Liquid at the expansion valve, after friction and height; arrays of one shape.

    Attributes:
        static_head_Pa: Pressure the height takes away.
        pressure_loss_Pa: Height and friction; NaN if friction is not known.
        subcooling_needed_K: Subcooling at the start of the line below which liquid flashes before the valve.
        subcooling_left_K: What is left at the end of the line; below zero there is flash gas.
    """

    static_head_Pa: FloatArray
    pressure_loss_Pa: FloatArray
    subcooling_needed_K: FloatArray
    subcooling_left_K: FloatArray


def liquid_supply(
    fluid: Fluid, p_Pa: ArrayLike, subcooling_K: ArrayLike, riser_m: ArrayLike, pressure_drop_Pa: ArrayLike
) -> LiquidSupply:
    """Return what height and friction leave of the subcooling; heat taken up on the way is not counted.

    Args:
        fluid: Refrigerant.
        p_Pa: Pressure at the start of the liquid line. [Pa]
        subcooling_K: Temperature below the bubble point there. [K]
        riser_m: Height of the end above the start. [m]
        pressure_drop_Pa: Friction of line, valves and drier; NaN if it is not known. [Pa]
    Returns: The supply, in the broadcast shape of everything given.
    Raises: OutsideValidRangeError outside the range of the fluid.
    Source: dp = rho g h (hydrostatics); the bubble line turns it into temperature.
    """
    density = fluid.liquid(p_Pa, subcooling_K).density_kg_per_m3
    head = density * GRAVITY_M_PER_S2 * np.asarray(riser_m, dtype=float)
    loss = head + np.asarray(pressure_drop_Pa, dtype=float)
    needed = saturation_drop(fluid, p_Pa, np.maximum(loss, 0.0), "bubble")
    left = np.asarray(subcooling_K, dtype=float) - needed
    return LiquidSupply(*np.broadcast_arrays(head, loss, needed, left))
