"""A compressor's polynomials as efficiencies: by hand, there and back, in both unit systems, and what is refused."""

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.polynomial.polynomial import polyval2d

from retrofit.equipment.polynomial import CompressorRating, efficiencies_of, ten_coefficients
from retrofit.errors import OutsideValidRangeError, QuantityError
from retrofit.properties import fluid

KELVIN = 273.15
SWEPT = 0.05  # m³/s
# Lowest and highest evaporating and condensing temperature, and return gas: ordinary rating conditions.
RANGES = {
    "R404A": ((-40.0, -5.0), (25.0, 55.0), 18.3),
    "R134a": ((-25.0, 5.0), (30.0, 60.0), 18.3),
    "R407C": ((-15.0, 10.0), (30.0, 60.0), 20.0),
}
WATTS_PER_BTU_PER_HOUR = 1055.055_852_62 / 3600.0  # International Table Btu, NIST SP 811 appendix B
KG_PER_LB = 0.453_592_37


# -- the polynomial ----------------------------------------------------------------------------------


def test_ten_coefficients_by_hand():
    """C = 1 to 10 at S = 2, D = 3: 1 + 4 + 9 + 16 + 30 + 54 + 56 + 96 + 162 + 270 = 698."""
    assert ten_coefficients(range(1, 11), 2.0, 3.0) == 698.0


@given(st.lists(st.floats(-10, 10), min_size=10, max_size=10), st.floats(-40, 20), st.floats(20, 60))
@settings(max_examples=100, deadline=None)
def test_ten_coefficients_are_a_cubic(c, s, d):
    """The same number comes from NumPy's own polynomial in two variables, powers of S down and of D across."""
    table = [[c[0], c[2], c[5], c[9]], [c[1], c[4], c[8], 0], [c[3], c[7], 0, 0], [c[6], 0, 0, 0]]

    assert ten_coefficients(c, s, d) == pytest.approx(polyval2d(s, d, np.array(table)), rel=1e-9, abs=1e-6)


def test_a_wrong_number_of_coefficients_is_named():
    """Nine coefficients are refused."""
    with pytest.raises(QuantityError, match="9 coefficients given; the polynomial has 10"):
        ten_coefficients([1.0] * 9, 0.0, 40.0)


# -- by hand -----------------------------------------------------------------------------------------
# R-134a from 0.20 MPa (dew point -10.09 degC) and 0 degC to 1.0 MPa (39.37 degC), no subcooling; tables of superheated
# and saturated R-134a in thermodynamics textbooks (Cengel & Boles, tables ), from memory:
#   0.20 MPa, 0 degC: v = 0.10481 m³/kg, h = 253.05 kJ/kg, s = 0.9698 kJ/(kg K);  saturated vapour h = 244.46 kJ/kg
#   1.0 MPa: liquid h = 107.32 kJ/kg; 50 degC h = 282.74, s = 0.9525; 60 degC h = 293.38, s = 0.9850
# h2s = 282.74 + (0.9698 - 0.9525) / 0.0325 x 10.64 = 288.40, so h2s - h1 = 35.35 kJ/kg
# 10 kW over 253.05 - 107.32 = 145.73 kJ/kg is 0.068620 kg/s = 247.03 kg/h
# volumetric: 0.068620 x 0.10481 / 0.009 m³/s = 0.7991;  isentropic: 0.068620 x 35.35 / 4 kW = 0.6064
# Tolerance: the tables' last digits and the straight line between 50 and 60 degC make 0.3 % of the isentropic work.
HAND_VOLUMETRIC, HAND_ISENTROPIC, HAND_SWEPT = 0.7991, 0.6064, 0.009
HAND_RATIO, HAND_SUCTION = 5.0, 0.20e6


def _level(value):
    """Return the coefficients of a quantity that does not change."""
    return (float(value), *[0.0] * 9)


def _hand_rating(**changes):
    given_ = {
        "units": "SI",
        "T_evap_range_K": (KELVIN - 10.6, KELVIN - 9.6),
        "T_cond_range_K": (KELVIN + 38.9, KELVIN + 39.9),
        "capacity": _level(10e3),
        "power": _level(4e3),
        "return_gas_K": KELVIN,
    }
    return CompressorRating(**{key: value for key, value in (given_ | changes).items() if value is not None})


def _by_hand(rating):
    made = efficiencies_of(rating, fluid("R134a"), HAND_SWEPT)
    return [float(x) for x in made.at(HAND_RATIO, HAND_SUCTION)]


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param({}, id="capacity and power"),
        pytest.param({"return_gas_K": None, "superheat_K": 10.09}, id="superheat instead of return gas"),
        pytest.param({"capacity": None, "mass_flow": _level(247.03)}, id="mass flow"),
        # 4000 W / (root of 3 x 400 V x 0.85) = 6.7924 A; 4000 W / (230 V x 0.9) = 19.324 A
        pytest.param(
            {"power": None, "current": _level(6.7924), "voltage_V": 400.0, "phases": 3, "power_factor": 0.85},
            id="current of three phases",
        ),
        pytest.param(
            {"power": None, "current": _level(19.324), "voltage_V": 230.0, "phases": 1, "power_factor": 0.9},
            id="current of one phase",
        ),
        pytest.param({"units": "IP", "capacity": _level(10e3 / WATTS_PER_BTU_PER_HOUR)}, id="Btu/h"),
        pytest.param(
            {"units": "IP", "capacity": None, "mass_flow": _level(247.03 / KG_PER_LB)}, id="mass flow in lb/h"
        ),
    ],
)
def test_efficiencies_by_hand(changes):
    """Each way of rating the same machine gives the efficiencies worked from printed tables above."""
    isentropic, volumetric = _by_hand(_hand_rating(**changes))

    assert volumetric == pytest.approx(HAND_VOLUMETRIC, rel=1e-3)
    assert isentropic == pytest.approx(HAND_ISENTROPIC, rel=3e-3)


def test_a_capacity_that_counts_the_evaporator_alone():
    """If only saturated vapour counts as cooled, the same capacity needs more mass:
    (253.05 - 107.32) / (244.46 - 107.32) = 1.0626 times as much (tables as above, printed to 0.01 kJ/kg)."""
    all_counted, useful_counted = _by_hand(_hand_rating()), _by_hand(_hand_rating(useful_superheat_K=0.0))

    assert np.divide(useful_counted, all_counted) == pytest.approx([1.0626, 1.0626], rel=1e-3)


def test_a_rating_with_subcooling_means_less_mass():
    """A capacity rated with 5 K subcooling: liquid of R-134a takes 1.5 kJ/(kg K) near 37 degC (tables, from memory), so
    the effect is larger by 7.5 in 145.73 kJ/kg and the mass flow smaller by 4.9 %."""
    plain, subcooled = _by_hand(_hand_rating()), _by_hand(_hand_rating(subcooling_K=5.0))

    assert np.divide(subcooled, plain) == pytest.approx(145.73 / (145.73 + 7.5), rel=2e-3)


# -- there and back ----------------------------------------------------------------------------------


def _basis(s, d):
    return np.stack([np.ones_like(s), s, d, s * s, s * d, d * d, s**3, d * s * s, s * d * d, d**3], axis=-1)


def _true_efficiencies(ratio, p_suction):
    """Return the efficiencies of a machine of ours: best isentropic near a ratio of 4, a little by suction pressure."""
    by_pressure = 0.01 * np.log(p_suction / 4e5)
    return 0.70 - 0.03 * np.log(ratio / 4.0) ** 2 - by_pressure, 0.96 - 0.025 * (ratio - 1.0)


class Machine:
    """A machine of known efficiencies with a refrigerant, and its rating: polynomials fitted over a grid."""

    def __init__(self, name, units="SI"):
        self.fluid = fluid(name)
        evaporating, condensing, return_gas = RANGES[name]
        s, d = (axis.ravel() for axis in np.meshgrid(np.linspace(*evaporating, 15), np.linspace(*condensing, 15)))
        self.p_suction, p_discharge = self.fluid.p_dew(s + KELVIN), self.fluid.p_dew(d + KELVIN)
        self.ratio = p_discharge / self.p_suction
        self.isentropic, self.volumetric = _true_efficiencies(self.ratio, self.p_suction)
        suction = self.fluid.vapour(self.p_suction, return_gas - s)
        flow = self.volumetric * SWEPT * suction.density_kg_per_m3
        capacity = flow * (suction.h_J_per_kg - self.fluid.liquid(p_discharge, 0.0).h_J_per_kg)
        work = self.fluid.h_at_entropy(p_discharge, suction.s_J_per_kgK) - suction.h_J_per_kg
        if units == "IP":
            s, d, capacity = 1.8 * s + 32.0, 1.8 * d + 32.0, capacity / WATTS_PER_BTU_PER_HOUR
        fits = [self._fitted(_basis(s, d), values) for values in (capacity, flow * work / self.isentropic)]
        (coefficients, self.capacity_error), (power, self.power_error) = fits
        self.rating = CompressorRating(
            units,
            (evaporating[0] + KELVIN, evaporating[1] + KELVIN),
            (condensing[0] + KELVIN, condensing[1] + KELVIN),
            capacity=coefficients,
            power=power,
            return_gas_K=return_gas + KELVIN,
        )

    @staticmethod
    def _fitted(basis, values):
        size = np.abs(basis).max(axis=0)  # scaled, so that least squares keeps its digits
        found = np.linalg.lstsq(basis / size, values, rcond=None)[0] / size
        return tuple(float(c) for c in found), float(np.max(np.abs(basis @ found / values - 1.0)))

    def map(self, **changes):
        return efficiencies_of(replace(self.rating, **changes), self.fluid, SWEPT)


@pytest.fixture(scope="module", params=RANGES)
def machine(request):
    """A machine of known efficiencies, rated by fitted polynomials."""
    return Machine(request.param)


def test_efficiencies_come_back(machine):
    """Polynomials made from known efficiencies give them back within the error of the fit of cubics."""
    isentropic, volumetric = machine.map().at(machine.ratio, machine.p_suction)
    of_capacity, of_power = machine.capacity_error, machine.power_error

    # volumetric ~ capacity; isentropic ~ capacity / power; 1e-4 for the splines of the map
    assert max(of_capacity, of_power) < 0.04
    assert volumetric == pytest.approx(machine.volumetric, rel=of_capacity + 1e-4)
    worst = (1.0 + of_capacity) / (1.0 - of_power) - 1.0
    assert isentropic == pytest.approx(machine.isentropic, rel=worst + 1e-4)


def test_the_map_is_the_polynomial(machine):
    """Between its nodes too the map gives what the polynomials give, to 1e-4: volumetric = flow / (density x swept)."""
    rating, f = machine.rating, machine.fluid
    evaporating, condensing = np.array(rating.T_evap_range_K), np.array(rating.T_cond_range_K)
    rng = np.random.default_rng(8)
    T_evap, T_cond = rng.uniform(*evaporating, 300), rng.uniform(*condensing, 300)
    p_suction, p_discharge = f.p_dew(T_evap), f.p_dew(T_cond)
    suction = f.vapour(p_suction, rating.return_gas_K - T_evap)
    effect = suction.h_J_per_kg - f.liquid(p_discharge, 0.0).h_J_per_kg
    capacity = _basis(T_evap - KELVIN, T_cond - KELVIN) @ rating.capacity
    ratio = p_discharge / p_suction

    found = machine.map()

    assert found.at(ratio, p_suction)[1] == pytest.approx(
        capacity / effect / suction.density_kg_per_m3 / SWEPT, rel=1e-4
    )
    assert found.covers(ratio, p_suction).all()
    assert not found.notes


def test_the_curve_of_a_rating_lies_within_its_spread(machine):
    """Everywhere in the range the map lies about the curve by the spread at most, and the spread is small here."""
    made = machine.map()
    for at in range(2):
        off = np.abs(made.at(machine.ratio, machine.p_suction)[at] - made.at(machine.ratio)[at])
        # The samples of the spread do not hit the worst place exactly.
        assert np.max(off) <= made.spread[at] * 1.1 + 1e-3
    assert max(made.spread) < 0.02


@pytest.mark.parametrize("name", RANGES)
def test_both_unit_systems_are_the_same_machine(name):
    """Fitted in degF and Btu/h, the same machine has the same efficiencies: cubics stay cubics under a new scale."""
    metric, inch_pound = (Machine(name, units).map() for units in ("SI", "IP"))
    ratio, p_suction = np.array([3.5, 5.0, 7.0]), 2.4e5

    for at in range(2):
        assert inch_pound.at(ratio, p_suction)[at] == pytest.approx(metric.at(ratio, p_suction)[at], rel=1e-7)


# -- what is refused ---------------------------------------------------------------------------------


@pytest.mark.parametrize("name", RANGES)
@pytest.mark.parametrize(("written", "read"), [("SI", "IP"), ("IP", "SI")])
def test_mixed_unit_systems_are_found(name, written, read):
    """Coefficients of one system read in the other are refused, and the message says which they look like."""
    with pytest.raises(QuantityError, match=f'in {written} units .* they would be usual: are they "{written}"'):
        Machine(name, written).map(units=read)


@pytest.mark.parametrize(
    ("names", "words"),
    [(("capacity",), "capacity"), (("power",), "power"), (("capacity", "power"), "capacity and power")],
)
def test_kilowatts_are_found(machine, names, words):
    """Coefficients in kW read in W are refused, and the message says so."""
    smaller = {name: tuple(c / 1e3 for c in getattr(machine.rating, name)) for name in names}

    with pytest.raises(QuantityError, match=f"with {words} in kW they would be usual: multiply"):
        machine.map(**smaller)


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (
            lambda r: {"capacity": tuple(-c for c in r.capacity)},
            r"a mass flow of -[\d.]+ kg/s at .* possible is above 0",
        ),
        (lambda r: {"power": _level(0.0)}, r"a power of 0 W at .* possible is above 0"),
        (lambda r: {"power": tuple(-c for c in r.power)}, r"a power of -\S+ W at"),
        (lambda r: {"power": tuple(2.0 * c / 5.0 for c in r.power)}, r"isentropic efficiency of 1\.\d+ at"),
        (lambda r: {"power": tuple(20.0 * c for c in r.power)}, r"isentropic efficiency of 0\.0\d+ at"),
        (lambda r: {"capacity": r.capacity[::-1]}, "check the order of the coefficients"),
    ],
)
def test_impossible_coefficients_are_named(machine, change, message):
    """Coefficients that no compressor can have are refused with the quantity, its worst value and the place."""
    with pytest.raises(QuantityError, match=message):
        machine.map(**change(machine.rating))


def test_a_wrong_swept_volume_is_named(machine):
    """A swept volume far too small shows in the volumetric efficiency alone, and the message points at it."""
    with pytest.raises(QuantityError, match=r"a volumetric efficiency of .* check the swept volume"):
        efficiencies_of(machine.rating, machine.fluid, 0.3 * SWEPT)
    with pytest.raises(QuantityError, match="swept volume of 0 m3/s is not above 0"):
        efficiencies_of(machine.rating, machine.fluid, 0.0)


def test_what_is_possible_but_unusual_is_noted():
    """Twice the swept volume halves the volumetric efficiency of 0.80 worked above: possible, so kept, with a note."""
    made = efficiencies_of(_hand_rating(), fluid("R134a"), 2.1 * HAND_SWEPT)

    assert made.notes == (
        "the polynomials give volumetric efficiency 0.38 at the middle of its range (usual: 0.4 to 1)",
    )


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"units": "US"}, "units 'US' of the coefficients are neither of SI, IP"),
        ({"capacity": None}, "of capacity and mass flow exactly one"),
        ({"mass_flow": _level(200.0)}, "of capacity and mass flow exactly one"),
        ({"power": None}, "of power and current exactly one"),
        ({"superheat_K": 10.0}, "of superheat and return gas exactly one"),
        ({"return_gas_K": None}, "of superheat and return gas exactly one"),
        ({"capacity": (1.0,) * 9}, "capacity has 9 coefficients; the polynomial has 10"),
        ({"power": (*_level(1.0), 1.0)}, "power has 11 coefficients"),
        ({"power": (1.0, math.nan, *[0.0] * 8)}, "power: coefficient C2 is nan"),
        ({"T_evap_range_K": (265.0, 255.0)}, "evaporating range -8.1 degC to -18.1 degC does not rise"),
        ({"T_cond_range_K": (260.0, 320.0)}, "condensing range begins at -13.1 degC, not above -9.6 degC"),
        ({"power": None, "current": _level(7.0)}, "without voltage, phases and power factor"),
        (
            {"power": None, "current": _level(7.0), "voltage_V": 400.0, "phases": 2, "power_factor": 0.8},
            "2 phases: a supply has 1 or 3",
        ),
        (
            {"power": None, "current": _level(7.0), "voltage_V": 400.0, "phases": 3, "power_factor": 85.0},
            "power factor 85 above 0 and at most 1",
        ),
    ],
)
def test_a_faulty_rating_is_named(changes, message):
    """A rating that says too little, too much or the impossible is refused before anything is computed."""
    with pytest.raises(QuantityError, match=message):
        _hand_rating(**changes)


def test_wet_return_gas_is_named():
    """Return gas colder than the dew point somewhere in the range is refused with both temperatures."""
    with pytest.raises(QuantityError, match=r"return gas at -10\.0 degC is below the dew point at -9\.6 degC"):
        efficiencies_of(_hand_rating(return_gas_K=KELVIN - 10.0), fluid("R134a"), HAND_SWEPT)


@pytest.mark.parametrize("lenient", [False, True])
def test_a_range_beyond_the_refrigerant_is_named(lenient):
    """Condensing above the critical temperature is refused with the range of the refrigerant, lenient or not."""
    rating = _hand_rating(T_cond_range_K=(KELVIN + 30.0, KELVIN + 90.0))

    with pytest.raises(OutsideValidRangeError, match=r"R404A: saturation temperature 90\.0 degC"):
        efficiencies_of(rating, replace(fluid("R404A"), lenient=lenient), SWEPT)
