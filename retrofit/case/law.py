"""Where the plant stands in law: whose law, when the change is, how long the plant is to run."""

from __future__ import annotations

import datetime
from typing import Annotated

from retrofit.case.dates import Day, YesNo
from retrofit.case.jurisdictions import HINTS, JURISDICTIONS
from retrofit.case.table import Table, WhyDefault, key
from retrofit.case.values import Choice, Quantity

EQUIPMENT = (
    "refrigeration",
    "supermarket",
    "condensing unit",
    "stand-alone cabinet",
    "cold store",
    "industrial process",
    "process chiller",
    "chiller",
    "ice rink",
    "data centre",
    "air conditioning",
    "heat pump",
    "residential air conditioning",
    "residential heat pump",
    "transport",
    "domestic refrigerator",
)
"""Kinds of equipment, as case files and tables of law name them; residential means light commercial too."""

ARRANGEMENTS = (
    "self-contained",
    "movable plug-in",
    "single split",
    "multi split",
    "double duct",
    "multipack",
    "built on site",
)
"""How equipment is put together, as the tables of law tell it apart.

self-contained: no part that holds gas is connected on site. multipack: two or more compressors in parallel on common
condensers, for several cooling devices. built on site: connected there, and none of the others.
"""

CODES = ("ASHRAE 15", "EN 378", "ISO 5149", "both")
DAY = Day("1980-01-01", "2100-12-31", "plants and their laws lie within it")
_STRICTER = "the stricter rule is taken"
_HINTS = (
    ("COMFORT COOLING", "air conditioning"),
    ("DOMESTIC", "domestic refrigerator"),
    ("REMOTE CONDENSING UNIT", "condensing unit"),
    ("DATA CENTER", "data centre"),
)
_BUILT = (
    ("MONOBLOCK", "self-contained"),
    ("SPLIT", "single split"),
    ("VRF", "multi split"),
    ("RACK", "multipack"),
    ("REMOTE", "built on site"),
)


class Law(Table):
    """Where the plant stands in law. The tables of law are data; whoever uses them checks the current text."""

    jurisdiction: Annotated[str | None, Choice(JURISDICTIONS, HINTS)] = key(
        "jurisdiction",
        "Whose law: EU or a member of it, GB (Great Britain), NI (Northern Ireland), US, US-CA (California), or other.",
        None,
        where="where the plant stands",
    )
    date_of_change: Annotated[datetime.date | None, DAY] = key(
        "date_of_change", "Day of the changeover.", None, where="plan of the changeover"
    )
    remaining_life_years: Annotated[
        float | None, Quantity("years", "0 years", "60 years", "no plant runs longer after a change", above_low=True)
    ] = key("remaining_life", "Years the plant is to run after the change.", None, where="owner")
    end: Annotated[datetime.date | None, DAY] = key("end", "Day on which the plant is to be taken out of use.", None)
    equipment: Annotated[str | None, Choice(EQUIPMENT, _HINTS)] = key(
        "equipment", "Kind of equipment, as the tables of law name it.", None, where="what the plant is for"
    )
    arrangement: Annotated[str | None, Choice(ARRANGEMENTS, _BUILT)] = key(
        "arrangement", "How the equipment is put together; limits for new equipment differ by it.", None
    )
    rated_capacity_W: Annotated[
        float | None, Quantity("power", "0.01 kW", "100 MW", "no single plant has more", example="45 kW")
    ] = key("rated_capacity", "Rated capacity of new equipment; if left out the duty is taken.", None)
    cascade_primary: Annotated[bool | None, YesNo()] = key(
        "cascade_primary", "Whether it is the primary circuit of a cascade; not claimed if left out.", None
    )
    safety_exception: Annotated[bool | None, YesNo()] = key(
        "safety_exception",
        "Whether safety at the site rules out what the limit for new equipment leaves; not claimed if left out.",
        None,
    )
    hermetically_sealed: Annotated[bool, YesNo(), WhyDefault(_STRICTER)] = key(
        "hermetically_sealed", "Whether the equipment is hermetically sealed and labelled so.", False
    )
    leak_detection_system: Annotated[bool, YesNo(), WhyDefault(_STRICTER)] = key(
        "leak_detection_system", "Whether a leak detection system is fitted.", False
    )
    annual_leak_rate: Annotated[
        float | None, Quantity("fraction", "0 %", "100 %", "a share of the full charge", example="15 %")
    ] = key(
        "annual_leak_rate",
        "Refrigerant lost in a year, as a share of the charge.",
        None,
        where="log book: refrigerant added in the last years",
    )
    product_below_minus_50: Annotated[bool, YesNo(), WhyDefault(_STRICTER)] = key(
        "product_below_minus_50", "Whether the plant cools a product below -50 degC.", False
    )
    code: Annotated[str | None, Choice(CODES)] = key(
        "code", "Which charge rules the room is checked against.", None, where="law of the place, authority or insurer"
    )
