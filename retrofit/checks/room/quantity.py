"""The alternative of EN 378-1 C.3: quantity limits with minimum and with additional ventilation.

It has several conditions that a case file does not hold, so it is shown beside the other limits and decides nothing.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from retrofit.case import Room
from retrofit.checks.room.en378 import EDITIONS
from retrofit.checks.room.lfl import caps
from retrofit.checks.room.lists import read
from retrofit.checks.room.working import (
    Rule,
    Work,
    class_flags,
    class_of,
    concentration,
    mass,
    room_volume,
    value_flags,
)
from retrofit.refrigerants import Refrigerant, ppm_to_kg_per_m3
from retrofit.study.room import WorkedLimit

LARGEST_AREA_M2 = 250.0  # a larger room counts as one of this area
LARGEST_CHARGE_KG = 150.0
CLASSES = ("A1", "A2L")
_CONDITIONS = (
    "it has several conditions that a case does not hold (permanent joints, factory-made branches, no valves in the "
    "room, protection of the indoor unit and more): read them before it is used"
)
AIR_WITHOUT_ODL_PPM = 140_000.0  # 18.5 % of oxygen are left
SHARE_OF_LFL = 0.5
FIFTH_OF_LFL = 0.2


def quantity_limits() -> dict[str, Any]:
    """Return the quantity limits, kg in a cubic metre by designation, their interpolation, and their source."""
    return read("quantity_limits")


def alternative(refrigerant: Refrigerant, room: Room, family: str = "EN 378") -> tuple[WorkedLimit, ...]:
    """Return the alternative limits: without a measure, with one, and the end of what a lowest floor may hold.

    Args:
        refrigerant: The refrigerant.
        room: The room.
        family: "EN 378" or "ISO 5149".
    Returns: Nothing for a class or location that the alternative is not for.
    Source: Real Decreto 552/2019, IF-04, appendix 4.
    """
    if refrigerant.safety_class.text not in CLASSES or room.location_class not in (None, "II"):
        return ()
    table = quantity_limits()["kg_per_m3"].get(refrigerant.designation) or computed_limits(refrigerant)
    if room.below_ground:
        named = [("rcl", "RCL", "no measure"), ("qlmv", "QLMV", "one measure"), ("qlav", "QLAV", "two measures")]
    else:
        named = [("qlmv", "QLMV", "no measure"), ("qlav", "QLAV", "one measure, two above it")]
    return tuple(_limit(refrigerant, room, family, table, *name) for name in named)


def computed_limits(refrigerant: Refrigerant, rcl: float | None = None) -> dict[str, float] | None:
    """Return RCL, QLMV and QLAV of a refrigerant that the table has no row for; None if its own figures do not do.

    Args:
        refrigerant: The refrigerant, of class A1 or A2L.
        rcl: Its concentration limit; None for that of the catalogue, in class 2L a fifth of the LFL if that is less.
            [kg/m3]
    Returns: By the names of the table. [kg/m3]
    Source: Real Decreto 552/2019, IF-04, appendix 4, 2.1: QLAV is the least of the ODL and, in class 2L, half the LFL;
        QLMV stands in table B by RCL and molar mass of 50 to 125 g/mol; where that is more or undefined, it is QLAV.
    """
    rcl = _rcl(refrigerant) if rcl is None else rcl
    molar, lfl = refrigerant.molar_mass_kg_per_mol.number, refrigerant.lfl_kg_per_m3.number
    parsed = class_of(refrigerant)
    if rcl is None or molar is None or parsed is None or (parsed.flammability != "1" and lfl is None):
        return None
    qlav = ppm_to_kg_per_m3(AIR_WITHOUT_ODL_PPM, molar)
    if parsed.flammability != "1" and lfl is not None:
        qlav = min(qlav, SHARE_OF_LFL * lfl)
    table = quantity_limits()["qlmv"]
    masses, rows = table["molar_masses"], table["rows"]
    if not masses[0] <= 1e3 * molar <= masses[-1] or rcl < rows[0][0]:
        return None
    by_rcl = [float(np.interp(1e3 * molar, masses, row[1:])) for row in rows]
    qlmv = float(np.interp(rcl, [row[0] for row in rows], by_rcl)) if rcl <= rows[-1][0] else qlav
    return {"rcl": rcl, "qlmv": min(qlmv, qlav), "qlav": qlav}


def _rcl(refrigerant: Refrigerant) -> float | None:
    """Return the concentration limit as EN 378 has it: a fifth of the LFL where that is less; None if in dispute."""
    value, lfl, parsed = refrigerant.rcl_kg_per_m3, refrigerant.lfl_kg_per_m3.number, class_of(refrigerant)
    if parsed is not None and parsed.flammability == "2L" and lfl is not None:
        return min(FIFTH_OF_LFL * lfl, FIFTH_OF_LFL * lfl if value.number is None else value.number)
    return None if value.status == "unresolved" else value.number


def _limit(
    refrigerant: Refrigerant, room: Room, family: str, table: dict[str, float] | None, key: str, short: str, what: str
) -> WorkedLimit:
    work = Work(flags=[*class_flags(refrigerant), _CONDITIONS])
    work.need(room.volume_m3, "`volume` in [room]")
    work.need(room.area_m2, "`area` in [room]")
    work.need(room.location_class, "`location` in [room]")
    work.need(room.below_ground, "`below_ground` in [room]")
    if key != "rcl":
        work.need(room.ventilation, "`ventilation` in [room]")
        if room.ventilation == "none":
            work.missing.append(f"ventilation of the room: {short} counts on some, and the case says there is none")
    if table is None:
        work.missing.append(
            f"{short} of {refrigerant.designation}: the table has no row, and its own figures give none"
        )
    elif refrigerant.designation not in quantity_limits()["kg_per_m3"]:
        work.flags += [
            f"{short} of {refrigerant.designation} is computed from its RCL, LFL and molar mass: the table has no row",
            *value_flags("RCL", refrigerant.rcl_kg_per_m3, refrigerant),
        ]
    cap = _cap_kg(work, refrigerant)
    limit, decided_by = None, "volume"
    if table is not None and room.volume_m3 is not None and room.area_m2 is not None and cap is not None:
        counted = room.volume_m3 * min(1.0, LARGEST_AREA_M2 / room.area_m2)
        if counted < room.volume_m3:
            work.lines.append(
                f"of {room.area_m2:.4g} m² count {LARGEST_AREA_M2:g} m²: {room_volume(counted)} of "
                f"{room_volume(room.volume_m3)}"
            )
        limit = table[key] * counted
        work.lines.append(f"{short} · V = {concentration(table[key])} · {room_volume(counted)} = {mass(limit)}")
        if cap < limit:
            work.lines.append(f"at most {mass(cap)}")
            limit, decided_by = cap, "cap of the alternative"
    return work.limit(_rule(family, key, short, what), limit, decided_by, "class A1 or A2L, location class II")


def _cap_kg(work: Work, refrigerant: Refrigerant) -> float | None:
    """Return the largest charge of the alternative: 150 kg, and 1.5 m3 in class 2L."""
    parsed = class_of(refrigerant)
    if parsed is None or parsed.flammability == "1":
        return LARGEST_CHARGE_KG
    lfl = work.number("LFL", refrigerant.lfl_kg_per_m3, refrigerant)
    return None if lfl is None else min(LARGEST_CHARGE_KG, caps(lfl, parsed.flammability).m3_kg)


def _rule(family: str, key: str, short: str, what: str) -> Rule:
    formula = f"m = {short} · V, at most 150 kg (A2L: and 1.5 · 130 m³ · LFL)"
    symbols = ("m: charge [kg]", f"{short}: quantity limit [kg/m³]", "V: volume of the room, of 250 m² at most [m³]")
    basis = "read" if family == "EN 378" else "memory"
    title = f"Alternative provisions, {what}"
    source = quantity_limits()["source"]
    return Rule(f"quantity-{key}", title, family, EDITIONS[family], formula, symbols, source, basis, "alternative")
