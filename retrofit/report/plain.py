"""Texts of the user made fit to stand in a page: nothing in them commands, turns the writing round or ends a string."""

from __future__ import annotations

from retrofit.case.values import is_hidden


def plain(text: str) -> str:
    """Return a text with characters that command or turn the writing round written out, such as \\x1b."""
    return "".join(c.encode("unicode_escape").decode("ascii") if is_hidden(c) else c for c in text)


def css_string(text: str) -> str:
    """Return a text fit to stand between the quotes of a CSS string: all but letters and digits as \\hex.

    Source: CSS Syntax Module Level 3, 4.3.7: a backslash, one to six hex digits and a blank.
    """
    return "".join(c if c.isascii() and c.isalnum() else f"\\{ord(c):x} " for c in text)
