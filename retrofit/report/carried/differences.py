"""Two results set against each other, number by number and word by word."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any, TypeGuard

from retrofit.report.machine import UNITS

# The property tables are held to 1e-5 of the equations of state when they are built; what is computed from them is
# no more exact. A number near zero is a difference of larger ones: it is held to 1e-5 of the size given here.
TOLERANCE = 1e-5
SIZES = {"K": 300.0, "Pa": 1e5, "W": 1e3, "J/kg": 1e5, "J/(kg K)": 1e3, "kg": 1.0}
SMALLEST_SIZE = 1e-3
TOLERANCE_WORDS = (
    "Numbers count as equal within 0.001 % (temperatures within 0.003 K): that is how closely the property tables "
    "follow the equations of state."
)
SUFFIXES = {"_K": "K", "_Pa": "Pa", "_W": "W", "_J_per_kg": "J/kg", "_J_per_kgK": "J/(kg K)", "_kg": "kg"}
# What names an item of a list; the first that all its items have.
NAMES = ("refrigerant", "code", "id", "name", "key", "file", "method", "topic", "title", "day", "text")
DECIDING = ("status", "verdict", "level", "state", "safety_class")
WHOLE = "whole case"


@dataclass(frozen=True)
class Difference:
    """One thing that differs.

    Attributes:
        refrigerant: Designation; "whole case" for what belongs to none.
        quantity: Where it stands in the JSON of a result, such as "duty.cop".
        old, new: Number, word, None for not known, or "absent".
        relative: New minus old as a part of old; None where there is no such number.
    """

    refrigerant: str
    quantity: str
    old: object
    new: object
    relative: float | None = None

    @property
    def rank(self) -> tuple[int, float]:
        """Return where it stands in a list: what decides first, then numbers, the largest first, then words."""
        is_deciding = self.quantity.rpartition(".")[2] in DECIDING or "absent" in (self.old, self.new)
        if is_deciding:
            return 0, 0.0
        if self.relative is not None:
            return 1, -abs(self.relative)
        return (1, float("-inf")) if _is_number(self.old) and _is_number(self.new) else (2, 0.0)


def differences(old: Mapping[str, Any], new: Mapping[str, Any]) -> tuple[Difference, ...]:
    """Return what differs between two results in canonical form, the weightiest first.

    Args:
        old: The result kept.
        new: The result computed again.
    """
    return tuple(sorted(_between(_by_refrigerant(old), _by_refrigerant(new), (), ""), key=lambda item: item.rank))


def count_of(value: object) -> tuple[int, int]:
    """Return how many numbers, and how many words, truths and gaps, stand in plain data."""
    if isinstance(value, Mapping | list):
        items = value.values() if isinstance(value, Mapping) else value
        counts = [count_of(item) for item in items]
        return sum(count[0] for count in counts), sum(count[1] for count in counts)
    return (1, 0) if _is_number(value) else (0, 1)


def _by_refrigerant(result: Mapping[str, Any]) -> dict[str, Any]:
    """Return a result with its refrigerants by designation; one that is compared with itself is told apart."""
    rest = {key: value for key, value in result.items() if key not in ("existing", "candidates")}
    entries = [result.get("existing"), *_list(result.get("candidates"))]
    return {WHOLE: rest, **_labelled([entry for entry in entries if isinstance(entry, Mapping)])}


def _list(value: object) -> list[Any]:
    return value if isinstance(value, list) else []


def _labelled(items: list[Any]) -> dict[str, Any]:
    """Return the items of a list by their names, else by their places."""
    is_named = bool(items) and all(isinstance(item, Mapping) for item in items)
    name = next((key for key in NAMES if is_named and all(isinstance(item.get(key), str) for item in items)), None)
    found: dict[str, Any] = {}
    for place, item in enumerate(items, start=1):
        label = item[name] if name else str(place)
        found[label if label not in found else f"{label} #{place}"] = item
    return found


def _between(old: Any, new: Any, path: tuple[str, ...], unit: str) -> Iterator[Difference]:
    if isinstance(old, list) and isinstance(new, list):
        old, new = _labelled(old), _labelled(new)
    if isinstance(old, Mapping) and isinstance(new, Mapping):
        for key in dict.fromkeys([*old, *new]):
            if key in old and key in new:
                yield from _between(old[key], new[key], (*path, key), _unit(key, new))
            else:
                yield _difference(
                    (*path, key),
                    _brief(old[key]) if key in old else "absent",
                    "absent" if key in old else _brief(new[key]),
                )
    elif not _is_same(old, new, unit):
        yield _difference(path, _brief(old), _brief(new))


def _unit(key: str, beside: Mapping[str, Any]) -> str:
    """Return the unit of a number: by the end of its name, else by what stands beside it."""
    by_name = next((unit for end, unit in SUFFIXES.items() if key.endswith(end)), "")
    return by_name or str(beside.get("unit") or UNITS.get(str(beside.get("kind")), "")).split(" ")[0]


def _is_same(old: object, new: object, unit: str) -> bool:
    if _is_number(old) and _is_number(new):
        size = max(abs(old), abs(new), SIZES.get(unit, SMALLEST_SIZE))
        return abs(new - old) <= TOLERANCE * size
    return type(old) is type(new) and old == new


def _difference(path: tuple[str, ...], old: object, new: object) -> Difference:
    relative = None
    if _is_number(old) and _is_number(new) and old:
        relative = (new - old) / abs(old)
        relative = relative if math.isfinite(relative) else None
    quantity = ".".join(path[1:]) or "the refrigerant itself"
    return Difference(path[0], re.sub(r"\s+", " ", quantity), old, new, relative)


def _is_number(value: object) -> TypeGuard[int | float]:
    return isinstance(value, int | float) and not isinstance(value, bool)


def _brief(value: object) -> object:
    return "there" if isinstance(value, Mapping | list) else value
