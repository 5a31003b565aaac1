"""Inputs: which are offered, and how far a step goes."""

import pytest

from retrofit.case.model import FIELDS
from retrofit.meeting.inputs import LABELS, nudged, offered
from retrofit.meeting.session import RefusedError


def test_every_key_is_one_of_the_case_file():
    """No input is named that a case file does not know."""
    assert set(LABELS) <= set(FIELDS)


def test_only_what_means_something_for_the_plant_is_offered():
    """Keys of tables the case has not are left out, and constant efficiencies beside data of the compressor."""
    bare = {"plant": {}, "duty": {}, "compare": {}}
    whole = {**bare, "condenser": {}, "compressor": {"efficiency_points": []}}

    assert {"duty.condensing", "plant.charge", "compressor.isentropic_efficiency"} <= set(offered(bare))
    assert "condenser.inlet" not in offered(bare)
    assert "condenser.inlet" in offered(whole)
    assert "compressor.isentropic_efficiency" not in offered(whole)


# By hand: a kelvin or a degree Celsius, two degrees Fahrenheit, a hundredth of a bare share, else about a twentieth;
# low, base and high go together, by the step of the base.
@pytest.mark.parametrize(
    ("text", "up", "down"),
    [
        ("42 degC", "43 degC", "41 degC"),
        ("-8 degC", "-7 degC", "-9 degC"),
        ("7.5 K", "8.5 K", "6.5 K"),
        ("100 degF", "102 degF", "98 degF"),
        ("0.68", "0.69", "0.67"),
        ("15 %", "16 %", "14 %"),
        ("120 kW", "125 kW", "115 kW"),
        ("260 kg", "270 kg", "250 kg"),
        ("201 m3/h", "211 m3/h", "191 m3/h"),
        ("0.3 kg/kWh", "0.31 kg/kWh", "0.29 kg/kWh"),
        ("[0.15, 0.18, 0.25]", "[0.16, 0.19, 0.26]", "[0.14, 0.17, 0.24]"),
        ('["9 kW", "10 kW", "12 kW"]', '["9.5 kW", "10.5 kW", "12.5 kW"]', '["8.5 kW", "9.5 kW", "11.5 kW"]'),
    ],
)
def test_a_step_keeps_the_unit(text, up, down):
    """A step up and a step down, in the unit the value is written in."""
    assert nudged(text, +1) == up
    assert nudged(text, -1) == down


@pytest.mark.parametrize("text", ["", "warm", "[0.2, 0.3]", "[low, base, high]", "[[1, 2, 3]]", "[]"])
def test_there_is_no_step_without_a_number(text):
    """What is no single number is refused in words."""
    with pytest.raises(RefusedError, match="no value to step from"):
        nudged(text, +1)
