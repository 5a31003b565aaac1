"""How sure the numbers are: the 90 % bands of ratios to the existing refrigerant, and which options lie inside them.

Two things make a band. What the compressor adds to a change of refrigerant is known by kind of evidence (`Evidence`).
And a refrigerant whose model misses its published boiling point by d kelvin has a pressure off by about 3.5 % times d,
and with it suction density and capacity: that is added in quadrature, since the two have nothing to do with each other,
and rounded up to the whole per cent or kelvin. The step from kelvin to bands is our own derivation; bands.toml says how
each figure was found. Heat exchangers and charge are in none of them.
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

from retrofit.case import Case
from retrofit.refrigerants import Refrigerant, find
from retrofit.study.efficiencies import has_curve
from retrofit.study.result import Comparison, Entry
from retrofit.study.states import Evidence

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
        evidence_reason: What it rests on without that.
    """

    value: float
    unit: str
    source: str
    reason: str
    offset_K: float = 0.0
    evidence_reason: str = ""


@cache
def _table() -> Mapping[str, Any]:
    text = files("retrofit.study").joinpath("bands.toml").read_text(encoding="utf-8")
    return tomllib.loads(text)


@cache
def _bands(evidence: Evidence, offset_K: float, why_offset: str) -> Mapping[str, Band]:
    """Return the bands of a change with some evidence, and of a model that is off by some kelvin."""
    return {name: _band(name, *compressor_part(name, evidence), offset_K, why_offset) for name in _table()["base"]}


def compressor_part(name: str, evidence: Evidence) -> tuple[float, str, str]:
    """Return what a band is before the refrigerant's own model widens it: value, source and reason. [- or K]

    Args:
        name: "capacity", "cop", "T_discharge" or "pressure".
        evidence: How well the compressor's model is tested; discharge temperature and pressure do not ask.
    """
    base, row = _table()["base"][name], _table()["evidence"][evidence]
    found = base if "value" in base else row
    return found["value"] if found is base else row[name], found["source"], found["reason"]


def _band(name: str, value: float, source: str, reason: str, offset_K: float, why_offset: str) -> Band:
    row = _table()["base"][name]
    if offset_K == 0.0:
        return Band(value, row["unit"], source, reason, evidence_reason=reason)
    step = STEPS[row["unit"]]
    steps = math.ceil(round(math.hypot(value, row["per_K"] * offset_K) / step, 6))
    source = f"{source}; widened for the model: {row['per_K_source']}"
    return Band(round(steps * step, 10), row["unit"], source, why_offset, offset_K, reason)


def percent_text(band: float) -> str:
    """Return a relative band in per cent with at most one decimal, such as "8.5%".

    Args:
        band: The band. [-]
    """
    return f"{100.0 * band:.1f}".removesuffix(".0") + "%"


def left_out() -> str:
    """Return in words what no band holds."""
    return str(_table()["left_out"]["reason"])


def evidence_of(case: Case, existing: Entry, entry: Entry) -> Evidence:
    """Return how well the model of the compressor is tested for a change of refrigerant.

    Args:
        case: The case, for the kind of compressor.
        existing: The existing refrigerant, computed.
        entry: The refrigerant to change to, computed.
    """
    if entry.refrigerant.designation == existing.refrigerant.designation:
        return Evidence.SAME
    tested = _table()["tested"]
    kinds = tested["kinds"] + (tested["kinds_with_curve"] if has_curve(case.compressor) else [])
    if case.compressor.kind not in kinds:
        return Evidence.CONSTANT
    if entry.duty is None or existing.duty is None:
        return Evidence.UNTESTED
    change_K = abs(entry.duty.T_discharge_isentropic_K - existing.duty.T_discharge_isentropic_K)
    if not all(_is_like_tested(item.refrigerant) for item in (existing, entry)):
        return Evidence.UNTESTED
    return evidence_at(change_K)


def evidence_at(change_K: float) -> Evidence:
    """Return the evidence for refrigerants like those tested, by the change of isentropic discharge temperature.

    Args:
        change_K: The change, either way. [K]
    """
    rows = _table()["evidence"]
    reached = (kind for kind in (Evidence.NEAR, Evidence.FAR) if abs(change_K) <= rows[kind]["up_to_K"])
    return next(reached, Evidence.UNTESTED)


def _is_like_tested(refrigerant: Refrigerant) -> bool:
    tested = _table()["tested"]
    parts = _shares(refrigerant)
    other = sum(share for name, share in parts.items() if find(name).substance_group not in tested["groups"])
    return bool(other <= tested["most_other"])


def _shares(refrigerant: Refrigerant) -> Mapping[str, float]:
    """Return the mass fractions of the components."""
    return dict(refrigerant.composition)


def model_band(grade_word: str = "close", evidence: Evidence = Evidence.NEAR) -> Mapping[str, Band]:
    """Return the bands of a grade and of some evidence by name: capacity, cop, T_discharge, pressure.

    Args:
        grade_word: A word of `Grade`: "close", "fair", "weak" or "not checked".
        evidence: How well the compressor's model is tested.
    Raises: KeyError for another word.
    """
    row = _table()["grade"][grade_word]
    return _bands(evidence, row["offset_K"], row["reason"])


def base_bands(comparison: Comparison) -> Mapping[str, Band]:
    """Return the bands that hold for a comparison unless a refrigerant has wider ones.

    Args:
        comparison: The result; the best evidence that there is for one of its candidates counts.
    """
    return model_band(evidence=best_evidence(comparison.candidates))


def best_evidence(candidates: Sequence[Entry]) -> Evidence:
    """Return the best evidence of any computed candidate; that of constant efficiencies if there is none.

    Args:
        candidates: The candidates.
    """
    found = {entry.evidence for entry in candidates if entry.duty is not None} - {Evidence.SAME}
    return next((kind for kind in Evidence if kind in found), Evidence.CONSTANT)


def bands_of(entry: Entry) -> Mapping[str, Band]:
    """Return the bands of a refrigerant by name; the widest of any grade where it has none.

    Args:
        entry: The refrigerant.
    """
    return _bands(entry.evidence, *_offset(entry))


def _offset(entry: Entry) -> tuple[float, str]:
    return max(_offsets(entry), key=lambda found: found[0])


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


def pair_bands(a: Entry, b: Entry) -> Mapping[str, Band]:
    """Return the bands of the difference between two refrigerants by name.

    Against the existing refrigerant that is the band of the other one's ratio. Two candidates have in common what
    `shared_errors` says. Of what their models add, the larger prevails; two that err alike and apart could add up to
    1.4 times as much.

    Args:
        a, b: The refrigerants.
    """
    offset = max(_offset(a), _offset(b), key=lambda found: found[0])
    wider = max(a, b, key=lambda entry: list(Evidence).index(entry.evidence))
    return {name: _pair_band(a, b, wider, name, offset) for name in _table()["base"]}


def _pair_band(a: Entry, b: Entry, wider: Entry, name: str, offset: tuple[float, str]) -> Band:
    value, source, reason = compressor_part(name, wider.evidence)
    if "value" not in _table()["base"][name]:
        one, other = (compressor_part(name, entry.evidence)[0] for entry in (a, b))
        value = math.sqrt(max(one**2 + other**2 - 2.0 * shared_errors(a, b) * one * other, 0.0))
    return _band(name, value, source, reason, *offset)


def pair_band(a: Entry, b: Entry, name: str) -> float:
    """Return one band of the difference between two refrigerants, as of `pair_bands`. [- or K]

    Args:
        a, b: The refrigerants.
        name: "capacity", "cop", "T_discharge" or "pressure".
    """
    return pair_bands(a, b)[name].value


def shared_errors(a: Entry, b: Entry) -> float:
    """Return how far the errors of two refrigerants' ratios to the existing one go together: a correlation. [-]

    Args:
        a, b: The refrigerants.
    """
    if a is b:
        return 1.0
    one, other = error_parts(a.refrigerant), error_parts(b.refrigerant)
    return sum(weight * other.get(name, 0.0) for name, weight in one.items())


def error_parts(refrigerant: Refrigerant) -> Mapping[str, float]:
    """Return what the error of a refrigerant is the sum of: independent errors of unit variance, with their weights.

    One is common to all on the machine, one belongs to each component, one is its own. The sum of the squares is 1, so
    the correlation of two refrigerants is the product of their parts summed up.

    Args:
        refrigerant: The refrigerant.
    Source: our own; the measure of likeness of two compositions is the coefficient of Bhattacharyya (1943).
    """
    shared = _table()["shared"]
    own = 1.0 - shared["common"] - shared["composition"]
    components = {
        f"of {name}": math.sqrt(shared["composition"] * share) for name, share in _shares(refrigerant).items()
    }
    return {"common": math.sqrt(shared["common"]), **components, refrigerant.designation: math.sqrt(own)}


def is_wider(entry: Entry, base: Mapping[str, Band] | None = None) -> bool:
    """Say whether a refrigerant has wider bands than others: of the base, if nothing else is given.

    Args:
        entry: The refrigerant.
        base: Bands to compare with.
    """
    return any(band_of(entry, name) > band.value for name, band in (base or model_band()).items())


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
