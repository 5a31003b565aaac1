"""What a case is: its tables, their keys, the range of each value, and the defaults.

One class per table of the file. A field's alias is the key in the file; the field's own name carries the
SI unit it holds. Defaults are written as a user would write them, so that the list of assumptions, the
schema and the value used cannot differ.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Annotated, Any

from pydantic import BaseModel, ConfigDict, Field

from retrofit.case.values import Choice, PressureLimit, Quantity, Refrigerant, Text
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

_Temperature = Quantity("temperature", "-120 degC", "150 degC", "vapour-compression plants work within it")
_Superheat = Quantity("temperature difference", "0 K", "80 K", "more points to a reading error")
_Subcooling = Quantity("temperature difference", "0 K", "50 K", "counted below the bubble point")
_Efficiency = Quantity(
    "fraction", "0 %", "100 %", "no machine does better than the ideal one", above_low=True, example="0.70"
)
_Convention = Choice(("dew", "mean"))


@dataclass(frozen=True)
class WhyDefault:
    """Why the default of a field is what it is: a sentence for the list of assumptions."""

    text: str


def _key(alias: str, meaning: str, default: Any = ...) -> Any:
    """Return the pydantic field of a key; its default is text as a user would write it, or None."""
    checked = default is not None and default is not ...
    return Field(default, alias=alias, description=meaning, validate_default=checked)


class Table(BaseModel):
    """A table of the case file: frozen, and without keys that it does not know."""

    model_config = ConfigDict(frozen=True, extra="forbid")


class Plant(Table):
    """The plant as found."""

    refrigerant: Annotated[str, Refrigerant()] = _key("refrigerant", "Refrigerant in the plant today.")
    charge_kg: Annotated[
        float | None, Quantity("mass", "0 kg", "1000000 kg", "a plant that runs has one", above_low=True)
    ] = _key("charge", "Mass of refrigerant in the whole plant.", None)
    oil: Annotated[str | None, Choice(OILS, _OIL_SHORT)] = _key("oil", "Kind of compressor oil.", None)
    altitude_m: Annotated[
        float,
        Quantity("length", "-500 m", "6000 m", "plants stand within it"),
        WhyDefault("gauge pressures are counted from the air pressure at sea level"),
    ] = _key("altitude", "Height above sea level; it sets the air pressure at the plant.", "0 m")
    high_side_limit_Pa: Annotated[
        float | None, PressureLimit("1 bar a", "300 bar a", "nameplates of plants lie within it")
    ] = _key("high_side_limit", "Maximum pressure on the nameplate of the high side.", None)
    evaporator: Annotated[str | None, Choice(("direct expansion", "flooded", "pumped"))] = _key(
        "evaporator", "How the evaporators are fed.", None
    )

    @property
    def ambient_pressure_Pa(self) -> float:
        """Air pressure at the plant, by the standard atmosphere at its altitude. [Pa]"""
        return standard_atmosphere_Pa(self.altitude_m)


class Duty(Table):
    """What the plant has to do, at the temperatures it does it."""

    cooling_W: Annotated[
        float, Quantity("power", "0 W", "1000 MW", "no single plant does more", above_low=True)
    ] = _key("cooling", "Cooling the plant has to deliver.")
    T_evap_K: Annotated[float, _Temperature] = _key("evaporating", "Evaporating temperature today.")
    T_cond_K: Annotated[float, replace(_Temperature, example="42 degC")] = _key(
        "condensing", "Condensing temperature today."
    )
    reading: Annotated[
        str, _Convention, WhyDefault("a gauge on a suction or discharge line is read against the dew line")
    ] = _key("reading", "What these two temperatures are.", "dew")
    useful_superheat_K: Annotated[
        float, _Superheat, WhyDefault("a usual setting of an expansion valve; measure it")
    ] = _key("useful_superheat", "Superheat picked up inside the evaporator.", "5 K")
    line_superheat_K: Annotated[
        float, _Superheat, WhyDefault("no warming of the suction line is counted; measure it")
    ] = _key("line_superheat", "Superheat picked up after the evaporator: it cools nothing.", "0 K")
    subcooling_K: Annotated[
        float, _Subcooling, WhyDefault("no subcooling is counted; measure it at the expansion valve")
    ] = _key("subcooling", "Subcooling below the bubble point at the expansion valve.", "0 K")


class Compressor(Table):
    """The existing compressors taken together."""

    isentropic_efficiency: Annotated[
        float, _Efficiency, WhyDefault("an ordinary value, the same for every refrigerant")
    ] = _key("isentropic_efficiency", "Isentropic work over real work.", "0.70")
    volumetric_efficiency: Annotated[
        float, _Efficiency, WhyDefault("an ordinary value, the same for every refrigerant")
    ] = _key("volumetric_efficiency", "Volume drawn in over swept volume.", "0.90")
    swept_volume_m3_per_s: Annotated[
        float | None,
        Quantity("volume flow", "0 m3/h", "1000000 m3/h", "no single plant has more", above_low=True),
    ] = _key("swept_volume", "Swept volume of all compressors at the speed they run.", None)


class Compare(Table):
    """The refrigerants to compare, and how they are matched to the existing one."""

    candidates: Annotated[
        tuple[Annotated[str, Refrigerant()], ...], Field(min_length=1, max_length=MOST_CANDIDATES)
    ] = _key("candidates", "Refrigerants to compare with the existing one.")
    match: Annotated[
        str, _Convention, WhyDefault("equal mean temperatures keep the temperature of air, water or brine")
    ] = _key("match", "Which temperatures are held equal between refrigerants.", "mean")


class CaseFile(Table):
    """The whole file."""

    title: Annotated[str | None, Text(200)] = _key("title", "Name of the plant, for headings.", None)
    about: Annotated[str | None, Text(1000)] = _key("about", "A sentence on whose plant it is.", None)
    plant: Plant = _key("plant", "The plant as found.")
    duty: Duty = _key("duty", "What the plant has to do.")
    compressor: Compressor = Field(
        default_factory=lambda: Compressor.model_validate({}),
        alias="compressor",
        description="The existing compressors taken together.",
    )
    compare: Compare = _key("compare", "The refrigerants to compare.")


TABLES: Mapping[str, type[Table]] = {
    "plant": Plant,
    "duty": Duty,
    "compressor": Compressor,
    "compare": Compare,
}


@dataclass(frozen=True)
class Default:
    """A value that the file left out: its key, what was taken (as text), and why that."""

    key: str
    shown_text: str
    why: str


@dataclass(frozen=True)
class Case:
    """A case as read: SI values in its tables, and what was written and what was assumed.

    `given` maps each key of the file ("duty.cooling") to the text written there; `defaults` are the
    values taken for keys left out; `path` is the file as named by the user and `text` its content.
    """

    title: str
    about: str | None
    plant: Plant
    duty: Duty
    compressor: Compressor
    compare: Compare
    path: str
    text: str
    given: Mapping[str, str]
    defaults: tuple[Default, ...]
