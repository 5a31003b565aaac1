"""Cautions as data: what the safety class of a refrigerant, and a change of class, ask a planner to check.

They come from cautions.toml and cannot be switched off. None says that a thing may be done; each defers to
ASHRAE 34 and 15, ISO 817 and 5149 or EN 378, local code and licensed practice.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

from retrofit.refrigerants.records import Refrigerant
from retrofit.refrigerants.safety import FLAMMABILITY_RANK, TOXICITY_RANK, parse_safety_class
from retrofit.refrigerants.tables import read_toml

NOT_STATED = "not stated"


@dataclass(frozen=True)
class Caution:
    """One caution: `level` is "danger", "warning", "caution" or "unknown"; `source` names the standards."""

    code: str
    level: str
    title: str
    text: str
    source: str


def cautions_for(refrigerant: Refrigerant) -> tuple[Caution, ...]:
    """Return the cautions that go with a refrigerant wherever it is shown; never empty.

    Args:
        refrigerant: A refrigerant of the catalogue. [-]
    Returns: The caution of its safety class first, then those of the refrigerant and of its components.
    """
    parsed = parse_safety_class(refrigerant.safety_class.value)
    name = "".join(parsed) if parsed else NOT_STATED
    parts = {refrigerant.designation, *(part for part, _ in refrigerant.composition)}
    extra = [item for item, wanted in _by_designation() if parts & wanted]
    return (*_by_class()[name], *extra, *_from_memory(refrigerant))


def change_cautions(old: Refrigerant, new: Refrigerant) -> tuple[Caution, ...]:
    """Return the cautions of putting one refrigerant where another was, beyond those of the new one itself.

    Args:
        old: Refrigerant the plant was built for. [-]
        new: Candidate. [-]
    Returns: Cautions for a class that is less mild or unknown; empty where the class is no less mild.
    """
    before = parse_safety_class(old.safety_class.value)
    after = parse_safety_class(new.safety_class.value)
    if before is None or after is None:
        return (_changes()["unknown"],)
    found = []
    if FLAMMABILITY_RANK[after.flammability] > FLAMMABILITY_RANK[before.flammability]:
        found.append(_changes()["flammability"])
    if TOXICITY_RANK[after.toxicity] > TOXICITY_RANK[before.toxicity]:
        found.append(_changes()["toxicity"])
    return tuple(found)


def _from_memory(refrigerant: Refrigerant) -> tuple[Caution, ...]:
    return (_changes()["memory"],) if refrigerant.safety_class.basis == "memory" else ()


@cache
def _by_class() -> dict[str, tuple[Caution, ...]]:
    found: dict[str, tuple[Caution, ...]] = {}
    for entry in read_toml("cautions")["class"]:
        names = entry.pop("classes")
        for name in names:
            found[name] = (*found.get(name, ()), Caution(**entry))
    return found


@cache
def _by_designation() -> tuple[tuple[Caution, frozenset[str]], ...]:
    found = []
    for entry in read_toml("cautions")["refrigerant"]:
        names = frozenset(entry.pop("names"))
        found.append((Caution(**entry), names))
    return tuple(found)


@cache
def _changes() -> dict[str, Caution]:
    return {entry.pop("when"): Caution(**entry) for entry in read_toml("cautions")["change"]}
