"""Rooms worked by hand: limit and verdict, the working beside each, both sides of a limit where that is the point.

Rules: Real Decreto 552/2019, IF-04, appendices 1 to 4 (consolidated text, read) for EN 378; RCL by volume for ASHRAE
15 (limits of ASHRAE 34 as the model mechanical code prints them, read in extracts). Figures of refrigerants are of
the decree, IF-02 table A (LFL, ATEL/ODL, practical limit), and of ASHRAE 34.
"""

from dataclasses import dataclass, field

import pytest

from retrofit.case import Room
from retrofit.checks.room.check import limits_of, room_verdict
from retrofit.refrigerants import find
from retrofit.study.charge import CircuitCharge
from retrofit.study.room import ABOVE, BELOW, CONDITIONS, UNKNOWN

SHOP = {
    "location": "II",
    "access": "a",
    "below_ground": False,
    "comfort": False,
    "sealed": False,
    "refrigerated": False,
}
STORE = {**SHOP, "access": "c", "emergency_exits": True, "area": "200 m2", "people": 4}  # few: 4 / 200 < 0.1
HALL = {**STORE, "people": 40}  # 40 / 200 = 0.2: not few
COMFORT = {**SHOP, "comfort": True, "area": "20 m2", "volume": "50 m3", "mounting": "wall"}


@dataclass(frozen=True)
class Worked:
    """A room, a charge in it, and what the hand says: the smallest limit that counts, and the verdict."""

    name: str
    family: str
    room: dict
    charge_kg: float
    limit_kg: float | None
    word: str
    more: dict = field(default_factory=dict)


EN, US = "EN 378", "ASHRAE 15"
OTHER = {"occupancy": "other"}
ROOMS = [
    # Comfort, wall, 20 m2: 2.5 · LFL^1.25 · 1.8 · 20^0.5. R32: 0.307^1.25 = 0.228520, · 20.1246 = 4.599
    Worked("R32", EN, COMFORT, 4.5, 4.599, BELOW),
    Worked("R32", EN, COMFORT, 4.7, 4.599, ABOVE),
    # R454B: 0.301^1.25 = 0.222952, · 20.1246 = 4.487
    Worked("R454B", EN, COMFORT, 4.4, 4.487, BELOW),
    # R290: 0.038^1.25 = 0.0167776, · 20.1246 = 0.3376
    Worked("R290", EN, COMFORT, 0.4, 0.3376, ABOVE),
    # The decree's example 4: R32, ceiling 2.2 m, 75 m2: 2.5 · 0.228520 · 2.2 · 8.66025 = 10.885, printed as 10.85 kg;
    # by toxicity 0.30 · 187.5 = 56.25
    Worked("R32", EN, COMFORT, 8.5, 10.885, BELOW, {"area": "75 m2", "volume": "187.5 m3", "mounting": "ceiling"}),
    # The decree's example 6: R290, window 1.0 m, 30 m2: 2.5 · 0.0167776 · 5.47723 = 0.2297, printed as 230 g
    Worked("R290", EN, COMFORT, 0.22, 0.2297, BELOW, {"area": "30 m2", "mounting": "window"}),
    # RCL by volume in 50 m3: R32 0.077 · 50 = 3.85
    Worked("R32", US, {**COMFORT, **OTHER}, 3.8, 3.85, BELOW),
    Worked("R32", US, {**COMFORT, **OTHER}, 3.9, 3.85, ABOVE),
    # Cold room of 40 m3, access c, few people, location I: 0.2 · LFL · 40. R290 0.304, R455A (0.423) 3.384, R454C 2.328
    Worked("R290", EN, STORE, 0.31, 0.304, ABOVE, {"volume": "40 m3", "location": "I"}),
    Worked("R455A", EN, STORE, 3.4, 3.384, ABOVE, {"volume": "40 m3", "location": "I"}),
    Worked("R454C", EN, STORE, 2.3, 2.328, BELOW, {"volume": "40 m3", "location": "I"}),
    Worked("R454C", EN, STORE, 2.4, 2.328, ABOVE, {"volume": "40 m3", "location": "I"}),
    # The same with the compressors outside: few people, class 2L at location II, no limit of charge
    Worked("R454C", EN, STORE, 40.0, None, CONDITIONS, {"volume": "40 m3"}),
    # ... with many people 0.2 · 0.291 · 40 = 2.328 again
    Worked("R454C", EN, HALL, 2.4, 2.328, ABOVE, {"volume": "40 m3"}),
    # ... and with a number of people nobody gives: above the strictest row, open by the other
    Worked("R454C", EN, HALL, 2.4, 2.328, UNKNOWN, {"volume": "40 m3", "people": None}),
    # R744 in 500 m3, general access: 0.1 · 500 = 50; by RCL 0.054 · 500 = 27
    Worked("R744", EN, SHOP, 49.0, 50.0, BELOW, {"volume": "500 m3"}),
    Worked("R744", EN, SHOP, 51.0, 50.0, ABOVE, {"volume": "500 m3"}),
    Worked("R744", US, {**SHOP, **OTHER}, 28.0, 27.0, ABOVE, {"volume": "500 m3"}),
    # Sealed cabinet in 30 m3: R290 0.2 · 0.038 · 30 = 0.228; R600a (0.043) 0.258
    Worked("R290", EN, SHOP, 0.15, 0.228, BELOW, {"volume": "30 m3", "sealed": True}),
    Worked("R600a", EN, SHOP, 0.26, 0.258, ABOVE, {"volume": "30 m3", "sealed": True}),
    # R290 joined on site with general access: the row is for sealed systems only, so nothing
    Worked("R290", EN, SHOP, 0.15, 0.0, ABOVE, {"volume": "30 m3"}),
    # ... supervised, 192.5 m3: 0.2 · 0.038 · 192.5 = 1.463 (the decree's example 2 rounds 0.2 · LFL to 0.008: 1.54)
    Worked("R290", EN, SHOP, 1.4, 1.463, BELOW, {"volume": "192.5 m3", "access": "b"}),
    # R134a, 3 kg sealed in 10 m3: the largest of 0.25 · 10 = 2.5, 20 · 0.25 = 5.0 and 0.15
    Worked("R134a", EN, SHOP, 3.0, 5.0, BELOW, {"volume": "10 m3", "sealed": True}),
    Worked("R134a", EN, SHOP, 5.1, 5.0, ABOVE, {"volume": "10 m3", "sealed": True}),
    Worked("R134a", EN, SHOP, 3.0, 2.5, ABOVE, {"volume": "10 m3"}),
    # ... and where nobody says whether it is sealed: open up to 5.0
    Worked("R134a", EN, SHOP, 3.0, 2.5, UNKNOWN, {"volume": "10 m3", "sealed": None}),
    # R717 sealed: 20 · 0.00035 = 0.007 by toxicity, and no 150 g in class B
    Worked("R717", EN, SHOP, 0.1, 0.007, ABOVE, {"volume": "10 m3", "sealed": True}),
    # R404A in a supervised cellar: 0.52 · 100 = 52 at location I; at location II no limit
    Worked(
        "R404A", EN, SHOP, 53.0, 52.0, ABOVE, {"volume": "100 m3", "access": "b", "below_ground": True, "location": "I"}
    ),
    Worked("R404A", EN, SHOP, 53.0, None, CONDITIONS, {"volume": "100 m3", "access": "b", "below_ground": True}),
    # The decree's example 3: R717, access c, location II: few people no limit; else 25 kg, and 0.0232 · 500 = 11.6
    Worked("R717", EN, STORE, 900.0, None, CONDITIONS, {"volume": "500 m3"}),
    Worked("R717", EN, HALL, 12.0, 11.6, ABOVE, {"volume": "500 m3"}),
    Worked("R717", EN, HALL, 24.0, 25.0, BELOW, {"volume": "5000 m3"}),
    # R717 at location I, access c, few people, exits: 50 kg, and 0.0232 · V = 46.4 in 2000 m3
    Worked("R717", EN, STORE, 47.0, 46.4, ABOVE, {"volume": "2000 m3", "location": "I"}),
    Worked("R717", EN, STORE, 51.0, 50.0, ABOVE, {"volume": "5000 m3", "location": "I"}),
    # ... without exits 10 kg
    Worked("R717", EN, STORE, 10.5, 10.0, ABOVE, {"volume": "5000 m3", "location": "I", "emergency_exits": False}),
    # R1234yf in a shop of 300 m3: 0.2 · 0.289 · 300 = 17.34, at most 1.5 · 26 · 0.289 = 11.271; supervised at
    # location II 17.34, at most 25
    Worked("R1234yf", EN, SHOP, 12.0, 11.271, ABOVE, {"volume": "300 m3"}),
    Worked("R1234yf", EN, SHOP, 17.0, 17.34, BELOW, {"volume": "300 m3", "access": "b", "emergency_exits": True}),
    # Machinery room: no limit; R290 with general access 5 kg
    Worked("R449A", EN, SHOP, 511.5, None, CONDITIONS, {"location": "III"}),
    Worked("R290", EN, SHOP, 5.5, 5.0, ABOVE, {"location": "III"}),
    Worked("R449A", US, SHOP, 511.5, None, CONDITIONS, {"location": "III"}),
    # A US cold store, R449A (0.37 kg/m3) in 100 m3: not stopped by 37 kg alone; as a sales floor it is
    Worked("R449A", US, {**STORE, **OTHER}, 60.0, None, CONDITIONS, {"volume": "100 m3", "refrigerated": True}),
    Worked("R449A", US, {**STORE, **OTHER}, 60.0, 37.0, ABOVE, {"volume": "100 m3"}),
    Worked("R449A", US, {**STORE, **OTHER}, 60.0, 37.0, UNKNOWN, {"volume": "100 m3", "refrigerated": None}),
    # R22 in a ward of 100 m3: 0.21 · 100 · 0.5 = 10.5
    Worked("R22", US, SHOP, 10.6, 10.5, ABOVE, {"volume": "100 m3", "occupancy": "institutional"}),
]


def case_name(item):
    """Return a short name of a worked room."""
    return f"{item.name}-{item.family}-{item.charge_kg:g}kg-{item.word}"


@pytest.mark.parametrize("item", ROOMS, ids=case_name)
def test_a_room_worked_by_hand(item):
    """The least limit that counts is that of the hand, to the digits shown, and the verdict follows."""
    keys = {key: value for key, value in {**item.room, **item.more}.items() if value is not None}
    limits = limits_of(find(item.name), Room.model_validate(keys), (item.family,))
    charge = CircuitCharge(item.charge_kg, item.charge_kg, item.charge_kg, "largest circuit")
    counted = [limit for limit in limits if limit.role == "limit"]
    known = [limit.limit_kg for limit in counted if limit.limit_kg is not None]

    assert (min(known) if known else None) == (
        None if item.limit_kg is None else pytest.approx(item.limit_kg, rel=2e-4)
    )
    assert room_verdict(limits, (item.family,), charge, is_code_stated=True)[0] == item.word
    assert item.word != CONDITIONS or all(limit.conditions for limit in counted)


def test_ventilation_of_a_machinery_room_by_charge():
    """R717, 278.9 kg: 0.014 · 278.9^(2/3), with 278.9^(1/3) = 6.5335: 0.598 m3/s. R449A: 0.07 · 511.5^0.5 = 1.583."""
    from retrofit.checks.room.machinery import ventilation_en378_m3_per_s, ventilation_m3_per_s

    assert ventilation_en378_m3_per_s(278.9) == pytest.approx(0.5976, rel=1e-3)
    assert ventilation_m3_per_s(511.5) == pytest.approx(1.583, rel=1e-3)
