"""Where each key of a TOML text stands.

The parser of the standard library judges a text but does not say where its keys are. This scanner
finds them in text that `tomllib` has accepted: it steps over values and does not judge them.
Grammar: TOML 1.0.0.
"""

from __future__ import annotations

import re
import tomllib
from bisect import bisect_right

KeyPath = tuple[str | int, ...]

_GAP = re.compile(r"(?:[ \t\n]|#[^\n]*)*")
_KEY = re.compile(r'"[^"\\\n]*(?:\\.[^"\\\n]*)*"|\'[^\'\n]*\'|[A-Za-z0-9_-]+')
_BLANKS = re.compile(r"[ \t]*")
_DOT = re.compile(r"[ \t]*\.[ \t]*")
_STRING = re.compile(
    r'"""[^"\\]*(?:(?:\\.|"(?!""))[^"\\]*)*"""(?:"{0,2})'
    r"|'''.*?'''(?:'{0,2})"
    r'|"[^"\\\n]*(?:\\.[^"\\\n]*)*"'
    r"|'[^'\n]*'",
    re.DOTALL,
)
_BARE = re.compile(r"[^,\]}#\n]+")


def key_lines(text: str) -> dict[KeyPath, int]:
    """Return the line on which each key, table and array item of a TOML text stands.

    Args:
        text: A text that `tomllib.loads` accepts; of another the result means nothing. [-]
    Returns: Line, counted from 1, by path: `("compare", "candidates", 0)`; the whole text is `()`. [-]
    Raises: RecursionError if values are nested deeper than Python's stack.
    """
    scanner = _Scanner(text.replace("\r\n", "\n"))
    scanner.scan()
    return scanner.lines


def value_spans(text: str) -> dict[KeyPath, tuple[int, int]]:
    """Return from where to where the value of each key of a TOML text stands.

    Args:
        text: A text that `tomllib.loads` accepts, with plain line ends. [-]
    Returns: First position and the one after the last, by path. [-]
    Raises: RecursionError if values are nested deeper than Python's stack.
    """
    scanner = _Scanner(text)
    scanner.scan()
    return scanner.spans


class _Scanner:
    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.starts = [0, *(match.end() for match in re.finditer("\n", text))]
        self.lines: dict[KeyPath, int] = {(): 1}
        self.spans: dict[KeyPath, tuple[int, int]] = {}
        self.items: dict[KeyPath, int] = {}  # length so far of each array of tables

    def scan(self) -> None:
        table: KeyPath = ()
        while self.skip_gap():
            if self.text[self.at] == "[":
                table = self.header()
            else:
                self.key_and_value(table)

    def skip_gap(self) -> bool:
        """Step over blanks, line ends and comments; say whether anything follows."""
        self.step(_GAP)
        return self.at < len(self.text)

    def step(self, pattern: re.Pattern[str]) -> str:
        """Step over a pattern and return what it matched, or stay and return nothing."""
        match = pattern.match(self.text, self.at)
        if match is None:
            return ""
        self.at = match.end()
        return match.group()

    def line(self, position: int) -> int:
        return bisect_right(self.starts, position)

    def note(self, path: KeyPath, position: int) -> None:
        """Keep the line of a path's first appearance."""
        self.lines.setdefault(path, self.line(position))

    def key(self) -> str:
        raw = self.step(_KEY)
        if raw[:1] == '"' and "\\" in raw:
            return str(tomllib.loads(f"key = {raw}")["key"])
        return raw[1:-1] if raw[:1] in ("'", '"') else raw

    def header(self) -> KeyPath:
        """Read `[table]` or `[[array of tables]]` and return the path it opens."""
        is_array = self.text.startswith("[[", self.at)
        line = self.line(self.at)
        self.at += 2 if is_array else 1
        path = self.dotted(())
        self.at = self.text.index("]", self.at) + (2 if is_array else 1)
        if is_array:
            self.items[path] = self.items.get(path, 0) + 1
            path = (*path, self.items[path] - 1)
        self.lines[path] = line
        return path

    def dotted(self, path: KeyPath) -> KeyPath:
        """Read a dotted key below a path, noting every part, and return the path it names."""
        self.step(_BLANKS)
        while True:
            start = self.at
            path = (*path, self.key())
            self.note(path, start)
            if not self.step(_DOT):
                return path
            if path in self.items:
                path = (*path, self.items[path] - 1)

    def key_and_value(self, table: KeyPath) -> None:
        path = self.dotted(table)
        self.at = self.text.index("=", self.at) + 1
        self.value(path)

    def value(self, path: KeyPath) -> None:
        """Step over a value, noting where it stands and the keys and items inside it."""
        self.skip_gap()
        start = self.at
        self.step_value(path)
        self.spans[path] = start, start + len(self.text[start : self.at].rstrip())

    def step_value(self, path: KeyPath) -> None:
        opening = self.text[self.at]
        if opening == "[":
            self.array(path)
        elif opening == "{":
            self.inline_table(path)
        elif opening in "\"'":
            self.step(_STRING)
        else:
            self.step(_BARE)

    def array(self, path: KeyPath) -> None:
        self.at += 1
        index = 0
        while self.skip_gap() and self.text[self.at] != "]":
            self.note((*path, index), self.at)
            self.value((*path, index))
            index += 1
            self.skip_separator()
        self.at += 1

    def inline_table(self, path: KeyPath) -> None:
        self.at += 1
        while self.skip_gap() and self.text[self.at] != "}":
            self.key_and_value(path)
            self.skip_separator()
        self.at += 1

    def skip_separator(self) -> None:
        self.skip_gap()
        if self.text.startswith(",", self.at):
            self.at += 1
