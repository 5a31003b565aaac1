"""What the tables of law lead to in an assessed result: findings with their level, and the JSON of it."""

import datetime
import json
from dataclasses import replace

import pytest

from retrofit.case import Law
from retrofit.checks import assess
from retrofit.checks.law import law_findings, with_law
from retrofit.refrigerants import find
from retrofit.report.machine import comparison_json
from retrofit.study import Family, Verdict
from retrofit.study.law import Why

ON = datetime.date(2026, 12, 1)
MARKET = {
    "jurisdiction": "EU",
    "date_of_change": "2027-04-01",
    "remaining_life": "8 years",
    "equipment": "supermarket",
    "leak_detection_system": True,
    "annual_leak_rate": "15 %",
}


@pytest.fixture(scope="module")
def assessed(solved):
    """Return a function that assesses a comparison under a law, today's refrigerant and the first candidate renamed.

    The numbers of the plant stay; the law looks at designation and charge only.
    """

    def run(existing="R404A", candidate="R448A", charge=260.0, on=ON, **law):
        given = {key: value for key, value in {**MARKET, **law}.items() if value is not None}
        plant = solved.case.plant.model_copy(update={"charge_kg": charge})
        case = replace(solved.case, plant=plant, law=Law.model_validate(given) if given else None)
        first = replace(solved.candidates[0], refrigerant=find(candidate))
        today = replace(solved.existing, refrigerant=find(existing))
        return assess(replace(solved, case=case, existing=today, candidates=(first, *solved.candidates[1:])), on)

    return run


def of_law(entry, code):
    """Return level and fact of the findings of a code."""
    return [(finding.level, finding.fact) for finding in entry.findings if finding.code == code]


def test_a_ban_already_in_force_stops_a_candidate(assessed):
    """R404A as a candidate in 2027: banned with new gas since 2025; the finding keeps the exceptions and defers."""
    entry = assessed("R22", "R404A").candidates[0]
    levels = [level for level, _ in of_law(entry, "law-ban")]
    (stop,) = [finding for finding in entry.findings if finding.code == "law-ban" and finding.level == "stop"]

    assert levels == ["stop", "work", "work"]
    assert entry.verdict == Verdict.NOT_SUITABLE
    assert "From 2025-01-01" in stop.fact
    assert "until 1 January 2030" in stop.fact
    assert "check the current text" in stop.text


def test_a_ban_within_the_remaining_life_is_work_with_its_year(assessed):
    """R448A: new gas ends in 2032, inside eight years from 2027 and outside four."""
    inside, outside = assessed().candidates[0], assessed(remaining_life="4 years").candidates[0]

    assert [(level, "From 2032-01-01" in fact) for level, fact in of_law(inside, "law-ban")] == [("work", True)]
    assert of_law(outside, "law-ban") == []


@pytest.mark.parametrize(("end", "count"), [("2031-12-31", 0), ("2032-01-01", 1)])
def test_the_end_of_the_plant_decides_to_the_day(assessed, end, count):
    """A ban that begins the day after the plant ends does not concern it; on its last day it does."""
    entry = assessed(remaining_life=None, end=end).candidates[0]

    assert len(of_law(entry, "law-ban")) == count


@pytest.mark.parametrize(("change", "level"), [("2031-12-31", "work"), ("2032-01-01", "stop")])
def test_the_day_of_the_change_decides_to_the_day(assessed, change, level):
    """The day before a ban the change is work to plan for; on the day itself it stops."""
    entry = assessed(date_of_change=change).candidates[0]

    assert [found for found, _ in of_law(entry, "law-ban")] == [level]


def test_todays_gas_under_a_ban(assessed):
    """With reclaimed gas left today's plant can be served, with none it cannot: R404A is work, R22 a stop."""
    assert [level for level, _ in of_law(assessed().existing, "law-ban")] == ["work", "work", "work"]
    assert [level for level, _ in of_law(assessed("R22").existing, "law-ban")] == ["stop"]


def test_leak_checks_before_and_after(assessed):
    """Quarterly today and half-yearly after, doubled by the detection fitted; the note names both."""
    result = assessed()
    after = result.candidates[0].law

    assert (after.leak_check_months_before, after.leak_check_months) == (6, 12)
    (note,) = of_law(result.candidates[0], "law-leak-check")
    assert note[0] == "note"
    assert note[1].startswith("at least every 12 months, today every 6 months; ")
    assert "Open:" not in note[1]  # R448A counts as HFC by Art. 3(4): nothing is open


def test_missing_detection_is_work_where_it_is_compulsory(assessed):
    """1020 t CO2e without a leak detection system stated: work; with it, or at 386 t, nothing."""
    without = assessed(leak_detection_system=False)

    assert [level for level, _ in of_law(without.existing, "law-detection")] == ["work"]
    assert of_law(without.candidates[0], "law-detection") == []
    assert of_law(assessed().existing, "law-detection") == []


@pytest.mark.parametrize(("rate", "count"), [("20 %", 0), ("20.1 %", 1)])
def test_a_leak_rate_above_that_of_the_law_is_work(assessed, rate, count):
    """40 CFR 84.106: above 20 % of the full charge a year in commercial refrigeration; 20 % itself is not above."""
    found = of_law(assessed(jurisdiction="US", annual_leak_rate=rate).existing, "law-leak-rate")

    assert [level for level, _ in found] == ["work"] * count


def test_a_leak_rate_not_stated_is_named(assessed):
    """Without a leak rate nothing is found, and it stands among what is missing."""
    entry = assessed(jurisdiction="US", annual_leak_rate=None).existing

    assert of_law(entry, "law-leak-rate") == []
    assert any(reason.keys == ("law.annual_leak_rate",) for reason in entry.law.unknown)


def test_missing_data_is_unknown_and_never_good(assessed):
    """Without a charge no verdict is in favour, of today's refrigerant or of a candidate."""
    result = assessed(charge=None)
    entry = result.candidates[0]

    assert [level for level, _ in of_law(entry, "law-unknown")] == ["unknown"]
    assert not entry.verdict.is_positive
    assert of_law(result.existing, "law-leak-check") == []


def test_a_jurisdiction_without_a_table_is_unknown(assessed):
    """Nothing is said of a place that no table is for but that, for every refrigerant, with those there are."""
    result = assessed(jurisdiction="other")

    for entry in result.entries:
        ((level, fact),) = of_law(entry, "law-jurisdiction")
        assert level == "unknown"
        assert fact.startswith("Law not checked")
        assert "EU" in fact
        assert entry.law is None


@pytest.mark.parametrize("law", [{key: None for key in MARKET}, {"jurisdiction": None}], ids=["none", "no place"])
def test_without_a_jurisdiction_law_is_not_checked_and_that_is_decisive(assessed, law):
    """A case that names no jurisdiction has one finding of law: that it was not checked, and the key."""
    result = assessed(**law)

    assert result.law is None
    assert all(entry.law is None for entry in result.entries)
    for entry in result.entries:
        (finding,) = [finding for finding in entry.findings if finding.code.startswith("law")]
        assert (finding.level, finding.decisive, finding.missing) == ("unknown", True, ("law.jurisdiction",))
        assert not entry.verdict.is_positive


def test_past_its_review_a_table_gives_no_answer(assessed):
    """Years after the review day every refrigerant is open on the law: no ban, no interval, an unknown that decides."""
    result = assessed(on=datetime.date(2029, 1, 1))

    assert any(table.file == "eu-2024-573.toml" for table in result.law.faulty)
    for entry in result.entries:
        found = [finding for finding in entry.findings if finding.code == "law-table"]
        assert found
        assert all(finding.level == "unknown" and finding.decisive for finding in found)
        assert not of_law(entry, "law-ban")
        assert not of_law(entry, "law-leak-check")
        assert not entry.verdict.is_positive


def new_plant(solved, candidate, on=ON, cooling_W=120e3, **law):
    """Return the findings on law of a candidate that is a new plant, by code."""
    given = {key: value for key, value in {**MARKET, **law}.items() if value is not None}
    plant = solved.case.plant.model_copy(update={"charge_kg": 260.0})
    duty = solved.case.duty.model_copy(update={"cooling_W": cooling_W})
    case = replace(solved.case, plant=plant, duty=duty, law=Law.model_validate(given))
    entry = replace(solved.candidates[0], refrigerant=find(candidate), family=Family.REPLACE)
    result = with_law(replace(solved, case=case, candidates=(entry,)), on)
    return {finding.code: finding for finding in law_findings(result, result.candidates[0])}


def test_r454a_in_a_new_rack_of_120_kw_is_stopped(solved):
    """Annex IV, point 6: barred since 2022 from racks of 40 kW and more; the source names the point."""
    found = new_plant(solved, "R454A")["law-new-equipment"]

    assert (found.level, found.missing) == ("stop", ())
    assert "From 2022-01-01" in found.fact
    assert "Annex IV, point 6" in found.source
    assert "law-new-equipment" not in new_plant(solved, "R454C")


def test_a_new_plant_whose_arrangement_is_missing_is_unknown_with_its_key(solved):
    """R454B at 20 kW: self-contained it is barred since 2027-01-01 (8d), as a split from 2033 (9f): the key decides."""
    given = {"equipment": "air conditioning", "cooling_W": 20e3}
    unknown = new_plant(solved, "R454B", **given)["law-new-equipment"]
    stopped = new_plant(solved, "R454B", arrangement="self-contained", **given)["law-new-equipment"]
    split = new_plant(solved, "R454B", arrangement="multi split", **given)

    assert (unknown.level, unknown.decisive, unknown.missing) == ("unknown", True, ("law.arrangement",))
    assert stopped.level == "stop"
    assert "law-new-equipment" not in split
    assert "From 2033-01-01" in split["law-new-later"].fact


def test_the_next_limit_is_noted_for_a_change_that_slips(solved):
    """30 kW: point 5(c) begins on 2030-01-01, after the change and within the life."""
    found = new_plant(solved, "R448A", cooling_W=30e3)

    assert "law-new-equipment" not in found
    assert found["law-new-later"].level == "note"
    assert "From 2030-01-01" in found["law-new-later"].fact


def test_a_claimed_exception_is_work_with_its_evidence(solved):
    """7(d) falls where safety demands it, on evidence of the operator; point 6 has no such exception."""
    chiller = new_plant(solved, "R134a", equipment="chiller", safety_exception=True)

    assert chiller["law-new-evidence"].level == "work"
    assert new_plant(solved, "R454A", safety_exception=True)["law-new-equipment"].level == "stop"


def test_every_finding_of_law_defers(assessed):
    """Whatever is found, it says that it is no advice and what to check."""
    results = [
        assessed(),
        assessed("R22", "R404A"),
        assessed(charge=None),
        assessed(jurisdiction="US", annual_leak_rate="40 %", equipment="residential air conditioning"),
        assessed(jurisdiction="other"),
    ]
    found = [f for result in results for entry in result.entries for f in entry.findings if f.code.startswith("law")]

    assert len({finding.code for finding in found}) >= 5
    assert all("Not legal advice: check the current text" in finding.advice and finding.source for finding in found)
    bans = [finding for finding in found if finding.code == "law-ban" and "first day not verified" in finding.source]
    assert bans
    assert all(finding.fact.endswith("Not verified against the published text.") for finding in bans)


def test_before_the_change_its_day_is_today_if_not_stated(assessed):
    """Without a date of change candidates are looked at today, and that is named."""
    entry = assessed(date_of_change=None).candidates[0]

    assert entry.law.start == ON
    assert entry.law.end == datetime.date(2034, 12, 1)
    assert any(reason.keys == ("law.date_of_change",) for reason in entry.law.unknown)


def test_a_remaining_life_counts_whole_years_by_the_calendar(assessed):
    """From 29 February eight years end on 28 February, half a year is 183 days (365.25 / 2, rounded)."""
    assert assessed(date_of_change="2028-02-29").law.end == datetime.date(2036, 2, 28)
    half = assessed(remaining_life="0.5 years").law.end
    assert half == datetime.date(2027, 4, 1) + datetime.timedelta(days=183)


def test_the_json_carries_rows_tables_and_dates_as_text(assessed):
    """Each entry has its rows with their paragraph, the result its tables with the days to check them."""
    data = json.loads(json.dumps(comparison_json(assessed())))
    rows = data["existing"]["law"]["rows"]

    assert data["law"]["on"] == "2026-12-01"
    assert data["law"]["end"] == "2035-04-01"
    assert {table["file"] for table in data["law"]["tables"]} == {
        "eu-2024-573.toml",
        "eu-517-2014.toml",
        "eu-ods.toml",
        "eu-pfas-proposal.toml",
        "eu-tfa.toml",
    }
    assert all(row["line"] and row["document"] and row["date_checked"] == "2026-12-01" for row in rows)
    last = data["candidates"][0]["law"]["timeline"][-1]
    assert (last["day"], last["change"], last["row"]) == ("2035-04-01", "end of the remaining life", None)
    assert all(row["clause"] and row["address"] and row["review_by"] for row in rows if row["id"][:3] != "tfa")
    assert {reason["why"] for row in rows for reason in row["reasons"]} <= {why.value for why in Why}
    assert comparison_json(assessed(jurisdiction=None))["law"] is None
