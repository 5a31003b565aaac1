"""What is missing as a sheet to take to the site: key, what to find, where to read it, how to write it, a blank."""

from __future__ import annotations

import csv
import io
import textwrap
from dataclasses import dataclass

from retrofit.checks.survey import OpenKey, survey
from retrofit.refrigerants import with_hyphens
from retrofit.report.text_table import paragraph
from retrofit.study import Comparison
from retrofit.units import SI, listed, shown, told

BLANK = "_" * 24
NOTHING_OPEN = "Nothing that a key of the case would settle is missing."
MOST_NAMES = 6  # of what a key settles; the rest is counted
LEAD = {
    True: "A verdict waits for these:",
    False: "These make components, room, law, year or money known:",
}


@dataclass(frozen=True)
class OpenRow:
    """One key that is missing, as texts.

    Attributes:
        number: Where it stands, from 1.
        is_decisive: Whether a verdict waits for it.
        key, what, where, form: The key, what it is, where it is read, and how it is written.
        settles: What it settles, and how many components.
        about: For which refrigerants; empty for all of them.
    """

    number: int
    is_decisive: bool
    key: str
    what: str
    where: str
    form: str
    settles: str
    about: str


def open_rows(comparison: Comparison) -> tuple[OpenRow, ...]:
    """Return the keys that are missing, the most decisive first.

    Args:
        comparison: An assessed result.
    """
    every = len(comparison.entries)
    return tuple(
        OpenRow(
            number,
            item.decisive,
            item.facts.key,
            item.facts.meaning,
            item.facts.where or "documents of the plant, or its owner",
            item.facts.form,
            told(_settles(item), SI),
            "" if len(item.refrigerants) == every else with_hyphens(listed(item.refrigerants, "and")),
        )
        for number, item in enumerate(survey(comparison), start=1)
    )


def _settles(item: OpenKey) -> str:
    names = list(item.names)
    if len(names) > MOST_NAMES:
        names = [*names[:MOST_NAMES], f"{len(names) - MOST_NAMES} more"]
    count = item.components
    return "; ".join(names) + (f" ({count} component{'s' if count > 1 else ''})" if count else "")


def open_text(comparison: Comparison, columns: int) -> str:
    """Return the sheet as text for a terminal.

    Args:
        comparison: An assessed result.
        columns: Width to wrap to. [characters]
    """
    rows, title = open_rows(comparison), shown(comparison.case.title, 200)
    if not rows:
        return f"{title}\n{NOTHING_OPEN}"
    head = (
        f"{len(rows)} keys are missing, the most decisive first. Find each on site, write it down, and put it into the "
        "case. Where several keys settle the same thing, all of them may be needed."
    )
    lines, before = [title, paragraph(head, columns)], None
    for row in rows:
        if row.is_decisive is not before:
            lines += ["", LEAD[row.is_decisive]]
            before = row.is_decisive
        about = f" For {row.about}." if row.about else ""
        lines += ["", f"{row.number:>3}  {row.key} = {BLANK}"]
        lines += [
            _line("Find", row.what, columns),
            _line("Read at", f"{row.where}.", columns),
            _line("Write", row.form, columns),
            _line("Settles", with_hyphens(f"{row.settles}.{about}"), columns),
        ]
    return "\n".join(lines)


def _line(label: str, text: str, columns: int) -> str:
    """Return a line of a key; how a value is written keeps the codes that it is written with."""
    start = f"     {label:<9}"
    return textwrap.fill(text, columns, initial_indent=start, subsequent_indent=" " * 14, break_long_words=False)


def open_csv(comparison: Comparison) -> str:
    """Return the sheet as comma-separated values, one line a key, its value to be filled in last.

    Args:
        comparison: An assessed result.
    """
    table = io.StringIO()
    writer = csv.writer(table, lineterminator="\n")
    writer.writerow(
        ("number", "decisive", "key", "what", "where", "form", "settles", "components", "refrigerants", "value")
    )
    for row, item in zip(open_rows(comparison), survey(comparison), strict=True):
        writer.writerow(
            (
                row.number,
                "yes" if row.is_decisive else "no",
                row.key,
                row.what,
                row.where,
                row.form,
                "; ".join(told(name, SI) for name in item.names),
                item.components,
                " ".join(item.refrigerants),
                "",
            )
        )
    return table.getvalue()
