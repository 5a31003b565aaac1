"""What the tables of law say to one refrigerant in one plant: plain, frozen, with every row's source.

Everything here is data: states, reasons and numbers. `retrofit.study.law_words` has the words.
"""

from __future__ import annotations

import datetime
from dataclasses import dataclass
from enum import StrEnum

Range = tuple[float, float, float]  # lowest, expected, highest


class RowState(StrEnum):
    """Whether a row of a table of law holds."""

    APPLIES = "applies"
    DEPENDS = "depends"  # on something that its reasons name
    UNKNOWN = "unknown"  # a datum is missing, or the table is past its review
    NO = "no"


class Why(StrEnum):
    """Why a row is open; `Reason.about` then holds what the comment says."""

    NOT_STATED = "not stated"  # the key of the case
    NO_CHARGE = "charge not known"  # the refrigerant
    NO_GWP = "no GWP on this basis"  # the refrigerant, and the basis
    NO_CLASS = "safety class not stated"  # the refrigerant
    PAST_REVIEW = "past its review"  # the table, and the last day it could be used
    CONDITION = "condition"  # in words, from the table
    NOT_READ = "not read"  # what of the law could not be read, in words, from the table
    STRADDLES = "on both sides of a limit"  # nothing: `Reason.measured` has the numbers
    SAFETY_CLAIMED = "safety exception claimed"  # nothing
    NO_LEAK_RATE = "leak rate not stated"  # the figure and the unit of the table
    NO_DAY = "date of change not stated"  # nothing
    NO_END = "end not stated"  # nothing


class Change(StrEnum):
    """What happens on a day of the line of time."""

    BEGINS = "begins"
    ENDS = "ends"
    END_OF_LIFE = "end of the remaining life"


@dataclass(frozen=True)
class Limit:
    """A range of one measure: `from_` and `to` belong to it, `above` and `below` do not.

    kg counts the gases that the row names, t CO2e and lb the full charge, kW the rated capacity.
    """

    measure: str
    from_: float | None = None
    above: float | None = None
    below: float | None = None
    to: float | None = None

    def too_low(self, value: float) -> bool:
        """Say whether a value lies under the range."""
        return (self.from_ is not None and value < self.from_) or (self.above is not None and value <= self.above)

    def too_high(self, value: float) -> bool:
        """Say whether a value lies over the range."""
        return (self.below is not None and value >= self.below) or (self.to is not None and value > self.to)


@dataclass(frozen=True)
class Measured:
    """A number of this plant against a limit of a row.

    Attributes:
        measure: "GWP", "t CO2e", "kg", "lb" or "kW"; "class" for a safety class; "share" for a component.
        value: Lowest, expected and highest; None for a class.
        limit: The limit it stands against; None for a class or a component.
        name: The class, or the component; else empty.
    """

    measure: str
    value: Range | None
    limit: Limit | None = None
    name: str = ""


@dataclass(frozen=True)
class Reason:
    """Why a row is open.

    Attributes:
        why: The kind of reason.
        about: What it is about, as `Why` says.
        keys: Keys of the case that would settle it; empty if none would.
        measured: The numbers of the plant, for a limit that they lie on both sides of.
    """

    why: Why
    about: tuple[str, ...] = ()
    keys: tuple[str, ...] = ()
    measured: Measured | None = None


@dataclass(frozen=True)
class LawRow:
    """One row of a table of law, read for one refrigerant and its charge.

    Attributes:
        id, table: Its name, and the file it stands in.
        jurisdiction: Whose law, as the case names it.
        subject: What it is about, such as "leak check" or "service ban".
        text: What the table says, in plain words.
        state: Whether it holds.
        reasons: Why it is open; empty if it applies.
        measured: The numbers of this plant against the limits of the row.
        value, unit: The number of the row, such as 6 months; None if it has none.
        gas: For a ban on gas, "new" (reclaimed gas is left) or "any"; else empty.
        gwp_limit: Smallest GWP that the row covers; 0 if it covers every one.
        applies_from, applies_until: First and last day; None if there is none.
        series: Rows of one series follow each other; empty if it stands alone.
        exceptions: In words; may be empty.
        gwp_basis: Basis of the GWP it counts with, or "none".
        document, clause, edition, address: Where the law says so; a clause, edition or address may be empty.
        date_checked: Day the text was read.
        review_by: Last day on which the row is used.
        basis, confidence: "read", "extract" or "memory", and how sure what is from memory is.
    """

    id: str
    table: str
    jurisdiction: str
    subject: str
    text: str
    state: RowState
    reasons: tuple[Reason, ...]
    measured: tuple[Measured, ...]
    value: float | None
    unit: str
    gas: str
    gwp_limit: float
    applies_from: datetime.date | None
    applies_until: datetime.date | None
    series: str
    exceptions: str
    gwp_basis: str
    document: str
    clause: str
    edition: str
    address: str
    date_checked: datetime.date
    review_by: datetime.date
    basis: str
    confidence: str

    def in_force(self, day: datetime.date) -> bool:
        """Say whether the row is in force on a day; a proposal never is."""
        has_begun = self.applies_from is not None and self.applies_from <= day
        return has_begun and (self.applies_until is None or day <= self.applies_until)

    @property
    def is_verified(self) -> bool:
        """True if the row was compared with the published text. [-]"""
        return self.basis == "read"

    @property
    def missing(self) -> tuple[str, ...]:
        """Keys of the case that would settle the row. [-]"""
        return tuple(dict.fromkeys(key for reason in self.reasons for key in reason.keys))

    @property
    def is_ban(self) -> bool:
        """True if it ends the use or sale of a gas, or bars it from new equipment. [-]"""
        return self.applies_from is not None and (bool(self.gas) or self.subject == "new equipment")

    @property
    def strictness(self) -> tuple[int, float]:
        """What bans are compared by, the strictest largest: new equipment, then any gas, then new gas; then the GWP."""
        kind = 2 if self.subject == "new equipment" else {"any": 1}.get(self.gas, 0)
        return kind, -self.gwp_limit


@dataclass(frozen=True)
class LawMoment:
    """A day on which something changes; `row` is None at the end of the remaining life."""

    day: datetime.date
    change: Change
    row: LawRow | None = None


@dataclass(frozen=True)
class LawCheck:
    """What the tables say to one refrigerant from a day on, over the remaining life.

    Attributes:
        refrigerant, jurisdiction: Designation, and whose law.
        start, end: From the day looked at (today's refrigerant) or of the change (a candidate) to the end of the
            remaining life; `end` is None if the case does not say it.
        is_new_plant: Whether it is judged as new equipment.
        charge_kg: Lowest, expected and highest charge; None if not known.
        charge_of: "largest circuit" or "whole plant", whose charge that is; empty if not known.
        gwp, co2e_t: By the basis of that law: the value, and lowest, expected and highest weight of the charge;
            None for a basis on which there is none.
        rows: Rows that apply, depend on something, or cannot be told, in force at some time from start to end.
        leak_check_months: Longest time between leak checks at the start, the strictest that may apply; None if the
            tables ask for none or it cannot be told (`unknown` then says why).
        leak_check_months_before: The same for today's refrigerant.
        timeline: What begins and ends, by date.
        unknown: What is missing to say more.
    """

    refrigerant: str
    jurisdiction: str
    start: datetime.date
    end: datetime.date | None
    is_new_plant: bool
    charge_kg: Range | None
    charge_of: str
    gwp: dict[str, float | None]
    co2e_t: dict[str, Range | None]
    rows: tuple[LawRow, ...]
    leak_check_months: float | None
    leak_check_months_before: float | None
    timeline: tuple[LawMoment, ...]
    unknown: tuple[Reason, ...]

    def rows_on(self, subject: str) -> tuple[LawRow, ...]:
        """Return the rows on a subject, in the order of their first day."""
        return tuple(row for row in self.rows if row.subject == subject)

    @property
    def leak_check_open(self) -> tuple[Reason, ...]:
        """Why the time between leak checks at the start cannot be told; empty if it can. [-]"""
        rows = [row for row in self.rows_on("leak check") if row.in_force(self.start)]
        found = (reason for row in rows if row.state == RowState.UNKNOWN for reason in row.reasons)
        return tuple(dict.fromkeys(found))

    @property
    def bans(self) -> tuple[LawRow, ...]:
        """Every ban, by first day. [-]"""
        return tuple(sorted((row for row in self.rows if row.is_ban), key=_begin))

    @property
    def strictest(self) -> LawRow | None:
        """The strictest ban in force at the start; what applies for sure goes before what is open. [-]"""
        held = [row for row in self.bans if row.in_force(self.start)]
        return max(held, key=lambda row: (row.state == RowState.APPLIES, row.strictness), default=None)

    @property
    def next_ban(self) -> LawRow | None:
        """The first ban that begins after the start; of several on one day the strictest. [-]"""
        later = [row for row in self.bans if _begin(row) > self.start]
        first = min(map(_begin, later), default=None)
        return max((row for row in later if _begin(row) == first), key=lambda row: row.strictness, default=None)


@dataclass(frozen=True)
class LawTable:
    """One table of law that was looked into.

    Attributes:
        file, title: Name of the file, and of the law.
        jurisdictions: Whom it holds for.
        edition, address: Of the text it rests on; empty if its rows say it.
        rows, verified: Number of rows, and of those compared with the published text.
        checked: Oldest day on which a row of it was checked.
        review_by: Last day on which it is used.
        is_history: Kept for the past: all of it has ended, and that is no fault.
        is_own: Whether it is the user's own, beside the case file.
        is_past_review: Whether it is no longer used.
        ended: Last day of its last row, if every row has ended and it is not kept for the past; else None.
    """

    file: str
    title: str
    jurisdictions: tuple[str, ...]
    edition: str
    address: str
    rows: int
    verified: int
    checked: datetime.date
    review_by: datetime.date
    is_history: bool
    is_own: bool
    is_past_review: bool = False
    ended: datetime.date | None = None


@dataclass(frozen=True)
class LawBasis:
    """What stands behind every answer about law in a result.

    Attributes:
        jurisdiction: As the case names it.
        areas: Its own code and those whose law holds there too, such as DE and EU.
        on: The day the tables are looked at.
        date_of_change, end: As the case says; None if it does not.
        tables: The tables of that jurisdiction; none if there is no table for it.
        known: Jurisdictions that there are tables for.
        not_held: Fields of law that no table here holds, by name.
    """

    jurisdiction: str
    areas: tuple[str, ...]
    on: datetime.date
    date_of_change: datetime.date | None
    end: datetime.date | None
    tables: tuple[LawTable, ...]
    known: tuple[str, ...]
    not_held: tuple[str, ...] = ()

    @property
    def faulty(self) -> tuple[LawTable, ...]:
        """Tables that are past their review, or whose every row has ended. [-]"""
        return tuple(table for table in self.tables if table.is_past_review or table.ended)


def _begin(row: LawRow) -> datetime.date:
    return row.applies_from or datetime.date.max
