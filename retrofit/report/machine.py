"""A result for machines: the JSON contract `retrofit.comparison/1` and the CSV table, both in SI base units."""

from __future__ import annotations

import csv
import datetime
import io
from collections.abc import Mapping
from dataclasses import asdict, fields
from typing import Any

from retrofit.checks.survey import OpenKey, survey
from retrofit.properties import Grade
from retrofit.refrigerants import GWP_BASES, Refrigerant
from retrofit.report.machine_agreement import agreement_json
from retrofit.study import Baseline, Comparison, Component, Entry, Finding, Installed, Performance, Point
from retrofit.study.bands import pair_bands
from retrofit.study.compare import RATIOS
from retrofit.study.law import LawBasis, LawCheck, LawRow, Reason
from retrofit.study.law_words import DEFERENCE, line, moment_text, problems, reason_text
from retrofit.units import SI, all_told

# Unit of the SI number of each kind of quantity that a component is measured by.
UNITS = {
    "pressure": "Pa",
    "gauge pressure": "Pa above the air at the plant",
    "pressure difference": "Pa",
    "line pressure drop": "Pa",
    "momentum flux": "Pa",
    "temperature": "K",
    "temperature difference": "K",
    "cooling": "W",
    "heat flow": "W",
    "power": "W",
    "current": "A",
    "mass": "kg",
    "diameter": "m",
    "velocity": "m/s",
    "ratio": "1",
    "fraction": "1",
}
COMPARISON_SCHEMA = "retrofit.comparison/1"


def comparison_json(comparison: Comparison) -> dict[str, Any]:
    """Return a result as the JSON object of the contract; what is not known is None.

    Args:
        comparison: An assessed result.
    """
    case = comparison.case
    found = {
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
        "existing": _entry(comparison.existing, comparison.existing),
        "candidates": [_entry(comparison.existing, entry) for entry in comparison.candidates],
        "defaults": [asdict(default) for default in case.defaults],
        "open": [_open(item) for item in survey(comparison)],
        "baseline": _baseline(comparison.baseline),
        **agreement_json(comparison),
        "law": _law_basis(comparison.law),
    }
    return all_told(found, SI)


def _open(item: OpenKey) -> dict[str, Any]:
    """Return a key that is missing: what it is, where it is read, how it is written, and what it settles."""
    settles = [{"part": u.part, "refrigerant": u.refrigerant, "code": u.code} for u in item.settles]
    return {**asdict(item.facts), "decisive": item.decisive, "components": item.components, "settles": settles}


def _baseline(found: Baseline | None) -> dict[str, Any] | None:
    if found is None:
        return None
    return {
        "derived": [asdict(item) for item in found.derived],
        "problems": [_finding(finding) for finding in found.problems],
        "missing": list(found.missing),
    }


def _law(found: LawCheck | None) -> dict[str, Any] | None:
    """Return what the tables of law say, each row with its paragraph for a reader."""
    if found is None:
        return None
    rows = [_law_row(row) for row in found.rows]
    moments = [
        {
            "day": moment.day.isoformat(),
            "change": moment.change,
            "row": moment.row.id if moment.row else None,
            "text": moment_text(moment),
        }
        for moment in found.timeline
    ]
    bans = {"strictest_ban": found.strictest, "next_ban": found.next_ban}
    return {
        **_plain(asdict(found)),
        "rows": rows,
        "timeline": moments,
        "unknown": [_reason(reason) for reason in found.unknown],
        **{key: row.id if row else None for key, row in bans.items()},
    }


def _law_row(row: LawRow) -> dict[str, Any]:
    reasons = [_reason(reason) for reason in row.reasons]
    return {**_plain(asdict(row)), "verified": row.is_verified, "reasons": reasons, "line": line(row)}


def _reason(reason: Reason) -> dict[str, Any]:
    return {**_plain(asdict(reason)), "text": reason_text(reason)}


def _law_basis(found: LawBasis | None) -> dict[str, Any] | None:
    if found is None:
        return None
    return {**_plain(asdict(found)), "problems": list(problems(found)), "deference": DEFERENCE}


def _plain(value: Any) -> Any:
    """Return data with every date as its text."""
    if isinstance(value, dict):
        return {key: _plain(item) for key, item in value.items()}
    if isinstance(value, list | tuple):
        return [_plain(item) for item in value]
    return value.isoformat() if isinstance(value, datetime.date) else value


def _finding(finding: Finding) -> dict[str, Any]:
    return asdict(finding) | {"text": finding.text}


def _entry(existing: Entry, entry: Entry) -> dict[str, Any]:
    return {
        "refrigerant": entry.refrigerant.designation,
        "family": entry.family,
        "status": entry.status,
        "reason": entry.reason,
        "safety_class": entry.refrigerant.safety_class.value,
        **gwp_values(entry.refrigerant),
        "model": _grade(entry.grade),
        "bands": _bands(existing, entry),
        "duty": _performance(entry.duty, entry.points),
        "compressor": _performance(entry.compressor, entry.points),
        "plant": _plant(entry.plant),
        "plant_reason": entry.plant_reason,
        "relative": dict(entry.relative) or None,
        "T_discharge_difference_K": entry.T_discharge_difference_K,
        "verdict": entry.verdict,
        "hardware": [_component(component) for component in entry.hardware],
        "law": _law(entry.law),
        "room": asdict(entry.room) if entry.room else None,
        "findings": [_finding(finding) for finding in entry.findings],
        "cautions": [asdict(caution) for caution in entry.cautions],
    }


def _plant(found: Installed | None) -> dict[str, Any] | None:
    if found is None:
        return None
    return asdict(found.full) | {
        "same_cooling": asdict(found.same_cooling),
        "operation": asdict(found.operation) | {"mean_electric_W": found.mean_electric_W},
        "electric_W": found.electric_W,
        "is_covered": found.is_covered,
        "ua_factors": {
            way: asdict(one) for way, one in zip(("evaporator", "condenser"), found.ua_factors, strict=True)
        },
        "cooling_with_equal_ua_W": found.cooling_with_equal_ua_W,
        "conductances_W_per_K": list(found.conductances_W_per_K),
        "reason": None,
    }


def _component(component: Component) -> dict[str, Any]:
    measures = [asdict(measure) | {"unit": UNITS[measure.kind]} for measure in component.measures]
    return asdict(component) | {"measures": measures}


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


def _bands(existing: Entry, entry: Entry) -> dict[str, Any]:
    """Return the 90 % bands of ratios to the existing refrigerant, relative and in kelvin, and why that wide."""
    bands = pair_bands(existing, entry)
    names = {"T_discharge": "T_discharge_K"}
    deciding = bands["pressure"]
    return {names.get(name, name): band.value for name, band in bands.items()} | {
        "evidence": entry.evidence,
        "evidence_reason": bands["cop"].evidence_reason,
        "boiling_point_offset_K": deciding.offset_K,
        "reason": deciding.reason,
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
        "cautions": "; ".join(caution.title for caution in entry.cautions),
    }
    for basis in ("duty", "compressor"):
        found = getattr(entry, basis)
        for item in fields(Performance):
            row[f"{basis}.{item.name}"] = getattr(found, item.name) if found else None
    ratios: Mapping[str, float] = entry.relative
    return row | {f"relative.{name}": ratios.get(name) for name, _, _ in RATIOS}
