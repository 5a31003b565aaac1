"""What a key of a case file means, and the quantity a case holds for it: for lists of inputs."""

from __future__ import annotations

from typing import Any

from retrofit.case.model import Case, field_of
from retrofit.case.money import Options
from retrofit.case.values import FileValue


def meaning(key: str) -> str:
    """Return the sentence on a key of a table.

    Args:
        key: Its full name, such as "duty.cooling" or "lines.suction.diameter". [-]
    Returns: The sentence; of a key that has none (a threshold of the user) its last name.
    """
    _, field = field_of(key) or ("", None)
    return (field and field.description) or key.rpartition(".")[2]


def quantity(case: Case, key: str) -> tuple[str, float] | None:
    """Return the quantity that a case holds for a key.

    Args:
        case: The case.
        key: Its full name, such as "duty.cooling" or "lines.suction.diameter". [-]
    Returns: Kind of quantity as `UnitSystem.displays` names it, and value [SI]; None if there is no one quantity.
    """
    attribute, field = field_of(key) or ("", None)
    value: Any = case
    for part in (*key.split(".")[:-1], attribute):
        value = value.named(part) if isinstance(value, Options) else getattr(value, part, None)
    how = next((extra for extra in (field.metadata if field else ()) if isinstance(extra, FileValue)), None)
    is_number = isinstance(value, int | float)
    return (how.shown_kind(), value) if how and how.shown_kind() and is_number else None
