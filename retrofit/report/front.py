"""Page one and the pages that frame the report: whose it is, the summary, options and rejections, and sign-off."""

from __future__ import annotations

import base64
import datetime
from dataclasses import dataclass

from retrofit.case import Report
from retrofit.checks.advice import NOTHING, Advice, Chosen, Condition, Stopped, Weighed, advice, deed
from retrofit.checks.outlook import costs_words
from retrofit.report.carried.made_with import group_digests
from retrofit.report.judging import FAMILY_WORDS, reasons, source_title, spelled
from retrofit.report.plain import plain
from retrofit.study import Comparison
from retrofit.units import UnitSystem

NOT_STATED = "not stated"
MONTHS = "January February March April May June July August September October November December".split()
OUTSIDE = (
    "The signatures cover this report alone. The makers' written approval of refrigerant, oil and components, and "
    "every inspection, permit and registration that law, insurer or authority asks for, are outside it and remain to "
    "be got."
)
NO_CHOICE = "The case names no recommendation, and this tool makes none: the engineer has to choose."


@dataclass(frozen=True)
class Choice:
    """A recommendation or fallback as texts; `stopped` and `open_facts` are empty if nothing stops it or is open."""

    deed: str
    verdict: str
    stopped: str
    open_facts: tuple[str, ...]
    conditions: tuple[tuple[str, str], ...]
    own: tuple[str, ...]


@dataclass(frozen=True)
class Option:
    """One option of the list: what it is, its refrigerant by place, class, verdict, and what decides."""

    deed: str
    place: int
    family: str
    safety_class: str
    verdict: str
    reasons: str


@dataclass(frozen=True)
class Rejection:
    """An option that a check stops: title and fact of the first stop, its source, and how many more follow."""

    deed: str
    place: int
    title: str
    fact: str
    source: str
    more: int


@dataclass(frozen=True)
class Front:
    """What frames the report, as texts.

    Attributes:
        company: Whose report it is; empty if not stated.
        logo: The picture as a data URI; empty without one.
        whose: Labels and values of the strip on page one; empty if the case has no [report].
        question: What has to be decided.
        recommended, fallback: What the case names, None if it names none.
        weighed: Options that no check stops: what is done, what speaks for each, what to settle.
        no_choice: What is said in place of a recommendation.
        costs: What the change costs and saves.
        risks: What could go wrong, with the refrigerants it is true of.
        deadlines: Day, what it brings, and for whom.
        no_law: What is said if no law was looked into; else empty.
        asked: What the client is asked to do.
        options, rejected: Every option, and those that a check stops.
        signatures: Role and name of those who sign.
        revisions: Revision, day, what changed, and by whom.
        data: Groups of data tables and the program, each with a digest that tells its version.
        outside: What the signatures do not cover.
    """

    company: str
    logo: str
    whose: tuple[tuple[str, str], ...]
    question: str
    recommended: Choice | None
    fallback: Choice | None
    weighed: tuple[tuple[str, str, str], ...]
    no_choice: str
    costs: str
    risks: tuple[tuple[str, str], ...]
    deadlines: tuple[tuple[str, str, str], ...]
    no_law: str
    asked: tuple[str, ...]
    options: tuple[Option, ...]
    rejected: tuple[Rejection, ...]
    signatures: tuple[tuple[str, str], ...]
    revisions: tuple[tuple[str, str, str, str], ...]
    data: tuple[tuple[str, str], ...]
    outside: str


def front(comparison: Comparison, units: UnitSystem) -> Front:
    """Return what frames the report.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    report, found = comparison.case.report or NOTHING, advice(comparison, units)
    return Front(
        company=plain(report.company or ""),
        logo=_data_uri(report),
        whose=_whose(report) if comparison.case.report else (),
        question=spelled(found.question),
        recommended=_choice(found.recommended),
        fallback=_choice(found.fallback),
        weighed=tuple(_weighed(item) for item in found.weighed),
        no_choice=_no_choice(found),
        costs=costs_line(comparison, units),
        risks=tuple((spelled(risk.text), _about(risk.about)) for risk in found.risks),
        deadlines=tuple(
            (day_text(item.day) if item.day else "In force", spelled(item.text), _about(item.about))
            for item in found.deadlines
        ),
        no_law="" if comparison.law else "Law was not looked into: the case names no jurisdiction in [law].",
        asked=tuple(spelled(text) for text in found.asked),
        options=_options(comparison),
        rejected=tuple(_rejection(comparison, stop) for stop in found.stopped),
        signatures=_signatures(report),
        revisions=tuple((plain(r.rev), day_text(r.date), plain(r.what), plain(r.by)) for r in report.revisions),
        data=tuple(group_digests().items()),
        outside=OUTSIDE,
    )


def costs_line(comparison: Comparison, units: UnitSystem) -> str:
    """Return in a sentence what the change costs and saves.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    if comparison.life is None:
        why = "the case has no [year]" if comparison.case.year is None else "though the case has a [year]"
        first = "First cost is not computed either."
        return f"Not known here: a year's energy and its cost are not computed, {why}. {first}"
    return plain(spelled(costs_words(comparison, units.systems[0])))


def day_text(day: datetime.date) -> str:
    """Return a day as a reader writes it, such as 1 April 2027."""
    return f"{day.day} {MONTHS[day.month - 1]} {day.year}"


def _data_uri(report: Report) -> str:
    if report.logo is None:
        return ""
    return f"data:{report.logo.media_type};base64,{base64.b64encode(report.logo.content).decode('ascii')}"


def _whose(report: Report) -> tuple[tuple[str, str], ...]:
    revision = report.revisions[-1] if report.revisions else None
    texts = (
        ("Client", report.client),
        ("Site", report.site),
        ("System", report.system_id),
        ("Prepared", report.prepared),
        ("Checked", report.checked),
        ("Approved", report.approved),
        ("Revision", f"{revision.rev}, {day_text(revision.date)}" if revision else None),
    )
    return tuple((label, plain(text or NOT_STATED)) for label, text in texts)


def _about(designations: tuple[str, ...]) -> str:
    return ", ".join(map(spelled, designations))


def _choice(chosen: Chosen | None) -> Choice | None:
    if chosen is None:
        return None
    found = tuple(_condition(item) for item in chosen.conditions if not item.is_own)
    own = tuple(plain(item.about) for item in chosen.conditions if item.is_own)
    facts = tuple(spelled(text) for text in chosen.open_facts)
    return Choice(spelled(chosen.deed), chosen.entry.verdict, _stop_text(chosen.stopped), facts, found, own)


def _condition(item: Condition) -> tuple[str, str]:
    return spelled(item.about), spelled(item.detail)


def _stop_text(stopped: Stopped | None) -> str:
    """Return the check that stops an option in a sentence; empty if none does."""
    if stopped is None:
        return ""
    more = f" {stopped.more} more check{'s stop' if stopped.more > 1 else ' stops'} it too." if stopped.more else ""
    return spelled(f"{stopped.first.title}: {stopped.first.fact}{more}")


def _no_choice(found: Advice) -> str:
    if found.recommended:
        return ""
    return f"{NO_CHOICE} {'No check stops these:' if found.weighed else 'A check stops every option.'}"


def _weighed(item: Weighed) -> tuple[str, str, str]:
    speaks = "; ".join(item.speaks_for) or "no significant advantage"
    return spelled(item.deed), spelled(speaks), spelled("; ".join(item.to_settle) or "nothing found")


def _options(comparison: Comparison) -> tuple[Option, ...]:
    return tuple(
        Option(
            spelled(deed(comparison, entry)),
            place,
            FAMILY_WORDS[entry.family],
            entry.refrigerant.safety_class.text or NOT_STATED,
            entry.verdict or "not judged",
            reasons(entry),
        )
        for place, entry in enumerate(comparison.entries)
    )


def _rejection(comparison: Comparison, stop: Stopped) -> Rejection:
    fact = spelled(stop.first.fact)
    return Rejection(
        spelled(stop.deed),
        comparison.entries.index(stop.entry),
        spelled(stop.first.title),
        fact[:1].upper() + fact[1:],
        source_title(stop.first.source),
        stop.more,
    )


def _signatures(report: Report) -> tuple[tuple[str, str], ...]:
    names = (
        ("Engineer, prepared", report.prepared),
        ("Engineer, checked", report.checked),
        ("Approved", report.approved),
        ("Contractor", None),
        ("Client", report.client),
    )
    return tuple((role, plain(name or "")) for role, name in names)
