"""Cautions: always there, with sources, deferring to the standards, never calling anything harmless."""

import re

import pytest

from retrofit.refrigerants import cautions_for, change_cautions, designations, find, source
from retrofit.refrigerants.tables import FOLDER, read_toml

LEVELS = {"danger", "warning", "caution", "unknown"}
CLASSES = ("A1", "A2L", "A2", "A3", "B1", "B2L", "B2", "B3", "not stated")


def _codes(refrigerant):
    return [caution.code for caution in cautions_for(refrigerant)]


@pytest.mark.parametrize("name", designations())
def test_every_refrigerant_has_cautions(name):
    """Each refrigerant has the caution of its class first, and one on pressure."""
    refrigerant = find(name)
    stated = refrigerant.safety_class.value or "not-stated"

    assert _codes(refrigerant)[0] == f"class-{stated}"
    assert "pressure" in _codes(refrigerant)


@pytest.mark.parametrize("name", designations())
def test_every_caution_has_level_and_known_source(name):
    """Each caution carries a level word and sources of the bibliography."""
    for caution in cautions_for(find(name)):
        assert caution.level in LEVELS
        assert all(source(key).title for key in caution.source.split("; "))


def test_all_classes_have_cautions():
    """Every class of the standard, and the class not stated, has its own caution."""
    covered = {name for entry in read_toml("cautions")["class"] for name in entry["classes"]}

    assert covered == set(CLASSES)


def test_every_caution_defers_to_a_standard():
    """Each caution text names a standard that decides, and its source lists one."""
    data = read_toml("cautions")
    for entry in [*data["class"], *data["refrigerant"], *data["change"]]:
        assert re.search(r"ASHRAE (34|15)|ISO (817|5149)|EN 378", entry["text"]), entry["code"]
        assert re.search(r"ASHRAE(34|15)|ISO(817|5149)|EN378", entry["source"]), entry["code"]


@pytest.mark.parametrize("path", sorted(FOLDER.glob("*.*")), ids=lambda path: path.name)
def test_no_text_calls_anything_safe(path):
    """No data file and no module of the room uses that word."""
    lines = path.read_text(encoding="utf-8").splitlines()

    assert [line for line in lines if re.search(r"\b(un)?safe(ly)?\b", line, re.IGNORECASE)] == []


def test_flammable_refrigerants_ask_for_equipment_built_for_them():
    """Only the mildest classes lack the caution that a flammable refrigerant means new equipment."""
    without = {find(n).safety_class.value for n in designations() if "flammable-new-plant" not in _codes(find(n))}

    assert without == {"A1", "B1"}


def test_special_refrigerants_and_their_blends():
    """Ammonia, carbon dioxide and the fluids with thin data bring their own cautions, also within a blend."""
    assert {"R717-toxic", "R717-copper"} <= set(_codes(find("R717")))
    assert {"R744-pressure", "R744-asphyxiant"} <= set(_codes(find("R744")))
    assert {"R744-pressure", "R744-asphyxiant"} <= set(_codes(find("R455A")))
    assert "R13I1-thin-data" in _codes(find("R466A"))
    assert "R1132a-thin-data" in _codes(find("R468A"))
    assert "R1132E-thin-data" in _codes(find("R474A"))
    assert "R1123-decomposition" in _codes(find("R1123"))


def test_remembered_class_asks_to_be_confirmed():
    """A class from memory brings a caution of level unknown; a class that was read does not."""
    assert "class-from-memory" in _codes(find("R456A"))
    assert "class-from-memory" not in _codes(find("R448A"))


@pytest.mark.parametrize(
    ("old", "new", "codes"),
    [
        ("R404A", "R448A", []),
        ("R404A", "R454C", ["change-more-flammable"]),
        ("R22", "R290", ["change-more-flammable"]),
        ("R22", "R717", ["change-more-flammable", "change-more-toxic"]),
        ("R11", "R123", ["change-more-toxic"]),
        ("R454C", "R465A", ["change-more-flammable"]),
        ("R290", "R454C", []),
        ("R404A", "R1123", ["change-class-unknown"]),
        ("R1123", "R448A", ["change-class-unknown"]),
    ],
)
def test_change_to_a_less_mild_class(old, new, codes):
    """A change to a more flammable, more toxic or unknown class adds a caution; a milder one adds none."""
    assert [caution.code for caution in change_cautions(find(old), find(new))] == codes


def test_change_caution_says_that_it_is_no_changeover():
    """The added caution says that by default this is not a changeover, and who must be told."""
    (caution,) = change_cautions(find("R410A"), find("R454B"))

    assert caution.level == "danger"
    assert "not a changeover of existing equipment" in caution.text
    assert all(word in caution.text for word in ("owner", "authority", "name plate"))
