"""How warm it is over a year: hours of a file, bins of the case, or an invented climate."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from retrofit.case.year import HOURS_OF_A_YEAR, Bin, Climate

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]
DAYS_OF_MONTHS = (31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31)
WARMEST_HOUR = 15.0  # of an invented day


@dataclass(frozen=True, eq=False)
class Weather:
    """Outdoor conditions of a year, each standing for some of its hours; all arrays have the shape (n,).

    Attributes:
        source: Where they come from, for a reader.
        hours: Hours that each condition stands for; 8760 in all. [h]
        T_dry_bulb_K: Temperature of the outdoor air. [K]
        T_wet_bulb_K, T_water_K: Wet bulb, and water that a condenser or evaporator draws; None if not given. [K]
        hour_of_day: Hour at which each condition begins, 0 to 23; None for bins. [h]
        month: Month of each condition, 1 to 12; None for bins. [-]
        night_hours: Hours by night of each condition; None where the hour of the day or nothing tells it. [h]
        text: The file as read, so that a report can carry it; empty if there is none. [-]
    """

    source: str
    hours: FloatArray
    T_dry_bulb_K: FloatArray
    T_wet_bulb_K: FloatArray | None = None
    T_water_K: FloatArray | None = None
    hour_of_day: FloatArray | None = None
    month: IntArray | None = None
    text: str = ""
    night_hours: FloatArray | None = None

    def __eq__(self, other: object) -> bool:
        """Say whether another weather is the same, number by number."""
        if not isinstance(other, Weather):
            return NotImplemented
        pairs = zip(vars(self).values(), vars(other).values(), strict=True)
        return all(
            np.array_equal(mine, others) if isinstance(mine, np.ndarray) else mine == others for mine, others in pairs
        )

    __hash__ = None  # type: ignore[assignment]


def weather_of_bins(bins: Sequence[Bin]) -> Weather:
    """Return the weather that bins describe.

    Args:
        bins: Outdoor temperatures and their hours. [K, h]
    """
    T, hours, night = np.array(bins, dtype=float).T  # a night not told is NaN
    return Weather("bins of the case", hours, T, night_hours=None if np.isnan(night).any() else night)


def weather_of_climate(climate: Climate) -> Weather:
    """Return 8760 hours of an invented climate.

    Args:
        climate: Mean, swings and warmest day.
    Source: one sine over the year, warmest on the middle of its warmest day, and one over the day, warmest at 15 h.
    """
    hour = np.arange(HOURS_OF_A_YEAR) + 0.5
    of_year = np.cos(2.0 * np.pi * (hour / 24.0 - climate.warmest_day + 0.5) / 365.0)
    of_day = np.cos(2.0 * np.pi * (hour % 24.0 - WARMEST_HOUR) / 24.0)
    T = climate.mean_K + climate.yearly_swing_K * of_year + climate.daily_swing_K * of_day
    return Weather("an invented climate", *_hourly(T))


def weather_of_hours(
    source: str,
    text: str,
    T_dry_bulb_K: Sequence[float],
    T_wet_bulb_K: Sequence[float] | None = None,
    T_water_K: Sequence[float] | None = None,
) -> Weather:
    """Return the weather of 8760 hours that a file gives.

    Args:
        source: The file, for a reader. [-]
        text: The file as read. [-]
        T_dry_bulb_K: Temperature of the outdoor air, hour by hour. [K]
        T_wet_bulb_K: Wet bulb, if the file has it. [K]
        T_water_K: Water that a condenser or evaporator draws, if the file has it. [K]
    """
    wet_K, water_K = (None if T is None else np.array(T, dtype=float) for T in (T_wet_bulb_K, T_water_K))
    hour_of_day, month = hours_of_year()
    dry_K = np.array(T_dry_bulb_K, dtype=float)
    return Weather(source, np.ones(HOURS_OF_A_YEAR), dry_K, wet_K, water_K, hour_of_day, month, text)


def hours_of_year() -> tuple[FloatArray, IntArray]:
    """Return the hour of the day and the month of each of 8760 hours, beginning on 1 January at 0 h."""
    month = np.repeat(np.arange(1, 13, dtype=np.int64), np.array(DAYS_OF_MONTHS) * 24)
    return np.arange(HOURS_OF_A_YEAR, dtype=float) % 24.0, month


def _hourly(T: FloatArray) -> tuple[FloatArray, FloatArray, None, None, FloatArray, IntArray]:
    hour_of_day, month = hours_of_year()
    return np.ones(HOURS_OF_A_YEAR), T, None, None, hour_of_day, month
