"""What stands on the page, as frozen records of finished texts: the same tables and texts as the report's."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from retrofit.checks import not_checked
from retrofit.meeting.changes import MEETING
from retrofit.meeting.desk import Source
from retrofit.meeting.freeze import Frozen
from retrofit.meeting.how import linked
from retrofit.meeting.inputs import Group, input_groups, offered
from retrofit.meeting.lineup import Lineup, lineup
from retrofit.meeting.pictures import Picture, Pictures, View
from retrofit.meeting.refused import Refused
from retrofit.meeting.session import Moment
from retrofit.meeting.side import Side, side_by_side
from retrofit.meeting.state import State
from retrofit.meeting.weighing import Weighing, weighing
from retrofit.meeting.years import life_tables
from retrofit.refrigerants import designations
from retrofit.report.banding import band_text
from retrofit.report.cautioning import DEFERENCE, CautionGroup, caution_groups
from retrofit.report.comparing import comparison_table, convention
from retrofit.report.hardware import Matrix, matrices
from retrofit.report.judging import Judged, judged
from retrofit.report.page import Answered, answered, facts
from retrofit.report.plain import plain
from retrofit.report.table import Table
from retrofit.report.values import environment_table
from retrofit.study import Comparison
from retrofit.units import UNIT_SYSTEMS, UnitSystem

SECTIONS = {
    "lineup": "Line-up",
    "cautions": "Cautions",
    "beside": "Side by side",
    "weights": "Weights",
    "years": "Years and money",
    "numbers": "Numbers",
    "charts": "Charts",
    "hardware": "Hardware",
    "notes": "Notes",
    "freeze": "Freeze",
}


@dataclass(frozen=True)
class Board:
    """Everything the page shows."""

    version: int
    large: bool
    unit_name: str
    title: str
    about: str
    case_file: str
    facts: tuple[tuple[str, str], ...]
    number: Mapping[str, str]
    sections: tuple[tuple[str, str], ...]
    working: str
    follows: bool
    writing: str
    problem: str
    undo: str
    redo: str
    is_changed: bool
    groups: tuple[Group, ...]
    refused: Mapping[str, Refused]
    complaints: tuple[str, ...]
    meanwhile: str
    answer: Answered
    convention: str
    band: str
    lineup: Lineup
    hidden: tuple[tuple[str, Judged], ...]
    catalogue: tuple[str, ...]
    deference: str
    cautions: tuple[CautionGroup, ...]
    beside: tuple[str, ...]
    side: Side | None
    weighing: Weighing
    comparison: Table
    environment: Table
    life: tuple[Table, ...]
    pictures: tuple[Picture, ...]
    matrices: tuple[Matrix, ...]
    notes: tuple[tuple[str, str, str], ...]
    frozen: tuple[Frozen, ...]
    not_checked: tuple[str, ...]


def in_sight(moment: Moment) -> Comparison:
    """Return the result with the candidates that are shown, pinned ones first; no number and no mark changes.

    Args:
        moment: State and whole result.
    """
    comparison, state = moment.outcome.comparison, moment.state
    by_name = {entry.refrigerant.designation: entry for entry in comparison.candidates}
    order = [name for name in (*state.pinned, *by_name) if name in by_name and name not in state.hidden]
    candidates = tuple(by_name[name] for name in dict.fromkeys(order))
    return replace(comparison, candidates=candidates, places=moment.places)


def tables(view: Comparison, units: UnitSystem) -> tuple[Table, Table]:
    """Return the tables of the report for what is in sight, each cell with where its origin is told.

    Args:
        view: What is in sight.
        units: The reader's units.
    """
    names = tuple(entry.refrigerant.designation for entry in view.entries)
    return linked(comparison_table(view, units), names), linked(environment_table(view, units), names)


def build_board(moment: Moment, source: Source, pictures: Pictures, writing: str = "") -> Board:
    """Return everything the page shows at a moment.

    Args:
        moment: State and result.
        source: The case file the meeting began with.
        pictures: Where charts are drawn.
        writing: What is being written, in words; empty if nothing. [-]
    """
    state, outcome, whole = moment.state, moment.outcome, moment.outcome.comparison
    units, view = UNIT_SYSTEMS[state.units], in_sight(moment)
    every, _ = judged(whole)
    by_name = {e.refrigerant.designation: item for e, item in zip(whole.entries, every, strict=True)}
    comparison, environment = tables(view, units)
    life, follows = life_tables(view, units), outcome.is_current and not outcome.is_whole
    keys = offered(source.data)
    known = {*keys, "designation", "freeze"}  # inputs that show by themselves what is wrong
    return Board(
        version=moment.version,
        large=state.is_large,
        unit_name=state.units,
        title=plain(whole.case.title),
        about=plain(whole.case.about or ""),
        case_file=plain(whole.case.path.replace("\\", "/").rpartition("/")[2]),
        facts=facts(whole, units),
        number={name: str(place) for place, name in enumerate(SECTIONS, start=1)},
        sections=tuple(SECTIONS.items()),
        working=outcome.working,
        follows=follows,
        writing=writing,
        problem=outcome.problem,
        undo=moment.undo,
        redo=moment.redo,
        is_changed=bool(state.changes),
        groups=input_groups(moment, whole.case, source, keys, units),
        refused=moment.refused,
        complaints=tuple(item.why for field, item in moment.refused.items() if field not in known),
        meanwhile=moment.meanwhile,
        answer=answered(view, units),
        convention=convention(whole),
        band=band_text(view, units),
        lineup=lineup(view, state, by_name, (comparison, *life), follows),
        hidden=tuple((name, by_name[name]) for name in state.hidden if name in by_name),
        catalogue=tuple(name for name in designations() if name not in by_name),
        deference=DEFERENCE,
        cautions=caution_groups(view),
        beside=state.beside,
        side=side_by_side(view, state.beside, comparison, units),
        weighing=weighing(view, state),
        comparison=comparison,
        environment=environment,
        life=life,
        pictures=pictures.pictures(state, View(view, state.units)) if outcome.is_current else (),
        matrices=matrices(view),
        notes=_notes(whole, state),
        frozen=moment.frozen,
        not_checked=not_checked(view),
    )


def _notes(comparison: Comparison, state: State) -> tuple[tuple[str, str, str], ...]:
    """Return what notes can be about: name of the field, label, and text."""
    notes = dict(state.notes)
    named = [(e.refrigerant.designation, e.refrigerant.display_name) for e in comparison.entries]
    return tuple((name, label, notes.get(name, "")) for name, label in ((MEETING, "The meeting"), *named))
