"""Safety classes as ASHRAE 34 and ISO 817 write them: toxicity letter, then flammability class."""

from __future__ import annotations

from typing import NamedTuple

FLAMMABILITY_RANK = {"1": 0, "2L": 1, "2": 2, "3": 3}
TOXICITY_RANK = {"A": 0, "B": 1}


class SafetyClass(NamedTuple):
    """Toxicity "A" (lower) or "B" (higher), flammability "1", "2L", "2" or "3"."""

    toxicity: str
    flammability: str


def parse_safety_class(text: str | float | None) -> SafetyClass | None:
    """Return the two parts of a safety class such as A2L.

    Args:
        text: Safety class, or None if not stated. [-]
    Returns: The class, or None if it is not stated or not a class of the standard. [-]
    Source: ASHRAE 34 and ISO 817, form of the classes.
    >>> parse_safety_class("B2L").flammability
    '2L'
    """
    if not isinstance(text, str) or text[:1] not in TOXICITY_RANK or text[1:] not in FLAMMABILITY_RANK:
        return None
    return SafetyClass(text[0], text[1:])


def is_flammable(text: str | float | None) -> bool | None:
    """Return True for flammability 2L, 2 or 3, False for 1, None if the class is not stated.

    Args:
        text: Safety class. [-]
    Returns: Whether flame propagates in the test of the standard. [-]
    Source: ASHRAE 34 and ISO 817.
    """
    parsed = parse_safety_class(text)
    return None if parsed is None else parsed.flammability != "1"
