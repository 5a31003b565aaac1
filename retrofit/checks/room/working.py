"""What the methods share: numbers as text with unit, flags of a value, and a limit put together."""

from __future__ import annotations

from dataclasses import dataclass, field

from retrofit.refrigerants import Refrigerant, SafetyClass, Value, parse_safety_class
from retrofit.study.room import WorkedLimit
from retrofit.units import SI, quantity


@dataclass(frozen=True)
class Rule:
    """A method before any number: everything of a `WorkedLimit` that does not depend on the plant."""

    method: str
    title: str
    code_family: str
    edition: str
    formula: str
    symbols: tuple[str, ...]
    source: str
    basis: str
    role: str = "limit"


@dataclass
class Work:
    """A working under way: lines, what is missing, and flags."""

    lines: list[str] = field(default_factory=list)
    missing: list[str] = field(default_factory=list)
    flags: list[str] = field(default_factory=list)

    def need(self, value: float | str | bool | None, what: str) -> None:
        """Note an input that is not given."""
        if value is None:
            self.missing.append(what)

    def number(self, name: str, value: Value, refrigerant: Refrigerant) -> float | None:
        """Return the number of a catalogue value; flag where it comes from, or note that it is missing."""
        if value.number is None:
            self.missing.append(f"{name} of {refrigerant.designation}: the catalogue states none")
            return None
        self.flags += value_flags(name, value, refrigerant)
        return value.number

    def limit(
        self,
        rule: Rule,
        limit_kg: float | None,
        decided_by: str,
        applies_because: str,
        open_because: str = "",
        open_up_to_kg: float | None = None,
        open_keys: tuple[str, ...] = (),
    ) -> WorkedLimit:
        """Return the limit; one with anything missing is none."""
        is_known = limit_kg is not None and not self.missing
        return self._worked(
            rule,
            applies_because,
            limit_kg=limit_kg if is_known else None,
            decided_by=decided_by if is_known else "",
            open_because=open_because if is_known else "",
            open_up_to_kg=open_up_to_kg if is_known else None,
            open_keys=open_keys if is_known and open_because else (),
        )

    def no_limit(
        self, rule: Rule, unlimited_because: str, conditions: tuple[str, ...], applies_because: str
    ) -> WorkedLimit:
        """Return that a rule sets no limit here, with what it asks for instead; with anything missing that is open."""
        is_known = not self.missing
        return self._worked(
            rule,
            applies_because,
            unlimited_because=unlimited_because if is_known else "",
            conditions=conditions if is_known else (),
        )

    def _worked(
        self,
        rule: Rule,
        applies_because: str,
        limit_kg: float | None = None,
        decided_by: str = "",
        open_because: str = "",
        open_up_to_kg: float | None = None,
        unlimited_because: str = "",
        conditions: tuple[str, ...] = (),
        open_keys: tuple[str, ...] = (),
    ) -> WorkedLimit:
        return WorkedLimit(
            method=rule.method,
            title=rule.title,
            code_family=rule.code_family,
            edition=rule.edition,
            role=rule.role,
            formula=rule.formula,
            symbols=rule.symbols,
            lines=tuple(self.lines),
            limit_kg=limit_kg,
            decided_by=decided_by,
            unknown_because=tuple(dict.fromkeys(self.missing)),
            flags=tuple(dict.fromkeys(self.flags)),
            source=rule.source,
            basis=rule.basis,
            applies_because=applies_because,
            open_because=open_because,
            open_up_to_kg=open_up_to_kg,
            unlimited_because=unlimited_because,
            conditions=conditions,
            open_keys=open_keys,
        )


def value_flags(name: str, value: Value, refrigerant: Refrigerant) -> list[str]:
    """Return what a reader has to know of a catalogue value before relying on it.

    Args:
        name: What it is.
        value: The value.
        refrigerant: Whose it is.
    """
    of = f"{name} of {refrigerant.designation}"
    found = []
    if value.basis == "memory":
        found.append(f"{of} is from memory ({value.confidence} confidence): look it up in the standard")
    if value.status == "unresolved":
        found.append(f"{of} is unresolved: {value.note}")
    elif "against" in value.note or "gives" in value.note:
        found.append(f"{of}: {value.note}")
    return found


def class_of(refrigerant: Refrigerant) -> SafetyClass | None:
    """Return the safety class of a refrigerant, None if it is not stated."""
    return parse_safety_class(refrigerant.safety_class.value)


def class_flags(refrigerant: Refrigerant) -> list[str]:
    """Return what a reader has to know of the safety class of a refrigerant."""
    return value_flags("safety class", refrigerant.safety_class, refrigerant)


def mass(value: float) -> str:
    """Return a mass as text with its unit.

    Args:
        value: The mass. [kg]
    """
    return f"{value:.4g} kg"


def mass_told(value: float) -> str:
    """Return a mass for a sentence, told in the reader's units; the working of a limit keeps those of its formula.

    Args:
        value: The mass. [kg]
    """
    return quantity("mass", value, ".4g")


def concentration(value: float) -> str:
    """Return a concentration as text with its unit.

    Args:
        value: Mass in a cubic metre of air. [kg/m3]
    """
    return f"{value:.4g} kg/m³"


def room_volume(value: float) -> str:
    """Return the volume of a room as text with its unit.

    Args:
        value: The volume. [m3]
    """
    return SI.with_unit("room volume", value)
