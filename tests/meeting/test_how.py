"""How a number came about: every number has an origin that is told, and every formula gives the number."""

import math
import re
import time

import pytest

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.meeting.board import tables
from retrofit.meeting.how import QUANTITY, Book, formulas, how, slug
from retrofit.meeting.state import State
from retrofit.study import compare
from retrofit.units import IP, MISSING, SI
from tests.meeting.conftest import ROOT

CASES = ("harbour-market", "ice-rink", "desert-split")  # on three bases; without exchangers; split with air
UNKNOWN = ("plant-cooling-power-pressures", "limits-safety-class")


@pytest.fixture(scope="module", params=CASES)
def result(request):
    """Return a shipped case's result."""
    return assess(compare(read_case(ROOT / "cases" / f"{request.param}.toml")))


def worked_out(formula, book):
    """Return what a formula gives, by Python's own arithmetic."""
    text = QUANTITY.sub(lambda match: repr(book.value(match[1])), formula)
    return eval(text.replace("−", "-").replace("×", "*"), {"__builtins__": {}})


def test_every_formula_gives_the_number_it_explains(result):
    """Worked out with the values it names, each formula gives the value of its row, for every refrigerant."""
    both, seen = tables(result, SI), 0
    for table in both:
        for group in table.groups:
            for row in group.rows:
                formula = formulas()["rows"].get(slug(group, row), {}).get("formula")
                if not formula:
                    continue
                for place, value in enumerate(row.values):
                    if value is None:
                        continue
                    expected = value - 1.0 if row.kind == "change" else value
                    if row.kind == "gauge pressure":
                        assert formula.endswith("[ambient]")
                    found = worked_out(formula, Book(result, both, place, SI))
                    assert math.isclose(found, expected, rel_tol=1e-9, abs_tol=1e-9), (slug(group, row), place)
                    seen += 1
    assert seen > 100


def test_every_number_has_an_origin(result):
    """No cell of the tables leads to a page that says nothing of it."""
    both = tables(result, SI)
    for table in both:
        for group in table.groups:
            for row in group.rows:
                known = slug(group, row) in formulas()["rows"] or row.kind.startswith("catalogue")
                assert known or slug(group, row) in UNKNOWN, slug(group, row)
                for cell in row.cells:
                    assert (cell.href == "") == (cell.text == MISSING)


def test_it_names_inputs_and_where_they_come_from(result):
    """Inputs say whether the case, a default or the meeting gave them; state points are those of the refrigerant."""
    both, name = tables(result, IP), result.candidates[0].refrigerant.designation
    found = how(result, both, name, "efficiency-cop-cooling-over-compressor-power", IP, State())

    origins = {item.key: item.origin for item in found.inputs}
    assert origins["duty.condensing"] == "case"
    assert set(origins.values()) <= {"case", "default", "not stated"}
    assert len(found.states.rows) == 8
    assert how(result, both, name, "no-such-number", IP, State()) is None
    assert how(result, both, "R11", "efficiency-cop-cooling-over-compressor-power", IP, State()) is None


def test_a_number_of_the_page_leads_to_its_origin(watched, read):
    """Without a script the link of a number is a page of its own, which names formula, inputs and states."""
    link = re.search(r'href="(/how/R448A/plant-full-cooling-at-full)"', watched.page())[1]
    answer = watched.get(link)
    text = read(answer.get_data(as_text=True))[1]

    assert answer.status_code == 200
    assert "Cooling at full, R-448A: " in text
    assert "mass flow where it settles × refrigerating effect there" in re.sub(r" +", " ", text)
    assert "duty.condensing" in text
    assert "State points of R-448A" in text
    assert watched.get("/how/R448A/nothing").status_code == 404
    assert watched.get("/how/R999/duty-mass-flow").status_code == 404


def test_every_link_of_the_page_is_answered(watched):
    """All numbers and verdicts of the page lead somewhere."""
    links = sorted(set(re.findall(r'href="(/(?:how|why)/[^"]+)"', watched.page())))

    assert len(links) > 150
    assert [link for link in links if watched.get(link).status_code != 200] == []


def test_numbers_of_the_years_have_an_origin_too(watched, read):
    """Year, warming and money stand on the page once they are there; each number leads to how it is reckoned."""
    while not watched.session.moment().outcome.is_whole:
        time.sleep(0.02)
    page = watched.page()
    links = sorted(set(re.findall(r'href="(/how/option-[^"]+)"', page)))
    text = read(watched.get("/how/option-R448A/tewi-sum").get_data(as_text=True))[1]

    for heading in ("A year of every option", "What it costs and saves"):
        assert heading in read(page)[1]
    assert len(links) > 40
    assert [link for link in links if watched.get(link).status_code != 200] == []
    assert "TEWI = GWP x leak rate x charge x years" in text
    assert "emissions.leak_rate_after" in text
    assert watched.get("/how/option-R999/tewi-sum").status_code == 404


def test_an_address_belongs_to_its_option(client, read):
    """A window that does not know yet of a hidden candidate is told of the number it shows, not a neighbour's."""
    while not client.session.moment().outcome.is_whole:
        time.sleep(0.02)
    before = read(client.get("/how/option-R454C/tewi-sum").get_data(as_text=True))[1]
    client.change("hide R448A")

    assert "R-454C: " in before
    assert read(client.get("/how/option-R454C/tewi-sum").get_data(as_text=True))[1] == before
    assert client.get("/how/option-R448A/tewi-sum").status_code == 404
