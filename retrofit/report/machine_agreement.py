"""The readings and the duty held against the model, and the calibration, for machines: parts of the JSON contracts."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from retrofit.checks.reading_words import (
    calibration_words,
    contradiction_words,
    duty_words,
    outcome_words,
    reason_words,
)
from retrofit.checks.readings import Held, duty_held, readings_held
from retrofit.study import Comparison
from retrofit.study.agreement import Reason
from retrofit.units import SI, told

UNITS = {"power": "W", "cooling": "W", "heat flow": "W", "current": "A", "temperature": "K", "ratio": "1"}


def agreement_json(comparison: Comparison) -> dict[str, Any]:
    """Return what is read beside the model, the duty beside what the plant gives, and the calibration.

    Args:
        comparison: A result.
    """
    duty = duty_held(comparison)
    return {
        "readings_against_model": [_held(held) for held in readings_held(comparison)],
        "duty_against_plant": {
            "state": duty.state.value,
            "duty_W": duty.duty_W,
            "plant_gives_W": duty.given_W,
            "share": duty.share,
            "limits": list(duty.limits),
            "text": told(duty_words(comparison), SI) or None,
        },
        "calibration": _calibration(comparison),
        "contradictions": list(contradiction_words(comparison, SI)),
    }


def _calibration(comparison: Comparison) -> dict[str, Any] | None:
    """Return the losses taken from the power read, or why they are not; None if the case does not ask for them."""
    found = comparison.calibration
    if found is None:
        return None
    return {
        "state": "applied" if found.is_applied else "not applied",
        "power_read_W": found.read_W,
        "power_modelled_W": found.modelled_W,
        "ratio": found.ratio,
        "motor_and_drive_efficiency": found.efficiency,
        "allowed_ratio_to_shaft_power": list(found.allowed),
        "reason": _reason(found.reason),
        "text": told(" ".join(calibration_words(comparison)), SI),
    }


def _reason(reason: Reason | None) -> dict[str, Any] | None:
    return (
        None if reason is None else {"why": reason.why.value, "keys": list(reason.keys), "text": reason_words(reason)}
    )


def _held(held: Held) -> dict[str, Any]:
    beside = held.beside
    return {
        "quantity": beside.quantity.value,
        "outcome": held.outcome.value,
        "side": held.side.value if held.side else None,
        "read": beside.read,
        "modelled": beside.modelled,
        "unit": UNITS[beside.kind],
        "difference": beside.difference,
        "difference_unit": "K" if beside.kind == "temperature" else "1, of the model",
        "limit": held.limit,
        "limit_source": held.source,
        "reason": _reason(beside.reason),
        "causes": [asdict(cause) | {"of": [str(name) for name in cause.of]} for cause in held.causes],
        "text": told(outcome_words(held), SI),
    }
