"""Finding templates and filling them: the built-in ones, with the reader's own folder laid over them.

The block of cautions is always filled from the built-in template, whatever the reader's folder holds.
"""

from __future__ import annotations

import traceback
from collections.abc import Iterator, Mapping
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any, Protocol

import retrofit
from retrofit.errors import ReportError
from retrofit.units import shown

if TYPE_CHECKING:
    from markupsafe import Markup

    from retrofit.report.cautioning import CautionGroup
    from retrofit.report.page import Page
    from retrofit.report.site_copy import SiteCopy

PAGE, CAUTIONS = "report.html", "cautions.html"
FOLDER = "report_templates"


def built_in_folder() -> Path:
    """Return the folder of the built-in templates: inside the installed package, else beside it.

    Raises: ReportError if neither is there.
    """
    package = Path(retrofit.__file__).resolve().parent
    for folder in (package / FOLDER, package.parent / FOLDER):
        if (folder / PAGE).is_file():
            return folder
    raise ReportError(f"the templates of the report are missing: no {FOLDER}/{PAGE}; install the package again")


class Cautioned(Protocol):
    """What the block of cautions is made from: a page, of the report or of a meeting."""

    @property
    def deference(self) -> str:
        """Return who decides."""

    @property
    def cautions(self) -> tuple[CautionGroup, ...]:
        """Return every caution, by safety class."""

    @property
    def number(self) -> Mapping[str, str]:
        """Return the numbers of the sections, by id."""


def render_cautions(page: Cautioned, is_topmost: bool = True) -> Markup:
    """Return the block of cautions, from the built-in template alone.

    Args:
        page: What it is made from.
        is_topmost: Whether it lies above all else, as it has to where the reader's own templates may put something
            over it; in a meeting it scrolls under what stays in sight. [-]
    """
    from markupsafe import Markup

    return Markup(_environment(None).get_template(CAUTIONS).render(page=page, is_topmost=is_topmost))


def filled(name: str, **values: object) -> str:
    """Return a built-in template with values in it, as the meeting page needs.

    Args:
        name: File name of the template. [-]
        values: What it shows, by name. [-]
    """
    return str(_own_environment().get_template(name).render(**values))


@cache
def _own_environment() -> Any:
    """Return the environment of templates that are all our own: no sandbox, which doubles the time."""
    from jinja2 import Environment, FileSystemLoader, StrictUndefined

    return Environment(
        loader=FileSystemLoader(str(built_in_folder())),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        auto_reload=False,
    )


def render_page(page: Page | SiteCopy, cautions: Markup) -> str:
    """Return the page from the built-in templates.

    Args:
        page: What it shows.
        cautions: The finished block of cautions, which a page puts in place as `{{ cautions }}`.
    """
    return str(_environment(None).get_template(page.template).render(page=page, cautions=cautions))


def with_own(page: Page | SiteCopy, cautions: Markup, folder: Path) -> Iterator[str]:
    """Yield the page piece by piece, with the reader's own templates laid over the built-in ones.

    Args:
        page: What it shows.
        cautions: The finished block of cautions. [-]
        folder: The reader's own templates. [-]
    Raises: whatever a template can raise; `fault` has the words.
    """
    yield from _environment(folder).get_template(page.template).generate(page=page, cautions=cautions)


def fault(error: BaseException, folder: Path, words: str = "") -> str:
    """Return what is wrong with a template of the reader, with file and line.

    Args:
        error: What it raised.
        folder: The reader's own templates. [-]
        words: What to say in place of the error's own words. [-]
    """
    return f"{_where(error, folder)}: {words or shown(str(error), 300)}; correct the template"


@cache
def _environment(folder: Path | None) -> Any:
    from jinja2 import ChoiceLoader, FileSystemLoader, StrictUndefined
    from jinja2.sandbox import ImmutableSandboxedEnvironment

    folders = [*([folder] if folder else []), built_in_folder()]
    return ImmutableSandboxedEnvironment(
        loader=ChoiceLoader([FileSystemLoader(str(place)) for place in folders]),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )


def _where(error: BaseException, folder: Path) -> str:
    """Return file and line of a template error: of a syntax error as it says, else from the traceback."""
    filename, line = getattr(error, "filename", None), getattr(error, "lineno", None)
    if filename and line:
        return f"{shown(str(filename), 300)}:{line}"
    frames = [frame for frame in traceback.extract_tb(error.__traceback__) if frame.filename.endswith(".html")]
    if frames:
        return f"{shown(frames[-1].filename, 300)}:{frames[-1].lineno}"
    return f"a template in {shown(str(folder), 300)}"
