"""The meeting page: a case on this machine's own browser, to change together and to freeze as a revision.

The numbers are the study's, the tables and texts the report's; nothing is computed here. `session_of` begins a
meeting, `serve` shows it.
"""

from __future__ import annotations

import datetime
import os
from collections.abc import Callable
from pathlib import Path

from retrofit.case import read_case
from retrofit.case.source import parsed
from retrofit.meeting.desk import Source
from retrofit.meeting.pair import repair
from retrofit.meeting.session import Session


def session_of(
    path: str | os.PathLike[str],
    units: str = "si",
    on: datetime.date | None = None,
    on_build: Callable[[str], None] | None = None,
) -> Session:
    """Return a meeting on a case file.

    Args:
        path: The case file. [-]
        units: "si" or "ip", to begin with. [-]
        on: The day to read the tables of law for; None for today.
        on_build: Called with a designation before its tables are built for the first page.
    Raises: CaseFileError with every problem of the file.
    """
    case = read_case(path)
    repair(Path(case.path).resolve())
    return Session(Source(case, parsed(case.text, case.path)[0], on), units, on_build)


__all__ = ["Session", "Source", "session_of"]
