"""The job card and commissioning sheet of one candidate alone, for those who go to the plant."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from datetime import datetime
from pathlib import PurePath
from typing import ClassVar

from retrofit.checks import not_checked
from retrofit.checks.answer import open_words
from retrofit.checks.changeover import Chosen, changeover_of
from retrofit.errors import ReportError
from retrofit.refrigerants import find
from retrofit.report.cautioning import DEFERENCE, CautionGroup, caution_groups
from retrofit.report.commissioning import Sheet, sheet
from retrofit.report.guard import POLICY
from retrofit.report.jobcard import Job
from retrofit.report.judging import spelled
from retrofit.report.page import SYSTEM_WORDS, time_text
from retrofit.report.plain import css_string, plain
from retrofit.report.practice import Method, method
from retrofit.study import Comparison, Entry
from retrofit.units import SI, UnitSystem, listed, told

SECTIONS = ("cautions", "method", "commissioning", "limits")


@dataclass(frozen=True)
class SiteCopy:
    """Everything that the template of the site copy shows; `against` is why it would be refused, `despite` the reason
    for which it is written all the same, `open_facts` the decisive facts that are missing."""

    template: ClassVar[str] = "commission.html"

    policy: str
    title: str
    title_css: str
    units: str
    made_at: str
    case_file: str
    versions: tuple[tuple[str, str], ...]
    number: Mapping[str, str]
    where: Mapping[str, str]
    deference: str
    against: str
    despite: str
    open_facts: tuple[str, ...]
    cautions: tuple[CautionGroup, ...]
    method: Method
    commissioning: tuple[Sheet, ...]
    not_checked: tuple[str, ...]


def candidate_named(comparison: Comparison, name: str) -> Entry:
    """Return the candidate of a result by its name, however it is spelt.

    Args:
        comparison: A result.
        name: The refrigerant. [-]
    Raises: UnknownRefrigerantError; ReportError for a refrigerant that is no candidate of the case.
    """
    designation = find(name).designation
    for entry in comparison.candidates:
        if entry.refrigerant.designation == designation:
            return entry
    names = listed((entry.refrigerant.designation for entry in comparison.candidates), "and")
    raise ReportError(f"{designation} is no candidate of this case; its candidates are {names}")


def _against(entry: Entry) -> str:
    """Return what stops an entry, or that it is not computed, as a text; empty if neither."""
    found = entry.stops or (entry.open_facts if not entry.is_computed else ())
    return "; ".join(spelled(f"{finding.title}: {finding.fact.rstrip('.')}") for finding in found)


def _refuse(entry: Entry, despite: str | None) -> None:
    name = entry.refrigerant.display_name
    if entry.is_new_plant:
        raise ReportError(
            f"{name} would be a new plant, whose maker writes its commissioning; a job card here is for changing the "
            "refrigerant of the existing plant"
        )
    if (against := _against(entry)) and not (despite or "").strip():
        state = "is stopped" if entry.stops else "is not computed"
        raise ReportError(
            f'{name} {state}, so no job card is written: {told(against, SI)}. With --despite "REASON" it is written '
            "with this and your reason on top"
        )


def build_site_copy(
    comparison: Comparison,
    entry: Entry,
    units: UnitSystem,
    made_at: datetime,
    T_inlet_today_K: float | None = None,
    despite: str | None = None,
) -> SiteCopy:
    """Return everything the site copy shows.

    Args:
        comparison: An assessed result.
        entry: The candidate.
        units: The reader's units.
        made_at: The time to print.
        T_inlet_today_K: Temperature at the inlet of the condenser on the day, None if not known. [K]
        despite: Why it is written although a check stops it, or it is not computed; None if nothing of that is meant.
    Raises: ReportError for what is stopped or not computed without such a reason, and for a new plant.
    """
    _refuse(entry, despite)
    alone = replace(comparison, candidates=(entry,))
    job = Job(alone, changeover_of(alone, entry, T_inlet_today_K), units)
    asked = Chosen((entry,), f"For {entry.refrigerant.designation}, as asked.", ())
    title = plain(comparison.case.title)
    return SiteCopy(
        policy=POLICY,
        title=title,
        title_css=css_string(title),
        units=SYSTEM_WORDS[units.name],
        made_at=time_text(made_at),
        case_file=plain(PurePath(comparison.case.path).name),
        versions=tuple(comparison.versions.items()),
        number={name: str(place) for place, name in enumerate(SECTIONS, start=1)},
        where={name: f"section {place}" for place, name in enumerate(SECTIONS, start=1)},
        deference=DEFERENCE,
        against=_against(entry),
        despite=plain(despite or "") if _against(entry) else "",
        open_facts=tuple(spelled(open_words(finding)) for finding in entry.open_facts),
        cautions=caution_groups(alone),
        method=method(alone, asked, (job,), units),
        commissioning=(sheet(job),),
        not_checked=not_checked(alone),
    )
