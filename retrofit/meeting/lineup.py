"""The line-up: every refrigerant in sight with its verdict, what decides it, and its main numbers, today's first."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, replace

from retrofit.checks.prospects import prospects
from retrofit.figures import mark_at
from retrofit.meeting.how import slug
from retrofit.meeting.state import State
from retrofit.report.judging import Judged, deciding
from retrofit.report.table import Cell, Note, Notes, Row, Table
from retrofit.study import Comparison, Entry, Verdict
from retrofit.units import MISSING, listed

FOLLOWS = Cell("…", is_number=True)


@dataclass(frozen=True)
class Headline:
    """A number of the line-up: its label, the table it is taken from, the first of these rows that is there."""

    label: str
    table: str
    rows: tuple[str, ...]
    per: str = ""


HEADLINES = (
    Headline(
        "Cooling against today",
        "comparison",
        ("plant-full-cooling-against-today", "compressor-cooling-against-today"),
    ),
    Headline(
        "COP against today",
        "comparison",
        ("plant-full-cop-at-the-same-cooling-against-today", "efficiency-cop-against-today"),
    ),
    Headline("Dis\N{SOFT HYPHEN}charge", "comparison", ("temperatures-discharge-temperature",)),
    Headline("Conden\N{SOFT HYPHEN}sing", "comparison", ("pressures-condensing-pressure-gauge",)),
    Headline("GWP AR5", "comparison", ("is-gwp-ipcc-ar5-100-years",)),
    Headline("Electricity against today", "year", ("year-electricity-against-the-plant-as-it-is",)),
    Headline("Warming against today", "emissions", ("tewi-sum-against-the-plant-as-it-is",)),
    Headline("First cost", "money", ("once-first-cost",)),
    Headline("Saving", "money", ("yearly-annual-saving-against-the-plant-as-it-is",), "a year"),
)
TODAY = (
    Headline("Cooling", "comparison", ("plant-full-cooling-at-full", "compressor-cooling")),
    Headline("COP", "comparison", ("plant-full-cop-at-full", "efficiency-cop-cooling-over-compressor-power")),
    Headline("Discharge", "comparison", ("temperatures-discharge-temperature",)),
    Headline("Condensing", "comparison", ("pressures-condensing-pressure-gauge",)),
    Headline("Electricity", "year", ("year-electricity-of-a-year",), "a year"),
    Headline("its cost", "money", ("yearly-energy",), "a year"),
    Headline("Warming, years left", "emissions", ("tewi-sum",)),
)


@dataclass(frozen=True)
class Player:
    """One refrigerant in the line-up.

    Attributes:
        designation, judged: Which, and what the checks say of it.
        marker, colour: Its mark in every chart.
        reasons: What decides its verdict, beyond what is said of all that need work.
        cells: Its numbers, one for each heading.
        is_pinned, is_added: What the meeting did with it.
        note: What the meeting noted on it.
    """

    designation: str
    judged: Judged
    marker: str
    colour: str
    reasons: str
    cells: tuple[Cell, ...]
    is_pinned: bool
    is_added: bool
    note: str


@dataclass(frozen=True)
class Lineup:
    """The line-up as texts.

    Attributes:
        headings: Label and unit of each number.
        players: Every refrigerant in sight, today's first.
        shared: What all candidates that need work have in common, in a sentence; empty if nothing.
        notes: On its numbers.
        today: Label, unit and cell of today's main numbers.
    """

    headings: tuple[tuple[str, str], ...]
    players: tuple[Player, ...]
    shared: str
    notes: tuple[Note, ...]
    today: tuple[tuple[str, str, Cell], ...]


@dataclass(frozen=True)
class _Column:
    """A heading with a cell for each refrigerant in sight."""

    label: str
    unit: str
    cells: tuple[Cell, ...]


def lineup(
    view: Comparison, state: State, by_name: Mapping[str, Judged], tables: tuple[Table, ...], follows: bool
) -> Lineup:
    """Return the line-up of what is in sight.

    Args:
        view: What is in sight.
        state: The state.
        by_name: What the checks say, by designation.
        tables: The tables that its numbers are taken from.
        follows: Whether the tables of the remaining life are still to come.
    """
    notes, common = Notes(), _common(view)
    columns = list(_columns(view, tables, HEADLINES, follows, notes))
    written = dict(state.notes)

    def player(place: int, entry: Entry) -> Player:
        name, mark = entry.refrigerant.designation, mark_at(view, place)
        own = [title for title in deciding(entry) if place == 0 or not _is_work(entry) or title not in common]
        return Player(
            designation=name,
            judged=by_name[name],
            marker=mark.marker,
            colour="currentColor" if place == 0 else mark.colour,
            reasons="; ".join(own) or "nothing beyond what all need",
            cells=tuple(column.cells[place] for column in columns),
            is_pinned=name in state.pinned,
            is_added=name in state.added,
            note=written.get(name, ""),
        )

    return Lineup(
        headings=tuple((column.label, column.unit) for column in columns),
        players=tuple(player(place, entry) for place, entry in enumerate(view.entries)),
        shared=_shared_words(view, common),
        notes=notes.listed(),
        today=tuple((c.label, c.unit, c.cells[0]) for c in _columns(view, tables, TODAY, follows, Notes())),
    )


def _is_work(entry: Entry) -> bool:
    """Say whether it is work that decides: what stops a candidate or is unknown is told at the candidate itself."""
    return entry.verdict == Verdict.MODIFICATIONS


def _common(view: Comparison) -> tuple[str, ...]:
    """Return what every candidate that is suitable with modifications needs, if there are several of them."""
    needed = [deciding(entry) for entry in view.candidates if _is_work(entry)]
    return tuple(title for title in needed[0] if all(title in other for other in needed)) if len(needed) > 1 else ()


def _shared_words(view: Comparison, common: tuple[str, ...]) -> str:
    if not common:
        return ""
    names = [entry.refrigerant.display_name for entry in view.candidates if _is_work(entry)]
    return f"{listed(names, 'and')} alike: {'; '.join(common)}. What comes on top stands in each row."


def _columns(
    view: Comparison, tables: tuple[Table, ...], wanted: tuple[Headline, ...], follows: bool, notes: Notes
) -> Iterator[_Column]:
    """Yield the numbers that the result has; those of the remaining life that follow have their place already."""
    by_name = {table.name: table for table in tables}
    places = _option_places(view)
    for headline in wanted:
        table = by_name.get(headline.table)
        if table is None:
            if follows and getattr(view.case, headline.table, None) is not None:
                yield _Column(headline.label, "\N{NO-BREAK SPACE}", (FOLLOWS,) * len(view.entries))
            continue
        row = _row(table, headline.rows)
        if row is None:
            continue
        chosen: Iterable[int | None] = range(len(view.entries)) if headline.table == "comparison" else places
        cells = tuple(Cell(MISSING) if place is None else _renoted(row.cells[place], table, notes) for place in chosen)
        yield _Column(headline.label, f"{row.unit} {headline.per}".strip(), cells)


def _row(table: Table, names: tuple[str, ...]) -> Row | None:
    rows = {slug(group, row): row for group in table.groups for row in group.rows}
    return next((rows[name] for name in names if name in rows), None)


def _option_places(view: Comparison) -> tuple[int | None, ...]:
    """Return the column of each refrigerant in the tables of the remaining life; of today's, the plant as it is.

    One that is not computed is not in them.
    """
    if view.life is None:
        return ()
    columns: dict[str, int] = {}
    for place, option in enumerate(prospects(view)):
        columns.setdefault(option.entry.refrigerant.designation, place)
    return tuple(columns.get(entry.refrigerant.designation) for entry in view.entries)


def _renoted(cell: Cell, table: Table, notes: Notes) -> Cell:
    """Return a cell with the letters of this table's notes instead of those of the one it is taken from."""
    told = {note.mark: note for note in table.notes}
    marks = tuple(notes.mark(told[mark].about, told[mark].text) for mark in cell.marks if mark in told)
    return replace(cell, marks=marks) if cell.text != MISSING else cell
