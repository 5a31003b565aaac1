"""Carrying a changeover out, as texts: for whom there is a job card, the way back if it fails, and after-care."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from retrofit.checks.changeover import Chosen, changeover_of
from retrofit.checks.operating import discharge_limit, limit_of
from retrofit.report.jobcard import UNKNOWN, Card, Job, card, span
from retrofit.report.judging import spelled
from retrofit.study import Comparison
from retrofit.study.practice import Figure, practice, practice_figures
from retrofit.units import ZERO_C_K, UnitSystem, listed


@dataclass(frozen=True)
class Care:
    """One line of after-care: what, and when."""

    what: str
    when: str


@dataclass(frozen=True)
class Method:
    """Everything on carrying a changeover out.

    Attributes:
        why: For which candidates, by which rule.
        left_out: The other candidates with the reason of each.
        cards: The job cards.
        go_back_if, keep, way_back, no_way_back: The way back: when, with what, how, and what does not come back.
        after_care: What is done afterwards, and when.
        sources: Where the figures come from.
    """

    why: str
    left_out: tuple[tuple[str, str], ...]
    cards: tuple[Card, ...]
    go_back_if: tuple[str, ...]
    keep: tuple[str, ...]
    way_back: tuple[str, ...]
    no_way_back: tuple[str, ...]
    after_care: tuple[Care, ...]
    sources: tuple[str, ...]


def jobs(comparison: Comparison, chosen: Chosen, units: UnitSystem) -> tuple[Job, ...]:
    """Return a changeover for each candidate that gets a job card.

    Args:
        comparison: An assessed result.
        chosen: The candidates.
        units: The reader's units.
    """
    return tuple(Job(comparison, changeover_of(comparison, entry), units) for entry in chosen.entries)


def method(comparison: Comparison, chosen: Chosen, found: Sequence[Job], units: UnitSystem) -> Method:
    """Return the method statement: job cards, the way back and after-care.

    Args:
        comparison: An assessed result.
        chosen: The candidates that get a card, and why the others get none.
        found: Their changeovers.
        units: The reader's units.
    """
    return Method(
        why=spelled(chosen.why),
        left_out=tuple((entry.refrigerant.display_name, spelled(reason)) for entry, reason in chosen.left_out),
        cards=tuple(card(job) for job in found),
        go_back_if=_go_back_if(comparison, units),
        keep=_keep(comparison),
        way_back=_way_back(comparison, units),
        no_way_back=_no_way_back(comparison),
        after_care=_after_care(comparison, found, units),
        sources=tuple(_told(figure) for figure in practice_figures().values()),
    )


def _told(figure: Figure) -> str:
    low, high = figure.ends
    ends = f"{low:g}" if low == high else f"{low:g} to {high:g}"
    return f"{ends} {figure.unit}: {figure.source} ({figure.basis})"


# -- the way back ------------------------------------------------------------------------------------


def _go_back_if(comparison: Comparison, units: UnitSystem) -> tuple[str, ...]:
    limit = limit_of(comparison, discharge_limit(comparison))
    stop = units.with_unit("temperature", (limit.stop or 0.0) + ZERO_C_K, decimals=0)
    return (
        f"the discharge line stays above {stop} after trimming;",
        "the current stays above the rated one, or a safety control keeps tripping;",
        "the goods or the process are not held at their temperature on an ordinary day;",
        "oil does not come back to the compressor, or leaks keep opening;",
        "a maker, the authority or the insurer withdraws consent.",
    )


def _keep(comparison: Comparison) -> tuple[str, ...]:
    old, months = comparison.existing.refrigerant.display_name, practice("acceptance").low
    word = "month" if months == 1.0 else "months"
    return (
        f"Until the readings of {months:g} {word} and of a hot day are accepted in writing:",
        f"the {old} recovered, clean, weighed, in sealed and labelled cylinders, as far as law lets it be stored and "
        "used again;",
        "valves, orifices, nozzles, regulators and relief valves taken out, each marked with its place;",
        "new driers that suit the old refrigerant, seals, and its oil;",
        "the list of set points as found, and the readings as found.",
    )


def _way_back(comparison: Comparison, units: UnitSystem) -> tuple[str, ...]:
    plant, old = comparison.case.plant, comparison.existing.refrigerant.display_name
    charge = UNKNOWN if plant.charge_kg is None else units.with_unit("mass", plant.charge_kg)
    return (
        "Decide who may order it, and write it down here before the start.",
        "Recover the new refrigerant into its own cylinders and weigh it; it is never mixed with the old one.",
        f"Ask the maker whether the oil now inside may stay with {old}; else drain it as in steps 3 and 5.",
        "Put the old parts back, with new seals and new driers.",
        "Tightness, evacuation and hold as in steps 7 and 8.",
        f"Charge {old} as liquid by weight: {charge} on record, or what was recovered.",
        "Set points as found; old labels back; log; readings against those as found.",
    )


def _no_way_back(comparison: Comparison) -> tuple[str, ...]:
    old = comparison.existing.refrigerant.display_name
    law = "the report has what the tables of law say" if comparison.law else "the case names no law"
    return (
        f"Whether law still lets {old} be filled in on that day: {law}; ask the authority.",
        "A charge that was mixed or burnt out goes to reclaim or destruction, not back into the plant.",
        "Approvals and papers that were changed for the new refrigerant have to be changed back.",
    )


# -- after-care --------------------------------------------------------------------------------------


def _after_care(comparison: Comparison, found: Sequence[Job], units: UnitSystem) -> tuple[Care, ...]:
    again, months = practice("drier_again"), practice("leak_check_after_repair").low
    oil = span(*(f"{share:.0%}" for share in sorted(limit_of(comparison, "residual_oil").figures.values())))
    discharge = limit_of(comparison, discharge_limit(comparison))
    hot = units.with_unit("temperature", (discharge.work or 0.0) + ZERO_C_K, decimals=0)
    blends = [job.new for job in found if len(job.entry.refrigerant.composition) > 1]
    rows = [
        Care("Readings of the commissioning sheet", "1 h, 24 h, 1 week, 1 month, first hot day"),
        Care("Filter driers again; strainers", f"after {again.low:.0f} to {again.high:.0f} h; after some weeks"),
        Care(f"Oil sample: old oil ({oil} of all oil), acid, moisture", "after 24 to 48 h, 1 month, 1 year"),
        Care("Leak check of every joint and seal opened", f"at the start, and within {months:g} month of each repair"),
        Care("Leak check by law", _leak_checks(comparison, found)),
        Care("Energy against the months before, at equal weather and hours", "after 1 month and 1 year"),
        Care("Valves, superheat, head pressure once more", "first cold and first hot season"),
        Care("Each top-up: mass, cause, liquid or vapour; then find the leak", "each time"),
        Care(f"Call for help: discharge above {hot}, current above the rated one, oil level falling, readings outside "
             "their windows, sight glass not clear", "at once"),
    ]  # fmt: skip
    if blends:
        rows.insert(
            -1, Care(f"Composition of {listed(blends, 'and')} by sample", "after a large leak, before topping up")
        )
    return tuple(Care(spelled(row.what), row.when) for row in rows)


def _leak_checks(comparison: Comparison, found: Sequence[Job]) -> str:
    parts = [
        f"{job.new} at least every {job.entry.law.leak_check_months:g} months"
        for job in found
        if job.entry.law and job.entry.law.leak_check_months is not None
    ]
    return listed(parts, "and") if parts else UNKNOWN
