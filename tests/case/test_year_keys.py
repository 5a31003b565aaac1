"""The keys of [year], [emissions] and [options]: what is held and assumed, and what keys say against each other."""

import datetime

import pytest

from retrofit.case import meaning, quantity

PLANT = """\
[plant]
refrigerant = "R404A"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compare]
candidates = ["R448A", "R1234ze(E)"]
"""
EXCHANGERS = """\
[evaporator]
inlet = "2 degC"
outlet = "-3 degC"
arrangement = "crossflow"
[condenser]
inlet = "32 degC"
outlet = "38 degC"
arrangement = "crossflow"
"""
BINS = 'bins = [["2 degC", 4000], ["12 degC", 4760]]\n'
START = PLANT + EXCHANGERS + "[year]\n" + BINS
LOADS = 'peak_at = "30 degC"\nbase_load = "60 kW"\nbase_at = "5 degC"\n'


def test_a_year_as_written(case):
    """Every key is held in SI: powers, temperatures, shares, hours, and the energy of the meter."""
    year = case(
        START + LOADS + 'day_from = 7\nday_to = 21\nnight_load = "70 %"\ndefrost_power = "2 kW"\n'
        'lowest_condensing = "25 degC"\nmetered = "300000 kWh"\nevaporator_fans = "5 hp"\n'
    ).year

    assert year.bins[0] == (275.15, 4000.0, None)
    assert (year.peak_load_W, year.peak_at_K, year.base_load_W, year.base_at_K) == (None, 303.15, 60_000.0, 278.15)
    assert (year.day_from, year.day_to, year.night_load) == (7.0, 21.0, pytest.approx(0.7))
    assert year.evaporator_fans_W == pytest.approx(5 * 745.6999)  # horsepower: NIST SP 811
    assert year.metered_J == pytest.approx(1.08e12)  # 1 kWh is 3.6 MJ
    assert year.lowest_condensing_K == 298.15


def test_what_a_year_assumes_is_told(case):
    """Only what takes part in the calculation stands among the assumptions."""
    told = {default.key: default.shown_text for default in case(START).defaults if default.key.startswith("year.")}

    assert told == {
        "year.condenser_follows": "dry bulb",
        "year.condenser_approach": "0 K",
        "year.evaporator_follows": "constant",
        "year.serves": "cooling",
    }
    more = case(START + 'defrost_power = "2 kW"\nevaporator_follows = "dry bulb"\n').defaults
    assert {"year.defrost_to_load", "year.evaporator_approach"} <= {default.key for default in more}


@pytest.mark.parametrize(
    ("text", "key", "words"),
    [
        (PLANT + EXCHANGERS + "[year]\n", "year", "nothing says how warm it is; add one of weather, bins or climate"),
        (START + 'climate = {mean = "9 degC", yearly_swing = "8 K"}', "year.climate", "bins and climate all say"),
        (START + 'weather = "coast.csv"', "year.bins", "weather and bins all say how warm it is; keep one"),
        (START.replace("4760", "4759"), "year.bins", "8759 hours and a year has 8760: 1 are missing"),
        (START.replace("4760", "4761"), "year.bins", "1 are too many"),
        (START.replace("12 degC", "2 degC"), "year.bins[2]", '"2 degC" is in the list twice; add up its hours'),
        (START.replace('"2 degC", 4000', '"2 degC"'), "year.bins[1]", "a temperature and its hours"),
        (START.replace('"2 degC", 4000', '"2 K", 4000'), "year.bins[1]", "-60 degC to 60 degC"),
        (START.replace('"2 degC", 4000', '"2 degC", -4'), "year.bins[1]", "a year has 8760 hours"),
        (START + 'condenser_follows = "wet bulb"', "year.condenser_follows", "bins and a climate have no wet bulb"),
        (START + 'evaporator_follows = "water"', "year.evaporator_follows", "weather file with the column water"),
        (START + 'condenser_follows = "drybulb"', "year.condenser_follows", 'did you mean "dry bulb"'),
        (START + 'peak_at = "30 degC"', "year.peak_at", "add base_load and base_at to [year]"),
        (START + 'base_load = "60 kW"', "year.base_load", "add peak_at and base_at to [year]"),
        (START + LOADS.replace("30 degC", "5 degC"), "year.peak_at", "is base_at too; the load changes between"),
        (START + LOADS + 'peak_load = "59 kW"', "year.base_load", '"60 kW" is above peak_load "59 kW"'),
        (START + LOADS.replace("60 kW", "121 kW"), "year.base_load", 'above the peak, duty.cooling "120 kW"'),
        (START + "day_from = 7", "year.day_from", "add day_to and night_load to [year]"),
        (START + "night_load = 0.7", "year.night_load", "add day_from and day_to to [year]"),
        (START + "day_from = 7\nday_to = 7\nnight_load = 0.7", "year.day_from", "has no night"),
        (START + "day_from = 25\nday_to = 7\nnight_load = 0.7", "year.day_from", "0 to 24"),
        (START + 'day_from = 7\nday_to = 21\nnight_load = "120 %"', "year.night_load", "0 % to 100 %"),
        (START + 'serves = "heating"', "year.serves", "add peak_load, the largest heat of the year"),
        (START + 'evaporator_approach = "-3 K"', "year.evaporator_approach", "evaporator_follows is constant"),
        (START + 'metered = "300000"', "year.metered", "has no unit"),
        (START + 'metered = "300000 kW"', "year.metered", "a power, but an energy is needed"),
        (START + 'peak_laod = "60 kW"', "year.peak_laod", 'did you mean "peak_load"'),
        (PLANT + "[year]\n" + BINS, "year", "add [evaporator] and [condenser] with inlet, outlet and arrangement"),
        (START.replace("[condenser]", "[lines.x]"), "year", "add [condenser] with inlet"),
        (
            PLANT + EXCHANGERS + '[year.climate]\nmean = "9 degC"',
            "year.climate.yearly_swing",
            "is missing; add yearly_swing to [year.climate]",
        ),
        (START + "[year.climate]\nmeen = 1", "year.climate.meen", 'did you mean "mean"'),
        (START + '[emissions]\ngwp_edition = "AR7"', "emissions.gwp_edition", '"AR4", "AR5" or "AR6"'),
        (START + '[emissions]\ngrid_factor = "0.35 kg"', "emissions.grid_factor", "a grid factor is needed"),
        (
            START + '[emissions]\nleak_log = [["2026-03-01", "18 kg"], ["2025-03-01", "20 kg"]]',
            "emissions.leak_log[2]",
            "is not after the one before",
        ),
        (
            START + '[emissions]\nleak_log = [["2026-03-01", "18 kg"], ["2026-03-01", "20 kg"]]',
            "emissions.leak_log[2]",
            "is not after the one before",
        ),
        (START + '[emissions]\nleak_log = [["2026-03-01", "18 kg"]]', "emissions.leak_log", "the list has 1 items"),
        (
            START + '[emissions]\nleak_rate = "15 %"\nleak_log = [["2025-03-01", "18 kg"], ["2026-03-01", "20 kg"]]',
            "emissions.leak_rate",
            "leak_log is given too; the log gives the rate",
        ),
        (
            START + '[emissions]\ngrid_years = [[2030, "0.3 kg/kWh"], [2030, "0.2 kg/kWh"]]',
            "emissions.grid_years[2]",
            "the list rises",
        ),
    ],
)
def test_a_wrong_key_of_a_year_is_refused(complaints, text, key, words):
    """Each is named with its key, and says what is allowed or what to add."""
    found = [said for _, where, said in complaints(text + "\n") if where == key]

    assert len(found) == 1, found
    assert words in found[0]


def test_hours_of_bins_may_be_rounded(case):
    """Half an hour more or less is rounding."""
    assert case(START.replace("4760", "4760.5")).weather.hours.sum() == 8760.5


def test_a_plant_that_heats_may_have_a_base_above_its_cooling(case):
    """Its load is heat, so that the duty says nothing about it."""
    heats = case(START + LOADS.replace("60 kW", "130 kW") + 'serves = "heating"\npeak_load = "160 kW"\n').year

    assert (heats.base_load_W, heats.peak_load_W) == (130_000.0, 160_000.0)


def test_emissions_as_written(case):
    """A log of days and masses, a grid by years; what is left out is told with its reason."""
    read = case(
        START
        + '[emissions]\nleak_log = [[2025-03-02, "18 kg"], ["2026-03-01", "20 kg"]]\ngrid_factor = "350 g/kWh"\n'
        + 'grid_years = [[2027, "0.30 kg/kWh"], [2030, "0.20 t/MWh"]]\n'
    )

    assert read.emissions.leak_log[0] == (datetime.date(2025, 3, 2), 18.0)
    assert read.emissions.grid_factor_kg_per_J == pytest.approx(0.35 / 3.6e6)
    assert [year for year, _ in read.emissions.grid_years] == [2027, 2030]
    told = {default.key for default in read.defaults if default.key.startswith("emissions.")}
    assert told == {f"emissions.{name}" for name in ("gwp_edition", "recovery_at_end", "lost_at_change", "old_charge")}
    assert all(default.why for default in read.defaults)


def test_options_are_found_by_any_spelling_of_their_refrigerant(case):
    """Today's refrigerant and candidates have options; the list of inputs knows what their keys mean."""
    read = case(START + '[options.r-404a]\nleak_rate = "5 %"\n["options"."R1234ze(E)"]\nnew_plant = [1, 2, 3]\n')

    assert set(read.options.by_refrigerant) == {"R404A", "R1234ze(E)"}
    assert read.options.by_refrigerant["R1234ze(E)"].new_plant == (1.0, 2.0, 3.0)
    assert quantity(read, "options.r-404a.leak_rate") == ("fraction", pytest.approx(0.05))
    assert meaning("options.r-404a.leak_rate") == "Share of the charge lost in a year with this option."


@pytest.mark.parametrize(
    ("text", "key", "words"),
    [
        ("[options.R449A]", "options.R449A", "R-449A is neither in the plant nor a candidate"),
        ("[options.R449]", "options.R449", "is not in the catalogue, did you mean"),
        ("[options.R448A]\n[options.r-448a]", "options.r-448a", 'twice, here and as "R448A"; keep one'),
        ('[options]\nR448A = "x"', "options.R448A", "a text stands where a table is needed; begin it with [options.R4"),
        ("[options.R448A]\nlabur = 3", "options.R448A.labur", 'in [options.R448A], did you mean "labour"'),
        ("[options.R448A]\nlabour = [3, 2, 1]", "options.R448A.labour", "do not rise; write low, base and high"),
        ("[options.R448A]\nseasonal_cop = 0", "options.R448A.seasonal_cop", "0.2 to 30"),
        ("options = 5", "options", "a number stands where a table is needed"),
    ],
)
def test_a_wrong_option_is_refused(complaints, text, key, words):
    """An option of no refrigerant of the case, given twice, or with a key or value that there is not."""
    whole = f"{text}\n{PLANT}" if "=" in text.partition("\n")[0] else f"{PLANT}{text}\n"
    found = [said for _, where, said in complaints(whole) if where == key]

    assert len(found) == 1, found
    assert words in found[0]


def test_bins_may_tell_day_and_night_apart(case, complaints):
    """Three numbers are a temperature and its hours by day and by night; then every bin has three."""
    apart = START.replace(BINS, 'bins = [["2 degC", 1000, 3000], ["12 degC", 2760, 2000]]\n') + LOADS
    mixed = START.replace(BINS, 'bins = [["2 degC", 1000, 3000], ["12 degC", 4760]]\n') + LOADS

    assert case(apart).year.bins[0] == (275.15, 4000.0, 3000.0)
    assert list(case(apart).weather.night_hours) == [3000.0, 2000.0]
    assert [text for _, key, text in complaints(mixed) if key == "year.bins"] == [
        "some bins tell day and night apart and others do not; write all of them alike"
    ]
