"""Every refrigerant of the catalogue in place of every other: the step in safety class, and the cautions."""

import sys

import pytest

from retrofit.checks import assess
from retrofit.errors import NoModelError
from retrofit.refrigerants import designations, find
from retrofit.study import Verdict, compare

FLAMMABILITY = ("1", "2L", "2", "3")  # ASHRAE 34, from no flame propagation to higher flammability
MOST_CANDIDATES = 40


def is_less_mild(old, new):
    """Return whether a class has a higher toxicity letter or flammability number than another."""
    return new[0] > old[0] or FLAMMABILITY.index(new[1:]) > FLAMMABILITY.index(old[1:])


@pytest.fixture
def without_models(monkeypatch):
    """Leave every refrigerant without a model, so that all pairs of the catalogue are quick to go through."""

    def refuse(name, on_build=None):
        raise NoModelError(f"{name} is left without a model here")

    monkeypatch.setattr(sys.modules["retrofit.study.compare"], "fluid", refuse)


def assessed(case_of, old):
    """Return the assessed entries of every other refrigerant of the catalogue in place of one."""
    others = [name for name in designations() if name != old]
    for start in range(0, len(others), MOST_CANDIDATES):
        yield from assess(compare(case_of(old, others[start : start + MOST_CANDIDATES]))).candidates


@pytest.mark.usefixtures("without_models")
def test_a_less_mild_class_is_a_stop_for_every_pair_of_the_catalogue(case_of):
    """From A1 to A2L, A2, A3 or B, and every other step up, is a stop; no step down or sideways is."""
    pairs = stops = 0
    for old in designations():
        before = find(old).safety_class.text
        for entry in assessed(case_of, old):
            after = entry.refrigerant.safety_class.text
            levels = [item.level for item in entry.findings if item.code == "safety-class"]
            if not before or not after:
                assert levels == ["unknown"], (old, entry.refrigerant.designation)
                continue
            is_stop = is_less_mild(before, after)
            assert levels == ["stop"] * is_stop, (old, entry.refrigerant.designation)
            is_beyond = "pressure-class" in [item.code for item in entry.findings]
            assert (entry.family == "replace") == (is_stop or is_beyond)
            assert not is_stop or entry.verdict == Verdict.NOT_SUITABLE
            pairs, stops = pairs + 1, stops + is_stop
    assert pairs > 13_000
    assert stops > 3_000


@pytest.mark.usefixtures("without_models")
def test_every_refrigerant_carries_cautions_as_a_candidate(case_of):
    """Computed or not, each has the caution of its class and one that names the standards."""
    for entry in assessed(case_of, "R404A"):
        codes = [caution.code for caution in entry.cautions]
        flammable_or_toxic = entry.refrigerant.safety_class.text not in ("A1", "")

        assert any(code.startswith("class-") for code in codes)
        assert all(caution.level in ("danger", "warning", "caution", "unknown") for caution in entry.cautions)
        assert any("ASHRAE" in caution.text and "licensed practice" in caution.text for caution in entry.cautions)
        assert not flammable_or_toxic or any(caution.level in ("danger", "warning") for caution in entry.cautions)


@pytest.mark.usefixtures("without_models")
def test_every_finding_names_a_source(case_of):
    """Also where the catalogue knows nothing of the matter."""
    found = [(entry, item) for old in ("R404A", "R1123") for entry in assessed(case_of, old) for item in entry.findings]

    assert [(entry.refrigerant.designation, item.code) for entry, item in found if not item.source.strip()] == []
    assert {item.code for _, item in found} >= {"safety-class", "ozone", "oil", "not-computed"}
