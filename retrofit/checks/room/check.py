"""The charge of one refrigerant against the room: every limit, which decides, and what follows.

A verdict says "below the limit", "above the limit", "under conditions" where no charge is set, or "unknown", and no
more: whether a plant may stand in a room is decided by the standard, the authority and licensed practice.
"""

from __future__ import annotations

from collections.abc import Sequence

from retrofit.case import Case, Room
from retrofit.checks.room import ashrae15, en378, product, quantity
from retrofit.checks.room.change import class_change
from retrofit.checks.room.lfl import height_factor_m, is_heavy_enough, least_area_m2
from retrofit.checks.room.lists import class_lists, questions
from retrofit.checks.room.machinery import machinery_questions
from retrofit.checks.room.places import code_of
from retrofit.checks.room.working import mass, mass_told
from retrofit.refrigerants import Refrigerant
from retrofit.study import Comparison, Entry
from retrofit.study.charge import CircuitCharge, circuit_charge
from retrofit.study.room import (
    ABOVE,
    BELOW,
    CONDITIONS,
    UNKNOWN,
    ClassChange,
    Question,
    RoomCheck,
    WorkedLimit,
    unlimited_families,
)

# What `code` of [law] stands for; not stated, the rules usual in the jurisdiction are taken. With neither, the families
# of "both" are shown and have to agree.
FAMILIES = {
    "ASHRAE 15": ("ASHRAE 15",),
    "EN 378": ("EN 378",),
    "ISO 5149": ("ISO 5149",),
    "both": ("ASHRAE 15", "EN 378"),
    "": ("ASHRAE 15", "EN 378"),
}
NO_CODE = "`code` in [law]"
NO_ROOM = "[room]: the case describes no room"


def limits_of(
    refrigerant: Refrigerant, room: Room, families: Sequence[str], jurisdiction: str | None = None
) -> tuple[WorkedLimit, ...]:
    """Return every limit of the code families, and of the product standards.

    Args:
        refrigerant: The refrigerant.
        room: The room.
        families: The code families.
        jurisdiction: Whose product standards; None for those of every place held here.
    """
    found: list[WorkedLimit] = []
    for family in families:
        if family == ashrae15.FAMILY:
            found += ashrae15.limits(refrigerant, room)
        else:
            found += en378.limits(refrigerant, room, family)
            found += quantity.alternative(refrigerant, room, family)
    return (*found, *product.limits(refrigerant, room, jurisdiction))


def against_limit(limit: WorkedLimit, charge: CircuitCharge) -> tuple[str, tuple[str, ...]]:
    """Return how a charge stands against one limit, and what is missing where that is unknown.

    Args:
        limit: The limit.
        charge: The charge.
    Returns: "below the limit", "above the limit", "under conditions" or "unknown", and why.
    """
    if limit.unlimited_because:
        return CONDITIONS, ()
    if limit.limit_kg is None:
        return UNKNOWN, limit.unknown_because
    lowest, highest = charge.lowest_kg, charge.highest_kg
    if lowest is None or highest is None:
        return UNKNOWN, (charge.reason,)
    if highest <= limit.limit_kg:
        return BELOW, ()
    if lowest <= limit.limit_kg:
        here, *ends = map(mass_told, (limit.limit_kg, lowest, highest))
        within = f"a charge that is known better: {here} lies within {' to '.join(ends)}"
        return UNKNOWN, (within,)
    if limit.open_because and (limit.open_up_to_kg is None or lowest <= limit.open_up_to_kg):
        return UNKNOWN, (limit.open_because,)
    if charge.of != "largest circuit":
        return UNKNOWN, (
            "`largest_circuit` in [room]: the whole charge is above the limit, one circuit may be below it",
        )
    return ABOVE, ()


def _family_verdict(limits: Sequence[WorkedLimit], charge: CircuitCharge) -> tuple[str, tuple[str, ...]]:
    """Return how a charge stands against one code family: above one limit is above, an unknown one is unknown."""
    words, missing = [], []
    for method in dict.fromkeys(limit.method for limit in limits):
        candidates = [against_limit(limit, charge) for limit in limits if limit.method == method]
        found = {word for word, _ in candidates}
        words.append(found.pop() if len(found) == 1 else UNKNOWN)
        if words[-1] == UNKNOWN:
            missing += [reason for _, reasons in candidates for reason in reasons] or [
                "which of the two figures of this limit holds: its sources contradict each other"
            ]
    if ABOVE in words:
        return ABOVE, ()
    if UNKNOWN in words or not words:
        return UNKNOWN, tuple(dict.fromkeys(missing))
    return (BELOW if BELOW in words else CONDITIONS), ()


def room_verdict(
    limits: Sequence[WorkedLimit], families: Sequence[str], charge: CircuitCharge, *, is_code_stated: bool
) -> tuple[str, tuple[str, ...]]:
    """Return how a charge stands against the code families together, and what is missing where that is unknown.

    Args:
        limits: Every limit; those that are shown only are passed over.
        families: The code families.
        charge: The charge.
        is_code_stated: Whether the case chooses its code: then each family counts, else they have to agree.
    """
    found = [
        _family_verdict([limit for limit in limits if limit.role == "limit" and limit.code_family == family], charge)
        for family in families
    ]
    words = {word for word, _ in found}
    missing = tuple(dict.fromkeys(reason for _, reasons in found for reason in reasons))
    if is_code_stated and ABOVE in words:
        return ABOVE, ()
    if len(words) == 1 and UNKNOWN not in words:
        return words.pop(), ()
    if words == {BELOW, CONDITIONS}:
        return BELOW, ()
    return UNKNOWN, missing if is_code_stated else (NO_CODE, *missing)


def _deciding(limits: Sequence[WorkedLimit], charge: CircuitCharge, word: str) -> WorkedLimit | None:
    """Return the smallest limit that counts; of a charge above one, the smallest that it is above."""
    known = [limit for limit in limits if limit.role == "limit" and limit.limit_kg is not None]
    if word == ABOVE:
        known = [limit for limit in known if against_limit(limit, charge)[0] == ABOVE]
    return min(known, key=lambda limit: limit.limit_kg or 0.0, default=None)


def room_check(comparison: Comparison, entry: Entry) -> RoomCheck:
    """Return the charge of a refrigerant against the room, with the questions that follow.

    Args:
        comparison: A result.
        entry: One of its refrigerants.
    """
    case, refrigerant = comparison.case, entry.refrigerant
    jurisdiction = case.law.jurisdiction if case.law else None
    code = (case.law.code if case.law else None) or code_of(jurisdiction)
    families, charge = FAMILIES[code], circuit_charge(case, entry, comparison.existing)
    limits = limits_of(refrigerant, case.room, families, jurisdiction) if case.room else ()
    word, missing = (
        room_verdict(limits, families, charge, is_code_stated=bool(code)) if case.room else (UNKNOWN, (NO_ROOM,))
    )
    highest, deciding = charge.highest_kg, _deciding(limits, charge, word)
    limit_kg = deciding.limit_kg if deciding else None
    return RoomCheck(
        code=code,
        lowest_kg=charge.lowest_kg,
        expected_kg=charge.expected_kg,
        highest_kg=charge.highest_kg,
        charge_of=charge.of,
        limits=limits,
        deciding=deciding,
        margin_kg=None if limit_kg is None or highest is None else limit_kg - highest,
        verdict=word,
        unknown_because=missing,
        questions=_asked(refrigerant, case.room, families, highest, jurisdiction),
        conditions=_conditions(limits, word),
        machinery_room=_machinery(case, entry, highest, families, word),
        lists=class_lists(refrigerant.safety_class.text),
        change=_change(comparison, entry),
    )


def _conditions(limits: Sequence[WorkedLimit], word: str) -> tuple[str, ...]:
    """Return what holds instead, of the families that set no limit; while that is not decided, nothing does."""
    families = unlimited_families(limits)
    found = [text for limit in limits if limit.code_family in families for text in limit.conditions]
    return tuple(dict.fromkeys(found)) if word in (BELOW, CONDITIONS) else ()


def _change(comparison: Comparison, entry: Entry) -> ClassChange | None:
    if entry.refrigerant.designation == comparison.existing.refrigerant.designation:
        return None
    law = comparison.case.law
    old, new = (item.refrigerant.safety_class.text for item in (comparison.existing, entry))
    return class_change(old, new, law.jurisdiction if law else None)


def _asked(
    refrigerant: Refrigerant,
    room: Room | None,
    families: tuple[str, ...],
    highest_kg: float | None,
    jurisdiction: str | None,
) -> tuple[Question, ...]:
    found = questions(refrigerant, families, jurisdiction)
    area = _area_needed(refrigerant, room, highest_kg)
    return found if area is None else (area, *found)


def _area_needed(refrigerant: Refrigerant, room: Room | None, highest_kg: float | None) -> Question | None:
    """Return the floor area that a flammable charge asks for in comfort use, None where the rule is not for it."""
    lfl, height = refrigerant.lfl_kg_per_m3.number, height_factor_m(room) if room else None
    if room is None or not room.comfort or not is_heavy_enough(refrigerant):
        return None
    if lfl is None or height is None or highest_kg is None:
        return None
    area = least_area_m2(lfl, height, highest_kg)
    line = f"A = ({mass(highest_kg)} / (2.5 · {lfl:.4g}^(5/4) · {height:g} m))² = {area:.4g} m²"
    text = "Is the floor area at least what the area rule asks for at this charge (above m1)?"
    source = "Real Decreto 552/2019 (Spain), IF-04, read, with the square on the whole quotient"
    return Question("floor area", text, (line,), "area", area, (), source, "read")


def _machinery(
    case: Case, entry: Entry, highest_kg: float | None, families: tuple[str, ...], word: str
) -> tuple[Question, ...]:
    """Return what is asked of a machinery room, where there is one or there may have to be one."""
    stands_there = case.room is not None and case.room.location_class == "III"
    is_toxic = entry.refrigerant.safety_class.text[:1] not in ("A",)
    if case.machinery_room is None and not stands_there and not is_toxic and word != ABOVE:
        return ()
    numbers = entry.hardware_numbers
    pressure = numbers.new.p_standstill_Pa if numbers else None
    return machinery_questions(entry.refrigerant, case.machinery_room, highest_kg, pressure, families)
