"""Charge against the room on the page and in the terminal: numbers, workings, what is unknown, what is from memory."""

import re
from dataclasses import replace

import pytest

from retrofit.checks import assess, not_checked
from retrofit.report import render_html
from retrofit.report.terminal import comparison_text
from retrofit.study import compare
from retrofit.units import IP, SI

POUND_KG = 0.45359237  # NIST Special Publication 811 (2008), appendix B
WITH_ROOM = ["harbour-market", "process-chiller", "desert-split", "cold-store", "ice-rink"]
TOPICS = {"ignition sources", "electrical", "ventilation", "detection", "signage"}


def plain(text):
    """Return a text with single blanks, designations with a hyphen, and without backticks."""
    return " ".join(re.sub(r"\bR(?=[0-9])", "R-", text).replace("`", "").split())


def bare(entry, text):
    """Return a text of one refrigerant as the page has it: without whose it is."""
    return plain(text.replace(f" of {entry.refrigerant.designation}", "")).casefold()


def number(text):
    """Return the number of a cell, and half a unit of its last digit."""
    digits = re.sub(r"[\s\u202f+]", "", text).replace("−", "-")
    return float(digits), 0.501 * 10.0 ** -len(digits.partition(".")[2])


def is_shown(text, value, to_SI):
    """Say whether a cell shows a value in SI within half its last digit; no value has to read unknown."""
    if value is None or text == "unknown":
        return value is None and text == "unknown"
    shown, half = number(text)
    return abs(shown * to_SI - value) <= half * to_SI + 1e-9 * abs(value)


def section(html, name="room"):
    """Return one section of a page as HTML."""
    return "".join(re.findall(rf'<section id="{name}(?:-working)?".*?</section>', html, re.DOTALL))


def shown_text(read_page, html, name="room"):
    """Return the text of a section, small letters and single blanks."""
    return " ".join(read_page(section(html, name)).text.split()).casefold()


@pytest.mark.parametrize(("units", "to_SI"), [("si", 1.0), ("ip", POUND_KG)])
@pytest.mark.parametrize("name", WITH_ROOM)
def test_masses_are_those_of_the_result(name, units, to_SI, page_of, read_page, assessed):
    """Charge, its range, limit and margin of every refrigerant read back; what is not known reads unknown."""
    rows = read_page(page_of(name, units)).tables["t-room"][1:]

    assert len(rows) == len(assessed(name).entries)
    for row, entry in zip(rows, assessed(name).entries, strict=True):
        check, span = entry.room, row[3].split(" to ")
        assert row[0].removesuffix(" (today)") == entry.refrigerant.display_name
        assert is_shown(row[2], check.expected_kg, to_SI)
        assert is_shown(span[0], check.lowest_kg, to_SI)
        assert is_shown(span[-1], check.highest_kg, to_SI)
        assert is_shown(row[4], check.deciding.limit_kg if check.deciding else None, to_SI)
        assert is_shown(row[5], check.margin_kg, to_SI)
        assert row[6] == check.verdict


@pytest.mark.parametrize(("units", "to_SI"), [("si", 1.0), ("ip", POUND_KG)])
def test_every_limit_has_figure_and_what_sets_it(units, to_SI, page_of, read_page, assessed):
    """Each limit of each refrigerant stands in the table of its method with its mass."""
    page, result = read_page(page_of("harbour-market", units)), assessed("harbour-market")
    tables = [rows[1:] for key, rows in page.tables.items() if str(key).startswith("t-limit-")]
    found = 0
    for entry in result.entries:
        for limit in entry.room.limits:
            about = re.compile(rf"\b{entry.refrigerant.display_name}\b")
            mine = [row for rows in tables for row in rows if about.search(row[0])]
            assert [row for row in mine if is_shown(row[1], limit.limit_kg, to_SI) and limit.decided_by in row[3]]
            found += 1
    assert found >= 2 * len(result.entries)


@pytest.mark.parametrize("name", WITH_ROOM)
def test_workings_sources_and_flags_are_told(name, page_of, read_page, assessed):
    """Formula, letters, working, edition, source, what is missing and every flag of every limit stand there."""
    text = shown_text(read_page, page_of(name, "si"))
    for entry in assessed(name).entries:
        for limit in entry.room.limits:
            told = (limit.formula, limit.edition, limit.source, limit.applies_because, *limit.symbols)
            own = (*limit.lines, *limit.unknown_because, *limit.flags, limit.open_because)
            assert [item for item in told if plain(item).casefold() not in text] == []
            assert [item for item in own if bare(entry, item) not in text] == []


def test_by_hand_the_harbour_market_s_limits(page_of, read_page):
    """R-404A: 0.52 kg/m³ in 6000 m³ are 3120 kg; R-454C: 39 m³ of its LFL 0.291 kg/m³ are 11.35 kg (decree IF-04)."""
    rows = {row[0]: row for row in read_page(page_of("harbour-market", "si")).tables["t-room"]}

    assert number(rows["R-404A (today)"][4])[0] == 3120.0
    assert number(rows["R-454C"][4])[0] == pytest.approx(1.5 * 26 * 0.291, abs=0.05)


def test_rules_from_memory_are_flagged(page_of, read_page, assessed):
    """A rule that nobody read says so in its block and where it decides."""
    result, html = assessed("process-chiller"), page_of("process-chiller", "si")
    blocks = re.findall(r'<div class="method">.*?</div>', section(html), re.DOTALL)
    rows = read_page(html).tables["t-room"][1:]
    remembered = [limit for entry in result.entries for limit in entry.room.limits if limit.basis == "memory"]

    assert remembered
    for limit in remembered:
        mine = [block for block in blocks if limit.title[1:] in block]
        assert mine
        assert all('<strong class="basis">From memory</strong>' in block for block in mine)
    for row, entry in zip(rows, result.entries, strict=True):
        if entry.room.deciding and entry.room.deciding.basis == "memory":
            assert "he rule is from memory" in row[7]


@pytest.mark.parametrize("name", WITH_ROOM)
def test_unknown_never_looks_like_anything_else(name, page_of, assessed):
    """Its mark is that of the unknown, and what is missing stands beside it; nothing else has the light mark."""
    html = section(page_of(name, "si"))
    table = re.search(r'<table class="words told" id="t-room">.*?</table>', html, re.DOTALL)[0]
    marks = re.findall(r'<span class="verdict-mark ([\w-]+)">([\w ]+)</span>', table)
    want = {"unknown": "unknown", "above the limit": "replace", "below the limit": "keep"}

    assert [word for _, word in marks] == [entry.room.verdict for entry in assessed(name).entries]
    assert all(want[word] == mark for mark, word in marks)
    missing = [entry for entry in assessed(name).entries if entry.room.verdict == "unknown"]
    assert table.count("Missing: ") == len(missing)


def test_a_verdict_that_is_not_known_to_the_page_reads_as_unknown(assessed, made_at):
    """Whatever word comes, only the known ones lose the broken mark."""
    result = assessed("harbour-market")
    odd = replace(result.existing, room=replace(result.existing.room, verdict="fine"))
    html = section(render_html(replace(result, existing=odd), made_at=made_at))

    assert '<span class="verdict-mark unknown">fine</span>' in html


def test_both_candidates_of_an_unresolved_limit_are_shown(case_with, made_at, read_page):
    """R-454B has two figures for its RCL, 49 and 75 g/m³: both are worked, and it is said that they clash."""
    room = {"volume": "100 m3", "location": "II", "occupancy": "other", "comfort": False, "largest_circuit": "20 kg"}
    case = case_with(candidates=("R454B",), plant={"charge": "20 kg"}, room=room, law={"code": "ASHRAE 15"})
    result = assess(compare(case))
    html = render_html(result, made_at=made_at)
    limits = [limit for limit in result.candidates[0].room.limits if limit.method == "rcl"]
    titles = [heading.casefold() for heading in read_page(html).headings]

    assert len(limits) == 2
    assert sorted(limit.limit_kg for limit in limits) == pytest.approx([4.9, 7.5], abs=0.05)  # of 100 m³
    for limit in limits:
        assert f"{limit.code_family}: {limit.title}".casefold() in titles
    assert "unresolved" in shown_text(read_page, html)


def test_conditions_instead_of_a_limit_are_listed_once(case_with, made_at, read_page):
    """All parts in a machinery room: no limit by EN 378, which reads "none"; the conditions stand under the table."""
    room = {"volume": "100 m3", "location": "III", "access": "c", "comfort": False, "largest_circuit": "20 kg"}
    case = case_with(candidates=("R454B",), plant={"charge": "20 kg"}, room=room, law={"code": "EN 378"})
    result = assess(compare(case))
    html = render_html(result, made_at=made_at)
    rows = read_page(html).tables["t-room"][1:]
    part = re.search(r'<section id="room".*?</section>', html, re.DOTALL)[0]
    terminal = " ".join(comparison_text(result, SI, 100).split())

    assert [(row[4], row[5], row[6]) for row in rows] == [("none", "none", "under conditions")] * 2
    assert '<span class="verdict-mark adjust">under conditions</span>' in part
    for text in result.candidates[0].room.conditions:
        assert part.count(text) == 1
        assert text in terminal


def test_the_machinery_room_has_its_numbers(page_of, read_page):
    """900 kg of R-22 ask for 0.07·√900 = 2.1 m³/s or 7560 m³/h (model codes); ammonia's table is not held: unknown."""
    rows = read_page(page_of("ice-rink", "si")).tables["t-machinery"]
    row = next(row for row in rows if "ASHRAE 15" in row[1] and row[0] == "ventilation")

    assert number(re.search(r"R-22 \(today\): ([\d\s.]+) m³/h", row[1])[1])[0] == 7560.0
    assert re.search(r"R-717: Unknown: the table of the standard for class B2L", row[1])
    assert "Unknown: ventilation in [machinery_room]" in row[1]


@pytest.mark.parametrize("name", WITH_ROOM)
def test_questions_and_lists_are_told_whole(name, page_of, read_page, assessed):
    """Every question with its source, every item of the lists of each class, and each reason of a change of class."""
    text = shown_text(read_page, page_of(name, "si"))
    for entry in assessed(name).entries:
        room = entry.room
        for item in (*room.questions, *room.machinery_room):
            assert plain(item.text).casefold() in text
            assert plain(item.source).casefold() in text
            assert [line for line in (*item.lines, *item.missing) if bare(entry, line) not in text] == []
        for listed in room.lists:
            assert [item for item in listed.items if plain(item).casefold() not in text] == []
        for reason in room.change.reasons if room.change else ():
            assert reason.casefold() in text
        assert {listed.topic for listed in room.lists} == TOPICS


def test_the_section_is_there_only_with_a_room(shipped, page_of, read_page, assessed):
    """A case without room and machinery room has a line among the limits instead; sections stay numbered."""
    case = assessed(shipped).case
    has_room = case.room is not None or case.machinery_room is not None
    for units in ("si", "ip"):
        page = read_page(page_of(shipped, units))
        assert ("room" in page.ids) == has_room
    if case.room is None:
        assert any("charge against room volume" in text for text in not_checked(assessed(shipped)))


def test_cautions_stand_above(page_of):
    """Cautions, then law, hardware and room, then the findings of the annex."""
    html = page_of("harbour-market", "si")
    places = [html.index(f'<section id="{name}"') for name in ("cautions", "law", "hardware", "room", "findings")]

    assert places == sorted(places)
    assert "no permission" in section(html)


@pytest.mark.parametrize("name", ["<script>alert(1)</script>", '" onload="x', "{{ 7 * 7 }}", "W" * 100])
def test_the_name_of_a_room_is_only_text(name, case_with, made_at, read_page):
    """It stands there letter by letter, and makes no element."""
    room = {"name": name, "volume": "100 m3"}
    made = [
        read_page(render_html(assess(compare(case_with(room={**room, "name": text}))), made_at=made_at))
        for text in (name, "plain")
    ]

    assert f"Room: {name}" in made[0].text
    assert [tag for tag, _ in made[0].elements] == [tag for tag, _ in made[1].elements]


# Terminal


def block(text):
    """Return the lines of the block on the room."""
    lines = text.split("\n")
    at = next(i for i, line in enumerate(lines) if line.startswith("Charge against the room"))
    return lines[at : at + lines[at:].index("")]


@pytest.mark.parametrize(("units", "to_SI"), [(SI, 1.0), (IP, POUND_KG)])
@pytest.mark.parametrize("name", WITH_ROOM)
def test_the_terminal_has_the_numbers_of_the_result(name, units, to_SI, assessed):
    """One row for each refrigerant, and what decides or is missing below."""
    result = assessed(name)
    lines = block(comparison_text(result, units, 100))
    rule = next(i for i, line in enumerate(lines) if line.startswith("───"))
    for line, entry in zip(lines[rule + 1 :], result.entries, strict=False):
        named, expected, span, limit, margin, verdict = re.split(r"\s{2,}", line)
        assert named.removesuffix(" (today)") == entry.refrigerant.display_name
        assert is_shown(expected, entry.room.expected_kg, to_SI)
        assert is_shown(span.split(" to ")[-1], entry.room.highest_kg, to_SI)
        assert is_shown(limit, entry.room.deciding.limit_kg if entry.room.deciding else None, to_SI)
        assert is_shown(margin, entry.room.margin_kg, to_SI)
        assert verdict == entry.room.verdict
    told = " ".join(" ".join(lines[rule + 1 + len(result.entries) :]).split())
    for entry in result.entries:
        assert entry.refrigerant.display_name in told


def test_the_terminal_keeps_to_its_columns_and_says_nothing_without_a_room(assessed, case_of):
    """Prose wraps at 60 columns; a case without a room has no block."""
    lines = block(comparison_text(assessed("process-chiller"), SI, 60))
    prose = [line for line in lines[1:] if not re.search(r"───|limit$|unknown$|kg|Charge", line)]

    assert len(prose) > 5
    assert max(map(len, prose)) <= 60
    assert "Charge against the room (" not in comparison_text(assess(compare(case_of())), SI, 100)


def test_the_hardware_stands_before_room_and_law(assessed):
    """Cautions, hardware, room, law, findings."""
    text = comparison_text(assessed("harbour-market"), SI, 100)
    places = [text.index(f"\n{start}") for start in ("Cautions", "Hardware: ", "Charge against", "Law: ", "What the")]

    assert places == sorted(places)
