"""The remaining life on the page: its numbers are those of the JSON, and what is not known reads unknown."""

import re
import xml.etree.ElementTree as ET
from dataclasses import replace

import pytest

from retrofit.checks import assess
from retrofit.report import render_html
from retrofit.report.machine_year import year_json
from retrofit.study import compare
from retrofit.study.life import with_life

HARBOUR = "harbour-market"
J_PER_KWH = 3.6e6
POUND_KG = 0.45359237  # NIST Special Publication 811 (2008), appendix B
SECTIONS = ("year", "emissions", "money", "certainty", "maps", "cost-items", "draws")
PLANT = {
    "plant": {"charge": "100 kg"},
    "law": {"remaining_life": "8 years", "annual_leak_rate": "10 %"},
    "money": {"currency": "EUR", "tariff": 0.2, "change": {"labour": 5000}},
}


@pytest.fixture(scope="module")
def pages(lived, read_page, made_at):
    """Return a function that gives the page of a shipped case with its remaining life, as read."""
    found = {}

    def page(units="si"):
        if units not in found:
            found[units] = render_html(lived(HARBOUR), units, made_at=made_at)
        return found[units]

    return page


@pytest.fixture(scope="module")
def told(lived):
    """Return the JSON object of the same result."""
    return year_json(lived(HARBOUR))


def number(text):
    """Return the number of a cell without its signs."""
    return float(re.sub(r"[\s≈+\u202f]", "", text).replace("−", "-"))


def close(text, value):
    """Say whether a cell shows a value within its last digit: four digits from 1000 on, whole ones from 100 on."""
    return number(text) == pytest.approx(value, rel=6e-4, abs=0.51 if abs(value) >= 100.0 else 0.051)


def test_the_year_s_numbers_are_those_of_the_json(pages, read_page, told):
    """Electricity, its quantiles, peak, seasonal COP, run time and unmet load of every option."""
    rows = read_page(pages()).tables["t-year-year"][1:]

    assert len(rows) == len(told["options"]) == 8
    for row, option in zip(rows, told["options"], strict=True):
        year, ends = option["year"], option["certainty"]["quantiles"]["energy_J"]
        assert row[1] == (year["plant"] if option["deed"] == "new plant" else option["deed"])
        assert close(row[2], year["energy_J"] / J_PER_KWH)
        low, high = row[4].split(" to ")
        assert close(low, ends["p10"] / J_PER_KWH)
        assert close(high, ends["p90"] / J_PER_KWH)
        assert number(row[5]) == pytest.approx(year["peak_W"] / 1e3, abs=0.051)
        assert number(row[6]) == pytest.approx(year["seasonal_cop"], abs=0.0051)
        assert number(row[8]) == pytest.approx(year["unmet_h"], abs=0.51)


def test_changes_inside_the_band_carry_the_sign(pages, read_page, told):
    """A change of electricity has the sign ≈ exactly where the JSON says alike, and its per cent."""
    rows = read_page(pages()).tables["t-year-year"][1:]
    for row, option in zip(rows[2:], told["options"][2:], strict=True):
        change = option["against_as_is"]["energy_J"]
        assert row[3].startswith("≈") == change["is_alike"]
        assert number(row[3]) == pytest.approx(100.0 * change["ratio"], abs=0.51)


def test_warming_and_money_are_those_of_the_json(pages, read_page, told):
    """Direct, indirect and sum in tonnes; first cost, saving and payback in the currency of the case."""
    tables = read_page(pages()).tables
    both = (tables["t-emissions-tewi"][1:], tables["t-money-yearly"][1:], tables["t-money-once"][1:])
    for warming, yearly, life, option in list(zip(*both, told["options"], strict=True))[1:]:
        found, money = option["emissions"], option["money"]
        for cell, name in zip(warming[4:7], ("direct_kg", "indirect_kg", "total_kg"), strict=True):
            assert close(cell, found[name] / 1000.0)
        assert close(life[1], money["first_cost_currency"]["base"])
        assert close(yearly[-2], money["yearly_saving_currency"])
        assert number(life[4]) == pytest.approx(money["payback_years"], abs=0.051)


def test_every_input_stands_with_its_limits_and_their_origin(pages, read_page, told):
    """The annex lists all inputs; assumed limits are marked; in inch-pound units masses are pounds."""
    rows, ip = (read_page(pages(units)).tables["t-inputs-drawn"][1:] for units in ("si", "ip"))

    assert len(rows) == len(told["inputs"])
    for row, pounds, item in zip(rows, ip, told["inputs"], strict=True):
        assert row[5].split(",")[0] == {"case": "the case", "assumed": "assumed", "model": "the model"}[item["origin"]]
        if item["kind"] == "mass":
            assert number(row[1]) == pytest.approx(item["base"], abs=0.051)
            assert number(pounds[1]) * POUND_KG == pytest.approx(item["base"], abs=0.03)


def test_what_rests_on_assumed_values_carries_the_sign(lived, made_at):
    """Defaults of the case mark the sums and the money; GWP only the edition; what rests on none has no sign."""
    html = render_html(lived("office-chiller"), made_at=made_at)
    taken = {default.key for default in lived("office-chiller").case.defaults}
    section = html.split('<section id="emissions"')[1].split("</section>")[0]
    heads = dict(re.findall(r'<th scope="(?:col|row)">([^<]+)(<sup class="marks">†</sup>)?', section))

    assert {"emissions.gwp_edition", "emissions.recovery_at_end"} <= taken
    for label in ("GWP over 100 years", "Refrigerant lost at the end", "Sum", "Direct, all of the refrigerant"):
        assert any(name.startswith(label) and sign for name, sign in heads.items()), label
    for label in ("Charge", "Leaks in a year", "Time between leak checks"):
        assert any(name.startswith(label) and not sign for name, sign in heads.items()), label
    legend = section.split('class="fine assumed"')[1].split("</p>")[0]
    assert all(f"<code>{key}</code>" in legend for key in taken if key.startswith("emissions."))


def test_first_cost_stands_item_by_item(pages, read_page, told):
    """Each item with low, base and high; the sum below them is that of the JSON."""
    rows = read_page(pages()).tables["t-cost-items"]
    sums = [row for row in rows if row[0] == "First cost"]
    paid = [option for option in told["options"] if option["money"]["first_cost_items"]]

    assert len(sums) == len(paid)
    for row, option in zip(sums, paid, strict=True):
        for cell, end in zip(row[1:4], ("low", "base", "high"), strict=True):
            assert number(cell) == pytest.approx(option["money"]["first_cost_currency"][end], abs=0.51)


def test_what_a_check_stops_is_that_of_the_json(lived, made_at, read_page):
    """The freezer store's stops stand on the page as they stand in the JSON."""
    result = lived("freezer-store")
    stopped, text = year_json(result)["stopped"], read_page(render_html(result, made_at=made_at)).text

    assert stopped.startswith("Stopped: R452A (High pressure ratio); ")
    assert " ".join(stopped.split()) in " ".join(text.replace("R-", "R").split())


def test_a_new_plant_is_not_drawn_at_the_design_point_of_the_machine(pages, read_page, told):
    """No cooling, COP or discharge of R-454C on the existing plant stands among the draws, and a note says why."""
    page = read_page(pages())
    rows = [row for key, table in page.tables.items() if str(key).startswith("t-spans") for row in table]
    at_design = next(row for row in rows if row[0] == "R-454C")
    (option,) = [option for option in told["options"] if option["refrigerant"] == "R454C"]

    assert at_design[1:] == ["–", "–", "–"]
    assert "R-454C: at the design point: a new plant is sized for the duty" in " ".join(page.text.split())
    assert option["certainty"]["carries_probability"] is None
    assert not {"cooling_W", "cop", "T_discharge_K", "capacity_ratio", "cop_ratio"} & set(
        option["certainty"]["quantiles"]
    )
    assert {"energy_J", "tewi_kg", "first_cost_currency"} <= set(option["certainty"]["quantiles"])


def test_the_words_are_those_of_the_json(pages, read_page, told):
    """Meter and strongest inputs stand on the page; method and left-out parts too; nothing is stopped; ids unique."""
    page = read_page(pages())
    text = " ".join(page.text.replace("R-", "R").split())

    for words in (told["meter"], told["what_moves_most"], "JCGM 100:2008, 4.3.7", "blowing agent"):
        assert " ".join(words.replace("R-", "R").split()) in text
    assert told["stopped"] is None
    assert "Stopped: " not in text
    assert set(SECTIONS) <= set(page.ids)
    assert len(page.ids) == len(set(page.ids))
    assert "R449A: first cost" in text  # page one


@pytest.fixture(scope="module")
def small(case_with):
    """Return a function that gives a result without a year, of a case with other tables laid over it."""

    def make(**tables):
        return with_life(assess(compare(case_with(**{**PLANT, **tables}))), draws=20)

    return make


def test_money_without_a_year_is_unknown_and_never_zero(small, made_at, read_page):
    """No [year]: no section of it, saving and payback read unknown with what is missing, first cost is there."""
    result = small()
    page = read_page(render_html(result, made_at=made_at))
    rows = {row[0]: row for row in page.tables["t-money"]}

    assert "year" not in page.ids
    assert {"money", "certainty", "cost-items"} <= set(page.ids)
    assert rows["First cost"][3].startswith("≥")  # the price of the charge is missing
    assert number(rows["First cost"][3].removeprefix("≥")) == 5000.0
    assert rows["Annual saving against the plant as it is"][3] == "unknown"
    assert rows["Simple payback"][3] == "unknown"
    assert "electricity of a year" in page.text


@pytest.mark.parametrize("text", ["<b>$x_1$&</b>", "€ \u202eRUE"])
def test_a_hostile_currency_is_only_text(text, lived, pages, made_at, read_page):
    """Currencies with signs of mark-up, of formulas or of turned writing stand there as text, in charts as well."""
    result = lived(HARBOUR)
    money = result.case.money.model_copy(update={"currency": text})
    html = render_html(replace(result, case=replace(result.case, money=money)), made_at=made_at)
    charts = re.findall(r"<svg.*?</svg>", html, re.DOTALL)

    assert "\u202e" not in html.partition("<template")[0]
    assert [tag for tag, _ in read_page(html).elements] == [tag for tag, _ in read_page(pages()).elements]
    assert any(text.replace("\u202e", "\\u202e") in "".join(ET.fromstring(chart).itertext()) for chart in charts)


def test_a_year_of_bins_is_drawn_by_outdoor_temperature(lived, made_at):
    """Without months the chart goes by outdoor temperature, and months are nowhere."""
    html = render_html(lived("freezer-store"), made_at=made_at)
    charts = re.findall(r'<svg.*?id="year-energy-title".*?</svg>', html, re.DOTALL)

    assert "Outdoor temperature" in charts[-1]
    assert "June" not in charts[-1]
