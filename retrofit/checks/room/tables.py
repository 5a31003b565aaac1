"""The rows of the charge tables that a room falls in: what each allows, and which keys of the case choose among them.

A key that the case leaves out makes no row: every row that may hold is returned, and the caller takes the strictest.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from retrofit.case import Room
from retrofit.checks.room.lists import read

FEW_PER_M2 = 0.1  # fewer than one person for each 10 m2
# The keys of [room] that each fact of a row rests on.
KEYS: Mapping[str, tuple[str, ...]] = {
    "access": ("access",),
    "below_ground": ("below_ground",),
    "confined": ("below_ground", "emergency_exits"),
    "exits": ("emergency_exits",),
    "few": ("people", "area"),
}


@dataclass(frozen=True)
class Cell:
    """What one row allows at one location.

    Attributes:
        by: "volume", "area", "mass" or "none", as in charge_tables.toml.
        cap: The most, in kg or by its name; None without one.
        sealed_only: Whether nothing but a factory-sealed system may stand there.
    """

    by: str
    cap: float | str | None = None
    sealed_only: bool = False


def cells(kind: str, category: str, room: Room, *, comfort: bool | None = None) -> tuple[Cell, ...]:
    """Return what the rows that may hold allow, each once; nothing where the table says nothing of the location.

    Args:
        kind: "toxicity" or "flammability".
        category: "A" or "B", "2L", "2" or "3".
        room: The room, with its location class.
        comfort: Whether the plant is for comfort; None where the table does not ask.
    """
    found = (row["at"].get(room.location_class or "") for row in _rows(kind, category, room, comfort))
    return tuple(dict.fromkeys(Cell(**cell) for cell in found if cell is not None))


def open_keys(kind: str, category: str, room: Room, *, comfort: bool | None = None) -> tuple[str, ...]:
    """Return the keys of [room] left out that choose among the rows, in the order of `KEYS`.

    Args:
        kind: "toxicity" or "flammability".
        category: "A" or "B", "2L", "2" or "3".
        room: The room.
        comfort: Whether the plant is for comfort; None where the table does not ask.
    """
    rows = list(_rows(kind, category, room, comfort))
    facts = _facts(room)
    asked = [name for name in KEYS if facts[name] is None and any(name in row for row in rows)]
    return tuple(dict.fromkeys(key for name in asked for key in KEYS[name] if _given(room)[key] is None))


def _given(room: Room) -> dict[str, object]:
    return {
        "access": room.access,
        "below_ground": room.below_ground,
        "emergency_exits": room.emergency_exits,
        "people": room.people,
        "area": room.area_m2,
    }


def conditions(location: str | None) -> tuple[str, ...]:
    """Return what holds instead where a row sets no limit.

    Args:
        location: Location class.
    """
    table = read("charge_tables")["conditions"]
    return tuple(table.get(location or "", table["other"]))


def source() -> str:
    """Return where the tables come from."""
    return str(read("charge_tables")["source"])


def _rows(kind: str, category: str, room: Room, comfort: bool | None) -> Iterator[dict[str, Any]]:
    facts = _facts(room)
    for row in read("charge_tables")[kind]:
        if row["category"] == category and row.get("comfort") == comfort and _may_hold(row, facts):
            yield row


def _may_hold(row: Mapping[str, Any], facts: Mapping[str, object]) -> bool:
    access = facts["access"]
    if access is not None and "access" in row and access not in row["access"]:
        return False
    others = [name for name in KEYS if name != "access" and name in row]
    return all(facts[name] is None or facts[name] == row[name] for name in others)


def _facts(room: Room) -> dict[str, object]:
    """Return what a row asks of the room, None where the case leaves it open."""
    few = None if room.people is None or not room.area_m2 else room.people / room.area_m2 < FEW_PER_M2
    return {
        "access": room.access_category,
        "below_ground": room.below_ground,
        "confined": _confined(room),
        "exits": room.emergency_exits,
        "few": few,
    }


def _confined(room: Room) -> bool | None:
    """Return whether the room lies below ground or has no emergency exits.

    The standard means upper floors without exits; a ground floor without any is counted with them, on the strict side.
    """
    if room.below_ground or room.emergency_exits is False:
        return True
    return None if room.below_ground is None or room.emergency_exits is None else False
