"""Plain-text tables for a terminal: numbers to the right, two lines of heading, thin rules, no boxes.

Designations are printed as ASHRAE 34 writes them, whatever the text that comes in says.
"""

from __future__ import annotations

import textwrap
import unicodedata
from collections.abc import Sequence
from dataclasses import dataclass

from retrofit.refrigerants import with_hyphens

GAP = "  "
RULE = "─"


@dataclass(frozen=True)
class Column:
    """One column: its heading, the unit below it, and whether it holds words instead of numbers."""

    heading: str
    unit: str = ""
    is_words: bool = False


def text_table(columns: Sequence[Column], rows: Sequence[Sequence[str]]) -> str:
    """Return a table as text.

    Args:
        columns: Headings.
        rows: Cells, one a column.
    Returns: Heading, unit line, rule and rows; every column as wide as its widest cell.
    """
    heads = [[with_hyphens(column.heading) for column in columns], [column.unit for column in columns]]
    rows = [[with_hyphens(cell) for cell in row] for row in rows]
    widths = [max(width(line[i]) for line in [*heads, *rows]) for i in range(len(columns))]

    def line(cells: Sequence[str]) -> str:
        padded = (_pad(cell, widths[i], columns[i].is_words) for i, cell in enumerate(cells))
        return GAP.join(padded).rstrip()

    units = [line(heads[1])] if any(heads[1]) else []
    rule = RULE * (sum(widths) + len(GAP) * (len(widths) - 1))
    return "\n".join([line(heads[0]), *units, rule, *(line(row) for row in rows)])


def width(text: str) -> int:
    """Return how many terminal cells a text takes."""
    wide = {"W", "F"}
    return sum(0 if unicodedata.combining(c) else 2 if unicodedata.east_asian_width(c) in wide else 1 for c in text)


def _pad(text: str, to: int, is_words: bool) -> str:
    blanks = " " * (to - width(text))
    return text + blanks if is_words else blanks + text


def paragraph(text: str, columns: int, indent: str = "", first: str | None = None) -> str:
    """Return a text wrapped to a number of columns, with an indent and another one for the first line."""
    start = indent if first is None else first
    text = with_hyphens(text)
    return textwrap.fill(text, columns, initial_indent=start, subsequent_indent=indent, break_long_words=False)
