"""Tables of law as files: complete rows, faults with their line, the user's own, review days and history."""

import csv
import datetime
import re
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.case import EQUIPMENT, JURISDICTIONS, Law
from retrofit.checks.law import read_table, shipped, tables_for, with_law
from retrofit.checks.law.rows import SUBJECTS
from retrofit.errors import CaseFileError
from retrofit.refrigerants import designations
from retrofit.study.law import Change, Limit, RowState, Why
from retrofit.study.law_words import limit_text, line, problems

ROWS = [(table, row) for table in shipped().values() for row in table.rows]
EUROPE = [row for table, row in ROWS if table.file.startswith(("eu-", "gb-"))]
GOOD = """\
title = "An invented law"
jurisdictions = ["other"]
review_by = 2030-01-01

[[row]]
id = "check"
subject = "leak check"
text = "Leak check at least every 4 months."
value = 4
unit = "months"
when = [{ measure = "kg", from = 2 }]
applies_from = 2020-01-01
applies_until = 2028-12-31
gwp_basis = "none"
source = "Invented, Art. 1"
date_checked = 2026-01-01
basis = "read"
"""
ON = datetime.date(2026, 12, 1)
PUBLISHED = Path(__file__).parents[2] / "published" / "law_rows.csv"


@pytest.mark.parametrize(("table", "row"), ROWS, ids=lambda item: getattr(item, "id", ""))
def test_every_row_is_complete(table, row):
    """Each has words, a source, the day it was checked, how it is known, and a first day unless it is a proposal."""
    assert row.text.endswith(".")
    assert len(row.document) > 5
    assert row.date_checked <= row.review_by == table.review_by
    assert row.basis in ("read", "extract", "memory")
    assert (row.confidence != "") == (row.basis == "memory")
    assert (row.applies_from is None) == (row.subject == "proposal")


@pytest.mark.parametrize("row", EUROPE, ids=lambda row: row.id)
def test_every_row_of_the_eu_and_great_britain_says_where_it_stands(row):
    """Document, clause, edition and address; what is not compared with the published text is not marked as read."""
    assert row.address.startswith(("http://data.europa.eu/", "https://www.legislation.gov.uk/", "https://"))
    assert row.edition
    assert row.clause or row.document.startswith(("Regulation (EC) 1005/2009", "UNEP"))
    assert row.basis != "read" or "not verified" not in row.clause


def test_dates_limits_and_figures_are_as_noted_from_the_texts():
    """What each row holds is what was noted beside it: compared by eye with the texts that the row's source names."""
    noted = list(csv.reader(PUBLISHED.read_text("utf-8").splitlines()))[1:]

    assert sorted(noted) == sorted(_noted(row) for _, row in ROWS)


def _noted(row):
    """Return a row of a table as the list of notes has it."""
    yes_no = {None: "", True: "yes", False: "no"}
    flags = (row.hermetically_sealed, row.leak_detection_system, row.product_below_minus_50)
    days = [str(day or "") for day in (row.applies_from, row.applies_until)]
    value = "" if row.value is None else f"{row.value:.10g}"
    limits = "; ".join(map(limit_text, row.when))
    return [row.id, *days, limits, value, row.unit, row.gas, *(yes_no[flag] for flag in flags)]


def test_subjects_and_jurisdictions_are_covered():
    """There are rows on every subject, and tables for the EU, Great Britain, the US and one of its states."""
    assert {row.subject for _, row in ROWS} == set(SUBJECTS)
    assert {name for table in shipped().values() for name in table.jurisdictions} == {"EU", "GB", "US", "US-CA"}
    names = [row.id for _, row in ROWS]
    assert len(names) == len(set(names))


@pytest.mark.parametrize("equipment", EQUIPMENT)
def test_every_line_defers(law_of, equipment):
    """Whatever row reaches a reader, it says to check the current text, and where it is from memory it says that."""
    for jurisdiction in ("EU", "GB", "US", "US-CA"):
        for name in ("R404A", "R448A", "R22", "R1234yf", "R290", "R401A"):
            for row in law_of(name, 100.0, jurisdiction=jurisdiction, equipment=equipment).rows:
                text = line(row)
                assert "check the current text" in text
                assert all(part in text for part in (row.document, row.clause, row.edition, row.address))
                assert ("not verified against the published text" in text) == (not row.is_verified)
                assert not re.search(r"(?<![Nn]ot )\b(allowed|permitted|safe)\b", text)


def faults(text):
    """Return the problems of a table as (line, key, text)."""
    with pytest.raises(CaseFileError) as refusal:
        read_table("own.toml", text, "folder/law/own.toml")
    return [(problem.line, problem.key, problem.text) for problem in refusal.value.problems]


@pytest.mark.parametrize(
    ("old", "new", "line", "key", "words"),
    [
        ('subject = "leak check"', 'subject = "leek check"', 7, "row[1].subject", 'did you mean "leak check"'),
        ("value = 4", 'value = "4"', 9, "row[1].value", "is a text; write a number"),
        ('unit = "months"', 'unit = "weeks"', 10, "row[1].unit", 'write "months"'),
        ('unit = "months"\n', "", 9, "row[1].value", "value and unit go together"),
        ('measure = "kg"', 'measure = "stone"', 11, "row[1].when[1].measure", "t CO2e"),
        ('measure = "kg"', 'measure = "GWP"', 14, "row[1].gwp_basis", "name its basis"),
        ("from = 2 ", "from = 2, below = 2 ", 11, "row[1].when[1]", "holds nothing"),
        ("from = 2 ", "from = 2, above = 2 ", 11, "row[1].when[1]", "one of each pair"),
        (", from = 2", "", 11, "row[1].when[1]", "a limit has from or above"),
        ("2020-01-01", '"1 January 2020"', 12, "row[1].applies_from", "as in 2027-04-01"),
        ("2020-01-01", '"2020-02-30"', 12, "row[1].applies_from", "on no calendar"),
        ("2020-01-01", "2020-01-01T00:00:00", 12, "row[1].applies_from", "a date with a time"),
        ("2028-12-31", "2019-12-31", 13, "row[1].applies_until", "before the first"),
        ("applies_from = 2020-01-01\n", "", 7, "row[1].subject", "add applies_from"),
        ('basis = "read"', 'basis = "memory"', 17, "row[1].basis", "confidence"),
        ('basis = "read"', 'basis = "hearsay"', 17, "row[1].basis", '"read"'),
        ('source = "Invented, Art. 1"\n', "", 5, "row[1]", "source is missing"),
        ("date_checked = 2026-01-01\n", "", 5, "row[1]", "date_checked is missing"),
        ('id = "check"', 'id = "check"\ncolour = "red"', 7, "row[1].colour", "there is no key"),
        ('jurisdictions = ["other"]', 'jurisdictions = ["Atlantis"]', 2, "jurisdictions", '"other"'),
        ("when = [{", "arrangement = ['rack']\nwhen = [{", 11, "row[1].arrangement", '"multipack"'),
        ("when = [{", "safety_gwp = 750\nwhen = [{", 11, "row[1].safety_gwp", "add safety_exception"),
        ('jurisdictions = ["other"]', "jurisdictions = []", 2, "jurisdictions", "a list with one or more items"),
        ("review_by = 2030-01-01\n", "", 1, "", "review_by is missing"),
        ('subject = "leak check"\n', 'subject = "service ban"\n', 7, "row[1].subject", "names its gas"),
        ("when = [{", "gases = ['HFX']\nwhen = [{", 11, "row[1].gases", "HFC"),
        ("when = [{", "refrigerants = ['R9']\nwhen = [{", 11, "row[1].refrigerants", "not in the catalogue"),
        ("when = [{", "equipment = ['fridge']\nwhen = [{", 11, "row[1].equipment", "refrigeration"),
        ('title = "An invented law"', "title = ", 1, "", "not valid TOML"),
    ],
)
def test_a_fault_is_named_with_its_line_and_what_is_allowed(old, new, line, key, words):
    """Each fault of a table stands at its line and key and says what to write."""
    assert old in GOOD
    (found,) = faults(GOOD.replace(old, new, 1))

    # A fault between two keys may move by the line that was taken out.
    assert found[1] == key
    assert abs(found[0] - line) <= (1 if new == "" else 0)
    assert words in found[2]


def test_every_fault_is_told_at_once_and_rows_have_their_own_names():
    """Two faults are two problems; a second row of the same name is one."""
    both = GOOD.replace('"leak check"', '"x"').replace("value = 4", "value = true")
    assert len(faults(both)) == 2
    twice = GOOD + GOOD[GOOD.index("[[row]]") :]
    assert [text for _, key, text in faults(twice) if key == "row[2].id"] == [
        '"check" is the name of a row above; give each its own'
    ]
    assert "has no rows" in faults(GOOD[: GOOD.index("[[row]]")])[0][2]


@pytest.fixture
def beside(tmp_path):
    """Return a function that writes tables beside a case file and returns the path of that file."""

    def write(**tables):
        folder = tmp_path / "law"
        folder.mkdir()
        for name, text in tables.items():
            (folder / f"{name.replace('_', '-')}.toml").write_text(text, "utf-8")
        return str(tmp_path / "case.toml")

    return write


def test_a_table_of_the_users_adds_to_the_others(beside):
    """A file of another name is one more table, marked as the user's own."""
    tables = {table.file: table for table in tables_for(beside(own=GOOD))}

    assert set(tables) == {*shipped(), "own.toml"}
    assert tables["own.toml"].is_own
    assert not any(table.is_own for name, table in tables.items() if name != "own.toml")


def test_a_table_of_the_users_replaces_one_of_the_same_name(beside):
    """A file of the same name is used instead: nothing of the one that comes with the tool is left."""
    tables = {table.file: table for table in tables_for(beside(eu_2024_573=GOOD))}

    assert set(tables) == set(shipped())
    assert tables["eu-2024-573.toml"].jurisdictions == ("other",)
    assert [row.id for row in tables["eu-2024-573.toml"].rows] == ["check"]


def test_a_malformed_table_of_the_users_stops_and_names_the_file(beside):
    """A table that cannot be read is not left out in silence."""
    path = beside(own=GOOD.replace("2020-01-01", "2020-13-01"))
    with pytest.raises(CaseFileError, match=r"law.own\.toml:12: "):
        tables_for(path)


def assessed(solved, path, on=ON, **law):
    """Return a comparison looked up in the tables for a jurisdiction."""
    given = {"jurisdiction": "other", "date_of_change": "2027-04-01", "remaining_life": "8 years", **law}
    plant = solved.case.plant.model_copy(update={"charge_kg": 50.0})
    case = replace(solved.case, law=Law.model_validate(given), plant=plant, path=path)
    return with_law(replace(solved, case=case), on)


def test_a_table_of_the_users_speaks(solved, beside):
    """The interval of an own table reaches today's refrigerant and the candidates, and its end the line of time."""
    found = assessed(solved, beside(own=GOOD))

    assert [entry.law.leak_check_months for entry in found.entries] == [4, 4, 4]
    assert [(str(moment.day), moment.change) for moment in found.existing.law.timeline] == [
        ("2029-01-01", Change.ENDS),
        ("2035-04-01", Change.END_OF_LIFE),
    ]
    assert [table.file for table in found.law.tables] == ["own.toml"]
    assert found.law.faulty == ()


@pytest.mark.parametrize(
    ("on", "words"),
    [
        (datetime.date(2030, 1, 1), ["has ended, the last on 2028-12-31"]),
        (datetime.date(2030, 1, 2), ["was to be reviewed by 2030-01-01"]),
        (datetime.date(2028, 12, 31), []),
    ],
)
def test_an_expired_table_is_named(solved, beside, on, words):
    """Past its review, or with every row ended, a table is named as a problem; to the last day it is not."""
    said = problems(assessed(solved, beside(own=GOOD), on).law)

    assert len(said) == len(words)
    assert all(word in problem and "own.toml" in problem for word, problem in zip(words, said, strict=True))


def test_past_its_review_a_row_is_unknown_and_gives_no_answer(solved, beside):
    """On the last day of use the interval stands; the day after the row is unknown, whenever the change is."""
    text = GOOD.replace("applies_until = 2028-12-31\n", "")
    path = beside(own=text)
    last = assessed(solved, path, datetime.date(2030, 1, 1)).existing.law
    past = assessed(solved, path, datetime.date(2030, 1, 2)).existing.law

    assert last.leak_check_months == 4
    assert past.leak_check_months is None
    assert [row.state for row in past.rows] == [RowState.UNKNOWN]
    assert [(reason.why, reason.about) for reason in past.leak_check_open] == [
        (Why.PAST_REVIEW, ("own.toml", "2030-01-01"))
    ]


def test_a_row_may_have_its_own_review_day(solved, beside):
    """A row of a table still in use can be past its own."""
    text = GOOD.replace("date_checked", "review_by = 2026-06-01\ndate_checked")

    assert [row.state for row in assessed(solved, beside(own=text)).existing.law.rows] == [RowState.UNKNOWN]


def test_a_table_kept_for_the_past_is_no_fault(solved, beside):
    """With `history = true` a table that has ended is no problem, and still speaks for its own days."""
    text = GOOD.replace("review_by", "history = true\nreview_by")
    found = assessed(solved, beside(own=text), datetime.date(2029, 6, 1))

    assert found.law.faulty == ()
    assert found.existing.law.rows == ()


def test_a_place_without_a_table_has_none(solved):
    """ "other" is no law that the tables hold: nothing is read, and those there are get listed."""
    elsewhere = assessed(solved, "case.toml")

    assert elsewhere.law.tables == ()
    assert elsewhere.law.known == ("EU", "GB", "US", "US-CA")
    assert elsewhere.existing.law is None


@pytest.mark.parametrize("jurisdiction", JURISDICTIONS)
def test_every_jurisdiction_reads_its_own_tables(solved, jurisdiction):
    """Members of the EU and Northern Ireland by the tables for the EU, and what is national is named as not held."""
    law = assessed(solved, "case.toml", jurisdiction=jurisdiction).law
    files = {table.file[:2] for table in law.tables}
    expected = {"US": {"us"}, "US-CA": {"us"}, "GB": {"gb"}, "other": set()}.get(jurisdiction, {"eu"})

    assert files == expected
    assert any(text.startswith("national rules of") for text in law.not_held) == (
        jurisdiction not in ("EU", "NI", "GB", "US", "US-CA", "other")
    )
    assert law.not_held or files <= {"us"}


# Properties

DAYS = st.dates(datetime.date(2024, 3, 11), datetime.date(2060, 1, 1))
CHARGES = st.floats(0.01, 1e5)


@given(day=DAYS, one=CHARGES, other=CHARGES, name=st.sampled_from(["R134a", "R404A", "R1234yf", "R454C", "R22"]))
def test_more_charge_is_never_checked_less_often(law_of, day, one, other, name):
    """The time between checks does not grow with the charge, on any day."""
    less, more = sorted((one, other))
    months = [law_of(name, kg, on=str(day)).leak_check_months or float("inf") for kg in (less, more)]

    assert months[1] <= months[0]


@given(
    day=st.dates(datetime.date(2015, 1, 1), datetime.date(2060, 1, 1)),
    kg=CHARGES,
    name=st.sampled_from(["R134a", "R404A", "R454C", "R1234yf", "R22"]),
    sealed=st.booleans(),
    detected=st.booleans(),
    equipment=st.sampled_from(EQUIPMENT),
)
def test_one_interval_at_a_time(law_of, in_force, day, kg, name, sealed, detected, equipment):
    """Steps neither overlap nor leave a gap: at most one interval applies, and above every step exactly one."""
    given = {"on": str(day), "hermetically_sealed": sealed, "leak_detection_system": detected, "equipment": equipment}
    check = law_of(name, kg, date_of_change=None, **given)
    intervals = [row for row in in_force(check, "leak check") if row.value]

    assert len(intervals) <= 1
    if kg >= 35.0 and (name != "R1234yf" or day >= datetime.date(2024, 3, 11)):
        assert len(intervals) == 1


@given(day=DAYS, life=st.floats(0.1, 30.0), name=st.sampled_from(designations()))
def test_the_line_of_time_lies_between_start_and_end(law_of, day, life, name):
    """Every moment lies after the start and not after the end, in order, and matches a row's first or last day."""
    check = law_of(name, 50.0, on=str(day), date_of_change=str(day), remaining_life=f"{life:.3f} years")
    days = [moment.day for moment in check.timeline]
    edges = {row.applies_from for row in check.rows} | {
        row.applies_until + datetime.timedelta(days=1) for row in check.rows if row.applies_until
    }

    assert abs((check.end - day).days - life * 365.25) < 2.0
    assert days == sorted(days)
    assert all(day < moment <= check.end for moment in days)
    assert set(days) - {check.end} <= edges
    assert all(row.applies_from is None or row.applies_from <= check.end for row in check.rows)
    assert not any(row.applies_until and row.applies_until < day for row in check.rows)


@given(value=st.floats(0, 1e4), low=st.floats(0, 1e4), width=st.floats(0.001, 1e4))
def test_a_limit_holds_its_range_and_nothing_else(value, low, width):
    """From and to belong to a range, above and below do not; a value is under, in or over it, never two of these."""
    half_open, other = Limit("kg", from_=low, below=low + width), Limit("kg", above=low, to=low + width)

    assert (half_open.too_low(value), half_open.too_high(value)) == (value < low, value >= low + width)
    assert (other.too_low(value), other.too_high(value)) == (value <= low, value > low + width)
