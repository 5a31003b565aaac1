"""A year of the plant: its weather, its load, and what runs beside the compressors."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Annotated, Any, NamedTuple

from pydantic import Field

from retrofit.case.numbers import Number
from retrofit.case.table import Items, Table, WhyDefault, key
from retrofit.case.values import Choice, FileValue, Quantity, Text
from retrofit.errors import QuantityError
from retrofit.units import described

HOURS_OF_A_YEAR = 8760
MOST_BINS = 200
_AIR = Quantity("temperature", "-60 degC", "60 degC", "outdoor air lies within it", example="10 degC")
_SWING = Quantity("temperature difference", "0 K", "40 K", "climates swing less")
_LOAD = Quantity("power", "0 W", "1000 MW", "no single plant does more", shown="cooling")
_POWER = Annotated[float | None, Quantity("power", "0 W", "100 MW", "no single plant takes more", example="3 kW")]
_HOUR = Number(0, 24, "a day has no more", example="7")
FOLLOWS = ("constant", "dry bulb", "wet bulb", "water")


class Bin(NamedTuple):
    """Hours of the year at one outdoor temperature, and how many of them lie by night, if that is told."""

    T_air_K: float
    hours: float
    night_hours: float | None = None


@dataclass(frozen=True)
class BinValue(FileValue):
    """A list of a temperature and its hours; or of its hours by day and by night."""

    hours = Number(0, HOURS_OF_A_YEAR, "a year has 8760 hours", example="340")

    def sample(self) -> str:
        """Return a bin, as text."""
        return '["12 degC", 340]'

    def read(self, value: object, p_ambient_Pa: float | None = None) -> Bin:
        """Return the bin."""
        if not isinstance(value, list) or len(value) not in (2, 3):
            wanted = "a temperature and its hours, or its hours by day and by night, are needed"
            raise QuantityError(f"{described(value)} stands where {wanted}, as in {self.sample()}")
        T_air_K, hours = _AIR.read(value[0]), [float(self.hours.read(item)) for item in value[1:]]
        return Bin(T_air_K, sum(hours), hours[1] if len(hours) > 1 else None)

    def json_schema(self) -> dict[str, Any]:
        """Return a list of a text and one or two numbers."""
        items = [_AIR.json_schema(), self.hours.json_schema(), self.hours.json_schema()]
        return {"type": "array", "prefixItems": items, "minItems": 2, "maxItems": 3}


_BIN = BinValue()


class Climate(Table):
    """An invented climate: a sine over the year and one over the day."""

    mean_K: Annotated[float, _AIR] = key("mean", "Mean temperature of the year.")
    yearly_swing_K: Annotated[float, _SWING] = key("yearly_swing", "Warmest day's mean above that of the year.")
    daily_swing_K: Annotated[float, _SWING] = key("daily_swing", "Warmest hour above the mean of its day.", "4 K")
    warmest_day: Annotated[
        int,
        Number(1, 365, "a day of the year", whole=True, example="200"),
        WhyDefault("late July, north of the equator"),
    ] = key("warmest_day", "Day of the year that is warmest.", 200)


class Year(Table):
    """A year of the plant; one of `weather`, `bins` and `climate` says how warm it is outside."""

    weather: Annotated[str | None, Text(200)] = key(
        "weather", "File beside the case with 8760 hours: hour, dry_bulb, and wet_bulb or water if needed.", None
    )
    bins: Annotated[
        Annotated[tuple[Annotated[Bin, _BIN], ...], Field(min_length=1, max_length=MOST_BINS)] | None,
        Items(_BIN, f'a list of 1 to {MOST_BINS} bins, as in [["2 degC", 4000], ["12 degC", 4760]]'),
    ] = key("bins", "Outdoor temperatures and their hours, 8760 in all.", None)
    climate: Climate | None = key("climate", "An invented climate instead.", None)
    condenser_follows: Annotated[str, Choice(FOLLOWS), WhyDefault("an air-cooled condenser draws outdoor air")] = key(
        "condenser_follows", "What the inlet of the condenser follows.", "dry bulb"
    )
    condenser_approach_K: Annotated[
        float, Quantity("temperature difference", "-20 K", "40 K", "condensers lie within it"),
        WhyDefault("the condenser draws what it follows, unwarmed", moot_if=("condenser_follows", "constant")),
    ] = key("condenser_approach", "Inlet of the condenser above what it follows.", "0 K")  # fmt: skip
    evaporator_follows: Annotated[str, Choice(FOLLOWS), WhyDefault("what is cooled keeps its temperature all year")] = (
        key("evaporator_follows", "What the inlet of the evaporator follows.", "constant")
    )
    evaporator_approach_K: Annotated[
        float, Quantity("temperature difference", "-40 K", "40 K", "evaporators lie within it"),
        WhyDefault("the evaporator draws what it follows", moot_if=("evaporator_follows", "constant")),
    ] = key("evaporator_approach", "Inlet of the evaporator above what it follows.", "0 K")  # fmt: skip
    serves: Annotated[str, Choice(("cooling", "heating")), WhyDefault("the plant is there to cool")] = key(
        "serves", "Whether the load is cooling, or heat from the condenser.", "cooling"
    )
    peak_load_W: Annotated[float | None, _LOAD] = key(
        "peak_load", "Largest load of the year; the duty if left out.", None
    )
    peak_at_K: Annotated[float | None, _AIR] = key(
        "peak_at", "Outdoor temperature at which the peak load begins.", None
    )
    base_load_W: Annotated[float | None, _LOAD] = key(
        "base_load", "Smallest load of the year; the peak if left out.", None
    )
    base_at_K: Annotated[float | None, _AIR] = key(
        "base_at", "Outdoor temperature at which the base load begins.", None
    )
    day_from: Annotated[float | None, _HOUR] = key("day_from", "Hour at which the day's load begins.", None)
    day_to: Annotated[float | None, _HOUR] = key("day_to", "Hour at which the day's load ends.", None)
    night_load: Annotated[
        float | None, Quantity("fraction", "0 %", "100 %", "the night asks for no more than the day", example="70 %")
    ] = key("night_load", "Load outside these hours, as a share of that by day.", None)
    defrost_power_W: _POWER = key("defrost_power", "Electrical power of defrosting, mean over the year.", None)
    defrost_to_load: Annotated[
        float, Quantity("fraction", "0 %", "100 %", "a share of the defrost heat"),
        WhyDefault("all heat of defrosting has to be cooled away again; a usual upper bound", beside="defrost_power"),
    ] = key("defrost_to_load", "Share of the defrost heat that becomes load.", "100 %")  # fmt: skip
    evaporator_fans_W: _POWER = key("evaporator_fans", "Fans or pumps at the evaporators, running all hours.", None)
    condenser_fans_W: _POWER = key(
        "condenser_fans", "Fans or pumps at the condenser, running with the compressors.", None
    )
    pumps_W: _POWER = key("pumps", "Pumps and other auxiliaries, running all hours.", None)
    lowest_condensing_K: Annotated[
        float | None,
        Quantity("temperature", "-40 degC", "80 degC", "head-pressure controls lie within it", example="25 degC"),
    ] = key("lowest_condensing", "Condensing mean temperature that the head-pressure control does not go below.", None)
    metered_J: Annotated[
        float | None, Quantity("energy", "0 kWh", "1000000 MWh", "no single plant takes more", above_low=True)
    ] = key("metered", "Electricity of a year by the meter, to set beside the computed one.", None)
