"""The worst corner a refrigerant is taken to: of every basis, the hottest day and pull-down."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

from retrofit.study import Entry, Performance

CLOSE = 1e-6  # what solving the same point twice may differ by, relative


@dataclass(frozen=True)
class Corner:
    """A number where it is worst.

    Attributes:
        value: The number, in SI.
        where: Where that is, with a blank before it; empty at the temperatures of the case.
    """

    value: float
    where: str


def conditions(entry: Entry) -> dict[str, Performance[float]]:
    """Return every condition that is known of a refrigerant, by where it is."""
    numbers = entry.hardware_numbers
    found = {
        "": entry.duty,
        " in the plant as installed": entry.plant.full if entry.plant else None,
        " on the hottest day": numbers.new.hottest if numbers else None,
        " at pull-down": numbers.new.pull_down if numbers else None,
    }
    return {where: performance for where, performance in found.items() if performance is not None}


def worst(entry: Entry, name: str, by: Callable[[Iterable[float]], float] = max) -> Corner:
    """Return a number where it is worst; where corners are equal, at the temperatures of the case.

    Args:
        entry: A refrigerant, solved.
        name: The quantity of its performance.
        by: `max` if the largest is worst, `min` if the smallest.
    """
    values = {where: float(getattr(found, name)) for where, found in conditions(entry).items()}
    extreme = by(values.values())
    where = next(where for where, value in values.items() if abs(value - extreme) <= CLOSE * abs(extreme))
    return Corner(values[where], where)
