"""Our saturated states against another open library, teqp, whose equations are coded independently.

The equations of state are the published ones in both, so agreement checks code and root finding, not physics. The
pair parameters it ships are stored in a form it does not read as meant, so they are converted here, by hand, for the
three blends of R-32, R-125 and R-134a.
"""

import json
from functools import cache
from pathlib import Path

import numpy as np
import pytest
import teqp

from retrofit.properties import fluid
from retrofit.properties.components import mixture_of
from retrofit.properties.equation import EquationModel
from retrofit.properties.range import saturation_span

KELVIN = 273.15
SAME = 1e-6
TABLES = 1e-5  # what the tables are built to
# The property library takes the exact gas constant for blends, teqp the mean of the components' own (1.1e-6 apart).
CODATA_2018 = 8.314462618
DATA = teqp.get_datapath()
# Lemmon and Jacobsen 2004, J. Phys. Chem. Ref. Data 33, 593: xi [K] and zeta [m3/mol] of
# T_red = sum x T_c + sum x_i x_j xi and v_red = sum x v_c + sum x_i x_j zeta; the name is of the excess function.
PAIRS = {
    ("R32", "R125"): (28.95, -6.008e-6, "R32-R125"),
    ("R32", "R134a"): (7.909, -2.039e-6, "R32-R134a"),
    ("R125", "R134a"): (-0.4326, -3.453e-7, "GeneralizedHFC"),
}


def _reducing(name):
    equation = json.loads((Path(DATA) / "dev" / "fluids" / f"{name}.json").read_text(encoding="utf-8"))["EOS"][0]
    return equation["STATES"]["reducing"]["T"], 1.0 / equation["STATES"]["reducing"]["rhomolar"]


def _converted(first, second):
    """Return a pair in the form 2 x1 x2 gamma_T sqrt(T1 T2) and x1 x2 gamma_V (v1^(1/3) + v2^(1/3))^3 / 4."""
    xi, zeta, excess = PAIRS[first, second]
    (T1, v1), (T2, v2) = _reducing(first), _reducing(second)
    gamma_T = (T1 + T2 + xi) / (2.0 * np.sqrt(T1 * T2))
    gamma_V = 4.0 * (v1 + v2 + zeta) / (np.cbrt(v1) + np.cbrt(v2)) ** 3
    names = {"Name1": first, "Name2": second, "CAS1": "", "CAS2": "", "BibTeX": "Lemmon-JPCRD-2004"}
    factors = {"betaT": 1.0, "gammaT": gamma_T, "betaV": 1.0, "gammaV": gamma_V}
    return names | factors | {"F": 1.0, "function": excess}


@cache
def _independent(components):
    """Return the other library's model of a pure fluid or of a blend of the three."""
    if len(components) == 1:
        return teqp.build_multifluid_model(list(components), DATA)
    pairs = [_converted(a, b) for a, b in PAIRS if a in components and b in components]
    excess = (Path(DATA) / "dev" / "mixtures" / "mixture_departure_functions.json").read_text(encoding="utf-8")
    return teqp.build_multifluid_model(list(components), DATA, json.dumps(pairs), {}, excess)


def _pressure(model, T, rho, fractions):
    gas_constant = model.get_R(fractions) if len(fractions) == 1 else CODATA_2018
    return rho * gas_constant * T * (1.0 + model.get_Ar01(T, rho, fractions))


@cache
def _lines(name):
    """Return bubble and dew points of a blend from -60 to +60 degC, from our equation level."""
    model = EquationModel(mixture_of(name))
    span = saturation_span(model)
    T = list(np.arange(-60.0, 60.1, 2.0) + KELVIN)
    return {"bubble": model.trace(span.bubble, T), "dew": model.trace(span.dew, T)}


@pytest.mark.parametrize("line", ["bubble", "dew"])
@pytest.mark.parametrize("name", ["R410A", "R407C", "R407F"])
def test_our_saturated_states_are_the_other_library_s(name, line):
    """Phases we call coexisting have the pressure and equal fugacities in an independent library, to 1e-6."""
    other = _independent(mixture_of(name).components)
    worst = 0.0
    for point in _lines(name)[line]:
        phases = [(point.rho_liquid, point.x), (point.rho_vapour, point.y)]
        pressures = [_pressure(other, point.T_K, rho, part) for rho, part in phases]
        fugacities = [other.get_fugacity_coefficients(point.T_K, rho * part) * part for rho, part in phases]
        worst = max(
            worst, *np.abs(np.array(pressures) / point.p_Pa - 1.0), *np.abs(fugacities[0] / fugacities[1] - 1.0)
        )

    assert worst < SAME


@pytest.mark.parametrize("name", ["R410A", "R407C", "R407F"])
def test_tables_of_blends_hold_the_same_states(name):
    """The tables give the pressures and densities of those states."""
    f = fluid(name)
    for line, p_of, state_of in (("bubble", f.p_bubble, f.bubble), ("dew", f.p_dew, f.dew)):
        points = _lines(name)[line]
        T, p, rho = np.array([(point.T_K, point.p_Pa, point.density_kg_per_m3) for point in points]).T
        np.testing.assert_allclose(p_of(T), p, rtol=TABLES)
        np.testing.assert_allclose(state_of(p).density_kg_per_m3, rho, rtol=TABLES)


@pytest.mark.parametrize("name", ["R22", "R32", "R125", "R134a", "R143a", "R152a", "R290", "R600a", "R717", "R1270"])
def test_pure_saturation_is_the_other_library_s(name):
    """Vapour pressure and both densities of single substances, solved from a guess 5 % off."""
    f, mass = fluid(name), fluid(name).molar_mass_kg_per_mol
    other, one = _independent((name,)), np.array([1.0])
    T = np.linspace(max(f.T_range_K[0], 213.15), f.T_critical_K - 15.0, 15)
    p = f.p_dew(T)
    guesses = np.array([1.02 * f.bubble(p).density_kg_per_m3, 0.95 * f.dew(p).density_kg_per_m3]) / mass
    solved = np.array([other.pure_VLE_T(t, *guess, 30) for t, guess in zip(T, guesses.T, strict=True)])
    p_other = [_pressure(other, t, rho, one) for t, rho in zip(T, solved[:, 1], strict=True)]

    np.testing.assert_allclose(p, p_other, rtol=TABLES)
    np.testing.assert_allclose(f.bubble(p).density_kg_per_m3, solved[:, 0] * mass, rtol=TABLES)
    np.testing.assert_allclose(f.dew(p).density_kg_per_m3, solved[:, 1] * mass, rtol=TABLES)


def test_older_equation_of_r1234yf():
    """The other library carries the older equation of R-1234yf, 0.02 % off in pressure by its own figures: 0.1 %."""
    f = fluid("R1234yf")
    other, one = _independent(("R1234yf",)), np.array([1.0])
    T = KELVIN
    p = float(f.p_dew(T))
    densities = (f.bubble(p).density_kg_per_m3, f.dew(p).density_kg_per_m3)
    rho = other.pure_VLE_T(T, *(float(d) / f.molar_mass_kg_per_mol for d in densities), 30)

    assert p == pytest.approx(_pressure(other, T, rho[1], one), rel=1e-3)
    assert p != pytest.approx(_pressure(other, T, rho[1], one), rel=1e-6)
