"""Set points carried from today's refrigerant to another: the same saturation temperature, another pressure."""

from __future__ import annotations

from retrofit.case import present
from retrofit.cycle import Temperatures, matched_pressures
from retrofit.errors import NoSolutionError, OutsideValidRangeError
from retrofit.properties import Fluid
from retrofit.study.hardware.conditions import Site
from retrofit.study.hardware.numbers import OldNew, Setting
from retrofit.study.result import Performance

# Key in [controls], name, and which temperature stays. A switch and a crankcase regulator guard the suction
# pressure itself, where vapour is at its dew point; a set point of the rack and an evaporator regulator stand for
# the temperature of a coil, which is the mean; so do head pressure and fan steps for that of the condenser.
SET_POINTS = (
    ("low_pressure_cut_out", "Low-pressure switch, cut-out", "dew"),
    ("low_pressure_cut_in", "Low-pressure switch, cut-in", "dew"),
    ("rack_set_point", "Set point of the suction pressure", "mean evaporating"),
    ("evaporator_regulator", "Evaporator pressure regulator", "mean evaporating"),
    ("crankcase_regulator", "Crankcase pressure regulator", "dew"),
    ("head_pressure", "Head pressure control", "mean condensing"),
)


def settings_of(site: Site, old: tuple[Fluid, Performance[float]], new: Fluid) -> tuple[Setting, ...]:
    """Return every set point of the case with its new pressure.

    Args:
        site: The plant and what is held equal.
        old: Today's refrigerant and what the plant does with it.
        new: The refrigerant looked at.
    """
    controls = site.case.controls
    if controls is None:
        return ()
    given = [(key, name, held, present(getattr(controls, f"{key}_Pa"))) for key, name, held in SET_POINTS]
    steps = enumerate(controls.fan_steps_Pa or (), start=1)
    given += [("fan_steps", f"Condenser fans, step {step}", "mean condensing", p) for step, p in steps]
    return tuple(_setting(site, old, new, key, name, held, p) for key, name, held, p in given if p is not None)


def _setting(
    site: Site, old: tuple[Fluid, Performance[float]], new: Fluid, key: str, name: str, held: str, p_Pa: float
) -> Setting:
    try:
        T_K = _temperature(site, old, held, p_Pa)
    except OutsideValidRangeError as error:
        return Setting(key, name, held, None, OldNew(p_Pa, None), error.message)
    if new.designation == old[0].designation:
        return Setting(key, name, held, T_K, OldNew(p_Pa, p_Pa))
    try:
        return Setting(key, name, held, T_K, OldNew(p_Pa, _pressure(site, old[1], new, held, T_K)))
    except (OutsideValidRangeError, NoSolutionError) as error:
        return Setting(key, name, held, T_K, OldNew(p_Pa, None), error.message)


def _temperature(site: Site, old: tuple[Fluid, Performance[float]], held: str, p_Pa: float) -> float:
    """Return the temperature that a pressure means with today's refrigerant."""
    behaviour, design = old
    T_dew = float(behaviour.dew(p_Pa).T_K)
    if held == "dew":
        return T_dew
    if held == "mean condensing":
        return 0.5 * (T_dew + float(behaviour.bubble(p_Pa).T_K))
    liquid = behaviour.liquid(design.p_cond_Pa, site.settings.subcooling_K)
    return 0.5 * (T_dew + float(behaviour.two_phase(p_Pa, liquid.h_J_per_kg).T_K))


def _pressure(site: Site, design: Performance[float], new: Fluid, held: str, T_K: float) -> float:
    """Return the pressure at which another refrigerant has that temperature."""
    if held == "dew":
        return float(new.p_dew(T_K))
    subcooling = site.settings.subcooling_K
    if held == "mean evaporating":
        return float(matched_pressures(new, Temperatures(T_K, design.T_cond_mean_K, "mean"), subcooling)[0])
    # A mean condensing temperature needs an evaporating one beside it, which changes nothing of it.
    return float(matched_pressures(new, Temperatures(design.T_evap_mean_K, T_K, "mean"), 0.0)[1])
