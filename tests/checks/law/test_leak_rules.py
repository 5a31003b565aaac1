"""Leak checks, detection and leak rates on both sides of each threshold and date.

Figures: Regulation (EU) 2024/573, Art. 5 and 6 (steps by t CO2e and kg; the lowest steps and Art. 6 from memory);
40 CFR 82.157 and 84.106 (15 lb, 50 lb, GWP 53; 20, 30 and 10 % a year). GWP of R134a 1430: annex I of the regulation,
and 42 USC 7675.
"""

import pytest

from retrofit.study.law import Reason, Why
from retrofit.study.law_words import line

KG_PER_LB = 0.45359237  # NIST SP 811 (2008), exact
HFC_GWP = 1430.0


def hfc_kg(t_co2e):
    """Return the mass of R134a that weighs so much. [kg]"""
    return t_co2e * 1000.0 / HFC_GWP


@pytest.mark.parametrize(
    ("t_co2e", "months"),
    [(4.99, None), (5.0, 12), (49.99, 12), (50.0, 6), (499.9, 6), (500.0, 3), (5000.0, 3)],
)
def test_steps_of_the_eu_by_weight_in_co2(law_of, t_co2e, months):
    """Under 5 t no check; from 5 t yearly, from 50 t half-yearly, from 500 t quarterly; detection doubles each."""
    plain = law_of("R134a", hfc_kg(t_co2e))
    detected = law_of("R134a", hfc_kg(t_co2e), leak_detection_system=True)

    assert plain.leak_check_months == months
    assert detected.leak_check_months == (None if months is None else 2 * months)


@pytest.mark.parametrize(("kg", "months"), [(0.99, None), (1.0, 12), (9.99, 12), (10.0, 6), (99.9, 6), (100.0, 3)])
def test_steps_of_the_eu_by_mass_for_unsaturated_gases(law_of, kg, months):
    """R1234ze(E) goes by 1, 10 and 100 kg, whatever its GWP; detection doubles the time."""
    assert law_of("R1234ze(E)", kg).leak_check_months == months
    detected = law_of("R1234ze(E)", kg, leak_detection_system=True).leak_check_months
    assert detected == (None if months is None else 2 * months)


@pytest.mark.parametrize(
    ("name", "kg", "equipment", "months"),
    [
        ("R134a", hfc_kg(9.99), "stand-alone cabinet", None),
        ("R134a", hfc_kg(10.0), "stand-alone cabinet", 12),
        ("R1234yf", 1.99, "stand-alone cabinet", None),
        ("R1234yf", 2.0, "stand-alone cabinet", 12),
        ("R404A", 2.99, "stand-alone cabinet", 12),
        ("R404A", 3.0, "residential heat pump", 12),
        ("R1234yf", 3.0, "residential heat pump", 12),
    ],
)
def test_sealed_equipment_is_checked_from_a_higher_step(law_of, name, kg, equipment, months):
    """Hermetically sealed and labelled so: from 10 t CO2e or 2 kg; half-yearly steps stay."""
    assert law_of(name, kg, equipment=equipment, hermetically_sealed=True).leak_check_months == months
    assert law_of("R134a", hfc_kg(50.0), equipment=equipment, hermetically_sealed=True).leak_check_months == 6


@pytest.mark.parametrize(
    ("name", "kg", "state"),
    [
        ("R404A", 2.99, "depends"),  # 11.7 t: no check in a residential building, a check elsewhere
        ("R1234yf", 2.99, "depends"),
        ("R404A", 3.0, "applies"),  # 11.8 t and 3 kg: neither exemption reaches
        ("R134a", 5.0, "depends"),  # 7.2 t and 5 kg: the two readings of the third subparagraph part here
        ("R134a", 2.9, None),  # 4.1 t
    ],
)
def test_sealed_equipment_in_homes_states_both_readings(law_of, name, kg, state):
    """Art. 5(1), third subparagraph: under 3 kg in residential buildings; beside the 10 t CO2e or in place of them."""
    check = law_of(name, kg, equipment="residential heat pump", hermetically_sealed=True)
    rows = check.rows_on("leak check")

    assert [row.state.value for row in rows] == ([state] if state else [])
    assert all(row.reasons[0].why == Why.CONDITION for row in rows if state == "depends")


def test_the_worked_example(law_of, in_force):
    """260 kg x 3922 = 1020 t: quarterly, detection compulsory; 278 kg of R448A x 1386 = 385 t: half-yearly, none."""
    before, after = law_of("R404A", 260.0), law_of("R448A", 278.0)

    assert before.co2e_t["gwp_eu_2024_573"][1] == pytest.approx(1020.0, abs=0.5)
    # 1387 by AR4 values for the unsaturated parts makes 386 t; the regulation's own make 1386.0 and 385.3 t.
    assert after.co2e_t["gwp_eu_2024_573"][1] == pytest.approx(386.0, abs=1.0)
    assert (before.leak_check_months, after.leak_check_months) == (3, 6)
    assert in_force(before, "leak detection")
    assert not in_force(after, "leak detection")


@pytest.mark.parametrize(
    ("name", "kg", "compulsory"),
    [("R134a", hfc_kg(499.9), False), ("R134a", hfc_kg(500.0), True), ("R1234yf", 99.9, False), ("R1234yf", 100, True)],
)
def test_detection_in_the_eu(law_of, in_force, name, kg, compulsory):
    """A leak detection system is compulsory from 500 t CO2e, or 100 kg of unsaturated gases."""
    assert bool(in_force(law_of(name, kg), "leak detection")) == compulsory


@pytest.mark.parametrize(("kg", "months"), [(34.3, None), (34.4, 12), (343.0, 12), (344.0, 6)])
def test_a_blend_with_an_hfc_goes_by_its_weight_in_co2_alone(law_of, kg, months):
    """Art. 3(4): a mixture with an HFC is an HFC. R454C: 0.215 x 675 + 0.785 x 0.501 = 145.5, so 5 t are 34.36 kg."""
    check = law_of("R454C", kg)

    assert check.leak_check_months == months
    assert {item.measure for row in check.rows_on("leak check") for item in row.measured} <= {"t CO2e"}


@pytest.mark.parametrize(
    ("on", "table"), [("2024-03-10", "eu-517-2014.toml"), ("2024-03-11", "eu-2024-573.toml"), ("2014-12-31", None)]
)
def test_the_regulation_changes_over_on_its_day(law_of, in_force, on, table):
    """Up to 10 March 2024 the old regulation speaks, from the day the new one is in force that one alone."""
    rows = in_force(law_of("R404A", 260.0, on=on), "leak check")

    assert {row.table for row in rows} == ({table} if table else set())


@pytest.mark.parametrize(("kg", "months"), [(2.99, None), (3.0, 12), (29.9, 12), (30.0, 6), (299.0, 6), (300.0, 3)])
def test_steps_for_ozone_depleting_gases(law_of, kg, months):
    """R22 in the EU goes by 3, 30 and 300 kg (Regulation (EU) 2024/590, Art. 21(3)); detection does not lengthen it."""
    check = law_of("R22", kg, leak_detection_system=True)

    assert check.leak_check_months == months
    assert all(row.is_verified for row in check.rows_on("leak check"))


@pytest.mark.parametrize(("kg", "months"), [(5.99, None), (6.0, 12), (30.0, 6)])
def test_sealed_equipment_with_ozone_depleting_gas(law_of, kg, months):
    """Sealed, labelled and under 6 kg there is no check; the exemption belongs to the first step only."""
    assert law_of("R22", kg, hermetically_sealed=True).leak_check_months == months


@pytest.mark.parametrize(
    ("name", "lb", "on", "percent"),
    [
        ("R404A", 14.99, "2026-01-01", None),
        ("R404A", 15.0, "2026-01-01", 20),
        ("R404A", 15.0, "2025-12-31", None),
        ("R404A", 5000.0, "2025-12-31", None),
        ("R22", 49.99, "2026-01-01", None),
        ("R22", 50.0, "2026-01-01", 20),
        ("R22", 50.0, "2025-12-31", 20),
        ("R22", 50.0, "2018-12-31", None),
        ("R1234yf", 500.0, "2026-01-01", None),  # GWP 1, not above 53
        ("R744", 500.0, "2026-01-01", None),
        ("R717", 500.0, "2026-01-01", None),
    ],
)
def test_leak_rates_of_the_us_begin_at_their_charge_and_day(law_of, in_force, name, lb, on, percent):
    """15 lb of HFC from 2026, 50 lb of ozone-depleting gases; nothing at a GWP of 53 or less."""
    check = law_of(name, lb * KG_PER_LB, jurisdiction="US", on=on, date_of_change=None)

    assert [row.value for row in in_force(check, "leak rate") if row.value] == ([percent] if percent else [])


@pytest.mark.parametrize("name", ["R404A", "R22"])
@pytest.mark.parametrize(
    ("equipment", "percent"),
    [
        ("supermarket", 20),
        ("cold store", 20),
        ("condensing unit", 20),
        ("industrial process", 30),
        ("process chiller", 30),
        ("ice rink", 30),
        ("chiller", 10),
        ("air conditioning", 10),
        ("transport", 10),
    ],
)
def test_leak_rates_of_the_us_by_kind(law_of, in_force, name, equipment, percent):
    """20 % for commercial refrigeration, 30 % for industrial process, 10 % for comfort cooling and other."""
    check = law_of(name, 100.0, jurisdiction="US", equipment=equipment)

    assert [row.value for row in in_force(check, "leak rate") if row.value] == [percent]


def test_homes_are_outside_the_newer_leak_rule_of_the_us(law_of):
    """Residential and light commercial air conditioning is not in 40 CFR 84.106, but is in 82.157."""
    newer = law_of("R410A", 100.0, jurisdiction="US", equipment="residential air conditioning")
    older = law_of("R22", 100.0, jurisdiction="US", equipment="residential air conditioning")

    assert not newer.rows_on("leak rate")
    assert [row.value for row in older.rows_on("leak rate") if row.value] == [10]


@pytest.mark.parametrize(
    ("lb", "on", "compulsory"),
    [(1500.0, "2027-01-01", True), (1499.0, "2027-01-01", False), (1500.0, "2026-12-31", False)],
)
def test_detection_in_the_us(law_of, in_force, lb, on, compulsory):
    """From 1500 lb (trade summaries of 40 CFR 84.108); existing equipment from 2027 (from memory)."""
    check = law_of("R404A", lb * KG_PER_LB, jurisdiction="US", on=on)

    assert bool(in_force(check, "leak detection")) == compulsory


def test_a_charge_only_estimated_may_lie_on_both_sides(law_of):
    """Where the estimate straddles a threshold both rows are shown as open, and the stricter one is counted."""
    check = law_of("R134a", (hfc_kg(450.0), hfc_kg(490.0), hfc_kg(530.0)))
    checks = [row for row in check.rows_on("leak check") if row.value]

    assert [(row.value, row.state) for row in checks] == [(6, "depends"), (3, "depends")]
    assert check.leak_check_months == 3
    assert "450 to 530" in line(checks[0])


def test_an_unknown_charge_is_named_and_no_interval_is_given(law_of):
    """Without a charge nothing is said of leak checks but what is missing."""
    check = law_of("R404A", None)

    assert check.leak_check_months is None
    assert Reason(Why.NO_CHARGE, ("R404A",), ("plant.charge",)) in check.unknown
    assert {row.state for row in check.rows_on("leak check")} == {"unknown"}


def test_an_unknown_gwp_is_named(law_of):
    """R401A holds R152a beside HCFC: the regulation's basis gives no figure, so its steps are unknown, not absent."""
    check = law_of("R401A", 100.0)
    by_weight = [row for row in check.rows_on("leak check") if row.gwp_basis == "gwp_eu_2024_573"]

    assert check.leak_check_months is None
    assert by_weight
    assert {row.state for row in by_weight} == {"unknown"}
    assert any(reason.why == Why.NO_GWP for reason in check.unknown)


def test_an_unknown_kind_of_equipment_is_named(law_of):
    """Rows for some kinds only are unknown while the kind is not stated."""
    check = law_of("R404A", 260.0, jurisdiction="US", equipment=None)

    assert {row.state for row in check.rows_on("leak rate") if row.value} == {"unknown"}
    assert any(reason.keys == ("law.equipment",) for reason in check.unknown)
