"""The report in a real browser: on a telephone, a desk, light and dark, on paper, for a screen reader."""

import re
from pathlib import Path

import pytest

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.checks.changeover import chosen_for_cards
from retrofit.report import render_html
from retrofit.report.guard import check_page
from retrofit.study import compare

ROOT = Path(__file__).resolve().parents[2]
pytestmark = pytest.mark.browser
SHOWN = ["harbour-market", "freezer-store", "coast-heat-pump"]
HEADINGS = [
    "Summary", "Options considered, and what is rejected", "Cautions by safety class", "The plant as found",
    "Law: duties, bans and dates", "Comparison on three bases", "Charts", "Hardware, component by component",
    "Charge against the room", "Method statement and way back", "Assumptions",
    "To be found out on site", "Limits: what was not checked", "Sign-off and revisions",
    "Findings and verdict for each refrigerant", "Readings: what could not be derived", "Components, one by one",
    "Charge and room: the working",
    "Law: row by row", "State points, and how to check them by hand", "Job card", "Commissioning sheets",
    "Inputs: values the case gives",
    "How far the model can be trusted", "Terms", "Sources",
]  # fmt: skip


@pytest.fixture(scope="module")
def many(tmp_path_factory, made_at):
    """Return the page of the harbour market with 12 candidates: all bases, hardware and readings."""
    names = "R448A R449A R407A R407C R407F R407H R452A R454A R454C R455A R513A R290".split()
    text = (ROOT / "cases" / "harbour-market.toml").read_text(encoding="utf-8")
    path = tmp_path_factory.mktemp("many") / "many.toml"
    path.write_text(re.sub(r"candidates = \[.*?\]", f"candidates = {names}", text), encoding="utf-8")
    return render_html(assess(compare(read_case(path))), made_at=made_at)


@pytest.fixture
def opened(browser, tmp_path, page_of):
    """Return a function that opens a shipped case's page; any request, error or console message fails the test."""
    contexts, heard = [], []

    def open_page(name, width=1280, scheme="light", units="si"):
        path = tmp_path / f"{name}-{units}.html"
        path.write_text(page_of(name, units), encoding="utf-8")
        context = browser.new_context(viewport={"width": width, "height": 900}, color_scheme=scheme)
        contexts.append(context)
        page = context.new_page()
        page.on("request", lambda request: heard.append(request.url))
        page.on("console", lambda message: heard.append(message.text))
        page.on("pageerror", lambda error: heard.append(str(error)))
        page.goto(path.as_uri())
        heard.remove(path.as_uri())
        return page

    yield open_page
    for context in contexts:
        context.close()
    assert heard == []


@pytest.mark.parametrize("name", SHOWN)
@pytest.mark.parametrize("width", [320, 390, 1280])
def test_the_page_does_not_scroll_sideways(name, width, opened):
    """Only boxes of tables and figures are wider than the window, and those scroll by themselves."""
    page = opened(name, width)

    assert page.evaluate("document.scrollingElement.scrollWidth") <= width
    assert page.evaluate("document.body.scrollWidth") <= width


def test_a_title_without_blanks_does_not_push_the_page_wide(browser, page_of):
    """A title of 200 letters in one word breaks at 320 px."""
    context = browser.new_context(viewport={"width": 320, "height": 900})
    page = context.new_page()
    page.set_content(page_of("trailer", "si").replace("<h1><bdi>", "<h1><bdi>" + "W" * 200))
    width = page.evaluate("document.scrollingElement.scrollWidth")
    context.close()

    assert width <= 320


def test_boxes_that_scroll_can_be_reached_by_the_keyboard(opened):
    """At 320 px each box wider than the window has a name, a role and a place in the tab order."""
    page = opened("harbour-market", 320)
    boxes = page.evaluate(
        """[...document.querySelectorAll('.scroll')].filter(b => b.scrollWidth > b.clientWidth)
           .map(b => [b.tabIndex, b.getAttribute('role'), b.getAttribute('aria-label')])"""
    )

    assert len(boxes) > 5
    assert all(tab == 0 and role == "region" and label for tab, role, label in boxes)


@pytest.mark.parametrize("name", SHOWN)
@pytest.mark.parametrize(("width", "scheme"), [(320, "light"), (1280, "light"), (1280, "dark")])
def test_the_accessibility_checker_finds_nothing(name, width, scheme, opened):
    """axe finds no violation on a telephone and on a desk, light and dark."""
    from axe_playwright_python.sync_playwright import Axe

    found = Axe().run(opened(name, width, scheme)).response

    assert [(item["id"], item["nodes"][0]["html"][:90]) for item in found["violations"]] == []
    assert len(found["passes"]) > 15


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_text_in_figures_has_the_colour_of_the_page_s_own_text(scheme, opened):
    """Words and axes follow the reader's mode."""
    page = opened("harbour-market", 1280, scheme)
    text, figure, paper = page.evaluate(
        """[getComputedStyle(document.body).color, getComputedStyle(document.querySelector('svg text')).fill,
            getComputedStyle(document.body).backgroundColor]"""
    )

    assert text == figure
    assert paper == {"light": "rgb(255, 255, 255)", "dark": "rgb(18, 18, 18)"}[scheme]


def test_the_cautions_are_on_the_screen(opened):
    """The block of cautions and each of its texts have a size and are not see-through."""
    page = opened("coast-heat-pump", 390)
    sizes = page.evaluate(
        """[...document.querySelectorAll('#cautions .caution-text')].map(e => {
            const box = e.getBoundingClientRect(), style = getComputedStyle(e);
            return [box.width, box.height, style.visibility, style.opacity]})"""
    )

    assert len(sizes) > 4
    assert all(
        width > 200 and height > 30 and seen == "visible" and opacity == "1" for width, height, seen, opacity in sizes
    )


@pytest.mark.parametrize("format_", ["A4", "Letter"])
@pytest.mark.parametrize("name", SHOWN)
def test_it_prints_on_either_paper(name, format_, opened, assessed):
    """A page or so for each refrigerant, some for hardware, room, law, sources and the rest, in the size asked for."""
    pdf = opened(name, 1280, "dark").pdf(format=format_)
    count = len(re.findall(rb"/Type\s*/Page\b", pdf))
    width, height = map(float, re.search(rb"/MediaBox\s*\[0 0 ([0-9.]+) ([0-9.]+)\]", pdf).groups())
    refrigerants = len(assessed(name).entries)

    cards = len(chosen_for_cards(assessed(name)).entries)  # two pages for each job card, two for each sheet

    assert refrigerants + 6 + 4 * cards <= count <= 2 * refrigerants + 34 + 4 * cards + 4
    assert (width, height) == pytest.approx({"A4": (595.0, 842.0), "Letter": (612.0, 792.0)}[format_], abs=1.5)


def test_the_print_has_every_heading_and_no_content_beyond_the_page(opened):
    """In print all sections are there in order, the page list is left out, and nothing is wider than an A4 page."""
    page = opened("harbour-market", 688)  # 182 mm, the width between the margins of A4
    page.emulate_media(media="print")
    headings = page.evaluate("[...document.querySelectorAll('h2')].map(h => h.innerText.trim())")
    widest = page.evaluate(
        "Math.max(...[...document.querySelectorAll('table, svg, p')].map(e => e.getBoundingClientRect().right))"
    )

    assert [re.sub(r"^(\d+|[A-Z])\s+", "", heading) for heading in headings] == HEADINGS
    assert page.evaluate("getComputedStyle(document.querySelector('nav')).display") == "none"
    assert widest <= 689


def test_print_is_light_whatever_the_reader_s_mode(opened):
    """A dark screen prints dark ink on white paper."""
    page = opened("harbour-market", 800, "dark")
    page.emulate_media(media="print", color_scheme="dark")

    assert page.evaluate("getComputedStyle(document.body).color") == "rgb(0, 0, 0)"
    assert page.evaluate("getComputedStyle(document.body).backgroundColor") == "rgb(255, 255, 255)"


@pytest.mark.parametrize("width", [320, 1280])
def test_twelve_candidates_stay_within_the_window(width, many, browser):
    """With every basis and the hardware of 12 candidates nothing scrolls sideways, and axe finds no violation."""
    from axe_playwright_python.sync_playwright import Axe

    context = browser.new_context(viewport={"width": width, "height": 900})
    page = context.new_page()
    page.set_content(many)
    widest = page.evaluate("document.scrollingElement.scrollWidth")
    found = Axe().run(page).response["violations"]
    context.close()

    assert widest <= width
    assert [(item["id"], item["nodes"][0]["html"][:90]) for item in found] == []


def test_tables_of_the_hardware_fit_the_paper(many, browser):
    """In print no table of verdicts or of a component of 12 candidates is wider than an A4 page leaves room for."""
    context = browser.new_context(viewport={"width": 688, "height": 900})  # 182 mm
    page = context.new_page()
    page.set_content(many)
    page.emulate_media(media="print")
    rights = page.evaluate(
        "[...document.querySelectorAll('#hardware table, #components table')].map(e => e.getBoundingClientRect().right)"
    )
    context.close()

    assert len(rights) > 10
    assert max(rights) <= 689


COVERS = {
    "fixed": ".ours { position: fixed; inset: 0; background: white; z-index: 1000 }",
    "shadow": ".ours { position: relative; box-shadow: 0 0 0 9000px white; z-index: 1000 }",
    "same colours": ":root { --ink: white; --quiet: white } body { color: white } .caution p, h2 { color: #fff }",
    "paper of the ink": "body { background: #16181a }",
}


@pytest.mark.parametrize("style", COVERS.values(), ids=COVERS)
def test_what_a_template_may_say_leaves_the_cautions_on_top(style, browser, tmp_path, page_of):
    """Styles that pass the last look: at the middle of each text of a caution a reader's pointer meets that text,
    on another colour than its own (computed styles of Chromium)."""
    html = page_of("bottle-cooler", "si")
    start = html.index('<section id="cautions"')
    cautions = html[start : html.index("</section>", start) + len("</section>")]
    html = html.replace("</style>", f"{style}</style>", 1).replace("</main>", '<div class="ours">Ours</div></main>')
    check_page(html, cautions)
    (tmp_path / "page.html").write_text(html, encoding="utf-8")

    page = browser.new_page()
    page.goto((tmp_path / "page.html").as_uri())
    met = page.evaluate(
        """() => [...document.querySelectorAll('#cautions p, #cautions strong')].map(part => {
            part.scrollIntoView({block: 'center'});
            const range = document.createRange();
            range.selectNodeContents(part);
            const box = range.getClientRects()[0];
            const on_top = document.elementFromPoint(box.left + box.width / 2, box.top + box.height / 2);
            const paper = getComputedStyle(document.querySelector('#cautions')).backgroundColor;
            return [part.contains(on_top), getComputedStyle(part).color !== paper];
        })"""
    )
    page.close()

    assert len(met) >= 4
    assert all(all(pair) for pair in met)
