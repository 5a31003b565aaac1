"""From temperatures to pressures and back: what dew and mean matching mean, checked on states found anew."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from retrofit.cycle import Settings, Temperatures, cycle_temperatures, matched_pressures, solve_cycle
from retrofit.errors import NoSolutionError, OutsideValidRangeError
from retrofit.properties import fluid

KELVIN = 273.15
PURE = ("R134a", "R32", "R290", "R717")
BLENDS = ("R404A", "R407C", "R410A", "R448A", "R454B", "R454C", "R455A", "R513A", "R515B", "R463A")


def _temperatures(T_evap_C, T_cond_C, convention):
    return Temperatures(np.asarray(T_evap_C) + KELVIN, np.asarray(T_cond_C) + KELVIN, convention)


@pytest.mark.parametrize("name", PURE + BLENDS)
def test_dew_matching(name):
    """Dew matching puts the dew points of both exchangers at the temperatures asked for."""
    f = fluid(name)
    asked = _temperatures([-30.0, -10.0, 5.0], [30.0, 40.0, 48.0], "dew")
    p_evap, p_cond = matched_pressures(f, asked, 3.0)

    np.testing.assert_allclose(f.dew(p_evap).T_K, asked.T_evap_K, atol=1e-4)
    np.testing.assert_allclose(f.dew(p_cond).T_K, asked.T_cond_K, atol=1e-4)


@pytest.mark.parametrize("name", PURE + BLENDS)
@pytest.mark.parametrize("subcooling_K", [0.0, 5.0])
def test_mean_matching(name, subcooling_K):
    """Mean matching: mean of inlet and dew point in the evaporator, of dew and bubble point in the condenser."""
    f = fluid(name)
    asked = _temperatures([-30.0, -10.0, 5.0], [30.0, 40.0, 48.0], "mean")
    p_evap, p_cond = matched_pressures(f, asked, subcooling_K)
    inlet = f.two_phase(p_evap, f.liquid(p_cond, subcooling_K).h_J_per_kg)

    np.testing.assert_allclose(0.5 * (f.dew(p_cond).T_K + f.bubble(p_cond).T_K), asked.T_cond_K, atol=1e-6)
    np.testing.assert_allclose(0.5 * (inlet.T_K + f.dew(p_evap).T_K), asked.T_evap_K, atol=1e-6)


@pytest.mark.parametrize("name", PURE)
def test_both_are_one_for_a_pure_fluid(name):
    """Without glide both conventions give the same pressures."""
    f = fluid(name)
    by_dew, by_mean = (matched_pressures(f, _temperatures(-10.0, 40.0, word), 2.0) for word in ("dew", "mean"))

    np.testing.assert_allclose(by_mean, by_dew, rtol=1e-7)


@pytest.mark.parametrize("name", ["R407C", "R448A", "R454C", "R455A"])
def test_glide_lifts_the_pressures_of_mean_matching(name):
    """A gliding blend matched by its mean runs at higher pressures than matched by its dew points, by half a glide."""
    f = fluid(name)
    dew = matched_pressures(f, _temperatures(-10.0, 40.0, "dew"), 0.0)
    mean = matched_pressures(f, _temperatures(-10.0, 40.0, "mean"), 0.0)
    glide = float(f.dew(mean[1]).T_K - f.bubble(mean[1]).T_K)

    assert mean[0] > dew[0]
    assert mean[1] > dew[1]
    assert float(f.dew(mean[1]).T_K - f.dew(dew[1]).T_K) == pytest.approx(glide / 2.0, abs=1e-3)


@given(
    st.sampled_from(PURE + BLENDS),
    st.sampled_from(["dew", "mean"]),
    st.floats(-35.0, 10.0),
    st.floats(20.0, 48.0),
    st.floats(0.0, 8.0),
)
@settings(max_examples=150, deadline=None)
def test_forth_and_back(name, convention, T_evap_C, T_cond_C, subcooling_K):
    """The temperatures of a cycle solved at matched pressures are those asked for, in either convention."""
    f = fluid(name)
    asked = _temperatures(T_evap_C, T_cond_C, convention)
    pressures = matched_pressures(f, asked, subcooling_K)
    # An efficiency of one keeps every discharge within the tables.
    cycle = solve_cycle(f, *pressures, Settings(subcooling_K=subcooling_K, isentropic_efficiency=1.0))
    found = cycle_temperatures(cycle, convention)

    assert found.convention == convention
    assert float(found.T_evap_K) == pytest.approx(float(asked.T_evap_K), abs=1e-4)
    assert float(found.T_cond_K) == pytest.approx(float(asked.T_cond_K), abs=1e-4)


@pytest.mark.parametrize("name", ["R134a", "R448A"])
def test_arrays_match_single_values(name):
    """An array of conditions gives what each condition gives alone."""
    f = fluid(name)
    T_evap, T_cond, cooling = np.array([-25.0, 0.0, 7.0])[:, None], np.array([30.0, 45.0]), 4.0
    p_evap, p_cond = matched_pressures(f, _temperatures(T_evap, T_cond, "mean"), cooling)

    assert p_evap.shape == (3, 2)
    for i in range(3):
        for j in range(2):
            one = matched_pressures(f, _temperatures(T_evap[i, 0], T_cond[j], "mean"), cooling)
            assert float(p_evap[i, j]) == pytest.approx(float(one[0]), rel=1e-10)
            assert float(np.broadcast_to(p_cond, (3, 2))[i, j]) == pytest.approx(float(one[1]), rel=1e-10)


@pytest.mark.parametrize("convention", ["dew", "mean"])
@pytest.mark.parametrize(
    ("name", "T_evap_C", "T_cond_C", "words"),
    [
        ("R744", -10.0, 40.0, r"condensing at 40\.0 degC is above the critical temperature of R744, 31\.0 degC"),
        ("R410A", -10.0, 70.0, r"condensing at 70\.0 degC is too close to the critical temperature of R410A, 71\.2"),
        ("R744", -60.0, 10.0, r"evaporating at -60\.0 degC is below the range of the model of R744.* -56\.6 degC"),
        ("R718", -5.0, 40.0, r"evaporating at -5\.0 degC is below the range .* begins at 0\.0 degC"),
    ],
)
def test_temperatures_out_of_reach(name, T_evap_C, T_cond_C, words, convention):
    """A temperature a fluid cannot have is refused in the words of the trade, also as one of an array."""
    for T_cond in (T_cond_C, [T_cond_C - 5.0, T_cond_C]):
        with pytest.raises(OutsideValidRangeError, match=words):
            matched_pressures(fluid(name), _temperatures(T_evap_C, T_cond, convention), 0.0)


@pytest.mark.parametrize("convention", ["dew", "mean"])
def test_lenient_gives_nan(convention):
    """A lenient fluid gives NaN where a temperature is out of reach, and the usual pressures elsewhere."""
    f = fluid("R448A")
    asked = _temperatures([-20.0, -20.0, -130.0, np.nan], [40.0, 95.0, 40.0, 40.0], convention)
    p_evap, p_cond = matched_pressures(f.as_lenient(), asked, 2.0)
    usual = matched_pressures(f, _temperatures(-20.0, 40.0, convention), 2.0)

    np.testing.assert_allclose([p_evap[0], p_cond[0]], usual, rtol=1e-10)
    assert np.isnan(p_cond[1])
    assert np.all(np.isnan(p_evap[2:]))


def test_mean_close_to_the_end_of_the_range():
    """A mean that only pressures beyond the model would give has no solution, or is out of range: never a number."""
    f = fluid("R455A")
    highest = f.T_range_K[1] - KELVIN
    with pytest.raises((NoSolutionError, OutsideValidRangeError), match="R455A"):
        matched_pressures(f, _temperatures(-10.0, highest - 0.1, "mean"), 0.0)
