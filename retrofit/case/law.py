"""Where the plant stands in law: whose law, when the change is, how long the plant is to run."""

from __future__ import annotations

import datetime
from typing import Annotated

from retrofit.case.dates import Day, YesNo
from retrofit.case.table import Table, WhyDefault, key
from retrofit.case.values import Choice, Quantity, Text

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

CODES = ("ASHRAE 15", "EN 378", "ISO 5149", "both")
DAY = Day("1980-01-01", "2100-12-31", "plants and their laws lie within it")
_STRICTER = "the stricter rule is taken"
_HINTS = (
    ("COMFORT COOLING", "air conditioning"),
    ("DOMESTIC", "domestic refrigerator"),
    ("REMOTE CONDENSING UNIT", "condensing unit"),
    ("DATA CENTER", "data centre"),
)


class Law(Table):
    """Where the plant stands in law. The tables of law are data; whoever uses them checks the current text."""

    jurisdiction: Annotated[str | None, Text(40)] = key(
        "jurisdiction",
        "Whose law: a name that the tables of law use, such as EU or US.",
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
