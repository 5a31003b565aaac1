"""Freezing: the meeting's case as a whole case file of its own beside the original, and the report of it.

The only place where a meeting writes anything. Names are made here; none comes from the page.
"""

from __future__ import annotations

import os
import string
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import Any

from retrofit.case import as_key, as_toml, laid_over, read_case
from retrofit.case.paper import MOST_REVISIONS as MOST_ROWS
from retrofit.case.positions import KeyPath, value_spans
from retrofit.checks import assess
from retrofit.errors import ReportError
from retrofit.meeting.desk import Source, has_life
from retrofit.meeting.state import State
from retrofit.report import render_html, write_report
from retrofit.report.files import write_whole
from retrofit.study import Comparison, compare
from retrofit.study.criteria import CRITERIA
from retrofit.study.life import with_life

LONGEST_WHAT = 200  # characters
MOST_REVISIONS = 100


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
    used = {row.rev.lower() for row in source.case.report.revisions} if source.case.report else set()
    letter, path = _free(Path(source.case.path), used)
    data = _with_revision(laid_over(source.data, dict(state.changes), state.added), letter, what, at)
    report = path.with_suffix(".html")
    try:
        write_whole(path, case_text(source, data) + _minutes(source, state, letter, what, at))
        result = whole(assess(compare(read_case(path)), source.on))
        write_report(report, render_html(result, units=state.units, made_at=at))
    except BaseException:
        path.unlink(missing_ok=True)  # both files or none
        raise
    return Frozen(letter.upper(), what, path.name, report.name)


def whole(result: Comparison) -> Comparison:
    """Return a result as the report shows it: with the remaining life, hour by hour and drawn, if its case asks for it.

    Args:
        result: An assessed result.
    """
    return with_life(result) if has_life(result.case) else result


def _with_revision(data: Mapping[str, Any], letter: str, what: str, at: datetime) -> dict[str, Any]:
    """Return the data with one more line in the revision table of the report, as long as that has room."""
    report = data.get("report", {})
    rows = report.get("revisions", [])
    if len(rows) >= MOST_ROWS:
        return dict(data)
    row = [letter.upper(), f"{at:%Y-%m-%d}", what, "the meeting"]
    return {**data, "report": {**report, "revisions": [*rows, row]}}


def _free(original: Path, used: set[str]) -> tuple[str, Path]:
    """Return the first letter that no revision has and whose files are free, and hold the name of the case file."""
    for place in range(MOST_REVISIONS):
        turn, rest = divmod(place, 26)
        letter = (string.ascii_lowercase[turn - 1] if turn else "") + string.ascii_lowercase[rest]
        path = original.resolve().with_name(f"{original.stem}-rev-{letter}.toml")
        if letter in used or path.with_suffix(".html").exists():
            continue
        try:
            os.close(os.open(path, os.O_CREAT | os.O_EXCL | os.O_WRONLY, 0o666))
        except FileExistsError:
            continue
        except OSError as error:
            raise ReportError(f"{path.parent} cannot be written: {error.strerror}; nothing was frozen") from error
        return letter, path
    raise ReportError(f"there are {MOST_REVISIONS} revisions beside this case; move some away")


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
