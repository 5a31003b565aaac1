"""Where files may be written: never over what a case is made of, and over nothing of others by a slip.

Every command that writes asks here before it computes. What a case is made of stays as it is whatever is said; any
other file that is there is replaced only where it was written here for the same case, or with --force.
"""

from __future__ import annotations

import json
import os
from collections.abc import Callable, Iterable, Mapping
from pathlib import Path

from retrofit.case import SCHEMA_FILE, Case
from retrofit.checks.law.reader import FOLDER
from retrofit.errors import ReportError, TargetError
from retrofit.report.mark import is_marked
from retrofit.report.templates import built_in_folder
from retrofit.units import listed

ENDINGS = {"html": (".html", ".htm"), "pdf": (".pdf",), "xlsx": (".xlsx",), "toml": (".toml",)}
NAMES = {"html": "an HTML page", "pdf": "a PDF", "xlsx": "a spreadsheet", "toml": "a case file"}
LARGEST_SCHEMA_BYTES = 5_000_000


def check_endings(paths: Mapping[str, Path], advice: Mapping[str, str] | None = None) -> None:
    """Do nothing if each name ends as its form does, or has no ending.

    Args:
        paths: Where to write each form: "html", "pdf", "xlsx" or "toml". [-]
        advice: What to write instead for the ending of another form. [-]
    Raises: TargetError naming the ending that is wrong.
    """
    for form, path in paths.items():
        ending = path.suffix.lower()
        if ending and ending not in ENDINGS[form]:
            meant = (advice or {}).get(ending.removeprefix("."), "")
            raise TargetError(
                f"{path}: {NAMES[form]} would be written under a name that ends in {path.suffix}; let it end in "
                f"{listed(ENDINGS[form])}{meant and f', or {meant}'}"
            )


def check_outputs(paths: Iterable[Path], case: Case, templates: Path | None = None, *, force: bool = False) -> None:
    """Do nothing if what is made of a case may be written: to be asked before anything is computed.

    Args:
        paths: The files to write. [-]
        case: The case.
        templates: Folder of the reader's own templates; None for none. [-]
        force: Replace what is there, unless a case is made of it. [-]
    Raises: ReportError saying which file is in the way.
    """
    kept = tuple(inputs_of(case, templates))
    for path in paths:
        check_inputs(path, kept)
        check_replaced(path, lambda file: is_marked(file, case), "was not written here for this case", force=force)


def check_inputs(path: Path, inputs: Iterable[Path]) -> None:
    """Do nothing unless a file to write is one that is read, or a link to it.

    Args:
        path: The file to write. [-]
        inputs: The files that are read. [-]
    Raises: ReportError.
    """
    for file in inputs:
        if is_same(path, file):
            link = "" if path.absolute() == file.absolute() else f", which is {file}"
            raise ReportError(f"{path}{link}: it belongs to the case and is never overwritten; choose another name")


def check_case_file(path: Path) -> None:
    """Do nothing unless a case file is to be written through a link: what that points to is not named.

    Args:
        path: The file to write. [-]
    Raises: ReportError.
    """
    if path.is_symlink():
        raise ReportError(f"{path} is a link to {os.path.realpath(path)}, which is never overwritten; name a file")


def check_replaced(path: Path, is_ours: Callable[[Path], bool], why: str, *, force: bool) -> None:
    """Do nothing if a file may be written: none is there, an empty one, one of ours, or it is asked for.

    Args:
        path: The file to write. [-]
        is_ours: Says whether a file that is there may be replaced. [-]
        why: Why one that is not ours is kept, in words. [-]
        force: Whether it is asked for. [-]
    Raises: ReportError.
    """
    try:
        is_there = path.is_file() and path.stat().st_size > 0
    except (OSError, ValueError):
        return  # writing it says what is wrong
    if is_there and not force and not is_ours(path):
        raise ReportError(f"{path} is there already and {why}; choose another name or add --force")


def inputs_of(case: Case, templates: Path | None = None) -> Iterable[Path]:
    """Yield every file that a case is made of, there or not: itself, schema, weather, logo, law, and templates.

    Args:
        case: The case.
        templates: Folder of the reader's own templates; None for none. [-]
    """
    file = Path(case.path)
    yield file
    yield file.parent / SCHEMA_FILE
    if case.year and case.year.weather:
        yield file.parent / case.year.weather
    if case.report and case.report.logo:
        yield file.parent / case.report.logo.path
    yield from (file.parent / FOLDER).glob("*.toml")
    if templates:
        built_in = built_in_folder()
        yield from (templates / path.relative_to(built_in) for path in built_in.rglob("*") if path.is_file())


def is_same(path: Path, other: Path) -> bool:
    """Say whether two paths are one file: by their names, by a link of either kind, or as the file system has them."""
    try:
        return path.resolve() == other.resolve() or (path.exists() and other.exists() and os.path.samefile(path, other))
    except (OSError, ValueError, RuntimeError):
        return False


def is_schema(path: Path) -> bool:
    """Say whether a file is a schema of case files, of this version or another."""
    from retrofit.case import case_schema

    try:
        with open(path, "rb") as file:
            found = json.loads(file.read(LARGEST_SCHEMA_BYTES))
    except (OSError, ValueError, RecursionError):
        return False
    return isinstance(found, dict) and found.get("title") == case_schema()["title"]
