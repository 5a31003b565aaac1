"""Freezing: the meeting's case as a whole case file of its own beside the original, and the report of it.

Everything is computed first, then `pair` writes both. Names are made here; none comes from the page.
"""

from __future__ import annotations

import os
import string
import tomllib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import Any

from retrofit.case import as_key, as_toml, laid_over
from retrofit.case.paper import MOST_REVISIONS, Revision, RevisionValue
from retrofit.case.positions import KeyPath, value_spans
from retrofit.case.reader import case_from_data
from retrofit.case.source import parsed, text_of
from retrofit.checks import assess
from retrofit.errors import CaseFileError, QuantityError, ReportError
from retrofit.meeting.desk import Source, has_life
from retrofit.meeting.pair import publish, repair
from retrofit.meeting.state import State
from retrofit.report import render_html
from retrofit.study import Comparison, compare
from retrofit.study.criteria import CRITERIA
from retrofit.study.life import with_life

LONGEST_WHAT = 200  # characters


@dataclass(frozen=True)
class Frozen:
    """A revision: its letter, what it is about, and the names of the two files."""

    letter: str
    what: str
    case_file: str
    report: str


def freeze(source: Source, state: State, what: str, at: datetime) -> Frozen:
    """Write the case of a state as a revision beside the original, and its report.

    Args:
        source: The case file the meeting began with.
        state: The state.
        what: What the revision is about, in the words of the meeting. [-]
        at: The time to print.
    Returns: The revision.
    Raises: ReportError if the files cannot be written; CaseFileError if the case cannot be read back.
    """
    original = Path(source.case.path).resolve()
    repair(original)
    for _ in range(MOST_REVISIONS):
        rows = _rows_before(source, original)
        letter, path = _free(original, rows)
        data = _with_revisions(laid_over(source.data, dict(state.changes), state.added), rows, letter, what, at)
        text = case_text(source, data) + _minutes(source, state, letter, what, at)
        found, lines = parsed(text, path.name)
        result = whole(assess(compare(case_from_data(found, path, text, lines)), source.on))
        if publish(path, text, render_html(result, units=state.units, made_at=at)):
            return Frozen(letter.upper(), what, path.name, path.with_suffix(".html").name)
        # Another meeting on the same case took the letter meanwhile.
    raise ReportError("other meetings on this case take every name; end them, then freeze again")


def whole(result: Comparison) -> Comparison:
    """Return a result as the report shows it: with the remaining life, hour by hour and drawn, if its case asks for it.

    Args:
        result: An assessed result.
    """
    return with_life(result) if has_life(result.case) else result


def _free(original: Path, rows: Sequence[list[Any]]) -> tuple[str, Path]:
    """Return the first letter after every revision so far whose two names are free, and the name of the case file."""
    least = 1 + max((_place_of(str(row[0])) for row in rows), default=-1)
    for place in range(least, MOST_REVISIONS):
        letter = _letters(place)
        path = original.with_name(f"{original.stem}-rev-{letter}.toml")
        if not os.path.lexists(path) and not os.path.lexists(path.with_suffix(".html")):
            return letter, path
    raise ReportError(f"there are {MOST_REVISIONS} revisions of this case; begin a new one from the newest")


def _with_revisions(
    data: Mapping[str, Any], rows: Sequence[list[Any]], letter: str, what: str, at: datetime
) -> dict[str, Any]:
    """Return the data with every revision so far, and one more, in the revision table of the report."""
    row = [letter.upper(), f"{at:%Y-%m-%d}", what, "the meeting"]
    return {**data, "report": {**data.get("report", {}), "revisions": [*rows, row]}}


def _rows_before(source: Source, original: Path) -> list[list[Any]]:
    """Return the revision table so far: the rows of the case, then those that its frozen revisions add."""
    rows = [list(row.values()) if isinstance(row, Mapping) else list(row) for row in _table_of(source.data)]
    known = {str(row[0]).lower() for row in rows}
    for place in range(MOST_REVISIONS):
        for row in _table_of_file(original.with_name(f"{original.stem}-rev-{_letters(place)}.toml")):
            if row.rev.lower() not in known:
                known.add(row.rev.lower())
                rows.append([row.rev, f"{row.date:%Y-%m-%d}", row.what, row.by])
    return rows


def _table_of(data: Mapping[str, Any]) -> list[Any]:
    return list(data.get("report", {}).get("revisions", []))


def _table_of_file(path: Path) -> list[Revision]:
    """Return the revision table of a frozen case; nothing of a file that is none, or no longer can be read."""
    try:
        data = parsed(text_of(str(path), path.name), path.name)[0] if path.exists() else {}
        return [RevisionValue().read(row) for row in _table_of(data)]
    except (CaseFileError, QuantityError, AttributeError, TypeError):
        return []


def _letters(place: int) -> str:
    """Return the letters of a place in the row a, b, ... z, aa, ab, ..."""
    turn, rest = divmod(place, 26)
    return (string.ascii_lowercase[turn - 1] if turn else "") + string.ascii_lowercase[rest]


def _place_of(letters: str) -> int:
    """Return the place of letters in that row; -1 for a revision that is counted otherwise."""
    return next((place for place in range(MOST_REVISIONS) if _letters(place) == letters.lower()), -1)


def case_text(source: Source, data: Mapping[str, Any]) -> str:
    """Return the text of a case file with changes in it: the original's own lines where they can be kept.

    Args:
        source: The original.
        data: Its data with the changes laid over it. [-]
    """
    text = source.case.text.replace("\r\n", "\n")
    edited = _edited(text, source.data, data)
    return edited if edited is not None and _same(edited, data) else whole_toml(data)


def _same(text: str, data: Mapping[str, Any]) -> bool:
    try:
        return tomllib.loads(text) == data
    except ValueError:
        return False


def _edited(text: str, before: Mapping[str, Any], after: Mapping[str, Any]) -> str | None:
    """Return a text with each changed value in its place, or nothing if a value has no plain place."""
    spans, edits = value_spans(text), []
    for table in {*before, *after}:
        old, new = before.get(table), after.get(table)
        if old == new:
            continue
        if old is None and isinstance(new, Mapping):
            edits.append((len(text), len(text), "\n" + whole_toml({table: new})))
            continue
        if not isinstance(new, Mapping) or not isinstance(old, Mapping):
            return None
        for key in {*old, *new}:
            if old.get(key) == new.get(key) and (key in old) == (key in new):
                continue
            edit = _edit(text, spans, (table, key), new.get(key), key in new)
            if edit is None:
                return None
            edits.append(edit)
    for start, end, piece in sorted(edits, reverse=True):
        text = text[:start] + piece + text[end:]
    return text


def _edit(
    text: str, spans: Mapping[KeyPath, tuple[int, int]], path: KeyPath, value: Any, is_there: bool
) -> tuple[int, int, str] | None:
    """Return one edit: from where to where, and what to put there."""
    if path in spans:
        start, end = spans[path]
        if is_there:
            return start, end, as_toml(value)
        first = text.rfind("\n", 0, start) + 1
        last = text.find("\n", end)
        return first, len(text) if last < 0 else last + 1, ""
    heading = f"[{path[0]}]"
    at = 0 if text.startswith(heading) else text.find(f"\n{heading}") + 1
    if at == 0 and not text.startswith(heading):
        return None
    line_end = text.find("\n", at)
    place = len(text) if line_end < 0 else line_end + 1
    return place, place, f"{'' if line_end >= 0 else chr(10)}{as_key(str(path[1]))} = {as_toml(value)}\n"


def whole_toml(data: Mapping[str, Any]) -> str:
    """Return data as a TOML text: single values first, then each table.

    Args:
        data: What a parsed case file holds. [-]
    """
    single = [f"{as_key(name)} = {as_toml(value)}" for name, value in data.items() if not isinstance(value, Mapping)]
    parts = ["\n".join(single)] if single else []
    for name, table in data.items():
        if isinstance(table, Mapping):
            parts += _tables(as_key(name), table)
    return "\n\n".join(parts) + "\n"


def _tables(name: str, table: Mapping[str, Any]) -> list[str]:
    single = [f"{as_key(key)} = {as_toml(value)}" for key, value in table.items() if not isinstance(value, Mapping)]
    inner = [(f"{name}.{as_key(key)}", value) for key, value in table.items() if isinstance(value, Mapping)]
    own = ["\n".join([f"[{name}]", *single])] if single or not inner else []
    return [*own, *(part for key, value in inner for part in _tables(key, value))]


def _minutes(source: Source, state: State, letter: str, what: str, at: datetime) -> str:
    """Return what the meeting changed, weighed and noted, as remarks at the end of the file."""
    lines = [f"Revision {letter.upper()}, {at:%Y-%m-%d %H:%M}: {what}", f"Made in a meeting from {source.case.path}."]
    for key, text in state.changes:
        lines.append(f"Changed: {key} = {text or '(left out)'}; was {source.text_of(key) or '(left out)'}.")
    lines += [f"Added: {name}." for name in state.added]
    lines += [f"Hidden in the meeting: {', '.join(state.hidden)}."] if state.hidden else []
    lines += [f"Weight of {name}: {weight}." for name, weight in state.weights if name in CRITERIA]
    lines += [f"Note on {name}: {text}" for name, text in state.notes]
    remarks = (f"# {_plain(part)}".rstrip() for line in lines for part in line.splitlines())
    return "\n" + "\n".join(remarks) + "\n"


def _plain(text: str) -> str:
    """Return a text fit for a remark of TOML: without control characters."""
    return "".join(sign if sign.isprintable() else " " for sign in text)
