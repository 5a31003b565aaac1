"""Weights of the meeting and the order they give, by `retrofit.study.ranking`; gates stand beside it by name."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from retrofit.checks.answer import left_words
from retrofit.checks.outlook import ban_words
from retrofit.meeting.state import State
from retrofit.report.judging import spelled
from retrofit.study import Comparison
from retrofit.study.accounts import accounts
from retrofit.study.bands import pair_band
from retrofit.study.criteria import CRITERIA, criteria
from retrofit.study.ranking import (
    EQUAL_WEIGHT,
    LARGEST_WEIGHT,
    MEANING,
    SCALE,
    Order,
    Scores,
    Stability,
    flip,
    order,
    rank_stability,
    score,
    share_text,
)

HEAVIEST = int(LARGEST_WEIGHT)
USUAL = int(EQUAL_WEIGHT)


@dataclass(frozen=True)
class Weight:
    """One criterion: its name, its weight, by what it is measured, and whether any option is known by it."""

    name: str
    weight: int
    measure: str
    counts: bool


@dataclass(frozen=True)
class Ranked:
    """One option in the order, as texts.

    Attributes:
        place, name, total: Its place, its name, and its sum.
        share: The sum as a part of the largest there can be. [%]
        scores: Its score by each criterion that counts, and whether that is not known.
        firsts: How often it comes first, and how often alone: drawn around the weights, and over all weightings.
    """

    place: str
    name: str
    total: str
    share: int
    scores: tuple[tuple[str, bool], ...]
    firsts: tuple[tuple[str, str], ...]


@dataclass(frozen=True)
class Weighing:
    """Weights, and the order that follows from them.

    Attributes:
        weights: Every criterion.
        columns: The criteria that count.
        ranked: Options in order.
        gated: Options that are not ranked, with the gate or the reason.
        remarks: How rank stability is meant, what would turn the order, ties, and what counts as the worst.
        scale: How scores are made.
    """

    weights: tuple[Weight, ...]
    columns: tuple[str, ...]
    ranked: tuple[Ranked, ...]
    gated: tuple[tuple[str, str], ...]
    remarks: tuple[str, ...]
    scale: str


def weighing(view: Comparison, state: State) -> Weighing:
    """Return the weights of the meeting and the order of what is in sight.

    Args:
        view: What is in sight.
        state: The state.
    """
    weights = {name: float(dict(state.weights).get(name, USUAL)) for name in CRITERIA}
    uses = {name: year.use for name, year in view.life.years.items()} if view.life else {}
    measured = criteria(view, accounts(view, uses), uses, index=1)
    scores = score(view, measured, lambda a, b: pair_band(a, b, "cop"))
    found = order(scores, weights)
    used = [weights[name] for name in scores.criteria]
    stabilities = [
        rank_stability(scores.scores, around, doubts=scores.doubts) for around in (used, None) if scores.names
    ]
    names = {entry.refrigerant.designation: entry.refrigerant.display_name for entry in view.entries}
    return Weighing(
        weights=tuple(
            Weight(item.name, int(weights[item.name]), item.measure, item.name in scores.criteria) for item in measured
        ),
        columns=scores.criteria,
        ranked=_ranked(scores, found, names, stabilities),
        gated=tuple((names[name], spelled(why)) for name, why in scores.not_ranked.items()),
        remarks=tuple(
            spelled(text) for text in (*_first_words(view, found), *_remarks(scores, found, weights, stabilities))
        ),
        scale=SCALE,
    )


def _ranked(scores: Scores, found: Order, names: Mapping[str, str], stabilities: list[Stability]) -> tuple[Ranked, ...]:
    def row(place: int, name: str, total: float) -> Ranked:
        at = scores.names.index(name)
        cells = zip(scores.scores[at].tolist(), scores.is_unknown[at].tolist(), strict=True)
        texts = tuple((f"{value:.2f}", is_unknown) for value, is_unknown in cells)
        shared = "=" if found.places.count(place) > 1 else ""
        firsts = tuple((share_text(item.first[at]), share_text(item.alone[at])) for item in stabilities)
        return Ranked(f"{place}{shared}", names[name], f"{total:.2f}", round(100 * total), texts, firsts)

    return tuple(row(*item) for item in zip(found.places, found.names, found.totals, strict=True))


def _first_words(view: Comparison, found: Order) -> tuple[str, ...]:
    """Return what has to be said of the options that come first, and what is left where nothing converts."""
    first = [name for name, place in zip(found.names, found.places, strict=True) if place == 1]
    return (*ban_words(view, first), *left_words(view))


def _remarks(scores: Scores, found: Order, weights: Mapping[str, float], stabilities: list[Stability]) -> list[str]:
    if not scores.names:
        return []
    drawn = " and ".join(item.drawn for item in stabilities)
    remarks = [
        f"Comes first: in how many of {stabilities[0].sets} weight sets drawn {drawn}, with no other better by more "
        "than the band; in brackets how often alone, better than every other by more than the band."
    ]
    turned = flip(scores, {name: weights[name] for name in scores.criteria})
    if turned:
        remarks.append(turned.words)
    if found.ties:
        pairs = "; ".join(f"{first} and {second}" for first, second in found.ties[:6])
        more = f"; and {len(found.ties) - 6} more pairs" if len(found.ties) > 6 else ""
        remarks.append(f"Between these there is {MEANING}: {pairs}{more}.")
    unknown = scores.unknown
    if unknown:
        parts = (f"{name}: {', '.join(missing)}" for name, missing in unknown.items())
        remarks.append(f"Counted as the worst, because not known: {'; '.join(parts)}.")
    if scores.left_out:
        remarks.append(f"Not weighed, because no option is known by it: {', '.join(scores.left_out)}.")
    return remarks
