"""Figures of good practice, read from practice.toml: each with its source and how it is known."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files


@dataclass(frozen=True)
class Figure:
    """One figure of good practice, or a range of it.

    Attributes:
        low: The figure, or the lower end of its range.
        unit: What it counts.
        basis, source: How it is known ("read", "practice" or "memory"), and where it comes from.
        high: The upper end; None if it is no range.
    """

    low: float
    unit: str
    basis: str
    source: str
    high: float | None = None

    @property
    def ends(self) -> tuple[float, float]:
        """Return both ends of the range, equal if it is none."""
        return self.low, self.low if self.high is None else self.high


@cache
def practice_figures() -> Mapping[str, Figure]:
    """Return every figure by its name in practice.toml."""
    text = files("retrofit.study").joinpath("practice.toml").read_text(encoding="utf-8")
    return {name: Figure(**entry) for name, entry in tomllib.loads(text).items()}


def practice(name: str) -> Figure:
    """Return a figure by its name in practice.toml."""
    return practice_figures()[name]
