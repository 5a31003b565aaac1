"""The plant as found, what it has to do, and the refrigerants to compare."""

from __future__ import annotations

from dataclasses import replace
from typing import Annotated

from pydantic import Field

from retrofit.case.numbers import Number
from retrofit.case.table import Items, Table, WhyDefault, key
from retrofit.case.values import NOTHING, PRESSURE_LIMIT, Absent, Choice, OrNone, Quantity, Refrigerant
from retrofit.units import standard_atmosphere_Pa

MOST_CANDIDATES = 40
OILS = (
    "mineral",
    "alkylbenzene",
    "polyol ester",
    "polyvinyl ether",
    "polyalkylene glycol",
    "polyalphaolefin",
    "mixed",
    "unknown",
)
_OIL_SHORT = (
    ("MO", "mineral"),
    ("AB", "alkylbenzene"),
    ("POE", "polyol ester"),
    ("PVE", "polyvinyl ether"),
    ("PAG", "polyalkylene glycol"),
    ("PAO", "polyalphaolefin"),
)
METALS = ("copper", "brass", "steel", "stainless", "aluminium", "zinc")
CONTROLLERS = ("fixed to refrigerant", "selectable", "none")
_METAL = Choice(METALS, (("ALUMINUM", "aluminium"), ("STAINLESS STEEL", "stainless"), ("IRON", "steel")))
_REFRIGERANT = Refrigerant()

_TEMPERATURE = Quantity("temperature", "-120 degC", "150 degC", "vapour-compression plants work within it")
_SUPERHEAT = Quantity("temperature difference", "0 K", "80 K", "more points to a reading error")
_SUBCOOLING = Quantity("temperature difference", "0 K", "50 K", "counted below the bubble point")
_CONVENTION = Choice(("dew", "mean"))


class Plant(Table):
    """The plant as found."""

    refrigerant: Annotated[str, _REFRIGERANT] = key("refrigerant", "Refrigerant in the plant today.")
    charge_kg: Annotated[
        float | None, Quantity("mass", "0 kg", "1000000 kg", "a plant that runs has one", above_low=True)
    ] = key(
        "charge",
        "Mass of refrigerant in the whole plant.",
        None,
        where="log book, label on the plant, or weighed at recovery",
    )
    oil: Annotated[str | None, Choice(OILS, _OIL_SHORT)] = key(
        "oil", "Kind of compressor oil.", None, where="compressor nameplate, service record, or a sample"
    )
    oil_changes: Annotated[
        int | None, Number(0, 10, "a flush is repeated a few times at most", whole=True, example="2")
    ] = key(
        "oil_changes", "Oil changes planned before the new refrigerant goes in.", None, where="plan of the changeover"
    )
    oil_left: Annotated[
        float | None,
        Quantity("fraction", "0 %", "100 %", "some always stays", above_low=True, example="30 %"),
    ] = key(
        "oil_left",
        "Share of the old oil that each change leaves behind.",
        None,
        where="sample after a change, or the maker's experience",
    )
    altitude_m: Annotated[
        float,
        Quantity("length", "-500 m", "6000 m", "plants stand within it"),
        WhyDefault("gauge pressures are counted from the air pressure at sea level"),
    ] = key("altitude", "Height above sea level; it sets the air pressure at the plant.", "0 m")
    highest_ambient_K: Annotated[
        float | None,
        Quantity("temperature", "-20 degC", "80 degC", "air around plants lies within it", example="43 degC"),
    ] = key(
        "highest_ambient",
        "Hottest air around plant and vessels, also at standstill.",
        None,
        where="hottest place beside plant and vessels in summer; design data of the site",
    )
    high_side_limit_Pa: Annotated[float | None, PRESSURE_LIMIT] = key(
        "high_side_limit",
        "Maximum pressure on the nameplate of the high side.",
        None,
        where="nameplates of condenser, receiver and compressor: the lowest of them",
    )
    low_side_limit_Pa: Annotated[float | None, PRESSURE_LIMIT] = key(
        "low_side_limit",
        "Maximum pressure on the nameplate of the low side.",
        None,
        where="nameplates of evaporators, accumulators and crankcase: the lowest of them",
    )
    relief_setting_Pa: Annotated[float | Absent | None, OrNone(PRESSURE_LIMIT)] = key(
        "relief_setting",
        "Pressure at which the relief valve of the high side opens.",
        None,
        where="stamped on the relief valve, or its tag",
    )
    sight_glass: Annotated[str | None, Choice(("fitted", NOTHING))] = key(
        "sight_glass", "Whether the liquid line has a sight glass.", None, where="liquid line, before the valves"
    )
    evaporator: Annotated[str | None, Choice(("direct expansion", "flooded", "pumped"))] = key(
        "evaporator",
        "How the evaporators are fed.",
        None,
        where="at the evaporators: expansion valve, float or level control, or pump",
    )
    metals: Annotated[
        Annotated[tuple[Annotated[str, _METAL], ...], Field(min_length=1, max_length=len(METALS))] | None,
        Items(_METAL, f'a list of 1 to {len(METALS)} metals, as in ["copper", "steel"]'),
    ] = key(
        "metals",
        "Metals that the refrigerant touches.",
        None,
        where="pipes, coils, valves, bearings and instruments; parts lists",
    )
    controller: Annotated[str | None, Choice(CONTROLLERS)] = key(
        "controller",
        "Whether the refrigerant can be chosen in the software of controls and valves.",
        None,
        where="menu of each controller of plant, cases and valves",
    )

    @property
    def ambient_pressure_Pa(self) -> float:
        """Air pressure at the plant, by the standard atmosphere at its altitude. [Pa]"""
        return standard_atmosphere_Pa(self.altitude_m)


class Duty(Table):
    """What the plant has to do, at the temperatures it does it."""

    cooling_W: Annotated[
        float, Quantity("power", "0 W", "1000 MW", "no single plant does more", above_low=True, shown="cooling")
    ] = key("cooling", "Cooling the plant has to deliver.")
    T_evap_K: Annotated[float, _TEMPERATURE] = key("evaporating", "Evaporating temperature today.")
    T_cond_K: Annotated[float, replace(_TEMPERATURE, example="42 degC")] = key(
        "condensing", "Condensing temperature today."
    )
    reading: Annotated[
        str, _CONVENTION, WhyDefault("a gauge on a suction or discharge line is read against the dew line")
    ] = key("reading", "What these two temperatures are.", "dew")
    useful_superheat_K: Annotated[
        float, _SUPERHEAT, WhyDefault("a usual setting of an expansion valve; measure it")
    ] = key("useful_superheat", "Superheat picked up inside the evaporator.", "5 K")
    line_superheat_K: Annotated[
        float, _SUPERHEAT, WhyDefault("no warming of the suction line is counted; measure it")
    ] = key("line_superheat", "Superheat picked up after the evaporator: it cools nothing.", "0 K")
    subcooling_K: Annotated[
        float, _SUBCOOLING, WhyDefault("no subcooling is counted; measure it at the expansion valve")
    ] = key("subcooling", "Subcooling below the bubble point at the expansion valve.", "0 K")


class Compare(Table):
    """The refrigerants to compare, and how they are matched to the existing one."""

    candidates: Annotated[
        tuple[Annotated[str, _REFRIGERANT], ...],
        Field(min_length=1, max_length=MOST_CANDIDATES),
        Items(_REFRIGERANT, f'a list of 1 to {MOST_CANDIDATES} refrigerants, as in ["R448A", "R449A"]'),
    ] = key("candidates", "Refrigerants to compare with the existing one.")
    match: Annotated[
        str, _CONVENTION, WhyDefault("equal mean temperatures keep the temperature of air, water or brine")
    ] = key("match", "Which temperatures are held equal between refrigerants.", "mean")
