"""Comparing refrigerants at the plant's temperatures, on two bases: same duty and same compressor."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import fields, replace
from importlib.metadata import version

import numpy as np

import retrofit
from retrofit.case import Case
from retrofit.cycle import (
    Cycle,
    Settings,
    Temperatures,
    cycle_temperatures,
    matched_pressures,
    solve_cycle,
    state_points,
)
from retrofit.errors import OutsideValidRangeError, RetrofitError
from retrofit.properties import Fluid, fluid, grade
from retrofit.refrigerants import Refrigerant, cautions_for, change_cautions, find
from retrofit.study.lines import chart_lines
from retrofit.study.result import Comparison, Entry, FloatArray, Performance, Point

KELVIN = 273.15
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
OnBuild = Callable[[str], None]


def compare(case: Case, on_build: OnBuild | None = None) -> Comparison:
    """Compare the candidates of a case with its existing refrigerant.

    Args:
        case: The case.
        on_build: Called with a designation before its tables are built, which takes a second or so.
    Returns: The comparison; a refrigerant that cannot be computed is an entry with its reason.
    """
    settings = _settings(case)
    targets, existing = _existing(case, settings, on_build)
    swept, swept_from = _swept_volume(case, existing)
    existing = _with_compressor(existing, swept)
    existing = _against(existing, existing)
    candidates = []
    for name in case.compare.candidates:
        entry = _candidate(case, settings, targets, find(name), existing, on_build)
        candidates.append(_against(_with_compressor(entry, swept), existing))
    return Comparison(
        case=case,
        existing=existing,
        candidates=tuple(candidates),
        swept_volume_m3_per_s=swept,
        swept_volume_from=swept_from,
        versions={"retrofit": retrofit.__version__, "coolprop": version("CoolProp")},
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


def _settings(case: Case) -> Settings:
    duty, compressor = case.duty, case.compressor
    return Settings(
        useful_superheat_K=duty.useful_superheat_K,
        line_superheat_K=duty.line_superheat_K,
        subcooling_K=duty.subcooling_K,
        isentropic_efficiency=compressor.isentropic_efficiency,
        volumetric_efficiency=compressor.volumetric_efficiency,
    )


def _existing(case: Case, settings: Settings, on_build: OnBuild | None) -> tuple[Temperatures | None, Entry]:
    """Solve the existing refrigerant from its reading, and return the temperatures candidates are matched to."""
    refrigerant = find(case.plant.refrigerant)
    entry = Entry(refrigerant, "keep", "not computed", None, cautions_for(refrigerant))
    reading = Temperatures(case.duty.T_evap_K, case.duty.T_cond_K, case.duty.reading)
    try:
        _check_subcooling(case)
        behaviour = fluid(refrigerant.designation, on_build)
        pressures = matched_pressures(behaviour, reading, settings.subcooling_K)
        targets = cycle_temperatures(solve_cycle(behaviour, *pressures, settings), case.compare.match)
        return targets, _solved(case, settings, targets, entry, behaviour)
    except RetrofitError as error:
        return None, replace(entry, reason=error.message)


def _check_subcooling(case: Case) -> None:
    """Refuse liquid that would be colder than the evaporator, before a model says so in its own terms."""
    duty = case.duty
    liquid_K = duty.T_cond_K - duty.subcooling_K
    if liquid_K <= duty.T_evap_K:
        liquid, evaporator = f"{liquid_K - KELVIN:.1f} degC", f"{duty.T_evap_K - KELVIN:.1f} degC"
        raise OutsideValidRangeError(
            f"with {duty.subcooling_K:g} K of subcooling the liquid at the expansion valve, {liquid}, would be "
            f"no warmer than the evaporator, {evaporator}; give less subcooling"
        )


def _candidate(
    case: Case,
    settings: Settings,
    targets: Temperatures | None,
    refrigerant: Refrigerant,
    existing: Entry,
    on_build: OnBuild | None,
) -> Entry:
    changes = change_cautions(existing.refrigerant, refrigerant)
    is_step_known = existing.refrigerant.safety_class.text and refrigerant.safety_class.text
    family = "replace" if changes and is_step_known else "convert"
    entry = Entry(refrigerant, family, "not computed", None, (*changes, *cautions_for(refrigerant)))
    if targets is None:
        name = existing.refrigerant.designation
        return replace(entry, reason=f"{name}, the existing refrigerant it would be matched to, is not computed")
    try:
        return _solved(case, settings, targets, entry, fluid(refrigerant.designation, on_build))
    except RetrofitError as error:
        return replace(entry, reason=error.message)


def _solved(case: Case, settings: Settings, targets: Temperatures, entry: Entry, behaviour: Fluid) -> Entry:
    pressures = matched_pressures(behaviour, targets, settings.subcooling_K)
    cycle = solve_cycle(behaviour, *pressures, settings)
    return replace(
        entry,
        status="ok",
        grade=grade(behaviour, entry.refrigerant),
        duty=_numbers(performance(cycle, case.duty.cooling_W)),
        points=tuple(_point(state) for state in state_points(behaviour, cycle)),
        lines=chart_lines(behaviour),
        T_limit_K=behaviour.T_limit_K,
    )


def _numbers(found: Performance[FloatArray]) -> Performance[float]:
    return Performance(**{item.name: float(getattr(found, item.name)) for item in fields(Performance)})


def _point(state: object) -> Point:
    values = {item.name: getattr(state, item.name) for item in fields(Point)}
    numbers = {name: float(value) for name, value in values.items() if name != "name"}
    for name in ("quality", "molar_quality"):
        numbers[name] = None if np.isnan(numbers[name]) else numbers[name]  # type: ignore[assignment]
    return Point(name=values["name"], **numbers)


def _swept_volume(case: Case, existing: Entry) -> tuple[float | None, str]:
    """Return the swept volume of the existing compressors: as given, else what today's duty needs."""
    if case.compressor.swept_volume_m3_per_s is not None:
        return case.compressor.swept_volume_m3_per_s, "case"
    return (existing.duty.swept_volume_m3_per_s if existing.duty else None), "duty"


def _with_compressor(entry: Entry, swept_m3_per_s: float | None) -> Entry:
    """Add the basis `compressor`: everything that scales with flow, scaled to the swept volume."""
    if entry.duty is None or swept_m3_per_s is None:
        return entry
    scale = swept_m3_per_s / entry.duty.swept_volume_m3_per_s
    flows = (
        "cooling_W",
        "mass_flow_kg_per_s",
        "suction_volume_flow_m3_per_s",
        "swept_volume_m3_per_s",
        "power_W",
        "heat_rejected_W",
        "line_heat_W",
    )
    scaled = {name: getattr(entry.duty, name) * scale for name in flows}
    return replace(entry, compressor=replace(entry.duty, **scaled))


def _against(entry: Entry, existing: Entry) -> Entry:
    """Add the ratios to the existing refrigerant."""
    if entry.duty is None or existing.duty is None:
        return entry
    ratios = {
        name: getattr(getattr(entry, basis), quantity) / getattr(getattr(existing, basis), quantity)
        for name, basis, quantity in RATIOS
    }
    difference = entry.duty.T_discharge_K - existing.duty.T_discharge_K
    return replace(entry, relative=ratios, T_discharge_difference_K=difference)
