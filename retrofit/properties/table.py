"""Building the tables of one refrigerant from its equation level, and checking them against it.

Saturation curves run along ln p. The vapour surface runs over ln p and the superheat; two more turn it
round, so that a cycle needs no iteration: enthalpy from entropy, and temperature from enthalpy. Two-phase
states are held as their small departure from a straight line between the saturated states, which is zero
for a pure fluid. Liquid runs over ln p and the share of the greatest subcooling. Viscosity, conductivity and surface
tension have curves of their own, and the viscosity of vapour a surface, over the pressures where they are known.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, fields

import numpy as np

from retrofit.errors import ModelFaultError
from retrofit.properties.equation import EquationModel, Equilibrium, PhaseState
from retrofit.properties.grid import Curve, FloatArray, Surface
from retrofit.properties.range import SaturationSpan
from retrofit.properties.transport import Components, liquid_curves, vapour_conductivity, vapour_viscosity
from retrofit.properties.two_phase import walk_qualities

LARGEST_SUBCOOLING_K = 80.0
LARGEST_SUPERHEAT_K = 250.0
LARGEST_SUPERHEAT_LIGHT_K = 380.0  # small molecules have few ways to store heat: compression makes them hotter
LIGHT_KG_PER_MOL = 0.030


@dataclass(frozen=True)
class Numbers:
    """Single numbers that go with the tables of a refrigerant; see `Fluid` for their meaning."""

    molar_mass_kg_per_mol: float
    T_lowest_K: float
    T_highest_K: float
    T_critical_K: float
    p_critical_Pa: float
    T_limit_K: float
    superheat_highest_K: float
    largest_error: float


@dataclass(frozen=True)
class Tables:
    """The tables of one refrigerant.

    Attributes:
        pressure: ln p of bubble and dew along T.
        bubble, dew: T, h, s, ln rho along ln p.
        vapour: h, s, ln rho above the dew point, over ln p and superheat.
        by_entropy: h above the dew point, over ln p and entropy above the dew point.
        by_enthalpy: T above the dew point, over ln p and enthalpy above the dew point.
        two_phase: departures of T, s, v, mass and molar quality from the straight line, over ln p and share of h.
        liquid: h, s, ln rho against the bubble point, over ln p and share of the greatest subcooling.
        liquid_viscosity: ln viscosity of saturated liquid, along ln p.
        liquid_conductivity, surface_tension: ln of these of saturated liquid, along ln p.
        vapour_viscosity: ln viscosity of vapour, over ln p and superheat.
        vapour_conductivity: ln conductivity of saturated vapour, along ln p.
        numbers: Limits and constants.
    """

    pressure: Curve
    bubble: Curve
    dew: Curve
    vapour: Surface
    by_entropy: Surface
    by_enthalpy: Surface
    two_phase: Surface
    liquid: Surface
    liquid_viscosity: Curve
    liquid_conductivity: Curve
    surface_tension: Curve
    vapour_viscosity: Surface
    vapour_conductivity: Curve
    numbers: Numbers

    def arrays(self) -> dict[str, FloatArray]:
        """Return every array by name, ready to be stored."""
        found = {"numbers": np.array([getattr(self.numbers, field.name) for field in fields(Numbers)])}
        for field in fields(self):
            part = getattr(self, field.name)
            if not isinstance(part, Numbers):
                found |= {f"{field.name}.{axis.name}": getattr(part, axis.name) for axis in fields(part)}
        return found

    @classmethod
    def from_arrays(cls, arrays: dict[str, FloatArray]) -> Tables:
        """Return the tables held in `arrays`; raises KeyError or TypeError if something is missing."""

        def curve(name: str) -> Curve:
            return Curve(arrays[f"{name}.x"], arrays[f"{name}.nodes"])

        def surface(name: str) -> Surface:
            return Surface(arrays[f"{name}.x"], arrays[f"{name}.y"], arrays[f"{name}.nodes"])

        return cls(
            pressure=curve("pressure"),
            bubble=curve("bubble"),
            dew=curve("dew"),
            vapour=surface("vapour"),
            by_entropy=surface("by_entropy"),
            by_enthalpy=surface("by_enthalpy"),
            two_phase=surface("two_phase"),
            liquid=surface("liquid"),
            liquid_viscosity=curve("liquid_viscosity"),
            liquid_conductivity=curve("liquid_conductivity"),
            surface_tension=curve("surface_tension"),
            vapour_viscosity=surface("vapour_viscosity"),
            vapour_conductivity=curve("vapour_conductivity"),
            numbers=Numbers(*map(float, arrays["numbers"])),
        )


def build_tables(model: EquationModel, span: SaturationSpan, fineness: float = 1.0) -> Tables:
    """Return the tables of a refrigerant.

    Args:
        model: Equation model.
        span: How far its saturation lines reach.
        fineness: Node density against the usual one. [-]
    Returns: The tables, not yet checked at points between the nodes.
    Raises: ModelFaultError if the model cannot be followed or fails a check.
    """
    temperatures = span.node_temperatures(3.5 / fineness, 0.10 / fineness)
    bubble = model.trace(span.bubble, list(temperatures))
    dew = model.trace(span.dew, list(temperatures))
    numbers = _numbers(model, span)
    bubble_curve, dew_curve = _along_pressure(bubble), _along_pressure(dew)
    heated = _vapour_nodes(model, dew, _graded(numbers.superheat_highest_K, round(48 * fineness), 2.0))
    components = Components(model.mixture)
    rho = np.exp(heated.ln_rho + dew_curve.nodes[3, 0][:, None]) / model.molar_mass_kg_per_mol
    viscosity, conductivity, tension = liquid_curves(components, bubble_curve.x, temperatures)
    return Tables(
        pressure=Curve.through(temperatures, np.log([[point.p_Pa for point in line] for line in (bubble, dew)])),
        bubble=bubble_curve,
        dew=dew_curve,
        vapour=Surface.through(dew_curve.x, heated.superheat, np.stack([heated.h, heated.s, heated.ln_rho])),
        by_entropy=_by_entropy(dew_curve.x, heated),
        by_enthalpy=_by_enthalpy(dew_curve.x, heated),
        two_phase=_two_phase(model, bubble, dew_curve, round(18 * fineness)),
        liquid=_liquid(model, bubble, span.T_lowest_K, round(28 * fineness)),
        liquid_viscosity=viscosity,
        liquid_conductivity=conductivity,
        surface_tension=tension,
        vapour_viscosity=vapour_viscosity(components, dew_curve.x, heated.superheat, heated.T, rho),
        vapour_conductivity=vapour_conductivity(components, dew_curve.x, temperatures, rho[:, 0]),
        numbers=numbers,
    )


def _numbers(model: EquationModel, span: SaturationSpan) -> Numbers:
    is_light = model.molar_mass_kg_per_mol < LIGHT_KG_PER_MOL
    return Numbers(
        molar_mass_kg_per_mol=model.molar_mass_kg_per_mol,
        T_lowest_K=span.T_lowest_K,
        T_highest_K=span.T_highest_K,
        T_critical_K=span.T_critical_K,
        p_critical_Pa=span.p_critical_Pa,
        T_limit_K=model.T_limit_K,
        superheat_highest_K=LARGEST_SUPERHEAT_LIGHT_K if is_light else LARGEST_SUPERHEAT_K,
        largest_error=float("nan"),
    )


def _graded(highest: float, count: int, power: float) -> FloatArray:
    """Return nodes from 0 to `highest`, closer together near 0."""
    return highest * np.linspace(0.0, 1.0, count) ** power


def _along_pressure(line: Sequence[Equilibrium]) -> Curve:
    """Return T, h, s and ln rho of a saturation line along ln p."""
    ln_p = np.log([point.p_Pa for point in line])
    if not np.all(np.diff(ln_p) > 0.0):
        raise ModelFaultError("a saturation line does not rise in pressure")
    columns = [(point.T_K, point.h_J_per_kg, point.s_J_per_kgK, np.log(point.density_kg_per_m3)) for point in line]
    return Curve.through(ln_p, np.array(columns).T)


@dataclass(frozen=True)
class _Heated:
    """Superheated vapour at the nodes, against the dew point: arrays of shape (pressures, superheats)."""

    superheat: FloatArray
    T: FloatArray
    h: FloatArray
    s: FloatArray
    ln_rho: FloatArray
    cp: FloatArray


def _vapour_nodes(model: EquationModel, dew: Sequence[Equilibrium], superheat: FloatArray) -> _Heated:
    """Return the vapour above every dew node, and check that it is the vapour that begins at the dew point."""
    rows = [_row(model.gas, point, superheat) for point in dew]

    def table(name: str) -> FloatArray:
        return np.array([[getattr(state, name) for state in row] for row in rows])

    h, s, rho = table("h_J_per_kg"), table("s_J_per_kgK"), table("density_kg_per_m3")
    at_dew = np.array([[point.h_J_per_kg, point.s_J_per_kgK, point.density_kg_per_m3] for point in dew])
    if not np.allclose(rho[:, 0], at_dew[:, 2], rtol=1e-6):
        raise ModelFaultError(f"{model.mixture.designation}: vapour and dew line do not meet")
    if not (np.all(np.diff(h, axis=1) > 0.0) and np.all(np.diff(rho, axis=1) < 0.0)):
        raise ModelFaultError(f"{model.mixture.designation}: vapour does not expand and warm steadily")
    return _Heated(
        superheat,
        table("T_K"),
        h - at_dew[:, :1],
        s - at_dew[:, 1:2],
        np.log(rho / at_dew[:, 2:]),
        table("cp_J_per_kgK"),
    )


def _row(find: Callable[[float, float, float], PhaseState], point: Equilibrium, steps: FloatArray) -> list[PhaseState]:
    """Return the states at the pressure of a saturated one and temperatures off it, each from the one before."""
    row, rho = [], point.density_kg_per_m3
    for step in steps:
        row.append(find(point.p_Pa, point.T_K + step, rho))
        rho = row[-1].density_kg_per_m3
    return row


def _by_entropy(ln_p: FloatArray, heated: _Heated) -> Surface:
    """Turn the vapour nodes round: enthalpy over entropy, with dh = T ds at constant pressure."""
    from scipy.interpolate import CubicHermiteSpline

    entropy = _graded(float(heated.s[:, -1].min()), heated.superheat.size, 2.0)
    rows = zip(heated.s, heated.h, heated.T, strict=True)
    values = np.array([CubicHermiteSpline(s, h, T)(entropy) for s, h, T in rows])
    return Surface.through(ln_p, entropy, values[None])


def _by_enthalpy(ln_p: FloatArray, heated: _Heated) -> Surface:
    """Turn the vapour nodes round: temperature over enthalpy, with dT = dh / cp at constant pressure."""
    from scipy.interpolate import CubicHermiteSpline

    enthalpy = _graded(float(heated.h[:, -1].min()), heated.superheat.size, 2.0)
    rows = zip(heated.h, heated.cp, strict=True)
    values = np.array([CubicHermiteSpline(h, heated.superheat, 1.0 / cp)(enthalpy) for h, cp in rows])
    return Surface.through(ln_p, enthalpy, values[None])


def _two_phase(model: EquationModel, bubble: Sequence[Equilibrium], dew_curve: Curve, count: int) -> Surface:
    """Return how two-phase states depart from the straight line between bubble and dew, over their share of h."""
    from scipy.interpolate import CubicSpline

    # Both ends need the nodes: the most volatile component boils off first, the least volatile last.
    share = _crowded_at_ends(round(1.4 * count))
    inside = [point for point in bubble if np.log(point.p_Pa) <= dew_curve.x[-1]]
    chosen = inside[::-2][::-1]
    ln_p = np.log([point.p_Pa for point in chosen])
    if model.mixture.is_pure:
        return Surface.through(ln_p, share, np.zeros((5, ln_p.size, share.size)))
    walks = [[point, *walk_qualities(model, point, list(_crowded_at_ends(count)[1:]))] for point in chosen]
    (dew_T,) = dew_curve(ln_p, 0)
    if not np.allclose([walk[-1].T_K for walk in walks], dew_T, atol=5e-4):
        raise ModelFaultError(f"{model.mixture.designation}: the walk up in quality does not end on the dew line")
    rows = [CubicSpline(*_departures(walk))(share).T for walk in walks]
    return Surface.through(ln_p, share, np.stack(rows, axis=1))


def _crowded_at_ends(count: int) -> FloatArray:
    """Return nodes from 0 to 1, closer together at both ends."""
    return 0.5 - 0.5 * np.cos(np.linspace(0.0, np.pi, count + 1))


def _departures(walk: Sequence[Equilibrium]) -> tuple[FloatArray, FloatArray]:
    """Return the shares of h and the departures of T, s, v and the qualities, shape (points, 5)."""
    h = np.array([state.h_J_per_kg for state in walk])
    share = (h - h[0]) / (h[-1] - h[0])
    volume = [1.0 / state.density_kg_per_m3 for state in walk]
    values = np.array(
        [
            [state.T_K, state.s_J_per_kgK, v, state.quality, state.molar_quality]
            for state, v in zip(walk, volume, strict=True)
        ]
    )
    straight = values[0] + share[:, None] * (values[-1] - values[0])
    return share, values - straight


def _liquid(model: EquationModel, bubble: Sequence[Equilibrium], T_lowest: float, count: int) -> Surface:
    """Return subcooled liquid against the bubble point, over ln p and the share of the greatest subcooling."""
    warm = [point for point in bubble if point.T_K - T_lowest > 3.0]
    share = _graded(1.0, count, 2.2)
    rows = []
    for point in warm:
        depth = greatest_subcooling(np.float64(point.T_K), T_lowest)
        rows.append([_against(state, point) for state in _row(model.liquid, point, -share * depth)])
    values = np.moveaxis(np.array(rows), 2, 0)
    # Density may fall a little on cooling (water below 4 degC); a jump to another root is far larger.
    if not (np.all(np.diff(values[0], axis=1) < 0.0) and np.all(values[2] > -0.001)):
        raise ModelFaultError(f"{model.mixture.designation}: liquid does not cool steadily")
    return Surface.through(np.log([point.p_Pa for point in warm]), share, values)


def _against(state: PhaseState, point: Equilibrium) -> tuple[float, float, float]:
    return (
        state.h_J_per_kg - point.h_J_per_kg,
        state.s_J_per_kgK - point.s_J_per_kgK,
        float(np.log(state.density_kg_per_m3 / point.density_kg_per_m3)),
    )


def greatest_subcooling(T_bubble_K: FloatArray | np.float64, T_lowest_K: float) -> FloatArray | np.float64:
    """Return how far below a bubble temperature the liquid table goes. [K]

    Close to the lowest temperature no further than that; without a kink, which a spline would not follow.

    Args:
        T_bubble_K: Bubble temperature. [K]
        T_lowest_K: Lowest temperature of the model. [K]
    """
    above = T_bubble_K - T_lowest_K
    return LARGEST_SUBCOOLING_K * np.tanh(above / LARGEST_SUBCOOLING_K)
