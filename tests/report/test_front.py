"""Page one, options, sign-off and the framing of the report: from the case, from the checks, and never silently."""

import base64
import re
from dataclasses import replace
from datetime import date
from pathlib import Path

import pytest

from retrofit.case import Logo, Report, read_case
from retrofit.checks import assess
from retrofit.checks.advice import deed
from retrofit.report import render_html
from retrofit.report.front import OUTSIDE
from retrofit.study import compare
from retrofit.units import SI, told

CASES = Path(__file__).resolve().parents[2] / "cases"
SVG = b'<svg xmlns="http://www.w3.org/2000/svg"><script>document.title = "ran"; alert(1)</script></svg>'
HOSTILE = ["<script>alert(1)</script>", '" onerror="alert(1)', "</style><style>#cautions{display:none}", "{{ 7 * 7 }}"]
TEXTS = ["client", "site", "system_id", "company", "prepared", "checked", "approved"]


@pytest.fixture(scope="module")
def market(assessed):
    """Return the harbour market without [report]."""
    result = assessed("harbour-market")
    return replace(result, case=replace(result.case, report=None))


@pytest.fixture
def page_with(made_at, read_page):
    """Return a function that gives the HTML of a result with other keys in [report], and reads it."""

    def make(result, units="si", logo=None, **keys):
        report = Report.model_validate(keys)
        report = report.model_copy(update={"logo": logo}) if logo else report
        html = render_html(replace(result, case=replace(result.case, report=report)), units, made_at=made_at)
        return html, read_page(html)

    return make


def summary(html, read_page):
    """Return the text of page one after the title strip, in single blanks and without backticks."""
    section = re.search(r'<section id="answer".*?</section>', html, re.DOTALL)[0]
    return " ".join(read_page(section).text.split())


def spelled(text):
    """Return a text as the report spells it."""
    return " ".join(re.sub(r"(?<=[0-9])%", " %", re.sub(r"\bR(?=[0-9])", "R-", text)).split())


WEIGHED = {
    "harbour-market": [  # nothing is stopped: the flammable one is a new plant
        "Keep R-404A", "Convert to R-448A", "Convert to R-449A", "Convert to R-407A", "Convert to R-407H",
        "Convert to R-452A", "Replace the plant by a new one built for R-454C",
    ],
    "process-chiller": ["Keep R-407C", "Convert to R-448A", "Convert to R-449A", "Convert to R-427A"],
    "coast-heat-pump": ["Keep R-410A", "Replace the plant by a new one built for R-290"],
}  # fmt: skip


@pytest.mark.parametrize(("case", "stopped"), [("harbour-market", 0), ("process-chiller", 3), ("coast-heat-pump", 3)])
def test_a_case_without_the_table_names_no_recommendation(case, stopped, assessed, made_at, read_page):
    """The engineer has to choose; each option that no check stops is named, keeping too, the stopped ones are not."""
    result = assessed(case)
    result = replace(result, case=replace(result.case, report=None))
    html = render_html(result, made_at=made_at)
    page = read_page(html)
    found = [entry for entry in result.entries if any(finding.level == "stop" for finding in entry.findings)]

    assert "this tool makes none: the engineer has to choose" in summary(html, read_page)
    assert [row[0] for row in page.tables["t-weighed"][1:]] == WEIGHED[case]
    assert len(WEIGHED[case]) == len(result.entries) - len(found)
    assert len(found) == stopped
    assert 'class="plate whose"' not in html


def test_a_recommendation_carries_every_condition(market, page_with, read_page):
    """Whatever is unknown, to be replaced, adjusted or worked on with it stands among the conditions; own ones last."""
    html, _ = page_with(market, recommended="R449A", fallback="R404A", conditions=["Own one.", "Own two."])
    text = summary(html, read_page)
    entry = next(entry for entry in market.candidates if entry.refrigerant.designation == "R449A")
    rows = [item for item in entry.hardware if item.verdict in ("unknown", "replace", "adjust")]
    components = {item.name for item in entry.hardware}

    assert "Convert to R-449A, provided that the conditions below hold." in text
    assert len(rows) > 15
    for item in rows:
        assert f"{item.name[0].lower()}{item.name[1:]}" in text
    for finding in entry.findings:
        if finding.level in ("unknown", "work"):
            assert finding.title in text or finding.title in components
    assert text.index("Work that every conversion needs") < text.index("Own one.") < text.index("Own two.")
    assert "Keep R-404A." in text
    assert "the engineer has to choose" not in text


@pytest.mark.parametrize(
    ("case", "name"),
    [("process-chiller", "R454C"), ("cold-store", "R448A"), ("cold-store", "R22"), ("ice-rink", "R422D"),
     ("freezer-store", "R744")],
)  # fmt: skip
def test_what_a_check_stops_is_not_recommended_silently(case, name, assessed, page_with, read_page):
    """Page one says that a check stops it, which one, with its fact, and does not say `provided that`."""
    html, _ = page_with(assessed(case), recommended=name)
    text = summary(html, read_page)
    entry = next(entry for entry in assessed(case).entries if entry.refrigerant.designation == name)
    stops = [finding for finding in entry.findings if finding.level == "stop"]

    assert spelled(f"Recommendation {deed(assessed(case), entry)}. Stop ") in text
    assert spelled(told(f"Stop {stops[0].title}: {stops[0].fact}", SI)) in text
    assert "provided that" not in text
    assert ("more check" in text) == (len(stops) > 1)


def test_a_fallback_that_a_check_stops_says_so(assessed, page_with, read_page):
    """The stop stands under the fallback too."""
    html, _ = page_with(assessed("process-chiller"), recommended="R449A", fallback="R454C")
    stop = "Stop More hazardous safety class than the plant was designed for: "

    assert f"Replace the plant by a new one built for R-454C. {stop}" in summary(html, read_page)


def test_a_new_plant_that_is_recommended_has_conditions_of_its_own(market, page_with, read_page):
    """No check stops it: its conditions are that its maker designs it, and what room and class ask, no component."""
    html, _ = page_with(market, recommended="R454C", fallback="R404A")
    text = summary(html, read_page)
    entry = market.candidates[-1]
    conditions = text[text.index("Conditions ") : text.index(" Numbers, thresholds and sources: ")]

    assert (entry.refrigerant.designation, entry.is_new_plant, entry.hardware) == ("R454C", True, ())
    told = "Replace the plant by a new one built for R-454C, provided that the conditions below hold."
    assert f"Recommendation {told}" in text
    assert "Designed by its maker for its refrigerant and class" in conditions
    for finding in entry.findings:
        if finding.level == "work" and finding.code != "new-plant":
            assert spelled(finding.title) in conditions
    for words in ("Replaced", "Adjusted or proved", "Work that every conversion needs"):
        assert words not in conditions


def test_the_rejected_are_those_that_a_check_stops(shipped, assessed, page_of, read_page):
    """Each with the first stop in order, its fact and source; every option stands in the list before."""
    page, result = read_page(page_of(shipped, "si")), assessed(shipped)
    stops = [[f for f in entry.findings if f.level == "stop"] for entry in result.entries]
    rows = page.tables.get("t-rejected", [[]])[1:]

    assert len(page.tables["verdicts"]) == len(result.entries) + 1
    assert len(rows) == sum(bool(found) for found in stops)
    for row, found in zip(rows, filter(None, stops), strict=True):
        assert row[1].startswith(found[0].title)
        assert spelled(told(found[0].fact, SI))[1:] in row[2].replace("\N{NO-BREAK SPACE}", " ")
        assert row[3]
    assert page.tables["verdicts"][1][0].startswith("Keep ")


def test_page_one_tells_days_costs_and_what_is_asked(market, page_with, read_page):
    """The day of the decision, the days of the case and of law, that no cost is computed, and what the client does."""
    yearless = replace(market, case=replace(market.case, year=None))
    html, _ = page_with(yearless, recommended="R449A", decide_by=date(2027, 1, 31))
    text = summary(html, read_page)
    bans = [row for row in market.existing.law.rows if row.gas and row.state != "unknown"]

    assert "31 January 2027 Decision" in text
    assert "1 April 2027 Change of refrigerant" in text
    assert "1 April 2035 End of the remaining life" in text
    assert len(bans) > 2
    assert all(spelled(row.text) in text for row in bans)
    assert "a year's energy and its cost are not computed, the case has no [year]" in text.replace("`", "")
    assert "Agree by 31 January 2027 to the recommendation" in text


def test_signatures_revisions_and_versions_close_the_main_part(market, page_with):
    """Names of the case, empty lines for those not named, revisions in order, and what signatures do not cover."""
    _, page = page_with(
        market,
        client="C to be named",
        prepared="P to be named",
        revisions=[["A", "2026-11-20", "first issue", "P"], ["B", "2026-12-01", "second", "P"]],
    )
    rows = {row[0]: row[1:] for row in page.tables["t-signatures"][1:]}

    assert set(rows) == {"Engineer, prepared", "Engineer, checked", "Approved", "Contractor", "Client"}
    assert (rows["Client"][0], rows["Engineer, prepared"][0], rows["Contractor"][0]) == (
        "C to be named",
        "P to be named",
        "",
    )
    assert page.tables["t-revisions"][1:] == [
        ["A", "20 November 2026", "first issue", "P"],
        ["B", "1 December 2026", "second", "P"],
    ]
    assert OUTSIDE in " ".join(page.text.split())


@pytest.mark.parametrize("text", HOSTILE)
def test_hostile_text_in_any_key_is_only_text(text, market, page_with):
    """Each key shows it letter by letter, and it makes no element."""
    keys = dict.fromkeys(TEXTS, text)
    lists = {"conditions": [text], "revisions": [["A", "2026-12-01", text, text]], "recommended": "R449A"}
    _, page = page_with(market, **keys, **lists)
    _, usual = page_with(market, **dict.fromkeys(TEXTS, "plain"), **lists | {"conditions": ["plain"]})

    assert page.text.count(text) >= len(TEXTS) + 3
    assert [tag for tag, _ in page.elements] == [tag for tag, _ in usual.elements]


def test_a_logo_stands_in_the_page_as_a_picture(market, page_with):
    """As its own bytes in one <img>, with the company as its text."""
    _, page = page_with(market, logo=Logo("logo.svg", "image/svg+xml", SVG), company="A company")
    (picture,) = [named for tag, named in page.elements if tag == "img"]
    head, _, content = picture["src"].partition(",")

    assert head == "data:image/svg+xml;base64"
    assert base64.b64decode(content) == SVG
    assert picture["alt"] == "A company"
    assert not [tag for tag, _ in page.elements if tag == "script"]


@pytest.mark.browser
def test_the_script_of_a_logo_does_not_run(market, page_with, browser):
    """No dialogue opens, the title stays, and nothing is asked for."""
    html, _ = page_with(market, logo=Logo("logo.svg", "image/svg+xml", SVG))
    page, heard = browser.new_page(), []
    page.on("dialog", lambda dialog: heard.append(dialog.message))
    page.on("request", lambda request: heard.append(request.url))
    page.set_content(html)
    page.wait_for_timeout(200)
    title = page.title()
    page.close()

    assert [item for item in heard if not item.startswith("data:image/svg+xml")] == []
    assert title.startswith("Harbour market")


@pytest.mark.browser
def test_page_one_fits_either_paper_and_stands_alone(assessed, page_of, browser):
    """Down to the foot of its last line, on A4 and Letter between the margins of print.html; a break follows."""
    page = browser.new_page()
    millimetre = 96.0 / 25.4
    for width, height in ((182.0, 262.0), (187.9, 244.4)):
        page.set_viewport_size({"width": round(width * millimetre), "height": 900})
        page.emulate_media(media="print")
        for name, units in (("harbour-market", "both"), ("process-chiller", "both"), ("cold-store", "si")):
            page.set_content(page_of(name, units))
            bottom, after = page.evaluate(
                """[document.querySelector('#answer').getBoundingClientRect().bottom,
                    getComputedStyle(document.querySelector('#answer')).breakAfter]"""
            )
            assert bottom <= height * millimetre
            assert after == "page"
    repeated = page.evaluate("[...document.querySelectorAll('thead')].map(e => getComputedStyle(e).display)")
    kept = page.evaluate("[...document.querySelectorAll('h2, h3, h4')].map(e => getComputedStyle(e).breakAfter)")
    page.close()

    assert set(repeated) == {"table-header-group"}
    assert set(kept) == {"avoid"}


def test_every_table_says_what_it_is_and_on_which_basis(shipped, page_of):
    """Each has a caption with more than its title: basis, convention or what its rows are; none is empty."""
    html = page_of(shipped, "si")
    tables = re.findall(r"<table.*?</table>", html, re.DOTALL)
    captions = [re.search(r"<caption>(.*?)</caption>", table, re.DOTALL) for table in tables]

    assert len(tables) > 15
    assert [table[:80] for table, caption in zip(tables, captions, strict=True) if caption is None] == []
    bare = [re.sub(r'<span class="t">.*?</span>|<[^>]+>', "", caption[1]).strip() for caption in captions]
    assert [caption[1] for caption, rest in zip(captions, bare, strict=True) if not rest] == []


@pytest.mark.parametrize("name", ["harbour-market", "desert-split"])
def test_both_systems_stand_in_every_cell_that_has_a_unit(name, page_of, read_page):
    """A cell of the main tables holds the metric text, and behind it in brackets the inch-pound one if it differs."""
    both, si, ip = (read_page(page_of(name, units)) for units in ("both", "si", "ip"))
    prose = ("t-room", "t-law", "t-found")  # some of their cells stand in the units of their source
    compared = [key for key in si.tables if str(key).startswith(("t-comparison", "t-environment", *prose))]
    seen = 0

    for key in compared:
        for row, first, second in zip(*(page.tables[key][1:] for page in (both, si, ip)), strict=True):
            for cell, a, b in zip(row[1:], first[1:], second[1:], strict=True):
                if key in prose and not (a[-1:].isdigit() or a[-1:] == ")"):
                    continue
                other = re.sub("^≈\\s", "", b)
                assert cell == (a if a == b else f"{a} ({other})")
                seen += a != b
    assert seen > 50


def test_what_rests_on_an_assumed_value_carries_its_sign(page_of, made_at, tmp_path, read_page):
    """Gauge pressures rest on an altitude not given, told below the table; with it in the case they carry no sign."""
    row = r"Evaporating pressure, gauge(<sup[^>]*>†</sup>)?</th>"
    legend = "† Rests on what was assumed, for the case does not give it: plant.altitude 0 m"
    text = (CASES / "harbour-market.toml").read_text("utf-8").replace("[plant]", '[plant]\naltitude = "0 m"')
    (tmp_path / "given.toml").write_text(text, "utf-8")
    given = render_html(assess(compare(read_case(tmp_path / "given.toml"))), made_at=made_at)

    for html, is_assumed in ((page_of("harbour-market", "si"), True), (given, False)):
        found = re.findall(row, html)
        assert bool(found[0]) == is_assumed
        assert (legend in " ".join(read_page(html).text.split())) == is_assumed


def test_an_own_template_takes_the_place_of_page_one(market, made_at, tmp_path):
    """The company's folder may word page one and the sign-off by itself."""
    (tmp_path / "answer.html").write_text('<section id="answer"><p>Ours: {{ page.front.question }}</p></section>')
    (tmp_path / "signing.html").write_text('<section id="signing"><p>{{ page.front.outside }} Ours too.</p></section>')
    html = render_html(market, template_folder=tmp_path, made_at=made_at)

    assert "Ours: The plant runs on R-404A" in html
    assert "Ours too." in html


def test_a_report_carries_its_logo(made_at, tmp_path):
    """The picture stands among the files that the page keeps for a later run, byte by byte."""
    from retrofit.report.carried.reader import read_carried

    text = (CASES / "harbour-market.toml").read_text("utf-8").replace('# logo = "logo.svg"', 'logo = "logo.svg"')
    (tmp_path / "plant.toml").write_text(text, "utf-8")
    (tmp_path / "logo.svg").write_bytes(SVG)
    html = render_html(assess(compare(read_case(tmp_path / "plant.toml"))), made_at=made_at)
    (tmp_path / "plant.html").write_text(html, "utf-8")

    assert read_carried(tmp_path / "plant.html").files["logo.svg"] == SVG
