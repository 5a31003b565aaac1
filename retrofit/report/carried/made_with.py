"""What a result depends on besides its case: versions, data tables and the program, each with a digest."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from functools import cache
from importlib.metadata import version
from pathlib import Path

import retrofit
from retrofit.study import Comparison

PACKAGE = Path(retrofit.__file__).resolve().parent
PROGRAM = "program"
# Words for the data tables by where they stand in the package; the first that fits.
GROUPS = (
    ("refrigerants/", "the refrigerant catalogue"),
    ("checks/law/", "the tables of law"),
    ("checks/room/", "the rules on charge and room"),
    ("checks/thresholds.toml", "the thresholds of the checks"),
    (PROGRAM, "the program"),
    ("", "other data"),
)
SHORT = 16  # hexadecimal digits, enough to tell files apart


def versions_of(comparison: Comparison) -> dict[str, str]:
    """Return the versions a result depends on, by name."""
    return {**comparison.versions, "numpy": version("numpy")}


@cache
def data_digests() -> Mapping[str, str]:
    """Return a short digest of every data table by its path in the package, and one of the program as a whole."""
    tables = sorted(path for kind in ("*.csv", "*.toml") for path in PACKAGE.rglob(kind))
    own = (path for path in tables if _place(path).split("/")[0] not in ("report_templates", "cases"))
    found = {_place(path): hashlib.sha256(path.read_bytes()).hexdigest()[:SHORT] for path in own}
    program = hashlib.sha256()
    for path in sorted(PACKAGE.rglob("*.py")):
        program.update(_place(path).encode() + b"\0" + path.read_bytes())
    return {**found, PROGRAM: program.hexdigest()[:SHORT]}


def group_of(place: str) -> str:
    """Return what a data table belongs to, in words."""
    return next(words for start, words in GROUPS if place.startswith(start))


@cache
def group_digests() -> Mapping[str, str]:
    """Return a short digest of each group of data tables and of the program, by what it is in words."""
    groups: dict[str, list[str]] = {}
    for place, digest in data_digests().items():
        groups.setdefault(group_of(place), []).append(f"{place} {digest}")
    return {words: hashlib.sha256("\n".join(parts).encode()).hexdigest()[:8] for words, parts in groups.items()}


def _place(path: Path) -> str:
    return path.relative_to(PACKAGE).as_posix()
