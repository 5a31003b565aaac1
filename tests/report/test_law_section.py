"""Law on the page and in the terminal: before and after, dates, rows with source and basis, and who decides."""

import re
import shutil
from dataclasses import replace
from pathlib import Path

import pytest

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.report import render_html
from retrofit.report.law import outlook
from retrofit.report.terminal import comparison_text
from retrofit.study import compare
from retrofit.study.law import RowState
from retrofit.study.law_words import DEFERENCE, NOT_VERIFIED, dates, moment_text, source_text
from retrofit.units import IP, SI

ROOT = Path(__file__).resolve().parents[2]
POUND_KG = 0.45359237  # NIST Special Publication 811 (2008), appendix B
OWN = """
title = "<b>Own</b> law"
jurisdictions = ["EU"]
review_by = 2026-01-01

[[row]]
id = "own"
subject = "records"
text = "<script>alert(1)</script> {{ 7 * 7 }}"
applies_from = 2020-01-01
gwp_basis = "none"
source = "<img src=x>"
date_checked = 2025-06-01
basis = "memory"
confidence = "low"
"""


def plain(text):
    """Return a text with single blanks, designations with a hyphen, and without backticks."""
    return " ".join(re.sub(r"\bR(?=[0-9])", "R-", text).replace("`", "").split())


def section(html):
    """Return the section on law as HTML."""
    return "".join(re.findall(r'<section id="law(?:-rows)?".*?</section>', html, re.DOTALL))


def numbers(cell):
    """Return the numbers of a cell, each with half a unit of its last digit; thousands stand apart."""
    cell = " ".join(cell.split())
    digits = [item.replace(" ", "") for item in re.findall(r"\d{1,3}(?: \d{3})+(?:\.\d+)?|\d+(?:\.\d+)?", cell)]
    return [(float(item), 0.501 * 10.0 ** -len(item.partition(".")[2])) for item in digits]


def agree(cell, values):
    """Say whether a cell shows these values, expected first, within half their last digits."""
    wanted = list(values) if values[0] != values[-1] else values[:1]
    low_first = [wanted[1], wanted[0], wanted[2]] if len(wanted) == 3 else wanted
    shown = numbers(cell)
    if len(shown) == 1:
        return all(abs(shown[0][0] - value) <= shown[0][1] for value in values)
    return len(shown) == len(low_first) and all(
        abs(value - want) <= half for (value, half), want in zip(shown, low_first, strict=True)
    )


@pytest.mark.parametrize(("units", "to_SI"), [("si", 1.0), ("ip", POUND_KG)])
def test_before_and_after_are_those_of_the_result(shipped, units, to_SI, page_of, read_page, assessed):
    """First day, GWP, charge and weight in CO2 of every refrigerant read back; what is not known reads unknown."""
    result = assessed(shipped)
    rows = read_page(page_of(shipped, units)).tables["t-law"][1:]

    assert len(rows) == len(result.entries)
    for row, entry in zip(rows, result.entries, strict=True):
        law = entry.law
        assert row[0].removesuffix(" (today)") == entry.refrigerant.display_name
        assert row[1] == law.start.isoformat()
        assert agree(row[3], [mass / to_SI for mass in law.charge_kg]) if law.charge_kg else row[3] == "unknown"
        if len(law.gwp) != 1:
            continue
        (gwp,), (weight,) = law.gwp.values(), law.co2e_t.values()
        assert row[2] == "unknown" if gwp is None else abs(numbers(row[2])[0][0] - gwp) <= max(0.5, 0.005 * gwp)
        assert agree(row[4], weight) if weight else row[4] == "unknown"


def test_the_harbour_market_by_hand(page_of, read_page):
    """260 kg of GWP 3922 (Regulation 517/2014) are 1020 t: from 500 t a check every 3 months (2024/573, Art. 5)."""
    rows = {row[0]: row for row in read_page(page_of("harbour-market", "si")).tables["t-law"]}
    today = rows["R-404A (today)"]

    assert numbers(today[4])[0][0] == pytest.approx(260 * 3922 / 1000, abs=0.5)
    assert today[5] == "every 3 months"
    assert today[7].startswith("new gas from 2025-01-01")  # GWP 2500 or more (Art. 13(3))
    assert today[8] == "any gas from 2030-01-01"  # reclaimed gas of 2500 or more ends then
    assert rows["R-454C"][7:9] == ["none in these tables"] * 2


def test_leak_checks_and_bans_are_those_of_the_result(shipped, page_of, read_page, assessed):
    """Months, the strictest ban in force at the start and the next; unknown where a row cannot be told."""
    rows = read_page(page_of(shipped, "si")).tables["t-law"][1:]
    for row, entry in zip(rows, assessed(shipped).entries, strict=True):
        law = entry.law
        if law.leak_check_months is not None:
            assert row[5].startswith(f"every {law.leak_check_months:g} months")
        else:
            assert row[5] == ("unknown" if law.leak_check_open else row[5])
            assert not row[5].startswith("every")
        for cell, ban in ((row[7], law.strictest), (row[8], law.next_ban)):
            assert f"from {ban.applies_from}" in cell if ban else cell == "none in these tables"
            assert ("not verified" in cell) == (ban is not None and not ban.is_verified)


def test_every_row_stands_with_source_basis_and_day(shipped, page_of, read_page, assessed):
    """Text, exceptions, numbers, reasons, source, edition, address and the day it was read; not verified is said."""
    page = read_page(section(page_of(shipped, "si")))
    rows = [[plain(cell) for cell in row] for row in page.tables["t-law-rows"] if len(row) == 4]
    for entry in assessed(shipped).entries:
        for row in entry.law.rows:
            mine = [cells for cells in rows if plain(row.text) in cells[1] and plain(source_text(row)) in cells[3]]
            mine = [cells for cells in mine if entry.refrigerant.display_name in cells[2]]
            mine = [cells for cells in mine if cells[0] == plain(dates(row))]
            assert mine, row.id
            assert plain(row.exceptions) in mine[0][1]
            is_outlook = row.subject == "proposal" and row.state == RowState.APPLIES
            assert ("outlook" if is_outlook else row.state.value) in mine[0][2]
            assert row.date_checked.isoformat() in mine[0][3]
            assert all(part in plain(page.text) for part in (row.edition, row.address))
            assert "check the current text" in mine[0][3]
            assert ("not verified" in mine[0][3].replace(plain(row.clause), "")) == (not row.is_verified)
            values = [item.value[1] for item in row.measured if item.value and item.measure != "share"]
            assert all(f"{value:.4g}" in mine[0][2] for value in values)


def test_the_line_of_time_is_in_order_and_whole(shipped, page_of, read_page, assessed):
    """Every moment of every refrigerant, today, the change and the end stand by date."""
    result = assessed(shipped)
    rows = read_page(page_of(shipped, "si")).tables["t-law-time"][1:]
    shown = {(row[0], row[1]) for row in rows}

    assert [row[0] for row in rows] == sorted(row[0] for row in rows)
    assert (result.law.on.isoformat(), "date of the legal check") in shown
    assert (result.law.date_of_change.isoformat(), "change of refrigerant") in shown
    for entry in result.entries:
        for moment in entry.law.timeline:
            assert (moment.day.isoformat(), plain(moment_text(moment))) in shown


def test_the_tables_are_named_with_their_dates(shipped, page_of, read_page, assessed):
    """Title, file, number of rows, oldest check and the day of the next review."""
    rows = read_page(page_of(shipped, "si")).tables["t-law-tables"][1:]

    assert rows
    for row, table in zip(rows, assessed(shipped).law.tables, strict=True):
        assert row[0].startswith(table.title)
        assert all(part in row[0] for part in (table.edition, table.address))
        assert row[1:4] == [table.file, str(table.rows), str(table.verified)]
        assert row[4:6] == [table.checked.isoformat(), table.review_by.isoformat()]


def test_it_defers_before_it_tells(shipped, page_of, assessed):
    """No legal advice: the first words of the section, and the last of the block in the terminal."""
    html = section(page_of(shipped, "si"))

    assert html.index("Not legal advice.") < html.index("<table")
    assert DEFERENCE in comparison_text(assessed(shipped), SI, 10_000)


def test_without_a_jurisdiction_there_is_no_section(assessed, made_at, read_page):
    """A line among the limits says instead that law was not looked at."""
    result = replace(assessed("harbour-market"), law=None)
    page = read_page(render_html(result, made_at=made_at))

    assert "law" not in page.ids
    assert "Law, listings and permits at the place of the plant" in " ".join(page.text.split())
    assert "\nLaw: " not in comparison_text(result, SI, 100)


def test_a_jurisdiction_without_a_table_is_not_checked(case_with, made_at, read_page):
    """Nothing is said of it but that law was not checked, and for whom there are tables."""
    result = assess(compare(case_with(law={"jurisdiction": "other"})))
    page = read_page(section(render_html(result, made_at=made_at)))
    said = "Law not checked: there is no table for other; there are tables for EU, GB, US, US-CA"

    assert "t-law" not in page.tables
    assert said in " ".join(page.text.split())
    assert "Jurisdiction: other" in page.text
    assert said in comparison_text(result, SI, 1000)


@pytest.mark.parametrize(
    ("jurisdiction", "words"), [("DE", "national rules of Germany"), ("GB", "the reform announced")]
)
def test_what_is_not_held_is_named(case_with, made_at, read_page, jurisdiction, words):
    """Page and terminal name the fields of law that no table holds, and under whose tables a member is read."""
    result = assess(compare(case_with(law={"jurisdiction": jurisdiction, "equipment": "supermarket"})))
    page = " ".join(read_page(section(render_html(result, made_at=made_at))).text.split())
    terminal = comparison_text(result, SI, 1000)

    assert words in page
    assert words in terminal
    assert "Not legal advice" in page
    assert "Not legal advice" in terminal
    assert ("DE (Germany), by the tables for EU" in page) == (jurisdiction == "DE")


def test_an_unknown_charge_leaves_leak_checks_unknown(case_with, made_at, read_page):
    """Without a charge nothing says how often; the row is marked unknown and names what is missing."""
    law = {"jurisdiction": "EU", "equipment": "supermarket", "date_of_change": "2027-04-01"}
    result = assess(compare(case_with(law=law)))
    html = render_html(result, made_at=made_at)
    page = read_page(html)

    assert [row[3:6] for row in page.tables["t-law"][1:]] == [["unknown"] * 3] * 2
    assert '<span class="verdict-mark unknown">unknown</span>' in section(html)
    assert "the charge of R-404A is not known (charge in [plant])" in " ".join(page.text.split())
    block = comparison_text(result, SI, 100).partition("\nLaw: ")[2].partition("\n\n")[0]
    assert re.search(r"R-404A \(today\) +3.922 +unknown +unknown", block)


def test_a_table_of_the_user_is_only_text_and_its_age_is_told(tmp_path, made_at, read_page):
    """Title, text and source stand there letter by letter; past its review it is said before the numbers."""
    shutil.copy(ROOT / "cases" / "harbour-market.toml", tmp_path / "plant.toml")
    (tmp_path / "law").mkdir()
    (tmp_path / "law" / "own.toml").write_text(OWN, encoding="utf-8")
    html = section(render_html(assess(compare(read_case(tmp_path / "plant.toml"))), made_at=made_at))
    page = read_page(html)

    assert "<script>alert(1)</script> {{ 7 * 7 }}" in page.text
    assert "<img src=x>" in page.text
    assert {"script", "img", "b"}.isdisjoint(tag for tag, _ in page.elements)
    own = next(row for row in page.tables["t-law-tables"] if row[1] == "own.toml")
    assert own[0] == "<b>Own</b> law"
    assert own[6] == "the user’s own, beside the case file; past its review: gives no answer"
    assert html.index("own.toml was to be reviewed by 2026-01-01") < html.index("<table")


# Terminal


@pytest.mark.parametrize("units", [SI, IP])
def test_the_terminal_has_weight_and_leak_checks(units, assessed):
    """Every refrigerant has its weight in CO2, its interval and its first ban; marks are told below."""
    result = assessed("harbour-market")
    text = comparison_text(result, units, 100)
    lines = text.partition("\nLaw: ")[2].partition("\n\n")[0].split("\n")
    for entry in result.entries:
        cells = re.split(r"\s{2,}", next(line for line in lines if line.startswith(entry.refrigerant.display_name)))
        law = entry.law
        weight = law.co2e_t["gwp_eu_2024_573"][1]
        value, half = numbers(cells[2])[0]
        assert abs(value - weight) <= half
        months = law.leak_check_months
        assert cells[3].startswith(f"every {months:g} months" if months else "no row")
        for cell, ban in ((cells[5], law.strictest), (cells[6], law.next_ban)):
            assert (ban.applies_from.isoformat() if ban else "no row") in cell
            assert ("†" in cell) == (ban is not None and not ban.is_verified)
    told = " ".join(lines)
    for mark in ("no row: not in these tables", f"† {NOT_VERIFIED}"):
        assert mark in told
    assert "eu-2024-573.toml, read 2026-12-01" in told


# Golden line of time

GOLDEN = """\
2026-12-01 date of the legal check
2027-01-01 begins: HFC placed on the market in the EU: at most 21 665 691 t CO2e a year.
2027-04-01 change of refrigerant
2030-01-01 begins: HFC placed on the market in the EU: at most 9 132 097 t CO2e a year.
2030-01-01 begins: No servicing of refrigeration equipment with reclaimed or recycled gas of GWP 2500 or more either.
2032-01-01 begins: No servicing of stationary refrigeration, chillers apart, with new gas of GWP 750 or more.
2033-01-01 begins: HFC placed on the market in the EU: at most 8 445 713 t CO2e a year.
2035-04-01 end of the remaining life"""


def test_the_line_of_time_of_the_harbour_market(page_of, read_page):
    """Read by hand from Art. 13(3) and (5) and annex VII of Regulation (EU) 2024/573: nothing ends."""
    rows = read_page(page_of("harbour-market", "si")).tables["t-law-time"][1:]
    shown = sorted({f"{row[0]} {row[1]}" for row in rows})

    assert shown == sorted(plain(text) for text in GOLDEN.split("\n"))


# Outlook


def test_the_outlook_names_parts_and_shares(page_of, read_page):
    """By hand, ASHRAE 34: R454C is 21.5 % R32 and 78.5 % R1234yf; R1234yf turns into TFA wholly, R32 not at all."""
    rows = {row[0]: row for row in read_page(page_of("harbour-market", "si")).tables["t-law-outlook"][1:]}

    assert rows["R-454C"][1] == "78.5 % by mass of R-1234yf"
    assert rows["R-454C"][2] == "78.5 % by mass of R-1234yf (100 % by mole)"
    assert "R-32" not in " ".join(rows["R-454C"])


def test_a_proposal_without_components_is_no_line_of_the_outlook(case_with):
    """A proposal on a kind of equipment in the US stands among the rows; the outlook by component stays empty."""
    result = assess(compare(case_with(law={"jurisdiction": "US", "equipment": "transport"})))

    assert outlook(result) == ()
