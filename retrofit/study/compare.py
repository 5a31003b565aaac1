"""Comparing refrigerants at the plant's temperatures, on two bases: same duty and same compressor."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import fields, replace
from importlib.metadata import version

import numpy as np

import retrofit
from retrofit.case import Case
from retrofit.cycle import state_points
from retrofit.errors import NoSolutionError, RetrofitError
from retrofit.properties import Fluid, fluid, grade
from retrofit.refrigerants import Refrigerant, cautions_for, change_cautions, find
from retrofit.study.agreement import held_against_model
from retrofit.study.bands import evidence_of
from retrofit.study.baseline import baseline, case_with_readings
from retrofit.study.families import family_of, is_new_plant
from retrofit.study.hardware import run as hardware
from retrofit.study.hardware.conditions import at_rest, hottest_inlet_K
from retrofit.study.installed import run_installed
from retrofit.study.lines import chart_lines
from retrofit.study.performance import as_numbers, at_swept_volume, performance
from retrofit.study.result import Baseline, Comparison, Entry, Installed, Point
from retrofit.study.states import Family
from retrofit.study.today import Today, today_of

# Ratios to the existing refrigerant: name, basis, quantity of the performance.
RATIOS = (
    ("cop", "duty", "cop"),
    ("capacity", "compressor", "cooling_W"),
    ("power", "compressor", "power_W"),
    ("heat_rejected", "compressor", "heat_rejected_W"),
    ("mass_flow", "compressor", "mass_flow_kg_per_s"),
    ("volumetric_capacity", "duty", "volumetric_capacity_J_per_m3"),
    ("refrigerating_effect", "duty", "refrigerating_effect_J_per_kg"),
    ("power_same_duty", "duty", "power_W"),
    ("mass_flow_same_duty", "duty", "mass_flow_kg_per_s"),
    ("swept_volume_same_duty", "duty", "swept_volume_m3_per_s"),
    ("p_evap", "duty", "p_evap_Pa"),
    ("p_cond", "duty", "p_cond_Pa"),
    ("pressure_ratio", "duty", "pressure_ratio"),
)
OF_MACHINE = "compressor"  # a basis that a new plant does not have
NEW_PLANT = "a new plant is sized for the duty, and is not computed on the existing machine"
OnBuild = Callable[[str], None]


def compare(case: Case, on_build: OnBuild | None = None) -> Comparison:
    """Compare the candidates of a case with its existing refrigerant.

    Args:
        case: The case.
        on_build: Called with a designation before its tables are built, which takes a second or so.
    Returns: The comparison; a refrigerant that cannot be computed is an entry with its reason.
    """
    refrigerant = find(case.plant.refrigerant)
    existing = Entry(
        refrigerant, Family.KEEP, "not computed", None, cautions_for(refrigerant), at_rest=at_rest(case, None)
    )
    found: Baseline | None = None
    today: Today | None = None
    parts: hardware.Today | None = None
    behaviour: Fluid | None = None
    try:
        behaviour = fluid(refrigerant.designation, on_build)
        existing = replace(existing, at_rest=at_rest(case, behaviour))
        found = baseline(case, behaviour)
        case = case_with_readings(case, found)
        today = today_of(case, behaviour)
        existing = _solved(today, existing, behaviour)
        parts = hardware.today_of(today.site, behaviour, existing)
        existing = _against(existing, existing, parts, behaviour)
    except RetrofitError as error:
        existing = replace(existing, reason=error.message)
    candidates = [_candidate(case, today, parts, find(name), existing, on_build) for name in case.compare.candidates]
    comparison = Comparison(
        case=case,
        existing=existing,
        candidates=tuple(candidates),
        swept_volume_m3_per_s=float(today.swept_volume_m3_per_s) if today else case.compressor.swept_volume_m3_per_s,
        swept_volume_from="duty" if case.compressor.swept_volume_m3_per_s is None else "case",
        versions={"retrofit": retrofit.__version__, "coolprop": version("CoolProp")},
        baseline=found,
    )
    return held_against_model(comparison, today, behaviour)


def case_as_taken(case: Case, on_build: OnBuild | None = None) -> Case:
    """Return the case as `compare` takes it: with what its readings say in place of what it leaves out.

    Args:
        case: The case.
        on_build: As for `compare`; only the tables of today's refrigerant are built, and only for readings.
    Returns: The case; unchanged where today's refrigerant cannot be computed.
    """
    if case.readings is None:
        return case
    alone = replace(case, compare=case.compare.model_copy(update={"candidates": ()}))
    return replace(compare(alone, on_build).case, compare=case.compare)


def _candidate(
    case: Case,
    today: Today | None,
    parts: hardware.Today | None,
    refrigerant: Refrigerant,
    existing: Entry,
    on_build: OnBuild | None,
) -> Entry:
    entry = Entry(
        refrigerant,
        family_of(case, existing.refrigerant, refrigerant),
        "not computed",
        None,
        (*change_cautions(existing.refrigerant, refrigerant), *cautions_for(refrigerant)),
        at_rest=at_rest(case, None),
        is_new_plant=is_new_plant(case, refrigerant),
    )
    if today is None or parts is None:
        name = existing.refrigerant.designation
        entry = replace(entry, reason=f"{name}, the existing refrigerant it would be matched to, is not computed")
    try:
        behaviour = fluid(refrigerant.designation, on_build)
        entry = replace(entry, at_rest=at_rest(case, behaviour))
        if today is None or parts is None:
            return entry
        return _against(_solved(today, entry, behaviour), existing, parts, behaviour)
    except RetrofitError as error:
        return replace(entry, reason=entry.reason or error.message)


def _solved(today: Today, entry: Entry, behaviour: Fluid) -> Entry:
    """Solve a refrigerant on every basis; a plant that does not balance leaves the other bases standing."""
    cycle = today.cycle(behaviour)
    duty = as_numbers(performance(cycle, today.case.duty.cooling_W))
    installed, reason = None, today.plant_reason
    if today.plant is not None:
        try:
            installed = run_installed(today.plant, behaviour, cycle, hottest_inlet_K(today.case))
        except NoSolutionError as error:
            reason = error.message
    covered = bool(today.model.of(behaviour).covers(cycle.pressure_ratio, cycle.p_suction_Pa))
    return replace(
        entry,
        status="ok",
        grade=grade(behaviour, entry.refrigerant),
        duty=duty,
        compressor=at_swept_volume(duty, float(today.swept_volume_m3_per_s)),
        plant=installed,
        plant_reason=reason,
        points=tuple(_point(state) for state in state_points(behaviour, cycle)),
        lines=chart_lines(behaviour),
        T_limit_K=behaviour.T_limit_K,
        is_covered=covered and (installed is None or installed.is_covered),
    )


def _point(state: object) -> Point:
    values = {item.name: getattr(state, item.name) for item in fields(Point)}
    numbers = {name: float(value) for name, value in values.items() if name != "name"}
    for name in ("quality", "molar_quality"):
        numbers[name] = None if np.isnan(numbers[name]) else numbers[name]  # type: ignore[assignment]
    return Point(name=values["name"], **numbers)


def _against(entry: Entry, existing: Entry, parts: hardware.Today, behaviour: Fluid) -> Entry:
    """Add the ratios to the existing refrigerant, and what the hardware sees with both."""
    if entry.is_new_plant:
        entry = _on_its_own(entry)
    if entry.duty is None or existing.duty is None:
        return entry
    ratios = {
        name: getattr(getattr(entry, basis), quantity) / getattr(getattr(existing, basis), quantity)
        for name, basis, quantity in RATIOS
        if not (entry.is_new_plant and basis == OF_MACHINE)
    }
    if entry.plant and existing.plant:
        ratios |= _plant_ratios(entry.plant, existing.plant)
    difference = entry.duty.T_discharge_K - existing.duty.T_discharge_K
    return replace(
        entry,
        evidence=evidence_of(parts.site.case, existing, entry),
        relative=ratios,
        T_discharge_difference_K=difference,
        hardware_numbers=None if entry.is_new_plant else hardware.hardware_numbers(parts, behaviour, entry),
    )


def _on_its_own(entry: Entry) -> Entry:
    """Return a new plant without anything of the existing machine; its year is sized from exchangers like today's."""
    return replace(entry, compressor=None, plant=None, plant_reason=NEW_PLANT, like_today=entry.plant, is_covered=None)


def _plant_ratios(new: Installed, today: Installed) -> dict[str, float]:
    return {
        "plant_capacity": new.full.cooling_W / today.full.cooling_W,
        "plant_power": new.full.power_W / today.full.power_W,
        "plant_heat_rejected": new.full.heat_rejected_W / today.full.heat_rejected_W,
        "plant_cop": new.full.cop / today.full.cop,
        "plant_cop_same_cooling": new.same_cooling.cop / today.same_cooling.cop,
        "plant_mean_power": new.operation.mean_power_W / today.operation.mean_power_W,
    }
