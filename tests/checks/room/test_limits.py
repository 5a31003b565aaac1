"""Each rule against numbers worked by hand and printed ones, and each input that a rule needs."""

import pytest

from retrofit.case import Room
from retrofit.checks.room import ashrae15, en378, product, quantity
from retrofit.checks.room.lfl import HEIGHTS_M, area_rule_kg, caps, height_factor_m, least_area_m2
from retrofit.refrigerants import find

FULL = {
    "volume": "100 m3",
    "area": "40 m2",
    "mounting": "wall",
    "access": "a",
    "occupancy": "other",
    "location": "II",
    "below_ground": False,
    "comfort": False,
    "emergency_exits": True,
    "people": 2,
    "refrigerated": False,
    "ventilation": "natural",
    "sealed": False,
}


def room(**changes):
    """Return a room with every input given; a change to None leaves one out."""
    keys = {key: value for key, value in {**FULL, **changes}.items() if value is not None}
    return Room.model_validate(keys)


def one(limits, method):
    """Return the one limit of a method."""
    (found,) = [limit for limit in limits if limit.method == method]
    return found


# RD 552/2019, IF-04: 4, 26 and 130 m3 LFL, in class 2L 1.5 times that. By hand: R32, 1.5 · 4 · 0.307 = 1.842 and
# so on; R290, 4 · 0.038 = 0.152. Both rows are printed in many guides to EN 378 as 1.84, 12.0, 59.9 and 0.15, 1.0, 4.9.
CAPS = [(0.307, "2L", (1.842, 11.973, 59.865)), (0.038, "3", (0.152, 0.988, 4.94)), (0.13, "2", (0.52, 3.38, 16.9))]


@pytest.mark.parametrize(("lfl", "flammability", "expected"), CAPS)
def test_the_three_charges_of_a_class(lfl, flammability, expected):
    """m1, m2 and m3 follow from LFL and class."""
    found = caps(lfl, flammability)

    assert (found.m1_kg, found.m2_kg, found.m3_kg) == pytest.approx(expected, rel=1e-9)


# IEC 60335-2-40:2013, annex GG, table of minimum room areas, whole m2 as printed (from memory): R32 with LFL 0.306
# and R290 with LFL 0.038, by mounting height.
PRINTED_AREAS = [
    (0.306, 0.6, 1.836, 29),
    (0.306, 0.6, 2.448, 51),
    (0.306, 0.6, 7.956, 543),
    (0.306, 1.0, 3.672, 42),
    (0.306, 1.8, 4.896, 23),
    (0.306, 2.2, 7.956, 40),
    (0.038, 0.6, 0.228, 82),
]


@pytest.mark.parametrize(("lfl", "height", "charge", "area"), PRINTED_AREAS)
def test_the_least_area_is_the_printed_one(lfl, height, charge, area):
    """A charge asks for the printed floor area, to the whole square metre."""
    assert least_area_m2(lfl, height, charge) == pytest.approx(area, abs=0.5)


@pytest.mark.parametrize(("lfl", "height", "charge", "area"), PRINTED_AREAS)
def test_area_rule_and_least_area_are_one_rule(lfl, height, charge, area):
    """The least area of a charge allows just that charge: the square belongs on the whole quotient."""
    needed = least_area_m2(lfl, height, charge)

    assert area_rule_kg(lfl, height, needed) == pytest.approx(charge, rel=1e-12)


def test_the_area_rule_by_hand():
    """R32 on a wall over 30 m2: 0.307 · 0.74436 (fourth root) = 0.22852; 2.5 · 0.22852 · 1.8 · 5.4772 = 5.632 kg."""
    limit = one(en378.limits(find("R32"), room(comfort=True, area="30 m2", volume="75 m3")), "flammability")

    assert limit.limit_kg == pytest.approx(5.632, abs=5e-4)
    assert limit.decided_by == "area"
    assert "5.632 kg" in " ".join(limit.lines)
    assert limit.basis == "read"


@pytest.mark.parametrize(
    ("mounting", "height", "factor"),
    [
        ("floor", None, 0.6),
        ("window", None, 1.0),
        ("wall", None, 1.8),
        ("ceiling", None, 2.2),
        (None, "2.5 m", 2.2),
        (None, "2.19 m", 1.8),
        (None, "1.0 m", 1.0),
        (None, "0.3 m", 0.6),
        (None, None, None),
    ],
)
def test_mounting_gives_the_height_factor(mounting, height, factor):
    """By word as RD 552/2019 prints it; a height in metres takes the row below it, never one above."""
    assert height_factor_m(room(mounting=mounting, mounting_height=height)) == factor


def test_a_larger_area_or_height_allows_no_less():
    """Each input moves the area rule the right way."""
    charges = [area_rule_kg(0.307, height, 30.0) for height in HEIGHTS_M.values()]

    assert charges == sorted(charges)
    assert area_rule_kg(0.307, 1.8, 60.0) == pytest.approx(2.0**0.5 * area_rule_kg(0.307, 1.8, 30.0))


# ASHRAE 34 as the IMC table prints it: R22 210 g/m3, R134a 210 g/m3, R32 77 g/m3.
RCL = [
    ("R22", "100 m3", "other", 21.0),
    ("R22", "100 m3", "institutional", 10.5),
    ("R134a", "250 m3", "other", 52.5),
    ("R32", "100 m3", "other", 7.7),
]


@pytest.mark.parametrize(("name", "volume", "occupancy", "expected"), RCL)
def test_concentration_limit_by_volume(name, volume, occupancy, expected):
    """RCL by volume, halved where people cannot leave by themselves."""
    limit = one(ashrae15.limits(find(name), room(volume=volume, occupancy=occupancy, area=None)), "rcl")

    assert limit.limit_kg == pytest.approx(expected)
    assert (limit.code_family, limit.decided_by, limit.basis) == ("ASHRAE 15", "volume", "memory")


def test_dispersal_volume_charge():
    """R32 in 100 m3 in comfort use, by hand: 100 · 0.307 · 0.5 = 15.35 kg; half of it if institutional."""
    found = [
        one(ashrae15.limits(find("R32"), room(comfort=True, occupancy=occupancy)), "dispersal")
        for occupancy in ("other", "institutional")
    ]

    assert [limit.limit_kg for limit in found] == pytest.approx([15.35, 7.675])
    assert {limit.role for limit in found} == {"alternative"}
    assert not [limit for limit in ashrae15.limits(find("R22"), room(comfort=True)) if limit.method == "dispersal"]


# RD 552/2019, Table A of IF-02: R404A 0.52 and 0.52; R32 ATEL 0.30, practical limit 0.061; R134a 0.21 and 0.25;
# R717 0.00022 and 0.00035. The larger counts.
TOXICITY = [("R404A", 52.0), ("R32", 30.0), ("R134a", 25.0), ("R717", 0.035)]


@pytest.mark.parametrize(("name", "expected"), TOXICITY)
def test_toxicity_limit_takes_the_larger_figure(name, expected):
    """The larger of ATEL/ODL and practical limit, by 100 m3."""
    limit = one(en378.limits(find(name), room()), "toxicity")

    assert limit.limit_kg == pytest.approx(expected)
    assert limit.decided_by == "volume"


@pytest.mark.parametrize(
    ("name", "volume", "changes", "expected", "decided_by"),
    [
        # R1234yf: 0.2 · 0.289 · V; cap 1.5 · 26 · 0.289 = 11.271 kg, reached at 195 m3
        ("R1234yf", "100 m3", {}, 5.78, "volume"),
        ("R1234yf", "194 m3", {}, 11.2132, "volume"),
        ("R1234yf", "196 m3", {}, 11.271, "cap 1.5 · m2 of class 2L"),
        # R152a: 0.2 · 0.13 · V; cap 26 · 0.13 = 3.38 kg, reached at 130 m3
        ("R152a", "129 m3", {}, 3.354, "volume"),
        ("R152a", "131 m3", {}, 3.38, "cap m2 of class 2"),
        # R290: 0.2 · 0.038 · V = 0.0076 V; cap by place and access
        ("R290", "100 m3", {"sealed": True}, 0.76, "volume"),
        ("R290", "131 m3", {"below_ground": True, "access": "c"}, 0.9956, "volume"),
        ("R290", "132 m3", {"below_ground": True, "access": "c"}, 1.0, "cap 1 kg of class 3"),
        ("R290", "1000 m3", {"access": "a", "sealed": True}, 1.5, "cap 1.5 kg of class 3"),
        ("R290", "1000 m3", {"access": "b"}, 2.5, "cap 2.5 kg of class 3"),
        ("R290", "1315 m3", {"access": "c", "location": "I"}, 9.994, "volume"),
        ("R290", "1316 m3", {"access": "c", "location": "I"}, 10.0, "cap 10 kg of class 3"),
        ("R290", "3290 m3", {"access": "c"}, 25.0, "cap 25 kg of class 3"),
    ],
)
def test_a_fifth_of_the_lfl_with_its_cap(name, volume, changes, expected, decided_by):
    """RD 552/2019, IF-04: both sides of each cap."""
    limit = one(en378.limits(find(name), room(volume=volume, **changes)), "flammability")

    assert limit.limit_kg == pytest.approx(expected)
    assert limit.decided_by == decided_by
    assert limit.open_because == ""


def test_comfort_use_is_at_least_m1_and_at_most_its_cap():
    """R32 on the floor: 1.842 kg whatever the area; a hall ends at 11.973 kg. R290 in a hall: more of m2 and 1.5 kg."""
    small, hall = ({"area": "4 m2", "volume": "10 m3"}, {"area": "4000 m2", "volume": "9000 m3"})
    found = [
        one(en378.limits(find(name), room(comfort=True, mounting="floor", **size)), "flammability")
        for name, size in (("R32", small), ("R32", hall), ("R290", hall))
    ]

    assert [limit.limit_kg for limit in found] == pytest.approx([1.842, 11.973, 1.5])
    assert [limit.decided_by for limit in found] == [
        "m1, whatever the area",
        "cap 1.5 · m2 of class 2L",
        "cap 1.5 kg of class 3",
    ]


@pytest.mark.parametrize(("name", "has_rule"), [("R32", True), ("R290", True), ("R1270", True), ("R170", False)])
def test_the_area_rule_is_for_vapour_above_42_g_per_mol(name, has_rule):
    """R1270 weighs 42.08 g/mol, just enough; ethane weighs 30.07 and has no rule."""
    limit = one(en378.limits(find(name), room(comfort=True)), "flammability")

    assert (limit.limit_kg is not None) == has_rule
    assert has_rule or "42 g/mol" in " ".join(limit.unknown_because)


def test_a_factory_sealed_system_may_hold_a_little_anywhere():
    """In 5 m3: R290 m1 = 0.152 kg against 0.038 kg; R32 1.842 kg against 0.307 kg; R717 20 m3 · 0.00035 = 0.007 kg."""
    tiny = {"volume": "5 m3", "area": None}
    sealed = {name: en378.limits(find(name), room(sealed=True, **tiny)) for name in ("R290", "R32", "R717")}
    plain = {name: en378.limits(find(name), room(access="b", **tiny)) for name in ("R290", "R32")}

    assert one(sealed["R290"], "flammability").limit_kg == pytest.approx(0.152)
    assert one(sealed["R32"], "flammability").limit_kg == pytest.approx(1.842)
    assert one(plain["R290"], "flammability").limit_kg == pytest.approx(0.038)
    assert one(plain["R32"], "flammability").limit_kg == pytest.approx(0.307)
    assert one(sealed["R717"], "toxicity").limit_kg == pytest.approx(0.007)


def test_whether_it_is_sealed_stays_open_where_that_decides():
    """Not stated, a charge up to m1 is open, and no limit is raised."""
    limit = one(en378.limits(find("R290"), room(volume="5 m3", access="b", sealed=None)), "flammability")

    assert limit.limit_kg == pytest.approx(0.038)
    assert limit.open_up_to_kg == pytest.approx(0.152)
    assert "`sealed`" in limit.open_because


def test_a_single_package_has_a_limit_of_its_own():
    """R290 over 12 m2: 0.25 · 12 · 0.038 · 2.2 = 0.2508 kg, within 0.152 to 0.304 kg; it decides nothing."""
    found = [
        one(en378.limits(find("R290"), room(comfort=True, sealed=True, area=area, volume="25 m3")), "package")
        for area in ("12 m2", "4 m2", "16 m2")
    ]

    assert [limit.limit_kg for limit in found] == pytest.approx([0.2508, 0.152, 0.304])
    assert {limit.role for limit in found} == {"alternative"}
    assert not [limit for limit in en378.limits(find("R290"), room(comfort=True)) if limit.method == "package"]


# RD 552/2019, IF-04, appendix 4, table A: RCL, QLMV, QLAV in kg/m3.
QUANTITY_ROWS = [
    ("R22", 0.21, 0.28, 0.50),
    ("R134a", 0.21, 0.28, 0.58),
    ("R407C", 0.27, 0.44, 0.49),
    ("R410A", 0.39, 0.42, 0.42),
    ("R744", 0.072, 0.074, 0.18),
    ("R32", 0.061, 0.063, 0.15),
    ("R1234yf", 0.058, 0.060, 0.14),
    ("R1234ze(E)", 0.061, 0.063, 0.15),
]


@pytest.mark.parametrize(("name", "rcl", "qlmv", "qlav"), QUANTITY_ROWS)
def test_the_alternative_takes_the_printed_row(name, rcl, qlmv, qlav):
    """In 100 m3 each limit is the printed figure a hundredfold; below ground the concentration limit joins them."""
    above = quantity.alternative(find(name), room())
    below = quantity.alternative(find(name), room(below_ground=True))

    assert [limit.limit_kg for limit in above] == pytest.approx([100 * qlmv, 100 * qlav])
    assert [limit.limit_kg for limit in below] == pytest.approx([100 * rcl, 100 * qlmv, 100 * qlav])
    assert {limit.role for limit in (*above, *below)} == {"alternative"}


def test_the_alternative_counts_250_m2_and_ends_at_150_kg():
    """A hall of 1500 m2 and 6000 m3 counts as 1000 m3; R134a then ends at 150 kg, R32 at 1.5 m3 = 59.865 kg."""
    hall = room(volume="6000 m3", area="1500 m2")
    r134a, r32 = (quantity.alternative(find(name), hall) for name in ("R134a", "R32"))

    assert [limit.limit_kg for limit in r134a] == pytest.approx([150.0, 150.0])
    assert [limit.limit_kg for limit in r32] == pytest.approx([59.865, 59.865])
    assert "1 000.0" in r134a[0].lines[0].replace("\u202f", " ")


@pytest.mark.parametrize(("name", "changes"), [("R290", {}), ("R717", {}), ("R134a", {"location": "I"})])
def test_the_alternative_is_for_a1_and_a2l_at_location_2(name, changes):
    """It is not even shown elsewhere."""
    assert quantity.alternative(find(name), room(**changes)) == ()


def test_product_factors_are_shown_and_are_no_limit():
    """R32: 6, 52 and 260 times 0.307 = 1.842, 15.964 and 79.82 kg, as guides to the standard print; R290 as before."""
    (found,) = product.limits(find("R32"), room(comfort=True))

    assert product.factors_kg(0.307, "2L") == pytest.approx((1.842, 15.964, 79.82))
    assert product.factors_kg(0.038, "3") == pytest.approx((0.152, 0.988, 4.94))
    assert (found.limit_kg, found.role, found.basis) == (None, "product standard", "memory")
    assert "79.82 kg" in " ".join(found.lines)
    assert product.limits(find("R32"), room()) == product.limits(find("R22"), room(comfort=True)) == ()


@pytest.mark.parametrize(
    ("name", "jurisdiction", "expected"),
    # 13 · 0.038 = 0.494 kg and at most 1.2 kg in the EU ("about 500 g of R290, 1.2 kg of A2L": trade press, read);
    # in the US 8 · 0.038 = 0.304 kg with doors and 0.494 kg without ("300 g closed, 500 g open": trade press, read)
    [
        ("R290", "EU", [0.494]),
        ("R290", "US", [0.304, 0.494]),
        ("R290", "US-CA", [0.304, 0.494]),
        ("R290", None, [0.494, 0.304, 0.494]),
        ("R1234yf", "EU", [1.2]),
        ("R152a", "EU", [1.2]),
        ("R290", "GB", []),
        ("R134a", "EU", []),
    ],
)
def test_the_product_standard_of_a_cabinet_is_that_of_the_place(name, jurisdiction, expected):
    """Of a factory-sealed system in another use than comfort; shown, it decides nothing."""
    found = product.limits(find(name), room(sealed=True), jurisdiction)

    assert [limit.limit_kg for limit in found] == pytest.approx(expected)
    assert {limit.role for limit in found} <= {"product standard"}


@pytest.mark.parametrize(("name", "rcl", "qlmv", "qlav"), [row for row in QUANTITY_ROWS if row[0] != "R744"])
def test_the_computed_alternative_meets_the_printed_rows(name, rcl, qlmv, qlav):
    """From the printed RCL: QLAV by ODL or half the LFL to the two printed digits, QLMV between the rows of table B.

    RCL is printed with two digits; half a digit of 0.27 kg/m3 moves the QLMV of R407C by 5 %, of 0.061 by 1 %.
    """
    found = quantity.computed_limits(find(name), rcl)

    assert found["qlav"] == pytest.approx(qlav, abs=0.0051)
    assert found["qlmv"] == pytest.approx(qlmv, rel=0.055 if name == "R407C" else 0.03)


def test_the_computed_alternative_by_hand():
    """R454C: LFL 0.291, a fifth of it 0.0582 for RCL, half of it 0.1455 for QLAV; 90.8 g/mol.

    Table B at 90.8 g/mol: 0.051 at RCL 0.05, 0.108 at 0.10; so 0.051 + (0.0082 / 0.05) · 0.057 = 0.06035.
    """
    refrigerant = find("R454C")
    found = quantity.computed_limits(refrigerant)

    assert refrigerant.lfl_kg_per_m3.number == 0.291
    assert (found["rcl"], found["qlmv"], found["qlav"]) == pytest.approx((0.0582, 0.06035, 0.1455), rel=1e-4)
    assert quantity.computed_limits(find("R508B")) is not None  # A1, without an LFL
    assert quantity.computed_limits(find("R457A")) is None  # no LFL is held
    assert all("computed" in " ".join(limit.flags) for limit in quantity.alternative(refrigerant, room()))


@pytest.mark.parametrize("name", ["R454A", "R454B", "R455A"])
def test_an_unresolved_rcl_shows_both_candidates(name):
    """Both figures stand side by side, flagged; the other is a quarter of the LFL, as the dispute prints it."""
    refrigerant = find(name)
    kept, other = (limit for limit in ashrae15.limits(refrigerant, room()) if limit.method == "rcl")
    (dispute,) = [item for item in refrigerant.disputes if item.field == "rcl_kg_per_m3"]

    assert kept.limit_kg == pytest.approx(100.0 * refrigerant.rcl_kg_per_m3.number)
    assert other.limit_kg == pytest.approx(25.0 * refrigerant.lfl_kg_per_m3.number)
    assert round(10.0 * other.limit_kg) == pytest.approx(float(dispute.other.split()[0]), abs=0.5)
    assert all(any("unresolved" in flag for flag in limit.flags) for limit in (kept, other))


@pytest.mark.parametrize("name", ["R448A", "R454C", "R744"])
def test_a_limit_from_memory_is_flagged(name):
    """Their RCL was not read in a document."""
    limit = one(ashrae15.limits(find(name), room()), "rcl")

    assert limit.limit_kg is not None
    assert any(flag.startswith(f"RCL of {name} is from memory") for flag in limit.flags)


def test_a_dispute_on_a_figure_used_is_flagged():
    """Propane's LFL differs between two standards, carbon dioxide's RCL between two editions."""
    lfl = one(en378.limits(find("R290"), room()), "flammability")
    rcl = one(ashrae15.limits(find("R744"), room()), "rcl")

    assert any("IEC2010" in flag for flag in lfl.flags)
    assert any("72 g/m³" in flag for flag in rcl.flags)


MISSING = [
    ("R134a", ashrae15, "rcl", "volume", {}),
    ("R134a", ashrae15, "rcl", "occupancy", {}),
    ("R32", ashrae15, "dispersal", "volume", {"comfort": True}),
    ("R32", ashrae15, "dispersal", "occupancy", {"comfort": True}),
    ("R32", ashrae15, "dispersal", "comfort", {}),
    ("R134a", en378, "toxicity", "volume", {}),
    ("R134a", en378, "toxicity", "location", {}),
    ("R32", en378, "flammability", "volume", {}),
    ("R32", en378, "flammability", "location", {}),
    ("R32", en378, "flammability", "comfort", {}),
    ("R32", en378, "flammability", "area", {"comfort": True}),
    ("R32", en378, "flammability", "mounting", {"comfort": True}),
    ("R290", en378, "package", "area", {"comfort": True, "sealed": True}),
]


@pytest.mark.parametrize(("name", "family", "method", "key", "changes"), MISSING)
def test_a_missing_input_is_named_and_makes_no_limit(name, family, method, key, changes):
    """With every input there is a limit; without one there is none, and the key is named."""
    whole = one(
        family.limits(find(name), room(**{"comfort": True, **changes} if method == "dispersal" else changes)), method
    )
    without = one(family.limits(find(name), room(**{**changes, key: None})), method)

    assert whole.limit_kg is not None
    assert without.limit_kg is None
    assert any(f"`{key}`" in reason for reason in without.unknown_because)


@pytest.mark.parametrize("key", ["volume", "area", "location", "below_ground", "ventilation"])
def test_a_missing_input_of_the_alternative_is_named(key):
    """It needs volume, area, location, ventilation and whether it lies below ground."""
    found = quantity.alternative(find("R134a"), room(**{key: None}))

    assert [limit.limit_kg for limit in found] == [None, None]
    assert all(any(f"`{key}`" in reason for reason in limit.unknown_because) for limit in found)


def test_the_alternative_counts_on_ventilation():
    """Without any, only the concentration limit of a lowest floor is left."""
    found = quantity.alternative(find("R134a"), room(ventilation="none", below_ground=True))

    assert [limit.limit_kg for limit in found] == [pytest.approx(21.0), None, None]
    assert "the case says there is none" in " ".join(found[1].unknown_because)


@pytest.mark.parametrize(
    ("name", "family", "method", "what"),
    [
        ("R1150", ashrae15, "rcl", "RCL of R1150"),
        ("R457A", en378, "toxicity", "ATEL/ODL and practical limit of R457A"),
        ("R457A", en378, "flammability", "LFL of R457A"),
        ("R1123", ashrae15, "rcl", "safety class of R1123"),
        ("R1123", en378, "toxicity", "safety class of R1123"),
    ],
)
def test_a_missing_value_of_the_catalogue_is_named(name, family, method, what):
    """What the catalogue does not state is never made up."""
    limit = one(family.limits(find(name), room()), method)

    assert limit.limit_kg is None
    assert any(what in reason for reason in limit.unknown_because)


@pytest.mark.parametrize("family", ["EN 378", "ISO 5149"])
@pytest.mark.parametrize(
    ("name", "access", "expected"),
    # RD 552/2019, IF-04, tables A and B, location 3: no limit, but 5 and 10 kg in class 3 with access a and b
    [("R134a", "a", None), ("R32", "a", None), ("R717", "a", None), ("R290", "a", 5.0), ("R290", "b", 10.0),
     ("R290", "c", None), ("R152a", "a", None)],
)  # fmt: skip
def test_a_machinery_room_has_conditions_instead_of_a_limit(family, name, access, expected):
    """Its row says no limit of charge, or a mass whatever the room; no volume is asked for."""
    here = room(location="III", access=access, volume=None, area=None)
    tox, *other = en378.limits(find(name), here, family)

    assert tox.unlimited_because
    assert tox.unknown_because == ()
    assert "machinery room" in tox.conditions[0]
    assert [limit.limit_kg for limit in other] == ([] if name == "R134a" else [expected])
    assert all(bool(limit.unlimited_because) == (expected is None) for limit in other)


@pytest.mark.parametrize(("name", "expected"), [("R32", 59.865), ("R290", 4.94), ("R152a", 16.9)])
def test_a_ventilated_enclosure_ends_at_m3(name, expected):
    """130 m3 · LFL, in class 2L 1.5 times that; by toxicity it depends on where the enclosure stands."""
    tox, flam = en378.limits(find(name), room(location="IV"))

    assert flam.limit_kg == pytest.approx(expected)
    assert "where the ventilated enclosure stands" in " ".join(tox.unknown_because)


def test_a_room_rule_does_not_limit_a_plant_outside_the_room():
    """With all parts in a machinery room the concentration limit of an occupied room gives way to conditions."""
    (limit,) = ashrae15.limits(find("R134a"), room(location="III", volume=None))

    assert limit.limit_kg is None
    assert limit.unknown_because == ()
    assert "machinery room" in limit.unlimited_because
    assert limit.conditions


def test_a_refrigerated_room_has_conditions_instead_of_a_concentration_limit():
    """Yes: conditions, and 100 · 0.289 = 28.9 kg for the LFL in the room. Not told: open above the limit."""
    found = {
        answer: one(ashrae15.limits(find("R1234yf"), room(refrigerated=answer)), "rcl")
        for answer in (True, None, False)
    }

    assert found[True].conditions
    assert "28.9 kg" in " ".join(found[True].lines)
    assert (found[None].limit_kg, found[False].limit_kg) == (pytest.approx(7.5), pytest.approx(7.5))
    assert "`refrigerated`" in found[None].open_because
    assert found[False].open_because == ""


@pytest.mark.parametrize("name", ["R152a", "R290", "R600a"])
@pytest.mark.parametrize("comfort", [True, False])
def test_a_concentration_is_not_enough_for_classes_2_and_3(name, comfort):
    """ASHRAE 15 keeps them to few places without the authority (from memory): no limit says below, the figure stays."""
    limit = one(ashrae15.limits(find(name), room(comfort=comfort)), "rcl")

    assert limit.limit_kg is None
    assert "authority" in " ".join(limit.unknown_because)
    assert limit.lines


def test_class_b_is_restricted_in_comfort_use():
    """R123 (B1, 57 g/m3) has its concentration limit elsewhere; in comfort use, or if it is not stated, it has none."""
    found = {use: one(ashrae15.limits(find("R123"), room(comfort=use)), "rcl") for use in (True, False, None)}

    assert found[False].limit_kg == pytest.approx(5.7)
    assert "restricts use" in " ".join(found[True].unknown_because)
    assert "`comfort` in [room]" in found[None].unknown_because


def test_ammonia_is_left_to_its_own_standard():
    """ASHRAE 15 (2022) does not cover it."""
    limit = one(ashrae15.limits(find("R717"), room()), "rcl")

    assert limit.limit_kg is None
    assert "IIAR 2" in " ".join(limit.unknown_because)


def test_the_rows_that_may_hold_leave_the_limit_open():
    """R134a, access not told: 25 kg of the strictest row, and any charge of the others; R717: 0.035 kg to 25 kg."""
    mild, toxic = (one(en378.limits(find(name), room(access=None)), "toxicity") for name in ("R134a", "R717"))

    assert (mild.limit_kg, mild.open_up_to_kg) == (pytest.approx(25.0), None)
    assert (toxic.limit_kg, toxic.open_up_to_kg) == (pytest.approx(0.035), None)
    assert "`access`" in mild.open_because
    crowded = one(en378.limits(find("R717"), room(access=None, people=10)), "toxicity")
    assert crowded.open_up_to_kg == pytest.approx(25.0)
    assert one(en378.limits(find("R134a"), room()), "toxicity").open_because == ""


def test_iso_5149_is_the_same_rule_with_a_flag():
    """It gives the same numbers as EN 378 and says that this is from memory."""
    ours, theirs = (en378.limits(find("R32"), room(), family) for family in ("EN 378", "ISO 5149"))

    assert [limit.limit_kg for limit in theirs] == [limit.limit_kg for limit in ours]
    assert all(limit.basis == "memory" and any("ISO 5149" in flag for flag in limit.flags) for limit in theirs)


@pytest.mark.parametrize("name", ["R134a", "R32", "R152a", "R290", "R123", "R717", "R1123", "R454B"])
@pytest.mark.parametrize("comfort", [True, False, None])
def test_every_working_says_what_it_is(name, comfort):
    """Formula, symbols with units, source, edition and why it applies stand in each; a known limit has its lines."""
    here = room(comfort=comfort, sealed=True)
    found = [
        *ashrae15.limits(find(name), here),
        *en378.limits(find(name), here),
        *quantity.alternative(find(name), here),
        *product.limits(find(name), here),
    ]

    for limit in found:
        assert limit.formula
        assert limit.source
        assert limit.edition
        assert limit.applies_because
        assert limit.basis in ("read", "memory")
        assert all("[" in symbol for symbol in limit.symbols if "h0" not in symbol)
        assert (limit.limit_kg is None) == bool(limit.unknown_because or limit.unlimited_because)
        assert limit.limit_kg is None or (limit.lines and limit.decided_by)
