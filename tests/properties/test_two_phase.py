"""Two-phase states: the quality comes back as it went in, and matter and equilibrium hold."""

import CoolProp.CoolProp as CoolProp
import numpy as np
import pytest

from retrofit.properties import fluid
from retrofit.properties.components import mixture_of
from retrofit.properties.equation import EquationModel
from retrofit.properties.range import saturation_span
from retrofit.properties.two_phase import walk_qualities

T_K = 263.15  # -10 degC
NEAR_AZEOTROPES = ("R502", "R507A", "R509A", "R512A", "R511A", "R513A", "R515B", "R500")
GLIDING = ("R454B", "R407C", "R448A", "R455A", "R463A", "R470A")
QUALITIES = (0.05, 0.35, 0.65, 0.95)


def _states(name, qualities):
    model = EquationModel(mixture_of(name))
    (bubble,) = model.trace(saturation_span(model).bubble, [T_K])
    return model, bubble, walk_qualities(model, bubble, qualities)


@pytest.mark.parametrize("name", NEAR_AZEOTROPES + GLIDING)
def test_quality_comes_back(name):
    """The enthalpy of a quality gives that quality, not one minus it, at the right temperature."""
    _, bubble, states = _states(name, QUALITIES)
    found = fluid(name).two_phase(bubble.p_Pa, [state.h_J_per_kg for state in states])

    np.testing.assert_allclose(found.molar_quality, QUALITIES, atol=2e-4)
    np.testing.assert_allclose(found.quality, [state.quality for state in states], atol=2e-4)
    np.testing.assert_allclose(found.T_K, [state.T_K for state in states], atol=3e-3)
    np.testing.assert_allclose(1.0 / found.density_kg_per_m3, [1.0 / s.density_kg_per_m3 for s in states], rtol=1e-4)


@pytest.mark.parametrize("name", NEAR_AZEOTROPES + GLIDING)
def test_matter_and_equilibrium_hold(name):
    """Each state splits the overall composition, and every component has one fugacity in both phases."""
    model, bubble, states = _states(name, QUALITIES)
    for quality, state in zip(QUALITIES, states, strict=True):
        np.testing.assert_allclose((1.0 - quality) * state.x + quality * state.y, model.z, atol=1e-9)
        assert state.p_Pa == bubble.p_Pa
        assert model.fugacity_mismatch(state) < 1e-6


@pytest.mark.parametrize("name", NEAR_AZEOTROPES)
def test_lever_rule_of_near_azeotropes(name):
    """Where both phases are nearly alike, the quality is nearly the share of the latent heat."""
    f = fluid(name)
    p = f.p_bubble(T_K)
    low, high = f.bubble(p).h_J_per_kg, f.dew(p).h_J_per_kg

    assert float(f.two_phase(p, low + 0.35 * (high - low)).quality) == pytest.approx(0.35, abs=0.02)


@pytest.mark.parametrize("name", ["R134a", "R290", "R717"])
def test_pure_fluids_follow_the_lever_rule(name):
    """A single substance has exactly the share of the latent heat, at the saturation temperature."""
    f = fluid(name)
    p, share = f.p_dew(T_K), np.linspace(0.0, 1.0, 11)
    low, high = f.bubble(p), f.dew(p)
    state = f.two_phase(p, low.h_J_per_kg + share * (high.h_J_per_kg - low.h_J_per_kg))

    np.testing.assert_allclose(state.quality, share, atol=1e-12)
    np.testing.assert_allclose(state.molar_quality, share, atol=1e-12)
    np.testing.assert_allclose(state.T_K, T_K, rtol=1e-7)
    np.testing.assert_allclose(
        1.0 / state.density_kg_per_m3,
        (1.0 - share) / low.density_kg_per_m3 + share / high.density_kg_per_m3,
        rtol=1e-12,
    )


@pytest.mark.parametrize("name", NEAR_AZEOTROPES + GLIDING)
def test_the_ends_are_the_saturated_states(name):
    """At the bubble and dew enthalpy the two-phase state is the saturated one."""
    f = fluid(name)
    p = f.p_bubble(T_K)
    for end in (f.bubble(p), f.dew(p)):
        state = f.two_phase(p, end.h_J_per_kg)
        for field in ("T_K", "s_J_per_kgK", "density_kg_per_m3"):
            np.testing.assert_allclose(getattr(state, field), getattr(end, field), rtol=1e-9)
        np.testing.assert_allclose([state.quality, state.molar_quality], end.quality, atol=1e-9)


@pytest.mark.parametrize("name", ["R600a", "R245fa", "R601", "R1234yf", "R227ea"])
def test_isentropic_compression_that_ends_wet(name):
    """From little superheat some fluids end wet: enthalpy and temperature as the library's own pure-fluid flash."""
    f = fluid(name)
    T_evap = max(268.15, f.T_range_K[0] + 30.0)
    p_low, p_high = f.p_dew(T_evap), f.p_dew(T_evap + np.array([20.0, 40.0, 55.0]))
    for superheat in (0.0, 1.0, 4.0, 12.0):
        s = float(f.vapour(p_low, superheat).s_J_per_kgK)
        h = [CoolProp.PropsSI("H", "P", p, "S", s, name) for p in p_high]
        T = [CoolProp.PropsSI("T", "P", p, "S", s, name) for p in p_high]
        latent = f.dew(p_high).h_J_per_kg - f.bubble(p_high).h_J_per_kg
        state = f.above_bubble(p_high, h)

        np.testing.assert_allclose(f.h_at_entropy(p_high, s), h, rtol=0, atol=1e-5 * np.min(latent))
        np.testing.assert_allclose(f.T_at_enthalpy(p_high, h), T, atol=3e-3)
        np.testing.assert_allclose(state.s_J_per_kgK, s, rtol=0, atol=1e-5 * np.min(latent) / T_evap)


def test_which_compressions_end_wet():
    """R-600a, R-245fa and R-601 from 1 K superheat end wet, R-134a and R-717 dry: the known shape of their domes."""
    ends = {}
    for name in ("R600a", "R245fa", "R601", "R134a", "R717"):
        f = fluid(name)
        p_high = f.p_dew(313.15)
        h = f.h_at_entropy(p_high, f.vapour(f.p_dew(268.15), 1.0).s_J_per_kgK)
        ends[name] = bool(h < f.dew(p_high).h_J_per_kg)

    assert ends == {"R600a": True, "R245fa": True, "R601": True, "R134a": False, "R717": False}


def test_wet_end_of_a_blend():
    """A gliding blend's wet state of given entropy lies on the equation level's walk up in quality."""
    name = "R459B"
    _, bubble, states = _states(name, (0.5, 0.8, 0.9, 0.97))
    f = fluid(name)
    for state in states:
        latent = float(f.dew(bubble.p_Pa).h_J_per_kg - f.bubble(bubble.p_Pa).h_J_per_kg)
        h = float(f.h_at_entropy(bubble.p_Pa, state.s_J_per_kgK))

        assert h == pytest.approx(state.h_J_per_kg, abs=1e-4 * latent)
        assert float(f.T_at_enthalpy(bubble.p_Pa, state.h_J_per_kg)) == pytest.approx(state.T_K, abs=3e-3)


@pytest.mark.parametrize("name", NEAR_AZEOTROPES + GLIDING + ("R134a", "R600a"))
def test_entropy_of_any_wet_state_gives_its_enthalpy(name):
    """From saturated liquid to saturated vapour, the entropy of a state leads back to its enthalpy."""
    f = fluid(name)
    p = np.geomspace(f.p_bubble(f.T_range_K[0] + 15.0), 0.85 * f.p_dew(f.T_range_K[1]), 8)[:, None]
    low, high = f.bubble(p).h_J_per_kg, f.dew(p).h_J_per_kg
    h = low + np.array([0.0, 1e-3, 0.02, 0.1, 0.5, 0.9, 0.999, 1.0]) * (high - low)
    back = f.h_at_entropy(p, f.two_phase(p, h).s_J_per_kgK)

    np.testing.assert_allclose((back - h) / (high - low), 0.0, atol=1e-6)
