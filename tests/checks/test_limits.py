"""What was not checked depends on what the case gives, and what is never checked is always told."""

from dataclasses import replace

import pytest

from retrofit.case import read_case
from retrofit.checks import assess, not_checked
from retrofit.study import Component, compare
from retrofit.study.life import with_life

CASE = """
[plant]
refrigerant = "R404A"
{plant}
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
{tables}
[compare]
candidates = ["R448A", "R452A"]
"""
EXCHANGERS = """
[evaporator]
medium = "air"
inlet = "2 degC"
outlet = "-3 degC"
arrangement = "crossflow"
[condenser]
medium = "air"
inlet = "32 degC"
outlet = "38 degC"
arrangement = "crossflow"
"""


@pytest.fixture
def limits_of(tmp_path):
    """Return a function that gives an assessed comparison of a case, and what it did not check as one text."""

    def find(plant="", tables=""):
        path = tmp_path / "plant.toml"
        path.write_text(CASE.format(plant=plant, tables=tables), encoding="utf-8")
        comparison = assess(compare(read_case(path)))
        return comparison, "\n".join(not_checked(comparison))

    return find


def test_a_bare_case_leaves_exchangers_standstill_and_hottest_day_open(limits_of):
    """Each is named for the reader to have looked at."""
    _, text = limits_of()

    for words in ("what the heat exchangers do", "standstill pressure", "the hottest day", "pull-down"):
        assert words in text


def test_what_the_case_describes_is_no_longer_named(limits_of):
    """With exchangers and the highest ambient the limit is what they pass on, not that they are held."""
    _, text = limits_of('highest_ambient = "32 degC"', EXCHANGERS)

    for words in ("what the heat exchangers do", "standstill pressure", "the hottest day"):
        assert words not in text
    assert "the exchangers count as good as today" in text


def test_a_candidate_without_the_basis_is_named(limits_of):
    """The sentence on held temperatures stays for it alone."""
    comparison, _ = limits_of("", EXCHANGERS)
    first, second = comparison.candidates
    text = "\n".join(not_checked(replace(comparison, candidates=(replace(first, plant=None), second))))

    assert "held, not found from air or water: R448A" in text


def test_components_without_data_are_named_and_others_are_not(limits_of):
    """A component is named if its verdict is unknown with any candidate; without any verdict all of them are."""
    comparison, _ = limits_of()

    def with_verdicts(*verdicts):
        entries = [
            replace(entry, hardware=(Component("a", "Relief valve", verdict, (), "", "", "", ""),) if verdict else ())
            for entry, verdict in zip(comparison.candidates, verdicts, strict=True)
        ]
        return "\n".join(not_checked(replace(comparison, candidates=tuple(entries))))

    assert "for one candidate at least: relief valve" in with_verdicts("keep", "unknown")
    assert "relief valve" not in with_verdicts("keep", "adjust")
    assert "oil return" in with_verdicts("", "")


def test_what_is_never_checked_is_told_with_every_case(limits_of):
    """Ventilation, permits, the year and the condition of the plant."""
    law, room = '[law]\njurisdiction = "EU"\n', '[room]\nvolume = "6000 m3"\n'
    for _, text in (limits_of(), limits_of('highest_ambient = "32 degC"', EXCHANGERS + law + room)):
        for words in ("ventilation, detection", "permits", "energy, emissions and cost", "condition of the plant"):
            assert words in text


def test_law_and_room_are_named_until_the_case_says_where_the_plant_is(limits_of):
    """Without them charge against room and law are open; with them what the tables do not hold is."""
    law, room = '[law]\njurisdiction = "EU"\n', '[room]\nvolume = "6000 m3"\n'
    _, without = limits_of()
    _, given = limits_of("", law + room)

    assert "room volume" in without
    assert "law, listings" in without
    assert "room volume" not in given
    assert "law that the tables used do not hold" in given


def test_a_year_that_was_computed_leaves_what_it_does_not_hold(limits_of):
    """Until the remaining life is computed a year is not looked at; then what a year leaves out is still named."""
    comparison, without = limits_of("", EXCHANGERS + '[year]\nbins = [["20 degC", 8760]]\n')
    computed = "\n".join(not_checked(with_life(comparison, draws=0)))

    assert "a year of operation" in without
    assert "a year of operation" not in computed
    assert "losses of starting" in computed
