"""Findings from the tables of law: what they say against this plant, never that a thing is allowed.

A new plant (family "replace") is judged by the limits for new equipment at the day of the change: a limit that holds
is a stop, one that a key of the case would settle is an unknown that names the key in `Finding.missing`.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from retrofit.checks.law.check import NEW
from retrofit.study import Comparison, Entry, Finding, Level
from retrofit.study.law import LawBasis, LawCheck, LawRow, Reason, RowState, Why
from retrofit.study.law_words import (
    all_measured,
    brief,
    cited,
    key_name,
    key_text,
    not_checked,
    reason_text,
    table_problem,
)
from retrofit.units import listed

_CHECK = "Not legal advice: check the current text, and ask the authority."
_SOURCE = "tables of law of this tool, or of the user"


def law_findings(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Yield what the tables of law say to a refrigerant.

    Args:
        comparison: A result that went through `retrofit.checks.law.with_law`.
        entry: One of its refrigerants.
    """
    basis = comparison.law
    if basis is None:
        yield _not_asked()
        return
    yield from _tables(basis)
    check = entry.law
    if check is None:
        return
    is_today = entry is comparison.existing
    for row in check.rows:
        yield from _ban(row, check, is_today)
        yield from _detection(row, comparison)
        yield from _leak_rate(row, comparison)
        yield from _change(row, is_today)
    yield from _new_equipment(check)
    yield from _leak_checks(check, is_today)
    yield from _missing(check)


def _not_asked() -> Finding:
    return Finding(
        "law-not-checked",
        "unknown",
        "Law not checked",
        "The case names no jurisdiction.",
        "Give `jurisdiction` in [law]. " + _CHECK,
        _SOURCE,
        ("law.jurisdiction",),
        decisive=True,
    )


def _tables(basis: LawBasis) -> Iterator[Finding]:
    if not basis.tables:
        yield Finding(
            "law-jurisdiction",
            Level.UNKNOWN,
            "Law not checked",
            f"{not_checked(basis)}.",
            "Put a table into the folder law beside the case file, or find out what holds there. " + _CHECK,
            _SOURCE,
            ("law.jurisdiction",),
            decisive=True,
        )
    for table in basis.faulty:
        level = Level.UNKNOWN if table.is_past_review else Level.NOTE
        title = "A table of law is past its review" if table.is_past_review else "A table of law has ended"
        fact = f"{table_problem(table)}."
        yield Finding("law-table", level, title, fact, _CHECK, _SOURCE, decisive=table.is_past_review)


# Bans


def _ban(row: LawRow, check: LawCheck, is_today: bool) -> Iterator[Finding]:
    """Weigh a ban on a gas: in force when the gas goes in, or beginning while the plant still runs."""
    if not row.gas or row.applies_from is None or row.state == RowState.UNKNOWN:
        return
    title, level = _ban_words(row, row.in_force(check.start), is_today)
    is_open = row.state != RowState.APPLIES and level == Level.STOP
    advice = "Ask where gas for service would come from until the plant ends. " + _CHECK
    shown = Level.UNKNOWN if is_open else level
    yield Finding("law-ban", shown, title, brief(row), advice, cited(row), row.missing if is_open else (), is_open)


def _ban_words(row: LawRow, is_in_force: bool, is_today: bool) -> tuple[str, Level]:
    """Return title and level of a ban; with reclaimed gas left, today's plant can still be served."""
    if row.subject == "supply":
        return (
            "New gas is no longer sold" if is_in_force else "The sale of new gas ends in the remaining life"
        ), Level.WORK
    if not is_in_force:
        return "A service ban begins within the remaining life", Level.WORK
    if is_today:
        return "Service with today's gas is banned", Level.WORK if row.gas == "new" else Level.STOP
    return "Service with this gas is banned by the day of the change", Level.STOP


def _new_equipment(check: LawCheck) -> Iterator[Finding]:
    """Judge a new plant by the limits in force at the day of the change, and note the next one."""
    held = [row for row in check.rows_on(NEW) if row.in_force(check.start)]
    applying = [row for row in held if row.state == RowState.APPLIES]
    claimed = [row for row in held if {reason.why for reason in row.reasons} == {Why.SAFETY_CLAIMED}]
    open_ = [row for row in held if row.state != RowState.APPLIES and row not in claimed]
    if applying:
        strictest = max(applying, key=lambda row: row.strictness)
        title = "New equipment with this refrigerant is banned at the day of the change"
        advice = "Choose a refrigerant below the limit. " + _CHECK
        yield Finding("law-new-equipment", Level.STOP, title, brief(strictest), advice, cited(strictest))
    elif open_:
        yield _open_limits(open_)
    if claimed and not applying:
        title = "The safety exception for new equipment is claimed"
        advice = "Keep the evidence; it has to be shown when the plant is put into operation. " + _CHECK
        yield Finding("law-new-evidence", Level.WORK, title, _texts(claimed), advice, _sources(claimed))
    yield from _later(check, {row.id for row in held})


def _open_limits(rows: list[LawRow]) -> Finding:
    missing = tuple(dict.fromkeys(key for row in rows for key in row.missing))
    others = (reason for row in rows for reason in row.reasons if not reason.keys and reason.why != Why.PAST_REVIEW)
    needed = [f"{key_name(key)} ({key_text(key)})" for key in missing]
    said = [f"Needed: {listed(needed, 'and')}."] if needed else []
    said += [f"{_capital(text)}." for text in dict.fromkeys(map(reason_text, others))]
    return Finding(
        "law-new-equipment",
        Level.UNKNOWN,
        "Whether new equipment with this refrigerant is banned is not known",
        " ".join((*said, "Limits that may hold at the day of the change:", _texts(rows))),
        "Give what is missing, or ask the authority. " + _CHECK,
        _sources(rows),
        missing=missing,
        decisive=True,
    )


def _later(check: LawCheck, held: set[str]) -> Iterator[Finding]:
    """Note the next limit for new equipment: it meets a plant whose change is put off."""
    later = [row for row in check.rows_on(NEW) if row.applies_from and row.applies_from > check.start]
    later = [row for row in later if row.state != RowState.UNKNOWN and row.id not in held]
    if later:
        row = min(later, key=lambda item: (str(item.applies_from), item.gwp_limit))
        title = "A later limit for new equipment meets this refrigerant"
        advice = "Do not let the change slip past it. " + _CHECK
        yield Finding("law-new-later", Level.NOTE, title, brief(row), advice, cited(row))


def _texts(rows: Iterable[LawRow]) -> str:
    return " ".join(dict.fromkeys(f"From {row.applies_from}: {row.text}" for row in rows))


def _sources(rows: Iterable[LawRow]) -> str:
    return "; ".join(dict.fromkeys(cited(row) for row in rows))


# Duties


def _detection(row: LawRow, comparison: Comparison) -> Iterator[Finding]:
    law = comparison.case.law
    if row.subject != "leak detection" or row.state == RowState.UNKNOWN or law is None or law.leak_detection_system:
        return
    title = "Leak detection system compulsory, none stated"
    advice = "Fit one, or correct the case. " + _CHECK
    yield Finding("law-detection", Level.WORK, title, brief(row), advice, cited(row))


def _leak_rate(row: LawRow, comparison: Comparison) -> Iterator[Finding]:
    rate = comparison.case.law.annual_leak_rate if comparison.case.law else None
    if row.subject != "leak rate" or row.value is None or rate is None or row.state == RowState.UNKNOWN:
        return
    if round(rate * 100.0, 9) > row.value:
        fact = f"{rate * 100.0:.3g} % per year. {brief(row)}"
        advice = "Find and repair the leaks before the change, whatever refrigerant goes in. " + _CHECK
        yield Finding("law-leak-rate", Level.WORK, "Leak rate above that of the law", fact, advice, cited(row))


def _change(row: LawRow, is_today: bool) -> Iterator[Finding]:
    """Note what is said of this refrigerant; what is said of every change stays among the rows."""
    if row.subject == "change of refrigerant" and row.measured and row.state != RowState.UNKNOWN and not is_today:
        title = "What the tables say on changing the refrigerant"
        yield Finding("law-change", Level.NOTE, title, brief(row), _CHECK, cited(row))


def _leak_checks(check: LawCheck, is_today: bool) -> Iterator[Finding]:
    in_force = [row for row in check.rows_on("leak check") if row.in_force(check.start)]
    rows = [row for row in in_force if row.value]
    if not rows or check.leak_check_months is None:
        return
    fact = f"at least every {check.leak_check_months:g} months"
    before = check.leak_check_months_before
    if not is_today:
        fact += f", today every {before:g} months" if before else ", today none or not known"
    fact += "; " + "; ".join(filter(None, map(all_measured, rows))) + "."
    fact += "".join(f" {_capital(text)}." for text in _conditions(rows))
    if not all(row.is_verified for row in rows):
        fact += " Not verified against the published text."
    yield Finding("law-leak-check", Level.NOTE, "Leak checks by the tables", fact, _CHECK, _sources(rows))


def _conditions(rows: Iterable[LawRow]) -> Iterator[str]:
    """Yield the conditions on which an interval depends, each once."""
    reasons = (reason for row in rows for reason in row.reasons if reason.why == Why.CONDITION)
    yield from dict.fromkeys(map(reason_text, reasons))


# What is missing


def _missing(check: LawCheck) -> Iterator[Finding]:
    """Name what is missing for rows other than limits for new equipment, which have a finding of their own."""
    rows = (row for row in check.rows if row.state == RowState.UNKNOWN and row.subject != NEW)
    reasons = dict.fromkeys(reason for row in rows for reason in row.reasons if reason.why != Why.PAST_REVIEW)
    if reasons:
        fact = f"{'; '.join(map(reason_text, reasons))}."
        advice = "Without it the rows that need it give no answer. " + _CHECK
        title = "Data missing for the tables of law"
        yield Finding("law-unknown", Level.UNKNOWN, title, fact, advice, _SOURCE, _keys(reasons), decisive=True)


def _keys(reasons: Iterable[Reason]) -> tuple[str, ...]:
    return tuple(dict.fromkeys(key for reason in reasons for key in reason.keys))


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
