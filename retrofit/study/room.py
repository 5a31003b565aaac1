"""What a result says on a room: limits of the charge with their working, questions, and lists by class.

Numbers are SI. Texts are for a reader and carry SI units; no word here approves of anything.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

BELOW, ABOVE, UNKNOWN, CONDITIONS = "below the limit", "above the limit", "unknown", "under conditions"


@dataclass(frozen=True)
class WorkedLimit:
    """One limit of a charge by one method, with its working.

    Attributes:
        method: Short name, the same everywhere; limits of one method are candidates for the same one.
        title: The method, for a reader.
        code_family: "ASHRAE 15", "EN 378", "ISO 5149", or the product standard.
        edition: Edition that the rule is taken from.
        role: "limit", or "alternative" and "product standard", which are shown and decide nothing.
        formula, symbols: The rule, and what each letter is, with unit.
        lines: The working, with numbers and units.
        limit_kg: The limit; None where `unknown_because` says why, or where there is none.
        decided_by: The input that sets it.
        unknown_because: What is missing, each with the key or value to give.
        open_because: Why the standard may allow more than `limit_kg`; empty if it does not.
        open_up_to_kg: Up to which charge that may be; None without a bound.
        open_keys: Keys of [room] left out that would settle which row or rule holds.
        flags: What is from memory, unresolved or left out.
        source, basis: Where the rule comes from: "read" or "memory".
        applies_because: Why the rule is taken here.
        unlimited_because: Why the rule sets no limit of charge here; empty where it sets one.
        conditions: What it asks for instead.
    """

    method: str
    title: str
    code_family: str
    edition: str
    role: str
    formula: str
    symbols: tuple[str, ...]
    lines: tuple[str, ...]
    limit_kg: float | None
    decided_by: str
    unknown_because: tuple[str, ...]
    flags: tuple[str, ...]
    source: str
    basis: str
    applies_because: str
    open_because: str = ""
    open_up_to_kg: float | None = None
    unlimited_because: str = ""
    conditions: tuple[str, ...] = ()
    open_keys: tuple[str, ...] = ()


@dataclass(frozen=True)
class Question:
    """One thing to ask, with a number where a source gives a formula.

    Attributes:
        topic: What it is about: "ventilation", "detection", "relief" and so on.
        text: The question.
        lines: The working of its number.
        kind, value: The number in SI, and its kind of quantity; empty and None if there is none.
        missing: What would have to be known for a number.
        source, basis: Where it comes from: "read", "memory", "practice" or "physics".
    """

    topic: str
    text: str
    lines: tuple[str, ...]
    kind: str
    value: float | None
    missing: tuple[str, ...]
    source: str
    basis: str


@dataclass(frozen=True)
class ClassList:
    """What a safety class asks to look at under one heading."""

    topic: str
    items: tuple[str, ...]
    source: str
    basis: str


@dataclass(frozen=True)
class ClassChange:
    """A change of safety class, with its reasons.

    Attributes:
        old, new: The classes; empty if not stated.
        step: Short name of the step, the same everywhere.
        level: Level of the finding that it makes: "stop", "unknown", "work", "note", or "" for none.
        title: The step, for a reader.
        reasons: Why it is a gate.
        asked: What standard, listing and law ask, by jurisdiction.
    """

    old: str
    new: str
    step: str
    level: str
    title: str
    reasons: tuple[str, ...]
    asked: tuple[Question, ...]


@dataclass(frozen=True)
class RoomCheck:
    """The charge of one refrigerant against the room.

    Attributes:
        code: The code family that the case chooses, or that is usual in its jurisdiction; empty if neither is said.
        lowest_kg, expected_kg, highest_kg: Charge of the largest independent circuit; None if not known.
        charge_of: What that is the charge of: "largest circuit", "whole plant" or "".
        limits: Every limit with its working.
        deciding: The smallest limit that decides, None if none does.
        margin_kg: Deciding limit less the highest charge; None if either is not known.
        verdict: "below the limit", "above the limit", "unknown", or "under conditions" where no charge is set.
        unknown_because: What is missing where the verdict is unknown.
        questions: What the code family would ask about.
        conditions: What holds instead, where a rule sets no limit of charge.
        machinery_room: The same as `questions`, of a machinery room.
        lists: What the safety class asks to look at.
        change: The change of safety class; None for the refrigerant in the plant.
    """

    code: str
    lowest_kg: float | None
    expected_kg: float | None
    highest_kg: float | None
    charge_of: str
    limits: tuple[WorkedLimit, ...]
    deciding: WorkedLimit | None
    margin_kg: float | None
    verdict: str
    unknown_because: tuple[str, ...]
    questions: tuple[Question, ...]
    conditions: tuple[str, ...]
    machinery_room: tuple[Question, ...]
    lists: tuple[ClassList, ...]
    change: ClassChange | None

    @property
    def unlimited(self) -> tuple[str, ...]:
        """Code families of which no rule that counts sets a limit of charge. [-]"""
        return unlimited_families(self.limits)


def unlimited_families(limits: Sequence[WorkedLimit]) -> tuple[str, ...]:
    """Return the code families of which every limit that counts is none.

    Args:
        limits: Limits of one refrigerant.
    """
    counted = [limit for limit in limits if limit.role == "limit"]
    families = dict.fromkeys(limit.code_family for limit in counted)
    bound = {limit.code_family for limit in counted if not limit.unlimited_because}
    return tuple(family for family in families if family not in bound)
