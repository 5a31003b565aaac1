"""The hardware table: component by component keep, adjust, replace or unknown, with numbers and threshold."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from retrofit.checks.hardware import flow, machine, materials, pressures, settings
from retrofit.checks.hardware.rows import View
from retrofit.checks.thresholds import thresholds_for
from retrofit.study import Comparison, Component, Entry, Finding

# Whose finding is one of the gates', or part of the work that every conversion needs.
FOUND_BY_GATES = (
    *("high-side", "vacuum", "near-critical", "discharge-temperature", "pressure-ratio", "motor", "displacement"),
    *("condenser", "evaporator", "oil", "drier", "standstill", "relief"),
)
# Beyond these a refrigerant is not put into the plant as it is.
STOPS = ("metals",)


def hardware_rows(comparison: Comparison, entry: Entry, findings: Sequence[Finding]) -> tuple[Component, ...]:
    """Return the hardware table of a refrigerant: of a new plant none, without numbers only what needs none.

    Args:
        comparison: The result.
        entry: The refrigerant.
        findings: What the gates found of it.
    """
    view = View(comparison, entry, thresholds_for(comparison.case), findings)
    if entry.is_new_plant:
        return ()
    makers = [*pressures.ROWS_AT_REST, *materials.ALWAYS]
    if entry.hardware_numbers is not None and entry.duty is not None:
        numbered = (*pressures.ROWS, *machine.ROWS, *flow.ROWS, *materials.NUMBERED)
        makers = [*numbered, *materials.ALWAYS, *settings.ROWS]
    return tuple(row for maker in makers for row in maker(view))


def hardware_findings(rows: Sequence[Component], is_today: bool) -> Iterator[Finding]:
    """Yield a finding for each component that has to be replaced and that no gate speaks of.

    Args:
        rows: The hardware table.
        is_today: Whether it is that of the refrigerant in the plant.
    """
    for row in rows:
        if row.verdict != "replace" or row.code in FOUND_BY_GATES:
            continue
        level = "stop" if row.code in STOPS else "work"
        advice = row.ask if is_today or level == "stop" else f"Replace it. {row.ask}".strip()
        yield Finding(row.code, level, row.name, row.reason, advice, row.source)
