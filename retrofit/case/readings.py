"""What was measured on the running plant, and the controls as they are set."""

from __future__ import annotations

from typing import Annotated, Any

from pydantic import Field

from retrofit.case.compressor import CURRENT, PHASES, POWER_FACTOR, VOLTAGE
from retrofit.case.dates import YesNo
from retrofit.case.exchangers import FLOW, SPECIFIC_HEAT
from retrofit.case.table import Items, Table, key
from retrofit.case.values import PRESSURE_LIMIT, Absent, AbsolutePressure, OrNone, Quantity, Text

MOST_FAN_STEPS = 20
_PRESSURE = Annotated[float | None, AbsolutePressure("0.01 bar a", "300 bar a", "gauges of plants lie within it")]
_SETTING = AbsolutePressure("0.01 bar a", "300 bar a", "controls of plants lie within it")
_SET = Annotated[float | Absent | None, OrNone(_SETTING)]
_TEMPERATURE = Annotated[
    float | None, Quantity("temperature", "-120 degC", "250 degC", "pipes of plants lie within it")
]
_SECONDARY = Annotated[
    float | None, Quantity("temperature", "-100 degC", "150 degC", "air, water and brine lie within it")
]


def _read(alias: str, meaning: str) -> Any:
    """Return the pydantic field of a reading.

    Args:
        alias: The key in the file. [-]
        meaning: What it is. [-]
    """
    return key(alias, meaning, None, where="instrument on the running plant, at steady full load")


class Readings(Table):
    """What was measured on the running plant; whatever was not measured is left out."""

    date: Annotated[str | None, Text(40)] = key("date", "When the readings were taken.", None)
    ambient_K: Annotated[
        float | None, Quantity("temperature", "-60 degC", "60 degC", "outdoor air lies within it", example="25 degC")
    ] = _read("ambient", "Temperature of the outdoor air during the readings.")
    load: Annotated[
        float | None,
        Quantity("fraction", "0 %", "100 %", "a share of the full duty", above_low=True, example="80 %"),
    ] = key(
        "load",
        "Load during the readings, as a share of the full duty.",
        None,
        where="capacity steps or speed during the readings",
    )
    suction_pressure_Pa: _PRESSURE = _read("suction_pressure", "Pressure at the compressor inlet.")
    discharge_pressure_Pa: _PRESSURE = _read("discharge_pressure", "Pressure at the compressor outlet.")
    liquid_pressure_Pa: _PRESSURE = _read("liquid_pressure", "Pressure in the liquid line.")
    evaporator_outlet_temperature_K: _TEMPERATURE = _read(
        "evaporator_outlet_temperature", "Pipe temperature at the evaporator outlet."
    )
    suction_temperature_K: _TEMPERATURE = _read("suction_temperature", "Pipe temperature at the compressor inlet.")
    discharge_temperature_K: _TEMPERATURE = _read("discharge_temperature", "Pipe temperature at the compressor outlet.")
    liquid_temperature_K: _TEMPERATURE = _read(
        "liquid_temperature", "Pipe temperature of the liquid before the expansion valve."
    )
    power_W: Annotated[
        float | None, Quantity("power", "0 W", "100 MW", "no single plant takes more", above_low=True, example="54 kW")
    ] = _read("power", "Electrical power of the compressors.")
    current_A: Annotated[float | None, CURRENT] = key(
        "current", "Current of the compressors.", None, where="clamp meter at full load, all compressors"
    )
    voltage_V: Annotated[float | None, VOLTAGE] = _read("voltage", "Voltage between phases, or of the one phase.")
    phases: Annotated[int | None, PHASES] = key("phases", "Phases of the supply, 1 or 3.", None)
    power_factor: Annotated[float | None, POWER_FACTOR] = key("power_factor", "Power factor of the motors.", None)
    evaporator_in_K: _SECONDARY = _read("evaporator_in", "Air, water or brine entering the evaporator.")
    evaporator_out_K: _SECONDARY = _read("evaporator_out", "Air, water or brine leaving the evaporator.")
    evaporator_flow_kg_per_s: Annotated[float | None, FLOW] = _read(
        "evaporator_flow", "Mass flow of air, water or brine through the evaporator."
    )
    evaporator_specific_heat_J_per_kgK: Annotated[float | None, SPECIFIC_HEAT] = key(
        "evaporator_specific_heat", "Specific heat of what flows through the evaporator.", None
    )
    condenser_in_K: _SECONDARY = _read("condenser_in", "Air, water or brine entering the condenser.")
    condenser_out_K: _SECONDARY = _read("condenser_out", "Air, water or brine leaving the condenser.")
    condenser_flow_kg_per_s: Annotated[float | None, FLOW] = _read(
        "condenser_flow", "Mass flow of air, water or brine through the condenser."
    )
    condenser_specific_heat_J_per_kgK: Annotated[float | None, SPECIFIC_HEAT] = key(
        "condenser_specific_heat", "Specific heat of what flows through the condenser.", None
    )
    calibrate: Annotated[bool | None, YesNo()] = key(
        "calibrate",
        "Whether power read over modelled power is taken as losses of motor and drive, alike for every option.",
        None,
    )
    hours_per_day: Annotated[float | None, Quantity("hours per day", "0", "24", "a day has no more")] = _read(
        "hours_per_day", "Hours that the compressors run in a day."
    )


class Controls(Table):
    """Settings of the controls today; a gauge pressure is held as absolute."""

    low_pressure_cut_out_Pa: _SET = key(
        "low_pressure_cut_out",
        "Pressure at which the low-pressure switch stops the compressor.",
        None,
        where="scale of the low-pressure switch, tried by an actual trip",
    )
    low_pressure_cut_in_Pa: _SET = key(
        "low_pressure_cut_in",
        "Pressure at which the low-pressure switch lets the compressor start again.",
        None,
        where="scale of the low-pressure switch",
    )
    high_pressure_cut_out_Pa: Annotated[float | Absent | None, OrNone(PRESSURE_LIMIT)] = key(
        "high_pressure_cut_out",
        "Pressure at which the high-pressure switch stops the compressor.",
        None,
        where="scale of the high-pressure switch, tried by an actual trip",
    )
    rack_set_point_Pa: _SET = key(
        "rack_set_point",
        "Suction pressure that the control of the rack holds.",
        None,
        where="menu of the rack controller",
    )
    evaporator_regulator_Pa: _SET = key(
        "evaporator_regulator",
        "Pressure that the evaporator pressure regulator holds.",
        None,
        where="gauge at the regulator",
    )
    crankcase_regulator_Pa: _SET = key(
        "crankcase_regulator",
        "Highest suction pressure that the crankcase regulator lets through.",
        None,
        where="gauge at the regulator during pull-down",
    )
    head_pressure_Pa: _SET = key(
        "head_pressure",
        "Lowest condensing pressure that the control holds.",
        None,
        where="menu of the controller, or gauge in winter",
    )
    fan_steps_Pa: Annotated[
        Annotated[tuple[Annotated[float, _SETTING], ...], Field(max_length=MOST_FAN_STEPS)] | None,
        Items(_SETTING, f'a list of up to {MOST_FAN_STEPS} pressures, as in ["12 bar g", "14 bar g"]'),
    ] = key(
        "fan_steps",
        "Pressures at which the condenser fans come on, rising.",
        None,
        where="menu of the controller, or the fan switches; [] if there are no steps",
    )
