"""Verdicts: what goes before what, and that missing data is never good."""

from dataclasses import replace
from itertools import combinations

import pytest

from retrofit.checks import LEVELS, VERDICTS, assess, verdict
from retrofit.study import Finding, compare

PRECEDENCE = [
    ("stop", "does not suit"),
    ("unknown", "cannot be said"),
    ("work", "suits with work"),
    ("note", "suits"),
]


def found(level):
    """Return a finding of a level."""
    return Finding("code", level, "Title", "fact.", "", "source")


def test_no_finding_suits():
    """Nothing found on complete data suits."""
    assert verdict([]) == "suits"


@pytest.mark.parametrize(("level", "word"), PRECEDENCE)
def test_a_level_alone_gives_its_verdict(level, word):
    """Each level by itself, once or twice."""
    assert verdict([found(level)]) == verdict([found(level), found(level)]) == word


@pytest.mark.parametrize("pair", list(combinations(PRECEDENCE, 2)))
@pytest.mark.parametrize("turned", [False, True])
def test_the_worse_level_decides_in_either_order(pair, turned):
    """A stop goes before a missing datum, that before work, that before a note."""
    (worse, word), (milder, _) = pair
    findings = [found(worse), found(milder)]

    assert verdict(findings[::-1] if turned else findings) == word


def test_levels_and_verdicts_are_one_order():
    """The list of levels is the order of the verdicts."""
    assert tuple(level for level, _ in PRECEDENCE) == LEVELS
    assert dict(PRECEDENCE[:3]) == dict(VERDICTS)


def test_assessing_changes_no_number_and_sorts_the_worst_first(case_of):
    """Only findings, hardware and verdict are added, and twice is the same as once."""
    before = compare(case_of("R404A", ["R448A", "R290", "R744"]))
    after = assess(before)

    assert [
        replace(entry, findings=(), hardware=(), room=None, law=None, verdict="") for entry in after.entries
    ] == list(before.entries)
    for entry in after.entries:
        ranks = [LEVELS.index(finding.level) for finding in entry.findings]

        assert ranks == sorted(ranks)
    again = assess(after)
    assert [entry.findings for entry in again.entries] == [entry.findings for entry in after.entries]
    assert [entry.hardware for entry in again.entries] == [entry.hardware for entry in after.entries]


def test_a_refrigerant_that_is_not_computed_cannot_be_judged(case_of):
    """The reason is a finding of its own, and the verdict is not a good one."""
    entry = assess(compare(case_of("R404A", ["R744"]))).candidates[0]

    assert entry.findings[0].code == "not-computed"
    assert entry.reason in entry.findings[0].fact
    assert entry.verdict == "cannot be said"


def test_a_stop_holds_even_where_nothing_could_be_computed(case_of):
    """Ethane in a halocarbon plant, above its critical temperature, is still a stop for its class."""
    duty = {"evaporating": "-8 degC", "condensing": "69 degC"}
    entry = assess(compare(case_of("R404A", ["R170"], duty=duty))).candidates[0]

    assert entry.status == "not computed"
    assert entry.verdict == "does not suit"


@pytest.mark.parametrize("missing", ["oil", "high_side_limit", "evaporator"])
def test_a_datum_left_out_of_the_case_is_never_good(case_of, missing):
    """With all three given the candidate suits with work; without any one of them it cannot be said."""
    complete = {"oil": "polyol ester", "high_side_limit": "28 bar g", "evaporator": "direct expansion"}
    short = {key: value for key, value in complete.items() if key != missing}
    verdicts = [
        assess(compare(case_of("R404A", ["R452A"], plant=plant))).candidates[0].verdict for plant in (complete, short)
    ]

    assert verdicts == ["suits with work", "cannot be said"]
