"""Rows on the compressor, its motor and envelope, and the two exchangers."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.checks.corners import worst
from retrofit.checks.gates import cooling_reached
from retrofit.checks.hardware.rows import Bound, Matter, View, answered, judged, performance_measure, stated
from retrofit.checks.operating import discharge_limit, motor_load
from retrofit.study import Component, Measure
from retrofit.study.gaps import not_given
from retrofit.units import quantity


def discharge(view: View) -> Iterator[Component]:
    """Compare the discharge temperature at its worst corner with what oil and valves bear."""
    corner, new = worst(view.entry, "T_discharge_K"), view.numbers.new
    bound = Bound(view.limits[discharge_limit(view.comparison)])
    measures = (
        performance_measure(view, "Discharge temperature, design point", "temperature", "T_discharge_K"),
        performance_measure(view, "Discharge temperature, hottest day", "temperature", "T_discharge_K", "hottest"),
    )
    fact = f"The discharge reaches {quantity('temperature', corner.value, '.0f')}{corner.where}."
    ask = "Highest discharge temperature that the maker allows with this refrigerant and oil; head cooling, injection."
    matter = Matter("discharge-temperature", "Compressor, discharge temperature", fact, measures, (bound,), ask)
    # The reading of the limit itself, so that today's refrigerant, too, is judged.
    yield judged(matter, [bound.level_of(corner.value)], [new.missing["hottest"]])


def ratio(view: View) -> Iterator[Component]:
    """Compare the pressure ratio with what one stage does."""
    corner, bound = worst(view.entry, "pressure_ratio"), Bound(view.limits["pressure_ratio"])
    measures = (
        performance_measure(view, "Pressure ratio, design point", "ratio", "pressure_ratio"),
        performance_measure(view, "Pressure ratio, hottest day", "ratio", "pressure_ratio", "hottest"),
    )
    fact = f"The pressure ratio reaches {corner.value:.1f}{corner.where}."
    ask = "The maker's envelope with this refrigerant."
    matter = Matter("pressure-ratio", "Compressor, pressure ratio", fact, measures, (bound,), ask)
    yield judged(matter, [bound.level(corner.value)], [view.numbers.new.missing["hottest"]])


def motor(view: View) -> Iterator[Component]:
    """Compare the motor current, at the design point and at pull-down, with the rated one."""
    numbers, rated = view.numbers, view.case.compressor.rated_current_A
    bound = Bound(view.limits["motor_current"])
    measures = (
        Measure("Motor current, design point", "current", numbers.current_A.old, numbers.current_A.new),
        Measure(
            "Motor current, pull-down", "current", numbers.pull_down_current_A.old, numbers.pull_down_current_A.new
        ),
        Measure("Rated current", "current", rated, rated),
        performance_measure(view, "Compressor power, design point", "power", "power_W"),
        performance_measure(view, "Compressor power, pull-down", "power", "power_W", "pull_down"),
    )
    corner = motor_load(view.comparison, view.entry)
    gaps = [numbers.missing["current"], numbers.new.missing["pull_down"]]
    gaps += [not_given("compressor.rated_current")] if rated is None else []
    ratio = numbers.new.design.power_W / numbers.old.design.power_W
    fact = f"The compressor takes {ratio:.2f} times today's power."
    levels = [Bound(view.limits["motor_power"]).level(ratio)] if corner is None else []
    if corner is not None:
        fact = f"The current reaches {corner.value:.0%} of the rated one{corner.where}."
        levels.append(bound.level(corner.value))
    ask = "Highest continuous current; start and pull-down with this refrigerant; crankcase regulator or MOP valve."
    bounds = (bound,) if corner is not None else (bound, Bound(view.limits["motor_power"]))
    yield judged(Matter("motor", "Motor", fact, measures, bounds, ask), levels, gaps)


def capacity(view: View) -> Iterator[Component]:
    """Compare the cooling on the existing machine with the cooling needed."""
    found = cooling_reached(view.comparison, view.entry)
    today = cooling_reached(view.comparison, view.comparison.existing)
    if found is None or today is None:
        return
    reached, needed, machine = found
    bound = Bound(view.limits["capacity"], "below")
    measures = (
        Measure(f"Cooling {machine}", "cooling", today[0], reached),
        performance_measure(view, "Cooling, hottest day", "cooling", "cooling_W", "hottest"),
        Measure("Cooling needed", "cooling", needed, needed),
    )
    fact = f"There is {reached / needed:.0%} of the cooling needed {machine}."
    matter = Matter("displacement", "Compressor, displacement", fact, measures, (bound,))
    yield judged(matter, [view.level("capacity")])


def envelope(view: View) -> Iterator[Component]:
    """Say that the maker's envelope has to be looked up: no table of it is carried here."""
    if view.is_today:
        return
    fact = "Whether the working points lie in the maker's envelope for this refrigerant is not known here."
    ask = "Written approval and envelope of this compressor with this refrigerant and oil, with date."
    matter = Matter("compressor-envelope", "Compressor, envelope and approval", fact, ask=ask)
    source = "common practice: each working point lies in the maker's envelope"
    yield answered(view, matter, "compressor", stated(matter, "unknown", source=source))


def condenser(view: View) -> Iterator[Component]:
    """Compare the heat the condenser has to give off with today's."""
    numbers, bound = view.numbers, Bound(view.limits["heat_rejected"])
    ratio = numbers.new.design.heat_rejected_W / numbers.old.design.heat_rejected_W
    measures = (
        performance_measure(view, "Heat rejected", "heat flow", "heat_rejected_W"),
        performance_measure(view, "Condensing temperature", "temperature", "T_cond_mean_K"),
    )
    fact = f"It has to give off {ratio:.2f} times today's heat"
    rise = _rise(view, ratio)
    if rise:
        fact += "; without more surface or air condensing would rise by about "
        fact += quantity("temperature difference", rise, ".1f")
    fact += "."
    ask = "Duty of the condenser at the hottest air; what it gives off today above that."
    yield judged(Matter("condenser", "Condenser", fact, measures, (bound,), ask), [view.level("condenser")])


def _rise(view: View, ratio: float) -> float | None:
    """Return how far condensing would rise by the temperature difference of today; nothing if it is balanced."""
    table, old = view.case.condenser, view.numbers.old.design
    if view.numbers.basis == "plant" or table is None or table.inlet_K is None or ratio <= 1.0:
        return None
    return (ratio - 1.0) * (old.T_cond_mean_K - table.inlet_K)


def evaporator(view: View) -> Iterator[Component]:
    """Set the glide against the way the evaporators are fed."""
    feed = view.case.plant.evaporator
    pool = feed in ("flooded", "pumped")
    bound = Bound(view.limits["glide_flooded" if pool else "glide"])
    glide = view.numbers.new.design.glide_evap_K
    measures = (performance_measure(view, "Glide in the evaporator", "temperature difference", "glide_evap_K"),)
    fact = f"{quantity('temperature difference', glide, '.1f')} of glide in {f'a {feed}' if feed else 'an'} evaporator."
    gaps = [not_given("plant.evaporator")] if feed is None else []
    matter = Matter("evaporator", "Evaporator, glide", fact, measures, (bound,))
    yield judged(matter, [view.level("glide")], gaps)


ROWS = (discharge, ratio, motor, capacity, envelope, condenser, evaporator)
