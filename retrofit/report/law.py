"""What the tables of law say in the report: before and after, row by row, over time, and where the tables are from."""

from __future__ import annotations

import datetime
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from enum import StrEnum

from retrofit.case import EU_MEMBERS
from retrofit.checks.law import SUBJECTS
from retrofit.report.gathering import gathered, names
from retrofit.report.judging import spelled
from retrofit.report.values import FIELDS, potential_text
from retrofit.study import Comparison, Entry
from retrofit.study.law import LawBasis, LawCheck, LawRow, RowState, Why
from retrofit.study.law_words import (
    DEFERENCE,
    dates,
    limit_text,
    moment_text,
    not_checked,
    number_text,
    problems,
    reason_text,
    source_text,
)
from retrofit.units import UnitSystem, format_number, stacked

UNKNOWN = "unknown"
NOTHING_HELD = "none in these tables"
TODAY, CHANGE = "date of the legal check", "change of refrigerant"
OUTLOOK = "Outlook: proposals and findings, not law in force"


class Mark(StrEnum):
    """What is said beside a cell of the table; the value is how the report words it."""

    DEPENDS = "it depends"
    NOT_VERIFIED = "not verified"


@dataclass(frozen=True)
class LawCell:
    """A cell of the table, and what is said beside it."""

    text: str
    marks: tuple[Mark, ...] = ()

    @property
    def words(self) -> str:
        """The cell with its remarks in words. [-]"""
        return "; ".join((self.text, *self.marks))


@dataclass(frozen=True)
class LawLine:
    """What one refrigerant meets from its first day on.

    Attributes:
        name, start, gwp, charge, co2e, co2e_expected: The refrigerant and its numbers, as texts.
        leak_check, detection: Duties at the start.
        strictest, following: The strictest ban in force at the start, and the next one.
        missing: What is missing, as texts.
    """

    name: str
    start: str
    gwp: str
    charge: str
    co2e: str
    co2e_expected: str
    leak_check: LawCell
    detection: LawCell
    strictest: LawCell
    following: LawCell
    missing: tuple[str, ...]


@dataclass(frozen=True)
class LawOutlook:
    """What may come for one refrigerant: parts that a proposal would restrict, and parts that turn into TFA."""

    name: str
    restricted: str
    turns_into_tfa: str


@dataclass(frozen=True)
class Reading:
    """What a row of law says to some refrigerants.

    Attributes:
        state: "applies", "depends" or "unknown"; "outlook" for what is not law.
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
    edition: str
    checked: str
    is_verified: bool


@dataclass(frozen=True)
class LawPart:
    """Everything on law.

    Attributes:
        facts: Jurisdiction, days and equipment as (what, value).
        deference: What no table replaces.
        problems: What is wrong with a table.
        not_checked: That no table holds for the jurisdiction of the case; empty if one does.
        not_held: Fields of law that no table holds.
        lines: One for each refrigerant.
        outlook: What may come, a line for each refrigerant that it concerns; never law in force.
        subjects: The rows by subject.
        timeline: What begins and ends, as (day, what, for whom).
        tables: The tables looked into, as (title, text, file, rows, verified, read, review by, remark).
    """

    facts: tuple[tuple[str, str], ...]
    deference: str
    problems: tuple[str, ...]
    not_checked: str
    not_held: tuple[str, ...]
    lines: tuple[LawLine, ...]
    outlook: tuple[LawOutlook, ...]
    subjects: tuple[tuple[str, tuple[LawItem, ...]], ...]
    timeline: tuple[tuple[str, str, str], ...]
    tables: tuple[tuple[str, ...], ...]


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
        DEFERENCE,
        problems(basis),
        not_checked(basis),
        basis.not_held,
        law_lines(comparison, units),
        outlook(comparison),
        _subjects(comparison, {table.file: (table.edition, table.address) for table in basis.tables}),
        timeline(comparison, basis),
        _tables(basis),
    )


def law_lines(comparison: Comparison, units: UnitSystem) -> tuple[LawLine, ...]:
    """Return what each refrigerant meets: leak checks, detection, bans.

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
        "; ".join(_expected(weight) for weight in check.co2e_t.values()) or "not asked",
        _leak_check(check),
        _detection(check),
        _ban(check.strictest),
        _ban(check.next_ban),
        tuple(spelled(reason_text(reason)) for reason in check.unknown),
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


def _expected(weight: tuple[float, float, float] | None) -> str:
    return UNKNOWN if weight is None else _tonnes(weight[1])


def _tonnes(value: float) -> str:
    """Return a weight of three digits, as the steps of the law need it, and no finer than a kilogram. [t CO2e]"""
    if value < 0.1:
        return f"{value:.3f}"
    return format_number(value, 0) if value >= 100.0 else f"{value:#.3g}".rstrip(".")


def _leak_check(check: LawCheck) -> LawCell:
    """Return how often, at the start; what is open or not known is said."""
    rows = [row for row in check.rows_on("leak check") if row.in_force(check.start)]
    if check.leak_check_open:
        return LawCell(UNKNOWN)
    strictest = [row for row in rows if row.value == check.leak_check_months]
    if check.leak_check_months is None or not strictest:
        return LawCell(NOTHING_HELD)
    return LawCell(f"every {check.leak_check_months:g} months", _marks(strictest))


def _detection(check: LawCheck) -> LawCell:
    rows = check.rows_on("leak detection")
    if not rows:
        return LawCell(NOTHING_HELD)
    row = max(rows, key=lambda item: (item.in_force(check.start), item.state == RowState.APPLIES))
    later = "" if row.in_force(check.start) else f" from {row.applies_from}"
    word = UNKNOWN if row.state == RowState.UNKNOWN else "compulsory"
    return LawCell(f"{word}{later}", _marks([row]))


def _marks(rows: Iterable[LawRow]) -> tuple[Mark, ...]:
    """Return what is to be said beside a cell that rests on rows: the best of them counts."""
    listed = list(rows)
    found = []
    if not any(row.state == RowState.APPLIES for row in listed) and any(
        row.state == RowState.DEPENDS for row in listed
    ):
        found.append(Mark.DEPENDS)
    if not all(row.is_verified for row in listed):
        found.append(Mark.NOT_VERIFIED)
    return tuple(found)


def _begin(row: LawRow) -> datetime.date:
    return row.applies_from or datetime.date.max


def _ban(row: LawRow | None) -> LawCell:
    if row is None:
        return LawCell(NOTHING_HELD)
    doubt = f" ({UNKNOWN})" if row.state == RowState.UNKNOWN else ""
    until = f" to {row.applies_until}" if row.applies_until else ""
    return LawCell(f"{_banned(row)} from {row.applies_from}{until}{doubt}", _marks([row]))


def _banned(row: LawRow) -> str:
    if row.subject == "new equipment":
        return f"new plant, GWP {row.gwp_limit:g} or more," if row.gwp_limit else "new plant"
    sold = " not sold" if row.subject == "supply" else ""
    return f"{'any gas' if row.gas == 'any' else 'new gas'}{sold}"


def _facts(comparison: Comparison, basis: LawBasis) -> tuple[tuple[str, str], ...]:
    law = comparison.case.law
    rate = law.annual_leak_rate if law else None
    return (
        ("Jurisdiction", _jurisdiction(basis)),
        ("Date of the legal check", basis.on.isoformat()),
        ("Change", _day(basis.date_of_change, "not given: today is taken")),
        ("End of the plant", _day(basis.end, "not given: every later date is shown")),
        ("Equipment", (law.equipment if law else None) or "not given"),
        ("Arrangement", (law.arrangement if law else None) or "not given"),
        ("Hermetically sealed", "yes" if law and law.hermetically_sealed else "no"),
        ("Leak detection system", "yes" if law and law.leak_detection_system else "no"),
        ("Leak rate a year", "not given" if rate is None else f"{100.0 * rate:.3g}\N{NO-BREAK SPACE}%"),
    )


def _jurisdiction(basis: LawBasis) -> str:
    """Return whose law it is, and whose law holds there too."""
    own, *wider = basis.areas
    name = EU_MEMBERS.get(own, {"GB": "Great Britain", "NI": "Northern Ireland"}.get(own, ""))
    as_ = f", by the tables for {' and '.join(wider)}" if wider else ""
    return f"{own}{f' ({name})' if name else ''}{as_}"


def _day(day: datetime.date | None, missing: str) -> str:
    return missing if day is None else day.isoformat()


# Outlook


def outlook(comparison: Comparison) -> tuple[LawOutlook, ...]:
    """Return what may come for each refrigerant that a proposal or a finding concerns; none of it is in force.

    Args:
        comparison: An assessed result.
    """
    checks = [(entry, _by_component(entry.law)) for entry in comparison.entries if entry.law]
    return tuple(
        LawOutlook(
            entry.refrigerant.display_name,
            _parts(row for row in rows if row.value is None),
            _parts(row for row in rows if row.value is not None),
        )
        for entry, rows in checks
        if rows
    )


def _by_component(check: LawCheck) -> list[LawRow]:
    """Return the rows of the outlook that name components; any other proposal stands among the rows only."""
    return [row for row in check.rows_on("proposal") if any(item.measure == "share" for item in row.measured)]


def _parts(rows: Iterable[LawRow]) -> str:
    """Return the components that rows name, with their share by mass and what the row gives for each."""
    found = []
    for row in rows:
        given = "" if row.value is None else f" ({row.value:g} {row.unit})"
        shares = [item for item in row.measured if item.measure == "share" and item.value]
        found += [spelled(f"{number_text(item)}{given}") for item in shares]
    return "; ".join(found) or "none in these tables"


# Rows


def _subjects(
    comparison: Comparison, texts: Mapping[str, tuple[str, str]]
) -> tuple[tuple[str, tuple[LawItem, ...]], ...]:
    """Return every row that concerns a refrigerant, once, by subject and date."""
    found: dict[tuple[str, str], list[tuple[Entry, LawRow]]] = {}
    for entry in comparison.entries:
        for row in entry.law.rows if entry.law else ():
            found.setdefault((row.table, row.id), []).append((entry, row))
    ordered = sorted(found.values(), key=lambda pairs: _place(pairs[0][1]))
    subjects: dict[str, list[LawItem]] = {}
    for pairs in ordered:
        subjects.setdefault(pairs[0][1].subject, []).append(_item(pairs, texts))
    return tuple((_heading(name), tuple(items)) for name, items in subjects.items())


def _heading(subject: str) -> str:
    return OUTLOOK if subject == "proposal" else f"{subject[:1].upper()}{subject[1:]}"


def _place(row: LawRow) -> tuple[int, datetime.date]:
    return SUBJECTS.index(row.subject), _begin(row)


def _item(pairs: list[tuple[Entry, LawRow]], texts: Mapping[str, tuple[str, str]]) -> LawItem:
    """Return a row as texts; edition and address stand beside it only where they are not those of its table."""
    row = pairs[0][1]
    said = [(entry, _kind(item), spelled("; ".join(map(number_text, item.measured)))) for entry, item in pairs]
    kinds = gathered((entry, kind) for entry, kind, _ in said)
    return LawItem(
        dates(row),
        spelled(row.text),
        spelled(row.exceptions),
        tuple(Reading(kind[0], _figures(kind, said), kind[1], tuple(map(spelled, kind[2]))) for kind in kinds),
        source_text(row),
        "" if (row.edition, row.address) == texts[row.table] else "; ".join(filter(None, (row.edition, row.address))),
        row.date_checked.isoformat(),
        row.is_verified,
    )


Kind = tuple[str, str, tuple[str, ...]]  # state, limits, reasons


def _kind(row: LawRow) -> Kind:
    """Return what a row says to a refrigerant, without its numbers, which stand beside it anyway."""
    state = "outlook" if row.subject == "proposal" and row.state == RowState.APPLIES else row.state.value
    limits = "; ".join(limit_text(item.limit) for item in row.measured if item.limit)
    reasons = tuple(
        "it depends on the charge" if reason.why == Why.STRADDLES and not reason.keys else reason_text(reason)
        for reason in row.reasons
    )
    return state, limits, reasons


def _figures(kind: Kind, said: list[tuple[Entry, Kind, str]]) -> tuple[tuple[str, str], ...]:
    """Return the numbers of the refrigerants that a row says the same to."""
    found = gathered((entry, numbers) for entry, own, numbers in said if own == kind)
    return tuple((numbers, names(entries)) for numbers, entries in found.items())


# Time


def timeline(comparison: Comparison, basis: LawBasis) -> tuple[tuple[str, str, str], ...]:
    """Return what begins and ends, by date, as (day, what, for whom); today and the change among it.

    Args:
        comparison: An assessed result.
        basis: Its basis of law.
    """
    found: dict[tuple[datetime.date, str], list[Entry]] = {(basis.on, TODAY): []}
    if basis.date_of_change is not None:
        found[basis.date_of_change, CHANGE] = []
    for entry in comparison.entries:
        for moment in entry.law.timeline if entry.law else ():
            found.setdefault((moment.day, moment_text(moment)), []).append(entry)
    ordered = sorted(found.items(), key=lambda item: item[0][0])
    return tuple((day.isoformat(), spelled(text), _whom(entries, comparison)) for (day, text), entries in ordered)


def _whom(entries: Iterable[Entry], comparison: Comparison) -> str:
    listed = list(entries)
    return "all refrigerants here" if len(listed) == len(comparison.entries) else names(listed)


def _tables(basis: LawBasis) -> tuple[tuple[str, ...], ...]:
    found = []
    for table in basis.tables:
        remarks = [
            word
            for word, is_so in (
                ("the user’s own, beside the case file", table.is_own),
                ("kept for the past", table.is_history),
                ("past its review: gives no answer", table.is_past_review),
            )
            if is_so
        ]
        days = table.checked.isoformat(), table.review_by.isoformat()
        counts = str(table.rows), str(table.verified)
        text = "; ".join(filter(None, (table.edition, table.address)))
        found.append((table.title, text, table.file, *counts, *days, "; ".join(remarks) or "–"))
    return tuple(found)
