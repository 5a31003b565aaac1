"""Changes of safety class in the report, and what each class asks to look at."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.report.gathering import basis_text, gathered, names
from retrofit.report.judging import LEVEL_WORDS, spelled
from retrofit.report.table import NOT_STATED
from retrofit.study import Comparison, Entry
from retrofit.study.room import ClassChange

AskedOf = tuple[str, str, str, str]  # topic, text, source, basis
Listed = tuple[tuple[str, ...], str, str]  # items, source, basis


@dataclass(frozen=True)
class Step:
    """A change of safety class: who takes it, from where to where, why it is a gate, and what is asked."""

    about: str
    classes: str
    level: str
    title: str
    reasons: tuple[str, ...]
    asked: tuple[AskedOf, ...]


@dataclass(frozen=True)
class ClassBlock:
    """What one safety class asks to look at, by topic."""

    heading: str
    topics: tuple[tuple[str, tuple[Listed, ...]], ...]


def steps(comparison: Comparison) -> tuple[Step, ...]:
    """Return the changes of safety class of the candidates, each once.

    Args:
        comparison: An assessed result.
    """
    changes = [(entry, entry.room.change) for entry in comparison.candidates if entry.room and entry.room.change]
    return tuple(_step(change, entries) for change, entries in gathered(changes).items())


def class_blocks(comparison: Comparison) -> tuple[ClassBlock, ...]:
    """Return what each class among the refrigerants asks to look at.

    Args:
        comparison: An assessed result.
    """
    classes = gathered((entry, entry.refrigerant.safety_class.text or NOT_STATED) for entry in comparison.entries)
    return tuple(_class(name, entries) for name, entries in classes.items() if entries[0].room)


def _step(change: ClassChange, entries: list[Entry]) -> Step:
    return Step(
        names(entries),
        f"{change.old or NOT_STATED} to {change.new or NOT_STATED}",
        LEVEL_WORDS.get(change.level, ""),
        change.title,
        change.reasons,
        tuple((item.topic, spelled(item.text), item.source, basis_text(item.basis)) for item in change.asked),
    )


def _class(name: str, entries: list[Entry]) -> ClassBlock:
    topics: dict[str, list[Listed]] = {}
    for item in entries[0].room.lists if entries[0].room else ():
        listed = (tuple(map(spelled, item.items)), item.source, basis_text(item.basis))
        topics.setdefault(item.topic, []).append(listed)
    heading = f"Class {name}" if name != NOT_STATED else "Class not stated"
    return ClassBlock(f"{heading}: {names(entries)}", tuple((topic, tuple(listed)) for topic, listed in topics.items()))
