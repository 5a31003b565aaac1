"""Room and law as text for a terminal: the charge against the room, and what the tables of law ask."""

from __future__ import annotations

from retrofit.report.law import NOTHING_HELD, LawCell, Mark, law_lines, outlook
from retrofit.report.room import charge_of_text, code_text, condition_lines, has_room, room_lines
from retrofit.report.terminal_plant import Emphasis, row_names
from retrofit.report.text_table import Column, paragraph, text_table
from retrofit.study import Comparison, Entry
from retrofit.study.law import Change, LawBasis
from retrofit.study.law_words import DEFERENCE, NOT_VERIFIED, not_checked, problems, reason_text
from retrofit.study.room import UNKNOWN
from retrofit.units import UnitSystem

# Remarks of the report as marks, explained under the table.
MARKS = {Mark.NOT_VERIFIED: "†", Mark.DEPENDS: "§"}
MEANINGS = {Mark.NOT_VERIFIED: NOT_VERIFIED, Mark.DEPENDS: "it depends: see the report"}
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
            *(
                paragraph(
                    f"Instead of a limit for {who}, each to be shown: {'; '.join(texts)}.",
                    columns,
                    indent="  ",
                    first="",
                )
                for who, texts in condition_lines(comparison, units)
            ),
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
    whose = f"duties and bans by the tables for {basis.jurisdiction}, today and from the date of change"
    heading = strong(f"Law: {whose if basis.tables else 'not checked'}")
    entries = [entry for entry in comparison.entries if entry.law is not None]
    table = [_law_table(comparison, entries, units)] if entries else []
    said = [*map(_marks_used, table), *_remarks(comparison, basis)]
    return "\n".join([heading, *table, *(paragraph(text, columns) for text in said if text)])


def _law_table(comparison: Comparison, entries: list[Entry], units: UnitSystem) -> str:
    lines = law_lines(comparison, units)
    table = [
        (Column("", "", is_words=True), row_names(entries)),
        (Column("GWP", ""), [line.gwp for line in lines]),
        (Column("Charge", "t CO2e"), [line.co2e_expected for line in lines]),
        (Column("Leak checks", "", is_words=True), [_short(line.leak_check) for line in lines]),
        (Column("Detection", "", is_words=True), [_short(line.detection) for line in lines]),
        (Column("Ban in force", "", is_words=True), [_short(line.strictest) for line in lines]),
        (Column("Next ban", "", is_words=True), [_short(line.following) for line in lines]),
    ]
    rows = [list(row) for row in zip(*(cells for _, cells in table), strict=True)]
    return text_table([column for column, _ in table], rows)


def _marks_used(table: str) -> str:
    """Return what the marks in a table mean; empty if it has none."""
    used = [NO_ROW_MEANS] if NO_ROW in table else []
    used += [f"{mark} {MEANINGS[name]}" for name, mark in MARKS.items() if mark in table]
    return f"{'; '.join(used)}." if used else ""


def _short(cell: LawCell) -> str:
    """Return a cell of the report with marks in place of its remarks."""
    text = NO_ROW if cell.text == NOTHING_HELD else cell.text
    return " ".join((text, *(MARKS[mark] for mark in cell.marks)))


def _remarks(comparison: Comparison, basis: LawBasis) -> list[str]:
    """Return what stands under the table: dates, what is missing, the tables and their dates, and who decides."""
    found = []
    if not basis.tables:
        found.append(f"{not_checked(basis)}.")
    moments = (moment for entry in comparison.entries if entry.law for moment in entry.law.timeline)
    days = sorted({moment.day.isoformat() for moment in moments if moment.change == Change.BEGINS})
    if days:
        found.append(f"New rules apply from {', '.join(days)}: see the report.")
    reasons = dict.fromkeys(reason for entry in comparison.entries if entry.law for reason in entry.law.unknown)
    if reasons:
        found.append(f"{UNKNOWN.capitalize()}: {'; '.join(map(reason_text, reasons))}.")
    touched = [item.name for item in outlook(comparison)]
    if touched:
        found.append(f"Outlook, not law: PFAS proposal or TFA concern {', '.join(touched)}; see the report.")
    found += [f"{problem}." for problem in problems(basis)]
    if basis.tables:
        checked = "; ".join(f"{table.file}, read {table.checked}" for table in basis.tables)
        found.append(f"Tables: {checked}.")
    if basis.not_held:
        found.append(f"Not held: {'; '.join(basis.not_held)}.")
    return [*found, DEFERENCE]


def _said(pairs: list[tuple[str, str]]) -> list[str]:
    """Return what decides, once for all refrigerants it is the same for."""
    found: dict[str, list[str]] = {}
    for name, text in pairs:
        found.setdefault(text.replace("`", ""), []).append(name)
    return [f"{', '.join(names)}: {text}" for text, names in found.items()]
