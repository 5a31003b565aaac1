"""An invented rack with a year, for the tests of year, draws and remaining life."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from retrofit.case import Case, read_case

CORE = """
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
{compressor}
[evaporator]
medium = "air"
inlet = "2 degC"
outlet = "-3 degC"
arrangement = "crossflow"
[condenser]
medium = "air"
inlet = "32 degC"
outlet = "38 degC"
arrangement = "crossflow"
[compare]
candidates = [{candidates}]
"""
YEAR = """
[year]
climate = {mean = "14 degC", yearly_swing = "10 K", daily_swing = "5 K"}
peak_load = "105 kW"
peak_at = "30 degC"
base_load = "60 kW"
base_at = "5 degC"
day_from = 7
day_to = 21
night_load = "70 %"
condenser_fans = "4 kW"
evaporator_fans = "5 kW"
defrost_power = "2 kW"
lowest_condensing = "28 degC"
"""
MONEY = """
[law]
remaining_life = "8 years"
annual_leak_rate = "15 %"
[emissions]
grid_factor = "0.35 kg/kWh"
[money]
currency = "EUR"
tariff = [0.15, 0.18, 0.24]
refrigerant_price = {R404A = [40, 60, 90], R448A = [25, 30, 40], R452A = [25, 30, 40]}
discount_rate = "6 %"
[money.change]
labour = [5000, 6000, 9000]
"""


@pytest.fixture(scope="session")
def rack_of(tmp_path_factory) -> Callable[..., Case]:
    """Return a function that reads the rack with another year, further tables, compressor keys or candidates."""
    path = tmp_path_factory.mktemp("rack") / "rack.toml"

    def read(year: str = YEAR, more: str = "", compressor: str = "", candidates: str = '"R448A"') -> Case:
        path.write_text(CORE.format(compressor=compressor, candidates=candidates) + year + more, encoding="utf-8")
        return read_case(path)

    return read


@pytest.fixture(scope="session")
def money() -> str:
    """Return the tables that emissions and money need, for `rack_of`."""
    return MONEY


@pytest.fixture(scope="session")
def usual_year() -> str:
    """Return the year that the rack has unless told otherwise."""
    return YEAR
