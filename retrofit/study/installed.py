"""The plant as installed: compressor and exchangers taken from the case and from where the plant runs today."""

from __future__ import annotations

from dataclasses import dataclass, field, fields, replace

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import Case
from retrofit.case.exchangers import Exchanger as ExchangerTable
from retrofit.cycle import Cycle
from retrofit.equipment.balance import (
    Exchanger,
    Machine,
    balance,
    condenser_difference,
    evaporator_difference,
)
from retrofit.equipment.exchanger import Secondary
from retrofit.errors import NoSolutionError
from retrofit.properties import Fluid
from retrofit.study.conductance import Films, UAFactors, films, ua_factors
from retrofit.study.efficiencies import CompressorModel
from retrofit.study.operating import balanced, operating
from retrofit.study.performance import as_numbers
from retrofit.study.result import FloatArray, Installed, Operation, Performance

USUAL_SUPERHEAT_SHARE = 0.65  # of inlet minus evaporating temperature: rating condition of EN 328, from memory
USUAL_SUBCOOLING_SHARE = 0.7  # of bubble point minus inlet: our own


@dataclass(frozen=True)
class ExistingPlant:
    """The existing machine with the conductances that today's point gives it; arrays where the case has them.

    Attributes:
        machine: The machine, with today's conductances and refrigerant.
        model: Efficiencies of its compressor, by refrigerant.
        needed_W: Cooling that the plant has to deliver.
        today_W: Cooling of the plant today, running at full.
        start_K: Evaporating and condensing dew temperature of today's point, to start a solution from.
        cycle, films: Today's refrigerant at the temperatures of the case, and in both exchangers there.
    """

    case: Case
    machine: Machine
    model: CompressorModel
    needed_W: FloatArray
    today_W: FloatArray
    start_K: tuple[FloatArray, FloatArray]
    cycle: Cycle
    films: Films
    _factors: dict[str, UAFactors] = field(default_factory=dict, compare=False, repr=False)

    def ua_factors(self, behaviour: Fluid) -> UAFactors:
        """Return what a refrigerant does to both conductances, worked out once.

        Args:
            behaviour: The refrigerant.
        """
        name = behaviour.designation
        if name not in self._factors:
            self._factors[name] = ua_factors(self.case, self.films, self.cycle, behaviour)
        return self._factors[name]


def existing_plant(
    case: Case, existing: Fluid, cycle: Cycle, model: CompressorModel, swept_volume_m3_per_s: ArrayLike
) -> ExistingPlant:
    """Return the plant as installed, its conductances from today's point.

    The temperatures of the case are taken as those of the machine running at full; its cooling there is what
    its swept volume gives.

    Args:
        case: The case.
        existing: Refrigerant in the plant.
        cycle: Its cycle at the temperatures of the case.
        model: Efficiencies of the compressor.
        swept_volume_m3_per_s: Swept volume of the existing compressors. [m3/s]
    Raises: NoSolutionError if the case does not describe both exchangers, or temperatures cross in one.
    """
    own = model.of(existing)
    _, volumetric = own.at(cycle.pressure_ratio, cycle.p_suction_Pa)
    mass_flow = np.asarray(swept_volume_m3_per_s) * volumetric * cycle.density_suction_kg_per_m3
    cooling = mass_flow * cycle.refrigerating_effect_J_per_kg
    heat = mass_flow * cycle.heat_rejected_J_per_kg
    evaporator = _exchanger("evaporator", case.evaporator, cooling)
    condenser = _exchanger("condenser", case.condenser, -heat)
    conductances = {
        "evaporator": cooling / _open(evaporator_difference(existing, cycle, cooling, evaporator)),
        "condenser": heat / _open(condenser_difference(existing, cycle, heat, condenser)),
    }
    for name, conductance in conductances.items():
        if np.all(np.isnan(conductance)):
            raise NoSolutionError(
                f"at today's point the temperatures of refrigerant and medium cross in the {name}: check its inlet, "
                "outlet and flow against the evaporating and condensing temperature"
            )
    machine = Machine(
        swept_volume_m3_per_s=swept_volume_m3_per_s,
        efficiencies=own.at,
        evaporator=replace(evaporator, conductance_W_per_K=conductances["evaporator"]),
        condenser=replace(condenser, conductance_W_per_K=conductances["condenser"]),
        settings=cycle.settings,
        superheat_share=_superheat_share(cycle, evaporator),
        subcooling_share=_subcooling_share(cycle, condenser),
    )
    start = cycle.T_evap_dew_K, cycle.T_cond_dew_K
    needed = np.minimum(case.duty.cooling_W, cooling)
    return ExistingPlant(case, machine, model, needed, cooling, start, cycle, films(existing, cycle))


def _open(difference_K: FloatArray) -> FloatArray:
    """Return a mean temperature difference, NaN where the temperatures cross."""
    return np.where(difference_K > 0.0, difference_K, np.nan)


def _superheat_share(cycle: Cycle, evaporator: Exchanger) -> ArrayLike:
    """Return the largest share of the inlet difference that superheat takes: a usual one, or today's if larger."""
    if evaporator.arrangement == "flooded":
        return np.inf
    lead = np.asarray(evaporator.secondary.T_in_K) - cycle.T_evap_dew_K
    return np.maximum(USUAL_SUPERHEAT_SHARE, np.asarray(cycle.settings.useful_superheat_K) / lead)


def _subcooling_share(cycle: Cycle, condenser: Exchanger) -> ArrayLike:
    """Return the largest share of the inlet difference that subcooling takes: a usual one, or today's if larger."""
    lead = cycle.T_cond_bubble_K - np.asarray(condenser.secondary.T_in_K)
    return np.asarray(np.maximum(USUAL_SUBCOOLING_SHARE, np.asarray(cycle.settings.subcooling_K) / lead))


def _exchanger(name: str, table: ExchangerTable | None, heat_W: FloatArray) -> Exchanger:
    """Return an exchanger with what the case says of it; its conductance is still to be found."""
    if table is None or table.inlet_K is None or table.arrangement is None:
        raise NoSolutionError(f"[{name}] with inlet, outlet (or flow) and arrangement is not given in the case")
    if table.outlet_K is not None:
        rate = np.abs(heat_W / (table.inlet_K - table.outlet_K))
    elif table.flow_kg_per_s is not None and table.specific_heat_J_per_kgK is not None:
        rate = np.asarray(table.flow_kg_per_s * table.specific_heat_J_per_kgK)
    else:
        raise NoSolutionError(f"[{name}] gives neither outlet nor flow with specific heat")
    return Exchanger(1.0, Secondary(table.inlet_K, rate), table.arrangement)


def run_installed(plant: ExistingPlant, behaviour: Fluid, cycle: Cycle, T_hottest_K: float | None = None) -> Installed:
    """Return what the existing plant does with a refrigerant.

    Args:
        plant: The plant as installed.
        behaviour: The refrigerant.
        cycle: Its cycle at the temperatures held equal: where the search for the balance begins.
        T_hottest_K: At the inlet of the condenser on the hottest day; None if that is not known. [K]
    Returns: Full speed, the same cooling, how the plant meets its duty, and the hottest day.
    Raises: NoSolutionError with the reason if the plant does not balance.
    """
    found_factors = plant.ua_factors(behaviour)
    factors = found_factors.told[0].factor, found_factors.told[1].factor
    # At full with the factors; the same cooling; at full with both at 1, to show what they do; and at full on the
    # hottest day: all in one, since few conditions take as long as one.
    columns = 3 if T_hottest_K is None else 4
    machine = _with_factors(
        _machine(plant, behaviour), np.array([[*[factor] * 2, 1.0, factor][:columns] for factor in factors])
    )
    cooling, starts = [np.nan, float(plant.today_W), np.nan], (cycle.T_evap_dew_K, cycle.T_cond_dew_K)
    if T_hottest_K is not None:
        usual_K = float(np.asarray(machine.condenser.secondary.T_in_K))
        inlets = np.array([usual_K] * 3 + [T_hottest_K])
        secondary = replace(machine.condenser.secondary, T_in_K=inlets)
        machine = replace(machine, condenser=replace(machine.condenser, secondary=secondary))
        cooling, starts = [*cooling, np.nan], (starts[0], starts[1] + inlets - usual_K)
    found = balance(behaviour, machine, *starts, np.array(cooling))
    for reason in found.reason[:2]:
        if reason:
            raise NoSolutionError(f"{behaviour.designation} in the plant as installed: {reason}")
    every = balanced(found)
    full, same = as_numbers(every, 0), as_numbers(every, 1)
    is_covered = plant.model.of(behaviour).covers(found.cycle.pressure_ratio, found.cycle.p_suction_Pa)
    conductances = machine.evaporator.conductance_W_per_K, machine.condenser.conductance_W_per_K
    return Installed(
        full=full,
        same_cooling=same,
        operation=_operation(plant, behaviour, every, factors),
        is_covered=bool(is_covered[0]),
        ua_factors=found_factors.told,
        cooling_with_equal_ua_W=float(every.cooling_W[2]),
        conductances_W_per_K=(float(np.asarray(conductances[0])[0]), float(np.asarray(conductances[1])[0])),
        residual=float(found.residual[:2].max()),
        hottest=as_numbers(every, 3) if T_hottest_K is not None and not found.reason[3] else None,
        hottest_reason=str(found.reason[3]) if T_hottest_K is not None else "",
    )


def machine_at(
    plant: ExistingPlant, behaviour: Fluid, T_evap_in_K: ArrayLike, T_cond_in_K: ArrayLike
) -> tuple[Machine, tuple[FloatArray, FloatArray]]:
    """Return the machine with a refrigerant at other temperatures of its media, and where to start its solution.

    Args:
        plant: The plant as installed.
        behaviour: The refrigerant.
        T_evap_in_K: At the inlet of the evaporator. [K]
        T_cond_in_K: At the inlet of the condenser. [K]
    Returns: The machine, and evaporating and condensing dew temperature: today's, moved with the media. [K]
    """
    machine = _with_factors(_machine(plant, behaviour), plant.ua_factors(behaviour).factors)
    exchangers, starts = [], []
    for exchanger, T_in, start in zip(
        (machine.evaporator, machine.condenser), (T_evap_in_K, T_cond_in_K), plant.start_K, strict=True
    ):
        starts.append(start + np.asarray(T_in) - np.asarray(exchanger.secondary.T_in_K))
        exchangers.append(replace(exchanger, secondary=replace(exchanger.secondary, T_in_K=T_in)))
    return replace(machine, evaporator=exchangers[0], condenser=exchangers[1]), (starts[0], starts[1])


def _machine(plant: ExistingPlant, behaviour: Fluid) -> Machine:
    """Return the machine with the efficiencies that its compressor has with a refrigerant."""
    return replace(plant.machine, efficiencies=plant.model.of(behaviour).at)


def _with_factors(machine: Machine, factors: ArrayLike) -> Machine:
    """Return the machine with its conductances times factors: evaporator first, condenser second."""
    evaporator, condenser = (
        replace(exchanger, conductance_W_per_K=np.asarray(exchanger.conductance_W_per_K) * factor)
        for exchanger, factor in zip((machine.evaporator, machine.condenser), np.asarray(factors), strict=True)
    )
    return replace(machine, evaporator=evaporator, condenser=condenser)


def _operation(
    plant: ExistingPlant, behaviour: Fluid, every: Performance[FloatArray], factors: tuple[float, float]
) -> Operation[float]:
    """Return how the machine meets the cooling needed, from what it does at full, the first of every condition."""
    full = Performance(**{item.name: getattr(every, item.name)[0] for item in fields(Performance)})
    machine, compressor = _with_factors(_machine(plant, behaviour), factors), plant.case.compressor
    found = operating(behaviour, machine, compressor, full, plant.needed_W, plant.start_K)
    if np.isnan(found.mean_power_W):
        raise NoSolutionError(f"{behaviour.designation} in the plant as installed, at part load: {found.reason}")
    return Operation(
        found.control,
        float(found.cooling_needed_W),
        float(found.unmet_W),
        float(found.run_time_fraction),
        float(found.speed_fraction),
        float(found.mean_power_W),
    )
