"""Job card and commissioning sheet on the page: numbers of the result, blanks for the rest, hostile text, units."""

import re
from dataclasses import replace
from pathlib import Path

import pytest

from retrofit.checks import assess
from retrofit.checks.changeover import chosen_for_cards
from retrofit.errors import ReportError
from retrofit.report import render_html, render_site_copy
from retrofit.study import compare
from retrofit.study.changeover import pressure_rows

KELVIN = 273.15
BAR_PA, PSI_PA, POUND_KG = 1e5, 6894.757293168, 0.45359237  # NIST Special Publication 811 (2008), appendix B


def number(text):
    """Return the number of a cell."""
    return float(re.sub(r"[\s\u202f]", "", text).replace("−", "-"))


def number_in_K(text, units):
    """Return a temperature of a cell in kelvin."""
    value = number(text)
    return value + KELVIN if units == "si" else (value + 459.67) / 1.8


@pytest.fixture(scope="module")
def market(assessed):
    """Return the harbour market's result."""
    return assessed("harbour-market")


@pytest.fixture(scope="module")
def copies(market, made_at):
    """Return the site copy of R-448A at the harbour market, in both unit systems."""
    return {
        units: render_site_copy(market, "r-448a", units, made_at=made_at, T_inlet_today_K=300.15)
        for units in ("si", "ip")
    }


def test_cards_and_sheets_are_for_the_same_candidates(market, page_of, read_page):
    """One card and one sheet for each candidate chosen, and every other named with its reason."""
    page, chosen = read_page(page_of("harbour-market", "si")), chosen_for_cards(market)
    keys = [entry.refrigerant.designation for entry in chosen.entries]

    assert [name for name in page.ids if name.startswith("t-card-")] == [f"t-card-{key}" for key in keys]
    assert [name for name in page.ids if name.startswith("t-readings-")] == [f"t-readings-{key}" for key in keys]
    assert len(set(page.ids)) == len(page.ids)
    told = " ".join(page.text.split())
    for entry, _ in chosen.left_out:
        assert f"{entry.refrigerant.display_name}, " in told.split("No job card: ")[1]


@pytest.mark.parametrize(("units", "to_Pa"), [("si", BAR_PA), ("ip", PSI_PA)])
def test_the_table_of_pressures_reads_back(units, to_Pa, copies, market, read_page):
    """Each row is the refrigerant's pressures at its temperature, gauge, to half the last digit shown."""
    page, ambient = read_page(copies[units]), market.case.plant.ambient_pressure_Pa
    rows = [row for key, rows in page.tables.items() if str(key).startswith("t-pt-") for row in rows[1:]]
    found = pressure_rows("R448A", [number_in_K(row[0], units) for row in rows])
    half = 0.501 * {"si": 0.01, "ip": 0.1}[units] * to_Pa

    assert 40 <= len(rows) <= 96
    for row, pressures in zip(rows, found, strict=True):
        wanted = pressures.p_bubble_Pa, pressures.p_mean_Pa, pressures.p_dew_Pa
        for text, p_Pa in zip(row[1:], wanted, strict=True):
            assert number(text) * to_Pa == pytest.approx(p_Pa - ambient, abs=half)


def test_the_design_point_is_framed_where_a_gauge_reads_it(copies, market):
    """The dew cell nearest to evaporating, the bubble and mean cells nearest to condensing, and no more."""
    design = market.candidates[0].hardware_numbers.new.design
    framed = re.findall(r'<th scope="row">([−\d]+)</th>(?:<td>[^<]*</td>)*<td class="target">', copies["si"])
    wanted = [design.T_evap_dew_K, design.T_cond_bubble_K, design.T_cond_mean_K]

    assert copies["si"].count('class="target"') == 3
    assert sorted(number(text) for text in framed) == sorted(round(T - KELVIN) for T in wanted)


def test_a_pure_refrigerant_has_one_column(case_with, made_at, read_page):
    """R-134a has no glide and R-513A less than 1 % of pressure: one column, both ends of the cycle framed.

    A check stops both on this plant, so a reason is asked for, whatever the table would hold.
    """
    result = assess(compare(case_with("R404A", ("R134a", "R513A"))))
    for name in ("R134a", "R513A"):
        with pytest.raises(ReportError, match="is stopped, so no job card is written: Less cooling than needed"):
            render_site_copy(result, name, made_at=made_at)
        html = render_site_copy(result, name, made_at=made_at, despite="Half the cases are taken out.")
        rows = read_page(html).tables[f"t-pt-{name}-1"]
        (row,) = pressure_rows(name, [number_in_K(rows[1][0], "si")])

        assert rows[0] == ["°C", "Pressure"]
        assert number(rows[1][1]) * BAR_PA == pytest.approx(row.p_dew_Pa - 101_325.0, abs=501.0)
        assert html.count('class="target"') == 2


def test_a_flammable_refrigerant_asks_for_its_sign(assessed, made_at):
    """The label of a class other than 1 has a line on the warning sign, that of class 1 none."""
    plant, reason = assessed("process-chiller"), "The plant is rebuilt for the class."
    labels = {
        name: render_site_copy(plant, name, made_at=made_at, despite=reason).split("Text of the label")[1]
        for name in ("R448A", "R454C")
    }

    assert "Warning sign for flammable gas" in labels["R454C"]
    assert "Warning sign for flammable gas" not in labels["R448A"]


def test_expected_readings_read_back(copies, market, read_page):
    """The design column holds the design point of the result, and the day asked for has a column of its own."""
    rows, full = read_page(copies["si"]).tables["t-expected-R448A"], market.candidates[0].plant.full
    headings, cells = rows[0][2:], {row[0]: row[2:] for row in rows[1:]}

    assert headings == ["22 °C milder", "32 °C design point", "37 °C hotter", "27 °C on the day"]
    low, high = map(number, cells["Discharge (condensing)"][1].split(" to "))
    assert low < (full.p_cond_Pa - market.case.plant.ambient_pressure_Pa) / BAR_PA < high
    low, high = map(number, cells["Discharge line"][1].split(" to "))
    # At least the 8 K of the model to either side, and no more than 3 K on top of it for the inputs.
    assert full.T_discharge_K - KELVIN - 11.5 < low <= full.T_discharge_K - KELVIN - 7.5
    assert full.T_discharge_K - KELVIN + 7.5 <= high < full.T_discharge_K - KELVIN + 11.5


def test_a_window_never_passes_the_limit_of_the_discharge_line(case_with, made_at, read_page):
    """R-448A at -32 and 42 degC discharges at about 121 degC, the limit: no cell is above it, and a note says why."""
    cold = {"evaporating": "-32 degC", "condensing": "42 degC", "line_superheat": "10 K"}
    sides = {
        "evaporator": {"medium": "air", "inlet": "-22 degC", "outlet": "-27 degC", "arrangement": "crossflow"},
        "condenser": {"medium": "air", "inlet": "32 degC", "outlet": "38 degC", "arrangement": "crossflow"},
    }
    result = assess(compare(case_with(duty=cold, **sides)))
    for units, limit in (("si", 121), ("ip", 250)):
        page = read_page(render_site_copy(result, "R448A", units, made_at=made_at, despite="a test of the windows"))
        cells = next(row[2:] for row in page.tables["t-expected-R448A"][1:] if row[0] == "Discharge line")
        figures = [[float(figure) for figure in re.findall(r"\d+", cell)] for cell in cells]

        assert all(max(found) <= limit for found in figures)
        assert any(cell.endswith("the limit") or cell.startswith("above the limit") for cell in cells)
        assert "goes before the window: at the " in " ".join(page.text.split())
        assert "Do not run at full there until the discharge is kept below" in " ".join(page.text.split())


def test_the_label_weighs_by_the_unit_of_the_scales(copies, market):
    """GWP 1387 or so: a kilogram is GWP / 1000 t, a pound 0.45359237 of that (NIST SP 811)."""
    factors = {
        units: [float(found) for found in re.findall(rf"{mass} charged × ([0-9.]+) =", copies[units])]
        for units, mass in (("si", "kg"), ("ip", "lb"))
    }
    gwps = market.candidates[0].law.gwp.values()

    assert factors["si"] == pytest.approx([gwp / 1000.0 for gwp in gwps], rel=5e-4)
    assert factors["ip"] == pytest.approx([gwp / 1000.0 * POUND_KG for gwp in gwps], rel=5e-4)
    assert "kg charged" not in copies["ip"]


def test_without_exchangers_it_says_that_nothing_is_expected(assessed, made_at, read_page):
    """The ice rink's case has no condenser: no windows, and the reason."""
    page = read_page(render_site_copy(assessed("ice-rink"), "R507A", made_at=made_at))

    assert not [key for key in page.tables if str(key).startswith("t-expected")]
    assert "Expected readings are not computed: [condenser]" in " ".join(page.text.split())


@pytest.mark.parametrize(("units", "to_kg", "label"), [("si", 1.0, "kg"), ("ip", POUND_KG, "lb")])
def test_charge_and_cylinders_in_both_systems(units, to_kg, label, copies, market, read_page):
    """Charge expected and the first 85 to 90 % of it; 260 kg of R-404A fill 7 cylinders of 60 l, in either unit.

    By hand: liquid R-404A at 50 degC has about 899 kg/m3 (property library), 0.8 of 60 l take 43 kg; 260 / 43 = 6.03.
    """
    page, filling = read_page(copies[units]), market.candidates[0].hardware_numbers.filling
    rows = {row[0]: row[1] for row in page.tables["t-charge-R448A"]}
    first = [number(text) for text in re.findall(r"[\d.]+", rows["First, 85 % to 90 %"])]

    assert number(rows["Expected"].split(label)[0]) * to_kg == pytest.approx(filling.expected_kg, abs=0.06)
    assert [mass * to_kg for mass in first] == pytest.approx(
        [0.85 * filling.expected_kg, 0.9 * filling.expected_kg], abs=0.06
    )
    size = {"si": r"60 l", "ip": r"132\.3 lb of water capacity"}[units]
    assert re.search(rf"7 of {size}", " ".join(page.text.split()))


def test_what_is_not_known_is_a_blank_marked_unknown(case_with, made_at, read_page):
    """A case without charge, plates and settings gives a card that asks for them instead of numbers."""
    result = assess(compare(case_with()))
    page = read_page(render_site_copy(result, "R448A", made_at=made_at))
    steps = {row[0]: row[1] for row in page.tables["t-card-R448A"]}

    assert "Expected: unknown, fill in." in steps["4"]
    assert "low side unknown, fill in, high side unknown, fill in" in steps["7"]
    assert "unknown, fill in first" in steps["9"]
    assert all(row[2:] == ["", "", ""] for row in page.tables["t-changes-R448A"][1:])


def test_set_points_are_those_of_the_hardware(case_with, made_at, read_page):
    """Old and new of each set point given stand there as gauges show them; the others are blank."""
    controls = {"low_pressure_cut_out": "0.5 bar g", "head_pressure": "14 bar g", "high_pressure_cut_out": "25 bar g"}
    result = assess(compare(case_with(controls=controls)))
    rows = read_page(render_site_copy(result, "R448A", made_at=made_at)).tables["t-changes-R448A"]
    shown = {row[0]: row[2:4] for row in rows[1:]}

    assert shown["High-pressure switch, cut-out"] == ["25.00", ""]
    for item in result.candidates[0].hardware_numbers.settings:
        new = item.p_Pa.new - 101_325.0
        assert number(shown[item.name][0]) * BAR_PA == pytest.approx(item.p_Pa.old - 101_325.0, abs=501.0)
        assert number(shown[item.name][1]) * BAR_PA == pytest.approx(new, abs=501.0)
    assert shown["Evaporator pressure regulator"] == ["", ""]


def test_every_part_to_replace_or_to_find_out_is_on_the_card(copies, market, read_page):
    """No row of the hardware table that asks for work or for a datum is lost on the way to the technician."""
    text = " ".join(read_page(copies["si"]).text.split())
    rows = [row for row in market.candidates[0].hardware if row.verdict != "keep" and row.code != "charge"]

    assert len(rows) > 10
    assert [row.code for row in rows if f"{row.name}: {row.verdict}." not in text] == []


def test_a_stop_stands_above_the_first_step(assessed, made_at, read_page):
    """A card asked for against a stop gives a reason, and begins with the stop and that reason."""
    plant = assessed("process-chiller")
    (entry,) = [entry for entry in plant.candidates if entry.refrigerant.designation == "R454C"]
    html = render_site_copy(plant, "R454C", made_at=made_at, despite="The plant is rebuilt for the class.")
    text = " ".join(read_page(html).text.split())
    card = html.split('id="card-R454C"')[1]

    assert [stop.title for stop in entry.stops] == ["More hazardous safety class than the plant was designed for"]
    assert card.index("Nothing begins before this is settled in writing") < card.index('id="t-card-R454C"')
    assert text.index(f"Stop {entry.stops[0].title}: ") < text.index(
        "Reason given: The plant is rebuilt for the class."
    )
    assert html.index("Reason given: ") < html.index('id="card-R454C"')
    with pytest.raises(ReportError, match="R-454C is stopped, so no job card is written: More hazardous safety class"):
        render_site_copy(plant, "R454C", made_at=made_at)


def test_a_new_plant_has_no_card_of_ours(market, made_at):
    """Its maker writes its commissioning, whatever reason is given."""
    for despite in (None, "We want one."):
        with pytest.raises(ReportError, match="R-454C would be a new plant, whose maker writes its commissioning"):
            render_site_copy(market, "R454C", made_at=made_at, despite=despite)


def test_the_one_recommended_is_the_only_card(case_with, made_at, read_page):
    """With a recommendation in the case the report has one card, and says whose it is."""
    result = assess(compare(case_with(candidates=("R448A", "R407A"), report={"recommended": "R407A"})))
    page = read_page(render_html(result, made_at=made_at))

    assert [name for name in page.ids if name.startswith("t-card-")] == ["t-card-R407A"]
    assert "The case recommends R-407A." in page.text


def test_nothing_to_convert_gives_no_card_but_says_why(assessed, page_of, read_page):
    """Every candidate for the heat pump is stopped or a new plant: no card, no sheet, and each with its reason."""
    page = read_page(page_of("coast-heat-pump", "si"))

    assert not [name for name in page.ids if name.startswith(("t-card-", "t-readings-"))]
    assert "None: no candidate has a job card." in page.text
    told = " ".join(page.text.split()).split("No job card: ")[1]
    candidates = assessed("coast-heat-pump").candidates
    assert [entry.is_new_plant for entry in candidates] == [False, False, False, True]
    for entry in candidates:
        names, _, rest = told.partition(f"{entry.refrigerant.display_name}, ")
        reason = "a new plant: its maker writes its commissioning" if entry.is_new_plant else "stopped by: "
        assert rest.partition("; ")[0].count(reason) == 1, names


HOSTILE = [
    "<script>alert(1)</script>",
    "</style><style>#cautions{display:none}",
    "{{ 7 * 7 }}",
    "a\u202eb\x1b[31m",
    "x" * 400,
]


@pytest.mark.parametrize("text", HOSTILE, ids=["script", "style", "template", "hidden", "long"])
def test_a_hostile_title_is_only_text_on_the_site_copy(text, market, copies, made_at, read_page):
    """The copy has no element more than with another title, and what commands is written out."""
    case = replace(market.case, title=text, path=f"{text.replace('/', '')}.toml")
    html = render_site_copy(replace(market, case=case), "R448A", made_at=made_at, T_inlet_today_K=300.15)
    page = read_page(html)

    assert [tag for tag, _ in page.elements] == [tag for tag, _ in read_page(copies["si"]).elements]
    assert not set(html) & {"\x1b", "\u202e"}
    assert page.headings[0] == text.encode("ascii", "backslashreplace").decode().replace("\x1b", "\\x1b")


def test_the_site_copy_carries_the_cautions_of_both_refrigerants(market, copies):
    """What stands in the report on both refrigerants stands here too, and own templates cannot leave it out."""
    entries = (market.existing, market.candidates[0])

    for text in {caution.text for entry in entries for caution in entry.cautions}:
        assert text in " ".join(copies["ip"].replace("&#39;", "'").split())


def test_own_templates_cannot_take_the_cautions_from_the_site_copy(market, made_at, tmp_path):
    """A template of the reader without the block is refused."""
    shipped = (Path(__file__).parents[2] / "report_templates" / "commission.html").read_text("utf-8")
    begin, _, own = shipped.partition("<!DOCTYPE html>")
    assert own.count("{{ cautions }}") == 1
    (tmp_path / "commission.html").write_text(f"{begin}<!DOCTYPE html>{own.replace('{{ cautions }}', '')}", "utf-8")

    with pytest.raises(ReportError, match="cautions"):
        render_site_copy(market, "R448A", template_folder=tmp_path, made_at=made_at)


def test_a_refrigerant_that_is_no_candidate_is_named(market, made_at):
    """The message lists the candidates of the case."""
    with pytest.raises(ReportError, match=r"R22 is no candidate of this case; its candidates are R448A, .* and R454C"):
        render_site_copy(market, "R22", made_at=made_at)


def test_a_report_without_numbers_still_has_its_method(case_of, made_at):
    """A plant whose own refrigerant cannot be computed has no card, and its report is whole."""
    html = render_html(assess(compare(case_of(existing="R744", candidates=("R448A",)))), made_at=made_at)

    assert 'id="method"' in html
    assert "not computed: " in html
