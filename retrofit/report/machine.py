"""A result for machines: the JSON contract `retrofit.comparison/1` and the CSV table, both in SI base units."""

from __future__ import annotations

import csv
import io
from collections.abc import Mapping
from dataclasses import asdict, fields
from typing import Any

from retrofit.properties import Grade
from retrofit.refrigerants import GWP_BASES, Refrigerant
from retrofit.study import Comparison, Entry, Performance, Point
from retrofit.study.compare import RATIOS

COMPARISON_SCHEMA = "retrofit.comparison/1"


def comparison_json(comparison: Comparison) -> dict[str, Any]:
    """Return a result as the JSON object of the contract; what is not known is None.

    Args:
        comparison: An assessed result.
    """
    case = comparison.case
    return {
        "schema": COMPARISON_SCHEMA,
        "title": case.title,
        "case_file": case.path,
        "versions": dict(comparison.versions),
        "basis_notes": {
            "reading": case.duty.reading,
            "match": case.compare.match,
            "swept_volume_from": comparison.swept_volume_from,
            "quality": "vapour mass fraction; molar_quality is the mole fraction",
        },
        "existing": _entry(comparison.existing),
        "candidates": [_entry(entry) for entry in comparison.candidates],
        "defaults": [asdict(default) for default in case.defaults],
    }


def _entry(entry: Entry) -> dict[str, Any]:
    return {
        "refrigerant": entry.refrigerant.designation,
        "family": entry.family,
        "status": entry.status,
        "reason": entry.reason,
        "safety_class": entry.refrigerant.safety_class.value,
        **gwp_values(entry.refrigerant),
        "model": _grade(entry.grade),
        "duty": _performance(entry.duty, entry.points),
        "compressor": _performance(entry.compressor, entry.points),
        "plant": None,
        "relative": dict(entry.relative) or None,
        "T_discharge_difference_K": entry.T_discharge_difference_K,
        "verdict": entry.verdict,
        "findings": [asdict(finding) | {"text": finding.text} for finding in entry.findings],
        "cautions": [asdict(caution) for caution in entry.cautions],
    }


def gwp_values(refrigerant: Refrigerant) -> dict[str, float | None]:
    """Return the GWP of a refrigerant on every basis, by the name of the basis."""
    return {basis: getattr(refrigerant, basis).number for basis in GWP_BASES}


def _grade(grade: Grade | None) -> dict[str, Any] | None:
    if grade is None:
        return None
    return {
        "grade": grade.word,
        "estimated_pairs": [list(pair) for pair in grade.estimated_pairs],
        "bubble_1atm_difference_K": grade.bubble_difference_K,
        "dew_1atm_difference_K": grade.dew_difference_K,
        "text": grade.text,
    }


def _performance(found: Performance[float] | None, points: tuple[Point, ...]) -> dict[str, Any] | None:
    if found is None:
        return None
    return asdict(found) | {"states": [asdict(point) for point in points]}


def comparison_csv(comparison: Comparison) -> str:
    """Return a result as CSV, one refrigerant a line; the unit stands in each column's name.

    Args:
        comparison: An assessed result.
    """
    rows = [_row(entry) for entry in comparison.entries]
    text = io.StringIO()
    writer = csv.DictWriter(text, fieldnames=list(rows[0]), lineterminator="\n")
    writer.writeheader()
    writer.writerows(rows)
    return text.getvalue()


def _row(entry: Entry) -> dict[str, Any]:
    row: dict[str, Any] = {
        "refrigerant": entry.refrigerant.designation,
        "family": entry.family,
        "status": entry.status,
        "reason": entry.reason,
        "verdict": entry.verdict,
        "safety_class": entry.refrigerant.safety_class.value,
        **gwp_values(entry.refrigerant),
        "model_grade": entry.grade.word if entry.grade else None,
    }
    for basis in ("duty", "compressor"):
        found = getattr(entry, basis)
        for item in fields(Performance):
            row[f"{basis}.{item.name}"] = getattr(found, item.name) if found else None
    ratios: Mapping[str, float] = entry.relative
    return row | {f"relative.{name}": ratios.get(name) for name, _, _ in RATIOS}
