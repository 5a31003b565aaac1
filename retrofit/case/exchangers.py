"""Air, water or brine at the evaporator and the condenser, at the duty point of the case."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Annotated

from retrofit.case.numbers import UAFactors, UAFactorValue
from retrofit.case.table import Table, WhyDefault, key
from retrofit.case.values import Choice, Quantity

FLOW = Quantity("mass flow", "0 kg/s", "100000 kg/s", "no single plant has more", above_low=True, example="8 kg/s")
SPECIFIC_HEAT = Quantity("specific heat", "0.5 kJ/(kg K)", "10 kJ/(kg K)", "air, water and brines lie within it")
INLET = Quantity("temperature", "-100 degC", "150 degC", "air, water and brine lie within it", example="2 degC")
_CALCULATED = WhyDefault("from correlations, not measured", beside="inlet")
_NO_LOSS = WhyDefault("no pressure drop in the exchanger is counted", beside="inlet")


@dataclass(frozen=True)
class MediumHeat:
    """Specific heat taken for a medium when the file gives none: as text, and why."""

    shown_text: str
    why: str


# IAPWS-95 gives 4.195 kJ/(kg K) for water at 10 degC and 4.184 at 20 degC, at 1 atm; dry air at 20 degC and
# 1 atm has 1.006 (ASHRAE Handbook Fundamentals, psychrometrics). Written from memory, checked in the tests.
MEDIUM_HEATS = {
    "water": MediumHeat("4.19 kJ/(kg K)", "water between 5 and 40 degC, within 0.4 % (IAPWS-95)"),
    "air": MediumHeat("1.006 kJ/(kg K)", "dry air near 20 degC (ASHRAE); dew and frost on a coil come on top"),
}


class Exchanger(Table):
    """What flows through an exchanger opposite the refrigerant.

    Its capacity rate comes from `outlet` with the duty, or from `flow` with the specific heat.
    """

    medium: Annotated[str | None, Choice(("air", "water", "brine"), (("GLYCOL", "brine"),))] = key(
        "medium", "What flows on the other side.", None, where="at the exchanger"
    )
    inlet_K: Annotated[float | None, INLET] = key(
        "inlet",
        "Temperature at which it enters.",
        None,
        where="thermometer in the stream before the exchanger, at the duty of the case",
    )
    outlet_K: Annotated[float | None, INLET] = key(
        "outlet",
        "Temperature at which it leaves.",
        None,
        where="thermometer in the stream behind the exchanger, at the duty of the case",
    )
    flow_kg_per_s: Annotated[float | None, FLOW] = key("flow", "Its mass flow, instead of the outlet.", None)
    specific_heat_J_per_kgK: Annotated[float | None, SPECIFIC_HEAT] = key(
        "specific_heat", "Its specific heat, beside the flow.", None
    )
    arrangement: Annotated[str | None, Choice(("counterflow", "crossflow", "flooded"))] = key(
        "arrangement",
        "How the two streams meet; flooded: the refrigerant has one temperature.",
        None,
        where="drawings: crossflow for finned coils, counterflow for plates",
    )
    ua_factor: Annotated[UAFactors, UAFactorValue(), _CALCULATED] = key(
        "ua_factor",
        "Overall conductance (UA) with a candidate over today's: a number, or one for each; else calculated.",
        "calculated",
    )
    pressure_drop_K: Annotated[
        float, Quantity("temperature difference", "0 K", "20 K", "more points to a blocked exchanger"), _NO_LOSS
    ] = key("pressure_drop", "Pressure drop of the refrigerant, as a fall of its saturation temperature.", "0 K")


class Evaporator(Exchanger):
    """Air, water or brine that the evaporator cools, at the duty point."""


class Condenser(Exchanger):
    """Air, water or brine that the condenser warms, at the duty point."""

    highest_inlet_K: Annotated[float | None, replace(INLET, example="28 degC")] = key(
        "highest_inlet",
        "Highest temperature at which it enters while the plant runs; for air plant.highest_ambient if left out.",
        None,
        where="cooling tower or well in summer, design data of the water or dry cooler",
    )
