"""What the tables of law say to every refrigerant of a result, today, at the change and over the remaining life."""

from __future__ import annotations

import datetime
from collections.abc import Iterable, Iterator
from dataclasses import replace

from retrofit.case import Case, Law
from retrofit.checks.law.applies import DEPENDS, NO, UNKNOWN, Answer, Plant, Range, answer
from retrofit.checks.law.reader import tables_for
from retrofit.checks.law.rows import SUBJECTS, Row, Table
from retrofit.refrigerants import Refrigerant
from retrofit.study import Comparison, Entry
from retrofit.study.charge import CircuitCharge, circuit_charge
from retrofit.study.law import LawBasis, LawCheck, LawMoment, LawRow, LawTable

DEFERENCE = (
    "Not legal advice. The tables hold what is shown here and no more: check the current text of the law, and ask "
    "the authority or a certified body where a row leaves something open."
)
_DAYS_PER_YEAR = 365.25


def today() -> datetime.date:
    """Return the day on which the tables are read if none is named; the one place that asks the clock."""
    return datetime.date.today()


def with_law(comparison: Comparison, on: datetime.date | None = None) -> Comparison:
    """Return a result with what the tables of law say, if the case names a jurisdiction.

    Args:
        comparison: A result.
        on: The day to look at; today if left out.
    Raises: CaseFileError if a table of the user's cannot be used.
    """
    law = comparison.case.law
    if law is None or law.jurisdiction is None:
        return comparison
    day = on or today()
    every = tables_for(comparison.case.path)
    tables = [table for table in every if _holds_for(table, law.jurisdiction)]
    basis = _basis(law, law.jurisdiction, day, tables, every)
    if not tables:
        return replace(comparison, law=basis)
    change = max(day, law.date_of_change or day)
    existing = _with_check(comparison, comparison.existing, tables, day)
    before = existing.law.leak_check_months if existing.law else None
    candidates = (_with_check(comparison, entry, tables, change, before) for entry in comparison.candidates)
    return replace(comparison, law=basis, existing=existing, candidates=tuple(candidates))


def _with_check(
    comparison: Comparison, entry: Entry, tables: Iterable[Table], start: datetime.date, before: float | None = None
) -> Entry:
    charge = circuit_charge(comparison.case, entry, comparison.existing)
    found = law_for(comparison.case, entry.refrigerant, _range(charge), tables, start)
    months = found.leak_check_months if entry is comparison.existing else before
    return replace(entry, law=replace(found, charge_of=charge.of, leak_check_months_before=months))


def _range(charge: CircuitCharge) -> Range | None:
    if charge.lowest_kg is None or charge.expected_kg is None or charge.highest_kg is None:
        return None
    return charge.lowest_kg, charge.expected_kg, charge.highest_kg


def law_for(
    case: Case, refrigerant: Refrigerant, charge_kg: Range | None, tables: Iterable[Table], on: datetime.date
) -> LawCheck:
    """Return what tables of law say to one refrigerant from a day on.

    Args:
        case: The case, with a table [law] that names a jurisdiction.
        refrigerant: The refrigerant.
        charge_kg: Lowest, expected and highest charge; None if not known. [kg]
        tables: The tables of that jurisdiction.
        on: The day to begin at: today, or the day of the change.
    Returns: The rows, the leak checks at that day, and what begins and ends until the plant does.
    Raises: ValueError if the case names no jurisdiction.
    """
    law = case.law
    if law is None or law.jurisdiction is None:
        raise ValueError("the case names no jurisdiction; give jurisdiction in [law]")
    plant = Plant(law, case.duty.cooling_W, refrigerant, charge_kg)
    end = end_of_life(law, on)
    used = tuple(tables)
    rows = tuple(sorted(_rows(plant, used, on, end), key=lambda row: (SUBJECTS.index(row.subject), _first(row))))
    bases = sorted({row.gwp_basis for row in rows} - {"none"})
    return LawCheck(
        refrigerant=refrigerant.designation,
        jurisdiction=law.jurisdiction,
        start=on,
        end=end,
        charge_kg=charge_kg,
        charge_of="",
        gwp={basis: plant.gwp(basis) for basis in bases},
        co2e_t={basis: plant.co2e_t(basis) for basis in bases},
        rows=rows,
        leak_check_months=leak_check_months(rows, on),
        leak_check_months_before=None,
        timeline=tuple(sorted(_moments(rows, on, end), key=lambda moment: moment.day)),
        unknown=tuple(dict.fromkeys(_unknown(rows, law))),
    )


def end_of_life(law: Law, on: datetime.date) -> datetime.date | None:
    """Return the last day of the plant; None if the case does not say it.

    Args:
        law: The table [law] of a case.
        on: The day a remaining life is counted from if the case has no date of change.
    """
    if law.end is not None or law.remaining_life_years is None:
        return law.end
    years = int(law.remaining_life_years)
    rest = datetime.timedelta(days=round((law.remaining_life_years - years) * _DAYS_PER_YEAR))
    start = law.date_of_change or on
    day = 28 if (start.month, start.day) == (2, 29) else start.day
    return start.replace(year=start.year + years, day=day) + rest


def leak_check_months(rows: Iterable[LawRow], day: datetime.date) -> float | None:
    """Return the longest time between leak checks on a day: the strictest of the rows that may apply.

    Args:
        rows: Rows of one refrigerant.
        day: The day.
    Returns: Months; None if the tables ask for none, or if a row cannot be told.
    """
    checks = [row for row in rows if row.subject == "leak check" and row.value is not None and row.in_force(day)]
    if any(row.state == UNKNOWN for row in checks):
        return None
    return min((row.value for row in checks if row.value is not None), default=None)


# Rows


def _rows(plant: Plant, tables: Iterable[Table], start: datetime.date, end: datetime.date | None) -> Iterator[LawRow]:
    for table in tables:
        for row in table.rows:
            is_later = end is not None and row.applies_from is not None and row.applies_from > end
            if row.ended(start) or is_later:
                continue
            found = answer(row, plant)
            if found.state != NO:
                yield _law_row(row, table, plant.law.jurisdiction or "", found)


def _law_row(row: Row, table: Table, jurisdiction: str, found: Answer) -> LawRow:
    return LawRow(
        id=row.id,
        table=table.file,
        jurisdiction=jurisdiction,
        subject=row.subject,
        text=row.text,
        measured=found.measured,
        state=found.state,
        reasons=found.reasons,
        value=row.value,
        unit=row.unit,
        gas=row.gas,
        applies_from=row.applies_from,
        applies_until=row.applies_until,
        exceptions=row.exceptions,
        gwp_basis=row.gwp_basis,
        source=row.source,
        date_checked=row.date_checked,
        basis=row.basis,
        confidence=row.confidence,
        deference=_deference(row),
    )


def _deference(row: Row) -> str:
    known = {
        "read": f"Read in a copy of the text; checked {row.date_checked}",
        "extract": f"Known from an extract or a summary only; checked {row.date_checked}",
        "memory": f"From memory, {row.confidence} confidence; noted {row.date_checked}",
    }[row.basis]
    return f"{row.source}. {known}: check the current text."


def _first(row: LawRow) -> datetime.date:
    return row.applies_from or datetime.date.max


# Time


def _moments(rows: Iterable[LawRow], start: datetime.date, end: datetime.date | None) -> Iterator[LawMoment]:
    for row in rows:
        if row.state == UNKNOWN or row.applies_from is None:
            continue
        doubt = f" ({'; '.join(row.reasons)})" if row.state == DEPENDS else ""
        if row.applies_from > start:
            yield LawMoment(row.applies_from, f"begins: {row.text}{doubt}")
        last = row.applies_until
        if last is not None and (end is None or last < end):
            yield LawMoment(last + datetime.timedelta(days=1), f"ends: {row.text}{doubt}")
    if end is not None:
        yield LawMoment(end, "end of the remaining life")


# What is missing


def _unknown(rows: Iterable[LawRow], law: Law) -> Iterator[str]:
    for row in rows:
        if row.state == UNKNOWN:
            yield from row.reasons
        elif row.subject == "leak rate" and row.value is not None and law.annual_leak_rate is None:
            yield f"the leak rate is not stated (annual_leak_rate in [law]); the table has {row.value:g} {row.unit}"
    if law.date_of_change is None:
        yield "the day of the change is not stated (date_of_change in [law]): today is taken"
    if law.end is None and law.remaining_life_years is None:
        yield "the remaining life is not stated (remaining_life in [law]): every later date is shown"


# Tables


def _holds_for(table: Table, jurisdiction: str) -> bool:
    return jurisdiction.casefold() in (name.casefold() for name in table.jurisdictions)


def _basis(law: Law, jurisdiction: str, on: datetime.date, tables: Iterable[Table], every: Iterable[Table]) -> LawBasis:
    used = tuple(tables)
    return LawBasis(
        jurisdiction=jurisdiction,
        on=on,
        date_of_change=law.date_of_change,
        end=end_of_life(law, on),
        tables=tuple(_law_table(table) for table in used),
        known=tuple(sorted({name for table in every for name in table.jurisdictions})),
        problems=tuple(problem for table in used for problem in _problems(table, on)),
        deference=DEFERENCE,
    )


def _law_table(table: Table) -> LawTable:
    return LawTable(
        file=table.file,
        title=table.title,
        jurisdictions=table.jurisdictions,
        rows=len(table.rows),
        checked=min(row.date_checked for row in table.rows),
        review_by=table.review_by,
        is_history=table.is_history,
        is_own=table.is_own,
    )


def _problems(table: Table, on: datetime.date) -> Iterator[str]:
    if table.review_by < on:
        yield f"{table.file} was to be checked again by {table.review_by}: what it says may no longer hold"
    if not table.is_history and all(row.ended(on) for row in table.rows):
        last = max(row.applies_until for row in table.rows if row.applies_until is not None)
        yield f"every row of {table.file} has ended, the last on {last}: it says nothing for {on}"
