"""The table [plus_minus]: half widths in SI by full key, and what cannot be off or not so far."""

import pytest

START = """\
[plant]
refrigerant = "R404A"
charge = "260 kg"
high_side_limit = "28 bar g"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compressor]
isentropic_efficiency = 0.68
[evaporator]
inlet = "2 degC"
outlet = "-3 degC"
arrangement = "crossflow"
[condenser]
inlet = "32 degC"
outlet = "38 degC"
arrangement = "crossflow"
[compare]
candidates = ["R448A"]
[money]
currency = "EUR"
tariff = 0.18
[options.r-448a]
leak_rate = "5 %"
seasonal_cop = 3.0
[emissions]
leak_log = [["2025-03-02", "18 kg"], ["2026-03-01", "20 kg"]]
[year]
bins = [["2 degC", 4000], ["12 degC", 4760]]
[plus_minus]
"""


@pytest.mark.parametrize(
    ("line", "key", "width"),
    [
        ('duty.evaporating = "1 K"', "duty.evaporating", 1.0),
        ('duty.evaporating = "1.8 R"', "duty.evaporating", 1.0),  # 1 K is 1.8 degrees of Rankine
        ('"duty.evaporating" = "1 K"', "duty.evaporating", 1.0),
        ('[plus_minus.duty]\nevaporating = "1 K"', "duty.evaporating", 1.0),
        ('duty.cooling = "10 %"', "duty.cooling", 12_000.0),
        ('duty.cooling = "5 kW"', "duty.cooling", 5000.0),
        ('duty.useful_superheat = "2 K"', "duty.useful_superheat", 2.0),  # 5 K by default
        ('duty.useful_superheat = "20 %"', "duty.useful_superheat", 1.0),
        ('plant.charge = "10 %"', "plant.charge", 26.0),
        ('plant.high_side_limit = "0.5 bar"', "plant.high_side_limit", 50_000.0),
        ("compressor.isentropic_efficiency = 0.05", "compressor.isentropic_efficiency", 0.05),
        ('compressor.isentropic_efficiency = "5 %"', "compressor.isentropic_efficiency", 0.05),
        ("compressor.volumetric_efficiency = 0.05", "compressor.volumetric_efficiency", 0.05),  # by default
        ('year.weather = "1 K"', "year.weather", 1.0),
        ('year.condenser_approach = "1 K"', "year.condenser_approach", 1.0),
        ('emissions.leak_log = "5 %"', "emissions.leak_log", 0.05),
        ('emissions.recovery_at_end = "10 %"', "emissions.recovery_at_end", 0.10),
        ('options.R448A.leak_rate = "2 %"', "options.R448A.leak_rate", 0.02),
        ("options.R-448A.seasonal_cop = 0.2", "options.R448A.seasonal_cop", 0.2),
    ],
)
def test_a_width_is_held_in_the_unit_of_its_key(case, line, key, width):
    """A difference, points of a fraction, a share of another quantity; in any of the ways that TOML writes a key."""
    read = case(START + line + "\n")

    assert read.widths == {key: pytest.approx(width)}
    assert list(read.plus_minus.by_key.values()) != []


def test_without_the_table_there_are_no_widths(case):
    """A case is as exact as it says if it says nothing."""
    assert case(START.removesuffix("[plus_minus]\n")).widths == {}


def test_efficiencies_of_a_curve_are_off_by_a_share(case):
    """Points hold no single efficiency: all of them are off alike."""
    points = START.replace("isentropic_efficiency = 0.68", "efficiency_points = [[2, 0.6, 0.9], [4, 0.7, 0.86]]")

    widths = case(points + 'compressor.isentropic_efficiency = "5 %"\n').widths

    assert widths == {"compressor.isentropic_efficiency": pytest.approx(0.05)}


@pytest.mark.parametrize(
    ("line", "key", "words"),
    [
        ('duty.evaporatin = "1 K"', "duty.evaporatin", 'did you mean "duty.evaporating"'),
        ('duty = "1 K"', "duty", "write table and key, as in duty.evaporating"),
        ('duty.evaporating = "1 degC"', "duty.evaporating", "a difference is needed"),
        ('duty.evaporating = "10 %"', "duty.evaporating", "a temperature difference is needed"),
        ("duty.evaporating = 1", "duty.evaporating", "is a bare number"),
        ('duty.evaporating = "0 K"', "duty.evaporating", "is no width; write one above 0"),
        ('duty.evaporating = "-1 K"', "duty.evaporating", "is no width"),
        ('duty.evaporating = ["1 K"]', "duty.evaporating", "a list stands where"),
        ('duty.condensing = "10 K"', "duty.condensing", "the key can pass condenser.inlet"),
        ('duty.evaporating = "10 K"', "duty.evaporating", "pass evaporator.inlet, which it may not: heat flows"),
        ('evaporator.outlet = "4 K"\nevaporator.inlet = "1 K"', "evaporator.outlet", "pass evaporator.inlet"),
        ('duty.useful_superheat = "6 K"', "duty.useful_superheat", "outside what is allowed: 0 K to 80 K"),
        ('duty.cooling = "120 kW"', "duty.cooling", "above 0 W and up to 1000 MW"),
        ('duty.subcooling = "10 %"', "duty.subcooling", "is no width"),  # a share of 0 K
        ('plant.high_side_limit = "5 %"', "plant.high_side_limit", "a pressure difference is needed"),
        ('plant.high_side_limit = "1 bar g"', "plant.high_side_limit", "pressure"),
        ("compressor.isentropic_efficiency = 0.4", "compressor.isentropic_efficiency", "10 % to 100 %"),
        (
            'compressor.swept_volume = "5 %"',
            "compressor.swept_volume",
            "the file gives no swept_volume in [compressor]",
        ),
        ('receiver.volume = "5 %"', "receiver.volume", "the file has no table [receiver]"),
        ("plant.oil = 1", "plant.oil", "it is not one number that can be off"),
        ("plant.oil_changes = 1", "plant.oil_changes", "it is not one number"),
        ("money.tariff = 0.02", "money.tariff", "write [low, base, high] there"),
        ("options.R448A.labour = 5", "options.R448A.labour", "write [low, base, high] there"),
        ('options.R449A.charge = "5 kg"', "options.R449A.charge", "no table [options.R449A]"),
        ('options.R448A.charge = "5 kg"', "options.R448A.charge", "the file gives no charge in [options.R448A]"),
        ('emissions.grid_years = "5 %"', "emissions.grid_years", "it is not one number"),
        ('year.weather = "40 K"', "year.weather", "0 K to 10 K"),
        ("year.weather = 1", "year.weather", "is a bare number"),
    ],
)
def test_a_wrong_width_is_refused(complaints, line, key, words):
    """What there is not, what is not given, what cannot be off, and what would leave the range of its key."""
    found = [text for _, where, text in complaints(START + line + "\n") if where == f"plus_minus.{key}"]

    assert len(found) == 1, found
    assert words in found[0]


def test_a_width_given_twice_is_refused(complaints):
    """Two ways to write one key are still one key."""
    ((line, _, text),) = complaints(START + 'duty.cooling = "5 %"\n"duty.cooling" = "6 %"\n')

    assert line == START.count("\n") + 2
    assert "has two widths; keep one of them" in text


def test_a_width_of_a_wrong_value_is_not_complained_of(complaints):
    """The value has a complaint of its own; what is off from it is no matter until that is put right."""
    wrong = START.replace('"120 kW"', "120") + 'duty.cooling = "5 %"\n'

    assert [key for _, key, _ in complaints(wrong)] == ["duty.cooling"]
