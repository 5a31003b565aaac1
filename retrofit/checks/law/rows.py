"""The shapes of a table of law and its rows."""

from __future__ import annotations

import datetime
from dataclasses import dataclass

from retrofit.study.law import Limit

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
    "certificate",
    "new equipment duty",
    "recovery",
    "proposal",
)
MEASURES = ("t CO2e", "kg", "lb", "GWP", "kW")
TRANSFERS = ("air to air", "air to water")
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
        arrangement: How the equipment is put together, of which one has to be.
        chiller: Whether it has to cool water or brine (a chiller, as EU law has it) or must not.
        transfer: "air to air" or "air to water".
        cascade_primary: Whether it has to be the primary circuit of a cascade or must not.
        safety_exception, safety_gwp: Whether the row falls where safety at the site demands it, and the GWP from which
            it holds all the same; None if from none.
        condition: What else has to be so, in words, that no case says.
        not_read: What of the law could not be read, in words; the row then gives no answer. Empty if all was.
        applies_from, applies_until, series: First and last day, and the rows that it follows or that follow it.
        exceptions, gwp_basis, document, clause, edition, address, date_checked, review_by, basis, confidence: As in
            `retrofit.study.law.LawRow`.
    """

    id: str
    subject: str
    text: str
    gwp_basis: str
    document: str
    date_checked: datetime.date
    review_by: datetime.date
    basis: str
    clause: str = ""
    edition: str = ""
    address: str = ""
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
    arrangement: tuple[str, ...] = ()
    chiller: bool | None = None
    transfer: str = ""
    cascade_primary: bool | None = None
    safety_exception: bool = False
    safety_gwp: float | None = None
    condition: str = ""
    not_read: str = ""
    applies_from: datetime.date | None = None
    applies_until: datetime.date | None = None
    series: str = ""
    exceptions: str = ""
    confidence: str = ""

    @property
    def gwp_limit(self) -> float:
        """Smallest GWP that it covers; 0 if it sets none. [-]"""
        return next((limit.from_ or limit.above or 0.0 for limit in self.when if limit.measure == "GWP"), 0.0)

    def ended(self, day: datetime.date) -> bool:
        """Say whether its last day lies before a day."""
        return self.applies_until is not None and self.applies_until < day


@dataclass(frozen=True)
class Table:
    """One table of law, as its file has it.

    Attributes:
        file, is_own: Name of its file, and whether that is the user's own.
        title, jurisdictions: What it is, and whom it holds for.
        review_by: Last day on which it is used; its rows may have their own.
        is_history: Kept for the past; such a table is not reviewed.
        rows: Its rows.
        edition, address: Of the text; its rows may have their own.
        not_held: Fields of law of its jurisdictions that no table here holds.
    """

    file: str
    is_own: bool
    title: str
    jurisdictions: tuple[str, ...]
    review_by: datetime.date
    is_history: bool
    rows: tuple[Row, ...]
    edition: str = ""
    address: str = ""
    not_held: tuple[str, ...] = ()
