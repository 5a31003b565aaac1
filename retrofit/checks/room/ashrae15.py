"""The charge by ASHRAE 15: refrigerant concentration limit by volume, and the dispersal volume of A2L in comfort use.

Every figure of the standard here is from memory or from an extract; the standard itself decides.
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from retrofit.case import Room
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
from retrofit.refrigerants import Refrigerant, SafetyClass
from retrofit.study.room import WorkedLimit

FAMILY = "ASHRAE 15"
OCCUPANCY_FACTORS = {"institutional": 0.5, "other": 1.0}
CONCENTRATION_FACTOR = 0.5  # CF of the dispersal volume, from memory
RESTRICTED = "the standard restricts use beyond the charge, by rules not held here (from memory, high confidence)"
QUARTER = 0.25  # an RCL by flammability is a quarter of the LFL (ASHRAE 34)
LEFT_OUT = {"R717": "ASHRAE 15 (2022) leaves ammonia to IIAR 2, whose limits are not held here"}
REFRIGERATED_OPEN = (
    "`refrigerated` in [room] is not given, and a room only for process or storage under refrigeration has conditions "
    "instead of the concentration limit"
)

RCL = Rule(
    "rcl",
    "Refrigerant concentration limit by volume",
    FAMILY,
    "ASHRAE 15-2022, limits of ASHRAE 34",
    "m = RCL · V · F",
    (
        "m: charge that can leak into the room [kg]",
        "RCL: refrigerant concentration limit [kg/m³]",
        "V: effective dispersal volume [m³]",
        "F: occupancy factor, 0.5 institutional, 1 other [-]",
    ),
    "ASHRAE 15: charge of the largest circuit over the smallest occupied volume against the RCL, read in an extract "
    "(interpretation 4 of the 2013 edition); factor and form of 2022 from memory",
    "memory",
)
RCL_FOR = "every class: the rule for a room that a leak can reach"
DISPERSAL = Rule(
    "dispersal",
    "Effective dispersal volume charge of A2L in comfort use, with air circulation",
    FAMILY,
    "ASHRAE 15-2022",
    "m = V · LFL · CF · F",
    (
        "m: charge [kg]",
        "V: effective dispersal volume [m³]",
        "LFL: lower flammability limit [kg/m³]",
        "CF: concentration factor, 0.5 [-]",
        "F: occupancy factor, 0.5 institutional, 1 other [-]",
    ),
    "ASHRAE 15-2022, from memory (medium confidence)",
    "memory",
    "alternative",
)


def limits(refrigerant: Refrigerant, room: Room) -> tuple[WorkedLimit, ...]:
    """Return the limits of this family for a refrigerant in a room.

    Args:
        refrigerant: The refrigerant.
        room: The room; what it does not state makes a limit unknown.
    Returns: The concentration limit, two of them if its RCL is unresolved, and for an A2L in comfort use the
        dispersal volume charge beside it. Where the concentration does not limit, the conditions instead.
    """
    instead = _instead(room)
    if instead is not None:
        return (_no_limit(refrigerant, room, instead),)
    kept = rcl_limit(refrigerant, room)
    found = [kept]
    if refrigerant.rcl_kg_per_m3.status == "unresolved":
        found = [replace(kept, title=f"{kept.title}, figure kept"), _quarter_lfl(refrigerant, room)]
    if refrigerant.safety_class.text == "A2L" and room.comfort is not False:
        found.append(dispersal_limit(refrigerant, room))
    return tuple(found)


def _instead(room: Room) -> dict[str, Any] | None:
    """Return what holds instead of a concentration limit, None where it holds."""
    table = read("without_limit")
    if room.location_class == "III":
        return dict(table["machinery"])
    return dict(table["refrigerated"]) if room.refrigerated and not room.comfort else None


def _no_limit(refrigerant: Refrigerant, room: Room, instead: dict[str, Any]) -> WorkedLimit:
    """Return that the concentration limits nothing here, with the charges a flammable one would reach the LFL at."""
    work = Work()
    _everything_else(work, refrigerant, room, by_volume=False)
    lfl = refrigerant.lfl_kg_per_m3
    parsed = class_of(refrigerant)
    if parsed is not None and parsed.flammability != "1" and lfl.number is not None and room.volume_m3 is not None:
        work.flags += value_flags("LFL", lfl, refrigerant)
        for share, name in ((1.0, "LFL"), (QUARTER, "a quarter of the LFL")):
            work.lines.append(
                f"{name} in the room: {concentration(share * lfl.number)} · {room_volume(room.volume_m3)} "
                f"= {mass(share * lfl.number * room.volume_m3)}"
            )
    rule = replace(RCL, source=instead["source"])
    return work.no_limit(rule, instead["because"], tuple(instead["conditions"]), RCL_FOR)


def rcl_limit(refrigerant: Refrigerant, room: Room, rcl: float | None = None, origin: str = "") -> WorkedLimit:
    """Return the concentration limit by volume.

    Args:
        refrigerant: The refrigerant.
        room: The room.
        rcl: Another limit than that of the catalogue. [kg/m3]
        origin: Where that comes from.
    Source: ASHRAE 15, m = RCL V F.
    """
    work = Work()
    found = work.number("RCL", refrigerant.rcl_kg_per_m3, refrigerant) if rcl is None else rcl
    _everything_else(work, refrigerant, room)
    factor = OCCUPANCY_FACTORS.get(room.occupancy or "")
    limit = None
    if found is not None and room.volume_m3 is not None and factor is not None:
        limit = found * room.volume_m3 * factor
        work.lines += [
            f"RCL = {concentration(found)} ({origin or refrigerant.rcl_kg_per_m3.source})",
            f"m = {concentration(found)} · {room_volume(room.volume_m3)} · {factor:g} = {mass(limit)}",
        ]
    is_open = room.refrigerated is None and not room.comfort
    why = REFRIGERATED_OPEN if is_open else ""
    return work.limit(RCL, limit, "volume", RCL_FOR, why, open_keys=("refrigerated",))


def _quarter_lfl(refrigerant: Refrigerant, room: Room) -> WorkedLimit:
    """Return the other candidate of an unresolved RCL: what its LFL gives."""
    lfl = refrigerant.lfl_kg_per_m3
    other = None if lfl.number is None else QUARTER * lfl.number
    found = rcl_limit(refrigerant, room, other, f"a quarter of the LFL {lfl.number} kg/m³ of {lfl.source}")
    flags = (*value_flags("RCL", refrigerant.rcl_kg_per_m3, refrigerant), *found.flags)
    return replace(found, title=f"{found.title}, other figure", flags=tuple(dict.fromkeys(flags)))


def dispersal_limit(refrigerant: Refrigerant, room: Room) -> WorkedLimit:
    """Return the dispersal volume charge of an A2L refrigerant in comfort use.

    Args:
        refrigerant: The refrigerant.
        room: The room.
    Source: ASHRAE 15-2022, m = V LFL CF F, from memory.
    """
    work = Work()
    lfl = work.number("LFL", refrigerant.lfl_kg_per_m3, refrigerant)
    _everything_else(work, refrigerant, room)
    work.need(room.comfort, "`comfort` in [room]")
    factor = OCCUPANCY_FACTORS.get(room.occupancy or "")
    limit = None
    if lfl is not None and room.volume_m3 is not None and factor is not None:
        limit = room.volume_m3 * lfl * CONCENTRATION_FACTOR * factor
        work.lines.append(
            f"m = {room_volume(room.volume_m3)} · {concentration(lfl)} · {CONCENTRATION_FACTOR:g} · {factor:g} "
            f"= {mass(limit)}"
        )
    return work.limit(
        DISPERSAL, limit, "volume", "A2L in comfort use, if the unit moves the air of the room all the time"
    )


def _everything_else(work: Work, refrigerant: Refrigerant, room: Room, *, by_volume: bool = True) -> None:
    """Note what else this family needs to know, and where it does not apply."""
    work.flags += [*class_flags(refrigerant), "the rule is from memory or an extract: look up the edition in force"]
    parsed = class_of(refrigerant)
    if parsed is None:
        work.missing.append(f"safety class of {refrigerant.designation}: the catalogue states none")
    if by_volume:
        work.need(room.volume_m3, "`volume` in [room]")
        work.need(room.occupancy, "`occupancy` in [room]")
    if refrigerant.designation in LEFT_OUT:
        work.missing.append(LEFT_OUT[refrigerant.designation])
    if parsed is not None:
        _restricted(work, parsed, room)


def _restricted(work: Work, parsed: SafetyClass, room: Room) -> None:
    """Note where a charge alone does not decide: below the concentration limit is then not enough."""
    name = "".join(parsed)
    if parsed.flammability in ("2", "3"):
        work.missing.append(f"the authority's approval: for class {name} {RESTRICTED}")
    elif parsed.toxicity == "B":
        work.need(room.comfort, "`comfort` in [room]")
        if room.comfort:
            work.missing.append(f"whether the system may be used for comfort: for class {name} {RESTRICTED}")
    elif parsed.flammability == "2L":
        work.flags.append("class A2L: the standard asks for listing, detection and more beside the charge")
