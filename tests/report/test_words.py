"""Words that no text of the project may use: nothing is ever called safe."""

import re

import pytest
from click.testing import CliRunner

from retrofit.checks import answer, assess, not_checked
from retrofit.cli import main
from retrofit.cli.group import COMMANDS
from retrofit.refrigerants import cautions_for, designations, find
from retrofit.report.catalogue import catalogue_text, refrigerant_text
from retrofit.report.saturation import saturation_text
from retrofit.report.terminal import comparison_text
from retrofit.study import compare
from retrofit.study.saturation import saturation_table
from retrofit.units import IP, SI

SAFE = re.compile(r"\b(?:un)?safe(?:ly|r|st)?\b|\bfail-?safe\b", re.IGNORECASE)


def test_the_pattern_finds_the_word_but_not_safety():
    """The check itself can fail."""
    assert [bool(SAFE.search(text)) for text in ("is safe.", "SAFER", "safely", "safety class")] == [True] * 3 + [False]


@pytest.fixture(scope="module")
def comparisons(case_of):
    """Return comparisons that have every refrigerant of the catalogue as a candidate, in two kinds of plant."""
    others = [name for name in designations() if name not in ("R404A", "R22")]
    full = {"oil": "polyol ester", "high_side_limit": "28 bar g", "evaporator": "flooded"}
    return [
        assess(compare(case_of(old, others[start : start + 40], plant=plant)))
        for old, plant in (("R404A", {}), ("R22", full))
        for start in range(0, len(others), 40)
    ]


@pytest.mark.parametrize("units", [SI, IP])
def test_no_comparison_calls_anything_safe(comparisons, units):
    """Terminal text, answer, findings and cautions of every candidate of the catalogue."""
    for comparison in comparisons:
        found = answer(comparison, units)
        texts = [comparison_text(comparison, units, 100), found.question, found.headline, *found.sentences]
        texts += not_checked(comparison)
        texts += [
            f"{finding.title} {finding.text} {finding.source}"
            for entry in comparison.entries
            for finding in entry.findings
        ]
        for text in texts:
            assert not SAFE.search(text), text


def test_no_text_of_the_catalogue_calls_anything_safe():
    """Cautions, the list, and each refrigerant with its notes and sources."""
    items = [find(name) for name in designations()]
    texts = [catalogue_text(items, str), *(refrigerant_text(item, 100, str) for item in items)]
    texts += [f"{caution.title} {caution.text}" for item in items for caution in cautions_for(item)]
    texts.append(saturation_text(saturation_table("R717", [273.15]), SI, 100, str))

    for text in texts:
        assert not SAFE.search(text), SAFE.search(text)


@pytest.mark.parametrize("command", ["", *COMMANDS])
def test_no_help_calls_anything_safe(command):
    """The help of the whole and of each command; the whole defers to standards, code and licensed practice."""
    text = CliRunner().invoke(main, [*([command] if command else []), "--help"]).output

    assert text.startswith("Usage: ")
    assert not SAFE.search(text)
    assert command or "licensed practice" in " ".join(text.split())
