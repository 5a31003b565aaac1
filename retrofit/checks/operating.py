"""The gates on pressures, temperatures and the load of motor and condenser, each at its worst corner.

No gate changes a number, and none says that a thing may be done.
"""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.checks.corners import Corner, worst
from retrofit.checks.gauge import share_of_limit, share_text
from retrofit.checks.thresholds import Threshold, thresholds_for
from retrofit.study import AtRest, Comparison, Entry, Finding, Level
from retrofit.study.hardware.conditions import hottest_day_keys
from retrofit.units import quantity


def limit_of(comparison: Comparison, name: str) -> Threshold:
    """Return a threshold, the user's own if the case has one."""
    return thresholds_for(comparison.case)[name]


def discharge_limit(comparison: Comparison) -> str:
    """Return the name of the threshold of the discharge temperature: one oil bears less than the others."""
    is_pve = comparison.case.plant.oil == "polyvinyl ether"
    return "discharge_temperature_pve" if is_pve else "discharge_temperature"


def discharge_temperature(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the discharge temperature with what oil and valves bear."""
    if entry.duty is None:
        return
    limit, corner = limit_of(comparison, discharge_limit(comparison)), worst(entry, "T_discharge_K")
    level, found = limit.level_of(corner.value), quantity("temperature", corner.value, ".0f")
    if level is not None:
        yield Finding(
            "discharge-temperature",
            level,
            "Hot discharge",
            f"{found} at the compressor outlet{corner.where}, against {limit.figures_in()}.",
            "Ask the maker; lower return-gas temperature, head cooling or liquid injection are the usual ways.",
            limit.source,
        )
    if entry.T_limit_K is not None and corner.value > entry.T_limit_K:
        yield Finding(
            "model-range",
            "note",
            "Discharge beyond the range of the equation of state",
            f"{found} is above {quantity('temperature', entry.T_limit_K, '.0f')}, up to where the equation of state of "
            "every component is stated to hold.",
            "The discharge temperature is an extrapolation.",
            "limits in the property library",
        )


def pressure_ratio(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the pressure ratio with what one stage does."""
    if entry.duty is None:
        return
    limit, corner = limit_of(comparison, "pressure_ratio"), worst(entry, "pressure_ratio")
    level = limit.level(corner.value)
    if level is not None:
        yield Finding(
            "pressure-ratio",
            level,
            "High pressure ratio",
            f"{corner.value:.1f} (absolute){corner.where}, against {limit.figures_in()}.",
            "Ask the maker for the envelope with this refrigerant.",
            limit.source,
        )


def high_side(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the condensing pressure with the nameplate of the high side, also where the cycle is not solved."""
    plant, limit = comparison.case.plant, limit_of(comparison, "high_side")
    assert entry.at_rest is not None, "every entry of a comparison has one"
    if entry.duty is None and entry.at_rest.can_condense is False:
        yield _cannot_condense(entry.at_rest, limit)
        return
    if plant.high_side_limit_Pa is None:
        yield Finding(
            "high-side",
            Level.UNKNOWN,
            "Nameplate pressure not given",
            f"{_condensing_words(entry)} cannot be compared with what the high side is rated for.",
            "Give `high_side_limit` in [plant].",
            limit.source,
            ("plant.high_side_limit",),
            decisive=True,
        )
        return
    corner = Corner(entry.at_rest.p_condensing_Pa, "") if entry.at_rest.p_condensing_Pa else None
    corner = worst(entry, "p_cond_Pa") if entry.duty else corner
    if corner is None:
        return  # "not computed" is said once, and is decisive
    # Nameplates and switches count from the air around them.
    air = plant.ambient_pressure_Pa
    share = share_of_limit(corner.value, plant.high_side_limit_Pa, air)
    level = limit.level(share)
    if level is not None:
        yield Finding(
            "high-side",
            level,
            "Condensing pressure close to or above the nameplate",
            f"{quantity('gauge pressure', corner.value - air, '.1f')}"
            f"{corner.where or ' at the condensing temperature of the case'}, {share_text(share)} of the "
            f"nameplate's {quantity('gauge pressure', plant.high_side_limit_Pa - air, '.1f')}, against "
            f"{limit.figures_in('of it')}.",
            "Check switch, relief valve and vessel, and the hottest day if it is not given.",
            limit.source,
        )


def _condensing_words(entry: Entry) -> str:
    if entry.duty is None:
        return "The condensing pressure"
    return f"Condensing at {quantity('pressure', entry.duty.p_cond_Pa, '.1f')}"


def _cannot_condense(rest: AtRest, limit: Threshold) -> Finding:
    assert rest.T_critical_K is not None
    return Finding(
        "high-side",
        Level.STOP,
        "Does not condense in this plant",
        f"critical temperature {quantity('temperature', rest.T_critical_K, '.0f')}, condensing at "
        f"{quantity('temperature', rest.T_condensing_K, '.0f')} in the case.",
        "Only a plant built for it can use this refrigerant.",
        limit.source,
    )


def hottest_day(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Say where pressures on the hottest day are not known: no rating can be compared with them."""
    numbers = entry.hardware_numbers
    if numbers is None or numbers.new.hottest is not None:
        return
    keys, source = hottest_day_keys(comparison.case), limit_of(comparison, "high_side").source
    if not keys and numbers.old.hottest is None:
        return  # today's plant does not run on such a day either: the temperature holds at rest only
    fact = "The condensing pressure on the hottest day is not known."
    if keys:
        advice = f"Give {', '.join(f'`{key}`' for key in keys)}."
    else:
        gap = numbers.new.missing["hottest"]
        advice, keys = f"{gap.words[:1].upper()}{gap.words[1:]}.", gap.keys
    yield Finding("hottest-day", Level.UNKNOWN, "Hottest day not computed", fact, advice, source, keys, decisive=True)


def near_critical(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the condensing temperature with the critical one."""
    if entry.duty is None or entry.lines is None:
        return
    limit = limit_of(comparison, "critical_distance")
    corner = worst(entry, "T_cond_mean_K")
    distance = entry.lines.T_critical_K - corner.value
    level = limit.level_below(distance)
    if level is not None:
        yield Finding(
            "near-critical",
            level,
            "Condensing near the critical temperature",
            f"{quantity('temperature difference', distance, '.0f')} below the critical temperature of "
            f"{quantity('temperature', entry.lines.T_critical_K, '.0f')}{corner.where}, against {limit.figures_in()}.",
            "On a hotter day capacity and COP fall fast.",
            limit.source,
        )


def vacuum(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Tell where the low side runs below the pressure of the air around it."""
    if entry.duty is None:
        return
    ambient = comparison.case.plant.ambient_pressure_Pa
    corner = worst(entry, "p_evap_Pa", min)
    if corner.value < ambient:
        yield Finding(
            "vacuum",
            "work",
            "Low side below atmospheric pressure",
            f"Evaporating at {quantity('pressure', corner.value, '.2f')}{corner.where}; the air at the plant has "
            f"{quantity('pressure', ambient, '.2f')}.",
            "Air and moisture are drawn in through any leak, and leaks cannot be found from outside.",
            "physics",
        )


def motor_load(comparison: Comparison, entry: Entry) -> Corner | None:
    """Return the motor current over the rated one at its worst corner, None if the case does not give both. [-]"""
    rated, numbers = comparison.case.compressor.rated_current_A, entry.hardware_numbers
    if rated is None or numbers is None or numbers.current_A.new is None:
        return None
    at_design, pull_down = Corner(numbers.current_A.new / rated, ""), numbers.pull_down_current_A.new
    if pull_down is None or pull_down / rated <= at_design.value:
        return at_design
    return Corner(pull_down / rated, " at pull-down")


def motor(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the motor current with the rated one, or, if currents are not given, power with today's."""
    if entry is comparison.existing or not entry.relative:
        return
    corner, rated = motor_load(comparison, entry), comparison.case.compressor.rated_current_A
    if corner is not None and rated is not None:
        limit = limit_of(comparison, "motor_current")
        if limit.level(corner.value) is not None:
            yield Finding(
                "motor",
                "work",
                "Motor near or above its rated current",
                f"{corner.value * rated:.4g} A{corner.where}, {corner.value:.0%} of the rated {rated:.4g} A, against "
                f"{limit.figures_in('of it')}.",
                "Ask the maker for the highest continuous current; limit the suction pressure or change the motor.",
                limit.source,
            )
        return
    limit, ratio = limit_of(comparison, "motor_power"), entry.relative.get("plant_power", entry.relative["power"])
    level = limit.level(ratio)
    if level is not None:
        yield Finding(
            "motor",
            level,
            "More compressor power",
            f"{ratio:.2f} times today's power with the same compressor.",
            "Compare motor current with the plate, at this point and at pull-down.",
            limit.source,
        )


def condenser(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the heat rejected with today's: a stop only while it is not known how far condensing rises."""
    if entry is comparison.existing or not entry.relative:
        return
    limit = limit_of(comparison, "heat_rejected")
    balanced = entry.relative.get("plant_heat_rejected")
    ratio = entry.relative["heat_rejected"] if balanced is None else balanced
    level = limit.level(ratio)
    if level is None:
        return
    rise = "The condensing temperature will rise unless the condenser has room."
    counted = "The plant as installed is balanced with it: its condensing temperature counts this heat."
    yield Finding(
        "condenser",
        level if balanced is None else "work",
        "More heat to reject",
        f"{ratio:.2f} times today's heat with the same compressor, against {limit.figures_in('times')}.",
        rise if balanced is None else counted,
        limit.source,
    )
