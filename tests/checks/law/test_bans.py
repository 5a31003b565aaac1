"""Service bans, limits for new equipment and changes of refrigerant: dates, thresholds and exceptions.

Dates and figures: Regulation (EU) 2024/573, Art. 13 and annexes IV and VII; 40 CFR 84.54; the dates 2026 and 2032 of
Art. 13 from memory, as their rows say. GWP of R404A 3922, R448A 1386, R410A 2088, R513A 629 (annex I arithmetic).
"""

import re

import pytest

from retrofit.study.law import Change
from retrofit.study.law_words import dates, line

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
    assert "by the undertaking that recovered it or for which it was recovered: until 1 January 2030" in line(row)


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
        ("R448A", "cold store", "2032-01-01", True),
        ("R448A", "transport", "2032-01-01", False),
        ("R513A", "supermarket", "2032-01-01", False),
    ],
)
def test_the_ban_at_750(law_of, in_force, name, equipment, on, is_banned):
    """New gas of 750 or more in stationary refrigeration but chillers from 2032; reclaimed gas is left."""
    check = law_of(name, 100.0, on=on, equipment=equipment, evaporator="air")
    rows = [row for row in in_force(check, BAN) if row.id == "eu-ban-750"]

    assert bool(rows) == is_banned
    assert all(row.gas == "new" and not row.is_verified and "Reclaimed" in row.exceptions for row in rows)


def test_a_rink_cooled_by_brine_is_a_chiller(law_of, in_force):
    """Art. 3(44): what cools a heat transfer fluid is a chiller, which the ban at 750 leaves out."""
    brine = law_of("R449A", 100.0, on="2032-01-01", equipment="ice rink", evaporator="brine")

    assert "eu-ban-750" not in ids(in_force(brine, BAN))


def test_ozone_depleting_gases_in_the_eu(law_of, in_force):
    """R22 could be served with reclaimed gas to the end of 2014 and with none from 2015 (Regulation 1005/2009).

    From 11 March 2024 Regulation (EU) 2024/590, Art. 4(1), bars it; the old rows end the day before.
    """
    found = {
        on: in_force(law_of("R22", 50.0, on=on, date_of_change=None, remaining_life=None), BAN)
        for on in ("2014-12-31", "2015-01-01", "2024-03-10", "2024-03-11")
    }

    assert [row.gas for row in found["2014-12-31"]] == ["new"]
    assert [row.gas for row in found["2015-01-01"]] == ["any"]
    assert ids(found["2024-03-10"]) == {"eu-ods-hcfc-old"}
    assert ids(found["2024-03-11"]) == {"eu-ods-hcfc"}
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

    elsewhere = law_of(name, 50.0, on=on, jurisdiction="US", date_of_change=None)

    assert bool([row for row in in_force(check, "supply") if row.gas]) == is_ended
    assert not [row for row in in_force(elsewhere, "supply") if row.gas]


# Limits for new equipment: name, equipment, cooling, charge, day, and the rows in force then.
NEW_US = [
    ("R410A", "chiller", "100 kW", 50, "2024-12-31", set()),
    ("R410A", "chiller", "100 kW", 50, "2025-01-01", {"us-new-chiller"}),
    ("R513A", "chiller", "100 kW", 50, "2025-01-01", set()),
    ("R448A", "ice rink", "100 kW", 50, "2025-01-01", {"us-new-rink"}),
    ("R134a", "stand-alone cabinet", "1 kW", 0.3, "2025-01-01", {"us-new-cabinet"}),
    ("R454C", "stand-alone cabinet", "1 kW", 0.3, "2025-01-01", set()),
    # 200 lb are 90.72 kg: from there 150, under it 300. R454A: GWP 239.
    ("R454A", "supermarket", "100 kW", 90.8, "2026-12-31", set()),
    # The final rule of May 2026 changed what holds from then: its figures were not read, and one row says so.
    ("R454A", "supermarket", "100 kW", 90.8, "2027-01-01", {"us-new-supermarket"}),
    ("R448A", "supermarket", "100 kW", 90.6, "2027-01-01", {"us-new-supermarket"}),
    ("R454C", "supermarket", "100 kW", 90.6, "2027-01-01", set()),
    ("R448A", "cold store", "100 kW", 90.8, "2026-07-26", {"us-new-cold-store-200lb"}),
    ("R448A", "cold store", "100 kW", 90.8, "2026-07-27", {"us-new-cold-store"}),
    ("R448A", "condensing unit", "100 kW", 20, "2026-07-27", {"us-new-condensing-unit"}),
    ("R448A", "cold store", "100 kW", 90.8, "2026-01-01", {"us-new-cold-store-200lb"}),
    ("R448A", "condensing unit", "100 kW", 20, "2025-12-31", set()),
    ("R448A", "condensing unit", "100 kW", 20, "2026-01-01", {"us-new-condensing-unit-small"}),
    ("R448A", "industrial process", "100 kW", 100, "2026-01-01", {"us-new-process-200lb"}),
    ("R448A", "industrial process", "100 kW", 100, "2028-01-01", {"us-new-process-200lb", "us-new-process-cold"}),
    ("R134a", "process chiller", "100 kW", 100, "2025-12-31", set()),
    ("R134a", "process chiller", "100 kW", 100, "2026-01-01", {"us-new-process-chiller"}),
    ("R448A", "data centre", "100 kW", 100, "2027-01-01", {"us-new-data-centre"}),
    ("R410A", "heat pump", "10 kW", 5, "2026-01-01", {"us-new-vrf"}),
    ("R404A", "transport", "10 kW", 5, "2025-01-01", {"us-new-container-old", "us-new-transport"}),
    ("R452A", "transport", "10 kW", 5, "2025-01-01", {"us-new-container-old"}),
]


def _row_id(value: object) -> str:
    """Return a name for a row of the table: its words and dates, without the set, whose order is not fixed."""
    return value if isinstance(value, str) else " ".join(str(part) for part in value[:-1])  # type: ignore[index]


@pytest.mark.parametrize("row", NEW_US, ids=_row_id)
def test_limits_for_new_equipment_in_the_us(law_of, in_force, row):
    """Each limit on both sides of its GWP, size, charge and day."""
    name, equipment, cooling, kg, on, expected = row
    check = law_of(name, float(kg), on=on, jurisdiction="US", equipment=equipment, cooling=cooling, date_of_change=None)

    assert ids(in_force(check, "new equipment")) == expected


def test_flammable_gases_as_retrofit_in_the_us(law_of, in_force):
    """Class A3 in a home's air conditioner meets the listings' words; the same in a chiller does not."""
    home = law_of("R290", 1.0, jurisdiction="US", equipment="residential air conditioning")
    chiller = law_of("R290", 1.0, jurisdiction="US", equipment="chiller")

    assert {"us-snap-a3", "us-snap-propane", "us-snap-none"} <= ids(in_force(home, "change of refrigerant"))
    assert not {"us-snap-a3", "us-snap-propane", "us-snap-none"} & ids(chiller.rows)


@pytest.mark.parametrize(
    ("first", "last", "quota"),
    [
        (2025, 2026, 42874410),
        (2027, 2029, 21665691),
        (2030, 2032, 9132097),
        (2033, 2035, 8445713),
        (2036, 2038, 6782265),
        (2039, 2041, 6136732),
        (2042, 2044, 5491199),
        (2045, 2047, 4845666),
        (2048, 2049, 4200133),
        (2050, 2060, 0),
    ],
)
def test_quotas_of_the_eu(law_of, in_force, first, last, quota):
    """Annex VII, point 1, of Regulation (EU) 2024/573: t CO2e a year on the first and the last day of each step."""
    for on in (f"{first}-01-01", f"{last}-12-31"):
        check = law_of("R404A", 50.0, on=on, date_of_change=None, remaining_life="30 years")
        assert [row.value for row in in_force(check, "supply")] == [quota]


def test_the_quota_never_ends_but_steps_down(law_of):
    """Annex VII goes on to 2050: over thirty years each step begins and none ends; none at all without HFC."""
    check = law_of("R404A", 50.0, remaining_life="30 years", is_new_plant=False)
    steps = [moment for moment in check.timeline if moment.row and moment.row.series == "eu-quota"]

    assert {moment.change for moment in steps} == {Change.BEGINS}
    assert [moment.day.year for moment in steps] == [2030, 2033, 2036, 2039, 2042, 2045, 2048, 2050]
    assert not law_of("R290", 50.0).rows_on("supply")


# Outlook: substances of the catalogue by their formula. A PFAS has a carbon with three F (CF3) or two F (CF2) and
# nothing else of H, Cl, Br, I on it, bonded on (OECD 2021, which the proposal follows).
FORMULAS = {
    "R11": "CCl3F", "R12": "CCl2F2", "R13": "CClF3", "R22": "CHClF2", "R23": "CHF3", "R32": "CH2F2",
    "R115": "CClF2-CF3", "R116": "CF3-CF3", "R123": "CHCl2-CF3", "R124": "CHClF-CF3", "R125": "CHF2-CF3",
    "R134a": "CH2F-CF3", "R141b": "CH3-CCl2F", "R142b": "CH3-CClF2", "R143a": "CH3-CF3", "R152a": "CH3-CHF2",
    "R218": "CF3-CF2-CF3", "R227ea": "CF3-CHF-CF3", "R236fa": "CF3-CH2-CF3", "R245fa": "CHF2-CH2-CF3",
    "R1224yd(Z)": "CHCl=CF-CF3", "R1233zd(E)": "CHCl=CH-CF3", "R1234yf": "CH2=CF-CF3", "R1234ze(E)": "CHF=CH-CF3",
    "R1336mzz(Z)": "CF3-CH=CH-CF3", "R1336mzz(E)": "CF3-CH=CH-CF3", "R1132a": "CH2=CF2", "R1132(E)": "CHF=CHF",
    "R1123": "CHF=CF2",
}  # fmt: skip


@pytest.mark.parametrize("name", list(FORMULAS))
def test_the_outlook_goes_by_the_formula(law_of, name):
    """A substance with CF3 on a chain meets the proposal, any other does not."""
    is_pfas = bool(re.search(r"CF3-|-CF3", FORMULAS[name]))
    rows = ids(law_of(name, 50.0).rows_on("proposal")) & {"eu-pfas-named", "eu-pfas-definition"}

    assert len(rows) == is_pfas


def test_the_share_that_turns_into_tfa(law_of):
    """R1234yf wholly and R134a up to a fifth by mole (trade articles); a blend names each part and its mass share."""
    rows = {row.id: row for row in law_of("R513A", 50.0).rows_on("proposal") if row.id.startswith("tfa")}

    assert {name: row.value for name, row in rows.items()} == {"tfa-r1234yf": 100.0, "tfa-r134a": 20.0}
    assert rows["tfa-r1234yf"].measured[0].value[1] == pytest.approx(0.56)  # 56/44 by mass: ASHRAE 34


def test_a_proposal_is_never_in_force(law_of, in_force):
    """A proposal is shown without a date and counts as nothing."""
    check = law_of("R1234yf", 50.0)

    assert {dates(row) for row in check.rows_on("proposal")} == {"No date"}
    assert not in_force(check, "proposal", "2060-01-01")
    assert not law_of("R290", 50.0).rows_on("proposal")
    assert not any(moment.row and moment.row.subject == "proposal" for moment in check.timeline)


@pytest.mark.parametrize("jurisdiction", ["EU", "GB"])
@pytest.mark.parametrize("name", ["R12", "R113", "R114", "R13B1"])
def test_a_halon_is_barred_like_a_cfc(law_of, in_force, jurisdiction, name):
    """Annex I of Regulation (EU) 2024/590 lists halons beside CFC; R14 is a PFC and not among them."""
    found = law_of(name, 50.0, jurisdiction=jurisdiction, is_new_plant=False)
    other = law_of("R14", 50.0, jurisdiction=jurisdiction, is_new_plant=False)

    assert [row.gas for row in in_force(found, "service ban") if "CFC" in row.text] == ["any"]
    assert not [row for row in in_force(other, "service ban") if "CFC" in row.text]
