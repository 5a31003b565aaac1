"""The change of safety class for every pair of classes, and the lists of every class."""

from itertools import product

import pytest

from retrofit.checks.room.change import asked_text, class_change, what_is_asked
from retrofit.checks.room.lists import TOPICS, class_lists, questions
from retrofit.refrigerants import find

# ASHRAE 34 and ISO 817: eight classes, from lower to higher toxicity and flammability.
CLASSES = [toxicity + flammability for toxicity in "AB" for flammability in ("1", "2L", "2", "3")]
RANK = {"1": 0, "2L": 1, "2": 2, "3": 3}
# Words that would promise what no tool can.
PROMISES = ("is safe", "are safe", "allowed to", "approved by", "certified", "complies", "no risk", "harmless")


def expected_level(old, new):
    """Return the level a pair must have: a stop for any step up; else what the old class leaves to do."""
    if new[0] > old[0] or RANK[new[1:]] > RANK[old[1:]]:
        return "stop"
    if old[0] == "B" or (old[1:] != "1" and new[1:] != "1"):
        return "work"
    return "note" if old[1:] != "1" else ""


@pytest.mark.parametrize(("old", "new"), list(product(CLASSES, CLASSES)))
def test_every_pair_of_classes_has_its_gate(old, new):
    """Only A1 to A1 passes without a word; flammable to flammable and from B are gates too, each with reasons."""
    found = class_change(old, new, "EU")

    assert found.level == expected_level(old, new)
    assert (found.level == "") == ((old, new) == ("A1", "A1"))
    assert bool(found.reasons) == bool(found.asked) == bool(found.level)


@pytest.mark.parametrize(("old", "new"), [("", "A1"), ("A1", ""), ("", "")])
def test_a_class_that_is_not_stated_is_unknown(old, new):
    """Nothing is said of a step that cannot be seen."""
    assert class_change(old, new, "EU").level == "unknown"


def test_a_step_says_every_reason_it_has():
    """From ammonia to R32 is from toxic and from flammable to flammable; from A1 to B2L is up on both sides."""
    assert class_change("B2L", "A2L", "EU").step == "flammable-to-flammable, from-toxic"
    assert class_change("A1", "B2L", "EU").step == "more-flammable, more-toxic"
    assert class_change("A2L", "A1", "EU").step == "flammable-to-not"


@pytest.mark.parametrize(
    ("jurisdiction", "has", "has_not"),
    [
        ("EU", ("EN 378-4", "t CO2 equivalent"), ("SNAP",)),
        ("US", ("SNAP", "listing", "IIAR 2"), ("EN 378-4",)),
        ("US-CA", ("SNAP",), ("EN 378-4",)),
        (None, ("SNAP", "EN 378-4", "`jurisdiction` in [law] is not given"), ()),
        ("Atlantis", ("nothing is held here for Atlantis",), ("SNAP", "EN 378-4")),
        ("USSR", ("nothing is held here for USSR",), ("SNAP",)),
    ],
)
def test_what_is_asked_follows_the_jurisdiction(jurisdiction, has, has_not):
    """The rows of everywhere come first; those of the place follow, and an unknown place is said to be unknown."""
    text, whole = asked_text(jurisdiction), " ".join(item.text for item in what_is_asked(jurisdiction))

    assert all(words in whole for words in ("whole system", "Owner", "Name plate", "relief capacity"))
    assert all(words in text and words in whole for words in has)
    assert not [words for words in has_not if words in whole]
    assert "whole system" not in text


@pytest.mark.parametrize("name", [*CLASSES, ""])
def test_every_class_has_its_lists(name):
    """Ignition sources, electrical, ventilation, detection and signage, each with items and a source."""
    found = class_lists(name)

    assert {entry.topic for entry in found} == set(TOPICS)
    assert all(entry.items and entry.source and entry.basis in ("read", "practice", "memory") for entry in found)


def test_lists_grow_with_the_hazard():
    """A flammable class has sparks and zones to look at, a toxic one masks and signs; one not stated has them all."""

    def items(name):
        return {item for entry in class_lists(name) for item in entry.items}

    assert items("A2L") - items("A1")
    assert items("A3") - items("A2L")
    assert items("B1") - items("A1")
    assert items("") >= items("A3") & items("B3")
    assert any("zones" in item for item in items("A3"))
    assert not any("zones" in item for item in items("A1"))


def test_questions_follow_code_family_and_class():
    """Each family asks its own; what is for flammable classes is not asked of A1."""
    american, european = (questions(find("R32"), (family,)) for family in ("ASHRAE 15", "EN 378"))
    mild = questions(find("R134a"), ("ASHRAE 15", "EN 378"))

    assert {"machinery room", "detection and ventilation"} <= {item.topic for item in american}
    assert {"measures", "enclosure", "access"} <= {item.topic for item in european}
    assert "enclosure" not in {item.topic for item in mild}
    assert any(item.topic == "cabinet" for item in questions(find("R290"), ("EN 378",)))
    assert all(item.source and item.basis for item in (*american, *european, *mild))


def test_no_text_promises_anything():
    """Lists, reasons and questions ask; none approves."""
    texts = [item for name in (*CLASSES, "") for entry in class_lists(name) for item in entry.items]
    texts += [reason for pair in product(CLASSES, CLASSES) for reason in class_change(*pair, None).reasons]
    texts += [item.text for item in what_is_asked(None)]
    texts += [item.text for name in ("R32", "R290", "R717") for item in questions(find(name), ("ASHRAE 15", "EN 378"))]

    assert len(texts) > 100
    assert not [text for text in texts for word in PROMISES if word in text.lower()]
