"""A year of the plant: it adds up, agrees with the point it is made of, and follows physics."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from retrofit.case import Bin, Case, read_case
from retrofit.case.weather import weather_of_bins
from retrofit.equipment.balance import balance
from retrofit.properties import fluid
from retrofit.study import compare
from retrofit.study.operating import balanced, delivered_W, operating
from retrofit.study.today import today_of, with_numbers
from retrofit.study.year import (
    HOUR_S,
    YearConditions,
    YearRun,
    lowest_condensing_K,
    run_year,
    together,
    year_by_maker,
    year_conditions,
    year_plant,
)

CASES = Path(__file__).resolve().parents[2] / "cases"
ALWAYS = """
[year]
bins = [["32 degC", 8760]]
peak_load = "{load}"
"""
HEATING = """
[year]
climate = {{mean = "{mean} degC", yearly_swing = "8 K", daily_swing = "3 K"}}
serves = "heating"
condenser_follows = "constant"
evaporator_follows = "dry bulb"
evaporator_approach = "-8 K"
peak_load = "100 kW"
peak_at = "-4 degC"
base_load = "30 kW"
base_at = "16 degC"
"""


def asked_of(case: Case) -> YearConditions:
    """Return what the year of a case asks."""
    asked = year_conditions(case)
    assert asked is not None
    return asked


def year_of(case: Case, name: str = "R404A", asked: YearConditions | None = None) -> YearRun:
    """Return a year of the existing plant with a refrigerant."""
    existing = fluid(case.plant.refrigerant)
    today = today_of(case, existing)
    assert today.plant is not None
    ready = year_plant(today.plant, fluid(name), lowest_condensing_K(case, existing))
    return run_year(ready, asked or asked_of(case))


@pytest.mark.parametrize("control", ["", 'speed = "variable"\nlowest_speed = "40 %"'])
@pytest.mark.parametrize("load", ["90 kW", "30 kW"])
def test_a_year_at_the_design_point_is_that_point_all_year(rack_of, control, load):
    """Where it is always as at the design point, a year takes 8760 h of the power that the comparison finds there."""
    case = rack_of(ALWAYS.format(load=load), compressor=control)
    point = compare(with_numbers(case, {"duty.cooling_W": case.year.peak_load_W})).candidates[0].plant
    run = year_of(case, "R448A")

    assert run.energy_J == pytest.approx(point.operation.mean_power_W * 8760 * HOUR_S, rel=1e-6)
    assert run.run_time_fraction == pytest.approx(point.operation.run_time_fraction, rel=1e-6)


def test_parts_make_the_whole(rack_of):
    """Electricity is the sum of its parts, of its months and of its bins; load is delivered or unmet."""
    case = rack_of()
    asked, run = asked_of(case), year_of(case, "R448A")

    assert run.energy_J == pytest.approx(run.compressor_J + run.condenser_fans_J + run.steady_J + run.defrost_J)
    assert run.energy_J == pytest.approx(run.monthly_J.sum())
    assert run.energy_J == pytest.approx(run.by_air.energy_J.sum())
    assert run.by_air.hours.sum() == pytest.approx(8760)
    assert run.delivered_J + run.unmet_J == pytest.approx(asked.load_J)
    assert run.steady_J == pytest.approx(5e3 * 8760 * HOUR_S)
    assert run.defrost_J == pytest.approx(2e3 * 8760 * HOUR_S)
    assert run.seasonal_cop == pytest.approx(run.delivered_J / run.energy_J)


def binned(case: Case, *, by_day: bool) -> Case:
    """Return a case with the hours of its year in bins of 2 K, day and night apart or together."""
    weather = case.weather
    place = np.floor(weather.T_dry_bulb_K / 2.0)
    is_night = (weather.hour_of_day < 7) | (weather.hour_of_day >= 21)
    bins = [
        Bin(
            2.0 * (there + 0.5),
            float(np.sum(place == there)),
            float(np.sum((place == there) & is_night)) if by_day else None,
        )
        for there in np.unique(place)
    ]
    return replace(case, weather=weather_of_bins(bins))


def test_bins_agree_with_the_hours_they_are_made_of(rack_of, usual_year):
    """A year by bins of 2 K takes the electricity of the hourly year within 1 %, as the bin method is used for.

    With a load that differs by day and night the bins have to tell them apart, as published bin data do by shifts
    (from memory): a warm hour is rather one of the day.
    """
    steady = rack_of(usual_year.replace('night_load = "70 %"', 'night_load = "100 %"'))
    cases = ((rack_of(), True), (steady, False))

    for case, by_day in cases:
        for name in ("R404A", "R448A"):
            hourly, bins = (year_of(each, name).energy_J for each in (case, binned(case, by_day=by_day)))
            assert bins == pytest.approx(hourly, rel=0.01)


@pytest.mark.parametrize("control", ["", 'speed = "variable"\nlowest_speed = "40 %"'])
def test_like_hours_taken_together_lose_nothing(rack_of, control):
    """A year with like hours taken together has all its hours and its load, and the hourly electricity to 0.1 %."""
    case = rack_of(compressor=control)
    asked = asked_of(case)
    few = together(asked)

    assert few.hours.size < 200
    assert few.hours.sum() == pytest.approx(8760)
    assert few.load_J == pytest.approx(asked.load_J)
    assert year_of(case, "R448A", few).energy_J == pytest.approx(year_of(case, "R448A").energy_J, rel=1e-3)


def test_day_and_night_share_the_hours(rack_of):
    """From 7 h to 21 h the load is the day's, at other hours the night's; a day past midnight likewise."""
    asked = asked_of(rack_of())
    night = rack_of().year.model_copy(update={"day_from": 21.5, "day_to": 6.0})
    across = asked_of(replace(rack_of(), year=night))

    assert asked.day_factor[:24] == pytest.approx([0.7] * 7 + [1.0] * 14 + [0.7] * 3)
    assert across.day_factor[:24] == pytest.approx([1.0] * 6 + [0.7] * 15 + [0.85] + [1.0] * 2)


def test_load_is_a_line_between_base_and_peak(rack_of):
    """By hand: at 17.5 degC, half way from 5 to 30 degC, 0.5 (60 + 105) kW = 82.5 kW, and 2 kW of defrost heat."""
    case = rack_of(ALWAYS.format(load="105 kW").replace("32 degC", "17.5 degC") + (
        'base_load = "60 kW"\nbase_at = "5 degC"\npeak_at = "30 degC"\ndefrost_power = "2 kW"\n'
    ))  # fmt: skip

    assert asked_of(case).load_W == pytest.approx(84.5e3)


def test_a_hotter_year_and_a_larger_load_cost_more(rack_of, usual_year):
    """The same plant takes more electricity in a warmer year, and with more to cool."""
    usual = year_of(rack_of(), "R448A").energy_J

    assert year_of(rack_of(usual_year.replace("14 degC", "17 degC")), "R448A").energy_J > 1.02 * usual
    assert year_of(rack_of(usual_year.replace("60 kW", "70 kW")), "R448A").energy_J > 1.02 * usual


def test_head_pressure_held_higher_costs_more_and_is_held(rack_of, usual_year):
    """A control that keeps condensing at 35 instead of 28 degC costs electricity; without one, condensing floats."""
    high, floating = usual_year.replace("28 degC", "35 degC"), usual_year.replace('lowest_condensing = "28 degC"', "")
    runs = [year_of(rack_of(year), "R448A") for year in (high, usual_year, floating)]
    coldest = [run.map.p_cond_Pa[0, 0] for run in runs]

    assert runs[0].compressor_J > 1.05 * runs[1].compressor_J > 1.05 * runs[2].compressor_J
    R448A = fluid("R448A")
    means = [0.5 * float(R448A.dew(p).T_K + R448A.bubble(p).T_K) for p in coldest]
    assert means[:2] == pytest.approx([308.15, 301.15], abs=1e-6)
    assert means[2] < 295.0


def test_set_point_of_the_control_holds_the_same_mean_temperature(rack_of, usual_year):
    """A head pressure set today is a mean condensing temperature, the same for every refrigerant."""
    year = usual_year.replace('lowest_condensing = "28 degC"', "") + '[controls]\nhead_pressure = "12 bar g"\n'
    R404A = fluid("R404A")
    p_Pa = 12e5 + 101_325.0

    found = lowest_condensing_K(rack_of(year), R404A)

    assert found == pytest.approx(0.5 * float(R404A.dew(p_Pa).T_K + R404A.bubble(p_Pa).T_K))


def test_too_small_a_plant_leaves_load_unmet(rack_of, usual_year):
    """With more load than it carries the plant runs all the time, and what it lacks is told in hours and kWh."""
    run = year_of(rack_of(usual_year.replace("105 kW", "170 kW")))

    assert 100 < run.unmet_h < 8760
    assert run.unmet_J > 0
    assert run.not_solved_h == 0


def test_a_colder_year_of_heating_costs_more(rack_of):
    """A plant that serves heat from its condenser takes more electricity where it is colder, at a worse COP."""
    cold, mild = (year_of(rack_of(HEATING.format(mean=mean)), "R448A") for mean in (4, 9))

    assert cold.energy_J > 1.1 * mild.energy_J
    assert cold.compressor_cop < mild.compressor_cop
    assert mild.compressor_cop > 1.0


@pytest.mark.parametrize("control", ["", 'speed = "variable"\nlowest_speed = "40 %"'])
def test_heat_is_cooling_and_power(rack_of, control):
    """At one condition, heat delivered is what the condenser gives off: cooling, line heat and power together."""
    constant = 'serves = "heating"\ncondenser_follows = "constant"\n'
    case = rack_of(ALWAYS.format(load="60 kW") + constant, compressor=control)
    run = year_of(case, "R448A")

    assert run.delivered_J == pytest.approx(60e3 * 8760 * HOUR_S)
    assert run.compressor_cop > 1.0 + 1.0  # heating COP is cooling COP and 1, and more with heat of the line


def test_hours_without_a_solution_count_as_unmet(rack_of):
    """Condensing close to the critical point has no solution: those hours are unmet, named, and touch no others."""
    case = rack_of('[year]\nbins = [["10 degC", 8660], ["59 degC", 100]]\ncondenser_approach = "8 K"\n')
    run = year_of(case, "R404A")

    assert run.not_solved_h == 100
    assert "critical" in run.reason
    assert run.reason.startswith("100 h: ")
    assert run.unmet_h >= 100
    assert np.isfinite(run.energy_J)


def test_a_small_load_finds_its_speed():
    """On mild days the shipped heat pump has 3 % of its load, and its machine may run as slowly as it likes.

    Its evaporator comes within hundredths of a kelvin of its medium then; no hour is lost, and none falls back to full
    speed, where the same load takes more.
    """
    case = read_case(CASES / "coast-heat-pump.toml")
    run, on_off = year_of(case, "R454B"), year_of(with_control(case, speed="fixed"), "R454B")

    assert run.not_solved_h == 0
    assert run.unmet_h == 0
    assert run.run_time_fraction == pytest.approx(1.0)
    assert run.compressor_J < on_off.compressor_J


def with_control(case: Case, **keys: object) -> Case:
    """Return a case whose compressors are controlled otherwise."""
    return replace(case, compressor=case.compressor.model_copy(update=keys))


SLOW = 'speed = "variable"\nlowest_speed = "30 %"'
FINE = np.linspace(0.02, 1.0, 99)


def swept_loads(case: Case, name: str, air_K: float, serves: str = "cooling"):
    """Return the loads and how the plant of a case meets them, in air of one temperature."""
    plant = today_of(case, fluid("R404A")).plant
    ready = year_plant(plant, fluid(name), None)
    machine, starts = ready.at(np.full(FINE.shape, 275.15), np.full(FINE.shape, air_K))
    full = balanced(balance(fluid(name), machine, *starts))
    load = FINE * float(delivered_W(full, serves)[0])
    return load, full, operating(fluid(name), machine, case.compressor, full, load, starts, serves)


@pytest.mark.parametrize("air_K", [283.15, 305.15])
@pytest.mark.parametrize("name", ["R404A", "R448A", "R454C", "R455A"])
def test_power_over_load_is_continuous_and_rises_down_to_the_lowest_speed(rack_of, name, air_K):
    """By physics: less load, less lift, less power a watt; below the lowest speed the machine cycles there.

    By hand below it: power over load is that at the lowest speed, whatever the load. With constant efficiencies.
    """
    load, full, run = swept_loads(rack_of(compressor=SLOW), name, air_K)
    ratio, cycles = run.mean_power_W / load, run.run_time_fraction < 1.0

    assert set(run.reason) == {""}
    assert np.all(np.diff(run.speed_fraction) >= -1e-9)
    assert cycles[0]
    assert not cycles[-1]
    assert np.all(np.diff(cycles.astype(int)) <= 0)
    assert ratio[cycles] == pytest.approx(ratio[0], rel=1e-6)
    assert run.speed_fraction[cycles] == pytest.approx(0.3)
    assert np.all(np.diff(ratio[~cycles]) > 0.0)
    # Continuous: no step of 1 % of the load changes it by more than 2 %, at the lowest speed and at full too.
    assert np.abs(np.diff(ratio) / ratio[1:]).max() < 0.02
    assert ratio[-1] == pytest.approx(float(full.power_W[0]) / load[-1], rel=1e-5)


@pytest.mark.parametrize("name", ["R404A", "R454C"])
def test_two_steps_at_half_the_swept_volume_are_the_half_machine(rack_of, name):
    """By hand: a load that one of two steps just carries takes the power of a plant of half the swept volume.

    A load halfway between that and full is met half of the time at each: its power is the mean of the two.
    """
    case = rack_of(compressor='speed = "steps"\nsteps = 2')
    plant = today_of(case, fluid("R404A")).plant
    ready, half = (year_plant(plant, fluid(name), None, factor) for factor in (1.0, 0.5))
    (machine, starts), (small, small_starts) = (each.at(275.15, 305.15) for each in (ready, half))
    full, alone = (balanced(balance(fluid(name), *each)) for each in ((machine, *starts), (small, *small_starts)))
    between = 0.5 * (full.cooling_W + alone.cooling_W)
    runs = [
        operating(fluid(name), machine, case.compressor, full, load, starts)
        for load in (alone.cooling_W, between, 0.4 * alone.cooling_W)
    ]

    assert alone.cooling_W > 0.5 * full.cooling_W
    assert runs[0].mean_power_W == pytest.approx(float(alone.power_W), rel=1e-6)
    assert (runs[0].run_time_fraction, runs[0].speed_fraction) == (pytest.approx(1.0), pytest.approx(0.5))
    assert runs[1].mean_power_W == pytest.approx(0.5 * float(full.power_W + alone.power_W), rel=1e-6)
    assert (runs[1].run_time_fraction, runs[1].speed_fraction) == (pytest.approx(1.0), pytest.approx(0.75))
    assert runs[2].mean_power_W == pytest.approx(0.4 * float(alone.power_W), rel=1e-6)
    assert (runs[2].run_time_fraction, runs[2].speed_fraction) == (pytest.approx(0.4), pytest.approx(0.5))


def test_a_year_in_steps_lies_between_on_and_off_and_any_speed(rack_of):
    """Compressors in a hundred steps take what any speed takes; in two and four, between that and on and off."""
    load = ALWAYS.format(load="60 kW")
    energy = {
        steps: year_of(rack_of(load, compressor=f'speed = "steps"\nsteps = {steps}'), "R448A").compressor_J
        for steps in (2, 4, 100)
    }
    on_off, any_speed = (year_of(rack_of(load, compressor=keys), "R448A").compressor_J for keys in ("", SLOW))

    assert any_speed < energy[4] < energy[2] < on_off
    assert energy[100] == pytest.approx(any_speed, rel=1e-3)


def test_fans_stop_with_a_step_that_has_its_own_condenser(rack_of):
    """By hand: one of two steps, each with half the condenser and its fans, takes half the fans; else all of them blow.

    With half the condenser the step is worse off than with all of it.
    """
    year = ALWAYS + 'condenser_fans = "6 kW"\n'
    steps = 'speed = "steps"\nsteps = 2'
    half_W = float(balanced_half(rack_of(compressor=steps)))
    shared, own = (
        year_of(rack_of(year.format(load=f"{half_W / 1e3:.6f} kW"), compressor=keys), "R404A")
        for keys in (steps, steps + "\nown_condensers = true")
    )

    assert shared.condenser_fans_J == pytest.approx(6e3 * 8760 * HOUR_S, rel=1e-4)
    assert 3e3 * 8760 * HOUR_S < own.condenser_fans_J < 3.3e3 * 8760 * HOUR_S
    assert own.compressor_J > shared.compressor_J


def balanced_half(case: Case) -> float:
    """Return what a plant of half the swept volume cools on the design day. [W]"""
    ready = year_plant(today_of(case, fluid("R404A")).plant, fluid("R404A"), None, 0.5)
    machine, starts = ready.at(275.15, 305.15)
    return float(balanced(balance(fluid("R404A"), machine, *starts)).cooling_W)


def test_hours_alike_in_a_year_of_steps_are_each_hour_by_itself(rack_of):
    """A year of steps over many loads at few temperatures equals the sum of years of one load each."""
    loads, steps = (20.0, 55.0, 90.0), 'speed = "steps"\nsteps = 4'
    case = rack_of('[year]\nbins = [["32 degC", 8760]]\npeak_load = "90 kW"\n', compressor=steps)
    asked = asked_of(case)
    many = replace(
        asked,
        **{
            name: np.repeat(getattr(asked, name), 3) for name in ("T_air_K", "T_cond_in_K", "T_evap_in_K", "day_factor")
        },
        hours=np.full(3, 2920.0),
        load_W=np.array(loads) * 1e3,
    )
    single = [
        year_of(case, "R448A", replace(asked, load_W=np.array([load * 1e3]))).compressor_J / 3.0 for load in loads
    ]

    assert year_of(case, "R448A", many).compressor_J == pytest.approx(sum(single), rel=1e-6)


def test_a_new_plant_by_its_maker_takes_load_over_seasonal_cop(rack_of):
    """By hand: energy = load / seasonal COP, fans and pumps included."""
    case = rack_of()
    asked = asked_of(case)

    assert year_by_maker(case, asked, 3.2).energy_J == pytest.approx(asked.load_J / 3.2)


def test_motor_efficiency_makes_shaft_power_electric(rack_of):
    """Compressors take more by their motor's efficiency, everything beside them the same."""
    plain, shaft = year_of(rack_of()), year_of(rack_of(compressor="motor_efficiency = 0.9"))

    assert shaft.compressor_J == pytest.approx(plain.compressor_J / 0.9, rel=1e-9)
    assert shaft.steady_J == plain.steady_J
