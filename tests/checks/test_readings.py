"""Whether readings agree with the model, and the duty with the plant: states, limits, causes, and where they are told.

Limits are worked by hand: a reading is made from the model's own number, so much off.
"""

import json
from datetime import UTC, datetime
from html.parser import HTMLParser

import pytest

from retrofit.case import read_case
from retrofit.case.model import FIELDS
from retrofit.checks import answer, assess
from retrofit.checks.reading_words import calibration_words, contradiction_words, duty_words
from retrofit.checks.readings import Duty, Outcome, Side, causes, duty_held, readings_held
from retrofit.errors import CaseFileError
from retrofit.report.html import render_html
from retrofit.report.machine import comparison_json
from retrofit.report.terminal import comparison_text
from retrofit.study import compare
from retrofit.study.agreement import Compared
from retrofit.units import IP, SI

PLANT = """
[plant]
refrigerant = "R134a"
[duty]
cooling = "{duty}"
evaporating = "-5 degC"
condensing = "40 degC"
useful_superheat = "5 K"
line_superheat = "5 K"
subcooling = "3 K"
[compressor]
isentropic_efficiency = 0.70
volumetric_efficiency = 0.85
{swept}
[compare]
candidates = ["R513A"]
"""


@pytest.fixture
def plant_of(tmp_path):
    """Return a function that assesses an R134a plant with further tables."""

    def assessed(more="", duty="38 kW", swept='swept_volume = "100 m3/h"'):
        path = tmp_path / "plant.toml"
        path.write_text(PLANT.format(duty=duty, swept=swept) + more, encoding="utf-8")
        return assess(compare(read_case(path)))

    return assessed


@pytest.fixture
def model(plant_of):
    """Return the model of the plant at its duty, at full."""
    return plant_of().existing.compressor


def held(comparison, quantity):
    """Return what holding one quantity against the model gave."""
    return next(item for item in readings_held(comparison) if item.beside.quantity == quantity)


@pytest.mark.parametrize(
    ("factor", "outcome", "side"),
    [
        (1.09, Outcome.AGREES, None),
        (0.91, Outcome.AGREES, None),
        (1.11, Outcome.DIFFERS, Side.ABOVE),
        (0.89, Outcome.DIFFERS, Side.BELOW),
    ],
)
def test_power_differs_beyond_a_tenth_of_the_model(plant_of, model, factor, outcome, side):
    """9 % agrees, 11 % differs, either way."""
    found = held(plant_of(f'[readings]\npower = "{factor * model.power_W / 1e3:.6f} kW"'), Compared.POWER)

    assert (found.outcome, found.side) == (outcome, side)
    assert bool(found.causes) == (outcome == Outcome.DIFFERS)
    assert found.source


@pytest.mark.parametrize(("by", "outcome"), [(9.0, Outcome.AGREES), (-9.0, Outcome.AGREES), (11.0, Outcome.DIFFERS),
                                             (-11.0, Outcome.DIFFERS)])  # fmt: skip
def test_discharge_temperature_differs_beyond_ten_kelvin(plant_of, model, by, outcome):
    """9 K agrees, 11 K differs, either way."""
    reading = f'[readings]\ndischarge_temperature = "{model.T_discharge_K - 273.15 + by:.4f} degC"'

    assert held(plant_of(reading), Compared.DISCHARGE).outcome == outcome


def test_limits_are_the_users_own_where_the_case_has_them(plant_of, model):
    """11 % agrees within 15 %, 11 K within 20 K; a level that there is not is refused."""
    readings = (
        f'[readings]\npower = "{1.11 * model.power_W / 1e3:.6f} kW"\n'
        f'discharge_temperature = "{model.T_discharge_K - 273.15 + 11.0:.4f} degC"\n'
    )
    own = '[thresholds]\nreading_share = {note = 0.15}\nreading_temperature = {note = "20 K"}\n'
    found = plant_of(readings + own)

    assert {held(found, quantity).outcome for quantity in (Compared.POWER, Compared.DISCHARGE)} == {Outcome.AGREES}
    assert contradiction_words(found, SI) == ()
    assert "set in the case" in held(found, Compared.POWER).source
    with pytest.raises(CaseFileError):
        plant_of(readings + "[thresholds]\nreading_share = {stop = 0.15}\n")


def test_cooling_a_quarter_of_the_model_is_named_with_the_answer(plant_of, model):
    """Air gives 12 kW where the model gives three times that: 3 kg/s x 1.0 kJ/(kg K) x 4 K."""
    readings = (
        '[readings]\npower = "12 kW"\nevaporator_in = "2 degC"\nevaporator_out = "-2 degC"\n'
        'evaporator_flow = "3 kg/s"\nevaporator_specific_heat = "1.0 kJ/(kg K)"\n'
    )
    found = plant_of(readings)
    said = " ".join(answer(found, SI).contradictions)

    assert held(found, Compared.CAPACITY).beside.read == pytest.approx(12e3)
    assert model.cooling_W > 30e3
    assert {held(found, name).outcome for name in (Compared.CAPACITY, Compared.COP)} == {Outcome.DIFFERS}
    assert "cooling 12 kW read" in said
    assert "COP on electrical power 1.00 read" in said


def test_not_read_is_its_own_state(plant_of):
    """Nothing but a date was read: every quantity is not read, and nothing is said to agree."""
    found = plant_of('[readings]\ndate = "1 June 2026"')

    assert {item.outcome for item in readings_held(found)} == {Outcome.NOT_READ}
    assert len(readings_held(found)) == len(Compared)
    assert readings_held(plant_of()) == ()


def test_a_key_that_is_given_rules_its_cause_out(plant_of, model):
    """With a motor efficiency its losses no longer explain a power above the model."""
    readings = f'[readings]\npower = "{1.5 * model.power_W / 1e3:.6f} kW"'
    without = held(plant_of(readings), Compared.POWER).causes
    motor = 'swept_volume = "100 m3/h"\nmotor_efficiency = 0.95'
    beside_it = held(plant_of(readings, swept=motor), Compared.POWER).causes

    assert without[0].code == "motor-and-drive"
    assert "motor-and-drive" not in [cause.code for cause in beside_it]
    assert beside_it


def test_causes_are_data_with_source_and_keys_that_exist():
    """Each names quantities, a side, what to do, its basis and source; keys are keys of a case; each side has some."""
    for cause in causes():
        assert cause.of, cause.code
        assert cause.side in ("above", "below", "either"), cause.code
        assert cause.text, cause.code
        assert cause.todo, cause.code
        assert cause.source, cause.code
        assert cause.basis in ("read", "practice", "memory"), cause.code
        assert set(cause.unless) <= set(FIELDS), cause.code
    for quantity in Compared:
        for side in Side:
            assert [c for c in causes() if quantity in c.of and c.side in (side, "either")], (quantity, side)


# The duty


@pytest.mark.parametrize(
    ("share", "state"),
    [(0.89, Duty.BELOW), (0.91, Duty.WITHIN), (1.0, Duty.WITHIN), (1.29, Duty.WITHIN), (1.31, Duty.ABOVE)],
)
def test_a_duty_outside_what_the_plant_can_be_stands_in_the_headline(plant_of, model, share, state):
    """From 90 to 130 % of what the plant gives a duty is not named."""
    found = plant_of(duty=f"{share * model.cooling_W / 1e3:.6f} kW")

    assert duty_held(found).state == state
    assert duty_held(found).share == pytest.approx(share, rel=1e-5)
    assert bool(duty_words(found)) == (state != Duty.WITHIN)
    assert answer(found, SI).headline.startswith("The duty of the case") == (state != Duty.WITHIN)


def test_as_much_as_needed_is_not_said_of_a_duty_beyond_the_plant(plant_of):
    """300 kW asked of some 38 kW: candidates are measured against what today's plant gives, and that is said."""
    found = plant_of(duty="300 kW")
    text = comparison_text(found, SI, 100)

    assert "as much as needed" not in text
    assert "as much as today's plant gives" in text
    assert text.index("The duty of the case, 300 kW, is ") < text.index("Cautions")
    assert " kW that today's plant gives" in " ".join(text.split())


def test_a_duty_cannot_be_held_against_a_plant_that_is_made_from_it(plant_of):
    """Without a swept volume the duty sets it: that is a state of its own, and nothing is named."""
    assert duty_held(plant_of(swept="")).state == Duty.NO_SWEPT_VOLUME
    assert duty_words(plant_of(swept="")) == ""


# Where it is told


def test_json_has_states_reasons_causes_and_numbers(plant_of, model):
    """Every quantity with its outcome; the duty; the calibration; all of it JSON."""
    readings = f'[readings]\npower = "{1.2 * model.power_W / 1e3:.6f} kW"\n'
    found = json.loads(json.dumps(comparison_json(plant_of(f"{readings}calibrate = true\n", duty="300 kW"))))
    plain = comparison_json(plant_of(readings))
    power = next(item for item in plain["readings_against_model"] if item["quantity"] == "power")

    assert power["outcome"] == "differs"
    assert power["side"] == "above"
    assert power["difference"] == pytest.approx(0.2, rel=1e-4)
    assert power["causes"][0]["code"] == "motor-and-drive"
    assert plain["calibration"] is None
    assert plain["duty_against_plant"]["state"] == "within what the plant can give"
    assert found["duty_against_plant"]["state"] == "more than the plant gives"
    assert found["duty_against_plant"]["share"] == pytest.approx(300e3 / model.cooling_W)
    assert found["calibration"]["state"] == "applied"
    assert found["calibration"]["motor_and_drive_efficiency"] == pytest.approx(1.0 / 1.2, rel=1e-4)
    assert found["contradictions"] == list(calibration_told(plant_of(f"{readings}calibrate = true\n")))
    assert "compressor.motor_efficiency" in {item["key"] for item in found["defaults"]}


def calibration_told(comparison):
    """Return the sentences on a calibration as a reader in SI sees them."""
    assert calibration_words(comparison)
    return contradiction_words(comparison, SI)


@pytest.mark.parametrize("units", [SI, IP])
def test_a_calibration_that_is_refused_says_its_range(plant_of, model, units):
    """Less power than the model needs: not applied, with both powers and the allowed range."""
    readings = f'[readings]\npower = "{0.8 * model.power_W / 1e3:.6f} kW"\ncalibrate = true\n'
    said = " ".join(contradiction_words(plant_of(readings), units))
    both = [units.with_unit("power", factor * model.power_W) for factor in (0.8, 1.0)]

    assert "Not calibrated, though the case asks for it" in said
    assert "Allowed are 1 to 1.5 times the power at the shaft" in said
    assert "0.800 times as much" in said
    assert all(text.split("\N{NO-BREAK SPACE}")[0][:3] in said for text in both)


class _Texts(HTMLParser):
    """The text of an HTML page."""

    def __init__(self):
        super().__init__()
        self.parts = []

    def handle_data(self, data):
        self.parts.append(data)


def test_page_one_names_what_does_not_agree(plant_of, model):
    """The summary, the first section, has the readings beside the model, and the section on them the table."""
    found = plant_of(f'[readings]\npower = "{1.3 * model.power_W / 1e3:.6f} kW"', duty="300 kW")
    page = render_html(found, "si", made_at=datetime(2026, 12, 1, tzinfo=UTC))
    first = page[page.index('id="answer"') : page.index("</section>", page.index('id="answer"'))]
    reader = _Texts()
    reader.feed(first)
    text = " ".join(" ".join(reader.parts).split())

    assert "The readings do not agree with the model of today's plant: power" in text
    assert "losses of motor and drive, which the model leaves out" in text
    assert "The duty of the case, 300 kW, is " in text
    assert 'id="t-agreement"' in page
    assert "Nothing in the readings contradicts the rest" not in page
