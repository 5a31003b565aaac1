"""Which candidates get a job card and a commissioning sheet, and their numbers with the bands of the model."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from retrofit.checks.thresholds import thresholds_for
from retrofit.study import Comparison, Entry, Verdict
from retrofit.study.bands import QUANTITIES, pair_bands
from retrofit.study.changeover import Bands, Changeover, changeover

MOST_CARDS = 3  # so that the report of a case with many candidates does not grow without bound
BEST_FIRST = (Verdict.SUITABLE, Verdict.MODIFICATIONS, Verdict.OPEN)


@dataclass(frozen=True)
class Chosen:
    """The candidates that get a job card, and the others.

    Attributes:
        entries: Those that get one.
        why: By which rule they were chosen.
        left_out: The others, with the reason for each.
    """

    entries: tuple[Entry, ...]
    why: str
    left_out: tuple[tuple[Entry, str], ...]


def chosen_for_cards(comparison: Comparison) -> Chosen:
    """Return the conversions to write a job card for: the one recommended, or those that can be chosen.

    Args:
        comparison: An assessed result.
    """
    report = comparison.case.report
    named = report.recommended if report else None
    if named:
        found = [
            entry for entry in comparison.candidates if entry.refrigerant.designation == named and not against(entry)
        ]
        why = f"The case recommends {named}" + ("." if found else ", for which no job card can be written.")
        return _chosen(comparison, found, why, "the case recommends another")
    free = [entry for entry in comparison.candidates if not against(entry)]
    found = sorted(free, key=lambda entry: BEST_FIRST.index(entry.verdict))[:MOST_CARDS]
    why = (
        f"The case recommends none, so there is one for each conversion that is computed and not stopped, {MOST_CARDS} "
        "at most: by verdict, then in the order of the case."
    )
    return _chosen(comparison, found, why, f"beyond the {MOST_CARDS} shown")


def _chosen(comparison: Comparison, found: Sequence[Entry], why: str, otherwise: str) -> Chosen:
    rest = (entry for entry in comparison.candidates if entry not in found)
    return Chosen(tuple(found), why, tuple((entry, against(entry) or otherwise) for entry in rest))


def against(entry: Entry) -> str:
    """Return what forbids a job card for a candidate: a stop, no numbers, or that it is a new plant; else nothing.

    Args:
        entry: An assessed candidate.
    """
    if entry.stops:
        return f"stopped by: {'; '.join(finding.title for finding in entry.stops)}"
    if not entry.is_computed:
        return f"not computed: {entry.reason}"
    return "a new plant: its maker writes its commissioning" if entry.is_new_plant else ""


def changeover_of(comparison: Comparison, entry: Entry, T_inlet_today_K: float | None = None) -> Changeover:
    """Return the numbers of changing the plant to a candidate.

    Args:
        comparison: An assessed result.
        entry: The candidate.
        T_inlet_today_K: Temperature at the inlet of the condenser on the day, None to leave it out. [K]
    """
    band, oil = pair_bands(comparison.existing, entry), thresholds_for(comparison.case)["residual_oil"]
    power = band[QUANTITIES["power"][0]].value
    bands = Bands(band["pressure"].value, power, band["T_discharge"].value)
    return changeover(comparison, entry, bands, sorted(oil.figures.values()), T_inlet_today_K)
