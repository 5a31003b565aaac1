"""The comparison as text for a terminal: cautions first, conventions named, nothing that a terminal obeys."""

import re
from dataclasses import replace

import pytest

from retrofit.checks import assess
from retrofit.refrigerants import with_hyphens
from retrofit.report.terminal import comparison_text
from retrofit.study import compare
from retrofit.units import IP, SI, told

NAMES = ["R448A", "R454C", "R744", "R1123"]
RULE = "───"


@pytest.fixture(scope="module")
def comparison(case_of):
    """Return an assessed comparison with a replacement, a row not computed and a class not stated."""
    duty = {"evaporating": "-30 degC", "condensing": "40 degC", "line_superheat": "15 K"}
    return assess(compare(case_of("R404A", NAMES, duty=duty)))


def sections(text):
    """Return the tables of numbers of a text: the lines of heading above each rule, and the rows under it."""
    blocks = [block.split("\n") for block in text.split("Hardware: ")[0].split("\n\n") if RULE in block]
    for block in blocks:
        at = next(i for i, line in enumerate(block) if line.startswith(RULE))
        yield "\n".join(block[:at]), block[at + 1 :]


def number(cell):
    """Return a cell as a number."""
    return float(cell.replace("−", "-").replace("\u202f", "").rstrip("% "))


@pytest.mark.parametrize("units", [SI, IP])
@pytest.mark.parametrize("columns", [60, 100, 200])
def test_cautions_stand_above_the_first_table_at_any_width(comparison, units, columns):
    """Every caution of every refrigerant, its title and its text, comes before the first number table."""
    text = comparison_text(comparison, units, columns)
    before = " ".join(text[: text.index(RULE)].split())

    for entry in comparison.entries:
        for caution in entry.cautions:
            assert f"{caution.level.upper()} {caution.title} (" in before
            assert with_hyphens(" ".join(caution.text.split())) in before


@pytest.mark.parametrize(("reading", "match"), [("dew", "mean"), ("mean", "dew")])
def test_the_convention_is_named_with_each_table_and_above_the_answer(case_of, reading, match):
    """Both tables of numbers say what is held equal and how today's temperatures are read, and so does the head."""
    case = case_of("R404A", ["R448A"], match=match, duty={"reading": reading})
    text = comparison_text(assess(compare(case)), SI, 120)
    words = f"matched at equal {match} temperatures; today's temperatures read as {reading}"
    headings = [heading for heading, _ in sections(text)]

    assert [words in heading for heading in headings[:2]] == [True, True]
    assert headings[0].startswith("Same duty")
    assert headings[1].startswith("Same compressor")
    assert text.index(words) < text.index("Cooling with the existing compressor")


@pytest.mark.parametrize("units", [SI, IP])
def test_every_refrigerant_of_the_result_appears(comparison, units):
    """Those computed in all three tables, the others in the last and with their reason."""
    text = comparison_text(comparison, units, 100)
    duty, compressor, refrigerants = ([row.split(" ")[0] for row in rows] for _, rows in sections(text))

    assert duty == compressor == ["R-404A", "R-448A", "R-454C", "R-1123"]
    assert refrigerants == ["R-404A", *(f"R-{name[1:]}" for name in NAMES)]
    assert "R-744: condensing at" in text
    assert "R-404A (today)" in text


def test_numbers_shown_are_the_results(comparison):
    """Pressures, discharge, COP and changes are those of the result, rounded to the digits shown."""
    text = comparison_text(comparison, SI, 100)
    (_, duty), (_, compressor), _ = sections(text)
    computed = [entry for entry in comparison.entries if entry.duty]
    for entry, row, other in zip(computed, duty, compressor, strict=True):
        evap, cond, _, discharge, power, cop, *_ = re.split(r"\s{2,}", row)[1:]
        cooling = re.split(r"\s{2,}", other)[1]

        assert number(evap) == pytest.approx(entry.duty.p_evap_Pa / 1e5, abs=0.0051)
        assert number(cond) == pytest.approx(entry.duty.p_cond_Pa / 1e5, abs=0.0051)
        assert number(discharge) == pytest.approx(entry.duty.T_discharge_K - 273.15, abs=0.051)
        assert number(power) == pytest.approx(entry.duty.power_W / 1e3, abs=0.051)
        assert number(cop) == pytest.approx(entry.duty.cop, abs=0.0051)
        assert number(cooling) == pytest.approx(entry.compressor.cooling_W / 1e3, abs=0.051)
        if entry.family != "keep":
            change = re.split(r"\s{2,}", row)[-1]
            # 14 % of COP without a kind of compressor: every blend here is checked close to published points, and a
            # single substance, checked or not, is solved by its own reference equation.
            assert entry.grade.word == "close" or len(entry.refrigerant.composition) == 1
            assert change.startswith("≈") == (abs(entry.relative["cop"] - 1) <= 0.14)
            assert number(change.lstrip("≈ ")) == pytest.approx(100 * (entry.relative["cop"] - 1), abs=0.051)


def test_inch_pound_units_are_used_throughout_the_tables(comparison):
    """The tables are labelled psia, °F, ton, lb/h and cfm, and no metric label is left in them."""
    text = comparison_text(comparison, IP, 100)
    headings = "\n".join(heading for heading, _ in sections(text))

    for label in ("psia", "°F", "ton", "lb/h", "cfm", "Btu/h"):
        assert label in headings
    for label in ("bar", "°C", "kg/h", "m³/h"):
        assert label not in headings
    assert "±14\N{NO-BREAK SPACE}°F" in text


def test_what_is_not_known_is_said(comparison):
    """A class that is not known reads "not stated", a missing model "none"."""
    _, _, (_, rows) = sections(comparison_text(comparison, SI, 100))
    r1123, r744 = (next(row for row in rows if row.startswith(name)) for name in ("R-1123", "R-744"))

    assert re.split(r"\s{2,}", r1123)[1:3] == ["replace", "not stated"]
    assert "none" in r744
    assert r744.endswith("not suitable")


@pytest.mark.parametrize("columns", [60, 100])
def test_prose_keeps_within_the_columns(comparison, columns):
    """Only tables may be wider than asked for."""
    text = comparison_text(comparison, SI, columns)
    prose = [line for block in text.split("\n\n") if RULE not in block for line in block.split("\n")]

    assert max(len(line) for line in prose) <= columns


@pytest.mark.parametrize(
    "title",
    [
        "Shop\x1b[2J\x1b[31m",  # clears the screen of a terminal that obeys
        "Shop\r\n\x07\x08",
        "Shop\u202egnitlem",  # turns the direction of what follows
        "Shop\x9b2J",
        "Shop\x1b]0;title\x07",
    ],
)
def test_nothing_that_a_terminal_obeys_gets_through(comparison, title):
    """Escape sequences and control characters of a case arrive as visible text."""
    case = replace(comparison.case, title=title, about=title)
    text = comparison_text(replace(comparison, case=case), SI, 100)

    assert [sign for sign in text if not sign.isprintable() and sign not in "\n\N{NO-BREAK SPACE}\u202f"] == []
    assert "Shop\\" in text


def test_headings_are_set_off_as_asked(comparison):
    """The emphasis given marks title and headings, and nothing is emphasised without it."""
    marked = comparison_text(comparison, SI, 100, lambda text: f"<{text}>")

    assert marked.startswith("<A plant>")
    for heading in ("<Cautions>", "<Same duty, ", "<Same compressor, ", "<What the checks found>", "<Limits>"):
        assert heading in marked
    assert "\x1b" not in comparison_text(comparison, SI, 100)


def test_findings_come_worst_first_with_every_refrigerant_they_hold_for(comparison):
    """Levels fall down the list, and each finding of the result is in it."""
    text = comparison_text(comparison, SI, 100)
    part = text[text.index("What the checks found") : text.index("\n\nLimits")]
    levels = re.findall(r"^(stop|unknown|work|note)\b", part, re.MULTILINE)
    flat = " ".join(part.split())

    assert levels == sorted(levels, key=["stop", "unknown", "work", "note"].index)
    for entry in comparison.entries:
        for finding in entry.findings:
            assert " ".join(finding.title.split()) in flat
            if finding.fact:
                fact = " ".join(told(finding.fact, SI).split())
                assert with_hyphens(f"{entry.refrigerant.designation}: {fact}") in flat


def test_small_print_has_assumptions_accuracy_versions_and_what_is_not_checked(case_of, comparison):
    """A reader sees what the numbers rest on."""
    text = " ".join(comparison_text(comparison, SI, 100).split())

    for words in ("Accuracy, 90%: capacity ±12%", "Not checked: ", "Versions: retrofit ", "coolprop "):
        assert words in text
    assert "swept volume not in the case: what today's duty needs" in text


def test_without_todays_refrigerant_there_is_no_table_of_numbers(case_of):
    """The reason, the cautions and the catalogue's values remain."""
    text = comparison_text(assess(compare(case_of("R744", ["R448A"]))), SI, 100)

    assert "Nothing can be compared" in text
    assert [heading.split(":")[0] for heading, _ in sections(text)] == ["Refrigerants"]
    assert "Carbon dioxide: suffocates" in text
