"""Limits: concentration by volume against the same limit by mass, LFL, units and marks."""

import csv
from decimal import Decimal
from pathlib import Path

import pytest

from retrofit.refrigerants import designations, find, is_flammable, ppm_to_kg_per_m3

FILE = Path(__file__).parents[1] / "published" / "rcl_oel.csv"
with FILE.open(encoding="utf-8", newline="") as _file:
    PRINTED = list(csv.DictReader(_file))
WITH_RCL = [name for name in designations() if find(name).rcl_ppm.value is not None]
UNRESOLVED = ("R454A", "R454B", "R455A")


def _band(value: float) -> tuple[float, float]:
    """Least and greatest value that rounds to this one on two significant figures, as ASHRAE 34 prints."""
    half = 0.5 * 10.0 ** (Decimal(repr(value)).adjusted() - 1)
    return value - half, value + half


@pytest.mark.parametrize("row", PRINTED, ids=lambda row: f"{row['source']}-{row['designation']}")
def test_rcl_and_oel_are_the_printed_ones(row):
    """RCL and OEL are those of the code tables that were read."""
    refrigerant = find(row["designation"])
    rcl_kg_per_m3 = refrigerant.rcl_kg_per_m3.value

    assert refrigerant.oel_ppm.value == float(row["oel_ppm"])
    assert refrigerant.rcl_ppm.value == (float(row["rcl_ppm"]) if row["rcl_ppm"] else None)
    assert rcl_kg_per_m3 == (pytest.approx(float(row["rcl_g_per_m3"]) / 1e3) if row["rcl_g_per_m3"] else None)


@pytest.mark.parametrize("name", WITH_RCL)
def test_rcl_by_volume_agrees_with_rcl_by_mass(name):
    """Both forms of the RCL agree through the molar mass at 25 °C, 24.45 L/mol, within two figures each."""
    refrigerant = find(name)
    molar_mass = refrigerant.molar_mass_kg_per_mol.value
    low, high = (ppm_to_kg_per_m3(ppm, molar_mass) for ppm in _band(refrigerant.rcl_ppm.value))
    low_stated, high_stated = _band(refrigerant.rcl_kg_per_m3.value)

    assert low <= high_stated
    assert low_stated <= high


def test_unresolved_rcl_is_marked_in_both_forms():
    """The three RCL that contradict a quarter of the LFL carry the status and both figures."""
    marked = {name for name in designations() if find(name).rcl_ppm.status == "unresolved"}

    assert marked == set(UNRESOLVED)
    for name in UNRESOLVED:
        assert find(name).rcl_kg_per_m3.status == "unresolved"
        assert "unresolved: " in find(name).rcl_kg_per_m3.note


def test_every_rcl_that_does_not_follow_from_lfl_and_atel_is_disputed():
    """Smaller of ATEL/ODL and a quarter of the LFL, of our own columns: where that is off by 7 %, a dispute says so.

    7 %: two figures of two printed digits may differ by that much and agree. ASHRAE 34 takes the least of the limits.
    """
    off = set()
    for name in WITH_RCL:
        refrigerant = find(name)
        rcl, atel = refrigerant.rcl_kg_per_m3.number, refrigerant.atel_odl_kg_per_m3.number
        lfl = refrigerant.lfl_kg_per_m3.number
        least = [figure for figure in (atel, None if lfl is None else 0.25 * lfl) if figure is not None]
        if rcl is not None and atel is not None and abs(min(least) / rcl - 1.0) > 0.07:
            off.add(name)
    disputed = {name for name in WITH_RCL for item in find(name).disputes if item.field == "rcl_kg_per_m3"}

    assert off == disputed
    assert {"R600a", *UNRESOLVED} <= off
    assert len(off) == 11


def test_an_old_refrigerant_has_its_printed_limits():
    """RD 552/2019, IF-02, table A, prints practical limit, ATEL/ODL, GWP (AR4) and ODP of these four."""
    printed = {
        "R113": (0.4, None, 6130.0, 0.8),
        "R114": (0.7, 0.14, 10_000.0, 1.0),
        "R14": (0.4, 0.4, 7390.0, 0.0),
        "R13B1": (0.6, None, 7140.0, 10.0),
    }
    fields = ("practical_limit_kg_per_m3", "atel_odl_kg_per_m3", "gwp_100yr_ar4", "odp")

    for name, figures in printed.items():
        refrigerant = find(name)
        assert tuple(getattr(refrigerant, field).number for field in fields) == figures
        assert {getattr(refrigerant, field).source for field in fields} <= {"Spain2019", ""}
    assert "printing slip" in find("R113").atel_odl_kg_per_m3.note


@pytest.mark.parametrize("name", ["R23", "R116", "R218", "R227ea", "R744", *UNRESOLVED])
def test_rcl_that_differs_from_the_decree_says_so(name):
    """Where ATEL/ODL or a quarter of the LFL of Spain2019 gives another RCL, the note names the figure."""
    assert "a quarter of the LFL" in find(name).rcl_kg_per_m3.note


@pytest.mark.parametrize("name", designations())
def test_lfl_is_absent_only_with_a_reason(name):
    """A class 1 refrigerant has no LFL because of its class; a flammable one has it or none is stated."""
    refrigerant = find(name)
    burns = is_flammable(refrigerant.safety_class.value)

    for limit in (refrigerant.lfl_kg_per_m3, refrigerant.lfl_vol_pct):
        assert (limit.status == "not applicable") == (burns is False)
        assert limit.value is None or burns is not False


@pytest.mark.parametrize(
    ("name", "printed"),
    [
        ("R290", 2.1),
        ("R600a", 1.8),
        ("R170", 3.1),
        ("R1150", 3.1),
        ("R1270", 2.7),
        ("RE170", 3.4),
        ("R717", 16.7),
    ],
)
def test_lfl_by_volume(name, printed):
    """LFL by volume follows from the one by mass; ISO 817 lists these percentages (from memory, high)."""
    assert find(name).lfl_vol_pct.value == pytest.approx(printed, abs=0.06)


def test_marks_of_the_tables_are_kept():
    """A ceiling, a bound and a sublimation point are marked as what they are."""
    assert (find("R11").oel_ppm.value, find("R11").oel_ppm.status) == (1000.0, "ceiling")
    assert (find("R13I1").odp.value, find("R13I1").odp.status) == (None, "bound")
    assert (find("R744").bubble_1atm_K.value, find("R744").bubble_1atm_K.status) == (None, "not applicable")
    assert "sublimes at -78" in find("R744").dew_1atm_K.note


def test_boiling_point_published_or_not():
    """Published boiling points are those printed; computed and remembered ones are not called published."""
    assert find("R11").bubble_1atm_K.value == pytest.approx(24 + 273.15, abs=1e-9)
    assert find("R448A").dew_1atm_K.value == pytest.approx(-39.8 + 273.15, abs=1e-9)
    assert find("R448A").dew_1atm_K.is_published
    assert find("R471A").bubble_1atm_K.is_published
    assert not find("R471A").dew_1atm_K.is_published
    assert not find("R472A").bubble_1atm_K.is_published
    assert find("R472A").bubble_1atm_K.basis == "computed"
    assert not find("R463A").bubble_1atm_K.is_published


@pytest.mark.parametrize("name", designations())
def test_bubble_point_is_not_above_dew_point(name):
    """At one pressure the bubble point does not lie above the dew point (definition)."""
    bubble, dew = find(name).bubble_1atm_K.value, find(name).dew_1atm_K.value

    assert bubble is None or dew is None or bubble <= dew
