"""Where results are made: one at a time, the newest asked for first, each kept for when it is asked for again."""

from __future__ import annotations

import datetime
import logging
import threading
import time
from collections import OrderedDict
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

from retrofit.case import Case, as_text, case_from_data, laid_over
from retrofit.checks import assess
from retrofit.errors import RetrofitError
from retrofit.meeting.state import State
from retrofit.study import Comparison, compare

MOST_RESULTS = 40
PAUSE_S = 0.3  # before what is not asked for at once is begun
PATIENCE_S = 0.8  # what takes longer is shown as under way

Physics = tuple[tuple[tuple[str, str], ...], tuple[str, ...]]


@dataclass(frozen=True)
class Source:
    """The case file as it was when the meeting began.

    Attributes:
        case: As read.
        data: Its parsed TOML.
        on: The day to read the tables of law for; None for today.
    """

    case: Case
    data: Mapping[str, Any]
    on: datetime.date | None = None
    _read: dict[Physics, Case] = field(default_factory=dict, repr=False, compare=False)

    def text_of(self, key: str) -> str:
        """Return what the file says under a full key, as it would be written again; empty if nothing.

        Args:
            key: Full key. [-]
        """
        node: Any = self.data
        for part in key.split("."):
            node = node.get(part) if isinstance(node, Mapping) else None
        return "" if node is None else as_text(node)

    def case_with(self, physics: Physics) -> Case:
        """Return the case with changes laid over it; raises CaseFileError if they do not fit."""
        found = self._read.get(physics)
        if found is None:
            changes, added = physics
            found = case_from_data(laid_over(self.data, dict(changes), added), self.case.path, self.case.text)
            self._read.clear()  # the last one is asked for twice: when it is changed, and when it is worked out
            self._read[physics] = found
        return found


@dataclass(frozen=True)
class Outcome:
    """What there is to show for a state.

    Attributes:
        comparison: Its result, or the last good one while it is not there.
        is_current: Whether the result is that of the state.
        working: What is being done, in words, while it is not ready.
        is_whole: Whether the remaining life of its options is in it, or never will be; if not, it follows.
        problem: Why there is no result of this state, in words.
    """

    comparison: Comparison
    is_current: bool
    working: str = ""
    problem: str = ""
    is_whole: bool = True


class Desk:
    """Makes results in one thread of its own; any thread may ask."""

    def __init__(self, source: Source, on_build: Callable[[str], None] | None = None) -> None:
        self.source = source
        self._door = threading.Condition()
        self._results: OrderedDict[Physics, Comparison | str] = OrderedDict()
        self._partial: set[Physics] = set()
        self._wanted: Physics | None = None
        self._shown = State().physics
        self._doing = ""
        self._since = 0.0
        self._last: Comparison = assess(compare(source.case, on_build), source.on)
        self._keep(State().physics, self._last)
        self._partial = {State().physics} if has_life(source.case) else set()
        threading.Thread(target=self._work, name="results", daemon=True).start()

    @property
    def is_idle(self) -> bool:
        """Return whether nothing is made, and was not just now: pictures then have the machine for themselves."""
        return self._wanted is None and time.monotonic() - self._since > PAUSE_S

    def outcome(self, state: State, patience_s: float = PATIENCE_S) -> Outcome:
        """Return the result of a state, waiting a little for it.

        Args:
            state: The state.
            patience_s: How long to wait before the last good result is returned as it is. [s]
        """
        key, until = state.physics, time.monotonic() + patience_s
        with self._door:
            self._shown = key
            if key in self._partial:
                self._door.notify_all()
            if key not in self._results:
                self._wanted = key
                self._door.notify_all()
            # Another state may be wanted meanwhile: who waits for this one then gets what there is.
            while key not in self._results and (left := until - time.monotonic()) > 0.0 and self._wanted == key:
                self._door.wait(left)
            return self._outcome(key)

    def _outcome(self, key: Physics) -> Outcome:
        found = self._results.get(key)
        if found is None:
            took = time.monotonic() - self._since
            return Outcome(self._last, False, f"{self._doing or 'Working out the numbers'}, {took:.0f} s so far")
        self._results.move_to_end(key)
        if isinstance(found, str):
            return Outcome(self._last, False, problem=found)
        self._last = found
        return Outcome(found, True, is_whole=key not in self._partial)

    def _work(self) -> None:
        while True:
            with self._door:
                while self._wanted is None and self._shown not in self._partial:
                    self._door.wait()
                if self._wanted is None:
                    self._door.wait(PAUSE_S)  # what follows lets the next change go first
                key, self._since, self._doing = self._wanted, time.monotonic(), ""
            if key is None:
                self._follow()
                continue
            found = self._made(key)
            with self._door:
                self._keep(key, found)
                if isinstance(found, Comparison) and has_life(found.case):
                    self._partial.add(key)
                if self._wanted == key:
                    self._wanted = None
                self._door.notify_all()

    def _follow(self) -> None:
        """Add the remaining life to the result that is shown; one that is overtaken has it when it is shown again."""
        with self._door:
            key = self._shown
            found = self._results.get(key) if key in self._partial else None
        if not isinstance(found, Comparison):
            return

        def give_way() -> None:
            if self._wanted is not None or self._shown != key:
                raise _Overtaken

        try:
            whole = _with_life(found, give_way)
        except _Overtaken:
            return
        with self._door:
            self._partial.discard(key)
            if whole is not None and key in self._results:
                self._results[key] = whole

    def _made(self, key: Physics) -> Comparison | str:
        """Return the result, or why there is none: a fault of ours must not end the thread."""
        try:
            return assess(compare(self.source.case_with(key), self._say_build), self.source.on)
        except RetrofitError as error:
            return error.message if hasattr(error, "message") else str(error)
        except Exception as error:
            return f"this could not be computed, by a fault of the program ({type(error).__name__}); undo the change"

    def _say_build(self, designation: str) -> None:
        self._doing = f"Building the property tables of {designation}, once for this version"

    def _keep(self, key: Physics, found: Comparison | str) -> None:
        self._results[key] = found
        while len(self._results) > MOST_RESULTS:
            self._partial.discard(self._results.popitem(last=False)[0])


def has_life(case: Case) -> bool:
    """Say whether there is something to tell of the years that remain.

    Args:
        case: The case.
    """
    return any(table is not None for table in (case.year, case.emissions, case.money))


class _Overtaken(BaseException):
    """Something newer is asked for."""


def _with_life(found: Comparison, give_way: Callable[[], None]) -> Comparison | None:
    """Return a result with the remaining life of its options, like hours of the year taken together.

    Args:
        found: The result.
        give_way: Called between the options, to end the work where something newer is asked for.
    Returns: Nothing if it cannot be worked out.
    """
    from retrofit.study.life import life_of, lived

    try:
        return lived(found, life_of(found, draws=0, hourly=False, before_each=give_way))
    except RetrofitError:
        return None
    except Exception:
        logging.getLogger(__name__).exception("the remaining life could not be worked out")
        return None
