"""Numbers for those who carry a changeover out: what to recover, drain and charge, and what the gauges should show."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from retrofit.case import Case
from retrofit.cycle import pressure_at_mean
from retrofit.equipment.balance import balance
from retrofit.equipment.oil import changes_needed
from retrofit.equipment.vessels import co2_equivalent_t, cylinders_needed, vessel_fill
from retrofit.errors import NoSolutionError, RetrofitError
from retrofit.properties import Fluid, fluid
from retrofit.study.draws import today_rows
from retrofit.study.hardware.numbers import HardwareNumbers
from retrofit.study.installed import ExistingPlant, machine_at
from retrofit.study.operating import balanced
from retrofit.study.performance import electric_W
from retrofit.study.practice import practice
from retrofit.study.result import Comparison, Entry, FloatArray, Performance
from retrofit.study.saturation import saturation_table
from retrofit.study.uncertain import physical_inputs, sample
from retrofit.units import ZERO_C_K

DRAWS, SEED = 200, 1  # of what may be off in the inputs: percentiles are within a tenth of a window's width
BASE = 0  # the row of a sample with every input at its base
READ = ("p_evap_Pa", "p_cond_Pa", "T_discharge_K", "power_W")
LITRE_M3 = 1e-3
CLOSE_K = 0.01
SAME_DAY_K = 0.05
WITHOUT_LAW = ("gwp_100yr_ar4", "gwp_100yr_ar6")


@dataclass(frozen=True)
class Cylinders:
    """Recovery cylinders of one size: volume inside, what one takes, and how many the charge needs."""

    volume_m3: float
    each_kg: float
    count: int


@dataclass(frozen=True)
class Recovery:
    """What is to be recovered of the refrigerant in the plant.

    Attributes:
        charge_kg: Charge of today; None if not known.
        T_K, fill: Temperature and share of the volume that the cylinders are counted with.
        kg_per_m3: What a cubic metre of cylinder takes; None where `reason` says why.
        cylinders: Numbers of cylinders by size; none without a charge.
        reason: What is missing.
    """

    charge_kg: float | None
    T_K: float
    fill: float
    kg_per_m3: float | None
    cylinders: tuple[Cylinders, ...]
    reason: str = ""


@dataclass(frozen=True)
class OilChanges:
    """Changes of oil that bring the old oil down to a share of all oil.

    Attributes:
        target: That share.
        fewest, most: Changes with the least and the most oil left by each; equal if the case gives it.
    """

    target: float
    fewest: float
    most: float


@dataclass(frozen=True)
class Weight:
    """The climate weight that a label states.

    Attributes:
        basis: Which GWP, a key of `GWP_BASES`.
        gwp: The potential; None if there is none on this basis.
        co2e_t: Weight of the charge expected; None without a charge.
    """

    basis: str
    gwp: float | None
    co2e_t: float | None


@dataclass(frozen=True)
class Bands:
    """How far the model may be from what a plant does.

    Attributes:
        pressure, power: Relative.
        T_discharge_K: Temperature difference.
    """

    pressure: float
    power: float
    T_discharge_K: float


@dataclass(frozen=True)
class Window:
    """What a reading is expected to lie between."""

    low: float
    high: float


@dataclass(frozen=True)
class Expected:
    """What the gauges should show at one temperature at the inlet of the condenser, the machine running at full.

    Attributes:
        name: "milder", "design", "hottest" (the hottest day of the case), "hotter" (one taken) or "today".
        T_inlet_K: Temperature of air, water or brine there.
        p_evap_Pa, p_cond_Pa: Pressures, absolute.
        T_discharge_K, power_W, current_A: At the compressor, the power electrical; a current None if it cannot be told.
        is_held: Whether the control of head pressure holds the condensing pressure up.
        reason: Why nothing is known; empty otherwise.
    """

    name: str
    T_inlet_K: float
    p_evap_Pa: Window | None = None
    p_cond_Pa: Window | None = None
    T_discharge_K: Window | None = None
    power_W: Window | None = None
    current_A: Window | None = None
    is_held: bool = False
    reason: str = ""


@dataclass(frozen=True)
class Changeover:
    """The numbers of one changeover.

    Attributes:
        entry: The new refrigerant.
        recovery: What is to be recovered.
        oil_left: Share of the oil that each change leaves behind, at least and at most, and whether the case says so.
        is_oil_left_given: Whether that is the case's own.
        oil_changes: Changes needed for each share of old oil aimed at, the mildest last.
        first_charge_kg: Least and most to charge first; None if the charge is not known.
        weights: GWP and climate weight, on the bases of the law that the case names, else on `WITHOUT_LAW`.
        expected: What the gauges should show; empty where `expected_reason` says why.
        expected_reason: Why it is not computed.
    """

    entry: Entry
    recovery: Recovery
    oil_left: tuple[float, float]
    is_oil_left_given: bool
    oil_changes: tuple[OilChanges, ...]
    first_charge_kg: tuple[float, float] | None
    weights: tuple[Weight, ...]
    expected: tuple[Expected, ...]
    expected_reason: str = ""


def changeover(
    comparison: Comparison,
    entry: Entry,
    bands: Bands,
    oil_targets: Sequence[float],
    T_inlet_today_K: float | None = None,
) -> Changeover:
    """Return the numbers of changing the plant to a refrigerant.

    Args:
        comparison: A result.
        entry: The new refrigerant.
        bands: Bands of the model.
        oil_targets: Shares of old oil in all oil to aim at. [-]
        T_inlet_today_K: Temperature at the inlet of the condenser on the day, to add what is expected there. [K]
    """
    given = comparison.case.plant.oil_left
    left = practice("oil_left").ends if given is None else (given, given)
    expected, reason = _expected(comparison, entry, bands, T_inlet_today_K)
    return Changeover(
        entry=entry,
        recovery=recovery(comparison.case),
        oil_left=left,
        is_oil_left_given=given is not None,
        oil_changes=tuple(OilChanges(target, *_changes(left, target)) for target in oil_targets),
        first_charge_kg=_first_charge(entry.hardware_numbers),
        weights=_weights(entry),
        expected=expected,
        expected_reason=reason,
    )


def _changes(left: tuple[float, float], target: float) -> tuple[float, float]:
    fewest, most = changes_needed(left, target)
    return float(fewest), float(most)


def recovery(case: Case) -> Recovery:
    """Return what is to be recovered from the plant of a case, and into how many cylinders.

    Args:
        case: The case.
    """
    charge, fill = case.plant.charge_kg, practice("cylinder_fill").low
    T_K = practice("cylinder_temperature").low + ZERO_C_K
    try:
        behaviour = fluid(case.plant.refrigerant)
    except RetrofitError as error:
        return Recovery(charge, T_K, fill, None, (), error.message)
    full = vessel_fill(behaviour, T_K, 1.0, charge or 0.0, fill)
    if not full.is_liquid:
        gone = f"the model of {behaviour.designation} has no liquid at {T_K - ZERO_C_K:.0f} °C; go by the mass stamped"
        return Recovery(charge, T_K, fill, None, (), gone)
    per_volume = float(full.largest_charge_kg)
    if charge is None:
        return Recovery(None, T_K, fill, per_volume, (), "`charge` in [plant] is not given")
    sizes = [volume * LITRE_M3 for volume in practice("cylinder_volume").ends]
    counts = cylinders_needed(behaviour, T_K, charge, sizes, fill)
    found = (Cylinders(size, size * per_volume, int(count)) for size, count in zip(sizes, counts, strict=True))
    return Recovery(charge, T_K, fill, per_volume, tuple(found))


def _first_charge(numbers: HardwareNumbers | None) -> tuple[float, float] | None:
    if numbers is None or numbers.filling is None:
        return None
    low, high = practice("first_charge").ends
    return low * numbers.filling.expected_kg, high * numbers.filling.expected_kg


def _weights(entry: Entry) -> tuple[Weight, ...]:
    bases = tuple(entry.law.gwp) if entry.law else ()
    filling = entry.hardware_numbers.filling if entry.hardware_numbers else None
    return tuple(_weight(entry, basis, filling.expected_kg if filling else None) for basis in bases or WITHOUT_LAW)


def _weight(entry: Entry, basis: str, charge_kg: float | None) -> Weight:
    gwp = getattr(entry.refrigerant, basis).number
    if gwp is None or charge_kg is None:
        return Weight(basis, gwp, None)
    return Weight(basis, gwp, float(co2_equivalent_t(charge_kg, gwp)))


# -- what the gauges should show ---------------------------------------------------------------------


def _expected(
    comparison: Comparison, entry: Entry, bands: Bands, T_today_K: float | None
) -> tuple[tuple[Expected, ...], str]:
    """Return what is expected at each condenser inlet, or why nothing is."""
    numbers, case = entry.hardware_numbers, comparison.case
    if numbers is None:
        return (), entry.reason or "it is not computed"
    if numbers.basis != "plant":
        return (), entry.plant_reason or comparison.existing.plant_reason or "the plant as installed is not computed"
    try:
        rows = sample(physical_inputs(case), DRAWS, SEED)
        plant = today_rows(case, fluid(case.plant.refrigerant), rows).plant
        behaviour = fluid(entry.refrigerant.designation)
        held = _held_dew_K(numbers, behaviour)
    except RetrofitError as error:
        return (), error.message
    assert plant is not None, "the basis says that the plant balances"
    return _at_inlets(plant, behaviour, numbers, bands, held, _inlets(case, T_today_K), rows.drawn), ""


def _held_dew_K(numbers: HardwareNumbers, behaviour: Fluid) -> float:
    """Return the condensing dew temperature that the control of head pressure holds at least. [K]"""
    held = next((item for item in numbers.settings if item.key == "head_pressure"), None)
    if held is None:
        return -np.inf
    if held.p_Pa.new is None:
        raise NoSolutionError(f"what the control of head pressure holds is not known: {held.reason}")
    return float(behaviour.dew(held.p_Pa.new).T_K)


def _inlets(case: Case, T_today_K: float | None) -> list[tuple[str, float]]:
    """Return name and temperature of each condenser inlet, the mildest first."""
    assert case.condenser is not None
    assert case.condenser.inlet_K is not None
    design, hottest = case.condenser.inlet_K, case.plant.highest_ambient_K
    is_air = case.condenser.medium == "air"
    milder = design - practice("milder_air" if is_air else "milder_liquid").low
    found = [("milder", milder), ("design", design)]
    if is_air and hottest is not None and hottest > design + SAME_DAY_K:
        found.append(("hottest", hottest))
    else:
        found.append(("hotter", design + practice("hotter").low))
    return found + ([("today", T_today_K)] if T_today_K is not None else [])


def _at_inlets(
    plant: ExistingPlant,
    behaviour: Fluid,
    numbers: HardwareNumbers,
    bands: Bands,
    held_dew_K: float,
    inlets: Sequence[tuple[str, float]],
    drawn: slice,
) -> tuple[Expected, ...]:
    """Return what is expected at every condenser inlet, the plant balanced for every draw of its inputs."""
    T_in = np.array([T_K for _, T_K in inlets])[:, None]
    machine, starts = machine_at(plant, behaviour, np.asarray(plant.machine.evaporator.secondary.T_in_K), T_in)
    found = balance(
        behaviour, replace(machine, T_cond_lowest_K=held_dew_K), starts[0], np.maximum(starts[1], held_dew_K)
    )
    every = balanced(found)
    expected = []
    for place, (name, T_K) in enumerate(inlets):
        if found.reason[place, BASE]:
            expected.append(Expected(name, T_K, reason=str(found.reason[place, BASE])))
            continue
        readings = {quantity: getattr(every, quantity)[place] for quantity in READ}
        is_held = float(every.T_cond_dew_K[place, BASE]) <= held_dew_K + CLOSE_K
        expected.append(replace(_windows(plant.case, numbers, bands, name, T_K, readings, drawn), is_held=is_held))
    return tuple(expected)


def _windows(
    case: Case,
    numbers: HardwareNumbers,
    bands: Bands,
    name: str,
    T_K: float,
    readings: Mapping[str, FloatArray],
    drawn: slice,
) -> Expected:
    """Return what is expected of each reading, wide enough for its inputs and for the model."""
    at_design = numbers.current_A.new
    # Motor current goes with power, as everywhere in the hardware.
    per_watt = None if at_design is None else at_design / numbers.new.design.power_W
    p_evap, p_cond, T_discharge, power = (readings[quantity] for quantity in READ)
    electric = electric_W(case, power)
    return Expected(
        name,
        T_K,
        p_evap_Pa=_window(p_evap, drawn, bands.pressure * p_evap[BASE]),
        p_cond_Pa=_window(p_cond, drawn, bands.pressure * p_cond[BASE]),
        T_discharge_K=_window(T_discharge, drawn, bands.T_discharge_K),
        power_W=_window(electric, drawn, bands.power * electric[BASE]),
        current_A=None if per_watt is None else _window(power * per_watt, drawn, bands.power * power[BASE] * per_watt),
    )


def _window(readings: FloatArray, drawn: slice, band: float) -> Window:
    """Return what a reading is expected to lie between.

    Args:
        readings: It at the base of every input, and for every draw of them. [SI]
        drawn: Where the draws stand.
        band: Band of the model to either side. [SI]
    Source: 10th and 90th percentile of the draws; what the model may be off has nothing to do with the inputs, so both
        distances from the base are added in quadrature (JCGM 100:2008, 5.1.2).
    """
    base = float(readings[BASE])
    low, high = np.nanpercentile(readings[drawn], (10.0, 90.0))
    return Window(
        base - math.hypot(max(base - float(low), 0.0), band), base + math.hypot(max(float(high) - base, 0.0), band)
    )


# -- the pressure-temperature table ------------------------------------------------------------------


@dataclass(frozen=True)
class PressureRow:
    """Pressures of a refrigerant at one temperature, absolute; None outside the range of its model.

    Attributes:
        T_K: The temperature.
        p_bubble_Pa, p_dew_Pa: Where it is the bubble point, and where it is the dew point.
        p_mean_Pa: Where bubble and dew point lie equally far below and above it.
    """

    T_K: float
    p_bubble_Pa: float | None
    p_dew_Pa: float | None
    p_mean_Pa: float | None


def pressure_rows(
    name: str, temperatures: Sequence[float], on_build: Callable[[str], None] | None = None
) -> tuple[PressureRow, ...]:
    """Return the pressures of a refrigerant over temperature, as a technician reads them.

    Args:
        name: Refrigerant.
        temperatures: Temperatures. [K]
        on_build: Called with the designation before tables are built.
    Raises: UnknownRefrigerantError, NoModelError, ModelFaultError.
    """
    rows = saturation_table(name, temperatures, on_build).rows
    means = pressure_at_mean(fluid(name).as_lenient(), temperatures)
    return tuple(
        PressureRow(row.T_K, row.p_bubble_Pa, row.p_dew_Pa, float(p) if np.isfinite(p) else None)
        for row, p in zip(rows, means, strict=True)
    )


def operating_span(comparison: Comparison, changing: Changeover) -> tuple[float, float] | None:
    """Return the lowest and highest temperature that a technician meets with a refrigerant, None without a cycle. [K]

    Args:
        comparison: A result.
        changing: The changeover.
    """
    numbers = changing.entry.hardware_numbers
    if numbers is None:
        return None
    known: Mapping[str, Performance[float]] = numbers.new.conditions
    low = [min(found.T_evap_inlet_K, found.T_evap_mean_K) for found in known.values()]
    high = [max(found.T_cond_dew_K, found.T_cond_mean_K) for found in known.values()]
    ambient = comparison.case.plant.highest_ambient_K
    return min(low), max([*high, *([ambient] if ambient is not None else [])])
