"""The charge by EN 378-1 annex C and ISO 5149-1: toxicity, flammability, comfort, and small packages.

Read in Real Decreto 552/2019 (Spain), Instruction IF-04, appendices 1 to 3, which follows EN 378-1. Where the case
leaves open which row of a table holds, the least of them is the limit, and what lies above it is not known.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from retrofit.case import Room
from retrofit.checks.room import tables
from retrofit.checks.room.lfl import FACTOR_2L, Caps, area_rule_kg, caps, height_factor_m, is_heavy_enough
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
from retrofit.units import listed

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
SEALED_M3 = 20.0
_FACTORS = "m1, m2, m3: 4, 26 and 130 m³ · LFL, and 1.5 times that in class 2L [kg]"
# Title, formula and symbols of the rule by flammability, by whether the plant is for comfort.
_FLAMMABILITY = {
    False: (
        "A fifth of the LFL by volume",
        "m = 0.2 · LFL · V, at most the cap of the row",
        ("m: charge [kg]", "LFL: lower flammability limit [kg/m³]", "V: volume of the room [m³]", _FACTORS),
    ),
    True: (
        "Area rule of comfort use",
        "m = 2.5 · LFL^(5/4) · h0 · A^(1/2), at least m1 and at most the cap of the row",
        (
            "m: charge [kg]",
            "LFL: lower flammability limit [kg/m³]",
            "h0: 0.6 floor, 1.0 window, 1.8 wall, 2.2 ceiling [m]",
            "A: floor area [m²]",
            _FACTORS,
        ),
    ),
}


@dataclass(frozen=True)
class Outcome:
    """What one row of a table gives: the charge, None for no limit, and what sets it. [kg]"""

    limit_kg: float | None
    decided_by: str


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
        found.append(flammability_limit(refrigerant, room, family))
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
    return work


def toxicity_limit(refrigerant: Refrigerant, room: Room, family: str = "EN 378") -> WorkedLimit:
    """Return the limit by toxicity: the largest of the table, of 20 m3 for a sealed system, and of 150 g for class A.

    Args:
        refrigerant: The refrigerant.
        room: The room.
        family: "EN 378" or "ISO 5149".
    Source: Real Decreto 552/2019, IF-04, appendix 1, table A, and appendix 2, point c.
    """
    symbols = (
        "m: charge [kg]",
        "C: toxicity limit, the larger of ATEL/ODL and practical limit [kg/m³]",
        "V: volume of the room; 20 m³ for a sealed system if that is more [m³]",
    )
    formula = "m = C · V, or the mass of the table; sealed: at least C · 20 m³, and 0.15 kg in class A"
    rule = _rule(family, "toxicity", "Toxicity limit by volume", formula, symbols)
    work, parsed = _begun(refrigerant, room, family), class_of(refrigerant)
    found = tables.cells("toxicity", parsed.toxicity, room) if parsed else ()
    if room.location_class == "IV":
        work.missing.append("where the ventilated enclosure stands: by toxicity the row of that place holds")
    limited = any(cell.by != "none" for cell in found)
    larger = _larger_limit(work, refrigerant) if limited or not found else None
    if any(cell.by == "volume" for cell in found) or not found:
        work.need(room.volume_m3, "`volume` in [room]")
    outcomes = [_by_toxicity(work, cell, larger, room) for cell in found]
    always = [] if larger is None else [(SEALED_M3 * larger, f"toxicity limit by {SEALED_M3:g} m³")]
    if parsed is not None and parsed.toxicity == "A":
        always.append((SEALED_ALWAYS_KG, "0.15 kg of class A"))
    keys = tables.open_keys("toxicity", parsed.toxicity, room) if parsed else ()
    return _settled(work, rule, room, outcomes, max(always, default=(0.0, "")), keys, "every class")


def _by_toxicity(work: Work, cell: tables.Cell, larger: float | None, room: Room) -> Outcome | None:
    if cell.by == "none":
        return Outcome(None, "")
    if cell.by == "mass":
        return Outcome(float(cell.cap or 0.0), f"{cell.cap:g} kg of the table")
    if larger is None or room.volume_m3 is None:
        return None
    limit = larger * room.volume_m3
    work.lines.append(f"m = {concentration(larger)} · {room_volume(room.volume_m3)} = {mass(limit)}")
    return Outcome(limit, "volume")


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


def _settled(
    work: Work,
    rule: Rule,
    room: Room,
    outcomes: Sequence[Outcome | None],
    always: tuple[float, str],
    keys: tuple[str, ...],
    applies_because: str,
) -> WorkedLimit:
    """Return the limit of the rows that may hold: the least of them, left open up to the most.

    Args:
        work: The working so far.
        rule: The rule.
        room: The room.
        outcomes: What each row gives, None where an input for it is missing.
        always: What a factory-sealed system may hold anywhere, and what that is called. [kg]
        keys: Keys of [room] left out that choose among the rows.
        applies_because: Why the rule is taken.
    """
    known = [item for item in outcomes if item is not None]
    if len(known) < len(outcomes) or not known:
        return work.limit(rule, None, "", applies_because)
    masses = [(item.limit_kg, item.decided_by) for item in known if item.limit_kg is not None]
    if not masses:
        why = f"no limit of charge at location class {room.location_class} for this class, access and use"
        return work.no_limit(rule, why, tables.conditions(room.location_class), applies_because)
    (least, decided_by), most = min(masses), max(masses)[0]
    if room.sealed and always[0] > least:
        work.lines.append(f"a factory-sealed system may hold {always[1]} = {mass(always[0])} anywhere")
        least, decided_by = always
    reasons = []
    if keys and (most > least or len(masses) < len(known)):
        reasons.append(
            f"{listed([f'`{key}`' for key in keys], 'and')} in [room] would say which row of the table holds"
        )
    if room.sealed is None and always[0] > least and "sealed" not in keys:
        reasons.append(
            f"`sealed` in [room] is not given, and a factory-sealed system may hold {mass_told(always[0])} anywhere"
        )
    most = most if room.sealed is False else max(most, always[0])
    up_to = None if len(masses) < len(known) or not reasons else most
    settling = (*keys, *(() if room.sealed is not None or "sealed" in keys else ("sealed",)))
    return work.limit(rule, least, decided_by, applies_because, "; ".join(reasons), up_to, settling)


def flammability_limit(refrigerant: Refrigerant, room: Room, family: str = "EN 378") -> WorkedLimit:
    """Return the limit by flammability: by volume, or in comfort use by floor area and mounting, with the cap of a row.

    Args:
        refrigerant: The refrigerant, of a flammable class.
        room: The room.
        family: "EN 378" or "ISO 5149".
    Source: Real Decreto 552/2019, IF-04, appendix 1, table B; appendix 2, point e; appendix 3 for comfort:
        m = 2.5 LFL^(5/4) h0 A^(1/2) above m1 (2L: 1.5 m1), M > 42 g/mol.
    """
    work, parsed = _begun(refrigerant, room, family), class_of(refrigerant)
    if parsed is None or room.comfort is None:
        work.need(room.comfort, "`comfort` in [room]")
        rule = _rule(family, "flammability", "Flammability", "by `comfort`: 0.2 · LFL · V, or the area rule", ())
        return work.limit(rule, None, "", "a flammable class")
    rule = _rule(family, "flammability", *_FLAMMABILITY[room.comfort])
    found = tables.cells("flammability", parsed.flammability, room, comfort=room.comfort)
    keys = tables.open_keys("flammability", parsed.flammability, room, comfort=room.comfort)
    applies = f"a flammable class in {'comfort use' if room.comfort else 'another use than comfort'}"
    lfl, limits_ = None, None
    if not found or any(cell.by != "none" for cell in found):
        lfl = work.number("LFL", refrigerant.lfl_kg_per_m3, refrigerant)
        limits_ = None if lfl is None else _caps(work, lfl, parsed.flammability)
    if not found or {cell.by for cell in found} & {"volume", "area"}:
        _needed(work, refrigerant, room)
    outcomes = [
        _by_flammability(work, cell, lfl, limits_, room, parsed.flammability) for cell in _with_sealed_open(found, room)
    ]
    always = (0.0, "") if limits_ is None else max((limits_.m1_kg, "m1"), (SEALED_ALWAYS_KG, "0.15 kg"))
    if any(cell.sealed_only for cell in found):
        work.lines.append(f"class 3, general access: only a factory-sealed system ({_given_sealed(room)})")
        keys = keys if room.sealed is not None else (*keys, "sealed")
    return _settled(work, rule, room, outcomes, always, keys, applies)


def _with_sealed_open(found: Sequence[tables.Cell], room: Room) -> Iterator[tables.Cell]:
    """Yield the rows; one for sealed systems only counts with and without, if the case does not say which this is."""
    for cell in found:
        yield cell
        if cell.sealed_only and room.sealed is None:
            yield replace(cell, sealed_only=False)


def _given_sealed(room: Room) -> str:
    return "not stated" if room.sealed is None else "it is" if room.sealed else "this is joined on site"


def _needed(work: Work, refrigerant: Refrigerant, room: Room) -> None:
    """Note what the rule of this use needs and the case does not give."""
    if not room.comfort:
        work.need(room.volume_m3, "`volume` in [room]")
        return
    work.need(room.area_m2, "`area` in [room]")
    work.need(height_factor_m(room), "`mounting` or `mounting_height` in [room]")
    molar = refrigerant.molar_mass_kg_per_mol.number
    if not is_heavy_enough(refrigerant):
        shown = "not stated" if molar is None else f"{molar * 1e3:.4g} g/mol"
        work.missing.append(f"a rule for {refrigerant.designation}: the area rule is for M > 42 g/mol, this is {shown}")


def _caps(work: Work, lfl: float, flammability: str) -> Caps:
    found = caps(lfl, flammability)
    factor = f"{FACTOR_2L:g} · " if flammability == "2L" else ""
    work.lines.append(
        f"m1 = {factor}4 m³ · {concentration(lfl)} = {mass(found.m1_kg)}; m2 = {mass(found.m2_kg)}; "
        f"m3 = {mass(found.m3_kg)}"
    )
    return found


def _by_flammability(
    work: Work, cell: tables.Cell, lfl: float | None, limits_: Caps | None, room: Room, flammability: str
) -> Outcome | None:
    if cell.by == "none":
        return Outcome(None, "")
    if lfl is None or limits_ is None:
        return None
    if cell.sealed_only and not room.sealed:
        return Outcome(0.0, "row for factory-sealed systems only")
    cap, cap_words = _cap(cell, limits_, flammability)
    if cell.by == "mass":
        work.lines.append(f"m = {mass(cap)}, the {cap_words}")
        return Outcome(cap, cap_words)
    limit, decided_by = _by_rule(work, lfl, limits_, room)
    if limit is None:
        return None
    if cap < limit:
        limit, decided_by = cap, cap_words
    work.lines.append(f"m = {mass(limit)}, decided by the {decided_by}")
    return Outcome(limit, decided_by)


def _cap(cell: tables.Cell, limits_: Caps, flammability: str) -> tuple[float, str]:
    """Return the cap of a row and what it is called. [kg]"""
    factor = f"{FACTOR_2L:g} · " if flammability == "2L" else ""
    of_class = f"of class {flammability}"
    named = {
        "m2": (limits_.m2_kg, f"cap {factor}m2 {of_class}"),
        "m3": (limits_.m3_kg, f"cap {factor}m3 {of_class}"),
        "m2 or 1.5 kg": max((limits_.m2_kg, f"cap m2 {of_class}"), (1.5, f"cap 1.5 kg {of_class}")),
    }
    if isinstance(cell.cap, str):
        return named[cell.cap]
    return float(cell.cap or 0.0), f"cap {cell.cap:g} kg {of_class}"


def _by_rule(work: Work, lfl: float, limits_: Caps, room: Room) -> tuple[float | None, str]:
    """Return what volume or floor area allows before any cap. [kg]"""
    if not room.comfort:
        if room.volume_m3 is None:
            return None, ""
        limit = SHARE_OF_LFL * lfl * room.volume_m3
        work.lines.append(f"0.2 · {concentration(lfl)} · {room_volume(room.volume_m3)} = {mass(limit)}")
        return limit, "volume"
    height = height_factor_m(room)
    if height is None or room.area_m2 is None:
        return None, ""
    limit = area_rule_kg(lfl, height, room.area_m2)
    work.lines.append(
        f"2.5 · ({concentration(lfl)})^(5/4) · {height:g} m · ({room.area_m2:.4g} m²)^(1/2) = {mass(limit)}"
    )
    return (limits_.m1_kg, "m1, whatever the area") if limit < limits_.m1_kg else (limit, "area")


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
