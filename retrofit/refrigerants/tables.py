"""Read the catalogue's own data files: sources.toml, disputes.toml and the CSV tables.

First row of a CSV table: column names. Second row: units, or "text", or "key" for a source column. Each
value column is followed by its source column, which holds keys of sources.toml parted by "; ", the one the
figure was taken from first. An empty cell is not known. Marks before or in place of a number:

    NF     no lower flammability limit: no flame propagation in the test of the class
    <, >   the source prints only a bound
    C      ceiling value
    S      sublimes: the temperature belongs to solid and vapour, there is no liquid at 1 atm
"""

from __future__ import annotations

import csv
from dataclasses import replace
from functools import cache
from pathlib import Path
from typing import Any, NamedTuple

from retrofit.refrigerants.records import Dispute, Source, Value

FOLDER = Path(__file__).parent

# table unit -> (SI unit, factor, offset)
_SI = {
    "degC": ("K", 1.0, 273.15),
    "g/mol": ("kg/mol", 1e-3, 0.0),
    "g/m3": ("kg/m3", 1e-3, 0.0),
    "kg/m3": ("kg/m3", 1.0, 0.0),
    "vol %": ("vol %", 1.0, 0.0),
    "ppm": ("ppm", 1.0, 0.0),
    "-": ("", 1.0, 0.0),
}


class Table(NamedTuple):
    """A data table: unit of each column, and one row of texts for each designation."""

    units: dict[str, str]
    rows: dict[str, dict[str, str]]

    def value(self, designation: str, column: str) -> Value:
        """Return the cell as a value in SI with its provenance.

        Args:
            designation: Refrigerant as the table writes it. [-]
            column: Name of a value column. [-]
        Returns: The value; an empty one where the table has no such row or the cell is blank.
        Raises: KeyError if the table has no such column; ValueError if the cell is malformed.
        """
        unit = self.units[column]
        row = self.rows.get(designation)
        if row is None or not row[column]:
            return Value(None, _SI[unit][0] if unit in _SI else "")
        plain = _parse(row[column], unit)
        return _with_source(plain, row[column + "_source"])


@cache
def read_table(name: str) -> Table:
    """Read one CSV table of this room. Raises OSError if the file is missing."""
    with (FOLDER / f"{name}.csv").open(encoding="utf-8", newline="") as file:
        rows = list(csv.DictReader(file))
    return Table(units=rows[0], rows={row["designation"]: row for row in rows[1:]})


@cache
def read_sources() -> dict[str, Source]:
    """Read the bibliography, by key."""
    return {key: Source(key=key, **entry) for key, entry in read_toml("sources").items()}


@cache
def read_disputes() -> dict[str, tuple[Dispute, ...]]:
    """Read the disputes, by designation."""
    found: dict[str, tuple[Dispute, ...]] = {}
    for entry in read_toml("disputes")["dispute"]:
        names = entry.pop("refrigerants")
        for name in names:
            found[name] = (*found.get(name, ()), Dispute(**entry))
    return found


def read_toml(name: str) -> dict[str, Any]:
    """Read one TOML file of this room."""
    import tomllib  # 4 ms, and importing this room must cost next to nothing

    with (FOLDER / f"{name}.toml").open("rb") as file:
        return tomllib.load(file)


def _parse(cell: str, unit: str) -> Value:
    if unit not in _SI:
        return Value(cell, "" if unit == "text" else unit)
    si = _SI[unit][0]
    if cell == "NF":
        return Value(None, si, status="not applicable", note="no lower limit: no flame propagation in the test")
    if cell[0] in "<>":
        word = "below" if cell[0] == "<" else "above"
        return Value(None, si, status="bound", note=f"stated only as {word} {cell[1:]}")
    if cell[0] == "S":
        note = f"sublimes at {cell[1:]} °C: there is no liquid at 1 atm"
        return Value(None, si, status="not applicable", note=note)
    if cell[0] == "C":
        return Value(_number(cell[1:], unit), si, status="ceiling", note="ceiling value")
    return Value(_number(cell, unit), si)


def _number(cell: str, unit: str) -> float:
    _, factor, offset = _SI[unit]
    return round(float(cell) * factor + offset, 12)  # -26 + 273.15 is 247.15, without binary dust


def _with_source(plain: Value, keys: str) -> Value:
    first, *others = keys.split("; ")
    source = read_sources()[first]
    also = f"also in {', '.join(others)}" if others else ""
    note = "; ".join(part for part in (plain.note, also) if part)
    return replace(plain, source=first, basis=source.basis, confidence=source.confidence, note=note)
