"""The numbers of a job card: cylinders, oil changes, first charge, and what the gauges should show."""

import csv
import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from retrofit.checks import assess
from retrofit.checks.changeover import changeover_of, chosen_for_cards
from retrofit.study import compare
from retrofit.study.bands import model_band
from retrofit.study.changeover import Window, operating_span, pressure_rows, recovery
from retrofit.study.practice import practice, practice_figures
from retrofit.study.uncertain import PHYSICAL

KELVIN = 273.15
PUBLISHED = Path(__file__).parents[1] / "published" / "property_values.csv"
EXCHANGERS = {
    "evaporator": {"medium": "air", "inlet": "2 degC", "outlet": "-3 degC", "arrangement": "crossflow"},
    "condenser": {"medium": "air", "inlet": "32 degC", "outlet": "38 degC", "arrangement": "crossflow"},
}
PLANT = {"charge": "260 kg", "highest_ambient": "40 degC", "oil": "polyol ester", "evaporator": "direct expansion"}


def middle(window):
    """Return the middle of a window."""
    return 0.5 * (window.low + window.high)


@pytest.fixture(scope="module")
def change(case_with):
    """Return a function that gives a result with one candidate and the numbers of changing to it."""

    def make(T_today_K=None, existing="R404A", candidate="R448A", **tables):
        result = assess(compare(case_with(existing, (candidate,), **tables)))
        return result, changeover_of(result, result.candidates[0], T_today_K)

    return make


@pytest.fixture(scope="module")
def usual(change):
    """Return the result and the numbers of a rack with exchangers, today being 30 degC at the condenser."""
    return change(30.0 + KELVIN, plant=PLANT, readings={"current": "92 A"}, **EXCHANGERS)


def test_cylinders_by_hand(change):
    """1400 kg of R-22 in cylinders of 60 l, 80 % full at 50 degC, are 27.

    Liquid R-22 at 50 degC has 1082 kg/m3 (ASHRAE tables, from memory, within 0.3 %): 0.8 of 60 l take 51.9 kg,
    and 1400 / 51.9 = 26.96. In cylinders of 12 l, 10.39 kg each: 134.8, so 135.
    """
    found = recovery(change(existing="R22", plant={"charge": "1400 kg"})[0].case)

    assert found.kg_per_m3 == pytest.approx(0.8 * 1082.0, rel=3e-3)
    assert [(item.volume_m3, item.count) for item in found.cylinders] == [(0.012, 135), (0.060, 27)]


def test_a_charge_that_is_not_known_has_no_cylinders_but_what_a_litre_takes(change):
    """Without a charge the technician still learns what a cylinder takes; carbon dioxide has no liquid at 50 degC."""
    unknown = recovery(change()[0].case)
    dioxide = recovery(change(existing="R744", plant={"charge": "50 kg"})[0].case)

    assert (unknown.charge_kg, unknown.cylinders) == (None, ())
    assert "`charge`" in unknown.reason
    assert unknown.kg_per_m3 > 0.0
    assert (dioxide.kg_per_m3, dioxide.cylinders) == (None, ())
    assert "no liquid at 50 °C" in dioxide.reason


def test_oil_changes_by_hand(change):
    """With 20 to 50 % left by each: 0.2^2 = 4 %, 0.2^3 = 0.8 %; 0.5^5 = 3.1 %, 0.5^7 = 0.8 %. With 30 %: 3 and 4."""
    by_practice, own = change()[1], change(plant={"oil_left": "30 %"})[1]

    assert [(item.target, item.fewest, item.most) for item in by_practice.oil_changes] == [(0.01, 3, 7), (0.05, 2, 5)]
    assert [(item.fewest, item.most) for item in own.oil_changes] == [(4, 4), (3, 3)]
    assert (by_practice.is_oil_left_given, own.is_oil_left_given) == (False, True)


def test_first_charge_and_climate_weight_by_hand(usual):
    """85 to 90 % of what is expected go in first; the weight is kilograms times GWP over a thousand (AR4: 1386)."""
    _, found = usual
    expected = found.entry.hardware_numbers.filling.expected_kg

    assert found.first_charge_kg == pytest.approx((0.85 * expected, 0.90 * expected))
    assert [item.basis for item in found.weights] == ["gwp_100yr_ar4", "gwp_100yr_ar6"]
    assert found.weights[0].gwp == pytest.approx(1386.0, abs=1.5)
    assert found.weights[0].co2e_t == pytest.approx(expected * found.weights[0].gwp / 1000.0)


def test_a_warmer_condenser_raises_every_reading(usual):
    """Physics: with warmer air both pressures, discharge temperature, power and current rise, on one machine."""
    by_warmth = sorted(usual[1].expected, key=lambda item: item.T_inlet_K)

    assert [item.name for item in by_warmth] == ["milder", "today", "design", "hottest"]
    assert [item.T_inlet_K - KELVIN for item in by_warmth] == pytest.approx([22.0, 30.0, 32.0, 40.0])
    for quantity in ("p_evap_Pa", "p_cond_Pa", "T_discharge_K", "power_W", "current_A"):
        assert np.all(np.diff([middle(getattr(item, quantity)) for item in by_warmth]) > 0.0), quantity


def windows(case):
    """Return the one candidate of a case, and what is expected of it at the design point."""
    result = assess(compare(case))
    found = changeover_of(result, result.candidates[0])
    return result.candidates[0], next(item for item in found.expected if item.name == "design")


def exact(case, **widths):
    """Return a case with no input off but those named, by half the width of its limits."""
    return replace(case, widths={**dict.fromkeys(PHYSICAL, 0.0), **widths})


def test_with_exact_inputs_a_window_is_the_band_of_the_model(case_with):
    """What is expected at the design point is what the comparison has there, as wide as the model's bands."""
    case = exact(case_with(plant=PLANT, readings={"current": "92 A"}, **EXCHANGERS))
    (entry, design), band = windows(case), model_band()
    full = entry.plant.full

    assert middle(design.p_cond_Pa) == pytest.approx(full.p_cond_Pa, rel=1e-6)
    assert middle(design.T_discharge_K) == pytest.approx(full.T_discharge_K, abs=1e-3)
    assert design.p_evap_Pa.high / middle(design.p_evap_Pa) == pytest.approx(1.0 + band["pressure"].value)
    assert design.T_discharge_K.high - design.T_discharge_K.low == pytest.approx(2.0 * band["T_discharge"].value)
    assert middle(design.current_A) == pytest.approx(entry.hardware_numbers.current_A.new, rel=1e-6)


@pytest.mark.parametrize(
    ("key", "half", "reading"),
    [("duty.condensing", 2.0, "p_cond_Pa"), ("compressor.isentropic_efficiency", 0.05, "T_discharge_K")],
)
def test_a_window_is_as_wide_as_what_its_inputs_do(case_with, key, half, reading):
    """One input within plus or minus h, rectangular: 10 and 90 % of its draws lie 0.8 h below and above it.

    There the plant is computed as a case of its own. Band and input are added in quadrature. Latin hypercube of 200
    draws puts a percentile within 1/200 of its place.
    """
    table, name = key.split(".")
    usual = {"duty": {"condensing": 42.0}, "compressor": {"isentropic_efficiency": 0.70}}[table][name]
    unit = " degC" if table == "duty" else None
    tables = {"plant": PLANT, **EXCHANGERS}
    design = windows(exact(case_with(**tables), **{key: half}))[1]
    band = model_band()["pressure" if reading.startswith("p") else "T_discharge"].value
    full = {}
    for share in (-0.8, 0.0, 0.8):
        value = usual + share * half
        own = {**tables, table: {**tables.get(table, {}), name: f"{value}{unit}" if unit else value}}
        full[share] = getattr(windows(exact(case_with(**own)))[0].plant.full, reading)
    half_band = band * full[0.0] if reading.startswith("p") else band
    low, high = (math.hypot(full[0.0] - full[end], half_band) for end in sorted((-0.8, 0.8), key=full.get))
    window = getattr(design, reading)

    assert full[0.0] - window.low == pytest.approx(low, rel=0.01)
    assert window.high - full[0.0] == pytest.approx(high, rel=0.01)
    assert window.high - window.low > 2.05 * half_band


def test_windows_of_a_usual_plant_are_wider_than_the_model_alone(usual):
    """A kelvin of condensing temperature is about 2.4 % of its pressure: 2 % of the model cannot be all."""
    design = next(item for item in usual[1].expected if item.name == "design")
    full = usual[0].candidates[0].plant.full

    assert design.p_cond_Pa.high / full.p_cond_Pa > 1.025
    assert design.p_cond_Pa.low / full.p_cond_Pa < 0.975
    assert design.power_W.low < full.power_W < design.power_W.high


def test_a_control_of_head_pressure_holds_the_mild_day_up(change):
    """Below its setting the condenser is throttled: the pressure stays at the new setting, and so does the rest."""
    controls = {"head_pressure": "16 bar g"}
    result, held = change(plant=PLANT, controls=controls, **EXCHANGERS)
    free = change(plant=PLANT, **EXCHANGERS)[1]
    setting = result.candidates[0].hardware_numbers.settings[0].p_Pa.new

    assert [item.is_held for item in held.expected] == [True, False, False]
    assert middle(held.expected[0].p_cond_Pa) == pytest.approx(setting, rel=1e-4)
    assert middle(held.expected[0].p_evap_Pa) > middle(free.expected[0].p_evap_Pa)
    assert held.expected[1:] == free.expected[1:]


def test_a_head_pressure_that_the_new_refrigerant_cannot_have_is_said(change):
    """A setting without a pressure of the new refrigerant gives no number for any day, but the reason."""
    found = change(plant={**PLANT, "high_side_limit": "60 bar g"}, controls={"head_pressure": "45 bar g"}, **EXCHANGERS)
    assert found[1].expected == ()
    assert "what the control of head pressure holds is not known" in found[1].expected_reason


def test_without_exchangers_nothing_is_expected_but_said_why(change):
    """Temperatures held are no balance: no reading is foretold."""
    _, found = change(plant=PLANT)

    assert found.expected == ()
    assert "[evaporator]" in found.expected_reason or "[condenser]" in found.expected_reason


def test_a_candidate_without_a_solution_has_what_needs_none(change):
    """R-744 cannot condense at 42 degC: what is to be recovered is told all the same."""
    _, found = change(candidate="R744", plant=PLANT)

    assert found.recovery.cylinders
    assert (found.first_charge_kg, found.expected) == (None, ())
    assert found.expected_reason


ROWS = [
    row
    for row in csv.DictReader(PUBLISHED.read_text(encoding="utf-8").splitlines())
    if row["quantity"] in ("p_dew_kPa", "p_bubble_kPa")
    and row["refrigerant"] in ("R134a", "R404A", "R407F", "R410A", "R449A", "R454C")
    and not row["disagreement"]
]


@pytest.mark.parametrize("row", [pytest.param(row, id=row["id"]) for row in ROWS])
def test_pressures_are_the_published_ones(row):
    """Bubble and dew column against tables and posted figures, as close as the source prints and holds."""
    (found,) = pressure_rows(row["refrigerant"], [float(row["T_C"]) + KELVIN])
    p_Pa = found.p_dew_Pa if row["quantity"] == "p_dew_kPa" else found.p_bubble_Pa
    tolerance = float(row["half_digit"]) * (1 + 1e-9) + float(row["source_accuracy"] or 0.0) * float(row["printed"])

    assert p_Pa / 1e3 == pytest.approx(float(row["printed"]), abs=tolerance, rel=0)


def test_the_mean_column_lies_between_and_is_the_midpoint():
    """At the mean pressure bubble and dew point lie equally far from the temperature; without glide all are one."""
    from retrofit.properties import fluid

    blend, T = fluid("R455A"), np.linspace(240.0, 320.0, 5)
    for row in pressure_rows("R455A", T):
        assert row.p_dew_Pa < row.p_mean_Pa < row.p_bubble_Pa
        points = blend.bubble(row.p_mean_Pa).T_K, blend.dew(row.p_mean_Pa).T_K
        assert 0.5 * sum(map(float, points)) == pytest.approx(row.T_K, abs=1e-6)
    (pure,) = pressure_rows("R134a", [300.0])
    assert pure.p_dew_Pa == pytest.approx(pure.p_mean_Pa, rel=1e-6)
    assert pure.p_bubble_Pa == pytest.approx(pure.p_mean_Pa, rel=1e-6)


def test_a_temperature_outside_the_model_is_an_empty_row():
    """Nothing is made up above the critical point."""
    inside, outside = pressure_rows("R448A", [300.0, 380.0])

    assert inside.p_mean_Pa
    assert (outside.p_bubble_Pa, outside.p_dew_Pa, outside.p_mean_Pa) == (None, None, None)


def test_the_span_holds_every_condition(usual):
    """From the coldest point after the valve to the hottest condensing dew point."""
    result, found = usual
    low, high = operating_span(result, found)
    conditions = result.candidates[0].hardware_numbers.new.conditions.values()

    assert low == min(item.T_evap_inlet_K for item in conditions)
    assert high == max(item.T_cond_dew_K for item in conditions)


@pytest.fixture(scope="module")
def many(case_with):
    """Return a result of more candidates than cards are written for, one of another class, one without a cycle."""
    return assess(compare(case_with(candidates=("R744", "R454C", "R448A", "R449A", "R407A", "R452A"), plant=PLANT)))


def test_cards_are_few_and_the_others_have_a_reason(many):
    """Three at most that no stop stands against, in the order of the case; every other is named with its reason."""
    found = chosen_for_cards(many)
    why = {entry.refrigerant.designation: reason for entry, reason in found.left_out}

    assert len(found.entries) == 3
    assert all(item.level != "stop" for entry in found.entries for item in entry.findings)
    assert {entry.refrigerant.designation for entry in found.entries} | set(why) == set(many.case.compare.candidates)
    assert why["R454C"].startswith("stopped by: ")
    assert why["R744"].startswith("stopped by: ")
    assert sum(reason == "beyond the 3 shown" for reason in why.values()) == 1


@pytest.mark.parametrize(("named", "cards"), [("R452A", ["R452A"]), ("R454C", []), ("R404A", [])])
def test_the_one_recommended_gets_the_card(case_with, many, named, cards):
    """A recommendation of the case decides unless a check stops it; keeping the plant's refrigerant has none."""
    case = case_with(candidates=many.case.compare.candidates, plant=PLANT, report={"recommended": named})
    found = chosen_for_cards(replace(many, case=case))

    assert len(found.left_out) + len(found.entries) == len(many.candidates)
    assert [entry.refrigerant.designation for entry in found.entries] == cards
    assert named in found.why


def test_every_figure_of_practice_has_a_source_and_a_basis():
    """Each says where it comes from and how it is known, and its range runs upwards."""
    for name, figure in practice_figures().items():
        assert figure.source, name
        assert figure.basis in ("read", "practice", "memory"), name
        assert figure.ends[0] <= figure.ends[1], name
    assert practice("vacuum").low * 0.133322 == pytest.approx(67.0, abs=0.5)  # 1 micron of mercury is 0.1333 Pa


def test_windows_keep_their_order(usual):
    """The lower end lies below the upper one everywhere."""
    windows = [w for item in usual[1].expected for w in vars(item).values() if isinstance(w, Window)]

    assert len(windows) == 20
    assert all(window.low < window.high for window in windows)
