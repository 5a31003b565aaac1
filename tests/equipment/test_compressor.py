"""Efficiencies over pressure ratio, motor, suction superheat and part load of a compressor."""

import itertools

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.interpolate import PchipInterpolator

from retrofit.cycle import Settings, solve_cycle
from retrofit.equipment.compressor import (
    ROUNDED_SHARE,
    EfficiencyCurve,
    EfficiencyMap,
    shaft_and_electric,
)
from retrofit.errors import QuantityError
from retrofit.properties import fluid

KELVIN = 273.15
POINTS = [[2, 0.62, 0.92], [4, 0.70, 0.86], [8, 0.66, 0.74]]


@st.composite
def curves(draw):
    """Return points of a compressor: two to seven, by rising pressure ratio."""
    steps = draw(st.lists(st.floats(0.05, 5.0), min_size=2, max_size=7))
    efficiency = st.floats(0.05, 1.0)
    return [[ratio, draw(efficiency), draw(efficiency)] for ratio in 1.0 + np.cumsum(steps)]


# -- the curve ---------------------------------------------------------------------------------------


@given(curves())
@settings(max_examples=200, deadline=None)
def test_a_curve_meets_its_points_and_stays_between_them(points):
    """The curve goes through every point, and between two points it only rises or only falls, within the two."""
    curve, table = EfficiencyCurve.through(points), np.array(points)

    for column, found in enumerate(curve.at(table[:, 0]), start=1):
        assert found == pytest.approx(table[:, column], rel=1e-12)
    for (low, *at_low), (high, *at_high) in itertools.pairwise(points):
        for values, a, b in zip(curve.at(np.linspace(low, high, 201)), at_low, at_high, strict=True):
            steps = np.diff(values) * np.sign(b - a)
            assert np.all(steps >= -1e-12)
            assert min(a, b) - 1e-12 <= values.min() <= values.max() <= max(a, b) + 1e-12


@given(curves())
@settings(max_examples=100, deadline=None)
def test_a_curve_has_no_corner(points):
    """Slopes measured just left and just right of every node, the ends included, agree: a solver sees no corner."""
    curve = EfficiencyCurve.through(points)
    x = curve.curve.x
    step = 1e-6 * np.min(np.diff(x))
    for at in range(2):
        left = (curve.at(x)[at] - curve.at(x - step)[at]) / step
        right = (curve.at(x + step)[at] - curve.at(x)[at]) / step
        # Second derivatives of a cubic are at most 6 secants over the width of the cell; rounding adds 1e-16 / step.
        bend = 12.0 * np.max(np.abs(np.diff(curve.at(x)[at]) / np.diff(x))) / np.min(np.diff(x))
        assert left == pytest.approx(right, abs=2.0 * bend * step + 1e-15 / step)


@given(curves())
@settings(max_examples=100, deadline=None)
def test_a_curve_is_the_usual_monotone_interpolant(points):
    """Away from the last twentieth of the outer intervals the curve is SciPy's monotone piecewise cubic."""
    table = np.array(points)
    x = table[:, 0]
    first, last = x[0] + ROUNDED_SHARE * (x[1] - x[0]), x[-1] - ROUNDED_SHARE * (x[-1] - x[-2])
    ratio = np.linspace(first, last, 101)
    expected = PchipInterpolator(x, table[:, 1:])(ratio)

    assert np.array(EfficiencyCurve.through(points).at(ratio)).T == pytest.approx(expected, abs=1e-12)


def test_a_curve_is_level_beyond_its_points():
    """Below the first and above the last point the nearest point holds, and that is not covered; NaN goes through."""
    curve = EfficiencyCurve.through(POINTS)
    isentropic, volumetric = curve.at([1.0, 9.0, 50.0, np.nan])

    assert isentropic == pytest.approx([0.62, 0.66, 0.66, np.nan], nan_ok=True)
    assert volumetric == pytest.approx([0.92, 0.74, 0.74, np.nan], nan_ok=True)
    assert curve.covers([1.9, 2.0, 5.0, 8.0, 8.1, np.nan]).tolist() == [False, True, True, True, False, False]


def test_two_points_make_a_straight_line():
    """Between two points the curve is the straight line, except for the turn to level at its ends."""
    isentropic, volumetric = EfficiencyCurve.through([[2, 0.5, 0.9], [6, 0.7, 0.8]]).at([3.0, 4.0, 5.0])

    assert isentropic == pytest.approx([0.55, 0.6, 0.65], rel=1e-12)
    assert volumetric == pytest.approx([0.875, 0.85, 0.825], rel=1e-12)


def test_constant_efficiencies():
    """Constants hold at, and cover, every pressure ratio, in the shape asked."""
    curve = EfficiencyCurve.constant(0.68, 0.85)
    ratio = np.array([[1.0, 3.0], [12.0, 40.0]])
    isentropic, volumetric = curve.at(ratio, 2e5)

    assert isentropic == pytest.approx(np.full((2, 2), 0.68))
    assert volumetric == pytest.approx(np.full((2, 2), 0.85))
    assert curve.covers(ratio).all()
    assert curve.at(3.0)[0].shape == ()


@pytest.mark.parametrize(
    ("points", "message"),
    [
        ([[2, 0.6, 0.9]], "1 efficiency point.* at least 2"),
        ([], "0 efficiency point"),
        ([[2, 0.6, 0.9], [2, 0.6, 0.9]], "point 2: pressure ratio 2 does not rise above 2"),
        ([[4, 0.6, 0.9], [3, 0.6, 0.9]], "point 2: pressure ratio 3 does not rise above 4"),
        ([[2, 0.6, 0.9], [3, 0.6]], "point 2 has 2 values; write three"),
        ([[0.5, 0.6, 0.9], [3, 0.6, 0.9]], "point 1: pressure ratio 0.5 is not"),
        ([[2, 0.6, 0.9], [float("nan"), 0.6, 0.9]], "point 2: pressure ratio nan is not"),
        ([[2, 0.6, 0.9], [float("inf"), 0.6, 0.9]], "point 2: pressure ratio inf is not"),
        ([[2, 1.2, 0.9], [3, 0.6, 0.9]], r"point 1: isentropic efficiency 1.2 is not above 0 and at most 1"),
        ([[2, 0.6, 0.9], [3, 0.6, 0.0]], "point 2: volumetric efficiency 0 is not"),
        ([[2, 62, 92], [3, 60, 90]], "point 1: isentropic efficiency 62"),
        ([[2, 0.6, float("nan")], [3, 0.6, 0.9]], "point 1: volumetric efficiency nan"),
        ([[2, 1.001, 0.9], [3, 0.6, 0.9]], "point 1: isentropic efficiency 1.001 is not above 0 and at most 1"),
        ([[2, 0.6, 0.9], [3, 0.6, 1.001]], "point 2: volumetric efficiency 1.001 is not above 0 and at most 1"),
        ([[2, 0.0, 0.9], [3, 0.6, 0.9]], "point 1: isentropic efficiency 0 is not above 0 and at most 1"),
    ],
)
def test_bad_points_are_named(points, message):
    """Points that are too few, do not rise, or hold no efficiency are refused with their number and value."""
    with pytest.raises(QuantityError, match=message):
        EfficiencyCurve.through(points)


def test_a_bad_constant_is_named():
    """A constant efficiency in percent without its sign is refused."""
    with pytest.raises(QuantityError, match="constant efficiency: volumetric efficiency 85"):
        EfficiencyCurve.constant(0.7, 85.0)


# -- the map -----------------------------------------------------------------------------------------

LN_SUCTION, LN_DISCHARGE = np.log(np.linspace(1.5e5, 5e5, 9)), np.log(np.linspace(10e5, 24e5, 9))


def _map(by_pressure=0.0):
    """Return a map of efficiencies that fall with the logarithm of the pressure ratio, and with suction pressure."""
    x, y = LN_SUCTION[:, None], LN_DISCHARGE[None, :]
    ratio, lower = y - x, by_pressure * (x - x.min()) / np.ptp(x)
    return EfficiencyMap.over(
        LN_SUCTION, LN_DISCHARGE, np.array([0.8 - 0.08 * ratio - lower, 1.0 - 0.1 * ratio - lower])
    )


def test_a_map_of_the_pressure_ratio_alone_has_no_spread():
    """Where the pressure ratio alone decides, the spread is nil and the suction pressure changes nothing."""
    made, ratio = _map(), np.array([3.0, 5.0, 9.0])
    expected = 0.8 - 0.08 * np.log(ratio)

    assert made.spread == pytest.approx((0.0, 0.0), abs=1e-12)
    for p_suction in (0.5e5, 2.5e5, 20e5):
        assert made.at(ratio, p_suction)[0] == pytest.approx(expected, abs=1e-12)
    # Between the 15 samples a monotone cubic of a logarithm is good to 1e-4 and better.
    assert made.at(ratio)[0] == pytest.approx(expected, abs=1e-4)


def test_the_spread_is_what_the_pressure_ratio_does_not_tell():
    """No value of the map lies further from the curve than the spread, and one lies as far."""
    made = _map(by_pressure=0.06)
    p_suction = np.exp(np.linspace(LN_SUCTION[0], LN_SUCTION[-1], 41))[:, None]
    ratio = np.exp(np.linspace(LN_DISCHARGE[0], LN_DISCHARGE[-1], 41)) / p_suction
    off = np.abs(made.at(ratio, p_suction)[0] - made.at(ratio)[0])

    # At the middle ratio the suction pressures at hand span a part of the whole fall of 0.06; half of it is the spread.
    span = min(np.ptp(LN_SUCTION), np.ptp(LN_DISCHARGE)) / np.ptp(LN_SUCTION)
    assert made.spread[0] == pytest.approx(0.5 * 0.06 * span, rel=0.02)
    assert off.max() == pytest.approx(made.spread[0], rel=0.05)


def test_a_map_holds_the_nearest_suction_pressure_of_the_same_ratio():
    """Outside the data the pressure ratio is kept where it can be, and the nearest suction pressure counts."""
    made = _map(by_pressure=0.06)
    lowest, highest = np.exp(LN_SUCTION[[0, -1]])

    assert made.at(6.8, 0.7e5)[0] == pytest.approx(made.at(6.8, lowest)[0], rel=1e-12)
    # At a ratio of 3, discharge from 10 bar up asks for suction from 3.33 bar up.
    assert made.at(3.0, 1e5)[0] == pytest.approx(made.at(3.0, 10e5 / 3.0)[0], rel=1e-12)
    # A ratio of 1.2 is lower than any of the data: 10 bar over 5 bar is the nearest.
    assert made.at(1.2, 1e5)[0] == pytest.approx(made.at(10e5 / highest, highest)[0], rel=1e-12)
    assert np.isnan(made.at(np.nan, 2e5)[0])
    assert np.isnan(made.at(4.0, np.nan)[1])


def test_a_map_says_what_it_covers():
    """Covered is a suction and discharge pressure within the data; without suction pressure, the ratio alone."""
    made = _map()

    assert made.covers([6.8, 6.8, 3.0, 3.0, 1.2, np.nan], [1.6e5, 1.4e5, 2e5, 4e5, 4e5, 2e5]).tolist() == [
        True,
        False,
        False,
        True,
        False,
        False,
    ]
    assert made.covers([1.9, 2.0, 16.0, 16.1]).tolist() == [False, True, True, False]
    assert not made.covers(0.0, 2e5)


def test_a_map_refuses_impossible_efficiencies():
    """A map with an efficiency above 1 is not made."""
    with pytest.raises(QuantityError, match=r"efficiency 1.05 is not above 0 and at most 1"):
        EfficiencyMap.over(LN_SUCTION, LN_DISCHARGE, np.full((2, 9, 9), 1.05))


# -- carried to another refrigerant ------------------------------------------------------------------

CATALOGUE = "medians over all compressor models rated with both, open data set RefrigerationCompressorCurves, 25.2"
# A reciprocating machine of ours: volumetric efficiency 1 + c - c r^(1/n), clearance c = 4 %, n = 1.1 (textbook form).
RATIOS = np.linspace(1.5, 12.0, 12)
CLEARANCE = [[float(r), 0.65, float(1.04 - 0.04 * r ** (1 / 1.1))] for r in RATIOS]


def _capacity(name, T_evap_C, T_cond_C, T_return_C, curve):
    f = fluid(name)
    p_evap, p_cond = f.p_dew(T_evap_C + KELVIN), f.p_dew(T_cond_C + KELVIN)
    cycle = solve_cycle(f, p_evap, p_cond, Settings(useful_superheat_K=T_return_C - T_evap_C))
    return float(cycle.volumetric_capacity_J_per_m3 * curve.at(cycle.pressure_ratio, p_evap)[1])


@pytest.mark.parametrize(
    ("new", "T_evap_C", "T_cond_C", "published"),
    [("R404A", -25.0, 35.0, 1.1063), ("R507A", -10.0, 40.0, 1.1404)],
)
def test_equal_efficiency_at_equal_ratio_explains_part_of_the_catalogue(new, T_evap_C, T_cond_C, published):
    """R-22 runs at the higher pressure ratio: carrying the volumetric efficiency by pressure ratio brings the capacity
    ratio nearer to the catalogues' (source: CATALOGUE) than the ideal ratio is, and not past it."""

    def ratio(curve):
        old, other = (_capacity(name, T_evap_C, T_cond_C, 18.3, curve) for name in ("R22", new))
        return other / old

    ideal, carried = ratio(EfficiencyCurve.constant(1.0, 1.0)), ratio(EfficiencyCurve.through(CLEARANCE))

    assert ideal < carried < published, CATALOGUE


def test_where_the_pressure_ratio_does_not_tell_all():
    """R-404A to R-134a at -5/45 degC: the catalogues have 0.6197, which the ideal ratio meets; carried by pressure
    ratio it comes out lower, because lighter gas loses less in valves. It stays within 5 % (source: CATALOGUE)."""
    curve = EfficiencyCurve.through(CLEARANCE)
    carried = _capacity("R134a", -5.0, 45.0, 18.3, curve) / _capacity("R404A", -5.0, 45.0, 18.3, curve)

    assert 0.95 * 0.6197 < carried < 0.6197


# -- motor and suction gas ---------------------------------------------------------------------------


def test_shaft_and_electric_power():
    """46 kW at the shaft of a motor of 92 % are 50 kW from the mains, asked from either side (46 / 0.92 = 50)."""
    assert shaft_and_electric(46e3, 0.92) == pytest.approx((46e3, 50e3))
    assert shaft_and_electric(50e3, 0.92, "electric") == pytest.approx((46e3, 50e3))
    assert shaft_and_electric([1e3, np.nan], [[0.5], [0.8]])[0].shape == (2, 2)


@pytest.mark.parametrize("efficiency", [0.0, -0.1, 1.01, 92.0])
def test_a_bad_motor_efficiency_is_named(efficiency):
    """A motor efficiency outside (0, 1] is refused with its value."""
    with pytest.raises(QuantityError, match=f"motor efficiency {efficiency:g} is not above 0"):
        shaft_and_electric(1e3, efficiency)


def test_an_unknown_place_of_measurement_is_named():
    """Power measured anywhere else than at the shaft or the mains is refused."""
    with pytest.raises(QuantityError, match="'mains' is neither of shaft, electric"):
        shaft_and_electric(1e3, 0.9, "mains")
