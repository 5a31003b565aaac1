"""Comparing candidates: what is held equal, the definitions behind each number, and rows that cannot be computed."""

from dataclasses import FrozenInstanceError, asdict, fields
from math import isfinite

import pytest

from retrofit.study import Performance, compare
from retrofit.study.compare import RATIOS

SUPERHEATED = {"useful_superheat": "7 K", "line_superheat": "8 K", "subcooling": "3 K"}
ROUNDING = 1e-12  # of a few floating-point operations, relative


def state(entry, name):
    """Return a state point of an entry by its name."""
    return next(point for point in entry.points if point.name == name)


def comparable(entry):
    """Return what was computed of an entry, in a form that `==` compares number by number."""
    return entry.status, entry.reason, entry.duty, entry.compressor, entry.points, dict(entry.relative)


@pytest.mark.parametrize("reading", ["dew", "mean"])
@pytest.mark.parametrize("match", ["dew", "mean"])
@pytest.mark.parametrize("name", ["R134a", "R448A", "R455A", "R717"])
def test_a_refrigerant_against_itself_gives_ratios_of_exactly_one(case_of, name, match, reading):
    """Pure or gliding, in each convention and reading, nothing changes where nothing is changed."""
    found = compare(case_of(name, [name], match=match, duty={"reading": reading, **SUPERHEATED}))
    (candidate,) = found.candidates

    assert dict(candidate.relative) == {name: 1.0 for name, _, _ in RATIOS}
    assert candidate.T_discharge_difference_K == 0.0
    assert candidate.duty == found.existing.duty
    assert candidate.compressor == found.existing.compressor


@pytest.fixture(scope="module")
def harbour(case_of):
    """Return a comparison of several blends and a pure fluid, with superheat in the line and a swept volume."""
    compressor = {"isentropic_efficiency": 0.68, "volumetric_efficiency": 0.85, "swept_volume": "201 m3/h"}
    return compare(
        case_of("R404A", ["R448A", "R452A", "R455A", "R134a", "R290"], duty=SUPERHEATED, compressor=compressor)
    )


def test_same_duty_is_the_same_cooling_for_all(harbour):
    """On the basis of the duty every refrigerant delivers the cooling of the case."""
    assert [entry.duty.cooling_W for entry in harbour.entries] == pytest.approx([120e3] * 6, rel=ROUNDING)


def test_same_compressor_is_the_same_swept_volume_for_all(harbour):
    """On the basis of the compressor every refrigerant is drawn in by the swept volume of the case."""
    expected = pytest.approx([201.0 / 3600.0] * 6, rel=ROUNDING)

    assert [entry.compressor.swept_volume_m3_per_s for entry in harbour.entries] == expected
    assert harbour.swept_volume_from == "case"


def test_capacity_goes_with_volumetric_capacity_and_efficiency(harbour):
    """With one compressor, cooling = swept volume x volumetric efficiency x volumetric capacity."""
    for entry in harbour.entries:
        by_hand = 201.0 / 3600.0 * 0.85 * entry.duty.volumetric_capacity_J_per_m3

        assert entry.compressor.cooling_W == pytest.approx(by_hand, rel=ROUNDING)
        assert entry.relative["capacity"] == pytest.approx(entry.relative["volumetric_capacity"], rel=ROUNDING)


def test_both_bases_are_one_cycle(harbour):
    """Temperatures, pressures and COP do not depend on the basis; only flows scale, all by one factor."""
    flows = {"cooling_W", "mass_flow_kg_per_s", "suction_volume_flow_m3_per_s", "swept_volume_m3_per_s"}
    flows |= {"power_W", "heat_rejected_W", "line_heat_W"}
    for entry in harbour.entries:
        duty, compressor = asdict(entry.duty), asdict(entry.compressor)
        scales = [compressor[name] / duty[name] for name in sorted(flows)]

        assert {name: compressor[name] for name in duty if name not in flows} == {
            name: duty[name] for name in duty if name not in flows
        }
        assert scales == pytest.approx([scales[0]] * len(flows), rel=ROUNDING)


@pytest.mark.parametrize("basis", ["duty", "compressor"])
def test_energy_in_is_energy_out(harbour, basis):
    """Heat rejected = cooling + heat of the suction line + compressor power."""
    for entry in harbour.entries:
        found = getattr(entry, basis)

        assert found.heat_rejected_W == pytest.approx(found.cooling_W + found.line_heat_W + found.power_W, rel=1e-9)


def test_numbers_follow_from_the_state_points(harbour):
    """Effect, work, COP and flows recomputed by their definitions from the states shown give the numbers shown."""
    for entry in harbour.entries:
        suction, discharge = state(entry, "compressor inlet"), state(entry, "discharge")
        outlet, inlet = state(entry, "evaporator outlet"), state(entry, "evaporator inlet")
        effect, work = outlet.h_J_per_kg - inlet.h_J_per_kg, discharge.h_J_per_kg - suction.h_J_per_kg
        mass_flow = 120e3 / effect
        by_hand = {
            "refrigerating_effect_J_per_kg": effect,
            "cop": effect / work,
            "volumetric_capacity_J_per_m3": effect * suction.density_kg_per_m3,
            "mass_flow_kg_per_s": mass_flow,
            "power_W": mass_flow * work,
            "suction_volume_flow_m3_per_s": mass_flow / suction.density_kg_per_m3,
            "swept_volume_m3_per_s": mass_flow / suction.density_kg_per_m3 / 0.85,
            "heat_rejected_W": mass_flow * (discharge.h_J_per_kg - state(entry, "expansion valve inlet").h_J_per_kg),
            "line_heat_W": mass_flow * (suction.h_J_per_kg - outlet.h_J_per_kg),
            "T_discharge_K": discharge.T_K,
            "T_suction_K": suction.T_K,
            "p_evap_Pa": suction.p_Pa,
            "p_cond_Pa": discharge.p_Pa,
            "pressure_ratio": discharge.p_Pa / suction.p_Pa,
        }

        # Differences of enthalpies lose two digits or so of the sixteen.
        assert {name: getattr(entry.duty, name) for name in by_hand} == pytest.approx(by_hand, rel=1e-10)


def test_superheat_and_subcooling_are_where_the_case_puts_them(harbour):
    """Superheat counts from the dew point, useful in the evaporator and the rest after it; subcooling from bubble."""
    for entry in harbour.entries:
        dew = state(entry, "evaporator dew point").T_K

        assert state(entry, "evaporator outlet").T_K - dew == pytest.approx(7.0, abs=1e-9)
        assert state(entry, "compressor inlet").T_K - dew == pytest.approx(15.0, abs=1e-9)
        below = state(entry, "condenser bubble point").T_K - state(entry, "expansion valve inlet").T_K
        assert below == pytest.approx(3.0, abs=1e-9)


def test_expansion_and_isentropic_efficiency_are_as_defined(harbour):
    """The valve keeps enthalpy, and real work is isentropic work over the efficiency."""
    for entry in harbour.entries:
        assert state(entry, "evaporator inlet").h_J_per_kg == pytest.approx(
            state(entry, "expansion valve inlet").h_J_per_kg, rel=ROUNDING
        )
        assert entry.duty.T_discharge_isentropic_K < entry.duty.T_discharge_K


def test_ratios_are_of_the_quantities_their_names_say(harbour):
    """Each ratio divides the candidate's number by the existing refrigerant's on the basis stated."""
    old, new = harbour.existing, harbour.candidates[0]

    assert new.relative["cop"] == new.duty.cop / old.duty.cop
    assert new.relative["capacity"] == new.compressor.cooling_W / old.compressor.cooling_W
    assert new.relative["power"] == new.compressor.power_W / old.compressor.power_W
    assert new.relative["power_same_duty"] == new.duty.power_W / old.duty.power_W
    assert new.relative["p_cond"] == new.duty.p_cond_Pa / old.duty.p_cond_Pa
    assert new.T_discharge_difference_K == new.duty.T_discharge_K - old.duty.T_discharge_K


def test_swept_volume_left_out_comes_from_todays_duty_and_says_so(case_of):
    """Without a swept volume the existing refrigerant just meets the duty, on both bases alike."""
    found = compare(case_of("R404A", ["R448A"]))

    assert found.swept_volume_from == "duty"
    assert found.swept_volume_m3_per_s == found.existing.duty.swept_volume_m3_per_s
    assert found.existing.compressor == found.existing.duty


@pytest.mark.parametrize(
    ("extra", "duty", "why"),
    [
        ("R744", {}, "above the critical temperature of R744, 31.0 degC"),
        ("R468A", {}, "no equation of state for R1132a"),
        ("R718", {}, "below the range of the model of R718"),
        ("R123", {"evaporating": "-100 degC"}, "below the range of the model of R123"),
    ],
)
def test_a_candidate_that_cannot_be_computed_is_a_row_and_changes_no_other(case_of, extra, duty, why):
    """It has its reason and its cautions; every other row is the same to the last bit as without it."""
    old = "R23" if duty else "R404A"
    duty = {"condensing": "0 degC", **duty} if duty else {}
    others = ["R508B", "R170"] if duty else ["R448A", "R290"]
    without = compare(case_of(old, others, duty=duty))
    found = compare(case_of(old, [others[0], extra, others[1]], duty=duty))
    row = found.candidates[1]

    assert (row.refrigerant.designation, row.status) == (extra, "not computed")
    assert why in row.reason
    assert row.cautions
    assert (row.duty, row.compressor, row.grade, row.points, dict(row.relative)) == (None, None, None, (), {})
    assert [comparable(found.existing), *(comparable(found.candidates[i]) for i in (0, 2))] == [
        comparable(entry) for entry in without.entries
    ]
    assert all(entry.status == "ok" for entry in without.entries)


@pytest.mark.parametrize("existing", ["R744", "R468A"])
def test_without_the_existing_refrigerant_every_row_says_why_nothing_is_compared(case_of, existing):
    """No exception: the existing one has its own reason, each candidate names it."""
    found = compare(case_of(existing, ["R448A", "R1132a"]))

    assert found.existing.status == "not computed"
    assert existing in found.existing.reason
    assert [entry.status for entry in found.candidates] == ["not computed"] * 2
    assert all(existing in entry.reason for entry in found.candidates)
    assert (found.swept_volume_m3_per_s, found.swept_volume_from) == (None, "duty")


def test_more_subcooling_than_lift_is_named_as_such(case_of):
    """Liquid colder than the evaporator is refused in words of the case, not of a property table."""
    duty = {"evaporating": "0 degC", "condensing": "10 degC", "subcooling": "12 K"}
    found = compare(case_of("R134a", ["R448A"], duty=duty))

    assert "12 K of subcooling" in found.existing.reason
    assert "give less subcooling" in found.existing.reason
    assert {entry.status for entry in found.entries} == {"not computed"}


def test_a_given_swept_volume_is_kept_where_nothing_can_be_computed(case_of):
    """What the case states is not lost with the existing refrigerant."""
    found = compare(case_of("R744", ["R448A"], compressor={"swept_volume": "36 m3/h"}))

    assert (found.swept_volume_m3_per_s, found.swept_volume_from) == (pytest.approx(0.01), "case")


def test_the_result_is_frozen(harbour):
    """Nobody downstream can change a number of the result."""
    for holder in (harbour, harbour.existing, harbour.existing.duty, harbour.existing.points[0]):
        with pytest.raises(FrozenInstanceError):
            setattr(holder, fields(holder)[0].name, None)


def test_every_number_is_a_finite_python_float(harbour):
    """No array and no NaN is left in what is shown."""
    for entry in harbour.entries:
        for basis in (entry.duty, entry.compressor):
            values = [getattr(basis, field.name) for field in fields(Performance)]

            assert {type(value) for value in values} == {float}
            assert all(isfinite(value) for value in values)


def test_families_follow_from_the_safety_class(case_of):
    """The existing refrigerant is kept, a class no less mild is a conversion, a less mild one a replacement."""
    found = compare(case_of("R404A", ["R448A", "R454C", "R290", "R717"]))

    assert [entry.family for entry in found.entries] == ["keep", "convert", "replace", "replace", "replace"]


def test_a_build_of_tables_is_announced(case_of, tmp_path, monkeypatch):
    """A refrigerant that is not in the store yet is named before its tables are built, one that is there is not."""
    monkeypatch.setenv("RETROFIT_STORE", str(tmp_path))
    named = []
    case = case_of("R134a", ["R290"])
    first = compare(case, named.append)

    assert named == ["R134a", "R290"]
    assert [comparable(entry) for entry in compare(case, named.append).entries] == [
        comparable(entry) for entry in first.entries
    ]
    assert named == ["R134a", "R290"]
