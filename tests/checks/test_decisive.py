"""Decisive facts: what is missing or not computed never reads as permission, and each names what settles it."""

import datetime

import pytest

from retrofit.checks import advice, answer, assess
from retrofit.checks.changeover import chosen_for_cards
from retrofit.checks.prospects import prospects, ranked
from retrofit.study import Family, RestState, Verdict, compare
from retrofit.study.life import with_life
from retrofit.units import SI

KELVIN = 273.15
DAY = datetime.date(2026, 12, 1)
# Every decisive fact of an ordinary plant; all invented.
COMPLETE = {
    "plant": {
        "charge": "120 kg",
        "oil": "polyol ester",
        "evaporator": "direct expansion",
        "high_side_limit": "28 bar g",
        "low_side_limit": "19 bar g",
        "relief_setting": "28 bar g",
        "highest_ambient": "35 degC",
    },
    "duty": {"line_superheat": "5 K", "subcooling": "3 K"},
    "condenser": {"medium": "air", "inlet": "32 degC", "outlet": "38 degC", "arrangement": "crossflow"},
    "evaporator": {"medium": "air", "inlet": "2 degC", "outlet": "-3 degC", "arrangement": "crossflow"},
    "room": {"volume": "6000 m3", "location": "II", "access": "a", "occupancy": "other", "comfort": False},
    "law": {
        "jurisdiction": "EU",
        "date_of_change": "2027-04-01",
        "remaining_life": "8 years",
        "equipment": "supermarket",
        "hermetically_sealed": False,
        "leak_detection_system": True,
        "product_below_minus_50": False,
        "annual_leak_rate": "5 %",
        "code": "EN 378",
    },
}


@pytest.fixture(scope="module")
def judged(case_with):
    """Return a function that gives the assessed comparison of the complete plant, keys changed or taken away."""

    def make(existing="R404A", candidates=("R448A",), *, without=(), **tables):
        laid = {name: {**COMPLETE.get(name, {}), **tables.get(name, {})} for name in {*COMPLETE, *tables}}
        for key in without:
            table, _, name = key.partition(".")
            if name:
                laid[table][name] = None
            else:
                del laid[table]
        return assess(compare(case_with(existing, candidates, **laid)), DAY)

    return make


def entry_of(result, name):
    """Return an entry by its designation."""
    return next(entry for entry in result.entries if entry.refrigerant.designation == name)


def test_with_every_decisive_fact_both_keeping_and_converting_are_in_favour(judged):
    """The complete plant, so that the tests below take something away from a good answer."""
    assert [entry.verdict.is_positive for entry in judged().entries] == [True, True]


@pytest.mark.parametrize(
    ("without", "settled_by"),
    [
        ("plant.high_side_limit", "plant.high_side_limit"),
        ("plant.low_side_limit", "plant.low_side_limit"),
        ("plant.relief_setting", "plant.relief_setting"),
        ("plant.highest_ambient", "plant.highest_ambient"),
        ("condenser.inlet", "condenser.inlet"),
        ("room", "room.volume"),
        ("room.volume", None),
        ("law", "law.jurisdiction"),
        ("law.jurisdiction", "law.jurisdiction"),
    ],
)
def test_a_decisive_fact_left_out_leaves_every_option_open_and_names_its_key(judged, without, settled_by):
    """Pressure rating, standstill, hottest day, room and law: without any of them nothing is in favour."""
    # An exchanger is given whole or not at all, and the balance needs both.
    result = judged(without=("condenser", "evaporator") if without == "condenser.inlet" else (without,))

    for entry in result.entries:
        assert entry.verdict == Verdict.OPEN
        assert entry.open_facts
        if settled_by:
            assert settled_by in {key for finding in entry.open_facts for key in finding.missing}
    told = answer(result, SI).matters[0]
    assert told.about == "Decisive facts missing"
    if settled_by:
        assert settled_by in told.text


# What does not condense, or whose pressure at rest is above any rating here. Critical temperatures: R-744 31.0 degC,
# R-23 26.1 degC, R-1123 58.6 degC (bubble pressure at 40 degC about 32 bar, above 28 bar g): tables of their makers'
# equations in the property library; R-473A has no model.
HIGH_PRESSURE = ["R744", "R23", "R472A", "R473A", "R1123"]


@pytest.mark.parametrize("name", HIGH_PRESSURE)
def test_what_the_plant_cannot_hold_is_stopped_whether_or_not_it_is_computed(judged, name):
    """At 40 degC ambient and a nameplate of 28 bar g: stopped, a new plant by family, and in no list of choices."""
    result = judged(candidates=("R448A", name), plant={"highest_ambient": "40 degC"})
    entry = entry_of(result, name)
    told = advice(result, SI)

    assert entry.verdict == Verdict.NOT_SUITABLE
    assert entry.family == Family.REPLACE
    assert {"standstill", "pressure-class"} & {finding.code for finding in entry.stops}
    assert name not in {item.entry.refrigerant.designation for item in told.weighed}
    assert name in {item.entry.refrigerant.designation for item in told.stopped}
    assert name not in {item.refrigerant.designation for item in chosen_for_cards(result).entries}


def test_the_pressure_at_rest_is_compared_where_the_cycle_cannot_be_solved(judged):
    """R-32 in a plant condensing at 78 degC: at its critical point no cycle is solved, yet the rating is compared.

    Its bubble pressure at 50 degC is 31.4 bar (ASHRAE Handbook table, remembered), 30.4 bar gauge, above 28 bar gauge.
    """
    hot = {"condensing": "78 degC"}
    result = judged(
        "R134a", ("R32",), duty=hot, plant={"highest_ambient": "50 degC"}, without=("condenser", "evaporator")
    )
    entry = entry_of(result, "R32")

    assert not entry.is_computed
    assert entry.at_rest.state == RestState.COMPUTED
    assert entry.at_rest.p_Pa == pytest.approx(31.4e5, rel=0.01)
    assert "standstill" in {finding.code for finding in entry.stops}
    assert {"high-side", "relief", "standstill"} <= {row.code for row in entry.hardware}


def test_todays_refrigerant_above_its_critical_temperature_is_open_not_stopped(judged):
    """A plant with R-23 holds it at rest by volume and charge; whether it does is not known here."""
    result = judged(
        "R23",
        ("R508B",),
        duty={"evaporating": "-75 degC", "condensing": "-15 degC", "line_superheat": "5 K"},
        without=("condenser", "evaporator"),
    )

    assert result.existing.verdict == Verdict.OPEN
    assert result.existing.at_rest.state == RestState.ABOVE_CRITICAL
    assert entry_of(result, "R508B").family == Family.CONVERT  # that plant is built for such pressures
    assert entry_of(result, "R508B").verdict == Verdict.NOT_SUITABLE


# A new plant


NEW = {"new_plant": [100_000, 120_000, 150_000], "charge": "60 kg", "largest_circuit": "6 kg"}
MONEY = {"currency": "EUR", "tariff": 0.2, "discount_rate": "6 %"}


def test_a_new_plant_is_judged_by_nothing_of_the_old_machine(judged):
    """A flammable refrigerant with a new plant described: no stop of class, pressures or components of the old one."""
    bare = entry_of(judged(candidates=("R454C",)), "R454C")
    new = entry_of(judged(candidates=("R454C",), options={"R454C": NEW}), "R454C")

    assert "safety-class" in {finding.code for finding in bare.stops}
    assert new.is_new_plant
    assert new.family == Family.REPLACE
    assert new.stops == ()
    assert (new.compressor, new.plant, new.hardware_numbers, new.hardware) == (None, None, None, ())
    assert not {"safety-class", "high-side", "pressure-ratio", "capacity", "oil"} & {item.code for item in new.findings}
    assert new.duty is not None  # it is compared at the same duty


def test_room_and_tewi_of_a_new_plant_go_by_its_own_charge(judged):
    """60 kg and 6 kg in a circuit as given, not the 120 kg of today times a ratio of densities."""
    result = with_life(judged(candidates=("R454C",), options={"R454C": NEW}, money=MONEY), draws=0)
    new = entry_of(result, "R454C")

    assert new.room.highest_kg == pytest.approx(6.0)
    assert result.life.accounts.options["R454C"].plan.charge_kg.base == pytest.approx(60.0)


def test_a_new_plant_without_its_charge_is_open_and_names_the_key(judged):
    """The charge of the existing plant is never borrowed."""
    new = entry_of(judged(candidates=("R454C",), options={"R454C": {"new_plant": 100_000}}), "R454C")

    assert new.verdict == Verdict.OPEN
    assert new.room.highest_kg is None
    assert "options.R454C.charge" in {key for finding in new.open_facts for key in finding.missing}


def test_where_every_conversion_is_stopped_keep_and_replace_are_what_is_left(judged):
    """Both are ranked, and the answer names them."""
    result = judged(candidates=("R290", "R454C"), options={"R454C": NEW}, money=MONEY)
    alive = with_life(result, draws=0)

    assert "No conversion passes the checks. What is left: keeping R404A or a new plant for R454C." in (
        answer(result, SI).headline
    )
    assert set(ranked(alive).scores.names) == {"R404A", "R454C"}


def test_a_new_plant_whose_cycle_is_not_computed_is_not_priced(judged):
    """R-744 beyond its critical point is not computed here, whatever price the case gives for the plant."""
    result = with_life(judged(candidates=("R744",), options={"R744": NEW}, money=MONEY), draws=0)
    new = entry_of(result, "R744")

    assert new.verdict == Verdict.OPEN
    assert "R744" not in result.life.accounts.options
    assert "R744" not in {option.entry.refrigerant.designation for option in prospects(result)}
    assert "R744" not in ranked(result).scores.names


# Keeping


def test_a_service_ban_on_todays_gas_is_said_beside_a_first_place_of_keeping(judged):
    """R-404A in the EU: service with new gas above GWP 2500 is banned (Regulation (EU) 2024/573, Art. 13)."""
    from retrofit.checks.outlook import ranking_words

    result = with_life(judged(candidates=("R290",)), draws=0)
    keep = result.existing
    words = " ".join(ranking_words(result, ranked(result)))

    assert "law-ban" in {finding.code for finding in keep.findings}
    assert "Only keeping R404A can be ranked." in words
    assert "But keeping R404A: " in words


def test_the_untouched_template_says_that_its_values_are_placeholders(tmp_path):
    """Whatever `retrofit new` writes is no plant: nothing in it is in favour, and the answer says why."""
    from retrofit.case import new_case_text, read_case

    path = tmp_path / "plant.toml"
    path.write_text(new_case_text(), encoding="utf-8")
    result = assess(compare(read_case(path)), DAY)

    assert all(entry.findings[0].code == "placeholders" or entry.stops for entry in result.entries)
    assert not any(entry.verdict.is_positive for entry in result.entries)
    assert "the values are placeholders" in answer(result, SI).matters[0].text
