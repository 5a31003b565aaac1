"""Every input of a comparison: what the case gives, and each default taken with its reason."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.case import Case
from retrofit.case.model import TABLES
from retrofit.units import UnitSystem

# The end of a field's name tells what it counts; the longest match first.
_KINDS = (
    ("superheat_K", "temperature difference"),
    ("subcooling_K", "temperature difference"),
    ("_m3_per_s", "volume flow"),
    ("efficiency", "fraction"),
    ("_kg", "mass"),
    ("_Pa", "pressure"),
    ("_K", "temperature"),
    ("_W", "cooling"),
    ("_m", "length"),
)
FIXED = (
    "The compressor's isentropic and volumetric efficiency are the same for every refrigerant and pressure ratio.",
    "No pressure drop in pipes and exchangers, no heat loss of the compressor, one stage of compression.",
    "Evaporating and condensing temperatures are held as the convention says; the exchangers are not calculated.",
    "A blend circulates with the composition of its designation.",
)


@dataclass(frozen=True)
class Input:
    """One key of the case file: meaning, what was written, and the value used."""

    key: str
    meaning: str
    written: str
    used: str


@dataclass(frozen=True)
class Taken:
    """One default: key, meaning, value and why."""

    key: str
    meaning: str
    used: str
    why: str


def inputs(case: Case, units: UnitSystem) -> tuple[Input, ...]:
    """Return what the case file gives, in its own words and in the reader's units.

    Args:
        case: The case.
        units: The reader's units.
    """
    found = []
    for key, written in case.given.items():
        if "." in key:
            table, _, alias = key.partition(".")
            found.append(Input(key, _meaning(table, alias), written, _used(case, table, alias, units)))
    return tuple(found)


def defaults(case: Case, units: UnitSystem) -> tuple[Taken, ...]:
    """Return every default that was taken, with its reason."""
    found = []
    for default in case.defaults:
        table, _, alias = default.key.partition(".")
        used = _used(case, table, alias, units) or default.shown_text
        found.append(Taken(default.key, _meaning(table, alias), used, default.why))
    return tuple(found)


def missing(case: Case) -> tuple[str, ...]:
    """Return the meaning of every key that a table of the file leaves out and no default stands for."""
    taken = {default.key for default in case.defaults} | set(case.given)
    return tuple(
        _meaning(table, alias)
        for table in TABLES
        if getattr(case, table, None) is not None
        for alias in _names(table)
        if f"{table}.{alias}" not in taken
    )


def _names(table: str) -> dict[str, str]:
    """Return the name of the field behind each key of a table; none for a table that the case model does not know."""
    model = TABLES.get(table)
    return {} if model is None else {field.alias or name: name for name, field in model.model_fields.items()}


def _meaning(table: str, alias: str) -> str:
    name = _names(table).get(alias)
    return alias if name is None else TABLES[table].model_fields[name].description or alias


def _used(case: Case, table: str, alias: str, units: UnitSystem) -> str:
    name = _names(table).get(alias, "")
    value = getattr(getattr(case, table, None), name, None) if name else None
    kind = next((kind for ending, kind in _KINDS if name.endswith(ending)), "")
    if not kind or not isinstance(value, int | float):
        return ""
    return units.with_unit(kind, value, decimals=1 if kind == "fraction" else None)
