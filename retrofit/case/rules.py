"""Rules between two keys of a case file, as data for `retrofit.case.between`."""

from __future__ import annotations

from typing import NamedTuple


class Order(NamedTuple):
    """A key whose value lies "below", "above", "at most" or "at least" at another's, and why."""

    key: str
    relation: str
    other: str
    why: str


_FLOW_OF_HEAT = "heat flows from the warmer side to the colder"
_SWITCHES = "the high-pressure switch stops the plant before anything else is reached"
ORDERS = (
    Order("duty.evaporating", "below", "duty.condensing", "the evaporating temperature lies below the condensing one"),
    Order("plant.low_side_limit", "at most", "plant.high_side_limit", "the high side is made for the higher pressure"),
    Order("readings.ambient", "at most", "plant.highest_ambient", "the highest one is at least what was measured"),
    Order("evaporator.outlet", "below", "evaporator.inlet", "an evaporator cools air, water or brine"),
    Order("condenser.outlet", "above", "condenser.inlet", "a condenser warms air, water or brine"),
    Order("evaporator.inlet", "above", "duty.evaporating", _FLOW_OF_HEAT),
    Order("condenser.inlet", "below", "duty.condensing", _FLOW_OF_HEAT),
    Order("condenser.highest_inlet", "at least", "condenser.inlet", "the highest is at least that of the duty"),
    Order("readings.evaporator_out", "below", "readings.evaporator_in", "an evaporator cools air, water or brine"),
    Order("readings.condenser_out", "above", "readings.condenser_in", "a condenser warms air, water or brine"),
    Order("readings.suction_pressure", "below", "readings.discharge_pressure", "a compressor raises the pressure"),
    Order("readings.liquid_pressure", "above", "readings.suction_pressure", "the expansion valve lowers the pressure"),
    Order("readings.discharge_temperature", "above", "readings.suction_temperature", "a compressor warms the gas"),
    Order(
        "readings.liquid_temperature", "below", "readings.discharge_temperature", "a condenser cools the refrigerant"
    ),
    Order("compressor.highest_suction", "at least", "duty.evaporating", "it is the highest of all, at pull-down"),
    Order("compressor.highest_suction", "below", "duty.condensing", "a compressor raises the pressure"),
    Order("controls.low_pressure_cut_out", "below", "controls.low_pressure_cut_in", "a switch cuts in above that"),
    Order("controls.low_pressure_cut_out", "below", "controls.rack_set_point", "the plant would stop at its set point"),
    Order("controls.low_pressure_cut_in", "below", "controls.high_pressure_cut_out", _SWITCHES),
    Order("controls.rack_set_point", "below", "controls.high_pressure_cut_out", _SWITCHES),
    Order("controls.evaporator_regulator", "below", "controls.high_pressure_cut_out", _SWITCHES),
    Order("controls.crankcase_regulator", "below", "controls.high_pressure_cut_out", _SWITCHES),
    Order("controls.head_pressure", "below", "controls.high_pressure_cut_out", _SWITCHES),
    Order("plant.relief_setting", "above", "controls.high_pressure_cut_out", _SWITCHES),
    Order("room.largest_circuit", "at most", "plant.charge", "no circuit holds more than the whole plant"),
    Order("year.base_load", "at most", "year.peak_load", "the peak is the larger of the two"),
    Order("law.end", "above", "law.date_of_change", "the plant runs on after the change"),
    *(
        Order(f"lines.{line}.riser", "at most", f"lines.{line}.length", "the riser is a part of the line")
        for line in ("suction", "discharge", "liquid")
    ),
)

# Keys that may not have the same value, and why.
DIFFER = (
    ("year.peak_at", "year.base_at", "the load changes between the two"),
    ("year.day_from", "year.day_to", "a day that begins as it ends has no night"),
)

RISING = (
    "compressor.efficiency_points",
    "compressor.polynomial.evaporating",
    "compressor.polynomial.condensing",
    "controls.fan_steps",
    "emissions.leak_log",
    "emissions.grid_years",
)

# Exactly one of the two, if their table is there.
GIVEN_ONCE = (
    ("compressor.polynomial.capacity", "compressor.polynomial.mass_flow"),
    ("compressor.polynomial.power", "compressor.polynomial.current"),
    ("compressor.polynomial.superheat", "compressor.polynomial.return_gas"),
)

_POINTS = "the points hold this efficiency; leave one of the two out"
_MAKERS = "the polynomial says how the compressor works; leave one of the two out"
_OUTLET = "the outlet and the duty make the flow; leave one of the two out"
# What is kept, what is one too many beside it, and why.
NOT_BOTH = (
    ("compressor.efficiency_points", "compressor.isentropic_efficiency", _POINTS),
    ("compressor.efficiency_points", "compressor.volumetric_efficiency", _POINTS),
    ("compressor.polynomial", "compressor.isentropic_efficiency", _MAKERS),
    ("compressor.polynomial", "compressor.volumetric_efficiency", _MAKERS),
    ("compressor.polynomial", "compressor.efficiency_points", _MAKERS),
    ("room.mounting_height", "room.mounting", "the height says where the unit is; leave one of the two out"),
    ("law.end", "law.remaining_life", "the end says how long the plant runs; leave one of the two out"),
    ("emissions.leak_log", "emissions.leak_rate", "the log gives the rate; leave one of the two out"),
    *(
        (f"{way}.outlet", f"{way}.{key}", _OUTLET)
        for way in ("evaporator", "condenser")
        for key in ("flow", "specific_heat")
    ),
)

_INLET = "the inlet is missing"
_MEETING = 'how the streams meet is not given ("crossflow" is usual for air, "counterflow" for plates)'
_FLOW = "a specific heat goes with a flow"
_LOAD_LINE = "a load that follows the weather needs a peak temperature, a base temperature and a base load"
_LOAD_KEYS = ("peak_at", "base_load", "base_at")
_DAY = "a load by day and by night needs both hours and the share of the night"
_DAY_KEYS = ("day_from", "day_to", "night_load")
# A key, what has to stand beside it, and why.
NEEDS = (
    (
        "compressor.polynomial.current",
        tuple(f"compressor.polynomial.{name}" for name in ("voltage", "phases", "power_factor")),
        "a current alone gives no power",
    ),
    (
        "compressor.polynomial.capacity",
        ("compressor.polynomial.subcooling",),
        "a capacity gives no mass flow without the subcooling it is rated at",
    ),
    *(
        (f"year.{name}", tuple(f"year.{other}" for other in names if other != name), why)
        for names, why in ((_LOAD_KEYS, _LOAD_LINE), (_DAY_KEYS, _DAY))
        for name in names
    ),
    *(
        need
        for way in ("evaporator", "condenser")
        for need in (
            (f"{way}.outlet", (f"{way}.inlet",), _INLET),
            (f"{way}.flow", (f"{way}.inlet",), _INLET),
            (f"{way}.inlet", (f"{way}.arrangement",), _MEETING),
            (f"{way}.specific_heat", (f"{way}.flow",), _FLOW),
            (f"readings.{way}_specific_heat", (f"readings.{way}_flow",), _FLOW),
        )
    ),
)
