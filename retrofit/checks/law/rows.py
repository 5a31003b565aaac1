"""The shapes of a table of law: its rows, and the limits a row sets."""

from __future__ import annotations

import datetime
from dataclasses import dataclass

SUBJECTS = (
    "leak check",
    "leak detection",
    "leak rate",
    "repair",
    "records",
    "label",
    "service ban",
    "supply",
    "new equipment",
    "change of refrigerant",
    "retrofit plan",
    "proposal",
)
MEASURES = ("t CO2e", "kg", "lb", "GWP", "kW")
GROUPS = (
    "CFC",
    "HCFC",
    "halon",
    "HFC",
    "HFO",
    "HCFO",
    "PFC",
    "HC",
    "inorganic",
    "ether",
    "chloroalkene",
    "iodofluorocarbon",
)


@dataclass(frozen=True)
class Limit:
    """A range of one measure: `from_` and `to` belong to it, `above` and `below` do not.

    kg counts the gases that the row names, t CO2e and lb the full charge, kW the cooling of the plant.
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

    @property
    def words(self) -> str:
        """The range in words, such as "from 50 to below 500 t CO2e". [-]"""
        ends = (("from", self.from_), ("above", self.above), ("to below", self.below), ("up to", self.to))
        text = " ".join(f"{word} {end:g}" for word, end in ends if end is not None)
        if self.from_ is None and self.above is None:
            text = text.removeprefix("to ")
        return f"GWP {text}" if self.measure == "GWP" else f"{text} {self.measure}"


@dataclass(frozen=True)
class Row:
    """One dated row of a table of law. An empty list sets no condition.

    Attributes:
        id, subject, text: Its name, what it is about, and what the law says in plain words.
        value, unit: Its number, such as 6 months.
        gas: For a ban, "new" if reclaimed gas is left, or "any".
        equipment, not_equipment: Kinds of equipment it covers, and does not.
        gases, with_, without: Groups of which one has to be in the refrigerant, a second such list, and none of which.
        components, refrigerants: Designations of which one has to be in it, or that it has to be.
        safety_classes: Classes it covers.
        when: Limits that all have to hold.
        hermetically_sealed, leak_detection_system, product_below_minus_50: What the case has to say, None if either.
        condition: What else has to be so, in words, that no case says.
        applies_from, applies_until: First and last day.
        exceptions, gwp_basis, source, date_checked, basis, confidence: As in `retrofit.study.law.LawRow`.
    """

    id: str
    subject: str
    text: str
    gwp_basis: str
    source: str
    date_checked: datetime.date
    basis: str
    value: float | None = None
    unit: str = ""
    gas: str = ""
    equipment: tuple[str, ...] = ()
    not_equipment: tuple[str, ...] = ()
    gases: tuple[str, ...] = ()
    with_: tuple[str, ...] = ()
    without: tuple[str, ...] = ()
    components: tuple[str, ...] = ()
    refrigerants: tuple[str, ...] = ()
    safety_classes: tuple[str, ...] = ()
    when: tuple[Limit, ...] = ()
    hermetically_sealed: bool | None = None
    leak_detection_system: bool | None = None
    product_below_minus_50: bool | None = None
    condition: str = ""
    applies_from: datetime.date | None = None
    applies_until: datetime.date | None = None
    exceptions: str = ""
    confidence: str = ""

    def ended(self, day: datetime.date) -> bool:
        """Say whether its last day lies before a day."""
        return self.applies_until is not None and self.applies_until < day


@dataclass(frozen=True)
class Table:
    """One table of law, as its file has it.

    Attributes:
        file, is_own: Name of its file, and whether that is the user's own.
        title, jurisdictions, review_by: What it is, whom it holds for, and when it is to be checked again.
        is_history: Kept for the past.
        rows: Its rows.
    """

    file: str
    is_own: bool
    title: str
    jurisdictions: tuple[str, ...]
    review_by: datetime.date
    is_history: bool
    rows: tuple[Row, ...]
