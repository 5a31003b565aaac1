"""The state points of a cycle, in the order the refrigerant passes them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from retrofit.cycle.single_stage import Cycle, FloatArray
from retrofit.properties import Fluid


@dataclass(frozen=True)
class StatePoint:
    """One named state of a cycle.

    Attributes:
        name: What the point is.
        p_Pa, T_K, h_J_per_kg, s_J_per_kgK, density_kg_per_m3: The state.
        quality, molar_quality: Vapour mass and mole fraction; NaN outside the two-phase region.
    """

    name: str
    p_Pa: FloatArray
    T_K: FloatArray
    h_J_per_kg: FloatArray
    s_J_per_kgK: FloatArray
    density_kg_per_m3: FloatArray
    quality: FloatArray
    molar_quality: FloatArray


def state_points(fluid: Fluid, cycle: Cycle) -> tuple[StatePoint, ...]:
    """Return the state points of a cycle, beginning at the compressor inlet.

    Args:
        fluid: The refrigerant the cycle was solved with.
        cycle: The cycle.
    Returns: Compressor inlet, discharge, condenser dew and bubble point, expansion valve inlet, evaporator
        inlet, evaporator dew point, evaporator outlet.
    """
    p_evap, p_cond = cycle.p_evap_Pa, cycle.p_cond_Pa
    useful = np.asarray(cycle.settings.useful_superheat_K)
    at_suction = np.asarray(cycle.settings.line_superheat_K) + np.asarray(cycle.settings.suction_drop_K)
    states = {
        "compressor inlet": fluid.vapour(cycle.p_suction_Pa, useful + at_suction),
        "discharge": fluid.above_bubble(cycle.p_discharge_Pa, cycle.h_discharge_J_per_kg),
        "condenser dew point": fluid.dew(p_cond),
        "condenser bubble point": fluid.bubble(p_cond),
        "expansion valve inlet": fluid.liquid(p_cond, cycle.settings.subcooling_K),
        "evaporator inlet": fluid.two_phase(p_evap, cycle.h_evap_in_J_per_kg),
        "evaporator dew point": fluid.dew(p_evap),
        "evaporator outlet": fluid.vapour(p_evap, useful),
    }
    return tuple(
        StatePoint(name, s.p_Pa, s.T_K, s.h_J_per_kg, s.s_J_per_kgK, s.density_kg_per_m3, s.quality, s.molar_quality)
        for name, s in states.items()
    )
