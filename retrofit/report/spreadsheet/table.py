"""What a sheet holds, before it is written: columns with units and formats, rows of numbers and texts."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from retrofit.units import UnitSystem

Content = float | str | None
GAPS = "Why cells are empty"


@dataclass(frozen=True)
class Column:
    """A column.

    Attributes:
        name, unit: Heading; the unit stands in brackets behind the name, none if empty.
        decimals: Decimals that its numbers are shown with; the cell keeps them all. None for texts, and for numbers
            of several kinds.
        width: In characters.
    """

    name: str
    unit: str = ""
    decimals: int | None = None
    width: int = 12

    @property
    def heading(self) -> str:
        """Return the heading with the unit."""
        return f"{self.name} ({self.unit})" if self.unit else self.name


@dataclass(frozen=True)
class Sheet:
    """A sheet with one table; its first `names` columns say what a row is and stay in sight."""

    name: str
    names: int
    columns: tuple[Column, ...]
    rows: tuple[tuple[Content, ...], ...]


def quantity_column(name: str, kind: str, values: Iterable[float | None], units: UnitSystem) -> Column:
    """Return the column of a quantity, with the decimals its values need.

    Args:
        name: Its heading without a unit. [-]
        kind: Kind of quantity as `UnitSystem.displays` names it. [-]
        values: What will stand in it. [SI]
        units: The reader's units.
    """
    return Column(name, units.label(kind), units.displays[kind].decimals_for(values))


def in_units(kind: str, value: float | None, units: UnitSystem) -> float | None:
    """Return an SI value in the reader's unit of its kind; None stays None.

    Args:
        kind: Kind of quantity. [-]
        value: The value. [SI]
        units: The reader's units.
    """
    return None if value is None else float(units.number(kind, value))


def as_rows(columns: Iterable[Column], found: Iterable[Mapping[str, Content]]) -> tuple[tuple[Content, ...], ...]:
    """Return rows given by names of columns as tuples in their order; what a row lacks is empty."""
    names = [column.name for column in columns]
    return tuple(tuple(row.get(name) for name in names) for row in found)
