"""Making the tables of a refrigerant: build, check at random points against the equation level, refine."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from retrofit.errors import ModelFaultError
from retrofit.properties.components import Mixture
from retrofit.properties.equation import EquationModel, Equilibrium, PhaseState
from retrofit.properties.fluid import Fluid
from retrofit.properties.grid import FloatArray
from retrofit.properties.range import SaturationSpan, saturation_span
from retrofit.properties.table import Tables, build_tables, greatest_subcooling
from retrofit.properties.transport import Components, viscosity_gaps
from retrofit.properties.two_phase import walk_qualities

LARGEST_ERROR = 1e-5  # relative, away from the critical point
LARGEST_ERROR_NEAR_CRITICAL = 2e-3
NEAR_CRITICAL_K = 6.0
FINENESS = (1.0, 1.5, 2.2)
POINTS = 48
SEED = 20240311  # the same points each time, so that a table is built the same way everywhere


def build_fluid(mixture: Mixture) -> Fluid:
    """Return a refrigerant with tables that agree with its equation level.

    Args:
        mixture: What to model.
    Returns: The fluid.
    Raises: ModelFaultError if even the finest tables disagree, or the model cannot be followed.
    """
    model = EquationModel(mixture)
    span = saturation_span(model)
    for fineness in FINENESS:
        tables = build_tables(model, span, fineness)
        fluid = Fluid(mixture.designation, tables, model.estimated_pairs)
        far, near = largest_errors(model, span, fluid)
        if far <= LARGEST_ERROR and near <= LARGEST_ERROR_NEAR_CRITICAL:
            numbers = replace(tables.numbers, largest_error=far)
            gaps = viscosity_gaps(Components(mixture), _has_viscosity_throughout(tables))
            return replace(fluid, tables=replace(tables, numbers=numbers), viscosity_gaps=gaps)
    raise ModelFaultError(
        f"{mixture.designation}: its tables differ from its equations by {far:.1e} ({near:.1e} near the critical "
        f"point), more than the {LARGEST_ERROR:.0e} allowed"
    )


def _has_viscosity_throughout(tables: Tables) -> bool:
    pairs = (tables.liquid_viscosity, tables.bubble), (tables.vapour_viscosity, tables.dew)
    return all(
        np.all(np.isfinite(known.nodes)) and np.array_equal(known.x[[0, -1]], line.x[[0, -1]]) for known, line in pairs
    )


def largest_errors(model: EquationModel, span: SaturationSpan, fluid: Fluid) -> tuple[float, float]:
    """Return the largest relative difference of tables and equations, away from and near the critical point.

    Args:
        model: Equation model.
        span: Its saturation span.
        fluid: The same refrigerant from tables.
    Returns: Largest differences at random points: of p, T, density relative to themselves, of h relative to
        the latent heat, of s relative to the latent entropy. [-]
    """
    random = np.random.default_rng(SEED)
    T = np.sort(random.uniform(*fluid.T_range_K, POINTS))
    lines = model.trace(span.bubble, list(T)), model.trace(span.dew, list(T))
    errors = np.maximum.reduce(
        [
            _saturation_errors(fluid, T, *lines),
            _vapour_errors(model, fluid, lines[1], random),
            _liquid_errors(model, fluid, lines[0], random),
            _two_phase_errors(model, fluid, lines[0], random),
        ]
    )
    near = fluid.T_critical_K - T < NEAR_CRITICAL_K
    return float(np.max(errors, initial=0.0, where=~near)), float(np.max(errors, initial=0.0, where=near))


def _columns(states: Sequence[Equilibrium] | Sequence[PhaseState], *names: str) -> FloatArray:
    return np.array([[getattr(state, name) for state in states] for name in names])


def _largest(*differences: FloatArray) -> FloatArray:
    largest: FloatArray = np.max(np.abs(differences), axis=0)
    return largest


def _latent(fluid: Fluid) -> float:
    """Return the latent heat halfway up the range: the measure of an enthalpy error. [J/kg]"""
    T = float(np.mean(fluid.T_range_K))
    return float(fluid.dew(fluid.p_dew(T)).h_J_per_kg - fluid.bubble(fluid.p_bubble(T)).h_J_per_kg)


def _saturation_errors(
    fluid: Fluid, T: FloatArray, bubble: Sequence[Equilibrium], dew: Sequence[Equilibrium]
) -> FloatArray:
    latent, found = _latent(fluid), []
    for line, p_of, state_of in ((bubble, fluid.p_bubble, fluid.bubble), (dew, fluid.p_dew, fluid.dew)):
        p, h, s, rho = _columns(line, "p_Pa", "h_J_per_kg", "s_J_per_kgK", "density_kg_per_m3")
        state = state_of(p)
        found += [p_of(T) / p - 1.0, state.T_K / T - 1.0, state.density_kg_per_m3 / rho - 1.0]
        found += [(state.h_J_per_kg - h) / latent, (state.s_J_per_kgK - s) * T / latent]
    return _largest(*found)


def _vapour_errors(
    model: EquationModel, fluid: Fluid, dew: Sequence[Equilibrium], random: np.random.Generator
) -> FloatArray:
    latent = _latent(fluid)
    heat = random.uniform(0.0, 1.0, len(dew)) ** 2 * fluid.tables.vapour.y[-1]
    exact = [
        model.gas(point.p_Pa, point.T_K + step, point.density_kg_per_m3 * point.T_K / (point.T_K + step))
        for point, step in zip(dew, heat, strict=True)
    ]
    (p,) = _columns(dew, "p_Pa")
    T, h, s, rho = _columns(exact, "T_K", "h_J_per_kg", "s_J_per_kgK", "density_kg_per_m3")
    state, lenient = fluid.vapour(p, heat), fluid.as_lenient()
    turned = [(lenient.h_at_entropy(p, s) - h) / latent, lenient.T_at_enthalpy(p, h) / T - 1.0]
    return _largest(
        (state.h_J_per_kg - h) / latent,
        (state.s_J_per_kgK - s) * T / latent,
        state.density_kg_per_m3 / rho - 1.0,
        *(np.nan_to_num(error, nan=0.0) for error in turned),
    )


def _liquid_errors(
    model: EquationModel, fluid: Fluid, bubble: Sequence[Equilibrium], random: np.random.Generator
) -> FloatArray:
    T, p = _columns(bubble, "T_K", "p_Pa")
    cooling = random.uniform(0.0, 1.0, T.size) ** 2 * greatest_subcooling(T, fluid.T_range_K[0])
    exact = [_cooled(model, point, step) for point, step in zip(bubble, cooling, strict=True)]
    h, rho = _columns(exact, "h_J_per_kg", "density_kg_per_m3")
    state = fluid.as_lenient().liquid(p, cooling)
    errors = _largest((state.h_J_per_kg - h) / _latent(fluid), state.density_kg_per_m3 / rho - 1.0)
    return np.nan_to_num(errors, nan=0.0)


def _cooled(model: EquationModel, point: Equilibrium, cooling: float) -> PhaseState:
    """Return subcooled liquid, reached in steps so that the density stays on the liquid's root."""
    rho = point.density_kg_per_m3
    for step in np.linspace(0.0, cooling, 8):
        state = model.liquid(point.p_Pa, point.T_K - step, rho)
        rho = state.density_kg_per_m3
    return state


def _two_phase_errors(
    model: EquationModel, fluid: Fluid, bubble: Sequence[Equilibrium], random: np.random.Generator
) -> FloatArray:
    errors = np.zeros(len(bubble))
    if model.mixture.is_pure:
        return errors
    ln_p = fluid.tables.two_phase.x
    for i in range(0, len(bubble), 4):
        if not ln_p[0] <= np.log(bubble[i].p_Pa) <= ln_p[-1]:
            continue
        exact = walk_qualities(model, bubble[i], list(np.sort(random.uniform(0.01, 0.999, 3))))
        T, h, quality = _columns(exact, "T_K", "h_J_per_kg", "quality")
        state = fluid.two_phase(bubble[i].p_Pa, h)
        errors[i] = np.max(np.abs([state.T_K / T - 1.0, 0.1 * (state.quality - quality)]))
    return errors
