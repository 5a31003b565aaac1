"""Where the compressor's efficiencies follow the refrigerant, and where they are constants: one rule on every basis."""

from __future__ import annotations

import pytest

from retrofit.properties import fluid
from retrofit.study import compare
from retrofit.study.life import life_of
from retrofit.study.performance import electric_W

CONSTANTS = {"isentropic_efficiency": 0.68, "volumetric_efficiency": 0.85}
TEN = {
    "units": "SI", "superheat": "14 K", "subcooling": "3 K", "evaporating": ["-15 degC", "0 degC"],
    "condensing": ["30 degC", "50 degC"], "capacity": [150000, 4000, -1000, 0, 0, 0, 0, 0, 0, 0],
    "power": [20000, 200, 700, 0, 0, 0, 0, 0, 0, 0],
}  # fmt: skip


@pytest.mark.parametrize("kind", [None, "unknown", "centrifugal"])
def test_without_a_kind_constants_hold_for_every_refrigerant(case_of, kind):
    """Both efficiencies of every refrigerant are those of the case, by the states of its own cycle."""
    compressor = CONSTANTS | ({"kind": kind} if kind else {})
    found = compare(case_of(compressor=compressor, candidates=("R448A", "R134a")))

    for entry in found.entries:
        assert entry.duty.suction_volume_flow_m3_per_s / entry.duty.swept_volume_m3_per_s == pytest.approx(
            0.85, rel=1e-12
        )
        own = fluid(entry.refrigerant.designation)
        first = entry.points[0]
        work = float(own.h_at_entropy(entry.duty.p_cond_Pa, first.s_J_per_kgK)) - first.h_J_per_kg
        assert work / (entry.duty.power_W / entry.duty.mass_flow_kg_per_s) == pytest.approx(0.68, rel=1e-9)


def test_with_a_kind_the_existing_refrigerant_keeps_the_constants(case_of):
    """A piston: the existing refrigerant as written; R448A at -8/42 degC some 2 to 4 % less in both, as pairs tell.

    Source: catalogue pairs; form and constants in equipment/refrigerant_change.py, checked there.
    """
    plain, piston = (
        compare(case_of(compressor=CONSTANTS | kind, candidates=("R448A",))) for kind in ({}, {"kind": "piston"})
    )

    assert piston.existing.duty == plain.existing.duty
    assert set(piston.existing.relative.values()) == {1.0}
    for ratio, low, high in (("capacity", 0.94, 0.99), ("cop", 0.95, 0.995)):
        change = piston.candidates[0].relative[ratio] / plain.candidates[0].relative[ratio]
        assert low < change < high


def test_a_candidate_that_is_the_existing_refrigerant_is_exactly_equal(case_of):
    """Whatever the kind: the same numbers, not only near ones."""
    found = compare(case_of(compressor=CONSTANTS | {"kind": "scroll"}, candidates=("R404A",)))

    assert set(found.candidates[0].relative.values()) == {1.0}


def test_power_of_a_polynomial_counts_the_motor_once(case_with):
    """A power at the terminals is electrical: the motor changes nothing; at the shaft it comes on top, once.

    By hand: 20 000 - 200 x 8 + 700 x 42 = 47 800 W at -8/42 degC, over 0.92 = 51 957 W.
    """
    for power_at, expected in (("terminals", 47_800.0), ("shaft", 47_800.0 / 0.92)):
        compressor = {
            "polynomial": TEN, "swept_volume": "201 m3/h", "motor_efficiency": 0.92, "power_at": power_at,
        }  # fmt: skip
        duty = {"cooling": "70 kW", "useful_superheat": "14 K", "subcooling": "3 K"}
        found = compare(case_with(compressor=compressor, duty=duty))

        power = found.existing.compressor.power_W
        assert power == pytest.approx(47_800.0, rel=2e-3)
        assert float(electric_W(found.case, power)) == pytest.approx(expected, rel=2e-3)


def test_samples_use_the_same_efficiencies(rack_of):
    """With every input at its base the capacity ratio of the samples is that of the comparison."""
    case = rack_of(compressor='kind = "piston"')
    found = compare(case)
    life = life_of(found, draws=2)

    ratio = found.candidates[0].relative["plant_capacity"]
    swing = life.certainty["R448A"].swings["capacity_ratio"][0]
    assert swing.base == pytest.approx(ratio, rel=1e-6)
