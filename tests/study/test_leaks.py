"""The leak rate: a log goes before the case, the case before a range by type, and nothing is never zero."""

import pytest

from retrofit.case import EQUIPMENT
from retrofit.study.leaks import default_rates, leak_rate, leak_rate_today
from retrofit.study.result import Entry

LOG = [["2023-03-01", "30 kg"], ["2024-03-01", "18 kg"], ["2026-03-01", "20 kg"]]


def entry(name, family="convert"):
    """Return an entry that is nothing but its refrigerant."""
    from retrofit.refrigerants import find

    return Entry(find(name), family, "ok", None, ())


def test_the_log_wins(case_with):
    """Two top-ups after the first over three years: by hand (18 + 20) kg / 260 kg / (1096 / 365.25) = 4.871 %."""
    case = case_with(
        plant={"charge": "260 kg"},
        emissions={"leak_log": LOG, "leak_rate": "10 %"},
        law={"annual_leak_rate": "15 %", "equipment": "supermarket"},
    )

    found = leak_rate_today(case)

    assert found.basis == "log"
    assert found.spread.base == pytest.approx(38.0 / 260.0 / (1096.0 / 365.25), rel=1e-12)
    assert found.spread.base == pytest.approx(0.04871, abs=5e-6)
    assert found.spread.low == found.spread.high == found.spread.base
    assert "38 kg / 260 kg" in found.source


@pytest.mark.parametrize(("last", "short"), [("2024-03-01", ""), ("2024-02-01", "the log covers 337 days")])
def test_a_short_log_says_so(last, short, case_with):
    """A leap year's 366 days are long enough; to 1 February it is 366 - 29 = 337 days."""
    case = case_with(plant={"charge": "260 kg"}, emissions={"leak_log": [["2023-03-01", "30 kg"], [last, "18 kg"]]})

    found = leak_rate_today(case)

    assert found.basis == "log"
    assert found.missing.startswith(short)
    assert bool(found.missing) is bool(short)


def test_what_goes_before_what(case_with):
    """Emissions before law, law before the range by type, and a log without a charge says what it lacks."""
    law = {"annual_leak_rate": "15 %", "equipment": "supermarket"}
    by_emissions = leak_rate_today(case_with(emissions={"leak_rate": "10 %", "leak_log": LOG}, law=law))
    by_law = leak_rate_today(case_with(law=law))
    by_type = leak_rate_today(case_with(law={"equipment": "supermarket"}))
    unknown = leak_rate_today(case_with())

    assert (by_emissions.key, by_emissions.spread.base) == ("emissions.leak_rate", 0.10)
    assert "charge" in by_emissions.missing
    assert (by_law.key, by_law.spread.base) == ("law.annual_leak_rate", 0.15)
    assert by_type.spread == (0.10, 0.17, 0.35)
    assert unknown.spread is None
    assert "leak_log" in unknown.missing


def test_an_option_has_its_own(case_with):
    """An option's own rate goes before that of every candidate; today's holds where neither is given."""
    case = case_with(
        candidates=["R448A", "R449A"],
        law={"annual_leak_rate": "15 %"},
        emissions={"leak_rate_after": "8 %"},
        options={"R448A": {"leak_rate": "5 %"}},
    )
    today = entry("R404A", "keep")

    assert leak_rate(case, entry("R448A"), today).spread.base == 0.05
    assert leak_rate(case, entry("R449A"), today).spread.base == 0.08
    assert leak_rate(case, today, today).spread.base == 0.15
    assert "as today" in leak_rate(case_with(law={"annual_leak_rate": "15 %"}), entry("R448A"), today).source


# IPCC 2006 volume 3, table 7.9 (range) and UK screening factors (base), in %, typed in again from the reprints.
PUBLISHED = {
    "supermarket": (10, 17, 35),
    "condensing unit": (10, 10, 35),
    "stand-alone cabinet": (1, 1.5, 15),
    "cold store": (7, 8, 25),
    "chiller": (2, 3, 15),
    "air conditioning": (1, 6, 10),
    "residential air conditioning": (1, 3, 10),
    "heat pump": (1, 6, 10),
    "transport": (15, 15, 50),
    "domestic refrigerator": (0.1, 0.3, 0.5),
}


@pytest.mark.parametrize(("kind", "percent"), PUBLISHED.items())
def test_published_ranges(kind, percent):
    """The default of a kind is the published range with the screening factor as base."""
    assert default_rates()[kind][0] == pytest.approx([value / 100.0 for value in percent])


def test_every_default_has_a_place():
    """Every kind of a default is one that case files name; the range rises; plain refrigeration has none."""
    found = default_rates()

    assert set(found) == set(EQUIPMENT) - {"refrigeration"}
    assert all(0.0 < s.low <= s.base <= s.high < 1.0 for s, _ in found.values())
