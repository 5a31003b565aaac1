"""The shape of a table in the report: groups of quantities against refrigerants, texts ready to be shown."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from retrofit.refrigerants import with_hyphens

MOST_COLUMNS = 7  # refrigerants that stand side by side on a portrait page
NOT_STATED = "not stated"


@dataclass(frozen=True)
class Cell:
    """One cell: its text, whether it is a number, the letters of its notes, and where its origin is told, if at all."""

    text: str
    is_number: bool = True
    marks: tuple[str, ...] = ()
    href: str = ""


@dataclass(frozen=True)
class Row:
    """One quantity with its unit, and a cell for each refrigerant; of numbers also their kind and the values in SI.

    `sign` is that of what rests on an assumed value.
    """

    label: str
    unit: str
    cells: tuple[Cell, ...]
    kind: str = ""
    values: tuple[float | None, ...] = ()
    bands: tuple[float, ...] = ()
    sign: str = ""


@dataclass(frozen=True)
class Group:
    """Quantities under one heading, which names the basis; `name` makes an id."""

    name: str
    heading: str
    rows: tuple[Row, ...]


@dataclass(frozen=True)
class Note:
    """A note under a table: its letter, the refrigerants it is about, and its text."""

    mark: str
    about: str
    text: str


@dataclass(frozen=True)
class Table:
    """A table; with up to seven refrigerants they are its columns, with more they are its rows.

    `assumed` says what its sign stands for; empty if no row carries it.
    """

    name: str
    caption: str
    convention: str
    columns: tuple[str, ...]
    groups: tuple[Group, ...]
    notes: tuple[Note, ...]
    assumed: str = ""

    @property
    def is_wide(self) -> bool:
        """True if there are more refrigerants than stand side by side on a page. [-]"""
        return len(self.columns) > MOST_COLUMNS


@dataclass
class Notes:
    """Collects the notes of a table: one letter for each text, with all it is about."""

    _about: dict[str, list[str]] = field(default_factory=dict)

    def mark(self, about: str, text: str) -> str:
        """Return the letter of a note, adding what it is about."""
        names = self._about.setdefault(text, [])
        if about not in names:
            names.append(about)
        return _letters(list(self._about).index(text))

    def listed(self) -> tuple[Note, ...]:
        """Return the notes in the order of their letters."""
        return tuple(
            Note(_letters(place), ", ".join(about), with_hyphens(text))
            for place, (text, about) in enumerate(self._about.items())
        )


def _letters(place: int) -> str:
    turn, letter = divmod(place, 26)
    return (_letters(turn - 1) if turn else "") + "abcdefghijklmnopqrstuvwxyz"[letter]


def number_row(
    label: str,
    unit: str,
    texts: Sequence[str],
    kind: str = "",
    values: Sequence[float | None] = (),
    bands: Sequence[float] = (),
) -> Row:
    """Return a row of numbers, already texts.

    Args:
        label: What they are.
        unit: Their unit. [-]
        texts: One for each refrigerant. [-]
        kind: Their kind of quantity; "change" for a ratio to today. [-]
        values: The numbers themselves. [SI]
        bands: Half the band of the model that each change is held against. [-]
    """
    return Row(label, unit, tuple(Cell(text) for text in texts), kind, tuple(values), tuple(bands))


def word_row(label: str, texts: Iterable[str]) -> Row:
    """Return a row of words."""
    return Row(label, "", tuple(Cell(text, is_number=False) for text in texts))
