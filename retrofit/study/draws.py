"""What a plant does for every draw of its inputs: at the design point, and over a year by its map, on arrays.

Rows are those of the `Sample`: base, draws, and each input at its limits. Today's refrigerant is drawn with the same
rows, so that what a candidate is better or worse by keeps what both have in common.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from retrofit.case import Case
from retrofit.case.model import FIELDS
from retrofit.equipment.balance import balance
from retrofit.properties import Fluid
from retrofit.study.installed import USUAL_SUPERHEAT_SHARE
from retrofit.study.operating import balanced, delivered_W, fans_share, operating
from retrofit.study.performance import at_swept_volume, electric_W, performance
from retrofit.study.result import FloatArray, Performance
from retrofit.study.spread import single
from retrofit.study.today import Today, today_of, with_numbers
from retrofit.study.uncertain import EFFICIENCIES, PHYSICAL, WEATHER, Sample, has_curve
from retrofit.study.year import HOUR_S, YearConditions, YearPlant, load_W, or_nothing, together

NODES, FEW_NODES = 8, 5  # of a row's map along its sinks, and along its sources where both vary
SHARES = np.array([0.1, 0.25, 0.4, 0.6, 0.8, 1.0])  # of what the plant can, at which part load is solved


@dataclass(frozen=True)
class DesignRows:
    """A refrigerant at the design point, row by row; arrays of shape (rows,), NaN where a row has no solution.

    Attributes:
        cooling_W, power_W, cop: At full, with the model's own error; the COP at today's cooling on the same plant.
        T_discharge_K, p_cond_Pa: At full.
        needed_W: Cooling to deliver.
    """

    cooling_W: FloatArray
    power_W: FloatArray
    cop: FloatArray
    T_discharge_K: FloatArray
    p_cond_Pa: FloatArray
    needed_W: FloatArray


@dataclass(frozen=True)
class YearRows:
    """A refrigerant over a year, row by row; arrays of shape (rows,).

    Attributes:
        energy_J: Electricity of the year.
        peak_W: Highest electrical power.
        unmet_J: Load that stays unmet.
    """

    energy_J: FloatArray
    peak_W: FloatArray
    unmet_J: FloatArray


@dataclass(frozen=True)
class ModelError:
    """Factors on what the model says of a refrigerant against today's: capacity and COP, shape (rows,)."""

    capacity: FloatArray
    cop: FloatArray


def today_rows(case: Case, existing: Fluid, rows: Sample) -> Today:
    """Return the plant with today's refrigerant for every row.

    Args:
        case: The case.
        existing: The refrigerant in the plant.
        rows: Values of the inputs.
    Raises: RetrofitError if no row can be solved.
    """
    numbers = {_attribute(key): rows.values[key] for key in PHYSICAL if key in rows.values and key not in EFFICIENCIES}
    numbers |= _superheat_in_reach(case, rows)
    base = 1.0, 1.0
    if not has_curve(case):
        base = case.compressor.isentropic_efficiency, case.compressor.volumetric_efficiency
    factors = [rows.pick(key, single(value)) / value for key, value in zip(EFFICIENCIES, base, strict=True)]
    return today_of(with_numbers(case, numbers), existing.as_lenient(), (factors[0], factors[1]))


def _superheat_in_reach(case: Case, rows: Sample) -> dict[str, FloatArray]:
    """Return useful superheat that gives way where a draw leaves the evaporator little difference to make it with."""
    duty, evaporator = case.duty, case.evaporator
    if evaporator is None or evaporator.inlet_K is None or evaporator.arrangement == "flooded":
        return {}
    inlet = rows.pick("evaporator.inlet", single(evaporator.inlet_K))
    lead = inlet - rows.pick("duty.evaporating", single(duty.T_evap_K))
    drawn = rows.pick("duty.useful_superheat", single(duty.useful_superheat_K))
    share = max(USUAL_SUPERHEAT_SHARE, duty.useful_superheat_K / (evaporator.inlet_K - duty.T_evap_K))
    return {"duty.useful_superheat_K": np.minimum(drawn, np.maximum(share * lead, 0.0))}


def _attribute(key: str) -> str:
    return f"{key.partition('.')[0]}.{FIELDS[key][0]}"


def design_rows(today: Today, behaviour: Fluid, error: ModelError) -> DesignRows:
    """Return what a refrigerant does at the design point, row by row.

    Args:
        today: The plant with today's refrigerant, for every row.
        behaviour: The refrigerant.
        error: Factors on what its model says.
    """
    if today.plant is None:
        return _at_temperatures(today, behaviour, error)
    plant = today.plant
    inlets = [np.asarray(side.secondary.T_in_K) for side in (plant.machine.evaporator, plant.machine.condenser)]
    machine, starts = YearPlant(plant, behaviour, -np.inf, 1.0, "").at(inlets[0], inlets[1])
    loads = np.stack(np.broadcast_arrays(np.nan, plant.today_W))
    found = balanced(balance(behaviour, machine, *starts, loads))
    cooling, cop = found.cooling_W[0] * error.capacity, found.cop[1] * error.cop
    power = cooling / (found.cop[0] * error.cop)
    return DesignRows(cooling, power, cop, found.T_discharge_K[0], found.p_cond_Pa[0], np.asarray(plant.needed_W))


def _at_temperatures(today: Today, behaviour: Fluid, error: ModelError) -> DesignRows:
    """Return the same with the existing compressor at equal temperatures, where the exchangers are not known."""
    found: Performance[FloatArray] = performance(today.cycle(behaviour.as_lenient()), today.case.duty.cooling_W)
    full = at_swept_volume(found, today.swept_volume_m3_per_s)
    cooling, cop = full.cooling_W * error.capacity, full.cop * error.cop
    needed = np.asarray(today.case.duty.cooling_W)
    return DesignRows(cooling, cooling / cop, cop, full.T_discharge_K, full.p_cond_Pa, needed)


# The year by maps


@dataclass(frozen=True)
class YearByMap:
    """Everything of a year that is the same for every refrigerant.

    Attributes:
        case: The case, its numbers arrays of shape (rows,).
        cells: The year, like conditions taken together.
        shift_K: Shift of the weather, shape (rows,).
        load_W: Load, shape (cells, rows).
        serves: "cooling" or "heating".
    """

    case: Case
    cells: YearConditions
    shift_K: FloatArray
    load_W: FloatArray
    serves: str


def year_by_map(today: Today, asked: YearConditions, rows: Sample) -> YearByMap:
    """Return what every refrigerant's year by its map needs.

    Args:
        today: The plant with today's refrigerant, for every row.
        asked: What the year asks.
        rows: Values of the inputs.
    """
    cells, shift = together(asked), rows.pick(WEATHER, single(0.0))
    load = load_W(today.case, cells.T_air_K[:, None] + shift, cells.day_factor[:, None])
    return YearByMap(today.case, cells, shift, np.broadcast_to(load, (cells.hours.size, rows.rows)), asked.serves)


def year_rows(ready: YearPlant, base: YearPlant, year: YearByMap, error: ModelError, energy_J: float) -> YearRows:
    """Return a year with a refrigerant, row by row, from a map of the plant for each row.

    Args:
        ready: The plant with its refrigerant, for every row.
        base: The same by the numbers of the case alone.
        year: The year.
        error: Factors on what the model says of the refrigerant.
        energy_J: Electricity of the year of the base, every hour balanced; the rows are brought to it. [J]
    Source: capacity and power at full between the nodes of a map, linear; a machine of variable speed or in steps
        takes at a share of its load the share of that power that it takes with the numbers of the case alone.
    """
    axes = _axes(year)
    inlets = tuple(T_K[:, None] + year.shift_K for T_K in (year.cells.T_cond_in_K, year.cells.T_evap_in_K))
    able, power = (_between(axes, inlets, values) for values in _maps(ready, axes, year))
    able, power = able * error.capacity, power * error.capacity / error.cop
    share = np.minimum(year.load_W / able, 1.0)
    unmet = np.where(np.isnan(able), year.load_W, np.maximum(year.load_W - able, 0.0))
    saved, fans = _part_load(base, axes, year, share)
    settings = year.case.year
    assert settings is not None
    steady = sum(map(or_nothing, (settings.evaporator_fans_W, settings.pumps_W, settings.defrost_power_W)))
    total = electric_W(year.case, np.nan_to_num(power * share * saved))
    total = total + or_nothing(settings.condenser_fans_W) * np.nan_to_num(fans, nan=1.0) + steady
    # A row that has no solution at all has no year; single hours without one are hours of unmet load.
    total = np.where(np.all(np.isnan(able), axis=0), np.nan, total)
    energy = np.einsum("c,cr->r", year.cells.hours, total) * HOUR_S
    scale = energy_J / energy[0]
    unmet_J = np.einsum("c,cr->r", year.cells.hours, unmet) * HOUR_S
    return YearRows(energy * scale, total.max(axis=0) * scale, unmet_J)


@dataclass(frozen=True)
class _Axis:
    """Nodes along one inlet temperature: shape (nodes, 1), or (1, rows) where it keeps the case's own."""

    T_K: FloatArray

    def around(self, T_K: FloatArray) -> tuple[NDArray[np.int64], FloatArray]:
        """Return the node below each temperature and the share of the way to the next one."""
        nodes = self.T_K[:, 0]
        if nodes.size == 1:
            return np.zeros(T_K.shape, dtype=np.int64), np.zeros(T_K.shape)
        way = np.clip((T_K - nodes[0]) / (nodes[1] - nodes[0]), 0.0, nodes.size - 1.0)
        below = np.minimum(way.astype(np.int64), nodes.size - 2)
        return below, way - below


def _axes(year: YearByMap) -> tuple[_Axis, _Axis]:
    """Return the nodes along the condenser's and the evaporator's inlet."""
    case, reach = year.case, float(np.max(np.abs(year.shift_K)))
    assert case.year is not None
    assert case.condenser is not None
    assert case.evaporator is not None
    sides = (
        (case.year.condenser_follows, case.condenser.inlet_K, year.cells.T_cond_in_K),
        (case.year.evaporator_follows, case.evaporator.inlet_K, year.cells.T_evap_in_K),
    )
    both = all(follows != "constant" for follows, _, _ in sides)
    found = []
    for place, (follows, own, T_K) in enumerate(sides):
        if follows == "constant":
            found.append(_Axis(np.broadcast_to(np.asarray(own, dtype=float), year.shift_K.shape)[None, :]))
        else:
            nodes = FEW_NODES if both and place == 1 else NODES
            found.append(_Axis(np.linspace(T_K.min() - reach, T_K.max() + reach, nodes)[:, None]))
    return found[0], found[1]


def _maps(ready: YearPlant, axes: tuple[_Axis, _Axis], year: YearByMap) -> tuple[FloatArray, FloatArray]:
    """Return what the plant delivers and takes at full at every node, shape (sinks, sources, rows)."""
    sinks, sources = (axis.T_K for axis in axes)
    machine, starts = ready.at(sources[None, :, :], sinks[:, None, :])
    found = balanced(balance(ready.behaviour, machine, *starts))
    shape = (sinks.shape[0], sources.shape[0], year.shift_K.size)
    return np.broadcast_to(delivered_W(found, year.serves), shape), np.broadcast_to(found.power_W, shape)


def _between(axes: tuple[_Axis, _Axis], inlets_K: tuple[FloatArray, ...], values: FloatArray) -> FloatArray:
    """Return values of a map, shape (sinks, sources, rows), at inlet temperatures of shape (cells, rows)."""
    steps = [axis.around(T_K) for axis, T_K in zip(axes, inlets_K, strict=True)]
    row = np.arange(values.shape[2])
    found = np.zeros(inlets_K[0].shape)
    for corner in np.ndindex(2, 2):
        weight, places = np.ones(found.shape), []
        for (below, way), up, size in zip(steps, corner, values.shape, strict=False):
            weight = weight * (way if up else 1.0 - way)
            places.append(np.minimum(below + up, size - 1))
        found += np.where(weight > 0.0, weight * values[places[0], places[1], row], 0.0)
    return found


def _part_load(
    base: YearPlant, axes: tuple[_Axis, _Axis], year: YearByMap, share: FloatArray
) -> tuple[FloatArray | float, FloatArray]:
    """Return power over that of running part of the time, and the share of fans, at shares of what the plant can.

    A machine that starts and stops takes its full power for that share of the time. For one of variable speed or in
    steps both are solved at some shares with the numbers of the case alone, and interpolated.
    """
    compressor = base.plant.case.compressor
    if compressor.speed not in ("steps", "variable"):
        return 1.0, share
    nodes = [axis.T_K[:, 0] for axis in axes]
    machine, starts = base.at(nodes[1][None, :, None], nodes[0][:, None, None])
    full = balanced(balance(base.behaviour, machine, *starts))
    load = delivered_W(full, year.serves) * SHARES
    run = operating(base.behaviour, machine, compressor, full, load, starts, year.serves)
    inlets = tuple(
        np.repeat(T_K[:, None], SHARES.size, axis=1) for T_K in (year.cells.T_cond_in_K, year.cells.T_evap_in_K)
    )
    saved, fans = (
        _between(axes, inlets, values)
        for values in (run.mean_power_W / (full.power_W * SHARES), fans_share(compressor, run))
    )
    return _at_shares(saved, share), _at_shares(fans, share)


def _at_shares(values: FloatArray, share: FloatArray) -> FloatArray:
    """Return values known at SHARES, shape (cells, shares), at other shares, shape (cells, rows)."""
    kept = np.clip(np.nan_to_num(share, nan=1.0), SHARES[0], SHARES[-1])
    below = np.clip(np.searchsorted(SHARES, kept) - 1, 0, SHARES.size - 2)
    way = (kept - SHARES[below]) / np.diff(SHARES)[below]
    cell = np.arange(values.shape[0])[:, None]
    return np.asarray(values[cell, below] * (1.0 - way) + values[cell, below + 1] * way)
