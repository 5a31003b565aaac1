"""What an option is: keeping the refrigerant, converting the plant, or replacing it by a new one."""

from __future__ import annotations

from retrofit.case import Case
from retrofit.refrigerants import Refrigerant, change_cautions
from retrofit.study.states import Family

# Refrigerants that boil this cold at 1 atm have pressures that only a plant built for them holds
# and their like, R-410A and R-32 (-52 degC) not among them. Common practice.
VERY_HIGH_PRESSURE_BELOW_K = 218.15
SUBLIMES = "not applicable"  # no boiling point at 1 atm, as R-744 has none


def family_of(case: Case, existing: Refrigerant, candidate: Refrigerant) -> Family:
    """Return what putting a candidate in means: converting this plant, or a new one.

    Args:
        case: The case.
        existing: The refrigerant in the plant.
        candidate: The candidate.
    Returns: REPLACE where the case describes a new plant for it, where its safety class is more hazardous, or where
        its pressures are of another order than those the plant was built for; else CONVERT.
    """
    if is_new_plant(case, candidate):
        return Family.REPLACE
    if needs_high_pressure_plant(candidate) and not needs_high_pressure_plant(existing):
        return Family.REPLACE
    is_step_known = existing.safety_class.text and candidate.safety_class.text
    return Family.REPLACE if is_step_known and change_cautions(existing, candidate) else Family.CONVERT


def is_new_plant(case: Case, candidate: Refrigerant) -> bool:
    """Return whether the case describes a new plant for a candidate: its price, or its seasonal COP.

    Args:
        case: The case.
        candidate: The candidate.
    """
    option = case.options.by_refrigerant.get(candidate.designation) if case.options else None
    is_today = candidate.designation == case.plant.refrigerant
    return option is not None and not is_today and (option.new_plant is not None or option.seasonal_cop is not None)


def needs_high_pressure_plant(refrigerant: Refrigerant) -> bool:
    """Return whether a refrigerant needs a plant built for its pressures.

    Args:
        refrigerant: The refrigerant.
    """
    boiling = refrigerant.bubble_1atm_K
    if boiling.number is None:
        return boiling.status == SUBLIMES
    return boiling.number < VERY_HIGH_PRESSURE_BELOW_K
