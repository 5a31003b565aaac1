"""US rows: what the final rule of 2026 left unread, listings by end use, allowances, and the end of new gas.

Sources: Federal Register summary of 91 FR 31284 (effective 2026-07-27) and a trade summary of it; summaries of SNAP
Rule 26 (89 FR 50410, new equipment only); the schedule of 42 USC 7675(e)(2)(C) as trade pages print it (90, 60, 30, 20
and 15 % from 2022, 2024, 2029, 2034 and 2036); EPA fact sheet on HCFC (R22 ends 2020-01-01, all HCFC 2030).
"""

import pytest

from retrofit.checks.law import shipped
from retrofit.refrigerants import find
from retrofit.study.law import RowState, Why

US = {"jurisdiction": "US", "date_of_change": None}
RETAIL_26 = {"R1234yf", "R1234ze(E)", "R454A", "R454C", "R455A", "R457A", "R516A"}


def rows(check, subject, start):
    """Return the rows on a subject in force on the first day whose names begin so."""
    return [row for row in check.rows_on(subject) if row.id.startswith(start) and row.in_force(check.start)]


@pytest.mark.parametrize("kind", ["cold store", "condensing unit", "supermarket"])
@pytest.mark.parametrize("name", ["R404A", "R448A", "R454A", "R513A"])
def test_a_figure_that_was_not_read_is_unknown_and_not_the_old_one(law_of, kind, name):
    """From 2026-07-27 (supermarkets: 2027-01-01) nothing is answered for a GWP from 150, and no older figure stands."""
    found = law_of(name, 100.0, on="2027-01-01", equipment=kind, **US)
    (row,) = rows(found, "new equipment", "us-new-")

    assert row.state == RowState.UNKNOWN
    assert {reason.why for reason in row.reasons} == {Why.NOT_READ}
    assert row.basis == "extract"
    assert not row.is_verified


@pytest.mark.parametrize(("name", "is_asked"), [("R454C", False), ("R455A", False), ("R454A", True)])
def test_what_lies_below_the_older_limits_is_not_in_question(law_of, name, is_asked):
    """R454C (GWP 146 on the basis of the law) and R455A (146) lie below 150, which the proposal only raised."""
    found = law_of(name, 100.0, on="2027-01-01", equipment="supermarket", **US)

    assert find(name).gwp_us_aim.number < 150 or is_asked
    assert bool(rows(found, "new equipment", "us-new-")) == is_asked


@pytest.mark.parametrize(("on", "percent"), [("2026-07-26", None), ("2026-07-27", "15 %")])
def test_a_supermarket_may_raise_its_capacity_by_15_percent(law_of, on, percent):
    """Since the day the final rule took effect; every other kind keeps the older rule."""
    text = " ".join(row.text for row in rows(law_of("R448A", 100.0, on=on, **US), "change of refrigerant", "us-inst"))
    store = law_of("R448A", 100.0, on=on, equipment="cold store", **US)

    assert ("15 %" in text) == (percent is not None)
    assert "75 %" in text
    assert [row.id for row in rows(store, "change of refrigerant", "us-inst")] == ["us-installation"]


@pytest.mark.parametrize(
    ("on", "share"),
    [
        ("2023-12-31", 90),
        ("2024-01-01", 60),
        ("2028-12-31", 60),
        ("2029-01-01", 30),
        ("2034-01-01", 20),
        ("2036-01-01", 15),
    ],
)
def test_allowances_step_down(law_of, on, share):
    """The day before and the day of a step."""
    found = law_of("R404A", 50.0, on=on, remaining_life="20 years", **US)

    assert [row.value for row in rows(found, "supply", "us-allowances")] == [share]
    assert not rows(law_of("R290", 50.0, on=on, **US), "supply", "us-")


@pytest.mark.parametrize(
    ("name", "first"),
    [
        ("R22", "2020-01-01"),
        ("R502", "1996-01-01"),
        ("R123", "2030-01-01"),
        ("R12", "1996-01-01"),
        ("R13B1", "1994-01-01"),
    ],
)
def test_new_ozone_depleting_gas_ended(law_of, name, first):
    """R502 holds R22 and R115, so the earlier day of the two counts; reclaimed gas is left in each."""
    found = law_of(name, 50.0, on="2027-01-01", equipment="cold store", remaining_life="10 years", **US)
    ended = [row for row in found.rows_on("supply") if row.gas == "new"]

    assert min(str(row.applies_from) for row in ended) == first
    assert all("eclaimed" in row.exceptions for row in ended)


@pytest.mark.parametrize("kind", ["supermarket", "condensing unit", "cold store"])
@pytest.mark.parametrize("name", sorted(RETAIL_26))
def test_rule_26_lists_for_new_equipment_only(law_of, kind, name):
    """Summary of 89 FR 50410: these seven for retail food and cold storage; each says a conversion is not covered."""
    found = rows(law_of(name, 50.0, equipment=kind, **US), "change of refrigerant", "us-snap-26")

    assert {"us-snap-26-retail", "us-snap-26-none"} == {row.id for row in found}
    assert any("conversion of existing equipment is not covered" in row.text for row in found)
    assert {str(row.applies_from) for row in found} == {"2024-07-15"}


@pytest.mark.parametrize(
    ("name", "kind", "is_listed"),
    [
        ("R454A", "stand-alone cabinet", False),
        ("R454C", "stand-alone cabinet", True),
        ("R454C", "ice rink", True),
        ("R32", "industrial process", True),
        ("R454B", "industrial process", True),
        ("R32", "supermarket", False),
        ("R448A", "supermarket", False),
    ],
)
def test_the_list_of_rule_26_is_by_end_use(law_of, name, kind, is_listed):
    """R454A is not for cabinets, R32 and R454B are for processes alone."""
    found = rows(law_of(name, 50.0, equipment=kind, **US), "change of refrigerant", "us-snap-26")

    assert any(name != "us-snap-26-none" for name in (row.id for row in found)) == is_listed


def test_the_us_alone_gets_the_federal_rows():
    """Every federal table names the US, and California with it; the table of the state names no other."""
    tables = {file: table.jurisdictions for file, table in shipped().items() if file.startswith("us-")}

    assert tables.pop("us-california.toml") == ("US-CA",)
    assert set(tables.values()) == {("US", "US-CA")}
    assert len(tables) == 6


def test_no_row_contradicts_itself_on_comfort_cooling():
    """10 % a year is the figure of 40 CFR 84.106 and 82.157 for comfort cooling; nothing says that pages differ."""
    texts = [row for table in shipped().values() for row in table.rows if row.id.endswith("-rate-other")]

    assert [row.value for row in texts] == [10.0, 10.0]
    assert not [row for row in texts if "contradict" in row.exceptions]
