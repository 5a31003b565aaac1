"""Draws of uncertain inputs: their moments are those of the distributions, each stratum is hit once, seeds decide."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from retrofit.refrigerants import find
from retrofit.study import Entry
from retrofit.study.bands import error_parts, shared_errors
from retrofit.study.spread import Spread
from retrofit.study.states import Evidence
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


def a_model_error(name: str, band: float = 0.08) -> Uncertain:
    """Return the error of the COP of a refrigerant."""
    parts = tuple((f"model.cop.{part}", weight) for part, weight in error_parts(find(name)).items())
    spread = Spread(1.0 - band, 1.0, 1.0 + band)
    return Uncertain(f"model.cop.{name}", name, "ratio", spread, "model", "a test", parts=parts)


def test_the_error_of_the_model_is_normal_and_its_band_holds_ninety_per_cent():
    """Standard deviation = band / 1.645, by scipy.stats.norm; 90 % of the draws lie within the band."""
    drawn = sample([a_model_error("R448A")], 4000, 1).values["model.cop.R448A"][1:4001]

    assert drawn.mean() == pytest.approx(1.0, abs=5e-4)
    # The parts are stratified, their sum is not: a standard deviation of 4000 plain draws is known to 1.1 %.
    assert drawn.std() == pytest.approx(0.08 / stats.norm.ppf(0.95), rel=0.035)
    assert np.mean(np.abs(drawn - 1.0) <= 0.08) == pytest.approx(0.9, abs=0.015)  # 3 x sqrt(0.9 x 0.1 / 4000)
    assert a_model_error("R448A").distribution == "normal"


def test_sister_blends_err_together_in_part():
    """The correlation of draws is that of the bands, so the joint samples hold a pair band in 90 % of the draws too."""
    names = ("R448A", "R449A", "R22")
    entries = [Entry(find(name), "convert", "ok", None, (), evidence=Evidence.NEAR) for name in names]
    drawn = sample([a_model_error(name) for name in names], 4000, 1).values
    errors = [drawn[f"model.cop.{name}"][1:4001] for name in names]

    for i, j in ((0, 1), (0, 2)):
        expected = shared_errors(entries[i], entries[j])
        assert np.corrcoef(errors[i], errors[j])[0, 1] == pytest.approx(expected, abs=0.04)
        band = 0.08 * np.sqrt(2.0 * (1.0 - expected))
        assert np.mean(np.abs(errors[i] - errors[j]) <= band) == pytest.approx(0.9, abs=0.02)


def test_what_is_one_thing_in_the_plant_moves_together(rack_of, money):
    """Leak rate today and after a change, and the charge before and after: same place in their limits in every draw."""
    case = rack_of(more=money + '\n[options.R448A]\ncharge = "230 kg"\n')
    counted = {
        "law.annual_leak_rate": Spread(0.1, 0.15, 0.2),
        "emissions.leak_rate_after": Spread(0.04, 0.06, 0.09),
        "plant.charge": Spread(250.0, 260.0, 270.0),
        "options.R448A.charge": Spread(220.0, 230.0, 240.0),
        "money.tariff": Spread(0.15, 0.18, 0.24),
    }
    drawn = sample(counted_inputs(case, counted), 300, 1).values
    rank = {key: np.argsort(np.argsort(drawn[key][1:301])) for key in counted}

    assert np.array_equal(rank["law.annual_leak_rate"], rank["emissions.leak_rate_after"])
    assert np.array_equal(rank["plant.charge"], rank["options.R448A.charge"])
    assert abs(np.corrcoef(rank["plant.charge"], rank["money.tariff"])[0, 1]) < 0.2


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
