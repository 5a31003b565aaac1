"""Pressure-temperature tables: the temperatures of the rows, the text and the JSON contract."""

import json
import re

import jsonschema
import pytest

from retrofit.errors import QuantityError
from retrofit.report.saturation import MOST_ROWS, air_at, saturation_json, saturation_text, temperature_steps
from retrofit.study.saturation import saturation_table
from retrofit.units import IP, SI

KELVIN = 273.15
ROW = (
    "p_bubble_Pa",
    "p_dew_Pa",
    "h_bubble_J_per_kg",
    "h_dew_J_per_kg",
    "density_bubble_kg_per_m3",
    "density_dew_kg_per_m3",
)
# The contract retrofit.saturation/1 (JSON Schema, draft 2020-12): a row has all its numbers, or none and a reason.
CONTRACT = {
    "type": "object",
    "required": ["schema", "refrigerant", "rows"],
    "properties": {
        "schema": {"const": "retrofit.saturation/1"},
        "refrigerant": {"type": "string"},
        "rows": {
            "type": "array",
            "items": {
                "type": "object",
                "required": ["T_K", *ROW],
                "anyOf": [
                    {"properties": {name: {"type": "number"} for name in ROW}},
                    {
                        "properties": {**{name: {"type": "null"} for name in ROW}, "reason": {"type": "string"}},
                        "required": ["reason"],
                    },
                ],
            },
        },
    },
}


@pytest.mark.parametrize(
    ("start", "stop", "step", "celsius"),
    [
        ("-40 degC", "-38 degC", "1 K", [-40, -39, -38]),
        ("0 degC", "1 degC", "0.1 K", [0.1 * i for i in range(11)]),
        ("0 degC", "5 degC", "2 K", [0, 2, 4]),
        ("20 degC", "20 degC", "5 K", [20]),
        ("32 degF", "50 degF", "9 R", [0, 5, 10]),
        ("0 degC", "1 degC", "1e300 K", [0]),
    ],
)
def test_steps_go_from_first_to_last(start, stop, step, celsius):
    """Both ends are in where the step meets them, also with a step that binary numbers do not hold."""
    assert [T - KELVIN for T in temperature_steps(start, stop, step)] == pytest.approx(celsius, abs=1e-9)


@pytest.mark.parametrize(
    ("start", "stop", "step", "why"),
    [
        ("0 degC", "10 degC", "0 K", 'step "0 K" is not above 0 K'),
        ("0 degC", "10 degC", "-1 K", "is not above 0 K"),
        ("0 degC", "10 degC", "1 degC", "is a point on a temperature scale"),
        ("0 degC", "10 degC", "1", "has no unit"),
        ("0 degC", "10 degC", "5e-324 K", f"more than the {MOST_ROWS} rows"),
        ("0 degC", "10 degC", "0.002 K", f"more than the {MOST_ROWS} rows"),
        ("10 degC", "0 degC", "1 K", "give the lower temperature with --from"),
        ("-500 degC", "0 degC", "1 K", "not above absolute zero"),
        ("nan degC", "0 degC", "1 K", "not a finite number"),
        ("ten", "20 degC", "1 K", "does not begin with a number"),
    ],
)
def test_steps_that_make_no_table_are_refused(start, stop, step, why):
    """The message says what is wrong and what to give."""
    with pytest.raises(QuantityError, match=re.escape(why)):
        temperature_steps(start, stop, step)


def test_the_largest_table_is_printed():
    """Exactly as many rows as are allowed are allowed."""
    assert len(temperature_steps("0 degC", "4.999 degC", "0.001 K")) == MOST_ROWS


def test_json_keeps_the_contract():
    """Rows inside and outside the range of the model, and the numbers are those of the table."""
    table = saturation_table("R407C", temperature_steps("-150 degC", "150 degC", "50 K"))
    read = json.loads(json.dumps(saturation_json(table), allow_nan=False))
    jsonschema.validate(read, CONTRACT, cls=jsonschema.Draft202012Validator)

    assert [row["p_dew_Pa"] is None for row in read["rows"]] == [True, True, False, False, False, True, True]
    assert [row["p_bubble_Pa"] for row in read["rows"]] == [row.p_bubble_Pa for row in table.rows]
    assert read["cautions"]


def numbers(line):
    """Return the numbers of a line of a table, a dash as None."""
    cells = re.split(r"\s{2,}", line.strip())
    return [None if cell == "–" else float(cell.replace("−", "-").replace("\u202f", "")) for cell in cells]


@pytest.mark.parametrize("units", [SI, IP])
def test_text_shows_the_numbers_in_the_readers_units(units):
    """Absolute and gauge pressure differ by the standard atmosphere, and all is the table's, rounded."""
    table = saturation_table("R407C", [253.15, 303.15])
    lines = saturation_text(table, units, 80, str).split("\n")
    factor, atmosphere, last = (1e5, 1.01325, 0.005) if units is SI else (6894.757, 14.696, 0.05)
    for row, line in zip(table.rows, lines[-2:], strict=True):
        T, bubble, bubble_gauge, dew, dew_gauge, _, _ = numbers(line)

        assert T == pytest.approx(row.T_K - KELVIN if units is SI else row.T_K * 1.8 - 459.67, abs=0.051)
        assert bubble == pytest.approx(row.p_bubble_Pa / factor, abs=last + 1e-3)
        assert dew == pytest.approx(row.p_dew_Pa / factor, abs=last + 1e-3)
        assert bubble - bubble_gauge == pytest.approx(atmosphere, abs=2 * last)
        assert dew - dew_gauge == pytest.approx(atmosphere, abs=2 * last)


def test_text_puts_cautions_and_use_of_the_columns_above_the_numbers():
    """Class, which column superheat and subcooling count from, and the grade of the model come first."""
    text = saturation_text(saturation_table("R454C", [273.15]), SI, 80, str)
    rule = text.index("─")

    for words in ("Class A2L", "Superheat is counted from the dew column", "Grade of the model"):
        assert text.index(words) < rule


def test_text_says_why_a_row_is_empty():
    """Dashes stand in the row, and the reason under the table."""
    text = saturation_text(saturation_table("R134a", [100.0, 273.15]), SI, 80, str)

    assert "1 of 2 rows outside the model's range: R134a: saturation temperature" in text
    assert numbers(next(line for line in text.split("\n") if line.startswith("−173")))[1:] == [None] * 6


def test_gauge_pressures_at_an_altitude_count_from_the_air_there():
    """Standard atmosphere at 1500 m: 84.56 kPa (ICAO Doc 7488 / ISO 2533, from memory); absolute pressures stay."""
    table = saturation_table("R134a", [253.15, 303.15])
    air = air_at("1500 m")
    lines = saturation_text(table, SI, 80, str, air).split("\n")

    assert air.p_Pa == pytest.approx(84_556.0, abs=10.0)
    for row, line in zip(table.rows, lines[-2:], strict=True):
        _, bubble, bubble_gauge, _, dew_gauge, _, _ = numbers(line)
        assert bubble == pytest.approx(row.p_bubble_Pa / 1e5, abs=0.006)
        assert bubble_gauge == pytest.approx((row.p_bubble_Pa - 84_556.0) / 1e5, abs=0.006)
        assert dew_gauge == pytest.approx((row.p_dew_Pa - 84_556.0) / 1e5, abs=0.006)
    assert "at 1\N{NARROW NO-BREAK SPACE}500 m" in " ".join(lines)
    assert saturation_json(table, air)["p_ambient_Pa"] == air.p_Pa
    with pytest.raises(QuantityError):
        air_at("15 km")
