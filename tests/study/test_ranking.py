"""Ranking: gates before weights, the unknown never good, ties within the band, and first places that add up."""

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.refrigerants import find
from retrofit.study import compare
from retrofit.study.accounts import accounts
from retrofit.study.criteria import CRITERIA, Criterion, criteria
from retrofit.study.plan import Use
from retrofit.study.ranking import Scores, Stability, flip, order, rank_stability, score, stability_words
from retrofit.study.result import Comparison, Entry, Finding
from retrofit.study.spread import base_only

CASES = Path(__file__).parents[2] / "cases"
NAMES = ("R404A", "R448A", "R449A", "R454C")


def result(case, **levels):
    """Return a result of four options; a keyword gives an option a finding of that level."""
    entries = []
    for name in NAMES:
        findings = (Finding("x", levels[name], "A gate", "", "", ""),) if name in levels else ()
        family = "keep" if name == NAMES[0] else "convert"
        entries.append(Entry(find(name), family, "ok", None, (), findings=findings))
    return Comparison(case, entries[0], tuple(entries[1:]), None, "duty", {})


def no_band(a, b):
    """Return a band of nothing."""
    return 0.0


def six_per_cent(a, b):
    """Return a band of 6 % between any two."""
    return 0.06


def measured(name="energy", values=(100.0, 90.0, 95.0, 80.0), modelled=True):
    """Return a criterion of the four options."""
    known = dict(zip(NAMES, values, strict=True))
    return Criterion(name, name, "", known, {option: (value or 0.0) * modelled for option, value in known.items()})


@pytest.fixture(scope="module")
def plain(case_with):
    """Return a case without anything that a ranking would read."""
    return case_with()


def test_a_gate_is_no_weight(plain):
    """An option with a stop is not ranked however good its numbers, and its gate is named; work is no gate."""
    found = score(result(plain, R454C="stop", R448A="work"), [measured()], no_band)

    assert found.names == ("R404A", "R448A", "R449A")
    assert found.not_ranked == {"R454C": "A gate"}
    # The best of the ranked is 1: by hand 100, 90, 95 give 0, 1 and a half.
    assert found.scores[:, 0] == pytest.approx([0.0, 1.0, 0.5])


def test_what_is_not_computed_is_not_ranked(plain):
    """An option without numbers is named with its reason."""
    whole = result(plain)
    broken = replace(whole.candidates[0], status="not computed", reason="no model")

    found = score(replace(whole, candidates=(broken, *whole.candidates[1:])), [measured()], no_band)

    assert found.not_ranked == {"R448A": "not computed: no model"}


def test_unknown_is_the_worst_and_said(plain):
    """What is not known scores 0 and is marked; what no option is known by does not count at all."""
    nobody = measured("climate", (None,) * 4)
    found = score(result(plain), [measured(values=(100.0, None, 95.0, 80.0)), nobody], no_band)

    assert found.scores[:, 0] == pytest.approx([0.0, 0.0, 0.25, 1.0])
    assert found.unknown == {"R448A": ("energy",)}
    assert found.left_out == ("climate",)


def test_closer_than_the_band_is_a_tie(plain):
    """By hand, band 6 %: 100 against 95 (5.85) ties, against 90 not; with energy alone 95 and 90 tie too (5.55)."""
    found = score(result(plain, R454C="stop"), [measured()], six_per_cent)
    placed = order(found)

    assert placed.names == ("R448A", "R449A", "R404A")
    assert placed.places == (1, 1, 2)
    assert set(placed.ties) == {("R448A", "R449A"), ("R449A", "R404A")}


def test_differences_within_the_band_are_not_stretched(plain):
    """Where all lie within the band nobody beats anybody, and scores do not fill the scale."""
    close = measured(values=(100.0, 99.0, 100.5, 99.5))
    found = score(result(plain), [close], six_per_cent)

    assert found.scores.min() == pytest.approx(1.0 - 1.5 / 6.015)  # 6 % of the mean of 100.5 and 100
    assert order(found).places == (1, 1, 1, 1)


def test_a_worse_model_blurs_more(plain):
    """The wider band of two decides: R448A with a band of 20 % no longer beats R404A."""

    def band(a, b):
        return 0.20 if "R448A" in (a.refrigerant.designation, b.refrigerant.designation) else 0.06

    placed = order(score(result(plain, R454C="stop", R449A="stop"), [measured()], band))

    assert placed.places == (1, 1)


def test_the_band_fades_with_the_weight(plain):
    """Where first cost decides and energy hardly counts, the band of energy ties nothing."""
    cost = measured("first cost", (0.0, 10.0, 20.0, 30.0), modelled=False)
    found = score(result(plain), [measured(), cost], six_per_cent)

    assert order(found, {"energy": 0, "first cost": 10}).places == (1, 2, 3, 4)
    assert order(found, {"energy": 0, "first cost": 0}).places == (1, 1, 1, 1)


@pytest.mark.parametrize(
    ("weights", "match"), [({"luck": 1}, "no criterion luck"), ({"energy": 11}, "outside 0 to 10")]
)
def test_weights_have_bounds(plain, weights, match):
    """A weight beyond 10 or of nothing is refused."""
    with pytest.raises(ValueError, match=match):
        order(score(result(plain), [measured()], no_band), weights)


# Shares worked by hand for flat weights: the first weight of two is even between 0 and 1; of three it is above t with
# probability (1 - t)^2.
KNOWN = [
    ([[1, 0], [0, 1]], [0.5, 0.5]),
    ([[1, 0], [0, 0.25]], [0.8, 0.2]),
    ([[1, 0, 0], [0, 1, 1]], [0.25, 0.75]),
    ([[1, 1], [0, 0]], [1.0, 0.0]),
]


@pytest.mark.parametrize(("scores", "shares"), KNOWN)
def test_first_places_over_all_weightings(scores, shares):
    """Shares of first places agree with the ones by hand, within three standard errors of the draw."""
    found = rank_stability(scores, n=20_000, seed=3)

    assert found.first == pytest.approx(shares, abs=3.0 * 0.5 / np.sqrt(20_000))
    assert found.alone == pytest.approx(found.first)


def test_ties_share_the_first_place():
    """By hand, flat weights w and 1 - w, doubt 0.5 in the first score: A beats B if w - (1 - w) > 0.5 w, w > 2/3."""
    doubts = np.zeros((2, 2, 2))
    doubts[:, :, 0] = 0.5

    found = rank_stability([[1, 0], [0, 1]], n=20_000, seed=3, doubts=doubts)

    # B beats A if 1 - 2 w > 0.5 w, w < 0.4; between them they tie.
    assert found.alone == pytest.approx([1 / 3, 0.4], abs=0.011)
    assert found.first == pytest.approx([0.6, 2 / 3], abs=0.011)


def test_weights_to_draw_around():
    """Around weights that favour A it is first more often than over all; a weight of 0 stays 0; a seed repeats."""
    scores = [[1, 0], [0, 1]]

    assert rank_stability(scores, [8, 2], seed=5).first[0] > 0.8
    assert rank_stability(scores, [8, 0], seed=5).first.tolist() == [1.0, 0.0]
    assert (
        rank_stability(scores, [6, 4], seed=5).first.tolist() == rank_stability(scores, [6, 4], seed=5).first.tolist()
    )


def scores_of(values, names=("R404A", "R448A")):
    """Return scores without doubt or gate."""
    values = np.array(values, dtype=float)
    m, c = values.shape
    no = np.zeros((m, c), dtype=bool)
    return Scores(names, ("energy", "first cost")[:c], ("", "")[:c], values, no, np.zeros((m, m, c)), {}, ())


def test_the_weight_that_flips():
    """By hand: 5 x 1 + 5 x 0 against 5 x 0 + 5 x 0.6; equal at an energy weight of 3, or 8.33 of first cost."""
    found = flip(scores_of([[1, 0], [0, 0.6]]))

    assert (found.criterion, found.side, found.then) == ("energy", "below", "R448A")
    assert found.weight_then == pytest.approx(3.0)
    assert found.words == "R448A comes before R404A once the weight of energy is below 3.0 (now 5)."
    assert flip(scores_of([[1, 1], [0, 0]])) is None


def test_a_flip_has_to_pass_the_band():
    """By hand, doubt 0.2 in energy: 1.2 w against 0.6 x 5, so R448A is ahead below 2.5; a doubt of 5, below 0.5."""
    doubts = np.zeros((2, 2, 2))
    doubts[:, :, 0] = 0.2
    near, far = scores_of([[1, 0], [0, 0.6]]), scores_of([[1, 0], [0, 0.01]])

    assert flip(replace(near, doubts=doubts)).weight_then == pytest.approx(2.5)
    assert flip(replace(near, doubts=doubts * 25)).weight_then == pytest.approx(0.5)
    # Equal at 0.05: no weight that can be set lies below.
    assert flip(far) is None


def test_words_of_stability():
    """One sentence with the shares; what never comes first is not in it."""
    found = scores_of([[1, 1], [0, 0]])

    words = stability_words(found, rank_stability(found.scores))

    assert (
        words
        == "Of 2000 weight sets drawn over all weightings alike: R404A comes first in 100 % of them (100 % alone)."
    )


@settings(max_examples=60, deadline=None, derandomize=True)
@given(
    values=st.lists(st.lists(st.floats(0.0, 1.0), min_size=3, max_size=3), min_size=2, max_size=6),
    weights=st.lists(st.floats(0.0, 10.0), min_size=3, max_size=3),
    better=st.floats(0.01, 1.0),
)
def test_better_is_never_placed_lower(values, weights, better):
    """Every set has a first place, and an option that gains in one criterion never comes first less often."""
    before = rank_stability(values, weights, n=50)
    values = np.array(values)
    values[0, 1] += better
    after = rank_stability(values, weights, n=50)

    assert before.first.sum() >= 1.0 - 1e-12
    assert after.first[0] >= before.first[0]


@pytest.fixture(scope="module")
def market():
    """Return the shipped market after the checks, without a year, emissions or money."""
    case = read_case(CASES / "harbour-market.toml")
    return assess(compare(replace(case, year=None, weather=None, emissions=None, money=None, options=None)))


def test_a_whole_case(market):
    """The market without a year or money: COP, climate weight of the charge, points; and its A2L stopped by class."""
    found = accounts(market, {}, base_only)
    weighed = criteria(market, found, {})
    scores = score(market, weighed, six_per_cent)

    assert [item.name for item in weighed] == list(CRITERIA)
    assert set(scores.not_ranked) == {"R454C"}
    assert "safety class" in scores.not_ranked["R454C"]
    assert scores.left_out == ("first cost",)
    by_name = {item.name: item for item in weighed}
    # 260 kg of R404A by AR5: 260 x 3942.8 / 1000.
    assert by_name["climate"].values["R404A"] == pytest.approx(1025.1, abs=0.05)
    assert by_name["disruption"].values["R404A"] == 0.0
    assert by_name["supply risk"].values["R404A"] > by_name["supply risk"].values["R448A"]
    assert "plant as installed" in by_name["energy"].measure
    assert sorted(order(scores).names) == sorted(scores.names)


def test_a_year_goes_before_a_cop(market):
    """With electricity of a year for every option that is what energy is measured by."""
    uses = {entry.refrigerant.designation: Use(1e12) for entry in market.entries}
    by_name = {item.name: item for item in criteria(market, accounts(market, uses, base_only), uses)}

    assert (by_name["energy"].measure, by_name["energy"].unit) == ("electricity of a year", "J")
    assert set(by_name["energy"].values.values()) == {1e12}


def test_stability_is_told_from_the_most_frequent_first():
    """Three options with shares of a quarter, nothing and the rest: the larger share is told first, none not at all."""
    scores = Scores(
        names=("R448A", "R449A", "R454C"),
        criteria=("energy",),
        measures=("energy",),
        scores=np.zeros((3, 1)),
        is_unknown=np.zeros((3, 1), dtype=bool),
        doubts=np.zeros((3, 3, 1)),
        not_ranked={},
        left_out=(),
    )
    found = Stability(np.array([0.25, 0.0, 0.75]), np.array([0.1, 0.0, 0.6]), 400, "around the weights of the meeting")

    assert stability_words(scores, found) == (
        "Of 400 weight sets drawn around the weights of the meeting: R454C comes first in 75 % of them (60 % alone); "
        "R448A comes first in 25 % of them (10 % alone)."
    )
