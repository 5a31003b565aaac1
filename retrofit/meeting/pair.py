"""A revision's two files, case and report, which come to stand under their names together or not at all.

Both are written whole under other names first. Then the report gets its name, and after it the case: a process that is
killed before leaves no revision, one killed in the moment between leaves a report, which `repair` gives its case.
"""

from __future__ import annotations

import contextlib
import os
import re
import tempfile
from collections.abc import Iterator
from pathlib import Path

from retrofit.errors import ReportError
from retrofit.report.carried import read_carried
from retrofit.report.files import new_file_mode

HALF = ".half-"


def publish(case_file: Path, text: str, html: str) -> bool:
    """Write a case file and its report beside it under the same name; return whether both names were free.

    Args:
        case_file: The case file. [-]
        text, html: Content of the two. [-]
    Raises: ReportError if they cannot be written; then neither is there.
    """
    report = case_file.with_suffix(".html")
    with contextlib.ExitStack() as held:
        try:
            half_case = held.enter_context(_half(case_file, text))
            half_report = held.enter_context(_half(report, html))
            if case_file.exists() or not _named(half_report, report):
                return False
            if not _named(half_case, case_file):
                report.unlink()  # somebody took the name in this moment
                return False
        except OSError as error:
            why = error.strerror or str(error)
            raise ReportError(f"{case_file.parent} cannot be written: {why}; nothing was frozen") from error
    return True


def repair(original: Path) -> None:
    """Finish or remove what killed writers left of the revisions of a case.

    Args:
        original: The case file that was frozen. [-]
    """
    pattern = re.compile(re.escape(f"{HALF}{original.stem}-rev-") + r"[a-z]+\.(toml|html)\.[^.]+")
    with contextlib.suppress(OSError):
        for half in sorted(original.parent.iterdir()):
            if pattern.fullmatch(half.name):
                with contextlib.suppress(OSError), _left_behind(half) as is_left:
                    if is_left:
                        _finish(half)
                        half.unlink()


def _finish(half: Path) -> None:
    """Give a case file its name if its report has one already."""
    case_file = half.with_name(half.name.removeprefix(HALF)).with_suffix("")
    report = case_file.with_suffix(".html")
    if case_file.suffix != ".toml" or case_file.exists() or not report.exists():
        return
    with contextlib.suppress(ReportError, UnicodeDecodeError):
        carried = read_carried(report)
        if carried.case_name == case_file.name and carried.case_text == half.read_bytes().decode("utf-8"):
            _named(half, case_file)


@contextlib.contextmanager
def _half(path: Path, content: str) -> Iterator[Path]:
    """Write a file whole under another name, and hold it as long as its process lives; it goes at the end."""
    handle, name = tempfile.mkstemp(prefix=f"{HALF}{path.name}.", dir=path.parent)
    half = Path(name)
    try:
        with os.fdopen(handle, "wb") as file:
            _lock(file.fileno())
            file.write(content.encode("utf-8"))
            file.flush()
            os.fsync(file.fileno())
            os.chmod(half, new_file_mode())
            yield half
    finally:
        half.unlink(missing_ok=True)


def _named(half: Path, path: Path) -> bool:
    """Give a file that is written its name; return whether that was free."""
    try:
        os.link(half, path)
    except FileExistsError:
        return False
    except OSError:  # a file system without links
        if path.exists():
            return False
        half.rename(path)
    return True


@contextlib.contextmanager
def _left_behind(half: Path) -> Iterator[bool]:
    """Say whether the process that wrote a file has ended."""
    with open(half, "rb") as file:
        yield _lock(file.fileno())


def _lock(descriptor: int) -> bool:
    """Hold an open file until it is closed or the process ends; return whether nobody else holds it."""
    try:
        import fcntl
    except ImportError:  # where there is none, an open file cannot be removed by others
        return True
    try:
        fcntl.flock(descriptor, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except OSError:
        return False
    return True
