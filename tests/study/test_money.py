"""Money: net present value against a library of others, payback and cost per tonne by hand, words that say it."""

from dataclasses import replace
from datetime import date

import numpy as np
import numpy_financial
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from retrofit.checks.law import law_for, shipped
from retrofit.refrigerants import find
from retrofit.study.accounts import accounts
from retrofit.study.emissions import year_ends
from retrofit.study.first_cost import first_cost
from retrofit.study.money import (
    Appraisal,
    climate_words,
    cost_per_tonne_words,
    energy_words,
    net_present_value,
    payback_words,
    payback_years,
    yearly_cost,
    yearly_saving,
)
from retrofit.study.plan import Use, plan_as_is, plan_for
from retrofit.study.result import Comparison, Entry
from retrofit.study.spread import base_only, triangular

KWH, KW = 3.6e6, 1e3
EU = (shipped()["eu-2024-573.toml"],)
TODAY = Entry(find("R404A"), "keep", "ok", None, ())
NEW = Entry(find("R448A"), "convert", "ok", None, ())
PLANT = Entry(find("R290"), "replace", "ok", None, ())
PRICES = {"currency": "EUR", "tariff": 0.2, "demand_charge": 60, "refrigerant_price": {"R404A": 40, "R448A": 30}}


@pytest.fixture(scope="module")
def priced(case_with):
    """Return a function that makes a case with prices; tables given are laid over it."""

    def make(money=(), change=(), **tables):
        whole = {
            "plant": {"charge": "260 kg"},
            "law": {"remaining_life": "8 years", "annual_leak_rate": "15 %"},
            "emissions": {"grid_factor": "0.4 kg/kWh"},
            "options": {"R448A": {"charge": "250 kg"}},
            "money": {**PRICES, **dict(money), **({"change": dict(change)} if change else {})},
        }
        return case_with(candidates=["R448A", "R290"], **{**whole, **tables})

    return make


@pytest.mark.parametrize("years", [1, 5, 12])
@pytest.mark.parametrize("rate", [0.0, 0.06, 0.2])
def test_present_value_against_a_library(years, rate):
    """For whole years the net present value is numpy-financial's, cash flows at the ends of years."""
    flows = [-18_000.0, *[4_200.0] * years]

    found = net_present_value(18_000.0, 4_200.0, year_ends(years), rate)

    assert found == pytest.approx(numpy_financial.npv(rate, flows), rel=1e-12)


def test_present_value_of_a_part_of_a_year():
    """By hand, 10 %, 2.5 years: 1000 / 1.1 + 1000 / 1.21 + 500 / 1.1^2.5 - 1500 = 629.530."""
    expected = 1000 / 1.1 + 1000 / 1.21 + 500 / 1.1**2.5 - 1500

    assert net_present_value(1500.0, 1000.0, year_ends(2.5), 0.1) == pytest.approx(expected)
    assert expected == pytest.approx(629.530, abs=1e-3)


def test_payback_of_all_kinds():
    """By definition: 9000 / 3000 = 3 years; without a saving never; without a cost at once."""
    found = payback_years([9000.0, 9000.0, 9000.0, 0.0, -500.0, -500.0], [3000.0, 0.0, -10.0, 0.0, 5.0, -5.0])

    assert found.tolist() == [3.0, np.inf, np.inf, 0.0, 0.0, np.inf]


def test_words_say_what_does_not_pay():
    """Negative, beyond the life, at once, unknown: each is said plainly."""

    def found(payback=None, per_t=None, avoided=None):
        arrays = [None if value is None else np.asarray(value) for value in (payback, None, per_t, avoided)]
        return Appraisal(*arrays, None, None, np.asarray(8.0))

    assert payback_words(found(3.04)) == "3.0 of the 8 years left"
    assert "beyond the remaining life of 8 years" in payback_words(found(8.01))
    assert "no payback" in payback_words(found(np.inf))
    assert "nothing to pay back" in payback_words(found(0.0))
    assert "unknown" in payback_words(found())
    assert cost_per_tonne_words(found(3.0, 1234.5, 10.0), "EUR") == "1,234 EUR for each tonne of CO2e avoided"
    assert "saves money too: 50 EUR" in cost_per_tonne_words(found(3.0, -50.0, 10.0), "EUR")
    assert "emits more" in cost_per_tonne_words(found(3.0, np.nan, -1.0), "EUR")
    assert "unknown" in cost_per_tonne_words(found(3.0), "EUR")


def test_a_saving_within_the_band_is_said():
    """By hand: 97 against 100 is 3 %, within 6 %; 90 is not; a plant against itself needs no word."""
    assert "3.0% of what is modelled, lies within the ±6%" in energy_words(Use(97.0), Use(100.0), 0.06)
    assert energy_words(Use(90.0), Use(100.0), 0.06) == ""
    assert energy_words(Use(100.0), Use(100.0), 0.06) == ""
    assert energy_words(Use(), Use(100.0), 0.06) == ""


def test_first_cost_item_by_item(priced):
    """By hand: recovery 900, charge 250 x 30 = 7500, credit -400, labour own 5000; 10 % of 13 400 = 1340; 14 340."""
    change = {"recovery": 900, "labour": [3000, 4000, 6000], "reclaim_credit": [300, 400, 500], "contingency": "10 %"}
    case = priced(change=change, options={"R448A": {"charge": "250 kg", "labour": 5000}})

    found = first_cost(case, plan_for(case, NEW, TODAY))
    items = {item.code: item.amount[1] for item in found.items}

    assert items == pytest.approx(
        {"recovery": 900, "refrigerant": 7500, "reclaim_credit": -400, "labour": 5000, "contingency": 1340}
    )
    # Low has the highest credit.
    assert found.total == pytest.approx([14_240, 14_340, 14_440])
    assert "Oil" in found.not_counted
    assert "New plant" not in found.not_counted
    assert found.missing == ""


def test_what_has_no_first_cost(priced):
    """Keeping costs nothing but its own items; a conversion without items and a plant without price are unknown."""
    bare = priced()
    shared = priced(change={"labour": 4000, "new_plant": 90_000})
    own = priced(options={"R404A": {"labour": 700}}, change={"labour": 4000})

    assert first_cost(bare, plan_for(bare, TODAY, TODAY)).total == 0.0
    assert first_cost(own, plan_for(own, TODAY, TODAY), base_only).total == 700.0
    assert first_cost(own, plan_as_is(own, TODAY), base_only).total == 0.0
    unknown = first_cost(bare, plan_for(bare, NEW, TODAY))
    assert unknown.total is None
    assert "R448A" in unknown.missing
    # What a new plant costs is no part of a conversion: 4000 + 250 x 30.
    assert first_cost(shared, plan_for(shared, NEW, TODAY), base_only).total == 11_500.0
    assert first_cost(shared, plan_for(shared, PLANT, TODAY), base_only).total == 94_000.0
    no_price = priced(change={"labour": 4000})
    assert first_cost(no_price, plan_for(no_price, PLANT, TODAY)).total is None


def test_a_year_part_by_part(priced):
    """By hand: 1e5 kWh x 0.2; 50 kW x 60; 260 x 15 % = 39 kg x 40; levy 39 kg x 3942.8 / 1000 x 10; 300 service."""
    case = priced(money={"levy": 10, "yearly_service": 300, "leak_check": 150})

    found = yearly_cost(case, plan_as_is(case, TODAY), Use(1e5 * KWH, 50 * KW), base_only)

    assert found.parts["energy"] == pytest.approx(20_000)
    assert found.parts["demand"] == pytest.approx(3_000)
    assert found.parts["top_up"] == pytest.approx(1_560)
    assert found.parts["levy"] == pytest.approx(39 * 3.9428 * 10)
    assert found.parts["service"] == pytest.approx(300)
    assert found.parts["leak_checks"] is None
    assert "jurisdiction" in found.missing["leak_checks"]


@pytest.mark.parametrize(("kg", "cost"), [(260.0, 600.0), (1.2, 0.0), (None, None)])
def test_leak_checks_follow_the_law(priced, kg, cost):
    """By hand: 1020 t CO2e every 3 months at 150 are 600 a year; under 5 t nothing is due; unknown is not nothing."""
    case = priced(money={"leak_check": 150}, law={"jurisdiction": "EU", "equipment": "supermarket"})
    spread = None if kg is None else (kg, kg, kg)
    law = law_for(case, TODAY.refrigerant, spread, EU, date(2027, 1, 1), read_on=date(2026, 12, 1))

    found = yearly_cost(case, replace(plan_as_is(case, TODAY), law=law), Use(), base_only)

    assert found.parts["leak_checks"] == cost


def test_a_levy_falls_on_the_new_charge_too(priced):
    """By hand: 250 kg x 1273.357 / 1000 x 10 = 3183.39 once, as an item of its own."""
    case = priced(money={"levy": 10}, change={"labour": 4000})

    items = {item.code: item.amount for item in first_cost(case, plan_for(case, NEW, TODAY), base_only).items}

    assert items["levy"] == pytest.approx(3_183.39, abs=0.01)
    assert "levy" not in {item.code for item in first_cost(case, plan_for(case, TODAY, TODAY), base_only).items}


def test_a_part_known_on_one_side_is_left_out(priced):
    """Without a price of the new refrigerant top-ups count on neither side; without energy there is no saving."""
    case = priced(money={"refrigerant_price": {"R404A": 40}})
    plans = plan_as_is(case, TODAY), plan_for(case, NEW, TODAY)
    as_is, new = (yearly_cost(case, plan, Use(1e5 * KWH), base_only) for plan in plans)
    no_energy = yearly_cost(case, plans[1], Use(), base_only)

    found = yearly_saving(new, as_is)

    assert found.total == pytest.approx(0.0)
    assert any("refrigerant for leaks" in words for words in found.not_counted)
    assert yearly_saving(no_energy, as_is).total is None


def comparison(case, *candidates):
    """Return a result of entries that are nothing but their refrigerants."""
    return Comparison(case, TODAY, candidates, None, "duty", {})


def test_the_whole_account(priced):
    """By hand, of 10 000 kWh saved by 12 000 of first cost over 8 years, and the curve crosses 0 at the payback.

    Saving: 10 000 x 0.2 = 2000; leaks 260 x 15 % x 40 - 250 x 15 % x 30 = 435; 2435 in all; 12 000 / 2435 = 4.928.
    First cost 4500 + 250 x 30 = 12 000. Net -7480 over 8 years.
    """
    case = priced(money={"discount_rate": "6 %"}, change={"labour": 4500})
    uses = {"R404A": Use(1e5 * KWH), "R448A": Use(0.9e5 * KWH)}

    found = accounts(comparison(case, NEW), uses, base_only)
    new = found.options["R448A"]
    flows = [-12_000.0, *[2_435.0] * 8]

    assert new.saving.total == pytest.approx(2_435)
    assert new.appraisal.payback_years == pytest.approx(12_000 / 2_435)
    assert new.appraisal.npv == pytest.approx(numpy_financial.npv(0.06, flows))
    avoided = float(found.as_is.tewi.total_kg - new.tewi.total_kg) / 1000
    assert new.appraisal.cost_per_t == pytest.approx((12_000 - 2_435 * 8) / avoided)
    crossing = np.interp(0.0, -new.appraisal.extra_cost, new.appraisal.years)
    assert crossing == pytest.approx(float(new.appraisal.payback_years))
    assert payback_words(new.appraisal) == "4.9 of the 8 years left"
    # 10 % less electricity and a lighter charge are no draw; the same plant needs no word.
    assert climate_words(new.tewi, found.as_is.tewi, 0.06) == ""
    assert "no meaningful difference" in climate_words(new.tewi, found.as_is.tewi, 5.0)
    assert new.appraisal.share_paid_back == 1.0
    keep = found.options["R404A"]
    assert climate_words(keep.tewi, found.as_is.tewi, 0.06) == ""
    assert keep.saving.total == 0.0
    assert keep.appraisal.avoided_t == 0.0
    assert "nothing to pay back" in payback_words(keep.appraisal)


def test_repairs_alone_are_an_option(priced):
    """Keeping the plant with its leaks repaired saves top-ups: by hand 260 kg x 10 % x 40 = 1040 a year for 2600."""
    case = priced(options={"R404A": {"leak_rate": "5 %", "labour": 2600}})

    found = accounts(comparison(case), {"R404A": Use(1e5 * KWH)}, base_only).options["R404A"]

    assert found.saving.total == pytest.approx(1_040)
    assert found.appraisal.payback_years == pytest.approx(2.5)
    assert found.appraisal.avoided_t == pytest.approx(8 * 26 * 3.9428)


def test_draws_equal_single_numbers(priced):
    """Each draw of prices, leaks and life together gives what it gives alone."""
    case = priced(money={"discount_rate": "6 %", "tariff": [0.1, 0.2, 0.4]}, change={"labour": [3000, 4500, 9000]})
    share = np.array([0.1, 0.5, 0.9, 0.99])
    lives = np.array([3.0, 8.0, 12.5, 1.5])
    uses = {"R404A": Use(1e5 * KWH * share), "R448A": Use(0.8e5 * KWH * share)}

    def pick(key, spread, at=slice(None)):
        return lives[at] if key == "law.remaining_life" else triangular(spread, share[at])

    together = accounts(comparison(case, NEW), uses, pick).options["R448A"].appraisal
    for i in range(4):
        alone_uses = {name: Use(use.electricity_J[i]) for name, use in uses.items()}
        alone = accounts(comparison(case, NEW), alone_uses, lambda key, s, i=i: pick(key, s, i)).options["R448A"]
        for name in ("payback_years", "npv", "cost_per_t"):
            assert getattr(together, name)[i] == pytest.approx(float(getattr(alone.appraisal, name)), rel=1e-12)


def test_without_money(priced):
    """A case without prices has emissions and no money."""
    case = replace(priced(), money=None)

    found = accounts(comparison(case, NEW), {"R404A": Use(1e5 * KWH), "R448A": Use(1e5 * KWH)})

    assert found.options["R448A"].appraisal is None
    assert found.options["R448A"].tewi.total_kg.shape == (3,)


def test_a_triangle():
    """Ends, peak and mean of the distribution: (1 + 2 + 6) / 3 = 3, and its middle at the base's own share."""
    spread = (1.0, 2.0, 6.0)
    shares = (np.arange(20_000) + 0.5) / 20_000

    assert triangular(spread, [0.0, 0.2, 1.0]) == pytest.approx([1.0, 2.0, 6.0])
    assert triangular(spread, shares).mean() == pytest.approx(3.0, abs=1e-4)
    assert triangular((2.0, 2.0, 2.0), shares[:3]).tolist() == [2.0, 2.0, 2.0]


@settings(max_examples=60, deadline=None, derandomize=True)
@given(
    cost=st.floats(1.0, 1e6),
    saving=st.floats(1.0, 1e5),
    more=st.floats(1.0, 1e4),
    life=st.floats(0.1, 40.0),
    rate=st.floats(0.0, 0.3),
)
def test_dearer_is_never_better(cost, saving, more, life, rate):
    """More to pay lengthens the payback and lowers the value, more saved the other way; at 0 % it is the plain sum."""
    ends = year_ends(life)

    assert payback_years(cost + more, saving) > payback_years(cost, saving) > payback_years(cost, saving + more)
    assert net_present_value(cost + more, saving, ends, rate) < net_present_value(cost, saving, ends, rate)
    assert net_present_value(cost, saving + more, ends, rate) > net_present_value(cost, saving, ends, rate)
    assert net_present_value(cost, saving, ends, 0.0) == pytest.approx(saving * life - cost, abs=1e-6 * (cost + saving))
