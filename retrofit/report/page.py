"""What stands in the report, as frozen records of finished texts: templates put it in place and compute nothing."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import datetime
from pathlib import PurePath
from typing import ClassVar

from retrofit import figures
from retrofit.case import Case
from retrofit.checks import answer, not_checked
from retrofit.checks.changeover import chosen_for_cards
from retrofit.report.agreeing import calibration_text
from retrofit.report.assumed import section_legends
from retrofit.report.banding import band_text
from retrofit.report.cautioning import DEFERENCE, CautionGroup, caution_groups
from retrofit.report.commissioning import Sheet, sheets
from retrofit.report.comparing import comparison_table, convention
from retrofit.report.found import AsFound, as_found
from retrofit.report.front import Front, front
from retrofit.report.guard import POLICY
from retrofit.report.hardware import Hardware, hardware
from retrofit.report.inputs import Input, LeftOut, Taken, defaults, fixed, inputs, missing
from retrofit.report.judging import Judged, Shared, judged, spelled, threshold_sources
from retrofit.report.law import LawPart, law_part
from retrofit.report.life import LifePart, life_part
from retrofit.report.open_list import OpenRow, open_rows
from retrofit.report.plain import css_string, plain
from retrofit.report.plant import WHY_SAME_COOLING, has_plant
from retrofit.report.practice import Method, jobs, method
from retrofit.report.provenance import Traced, traced_values
from retrofit.report.room import RoomPart, room_part
from retrofit.report.sections import Place, annex, main_part
from retrofit.report.states import Portrait, enthalpy_note, portraits
from retrofit.report.table import Table
from retrofit.report.values import UsedSource, environment_table, used_sources
from retrofit.study import Comparison, Entry
from retrofit.units import MISSING, UnitSystem

SYSTEM_WORDS = {
    "si": "metric units",
    "ip": "inch-pound units",
    "both": "metric units, with inch-pound units in brackets",
}


@dataclass(frozen=True)
class Answered:
    """The answer as texts; each matter is a heading with groups of words and the candidates they are true of."""

    question: str
    headline: str
    matters: tuple[tuple[str, tuple[tuple[str, tuple[str, ...]], ...]], ...]
    remarks: tuple[str, ...]
    duty: str = ""
    contradictions: tuple[str, ...] = ()


@dataclass(frozen=True)
class Graded:
    """How far the model of a refrigerant can be trusted, as texts."""

    name: str
    word: str
    bubble: str
    dew: str
    pairs: str
    range_end: str


@dataclass(frozen=True)
class Page:
    """Everything a template shows."""

    template: ClassVar[str] = "report.html"

    policy: str
    title: str
    title_css: str
    about: str
    facts: tuple[tuple[str, str], ...]
    units: str
    made_at: str
    case_file: str
    versions: tuple[tuple[str, str], ...]
    main: tuple[Place, ...]
    annex: tuple[Place, ...]
    number: Mapping[str, str]
    where: Mapping[str, str]
    front: Front
    assumed: Mapping[str, str]
    answer: Answered
    convention: str
    band: str
    judged: tuple[Judged, ...]
    existing: Judged
    shared: tuple[Shared, ...]
    deference: str
    cautions: tuple[CautionGroup, ...]
    found: AsFound | None
    calibration: str
    comparison: Table
    plant_notes: tuple[str, ...]
    environment: Table
    overlays: tuple[figures.Drawing, ...]
    charts: tuple[figures.Drawing, ...]
    enthalpy_note: str
    axes_note: str
    hardware: Hardware
    room: RoomPart | None
    law: LawPart | None
    method: Method
    commissioning: tuple[Sheet, ...]
    life: LifePart | None
    portraits: tuple[Portrait, ...]
    inputs: tuple[Input, ...]
    defaults: tuple[Taken, ...]
    missing: tuple[LeftOut, ...]
    open: tuple[OpenRow, ...]
    fixed: tuple[str, ...]
    grades: tuple[Graded, ...]
    difference_unit: str
    temperature_unit: str
    mass_unit: str
    traced: tuple[Traced, ...]
    sources: tuple[UsedSource, ...]
    check_sources: tuple[str, ...]
    not_checked: tuple[str, ...]


def build_page(comparison: Comparison, units: UnitSystem, made_at: datetime) -> Page:
    """Return everything the report shows of a result.

    Args:
        comparison: An assessed result.
        units: The reader's units.
        made_at: The time to print.
    """
    case, axes = comparison.case, units.systems[0]
    (existing, *candidates), shared = judged(comparison)
    solved = any(entry.duty is not None for entry in comparison.entries)
    main, detail = main_part(comparison), annex(comparison)
    chosen = chosen_for_cards(comparison)
    changes = jobs(comparison, chosen, units)
    return Page(
        policy=POLICY,
        title=plain(case.title),
        title_css=css_string(plain(case.title)),
        about=plain(case.about or ""),
        facts=facts(comparison, units),
        units=SYSTEM_WORDS[units.name],
        made_at=time_text(made_at),
        case_file=plain(PurePath(case.path).name),
        versions=tuple(comparison.versions.items()),
        main=main,
        annex=detail,
        number={place.name: place.number for place in (*main, *detail)},
        where={place.name: place.words for place in (*main, *detail)},
        front=front(comparison, units),
        assumed=section_legends(case, units),
        answer=answered(comparison, units),
        convention=convention(comparison),
        band=band_text(comparison, units),
        judged=tuple(candidates),
        existing=existing,
        shared=shared,
        deference=DEFERENCE,
        cautions=caution_groups(comparison),
        found=as_found(comparison, units),
        calibration=spelled(calibration_text(comparison, units)),
        comparison=comparison_table(comparison, units),
        plant_notes=(WHY_SAME_COOLING,) if has_plant(comparison) else (),
        environment=environment_table(comparison, units),
        overlays=figures.overlay_charts(comparison, axes),
        charts=_charts(comparison, axes) if solved else (),
        enthalpy_note=enthalpy_note(axes),
        axes_note=""
        if axes is units
        else f"The charts and the state points are in {SYSTEM_WORDS[axes.name]}; the tables carry both.",
        hardware=hardware(comparison, units),
        room=room_part(comparison, units),
        law=law_part(comparison, units),
        method=method(comparison, chosen, changes, units),
        commissioning=tuple(found for job in changes for found in sheets(job)),
        life=life_part(comparison, units),
        portraits=portraits(comparison, axes),
        inputs=inputs(case, units),
        defaults=defaults(case, units),
        missing=missing(case),
        open=open_rows(comparison),
        fixed=fixed(comparison),
        grades=tuple(_graded(entry, units) for entry in comparison.entries),
        difference_unit=units.label("temperature difference"),
        temperature_unit=units.label("temperature"),
        mass_unit=units.label("mass"),
        traced=traced_values(comparison, units),
        sources=used_sources(comparison),
        check_sources=threshold_sources(comparison),
        not_checked=tuple(map(spelled, not_checked(comparison))),
    )


def answered(comparison: Comparison, units: UnitSystem) -> Answered:
    """Return the answer of a result in words.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    found = answer(comparison, units)
    matters = tuple(
        (spelled(matter.about), tuple((spelled(words), tuple(map(spelled, names))) for words, names in matter.groups))
        for matter in found.matters
    )
    remarks = tuple(spelled(remark[:1].upper() + remark[1:]) for remark in found.remarks)
    return Answered(
        spelled(found.question),
        spelled(found.headline),
        matters,
        remarks,
        spelled(found.duty),
        tuple(map(spelled, found.contradictions)),
    )


def facts(comparison: Comparison, units: UnitSystem) -> tuple[tuple[str, str], ...]:
    """Return the few numbers that say which plant this is, each with its label.

    Args:
        comparison: A result.
        units: The reader's units.
    """
    case: Case = comparison.case
    reading = {"dew": "dew point", "mean": "mean"}[case.duty.reading]
    charge = case.plant.charge_kg
    limit = case.plant.high_side_limit_Pa
    gauge = None if limit is None else limit - case.plant.ambient_pressure_Pa
    return (
        ("In the plant today", comparison.existing.refrigerant.display_name),
        ("Cooling", units.with_unit("cooling", case.duty.cooling_W)),
        (f"Evaporating, {reading}", units.with_unit("temperature", case.duty.T_evap_K)),
        (f"Condensing, {reading}", units.with_unit("temperature", case.duty.T_cond_K)),
        ("Charge", units.with_unit("mass", charge)),
        ("Nameplate, high side", units.with_unit("gauge pressure", gauge, decimals=1)),
    )


def _charts(comparison: Comparison, units: UnitSystem) -> tuple[figures.Drawing, ...]:
    return (
        figures.pressure_chart(comparison, units),
        figures.discharge_chart(comparison, units),
        *figures.change_charts(comparison),
    )


def _graded(entry: Entry, units: UnitSystem) -> Graded:
    name, grade = entry.refrigerant.display_name, entry.grade
    if grade is None:
        return Graded(name, "no model", MISSING, MISSING, MISSING, MISSING)
    bubble, dew = (
        units.text("temperature difference", value, signed=True, missing="not published")
        for value in (grade.bubble_difference_K, grade.dew_difference_K)
    )
    pairs = "; ".join(f"R-{a[1:]} with R-{b[1:]}" for a, b in grade.estimated_pairs)
    end = units.text("temperature", entry.T_limit_K, decimals=0, missing="not stated")
    return Graded(name, grade.word, bubble, dew, pairs or "none", end)


def time_text(made_at: datetime) -> str:
    """Return a time as the report prints it."""
    months = "January February March April May June July August September October November December".split()
    zone = f" {made_at.tzname()}" if made_at.tzinfo else ""
    return f"{made_at.day} {months[made_at.month - 1]} {made_at.year}, {made_at:%H:%M}{zone}"
