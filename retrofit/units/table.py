"""The closed table of units, with the exact definitions that their factors come from."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeVar

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    FloatOrArray = TypeVar("FloatOrArray", float, NDArray[np.float64])

# Exact by definition; NIST Special Publication 811 (2008), appendix B, prints each in SI.
FOOT_M = 0.3048
INCH_M = 0.0254
POUND_KG = 0.453_592_37
STANDARD_GRAVITY_M_PER_S2 = 9.806_65
BTU_J = 1055.055_852_62  # International Table Btu: 1 Btu/lb = 2326 J/kg exactly
ZERO_C_K = 273.15
ZERO_FAHRENHEIT_R = 459.67
RANKINE_K = 5.0 / 9.0
HOUR_S = 3600.0
MINUTE_S = 60.0
# Derived from the above.
POUND_FORCE_N = POUND_KG * STANDARD_GRAVITY_M_PER_S2
PSI_PA = POUND_FORCE_N / INCH_M**2
HORSEPOWER_W = 550.0 * FOOT_M * POUND_FORCE_N  # 550 ft lbf/s, not the metric horsepower
BTU_PER_HOUR_W = BTU_J / HOUR_S
TON_W = 12_000.0 * BTU_PER_HOUR_W  # ton of refrigeration: 12 000 Btu/h
CUBIC_FOOT_M3 = FOOT_M**3


@dataclass(frozen=True)
class Unit:
    """A unit: SI value = (number + zero) * factor."""

    factor: float
    zero: float = 0.0

    def to_SI(self, number: FloatOrArray) -> FloatOrArray:
        """Return the SI value of a number, or an array of numbers, given in this unit."""
        return (number + self.zero) * self.factor

    def from_SI(self, value: FloatOrArray) -> FloatOrArray:
        """Return the number in this unit that an SI value, or an array of them, amounts to."""
        return value / self.factor - self.zero


@dataclass(frozen=True)
class Kind:
    """A kind of quantity: its name with article, how to write one, and its units by spelling."""

    name: str
    example_unit: str
    example: str
    units: Mapping[str, Unit]
    shown: str  # the units as a message lists them

    @property
    def how(self) -> str:
        """Say how a quantity of this kind is written."""
        return f'write it with {self.shown}, such as "{self.example}"'


CELSIUS = Unit(1.0, ZERO_C_K)
FAHRENHEIT = Unit(RANKINE_K, ZERO_FAHRENHEIT_R)
KELVIN = Unit(1.0)
RANKINE = Unit(RANKINE_K)
PRESSURE_BASES = {"Pa": 1.0, "kPa": 1e3, "MPa": 1e6, "bar": 1e5, "mbar": 1e2, "psi": PSI_PA}
_PRESSURES = {base + mark: Unit(factor) for base, factor in PRESSURE_BASES.items() for mark in "ag"}

KINDS: Mapping[str, Kind] = {
    "temperature": Kind(
        "a temperature",
        "degC",
        "-8 degC",
        {"degC": CELSIUS, "C": CELSIUS, "degF": FAHRENHEIT, "F": FAHRENHEIT, "K": KELVIN, "degK": KELVIN},
        "degC, degF or K",
    ),
    "temperature difference": Kind(
        "a temperature difference",
        "K",
        "8 K",
        {"K": KELVIN, "degK": KELVIN, "R": RANKINE, "degR": RANKINE, "Fdeg": RANKINE},
        "K, or R (Fahrenheit-sized degrees)",
    ),
    "pressure": Kind(
        "a pressure",
        "bar g",
        "18.0 bar g",
        _PRESSURES,
        "bar, kPa, MPa or psi and then a (absolute) or g (gauge)",
    ),
    "pressure difference": Kind(
        "a pressure difference",
        "bar",
        "0.3 bar",
        {base: Unit(factor) for base, factor in PRESSURE_BASES.items()},
        "bar, kPa, Pa, mbar, MPa or psi, without a or g",
    ),
    "power": Kind(
        "a power",
        "kW",
        "120 kW",
        {
            "kW": Unit(1e3),
            "W": Unit(1.0),
            "MW": Unit(1e6),
            "ton": Unit(TON_W),
            "TR": Unit(TON_W),
            "Btu/h": Unit(BTU_PER_HOUR_W),
            "hp": Unit(HORSEPOWER_W),
        },
        "kW, W, ton (12 000 Btu/h), Btu/h or hp",
    ),
    "mass": Kind(
        "a mass",
        "kg",
        "260 kg",
        {"kg": Unit(1.0), "g": Unit(1e-3), "lb": Unit(POUND_KG)},
        "kg, g or lb",
    ),
    "mass flow": Kind(
        "a mass flow",
        "kg/h",
        "3900 kg/h",
        {"kg/h": Unit(1.0 / HOUR_S), "kg/s": Unit(1.0), "lb/h": Unit(POUND_KG / HOUR_S)},
        "kg/h, kg/s or lb/h",
    ),
    "volume flow": Kind(
        "a volume flow",
        "m3/h",
        "201 m3/h",
        {
            "m3/h": Unit(1.0 / HOUR_S),
            "m3/s": Unit(1.0),
            "l/s": Unit(1e-3),
            "L/s": Unit(1e-3),
            "cfm": Unit(CUBIC_FOOT_M3 / MINUTE_S),
        },
        "m3/h, m3/s, l/s or cfm",
    ),
    "length": Kind(
        "a length",
        "m",
        "250 m",
        {"m": Unit(1.0), "mm": Unit(1e-3), "um": Unit(1e-6), "ft": Unit(FOOT_M), "in": Unit(INCH_M)},
        "m, mm, um, ft or in",
    ),
    "volume": Kind(
        "a volume",
        "m3",
        "250 l",
        {"m3": Unit(1.0), "l": Unit(1e-3), "L": Unit(1e-3), "ft3": Unit(CUBIC_FOOT_M3)},
        "m3, l or ft3",
    ),
    "velocity": Kind(
        "a velocity",
        "m/s",
        "4.5 m/s",
        {"m/s": Unit(1.0), "ft/min": Unit(FOOT_M / MINUTE_S), "fpm": Unit(FOOT_M / MINUTE_S)},
        "m/s or ft/min",
    ),
    "area": Kind(
        "an area",
        "m2",
        "1500 m2",
        {"m2": Unit(1.0), "ft2": Unit(FOOT_M**2)},
        "m2 or ft2",
    ),
    "specific heat": Kind(
        "a specific heat",
        "kJ/(kg K)",
        "4.19 kJ/(kg K)",
        {
            "kJ/(kgK)": Unit(1e3),
            "J/(kgK)": Unit(1.0),
            "kJ/kgK": Unit(1e3),
            "J/kgK": Unit(1.0),
            "Btu/(lbR)": Unit(BTU_J / POUND_KG / RANKINE_K),
            "Btu/(lbF)": Unit(BTU_J / POUND_KG / RANKINE_K),
        },
        "kJ/(kg K), J/(kg K) or Btu/(lb R)",
    ),
    "current": Kind("a current", "A", "92 A", {"A": Unit(1.0), "mA": Unit(1e-3), "kA": Unit(1e3)}, "A"),
    "voltage": Kind("a voltage", "V", "400 V", {"V": Unit(1.0), "kV": Unit(1e3)}, "V or kV"),
    "hours per day": Kind(
        "a number of hours per day", "h", "16 h", {"": Unit(1.0), "h": Unit(1.0)}, "a bare number (16) or with h"
    ),
    "energy": Kind(
        "an energy",
        "kWh",
        "300000 kWh",
        {"kWh": Unit(3.6e6), "MWh": Unit(3.6e9), "GJ": Unit(1e9), "MJ": Unit(1e6)},
        "kWh, MWh, MJ or GJ",
    ),
    "grid factor": Kind(
        "a grid factor",
        "kg/kWh",
        "0.35 kg/kWh",
        {
            "kg/kWh": Unit(1.0 / 3.6e6),
            "g/kWh": Unit(1e-3 / 3.6e6),
            "lb/kWh": Unit(POUND_KG / 3.6e6),
            "t/MWh": Unit(1.0 / 3.6e6),
        },
        "kg/kWh, g/kWh, t/MWh or lb/kWh",
    ),
    "years": Kind(
        "a number of years", "years", "8 years", {"": Unit(1.0), "years": Unit(1.0), "year": Unit(1.0)}, "years"
    ),
    "fraction": Kind("a fraction", "%", "68 %", {"": Unit(1.0), "%": Unit(1e-2)}, "a bare number (0.68) or with %"),
}
