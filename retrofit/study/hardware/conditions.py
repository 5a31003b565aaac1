"""The conditions that decide on hardware: the design point, the hottest day, pull-down and standstill."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import Case
from retrofit.cycle import Cycle, Settings, Temperatures, compressor_pressures, matched_pressures, solve_cycle
from retrofit.equipment.vessels import standstill
from retrofit.errors import NoSolutionError, OutsideValidRangeError
from retrofit.properties import Fluid
from retrofit.study.efficiencies import CompressorModel
from retrofit.study.gaps import KNOWN, Gap, not_given
from retrofit.study.hardware.lines import number
from retrofit.study.installed import ExistingPlant
from retrofit.study.performance import as_numbers, at_swept_volume, performance
from retrofit.study.result import AtRest, Installed, Performance
from retrofit.study.states import RestState
from retrofit.units import ZERO_C_K

HIGHEST_INLET, HIGHEST_SUCTION = "condenser.highest_inlet", "compressor.highest_suction"
CANDIDATES = "compare.candidates"  # what a model cannot say no other key can: compute it elsewhere, or leave it out


@dataclass(frozen=True)
class Site:
    """What the hardware of every refrigerant is reckoned with.

    Attributes:
        case: The case.
        settings: Superheat, subcooling, drops and heat loss, equal for every refrigerant.
        model: Efficiencies of the compressor.
        targets: Temperatures that are held equal.
        swept_volume_m3_per_s: Swept volume of the existing compressors.
        plant: The plant as installed, None if the case does not describe it.
    """

    case: Case
    settings: Settings
    model: CompressorModel
    targets: Temperatures
    swept_volume_m3_per_s: float
    plant: ExistingPlant | None


@dataclass(frozen=True)
class Found:
    """A condition, or why it is not known."""

    performance: Performance[float] | None
    reason: Gap = KNOWN


def cycle_between(
    behaviour: Fluid, p_evap_Pa: ArrayLike, p_cond_Pa: ArrayLike, settings: Settings, model: CompressorModel
) -> Cycle:
    """Return the cycle between two pressures, with the compressor's efficiencies at them.

    Args:
        behaviour: The refrigerant.
        p_evap_Pa: Evaporating pressure. [Pa]
        p_cond_Pa: Condensing pressure. [Pa]
        settings: Superheat, subcooling, drops and heat loss; its efficiencies are not used.
        model: Efficiencies of the compressor.
    Raises: OutsideValidRangeError outside the range of the refrigerant's model.
    """
    p_suction, p_discharge = compressor_pressures(behaviour, p_evap_Pa, p_cond_Pa, settings)
    isentropic, volumetric = model.of(behaviour).at(p_discharge / p_suction, p_suction)
    own = replace(settings, isentropic_efficiency=isentropic, volumetric_efficiency=volumetric)
    return solve_cycle(behaviour, p_evap_Pa, p_cond_Pa, own)


def hottest_day(site: Site, behaviour: Fluid, installed: Installed | None) -> Found:
    """Return the plant on the hottest day: balanced there, or with condensing as much warmer as the air.

    Args:
        site: The plant and what is held equal.
        behaviour: The refrigerant.
        installed: What the plant as installed does with it, run with the inlet of the hottest day; None to take
            the temperatures held equal.
    """
    keys, inlet_K = hottest_day_keys(site.case), hottest_inlet_K(site.case)
    if inlet_K is None:
        return Found(None, _not_given_together(keys, site.case))
    try:
        if installed is None:
            assert site.case.condenser
            assert site.case.condenser.inlet_K
            return Found(_warmer_condensing(site, behaviour, inlet_K - site.case.condenser.inlet_K))
        if installed.hottest is None:
            raise NoSolutionError(f"{behaviour.designation} in the plant as installed: {installed.hottest_reason}")
        return Found(installed.hottest)
    except (NoSolutionError, OutsideValidRangeError) as error:
        words = f"with {inlet_K - ZERO_C_K:.0f} °C at the condenser there is no solution: {error.message}"
        return Found(None, Gap(words, (HIGHEST_INLET,)))


def hottest_inlet_K(case: Case) -> float | None:
    """Return the temperature at the inlet of the condenser on the hottest day; None if it is not known. [K]

    Args:
        case: The case.
    """
    if case.condenser is None or hottest_day_keys(case):
        return None
    own, ambient = case.condenser.highest_inlet_K, case.plant.highest_ambient_K
    return own if own is not None else max(case.condenser.inlet_K or 0.0, ambient or 0.0)


def hottest_day_keys(case: Case) -> tuple[str, ...]:
    """Return the keys that the hottest day needs and the case does not give.

    The condenser draws air as hot as the hottest around the plant, unless the case says how hot what it draws becomes;
    of water and brine nothing else says so.

    Args:
        case: The case.
    """
    condenser, keys = case.condenser, []
    if condenser is None or condenser.inlet_K is None:
        keys += ["condenser.inlet", "condenser.outlet", "condenser.arrangement"]  # which the case file wants together
    if condenser is not None and condenser.highest_inlet_K is not None:
        return tuple(keys)
    if condenser is None or condenser.medium is None:
        keys.append("condenser.medium")
    elif condenser.medium != "air":
        return (*keys, HIGHEST_INLET)
    return ("plant.highest_ambient", *keys) if case.plant.highest_ambient_K is None else tuple(keys)


def _not_given_together(keys: tuple[str, ...], case: Case) -> Gap:
    parts = [not_given(key).words for key in keys]
    if HIGHEST_INLET in keys and case.condenser is not None:
        parts[-1] = f"the condenser is cooled by {case.condenser.medium}, and {parts[-1]}"
    return Gap("; ".join(parts), keys)


def _warmer_condensing(site: Site, behaviour: Fluid, by_K: float) -> Performance[float]:
    """Return the plant at the temperatures held, condensing so much warmer."""
    warmer = replace(site.targets, T_cond_K=np.asarray(site.targets.T_cond_K) + by_K)
    p_evap, p_cond = matched_pressures(behaviour, warmer, site.settings.subcooling_K)
    return _with_own_compressor(site, behaviour, float(p_evap), float(p_cond))


def _with_own_compressor(site: Site, behaviour: Fluid, p_evap_Pa: float, p_cond_Pa: float) -> Performance[float]:
    cycle = cycle_between(behaviour, p_evap_Pa, p_cond_Pa, site.settings, site.model)
    return at_swept_volume(as_numbers(performance(cycle, 1.0)), site.swept_volume_m3_per_s)


def pull_down(site: Site, behaviour: Fluid, design: Performance[float]) -> Found:
    """Return the plant at the highest suction pressure, condensing as at the design point.

    Args:
        site: The plant and what is held equal.
        behaviour: The refrigerant.
        design: The plant at the design point.
    """
    T_K = site.case.compressor.highest_suction_K
    if T_K is None:
        return Found(None, not_given(HIGHEST_SUCTION))
    try:
        return Found(_with_own_compressor(site, behaviour, float(behaviour.p_dew(T_K)), design.p_cond_Pa))
    except OutsideValidRangeError as error:
        return Found(None, Gap(f"pull-down is not computed: {error.message}", (HIGHEST_SUCTION,)))


def at_rest(case: Case, behaviour: Fluid | None) -> AtRest:
    """Return the plant at rest with a refrigerant, and where it condenses: what needs no cycle.

    Args:
        case: The case.
        behaviour: The refrigerant; None if there is no model of it.
    """
    T_highest, T_cond = case.plant.highest_ambient_K, float(case.duty.T_cond_K)
    if behaviour is None:
        state = RestState.NO_AMBIENT if T_highest is None else RestState.NOT_COMPUTED
        return AtRest(state, None, T_highest, None, T_cond, None)
    critical, p_cond = float(behaviour.T_critical_K), number(behaviour.as_lenient().p_bubble(np.asarray(T_cond)))
    if T_highest is None:
        return AtRest(RestState.NO_AMBIENT, None, None, critical, T_cond, p_cond)
    rest = standstill(behaviour, T_highest)
    p_rest = number(rest.p_Pa)
    state = RestState.COMPUTED if p_rest is not None else RestState.NOT_COMPUTED
    if rest.is_above_critical:
        state, p_rest = RestState.ABOVE_CRITICAL, None
    return AtRest(state, p_rest, T_highest, critical, T_cond, p_cond)


def standstill_pressure(case: Case, behaviour: Fluid) -> tuple[float | None, Gap]:
    """Return the bubble pressure at the highest ambient temperature, or why it is not known. [Pa]

    Args:
        case: The case.
        behaviour: The refrigerant.
    """
    T_K = case.plant.highest_ambient_K
    if T_K is None:
        return None, not_given("plant.highest_ambient")
    rest = standstill(behaviour, T_K)
    if np.isfinite(rest.p_Pa):
        return float(rest.p_Pa), KNOWN
    where = f"{T_K - ZERO_C_K:.0f} °C, against a critical temperature of {behaviour.T_critical_K - ZERO_C_K:.0f} °C"
    if rest.is_above_critical:
        return None, Gap(f"no liquid at {where}: charge and volume set the pressure at rest", (CANDIDATES,))
    return None, Gap(f"the model has no bubble pressure at {where}", (CANDIDATES,))
