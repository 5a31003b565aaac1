"""What one key of a case says against another: each contradiction is named at its key, none solved by a guess."""

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from retrofit.case import read_case
from retrofit.case.model import FIELDS, TABLES
from retrofit.case.rules import GIVEN_ONCE, NEEDS, NOT_BOTH, ORDERS, RISING
from retrofit.errors import CaseFileError

BASE = """\
[plant]
refrigerant = "R404A"
{plant}
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
{duty}
[compare]
candidates = ["R448A", "R449A"]
{tables}
"""
EVAPORATOR = "[evaporator]\ninlet = '{}'\noutlet = '{}'\narrangement = 'crossflow'"
CONDENSER = "[condenser]\ninlet = '{}'\noutlet = '{}'\narrangement = 'crossflow'"
TEN = str(list(range(10)))
POLYNOMIAL = (
    f"[compressor.polynomial]\nunits = 'SI'\ncapacity = {TEN}\npower = {TEN}\nsuperheat = '11.1 K'\n"
    "subcooling = '0 K'\nevaporating = ['-40 degC', '-5 degC']\ncondensing = ['25 degC', '55 degC']\n"
)
POINTS = "efficiency_points = [[2, 0.62, 0.92], [4, 0.7, 0.86]]\n"


def text_of(tables="", plant="", duty=""):
    """Return the text of a case with more lines."""
    return BASE.format(tables=tables, plant=plant, duty=duty)


@pytest.mark.parametrize(
    "tables",
    [
        EVAPORATOR.format("2 degC", "-3 degC"),
        CONDENSER.format("32 degC", "38 degC"),
        POLYNOMIAL,
        "[compressor]\n" + POINTS,
        "[compressor]\nspeed = 'steps'\nsteps = 4",
        "[compressor]\nspeed = 'variable'",
        "[readings]\ncurrent = '92 A'",
        "[readings]\ncurrent = '92 A'\npower = '54 kW'\nvoltage = '400 V'",
        "[readings]\ncurrent = '92 A'\npower = '54 kW'\nvoltage = '400 V'\nphases = 3\npower_factor = 0.85",
        "[controls]\nlow_pressure_cut_out = '1 bar g'\nlow_pressure_cut_in = '2 bar g'",
        "[evaporator]\npressure_drop = '1 K'",
        "[lines.suction]\ndiameter = '80 mm'\nlength = '5 m'\nriser = '5 m'",
    ],
)
def test_what_fits_together_is_read(case, tables):
    """No rule refuses an ordinary plant."""
    assert case(text_of(tables)).duty.cooling_W == 120_000.0


@pytest.mark.parametrize(
    ("plant", "tables", "key", "part"),
    [
        (
            "",
            EVAPORATOR.format("2 degC", "3 degC"),
            "evaporator.outlet",
            '"3 degC" is not below inlet "2 degC"; an evap',
        ),
        ("", EVAPORATOR.format("2 degC", "2 degC"), "evaporator.outlet", "is not below inlet"),
        ("", CONDENSER.format("32 degC", "30 degC"), "condenser.outlet", "is not above inlet"),
        (
            "",
            EVAPORATOR.format("-8 degC", "-9 degC"),
            "evaporator.inlet",
            '"-8 degC" is not above duty.evaporating "-8 degC"',
        ),
        ("", CONDENSER.format("42 degC", "43 degC"), "condenser.inlet", "is not below duty.condensing"),
        (
            "",
            EVAPORATOR.format("-4 degC", "-6 degC"),
            "duty.useful_superheat",
            "at −3.0 degC, warmer than what it cools",
        ),
        ("", "[evaporator]\ninlet = '2 degC'", "evaporator.inlet", "add outlet, or flow, to [evaporator]"),
        ("", "[evaporator]\noutlet = '2 degC'", "evaporator.outlet", "add inlet to [evaporator]"),
        ("", "[evaporator]\nflow = '2 kg/s'", "evaporator.flow", "add inlet to [evaporator]"),
        ("", "[evaporator]\nflow = '2 kg/s'", "evaporator.flow", "the specific heat of what flows is not known"),
        ("", "[condenser]\nmedium = 'brine'\nflow = '2 kg/s'", "condenser.flow", "add specific_heat to [condenser]"),
        (
            "",
            "[evaporator]\ninlet = '2 degC'\noutlet = '1 degC'",
            "evaporator.inlet",
            "add arrangement to [evaporator]",
        ),
        ("", EVAPORATOR.format("2 degC", "-3 degC") + "\nflow = '8 kg/s'", "evaporator.flow", "outlet is given too"),
        (
            "",
            CONDENSER.format("32 degC", "38 degC") + "\nspecific_heat = '1 kJ/(kg K)'",
            "condenser.specific_heat",
            "outlet is given too; the outlet and the duty make the flow",
        ),
        (
            "evaporator = 'flooded'",
            EVAPORATOR.format("2 degC", "-3 degC"),
            "evaporator.arrangement",
            '"crossflow" does not go with plant.evaporator "flooded"',
        ),
        (
            "evaporator = 'direct expansion'",
            EVAPORATOR.format("2 degC", "-3 degC").replace("crossflow", "flooded"),
            "evaporator.arrangement",
            "does not go with",
        ),
        ("", POLYNOMIAL.replace("capacity", "# capacity"), "compressor.polynomial", "capacity or mass_flow is missing"),
        ("", POLYNOMIAL.replace("power", "# power"), "compressor.polynomial", "power or current is missing"),
        (
            "",
            POLYNOMIAL.replace("superheat", "# superheat"),
            "compressor.polynomial",
            "superheat or return_gas is missing",
        ),
        (
            "",
            POLYNOMIAL + f"mass_flow = {TEN}",
            "compressor.polynomial.mass_flow",
            "capacity and mass_flow are both given",
        ),
        ("", POLYNOMIAL + f"current = {TEN}", "compressor.polynomial.current", "power and current are both given"),
        (
            "",
            POLYNOMIAL + f"current = {TEN}",
            "compressor.polynomial.current",
            "add voltage, phases and power_factor to",
        ),
        ("", POLYNOMIAL + "return_gas = '18 degC'", "compressor.polynomial.return_gas", "are both given; keep one"),
        (
            "",
            POLYNOMIAL.replace("subcooling", "# s"),
            "compressor.polynomial.capacity",
            "add subcooling to [compressor.p",
        ),
        (
            "",
            POLYNOMIAL.replace("'-40 degC', '-5 degC'", "'-5 degC', '-40 degC'"),
            "compressor.polynomial.evaporating[2]",
            "the list rises",
        ),
        (
            "",
            "[compressor]\nisentropic_efficiency = 0.7\n" + POLYNOMIAL,
            "compressor.isentropic_efficiency",
            "given too",
        ),
        (
            "",
            "[compressor]\nvolumetric_efficiency = 0.7\n" + POLYNOMIAL,
            "compressor.volumetric_efficiency",
            "given too",
        ),
        ("", "[compressor]\n" + POINTS + POLYNOMIAL, "compressor.efficiency_points", "polynomial is given too"),
        (
            "",
            "[compressor]\nisentropic_efficiency = 0.7\n" + POINTS,
            "compressor.isentropic_efficiency",
            "efficiency_points is given too; the points hold this efficiency",
        ),
        (
            "",
            "[compressor]\nefficiency_points = [[4, 0.62, 0.92], [4, 0.7, 0.86]]",
            "compressor.efficiency_points[2]",
            "is not above the one before",
        ),
        ("", "[compressor]\nsteps = 4", "compressor.steps", 'steps goes with speed = "steps"'),
        ("", "[compressor]\nspeed = 'fixed'\nlowest_speed = 0.3", "compressor.lowest_speed", 'with speed = "variable"'),
        ("", "[compressor]\nhighest_suction = '-9 degC'", "compressor.highest_suction", "is below duty.evaporating"),
        ("", "[compressor]\nhighest_suction = '42 degC'", "compressor.highest_suction", "is not below duty.condensing"),
        (
            "high_side_limit = '28 bar g'\nlow_side_limit = '29 bar g'",
            "",
            "plant.low_side_limit",
            '"29 bar g" is above high_side_limit "28 bar g"',
        ),
        (
            "relief_setting = '28 bar g'",
            "[controls]\nhigh_pressure_cut_out = '28 bar g'",
            "plant.relief_setting",
            "is not above controls.high_pressure_cut_out",
        ),
        (
            "highest_ambient = '32 degC'",
            "[readings]\nambient = '33 degC'",
            "readings.ambient",
            "is above plant.highest_ambient",
        ),
        (
            "",
            "[controls]\nlow_pressure_cut_out = '2 bar g'\nlow_pressure_cut_in = '1.5 bar g'",
            "controls.low_pressure_cut_out",
            "is not below low_pressure_cut_in",
        ),
        (
            "",
            "[controls]\nlow_pressure_cut_out = '2 bar g'\nrack_set_point = '2 bar g'",
            "controls.low_pressure_cut_out",
            "is not below rack_set_point",
        ),
        *(
            (
                "",
                f"[controls]\n{name} = '26 bar g'\nhigh_pressure_cut_out = '25 bar g'",
                f"controls.{name}",
                "is not below high_pressure_cut_out",
            )
            for name in (
                "low_pressure_cut_in",
                "rack_set_point",
                "evaporator_regulator",
                "crankcase_regulator",
                "head_pressure",
            )
        ),
        (
            "altitude = '2000 m'",  # the air there has 0.795 bar, so 1.9 bar a is 1.105 bar g
            "[controls]\nlow_pressure_cut_out = '1.2 bar g'\nlow_pressure_cut_in = '1.9 bar a'",
            "controls.low_pressure_cut_out",
            "is not below",
        ),
        ("", "[controls]\nfan_steps = ['14 bar g', '12 bar g']", "controls.fan_steps[2]", 'one before, "14 bar g"'),
        (
            "",
            "[readings]\nsuction_pressure = '18 bar g'\ndischarge_pressure = '3.6 bar g'",
            "readings.suction_pressure",
            "a compressor raises the pressure",
        ),
        (
            "",
            "[readings]\nliquid_pressure = '3 bar g'\nsuction_pressure = '3.6 bar g'",
            "readings.liquid_pressure",
            "is not above suction_pressure",
        ),
        (
            "",
            "[readings]\nsuction_temperature = '73 degC'\ndischarge_temperature = '7 degC'",
            "readings.discharge_temperature",
            "a compressor warms the gas",
        ),
        (
            "",
            "[readings]\nliquid_temperature = '73 degC'\ndischarge_temperature = '70 degC'",
            "readings.liquid_temperature",
            "a condenser cools",
        ),
        (
            "",
            "[readings]\nevaporator_in = '-3 degC'\nevaporator_out = '2 degC'",
            "readings.evaporator_out",
            "an evaporator cools",
        ),
        (
            "",
            "[readings]\ncondenser_in = '38 degC'\ncondenser_out = '32 degC'",
            "readings.condenser_out",
            "a condenser warms",
        ),
        (
            "",
            "[readings]\ncondenser_flow = '2 kg/s'",
            "readings.condenser_flow",
            "add condenser_specific_heat to [readings]",
        ),
        (
            "",
            "[readings]\nevaporator_specific_heat = '4 kJ/(kg K)'",
            "readings.evaporator_specific_heat",
            "add evaporator_flow to [readings]",
        ),
        (
            "",
            "[readings]\ncurrent = '92 A'\nvoltage = '400 V'",
            "readings.current",
            "add phases and power_factor to [readings], or power",
        ),
        (
            "",
            "[readings]\npower = '5.4 kW'\ncurrent = '92 A'\nvoltage = '400 V'\nphases = 3\npower_factor = 0.85",
            "readings.power",
            "which make 54.2 kW",  # √3 · 400 V · 92 A · 0.85 = 54.18 kW
        ),
        (
            "",
            "[lines.discharge]\ndiameter = '54 mm'\nlength = '4 m'\nriser = '5 m'",
            "lines.discharge.riser",
            '"5 m" is above length "4 m"',
        ),
    ],
)
def test_each_contradiction_is_named(complaints, plant, tables, key, part):
    """A contradiction has the key to change and both values, and no case comes of it."""
    found = complaints(text_of(tables, plant))

    assert any(name == key and part in text for _, name, text in found), found
    assert all(text.isprintable() for _, _, text in found)


def test_superheat_is_not_held_against_the_inlet_when_temperatures_are_means(case):
    """With a glide the gas leaves above the mean by an amount that this room does not know."""
    tables = EVAPORATOR.format("-4 degC", "-6 degC")

    assert case(text_of(tables, duty='reading = "mean"')).duty.useful_superheat_K == 5.0


def test_a_contradiction_and_a_fault_come_together_with_their_lines(complaints):
    """One run names what is wrong by itself and what is wrong between keys."""
    found = complaints(text_of("[readings]\nevaporator_in = '1 degC'\nevaporator_out = '2 degC'\npower = 5"))

    assert [(line, key) for line, key, _ in found] == [(13, "readings.evaporator_out"), (14, "readings.power")]


def test_rules_speak_of_keys_that_exist():
    """A rule about a misspelt key would never be broken."""
    orders = {key for order in ORDERS for key in (order.key, order.other)}
    once = {key for pair in GIVEN_ONCE for key in pair}
    both = {key for kept, key, _ in NOT_BOTH for key in (kept, key)}
    needs = {key for first, needed, _ in NEEDS for key in (first, *needed)}

    assert orders | once | both | needs | set(RISING) <= FIELDS.keys() | TABLES.keys()
    assert {order.relation for order in ORDERS} == {"below", "above", "at most", "at least"}


VALUES = st.one_of(
    st.sampled_from(
        (
            "'5 K'",
            "'2 degC'",
            "'-3 degC'",
            "'50 degC'",
            "'3 bar g'",
            "'30 bar a'",
            "'1 bar'",
            "'8 kg/s'",
            "'1 kJ/(kg K)'",
        )
    ),
    st.sampled_from(("'40 m'", "'80 mm'", "'250 l'", "'92 A'", "'400 V'", "'16 h'", "'54 kW'", "'30 %'", "'0.3 bar'")),
    st.sampled_from(
        ("'air'", "'flooded'", "'crossflow'", "'steps'", "'variable'", "'SI'", "{}", "{R32 = 1.1}", "{a = {}}")
    ),
    st.sampled_from(
        ("[]", "['copper']", "['12 bar g', '11 bar g']", "[[2, 0.6, 0.9], [3, 0.7, 0.8]]", "[[1], 2]", TEN)
    ),
    st.integers(-3, 10**20).map(str),
    st.floats(allow_nan=True).map(lambda number: repr(number)),
    st.sampled_from(("true", "2026-12-01", "''")),
)
KEYS = st.sampled_from(sorted({key for key in FIELDS if not key.startswith(("duty.", "compare.", "plant.refr"))}))


@settings(deadline=None, max_examples=300, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(lines=st.dictionaries(KEYS, VALUES, max_size=12))
def test_any_values_of_the_keys_are_read_or_refused(case, lines):
    """Whatever stands under the keys, a case comes of it or complaints that name keys in printable words."""
    written = "\n".join(f"{key} = {value}" for key, value in lines.items())
    try:
        read = case(f"{written}\n{text_of()}".replace("[plant]\n", "plant.", 1))
        outcome = all(key in read.given or lines[key] == "{}" for key in lines)
    except CaseFileError as refusal:
        outcome = all(problem.line and problem.text.isprintable() for problem in refusal.problems)

    assert outcome


def test_what_may_be_recommended_is_named_once(tmp_path):
    """A candidate that is the refrigerant in the plant too stands once in the list of what can be written."""
    path = tmp_path / "plant.toml"
    path.write_text(
        "[plant]\nrefrigerant = 'R404A'\n[duty]\ncooling = '5 kW'\nevaporating = '-8 degC'\ncondensing = '40 degC'\n"
        "[compare]\ncandidates = ['R404A', 'R404A', 'R448A']\n[report]\nrecommended = 'R22'\n",
        encoding="utf-8",
    )
    with pytest.raises(CaseFileError) as caught:
        read_case(path)

    assert 'R-22 is not compared here; write "R404A" or "R448A", or add it to compare.candidates' in str(caught.value)
