"""Every input of a comparison: what the case gives, each default taken with its reason, and what was left out."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.case import Case, meaning, quantity
from retrofit.case.model import FIELDS, TABLES
from retrofit.study import Comparison
from retrofit.units import UnitSystem

# Keys that another one stands for: what is not needed is not missing.
INSTEAD = {
    "compressor.efficiency_points": ("compressor.polynomial",),
    "compressor.polynomial": ("compressor.efficiency_points",),
    "compressor.polynomial.capacity": ("compressor.polynomial.mass_flow",),
    "compressor.polynomial.mass_flow": ("compressor.polynomial.capacity",),
    "compressor.polynomial.superheat": ("compressor.polynomial.return_gas",),
    "compressor.polynomial.return_gas": ("compressor.polynomial.superheat",),
    **{
        f"{exchanger}.{key}": (f"{exchanger}.{other}",)
        for exchanger in ("evaporator", "condenser")
        for key, other in (("flow", "outlet"), ("specific_heat", "outlet"), ("outlet", "flow"))
    },
    "year.weather": ("year.bins", "year.climate"),
    "year.bins": ("year.weather", "year.climate"),
    "year.climate": ("year.weather", "year.bins"),
}


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


@dataclass(frozen=True)
class LeftOut:
    """The keys that one table of the file leaves out, and no default stands for."""

    table: str
    keys: tuple[str, ...]


def inputs(case: Case, units: UnitSystem) -> tuple[Input, ...]:
    """Return what the case file gives, in its own words and in the reader's units; not what only the report shows.

    Args:
        case: The case.
        units: The reader's units.
    """
    return tuple(
        Input(key, meaning(key), written, _used(case, key, units))
        for key, written in case.given.items()
        if "." in key and not key.startswith("report.")
    )


def defaults(case: Case, units: UnitSystem) -> tuple[Taken, ...]:
    """Return every default that was taken, with its reason."""
    return tuple(
        Taken(item.key, meaning(item.key), _used(case, item.key, units) or item.shown_text, item.why)
        for item in case.defaults
    )


def missing(case: Case) -> tuple[LeftOut, ...]:
    """Return the keys that each table of the file leaves out and no default stands for.

    Of a table that the file has not at all only its name is told: with no keys.
    """
    taken = {default.key for default in case.defaults} | set(case.given)
    found = []
    for table in TABLES:
        if _at(case, table) is None:
            found += [LeftOut(table, ())] if "." not in table else []
        elif keys := tuple(key for key in _keys(table) if _is_open(f"{table}.{key}", taken)):
            found.append(LeftOut(table, keys))
    return tuple(item for item in found if item.table not in ("thresholds", "report"))


def _keys(table: str) -> list[str]:
    """Return the keys of a table, of tables within it the names."""
    return [key.removeprefix(f"{table}.") for key in (*FIELDS, *TABLES) if key.rpartition(".")[0] == table]


def _is_open(key: str, taken: set[str]) -> bool:
    stands = {taken_key for taken_key in taken if taken_key == key or taken_key.startswith(f"{key}.")}
    return not stands and not any(
        other in taken or any(name.startswith(f"{other}.") for name in taken) for other in INSTEAD.get(key, ())
    )


def _at(case: Case, table: str) -> object:
    found: object = case
    for part in table.split("."):
        found = getattr(found, part, None)
    return found


def _used(case: Case, key: str, units: UnitSystem) -> str:
    found = quantity(case, key)
    if found is None:
        return ""
    kind, value = found
    return units.with_unit(kind, value, decimals=1 if kind == "fraction" else None)


SAME_EFFICIENCIES = (
    "The compressor's isentropic and volumetric efficiency are the same for every refrigerant and pressure ratio."
)
SAME_CURVES = "The compressor's efficiencies follow the pressure ratio by the data given, alike for every refrigerant."
ONE_STAGE = (
    "One stage of compression. Pressure drops and heat lost by the compressor only as far as the case gives them."
)
HELD = "Evaporating and condensing temperatures are held as the convention says; the exchangers are not calculated."
FLOATING = (
    "On the bases same duty and same compressor, evaporating and condensing temperatures are held as the convention "
    "says. On the basis same plant they are found: its exchangers have the conductance that today's point gives them, "
    "times the factor of the case, whatever the flow of refrigerant; superheat and subcooling are those of the case "
    "where the temperature differences leave room for them, and less where they do not."
)
CIRCULATING = "A blend circulates with the composition of its designation."


def fixed(comparison: Comparison) -> tuple[str, ...]:
    """Return what is built into the calculation of this comparison, in sentences.

    Args:
        comparison: The result.
    """
    compressor = comparison.case.compressor
    has_data = compressor.efficiency_points is not None or compressor.polynomial is not None
    has_plant = any(entry.plant for entry in comparison.entries)
    return (
        SAME_CURVES if has_data else SAME_EFFICIENCIES,
        ONE_STAGE,
        FLOATING if has_plant else HELD,
        CIRCULATING,
    )
