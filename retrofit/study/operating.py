"""How a plant meets its load: part of the time, at part speed, or not at all; on arrays of conditions."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.case import Compressor
from retrofit.equipment.balance import SOLVED_BELOW, Balance, Machine, balance
from retrofit.equipment.compressor import operation
from retrofit.properties import Fluid
from retrofit.study.performance import performance
from retrofit.study.result import FloatArray, Operation, Performance

DELIVERED = {"cooling": "cooling_W", "heating": "heat_rejected_W"}
Starts = tuple[ArrayLike, ArrayLike]
LEAST_SHARE = 0.2  # of the differences at full, to begin a search with


def delivered_W(found: Performance[FloatArray], serves: str) -> FloatArray:
    """Return what a plant delivers: cooling, or heat given off by the condenser. [W]

    Args:
        found: What it does.
        serves: "cooling" or "heating".
    """
    return np.asarray(getattr(found, DELIVERED[serves]))


def balanced(found: Balance) -> Performance[FloatArray]:
    """Return what a plant does where it has settled.

    Args:
        found: The balance.
    """
    return performance(found.cycle, found.mass_flow_kg_per_s * found.cycle.refrigerating_effect_J_per_kg)


def operating(
    behaviour: Fluid,
    machine: Machine,
    compressor: Compressor,
    full: Performance[FloatArray],
    needed_W: ArrayLike,
    starts_K: Starts,
    serves: str = "cooling",
) -> Operation[FloatArray]:
    """Return how a machine meets a load with a refrigerant.

    Args:
        behaviour: The refrigerant.
        machine: The machine, its numbers of one shape with the load.
        compressor: How its capacity is controlled.
        full: What it does at full.
        needed_W: Load; where it is zero the machine stands. [W]
        starts_K: Evaporating and condensing dew temperature to start a solution from. [K]
        serves: Whether the load is "cooling" or "heating".
    Returns: The operation, shaped like the load; NaN where the machine has no solution.
    Source: energy balance; a machine of variable speed is solved again with its exchangers less loaded. Losses of
        starting and of changing steps are not counted.
    """
    kind, able = compressor.speed or "fixed", delivered_W(full, serves)
    needed = np.maximum(np.asarray(needed_W, dtype=float), 0.0)
    lacks = needed - able
    # What a balance is not solved to is no lack of load.
    share, unmet = np.minimum(needed / able, 1.0), np.where(lacks > SOLVED_BELOW * needed, lacks, 0.0 * lacks)
    is_part = (share < 1.0) & (needed > 0.0)
    run_time, speed = operation("fixed" if kind == "variable" else kind, compressor.steps or 1, 1.0, share)
    simple = Operation(kind, needed, unmet, run_time, speed, full.power_W * share)
    if kind != "variable" or not np.any(is_part):
        return simple
    return _slowed(behaviour, machine, compressor, simple, is_part, starts_K, serves)


def _slowed(
    behaviour: Fluid,
    machine: Machine,
    compressor: Compressor,
    simple: Operation[FloatArray],
    is_part: NDArray[np.bool_],
    starts_K: Starts,
    serves: str,
) -> Operation[FloatArray]:
    """Return the operation with the speed that just delivers the load where it is a part of what the machine can."""
    needed, swept = simple.cooling_needed_W, np.asarray(machine.swept_volume_m3_per_s)
    part = np.where(is_part, needed, np.nan)
    just = balanced(
        balance(behaviour, machine, *_less_loaded(machine, starts_K, simple.run_time_fraction), part, serves)
    )
    # A load so small that no speed balances it is met by starting and stopping, as a machine of fixed speed does.
    is_part = is_part & ~np.isnan(just.power_W)
    speed, run_time, power = just.swept_volume_m3_per_s / swept, np.ones_like(needed), just.power_W
    lowest = compressor.lowest_speed or 0.0
    is_slow = is_part & (speed < lowest)
    if np.any(is_slow):
        # Where the machine need not run that slow it is left at full, where the search begins and ends.
        slowest = replace(machine, swept_volume_m3_per_s=np.where(is_slow, lowest * swept, swept))
        slow = balanced(balance(behaviour, slowest, *starts_K))
        share = needed / delivered_W(slow, serves)
        speed, run_time = np.where(is_slow, lowest, speed), np.where(is_slow, share, run_time)
        power = np.where(is_slow, slow.power_W * share, power)
    return replace(
        simple,
        run_time_fraction=np.where(is_part, run_time, simple.run_time_fraction),
        speed_fraction=np.where(is_part, speed, simple.speed_fraction),
        mean_power_W=np.where(is_part, power, simple.mean_power_W),
    )


def _less_loaded(machine: Machine, starts_K: Starts, share: FloatArray) -> Starts:
    """Return where to look for the balance at part load: the differences to the media go with the load."""
    kept = np.clip(np.nan_to_num(share, nan=1.0), LEAST_SHARE, 1.0)
    sides = (machine.evaporator, machine.condenser)
    T_in = [np.asarray(side.secondary.T_in_K, dtype=float) for side in sides]
    evaporating, condensing = (T + (np.asarray(start) - T) * kept for T, start in zip(T_in, starts_K, strict=True))
    return evaporating, np.maximum(condensing, machine.T_cond_lowest_K)
