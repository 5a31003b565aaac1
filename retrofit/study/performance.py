"""What a plant does with a cycle: flows, power and heat that follow from the cooling it delivers."""

from __future__ import annotations

from dataclasses import fields, replace

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import Case
from retrofit.cycle import Cycle, cycle_temperatures
from retrofit.equipment.compressor import shaft_and_electric
from retrofit.study.result import FloatArray, Number, Performance

CAPPED_BY_K = 0.05  # below the superheat set: less is rounding of the balance
FLOWS = (
    "cooling_W",
    "mass_flow_kg_per_s",
    "suction_volume_flow_m3_per_s",
    "swept_volume_m3_per_s",
    "power_W",
    "heat_rejected_W",
    "line_heat_W",
)


def performance(cycle: Cycle, cooling_W: FloatArray | float) -> Performance[FloatArray]:
    """Return what a plant does that delivers a cooling with a cycle.

    Args:
        cycle: The cycle, or an array of them.
        cooling_W: Cooling delivered; broadcasts with the cycle. [W]
    Returns: The performance, as arrays.
    Source: mass flow = cooling / refrigerating effect; everything else follows from the cycle.
    """
    mass_flow = np.asarray(cooling_W) / cycle.refrigerating_effect_J_per_kg
    volume_flow = mass_flow / cycle.density_suction_kg_per_m3
    mean = cycle_temperatures(cycle, "mean")
    return Performance(
        cooling_W=mass_flow * cycle.refrigerating_effect_J_per_kg,
        p_evap_Pa=cycle.p_evap_Pa,
        p_cond_Pa=cycle.p_cond_Pa,
        pressure_ratio=cycle.pressure_ratio,
        T_evap_dew_K=cycle.T_evap_dew_K,
        T_evap_inlet_K=cycle.T_evap_inlet_K,
        T_evap_mean_K=np.asarray(mean.T_evap_K),
        T_cond_dew_K=cycle.T_cond_dew_K,
        T_cond_bubble_K=cycle.T_cond_bubble_K,
        T_cond_mean_K=np.asarray(mean.T_cond_K),
        glide_evap_K=cycle.T_evap_dew_K - cycle.T_evap_inlet_K,
        glide_cond_K=cycle.T_cond_dew_K - cycle.T_cond_bubble_K,
        T_suction_K=cycle.T_suction_K,
        T_discharge_K=cycle.T_discharge_K,
        T_discharge_isentropic_K=cycle.T_discharge_isentropic_K,
        cop=cycle.cop,
        volumetric_capacity_J_per_m3=cycle.volumetric_capacity_J_per_m3,
        refrigerating_effect_J_per_kg=cycle.refrigerating_effect_J_per_kg,
        mass_flow_kg_per_s=mass_flow,
        suction_volume_flow_m3_per_s=volume_flow,
        swept_volume_m3_per_s=volume_flow / np.asarray(cycle.settings.volumetric_efficiency),
        power_W=mass_flow * cycle.work_J_per_kg,
        heat_rejected_W=mass_flow * cycle.heat_rejected_J_per_kg,
        line_heat_W=mass_flow * cycle.line_heat_J_per_kg,
    )


def electric_W(case: Case, power_W: ArrayLike) -> FloatArray:
    """Return electrical power of the compressors, losses of motor and drive each counted once.

    Args:
        case: The case; what it does not give, the isentropic efficiency counts as holding.
        power_W: Power by the isentropic efficiency. [W]
    """
    efficiency = case.compressor.motor_and_drive
    return np.asarray(power_W, dtype=float) if efficiency is None else shaft_and_electric(power_W, efficiency)[1]


def capped_superheat_K(case: Case, found: Performance[float]) -> float | None:
    """Return the useful superheat of a plant that has settled, where its evaporator gives less than is set; else None.

    Args:
        case: The case: useful superheat as set, and what the line adds.
        found: What the plant does.
    Source: superheat at the compressor inlet, counted from the dew point in the evaporator, less that of the line.
    """
    used = float(found.T_suction_K - found.T_evap_dew_K - case.duty.line_superheat_K)
    return used if used < case.duty.useful_superheat_K - CAPPED_BY_K else None


def as_numbers(found: Performance[FloatArray], place: int | tuple[()] = ()) -> Performance[float]:
    """Return a performance of one condition as plain numbers.

    Args:
        found: A performance.
        place: Which condition of an array of them; the only one if left out. [-]
    """
    numbers = {item.name: float(np.asarray(getattr(found, item.name))[place]) for item in fields(Performance)}
    return Performance(**numbers)


def at_swept_volume(found: Performance[Number], swept_volume_m3_per_s: Number) -> Performance[Number]:
    """Return a performance with everything that scales with flow brought to another swept volume.

    Args:
        found: A performance.
        swept_volume_m3_per_s: Swept volume to run with. [m3/s]
    """
    scale = swept_volume_m3_per_s / found.swept_volume_m3_per_s
    return replace(found, **{name: getattr(found, name) * scale for name in FLOWS})
