"""Running every gate on every refrigerant of a result, and the verdict that follows from what they found."""

from __future__ import annotations

import datetime
from collections.abc import Sequence
from dataclasses import replace

from retrofit.case import Case, is_untouched
from retrofit.checks.gates import GATES, GATES_OF_NEW_PLANT
from retrofit.checks.hardware import hardware_findings, hardware_rows
from retrofit.checks.law import law_findings, with_law
from retrofit.checks.law.reader import tables_for
from retrofit.checks.room import room_check, room_findings
from retrofit.checks.thresholds import thresholds_for
from retrofit.checks.ways_out import with_way_out
from retrofit.study import Comparison, Entry, Finding, Level, Verdict

LEVELS = tuple(Level)
# The order of checking: what rules options out first in practice comes first. A code counts from its beginning.
ORDER = (
    "placeholders",
    "not-computed",
    "law",
    "ozone",
    "pressure-class",
    "high-side",
    "standstill",
    "relief",
    "hottest-day",
    "near-critical",
    "safety-class",
    "room",
    "glide",
    "vacuum",
    "discharge",
    "pressure-ratio",
    "motor",
    "compressor",
    "metals",
    "oil",
    "capacity",
    "condenser",
)


PLACEHOLDERS = Finding(
    "placeholders",
    Level.UNKNOWN,
    "The values are placeholders",
    "The case is the template as it was written; no value in it is of a plant.",
    "Fill in the case first.",
    "the case file",
    ("plant.refrigerant", "duty.cooling", "duty.evaporating", "duty.condensing"),
    decisive=True,
)


def assess(comparison: Comparison, on: datetime.date | None = None) -> Comparison:
    """Return the result with findings, the hardware table and a verdict for every refrigerant.

    Args:
        comparison: A result.
        on: The day to read the tables of law for; today if left out.
    Returns: The same numbers, with findings (worst first), hardware, law and verdicts.
    Raises: CaseFileError if the case sets a threshold that there is not, or a table of law of the user's is faulty.
    """
    thresholds_for(comparison.case)
    comparison = with_law(comparison, on)
    existing = _assessed(comparison, comparison.existing)
    candidates = tuple(_assessed(comparison, entry) for entry in comparison.candidates)
    return replace(comparison, existing=existing, candidates=candidates)


def require_usable(case: Case) -> None:
    """Do nothing if `assess` can judge results of a case: its thresholds and the user's tables of law are right.

    Args:
        case: The case, as read.
    Raises: CaseFileError as `assess` does, before anything is computed.
    """
    thresholds_for(case)
    if case.law is not None and case.law.jurisdiction is not None:
        tables_for(case.path)


def _assessed(comparison: Comparison, entry: Entry) -> Entry:
    gates = GATES_OF_NEW_PLANT if entry.is_new_plant else GATES
    found = [finding for gate in gates for finding in gate(comparison, entry)]
    rows = hardware_rows(comparison, entry, found)
    found += hardware_findings(rows, entry is comparison.existing)
    found += law_findings(comparison, entry)
    room = room_check(comparison, entry)
    found += room_findings(comparison, entry, room)
    if entry.status != "ok":
        found.insert(0, _not_computed(entry))
    if is_untouched(comparison.case.text):
        found.insert(0, PLACEHOLDERS)
    entry = replace(entry, room=room)
    found = [with_way_out(comparison, entry, finding) for finding in found]
    found.sort(key=_place)
    return replace(entry, findings=tuple(found), hardware=rows, room=room, verdict=verdict(found))


def _place(finding: Finding) -> tuple[int, int]:
    """Return where a finding stands: by level, then in the order in which options die."""
    asked = (place for place, code in enumerate(ORDER) if finding.code.startswith(code))
    return LEVELS.index(finding.level), next(asked, len(ORDER))


def _not_computed(entry: Entry) -> Finding:
    return Finding(
        "not-computed", Level.UNKNOWN, "Not computed", f"{entry.reason}.", "", "limits of this tool", decisive=True
    )


def verdict(findings: Sequence[Finding]) -> Verdict:
    """Return the verdict: a stop decides, then a decisive fact that is missing, then what is to be done.

    Args:
        findings: What the gates found.
    """
    levels = {finding.level for finding in findings}
    if Level.STOP in levels:
        return Verdict.NOT_SUITABLE
    if any(finding.level == Level.UNKNOWN and finding.decisive for finding in findings):
        return Verdict.OPEN
    return Verdict.MODIFICATIONS if levels & {Level.UNKNOWN, Level.WORK} else Verdict.SUITABLE
