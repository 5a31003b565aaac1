"""The numbers of the hardware: plain, frozen, None where not known, with what is missing named."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from retrofit.study.gaps import Gap

if TYPE_CHECKING:
    from retrofit.study.result import Performance


@dataclass(frozen=True)
class OldNew:
    """A number today and with a candidate; None if not known."""

    old: float | None = None
    new: float | None = None


@dataclass(frozen=True)
class GasFlow:
    """The flow in a suction or discharge line.

    Attributes:
        velocity_m_per_s, momentum_flux_Pa: Velocity, and density times velocity squared.
        pressure_drop_Pa, saturation_drop_K: Friction, and what it costs in saturation temperature.
        lowest_velocity_m_per_s, lowest_momentum_flux_Pa: The same at the lowest load.
        flow_reversal: Dimensionless vapour velocity j* at the lowest load: near 1 an oil film turns round.
    """

    velocity_m_per_s: float
    momentum_flux_Pa: float
    pressure_drop_Pa: float | None
    saturation_drop_K: float | None
    lowest_velocity_m_per_s: float | None
    lowest_momentum_flux_Pa: float | None
    flow_reversal: float | None


@dataclass(frozen=True)
class LiquidFlow:
    """The flow in the liquid line.

    Attributes:
        velocity_m_per_s: Velocity.
        pressure_drop_Pa, saturation_drop_K: Friction, and what it costs in saturation temperature.
        static_head_Pa: Pressure that the height takes away.
        subcooling_needed_K: Subcooling that height and friction use up.
    """

    velocity_m_per_s: float
    pressure_drop_Pa: float | None
    saturation_drop_K: float | None
    static_head_Pa: float | None
    subcooling_needed_K: float | None


@dataclass(frozen=True)
class Side:
    """What the components see with one refrigerant.

    Attributes:
        refrigerant: Its designation.
        design: The plant at the temperatures of the case.
        hottest: The plant on the hottest day.
        pull_down: The plant at the highest suction pressure.
        p_standstill_Pa: Bubble pressure at the highest ambient temperature.
        T_critical_K: Critical temperature.
        liquid_density_kg_per_m3: Before the expansion valve.
        inlet_density_kg_per_m3: Liquid and vapour together after the expansion valve.
        suction, discharge, liquid: The lines.
        missing: What a number is wanting for, by its name; false where it is known.
    """

    refrigerant: str
    design: Performance[float]
    hottest: Performance[float] | None
    pull_down: Performance[float] | None
    p_standstill_Pa: float | None
    T_critical_K: float
    liquid_density_kg_per_m3: float | None
    inlet_density_kg_per_m3: float | None
    suction: GasFlow | None
    discharge: GasFlow | None
    liquid: LiquidFlow | None
    missing: Mapping[str, Gap] = field(default_factory=dict)

    @property
    def conditions(self) -> Mapping[str, Performance[float]]:
        """Return the conditions that are known, by their names for a reader."""
        named = {"at the design point": self.design, "on the hottest day": self.hottest, "at pull-down": self.pull_down}
        return {name: found for name, found in named.items() if found is not None}


@dataclass(frozen=True)
class Throttling:
    """The expansion valve or capillary tube of today with a candidate.

    Attributes:
        pressure_difference_Pa: What is left over the valve.
        flow_ratio, capacity_ratio: Mass flow and cooling through the same opening, new over old.
        load_ratio: Cooling to do, new over old.
        fit: Capacity ratio over load ratio: below 1 the valve is too small, above too large.
        losses: Which losses before and behind the valve are counted, in words.
    """

    pressure_difference_Pa: OldNew
    flow_ratio: float
    capacity_ratio: float
    load_ratio: float
    fit: float
    losses: str


@dataclass(frozen=True)
class Distributing:
    """The distributor: mass flow, volume flow and pressure drop, new over old."""

    mass_flow_ratio: float
    volume_flow_ratio: float
    pressure_drop_ratio: float


@dataclass(frozen=True)
class Filling:
    """A first estimate of the charge, and how full the receiver is with all of it.

    Attributes:
        old_kg: Charge of today.
        lowest_kg, expected_kg, highest_kg: The estimate.
        receiver_share: Volume of the liquid over volume of the receiver.
        T_receiver_K: Temperature at which that is counted.
    """

    old_kg: float
    lowest_kg: float
    expected_kg: float
    highest_kg: float
    receiver_share: OldNew
    T_receiver_K: float


@dataclass(frozen=True)
class Setting:
    """One set point, carried over at the same saturation temperature.

    Attributes:
        key: Its key in [controls].
        name: What it is, for a reader.
        held: What is held equal: "dew", "mean evaporating" or "mean condensing" temperature.
        T_K: That temperature; None if not known.
        p_Pa: The pressures, absolute.
        reason: Why the new pressure is not known; empty if it is.
    """

    key: str
    name: str
    held: str
    T_K: float | None
    p_Pa: OldNew
    reason: str = ""


@dataclass(frozen=True)
class HardwareNumbers:
    """What the components of the plant see, today and with one refrigerant.

    Attributes:
        basis: "plant" (the plant as installed, balanced) or "compressor" (temperatures held).
        old, new: Today's refrigerant, and the one looked at.
        current_A, pull_down_current_A: Motor current at the design point and at pull-down.
        valve, distributor, filling: None where `missing` says why.
        subcooling_left_K: Subcooling at the expansion valve, if the condenser gives as much as today.
        residual_oil: Share of old oil after the changes planned.
        settings: The set points that the case gives.
        missing: What a number is wanting for, by its name; false where it is known.
    """

    basis: str
    old: Side
    new: Side
    current_A: OldNew
    pull_down_current_A: OldNew
    valve: Throttling | None
    distributor: Distributing | None
    filling: Filling | None
    subcooling_left_K: OldNew
    residual_oil: float | None
    settings: tuple[Setting, ...]
    missing: Mapping[str, Gap] = field(default_factory=dict)
