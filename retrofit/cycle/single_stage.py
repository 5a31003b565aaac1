"""Single-stage cycle: evaporator, suction line, compressor, condenser, expansion valve."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.errors import OutsideValidRangeError
from retrofit.properties import Fluid

FloatArray = NDArray[np.float64]


@dataclass(frozen=True)
class Settings:
    """What is held equal for every refrigerant; each may be an array.

    Attributes:
        useful_superheat_K: Superheat picked up inside the evaporator: it cools.
        line_superheat_K: Superheat picked up after it: it only makes the suction gas hotter.
        subcooling_K: Temperature below the bubble point at the expansion valve.
        isentropic_efficiency: Isentropic work over real work.
        volumetric_efficiency: Volume drawn in over swept volume.
        heat_loss_share: Share of the compressor power that leaves through its shell instead of with the gas.
        suction_drop_K: Fall of the dew temperature from the evaporator to the compressor by pressure drop.
        discharge_drop_K: Fall of the dew temperature from the compressor to the condenser by pressure drop.
    """

    useful_superheat_K: ArrayLike = 5.0
    line_superheat_K: ArrayLike = 0.0
    subcooling_K: ArrayLike = 0.0
    isentropic_efficiency: ArrayLike = 0.70
    volumetric_efficiency: ArrayLike = 0.90
    heat_loss_share: ArrayLike = 0.0
    suction_drop_K: ArrayLike = 0.0
    discharge_drop_K: ArrayLike = 0.0


@dataclass(frozen=True)
class Cycle:
    """One cycle, or an array of them; all arrays have the same shape.

    Attributes:
        p_evap_Pa, p_cond_Pa: Pressures of the two exchangers.
        T_evap_dew_K, T_evap_inlet_K: Dew point, and temperature after the expansion valve.
        T_cond_dew_K, T_cond_bubble_K: Dew and bubble point in the condenser.
        T_suction_K: Temperature at the compressor inlet.
        T_discharge_K, T_discharge_isentropic_K: Temperature after real and after isentropic compression.
        h_evap_in_J_per_kg, h_evap_out_J_per_kg: Enthalpy into and out of the evaporator.
        h_suction_J_per_kg, h_discharge_J_per_kg, h_discharge_isentropic_J_per_kg: Enthalpy around the compressor.
        s_suction_J_per_kgK: Entropy at the compressor inlet.
        density_suction_kg_per_m3: Density at the compressor inlet.
        p_suction_Pa, p_discharge_Pa: Pressures at the compressor; those of the exchangers if no drop is given.
        settings: What the cycle was solved with.
    """

    p_evap_Pa: FloatArray
    p_cond_Pa: FloatArray
    p_suction_Pa: FloatArray
    p_discharge_Pa: FloatArray
    T_evap_dew_K: FloatArray
    T_evap_inlet_K: FloatArray
    T_cond_dew_K: FloatArray
    T_cond_bubble_K: FloatArray
    T_suction_K: FloatArray
    T_discharge_K: FloatArray
    T_discharge_isentropic_K: FloatArray
    h_evap_in_J_per_kg: FloatArray
    h_evap_out_J_per_kg: FloatArray
    h_suction_J_per_kg: FloatArray
    h_discharge_J_per_kg: FloatArray
    h_discharge_isentropic_J_per_kg: FloatArray
    s_suction_J_per_kgK: FloatArray
    density_suction_kg_per_m3: FloatArray
    settings: Settings

    @property
    def refrigerating_effect_J_per_kg(self) -> FloatArray:
        """Return the heat taken up in the evaporator by each kilogram; line superheat does not count. [J/kg]"""
        return self.h_evap_out_J_per_kg - self.h_evap_in_J_per_kg

    @property
    def work_J_per_kg(self) -> FloatArray:
        """Return the compressor work on each kilogram, heat lost through its shell included. [J/kg]"""
        isentropic = self.h_discharge_isentropic_J_per_kg - self.h_suction_J_per_kg
        work: FloatArray = isentropic / np.asarray(self.settings.isentropic_efficiency, dtype=float)
        return work

    @property
    def line_heat_J_per_kg(self) -> FloatArray:
        """Return the heat each kilogram picks up in the suction line. [J/kg]"""
        return self.h_suction_J_per_kg - self.h_evap_out_J_per_kg

    @property
    def heat_rejected_J_per_kg(self) -> FloatArray:
        """Return the heat given off between discharge and expansion valve by each kilogram. [J/kg]"""
        return self.h_discharge_J_per_kg - self.h_evap_in_J_per_kg

    @property
    def cop(self) -> FloatArray:
        """Return the coefficient of performance, cooling over compressor power. [-]"""
        return self.refrigerating_effect_J_per_kg / self.work_J_per_kg

    @property
    def volumetric_capacity_J_per_m3(self) -> FloatArray:
        """Return the cooling done by each cubic metre drawn in at the compressor inlet. [J/m3]"""
        return self.refrigerating_effect_J_per_kg * self.density_suction_kg_per_m3

    @property
    def pressure_ratio(self) -> FloatArray:
        """Return discharge over suction pressure at the compressor, absolute. [-]"""
        return self.p_discharge_Pa / self.p_suction_Pa


def solve_cycle(fluid: Fluid, p_evap_Pa: ArrayLike, p_cond_Pa: ArrayLike, settings: Settings) -> Cycle:
    """Return the cycle between two pressures.

    Args:
        fluid: Refrigerant.
        p_evap_Pa: Pressure of the evaporator and at the compressor inlet. [Pa]
        p_cond_Pa: Pressure of the condenser, from compressor to expansion valve. [Pa]
        settings: Superheat, subcooling and efficiencies. [K, -]
    Returns: The cycle; its arrays have the broadcast shape of everything given.
    Raises: OutsideValidRangeError if a state lies outside the fluid's range or the condensing pressure is not
        above the evaporating one (NaN there if the fluid is lenient).
    Source: energy balance of each part; isentropic efficiency = isentropic work / real work.
    """
    p_cond_Pa = _above(fluid, p_evap_Pa, p_cond_Pa)
    evaporator = fluid.vapour(p_evap_Pa, settings.useful_superheat_K)
    superheat = np.asarray(settings.useful_superheat_K) + np.asarray(settings.line_superheat_K)
    p_suction, p_discharge = compressor_pressures(fluid, p_evap_Pa, p_cond_Pa, settings)
    suction = fluid.vapour(p_suction, superheat + np.asarray(settings.suction_drop_K))
    h_isentropic = fluid.h_at_entropy(p_discharge, suction.s_J_per_kgK)
    work = (h_isentropic - suction.h_J_per_kg) / np.asarray(settings.isentropic_efficiency)
    h_discharge = suction.h_J_per_kg + work * (1.0 - np.asarray(settings.heat_loss_share))
    dew, bubble = fluid.dew(p_cond_Pa), fluid.bubble(p_cond_Pa)
    liquid = fluid.liquid(p_cond_Pa, settings.subcooling_K)
    inlet = fluid.two_phase(p_evap_Pa, liquid.h_J_per_kg)
    arrays = {
        "p_evap_Pa": evaporator.p_Pa,
        "p_cond_Pa": dew.p_Pa,
        "p_suction_Pa": suction.p_Pa,
        "p_discharge_Pa": p_discharge,
        "T_evap_dew_K": evaporator.T_K - np.asarray(settings.useful_superheat_K),
        "T_evap_inlet_K": inlet.T_K,
        "T_cond_dew_K": dew.T_K,
        "T_cond_bubble_K": bubble.T_K,
        "T_suction_K": suction.T_K,
        "T_discharge_K": fluid.T_at_enthalpy(p_discharge, h_discharge),
        "T_discharge_isentropic_K": fluid.T_at_enthalpy(p_discharge, h_isentropic),
        "h_evap_in_J_per_kg": liquid.h_J_per_kg,
        "h_evap_out_J_per_kg": evaporator.h_J_per_kg,
        "h_suction_J_per_kg": suction.h_J_per_kg,
        "h_discharge_J_per_kg": h_discharge,
        "h_discharge_isentropic_J_per_kg": h_isentropic,
        "s_suction_J_per_kgK": suction.s_J_per_kgK,
        "density_suction_kg_per_m3": suction.density_kg_per_m3,
    }
    shape = np.broadcast_shapes(*(np.shape(array) for array in arrays.values()))
    return Cycle(settings=settings, **{name: np.broadcast_to(array, shape) for name, array in arrays.items()})


def compressor_pressures(
    fluid: Fluid, p_evap_Pa: ArrayLike, p_cond_Pa: ArrayLike, settings: Settings
) -> tuple[FloatArray, FloatArray]:
    """Return suction and discharge pressure at the compressor, which need no more of a cycle than its drops. [Pa]

    Args:
        fluid: Refrigerant.
        p_evap_Pa: Pressure of the evaporator. [Pa]
        p_cond_Pa: Pressure of the condenser. [Pa]
        settings: Its drops are used. [K]
    Raises: OutsideValidRangeError if a pressure lies outside the fluid's range or the condensing pressure is not
        above the evaporating one (NaN there if the fluid is lenient).
    """
    suction = _shifted(fluid, p_evap_Pa, -np.asarray(settings.suction_drop_K))
    discharge = _shifted(fluid, _above(fluid, p_evap_Pa, p_cond_Pa), np.asarray(settings.discharge_drop_K))
    return np.asarray(suction, dtype=float), np.asarray(discharge, dtype=float)


def _shifted(fluid: Fluid, p_Pa: ArrayLike, by_K: FloatArray) -> ArrayLike:
    """Return the pressure whose dew temperature lies `by_K` above that of another pressure."""
    return fluid.p_dew(fluid.dew(p_Pa).T_K + by_K) if np.any(by_K) else p_Pa


def _above(fluid: Fluid, p_evap_Pa: ArrayLike, p_cond_Pa: ArrayLike) -> FloatArray:
    """Return the condensing pressures if they are above the evaporating ones: below, a compressor does nothing."""
    p_evap, p_cond = np.asarray(p_evap_Pa, dtype=float), np.asarray(p_cond_Pa, dtype=float)
    is_not = p_cond <= p_evap
    if not np.any(is_not):
        return p_cond
    if fluid.lenient:
        return np.where(is_not, np.nan, p_cond)
    low, high = (np.broadcast_to(p, is_not.shape)[is_not].flat[0] / 1e5 for p in (p_evap, p_cond))
    raise OutsideValidRangeError(
        f"{fluid.designation}: condensing pressure {high:.4g} bar is not above the evaporating pressure {low:.4g} bar: "
        "there is nothing to compress"
    )
