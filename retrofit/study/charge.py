"""The charge with another refrigerant: of the largest independent circuit, and of the whole plant."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.case import Case, Option
from retrofit.equipment.vessels import charge_estimate
from retrofit.study.result import Entry

_PLANT = "whole plant"
LARGEST_CIRCUIT = "largest circuit"


@dataclass(frozen=True)
class CircuitCharge:
    """A charge that one leak can let out.

    Attributes:
        lowest_kg, expected_kg, highest_kg: The charge; None where `reason` says why.
        of: "largest circuit", or "whole plant" if the largest circuit is not given: no circuit holds more.
        reason: What is missing.
    """

    lowest_kg: float | None
    expected_kg: float | None
    highest_kg: float | None
    of: str
    reason: str = ""


def circuit_charge(case: Case, entry: Entry, existing: Entry) -> CircuitCharge:
    """Return the charge of the largest independent circuit with a refrigerant.

    Args:
        case: The case.
        entry: The refrigerant.
        existing: The refrigerant in the plant, whose charge is taken as given, without a range.
    Returns: Of a new plant its own charge, never one estimated from the existing plant.
    Source: the same volume of liquid, m_new = m_old rho_new / rho_old (`charge_estimate`).
    """
    option = option_of(case, entry)
    if entry.is_new_plant:
        own = option.largest_circuit_kg if option else None
        return plant_charge(case, entry, existing) if own is None else CircuitCharge(own, own, own, LARGEST_CIRCUIT)
    circuit = case.room.largest_circuit_kg if case.room else None
    if circuit is not None:
        return _with(entry, existing, circuit, LARGEST_CIRCUIT)
    found = plant_charge(case, entry, existing)
    if found.expected_kg is None and case.plant.charge_kg is None:
        return CircuitCharge(None, None, None, "", "`largest_circuit` in [room], or `charge` in [plant]")
    return found


def option_of(case: Case, entry: Entry) -> Option | None:
    """Return what the case says of an option, None if nothing.

    Args:
        case: The case.
        entry: The option.
    """
    return case.options.by_refrigerant.get(entry.refrigerant.designation) if case.options else None


def plant_charge(case: Case, entry: Entry, existing: Entry) -> CircuitCharge:
    """Return the charge of the whole plant with an option.

    Args:
        case: The case.
        entry: The option.
        existing: The refrigerant in the plant.
    Returns: The charge that the option gives; else, unless it is a new plant, today's or an estimate from today's.
    Source: the same volume of liquid, m_new = m_old rho_new / rho_old (`charge_estimate`).
    """
    option = option_of(case, entry)
    if option and option.charge_kg is not None:
        return CircuitCharge(option.charge_kg, option.charge_kg, option.charge_kg, _PLANT)
    if entry.is_new_plant:
        reason = f"`charge` in [options.{entry.refrigerant.designation}]: the charge of the new plant"
        return CircuitCharge(None, None, None, _PLANT, reason)
    if case.plant.charge_kg is None:
        return CircuitCharge(None, None, None, "", "`charge` in [plant]")
    return _with(entry, existing, case.plant.charge_kg, _PLANT)


def _with(entry: Entry, existing: Entry, today: float, of: str) -> CircuitCharge:
    """Return the charge that takes the place of today's."""
    if entry.refrigerant.designation == existing.refrigerant.designation:
        return CircuitCharge(today, today, today, of)
    numbers = entry.hardware_numbers
    old, new = (numbers.old.liquid_density_kg_per_m3, numbers.new.liquid_density_kg_per_m3) if numbers else (None, None)
    if old is None or new is None:
        name = entry.refrigerant.designation
        return CircuitCharge(None, None, None, of, f"density of the liquid of {name}, which is not computed")
    found = charge_estimate(today, old, new)
    return CircuitCharge(float(found.lowest_kg), float(found.expected_kg), float(found.highest_kg), of)
