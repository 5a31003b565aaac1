"""Saturation of a refrigerant over temperature, and the lines of its pressure-enthalpy chart."""

import numpy as np
import pytest

from retrofit.errors import NoModelError, UnknownRefrigerantError
from retrofit.properties import fluid
from retrofit.study.lines import chart_lines
from retrofit.study.saturation import saturation_table

KELVIN = 273.15


def test_rows_are_the_properties_at_the_temperatures_asked_for():
    """Each row agrees with the properties room at its own temperature, in the order given."""
    table = saturation_table("r-448a", [300.0, 250.0])
    behaviour = fluid("R448A")

    assert (table.refrigerant.designation, [row.T_K for row in table.rows]) == ("R448A", [300.0, 250.0])
    for row in table.rows:
        assert row.reason is None
        assert row.p_bubble_Pa == float(behaviour.p_bubble(row.T_K))
        assert row.p_dew_Pa == float(behaviour.p_dew(row.T_K))
        assert row.p_bubble_Pa > row.p_dew_Pa
        assert row.density_bubble_kg_per_m3 > row.density_dew_kg_per_m3
        assert row.h_dew_J_per_kg > row.h_bubble_J_per_kg


def test_water_boils_at_its_normal_boiling_point():
    """Water at 99.974 degC has 101.325 kPa (IAPWS-95, printed to 0.001 K, which is 0.0036 % in pressure)."""
    (row,) = saturation_table("R718", [99.974 + KELVIN]).rows

    assert row.p_dew_Pa == pytest.approx(101_325.0, rel=1e-4)


def test_a_temperature_outside_the_range_is_a_row_with_its_reason():
    """It carries no number, and the rows beside it are as they were."""
    cold, inside, hot = saturation_table("R134a", [50.0, 273.15, 400.0]).rows

    for row in (cold, hot):
        assert "outside the range of its model" in row.reason
        assert (row.p_bubble_Pa, row.p_dew_Pa, row.h_dew_J_per_kg, row.density_dew_kg_per_m3) == (None,) * 4
    assert inside == saturation_table("R134a", [273.15]).rows[0]
    assert inside.reason is None


def test_no_table_without_a_model_or_an_entry():
    """A refrigerant without a model and one that does not exist are refused by name."""
    with pytest.raises(NoModelError, match="R1132a"):
        saturation_table("R468A", [273.15])
    with pytest.raises(UnknownRefrigerantError, match="R999"):
        saturation_table("R999", [273.15])


@pytest.mark.parametrize("name", ["R134a", "R448A", "R717"])
def test_chart_lines_stand_on_the_usual_references(name):
    """Liquid at 0 degC has 200 kJ/kg and 1 kJ/(kg K) after the IIR's convention, at -40 nothing after the other."""
    behaviour = fluid(name)
    zeros = chart_lines(behaviour).zeros
    at_zero, at_forty = (behaviour.bubble(behaviour.p_bubble(T + KELVIN)) for T in (0.0, -40.0))

    assert float(at_zero.h_J_per_kg) - zeros["si"].h_J_per_kg == pytest.approx(200e3, abs=1e-3)
    assert float(at_zero.s_J_per_kgK) - zeros["si"].s_J_per_kgK == pytest.approx(1e3, abs=1e-6)
    assert float(at_forty.h_J_per_kg) - zeros["ip"].h_J_per_kg == pytest.approx(0.0, abs=1e-3)
    assert "IIR" in zeros["si"].name
    assert "−40 °F" in zeros["ip"].name


def test_chart_lines_of_a_fluid_without_the_usual_references_say_which_one_they_use():
    """Water's liquid range begins above -40 degC, so its own lowest temperature is the zero and is named."""
    zeros = chart_lines(fluid("R718")).zeros

    assert "the lowest temperature of the model" in zeros["ip"].name


def test_chart_lines_close_toward_the_critical_point():
    """Both lines rise in pressure, and the heat of evaporation between them shrinks all the way up."""
    lines = chart_lines(fluid("R410A"), count=60)

    assert lines.T_K.shape == (60,)
    assert np.all(np.diff(lines.p_bubble_Pa) > 0.0)
    assert np.all(np.diff(lines.p_dew_Pa) > 0.0)
    assert np.all(np.diff(lines.h_dew_J_per_kg - lines.h_bubble_J_per_kg) < 0.0)
    assert lines.p_bubble_Pa[-1] < lines.p_critical_Pa
