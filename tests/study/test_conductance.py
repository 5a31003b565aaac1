"""What a candidate does to both exchangers: by kind, given or calculated, and what that is worth."""

import numpy as np
import pytest

from retrofit.case import read_case
from retrofit.case.exchangers import Exchanger
from retrofit.equipment.heat_transfer import KINDS
from retrofit.study import compare
from retrofit.study.conductance import kind_name

RACK = """
[plant]
refrigerant = "R404A"
[duty]
cooling = "100 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compressor]
isentropic_efficiency = 0.68
volumetric_efficiency = 0.85
[evaporator]
medium = "air"
inlet = "2 degC"
outlet = "-3 degC"
arrangement = "crossflow"
{evaporator}
[condenser]
medium = "air"
inlet = "30 degC"
outlet = "36 degC"
arrangement = "crossflow"
{condenser}
[compare]
candidates = ["R448A", "R454C", "R502"]
{more}
"""


@pytest.fixture
def rack(tmp_path):
    """Return a function that compares on a rack with air at both sides."""

    def made(evaporator="", condenser="", more=""):
        path = tmp_path / "rack.toml"
        path.write_text(RACK.format(evaporator=evaporator, condenser=condenser, more=more), encoding="utf-8")
        return compare(read_case(path))

    return made


@pytest.mark.parametrize(
    ("medium", "arrangement", "way", "T_C", "expected"),
    [
        ("air", "crossflow", "condenser", 5.0, "dry coil"),
        ("air", "crossflow", "evaporator", 5.0, "wet coil"),
        ("air", "crossflow", "evaporator", -8.0, "frosting coil"),
        ("water", "counterflow", "evaporator", 2.0, "plates, water"),
        ("brine", "counterflow", "evaporator", -10.0, "plates, brine"),
        ("water", "crossflow", "condenser", 2.0, "tubes, water"),
        ("brine", "flooded", "evaporator", -14.0, "flooded, brine"),
        (None, "crossflow", "evaporator", -14.0, ""),
    ],
)
def test_kind_of_an_exchanger(medium, arrangement, way, T_C, expected):
    """Medium, arrangement, side and temperature say which kind it is; without a medium none is taken."""
    table = Exchanger(arrangement=arrangement, **({} if medium is None else {"medium": medium}))

    assert kind_name(table, way, T_C + 273.15) == expected


def test_every_kind_has_a_share():
    """Whatever a case can say is a kind, and its share lies within its range."""
    for medium in ("air", "water", "brine"):
        for arrangement in ("counterflow", "crossflow", "flooded"):
            for way in ("evaporator", "condenser"):
                assert kind_name(Exchanger(medium=medium, arrangement=arrangement), way, 250.0) in KINDS
    assert all(kind.low < kind.share < kind.high for kind in KINDS.values())


def test_today_s_refrigerant_is_the_measure(rack):
    """Against itself the ratios of the plant are exactly 1, whatever is calculated for others."""
    found = rack().existing

    assert [one.factor for one in found.plant.ua_factors] == [1.0, 1.0]
    assert {value for name, value in found.relative.items() if name.startswith("plant_")} == {1.0}


def test_a_blend_with_glide_loses_conductance(rack):
    """R448A and R454C for R404A: both exchangers poorer, R454C's more; flow and glide as they are.

    By hand, suction densities at -8 degC mean: R448A has about 0.77 of R404A's, R454C 0.71.
    """
    first, second, _ = (entry.plant.ua_factors for entry in rack().candidates)

    for ours, worse in zip(first, second, strict=True):
        assert ours.origin == worse.origin == "calculated"
        assert worse.factor < ours.factor < 1.0
        assert ours.low < ours.factor < ours.high
        assert ours.flow == pytest.approx(0.77, abs=0.02)
        assert worse.flow == pytest.approx(0.71, abs=0.02)
        assert worse.glide_K > ours.glide_K > 4.0
        # Resistances in series, by hand from what is told.
        assert ours.factor == pytest.approx(1.0 / (1.0 - ours.share + ours.share / ours.film), rel=1e-12)


def test_what_it_is_worth(rack):
    """Calculated factors take 1 to 3 points from R448A's COP at the same cooling, and more from R454C's."""
    ones = "ua_factor = 1.0"
    with_factors, equal = rack().candidates, rack(ones, ones).candidates
    lost = [
        one.relative["plant_cop_same_cooling"] - other.relative["plant_cop_same_cooling"]
        for one, other in zip(equal, with_factors, strict=True)
    ]

    assert 0.01 < lost[0] < 0.03
    assert lost[1] > lost[0]
    assert lost[2] == pytest.approx(0.0, abs=1e-9)


def test_without_transport_models_it_is_one_and_wide(rack):
    """R502 has a component without a model: 1, not calculated, with a band around it."""
    found = rack().candidates[2].plant.ua_factors

    for one in found:
        assert (one.factor, one.origin, one.film) == (1.0, "unknown", None)
        # By hand: the share times 0.30 to both sides.
        assert (1.0 - one.low, one.high - 1.0) == pytest.approx((0.3 * one.share, 0.3 * one.share))


def test_the_case_overrides_one_side_for_one_refrigerant(rack):
    """A factor of the case stands for what it names; everything else is calculated."""
    first, second, _ = (entry.plant.ua_factors for entry in rack(condenser="ua_factor = {R448A = 0.9}").candidates)

    assert [one.origin for one in first] == ["calculated", "given"]
    assert first[1].factor == first[1].low == first[1].high == 0.9
    assert [one.origin for one in second] == ["calculated", "calculated"]


def test_a_new_plant_has_exchangers_like_today_s(rack):
    """A refrigerant that a new plant is priced for keeps the conductances of today."""
    entry = rack(more="[options.R454C]\nseasonal_cop = 3.0").candidates[1]

    assert entry.is_new_plant
    assert [one.factor for one in entry.like_today.ua_factors] == [1.0, 1.0]


def test_conductances_told_carry_the_factors(rack):
    """Conductances told are today's times the factors."""
    comparison = rack()
    today, entry = comparison.existing.plant, comparison.candidates[0].plant
    factors = [one.factor for one in entry.ua_factors]

    np.testing.assert_allclose(entry.conductances_W_per_K, np.multiply(today.conductances_W_per_K, factors), rtol=1e-12)
