"""The gates on what needs no cycle: the plant at rest on its hottest day, and its relief valve.

They run for every refrigerant, also where the cycle cannot be solved. Of a new plant they say nothing: it gets
nameplates of its own.
"""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.case import ABSENT
from retrofit.checks.corners import conditions, worst
from retrofit.checks.gauge import share_of_limit, share_text, times_below
from retrofit.checks.thresholds import thresholds_for
from retrofit.study import AtRest, Comparison, Entry, Finding, Level, RestState
from retrofit.units import quantity

AMBIENT, LOW_SIDE, HIGH_SIDE = "plant.highest_ambient", "plant.low_side_limit", "plant.high_side_limit"
RELIEF = "plant.relief_setting"
NO_RELIEF = "The plant has no relief valve: whether its vessels need one with this refrigerant is to be proven."
RELIEF_BY = "By the standard that applies: volume and pressure of each vessel, class and charge of the refrigerant."
ABOVE_PLATE = 1e-6  # by how much a setting may pass a nameplate through rounding of units
NOTHING_SHOWN = "Nothing shows that the plant holds it. Treat it as a new plant built for this refrigerant."


def standstill(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the pressure at rest at the highest ambient temperature with the weakest side of the plant."""
    rest = entry.at_rest
    assert rest is not None, "every entry of a comparison has one"
    limit = thresholds_for(comparison.case)["standstill"]
    if rest.state == RestState.NO_AMBIENT:
        yield _unknown(
            "standstill",
            "Highest ambient temperature not given",
            "The pressure at rest on the hottest day cannot be compared with the rating.",
            (AMBIENT,),
            limit.source,
        )
    elif rest.state == RestState.COMPUTED:
        yield from _against_plates(comparison, entry, rest)
    else:
        yield from _no_pressure(comparison, entry, rest)


def _no_pressure(comparison: Comparison, entry: Entry, rest: AtRest) -> Iterator[Finding]:
    """Stop a candidate whose pressure at rest has no bound; today's refrigerant is unknown, since it is in there."""
    assert rest.T_highest_K is not None
    around = quantity("temperature", rest.T_highest_K, ".0f")
    if rest.T_critical_K is None:
        fact = f"there is no model of it, so its pressure at {around} is not known."
    elif rest.state == RestState.ABOVE_CRITICAL:
        critical = quantity("temperature", rest.T_critical_K, ".0f")
        fact = (
            f"critical temperature {critical}, at or below the highest ambient temperature of {around}: no liquid is "
            "left at rest, and charge and volume set the pressure."
        )
    else:
        critical = quantity("temperature", rest.T_critical_K, ".0f")
        fact = f"its model gives no pressure at {around}, near its critical temperature of {critical}."
    source = thresholds_for(comparison.case)["standstill"].source
    title = "Pressure at rest on the hottest day not bounded"
    if entry is comparison.existing:
        yield _unknown("standstill", title, fact, (), source)
    else:
        yield Finding("standstill", Level.STOP, title, fact, NOTHING_SHOWN, source)


def _against_plates(comparison: Comparison, entry: Entry, rest: AtRest) -> Iterator[Finding]:
    plant, limit = comparison.case.plant, thresholds_for(comparison.case)["standstill"]
    assert rest.p_Pa is not None
    air = plant.ambient_pressure_Pa
    plates = {
        name: p_Pa
        for name, p_Pa in (("low side", plant.low_side_limit_Pa), ("high side", plant.high_side_limit_Pa))
        if p_Pa is not None
    }
    at_rest = f"{quantity('gauge pressure', rest.p_Pa - air, '.1f')} at rest at the highest ambient temperature"
    if plates:
        side = min(plates, key=lambda name: plates[name])
        share = share_of_limit(rest.p_Pa, plates[side], air)
        if limit.level(share) == Level.STOP:
            yield Finding(
                "standstill",
                Level.STOP,
                "Pressure at rest above the rating",
                f"{at_rest}, {share_text(share)} of the {quantity('gauge pressure', plates[side] - air, '.1f')} of "
                f"the {side}, against {limit.figures_in('of it')}.",
                "A lower charge or a relief valve does not lower the pressure at rest while liquid is left.",
                limit.source,
            )
            return
    if "low side" not in plates:
        yield _unknown(
            "standstill",
            "Rating of the low side not given",
            f"{at_rest} cannot be compared with what the low side is rated for.",
            (LOW_SIDE,),
            limit.source,
        )


def relief(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the relief valve of the high side with nameplate, operation and rest."""
    plant, limits = comparison.case.plant, thresholds_for(comparison.case)
    margin, air = limits["relief_margin"], plant.ambient_pressure_Pa
    if plant.relief_setting_Pa is None:
        yield _unknown(
            "relief",
            "Setting of the relief valve not given",
            "Whether it opens above the pressures of operation and rest, and not above the rating, is not known.",
            (RELIEF,),
            margin.source,
        )
        return
    if plant.relief_setting_Pa is ABSENT:
        if entry is not comparison.existing:
            yield Finding("relief", Level.WORK, "No relief valve", NO_RELIEF, RELIEF_BY, margin.source)
        return
    setting, plate, facts = plant.relief_setting_Pa, plant.high_side_limit_Pa, []
    operating = worst(entry, "p_cond_Pa").value if conditions(entry) else None
    rest = entry.at_rest.p_Pa if entry.at_rest else None
    if operating is not None:
        times = times_below(share_of_limit(operating, setting, air))
        if margin.level_below(times) == Level.STOP:
            facts.append(f"{quantity('gauge pressure', operating - air, '.1f')} is reached in operation")
    if rest is not None and share_of_limit(rest, setting, air) > 1.0:
        facts.append(f"{quantity('gauge pressure', rest - air, '.1f')} at rest")
    if plate is not None and share_of_limit(setting, plate, air) > 1.0 + ABOVE_PLATE:
        facts.append(f"the nameplate says {quantity('gauge pressure', plate - air, '.1f')}")
    if facts:
        yield Finding(
            "relief",
            Level.STOP,
            "Relief valve does not fit",
            f"it opens at {quantity('gauge pressure', setting - air, '.1f')}; {'; '.join(facts)}.",
            "Setting, capacity and date of the relief valve; whether its material suits the refrigerant.",
            margin.source,
        )


def _unknown(code: str, title: str, fact: str, missing: tuple[str, ...], source: str) -> Finding:
    advice = f"Give {' or '.join(f'`{key}`' for key in missing)}." if missing else "Ask the maker of the plant."
    return Finding(code, Level.UNKNOWN, title, fact, advice, source, missing, decisive=True)
