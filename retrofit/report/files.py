"""Writing files whole or not at all."""

from __future__ import annotations

import contextlib
import os
import stat
import tempfile
from pathlib import Path

from retrofit.errors import ReportError


def write_whole(path: Path, content: str | bytes) -> None:
    """Write a file under a temporary name in its folder, then rename it into place.

    Args:
        path: File to write; one that is there is replaced.
        content: Its content; text is written in UTF-8.
    Raises: ReportError if the folder is missing or cannot be written, or the path is no
        ordinary file.
    """
    path = path.resolve()  # what a link points to is replaced, not the link
    try:
        kind = stat.S_IFMT(path.stat().st_mode) if path.exists() else stat.S_IFREG
    except OSError as error:
        raise ReportError(f"{path} cannot be written: {error.strerror}; choose another name") from error
    if kind == stat.S_IFDIR:
        raise ReportError(f"{path} is a folder; name a file")
    if kind != stat.S_IFREG:
        raise ReportError(f"{path} is no ordinary file, and cannot be written whole or not at all; name a file")
    try:
        handle, name = tempfile.mkstemp(prefix=".half-", dir=path.parent)
    except OSError as error:
        raise ReportError(f"{path.parent} cannot be written: {error.strerror}; choose another folder") from error
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(content.encode("utf-8") if isinstance(content, str) else content)
        os.chmod(name, new_file_mode())
        os.replace(name, path)
    except OSError as error:
        raise ReportError(f"{path} cannot be written: {error.strerror}") from error
    finally:
        with contextlib.suppress(OSError):
            os.unlink(name)


def new_file_mode() -> int:
    """Return the mode that any new file gets, as the mask of the process says."""
    mask = os.umask(0)
    os.umask(mask)
    return 0o666 & ~mask
