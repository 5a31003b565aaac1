"""Text with a unit to an SI number."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from retrofit.errors import QuantityError
from retrofit.units.table import KINDS, PRESSURE_BASES, Kind, Unit
from retrofit.units.words import close_to, described, quoted, shown

LONGEST_QUANTITY = 60  # characters; a longer text is no quantity
LARGEST_BARE_NUMBER = 1e15

# Written by people who mean a difference: a point on a scale.
_SCALE_POINTS = frozenset({"degc", "degf", "c", "f"})

_BLANKS = re.compile(r"[ \t\u00a0\u2009\u202f]+")  # line ends and controls are not blanks
_NUMBER = re.compile(r"([+\u2212-]?)([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?")
_NOT_FINITE = re.compile(r"[+\u2212-]?(nan|inf|infinity)\b", re.IGNORECASE)


def parse_quantity(value: object, kind: str) -> float:
    """Return the SI value of a text with a unit.

    Args:
        value: The text, such as "-8 degC"; a fraction may also be a number. [-]
        kind: A key of `KINDS` other than "pressure", which has its own function. [-]
    Returns: The quantity. [SI unit of its kind; hours per day stay h/d, years stay years]
    Raises: QuantityError if it is no quantity of that kind; the message says how to write one.
    Source: factors of NIST SP 811 (2008), appendix B; no range is checked here.
    >>> parse_quantity("-8 degC", "temperature")
    265.15
    """
    if kind == "pressure":
        raise ValueError("a pressure is absolute or gauge: use parse_pressure")
    number, unit = _number_and_unit(value, KINDS[kind])
    if kind == "temperature difference" and unit.lower() in _SCALE_POINTS:
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
    unit = unit.replace("(", "").replace(")", "")
    if unit in PRESSURE_BASES:
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


def _split(text: str, kind: Kind) -> tuple[float, str]:
    body = _BLANKS.sub(" ", text).strip(" ")
    match = _NUMBER.match(body)
    if len(body) > LONGEST_QUANTITY or match is None:
        raise QuantityError(f"{quoted(text)} {_why_no_number(body)}; {kind.how}")
    rest = body[match.end() :].lstrip(" ")
    complaint = _why_not_all(rest, body[match.end() :])
    if complaint:
        raise QuantityError(f"{quoted(text)}: {complaint}; {kind.how}")
    number = float(match.group().replace("\u2212", "-"))
    if not math.isfinite(number):
        raise QuantityError(f"{quoted(text)} is too large a number; {kind.how}")
    return number, rest.replace(" ", "").replace("°", "deg").replace("²", "2").replace("³", "3")


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
    if other is not None or unit in PRESSURE_BASES:
        name = "a pressure" if other is None or unit in PRESSURE_BASES else other.name
        raise QuantityError(f"{quoted(text)} is {name}, but {kind.name} is needed; {kind.how}")
    name = kind.name.partition(" ")[2]
    raise QuantityError(f"{quoted(unit)} is not a unit of {name}{close_to(unit, kind.units)}; {kind.how}")


def _converted(text: str, number: float, unit: Unit) -> float:
    value = unit.to_SI(number)
    if not math.isfinite(value):
        raise QuantityError(f"{quoted(text)} is too large a number")
    return value


def _point_for_difference(text: str, number: float, unit: str) -> str:
    sign, scale = ("R", "Fahrenheit") if unit.lower().endswith("f") else ("K", "Celsius")
    return (
        f"{quoted(text)} is a point on a temperature scale, but a difference is needed; "
        f'write "{number:g} {sign}" for a difference of {number:g} {scale} degrees'
    )
