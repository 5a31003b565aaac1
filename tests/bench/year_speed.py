"""Time a year, its draws and their cost in hours, draws and candidates; and the memory they take.

Run by hand from a warm store: python tests/bench/year_speed.py
Exit status 1 if 12 candidates over 8760 hours take more than 10 s, 1000 draws of 12 candidates at the design point more
than 3 s, 1000 draws of their yearly result by maps more than 20 s, memory reaches 1 GB, twice the hours, draws or
candidates cost more than 2.3 times as much, or the same seed gives other numbers.
"""

from __future__ import annotations

import resource
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from retrofit.case import Case, read_case
from retrofit.checks import assess
from retrofit.properties import fluid
from retrofit.study import compare
from retrofit.study.draws import ModelError, design_rows, today_rows, year_by_map, year_rows
from retrofit.study.life import life_of
from retrofit.study.today import today_of
from retrofit.study.uncertain import physical_inputs, sample
from retrofit.study.year import lowest_condensing_K, run_year, year_conditions, year_plant

NAMES = "R448A R449A R407A R407F R407H R452A R454A R454C R455A R513A R290 R134a".split()
RACK = """
[plant]
refrigerant = "R404A"
charge = "260 kg"
[duty]
cooling = "110 kW"
evaporating = "-8 degC"
condensing = "42 degC"
useful_superheat = "6 K"
line_superheat = "8 K"
subcooling = "3 K"
[compressor]
isentropic_efficiency = 0.68
volumetric_efficiency = 0.88
swept_volume = "201 m3/h"
{speed}
[evaporator]
inlet = "2 degC"
outlet = "-3 degC"
arrangement = "crossflow"
[condenser]
inlet = "32 degC"
outlet = "38 degC"
arrangement = "crossflow"
[year]
climate = {{mean = "14 degC", yearly_swing = "10 K", daily_swing = "5 K"}}
peak_load = "105 kW"
peak_at = "30 degC"
base_load = "60 kW"
base_at = "5 degC"
lowest_condensing = "28 degC"
[law]
remaining_life = "8 years"
annual_leak_rate = "15 %"
[emissions]
grid_factor = "0.35 kg/kWh"
[money]
currency = "EUR"
tariff = [0.15, 0.18, 0.24]
[money.change]
labour = [5000, 6000, 9000]
[compare]
candidates = [{names}]
"""
ALLOWED_GROWTH = 2.3


def rack(speed: str = "") -> Case:
    """Return an invented rack with 12 candidates and a year of 8760 hours, no two of them alike."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "rack.toml"
        path.write_text(RACK.format(speed=speed, names=", ".join(f'"{name}"' for name in NAMES)), encoding="utf-8")
        case = read_case(path)
    assert case.weather is not None
    unlike = case.weather.T_dry_bulb_K + np.linspace(0.0, 0.5, 8760)
    return replace(case, weather=replace(case.weather, T_dry_bulb_K=unlike))


def timed(work: Callable[[], object]) -> float:
    """Return how long some work takes. [s]"""
    begin = time.perf_counter()
    work()
    return time.perf_counter() - begin


def year_seconds(case: Case, names: list[str], hours: slice = slice(None)) -> float:
    """Return the time of a year with some refrigerants, or of some of its hours. [s]"""
    existing = fluid(case.plant.refrigerant)
    plant, asked, lowest = today_of(case, existing).plant, year_conditions(case), lowest_condensing_K(case, existing)
    assert plant is not None
    assert asked is not None
    arrays = ("hours", "T_air_K", "T_cond_in_K", "T_evap_in_K", "load_W", "day_factor", "month")
    part = replace(asked, **{name: getattr(asked, name)[hours] for name in arrays})
    return timed(lambda: [run_year(year_plant(plant, fluid(name), lowest), part) for name in names])


def draws_seconds(case: Case, names: list[str], draws: int, *, of_year: bool) -> float:
    """Return the time of draws at the design point, or of the year by maps. [s]"""
    existing = fluid(case.plant.refrigerant)
    rows = sample(list(physical_inputs(case)), draws, 1)
    error = ModelError(np.ones(rows.rows), np.ones(rows.rows))
    asked, lowest = year_conditions(case), lowest_condensing_K(case, existing)
    base = today_of(case, existing).plant
    assert base is not None
    assert asked is not None

    def run() -> None:
        today = today_rows(case, existing, rows)
        assert today.plant is not None
        year = year_by_map(today, asked, rows)
        for name in names:
            if of_year:
                plain = year_plant(base, fluid(name), lowest)
                year_rows(replace(plain, plant=today.plant), plain, year, error, 1.0)
            else:
                design_rows(today, fluid(name), error)

    return timed(run)


def main() -> int:
    """Run everything and print the numbers."""
    case, failures = rack(), []

    def say(what: str, value: float, at_most: float, unit: str = "s") -> None:
        print(f"{what}: {value:.2f} {unit} (at most {at_most:g})")
        if not value <= at_most:
            failures.append(what)

    year_seconds(case, NAMES, slice(0, 48))  # tables are read and warm
    for words, speed in (("fixed speed", ""), ("variable speed", 'speed = "variable"\nlowest_speed = "40 %"')):
        plant = rack(speed)
        say(f"12 candidates x 8760 hours, {words}", year_seconds(plant, NAMES), 10.0)
        say(f"1000 draws x 12 candidates by maps, {words}", draws_seconds(plant, NAMES, 1000, of_year=True), 20.0)
    say("1000 draws x 12 candidates at the design point", draws_seconds(case, NAMES, 1000, of_year=False), 3.0)
    growth = {
        "hours": year_seconds(case, NAMES) / year_seconds(case, NAMES, slice(0, 8760, 2)),
        "draws": draws_seconds(case, NAMES, 1000, of_year=True) / draws_seconds(case, NAMES, 500, of_year=True),
        "candidates": year_seconds(case, NAMES) / year_seconds(case, NAMES[::2]),
    }
    for what, ratio in growth.items():
        say(f"twice the {what}, times the cost", ratio, ALLOWED_GROWTH, "times")
    result = assess(compare(case))
    found = []
    say("everything of 12 candidates and 1000 draws", timed(lambda: found.append(life_of(result))), 40.0)
    is_same = found[0].certainty == life_of(result).certainty
    print(f"the same seed gives the same numbers: {is_same}")
    memory = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0
    say("memory", memory, 1024.0, "MB")
    return int(bool(failures) or not is_same)


if __name__ == "__main__":
    sys.exit(main())
