"""Rows on pressure: nameplates, high-pressure switch, relief valve, standstill, vacuum, the critical point."""

from __future__ import annotations

import math
from collections.abc import Iterator

from retrofit.case import ABSENT, present
from retrofit.checks.at_rest import ABOVE_PLATE, NO_RELIEF
from retrofit.checks.corners import conditions, worst
from retrofit.checks.gauge import share_text, times_below
from retrofit.checks.hardware.rows import Bound, Matter, View, answered, judged, performance_measure, stated
from retrofit.study import Component, Measure
from retrofit.study.gaps import Gap, not_given
from retrofit.study.hardware.numbers import OldNew
from retrofit.units import quantity


def _gauge(view: View, p_Pa: float) -> str:
    """Return an absolute pressure as gauges at the plant show it, for a sentence. [Pa]"""
    return quantity("gauge pressure", p_Pa - view.case.plant.ambient_pressure_Pa, ".1f")


def _condensing(view: View) -> tuple[Measure, Measure]:
    return (
        performance_measure(view, "Condensing pressure, design point", "gauge pressure", "p_cond_Pa"),
        performance_measure(view, "Condensing pressure, hottest day", "gauge pressure", "p_cond_Pa", "hottest"),
    )


def _highest(view: View) -> float | None:
    """Return the highest condensing pressure known, absolute; None if none is. [Pa]"""
    if conditions(view.entry):
        return worst(view.entry, "p_cond_Pa").value
    return view.entry.at_rest.p_condensing_Pa if view.entry.at_rest else None


def high_side(view: View) -> Iterator[Component]:
    """Compare condensing with the nameplate of the high side."""
    plate = view.case.plant.high_side_limit_Pa
    missing, highest = [view.gap("hottest")], _highest(view)
    fact = "It does not condense" if highest is None else f"Condensing reaches {_gauge(view, highest)}"
    share = view.share(highest, plate)
    if plate is None:
        missing.insert(0, not_given("plant.high_side_limit"))
    elif share is not None:
        fact += f", {share_text(share)} of the nameplate pressure"
    measures = (*_condensing(view), view.pressures("Nameplate of the high side", OldNew(plate, plate)))
    ask = "Written confirmation of the maximum pressure of each vessel and part of the high side."
    bound = Bound(view.limits["high_side"])
    yield judged(
        Matter("high-side", "High side, nameplate", f"{fact}.", measures, (bound,), ask),
        [view.level("high-side")],
        missing,
    )


def switch(view: View) -> Iterator[Component]:
    """Compare the high-pressure switch, which stays with the vessel, with nameplate and hottest day."""
    given = view.case.controls.high_pressure_cut_out_Pa if view.case.controls else None
    cut_out = present(given)
    plate, highest = view.case.plant.high_side_limit_Pa, _highest(view)
    assert highest is not None, "asked for solved refrigerants only"
    bounds = Bound(view.limits["switch_setting"]), Bound(view.limits["switch_margin"])
    ask = "Range of the switch; which setting the vessel, not the refrigerant, allows."
    measures = (view.pressures("Cut-out", OldNew(cut_out, cut_out)), *_condensing(view))
    gaps: list[Gap] = [] if plate is not None else [not_given("plant.high_side_limit")]
    if given is ABSENT:
        fact = "The plant has no high-pressure switch: whether it needs one with this refrigerant is to be proven."
        matter = Matter("high-pressure-switch", "High-pressure switch", fact, measures, bounds, ask)
        yield stated(matter, "keep" if view.is_today else "adjust")
        return
    share = view.share(highest, cut_out)
    if cut_out is None or share is None:
        matter = Matter("high-pressure-switch", "High-pressure switch", "", measures, bounds, ask)
        yield judged(matter, [], [not_given("controls.high_pressure_cut_out")])
        return
    levels = [bounds[1].level(share)]
    fact = f"Condensing reaches {_gauge(view, highest)}, {share_text(share)} of the cut-out at {_gauge(view, cut_out)}"
    of_plate, condensing_of_plate = view.share(cut_out, plate), view.share(highest, plate)
    if of_plate is not None and condensing_of_plate is not None:
        levels.append(bounds[0].level(of_plate))
        fact += f", which is {share_text(of_plate)} of the nameplate"
        # A switch set too low can be raised as far as the vessel allows.
        if max(of_plate, condensing_of_plate) < (bounds[0].limit.work or 1.0):
            levels[0] = "work" if levels[0] else None
    matter = Matter("high-pressure-switch", "High-pressure switch", f"{fact}.", measures, bounds, ask)
    yield judged(matter, levels, [*gaps, view.numbers.new.missing["hottest"]])


def relief(view: View) -> Iterator[Component]:
    """Compare the relief valve of the high side with the highest pressure in operation and at rest."""
    given = view.case.plant.relief_setting_Pa
    setting, rest = present(given), _rest(view).new
    plate, operating = view.case.plant.high_side_limit_Pa, _highest(view)
    bounds = Bound(view.limits["relief_margin"], "below"), Bound(view.limits["relief_seep"])
    measures = (
        view.pressures("Relief setting", OldNew(setting, setting)),
        *_condensing(view),
        _at_rest(view),
    )
    ask = "Setting, capacity and date of the relief valve; whether its material suits the refrigerant."
    if given is ABSENT:
        matter = Matter("relief", "Relief valve, setting", NO_RELIEF, measures, bounds, ask)
        yield stated(matter, "keep" if view.is_today else "adjust")
        return
    if setting is None:
        matter = Matter("relief", "Relief valve, setting", "", measures, bounds, ask)
        yield judged(matter, [], [not_given("plant.relief_setting")])
        return
    levels, fact = [view.level("relief")], f"It opens at {_gauge(view, setting)}"
    share, at_rest, of_plate = view.share(operating, setting), view.share(rest, setting), view.share(setting, plate)
    if operating is not None and share is not None:
        margin = times_below(share)
        levels += [bounds[0].level(margin), bounds[1].level(share)]
        times = f"{margin:.2f} times" if math.isfinite(margin) else "above"
        fact += f", {times} the {_gauge(view, operating)} reached in operation"
    if rest is not None and at_rest is not None:
        levels.append(bounds[1].level(at_rest))
        fact += f"; at rest there are {_gauge(view, rest)}"
    if plate is not None and of_plate is not None and of_plate > 1.0 + ABOVE_PLATE:
        fact += f"; it is set above the nameplate's {_gauge(view, plate)}"
    gaps = [view.gap(name) for name in ("hottest", "standstill")]
    if plate is None:
        gaps.append(not_given("plant.high_side_limit"))
    matter = Matter("relief", "Relief valve, setting", f"{fact}.", measures, bounds, ask)
    yield judged(matter, levels, gaps)


def relief_capacity(view: View) -> Iterator[Component]:
    """Say that the capacity of the relief valve has to be reckoned again for another refrigerant."""
    if view.is_today:
        return
    name, source = "Relief valve, capacity", "ASHRAE 15 and EN 13136: capacity depends on the refrigerant (from memory)"
    if view.case.plant.relief_setting_Pa is ABSENT:
        yield stated(Matter("relief-capacity", name, "The plant has no relief valve."), "keep", source=source)
        return
    fact = "The flow that has to be let off differs between refrigerants."
    ask = "Required flow by the standard that applies (its factor for this refrigerant), against the flow stamped."
    matter = Matter("relief-capacity", name, fact, ask=ask)
    yield answered(view, matter, "relief_capacity", stated(matter, "unknown", source=source))


def _at_rest(view: View) -> Measure:
    return view.pressures("Pressure at rest", _rest(view))


def _rest(view: View) -> OldNew:
    return OldNew(*(entry.at_rest.p_Pa if entry.at_rest else None for entry in (view.comparison.existing, view.entry)))


def standstill(view: View) -> Iterator[Component]:
    """Compare the bubble pressure at the highest ambient temperature with the weakest side."""
    plant, rest = view.case.plant, _rest(view).new
    low, high = plant.low_side_limit_Pa, plant.high_side_limit_Pa
    weakest = min((plate for plate in (low, high) if plate is not None), default=None)
    bound = Bound(view.limits["standstill"])
    measures = (
        _at_rest(view),
        view.pressures("Nameplate of the low side", OldNew(low, low)),
        view.pressures("Nameplate of the high side", OldNew(high, high)),
    )
    gaps = [view.gap("standstill")]
    gaps += [not_given("plant.low_side_limit")] if low is None else []
    share = view.share(rest, weakest)
    fact = ""
    if rest is not None:
        fact = f"At rest at the highest ambient temperature there are {_gauge(view, rest)}"
    if share is not None and weakest is not None:
        fact += f", {share_text(share)} of the lowest nameplate's {_gauge(view, weakest)}"
    ask = "Maximum pressure of the low side: evaporators, suction accumulators, crankcase."
    matter = Matter("standstill", "Low side at standstill", f"{fact}." if fact else "", measures, (bound,), ask)
    yield judged(matter, [view.level("standstill"), bound.level(share)], gaps)


def vacuum(view: View) -> Iterator[Component]:
    """Tell whether the low side falls below the pressure of the air around it, its switch included."""
    air, settings = view.case.plant.ambient_pressure_Pa, view.numbers.settings
    cut_out = next((item.p_Pa.new for item in settings if item.key == "low_pressure_cut_out"), None)
    levels = [view.level("vacuum")]
    lowest = worst(view.entry, "p_evap_Pa", min).value
    reached, around = (quantity("pressure", p_Pa, ".2f") for p_Pa in (lowest, air))
    fact = f"Evaporating at {reached}, the air at the plant has {around}"
    if cut_out is not None and cut_out < air:
        levels.append("work")
        fact += f"; the low-pressure switch would cut out at {quantity('pressure', cut_out, '.2f')}"
    measures = (
        performance_measure(view, "Evaporating pressure", "pressure", "p_evap_Pa"),
        Measure("Air pressure at the plant", "pressure", air, air),
    )
    ask = "Tightness of shaft seal, valves and joints under vacuum; where the low-pressure switch may be set."
    words = "not below the pressure of the air at the plant"
    matter = Matter("vacuum", "Low side against the air", f"{fact}.", measures, (), ask, words)
    yield judged(matter, levels)


def near_critical(view: View) -> Iterator[Component]:
    """Compare condensing with the critical temperature."""
    limit, new, old = view.limits["critical_distance"], view.numbers.new, view.numbers.old
    distance = new.T_critical_K - worst(view.entry, "T_cond_mean_K").value
    measures = (
        performance_measure(view, "Condensing temperature, hottest day", "temperature", "T_cond_mean_K", "hottest"),
        performance_measure(view, "Condensing temperature, design point", "temperature", "T_cond_mean_K"),
        Measure("Critical temperature", "temperature", old.T_critical_K, new.T_critical_K),
    )
    fact = f"Condensing comes within {quantity('temperature difference', distance, '.0f')} of the critical temperature."
    matter = Matter("near-critical", "Condenser, critical point", fact, measures, (Bound(limit, "below"),))
    yield judged(matter, [view.level("near-critical")], [new.missing["hottest"]])


ROWS = (high_side, switch, relief, relief_capacity, standstill, vacuum, near_critical)
# What needs no cycle.
ROWS_AT_REST = (high_side, relief, standstill)
