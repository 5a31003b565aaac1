"""From a path to TOML data with line numbers, with a plain word for whatever comes between."""

from __future__ import annotations

import os
import re
import stat
import tomllib
from dataclasses import dataclass
from typing import Any

from retrofit.case.positions import KeyPath, key_lines
from retrofit.errors import CaseFileError, Problem
from retrofit.units import shown

LARGEST_FILE_BYTES = 1_000_000


@dataclass(frozen=True)
class FileKind:
    """A kind of file, for complaints about it: what it is called, its largest size [B], and what to do."""

    name: str
    largest_bytes: int
    if_absent: str
    if_too_large: str


CASE_FILE = FileKind(
    "a case file",
    LARGEST_FILE_BYTES,
    "check the path, or start one with `retrofit new`",
    "a case file has some dozens of lines",
)


def text_of(path: str, name: str, kind: FileKind = CASE_FILE) -> str:
    """Return the text of a file.

    Args:
        path: The file. [-]
        name: Its name as complaints show it. [-]
        kind: What kind of file it should be.
    Returns: The text without a byte order mark. [-]
    Raises: CaseFileError if it is no ordinary file of at most the size of its kind in UTF-8 that may be read.
    """
    try:
        raw = _bytes_of(path, name, kind)
    except FileNotFoundError:
        raise _whole_file(name, f"there is no such file; {kind.if_absent}") from None
    except PermissionError:
        raise _whole_file(name, "it may not be read; check its permissions") from None
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) else str(error)
        raise _whole_file(name, f"it cannot be read ({shown(str(reason))}); check the path") from None
    try:
        return raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = raw.count(b"\n", 0, error.start) + 1
        message = "this is not text in UTF-8; save the file as plain text in UTF-8 from a text editor"
        raise CaseFileError(name, [Problem(line, "", message)]) from None


def _bytes_of(path: str, name: str, kind: FileKind) -> bytes:
    mode = os.stat(path).st_mode
    if stat.S_ISDIR(mode):
        raise _whole_file(name, f"this is a folder; name {kind.name} in it")
    if not stat.S_ISREG(mode):
        raise _whole_file(name, f"this is not an ordinary file; name {kind.name}")
    with open(path, "rb") as file:
        raw = file.read(kind.largest_bytes + 1)
    if len(raw) > kind.largest_bytes:
        raise _whole_file(name, f"the file is larger than {kind.largest_bytes / 1e6:g} MB; {kind.if_too_large}")
    return raw


def _whole_file(name: str, message: str) -> CaseFileError:
    return CaseFileError(name, [Problem(0, "", message)])


_PLACE = re.compile(r" \(at (?:line ([0-9]+), column [0-9]+|end of document)\)$")
_STRAY_CHARACTER = "a character is not allowed here; a text ends on its line, with the mark it began with"
_PLAIN_WORDS = {
    "Unescaped '\\'": "a backslash stands in a text; put such a text in single quotes",
    "Invalid hex value": "a backslash stands in a text; put such a text in single quotes",
    "Escaped character": "a backslash stands in a text; put such a text in single quotes",
    'Expected "\'"': "a text is not closed; it ends with the quotation mark it began with",
    "Found invalid": _STRAY_CHARACTER,
    "Invalid value": 'the value cannot be read; text stands in double quotes, as in cooling = "120 kW"',
    "Expected '='": 'an equals sign is missing; a line reads key = "value", a table begins with [name]',
    "Invalid statement": 'a line reads key = "value", a table begins with [name], a remark with #',
    "Cannot overwrite a value": "the same key is given twice; keep one of them",
    "Cannot declare": "the same table is given twice; put its keys under one heading",
    "Cannot mutate": "the same table is given twice; put its keys under one heading",
    "Expected ']": "a table begins with its name in brackets, as in [duty]",
    "Invalid initial character": 'a line reads key = "value", a table begins with [name], a remark with #',
    "Invalid date": 'text stands in double quotes, as in cooling = "120 kW"',
    "Expected newline": "something is left over after the value; one line holds one key",
    "Unclosed array": "a list is not closed; it ends with ]",
    "Unterminated string": "a text is not closed; it ends with the quotation mark it began with",
    "Illegal character": _STRAY_CHARACTER,
    "Unclosed inline table": "a table in braces is not closed; it ends with } on the same line",
    "Cannot redefine": "the same table is given twice; put its keys under one heading",
    "Duplicate inline table key": "the same key is given twice; keep one of them",
}


def parsed(text: str, name: str) -> tuple[dict[str, Any], dict[KeyPath, int]]:
    """Return the data of a TOML text, and the line of each of its paths.

    Args:
        text: The text. [-]
        name: The name of its file as complaints show it. [-]
    Returns: The data as `tomllib` has it, and lines as `key_lines` gives them.
    Raises: CaseFileError with the line and plain words if it is not TOML.
    """
    try:
        return tomllib.loads(text), key_lines(text)
    except tomllib.TOMLDecodeError as error:
        raise CaseFileError(name, [_syntax_problem(str(error), text)]) from None
    except RecursionError:
        raise _whole_file(name, "values are nested too deeply; a case has tables and single values") from None
    except ValueError:
        raise _whole_file(name, "a number has too many digits; write numbers of ordinary size") from None


def _syntax_problem(message: str, text: str) -> Problem:
    place = _PLACE.search(message)
    line = int(place.group(1)) if place and place.group(1) else text.count("\n") + 1
    reason = message[: place.start()] if place else message
    plain = next((words for start, words in _PLAIN_WORDS.items() if reason.startswith(start)), None)
    return Problem(line, "", f"not valid TOML: {plain or shown(reason, 120)}")
