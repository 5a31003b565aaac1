"""What an option warms over the remaining life (TEWI): leaks, the end, the change, and the electricity.

All numbers are arrays over draws or single numbers; a year by year array has the years as its last axis.
"""

from __future__ import annotations

import datetime
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from retrofit.case import EDITIONS, Case, Emissions
from retrofit.refrigerants import Refrigerant
from retrofit.study.plan import Plan, Use, life_years, start_year
from retrofit.study.spread import FloatArray, Pick, Spread, low_base_high, single

LEFT_OUT = (
    "making and scrapping the plant and its parts",
    "making the refrigerant, and its breakdown in the air",
    "blowing agent of the insulation",
    "leaks while refrigerant is made, moved and charged",
)
"""Parts of a life-cycle account that a TEWI leaves out."""
FORMULA = (
    "TEWI = GWP x leak rate x charge x years + GWP x charge x (1 - recovery at the end) + electricity x grid factor; "
    "at a change also GWP of the old refrigerant x what of its charge is lost (EN 378-1, annex on TEWI; from memory)"
)


@dataclass(frozen=True)
class Gwp:
    """A GWP over 100 years: the value, None if no edition gives one; its edition; and what is doubtful about it."""

    value: float | None
    edition: str
    doubt: str


def gwp_of(refrigerant: Refrigerant, edition: str) -> Gwp:
    """Return the GWP of a refrigerant over 100 years.

    Args:
        refrigerant: The refrigerant.
        edition: Report that counts, such as "AR5".
    Returns: Its value there; if that report gives none, the one of another report with a word on it.
    """
    for asked in (edition, *(other for other in EDITIONS if other != edition)):
        value = getattr(refrigerant, f"gwp_100yr_{asked.lower()}")
        if value.number is None:
            continue
        incomplete = "a component without a value counts as 0" if value.status == "incomplete" else ""
        other = f"{edition} gives none, that of {asked} is taken" if asked != edition else ""
        memory = "from memory" if value.basis == "memory" else ""
        doubts = (part for part in (other, incomplete, memory, value.note) if part)
        return Gwp(value.number, asked, "; ".join(doubts))
    return Gwp(None, edition, "no report gives one")


def edition_of(case: Case) -> str:
    """Return the report whose GWP counts: that of the case, or its default.

    Args:
        case: The case.
    """
    return (case.emissions or Emissions.model_validate({})).gwp_edition


@dataclass(frozen=True)
class Tewi:
    """Warming of an option over the remaining life; numbers or arrays over draws, None where `missing` says why.

    Attributes:
        leaks_kg, end_of_life_kg, change_kg: Refrigerant lost in running, at the end and at the change. [kg CO2e]
        direct_kg, indirect_kg, total_kg: All of the refrigerant, all of the electricity, and both. [kg CO2e]
        years: Ends of the years counted from the change, the first 0, the last the remaining life; shape (..., m).
        direct_by_year_kg, indirect_by_year_kg: The same by year: the change first, then each year, the end in the
            last; shape (..., m).
        leak_kg_per_year: Refrigerant lost and bought again in a year. [kg]
        gwp: The GWP counted with, its edition and its doubts.
        life_years: Remaining life.
        left_out: Parts of a life-cycle account that are not counted.
        missing: What is not known, and so not counted as anything.
    """

    leaks_kg: FloatArray | None
    end_of_life_kg: FloatArray | None
    change_kg: FloatArray | None
    direct_kg: FloatArray | None
    indirect_kg: FloatArray | None
    total_kg: FloatArray | None
    years: FloatArray | None
    direct_by_year_kg: FloatArray | None
    indirect_by_year_kg: FloatArray | None
    leak_kg_per_year: FloatArray | None
    gwp: Gwp
    life_years: FloatArray | None
    left_out: tuple[str, ...]
    missing: tuple[str, ...]


def tewi(
    case: Case, plan: Plan, old: Plan, use: Use, pick: Pick = low_base_high, on: datetime.date | None = None
) -> Tewi:
    """Return the warming of an option over the remaining life.

    Args:
        case: The case, whose [emissions] says what is counted.
        plan: The option.
        old: The plant as it is, whose charge a change takes out.
        use: Electricity of a year with the option.
        pick: What to take of each input's spread.
        on: Day the life begins if the case gives no date of change; only a grid factor by year needs it.
    Returns: The warming; parts that cannot be told are None, and so is every sum they belong to.
    Source: FORMULA.
    """
    emissions = case.emissions
    edition = edition_of(case)
    gwp, life = gwp_of(plan.refrigerant, edition), _life(case, pick)
    leak_kg = leaked_kg_per_year(plan, pick)
    missing = (*_missing(case, plan, gwp), *_missing_of_change(plan, old, edition))
    years = None if life is None else year_ends(life)
    leaks = _product(gwp.value, leak_kg, life)
    charge = None if plan.charge_kg is None else pick(plan.charge_key, plan.charge_kg)
    end = _product(gwp.value, charge, None if emissions is None else 1.0 - _share(emissions, "recovery_at_end", pick))
    change = _change_kg(emissions, plan, old, edition, pick)
    direct = _sum(leaks, end, change) if emissions else None
    per_year, missing_grid = _indirect(emissions, use, start_year(case, on), years, pick)
    indirect = None if per_year is None else per_year.sum(axis=-1)
    return Tewi(
        leaks_kg=leaks if emissions else None,
        end_of_life_kg=end,
        change_kg=change,
        direct_kg=direct,
        indirect_kg=indirect,
        total_kg=_sum(direct, indirect),
        years=years,
        direct_by_year_kg=None if direct is None else _direct_by_year(leaks, end, change, life, years),
        indirect_by_year_kg=per_year,
        leak_kg_per_year=leak_kg,
        gwp=gwp,
        life_years=life,
        left_out=LEFT_OUT,
        missing=tuple(dict.fromkeys((*missing, *missing_grid))),
    )


def leaked_kg_per_year(plan: Plan, pick: Pick) -> FloatArray | None:
    """Return the refrigerant lost and bought again in a year; None if charge or leak rate is not known. [kg]

    Args:
        plan: The option.
        pick: What to take of each input's spread.
    """
    if plan.charge_kg is None or plan.leak.spread is None:
        return None
    return pick(plan.charge_key, plan.charge_kg) * pick(plan.leak.key, plan.leak.spread)


def year_ends(life_years: ArrayLike) -> FloatArray:
    """Return the ends of the years from 0 to a life; the last year may be a part of one.

    Args:
        life_years: Life, shape () or (n,). [years]
    Returns: 0, 1, 2 ... and the life, shape (..., m); a shorter life than the longest stays where it ends. [years]
    """
    life = np.asarray(life_years, dtype=float)
    ends: FloatArray = np.minimum(np.arange(int(np.ceil(life.max())) + 1), life[..., None])
    return ends


def grid_integral(emissions: Emissions, start: float | None, ends: FloatArray) -> FloatArray:
    """Return the grid factor summed over time from the start, exact for factors that step with the calendar year.

    Args:
        emissions: The table [emissions] with a grid factor, or one by year.
        start: When the life begins, such as 2027.25; not used for one factor. [years]
        ends: Times since the start, any shape. [years]
    Returns: Sum of factor times time, in the shape of `ends`. [kg/J years]
    Source: integral of a step function; linear between the turns of the years. Before the first year given counts
        `grid_factor`, or the first one's where there is none.
    """
    if not emissions.grid_years:
        constant: FloatArray = np.multiply(emissions.grid_factor_kg_per_J or 0.0, ends)
        return constant
    steps = sorted(emissions.grid_years)
    first = emissions.grid_factor_kg_per_J
    factors = np.array([steps[0][1] if first is None else first, *(step[1] for step in steps)])
    begin = float(steps[0][0]) if start is None else start
    last = max(begin + float(ends.max()), steps[-1][0]) + 1.0
    turns = np.array([min(begin, steps[0][0]) - 1.0, *(float(step[0]) for step in steps), last])
    summed = np.concatenate(([0.0], np.cumsum(factors * np.diff(turns))))
    found: FloatArray = np.interp(begin + ends, turns, summed) - np.interp(begin, turns, summed)
    return found


# Parts


def _life(case: Case, pick: Pick) -> FloatArray | None:
    life = life_years(case)
    return None if life is None else pick("law.remaining_life", single(life))


def _share(emissions: Emissions, name: str, pick: Pick) -> FloatArray:
    return pick(f"emissions.{name}", single(getattr(emissions, name)))


def _change_kg(emissions: Emissions | None, plan: Plan, old: Plan, edition: str, pick: Pick) -> FloatArray | None:
    """Return what the old charge warms at the change: what is lost, or all of it if it is released."""
    if emissions is None:
        return None
    if not plan.is_change:
        return np.asarray(0.0)
    charge = None if old.charge_kg is None else pick(old.charge_key, old.charge_kg)
    lost = _share(emissions, "lost_at_change", pick) if emissions.old_charge == "recovered" else np.asarray(1.0)
    return _product(gwp_of(old.refrigerant, edition).value, charge, lost)


def _indirect(
    emissions: Emissions | None, use: Use, start: float | None, years: FloatArray | None, pick: Pick
) -> tuple[FloatArray | None, tuple[str, ...]]:
    """Return what the electricity warms, by year, and what is missing for it."""
    has_grid = emissions is not None and (emissions.grid_factor_kg_per_J is not None or emissions.grid_years)
    missing = [] if use.electricity_J is not None else ["electricity of a year"]
    missing += [] if has_grid else ["`grid_factor` or `grid_years` in [emissions]"]
    if has_grid and emissions is not None and emissions.grid_years and start is None:
        missing.append("`date_of_change` in [law], from which on the grid factors of the years count")
    if missing or emissions is None or years is None:
        return None, tuple(missing)
    electricity = np.asarray(use.electricity_J, dtype=float)[..., None]
    summed = grid_integral(emissions, start, years) * _grid_scale(emissions, pick)[..., None]
    first = np.zeros((*summed.shape[:-1], 1))
    return electricity * np.concatenate((first, np.diff(summed, axis=-1)), axis=-1), ()


def _grid_scale(emissions: Emissions, pick: Pick) -> FloatArray:
    """Return by what the grid's factors are multiplied, 1 in the base."""
    base = emissions.grid_factor_kg_per_J
    if emissions.grid_years or not base:
        return pick("emissions.grid_years", single(1.0))
    return pick("emissions.grid_factor", single(base)) / base


def _direct_by_year(
    leaks: FloatArray | None,
    end: FloatArray | None,
    change: FloatArray | None,
    life: FloatArray | None,
    years: FloatArray | None,
) -> FloatArray | None:
    if leaks is None or end is None or change is None or life is None or years is None:
        return None
    running = (leaks / life)[..., None] * np.diff(years, axis=-1)
    shape = np.broadcast_shapes(running.shape[:-1], end.shape, change.shape)
    ends_here = (years[..., 1:] >= life[..., None]) & (years[..., :-1] < life[..., None])
    running = np.broadcast_to(running, (*shape, running.shape[-1])) + end[..., None] * ends_here
    return np.concatenate((np.broadcast_to(change, shape)[..., None], running), axis=-1)


def _product(*factors: FloatArray | float | None) -> FloatArray | None:
    if any(factor is None for factor in factors):
        return None
    found = np.asarray(1.0)
    for factor in factors:
        found = found * np.asarray(factor, dtype=float)
    return found


def _sum(*parts: FloatArray | None) -> FloatArray | None:
    """Return the sum of parts; None if one of them is not known."""
    known = [part for part in parts if part is not None]
    return np.asarray(sum(known)) if len(known) == len(parts) else None


def _missing(case: Case, plan: Plan, gwp: Gwp) -> tuple[str, ...]:
    found = []
    if case.emissions is None:
        found.append("a table [emissions]")
    if gwp.value is None:
        found.append(f"GWP of {plan.refrigerant.designation}")
    if plan.charge_kg is None:
        found.append(plan.charge_missing)
    if plan.leak.spread is None:
        found.append(plan.leak.missing)
    if life_years(case) is None:
        found.append("`remaining_life` in [law]")
    return tuple(found)


def _missing_of_change(plan: Plan, old: Plan, edition: str) -> tuple[str, ...]:
    if not plan.is_change:
        return ()
    found = [] if old.charge_kg else [old.charge_missing]
    if gwp_of(old.refrigerant, edition).value is None:
        found.append(f"GWP of {old.refrigerant.designation}")
    return tuple(found)


def co2e_t(plan: Plan, edition: str) -> Spread | None:
    """Return the climate weight of a full charge; None if charge or GWP is not known. [t CO2e]

    Args:
        plan: The option.
        edition: Report whose GWP counts.
    """
    gwp = gwp_of(plan.refrigerant, edition).value
    if gwp is None or plan.charge_kg is None:
        return None
    low, base, high = plan.charge_kg
    return Spread(low * gwp / 1000.0, base * gwp / 1000.0, high * gwp / 1000.0)
