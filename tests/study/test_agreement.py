"""Readings beside the model of today's plant at the same point, and losses of motor and drive calibrated by them.

The model is worked out again by hand, step by step, with states from the property library; powers, currents and heats
by their definitions.
"""

import math

import pytest
from CoolProp.CoolProp import PropsSI
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from retrofit.case import read_case
from retrofit.study import compare
from retrofit.study.agreement import Compared, WhyNot
from retrofit.study.life import with_life

KELVIN = 273.15
ATMOSPHERE_PA = 101325.0
TABLES = 1e-4  # relative: interpolation of the property tables, checked to 1e-5 in every state
PLANT = """
[plant]
refrigerant = "R134a"
[duty]
cooling = "40 kW"
evaporating = "-5 degC"
condensing = "40 degC"
useful_superheat = "5 K"
line_superheat = "5 K"
subcooling = "3 K"
[compressor]
isentropic_efficiency = 0.70
volumetric_efficiency = 0.85
swept_volume = "100 m3/h"
{compressor}
[compare]
candidates = ["R513A"]
[readings]
{readings}
"""
ELECTRICITY = 'voltage = "400 V"\nphases = 3\npower_factor = 0.85\n'
AIR = """
evaporator_in = "2 degC"
evaporator_out = "-3 degC"
evaporator_flow = "8 kg/s"
evaporator_specific_heat = "1.006 kJ/(kg K)"
condenser_in = "25 degC"
condenser_out = "{out}"
condenser_flow = "9 kg/s"
condenser_specific_heat = "1.006 kJ/(kg K)"
"""


@pytest.fixture
def plant_of(tmp_path):
    """Return a function that compares an R134a plant with readings."""

    def compared(readings, compressor=""):
        path = tmp_path / "plant.toml"
        path.write_text(PLANT.format(readings=readings, compressor=compressor), encoding="utf-8")
        return compare(read_case(path))

    return compared


def beside(comparison):
    """Return what stands beside what, by quantity."""
    return {row.quantity: row for row in comparison.beside}


def by_hand(T_evap_C, T_cond_C):
    """Return power, discharge temperature, cooling and heat rejected of the plant at full, at its shaft.

    h1 at 10 K above the dew point; h2 = h1 + (h2s - h1) / 0.70; m = 100 m3/h x 0.85 x density 1; P = m (h2 - h1);
    cooling = m (h 5 K above dew - h liquid 3 K below bubble); heat rejected = m (h2 - h liquid).
    """
    p1, p2 = (PropsSI("P", "T", T + KELVIN, "Q", 1, "R134a") for T in (T_evap_C, T_cond_C))
    suction = ("P", p1, "T", T_evap_C + 10.0 + KELVIN, "R134a")
    h1, s1, density = (PropsSI(name, *suction) for name in "HSD")
    h2 = h1 + (PropsSI("H", "P", p2, "S", s1, "R134a") - h1) / 0.70
    liquid = PropsSI("H", "P", p2, "T", T_cond_C - 3.0 + KELVIN, "R134a")
    outlet = PropsSI("H", "P", p1, "T", T_evap_C + 5.0 + KELVIN, "R134a")
    flow = 100.0 / 3600.0 * 0.85 * density
    T2 = PropsSI("T", "P", p2, "H", h2, "R134a")
    return flow * (h2 - h1), T2, flow * (outlet - liquid), flow * (h2 - liquid), p1, p2


def test_the_model_stands_at_the_point_of_the_readings(plant_of):
    """Read at -8/45 degC while the duty is -5/40 degC: everything is that of -8/45, by hand."""
    power, _, cooling, heat, p1, p2 = by_hand(-8.0, 45.0)
    gauges = [f'{name} = "{(p - ATMOSPHERE_PA) / 1e5:.7f} bar g"' for name, p in
              (("suction_pressure", p1), ("discharge_pressure", p2))]  # fmt: skip
    readings = "\n".join([*gauges, 'power = "15 kW"', 'current = "26 A"', ELECTRICITY, AIR.format(out="31 degC")])
    found = beside(plant_of(readings, "motor_efficiency = 0.90"))

    electric = power / 0.90
    expected = {
        Compared.POWER: electric,
        Compared.CURRENT: electric / (math.sqrt(3.0) * 400.0 * 0.85),
        Compared.COP: cooling / electric,
        Compared.CAPACITY: cooling,
        Compared.HEAT_REJECTED: heat,
    }
    for quantity, value in expected.items():
        assert found[quantity].modelled == pytest.approx(value, rel=TABLES), quantity
        assert found[quantity].reason is None, quantity
    assert found[Compared.POWER].difference == pytest.approx(15e3 / electric - 1.0, abs=TABLES)


def test_without_pressures_the_model_stands_at_the_duty(plant_of):
    """-5/40 degC by hand; the discharge temperature differs in kelvin."""
    power, T2, *_ = by_hand(-5.0, 40.0)
    found = beside(plant_of('discharge_temperature = "92 degC"\npower = "12 kW"'))

    assert found[Compared.DISCHARGE].modelled == pytest.approx(T2, abs=0.02)
    assert found[Compared.DISCHARGE].difference == pytest.approx(92.0 + KELVIN - T2, abs=0.02)
    assert found[Compared.POWER].modelled == pytest.approx(power, rel=TABLES)


def test_power_from_the_current_stands_for_a_meter(plant_of):
    """sqrt(3) x 400 V x 25 A x 0.85 = 14.72 kW."""
    found = beside(plant_of(f'current = "25 A"\n{ELECTRICITY}'))

    assert found[Compared.POWER].read == pytest.approx(math.sqrt(3.0) * 400.0 * 25.0 * 0.85)
    assert found[Compared.POWER].read == pytest.approx(14722.0, abs=1.0)
    assert found[Compared.POWER].difference == pytest.approx(found[Compared.CURRENT].difference)


@pytest.mark.parametrize(("out", "by"), [("31 degC", 54324.0), ("41 degC", 144864.0)])
def test_the_heat_balance_by_hand(plant_of, out, by):
    """Cooling 8 x 1006 x 5 = 40 240 W; power 12 kW x 0.9; heat given off 9 x 1006 x 6 or x 16 W.

    Heat of the suction line: 5 K, some hundredths of the cooling, which the model adds.
    """
    found = plant_of('power = "12 kW"\n' + AIR.format(out=out), "motor_efficiency = 0.90")
    row, duty = beside(found)[Compared.HEAT_BALANCE], found.existing.duty

    assert row.read == pytest.approx(by)
    assert row.modelled == pytest.approx(40240.0 * (1.0 + duty.line_heat_W / duty.cooling_W) + 10800.0, rel=1e-6)
    assert row.reason is None


def test_a_balance_that_doubts_its_readings_is_still_told(plant_of):
    """Twice the heat of cooling and power: the readings are in doubt, and the balance has its numbers all the same."""
    found = plant_of('power = "12 kW"\n' + AIR.format(out="41 degC"), "motor_efficiency = 0.90")

    assert "reading-heat-balance" in {problem.code for problem in found.baseline.problems}
    assert beside(found)[Compared.HEAT_BALANCE].difference > 1.0
    assert beside(found)[Compared.CAPACITY].reason.why in (WhyNot.IN_DOUBT, WhyNot.NOT_READ)


@pytest.mark.parametrize(
    ("quantity", "readings", "compressor", "why", "keys"),
    [
        (Compared.POWER, 'discharge_temperature = "70 degC"', "", WhyNot.NOT_READ, ("readings.power",)),
        (
            Compared.CURRENT,
            'power = "12 kW"\ncurrent = "25 A"\nvoltage = "400 V"',
            "",
            WhyNot.KEY_MISSING,
            ("readings.phases", "readings.power_factor"),
        ),
        (Compared.POWER, 'power = "6 kW"\nload = "50 %"', 'speed = "steps"\nsteps = 4', WhyNot.PART_LOAD, None),
        (Compared.POWER, f'power = "15 kW"\ncurrent = "29 A"\n{ELECTRICITY}', "", WhyNot.IN_DOUBT, None),
        (Compared.HEAT_REJECTED, 'power = "12 kW"', "", WhyNot.NOT_READ, None),
    ],
)
def test_what_cannot_be_compared_has_a_reason_with_keys(plant_of, quantity, readings, compressor, why, keys):
    """Not read, one reading missing, part load, readings in doubt: each its own state, with the keys it is about."""
    row = beside(plant_of(readings, compressor))[quantity]

    assert row.difference is None
    assert row.reason.why == why
    assert row.reason.keys
    assert keys is None or row.reason.keys == keys


def test_a_machine_that_starts_and_stops_is_comparable_at_part_load(plant_of):
    """While it runs it takes its full power, whatever the load."""
    row = beside(plant_of('power = "12 kW"\nload = "50 %"', 'speed = "fixed"'))[Compared.POWER]

    assert row.difference is not None


def test_what_the_model_was_made_from_does_not_test_it(case_of, tmp_path):
    """Left out, the isentropic efficiency comes from the discharge temperature: it then agrees with itself."""
    text = PLANT.replace("isentropic_efficiency = 0.70\n", "")
    readings = (
        'suction_pressure = "1.4 bar g"\ndischarge_pressure = "9.2 bar g"\nsuction_temperature = "5 degC"\n'
        'discharge_temperature = "72 degC"'
    )
    path = tmp_path / "plant.toml"
    path.write_text(text.format(readings=readings, compressor=""), encoding="utf-8")
    row = beside(compare(read_case(path)))[Compared.DISCHARGE]

    assert row.reason.why == WhyNot.IN_THE_MODEL
    assert row.reason.keys == ("readings.discharge_temperature",)


# Calibration


@settings(max_examples=20, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(ratio=st.floats(0.6, 2.0))
def test_calibration_takes_losses_within_its_range_only(plant_of, ratio):
    """Power read from 1 to 1.5 times that at the shaft is taken, its model then gives the power read; nothing else is.

    Shaft power at -5/40 degC by hand.
    """
    shaft = by_hand(-5.0, 40.0)[0]
    found = plant_of(f'power = "{ratio * shaft / 1e3:.6f} kW"\ncalibrate = true')
    calibration, motor = found.calibration, found.case.compressor.motor_efficiency

    assert calibration.ratio == pytest.approx(ratio, rel=TABLES)
    if 1.001 < ratio < 1.499:
        assert calibration.is_applied
        assert motor == pytest.approx(1.0 / ratio, rel=TABLES)
        assert beside(found)[Compared.POWER].modelled == pytest.approx(ratio * shaft, rel=TABLES)
    elif not 0.999 < ratio < 1.501:
        assert not calibration.is_applied
        assert motor is None
        assert calibration.reason.why == (WhyNot.BELOW_RANGE if ratio < 1.0 else WhyNot.ABOVE_RANGE)


@pytest.mark.parametrize(
    ("factor", "applied", "efficiency"), [(1.2, True, 0.9 / 1.2), (0.95, False, None), (1.4, False, None)]
)
def test_losses_of_a_motor_that_the_case_gives_stay_within_the_whole(plant_of, factor, applied, efficiency):
    """With a motor of 90 %, a drive adds losses: 0.9 / 1.2 = 75 % together; less than the motor's own cannot be, and
    1.4 / 0.9 = 1.56 times the shaft power is beyond 1.5."""
    electric = by_hand(-5.0, 40.0)[0] / 0.9
    found = plant_of(f'power = "{factor * electric / 1e3:.6f} kW"\ncalibrate = true', "motor_efficiency = 0.90")

    assert found.calibration.is_applied is applied
    assert found.case.compressor.motor_efficiency == pytest.approx(efficiency or 0.9, rel=TABLES)
    assert found.calibration.efficiency == (None if efficiency is None else pytest.approx(efficiency, rel=TABLES))


def test_calibration_without_power_is_not_applied(plant_of):
    """The state says why, and the case stays as it was."""
    found = plant_of('discharge_temperature = "70 degC"\ncalibrate = true')

    assert not found.calibration.is_applied
    assert found.calibration.reason.why == WhyNot.NOT_READ
    assert found.case.compressor.motor_efficiency is None
    assert plant_of('power = "14 kW"').calibration is None
    assert plant_of('power = "14 kW"\ncalibrate = false').calibration is None


def test_every_option_alike_and_ratios_untouched(rack_of, money):
    """Electricity of the compressors of every option is the calibrated ratio times as much, in the draws too, and what
    is relative stays: by the definition of a factor that all options have in common."""
    power = compare(rack_of()).existing.compressor.power_W
    readings = f'[readings]\npower = "{1.25 * power / 1e3:.6f} kW"\n'
    before, after = (
        with_life(compare(rack_of(more=f"{money}\n{readings}{key}", candidates='"R448A", "R452A"')), draws=64)
        for key in ("", "calibrate = true\n")
    )
    ratio = after.calibration.ratio

    assert before.calibration is None
    assert ratio == pytest.approx(1.25, rel=1e-6)
    for old, new in zip(before.entries, after.entries, strict=True):
        name = old.refrigerant.designation
        assert new.relative == old.relative
        assert new.duty == old.duty
        assert new.plant.full == old.plant.full
        assert new.plant.electric_W == pytest.approx(ratio * old.plant.electric_W)
        assert new.plant.mean_electric_W == pytest.approx(ratio * old.plant.mean_electric_W)
        one, other = before.life.years[name], after.life.years[name]
        assert other.compressor_J == pytest.approx(ratio * one.compressor_J)
        rest = one.energy_J - one.compressor_J
        assert other.energy_J == pytest.approx(rest + ratio * one.compressor_J)
        assert other.delivered_J == one.delivered_J
        drawn, redrawn = (found.life.certainty[name].quantiles["energy_J"].p50 for found in (before, after))
        assert drawn < redrawn < ratio * drawn
        assert redrawn == pytest.approx(rest + ratio * (drawn - rest), rel=0.01)  # quantiles of other draws' order
    assert after.life.certainty["R448A"].quantiles["cop_ratio"] == before.life.certainty["R448A"].quantiles["cop_ratio"]
