"""Where a model ends: refused with the range in words, or NaN if asked to be lenient."""

import re

import numpy as np
import pytest

from retrofit.errors import NoModelError, OutsideValidRangeError, UnknownRefrigerantError
from retrofit.properties import fluid

KELVIN = 273.15


@pytest.mark.parametrize("name", ["R1132a", "R468A", "R473A"])
def test_missing_component(name):
    """A refrigerant with a component the property library lacks is refused, and the component named."""
    with pytest.raises(NoModelError, match=rf"{name} cannot be modelled: .*no equation of state for R1132a"):
        fluid(name)


def test_unknown_refrigerant():
    """A designation the catalogue does not have is refused with near ones."""
    with pytest.raises(UnknownRefrigerantError, match="R404A"):
        fluid("R404X")


@pytest.mark.parametrize(
    ("name", "T_C", "low", "high"),
    [
        ("R744", 40.0, r"-56\.6 degC", r"29\.0 degC"),
        ("R744", -70.0, r"-56\.6 degC", r"29\.0 degC"),
        ("R718", -5.0, r"0\.0 degC", r"371\.9 degC"),
        ("R134a", 100.0, r"-90\.0 degC", r"99\.1 degC"),
        ("R134a", -95.0, r"-90\.0 degC", r"99\.1 degC"),
        ("R410A", 75.0, r"-90\.0 degC", r"69\.2 degC"),
    ],
)
def test_saturation_temperature_outside(name, T_C, low, high):
    """A saturation temperature outside the model is refused with its value and the range, in degC."""
    message = rf"{name}: saturation temperature {T_C:.1f} degC .* is outside .*, {low} .* to {high}"
    for ask in (fluid(name).p_dew, fluid(name).p_bubble):
        with pytest.raises(OutsideValidRangeError, match=message):
            ask(T_C + KELVIN)
        with pytest.raises(OutsideValidRangeError, match=message):
            ask([0.5 * sum(fluid(name).T_range_K), T_C + KELVIN])


def test_ends_of_the_range_are_inside():
    """The stated ends themselves are answered, and a millikelvin beyond them is not."""
    for name in ("R744", "R134a", "R454B"):
        f = fluid(name)
        low, high = f.T_range_K

        assert np.all(np.isfinite(f.p_dew([low, high])))
        for T in (low - 1e-3, high + 1e-3):
            with pytest.raises(OutsideValidRangeError):
                f.p_dew(T)


def test_limits_of_r744_and_r718():
    """The triple and critical points of carbon dioxide and water, known to the printed digits, bound their models."""
    carbon_dioxide, water = fluid("R744"), fluid("R718")

    # Span and Wagner 1996 and IAPWS-95, both well-known constants: 216.592 K, 304.1282 K; 273.16 K, 647.096 K.
    assert carbon_dioxide.T_range_K[0] == pytest.approx(216.592, abs=0.001)
    assert carbon_dioxide.T_critical_K == pytest.approx(304.1282, abs=0.0001)
    assert carbon_dioxide.p_critical_Pa == pytest.approx(7.3773e6, abs=100)
    assert water.T_range_K[0] == pytest.approx(273.16, abs=0.001)
    assert water.T_critical_K == pytest.approx(647.096, abs=0.001)


CALLS = {
    "superheat": lambda f: f.vapour(f.p_dew(280.0), 300.0),
    "negative superheat": lambda f: f.vapour(f.p_dew(280.0), -0.5),
    "subcooling": lambda f: f.liquid(f.p_bubble(280.0), 120.0),
    "negative subcooling": lambda f: f.liquid(f.p_bubble(280.0), -0.5),
    "dew pressure": lambda f: f.dew(1e8),
    "dew pressure of zero": lambda f: f.dew(0.0),
    "bubble pressure": lambda f: f.bubble(-1e5),
    "pressure of a liquid": lambda f: f.liquid(1e9, 5.0),
    "pressure of a two-phase state": lambda f: f.two_phase(1e9, 2e5),
    "share of the way": lambda f: f.two_phase(f.p_dew(280.0), 1e7),
    "saturation temperature": lambda f: f.p_dew(np.nan),
}


@pytest.mark.parametrize("what", CALLS)
@pytest.mark.parametrize("name", ["R134a", "R454B"])
def test_state_outside(name, what):
    """A state outside a table is refused with what it is and the range; a lenient fluid gives NaN."""
    known = what.removeprefix("negative ").removesuffix(" of zero")
    with pytest.raises(OutsideValidRangeError, match=rf"{name}: {known}.* is outside the range of its model, .* to "):
        CALLS[what](fluid(name))
    state = CALLS[what](fluid(name).as_lenient())
    value = state if isinstance(state, np.ndarray | float) else state.h_J_per_kg

    assert np.all(np.isnan(value))


@pytest.mark.parametrize("name", ["R134a", "R454B"])
@pytest.mark.parametrize("call", ["h_at_entropy", "T_at_enthalpy"])
def test_gas_too_hot_is_refused_in_temperatures(name, call):
    """A reader knows temperatures, not entropies: the refusal says where the model of the gas ends.

    Just below that temperature the gas is answered (superheat from the dew point, by the model's own surface).
    """
    f = fluid(name)
    p = f.p_dew(280.0)
    with pytest.raises(
        OutsideValidRangeError, match=rf"{name}: at .* bar the gas would be hotter than \d+ degC"
    ) as told:
        getattr(f, call)(p, 1e8)
    hottest_K = float(re.search(r"than (\d+) degC", str(told.value)).group(1)) + 273.15
    below = f.vapour(p, hottest_K - 2.0 - 280.0)

    assert "J/" not in str(told.value)
    assert hottest_K > 400.0
    assert f.T_at_enthalpy(p, below.h_J_per_kg) == pytest.approx(hottest_K - 2.0, abs=0.01)
    assert np.isnan(getattr(f.as_lenient(), call)(p, 1e8))


def test_lenient_keeps_what_is_inside():
    """A lenient fluid gives NaN only where a state is outside, and the same numbers everywhere else."""
    strict, lenient = fluid("R454B"), fluid("R454B").as_lenient()
    T = np.array([150.0, 250.0, np.nan, 300.0, 400.0])
    p = lenient.p_dew(T)
    inside = np.array([False, True, False, True, False])

    np.testing.assert_array_equal(np.isfinite(p), inside)
    np.testing.assert_array_equal(p[inside], strict.p_dew(T[inside]))
    for state, same in (
        (lenient.vapour(p, 10.0), strict.vapour(p[inside], 10.0)),
        (lenient.liquid(p, 3.0), strict.liquid(p[inside], 3.0)),
        (lenient.dew(p), strict.dew(p[inside])),
    ):
        np.testing.assert_array_equal(state.h_J_per_kg[inside], same.h_J_per_kg)
        np.testing.assert_array_equal(np.isfinite(state.h_J_per_kg), inside)


def test_entropy_below_the_bubble_point():
    """An entropy below the bubble point's is no vapour: refused, not answered with a number."""
    f = fluid("R454B")
    p = f.p_dew(280.0)
    too_low = f.bubble(p).s_J_per_kgK - 50.0

    with pytest.raises(OutsideValidRangeError):
        f.h_at_entropy(p, too_low)
    assert np.isnan(f.as_lenient().h_at_entropy(p, too_low))


def test_stated_temperature_limit():
    """R-134a's equation is stated to 455 K (Tillner-Roth and Baehr 1994), and a blend's is the least of its parts."""
    assert fluid("R134a").T_limit_K == pytest.approx(455.0)
    assert fluid("R513A").T_limit_K <= 455.0
