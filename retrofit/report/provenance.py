"""Every catalogue value used, with its source and how it was taken; what is doubtful stands beside it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from retrofit.refrigerants import GWP_BASES, Value, source
from retrofit.report.gathering import basis_text, gathered, names
from retrofit.report.table import NOT_STATED
from retrofit.report.values import FIELDS, concentration_text, potential_text
from retrofit.study import Comparison, Entry
from retrofit.units import UnitSystem

CONCENTRATIONS = ("lfl_kg_per_m3", "rcl_kg_per_m3", "practical_limit_kg_per_m3", "atel_odl_kg_per_m3")
TEMPERATURES = ("bubble_1atm_K", "dew_1atm_K", "autoignition_K")
NO_FIGURE = "no figure found"


@dataclass(frozen=True)
class Doubt:
    """What is doubtful about a value, and whose; unresolved if its sources contradict each other."""

    about: str
    text: str
    is_unresolved: bool


@dataclass(frozen=True)
class Origin:
    """One quantity of some refrigerants that has the same source.

    Attributes:
        values: Refrigerants by figure, as (figure with unit, refrigerants).
        key, edition, basis: Source, its edition, and how the figure was taken.
        doubts: What is doubtful.
    """

    values: tuple[tuple[str, str], ...]
    key: str
    edition: str
    basis: str
    doubts: tuple[Doubt, ...]


@dataclass(frozen=True)
class Traced:
    """One quantity of the catalogue with all its sources."""

    name: str
    origins: tuple[Origin, ...]


def traced_values(comparison: Comparison, units: UnitSystem) -> tuple[Traced, ...]:
    """Return every catalogue value behind a result, by quantity and source.

    Args:
        comparison: The result.
        units: The reader's units.
    """
    return tuple(_traced(comparison, field, label, units) for field, label in FIELDS.items())


def _traced(comparison: Comparison, field: str, label: str, units: UnitSystem) -> Traced:
    origins: dict[tuple[str, str, str], list[tuple[Entry, Value]]] = {}
    for entry in comparison.entries:
        value: Value = getattr(entry.refrigerant, field)
        origins.setdefault((value.source, value.basis, value.confidence), []).append((entry, value))
    show = _show(field, units)
    return Traced(f"{label[:1].upper()}{label[1:]}", tuple(_origin(pairs, show) for pairs in origins.values()))


def _origin(pairs: list[tuple[Entry, Value]], show: Callable[[Value], str]) -> Origin:
    first = pairs[0][1]
    figures = gathered((entry, show(value)) for entry, value in pairs)
    notes = gathered((entry, (value.note, value.status)) for entry, value in pairs)
    edition = source(first.source).edition if first.source else ""
    return Origin(
        tuple((text, names(entries)) for text, entries in figures.items()),
        first.source,
        "" if edition in ("none", "current") else edition,
        basis_text(first.basis, first.confidence),
        tuple(
            Doubt(names(entries), _doubt(note, status), status == "unresolved")
            for (note, status), entries in notes.items()
            if _doubt(note, status)
        ),
    )


def _doubt(note: str, status: str) -> str:
    if status == "unresolved" and "unresolved" not in note:
        return f"{note}; sources contradict each other: look it up before use".removeprefix("; ")
    return note


def _show(field: str, units: UnitSystem) -> Callable[[Value], str]:
    """Return how a value of a field is written, with its unit."""

    def show(value: Value) -> str:
        if value.value is None:
            return "none" if value.status == "not applicable" else NOT_STATED if value.source else NO_FIGURE
        if value.number is None:
            return value.text.replace("; ", ", ")  # figures stand apart by semicolons
        return f"{_number(field, value.number, units)}{' ?' if value.status == 'unresolved' else ''}"

    return show


def _number(field: str, number: float, units: UnitSystem) -> str:
    if field in CONCENTRATIONS:
        return concentration_text(number, units)
    if field in TEMPERATURES:
        return units.with_unit("temperature", number, decimals=1)
    if field == "molar_mass_kg_per_mol":
        return f"{1000.0 * number:.2f}\N{NO-BREAK SPACE}g/mol"
    if field == "oel_ppm":
        return f"{number:g}\N{NO-BREAK SPACE}ppm"
    return potential_text(number) if field in GWP_BASES else f"{number:g}"
