"""How sure the numbers are: the bands of the model by its grade, and which options lie inside them.

A refrigerant whose model misses its published boiling point by d kelvin has a pressure off by about 3.5 % times d, and
with it suction density and capacity. That is added in quadrature to the base band, since the two have nothing to do
with each other, and rounded up to the whole per cent or kelvin. The step from kelvin to bands is our own derivation;
each `per_K_source` in bands.toml says how it was found.
"""

from __future__ import annotations

import math
import tomllib
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from operator import attrgetter
from typing import Any

from retrofit.study.result import Entry

STEPS = {"relative": 0.01, "K": 1.0}
# What may be compared: the band it is held against, and where to read it on the plant as installed and otherwise.
# Power errs as capacity does, since both go with the suction density. A year's energy goes with the COP; so do its
# cost and the emissions of making it.
QUANTITIES: Mapping[str, tuple[str, str, str]] = {
    "capacity": ("capacity", "plant.full.cooling_W", "compressor.cooling_W"),
    "cop": ("cop", "plant.same_cooling.cop", "duty.cop"),
    "power": ("capacity", "plant.full.power_W", "compressor.power_W"),
    "T_discharge": ("T_discharge", "plant.full.T_discharge_K", "duty.T_discharge_K"),
    "pressure": ("pressure", "plant.full.p_cond_Pa", "duty.p_cond_Pa"),
    "energy": ("cop", "", ""),
    "cost": ("cop", "", ""),
    "emissions": ("cop", "", ""),
}


@dataclass(frozen=True)
class Band:
    """How far a number can be from what a plant does, to either side.

    Attributes:
        value: The band, in `unit`: "relative" or "K".
        unit: What it counts.
        source: Where it comes from.
        reason: Why it is as wide as it is.
        offset_K: By how much the boiling point of the model is counted off.
    """

    value: float
    unit: str
    source: str
    reason: str
    offset_K: float = 0.0


@cache
def _table() -> Mapping[str, Any]:
    text = files("retrofit.study").joinpath("bands.toml").read_text(encoding="utf-8")
    return tomllib.loads(text)


@cache
def _widened(offset_K: float, reason: str) -> Mapping[str, Band]:
    """Return the bands of a model that is off by some kelvin."""
    return {name: _band(row, offset_K, reason) for name, row in _table()["base"].items()}


def _band(row: Mapping[str, Any], offset_K: float, reason: str) -> Band:
    if offset_K == 0.0:
        return Band(row["value"], row["unit"], row["source"], row["reason"])
    step = STEPS[row["unit"]]
    steps = math.ceil(round(math.hypot(row["value"], row["per_K"] * offset_K) / step, 6))
    source = f"{row['source']}; widened for the model: {row['per_K_source']}"
    return Band(round(steps * step, 10), row["unit"], source, reason, offset_K)


def model_band(grade_word: str = "close") -> Mapping[str, Band]:
    """Return the bands of a grade by name: capacity, cop, T_discharge, pressure.

    Args:
        grade_word: A word of `Grade`: "close", "fair", "weak" or "not checked".
    Raises: KeyError for another word.
    """
    row = _table()["grade"][grade_word]
    return _widened(row["offset_K"], row["reason"])


def bands_of(entry: Entry) -> Mapping[str, Band]:
    """Return the bands of a refrigerant by name; the widest of any grade where it has none.

    Args:
        entry: The refrigerant.
    """
    return _widened(*max(_offsets(entry), key=lambda found: found[0]))


def _offsets(entry: Entry) -> Iterator[tuple[float, str]]:
    """Yield by how much a model has to be counted off, and why; the largest holds."""
    table, grade = _table(), entry.grade
    if grade is not None and grade.word == "not checked" and len(entry.refrigerant.composition) == 1:
        yield 0.0, ""  # by its reference equation: nothing of it is mixed, so nothing of that can be off
        return
    if grade is None:
        yield max(row["offset_K"] for row in table["grade"].values()), table["no_grade"]["reason"]
        return
    yield table["grade"][grade.word]["offset_K"], table["grade"][grade.word]["reason"]
    if grade.estimated_pairs:
        yield table["estimated_pairs"]["offset_K"], table["estimated_pairs"]["reason"]
    if grade.word == "weak":
        known = (grade.bubble_difference_K, grade.dew_difference_K)
        yield max((abs(off) for off in known if off is not None), default=0.0), table["own"]["reason"]


def band_of(entry: Entry, name: str) -> float:
    """Return one band of a refrigerant; the widest of any grade where it has none. [- or K]

    Args:
        entry: The refrigerant.
        name: "capacity", "cop", "T_discharge" or "pressure".
    """
    return bands_of(entry)[name].value


def pair_band(a: Entry, b: Entry, name: str) -> float:
    """Return the band of the difference between two refrigerants: the larger of theirs. [- or K]

    The base band was set on ratios between refrigerants, so it holds for a difference already and is counted once. Of
    what the models add, the larger prevails; two that err alike and apart could add up to 1.4 times as much.

    Args:
        a, b: The refrigerants.
        name: "capacity", "cop", "T_discharge" or "pressure".
    """
    return max(band_of(a, name), band_of(b, name))


def is_wider(entry: Entry) -> bool:
    """Say whether a refrigerant has wider bands than the base, because of its model."""
    return any(band_of(entry, name) > band.value for name, band in model_band().items())


def on_the_plant(entries: Sequence[Entry]) -> bool:
    """Say whether some refrigerants are compared on the plant as installed: where every one of them balances there.

    Args:
        entries: The refrigerants.
    """
    return all(entry.plant is not None for entry in entries)


def alike(
    a: Entry,
    b: Entry,
    quantity: str,
    values: Sequence[float] | None = None,
    uncertain: Sequence[float] | None = None,
) -> bool:
    """Say whether two refrigerants show no meaningful difference in a quantity. That is not transitive.

    They differ by no more than their band, a relative one of the mean of both.

    Args:
        a, b: The refrigerants.
        quantity: A name of `QUANTITIES`.
        values: Its two values, needed for "energy", "cost" and "emissions"; of the result if left out. [any]
        uncertain: The part of each value that the model reckons, such as the electricity in a cost; all of it if left
            out. What is known apart from the model, such as the price of a charge, has no band. [as values]
    Returns: Whether they are alike; not if one is not computed.
    """
    return bool(groups_alike((a, b), quantity, values, uncertain))


def groups_alike(
    entries: Sequence[Entry],
    quantity: str,
    values: Sequence[float] | None = None,
    uncertain: Sequence[float] | None = None,
) -> tuple[tuple[Entry, ...], ...]:
    """Return the groups of refrigerants that show no meaningful difference among themselves.

    In a group every two are alike, and no other could join it. So no chain of small steps makes a group, and a
    refrigerant can stand in several: with A like B and B like C, but A unlike C, the groups are A, B and B, C. Two that
    share no group differ by more than their band, and one in no group differs from all.

    Args:
        entries: The refrigerants.
        quantity: A name of `QUANTITIES`.
        values: A value for each, as for `alike`. [any]
        uncertain: The part of each that the model reckons, as for `alike`. [as values]
    Returns: The groups of two or more, each in the order given.
    Raises: ValueError if the quantity has to be given and is not.
    """
    name = QUANTITIES[quantity][0]
    found = _values(entries, quantity) if values is None else list(values)
    parts = found if uncertain is None else list(uncertain)
    known = [i for i, value in enumerate(found) if value is not None]

    def is_near(i: int, j: int) -> bool:
        band = pair_band(entries[i], entries[j], name)
        scale = 1.0 if name == "T_discharge" else 0.5 * (abs(parts[i]) + abs(parts[j]))  # type: ignore[arg-type]
        return bool(abs(found[i] - found[j]) <= band * scale)  # type: ignore[operator]

    near = {i: {j for j in known if j != i and is_near(i, j)} for i in known}
    groups = sorted(sorted(group) for group in _complete(set(), set(known), set(), near) if len(group) > 1)
    return tuple(tuple(entries[i] for i in group) for group in groups)


def _values(entries: Sequence[Entry], quantity: str) -> list[float | None]:
    _, installed, otherwise = QUANTITIES[quantity]
    if not installed:
        raise ValueError(f"no result holds {quantity}: give its values")
    solved = [entry for entry in entries if entry.duty is not None]
    read: Callable[[Any], float] = attrgetter(installed if on_the_plant(solved) else otherwise)
    return [None if entry.duty is None else float(read(entry)) for entry in entries]


def _complete(group: set[int], may: set[int], gone: set[int], near: Mapping[int, set[int]]) -> Iterator[set[int]]:
    """Yield the largest groups in which every two are near each other.

    Source: Bron and Kerbosch (1973), with the pivot of Tomita, Tanaka and Takahashi (2006).
    """
    if not may and not gone:
        yield group
        return
    # Every group without the pivot holds one that is not near it: only those need to be tried.
    pivot = max(sorted(may | gone), key=lambda i: len(may & near[i]))
    for i in sorted(may - near[pivot]):
        yield from _complete(group | {i}, may & near[i], gone & near[i], near)
        may, gone = may - {i}, gone | {i}
