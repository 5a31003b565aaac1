"""Text with units to SI numbers, and SI numbers to text in SI or inch-pound units.

Everything inside the project is SI: kelvin, pascal (absolute), watt, kilogram, metre, second.
This room is the one door in (`parse_quantity`, `parse_pressure`) and out (`UnitSystem`). The unit
table is closed: a unit that is not listed is refused with the nearest one that is.

Spelling: `deg` and the sign `°` mean the same, and so do `3` and `³`; blanks inside a unit do not count
("bar g" = "barg"). Capital and small letters do count. Where only a temperature can stand, plain `C`
and `F` are taken as degrees Celsius and Fahrenheit. A temperature *difference* is written in kelvin
("8 K") or in Fahrenheit-sized degrees ("14.4 R" or "14.4 F deg"); "8 degC" is refused there, because
it is a point on a scale. A pressure always says whether it is absolute (a) or gauge (g).
"""

from retrofit.units.air import STANDARD_ATMOSPHERE_PA, standard_atmosphere_Pa
from retrofit.units.reading import Pressure, parse_pressure, parse_quantity
from retrofit.units.showing import (
    BOTH,
    IP,
    MINUS,
    MISSING,
    SI,
    THOUSANDS_MARK,
    UNIT_SYSTEMS,
    Display,
    UnitSystem,
    format_number,
    stacked,
)
from retrofit.units.table import KINDS, ZERO_C_K, Kind, Unit
from retrofit.units.told import all_told, figure, quantity, told, unit_word
from retrofit.units.words import close_to, described, listed, quoted, shown

__all__ = [
    "BOTH",
    "IP",
    "KINDS",
    "MINUS",
    "MISSING",
    "SI",
    "STANDARD_ATMOSPHERE_PA",
    "THOUSANDS_MARK",
    "UNIT_SYSTEMS",
    "ZERO_C_K",
    "Display",
    "Kind",
    "Pressure",
    "Unit",
    "UnitSystem",
    "all_told",
    "close_to",
    "described",
    "figure",
    "format_number",
    "listed",
    "parse_pressure",
    "parse_quantity",
    "quantity",
    "quoted",
    "shown",
    "stacked",
    "standard_atmosphere_Pa",
    "told",
    "unit_word",
]
