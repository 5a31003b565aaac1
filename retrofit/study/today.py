"""The plant with the refrigerant it runs on: what every candidate is matched to and compared with.

The numbers of a case may be arrays, one value for each draw of an uncertain input: everything here then is one too.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import Case
from retrofit.cycle import Cycle, Settings, Temperatures, cycle_temperatures, matched_pressures
from retrofit.errors import NoSolutionError, OutsideValidRangeError
from retrofit.properties import Fluid
from retrofit.study.efficiencies import CompressorModel, efficiency_model
from retrofit.study.hardware.conditions import Site, cycle_between
from retrofit.study.installed import ExistingPlant, existing_plant
from retrofit.study.performance import performance
from retrofit.study.result import FloatArray
from retrofit.units import ZERO_C_K


@dataclass(frozen=True)
class Today:
    """What every refrigerant is compared with and matched to.

    Attributes:
        case: The case.
        settings: Superheat, subcooling, drops and heat loss, equal for every refrigerant.
        model: Efficiencies of the compressor, by refrigerant.
        targets: Temperatures that are held equal.
        swept_volume_m3_per_s: Swept volume of the existing compressors.
        plant: The plant as installed, None with `plant_reason` if the case does not describe it.
    """

    case: Case
    settings: Settings
    model: CompressorModel
    targets: Temperatures
    swept_volume_m3_per_s: FloatArray
    plant: ExistingPlant | None
    plant_reason: str | None

    @property
    def site(self) -> Site:
        """Return what the hardware is reckoned with."""
        swept = float(self.swept_volume_m3_per_s)
        return Site(self.case, self.settings, self.model, self.targets, swept, self.plant)

    def cycle(self, behaviour: Fluid) -> Cycle:
        """Return the cycle of a refrigerant at the temperatures held equal.

        Args:
            behaviour: The refrigerant.
        Raises: OutsideValidRangeError or NoSolutionError if it has no such temperatures.
        """
        return _cycle(behaviour, self.targets, self.settings, self.model)


def today_of(case: Case, existing: Fluid, factors: tuple[ArrayLike, ArrayLike] | None = None) -> Today:
    """Solve the refrigerant in the plant from its reading: targets, swept volume and the plant as installed.

    Args:
        case: The case; its numbers may be arrays.
        existing: The refrigerant in the plant.
        factors: Factors on the isentropic and the volumetric efficiency of the compressor; None for none. [-]
    Raises: RetrofitError with the reason if it cannot be solved.
    """
    _check_subcooling(case)
    settings, own = _settings(case), CompressorModel(case, existing, efficiency_model(case, existing))
    model = own if factors is None else CompressorModel(case, existing, own.own, factors)
    reading = Temperatures(case.duty.T_evap_K, case.duty.T_cond_K, case.duty.reading)
    targets = cycle_temperatures(_cycle(existing, reading, settings, model), case.compare.match)
    # From here on the existing refrigerant goes the way of every other, so that against itself nothing changes.
    cycle = _cycle(existing, targets, settings, model)
    given = case.compressor.swept_volume_m3_per_s
    needed = performance(cycle, case.duty.cooling_W).swept_volume_m3_per_s if given is None else given
    swept = np.asarray(needed, dtype=float)
    plant, reason = None, None
    try:
        plant = existing_plant(case, existing, cycle, model, swept)
    except NoSolutionError as error:
        reason = error.message
    if plant is not None and factors is not None:
        # The balance solves conditions in parts: factors that differ between conditions go with the machine.
        isentropic, volumetric = factors
        machine = replace(
            plant.machine, efficiencies=own.own.at, isentropic_factor=isentropic, volumetric_factor=volumetric
        )
        plant = replace(plant, machine=machine, model=own)
    return Today(case, settings, model, targets, swept, plant, reason)


def _cycle(behaviour: Fluid, temperatures: Temperatures, settings: Settings, model: CompressorModel) -> Cycle:
    """Solve the cycle of a refrigerant at temperatures, with the compressor's efficiencies at its own pressures."""
    p_evap, p_cond = matched_pressures(behaviour, temperatures, settings.subcooling_K)
    return cycle_between(behaviour, p_evap, p_cond, settings, model)


def _settings(case: Case) -> Settings:
    """Return what the case holds equal for every refrigerant; efficiencies follow from each one's pressures."""
    duty, evaporator, condenser = case.duty, case.evaporator, case.condenser
    return Settings(
        useful_superheat_K=duty.useful_superheat_K,
        line_superheat_K=duty.line_superheat_K,
        subcooling_K=duty.subcooling_K,
        heat_loss_share=0.0 if case.compressor.heat_loss is None else case.compressor.heat_loss,
        suction_drop_K=evaporator.pressure_drop_K if evaporator else 0.0,
        discharge_drop_K=condenser.pressure_drop_K if condenser else 0.0,
    )


def _check_subcooling(case: Case) -> None:
    """Refuse liquid that would be colder than the evaporator, before a model says so in its own terms."""
    duty = case.duty
    liquid_K = np.asarray(duty.T_cond_K - duty.subcooling_K)
    if np.all(liquid_K <= duty.T_evap_K):
        liquid, evaporator = (f"{float(np.max(T_K)) - ZERO_C_K:.1f} degC" for T_K in (liquid_K, duty.T_evap_K))
        raise OutsideValidRangeError(
            f"with {float(np.min(duty.subcooling_K)):g} K of subcooling the liquid at the expansion valve, {liquid}, "
            f"would be no warmer than the evaporator, {evaporator}; give less subcooling"
        )


def with_numbers(case: Case, numbers: Mapping[str, FloatArray]) -> Case:
    """Return a case with other numbers, or arrays of them, at some of its keys.

    Args:
        case: The case.
        numbers: By attribute, such as "duty.T_evap_K". [SI]
    """
    tables: dict[str, dict[str, FloatArray]] = {}
    for name, value in numbers.items():
        table, _, attribute = name.partition(".")
        tables.setdefault(table, {})[attribute] = value
    changed = {table: getattr(case, table).model_copy(update=values) for table, values in tables.items()}
    return replace(case, **changed)
