"""What page one says: the tool recommends nothing, conditions come from the checks, and a stop is never passed over."""

from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.case import Report
from retrofit.checks import advice, assess
from retrofit.checks.advice import brief
from retrofit.study import compare
from retrofit.units import SI


@pytest.fixture(scope="module")
def advised(case_with):
    """Return a function that gives the advice on an ordinary plant with some [report]."""
    result = assess(
        compare(
            case_with(candidates=("R448A", "R454C", "R452A"), plant={"oil": "polyol ester", "evaporator": "flooded"})
        )
    )

    def make(**keys):
        report = Report.model_validate(keys) if keys else None
        changed = replace(result, case=replace(result.case, report=report))
        return advice(changed, SI), changed

    return make


def test_without_a_choice_of_the_case_none_is_made(advised):
    """No recommendation, no fallback; every option is either weighed or stopped, never both, never neither."""
    found, result = advised()
    weighed = {item.entry.refrigerant.designation for item in found.weighed}
    stopped = {item.entry.refrigerant.designation for item in found.stopped}

    assert (found.recommended, found.fallback) == (None, None)
    assert weighed | stopped == {entry.refrigerant.designation for entry in result.entries}
    assert "R404A" in weighed  # keeping is an option like any other
    assert not weighed & stopped
    assert "R454C" in stopped  # A2L in a plant built for A1: a new plant by default (ASHRAE 34 classes)


@pytest.mark.parametrize("name", ["R448A", "R454C", "R404A", "R452A"])
def test_a_choice_carries_its_stop_and_its_conditions(name, advised):
    """The first stop in the order of the findings, and each unknown finding, are there; own conditions come last."""
    found, result = advised(recommended=name, conditions=["Mine."])
    entry = next(entry for entry in result.entries if entry.refrigerant.designation == name)
    stops = [finding for finding in entry.findings if finding.level == "stop"]
    told = " ".join(f"{item.about} {item.detail}" for item in found.recommended.conditions).casefold()

    assert (found.recommended.stopped is not None) == bool(stops)
    if stops:
        assert (found.recommended.stopped.first, found.recommended.stopped.more) == (stops[0], len(stops) - 1)
    for finding in entry.findings:
        if finding.level == "unknown":
            assert finding.title.casefold() in told
    assert found.recommended.conditions[-1].is_own
    assert [item.about for item in found.recommended.conditions if item.is_own] == ["Mine."]
    assert found.weighed == ()


def test_what_speaks_for_a_candidate_is_beyond_the_band(advised):
    """COP is praised only beyond the band of the model, and GWP only if it is lower."""
    found, result = advised()
    old = result.existing.refrigerant.gwp_100yr_ar4.number
    seen = 0
    for item in found.weighed:
        text = "; ".join(item.speaks_for)
        if item.entry is result.existing:
            continue
        assert ("COP" in text) <= (item.entry.relative["cop"] > 1.0)
        assert ("GWP" in text) == (item.entry.refrigerant.gwp_100yr_ar4.number < old)
        seen += 1
    assert seen + len(found.stopped) >= 3


def test_nothing_is_called_safe(advised):
    """No text of page one says so."""
    found, _ = advised(recommended="R448A", fallback="R452A")
    text = repr([found.question, found.risks, found.asked, found.recommended.conditions]).casefold()

    assert " safe" not in text


@given(st.text(max_size=60))
def test_a_brief_fact_is_the_beginning_of_it(fact):
    """Whatever the fact, what is shown of it is how it begins."""
    assert fact.startswith(brief(fact))
