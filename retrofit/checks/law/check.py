"""What the tables of law say to every refrigerant of a result, today, at the change and over the remaining life."""

from __future__ import annotations

import datetime
from collections.abc import Iterable, Iterator
from dataclasses import replace

from retrofit.case import EU_MEMBERS, Case, Law, areas
from retrofit.checks.law.applies import Answer, Plant, answer
from retrofit.checks.law.reader import tables_for
from retrofit.checks.law.rows import SUBJECTS, Row, Table
from retrofit.refrigerants import Refrigerant
from retrofit.study import Comparison, Entry, Family
from retrofit.study.charge import CircuitCharge, circuit_charge
from retrofit.study.law import (
    Change,
    LawBasis,
    LawCheck,
    LawMoment,
    LawRow,
    LawTable,
    Range,
    Reason,
    RowState,
    Why,
)

NEW = "new equipment"
FOR_NEW = (NEW, "new equipment duty")  # subjects that only a new plant meets
_DAYS_PER_YEAR = 365.25
Days = tuple[datetime.date, datetime.date | None, datetime.date]  # start, end, and the day the tables are read


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
    existing = _with_check(comparison, comparison.existing, tables, day, day)
    before = existing.law.leak_check_months if existing.law else None
    candidates = (_with_check(comparison, entry, tables, change, day, before) for entry in comparison.candidates)
    return replace(comparison, law=basis, existing=existing, candidates=tuple(candidates))


def _with_check(
    comparison: Comparison,
    entry: Entry,
    tables: Iterable[Table],
    start: datetime.date,
    read_on: datetime.date,
    before: float | None = None,
) -> Entry:
    charge = circuit_charge(comparison.case, entry, comparison.existing)
    found = law_for(
        comparison.case,
        entry.refrigerant,
        _range(charge),
        tables,
        start,
        read_on=read_on,
        is_new_plant=entry.family == Family.REPLACE,
        heat_W=_heat_W(comparison),
    )
    months = found.leak_check_months if entry is comparison.existing else before
    return replace(entry, law=replace(found, charge_of=charge.of, leak_check_months_before=months))


def _heat_W(comparison: Comparison) -> float | None:
    """Return the heat that the plant gives off at its duty today; None if not computed. [W]"""
    return comparison.existing.duty.heat_rejected_W if comparison.existing.duty else None


def _range(charge: CircuitCharge) -> Range | None:
    if charge.lowest_kg is None or charge.expected_kg is None or charge.highest_kg is None:
        return None
    return charge.lowest_kg, charge.expected_kg, charge.highest_kg


def law_for(
    case: Case,
    refrigerant: Refrigerant,
    charge_kg: Range | None,
    tables: Iterable[Table],
    on: datetime.date,
    *,
    read_on: datetime.date | None = None,
    is_new_plant: bool = False,
    heat_W: float | None = None,
) -> LawCheck:
    """Return what tables of law say to one refrigerant from a day on.

    Args:
        case: The case, with a table [law] that names a jurisdiction.
        refrigerant: The refrigerant.
        charge_kg: Lowest, expected and highest charge; None if not known. [kg]
        tables: The tables of that jurisdiction.
        on: The day to begin at: today, or the day of the change.
        read_on: The day the tables are read; a row past its review then is unknown. The day `on` if left out.
        is_new_plant: Whether the limits for new equipment are asked too.
        heat_W: Heat that the plant gives off, for the rated capacity of a heat pump; None if not known. [W]
    Returns: The rows, the leak checks at that day, and what begins and ends until the plant does.
    Raises: ValueError if the case names no jurisdiction.
    """
    law = case.law
    if law is None or law.jurisdiction is None:
        raise ValueError("the case names no jurisdiction; give jurisdiction in [law]")
    plant = Plant.of(case, law, refrigerant, charge_kg, heat_W)
    end = end_of_life(law, on)
    every = [(table, row) for table in tables for row in table.rows]
    asked = ((table, row) for table, row in every if is_new_plant or row.subject not in FOR_NEW)
    read = _rows(plant, asked, (on, end, read_on or on))
    rows = tuple(sorted(read, key=lambda row: (SUBJECTS.index(row.subject), _first(row))))
    counted = {row.gwp_basis for table, row in every if not (table.is_history or row.ended(on))} - {"none"}
    bases = sorted({row.gwp_basis for row in rows if row.gwp_basis != "none"} | set(filter(plant.gwp_known, counted)))
    return LawCheck(
        refrigerant=refrigerant.designation,
        jurisdiction=law.jurisdiction,
        start=on,
        end=end,
        is_new_plant=is_new_plant,
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
    if any(row.state == RowState.UNKNOWN for row in checks):
        return None
    return min((row.value for row in checks if row.value is not None), default=None)


# Rows


def _rows(plant: Plant, asked: Iterable[tuple[Table, Row]], days: Days) -> Iterator[LawRow]:
    start, end, read_on = days
    for table, row in asked:
        is_later = end is not None and row.applies_from is not None and row.applies_from > end
        if row.ended(start) or is_later:
            continue
        found = answer(row, plant)
        if found.state != RowState.NO:
            yield _law_row(row, table, plant.law.jurisdiction or "", _reviewed(found, row, table, read_on))


def _reviewed(found: Answer, row: Row, table: Table, read_on: datetime.date) -> Answer:
    """Return an answer as it was, or unknown if the row is past its review; what is kept for the past is not."""
    if table.is_history or read_on <= row.review_by:
        return found
    past = Reason(Why.PAST_REVIEW, (table.file, row.review_by.isoformat()))
    return replace(found, state=RowState.UNKNOWN, reasons=(past,))


def _law_row(row: Row, table: Table, jurisdiction: str, found: Answer) -> LawRow:
    return LawRow(
        id=row.id,
        table=table.file,
        jurisdiction=jurisdiction,
        subject=row.subject,
        text=row.text,
        state=found.state,
        reasons=found.reasons,
        measured=found.measured,
        value=row.value,
        unit=row.unit,
        gas=row.gas,
        gwp_limit=row.gwp_limit,
        applies_from=row.applies_from,
        applies_until=row.applies_until,
        series=row.series,
        exceptions=row.exceptions,
        gwp_basis=row.gwp_basis,
        document=row.document,
        clause=row.clause,
        edition=row.edition,
        address=row.address,
        date_checked=row.date_checked,
        review_by=row.review_by,
        basis=row.basis,
        confidence=row.confidence,
    )


def _first(row: LawRow) -> datetime.date:
    return row.applies_from or datetime.date.max


# Time


def _moments(rows: Iterable[LawRow], start: datetime.date, end: datetime.date | None) -> Iterator[LawMoment]:
    """Yield what begins and ends; a row that another of its series follows does not end, the next one begins."""
    known = [row for row in rows if row.state != RowState.UNKNOWN and row.applies_from is not None]
    begun = {(row.series, row.applies_from) for row in known if row.series}
    for row in known:
        if _first(row) > start:
            yield LawMoment(_first(row), Change.BEGINS, row)
        last = row.applies_until
        if last is None or (end is not None and last >= end):
            continue
        after = last + datetime.timedelta(days=1)
        if (row.series, after) not in begun:
            yield LawMoment(after, Change.ENDS, row)
    if end is not None:
        yield LawMoment(end, Change.END_OF_LIFE)


# What is missing


def _unknown(rows: Iterable[LawRow], law: Law) -> Iterator[Reason]:
    for row in rows:
        if row.state == RowState.UNKNOWN:
            yield from row.reasons
        elif row.subject == "leak rate" and row.value is not None and law.annual_leak_rate is None:
            yield Reason(Why.NO_LEAK_RATE, (f"{row.value:g}", row.unit), keys=("law.annual_leak_rate",))
    if law.date_of_change is None:
        yield Reason(Why.NO_DAY, keys=("law.date_of_change",))
    if law.end is None and law.remaining_life_years is None:
        yield Reason(Why.NO_END, keys=("law.remaining_life",))


# Tables


def _holds_for(table: Table, jurisdiction: str) -> bool:
    return bool(set(areas(jurisdiction)) & set(table.jurisdictions))


def _basis(law: Law, jurisdiction: str, on: datetime.date, tables: Iterable[Table], every: Iterable[Table]) -> LawBasis:
    used = tuple(tables)
    return LawBasis(
        jurisdiction=jurisdiction,
        areas=areas(jurisdiction),
        on=on,
        date_of_change=law.date_of_change,
        end=end_of_life(law, on),
        tables=tuple(_law_table(table, on) for table in used),
        known=tuple(sorted({name for table in every for name in table.jurisdictions})),
        not_held=tuple(dict.fromkeys(_not_held(used, jurisdiction))),
    )


def _not_held(tables: Iterable[Table], jurisdiction: str) -> Iterator[str]:
    if jurisdiction in EU_MEMBERS:
        yield f"national rules of {EU_MEMBERS[jurisdiction]}"
    for table in tables:
        yield from table.not_held


def _law_table(table: Table, on: datetime.date) -> LawTable:
    has_ended = not table.is_history and all(row.ended(on) for row in table.rows)
    return LawTable(
        file=table.file,
        title=table.title,
        jurisdictions=table.jurisdictions,
        edition=table.edition,
        address=table.address,
        rows=len(table.rows),
        verified=sum(row.basis == "read" for row in table.rows),
        checked=min(row.date_checked for row in table.rows),
        review_by=table.review_by,
        is_history=table.is_history,
        is_own=table.is_own,
        is_past_review=not table.is_history and table.review_by < on,
        ended=max(row.applies_until for row in table.rows if row.applies_until) if has_ended else None,
    )
