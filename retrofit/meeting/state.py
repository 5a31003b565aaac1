"""What a meeting has decided so far: one frozen state, and a bounded history of them to go back and forth in."""

from __future__ import annotations

from collections import OrderedDict
from dataclasses import dataclass

MOST_KEPT = 200  # states that can be undone, and versions a late form may still come from


@dataclass(frozen=True)
class State:
    """Everything a meeting can change.

    Attributes:
        changes: Text by full key of the case file, in the order they were first changed; "" leaves the key out.
        added: Candidates beside those of the case file.
        hidden, pinned: Candidates out of sight, and first in the row.
        beside: Up to two candidates that stand side by side.
        weights: Weight by criterion, 0 to 10.
        notes: Text by what it is about: "meeting" or a designation.
        units: "si" or "ip".
        is_large: Large type, for a projector.
    """

    changes: tuple[tuple[str, str], ...] = ()
    added: tuple[str, ...] = ()
    hidden: tuple[str, ...] = ()
    pinned: tuple[str, ...] = ()
    beside: tuple[str, ...] = ()
    weights: tuple[tuple[str, int], ...] = ()
    notes: tuple[tuple[str, str], ...] = ()
    units: str = "si"
    is_large: bool = False

    @property
    def physics(self) -> tuple[tuple[tuple[str, str], ...], tuple[str, ...]]:
        """Return the part that numbers depend on; states that share it share one result."""
        return tuple(sorted(self.changes)), self.added


def with_item(items: tuple[tuple[str, str], ...], key: str, text: str | None) -> tuple[tuple[str, str], ...]:
    """Return pairs with one of them set, or taken away.

    Args:
        items: The pairs. [-]
        key: Which. [-]
        text: What to set; None takes it away. [-]
    """
    found = dict(items)
    if text is None:
        found.pop(key, None)
    else:
        found[key] = text
    return tuple(found.items())


@dataclass(frozen=True)
class Step:
    """One state of the history, its number, and in words what led to it."""

    version: int
    state: State
    what: str


class History:
    """States in order, with one of them the present; not safe for threads by itself."""

    def __init__(self, first: State) -> None:
        self._steps = [Step(1, first, "")]
        self._at = 0
        self._seen: OrderedDict[int, State] = OrderedDict({1: first})
        self.version = 1

    @property
    def now(self) -> State:
        """Return the present state."""
        return self._steps[self._at].state

    @property
    def undoable(self) -> str:
        """Return in words what can be undone; empty if nothing."""
        return self._steps[self._at].what if self._at else ""

    @property
    def redoable(self) -> str:
        """Return in words what can be done again; empty if nothing."""
        return self._steps[self._at + 1].what if self._at + 1 < len(self._steps) else ""

    def at_version(self, version: int) -> State | None:
        """Return the state a page of that version showed, None if it is too long ago."""
        return self._seen.get(version)

    def add(self, state: State, what: str) -> None:
        """Make a state the present one; what had been undone is gone.

        Args:
            state: The state; one equal to the present changes nothing.
            what: What led to it, in words. [-]
        """
        if state == self.now:
            return
        self._steps = [*self._steps[: self._at + 1], Step(self.version + 1, state, what)][-MOST_KEPT:]
        self._at = len(self._steps) - 1
        self._remember()

    def beside(self, by: int) -> State:
        """Return the state that a move would make the present one; the present if there is none.

        Args:
            by: How far. [-]
        """
        place = self._at + by
        return self._steps[place].state if 0 <= place < len(self._steps) else self.now

    def move(self, by: int) -> None:
        """Go back (-1) or forth (+1), if there is anything there.

        Args:
            by: How far. [-]
        """
        place = self._at + by
        if 0 <= place < len(self._steps):
            self._at = place
            self._remember()

    def touch(self) -> None:
        """Count something beside the state as news."""
        self._remember()

    def _remember(self) -> None:
        """Give the present a number of its own: going back is a change like any other to whoever looks on."""
        self.version += 1
        self._seen[self.version] = self.now
        while len(self._seen) > MOST_KEPT:
            self._seen.popitem(last=False)
