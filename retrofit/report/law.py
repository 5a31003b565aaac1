"""What the tables of law say in the report: before and after, row by row, over time, and where the tables are from."""

from __future__ import annotations

import datetime
from collections.abc import Iterable
from dataclasses import dataclass

from retrofit.checks.law import SUBJECTS
from retrofit.report.gathering import basis_text, gathered, names
from retrofit.report.judging import spelled
from retrofit.report.values import FIELDS, potential_text
from retrofit.study import Comparison, Entry
from retrofit.study.law import LawBasis, LawCheck, LawRow
from retrofit.units import UnitSystem, format_number, stacked

UNKNOWN = "unknown"
LIMIT = ", limit "  # between a number and its limit
NOTHING_HELD = "none in these tables"


@dataclass(frozen=True)
class LawLine:
    """What one refrigerant has to reckon with from its first day on, as texts."""

    name: str
    start: str
    gwp: str
    charge: str
    co2e: str
    leak_check: str
    detection: str
    bans: tuple[str, ...]
    missing: tuple[str, ...]


@dataclass(frozen=True)
class Reading:
    """What a row of law says to some refrigerants.

    Attributes:
        state: "applies", "depends" or "unknown".
        figures: The refrigerants, by their numbers, as (numbers, refrigerants); a number may be empty.
        limits: The limits that the numbers stand against.
        reasons: Why it is open.
    """

    state: str
    figures: tuple[tuple[str, str], ...]
    limits: str
    reasons: tuple[str, ...]


@dataclass(frozen=True)
class LawItem:
    """One row of a table of law, as texts, with what it says to each refrigerant."""

    dates: str
    text: str
    exceptions: str
    readings: tuple[Reading, ...]
    source: str
    basis: str
    checked: str
    table: str


@dataclass(frozen=True)
class LawPart:
    """Everything on law.

    Attributes:
        facts: Jurisdiction, days and equipment as (what, value).
        deference: What no table replaces.
        problems: What is wrong with a table.
        known: Jurisdictions there are tables for, if there is none for that of the case.
        lines: One for each refrigerant.
        subjects: The rows by subject.
        timeline: What begins and ends, as (day, what, for whom).
        tables: The tables looked into, as (title, file, rows, checked, to be checked again by, remark).
    """

    facts: tuple[tuple[str, str], ...]
    deference: str
    problems: tuple[str, ...]
    known: str
    lines: tuple[LawLine, ...]
    subjects: tuple[tuple[str, tuple[LawItem, ...]], ...]
    timeline: tuple[tuple[str, str, str], ...]
    tables: tuple[tuple[str, str, str, str, str, str], ...]


def law_part(comparison: Comparison, units: UnitSystem) -> LawPart | None:
    """Return what stands in the report on law; None if the case names no jurisdiction.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    basis = comparison.law
    if basis is None:
        return None
    return LawPart(
        _facts(comparison, basis),
        basis.deference,
        basis.problems,
        "" if basis.tables else ", ".join(basis.known),
        law_lines(comparison, units),
        _subjects(comparison),
        timeline(comparison, basis),
        _tables(basis),
    )


def law_lines(comparison: Comparison, units: UnitSystem) -> tuple[LawLine, ...]:
    """Return what each refrigerant has to reckon with: leak checks, detection, bans.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    Returns: A line for each refrigerant that the tables were read for; none without a table.
    """
    return tuple(_line(entry, entry.law, units) for entry in comparison.entries if entry.law is not None)


def _line(entry: Entry, check: LawCheck, units: UnitSystem) -> LawLine:
    return LawLine(
        entry.refrigerant.display_name,
        check.start.isoformat(),
        "; ".join(_gwp(basis, value, len(check.gwp)) for basis, value in check.gwp.items()) or "not asked",
        _charge(check, units),
        "; ".join(_range(weight) for weight in check.co2e_t.values()) or "not asked",
        _leak_check(check),
        _detection(check),
        tuple(_ban(row) for row in sorted(check.rows, key=_begin) if row.gas) or (NOTHING_HELD,),
        tuple(spelled(text) for text in check.unknown),
    )


def _gwp(basis: str, value: float | None, count: int) -> str:
    text = UNKNOWN if value is None else potential_text(value)
    return f"{text} {FIELDS[basis].removeprefix('GWP ')}" if count > 1 else text


def _charge(check: LawCheck, units: UnitSystem) -> str:
    if check.charge_kg is None:
        return UNKNOWN
    return stacked(*(_masses(check.charge_kg, system) for system in units.systems))


def _masses(charge_kg: tuple[float, float, float], units: UnitSystem) -> str:
    low, expected, high = (units.text("mass", value) for value in charge_kg)
    return f"{expected} ({low} to {high})" if low != high else expected


def _range(weight: tuple[float, float, float] | None) -> str:
    if weight is None:
        return UNKNOWN
    low, expected, high = map(_tonnes, weight)
    return f"{expected} ({low} to {high})" if low != high else expected


def _tonnes(value: float) -> str:
    """Return a weight of three digits, as the steps of the law need it. [t CO2e]"""
    return format_number(value, 0) if value >= 100.0 else f"{value:#.3g}".rstrip(".")


def _leak_check(check: LawCheck) -> str:
    """Return how often, at the start; what is open or cannot be told is said."""
    rows = [row for row in check.rows_on("leak check") if row.in_force(check.start)]
    if any(row.state == UNKNOWN for row in rows):
        return UNKNOWN
    if check.leak_check_months is None:
        return "open" if rows else NOTHING_HELD
    strictest = [row for row in rows if row.value == check.leak_check_months]
    open_ = "" if any(row.state == "applies" for row in strictest) else "; it depends"
    rest = "; one row stays open" if any(row.value is None for row in rows) else ""
    memory = "; from memory" if any(row.is_from_memory for row in strictest) else ""
    return f"every {check.leak_check_months:g} months{open_}{rest}{memory}"


def _detection(check: LawCheck) -> str:
    found = []
    for row in check.rows_on("leak detection"):
        word = {"applies": "compulsory", "depends": "it depends", "unknown": UNKNOWN}[row.state]
        later = "" if row.in_force(check.start) else f" from {row.applies_from}"
        found.append(f"{word}{later}{'; from memory' if row.is_from_memory else ''}")
    return "; ".join(dict.fromkeys(found)) or NOTHING_HELD


def _begin(row: LawRow) -> datetime.date:
    return row.applies_from or datetime.date.max


def _ban(row: LawRow) -> str:
    gas = "any gas" if row.gas == "any" else "new gas"
    gas += " not sold" if row.subject == "supply" else ""
    until = f" to {row.applies_until}" if row.applies_until else ""
    doubt = {"applies": "", "depends": "; it depends", "unknown": "; unknown"}[row.state]
    return f"{gas} from {row.applies_from}{until}{doubt}{'; from memory' if row.is_from_memory else ''}"


def _facts(comparison: Comparison, basis: LawBasis) -> tuple[tuple[str, str], ...]:
    law = comparison.case.law
    rate = law.annual_leak_rate if law else None
    return (
        ("Jurisdiction", basis.jurisdiction),
        ("Tables looked at for", basis.on.isoformat()),
        ("Change", _day(basis.date_of_change, "not given: today is taken")),
        ("End of the plant", _day(basis.end, "not given: every later date is shown")),
        ("Equipment", (law.equipment if law else None) or "not given"),
        ("Hermetically sealed", "yes" if law and law.hermetically_sealed else "no"),
        ("Leak detection system", "yes" if law and law.leak_detection_system else "no"),
        ("Leak rate a year", "not given" if rate is None else f"{100.0 * rate:.3g}\N{NO-BREAK SPACE}%"),
    )


def _day(day: datetime.date | None, missing: str) -> str:
    return missing if day is None else day.isoformat()


# Rows


def _subjects(comparison: Comparison) -> tuple[tuple[str, tuple[LawItem, ...]], ...]:
    """Return every row that concerns a refrigerant, once, by subject and date."""
    found: dict[tuple[str, str], list[tuple[Entry, LawRow]]] = {}
    for entry in comparison.entries:
        for row in entry.law.rows if entry.law else ():
            found.setdefault((row.table, row.id), []).append((entry, row))
    ordered = sorted(found.values(), key=lambda pairs: _place(pairs[0][1]))
    subjects: dict[str, list[LawItem]] = {}
    for pairs in ordered:
        subjects.setdefault(pairs[0][1].subject, []).append(_item(pairs))
    return tuple((f"{name[:1].upper()}{name[1:]}", tuple(items)) for name, items in subjects.items())


def _place(row: LawRow) -> tuple[int, datetime.date]:
    return SUBJECTS.index(row.subject), _begin(row)


def _item(pairs: list[tuple[Entry, LawRow]]) -> LawItem:
    row = pairs[0][1]
    said = [(entry, *_parted(item.measured), _reasons(item), item.state) for entry, item in pairs]
    kinds = gathered((entry, (state, limits, reasons)) for entry, _, limits, reasons, state in said)
    return LawItem(
        row.dates,
        spelled(row.text),
        spelled(row.exceptions),
        tuple(
            Reading(state, _figures(kind, said), limits, tuple(map(spelled, reasons)))
            for kind in kinds
            for state, limits, reasons in (kind,)
        ),
        row.source,
        basis_text(row.basis, row.confidence),
        row.date_checked.isoformat(),
        row.table,
    )


Said = tuple[Entry, str, str, tuple[str, ...], str]  # numbers, limits, reasons, state


def _figures(kind: tuple[str, str, tuple[str, ...]], said: list[Said]) -> tuple[tuple[str, str], ...]:
    """Return the numbers of the refrigerants that a row says the same to."""
    found = gathered(
        (entry, numbers) for entry, numbers, limits, reasons, state in said if (state, limits, reasons) == kind
    )
    return tuple((numbers, names(entries)) for numbers, entries in found.items())


def _parted(measured: str) -> tuple[str, str]:
    """Return the numbers of a plant and the limits they stand against, which are the same for every refrigerant."""
    parts = [part.partition(LIMIT) for part in measured.split("; ")] if measured else []
    return "; ".join(part[0] for part in parts), "; ".join(part[2] for part in parts if part[2])


def _reasons(row: LawRow) -> tuple[str, ...]:
    """Return why a row is open, without numbers that stand beside it anyway."""
    return tuple(reason.removesuffix(f": {row.measured}") if row.measured else reason for reason in row.reasons)


# Time


def timeline(comparison: Comparison, basis: LawBasis) -> tuple[tuple[str, str, str], ...]:
    """Return what begins and ends, by date, as (day, what, for whom); today and the change among it.

    Args:
        comparison: An assessed result.
        basis: Its basis of law.
    """
    found: dict[tuple[datetime.date, str], list[Entry]] = {(basis.on, "the tables are looked at"): []}
    if basis.date_of_change is not None:
        found[basis.date_of_change, "the change of refrigerant"] = []
    for entry in comparison.entries:
        for moment in entry.law.timeline if entry.law else ():
            found.setdefault((moment.day, moment.text), []).append(entry)
    ordered = sorted(found.items(), key=lambda item: item[0][0])
    return tuple((day.isoformat(), spelled(text), _whom(entries, comparison)) for (day, text), entries in ordered)


def _whom(entries: Iterable[Entry], comparison: Comparison) -> str:
    listed = list(entries)
    return "all refrigerants here" if len(listed) == len(comparison.entries) else names(listed)


def _tables(basis: LawBasis) -> tuple[tuple[str, str, str, str, str, str], ...]:
    found = []
    for table in basis.tables:
        remarks = [
            word
            for word, is_so in (
                ("the user’s own, beside the case file", table.is_own),
                ("kept for the past", table.is_history),
                ("past its review", table.review_by < basis.on),
            )
            if is_so
        ]
        dates = table.checked.isoformat(), table.review_by.isoformat()
        found.append((table.title, table.file, str(table.rows), *dates, "; ".join(remarks) or "–"))
    return tuple(found)
