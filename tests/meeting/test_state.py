"""The state of a meeting and its history."""

from dataclasses import replace

import pytest

from retrofit.meeting.state import MOST_KEPT, History, State


def with_note(text):
    """Return a state that differs from others by a note."""
    return State(notes=(("meeting", text),))


def test_going_back_and_forth_gives_the_same_states():
    """Undo and redo walk the same states; a new change forgets what had been undone."""
    history = History(State())
    for text in "abc":
        history.add(with_note(text), text)
    history.move(-1)
    history.move(-1)
    seen = [history.now, history.undoable, history.redoable]
    history.move(+1)
    forth = history.now
    history.add(with_note("d"), "d")

    assert seen == [with_note("a"), "a", "b"]
    assert forth == with_note("b")
    assert history.redoable == ""
    assert history.undoable == "d"


def test_every_step_has_a_higher_number_and_can_be_looked_up():
    """Versions rise with undo too, so that a page can tell the newer answer; each gives the state it showed."""
    history = History(State())
    history.add(with_note("a"), "a")
    history.move(-1)

    assert history.version == 3
    assert [history.at_version(n) for n in (1, 2, 3, 4)] == [State(), with_note("a"), State(), None]


def test_the_history_is_bounded():
    """Of many changes the last are kept; beyond the first there is nothing to undo."""
    history = History(State())
    for number in range(3 * MOST_KEPT):
        history.add(with_note(str(number)), str(number))
    for _ in range(3 * MOST_KEPT):
        history.move(-1)

    assert history.undoable == ""
    assert history.now == with_note(str(2 * MOST_KEPT))
    assert history.at_version(1) is None


@pytest.mark.parametrize(
    "change",
    [{"hidden": ("R448A",)}, {"pinned": ("R448A",)}, {"units": "ip"}, {"is_large": True}, {"notes": (("a", "b"),)}],
)
def test_what_is_no_input_shares_the_result(change):
    """Hiding, pinning, units, type and notes leave the numbers alone."""
    assert replace(State(), **change).physics == State().physics
    assert State(changes=(("duty.cooling", "1 kW"),)).physics != State().physics
    assert State(added=("R290",)).physics != State().physics
