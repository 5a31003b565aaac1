"""Pressures against limits, as gauges at the plant show them: the only place where one is divided by the other."""

from __future__ import annotations

import math


def share_of_limit(p_Pa: float, limit_Pa: float, air_Pa: float) -> float:
    """Return a pressure as part of a limit, both counted from the air at the plant. [-]

    A limit that is not above the air bears no pressure at all: the share of it is infinite, which is above every
    threshold, and so is that of a pressure which is not a number.

    Args:
        p_Pa, limit_Pa, air_Pa: The pressure, the limit and the air at the plant, absolute. [Pa]
    Returns: The share; negative for a pressure below that of the air. [-]
    >>> share_of_limit(6e5, 11e5, 1e5)
    0.5
    >>> share_of_limit(6e5, 0.9e5, 1e5)
    inf
    """
    pressure, limit = p_Pa - air_Pa, limit_Pa - air_Pa
    if not limit > 0.0 or math.isnan(pressure):
        return math.inf
    return pressure / limit


def times_below(share: float) -> float:
    """Return how many times a pressure its limit is, from the share: 0 of an infinite one, else infinite from 0 down.

    Args:
        share: The pressure as part of the limit. [-]
    Returns: The margin. [-]
    >>> times_below(0.5)
    2.0
    """
    return 1.0 / share if share > 0.0 else math.inf


def share_text(share: float) -> str:
    """Return a share of a limit as a sentence writes it, such as "87%"; there is none of a pressure below the air."""
    if not math.isfinite(share):
        return "more than all"
    return f"{share:.0%}" if share > 0.0 else "none"
