"""Money: net present value against a library of others, residual value, payback and cost per tonne by hand."""

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
    AbatementState,
    PaybackState,
    abatement_of,
    annuity_years,
    net_present_value,
    payback_of,
    payback_years,
    straight_line_residual,
    yearly_cost,
    yearly_saving,
)
from retrofit.study.plan import Use, plan_as_is, plan_for
from retrofit.study.result import Comparison, Entry
from retrofit.study.spread import base_only, triangular
from retrofit.study.sums import ComparisonState, Missing, SumState

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


@pytest.mark.parametrize(
    ("years", "life", "state"),
    [
        (None, 8.0, "unknown"), (3.0, None, "unknown"), (np.inf, 8.0, "never"), (np.inf, None, "never"),
        (0.0, 8.0, "none needed"), (0.0, None, "none needed"), (8.0, 8.0, "within"), (8.01, 8.0, "beyond"),
    ],
)  # fmt: skip
def test_a_payback_is_one_of_five_states(years, life, state):
    """By definition: without a saving never; at once none needed; up to the life within; later beyond; else unknown."""
    found = payback_of(years, life)

    assert found.state is PaybackState(state)
    assert found.years == (years if years and np.isfinite(years) else None)


@pytest.mark.parametrize(("rate", "expected"), [(0.0, 8.0), (0.06, 6.209794), (0.10, 5.334926)])
def test_an_annuity(rate, expected):
    """The present worth of 1 a year for 8 years, (1 - (1 + i)^-n) / i: 6.2098 at 6 %, 5.3349 at 10 %.

    Tables of uniform-series present worth in any text of engineering economy (from memory), and the formula by hand.
    """
    closed = 8.0 if rate == 0.0 else (1.0 - (1.0 + rate) ** -8) / rate

    assert annuity_years(year_ends(8.0), rate) == pytest.approx(closed, rel=1e-12)
    assert closed == pytest.approx(expected, abs=1e-6)


def test_an_internal_rate_of_return_brings_the_value_to_nothing():
    """At the internal rate of return that numpy-financial finds for the same flows the present value is 0."""
    flows = [-18_000.0, *[4_200.0] * 7]
    rate = numpy_financial.irr(flows)

    assert rate > 0.0
    assert net_present_value(18_000.0, 4_200.0, year_ends(7.0), rate) == pytest.approx(0.0, abs=1e-6)


def test_a_straight_line():
    """By hand: 90 000 over 15 years is 6 000 a year; 42 000 after 8, nothing after 15 and never below."""
    found = straight_line_residual(90_000.0, [0.0, 8.0, 15.0, 20.0], 15.0)

    assert found.tolist() == pytest.approx([90_000.0, 42_000.0, 0.0, 0.0])


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
    assert "oil" in found.not_counted
    assert "new_plant" not in found.not_counted
    assert found.missing == ()
    assert found.state is SumState.COMPLETE


def test_what_has_no_first_cost(priced):
    """Keeping costs nothing but its own items; a conversion without work and a plant without price are at least."""
    bare = priced()
    shared = priced(change={"labour": 4000, "new_plant": 90_000})
    own = priced(options={"R404A": {"labour": 700}}, change={"labour": 4000})

    assert first_cost(bare, plan_for(bare, TODAY, TODAY)).total == 0.0
    assert first_cost(own, plan_for(own, TODAY, TODAY), base_only).total == 700.0
    assert first_cost(own, plan_as_is(own, TODAY), base_only).total == 0.0
    unknown = first_cost(bare, plan_for(bare, NEW, TODAY), base_only)
    assert unknown.total is None
    assert unknown.at_least == 7_500.0  # the charge alone, 250 x 30
    assert unknown.missing == (Missing("work", ("money.change.labour", "options.R448A.labour")),)
    # What a new plant costs is no part of a conversion: 4000 + 250 x 30.
    assert first_cost(shared, plan_for(shared, NEW, TODAY), base_only).total == 11_500.0
    plant = first_cost(shared, plan_for(shared, PLANT, TODAY), base_only)
    assert plant.at_least == 94_000.0
    assert plant.missing == (Missing("refrigerant", ("money.refrigerant_price.R290", "options.R290.refrigerant")),)
    no_price = priced(change={"labour": 4000}, options={"R290": {"refrigerant": 0}})
    missing = first_cost(no_price, plan_for(no_price, PLANT, TODAY)).missing
    assert missing == (Missing("new_plant", ("options.R290.new_plant",)),)


def test_an_item_of_one_option_alone_makes_the_other_at_least(priced):
    """Safety works given for the new plant only: the conversion's sum is at least, and complete with a 0 for it."""
    own = {"R290": {"new_plant": 90_000, "safety_works": 5_000, "refrigerant": 0}, "R448A": {"charge": "250 kg"}}
    short = priced(change={"labour": 4000}, options=own)
    whole = priced(change={"labour": 4000, "safety_works": 0}, options=own)

    found = first_cost(short, plan_for(short, NEW, TODAY), base_only)

    assert found.state is SumState.AT_LEAST
    assert found.at_least == 11_500.0
    assert found.missing == (Missing("safety_works", ("money.change.safety_works", "options.R448A.safety_works")),)
    assert first_cost(whole, plan_for(whole, NEW, TODAY), base_only).total == 11_500.0
    assert first_cost(short, plan_for(short, PLANT, TODAY), base_only).total == 99_000.0


def test_repaired_leaks_without_a_cost_are_at_least(priced):
    """A lower leak rate with today's refrigerant takes a repair: without any item of it the first cost is not 0."""
    case = priced(options={"R404A": {"leak_rate": "5 %"}})

    found = first_cost(case, plan_for(case, TODAY, TODAY), base_only)

    assert found.total is None
    assert [item.code for item in found.missing] == ["repairs"]


def test_a_new_plant_that_does_not_last_is_bought_twice(priced):
    """A life of 6 years within 8 that remain: its replacement is missing, so its cost is at least."""
    own = {"R290": {"new_plant": 90_000, "refrigerant": 0, "plant_life": "6 years"}}
    case = priced(options=own)

    assert [item.code for item in first_cost(case, plan_for(case, PLANT, TODAY)).missing] == ["replacement"]


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
    assert found.missing["leak_checks"].keys == ("law.jurisdiction",)
    assert found.sum.state is SumState.AT_LEAST


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


def test_a_part_known_for_one_option_alone_is_left_out(priced):
    """Without a price of the new refrigerant top-ups count for neither; without energy there is no saving."""
    case = priced(money={"refrigerant_price": {"R404A": 40}})
    plans = plan_as_is(case, TODAY), plan_for(case, NEW, TODAY)
    as_is, new = (yearly_cost(case, plan, Use(1e5 * KWH), base_only) for plan in plans)
    no_energy = yearly_cost(case, plans[1], Use(), base_only)

    found = yearly_saving(new, as_is)

    assert found.state is ComparisonState.INCOMPLETE
    assert found.of_known == pytest.approx(0.0)
    assert found.total is None
    assert found.excluded == (Missing("top_up", ("money.refrigerant_price.R448A",)),)
    assert yearly_saving(no_energy, as_is).state is ComparisonState.UNKNOWN


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
    # Discounted, so that it is below 0 exactly where the net present value is above: -NPV / avoided.
    assert new.appraisal.cost_per_t == pytest.approx(-numpy_financial.npv(0.06, flows) / avoided)
    assert abatement_of(new.appraisal) is AbatementState.SAVES
    crossing = np.interp(0.0, new.appraisal.saved, new.appraisal.years)
    assert crossing == pytest.approx(float(new.appraisal.payback_years))
    assert new.appraisal.saved[[0, -1]] == pytest.approx([-12_000, 8 * 2_435 - 12_000])
    # Life cost: 100 000 kWh x 0.2 and 39 kg x 40 a year as it is; the difference of both is the net present value.
    annuity = (1.0 - 1.06**-8) / 0.06
    costs = found.as_is.appraisal.life_cost.total, new.appraisal.life_cost.total
    assert costs[0] == pytest.approx((20_000 + 1_560) * annuity)
    assert costs[0] - costs[1] == pytest.approx(float(new.appraisal.npv))
    keep = found.options["R404A"]
    assert keep.saving.total == 0.0
    assert keep.appraisal.npv == 0.0
    assert keep.appraisal.avoided_t == 0.0
    assert abatement_of(keep.appraisal) is AbatementState.NONE_AVOIDED
    assert keep.appraisal.payback_years == 0.0


def test_a_new_plant_keeps_a_residual_value(priced):
    """By hand: 90 000 over 15 years leaves 90 000 x 7 / 15 = 42 000 after 8; at 6 % it is worth 26 351.3 today.

    The flows of numpy-financial are the same: first cost, seven savings, and the last one with the residual value.
    """
    own = {"R290": {"new_plant": 90_000, "refrigerant": 0, "charge": "20 kg", "leak_rate": "0 %"}}
    prices = {"discount_rate": "6 %", "refrigerant_price": {"R404A": 40, "R290": 30}}
    uses = {"R404A": Use(1e5 * KWH), "R290": Use(0.5e5 * KWH)}
    case = priced(money=prices, options=own)
    given = priced(money=prices, options={"R290": {**own["R290"], "residual_value": 10_000}})
    lasting = priced(money={**prices, "new_plant_life": "20 years"}, options=own)

    found = accounts(comparison(case, PLANT), uses, base_only).options["R290"].appraisal
    saving = 0.5e5 * 0.2 + 39 * 40

    assert found.residual == pytest.approx(42_000.0)
    assert 42_000 / 1.06**8 == pytest.approx(26_351.3, abs=0.1)
    flows = [-90_000.0, *[saving] * 7, saving + 42_000.0]
    assert found.npv == pytest.approx(numpy_financial.npv(0.06, flows))
    other = accounts(comparison(given, PLANT), uses, base_only).options["R290"].appraisal
    assert other.residual == 10_000.0
    assert found.npv - other.npv == pytest.approx(32_000 / 1.06**8)
    assert accounts(comparison(lasting, PLANT), uses, base_only).options["R290"].appraisal.residual == pytest.approx(
        90_000 * 12 / 20
    )
    # Payback leaves it out: 90 000 over the saving.
    assert found.payback_years == pytest.approx(90_000 / saving)


def test_without_a_rate_nothing_is_discounted(priced):
    """The default of 0 % gives the plain sum."""
    case = priced(change={"labour": 4500})

    found = accounts(comparison(case, NEW), {"R404A": Use(1e5 * KWH), "R448A": Use(0.9e5 * KWH)}, base_only)

    assert found.options["R448A"].appraisal.npv == pytest.approx(8 * 2_435 - 12_000)


@pytest.mark.parametrize("missing", ["R448A", "R404A"])
def test_a_missing_price_makes_nothing_cheaper(priced, missing):
    """The price of one gas is known for one of two options: no saving, value, payback or cost per tonne is said."""
    prices = {name: price for name, price in PRICES["refrigerant_price"].items() if name != missing}
    uses = {"R404A": Use(1e5 * KWH), "R448A": Use(0.9e5 * KWH)}
    whole = accounts(comparison(priced(change={"labour": 4500}), NEW), uses, base_only).options["R448A"]
    case = priced(money={"refrigerant_price": prices}, change={"labour": 4500})

    found = accounts(comparison(case, NEW), uses, base_only)
    new, as_is = found.options["R448A"], found.as_is

    assert new.appraisal.state is ComparisonState.INCOMPLETE
    assert (new.appraisal.npv, new.appraisal.payback_years, new.saving.total, new.appraisal.saved) == (None,) * 4
    assert new.appraisal.cost_per_t is None
    assert f"money.refrigerant_price.{missing}" in {key for item in new.appraisal.excluded for key in item.keys}
    # By hand, of energy alone and what is paid once: 8 x 2000 - 12 000, without the charge - 4500.
    assert new.appraisal.npv_of_known == pytest.approx(16_000 - (4_500 if missing == "R448A" else 12_000))
    short, other = (new, as_is) if missing == "R448A" else (as_is, new)
    assert short.appraisal.life_cost.state is SumState.AT_LEAST
    assert other.appraisal.life_cost.state is SumState.COMPLETE
    assert new.appraisal.life_cost.known <= whole.appraisal.life_cost.known


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


ITEM = st.one_of(st.none(), st.floats(0.0, 1e5))
FIRST, YEARLY = ("recovery", "oil", "labour", "safety_works"), ("leak_check", "yearly_service", "demand_charge")


@settings(max_examples=60, deadline=None, derandomize=True)
@given(
    shared=st.fixed_dictionaries({name: ITEM for name in FIRST}),
    own=st.fixed_dictionaries({name: ITEM for name in FIRST}),
    rival=st.fixed_dictionaries({name: ITEM for name in FIRST}),
    yearly=st.fixed_dictionaries({name: ITEM for name in YEARLY}),
    prices=st.fixed_dictionaries({name: ITEM for name in ("R404A", "R448A", "R290")}),
    added=st.sampled_from(FIRST),
    more=st.floats(1.0, 1e5),
)
def test_no_cost_and_no_gap_makes_an_option_look_cheaper(priced, shared, own, rival, yearly, prices, added, more):
    """Adding a cost never raises the value of an option; taking a known price away leaves no value, or a lower bound.

    Whatever is said after a price was taken away is said of no more than was known before it.
    """
    uses = {"R404A": Use(1e5 * KWH, 50 * KW), "R448A": Use(0.9e5 * KWH, 45 * KW), "R290": Use(0.6e5 * KWH)}

    def given(table):
        return {key: value for key, value in table.items() if value is not None}

    def appraised(own, prices):
        case = priced(
            money={**given(yearly), "refrigerant_price": given(prices), "discount_rate": "6 %"},
            change=given(shared),
            options={
                "R448A": {"charge": "250 kg", **given(own)},
                "R290": {"new_plant": 90_000.0, "charge": "20 kg", **given(rival)},
            },
        )
        return accounts(comparison(case, NEW, PLANT), uses, base_only)

    before = appraised(own, prices).options["R448A"].appraisal
    base = own[added] if own[added] is not None else shared[added]
    dearer = appraised({**own, added: (base or 0.0) + more}, prices).options["R448A"].appraisal
    without = appraised(own, {**prices, "R448A": None}).options["R448A"].appraisal

    def least(found):
        return 0.0 if found.life_cost.known is None else float(found.life_cost.known)

    assert least(dearer) >= least(before)
    if before.npv is not None and dearer.npv is not None:
        assert dearer.npv < before.npv + 1e-6
        assert dearer.payback_years >= before.payback_years
    assert without.npv is None
    assert without.payback_years is None
    assert without.life_cost.total is None
    assert least(without) <= least(before) + 1e-6
