"""The remaining life as CSV, one option a line: what `retrofit.year/1` says of it, without series and maps."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterator, Mapping
from typing import Any

from retrofit.report.machine_year import year_json
from retrofit.study import Comparison

SERIES = frozenset((
    "year.monthly_J", "year.by_air", "year.map", "emissions.years", "emissions.direct_by_year_kg",
    "emissions.indirect_by_year_kg", "money.first_cost_items", "money.cumulative_saving_by_year_currency",
    "certainty.swings",
))  # fmt: skip


def year_csv(comparison: Comparison) -> str:
    """Return the remaining life as CSV, one option a line, in SI base units; the unit stands in each column's name.

    Args:
        comparison: An assessed result with its remaining life.
    Returns: A heading, and a line an option; the names are those of the JSON, a table within a table with a point.
    """
    told = year_json(comparison)
    entries = {entry.refrigerant.designation: entry for entry in comparison.entries}
    lines = []
    for option in told["options"]:
        entry = entries[option["refrigerant"]]
        cautions = "; ".join(caution.title for caution in entry.cautions)
        safety = {"safety_class": entry.refrigerant.safety_class.value, "cautions": cautions}
        calibrated = {"calibration": told["calibration"]["text"]} if told["calibration"] else {}
        first = {"refrigerant": option["refrigerant"], "deed": option["deed"], **safety, "currency": told["currency"]}
        first |= calibrated
        lines.append(dict(_cells(first | option)))
    text = io.StringIO()
    writer = csv.DictWriter(text, fieldnames=_names(lines), extrasaction="ignore", lineterminator="\n")
    writer.writeheader()
    writer.writerows(lines)
    return text.getvalue()


def _cells(found: Mapping[str, Any], path: str = "") -> Iterator[tuple[str, Any]]:
    """Yield names and values; a list of texts is one text."""
    for key, value in found.items():
        name = f"{path}{key}"
        if name in SERIES:
            continue
        if isinstance(value, Mapping):
            yield from _cells(value, f"{name}.")
        else:
            yield name, "; ".join(value) if isinstance(value, list) else value


def _names(lines: list[dict[str, Any]]) -> list[str]:
    """Return every name, those of a table together; what is a table for one option is no column for another."""
    found = list(dict.fromkeys(name for line in lines for name in line))
    tables = list(dict.fromkeys(name.partition(".")[0] for name in found))
    columns = [name for name in found if not any(other.startswith(f"{name}.") for other in found)]
    return sorted(columns, key=lambda name: tables.index(name.partition(".")[0]))
