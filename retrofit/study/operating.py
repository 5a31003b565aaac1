"""How a plant meets its load: part of the time, at part speed, or not at all; on arrays of conditions."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.case import Compressor
from retrofit.equipment.balance import SOLVED_BELOW, Balance, Machine, balance
from retrofit.properties import Fluid
from retrofit.study.performance import performance
from retrofit.study.result import FloatArray, Operation, Performance

DELIVERED = {"cooling": "cooling_W", "heating": "heat_rejected_W"}
Starts = tuple[ArrayLike, ArrayLike]
IntArray = NDArray[np.int64]
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
    place: IntArray | None = None,
) -> Operation[FloatArray]:
    """Return how a machine meets a load with a refrigerant.

    Args:
        behaviour: The refrigerant.
        machine: The machine, its numbers of one shape with what it does at full.
        compressor: How its capacity is controlled.
        full: What it does at full.
        needed_W: Load; where it is zero the machine stands. [W]
        starts_K: Evaporating and condensing dew temperature to start a solution from. [K]
        serves: Whether the load is "cooling" or "heating".
        place: Of a machine that is not of variable speed: for each load, the place of its condition among those of
            the machine; None where every condition has one load.
    Returns: The operation, shaped like the load; NaN and a reason where the machine has no solution.
    Source: energy balance; at part speed and at each step the machine is solved again with its exchangers less
        loaded. Losses of starting and of changing steps are not counted.
    """
    needed = np.maximum(np.asarray(needed_W, dtype=float), 0.0)
    if compressor.speed == "variable":
        return _slowed(behaviour, machine, compressor, full, needed, starts_K, serves)
    return _stepped(behaviour, machine, compressor, full, needed, starts_K, serves, place)


def fans_share(compressor: Compressor, run: Operation[FloatArray]) -> FloatArray:
    """Return the share of the condenser's fans that runs, mean over the time. [-]

    Args:
        compressor: How capacity is controlled; where each step has its own part of the condenser, that part's fans
            stop with it, else all run while any step does.
        run: How the machine meets its load.
    """
    return np.asarray(
        run.run_time_fraction * run.speed_fraction if compressor.own_condensers else run.run_time_fraction
    )


def _unmet_W(needed: FloatArray, able: FloatArray) -> FloatArray:
    """Return what is lacking of a load; what a balance is not solved to is no lack of load. [W]"""
    lacks = needed - able
    return np.where(lacks > SOLVED_BELOW * needed, lacks, 0.0 * lacks)


def _stepped(
    behaviour: Fluid,
    machine: Machine,
    compressor: Compressor,
    full: Performance[FloatArray],
    needed: FloatArray,
    starts_K: Starts,
    serves: str,
    place: IntArray | None,
) -> Operation[FloatArray]:
    """Return the operation in equal steps: time is shared between the two steps around the load, the lowest being rest.

    A machine of fixed speed has one step. Steps are solved from the top down, where a load lies below the one above.
    """
    count = (compressor.steps or 1) if compressor.speed == "steps" else 1

    def at_loads(values: ArrayLike) -> FloatArray:
        return np.asarray(values) if place is None else np.asarray(values)[place]

    needed, able, power = np.broadcast_arrays(needed, at_loads(delivered_W(full, serves)), at_loads(full.power_W))
    upper, unmet = (able, power), _unmet_W(needed, able)
    share = np.where(np.isnan(able), np.nan, 1.0)  # of the steps, mean over the time
    run_time, reason = share, np.full(needed.shape, "", dtype=object)
    below = needed < upper[0]
    for step in range(count - 1, -1, -1):
        if not np.any(below):
            break
        lower, why = (np.zeros_like(needed), np.zeros_like(needed)), reason
        if step > 0:
            wanted = below if place is None else np.isin(np.arange(full.power_W.size), place[below])
            found = _at_step(behaviour, machine, compressor, step / count, wanted, starts_K)
            just = balanced(found)
            lower, why = (at_loads(delivered_W(just, serves)), at_loads(just.power_W)), at_loads(found.reason)
        # A step that is not solved leaves its loads without a solution too.
        here = below & ~(needed < lower[0])
        way = (needed - lower[0]) / np.where(here, upper[0] - lower[0], 1.0)
        power = np.where(here, lower[1] + way * (upper[1] - lower[1]), power)
        share = np.where(here, (step + way) / count, share)
        run_time = np.where(here, way if step == 0 else np.where(np.isnan(way), np.nan, 1.0), run_time)
        reason = np.where(here, why, reason)
        below, upper = below & ~here, lower
    # At rest it has the speed it would start with.
    speed = share / np.where(run_time > 0.0, run_time, 1.0) + np.where(run_time == 0.0, 1.0 / count, 0.0)
    control = compressor.speed or "fixed"
    return Operation(control, needed, unmet, run_time, speed, power, reason.astype(np.str_))


def _at_step(
    behaviour: Fluid,
    machine: Machine,
    compressor: Compressor,
    share: float,
    wanted: NDArray[np.bool_],
    starts_K: Starts,
) -> Balance:
    """Return the balance with a share of the swept volume, where that is wanted; elsewhere it stays at full."""

    def part(values: ArrayLike, factor: float = share) -> FloatArray:
        return np.asarray(values) * np.where(wanted, factor, 1.0)

    condenser = machine.condenser
    if compressor.own_condensers:
        medium = replace(condenser.secondary, capacity_rate_W_per_K=part(condenser.secondary.capacity_rate_W_per_K))
        condenser = replace(condenser, conductance_W_per_K=part(condenser.conductance_W_per_K), secondary=medium)
    smaller = replace(machine, swept_volume_m3_per_s=part(machine.swept_volume_m3_per_s), condenser=condenser)
    return balance(behaviour, smaller, *_less_loaded(machine, starts_K, np.where(wanted, share, 1.0)))


def _slowed(
    behaviour: Fluid,
    machine: Machine,
    compressor: Compressor,
    full: Performance[FloatArray],
    needed: FloatArray,
    starts_K: Starts,
    serves: str,
) -> Operation[FloatArray]:
    """Return the operation at the speed that just delivers the load, or at the lowest speed part of the time."""
    needed, able = np.broadcast_arrays(needed, delivered_W(full, serves))
    swept = np.asarray(machine.swept_volume_m3_per_s)
    share, lowest = np.minimum(needed / able, 1.0), compressor.lowest_speed or 0.0
    is_part = (share < 1.0) & (needed > 0.0)
    run_time = np.where(share > 0.0, np.where(np.isnan(share), np.nan, 1.0), share)
    speed, power = np.where(np.isnan(share), np.nan, 1.0), full.power_W * share
    reason = np.full(needed.shape, "", dtype=object)
    if np.any(is_part):
        # Where no part is asked for the machine is left at full, where the search begins and ends.
        found = balance(
            behaviour, machine, *_less_loaded(machine, starts_K, share), np.where(is_part, needed, np.nan), serves
        )
        speed = np.where(is_part, found.swept_volume_m3_per_s / swept, speed)
        power = np.where(is_part, balanced(found).power_W, power)
        reason = np.where(is_part, found.reason, reason)
        is_slow = is_part & (lowest > 0.0) & ~(speed >= lowest)
        if np.any(is_slow):
            slowest = replace(machine, swept_volume_m3_per_s=np.where(is_slow, lowest * swept, swept))
            slow = balanced(balance(behaviour, slowest, *starts_K))
            part = needed / delivered_W(slow, serves)
            # A load whose own speed was not found is met at the lowest one if that delivers it.
            is_slow = is_slow & ((part <= 1.0) | (reason == ""))
            speed = np.where(is_slow, lowest, speed)
            run_time = np.where(is_slow, np.minimum(part, 1.0), run_time)
            power = np.where(is_slow, slow.power_W * np.minimum(part, 1.0), power)
            reason = np.where(is_slow & ~np.isnan(part), "", reason)
    return Operation("variable", needed, _unmet_W(needed, able), run_time, speed, power, reason.astype(np.str_))


def _less_loaded(machine: Machine, starts_K: Starts, share: FloatArray) -> Starts:
    """Return where to look for the balance at part load: the differences to the media go with the load."""
    kept = np.clip(np.nan_to_num(share, nan=1.0), LEAST_SHARE, 1.0)
    sides = (machine.evaporator, machine.condenser)
    T_in = [np.asarray(side.secondary.T_in_K, dtype=float) for side in sides]
    evaporating, condensing = (T + (np.asarray(start) - T) * kept for T, start in zip(T_in, starts_K, strict=True))
    return evaporating, np.maximum(condensing, machine.T_cond_lowest_K)
