"""The room in the cases that come with the project."""

from pathlib import Path

import pytest

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.study import compare

CASES = Path(__file__).resolve().parents[3] / "cases"


@pytest.fixture(scope="module")
def result():
    """Return a function that assesses a shipped case."""
    return lambda name: assess(compare(read_case(CASES / f"{name}.toml")))


def test_a_small_charge_in_a_large_hall_is_below_the_concentration_limit(result):
    """Process chiller: 22 kg of R407C in 3000 m3 against 290 g/m3 (ASHRAE 34, from memory), 870 kg; so are all A1."""
    entries = {entry.refrigerant.designation: entry for entry in result("process-chiller").entries}

    assert entries["R407C"].room.deciding.limit_kg == pytest.approx(870.0)
    mild = [entry for entry in entries.values() if entry.refrigerant.safety_class.text == "A1"]
    assert {entry.room.verdict for entry in mild} == {"below the limit"}
    assert entries["R290"].room.verdict == "unknown"
    assert "authority" in " ".join(entries["R290"].room.unknown_because)


def test_an_unknown_charge_leaves_the_room_unknown(result):
    """Desert split: nobody knows the charge; the limits stand all the same, and no candidate is called good."""
    for entry in result("desert-split").candidates:
        assert entry.room.verdict == "unknown"
        assert entry.room.expected_kg is None
        assert not entry.verdict.is_positive
        assert entry.room.limits


@pytest.mark.parametrize(
    ("name", "charge_kg"), [("office-chiller", 210.0), ("ice-rink", 900.0), ("cold-store", 1400.0)]
)
def test_a_plant_room_is_asked_about(result, name, charge_kg):
    """Ventilation by charge, detection and relief stand beside each refrigerant, today's with its own charge."""
    found = result(name)

    assert found.existing.room.highest_kg == charge_kg
    for entry in found.entries:
        assert {"ventilation", "detection", "relief", "standstill pressure"} <= {
            item.topic for item in entry.room.machinery_room
        }
