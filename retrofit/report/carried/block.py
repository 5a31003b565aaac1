"""The block of data at the end of a report: no browser shows or runs it, and no template can leave it out.

It is JSON in ASCII inside a `template` element, with `<`, `>` and `&` written as escapes, so that nothing in it can
end the element or begin another. Each part has a digest, the result as its fingerprint, the page around it too.
"""

from __future__ import annotations

import base64
import json
import zlib
from datetime import datetime
from pathlib import PurePath, PurePosixPath
from typing import Any

from retrofit.checks.law.reader import FOLDER, own_files
from retrofit.report.carried.made_with import data_digests, versions_of
from retrofit.report.carried.result import canonical_text, digest, result_of
from retrofit.study import Comparison

FORMAT = "retrofit.carried/1"
START, END = '<template id="retrofit-carried">', "</template>"
NOTE = "Data for `retrofit rerun`: case, versions and result. Nothing here is shown or run."
PARTS = ("case", "files", "options", "made_with")
LINE = 120  # characters of a line of base64


def with_block(html: str, comparison: Comparison, units: str, made_at: datetime) -> str:
    """Return a page with the block put in at its end.

    Args:
        html: The finished page. [-]
        comparison: The result it shows.
        units: "si" or "ip". [-]
        made_at: The time that stands on it. [-]
    Raises: CaseFileError if a file that belongs to the case can no longer be read.
    """
    cut = html.rfind("</body>")
    cut = len(html) if cut < 0 else cut
    block = f"{START}{_escaped(_data(comparison, units, made_at, html))}{END}\n"
    return html[:cut] + block + html[cut:]


def page_digest(html: str) -> str:
    """Return the digest of a page without its block, whatever its line ends.

    Args:
        html: The page. [-]
    """
    return digest(html.replace("\r\n", "\n"))


def law_day(comparison: Comparison, made_at: datetime) -> str:
    """Return the day for which a result reads the tables of law; without any the day it was made."""
    return (comparison.law.on if comparison.law else made_at.date()).isoformat()


def _data(comparison: Comparison, units: str, made_at: datetime, html: str) -> dict[str, Any]:
    case, result = comparison.case, result_of(comparison)
    parts = {
        "case": {"name": PurePath(case.path).name, "text": case.text},
        "files": {name: _lines(content) for name, content in _files(comparison).items()},
        "options": {"units": units, "on": law_day(comparison, made_at), "made_at": made_at.isoformat()},
        "made_with": {"versions": versions_of(comparison), "data": dict(data_digests())},
    }
    digests = {name: digest(parts[name]) for name in PARTS}
    return {
        "format": FORMAT,
        "note": NOTE,
        **parts,
        "digests": {**digests, "page": page_digest(html), "result": digest(result)},
        "result": _lines(zlib.compress(canonical_text(result).encode("ascii"), 9)),
    }


def _files(comparison: Comparison) -> dict[str, bytes]:
    """Return what stands beside the case and was used for the result, by its path from there."""
    case, found = comparison.case, {}
    if case.year and case.year.weather and case.weather:
        found[PurePosixPath(case.year.weather).as_posix()] = case.weather.text.encode("utf-8")
    if case.report and case.report.logo:
        found[PurePosixPath(case.report.logo.path).as_posix()] = case.report.logo.content
    if comparison.law and any(table.is_own for table in comparison.law.tables):
        found |= {f"{FOLDER}/{path.name}": path.read_bytes() for path in own_files(case.path)}
    return found


def _lines(content: bytes) -> list[str]:
    text = base64.b64encode(content).decode("ascii")
    return [text[i : i + LINE] for i in range(0, len(text), LINE)]


def _escaped(data: dict[str, Any]) -> str:
    text = json.dumps(data, indent=0, allow_nan=False)
    return text.replace("<", "\\u003c").replace(">", "\\u003e").replace("&", "\\u0026")
