"""The order of the report: which sections it has, in the main part and in the annex, and how they are counted."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from retrofit.checks.changeover import chosen_for_cards
from retrofit.checks.survey import unknowns
from retrofit.report.room import has_room
from retrofit.study import Comparison


def _always(comparison: Comparison) -> bool:
    return True


@dataclass(frozen=True)
class Section:
    """A section of the report.

    Attributes:
        name: Its id, and the name of its template.
        title: Its title in the list of contents.
        is_there: Whether a result has what it shows.
    """

    name: str
    title: str
    is_there: Callable[[Comparison], bool] = _always


@dataclass(frozen=True)
class Place:
    """A section where it stands: id, title, and its number as it is printed and as text refers to it."""

    name: str
    title: str
    number: str
    words: str


def _has_open(comparison: Comparison) -> bool:
    return bool(unknowns(comparison))


def _has_law(comparison: Comparison) -> bool:
    return comparison.law is not None


def _has_readings(comparison: Comparison) -> bool:
    return comparison.baseline is not None


def _has_unread(comparison: Comparison) -> bool:
    return comparison.baseline is not None and bool(comparison.baseline.missing)


def _has_cards(comparison: Comparison) -> bool:
    return bool(chosen_for_cards(comparison).entries)


def _has_life(comparison: Comparison) -> bool:
    return comparison.life is not None


def _has_year(comparison: Comparison) -> bool:
    return comparison.life is not None and comparison.life.asked is not None


def _has_emissions(comparison: Comparison) -> bool:
    return comparison.life is not None and comparison.case.emissions is not None


def _has_money(comparison: Comparison) -> bool:
    return comparison.life is not None and comparison.case.money is not None


def _has_draws(comparison: Comparison) -> bool:
    return comparison.life is not None and bool(comparison.life.certainty)


# A line here and a template of its name make a section. The first one is page one, and stands alone.
MAIN = (
    Section("answer", "Summary"),
    Section("options", "Options"),
    Section("cautions", "Cautions"),
    Section("found", "As found", _has_readings),
    Section("law", "Why change", _has_law),
    Section("comparison", "Comparison"),
    Section("charts", "Charts"),
    Section("hardware", "Hardware"),
    Section("room", "Charge and room", has_room),
    Section("year", "A year", _has_year),
    Section("emissions", "Warming", _has_emissions),
    Section("money", "Money", _has_money),
    Section("certainty", "How sure", _has_life),
    Section("method", "Method statement"),
    Section("assumptions", "Assumptions"),
    Section("open", "To be found out on site", _has_open),
    Section("limits", "Limits"),
    Section("signing", "Sign-off"),
)
ANNEX = (
    Section("findings", "Findings"),
    Section("unread", "Readings: not derived", _has_unread),
    Section("components", "Components"),
    Section("room-working", "Room: working", has_room),
    Section("law-rows", "Law: row by row", _has_law),
    Section("maps", "The year: parts and maps", _has_year),
    Section("cost-items", "First cost, item by item", _has_money),
    Section("draws", "What may be off, and by how much", _has_draws),
    Section("states", "State points"),
    Section("job-cards", "Job card", _has_cards),
    Section("commissioning", "Commissioning sheets"),
    Section("inputs", "Inputs"),
    Section("model", "Model"),
    Section("terms", "Terms"),
    Section("sources", "Sources"),
)


def main_part(comparison: Comparison) -> tuple[Place, ...]:
    """Return the sections of the main part that a result has, counted 1, 2, 3.

    Args:
        comparison: The result.
    """
    there = [section for section in MAIN if section.is_there(comparison)]
    return tuple(
        Place(section.name, section.title, str(count), f"section {count}")
        for count, section in enumerate(there, start=1)
    )


def annex(comparison: Comparison) -> tuple[Place, ...]:
    """Return the sections of the annex that a result has, lettered A, B, C.

    Args:
        comparison: The result.
    """
    there = [section for section in ANNEX if section.is_there(comparison)]
    return tuple(
        Place(section.name, section.title, chr(ord("A") + count), f"annex {chr(ord('A') + count)}")
        for count, section in enumerate(there)
    )
