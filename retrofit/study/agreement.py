"""What was read on the running plant beside the model of it at the same point, and the losses calibrated from it.

The point is that of the readings: pressures, superheat and subcooling as read where they are known and not in doubt,
those of the case elsewhere. Whether two numbers agree is judged in `retrofit.checks.readings`.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from enum import StrEnum
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import Case, Default, Readings
from retrofit.errors import RetrofitError
from retrofit.properties import Fluid
from retrofit.study.against_case import ran_in_part
from retrofit.study.baseline import taken_over
from retrofit.study.hardware.conditions import cycle_between
from retrofit.study.performance import as_numbers, at_swept_volume, electric_W, performance
from retrofit.study.practice import practice

if TYPE_CHECKING:
    from retrofit.study.result import Baseline, Comparison, Entry, Installed, Performance
    from retrofit.study.today import Today

MOTOR, DRIVE = "compressor.motor_efficiency", "compressor.drive_efficiency"
POWER_KEYS = ("power", "current", "voltage", "phases", "power_factor")
CURRENT_KEYS = ("voltage", "phases", "power_factor")
FIELDS = {str(field.alias): name for name, field in Readings.model_fields.items()}
SIDE_KEYS = ("flow", "specific_heat", "in", "out")


class Compared(StrEnum):
    """Quantities that are read on a plant and computed by its model."""

    POWER = "power"
    CURRENT = "current"
    DISCHARGE = "discharge temperature"
    COP = "cop"
    CAPACITY = "capacity"
    HEAT_REJECTED = "heat rejected"
    HEAT_BALANCE = "heat balance"


class WhyNot(StrEnum):
    """Why a reading has no number to stand beside it, or why no losses are taken from it."""

    NOT_READ = "not read"
    KEY_MISSING = "a further reading is missing"
    IN_DOUBT = "readings are in doubt"
    PART_LOAD = "read at part load"
    IN_THE_MODEL = "the model was made from it"
    BY_THE_MODEL = "it was derived with the model"
    NOT_SOLVED = "the model has no solution at the readings"
    BELOW_RANGE = "ratio below the allowed range"
    ABOVE_RANGE = "ratio above the allowed range"


@dataclass(frozen=True)
class Reason:
    """Why not.

    Attributes:
        why: The reason.
        keys: Keys of the case that it is about: readings that are missing, in doubt or taken into the model.
        text: What the model says of it; empty mostly.
    """

    why: WhyNot
    keys: tuple[str, ...] = ()
    text: str = ""


@dataclass(frozen=True)
class Beside:
    """One quantity as read, and by the model of today's plant at the point of the readings.

    Attributes:
        quantity: Which.
        kind: Its kind of quantity, as the unit systems name it.
        read, modelled: In SI; None where it is not known. Of the heat balance: heat given off as read, and cooling and
            power as read added up.
        reason: Why the two cannot be compared; None if they can.
    """

    quantity: Compared
    kind: str
    read: float | None
    modelled: float | None
    reason: Reason | None = None

    @property
    def difference(self) -> float | None:
        """Return reading less model, as a share of the model, of a temperature in K; None if not comparable."""
        if self.reason is not None or self.read is None or self.modelled is None:
            return None
        by = self.read - self.modelled
        return by if self.kind == "temperature" else by / self.modelled


@dataclass(frozen=True)
class Calibration:
    """Losses of motor and drive taken from the electrical power read.

    Attributes:
        is_applied: Whether the numbers are made with them.
        read_W, modelled_W: Electrical power as read and by the model at the same point; None where it is not known.
        ratio: The one over the other.
        efficiency: Of motor and drive together: shaft power of the model over electrical power read; None if not
            applied.
        allowed: Lowest and highest ratio of power read to shaft power that is taken for losses.
        reason: Why it is not applied; None if it is.
    """

    is_applied: bool
    read_W: float | None
    modelled_W: float | None
    ratio: float | None
    efficiency: float | None
    allowed: tuple[float, float]
    reason: Reason | None


def held_against_model(comparison: Comparison, today: Today | None, existing: Fluid | None) -> Comparison:
    """Return a result with its readings beside the model, and calibrated by them if the case asks for it.

    Args:
        comparison: A result, before the checks have run.
        today: The plant with the refrigerant it runs on; None if that is not computed.
        existing: This refrigerant.
    Returns: The same result; calibrated, its case carries the efficiency of motor and drive, which year, emissions and
        money of every option are made with.
    """
    found = comparison.baseline
    if found is not None and comparison.case.readings is not None:
        at_point = None if today is None or existing is None else _at_readings(today, existing, found)
        table = _table(comparison.case, found, at_point)
        comparison = replace(comparison, beside=table, calibration=_calibration(comparison.case, table))
        comparison = _calibrated(comparison, found, at_point)
    return _with_electric_power(comparison)


# The model at the point of the readings


def _values(found: Baseline) -> dict[str, float]:
    return {item.code: item.value for item in found.derived}


def _at_readings(today: Today, existing: Fluid, found: Baseline) -> Performance[float] | str:
    """Return the model at full at the pressures, superheat and subcooling read, or why it has no solution."""
    sound = {code: value for code, value in _values(found).items() if not _doubted(found, (_pressure_of(code),))}
    settings = replace(
        today.settings,
        useful_superheat_K=max(sound.get("evaporator_superheat", _number(today.settings.useful_superheat_K)), 0.0),
        line_superheat_K=max(sound.get("line_superheat", _number(today.settings.line_superheat_K)), 0.0),
        subcooling_K=max(sound.get("subcooling", _number(today.settings.subcooling_K)), 0.0),
    )
    try:
        own = today.cycle(existing)
        # A gauge stands at the compressor; the drops of the case lie between it and the exchanger.
        T_evap, T_cond = float(own.T_evap_dew_K), float(own.T_cond_dew_K)
        if "suction_dew_temperature" in sound:
            T_evap = sound["suction_dew_temperature"] + _number(settings.suction_drop_K)
        if "discharge_dew_temperature" in sound:
            T_cond = sound["discharge_dew_temperature"] - _number(settings.discharge_drop_K)
        p_evap, p_cond = float(existing.p_dew(T_evap)), float(existing.p_dew(T_cond))
        cycle = cycle_between(existing, p_evap, p_cond, settings, today.model)
        return at_swept_volume(as_numbers(performance(cycle, 1.0)), float(today.swept_volume_m3_per_s))
    except RetrofitError as error:
        return error.message


def _number(value: ArrayLike) -> float:
    return float(np.asarray(value))


def _pressure_of(code: str) -> str:
    """Return the pressure that a saturation temperature restates: it is shown even while that is in doubt."""
    side, _, what = code.partition("_")
    return f"{side}_pressure" if what in ("dew_temperature", "bubble_temperature") else ""


# What stands beside what


def _table(case: Case, found: Baseline, at_point: Performance[float] | str | None) -> tuple[Beside, ...]:
    values = _values(found)
    electric = values.get("electric_power")
    model = None if isinstance(at_point, str) else at_point
    unsolved = Reason(WhyNot.NOT_SOLVED, (), at_point if isinstance(at_point, str) else "") if model is None else None
    power = None if model is None else float(electric_W(case, model.power_W))
    taken = taken_over(case, found)
    part = Reason(WhyNot.PART_LOAD, ("readings.load",)) if ran_in_part(case) else None

    def made_from(key: str, *readings: str) -> Reason | None:
        return Reason(WhyNot.IN_THE_MODEL, tuple(f"readings.{name}" for name in readings)) if key in taken else None

    by_power = made_from("compressor.volumetric_efficiency", "power")
    by_discharge = made_from("compressor.isentropic_efficiency", "discharge_temperature")
    cooling, of_cooling = _cooling(case, found, values)
    of_power = _absent_power(case, found, electric)
    rows = (
        (Compared.POWER, "power", electric, power, (of_power, part, by_power)),
        (Compared.CURRENT, *_current(case, found, power), (_absent_current(case, found), part)),
        (
            Compared.DISCHARGE,
            "temperature",
            _reading(case, "discharge_temperature"),
            None if model is None else model.T_discharge_K,
            (_absent(case, found, ("discharge_temperature",)), by_discharge),
        ),
        (
            Compared.COP,
            "ratio",
            cooling / electric if cooling is not None and electric else None,
            None if model is None or power is None else model.cooling_W / power,
            (of_cooling, of_power, by_discharge if "capacity_secondary" not in values else None),
        ),
        (
            Compared.CAPACITY,
            "cooling",
            cooling,
            None if model is None else model.cooling_W,
            (of_cooling, part, None if "capacity_secondary" in values else by_power),
        ),
        (
            Compared.HEAT_REJECTED,
            "heat flow",
            values.get("heat_rejected_secondary"),
            None if model is None else model.heat_rejected_W,
            (_absent(case, found, _side("condenser")), part),
        ),
    )
    table = [
        Beside(quantity, kind, read, modelled, next((why for why in (*reasons, unsolved) if why is not None), None))
        for quantity, kind, read, modelled, reasons in rows
    ]
    return (*table, _heat_balance(case, model))


def _reading(case: Case, key: str) -> float | None:
    """Return a reading by its key, in SI; None if it is not given."""
    value = getattr(case.readings, FIELDS[key])
    return None if value is None else float(value)


def _side(way: str) -> tuple[str, ...]:
    return tuple(f"{way}_{name}" for name in SIDE_KEYS)


def _doubted(found: Baseline, keys: tuple[str, ...]) -> tuple[str, ...]:
    return tuple(key for key in keys if key in found.in_doubt)


def _absent(case: Case, found: Baseline, keys: tuple[str, ...]) -> Reason | None:
    """Return why a quantity made from readings is not known: one is missing, or in doubt."""
    missing = tuple(f"readings.{key}" for key in keys if _reading(case, key) is None)
    if missing:
        why = WhyNot.NOT_READ if len(missing) == len(keys) else WhyNot.KEY_MISSING
        return Reason(why, missing)
    doubted = _doubted(found, keys)
    if doubted:
        return _in_doubt(found, doubted)
    return None


def _in_doubt(found: Baseline, keys: tuple[str, ...]) -> Reason:
    titles = "; ".join(dict.fromkeys(found.in_doubt[key] for key in keys))
    return Reason(WhyNot.IN_DOUBT, tuple(f"readings.{key}" for key in keys), titles)


def _absent_power(case: Case, found: Baseline, electric: float | None) -> Reason | None:
    if electric is not None:
        return None
    if _reading(case, "power") is None and any(_reading(case, key) is None for key in POWER_KEYS[1:]):
        return Reason(WhyNot.NOT_READ, ("readings.power",))
    return _in_doubt(found, _doubted(found, POWER_KEYS))


def _current(case: Case, found: Baseline, power_W: float | None) -> tuple[str, float | None, float | None]:
    """Return the current read, and that of the modelled power. Source: P = sqrt(phases) U I cos(phi)."""
    voltage, phases, factor = (_reading(case, key) for key in CURRENT_KEYS)
    if power_W is None or voltage is None or phases is None or factor is None:
        return "current", _reading(case, "current"), None
    return "current", _reading(case, "current"), power_W / (phases**0.5 * voltage * factor)


def _absent_current(case: Case, found: Baseline) -> Reason | None:
    return _absent(case, found, ("current",)) or _absent(case, found, ("current", *CURRENT_KEYS))


def _cooling(case: Case, found: Baseline, values: Mapping[str, float]) -> tuple[float | None, Reason | None]:
    """Return the cooling as read: by air, water or brine if that is known, else by power and enthalpies."""
    if "capacity_secondary" in values:
        return values["capacity_secondary"], None
    if "capacity" not in values:
        absent = _absent(case, found, _side("evaporator"))
        return None, absent or Reason(WhyNot.NOT_READ, ("readings.evaporator_flow",))
    if "mass_flow_from_power" not in values:
        return values["capacity"], Reason(WhyNot.BY_THE_MODEL, tuple(f"readings.{key}" for key in _side("evaporator")))
    return values["capacity"], None


def _heat_balance(case: Case, model: Performance[float] | None) -> Beside:
    """Return heat given off as read beside cooling and power as read. Source: first law, steady state.

    The readings count as they are, also those that this very balance puts in doubt. Without a motor efficiency all of
    the electrical power counts as heat; the heat of the suction line is the model's share of the cooling.
    """
    cold, warm = (_by_medium(case, way, sign) for way, sign in (("evaporator", 1.0), ("condenser", -1.0)))
    power = _electric_as_read(case)
    keys = (*_side("evaporator"), *_side("condenser"))
    missing = tuple(f"readings.{key}" for key in keys if _reading(case, key) is None)
    missing += ("readings.power",) if power is None else ()
    if cold is None or warm is None or power is None:
        why = WhyNot.NOT_READ if cold is None and warm is None else WhyNot.KEY_MISSING
        return Beside(Compared.HEAT_BALANCE, "heat flow", warm, None, Reason(why, missing))
    line = 0.0 if model is None else model.line_heat_W / model.cooling_W
    shaft = power * (case.compressor.motor_and_drive or 1.0)
    taken_up = cold * (1.0 + line) + shaft * (1.0 - (case.compressor.heat_loss or 0.0))
    reason = None if taken_up > 0.0 else Reason(WhyNot.IN_DOUBT, tuple(f"readings.{key}" for key in keys))
    return Beside(Compared.HEAT_BALANCE, "heat flow", warm, taken_up, reason)


def _by_medium(case: Case, way: str, sign: float) -> float | None:
    found = [_reading(case, key) for key in _side(way)]
    flow, specific_heat, T_in, T_out = found
    if flow is None or specific_heat is None or T_in is None or T_out is None:
        return None
    return sign * flow * specific_heat * (T_in - T_out)


def _electric_as_read(case: Case) -> float | None:
    power, current, voltage, phases, factor = (_reading(case, key) for key in POWER_KEYS)
    if power is not None:
        return power
    if current is None or voltage is None or phases is None or factor is None:
        return None
    return float(phases**0.5 * voltage * current * factor)


# Losses of motor and drive


def _calibration(case: Case, table: tuple[Beside, ...]) -> Calibration | None:
    """Return the losses that the power read tells, and whether they are taken; None if the case does not ask.

    Source: efficiency of motor and drive = shaft power by the model / electrical power read, at the same point.
    """
    if case.readings is None or not case.readings.calibrate:
        return None
    beside = next(row for row in table if row.quantity == Compared.POWER)
    allowed = practice("motor_and_drive").ends
    read, modelled = beside.read, beside.modelled
    if beside.reason is not None or read is None or modelled is None:
        return Calibration(False, read, modelled, None, None, allowed, beside.reason)
    ratio, motor = read / modelled, case.compressor.motor_and_drive or 1.0
    losses = ratio / motor
    # Losses of a drive come on top of those of a motor that the case gives: less than these cannot be.
    if ratio < allowed[0]:
        return Calibration(False, read, modelled, ratio, None, allowed, Reason(WhyNot.BELOW_RANGE, ("readings.power",)))
    if losses > allowed[1]:
        return Calibration(False, read, modelled, ratio, None, allowed, Reason(WhyNot.ABOVE_RANGE, ("readings.power",)))
    return Calibration(True, read, modelled, ratio, 1.0 / losses, allowed, None)


def _calibrated(comparison: Comparison, baseline: Baseline, at_point: Performance[float] | str | None) -> Comparison:
    """Return a result with the losses in its case, and its readings beside the model that has them."""
    found, case = comparison.calibration, comparison.case
    if found is None or found.efficiency is None:
        return comparison
    why = "from readings: shaft power by the model over electrical power read (`calibrate` in [readings])"
    # Where the isentropic efficiency holds the motor, what is left are losses of the drive.
    key = DRIVE if case.compressor.motor_is_inside else MOTOR
    others = tuple(default for default in case.defaults if default.key != key)
    losses: dict[str, float | None] = {MOTOR: case.compressor.motor_efficiency, DRIVE: None, key: found.efficiency}
    update = {name.partition(".")[2]: value for name, value in losses.items()}
    compressor = case.compressor.model_copy(update=update)
    default = Default(key, f"{found.efficiency:.3g}", why)
    case = replace(case, compressor=compressor, defaults=(*others, default))
    taken = Reason(WhyNot.IN_THE_MODEL, ("readings.power",))
    table = tuple(
        replace(row, reason=taken) if row.quantity == Compared.POWER else row
        for row in _table(case, baseline, at_point)
    )
    return replace(comparison, case=case, beside=table)


def _with_electric_power(comparison: Comparison) -> Comparison:
    """Add the electrical power of every refrigerant in the plant as installed."""
    case = comparison.case

    def installed(plant: Installed | None) -> Installed | None:
        if plant is None:
            return None
        powers = (plant.full.power_W, plant.operation.mean_power_W)
        full, mean = (float(electric_W(case, power)) for power in powers)
        return replace(plant, electric_W=full, mean_electric_W=mean)

    def of(entry: Entry) -> Entry:
        return replace(entry, plant=installed(entry.plant), like_today=installed(entry.like_today))

    return replace(comparison, existing=of(comparison.existing), candidates=tuple(map(of, comparison.candidates)))
