"""Rows on what refrigerant flows through: expansion valve, capillary tube, distributor and lines."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.case import FIXED, GasLine, LiquidLine
from retrofit.checks.hardware.rows import Bound, Matter, View, answered, judged, stated
from retrofit.study import Component, Measure
from retrofit.study.gaps import KNOWN, Gap, not_given
from retrofit.study.hardware.numbers import GasFlow, LiquidFlow, Throttling
from retrofit.units import quantity

BY_CALCULATION = ("approvals.lines",)
VALVE_ASK = (
    "Maker's capacity with this refrigerant at this pressure difference; whether the charge of the power element "
    "follows its pressure-temperature curve; opening differences of solenoid and check valves."
)


def valve(view: View) -> Iterator[Component]:
    """Compare the capacity of the expansion valve, or capillary tube, with the load."""
    found, kind = view.numbers.valve, view.case.valve.kind if view.case.valve else None
    names = {
        "capillary": "Capillary tube",
        "fixed orifice": "Fixed orifice",
        "electronic": "Electronic expansion valve",
    }
    code, name = "expansion-valve", names.get(kind or "", "Expansion valve")
    if found is None:
        matter = Matter(code, name, "The opening cannot be compared.", ask=VALVE_ASK)
        gap = Gap("no pressure is left over the valve, or its state lies outside the model")
        yield answered(view, matter, "expansion_valve", stated(matter, "unknown", [gap]))
        return
    first, last = ("capillary_small", "capillary_large") if kind in FIXED else ("valve_small", "valve_large")
    bounds = Bound(view.limits[first], "below"), Bound(view.limits[last])
    fact = (
        f"The same opening passes {found.capacity_ratio:.2f} times today's cooling where {found.load_ratio:.2f} times "
        f"is needed: {found.fit:.2f} of the need, with {found.losses} counted."
    )
    matter = Matter(code, name, fact, _valve_measures(found), bounds, VALVE_ASK)
    levels = {bound.level(found.fit) for bound in bounds}
    if view.is_today:
        yield stated(matter, "keep")
    elif kind is None and "stop" not in levels:
        yield stated(matter, "unknown", [not_given("valve.kind")])
    else:
        yield stated(matter, _valve_verdict(kind, levels))


def _valve_measures(found: Throttling) -> tuple[Measure, ...]:
    drop = found.pressure_difference_Pa
    return (
        Measure("Pressure difference over the valve", "pressure difference", drop.old, drop.new),
        Measure("Mass flow through the same opening", "ratio", 1.0, found.flow_ratio),
        Measure("Cooling through the same opening", "ratio", 1.0, found.capacity_ratio),
        Measure("Cooling needed", "ratio", 1.0, found.load_ratio),
        Measure("Capacity over need", "ratio", 1.0, found.fit),
    )


def _valve_verdict(kind: str | None, levels: set[str | None]) -> str:
    """Return the verdict: superheat, or charge, is set anew in any case; an electronic valve opens less by itself."""
    if "stop" in levels:
        return "replace"
    if "work" in levels:
        return "adjust" if kind == "electronic" else "replace"
    return "adjust"


def distributor(view: View) -> Iterator[Component]:
    """Compare the loading of the distributor with today's."""
    found, feed = view.numbers.distributor, view.case.plant.evaporator
    kind = view.case.valve.kind if view.case.valve else None
    if feed in ("flooded", "pumped") or kind == "capillary" or found is None:
        return
    bounds = Bound(view.limits["distributor_small"], "below"), Bound(view.limits["distributor_large"])
    measures = (
        Measure("Mass flow", "ratio", 1.0, found.mass_flow_ratio),
        Measure("Volume flow behind the valve", "ratio", 1.0, found.volume_flow_ratio),
        Measure("Pressure drop of nozzle and tubes", "ratio", 1.0, found.pressure_drop_ratio),
    )
    fact = (
        f"Its mass flow is {found.mass_flow_ratio:.2f} and its pressure drop {found.pressure_drop_ratio:.2f} times "
        "today's, which is taken as what it was chosen for."
    )
    ask = "Nominal loading of nozzle and tubes; the nozzle for this refrigerant."
    matter = Matter("distributor", "Distributor", fact, measures, bounds, ask)
    gaps = [not_given("plant.evaporator")] if feed is None else []
    yield judged(matter, [bound.level(found.mass_flow_ratio) for bound in bounds], gaps)


def _gas_measures(old: GasFlow | None, new: GasFlow | None) -> tuple[Measure, ...]:
    kinds = (
        ("Velocity", "velocity", "velocity_m_per_s"),
        ("Density times velocity squared", "momentum flux", "momentum_flux_Pa"),
        ("Pressure drop", "line pressure drop", "pressure_drop_Pa"),
        ("Pressure drop in saturation temperature", "temperature difference", "saturation_drop_K"),
    )
    return tuple(
        Measure(name, kind, getattr(old, field, None), getattr(new, field, None)) for name, kind, field in kinds
    )


def suction_line(view: View) -> Iterator[Component]:
    """Judge the suction line by velocity and by what its pressure drop costs."""
    yield from _gas_line(view, "suction")


def discharge_line(view: View) -> Iterator[Component]:
    """Judge the discharge line by velocity and by what its pressure drop costs."""
    yield from _gas_line(view, "discharge")


def _gas_line(view: View, line: str) -> Iterator[Component]:
    old, new = getattr(view.numbers.old, line), getattr(view.numbers.new, line)
    table: GasLine | None = getattr(view.case.lines, line, None)
    bounds = (
        Bound(view.limits[f"{line}_velocity_high"]),
        Bound(view.limits[f"{line}_velocity_low"], "below"),
        Bound(view.limits[f"{line}_drop"]),
    )
    measures = (*_diameter(table), *_gas_measures(old, new))
    name = f"{line.capitalize()} line"
    ask = "Inside diameter, length and bends of the line as built."
    if new is None or table is None:
        yield _with_friction(view, Matter(f"{line}-line", name, "", measures, bounds, ask), [], [_no_line(line, table)])
        return
    fact = quantity("velocity", new.velocity_m_per_s, ".1f")
    if new.saturation_drop_K is not None and new.pressure_drop_Pa is not None:
        fact += f" and a pressure drop of {quantity('line pressure drop', new.pressure_drop_Pa, '.0f')}, "
        fact += quantity("temperature difference", new.saturation_drop_K, ".2f")
    levels = [bounds[0].level(new.velocity_m_per_s), bounds[1].level(new.velocity_m_per_s)]
    levels.append(bounds[2].level(new.saturation_drop_K))
    matter = Matter(f"{line}-line", name, f"{fact}.", measures, bounds, ask)
    yield _with_friction(view, matter, levels, [_no_friction(view, line, table, new.pressure_drop_Pa)])


def _diameter(table: LiquidLine | None) -> tuple[Measure, ...]:
    size = table.diameter_m if table else None
    return (Measure("Inside diameter", "diameter", size, size),)


def _no_line(line: str, table: LiquidLine | None) -> Gap:
    if table is None:
        return not_given(f"lines.{line}.diameter")
    return Gap(f"what flows in the {line} line lies outside the model", BY_CALCULATION)


def _no_friction(view: View, line: str, table: LiquidLine, drop: float | None) -> Gap:
    """Return why the pressure drop of a line is not known; false if it is."""
    if drop is not None:
        return KNOWN
    if table.length_m is None:
        return not_given(f"lines.{line}.length")
    why = view.numbers.new.missing["viscosity"].words or "no value"
    return Gap(f"viscosity of {view.entry.refrigerant.designation} ({why})", BY_CALCULATION)


def _with_friction(view: View, matter: Matter, levels: list[str | None], gaps: list[Gap]) -> Component:
    """Return the row of a line; what the model cannot say of it, an engineer's calculation settles."""
    row = judged(matter, levels, gaps)
    is_by_calculation = any(gap.keys == BY_CALCULATION for gap in gaps)
    return answered(view, matter, "lines", row) if row.verdict == "unknown" and is_by_calculation else row


def suction_riser(view: View) -> Iterator[Component]:
    """Judge the oil return of the suction line at the lowest load."""
    yield from _oil_return(view, "suction")


def discharge_riser(view: View) -> Iterator[Component]:
    """Judge the oil return of the discharge line at the lowest load."""
    yield from _oil_return(view, "discharge")


def _oil_return(view: View, line: str) -> Iterator[Component]:
    """Judge a riser by velocity, density times velocity squared and flow reversal; a level line by velocity."""
    old, new = getattr(view.numbers.old, line), getattr(view.numbers.new, line)
    table: GasLine | None = getattr(view.case.lines, line, None)
    code, name = f"{line}-oil-return", f"{line.capitalize()} line, oil return"
    ask = "Lowest load that the plant really runs at; double risers."
    is_level = table is not None and table.riser_m == 0.0
    names = ("horizontal_velocity",) if is_level else ("riser_velocity", "riser_flow_reversal", "riser_momentum")
    bounds = tuple(Bound(view.limits[item], "below") for item in names)
    gaps = [] if table and table.riser_m is not None else [not_given(f"lines.{line}.riser")]
    if new is None or table is None or new.lowest_velocity_m_per_s is None:
        is_load_missing = table is not None and table.lowest_load is None
        gaps.append(not_given(f"lines.{line}.lowest_load") if is_load_missing else _no_line(line, table))
        yield _with_friction(view, Matter(code, name, "", (), bounds, ask), [], gaps)
        return
    # What rounding alone makes smaller than today's is today's.
    share = round(new.lowest_momentum_flux_Pa / old.lowest_momentum_flux_Pa, 6)
    values = (new.lowest_velocity_m_per_s, new.flow_reversal, share)
    fact = f"At the lowest load the gas moves at {quantity('velocity', new.lowest_velocity_m_per_s, '.1f')}"
    if not is_level:
        fact += f", j* is {new.flow_reversal:.2f}, and density times velocity squared {share:.2f} of today's"
    levels = [bound.level(value) for bound, value in zip(bounds, values, strict=False)]
    yield judged(Matter(code, name, f"{fact}.", _riser_measures(old, new), bounds, ask), levels, gaps)


def _riser_measures(old: GasFlow, new: GasFlow) -> tuple[Measure, ...]:
    kinds = (
        ("Velocity at the lowest load", "velocity", "lowest_velocity_m_per_s"),
        ("Density times velocity squared at the lowest load", "momentum flux", "lowest_momentum_flux_Pa"),
        ("Dimensionless velocity j* at the lowest load", "ratio", "flow_reversal"),
    )
    return tuple(Measure(name, kind, getattr(old, field), getattr(new, field)) for name, kind, field in kinds)


def liquid_line(view: View) -> Iterator[Component]:
    """Judge the liquid line by velocity, pressure drop and the subcooling left at the valve."""
    old, new = view.numbers.old.liquid, view.numbers.new.liquid
    table = view.case.lines.liquid if view.case.lines else None
    bounds = (
        Bound(view.limits["liquid_velocity"]),
        Bound(view.limits["liquid_drop"]),
        Bound(view.limits["flash"], "below"),
    )
    left = view.numbers.subcooling_left_K
    measures = (
        *_diameter(table),
        *_liquid_measures(old, new),
        Measure("Subcooling left at the valve", "temperature difference", left.old, left.new),
    )
    ask = "Subcooling before the line; height, drier and solenoid valves of the line."
    if new is None or table is None:
        matter = Matter("liquid-line", "Liquid line", "", measures, bounds, ask)
        yield _with_friction(view, matter, [], [_no_line("liquid", table)])
        return
    fact = quantity("velocity", new.velocity_m_per_s, ".2f")
    if left.new is not None:
        fact += f", and {quantity('temperature difference', left.new, '.1f')} of subcooling left at the valve"
    values = (new.velocity_m_per_s, new.saturation_drop_K, left.new)
    levels = [bound.level(value) for bound, value in zip(bounds, values, strict=True)]
    gaps = [_no_friction(view, "liquid", table, new.pressure_drop_Pa)]
    gaps += [not_given("lines.liquid.riser")] if table.riser_m is None else []
    if not any(gaps) and left.new is None:
        gaps.append(Gap("the subcooling left, for the line takes all of the pressure", BY_CALCULATION))
    yield _with_friction(view, Matter("liquid-line", "Liquid line", f"{fact}.", measures, bounds, ask), levels, gaps)


def _liquid_measures(old: LiquidFlow | None, new: LiquidFlow | None) -> tuple[Measure, ...]:
    kinds = (
        ("Velocity", "velocity", "velocity_m_per_s"),
        ("Pressure drop", "line pressure drop", "pressure_drop_Pa"),
        ("Pressure drop in saturation temperature", "temperature difference", "saturation_drop_K"),
        ("Pressure of the height", "line pressure drop", "static_head_Pa"),
        ("Subcooling that height and friction use up", "temperature difference", "subcooling_needed_K"),
    )
    return tuple(
        Measure(name, kind, getattr(old, field, None), getattr(new, field, None)) for name, kind, field in kinds
    )


ROWS = (valve, distributor, suction_line, suction_riser, discharge_line, discharge_riser, liquid_line)
