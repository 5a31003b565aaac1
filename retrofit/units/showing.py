"""SI numbers to text, in metric or inch-pound units of the trade."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from retrofit.units.table import (
    BTU_J,
    BTU_PER_HOUR_W,
    CELSIUS,
    CUBIC_FOOT_M3,
    FAHRENHEIT,
    FOOT_M,
    HOUR_S,
    INCH_M,
    KELVIN,
    MINUTE_S,
    POUND_KG,
    PSI_PA,
    RANKINE,
    RANKINE_K,
    TON_W,
    Unit,
)

if TYPE_CHECKING:
    from retrofit.units.table import FloatOrArray

MINUS = "\N{MINUS SIGN}"
THOUSANDS_MARK = "\N{NARROW NO-BREAK SPACE}"
MISSING = "\N{EN DASH}"
MOST_DECIMALS = 9


@dataclass(frozen=True)
class Display:
    """How one kind of quantity is shown: unit label, unit, decimals, and digits it must keep.

    `significant` digits are kept for a small value by adding decimals, so that a flow of 0.0123 is
    not shown as 0.0; it is 0 where the zero of the scale is arbitrary or decimals are meant.
    """

    label: str
    unit: Unit
    decimals: int
    significant: int = 3

    def decimals_for(self, values: Iterable[float | None]) -> int:
        """Return one number of decimals for all these SI values: the smallest keeps two digits at least."""
        kept = [value for value in values if value is not None and math.isfinite(value)]
        sizes = [size for size in (abs(self.unit.from_SI(value)) for value in kept) if size > 0.0]
        if not self.significant or not sizes:
            return self.decimals
        for_largest = self.significant - 1 - math.floor(math.log10(max(sizes)))
        for_smallest = 1 - math.floor(math.log10(min(sizes)))
        return min(max(self.decimals, for_largest, for_smallest), MOST_DECIMALS)


@dataclass(frozen=True)
class UnitSystem:
    """One way to show every quantity: `SI` for metric trade units, `IP` for inch-pound ones."""

    name: str
    displays: Mapping[str, Display]

    @property
    def systems(self) -> tuple[UnitSystem, ...]:
        """The systems of which numbers are shown; the axes of a chart are in the first."""
        return (self,)

    def each(self, words: Mapping[str, str]) -> str:
        """Return what a word is in each system that is shown.

        Args:
            words: The word by the name of the system, "si" and "ip". [-]
        """
        return stacked(*(words[system.name] for system in self.systems))

    def label(self, kind: str) -> str:
        """Return the unit as a table heading or an axis writes it; empty for a ratio."""
        return self.displays[kind].label

    def number(self, kind: str, value: FloatOrArray) -> FloatOrArray:
        """Return an SI value, or an array of them, as a number in the unit of `label`."""
        return self.displays[kind].unit.from_SI(value)

    def text(
        self,
        kind: str,
        value: float | None,
        *,
        decimals: int | None = None,
        signed: bool = False,
        missing: str = MISSING,
    ) -> str:
        """Return an SI value as a rounded number in this system, without its unit.

        Args:
            kind: A key of `displays`. [-]
            value: The SI value; None or not finite means it is not known. [SI]
            decimals: Decimals to show instead of the usual ones of the kind. [-]
            signed: Write a plus sign before a value above zero. [-]
            missing: What stands for a value that is not known. [-]
        Returns: The number with a true minus and a narrow no-break space between thousands. [-]
        """
        display = self.displays[kind]
        if value is None or not math.isfinite(value):
            return missing
        places = display.decimals_for([value]) if decimals is None else decimals
        return format_number(display.unit.from_SI(value), places, signed=signed)

    def column(self, kind: str, values: Iterable[float | None], *, missing: str = MISSING) -> list[str]:
        """Return SI values as numbers that all carry the same decimals, for one column of a table."""
        kept = list(values)
        places = self.displays[kind].decimals_for(kept)
        return [self.text(kind, value, decimals=places, missing=missing) for value in kept]

    def with_unit(self, kind: str, value: float | None, *, decimals: int | None = None, signed: bool = False) -> str:
        """Return an SI value as number and unit, or `not stated`; arguments as for `text`."""
        if value is None or not math.isfinite(value):
            return "not stated"
        number = self.text(kind, value, decimals=decimals, signed=signed)
        label = self.label(kind)
        return f"{number}\N{NO-BREAK SPACE}{label}" if label else number

    def gauge_text(self, p_Pa: float | None, p_ambient_Pa: float, *, decimals: int | None = None) -> str:
        """Return an absolute pressure [Pa] as a gauge shows it in air of `p_ambient_Pa` [Pa]."""
        p_gauge_Pa = None if p_Pa is None else p_Pa - p_ambient_Pa
        return self.text("gauge pressure", p_gauge_Pa, decimals=decimals)


@dataclass(frozen=True)
class TwoSystems(UnitSystem):
    """Two systems at once: the second in brackets wherever it differs, on a line of its own in a table."""

    first: UnitSystem
    second: UnitSystem

    @property
    def systems(self) -> tuple[UnitSystem, ...]:
        """Both systems."""
        return (self.first, self.second)

    def label(self, kind: str) -> str:
        """Return both units, the second below the first, or the one that they share."""
        return stacked(self.first.label(kind), self.second.label(kind))

    def text(
        self,
        kind: str,
        value: float | None,
        *,
        decimals: int | None = None,
        signed: bool = False,
        missing: str = MISSING,
    ) -> str:
        """Return both numbers, the second below the first; arguments as for `UnitSystem.text`."""
        first = self.first.text(kind, value, decimals=decimals, signed=signed, missing=missing)
        if self._is_shared(kind):
            return first
        return stacked(first, self.second.text(kind, value, decimals=decimals, signed=signed, missing=missing))

    def column(self, kind: str, values: Iterable[float | None], *, missing: str = MISSING) -> list[str]:
        """Return both numbers of each value; arguments as for `UnitSystem.column`."""
        kept = list(values)
        first = self.first.column(kind, kept, missing=missing)
        if self._is_shared(kind):
            return first
        return list(map(stacked, first, self.second.column(kind, kept, missing=missing)))

    def with_unit(self, kind: str, value: float | None, *, decimals: int | None = None, signed: bool = False) -> str:
        """Return both quantities with their units, the second in brackets."""
        first = self.first.with_unit(kind, value, decimals=decimals, signed=signed)
        second = self.second.with_unit(kind, value, decimals=decimals, signed=signed)
        return first if self._is_shared(kind) or first == second else f"{first} ({second})"

    def _is_shared(self, kind: str) -> bool:
        return self.displays[kind].unit == self.second.displays[kind].unit


def stacked(first: str, second: str = "") -> str:
    """Return two texts one above the other, the second in brackets; one of them if there is no other.

    Args:
        first: The upper one. [-]
        second: The lower one. [-]
    """
    return first if second in ("", first) else f"{first}\n({second})"


def format_number(number: float, decimals: int, *, signed: bool = False) -> str:
    """Return a finite number with fixed decimals, a true minus and marked thousands.

    A number that rounds to zero has no sign. Source of the thousands mark: NIST SP 811, 10.5.3.
    >>> format_number(-1234.5, 1).replace(THOUSANDS_MARK, "_")
    '−1_234.5'
    """
    digits = f"{abs(number):,.{decimals}f}".replace(",", THOUSANDS_MARK)
    if not any(digit in digits for digit in "123456789"):
        return digits
    return (MINUS if number < 0 else "+" if signed else "") + digits


_BARE = Unit(1.0)
_PERCENT = Unit(1e-2)

SI = UnitSystem(
    "si",
    {
        "temperature": Display("°C", CELSIUS, 1, 0),
        "temperature difference": Display("K", KELVIN, 1, 0),
        "pressure": Display("bar a", Unit(1e5), 2),
        "gauge pressure": Display("bar g", Unit(1e5), 2, 0),
        "pressure difference": Display("bar", Unit(1e5), 2, 2),
        "cooling": Display("kW", Unit(1e3), 1),
        "heat flow": Display("kW", Unit(1e3), 1),
        "power": Display("kW", Unit(1e3), 1),
        "mass": Display("kg", Unit(1.0), 1),
        "mass flow": Display("kg/h", Unit(1.0 / HOUR_S), 0),
        "volume flow": Display("m³/h", Unit(1.0 / HOUR_S), 1),
        "volume": Display("l", Unit(1e-3), 1),
        "room volume": Display("m³", Unit(1.0), 1),
        "area": Display("m²", Unit(1.0), 1),
        "length": Display("m", Unit(1.0), 0),
        "diameter": Display("mm", Unit(1e-3), 1),
        "velocity": Display("m/s", _BARE, 1),
        "momentum flux": Display("Pa", _BARE, 0),
        "line pressure drop": Display("Pa", _BARE, 0),
        "current": Display("A", _BARE, 1),
        "voltage": Display("V", _BARE, 0),
        "hours per day": Display("h", _BARE, 1, 0),
        "years": Display("years", _BARE, 1, 0),
        "energy": Display("kWh", Unit(3.6e6), 0),
        "grid factor": Display("kg/kWh", Unit(1.0 / 3.6e6), 3),
        "specific enthalpy": Display("kJ/kg", Unit(1e3), 1, 0),
        "specific entropy": Display("kJ/(kg K)", Unit(1e3), 4, 0),
        "specific heat": Display("kJ/(kg K)", Unit(1e3), 3),
        "density": Display("kg/m³", Unit(1.0), 2),
        "volumetric capacity": Display("kJ/m³", Unit(1e3), 0),
        "ratio": Display("", _BARE, 2, 2),
        "fraction": Display("%", _PERCENT, 0, 0),
    },
)

IP = UnitSystem(
    "ip",
    {
        "temperature": Display("°F", FAHRENHEIT, 1, 0),
        "temperature difference": Display("°F", RANKINE, 1, 0),
        "pressure": Display("psia", Unit(PSI_PA), 1),
        "gauge pressure": Display("psig", Unit(PSI_PA), 1, 0),
        "pressure difference": Display("psi", Unit(PSI_PA), 1, 2),
        "cooling": Display("ton", Unit(TON_W), 1),  # of refrigeration, 12 000 Btu/h
        "heat flow": Display("Btu/h", Unit(BTU_PER_HOUR_W), 0),
        "power": Display("kW", Unit(1e3), 1),  # as the meter and the motor's plate give it
        "mass": Display("lb", Unit(POUND_KG), 1),
        "mass flow": Display("lb/h", Unit(POUND_KG / HOUR_S), 0),
        "volume flow": Display("cfm", Unit(CUBIC_FOOT_M3 / MINUTE_S), 1),
        "volume": Display("ft³", Unit(CUBIC_FOOT_M3), 2),
        "room volume": Display("ft³", Unit(CUBIC_FOOT_M3), 0),
        "area": Display("ft²", Unit(FOOT_M**2), 0),
        "length": Display("ft", Unit(FOOT_M), 0),
        "diameter": Display("in", Unit(INCH_M), 2),
        "velocity": Display("ft/min", Unit(FOOT_M / MINUTE_S), 0),
        "momentum flux": Display("lb/(ft s²)", Unit(POUND_KG / FOOT_M), 0),
        "line pressure drop": Display("psi", Unit(PSI_PA), 2),
        "current": Display("A", _BARE, 1),
        "voltage": Display("V", _BARE, 0),
        "hours per day": Display("h", _BARE, 1, 0),
        "years": Display("years", _BARE, 1, 0),
        "energy": Display("kWh", Unit(3.6e6), 0),
        "grid factor": Display("kg/kWh", Unit(1.0 / 3.6e6), 3),
        "specific enthalpy": Display("Btu/lb", Unit(BTU_J / POUND_KG), 2, 0),
        "specific entropy": Display("Btu/(lb °R)", Unit(BTU_J / POUND_KG / RANKINE_K), 5, 0),
        "specific heat": Display("Btu/(lb °R)", Unit(BTU_J / POUND_KG / RANKINE_K), 3),
        "density": Display("lb/ft³", Unit(POUND_KG / CUBIC_FOOT_M3), 3),
        "volumetric capacity": Display("Btu/ft³", Unit(BTU_J / CUBIC_FOOT_M3), 1),
        "ratio": Display("", _BARE, 2, 2),
        "fraction": Display("%", _PERCENT, 0, 0),
    },
)

BOTH = TwoSystems("both", SI.displays, SI, IP)
UNIT_SYSTEMS: Mapping[str, UnitSystem] = {"si": SI, "ip": IP, "both": BOTH}
