"""The existing compressors taken together: efficiencies as numbers, points or a polynomial, motor, control."""

from __future__ import annotations

from typing import Annotated

from pydantic import Field

from retrofit.case.dates import YesNo
from retrofit.case.numbers import EfficiencyPoint, Number, OneOf, PointValue
from retrofit.case.table import Items, Table, WhyDefault, key
from retrofit.case.values import Choice, Quantity

MOST_POINTS = 50
UNKNOWN_KIND = "unknown"
KINDS = ("piston", "scroll", "screw", "rotary", "centrifugal", UNKNOWN_KIND)
TERMINALS, SHAFT = "terminals", "shaft"
_OTHER_WAYS = ("efficiency_points", "polynomial")
_ORDINARY = WhyDefault("an ordinary value, the same for every refrigerant", unless=_OTHER_WAYS)
_NO_KIND = WhyDefault(
    "without it the efficiencies of the case are constants, the same for every refrigerant, and the bands are wide; "
    "efficiency points or a polynomial carry over by the compressor's own curve all the same"
)
_AT_TERMINALS = WhyDefault("makers state the power of hermetic compressors with their motor", beside="polynomial")
_EFFICIENCY = Quantity(
    "fraction", "10 %", "100 %", "below it no plant can run, and no machine does better than the ideal one",
    example="0.70",
)  # fmt: skip
_POINT = PointValue()
CURRENT = Quantity("current", "0 A", "10 kA", "motors of compressors lie within it", above_low=True)
VOLTAGE = Quantity("voltage", "1 V", "20 kV", "motors of compressors lie within it")
PHASES = OneOf((1, 3))
POWER_FACTOR = Quantity("fraction", "10 %", "100 %", "motors under load lie within it", example="0.85")

_COEFFICIENT = Number(-1e12, 1e12, "coefficients of compressors lie within it")
_TEN = Annotated[
    Annotated[tuple[Annotated[float, _COEFFICIENT], ...], Field(min_length=10, max_length=10)] | None,
    Items(_COEFFICIENT, "a list of ten numbers, the coefficients in the order of the standard"),
]
_RATED_AT = Quantity("temperature", "-120 degC", "150 degC", "compressors are rated within it")
_RANGE = Annotated[
    tuple[Annotated[float, _RATED_AT], ...],
    Field(min_length=2, max_length=2),
    Items(_RATED_AT, 'a list of the lowest and the highest temperature, as in ["-40 degC", "-5 degC"]'),
]


class Polynomial(Table):
    """The maker's ten-coefficient polynomials of the compressors together, for the existing refrigerant.

    X = C1 + C2 S + C3 D + C4 S² + C5 S D + C6 D² + C7 S³ + C8 D S² + C9 S D² + C10 D³, with S the evaporating
    and D the condensing dew temperature (AHRI 540, EN 12900). Coefficients are held as printed:
    `units` says for degC, W, kg/h and A ("SI") or for degF, Btu/h, lb/h, W and A ("IP").
    """

    units: Annotated[str, Choice(("SI", "IP"))] = key(
        "units", "Units of the coefficients: SI (degC, W, kg/h, A) or IP (degF, Btu/h, lb/h, W, A)."
    )
    capacity: _TEN = key("capacity", "Ten coefficients of the cooling capacity, in W or Btu/h.", None)
    mass_flow: _TEN = key("mass_flow", "Ten coefficients of the mass flow, in kg/h or lb/h.", None)
    power: _TEN = key("power", "Ten coefficients of the power, in W; `power_at` in [compressor] says where.", None)
    current: _TEN = key("current", "Ten coefficients of the current, in A.", None)
    voltage_V: Annotated[float | None, VOLTAGE] = key("voltage", "Voltage at which the current is stated.", None)
    phases: Annotated[int | None, PHASES] = key("phases", "Phases of the supply, 1 or 3.", None)
    power_factor: Annotated[float | None, POWER_FACTOR] = key("power_factor", "Power factor of the motor.", None)
    superheat_K: Annotated[
        float | None, Quantity("temperature difference", "0 K", "80 K", "ratings lie within it", example="11.1 K")
    ] = key("superheat", "Superheat at the compressor inlet that the polynomials are rated at.", None)
    return_gas_K: Annotated[
        float | None, Quantity("temperature", "-60 degC", "50 degC", "ratings lie within it", example="18.3 degC")
    ] = key("return_gas", "Temperature at the compressor inlet that the polynomials are rated at.", None)
    subcooling_K: Annotated[
        float | None, Quantity("temperature difference", "0 K", "50 K", "ratings lie within it", example="0 K")
    ] = key("subcooling", "Subcooling that the capacity is rated at.", None)
    T_evap_range_K: _RANGE = key("evaporating", "Lowest and highest evaporating dew temperature covered.")
    T_cond_range_K: _RANGE = key("condensing", "Lowest and highest condensing dew temperature covered.")


class Compressor(Table):
    """The existing compressors taken together.

    `kind` says how both efficiencies change with the refrigerant; without it they are constants, alike for all, unless
    points or a polynomial give the compressor's own curve. With `efficiency_points` or a `polynomial` the two constant
    efficiencies mean nothing: the file then gives neither, no default counts as taken, and whoever computes uses the
    points or the polynomial.
    """

    kind: Annotated[str, Choice(KINDS), _NO_KIND] = key(
        "kind",
        "Kind of compressor: with it efficiencies follow the refrigerant; unknown widens the band.",
        UNKNOWN_KIND,
        where="nameplate of the compressor",
    )
    isentropic_efficiency: Annotated[float, _EFFICIENCY, _ORDINARY] = key(
        "isentropic_efficiency", "Isentropic work over real work.", "0.70"
    )
    volumetric_efficiency: Annotated[float, _EFFICIENCY, _ORDINARY] = key(
        "volumetric_efficiency", "Volume drawn in over swept volume.", "0.90"
    )
    efficiency_points: Annotated[
        Annotated[tuple[Annotated[EfficiencyPoint, _POINT], ...], Field(min_length=2, max_length=MOST_POINTS)] | None,
        Items(_POINT, f"a list of 2 to {MOST_POINTS} points, as in [[2, 0.62, 0.92], [4, 0.70, 0.86]]"),
    ] = key("efficiency_points", "Points of pressure ratio, isentropic and volumetric efficiency.", None)
    polynomial: Polynomial | None = key(
        "polynomial", "The maker's ten-coefficient polynomials, for the existing refrigerant.", None
    )
    swept_volume_m3_per_s: Annotated[
        float | None,
        Quantity("volume flow", "0 m3/h", "1000000 m3/h", "no single plant has more", above_low=True),
    ] = key("swept_volume", "Swept volume of all compressors at the speed they run.", None)
    motor_efficiency: Annotated[
        float | None,
        Quantity("fraction", "10 %", "100 %", "a motor in use lies within it", example="0.92"),
    ] = key("motor_efficiency", "Shaft power over electrical power of the motor.", None)
    drive_efficiency: Annotated[
        float | None,
        Quantity("fraction", "10 %", "100 %", "a drive in use lies within it", example="0.96"),
    ] = key("drive_efficiency", "Electrical power out of the frequency converter over power into it.", None)
    power_at: Annotated[str, Choice((TERMINALS, SHAFT)), _AT_TERMINALS] = key(
        "power_at",
        "Where the power of the polynomial is taken: at the motor's terminals (hermetic machines) or at the shaft.",
        TERMINALS,
        where="data sheet of the compressor",
    )
    heat_loss: Annotated[
        float | None, Quantity("fraction", "0 %", "90 %", "the gas keeps some of the heat", example="5 %")
    ] = key("heat_loss", "Share of the compressor power that leaves through the shell.", None)
    speed: Annotated[str | None, Choice(("fixed", "steps", "variable"))] = key(
        "speed", "How capacity is controlled.", None
    )
    steps: Annotated[int | None, Number(2, 100, "one step is a fixed speed", whole=True, example="4")] = key(
        "steps", "Number of capacity steps.", None
    )
    own_condensers: Annotated[bool | None, YesNo()] = key(
        "own_condensers", "Whether each step has its own part of the condenser, whose fans stop with it.", None
    )
    lowest_speed: Annotated[
        float | None,
        Quantity("fraction", "0 %", "100 %", "a share of full speed", above_low=True, example="30 %"),
    ] = key("lowest_speed", "Lowest speed, as a share of full speed.", None)
    rated_current_A: Annotated[float | None, CURRENT] = key(
        "rated_current",
        "Rated current of all motors on their nameplates.",
        None,
        where="nameplates of the motors, added up",
    )
    rated_power_W: Annotated[
        float | None, Quantity("power", "0 W", "100 MW", "no single plant has more", above_low=True)
    ] = key("rated_power", "Rated electrical power of all motors on their nameplates.", None)
    highest_suction_K: Annotated[
        float | None, Quantity("temperature", "-120 degC", "60 degC", "pull-down lies within it", example="0 degC")
    ] = key(
        "highest_suction",
        "Highest evaporating dew temperature, at pull-down.",
        None,
        where="log of the controls at pull-down, or the setting of the crankcase regulator",
    )

    @property
    def motor_is_inside(self) -> bool:
        """Return whether the isentropic efficiency holds the losses of the motor: a polynomial's does at the terminals.

        A current is one at the terminals.
        """
        return self.polynomial is not None and (self.power_at != SHAFT or self.polynomial.current is not None)

    @property
    def motor_and_drive(self) -> float | None:
        """Return power by the isentropic efficiency over electrical power, each loss counted once; None if not known.

        Source: product of the efficiencies of motor and drive that the isentropic efficiency does not hold.
        """
        motor = None if self.motor_is_inside else self.motor_efficiency
        if motor is None and self.drive_efficiency is None:
            return None
        return (1.0 if motor is None else motor) * (1.0 if self.drive_efficiency is None else self.drive_efficiency)
