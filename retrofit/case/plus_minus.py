"""How far each input may be off: its plus or minus, by the key it belongs to."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from pydantic import ConfigDict

from retrofit.case.table import Table


class PlusMinus(Table):
    """Half the width within which an input lies, under its own name: `duty.evaporating = "1 K"`."""

    model_config = ConfigDict(frozen=True, extra="allow", defer_build=True)
    __pydantic_extra__: dict[str, Any]

    @property
    def by_key(self) -> Mapping[str, object]:
        """What is written for each full key, such as "duty.evaporating", unread."""
        return dict(_flat(self.__pydantic_extra__))


def _flat(node: Mapping[str, Any], above: str = "") -> Iterator[tuple[str, object]]:
    for name, value in node.items():
        if isinstance(value, Mapping):
            yield from _flat(value, f"{above}{name}.")
        else:
            yield f"{above}{name}", value
