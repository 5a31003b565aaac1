"""The answer in words: groups that follow the bands, amounts that are the result's, and nothing called harmless."""

import re
from dataclasses import replace

import pytest

from retrofit.checks import answer, assess
from retrofit.study import Verdict, compare
from retrofit.study.bands import best_evidence, model_band
from retrofit.units import IP, SI

KELVIN = 273.15
MATTERS = ("Cooling", "Discharge temperature", "Condensing pressure", "COP")


@pytest.fixture(scope="module")
def store(case_of):
    """Return an assessed comparison with candidates in many groups, one replacement and one not computed."""
    duty = {"evaporating": "-30 degC", "condensing": "40 degC", "line_superheat": "15 K"}
    names = ["R448A", "R452A", "R507A", "R454C", "R134a", "R744"]
    return assess(compare(case_of("R404A", names, duty=duty)))


def matter(comparison, about, units=SI):
    """Return the matter of an answer that begins with some words."""
    return next(item for item in answer(comparison, units).matters if item.about.startswith(about))


def amounts(comparison, about, units=SI):
    """Return the words of its group and the amount shown for each refrigerant of a matter."""
    shown = {}
    for words, names in matter(comparison, about, units).groups:
        for name in names:
            designation, amount = re.fullmatch(r"(\S+) \((.*)\)", name).groups()
            shown[designation] = words, amount
    return shown


def solved(comparison):
    """Return the candidates that were computed."""
    return [entry for entry in comparison.candidates if entry.duty]


def percent(text):
    """Return a change shown in per cent, a true minus or a plus before it, as a ratio."""
    return 1.0 + float(text.replace("−", "-").rstrip("% \N{NO-BREAK SPACE}")) / 100.0


@pytest.mark.parametrize("about", MATTERS)
def test_every_candidate_that_is_computed_is_in_exactly_one_group(store, about):
    """No candidate is lost or told twice, and one that is not computed is in none."""
    names = [name.split(" ")[0] for _, group in matter(store, about).groups for name in group]

    assert sorted(names) == sorted(entry.refrigerant.designation for entry in solved(store))


def test_changes_shown_are_the_results(store):
    """Capacity, COP, discharge and pressure in the sentences are the numbers of the result, rounded."""
    capacity, cop = amounts(store, "Cooling"), amounts(store, "COP")
    discharge, pressure = amounts(store, "Discharge"), amounts(store, "Condensing")
    for entry in solved(store):
        name = entry.refrigerant.designation
        by_K, to_C = re.findall(r"[+−]?\d+", discharge[name][1])
        bar = float(re.match(r"[+−]?[\d.]+", pressure[name][1]).group().replace("−", "-"))

        assert percent(capacity[name][1]) == pytest.approx(entry.relative["capacity"], abs=0.005)
        assert percent(cop[name][1]) == pytest.approx(entry.relative["cop"], abs=0.005)
        assert float(by_K.replace("−", "-")) == pytest.approx(entry.T_discharge_difference_K, abs=0.5)
        assert float(to_C) == pytest.approx(entry.duty.T_discharge_K - KELVIN, abs=0.5)
        assert bar == pytest.approx((entry.duty.p_cond_Pa - store.existing.duty.p_cond_Pa) / 1e5, abs=0.05)


def turned(store, **ratios):
    """Return the comparison with ratios, or the discharge difference, of the first candidate replaced."""
    first = store.candidates[0]
    difference = ratios.pop("difference", first.T_discharge_difference_K)
    entry = replace(first, relative={**first.relative, **ratios}, T_discharge_difference_K=difference)
    return replace(store, candidates=(entry, *store.candidates[1:]))


@pytest.mark.parametrize(("change", "words"), [(1.141, "higher"), (1.139, "no"), (0.861, "no"), (0.859, "lower")])
def test_cop_within_the_band_is_no_difference(store, change, words):
    """Without a kind of compressor, within 14 % either way there is no meaningful difference."""
    assert amounts(turned(store, cop=change), "COP")["R448A"][0].split(" ")[0] == words


@pytest.mark.parametrize(("change", "words"), [(1.021, "higher"), (1.019, "no"), (0.981, "no"), (0.979, "lower")])
def test_pressure_within_the_band_is_no_difference(store, change, words):
    """Within 2 % either way there is no meaningful difference."""
    assert amounts(turned(store, p_cond=change), "Condensing")["R448A"][0].split(" ")[0] == words


@pytest.mark.parametrize(("kelvin", "words"), [(8.1, "hotter"), (7.9, "no"), (-7.9, "no"), (-8.1, "cooler")])
def test_discharge_within_the_band_is_no_difference(store, kelvin, words):
    """Within 8 K either way there is no meaningful difference."""
    assert amounts(turned(store, difference=kelvin), "Discharge")["R448A"][0].split(" ")[0] == words


@pytest.mark.parametrize(("share", "words"), [(1.121, "more"), (1.119, "as"), (0.881, "as"), (0.879, "less")])
def test_capacity_within_the_band_is_as_much_as_needed(store, share, words):
    """Without a kind of compressor, within 12 % of the cooling needed a candidate counts as giving it."""
    first = store.candidates[0]
    entry = replace(first, compressor=replace(first.compressor, cooling_W=share * 120e3))
    comparison = replace(store, candidates=(entry, *store.candidates[1:]))

    assert amounts(comparison, "Cooling")["R448A"][0].split(" ")[0] == words


def test_bands_in_the_words_are_the_bands_of_the_file(store):
    """What the sentences call meaningless is the band that the file of bands states."""
    band = model_band(evidence=best_evidence(store.candidates))
    text = " ".join(answer(store, SI).sentences)

    assert f"±{band['capacity'].value:.0%}" in text
    assert f"±{band['T_discharge'].value:.0f}\N{NO-BREAK SPACE}K" in text


def test_the_headline_puts_each_option_under_its_verdict(store):
    """Each option, keeping among them, stands before the words of its own verdict."""
    parts = answer(store, SI).headline.split(". ")[0].split("; ")
    found = {name: part for part in parts for name in re.findall(r"R\d+\w*", part)}
    words = {
        Verdict.NOT_SUITABLE: "not suitable",
        Verdict.OPEN: "open: decisive facts are missing",
        Verdict.MODIFICATIONS: "suitable with modifications",
        Verdict.SUITABLE: "suitable",
    }

    assert set(found) == {entry.refrigerant.designation for entry in store.entries}
    for entry in store.entries:
        assert words[entry.verdict] in found[entry.refrigerant.designation]
    assert "keeping R404A" in found["R404A"].replace("Keeping", "keeping")


def test_a_replacement_and_a_reason_are_told(store):
    """The class of a replacement and the reason of a missing row are sentences of the answer."""
    remarks = " ".join(answer(store, SI).remarks)

    assert "R454C (A2L) has a more hazardous safety class" in remarks
    assert "R744 is not computed, so it is not priced, ranked or recommended: condensing at" in remarks


def test_the_answer_speaks_the_readers_units(store):
    """In inch-pound units temperatures are in °F, differences in Fahrenheit degrees and pressures in psi."""
    text = " ".join(answer(store, IP).sentences)

    assert "°F today" in text
    assert "psia today" in text
    assert "°C" not in text
    assert " K" not in text.replace("\N{NO-BREAK SPACE}", " ")
    rise = store.candidates[0].T_discharge_difference_K * 1.8
    assert f"{rise:+.0f}" in amounts(store, "Discharge", IP)["R448A"][1]


def test_without_todays_refrigerant_the_answer_says_that_nothing_is_compared(case_of):
    """No groups, and the reason."""
    found = answer(assess(compare(case_of("R744", ["R448A"]))), SI)

    assert "Nothing can be compared" in found.headline
    assert [item.about for item in found.matters] == ["Decisive facts missing"]
    assert "critical temperature of R744" in found.remarks[0]


def test_without_any_candidate_computed_the_answer_gives_the_reasons(case_of):
    """No empty matters where no candidate could be solved."""
    found = answer(assess(compare(case_of("R404A", ["R744"]))), SI)

    assert [item.about for item in found.matters] == ["Decisive facts missing"]
    assert "R744 is not suitable" in found.headline
    assert "No conversion passes the checks. What is left: keeping R404A or a new plant" in found.headline
