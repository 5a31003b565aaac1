"""Reports to read back, and the block of one taken out, changed and put back."""

import base64
import json
import zlib

import pytest

from retrofit.report.carried.block import END, START
from retrofit.report.carried.result import canonical_text, digest

PARTS = ("case", "files", "options", "made_with")


@pytest.fixture
def written(tmp_path):
    """Return a function that writes a page, as text or bytes, and gives its path."""

    def write(content, name="report.html"):
        path = tmp_path / name
        path.write_bytes(content if isinstance(content, bytes) else content.encode("utf-8"))
        return path

    return write


@pytest.fixture(scope="session")
def block_of():
    """Return a function that gives the data of a page's block."""
    return _block


@pytest.fixture(scope="session")
def edited():
    """Return a function that changes the block of a page in place, and its result unpacked.

    With `sealed` every digest is made to fit again, as somebody would who knows how.
    """
    return _edited


def _block(html):
    return json.loads(html[html.rindex(START) + len(START) : html.rindex(END)])


def _edited(html, change, sealed=False):
    data = _block(html)
    result = json.loads(zlib.decompress(base64.b64decode("".join(data["result"]))))
    change(data, result)
    data["result"] = [base64.b64encode(zlib.compress(canonical_text(result).encode())).decode()]
    if sealed:
        data["digests"] |= {**{name: digest(data[name]) for name in PARTS}, "result": digest(result)}
    text = json.dumps(data).replace("<", "\\u003c")
    return html[: html.rindex(START)] + START + text + html[html.rindex(END) :]
