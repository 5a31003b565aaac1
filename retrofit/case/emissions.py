"""What leaks, what the grid emits, and what becomes of the charge."""

from __future__ import annotations

import datetime
from dataclasses import dataclass
from typing import Annotated, Any, NamedTuple

from pydantic import Field

from retrofit.case.dates import day_of
from retrofit.case.numbers import Number
from retrofit.case.table import Items, Table, WhyDefault, key
from retrofit.case.values import Choice, FileValue, Quantity, Text
from retrofit.errors import QuantityError
from retrofit.units import described

MOST_ENTRIES = 400
EDITIONS = ("AR4", "AR5", "AR6")
_MASS = Quantity("mass", "0 kg", "1000000 kg", "a plant holds no more", above_low=True)
_RATE = Quantity("fraction", "0 %", "100 %", "a share of the full charge", example="15 %")
_FACTOR = Quantity("grid factor", "0 kg/kWh", "3 kg/kWh", "no grid emits more", example="0.35 kg/kWh")
_YEAR = Number(1980, 2100, "plants run within it", whole=True, example="2027")


class TopUp(NamedTuple):
    """Refrigerant added on a day. [kg]"""

    day: datetime.date
    mass_kg: float


class GridYear(NamedTuple):
    """What the grid emits from a year on. [kg/J]"""

    year: int
    factor_kg_per_J: float


@dataclass(frozen=True)
class TopUpValue(FileValue):
    """A list of a day and a mass."""

    def sample(self) -> str:
        """Return an entry, as text."""
        return '["2026-03-02", "18 kg"]'

    def read(self, value: object, p_ambient_Pa: float | None = None) -> TopUp:
        """Return the entry."""
        if not isinstance(value, list) or len(value) != 2:
            raise QuantityError(f"{described(value)} stands where a day and a mass are needed, as in {self.sample()}")
        return TopUp(day_of(value[0]), _MASS.read(value[1]))

    def json_schema(self) -> dict[str, Any]:
        """Return a list of two texts."""
        return {"type": "array", "prefixItems": [{"type": "string"}, _MASS.json_schema()], "minItems": 2, "maxItems": 2}


@dataclass(frozen=True)
class GridYearValue(FileValue):
    """A list of a year and a grid factor."""

    def sample(self) -> str:
        """Return an entry, as text."""
        return '[2027, "0.30 kg/kWh"]'

    def read(self, value: object, p_ambient_Pa: float | None = None) -> GridYear:
        """Return the entry."""
        if not isinstance(value, list) or len(value) != 2:
            wanted = "a year and a grid factor are needed"
            raise QuantityError(f"{described(value)} stands where {wanted}, as in {self.sample()}")
        return GridYear(int(_YEAR.read(value[0])), _FACTOR.read(value[1]))

    def json_schema(self) -> dict[str, Any]:
        """Return a list of a number and a text."""
        items = [_YEAR.json_schema(), _FACTOR.json_schema()]
        return {"type": "array", "prefixItems": items, "minItems": 2, "maxItems": 2}


_TOP_UP, _GRID_YEAR = TopUpValue(), GridYearValue()


class Emissions(Table):
    """What is needed for the warming of the plant over its remaining life."""

    gwp_edition: Annotated[
        str, Choice(EDITIONS), WhyDefault("national inventories report with it; name another if your report does")
    ] = key("gwp_edition", "IPCC report whose GWP over 100 years counts.", "AR5")
    leak_log: Annotated[
        Annotated[tuple[Annotated[TopUp, _TOP_UP], ...], Field(min_length=2, max_length=MOST_ENTRIES)] | None,
        Items(
            _TOP_UP, f'a list of 2 to {MOST_ENTRIES} top-ups, as in [["2025-03-02", "18 kg"], ["2026-03-01", "20 kg"]]'
        ),
    ] = key("leak_log", "Refrigerant added, by day; the first entry begins the count.", None)
    leak_rate: Annotated[float | None, _RATE] = key(
        "leak_rate", "Share of the charge lost in a year, if there is no log.", None
    )
    leak_rate_after: Annotated[float | None, _RATE] = key(
        "leak_rate_after", "The same after a change, for every candidate; as today if left out.", None
    )
    recovery_at_end: Annotated[
        float, Quantity("fraction", "0 %", "100 %", "a share of the charge"),
        WhyDefault("middle of the range 70 % to 95 % that inventories use; from memory"),
    ] = key("recovery_at_end", "Share of the charge recovered when the plant is taken out of use.", "85 %")  # fmt: skip
    lost_at_change: Annotated[
        float, Quantity("fraction", "0 %", "100 %", "a share of the old charge"),
        WhyDefault("what stays in oil, dead legs and hoses at a careful recovery; our own assumption"),
    ] = key("lost_at_change", "Share of the old charge lost when it is taken out.", "5 %")  # fmt: skip
    old_charge: Annotated[
        str, Choice(("recovered", "released")), WhyDefault("law asks for recovery in most places")
    ] = key("old_charge", "What becomes of the rest of the old charge.", "recovered")
    grid_factor_kg_per_J: Annotated[float | None, _FACTOR] = key(
        "grid_factor", "CO2 equivalent emitted for each kWh of electricity.", None
    )
    grid_years: Annotated[
        Annotated[tuple[Annotated[GridYear, _GRID_YEAR], ...], Field(min_length=1, max_length=80)] | None,
        Items(_GRID_YEAR, 'a list of years and factors, as in [[2027, "0.30 kg/kWh"], [2030, "0.20 kg/kWh"]]'),
    ] = key("grid_years", "The factor from each year on, until the next one given.", None)
    grid_source: Annotated[str | None, Text(200)] = key("grid_source", "Where the grid factor comes from.", None)
