"""The keys on the plant as installed: what each is worth in SI, what is assumed, and how each is refused."""

import pickle

import pytest
from CoolProp.CoolProp import PropsSI

from retrofit.case import UAFactors, meaning, quantity
from retrofit.case.exchangers import MEDIUM_HEATS
from retrofit.case.model import FIELDS, TABLES, CaseFile
from retrofit.errors import CaseFileError
from retrofit.units import IP, SI, parse_quantity, standard_atmosphere_Pa

START = """\
[plant]
refrigerant = "R404A"
"""
MIDDLE = """\
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compare]
candidates = ["R448A", "R449A"]
"""
EXCHANGER = 'inlet = "2 degC"\noutlet = "-3 degC"\narrangement = "crossflow"\n'
TEN = str(list(range(1, 11)))
POLYNOMIAL = (
    f'[compressor.polynomial]\nunits = "IP"\nmass_flow = {TEN}\ncurrent = {TEN}\nvoltage = "460 V"\nphases = 3\n'
    'power_factor = "85 %"\nreturn_gas = "65 degF"\nevaporating = ["-40 degF", "23 degF"]\n'
    'condensing = ["77 degF", "131 degF"]\n'
)


def with_(tables="", plant=""):
    """Return the text of a case with lines in [plant] and tables at the end."""
    return START + plant + MIDDLE + tables


def keys_of(read):
    """Return the keys whose default was taken, without those of the shortest case."""
    usual = ("plant.altitude", "duty.", "compressor.kind", "compressor.isentropic", "compressor.volumetric", "compare.")
    return [default.key for default in read.defaults if not default.key.startswith(usual)]


def test_a_table_left_out_is_none_and_assumes_nothing(case):
    """What only some plants have is not given, and no default stands for it."""
    read = case(with_())

    optional = ("readings", "evaporator", "condenser", "lines", "valve", "receiver", "controls", "thresholds")
    assert [getattr(read, name) for name in optional] == [None] * 8
    assert (read.plant.relief_setting_Pa, read.plant.metals, read.compressor.polynomial) == (None, None, None)
    assert keys_of(read) == []


def test_gauge_pressures_of_every_table_count_from_the_air_at_the_plant(case):
    """A setting, a reading and a nameplate become absolute with the air pressure at the altitude."""
    read = case(
        with_(
            '[readings]\nsuction_pressure = "-0.2 bar g"\nliquid_pressure = "12 bar a"\n'
            '[controls]\nhead_pressure = "10 bar g"\nfan_steps = ["12 bar g", "200 psig"]\n',
            'altitude = "2000 m"\nlow_side_limit = "19 bar g"\nrelief_setting = "28 bar g"\n',
        )
    )

    air_Pa = 79_495.2  # ICAO standard atmosphere at 2000 m
    assert read.plant.low_side_limit_Pa == pytest.approx(1_900_000.0 + air_Pa, abs=0.1)
    assert read.plant.relief_setting_Pa == pytest.approx(2_800_000.0 + air_Pa, abs=0.1)
    assert read.readings.suction_pressure_Pa == pytest.approx(-20_000.0 + air_Pa, abs=0.1)
    assert read.readings.liquid_pressure_Pa == 1_200_000.0
    assert read.controls.head_pressure_Pa == pytest.approx(1_000_000.0 + air_Pa, abs=0.1)
    # 1 psi = 6894.757 Pa (NIST SP 811, B.8)
    assert read.controls.fan_steps_Pa == pytest.approx((1_200_000.0 + air_Pa, 200 * 6894.757 + air_Pa), abs=0.2)


def test_a_gauge_pressure_without_the_air_around_it_is_no_number():
    """Whoever builds a case by hand has to say what its gauges count from."""
    tables = {
        "plant": {"refrigerant": "R404A"},
        "duty": {"cooling": "1 kW", "evaporating": "-8 degC", "condensing": "42 degC"},
        "compare": {"candidates": ["R448A"]},
        "controls": {"head_pressure": "10 bar g"},
    }

    with pytest.raises(LookupError, match="context"):
        CaseFile.model_validate(tables)
    read = CaseFile.model_validate(tables, context={"p_ambient_Pa": standard_atmosphere_Pa(0.0)})
    assert read.controls.head_pressure_Pa == 1_101_325.0


def test_the_plant_as_found_is_read(case):
    """Limits, metals, controller and oil changes arrive."""
    read = case(
        with_(
            "",
            'highest_ambient = "43 degC"\nmetals = ["copper", "steel"]\ncontroller = "fixed to refrigerant"\n'
            'oil_changes = 2\noil_left = "30 %"\n',
        )
    ).plant

    assert (read.highest_ambient_K, read.metals, read.controller) == (
        316.15,
        ("copper", "steel"),
        "fixed to refrigerant",
    )
    assert (read.oil_changes, read.oil_left) == (2, pytest.approx(0.3))


def test_readings_are_read(case):
    """Temperatures, power and hours arrive in SI; a day keeps its hours."""
    read = case(
        with_(
            '[readings]\ndate = "1 June"\nambient = "77 degF"\nload = 0.8\nsuction_temperature = "7 degC"\n'
            'discharge_temperature = "73 degC"\npower = "54 kW"\ncurrent = "92 A"\nvoltage = "0.4 kV"\nphases = 3\n'
            'power_factor = 0.85\nhours_per_day = "16 h"\n'
        )
    ).readings

    assert (read.date, read.ambient_K, read.load) == ("1 June", pytest.approx(298.15), 0.8)
    assert (read.suction_temperature_K, read.discharge_temperature_K) == (280.15, 346.15)
    assert (read.power_W, read.current_A, read.voltage_V) == (54_000.0, 92.0, 400.0)
    assert (read.phases, read.power_factor, read.hours_per_day) == (3, 0.85, 16.0)


def test_efficiency_points_stand_instead_of_the_two_efficiencies(case):
    """Points are three numbers each with names, and the ordinary efficiencies count as not taken."""
    read = case(with_("[compressor]\nefficiency_points = [[2, 0.62, 0.92], [4, 0.7, 0.86]]\n"))

    first, second = read.compressor.efficiency_points
    assert (first.pressure_ratio, first.isentropic_efficiency, first.volumetric_efficiency) == (2.0, 0.62, 0.92)
    assert second == (4.0, 0.7, 0.86)
    assert [d.key for d in read.defaults if d.key.startswith("compressor")] == ["compressor.kind"]


def test_a_polynomial_is_held_as_printed(case):
    """Coefficients keep the units they are printed in; its conditions are SI."""
    read = case(with_(POLYNOMIAL))

    polynomial = read.compressor.polynomial
    assert (polynomial.units, polynomial.mass_flow, polynomial.capacity) == ("IP", tuple(range(1, 11)), None)
    assert (polynomial.voltage_V, polynomial.phases, polynomial.power_factor) == (460.0, 3, 0.85)
    # 65 °F = 18.33 °C; -40 °F = -40 °C; 23 °F = -5 °C; 77 °F = 25 °C; 131 °F = 55 °C
    assert polynomial.return_gas_K == pytest.approx(291.483, abs=1e-3)
    assert polynomial.T_evap_range_K == pytest.approx((233.15, 268.15))
    assert polynomial.T_cond_range_K == pytest.approx((298.15, 328.15))
    taken = {d.key: d.shown_text for d in read.defaults if d.key.startswith("compressor")}
    assert taken == {"compressor.kind": "unknown", "compressor.power_at": "terminals"}
    assert read.compressor.motor_is_inside


@pytest.mark.parametrize(
    ("keys", "expected"),
    [
        ("", None),
        ("motor_efficiency = 0.9\n", 0.9),
        ("motor_efficiency = 0.9\ndrive_efficiency = 0.96\n", 0.9 * 0.96),
        ("drive_efficiency = 0.96\n", 0.96),
    ],
)
def test_losses_of_motor_and_drive_count_once_each(case, keys, expected):
    """With constant efficiencies both come on top; a power at the terminals holds the motor, one at the shaft not."""
    with_power = POLYNOMIAL.replace(
        f'current = {TEN}\nvoltage = "460 V"\nphases = 3\npower_factor = "85 %"', f"power = {TEN}"
    )
    alone, terminals, shaft = (
        case(with_(text)).compressor.motor_and_drive
        for text in (
            f"[compressor]\n{keys}",
            f"[compressor]\n{keys}{with_power}",
            f'[compressor]\npower_at = "shaft"\n{keys}{with_power}',
        )
    )

    assert alone == shaft == (None if expected is None else pytest.approx(expected))
    assert terminals == (pytest.approx(0.96) if "drive" in keys else None)


def test_motor_and_control_of_the_compressor_are_read(case):
    """Motor, shell, speed and limits arrive in SI."""
    read = case(
        with_(
            '[compressor]\nmotor_efficiency = 0.92\nheat_loss = "5 %"\nspeed = "variable"\nlowest_speed = "30 %"\n'
            'rated_current = "120 A"\nrated_power = "60 kW"\nhighest_suction = "0 degC"\n'
        )
    ).compressor

    assert (read.motor_efficiency, read.heat_loss, read.lowest_speed) == (0.92, pytest.approx(0.05), pytest.approx(0.3))
    assert (read.rated_current_A, read.rated_power_W, read.highest_suction_K) == (120.0, 60_000.0, 273.15)


def test_an_exchanger_given_takes_its_own_defaults_only(case):
    """The side that is there calculates its conductance and assumes no pressure drop; the other assumes nothing."""
    read = case(with_("[evaporator]\n" + EXCHANGER))

    assert (read.evaporator.inlet_K, read.evaporator.outlet_K) == (275.15, 270.15)
    assert (read.evaporator.arrangement, read.evaporator.pressure_drop_K) == ("crossflow", 0.0)
    assert read.evaporator.ua_factor.of("R448A") is None
    assert keys_of(read) == ["evaporator.ua_factor", "evaporator.pressure_drop"]
    assert read.condenser is None


def test_conductance_can_be_given_for_each_refrigerant(case):
    """A table names refrigerants as people write them; what it leaves out is calculated, and said so."""
    read = case(with_("[condenser]\nua_factor = {r-448a = 1.05, R32 = 0.9}\n"))

    assert read.condenser.ua_factor == UAFactors(None, (("R448A", 1.05), ("R32", 0.9)))
    assert [read.condenser.ua_factor.of(name) for name in ("R448A", "R449A")] == [1.05, None]
    taken = {default.key: default.shown_text for default in read.defaults}
    assert taken["condenser.ua_factor"] == "calculated for R449A"
    assert read.given["condenser.ua_factor"] == "r-448a = 1.05, R32 = 0.9"


def test_conductance_can_be_one_number_or_the_word(case):
    """One number holds for every candidate; "calculated" says what leaving the key out says."""
    given = case(with_("[condenser]\nua_factor = 0.95\n")).condenser.ua_factor
    word = case(with_('[condenser]\nua_factor = "calculated"\n')).condenser.ua_factor

    assert (given.of("R448A"), given.of("R32")) == (0.95, 0.95)
    assert word == UAFactors()


def test_the_old_name_of_a_key_is_answered_with_the_new_one(case):
    """Who wrote film_factor is told what it is called now."""
    with pytest.raises(CaseFileError, match="film_factor is called ua_factor now; write ua_factor in"):
        case(with_("[evaporator]\nfilm_factor = 1.0\n"))


@pytest.mark.parametrize("medium", MEDIUM_HEATS)
def test_a_flow_of_water_or_air_takes_the_specific_heat_of_its_medium(case, medium):
    """The value taken is on the list of defaults, for the duty and for the readings alike."""
    exchanger = f'medium = "{medium}"\ninlet = "20 degC"\nflow = "8 kg/s"\narrangement = "counterflow"\n'
    read = case(with_(f'[evaporator]\n{exchanger}[readings]\nevaporator_flow = "7 kg/s"\n'))

    expected = parse_quantity(MEDIUM_HEATS[medium].shown_text, "specific heat")
    assert read.evaporator.flow_kg_per_s == 8.0
    assert read.evaporator.specific_heat_J_per_kgK == expected
    assert read.readings.evaporator_specific_heat_J_per_kgK == expected
    assert {"evaporator.specific_heat", "readings.evaporator_specific_heat"} <= set(keys_of(read))
    assert "evaporator.specific_heat" not in read.given


def test_the_specific_heats_taken_are_those_of_the_property_library():
    """Water from 5 to 40 °C and dry air at 20 °C, as the reasons say; CoolProp: IAPWS-95 and Lemmon 2000."""
    water, air = (parse_quantity(heat.shown_text, "specific heat") for heat in MEDIUM_HEATS.values())

    for T_K in (278.15, 293.15, 313.15):
        assert water == pytest.approx(PropsSI("C", "T", T_K, "P", 101_325.0, "Water"), rel=0.004)
    assert air == pytest.approx(PropsSI("C", "T", 293.15, "P", 101_325.0, "Air"), abs=0.5)


def test_a_specific_heat_given_is_no_default(case):
    """A brine brings its own."""
    read = case(
        with_(
            '[evaporator]\nmedium = "brine"\ninlet = "0 degC"\nflow = "8 kg/s"\n'
            'specific_heat = "0.93 Btu/(lb F)"\narrangement = "counterflow"\n'
        )
    )

    # 1 Btu/(lb °F) = 4186.8 J/(kg K) (NIST SP 811, B.8)
    assert read.evaporator.specific_heat_J_per_kgK == pytest.approx(0.93 * 4186.8)
    assert "evaporator.specific_heat" not in keys_of(read)


def test_lines_valve_and_receiver_are_read(case):
    """Sizes arrive in metres; friction is assumed only for a line whose length is given."""
    read = case(
        with_(
            '[lines.suction]\ndiameter = "80 mm"\nlength = "40 m"\nriser = "5 m"\nlowest_load = "30 %"\n'
            '[lines.liquid]\ndiameter = "1.5 in"\n[valve]\nkind = "thermostatic"\nliquid_line_loss = "0.3 bar"\n'
            'distributor_loss = "10 psi"\n[receiver]\nvolume = "250 l"\n'
        )
    )

    suction, liquid = read.lines.suction, read.lines.liquid
    assert (suction.diameter_m, suction.length_m, suction.riser_m) == (pytest.approx(0.08), 40.0, 5.0)
    assert (suction.roughness_m, suction.fittings_m, suction.lowest_load) == (
        pytest.approx(1.5e-6),
        0.0,
        pytest.approx(0.3),
    )
    assert (liquid.diameter_m, read.lines.discharge) == (pytest.approx(0.0381), None)
    assert keys_of(read) == ["lines.suction.fittings", "lines.suction.roughness"]
    assert read.valve.liquid_line_loss_Pa == pytest.approx(30_000.0)
    assert read.valve.distributor_loss_Pa == pytest.approx(68_947.57)  # 1 psi = 6894.757 Pa (NIST SP 811, B.8)
    assert read.receiver.volume_m3 == pytest.approx(0.25)


def test_thresholds_of_any_name_are_read(case):
    """This room knows no names: it keeps the numbers."""
    read = case(with_("[thresholds]\ncapacity = {work = 1.0, stop = 0.9}\n[thresholds.glide]\nnote = 1\n"))

    levels = {name: (own.note, own.work, own.stop) for name, own in read.thresholds.by_name.items()}
    assert levels == {"capacity": (None, 1.0, 0.9), "glide": (1.0, None, None)}
    assert read.given["thresholds.capacity.stop"] == "0.9"


def test_a_full_case_can_be_sent(case):
    """A worker process can receive a case with every kind of value."""
    read = case(with_(POLYNOMIAL + "[evaporator]\n" + EXCHANGER + "[thresholds]\na = {work = 1}\n"))

    assert pickle.loads(pickle.dumps(read)) == read
    with pytest.raises(ValueError, match="frozen"):
        read.evaporator.inlet_K = 1.0


def test_a_list_of_inputs_can_name_and_show_every_key(case):
    """Each key has a sentence, and its quantity a kind that both systems of units can show."""
    read = case(with_('[lines.liquid]\ndiameter = "28 mm"\n[evaporator]\n' + EXCHANGER, 'charge = "260 kg"\n'))

    assert all(meaning(key) != key.rpartition(".")[2] for key in FIELDS)
    assert quantity(read, "duty.cooling") == ("cooling", 120_000.0)
    assert quantity(read, "lines.liquid.diameter") == ("diameter", pytest.approx(0.028))
    assert quantity(read, "evaporator.pressure_drop") == ("temperature difference", 0.0)
    assert quantity(read, "plant.charge") == ("mass", 260.0)
    for key in ("plant.refrigerant", "plant.metals", "lines.suction.diameter", "readings.power", "thresholds.a.work"):
        assert quantity(read, key) is None
    assert meaning("thresholds.a.work") == "work"
    kinds = {
        extra.shown_kind() for _, field in FIELDS.values() for extra in field.metadata if hasattr(extra, "shown_kind")
    }
    assert kinds - {""} <= set(SI.displays) & set(IP.displays)


def test_every_table_of_the_file_is_known():
    """Names of tables are those of the file, also where one stands inside another."""
    assert {"plant", "compressor.polynomial", "lines", "lines.suction", "thresholds"} <= set(TABLES)
    assert "lines.suction" not in FIELDS
    assert FIELDS["lines.suction.diameter"][0] == "diameter_m"


@pytest.mark.parametrize(
    ("plant", "tables", "key", "part"),
    [
        ("low_side_limit = '19 bar'", "", "plant.low_side_limit", "absolute or gauge"),
        ("relief_setting = '400 bar g'", "", "plant.relief_setting", "0.5 bar g to 200 bar g"),
        ("relief_setting = '0.4 bar g'", "", "plant.relief_setting", "0.5 bar g to 200 bar g"),
        ("high_side_limit = '1.0 bar a'", "", "plant.high_side_limit", "0.5 bar g to 200 bar g"),
        ("high_side_limit = '0 bar g'", "", "plant.high_side_limit", "0.5 bar g to 200 bar g"),
        ("low_side_limit = '1.1 bar a'", "", "plant.low_side_limit", "0.5 bar g to 200 bar g"),
        ("", "[controls]\nhigh_pressure_cut_out = '0.9 bar a'", "controls.high_pressure_cut_out", "0.5 bar g to"),
        ("", "[controls]\nhigh_pressure_cut_out = '-0.5 bar g'", "controls.high_pressure_cut_out", "0.5 bar g to"),
        ("highest_ambient = '81 degC'", "", "plant.highest_ambient", "-20 degC to 80 degC"),
        (
            "metals = 'copper'",
            "",
            "plant.metals",
            "a text stands where a list is needed; write a list of 1 to 6 metals",
        ),
        ("metals = []", "", "plant.metals", "the list has 0 items"),
        ("metals = ['coper']", "", "plant.metals[1]", 'did you mean "copper"'),
        ("metals = ['aluminum']", "", "plant.metals[1]", 'did you mean "aluminium"'),
        ("metals = ['steel', 'steel']", "", "plant.metals[2]", "steel is in the list twice"),
        ("controller = 'selectible'", "", "plant.controller", 'did you mean "selectable"'),
        ("oil_changes = 2.5", "", "plant.oil_changes", "2.5 is not a whole number"),
        ("oil_changes = '2'", "", "plant.oil_changes", "write a whole number without quotes, as in 2"),
        ("oil_changes = 11", "", "plant.oil_changes", "0 to 10"),
        ("oil_changes = true", "", "plant.oil_changes", "true or false stands where a whole number is needed"),
        ("oil_left = '0 %'", "", "plant.oil_left", "above 0 %"),
        ("relief_seting = '28 bar g'", "", "plant.relief_seting", 'did you mean "relief_setting"'),
        ("", "[compressor]\nrated_curent = '1 A'", "compressor.rated_curent", 'did you mean "rated_current"'),
        (
            "",
            "[compressor]\nrated_current = '120 W'",
            "compressor.rated_current",
            "is a power, but a current is needed",
        ),
        ("", "[compressor]\nrated_power = '0 W'", "compressor.rated_power", "above 0 W"),
        ("", "[compressor]\nmotor_efficiency = 92", "compressor.motor_efficiency", "10 % to 100 %"),
        ("", "[compressor]\nheat_loss = '95 %'", "compressor.heat_loss", "0 % to 90 %"),
        ("", "[compressor]\nspeed = 'varable'", "compressor.speed", 'did you mean "variable"'),
        ("", "[compressor]\nspeed = 'steps'\nsteps = 1", "compressor.steps", "2 to 100"),
        ("", "[compressor]\nhighest_suction = '61 degC'", "compressor.highest_suction", "60 degC"),
        ("", "[compressor]\nefficiency_points = 0.7", "compressor.efficiency_points", "a list of 2 to 50 points"),
        ("", "[compressor]\nefficiency_points = [[2, 0.6, 0.9]]", "compressor.efficiency_points", "has 1 items"),
        ("", "[compressor]\nefficiency_points = [[2, 0.6], 5]", "compressor.efficiency_points[1]", "three numbers"),
        ("", "[compressor]\nefficiency_points = [[2, 0.6], 5]", "compressor.efficiency_points[2]", "a number stands"),
        (
            "",
            "[compressor]\nefficiency_points = [[1, 0.6, 0.9], [2, 1.6, 0.9]]",
            "compressor.efficiency_points[1]",
            "pressure ratio 1 is outside",
        ),
        (
            "",
            "[compressor]\nefficiency_points = [[2, 1.6, 0.9], [3, 0.6, 0]]",
            "compressor.efficiency_points[1]",
            "isentropic efficiency 1.6",
        ),
        (
            "",
            "[compressor]\nefficiency_points = [[2, 0.6, 0.9], [3, 0.6, 0]]",
            "compressor.efficiency_points[2]",
            "volumetric efficiency 0 ",
        ),
        ("", "[compressor]\nisentropic_efficiency = 0.000001", "compressor.isentropic_efficiency", "10 % to 100 %"),
        ("", "[compressor]\nvolumetric_efficiency = '9 %'", "compressor.volumetric_efficiency", "below it no plant"),
        (
            "",
            "[compressor]\nefficiency_points = [[2, 1e-6, 0.9], [3, 0.6, 0.8]]",
            "compressor.efficiency_points[1]",
            "0.1 to 1 (below",
        ),
        ("", "[compressor]\npolynomial = 5", "compressor.polynomial", "begin it with [compressor.polynomial]"),
        ("", POLYNOMIAL.replace("IP", "US"), "compressor.polynomial.units", 'write "SI" or "IP"'),
        (
            "",
            POLYNOMIAL.replace('units = "IP"\n', ""),
            "compressor.polynomial.units",
            "add units to [compressor.polynom",
        ),
        (
            "",
            POLYNOMIAL.replace("9, 10]", "9]", 1),
            "compressor.polynomial.mass_flow",
            "the list has 9 items; write a li",
        ),
        ("", POLYNOMIAL.replace("9, 10]", "9, nan]", 1), "compressor.polynomial.mass_flow[10]", "sensible size"),
        ("", POLYNOMIAL.replace("9, 10]", "9, '1']", 1), "compressor.polynomial.mass_flow[10]", "without quotes"),
        ("", POLYNOMIAL.replace("9, 10]", "9, 1e13]", 1), "compressor.polynomial.mass_flow[10]", "outside what is"),
        ("", POLYNOMIAL.replace("phases = 3", "phases = 2"), "compressor.polynomial.phases", "write 1 or 3"),
        ("", POLYNOMIAL.replace("mass_flow", "mas_flow"), "compressor.polynomial.mas_flow", 'did you mean "mass_flow"'),
        (
            "",
            POLYNOMIAL.replace('condensing = ["77 degF", "131 degF"]', ""),
            "compressor.polynomial.condensing",
            'as in condensing = ["-40 degC", "-5 degC"]',
        ),
        ("", "[evaporator]\ninlett = '2 degC'", "evaporator.inlett", 'did you mean "inlet"'),
        ("", "[evaporator]\nmedium = 'glycol'", "evaporator.medium", 'did you mean "brine"'),
        ("", "[evaporator]\nflow = '8 m3/h'", "evaporator.flow", "is a volume flow, but a mass flow is needed"),
        ("", "[evaporator]\nspecific_heat = 4.19", "evaporator.specific_heat", 'such as "4.19 kJ/(kg K)"'),
        ("", "[evaporator]\nspecific_heat = '4190 kJ/(kg K)'", "evaporator.specific_heat", "10 kJ/(kg K)"),
        ("", "[evaporator]\narrangement = 'cross'", "evaporator.arrangement", 'did you mean "crossflow"'),
        ("", "[evaporator]\nua_factor = '1.0'", "evaporator.ua_factor", "without quotes"),
        ("", "[evaporator]\nua_factor = 11", "evaporator.ua_factor", "0.1 to 10"),
        ("", "[evaporator]\nua_factor = {R999 = 1.0}", "evaporator.ua_factor", "not in the catalogue"),
        ("", "[evaporator]\nua_factor = {R32 = 0}", "evaporator.ua_factor", '"R32": "0" is outside'),
        ("", "[evaporator]\nua_factor = {R32 = 1, r-32 = 1}", "evaporator.ua_factor", "R-32 is in the table twice"),
        ("", "[evaporator]\npressure_drop = '1 bar'", "evaporator.pressure_drop", "a temperature difference is needed"),
        ("evaporator = {inlet = '2 degC'}", "", "plant.evaporator", "a table stands where a word is needed"),
        ("", "[condenser.inlet]", "condenser.inlet", "a table stands where a temperature is needed"),
        ("", "[lines]\nsuction = '80 mm'", "lines.suction", "begin it with [lines.suction]"),
        ("", "[lines.sucktion]", "lines.sucktion", 'there is no table "sucktion" in [lines], did you mean "suction"'),
        ("", "[lines.suction]\nlength = '4 m'", "lines.suction.diameter", 'as in diameter = "80 mm"'),
        ("", "[lines.suction]\ndiameter = '80 m'", "lines.suction.diameter", "1 mm to 2 m"),
        ("", "[lines.suction]\ndiameter = '8 cm'", "lines.suction.diameter", "mm"),
        (
            "",
            "[lines.liquid]\ndiameter = '8 mm'\nlowest_load = 0.3",
            "lines.liquid.lowest_load",
            "in [lines.suction] or",
        ),
        ("", "[valve]\nkind = 'TXV'", "valve.kind", 'did you mean "thermostatic"'),
        ("", "[valve]\nliquid_line_loss = '0.3 bar g'", "valve.liquid_line_loss", "without a or g"),
        ("", "[receiver]", "receiver.volume", 'as in volume = "250 l"'),
        ("", "[receiver]\nvolume = '250 kg'", "receiver.volume", "is a mass, but a volume is needed"),
        ("", "[controls]\nfan_steps = ['12 bar g', 14]", "controls.fan_steps[2]", "bare number"),
        ("", "[controls]\nfan_steps = '12 bar g'", "controls.fan_steps", 'as in ["12 bar g", "14 bar g"]'),
        ("", "[controls]\nhead_presure = '12 bar g'", "controls.head_presure", 'did you mean "head_pressure"'),
        ("", "[readings]\nsuction_pressure = '3.6 bar'", "readings.suction_pressure", "absolute or gauge"),
        ("", "[readings]\nsuction_pressure = '-1.1 bar g'", "readings.suction_pressure", "0.01 bar a to"),
        ("", "[readings]\nhours_per_day = 25", "readings.hours_per_day", "0 to 24"),
        ("", "[readings]\nhours_per_day = '16 kW'", "readings.hours_per_day", "hours per day is needed"),
        ("", "[readings]\ndate = 2026-06-01", "readings.date", "a date or a time stands where a text is needed"),
        ("", "[readings]\nphases = 2", "readings.phases", "2 is not possible here; write 1 or 3"),
        ("", "[readings]\npower_factor = 85", "readings.power_factor", "10 % to 100 %"),
        ("", "[readings]\nsuction_temp = '1 degC'", "readings.suction_temp", 'did you mean "suction_temperature"'),
        ("", "thresholds = 5", "compare.thresholds", "belongs in a table of its own, [thresholds]"),
        (
            "",
            "[thresholds]\ncapacity = 0.9",
            "thresholds.capacity",
            "write it as capacity = {work = 0.95, stop = 0.85}",
        ),
        ("", "[thresholds]\ncapacity = {wrk = 0.9}", "thresholds.capacity.wrk", 'did you mean "work"'),
        ("", "[thresholds]\ncapacity = {work = '0.9'}", "thresholds.capacity.work", "without quotes"),
        ("", "[thresholds]\ncapacity = {work = inf}", "thresholds.capacity.work", "sensible size"),
        ("", "[thresholds]\ncapacity = {}", "thresholds.capacity", "it holds no number"),
        ("", '[thresholds]\n"ca\\u001bp" = {work = 1}', "thresholds.ca\\x1bp", "letters, digits"),
        ("inlet = '2 degC'", "", "plant.inlet", "inlet belongs in [evaporator] or [condenser], not in [plant]"),
        ("volume = '250 l'", "", "plant.volume", "belongs in [receiver], [room] or [machinery_room], not"),
        ("suction = {}", "", "plant.suction", "belongs in a table of its own, [lines.suction]"),
    ],
)
def test_each_fault_of_a_key_is_named(complaints, plant, tables, key, part):
    """A fault names its key and says what is allowed; nothing else of the file is complained about in its place."""
    found = complaints(with_(tables, plant and plant + "\n"))

    assert any(name == key and part in text for _, name, text in found), found
    assert all(text.isprintable() for _, _, text in found)


def test_a_text_where_the_exchanger_belongs_is_sent_to_the_plant(complaints):
    """How evaporators are fed is a key of the plant, what they cool is a table."""
    found = complaints("evaporator = 'flooded'\n" + with_())

    assert [(line, key) for line, key, _ in found] == [(1, "evaporator")]
    assert "or move this line to [plant]" in found[0][2]


def test_a_limit_counts_from_the_air_at_the_plant(case, complaints):
    """1.3 bar a is 0.6 bar above the air at 3000 m, 0.70 bar by ICAO Doc 7488, and 0.29 bar above that at the sea."""
    low = "low_side_limit = '1.3 bar a'\n"

    assert case(with_(plant=low + "altitude = '3000 m'\n")).plant.low_side_limit_Pa == pytest.approx(1.3e5)
    assert [key for _, key, _ in complaints(with_(plant=low))] == ["plant.low_side_limit"]
    # 0.5 bar g itself is allowed, however it is written: 1.013 25 + 0.5 bar.
    assert case(with_(plant="low_side_limit = '1.51325 bar a'\n")).plant.low_side_limit_Pa == pytest.approx(151_325.0)
