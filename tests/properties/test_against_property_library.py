"""Tables and equation level against direct calls of the property library, CoolProp, with the phase imposed.

With the phase imposed and temperature and pressure given, the library has no root to choose for itself. The
pseudo-pure fits of four blends, equations of their own, are the second check.
"""

from functools import cache

import CoolProp.CoolProp as CoolProp
import numpy as np
import pytest

from retrofit.properties import fluid
from retrofit.properties.components import mixture_of, provide_pairs
from retrofit.properties.equation import EquationModel
from retrofit.properties.table import greatest_subcooling

KELVIN = 273.15
TABLES = 1e-5  # what the tables are built to, away from the critical point
NAMES = ("R134a", "R32", "R290", "R717", "R744", "R718", "R245fa", "R600a", "R1234yf", "R1233zd(E)")
BLENDS = ("R410A", "R404A", "R454B", "R448A", "R455A", "R463A", "R515B", "R507A", "R438A", "R513A")


@cache
def _library(name):
    mixture = mixture_of(name)
    provide_pairs(mixture)
    state = CoolProp.AbstractState("HEOS", "&".join(mixture.library_names))
    if not mixture.is_pure:
        state.set_mass_fractions(list(mixture.mass_fractions))
    return state


def _imposed(name, phase, p, T):
    """Return h, s and density of each state from the library, phase imposed."""
    state = _library(name)
    state.specify_phase(phase)
    rows = []
    for p_one, T_one in zip(p, T, strict=True):
        state.update(CoolProp.PT_INPUTS, p_one, T_one)
        rows.append((state.hmass(), state.smass(), state.rhomass()))
    return np.array(rows).T


def _saturation(name, seed, count=40):
    """Return the fluid, random dew temperatures and pressures at least 10 K below critical, and the latent heat."""
    f = fluid(name)
    low = max(f.T_range_K[0] + 5.0, 223.15)
    T = np.random.default_rng(seed).uniform(low, f.T_critical_K - 10.0, count)
    p = f.p_dew(T)
    middle = f.p_dew(0.5 * (low + f.T_critical_K))
    return f, T, p, float(f.dew(middle).h_J_per_kg - f.bubble(middle).h_J_per_kg)


@pytest.mark.parametrize("name", NAMES + BLENDS)
def test_vapour(name):
    """Superheated vapour from tables equals the library's at random states: h, s, density, and both inverses."""
    f, T, p, latent = _saturation(name, 1)
    heat = np.random.default_rng(2).uniform(1.0, 100.0, T.size)
    h, s, rho = _imposed(name, CoolProp.iphase_gas, p, T + heat)
    state = f.vapour(p, heat)

    np.testing.assert_allclose(state.T_K, T + heat, rtol=1e-6)
    np.testing.assert_allclose(state.density_kg_per_m3, rho, rtol=TABLES)
    np.testing.assert_allclose(state.h_J_per_kg, h, rtol=0, atol=TABLES * latent)
    np.testing.assert_allclose(state.s_J_per_kgK, s, rtol=0, atol=TABLES * latent / 273.15)
    np.testing.assert_allclose(f.h_at_entropy(p, s), h, rtol=0, atol=TABLES * latent)
    np.testing.assert_allclose(f.T_at_enthalpy(p, h), T + heat, rtol=TABLES)


@pytest.mark.parametrize("name", NAMES + BLENDS)
def test_liquid(name):
    """Subcooled liquid from tables equals the library's at random states."""
    f, T, p, latent = _saturation(name, 3)
    bubble = f.bubble(p).T_K
    cooling = np.random.default_rng(4).uniform(0.02, 0.4, T.size) * greatest_subcooling(bubble, f.T_range_K[0])
    h, s, rho = _imposed(name, CoolProp.iphase_liquid, p, bubble - cooling)
    state = f.liquid(p, cooling)

    np.testing.assert_allclose(state.T_K, bubble - cooling, rtol=1e-6)
    np.testing.assert_allclose(state.density_kg_per_m3, rho, rtol=TABLES)
    np.testing.assert_allclose(state.h_J_per_kg, h, rtol=0, atol=TABLES * latent)
    np.testing.assert_allclose(state.s_J_per_kgK, s, rtol=0, atol=2 * TABLES * latent / 273.15)


@pytest.mark.parametrize("name", ["R134a", "R717", "R454B", "R448A"])
def test_equation_level(name):
    """The equation level finds the library's own gas and liquid at random pressures and temperatures."""
    f, T, p, _ = _saturation(name, 5, 20)
    model, bubble = EquationModel(mixture_of(name)), f.bubble(p)
    gas = _imposed(name, CoolProp.iphase_gas, p, T + 12.0)
    liquid = _imposed(name, CoolProp.iphase_liquid, p, bubble.T_K - 7.0)
    found_gas = [model.gas(*at) for at in zip(p, T + 12.0, strict=True)]
    at_liquid = zip(p, bubble.T_K - 7.0, bubble.density_kg_per_m3, strict=True)
    found_liquid = [model.liquid(*at) for at in at_liquid]

    for states, expected in ((found_gas, gas), (found_liquid, liquid)):
        found = np.array([(one.h_J_per_kg, one.s_J_per_kgK, one.density_kg_per_m3) for one in states]).T
        np.testing.assert_allclose(found, expected, rtol=1e-8)


@pytest.mark.parametrize("name", NAMES)
def test_pure_saturation(name):
    """Saturation of single substances equals the library's at random temperatures."""
    f, T, p, latent = _saturation(name, 6)
    state, rows = _library(name), []
    state.unspecify_phase()
    for T_one in T:
        found = []
        for quality in (0.0, 1.0):
            state.update(CoolProp.QT_INPUTS, quality, T_one)
            found += [state.p(), state.hmass(), state.rhomass()]
        rows.append(found)
    p_l, h_l, rho_l, p_v, h_v, rho_v = np.array(rows).T

    np.testing.assert_allclose(p, p_v, rtol=TABLES)
    np.testing.assert_allclose(f.p_bubble(T), p_l, rtol=TABLES)
    np.testing.assert_allclose(f.bubble(p).density_kg_per_m3, rho_l, rtol=TABLES)
    np.testing.assert_allclose(f.dew(p).density_kg_per_m3, rho_v, rtol=TABLES)
    np.testing.assert_allclose(f.bubble(p).h_J_per_kg, h_l, rtol=0, atol=TABLES * latent)
    np.testing.assert_allclose(f.dew(p).h_J_per_kg, h_v, rtol=0, atol=TABLES * latent)


@pytest.mark.parametrize("name", ["R404A", "R407C", "R410A", "R507A"])
def test_pseudo_pure_fit(name):
    """Blends agree with their pseudo-pure fits within what those state: 0.5 % in saturation pressure (Lemmon 2003,
    Int. J. Thermophys. 24, 991; the figure is from memory), and so within 1 % in vapour density."""
    f = fluid(name)
    for T in np.arange(-60.0, f.T_critical_K - KELVIN - 8.0, 4.0) + KELVIN:
        p_bubble, p_dew = (CoolProp.PropsSI("P", "T", T, "Q", quality, name) for quality in (0, 1))

        assert float(f.p_bubble(T)) == pytest.approx(p_bubble, rel=5e-3)
        assert float(f.p_dew(T)) == pytest.approx(p_dew, rel=5e-3)
        density = float(f.dew(f.p_dew(T)).density_kg_per_m3)
        assert density == pytest.approx(CoolProp.PropsSI("D", "T", T, "Q", 1, name), rel=1e-2)
