"""Liquid and vapour together: states of given pressure and quality, solved from a neighbour.

The library's own two-phase flashes start cold, and for near-azeotropes they return one minus the quality.
Here the equilibrium ratios K = y/x are iterated with the fugacity coefficients of each phase, from the
bubble point upward in quality; the walk has to end on the dew line, which checks it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from retrofit.errors import ModelFaultError, NoSolutionError
from retrofit.properties.equation import EquationModel, Equilibrium, PhaseOf
from retrofit.properties.grid import FloatArray

RATIO_TOLERANCE = 1e-7  # of ln K: a millionth of a kelvin; the library itself is no steadier at low pressure
MOST_ITERATIONS = 200


@dataclass(frozen=True)
class _Iterate:
    """Where an iteration stands: temperature, ln K, its rise with temperature, and the molar densities."""

    T_K: float
    ln_ratios: FloatArray
    slope: float
    rho_liquid: float
    rho_vapour: float


def walk_qualities(model: EquationModel, bubble: Equilibrium, qualities: Sequence[float]) -> list[Equilibrium]:
    """Return the states of rising quality at the pressure of a bubble point.

    Args:
        model: Equation model.
        bubble: Checked bubble point.
        qualities: Vapour mole fractions above 0, rising. [-]
    Returns: One state for each quality.
    Raises: ModelFaultError where no equilibrium is found.
    """
    if model.mixture.is_pure:
        raise ValueError("a pure fluid evaporates at one temperature: mix its saturated states instead")
    rise = 2500.0 / bubble.T_K**2  # d ln K / dT of a refrigerant, roughly: latent heat / (R T^2)
    last = _Iterate(bubble.T_K, np.log(bubble.y / bubble.x), rise, bubble.rho_liquid, bubble.rho_vapour)
    before, before_quality, quality_now = last, 0.0, 0.0
    found = []
    for quality in qualities:
        along = (quality - quality_now) / (quality_now - before_quality) if quality_now > before_quality else 0.0
        guess = replace(
            last,
            T_K=last.T_K + along * (last.T_K - before.T_K),
            ln_ratios=last.ln_ratios + along * (last.ln_ratios - before.ln_ratios),
        )
        state, done = _equilibrium(model, bubble.p_Pa, quality, guess)
        before, before_quality, last, quality_now = last, quality_now, done, quality
        found.append(state)
    return found


def _equilibrium(model: EquationModel, p_Pa: float, quality: float, at: _Iterate) -> tuple[Equilibrium, _Iterate]:
    """Solve one equilibrium of given pressure and molar quality by substitution of the ratios."""
    for _ in range(MOST_ITERATIONS):
        # A common factor on all ratios closes the balance of matter; temperature is what moves it.
        shift = _common_shift(model.z, at.ln_ratios, quality)
        T = at.T_K + shift / at.slope
        ratios = np.exp(at.ln_ratios + shift)
        x = model.z / (1.0 + quality * (ratios - 1.0))
        y = ratios * x
        liquid = model.phase_of(x, at.rho_liquid, p_Pa, T)
        vapour = model.phase_of(y, at.rho_vapour, p_Pa, T)
        ln_ratios = liquid.ln_fugacity_coefficients - vapour.ln_fugacity_coefficients
        done = bool(np.max(np.abs(ln_ratios - at.ln_ratios - shift)) < RATIO_TOLERANCE)
        at = _Iterate(T, ln_ratios, at.slope, liquid.rho, vapour.rho)
        if done:
            return _whole(model, p_Pa, T, quality, liquid, vapour), at
    raise ModelFaultError(
        f"{model.mixture.designation}: no equilibrium at {p_Pa / 1e5:.5g} bar and molar quality {quality:g}"
    )


def _common_shift(z: FloatArray, ln_ratios: FloatArray, quality: float) -> float:
    """Return the shift of all ln K with which the phases' mole fractions add up (Rachford and Rice 1952)."""
    shift = 0.0
    for _ in range(50):
        ratios = np.exp(ln_ratios + shift)
        below = 1.0 + quality * (ratios - 1.0)
        excess = float(np.sum(z * (ratios - 1.0) / below))
        step = excess / float(np.sum(z * ratios / below**2))
        shift -= min(max(step, -0.5), 0.5)
        if abs(step) < 1e-13:
            return shift
    raise NoSolutionError("the balance of matter between liquid and vapour does not close")


def _whole(
    model: EquationModel, p_Pa: float, T_K: float, quality: float, liquid: PhaseOf, vapour: PhaseOf
) -> Equilibrium:
    """Put liquid and vapour together by their amounts of substance."""
    mass = model.molar_mass_kg_per_mol

    def mixed(of_liquid: float, of_vapour: float) -> float:
        return ((1.0 - quality) * of_liquid + quality * of_vapour) / mass

    return Equilibrium(
        T_K=T_K,
        p_Pa=p_Pa,
        rho_liquid=liquid.rho,
        rho_vapour=vapour.rho,
        x=liquid.fractions,
        y=vapour.fractions,
        h_J_per_kg=mixed(liquid.h, vapour.h),
        s_J_per_kgK=mixed(liquid.s, vapour.s),
        density_kg_per_m3=1.0 / mixed(1.0 / liquid.rho, 1.0 / vapour.rho),
        molar_quality=quality,
        quality=quality * vapour.molar_mass / mass,
    )
