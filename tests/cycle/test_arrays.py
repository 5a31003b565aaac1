"""Cycles on arrays: shapes, equality with single cycles, NaN, refusals, and the list of state points."""

from dataclasses import fields

import numpy as np
import pytest

from retrofit.cycle import Cycle, Settings, solve_cycle, state_points
from retrofit.errors import OutsideValidRangeError
from retrofit.properties import fluid

ARRAYS = [field.name for field in fields(Cycle) if field.name != "settings"]
FIGURES = ("cop", "volumetric_capacity_J_per_m3", "pressure_ratio", "work_J_per_kg", "heat_rejected_J_per_kg")


@pytest.mark.parametrize("name", ["R134a", "R454B", "R448A", "R600a"])
def test_broadcast_equals_single_cycles(name):
    """Pressures and settings broadcast together, and every element is the cycle solved alone."""
    f = fluid(name)
    p_evap = f.p_dew(np.array([248.15, 263.15, 278.15]))[:, None, None]
    p_cond = f.p_dew(np.array([303.15, 318.15]))[:, None]
    superheat, efficiency = np.array([0.0, 5.0, 12.0, 20.0]), np.array([[[0.6]], [[0.7]], [[0.8]]])
    cycle = solve_cycle(f, p_evap, p_cond, Settings(superheat, 3.0, 2.0, efficiency))

    assert {getattr(cycle, name).shape for name in ARRAYS} == {(3, 2, 4)}
    for at in np.ndindex(3, 2, 4):
        i, j, k = at
        chosen = Settings(superheat[k], 3.0, 2.0, efficiency[i, 0, 0])
        alone = solve_cycle(f, p_evap[i, 0, 0], p_cond[j, 0], chosen)
        for field in (*ARRAYS, *FIGURES):
            assert getattr(cycle, field)[at] == pytest.approx(float(getattr(alone, field)), rel=1e-12)


def test_one_cycle_has_no_axes():
    """Single numbers in, arrays without axes out."""
    f = fluid("R134a")
    cycle = solve_cycle(f, 2e5, 1e6, Settings())

    assert {np.shape(getattr(cycle, name)) for name in ARRAYS} == {()}


def test_an_empty_array_is_answered():
    """No condition, no cycle, no error."""
    f = fluid("R454B")
    cycle = solve_cycle(f, np.array([]), 1e6, Settings())

    assert cycle.cop.shape == (0,)


def test_shapes_that_do_not_fit_are_refused():
    """Arrays that do not broadcast are an error of NumPy's, not a wrong number."""
    f = fluid("R134a")
    with pytest.raises(ValueError, match="broadcast"):
        solve_cycle(f, np.full(3, 2e5), np.full(2, 1e6), Settings())


def test_nan_stays_where_it_is():
    """For a lenient fluid an unknown or impossible condition is NaN, and its neighbours are untouched."""
    f = fluid("R454B")
    p_evap = np.array([4e5, np.nan, 4e5, 4e5, 4e5])
    p_cond = np.array([20e5, 20e5, 1e9, 20e5, 20e5])
    superheat = np.array([5.0, 5.0, 5.0, 400.0, -3.0])
    cycle = solve_cycle(f.as_lenient(), p_evap, p_cond, Settings(superheat))
    good = solve_cycle(f, 4e5, 20e5, Settings(5.0))

    np.testing.assert_array_equal(np.isfinite(cycle.cop), [True, False, False, False, False])
    assert cycle.cop[0] == good.cop
    np.testing.assert_array_equal(np.isfinite(cycle.volumetric_capacity_J_per_m3), [True] + 4 * [False])


@pytest.mark.parametrize(
    ("p_evap", "p_cond", "chosen", "words"),
    [
        (np.nan, 20e5, Settings(), "dew pressure nan"),
        (4e5, 1e9, Settings(), "dew pressure"),
        (4e5, 20e5, Settings(useful_superheat_K=-3.0), "superheat -3 K"),
        (4e5, 20e5, Settings(line_superheat_K=300.0), "superheat 305 K above the dew point is outside"),
        (4e5, 20e5, Settings(subcooling_K=-1.0), "subcooling"),
        (4e5, 20e5, Settings(subcooling_K=200.0), "subcooling"),
        (4e5, 20e5, Settings(isentropic_efficiency=0.05), "the gas would be hotter than .* degC"),
        (20e5, 4e5, Settings(), "condensing pressure 4 bar is not above the evaporating pressure 20 bar"),
        (4e5, 4e5, Settings(), "nothing to compress"),
        ([4e5, 9e5], [20e5, 8e5], Settings(), "condensing pressure 8 bar is not above the evaporating pressure 9 bar"),
    ],
)
def test_impossible_cycles_are_refused(p_evap, p_cond, chosen, words):
    """A cycle that cannot be is refused with what is wrong, not answered with a number."""
    with pytest.raises(OutsideValidRangeError, match=words):
        solve_cycle(fluid("R454B"), p_evap, p_cond, chosen)


def test_lenient_without_lift_is_nan():
    """Where the condensing pressure is not above the evaporating one, a lenient fluid gives NaN."""
    cycle = solve_cycle(fluid("R454B").as_lenient(), [4e5, 9e5, 9e5], [20e5, 9e5, 4e5], Settings())

    np.testing.assert_array_equal(np.isnan(cycle.cop), [False, True, True])


NAMES = (
    "compressor inlet",
    "discharge",
    "condenser dew point",
    "condenser bubble point",
    "expansion valve inlet",
    "evaporator inlet",
    "evaporator dew point",
    "evaporator outlet",
)


@pytest.mark.parametrize("name", ["R134a", "R448A"])
def test_state_points(name):
    """Eight points in the order the refrigerant passes them, at the cycle's pressures, temperatures and enthalpies."""
    f = fluid(name)
    cycle = solve_cycle(f, f.p_dew([255.0, 265.0]), f.p_dew(315.0), Settings(6.0, 4.0, 3.0, 0.7))
    points = state_points(f, cycle)
    at = {point.name: point for point in points}

    assert tuple(point.name for point in points) == NAMES
    for place in NAMES:
        expected = cycle.p_evap_Pa if "evaporator" in place or place == "compressor inlet" else cycle.p_cond_Pa
        np.testing.assert_allclose(at[place].p_Pa, expected, rtol=1e-12)
    np.testing.assert_allclose(at["compressor inlet"].T_K, cycle.T_suction_K, rtol=1e-12)
    np.testing.assert_allclose(at["compressor inlet"].h_J_per_kg, cycle.h_suction_J_per_kg, rtol=1e-12)
    np.testing.assert_allclose(at["compressor inlet"].density_kg_per_m3, cycle.density_suction_kg_per_m3, rtol=1e-12)
    np.testing.assert_allclose(at["discharge"].T_K, cycle.T_discharge_K, atol=1e-6)
    np.testing.assert_allclose(at["condenser bubble point"].T_K - at["expansion valve inlet"].T_K, 3.0, atol=1e-9)
    np.testing.assert_allclose(at["evaporator inlet"].T_K, cycle.T_evap_inlet_K, rtol=1e-12)
    np.testing.assert_allclose(at["evaporator outlet"].T_K - at["evaporator dew point"].T_K, 6.0, atol=1e-9)
    assert np.all((at["evaporator inlet"].quality > 0.0) & (at["evaporator inlet"].quality < 1.0))
    assert np.all(np.isnan(at["expansion valve inlet"].quality))
    assert np.all(np.isnan(at["compressor inlet"].quality))
