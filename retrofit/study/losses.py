"""Losses of a year that a maker's seasonal figure counts and the model of today's plant may not."""

from __future__ import annotations

from enum import StrEnum

from retrofit.case import Case
from retrofit.units import listed

CYCLES_BELOW = 0.999  # run time of the year: a machine that runs all the time starts and stops nothing


class Loss(StrEnum):
    """A loss between what the compressor's cycle takes and what the meter counts."""

    DRIVE = "drive"
    FANS = "fans"
    DEFROST = "defrost"
    CYCLING = "cycling"


def not_counted(case: Case, run_time_fraction: float | None) -> tuple[Loss, ...]:
    """Return the losses that a year of the plant as it is does not count.

    Args:
        case: The case: a power given, be it zero, counts.
        run_time_fraction: Share of the year that the compressors run; None if not known. [-]
    """
    year = case.year
    assert year is not None
    assert case.evaporator is not None
    assert case.condenser is not None
    is_air = [exchanger.medium in ("air", None) for exchanger in (case.evaporator, case.condenser)]
    fans = year.evaporator_fans_W, year.condenser_fans_W
    # What moves a liquid may be counted as fans of that side too.
    moved = [
        given is not None or (not is_gas and year.pumps_W is not None)
        for is_gas, given in zip(is_air, fans, strict=True)
    ]
    is_counted = {
        Loss.DRIVE: case.compressor.motor_efficiency is not None,
        Loss.FANS: all(moved),
        Loss.DEFROST: not is_air[0] or year.defrost_power_W is not None,
        Loss.CYCLING: run_time_fraction is not None and run_time_fraction >= CYCLES_BELOW,
    }
    return tuple(loss for loss, counted in is_counted.items() if not counted)


NAMES = {
    Loss.DRIVE: "motor and drive",
    Loss.FANS: "fans and pumps",
    Loss.DEFROST: "defrosting",
    Loss.CYCLING: "starting and stopping",
}


def one_sided_words(losses: tuple[Loss, ...]) -> str:
    """Return why a year by a maker's seasonal COP is not compared, in words.

    Args:
        losses: What it counts and the year of the plant as it is lacks.
    """
    names = listed([NAMES[loss] for loss in losses], "and")
    return f"not comparable: the maker's seasonal COP counts losses of {names}, the year of today's plant does not"
