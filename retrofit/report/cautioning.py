"""The cautions of a comparison sorted for a reader: by safety class, each once, with all it applies to."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.refrigerants import Caution
from retrofit.report.table import NOT_STATED
from retrofit.study import Comparison, Entry

DEFERENCE = (
    "Whether and how a refrigerant may be used in a plant is decided by ASHRAE 34 and 15, by ISO 817 and 5149 or "
    "EN 378, by local code and the authority, by the makers of the equipment in writing, and by licensed practice; "
    "this report takes none of these decisions."
)
SHARED = "For more than one class"


@dataclass(frozen=True)
class CautionItem:
    """One caution and the refrigerants it applies to."""

    caution: Caution
    about: str


@dataclass(frozen=True)
class CautionGroup:
    """The cautions of one safety class."""

    heading: str
    about: str
    items: tuple[CautionItem, ...]


def caution_groups(comparison: Comparison) -> tuple[CautionGroup, ...]:
    """Return every caution of every refrigerant, sorted by safety class.

    Args:
        comparison: The result.
    Returns: One group for each class in the order of the refrigerants, then what concerns several classes.
    """
    applies: dict[Caution, list[Entry]] = {}
    for entry in comparison.entries:
        for caution in entry.cautions:
            applies.setdefault(caution, []).append(entry)
    groups = [
        CautionGroup(f"Class {name}" if name != NOT_STATED else "Class not stated", _names(members), items)
        for name, members in _by_class(comparison).items()
        if (items := _items(applies, {name}))
    ]
    shared = tuple(
        CautionItem(caution, _names(entries)) for caution, entries in applies.items() if len(_classes(entries)) > 1
    )
    return (*groups, CautionGroup(SHARED, "", shared)) if shared else tuple(groups)


def _items(applies: dict[Caution, list[Entry]], classes: set[str]) -> tuple[CautionItem, ...]:
    return tuple(
        CautionItem(caution, _names(entries)) for caution, entries in applies.items() if _classes(entries) == classes
    )


def _by_class(comparison: Comparison) -> dict[str, list[Entry]]:
    found: dict[str, list[Entry]] = {}
    for entry in comparison.entries:
        found.setdefault(_class(entry), []).append(entry)
    return found


def _classes(entries: list[Entry]) -> set[str]:
    return {_class(entry) for entry in entries}


def _class(entry: Entry) -> str:
    return entry.refrigerant.safety_class.text or NOT_STATED


def _names(entries: list[Entry]) -> str:
    return ", ".join(dict.fromkeys(entry.refrigerant.display_name for entry in entries))
