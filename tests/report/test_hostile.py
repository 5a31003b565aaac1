"""Texts a user typed are shown as texts, whatever they look like."""

from dataclasses import replace

import pytest

from retrofit.checks import assess
from retrofit.report import render_html
from retrofit.report.plain import css_string
from retrofit.study import compare

HOSTILE = {
    "script": "<script>alert(1)</script>",
    "attribute": '" onmouseover="alert(1)',
    "style": "</style><style>#cautions{display:none}",
    "css string": 'a"; } #cautions { display: none } b { content: "',
    "comment": "<!-- --> ]]> &amp; &lt;b&gt;",
    "template": "{{ 7 * 7 }} {% include 'report.html' %}",
    "markup": "<h1>big</h1><img src=x>",
    "long": "longword" * 200,
    "right to left": "מפעל קירור שלום مرحبا",
}
HIDDEN = {"terminal": ("\x1b[31mred\x07", "\\x1b[31mred\\x07"), "override": ("abc\u202edef", "abc\\u202edef")}


@pytest.fixture
def retitled(case_of):
    """Return a function that gives a result whose title, about and file name are another text."""

    def make(text):
        result = assess(compare(case_of(candidates=("R454C",))))
        return replace(
            result, case=replace(result.case, title=text, about=text, path=f"folder/{text.replace('/', '')}")
        )

    return make


@pytest.mark.parametrize("text", HOSTILE.values(), ids=HOSTILE)
def test_a_hostile_title_is_only_text(text, retitled, assessed, made_at, read_page):
    """Title and about stand there letter by letter, and the page has no element more than with a plain title."""
    page = read_page(render_html(retitled(text), made_at=made_at))
    usual = read_page(render_html(retitled("plain"), made_at=made_at))

    assert page.headings[0] == " ".join(text.split())
    assert page.text.count(text) >= 2
    assert [tag for tag, _ in page.elements] == [tag for tag, _ in usual.elements]


@pytest.mark.parametrize(("text", "shown"), HIDDEN.values(), ids=HIDDEN)
def test_characters_that_command_or_turn_are_written_out(text, shown, retitled, made_at):
    """Neither a terminal escape nor a mark that turns the writing reaches the page; both are seen."""
    html = render_html(retitled(text), made_at=made_at)

    assert shown in html
    assert not set(html) & {"\x1b", "\x07", "\u202e"}


@pytest.mark.parametrize("text", HOSTILE.values(), ids=HOSTILE)
def test_a_css_string_cannot_be_left(text):
    """Only letters, digits, backslashes and blanks remain, and undoing the escapes gives the text (CSS Syntax 3)."""
    import re

    escaped = css_string(text)

    assert re.fullmatch(r"(?:[A-Za-z0-9]|\\[0-9a-f]{1,6} )*", escaped)
    assert re.sub(r"\\([0-9a-f]{1,6}) ", lambda m: chr(int(m[1], 16)), escaped) == text
