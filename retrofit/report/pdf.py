"""The report as a tagged PDF, set from its HTML page by the optional part `pdf`; it loads nothing while doing so."""

from __future__ import annotations

import contextlib
import io
from importlib.util import find_spec
from pathlib import PurePath
from typing import TYPE_CHECKING, Any

from retrofit.errors import MissingPartError
from retrofit.report.mark import marked_pdf

if TYPE_CHECKING:
    from retrofit.study import Comparison

ADVICE = (
    "install WeasyPrint where retrofit is installed (in the project's folder: pip install '.[pdf]'; Debian also needs "
    "libpango-1.0-0, libpangoft2-1.0-0 and libharfbuzz-subset0), or open the HTML report in a browser and print to PDF"
)
CASE_KEPT = "The case file of this report"
# The setter leaves a heading alone on its page before a table that is kept whole but longer than a page.
BREAKS = "table.words { break-inside: auto !important }"


def require_pdf() -> None:
    """Do nothing if a PDF can be made here.

    Raises: MissingPartError with advice if the optional part or a library it needs is not installed.
    """
    _setter()


def render_pdf(html: str, comparison: Comparison) -> bytes:
    """Return a report as a tagged PDF with its language, title and fonts in it, and its case file attached.

    Args:
        html: The report as `render_html` makes it. [-]
        comparison: The result it shows.
    Returns: The PDF; the same report gives the same bytes. [-]
    Raises: MissingPartError if the optional part is not installed.
    """
    setter = _setter()
    case = comparison.case
    name = PurePath(case.path).name
    # Pictures in the page itself are all it may have; nothing is fetched from a file or a network.
    fetcher = setter.urls.URLFetcher(allowed_protocols={"data"})
    attached = [setter.Attachment(string=case.text, name=name, description=CASE_KEPT)] if case.text else []
    page = setter.HTML(string=html, url_fetcher=fetcher)
    breaks = setter.CSS(string=BREAKS, url_fetcher=fetcher)
    return marked_pdf(bytes(page.write_pdf(stylesheets=[breaks], pdf_tags=True, attachments=attached)), case)


def _setter() -> Any:
    if find_spec("weasyprint") is None:
        raise MissingPartError(f"a PDF needs the optional part `pdf`, which is not installed: {ADVICE}")
    try:
        with contextlib.redirect_stdout(io.StringIO()):  # it says there what the advice says
            import weasyprint
    except (ImportError, OSError) as error:  # a shared library is missing
        raise MissingPartError(f"a PDF needs a library that is not here ({error}): {ADVICE}") from error
    return weasyprint
