"""Text with units to SI numbers, and SI numbers to text in SI or inch-pound units.

Everything inside the project is SI: kelvin, pascal (absolute), watt, kilogram, metre, second.
This module is the one door in (`parse_quantity`, `parse_pressure`) and out (`UnitSystem`). The unit
table is closed: a unit that is not listed is refused with the nearest one that is.

Spelling: `deg` and the sign `°` mean the same, and so do `3` and `³`; blanks inside a unit do not count
("bar g" = "barg"). Capital and small letters do count. Where only a temperature can stand, plain `C`
and `F` are taken as degrees Celsius and Fahrenheit. A temperature *difference* is written in kelvin
("8 K") or in Fahrenheit-sized degrees ("14.4 R" or "14.4 F deg"); "8 degC" is refused there, because
it is a point on a scale. A pressure always says whether it is absolute (a) or gauge (g).
"""

from __future__ import annotations

import difflib
import math
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeVar

from retrofit.errors import QuantityError

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
ZERO_CELSIUS_K = 273.15
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

STANDARD_ATMOSPHERE_PA = 101_325.0

MINUS = "\N{MINUS SIGN}"
THOUSANDS_MARK = "\N{NARROW NO-BREAK SPACE}"
MISSING = "\N{EN DASH}"
LONGEST_QUANTITY = 60  # characters; a longer text is no quantity
LARGEST_BARE_NUMBER = 1e15


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


_CELSIUS = Unit(1.0, ZERO_CELSIUS_K)
_FAHRENHEIT = Unit(RANKINE_K, ZERO_FAHRENHEIT_R)
_KELVIN = Unit(1.0)
_PRESSURE_BASES = {"Pa": 1.0, "kPa": 1e3, "MPa": 1e6, "bar": 1e5, "mbar": 1e2, "psi": PSI_PA}
_PRESSURES = {base + mark: Unit(factor) for base, factor in _PRESSURE_BASES.items() for mark in "ag"}

KINDS: Mapping[str, Kind] = {
    "temperature": Kind(
        "a temperature",
        "degC",
        "-8 degC",
        {"degC": _CELSIUS, "C": _CELSIUS, "degF": _FAHRENHEIT, "F": _FAHRENHEIT, "K": _KELVIN},
        "degC, degF or K",
    ),
    "temperature difference": Kind(
        "a temperature difference",
        "K",
        "8 K",
        {"K": _KELVIN, "R": Unit(RANKINE_K), "degR": Unit(RANKINE_K), "Fdeg": Unit(RANKINE_K)},
        "K, or R (Fahrenheit-sized degrees)",
    ),
    "pressure": Kind(
        "a pressure",
        "bar g",
        "18.0 bar g",
        _PRESSURES,
        "bar, kPa, MPa or psi and then a (absolute) or g (gauge)",
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
    "length": Kind("a length", "m", "250 m", {"m": Unit(1.0), "ft": Unit(FOOT_M)}, "m or ft"),
    "volume": Kind(
        "a volume",
        "m3",
        "250 l",
        {"m3": Unit(1.0), "l": Unit(1e-3), "L": Unit(1e-3), "ft3": Unit(CUBIC_FOOT_M3)},
        "m3, l or ft3",
    ),
    "fraction": Kind(
        "a fraction", "%", "68 %", {"": Unit(1.0), "%": Unit(1e-2)}, "a bare number (0.68) or with %"
    ),
}

# Written by people who mean a difference: a point on a scale.
_SCALE_POINTS = frozenset({"degC", "degF", "C", "F"})

_BLANKS = re.compile(r"[\s\u00a0\u2009\u202f]+")
_NUMBER = re.compile(r"([+\u2212-]?)([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?")
_NOT_FINITE = re.compile(r"[+\u2212-]?(nan|inf|infinity)\b", re.IGNORECASE)


def shown(text: str, longest: int = LONGEST_QUANTITY) -> str:
    """Return a text fit to be echoed: cut to a length, what cannot be printed escaped.

    Args:
        text: What a user wrote; may hold control characters. [-]
        longest: Characters kept. [-]
    Returns: The text without anything a terminal could obey. [-]
    """
    cut = text if len(text) <= longest else text[:longest] + "…"
    return "".join(c if c.isprintable() else c.encode("unicode_escape").decode("ascii") for c in cut)


def quoted(text: str) -> str:
    """Return a text in double quotation marks, made fit to be echoed."""
    return f'"{shown(text)}"'


def listed(words: Iterable[str], last: str = "or") -> str:
    """Return words as a list in prose: `a, b or c`."""
    items = list(words)
    return items[0] if len(items) == 1 else f"{', '.join(items[:-1])} {last} {items[-1]}"


def close_to(word: str, allowed: Iterable[str]) -> str:
    """Return `, did you mean ...?` for a misspelt word, or nothing if no allowed word is near."""
    by_lower = {candidate.lower(): candidate for candidate in allowed}
    near = difflib.get_close_matches(word.lower()[:LONGEST_QUANTITY], by_lower, n=1, cutoff=0.6)
    return f', did you mean "{by_lower[near[0]]}"?' if near else ""


def parse_quantity(value: object, kind: str) -> float:
    """Return the SI value of a text with a unit.

    Args:
        value: The text, such as "-8 degC"; a fraction may also be a number. [-]
        kind: A key of `KINDS` other than "pressure", which has its own function. [-]
    Returns: The quantity. [K, W, kg, kg/s, m³/s, m, m³ or -]
    Raises: QuantityError if it is no quantity of that kind; the message says how to write one.
    Source: factors of NIST SP 811 (2008), appendix B; no range is checked here.
    >>> parse_quantity("-8 degC", "temperature")
    265.15
    """
    if kind == "pressure":
        raise ValueError("a pressure is absolute or gauge: use parse_pressure")
    number, unit = _number_and_unit(value, KINDS[kind])
    if kind == "temperature difference" and unit in _SCALE_POINTS:
        raise QuantityError(_point_for_difference(str(value), number, unit))
    return _converted(str(value), number, _unit_of(str(value), unit, KINDS[kind]))


@dataclass(frozen=True)
class Pressure:
    """A pressure as written: its value, and whether it counts from the air around it."""

    value_Pa: float
    is_gauge: bool

    def absolute_Pa(self, p_ambient_Pa: float) -> float:
        """Return the absolute pressure [Pa], given the air pressure at the plant [Pa]."""
        return self.value_Pa + p_ambient_Pa if self.is_gauge else self.value_Pa


def parse_pressure(value: object) -> Pressure:
    """Return a pressure from text such as "18.0 bar g" or "40 psia".

    Args:
        value: The text. A unit without a (absolute) or g (gauge) is refused. [-]
    Returns: The value [Pa] and whether it is gauge; a gauge pressure needs the ambient pressure.
    Raises: QuantityError if it is no pressure, or does not say absolute or gauge.
    Source: factors of NIST SP 811 (2008), appendix B.
    >>> parse_pressure("18.0 bar g")
    Pressure(value_Pa=1800000.0, is_gauge=True)
    """
    kind = KINDS["pressure"]
    number, unit = _number_and_unit(value, kind)
    text = str(value)
    if unit in _PRESSURE_BASES:
        amount = f"{number:g} {unit}"
        raise QuantityError(
            f'{quoted(text)} does not say absolute or gauge; write "{amount} a" (absolute) '
            f'or "{amount} g" (as a gauge shows it)'
        )
    return Pressure(_converted(text, number, _unit_of(text, unit, kind)), unit.endswith("g"))


def _number_and_unit(value: object, kind: Kind) -> tuple[float, str]:
    """Split a value into its finite number and the spelling of its unit without blanks."""
    if isinstance(value, str):
        return _split(value, kind)
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise QuantityError(f"{described(value)} stands where {kind.name} is needed; {kind.how}")
    if not abs(value) <= LARGEST_BARE_NUMBER:  # also catches NaN
        raise QuantityError(f"this is not a number of a sensible size; {kind.how}")
    if "" not in kind.units:
        raise QuantityError(
            f"{value} is a bare number; write it as text with its unit, "
            f'such as "{value} {kind.example_unit}" (allowed: {kind.shown})'
        )
    return float(value), ""


def described(value: object) -> str:
    """Return what a value read from TOML is, in plain words, for a message."""
    if isinstance(value, bool):
        return "true or false"
    words = {str: "a text", int: "a number", float: "a number", list: "a list", dict: "a table"}
    return words.get(type(value), "a date or a time")


def _split(text: str, kind: Kind) -> tuple[float, str]:
    body = _BLANKS.sub(" ", text).strip()
    match = _NUMBER.match(body)
    if len(text) > LONGEST_QUANTITY or match is None:
        raise QuantityError(f"{quoted(text)} {_why_no_number(body)}; {kind.how}")
    rest = body[match.end() :].lstrip(" ")
    complaint = _why_not_all(rest, body[match.end() :])
    if complaint:
        raise QuantityError(f"{quoted(text)}: {complaint}; {kind.how}")
    number = float(match.group().replace("\u2212", "-"))
    if not math.isfinite(number):
        raise QuantityError(f"{quoted(text)} is too large a number; {kind.how}")
    return number, rest.replace(" ", "").replace("°", "deg").replace("³", "3")


def _why_no_number(body: str) -> str:
    if not body:
        return "is empty"
    if len(body) > LONGEST_QUANTITY:
        return "is too long for a number with a unit"
    if _NOT_FINITE.match(body):
        return "is not a finite number"
    if any(c.isdigit() and not c.isascii() for c in body):
        return "has digits other than 0 to 9"
    return "does not begin with a number"


def _why_not_all(rest: str, raw_rest: str) -> str:
    if re.match(r",\s?[0-9]", rest):
        return "a comma stands in the number; the decimal mark is a point, as in 1.5"
    if re.match(r"[0-9]", rest):
        return "a blank stands inside the number; write the number in one piece"
    if re.match(r"[.,'_+-]", raw_rest):
        return "this is not one plain number"
    if any(c.isdigit() and not c.isascii() and c not in "³²" for c in rest):
        return "it has digits other than 0 to 9"
    return ""


def _unit_of(text: str, unit: str, kind: Kind) -> Unit:
    found = kind.units.get(unit)
    if found is not None:
        return found
    if not unit:
        raise QuantityError(
            f'{quoted(text)} has no unit; add it, as in "{shown(text.strip(), 20)} {kind.example_unit}" '
            f"(allowed: {kind.shown})"
        )
    other = next((k for k in KINDS.values() if unit in k.units and unit), None)
    if other is not None or unit in _PRESSURE_BASES:
        name = other.name if other else "a pressure"
        raise QuantityError(f"{quoted(text)} is {name}, but {kind.name} is needed; {kind.how}")
    name = kind.name.partition(" ")[2]
    raise QuantityError(f"{quoted(unit)} is not a unit of {name}{close_to(unit, kind.units)}; {kind.how}")


def _converted(text: str, number: float, unit: Unit) -> float:
    value = unit.to_SI(number)
    if not math.isfinite(value):
        raise QuantityError(f"{quoted(text)} is too large a number")
    return value


def _point_for_difference(text: str, number: float, unit: str) -> str:
    sign, scale = ("R", "Fahrenheit") if unit.endswith("F") else ("K", "Celsius")
    return (
        f"{quoted(text)} is a point on a temperature scale, but a difference is needed; "
        f'write "{number:g} {sign}" for a difference of {number:g} {scale} degrees'
    )


def standard_atmosphere_Pa(altitude_m: float) -> float:
    """Return the air pressure of the standard atmosphere at an altitude.

    Args:
        altitude_m: Height above mean sea level, -1000 to 11 000 m. [m]
    Returns: Absolute pressure; the weather moves the true one by a few percent. [Pa]
    Raises: QuantityError outside that range.
    Source: ICAO Doc 7488 (standard atmosphere), troposphere: T = 288.15 K - 0.0065 K/m h,
        p = 101 325 Pa (T/288.15 K)^(g M / (R L)); g = 9.806 65 m/s², R/M = 287.052 87 J/(kg K).
        The altitude is taken as geopotential; the difference is below 0.1 % of the height.
    >>> round(standard_atmosphere_Pa(0.0))
    101325
    """
    if not -1000.0 <= altitude_m <= 11_000.0:
        raise QuantityError(f"an altitude of {altitude_m:g} m is outside -1000 to 11 000 m")
    lapse_K_per_m = 0.0065
    exponent = STANDARD_GRAVITY_M_PER_S2 / (287.052_87 * lapse_K_per_m)
    ratio: float = (1.0 - lapse_K_per_m * altitude_m / 288.15) ** exponent
    return STANDARD_ATMOSPHERE_PA * ratio


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
        """Return one number of decimals that serves all these values, given in SI."""
        kept = [value for value in values if value is not None and math.isfinite(value)]
        numbers = [abs(self.unit.from_SI(value)) for value in kept]
        smallest = min((number for number in numbers if number > 0.0), default=1.0)
        if not self.significant:
            return self.decimals
        needed = self.significant - 1 - math.floor(math.log10(smallest))
        return max(self.decimals, min(needed, 6))


@dataclass(frozen=True)
class UnitSystem:
    """One way to show every quantity: `SI` for metric trade units, `IP` for inch-pound ones."""

    name: str
    displays: Mapping[str, Display]

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

    def with_unit(
        self, kind: str, value: float | None, *, decimals: int | None = None, signed: bool = False
    ) -> str:
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
        "temperature": Display("°C", _CELSIUS, 1, 0),
        "temperature difference": Display("K", _KELVIN, 1, 0),
        "pressure": Display("bar a", Unit(1e5), 2),
        "gauge pressure": Display("bar g", Unit(1e5), 2, 0),
        "cooling": Display("kW", Unit(1e3), 1),
        "heat flow": Display("kW", Unit(1e3), 1),
        "power": Display("kW", Unit(1e3), 1),
        "mass": Display("kg", Unit(1.0), 1),
        "mass flow": Display("kg/h", Unit(1.0 / HOUR_S), 0),
        "volume flow": Display("m³/h", Unit(1.0 / HOUR_S), 1),
        "length": Display("m", Unit(1.0), 0),
        "specific enthalpy": Display("kJ/kg", Unit(1e3), 1, 0),
        "specific entropy": Display("kJ/(kg K)", Unit(1e3), 4, 0),
        "density": Display("kg/m³", Unit(1.0), 2),
        "volumetric capacity": Display("kJ/m³", Unit(1e3), 0),
        "ratio": Display("", _BARE, 2, 2),
        "fraction": Display("%", _PERCENT, 0, 0),
    },
)

IP = UnitSystem(
    "ip",
    {
        "temperature": Display("°F", _FAHRENHEIT, 1, 0),
        "temperature difference": Display("°R", Unit(RANKINE_K), 1, 0),
        "pressure": Display("psia", Unit(PSI_PA), 1),
        "gauge pressure": Display("psig", Unit(PSI_PA), 1, 0),
        "cooling": Display("ton", Unit(TON_W), 1),  # of refrigeration, 12 000 Btu/h
        "heat flow": Display("Btu/h", Unit(BTU_PER_HOUR_W), 0),
        "power": Display("kW", Unit(1e3), 1),  # as the meter and the motor's plate give it
        "mass": Display("lb", Unit(POUND_KG), 1),
        "mass flow": Display("lb/h", Unit(POUND_KG / HOUR_S), 0),
        "volume flow": Display("cfm", Unit(CUBIC_FOOT_M3 / MINUTE_S), 1),
        "length": Display("ft", Unit(FOOT_M), 0),
        "specific enthalpy": Display("Btu/lb", Unit(BTU_J / POUND_KG), 2, 0),
        "specific entropy": Display("Btu/(lb °R)", Unit(BTU_J / POUND_KG / RANKINE_K), 5, 0),
        "density": Display("lb/ft³", Unit(POUND_KG / CUBIC_FOOT_M3), 3),
        "volumetric capacity": Display("Btu/ft³", Unit(BTU_J / CUBIC_FOOT_M3), 1),
        "ratio": Display("", _BARE, 2, 2),
        "fraction": Display("%", _PERCENT, 0, 0),
    },
)

UNIT_SYSTEMS: Mapping[str, UnitSystem] = {"si": SI, "ip": IP}
