"""What the tests of the report share: assessed results of the shipped cases, their pages, and a reader of pages."""

from dataclasses import dataclass, field
from datetime import UTC, datetime
from functools import cache
from html.parser import HTMLParser
from pathlib import Path

import pytest

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.report import render_html
from retrofit.study import compare
from retrofit.study.life import with_life

ROOT = Path(__file__).resolve().parents[2]
CASES = sorted(path.stem for path in (ROOT / "cases").glob("*.toml"))
MADE_AT = datetime(2026, 12, 1, 9, 30, tzinfo=UTC)
VOID = frozenset("area base br col embed hr img input link meta source track wbr".split())


def pytest_generate_tests(metafunc):
    """Give each test that takes a `shipped` case all of them."""
    if "shipped" in metafunc.fixturenames:
        metafunc.parametrize("shipped", CASES)


@cache
def _assessed(name):
    return assess(compare(read_case(ROOT / "cases" / f"{name}.toml")))


@cache
def _page(name, units):
    return render_html(_assessed(name), units, made_at=MADE_AT)


@pytest.fixture(scope="session")
def assessed():
    """Return a function that gives the assessed result of a shipped case."""
    return _assessed


@pytest.fixture(scope="session")
def page_of():
    """Return a function that gives the page of a shipped case in some units."""
    return _page


@pytest.fixture(scope="session")
def made_at():
    """Return the time that stands on the pages."""
    return MADE_AT


@pytest.fixture(scope="session")
def read_page():
    """Return a function that reads a page into a `Read`."""

    def read(html):
        reader = _Reader()
        reader.feed(html)
        reader.close()
        return reader.found

    return read


@dataclass
class Read:
    """A page as a parser sees it; each table is (caption, rows of cell texts without their note letters)."""

    ids: list = field(default_factory=list)
    elements: list = field(default_factory=list)  # (name, attributes)
    text: str = ""
    captions: list = field(default_factory=list)
    headings: list = field(default_factory=list)
    tables: dict = field(default_factory=dict)  # id or caption -> rows


class _Reader(HTMLParser):
    def __init__(self):
        super().__init__(convert_charrefs=True)
        self.found = Read()
        self.open = []
        self.rows = []
        self.pieces = {"caption": None, "cell": None, "heading": None}

    def handle_starttag(self, tag, attrs):
        named = dict(attrs)
        self.found.elements.append((tag, named))
        if "id" in named:
            self.found.ids.append(named["id"])
        if tag not in VOID:
            self.open.append((tag, named))
        if tag == "table":
            self.rows = []
            self.found.tables[named.get("id", len(self.found.tables))] = self.rows
        if tag == "tr":
            self.rows.append([])
        if tag in ("th", "td"):
            self.pieces["cell"] = ""
        if tag == "caption":
            self.pieces["caption"] = ""
        if tag in ("h1", "h2", "h3", "h4"):
            self.pieces["heading"] = ""

    def handle_startendtag(self, tag, attrs):
        self.found.elements.append((tag, dict(attrs)))
        if "id" in dict(attrs):
            self.found.ids.append(dict(attrs)["id"])

    def handle_endtag(self, tag):
        assert self.open, f"</{tag}> closes nothing"
        assert self.open[-1][0] == tag, f"</{tag}> closes <{self.open[-1][0]}>"
        self.open.pop()
        if tag in ("th", "td"):
            self.rows[-1].append(" ".join(self.pieces["cell"].split()))
            self.pieces["cell"] = None
        if tag == "caption":
            self.found.captions.append(" ".join(self.pieces["caption"].split()))
            self.pieces["caption"] = None
        if tag in ("h1", "h2", "h3", "h4"):
            self.found.headings.append(" ".join(self.pieces["heading"].split()))
            self.pieces["heading"] = None

    def handle_data(self, data):
        names = [name for name, _ in self.open]
        if "style" in names or "title" in names:
            return
        self.found.text += data
        for kind, piece in self.pieces.items():
            if piece is not None and "sup" not in names:
                gap = " " if self.open[-1][1].get("class") == "unit" else ""
                self.pieces[kind] = piece + gap + data


@cache
def _lived(name):
    return with_life(_assessed(name), draws=60, seed=1)


@pytest.fixture(scope="session")
def lived():
    """Return a function that gives the result of a shipped case with its remaining life, of few draws."""
    return _lived
