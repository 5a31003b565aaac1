"""The meeting in a real browser: as a story, by the keyboard, without a script, on a telephone and on a wall."""

import re
import threading

import pytest

from retrofit.meeting import session_of
from retrofit.meeting.server import make_server
from tests.meeting.conftest import case_text

pytestmark = pytest.mark.browser


class Room:
    """A meeting that is served, and what its browsers asked for and complained about."""

    def __init__(self, browser, session):
        self.browser, self.session = browser, session
        self.server = make_server(session)
        self.thread = threading.Thread(target=self.server.serve_forever, kwargs={"poll_interval": 0.02}, daemon=True)
        self.thread.start()
        self.address = f"http://127.0.0.1:{self.server.server_port}"
        self.asked, self.heard, self.contexts = [], [], []

    def open(self, width=1280, scheme="light", script=True, path="/"):
        """Return a window at the page."""
        context = self.browser.new_context(
            viewport={"width": width, "height": 900}, color_scheme=scheme, java_script_enabled=script
        )
        context.set_default_timeout(15_000)
        self.contexts.append(context)
        window = context.new_page()
        window.on("request", lambda request: self.asked.append(request.url))
        window.on("console", lambda message: self.heard.append(message.text))
        window.on("pageerror", lambda error: self.heard.append(str(error)))
        window.goto(self.address + path)
        if script:  # years that follow replace what a test may have in hand
            window.wait_for_selector("#board:not([data-follows])")
        return window

    def close(self):
        """Close every window and the server."""
        for context in self.contexts:
            context.close()
        self.server.shutdown()
        self.server.server_close()


@pytest.fixture
def room(browser, case_file):
    """Yield a meeting; nothing may be asked from outside, and no browser may complain."""
    found = Room(browser, session_of(case_file))
    yield found
    found.close()
    assert [url for url in found.asked if not url.startswith(found.address)] == []
    assert found.heard == []


def cell(window, name, quantity):
    """Return the cell of a number in the table of every number."""
    return window.locator(f'#t-comparison a[href="/how/{name}/{quantity}"]')


def number(locator):
    """Return what stands in a cell as a number."""
    return float(locator.inner_text().replace("\N{MINUS SIGN}", "-").replace("\N{NARROW NO-BREAK SPACE}", ""))


def test_the_whole_meeting(room, case_file):
    """Open, change, hide, pin, compare, weigh, ask how, note, undo, freeze: and the report is there."""
    from playwright.sync_api import expect

    window = room.open()
    cop = cell(window, "R448A", "efficiency-cop-cooling-over-compressor-power")
    before, picture = number(cop), window.locator("#picture-discharge").get_attribute("src")
    window.get_by_label("Condensing", exact=True).fill("48 degC")
    expect(window.locator(".in.meeting s")).to_have_text("42 degC")
    assert number(cop) < before
    expect(window.locator("#picture-discharge")).not_to_have_attribute("src", picture)
    expect(window.locator("#picture-discharge.late")).to_have_count(0)

    window.locator("#designation").fill("r449a")
    window.get_by_role("button", name="Add", exact=True).click()
    expect(window.locator(".lineup tbody")).to_have_count(4)
    window.get_by_role("button", name="Hide R-448A").click()
    expect(window.locator("ul.hidden-list li")).to_contain_text("R-448A")
    window.get_by_role("button", name="Show R-448A").click()
    window.get_by_role("button", name="Pin R-449A").click()
    expect(window.locator(".lineup tbody").nth(1)).to_contain_text("R-449A")
    expect(window.locator(".lineup tbody").first).to_contain_text("R-404A")

    window.get_by_label("First", exact=True).select_option("R448A")
    window.get_by_label("Second", exact=True).select_option("R454C")
    expect(window.locator("#t-beside thead")).to_contain_text("R-404A")
    assert window.locator("#t-beside tr.differs").count() > 10
    window.get_by_label("Climate", exact=True).fill("10")
    expect(window.locator(".weight output").nth(2)).to_have_text("10")
    expect(window.locator(".gated")).to_contain_text("R-454C is not ranked")

    window.locator('.lineup a[href$="temperatures-discharge-temperature"]').nth(1).click()
    expect(window.locator("dialog")).to_contain_text("State points of R-449A")
    window.get_by_role("button", name="Close").click()
    window.get_by_label("The meeting", exact=True).fill("Ask the maker.")
    expect(window.locator("#board")).to_have_attribute("data-said", "notes")
    window.get_by_role("button", name="Hide R-454C").click()
    expect(window.locator("ul.hidden-list li")).to_contain_text("not suitable")
    window.get_by_role("button", name="Undo").click()
    expect(window.locator("ul.hidden-list li")).to_have_count(0)

    window.get_by_label("What was decided").fill("R-449A if the maker agrees")
    window.get_by_role("button", name="Freeze").click()
    expect(window.locator(".frozen li")).to_contain_text("market-rev-a.html", timeout=60_000)
    frozen = case_file.with_name("market-rev-a.toml").read_text(encoding="utf-8")
    report = case_file.with_name("market-rev-a.html").read_text(encoding="utf-8")
    assert 'condensing = "48 degC"' in frozen
    assert '"R449A"' in frozen
    assert "Ask the maker." in frozen
    assert "R-449A if the maker agrees" in report


@pytest.mark.parametrize(("width", "scheme"), [(320, "light"), (320, "dark"), (1280, "light"), (1280, "dark")])
def test_nothing_is_found_by_the_accessibility_checker(room, width, scheme):
    """axe finds no violation, with two side by side, a hidden candidate, a wrong input and an open origin."""
    from axe_playwright_python.sync_playwright import Axe
    from playwright.sync_api import expect

    window = room.open(width, scheme)
    window.get_by_label("First", exact=True).select_option("R448A")
    window.get_by_label("Second", exact=True).select_option("R454C")
    expect(window.locator("#t-beside")).to_be_visible()
    if width < 700:  # closed on a telephone, until it is asked for
        window.get_by_role("link", name="Inputs").click()
    window.get_by_label("Subcooling", exact=True).fill("4")
    expect(window.locator(".in.wrong .why")).to_be_visible()
    found = Axe().run(window).response
    assert [(item["id"], item["nodes"][0]["html"][:120]) for item in found["violations"]] == []
    assert len(found["passes"]) > 20
    assert window.evaluate("document.scrollingElement.scrollWidth") <= width

    window.locator('.lineup a[href="/how/R448A/temperatures-discharge-temperature"]').click()
    expect(window.locator("dialog table").first).to_be_visible()
    found = Axe().run(window).response
    assert [(item["id"], item["nodes"][0]["html"][:120]) for item in found["violations"]] == []
    assert window.evaluate("document.scrollingElement.scrollWidth") <= width


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_today_s_refrigerant_stays_in_sight(room, scheme):
    """However far the page and its tables are scrolled, the strip of today's numbers and today's column are seen."""
    window = room.open(390, scheme)
    window.evaluate("document.querySelector('#t-comparison').scrollIntoView()")
    window.evaluate("document.querySelector('#t-comparison').closest('.scroll').scrollLeft = 5000")
    top, left, right = window.evaluate(
        """(() => { const strip = document.querySelector('.today-strip').getBoundingClientRect();
            const cell = document.querySelector('#t-comparison td.today').getBoundingClientRect();
            return [strip.top, cell.left, cell.right]; })()"""
    )

    assert top == 0
    assert left >= 0
    assert right <= 390


def test_by_the_keyboard_alone(room):
    """Tab reaches every control; typing, steps, weights and origins work, and the focus stays where it was."""
    from playwright.sync_api import expect

    window = room.open()
    window.keyboard.press("Tab")
    expect(window.locator(".skip")).to_be_focused()
    field = window.get_by_label("Subcooling", exact=True)
    for _ in range(90):
        window.keyboard.press("Tab")
        if field.evaluate("field => field === document.activeElement"):
            break
    expect(field).to_be_focused()
    window.keyboard.press("Control+A")
    window.keyboard.type("5 K")
    expect(window.locator("#board")).to_have_attribute("data-said", re.compile("Subcooling 5 K"))
    expect(field).to_be_focused()
    window.keyboard.press("Tab")
    window.keyboard.press("Enter")
    expect(field).to_have_value("6 K")
    expect(window.get_by_role("button", name="Subcooling: a step up")).to_be_focused()
    window.get_by_role("button", name="Pin R-454C").focus()
    window.keyboard.press("Space")
    expect(window.get_by_role("button", name="Unpin R-454C")).to_be_focused()
    window.locator(".lineup a.how").first.focus()
    window.keyboard.press("Enter")
    expect(window.locator("dialog")).to_be_visible()
    window.keyboard.press("Escape")
    expect(window.locator("dialog")).not_to_be_visible()
    order = window.evaluate(
        "[...document.querySelectorAll('a,button,input,select,textarea')].filter(e => e.tabIndex > 0).length"
    )
    assert order == 0


def test_without_a_script(room):
    """As plain forms: change, a wrong value, hide, side by side, weights, an origin as a page, and charts."""
    from playwright.sync_api import expect

    window = room.open(script=False)
    window.fill('[name="in.duty.condensing"]', "46 degC")
    window.click("text=Work out anew")
    expect(window.locator(".in.meeting s")).to_have_text("42 degC")
    assert window.input_value('[name="in.duty.condensing"]') == "46 degC"
    window.fill('[name="in.duty.condensing"]', "hot")
    window.keyboard.press("Enter")
    expect(window.locator(".in.wrong .why")).to_contain_text("does not begin with a number")
    window.click('[aria-label="Hide R-448A"]')
    expect(window.locator(".lineup tbody")).to_have_count(2)
    window.click("text=show")
    expect(window.locator(".lineup tbody")).to_have_count(3)
    window.select_option("#first", "R448A")
    window.select_option("#second", "R454C")
    window.click("text=Put side by side")
    expect(window.locator("#t-beside")).to_be_visible()
    window.locator('.lineup a[href$="temperatures-discharge-temperature"]').first.click()
    expect(window).to_have_url(re.compile("/how/R404A/temperatures-discharge-temperature$"))
    window.click("text=Back to the meeting")
    window.locator("#picture-discharge").scroll_into_view_if_needed()
    assert "/picture/" in window.locator("#picture-discharge").get_attribute("src")
    window.click('[aria-pressed="false"] >> text=IP')
    expect(window.locator("#t-comparison")).to_contain_text("psig")


def test_a_late_answer_never_replaces_a_newer_one(room):
    """An answer held back on its way arrives after a newer one, and is dropped."""
    from playwright.sync_api import expect

    window, held = room.open(), []

    def hold(route):
        if "47+degC" in (route.request.post_data or "") and not held:
            answer = route.fetch()
            held.append((route, answer))
        else:
            route.continue_()

    window.route("**/change", hold)
    # Both answers are put in place by the script as they come, as if nothing had been aborted.
    window.evaluate("AbortController.prototype.abort = () => {}")
    field = window.get_by_label("Condensing", exact=True)
    field.fill("47 degC")
    expect(window.locator("#board")).to_have_attribute("data-version", "1")
    while not held:
        window.wait_for_timeout(20)
    field.fill("49 degC")
    expect(window.locator("#board")).to_have_attribute("data-said", re.compile("49 degC"))
    held[0][0].fulfill(response=held[0][1])
    window.wait_for_timeout(300)

    assert field.input_value() == "49 degC"
    assert "49 degC" in window.locator("#board").get_attribute("data-said")


def test_two_hundred_quick_changes(room):
    """Typed faster than anything can be worked out: the page ends at the last, and still answers."""
    from playwright.sync_api import expect

    window = room.open()
    field = window.get_by_label("Condensing", exact=True)
    for place in range(200):
        field.fill(f"{40 + place % 40 / 10:.1f} degC")
    window.get_by_role("button", name="Condensing: a step up").click()
    expect(field).to_have_value("44.9 degC")
    expect(window.locator("#board[data-working]")).to_have_count(0)

    assert dict(room.session.moment().state.changes)["duty.condensing"] == "44.9 degC"


def test_two_windows_follow_each_other(room):
    """What one window changes the other shows by itself; a closed one leaves the meeting as it is."""
    from playwright.sync_api import expect

    first, second = room.open(), room.open(scheme="dark")
    first.get_by_label("Condensing", exact=True).fill("47 degC")
    expect(second.get_by_label("Condensing", exact=True)).to_have_value("47 degC")
    second.get_by_role("button", name="Hide R-448A").click()
    second.close()
    expect(first.locator("ul.hidden-list li")).to_contain_text("R-448A")
    first.reload()
    expect(first.get_by_label("Condensing", exact=True)).to_have_value("47 degC")


def test_large_type_on_a_wall(room):
    """Large type makes the words of the page half as large again, and nothing leaves the window."""
    from playwright.sync_api import expect

    window = room.open(1920)
    size = "parseFloat(getComputedStyle(document.querySelector('.lineup td.n')).fontSize)"
    before = window.evaluate(size)
    window.get_by_role("button", name="Large type").click()
    expect(window.locator("html.large")).to_have_count(1)
    after = window.evaluate(size)

    assert after >= 1.35 * before
    assert after >= 22
    assert window.evaluate("parseFloat(getComputedStyle(document.querySelector('.headline')).fontSize)") >= 36
    low = window.evaluate("document.querySelector('.lineup').getBoundingClientRect().bottom")
    assert low <= 1080  # what is decided is seen without scrolling
    assert window.evaluate("document.scrollingElement.scrollWidth") <= 1920


def test_a_hostile_case_runs_nothing(browser, tmp_path):
    """Markup, script and style in a case's texts stay texts in a real browser."""
    text = "<img src=x onerror=document.title='owned'></style><script>document.title='owned'</script>"
    path = tmp_path / "case.toml"
    case = case_text().replace("Harbour market, medium-temperature rack", text)
    path.write_text(case, encoding="utf-8")
    found = Room(browser, session_of(path))
    window = found.open()
    window.get_by_label("The meeting", exact=True).fill(text)
    window.wait_for_timeout(600)
    title, heading = window.title(), window.locator("h1").inner_text()
    outside = [url for url in found.asked if not url.startswith(found.address)]
    found.close()

    assert title != "owned"
    assert heading == text
    assert outside == []
    assert found.heard == []


def test_what_takes_long_shows_its_progress(room, monkeypatch):
    """Over a second the page says what is done and keeps the last numbers; the new ones come by themselves."""
    from playwright.sync_api import expect

    gate, desk = threading.Event(), room.session.desk
    whole = desk._made
    monkeypatch.setattr(desk, "_made", lambda key: gate.wait(20.0) and whole(key))
    window = room.open()
    cop = cell(window, "R448A", "efficiency-cop-cooling-over-compressor-power")
    before = number(cop)
    window.get_by_label("Condensing", exact=True).fill("48 degC")
    expect(window.locator(".state.working")).to_contain_text("so far")
    assert number(cop) == before
    gate.set()
    expect(window.locator(".state.working")).to_have_count(0)
    assert number(cop) < before
