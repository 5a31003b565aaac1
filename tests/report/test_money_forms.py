"""Money in every form: one sign, one quantity with its own percentiles, and no option made cheap by a missing price."""

import csv
import io
import re

import pytest

from retrofit import figures
from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.checks.outlook import costs_words, outlook
from retrofit.checks.prospects import ranked
from retrofit.report import render_html
from retrofit.report.machine_year import year_json
from retrofit.report.spreadsheet import render_spreadsheet
from retrofit.report.terminal_year import year_text
from retrofit.report.year_lines import year_csv
from retrofit.study import compare
from retrofit.study.life import with_life
from retrofit.units import SI
from tests.report.conftest import ROOT
from tests.report.test_spreadsheet import opened
from tests.report.test_spreadsheet_life import life_rows, names_of
from tests.report.test_terminal_year import rows

KEY = "money.refrigerant_price.R449A"
CASES = ("harbour-market", "office-chiller", "coast-heat-pump")


@pytest.fixture(scope="module")
def unpriced(tmp_path_factory):
    """Return the shipped case without the price of R449A, with its remaining life."""
    text = (ROOT / "cases" / "harbour-market.toml").read_text(encoding="utf-8")
    path = tmp_path_factory.mktemp("unpriced") / "market.toml"
    path.write_text(text.replace("R449A = [35, 45, 70], ", ""), encoding="utf-8")
    return with_life(assess(compare(read_case(path))), draws=40)


@pytest.fixture(scope="module")
def page(read_page, made_at):
    """Return a function that gives the page of a result, as read."""
    return lambda result: read_page(render_html(result, made_at=made_at))


def number(text):
    """Return the number of a cell without its signs."""
    return float(re.sub(r"[\s≈≥+\u202f]", "", text).replace("−", "-"))


def cells(page, group, label):
    """Return the cells of a row of the money table by the option; with many options its rows are the options."""
    if f"t-money-{group}" in page.tables:
        head, *lines = page.tables[f"t-money-{group}"]
        place = next(i for i, text in enumerate(head) if text.startswith(label))
        return [line[place] for line in lines]
    return next(row[2:] for row in page.tables["t-money"] if row[0].startswith(label))


@pytest.mark.parametrize("name", CASES)
def test_one_sign_and_one_quantity_in_every_form(name, lived, page, made_at):
    """The net present value and its percentiles are the same number with the same sign wherever they are shown."""
    result = lived(name)
    told = year_json(result)["options"]
    terminal = rows(year_text(result, SI, 200), "Life cost and net present value")
    lines = list(csv.DictReader(io.StringIO(year_csv(result))))
    book = life_rows(opened(render_spreadsheet(result, made_at=made_at)))
    found = page(result)
    shown, bands = (cells(found, "life", f"Net present value{rest}") for rest in (", ", ": P10"))

    checked = 0
    for place, option in list(enumerate(told))[1:]:
        npv = option["money"]["net_present_value_currency"]
        if npv is None:
            # By a maker's seasonal COP that counts more losses than today's year nothing is compared.
            state = option["money"]["yearly_saving_state"]
            word = "unknown" if state == "unknown" else "incomplete"
            assert shown[place].startswith(word)
            assert terminal[place][2] == word
            continue
        ends = [option["certainty"]["quantiles"]["net_present_value_currency"][key] for key in ("p10", "p50", "p90")]
        for value, text in [(npv, terminal[place][2]), *zip(ends, terminal[place][3:6], strict=True)]:
            assert number(text) == pytest.approx(value, rel=6e-4, abs=0.51)
        for value, text in [(npv, shown[place]), *zip(ends, bands[place].split(" · "), strict=True)]:
            assert number(text) == pytest.approx(value, rel=6e-4, abs=0.51)
        assert float(lines[place]["money.net_present_value_currency"]) == npv
        assert float(lines[place]["certainty.quantiles.net_present_value_currency.p50"]) == ends[1]
        key = (*names_of(option), "remaining life")
        assert book[*key, "base"]["Net present value"] == pytest.approx(npv)
        for value, which in zip(ends, ("10", "50", "90"), strict=True):
            assert book[*key, f"{which} % of draws below"]["Net present value"] == pytest.approx(value)
        # The sign says the same of it as the cost of a tonne and, after the same years, as the sum saved.
        cost = option["money"]["cost_per_tonne_CO2e_currency"]
        assert cost is None or (cost < 0.0) == (npv > 0.0)
        checked += 1
    assert checked > 0


def test_headlines_are_medians_with_their_band(lived):
    """Each option stands under what its median says, with the 10th and the 90th percentile behind it."""
    result = lived("harbour-market")
    told = {option["deed"] + option["refrigerant"]: option for option in year_json(result)["options"]}
    value, payback, residual = outlook(result, SI).money
    groups = {text.split(" ", maxsplit=2)[0]: names for text, names in value.groups}

    kept = told["kept, with its repairsR404A"]["certainty"]["quantiles"]["net_present_value_currency"]
    assert groups["saves"][0].startswith("R404A kept +")
    figures_ = [number(text) for text in re.findall(r"[+−][\d\u202f]+", groups["saves"][0])]
    assert figures_ == pytest.approx([kept["p50"], kept["p10"], kept["p90"]], rel=6e-4)
    assert "median (P10 to P90)" in value.about
    assert "probability of paying back" in payback.text
    # By hand, 190 000 over 15 years, 8 of them gone.
    assert number(residual.groups[0][1][0].removeprefix("R454C ").removesuffix("\N{NO-BREAK SPACE}EUR")) == (
        pytest.approx(190_000 * 7 / 15, rel=6e-4)
    )
    assert "R449A: first cost" in costs_words(result, SI)
    assert "Medians (P10 to P90) of 60 Monte Carlo samples" in costs_words(result, SI)


def test_a_missing_price_is_data_with_its_key(unpriced):
    """JSON: at least, incomplete, the items and the key; no saving, value, payback, probability or sum by year."""
    option = next(option for option in year_json(unpriced)["options"] if option["refrigerant"] == "R449A")
    found, sure = option["money"], option["certainty"]

    assert (found["first_cost_state"], found["yearly_cost_state"], found["life_cost_state"]) == ("at least",) * 3
    assert (found["comparison_state"], found["payback_state"]) == ("incomplete", "unknown")
    assert found["first_cost_missing"]["refrigerant"]["keys"][0] == KEY
    assert found["excluded_items"].keys() == {"refrigerant", "top_up"}
    for name in (
        "net_present_value_currency", "yearly_saving_currency", "payback_years", "cost_per_tonne_CO2e_currency",
        "cumulative_saving_by_year_currency",
    ):  # fmt: skip
        assert found[name] is None
    assert sure["cheaper_probability"] is None
    assert sure["pays_back_probability"] is None
    assert not {"net_present_value_currency", "first_cost_currency", "payback_years"} & sure["quantiles"].keys()


def test_a_missing_price_makes_nothing_cheaper_in_any_form(unpriced, page, made_at):
    """Terminal, page, sheet, chart and ranking: R449A is at least and incomplete, nowhere said to save money."""
    text, shown = year_text(unpriced, SI, 200), page(unpriced)
    place = [option["refrigerant"] for option in year_json(unpriced)["options"]].index("R449A")
    row = life_rows(opened(render_spreadsheet(unpriced, made_at=made_at)))[
        "R-449A", "converted", "remaining life", "base"
    ]
    saves = [names for matter in outlook(unpriced, SI).money for words, names in matter.groups if "saves" in words[:5]]
    order = ranked(unpriced)

    assert rows(text, "Money in")[place][1].startswith("≥")
    assert rows(text, "Life cost and net present value")[place][1].startswith("≥")
    assert rows(text, "Life cost and net present value")[place][2] == "incomplete"
    assert f"`{KEY}`" in " ".join(text.split())
    assert cells(shown, "once", "First cost")[place].startswith("≥")
    assert cells(shown, "life", "Net present value, ")[place].startswith("incomplete")
    assert KEY in shown.text
    assert row["Net present value"] is None
    assert row["Payback"] is None
    assert row["Comparison"] == "incomplete"
    assert row["Lower bounds"].startswith("first cost: at least: an item is missing, new charge")
    assert f"{KEY.removesuffix('R449A')}R-449A" in row["Why cells are empty"].replace("R449A", "R-449A")
    assert not any("R449A" in name for names in saves for name in names)
    assert "Not drawn, an item is known for only one of the two: R-449A" in figures.payback_chart(unpriced).caption
    assert "first cost" in order.scores.unknown["R449A"]
    assert "at least" in costs_words(unpriced, SI)
