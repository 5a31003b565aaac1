"""The mark that a file written here bears: for which case it was made, so that it may be made again in its place."""

from __future__ import annotations

import hashlib
import json
import os
import stat
import zipfile
from pathlib import Path, PurePath

from retrofit.case import Case

START = "retrofit-made-for:"
TAIL_BYTES = 4096  # pages and PDFs bear it near their end
SHEET_PART, PART_BYTES = "docProps/custom.xml", 20_000


def mark_of(case: Case) -> str:
    """Return the mark of a case: a digest of the name of its file and its title, so that its numbers may change."""
    told = json.dumps([PurePath(case.path).name, case.title])
    return START + hashlib.sha256(told.encode("ascii")).hexdigest()


def marked_page(html: str, case: Case) -> str:
    """Return a finished page with the mark as a comment after its end, which no browser shows."""
    return f"{html.rstrip()}\n<!-- {mark_of(case)} -->\n"


def marked_pdf(pdf: bytes, case: Case) -> bytes:
    """Return a PDF with the mark as a comment before its last lines. Source: ISO 32000-2, 7.2.4 and 7.5.5."""
    before, keyword, after = pdf.rpartition(b"startxref")
    return before + b"% " + mark_of(case).encode("ascii") + b"\n" + keyword + after


def is_marked(path: Path, case: Case) -> bool:
    """Say whether a file that is there was written here for a case, whatever was in the case then.

    Args:
        path: The file. [-]
        case: The case.
    """
    try:
        if not stat.S_ISREG(os.stat(path).st_mode):
            return False
        with open(path, "rb") as file:
            start = file.read(4)
            file.seek(max(0, os.fstat(file.fileno()).st_size - TAIL_BYTES))
            found = _sheet_part(path) if start == b"PK\x03\x04" else file.read(TAIL_BYTES)
    except (OSError, ValueError, KeyError, NotImplementedError, RuntimeError, EOFError, zipfile.BadZipFile):
        return False
    return mark_of(case).encode("ascii") in found


def _sheet_part(path: Path) -> bytes:
    with zipfile.ZipFile(path) as book, book.open(SHEET_PART) as part:
        return part.read(PART_BYTES)
