"""A compressor's ten-coefficient polynomials turned into isentropic and volumetric efficiency.

A rating of capacity (or mass flow) and power (or current) holds for one refrigerant. As efficiencies over pressure
ratio and suction pressure it can be carried to another. Coefficients that no compressor can have are refused, with
the place where that shows and, if another unit makes sense of them, with that unit.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.equipment.compressor import EfficiencyMap
from retrofit.errors import QuantityError
from retrofit.properties import Fluid
from retrofit.units import KINDS, ZERO_C_K

FloatArray = NDArray[np.float64]

COEFFICIENTS = 10
NODES = 17  # along each axis: the map then meets the polynomials within 3e-5, measured over ranges of 35 K by 30 K
LOWEST_EFFICIENCY = 0.1
# What compressors usually have at the middle of their range; common practice, from memory.
USUAL = {"isentropic": (0.35, 0.85), "volumetric": (0.4, 1.0)}
# Units of temperature, capacity and mass flow by name of the system; power is in W and current in A in both.
UNITS = {"SI": ("degC", "W", "kg/h"), "IP": ("degF", "Btu/h", "lb/h")}


def ten_coefficients(coefficients: Sequence[float], suction: ArrayLike, discharge: ArrayLike) -> FloatArray:
    """Return the value of a compressor polynomial.

    Args:
        coefficients: C1 to C10. [unit of the quantity and powers of the temperatures' unit]
        suction: Suction dew temperature S. [degC or degF]
        discharge: Discharge dew temperature D. [degC or degF]
    Returns: C1 + C2 S + C3 D + C4 S² + C5 S D + C6 D² + C7 S³ + C8 D S² + C9 S D² + C10 D³. [W, Btu/h, kg/h, lb/h or A]
    Raises: QuantityError unless there are ten.
    Source: AHRI 540 and EN 12900, the order of the terms from memory.
    """
    if len(coefficients) != COEFFICIENTS:
        raise QuantityError(f"{len(coefficients)} coefficients given; the polynomial has {COEFFICIENTS}, C1 to C10")
    s, d = np.asarray(suction, dtype=float), np.asarray(discharge, dtype=float)
    terms = (1.0, s, d, s * s, s * d, d * d, s**3, d * s * s, s * d * d, d**3)
    return np.asarray(sum(c * term for c, term in zip(coefficients, terms, strict=True)))


@dataclass(frozen=True)
class CompressorRating:
    """A compressor as its data sheet gives it, at one speed and for one refrigerant.

    Exactly one of capacity and mass flow, of power and current, and of superheat and return gas is given.

    Attributes:
        units: "SI" (degC, W, kg/h) or "IP" (degF, Btu/h, lb/h), for the coefficients.
        T_evap_range_K, T_cond_range_K: Lowest and highest suction and discharge dew temperature covered.
        capacity, mass_flow: Coefficients of the cooling [W or Btu/h] or of the mass flow [kg/h or lb/h].
        power, current: Coefficients of the power taken [W] or of the current [A].
        superheat_K, return_gas_K: Superheat, or temperature, at the compressor inlet in the rating.
        subcooling_K: Subcooling below the bubble point that the rated capacity assumes.
        useful_superheat_K: Superheat that the rated capacity counts as cooling; None counts all of it, up to the
            compressor inlet, as AHRI 540 and EN 12900 do (from memory).
        voltage_V, phases, power_factor: With a current: P = U I cos(phi), times the root of 3 for three phases.
    """

    units: str
    T_evap_range_K: tuple[float, float]
    T_cond_range_K: tuple[float, float]
    capacity: tuple[float, ...] | None = None
    mass_flow: tuple[float, ...] | None = None
    power: tuple[float, ...] | None = None
    current: tuple[float, ...] | None = None
    superheat_K: float | None = None
    return_gas_K: float | None = None
    subcooling_K: float = 0.0
    useful_superheat_K: float | None = None
    voltage_V: float | None = None
    phases: int | None = None
    power_factor: float | None = None

    def __post_init__(self) -> None:
        if self.units not in UNITS:
            raise QuantityError(f"units {self.units!r} of the coefficients are neither of {', '.join(UNITS)}")
        for one, other in (("capacity", "mass_flow"), ("power", "current"), ("superheat_K", "return_gas_K")):
            if (getattr(self, one) is None) == (getattr(self, other) is None):
                names = " and ".join(_named(name) for name in (one, other))
                raise QuantityError(f"of {names} exactly one describes a rating: give one, leave out the other")
        for name in ("capacity", "mass_flow", "power", "current"):
            _check_coefficients(_named(name), getattr(self, name))
        _check_range(self)
        if self.current is not None:
            _check_supply(self.voltage_V, self.phases, self.power_factor)

    def superheat_at(self, T_evap_dew_K: ArrayLike) -> FloatArray:
        """Return the superheat at the compressor inlet that the rating means. [K]

        Args:
            T_evap_dew_K: Suction dew temperature. [K]
        Raises: QuantityError if the return gas would be below its dew point.
        """
        T_dew = np.asarray(T_evap_dew_K, dtype=float)
        if self.return_gas_K is None:
            return np.full(T_dew.shape, self.superheat_K, dtype=float)
        superheat = np.asarray(self.return_gas_K - T_dew)
        if np.any(superheat < 0.0):
            raise QuantityError(
                f"return gas at {_celsius(self.return_gas_K)} is below the dew point at {_celsius(np.max(T_dew))} "
                "evaporating: it would be wet; narrow the range of the rating or give its superheat"
            )
        return superheat


def _named(attribute: str) -> str:
    return attribute.removesuffix("_K").replace("_", " ")


def _celsius(T_K: float | np.float64) -> str:
    return f"{float(T_K) - ZERO_C_K:.1f} degC"


def _check_coefficients(name: str, given: tuple[float, ...] | None) -> None:
    if given is None:
        return
    if len(given) != COEFFICIENTS:
        raise QuantityError(f"{name} has {len(given)} coefficients; the polynomial has {COEFFICIENTS}, C1 to C10")
    for number, value in enumerate(given, start=1):
        if not math.isfinite(value):
            raise QuantityError(f"{name}: coefficient C{number} is {value}, not a finite number")


def _check_range(rating: CompressorRating) -> None:
    ranges = (("evaporating", rating.T_evap_range_K), ("condensing", rating.T_cond_range_K))
    for name, (low, high) in ranges:
        if not low < high:
            raise QuantityError(f"{name} range {_celsius(low)} to {_celsius(high)} does not rise: lower end first")
    highest, lowest = rating.T_evap_range_K[1], rating.T_cond_range_K[0]
    if not lowest > highest:
        raise QuantityError(
            f"the condensing range begins at {_celsius(lowest)}, not above {_celsius(highest)} where the evaporating "
            "range ends: nothing is compressed there; narrow one of them"
        )


def _check_supply(voltage_V: float | None, phases: int | None, power_factor: float | None) -> None:
    if voltage_V is None or phases is None or power_factor is None:
        raise QuantityError("a current makes no power without voltage, phases and power factor; give all three")
    if phases not in (1, 3):
        raise QuantityError(f"{phases} phases: a supply has 1 or 3")
    if not (voltage_V > 0.0 and 0.0 < power_factor <= 1.0):
        raise QuantityError(
            f"voltage {voltage_V:g} V must be above 0, power factor {power_factor:g} above 0 and at most 1"
        )


# -- the states of a rating, and what the coefficients mean there -------------------------------------


@dataclass(frozen=True)
class _States:
    """The rated states over the range, shape (suction, discharge): all that the coefficients do not say."""

    ln_p_suction: FloatArray
    ln_p_discharge: FloatArray
    T_evap_K: FloatArray
    T_cond_K: FloatArray
    density: FloatArray
    effect: FloatArray
    isentropic_work: FloatArray


def _states(rating: CompressorRating, fluid: Fluid) -> _States:
    x, y = (_even_ln_p(fluid, ends) for ends in (rating.T_evap_range_K, rating.T_cond_range_K))
    p_suction, p_discharge = np.exp(x)[:, None], np.exp(y)[None, :]
    T_evap, T_cond = fluid.dew(p_suction).T_K, fluid.dew(p_discharge).T_K
    superheat = rating.superheat_at(T_evap)
    suction = fluid.vapour(p_suction, superheat)
    useful = superheat if rating.useful_superheat_K is None else rating.useful_superheat_K
    liquid = fluid.liquid(p_discharge, rating.subcooling_K)
    return _States(
        x,
        y,
        T_evap,
        T_cond,
        suction.density_kg_per_m3,
        fluid.vapour(p_suction, useful).h_J_per_kg - liquid.h_J_per_kg,
        fluid.h_at_entropy(p_discharge, suction.s_J_per_kgK) - suction.h_J_per_kg,
    )


def _even_ln_p(fluid: Fluid, ends: tuple[float, float]) -> FloatArray:
    low, high = np.log(fluid.p_dew(ends))
    return np.linspace(float(low), float(high), NODES)


@dataclass(frozen=True)
class _Reading:
    """What coefficients amount to over the range, shape (suction, discharge)."""

    mass_flow_kg_per_s: FloatArray
    power_W: FloatArray
    isentropic: FloatArray
    volumetric: FloatArray

    @property
    def is_possible(self) -> bool:
        """Return whether a compressor can have these everywhere."""
        pair = np.array([self.isentropic, self.volumetric])
        return bool(np.all((pair >= LOWEST_EFFICIENCY) & (pair <= 1.0) & (self.power_W > 0.0)))

    @property
    def is_usual(self) -> bool:
        """Return whether a compressor can have these everywhere, and usually has at the middle of its range."""
        return self.is_possible and not self.unusual()

    def unusual(self) -> list[str]:
        """Return what is not usual at the middle of the range, in words."""
        middle = {name: float(np.median(getattr(self, name))) for name in USUAL}
        return [
            f"{name} efficiency {middle[name]:.2f} at the middle of its range (usual: {low:g} to {high:g})"
            for name, (low, high) in USUAL.items()
            if not low <= middle[name] <= high
        ]


def _read(rating: CompressorRating, states: _States, swept_volume: float) -> _Reading:
    temperature, capacity_unit, flow_unit = UNITS[rating.units]
    scale = KINDS["temperature"].units[temperature]
    s, d = scale.from_SI(states.T_evap_K), scale.from_SI(states.T_cond_K)
    if rating.capacity is not None:
        capacity = ten_coefficients(rating.capacity, s, d)
        flow = KINDS["power"].units[capacity_unit].to_SI(capacity) / states.effect
    else:
        flow = KINDS["mass flow"].units[flow_unit].to_SI(ten_coefficients(rating.mass_flow or (), s, d))
    power = _power(rating, s, d)
    with np.errstate(divide="ignore", invalid="ignore"):  # a power of zero is named below
        isentropic = flow * states.isentropic_work / power
    return _Reading(flow, power, isentropic, flow / (states.density * swept_volume))


def _power(rating: CompressorRating, s: FloatArray, d: FloatArray) -> FloatArray:
    if rating.power is not None:
        return ten_coefficients(rating.power, s, d)
    supply = (rating.voltage_V or 0.0) * (rating.power_factor or 0.0) * math.sqrt(rating.phases or 0)
    return ten_coefficients(rating.current or (), s, d) * supply


# -- the map, and what is wrong with a rating ---------------------------------------------------------


def efficiencies_of(rating: CompressorRating, fluid: Fluid, swept_volume_m3_per_s: float) -> EfficiencyMap:
    """Return the efficiencies that a rating contains.

    Args:
        rating: The rating.
        fluid: The refrigerant it was measured with.
        swept_volume_m3_per_s: Swept volume of that compressor at the speed of the rating. [m³/s]
    Returns: The map over the range of the rating; its `notes` say what is possible but unusual.
    Raises: QuantityError for coefficients that no compressor can have, or that mean more in another unit;
        OutsideValidRangeError if the range leaves that of the fluid.
    Source: mass flow m = capacity / (h at compressor inlet - h of the liquid), or up to the useful superheat;
        volumetric efficiency = m / (suction density x swept volume); isentropic = m (h2s - h1) / power.
    """
    if not 0.0 < swept_volume_m3_per_s < math.inf:
        raise QuantityError(f"a swept volume of {swept_volume_m3_per_s:g} m3/s is not above 0")
    states = _states(rating, replace(fluid, lenient=False))  # NaN would hide where the range is left
    reading = _read(rating, states, swept_volume_m3_per_s)
    if not reading.is_usual:
        meant = _what_was_meant(rating, states, swept_volume_m3_per_s)
        if meant or not reading.is_possible:
            raise QuantityError(f"{_fault(reading, states)}; {meant or _advice(reading)}")
    efficiencies = np.array([reading.isentropic, reading.volumetric])
    made = EfficiencyMap.over(states.ln_p_suction, states.ln_p_discharge, efficiencies)
    return replace(made, notes=tuple(f"the polynomials give {text}" for text in reading.unusual()))


def _fault(reading: _Reading, states: _States) -> str:
    """Name the worst of what is impossible, and where; else what is unusual."""
    judged = (
        ("a mass flow", reading.mass_flow_kg_per_s, 0.0, math.inf, "kg/s", "above 0"),
        ("a power", reading.power_W, 0.0, math.inf, "W", "above 0"),
        ("a volumetric efficiency", reading.volumetric, LOWEST_EFFICIENCY, 1.0, "", "0.1 to 1"),
        ("an isentropic efficiency", reading.isentropic, LOWEST_EFFICIENCY, 1.0, "", "0.1 to 1"),
    )
    for name, values, low, high, unit, allowed in judged:
        beyond = np.maximum(low - values, values - high)
        worst = np.unravel_index(np.argmax(beyond), beyond.shape)
        if beyond[worst] > 0.0 or (unit and values[worst] <= low):
            where = f"{_celsius(states.T_evap_K[worst[0], 0])} evaporating and {_celsius(states.T_cond_K[0, worst[1]])}"
            amount = f"{values[worst]:.3g} {unit}".rstrip()
            return f"the polynomials give {name} of {amount} at {where} condensing (dew); possible is {allowed}"
    return f"the polynomials give {' and '.join(reading.unusual())}"


def _what_was_meant(rating: CompressorRating, states: _States, swept_volume: float) -> str:
    """Return in words the first other way of reading the coefficients that makes an ordinary compressor of them."""
    for other in (name for name in UNITS if name != rating.units):
        if _read(replace(rating, units=other), states, swept_volume).is_usual:
            return f'in {other} units ({", ".join(UNITS[other])}) they would be usual: are they "{other}"?'
    given = [name for name in ("capacity", "power") if getattr(rating, name) is not None]
    for names in (given, *([name] for name in given)):
        thousands: dict[str, Any] = {name: tuple(1e3 * c for c in getattr(rating, name)) for name in names}
        if _read(replace(rating, **thousands), states, swept_volume).is_usual:
            return f"with {' and '.join(names)} in kW they would be usual: multiply those coefficients by 1000"
    return ""


def _advice(reading: _Reading) -> str:
    isentropic = reading.isentropic
    if np.all((isentropic >= LOWEST_EFFICIENCY) & (isentropic <= 1.0)):
        return "the isentropic efficiency is possible, so check the swept volume and the speed of the rating"
    return "check the order of the coefficients, their units, the superheat of the rating and its range"
