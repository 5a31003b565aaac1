"""The kinds of value a case file holds: how each is read, checked and described to an editor.

Each class annotates a field of `retrofit.case.model`. Reading raises `QuantityError` with the whole
complaint; `retrofit.case.reader` adds file, line and key.
"""

from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
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

_NUMBER_PATTERN = r"^\s*[+\u2212-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]+)?\s*"


class _Value:
    """What all kinds of value share: pydantic asks them how to read and how to describe."""

    def read(self, value: object, info: ValidationInfo) -> Any:
        raise NotImplementedError

    def json_schema(self) -> dict[str, Any]:
        raise NotImplementedError

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        return core_schema.with_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(
        self, schema: CoreSchema, handler: GetJsonSchemaHandler
    ) -> dict[str, Any]:
        return self.json_schema()


@dataclass(frozen=True)
class Quantity(_Value):
    """A text with a unit of one kind, within a range that is itself written with units."""

    kind: str
    low: str
    high: str
    reason: str
    above_low: bool = False  # the lower end itself is not allowed
    example: str = ""

    def read(self, value: object, info: ValidationInfo) -> float:
        found = parse_quantity(value, self.kind)
        low, high = parse_quantity(self.low, self.kind), parse_quantity(self.high, self.kind)
        if found < low or found > high or (self.above_low and found == low):
            raise QuantityError(_outside(value, self.low, self.high, self.reason, self.above_low))
        return found

    def json_schema(self) -> dict[str, Any]:
        example = self.example or KINDS[self.kind].example
        text = {"type": "string", "pattern": unit_pattern(self.kind), "examples": [example]}
        if self.kind != "fraction":
            return text
        return {"anyOf": [{"type": "number", "minimum": 0, "maximum": 1}, text]}


@dataclass(frozen=True)
class PressureLimit(_Value):
    """A pressure that says absolute or gauge; a gauge one counts from the air at the plant's altitude."""

    low: str
    high: str
    reason: str

    def read(self, value: object, info: ValidationInfo) -> float:
        p_ambient_Pa = standard_atmosphere_Pa(info.data.get("altitude_m", 0.0))
        p_Pa = parse_pressure(value).absolute_Pa(p_ambient_Pa)
        if not parse_pressure(self.low).value_Pa <= p_Pa <= parse_pressure(self.high).value_Pa:
            raise QuantityError(_outside(value, self.low, self.high, self.reason))
        return p_Pa

    def json_schema(self) -> dict[str, Any]:
        example = KINDS["pressure"].example
        return {"type": "string", "pattern": unit_pattern("pressure"), "examples": [example]}


@dataclass(frozen=True)
class Choice(_Value):
    """One word, or a few, out of a closed list."""

    words: tuple[str, ...]
    hints: tuple[tuple[str, str], ...] = ()  # what people write instead, and the word for it

    def read(self, value: object, info: ValidationInfo) -> str:
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
        return {"enum": list(self.words)}


@dataclass(frozen=True)
class Refrigerant(_Value):
    """The designation of a refrigerant of the catalogue, brought to its normal spelling."""

    def read(self, value: object, info: ValidationInfo) -> str:
        if not isinstance(value, str):
            wanted = 'a refrigerant is needed; write its designation, as in "R134a"'
            raise QuantityError(f"{described(value)} stands where {wanted}")
        try:
            return find(value).designation
        except UnknownRefrigerantError as unknown:
            raise QuantityError(_not_in_catalogue(value, unknown.close)) from None

    def json_schema(self) -> dict[str, Any]:
        return {"type": "string", "pattern": r"^\s*[Rr].+$", "examples": list(designations())}


@dataclass(frozen=True)
class Text(_Value):
    """A title or a sentence: bounded, on one line once read, without control characters."""

    longest: int

    def read(self, value: object, info: ValidationInfo) -> str:
        if not isinstance(value, str):
            raise QuantityError(
                f"{described(value)} stands where a text is needed; write it in quotation marks"
            )
        text = " ".join(value.split())
        odd = next((c for c in text if is_hidden(c)), None)
        if odd is not None:
            raise QuantityError(f"it holds the hidden character {shown(odd)}; write plain text")
        if not 0 < len(text) <= self.longest:
            raise QuantityError(f"it has {len(text)} characters; allowed are 1 to {self.longest}")
        return text

    def json_schema(self) -> dict[str, Any]:
        return {"type": "string", "minLength": 1, "maxLength": self.longest}


def is_hidden(character: str) -> bool:
    """Say whether a character commands a terminal or turns the direction of writing."""
    turns = "\u061c\u200e\u200f\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069"
    return unicodedata.category(character) in ("Cc", "Cs") or character in turns


def unit_pattern(kind: str) -> str:
    """Return a regular expression (ECMA 262) of the texts that are quantities of a kind in form."""
    units = listed_alternatives(KINDS[kind].units)
    return rf"{_NUMBER_PATTERN}({units})\s*$"


def listed_alternatives(units: Any) -> str:
    """Return unit spellings as alternatives, with the blanks and signs that reading accepts."""
    return "|".join(
        r"\s*".join(re.escape(c) for c in unit).replace("d\\s*e\\s*g", "(deg|°)").replace("3", "[3³]")
        for unit in units
    )


def _outside(value: object, low: str, high: str, reason: str, above_low: bool = False) -> str:
    start = f"above {low} and up to {high}" if above_low else f"{low} to {high}"
    return f"{quoted(str(value))} is outside what is allowed: {start} ({reason})"


def _not_in_catalogue(value: str, close: tuple[str, ...]) -> str:
    meant = f", did you mean {listed(close)}?" if close else ""
    return f"{quoted(value)} is not in the catalogue{meant}; `retrofit refrigerants` lists every designation"
