"""Which charge rules and product standards are usual where a plant stands."""

from __future__ import annotations

from collections.abc import Mapping

from retrofit.case import areas

# EN 378 is the harmonised standard of Europe, ASHRAE 15 stands behind the mechanical codes of the US.
_CODES: Mapping[str, str] = {"EU": "EN 378", "GB": "EN 378", "US": "ASHRAE 15"}


def code_of(jurisdiction: str | None) -> str:
    """Return the charge rules that are usual in a jurisdiction; empty if none are held here.

    Args:
        jurisdiction: Whose law, None if not stated.
    """
    return next((_CODES[area] for area in areas(jurisdiction or "") if area in _CODES), "")


def holds_there(names: tuple[str, ...], jurisdiction: str | None) -> bool:
    """Return whether what has these jurisdictions holds in a place; a place that is not told may be any.

    Args:
        names: Jurisdictions; empty for everywhere.
        jurisdiction: Whose law, None if not stated.
    """
    return not names or jurisdiction is None or bool(set(names) & set(areas(jurisdiction)))
