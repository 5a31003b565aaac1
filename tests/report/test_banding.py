"""A refrigerant with a weak model shows its wider band in the report, the terminal, the charts and the JSON."""

import re
from dataclasses import replace

import pytest

from retrofit import figures
from retrofit.checks import answer, assess
from retrofit.report import render_html
from retrofit.report.banding import band_text, wider_texts
from retrofit.report.machine import comparison_json
from retrofit.report.terminal import comparison_text
from retrofit.study import compare
from retrofit.units import IP, SI

# R438A is graded weak (tests/properties/test_grade.py), R427A and R407C close.
WIDER = "capacity ±15%, COP ±8%, discharge temperature ±10 K, pressures ±13%"


@pytest.fixture(scope="module")
def weak(case_of):
    """Return an assessed comparison of R22 with a weak blend and two close ones."""
    return assess(compare(case_of("R22", ["R438A", "R427A", "R407C"])))


@pytest.fixture(scope="module")
def page(weak, read_page, made_at):
    """Return its report as a reader finds it."""
    return read_page(render_html(weak, "si", made_at=made_at))


def flat(text):
    """Return a text on one line, with plain blanks."""
    return " ".join(text.replace("\N{NO-BREAK SPACE}", " ").split())


def groups(comparison, about):
    """Return the groups of a matter of the answer by their words."""
    return dict(next(matter.groups for matter in answer(comparison, SI).matters if matter.about.startswith(about)))


def turned(comparison, **ratios):
    """Return the comparison with ratios of its first candidate replaced."""
    first = comparison.candidates[0]
    return replace(
        comparison, candidates=(replace(first, relative={**first.relative, **ratios}), *comparison.candidates[1:])
    )


def test_report_and_terminal_name_the_wider_band_and_the_reason(weak, page):
    """Both say the base band, for whom it is wider, by how much and why."""
    text, shown = flat(comparison_text(weak, SI, 100)), flat(page.text)

    assert f"Wider for R-438A: {WIDER}: model graded weak" in text
    assert f"Wider for R-438A: {WIDER.replace('%', ' %')}: model graded weak" in shown
    for found in (text, shown):
        assert "3.5 K at the boiling point" in found
        assert re.search(r"capacity ±7 ?%, COP ±6 ?%, discharge temperature ±8 K, pressures ±2 ?%", found)


def test_the_wider_band_speaks_the_readers_units(weak):
    """Ten kelvin are eighteen degrees Fahrenheit, and 3.5 are 6.3."""
    text = flat(band_text(weak, IP))

    assert "±18 °F" in text
    assert "6.3 °F at the boiling point" in text


def test_a_case_of_close_models_has_no_wider_band(weak):
    """Nothing is said where there is nothing to say."""
    assert wider_texts(replace(weak, candidates=weak.candidates[1:]), SI) == ()


def test_the_json_has_the_bands_of_each_with_the_reason(weak):
    """Four bands, in words of the contract, for every refrigerant."""
    found = comparison_json(weak)
    today, first = found["existing"]["bands"], found["candidates"][0]["bands"]

    assert [today[name] for name in ("capacity", "cop", "T_discharge_K", "pressure")] == [0.07, 0.06, 8.0, 0.02]
    assert [first[name] for name in ("capacity", "cop", "T_discharge_K", "pressure")] == [0.15, 0.08, 10.0, 0.13]
    assert first["reason"].startswith("model graded weak")
    assert first["boiling_point_offset_K"] == 3.5


@pytest.mark.parametrize(("cop", "words"), [(1.079, "no"), (1.081, "higher"), (0.921, "no"), (0.919, "lower")])
def test_the_answer_holds_each_candidate_against_its_own_band(weak, cop, words):
    """8 % of COP for the weak one, named with it; 6 % for the others."""
    found = {
        name: words for words, names in groups(turned(weak, cop=cop), "COP at the same duty").items() for name in names
    }
    name = next(name for name in found if name.startswith("R438A"))

    assert name.endswith(", its band ±8%)")
    assert found[name].split(" ")[0] == words
    assert not any("its band" in other for other in found if other != name)


@pytest.mark.parametrize(("change", "is_near"), [(0.149, True), (0.151, False)])
def test_table_and_terminal_mark_a_difference_inside_its_own_band(weak, change, is_near, read_page, made_at):
    """15 % of capacity for the weak one."""
    comparison = turned(weak, capacity=1.0 - change)
    rows = read_page(render_html(comparison, "si", made_at=made_at)).tables["t-comparison"]
    row = next(row for row in rows if row[0] == "Cooling against today")
    text = comparison_text(comparison, SI, 100)
    table = text[text.index("Same compressor, ") :]
    line = next(line for line in table.splitlines() if line.startswith("R-438A"))

    assert row[3].startswith("≈") == is_near
    assert bool(re.search(r"≈ −14\.9 %", line)) == is_near


def test_the_charts_draw_and_name_the_wider_band(weak):
    """A zone in its row and a sentence in the caption; without a weak model neither."""
    close = replace(weak, candidates=weak.candidates[1:])
    (changes,), (plain,) = figures.change_charts(weak), figures.change_charts(close)
    discharge = figures.discharge_chart(weak, SI)

    assert "R-438A: cooling ±15 % and COP ±8 %" in changes.caption
    assert "Wider in its row" not in plain.caption
    assert changes.svg.count("FillBetween") == 4
    assert "FillBetween" not in plain.svg
    assert "±8 K, ±10 K of R-438A" in flat(discharge.caption)
    assert "±8 K." in flat(figures.discharge_chart(close, SI).caption)


def test_the_answer_says_which_candidates_are_alike_among_themselves(weak):
    """Groups of those closer than their band, in cooling and in COP; with one candidate no such matter."""
    found = groups(weak, "Among the candidates")
    cooling = {e.refrigerant.designation: e.compressor.cooling_W for e in weak.candidates}
    alone = replace(weak, candidates=weak.candidates[:1])

    (words, names), (cop_words, _) = found.items()
    assert words == "no meaningful difference in cooling, same compressor"
    assert "in COP, same duty" in cop_words
    together = [set(name.split(" / ")) for name in names]
    for a, b, band in (("R438A", "R427A", 0.15), ("R438A", "R407C", 0.15), ("R427A", "R407C", 0.07)):
        difference = abs(cooling[a] - cooling[b]) / (0.5 * (cooling[a] + cooling[b]))
        assert any({a, b} <= group for group in together) == (difference <= band)
    assert not any(matter.about == "Among the candidates" for matter in answer(alone, SI).matters)


def test_candidates_that_all_differ_are_said_to(weak):
    """Where no two are alike the matter says so of all of them."""
    apart = [
        replace(entry, compressor=replace(entry.compressor, cooling_W=watts))
        for entry, watts in zip(weak.candidates, (50e3, 100e3, 200e3), strict=True)
    ]

    found = groups(replace(weak, candidates=tuple(apart)), "Among the candidates")
    assert found["every two differ in cooling, same compressor"] == ("R438A", "R427A", "R407C")
