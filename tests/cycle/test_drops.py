"""Pressure drops and heat loss around the compressor, against cycles written out with CoolProp's own pure fluids."""

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI

from retrofit.cycle import Settings, solve_cycle
from retrofit.cycle.single_stage import compressor_pressures
from retrofit.properties import fluid

T_EVAP_K, T_COND_K = 263.15, 313.15
# Tables hold pressures to 1e-5 and enthalpies to 1e-5 of the latent heat; work is a tenth of that, so 2e-4 of it.
P, WORK = 1e-5, 2e-4
SETTINGS = Settings(
    useful_superheat_K=6.0,
    line_superheat_K=9.0,
    subcooling_K=4.0,
    isentropic_efficiency=0.65,
    heat_loss_share=0.12,
    suction_drop_K=1.5,
    discharge_drop_K=0.8,
)


def saturated(name, T_K):
    """Return the saturation pressure of a pure fluid."""
    return PropsSI("P", "T", T_K, "Q", 1, name)


@pytest.fixture(params=["R134a", "R290", "R32"])
def both(request):
    """Return the name of a pure fluid and its cycle with drops and heat loss."""
    name = request.param
    found = fluid(name)
    return name, solve_cycle(found, found.p_dew(T_EVAP_K), found.p_dew(T_COND_K), SETTINGS)


def test_drops_stand_as_kelvin_of_the_dew_point(both):
    """Suction pressure is that 1.5 K below the evaporator, discharge pressure that 0.8 K above the condenser."""
    name, cycle = both

    assert float(cycle.p_suction_Pa) == pytest.approx(saturated(name, T_EVAP_K - 1.5), rel=P)
    assert float(cycle.p_discharge_Pa) == pytest.approx(saturated(name, T_COND_K + 0.8), rel=P)
    assert float(cycle.pressure_ratio) == pytest.approx(
        saturated(name, T_COND_K + 0.8) / saturated(name, T_EVAP_K - 1.5), rel=2 * P
    )
    assert (float(cycle.p_evap_Pa), float(cycle.p_cond_Pa)) == pytest.approx(
        (saturated(name, T_EVAP_K), saturated(name, T_COND_K)), rel=P
    )


def test_a_drop_leaves_the_gas_as_warm_as_it_came(both):
    """Superheats count from the evaporator: 6 K and 9 K above -10 degC are 5 degC, whatever pressure was lost."""
    _, cycle = both

    assert float(cycle.T_suction_K) == pytest.approx(T_EVAP_K + 15.0, abs=1e-3)


def test_compression_between_the_pressures_of_the_compressor(both):
    """Work and discharge written out: isentropic work over 0.65; 12 % of it leaves through the shell."""
    name, cycle = both
    p = saturated(name, T_EVAP_K - 1.5), saturated(name, T_COND_K + 0.8)
    h_suction, s, rho = (PropsSI(key, "T", T_EVAP_K + 15.0, "P", p[0], name) for key in "HSD")
    work = (PropsSI("H", "S", s, "P", p[1], name) - h_suction) / 0.65
    effect = PropsSI("H", "T", T_EVAP_K + 6.0, "P", saturated(name, T_EVAP_K), name) - PropsSI(
        "H", "T", T_COND_K - 4.0, "P", saturated(name, T_COND_K), name
    )

    assert float(cycle.work_J_per_kg) == pytest.approx(work, rel=WORK)
    assert float(cycle.h_discharge_J_per_kg - cycle.h_suction_J_per_kg) == pytest.approx(0.88 * work, rel=WORK)
    T_discharge = PropsSI("T", "H", h_suction + 0.88 * work, "P", p[1], name)
    assert float(cycle.T_discharge_K) == pytest.approx(T_discharge, abs=0.03)
    assert float(cycle.density_suction_kg_per_m3) == pytest.approx(rho, rel=1e-4)
    assert float(cycle.cop) == pytest.approx(effect / work, rel=WORK)
    assert float(cycle.volumetric_capacity_J_per_m3) == pytest.approx(effect * rho, rel=WORK)


def test_pressures_of_the_compressor_alone_are_those_of_the_cycle(both):
    """They can be had without the cycle, and are the same."""
    name, cycle = both
    found = fluid(name)

    alone = compressor_pressures(found, found.p_dew(T_EVAP_K), found.p_dew(T_COND_K), SETTINGS)

    assert np.array(alone) == pytest.approx(np.array([cycle.p_suction_Pa, cycle.p_discharge_Pa]), rel=1e-12)
