"""Service bans, limits for new equipment and changes of refrigerant: dates, thresholds and exceptions.

Dates and figures: Regulation (EU) 2024/573, Art. 13 and annexes IV and VII; 40 CFR 84.54; the dates 2026 and 2032 of
Art. 13 from memory, as their rows say. GWP of R404A 3922, R448A 1386, R410A 2088, R513A 629 (annex I arithmetic).
"""

import pytest

BAN = "service ban"


def ids(rows):
    """Return the names of rows."""
    return {row.id for row in rows}


@pytest.mark.parametrize(
    ("kg", "on", "expected"),
    [
        # Old rule: at 40 t CO2e or more, about 10.2 kg of R404A.
        (10.19, "2019-12-31", set()),
        (10.21, "2019-12-31", set()),
        (10.19, "2020-01-01", set()),
        (10.21, "2020-01-01", {"eu-517-ban"}),
        (10.21, "2024-12-31", {"eu-ban-2500-40t"}),
        (10.19, "2024-12-31", set()),
        # From 2025 whatever the charge; reclaimed gas too from 2030.
        (0.5, "2025-01-01", {"eu-ban-2500-refrigeration"}),
        (0.5, "2029-12-31", {"eu-ban-2500-refrigeration"}),
        (0.5, "2030-01-01", {"eu-ban-2500-refrigeration", "eu-ban-2500-refrigeration-reclaimed"}),
        (0.5, "2031-12-31", {"eu-ban-2500-refrigeration", "eu-ban-2500-refrigeration-reclaimed"}),
    ],
)
def test_the_ban_at_2500_for_refrigeration(law_of, in_force, kg, on, expected):
    """R404A on both sides of each day and of 40 t CO2e."""
    check = law_of("R404A", kg, on=on, date_of_change=None, remaining_life=None)

    assert ids(in_force(check, BAN)) == expected


def test_the_ban_at_2500_spares_cold_products(law_of, in_force):
    """A product below -50 degC is outside the bans, and the row of everybody else says so."""
    assert not in_force(law_of("R404A", 50.0, product_below_minus_50=True), BAN)
    (row, *_) = in_force(law_of("R404A", 50.0), BAN)
    assert "-50 degC" in row.exceptions
    assert "Reclaimed or recycled gas until 1 January 2030" in row.line


@pytest.mark.parametrize(
    ("on", "expected"),
    [
        ("2025-12-31", set()),
        ("2026-01-01", {"eu-ban-2500-air"}),
        ("2031-12-31", {"eu-ban-2500-air"}),
        ("2032-01-01", {"eu-ban-2500-air", "eu-ban-2500-air-reclaimed"}),
    ],
)
def test_the_ban_at_2500_for_air_conditioning(law_of, in_force, on, expected):
    """R422D (2729) in air conditioning: 2026 for new gas, 2032 for reclaimed; R410A (2088) is under the threshold."""
    assert (
        ids(in_force(law_of("R422D", 5.0, on=on, equipment="air conditioning", date_of_change=None), BAN)) == expected
    )
    assert not in_force(law_of("R410A", 5.0, on=on, equipment="air conditioning", date_of_change=None), BAN)


@pytest.mark.parametrize(
    ("name", "equipment", "on", "is_banned"),
    [
        ("R448A", "supermarket", "2031-12-31", False),
        ("R448A", "supermarket", "2032-01-01", True),
        ("R448A", "chiller", "2032-01-01", False),
        ("R448A", "process chiller", "2032-01-01", False),
        ("R448A", "transport", "2032-01-01", False),
        ("R513A", "supermarket", "2032-01-01", False),
    ],
)
def test_the_ban_at_750(law_of, in_force, name, equipment, on, is_banned):
    """New gas of 750 or more in stationary refrigeration but chillers from 2032; reclaimed gas is left, from memory."""
    rows = [row for row in in_force(law_of(name, 100.0, on=on, equipment=equipment), BAN) if row.id == "eu-ban-750"]

    assert bool(rows) == is_banned
    assert all(row.gas == "new" and row.is_from_memory and "Reclaimed" in row.exceptions for row in rows)


def test_ozone_depleting_gases_in_the_eu(law_of, in_force):
    """R22 could be served with reclaimed gas to the end of 2014 and with none from 2015 (Regulation 1005/2009)."""
    before = in_force(law_of("R22", 50.0, on="2014-12-31", date_of_change=None, remaining_life=None), BAN)
    after = in_force(law_of("R22", 50.0, on="2015-01-01", date_of_change=None, remaining_life=None), BAN)

    assert [row.gas for row in before] == ["new"]
    assert [row.gas for row in after] == ["any"]
    assert ids(in_force(law_of("R12", 50.0), BAN)) == {"eu-ods-cfc"}


def test_reclaimed_gas_in_the_us_from_2029(law_of, in_force):
    """Supermarkets are served with reclaimed HFC from 2029 (trade summaries); process plants are not named."""
    assert not in_force(law_of("R404A", 100.0, on="2028-12-31", jurisdiction="US"), BAN)
    assert in_force(law_of("R404A", 100.0, on="2029-01-01", jurisdiction="US"), BAN)
    assert not in_force(law_of("R404A", 100.0, on="2029-01-01", jurisdiction="US", equipment="industrial process"), BAN)


@pytest.mark.parametrize(
    ("name", "on", "is_ended"),
    [
        ("R404A", "2024-12-31", False),
        ("R404A", "2025-01-01", True),  # above 2200
        ("R407C", "2025-01-01", False),  # 1774
        ("R407C", "2030-01-01", True),  # above 1500
        ("R134a", "2032-12-31", False),  # 1430
        ("R134a", "2033-01-01", True),  # above 750
        ("R513A", "2033-01-01", False),  # 631
    ],
)
def test_sale_of_new_gas_in_california(law_of, in_force, name, on, is_ended):
    """2200 from 2025, 1500 from 2030, 750 from 2033; the rest of the country's tables do not say so."""
    check = law_of(name, 50.0, on=on, jurisdiction="US-CA", date_of_change=None)

    assert bool(in_force(check, "supply")) == is_ended
    assert not in_force(law_of(name, 50.0, on=on, jurisdiction="US", date_of_change=None), "supply")


# Limits for new equipment: name, equipment, cooling, charge, day, and the rows in force then.
NEW_EU = [
    ("R404A", "cold store", "100 kW", 100, "2019-12-31", set()),
    ("R404A", "cold store", "100 kW", 100, "2020-01-01", {"eu-new-2500-hfc"}),
    ("R404A", "cold store", "100 kW", 100, "2025-01-01", {"eu-new-2500-hfc", "eu-new-2500"}),
    ("R448A", "cold store", "100 kW", 100, "2029-12-31", set()),
    ("R448A", "cold store", "100 kW", 100, "2030-01-01", {"eu-new-150-2030"}),
    ("R454C", "cold store", "100 kW", 100, "2030-01-01", set()),  # 146
    ("R448A", "supermarket", "39 kW", 100, "2022-01-01", set()),
    ("R448A", "supermarket", "40 kW", 100, "2022-01-01", {"eu-new-150-multipack"}),
    ("R448A", "supermarket", "40 kW", 100, "2021-12-31", set()),
    ("R134a", "stand-alone cabinet", "1 kW", 0.3, "2024-12-31", set()),
    ("R134a", "stand-alone cabinet", "1 kW", 0.3, "2025-01-01", {"eu-new-150-cabinet"}),
    ("R134a", "chiller", "100 kW", 50, "2026-12-31", set()),
    ("R134a", "chiller", "100 kW", 50, "2027-01-01", {"eu-new-chiller-large"}),
    ("R513A", "chiller", "100 kW", 50, "2027-01-01", set()),
    ("R513A", "chiller", "12 kW", 5, "2027-01-01", {"eu-new-chiller-small"}),
    ("R134a", "chiller", "12 kW", 5, "2027-01-01", {"eu-new-chiller-small"}),
    ("R1234yf", "chiller", "12 kW", 5, "2031-12-31", set()),
    ("R1234yf", "chiller", "12 kW", 5, "2032-01-01", {"eu-new-chiller-small-none"}),
    ("R1234yf", "chiller", "12.1 kW", 5, "2032-01-01", set()),
    ("R410A", "air conditioning", "5 kW", 2.9, "2025-01-01", {"eu-new-split-3kg"}),
    ("R410A", "air conditioning", "5 kW", 3.0, "2025-01-01", set()),
    ("R32", "air conditioning", "5 kW", 2.9, "2025-01-01", set()),  # 675
    ("R32", "heat pump", "12 kW", 3, "2027-01-01", {"eu-new-self-12", "eu-new-split-water"}),
    ("R32", "heat pump", "12 kW", 3, "2029-01-01", {"eu-new-self-12", "eu-new-split-water", "eu-new-split-air"}),
    ("R32", "heat pump", "50 kW", 9, "2027-01-01", {"eu-new-self-50"}),
    ("R32", "heat pump", "51 kW", 9, "2029-12-31", set()),
    ("R32", "heat pump", "51 kW", 9, "2030-01-01", {"eu-new-self-other"}),
    ("R410A", "heat pump", "51 kW", 9, "2029-01-01", {"eu-new-split-large-750"}),
    ("R32", "heat pump", "51 kW", 9, "2033-01-01", {"eu-new-self-other", "eu-new-split-large-150"}),
]
NEW_US = [
    ("R410A", "chiller", "100 kW", 50, "2024-12-31", set()),
    ("R410A", "chiller", "100 kW", 50, "2025-01-01", {"us-new-chiller"}),
    ("R513A", "chiller", "100 kW", 50, "2025-01-01", set()),
    ("R448A", "ice rink", "100 kW", 50, "2025-01-01", {"us-new-rink"}),
    ("R134a", "stand-alone cabinet", "1 kW", 0.3, "2025-01-01", {"us-new-cabinet"}),
    ("R454C", "stand-alone cabinet", "1 kW", 0.3, "2025-01-01", set()),
    # 200 lb are 90.72 kg: from there 150, under it 300. R454A: GWP 239.
    ("R454A", "supermarket", "100 kW", 90.8, "2026-12-31", set()),
    ("R454A", "supermarket", "100 kW", 90.8, "2027-01-01", {"us-new-supermarket-200lb"}),
    ("R454A", "supermarket", "100 kW", 90.6, "2027-01-01", set()),
    ("R448A", "supermarket", "100 kW", 90.6, "2027-01-01", {"us-new-supermarket-small"}),
    ("R448A", "cold store", "100 kW", 90.8, "2026-01-01", {"us-new-cold-store-200lb"}),
    ("R448A", "condensing unit", "100 kW", 20, "2025-12-31", set()),
    ("R448A", "condensing unit", "100 kW", 20, "2026-01-01", {"us-new-condensing-unit-small"}),
    ("R448A", "industrial process", "100 kW", 100, "2026-01-01", {"us-new-process-200lb"}),
    ("R448A", "industrial process", "100 kW", 100, "2028-01-01", {"us-new-process-200lb", "us-new-process-cold"}),
    ("R134a", "process chiller", "100 kW", 100, "2025-12-31", set()),
    ("R134a", "process chiller", "100 kW", 100, "2026-01-01", {"us-new-process-chiller"}),
    ("R448A", "data centre", "100 kW", 100, "2027-01-01", {"us-new-data-centre"}),
    ("R410A", "heat pump", "10 kW", 5, "2026-01-01", {"us-new-vrf"}),
    ("R404A", "transport", "10 kW", 5, "2025-01-01", {"us-new-container", "us-new-transport"}),
    ("R452A", "transport", "10 kW", 5, "2025-01-01", {"us-new-container"}),
]


def _row_id(value: object) -> str:
    """Return a name for a row of the table: its words and dates, without the set, whose order is not fixed."""
    return value if isinstance(value, str) else " ".join(str(part) for part in value[:-1])  # type: ignore[index]


@pytest.mark.parametrize(
    ("jurisdiction", "row"), [*(("EU", row) for row in NEW_EU), *(("US", row) for row in NEW_US)], ids=_row_id
)
def test_limits_for_new_equipment(law_of, in_force, jurisdiction, row):
    """Each limit on both sides of its GWP, size, charge and day."""
    name, equipment, cooling, kg, on, expected = row
    check = law_of(
        name, float(kg), on=on, jurisdiction=jurisdiction, equipment=equipment, cooling=cooling, date_of_change=None
    )

    assert ids(in_force(check, "new equipment")) == expected


def test_what_the_case_does_not_say_stays_open(law_of):
    """Whether an air conditioner is split or self-contained no case says: such a row depends on it, and says so."""
    rows = law_of("R32", 2.0, equipment="heat pump", cooling="10 kW", on="2027-01-01").rows_on("new equipment")

    assert rows
    assert {row.state for row in rows} == {"depends"}
    assert all("Only if" in row.line for row in rows)


def test_flammable_gases_as_retrofit_in_the_us(law_of, in_force):
    """Class A3 in a home's air conditioner meets the listings' words; the same in a chiller does not."""
    home = law_of("R290", 1.0, jurisdiction="US", equipment="residential air conditioning")
    chiller = law_of("R290", 1.0, jurisdiction="US", equipment="chiller")

    assert {"us-snap-a3", "us-snap-propane", "us-snap-none"} <= ids(in_force(home, "change of refrigerant"))
    assert not {"us-snap-a3", "us-snap-propane", "us-snap-none"} & ids(chiller.rows)


def test_quotas_of_the_eu(law_of, in_force):
    """42 874 410 t CO2e a year to 2026, 21 665 691 to 2029, 9 132 097 to 2032 (annex VII); none without HFC."""
    for on, quota in (("2026-12-31", 42874410), ("2027-01-01", 21665691), ("2032-12-31", 9132097)):
        assert [row.value for row in in_force(law_of("R404A", 50.0, on=on, date_of_change=None), "supply")] == [quota]
    assert not law_of("R290", 50.0).rows_on("supply")


def test_a_proposal_is_never_in_force(law_of, in_force):
    """A proposal is shown without a date and counts as nothing."""
    check = law_of("R1234yf", 50.0)

    assert [row.dates for row in check.rows_on("proposal")] == ["No date"]
    assert not in_force(check, "proposal", "2060-01-01")
    assert not law_of("R290", 50.0).rows_on("proposal")
