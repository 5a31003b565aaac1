"""What a case file holds, key by key, before it is a case: for checks that need two keys."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from retrofit.case.model import field_of
from retrofit.case.positions import KeyPath
from retrofit.case.table import Items
from retrofit.case.values import ABSENT, FileValue
from retrofit.errors import QuantityError
from retrofit.units import STANDARD_ATMOSPHERE_PA, standard_atmosphere_Pa


def path_of(key: str) -> KeyPath:
    """Return the path of a full key such as "lines.suction.diameter"."""
    return tuple(key.split("."))


class Written:
    """The parsed data of a file, and the value of each key that can be read by itself.

    Attributes:
        data: The parsed TOML. [-]
        p_ambient_Pa: Air pressure at the plant; that at sea level if its altitude cannot be read. [Pa]
    """

    def __init__(self, data: Mapping[str, Any]) -> None:
        self.data = data
        self.p_ambient_Pa: float = STANDARD_ATMOSPHERE_PA
        altitude_m = self.value("plant.altitude")
        if altitude_m is not None:
            self.p_ambient_Pa = standard_atmosphere_Pa(altitude_m)

    def raw(self, key: str) -> Any:
        """Return what stands in the file under a full key, or None."""
        node: Any = self.data
        for part in path_of(key):
            node = node.get(part) if isinstance(node, dict) else None
        return node

    def has(self, key: str) -> bool:
        """Say whether the file holds a full key."""
        return self.raw(key) is not None

    def value(self, key: str) -> Any:
        """Return the value of a full key in SI, or None if it is not there or not right by itself.

        Of a list it is the values of its items, None for those that are not right.
        """
        return self._value(key, self.raw(key))

    def value_or_default(self, key: str) -> Any:
        """Return the value of a full key as `value` does, or its default if the file leaves it out."""
        found = field_of(key)
        return self._value(key, self.raw(key) if self.has(key) or not found else found[1].default)

    def _value(self, key: str, raw: Any) -> Any:
        found = field_of(key)
        for extra in found[1].metadata if found else ():
            if isinstance(extra, FileValue):
                return self._read(extra, raw)
            if isinstance(extra, Items):
                return [self._read(extra.item, item) for item in raw] if isinstance(raw, list) else None
        return None

    def _read(self, how: FileValue, raw: object) -> Any:
        try:
            found = None if raw is None else how.read(raw, self.p_ambient_Pa)
        except QuantityError:
            return None
        return None if found is ABSENT else found
