"""The vapour-compression cycle of one refrigerant, on arrays: states, work, heat, capacity.

`solve_cycle` takes pressures; `matched_pressures` finds them from temperatures, by the dew or the mean
convention. Everything broadcasts, so one point, a year and a thousand draws go the same way.
"""

from retrofit.cycle.matching import Temperatures, cycle_temperatures, matched_pressures, pressure_at_mean
from retrofit.cycle.single_stage import Cycle, Settings, compressor_pressures, solve_cycle
from retrofit.cycle.states import StatePoint, state_points

__all__ = [
    "Cycle",
    "Settings",
    "StatePoint",
    "Temperatures",
    "compressor_pressures",
    "cycle_temperatures",
    "matched_pressures",
    "pressure_at_mean",
    "solve_cycle",
    "state_points",
]
