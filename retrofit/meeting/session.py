"""One meeting: its state and history, what was refused, and what has been frozen; safe for threads."""

from __future__ import annotations

import threading
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from retrofit.errors import CaseFileError, QuantityError
from retrofit.meeting.desk import Desk, Outcome, Source
from retrofit.meeting.freeze import Frozen
from retrofit.meeting.meanwhile import Changed, Item, changed
from retrofit.meeting.refused import Refused, RefusedError
from retrofit.meeting.state import History, State


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
        meanwhile: What others had changed when the last change came from a page that did not show it yet.
    """

    version: int
    state: State
    outcome: Outcome
    undo: str
    redo: str
    refused: Mapping[str, Refused]
    frozen: tuple[Frozen, ...]
    places: Mapping[str, int]
    meanwhile: str = ""


Change = Callable[[State, State, Mapping[str, str]], tuple[State, str]]


class Session:
    """The meeting that all windows of one start share."""

    def __init__(self, source: Source, units: str = "si", on_build: Callable[[str], None] | None = None) -> None:
        self.source = source
        self.desk = Desk(source, on_build)
        self._lock = threading.RLock()
        self._history = History(State(units=units))
        self._refused: dict[str, Refused] = {}
        self._meanwhile = ""
        self._by: dict[Item, str] = {}  # the window that an item was last changed in
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

    def apply(self, change: Change, seen: int, has_inputs: bool = True, window: str = "") -> bool:
        """Make a change on the newest state, whatever state the page it comes from showed.

        Args:
            change: Takes the newest state, the one seen, and texts to pass over by input; returns the state to be,
                and in words what changed.
            seen: Version of the page it comes from. [-]
            has_inputs: Whether it carries the inputs: what was refused in them is then said anew. [-]
            window: Which window it comes from; empty for a browser without script. [-]
        Returns: Whether it was taken; if not, the next moment says why: among others because another window has
            changed the same meanwhile. What others changed beside it is told by the next moment too.
        """
        with self._lock:
            base, left = self._history.at_version(seen), self._refused
            self._refused = {} if has_inputs else {key: item for key, item in left.items() if "." in key}
            self._meanwhile = ""
            if base is None:
                return self._refuse(RefusedError("the page was too old to tell what was changed on it; change it here"))
            # What was refused before may fit by now; if it still does not, it must not stop what is new.
            taken = self._tried(change, base, {}, window)
            if not taken and has_inputs and left:
                told, self._refused = self._refused, {}
                taken = self._tried(change, base, {key: item.text for key, item in left.items()}, window)
                self._refused = left if taken else told
            if not taken:
                self._history.touch()
            return taken

    def _tried(self, change: Change, base: State, passed_over: Mapping[str, str], window: str) -> bool:
        """Take a change if it is possible; if not, keep why."""
        before = after = self._history.now
        others = self._others(base, window)
        try:
            after, what = change(before, base, passed_over)
            if clashes := self._clashes(others, before, after):
                self._refused |= clashes
                return False
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
            self._note(before, after, others, window)
            for name in after.added:
                self._places.setdefault(name, len(self._places))
            return True
        return False

    def _others(self, base: State, window: str) -> dict[Item, Changed]:
        """Return what other windows have changed since a page showed a state."""
        found = {item.item: item for item in changed(base, self._history.now, self.source)}
        return {key: item for key, item in found.items() if not window or self._by.get(key) != window}

    def _clashes(self, others: Mapping[Item, Changed], before: State, after: State) -> dict[str, Refused]:
        """Return what a change would overwrite that its page did not show, by input."""
        found: dict[str, Refused] = {}
        for asked in changed(before, after, self.source):
            if known := others.get(asked.item):
                said = f"{known} by another window meanwhile; to have {asked.told} all the same, ask again"
                so_far = f"{found[known.field].why}; " if known.field in found else ""
                found[known.field] = Refused(known.now, so_far + said)
        return found

    def _note(self, before: State, after: State, others: Mapping[Item, Changed], window: str) -> None:
        """Keep who changed what, and tell what else had changed meanwhile."""
        self._by |= {item.item: window for item in changed(before, after, self.source)}
        if others and after != before:
            self._meanwhile = "; ".join(str(item) for item in others.values())

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

    def undo(self, seen: int | None = None, window: str = "") -> None:
        """Go back one change; arguments as `apply`, None for a page that shows the newest."""
        self._move(-1, seen, window)

    def redo(self, seen: int | None = None, window: str = "") -> None:
        """Go forth one change that was undone; arguments as `undo`."""
        self._move(+1, seen, window)

    def _move(self, by: int, seen: int | None, window: str) -> None:
        with self._lock:
            self._refused, self._meanwhile = {}, ""
            base = self._history.now if seen is None else self._history.at_version(seen)
            if base is None:
                self._refuse(RefusedError("the page was too old to tell what it would undo; do it here"))
                return
            before, after, others = self._history.now, self._history.beside(by), self._others(base, window)
            if clashes := self._clashes(others, before, after):
                self._refused = clashes
                self._history.touch()
                return
            self._history.move(by)
            self._note(before, after, others, window)

    def unseen(self, seen: int, window: str = "") -> str:
        """Return what others have changed since a page, in words; empty if nothing, or if the page is not known.

        Args:
            seen: Version of the page. [-]
            window: Which window it is in. [-]
        """
        with self._lock:
            base = self._history.at_version(seen)
            return "; ".join(str(item) for item in self._others(base, window).values()) if base else ""

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
                words = (
                    history.undoable,
                    history.redoable,
                    dict(self._refused),
                    self._frozen,
                    dict(self._places),
                    self._meanwhile,
                )
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
