"""The ten shipped plants as whole stories: each reaches the conclusion a practitioner would.

The conclusions are those the invented plants were written for; figures beside them are the plants' own calculation,
rounded, and orientation only.
"""

from __future__ import annotations

import datetime
from functools import cache
from pathlib import Path

import pytest

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.study import Comparison, Entry, Verdict, compare

CASES = Path(__file__).resolve().parents[1] / "cases"
TODAY = datetime.date(2026, 12, 1)


@cache
def story(name: str) -> Comparison:
    """Return the assessed comparison of a shipped case."""
    return assess(compare(read_case(CASES / f"{name}.toml")), TODAY)


def entry_of(name: str, refrigerant: str) -> Entry:
    """Return one refrigerant of a story."""
    return next(entry for entry in story(name).entries if entry.refrigerant.designation == refrigerant)


def stops(name: str, refrigerant: str) -> set[str]:
    """Return the codes of the gates that stop a refrigerant."""
    return {finding.code for finding in entry_of(name, refrigerant).findings if finding.level == "stop"}


def celsius(name: str, refrigerant: str) -> float:
    """Return the discharge temperature at the case's temperatures. [degC]"""
    duty = entry_of(name, refrigerant).duty
    assert duty is not None
    return duty.T_discharge_K - 273.15


@pytest.mark.parametrize("path", sorted(CASES.glob("*.toml")), ids=lambda path: path.stem)
def test_keeping_is_always_beside_the_candidates(path: Path) -> None:
    """Every story begins with keeping the existing refrigerant, and every candidate is told what stopped it."""
    found = story(path.stem)

    assert found.existing.family == "keep"
    for entry in found.candidates:
        assert entry.family in ("convert", "replace")
        assert (entry.verdict == Verdict.NOT_SUITABLE) == bool(stops(path.stem, entry.refrigerant.designation))


def test_harbour_market_converts_to_a_blend_of_class_a1() -> None:
    """EX1: R448A, R449A, R407A, R407H and R452A are suitable with modifications; R454C is judged as a new plant."""
    for name in ("R448A", "R449A", "R407A", "R407H", "R452A"):
        assert entry_of("harbour-market", name).verdict == Verdict.MODIFICATIONS
    assert entry_of("harbour-market", "R454C").is_new_plant
    assert stops("harbour-market", "R454C") == set()
    assert entry_of("harbour-market", "R448A").relative["capacity"] == pytest.approx(1.02, abs=0.03)


def test_freezer_store_is_too_hot_for_its_compressor() -> None:
    """EX2: discharge of R448A and R407A far above the limit without injection; ratio above 12; R744 not computed."""
    assert celsius("freezer-store", "R404A") == pytest.approx(108.0, abs=2.0)
    assert celsius("freezer-store", "R448A") == pytest.approx(141.0, abs=3.0)
    assert {"discharge-temperature", "pressure-ratio"} <= stops("freezer-store", "R448A")
    assert "discharge-temperature" not in stops("freezer-store", "R452A")
    assert entry_of("freezer-store", "R744").status == "not computed"


def test_cold_store_pumps_no_glide_and_no_ammonia_through_copper() -> None:
    """EX3: glide rules R448A and R427A out of the pumped evaporator, copper and heat rule R717 out as it stands."""
    for name in ("R448A", "R427A"):
        assert "glide" in stops("cold-store", name)
    assert {"metals", "safety-class", "discharge-temperature"} <= stops("cold-store", "R717")
    assert "glide" not in stops("cold-store", "R507A")
    assert "law-ban" in stops("cold-store", "R404A")


def test_office_chiller_keeps_its_capacity_with_one_blend_only() -> None:
    """EX4: R513A is suitable with modifications; R515B loses a quarter of the capacity; R1234ze(E) is a new chiller."""
    assert entry_of("office-chiller", "R513A").verdict == Verdict.MODIFICATIONS
    assert "capacity" in stops("office-chiller", "R515B")
    assert entry_of("office-chiller", "R1234ze(E)").is_new_plant


def test_desert_split_meets_pressure_class_and_capacity() -> None:
    """EX5: R32 and R410A far above the nameplate, R290 of another class, R417A too weak; no charge known: unknown."""
    assert {"high-side", "standstill"} <= stops("desert-split", "R410A")
    assert {"high-side", "safety-class"} <= stops("desert-split", "R32")
    assert "safety-class" in stops("desert-split", "R290")
    assert "capacity" in stops("desert-split", "R417A")
    assert entry_of("desert-split", "R427A").verdict == Verdict.OPEN


def test_ice_rink_floods_its_evaporator() -> None:
    """EX6: glide rules R427A, R449A and R422D out; R513A loses 40 %; R507A is left, open until data is given."""
    for name in ("R427A", "R449A", "R422D"):
        assert "glide" in stops("ice-rink", name)
    assert entry_of("ice-rink", "R513A").relative["capacity"] == pytest.approx(0.60, abs=0.03)
    assert entry_of("ice-rink", "R507A").verdict == Verdict.OPEN
    assert "plant.highest_ambient" in {key for f in entry_of("ice-rink", "R507A").open_facts for key in f.missing}


def test_trailer_is_open_until_its_data_are_given() -> None:
    """EX7: ratings and room are not stated, so R452A is open, close as it is; the controller needs work."""
    entry = entry_of("trailer", "R452A")

    assert entry.verdict == Verdict.OPEN
    assert {"oil"} <= {finding.code for finding in entry.findings if finding.level == "unknown"}
    assert "controller" in {finding.code for finding in entry.findings if finding.level == "work"}
    assert abs(celsius("trailer", "R452A") - celsius("trailer", "R404A")) < 8.0


def test_coast_heat_pump_is_not_converted() -> None:
    """EX8: no conversion is suitable; what is left is keeping it, or a new heat pump for R290."""
    found = story("coast-heat-pump")

    assert {entry.verdict for entry in found.candidates if not entry.is_new_plant} == {Verdict.NOT_SUITABLE}
    assert entry_of("coast-heat-pump", "R290").is_new_plant
    assert {entry.family for entry in found.candidates} == {"replace"}
    assert found.existing.stops == ()


def test_process_chiller_glides_today_already() -> None:
    """EX9: the existing R407C glides too; R448A and R449A are suitable with modifications, R450A halves capacity."""
    today = entry_of("process-chiller", "R407C").duty

    assert today is not None
    assert today.glide_evap_K > 4.0
    for name in ("R448A", "R449A"):
        assert entry_of("process-chiller", name).verdict == Verdict.MODIFICATIONS
    assert entry_of("process-chiller", "R450A").relative["capacity"] == pytest.approx(0.55, abs=0.04)
    assert "capacity" in stops("process-chiller", "R450A")


def test_bottle_cooler_takes_no_flammable_refrigerant() -> None:
    """EX10: R1234yf, R600a and R290 are for new appliances; R513A and R450A need modifications at least."""
    for name in ("R1234yf", "R600a", "R290"):
        assert "safety-class" in stops("bottle-cooler", name)
    for name in ("R513A", "R450A"):
        assert entry_of("bottle-cooler", name).verdict == Verdict.MODIFICATIONS


def test_gates_are_told_in_the_order_options_die() -> None:
    """Stops come in the order law, pressure, class and room, evaporator, compressor, capacity."""
    codes = [f.code for f in entry_of("desert-split", "R32").findings if f.level == "stop"]

    assert codes.index("high-side") < codes.index("safety-class") < codes.index("discharge-temperature")
