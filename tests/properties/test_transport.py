"""Viscosity of liquid and vapour: against the property library's own models, published values and mixing rules."""

import chemicals
import CoolProp.CoolProp as CoolProp
import numpy as np
import pytest

from retrofit.errors import OutsideValidRangeError
from retrofit.properties import fluid
from retrofit.properties.components import mixture_of
from retrofit.properties.store import read_fluid, write_fluid
from retrofit.properties.transport import Components, mixed_liquid, mixed_vapour

KELVIN = 273.15
PURE = ("R22", "R32", "R125", "R134a", "R143a", "R152a", "R290", "R600a", "R717", "R718", "R744", "R1234yf", "R1270")
# Of the interpolation, as stated for the nodes; the models themselves are stated to a few per cent.
INTERPOLATION, INTERPOLATION_NEAR_CRITICAL = 1e-3, 1e-2


def _temperatures(f):
    return np.linspace(f.T_range_K[0], f.T_critical_K - 6.0, 23)


def _tolerance(f, T):
    return np.where(T < 0.9 * f.T_critical_K, INTERPOLATION, INTERPOLATION_NEAR_CRITICAL)


def _library(name):
    return CoolProp.AbstractState("HEOS", name)


@pytest.mark.parametrize("name", PURE)
def test_liquid_of_a_pure_fluid(name):
    """The tabled viscosity of saturated liquid is the property library's."""
    f, state = fluid(name), _library(name)
    T = _temperatures(f)
    expected = []
    for one in T:
        state.update(CoolProp.QT_INPUTS, 0.0, one)
        expected.append(state.viscosity())

    assert np.all(np.abs(f.viscosity_liquid(f.p_bubble(T)) / expected - 1.0) < INTERPOLATION)


def _in_vapour(state, p, T, superheat):
    state.unspecify_phase()
    if superheat == 0.0:
        state.update(CoolProp.QT_INPUTS, 1.0, T)
    else:
        state.specify_phase(CoolProp.iphase_gas)
        state.update(CoolProp.PT_INPUTS, p, T + superheat)
    return state.viscosity()


@pytest.mark.parametrize("superheat", [0.0, 3.0, 20.0, 70.0, 150.0])
# Left out: the library's model of R143a finds no solution at some of its thinnest states.
@pytest.mark.parametrize("name", [name for name in PURE if name != "R143a"])
def test_vapour_of_a_pure_fluid(name, superheat):
    """The tabled viscosity of saturated and superheated vapour is the property library's."""
    f, state = fluid(name), _library(name)
    T = _temperatures(f)
    p = f.p_dew(T)
    expected = [_in_vapour(state, *pair, superheat) for pair in zip(p, T, strict=True)]

    assert np.all(np.abs(f.viscosity_vapour(p, T + superheat) / expected - 1.0) < _tolerance(f, T))


def test_water_against_the_international_formulation():
    """Water at 298.15 K and 1 bar: 890.0 uPa s, steam at 373.15 K: 12.27 uPa s (IAPWS 2008 and steam tables)."""
    f = fluid("R718")

    assert f.viscosity_liquid(f.p_bubble(298.15)) == pytest.approx(890.0e-6, rel=1e-3)
    # From memory of the steam tables: a sanity check.
    assert f.viscosity_vapour(f.p_dew(373.15), 373.15) == pytest.approx(12.27e-6, rel=1e-2)


def test_vapour_rule_worked_example():
    """CO2, O2 and N2 at 293 K: the textbook example of the rule (from memory: 1714e-7 g/(cm s)) comes out."""
    y, mu = np.array([0.133, 0.039, 0.828]), np.array([146.2e-7, 203.1e-7, 175.4e-7])
    found = mixed_vapour(y, mu, np.array([44.01, 32.00, 28.02]))

    assert found == pytest.approx(171.4e-7, abs=0.05e-7)


def test_vapour_rule_against_another_library():
    """The rule for vapour is that of an independent library (chemicals), also for many states at once."""
    random = np.random.default_rng(5)
    y, masses = random.dirichlet(np.ones(4)), random.uniform(17.0, 170.0, 4)
    mu = random.uniform(8e-6, 20e-6, (6, 4))
    expected = [chemicals.viscosity.Wilke(list(y), list(row), list(masses)) for row in mu]

    np.testing.assert_allclose(mixed_vapour(y, mu, masses), expected, rtol=1e-12)


def test_rules_of_one_component():
    """A mixture of a fluid with itself has that fluid's viscosity."""
    x, mu = np.array([0.3, 0.7]), np.full((3, 2), 1.3e-5)

    np.testing.assert_allclose(mixed_liquid(x, mu), 1.3e-5, rtol=1e-12)
    np.testing.assert_allclose(mixed_vapour(x, mu, np.array([50.0, 50.0])), 1.3e-5, rtol=1e-12)


def test_liquid_rule_by_hand():
    """Half and half by amount: the geometric mean, sqrt(100 x 400) = 200."""
    assert mixed_liquid(np.array([0.5, 0.5]), np.array([100e-6, 400e-6])) == pytest.approx(200e-6)


# The library fitted these blends' viscosity as if each were one fluid (I. H. Bell, Purdue 2016): another way
# to the same number. What the docstring of the module states is asserted here.
@pytest.mark.parametrize(
    ("name", "liquid", "vapour"),
    [
        ("R404A", 0.15, 0.07),
        ("R407C", 0.07, 0.07),
        ("R410A", 0.07, 0.07),
        ("R507A", 0.20, 0.07),
    ],
)
def test_blends_against_fits_as_one_fluid(name, liquid, vapour):
    """The mixing rules come as close to fits of whole blends as is stated, from -40 to 40 degC."""
    f, state = fluid(name), _library(name)
    for T in np.linspace(233.15, 313.15, 9):
        state.update(CoolProp.QT_INPUTS, 0.0, T)
        assert f.viscosity_liquid(f.p_bubble(T)) == pytest.approx(state.viscosity(), rel=liquid)
        state.update(CoolProp.QT_INPUTS, 1.0, T)
        assert f.viscosity_vapour(f.p_dew(T), T) == pytest.approx(state.viscosity(), rel=vapour)


@pytest.mark.parametrize(
    ("name", "missing"),
    [
        ("R1233zd(E)", "R1233zd(E)"),
        ("R466A", "R13I1"),
        ("R502", "R115"),
        ("R474A", "R1132(E)"),
        ("R514A", "R1336mzz(Z) and R1130(E)"),
    ],
)
def test_no_model(name, missing):
    """Without a model for a component the viscosity is unknown everywhere, and the component is named."""
    f = fluid(name)
    p = f.p_dew(280.0)

    assert np.isnan(f.viscosity_liquid(f.p_bubble(280.0)))
    assert np.isnan(f.viscosity_vapour(p, 290.0))
    assert f.viscosity_gaps == (f"the property library has no viscosity model for {missing}",)


@pytest.mark.parametrize(("name", "component", "T_critical_C"), [("R455A", "R744", 30.98), ("R404A", "R125", 66.02)])
def test_component_above_its_critical_temperature(name, component, T_critical_C):
    """Where a component is no liquid any more the rule has no value: NaN, named, and the vapour still known."""
    f = fluid(name)
    below, above = f.p_bubble(np.array([T_critical_C - 3.0, T_critical_C + 0.1]) + KELVIN)

    assert f.viscosity_liquid(below) > 0.0
    assert np.isnan(f.viscosity_liquid(above))
    assert f.viscosity_vapour(f.p_dew(T_critical_C + 1.0 + KELVIN), T_critical_C + 20.0 + KELVIN) > 0.0
    assert f"{T_critical_C:.1f} degC, the critical temperature of {component}" in f.viscosity_gaps[0]


def test_known_everywhere():
    """A pure fluid with a model has no gap, from the lowest to the highest temperature."""
    f = fluid("R134a")
    T = np.array(f.T_range_K)

    assert f.viscosity_gaps == ()
    assert np.all(np.isfinite(f.viscosity_liquid(f.p_bubble(T))))
    assert np.all(np.isfinite(f.viscosity_vapour(f.p_dew(T), T)))


@pytest.mark.parametrize("name", ["R142b", "R227ea", "R218", "R11"])
def test_thin_vapour(name):
    """Where a model finds no solution in thin vapour, the viscosity at vanishing density takes its place: no gap."""
    f = fluid(name)
    T = np.linspace(f.T_range_K[0], 0.7 * f.T_critical_K, 15)
    found, state = f.viscosity_vapour(f.p_dew(T), T), _library(name)
    state.specify_phase(CoolProp.iphase_gas)
    thin = []
    for one in T:
        state.update(CoolProp.DmolarT_INPUTS, 1e-6, one)
        thin.append(state.viscosity())

    np.testing.assert_allclose(found, thin, rtol=0.05)  # as stated for thin vapour


@pytest.mark.parametrize("name", ["R448A", "R454B", "R513A", "R290", "R407C"])
def test_course_with_temperature(name):
    """Liquid thins and vapour thickens on warming, and liquid is always the thicker."""
    f = fluid(name)
    T = np.linspace(233.15, 323.15, 40)
    liquid, vapour = f.viscosity_liquid(f.p_bubble(T)), f.viscosity_vapour(f.p_dew(T), T)

    assert np.all(np.diff(liquid) < 0.0)
    assert np.all(np.diff(vapour) > 0.0)
    assert np.all(liquid > vapour)
    heated = f.viscosity_vapour(f.p_dew(253.15), 253.15 + np.linspace(0.0, 100.0, 30))
    assert np.all(np.diff(heated) > 0.0)


def test_blend_lies_between_its_components():
    """The liquid of a blend lies between the thinnest and the thickest of its components."""
    f, parts = fluid("R448A"), Components(mixture_of("R448A"))
    for T in (240.0, 270.0, 300.0):
        each = parts.liquid(T)
        assert min(each) < f.viscosity_liquid(f.p_bubble(T)) < max(each)


def test_outside_the_range():
    """Outside the model's range viscosity is refused like every state, and NaN from a lenient fluid."""
    f = fluid("R455A")
    p = f.p_dew(270.0)
    for ask in (
        lambda f: f.viscosity_liquid(1e8),
        lambda f: f.viscosity_vapour(p, 260.0),
        lambda f: f.viscosity_vapour(p, 700.0),
        lambda f: f.viscosity_vapour(np.nan, 300.0),
    ):
        with pytest.raises(OutsideValidRangeError, match=r"R455A: .* is outside the range of its model"):
            ask(f)
        assert np.isnan(ask(f.as_lenient()))


@pytest.mark.parametrize("name", ["R455A", "R134a", "R466A"])
def test_stored_and_read(name, tmp_path):
    """Viscosity and the reasons for its gaps come back from the store as they went in."""
    f = fluid(name)
    assert write_fluid(mixture_of(name), f, tmp_path)
    again = read_fluid(mixture_of(name), tmp_path)

    assert again.viscosity_gaps == f.viscosity_gaps
    T = np.array([230.0, 260.0, 300.0, 320.0])
    np.testing.assert_array_equal(again.viscosity_liquid(f.p_bubble(T)), f.viscosity_liquid(f.p_bubble(T)))
    np.testing.assert_array_equal(again.viscosity_vapour(f.p_dew(T), T), f.viscosity_vapour(f.p_dew(T), T))
