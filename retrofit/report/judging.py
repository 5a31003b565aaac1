"""Verdicts and findings for a reader: what decides, each finding with its fact, and advice written once."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass

from retrofit.refrigerants import source, with_hyphens
from retrofit.study import Comparison, Entry, Family, Finding, Level, Verdict
from retrofit.units import listed

LEVEL_WORDS = {"stop": "Stop", "work": "Work", "unknown": "Unknown", "note": "Note"}
FAMILY_WORDS = {
    Family.KEEP: "in the plant today",
    Family.CONVERT: "conversion of this plant",
    Family.REPLACE: "a new plant, built for its class and pressures",
}
# The bar at the left of a verdict speaks the language of the components'.
VERDICT_MARKS = {
    Verdict.NOT_SUITABLE: "replace",
    Verdict.OPEN: "unknown",
    Verdict.MODIFICATIONS: "adjust",
    Verdict.SUITABLE: "keep",
    Verdict.NOT_JUDGED: "unknown",
}
SHARED_BY = 3  # refrigerants with the same advice: it is then written once, except about a stop

Subject = tuple[str, str, str, str]  # level, title, advice, source


@dataclass(frozen=True)
class Found:
    """A finding of one refrigerant; `advice` and `source` are empty if they stand under `shared` instead."""

    level: str
    word: str
    title: str
    fact: str
    advice: str
    source: str
    shared: int | None


@dataclass(frozen=True)
class Judged:
    """A refrigerant with its verdict and findings; `mark` names the bar beside it, `reasons` is for the summary."""

    place: int
    name: str
    safety_class: str
    family: str
    verdict: str
    mark: str
    reasons: str
    findings: tuple[Found, ...]


@dataclass(frozen=True)
class Shared:
    """What to do about a finding of several refrigerants."""

    number: int
    level: str
    word: str
    title: str
    advice: str
    source: str
    about: str


def spelled(text: str) -> str:
    """Return a text as readers know it: designations with a hyphen, and a blank before the percent sign."""
    return re.sub(r"(?<=[0-9])%", "\N{NO-BREAK SPACE}%", with_hyphens(text))


def judged(comparison: Comparison) -> tuple[tuple[Judged, ...], tuple[Shared, ...]]:
    """Return every refrigerant with verdict and findings, the existing one first, and the advice they share.

    Args:
        comparison: An assessed result.
    """
    names = _names(comparison)
    numbers = {
        subject: number
        for number, subject in enumerate(
            subject for subject, about in names.items() if len(about) >= SHARED_BY and subject[0] != "stop"
        )
    }
    shared = tuple(
        Shared(number, level, LEVEL_WORDS[level], title, advice, origin, ", ".join(names[level, title, advice, origin]))
        for (level, title, advice, origin), number in numbers.items()
    )
    return tuple(_judged(place, entry, numbers) for place, entry in enumerate(comparison.entries)), shared


def threshold_sources(comparison: Comparison) -> tuple[str, ...]:
    """Return where the thresholds of the findings come from, each once, with what it was used for."""
    found: dict[str, list[str]] = {}
    for entry in comparison.entries:
        for finding in entry.findings:
            titles = found.setdefault(source_title(finding.source), [])
            if (title := spelled(finding.title)) not in titles:
                titles.append(title)
    return tuple(f"{listed(titles, 'and')}: {origin}" for origin, titles in found.items() if origin)


def _names(comparison: Comparison) -> dict[Subject, list[str]]:
    found: dict[Subject, list[str]] = {}
    for entry in comparison.entries:
        for finding in entry.findings:
            found.setdefault(_subject(finding), []).append(entry.refrigerant.display_name)
    return found


def _subject(finding: Finding) -> Subject:
    return finding.level, spelled(finding.title), spelled(finding.advice), source_title(finding.source)


def source_title(origin: str) -> str:
    """Return where a threshold comes from; a key of the bibliography as the title it stands for.

    Args:
        origin: A key, or words. [-]
    """
    try:
        return source(origin).title
    except KeyError:
        return origin


def _judged(place: int, entry: Entry, numbers: Mapping[Subject, int]) -> Judged:
    return Judged(
        place,
        entry.refrigerant.display_name,
        entry.refrigerant.safety_class.text or "not stated",
        FAMILY_WORDS[entry.family],
        entry.verdict or "not judged",
        VERDICT_MARKS[entry.verdict],
        reasons(entry),
        tuple(_found(finding, numbers) for finding in entry.findings),
    )


def _found(finding: Finding, numbers: Mapping[Subject, int]) -> Found:
    level, title, advice, origin = subject = _subject(finding)
    fact = spelled(finding.fact)
    if subject in numbers:
        advice = origin = ""
    return Found(level, LEVEL_WORDS[level], title, fact[:1].upper() + fact[1:], advice, origin, numbers.get(subject))


def reasons(entry: Entry) -> str:
    """Return the titles of the findings that decide the verdict, or the work if nothing stands against it.

    Args:
        entry: An assessed refrigerant.
    """
    return "; ".join(deciding(entry))


def deciding(entry: Entry) -> tuple[str, ...]:
    """Return the titles of the findings that decide the verdict one by one, or in a word that there are none.

    Args:
        entry: An assessed refrigerant.
    """
    groups = (entry.stops, entry.open_facts, *(_at(entry, level) for level in (Level.UNKNOWN, Level.WORK)))
    for found in groups:
        if titles := dict.fromkeys(spelled(finding.title) for finding in found):
            return tuple(titles)
    return ("nothing found by the checks made here",)


def _at(entry: Entry, level: Level) -> tuple[Finding, ...]:
    return tuple(finding for finding in entry.findings if finding.level == level)
