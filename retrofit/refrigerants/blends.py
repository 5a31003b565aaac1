"""Values of a blend from those of its components: molar mass, ODP, and GWP on each basis apart."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from typing import NamedTuple

from retrofit.refrigerants.records import Value

Composition = Sequence[tuple[str, float]]

GWP_BASES = {
    "gwp_100yr_ar4": "IPCC AR4, 100 years",
    "gwp_100yr_ar5": "IPCC AR5, 100 years",
    "gwp_100yr_ar6": "IPCC AR6, 100 years",
    "gwp_eu_2024_573": "EU 2024/573, annexes I, II and VI",
    "gwp_us_aim": "US AIM Act, 42 USC 7675 and 40 CFR 84.64",
}

# An edition's own source: a component value from elsewhere is named in the note of the blend.
_OWN_SOURCE = {"gwp_100yr_ar4": "IPCC2007", "gwp_100yr_ar5": "IPCC2013", "gwp_100yr_ar6": "IPCC2021"}
_OZONE_DEPLETING = ("CFC", "HCFC", "halon")
_FLUORINATED_GASES = ("HFC", "PFC", "HFO", "HCFO")  # what annexes I and II of EU 2024/573 can list


class Component(NamedTuple):
    """A component as the weighting sees it: its name, mass fraction, group and value."""

    designation: str
    mass_fraction: float
    group: str
    value: Value


def molar_mass(parts: Sequence[Component]) -> Value:
    """Return the molar mass of a blend.

    Args:
        parts: Components with their molar masses. [kg/mol]
    Returns: Molar mass, 1 / sum(w / M). [kg/mol]
    Source: definition of the mean molar mass from mass fractions w.
    """
    moles_per_kg = sum(part.mass_fraction / _known(part) for part in parts)
    return Value(1.0 / moles_per_kg, "kg/mol", "Computed", "computed")


def odp(parts: Sequence[Component]) -> Value:
    """Return the ozone depletion potential of a blend by mass weighting; none if a component has none.

    Args:
        parts: Components with their potentials. [-]
    Returns: Mass-weighted potential. [-]
    Source: Montreal Protocol, annexes A to C: potentials are by mass.
    """
    missing = [part for part in parts if part.value.number is None]
    if missing:
        return _not_computed("; ".join(_say_missing(part) for part in missing))
    return _weighted(parts, "", "")


def gwp(parts: Sequence[Component], basis: str) -> Value:
    """Return the global warming potential of a blend on one named basis, by mass weighting.

    Args:
        parts: Components with their values on that basis. [-]
        basis: A key of GWP_BASES. [-]
    Returns: Mass-weighted potential; `note` and `status` tell what was done about missing values. [-]
    Raises: KeyError if the basis is unknown.
    Source: EU 2024/573 annex VI and 40 CFR 84.64 for the legal bases; the same weighting on IPCC values.
    """
    return _RULES[basis](parts, basis)


def _ipcc(parts: Sequence[Component], basis: str) -> Value:
    edition = GWP_BASES[basis].split(",")[0].removeprefix("IPCC ")
    missing = [part.designation for part in parts if part.value.number is None]
    notes = [f"{name} has no {edition} value: counted as 0" for name in missing]
    foreign = [part for part in parts if part.value.source not in ("", _OWN_SOURCE[basis], "Definition")]
    notes += [f"{part.designation} {part.value.number:g} is from {part.value.source}" for part in foreign]
    return _weighted(parts, "; ".join(notes), "incomplete" if missing else "")


def _eu(parts: Sequence[Component], basis: str) -> Value:
    missing = [part for part in parts if part.value.number is None]
    blocking = [part for part in missing if part.group in (*_OZONE_DEPLETING, *_FLUORINATED_GASES)]
    if blocking:
        return _not_computed("; ".join(_say_missing(part) for part in blocking))
    notes = [f"{part.designation} is not listed: counted as 0, default of annex VI" for part in missing]
    return _weighted(parts, "; ".join(notes), "by rule" if missing else "")


def _us(parts: Sequence[Component], basis: str) -> Value:
    missing = [part for part in parts if part.value.number is None]
    blocking = [part for part in missing if part.group in _OZONE_DEPLETING]
    if blocking:
        return _not_computed("; ".join(_say_missing(part) for part in blocking))
    notes = [f"{part.designation} has no value: left out, 40 CFR 84.64(c)" for part in missing]
    return _weighted(parts, "; ".join(notes), "by rule" if missing else "")


_RULES: dict[str, Callable[[Sequence[Component], str], Value]] = {
    "gwp_100yr_ar4": _ipcc,
    "gwp_100yr_ar5": _ipcc,
    "gwp_100yr_ar6": _ipcc,
    "gwp_eu_2024_573": _eu,
    "gwp_us_aim": _us,
}


def _weighted(parts: Sequence[Component], note: str, status: str) -> Value:
    total = sum(part.mass_fraction * (part.value.number or 0.0) for part in parts)
    recalled = [part for part in parts if part.value.basis == "memory" and part.value.number is not None]
    words = [f"{part.designation} {part.value.number:g} is from memory" for part in recalled]
    text = "; ".join(word for word in (note, *words) if word)
    return Value(round(total, 12), "", "Computed", "computed", note=text, status=status)


def _not_computed(reason: str) -> Value:
    return Value(None, "", "Computed", "computed", note=f"not computed: {reason}", status="not computed")


def _say_missing(part: Component) -> str:
    if part.value.status == "bound":
        return f"{part.designation} is {part.value.note}"
    if part.group in _OZONE_DEPLETING:
        return f"{part.designation} is a {part.group}, which this basis does not list"
    return f"{part.designation} has no value"


def _known(part: Component) -> float:
    if part.value.number is None:
        raise ValueError(f"{part.designation} has no {part.value.unit} value, so the blend has none")
    return part.value.number


def remembered(value: Value, composition: Value) -> Value:
    """Return a computed value with a word added if the composition behind it was only remembered.

    Args:
        value: A value computed from the composition. [-]
        composition: The stated composition with its provenance. [mass %]
    Returns: The same value, its note extended where the composition is from memory.
    """
    if composition.basis != "memory" or value.basis != "computed":
        return value
    word = f"composition from memory ({composition.confidence} confidence)"
    return replace(value, note="; ".join(part for part in (value.note, word) if part))
