"""Forms without a script: each changes the newest state, and what is wrong is shown where it was written."""

import re
import time

import pytest

from retrofit.meeting import session_of
from retrofit.meeting.board import build_board
from retrofit.meeting.lineup import HEADLINES, TODAY
from retrofit.study import Verdict
from retrofit.units import MISSING
from tests.meeting.conftest import Client, case_text


def field(html, key):
    """Return the value that stands in an input."""
    return re.search(rf'id="in-{re.escape(key)}"[^>]* value="([^"]*)"', html)[1]


def numbers(client, quantity):
    """Return a row of the comparison as the page shows it, today's first."""
    return re.findall(
        rf'<td class="n (?:today)?"><a class="how" href="/how/[^/]+/{quantity}">([^<]*)</a>', client.page()
    )


def test_a_change_is_followed_by_the_numbers_and_undone_by_undo(client):
    """A warmer condenser costs COP; undo brings every number back, redo takes it away again."""
    row = "efficiency-cop-cooling-over-compressor-power"
    before = numbers(client, row)
    page = client.change(**{"in.duty.condensing": "50 degC"})
    after = numbers(client, row)
    client.change("undo")
    undone = numbers(client, row)
    client.change("redo")

    assert field(page, "duty.condensing") == "50 degC"
    assert "<s>42 degC</s>" in page
    assert all(float(new) < float(old) for new, old in zip(after, before, strict=True))
    assert len(before) == 3
    assert undone == before
    assert numbers(client, row) == after


def test_the_page_and_the_case_file_with_that_value_agree(client, case_file):
    """A change on the page gives the numbers of a case file that says the same."""
    from retrofit.case import read_case
    from retrofit.checks import assess
    from retrofit.study import compare

    client.change(**{"in.duty.condensing": "46 degC", "in.duty.subcooling": "5 K", "in.plant.charge": "200 kg"})
    text = case_file.read_text(encoding="utf-8")
    for old, new in (("42 degC", "46 degC"), ('"3 K"', '"5 K"'), ("260 kg", "200 kg")):
        text = text.replace(old, new, 1)
    case_file.with_name("other.toml").write_text(text, encoding="utf-8")
    expected = assess(compare(read_case(case_file.with_name("other.toml"))))

    found = client.session.moment().outcome.comparison
    assert [entry.duty for entry in found.entries] == [entry.duty for entry in expected.entries]
    assert [entry.plant for entry in found.entries] == [entry.plant for entry in expected.entries]
    assert [entry.findings for entry in found.entries] == [entry.findings for entry in expected.entries]


@pytest.mark.parametrize(
    ("key", "text", "words"),
    [
        ("duty.condensing", "50", "write"),
        ("duty.condensing", "900 degC", "outside what is allowed"),
        ("duty.cooling", "", "is missing"),
        ("duty.useful_superheat", "5 degC", "K"),
        ("compressor.isentropic_efficiency", "1.4", "outside what is allowed"),
        ("plant.charge", "<b>heavy</b>", "does not begin with a number"),
    ],
)
def test_a_wrong_value_stays_in_its_field_with_what_is_allowed(client, read, key, text, words):
    """The state is as before, the text stands where it was written, and the complaint beside it."""
    before = client.state
    html = client.change(**{f"in.{key}": text})
    wrong = re.search(r'<div class="in [^"]*wrong">.*?</div>', html, re.DOTALL)[0]

    assert client.state == before
    assert f'name="in.{key}"' in wrong
    assert "Not taken:" in wrong
    assert words in read(wrong)[1]
    assert 'aria-invalid="true"' in wrong
    assert ("b", {}) not in read(html)[0]


def test_a_wrong_value_does_not_stop_the_next_change(client):
    """A field left wrong keeps its text and complaint; a right change in another field is taken."""
    client.change(**{"in.duty.condensing": "50"})
    html = client.change(**{"in.duty.condensing": "50", "in.duty.subcooling": "6 K"})

    assert dict(client.state.changes) == {"duty.subcooling": "6 K"}
    assert field(html, "duty.condensing") == "50"
    assert "Not taken:" in html


def test_two_fields_that_fit_only_together_are_taken_together(client):
    """An evaporator warmer than its air is refused; with warmer air it is taken, without writing it again."""
    client.change(**{"in.duty.evaporating": "4 degC"})
    refused = client.state.changes
    client.change(
        **{"in.duty.evaporating": "4 degC", "in.evaporator.inlet": "14 degC", "in.evaporator.outlet": "9 degC"}
    )

    assert refused == ()
    assert dict(client.state.changes)["duty.evaporating"] == "4 degC"


def test_a_late_form_changes_only_what_was_changed_on_it(client):
    """Two windows: the second one's form, made before the first one's change, does not take that back."""
    seen = client.session.version
    client.change(**{"in.duty.condensing": "45 degC", "in.duty.subcooling": "3 K"})
    client.post(seen=seen, **{"in.duty.condensing": "42 degC", "in.duty.subcooling": "6 K"})

    assert dict(client.state.changes) == {"duty.condensing": "45 degC", "duty.subcooling": "6 K"}


def test_two_windows_that_change_the_same_are_told(client, read):
    """The second one's change, made on a page before the first one's, is not taken: the input names both texts."""
    seen = client.session.version
    client.change(**{"in.duty.condensing": "45 degC"})
    client.post(seen=seen, window="b", **{"in.duty.condensing": "47 degC"})
    elements, text = read(client.page())
    field = next(named for tag, named in elements if named.get("name") == "in.duty.condensing")
    refused = dict(client.state.changes)
    client.change(window="b", **{"in.duty.condensing": "47 degC"})

    assert refused == {"duty.condensing": "45 degC"}
    assert "Condensing: changed to 45 degC (was 42 degC) by another window meanwhile; to have 47 degC" in text
    assert field["value"] == "45 degC"
    assert dict(client.state.changes) == {"duty.condensing": "47 degC"}
    assert "by another window" not in client.page()


def test_what_another_window_changed_beside_it_is_told(client, read):
    """A change of something else is taken, and the page names what its window had not seen."""
    seen = client.session.version
    client.change("hide R454C")
    client.post(seen=seen, window="b", **{"in.duty.condensing": "47 degC"})
    _, text = read(client.page())
    client.change(**{"in.duty.condensing": "48 degC"})

    assert dict(client.state.changes)["duty.condensing"] == "48 degC"
    assert "a page that did not show this yet. R454C hidden: changed to yes (was no)." in text
    assert "did not show this yet" not in client.page()


def test_a_window_is_not_told_of_itself(client):
    """Typing on before the answer is there: the second form of one window is later than its first, and taken."""
    seen = client.session.version
    client.post(seen=seen, window="a", **{"in.duty.condensing": "4 degC"})
    client.post(seen=seen, window="a", **{"in.duty.condensing": "45 degC"})

    assert dict(client.state.changes) == {"duty.condensing": "45 degC"}
    assert "by another window" not in client.page()
    assert "did not show this yet" not in client.page()


TAKEN_BACK = {
    "undo": {"act": "undo"},
    "all inputs": {"act": "reset"},
    "note": {"act": "note", "n.meeting": "Second text"},
    "weight": {"act": "weigh", "w.energy": "2", "w.climate": "9"},
}


@pytest.mark.parametrize("form", TAKEN_BACK.values(), ids=TAKEN_BACK)
def test_nothing_of_another_window_is_taken_back_unseen(form, client, read):
    """Undo, reset, notes and weights: what the first window did stands, and the second is told of it."""
    seen = client.session.version
    client.change("note", window="a", **{"n.meeting": "First text"})
    client.change("weigh", window="a", **{"w.energy": "7"})
    client.change(window="a", **{"in.duty.condensing": "45 degC"})
    before = client.state
    client.post(seen=seen, window="b", **form)
    _, text = read(client.page())

    assert client.state == before
    assert re.search(r"changed to .* \(was .*\) by another window meanwhile", text)
    if "n.meeting" in form:
        assert "Second text" in text  # what was written is not lost


def test_weights_of_another_window_stay(client):
    """A form carries all weights; only those that were changed on it are taken."""
    seen = client.session.version
    client.change("weigh", window="a", **{"w.energy": "7"})
    client.post("weigh", seen=seen, window="b", **{"w.energy": "5", "w.climate": "9"})

    assert dict(client.state.weights) == {"energy": 7, "climate": 9}


@pytest.mark.parametrize("text", ["000000999999", "0" * 200, "11", "-1", "1e1", "5.0", "\u0665", "", " "])
def test_a_weight_out_of_range_is_told_however_it_is_written(text, client):
    """Zeros in front do not hide a number, and nothing written there ends the page."""
    page = client.change("weigh", **{"w.energy": text})

    assert "Not taken: a weight is a whole number from 0 to 10" in page
    assert client.state.weights == ()
    assert client.get("/").status_code == 200


def test_a_weight_may_have_zeros_in_front(client):
    """007 is seven."""
    client.change("weigh", **{"w.energy": "007"})

    assert dict(client.state.weights) == {"energy": 7}


def test_a_form_from_nowhere_is_refused_in_words(client):
    """A version that never was changes nothing, and the page says so."""
    client.post(seen=999, **{"in.duty.condensing": "45 degC"})

    assert client.state.changes == ()
    assert "too old" in client.page()


def test_steps_and_a_whole_side_move(client):
    """A step changes one input; a side's step moves its three temperatures together."""
    client.change("nudge duty.subcooling +1")
    client.change("nudge sink +1")

    assert dict(client.state.changes) == {
        "duty.subcooling": "4 K",
        "condenser.inlet": "33 degC",
        "condenser.outlet": "39 degC",
        "duty.condensing": "43 degC",
    }
    client.change("reset duty.subcooling")
    client.change("reset")
    assert client.state.changes == ()


def test_hide_show_and_pin(client, read):
    """A hidden candidate is named with its verdict and what decides it; a pinned one stands first; today's stays."""
    page = client.change("hide R448A")
    columns = re.findall(r'<th scope="row" rowspan="2">.*? (R-[0-9A-Z]+)<span class="unit">', page)
    hidden = re.search(r'<ul class="hidden-list">.*?</ul>', page, re.DOTALL)[0]
    client.change("show R448A")
    pinned = re.findall(r'<th scope="row" rowspan="2">.*? (R-[0-9A-Z]+)<span class="unit">', client.change("pin R454C"))

    assert columns == ["R-404A", "R-454C"]
    assert "R-448A" in read(hidden)[1]
    assert "suitable with modifications" in hidden
    assert pinned == ["R-404A", "R-454C", "R-448A"]


def test_cautions_of_all_in_sight_are_on_the_page(client, read):
    """Every caution text of every refrigerant shown stands there; with a candidate hidden only its own go."""

    def texts(names):
        found = client.session.moment().outcome.comparison.entries
        return {c.text for e in found if e.refrigerant.designation in names for c in e.cautions}

    whole = read(client.page())[1]
    less = read(client.change("hide R454C"))[1]

    assert all(re.sub(r"\s+", " ", text) in whole for text in texts({"R404A", "R448A", "R454C"}))
    assert all(re.sub(r"\s+", " ", text) in less for text in texts({"R404A", "R448A"}))
    assert len(texts({"R404A", "R448A", "R454C"})) > len(texts({"R404A", "R448A"})) > 1


def test_add_and_take_away(client):
    """A candidate is added by any spelling of its designation, and taken away again; nonsense is refused."""
    client.change("add", designation="r-449a")
    added = client.state.added
    names = [entry.refrigerant.designation for entry in client.session.moment().outcome.comparison.candidates]
    twice = client.change("add", designation="R449A")
    wrong = client.change("add", designation="R999Z<script>")
    client.change("drop R449A")

    assert added == ("R449A",)
    assert names == ["R448A", "R454C", "R449A"]
    assert "is there already" in twice
    assert "is not in the catalogue" in wrong
    assert "<script>" not in wrong.replace('<script src="/meeting.js"', "")
    assert client.state.added == ()


def test_side_by_side_marks_differences(client):
    """Two candidates stand beside today's, each line marked as the same, close or different."""
    page = client.change("beside", first="R448A", second="R454C")
    table = re.search(r'<table[^>]*id="t-beside".*?</table>', page, re.DOTALL)[0]

    assert re.findall(r'<th scope="col"[^>]*>([^<]*)', table) == [
        "Quantity",
        "R-404A",
        "R-448A",
        "R-454C",
        "Difference",
    ]
    marks = re.findall(r'<tr class="(same|close|differs)">', table)
    assert marks.count("differs") > 20
    assert {"same", "close"} <= set(marks)
    # By hand from the table of the case: 39.3 and 45.2 against 38.. : the difference is second less first.
    first, second, difference = (
        float(text.replace("\N{MINUS SIGN}", "-").replace("\N{NARROW NO-BREAK SPACE}", ""))
        for text in re.search(
            r"Condenser bubble point.*?</td><td class=\"n \">.*?>([^<]*)</a></td><td class=\"n \">.*?>([^<]*)</a></td>"
            r"<td class=\"n\">([^<]*)</td>",
            table,
        ).groups()
    )
    assert difference == pytest.approx(second - first, abs=0.11)


def test_weights_change_the_order_and_gates_stay_gates(client, read):
    """A candidate stopped by a gate is not ranked whatever the weights, and named with it."""
    client.change("add", designation="R449A")
    ways = []
    for name in ("energy", "climate"):
        weights = {f"w.{other}": "10" if other == name else "0" for other in WEIGHED}
        page = client.change("weigh", **weights)
        ways.append(re.findall(r'<tr><td class="n">[0-9=]+</td><th scope="row">([^<]*)</th>', page))
        gated = read(re.search(r'<ul class="gated">.*?</ul>', page, re.DOTALL)[0])[1]
        assert "R-454C is not ranked:" in gated
        assert "weight sets drawn around the weights of the meeting and over all weightings alike" in page
        assert re.search(r'<td class="n first">[0-9]+ % <span class="quiet">\([0-9]+ %\)', page)

    assert ways[0] != ways[1]
    assert all("R-454C" not in way for way in ways)
    refused = client.change("weigh", **{"w.energy": "11"})
    assert "whole number from 0 to 10" in refused


WEIGHED = ("energy", "first cost", "climate", "safety works", "supply risk", "disruption")


def test_notes_survive_a_reload(client):
    """Notes are kept with the meeting; they are text and nothing else."""
    client.change("note", **{"n.meeting": "Ask the maker.\nTwice.", "n.R448A": "<script>alert(1)</script>"})
    page = client.page()

    assert dict(client.state.notes)["meeting"] == "Ask the maker.\nTwice."
    assert "Ask the maker." in page
    assert "&lt;script&gt;alert(1)&lt;/script&gt;" in page
    assert "<script>alert" not in page


def test_units_change_every_number_and_nothing_else(client):
    """Inch-pound units show the same result; no result is made anew."""
    before = client.session.moment().outcome.comparison
    page = client.change("units ip")

    assert "°F" in page
    assert "psig" in page
    assert client.session.moment().outcome.comparison.entries == before.entries


def test_sentences_are_in_the_units_of_the_meeting(client):
    """Board, findings of one refrigerant and report: no mark of a quantity is left, and its unit is the one chosen."""
    for units, unit in (("si", "kW needed"), ("ip", "ton needed"), ("both", "ton) needed")):
        pages = [client.change(f"units {units}")]
        pages += [client.get(path).get_data(as_text=True) for path in ("/why/R454C", "/why/R404A", "/report")]

        assert not re.search("[\ue000-\uf8ff]", "".join(pages))
        assert unit in pages[1].replace("\N{NO-BREAK SPACE}", " ")


def test_an_unknown_act_is_told_in_words(client):
    """What no button asks for is refused without a fault."""
    for act in ("", "explode", "hide", "hide R11", "pin ../../etc/passwd", "nudge duty.cooling +9", "units furlongs"):
        assert client.post(act).status_code == 303
    assert client.state.hidden == ()


def test_a_refrigerant_keeps_its_mark(client):
    """Hidden, pinned, added or taken away: no refrigerant takes over the mark of another."""

    def marks(act, **fields):
        client.change(act, **fields)
        board = build_board(client.session.moment(), client.session.source, client.app.extensions["meeting"].pictures)
        return {player.designation: (player.marker, player.colour) for player in board.lineup.players}

    first = marks("add", designation="R449A") | marks("add", designation="R407A")
    hidden, dropped = marks("hide R448A"), marks("drop R449A")
    back = marks("pin R407A") | marks("add", designation="R407H")

    assert len(set(first.values())) == 5
    for found in (hidden, dropped, back):
        assert {name: first[name] for name in found if name in first} == {n: m for n, m in found.items() if n in first}
    assert back["R407H"] not in first.values()


def test_the_line_up_has_what_a_client_asks_for(client, read):
    """What all need is told once, the years come with their notes, and each number is that of its table."""
    while not client.session.moment().outcome.is_whole:
        time.sleep(0.02)
    client.change("add", designation="R449A")
    while not client.session.moment().outcome.is_whole:
        time.sleep(0.02)
    board = build_board(client.session.moment(), client.session.source, client.app.extensions["meeting"].pictures)
    (table,) = (table for table in board.life if table.name == "money")
    saving = {g.name: g for g in table.groups}["yearly"].rows[-1]
    shown = {player.designation: player for player in board.lineup.players}
    labels = [label for label, _ in board.lineup.headings]

    assert labels[-2:] == ["First cost", "Saving"]
    assert "R-448A and R-449A alike" in board.lineup.shared
    assert "Work that every conversion needs" in board.lineup.shared
    assert "Work that every conversion needs" not in shown["R448A"].reasons
    assert "More hazardous safety class" in shown["R454C"].reasons
    for name, place in (("R448A", "R-448A"), ("R454C", "R-454C")):
        assert shown[name].cells[-1].text == saving.cells[table.columns.index(place)].text
    told = {mark for player in shown.values() for cell in player.cells for mark in cell.marks}
    assert told == {note.mark for note in board.lineup.notes}
    assert [label for label, _, _ in board.lineup.today][:2] == ["Cooling", "COP"]


def test_every_number_of_the_line_up_is_found(watched):
    """With a year, emissions and money in the case no heading lacks its row in the report's tables."""
    while not watched.session.moment().outcome.is_whole:
        time.sleep(0.02)
    board = build_board(watched.session.moment(), watched.session.source, watched.app.extensions["meeting"].pictures)

    assert [label for label, _ in board.lineup.headings] == [item.label for item in HEADLINES]
    assert [label for label, _, _ in board.lineup.today] == [item.label for item in TODAY]


def test_what_rules_a_candidate_out_is_told_at_that_candidate(client):
    """Only work is told once for several; two candidates with the same stop both carry it."""
    client.change("add", designation="R454A")
    board = build_board(client.session.moment(), client.session.source, client.app.extensions["meeting"].pictures)
    stopped = [player for player in board.lineup.players if player.judged.verdict == Verdict.NOT_SUITABLE]

    assert len(stopped) == 2
    assert all("More hazardous safety class" in player.reasons for player in stopped)


def test_the_cautions_scroll_under_what_stays_in_sight(client):
    """The strip of the plant today stays at the top of the window: nothing of the block lies above it."""
    html = client.get("/").text

    assert 'id="cautions"' in html
    assert "z-index:2147483647" not in html


def test_a_new_plant_has_its_verdict_and_no_number_of_the_old_machine(case_file):
    """Described by the case it is judged as a new plant: no stop of the old one, its cells of the machine empty."""
    case_file.write_text(case_text(has_year=False, has_new_plant=True), encoding="utf-8")
    client = Client(session_of(case_file))
    board = build_board(client.session.moment(), client.session.source, client.app.extensions["meeting"].pictures)
    player = next(player for player in board.lineup.players if player.designation == "R454C")
    cells = dict(zip([label for label, _ in board.lineup.headings], player.cells, strict=True))

    assert player.judged.verdict != Verdict.NOT_SUITABLE
    assert cells["Cooling against today"].text == MISSING
    assert client.get("/why/R454C").status_code == 200
