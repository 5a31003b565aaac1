"""The way out of an unknown: the keys that settle it where its check names none, and answers in writing that do.

What no number of the case can settle, an answer in writing does: of a maker, the authority or the engineer in charge.
What the model of a refrigerant cannot say, nothing here can: it is computed elsewhere, or left out of the comparison.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from retrofit.case import Case
from retrofit.study import Comparison, Entry, Finding, Level
from retrofit.study.charge import LARGEST_CIRCUIT
from retrofit.study.hardware.conditions import CANDIDATES

# Codes of findings, by their beginning, that an answer in [approvals] settles.
ANSWERS: Mapping[str, str] = {"law-": "law", "room-charge": "room", "oil": "oil", "standstill": "standstill"}
ROOM_KEYS: tuple[str, ...] = (
    *("volume", "area", "location", "access", "occupancy", "comfort", "below_ground", "ventilation", "mounting"),
    "largest_circuit",
)


def with_way_out(comparison: Comparison, entry: Entry, finding: Finding) -> Finding:
    """Return a finding as an answer in writing settles it, or an unknown one with the keys that would settle it.

    Args:
        comparison: A result.
        entry: One of its refrigerants.
        finding: What a check found of it.
    """
    if finding.level != Level.UNKNOWN:
        return finding
    name = next((name for code, name in ANSWERS.items() if finding.code.startswith(code)), None)
    missing = tuple(dict.fromkeys((*finding.missing, *_more_keys(comparison.case, entry, finding))))
    if missing:
        return replace(finding, missing=missing)
    if name is None:
        return replace(finding, missing=(CANDIDATES,))
    approvals = comparison.case.approvals
    answer = approvals.of(name, entry.refrigerant.designation) if approvals else None
    if answer is None:
        return replace(finding, missing=(f"approvals.{name}",))
    level, told = (Level.NOTE, "Approved") if answer else (Level.STOP, "Not approved")
    fact = f"{finding.fact} {told} in writing, by the case."
    return replace(finding, level=level, fact=fact.strip(), source=f"answer in writing, by the case; {finding.source}")


def _more_keys(case: Case, entry: Entry, finding: Finding) -> tuple[str, ...]:
    """Return the keys that a check of room or law reads and the case leaves out, beside those that it names itself."""
    if finding.code == "room-charge":
        names = ROOM_KEYS if not entry.is_new_plant else ROOM_KEYS[:-1]
        if entry.room is not None and entry.room.charge_of == LARGEST_CIRCUIT:
            names = tuple(name for name in names if name != "largest_circuit")
        return tuple(f"room.{name}" for name in names if case.room is None or _is_open(case, name))
    if finding.code == "law-unknown" and case.law is not None:
        equipment = () if case.law.equipment is not None else ("law.equipment",)
        return (*equipment, *_charge_keys(case, entry))
    return ()


def _is_open(case: Case, name: str) -> bool:
    if case.room is None:
        return True
    if name == "mounting":
        return case.room.mounting is None and case.room.mounting_height_m is None
    units = {"volume": "volume_m3", "area": "area_m2", "largest_circuit": "largest_circuit_kg"}
    return getattr(case.room, units.get(name, name)) is None


def _charge_keys(case: Case, entry: Entry) -> tuple[str, ...]:
    """Return the key of a charge that is not known; nothing if it is."""
    if entry.room is not None and entry.room.highest_kg is not None:
        return ()
    return (f"options.{entry.refrigerant.designation}.charge" if entry.is_new_plant else "plant.charge",)
