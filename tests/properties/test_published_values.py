"""Saturation values against published tables and posted figures (tests/published/property_values.csv).

A row holds the value as printed, half a unit of its last printed digit, what the source itself can hold beyond
that (relative) and why. A row with a `disagreement` has to keep failing. `computed` rows were solved with another
library. Remembered values stand apart, in remembered_values.csv, and are sanity checks only.
"""

import csv
import tomllib
from pathlib import Path

import CoolProp.CoolProp as CoolProp
import pytest

from retrofit.properties import fluid

FOLDER = Path(__file__).parents[1] / "published"
KELVIN = 273.15
ATMOSPHERE_PA = 101_325.0
PSEUDO_PURE = ("R404A", "R410A")


def _rows(name):
    with (FOLDER / name).open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


ROWS = _rows("property_values.csv")
REMEMBERED = _rows("remembered_values.csv")
SOURCES = tomllib.loads((FOLDER / "property_sources.toml").read_text(encoding="utf-8"))


def _parameter(row):
    marks = [pytest.mark.xfail(reason=row["disagreement"], strict=True)] if row["disagreement"] else []
    return pytest.param(row, id=row["id"], marks=marks)


def _parameters(rows):
    return [_parameter(row) for row in rows]


def _latent_heat(f, T):
    return f.dew(f.p_dew(T)).h_J_per_kg - f.bubble(f.p_bubble(T)).h_J_per_kg


AT_TEMPERATURE = {
    "p_dew_kPa": lambda f, T: f.p_dew(T) / 1e3,
    "p_bubble_kPa": lambda f, T: f.p_bubble(T) / 1e3,
    "latent_heat_kJ_per_kg": lambda f, T: _latent_heat(f, T) / 1e3,
    "density_bubble_kg_per_m3": lambda f, T: f.bubble(f.p_bubble(T)).density_kg_per_m3,
    "density_dew_kg_per_m3": lambda f, T: f.dew(f.p_dew(T)).density_kg_per_m3,
}
AT_PRESSURE = {
    "T_bubble_C": lambda f, p: f.bubble(p).T_K - KELVIN,
    "T_dew_C": lambda f, p: f.dew(p).T_K - KELVIN,
}


def _computed(row):
    f = fluid(row["refrigerant"])
    if row["T_C"]:
        return float(AT_TEMPERATURE[row["quantity"]](f, float(row["T_C"]) + KELVIN))
    p_Pa = float(row["p_kPa"]) * 1e3
    if row["h_kJ_per_kg"]:
        return float(f.two_phase(p_Pa, float(row["h_kJ_per_kg"]) * 1e3).molar_quality)
    return float(AT_PRESSURE[row["quantity"]](f, p_Pa))


def _tolerance(row):
    """Half a printed digit, and what the source holds of the value (of the absolute temperature)."""
    printed = abs(float(row["printed"]) + (KELVIN if row["unit"] == "degC" else 0.0))
    return float(row["half_digit"]) * (1 + 1e-9) + float(row["source_accuracy"] or 0.0) * printed


@pytest.mark.parametrize("row", _parameters(ROWS))
def test_value_is_the_published_one(row):
    """A saturation value agrees with its source within the printed digits and the source's own accuracy."""
    assert _computed(row) == pytest.approx(float(row["printed"]), abs=_tolerance(row), rel=0)


def test_rows_name_their_source_and_reason():
    """Every row has a known source, a basis, and a reason for any tolerance beyond the printed digits."""
    assert len(ROWS) == 194
    assert len({row["id"] for row in ROWS}) == len(ROWS)
    assert {row["source"] for row in ROWS + REMEMBERED} == set(SOURCES)
    assert {row["basis"] for row in ROWS} == {"read", "computed"}
    assert not [row["id"] for row in ROWS if row["source_accuracy"] and not row["accuracy_why"]]


TABLED_BLENDS = [row for row in ROWS if row["source"] == "RefData252" and row["refrigerant"] in PSEUDO_PURE]


@pytest.mark.parametrize("row", [pytest.param(row, id=row["id"]) for row in TABLED_BLENDS])
def test_tables_of_blends_come_from_the_pseudo_pure_fit(row):
    """The printed R-404A and R-410A tables are the pseudo-pure equation's, whence our tolerance to them."""
    name, T = row["refrigerant"], float(row["T_C"]) + KELVIN
    value = {
        "p_dew_kPa": lambda: CoolProp.PropsSI("P", "T", T, "Q", 1, name) / 1e3,
        "latent_heat_kJ_per_kg": lambda: sum(
            sign * CoolProp.PropsSI("H", "T", T, "Q", q, name) / 1e3 for q, sign in ((1, 1), (0, -1))
        ),
        "density_bubble_kg_per_m3": lambda: CoolProp.PropsSI("D", "T", T, "Q", 0, name),
        "density_dew_kg_per_m3": lambda: CoolProp.PropsSI("D", "T", T, "Q", 1, name),
    }[row["quantity"]]()

    # The table's own interpolation and last digits: one unit of the last printed digit.
    assert value == pytest.approx(float(row["printed"]), abs=2.0 * float(row["half_digit"]), rel=0)


BOILING = [row for row in REMEMBERED if row["kind"] == "boiling point at 1 atm"]


@pytest.mark.parametrize("row", _parameters(BOILING))
def test_remembered_boiling_point(row):
    """From memory, a sanity check: bubble or dew point at one atmosphere within 0.7 K (R-417A 1.2 K)."""
    computed = float(AT_PRESSURE[row["quantity"]](fluid(row["refrigerant"]), ATMOSPHERE_PA))

    assert computed == pytest.approx(float(row["remembered"]), abs=float(row["tolerance"]), rel=0)


LINE = [row for row in REMEMBERED if row["source"] == "HandbookLineTable"]


@pytest.mark.parametrize("row", _parameters(LINE))
def test_remembered_pressure_drop_of_a_suction_line(row):
    """From memory, a sanity check: the slope of the dew line turns 0.04 K/m into the tabled pressure drop."""
    T = float(row["kind"].split(" at ")[1].removesuffix(" degC")) + KELVIN
    f = fluid(row["refrigerant"])
    p = f.p_dew(T)
    drop = 0.04 * p / f.dew_slope(p)

    assert float(drop) == pytest.approx(float(row["remembered"]), abs=float(row["tolerance"]), rel=0)


def test_common_practice_r134a_pressure_at_105_degF():
    """Common practice, no source: R-134a at 149.8 psia stands at 105 degF, to the whole degree such charts print."""
    psi = 0.45359237 * 9.80665 / 0.0254**2
    T = float(fluid("R134a").dew(149.8 * psi).T_K)

    assert 1.8 * T - 459.67 == pytest.approx(105.0, abs=0.5)
