"""One refrigerant, fast: states on arrays from its tables, with the range stated and kept.

Every method takes numbers or arrays, which broadcast together, and returns arrays. A state outside the
range raises `OutsideValidRangeError` with the range, or is NaN if the fluid was made `lenient`.
"""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.errors import OutsideValidRangeError
from retrofit.properties.grid import Curve, FloatArray
from retrofit.properties.table import Tables, greatest_subcooling
from retrofit.units import ZERO_C_K

ENDS = 1e-9  # rounding allowed at the ends of a range, relative
DEW_SLACK_K = 0.01  # p of T and T of p are tables of their own, which agree within this


@dataclass(frozen=True)
class State:
    """States of a refrigerant, as arrays.

    Attributes:
        p_Pa, T_K, h_J_per_kg, s_J_per_kgK, density_kg_per_m3: State.
        quality: Vapour mass fraction; NaN outside the two-phase region.
        molar_quality: Vapour mole fraction; NaN outside the two-phase region.
    """

    p_Pa: FloatArray
    T_K: FloatArray
    h_J_per_kg: FloatArray
    s_J_per_kgK: FloatArray
    density_kg_per_m3: FloatArray
    quality: FloatArray
    molar_quality: FloatArray


@dataclass(frozen=True)
class Fluid:
    """A refrigerant's behaviour.

    Attributes:
        designation: Catalogue designation.
        tables: Its tables.
        estimated_pairs: Component pairs whose interaction is estimated, not fitted.
        viscosity_gaps: Why the viscosity is unknown somewhere in the range, in words; empty if it is not.
        lenient: Whether states outside the range are NaN instead of an error.
    """

    designation: str
    tables: Tables
    estimated_pairs: tuple[tuple[str, str], ...] = ()
    viscosity_gaps: tuple[str, ...] = ()
    lenient: bool = False

    def as_lenient(self) -> Fluid:
        """Return the same fluid with NaN for states outside the range."""
        return replace(self, lenient=True)

    @property
    def T_range_K(self) -> tuple[float, float]:
        """Return lowest and highest saturation temperature of the model. [K]"""
        return self.tables.numbers.T_lowest_K, self.tables.numbers.T_highest_K

    @property
    def T_critical_K(self) -> float:
        """Return the critical temperature; for a blend, where its saturation lines meet. [K]"""
        return self.tables.numbers.T_critical_K

    @property
    def p_critical_Pa(self) -> float:
        """Return the critical pressure; for a blend, where its saturation lines meet. [Pa]"""
        return self.tables.numbers.p_critical_Pa

    @property
    def T_limit_K(self) -> float:
        """Return up to which temperature all components' equations of state are stated to hold. [K]"""
        return self.tables.numbers.T_limit_K

    @property
    def molar_mass_kg_per_mol(self) -> float:
        """Return the molar mass. [kg/mol]"""
        return self.tables.numbers.molar_mass_kg_per_mol

    # -- saturation ------------------------------------------------------------------------------

    def p_bubble(self, T_K: ArrayLike) -> FloatArray:
        """Return the bubble pressure at a temperature. [Pa]

        Args:
            T_K: Temperature. [K]
        Raises: OutsideValidRangeError outside `T_range_K`.
        """
        return self._pressure(T_K, 0)

    def p_dew(self, T_K: ArrayLike) -> FloatArray:
        """Return the dew pressure at a temperature. [Pa]

        Args:
            T_K: Temperature. [K]
        Raises: OutsideValidRangeError outside `T_range_K`.
        """
        return self._pressure(T_K, 1)

    def _pressure(self, T_K: ArrayLike, line: int) -> FloatArray:
        T = self._inside("saturation temperature", T_K, *self.T_range_K, "K")
        return np.exp(self.tables.pressure(T, line)[0])

    def bubble(self, p_Pa: ArrayLike) -> State:
        """Return the saturated liquid at a pressure.

        Args:
            p_Pa: Pressure. [Pa]
        Raises: OutsideValidRangeError outside the range of the bubble line.
        """
        return self._saturated(p_Pa, self.tables.bubble, "bubble pressure", 0.0)

    def dew(self, p_Pa: ArrayLike) -> State:
        """Return the saturated vapour at a pressure.

        Args:
            p_Pa: Pressure. [Pa]
        Raises: OutsideValidRangeError outside the range of the dew line.
        """
        return self._saturated(p_Pa, self.tables.dew, "dew pressure", 1.0)

    def _saturated(self, p_Pa: ArrayLike, line: Curve, what: str, quality: float) -> State:
        p = self._pressure_inside(p_Pa, line.x, what)
        T, h, s, ln_rho = line(np.log(p), 0, 1, 2, 3)
        return State(p, T, h, s, np.exp(ln_rho), np.full_like(T, quality), np.full_like(T, quality))

    def dew_slope(self, p_Pa: ArrayLike) -> FloatArray:
        """Return the slope of the dew temperature along ln p. [K]

        Args:
            p_Pa: Pressure. [Pa]
        Raises: OutsideValidRangeError outside the range of the dew line.
        """
        p = self._pressure_inside(p_Pa, self.tables.dew.x, "dew pressure")
        return self.tables.dew.slope(np.log(p), 0)

    # -- vapour ----------------------------------------------------------------------------------

    def vapour(self, p_Pa: ArrayLike, superheat_K: ArrayLike) -> State:
        """Return superheated vapour.

        Args:
            p_Pa: Pressure. [Pa]
            superheat_K: Temperature above the dew point at that pressure. [K]
        Raises: OutsideValidRangeError outside the range of the table.
        """
        dew = self.dew(p_Pa)
        heat = self._inside("superheat", superheat_K, 0.0, self.tables.vapour.y[-1], "K above the dew point")
        h, s, ln_rho = self.tables.vapour(np.log(dew.p_Pa), heat, 0, 1, 2)
        nan = np.full_like(h, np.nan)
        return State(
            np.broadcast_to(dew.p_Pa, h.shape),
            dew.T_K + heat,
            dew.h_J_per_kg + h,
            dew.s_J_per_kgK + s,
            dew.density_kg_per_m3 * np.exp(ln_rho),
            nan,
            nan,
        )

    def h_at_entropy(self, p_Pa: ArrayLike, s_J_per_kgK: ArrayLike) -> FloatArray:
        """Return the enthalpy at a pressure and entropy: of vapour, or of wet vapour below the dew point. [J/kg]

        Args:
            p_Pa: Pressure. [Pa]
            s_J_per_kgK: Entropy. [J/(kg K)]
        Raises: OutsideValidRangeError outside the range of the tables.
        """
        dew = self.dew(p_Pa)
        above = np.asarray(s_J_per_kgK, dtype=float) - dew.s_J_per_kgK
        highest = self.tables.by_entropy.y[-1]
        above = self._not_too_hot(above, highest, dew)
        (h,) = self.tables.by_entropy(np.log(dew.p_Pa), np.maximum(above, 0.0), 0)
        h = dew.h_J_per_kg + h
        wet = above < 0.0
        return np.where(wet, self._wet_enthalpy(dew, above), h) if np.any(wet) else h

    def _wet_enthalpy(self, dew: State, s_above: FloatArray) -> FloatArray:
        """Solve s(h) = s just below the dew line by Newton's method: dh = T ds at constant pressure and matter."""
        bubble, s = self.bubble(dew.p_Pa), dew.s_J_per_kgK + np.minimum(s_above, 0.0)
        share = (s - bubble.s_J_per_kgK) / (dew.s_J_per_kgK - bubble.s_J_per_kgK)
        share = self._inside("entropy, as a share of the way from bubble to dew point,", share, 0.0, 1.0, "")
        h = bubble.h_J_per_kg + share * (dew.h_J_per_kg - bubble.h_J_per_kg)
        for _ in range(8):
            state = self.two_phase(dew.p_Pa, h)
            h = np.clip(h + state.T_K * (s - state.s_J_per_kgK), bubble.h_J_per_kg, dew.h_J_per_kg)
        return h

    def T_at_enthalpy(self, p_Pa: ArrayLike, h_J_per_kg: ArrayLike) -> FloatArray:
        """Return the temperature of vapour, or of wet vapour, at a pressure and enthalpy. [K]

        Args:
            p_Pa: Pressure. [Pa]
            h_J_per_kg: Enthalpy. [J/kg]
        Raises: OutsideValidRangeError outside the range of the tables.
        """
        dew = self.dew(p_Pa)
        above = np.asarray(h_J_per_kg, dtype=float) - dew.h_J_per_kg
        above = self._not_too_hot(above, self.tables.by_enthalpy.y[-1], dew)
        (heat,) = self.tables.by_enthalpy(np.log(dew.p_Pa), np.maximum(above, 0.0), 0)
        T = dew.T_K + heat
        wet = above < 0.0
        if not np.any(wet):
            return T
        h_wet = np.minimum(above, 0.0) + dew.h_J_per_kg
        return np.where(wet, self.two_phase(dew.p_Pa, h_wet).T_K, T)

    def above_bubble(self, p_Pa: ArrayLike, h_J_per_kg: ArrayLike) -> State:
        """Return the state at a pressure and enthalpy, superheated or wet.

        Args:
            p_Pa: Pressure. [Pa]
            h_J_per_kg: Enthalpy. [J/kg]
        Raises: OutsideValidRangeError outside the range of the tables.
        """
        dew = self.dew(p_Pa)
        h = np.asarray(h_J_per_kg, dtype=float)
        heat = np.maximum(self.T_at_enthalpy(p_Pa, h) - dew.T_K, 0.0)
        dry = self.vapour(p_Pa, heat)
        is_wet = h < dew.h_J_per_kg
        if not np.any(is_wet):
            return replace(dry, h_J_per_kg=np.broadcast_to(h, dry.T_K.shape))
        wet = self.two_phase(p_Pa, np.minimum(h, dew.h_J_per_kg))
        return State(*(np.where(is_wet, getattr(wet, f.name), getattr(dry, f.name)) for f in fields(State)))

    # -- two-phase and liquid --------------------------------------------------------------------

    def two_phase(self, p_Pa: ArrayLike, h_J_per_kg: ArrayLike) -> State:
        """Return the mixture of liquid and vapour at a pressure and enthalpy.

        Args:
            p_Pa: Pressure. [Pa]
            h_J_per_kg: Enthalpy of the whole. [J/kg]
        Raises: OutsideValidRangeError outside the two-phase region or its table.
        """
        p = self._pressure_inside(p_Pa, self.tables.two_phase.x, "pressure of a two-phase state")
        bubble, dew = self.bubble(p), self.dew(p)
        latent = dew.h_J_per_kg - bubble.h_J_per_kg
        share = (np.asarray(h_J_per_kg, dtype=float) - bubble.h_J_per_kg) / latent
        share = self._inside("share of the way from bubble to dew point", share, 0.0, 1.0, "")
        T, s, v, quality, molar = self.tables.two_phase(np.log(p), share, 0, 1, 2, 3, 4)

        def between(low: FloatArray, high: FloatArray) -> FloatArray:
            return low + share * (high - low)

        return State(
            np.broadcast_to(p, T.shape),
            T + between(bubble.T_K, dew.T_K),
            between(bubble.h_J_per_kg, dew.h_J_per_kg),
            s + between(bubble.s_J_per_kgK, dew.s_J_per_kgK),
            1.0 / (v + between(1.0 / bubble.density_kg_per_m3, 1.0 / dew.density_kg_per_m3)),
            quality + share,
            molar + share,
        )

    def liquid(self, p_Pa: ArrayLike, subcooling_K: ArrayLike) -> State:
        """Return subcooled liquid.

        Args:
            p_Pa: Pressure. [Pa]
            subcooling_K: Temperature below the bubble point at that pressure. [K]
        Raises: OutsideValidRangeError outside the range of the table.
        """
        p = self._pressure_inside(p_Pa, self.tables.liquid.x, "pressure of a liquid")
        bubble = self.bubble(p)
        deepest = greatest_subcooling(bubble.T_K, self.T_range_K[0])
        cooling = self._inside("subcooling", subcooling_K, 0.0, deepest, "K below the bubble point")
        h, s, ln_rho = self.tables.liquid(np.log(p), cooling / deepest, 0, 1, 2)
        nan = np.full_like(h, np.nan)
        return State(
            np.broadcast_to(p, h.shape),
            bubble.T_K - cooling,
            bubble.h_J_per_kg + h,
            bubble.s_J_per_kgK + s,
            bubble.density_kg_per_m3 * np.exp(ln_rho),
            nan,
            nan,
        )

    # -- transport -------------------------------------------------------------------------------

    def viscosity_liquid(self, p_Pa: ArrayLike) -> FloatArray:
        """Return the dynamic viscosity of saturated liquid. [Pa s]

        Pressure itself hardly matters: for subcooled liquid ask at the bubble pressure of its temperature.

        Args:
            p_Pa: Bubble pressure. [Pa]
        Returns: Viscosity; NaN where it is unknown, see `viscosity_gaps`. [Pa s]
        Raises: OutsideValidRangeError outside the range of the bubble line.
        """
        return self._along(p_Pa, self.tables.liquid_viscosity, self.tables.bubble, "bubble pressure")

    def conductivity_liquid(self, p_Pa: ArrayLike) -> FloatArray:
        """Return the thermal conductivity of saturated liquid. [W/(m K)]

        Args:
            p_Pa: Bubble pressure. [Pa]
        Returns: Conductivity; NaN where it is unknown. [W/(m K)]
        Raises: OutsideValidRangeError outside the range of the bubble line.
        """
        return self._along(p_Pa, self.tables.liquid_conductivity, self.tables.bubble, "bubble pressure")

    def conductivity_vapour(self, p_Pa: ArrayLike) -> FloatArray:
        """Return the thermal conductivity of saturated vapour. [W/(m K)]

        Args:
            p_Pa: Dew pressure. [Pa]
        Returns: Conductivity; NaN where it is unknown. [W/(m K)]
        Raises: OutsideValidRangeError outside the range of the dew line.
        """
        return self._along(p_Pa, self.tables.vapour_conductivity, self.tables.dew, "dew pressure")

    def surface_tension(self, p_Pa: ArrayLike) -> FloatArray:
        """Return the surface tension. [N/m]

        Args:
            p_Pa: Bubble pressure. [Pa]
        Returns: Surface tension; NaN where it is unknown. [N/m]
        Raises: OutsideValidRangeError outside the range of the bubble line.
        """
        return self._along(p_Pa, self.tables.surface_tension, self.tables.bubble, "bubble pressure")

    def _along(self, p_Pa: ArrayLike, table: Curve, line: Curve, what: str) -> FloatArray:
        ln_p = np.log(self._pressure_inside(p_Pa, line.x, what))
        return np.where(_is_on(table.x, ln_p), np.exp(table(ln_p, 0)[0]), np.nan)

    def viscosity_vapour(self, p_Pa: ArrayLike, T_K: ArrayLike) -> FloatArray:
        """Return the dynamic viscosity of saturated or superheated vapour. [Pa s]

        Args:
            p_Pa: Pressure. [Pa]
            T_K: Temperature, not below the dew point. [K]
        Returns: Viscosity; NaN where it is unknown, see `viscosity_gaps`. [Pa s]
        Raises: OutsideValidRangeError outside the range of the table of vapour.
        """
        dew, table = self.dew(p_Pa), self.tables.vapour_viscosity
        heat = np.asarray(T_K, dtype=float) - dew.T_K
        heat = np.where((heat < 0.0) & (heat > -DEW_SLACK_K), 0.0, heat)
        heat = self._inside("superheat", heat, 0.0, self.tables.vapour.y[-1], "K above the dew point")
        ln_p = np.log(dew.p_Pa)
        return np.where(_is_on(table.x, ln_p), np.exp(table(ln_p, heat, 0)[0]), np.nan)

    # -- range -----------------------------------------------------------------------------------

    def _pressure_inside(self, p_Pa: ArrayLike, ln_p: FloatArray, what: str) -> FloatArray:
        return self._inside(what, p_Pa, np.exp(ln_p[0]), np.exp(ln_p[-1]), "Pa")

    def _not_too_hot(self, above: FloatArray, highest: float, dew: State) -> FloatArray:
        """Return enthalpy or entropy above the dew point where the model reaches; a reader is told in temperatures."""
        outside = above > highest + ENDS * max(abs(highest), 1.0)
        if self.lenient or not np.any(outside):
            return self._inside("gas above the dew point", above, -np.inf, highest, "")
        place = int(np.argmax(outside))
        p, T = (np.broadcast_to(values, outside.shape).flat[place] for values in (dew.p_Pa, dew.T_K))
        (heat,) = self.tables.by_enthalpy(np.log(p), self.tables.by_enthalpy.y[-1], 0)
        hottest_K = float(T + min(float(heat), self.tables.vapour.y[-1]))
        raise OutsideValidRangeError(
            f"{self.designation}: at {_shown(float(p), 'Pa')} the gas would be hotter than "
            f"{hottest_K - ZERO_C_K:.0f} degC, where its model ends"
        )

    def _inside(self, what: str, value: ArrayLike, low: ArrayLike, high: ArrayLike, unit: str) -> FloatArray:
        """Return `value` as an array if it lies in the range; else raise, or put NaN where it does not."""
        given = np.asarray(value, dtype=float)
        least, most = np.asarray(low, dtype=float), np.asarray(high, dtype=float)
        if (given >= least).all() and (given <= most).all():  # as nearly always
            return given + 0.0 * most if most.ndim else given
        slack = ENDS * np.maximum(np.abs(most), 1.0)
        outside = (given < least - slack) | (given > most + slack) | np.isnan(given)
        kept: FloatArray = np.minimum(np.maximum(given, least), most)
        if not np.any(outside):
            return kept
        if self.lenient:
            return np.where(outside, np.nan, kept)
        worst = int(np.argmax(outside))
        given_0, low_0, high_0 = (np.broadcast_to(x, outside.shape).flat[worst] for x in (given, least, most))
        raise OutsideValidRangeError(
            f"{self.designation}: {what} {_shown(given_0, unit)} is outside the range of its model, "
            f"{_shown(low_0, unit)} to {_shown(high_0, unit)}"
        )


def _is_on(nodes: FloatArray, x: FloatArray) -> NDArray[np.bool_]:
    """Return which positions lie between the first and the last node, rounding allowed."""
    inside: NDArray[np.bool_] = (x >= nodes[0] - ENDS) & (x <= nodes[-1] + ENDS)
    return inside


def _shown(value: float, unit: str) -> str:
    """Return a limit the way a person reads it: degC beside K, bar for pressures."""
    if not np.isfinite(value):
        return "any" if value == -np.inf else f"{value} {unit}".strip()
    if unit == "K":
        return f"{value - ZERO_C_K:.1f} degC ({value:.1f} K)"
    if unit == "Pa":
        return f"{value / 1e5:.4g} bar"
    return f"{value:.5g} {unit}".strip()
