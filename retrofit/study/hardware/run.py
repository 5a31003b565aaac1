"""All numbers of the hardware with one refrigerant, beside those of today's."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from retrofit.case import Case, present
from retrofit.equipment.oil import residual_oil
from retrofit.equipment.valve import (
    Distribution,
    Throttle,
    distributor_loading,
    pressure_over_valve,
    throttle_fit,
)
from retrofit.equipment.vessels import charge_estimate, vessel_fill
from retrofit.properties import Fluid
from retrofit.study.gaps import KNOWN, Gap, not_given
from retrofit.study.hardware.conditions import (
    CANDIDATES,
    HIGHEST_INLET,
    Site,
    hottest_day,
    pull_down,
    standstill_pressure,
)
from retrofit.study.hardware.lines import discharge_line, liquid_line, number, suction_line
from retrofit.study.hardware.numbers import (
    Distributing,
    Filling,
    HardwareNumbers,
    OldNew,
    Side,
    Throttling,
)
from retrofit.study.hardware.settings import settings_of
from retrofit.study.result import Entry, Performance

FULL_LOAD = 0.95  # a current read at less than this share of the duty says nothing on full load


@dataclass(frozen=True)
class Today:
    """Today's refrigerant on both bases, reckoned once for all candidates."""

    site: Site
    behaviour: Fluid
    sides: Mapping[str, Side]


def today_of(site: Site, behaviour: Fluid, entry: Entry) -> Today:
    """Return today's refrigerant on every basis that it has.

    Args:
        site: The plant and what is held equal.
        behaviour: Today's refrigerant.
        entry: Its entry, solved.
    """
    return Today(site, behaviour, {basis: _side(site, behaviour, entry, basis) for basis in _bases(entry)})


def _bases(entry: Entry) -> tuple[str, ...]:
    """Return the bases an entry has, the best first."""
    return ("plant", "compressor") if entry.plant is not None else ("compressor",)


def hardware_numbers(today: Today, behaviour: Fluid, entry: Entry) -> HardwareNumbers:
    """Return the numbers of the hardware with a refrigerant, old and new on the best basis that both have.

    Args:
        today: Today's refrigerant.
        behaviour: The refrigerant.
        entry: Its entry, solved.
    """
    site = today.site
    basis = next(basis for basis in _bases(entry) if basis in today.sides)
    old = today.sides[basis]
    is_today = behaviour.designation == today.behaviour.designation
    new = old if is_today else _comparable(old, _side(site, behaviour, entry, basis))
    current, pull_down_current, no_current = _currents(site.case, old, new)
    distributor = _distributor(old, new)
    filling, no_filling = _filling(site.case, (today.behaviour, old), (behaviour, new))
    oil, no_oil = _residual_oil(site.case)
    return HardwareNumbers(
        basis=basis,
        old=old,
        new=new,
        current_A=current,
        pull_down_current_A=pull_down_current,
        valve=_valve(site.case, old, new, distributor),
        distributor=distributor,
        filling=filling,
        subcooling_left_K=_subcooling_left(site.case, old, new),
        residual_oil=oil,
        settings=settings_of(site, (today.behaviour, old.design), behaviour),
        missing={"current": no_current, "filling": no_filling, "residual_oil": no_oil},
    )


def _comparable(old: Side, new: Side) -> Side:
    """Return a side without a hottest day on which today's plant, which carries its duty, does not run either."""
    if old.hottest is not None or new.hottest is None:
        return new
    words = (
        f"{old.refrigerant} has no solution on a day that hot, so that `highest_ambient` in [plant] is taken to hold "
        "at standstill only"
    )
    reason = Gap(words, (HIGHEST_INLET,))
    return replace(new, hottest=None, missing={**new.missing, "hottest": reason})


def _side(site: Site, behaviour: Fluid, entry: Entry, basis: str) -> Side:
    """Return what the components see with a refrigerant."""
    design = entry.plant.full if basis == "plant" and entry.plant else entry.compressor
    assert design is not None
    hottest, highest = (
        hottest_day(site, behaviour, entry.plant if basis == "plant" else None),
        pull_down(site, behaviour, design),
    )
    p_rest, no_rest = standstill_pressure(site.case, behaviour)
    inside, lines = behaviour.as_lenient(), site.case.lines
    liquid = inside.liquid(design.p_cond_Pa, site.settings.subcooling_K)
    inlet = inside.two_phase(design.p_evap_Pa, liquid.h_J_per_kg)
    return Side(
        refrigerant=behaviour.designation,
        design=design,
        hottest=hottest.performance,
        pull_down=highest.performance,
        p_standstill_Pa=p_rest,
        T_critical_K=behaviour.T_critical_K,
        liquid_density_kg_per_m3=number(liquid.density_kg_per_m3),
        inlet_density_kg_per_m3=number(inlet.density_kg_per_m3),
        suction=suction_line(lines.suction if lines else None, inside, design, site.settings),
        discharge=discharge_line(lines.discharge if lines else None, inside, design, site.settings),
        liquid=liquid_line(lines.liquid if lines else None, inside, design, site.settings),
        missing={
            "hottest": hottest.reason,
            "pull_down": highest.reason,
            "standstill": no_rest,
            "viscosity": Gap("; ".join(behaviour.viscosity_gaps), ("approvals.lines",)),
        },
    )


def _currents(case: Case, old: Side, new: Side) -> tuple[OldNew, OldNew, Gap]:
    """Return motor currents at the design point and at pull-down: the current read, by the ratio of powers.

    Source: at equal voltage and power factor current goes with power.
    """
    readings = case.readings
    if readings is None or readings.current_A is None:
        return OldNew(), OldNew(), not_given("readings.current")
    if readings.load is not None and readings.load < FULL_LOAD:
        words = f"the current was read at {readings.load:.0%} load; read it at full load"
        return OldNew(), OldNew(), Gap(words, ("readings.current", "readings.load"))
    per_watt = readings.current_A / old.design.power_W

    def current(found: Performance[float] | None) -> float | None:
        return None if found is None else found.power_W * per_watt

    at_design = OldNew(current(old.design), current(new.design))
    return at_design, OldNew(current(old.pull_down), current(new.pull_down)), KNOWN


def _distributor(old: Side, new: Side) -> Distributing | None:
    if old.inlet_density_kg_per_m3 is None or new.inlet_density_kg_per_m3 is None:
        return None
    entering = [
        Distribution(side.design.cooling_W, side.design.refrigerating_effect_J_per_kg, density)
        for side, density in ((new, new.inlet_density_kg_per_m3), (old, old.inlet_density_kg_per_m3))
    ]
    found = distributor_loading(*entering)
    return Distributing(float(found.mass_flow_ratio), float(found.volume_flow_ratio), float(found.pressure_drop_ratio))


def _valve(case: Case, old: Side, new: Side, distributor: Distributing | None) -> Throttling | None:
    """Return today's opening with another refrigerant, with the pressure difference that is really there."""
    before_old, before_new = old.liquid_density_kg_per_m3, new.liquid_density_kg_per_m3
    if before_old is None or before_new is None or distributor is None:
        return None
    table = case.valve
    scale = distributor.mass_flow_ratio**2 * before_old / before_new
    liquid, words = _liquid_loss(case, old, new, scale)
    behind = table.distributor_loss_Pa if table else None
    words.append("the distributor's pressure drop" if behind is not None else "no pressure drop of the distributor")
    losses = [
        (liquid.old or 0.0, behind or 0.0),
        (liquid.new or 0.0, (behind or 0.0) * distributor.pressure_drop_ratio),
    ]
    throttles = [
        Throttle(
            side.design.refrigerating_effect_J_per_kg,
            density,
            pressure_over_valve(side.design.p_cond_Pa, side.design.p_evap_Pa, *taken),
        )
        for side, density, taken in zip((old, new), (before_old, before_new), losses, strict=True)
    ]
    fit = throttle_fit(throttles[1], throttles[0], new.design.cooling_W / old.design.cooling_W)
    if number(fit.fit) is None:
        return None
    return Throttling(
        pressure_difference_Pa=OldNew(*(number(throttle.pressure_difference_Pa) for throttle in throttles)),
        flow_ratio=float(fit.flow_ratio),
        capacity_ratio=float(fit.capacity_ratio),
        load_ratio=float(fit.load_ratio),
        fit=float(fit.fit),
        losses=" and ".join(words),
    )


def _liquid_loss(case: Case, old: Side, new: Side, scale: float) -> tuple[OldNew, list[str]]:
    """Return the pressure lost before the valve, given or reckoned from the line, and which of the two."""
    given = case.valve.liquid_line_loss_Pa if case.valve else None
    if given is not None:
        return OldNew(given, given * scale), ["the loss of the liquid line"]
    lost = [
        None if side.liquid is None or side.liquid.pressure_drop_Pa is None
        else side.liquid.pressure_drop_Pa + (side.liquid.static_head_Pa or 0.0)
        for side in (old, new)
    ]  # fmt: skip
    if None in lost:
        return OldNew(), ["no loss of the liquid line"]
    return OldNew(*lost), ["friction and height of the liquid line"]


def _filling(case: Case, old: tuple[Fluid, Side], new: tuple[Fluid, Side]) -> tuple[Filling | None, Gap]:
    """Return a first estimate of the charge and how full the receiver is with all of it."""
    charge = case.plant.charge_kg
    densities = old[1].liquid_density_kg_per_m3, new[1].liquid_density_kg_per_m3
    if charge is None:
        return None, not_given("plant.charge")
    if densities[0] is None or densities[1] is None:
        return None, Gap("the density of the liquid is outside the model", (CANDIDATES,))
    found = charge_estimate(charge, densities[0], densities[1])
    T_K = max(case.plant.highest_ambient_K or 0.0, *(side.design.T_cond_bubble_K for side in (old[1], new[1])))
    fill = OldNew(
        _receiver_share(case, old[0], T_K, charge), _receiver_share(case, new[0], T_K, float(found.expected_kg))
    )
    numbers = (float(found.lowest_kg), float(found.expected_kg), float(found.highest_kg))
    return Filling(charge, *numbers, fill, T_K), KNOWN


def _receiver_share(case: Case, behaviour: Fluid, T_K: float, charge_kg: float) -> float | None:
    volume_m3 = present(case.receiver.volume_m3) if case.receiver else None
    return None if volume_m3 is None else number(vessel_fill(behaviour, T_K, volume_m3, charge_kg, 1.0).share)


def _subcooling_left(case: Case, old: Side, new: Side) -> OldNew:
    """Return the subcooling at the valve: today's is that of the case, and the condenser gives as much as today."""
    at_valve = case.duty.subcooling_K
    if old.liquid is None or new.liquid is None:
        return OldNew()
    needed = old.liquid.subcooling_needed_K, new.liquid.subcooling_needed_K
    if needed[0] is None or needed[1] is None:
        return OldNew()
    return OldNew(at_valve, at_valve + needed[0] - needed[1])


def _residual_oil(case: Case) -> tuple[float | None, Gap]:
    plant = case.plant
    absent = [f"plant.{key}" for key in ("oil_changes", "oil_left") if getattr(plant, key) is None]
    if absent:
        return None, not_given(*absent)
    assert plant.oil_left is not None
    assert plant.oil_changes is not None
    return float(residual_oil(plant.oil_left, plant.oil_changes)), KNOWN
