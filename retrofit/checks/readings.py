"""Whether the readings agree with the model of today's plant, and its duty with what it can give: states, no words."""

from __future__ import annotations

import tomllib
from collections.abc import Sequence
from dataclasses import dataclass
from enum import StrEnum
from functools import cache
from importlib.resources import files

from retrofit.checks.thresholds import Threshold, thresholds_for
from retrofit.study import Comparison
from retrofit.study.agreement import Beside, Compared, WhyNot


class Outcome(StrEnum):
    """What holding a reading against the model gave."""

    AGREES = "agrees"
    DIFFERS = "differs"
    NOT_COMPARABLE = "not comparable"
    NOT_READ = "not read"


class Side(StrEnum):
    """On which side of the model a reading lies."""

    ABOVE = "above"
    BELOW = "below"


@dataclass(frozen=True)
class Cause:
    """What may make a reading differ from the model.

    Attributes:
        code: Short name, the same everywhere.
        of: Quantities that it moves, as `Compared` names them.
        side: On which side of the model it puts the reading: "above", "below" or "either".
        text: What it is, for a sentence.
        todo: What to do about it.
        unless: Keys of the case; one that is given rules the cause out.
        basis, source: How it is known, and where it comes from.
    """

    code: str
    of: tuple[Compared, ...]
    side: str
    text: str
    todo: str
    basis: str
    source: str
    unless: tuple[str, ...] = ()


@dataclass(frozen=True)
class Held:
    """One quantity held against the model.

    Attributes:
        beside: The reading and the model.
        outcome: What that gave.
        side: On which side the reading lies; None unless they differ.
        limit: The limit, a share of the model or K.
        source: Where the limit comes from.
        causes: What likely makes the difference, the likeliest first; empty unless they differ.
    """

    beside: Beside
    outcome: Outcome
    side: Side | None
    limit: float
    source: str
    causes: tuple[Cause, ...]


class Duty(StrEnum):
    """How the duty of the case lies to what today's plant gives."""

    WITHIN = "within what the plant can give"
    ABOVE = "more than the plant gives"
    BELOW = "less than the plant gives"
    NO_SWEPT_VOLUME = "swept volume not given"
    NOT_COMPUTED = "today's plant is not computed"


@dataclass(frozen=True)
class DutyHeld:
    """The duty of the case held against what today's plant gives.

    Attributes:
        state: How it lies.
        duty_W, given_W: Duty, and cooling of today's plant at full at the temperatures of the case; None if not known.
        share: The one over the other.
        limits: Lowest and highest share that is not named.
    """

    state: Duty
    duty_W: float
    given_W: float | None
    share: float | None
    limits: tuple[float, float]

    @property
    def is_named(self) -> bool:
        """Return whether it belongs beside the answer."""
        return self.state in (Duty.ABOVE, Duty.BELOW)


@cache
def causes() -> tuple[Cause, ...]:
    """Return everything that may make a reading differ from the model, the likeliest first."""
    text = files("retrofit.checks").joinpath("reading_causes.toml").read_text(encoding="utf-8")
    return tuple(
        Cause(
            code=code,
            of=tuple(Compared(name) for name in entry.pop("of")),
            unless=tuple(entry.pop("unless", ())),
            **entry,
        )
        for code, entry in tomllib.loads(text).items()
    )


def readings_held(comparison: Comparison) -> tuple[Held, ...]:
    """Return every quantity that is read and modelled, with what holding them together gave.

    Args:
        comparison: A result.
    Returns: One for each quantity; empty if the case has no readings.
    Raises: CaseFileError if the case sets a threshold that there is not.
    """
    limits = thresholds_for(comparison.case)
    return tuple(_held(comparison, beside, limits[_limit_name(beside)]) for beside in comparison.beside)


def differing(held: Sequence[Held]) -> tuple[Held, ...]:
    """Return those that differ from the model.

    Args:
        held: Quantities held against the model.
    """
    return tuple(item for item in held if item.outcome == Outcome.DIFFERS)


def duty_held(comparison: Comparison) -> DutyHeld:
    """Return how the duty of the case lies to what today's plant gives.

    Args:
        comparison: A result.
    """
    limits = thresholds_for(comparison.case)
    ends = _note(limits["duty_small"]), _note(limits["duty_large"])
    duty, today = comparison.case.duty.cooling_W, comparison.existing.compressor
    if today is None:
        return DutyHeld(Duty.NOT_COMPUTED, duty, None, None, ends)
    if comparison.swept_volume_from != "case":
        return DutyHeld(Duty.NO_SWEPT_VOLUME, duty, None, None, ends)
    share = duty / today.cooling_W
    state = Duty.BELOW if share < ends[0] else Duty.ABOVE if share > ends[1] else Duty.WITHIN
    return DutyHeld(state, duty, today.cooling_W, share, ends)


def _limit_name(beside: Beside) -> str:
    return "reading_temperature" if beside.kind == "temperature" else "reading_share"


def _note(limit: Threshold) -> float:
    assert limit.note is not None
    return limit.note


def _held(comparison: Comparison, beside: Beside, limit: Threshold) -> Held:
    difference, most = beside.difference, _note(limit)
    if difference is None:
        is_absent = beside.reason is not None and beside.reason.why == WhyNot.NOT_READ
        outcome = Outcome.NOT_READ if is_absent else Outcome.NOT_COMPARABLE
        return Held(beside, outcome, None, most, limit.source, ())
    if abs(difference) <= most:
        return Held(beside, Outcome.AGREES, None, most, limit.source, ())
    side = Side.ABOVE if difference > 0.0 else Side.BELOW
    return Held(beside, Outcome.DIFFERS, side, most, limit.source, _likely(comparison, beside.quantity, side))


def _likely(comparison: Comparison, quantity: Compared, side: Side) -> tuple[Cause, ...]:
    given = comparison.case.given
    return tuple(
        cause
        for cause in causes()
        if quantity in cause.of and cause.side in (side, "either") and not any(key in given for key in cause.unless)
    )
