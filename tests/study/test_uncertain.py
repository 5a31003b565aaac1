"""Draws of uncertain inputs: their moments are those of the distributions, each stratum is hit once, seeds decide."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from retrofit.study.spread import Spread
from retrofit.study.uncertain import Uncertain, counted_inputs, physical_inputs, sample, stratified

LIMITS = Spread(2.0, 3.0, 7.0)


def an_input(key: str = "duty.evaporating", *, is_triangular: bool = False) -> Uncertain:
    """Return an input with lopsided limits."""
    return Uncertain(key, "An input", "", LIMITS, "case", "a test", is_triangular)


def test_moments_of_a_rectangular_input():
    """Mean (a + b) / 2 and variance (b - a)^2 / 12: JCGM 100:2008, 4.3.7.

    Stratified draws miss them by far less than the 1 / sqrt(n) of plain draws: 1e-3 is a few strata's width.
    """
    drawn = sample([an_input()], 2000, 1).values["duty.evaporating"][1:2001]

    assert drawn.mean() == pytest.approx(4.5, rel=1e-3)
    assert drawn.var() == pytest.approx(25.0 / 12.0, rel=1e-3)
    assert (drawn.min(), drawn.max()) == pytest.approx((2.0, 7.0), abs=0.01)


def test_a_triangular_input_has_the_distribution_of_a_statistics_library():
    """Values at given shares, mean and variance are those of scipy.stats.triang."""
    reference = stats.triang(c=0.2, loc=2.0, scale=5.0)
    shares = np.linspace(0.001, 0.999, 200)
    drawn = sample([an_input(is_triangular=True)], 2000, 1).values["duty.evaporating"][1:2001]

    assert an_input(is_triangular=True).at(shares) == pytest.approx(reference.ppf(shares), rel=1e-9)
    assert drawn.mean() == pytest.approx(reference.mean(), rel=1e-3)
    assert drawn.var() == pytest.approx(reference.var(), rel=5e-3)


def test_each_stratum_is_hit_once():
    """The property that makes a Latin hypercube: of n equal parts each holds one of n draws."""
    shares = stratified(500, 7, "duty.condensing")

    assert sorted(np.floor(shares * 500)) == list(range(500))


def test_seed_and_key_alone_decide():
    """The same seed gives the same draws, another one others; further inputs change nothing of an input's draws."""
    alone = sample([an_input()], 100, 3).values["duty.evaporating"][1:101]
    beside = sample([an_input("duty.condensing"), an_input()], 100, 3).values
    other = sample([an_input()], 100, 4).values["duty.evaporating"][1:101]

    assert np.array_equal(alone, beside["duty.evaporating"][1:101])
    assert not np.array_equal(alone, other)
    assert abs(np.corrcoef(beside["duty.evaporating"][1:101], beside["duty.condensing"][1:101])[0, 1]) < 0.3


def test_rows_hold_base_draws_and_limits():
    """Row 0 is the base; behind the draws each input stands at its limits while the others keep their base."""
    rows = sample([an_input("a.b"), an_input("c.d")], 10, 1)
    low, high = rows.limits(1)

    assert rows.rows == 1 + 10 + 4
    assert (rows.values["a.b"][0], rows.values["c.d"][0]) == (3.0, 3.0)
    assert (rows.values["c.d"][low], rows.values["c.d"][high]) == (2.0, 7.0)
    assert (rows.values["a.b"][low], rows.values["a.b"][high]) == (3.0, 3.0)
    assert list(rows.pick("e.f", Spread(1.0, 2.0, 3.0))) == [2.0] * rows.rows


def test_the_case_goes_before_what_is_usual(rack_of, usual_year):
    """A plus or minus of the case is taken as it is; other inputs take what is usual, and say so."""
    case = rack_of(usual_year, '[plus_minus]\nduty.evaporating = "0.5 K"\n')
    found = {item.key: item for item in physical_inputs(case)}

    assert found["duty.evaporating"].spread == pytest.approx((264.65, 265.15, 265.65))
    assert found["duty.evaporating"].origin == "case"
    assert found["duty.condensing"].origin == "assumed"
    assert "our own" in found["duty.condensing"].why
    assert "compressor.swept_volume" not in found  # a nameplate, and no plus or minus given


def test_nothing_goes_below_zero_or_above_one(rack_of, usual_year):
    """A subcooling of 0.5 K plus or minus 1 K begins at 0; an efficiency of 98 % plus or minus 5 points ends at 1."""
    case = rack_of()
    changed = case.compressor.model_copy(update={"volumetric_efficiency": 0.98})
    duty = case.duty.model_copy(update={"subcooling_K": 0.5})
    object.__setattr__(case, "compressor", changed)
    object.__setattr__(case, "duty", duty)
    found = {item.key: item for item in physical_inputs(case)}

    assert found["duty.subcooling"].spread == pytest.approx((0.0, 0.5, 1.5))
    assert found["compressor.volumetric_efficiency"].spread == pytest.approx((0.93, 0.98, 1.0))


def test_sums_with_low_base_and_high_are_triangular(rack_of, usual_year, money):
    """A range of the case is its own spread; a single price has the usual one or none."""
    counted = {"money.tariff": Spread(0.15, 0.18, 0.24), "money.change.labour": Spread(6000.0, 6000.0, 6000.0)}
    found = {item.key: item for item in counted_inputs(rack_of(usual_year, money), counted)}

    assert found["money.tariff"].is_triangular
    assert found["money.tariff"].spread == (0.15, 0.18, 0.24)
    assert "money.change.labour" not in found
