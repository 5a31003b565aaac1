"""The same plant in each jurisdiction: what its own tables say, and nothing of another's.

260 kg of R404A in a supermarket rack of 120 kW, and new plants in its place, changed on 2027-04-01. Great Britain: the
guidance of its environment agencies on Regulation (EU) 517/2014 as retained (leak checks at 5, 50 and 500 t CO2e,
doubled by detection; refill ban from 40 t at GWP 2500, R404A from 10.2 kg, reclaimed gas to 2030). GWP of R404A by AR4:
0.44 x 3500 + 0.52 x 4470 + 0.04 x 1430 = 3921.6.
"""

import pytest

from retrofit.study.law import RowState

PLACES = ("EU", "NI", "GB", "US")
KEPT = {"is_new_plant": False, "remaining_life": None, "date_of_change": None}


def ids(rows):
    """Return the names of rows."""
    return {row.id for row in rows}


@pytest.mark.parametrize("jurisdiction", ["EU", "DE", "FR", "NI"])
def test_the_eu_its_members_and_northern_ireland_read_the_same_rows(law_of, jurisdiction):
    """Regulation (EU) 2024/573 holds in each; R404A is banned for service since 2025, R454A in new racks since 2022."""
    kept = law_of("R404A", 260.0, jurisdiction=jurisdiction, is_new_plant=False)

    assert kept.rows
    assert ids(kept.rows) == ids(law_of("R404A", 260.0, is_new_plant=False).rows)
    assert kept.leak_check_months == 3
    assert kept.strictest.id == "eu-ban-2500-refrigeration"
    assert law_of("R454A", 260.0, jurisdiction=jurisdiction).strictest.id == "eu-iv-6"


@pytest.mark.parametrize(
    ("kg", "detection", "months"),
    [
        (1.27, False, None),
        (1.28, False, 12),
        (12.7, False, 12),
        (12.8, False, 6),
        (127.4, False, 6),
        (127.5, False, 3),
        (1.28, True, 24),
        (12.8, True, 12),
        (127.5, True, 6),
    ],
)
def test_leak_checks_in_great_britain(law_of, kg, detection, months):
    """5, 50 and 500 t CO2e of R404A are 1.275, 12.75 and 127.5 kg."""
    check = law_of("R404A", kg, jurisdiction="GB", leak_detection_system=detection)

    assert check.leak_check_months == months
    assert {row.table for row in check.rows} <= {"gb-517-2014.toml"}


@pytest.mark.parametrize(("t_co2e", "months"), [(9.99, None), (10.0, 12)])
def test_sealed_equipment_in_great_britain(law_of, t_co2e, months):
    """Sealed and labelled: no check under 10 t CO2e; there is no rule of 3 kg for homes."""
    check = law_of("R404A", t_co2e * 1000 / 3921.6, jurisdiction="GB", hermetically_sealed=True, equipment="heat pump")

    assert check.leak_check_months == months


@pytest.mark.parametrize(
    ("kg", "on", "expected"),
    [
        (10.19, "2027-04-01", set()),
        (10.2, "2027-04-01", {"gb-517-ban"}),
        (10.2, "2020-12-31", set()),  # before the retained law, which is not held
        (10.2, "2030-01-01", {"gb-517-ban", "gb-517-ban-reclaimed"}),
    ],
)
def test_the_refill_ban_in_great_britain(law_of, in_force, kg, on, expected):
    """40 t CO2e of R404A are 10.2 kg; the ban on any charge of 2025 is of the EU alone, as is that at 750."""
    check = law_of("R404A", kg, jurisdiction="GB", on=on, **KEPT)

    assert ids(in_force(check, "service ban")) == expected
    assert not [row for row in law_of("R448A", 260.0, jurisdiction="GB", on="2032-01-01", **KEPT).bans if row.gas]


def test_new_plants_in_great_britain(law_of):
    """Annex III of the retained regulation: racks of 40 kW at 150 since 2022; no limit on chillers or heat pumps."""
    rack = law_of("R454A", 200.0, jurisdiction="GB")
    chiller = law_of("R134a", 50.0, jurisdiction="GB", equipment="chiller", cooling="100 kW")

    assert rack.strictest.id == "gb-517-iii-13"
    assert rack.strictest.state == RowState.APPLIES
    assert law_of("R454C", 200.0, jurisdiction="GB").strictest is None
    assert chiller.strictest is None


def test_what_is_from_summaries_in_great_britain_is_not_verified(law_of):
    """No row was compared with the retained text itself, and each says so."""
    assert not any(row.is_verified for row in law_of("R404A", 260.0, jurisdiction="GB").rows)


def test_the_outlook_on_pfas_is_of_the_eu(law_of):
    """The proposal is for REACH, which holds in the EU and Northern Ireland, not in Great Britain or the US."""
    found = [place for place in PLACES if law_of("R1234yf", 5.0, jurisdiction=place).rows_on("proposal")]

    assert found == ["EU", "NI"]


@pytest.mark.parametrize(("jurisdiction", "has_sale_ban"), [("US", False), ("US-CA", True)])
def test_california_adds_to_the_federal_rows(law_of, jurisdiction, has_sale_ban):
    """New gas of GWP above 2200 is no longer sold in California since 2025; the federal leak rates hold in both."""
    check = law_of("R404A", 260.0, jurisdiction=jurisdiction, is_new_plant=False)

    assert bool(check.rows_on("supply") and [row for row in check.bans if row.subject == "supply"]) == has_sale_ban
    assert check.rows_on("leak rate")
