"""The thresholds of the checks and the band of the model, read from thresholds.toml."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files


@dataclass(frozen=True)
class Threshold:
    """Where a finding begins.

    Attributes:
        unit: What the figures count.
        source, basis: Where they come from: "read", "practice" or "memory".
        note, work, stop: Where a finding of that level begins; None if there is no such level.
    """

    unit: str
    source: str
    basis: str
    note: float | None = None
    work: float | None = None
    stop: float | None = None

    def level(self, value: float) -> str | None:
        """Return the level of a value that is worse the larger it is, None if it is below every level."""
        for level in ("stop", "work", "note"):
            begin = getattr(self, level)
            if begin is not None and value > begin:
                return level
        return None

    def level_below(self, value: float) -> str | None:
        """Return the level of a value that is worse the smaller it is, None if it is above every level."""
        for level in ("stop", "work", "note"):
            begin = getattr(self, level)
            if begin is not None and value < begin:
                return level
        return None


@dataclass(frozen=True)
class Band:
    """How far a number can be from what a plant does."""

    value: float
    unit: str
    source: str


@cache
def _table() -> Mapping[str, dict[str, object]]:
    text = files("retrofit.checks").joinpath("thresholds.toml").read_text(encoding="utf-8")
    return tomllib.loads(text)


@cache
def threshold(name: str) -> Threshold:
    """Return a threshold by its name in thresholds.toml."""
    return Threshold(**_table()[name])  # type: ignore[arg-type]


@cache
def model_band() -> Mapping[str, Band]:
    """Return the bands: capacity, cop, T_discharge, pressure."""
    return {name: Band(**entry) for name, entry in _table()["band"].items()}  # type: ignore[arg-type]
