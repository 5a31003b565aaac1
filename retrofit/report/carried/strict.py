"""JSON of unknown origin: bounded in size, count, depth and digits before anything is made of it."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping
from typing import Any, NoReturn

MOST_VALUES = 500_000  # a report of forty candidates with their remaining life has some 120 000
DEEPEST_VALUE = 20  # levels; a report has 8
MOST_DIGITS = 18  # of a whole number; it then has an exact place in 64 bits
LARGEST_NUMBER = 1e30


def strict_json(raw: bytes, largest_bytes: int) -> dict[str, Any]:
    """Return the object that JSON in ASCII holds, if it is one that a report could carry.

    Args:
        raw: The JSON. [-]
        largest_bytes: The most that it may have. [B]
    Returns: The object: no key twice, numbers finite, of ordinary size and few digits, nesting shallow. [-]
    Raises: ValueError saying what is wrong.
    """
    if len(raw) > largest_bytes:
        raise ValueError(f"it is larger than {largest_bytes / 1e6:g} MB")
    if raw.count(b",") > MOST_VALUES:
        raise ValueError(f"it has more than {MOST_VALUES} values")
    try:
        data = json.loads(
            raw.decode("ascii"),
            parse_constant=_no_constant,
            parse_int=_whole_number,
            parse_float=_number,
            object_pairs_hook=_object,
        )
    except RecursionError:
        raise ValueError("it is nested too deeply") from None
    except UnicodeDecodeError:
        raise ValueError("it is no JSON in ASCII") from None
    except json.JSONDecodeError as error:
        raise ValueError(f"it is no JSON: {error.msg} at {error.pos}") from None
    if not isinstance(data, dict):
        raise ValueError("it is no JSON object")
    _check_depth(data)
    return data


def _no_constant(word: str) -> NoReturn:
    raise ValueError(f"{word} is no number")


def _whole_number(digits: str) -> int:
    if len(digits.lstrip("-")) > MOST_DIGITS:
        raise ValueError(f"it has a number of {len(digits)} digits")
    return int(digits)


def _number(digits: str) -> float:
    found = float(digits)
    if not math.isfinite(found) or abs(found) > LARGEST_NUMBER:
        raise ValueError("it has a number that is too large")
    return found


def _object(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found = dict(pairs)
    if len(found) < len(pairs):
        raise ValueError("it has a key twice")
    return found


def _check_depth(data: Mapping[str, Any]) -> None:
    level: list[Any] = [data]
    for _ in range(DEEPEST_VALUE):
        level = [
            item
            for value in level
            for item in (value.values() if isinstance(value, dict) else value)
            if isinstance(item, dict | list)
        ]
        if not level:
            return
    raise ValueError(f"it is nested more than {DEEPEST_VALUE} levels deep")
