"""Safety classes against published tables.

tests/published/ashrae34_classes.csv holds the class as each source prints it (the keys are those of the
bibliography; Spain2019 prints blends as nominal/worst leak). Its column `memory` is not published.
"""

import csv
from pathlib import Path

import pytest

from retrofit.refrigerants import designations, find, is_flammable, parse_safety_class

FILE = Path(__file__).parents[1] / "published" / "ashrae34_classes.csv"
with FILE.open(encoding="utf-8", newline="") as _file:
    ROWS = list(csv.DictReader(_file))
SOURCES = ("ASHRAE2021T1", "ASHRAE2021T2", "Spain2019")
PRINTED = [(row["designation"], source, row[source]) for row in ROWS for source in SOURCES if row[source]]
REMEMBERED = [(row["designation"], row["memory"]) for row in ROWS if row["memory"]]
MILDEST_FIRST = ["A1", "A2L", "A2", "A3", "B1", "B2L", "B2", "B3"]


@pytest.mark.parametrize(("designation", "source", "printed"), PRINTED)
def test_class_is_the_published_one(designation, source, printed):
    """The class is the printed one; of a nominal/leaked pair the less mild one is the class."""
    expected = max(printed.split("/"), key=MILDEST_FIRST.index)

    assert find(designation).safety_class.value == expected


def test_at_least_ninety_classes_are_checked_against_a_published_table():
    """The published list covers 90 refrigerants or more, and each is marked as read."""
    checked = {designation for designation, _, _ in PRINTED}

    assert len(checked) >= 90
    assert {find(designation).safety_class.basis for designation in checked} == {"read"}


@pytest.mark.parametrize(("designation", "remembered"), REMEMBERED)
def test_remembered_class_is_marked_as_memory(designation, remembered):
    """A class no table at hand gives agrees with the remembered one and says that it is from memory."""
    stated = find(designation).safety_class

    assert stated.value == remembered
    assert stated.basis == "memory"
    assert stated.confidence in ("high", "medium", "low")


def test_every_refrigerant_is_in_one_list_or_has_no_class():
    """Only R1123 has no class, and it is not given one."""
    without = [name for name in designations() if find(name).safety_class.value is None]
    listed = {designation for designation, _, _ in PRINTED} | {designation for designation, _ in REMEMBERED}

    assert without == ["R1123"]
    assert set(designations()) - listed == {"R1123"}


@pytest.mark.parametrize(
    ("text", "parts", "flammable"),
    [
        ("A1", ("A", "1"), False),
        ("A2L", ("A", "2L"), True),
        ("B2", ("B", "2"), True),
        ("A3", ("A", "3"), True),
        ("B2L", ("B", "2L"), True),
    ],
)
def test_class_is_parted_into_toxicity_and_flammability(text, parts, flammable):
    """A class parts into its letter and its flammability (ASHRAE 34, form of the classes)."""
    assert parse_safety_class(text) == parts
    assert is_flammable(text) is flammable


@pytest.mark.parametrize("text", [None, "", "A", "A4", "C1", "A1/A1", "A2l", 1.0])
def test_what_is_no_class_stays_unknown(text):
    """A text that is no class of the standard gives None, never a mild class."""
    assert parse_safety_class(text) is None
    assert is_flammable(text) is None
