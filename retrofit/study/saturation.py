"""Saturation of one refrigerant over temperature: the rows of a pressure-temperature table."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from retrofit.errors import OutsideValidRangeError
from retrofit.properties import Fluid, Grade, State, fluid, grade
from retrofit.refrigerants import Refrigerant, find


@dataclass(frozen=True)
class SaturationRow:
    """Saturated liquid and vapour at one temperature; None with a reason outside the model's range."""

    T_K: float
    p_bubble_Pa: float | None = None
    p_dew_Pa: float | None = None
    h_bubble_J_per_kg: float | None = None
    h_dew_J_per_kg: float | None = None
    density_bubble_kg_per_m3: float | None = None
    density_dew_kg_per_m3: float | None = None
    reason: str | None = None


@dataclass(frozen=True)
class SaturationTable:
    """Rows over temperature of one refrigerant, with the grade of its model."""

    refrigerant: Refrigerant
    grade: Grade
    rows: tuple[SaturationRow, ...]


def saturation_table(
    name: str, temperatures: Sequence[float], on_build: Callable[[str], None] | None = None
) -> SaturationTable:
    """Return saturation over temperature.

    Args:
        name: Refrigerant.
        temperatures: Temperatures. [K]
        on_build: Called with the designation before tables are built.
    Returns: The table; a temperature outside the model's range is a row with its reason.
    Raises: UnknownRefrigerantError, NoModelError, ModelFaultError.
    """
    refrigerant = find(name)
    behaviour = fluid(refrigerant.designation, on_build)
    rows = tuple(_row(behaviour, T) for T in temperatures)
    return SaturationTable(refrigerant, grade(behaviour, refrigerant), rows)


def _row(behaviour: Fluid, T_K: float) -> SaturationRow:
    try:
        bubble, dew = behaviour.bubble(behaviour.p_bubble(T_K)), behaviour.dew(behaviour.p_dew(T_K))
    except OutsideValidRangeError as error:
        return SaturationRow(T_K, reason=error.message)
    return SaturationRow(T_K, *_pair(bubble, dew, "p_Pa"), *_pair(bubble, dew, "h_J_per_kg"), *_densities(bubble, dew))


def _pair(bubble: State, dew: State, name: str) -> tuple[float, float]:
    return float(getattr(bubble, name)), float(getattr(dew, name))


def _densities(bubble: State, dew: State) -> tuple[float, float]:
    return _pair(bubble, dew, "density_kg_per_m3")
