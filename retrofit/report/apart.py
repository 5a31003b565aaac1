"""Filling a page with the reader's own templates in a process of its own, which is ended when it takes too much.

A template is a program: a sandbox keeps it from files and from Python, but not from a loop that never ends or a text
of ten thousand million letters. The process may compute for `MOST_CPU_S` and take `MOST_MEMORY_BYTES` beyond what it
begins with. Where the system has no such limits (Windows), `MOST_WALL_S` alone ends it.
"""

from __future__ import annotations

import json
import os
import pickle
import subprocess
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

import retrofit
from retrofit.errors import ReportError
from retrofit.report.templates import PAGE, fault, with_own
from retrofit.units import shown

if TYPE_CHECKING:
    from markupsafe import Markup

    from retrofit.report.page import Page
    from retrofit.report.site_copy import SiteCopy

MOST_CPU_S = 10
MOST_WALL_S = 45.0
MOST_MEMORY_BYTES = 512 * 1024**2
MOST_LETTERS = 20_000_000  # of a page; one of twelve candidates has a million


def render_apart(page: Page | SiteCopy, cautions: Markup, folder: Path) -> str:
    """Return a page filled with the reader's own templates.

    Args:
        page: What it shows.
        cautions: The finished block of cautions. [-]
        folder: The reader's templates, laid over the built-in ones. [-]
    Raises: ReportError naming file and line if a template fails, or the limit if it takes too much.
    """
    name = shown(str(folder), 300)
    if not folder.is_dir():
        raise ReportError(f'there is no template folder "{name}"; name a folder with templates such as {PAGE}')
    places = [str(Path(retrofit.__file__).resolve().parents[1]), os.environ.get("PYTHONPATH", "")]
    try:
        done = subprocess.run(
            [sys.executable, "-m", "retrofit.report.apart"],
            input=pickle.dumps((page, cautions, folder.absolute())),
            capture_output=True,
            timeout=MOST_WALL_S,
            env={**os.environ, "PYTHONPATH": os.pathsep.join(filter(None, places))},
            check=False,
        )
        found = json.loads(done.stdout)
    except (subprocess.TimeoutExpired, ValueError):
        raise ReportError(
            f"a template in {name} was stopped: it computes for more than {MOST_CPU_S} s or takes too much memory; "
            "look for a loop that does not end or a text that is repeated too often"
        ) from None
    if "fault" in found:
        raise ReportError(found["fault"])
    return str(found["html"])


def _bound() -> None:
    """Bound what this process may still compute and take, where the system can."""
    try:
        import resource
    except ImportError:
        return
    used = resource.getrusage(resource.RUSAGE_SELF)
    seconds = int(used.ru_utime + used.ru_stime) + MOST_CPU_S
    for kind, most in ((resource.RLIMIT_CPU, seconds), (resource.RLIMIT_AS, _size_now() + MOST_MEMORY_BYTES)):
        try:
            resource.setrlimit(kind, (most, most))
        except (ValueError, OSError):  # a system that knows the limit by name only, or has set a lower one
            continue
    resource.setrlimit(resource.RLIMIT_CORE, (0, 0))


def _size_now() -> int:
    """Return the address space this process has taken, a guess where the system does not tell. [byte]"""
    try:
        pages = int(Path("/proc/self/statm").read_text(encoding="ascii").split()[0])
    except (OSError, ValueError):
        return 4 * 1024**3
    return pages * os.sysconf("SC_PAGE_SIZE")


def _answer(page: Any, cautions: Any, folder: Path) -> dict[str, str]:
    try:
        html, length = [], 0
        for piece in with_own(page, cautions, folder):
            length += len(piece)
            if length > MOST_LETTERS:
                return {"fault": f"a template in {folder} makes a page of more than {MOST_LETTERS} letters; shorten it"}
            html.append(piece)
        text = "".join(html)
        text.encode("utf-8")
    except MemoryError as error:
        return {"fault": fault(error, folder, f"takes more than {MOST_MEMORY_BYTES // 1024**2} MB of memory")}
    except Exception as error:
        return {"fault": fault(error, folder)}
    return {"html": text}


def main() -> None:
    """Read page, cautions and folder from standard input, write the page or what is wrong to standard output."""
    import jinja2.sandbox  # noqa: F401  loaded before the limits count

    page, cautions, folder = pickle.load(sys.stdin.buffer)
    _bound()
    sys.stdout.write(json.dumps(_answer(page, cautions, folder)))


if __name__ == "__main__":
    main()
