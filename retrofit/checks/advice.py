"""What page one of a report says: the decision, what is recommended and on which conditions, and what is open.

The tool recommends nothing. A recommendation is the engineer's, from the case; here its conditions are gathered from
what the checks found, and a check that stops it is named. Without one, what speaks for each candidate is said.
"""

from __future__ import annotations

import datetime
import re
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass

from retrofit.case import Report
from retrofit.checks.answer import open_words, question_of
from retrofit.checks.gates import cooling_reached
from retrofit.study import Comparison, Entry, Family, Finding, Verdict
from retrofit.study.bands import pair_bands
from retrofit.study.law import RowState
from retrofit.units import UnitSystem, told

GRAVE = ("danger", "warning", "unknown")  # levels of cautions that page one names
UNKNOWN_FAILS = "A component that could not be checked may prove unsuitable"
NOTHING = Report.model_validate({})


@dataclass(frozen=True)
class Stopped:
    """An option that is stopped or not computed: what comes first in checking, and how many stops follow."""

    entry: Entry
    deed: str
    first: Finding
    more: int


@dataclass(frozen=True)
class Condition:
    """One condition of a choice: in a few words, and its detail; `is_own` if it is the engineer's."""

    about: str
    detail: str
    is_own: bool = False


DEEDS = {
    "unknown": "To be checked before the change",
    "replace": "Replaced",
    "adjust": "Adjusted or proved",
}
NEW_PLANT = Condition(
    "Designed by its maker for its refrigerant and class",
    "here only its refrigerant at the same duty, charge, room, law and cost are judged",
)


@dataclass(frozen=True)
class Chosen:
    """What the case recommends or falls back on.

    Attributes:
        entry: The refrigerant.
        deed: What is to be done, such as "Convert to R448A".
        stopped: The check that stops it, or that it is not computed; None if neither.
        open_facts: Decisive facts that are missing, with the keys that settle them.
        conditions: What has to be settled, done or proved, from the checks; then the engineer's own.
    """

    entry: Entry
    deed: str
    stopped: Stopped | None
    open_facts: tuple[str, ...]
    conditions: tuple[Condition, ...]


@dataclass(frozen=True)
class Weighed:
    """An option that no check stops, keeping among them: what speaks for it, and what has to be settled or done."""

    entry: Entry
    deed: str
    speaks_for: tuple[str, ...]
    to_settle: tuple[str, ...]


@dataclass(frozen=True)
class Risk:
    """What could go wrong, and the refrigerants it is true of."""

    text: str
    about: tuple[str, ...]


@dataclass(frozen=True)
class Deadline:
    """A day that matters, what it brings, and for which refrigerants (none for all); no day if it is in force now."""

    day: datetime.date | None
    text: str
    about: tuple[str, ...]


@dataclass(frozen=True)
class Advice:
    """What stands on page one; names of refrigerants are designations.

    Attributes:
        question: What has to be decided.
        recommended, fallback: The engineer's choice from the case; None if it names none.
        weighed: Options that are computed and no check stops, keeping among them; empty if the case recommends one.
        stopped: Every option that a check stops or that is not computed, keeping among them.
        risks: What could go wrong with what is chosen, or with every option that no check stops.
        deadlines: Days that matter, in their order.
        asked: What the client is asked to do, in sentences.
    """

    question: str
    recommended: Chosen | None
    fallback: Chosen | None
    weighed: tuple[Weighed, ...]
    stopped: tuple[Stopped, ...]
    risks: tuple[Risk, ...]
    deadlines: tuple[Deadline, ...]
    asked: tuple[str, ...]


def advice(comparison: Comparison, units: UnitSystem) -> Advice:
    """Return what page one says.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    report = comparison.case.report or NOTHING
    recommended = _chosen(comparison, report.recommended, report.conditions)
    fallback = _chosen(comparison, report.fallback, ())
    stops = tuple(stop for entry in comparison.entries if (stop := _stopped(comparison, entry)))
    open_ = [entry for entry in comparison.entries if entry.can_be_chosen]
    chosen = [choice.entry for choice in (recommended, fallback) if choice]
    looked_at = chosen or open_
    return Advice(
        question_of(comparison),
        recommended,
        fallback,
        () if recommended else tuple(_weighed(comparison, entry, units) for entry in open_),
        stops,
        tuple(_risks(looked_at, units)),
        tuple(_deadlines(comparison, report, looked_at)),
        tuple(_asked(comparison, report, recommended, looked_at)),
    )


def deed(comparison: Comparison, entry: Entry) -> str:
    """Return what an option is, in words: to keep, to convert, or to replace the plant.

    Args:
        comparison: The result.
        entry: One of its refrigerants.
    """
    name = entry.refrigerant.designation
    words = {Family.KEEP: f"Keep {name}", Family.CONVERT: f"Convert to {name}"}
    return words.get(entry.family, f"Replace the plant by a new one built for {name}")


def _stopped(comparison: Comparison, entry: Entry) -> Stopped | None:
    if entry.can_be_chosen:
        return None
    against = entry.stops or entry.open_facts[:1]
    return Stopped(entry, deed(comparison, entry), against[0], len(against) - 1) if against else None


def _chosen(comparison: Comparison, name: str | None, own: Sequence[str]) -> Chosen | None:
    entry = next((entry for entry in comparison.entries if entry.refrigerant.designation == name), None)
    if entry is None:
        return None
    conditions = (*_conditions(entry), *(Condition(text, "", is_own=True) for text in own))
    facts = tuple(open_words(item) for item in entry.open_facts) if entry.verdict == Verdict.OPEN else ()
    return Chosen(entry, deed(comparison, entry), _stopped(comparison, entry), facts, conditions)


# Conditions: what is not known first, then what has to be done


def _conditions(entry: Entry) -> Iterator[Condition]:
    """Yield the conditions that the findings and the hardware make; what stops an option is told elsewhere."""
    for finding in _at(entry, "unknown"):
        yield Condition(f"Settled first: {_small(finding.title)}", brief(finding.fact))
    for finding in _work(entry):
        yield Condition(finding.title, brief(finding.fact))
    if entry.is_new_plant:
        yield NEW_PLANT
        return
    for verdict, words in DEEDS.items():
        if names := _components(entry, verdict):
            yield Condition(words, "; ".join(names))
    for finding in entry.findings:
        if finding.code == "conversion":
            yield Condition(finding.title, "including the compressor maker's written approval")


def _work(entry: Entry) -> list[Finding]:
    """Return what is to be done and is told neither by a component nor of every conversion."""
    components = {item.name for item in entry.hardware}
    told = {item.code for item in entry.hardware if item.verdict in ("replace", "adjust")}
    told |= {"conversion", "new-plant"}
    return [
        finding
        for finding in entry.findings
        if finding.level == "work" and finding.code not in told and finding.title not in components
    ]


def _components(entry: Entry, verdict: str) -> list[str]:
    return [_small(item.name) for item in entry.hardware if item.verdict == verdict]


def _small(text: str) -> str:
    """Return a text with a small first letter, unless it begins with a name or an abbreviation."""
    return text if text[1:2].isupper() or text[1:2].isdigit() else text[:1].lower() + text[1:]


def brief(fact: str) -> str:
    """Return the first sentence of a fact, without its full stop.

    Args:
        fact: A number against a threshold, or what a table of law says. [-]
    """
    return re.split(r"\.(?=\s+[A-Z]|\s*$)", fact, maxsplit=1)[0]


# What speaks for a candidate, and what is to be settled


def _weighed(comparison: Comparison, entry: Entry, units: UnitSystem) -> Weighed:
    speaks, settle = tuple(_speaks_for(comparison, entry, units)), tuple(_to_settle(entry))
    return Weighed(entry, deed(comparison, entry), speaks, settle)


def _speaks_for(comparison: Comparison, entry: Entry, units: UnitSystem) -> Iterator[str]:
    """Yield what is better than today, or as needed, beyond what the model cannot tell apart."""
    if entry is comparison.existing:
        yield "no change of refrigerant, oil or components"
        return
    reached = cooling_reached(comparison, entry)
    band = {name: found.value for name, found in pair_bands(comparison.existing, entry).items()}
    if reached is not None:
        share = reached[0] / reached[1]
        if share > 1.0 + band["capacity"]:
            yield "cools more than needed"
        elif share >= 1.0:
            yield "cools as much as needed"
    cop = entry.relative.get("cop")
    if cop is not None and cop > 1.0 + band["cop"]:
        yield f"COP {cop - 1.0:+.0%} at the same duty"
    cooler = entry.T_discharge_difference_K
    if cooler is not None and cooler < -band["T_discharge"]:
        by = units.with_unit("temperature difference", -cooler, decimals=0)
        yield f"discharge {by} cooler"
    old, new = (item.refrigerant.gwp_100yr_ar4.number for item in (comparison.existing, entry))
    if old is not None and new is not None and new < old:
        yield f"GWP {new:.0f} against {old:.0f} (AR4)"


def _to_settle(entry: Entry) -> Iterator[str]:
    """Yield what is unknown by name, and how many components ask for something."""
    yield from (f"open: {open_words(finding)}" for finding in entry.open_facts)
    yield from (_small(finding.title) for finding in _at(entry, "unknown") if not finding.decisive)
    yield from (_small(finding.title) for finding in _work(entry) if finding.code.startswith("law"))
    words = {"unknown": "not known for lack of data", "replace": "to replace", "adjust": "to adjust or prove"}
    counts = {verdict: len(_components(entry, verdict)) for verdict in words}
    parts = [f"{count} {words[verdict]}" for verdict, count in counts.items() if count]
    if parts:
        yield f"components: {', '.join(parts)}"


# What could go wrong


def _risks(entries: Sequence[Entry], units: UnitSystem) -> Iterator[Risk]:
    """Yield the grave cautions and what the findings warn of, each once with the refrigerants it is true of."""
    cautions = ((caution.title, entry) for entry in entries for caution in entry.cautions if caution.level in GRAVE)
    findings = (
        (f"{finding.title}: {told(brief(finding.fact), units)}" if finding.level == "stop" else finding.title, entry)
        for entry in entries
        for finding in (*_at(entry, "stop"), *_at(entry, "unknown"), *_work(entry))
    )
    unknown = ((UNKNOWN_FAILS, entry) for entry in entries if _components(entry, "unknown"))
    for pairs in (cautions, findings, unknown):
        yield from _gathered(pairs, len(entries))


def _gathered(pairs: Iterable[tuple[str, Entry]], of: int) -> Iterator[Risk]:
    """Yield each text once with its refrigerants; none are named if it is true of all that are looked at."""
    found: dict[str, dict[str, None]] = {}
    for text, entry in pairs:
        found.setdefault(text, {})[entry.refrigerant.designation] = None
    for text, names in found.items():
        yield Risk(text, () if len(names) == of else tuple(names))


# By when


def _deadlines(comparison: Comparison, report: Report, entries: Sequence[Entry]) -> Iterator[Deadline]:
    """Yield the days of the case and of law, for today's refrigerant and those looked at, in their order."""
    law, none = comparison.law, datetime.date.min
    found: dict[tuple[datetime.date, str], dict[str, None]] = {}
    for day, text in (
        (report.decide_by, "Decision"),
        (law and law.date_of_change, "Change of refrigerant"),
        (law and law.end, "End of the remaining life"),
    ):
        if day:
            found[day, text] = {}
    for entry in dict.fromkeys(entry.refrigerant.designation for entry in (comparison.existing, *entries)):
        for day, text in _law_days(_of(comparison, entry), none):
            found.setdefault((day, text), {})[entry] = None
    for (day, text), names in sorted(found.items(), key=lambda item: item[0]):
        yield Deadline(None if day == none else day, text, tuple(names))


def _of(comparison: Comparison, designation: str) -> Entry:
    return next(entry for entry in comparison.entries if entry.refrigerant.designation == designation)


def _law_days(entry: Entry, now: datetime.date) -> Iterator[tuple[datetime.date, str]]:
    """Yield bans on gas that begin, or hold already at the start, while the plant runs with a refrigerant."""
    for row in entry.law.rows if entry.law else ():
        if entry.law and row.gas and row.applies_from is not None and row.state != RowState.UNKNOWN:
            doubt = "" if row.state == RowState.APPLIES else " It depends: see the section on law."
            yield now if row.in_force(entry.law.start) else row.applies_from, f"{row.text}{doubt}"


# What is asked of the client


def _asked(
    comparison: Comparison, report: Report, recommended: Chosen | None, entries: Sequence[Entry]
) -> Iterator[str]:
    by = f" by {report.decide_by.day} {report.decide_by:%B %Y}" if report.decide_by else ""
    name = recommended.entry.refrigerant.designation if recommended else ""
    if recommended is None:
        yield f"Choose with the engineer{by}: this report names no recommendation"
    elif recommended.entry.is_new_plant:
        yield f"Decide{by} on a new plant for {name}, and have it designed for the class of that refrigerant"
    elif recommended.stopped:
        yield f"Decide{by} whether what stops {name} can be resolved, or take another option"
    else:
        yield f"Agree{by} to the recommendation with its conditions, or choose another option"
    missing = any(_components(entry, "unknown") or _at(entry, "unknown") for entry in entries)
    if missing:
        yield "Have the missing data found out: name plates, settings, drawings and materials of the plant"
    if any(entry is not comparison.existing for entry in entries):
        yield "Have the makers of compressors and equipment approve the refrigerant in writing, before gas is ordered"
    if any(entry.family == Family.REPLACE for entry in entries) or comparison.law is None:
        yield "Ask the authority what holds for this plant"


def _at(entry: Entry, level: str) -> list[Finding]:
    return [finding for finding in entry.findings if finding.level == level]
