"""What others changed between the page a change was made on and now, item by item, and what both touch."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from retrofit.meeting.desk import Source
from retrofit.meeting.inputs import GROUPS, LABELS
from retrofit.meeting.state import State
from retrofit.meeting.weighing import USUAL

FLAGS = ("in the comparison", "hidden", "pinned")
Item = tuple[str, str]  # kind, and which of that kind
# Labels as a sentence needs them: with their group where another group has the same.
_LABELS = {
    key: f"{heading.partition(':')[0]}, {label}" if list(LABELS.values()).count(label) > 1 else label
    for _, heading, keys in GROUPS
    for key, label in keys
}


@dataclass(frozen=True)
class Changed:
    """One item that is not any more what a page shows: what it was there, and what it is now."""

    item: Item
    was: str
    now: str

    @property
    def field(self) -> str:
        """Return the key of the input it stands in, empty for what is not an input."""
        kind, name = self.item
        return name if kind == "input" else ""

    @property
    def told(self) -> str:
        """Return what it is now, in words."""
        return _told(self.now, self.item[0])

    def __str__(self) -> str:
        return f"{_called(self.item)}: changed to {self.told} (was {_told(self.was, self.item[0])})"


def items_of(state: State, source: Source) -> dict[Item, str]:
    """Return everything a meeting can change as texts by item.

    Args:
        state: A state.
        source: The case file, which says what is not changed.
    """
    found: dict[Item, str] = {("input", key): text for key, text in state.changes}
    found |= {("weight", name): str(weight) for name, weight in state.weights}
    found |= {("note", about): text for about, text in state.notes}
    names = (*source.case.compare.candidates, *state.added)
    found |= {("in the comparison", name): "yes" for name in names}
    found |= {("hidden", name): "yes" for name in state.hidden}
    found |= {("pinned", name): "yes" for name in state.pinned}
    found["beside", ""] = " and ".join(state.beside)
    found["units", ""] = state.units.upper()
    found["type", ""] = "large" if state.is_large else "usual"
    return found


def changed(before: State, after: State, source: Source) -> tuple[Changed, ...]:
    """Return what differs between two states.

    Args:
        before, after: The states.
        source: The case file.
    """
    old, new = items_of(before, source), items_of(after, source)

    def text(items: Mapping[Item, str], item: Item) -> str:
        usual = {"input": source.text_of(item[1]), "weight": str(int(USUAL))}
        return items.get(item, usual.get(item[0], ""))

    pairs = [(item, text(old, item), text(new, item)) for item in dict.fromkeys((*old, *new))]
    return tuple(Changed(item, was, now) for item, was, now in pairs if was != now)


def _called(item: Item) -> str:
    kind, name = item
    if kind == "input":
        return _LABELS[name]
    if kind == "weight":
        return f"weight of {name}"
    if kind == "note":
        return f"note on {'the meeting' if name == 'meeting' else name}"
    if kind == "beside":
        return "side by side"
    return f"{name} {kind}".strip()


def _told(text: str, kind: str) -> str:
    if not text:
        return "no" if kind in FLAGS else "nothing"
    return f'"{text}"' if kind == "note" else text
