"""One meeting on an invented plant for each test that changes it, and one for those that only look."""

import re
from html.parser import HTMLParser
from pathlib import Path

import pytest

from retrofit.meeting import session_of
from retrofit.meeting.app import create_app

ROOT = Path(__file__).resolve().parents[2]
HOME = "http://127.0.0.1:8000"


def case_text(candidates=("R448A", "R454C"), has_year=True, has_new_plant=False):
    """Return the harbour market's case with a few candidates; without its year a revision is made quickly.

    Unless a new plant is asked for none is described, so that the flammable candidate is stopped as a conversion.
    """
    text = (ROOT / "cases" / "harbour-market.toml").read_text(encoding="utf-8")
    for line in ('recommended = "R448A"', 'fallback = "R404A"', "revisions = []"):
        text = re.sub(rf"^{line.split()[0]} = .*$", line, text, flags=re.MULTILINE)
    if not has_new_plant:
        table = re.search(r"^\[options\.R454C\].*?(?=^\[)", text, flags=re.MULTILINE | re.DOTALL)[0]
        keys = r"^(?:new_plant|charge|largest_circuit) = .*\n"
        text = text.replace(table, re.sub(keys, "", table, flags=re.MULTILINE))
    if not has_year:
        text = re.sub(r"^\[year\].*?(?=^\[emissions\])", "", text, flags=re.MULTILINE | re.DOTALL)
        text = re.sub(r"^year\..*\n", "", text, flags=re.MULTILINE)
    return re.sub(r"candidates = \[.*?\]", "candidates = " + str(list(candidates)).replace("'", '"'), text)


class Client:
    """A browser without script: gets pages and posts forms as the page would."""

    def __init__(self, session):
        self.session = session
        self.app = create_app(session)
        self.app.extensions["meeting"].writer.patience_s = 60.0
        self.token = self.app.extensions["meeting"].token
        self.http = self.app.test_client()

    def get(self, path="/", **headers):
        """Return the answer to a GET."""
        return self.http.get(path, base_url=HOME, headers=headers)

    def post(self, act="set", path="/change", seen=None, **fields):
        """Post a form of the page and return the answer; `seen` is the version the form comes from."""
        data = {"token": self.token, "seen": self.session.version if seen is None else seen, "act": act, **fields}
        return self.http.post(path, base_url=HOME, data=data)

    def change(self, act="set", **fields):
        """Post a form, follow the answer, and return the page."""
        answer = self.post(act, **fields)
        assert answer.status_code == 303
        return self.page()

    def page(self):
        """Return the page as text."""
        return self.get().get_data(as_text=True)

    @property
    def state(self):
        """Return the present state."""
        return self.session.moment().state


@pytest.fixture
def case_file(tmp_path):
    """Return a case file of its own for each test."""
    path = tmp_path / "market.toml"
    path.write_text(case_text(has_year=False), encoding="utf-8")
    return path


@pytest.fixture
def client(case_file):
    """Return a meeting that a test may change."""
    return Client(session_of(case_file))


@pytest.fixture(scope="module")
def watched(tmp_path_factory):
    """Return a meeting that the tests of a module only look at."""
    path = tmp_path_factory.mktemp("watched") / "market.toml"
    path.write_text(case_text(), encoding="utf-8")
    return Client(session_of(path))


class _Reader(HTMLParser):
    def __init__(self):
        super().__init__(convert_charrefs=True)
        self.elements, self.texts, self.inside = [], [], []

    def handle_starttag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))
        if tag in ("script", "style", "datalist"):
            self.inside.append(tag)

    def handle_endtag(self, tag):
        if self.inside and self.inside[-1] == tag:
            self.inside.pop()

    def handle_data(self, data):
        if not self.inside:
            self.texts.append(data)


@pytest.fixture(scope="session")
def read():
    """Return a function from a page to its elements and its visible text with single blanks."""

    def reader(html):
        found = _Reader()
        found.feed(html)
        return found.elements, re.sub(r"\s+", " ", " ".join(found.texts))

    return reader
