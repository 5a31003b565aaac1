"""Words of the remaining life: what counts as a difference, what the meter says, what is unknown."""

import re
from dataclasses import replace
from pathlib import Path

import pytest

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.checks.outlook import costs_words, meter_words, outlook, rounded_text, share
from retrofit.checks.prospects import difference, groups, prospects, ranked
from retrofit.study import compare
from retrofit.study.life import with_life
from retrofit.units import SI

CASE = Path(__file__).parents[2] / "cases" / "harbour-market.toml"


@pytest.fixture(scope="module")
def result():
    """Return a shipped case with its remaining life, without draws."""
    return with_life(assess(compare(read_case(CASE))), draws=0)


def scaled(option, factor):
    """Return an option whose year takes a multiple of its electricity."""
    return replace(option, year=replace(option.year, energy_J=option.year.energy_J * factor))


def test_plant_as_it_is_kept_and_changed_are_told_apart(result):
    """As it is first, then kept with its repairs, then the candidates; a new plant is named one."""
    found = prospects(result)

    assert [option.name for option in found[:3]] == ["R404A", "R404A kept", "R448A"]
    assert {option.deed for option in found} == {"as it is", "kept, with its repairs", "converted", "new plant"}


@pytest.mark.parametrize(
    ("factor", "is_alike"), [(1.0, True), (0.95, True), (1.05, True), (0.93, False), (1.08, False)]
)
def test_electricity_inside_the_band_is_no_difference(factor, is_alike, result):
    """Between two refrigerants graded close the COP band is 6 % of the mean of both: 0.95 is inside, 0.93 is not."""
    as_is, *others = prospects(result)
    option = next(option for option in others if option.name == "R448A")
    even = scaled(option, as_is.year.energy_J / option.year.energy_J)
    found = difference(as_is, scaled(even, factor), "energy")

    assert found.ratio == pytest.approx(factor - 1.0, abs=1e-9)
    assert found.is_alike == is_alike


def test_groups_are_those_within_reach_of_each_other(result):
    """100, 105 and 110: the first two and the last two are alike, the outer two are not, so two groups."""
    options = [option for option in prospects(result) if option.name in ("R448A", "R449A", "R407A")]
    energy = options[0].year.energy_J
    made = [
        scaled(option, factor * energy / option.year.energy_J)
        for option, factor in zip(options, (1.0, 1.05, 1.10), strict=True)
    ]

    assert [[option.name for option in group] for group in groups(made, "energy")] == [
        ["R448A", "R449A"],
        ["R449A", "R407A"],
    ]


@pytest.mark.parametrize(("ratio", "is_far"), [(1.0, False), (0.86, False), (1.14, False), (0.8, True), (1.2, True)])
def test_the_meter_is_a_check_that_scales_nothing(ratio, is_far, result):
    """Beyond 15 % the sentence asks why; the ratio is computed over metered, and the year stays what it was."""
    energy = result.life.years["R404A"].energy_J
    year = result.case.year.model_copy(update={"metered_J": energy / ratio})
    text = meter_words(replace(result, case=replace(result.case, year=year)), SI)

    assert f"ratio {ratio:.2f}" in text
    assert ("more than 15" in text) == is_far
    assert "othing is scaled" in text


def test_without_draws_nothing_is_said_of_certainty(result):
    """No probabilities and no strongest inputs; the ranking is there, and page one has its sentence."""
    found = outlook(result, SI)

    assert found.certainty == ()
    assert found.swing == ""
    assert found.ranking
    assert "first cost" in costs_words(result, SI)


def test_a_gate_is_named_and_not_ranked(tmp_path):
    """As a refrigerant for this plant the flammable one is in no order, whatever its numbers; texts name its gate."""
    text = re.sub(r"\[options\.R454C\].*?(?=\n\[)", "", CASE.read_text("utf-8"), flags=re.DOTALL)
    (tmp_path / "without.toml").write_text(text, "utf-8")
    result = with_life(assess(compare(read_case(tmp_path / "without.toml"))), draws=0)
    gate = "More hazardous safety class than the plant was designed for"

    assert "R454C" not in ranked(result).order.names
    assert f"Stopped: R454C ({gate})" in outlook(result, SI).stopped
    assert any(f"R454C ({gate}" in text for text in outlook(result, SI).ranking if text.startswith("Not ranked"))


def test_a_new_plant_is_ranked_with_the_others(result):
    """Described as a new plant the flammable one is stopped by nothing of this machine, and is in the order."""
    assert "R454C" in ranked(result).order.names
    assert outlook(result, SI).stopped == ""
    assert not any(text.startswith("Not ranked") for text in outlook(result, SI).ranking)


@pytest.mark.parametrize(
    ("value", "text"), [(0.0, "0"), (0.456, "0.46"), (12.34, "12.3"), (436.1, "436"), (238522.0, "238\u202f500")]
)
def test_a_computed_number_keeps_four_digits(value, text):
    """By hand: no more digits than a reader can check a sum with."""
    assert rounded_text(value) == text


@pytest.mark.parametrize(
    ("value", "text"), [(None, "unknown"), (0.0, "0"), (0.001, "less than 1"), (0.999, "more than 99")]
)
def test_a_share_is_0_or_100_for_none_and_all_alone(value, text):
    """What is nearly never or nearly always is not said to be so."""
    assert share(value).removesuffix("\N{NO-BREAK SPACE}%") == text
