"""The charge a plant takes of each refrigerant: today's as given, a candidate's as a first estimate."""

from __future__ import annotations

from retrofit.equipment.vessels import charge_estimate
from retrofit.study.result import Comparison, Entry

LIQUID = "expansion valve inlet"


def charge_range_kg(comparison: Comparison, entry: Entry) -> tuple[float, float, float] | None:
    """Return lowest, expected and highest charge of a refrigerant.

    Args:
        comparison: A result.
        entry: One of its refrigerants.
    Returns: Today's charge three times for the existing one; for a candidate the estimate of the hardware's numbers,
        or by the ratio of liquid densities; None if today's charge or a density is not known. [kg]
    Source: `retrofit.equipment.vessels.charge_estimate`.
    """
    today_kg = comparison.case.plant.charge_kg
    if today_kg is None or entry.refrigerant.designation == comparison.existing.refrigerant.designation:
        return None if today_kg is None else (today_kg, today_kg, today_kg)
    filling = entry.hardware_numbers.filling if entry.hardware_numbers else None
    if filling:
        return filling.lowest_kg, filling.expected_kg, filling.highest_kg
    old, new = _liquid_density(comparison.existing), _liquid_density(entry)
    if old is None or new is None:
        return None
    found = charge_estimate(today_kg, old, new)
    return float(found.lowest_kg), float(found.expected_kg), float(found.highest_kg)


def _liquid_density(entry: Entry) -> float | None:
    """Return the density of liquid before the expansion valve, None without states. [kg/m3]"""
    return next((point.density_kg_per_m3 for point in entry.points if point.name == LIQUID), None)
