"""Room and law as text for a terminal: the charge against the room, and what the tables of law ask."""

from __future__ import annotations

import re

from retrofit.report.law import NOTHING_HELD, law_lines, timeline
from retrofit.report.room import charge_of_text, code_text, has_room, room_lines
from retrofit.report.terminal_plant import Emphasis, row_names
from retrofit.report.text_table import Column, paragraph, text_table
from retrofit.study import Comparison, Entry
from retrofit.study.law import LawBasis
from retrofit.study.room import UNKNOWN
from retrofit.units import UnitSystem

# Remarks of the report as marks, which are told under the table.
MARKS = {
    "; from memory": " †",
    "; one row stays open": " ‡",
    "; it depends": " §",
}
NO_ROW = "no row"
NO_ROW_MEANS = f"{NO_ROW}: not in these tables, which is not to say that there is no rule"


def room_text(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis) -> str:
    """Return the charge of each refrigerant against the room; empty if the case describes none.

    Args:
        comparison: An assessed result.
        units: The reader's units.
        columns: Width to wrap prose to. [characters]
        strong: How a heading is set off.
    """
    entries = [entry for entry in comparison.entries if entry.room is not None]
    if not has_room(comparison) or not entries:
        return ""
    lines, mass = room_lines(comparison, units), units.label("mass")
    table = [
        (Column("", "", is_words=True), row_names(entries)),
        (Column("Charge", mass), [line.expected for line in lines]),
        (Column("Range", mass), [line.span for line in lines]),
        (Column("Limit", mass), [line.limit for line in lines]),
        (Column("Margin", mass), [line.margin for line in lines]),
        (Column("Charge is", "", is_words=True), [line.verdict for line in lines]),
    ]
    rows = [list(row) for row in zip(*(cells for _, cells in table), strict=True)]
    rules = f"{code_text(comparison.case)} {charge_of_text(entries[0].room)}" if entries[0].room else ""
    said = _said([(entry.refrigerant.designation, line.why) for entry, line in zip(entries, lines, strict=True)])
    return "\n".join(
        [
            strong("Charge against the room (a charge below a limit is no permission)"),
            paragraph(rules.replace("`", ""), columns),
            text_table([column for column, _ in table], rows),
            *(paragraph(text, columns, indent="  ", first="") for text in said),
        ]
    )


def law_text(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis) -> str:
    """Return what the tables of law ask of each refrigerant; empty if the case names no jurisdiction.

    Args:
        comparison: An assessed result.
        units: The reader's units.
        columns: Width to wrap prose to. [characters]
        strong: How a heading is set off.
    """
    basis = comparison.law
    if basis is None:
        return ""
    heading = strong(f"Law: what the tables for {basis.jurisdiction} ask, today and from the day of the change")
    entries = [entry for entry in comparison.entries if entry.law is not None]
    table = [_law_table(comparison, entries, units)] if entries else []
    said = [*map(_marks_used, table), *_remarks(comparison, basis)]
    return "\n".join([heading, *table, *(paragraph(text, columns) for text in said if text)])


def _law_table(comparison: Comparison, entries: list[Entry], units: UnitSystem) -> str:
    lines = law_lines(comparison, units)
    table = [
        (Column("", "", is_words=True), row_names(entries)),
        (Column("GWP", ""), [line.gwp for line in lines]),
        (Column("Weight", "t CO2e"), [re.sub(r" \([^)]*\)", "", line.co2e) for line in lines]),
        (Column("Leak checks", "", is_words=True), [_short(line.leak_check) for line in lines]),
        (Column("Detection", "", is_words=True), [_short(line.detection) for line in lines]),
        (Column("First ban", "", is_words=True), [_short(line.bans[0]) for line in lines]),
    ]
    rows = [list(row) for row in zip(*(cells for _, cells in table), strict=True)]
    return text_table([column for column, _ in table], rows)


def _marks_used(table: str) -> str:
    """Return what the marks in a table mean; empty if it has none."""
    used = [NO_ROW_MEANS] if NO_ROW in table else []
    used += [f"{mark.strip()} {words.removeprefix('; ')}" for words, mark in MARKS.items() if mark in table]
    return f"{'; '.join(used)}." if used else ""


def _short(text: str) -> str:
    """Return a cell of the report with marks in place of its remarks."""
    for words, mark in MARKS.items():
        text = text.replace(words, mark)
    return text.replace(NOTHING_HELD, NO_ROW)


def _remarks(comparison: Comparison, basis: LawBasis) -> list[str]:
    """Return what stands under the table: dates, what is missing, the tables and their dates, and who decides."""
    found = []
    if not basis.tables:
        found.append(f"Unknown: there is no table for {basis.jurisdiction}; there are for {', '.join(basis.known)}.")
    ahead = [(day, about) for day, text, about in timeline(comparison, basis) if text.startswith("begins") and about]
    days = sorted({day for day, _ in ahead})
    if days:
        found.append(f"Something begins on {', '.join(days)}: see the report.")
    missing = dict.fromkeys(text for entry in comparison.entries if entry.law for text in entry.law.unknown)
    if missing:
        found.append(f"{UNKNOWN.capitalize()}: {'; '.join(missing)}.")
    found += [f"{problem}." for problem in basis.problems]
    if basis.tables:
        checked = "; ".join(f"{table.file}, checked {table.checked}" for table in basis.tables)
        found.append(f"Tables: {checked}.")
    return [*found, basis.deference]


def _said(pairs: list[tuple[str, str]]) -> list[str]:
    """Return what decides, once for all refrigerants it is the same for."""
    found: dict[str, list[str]] = {}
    for name, text in pairs:
        found.setdefault(text.replace("`", ""), []).append(name)
    return [f"{', '.join(names)}: {text}" for text, names in found.items()]
