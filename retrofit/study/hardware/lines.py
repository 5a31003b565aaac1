"""Suction, discharge and liquid line with the diameters and lengths of the case."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import GasLine, LiquidLine
from retrofit.cycle import Settings
from retrofit.equipment.lines import Line, LineFlow, Stream, line_flow, liquid_supply, oil_return, saturation_drop
from retrofit.properties import Fluid
from retrofit.study.hardware.numbers import GasFlow, LiquidFlow
from retrofit.study.result import Performance

UNIT_FLOW_REVERSAL = 1.0  # the threshold itself is one of the checks


def number(value: ArrayLike) -> float | None:
    """Return a number, None if it is not finite."""
    found = float(np.asarray(value))
    return found if np.isfinite(found) else None


def suction_line(
    table: GasLine | None, behaviour: Fluid, found: Performance[float], settings: Settings
) -> GasFlow | None:
    """Return the flow in the suction line, None without one in the case.

    Args:
        table: The line.
        behaviour: The refrigerant, lenient.
        found: What the plant does.
        settings: Superheat and drops.
    """
    p_Pa = behaviour.p_dew(found.T_evap_dew_K - np.asarray(settings.suction_drop_K))
    density = found.mass_flow_kg_per_s / found.suction_volume_flow_m3_per_s
    return _gas_line(table, behaviour, found.mass_flow_kg_per_s, (p_Pa, found.T_suction_K, density))


def discharge_line(
    table: GasLine | None, behaviour: Fluid, found: Performance[float], settings: Settings
) -> GasFlow | None:
    """Return the flow in the discharge line, None without one in the case.

    Args:
        table: The line.
        behaviour: The refrigerant, lenient.
        found: What the plant does.
        settings: Superheat and drops.
    """
    p_Pa = behaviour.p_dew(found.T_cond_dew_K + np.asarray(settings.discharge_drop_K))
    superheat = np.maximum(found.T_discharge_K - behaviour.dew(p_Pa).T_K, 0.0)
    gas = behaviour.vapour(p_Pa, superheat)
    return _gas_line(table, behaviour, found.mass_flow_kg_per_s, (p_Pa, gas.T_K, gas.density_kg_per_m3))


def _gas_line(
    table: GasLine | None, behaviour: Fluid, mass_flow: float, state: tuple[ArrayLike, ArrayLike, ArrayLike]
) -> GasFlow | None:
    """Return the flow of gas of a pressure, temperature and density in a line."""
    p_Pa, T_K, density = state
    if table is None or number(density) is None:
        return None
    flow = _flow(table, mass_flow, density, behaviour.viscosity_vapour(p_Pa, T_K))
    drop = saturation_drop(behaviour, p_Pa, flow.pressure_drop_Pa, "dew")
    load = np.nan if table.lowest_load is None else table.lowest_load
    slow = flow.velocity_m_per_s * load
    reversal = oil_return(slow, density, table.diameter_m, UNIT_FLOW_REVERSAL).flow_reversal
    return GasFlow(
        velocity_m_per_s=float(flow.velocity_m_per_s),
        momentum_flux_Pa=float(flow.momentum_flux_Pa),
        pressure_drop_Pa=number(flow.pressure_drop_Pa),
        saturation_drop_K=number(drop),
        lowest_velocity_m_per_s=number(slow),
        lowest_momentum_flux_Pa=number(flow.momentum_flux_Pa * load**2),
        flow_reversal=number(reversal),
    )


def _flow(table: LiquidLine, mass_flow: float, density: ArrayLike, viscosity: ArrayLike) -> LineFlow:
    """Return the flow in a line; without its length, friction is not known."""
    length = np.nan if table.length_m is None else table.length_m
    line = Line(table.diameter_m, length, table.fittings_m, table.roughness_m)
    return line_flow(line, Stream(mass_flow, density, viscosity))


def liquid_line(
    table: LiquidLine | None, behaviour: Fluid, found: Performance[float], settings: Settings
) -> LiquidFlow | None:
    """Return the flow in the liquid line, None without one in the case.

    Args:
        table: The line.
        behaviour: The refrigerant, lenient.
        found: What the plant does.
        settings: Subcooling.
    """
    subcooling = settings.subcooling_K
    liquid = behaviour.liquid(found.p_cond_Pa, subcooling)
    if table is None or number(liquid.density_kg_per_m3) is None:
        return None
    viscosity = behaviour.viscosity_liquid(behaviour.p_bubble(liquid.T_K))
    flow = _flow(table, found.mass_flow_kg_per_s, liquid.density_kg_per_m3, viscosity)
    riser = np.nan if table.riser_m is None else table.riser_m
    supply = liquid_supply(behaviour, found.p_cond_Pa, subcooling, riser, flow.pressure_drop_Pa)
    return LiquidFlow(
        velocity_m_per_s=float(flow.velocity_m_per_s),
        pressure_drop_Pa=number(flow.pressure_drop_Pa),
        saturation_drop_K=number(saturation_drop(behaviour, found.p_cond_Pa, flow.pressure_drop_Pa, "bubble")),
        static_head_Pa=number(supply.static_head_Pa),
        subcooling_needed_K=number(supply.subcooling_needed_K),
    )
