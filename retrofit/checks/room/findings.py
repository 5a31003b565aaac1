"""Findings of the room checks: the charge against its limit, and a change of class that is no stop."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.checks.room.working import mass_told
from retrofit.refrigerants import parse_safety_class
from retrofit.study import Comparison, Entry, Finding
from retrofit.study.charge import LARGEST_CIRCUIT
from retrofit.study.room import ABOVE, UNKNOWN, RoomCheck
from retrofit.units import quantity

DEFERS = "The standard in force, the authority and licensed practice decide."
NO_SOURCE = "catalogue and case, which state none"


def room_findings(comparison: Comparison, entry: Entry, room: RoomCheck) -> Iterator[Finding]:
    """Yield what the charge against the room and the change of class mean for a refrigerant.

    Args:
        comparison: A result.
        entry: One of its refrigerants.
        room: Its charge against the room.
    """
    is_existing = entry is comparison.existing
    if room.verdict == ABOVE:
        yield _above(room, is_existing)
    elif room.verdict == UNKNOWN:
        yield _unknown(comparison, entry, room)
    else:
        yield from _doubtful(room)
    if room.conditions:
        yield _under_conditions(comparison, entry, room)
    change = room.change
    if change is not None and change.level in ("work", "note"):
        yield Finding(
            "class-change",
            change.level,
            change.title,
            f"class {change.old} today, {change.new} with {entry.refrigerant.designation}.",
            f"{'; '.join(change.reasons)}. {' '.join(question.text for question in change.asked)} {DEFERS}",
            "; ".join(dict.fromkeys(question.source for question in change.asked)),
        )


def _hazards(entry: Entry) -> tuple[str, ...]:
    """Return what a leak does beyond suffocating, in words; a class that is not stated counts as both."""
    parsed = parse_safety_class(entry.refrigerant.safety_class.value)
    if parsed is None:
        return ("toxic and flammable until its class is stated",)
    holds = {"toxic": parsed.toxicity == "B", "flammable": parsed.flammability != "1"}
    return tuple(word for word, is_so in holds.items() if is_so)


def _charge(room: RoomCheck) -> str:
    if room.lowest_kg is None or room.highest_kg is None or room.expected_kg is None:
        return "charge not known"
    of = "" if room.charge_of == "largest circuit" else ", the whole plant"
    if room.lowest_kg == room.highest_kg:
        return f"{mass_told(room.expected_kg)}{of}"
    return f"{mass_told(room.expected_kg)} expected ({mass_told(room.lowest_kg)} to {mass_told(room.highest_kg)}){of}"


def _above(room: RoomCheck, is_existing: bool) -> Finding:
    """Return the finding of a charge above a limit; of the plant as it stands it is work to clear up."""
    limit = room.deciding
    assert limit is not None
    assert limit.limit_kg is not None
    return Finding(
        "room-charge",
        "work" if is_existing else "stop",
        "Charge above what a room of this kind may take",
        f"{_charge(room)}, against {mass_told(limit.limit_kg)} by {limit.title[0].lower()}{limit.title[1:]} "
        f"({limit.code_family}), set by the {limit.decided_by}.",
        "Ask what the plant was approved under. " + DEFERS
        if is_existing
        else f"Less charge in a circuit, a machinery room, or another refrigerant; ask for the measures. {DEFERS}",
        f"{limit.source}; {limit.edition}",
    )


def _under_conditions(comparison: Comparison, entry: Entry, room: RoomCheck) -> Finding:
    """Return the finding of a room without a limit of charge: what holds instead has to be shown, not assumed."""
    limits = [limit for limit in room.limits if limit.code_family in room.unlimited and limit.conditions]
    because = "; ".join(dict.fromkeys(f"{limit.code_family}: {limit.unlimited_because}" for limit in limits))
    return Finding(
        "room-conditions",
        "note" if entry is comparison.existing else "work",
        "No limit of charge here, but conditions",
        f"{_charge(room)}; {because}.{_against_lfl(comparison, entry, room)}",
        f"Have each shown for this refrigerant: {'; '.join(room.conditions)}. {DEFERS}",
        "; ".join(dict.fromkeys(limit.source for limit in limits)),
    )


def _against_lfl(comparison: Comparison, entry: Entry, room: RoomCheck) -> str:
    """Return how the whole charge in the room stands against the LFL, in words; nothing where it cannot burn."""
    lfl, volume = entry.refrigerant.lfl_kg_per_m3.number, comparison.case.room and comparison.case.room.volume_m3
    if lfl is None or not volume or room.highest_kg is None:
        return ""
    found, limit = (quantity("density", value, ".3g") for value in (room.highest_kg / volume, lfl))
    word = "above" if room.highest_kg / volume > lfl else "below"
    return f" All of it in the room would be {found}, {word} the LFL of {limit}."


def _unknown(comparison: Comparison, entry: Entry, room: RoomCheck) -> Finding:
    hazards = " and ".join(_hazards(entry))
    why = f"the refrigerant is {hazards}" if hazards else "a leak takes the place of air"
    missing: tuple[str, ...] = () if comparison.case.room else ("room.volume", "room.location", "room.access")
    option = f"options.{entry.refrigerant.designation}"
    if room.highest_kg is None:
        missing += (f"{option}.charge" if entry.is_new_plant else "plant.charge",)
    elif room.charge_of != LARGEST_CIRCUIT:
        missing += (f"{option}.largest_circuit" if entry.is_new_plant else "room.largest_circuit",)
    missing += () if room.code else ("law.code",)
    counted = [limit for limit in room.limits if limit.role == "limit"]
    missing += tuple(dict.fromkeys(f"room.{key}" for limit in counted for key in limit.open_keys))
    return Finding(
        "room-charge",
        "unknown",
        "Charge against the room not known",
        f"{_charge(room)}; {why}. Missing: {'; '.join(room.unknown_because)}.",
        f"Give what is missing and look up the limits. {DEFERS}",
        "; ".join(dict.fromkeys(limit.source for limit in room.limits if limit.role == "limit")) or NO_SOURCE,
        missing,
        decisive=True,
    )


def _doubtful(room: RoomCheck) -> Iterator[Finding]:
    """Note where a charge is below a limit that rests on memory or on figures in dispute."""
    flags = [flag for limit in room.limits if limit.role == "limit" for flag in limit.flags]
    if room.verdict == UNKNOWN or not flags:
        return
    yield Finding(
        "room-limit-doubtful",
        "note",
        "Limits of the room rest on memory or figures in dispute",
        f"{_charge(room)}; {'; '.join(dict.fromkeys(flags))}.",
        f"Look the figures up before they are used. {DEFERS}",
        "; ".join(dict.fromkeys(limit.source for limit in room.limits if limit.role == "limit")),
    )
