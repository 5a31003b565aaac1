"""Sweep the saturation lines of every blend against a continuation of this script's own.

Run from the top of the repository:

    python tests/bench/saturation_sweep.py [--points 600] [--only R454B,R449A]

Each blend is asked, through the public interface, for dew and bubble states at temperatures from -60 degC (or the
lowest of its model, if that is higher) to 6 K below its critical temperature. The reference shares nothing with the
project but composition and estimated pairs: it starts from Wilson's equation at another temperature, marches in
0.9 K steps with the last solution as the guess, and solves every asked temperature from its nearest step. A value is
wrong if pressure, density or enthalpy (against the latent heat) differ by more than 1e-5; missing if either side has
none. Prints a table; ends with 1 if anything is wrong or missing.
"""

from __future__ import annotations

import argparse
import math
import sys
import time
from dataclasses import dataclass
from pathlib import Path

import CoolProp.CoolProp as CoolProp
import numpy as np

TOP = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(TOP))

from retrofit.errors import NoModelError  # noqa: E402 - runs without an installed package
from retrofit.properties import fluid  # noqa: E402
from retrofit.properties.components import mixture_of, provide_pairs  # noqa: E402
from retrofit.refrigerants import designations, find  # noqa: E402

LOWEST_K = 213.15
BELOW_CRITICAL_K = 6.0
STEP_K = 0.9
STARTS_K = (233.0, 221.0, 247.0, 205.0, 265.0, 190.0, 285.0, 170.0)
ALLOWED = 1e-5


@dataclass(frozen=True)
class Point:
    """One solution of the reference: what it answers, and what it hands to the next."""

    T: float
    p: float
    h: float
    rho: float
    rho_liquid: float
    rho_vapour: float
    x: list[float]
    y: list[float]


class Reference:
    """Saturation lines of a blend, each followed from a guess of Wilson's equation."""

    def __init__(self, name: str) -> None:
        mixture = mixture_of(name)
        provide_pairs(mixture)  # without it the library refuses the blends of estimated pairs
        self.state = CoolProp.AbstractState("HEOS", "&".join(mixture.library_names))
        self.state.set_mass_fractions(list(mixture.mass_fractions))
        self.pure = [CoolProp.AbstractState("HEOS", part) for part in mixture.library_names]
        self.z = np.array(self.state.get_mole_fractions())

    def solve(self, quality: float, T: float, near: Point | None) -> Point:
        """Solve a bubble or dew point from a point near it; with none, by the library's own start."""
        state = self.state
        if near is None:
            state.update(CoolProp.QT_INPUTS, quality, T)
        else:
            guess = CoolProp.PyGuessesStructure()
            guess.T, guess.p = T, near.p
            guess.rhomolar_liq, guess.rhomolar_vap = near.rho_liquid, near.rho_vapour
            guess.x, guess.y = near.x, near.y
            state.update_with_guesses(CoolProp.QT_INPUTS, quality, T, guess)
        liquid, vapour = state.saturated_liquid_keyed_output, state.saturated_vapor_keyed_output
        found = Point(
            T,
            state.p(),
            state.hmass(),
            state.rhomass(),
            liquid(CoolProp.iDmolar),
            vapour(CoolProp.iDmolar),
            list(state.mole_fractions_liquid()),
            list(state.mole_fractions_vapor()),
        )
        if not (math.isfinite(found.h) and found.rho_liquid > 1.02 * found.rho_vapour > 0.0):
            raise ValueError("trivial solution")
        return found

    def wilson(self, quality: float, T: float) -> Point:
        """Guess a bubble or dew point from critical constants and acentric factors alone."""
        p_pure = np.array(
            [
                pure.p_critical() * math.exp(5.373 * (1.0 + pure.acentric_factor()) * (1.0 - pure.T_critical() / T))
                for pure in self.pure
            ]
        )
        if quality == 0.0:
            p = float(self.z @ p_pure)
            x, y = self.z, self.z * p_pure / p
        else:
            p = 1.0 / float(self.z @ (1.0 / p_pure))
            x, y = self.z * p / p_pure, self.z
        volume = float(x @ np.array([1.0 / (2.9 * pure.rhomolar_critical()) for pure in self.pure]))
        return Point(T, p, 0.0, 0.0, 1.0 / volume, p / (8.314462618 * T), list(x / x.sum()), list(y / y.sum()))

    def start(self, quality: float) -> Point:
        """Return a start that lies near Wilson's pressure and on a smooth line with its neighbours."""
        for T in STARTS_K:
            wilson = self.wilson(quality, T)
            for guess in (wilson, None):
                try:
                    first = self.solve(quality, T, guess)
                    around = [self.solve(quality, T + step, first) for step in (-0.5, 0.5)]
                except ValueError:
                    continue
                rise = math.log(around[1].p / around[0].p) * T * T
                bend = math.log(around[1].p * around[0].p / first.p**2)
                if 1000.0 < rise < 6000.0 and abs(bend) < 1e-3 and abs(math.log(first.p / wilson.p)) < 0.7:
                    return first
        raise ValueError("no start found")

    def line(self, quality: float, temperatures: np.ndarray) -> list[Point | None]:
        """Return the points at the temperatures, None where the march gives out."""
        start = self.start(quality)
        steps = [start]
        for target, sign in ((temperatures[0], -1.0), (temperatures[-1], 1.0)):
            last = start
            while sign * (target - last.T) > 0.0:
                nearest = self._next(quality, last, sign)
                if nearest is None:
                    break
                steps.append(last := nearest)
        steps.sort(key=lambda point: point.T)
        at = np.array([point.T for point in steps])
        return [self._at(quality, T, steps[int(np.argmin(np.abs(at - T)))]) for T in temperatures]

    def _next(self, quality: float, last: Point, sign: float) -> Point | None:
        for step in (STEP_K, 0.3, 0.1, 0.03):
            try:
                new = self.solve(quality, last.T + sign * step, last)
            except ValueError:
                continue
            if sign * (new.p - last.p) > 0.0 and abs(math.log(new.p / last.p)) < 0.1 * step / STEP_K + 0.02:
                return new
        return None

    def _at(self, quality: float, T: float, near: Point) -> Point | None:
        try:
            found = self.solve(quality, T, near)
        except ValueError:
            return None
        return found if abs(math.log(found.p / near.p)) < 0.1 else None


def sweep(name: str, count: int) -> dict[str, float]:
    """Return how many values of a blend are wrong or missing, and the largest differences."""
    f = fluid(name).as_lenient()
    T = np.linspace(max(LOWEST_K, f.T_range_K[0]), f.T_critical_K - BELOW_CRITICAL_K, count)
    reference = Reference(name)
    p = {0.0: f.p_bubble(T), 1.0: f.p_dew(T)}
    states = {0.0: f.bubble(p[0.0]), 1.0: f.dew(p[1.0])}
    latent = states[1.0].h_J_per_kg - states[0.0].h_J_per_kg
    result = {"asked": 2 * count, "wrong": 0, "missing": 0, "no reference": 0, "p": 0.0, "h": 0.0, "rho": 0.0}
    for quality, state in states.items():
        for i, point in enumerate(reference.line(quality, T)):
            if not np.isfinite(p[quality][i] + state.h_J_per_kg[i] + state.density_kg_per_m3[i]):
                result["missing"] += 1
            elif point is None:
                result["no reference"] += 1
            else:
                differences = {
                    "p": abs(p[quality][i] / point.p - 1.0),
                    "h": abs(state.h_J_per_kg[i] - point.h) / latent[i],
                    "rho": abs(state.density_kg_per_m3[i] / point.rho - 1.0),
                }
                result["wrong"] += max(differences.values()) > ALLOWED
                for key, value in differences.items():
                    result[key] = max(result[key], value)
    return result


def blends(only: str) -> list[str]:
    chosen = [name for name in designations() if find(name).kind == "blend"]
    return [name for name in chosen if not only or name in only.split(",")]


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("--points", type=int, default=600)
    parser.add_argument("--only", default="")
    options = parser.parse_args()
    totals = dict.fromkeys(("asked", "wrong", "missing", "no reference"), 0.0)
    print(
        f"{'blend':8} {'asked':>6} {'wrong':>6} {'missing':>8} {'no ref.':>8} {'p':>9} {'h':>9} {'density':>9} {'s':>6}"
    )
    count = 0
    for name in blends(options.only):
        begun = time.perf_counter()
        try:
            row = sweep(name, options.points)
        except NoModelError as error:
            print(f"{name:8} no model: {error}")
            continue
        count += 1
        totals = {key: totals[key] + row[key] for key in totals}
        print(
            f"{name:8} {row['asked']:6} {row['wrong']:6} {row['missing']:8} {row['no reference']:8} "
            f"{row['p']:9.1e} {row['h']:9.1e} {row['rho']:9.1e} {time.perf_counter() - begun:6.1f}",
            flush=True,
        )
    print(f"{count} blends: " + ", ".join(f"{key} {value:.0f}" for key, value in totals.items()))
    return int(totals["wrong"] + totals["missing"] + totals["no reference"] > 0 or count == 0)


if __name__ == "__main__":
    sys.exit(main())
