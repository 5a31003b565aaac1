"""Values of a case file that are bare numbers: counts, coefficients, and small tables of numbers."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, NamedTuple

from retrofit.case.values import FileValue, designation_of, outside
from retrofit.errors import QuantityError
from retrofit.refrigerants import with_hyphens
from retrofit.units import described, listed, quoted

LARGEST_NUMBER = 1e15


@dataclass(frozen=True)
class Number(FileValue):
    """A number without unit, within a range; `whole` for a count."""

    low: float
    high: float
    reason: str
    whole: bool = False
    example: str = "1.0"

    def sample(self) -> str:
        """Return a number, as text."""
        return self.example

    def form(self) -> str:
        """Return a number, as text."""
        return self.sample()

    def read(self, value: object, p_ambient_Pa: float | None = None) -> float | int:
        """Return the number."""
        thing = "a whole number" if self.whole else "a number"
        found = _number(value, thing, self.example)
        if self.whole and found != int(found):
            raise QuantityError(f"{found:g} is not a whole number; write a count, as in {self.example}")
        if not self.low <= found <= self.high:
            raise QuantityError(outside(f"{found:g}", f"{self.low:g}", f"{self.high:g}", self.reason))
        return int(found) if self.whole else found

    def json_schema(self) -> dict[str, Any]:
        """Return the type of the number and its range."""
        return {"type": "integer" if self.whole else "number", "minimum": self.low, "maximum": self.high}


@dataclass(frozen=True)
class OneOf(FileValue):
    """One number out of a few."""

    numbers: tuple[int, ...]

    def sample(self) -> str:
        """Return the last number, as text."""
        return str(self.numbers[-1])

    def form(self) -> str:
        """Return the numbers."""
        return listed(map(str, self.numbers))

    def read(self, value: object, p_ambient_Pa: float | None = None) -> int:
        """Return the number."""
        found = _number(value, "a whole number", self.sample())
        if found not in self.numbers:
            raise QuantityError(f"{found:g} is not possible here; write {listed(map(str, self.numbers))}")
        return int(found)

    def json_schema(self) -> dict[str, Any]:
        """Return the list of numbers."""
        return {"enum": list(self.numbers)}


@dataclass(frozen=True)
class Level(FileValue):
    """Where a check begins to speak: a bare number, or a number with its unit, kept as text."""

    number = Number(-1e9, 1e9, "thresholds lie within it", example="0.95")
    quantity = r"\s*[+\u2212-]?[0-9.]+([eE][+-]?[0-9]+)?\s*[^\s0-9.][^\x00-\x1f\x7f]{0,39}"

    def sample(self) -> str:
        """Return a number, as text."""
        return self.number.sample()

    def read(self, value: object, p_ambient_Pa: float | None = None) -> float | str:
        """Return the number, or the text; whether it needs a unit, and which, the checks know."""
        if isinstance(value, str) and value.isprintable() and re.fullmatch(self.quantity, value):
            return value
        return self.number.read(value)

    def json_schema(self) -> dict[str, Any]:
        """Return a number, or a number with a unit."""
        return {"anyOf": [self.number.json_schema(), {"type": "string", "pattern": r"^\s*[+-]?[0-9.]+.*[^0-9\s]"}]}


class EfficiencyPoint(NamedTuple):
    """Efficiencies of the compressor at one pressure ratio. [-]"""

    pressure_ratio: float
    isentropic_efficiency: float
    volumetric_efficiency: float


LEAST_EFFICIENCY = 0.1


@dataclass(frozen=True)
class PointValue(FileValue):
    """A list of three numbers: pressure ratio, isentropic and volumetric efficiency."""

    def sample(self) -> str:
        """Return a point, as text."""
        return "[4, 0.70, 0.86]"

    def read(self, value: object, p_ambient_Pa: float | None = None) -> EfficiencyPoint:
        """Return the point."""
        if not isinstance(value, list) or len(value) != 3:
            wanted = "three numbers are needed: pressure ratio, isentropic and volumetric efficiency"
            raise QuantityError(f"{described(value)} stands where {wanted}, as in {self.sample()}")
        ratio, *efficiencies = (_number(item, "a number", self.sample()) for item in value)
        if not 1.0 < ratio <= 100.0:
            raise QuantityError(f"pressure ratio {ratio:g} is outside what is allowed: above 1 and up to 100")
        for name, found in zip(("isentropic", "volumetric"), efficiencies, strict=True):
            if not LEAST_EFFICIENCY <= found <= 1.0:
                raise QuantityError(
                    f"{name} efficiency {found:g} is outside what is allowed: {LEAST_EFFICIENCY:g} to 1 (below it no "
                    "plant can run, and no machine does better than the ideal one)"
                )
        return EfficiencyPoint(ratio, *efficiencies)

    def json_schema(self) -> dict[str, Any]:
        """Return a list of three numbers."""
        return {"type": "array", "items": {"type": "number"}, "minItems": 3, "maxItems": 3}


@dataclass(frozen=True)
class UAFactors:
    """Overall conductance of an exchanger with a refrigerant, over that with today's.

    Attributes:
        others: The factor of every refrigerant that `by_refrigerant` does not name; None if it is calculated. [-]
        by_refrigerant: Factor by designation. [-]
    """

    others: float | None = None
    by_refrigerant: tuple[tuple[str, float], ...] = ()

    def of(self, refrigerant: str) -> float | None:
        """Return the factor of a refrigerant, by its designation; None if it is calculated. [-]"""
        return dict(self.by_refrigerant).get(refrigerant, self.others)


@dataclass(frozen=True)
class UAFactorValue(FileValue):
    """A number for every candidate, a table of designation and number, or "calculated"."""

    factor = Number(0.1, 10.0, "an exchanger does not change more than tenfold")
    word = "calculated"

    def sample(self) -> str:
        """Return a factor, as text."""
        return "1.0"

    def read(self, value: object, p_ambient_Pa: float | None = None) -> UAFactors:
        """Return the factors."""
        if value == self.word:
            return UAFactors()
        if not isinstance(value, Mapping):
            return UAFactors(self.factor.read(value))
        found: dict[str, float] = {}
        for name, factor in value.items():
            designation = designation_of(name)
            if designation in found:
                raise QuantityError(f"{with_hyphens(designation)} is in the table twice; leave one out")
            found[designation] = self._of_one(name, factor)
        return UAFactors(by_refrigerant=tuple(found.items()))

    def _of_one(self, name: str, factor: object) -> float:
        try:
            return self.factor.read(factor)
        except QuantityError as error:
            raise QuantityError(f"{quoted(name)}: {error}") from None

    def json_schema(self) -> dict[str, Any]:
        """Return a number, a table of numbers, or the word."""
        number = self.factor.json_schema()
        return {"anyOf": [number, {"type": "object", "additionalProperties": number}, {"const": self.word}]}


def _number(value: object, thing: str, example: str) -> float:
    if isinstance(value, str):
        raise QuantityError(f"{quoted(value)} is a text; write {thing} without quotes, as in {example}")
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise QuantityError(f"{described(value)} stands where {thing} is needed; write it as in {example}")
    if not abs(value) <= LARGEST_NUMBER:  # also catches NaN
        raise QuantityError(f"this is not a number of a sensible size; write {thing}, as in {example}")
    return float(value)
