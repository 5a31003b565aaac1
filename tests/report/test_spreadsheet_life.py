"""A year and the remaining life in the spreadsheet, read back by another library and held against the JSON."""

import io
import math
import zipfile
from dataclasses import replace
from functools import cache

import pytest

from retrofit.report.machine_year import year_json
from retrofit.report.spreadsheet import render_spreadsheet
from retrofit.units import IP, SI
from tests.report.test_spreadsheet import opened, rows_of

# Heading without its unit -> where the JSON has it, and the kind or the divisor that leads from there to the sheet.
A_YEAR = {
    "Electricity": ("year.energy_J", "energy"),
    "Electricity of defrosting": ("year.defrost_J", "energy"),
    "Electricity of fans or pumps at the condenser": ("year.condenser_fans_J", "energy"),
    "Peak power": ("year.peak_W", "power"),
    "Seasonal COP": ("year.seasonal_cop", "ratio"),
    "Run time": ("year.run_time_fraction", "fraction"),
    "Unmet load": ("year.unmet_J", "energy"),
    "Unmet load, hours": ("year.unmet_h", 1.0),
    "Highest discharge temperature": ("year.T_discharge_highest_K", "temperature"),
    "Highest condensing pressure": ("year.p_cond_highest_Pa", "pressure"),
    "Electricity saved": ("against_as_is.energy_J.amount", -3.6e6),
    "Electricity saved, share": ("against_as_is.energy_J.ratio", -0.01),
    "Annual cost": ("money.yearly_cost_total_currency", 1.0),
    "Annual saving": ("money.yearly_saving_currency", 1.0),
}
LIFE = {
    "Remaining life": ("emissions.life_years", 1.0),
    "Charge": ("emissions.charge_kg.base", "mass"),
    "Leaks a year": ("emissions.leak_share_per_year.base", "fraction"),
    "Time between leak checks": ("emissions.leak_check_months", 1.0),
    "Direct": ("emissions.direct_kg", 1000.0),
    "Indirect": ("emissions.indirect_kg", 1000.0),
    "Direct and indirect": ("emissions.total_kg", 1000.0),
    "Avoided": ("against_as_is.emissions_kg.amount", -1000.0),
    "First cost": ("money.first_cost_currency.base", 1.0),
    "First cost, every item high": ("money.first_cost_currency.high", 1.0),
    "Payback": ("money.payback_years", 1.0),
    "Net present value": ("money.net_present_value_currency", 1.0),
    "Life cost": ("money.life_cost_currency", 1.0),
    "Residual value of the new plant": ("money.residual_value_currency", 1.0),
    "Cost of a tonne avoided": ("money.cost_per_tonne_CO2e_currency", 1.0),
    "Probability: carries the cooling": ("certainty.carries_probability", "fraction"),
    "Probability: costs less": ("certainty.cheaper_probability", "fraction"),
    "Probability: pays back within the remaining life": ("certainty.pays_back_probability", "fraction"),
    "Probability: warms less": ("certainty.cleaner_probability", "fraction"),
}
DRAWN = {
    "a year": {
        "Electricity": ("energy_J", "energy"),
        "Electricity saved": ("energy_saving_J", "energy"),
        "Annual cost": ("yearly_cost_currency", 1.0),
        "Annual saving": ("yearly_saving_currency", 1.0),
    },
    "remaining life": {
        "Direct": ("direct_kg", 1000.0),
        "Direct and indirect": ("tewi_kg", 1000.0),
        "Avoided": ("avoided_kg", 1000.0),
        "First cost": ("first_cost_currency", 1.0),
        "Payback": ("payback_years", 1.0),
        "Net present value": ("net_present_value_currency", 1.0),
        "Life cost": ("life_cost_currency", 1.0),
        "Cost of a tonne avoided": ("cost_per_tonne_CO2e_currency", 1.0),
    },
}
VALUES = {"10 % of draws below": "p10", "50 % of draws below": "p50", "90 % of draws below": "p90"}
# Those that the plant as it is has only against itself, so that its cells are empty.
AGAINST = {
    "Electricity saved", "Electricity saved, share", "Annual saving", "Avoided", "Payback", "Net present value",
    "Cost of a tonne avoided", "Probability: costs less", "Probability: pays back within the remaining life",
    "Probability: warms less",
}  # fmt: skip
CASES = ("harbour-market", "freezer-store", "coast-heat-pump")


def bare(row):
    """Return a row by its headings without their units."""
    return {heading.partition(" (")[0]: content for heading, content in row.items()}


def life_rows(book):
    """Return the rows of a year and the remaining life, by refrigerant, what is done, basis and value."""
    rows = [bare(row) for row in rows_of(book, "Results") if row["Basis"] in DRAWN]
    return {(row["Refrigerant"], row["What is done"], row["Basis"], row["Value"]): row for row in rows}


def within(option, path):
    """Return what stands in an option of the JSON at a path; None where the way ends before."""
    for part in path.split("."):
        option = None if option is None else option.get(part)
    return option


def shown(value, how, units):
    """Return a number of the JSON as the sheet has it."""
    return float(units.number(how, value)) if isinstance(how, str) else value / how


def names_of(option):
    return f"R-{option['refrigerant'][1:]}", option["deed"]


@pytest.fixture(scope="module")
def book(lived, made_at):
    """Return a function that gives the spreadsheet of a case with its remaining life."""
    return cache(lambda name, units="si": opened(render_spreadsheet(lived(name), units, made_at=made_at)))


@pytest.mark.parametrize("units", [SI, IP], ids=["si", "ip"])
@pytest.mark.parametrize("name", CASES)
def test_base_values_are_those_of_the_json(name, units, book, lived):
    """Each number of a year and the remaining life; what the JSON does not know is an empty cell with its reason."""
    rows, told = life_rows(book(name, units.name)), year_json(lived(name))
    full = empty = 0
    for option in told["options"]:
        for basis, numbers in (("a year", A_YEAR), ("remaining life", LIFE)):
            row = rows[*names_of(option), basis, "base"]
            for heading, (path, how) in numbers.items():
                value = within(option, path)
                is_itself = option["deed"] == "as it is" and heading in AGAINST
                by_maker = heading.startswith("Electricity of") and within(option, "year.by_air") is None
                if value is None or is_itself or by_maker:
                    assert row[heading] is None, heading
                    assert heading in row["Why cells are empty"]
                    empty += 1
                else:
                    assert row[heading] == pytest.approx(shown(value, how, units), rel=1e-9, abs=1e-9), heading
                    full += 1

    assert full > 10 * len(told["options"])
    assert empty >= len(AGAINST)


@pytest.mark.parametrize("name", CASES)
def test_values_of_the_draws_are_those_of_the_json(name, book, lived):
    """10, 50 and 90 per cent; one without end is empty, and the reason says that there is no payback."""
    rows, endless = life_rows(book(name)), 0
    for option in year_json(lived(name))["options"]:
        known = within(option, "certainty.quantiles") or {}
        for basis, numbers in DRAWN.items() if known else ():
            for value, key in VALUES.items():
                row = rows[*names_of(option), basis, value]
                for heading, (result, how) in numbers.items():
                    found = known.get(result, {}).get(key)
                    if found is None or (option["deed"] == "as it is" and heading in AGAINST):
                        assert row[heading] is None
                        assert heading in row["Why cells are empty"]
                        if known.get(result, {}).get(f"{key}_state") == "never" and option["deed"] != "as it is":
                            assert f"{heading}: never pays back" in row["Why cells are empty"]
                            endless += 1
                    else:
                        assert row[heading] == pytest.approx(shown(found, how, SI), rel=1e-9, abs=1e-9)

    assert endless > 0


@pytest.mark.parametrize(
    ("basis", "numbers"),
    [
        (
            "same plant, at full",
            {"Cooling": ("cooling_W", "cooling"), "Compressor power": ("power_W", "power"),
             "Condensing pressure": ("p_cond_Pa", "pressure"),
             "Discharge temperature": ("T_discharge_K", "temperature"),
             "Cooling, ratio to today": ("capacity_ratio", "ratio")},
        ),
        ("same plant, at today's cooling", {"COP": ("cop", "ratio"), "COP, ratio to today": ("cop_ratio", "ratio")}),
    ],
)  # fmt: skip
def test_draws_at_the_design_point_stand_beside_its_base(basis, numbers, book, lived):
    """What 10, 50 and 90 per cent of the draws stay below, for each refrigerant once.

    A new plant, the last option, is not drawn on the existing machine: one row without numbers, with its reason.
    """
    rows = [bare(row) for row in rows_of(book("harbour-market"), "Results") if row["Basis"] == basis]
    drawn = {(row["Refrigerant"], row["Value"]): row for row in rows if row["Value"] in VALUES}
    told = [o for o in year_json(lived("harbour-market"))["options"] if o["deed"] != "kept, with its repairs"]

    *there, new_plant = told
    (empty,) = [row for row in rows if row["Refrigerant"] == names_of(new_plant)[0]]
    assert names_of(new_plant) == ("R-454C", "new plant")
    assert not {name for name, _ in numbers.values()} & set(new_plant["certainty"]["quantiles"])
    assert [empty[heading] for heading in numbers] == [None] * len(numbers)
    assert "a new plant is sized for the duty" in empty["Why cells are empty"]
    assert len(rows) == len(there) * (1 + len(VALUES)) + 1
    for option in there:
        for value, key in VALUES.items():
            for heading, (name, kind) in numbers.items():
                found = option["certainty"]["quantiles"][name][key]
                assert drawn[names_of(option)[0], value][heading] == pytest.approx(shown(found, kind, SI), rel=1e-9)


def test_a_payback_that_never_comes_is_empty_and_said(book, lived):
    """In the freezer store a year with R-452A costs more than with the plant as it is."""
    row = life_rows(book("freezer-store"))["R-452A", "converted", "remaining life", "base"]
    account = lived("freezer-store").life.accounts.options["R452A"]

    assert math.isinf(account.appraisal.payback_years)
    assert row["Payback"] is None
    assert "Payback: never pays back: no annual saving" in row["Why cells are empty"]
    assert row["Payback in words"] == "never pays back: no annual saving"
    assert row["Comparison"] == "complete"
    without_end = {"inf", "nan", float("inf")}
    assert not any(cell.value in without_end for sheet in book("freezer-store") for line in sheet for cell in line)


def test_units_stand_in_the_headings(book):
    """Energy, warming and money, the last in the currency of the case."""
    headings = {cell.value for cell in book("harbour-market")["Results"][1]}

    assert headings >= {
        "Electricity (kWh)", "Peak power (kW)", "Unmet load, hours (h)", "Direct (t CO2e)", "Charge (kg)",
        "Leaks a year (%)", "First cost (EUR)", "Annual saving (EUR/year)", "Payback (years)",
        "Cost of a tonne avoided (EUR/t CO2e)", "Probability: costs less (%)",
    }  # fmt: skip


def test_months_and_outdoor_temperatures_add_up_to_the_year(book, lived):
    """Sorted either way they hold the electricity of the whole year, and all its hours."""
    rows = [bare(row) for row in rows_of(book("harbour-market"), "Year")]
    years = lived("harbour-market").life.years

    assert {row["Refrigerant"] for row in rows} == {f"R-{name[1:]}" for name in years}
    for name, year in years.items():
        own = [row for row in rows if row["Refrigerant"] == f"R-{name[1:]}"]
        for kind in ("month", "outdoor temperature"):
            energy_kWh = sum(row["Electricity"] for row in own if row["Sorted by"] == kind)
            assert energy_kWh == pytest.approx(year.energy_J / 3.6e6, rel=1e-6)
        assert sum(row["Hours"] or 0.0 for row in own) == pytest.approx(8760.0)
        assert [row["Month"] for row in own if row["Sorted by"] == "month"] == list(range(1, 13))


def test_inputs_carry_their_limits(book, lived):
    """Low and high of everything that may be off, in the unit beside it; one that is off as a whole stands apart."""
    rows = rows_of(book("harbour-market"), "Inputs")
    keyed = {row["Key"]: row for row in rows}
    told = {item["key"]: item for item in year_json(lived("harbour-market"))["inputs"]}

    assert len(keyed) == len(rows)
    for key, item in told.items():
        row = keyed.get(f"{key}, as a whole") or keyed[key]
        ends = (item["low"], item["base"], item["high"])
        if item["kind"] != "currency":
            ends = [float(SI.number(item["kind"], value)) for value in ends]
        elif item["low"] < 0.0:  # what is taken off the first cost counts below 0 there
            ends = [-value for value in reversed(ends)]
        assert (row["Low"], row["Number"], row["High"]) == pytest.approx(tuple(ends)), key
        assert row["Distribution"] == item["distribution"]
        assert (
            row["Origin of the limits"]
            == {"case": "the case", "assumed": "assumed", "model": "the model"}[item["origin"]]
        )
    assert keyed["money.tariff"]["Unit"] == "EUR/kWh"
    assert keyed["emissions.grid_factor"]["Why cells are empty"].startswith("low and high: no plus or minus")
    assert all(row["Number"] is not None or row["Why cells are empty"] for row in rows)


def test_the_first_sheet_names_draws_seed_and_what_is_left_out(book, lived):
    """With the answer of the remaining life and what a difference counts against."""
    rows = [row for row in rows_of(book("harbour-market"), "Read me") if row["Topic"] == "Remaining life"]
    about = {}
    for row in rows:
        about.setdefault(row["About"], []).append(row["Text"])

    assert (about["Draws"], about["Seed"]) == (["60"], ["1"])
    assert about["Left out, as in every TEWI"] == list(lived("harbour-market").life.accounts.as_is.tewi.left_out)
    assert not any("Stopped: " in text for text in about["Answer"])  # none of its options is
    assert "against the plant as it is" in about["Differences"][0]


def test_the_first_sheet_names_what_a_check_stops_and_what_is_not_computed(book, lived):
    """Each option of the freezer store that a check stops stands there with the first check that does."""
    rows = [row for row in rows_of(book("freezer-store"), "Read me") if row["Topic"] == "Remaining life"]
    (told,) = [row["Text"] for row in rows if "Stopped: " in str(row["Text"])]
    stopped = [entry for entry in lived("freezer-store").candidates if entry.stops]

    assert [entry.refrigerant.designation for entry in stopped] == ["R452A", "R448A", "R407A", "R407F", "R454C", "R744"]
    for entry in stopped:
        names, _, reason = told.partition(entry.refrigerant.display_name)[2].partition(" (")
        assert reason.startswith(f"{entry.stops[0].title})"), names
    assert "R-744 is not computed, and so not priced or ranked." in told


def test_a_currency_is_no_formula_and_the_bytes_stay(lived, made_at):
    """A currency that looks like one stands in headings as text; the same result gives the same file."""
    plain = lived("harbour-market")
    case = replace(plain.case, money=plain.case.money.model_copy(update={"currency": "=1+1"}))
    first, second = (render_spreadsheet(replace(plain, case=case), made_at=made_at) for _ in range(2))
    headings = {cell.value for cell in opened(first)["Results"][1]}

    assert first == second
    assert {"First cost (=1+1)", "Annual saving (=1+1/year)"} <= headings
    assert {row["Unit"] for row in rows_of(opened(first), "Inputs")} >= {"=1+1", "=1+1/kWh"}
    with zipfile.ZipFile(io.BytesIO(first)) as parts:
        sheets = [name for name in parts.namelist() if name.startswith("xl/worksheets/")]
        assert sheets
        assert not any(b"<f>" in parts.read(name) for name in sheets)


def test_without_the_remaining_life_there_are_no_such_rows(assessed, made_at):
    """A result without it has neither rows nor columns of a year, nor the sheet of it."""
    bare_book = opened(render_spreadsheet(assessed("harbour-market"), made_at=made_at))

    assert "Year" not in bare_book.sheetnames
    assert not life_rows(bare_book)
    assert not any("CO2e" in cell.value for cell in bare_book["Results"][1])
