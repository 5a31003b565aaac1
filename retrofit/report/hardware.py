"""The hardware in the report: verdicts by component and refrigerant, the numbers behind them, and set points."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

from retrofit.report.assumed import legend, marked
from retrofit.report.judging import source_title, spelled
from retrofit.report.table import MOST_COLUMNS, Cell, Group, Notes, Row, Table
from retrofit.study import Comparison, Component, Entry
from retrofit.units import MISSING, UnitSystem, all_told

NOT_JUDGED = "not judged"
CARRIED = (
    "Carried over at the same saturation temperature: switches and crankcase regulator at the dew point, set points "
    "that stand for a coil at the mean temperature. Gauge pressures."
)


@dataclass(frozen=True)
class Matrix:
    """Verdicts of the components: as many refrigerants as stand side by side."""

    columns: tuple[str, ...]
    rows: tuple[tuple[str, tuple[str, ...]], ...]


@dataclass(frozen=True)
class Held:
    """What a component is held against, and what to ask; `about` is empty if it is so for every refrigerant."""

    about: str
    threshold: str
    source: str
    ask: str


@dataclass(frozen=True)
class Line:
    """One refrigerant in the table of a component: verdict, numbers, and why."""

    name: str
    verdict: str
    cells: tuple[str, ...]
    reason: str


@dataclass(frozen=True)
class Block:
    """One component with every refrigerant, as texts.

    Attributes:
        code, name: The component.
        verdict, reason: What is the same with every candidate; empty where they differ in all.
        constants: Numbers that are the same in every line.
        headings: The numbers that differ: name and unit.
        lines: Today's refrigerant and the candidates; none if nothing differs between candidates.
        today: Then, what is said of today's refrigerant alone, if it does not simply keep the component.
        held: What it is held against.
    """

    code: str
    name: str
    verdict: str
    reason: str
    constants: tuple[str, ...]
    headings: tuple[tuple[str, str], ...]
    lines: tuple[Line, ...]
    today: str
    held: tuple[Held, ...]

    @property
    def has_reasons(self) -> bool:
        """True if something is said of one refrigerant alone. [-]"""
        return any(line.reason for line in self.lines)


@dataclass(frozen=True)
class Hardware:
    """Everything on the hardware; nothing is judged if `matrices` is empty."""

    matrices: tuple[Matrix, ...]
    differing: tuple[Block, ...]
    alike: tuple[Block, ...]
    settings: Table | None


def hardware(comparison: Comparison, units: UnitSystem) -> Hardware:
    """Return what stands in the report on the hardware.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    blocks = [_block(comparison, code, units) for code in component_names(comparison)]
    return Hardware(
        matrices(comparison),
        tuple(block for block in blocks if block.lines),
        tuple(block for block in blocks if not block.lines),
        _settings(comparison, units),
    )


def component_names(comparison: Comparison) -> dict[str, str]:
    """Return every component that was judged for any refrigerant, by its code.

    Args:
        comparison: An assessed result.
    """
    fullest_first = sorted(comparison.entries, key=lambda entry: -len(entry.hardware))
    return {item.code: item.name for entry in fullest_first for item in entry.hardware}


def verdict_words(entry: Entry, codes: Sequence[str]) -> tuple[str, ...]:
    """Return the verdicts of an entry's components; one that it does not have reads as not judged.

    Args:
        entry: A refrigerant.
        codes: Codes of the components.
    """
    found = {item.code: item.verdict for item in entry.hardware}
    is_today = entry.family == "keep"
    return tuple(found.get(code, MISSING if is_today else NOT_JUDGED) for code in codes)


def matrices(comparison: Comparison) -> tuple[Matrix, ...]:
    """Return the verdicts of the components, spread over as many tables as it takes; none if nothing was judged.

    Args:
        comparison: An assessed result.
    """
    names = component_names(comparison)
    if not names:
        return ()
    entries = comparison.entries
    count = -(-len(entries) // MOST_COLUMNS)
    size = -(-len(entries) // count)
    parts = [entries[start : start + size] for start in range(0, len(entries), size)]
    return tuple(_matrix(part, names) for part in parts)


def _matrix(entries: Sequence[Entry], names: dict[str, str]) -> Matrix:
    words = [verdict_words(entry, list(names)) for entry in entries]
    rows = tuple((spelled(name), cells) for name, cells in zip(names.values(), zip(*words, strict=True), strict=True))
    return Matrix(tuple(entry.refrigerant.display_name for entry in entries), rows)


def _block(comparison: Comparison, code: str, units: UnitSystem) -> Block:
    today = _component(comparison.existing, code, units)
    others = [(entry, item) for entry in comparison.candidates if (item := _component(entry, code, units))]
    pairs = others or [(comparison.existing, today)] if today else others
    items = [item for _, item in pairs]
    columns = _columns(items, units)
    differing = {heading: cells for heading, cells in columns.items() if len(set(cells)) > 1}
    reasons, verdicts = [_sentences(*pair) for pair in pairs], {item.verdict for item in items}
    shared = [text for text in reasons[0] if all(text in reason for reason in reasons)]
    is_alike = not differing and len(verdicts) == 1 and all(reason == shared for reason in reasons)
    return Block(
        code,
        spelled(items[0].name),
        items[0].verdict if len(verdicts) == 1 else "",
        " ".join(shared),
        tuple(_constant(*heading, columns[heading][0]) for heading in columns if heading not in differing),
        tuple(differing),
        () if is_alike else _lines(comparison.existing, today, pairs, list(differing.values()), shared),
        _alone(comparison.existing, today, shared) if today and today.verdict != "keep" else "",
        _held(pairs),
    )


def _component(entry: Entry, code: str, units: UnitSystem) -> Component | None:
    return next((all_told(item, units) for item in entry.hardware if item.code == code), None)


def _columns(items: Sequence[Component], units: UnitSystem) -> dict[tuple[str, str], list[str]]:
    """Return the numbers of a component by name and unit: today's first, then each refrigerant's.

    A number known for none of them has no column: the reason says what is missing.
    """
    found = {}
    for name, kind in {measure.name: measure.kind for item in items for measure in item.measures}.items():
        measures = [next((measure for measure in item.measures if measure.name == name), None) for item in items]
        today = next((measure.old for measure in measures if measure), None)
        values = [today, *(measure.new if measure else None for measure in measures)]
        if any(value is not None for value in values):
            found[name, units.label(kind)] = units.column(kind, values)
    return found


def _constant(name: str, unit: str, text: str) -> str:
    return f"{name} {text}\N{NO-BREAK SPACE}{unit}".rstrip()


def _lines(
    existing: Entry,
    today: Component | None,
    pairs: Sequence[tuple[Entry, Component]],
    columns: Sequence[list[str]],
    shared: Sequence[str],
) -> tuple[Line, ...]:
    """Return today's refrigerant and the others, each with its numbers and what is said of it alone."""

    def line(entry: Entry, item: Component | None, row: tuple[str, ...]) -> Line:
        verdict, alone = (item.verdict, _alone(entry, item, shared)) if item else (MISSING, "")
        return Line(entry.refrigerant.display_name, verdict, row, alone)

    cells = list(zip(*columns, strict=True)) or [()] * (len(pairs) + 1)
    candidates = [(entry, item, row) for (entry, item), row in zip(pairs, cells[1:], strict=True)]
    return (line(existing, today, cells[0]), *(line(*found) for found in candidates if found[0] is not existing))


def _alone(entry: Entry, item: Component, shared: Sequence[str]) -> str:
    """Return what is said of a refrigerant alone."""
    return " ".join(text for text in _sentences(entry, item) if text not in shared)


def _sentences(entry: Entry, item: Component) -> list[str]:
    """Return the reason in sentences."""
    return re.split(r"(?<=\.) (?=[A-Z`])", _nameless(entry, item.reason))


def _nameless(entry: Entry, text: str) -> str:
    """Return a text without the designation, so that what is said of each refrigerant alike is the same text."""
    return spelled(text.replace(entry.refrigerant.designation, "this refrigerant"))


def _held(pairs: Sequence[tuple[Entry, Component]]) -> tuple[Held, ...]:
    about: dict[tuple[str, str, str], list[str]] = {}
    for entry, item in pairs:
        subject = spelled(item.threshold), source_title(item.source), _nameless(entry, item.ask)
        about.setdefault(subject, []).append(entry.refrigerant.display_name)
    return tuple(Held("" if len(about) == 1 else ", ".join(names), *(subject)) for subject, names in about.items())


def _settings(comparison: Comparison, units: UnitSystem) -> Table | None:
    """Return the table of set points, old and new as gauges show them; None if the case gives none."""
    entries = [entry for entry in comparison.entries if entry.hardware_numbers]
    settings = [entry.hardware_numbers.settings for entry in entries if entry.hardware_numbers]
    if not settings or not settings[0]:
        return None
    notes, rows = Notes(), []
    ambient = comparison.case.plant.ambient_pressure_Pa
    for place, first in enumerate(settings[0]):
        across = [found[place] for found in settings]
        gauge = [None if item.p_Pa.new is None else item.p_Pa.new - ambient for item in across]
        texts = units.column("gauge pressure", gauge)
        cells = tuple(
            Cell(text, marks=(notes.mark(entry.refrigerant.display_name, item.reason),) if item.reason else ())
            for text, item, entry in zip(texts, across, entries, strict=True)
        )
        T = units.with_unit("temperature", first.T_K) if first.T_K is not None else "temperature not known"
        rows.append(Row(f"{first.name}: {first.held}, {T}", units.label("gauge pressure"), cells))
    names = tuple(entry.refrigerant.display_name for entry in entries)
    groups = (Group("settings", "Set points, today and with each candidate", tuple(rows)),)
    assumed = legend(comparison, groups, units)
    caption = "Set points, old to new"
    return Table("settings", caption, CARRIED, names, marked(comparison, groups), notes.listed(), assumed)
