"""How a number comes about: its formula with the numbers in it, the inputs behind it, and the state points."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from functools import cache
from pathlib import Path
from typing import Any

from retrofit.case import meaning, quantity
from retrofit.meeting.inputs import origin
from retrofit.meeting.state import State
from retrofit.refrigerants import Value, source
from retrofit.report.gathering import basis_text
from retrofit.report.states import StateTable, state_table
from retrofit.report.table import Group, Row, Table
from retrofit.report.values import doubts
from retrofit.study import Comparison, Entry
from retrofit.units import MISSING, UnitSystem

QUANTITY = re.compile(r"\[([^\]]+)\]")
POINT = re.compile(r"(h|T|p|rho)([1-8])")
POINT_KINDS = {
    "h": ("specific enthalpy", "h_J_per_kg", "enthalpy"),
    "T": ("temperature", "T_K", "temperature"),
    "p": ("pressure", "p_Pa", "pressure"),
    "rho": ("density", "density_kg_per_m3", "density"),
}
NO_FORMULA = "This number is made by the study; the report says under its table from what."


@dataclass(frozen=True)
class Term:
    """One quantity of a formula: what it is, its value with unit, and where its own origin is told."""

    label: str
    text: str
    href: str


@dataclass(frozen=True)
class From:
    """One input behind a number: key, meaning, as written, the value used, and where it comes from."""

    key: str
    meaning: str
    written: str
    used: str
    origin: str


@dataclass(frozen=True)
class How:
    """Everything told about one number.

    Attributes:
        title, about, basis: Quantity, refrigerant, and the heading of its group with the basis.
        value: The number with its unit, as it stands in the table.
        formula, worked: In words and with the numbers; as pieces, each a text or a term.
        words: What has to be said besides.
        inputs: The inputs behind it.
        states: State points of the refrigerant, None where they say nothing about it.
        note: What the state points hold for.
    """

    title: str
    about: str
    basis: str
    value: str
    formula: tuple[str | Term, ...]
    words: str
    inputs: tuple[From, ...]
    states: StateTable | None
    note: str


def slug(group: Group, row: Row) -> str:
    """Return the name of a row in addresses.

    Args:
        group: Its group.
        row: The row.
    """
    return re.sub("[^a-z0-9]+", "-", f"{group.name} {row.label}".lower()).strip("-")


def linked(table: Table, names: tuple[str, ...]) -> Table:
    """Return a table whose cells say where their origin is told.

    Args:
        table: A table of the report.
        names: Designations of its columns. [-]
    """

    def row_of(group: Group, row: Row) -> Row:
        name = slug(group, row)
        cells = tuple(
            replace(cell, href=f"/how/{who}/{name}") if cell.text != MISSING else cell
            for cell, who in zip(row.cells, names, strict=True)
        )
        return replace(row, cells=cells)

    groups = tuple(replace(group, rows=tuple(row_of(group, row) for row in group.rows)) for group in table.groups)
    return replace(table, groups=groups)


def how(
    comparison: Comparison, tables: tuple[Table, ...], name: str, quantity_name: str, units: UnitSystem, state: State
) -> How | None:
    """Return how a number of the tables comes about.

    Args:
        comparison: The result that the tables show.
        tables: The tables.
        name: Designation of the refrigerant. [-]
        quantity_name: Name of the row as `slug` gives it. [-]
        units: The reader's units.
        state: The state, for where an input comes from.
    Returns: All about it; None if there is no such number.
    """
    place = next((i for i, e in enumerate(comparison.entries) if e.refrigerant.designation == name), None)
    found = next(((g, r) for t in tables for g in t.groups for r in g.rows if slug(g, r) == quantity_name), None)
    if place is None or found is None:
        return None
    group, row = found
    entry, kind = comparison.entries[place], row.kind.partition(" ")
    value = f"{row.cells[place].text}\N{NO-BREAK SPACE}{row.unit}".strip()
    if kind[0] == "catalogue":
        words, inputs = _catalogue(getattr(entry.refrigerant, kind[2])), ()
        return How(row.label, entry.refrigerant.display_name, group.heading, value, (), words, inputs, None, "")
    told = formulas()["rows"].get(quantity_name, {})
    book = Book(comparison, tables, place, units)
    keys = formulas()["inputs"].get(group.name.partition("-")[0], ())
    states = state_table(entry, units) if entry.points and group.name not in ("is", "limits") else None
    note = "The points are those at the plant's temperatures; where the plant settles they lie elsewhere."
    return How(
        title=row.label,
        about=entry.refrigerant.display_name,
        basis=group.heading,
        value=value,
        formula=book.pieces(told["formula"]) if told.get("formula") and entry.duty else (),
        words=told.get("words", "" if told else NO_FORMULA),
        inputs=tuple(input_from(comparison, key, units, state) for key in keys),
        states=states,
        note=note if group.name.startswith("plant") and states else "",
    )


@cache
def formulas() -> Mapping[str, Any]:
    """Return the formulas, by row, and the inputs, by group."""
    return tomllib.loads(Path(__file__).with_name("how.toml").read_text(encoding="utf-8"))


def _catalogue(value: Value) -> str:
    """Return where a value of the catalogue comes from, in words."""
    origin_text = f"{source(value.source).title} ({basis_text(value.basis, value.confidence)})" if value.source else ""
    parts = [f"Catalogue value. Source: {origin_text or 'none found'}.", *doubts(value)]
    return " ".join(f"{part[:1].upper()}{part[1:]}".removesuffix(".") + "." for part in parts)


def input_from(comparison: Comparison, key: str, units: UnitSystem, state: State) -> From:
    """Return an input behind a number.

    Args:
        comparison: The result.
        key: Its full key. [-]
        units: The reader's units.
        state: The state, for where it comes from.
    """
    case, found = comparison.case, quantity(comparison.case, key)
    default = next((item.shown_text for item in case.defaults if item.key == key), "")
    used = units.with_unit(*found, decimals=1 if found[0] == "fraction" else None) if found else ""
    return From(key, meaning(key), case.given.get(key, default), used, origin(state, case, key))


class Book:
    """Looks up the quantities that formulas name, for one refrigerant of a result."""

    def __init__(self, comparison: Comparison, tables: tuple[Table, ...], place: int, units: UnitSystem) -> None:
        self.comparison, self.units, self.place = comparison, units, place
        self.rows = {slug(g, r): r for t in tables for g in t.groups for r in g.rows}

    def value(self, name: str) -> float:
        """Return a quantity by its name in a formula. [SI]

        Args:
            name: A row, key, state point or extra, with "today:" before it for the refrigerant in the plant. [-]
        Raises: KeyError for an unknown name; TypeError if it has no number.
        """
        return float(self._found(name)[2])

    def pieces(self, formula: str) -> tuple[str | Term, ...]:
        """Return a formula as texts and terms in turn.

        Args:
            formula: With names in brackets. [-]
        """
        parts: list[str | Term] = []
        end = 0
        for match in QUANTITY.finditer(formula):
            if text := formula[end : match.start()]:
                parts.append(text)
            parts.append(self._term(match[1]))
            end = match.end()
        return (*parts, formula[end:]) if formula[end:] else tuple(parts)

    def _term(self, name: str) -> Term:
        label, kind, value, href = self._found(name)
        return Term(label, self.units.with_unit(kind, value), href)

    def _found(self, name: str) -> tuple[str, str, Any, str]:
        """Return label, kind, value in SI, and where it is told, of a quantity by its name."""
        at_today = name.startswith("today:")
        plain, place = name.removeprefix("today:"), 0 if at_today else self.place
        entry = self.comparison.entries[place]
        whose = f", {entry.refrigerant.display_name} today" if at_today else ""
        if row := self.rows.get(plain):
            href = f"/how/{entry.refrigerant.designation}/{plain}"
            return (
                row.label.lower() + whose if not row.label[:2].isupper() else row.label + whose,
                row.kind,
                row.values[place],
                href,
            )
        if match := POINT.fullmatch(plain):
            return self._point(entry, match[1], int(match[2]))
        if "." in plain:
            kind, value = quantity(self.comparison.case, plain) or ("", None)
            return meaning(plain).rstrip(".").lower(), kind, value, ""
        label, kind, take = EXTRAS[plain]
        return label + whose, kind, take(self.comparison, entry), ""

    def _point(self, entry: Entry, letter: str, number: int) -> tuple[str, str, float, str]:
        kind, attribute, word = POINT_KINDS[letter]
        value = getattr(entry.points[number - 1], attribute)
        if letter == "h":
            assert entry.lines is not None
            value -= entry.lines.zeros[self.units.name].h_J_per_kg
        return f"{word} at point {number}", kind, value, "#states"


def _plant(name: str, basis: str = "full") -> Callable[[Comparison, Entry], Any]:
    return lambda comparison, entry: getattr(getattr(entry.plant, basis), name)


def _per_kilogram(basis: str) -> Callable[[Comparison, Entry], Any]:
    def take(comparison: Comparison, entry: Entry) -> Any:
        part: Any = getattr(entry, basis)
        found = part.full if basis == "plant" else part
        return found.power_W / found.mass_flow_kg_per_s

    return take


Extra = tuple[str, str, Callable[[Comparison, Entry], Any]]
EXTRAS: Mapping[str, Extra] = {
    "ambient": ("air pressure at the plant", "pressure", lambda c, e: c.case.plant.ambient_pressure_Pa),
    "work": ("work of compression", "specific enthalpy", _per_kilogram("duty")),
    "volumetric-efficiency": (
        "volumetric efficiency",
        "fraction",
        lambda c, e: e.duty and e.duty.suction_volume_flow_m3_per_s / e.duty.swept_volume_m3_per_s,
    ),
    "swept-volume": ("swept volume", "volume flow", lambda c, e: c.swept_volume_m3_per_s),
    "plant-mass-flow": ("mass flow where it settles", "mass flow", _plant("mass_flow_kg_per_s")),
    "plant-effect": ("refrigerating effect there", "specific enthalpy", _plant("refrigerating_effect_J_per_kg")),
    "plant-work": ("work of compression there", "specific enthalpy", _per_kilogram("plant")),
    "plant-p-evap": ("evaporating pressure there, absolute", "pressure", _plant("p_evap_Pa")),
    "plant-p-cond": ("condensing pressure there, absolute", "pressure", _plant("p_cond_Pa")),
    "same-cooling": ("today's cooling at full", "cooling", _plant("cooling_W", "same_cooling")),
    "same-power": ("power at the same cooling", "power", _plant("power_W", "same_cooling")),
}
