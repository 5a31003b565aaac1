"""What the lower flammability limit alone sets: the charges m1, m2 and m3, and the area rule of comfort use."""

from __future__ import annotations

import math
from dataclasses import dataclass

from retrofit.case import Room
from retrofit.refrigerants import Refrigerant

# Volumes of air that one LFL is multiplied by, and the factor of class 2L on each cap.
M1_M3, M2_M3, M3_M3 = 4.0, 26.0, 130.0
FACTOR_2L = 1.5
HEIGHTS_M = {"floor": 0.6, "window": 1.0, "wall": 1.8, "ceiling": 2.2}
AREA_RULE_ABOVE_KG_PER_MOL = 0.042


@dataclass(frozen=True)
class Caps:
    """The three charges that the LFL alone sets, with the factor of the class on each. [kg]"""

    m1_kg: float
    m2_kg: float
    m3_kg: float


def caps(lfl_kg_per_m3: float, flammability: str) -> Caps:
    """Return the charges m1, m2 and m3 of a class.

    Args:
        lfl_kg_per_m3: Lower flammability limit. [kg/m3]
        flammability: "2L", "2" or "3".
    Source: Real Decreto 552/2019, IF-04: 4, 26 and 130 m3 LFL; in class 2L 1.5 times that.
    >>> round(caps(0.307, "2L").m2_kg, 2)
    11.97
    """
    factor = lfl_kg_per_m3 * (FACTOR_2L if flammability == "2L" else 1.0)
    return Caps(M1_M3 * factor, M2_M3 * factor, M3_M3 * factor)


def area_rule_kg(lfl_kg_per_m3: float, height_m: float, area_m2: float) -> float:
    """Return the charge that a floor area allows in comfort use. [kg]

    Args:
        lfl_kg_per_m3: Lower flammability limit. [kg/m3]
        height_m: Height factor of the mounting. [m]
        area_m2: Floor area. [m2]
    Source: Real Decreto 552/2019, IF-04: m = 2.5 LFL^(5/4) h0 A^(1/2).
    """
    return float(2.5 * lfl_kg_per_m3**1.25 * height_m * math.sqrt(area_m2))


def least_area_m2(lfl_kg_per_m3: float, height_m: float, charge_kg: float) -> float:
    """Return the floor area that a charge asks for in comfort use: the area rule turned round. [m2]

    Args:
        lfl_kg_per_m3: Lower flammability limit. [kg/m3]
        height_m: Height factor of the mounting. [m]
        charge_kg: Charge. [kg]
    Source: Real Decreto 552/2019, IF-04, with the square on the whole quotient; the decree prints it on the
        denominator only, which does not follow from its own area rule.
    """
    return float((charge_kg / (2.5 * lfl_kg_per_m3**1.25 * height_m)) ** 2)


def is_heavy_enough(refrigerant: Refrigerant) -> bool:
    """Return whether the vapour is heavy enough for the area rule, M > 42 g/mol; an unknown mass is not.

    Args:
        refrigerant: The refrigerant.
    """
    molar = refrigerant.molar_mass_kg_per_mol.number
    return molar is not None and molar > AREA_RULE_ABOVE_KG_PER_MOL


def height_factor_m(room: Room) -> float | None:
    """Return the height factor of the mounting, None if neither mounting nor height is given. [m]

    A height given in metres takes the row of the table that lies below it, the lowest row if none does.

    Args:
        room: The room.
    """
    if room.mounting is not None:
        return HEIGHTS_M[room.mounting]
    if room.mounting_height_m is None:
        return None
    rows = [height for height in HEIGHTS_M.values() if height <= room.mounting_height_m]
    return max(rows, default=min(HEIGHTS_M.values()))
