"""The frozen result of a study. Report, page, terminal, JSON and spreadsheet show this and nothing else."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Generic, TypeVar

import numpy as np
from numpy.typing import NDArray

from retrofit.case import Case
from retrofit.properties import Grade
from retrofit.refrigerants import Caution, Refrigerant
from retrofit.study.hardware.numbers import HardwareNumbers
from retrofit.study.law import LawBasis, LawCheck
from retrofit.study.room import RoomCheck
from retrofit.study.states import Evidence, Family, Level, RestState, Verdict

if TYPE_CHECKING:
    from retrofit.study.agreement import Beside, Calibration
    from retrofit.study.life import Life

FloatArray = NDArray[np.float64]
Number = TypeVar("Number", float, FloatArray)


@dataclass(frozen=True)
class Performance(Generic[Number]):
    """What a plant does with one refrigerant on one basis; numbers, or arrays over conditions.

    Attributes:
        cooling_W: Cooling.
        p_evap_Pa, p_cond_Pa, pressure_ratio: Pressures, absolute, and their ratio.
        T_evap_dew_K, T_evap_inlet_K, T_evap_mean_K: Dew point, after the expansion valve, and their mean.
        T_cond_dew_K, T_cond_bubble_K, T_cond_mean_K: Dew and bubble point in the condenser, and their mean.
        glide_evap_K, glide_cond_K: Dew point minus inlet; dew minus bubble point.
        T_suction_K, T_discharge_K, T_discharge_isentropic_K: Around the compressor.
        cop: Cooling over compressor power.
        volumetric_capacity_J_per_m3: Cooling of each cubic metre drawn in.
        refrigerating_effect_J_per_kg: Cooling of each kilogram.
        mass_flow_kg_per_s, suction_volume_flow_m3_per_s: Flow, and its volume at the compressor inlet.
        swept_volume_m3_per_s: Displacement, suction volume flow over volumetric efficiency.
        power_W: Compressor power.
        heat_rejected_W: Heat given off from discharge to expansion valve.
        line_heat_W: Heat picked up in the suction line.
    """

    cooling_W: Number
    p_evap_Pa: Number
    p_cond_Pa: Number
    pressure_ratio: Number
    T_evap_dew_K: Number
    T_evap_inlet_K: Number
    T_evap_mean_K: Number
    T_cond_dew_K: Number
    T_cond_bubble_K: Number
    T_cond_mean_K: Number
    glide_evap_K: Number
    glide_cond_K: Number
    T_suction_K: Number
    T_discharge_K: Number
    T_discharge_isentropic_K: Number
    cop: Number
    volumetric_capacity_J_per_m3: Number
    refrigerating_effect_J_per_kg: Number
    mass_flow_kg_per_s: Number
    suction_volume_flow_m3_per_s: Number
    swept_volume_m3_per_s: Number
    power_W: Number
    heat_rejected_W: Number
    line_heat_W: Number


@dataclass(frozen=True)
class Operation(Generic[Number]):
    """How the plant as installed meets the load it has to deliver; numbers, or arrays over conditions.

    Attributes:
        control: "fixed", "steps" or "variable".
        cooling_needed_W: Cooling to deliver; in a year of heating, heat.
        unmet_W: What it lacks of that though it runs all the time.
        run_time_fraction, speed_fraction: Share of the time it runs, and speed, or mean of the steps, while it runs.
        mean_power_W: Compressor power, mean over the time.
        reason: Why part of the load has no solution; empty where it has one.
    """

    control: str
    cooling_needed_W: Number
    unmet_W: Number
    run_time_fraction: Number
    speed_fraction: Number
    mean_power_W: Number
    reason: str | NDArray[np.str_] = ""


@dataclass(frozen=True)
class UAFactor:
    """Conductance of an exchanger with a refrigerant over that with today's.

    Attributes:
        factor: The factor.
        low, high: Limits of its 90 % band; the factor itself where the case gives it.
        origin: "today" (1), "new plant" (1, sized like today's), "given" by the case, "calculated", or "unknown" (1,
            no formula or no properties).
        kind: Kind of exchanger it is calculated for; empty if the case does not say.
        share: Share of the refrigerant's side in the resistance with today's; None where nothing is calculated.
        flow: Mass flow over today's on the same machine.
        glide_K: Glide in the exchanger.
        film: Ratio of the coefficients of the refrigerant's side.
    """

    factor: float
    low: float
    high: float
    origin: str
    kind: str = ""
    share: float | None = None
    flow: float | None = None
    glide_K: float | None = None
    film: float | None = None

    @classmethod
    def alone(cls, factor: float, origin: str) -> UAFactor:
        """Return a factor that is taken as it is.

        Args:
            factor: The factor. [-]
            origin: Where it is from. [-]
        """
        return cls(factor, factor, factor, origin)


@dataclass(frozen=True)
class Installed:
    """What the existing compressor and exchangers do with a refrigerant at the same air, water or brine.

    Attributes:
        full: Running at full, pressures where they settle.
        same_cooling: Delivering today's cooling at full with whatever displacement that takes: what a COP may
            be compared at, since a plant that cools less loads its exchangers less.
        operation: How the plant meets the cooling it has to deliver.
        is_covered: Whether the compressor's data reach to this point.
        ua_factors: Factors on the conductance of evaporator and condenser.
        cooling_with_equal_ua_W: Cooling at full with both factors 1: what the factors do.
        conductances_W_per_K: Conductance of evaporator and condenser.
        residual: Largest relative error of the balance.
        hottest: At full on the hottest day; None if its temperature is not known or the plant does not balance there.
        hottest_reason: Why it does not balance there.
        electric_W, mean_electric_W: Electrical power at full, and mean over the time, with the losses of motor and
            drive as far as the case gives them or its readings calibrate them.
    """

    full: Performance[float]
    same_cooling: Performance[float]
    operation: Operation[float]
    is_covered: bool
    ua_factors: tuple[UAFactor, UAFactor]
    cooling_with_equal_ua_W: float
    conductances_W_per_K: tuple[float, float]
    residual: float
    hottest: Performance[float] | None = None
    hottest_reason: str = ""
    electric_W: float = float("nan")
    mean_electric_W: float = float("nan")


@dataclass(frozen=True)
class Finding:
    """Something a check found.

    Attributes:
        code: Short name, the same everywhere.
        level: "stop", "work", "note" or "unknown".
        title: What it is about, the same for every refrigerant it is found in.
        fact: The number of this refrigerant against the threshold.
        advice: What follows and what to do, the same for every refrigerant; may be empty.
        source: Where the threshold comes from.
        missing: Full keys of the case that would settle an unknown; any one of them may do.
        decisive: Whether no verdict can be in favour while this is unknown.
    """

    code: str
    level: str
    title: str
    fact: str
    advice: str
    source: str
    missing: tuple[str, ...] = ()
    decisive: bool = False

    @property
    def text(self) -> str:
        """Return fact and advice as one text."""
        return f"{self.fact} {self.advice}".strip()


@dataclass(frozen=True)
class Measure:
    """One number of a component, today and with a candidate.

    Attributes:
        name: What it is.
        kind: Its kind of quantity, as the unit systems name it.
        old, new: Today and with the candidate, in SI; None if not known.
    """

    name: str
    kind: str
    old: float | None
    new: float | None


@dataclass(frozen=True)
class Component:
    """One row of the hardware table: a component of the plant and what a candidate means for it.

    Attributes:
        code: Short name, the same everywhere.
        name: The component, for a reader.
        verdict: "keep", "adjust", "replace" or "unknown".
        measures: The numbers it rests on.
        reason: Why, in one sentence with the deciding number; for "unknown" what is missing.
        threshold: The threshold in words, with its value.
        source: Where the threshold comes from.
        ask: What to ask the maker or to look up; may be empty.
        missing: Full keys of the case that would settle what is not known; none where nothing is missing.
    """

    code: str
    name: str
    verdict: str
    measures: tuple[Measure, ...]
    reason: str
    threshold: str
    source: str
    ask: str
    missing: tuple[str, ...] = ()


@dataclass(frozen=True)
class Derived:
    """One quantity derived from readings on the running plant.

    Attributes:
        code: Short name, the same everywhere.
        name: What it is, for a reader.
        kind: Its kind of quantity, as the unit systems name it.
        value: In SI.
        made_from: From which readings and values of the case it was made, in words.
    """

    code: str
    name: str
    kind: str
    value: float
    made_from: str


@dataclass(frozen=True)
class Baseline:
    """How the plant runs today, from readings.

    Attributes:
        derived: Quantities derived from the readings.
        problems: What is wrong or does not fit together in the readings; never silently used.
        missing: What could not be derived, and which reading it would need.
        in_doubt: Key in [readings] or [compressor] of what is in doubt, and the title of the problem that says so.
    """

    derived: tuple[Derived, ...]
    problems: tuple[Finding, ...]
    missing: tuple[str, ...]
    in_doubt: Mapping[str, str] = field(default_factory=dict)


@dataclass(frozen=True)
class Point:
    """One named state of a cycle; `quality` is the vapour mass fraction, None outside the two-phase region."""

    name: str
    p_Pa: float
    T_K: float
    h_J_per_kg: float
    s_J_per_kgK: float
    density_kg_per_m3: float
    quality: float | None
    molar_quality: float | None


@dataclass(frozen=True)
class EnthalpyZero:
    """What to take away from enthalpy and entropy so that they stand on a reference in use.

    Attributes:
        name: The reference, for a caption.
        h_J_per_kg, s_J_per_kgK: Amounts to subtract.
    """

    name: str
    h_J_per_kg: float
    s_J_per_kgK: float


@dataclass(frozen=True)
class ChartLines:
    """Lines for a pressure-enthalpy chart of one refrigerant.

    Attributes:
        T_K: Temperatures along both saturation lines, shape (n,).
        p_bubble_Pa, h_bubble_J_per_kg, p_dew_Pa, h_dew_J_per_kg: The saturation lines, shape (n,).
        T_critical_K, p_critical_Pa: Critical point; for a blend where its saturation lines meet.
        zeros: Enthalpy references by unit system, "si" and "ip".
    """

    T_K: FloatArray
    p_bubble_Pa: FloatArray
    h_bubble_J_per_kg: FloatArray
    p_dew_Pa: FloatArray
    h_dew_J_per_kg: FloatArray
    T_critical_K: float
    p_critical_Pa: float
    zeros: Mapping[str, EnthalpyZero]


@dataclass(frozen=True)
class AtRest:
    """A refrigerant in the plant at rest, and where it would condense, known also where no cycle can be solved.

    Attributes:
        state: What is known of the pressure at rest.
        p_Pa: Bubble pressure at the highest ambient temperature; None unless it is computed.
        T_highest_K: The highest ambient temperature; None if the case does not give it.
        T_critical_K: Critical temperature; None without a model.
        T_condensing_K: Condensing temperature of the case.
        p_condensing_Pa: Bubble pressure there; None where it is not computed.
    """

    state: RestState
    p_Pa: float | None
    T_highest_K: float | None
    T_critical_K: float | None
    T_condensing_K: float
    p_condensing_Pa: float | None

    @property
    def can_condense(self) -> bool | None:
        """Return whether it condenses at the condensing temperature of the case; None if that is not known."""
        return None if self.T_critical_K is None else self.T_critical_K > self.T_condensing_K


@dataclass(frozen=True)
class Entry:
    """One refrigerant of a study: the existing one or a candidate.

    Attributes:
        refrigerant: Its catalogue entry.
        family: "keep", "convert" or "replace".
        is_new_plant: Whether the case describes a new plant for it: then nothing of the existing machine counts.
        status: "ok" or "not computed"; `reason` then says why.
        grade: How far its model can be trusted, None without a model.
        duty: Same duty: displacement, mass flow and power follow.
        compressor: Same compressor: capacity and power follow.
        plant: Same plant, None with `plant_reason` if the case does not describe it or it does not balance.
        like_today: A new plant with exchangers like today's, from which its year is sized; None for other options.
        at_rest: The plant at rest with it.
        points: State points of the cycle, beginning at the compressor inlet.
        lines: Lines for its pressure-enthalpy chart.
        relative: Ratios to the existing refrigerant.
        T_discharge_difference_K: Discharge temperature against the existing refrigerant.
        T_limit_K: Up to where the components' equations of state are stated to hold.
        is_covered: Whether the data of the compressor reach to every point it is solved at.
        evidence: How well the model of the compressor is tested for the change to it.
        hardware_numbers: What the components of the plant see with it, beside today's; None if not computed.
        cautions: From its safety class; always there.
        law: What the tables of law say; None until looked into, or without a jurisdiction or a table for it.
        room: Its charge against the room; None until the checks have run.
        findings, hardware, verdict: What the checks say; empty until they have run.
    """

    refrigerant: Refrigerant
    family: Family
    status: str
    reason: str | None
    cautions: tuple[Caution, ...]
    grade: Grade | None = None
    duty: Performance[float] | None = None
    compressor: Performance[float] | None = None
    plant: Installed | None = None
    plant_reason: str | None = None
    like_today: Installed | None = None
    at_rest: AtRest | None = None
    points: tuple[Point, ...] = ()
    lines: ChartLines | None = None
    relative: Mapping[str, float] = field(default_factory=dict)
    T_discharge_difference_K: float | None = None
    T_limit_K: float | None = None
    is_covered: bool | None = None
    evidence: Evidence = Evidence.CONSTANT
    hardware_numbers: HardwareNumbers | None = None
    law: LawCheck | None = None
    findings: tuple[Finding, ...] = ()
    hardware: tuple[Component, ...] = ()
    verdict: Verdict = Verdict.NOT_JUDGED
    room: RoomCheck | None = None
    is_new_plant: bool = False

    @property
    def is_computed(self) -> bool:
        """Return whether there are numbers of it. [-]"""
        return self.status == "ok"

    @property
    def stops(self) -> tuple[Finding, ...]:
        """Return what stops it, in the order of checking."""
        return tuple(finding for finding in self.findings if finding.level == Level.STOP)

    @property
    def open_facts(self) -> tuple[Finding, ...]:
        """Return the decisive facts that are missing, in the order of checking."""
        return tuple(item for item in self.findings if item.level == Level.UNKNOWN and item.decisive)

    @property
    def can_be_chosen(self) -> bool:
        """Return whether it is computed and no check stops it; it may still be open. [-]"""
        return self.is_computed and not self.stops


@dataclass(frozen=True)
class Comparison:
    """The result of comparing the candidates of a case with its existing refrigerant.

    Attributes:
        case: The case as read.
        existing: The refrigerant in the plant today.
        candidates: The candidates, in the order of the case.
        swept_volume_m3_per_s: Swept volume of the basis `compressor`, None if nothing could be computed.
        swept_volume_from: "case", or "duty" if the case does not give it and today's duty set it.
        versions: Versions the numbers depend on, by name.
        baseline: How the plant runs today, None if the case has no readings.
        law: Jurisdiction, day and tables behind what is said of law; None if the case names no jurisdiction.
        life: Year, emissions, money and how sure they are; None until asked for.
        beside: The readings beside the model of today's plant; empty without readings.
        calibration: Losses of motor and drive taken from the power read; None if the case does not ask for it.
        places: Where a part of a comparison is shown, the place of each refrigerant in the whole; empty for the whole.
    """

    case: Case
    existing: Entry
    candidates: tuple[Entry, ...]
    swept_volume_m3_per_s: float | None
    swept_volume_from: str
    versions: Mapping[str, str]
    baseline: Baseline | None = None
    law: LawBasis | None = None
    life: Life | None = None
    beside: tuple[Beside, ...] = ()
    calibration: Calibration | None = None
    places: Mapping[str, int] = field(default_factory=dict)

    @property
    def entries(self) -> tuple[Entry, ...]:
        """Return the existing refrigerant and all candidates."""
        return (self.existing, *self.candidates)
