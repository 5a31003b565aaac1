"""The charge against the room in the report: limits with their working, what is asked, and what a class asks."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

from retrofit.case import Case
from retrofit.checks.room.places import code_of
from retrofit.report.asked import Asked, asked_texts, shared_texts
from retrofit.report.classes import ClassBlock, Step, class_blocks, steps
from retrofit.report.gathering import basis_text, gathered, nameless, names
from retrofit.study import Comparison, Entry
from retrofit.study.room import CONDITIONS, UNKNOWN, RoomCheck, WorkedLimit
from retrofit.units import UnitSystem, all_told, stacked

NOT_GIVEN = "not given"
NO_LIMIT = "none"
ROLES = {
    "limit": "It counts.",
    "alternative": "Shown beside the limits; it decides nothing.",
    "product standard": "Of the product standard; it decides nothing.",
}


@dataclass(frozen=True)
class RoomLine:
    """One refrigerant against its limit, as texts; what is not known reads "unknown"."""

    name: str
    safety_class: str
    expected: str
    span: str
    limit: str
    margin: str
    verdict: str
    why: str


@dataclass(frozen=True)
class LimitLine:
    """One limit of some refrigerants: the figure, what sets it, its working, what is missing, and what is doubtful."""

    about: str
    limit: str
    decided_by: str
    working: tuple[str, ...]
    missing: tuple[str, ...]
    open_because: str
    flags: tuple[str, ...]


@dataclass(frozen=True)
class LimitBlock:
    """One method with every refrigerant it was worked for; `flags` are true of all of them."""

    heading: str
    role: str
    formula: str
    symbols: tuple[str, ...]
    edition: str
    source: str
    basis: str
    applies: str
    flags: tuple[str, ...]
    lines: tuple[LimitLine, ...]


@dataclass(frozen=True)
class RoomPart:
    """Everything on charge and room.

    Attributes:
        code: Which rules, in words.
        facts: The room as (what, value).
        charge_of: Whose charge it is, in words.
        lines: One for each refrigerant.
        conditions: What holds instead of a limit, by refrigerants.
        limits: Every method with its working.
        questions, machinery: What is asked; `machinery` is empty where nothing asks for a machinery room.
        steps: Changes of safety class.
        classes: What each class asks to look at.
    """

    code: str
    facts: tuple[tuple[str, str], ...]
    charge_of: str
    lines: tuple[RoomLine, ...]
    conditions: tuple[tuple[str, tuple[str, ...]], ...]
    limits: tuple[LimitBlock, ...]
    questions: tuple[Asked, ...]
    machinery: tuple[Asked, ...]
    steps: tuple[Step, ...]
    classes: tuple[ClassBlock, ...]


def has_room(comparison: Comparison) -> bool:
    """Say whether the case describes a room, so that there is something to show.

    Args:
        comparison: The result.
    """
    return comparison.case.room is not None or comparison.case.machinery_room is not None


def room_part(comparison: Comparison, units: UnitSystem) -> RoomPart | None:
    """Return what stands in the report on charge and room; None if the case describes no room.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    if not has_room(comparison):
        return None
    checks = [(entry, all_told(entry.room, units)) for entry in comparison.entries if entry.room is not None]
    return RoomPart(
        code_text(comparison.case),
        _facts(comparison.case, units),
        charge_of_text(checks[0][1]) if checks else "",
        room_lines(comparison, units),
        condition_lines(comparison, units),
        _limit_blocks(checks, units),
        asked_texts(((entry, item) for entry, check in checks for item in check.questions), len(checks), units),
        asked_texts(((entry, item) for entry, check in checks for item in check.machinery_room), len(checks), units),
        steps(comparison),
        class_blocks(comparison),
    )


def code_text(case: Case) -> str:
    """Return by which rules the charge was set against the room, in one sentence.

    Args:
        case: The case.
    """
    code, place = (case.law.code, case.law.jurisdiction) if case.law else (None, None)
    usual = code_of(place)
    if code is None and usual:
        return f"By {usual}, usual where the plant stands ({place}): `code` in [law] would choose another."
    if code is None:
        return "By ASHRAE 15 and by EN 378, which have to agree: `code` in [law] does not choose."
    return "By ASHRAE 15 and by EN 378; the stricter counts." if code == "both" else f"By {code}, as the case chooses."


def charge_of_text(check: RoomCheck) -> str:
    """Return whose charge is set against the room, in one sentence.

    Args:
        check: Of one refrigerant; it is the same for all.
    """
    if check.charge_of == "largest circuit":
        return "Charge of the largest independent circuit."
    if check.charge_of == "whole plant":
        return "Charge of the whole plant, for want of `largest_circuit` in [room]: one leak lets out no more."
    return "The charge is not known: give `charge` in [plant] or `largest_circuit` in [room]."


def room_lines(comparison: Comparison, units: UnitSystem) -> tuple[RoomLine, ...]:
    """Return each refrigerant against its limit.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    checks = ((entry, entry.room) for entry in comparison.entries if entry.room is not None)
    return tuple(_line(entry, all_told(check, units), units) for entry, check in checks)


def mass_text(value: float | None, units: UnitSystem) -> str:
    """Return a mass without its unit, with the digits of its size; "unknown" if it is not known.

    Args:
        value: The mass. [kg]
        units: The reader's units.
    """
    return units.text("mass", value, missing=UNKNOWN)


def _span(check: RoomCheck, units: UnitSystem) -> str:
    low, high = check.lowest_kg, check.highest_kg
    spread = low is not None and high is not None and low < high
    return f"{mass_text(low, units)} to {mass_text(high, units)}" if spread else mass_text(high, units)


def _line(entry: Entry, check: RoomCheck, units: UnitSystem) -> RoomLine:
    limit = check.deciding
    return RoomLine(
        entry.refrigerant.display_name,
        entry.refrigerant.safety_class.text or "not stated",
        mass_text(check.expected_kg, units),
        stacked(*(_span(check, system) for system in units.systems)),
        mass_text(limit.limit_kg, units) if limit else NO_LIMIT if check.verdict == CONDITIONS else UNKNOWN,
        units.text("mass", check.margin_kg, signed=True, missing=NO_LIMIT if check.verdict == CONDITIONS else UNKNOWN),
        check.verdict,
        _why(entry, check),
    )


def _why(entry: Entry, check: RoomCheck) -> str:
    """Return which limit decides, what sets it and what is doubtful about it; of an unknown what is missing."""
    limit = check.deciding
    missing = f"Missing: {nameless(entry, '; '.join(check.unknown_because))}." if check.unknown_because else ""
    instead = _instead(check)
    if limit is None:
        return " ".join(text for text in (instead, missing) if text) or "No limit is known."
    said = [f"{limit.code_family}, {limit.title[:1].lower()}{limit.title[1:]}; set by the {limit.decided_by}"]
    said += [nameless(entry, flag) for flag in limit.flags]
    if limit.basis == "memory" and not any("the rule is from memory" in flag for flag in limit.flags):
        said.append("the rule is from memory")
    sentences = (*(f"{text[:1].upper()}{text[1:]}." for text in said), instead, missing)
    return " ".join(text for text in sentences if text)


def _instead(check: RoomCheck) -> str:
    """Return which rules set no limit of charge; nothing where every rule sets one."""
    return f"No limit of charge by {' and '.join(check.unlimited)}, but conditions." if check.conditions else ""


def condition_lines(comparison: Comparison, units: UnitSystem) -> tuple[tuple[str, tuple[str, ...]], ...]:
    """Return what holds where no charge is set: refrigerants, and the conditions they share.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    alone = (
        (entry, tuple(nameless(entry, text) for text in all_told(entry.room, units).conditions))
        for entry in comparison.entries
        if entry.room is not None and entry.room.conditions
    )
    return tuple((names(entries), texts) for texts, entries in gathered(alone).items())


def _facts(case: Case, units: UnitSystem) -> tuple[tuple[str, str], ...]:
    """Return what the case says of the rooms, what it does not say included."""
    room, machinery = case.room, case.machinery_room
    found = []
    if room is not None:
        access, location = room.access_category, room.location_class
        found += [
            ("Room", room.name or NOT_GIVEN),
            ("Volume", _given(units, "room volume", room.volume_m3)),
            ("Floor area", _given(units, "area", room.area_m2)),
            ("Access", f"category {access}" if access else NOT_GIVEN),
            ("Location", f"class {location}" if location else NOT_GIVEN),
            ("Below ground", _flag(room.below_ground)),
            ("Emergency exits", _flag(room.emergency_exits)),
            ("People in it", NOT_GIVEN if room.people is None else f"{room.people}"),
            ("Only for refrigerated process or storage", _flag(room.refrigerated)),
            ("For comfort", _flag(room.comfort)),
            ("Occupancy", room.occupancy or NOT_GIVEN),
            ("Factory-sealed", _flag(room.sealed)),
            ("Ventilation of the room", room.ventilation or NOT_GIVEN),
        ]
    if machinery is not None:
        found += [
            ("Machinery room", _given(units, "room volume", machinery.volume_m3)),
            ("Its emergency ventilation", _given(units, "volume flow", machinery.ventilation_m3_per_s)),
            ("Its detector", _flag(machinery.detector)),
        ]
    return tuple(found)


def _given(units: UnitSystem, kind: str, value: float | None) -> str:
    return NOT_GIVEN if value is None else units.with_unit(kind, value)


def _flag(value: bool | None) -> str:
    return NOT_GIVEN if value is None else "yes" if value else "no"


# Limits


def _limit_blocks(checks: Iterable[tuple[Entry, RoomCheck]], units: UnitSystem) -> tuple[LimitBlock, ...]:
    """Return the methods, those that count first, each with the refrigerants it was worked for."""
    every = [(entry, limit) for entry, check in checks for limit in check.limits]
    blocks: dict[tuple[str, ...], list[tuple[Entry, LimitLine]]] = {}
    heads: dict[tuple[str, ...], WorkedLimit] = {}
    for entry, limit in every:
        key = (limit.code_family, limit.method, limit.title, limit.formula, limit.applies_because)
        heads.setdefault(key, limit)
        blocks.setdefault(key, []).append((entry, _limit_line(entry, limit, units)))
    order = list(ROLES)
    ordered = sorted(heads, key=lambda key: order.index(heads[key].role))
    return tuple(_block(heads[key], blocks[key]) for key in ordered)


def _limit_line(entry: Entry, limit: WorkedLimit, units: UnitSystem) -> LimitLine:
    return LimitLine(
        "",
        NO_LIMIT if limit.unlimited_because else mass_text(limit.limit_kg, units),
        limit.decided_by,
        (*(nameless(entry, line) for line in limit.lines), *_no_limit(limit)),
        tuple(nameless(entry, text) for text in limit.unknown_because),
        nameless(entry, limit.open_because),
        tuple(nameless(entry, text) for text in limit.flags),
    )


def _no_limit(limit: WorkedLimit) -> tuple[str, ...]:
    return (f"no limit of charge: {limit.unlimited_because}",) if limit.unlimited_because else ()


def _block(limit: WorkedLimit, lines: list[tuple[Entry, LimitLine]]) -> LimitBlock:
    shared = shared_texts([line.flags for _, line in lines])
    alone = ((entry, _without(line, shared)) for entry, line in lines)
    return LimitBlock(
        f"{limit.code_family}: {limit.title[:1].lower()}{limit.title[1:]}",
        ROLES[limit.role],
        limit.formula,
        limit.symbols,
        limit.edition,
        limit.source,
        basis_text(limit.basis),
        limit.applies_because,
        shared,
        tuple(replace(line, about=names(entries)) for line, entries in gathered(alone).items()),
    )


def _without(line: LimitLine, shared: tuple[str, ...]) -> LimitLine:
    return replace(line, flags=tuple(flag for flag in line.flags if flag not in shared))
