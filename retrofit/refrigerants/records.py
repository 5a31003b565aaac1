"""The shapes of the catalogue: a value with its provenance, a dispute, a source, a refrigerant."""

from __future__ import annotations

from dataclasses import dataclass, fields


@dataclass(frozen=True)
class Value:
    """One catalogue value with where it comes from.

    `value` is None when not known, or when there is none to give; `status` and `note` say which.
    `basis` is "read", "computed", "memory" or "" (nothing known); `confidence` only goes with memory.
    `status` is one of the words in STATUSES, or "" for an ordinary value.
    """

    value: float | str | None
    unit: str = ""
    source: str = ""
    basis: str = ""
    confidence: str = ""
    note: str = ""
    status: str = ""

    @property
    def is_published(self) -> bool:
        """True if there is a value and it was read in a source, not computed and not remembered. [-]"""
        return self.value is not None and self.basis == "read"

    @property
    def number(self) -> float | None:
        """The value as a number in `unit`, or None if not known or a text."""
        return self.value if isinstance(self.value, float) else None

    @property
    def text(self) -> str:
        """The value as a text, or "" if not known or a number."""
        return self.value if isinstance(self.value, str) else ""


STATUSES = {
    "ceiling": "a ceiling that must never be passed, not a mean over a shift",
    "not applicable": "the quantity does not exist for this refrigerant",
    "bound": "the source prints only a bound, not a number",
    "incomplete": "a component without a value was counted as 0",
    "by rule": "a component without a value was left out or counted as 0, as the law prescribes",
    "not computed": "the rule of this basis gives no figure for this blend",
    "unresolved": "sources contradict each other: look it up before use",
}


@dataclass(frozen=True)
class Dispute:
    """Two sources that disagree on one field of a refrigerant, and what was done about it."""

    field: str
    kept: str
    other: str
    status: str  # "kept" | "unresolved"
    reason: str

    @property
    def text(self) -> str:
        """The dispute in one line for a reader."""
        if self.status == "unresolved":
            return f"unresolved: {self.kept} against {self.other}; {self.reason}"
        return f"kept {self.kept} against {self.other}: {self.reason}"


@dataclass(frozen=True)
class Source:
    """One entry of the bibliography; `basis` says how figures under this key came here."""

    key: str
    title: str
    edition: str
    publisher: str
    kind: str
    taken: str
    how: str
    basis: str
    confidence: str = ""


@dataclass(frozen=True)
class Refrigerant:
    """What a refrigerant is. `composition` holds (designation, mass fraction) of each component."""

    designation: str
    kind: str  # "single" | "blend" | "component"
    substance_group: str  # "HFC", "HCFC", "HFO", ... or "blend"
    composition: tuple[tuple[str, float], ...]
    chemical_name: str
    cas: str
    safety_class: Value
    lfl_kg_per_m3: Value
    lfl_vol_pct: Value
    rcl_ppm: Value
    rcl_kg_per_m3: Value
    oel_ppm: Value
    practical_limit_kg_per_m3: Value
    atel_odl_kg_per_m3: Value
    autoignition_K: Value
    odp: Value
    molar_mass_kg_per_mol: Value
    bubble_1atm_K: Value
    dew_1atm_K: Value
    gwp_100yr_ar4: Value
    gwp_100yr_ar5: Value
    gwp_100yr_ar6: Value
    gwp_eu_2024_573: Value
    gwp_us_aim: Value
    lubricants: Value
    typical_use: Value
    composition_mass_pct: Value
    tolerances_mass_pct: Value
    disputes: tuple[Dispute, ...] = ()

    @property
    def display_name(self) -> str:
        """The designation as printed for readers, such as R-404A."""
        return f"R-{self.designation[1:]}"

    @property
    def lubricant_list(self) -> tuple[str, ...]:
        """The lubricant families named, one by one; empty if not stated."""
        return tuple(part.strip() for part in self.lubricants.text.split(";") if part.strip())

    def values(self) -> dict[str, Value]:
        """Return every value by its field name, in the order of the fields, for tables of provenance."""
        named = ((field.name, getattr(self, field.name)) for field in fields(self))
        return {name: item for name, item in named if isinstance(item, Value)}
