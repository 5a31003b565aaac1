"""Mean temperature differences of exchangers, against textbook formulas and by hand."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.equipment.exchanger import Secondary, mean_difference

SHARE = np.array([0.0, 0.25, 0.5, 0.75, 1.0])


def constant(T_K: float) -> np.ndarray:
    """Return the nodes of a refrigerant that boils or condenses at one temperature."""
    return np.full(SHARE.size, T_K)


def test_counterflow_meets_the_logarithmic_mean_of_a_textbook() -> None:
    """Hot 100 to 60 degC against cold 30 to 40.2 degC has a logarithmic mean of 43.2 K.

    Incropera and DeWitt, Fundamentals of Heat and Mass Transfer, Example 11.1 (from memory): oil 100 to 60 degC,
    water from 30 degC at 0.2 kg/s and 4178 J/(kg K), 8524 W. By hand: water leaves at 30 + 8524 / 835.6 = 40.2 degC;
    (59.8 - 30) / ln(59.8 / 30) = 43.2 K.
    """
    oil = 373.15 - 40.0 * SHARE

    found = mean_difference(oil, SHARE, np.float64(-8524.0), Secondary(303.15, 0.2 * 4178.0), "counterflow")

    assert found == pytest.approx(43.2, abs=0.05)


@pytest.mark.parametrize("arrangement", ["counterflow", "crossflow", "flooded"])
def test_at_one_refrigerant_temperature_every_arrangement_is_the_same(arrangement: str) -> None:
    """Against one temperature the arrangement does not matter: difference = change / ln(inlet / outlet difference).

    By hand: 10 K in, 5 K out: 5 / ln 2 = 7.2135 K.
    """
    found = mean_difference(constant(263.15), SHARE, np.float64(5000.0), Secondary(273.15, 1000.0), arrangement)

    assert found == pytest.approx(5.0 / math.log(2.0), rel=1e-12)


def test_flooded_takes_the_last_temperature_of_the_refrigerant() -> None:
    """A flooded evaporator has the temperature of its last node, the dew point, all over."""
    glide = 260.0 + 4.0 * SHARE

    found = mean_difference(glide, SHARE, np.float64(1.0), Secondary(274.0, 1e9), "flooded")

    assert found == pytest.approx(10.0, rel=1e-6)


def test_glide_helps_in_counterflow_and_not_across() -> None:
    """With the same mean temperature, a glide along the medium's own change is worth more in counterflow."""
    medium = Secondary(275.15, 1000.0)
    flat, glide = constant(262.15), 260.15 + 4.0 * SHARE

    def gain(arrangement: str) -> float:
        new = mean_difference(glide, SHARE, np.float64(5000.0), medium, arrangement)
        return float(new / mean_difference(flat, SHARE, np.float64(5000.0), medium, arrangement))

    assert gain("counterflow") > 1.01 > 1.0 > gain("crossflow")


@pytest.mark.parametrize("arrangement", ["counterflow", "crossflow", "flooded"])
def test_crossing_temperatures_give_no_positive_difference(arrangement: str) -> None:
    """Where the medium would have to leave colder than the refrigerant, the difference is not above the smallest."""
    found = mean_difference(constant(268.15), SHARE, np.float64(6000.0), Secondary(273.15, 1000.0), arrangement)

    assert found <= 1e-3


def test_unknown_arrangement_is_refused() -> None:
    """Another word than the three arrangements raises, naming them."""
    with pytest.raises(ValueError, match="counterflow, crossflow, flooded"):
        mean_difference(constant(270.0), SHARE, np.float64(1.0), Secondary(280.0, 1.0), "parallel")


@given(st.floats(1.0, 20.0), st.floats(0.05, 0.9), st.sampled_from(["counterflow", "crossflow"]))
def test_mean_lies_between_the_smallest_and_the_largest_difference(
    lead_K: float, effectiveness: float, arrangement: str
) -> None:
    """The mean difference lies between those at the two ends, whatever the heat flow."""
    heat = np.float64(1000.0 * lead_K * effectiveness)

    found = mean_difference(constant(280.0), SHARE, heat, Secondary(280.0 + lead_K, 1000.0), arrangement)

    assert lead_K * (1.0 - effectiveness) <= found * (1.0 + 1e-12)
    assert found <= lead_K * (1.0 + 1e-12)


@pytest.mark.parametrize("arrangement", ["crossflow", "flooded"])
@pytest.mark.parametrize(("change_K", "expected_K"), [(5.1, -0.1), (5.4, -0.4), (6.0, -1.0)])
def test_a_medium_that_would_change_by_more_than_its_lead_is_short_by_the_rest(
    arrangement: str, change_K: float, expected_K: float
) -> None:
    """By hand: the refrigerant is 5 K from the medium at its inlet; 5.1 K of change would cross it by 0.1 K."""
    secondary = Secondary(305.15, 1000.0)

    found = mean_difference(constant(300.15), SHARE, np.float64(1000.0 * change_K), secondary, arrangement)

    assert found == pytest.approx(expected_K, abs=1e-9)
