"""Lines, expansion valve and receiver."""

from __future__ import annotations

from typing import Annotated

from retrofit.case.table import Table, WhyDefault, key
from retrofit.case.values import ABSENT, Absent, Choice, OrNone, Quantity

_DROP = Quantity("pressure difference", "0 bar", "20 bar", "more would leave the valve nothing", example="0.3 bar")


class LiquidLine(Table):
    """A line and its size."""

    diameter_m: Annotated[
        float, Quantity("length", "1 mm", "2 m", "lines of plants lie within it", example="80 mm", shown="diameter")
    ] = key("diameter", "Inside diameter.", where="outside diameter and wall of the pipe, or the drawings")
    length_m: Annotated[
        float | None,
        Quantity("length", "0 m", "5000 m", "lines of plants lie within it", above_low=True, example="40 m"),
    ] = key("length", "Length of the pipe.", None, where="along the pipe, or the drawings")
    riser_m: Annotated[
        float | None, Quantity("length", "0 m", "300 m", "lines of plants lie within it", example="5 m")
    ] = key(
        "riser", "Height of the part in which the refrigerant rises.", None, where="along the pipe; 0 m if it is level"
    )
    fittings_m: Annotated[
        float,
        Quantity("length", "0 m", "5000 m", "lines of plants lie within it", example="10 m"),
        WhyDefault("no bend or valve of the line is counted", beside="length"),
    ] = key("fittings", "Length of straight pipe that its bends and valves amount to.", "0 m")
    roughness_m: Annotated[
        float,
        Quantity("length", "0 um", "5 mm", "pipes lie within it", example="1.5 um"),
        WhyDefault("drawn tubing, 0.0015 mm (Moody 1944)", beside="length"),
    ] = key("roughness", "Roughness of the inside.", "1.5 um")


class GasLine(LiquidLine):
    """A line of gas, which has to carry oil at the lowest load too."""

    lowest_load: Annotated[
        float | None,
        Quantity("fraction", "0 %", "100 %", "a share of the full duty", above_low=True, example="30 %"),
    ] = key(
        "lowest_load",
        "Lowest load at which the line has to carry oil, as a share of the full duty.",
        None,
        where="smallest capacity step of the compressors, or the log of the controls",
    )


class Lines(Table):
    """The refrigerant lines."""

    suction: GasLine | None = key("suction", "Line from evaporator to compressor.", None)
    discharge: GasLine | None = key("discharge", "Line from compressor to condenser.", None)
    liquid: LiquidLine | None = key("liquid", "Line from condenser or receiver to expansion valve.", None)


FIXED = ("capillary", "fixed orifice")
"""Expansion devices that cannot be adjusted: the charge sets the superheat."""


class Valve(Table):
    """The expansion valves."""

    kind: Annotated[
        str | None,
        Choice(
            ("thermostatic", "electronic", *FIXED),
            (("TXV", "thermostatic"), ("EEV", "electronic"), ("PISTON", "fixed orifice"), ("ORIFICE", "fixed orifice")),
        ),
    ] = key(
        "kind",
        "Kind of expansion device.",
        None,
        where="at the evaporators: bulb and power element, motor and cable, or a fixed orifice or tube",
    )
    liquid_line_loss_Pa: Annotated[float | None, _DROP] = key(
        "liquid_line_loss", "Pressure lost between condenser and valve.", None
    )
    distributor_loss_Pa: Annotated[float | None, _DROP] = key(
        "distributor_loss", "Pressure lost in the distributor after the valve.", None
    )


class Receiver(Table):
    """The liquid receiver of the high side."""

    volume_m3: Annotated[
        float | Absent, OrNone(Quantity("volume", "0 l", "1000 m3", "receivers lie within it", above_low=True))
    ] = key("volume", "Inside volume of the receiver.", where="nameplate of the receiver")

    @property
    def is_there(self) -> bool:
        """Whether the plant has a receiver: a table whose volume is "none" says that it has not."""
        return self.volume_m3 is not ABSENT
