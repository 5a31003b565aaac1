"""The report in every form asked for at once: HTML page, PDF, spreadsheet."""

from __future__ import annotations

from collections.abc import Collection
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from retrofit.study import Comparison

FORMS = ("html", "pdf", "xlsx")


def require(forms: Collection[str]) -> None:
    """Do nothing if every form can be made here; to be asked before anything is computed.

    Args:
        forms: Some of `FORMS`. [-]
    Raises: MissingPartError with advice if an optional part is not installed.
    """
    from retrofit.report.pdf import require_pdf
    from retrofit.report.spreadsheet import require_spreadsheet

    if "pdf" in forms:
        require_pdf()
    if "xlsx" in forms:
        require_spreadsheet()


def render_forms(
    forms: Collection[str], comparison: Comparison, units: str, template_folder: Path | None, *, made_at: datetime
) -> dict[str, str | bytes]:
    """Return the report in each form, so that all are there before the first is written.

    Args:
        forms: Some of `FORMS`. [-]
        comparison: An assessed result.
        units: "si", "ip" or "both"; a spreadsheet has one, then "si". [-]
        template_folder: The reader's own templates for HTML and PDF; None for none. [-]
        made_at: The time to print. [-]
    Returns: Contents of the files, by form. [-]
    Raises: ReportError if a template of the reader fails; MissingPartError if an optional part is not installed.
    """
    from retrofit.report.html import render_html
    from retrofit.report.pdf import render_pdf
    from retrofit.report.spreadsheet import render_spreadsheet
    from retrofit.units import UNIT_SYSTEMS

    found: dict[str, str | bytes] = {}
    if {"html", "pdf"} & set(forms):
        html = render_html(comparison, units, template_folder, made_at=made_at)
        found = {"html": html} if "html" in forms else {}
        if "pdf" in forms:
            found["pdf"] = render_pdf(html, comparison)
    if "xlsx" in forms:
        found["xlsx"] = render_spreadsheet(comparison, UNIT_SYSTEMS[units].systems[0].name, made_at=made_at)
    return found
