"""Viscosity, thermal conductivity and surface tension, for the tables of a refrigerant.

A component's values come from the property library, and only where the library has a model fitted to that component.
A blend's come from its components'. Liquid: viscosity by Grunberg and Nissan without interaction, conductivity by
mass with half of Filippov's interaction, surface tension by mole fraction, each component as saturated liquid at the
temperature of the blend. Vapour: viscosity by Wilke, conductivity by Wassiljewa with the same factors, each component
at the temperature and molar density of the blend. What has no value is NaN, and `viscosity_gaps` says why.

Where the library has two models of viscosity, its first is taken but for R22. There, for saturated liquid from -20 to
40 degC, the first is 9 to 20 % below the VDI Heat Atlas and the second 9 to 14 % above, but within 5 % of a textbook's
table that the first misses by 17 to 24 %. For the others the first is the nearer one: R32 and R152a within 4 % of
Perry's handbook, R1234yf within 6 % and R1234ze(E) within 3 % of the correlation of Huber and Assael (2016).

Near its critical point a component's liquid loses its meaning in a blend that is far from its own: above 0.96 of the
critical temperature the logarithm of each value goes on along the line from 0.90 to 0.96.

Against the library's own fits of R404A, R407C, R410A and R507A as single fluids the viscosity of liquid differs by up
to 20 % (blends with R143a in the cold; else 7 %), that of vapour by up to 7 % (-40 to 40 degC); the conductivity of
liquid by up to 7 % (-30 to 40 degC). A friction factor follows about the fifth root of the viscosity in turbulent
flow, so a pressure drop by 4 % at most.
"""

from __future__ import annotations

import json
from collections.abc import Callable
from functools import cache
from itertools import combinations
from typing import Any

import numpy as np
from numpy.typing import NDArray

from retrofit.properties.components import Mixture
from retrofit.properties.grid import Curve, FloatArray, Surface

Positions = NDArray[np.intp]
PRESSURES, SUPERHEATS = 30, 13  # nodes of the vapour surface: its error is below 0.1 %, near the critical point 1 %
# Some models find no solution in thin vapour. Below this share of the critical density the viscosity is within
# about 5 % of its value at vanishing density, which is taken instead.
THIN = 0.1
VANISHING_MOL_PER_M3 = 1e-6
# Whose second model of viscosity is the nearer one: entropy scaling with one constant is first, corresponding states
# after S. A. Klein, M. O. McLinden and A. Laesecke, International Journal of Refrigeration 20 (1997) 208, second.
SECOND_VISCOSITY = frozenset({"R22"})
EXTENDED_FROM, EXTENDED_ABOVE = 0.90, 0.96  # of a component's critical temperature, in a blend
# L. P. Filippov, International Journal of Heat and Mass Transfer 11 (1968) 331, has 0.72. Half of it comes nearest to
# the library's fits of four whole blends: our own.
INTERACTION = 0.36


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
    return _by_factors(mole_fractions, viscosities_Pa_s, viscosities_Pa_s, molar_masses)


def _by_factors(x: FloatArray, values: FloatArray, mu: FloatArray, molar_masses: FloatArray) -> FloatArray:
    """Return the sum of x v / (factors x) over the components, with Wilke's factors."""
    mass = molar_masses[:, None] / molar_masses
    ratio = np.sqrt(mu[..., :, None] / mu[..., None, :])
    factor = (1.0 + ratio * mass.T**0.25) ** 2 / np.sqrt(8.0 * (1.0 + mass))
    mixed: FloatArray = np.sum(x * values / (factor @ x), axis=-1)
    return mixed


def mixed_liquid_conductivity(mass_fractions: FloatArray, conductivities: FloatArray) -> FloatArray:
    """Return the thermal conductivity of a liquid mixture. [W/(m K)]

    Args:
        mass_fractions: Mass fraction of each component, shape (components,). [-]
        conductivities: Conductivity of each as liquid, shape (..., components). [W/(m K)]
    Source: sum of w k less c w_i w_j |k_i - k_j| for every pair, the form of Filippov (1968), with c = 0.36.
    """
    w, k = mass_fractions, conductivities
    mixed: FloatArray = np.asarray(k @ w)
    for i, j in combinations(range(w.size), 2):
        mixed = mixed - INTERACTION * w[i] * w[j] * np.abs(k[..., i] - k[..., j])
    return mixed


def mixed_vapour_conductivity(
    mole_fractions: FloatArray, conductivities: FloatArray, viscosities_Pa_s: FloatArray, molar_masses: FloatArray
) -> FloatArray:
    """Return the thermal conductivity of a gas mixture. [W/(m K)]

    Args:
        mole_fractions: Mole fraction of each component, shape (components,). [-]
        conductivities: Conductivity of each as gas, shape (..., components). [W/(m K)]
        viscosities_Pa_s: Viscosity of each as gas, likewise. [Pa s]
        molar_masses: Molar mass of each, shape (components,). [any]
    Source: A. Wassiljewa (1904) with Wilke's factors, as E. A. Mason and S. C. Saxena (1958) without their 1.065.
    """
    return _by_factors(mole_fractions, conductivities, viscosities_Pa_s, molar_masses)


@cache
def library_name(name: str) -> str:
    """Return the name under which the property library has a component with the viscosity model that is taken.

    Args:
        name: Its name at the library.
    """
    if name not in SECOND_VISCOSITY:
        return name
    from CoolProp import CoolProp

    library: Any = CoolProp
    fluid = json.loads(library.get_fluid_param_string(name, "JSON"))[0]
    own = f"{name}-second"
    fluid["INFO"] |= {"NAME": own, "ALIASES": [], "CAS": own, "REFPROP_NAME": "N/A"}
    fluid["TRANSPORT"]["viscosity"] = fluid["TRANSPORT"]["viscosity"][1]
    library.add_fluids_as_JSON("HEOS", json.dumps([fluid]))
    return own


Quantity = Callable[[Any], float]
QUANTITIES: tuple[Quantity, ...] = (
    lambda state: state.viscosity(),
    lambda state: state.conductivity(),
    lambda state: state.surface_tension(),
)


class Components:
    """The components of a mixture at the property library, each by itself.

    Attributes:
        names: Catalogue designations.
        mole_fractions, mass_fractions, molar_masses: Of each, arrays. [-, -, kg/mol]
    """

    def __init__(self, mixture: Mixture) -> None:
        from CoolProp import CoolProp

        self._library: Any = CoolProp
        self._states = [CoolProp.AbstractState("HEOS", library_name(name)) for name in mixture.library_names]
        self.names = mixture.components
        self.molar_masses = np.array([state.molar_mass() for state in self._states])
        self.mass_fractions = np.array(mixture.mass_fractions)
        amounts = self.mass_fractions / self.molar_masses
        self.mole_fractions: FloatArray = amounts / amounts.sum()

    def without_model(self) -> list[str]:
        """Return the components the library has no viscosity model for."""
        return [
            name
            for name, state in zip(self.names, self._states, strict=True)
            if np.isnan(self._at(state, VANISHING_MOL_PER_M3, 0.9 * state.T_critical())[0])
        ]

    def liquid(self, T_K: float) -> FloatArray:
        """Return viscosity, conductivity and surface tension of each as saturated liquid, shape (3, components).

        In a blend a component near or above its critical temperature is extended from below it. NaN where the
        library has no value. [Pa s, W/(m K), N/m]

        Args:
            T_K: Temperature. [K]
        """
        return np.array([self._liquid(state, T_K) for state in self._states]).T

    def vapour(self, T_K: float, molar_density: float) -> FloatArray:
        """Return viscosity and conductivity of each as gas, shape (2, components); NaN where there is no value.

        [Pa s, W/(m K)]

        Args:
            T_K: Temperature. [K]
            molar_density: Density. [mol/m3]
        """
        return np.array([self._gas(state, molar_density, T_K) for state in self._states]).T

    def _liquid(self, state: Any, T_K: float) -> FloatArray:
        start, end = EXTENDED_FROM * state.T_critical(), EXTENDED_ABOVE * state.T_critical()
        if len(self._states) == 1 or T_K <= end:
            return self._saturated(state, T_K)
        low, high = np.log(self._saturated(state, start)), np.log(self._saturated(state, end))
        return np.asarray(np.exp(high + (high - low) * (T_K - end) / (end - start)))

    def _saturated(self, state: Any, T_K: float) -> FloatArray:
        state.unspecify_phase()
        return _values(lambda: state.update(self._library.QT_INPUTS, 0.0, T_K), state, QUANTITIES)

    def _gas(self, state: Any, molar_density: float, T_K: float) -> FloatArray:
        found = self._at(state, molar_density, T_K)
        if np.isnan(found[0]) and molar_density < THIN * state.rhomolar_critical():
            return self._at(state, VANISHING_MOL_PER_M3, T_K)
        return found

    def _at(self, state: Any, molar_density: float, T_K: float) -> FloatArray:
        state.specify_phase(self._library.iphase_gas)
        return _values(lambda: state.update(self._library.DmolarT_INPUTS, molar_density, T_K), state, QUANTITIES[:2])


def _values(update: Callable[[], None], state: Any, quantities: tuple[Quantity, ...]) -> FloatArray:
    """Return the quantities of a state after an update; the library raises ValueError where it has none."""
    try:
        update()
    except ValueError:
        return np.full(len(quantities), np.nan)
    return np.array([_value(quantity, state) for quantity in quantities])


def _value(quantity: Quantity, state: Any) -> float:
    try:
        found = float(quantity(state))
    except ValueError:
        return np.nan
    return found if 0.0 < found < np.inf else np.nan


def liquid_curves(components: Components, ln_p: FloatArray, T_K: FloatArray) -> tuple[Curve, Curve, Curve]:
    """Return ln of viscosity, conductivity and surface tension of saturated liquid along ln p, where each is known.

    Args:
        components: The components.
        ln_p: Logarithm of the bubble pressures [Pa], rising, shape (n,). [-]
        T_K: Bubble temperatures, shape (n,). [K]
    Returns: The curves; NaN throughout where a quantity is nowhere known.
    """
    viscosity, conductivity, tension = np.stack([components.liquid(T) for T in T_K], axis=1)
    return (
        _curve(ln_p, mixed_liquid(components.mole_fractions, viscosity)),
        _curve(ln_p, mixed_liquid_conductivity(components.mass_fractions, conductivity)),
        _curve(ln_p, tension @ components.mole_fractions),
    )


def _curve(ln_p: FloatArray, values: FloatArray) -> Curve:
    """Return the logarithm of values along ln p, over the longest run of them that is known."""
    known = _longest_run(np.isfinite(values))
    if known.size < 4:
        return Curve(ln_p[[0, -1]], np.full((1, 2, 2), np.nan))
    return Curve.through(ln_p[known], np.log(values[known])[None])


def vapour_conductivity(components: Components, ln_p: FloatArray, T_K: FloatArray, molar_density: FloatArray) -> Curve:
    """Return ln conductivity of saturated vapour along ln p, over the pressures where it is known.

    Args:
        components: The components.
        ln_p: Logarithm of the dew pressures [Pa], rising, shape (n,). [-]
        T_K: Dew temperatures, shape (n,). [K]
        molar_density: Densities of the saturated vapour, shape (n,). [mol/m3]
    """
    pairs = zip(T_K, molar_density, strict=True)
    viscosity, conductivity = np.stack([components.vapour(*pair) for pair in pairs], axis=1)
    x, masses = components.mole_fractions, components.molar_masses
    return _curve(ln_p, mixed_vapour_conductivity(x, conductivity, viscosity, masses))


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
    each = np.array([components.vapour(*pair)[0] for pair in zip(T.flat, rho.flat, strict=True)])
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


def viscosity_gaps(components: Components, whole: bool) -> tuple[str, ...]:
    """Return why the viscosity is unknown somewhere, in words; nothing if it is known everywhere.

    Args:
        components: The components.
        whole: Whether it is known for all of the liquid and the vapour of the model.
    """
    if whole:
        return ()
    if missing := components.without_model():
        return (f"the property library has no viscosity model for {' and '.join(missing)}",)
    return ("the property library's viscosity models do not reach over the whole range",)
