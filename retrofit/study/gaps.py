"""Something that is not known, as data: in words, and the keys of the case file that would settle it."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.units import listed


@dataclass(frozen=True)
class Gap:
    """Something that is not known; false where nothing is missing.

    Attributes:
        words: What is missing or why a number is not computed; empty where nothing is.
        keys: Full keys of the case that would settle it.
    """

    words: str = ""
    keys: tuple[str, ...] = ()

    def __bool__(self) -> bool:
        return bool(self.words)


KNOWN = Gap()


def not_given(*keys: str) -> Gap:
    """Return the gap of keys of one table that the case does not give.

    Args:
        keys: Their full names.
    """
    table = keys[0].rpartition(".")[0]
    names = listed((f"`{key.rpartition('.')[2]}`" for key in keys), "and")
    return Gap(f"{names} in [{table}] {'is' if len(keys) == 1 else 'are'} not given", keys)
