"""Designations as ASHRAE 34 writes them, wherever a person reads: R-404A. Case files and JSON keep R404A."""

from __future__ import annotations

import re

# What stands in quotes or backticks is to be written like that; behind a point or an equals sign it is part of a key or
# an assignment, and before a point that goes on of the name of a file.
_CODE = re.compile(r"(?<![\w.\"'`=\\-])R(?=E?[0-9])(?![\w()-]*\.\w)")


def with_hyphens(text: str) -> str:
    """Return a text with the designations in it as printed for readers.

    Args:
        text: Words; codes in quotes, keys and names of files stay as they are. [-]
    """
    return _CODE.sub("R-", text)
