"""Where catalogue values are from: each figure with source, edition and basis, and what is doubtful beside it."""

import re

import pytest

from retrofit.refrigerants import source
from retrofit.report.values import FIELDS

POUND_PER_1000_FT3 = 0.45359237 / 28.316846592  # kg/m³; NIST Special Publication 811 (2008), appendix B
TO_SI = {
    "g/m³": lambda x: x / 1000, "lb/1000 ft³": lambda x: x * POUND_PER_1000_FT3, "°C": lambda x: x + 273.15,
    "°F": lambda x: (x + 459.67) / 1.8, "g/mol": lambda x: x / 1000, "ppm": float, "": float,
}  # fmt: skip
BASES = {"read": "Read", "computed": "Computed", "memory": "From memory", "": "No source"}
NEEDED = {
    "safety_class", "lfl_kg_per_m3", "rcl_kg_per_m3", "practical_limit_kg_per_m3", "atel_odl_kg_per_m3", "oel_ppm",
    "odp", "bubble_1atm_K", "dew_1atm_K", "gwp_100yr_ar4", "gwp_eu_2024_573", "gwp_us_aim",
}  # fmt: skip


def rows_by_name(page):
    """Return the rows of the table by what they are about, the name taken down to rows that share it."""
    found, name = {}, ""
    for row in page.tables["t-traced"][1:]:
        name = row[0] if len(row) == 4 else name
        found.setdefault(name.casefold(), []).append(row[-3:])
    return found


def figure_of(cell, name):
    """Return the figure of a refrigerant in a cell such as "291 g/m³: R-454C; none: R-404A (today), R-448A"."""
    for part in cell.split("; "):
        text, _, about = part.rpartition(": ")
        if name in [item.removesuffix(" (today)") for item in about.split(", ")]:
            return text
    return None


@pytest.mark.parametrize("units", ["si", "ip"])
def test_every_value_stands_with_its_source(shipped, units, page_of, read_page, assessed):
    """Figure, key, edition and basis of each value of each refrigerant; where there is none it says so."""
    rows = rows_by_name(read_page(page_of(shipped, units)))
    for field, label in FIELDS.items():
        for entry in assessed(shipped).entries:
            value = getattr(entry.refrigerant, field)
            mine = [row for row in rows[label.casefold()] if figure_of(row[0], entry.refrigerant.display_name)]
            assert len(mine) == 1
            text, origin = figure_of(mine[0][0], entry.refrigerant.display_name), mine[0][1]
            assert BASES[value.basis] in origin
            assert value.source in origin
            edition = source(value.source).edition if value.source else ""
            assert edition in ("none", "current") or edition in origin
            check_figure(text, value)


def check_figure(text, value):
    """Check a figure against its value: texts letter by letter, numbers within half their last digit."""
    if value.value is None:
        assert text == (
            "none" if value.status == "not applicable" else "not stated" if value.source else "no figure found"
        )
    elif value.number is None:
        assert text == value.text.replace("; ", ", ")
    else:
        assert text.endswith(" ?") == (value.status == "unresolved")
        digits, unit = re.fullmatch(r"([−\d]+(?: \d{3})*(?:\.\d+)?)(?: (\D.*))?", text.removesuffix(" ?")).groups("")
        digits = digits.replace(" ", "").replace("−", "-")
        shown, half = float(digits), 0.501 * 10.0 ** -len(digits.partition(".")[2])
        width = abs(TO_SI[unit](half) - TO_SI[unit](0.0))
        assert abs(TO_SI[unit](shown) - value.number) <= width + 1e-9 * abs(value.number)


def test_all_that_matters_is_traced():
    """Class, limits by concentration, potentials and boiling points are among the values."""
    assert NEEDED <= FIELDS.keys()


def test_what_is_from_memory_stands_out(page_of, read_page, assessed):
    """Its basis is set strong, with the confidence; nothing else is."""
    html = page_of("harbour-market", "si")
    table = re.search(r'<table class="words told" id="t-traced">.*?</table>', html, re.DOTALL)[0]
    strong = re.findall(r'<strong class="basis">([^<]+)</strong>', table)
    remembered = {
        (field, value.source, value.confidence)
        for entry in assessed("harbour-market").entries
        for field in FIELDS
        if (value := getattr(entry.refrigerant, field)).basis == "memory"
    }

    assert sorted(strong) == sorted(f"From memory, {confidence} confidence" for _, _, confidence in remembered)
    assert len(strong) >= 4


def test_doubts_stand_beside_the_figure(shipped, page_of, read_page, assessed):
    """Every note of a value is in its row with the refrigerant; an unresolved one says so."""
    rows = rows_by_name(read_page(page_of(shipped, "si")))
    for field, label in FIELDS.items():
        for entry in assessed(shipped).entries:
            value, name = getattr(entry.refrigerant, field), entry.refrigerant.display_name
            mine = next(row for row in rows[label.casefold()] if figure_of(row[0], name))
            if value.note:
                assert " ".join(value.note.split()) in mine[2]
                assert name in mine[2]
            if value.status == "unresolved":
                assert "Unresolved." in mine[2]


def test_every_key_is_spelled_out(shipped, page_of, read_page):
    """Each key in the table of values has its row among the sources."""
    page = read_page(page_of(shipped, "si"))
    keys = {re.split(r"[;,]", row[-2])[0] for row in page.tables["t-traced"][1:]} - {"No source"}
    sources = next(rows for rows in page.tables.values() if rows and rows[0][:2] == ["Key", "Document"])

    assert len(keys) > 3
    assert keys <= {row[0] for row in sources[1:]}


def test_an_unresolved_figure_is_marked(case_with, made_at, read_page):
    """R-454B's RCL carries a question mark, and both figures stand beside it."""
    from retrofit.checks import assess
    from retrofit.report import render_html
    from retrofit.study import compare

    rows = rows_by_name(read_page(render_html(assess(compare(case_with(candidates=("R454B",)))), made_at=made_at)))
    row = next(row for row in rows["rcl"] if figure_of(row[0], "R-454B"))

    assert figure_of(row[0], "R-454B") == "49 g/m³ ?"
    assert "49 g/m³" in row[2]
    assert "75 g/m³" in row[2]
