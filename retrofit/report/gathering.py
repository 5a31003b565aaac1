"""What is the same for several refrigerants, told once: contents gathered with the names they are true of."""

from __future__ import annotations

from collections.abc import Hashable, Iterable
from typing import TypeVar

from retrofit.report.judging import spelled
from retrofit.study import Entry

Content = TypeVar("Content", bound=Hashable)
BASIS_WORDS = {
    "read": "read",
    "extract": "read in an extract only",
    "memory": "from memory",
    "practice": "common practice",
    "physics": "physics",
    "computed": "computed",
    "": "no source",
}


def gathered(pairs: Iterable[tuple[Entry, Content]]) -> dict[Content, list[Entry]]:
    """Return every content once, in order, with the refrigerants it belongs to.

    Args:
        pairs: Refrigerants, each with a content.
    """
    found: dict[Content, dict[str, Entry]] = {}
    for entry, content in pairs:
        found.setdefault(content, {}).setdefault(entry.refrigerant.designation, entry)
    return {content: list(entries.values()) for content, entries in found.items()}


def names(entries: Iterable[Entry]) -> str:
    """Return refrigerants by name, today's marked.

    Args:
        entries: The refrigerants.
    """
    return ", ".join(
        f"{entry.refrigerant.display_name}{' (today)' if entry.family == 'keep' else ''}" for entry in entries
    )


def nameless(entry: Entry, text: str) -> str:
    """Return a text for a reader without the designation, so that what is said of several alike is one text.

    Args:
        entry: The refrigerant.
        text: What is said of it. [-]
    """
    return spelled(text.replace(f" of {entry.refrigerant.designation}", ""))


def basis_text(basis: str, confidence: str = "") -> str:
    """Return in words how something was taken.

    Args:
        basis: "read", "extract", "memory", "practice", "physics", "computed" or empty. [-]
        confidence: Of what is from memory; empty if none is stated. [-]
    """
    words = BASIS_WORDS[basis]
    return f"{words}, {confidence} confidence" if basis == "memory" and confidence else words
