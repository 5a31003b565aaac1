"""What compressor catalogues say of one machine with two refrigerants: the form, its constants, and the bands.

    python tests/bench/compressor_pairs.py [PAIRS.csv]

The file holds ratios only, no makers and no models: capacity and COP with refrigerant b over those with a, for the same
compressor at equal dew temperatures, return gas and subcooling. Source: EnergyPlus release 25.2, data set
RefrigerationCompressorCurves.idf, makers' catalogue polynomials; listings of one body with two refrigerants. Left out
of the file: listings that are a flat factor of another or a copy, two-stage ones, implausible ones.

What is held against what: the catalogues' ratio of volumetric and of isentropic efficiency, against constant
efficiencies (both 1) and against the three factors of `retrofit.equipment.refrigerant_change`. Every case (body, pair
of refrigerants, class) weighs the same, whatever its number of points. A residual is ln(catalogue / model). The
constants h and phi are fitted to all cases, and again to one half and shown on the other, so that nothing is judged by
what it was fitted to.
"""

from __future__ import annotations

import csv
import sys
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import least_squares

from retrofit.equipment.refrigerant_change import (
    FIXED_LOSS,
    HIGHEST_RATIO,
    SUCTION_HEATING,
    Compression,
    compression,
    heating_factor,
    loss_factor,
    piston_shape,
)
from retrofit.properties import fluid
from retrofit.study.bands import compressor_part, evidence_at
from retrofit.study.states import Evidence
from retrofit.units import ZERO_C_K

PAIRS = Path(__file__).parents[1] / "published" / "compressor_pairs.csv"
FloatArray = NDArray[np.float64]
Residuals = tuple[FloatArray, FloatArray]
BEFORE = (0.07, 0.06)  # bands of capacity and COP that constant efficiencies once had


@dataclass(frozen=True)
class Pairs:
    """Points of the pairs file up to the highest pressure ratio, shape (points,).

    Attributes:
        kind, group, step, body: Kind of machine, case, change of refrigerant and compressor, in words.
        old, new: Compression of both refrigerants.
        volumetric, isentropic: Ratio of both efficiencies, new over old.
        weight: 1 over the number of points of its case.
    """

    kind: NDArray[np.str_]
    group: NDArray[np.str_]
    step: NDArray[np.str_]
    body: NDArray[np.str_]
    old: Compression
    new: Compression
    volumetric: FloatArray
    isentropic: FloatArray
    weight: FloatArray

    def residuals(self, h: float, phi: float, curved: bool = True) -> Residuals:
        """Return ln(catalogue / model) of capacity and of COP, which go with the two efficiencies at equal states.

        Args:
            h: Suction heating. [-]
            phi: Share of fixed losses. [-]
            curved: Whether pistons have their curve over the pressure ratio.
        """
        heating = heating_factor(self.old, self.new, h)
        power = self.new.power_density_J_per_m3 / self.old.power_density_J_per_m3
        isentropic, volumetric = heating * loss_factor(power, phi), heating
        if curved:
            here, there = (piston_shape().at(state.pressure_ratio) for state in (self.old, self.new))
            is_piston = np.char.startswith(self.kind, "piston")
            isentropic = isentropic * np.where(is_piston, there[0] / here[0], 1.0)
            volumetric = volumetric * np.where(is_piston, there[1] / here[1], 1.0)
        return np.log(self.volumetric / volumetric), np.log(self.isentropic / isentropic)

    @property
    def change_K(self) -> FloatArray:
        """Return the change of the temperature after isentropic compression. [K]"""
        return self.new.T_isentropic_K - self.old.T_isentropic_K


def read_pairs(path: Path = PAIRS) -> Pairs:
    """Return the points of a pairs file, their states computed anew.

    Args:
        path: The file.
    """
    with path.open(encoding="utf-8", newline="") as file:
        rows = [row for row in csv.DictReader(file) if _highest(row) <= HIGHEST_RATIO]
    text = {name: np.array([row[name] for row in rows]) for name in rows[0]}
    number = {
        name: text[name].astype(float)
        for name in ("Te_degC", "Tc_degC", "return_gas_degC", "eta_is_a", "eta_is_b", "eta_v_ratio")
    }
    states = [
        _compression(text[f"refrigerant_{side}"], *(number[f"{name}_degC"] for name in ("Te", "Tc", "return_gas")))
        for side in "ab"
    ]
    step = np.array([f"{row['refrigerant_a']}->{row['refrigerant_b']}" for row in rows])
    group = np.array([f"{row['compressor']} {s} {row['class_a']}" for row, s in zip(rows, step, strict=True)])
    _, place, count = np.unique(group, return_inverse=True, return_counts=True)
    ratio = number["eta_is_b"] / number["eta_is_a"]
    return Pairs(
        text["kind"], group, step, text["compressor"], states[0], states[1], number["eta_v_ratio"], ratio,
        1.0 / count[place],
    )  # fmt: skip


def _highest(row: dict[str, str]) -> float:
    return max(float(row["pressure_ratio_a"]), float(row["pressure_ratio_b"]))


def _compression(names: NDArray[np.str_], Te_C: FloatArray, Tc_C: FloatArray, gas_C: FloatArray) -> Compression:
    found = {name: np.empty(names.size) for name in Compression.__dataclass_fields__}
    for name in np.unique(names):
        here = names == name
        own = fluid(str(name))
        pressures = own.p_dew(Te_C[here] + ZERO_C_K), own.p_dew(Tc_C[here] + ZERO_C_K)
        part = compression(own, *pressures, (gas_C - Te_C)[here])
        for quantity, values in found.items():
            values[here] = getattr(part, quantity)
    return Compression(**found)


def fit(pairs: Pairs, where: NDArray[np.bool_], curved: bool = True) -> tuple[float, float]:
    """Return h and phi with the least weighted squares of both residuals.

    Args:
        pairs: The points.
        where: Which of them count.
        curved: Whether pistons have their curve.
    """
    root = np.sqrt(pairs.weight[where])

    def residuals(constants: FloatArray) -> FloatArray:
        return np.concatenate([part[where] * root for part in pairs.residuals(*constants, curved)])

    h, phi = least_squares(residuals, [SUCTION_HEATING, FIXED_LOSS]).x
    return float(h), float(phi)


def share_inside(
    pairs: Pairs, found: Residuals, bands: tuple[FloatArray | float, ...], where: NDArray[np.bool_]
) -> FloatArray:
    """Return the weighted share of points whose catalogue ratio lies inside the bands: capacity and COP. [-]

    Args:
        pairs: The points.
        found: Their residuals.
        bands: Band of capacity and of COP, relative. [-]
        where: Which points count.
    """
    weight = pairs.weight[where]
    inside = [np.abs(np.expm1(r)) <= band for r, band in zip(found, bands, strict=True)]
    return np.array([np.average(one[where], weights=weight) for one in inside])


def half_width(pairs: Pairs, found: FloatArray, where: NDArray[np.bool_]) -> float:
    """Return the half width that holds 90 per cent of the weight. [-]

    Args:
        pairs: The points.
        found: A residual.
        where: Which points count.
    """
    size, weight = np.abs(np.expm1(found[where])), pairs.weight[where]
    order = np.argsort(size)
    return float(size[order][np.searchsorted(np.cumsum(weight[order]), 0.9 * weight.sum())])


def bands_after(pairs: Pairs) -> tuple[FloatArray, FloatArray]:
    """Return the bands of capacity and COP that the tool states, by the change of isentropic discharge temperature."""
    found = [evidence_at(float(change)) for change in pairs.change_K]
    capacity, cop = (np.array([compressor_part(name, each)[0] for each in found]) for name in ("capacity", "cop"))
    return capacity, cop


def parts(pairs: Pairs) -> Iterator[tuple[str, NDArray[np.bool_]]]:
    """Yield the classes that coverage is shown by."""
    everything = np.ones(pairs.weight.size, dtype=bool)
    yield "all", everything
    for name in ("piston", "scroll", "screw"):
        yield name, np.char.startswith(pairs.kind, name)
    for name in ("low", "medium", "high"):
        yield f"{name} temperature", np.char.endswith(pairs.group, f" {name}")
    change = np.abs(pairs.change_K)
    yield "discharge change < 10 K", change < 10.0
    yield "10 to 25 K", (change >= 10.0) & (change <= 25.0)
    yield "above 25 K", change > 25.0
    for step in np.unique(pairs.step):
        yield str(step), pairs.step == step


def main(path: Path = PAIRS) -> None:
    """Print fits, 90 % half widths and coverage, before and after."""
    pairs = read_pairs(path)
    everything = np.ones(pairs.weight.size, dtype=bool)
    print(f"{pairs.weight.size} points, {np.unique(pairs.group).size} cases, {np.unique(pairs.body).size} compressors")
    h, phi = fit(pairs, everything)
    print(f"fitted to all: h {h:.2f}, phi {phi:.3f}; in use: h {SUCTION_HEATING}, phi {FIXED_LOSS}")
    is_first = np.isin(pairs.body, np.unique(pairs.body)[::2])
    for name, where in (("one half of the compressors", is_first), ("the other half", ~is_first)):
        h, phi = fit(pairs, where)
        own = pairs.residuals(h, phi)
        widths = [half_width(pairs, part, ~where) for part in own]
        print(f"fitted to {name}: h {h:.2f}, phi {phi:.3f}; 90 % of the rest within {widths[0]:.1%} / {widths[1]:.1%}")
    for step in np.unique(pairs.step):
        h, phi = fit(pairs, pairs.step != step)
        print(f"without {step}: h {h:.2f}, phi {phi:.3f}")
    h, phi = fit(pairs, ~np.char.startswith(pairs.step, "R22"))
    print(f"without any R22: h {h:.2f}, phi {phi:.3f}")
    constant = np.log(pairs.volumetric), np.log(pairs.isentropic)
    factors = pairs.residuals(SUCTION_HEATING, FIXED_LOSS)
    wide = tuple(compressor_part(name, Evidence.CONSTANT)[0] for name in ("capacity", "cop"))
    columns: tuple[tuple[str, Callable[[NDArray[np.bool_]], FloatArray]], ...] = (
        ("const, 7/6", lambda where: share_inside(pairs, constant, BEFORE, where)),
        ("const, 90 %", lambda where: np.array([half_width(pairs, r, where) for r in constant])),
        ("const, wide", lambda where: share_inside(pairs, constant, wide, where)),
        ("factors, 90 %", lambda where: np.array([half_width(pairs, r, where) for r in factors])),
        ("factors, bands", lambda where: share_inside(pairs, factors, bands_after(pairs), where)),
    )
    print(f"\n{'capacity / COP, %':<26}{'cases':>6}" + "".join(f"{name:>16}" for name, _ in columns))
    for name, where in parts(pairs):
        cells = [f"{100 * a:.1f} / {100 * b:.1f}" for a, b in (column(where) for _, column in columns)]
        print(f"{name:<26}{np.unique(pairs.group[where]).size:>6}" + "".join(f"{cell:>16}" for cell in cells))


if __name__ == "__main__":
    main(*map(Path, sys.argv[1:]))
