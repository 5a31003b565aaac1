"""One meeting: its state and history, what was refused, and what has been frozen; safe for threads."""

from __future__ import annotations

import threading
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from retrofit.errors import CaseFileError, QuantityError
from retrofit.meeting.desk import Desk, Outcome, Source
from retrofit.meeting.freeze import Frozen
from retrofit.meeting.state import History, State


class RefusedError(Exception):
    """A change that is not possible; `field` names the input, `text` what was written there."""

    def __init__(self, message: str, field: str = "", text: str = "") -> None:
        super().__init__(message)
        self.message, self.field, self.text = message, field, text


@dataclass(frozen=True)
class Refused:
    """What was written in an input and why it was not taken."""

    text: str
    why: str


@dataclass(frozen=True)
class Moment:
    """What one page shows, taken at one time.

    Attributes:
        version: Number of the state, rising with every change.
        state: The state.
        outcome: The result there is for it.
        undo, redo: In words what can be undone and done again; empty if nothing.
        refused: What was refused last, by input; "" for what belongs to none.
        frozen: The revisions written so far.
        places: Place of each refrigerant in the order in which it came into the meeting; its mark follows from it.
    """

    version: int
    state: State
    outcome: Outcome
    undo: str
    redo: str
    refused: Mapping[str, Refused]
    frozen: tuple[Frozen, ...]
    places: Mapping[str, int]


Change = Callable[[State, State, Mapping[str, str]], tuple[State, str]]


class Session:
    """The meeting that all windows of one start share."""

    def __init__(self, source: Source, units: str = "si", on_build: Callable[[str], None] | None = None) -> None:
        self.source = source
        self.desk = Desk(source, on_build)
        self._lock = threading.RLock()
        self._history = History(State(units=units))
        self._refused: dict[str, Refused] = {}
        self._frozen: tuple[Frozen, ...] = ()
        names = (source.case.plant.refrigerant, *source.case.compare.candidates)
        self._places = {name: place for place, name in enumerate(names)}

    @property
    def version(self) -> int:
        """Return the number of the present state."""
        return self._history.version

    @property
    def state(self) -> State:
        """Return the present state."""
        return self._history.now

    def apply(self, change: Change, seen: int, has_inputs: bool = True) -> bool:
        """Make a change on the newest state, whatever state the page it comes from showed.

        Args:
            change: Takes the newest state, the one seen, and texts to pass over by input; returns the state to be,
                and in words what changed.
            seen: Version of the page it comes from. [-]
            has_inputs: Whether it carries the inputs: what was refused in them is then said anew. [-]
        Returns: Whether it was taken; if not, the next moment says why.
        """
        with self._lock:
            base, left = self._history.at_version(seen), self._refused
            self._refused = {} if has_inputs else {key: item for key, item in left.items() if "." in key}
            if base is None:
                return self._refuse(RefusedError("the page was too old to tell what was changed on it; change it here"))
            # What was refused before may fit by now; if it still does not, it must not stop what is new.
            taken = self._tried(change, base, {})
            if not taken and has_inputs and left:
                told, self._refused = self._refused, {}
                taken = self._tried(change, base, {key: item.text for key, item in left.items()})
                self._refused = left if taken else told
            if not taken:
                self._history.touch()
            return taken

    def _tried(self, change: Change, base: State, passed_over: Mapping[str, str]) -> bool:
        """Take a change if it is possible; if not, keep why."""
        before = after = self._history.now
        try:
            after, what = change(before, base, passed_over)
            if after.physics != before.physics:
                self.source.case_with(after.physics)
        except RefusedError as error:
            self._refused[error.field] = Refused(error.text, error.message)
        except CaseFileError as error:
            self._refused |= _refused_by_case(error, before, after)
        except QuantityError as error:
            self._refused[""] = Refused("", str(error))
        else:
            self._history.add(after, what)
            for name in after.added:
                self._places.setdefault(name, len(self._places))
            return True
        return False

    def _refuse(self, error: RefusedError) -> bool:
        self._refused = {error.field: Refused(error.text, error.message)}
        self._history.touch()
        return False

    def complain(self, message: str) -> None:
        """Show on the page why something other than a change could not be done.

        Args:
            message: Why. [-]
        """
        with self._lock:
            self._refuse(RefusedError(message, "freeze"))

    def undo(self) -> None:
        """Go back one change."""
        with self._lock:
            self._refused = {}
            self._history.move(-1)

    def redo(self) -> None:
        """Go forth one change that was undone."""
        with self._lock:
            self._refused = {}
            self._history.move(+1)

    def freeze(self, made: Frozen) -> None:
        """Remember what has been frozen.

        Args:
            made: The revision.
        """
        with self._lock:
            self._frozen = (*self._frozen, made)
            self._refused.pop("freeze", None)  # what hindered an earlier try
            self._history.touch()

    def moment(self) -> Moment:
        """Return what a page shows now, waiting a little for the result."""
        for _ in range(3):
            with self._lock:
                version, state, history = self._history.version, self._history.now, self._history
                words = (history.undoable, history.redoable, dict(self._refused), self._frozen, dict(self._places))
            found = Moment(version, state, self.desk.outcome(state), *words)
            if found.outcome.is_current or version == self.version:
                break
        return found


def _refused_by_case(error: CaseFileError, before: State, after: State) -> dict[str, Refused]:
    """Return what was written beside what is wrong with it; what names no changed input stands at the first."""
    old, new = dict(before.changes), dict(after.changes)
    changed = [key for key in {**old, **new} if new.get(key) != old.get(key)]
    said: dict[str, Refused] = {}
    for problem in error.problems:
        field = problem.key.partition("[")[0]
        place = field if field in changed or not changed else changed[0]
        text = problem.text if place == field else f"{problem.key}: {problem.text}"
        so_far = f"{said[place].why}; " if place in said else ""
        said[place] = Refused(new.get(place, ""), so_far + text)
    for key in changed:
        said.setdefault(key, Refused(new.get(key, ""), "not taken, because of what is said at the other input"))
    return said
