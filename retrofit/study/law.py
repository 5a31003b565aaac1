"""What the tables of law say to one refrigerant in one plant: plain, frozen, with every row's source."""

from __future__ import annotations

import datetime
from dataclasses import dataclass, field


@dataclass(frozen=True)
class LawRow:
    """One row of a table of law, read for one refrigerant and its charge.

    Attributes:
        id, table: Its name, and the file it stands in.
        jurisdiction: Whose law, as the case names it.
        subject: What it is about, such as "leak check" or "service ban".
        text: What the table says, in plain words.
        measured: The numbers of this plant against the limits of the row; empty if it has none.
        state: "applies"; "depends" (on what `reasons` say); or "unknown" (`reasons` name what is missing).
        reasons: Conditions the case does not settle, or data that is missing.
        value, unit: The number of the row, such as 6 months; None if it has none.
        gas: For a ban, "new" (reclaimed gas is left) or "any"; else empty.
        applies_from, applies_until: First and last day; None if there is none.
        exceptions: In words; may be empty.
        gwp_basis: Basis of the GWP it counts with, or "none".
        source, date_checked, basis, confidence: Where it comes from; basis is "read", "extract" or "memory".
        deference: What to check and ask, never empty.
    """

    id: str
    table: str
    jurisdiction: str
    subject: str
    text: str
    measured: str
    state: str
    reasons: tuple[str, ...]
    value: float | None
    unit: str
    gas: str
    applies_from: datetime.date | None
    applies_until: datetime.date | None
    exceptions: str
    gwp_basis: str
    source: str
    date_checked: datetime.date
    basis: str
    confidence: str
    deference: str

    def in_force(self, day: datetime.date) -> bool:
        """Say whether the row is in force on a day; a proposal never is."""
        has_begun = self.applies_from is not None and self.applies_from <= day
        return has_begun and (self.applies_until is None or day <= self.applies_until)

    @property
    def is_from_memory(self) -> bool:
        """True if nobody read the row in a text. [-]"""
        return self.basis == "memory"

    @property
    def brief(self) -> str:
        """The row without its source: dates, words, numbers, exceptions, and a word if nobody read the text itself."""
        known = {"memory": "From memory.", "extract": "Known from an extract only."}.get(self.basis, "")
        return " ".join(part for part in (*self._parts(), known) if part)

    @property
    def line(self) -> str:
        """The row in one paragraph: dates, words, numbers, exceptions, source, basis, and what to check."""
        return " ".join(part for part in (*self._parts(), self.deference) if part)

    def _parts(self) -> tuple[str, ...]:
        reasons = (f"{_capital(reason)}." for reason in self.reasons)
        exceptions = self.exceptions and f"Exceptions and remarks: {self.exceptions}"
        return (f"{self.dates}: {self.text}", self.measured and f"{self.measured}.", *reasons, exceptions)

    @property
    def dates(self) -> str:
        """From and until when, in words."""
        if self.applies_from is None:
            return "No date"
        until = f" to {self.applies_until}" if self.applies_until else ""
        return f"From {self.applies_from}{until}"


@dataclass(frozen=True)
class LawMoment:
    """Something that changes on a day, for a line of time."""

    day: datetime.date
    text: str


@dataclass(frozen=True)
class LawCheck:
    """What the tables say to one refrigerant from a day on, over the remaining life.

    Attributes:
        refrigerant, jurisdiction: Designation, and whose law.
        start, end: From the day looked at (today's refrigerant) or of the change (a candidate) to the end of the
            remaining life; `end` is None if the case does not say it.
        charge_kg: Lowest, expected and highest charge; None if not known.
        charge_of: "largest circuit" or "whole plant", whose charge that is; empty if not known.
        gwp, co2e_t: By the basis of that law: the value, and lowest, expected and highest weight of the charge;
            None for a basis on which there is none.
        rows: Rows that apply, depend on something, or cannot be told, in force at some time from start to end.
        leak_check_months: Longest time between leak checks at the start, the strictest that may apply; None if the
            tables ask for none or it cannot be told (`unknown` then says why).
        leak_check_months_before: The same for today's refrigerant.
        timeline: What begins and ends, by date.
        unknown: What is missing to tell more, in words.
    """

    refrigerant: str
    jurisdiction: str
    start: datetime.date
    end: datetime.date | None
    charge_kg: tuple[float, float, float] | None
    charge_of: str
    gwp: dict[str, float | None]
    co2e_t: dict[str, tuple[float, float, float] | None]
    rows: tuple[LawRow, ...]
    leak_check_months: float | None
    leak_check_months_before: float | None
    timeline: tuple[LawMoment, ...]
    unknown: tuple[str, ...]

    def rows_on(self, subject: str) -> tuple[LawRow, ...]:
        """Return the rows on a subject, in the order of their first day."""
        return tuple(row for row in self.rows if row.subject == subject)


@dataclass(frozen=True)
class LawTable:
    """One table of law that was looked into.

    Attributes:
        file, title: Name of the file, and of the law.
        jurisdictions: Whom it holds for.
        rows: Number of rows.
        checked: Oldest day on which a row of it was checked.
        review_by: Day by which it is to be checked again.
        is_history: Kept for the past: all of it has ended, and that is no fault.
        is_own: Whether it is the user's own, beside the case file.
    """

    file: str
    title: str
    jurisdictions: tuple[str, ...]
    rows: int
    checked: datetime.date
    review_by: datetime.date
    is_history: bool
    is_own: bool


@dataclass(frozen=True)
class LawBasis:
    """What stands behind every answer about law in a result.

    Attributes:
        jurisdiction: As the case names it.
        on: The day the tables are looked at.
        date_of_change, end: As the case says; None if it does not.
        tables: The tables of that jurisdiction; none if there is no table for it.
        known: Jurisdictions that there are tables for.
        problems: What is wrong with a table: past its review, or all of it ended.
        deference: What no table replaces.
    """

    jurisdiction: str
    on: datetime.date
    date_of_change: datetime.date | None
    end: datetime.date | None
    tables: tuple[LawTable, ...]
    known: tuple[str, ...]
    problems: tuple[str, ...] = field(default=())
    deference: str = ""


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
