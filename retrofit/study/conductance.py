"""What each candidate does to the conductance (UA) of both exchangers: as the case gives it, or calculated."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import Case
from retrofit.case.exchangers import Exchanger
from retrofit.cycle import Cycle, cycle_temperatures, matched_pressures
from retrofit.equipment.heat_transfer import KINDS, ConductanceRatio, Kind, Saturated, exchanger_ratio, saturated
from retrofit.properties import Fluid
from retrofit.refrigerants import find
from retrofit.study.families import is_new_plant
from retrofit.study.result import FloatArray, UAFactor
from retrofit.units import ZERO_C_K

SIDES: tuple[Literal["evaporator"], Literal["condenser"]] = ("evaporator", "condenser")


@dataclass(frozen=True)
class UAFactors:
    """Factors on the conductance of evaporator and condenser with a refrigerant.

    Attributes:
        factors: As arrays over the conditions of the case, shape (2, ...).
        told: The same for a reader, at the first condition.
    """

    factors: FloatArray
    told: tuple[UAFactor, UAFactor]


def kind_name(table: Exchanger, way: str, T_evap_K: float) -> str:
    """Return the kind of an exchanger, a key of `KINDS`; empty if the case does not say what flows through it.

    Args:
        table: Its table of the case.
        way: "evaporator" or "condenser".
        T_evap_K: Evaporating temperature: an air coil below 0 degC gathers frost, above it water. [K]
    """
    if table.medium is None:
        return ""
    if table.arrangement == "flooded":
        return f"flooded, {table.medium}"
    if table.medium == "air":
        if way == "condenser":
            return "dry coil"
        return "frosting coil" if T_evap_K < ZERO_C_K else "wet coil"
    return f"{'plates' if table.arrangement == 'counterflow' else 'tubes'}, {table.medium}"


@dataclass(frozen=True)
class Films:
    """A refrigerant in both exchangers at the mean temperatures of today's.

    Attributes:
        density_kg_per_m3: Of the vapour drawn in.
        evaporator, condenser: Its saturated states.
    """

    density_kg_per_m3: FloatArray
    evaporator: Saturated
    condenser: Saturated


def films(fluid: Fluid, cycle: Cycle) -> Films:
    """Return a refrigerant at the mean temperatures of a cycle; NaN where it has no such states.

    Args:
        fluid: The refrigerant.
        cycle: Cycle of today's refrigerant.
    """
    inside, settings = fluid.as_lenient(), cycle.settings
    p_evap, p_cond = matched_pressures(inside, cycle_temperatures(cycle, "mean"), settings.subcooling_K)
    superheat = np.asarray(settings.useful_superheat_K) + np.asarray(settings.line_superheat_K)
    density = inside.vapour(p_evap, superheat).density_kg_per_m3
    return Films(density, saturated(inside, p_evap), saturated(inside, p_cond))


def ua_factors(case: Case, today: Films, cycle: Cycle, behaviour: Fluid) -> UAFactors:
    """Return what a refrigerant does to both conductances; 1 for today's and for a new plant, sized like today's.

    Args:
        case: The case, with both exchangers.
        today: The refrigerant in the plant, in both exchangers.
        cycle: Its cycle at the temperatures of the case.
        behaviour: The refrigerant asked for.
    """
    name, origin = behaviour.designation, "given"
    tables = (case.evaporator, case.condenser)
    given = [None if table is None else table.ua_factor.of(name) for table in tables]
    if name == case.plant.refrigerant:
        return _constant([UAFactor.alone(1.0, "today")] * 2)
    if is_new_plant(case, find(name)):
        given, origin = [1.0 if one is None else one for one in given], "new plant"
    stated = [UAFactor.alone(one, origin) for one in given if one is not None]
    if len(stated) == len(given):
        return _constant(stated)
    computed = _computed(case, today, cycle, behaviour)
    factors, told = [], []
    for one, (kind, ratio) in zip(given, computed, strict=True):
        factors.append(ratio.ratio if one is None else np.full_like(ratio.ratio, one))
        told.append(_told(kind, ratio) if one is None else UAFactor.alone(float(one), "given"))
    return UAFactors(np.stack(np.broadcast_arrays(*factors)), (told[0], told[1]))


def _constant(told: list[UAFactor]) -> UAFactors:
    return UAFactors(np.array([one.factor for one in told]), (told[0], told[1]))


def _computed(case: Case, today: Films, cycle: Cycle, behaviour: Fluid) -> list[tuple[str, ConductanceRatio]]:
    """Return kind and ratio of both exchangers."""
    new = films(behaviour, cycle)
    flow = new.density_kg_per_m3 / today.density_kg_per_m3  # the same machine at the same volumetric efficiency
    T_evap_K, found = _first(cycle_temperatures(cycle, "mean").T_evap_K), []
    for way, table in zip(SIDES, (case.evaporator, case.condenser), strict=True):
        assert table is not None
        name = kind_name(table, way, T_evap_K)
        sides = getattr(today, way), getattr(new, way)
        found.append((name, exchanger_ratio(*sides, flow, KINDS.get(name, UNKNOWN), way)))
    return found


UNKNOWN = Kind(0.35, 0.10, 0.70, 0.15, None)  # no medium given: any of them


def _first(values: ArrayLike) -> float:
    return float(np.ravel(np.asarray(values, dtype=float))[0])


def _told(kind: str, ratio: ConductanceRatio) -> UAFactor:
    factor, half = _first(ratio.ratio), _first(ratio.plus_minus)
    is_known = bool(np.ravel(ratio.is_known)[0])
    return UAFactor(
        factor=factor,
        low=factor - half,
        high=factor + half,
        origin="calculated" if is_known else "unknown",
        kind=kind,
        share=ratio.share,
        flow=_first(ratio.flow),
        glide_K=_first(ratio.glide_K),
        film=_first(ratio.film) if is_known else None,
    )
