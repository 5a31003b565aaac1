"""Whether a row of a table of law holds for a refrigerant and its charge: yes, no, or what would settle it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

from retrofit.case import Case, Law
from retrofit.checks.law.rows import Row
from retrofit.equipment.vessels import co2_equivalent_t
from retrofit.refrigerants import GWP_BASES, Refrigerant, find
from retrofit.study.law import Limit, Measured, Range, Reason, RowState, Why
from retrofit.units.table import POUND_KG

# Kinds of equipment that say themselves how they are put together.
BUILT = {
    "supermarket": "multipack",
    "condensing unit": "built on site",
    "stand-alone cabinet": "self-contained",
    "domestic refrigerator": "self-contained",
}
CHILLERS = ("chiller", "process chiller")
# Kinds that may be built as a chiller or not: what they cool decides.
MAY_BE_CHILLERS = ("refrigeration", "cold store", "industrial process", "ice rink", "data centre")
HEAT_PUMPS = ("heat pump", "residential heat pump")


@dataclass(frozen=True)
class Plant:
    """What a row can ask about.

    Attributes:
        law: The table [law] of the case.
        cooling_W, heat_W: Cooling, and heat given off; None if not known.
        media: What flows at the evaporator and at the condenser; None if not stated.
        refrigerant: The refrigerant.
        charge_kg: Lowest, expected and highest charge; None if not known.
    """

    law: Law
    cooling_W: float
    heat_W: float | None
    media: tuple[str | None, str | None]
    refrigerant: Refrigerant
    charge_kg: Range | None

    @classmethod
    def of(cls, case: Case, law: Law, refrigerant: Refrigerant, charge_kg: Range | None, heat_W: float | None) -> Plant:
        """Return what the tables can ask about one refrigerant in a case."""
        sides = (case.evaporator, case.condenser)
        evaporator, condenser = (side.medium if side else None for side in sides)
        return cls(law, case.duty.cooling_W, heat_W, (evaporator, condenser), refrigerant, charge_kg)

    @cached_property
    def groups(self) -> dict[str, float]:
        """Mass fraction of each group of substances in the refrigerant. [-]"""
        found: dict[str, float] = {}
        for name, fraction in self.refrigerant.composition:
            group = find(name).substance_group
            found[group] = found.get(group, 0.0) + fraction
        return found

    @property
    def arrangement(self) -> str | None:
        """How it is put together; None if neither the case nor the kind of equipment says it."""
        return self.law.arrangement or BUILT.get(self.law.equipment or "")

    @property
    def is_chiller(self) -> bool | None:
        """Whether it cools water or brine, which is what EU law calls a chiller; None if not known."""
        kind, cooled = self.law.equipment, self.media[0]
        if kind is None or (kind in MAY_BE_CHILLERS and cooled is None):
            return None
        return kind in CHILLERS or (kind in MAY_BE_CHILLERS and cooled != "air")

    @property
    def transfer(self) -> str | None:
        """From what to what it carries heat, such as "air to water"; None if not known."""
        source, sink = self.media
        if self.arrangement == "double duct":
            return "air to air"
        return None if source is None or sink is None else f"{source} to {sink}"

    @property
    def capacity_W(self) -> Range | None:
        """Rated capacity; if not stated the duty, for a heat pump between its cooling and its heat; None if not known.

        What a heat pump is rated at, cooling or heat, the case says only by its rated capacity.
        """
        rated, cooling = self.law.rated_capacity_W, self.cooling_W
        if rated is not None or self.law.equipment not in HEAT_PUMPS:
            only = cooling if rated is None else rated
            return only, only, only
        return None if self.heat_W is None else (cooling, self.heat_W, self.heat_W)

    def gwp(self, basis: str) -> float | None:
        """Return the GWP on the basis of a law, None if there is none."""
        found: float | None = getattr(self.refrigerant, basis).number
        return found

    def gwp_known(self, basis: str) -> bool:
        """Say whether there is a GWP on the basis of a law."""
        return self.gwp(basis) is not None

    def co2e_t(self, basis: str) -> Range | None:
        """Return lowest, expected and highest weight of the charge on a basis; None if not known. [t CO2e]"""
        gwp = self.gwp(basis)
        if gwp is None or self.charge_kg is None:
            return None
        low, expected, high = (float(found) for found in co2_equivalent_t(self.charge_kg, gwp))
        return low, expected, high


@dataclass(frozen=True)
class Answer:
    """Whether a row holds, why it is open, and the numbers against its limits."""

    state: RowState
    reasons: tuple[Reason, ...] = ()
    measured: tuple[Measured, ...] = ()


Said = tuple[RowState, Reason | None, Measured | None]


def answer(row: Row, plant: Plant) -> Answer:
    """Return whether a row holds, whatever the date.

    Args:
        row: The row.
        plant: What it can ask about.
    Returns: "no" as soon as one condition fails for sure; else "unknown" if a datum is missing, "depends" if a
        condition or the width of a number leaves it open, "applies" if all hold.
    """
    limits = _limits(row, plant)
    said = [*_about_plant(row, plant), *_about_gas(row, plant), *(_about(limit, row, plant) for limit in limits)]
    if any(state == RowState.NO for state, _, _ in said):
        return Answer(RowState.NO)
    if row.condition:
        said.append((RowState.DEPENDS, Reason(Why.CONDITION, (row.condition,)), None))
    if row.not_read:
        said.append((RowState.UNKNOWN, Reason(Why.NOT_READ, (row.not_read,)), None))
    if row.safety_exception and plant.law.safety_exception and row.safety_gwp is None:
        said.append((RowState.DEPENDS, Reason(Why.SAFETY_CLAIMED, keys=("law.safety_exception",)), None))
    states = {state for state, _, _ in said}
    state = next((worst for worst in (RowState.UNKNOWN, RowState.DEPENDS) if worst in states), RowState.APPLIES)
    reasons = tuple(dict.fromkeys(reason for _, reason, _ in said if reason))
    return Answer(state, reasons, tuple(measured for _, _, measured in said if measured))


def _limits(row: Row, plant: Plant) -> tuple[Limit, ...]:
    """Return the limits of a row; where the case claims the safety exception, the GWP that is left then."""
    if row.safety_gwp is None or not plant.law.safety_exception:
        return row.when
    others = tuple(limit for limit in row.when if limit.measure != "GWP")
    return (Limit("GWP", from_=row.safety_gwp), *others)


def _yes(holds: bool) -> Said:
    return (RowState.APPLIES if holds else RowState.NO, None, None)


def _not_stated(*keys: str) -> Said:
    return RowState.UNKNOWN, Reason(Why.NOT_STATED, keys=keys), None


def _about_plant(row: Row, plant: Plant) -> Iterator[Said]:
    kind = plant.law.equipment
    if kind is None and (row.equipment or row.not_equipment):
        yield _not_stated("law.equipment")
    elif kind is not None:
        yield _yes((not row.equipment or kind in row.equipment) and kind not in row.not_equipment)
    if row.arrangement:
        built = plant.arrangement
        yield _not_stated("law.arrangement") if built is None else _yes(built in row.arrangement)
    if row.chiller is not None:
        found = plant.is_chiller
        key = "law.equipment" if kind is None else "evaporator.medium"
        yield _not_stated(key) if found is None else _yes(found == row.chiller)
    if row.transfer:
        sides = zip(("evaporator.medium", "condenser.medium"), plant.media, strict=True)
        missing = [key for key, medium in sides if medium is None]
        yield _not_stated(*missing) if plant.transfer is None else _yes(plant.transfer == row.transfer)
    for name in ("hermetically_sealed", "leak_detection_system", "product_below_minus_50", "cascade_primary"):
        wanted = getattr(row, name)
        yield _yes(wanted is None or wanted == bool(getattr(plant.law, name)))


def _about_gas(row: Row, plant: Plant) -> Iterator[Said]:
    inside = set(plant.groups)
    yield _yes(not row.gases or bool(inside & set(row.gases)))
    yield _yes(not row.with_ or bool(inside & set(row.with_)))
    yield _yes(not inside & set(row.without))
    parts = dict(plant.refrigerant.composition)
    yield _yes(not row.components or bool(set(parts) & set(row.components)))
    for name in row.components:
        if name in parts:
            yield RowState.APPLIES, None, Measured("share", (parts[name],) * 3, name=name)
    yield _yes(not row.refrigerants or plant.refrigerant.designation in row.refrigerants)
    safety_class = plant.refrigerant.safety_class.text
    if row.safety_classes and not safety_class:
        yield RowState.UNKNOWN, Reason(Why.NO_CLASS, (plant.refrigerant.designation,)), None
    elif row.safety_classes:
        is_inside = bool(set(safety_class.split("/")) & set(row.safety_classes))
        yield (RowState.APPLIES if is_inside else RowState.NO), None, Measured("class", None, name=safety_class)


def _about(limit: Limit, row: Row, plant: Plant) -> Said:
    found = _measure(limit.measure, row, plant)
    if isinstance(found, Reason):
        return RowState.UNKNOWN, found, None
    # Rounded so that 50 lb, kept in kilograms, is 50 lb again.
    low, expected, high = (round(value, 9) for value in found)
    if limit.too_low(high) or limit.too_high(low):
        return RowState.NO, None, None
    measured = Measured(limit.measure, (low, expected, high), limit)
    if any(limit.too_low(end) or limit.too_high(end) for end in (low, high)):
        keys = ("law.rated_capacity",) if limit.measure == "kW" else ()
        return RowState.DEPENDS, Reason(Why.STRADDLES, keys=keys, measured=measured), measured
    return RowState.APPLIES, None, measured


def _measure(measure: str, row: Row, plant: Plant) -> Range | Reason:
    """Return lowest, expected and highest value of a measure, or what is missing to tell it."""
    name = plant.refrigerant.designation
    if measure == "kW":
        capacity = plant.capacity_W
        return Reason(Why.NOT_STATED, keys=("law.rated_capacity",)) if capacity is None else _over(capacity, 1e3)
    gwp = None if row.gwp_basis == "none" else plant.gwp(row.gwp_basis)
    if measure in ("GWP", "t CO2e") and gwp is None:
        return Reason(Why.NO_GWP, (name, GWP_BASES.get(row.gwp_basis, row.gwp_basis)))
    if measure == "GWP" and gwp is not None:
        return (gwp,) * 3
    if plant.charge_kg is None:
        return Reason(Why.NO_CHARGE, (name,), keys=("plant.charge",))
    return _mass(measure, row, plant, plant.charge_kg)


def _mass(measure: str, row: Row, plant: Plant, charge_kg: Range) -> Range:
    if measure == "t CO2e":
        return plant.co2e_t(row.gwp_basis) or charge_kg
    if measure == "lb":
        return _over(charge_kg, POUND_KG)
    share = sum(plant.groups.get(group, 0.0) for group in row.gases) if row.gases else 1.0
    low, expected, high = charge_kg
    return low * share, expected * share, high * share


def _over(found: Range, unit: float) -> Range:
    low, expected, high = found
    return low / unit, expected / unit, high / unit
