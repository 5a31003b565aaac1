"""The page of every shipped case: whole, in one file, with all cautions, both bases and what the numbers rest on."""

import re

import pytest

from retrofit.checks import not_checked
from retrofit.refrigerants import GWP_BASES
from retrofit.report import render_html
from retrofit.study.bands import pair_band
from retrofit.units import UNIT_SYSTEMS, told

SYSTEMS = ["si", "ip"]
KEYS = {"Practice"}  # of the bibliography; the report writes out the title
LOADING = {"script", "link", "iframe", "object", "embed", "image", "video", "audio", "base", "form", "frame"}


def spelled(text):
    """Return a text with single blanks, designations with a hyphen and a blank before each percent sign."""
    return " ".join(re.sub(r"(?<=[0-9])%", " %", re.sub(r"\bR(?=[0-9])", "R-", text)).split())


@pytest.mark.parametrize("units", SYSTEMS)
def test_ids_are_unique_and_every_fragment_leads_somewhere(shipped, units, page_of, read_page):
    """No id stands twice, and each link or reference within the page has its target."""
    page = read_page(page_of(shipped, units))
    links = [named["href"] for _, named in page.elements if "href" in named]
    named_by = [part for _, named in page.elements for part in named.get("aria-labelledby", "").split()]
    used = re.findall(r"url\(#([^)]+)\)", page_of(shipped, units))

    assert len(page.ids) == len(set(page.ids))
    assert len(links) > 10
    assert all(link.startswith("#") for link in links)
    assert {link[1:] for link in links} | set(named_by) | set(used) <= set(page.ids)


@pytest.mark.parametrize("units", SYSTEMS)
def test_nothing_is_loaded_or_run(shipped, units, page_of, read_page):
    """The page has no element, attribute or style that would load or run something, and its policy forbids both."""
    html = page_of(shipped, units)
    page = read_page(html)
    policies = [n["content"] for _, n in page.elements if n.get("http-equiv") == "Content-Security-Policy"]

    pictures = [named for tag, named in page.elements if tag == "img"]
    assert not LOADING & {tag for tag, _ in page.elements}
    assert all(named["src"].startswith("data:image/") for named in pictures)
    assert sum("src" in named for _, named in page.elements) == len(pictures) <= 1
    assert not [name for _, named in page.elements for name in named if name == "srcset" or name[:2] == "on"]
    assert not re.search(r"@import|url\((?!#)", html)
    # The address of a law stands as text; nothing points a browser at it.
    inside_tags = " ".join(re.findall(r"<[^>]*>|<style.*?</style>", html, re.DOTALL))
    assert not re.search(r"https?://(?!www\.w3\.org/)", inside_tags)
    assert policies == ["default-src 'none'; style-src 'unsafe-inline'; img-src data:"]


@pytest.mark.parametrize("units", SYSTEMS)
def test_every_caution_of_every_refrigerant_is_there(shipped, units, page_of, read_page, assessed):
    """Title and text of each caution stand on the page, and the sentence that defers to standards and code."""
    text = " ".join(read_page(page_of(shipped, units)).text.split())
    cautions = [caution for entry in assessed(shipped).entries for caution in entry.cautions]

    assert len(cautions) >= 2 * len(assessed(shipped).entries)  # class and pressure at least
    for caution in cautions:
        assert caution.title in text
        assert caution.text in text
    for standard in ("ASHRAE 34 and 15", "ISO 817 and 5149", "EN 378", "local code"):
        assert standard in text


def test_cautions_stand_before_the_comparison(shipped, page_of):
    """Question and answer come first, then the cautions, then the tables."""
    html = page_of(shipped, "si")
    places = [html.index(f'<section id="{name}"') for name in ("answer", "cautions", "comparison", "charts", "states")]

    assert places == sorted(places)


@pytest.mark.parametrize("units", SYSTEMS)
def test_all_bases_and_the_convention_stand_in_the_headings(shipped, units, page_of, read_page, assessed):
    """The comparison names its three bases, reading and match, and where the swept volume is from."""
    page, duty = read_page(page_of(shipped, units)), assessed(shipped).case
    comparisons = [caption for caption in page.captions if "asis" in caption or "bases" in caption]
    reading = {"dew": "read as dew points", "mean": "read as mean temperatures"}[duty.duty.reading]
    match = {"dew": "at equal dew points", "mean": "at equal mean temperatures"}[duty.compare.match]
    headings = " ".join(page.captions) + " ".join(cell for rows in page.tables.values() for row in rows for cell in row)

    assert "Basis: same duty" in headings
    assert "Basis: same compressor, swept volume" in headings
    assert "Basis: same plant, existing compressor and exchangers" in headings
    assert ("given in the case" in headings) == (assessed(shipped).swept_volume_from == "case")
    assert any(reading in caption and match in caption for caption in comparisons)


def test_each_gwp_names_its_edition_or_law(shipped, page_of, read_page):
    """No row or column says GWP without saying by which edition or law."""
    page = read_page(page_of(shipped, "si"))
    cells = [cell for rows in page.tables.values() for row in rows for cell in row if cell.startswith("GWP,")]

    assert {cell.removeprefix("GWP, ") for cell in cells} == set(GWP_BASES.values())


def test_safe_is_no_word_of_the_report(shipped, page_of, read_page):
    """The report never says that something is safe."""
    assert not re.search(r"\b(un)?safe(ly)?\b", read_page(page_of(shipped, "si")).text, re.IGNORECASE)


@pytest.mark.parametrize("units", SYSTEMS)
def test_verdicts_findings_and_reasons_are_told(shipped, units, page_of, read_page, assessed):
    """Each candidate has its verdict, the text and source of each finding, and the reason where not computed."""
    page = read_page(page_of(shipped, units))
    text = spelled(page.text)

    for entry in assessed(shipped).candidates:
        heading = f"{entry.refrigerant.display_name}, class {entry.refrigerant.safety_class.text}: {entry.verdict}"
        assert heading in page.headings
        for finding in entry.findings:
            assert spelled(told(finding.fact, UNIT_SYSTEMS[units]))[1:] in text
            assert spelled(told(finding.advice, UNIT_SYSTEMS[units])) in text
            assert finding.source in text or finding.source in KEYS
        assert entry.reason is None or text.count(spelled(entry.reason)) >= 2


@pytest.mark.parametrize("units", SYSTEMS)
def test_what_the_numbers_rest_on_is_told(shipped, units, page_of, read_page, assessed):
    """Defaults, limits, grade of each model, versions, time and enthalpy reference stand on the page."""
    text = " ".join(read_page(page_of(shipped, units)).text.split())
    result = assessed(shipped)
    reference = {"si": "IIR reference", "ip": "saturated liquid at −40 °F"}[units]

    for default in result.case.defaults:
        assert default.key in text
        assert default.why in text
    for limit in not_checked(result):
        assert spelled(limit)[1:] in spelled(text)
    for name, version in result.versions.items():
        assert f"{name} {version}" in text
    assert "1 December 2026, 09:30 UTC" in text
    assert reference in text
    assert re.search(r"capacity ±(6|8\.5|12) %", text.replace("\N{NO-BREAK SPACE}", " "))


def test_a_row_that_cannot_be_computed_has_its_reason_and_no_numbers(assessed, page_of, read_page):
    """R-744 cannot condense at the freezer store's temperature: its column is empty and a note says why."""
    page = read_page(page_of("freezer-store", "si"))
    rows = page.tables["t-comparison"]
    column = rows[0].index("R-744")
    discharge = next(row for row in rows if row[0] == "Discharge temperature")

    assert discharge[column] == "–"
    assert "R-744: not computed: condensing at 45.8 degC is above the critical temperature" in " ".join(
        page.text.split()
    )


def test_values_from_memory_and_disputed_ones_are_marked(page_of, read_page):
    """A limit that was only remembered has a note saying so; a GWP that sources dispute tells both figures."""
    text = " ".join(read_page(page_of("harbour-market", "si")).text.split())

    assert re.search(r"R-448A[^:]*: from memory, medium confidence: look it up before use", text)
    assert "R-448A: kept 1273 (mass-weighted) against 1360" in text


@pytest.mark.parametrize(("case", "beyond"), [("harbour-market", 0), ("office-chiller", 1)])
def test_a_difference_inside_the_band_has_its_sign_and_one_outside_has_none(case, beyond, page_of, read_page, assessed):
    """Capacity within its band of today carries ≈, beyond it not; a new plant is another machine and has a dash."""
    rows = read_page(page_of(case, "si")).tables["t-comparison"]
    row = next(row for row in rows if row[0] == "Cooling against today")
    candidates = assessed(case).candidates
    existing = assessed(case).existing
    changes = {id(entry): entry.relative["capacity"] - 1.0 for entry in candidates if not entry.is_new_plant}
    bands = {id(entry): pair_band(existing, entry, "capacity") for entry in candidates if not entry.is_new_plant}

    assert sum(abs(change) > bands[entry] for entry, change in changes.items()) == beyond
    assert len(changes) == len(candidates) - 1
    for cell, entry in zip(row[3:], candidates, strict=True):
        if entry.is_new_plant:
            assert "capacity" not in entry.relative
            assert cell == "–"
        else:
            assert cell.startswith("≈") == (abs(changes[id(entry)]) <= bands[id(entry)])


@pytest.mark.parametrize("units", SYSTEMS)
def test_the_same_result_and_time_give_the_same_bytes(units, assessed, page_of, made_at):
    """Rendering twice gives the same text, figures included."""
    again = render_html(assessed("coast-heat-pump"), units, made_at=made_at)

    assert again.encode() == page_of("coast-heat-pump", units).encode()
