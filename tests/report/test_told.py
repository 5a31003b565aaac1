"""Quantities inside sentences are told in the reader's units, in every output, and leave no mark behind."""

import io
import json
import re
import zipfile

import pytest

from retrofit.report import render_html, render_site_copy
from retrofit.report.machine import comparison_csv, comparison_json
from retrofit.report.spreadsheet import render_spreadsheet
from retrofit.report.terminal import comparison_text
from retrofit.units import BOTH, IP, SI, UNIT_SYSTEMS, all_told, figure, quantity, told, unit_word

BLANK, NARROW = "\N{NO-BREAK SPACE}", "\N{NARROW NO-BREAK SPACE}"
MARKS = re.compile("[\ue000-\uf8ff]")  # private use area
PLANTS = ("harbour-market", "desert-split")
# Units of SI that a sentence in inch-pound units has no place for; kg/m³ is how standards publish concentrations.
METRIC = re.compile(r"\d[ \u00a0]?(bar|°C|kW|kg(?!/m³)|K|m/s|Pa)\b")
# Inch-pound numbers from SI ones, by NIST SP 811, appendix B, which prints the factors with these digits.
CONVERTED = {
    "bar g": lambda bar: bar * 1e5 / 6894.757,
    "bar a": lambda bar: bar * 1e5 / 6894.757,
    "°C": lambda degC: degC * 1.8 + 32.0,
    "K": lambda kelvin: kelvin * 1.8,
    "kg": lambda kg: kg / 0.453_592_37,
    "kW": lambda kW: kW / 3.516_853,  # ton of refrigeration, 12 000 Btu/h
    "m/s": lambda velocity: velocity / 0.3048 * 60.0,
    "Pa": lambda Pa: Pa / 6894.757,
}
IN_SI = re.compile(r"(-?[0-9.]*[0-9]) (bar g|bar a|°C|K|kg(?!/)|kW|m/s|Pa)\b")
IN_IP = re.compile(f"([\u2212]?[0-9.{NARROW}]*[0-9]){BLANK}(psig|psia|psi|°F|lb|ton|ft/min)")


@pytest.mark.parametrize(
    ("kind", "value", "spec", "metric", "inch_pound"),
    [  # by hand
        ("gauge pressure", 18.0e5, ".1f", "18.0 bar g", "261 psig"),  # 18.0e5 / 6894.757 = 261.07
        ("pressure", 1.01325e5, ".2f", "1.01 bar a", "14.7 psia"),  # 101 325 / 6894.757 = 14.696
        ("temperature", 380.15, "g", "107 °C", "224.6 °F"),  # 107 · 1.8 + 32 = 224.6
        ("temperature", 243.15, ".0f", "-30 °C", "\u221222 °F"),  # -30 · 1.8 + 32 = -22
        ("temperature difference", 8.0, "g", "8 K", "14.4 °F"),  # a difference: 8 · 1.8
        ("mass", 6.38, ".4g", "6.38 kg", "14.07 lb"),  # 6.38 / 0.453 592 37 = 14.065
        ("cooling", 120e3, ".4g", "120 kW", "34.12 ton"),  # 120 / 3.516 853 = 34.121
        ("velocity", 20.0, "g", "20 m/s", f"3{NARROW}937 ft/min"),  # 20 / 0.3048 · 60 = 3937.0
        ("line pressure drop", 1234.0, ".0f", "1234 Pa", "0.179 psi"),  # 1234 / 6894.757 = 0.17898
        ("temperature difference", 0.02, ".2f", "0.02 K", "0.04 °F"),
        ("mass", 0.0, ".4g", "0 kg", "0 lb"),
    ],
)
def test_a_quantity_is_told_in_the_reader_s_units(kind, value, spec, metric, inch_pound):
    """As it was written in SI, converted in inch-pound units, and with both the second in brackets."""
    text = f"Up to {quantity(kind, value, spec)}."

    assert told(text, SI) == f"Up to {metric}."
    assert told(text, IP) == f"Up to {inch_pound.replace(' ', BLANK)}."
    assert told(text, BOTH) == f"Up to {metric} ({inch_pound.replace(' ', BLANK)})."


def test_without_a_format_it_is_written_as_tables_write_it():
    """Then number and unit are those of the unit system."""
    assert told(quantity("temperature", 271.15), SI) == SI.with_unit("temperature", 271.15)
    assert told(quantity("temperature", 271.15), IP) == IP.with_unit("temperature", 271.15)


def test_figures_share_a_unit_and_records_are_told_whole():
    """A unit once for several figures; a token survives what is done to sentences, and told text stays as it is."""
    text = f"work below {figure('temperature difference', 15.0, 'g')} {unit_word('temperature difference')}"

    assert told(text, BOTH) == "work below 15 (27) K (°F)"
    assert told(unit_word("temperature", "degC"), SI) == "degC"
    assert told(told(text, IP), SI) == "work below 27 °F"
    assert all_told({"a": [text, 1.5, None]}, IP) == {"a": ["work below 27 °F", 1.5, None]}
    assert told(text.upper().capitalize(), IP).endswith("27 °F")


@pytest.mark.parametrize("text", ["\ue000 5", "\ue0005\ue001\ue002", "\ue0005\ue001\ue161\ue17c\ue162\ue002"])
def test_characters_of_a_user_are_no_token(text):
    """What looks like a token and is none keeps its text."""
    assert told(text, IP).strip("\ue000 ") == told(text, BOTH).strip("\ue000 ") == "5"


def _sentences(result):
    """Yield every sentence of findings and components, without those of law, which keep the units of its tables."""
    for entry in result.entries:
        for finding in entry.findings:
            if not finding.code.startswith("law"):
                yield from (finding.fact, finding.advice)
        for item in entry.hardware:
            yield item.reason


def _step(number):
    """Return half of the last digit of a number as written."""
    return 0.5 * 10.0 ** -len(number.partition(".")[2])


@pytest.mark.parametrize("name", [*PLANTS, "cold-store"])
def test_each_number_of_a_finding_is_the_metric_one_converted(name, assessed):
    """Number by number, within what the digits of both show; no metric unit is left."""
    count = 0
    for text in _sentences(assessed(name)):
        metric, inch_pound = told(text, SI), told(text, IP)
        if metric == inch_pound:
            continue
        pairs = zip(IN_SI.findall(metric), IN_IP.findall(inch_pound), strict=True)
        for (number, unit), (other, _) in pairs:
            convert = CONVERTED[unit]
            written = other.replace(NARROW, "").replace("\u2212", "-")
            digits = abs(convert(float(number) + _step(number)) - convert(float(number)))
            assert float(written) == pytest.approx(convert(float(number)), abs=digits + _step(written) + 1e-9), metric
            count += 1
        assert not METRIC.search(inch_pound), inch_pound
    assert count > 50


@pytest.mark.parametrize("name", PLANTS)
def test_thresholds_are_in_the_reader_s_units(name, assessed):
    """Whatever has a unit; a share of a nameplate or of a charge has none."""
    texts = {item.threshold for entry in assessed(name).entries for item in entry.hardware}

    assert [text for text in texts if METRIC.search(told(text, IP))] == []
    assert any(METRIC.search(told(text, SI)) for text in texts)


def _texts_of(content):
    """Return every text in a spreadsheet."""
    with zipfile.ZipFile(io.BytesIO(content)) as archive:
        return "".join(archive.read(name).decode("utf-8", "ignore") for name in archive.namelist() if ".xml" in name)


@pytest.mark.parametrize("name", PLANTS)
def test_no_output_holds_a_mark(name, assessed, page_of, made_at):
    """Report, sheet for the site, terminal, JSON, CSV and spreadsheet, in each system of units they come in."""
    result = assessed(name)
    new = result.candidates[0].refrigerant.designation
    outputs = {
        **{f"html {units}": page_of(name, units) for units in ("si", "ip")},
        "html both": render_html(result, "both", made_at=made_at),
        **{f"site {units}": render_site_copy(result, new, units, made_at=made_at) for units in ("si", "ip")},
        **{f"terminal {units}": comparison_text(result, UNIT_SYSTEMS[units], 100) for units in UNIT_SYSTEMS},
        "json": json.dumps(comparison_json(result), ensure_ascii=False),
        "csv": comparison_csv(result),
        **{f"xlsx {units}": _texts_of(render_spreadsheet(result, units, made_at=made_at)) for units in ("si", "ip")},
    }

    assert [name for name, text in outputs.items() if MARKS.search(text) or r"\ue00" in text] == []
    assert any(MARKS.search(text) for text in _sentences(result))  # there was something to tell


def test_page_one_and_the_terminal_are_in_inch_pound_units(assessed, page_of, read_page):
    """What is found on the desert house: a nameplate of 26 bar g is 26e5 / 6894.757 = 377 psig."""
    page = " ".join(read_page(page_of("desert-split", "ip")).text.split())
    terminal = " ".join(comparison_text(assessed("desert-split"), IP, 100).split())

    for text in (page, terminal):
        assert "the nameplate's 377 psig" in text.replace("\u2019", "'")
        assert "26.0 bar" not in text
    assert "nameplate's 26.0 bar g (377 psig)" in " ".join(comparison_text(assessed("desert-split"), BOTH, 400).split())


def test_what_several_refrigerants_share_is_found_in_the_reader_s_units(assessed, page_of, read_page):
    """A threshold of 107 degC is 224.6 °F; where it comes from stays as it was published."""
    text = " ".join(read_page(page_of("harbour-market", "ip")).text.split()).replace(BLANK, " ")

    assert "Threshold: work above 224.6, stop above 249.8 °F." in text
    assert "225 degF (107 degC)" in text
