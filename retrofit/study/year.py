"""A year of the plant as installed: every hour's weather and load, with each refrigerant, on arrays."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace
from typing import TypeVar

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.case import Case, Year, present
from retrofit.case.weather import Weather
from retrofit.cycle import Temperatures, matched_pressures
from retrofit.equipment.balance import Machine, balance
from retrofit.errors import NoSolutionError
from retrofit.properties import Fluid
from retrofit.study.installed import ExistingPlant, machine_at
from retrofit.study.losses import Loss
from retrofit.study.operating import balanced, delivered_W, fans_share, operating
from retrofit.study.performance import electric_W
from retrofit.study.plan import Use
from retrofit.study.result import FloatArray, Operation, Performance

IntArray = NDArray[np.int64]
Shares = tuple[FloatArray | float, ...]
Arrays = TypeVar("Arrays", Performance[FloatArray], Operation[FloatArray])
HOUR_S = 3600.0
DAY_H = 24.0
UNMET_SHARE = 1e-3  # of the load: less is rounding of the plant's own numbers
AIR_BIN_K = 2.0
TOGETHER_K, TOGETHER_SHARE = 1.0, 0.05  # conditions of a year this close are alike
A_FEW, FEWEST_FOR_A_FEW = 16, 200  # conditions solved first, and how many there have to be for it
SINKS, SOURCES = 13, 5  # nodes of a map
SHORTEST_AXIS_K = 20.0  # of a map: a year that hardly varies still shows what a hotter one would do
EXISTING, SIZED, BY_MAKER = "existing plant", "new plant of today's size", "new plant by its maker's seasonal COP"


@dataclass(frozen=True)
class YearConditions:
    """What a year asks of the plant; arrays of shape (n,).

    Attributes:
        source: Where the weather comes from.
        hours: Hours that each condition stands for. [h]
        T_air_K: Outdoor air.
        T_cond_in_K, T_evap_in_K: At the inlets of condenser and evaporator.
        load_W: Load, with what defrosting adds.
        day_factor: Share of the day's load that counts in the condition, for its hour of the day.
        month: Month, 1 to 12; None for bins.
        serves: "cooling" or "heating", what the load is.
    """

    source: str
    hours: FloatArray
    T_air_K: FloatArray
    T_cond_in_K: FloatArray
    T_evap_in_K: FloatArray
    load_W: FloatArray
    day_factor: FloatArray
    month: IntArray | None
    serves: str

    @property
    def load_J(self) -> float:
        """Return the load of the whole year. [J]"""
        return float(np.sum(self.load_W * self.hours)) * HOUR_S


@dataclass(frozen=True)
class AirBins:
    """A year sorted by outdoor temperature; arrays of shape (bins,).

    Attributes:
        T_air_K: Middle of each bin.
        hours: Hours in it. [h]
        energy_J: Electricity used in it.
        load_J, unmet_J: Load, and what of it stays unmet.
    """

    T_air_K: FloatArray
    hours: FloatArray
    energy_J: FloatArray
    load_J: FloatArray
    unmet_J: FloatArray


@dataclass(frozen=True)
class PlantMap:
    """What the plant does at full over the temperatures at its inlets; NaN where it has no solution.

    Attributes:
        T_sink_K: At the inlet of the condenser, shape (m,).
        T_source_K: At the inlet of the evaporator, shape (n,).
        cooling_W, power_W, cop, T_discharge_K, p_cond_Pa: At full, shape (m, n).
    """

    T_sink_K: FloatArray
    T_source_K: FloatArray
    cooling_W: FloatArray
    power_W: FloatArray
    cop: FloatArray
    T_discharge_K: FloatArray
    p_cond_Pa: FloatArray


@dataclass(frozen=True)
class YearRun:
    """A year of the plant with one refrigerant.

    Attributes:
        machine: Which plant: the existing one, or a new one and how it is reckoned.
        energy_J: Electricity of the year, all of it.
        compressor_J, condenser_fans_J, steady_J, defrost_J: Its parts; `steady_J` runs all hours.
        peak_W: Highest electrical power, as the mean of an hour.
        delivered_J: What the plant delivers.
        unmet_J, unmet_h: Load it lacks, and hours in which it lacks some. [J, h]
        seasonal_cop: Delivered over all electricity.
        compressor_cop: Delivered over the compressors' electricity.
        run_time_fraction: Share of the year that the compressors run.
        not_solved_h: Hours without a solution, counted as unmet; `reason` says why. [h]
        T_discharge_highest_K, p_cond_highest_Pa: Over the year, at full.
        monthly_J: Electricity by month, shape (12,); None for bins.
        by_air: The year sorted by outdoor temperature; None for a plant reckoned by its maker's seasonal COP.
        map: Over the temperatures at the inlets; None likewise.
        one_sided: Of a plant by its maker's seasonal COP, losses in that which the year of the plant as it is lacks.
    """

    machine: str
    energy_J: float
    compressor_J: float
    condenser_fans_J: float
    steady_J: float
    defrost_J: float
    peak_W: float | None
    delivered_J: float
    unmet_J: float
    unmet_h: float
    seasonal_cop: float
    compressor_cop: float | None
    run_time_fraction: float | None
    not_solved_h: float
    reason: str
    T_discharge_highest_K: float | None
    p_cond_highest_Pa: float | None
    monthly_J: FloatArray | None
    by_air: AirBins | None
    map: PlantMap | None
    one_sided: tuple[Loss, ...] = ()

    @property
    def use(self) -> Use:
        """Return what emissions and money ask of the year."""
        return Use(self.energy_J, self.peak_W, self.one_sided)


# What the year asks


def year_conditions(case: Case) -> YearConditions | None:
    """Return what the year of a case asks of its plant; None if the case has no year.

    Args:
        case: The case.
    Source: load between base and peak is linear in the outdoor temperature, constant beyond both; bins that do not tell
        day and night apart stand for both by their lengths.
    """
    year, weather = case.year, case.weather
    if year is None or weather is None or case.evaporator is None or case.condenser is None:
        return None
    shares, factors = _day_and_night(year, weather)

    def twice(values: FloatArray) -> FloatArray:
        return np.tile(values, len(factors))

    T_air = twice(weather.T_dry_bulb_K)
    factor = np.concatenate([np.broadcast_to(factor, weather.hours.shape) for factor in factors])
    cond_in = _inlet_K(weather, year.condenser_follows, year.condenser_approach_K, case.condenser.inlet_K)
    evap_in = _inlet_K(weather, year.evaporator_follows, year.evaporator_approach_K, case.evaporator.inlet_K)
    return YearConditions(
        source=weather.source,
        hours=np.concatenate([weather.hours * share for share in shares]),
        T_air_K=T_air,
        T_cond_in_K=twice(cond_in),
        T_evap_in_K=twice(evap_in),
        load_W=load_W(case, T_air, factor),
        day_factor=factor,
        month=None if weather.month is None else np.tile(weather.month, len(factors)),
        serves=year.serves,
    )


def together(asked: YearConditions) -> YearConditions:
    """Return a year with like conditions taken together: fewer conditions, each the mean of its hours.

    Args:
        asked: What the year asks.
    Returns: The year without its months; its electricity differs from that hour by hour by less than 0.1 %.
    """
    names = ("T_air_K", "T_cond_in_K", "T_evap_in_K", "day_factor", "load_W")
    columns = np.stack([getattr(asked, name) for name in names])
    steps = np.array([TOGETHER_K, TOGETHER_K, TOGETHER_K, TOGETHER_SHARE])[:, None]
    _, place = np.unique(np.round(columns[:4] / steps), axis=1, return_inverse=True)
    hours = np.bincount(place, asked.hours).astype(np.float64)
    air, cond_in, evap_in, day_factor, load = (np.bincount(place, column * asked.hours) / hours for column in columns)
    return YearConditions(asked.source, hours, air, cond_in, evap_in, load, day_factor, None, asked.serves)


def _day_and_night(year: Year, weather: Weather) -> tuple[Shares, Shares]:
    """Return shares of the hours and the factors on the load that go with them."""
    if year.day_from is None or year.day_to is None or year.night_load is None:
        return (1.0,), (1.0,)
    length = (year.day_to - year.day_from) % DAY_H or DAY_H
    if weather.night_hours is not None:
        by_night = weather.night_hours / np.maximum(weather.hours, np.finfo(float).tiny)
        return (1.0 - by_night, by_night), (1.0, year.night_load)
    if weather.hour_of_day is None:
        return (length / DAY_H, 1.0 - length / DAY_H), (1.0, year.night_load)
    # An hour that the day begins or ends within counts by its share.
    since = (weather.hour_of_day - year.day_from) % DAY_H
    by_day = np.clip(length - since, 0.0, 1.0) + np.clip(since + 1.0 - DAY_H, 0.0, 1.0)
    return (1.0,), (by_day + (1.0 - by_day) * year.night_load,)


def load_W(case: Case, T_air_K: FloatArray, day_factor: FloatArray) -> FloatArray:
    """Return the load at outdoor temperatures, with what defrosting adds. [W]

    Args:
        case: The case with a year; its numbers may be arrays.
        T_air_K: Outdoor temperature. [K]
        day_factor: Share of the day's load that counts. [-]
    Source: linear in the outdoor temperature between base and peak, constant beyond both.
    """
    year = case.year
    assert year is not None
    peak = np.asarray(case.duty.cooling_W if year.peak_load_W is None else year.peak_load_W)
    base = peak if year.base_load_W is None else np.asarray(year.base_load_W)
    share = np.ones(np.shape(T_air_K))
    if year.peak_at_K is not None and year.base_at_K is not None:
        share = np.clip((T_air_K - year.base_at_K) / (year.peak_at_K - year.base_at_K), 0.0, 1.0)
    defrost = or_nothing(year.defrost_power_W) * year.defrost_to_load if year.serves == "cooling" else 0.0
    return np.asarray((base + share * (peak - base)) * day_factor + defrost)


def or_nothing(power_W: ArrayLike | None) -> FloatArray:
    """Return a power, zero if it is not given. [W]

    Args:
        power_W: The power. [W]
    """
    return np.asarray(0.0 if power_W is None else power_W, dtype=float)


def _inlet_K(weather: Weather, follows: str, approach_K: float, constant_K: float | None) -> FloatArray:
    given = {
        "dry bulb": weather.T_dry_bulb_K,
        "wet bulb": weather.T_wet_bulb_K,
        "water": weather.T_water_K,
        "constant": np.full(weather.hours.shape, np.nan if constant_K is None else constant_K),
    }[follows]
    if given is None:
        raise NoSolutionError(f"the weather of the year has no {follows}; give it, or let the exchanger follow another")
    return given if follows == "constant" else given + approach_K


# What the plant does


@dataclass(frozen=True)
class YearPlant:
    """A plant with one refrigerant, ready for any hour.

    Attributes:
        plant: The plant as installed.
        behaviour: The refrigerant.
        T_cond_lowest_K: Condensing dew temperature that the head-pressure control holds at least.
        swept_factor: Swept volume over that of today.
        machine: Which plant it is, in words.
    """

    plant: ExistingPlant
    behaviour: Fluid
    T_cond_lowest_K: ArrayLike
    swept_factor: ArrayLike
    machine: str

    def at(self, T_evap_in_K: ArrayLike, T_cond_in_K: ArrayLike) -> tuple[Machine, tuple[FloatArray, FloatArray]]:
        """Return the machine at temperatures of its media, and where to start its solution.

        Args:
            T_evap_in_K: At the inlet of the evaporator. [K]
            T_cond_in_K: At the inlet of the condenser. [K]
        """
        machine, starts = machine_at(self.plant, self.behaviour, T_evap_in_K, T_cond_in_K)
        swept = np.asarray(machine.swept_volume_m3_per_s) * self.swept_factor
        lowest = np.asarray(self.T_cond_lowest_K)
        return (
            replace(machine, swept_volume_m3_per_s=swept, T_cond_lowest_K=lowest),
            (starts[0], np.maximum(starts[1], lowest)),
        )


def lowest_condensing_K(case: Case, existing: Fluid) -> float | None:
    """Return the mean condensing temperature that the head-pressure control holds at least; None for no control.

    Args:
        case: The case: it gives a temperature for the year, or the pressure set today.
        existing: The refrigerant in the plant, that such a pressure is set for.
    """
    if case.year is not None and case.year.lowest_condensing_K is not None:
        return case.year.lowest_condensing_K
    p_Pa = present(case.controls.head_pressure_Pa) if case.controls else None
    return None if p_Pa is None else 0.5 * float(existing.dew(p_Pa).T_K + existing.bubble(p_Pa).T_K)


def year_plant(
    plant: ExistingPlant, behaviour: Fluid, T_lowest_mean_K: float | None, swept_factor: ArrayLike = 1.0
) -> YearPlant:
    """Return the plant with a refrigerant, its head-pressure control set for the same mean condensing temperature.

    Args:
        plant: The plant as installed.
        behaviour: The refrigerant.
        T_lowest_mean_K: Mean condensing temperature held at least; None for no control. [K]
        swept_factor: Swept volume over that of today; other than 1 for a new plant. [-]
    Raises: OutsideValidRangeError if the refrigerant has no such condensing temperature.
    """
    lowest: ArrayLike = -np.inf
    if T_lowest_mean_K is not None:
        # A mean condensing temperature needs an evaporating one beside it, which changes nothing of it.
        T_evap = max(float(np.nanmean(plant.start_K[0])), behaviour.T_range_K[0] + 1.0)
        T = Temperatures(min(T_evap, T_lowest_mean_K - 1.0), T_lowest_mean_K, "mean")
        lowest = behaviour.dew(matched_pressures(behaviour, T, 0.0)[1]).T_K
    machine = EXISTING if np.all(np.asarray(swept_factor) == 1.0) else SIZED
    return YearPlant(plant, behaviour, lowest, swept_factor, machine)


def run_year(ready: YearPlant, asked: YearConditions) -> YearRun:
    """Return a year of the plant with a refrigerant, each condition balanced for itself.

    Args:
        ready: The plant with its refrigerant.
        asked: What the year asks.
    Returns: The year; hours without a solution count as unmet.
    Raises: NoSolutionError if no hour has one.
    """
    is_variable = ready.plant.case.compressor.speed == "variable"
    deciding = [asked.T_evap_in_K, asked.T_cond_in_K, *([asked.load_W] if is_variable else [])]
    # Hours alike are solved once.
    alike, back = np.unique(np.stack(deciding), axis=1, return_inverse=True)
    machine, starts = ready.at(alike[0], alike[1])
    starts = _from_a_few(ready, alike, starts)
    found = balance(ready.behaviour, machine, *starts)
    if not np.any(found.is_solved):
        raise NoSolutionError(f"{ready.behaviour.designation} in the plant as installed: {found.reason[0]}")
    settled = found.cycle.T_evap_dew_K, found.cycle.T_cond_dew_K
    starts = tuple(np.where(found.is_solved, T, start) for T, start in zip(settled, starts, strict=True))  # type: ignore[assignment]
    full, compressor = balanced(found), ready.plant.case.compressor
    if is_variable:
        run = _spread(operating(ready.behaviour, machine, compressor, full, alike[2], starts, asked.serves), back)
    else:
        run = operating(ready.behaviour, machine, compressor, full, asked.load_W, starts, asked.serves, back)
    reasons = np.where(found.is_solved[back], run.reason, found.reason[back])
    return _year_of(ready, asked, _spread(full, back), run, reasons)


def _from_a_few(
    ready: YearPlant, alike: FloatArray, starts_K: tuple[FloatArray, FloatArray]
) -> tuple[FloatArray, FloatArray]:
    """Return where to begin the search for many conditions: from where a few of them, from cold to warm, settle."""
    inlets = alike[:2]
    if inlets.shape[1] < FEWEST_FOR_A_FEW:
        return starts_K
    few = np.argsort(inlets[1])[np.linspace(0, inlets.shape[1] - 1, A_FEW).astype(np.int64)]
    machine, first = ready.at(inlets[0][few], inlets[1][few])
    found = balance(ready.behaviour, machine, *first)
    few, settled = few[found.is_solved], (found.cycle.T_evap_dew_K, found.cycle.T_cond_dew_K)
    if few.size < 2:
        return starts_K
    evaporating, condensing = (
        T_in + np.interp(inlets[1], inlets[1][few], T[found.is_solved] - T_in[few])
        for T_in, T in zip(inlets, settled, strict=True)
    )
    return evaporating, condensing


def _spread(found: Arrays, back: IntArray) -> Arrays:
    """Return what was found for conditions alike, for each of the conditions again."""
    arrays = {item.name: getattr(found, item.name) for item in fields(found)}
    return type(found)(**{name: value[back] if np.ndim(value) else value for name, value in arrays.items()})


def _year_of(
    ready: YearPlant,
    asked: YearConditions,
    full: Performance[FloatArray],
    run: Operation[FloatArray],
    reasons: NDArray[np.str_],
) -> YearRun:
    """Add up the hours."""
    case, hours = ready.plant.case, asked.hours
    assert case.year is not None
    is_solved = ~np.isnan(run.mean_power_W)
    unmet = np.where(is_solved, run.unmet_W, asked.load_W)
    run_time = np.where(is_solved, run.run_time_fraction, 1.0)
    fans_run = np.where(is_solved, fans_share(case.compressor, run), 1.0)
    power = electric_W(case, np.where(is_solved, run.mean_power_W, 0.0))
    fans = float(or_nothing(case.year.condenser_fans_W)) * fans_run
    steady = float(or_nothing(case.year.evaporator_fans_W) + or_nothing(case.year.pumps_W))
    defrost = float(or_nothing(case.year.defrost_power_W))
    total = power + fans + steady + defrost
    energy, compressor = (float(np.sum(value * hours)) * HOUR_S for value in (total, power))
    delivered = float(np.sum((asked.load_W - unmet) * hours)) * HOUR_S
    return YearRun(
        machine=ready.machine,
        energy_J=energy,
        compressor_J=compressor,
        condenser_fans_J=float(np.sum(fans * hours)) * HOUR_S,
        steady_J=steady * float(np.sum(hours)) * HOUR_S,
        defrost_J=defrost * float(np.sum(hours)) * HOUR_S,
        peak_W=float(np.max(total)),
        delivered_J=delivered,
        unmet_J=float(np.sum(unmet * hours)) * HOUR_S,
        unmet_h=float(np.sum(hours[unmet > UNMET_SHARE * asked.load_W])),
        seasonal_cop=delivered / energy,
        compressor_cop=delivered / compressor,
        run_time_fraction=float(np.sum(run_time * hours) / np.sum(hours)),
        not_solved_h=float(np.sum(hours[~is_solved])),
        reason=_reasons_by_hours(reasons[~is_solved], hours[~is_solved]),
        T_discharge_highest_K=float(np.nanmax(full.T_discharge_K)),
        p_cond_highest_Pa=float(np.nanmax(full.p_cond_Pa)),
        monthly_J=_monthly_J(asked, total),
        by_air=_by_air(asked, total, unmet),
        map=plant_map(ready, asked),
    )


def _reasons_by_hours(reasons: NDArray[np.str_], hours: FloatArray) -> str:
    """Return why hours have no solution, each reason with its hours, the most frequent first."""
    names, place = np.unique(reasons, return_inverse=True)
    found = sorted(zip(np.bincount(place, hours, names.size), names, strict=True), key=lambda item: (-item[0], item[1]))
    return "; ".join(f"{count:.0f} h: {name}" for count, name in found)


def _monthly_J(asked: YearConditions, power_W: FloatArray) -> FloatArray | None:
    if asked.month is None:
        return None
    return np.bincount(asked.month - 1, power_W * asked.hours * HOUR_S, minlength=12).astype(np.float64)


def _by_air(asked: YearConditions, power_W: FloatArray, unmet_W: FloatArray) -> AirBins:
    place = np.floor(asked.T_air_K / AIR_BIN_K).astype(np.int64)
    first = int(place.min())

    def summed(values: FloatArray) -> FloatArray:
        return np.bincount(place - first, values * asked.hours).astype(np.float64)

    hours = summed(np.ones_like(asked.hours))
    middle = ((first + np.arange(hours.size) + 0.5) * AIR_BIN_K).astype(np.float64)
    energy, load, unmet = (summed(values) * HOUR_S for values in (power_W, asked.load_W, unmet_W))
    there = hours > 0.0
    return AirBins(middle[there], hours[there], energy[there], load[there], unmet[there])


def plant_map(ready: YearPlant, asked: YearConditions) -> PlantMap:
    """Return what the plant does at full over the temperatures at its inlets that a year has, and the hottest day.

    Args:
        ready: The plant with its refrigerant.
        asked: What the year asks.
    """
    sinks = _axis(np.append(asked.T_cond_in_K, _hottest_K(ready.plant.case)), SINKS)
    sources = _axis(asked.T_evap_in_K, SOURCES)
    machine, starts = ready.at(sources[None, :], sinks[:, None])
    found = balanced(balance(ready.behaviour, machine, *starts))
    power = electric_W(ready.plant.case, found.power_W)
    cop = delivered_W(found, asked.serves) / power
    return PlantMap(sinks, sources, found.cooling_W, power, cop, found.T_discharge_K, found.p_cond_Pa)


def _hottest_K(case: Case) -> list[float]:
    """Return temperatures at the inlet of the condenser that the plant is judged by, whatever the year."""
    assert case.condenser is not None
    assert case.year is not None
    hottest = case.plant.highest_ambient_K if case.year.condenser_follows == "dry bulb" else None
    ambient = None if hottest is None else hottest + case.year.condenser_approach_K
    return [T_K for T_K in (case.condenser.inlet_K, ambient) if T_K is not None]


def _axis(T_K: FloatArray, nodes: int) -> FloatArray:
    """Return nodes of a map in whole kelvin steps over the temperatures of a year, wider than a short axis."""
    middle, half = 0.5 * (T_K.max() + T_K.min()), 0.5 * max(float(np.ptp(T_K)), SHORTEST_AXIS_K)
    return np.linspace(middle - half, middle + half, nodes)


def year_by_maker(case: Case, asked: YearConditions, seasonal_cop: float) -> YearRun:
    """Return a year of a new plant by the seasonal COP that its maker states, fans and pumps included.

    Args:
        case: The case.
        asked: What the year asks; a new plant is taken to meet all of it.
        seasonal_cop: Delivered over all electricity. [-]
    """
    load, energy = asked.load_J, asked.load_J / seasonal_cop
    return YearRun(
        BY_MAKER, energy, energy, 0.0, 0.0, 0.0, None, load, 0.0, 0.0, seasonal_cop, None, None, 0.0, "", None, None,
        None, None, None,
    )  # fmt: skip
