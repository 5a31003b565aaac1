"""The plant as found, in the report: what its readings say, where they do not fit, and what they leave open."""

from __future__ import annotations

from dataclasses import dataclass, replace

from retrofit.report.agreeing import Agreement, agreements
from retrofit.report.judging import LEVEL_WORDS, source_title, spelled
from retrofit.study import Comparison, Derived, Finding
from retrofit.units import UnitSystem


@dataclass(frozen=True)
class Problem:
    """Something wrong in the readings, as texts."""

    level: str
    word: str
    title: str
    text: str
    source: str


@dataclass(frozen=True)
class AsFound:
    """The plant as found: quantities as (name, value, made from), problems, what is missing, and the model."""

    date: str
    quantities: tuple[tuple[str, str, str], ...]
    problems: tuple[Problem, ...]
    missing: tuple[str, ...]
    agreements: tuple[Agreement, ...]

    @property
    def is_contradicted(self) -> bool:
        """Return whether anything in the readings does not go together with the rest. [-]"""
        return bool(self.problems) or any(item.is_apart for item in self.agreements)


def as_found(comparison: Comparison, units: UnitSystem) -> AsFound | None:
    """Return the plant as found; None if the case has no readings.

    Args:
        comparison: The result.
        units: The reader's units.
    """
    found, readings = comparison.baseline, comparison.case.readings
    if found is None:
        return None
    return AsFound(
        (readings.date or "") if readings else "",
        tuple((item.name, derived_text(item, units), item.made_from) for item in found.derived),
        tuple(_problem(finding) for finding in found.problems),
        tuple(spelled(text) for text in found.missing),
        tuple(_spelled(item) for item in agreements(comparison, units)),
    )


def _spelled(item: Agreement) -> Agreement:
    return replace(
        item,
        difference=spelled(item.difference),
        outcome=spelled(item.outcome),
        reason=spelled(item.reason),
        causes=tuple((spelled(text), spelled(todo)) for text, todo in item.causes),
    )


def derived_text(item: Derived, units: UnitSystem) -> str:
    """Return the value of a derived quantity with its unit.

    Args:
        item: The quantity.
        units: The reader's units.
    """
    return units.with_unit(item.kind, item.value, decimals=1 if item.kind == "fraction" else None)


def _problem(finding: Finding) -> Problem:
    text = spelled(finding.text)
    return Problem(
        finding.level,
        LEVEL_WORDS[finding.level],
        spelled(finding.title),
        text[:1].upper() + text[1:],
        source_title(finding.source),
    )
