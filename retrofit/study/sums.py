"""Sums of money that may be incomplete: what is known of them, which items are missing, and the keys that give them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from retrofit.study.spread import FloatArray


class SumState(StrEnum):
    """What a sum is: all of it, a lower bound because items are missing, or unknown because all are."""

    COMPLETE = "complete"
    AT_LEAST = "at least"
    UNKNOWN = "unknown"


class ComparisonState(StrEnum):
    """What a difference between two options counts: every item, only those known for both, or nothing."""

    COMPLETE = "complete"
    INCOMPLETE = "incomplete"
    UNKNOWN = "unknown"


@dataclass(frozen=True)
class Missing:
    """An item of money that an option needs and that is not known.

    Attributes:
        code: The item.
        keys: Keys of the case, any one of which gives it, the one for most options first; empty if no key does.
        reason: What is not known beside prices; may be empty.
    """

    code: str
    keys: tuple[str, ...] = ()
    reason: str = ""


@dataclass(frozen=True)
class Sum:
    """A sum of items; what is missing could only add to it, since no cost is below 0.

    Attributes:
        known: Sum of the items that are known, numbers or draws; None if none is. [currency]
        missing: The items that are not.
    """

    known: FloatArray | None
    missing: tuple[Missing, ...] = ()

    @property
    def state(self) -> SumState:
        """Return what the known part is of the whole."""
        if self.known is None:
            return SumState.UNKNOWN
        return SumState.AT_LEAST if self.missing else SumState.COMPLETE

    @property
    def total(self) -> FloatArray | None:
        """Return the sum if every item of it is known; a lower bound is none. [currency]"""
        return self.known if self.state is SumState.COMPLETE else None


def sum_of(amounts: Mapping[str, FloatArray | None], missing: tuple[Missing, ...]) -> Sum:
    """Return the sum of amounts.

    Args:
        amounts: By item; None if not known. [currency]
        missing: The items that the sum would need to be complete.
    """
    known = [amount for amount in amounts.values() if amount is not None]
    return Sum(np.asarray(sum(known)) if known else None, missing)
