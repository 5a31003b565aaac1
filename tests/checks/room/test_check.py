"""The charge against the limits: both sides of each, what stays unknown, and the findings of a whole result."""

import json
from dataclasses import asdict, replace
from itertools import combinations

import pytest
from CoolProp.CoolProp import PropsSI

from retrofit.case import MachineryRoom, Room
from retrofit.case.law import Law
from retrofit.checks import assess
from retrofit.checks.room.check import FAMILIES, against_limit, room_verdict
from retrofit.checks.room.working import Rule, Work
from retrofit.study import Verdict, compare
from retrofit.study.charge import CircuitCharge

RULE = Rule("rcl", "Rule", "ASHRAE 15", "edition", "m = c V", ("m: [kg]",), "source", "read")
ROOM = {
    "volume": "100 m3",
    "area": "40 m2",
    "access": "a",
    "occupancy": "other",
    "location": "II",
    "below_ground": False,
    "comfort": False,
    "emergency_exits": True,
    "people": 2,
    "refrigerated": False,
    "largest_circuit": "10 kg",
    "sealed": False,
}


def limit(kg, *, method="rcl", family="ASHRAE 15", role="limit", open_because="", open_up_to_kg=None):
    """Return a limit; None for one that is not known."""
    rule = replace(RULE, method=method, code_family=family, role=role)
    work = Work(missing=[] if kg is not None else ["`volume` in [room]"])
    return work.limit(rule, kg, "volume", "always", open_because, open_up_to_kg)


def charge(lowest, highest, of="largest circuit"):
    """Return a charge between two figures."""
    return CircuitCharge(lowest, 0.5 * (lowest + highest), highest, of)


UNKNOWN_CHARGE = CircuitCharge(None, None, None, "", "`charge` in [plant]")


@pytest.mark.parametrize(
    ("lowest", "highest", "word"),
    [
        (8.0, 9.999, "below the limit"),
        (8.0, 10.0, "below the limit"),
        (8.0, 10.001, "unknown"),
        (10.0, 12.0, "unknown"),
        (10.001, 12.0, "above the limit"),
    ],
)
def test_the_whole_range_has_to_lie_on_one_side(lowest, highest, word):
    """A limit of 10 kg within the range of the charge decides nothing."""
    found, missing = against_limit(limit(10.0), charge(lowest, highest))

    assert found == word
    assert bool(missing) == (word == "unknown")


def test_an_unknown_charge_or_limit_is_unknown():
    """Each says what is missing."""
    assert against_limit(limit(10.0), UNKNOWN_CHARGE) == ("unknown", ("`charge` in [plant]",))
    assert against_limit(limit(None), charge(1.0, 2.0)) == ("unknown", ("`volume` in [room]",))


def test_the_whole_plant_above_a_limit_is_unknown_and_below_it_is_below():
    """No circuit holds more than the plant, but one may hold less."""
    above, missing = against_limit(limit(10.0), charge(11.0, 12.0, "whole plant"))

    assert above == "unknown"
    assert "`largest_circuit`" in missing[0]
    assert against_limit(limit(10.0), charge(8.0, 9.0, "whole plant"))[0] == "below the limit"


def test_an_open_limit_is_not_exceeded_while_it_is_open():
    """Up to where the standard may allow more nothing is said; beyond that it is above."""
    some, any_ = limit(10.0, open_because="sealed?", open_up_to_kg=20.0), limit(10.0, open_because="exceptions")

    assert against_limit(some, charge(11.0, 12.0)) == ("unknown", ("sealed?",))
    assert against_limit(some, charge(20.1, 22.0))[0] == "above the limit"
    assert against_limit(any_, charge(1e6, 1e6)) == ("unknown", ("exceptions",))
    assert against_limit(any_, charge(8.0, 9.0))[0] == "below the limit"


def test_two_candidates_of_one_limit_have_to_agree():
    """Below both is below, above both is above, between them is unknown, and why is said."""
    both = (limit(4.9), limit(7.5))
    words = {kg: room_verdict(both, ("ASHRAE 15",), charge(kg, kg), is_code_stated=True) for kg in (4.8, 6.0, 7.6)}

    assert [word for word, _ in words.values()] == ["below the limit", "unknown", "above the limit"]
    assert "two figures" in words[6.0][1][0]


@pytest.mark.parametrize(
    ("toxicity", "flammability", "word"),
    [
        (20.0, 20.0, "below the limit"),
        (5.0, 20.0, "above the limit"),
        (20.0, 5.0, "above the limit"),
        (None, 20.0, "unknown"),
        (None, 5.0, "above the limit"),
        (None, None, "unknown"),
    ],
)
def test_the_strictest_method_of_a_family_decides(toxicity, flammability, word):
    """Above one limit is above, whatever else is missing; below needs every one of them."""
    limits = [
        limit(kg, method=method, family="EN 378")
        for kg, method in ((toxicity, "toxicity"), (flammability, "flammability"))
    ]

    assert room_verdict(limits, ("EN 378",), charge(10.0, 10.0), is_code_stated=True)[0] == word


@pytest.mark.parametrize(
    ("american", "european", "stated", "not_stated"),
    [
        (20.0, 20.0, "below the limit", "below the limit"),
        (5.0, 20.0, "above the limit", "unknown"),
        (20.0, 5.0, "above the limit", "unknown"),
        (5.0, 5.0, "above the limit", "above the limit"),
        (None, 20.0, "unknown", "unknown"),
        (None, 5.0, "above the limit", "unknown"),
    ],
)
def test_both_families_count_if_chosen_and_have_to_agree_if_not(american, european, stated, not_stated):
    """A case that chooses no code is told so wherever the code makes the difference."""
    limits = [limit(american), limit(european, family="EN 378")]
    words = [
        room_verdict(limits, FAMILIES["both"], charge(10.0, 10.0), is_code_stated=is_stated)
        for is_stated in (True, False)
    ]

    assert [word for word, _ in words] == [stated, not_stated]
    assert ("`code` in [law]" in words[1][1]) == (not_stated == "unknown")


def test_what_is_only_shown_decides_nothing():
    """Alternatives and product standards stand beside the limits."""
    limits = [
        limit(20.0),
        limit(1.0, method="other", role="alternative"),
        limit(1.0, method="x", role="product standard"),
    ]

    assert room_verdict(limits, ("ASHRAE 15",), charge(10.0, 10.0), is_code_stated=True)[0] == "below the limit"
    assert room_verdict(limits[1:], ("ASHRAE 15",), charge(0.1, 0.1), is_code_stated=True)[0] == "unknown"


@pytest.fixture(scope="module")
def results(case_of):
    """Return a function that assesses R134a against A1, A2L and A3 in a room, solved once."""
    plant = {"oil": "polyol ester", "high_side_limit": "28 bar g", "evaporator": "direct expansion"}
    duty = {"evaporating": "-5 degC", "condensing": "40 degC", "subcooling": "3 K"}
    solved = compare(case_of("R134a", ["R513A", "R1234yf", "R600a", "R454B"], plant=plant, duty=duty))

    def in_room(code="both", charge_kg=100.0, machinery=None, has_room=True, **changes):
        keys = {key: value for key, value in {**ROOM, **changes}.items() if value is not None}
        case = replace(
            solved.case,
            plant=solved.case.plant.model_copy(update={"charge_kg": charge_kg}),
            room=Room.model_validate(keys) if has_room else None,
            machinery_room=None if machinery is None else MachineryRoom.model_validate(machinery),
            law=Law.model_validate({} if code is None else {"code": code}),
        )
        return assess(replace(solved, case=case))

    return in_room


def levels(entry, code):
    """Return the levels of the findings with a code."""
    return [finding.level for finding in entry.findings if finding.code == code]


def test_the_charge_is_that_of_the_largest_circuit(results):
    """Today's is as given; a candidate's follows the densities, R513A some 6 % below R134a, with a tenth each way."""
    entries = results().entries

    assert (entries[0].room.lowest_kg, entries[0].room.highest_kg) == (10.0, 10.0)
    # R513A is 44 % R134a and 56 % R1234yf by mass; volumes of the liquids at 37 degC added up, within 2 % for excess
    rho_134a, rho_1234yf = (PropsSI("D", "T", 310.15, "Q", 0, name) for name in ("R134a", "R1234yf"))
    rho_513a = 1.0 / (0.44 / rho_134a + 0.56 / rho_1234yf)
    assert entries[1].room.expected_kg == pytest.approx(10.0 * rho_513a / rho_134a, rel=0.02)
    assert entries[1].room.lowest_kg == pytest.approx(0.9 * entries[1].room.expected_kg)
    assert entries[1].room.highest_kg == pytest.approx(1.1 * entries[1].room.expected_kg)
    assert {entry.room.charge_of for entry in entries} == {"largest circuit"}


def test_a_charge_below_every_limit_is_below_and_no_stop(results):
    """100 m3 take 32 kg of R513A by its RCL and its toxicity; 10 kg or so are below, with a note on memory."""
    candidate = results().candidates[0]

    assert candidate.room.verdict == "below the limit"
    assert candidate.room.margin_kg == pytest.approx(candidate.room.deciding.limit_kg - candidate.room.highest_kg)
    assert levels(candidate, "room-charge") == []
    assert levels(candidate, "room-limit-doubtful") == ["note"]


def test_a_charge_above_a_limit_is_a_stop_for_a_candidate(results):
    """20 m3 take 6.4 kg of R513A: 9.4 kg are above, in both families."""
    candidate = results(volume="20 m3", area=None).candidates[0]
    (finding,) = [item for item in candidate.findings if item.code == "room-charge"]

    assert (candidate.room.verdict, finding.level) == ("above the limit", "stop")
    assert "6.38 kg" in finding.fact
    assert candidate.room.margin_kg < 0.0
    assert candidate.verdict == Verdict.NOT_SUITABLE


def test_a_charge_above_a_limit_today_is_work_to_clear_up(results):
    """The plant stands there already: what it was approved under has to be asked."""
    existing = results(volume="20 m3", area=None).existing

    assert existing.room.verdict == "above the limit"
    assert levels(existing, "room-charge") == ["work"]


@pytest.mark.parametrize("key", ["volume", "occupancy", "location"])
def test_a_missing_input_of_the_room_is_unknown_and_named(results, key):
    """The candidate cannot be judged, and the finding names the key."""
    candidate = results(**{key: None}).candidates[0]
    (finding,) = [item for item in candidate.findings if item.code == "room-charge"]

    assert (candidate.room.verdict, finding.level) == ("unknown", "unknown")
    assert f"`{key}` in [room]" in finding.fact
    assert not candidate.verdict.is_positive


def test_a_charge_nobody_knows_is_unknown(results):
    """Without the charge of plant and circuit nothing stands against the limit."""
    candidate = results(charge_kg=None, largest_circuit=None).candidates[0]

    assert candidate.room.verdict == "unknown"
    assert (candidate.room.expected_kg, candidate.room.margin_kg) == (None, None)
    assert "`largest_circuit` in [room], or `charge` in [plant]" in candidate.room.unknown_because


def test_without_a_room_every_option_is_asked(results):
    """Charge against room is decisive for each, class A1 and today's among them; a flammable one says that it is."""
    result = results(has_room=False)

    assert {entry.room.verdict for entry in result.entries} == {"unknown"}
    assert [levels(entry, "room-charge") for entry in result.entries] == [["unknown"]] * 5
    (finding,) = [item for item in result.candidates[1].findings if item.code == "room-charge"]
    assert "flammable" in finding.fact
    assert "[room]" in finding.fact
    assert {"room.volume", "room.location"} <= set(finding.missing)


def test_an_unresolved_rcl_is_unknown_between_its_figures(results):
    """R454B, 49 and 75 g/m3 in 100 m3: 4.9 and 7.5 kg. Some 9 kg of it are above both, some 6 kg between them."""
    above, between = (results("ASHRAE 15", largest_circuit=circuit).candidates[3] for circuit in ("12 kg", "7.3 kg"))

    assert 4.9 < between.room.lowest_kg < between.room.highest_kg < 7.5
    assert (above.room.verdict, between.room.verdict) == ("above the limit", "unknown")
    assert len([item for item in between.room.limits if item.method == "rcl"]) == 2
    assert "contradict" in " ".join(between.room.unknown_because)


def test_the_code_chosen_decides_which_limits_are_shown(results):
    """One family alone, or both; none chosen shows both and says so where it matters."""
    families = {
        code: {item.code_family for item in results(code).candidates[1].room.limits} for code in FAMILIES if code
    }
    none = results(None).candidates[1].room

    assert families == {
        "ASHRAE 15": {"ASHRAE 15"},
        "EN 378": {"EN 378"},
        "ISO 5149": {"ISO 5149"},
        "both": {"ASHRAE 15", "EN 378"},
    }
    assert none.code == ""
    assert {item.code_family for item in none.limits} == {"ASHRAE 15", "EN 378"}


def test_change_of_class_and_lists_go_with_every_candidate(results):
    """Today's refrigerant has no step; each candidate has its step, and each entry the lists of its class."""
    result = results()

    assert result.existing.room.change is None
    assert [entry.room.change.level for entry in result.candidates] == ["", "stop", "stop", "stop"]
    assert all(entry.room.lists and entry.room.questions for entry in result.entries)


def test_a_step_between_flammable_refrigerants_is_work(case_of):
    """From R1234yf to R1234ze(E) both burn: not a stop by class, but work with reasons; the room is asked anew."""
    result = assess(compare(case_of("R1234yf", ["R1234ze(E)"])))
    (candidate,) = result.candidates
    assert (levels(result.existing, "room-charge"), levels(candidate, "room-charge")) == (["unknown"], ["unknown"])
    (finding,) = [item for item in candidate.findings if item.code == "class-change"]

    assert finding.level == "work"
    assert "approval is for a refrigerant" in finding.advice
    assert "licensed practice" in finding.advice


def test_the_machinery_room_is_asked_where_there_is_one_or_may_have_to_be(results):
    """With the table, at location III, or above a limit; else not."""
    assert results().candidates[0].room.machinery_room == ()
    assert results(machinery={}).candidates[0].room.machinery_room
    assert results(location="III").candidates[0].room.machinery_room
    assert results(volume="20 m3", area=None).candidates[0].room.machinery_room


def test_comfort_use_asks_for_the_floor_area_of_the_charge(results):
    """The number is in square metres, and the area rule turned round."""
    room = results(comfort=True, mounting="ceiling").candidates[1].room
    (area,) = [item for item in room.questions if item.topic == "floor area"]

    # 2.5 · 0.289^(5/4) · 2.2 with 0.289^(1/4) = 0.73320: 1.16541 kg for the square root of each m2
    assert area.value == pytest.approx((room.highest_kg / 1.16541) ** 2, rel=1e-4)
    assert area.kind == "area"


@pytest.mark.parametrize("missing", list(combinations(ROOM, 2)))
def test_less_data_never_turns_a_verdict_good(results, missing):
    """Leaving out any two inputs never makes a charge above or unknown into one below."""
    whole = {
        entry.refrigerant.designation: entry.room.verdict for entry in results(volume="20 m3", area="8 m2").entries
    }
    keys = {"volume": "20 m3", "area": "8 m2", **dict.fromkeys(missing)}

    for entry in results(**keys).entries:
        before = whole[entry.refrigerant.designation]
        assert entry.room.verdict in ("unknown", before)


def test_a_room_check_is_plain_data(results):
    """It can be written as JSON as it stands, and no word of it approves."""
    for entry in results(machinery={}).entries:
        text = json.dumps(asdict(entry.room), allow_nan=False)

        assert entry.room.verdict in ("below the limit", "above the limit", "unknown")
        assert not [word for word in ("is safe", "certified", "complies") if word in text]


@pytest.mark.parametrize(
    ("jurisdiction", "words"), [("EU", "EN 378-4"), ("US", "SNAP"), (None, "`jurisdiction` in [law]")]
)
def test_the_stop_on_a_class_says_what_the_place_asks(results, jurisdiction, words):
    """A2L in place of A1: the whole system, owner and authority, name plate, and the rows of the jurisdiction."""
    law = {} if jurisdiction is None else {"jurisdiction": jurisdiction}
    before = results()
    case = replace(before.case, law=Law.model_validate(law))
    candidate = assess(replace(before, case=case)).candidates[1]
    (stop,) = [item for item in candidate.findings if item.code == "safety-class"]

    assert stop.level == "stop"
    assert all(part in stop.advice for part in ("whole system", "owner and authority", "nameplate", words))


@pytest.mark.parametrize(("jurisdiction", "family"), [("EU", "EN 378"), ("GB", "EN 378"), ("US", "ASHRAE 15")])
def test_a_jurisdiction_takes_its_usual_rules_where_no_code_is_given(results, jurisdiction, family):
    """EN 378 in Europe, ASHRAE 15 in the US; nothing is asked for the code then."""
    before = results(None)
    case = replace(before.case, law=Law.model_validate({"jurisdiction": jurisdiction}))
    room = assess(replace(before, case=case)).candidates[0].room

    assert room.code == family
    assert {limit.code_family for limit in room.limits if limit.role == "limit"} == {family}


@pytest.mark.parametrize("location", ["II", "III"])
def test_conditions_are_work_for_a_candidate(results, location):
    """R513A with few people or in a machinery room: no limit by EN 378, and what holds instead has to be shown."""
    candidate = results("EN 378", access="c", location=location).candidates[0]
    (finding,) = [item for item in candidate.findings if item.code == "room-conditions"]

    assert (candidate.room.verdict, finding.level) == ("under conditions", "work")
    assert candidate.room.conditions
    assert (candidate.room.deciding, candidate.room.margin_kg) == (None, None)
    assert levels(candidate, "room-charge") == []


def test_keys_that_settle_an_open_limit_are_named(results):
    """100 kg of R513A in 100 m3, access c, and nobody says whether there are exits: that key settles it."""
    (candidate, *_) = results(
        "EN 378", access="c", location="I", emergency_exits=None, largest_circuit="100 kg"
    ).candidates
    (finding,) = [item for item in candidate.findings if item.code == "room-charge"]

    assert finding.level == "unknown"
    assert "room.emergency_exits" in finding.missing


def test_conditions_stand_only_where_no_rule_of_the_family_limits(results):
    """R1234yf with nobody saying how many people: toxicity sets no limit, the LFL does, so nothing stands instead."""
    open_, few = (
        results("EN 378", access="c", volume="20 m3", people=people).candidates[1].room for people in (None, 2)
    )

    assert (open_.verdict, open_.unlimited, open_.conditions) == ("unknown", (), ())
    assert (few.verdict, few.unlimited) == ("under conditions", ("EN 378",))
    assert few.conditions
