"""Whether a row of a table of law holds for a refrigerant and its charge: yes, no, or what would settle it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

from retrofit.case import Law
from retrofit.checks.law.rows import Limit, Row
from retrofit.equipment.vessels import co2_equivalent_t
from retrofit.refrigerants import GWP_BASES, Refrigerant, find
from retrofit.units.table import POUND_KG

Range = tuple[float, float, float]
APPLIES, DEPENDS, UNKNOWN, NO = "applies", "depends", "unknown", "no"


@dataclass(frozen=True)
class Plant:
    """What a row can ask about.

    Attributes:
        law: The table [law] of the case.
        cooling_W: Cooling of the plant.
        refrigerant: The refrigerant.
        charge_kg: Lowest, expected and highest charge; None if not known.
    """

    law: Law
    cooling_W: float
    refrigerant: Refrigerant
    charge_kg: Range | None

    @cached_property
    def groups(self) -> dict[str, float]:
        """Mass fraction of each group of substances in the refrigerant. [-]"""
        found: dict[str, float] = {}
        for name, fraction in self.refrigerant.composition:
            group = find(name).substance_group
            found[group] = found.get(group, 0.0) + fraction
        return found

    def gwp(self, basis: str) -> float | None:
        """Return the GWP on the basis of a law, None if there is none."""
        found: float | None = getattr(self.refrigerant, basis).number
        return found

    def co2e_t(self, basis: str) -> Range | None:
        """Return lowest, expected and highest weight of the charge on a basis; None if not known. [t CO2e]"""
        gwp = self.gwp(basis)
        if gwp is None or self.charge_kg is None:
            return None
        low, expected, high = (float(found) for found in co2_equivalent_t(self.charge_kg, gwp))
        return low, expected, high


@dataclass(frozen=True)
class Answer:
    """Whether a row holds: "applies", "depends", "unknown" or "no"; why; and the numbers against its limits."""

    state: str
    reasons: tuple[str, ...] = ()
    measured: str = ""


Said = tuple[str, str, str]  # state, reason, measured


def answer(row: Row, plant: Plant) -> Answer:
    """Return whether a row holds, whatever the date.

    Args:
        row: The row.
        plant: What it can ask about.
    Returns: "no" as soon as one condition fails for sure; else "unknown" if a datum is missing, "depends" if a
        condition or the width of the charge leaves it open, "applies" if all hold.
    """
    said = [*_about_plant(row, plant), *_about_gas(row, plant), *(_about(limit, row, plant) for limit in row.when)]
    states = {state for state, _, _ in said}
    if NO in states:
        return Answer(NO)
    if row.condition:
        said.append((DEPENDS, f"only if {row.condition}", ""))
        states.add(DEPENDS)
    state = next((worst for worst in (UNKNOWN, DEPENDS) if worst in states), APPLIES)
    reasons = tuple(dict.fromkeys(reason for _, reason, _ in said if reason))
    return Answer(state, reasons, "; ".join(measured for _, _, measured in said if measured))


def _yes(holds: bool) -> Said:
    return (APPLIES if holds else NO, "", "")


def _about_plant(row: Row, plant: Plant) -> Iterator[Said]:
    kind = plant.law.equipment
    if kind is None and (row.equipment or row.not_equipment):
        yield UNKNOWN, "the kind of equipment is not stated (equipment in [law])", ""
    elif kind is not None:
        yield _yes((not row.equipment or kind in row.equipment) and kind not in row.not_equipment)
    for name in ("hermetically_sealed", "leak_detection_system", "product_below_minus_50"):
        wanted = getattr(row, name)
        yield _yes(wanted is None or wanted == getattr(plant.law, name))


def _about_gas(row: Row, plant: Plant) -> Iterator[Said]:
    inside = set(plant.groups)
    yield _yes(not row.gases or bool(inside & set(row.gases)))
    yield _yes(not row.with_ or bool(inside & set(row.with_)))
    yield _yes(not inside & set(row.without))
    parts = {name for name, _ in plant.refrigerant.composition}
    yield _yes(not row.components or bool(parts & set(row.components)))
    yield _yes(not row.refrigerants or plant.refrigerant.designation in row.refrigerants)
    safety_class = plant.refrigerant.safety_class.text
    if row.safety_classes and not safety_class:
        yield UNKNOWN, f"the safety class of {plant.refrigerant.designation} is not stated", ""
    elif row.safety_classes:
        is_inside = bool(set(safety_class.split("/")) & set(row.safety_classes))
        yield (APPLIES if is_inside else NO, "", f"class {safety_class}")


def _about(limit: Limit, row: Row, plant: Plant) -> Said:
    found = _measure(limit.measure, row, plant)
    if isinstance(found, str):
        return UNKNOWN, found, ""
    # Rounded so that 50 lb, kept in kilograms, is 50 lb again.
    low, expected, high = (round(value, 9) for value in found)
    if limit.too_low(high) or limit.too_high(low):
        return NO, "", ""
    measured = f"{_shown(limit.measure, low, expected, high)}, limit {limit.words}"
    if any(limit.too_low(end) or limit.too_high(end) for end in (low, high)):
        return DEPENDS, f"it depends on the charge weighed in: {measured}", measured
    return APPLIES, "", measured


def _measure(measure: str, row: Row, plant: Plant) -> Range | str:
    """Return lowest, expected and highest value of a measure, or what is missing to tell it."""
    if measure == "kW":
        return (plant.cooling_W / 1e3,) * 3
    gwp = None if row.gwp_basis == "none" else plant.gwp(row.gwp_basis)
    if measure in ("GWP", "t CO2e") and gwp is None:
        name = plant.refrigerant.designation
        return f"{name} has no GWP on the basis of this law ({GWP_BASES.get(row.gwp_basis, row.gwp_basis)})"
    if measure == "GWP" and gwp is not None:
        return (gwp,) * 3
    if plant.charge_kg is None:
        return f"the charge of {plant.refrigerant.designation} is not known (charge in [plant])"
    return _mass(measure, row, plant, plant.charge_kg)


def _mass(measure: str, row: Row, plant: Plant, charge_kg: Range) -> Range:
    low, expected, high = charge_kg
    if measure == "t CO2e":
        return plant.co2e_t(row.gwp_basis) or charge_kg
    if measure == "lb":
        return low / POUND_KG, expected / POUND_KG, high / POUND_KG
    share = sum(plant.groups.get(group, 0.0) for group in row.gases) if row.gases else 1.0
    return low * share, expected * share, high * share


def _shown(measure: str, low: float, expected: float, high: float) -> str:
    unit = "" if measure == "GWP" else f" {measure}"
    span = f" ({low:.4g} to {high:.4g})" if low < high else ""
    text = f"{expected:.4g}{unit}{span}"
    return f"GWP {text}" if measure == "GWP" else text
