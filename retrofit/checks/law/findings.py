"""Findings from the tables of law: what they say against this plant, never that a thing is allowed."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.checks.law.applies import APPLIES, UNKNOWN
from retrofit.study import Comparison, Entry, Finding
from retrofit.study.law import LawBasis, LawCheck, LawRow

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
            "unknown",
            "No table of law for this jurisdiction",
            f"{basis.jurisdiction}: there are tables for {', '.join(basis.known)}.",
            "Put a table into the folder law beside the case file, or find out what holds there. " + _CHECK,
            _SOURCE,
            ("law.jurisdiction",),
            decisive=True,
        )
    for problem in basis.problems:
        fact = f"{problem}."
        yield Finding("law-table", "note", "A table of law is out of date", fact, _CHECK, _SOURCE)


def _ban(row: LawRow, check: LawCheck, is_today: bool) -> Iterator[Finding]:
    """Weigh a ban: in force when the gas goes in, or beginning while the plant still runs."""
    if not row.gas or row.applies_from is None or row.state == UNKNOWN:
        return
    title, level = _ban_words(row, row.in_force(check.start), is_today)
    if row.state != APPLIES and level == "stop":
        level = "unknown"
    advice = "Ask where gas for service would come from until the plant ends. " + _CHECK
    yield Finding("law-ban", level, title, row.brief, advice, row.source, decisive=level == "unknown")


def _ban_words(row: LawRow, is_in_force: bool, is_today: bool) -> tuple[str, str]:
    """Return title and level of a ban; with reclaimed gas left, today's plant can still be served."""
    if row.subject == "supply":
        return (
            "New gas is no longer sold" if is_in_force else "The sale of new gas ends in the remaining life"
        ), "work"
    if not is_in_force:
        return "A service ban begins within the remaining life", "work"
    if is_today:
        return "Service with today's gas is banned", "work" if row.gas == "new" else "stop"
    return "Service with this gas is banned by the day of the change", "stop"


def _detection(row: LawRow, comparison: Comparison) -> Iterator[Finding]:
    law = comparison.case.law
    if row.subject != "leak detection" or row.state == UNKNOWN or law is None or law.leak_detection_system:
        return
    title = "Leak detection system compulsory, none stated"
    yield Finding("law-detection", "work", title, row.brief, "Fit one, or correct the case. " + _CHECK, row.source)


def _leak_rate(row: LawRow, comparison: Comparison) -> Iterator[Finding]:
    rate = comparison.case.law.annual_leak_rate if comparison.case.law else None
    if row.subject != "leak rate" or row.value is None or rate is None or row.state == UNKNOWN:
        return
    if round(rate * 100.0, 9) > row.value:
        fact = f"{rate * 100.0:.3g} % per year. {row.brief}"
        advice = "Find and repair the leaks before the change, whatever refrigerant goes in. " + _CHECK
        yield Finding("law-leak-rate", "work", "Leak rate above that of the law", fact, advice, row.source)


def _change(row: LawRow, is_today: bool) -> Iterator[Finding]:
    """Note what is said of this refrigerant; what is said of every change stays among the rows."""
    if row.subject == "change of refrigerant" and row.measured and row.state != UNKNOWN and not is_today:
        title = "What the tables say on changing the refrigerant"
        yield Finding("law-change", "note", title, row.brief, _CHECK, row.source)


def _leak_checks(check: LawCheck, is_today: bool) -> Iterator[Finding]:
    in_force = [row for row in check.rows_on("leak check") if row.in_force(check.start)]
    rows, open_rows = [row for row in in_force if row.value], [row for row in in_force if not row.value]
    if not rows or check.leak_check_months is None:
        return
    fact = f"at least every {check.leak_check_months:g} months"
    before = check.leak_check_months_before
    if not is_today:
        fact += f", today every {before:g} months" if before else ", today none or not known"
    fact += "; " + "; ".join(row.measured for row in rows if row.measured) + "."
    fact += "".join(f" Open: {row.text} {row.measured}." for row in open_rows if row.state != UNKNOWN)
    if any(row.is_from_memory for row in in_force):
        fact += " A row is from memory."
    sources = "; ".join(dict.fromkeys(row.source for row in in_force))
    yield Finding("law-leak-check", "note", "Leak checks by the tables", fact, _CHECK, sources)


def _missing(check: LawCheck) -> Iterator[Finding]:
    reasons = dict.fromkeys(reason for row in check.rows if row.state == UNKNOWN for reason in row.reasons)
    if reasons:
        fact = f"{'; '.join(reasons)}."
        advice = "Without it the rows that need it cannot be told. " + _CHECK
        title = "Data missing for the tables of law"
        yield Finding("law-unknown", "unknown", title, fact, advice, _SOURCE, decisive=True)
