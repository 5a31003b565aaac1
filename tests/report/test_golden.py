"""The whole report of a small case against one that was looked at and accepted.

To accept a new one: RETROFIT_ACCEPT=1 python -m pytest tests/report/test_golden.py, then look at its difference in
git and at the page itself. Left out of the comparison: versions, the data that the page carries, and figures, which
change with the libraries that draw them.
"""

import difflib
import os
import re
from pathlib import Path

import pytest

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.report import render_html
from retrofit.study import compare

ROOT = Path(__file__).resolve().parents[2]
GOLDEN = Path(__file__).parent / "golden" / "small-market.html"
LARGEST_BYTES = 320_000
LEFT_OUT = (
    (r"<svg\b.*?</svg>", "<svg/>"),
    (r'<template id="retrofit-carried">.*?</template>', ""),
    (r"\b(retrofit|coolprop) [0-9][0-9A-Za-z.+]*", r"\1 –"),
    (r'<span class="digest">[0-9a-f]+</span>', "–"),
)


def normalised(html):
    """Return a page without what changes from one machine to the next."""
    for pattern, instead in LEFT_OUT:
        html = re.sub(pattern, instead, html, flags=re.DOTALL)
    return html


@pytest.fixture(scope="module")
def page(tmp_path_factory, made_at):
    """Return the page of the harbour market with one conversion and one new plant, in both unit systems."""
    text = (ROOT / "cases" / "harbour-market.toml").read_text(encoding="utf-8")
    text = re.sub(r"candidates = \[.*?\]", 'candidates = ["R449A", "R454C"]', text)
    path = tmp_path_factory.mktemp("golden") / "small-market.toml"
    path.write_text(text.replace('fallback = "R448A"', 'fallback = "R404A"'), encoding="utf-8")
    return normalised(render_html(assess(compare(read_case(path))), "both", made_at=made_at))


def test_the_report_is_the_accepted_one(page):
    """Line by line; a difference is shown as a patch of the accepted page."""
    if os.environ.get("RETROFIT_ACCEPT") == "1":
        GOLDEN.parent.mkdir(exist_ok=True)
        GOLDEN.write_text(page, encoding="utf-8")
        pytest.skip("accepted as it is now: look at the difference before it is committed")
    accepted = GOLDEN.read_text(encoding="utf-8")
    difference = difflib.unified_diff(accepted.splitlines(), page.splitlines(), "accepted", "now", n=0, lineterm="")

    assert len(accepted.encode()) < LARGEST_BYTES
    assert "\n".join(line[:300] for line in list(difference)[:60]) == ""


def test_nothing_that_changes_from_machine_to_machine_is_compared(page):
    """No version, no drawing and no carried data are left, and what a reader reads is."""
    from retrofit import __version__

    assert f"retrofit {__version__}" not in page
    assert 'class="digest"' not in page
    assert "<path" not in page
    assert "retrofit-carried" not in page
    assert page.count("<table") > 20
