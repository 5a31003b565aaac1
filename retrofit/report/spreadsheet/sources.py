"""The sheet of sources: every catalogue value, caution and threshold behind a result, with where it comes from."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.refrigerants import Value, source
from retrofit.report.judging import source_title, spelled
from retrofit.report.spreadsheet.table import GAPS, Column, Content, Sheet
from retrofit.report.values import FIELDS
from retrofit.study import Comparison

COLUMNS = (
    Column("Refrigerant"),
    Column("Quantity", width=34),
    Column("Number", width=14),
    Column("Unit", width=10),
    Column("Words", width=40),
    Column("Source", width=16),
    Column("Title of the source", width=50),
    Column("Publisher", width=24),
    Column("Edition", width=16),
    Column("How it was taken", width=14),
    Column("Confidence", width=12),
    Column("Note", width=60),
    Column(GAPS, width=30),
)
EVERY = "all"
Row = tuple[Content, ...]


def sources_sheet(comparison: Comparison) -> Sheet:
    """Return the sheet; its numbers are in the catalogue's SI units, named in each row.

    Args:
        comparison: An assessed result.
    """
    return Sheet("Sources", 2, COLUMNS, (*_values(comparison), *_cautions(comparison), *_thresholds(comparison)))


def _values(comparison: Comparison) -> Iterator[Row]:
    for entry in comparison.entries:
        for field, label in FIELDS.items():
            yield _value(entry.refrigerant.display_name, label, getattr(entry.refrigerant, field))


def _value(name: str, label: str, value: Value) -> Row:
    origin = source(value.source) if value.source else None
    words = (origin.title, origin.publisher, origin.edition) if origin else ("", "", "")
    note = "; ".join(part for part in (value.status, value.note) if part)
    gap = None if value.number is not None or value.text else value.status or "not stated"
    unit = value.unit if value.number is not None else ""
    return name, label, value.number, unit, value.text, value.source, *words, value.basis, value.confidence, note, gap


def _cautions(comparison: Comparison) -> Iterator[Row]:
    for entry in comparison.entries:
        for caution in entry.cautions:
            titles = "; ".join(source(key).title for key in caution.source.split("; "))
            name = entry.refrigerant.display_name
            yield name, f"caution: {caution.title}", None, "", caution.text, caution.source, titles, *[""] * 5, None


def _thresholds(comparison: Comparison) -> Iterator[Row]:
    found = {(item.title, item.source): item for entry in comparison.entries for item in entry.findings}
    for (title, origin), _ in found.items():
        yield EVERY, f"finding: {spelled(title)}", None, "", "", "", source_title(origin), *[""] * 5, None
