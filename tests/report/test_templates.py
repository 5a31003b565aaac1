"""The reader's own templates are laid over the built-in ones, and cannot take the cautions away."""

import os
import sys
from pathlib import Path

import pytest

from retrofit.checks import assess
from retrofit.errors import ReportError
from retrofit.report import render_html
from retrofit.study import compare

BUILT_IN = Path(__file__).resolve().parents[2] / "report_templates"
COLOPHON = "<footer><p>Our own footer</p>{}</footer>"


@pytest.fixture(scope="module")
def small(case_of):
    """Return an assessed result with one candidate of another class."""
    return assess(compare(case_of(candidates=("R454C",))))


@pytest.fixture
def render(small, made_at, tmp_path):
    """Return a function that renders a small case with templates given as texts by file name."""

    def make(**texts):
        for name, text in texts.items():
            (tmp_path / f"{name}.html").write_text(text, encoding="utf-8")
        return render_html(small, template_folder=tmp_path, made_at=made_at)

    return make


def report_with(old, new):
    """Return the built-in page with one piece replaced."""
    text = (BUILT_IN / "report.html").read_text(encoding="utf-8")
    assert old in text.split("#}", 1)[1]
    head, body = text.split("#}", 1)
    return head + "#}" + body.replace(old, new)


def test_an_own_template_takes_the_place_of_the_built_in_one(render):
    """A file of the same name is used, the others stay."""
    html = render(colophon=COLOPHON.format("<p>{{ page.case_file }}</p>"))

    assert "Our own footer" in html
    assert "plant.toml" in html
    assert '<section id="cautions"' in html


def test_an_own_style_may_hide_what_is_its_own(render):
    """A rule for a class of the reader's own is allowed, as is a logo inside the page."""
    style = (BUILT_IN / "style.html").read_text(encoding="utf-8") + ".our-mark { display: none }"

    html = render(style=style, colophon=COLOPHON.format('<img alt="" src="data:image/png;base64,AAAA">'))

    assert ".our-mark" in html


DROPPED = {
    "left out": "",
    "in a comment": "<!-- {{ cautions }} -->",
    "in a hidden part": "<div hidden>{{ cautions }}</div>",
    "in a part out of sight": '<div style="display : none">{{ cautions }}</div>',
    "in a part without height": '<div style="max-height:0;overflow:hidden">{{ cautions }}</div>',
    "in a closed part": "<details><summary>More</summary>{{ cautions }}</details>",
    "in a template": "<template>{{ cautions }}</template>",
    "shortened": "{{ cautions|string|replace('danger', '') }}",
    "cut": "{{ cautions|striptags|truncate(200) }}",
    "off the page": '<div style="position:absolute;left:-9999px">{{ cautions }}</div>',
}


@pytest.mark.parametrize("instead", DROPPED.values(), ids=DROPPED)
def test_a_template_cannot_drop_the_cautions(instead, render):
    """A page without the cautions in its open part is refused, with the way to put it right."""
    with pytest.raises(ReportError, match=r"cautions?.*put \{\{ cautions \}\}"):
        render(report=report_with("{{ cautions }}", instead))


@pytest.mark.parametrize(
    "rule", [".ours { display: none }", "#box{max-height:0}", "article > div { visibility: hidden }"]
)
def test_what_is_around_the_cautions_cannot_be_hidden_by_style(rule, render):
    """A rule that hides an element which the template has put around the block is refused too."""
    style = (BUILT_IN / "style.html").read_text(encoding="utf-8")
    around = '<article><div class="mine ours" id="box">{{ cautions }}</div></article>'

    with pytest.raises(ReportError, match="can hide the cautions"):
        render(style=style + rule, report=report_with("{{ cautions }}", around))


def test_an_own_cautions_template_is_not_used(render):
    """The block of cautions always comes from the built-in template."""
    html = render(cautions="<p>Nothing to see</p>")

    assert "Nothing to see" not in html
    assert "Class A1: lower toxicity" in html


HIDING = {
    "by id": "#cautions { display: none }",
    "by class": ".caution{visibility:hidden}",
    "by element": "main section { opacity: 0 }",
    "by place": "main > :nth-child(3) { display: none }",
    "all": "* { font-size: 0 }",
    "in a medium": "@media print { #cautions { display: none } }",
    "escaped": r"#c\61utions { display: none }",
    "after a comment": "/* a */ .caution /* b */ { dis/**/play: none; display: none }",
    "nested": "main { & section { display: none } }",
}


@pytest.mark.parametrize("rule", HIDING.values(), ids=HIDING)
def test_an_obvious_way_to_hide_the_cautions_by_style_is_refused(rule, render):
    """A rule that hides and can reach the block of cautions is refused by its selector."""
    style = (BUILT_IN / "style.html").read_text(encoding="utf-8")

    with pytest.raises(ReportError, match="can hide the cautions"):
        render(style=style + rule)


LOADING = {
    "script": "<script>document.body.remove()</script>",
    "handler": '<p onclick="x()">a</p>',
    "drawing in a frame": '<iframe src="data:image/svg+xml;base64,AAAA"></iframe>',
    "second picture": '<img src="data:image/png;base64,AAAA" srcset="data:image/png;base64,AAAA 1x, //a.example 2x">',
    "picture": '<img src="https://example.org/logo.png">',
    "style sheet": '<link rel="stylesheet" href="https://example.org/a.css">',
    "frame": '<iframe src="https://example.org"></iframe>',
    "script link": '<a href="javascript:x()">a</a>',
    "style": '<p style="background:url(https://example.org/a.png)">a</p>',
}


@pytest.mark.parametrize("piece", LOADING.values(), ids=LOADING)
def test_a_template_that_loads_or_runs_something_is_refused(piece, render):
    """The report stays one file without scripts."""
    with pytest.raises(ReportError, match=r"would (load something|run)"):
        render(colophon=COLOPHON.format(piece))


def test_the_policy_has_to_stay(render):
    """A page without its content security policy is refused."""
    with pytest.raises(ReportError, match="policy"):
        render(report=report_with('content="{{ page.policy }}"', 'content="default-src *"'))


FAULTS = {
    "syntax": ("<p>\n{% if %}\n</p>", 2),
    "unknown name": ("<p>\n\n{{ page.no_such_thing }}</p>", 3),
    "missing include": ("{% include 'nowhere.html' %}", 1),
    "wrong type": ("<p>{{ page.title + 1 }}</p>", 1),
    "forbidden": ("{{ ''.__class__.__mro__ }}", 1),
    "never ends": ("{% include 'colophon.html' %}", 1),
}


@pytest.mark.parametrize(("text", "line"), FAULTS.values(), ids=FAULTS)
def test_a_fault_in_an_own_template_names_file_and_line(text, line, render):
    """The error is ours and begins with the template's file and line."""
    with pytest.raises(ReportError, match=rf"colophon\.html:{line}: "):
        render(colophon=text)


ENDLESS = {
    "long text": "{{ 'a' * 10**10 }}",
    "long text of a name": "{% set n = 10**10 %}{{ 'a' * n }}",
    "wide number": "{{ '%10000000000d'|format(1) }}",
    "wide text": "{{ 'a'|center(10**10) }}",
    "doubled": "{% set ns = namespace(t='a') %}{% for i in range(60) %}{% set ns.t = ns.t ~ ns.t %}{% endfor %}",
    "high power": "{{ 10**(10**9) }}",
    "loop in a loop": "{% for a in range(99999) %}{% for b in range(99999) %}{% endfor %}{% endfor %}",
    "long page": "{% for a in range(99999) %}{{ 'long enough' * 99 }}{% endfor %}",
    "calls itself twice": "{% macro m(n) %}{% if n %}{{ m(n - 1) ~ m(n - 1) }}{% endif %}{% endmacro %}{{ m(60) }}",
}


@pytest.mark.skipif(sys.platform != "linux", reason="the limits of a process are those of Linux")
@pytest.mark.parametrize("text", ENDLESS.values(), ids=ENDLESS)
def test_a_template_that_takes_too_much_is_ended(text, render):
    """Time and memory of templates are bounded: ten seconds of computing, half a gigabyte, 20 million letters."""
    import resource  # is not there on every system

    children = resource.getrusage(resource.RUSAGE_CHILDREN)
    spent = children.ru_utime + children.ru_stime

    with pytest.raises(ReportError, match=r"computes for more than 10 s|512 MB|more than 20000000 letters"):
        render(colophon=text)

    children = resource.getrusage(resource.RUSAGE_CHILDREN)
    assert children.ru_utime + children.ru_stime - spent < 15
    assert children.ru_maxrss < 1_000_000  # kB


def test_a_template_that_is_not_a_file_is_not_read(small, made_at, tmp_path):
    """A pipe under the name of a template is no template: the built-in one stands in, and nothing waits for it."""
    os.mkfifo(tmp_path / "colophon.html")

    html = render_html(small, template_folder=tmp_path, made_at=made_at)

    assert html == render_html(small, made_at=made_at)


def test_every_shipped_page_passes_through_a_process_of_its_own(lived, made_at, tmp_path):
    """An empty folder of templates gives the page of the built-in ones, with everything a page can hold."""
    result = lived("harbour-market")

    assert render_html(result, template_folder=tmp_path, made_at=made_at) == render_html(result, made_at=made_at)


def test_text_in_an_own_template_is_escaped(render):
    """A user's template escapes what it shows, without asking for it."""
    assert "&lt;b&gt;" in render(colophon=COLOPHON.format("{{ '<b>' }}"))


def test_a_missing_template_folder_is_an_error_of_ours(small, made_at, tmp_path):
    """The folder is named."""
    with pytest.raises(ReportError, match="no template folder"):
        render_html(small, template_folder=tmp_path / "nowhere", made_at=made_at)


def test_a_template_in_another_encoding_is_an_error_of_ours(small, made_at, tmp_path):
    """Bytes that are not UTF-8 end in our error and not in a traceback."""
    (tmp_path / "colophon.html").write_bytes(b"<p>caf\xe9</p>")

    with pytest.raises(ReportError, match=r"correct the template"):
        render_html(small, template_folder=tmp_path, made_at=made_at)
