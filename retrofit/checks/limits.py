"""What a comparison does not look at: it depends on what the case gives, and is told with every result."""

from __future__ import annotations

from retrofit.study import Comparison, Entry

HELD = "what the heat exchangers do: evaporating and condensing temperatures are held, not found from air or water"
FILMS = (
    "how well each refrigerant passes its heat on: the exchangers count as good as today, or by the factors of the "
    "case, and as clean as today"
)
HARDWARE = "motor current, expansion valves, distributors, pipes, oil return, receiver, relief valves and seals"
ROOM = "charge against room volume, "
ROOM_ELSE = "ventilation, detection and electrical equipment"
LAW = "law, listings and permits at the place of the plant, now and over its remaining life"
LAW_ELSE = "permits and approvals, and law that the tables used do not hold: they are not legal advice"
CONDITION = "age and condition of the plant, and what its makers allow"
YEAR = "a year of operation: energy, emissions and cost"
YEAR_ELSE = "wear, and losses of starting, over a year; prices, grid and leaks of later years beyond their limits"


def not_checked(comparison: Comparison) -> tuple[str, ...]:
    """Return what this comparison does not look at, for the reader to have looked at.

    Args:
        comparison: An assessed result.
    Returns: Sentences without first capital and full stop.
    """
    entries = [entry for entry in comparison.candidates if entry.status == "ok"]
    room = comparison.case.room
    return (
        *_exchangers(entries),
        *_hardware(entries),
        *_conditions(entries),
        CONDITION,
        ROOM_ELSE if room is not None and room.volume_m3 is not None else ROOM + ROOM_ELSE,
        LAW if comparison.law is None else LAW_ELSE,
        YEAR if comparison.life is None or not comparison.life.years else YEAR_ELSE,
    )


def _exchangers(entries: list[Entry]) -> tuple[str, ...]:
    without = [entry.refrigerant.designation for entry in entries if entry.plant is None]
    if not entries or len(without) == len(entries):
        return (HELD,)
    return (FILMS, *((f"{HELD}: {', '.join(without)}",) if without else ()))


def _hardware(entries: list[Entry]) -> tuple[str, ...]:
    """Return the components that no verdict stands on for lack of data, or all of them."""
    if not any(entry.hardware for entry in entries):
        return (HARDWARE,)
    open_ = dict.fromkeys(
        f"{item.name[:1].lower()}{item.name[1:]}"
        for entry in entries
        for item in entry.hardware
        if item.verdict == "unknown"
    )
    return (f"components without enough data, for one candidate at least: {'; '.join(open_)}",) if open_ else ()


def _conditions(entries: list[Entry]) -> tuple[str, ...]:
    numbers = [entry.hardware_numbers for entry in entries]
    found = []
    if not numbers or any(item is None or item.new.p_standstill_Pa is None for item in numbers):
        found.append("standstill pressure at the highest ambient temperature")
    if not numbers or any(item is None or item.new.hottest is None for item in numbers):
        found.append("the hottest day beyond the temperatures of the case")
    if not numbers or any(item is None or item.new.pull_down is None for item in numbers):
        found.append("pull-down from a warm start")
    return tuple(found)
