"""Limits for new equipment of Regulation (EU) 2024/573, point by point, the day before and the day of each.

Source of days, GWP, sizes and exceptions: annex IV of the regulation (http://data.europa.eu/eli/reg/2024/573/oj), noted
in `tests/published/annex_iv.csv`. GWP by its annexes I, II and VI: R404A 3922, R507A 3985, R448A 1386, R134a 1430,
R410A 2088, R32 675, R513A 629, R454A 237, R454C 146, R454B 465, R290 0.02, R1234yf 0.501.
"""

import csv
import datetime
import re
from pathlib import Path

import pytest

from retrofit.checks.law import shipped
from retrofit.study.law import RowState, Why
from retrofit.study.law_words import limit_text

NEW = "new equipment"
NOTED = list(csv.DictReader((Path(__file__).parents[2] / "published" / "annex_iv.csv").read_text("utf-8").splitlines()))
ROWS = [row for row in shipped()["eu-2024-573.toml"].rows if row.subject == NEW]

SPLIT = {"equipment": "heat pump", "arrangement": "multi split", "evaporator": "air", "condenser": "water"}
STORE = {"equipment": "cold store", "arrangement": "built on site", "evaporator": "air"}
DOUBLE_DUCT = {"equipment": "air conditioning", "arrangement": "double duct", "cooling": "5 kW"}
PACKAGED = {"equipment": "heat pump", "arrangement": "self-contained"}
# For each point: a refrigerant that meets it, the plant, and one that does not meet it in the same plant (None if the
# limit is on a substance group that no refrigerant of the catalogue escapes below its GWP).
CASES = {
    "2a": ("R134a", {"equipment": "domestic refrigerator", "cooling": "0.2 kW"}, "R1234yf"),
    "2b": ("R1234yf", {"equipment": "domestic refrigerator", "cooling": "0.2 kW"}, "R600a"),
    "3a": ("R404A", {"equipment": "stand-alone cabinet", "cooling": "1 kW"}, "R134a"),
    "3b": ("R513A", {"equipment": "stand-alone cabinet", "cooling": "1 kW"}, "R454C"),
    "3c": ("R218", {"equipment": "stand-alone cabinet", "cooling": "1 kW"}, "R513A"),
    "4": ("R448A", {"equipment": "cold store", "arrangement": "self-contained", "evaporator": "air"}, "R454C"),
    "5a": ("R404A", {"equipment": "cold store", "arrangement": "built on site", "evaporator": "air"}, "R448A"),
    "5b": ("R507A", {"equipment": "condensing unit"}, "R448A"),
    "5c": ("R454A", {"equipment": "cold store", "arrangement": "multipack", "evaporator": "air"}, "R454C"),
    "6": ("R454A", {"equipment": "supermarket", "cooling": "40 kW"}, "R454C"),
    "7a": ("R404A", {"equipment": "process chiller"}, "R448A"),
    "7b": ("R513A", {"equipment": "chiller", "cooling": "12 kW"}, "R454C"),
    "7c": ("R1234yf", {"equipment": "chiller", "cooling": "12 kW"}, "R290"),
    "7d": ("R134a", {"equipment": "chiller", "cooling": "12.1 kW"}, "R513A"),
    "8a": ("R32", {"equipment": "air conditioning", "arrangement": "movable plug-in", "cooling": "3 kW"}, "R290"),
    "8b": ("R32", {**PACKAGED, "rated_capacity": "12 kW"}, "R454C"),
    "8c": ("R454C", {**PACKAGED, "rated_capacity": "12 kW"}, "R290"),
    "8d": ("R454B", {**PACKAGED, "rated_capacity": "50 kW"}, "R454C"),
    "8e": ("R454B", {**PACKAGED, "rated_capacity": "50.1 kW"}, "R454C"),
    "9a": ("R410A", {"equipment": "air conditioning", "arrangement": "single split", "cooling": "5 kW"}, "R32"),
    "9b": ("R32", {**SPLIT, "rated_capacity": "12 kW"}, "R454C"),
    "9c": ("R32", {**SPLIT, "condenser": "air", "rated_capacity": "12 kW"}, "R454C"),
    "9d": ("R454C", {**SPLIT, "rated_capacity": "12 kW"}, "R290"),
    "9e": ("R410A", {**SPLIT, "rated_capacity": "12.1 kW"}, "R32"),
    "9f": ("R32", {**SPLIT, "rated_capacity": "12.1 kW"}, "R454C"),
}
BY_POINT = {item["point"]: item for item in NOTED}


def point_of(row_id):
    """Return the point of annex IV that a row is of; a point may need several rows."""
    return re.fullmatch(r"eu-iv-(\d[a-f]?)(-.*)?", row_id).group(1)


def points(check, on):
    """Return the points whose limits apply for sure on a day."""
    held = (row for row in check.rows_on(NEW) if row.in_force(on) and row.state == RowState.APPLIES)
    return {point_of(row.id) for row in held}


def read(law_of, name, on, kg=2.0, **given):
    """Return the check of a new plant from a day on, without an end."""
    return law_of(name, kg, on=on, date_of_change=None, remaining_life=None, **given)


def test_every_point_is_held_and_tried():
    """The points noted from the annex are those of the table and those with a case."""
    assert {point_of(row.id) for row in ROWS} == set(BY_POINT) == set(CASES)


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row.id)
def test_each_row_is_as_noted(row):
    """Day, GWP, size, charge and exceptions of every row are those noted; the cascade row begins at 1500."""
    noted = BY_POINT[point_of(row.id)]
    limits = {limit.measure: limit_text(limit) for limit in row.when}
    gwp = 1500.0 if row.id.endswith("cascade") else float(noted["gwp_from"])
    small_rack = row.id.endswith("small-rack")

    assert row.applies_from == datetime.date.fromisoformat(noted["first_day"])
    assert row.applies_until is None
    assert row.gwp_limit == gwp
    assert limits.get("kW", "") == ("below 40 kW" if small_rack else noted["capacity"])
    assert limits.get("kg", "") == noted["charge"]
    assert row.safety_exception == noted["exceptions"].startswith("safety")
    assert row.safety_gwp == (750.0 if noted["exceptions"] == "safety 750" else None)
    assert (row.product_below_minus_50 is False) == (noted["exceptions"] == "cold products")
    assert row.basis == "read"


@pytest.mark.parametrize("point", list(CASES))
def test_the_day_before_and_the_day_of_each_point(law_of, point):
    """The point does not hold the day before, holds on its day, and never for the refrigerant below its limit."""
    name, plant, other = CASES[point]
    first = datetime.date.fromisoformat(BY_POINT[point]["first_day"])
    before = first - datetime.timedelta(days=1)

    assert point not in points(read(law_of, name, str(before), **plant), before)
    assert point in points(read(law_of, name, str(first), **plant), first)
    assert point not in points(read(law_of, other, str(first), **plant), first)


@pytest.mark.parametrize(
    ("name", "plant", "kg", "on", "expected"),
    [
        # Size: 40 kW belongs to point 6, 39.9 kW to point 5; 12 kW to the small chillers; 50 kW to 8d.
        ("R448A", {"cooling": "40 kW"}, 50, "2030-01-01", {"6"}),
        ("R448A", {"cooling": "39.9 kW"}, 50, "2029-12-31", set()),
        ("R448A", {"cooling": "39.9 kW"}, 50, "2030-01-01", {"5c"}),
        ("R134a", {"equipment": "chiller", "cooling": "12 kW"}, 5, "2027-01-01", {"7b"}),
        ("R134a", {"equipment": "chiller", "cooling": "12.1 kW"}, 5, "2032-01-01", {"7d"}),
        # A supermarket plant that is no rack stays with point 5 however large.
        ("R448A", {"arrangement": "built on site"}, 50, "2030-01-01", {"5c"}),
        # Charge: 3 kg is not under 3 kg; the whole mixture counts, as it counts as HFC (Art. 3(4)).
        ("R410A", {"equipment": "air conditioning", "arrangement": "single split"}, 2.99, "2025-01-01", {"9a"}),
        ("R410A", {"equipment": "air conditioning", "arrangement": "single split"}, 3.0, "2025-01-01", set()),
        ("R452B", {"equipment": "air conditioning", "arrangement": "single split"}, 2.99, "2025-01-01", set()),
        # Brine in a cold store or rink makes it a chiller, air does not.
        ("R134a", {"equipment": "ice rink", "evaporator": "brine"}, 50, "2027-01-01", {"7d"}),
        ("R134a", STORE, 50, "2029-12-31", set()),
        # Fixed double duct counts as split, from air to air.
        ("R32", DOUBLE_DUCT, 3, "2029-01-01", {"9c"}),
        # Transport is not stationary: no point of the annex.
        ("R404A", {"equipment": "transport"}, 5, "2035-01-01", set()),
        # The rack that was built until now: R454A (GWP 237) at 120 kW, barred since 2022.
        ("R454A", {}, 200, "2027-04-01", {"6"}),
    ],
)  # fmt: skip
def test_size_charge_and_kind_decide(law_of, name, plant, kg, on, expected):
    """The other side of each size and charge, and which point a kind of equipment falls under."""
    found = read(law_of, name, on, kg=float(kg), **plant)

    assert points(found, found.start) == expected


def test_the_exceptions_as_each_point_has_them(law_of):
    """Cold products leave 5a; the cascade's primary circuit leaves 6 to GWP 1500; safety leaves 750 in point 8."""
    cold = read(law_of, "R404A", "2027-01-01", product_below_minus_50=True, **STORE)
    primary = read(law_of, "R448A", "2027-01-01", cascade_primary=True)
    above = read(law_of, "R407A", "2027-01-01", cascade_primary=True)  # GWP 2107
    claimed = {**PACKAGED, "rated_capacity": "20 kW", "safety_exception": True}

    assert points(cold, cold.start) == set()
    assert points(primary, primary.start) == set()
    assert points(above, above.start) == {"6"}
    assert points(read(law_of, "R32", "2027-01-01", **claimed), datetime.date(2027, 1, 1)) == set()
    assert points(read(law_of, "R410A", "2027-01-01", **claimed), datetime.date(2027, 1, 1)) == {"8d"}
    # 8c bars every fluorinated gas from 2032; with the exception what is under 750 is left.
    small = {**PACKAGED, "rated_capacity": "10 kW", "safety_exception": True}
    assert points(read(law_of, "R32", "2032-01-01", **small), datetime.date(2032, 1, 1)) == set()


def test_a_claimed_safety_exception_is_open_and_names_the_evidence(law_of):
    """7d falls where safety demands it: the row then depends on evidence, and point 6 has no such exception."""
    check = read(law_of, "R134a", "2027-01-01", equipment="chiller", safety_exception=True)
    (row,) = [row for row in check.rows_on(NEW) if row.id == "eu-iv-7d"]
    rack = read(law_of, "R454A", "2027-01-01", safety_exception=True)

    assert (row.state, [reason.why for reason in row.reasons]) == (RowState.DEPENDS, [Why.SAFETY_CLAIMED])
    assert points(rack, rack.start) == {"6"}


@pytest.mark.parametrize(
    ("name", "plant", "keys"),
    [
        ("R448A", {"equipment": None}, {"law.equipment", "law.arrangement"}),
        ("R32", {"equipment": "air conditioning", "cooling": "5 kW"}, {"law.arrangement"}),
        ("R134a", {"equipment": "ice rink"}, {"evaporator.medium"}),
        ("R32", {"equipment": "heat pump", "arrangement": "self-contained"}, {"law.rated_capacity"}),
        ("R32", {**SPLIT, "evaporator": None, "rated_capacity": "10 kW"}, {"evaporator.medium"}),
    ],
)
def test_what_is_missing_is_named_by_its_key(law_of, name, plant, keys):
    """A limit that a key of the case would settle is unknown and carries that key."""
    check = read(law_of, name, "2027-01-01", kg=4.0, **plant)
    unknown = [row for row in check.rows_on(NEW) if row.state == RowState.UNKNOWN]

    assert unknown
    assert keys <= {key for row in unknown for key in row.missing}


def test_a_heat_pump_between_its_cooling_and_its_heat(law_of):
    """10 kW of cooling and 13 kW of heat lie on both sides of 12 kW: which is rated, only the rated capacity says."""
    given = {"equipment": "heat pump", "arrangement": "self-contained", "cooling": "10 kW"}
    check = read(law_of, "R32", "2027-01-01", heat_W=13e3, **given)
    rows = {row.id: row for row in check.rows_on(NEW)}

    assert {rows[name].state for name in ("eu-iv-8b", "eu-iv-8d")} == {RowState.DEPENDS}
    assert rows["eu-iv-8b"].missing == ("law.rated_capacity",)
    assert points(read(law_of, "R32", "2027-01-01", heat_W=11.9e3, **given), datetime.date(2027, 1, 1)) == {"8b"}


def test_only_a_new_plant_meets_limits_for_new_equipment(law_of):
    """Keeping or converting a plant has none of the rows."""
    assert not law_of("R454A", 200.0, is_new_plant=False).rows_on(NEW)
    assert law_of("R454A", 200.0).rows_on(NEW)


def test_the_strictest_ban_at_the_change_and_the_next(law_of):
    """Hand-read from annex IV and Art. 13: R448A in a supermarket plant of 30 kW, changed in 2027 and in 2031."""
    early = law_of("R448A", 50.0, cooling="30 kW")
    late = law_of("R448A", 50.0, cooling="30 kW", on="2031-04-01", date_of_change="2031-04-01")
    kept = law_of("R404A", 50.0, is_new_plant=False)

    assert (early.strictest, early.next_ban.id) == (None, "eu-iv-5c-small-rack")
    assert (late.strictest.id, late.next_ban.id) == ("eu-iv-5c-small-rack", "eu-ban-750")
    assert (kept.strictest.id, kept.next_ban.id) == ("eu-ban-2500-refrigeration", "eu-ban-2500-refrigeration-reclaimed")
