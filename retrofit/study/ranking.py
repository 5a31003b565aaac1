"""Options in order under weights, ties where the model cannot tell, and how stable the first place is.

A weight never buys off a gate: an option with a stop is not ranked, it is named with its gate.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.study.criteria import Criterion, gate
from retrofit.study.result import Comparison, Entry
from retrofit.study.spread import FloatArray
from retrofit.units import listed

BoolArray = NDArray[np.bool_]
IntArray = NDArray[np.int64]
PairBand = Callable[[Entry, Entry], float]

LARGEST_WEIGHT = 10.0
EQUAL_WEIGHT = 5.0
SMALLEST_STEP = 0.1
ROUNDING = 1e-9
SETS, SEED = 2000, 1
SCALE = (
    "each criterion runs from 1 for the best of the ranked options to 0 for the worst, in proportion between; an "
    "option of which it is not known counts as the worst and is marked"
)
MEANING = "no meaningful difference: closer than the band of the model"


@dataclass(frozen=True)
class Scores:
    """Ranked options and criteria as numbers.

    Attributes:
        names: Options that are ranked, m of them, in the order of the case.
        criteria: Names of the criteria that count, c of them.
        measures: What each was measured by.
        scores: 0 to 1, the higher the better, shape (m, c).
        is_unknown: Where a score is the worst because the number is not known, shape (m, c).
        doubts: By how much two options have to differ in a score for it to mean something, shape (m, m, c).
        not_ranked: Options that are not ranked, by designation, with the gate or the reason.
        left_out: Criteria that no option is known by.
    """

    names: tuple[str, ...]
    criteria: tuple[str, ...]
    measures: tuple[str, ...]
    scores: FloatArray
    is_unknown: BoolArray
    doubts: FloatArray
    not_ranked: Mapping[str, str]
    left_out: tuple[str, ...]

    @property
    def unknown(self) -> Mapping[str, tuple[str, ...]]:
        """Criteria that count as the worst because they are not known, by option."""
        found = {
            name: tuple(np.array(self.criteria)[row].tolist())
            for name, row in zip(self.names, self.is_unknown, strict=True)
        }
        return {name: criteria for name, criteria in found.items() if criteria}


def score(comparison: Comparison, criteria: Sequence[Criterion], band: PairBand) -> Scores:
    """Return the scores of every option that no gate stops.

    Args:
        comparison: A result that went through the checks.
        criteria: Its criteria, as `retrofit.study.criteria` measures them.
        band: Band of the difference between two refrigerants in energy, a share of the mean of both. [-]
    Returns: The scores; SCALE says how they are made.
    """
    not_ranked = {entry.refrigerant.designation: why for entry in comparison.entries if (why := gate(entry))}
    designations = (entry.refrigerant.designation for entry in comparison.entries)
    names = tuple(name for name in designations if name not in not_ranked)
    raw = np.array([[_number(item.values[name]) for item in criteria] for name in names]).reshape(-1, len(criteria))
    counts = np.isfinite(raw).any(axis=0)
    used = [item for item, does_count in zip(criteria, counts, strict=True) if does_count]
    entries = {entry.refrigerant.designation: entry for entry in comparison.entries}
    widths = [[0.0 if a == b else band(entries[a], entries[b]) for b in names] for a in names]
    modelled = np.array([[item.modelled[name] for item in used] for name in names]).reshape(len(names), len(used))
    doubt = 0.5 * np.array(widths).reshape(len(names), len(names), 1) * (modelled[:, None, :] + modelled[None, :, :])
    values, doubts = _scaled(raw[:, counts], doubt)
    return Scores(
        names=names,
        criteria=tuple(item.name for item in used),
        measures=tuple(item.measure for item in used),
        scores=values,
        is_unknown=~np.isfinite(raw[:, counts]),
        doubts=doubts,
        not_ranked=not_ranked,
        left_out=tuple(item.name for item, does_count in zip(criteria, counts, strict=True) if not does_count),
    )


def _number(value: float | None) -> float:
    return np.nan if value is None else value


def _scaled(raw: FloatArray, doubts: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return scores from the best, 1, to the worst, 0, and doubts on that scale."""
    if raw.size == 0:
        return np.zeros(raw.shape), np.zeros((raw.shape[0], *raw.shape))
    best, worst = np.nanmin(raw, axis=0), np.nanmax(raw, axis=0)
    # Differences that mean nothing are not stretched to the whole scale.
    span = np.maximum(worst - best, doubts.max(axis=(0, 1)))
    span = np.where(span > 0.0, span, 1.0)
    scores = 1.0 - (raw - best) / span
    return np.where(np.isfinite(scores), scores, 0.0), doubts / span


@dataclass(frozen=True)
class Order:
    """Options in order under one set of weights.

    Attributes:
        weights: As used, from 0 to 10, by criterion.
        names: Options, the best first.
        totals: Their weighted sums, 0 to 1.
        places: Place of each: 1 plus the number of options that are better by more than the band.
        ties: Pairs between which there is no meaningful difference, the better first.
    """

    weights: Mapping[str, float]
    names: tuple[str, ...]
    totals: tuple[float, ...]
    places: tuple[int, ...]
    ties: tuple[tuple[str, str], ...]


def order(scores: Scores, weights: Mapping[str, float] | None = None) -> Order:
    """Return the options in order under weights.

    Args:
        scores: The scores.
        weights: Weight of each criterion, 0 to 10, by name; 5 for one left out. [-]
    Returns: The order; all equal places where every weight is 0.
    Raises: ValueError for a weight outside 0 to 10, or for a criterion that there is not.
    """
    used = _weights(scores, weights)
    totals, margins = _weighted(scores.scores, scores.doubts, used[None, :])
    beats = _beats(totals, margins)[0]
    places = 1 + beats.sum(axis=0)
    ranked = sorted(range(len(scores.names)), key=lambda i: (places[i], -totals[0, i]))
    tied = [(i, j) for at, i in enumerate(ranked) for j in ranked[at + 1 :] if not (beats[i, j] or beats[j, i])]
    return Order(
        weights=dict(zip(scores.criteria, used.tolist(), strict=True)),
        names=tuple(scores.names[i] for i in ranked),
        totals=tuple(float(totals[0, i]) for i in ranked),
        places=tuple(int(places[i]) for i in ranked),
        ties=tuple((scores.names[i], scores.names[j]) for i, j in tied),
    )


def _weights(scores: Scores, weights: Mapping[str, float] | None) -> FloatArray:
    given = dict(weights or {})
    known = (*scores.criteria, *scores.left_out)
    for name, weight in given.items():
        if name not in known:
            raise ValueError(f"there is no criterion {name}; the criteria are {listed(known, 'and')}")
        if not 0.0 <= weight <= LARGEST_WEIGHT:
            raise ValueError(f"weight {weight:g} of {name} is outside 0 to {LARGEST_WEIGHT:g}; give one within")
    return np.array([given.get(name, EQUAL_WEIGHT) for name in scores.criteria])


def _weighted(scores: FloatArray, doubts: FloatArray, weights: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return totals, shape (n, m), and what two have to differ by, (n, m, m), for n sets of weights of any size."""
    sums = weights.sum(axis=1, keepdims=True)
    shares = weights / np.where(sums > 0.0, sums, 1.0)
    return shares @ scores.T, np.einsum("nc,ijc->nij", shares, doubts)


def _beats(totals: FloatArray, margins: FloatArray) -> BoolArray:
    """Return whether option i is better than j by more than the band, shape (n, m, m)."""
    beats: BoolArray = totals[:, :, None] - totals[:, None, :] > margins + ROUNDING
    return beats


@dataclass(frozen=True)
class Stability:
    """How often each option comes first over many sets of weights, as shares of the sets; shape (m,).

    Attributes:
        first: No other option is better by more than the band; shared first places count for each.
        alone: It is better than every other by more than the band.
        sets: Number of sets.
        drawn: How they were drawn, in words.
    """

    first: FloatArray
    alone: FloatArray
    sets: int
    drawn: str


def rank_stability(
    scores: ArrayLike,
    weights: ArrayLike | None = None,
    n: int = SETS,
    seed: int = SEED,
    doubts: ArrayLike | None = None,
) -> Stability:
    """Return how often each option comes first over weights drawn at random.

    Args:
        scores: Scores, shape (m, c). [-]
        weights: Weights to draw around, shape (c,); None, or all 0, to draw all weightings alike. [-]
        n: Number of sets. [-]
        seed: Seed; the same one gives the same sets. [-]
        doubts: By how much two options have to differ for it to mean something, shape (m, m, c); 0 if left out. [-]
    Source: Dirichlet distribution: flat over all weightings, or around the weights with 2 c as its concentration,
        which lets each weight wander by about half of itself.
    """
    values = np.asarray(scores, dtype=float)
    m, c = values.shape
    blur = np.zeros((m, m, c)) if doubts is None else np.asarray(doubts, dtype=float)
    centre = np.zeros(c) if weights is None else np.asarray(weights, dtype=float)
    is_flat = not centre.any()
    # Gamma numbers over their sum are Dirichlet; unlike the ready function they allow a weight of 0.
    shape = np.ones(c) if is_flat else 2.0 * c * centre / centre.sum()
    drawn = np.random.default_rng(seed).standard_gamma(shape, size=(n, c))
    totals, margins = _weighted(values, blur, drawn)
    beats = _beats(totals, margins)
    others = ~np.eye(m, dtype=bool)
    return Stability(
        first=(~beats.any(axis=1)).mean(axis=0),
        alone=(beats | ~others).all(axis=2).mean(axis=0),
        sets=n,
        drawn="over all weightings alike" if is_flat else "around the weights of the meeting",
    )


def stability_words(scores: Scores, found: Stability) -> str:
    """Return in one sentence how often the options come first.

    Args:
        scores: The scores.
        found: How often each comes first.
    """
    if not scores.names:
        return "No option is ranked."
    ranked = sorted(range(len(scores.names)), key=lambda i: -found.first[i])
    parts = [
        f"{scores.names[i]} comes first in {share_text(found.first[i])} of them ({share_text(found.alone[i])} alone)"
        for i in ranked
        if found.first[i] > 0.0
    ]
    return f"Of {found.sets} weight sets drawn {found.drawn}: {'; '.join(parts)}."


def share_text(share: float) -> str:
    """Return a share as whole percent, 0 % and 100 % for none and all alone.

    Args:
        share: The share. [-]
    """
    whole = round(100.0 * share)
    if whole == 0 and share > 0.0:
        return "less than 1 %"
    return "more than 99 %" if whole == 100 and share < 1.0 else f"{whole} %"


@dataclass(frozen=True)
class Flip:
    """The smallest change of one weight that puts another option before the first by more than the band."""

    criterion: str
    weight_now: float
    weight_then: float
    side: str  # "above" or "below" that weight
    first: str
    then: str

    @property
    def words(self) -> str:
        """The change in one sentence."""
        return (
            f"{self.then} comes before {self.first} once the weight of {self.criterion} is {self.side} "
            f"{self.weight_then:.1f} (now {self.weight_now:g})."
        )


def flip(scores: Scores, weights: Mapping[str, float] | None = None) -> Flip | None:
    """Return the smallest change of one weight that changes who comes first; None if none between 0 and 10 does.

    Args:
        scores: The scores.
        weights: Weight of each criterion, 0 to 10, by name; 5 for one left out. [-]
    Returns: The change: beyond it the other option is better than today's first by more than the band.
    Raises: ValueError for a weight outside 0 to 10, or for a criterion that there is not.
    Source: the weighted difference of two options is linear in each weight, and so is the band.
    """
    used = _weights(scores, weights)
    if len(scores.names) < 2 or not used.any():
        return None
    leader = int(np.argmax(scores.scores @ used))
    ahead = scores.scores[leader] - scores.scores + scores.doubts[leader]
    rest = (ahead @ used)[:, None] - ahead * used
    with np.errstate(divide="ignore", invalid="ignore"):
        turning = -rest / ahead
    # Beyond its turning point the rival has to be ahead, and there must be a weight beyond it that can be set.
    can_fall = (ahead > 0.0) & (turning > SMALLEST_STEP)
    can_rise = (ahead < 0.0) & (turning < LARGEST_WEIGHT - SMALLEST_STEP)
    moves = np.where(can_fall | can_rise, np.abs(turning - used), np.inf)
    moves[leader] = np.inf
    rival, criterion = np.unravel_index(int(np.argmin(moves)), moves.shape)
    if not np.isfinite(moves[rival, criterion]):
        return None
    now, then = float(used[criterion]), float(turning[rival, criterion])
    side = "below" if ahead[rival, criterion] > 0.0 else "above"
    return Flip(scores.criteria[criterion], now, then, side, scores.names[leader], scores.names[rival])
