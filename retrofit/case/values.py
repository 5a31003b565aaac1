"""The kinds of value a case file holds: how each is read, checked and described to an editor.

Each class annotates a field of `retrofit.case.model`. Reading raises `QuantityError` with the whole
complaint; `retrofit.case.reader` adds file, line and key.
"""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
from enum import Enum
from typing import Any

from pydantic import GetCoreSchemaHandler, GetJsonSchemaHandler, ValidationInfo
from pydantic_core import CoreSchema, core_schema

from retrofit.errors import QuantityError, UnknownRefrigerantError
from retrofit.refrigerants import designations, find
from retrofit.units import (
    KINDS,
    close_to,
    described,
    listed,
    parse_pressure,
    parse_quantity,
    quoted,
    shown,
    standard_atmosphere_Pa,
)

NOTHING = "none"


class Absent(Enum):
    """What a plant does not have, where a file says so: that is not the same as saying nothing."""

    ABSENT = NOTHING


ABSENT = Absent.ABSENT


def present(value: float | Absent | None) -> float | None:
    """Return a number; None if it is not given, or the plant does not have what it is of. [SI]"""
    return None if isinstance(value, Absent) else value


LONGEST_DESIGNATION = 40  # characters
ROUNDING_PA = 0.01  # the same pressure written as gauge and as absolute may differ by that
_DIRECTION_MARKS = "\u061c\u200e\u200f\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069"
_NUMBER_PATTERN = r"^\s*[+\u2212-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?\s*"


class FileValue:
    """What all kinds of value share: pydantic asks them how to read and how to describe."""

    def sample(self) -> str:
        """Return a value as a user could write it, or nothing."""
        return ""

    def form(self) -> str:
        """Return how the value is written in a file, for a reader."""
        return f'"{self.sample()}"' if self.sample() else "text in quotes"

    def shown_kind(self) -> str:
        """Return the kind of quantity to show the value as (a key of `UnitSystem.displays`), or nothing."""
        return ""

    def read(self, value: object, p_ambient_Pa: float | None = None) -> Any:
        """Return the value as the model holds it.

        Args:
            value: What stands in the file. [-]
            p_ambient_Pa: Air pressure at the plant, from which a gauge counts. [Pa]
        Returns: The value in SI, or the word.
        Raises: QuantityError with the whole complaint.
        """
        raise NotImplementedError

    def json_schema(self) -> dict[str, Any]:
        """Return the JSON Schema of the value as the file holds it."""
        raise NotImplementedError

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(
            lambda value, info: self.read(value, ambient_pressure_Pa(info))
        )

    def __get_pydantic_json_schema__(self, schema: CoreSchema, handler: GetJsonSchemaHandler) -> dict[str, Any]:
        return self.json_schema()


def ambient_pressure_Pa(info: ValidationInfo) -> float | None:
    """Return the air pressure that a reading is checked with, if it is known: of the plant, or the context. [Pa]"""
    if "altitude_m" in info.data:
        return standard_atmosphere_Pa(info.data["altitude_m"])
    return None if info.context is None else float(info.context["p_ambient_Pa"])


@dataclass(frozen=True)
class Quantity(FileValue):
    """A text with a unit of one kind, within a range that is itself written with units."""

    kind: str
    low: str
    high: str
    reason: str
    above_low: bool = False  # the lower end itself is not allowed
    example: str = ""
    shown: str = ""  # the kind to show it as, if another

    def sample(self) -> str:
        """Return a quantity of this kind, as text."""
        return self.example or KINDS[self.kind].example

    def form(self) -> str:
        """Return how the quantity is written: an example, and the units that there are."""
        return f'"{self.sample()}" ({KINDS[self.kind].shown})'

    def shown_kind(self) -> str:
        """Return the kind of quantity to show the value as."""
        return self.shown or self.kind

    def read(self, value: object, p_ambient_Pa: float | None = None) -> float:
        """Return the value in SI."""
        found = parse_quantity(value, self.kind)
        low, high = parse_quantity(self.low, self.kind), parse_quantity(self.high, self.kind)
        if found < low or found > high or (self.above_low and found == low):
            raise QuantityError(outside(value, self.low, self.high, self.reason, self.above_low))
        return found

    def json_schema(self) -> dict[str, Any]:
        """Return the pattern of the text; a kind that needs no unit may also be a number."""
        text = {"type": "string", "pattern": unit_pattern(self.kind), "examples": [self.sample()]}
        if "" not in KINDS[self.kind].units:
            return text
        low, high = (parse_quantity(end, self.kind) for end in (self.low, self.high))
        return {"anyOf": [{"type": "number", "minimum": low, "maximum": high}, text]}


@dataclass(frozen=True)
class AbsolutePressure(FileValue):
    """A pressure that says absolute or gauge, held as absolute; a gauge counts from the air at the plant.

    The ends of the range do so too: a limit that has to stand above the air has a gauge pressure as its lower end.
    """

    low: str
    high: str
    reason: str

    def sample(self) -> str:
        """Return a pressure, as text."""
        return KINDS["pressure"].example

    def form(self) -> str:
        """Return how the pressure is written: an example, and the units that there are."""
        return f'"{self.sample()}" ({KINDS["pressure"].shown})'

    def shown_kind(self) -> str:
        """Return the kind of quantity to show the value as."""
        return "pressure"

    def read(self, value: object, p_ambient_Pa: float | None = None) -> float:
        """Return the absolute pressure in Pa; raises LookupError if a gauge one is read without `p_ambient_Pa`."""
        p_Pa = _absolute_Pa(value, p_ambient_Pa)
        low_Pa, high_Pa = self.ends_Pa(p_ambient_Pa)
        if not low_Pa - ROUNDING_PA <= p_Pa <= high_Pa + ROUNDING_PA:
            raise QuantityError(outside(value, self.low, self.high, self.reason))
        return p_Pa

    def ends_Pa(self, p_ambient_Pa: float | None) -> tuple[float, float]:
        """Return the lowest and the highest pressure allowed at a plant, absolute.

        Args:
            p_ambient_Pa: Air pressure at the plant. [Pa]
        Raises: LookupError if an end is a gauge pressure and the air pressure is None.
        """
        return _absolute_Pa(self.low, p_ambient_Pa), _absolute_Pa(self.high, p_ambient_Pa)

    def json_schema(self) -> dict[str, Any]:
        """Return the pattern of the text."""
        return {"type": "string", "pattern": unit_pattern("pressure"), "examples": [self.sample()]}


def _absolute_Pa(value: object, p_ambient_Pa: float | None) -> float:
    pressure = parse_pressure(value)
    if pressure.is_gauge and p_ambient_Pa is None:
        raise LookupError("a gauge pressure needs the air pressure at the plant; pass it as context")
    return pressure.absolute_Pa(p_ambient_Pa or 0.0)


# A part that bears less than 0.5 bar above the air is no pressure equipment (Directive 2014/68/EU, article 1); the
# highest limits of plants are those of gas coolers for R744, at some 140 bar.
PRESSURE_LIMIT = AbsolutePressure(
    "0.5 bar g", "200 bar g", "a limit stands clearly above the air at the plant, and no such plant is built for more"
)


@dataclass(frozen=True)
class OrNone(FileValue):
    """A value of something that a plant may not have: then the file says "none"."""

    inner: FileValue

    def sample(self) -> str:
        """Return a value as a user could write it."""
        return self.inner.sample()

    def form(self) -> str:
        """Return how the value is written, or that there is none."""
        return f'{self.inner.form()}, or "{NOTHING}"'

    def shown_kind(self) -> str:
        """Return the kind of quantity to show the value as."""
        return self.inner.shown_kind()

    def read(self, value: object, p_ambient_Pa: float | None = None) -> Any:
        """Return the value, or ABSENT."""
        if isinstance(value, str) and value.strip().lower() == NOTHING:
            return ABSENT
        try:
            return self.inner.read(value, p_ambient_Pa)
        except QuantityError as error:
            raise QuantityError(f'{error.message}; write "{NOTHING}" if the plant has none') from None

    def json_schema(self) -> dict[str, Any]:
        """Return the schema of the value, or the word."""
        return {"anyOf": [self.inner.json_schema(), {"const": NOTHING}]}


@dataclass(frozen=True)
class Choice(FileValue):
    """One word, or a few, out of a closed list."""

    words: tuple[str, ...]
    hints: tuple[tuple[str, str], ...] = ()  # what people write instead, and the word for it

    def sample(self) -> str:
        """Return the first word."""
        return self.words[0]

    def form(self) -> str:
        """Return the words."""
        return listed(f'"{word}"' for word in self.words)

    def read(self, value: object, p_ambient_Pa: float | None = None) -> str:
        """Return the word."""
        allowed = listed(f'"{word}"' for word in self.words)
        if not isinstance(value, str):
            raise QuantityError(f"{described(value)} stands where a word is needed; write {allowed}")
        if value not in self.words:
            raise QuantityError(f"{quoted(value)} is not known here{self._meant(value)}; write {allowed}")
        return value

    def _meant(self, value: str) -> str:
        hint = dict(self.hints).get(value.strip().upper())
        return f', did you mean "{hint}"?' if hint else close_to(value, self.words)

    def json_schema(self) -> dict[str, Any]:
        """Return the list of words."""
        return {"enum": list(self.words)}


@dataclass(frozen=True)
class Refrigerant(FileValue):
    """The designation of a refrigerant of the catalogue, brought to its normal spelling."""

    def sample(self) -> str:
        """Return a designation."""
        return "R404A"

    def read(self, value: object, p_ambient_Pa: float | None = None) -> str:
        """Return the designation in its normal spelling."""
        if not isinstance(value, str):
            wanted = f'a refrigerant is needed; write its designation, as in "{self.sample()}"'
            raise QuantityError(f"{described(value)} stands where {wanted}")
        return designation_of(value)

    def json_schema(self) -> dict[str, Any]:
        """Return the pattern of every designation of the catalogue, and the list as examples."""
        return {"type": "string", "pattern": _designation_pattern(), "examples": list(designations())}


@dataclass(frozen=True)
class Text(FileValue):
    """A title or a sentence: bounded, on one line once read, without control characters."""

    longest: int

    def read(self, value: object, p_ambient_Pa: float | None = None) -> str:
        """Return the text with every run of blanks and line ends as one blank."""
        if not isinstance(value, str):
            raise QuantityError(f"{described(value)} stands where a text is needed; write it in quotes")
        text = re.sub(r"[ \t\r\n]+", " ", value).strip(" ")
        hidden = next((character for character in text if is_hidden(character)), None)
        if hidden is not None:
            raise QuantityError(f"it holds the hidden character {shown(hidden)}; write plain text")
        if not 0 < len(text) <= self.longest:
            raise QuantityError(f"it has {len(text)} characters; allowed are 1 to {self.longest}")
        return text

    def json_schema(self) -> dict[str, Any]:
        """Return the least length; the longest counts only after blanks are joined."""
        return {"type": "string", "minLength": 1}


def is_hidden(character: str) -> bool:
    """Say whether a character commands a terminal or turns the direction of writing."""
    return unicodedata.category(character) in ("Cc", "Cs") or character in _DIRECTION_MARKS


def designation_of(name: str) -> str:
    """Return the normal spelling of a refrigerant's designation.

    Args:
        name: What a user wrote, such as "r-404a". [-]
    Returns: The designation as the catalogue has it, such as "R404A". [-]
    Raises: QuantityError if the catalogue has none of that name; it holds the close ones.
    """
    if len(name) > LONGEST_DESIGNATION or not name.isprintable():
        raise QuantityError(f'{quoted(name)} is no designation of a refrigerant; write it as in "R404A"')
    try:
        return find(name).designation
    except UnknownRefrigerantError as unknown:
        near = listed(f'"{close}"' for close in unknown.close) if unknown.close else ""
    meant = f", did you mean {near}?" if near else ""
    raise QuantityError(
        f"{quoted(name)} is not in the catalogue{meant}; the command `retrofit refrigerants` lists what is"
    )


def unit_pattern(kind: str) -> str:
    """Return a regular expression (ECMA 262) of the texts that have the form of a kind of quantity."""
    spell = _pressure_spellings if kind == "pressure" else _spellings
    units = "|".join(spell(unit) for unit in KINDS[kind].units)
    return rf"{_NUMBER_PATTERN}({units})\s*$"


def _spellings(unit: str) -> str:
    """Return a pattern of one unit with the blanks and signs that reading accepts."""
    parts = re.findall("deg|.", unit)
    allowed = {"deg": r"(d\s*e\s*g|°)", "2": "[2²]", "3": "[3³]"}
    return r"\s*".join(allowed.get(part, re.escape(part)) for part in parts)


def _pressure_spellings(unit: str) -> str:
    """Return a pattern of one unit of pressure: its mark may stand apart or in brackets."""
    return rf"{_spellings(unit[:-1])}\s*\(?{unit[-1]}\)?"


def _designation_pattern() -> str:
    """Return a pattern of every designation, with or without R and hyphen, in any capitals."""
    either_case = (
        "".join(f"[{c.upper()}{c.lower()}]" if c.isalpha() else re.escape(c) for c in name[1:])
        for name in designations()
    )
    return rf"^\s*[Rr]?[\s-]*({'|'.join(either_case)})\s*$"


def outside(value: object, low: str, high: str, reason: str, above_low: bool = False) -> str:
    """Return the complaint about a value outside its range, with the range and its reason."""
    start = f"above {low} and up to {high}" if above_low else f"{low} to {high}"
    return f"{quoted(str(value))} is outside what is allowed: {start} ({reason})"
