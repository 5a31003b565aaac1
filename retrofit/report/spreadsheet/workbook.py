"""Writing sheets as one workbook with the optional part `xlsx`; the same input gives the same bytes."""

from __future__ import annotations

import io
import math
from datetime import UTC, datetime
from importlib.util import find_spec
from typing import TYPE_CHECKING, Any

from retrofit.case.values import is_hidden
from retrofit.errors import MissingPartError
from retrofit.report.mark import mark_of

if TYPE_CHECKING:
    from retrofit.report.spreadsheet.table import Column, Content, Sheet
    from retrofit.study import Comparison

ADVICE = (
    "install XlsxWriter where retrofit is installed (in the project's folder: pip install '.[xlsx]'), or take the "
    "numbers from `retrofit compare --csv` and `retrofit year --csv`"
)
LONGEST_TEXT = 32_000  # characters; the format allows 32 767 in a cell
LONGEST_TITLE = 200
A4 = 9  # code of the paper in the format
# No text becomes a formula, a link or a number, whatever it looks like.
AS_WRITTEN = {"in_memory": True, "strings_to_formulas": False, "strings_to_urls": False, "strings_to_numbers": False}


def require_spreadsheet() -> None:
    """Do nothing if a spreadsheet can be made here.

    Raises: MissingPartError with advice if the optional part is not installed.
    """
    if find_spec("xlsxwriter") is None:
        raise MissingPartError(f"a spreadsheet needs the optional part `xlsx`, which is not installed: {ADVICE}")


def render_spreadsheet(comparison: Comparison, units: str = "si", *, made_at: datetime) -> bytes:
    """Return the result as a workbook of five sheets, and one more of the year if there is one.

    Args:
        comparison: An assessed result.
        units: "si" or "ip". [-]
        made_at: The time to print. [-]
    Returns: The file in Office Open XML; the same result and time give the same bytes. [-]
    Raises: MissingPartError if the optional part is not installed.
    """
    require_spreadsheet()
    import xlsxwriter

    buffer = io.BytesIO()
    book = xlsxwriter.Workbook(buffer, AS_WRITTEN)
    created = made_at.astimezone(UTC).replace(tzinfo=None, microsecond=0) if made_at.tzinfo else made_at
    title = _text(comparison.case.title)[:LONGEST_TITLE]
    book.set_properties({"title": title, "subject": "Refrigerant changeover", "created": created})
    book.set_custom_property("Made for", mark_of(comparison.case))
    formats = _Formats(book)
    for sheet in _sheets(comparison, units, made_at):
        _write(book.add_worksheet(sheet.name), sheet, formats)
    book.close()
    return buffer.getvalue()


def _sheets(comparison: Comparison, units: str, made_at: datetime) -> tuple[Sheet, ...]:
    from retrofit.report.spreadsheet.inputs import inputs_sheet
    from retrofit.report.spreadsheet.points import points_sheet
    from retrofit.report.spreadsheet.read_me import read_me_sheet
    from retrofit.report.spreadsheet.results import results_sheet
    from retrofit.report.spreadsheet.sources import sources_sheet
    from retrofit.report.spreadsheet.year import year_sheet
    from retrofit.units import UNIT_SYSTEMS

    system = UNIT_SYSTEMS[units]
    year = year_sheet(comparison, system)
    return (
        read_me_sheet(comparison, system, made_at),
        inputs_sheet(comparison, system),
        results_sheet(comparison, system),
        points_sheet(comparison, system),
        *([year] if year else []),
        sources_sheet(comparison),
    )


class _Formats:
    """The formats of a book: headings, texts, and numbers by their decimals."""

    def __init__(self, book: Any) -> None:
        self._book = book
        self._numbers: dict[int | None, Any] = {}
        self.heading = book.add_format({"bold": True, "text_wrap": True, "valign": "top", "bottom": 1})
        self.text = book.add_format({"text_wrap": True, "valign": "top"})

    def number(self, decimals: int | None) -> Any:
        """Return the format of a number with some decimals; None for as many as it has."""
        if decimals not in self._numbers:
            form = "General" if decimals is None else f"0.{'0' * decimals}".rstrip(".")
            self._numbers[decimals] = self._book.add_format({"num_format": form, "valign": "top"})
        return self._numbers[decimals]


def _write(page: Any, sheet: Sheet, formats: _Formats) -> None:
    for place, column in enumerate(sheet.columns):
        page.set_column(place, place, column.width)
        page.write_string(0, place, _text(column.heading), formats.heading)
    for line, row in enumerate(sheet.rows, start=1):
        for place, (column, content) in enumerate(zip(sheet.columns, row, strict=True)):
            _write_cell(page, line, place, column, content, formats)
    page.freeze_panes(1, sheet.names)
    page.autofilter(0, 0, len(sheet.rows), len(sheet.columns) - 1)
    page.repeat_rows(0)
    page.set_landscape()
    page.set_paper(A4)


def _write_cell(page: Any, line: int, place: int, column: Column, content: Content, formats: _Formats) -> None:
    """Write a number as a number and a text as a text; nothing stays an empty cell."""
    if isinstance(content, float):
        if not math.isfinite(content):
            raise ValueError(f"{content} is no number for a cell")
        page.write_number(line, place, content, formats.number(column.decimals))
    elif content:
        page.write_string(line, place, _text(content), formats.text)


def _text(text: str) -> str:
    """Return a text with what commands, turns the writing round or is no character of XML written out, and cut."""
    return "".join(
        c.encode("unicode_escape").decode("ascii") if is_hidden(c) or c in "\ufffe\uffff" else c for c in text
    )[:LONGEST_TEXT]
