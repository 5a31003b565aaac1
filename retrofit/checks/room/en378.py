"""The charge by EN 378-1 annex C and ISO 5149-1: toxicity, flammability, comfort, and small packages.

Read in Real Decreto 552/2019 (Spain), Instruction IF-04, appendices 1 to 3, which mirrors EN 378-1. Exceptions
of the standard's tables that are not held here are named; they are never taken as met.
"""

from __future__ import annotations

from dataclasses import replace

from retrofit.case import Room
from retrofit.checks.room.lfl import FACTOR_2L, area_rule_kg, caps, height_factor_m, is_heavy_enough
from retrofit.checks.room.working import (
    Rule,
    Work,
    class_flags,
    class_of,
    concentration,
    mass,
    mass_told,
    room_volume,
)
from retrofit.refrigerants import Refrigerant
from retrofit.study.room import WorkedLimit

EDITIONS = {
    "EN 378": "EN 378-1:2016, annex C, as Real Decreto 552/2019, IF-04 prints it",
    "ISO 5149": "ISO 5149-1:2014, annex A, taken to be the same",
}
_SOURCE = "Real Decreto 552/2019 (Spain), Instruction IF-04, appendices 1 to 3, read"
SOURCES = {
    "EN 378": f"{_SOURCE}; that EN 378-1:2016 says the same is from memory (high confidence)",
    "ISO 5149": f"{_SOURCE}; that ISO 5149-1 says the same is from memory (medium confidence)",
}
SHARE_OF_LFL = 0.2
SEALED_ALWAYS_KG = 0.15
# Class 3, above ground, by access category; below ground whoever has access.
CLASS_3_KG = {"a": 1.5, "b": 2.5, "c": 10.0}
CLASS_3_BELOW_GROUND_KG = 1.0
ROOM_LOCATIONS = ("I", "II")
_FACTORS = "m1, m2, m3: 4, 26 and 130 m³ · LFL, and 1.5 times that in class 2L [kg]"


def limits(refrigerant: Refrigerant, room: Room, family: str = "EN 378") -> tuple[WorkedLimit, ...]:
    """Return the limits of this family; the smallest decides.

    Args:
        refrigerant: The refrigerant.
        room: The room; what it does not state makes a limit unknown.
        family: "EN 378" or "ISO 5149".
    Returns: By toxicity; for a flammable class by flammability too, and for a factory-sealed package its own
        limit beside them.
    """
    found = [toxicity_limit(refrigerant, room, family)]
    parsed = class_of(refrigerant)
    if parsed is not None and parsed.flammability != "1":
        found.append(_flammability(refrigerant, room, family))
        if room.sealed and room.comfort:
            found.append(package_limit(refrigerant, room, family))
    return tuple(found)


def _rule(family: str, method: str, title: str, formula: str, symbols: tuple[str, ...], role: str = "limit") -> Rule:
    basis = "read" if family == "EN 378" else "memory"
    return Rule(method, title, family, EDITIONS[family], formula, symbols, SOURCES[family], basis, role)


def _begun(refrigerant: Refrigerant, room: Room, family: str) -> Work:
    """Return a working with what every limit of this family needs."""
    work = Work(flags=class_flags(refrigerant))
    if family != "EN 378":
        work.flags.append("that ISO 5149-1 has the same rule is from memory: look up the edition in force")
    if class_of(refrigerant) is None:
        work.missing.append(f"safety class of {refrigerant.designation}: the catalogue states none")
    work.need(room.location_class, "`location` in [room]")
    if room.location_class not in (None, *ROOM_LOCATIONS):
        work.missing.append(
            f"the row of the standard's table for location class {room.location_class}, which is not held here: look "
            "it up"
        )
    return work


def toxicity_limit(refrigerant: Refrigerant, room: Room, family: str = "EN 378") -> WorkedLimit:
    """Return the limit by toxicity: the larger of ATEL/ODL and practical limit, by volume.

    Args:
        refrigerant: The refrigerant.
        room: The room.
        family: "EN 378" or "ISO 5149".
    Source: Real Decreto 552/2019, IF-04, appendix 1.
    """
    symbols = ("m: charge [kg]", "C: larger of ATEL/ODL and practical limit [kg/m³]", "V: volume of the room [m³]")
    rule = _rule(family, "toxicity", "Toxicity or practical limit by volume", "m = C · V", symbols)
    work = _begun(refrigerant, room, family)
    work.need(room.volume_m3, "`volume` in [room]")
    larger = _larger_limit(work, refrigerant)
    open_because = _exceptions(work, refrigerant, room)
    limit, decided_by = None, "volume"
    if larger is not None and room.volume_m3 is not None:
        limit = larger * room.volume_m3
        work.lines.append(f"m = {concentration(larger)} · {room_volume(room.volume_m3)} = {mass(limit)}")
        limit, decided_by = _sealed_at_least(work, room, limit, decided_by, _sealed_kg(refrigerant), "0.15 kg")
    found = work.limit(rule, limit, decided_by, "every class", open_because)
    return _open_if_sealed(found, room, _sealed_kg(refrigerant))


def _sealed_kg(refrigerant: Refrigerant) -> float:
    """Return what a factory-sealed system may hold anywhere whatever its toxicity: nothing is held for class B. [kg]"""
    parsed = class_of(refrigerant)
    return SEALED_ALWAYS_KG if parsed is not None and parsed.toxicity == "A" else 0.0


def _larger_limit(work: Work, refrigerant: Refrigerant) -> float | None:
    named = {
        "ATEL/ODL": refrigerant.atel_odl_kg_per_m3,
        "practical limit": refrigerant.practical_limit_kg_per_m3,
    }
    known = {name: value for name, value in named.items() if value.number is not None}
    if not known:
        work.missing.append(f"ATEL/ODL and practical limit of {refrigerant.designation}: the catalogue states none")
        return None
    numbers = {name: work.number(name, value, refrigerant) or 0.0 for name, value in known.items()}
    if len(known) == 1:
        work.flags.append(f"only the {next(iter(known))} of {refrigerant.designation} is known; the larger may be more")
    name = max(numbers, key=lambda key: numbers[key])
    work.lines.append(
        f"C = {concentration(numbers[name])} ({name}, {known[name].source}); "
        + ", ".join(f"{key} {concentration(value)}" for key, value in numbers.items())
    )
    return numbers[name]


def _exceptions(work: Work, refrigerant: Refrigerant, room: Room) -> str:
    """Return why the standard may allow more; note what class B needs beyond that."""
    parsed = class_of(refrigerant)
    if parsed is not None and parsed.toxicity == "B":
        work.need(room.access, "`access` in [room]")
        if room.access_category in ("b", "c"):
            work.missing.append(
                f"the rows of the standard's table for class B with access category {room.access_category}, which are "
                "not held here: look them up"
            )
        return ""
    if room.access_category == "a":
        return ""
    why = (
        "`access` in [room] is not given" if room.access is None else f"with access category {room.access_category}"
    ) + ", and the standard's table has exceptions for b and c that are not held here"
    work.flags.append(f"{why}: the limit is that without them")
    return why


def _sealed_at_least(
    work: Work, room: Room, limit: float, decided_by: str, least_kg: float, what: str
) -> tuple[float, str]:
    """Raise a limit to what a factory-sealed system may hold anywhere."""
    if room.sealed and least_kg > limit:
        work.lines.append(f"a factory-sealed system may hold {what} = {mass(least_kg)} anywhere")
        return least_kg, "sealed"
    return limit, decided_by


def _open_if_sealed(found: WorkedLimit, room: Room, least_kg: float) -> WorkedLimit:
    """Leave open whether a small charge is allowed, if it is not said whether the system is factory-sealed."""
    if found.limit_kg is None or room.sealed is not None or least_kg <= found.limit_kg or found.open_because:
        return found
    why = f"`sealed` in [room] is not given, and a factory-sealed system may hold {mass_told(least_kg)} anywhere"
    return replace(found, open_because=why, open_up_to_kg=least_kg)


def _flammability(refrigerant: Refrigerant, room: Room, family: str) -> WorkedLimit:
    if room.comfort is None:
        work = _begun(refrigerant, room, family)
        work.need(None, "`comfort` in [room]")
        rule = _rule(family, "flammability", "Flammability", "by `comfort`: 0.2 · LFL · V, or the area rule", ())
        return work.limit(rule, None, "", "a flammable class")
    return (comfort_limit if room.comfort else volume_limit)(refrigerant, room, family)


def volume_limit(refrigerant: Refrigerant, room: Room, family: str = "EN 378") -> WorkedLimit:
    """Return the limit by flammability in any use but comfort: a fifth of the LFL by volume, with a cap.

    Args:
        refrigerant: The refrigerant.
        room: The room.
        family: "EN 378" or "ISO 5149".
    Source: Real Decreto 552/2019, IF-04: 0.2 LFL V; cap 1.5 m2 (2L), m2 (2), in kg by place and access (3).
    """
    symbols = ("m: charge [kg]", "LFL: lower flammability limit [kg/m³]", "V: volume of the room [m³]", _FACTORS)
    rule = _rule(family, "flammability", "A fifth of the LFL by volume", "m = 0.2 · LFL · V, at most the cap", symbols)
    work = _begun(refrigerant, room, family)
    work.need(room.volume_m3, "`volume` in [room]")
    lfl = work.number("LFL", refrigerant.lfl_kg_per_m3, refrigerant)
    cap, cap_words, m1 = _cap(work, refrigerant, room, lfl)
    limit, decided_by = None, "volume"
    if lfl is not None and room.volume_m3 is not None and cap is not None:
        limit = SHARE_OF_LFL * lfl * room.volume_m3
        work.lines.append(f"0.2 · {concentration(lfl)} · {room_volume(room.volume_m3)} = {mass(limit)}")
        if cap < limit:
            limit, decided_by = cap, cap_words
        work.lines.append(f"m = {mass(limit)}, decided by the {decided_by}")
        limit, decided_by = _sealed_at_least(work, room, limit, decided_by, m1, "m1")
    found = work.limit(rule, limit, decided_by, "a flammable class in another use than comfort")
    return _open_if_sealed(found, room, m1)


def comfort_limit(refrigerant: Refrigerant, room: Room, family: str = "EN 378") -> WorkedLimit:
    """Return the limit by flammability in comfort use: by floor area and mounting, at least m1.

    Args:
        refrigerant: The refrigerant.
        room: The room.
        family: "EN 378" or "ISO 5149".
    Source: Real Decreto 552/2019, IF-04: m = 2.5 LFL^(5/4) h0 A^(1/2) above m1 (2L: 1.5 m1), M > 42 g/mol.
    """
    symbols = (
        "m: charge [kg]",
        "LFL: lower flammability limit [kg/m³]",
        "h0: 0.6 floor, 1.0 window, 1.8 wall, 2.2 ceiling [m]",
        "A: floor area [m²]",
        _FACTORS,
    )
    formula = "m = 2.5 · LFL^(5/4) · h0 · A^(1/2), at least m1 and at most the cap"
    rule = _rule(family, "flammability", "Area rule of comfort use", formula, symbols)
    work = _begun(refrigerant, room, family)
    work.flags.append("the cap of the area rule is from memory (medium confidence)")
    work.need(room.area_m2, "`area` in [room]")
    height = height_factor_m(room)
    work.need(height, "`mounting` or `mounting_height` in [room]")
    lfl = work.number("LFL", refrigerant.lfl_kg_per_m3, refrigerant)
    _heavy_enough(work, refrigerant)
    cap, cap_words, m1 = _cap(work, refrigerant, room, lfl, comfort=True)
    limit, decided_by = None, "area"
    if lfl is not None and room.area_m2 is not None and height is not None and cap is not None:
        limit = area_rule_kg(lfl, height, room.area_m2)
        work.lines.append(
            f"2.5 · ({concentration(lfl)})^(5/4) · {height:g} m · ({room.area_m2:.4g} m²)^(1/2) = {mass(limit)}"
        )
        if limit < m1:
            limit, decided_by = m1, "m1, whatever the area"
        if cap < limit:
            limit, decided_by = cap, cap_words
        work.lines.append(f"m = {mass(limit)}, decided by the {decided_by}")
    return work.limit(rule, limit, decided_by, "a flammable class in comfort use")


def _heavy_enough(work: Work, refrigerant: Refrigerant) -> None:
    """Note that the area rule is only for vapour heavy enough to gather low."""
    molar = refrigerant.molar_mass_kg_per_mol.number
    if not is_heavy_enough(refrigerant):
        shown = "not stated" if molar is None else f"{molar * 1e3:.4g} g/mol"
        work.missing.append(f"a rule for {refrigerant.designation}: the area rule is for M > 42 g/mol, this is {shown}")


def _cap(
    work: Work, refrigerant: Refrigerant, room: Room, lfl: float | None, *, comfort: bool = False
) -> tuple[float | None, str, float]:
    """Return the cap of a class, what it is called, and m1; the cap is None while it needs an input."""
    parsed = class_of(refrigerant)
    if lfl is None or parsed is None:
        return None, "", 0.0
    found = caps(lfl, parsed.flammability)
    factor = f"{FACTOR_2L:g} · " if parsed.flammability == "2L" else ""
    work.lines.append(
        f"m1 = {factor}4 m³ · {concentration(lfl)} = {mass(found.m1_kg)}; m2 = {mass(found.m2_kg)}; "
        f"m3 = {mass(found.m3_kg)}"
    )
    if parsed.flammability != "3":
        return found.m2_kg, f"cap {factor}m2 of class {parsed.flammability}", found.m1_kg
    in_kg, words = _class_3_cap(work, room)
    if in_kg is not None and comfort and found.m2_kg < in_kg:
        return found.m2_kg, "cap m2 of class 3", found.m1_kg
    return in_kg, words, found.m1_kg


def _class_3_cap(work: Work, room: Room) -> tuple[float | None, str]:
    if room.below_ground:
        return CLASS_3_BELOW_GROUND_KG, "cap of class 3 below ground"
    work.need(room.below_ground, "`below_ground` in [room]")
    work.need(room.access, "`access` in [room]")
    if room.below_ground is None or room.access_category is None:
        return None, ""
    return CLASS_3_KG[room.access_category], f"cap of class 3 with access category {room.access_category}"


def package_limit(refrigerant: Refrigerant, room: Room, family: str = "EN 378") -> WorkedLimit:
    """Return the limit of a non-fixed, factory-sealed single package.

    Args:
        refrigerant: The refrigerant.
        room: The room.
        family: "EN 378" or "ISO 5149".
    Source: Real Decreto 552/2019, IF-04: m = 0.25 A LFL 2.2 for 4 LFL < m <= 8 LFL.
    """
    symbols = (
        "m: charge, between 4 and 8 m³ · LFL [kg]",
        "A: floor area [m²]",
        "LFL: lower flammability limit [kg/m³]",
    )
    formula = "m = 0.25 · A · LFL · 2.2 m, for 4 m³ · LFL < m ≤ 8 m³ · LFL"
    rule = _rule(family, "package", "Non-fixed, factory-sealed single package", formula, symbols, "alternative")
    work = _begun(refrigerant, room, family)
    work.need(room.area_m2, "`area` in [room]")
    lfl = work.number("LFL", refrigerant.lfl_kg_per_m3, refrigerant)
    limit = None
    if lfl is not None and room.area_m2 is not None:
        by_area = 0.25 * room.area_m2 * lfl * 2.2
        limit = min(max(by_area, 4.0 * lfl), 8.0 * lfl)
        work.lines += [
            f"0.25 · {room.area_m2:.4g} m² · {concentration(lfl)} · 2.2 m = {mass(by_area)}",
            f"between {mass(4.0 * lfl)} and {mass(8.0 * lfl)}: m = {mass(limit)}",
        ]
    return work.limit(rule, limit, "area", "factory-sealed in comfort use, if it is a non-fixed single package")
