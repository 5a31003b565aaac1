"""The readings beside the model of today's plant, as rows of texts for report, terminal and spreadsheet."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.checks.reading_words import NAMES, by_words, calibration_words, outcome_words, reason_words
from retrofit.checks.readings import Held, Outcome, readings_held
from retrofit.study import Comparison
from retrofit.units import MISSING, UnitSystem, told


@dataclass(frozen=True)
class Agreement:
    """One quantity read beside the model, as texts.

    Attributes:
        name: What was read.
        read, modelled: With their units.
        difference: Reading against the model.
        outcome: What holding them together gave, with its limit.
        reason: Why they could not be held together; empty if they could.
        state: The same as a state.
        causes: What likely makes the difference, and what to do about it.
    """

    name: str
    read: str
    modelled: str
    difference: str
    outcome: str
    reason: str
    state: Outcome
    causes: tuple[tuple[str, str], ...]

    @property
    def is_apart(self) -> bool:
        """Return whether reading and model differ. [-]"""
        return self.state == Outcome.DIFFERS


def agreements(comparison: Comparison, units: UnitSystem) -> tuple[Agreement, ...]:
    """Return every quantity that is read or could be, beside the model; empty without readings.

    Args:
        comparison: A result.
        units: The reader's units.
    """
    return tuple(_agreement(held, units) for held in readings_held(comparison))


def calibration_text(comparison: Comparison, units: UnitSystem) -> str:
    """Return what is calibrated by the power read; empty if the case does not ask for it.

    Args:
        comparison: A result.
        units: The reader's units.
    """
    return " ".join(told(text, units) for text in calibration_words(comparison))


def _agreement(held: Held, units: UnitSystem) -> Agreement:
    beside = held.beside
    name = NAMES[beside.quantity]

    def text(value: float | None) -> str:
        return MISSING if value is None else units.with_unit(beside.kind, value)

    return Agreement(
        f"{name[:1].upper()}{name[1:]}",
        text(beside.read),
        text(beside.modelled),
        told(by_words(beside), units) or MISSING,
        told(outcome_words(held), units),
        told(reason_words(beside.reason), units) if beside.reason else "",
        held.outcome,
        tuple((cause.text, cause.todo) for cause in held.causes),
    )
