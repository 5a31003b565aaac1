"""The equation level: one refrigerant through the property library, state by state, each answer checked.

The library's own flash of a blend starts from a guess of its own and now and then returns a root that is
nonsense, without an error. So a blend is never flashed cold here: a saturation line is followed from a
temperature where ideal-solution values are a good guess, and each step is handed the solution before it.
A step whose answer fails the checks is halved; a step that cannot be halved any further is an error.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from retrofit.errors import ModelFaultError, NoSolutionError
from retrofit.properties.components import Mixture, provide_pairs
from retrofit.properties.grid import FloatArray

START_TEMPERATURES_K = (240.0, 260.0, 225.0, 280.0, 210.0, 300.0, 195.0, 180.0, 165.0, 150.0, 130.0, 110.0)
LOWEST_K = 100.0
SMALLEST_STEP_K = 0.02
FUGACITY_TOLERANCE = 1e-6
# A wrong root misses the pressure expected from the steps before by far more; a right one by far less.
PREDICTION_TOLERANCE = 0.02


@dataclass(frozen=True)
class Equilibrium:
    """Liquid and vapour in equilibrium, and the state of the whole.

    Attributes:
        T_K, p_Pa: Temperature and pressure.
        rho_liquid, rho_vapour: Molar densities of the two phases. [mol/m3]
        x, y: Mole fractions of liquid and vapour.
        h_J_per_kg, s_J_per_kgK, density_kg_per_m3: State of the whole at its quality.
        molar_quality: Vapour mole fraction of the whole.
        quality: Vapour mass fraction of the whole.
    """

    T_K: float
    p_Pa: float
    rho_liquid: float
    rho_vapour: float
    x: FloatArray
    y: FloatArray
    h_J_per_kg: float
    s_J_per_kgK: float
    density_kg_per_m3: float
    molar_quality: float
    quality: float


@dataclass(frozen=True)
class PhaseState:
    """A single-phase state: temperature, enthalpy, entropy, density and isobaric heat capacity."""

    T_K: float
    h_J_per_kg: float
    s_J_per_kgK: float
    density_kg_per_m3: float
    cp_J_per_kgK: float


@dataclass(frozen=True)
class PhaseOf:
    """One phase of a blend: its composition, fugacity coefficients and molar state.

    Attributes:
        fractions: Mole fractions.
        ln_fugacity_coefficients: Their natural logarithms.
        h, s, rho, molar_mass: Molar enthalpy, entropy, density and mass. [J/mol, J/(mol K), mol/m3, kg/mol]
    """

    fractions: FloatArray
    ln_fugacity_coefficients: FloatArray
    h: float
    s: float
    rho: float
    molar_mass: float


class EquationModel:
    """One refrigerant at the equation level.

    Attributes:
        mixture: What is modelled.
        estimated_pairs: Component pairs the library has no fit for, estimated here.
        molar_mass_kg_per_mol: Molar mass.
        T_limit_K: Highest temperature for which every component's equation of state is stated to hold.
        T_floor_K: Lowest temperature of a pure fluid's equation; a blend is followed as far as it goes.
        critical_point: Temperature and pressure, for a pure fluid; a blend's is not in the library.
    """

    def __init__(self, mixture: Mixture) -> None:
        from CoolProp import CoolProp

        self._library: Any = CoolProp
        self.mixture = mixture
        self.estimated_pairs = provide_pairs(mixture)
        self._state = self._new_state()
        self._probe = self._new_state()
        self._pure = [CoolProp.AbstractState("HEOS", name) for name in mixture.library_names]
        self._masses = np.array([pure.molar_mass() for pure in self._pure])
        self.z = np.array(self._state.get_mole_fractions())
        self.molar_mass_kg_per_mol = float(self._state.molar_mass())
        self.T_limit_K = min(pure.Tmax() for pure in self._pure)
        self.T_floor_K = self._pure[0].Tmin() if mixture.is_pure else LOWEST_K
        self.critical_point = (self._pure[0].T_critical(), self._pure[0].p_critical()) if mixture.is_pure else None

    def _new_state(self) -> Any:
        state = self._library.AbstractState("HEOS", "&".join(self.mixture.library_names))
        state.set_mass_fractions(list(self.mixture.mass_fractions))
        return state

    # -- saturation ------------------------------------------------------------------------------

    def bubble_start(self) -> Equilibrium:
        """Return a first checked bubble point at a low temperature, from ideal-solution values.

        Returns: The bubble point at the first of the starting temperatures that passes every check.
        Raises: ModelFaultError if none does.
        """
        for T in (T for T in START_TEMPERATURES_K if T >= self.T_floor_K):
            try:
                return self._checked(self._solve(T, 0.0, self._ideal_bubble(T)), None, None)
            except (ValueError, ModelFaultError):
                continue
        raise ModelFaultError(
            f"{self.mixture.designation}: no starting point for its saturation line between "
            f"{min(START_TEMPERATURES_K):g} K and {max(START_TEMPERATURES_K):g} K passes the checks"
        )

    def saturation(self, T: float, molar_quality: float, guess: Equilibrium) -> Equilibrium:
        """Return the checked bubble (0) or dew (1) point at a temperature, starting from a guess.

        Args:
            T: Temperature. [K]
            molar_quality: 0 or 1. [-]
            guess: An equilibrium near it.
        Raises: ModelFaultError if there is none or it fails a check.
        """
        try:
            return self._checked(self._solve(T, molar_quality, guess), None, None)
        except ValueError as error:
            raise ModelFaultError(f"{self.mixture.designation}: no saturation at {T:.2f} K: {error}") from error

    def _ideal_bubble(self, T: float) -> Equilibrium:
        """Guess a bubble point by Raoult's law from the pure components' own saturation."""
        p_pure, v_liquid = np.array([_pure_saturation(pure, T) for pure in self._pure]).T
        p = float(self.z @ p_pure)
        rho_vapour = p / (self._state.gas_constant() * T)
        y = self.z * p_pure / p
        return Equilibrium(T, p, 1.0 / float(self.z @ v_liquid), rho_vapour, self.z, y, 0.0, 0.0, 0.0, 0.0, 0.0)

    def _solve(self, T: float, molar_quality: float, guess: Equilibrium) -> Equilibrium:
        """Solve a bubble or dew point from a guess. The library raises ValueError where it finds none."""
        state, library = self._state, self._library
        state.unspecify_phase()
        if self.mixture.is_pure:
            state.update(library.QT_INPUTS, molar_quality, T)
        else:
            state.update_with_guesses(library.QT_INPUTS, molar_quality, T, self._guesses(T, guess))
        return Equilibrium(
            T_K=T,
            p_Pa=state.p(),
            rho_liquid=state.saturated_liquid_keyed_output(library.iDmolar),
            rho_vapour=state.saturated_vapor_keyed_output(library.iDmolar),
            x=np.array(state.mole_fractions_liquid()),
            y=np.array(state.mole_fractions_vapor()),
            h_J_per_kg=state.hmass(),
            s_J_per_kgK=state.smass(),
            density_kg_per_m3=state.rhomass(),
            molar_quality=molar_quality,
            quality=molar_quality,
        )

    def _guesses(self, T: float, guess: Equilibrium) -> Any:
        guesses = self._library.PyGuessesStructure()
        guesses.T, guesses.p = T, guess.p_Pa
        guesses.rhomolar_liq, guesses.rhomolar_vap = guess.rho_liquid, guess.rho_vapour
        guesses.x, guesses.y = list(guess.x), list(guess.y)
        return guesses

    def _checked(self, new: Equilibrium, last: Equilibrium | None, guess: Equilibrium | None) -> Equilibrium:
        """Return an equilibrium that passes every check, or raise ModelFaultError."""
        name = f"{self.mixture.designation} at {new.T_K:.2f} K"
        if not (math.isfinite(new.h_J_per_kg) and new.p_Pa > 0.0):
            raise ModelFaultError(f"{name}: pressure or enthalpy is not a number")
        if not new.rho_liquid > 1.02 * new.rho_vapour > 0.0:
            raise ModelFaultError(f"{name}: the two phases are the same")
        if last is not None and (new.p_Pa - last.p_Pa) * (new.T_K - last.T_K) <= 0.0:
            raise ModelFaultError(f"{name}: pressure does not rise with temperature")
        if guess is not None and abs(math.log(new.p_Pa / guess.p_Pa)) > PREDICTION_TOLERANCE:
            raise ModelFaultError(f"{name}: pressure leaves the line of the steps before")
        if self.fugacity_mismatch(new) > FUGACITY_TOLERANCE:
            raise ModelFaultError(f"{name}: fugacities differ between the phases")
        return new

    def fugacity_mismatch(self, equilibrium: Equilibrium) -> float:
        """Return the largest relative difference of a component's fugacity between the phases.

        Args:
            equilibrium: State to test.
        Returns: Largest |f_liquid / f_vapour - 1|; 0 for a pure fluid. [-]
        Source: equality of fugacities is the condition of phase equilibrium.
        """
        if self.mixture.is_pure:
            return 0.0
        liquid = self._fugacities(equilibrium.T_K, equilibrium.rho_liquid, equilibrium.x)
        vapour = self._fugacities(equilibrium.T_K, equilibrium.rho_vapour, equilibrium.y)
        return float(np.max(np.abs(liquid / vapour - 1.0)))

    def _fugacities(self, T: float, rho: float, fractions: FloatArray) -> FloatArray:
        probe, library = self._probe, self._library
        probe.set_mole_fractions(list(fractions))
        probe.specify_phase(library.iphase_gas)
        probe.update(library.DmolarT_INPUTS, rho, T)
        return np.array([probe.fugacity(i) for i in range(len(fractions))])

    def march(self, last: Equilibrium, before: Equilibrium | None, T: float) -> Iterator[Equilibrium]:
        """Follow a line of constant quality to another temperature, as one step or several.

        Args:
            last, before: The two solutions before; `before` is None at the start.
            T: Temperature to reach. [K]
        Returns: Checked equilibria, the last one at `T`.
        Raises: ModelFaultError if a step stays wrong however small it is made.
        """
        step = T - last.T_K
        while last.T_K != T:
            target = T if abs(T - last.T_K) <= abs(step) * 1.0001 else last.T_K + step
            guess = _extrapolated(before, last, target)
            try:
                solution = self._solve(target, last.molar_quality, guess)
                new = self._checked(solution, last, guess if before is not None else None)
            except (ValueError, ModelFaultError) as error:
                step /= 2.0
                if abs(step) < SMALLEST_STEP_K:
                    raise ModelFaultError(
                        f"{self.mixture.designation}: the line of molar quality {last.molar_quality:g} cannot be "
                        f"followed past {last.T_K:.2f} K ({error})"
                    ) from error
                continue
            before, last = last, new
            yield new

    def trace(self, start: Equilibrium, temperatures: Sequence[float]) -> list[Equilibrium]:
        """Return checked equilibria of the quality of `start` at the temperatures asked for.

        Args:
            start: A checked equilibrium.
            temperatures: Where to solve, rising. [K]
        Returns: One equilibrium for each temperature.
        Raises: ModelFaultError where the line cannot be followed.
        """
        above = [T for T in temperatures if T >= start.T_K]
        below = [T for T in temperatures if T < start.T_K]
        return self._walk(start, below[::-1])[::-1] + self._walk(start, above)

    def _walk(self, start: Equilibrium, temperatures: Sequence[float]) -> list[Equilibrium]:
        last, before, found = start, None, []
        for T in temperatures:
            for new in self.march(last, before, T):
                before, last = last, new
            found.append(last)
        return found

    # -- single phase ----------------------------------------------------------------------------

    def gas(self, p_Pa: float, T_K: float, rho_guess: float | None = None) -> PhaseState:
        """Return the vapour state at a pressure and temperature.

        Args:
            p_Pa: Pressure. [Pa]
            T_K: Temperature. [K]
            rho_guess: Density to start from; the ideal gas if left out. [kg/m3]
        Raises: ModelFaultError if there is none near the guess.
        """
        ideal = p_Pa * self.molar_mass_kg_per_mol / (self._state.gas_constant() * T_K)
        return self._single_phase(p_Pa, T_K, rho_guess or ideal, 0.9)

    def liquid(self, p_Pa: float, T_K: float, rho_guess: float) -> PhaseState:
        """Return the liquid state at a pressure and temperature, from a density near it.

        Args:
            p_Pa: Pressure. [Pa]
            T_K: Temperature. [K]
            rho_guess: Density of a liquid near it, for example at the bubble point. [kg/m3]
        Raises: ModelFaultError if there is none near the guess.
        """
        return self._single_phase(p_Pa, T_K, rho_guess, 1.1)

    def _single_phase(self, p: float, T: float, rho_guess: float, way_out: float) -> PhaseState:
        state = self._state
        self._find_density(state, p, T, rho_guess / self.molar_mass_kg_per_mol, way_out)
        return PhaseState(T, state.hmass(), state.smass(), state.rhomass(), state.cpmass())

    def _find_density(self, state: Any, p: float, T: float, rho: float, way_out: float) -> None:
        """Solve p(rho) = p at one temperature by Newton's method, so that the phase is the guess's own.

        `way_out` is the factor that leads away from unstable densities: up for liquid, down for vapour.
        """
        library = self._library
        state.specify_phase(library.iphase_gas)  # no phase search: density and temperature say it all
        for _ in range(60):
            state.update(library.DmolarT_INPUTS, rho, T)
            stiffness = state.first_partial_deriv(library.iP, library.iDmolar, library.iT)
            if not stiffness > 0.0:
                rho *= way_out
                continue
            step = (p - state.p()) / stiffness
            if abs(step) < 1e-12 * rho:
                return
            rho += min(max(step, -0.2 * rho), 0.2 * rho)
        raise ModelFaultError(f"{self.mixture.designation}: no single-phase state at {p / 1e5:.5g} bar and {T:.2f} K")

    def phase_of(self, fractions: FloatArray, rho_guess: float, p_Pa: float, T_K: float) -> PhaseOf:
        """Return a phase of a composition of its own.

        Args:
            fractions: Mole fractions of the phase, shape (components,). [-]
            rho_guess: Molar density to start from; it decides which phase is found. [mol/m3]
            p_Pa: Pressure. [Pa]
            T_K: Temperature. [K]
        Raises: ModelFaultError if there is no such phase near the guess.
        """
        probe = self._probe
        probe.set_mole_fractions(list(fractions))
        is_vapour = rho_guess < 3.0 * p_Pa / (self._state.gas_constant() * T_K)
        self._find_density(probe, p_Pa, T_K, rho_guess, 0.9 if is_vapour else 1.1)
        coefficients = [probe.fugacity_coefficient(i) for i in range(len(fractions))]
        return PhaseOf(
            fractions,
            np.log(coefficients),
            probe.hmolar(),
            probe.smolar(),
            probe.rhomolar(),
            probe.molar_mass(),
        )

    def gas_at_entropy(self, p_Pa: float, s_J_per_kgK: float, T_guess_K: float) -> PhaseState:
        """Return the vapour state of a given entropy at a pressure, by Newton's method on temperature.

        Args:
            p_Pa: Pressure. [Pa]
            s_J_per_kgK: Entropy. [J/(kg K)]
            T_guess_K: Temperature to start from. [K]
        Raises: NoSolutionError if it does not converge.
        Source: (ds/dT) at constant pressure = cp / T.
        """
        return self._gas_where(
            p_Pa, T_guess_K, lambda state: (s_J_per_kgK - state.s_J_per_kgK) * state.T_K / state.cp_J_per_kgK
        )

    def gas_at_enthalpy(self, p_Pa: float, h_J_per_kg: float, T_guess_K: float) -> PhaseState:
        """Return the vapour state of a given enthalpy at a pressure, by Newton's method on temperature.

        Args:
            p_Pa: Pressure. [Pa]
            h_J_per_kg: Enthalpy. [J/kg]
            T_guess_K: Temperature to start from. [K]
        Raises: NoSolutionError if it does not converge.
        Source: (dh/dT) at constant pressure = cp.
        """
        return self._gas_where(p_Pa, T_guess_K, lambda state: (h_J_per_kg - state.h_J_per_kg) / state.cp_J_per_kgK)

    def _gas_where(self, p: float, T: float, step_of: Callable[[PhaseState], float]) -> PhaseState:
        for _ in range(40):
            state = self.gas(p, T)
            step = step_of(state)
            if abs(step) < 1e-10 * T:
                return state
            T += min(max(step, -60.0), 60.0)
        raise NoSolutionError(f"{self.mixture.designation}: no vapour state found at {p / 1e5:.5g} bar")

    def at_pressure(self, p_Pa: float, near: Equilibrium) -> Equilibrium:
        """Return the equilibrium of the quality of `near` at a pressure, by Newton's method on ln p(1/T).

        Args:
            p_Pa: Pressure. [Pa]
            near: A checked equilibrium on the same line.
        Raises: NoSolutionError if it does not converge; ModelFaultError where the line cannot be followed.
        """
        last, before, slope = near, None, -10.0 * near.T_K
        for _ in range(40):
            miss = math.log(p_Pa / last.p_Pa)
            if abs(miss) < 1e-11:
                return last
            T = 1.0 / (1.0 / last.T_K + miss / slope)
            old = last
            for new in self.march(last, before, T):
                before, last = last, new
            if last.T_K == old.T_K:
                return last
            slope = math.log(last.p_Pa / old.p_Pa) / (1.0 / last.T_K - 1.0 / old.T_K)
        raise NoSolutionError(f"{self.mixture.designation}: no saturation temperature at {p_Pa / 1e5:.6g} bar")


def _pure_saturation(pure: Any, T: float) -> tuple[float, float]:
    """Return vapour pressure [Pa] and liquid molar volume [m3/mol] of a component, roughly outside its range."""
    from CoolProp.CoolProp import QT_INPUTS, iDmolar

    T_critical = pure.T_critical()
    T_inside = min(max(T, pure.Tmin() + 0.01), 0.97 * T_critical)
    pure.update(QT_INPUTS, 0.0, T_inside)
    # Wilson's equation carries the pressure outside the component's own two-phase range.
    exponent = 5.373 * (1.0 + pure.acentric_factor()) * T_critical * (1.0 / T_inside - 1.0 / T)
    return pure.p() * math.exp(exponent), 1.0 / pure.saturated_liquid_keyed_output(iDmolar)


def _extrapolated(before: Equilibrium | None, last: Equilibrium, T: float) -> Equilibrium:
    """Guess the equilibrium at T from the two before: ln p and ln rho_vapour along 1/T, the rest along T."""
    if before is None:
        return last
    along = (T - last.T_K) / (last.T_K - before.T_K)
    inverse = along * before.T_K / T

    def geometric(new: float, old: float) -> float:
        return new * math.exp(inverse * math.log(new / old))

    x = np.clip(last.x + along * (last.x - before.x), 1e-9, 1.0)
    y = np.clip(last.y + along * (last.y - before.y), 1e-9, 1.0)
    rho_liquid = last.rho_liquid + along * (last.rho_liquid - before.rho_liquid)
    return Equilibrium(
        T,
        geometric(last.p_Pa, before.p_Pa),
        min(max(rho_liquid, 0.8 * last.rho_liquid), 1.2 * last.rho_liquid),
        geometric(last.rho_vapour, before.rho_vapour),
        x / x.sum(),
        y / y.sum(),
        0.0,
        0.0,
        0.0,
        last.molar_quality,
        0.0,
    )
