"""Words for messages: what a user wrote made fit to be echoed, lists in prose, near matches."""

from __future__ import annotations

import difflib
from collections.abc import Iterable

LONGEST_ECHO = 60  # characters


def shown(text: str, longest: int = LONGEST_ECHO) -> str:
    """Return a text fit to be echoed: cut to a length, what cannot be printed escaped.

    Args:
        text: What a user wrote; may hold control characters. [-]
        longest: Characters kept. [-]
    Returns: The text without anything a terminal could obey. [-]
    """
    cut = text if len(text) <= longest else text[:longest] + "…"
    return "".join(c if c.isprintable() else c.encode("unicode_escape").decode("ascii") for c in cut)


def quoted(text: str) -> str:
    """Return a text in double quotation marks, made fit to be echoed."""
    return f'"{shown(text)}"'


def listed(words: Iterable[str], last: str = "or") -> str:
    """Return words as a list in prose: `a, b or c`."""
    items = list(words)
    return items[0] if len(items) == 1 else f"{', '.join(items[:-1])} {last} {items[-1]}"


def close_to(word: str, allowed: Iterable[str]) -> str:
    """Return `, did you mean ...?` for a misspelt word, or nothing if no allowed word is near."""
    by_lower = {candidate.lower(): candidate for candidate in allowed}
    near = difflib.get_close_matches(word.lower()[:LONGEST_ECHO], by_lower, n=1, cutoff=0.6)
    return f', did you mean "{by_lower[near[0]]}"?' if near else ""


def described(value: object) -> str:
    """Return what a value read from TOML is, in plain words, for a message."""
    if isinstance(value, bool):
        return "true or false"
    words = {str: "a text", int: "a number", float: "a number", list: "a list", dict: "a table"}
    return words.get(type(value), "a date or a time")
