"""The desk: one result at a time, the newest first, each once, and no fault ends it."""

import threading
import time

import pytest

from retrofit.meeting import session_of
from retrofit.meeting.desk import Desk
from retrofit.meeting.state import State
from tests.meeting.conftest import Client, case_text


def warmer(number):
    """Return a state with a condensing temperature of its own."""
    return State(changes=(("duty.condensing", f"{number} degC"),))


@pytest.fixture
def desk(watched):
    """Return a desk of its own on a case already read."""
    return Desk(watched.session.source)


def test_a_result_is_made_once(desk):
    """Asked for again, with other candidates hidden or not, the result is the same object."""
    first = desk.outcome(warmer(45), 30.0)

    assert first.is_current
    assert desk.outcome(warmer(45)).comparison is first.comparison
    assert desk.outcome(State(changes=warmer(45).changes, hidden=("R448A",))).comparison is first.comparison


def test_of_many_quick_changes_only_the_newest_counts(desk, monkeypatch):
    """Who waits for an older state is not kept; few of 200 states are computed, and the last of them is."""
    made = []
    whole = desk._made
    monkeypatch.setattr(desk, "_made", lambda key: made.append(key) or whole(key))
    threads = [
        threading.Thread(target=desk.outcome, args=(warmer(f"{42 + number / 50:.2f}"), 30.0)) for number in range(200)
    ]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join(60.0)
    last = desk.outcome(warmer("47.00"), 60.0)

    assert last.is_current
    assert last.comparison.case.given["duty.condensing"] == "47.00 degC"
    assert len(made) < 100
    assert not any(thread.is_alive() for thread in threads)


def test_what_takes_long_is_under_way_and_then_there(desk, monkeypatch):
    """While a result is made, the last good one is shown with what is being done; then the new one."""
    gate, whole = threading.Event(), desk._made
    monkeypatch.setattr(desk, "_made", lambda key: gate.wait(30.0) and whole(key))
    waiting = desk.outcome(warmer(45), 0.05)
    gate.set()
    ready = desk.outcome(warmer(45), 30.0)

    assert not waiting.is_current
    assert "so far" in waiting.working
    assert waiting.comparison.case.duty.T_cond_K == pytest.approx(315.15)
    assert ready.is_current
    assert ready.comparison.case.duty.T_cond_K == pytest.approx(318.15)


def test_a_fault_leaves_the_last_good_result(desk, monkeypatch):
    """A bug in the study is told as one and does not end the desk."""
    whole = desk._made
    monkeypatch.setattr("retrofit.meeting.desk.compare", lambda *parts: 1 / 0)
    broken = desk.outcome(warmer(44), 30.0)
    monkeypatch.undo()
    after = desk.outcome(warmer(45), 30.0)

    assert "fault of the program (ZeroDivisionError)" in broken.problem
    assert not broken.is_current
    assert after.is_current
    assert whole is not None


def test_a_state_outside_the_model_is_told_and_undone(client, read):
    """A condensing temperature above the critical point gives no numbers, the reason, and a way back."""
    page = client.change(**{"in.duty.condensing": "80 degC"})
    text = read(page)[1]
    back = client.change("undo")

    assert "not computed" in text
    assert "not computed" not in read(back)[1]


def test_results_are_bounded(watched):
    """No more results are kept than stated."""
    from retrofit.meeting import desk as module

    found = module.Desk(watched.session.source)
    for number in range(module.MOST_RESULTS + 30):
        found._keep(((("duty.cooling", str(number)),), ()), "none")

    assert len(found._results) == module.MOST_RESULTS


def test_a_case_that_cannot_be_read_begins_no_meeting(tmp_path):
    """The complaints of a case file are those of every command."""
    from retrofit.errors import CaseFileError

    path = tmp_path / "broken.toml"
    path.write_text("title = 3\n", encoding="utf-8")
    with pytest.raises(CaseFileError, match="plant"):
        session_of(path)


def test_the_remaining_life_follows_the_first_answer(desk):
    """The answer does not wait for the year; the year comes into the same result, and the numbers stay."""
    first = desk.outcome(warmer(45), 30.0)
    until = time.monotonic() + 30.0
    while not (last := desk.outcome(warmer(45))).is_whole and time.monotonic() < until:
        time.sleep(0.02)

    assert first.comparison.life is None
    assert not first.is_whole
    assert set(last.comparison.life.years) >= {"R404A", "R448A"}
    assert [entry.duty for entry in last.comparison.entries] == [entry.duty for entry in first.comparison.entries]


def test_years_give_way_to_a_newer_change_and_come_when_seen_again(desk, monkeypatch):
    """A change that lands while years are worked out goes first; who goes back to the overtaken state has its years."""
    from retrofit.study import life

    gate, begun, whole = threading.Event(), threading.Event(), life._year
    monkeypatch.setattr(life, "_year", lambda *parts: begun.set() or (gate.wait(30.0) and whole(*parts)))
    desk.outcome(warmer(45), 30.0)
    assert begun.wait(30.0)
    desk.outcome(warmer(46), 0.05)
    gate.set()
    newer = desk.outcome(warmer(46), 30.0)
    again = desk.outcome(warmer(45))

    assert newer.is_current
    assert again.comparison.life is None
    assert not again.is_whole
    until = time.monotonic() + 30.0
    while not (again := desk.outcome(warmer(45))).is_whole and time.monotonic() < until:
        time.sleep(0.02)
    assert "R448A" in again.comparison.life.years


def test_a_tariff_changes_money_and_no_temperature(tmp_path):
    """Tariff, grid factor, leak rate and life are inputs where the case has their tables; money and warming follow."""
    path = tmp_path / "market.toml"
    path.write_text(case_text(), encoding="utf-8")
    client = Client(session_of(path))

    def life():
        while not (moment := client.session.moment()).outcome.is_whole:
            time.sleep(0.02)
        return moment.outcome.comparison.life

    before = life().accounts.options["R448A"]
    client.change(
        **{
            "in.money.tariff": "0.36", "in.emissions.grid_factor": "0.7 kg/kWh", "in.law.remaining_life": "12 years",
            "in.emissions.leak_rate_after": "30 %",
        }
    )  # fmt: skip
    after = life().accounts.options["R448A"]

    assert float(after.yearly_cost.total) > float(before.yearly_cost.total)
    assert float(after.tewi.total_kg) > float(before.tewi.total_kg)
