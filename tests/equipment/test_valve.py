"""Expansion valve, capillary and distributor: against ratings, an independent recalculation and by hand."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.cycle import Settings, Temperatures, matched_pressures, solve_cycle
from retrofit.equipment.valve import (
    Distribution,
    Throttle,
    distributor_loading,
    pressure_over_valve,
    throttle_fit,
)
from retrofit.properties import fluid

KELVIN = 273.15
SUBCOOLING_K = 5.0


def _throttle(name, T_evap_C, T_cond_C):
    """Return a refrigerant at the valve and its cooling per swept volume, at equal mean temperatures."""
    f = fluid(name)
    wanted = Temperatures(T_evap_C + KELVIN, T_cond_C + KELVIN, "mean")
    p_evap, p_cond = matched_pressures(f, wanted, SUBCOOLING_K)
    cycle = solve_cycle(f, p_evap, p_cond, Settings(subcooling_K=SUBCOOLING_K))
    density = f.liquid(p_cond, SUBCOOLING_K).density_kg_per_m3
    difference = pressure_over_valve(p_cond, p_evap)
    return Throttle(cycle.refrigerating_effect_J_per_kg, density, difference), cycle.volumetric_capacity_J_per_m3


def _fit(old, new, T_evap_C, T_cond_C):
    (before, cooling_before), (after, cooling_after) = (_throttle(name, T_evap_C, T_cond_C) for name in (old, new))
    return throttle_fit(after, before, cooling_after / cooling_before)


def test_fit_by_hand():
    """q 150 for 120 kJ/kg, rho 1000 for 1210 kg/m3, dp 9 for 10 bar, and 10 % more cooling to do.

    Flow sqrt(1000 x 9 / (1210 x 10)) = sqrt(0.743802) = 0.862440; capacity x 1.25 = 1.078050; fit / 1.1 = 0.980045.
    """
    found = throttle_fit(Throttle(150e3, 1000.0, 9e5), Throttle(120e3, 1210.0, 10e5), 1.1)

    assert found.flow_ratio == pytest.approx(0.862440, abs=1e-6)
    assert found.capacity_ratio == pytest.approx(1.078050, abs=1e-6)
    assert found.fit == pytest.approx(0.980045, abs=1e-6)
    assert found.load_ratio == 1.1


def test_pressure_over_the_valve():
    """Every loss between the exchangers is taken off: 15 - 4 - 0.3 - 1.5 = 9.2 bar."""
    assert pressure_over_valve(15e5, 4e5, 0.3e5, 1.5e5) == pytest.approx(9.2e5)
    np.testing.assert_allclose(pressure_over_valve([15e5, 12e5], 4e5, 1e5), [10e5, 7e5])


# A valve rating table read for this: R-407C and R-422D carry 0.92 and 0.71 of the R-22 rating at 40 degF evaporating.
# The rule of the orifice is stated to come within about a tenth, of which the first is an example of the worst.
@pytest.mark.parametrize(("new", "rated"), [("R422D", 0.71), ("R407C", 0.92)])
def test_against_valve_ratings(new, rated):
    """The ratio of the rule lies near a published rating; condensing is not printed, 100 degF is taken."""
    assert _fit("R22", new, 4.4, 37.8).capacity_ratio == pytest.approx(rated, rel=0.15)


# Own recalculation with another program, printed to two digits: orientation, not an outside authority. Its
# conditions are known only as medium and low temperature and air conditioning.
@pytest.mark.parametrize(
    ("old", "new", "T_evap_C", "T_cond_C", "capacity"),
    [
        ("R404A", "R448A", -10.0, 40.0, 1.39),
        ("R404A", "R449A", -10.0, 40.0, 1.36),
        ("R404A", "R407A", -10.0, 40.0, 1.36),
        ("R404A", "R407H", -10.0, 40.0, 1.60),
        ("R404A", "R452A", -10.0, 40.0, 1.05),
        ("R404A", "R454C", -10.0, 40.0, 1.21),
        ("R404A", "R407F", -35.0, 40.0, 1.59),
        ("R22", "R422D", 5.0, 45.0, 0.68),
        ("R22", "R417A", 5.0, 45.0, 0.72),
        ("R22", "R427A", 5.0, 45.0, 0.93),
        ("R134a", "R513A", 5.0, 40.0, 0.85),
        ("R134a", "R1234yf", 5.0, 40.0, 0.74),
        ("R134a", "R1234ze(E)", 5.0, 40.0, 0.79),
        ("R410A", "R32", 5.0, 45.0, 1.52),
        ("R410A", "R454B", 5.0, 45.0, 1.18),
    ],
)
def test_against_a_recalculation(old, new, T_evap_C, T_cond_C, capacity):
    """Capacity ratios of usual changes lie within 5 % of an earlier calculation at nearby conditions."""
    assert _fit(old, new, T_evap_C, T_cond_C).capacity_ratio == pytest.approx(capacity, rel=0.05)


def test_same_refrigerant_fits():
    """A refrigerant against itself, with the same load, fits as today."""
    one, _ = _throttle("R404A", -10.0, 40.0)
    found = throttle_fit(one, one, 1.0)

    assert found.flow_ratio == found.capacity_ratio == found.fit == 1.0


def test_no_pressure_left():
    """Where losses take all pressure nothing passes; with none today there is nothing to compare with."""
    some, none = Throttle(150e3, 1100.0, 8e5), Throttle(150e3, 1100.0, -1e4)

    assert throttle_fit(none, some, 1.0).capacity_ratio == 0.0
    assert throttle_fit(none, some, 1.0).fit == 0.0
    assert np.isnan(throttle_fit(some, none, 1.0).capacity_ratio)


def test_unknown_stays_unknown():
    """A loss that is not known leaves the fit unknown."""
    some = Throttle(150e3, 1100.0, 8e5)
    found = throttle_fit(Throttle(150e3, 1100.0, pressure_over_valve(15e5, 4e5, np.nan)), some, 1.0)

    assert np.isnan(found.capacity_ratio)
    assert np.isnan(found.fit)


positive = st.floats(0.2, 5.0)


@given(effect=positive, density=positive, difference=positive, load=positive, by=st.floats(1.01, 3.0))
def test_fit_grows_with_what_drives_it(effect, density, difference, load, by):
    """Effect raises capacity in proportion, density and pressure by their root, and load lowers the fit."""
    old = Throttle(1.0, 1.0, 1.0)
    base = throttle_fit(Throttle(effect, density, difference), old, load).fit

    assert throttle_fit(Throttle(by * effect, density, difference), old, load).fit == pytest.approx(by * base)
    assert throttle_fit(Throttle(effect, by * density, difference), old, load).fit == pytest.approx(by**0.5 * base)
    assert throttle_fit(Throttle(effect, density, by * difference), old, load).fit == pytest.approx(by**0.5 * base)
    assert throttle_fit(Throttle(effect, density, difference), old, by * load).fit == pytest.approx(base / by)


def test_everything_broadcasts():
    """Many candidates against one refrigerant of today go at once."""
    new = Throttle([150e3, 160e3, 170e3], [1000.0, 1050.0, 1100.0], 9e5)
    found = throttle_fit(new, Throttle(120e3, 1210.0, 10e5), [1.0, 1.05, 1.1])

    assert found.fit.shape == found.load_ratio.shape == (3,)


def test_distributor_by_hand():
    """100 kW at 160 for 125 kJ/kg, 60 for 75 kg/m3: flow 0.78125, volume 0.97656, drop 0.76294.

    m = 0.625 for 0.8 kg/s; 0.78125 x 75/60 = 0.976563; 0.78125^2 x 75/60 = 0.762939.
    """
    found = distributor_loading(Distribution(100e3, 160e3, 60.0), Distribution(100e3, 125e3, 75.0))

    assert found.mass_flow_ratio == pytest.approx(0.78125)
    assert found.volume_flow_ratio == pytest.approx(0.976563, abs=1e-6)
    assert found.pressure_drop_ratio == pytest.approx(0.762939, abs=1e-6)
