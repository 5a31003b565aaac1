"""What a pressure-enthalpy chart needs of a refrigerant: its saturation lines and the enthalpy references."""

from __future__ import annotations

import numpy as np

from retrofit.properties import Fluid
from retrofit.study.result import ChartLines, EnthalpyZero
from retrofit.units import ZERO_C_K

IIR_H_J_PER_KG, IIR_S_J_PER_KGK = 200e3, 1e3


def chart_lines(behaviour: Fluid, count: int = 90) -> ChartLines:
    """Return the saturation lines of a refrigerant and its enthalpy references.

    Args:
        behaviour: The refrigerant.
        count: Number of temperatures along each line. [-]
    Returns: The lines; their temperatures lie closer together near the critical point.
    """
    lowest, highest = behaviour.T_range_K
    T = highest - (highest - lowest) * np.linspace(1.0, 0.0, count) ** 1.6
    bubble, dew = behaviour.bubble(behaviour.p_bubble(T)), behaviour.dew(behaviour.p_dew(T))
    return ChartLines(
        T_K=T,
        p_bubble_Pa=bubble.p_Pa,
        h_bubble_J_per_kg=bubble.h_J_per_kg,
        p_dew_Pa=dew.p_Pa,
        h_dew_J_per_kg=dew.h_J_per_kg,
        T_critical_K=behaviour.T_critical_K,
        p_critical_Pa=behaviour.p_critical_Pa,
        zeros={"si": _iir_zero(behaviour), "ip": _minus_forty_zero(behaviour)},
    )


def _iir_zero(behaviour: Fluid) -> EnthalpyZero:
    """Return the zero by which saturated liquid at 0 degC has h = 200 kJ/kg and s = 1 kJ/(kg K)."""
    h, s = _liquid_at(behaviour, ZERO_C_K)
    if h is None or s is None:
        return _own_zero(behaviour)
    name = "IIR reference: h = 200 kJ/kg and s = 1 kJ/(kg K) for saturated liquid at 0 °C"
    return EnthalpyZero(name, h - IIR_H_J_PER_KG, s - IIR_S_J_PER_KGK)


def _minus_forty_zero(behaviour: Fluid) -> EnthalpyZero:
    """Return the zero by which saturated liquid at -40 (degC and degF alike) has h = 0 and s = 0."""
    h, s = _liquid_at(behaviour, ZERO_C_K - 40.0)
    if h is None or s is None:
        return _own_zero(behaviour)
    return EnthalpyZero("h = 0 and s = 0 for saturated liquid at −40 °F", h, s)


def _own_zero(behaviour: Fluid) -> EnthalpyZero:
    """Return a zero at the lowest temperature of the model, where no usual reference lies in its range."""
    T = behaviour.T_range_K[0]
    bubble = behaviour.bubble(behaviour.p_bubble(T))
    name = f"h = 0 and s = 0 for saturated liquid at {T - ZERO_C_K:.1f} °C, the lowest temperature of the model"
    return EnthalpyZero(name, float(bubble.h_J_per_kg), float(bubble.s_J_per_kgK))


def _liquid_at(behaviour: Fluid, T_K: float) -> tuple[float | None, float | None]:
    lowest, highest = behaviour.T_range_K
    if not lowest <= T_K <= highest:
        return None, None
    bubble = behaviour.bubble(behaviour.p_bubble(T_K))
    return float(bubble.h_J_per_kg), float(bubble.s_J_per_kgK)
