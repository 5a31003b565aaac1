"""The plant as found: what the readings say, where they disagree, and the case with readings instead of assumptions."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from retrofit.case import Case, Default, Readings
from retrofit.properties import Fluid
from retrofit.study import against_case, derivation, doubts
from retrofit.study.ledger import Ledger
from retrofit.study.result import Baseline, Derived

Stage = Callable[[Ledger, Case, Fluid], None]
# Each stage derives from what the ones before have left standing, or checks it.
STAGES: tuple[Stage, ...] = (
    derivation.saturation,
    doubts.pressures,
    against_case.duty,
    derivation.superheats,
    doubts.superheats,
    derivation.exchangers,
    doubts.crossings,
    derivation.states,
    derivation.compression,
    doubts.compression,
    derivation.efficiency,
    derivation.power,
    doubts.power,
    derivation.flows,
    doubts.flows,
    derivation.heats,
    derivation.balance,
    doubts.balance,
    derivation.outcome,
    against_case.written,
)
READINGS = {
    str(field.alias): name
    for name, field in Readings.model_fields.items()
    if name not in ("date", "load", "ambient_K", "calibrate")
}
MOTOR = "compressor.motor_efficiency"
MACHINE = {
    "compressor.swept_volume": "swept_volume_m3_per_s",
    MOTOR: "motor_efficiency",
}


def baseline(case: Case, existing: Fluid) -> Baseline | None:
    """Return how the plant runs today, from the readings of the case.

    A problem that puts readings in doubt starts the derivation again without them, until no further one appears.

    Args:
        case: The case.
        existing: The refrigerant in the plant.
    Returns: What could be derived, what is wrong, and what is missing; None if the case has no readings.
    """
    if case.readings is None:
        return None
    book = Ledger(_given(case), derivation.NAMES)
    while True:
        known = dict(book.doubts)
        book = Ledger(book.given, derivation.NAMES, doubts=dict(known), struck=list(book.struck))
        against_case.part_load(book, case)
        for stage in STAGES:
            stage(book, case, existing)
        if book.doubts == known:
            break
    problems = tuple(dict.fromkeys((*book.struck, *book.notes)))
    return Baseline(book.derived(), problems, book.missing(READINGS | MACHINE), dict(book.doubts))


def _given(case: Case) -> dict[str, float]:
    """Return the readings, and what the case says of the compressor, by their keys in the file."""
    read = {key: getattr(case.readings, name) for key, name in READINGS.items()}
    machine = {key: getattr(case.compressor, name) for key, name in MACHINE.items()}
    if machine[MOTOR] is not None and case.compressor.drive_efficiency is not None:
        machine[MOTOR] *= case.compressor.drive_efficiency  # from the power read to the shaft
    return {key: float(value) for key, value in (read | machine).items() if value is not None}


def taken_over(case: Case, found: Baseline | None) -> dict[str, Derived]:
    """Return what the readings say in place of a default of the case, by the key of the default.

    Args:
        case: The case, before or after the readings have taken their place.
        found: How its plant runs today.
    """
    derived = {item.code: item for item in found.derived} if found else {}
    taken = {key: derived[code] for key, code in against_case.TAKEN_OVER.items() if code in derived}
    return {default.key: taken[default.key] for default in case.defaults if default.key in taken}


def case_with_readings(case: Case, found: Baseline | None) -> Case:
    """Return the case with what the readings say in place of what it assumed; what was written stays.

    Args:
        case: The case.
        found: How its plant runs today.
    Returns: The case; each default that was replaced says from which readings.
    """
    taken = taken_over(case, found)
    if not taken:
        return case
    return replace(
        case,
        duty=case.duty.model_copy(update=_fields(taken, "duty", "_K")),
        compressor=case.compressor.model_copy(update=_fields(taken, "compressor", "")),
        defaults=tuple(
            _from_readings(default, taken[default.key]) if default.key in taken else default
            for default in case.defaults
        ),
    )


def _fields(taken: dict[str, Derived], table: str, ending: str) -> dict[str, float]:
    """Return the values of one table by the names of its fields."""
    start = f"{table}."
    return {
        f"{key.removeprefix(start)}{ending}": _allowed(item) for key, item in taken.items() if key.startswith(start)
    }


def _allowed(item: Derived) -> float:
    """Return a value without what rounding lets it pass its natural ends: 0, and 1 for an efficiency."""
    return max(min(item.value, 1.0) if item.kind == "fraction" else item.value, 0.0)


def _from_readings(default: Default, item: Derived) -> Default:
    unit = " K" if item.kind == "temperature difference" else ""
    return Default(default.key, f"{_allowed(item):.3g}{unit}", f"from readings: {item.made_from}")
