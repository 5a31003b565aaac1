"""The keys of [law]: dates read strictly, a life or an end, and what is assumed when something is left out."""

import datetime

import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.case.dates import day_of
from retrofit.case.jurisdictions import EU_MEMBERS, HINTS, JURISDICTIONS, areas
from retrofit.case.law import ARRANGEMENTS, CODES, EQUIPMENT
from retrofit.errors import QuantityError

START = """\
[plant]
refrigerant = "R404A"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compare]
candidates = ["R448A"]
[law]
"""


def test_a_law_as_written(case):
    """Every key is held as what it is: dates, years, a share, yes and no."""
    law = case(
        START
        + 'jurisdiction = "EU"\ndate_of_change = 2027-04-01\nremaining_life = "8 years"\nequipment = "supermarket"\n'
        'leak_detection_system = true\nannual_leak_rate = "15 %"\ncode = "EN 378"\n'
    ).law

    assert law.jurisdiction == "EU"
    assert law.date_of_change == datetime.date(2027, 4, 1)
    assert law.remaining_life_years == 8.0
    assert law.equipment == "supermarket"
    assert (law.leak_detection_system, law.hermetically_sealed, law.product_below_minus_50) == (True, False, False)
    assert law.annual_leak_rate == pytest.approx(0.15)
    assert law.code == "EN 378"


def test_what_is_left_out_of_a_law_is_the_stricter_rule_and_told(case):
    """Not sealed, no detection, no cold product: each stands among the assumptions; the rest is not stated."""
    read = case(START + 'jurisdiction = "US"\n')
    told = {default.key: default.shown_text for default in read.defaults if default.key.startswith("law.")}

    assert told == {
        "law.hermetically_sealed": "false",
        "law.leak_detection_system": "false",
        "law.product_below_minus_50": "false",
    }
    assert (read.law.date_of_change, read.law.end, read.law.equipment, read.law.code) == (None,) * 4
    assert read.given["law.jurisdiction"] == "US"


def test_without_the_table_there_is_no_law(case):
    """A case without [law] has none, and assumes nothing of it."""
    read = case(START.removesuffix("[law]\n"))

    assert read.law is None
    assert not [default for default in read.defaults if default.key.startswith("law.")]


@pytest.mark.parametrize(
    ("line", "key", "words"),
    [
        ('date_of_change = "1 April 2027"', "law.date_of_change", "as in 2027-04-01"),
        ('date_of_change = "2027-4-1"', "law.date_of_change", "as in 2027-04-01"),
        ('date_of_change = "20270401"', "law.date_of_change", "as in 2027-04-01"),
        ('date_of_change = "2027-02-29"', "law.date_of_change", "on no calendar"),
        ("date_of_change = 2027-04-01T00:00:00", "law.date_of_change", "a date with a time"),
        ("date_of_change = 2027", "law.date_of_change", "a number stands where a date is needed"),
        ('date_of_change = "1927-04-01"', "law.date_of_change", "1980-01-01 to 2100-12-31"),
        ('remaining_life = "8 months"', "law.remaining_life", "years"),
        ('remaining_life = "0 years"', "law.remaining_life", "above 0 years"),
        ('remaining_life = "61 years"', "law.remaining_life", "60 years"),
        ('end = 2035-01-01\nremaining_life = "8 years"', "law.remaining_life", "leave one of the two out"),
        ("date_of_change = 2027-04-01\nend = 2027-04-01", "law.end", "is not above date_of_change"),
        ('equipment = "fridge"', "law.equipment", '"refrigeration"'),
        ('equipment = "comfort cooling"', "law.equipment", 'did you mean "air conditioning"'),
        ('hermetically_sealed = "yes"', "law.hermetically_sealed", "true or false"),
        ("leak_detection_system = 1", "law.leak_detection_system", "true or false"),
        ('annual_leak_rate = "120 %"', "law.annual_leak_rate", "0 % to 100 %"),
        ('code = "EN378"', "law.code", '"EN 378"'),
        ('jurisdiction = ""', "law.jurisdiction", '"other"'),
        ('jurisdiction = "Germany"', "law.jurisdiction", 'did you mean "DE"'),
        ('jurisdiction = "Texas"', "law.jurisdiction", 'did you mean "US"'),
        ('jurisdiction = "UK"', "law.jurisdiction", 'did you mean "GB"'),
        ('jurisdiction = "Northern Ireland"', "law.jurisdiction", 'did you mean "NI"'),
        ('jurisdiction = "eu"', "law.jurisdiction", 'did you mean "EU"'),
        ('jurisdiction = "Switzerland"', "law.jurisdiction", 'did you mean "other"'),
        ('jurisdiction = "California"', "law.jurisdiction", 'did you mean "US-CA"'),
        ('arrangement = "rack"', "law.arrangement", 'did you mean "multipack"'),
        ('rated_capacity = "120"', "law.rated_capacity", "kW"),
        ('country = "EU"', "law.country", "there is no key"),
    ],
)
def test_a_wrong_line_of_the_law_is_refused(complaints, line, key, words):
    """Each is named with its key and says what is allowed."""
    found = [text for _, where, text in complaints(START + line + "\n") if where == key]

    assert len(found) == 1
    assert words in found[0]


def test_the_words_of_a_law_are_all_read(case):
    """Each kind of equipment and each code is accepted."""
    assert all(case(START + f'equipment = "{word}"\n').law.equipment == word for word in EQUIPMENT)
    assert all(case(START + f'jurisdiction = "{word}"\n').law.jurisdiction == word for word in JURISDICTIONS)
    assert all(case(START + f'arrangement = "{word}"\n').law.arrangement == word for word in ARRANGEMENTS)
    assert all(case(START + f'code = "{word}"\n').law.code == word for word in CODES)


@given(st.dates(datetime.date(1, 1, 1)))
def test_a_date_and_its_text_are_the_same_day(day):
    """What the standard library writes as ISO 8601 is read back, and a TOML date is itself."""
    assert day_of(day.isoformat()) == day
    assert day_of(day) == day


@given(st.text(max_size=12))
def test_no_other_text_is_a_date(text):
    """A text is a date only if it is what the standard library writes for the day it reads."""
    try:
        day = day_of(text)
    except QuantityError:
        return
    assert day.isoformat() == text


def test_whose_law_holds_where():
    """27 members by ISO 3166-1 (Greece is GR) under the EU, Northern Ireland too; no hint names a code that is none."""
    assert len(EU_MEMBERS) == 27
    assert areas("DE") == ("DE", "EU")
    assert areas("NI") == ("NI", "EU")
    assert areas("US-CA") == ("US-CA", "US")
    assert [areas(code) for code in ("EU", "GB", "US", "other")] == [("EU",), ("GB",), ("US",), ("other",)]
    assert {code for _, code in HINTS} <= set(JURISDICTIONS)
