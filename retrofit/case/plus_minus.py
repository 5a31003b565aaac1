"""How far each input may be off: its plus or minus, by the key it belongs to."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from pydantic import ConfigDict

from retrofit.case.positions import KeyPath
from retrofit.case.table import Table


class PlusMinus(Table):
    """Half the width within which an input lies, under its own name: `duty.evaporating = "1 K"`."""

    model_config = ConfigDict(
        frozen=True,
        extra="allow",
        defer_build=True,
        json_schema_extra={"additionalProperties": {"type": ["string", "number", "object"]}},
    )
    __pydantic_extra__: dict[str, Any]

    @property
    def by_key(self) -> Mapping[str, object]:
        """What is written for each full key, such as "duty.evaporating", unread."""
        return {key: raw for key, _, raw in widths_written(self.__pydantic_extra__)}


def widths_written(table: Mapping[str, Any], above: KeyPath = ("plus_minus",)) -> Iterator[tuple[str, KeyPath, object]]:
    """Yield what a table of plus and minus holds, whether its keys are quoted, dotted or in tables of their own.

    Args:
        table: The table as parsed. [-]
        above: Its path in the file. [-]
    Returns: Full key, its path in the file, and what is written there, unread. [-]
    """
    for name, value in table.items():
        path = (*above, name)
        if isinstance(value, Mapping):
            yield from widths_written(value, path)
        else:
            yield ".".join(map(str, path[1:])), path, value
