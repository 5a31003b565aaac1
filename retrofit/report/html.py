"""The report of a comparison as one HTML file: built, checked for its cautions, and written whole."""

from __future__ import annotations

import os
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from markupsafe import Markup

    from retrofit.report.page import Page
    from retrofit.report.site_copy import SiteCopy
    from retrofit.study import Comparison


def render_html(
    comparison: Comparison, units: str = "si", template_folder: Path | None = None, *, made_at: datetime
) -> str:
    """Return the report of a comparison as one HTML page that loads nothing and carries its case and result.

    Args:
        comparison: An assessed result.
        units: "si", "ip" or "both". [-]
        template_folder: The reader's own templates, laid over those of the package; None for none. [-]
        made_at: The time to print; the same result and time give the same text. [-]
    Returns: The page. [-]
    Raises: ReportError if a template of the reader fails, or leaves out or hides a caution.
    """
    # The command line imports this room for its other parts too: what is slow waits until it is needed.
    from retrofit.report.carried import with_block
    from retrofit.report.guard import check_page
    from retrofit.report.mark import marked_page
    from retrofit.report.page import build_page
    from retrofit.report.templates import render_cautions
    from retrofit.units import UNIT_SYSTEMS, told

    page = build_page(comparison, UNIT_SYSTEMS[units], made_at)
    cautions = render_cautions(page)
    html = told(_filled(page, cautions, template_folder), UNIT_SYSTEMS[units])
    html = with_block(marked_page(html, comparison.case), comparison, units, made_at)
    check_page(html, cautions)
    return html


def render_site_copy(
    comparison: Comparison,
    refrigerant: str,
    units: str = "si",
    template_folder: Path | None = None,
    *,
    made_at: datetime,
    T_inlet_today_K: float | None = None,
    despite: str | None = None,
) -> str:
    """Return job card and commissioning sheet of one candidate as one HTML page that loads nothing.

    Args:
        comparison: An assessed result.
        refrigerant: The candidate. [-]
        units: "si" or "ip". [-]
        template_folder: The reader's own templates, laid over those of the package; None for none. [-]
        made_at: The time to print. [-]
        T_inlet_today_K: Temperature at the inlet of the condenser on the day, None if not known. [K]
        despite: Reason to write it although a check stops the candidate or it is not computed; None for none. [-]
    Returns: The page. [-]
    Raises: UnknownRefrigerantError; ReportError for a refrigerant that is not a candidate, that is stopped, not
        computed or a new plant, or as `render_html`.
    """
    from retrofit.report.guard import check_page
    from retrofit.report.mark import marked_page
    from retrofit.report.site_copy import build_site_copy, candidate_named
    from retrofit.report.templates import render_cautions
    from retrofit.units import UNIT_SYSTEMS, told

    entry = candidate_named(comparison, refrigerant)
    page = build_site_copy(comparison, entry, UNIT_SYSTEMS[units], made_at, T_inlet_today_K, despite)
    cautions = render_cautions(page)
    html = marked_page(told(_filled(page, cautions, template_folder), UNIT_SYSTEMS[units]), comparison.case)
    check_page(html, cautions)
    return html


def _filled(page: Page | SiteCopy, cautions: Markup, template_folder: Path | None) -> str:
    from retrofit.report.apart import render_apart
    from retrofit.report.templates import render_page

    return render_page(page, cautions) if template_folder is None else render_apart(page, cautions, template_folder)


def write_report(path: str | os.PathLike[str], html: str) -> None:
    """Write a report so that the file is either the whole new one or what it was before.

    Args:
        path: The file to write. [-]
        html: The report. [-]
    Raises: ReportError if the path is a folder, its folder is missing, or it cannot be written.
    """
    from retrofit.report.files import write_whole

    write_whole(Path(path), html)
