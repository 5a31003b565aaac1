"""The spreadsheet read back by another library: one table a sheet, numbers equal to the JSON's, no formulas."""

import io
import zipfile
from dataclasses import replace

import pytest

from retrofit.errors import MissingPartError
from retrofit.report.machine import comparison_json
from retrofit.report.spreadsheet import render_spreadsheet, require_spreadsheet
from retrofit.report.spreadsheet.results import ELECTRIC, FULL, OPERATION, QUANTITIES, RATIO_HEADINGS, RATIOS
from retrofit.report.spreadsheet.table import GAPS
from retrofit.units import IP, SI

SHEETS = ["Read me", "Inputs", "Results", "Points", "Year", "Sources"]
FROZEN = {"Read me": "C2", "Inputs": "B2", "Results": "E2", "Points": "D2", "Year": "D2", "Sources": "C2"}
WHERE = {
    "same duty": ("duty",),
    "same compressor": ("compressor",),
    "same plant, at full": ("plant",),
    "same plant, at today's cooling": ("plant", "same_cooling"),
}


def opened(content):
    """Return the workbook as openpyxl reads it."""
    import openpyxl

    return openpyxl.load_workbook(io.BytesIO(content))


def rows_of(book, name):
    """Return the rows of a sheet as mappings from heading to content."""
    first, *rest = book[name].iter_rows(values_only=True)
    return [dict(zip(first, row, strict=True)) for row in rest]


@pytest.fixture(scope="module")
def book(lived, made_at):
    """Return the spreadsheet of a case with all three bases, a year and the remaining life, in metric units."""
    return opened(render_spreadsheet(lived("harbour-market"), made_at=made_at))


def test_one_table_a_sheet_with_frozen_headings_and_a_filter(book):
    """The sheets by their names; one heading for each column, none merged, none twice, no empty row."""
    assert book.sheetnames == SHEETS
    for sheet in book:
        headings = [cell.value for cell in sheet[1]]

        assert all(headings)
        assert len(set(headings)) == len(headings)
        assert not sheet.merged_cells.ranges
        assert sheet.freeze_panes == FROZEN[sheet.title]
        assert sheet.auto_filter.ref == sheet.dimensions
        assert all(any(cell.value is not None for cell in row) for row in sheet.iter_rows())


def test_the_first_columns_are_names(book):
    """What a row is stands first, and a unit in the heading of every quantity that has one."""
    assert [cell.value for cell in book["Results"][1]][:4] == ["Refrigerant", "Basis", "What is done", "Value"]
    assert [cell.value for cell in book["Points"][1]][:3] == ["Refrigerant", "Point", "State"]
    headings = [cell.value for cell in book["Results"][1]]
    assert {"Cooling (kW)", "Condensing pressure (bar a)", "Discharge temperature (°C)", "COP"} <= set(headings)


@pytest.mark.parametrize("units", [SI, IP], ids=["si", "ip"])
def test_numbers_are_those_of_the_json(units, assessed, made_at):
    """Every quantity and ratio of every basis, converted by the unit system and otherwise untouched.

    A new plant has no number on the existing machine, and says why.
    """
    result = comparison_json(assessed("harbour-market"))
    entries = {entry["refrigerant"]: entry for entry in (result["existing"], *result["candidates"])}
    rows = rows_of(opened(render_spreadsheet(assessed("harbour-market"), units.name, made_at=made_at)), "Results")
    checked, bare = 0, []
    for row in rows:
        entry = found = entries[row["Refrigerant"].replace("-", "")]
        for key in WHERE[row["Basis"]]:
            found = found and found[key]
        if found is None:
            bare.append((row["Refrigerant"], row["Basis"]))
            assert "a new plant is sized for the duty, and is not computed on the existing machine" in row[GAPS]
            numbers = [*QUANTITIES.values(), *OPERATION.values(), *ELECTRIC.values()]
            headings = {
                f"{heading} ({units.label(kind)})" if units.label(kind) else heading for heading, kind in numbers
            }
            headings |= {f"{heading}, ratio to today" for heading in RATIO_HEADINGS}
            assert headings <= set(row)
            assert not [heading for heading in headings if row[heading] is not None]
            continue
        for name, (heading, kind) in QUANTITIES.items():
            label = units.label(kind)
            value = row[f"{heading} ({label})" if label else heading]
            assert value == pytest.approx(float(units.number(kind, found[name])), rel=1e-12), (row["Basis"], name)
            checked += 1
        for heading, name in RATIOS[row["Basis"]].items():
            assert row[f"{heading}, ratio to today"] == pytest.approx(entry["relative"][name], rel=1e-12)
        for name, (heading, kind) in OPERATION.items():
            value = row[f"{heading} ({units.label(kind)})"]
            if row["Basis"] != FULL:
                assert value is None
            else:
                there = float(units.number(kind, entry["plant"]["operation"][name]))
                assert value == pytest.approx(there, rel=1e-12)

    assert bare == [("R-454C", basis) for basis in list(WHERE)[1:]]  # a new plant has the same duty alone
    assert checked == (6 * 4 + 1) * 24  # refrigerants, bases, quantities


def test_points_are_those_of_the_json(book, assessed):
    """Pressure, temperature, density and share of vapour of each point."""
    result = comparison_json(assessed("harbour-market"))
    states = [state for entry in (result["existing"], *result["candidates"]) for state in entry["duty"]["states"]]
    rows = rows_of(book, "Points")

    assert len(rows) == len(states)
    for row, state in zip(rows, states, strict=True):
        assert row["State"] == state["name"]
        assert row["Pressure, absolute (bar a)"] == pytest.approx(state["p_Pa"] / 1e5, rel=1e-12)
        assert row["Temperature (°C)"] == pytest.approx(state["T_K"] - 273.15, abs=1e-9)
        assert row["Density (kg/m³)"] == pytest.approx(state["density_kg_per_m3"], rel=1e-12)
        quality = state["quality"]
        assert row["Vapour, by mass (%)"] == (None if quality is None else pytest.approx(100 * quality, rel=1e-12))
        assert (row["Why cells are empty"] is None) is (quality is not None)


def test_numbers_are_numbers_and_texts_are_texts(book):
    """A column holds one or the other; formats show decimals, cells keep all digits."""
    for sheet in book:
        for column in sheet.iter_cols(min_row=2):
            kinds = {cell.data_type for cell in column if cell.value is not None}

            assert kinds <= {"n"} or kinds <= {"s"}, (sheet.title, column[0].column)
    cell = next(cell for cell in book["Results"][2] if book["Results"].cell(1, cell.column).value == "Cooling (kW)")
    assert cell.number_format == "0.0"
    assert "0.00" in {cell.number_format for cell in book["Results"][2]}


def test_a_gap_has_a_reason(assessed, made_at):
    """Of a refrigerant without a model no number stands, and why; so of a plant that the case does not describe."""
    from retrofit.checks import assess
    from retrofit.study import compare

    case = assessed("harbour-market").case
    bare = replace(
        case, evaporator=None, condenser=None, compare=case.compare.model_copy(update={"candidates": ("R1132a",)})
    )
    rows = rows_of(opened(render_spreadsheet(assess(compare(bare)), made_at=made_at)), "Results")
    without = [row for row in rows if row["COP"] is None]

    assert {(row["Refrigerant"], row["Basis"]) for row in without} >= {
        ("R-1132a", "same duty"), ("R-404A", "same plant, at full"),
    }  # fmt: skip
    assert all(row["Why cells are empty"] and row["Cooling (kW)"] is None for row in without)
    assert 0 not in [row["COP"] for row in rows]


def test_every_caution_stands_in_the_first_sheet_and_in_the_results(book, assessed):
    """Text and title of each, with who decides."""
    result = assessed("harbour-market")
    texts = " ".join(str(row["Text"]) for row in rows_of(book, "Read me"))
    results = {row["Refrigerant"]: row for row in rows_of(book, "Results")}

    for entry in result.entries:
        assert entry.cautions
        for caution in entry.cautions:
            assert caution.text in texts
            assert caution.title in results[entry.refrigerant.display_name]["Cautions"]
    assert all("licensed practice" in row["Who decides"] for row in results.values())
    assert "licensed practice" in texts


def test_inputs_and_sources_are_complete(book, assessed):
    """Every key given and every default; every catalogue value with its source."""
    case = assessed("harbour-market").case
    rows = {row["Key"]: row for row in rows_of(book, "Inputs")}
    sources = rows_of(book, "Sources")
    gwp = next(row for row in sources if (row["Refrigerant"], row["Quantity"]) == ("R-404A", "GWP AR4"))

    assert set(rows) >= {key for key in case.given if "." in key} | {item.key for item in case.defaults}
    assert (rows["duty.cooling"]["Number"], rows["duty.cooling"]["Unit"]) == (120.0, "kW")
    assert rows["plant.altitude"]["Why assumed"]
    assert gwp["Number"] == pytest.approx(3921.6)
    assert gwp["Source"]
    assert all(row["Source"] or row["Why cells are empty"] for row in sources if row["Unit"])


HOSTILE = [
    "=cmd|' /C calc'!A0",
    "+1+1",
    "@SUM(1)",
    "-2",
    "https://example.org",
    "mailto:a@b",
    "12.5",
    "\x1b[2J\ufffe",
    "x" * 40_000,
]


@pytest.mark.parametrize("text", HOSTILE)
def test_no_text_becomes_a_formula_a_link_or_a_number(text, assessed, made_at):
    """Title, about, file name and what was written are strings, and no part of the file holds a formula or link."""
    plain = assessed("harbour-market")
    given = {**plain.case.given, "plant.oil": text}
    case = replace(plain.case, title=text, about=text, path=text.replace("/", ""), given=given)
    content = render_spreadsheet(replace(plain, case=case), made_at=made_at)
    rows = rows_of(opened(content), "Read me")
    shown = {"\x1b[2J\ufffe": "\\x1b[2J\\ufffe"}.get(text, text)[:32_000]

    assert rows[0]["Text"] == shown
    assert (
        next(row for row in rows_of(opened(content), "Inputs") if row["Key"] == "plant.oil")["As written or assumed"]
        == shown
    )
    with zipfile.ZipFile(io.BytesIO(content)) as parts:
        for name in parts.namelist():
            if name.startswith("xl/worksheets/"):
                assert b"<f>" not in parts.read(name)
                assert b"hyperlink" not in parts.read(name)


def test_the_same_result_and_time_give_the_same_bytes(assessed, made_at):
    """Nothing depends on when or where it is written."""
    first, second = (render_spreadsheet(assessed("office-chiller"), "ip", made_at=made_at) for _ in range(2))

    assert first == second


def test_without_the_optional_part_there_is_advice(monkeypatch):
    """Not a traceback."""
    monkeypatch.setattr("retrofit.report.spreadsheet.workbook.find_spec", lambda name: None)

    with pytest.raises(MissingPartError, match=r"pip install '\.\[xlsx\]'.*--csv"):
        require_spreadsheet()
