"""What is asked about room and machinery room in the report, with the numbers of each refrigerant."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

from retrofit.report.gathering import basis_text, gathered, nameless, names
from retrofit.report.judging import spelled
from retrofit.report.values import concentration_text
from retrofit.study import Entry
from retrofit.study.room import Question
from retrofit.units import UnitSystem


@dataclass(frozen=True)
class Number:
    """The number of a question: for whom, its value, the working, and what is missing."""

    about: str
    value: str
    lines: tuple[str, ...]
    missing: tuple[str, ...]


@dataclass(frozen=True)
class Asked:
    """One thing to ask, with its numbers.

    Attributes:
        topic, text: What it is about, and the question.
        about: Of whom; empty if it is asked of every refrigerant.
        numbers: By refrigerant.
        lines, missing: What is so of every number, and what is missing for every refrigerant.
        source, basis: Where it comes from.
    """

    topic: str
    text: str
    about: str
    numbers: tuple[Number, ...]
    lines: tuple[str, ...]
    missing: tuple[str, ...]
    source: str
    basis: str


def asked_texts(pairs: Iterable[tuple[Entry, Question]], count: int, units: UnitSystem) -> tuple[Asked, ...]:
    """Return questions, each once, with the numbers of the refrigerants they are asked of.

    Args:
        pairs: Refrigerants, each with a question.
        count: How many refrigerants there are; a question of all of them names none.
        units: The reader's units.
    """
    found: dict[tuple[str, str, str, str], list[tuple[Entry, Number]]] = {}
    for entry, item in pairs:
        key = (item.topic, spelled(item.text), item.source, item.basis)
        found.setdefault(key, []).append((entry, _number(entry, item, units)))
    return tuple(_question(key, numbers, count) for key, numbers in found.items())


def _number(entry: Entry, item: Question, units: UnitSystem) -> Number:
    value = "" if item.value is None else _value(item.kind, item.value, units)
    lines = tuple(nameless(entry, line) for line in item.lines)
    return Number("", value, lines, tuple(nameless(entry, text) for text in item.missing))


def _value(kind: str, value: float, units: UnitSystem) -> str:
    """Return a number with its unit; concentrations in air are the thousandth part of a usual density."""
    if kind != "density":
        return units.with_unit(kind, value)
    return concentration_text(value, units)


def _question(key: tuple[str, str, str, str], numbers: list[tuple[Entry, Number]], count: int) -> Asked:
    topic, text, source, basis = key
    asked = {entry.refrigerant.designation: entry for entry, _ in numbers}
    about = "" if len(asked) == count else names(asked.values())
    differ = len({number for _, number in numbers}) > 1
    lines = shared_texts([number.lines for _, number in numbers if differ and number.lines])
    missing = shared_texts([number.missing for _, number in numbers if differ])
    groups = gathered((entry, _alone(number, lines, missing)) for entry, number in numbers)
    shown = tuple(
        replace(number, about="" if len(groups) == 1 else names(entries))
        for number, entries in groups.items()
        if number.value or number.lines or number.missing
    )
    return Asked(topic, text, about, shown, lines, missing, source, basis_text(basis))


def shared_texts(every: list[tuple[str, ...]]) -> tuple[str, ...]:
    """Return the texts that stand in all of several lists.

    Args:
        every: The lists.
    """
    return tuple(text for text in every[0] if all(text in texts for texts in every)) if every else ()


def _alone(number: Number, lines: tuple[str, ...], missing: tuple[str, ...]) -> Number:
    """Return a number without what is so of every refrigerant."""
    return replace(
        number,
        lines=tuple(text for text in number.lines if text not in lines),
        missing=tuple(text for text in number.missing if text not in missing),
    )
