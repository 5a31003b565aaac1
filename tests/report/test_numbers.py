"""Numbers on the page are those of the result, in the unit that stands beside them."""

import re

import pytest

from retrofit.checks import assess
from retrofit.report import render_html
from retrofit.study import compare

# Factors to SI: NIST Special Publication 811 (2008), appendix B; a ton of refrigeration is 12 000 Btu/h.
TO_SI = {
    "bar a": 1e5, "psia": 6894.757, "kW": 1e3, "ton": 3516.853, "kg/h": 1 / 3600, "lb/h": 0.45359237 / 3600,
    "m³/h": 1 / 3600, "cfm": 4.719474e-4, "kJ/kg": 1e3, "Btu/lb": 2326.0, "kJ/m³": 1e3, "Btu/ft³": 37258.95,
    "": 1.0, "Btu/h": 0.2930711,
}  # fmt: skip
QUANTITIES = [
    ("Condensing pressure, absolute", "duty", "p_cond_Pa"),
    ("Evaporating pressure, absolute", "duty", "p_evap_Pa"),
    ("Pressure ratio", "duty", "pressure_ratio"),
    ("Discharge temperature", "duty", "T_discharge_K"),
    ("Evaporator dew point", "duty", "T_evap_dew_K"),
    ("Condenser bubble point", "duty", "T_cond_bubble_K"),
    ("Volumetric capacity", "duty", "volumetric_capacity_J_per_m3"),
    ("Refrigerating effect", "duty", "refrigerating_effect_J_per_kg"),
    ("COP, cooling over compressor power", "duty", "cop"),
    ("Displacement needed (swept volume)", "duty", "swept_volume_m3_per_s"),
    ("Cooling", "compressor", "cooling_W"),
]


def number(text):
    """Return the number of a cell, and half a unit of its last digit."""
    plain = re.sub(r"[\s\u202f]", "", text).replace("−", "-")
    decimals = len(plain.partition(".")[2])
    return float(plain), 0.5 * 10.0**-decimals


def in_SI(value, unit):
    """Return a value in SI, by factors of this test's own."""
    if unit == "°C":
        return value + 273.15
    if unit == "°F":
        return (value + 459.67) / 1.8
    return value * TO_SI[unit]


@pytest.mark.parametrize("units", ["si", "ip"])
@pytest.mark.parametrize(("label", "basis", "name"), QUANTITIES)
def test_the_table_shows_the_numbers_of_the_result(label, basis, name, units, page_of, read_page, assessed):
    """Each cell, read back with its unit, is the number of the result within half its last digit.

    A new plant has no number with the existing compressor, and a dash there.
    """
    rows = read_page(page_of("harbour-market", units)).tables["t-comparison"]
    row = next(row for row in rows if row[0] == label)

    absent = [
        entry.refrigerant.designation for entry in assessed("harbour-market").entries if not getattr(entry, basis)
    ]
    assert absent == (["R454C"] if basis == "compressor" else [])
    for cell, entry in zip(row[2:], assessed("harbour-market").entries, strict=True):
        if entry.refrigerant.designation in absent:
            assert cell == "–"
            continue
        value, half = number(cell)
        wanted = getattr(getattr(entry, basis), name)
        width = abs(in_SI(half, row[1]) - in_SI(0.0, row[1]))
        assert in_SI(value, row[1]) == pytest.approx(wanted, abs=1.001 * width, rel=2e-6)


@pytest.mark.parametrize(("units", "atmosphere"), [("si", 1.01325), ("ip", 14.6959)])
def test_gauge_pressure_is_absolute_less_the_air_around_the_plant(units, atmosphere, page_of, read_page):
    """At sea level the two rows differ by one standard atmosphere, 1.01325 bar or 14.696 psi (ICAO Doc 7488)."""
    rows = read_page(page_of("harbour-market", units)).tables["t-comparison"]
    absolute, gauge = (
        next(row for row in rows if row[0] == f"Condensing pressure, {kind}") for kind in ("absolute", "gauge")
    )

    for a, g in zip(absolute[2:], gauge[2:], strict=True):
        assert number(a)[0] - number(g)[0] == pytest.approx(atmosphere, abs=2.01 * number(g)[1])


@pytest.mark.parametrize("units", ["si", "ip"])
def test_the_state_table_closes_the_energy_balance(units, page_of, read_page, assessed):
    """h8 − h6 of the state table is the refrigerating effect, and over h2 − h1 it is the COP, as the steps say."""
    page = read_page(page_of("harbour-market", units))
    tables = [rows for rows in page.tables.values() if rows[0][:2] == ["Point", "State"]]
    column = next(i for i, text in enumerate(tables[0][0]) if text.startswith("Enthalpy"))

    assert len(tables) == len(assessed("harbour-market").entries)
    for rows, entry in zip(tables, assessed("harbour-market").entries, strict=True):
        h = {int(row[0]): number(row[column])[0] for row in rows[1:]}
        unit = rows[0][column].split()[-1]
        assert in_SI(h[8] - h[6], unit) == pytest.approx(
            entry.duty.refrigerating_effect_J_per_kg, abs=in_SI(0.11, unit)
        )
        assert (h[8] - h[6]) / (h[2] - h[1]) == pytest.approx(entry.duty.cop, rel=0.004)
        assert h[5] == h[6]


def test_limits_by_concentration_keep_their_digits(case_of, made_at, read_page):
    """Ammonia's practical limit of EN 378, 0.00035 kg/m³, is 0.35 g/m³ or 0.0218 lb in 1000 cubic feet, not 0."""
    result = assess(compare(case_of(existing="R22", candidates=("R717",))))
    cells = {}
    for units in ("si", "ip"):
        rows = read_page(render_html(result, units, made_at=made_at)).tables["t-environment"]
        row = next(row for row in rows if row[0] == "Practical limit of EN 378")
        cells[row[1]] = row[3]

    assert cells == {"g/m³": "0.35", "lb/1000 ft³": "0.0218"}  # 0.35 g/m³ * 28.31685 m³ / 453.59237 g/lb


def test_enthalpy_stands_on_the_reference_that_is_named(assessed):
    """Saturated liquid at 0 °C has 200 kJ/kg in SI; at −40 °F it has 0 in inch-pound units (IIR; ASHRAE practice)."""
    import numpy as np

    lines = assessed("harbour-market").existing.lines
    at_0, at_40 = (float(np.interp(T, lines.T_K, lines.h_bubble_J_per_kg)) for T in (273.15, 233.15))

    assert at_0 - lines.zeros["si"].h_J_per_kg == pytest.approx(200e3, abs=60.0)  # lines are straight between points
    assert at_40 - lines.zeros["ip"].h_J_per_kg == pytest.approx(0.0, abs=60.0)
