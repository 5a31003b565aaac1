"""Quantities in and out: against the printed factors of NIST SP 811, and there and back again."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.errors import QuantityError
from retrofit.units import (
    IP,
    KINDS,
    MINUS,
    SI,
    THOUSANDS_MARK,
    UNIT_SYSTEMS,
    format_number,
    parse_pressure,
    parse_quantity,
    shown,
    standard_atmosphere_Pa,
)

# NIST Special Publication 811 (2008), appendix B.8 (alphabetical) and B.9: "to convert from ... to ...
# multiply by". Factors printed in bold are exact; the others have the seven digits printed.
# These rows were written down from memory of the table, not with the page at hand; the test after them
# repeats the check against a library.
HALF_A_SEVENTH_DIGIT = 5e-7  # relative, at worst (a factor that begins with 1)
SP811 = [
    ("1 Btu/h", "power", 2.930711e-1),
    ("1 ton", "power", 3.516853e3),  # ton of refrigeration (12 000 Btu_IT/h)
    ("1 hp", "power", 7.456999e2),  # horsepower (550 ft lbf/s)
    ("1 lb", "mass", 4.535924e-1),
    ("1 lb/h", "mass flow", 1.259979e-4),
    ("1 cfm", "volume flow", 4.719474e-4),  # cubic foot per minute
    ("1 ft3", "volume", 2.831685e-2),
    ("1 ft2", "area", 9.290304e-2),  # exact
    ("1 ft", "length", 3.048e-1),
    ("1 l", "volume", 1e-3),
    ("1 in", "length", 2.54e-2),
    ("1 um", "length", 1e-6),
    ("1 psi", "pressure difference", 6.894757e3),
    ("1 Btu/(lb F)", "specific heat", 4.1868e3),  # Btu_IT/(lb °F), exact
    ("1 kJ/(kg K)", "specific heat", 1e3),
    ("9 R", "temperature difference", 5.0),  # 1 °F (interval) = 5/9 K
]

# The same appendix, factors of units that are only shown.
SP811_SHOWN = [
    ("specific enthalpy", 2.326e3),  # Btu_IT/lb, exact
    ("specific entropy", 4.1868e3),  # Btu_IT/(lb °R), exact
    ("specific heat", 4.1868e3),
    ("pressure difference", 6.894757e3),  # psi
    ("diameter", 2.54e-2),  # in, exact
    ("volume", 2.831685e-2),  # ft³
    ("room volume", 2.831685e-2),
    ("area", 9.290304e-2),  # ft², exact
    ("density", 1.601846e1),  # lb/ft³
    ("volumetric capacity", 3.725895e4),  # Btu_IT/ft³
    ("pressure", 6.894757e3),  # psi
]


def test_factors_agree_with_an_independent_library():
    """The constants of scipy, which cites NIST SP 811 for them, are ours to the last digits of a float."""
    constants = pytest.importorskip("scipy.constants")
    hour_s = 3600.0
    expected = {
        ("1 Btu/h", "power"): constants.Btu_IT / hour_s,
        ("1 ton", "power"): 12_000.0 * constants.Btu_IT / hour_s,
        ("1 hp", "power"): constants.hp,
        ("1 lb", "mass"): constants.lb,
        ("1 ft", "length"): constants.foot,
        ("1 l", "volume"): constants.liter,
        ("1 cfm", "volume flow"): constants.foot**3 / constants.minute,
        ("0 degC", "temperature"): constants.zero_Celsius,
        ("40 degF", "temperature"): constants.convert_temperature(40.0, "Fahrenheit", "Kelvin"),
        ("1 R", "temperature difference"): constants.degree_Fahrenheit,
    }

    ours = {key: parse_quantity(*key) for key in expected}

    assert ours == pytest.approx(expected, rel=1e-14)
    assert parse_pressure("1 psia").value_Pa == pytest.approx(constants.psi, rel=1e-14)


# SP 811, B.8: t/°C = (t/°F - 32)/1.8 and T/K = (t/°F + 459.67)/1.8; fixed points of water as known
# from the definition of the scales.
FIXED_POINTS = [
    ("0 degC", 273.15),
    ("32 degF", 273.15),
    ("212 degF", 373.15),
    ("-40 degF", 233.15),
    ("-40 °C", 233.15),
    ("0 K", 0.0),
    ("-459.67 F", 0.0),
]


@pytest.mark.parametrize(("text", "kind", "expected"), SP811)
def test_factors_agree_with_nist_sp_811(text, kind, expected):
    """A unit is worth what NIST SP 811 prints, to its seven digits."""
    assert parse_quantity(text, kind) == pytest.approx(expected, rel=HALF_A_SEVENTH_DIGIT)


@pytest.mark.parametrize(("kind", "expected"), SP811_SHOWN)
def test_shown_inch_pound_units_agree_with_nist_sp_811(kind, expected):
    """An SI value equal to one inch-pound unit is shown as one."""
    assert IP.number(kind, expected) == pytest.approx(1.0, rel=HALF_A_SEVENTH_DIGIT)


@pytest.mark.parametrize(("text", "expected_K"), FIXED_POINTS)
def test_temperature_scales_meet_at_their_fixed_points(text, expected_K):
    """The scales agree where their definitions say they do."""
    assert parse_quantity(text, "temperature") == pytest.approx(expected_K, abs=1e-9)


def test_pressure_keeps_absolute_and_gauge_apart():
    """A gauge pressure counts from the ambient one; an absolute one does not."""
    gauge, absolute = parse_pressure("18.0 bar g"), parse_pressure("261.07 psia")

    assert (gauge.value_Pa, gauge.is_gauge) == (1_800_000.0, True)
    assert gauge.absolute_Pa(101_325.0) == pytest.approx(1_901_325.0)
    # 1 psi = 6894.757 Pa (NIST SP 811, B.8)
    assert absolute.absolute_Pa(101_325.0) == pytest.approx(261.07 * 6894.757, rel=HALF_A_SEVENTH_DIGIT)


@pytest.mark.parametrize("text", ["20 psig", "20 psi g", "20psig", "20 psi(g)", "+20. psi g", "2e1 psig"])
def test_spellings_of_one_pressure_agree(text):
    """Blanks, brackets and ways to write the number make no difference."""
    assert parse_pressure(text) == parse_pressure("20 psi g")


@pytest.mark.parametrize("text", ["3 bar", "40 psi", "250 kPa", "1 MPa"])
def test_pressure_without_a_or_g_is_refused_with_both_spellings(text):
    """A pressure that does not say absolute or gauge is refused, and the message shows both ways."""
    with pytest.raises(QuantityError, match="absolute or gauge") as refusal:
        parse_pressure(text)

    assert f'"{text} a"' in str(refusal.value)
    assert f'"{text} g"' in str(refusal.value)


def test_a_pressure_cannot_be_read_as_a_plain_quantity():
    """The plain function refuses pressures, which would lose whether they are gauge."""
    with pytest.raises(ValueError, match="parse_pressure"):
        parse_quantity("3 bar a", "pressure")


@pytest.mark.parametrize(
    ("text", "instead"),
    [("8 degC", "8 K"), ("8 °C", "8 K"), ("9 degF", "9 R"), ("8 C", "8 K"), ("8 degc", "8 K")],
)
def test_a_point_on_a_scale_is_refused_as_a_difference(text, instead):
    """A superheat in degC would be off by 273 K; the message shows how to write a difference."""
    with pytest.raises(QuantityError, match="difference") as refusal:
        parse_quantity(text, "temperature difference")

    assert f'"{instead}"' in str(refusal.value)


@pytest.mark.parametrize(
    ("value", "kind", "part"),
    [
        ("120 kW", "temperature", "is a power, but a temperature is needed"),
        ("9 R", "temperature", "is a temperature difference, but a temperature is needed"),
        ("3 bar", "power", "is a pressure, but a power is needed"),
        ("3 bar g", "mass", "is a pressure, but a mass is needed"),
        ("3 bar g", "pressure difference", "is a pressure, but a pressure difference is needed; write it with bar"),
        ("92 W", "current", "is a power, but a current is needed"),
        ("4.19 kJ/kg", "specific heat", 'did you mean "kJ/kgK"'),
        (8, "mass flow", 'such as "8 kg/h" (allowed: kg/h, kg/s or lb/h)'),
        ("1,5 kW", "power", "decimal mark is a point"),
        ("1 160 m3/h", "volume flow", "blank stands inside the number"),
        ("1.2.3 kW", "power", "not one plain number"),
        ("1_000 kW", "power", "not one plain number"),
        ("-8 degc", "temperature", 'did you mean "degC"'),
        ("120 KW", "power", 'did you mean "kW"'),
        ("120 furlong", "power", "not a unit of power"),
        ("120", "power", 'no unit; add it, as in "120 kW"'),
        (120, "power", 'bare number; write it as text with its unit, such as "120 kW"'),
        (-8.5, "temperature", '"-8.5 degC"'),
        ("nan K", "temperature", "not a finite number"),
        ("-inf kW", "power", "not a finite number"),
        ("1e400 kW", "power", "too large a number"),
        ("1e308 ton", "power", "too large a number"),
        (math.nan, "fraction", "sensible size"),
        (math.inf, "fraction", "sensible size"),
        (16**500, "fraction", "sensible size"),
        ("١٢ kW", "power", "digits other than 0 to 9"),
        ("1٢ kW", "power", "digits other than 0 to 9"),
        ("", "power", "is empty"),
        (" ", "power", "is empty"),
        ("kW", "power", "does not begin with a number"),
        ("--1 kW", "power", "does not begin with a number"),
        ("1 kW" + "x" * 1000, "power", "too long"),
        (True, "fraction", "true or false stands where a fraction is needed"),
        ([1], "power", "a list stands where a power is needed"),
        ({}, "power", "a table stands where a power is needed"),
        ("120\nkW", "power", r"\nkW"),
    ],
)
def test_what_is_no_quantity_is_refused_in_words(value, kind, part):
    """Each way to go wrong has its own message, which says what is allowed."""
    with pytest.raises(QuantityError) as refusal:
        parse_quantity(value, kind)

    assert part in str(refusal.value)


@pytest.mark.parametrize(("value", "expected"), [(0.68, 0.68), (1, 1.0), ("0.68", 0.68), ("68 %", 0.68)])
def test_a_fraction_is_a_number_or_percent(value, expected):
    """A fraction may be bare or in percent."""
    assert parse_quantity(value, "fraction") == pytest.approx(expected)


@pytest.mark.parametrize(("value", "expected"), [(16, 16.0), ("16", 16.0), ("16 h", 16.0)])
def test_hours_per_day_are_a_number_or_hours(value, expected):
    """Hours in a day may be bare, and stay hours."""
    assert parse_quantity(value, "hours per day") == expected


@pytest.mark.parametrize("kind", [kind for kind in KINDS if kind != "pressure"])
@given(number=st.floats(-1e6, 1e6))
def test_reading_undoes_writing_in_every_unit(kind, number):
    """A number written with any unit and read is the number that unit makes of the SI value."""
    for spelling, unit in KINDS[kind].units.items():
        si = parse_quantity(f"{number!r} {spelling}", kind)

        # 1e-9 for the two additions of a temperature scale in double precision
        assert unit.from_SI(si) == pytest.approx(number, rel=1e-12, abs=1e-9)


@given(text=st.text(max_size=80), kind=st.sampled_from([kind for kind in KINDS if kind != "pressure"]))
def test_any_text_is_a_finite_quantity_or_refused(text, kind):
    """No text makes the reader fail in another way, or pass a number that is not finite."""
    for candidate in (text, "1" + text, "1 " + text):
        try:
            outcome = parse_quantity(candidate, kind)
        except QuantityError as refusal:
            outcome = str(refusal)

        assert outcome.isprintable() if isinstance(outcome, str) else math.isfinite(outcome)


@given(text=st.text(max_size=200))
def test_echoed_text_holds_nothing_a_terminal_obeys(text):
    """What is echoed can be printed, whatever was written."""
    assert shown(text).isprintable()


def test_escape_sequences_are_shown_not_sent():
    """A terminal command in a value appears in its escaped form."""
    assert shown("\x1b[31mred") == "\\x1b[31mred"


# ICAO Doc 7488 / ISO 2533 standard atmosphere, pressure in hPa at geopotential altitude;
# these printed values are well known and were written down from memory.
@pytest.mark.parametrize(
    ("altitude_m", "expected_hPa"),
    [(0.0, 1013.25), (1000.0, 898.746), (2000.0, 794.952), (5000.0, 540.199), (11_000.0, 226.321)],
)
def test_standard_atmosphere_agrees_with_icao(altitude_m, expected_hPa):
    """The air pressure is that of the ICAO table to its printed digits."""
    assert standard_atmosphere_Pa(altitude_m) / 100.0 == pytest.approx(expected_hPa, abs=0.001)


@pytest.mark.parametrize("altitude_m", [-500.0, 0.0, 700.0, 2500.0, 6000.0, 10_900.0])
def test_standard_atmosphere_agrees_with_an_independent_library(altitude_m):
    """The U.S. Standard Atmosphere 1976 of the fluids library, the same below 11 km, gives our pressure."""
    atmosphere = pytest.importorskip("fluids.atmosphere")
    earth_radius_m = 6_356_766.0
    geometric_m = earth_radius_m * altitude_m / (earth_radius_m - altitude_m)

    expected_Pa = atmosphere.ATMOSPHERE_1976(geometric_m).P

    # The two standards round the gas constant of air differently: 287.0529 against 287.0531 J/(kg K).
    assert standard_atmosphere_Pa(altitude_m) == pytest.approx(expected_Pa, rel=2e-6)


@pytest.mark.parametrize("altitude_m", [-1001.0, 11_001.0, math.nan])
def test_standard_atmosphere_refuses_heights_outside_its_range(altitude_m):
    """The troposphere formula is not used beyond the troposphere."""
    with pytest.raises(QuantityError, match="altitude"):
        standard_atmosphere_Pa(altitude_m)


def test_both_systems_show_the_same_kinds():
    """Whatever can be shown in SI can be shown in inch-pound units."""
    assert SI.displays.keys() == IP.displays.keys() >= KINDS.keys()
    assert {name: system.displays.keys() for name, system in UNIT_SYSTEMS.items()} == dict.fromkeys(
        ("si", "ip", "both"), SI.displays.keys()
    )


@pytest.mark.parametrize(
    ("system", "kind", "value", "expected"),
    [
        (SI, "temperature", 265.15, "−8.0"),
        (IP, "temperature", 265.15, "17.6"),  # -8 °C = 17.6 °F
        (SI, "temperature difference", 7.0, "7.0"),
        (IP, "temperature difference", 5.0, "9.0"),
        (SI, "pressure", 1_901_325.0, "19.01"),
        (SI, "cooling", 120_000.0, "120.0"),
        (SI, "cooling", 450.0, "0.450"),
        (IP, "cooling", 120_000.0, "34.1"),  # 120 / 3.516853
        (IP, "heat flow", 120_000.0, f"409{THOUSANDS_MARK}457"),  # 120 000 / 0.2930711
        (SI, "mass flow", 1.0, f"3{THOUSANDS_MARK}600"),
        (SI, "ratio", 1.08, "1.08"),
        (SI, "fraction", 0.07, "7"),
    ],
)
def test_values_are_shown_in_units_of_the_trade(system, kind, value, expected):
    """A value is shown in its unit with sensible decimals; worked out by hand beside each row."""
    assert system.text(kind, value) == expected


def test_gauge_pressure_is_shown_against_the_ambient_given():
    """The same absolute pressure reads higher on a gauge in thinner air."""
    assert SI.gauge_text(1_901_325.0, 101_325.0) == "18.00"
    assert SI.gauge_text(1_901_325.0, 79_495.0) == "18.22"
    assert IP.gauge_text(1_901_325.0, 101_325.0) == "261.1"  # 1 800 000 / 6894.757 = 261.07


def test_a_missing_value_is_never_a_number():
    """None and not-a-number are shown as missing, not as zero."""
    assert SI.text("power", None) == "–"
    assert SI.text("power", math.nan) == "–"
    assert SI.text("power", None, missing="unknown") == "unknown"
    assert SI.with_unit("power", None) == "not stated"
    assert SI.gauge_text(None, 101_325.0) == "–"


def test_a_column_has_one_number_of_decimals():
    """Numbers of one column line up, and the smallest still shows two digits."""
    assert SI.column("cooling", [120_000.0, 450.0, None]) == ["120.00", "0.45", "–"]


def test_unit_and_number_do_not_part():
    """A no-break space stands between number and unit; a ratio has no unit."""
    assert SI.with_unit("temperature", 315.15) == "42.0\u00a0°C"
    assert SI.with_unit("ratio", 4.13) == "4.13"


def test_a_change_can_carry_its_sign():
    """A change shows plus or a true minus; no change has no sign."""
    assert SI.text("fraction", 0.07, signed=True) == "+7"
    assert SI.text("fraction", -0.07, signed=True) == f"{MINUS}7"
    assert SI.text("fraction", -0.0004, signed=True) == "0"


@given(number=st.floats(-1e9, 1e9), decimals=st.integers(0, 6))
def test_formatting_keeps_the_value(number, decimals):
    """What is shown, read back, is the number within half a unit of its last decimal."""
    back = float(format_number(number, decimals).replace(THOUSANDS_MARK, "").replace(MINUS, "-"))

    assert abs(back - number) <= 0.5 * 10.0**-decimals + 2.0 * math.ulp(number)


@given(value=st.floats(1e-6, 1e9), kind=st.sampled_from(["cooling", "mass flow", "volume flow", "density"]))
def test_rounding_never_turns_a_small_value_into_nothing(value, kind):
    """A value above zero is shown with digits, within a hundredth of itself."""
    for system in (SI, IP):
        shown_number = float(system.text(kind, value).replace(THOUSANDS_MARK, ""))

        assert shown_number == pytest.approx(system.number(kind, value), rel=0.01, abs=5e-10)
