"""Dynamic viscosity of saturated liquid and of vapour, for the tables of a refrigerant.

A component's viscosity comes from the property library, and only where the library has a model fitted to that
component. A blend's comes from its components': the liquid by Grunberg and Nissan without interaction, each
component as saturated liquid at the temperature of the blend; the vapour by Wilke, each component at the
temperature and molar density of the blend. What has no value is NaN, and `viscosity_gaps` says why.

Against the library's own viscosity fits of R404A, R407C, R410A and R507A as single fluids, -40 to 40 degC, the
liquid differs by up to 20 % (blends with R143a in the cold; else 7 %) and the vapour by up to 7 %. A friction factor
follows about the fifth root of the viscosity in turbulent flow, so a pressure drop by 4 % at most.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
from numpy.typing import NDArray

from retrofit.properties.components import Mixture
from retrofit.properties.grid import Curve, FloatArray, Surface
from retrofit.units import ZERO_C_K

Positions = NDArray[np.intp]
PRESSURES, SUPERHEATS = 30, 13  # nodes of the vapour surface: its error is below 0.1 %, near the critical point 1 %
# Some models find no solution in thin vapour. Below this share of the critical density the viscosity is within
# about 5 % of its value at vanishing density, which is taken instead.
THIN = 0.1
VANISHING_MOL_PER_M3 = 1e-6


def mixed_liquid(mole_fractions: FloatArray, viscosities_Pa_s: FloatArray) -> FloatArray:
    """Return the viscosity of a liquid mixture. [Pa s]

    Args:
        mole_fractions: Mole fraction of each component, shape (components,). [-]
        viscosities_Pa_s: Viscosity of each as liquid, shape (..., components). [Pa s]
    Source: L. Grunberg and A. H. Nissan, Nature 164 (1949) 799, without interaction: ln mu = sum of x ln mu.
    """
    mixed: FloatArray = np.exp(np.log(viscosities_Pa_s) @ mole_fractions)
    return mixed


def mixed_vapour(mole_fractions: FloatArray, viscosities_Pa_s: FloatArray, molar_masses: FloatArray) -> FloatArray:
    """Return the viscosity of a gas mixture. [Pa s]

    Args:
        mole_fractions: Mole fraction of each component, shape (components,). [-]
        viscosities_Pa_s: Viscosity of each as gas, shape (..., components). [Pa s]
        molar_masses: Molar mass of each, shape (components,). [any]
    Source: C. R. Wilke, Journal of Chemical Physics 18 (1950) 517.
    """
    mu, mass = viscosities_Pa_s, molar_masses[:, None] / molar_masses
    ratio = np.sqrt(mu[..., :, None] / mu[..., None, :])
    factor = (1.0 + ratio * mass.T**0.25) ** 2 / np.sqrt(8.0 * (1.0 + mass))
    mixed: FloatArray = np.sum(mole_fractions * mu / (factor @ mole_fractions), axis=-1)
    return mixed


class Components:
    """The components of a mixture at the property library, each by itself.

    Attributes:
        names: Catalogue designations.
        mole_fractions, molar_masses: Of each, arrays. [-, kg/mol]
    """

    def __init__(self, mixture: Mixture) -> None:
        from CoolProp import CoolProp

        self._library: Any = CoolProp
        self._states = [CoolProp.AbstractState("HEOS", name) for name in mixture.library_names]
        self.names = mixture.components
        self.molar_masses = np.array([state.molar_mass() for state in self._states])
        amounts = np.array(mixture.mass_fractions) / self.molar_masses
        self.mole_fractions: FloatArray = amounts / amounts.sum()

    def without_model(self) -> list[str]:
        """Return the components the library has no viscosity model for."""
        return [
            name
            for name, state in zip(self.names, self._states, strict=True)
            if np.isnan(self._at(state, VANISHING_MOL_PER_M3, 0.9 * state.T_critical()))
        ]

    def above_critical(self, T_K: float) -> list[tuple[str, float]]:
        """Return the components that are no liquid at a temperature, and their critical temperatures.

        Args:
            T_K: Temperature. [K]
        """
        critical = [state.T_critical() for state in self._states]
        return [(name, T) for name, T in zip(self.names, critical, strict=True) if T <= T_K]

    def liquid(self, T_K: float) -> list[float]:
        """Return the viscosity of each as saturated liquid; NaN where it has none. [Pa s]

        Args:
            T_K: Temperature. [K]
        """
        return [self._saturated(state, T_K) for state in self._states]

    def vapour(self, T_K: float, molar_density: float) -> list[float]:
        """Return the viscosity of each as gas; NaN where it has none. [Pa s]

        Args:
            T_K: Temperature. [K]
            molar_density: Density. [mol/m3]
        """
        return [self._gas(state, molar_density, T_K) for state in self._states]

    def _saturated(self, state: Any, T_K: float) -> float:
        state.unspecify_phase()
        return _value(lambda: state.update(self._library.QT_INPUTS, 0.0, T_K), state)

    def _gas(self, state: Any, molar_density: float, T_K: float) -> float:
        found = self._at(state, molar_density, T_K)
        if np.isnan(found) and molar_density < THIN * state.rhomolar_critical():
            return self._at(state, VANISHING_MOL_PER_M3, T_K)
        return found

    def _at(self, state: Any, molar_density: float, T_K: float) -> float:
        state.specify_phase(self._library.iphase_gas)
        return _value(lambda: state.update(self._library.DmolarT_INPUTS, molar_density, T_K), state)


def _value(update: Callable[[], None], state: Any) -> float:
    """Return the viscosity after an update; the library raises ValueError where it has none."""
    try:
        update()
        found = float(state.viscosity())
    except ValueError:
        return np.nan
    return found if 0.0 < found < np.inf else np.nan


def liquid_viscosity(components: Components, ln_p: FloatArray, T_K: FloatArray) -> Curve:
    """Return ln viscosity of saturated liquid along ln p, over the pressures where it is known.

    Args:
        components: The components.
        ln_p: Logarithm of the bubble pressures [Pa], rising, shape (n,). [-]
        T_K: Bubble temperatures, shape (n,). [K]
    Returns: The curve; NaN throughout if the viscosity is nowhere known.
    """
    each = np.array([components.liquid(T) for T in T_K])
    values = np.log(mixed_liquid(components.mole_fractions, each))
    known = _longest_run(np.isfinite(values))
    if known.size < 4:
        return Curve(ln_p[[0, -1]], np.full((1, 2, 2), np.nan))
    return Curve.through(ln_p[known], values[known][None])


def vapour_viscosity(
    components: Components, ln_p: FloatArray, superheat_K: FloatArray, T_K: FloatArray, molar_density: FloatArray
) -> Surface:
    """Return ln viscosity of vapour over ln p and superheat, over the pressures where it is known.

    Args:
        components: The components.
        ln_p: Logarithm of the dew pressures [Pa], rising, shape (n,). [-]
        superheat_K: Temperatures above the dew point, rising, shape (m,). [K]
        T_K: Temperatures at these, shape (n, m). [K]
        molar_density: Densities at these, shape (n, m). [mol/m3]
    Returns: The surface; NaN throughout if the viscosity is nowhere known.
    """
    i, j = _spread(ln_p.size, PRESSURES), _spread(superheat_K.size, SUPERHEATS)
    T, rho = T_K[np.ix_(i, j)], molar_density[np.ix_(i, j)]
    each = np.array([components.vapour(*pair) for pair in zip(T.flat, rho.flat, strict=True)])
    mixed = mixed_vapour(components.mole_fractions, each, components.molar_masses).reshape(T.shape)
    known = _longest_run(np.all(np.isfinite(mixed), axis=1))
    if known.size < 4:
        return Surface(ln_p[[0, -1]], superheat_K[[0, -1]], np.full((1, 4, 4), np.nan))
    return Surface.through(ln_p[i][known], superheat_K[j], np.log(mixed[known])[None])


def _spread(size: int, count: int) -> Positions:
    """Return `count` of the numbers 0 to size - 1, evenly, both ends among them."""
    return np.unique(np.linspace(0, size - 1, min(size, count)).round().astype(np.intp))


def _longest_run(known: NDArray[np.bool_]) -> Positions:
    """Return the positions of the longest unbroken run of True."""
    runs = np.split(np.arange(known.size), np.flatnonzero(np.diff(known)) + 1)
    return max((run for run in runs if known[run[0]]), key=len, default=np.arange(0))


def viscosity_gaps(components: Components, liquid_ends_at_K: float, whole: bool) -> tuple[str, ...]:
    """Return why the viscosity is unknown somewhere, in words; nothing if it is known everywhere.

    Args:
        components: The components.
        liquid_ends_at_K: Bubble temperature above which the liquid's is looked for no further. [K]
        whole: Whether it is known for all of the liquid and the vapour of the model.
    """
    if whole:
        return ()
    if missing := components.without_model():
        return (f"the property library has no viscosity model for {' and '.join(missing)}",)
    if above := components.above_critical(liquid_ends_at_K):
        name, T = min(above, key=lambda one: one[1])
        return (f"a liquid viscosity above {T - ZERO_C_K:.1f} degC, the critical temperature of {name}, has no rule",)
    return ("the property library's viscosity models do not reach over the whole range",)
