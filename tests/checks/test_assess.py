"""Verdicts: what goes before what, and that missing data is never good."""

from dataclasses import replace
from itertools import combinations

import pytest

from retrofit.checks import LEVELS, assess, verdict
from retrofit.study import Finding, Level, Verdict, compare

PRECEDENCE = [
    (Level.STOP, False, "not suitable"),
    (Level.UNKNOWN, True, "open"),
    (Level.UNKNOWN, False, "suitable with modifications"),
    (Level.WORK, False, "suitable with modifications"),
    (Level.NOTE, False, "suitable"),
]


def found(level, decisive=False):
    """Return a finding of a level."""
    return Finding("code", level, "Title", "fact.", "", "source", decisive=decisive)


def test_no_finding_is_suitable():
    """Nothing found on complete data is suitable."""
    assert verdict([]) == Verdict.SUITABLE == "suitable"


@pytest.mark.parametrize(("level", "decisive", "word"), PRECEDENCE)
def test_a_level_alone_gives_its_verdict(level, decisive, word):
    """Each level by itself, once or twice."""
    one = found(level, decisive)

    assert verdict([one]) == verdict([one, one]) == word


@pytest.mark.parametrize("pair", list(combinations(PRECEDENCE, 2)))
@pytest.mark.parametrize("turned", [False, True])
def test_the_worse_level_decides_in_either_order(pair, turned):
    """A stop goes before a decisive fact that is missing, that before a modification, that before a note."""
    (worse, is_decisive, word), (milder, is_milder_decisive, _) = pair
    findings = [found(worse, is_decisive), found(milder, is_milder_decisive)]

    assert verdict(findings[::-1] if turned else findings) == word


def test_levels_are_in_the_order_of_the_verdicts():
    """The list of levels is the order of the verdicts, and only two of these are in favour."""
    assert tuple(dict.fromkeys(level for level, _, _ in PRECEDENCE)) == LEVELS
    assert [word for word in Verdict if word.is_positive] == ["suitable with modifications", "suitable"]


def test_assessing_changes_no_number_and_sorts_the_worst_first(case_of):
    """Only findings, hardware and verdict are added, and twice is the same as once."""
    before = compare(case_of("R404A", ["R448A", "R290", "R744"]))
    after = assess(before)

    assert [
        replace(entry, findings=(), hardware=(), room=None, law=None, verdict=Verdict.NOT_JUDGED)
        for entry in after.entries
    ] == list(before.entries)
    for entry in after.entries:
        ranks = [LEVELS.index(finding.level) for finding in entry.findings]

        assert ranks == sorted(ranks)
    again = assess(after)
    assert [entry.findings for entry in again.entries] == [entry.findings for entry in after.entries]
    assert [entry.hardware for entry in again.entries] == [entry.hardware for entry in after.entries]


def test_a_refrigerant_that_is_not_computed_has_its_reason_and_is_never_in_favour(case_of):
    """The reason is a decisive finding of its own, and the verdict is not a good one."""
    entry = assess(compare(case_of("R404A", ["R744"]))).candidates[0]
    reason = next(finding for finding in entry.findings if finding.code == "not-computed")

    assert entry.reason in reason.fact
    assert reason.decisive
    assert not entry.verdict.is_positive
    assert not entry.can_be_chosen


def test_a_stop_holds_even_where_nothing_could_be_computed(case_of):
    """Ethane in a halocarbon plant, above its critical temperature, is still a stop for its class."""
    duty = {"evaporating": "-8 degC", "condensing": "69 degC"}
    entry = assess(compare(case_of("R404A", ["R170"], duty=duty))).candidates[0]

    assert entry.status == "not computed"
    assert entry.verdict == Verdict.NOT_SUITABLE
