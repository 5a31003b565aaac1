"""Old oil left in a plant after changes of oil."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.equipment.bounds import share
from retrofit.errors import OutsideValidRangeError

FloatArray = NDArray[np.float64]


def residual_oil(share_left: ArrayLike, changes: ArrayLike) -> FloatArray:
    """Return the share of old oil in the plant after changes of oil.

    Args:
        share_left: Share of the oil that stays behind at each change: what the ports do not drain. [-]
        changes: Number of changes. [-]
    Returns: Share of old oil in all oil, the old mixing fully with the new between changes. [-]
    Raises: OutsideValidRangeError for a share outside 0 to 1 or a number of changes below 0.
    Source: each change keeps the share r of what is old: r^n.
    """
    kept, count = share("share of oil left by a change", share_left), np.asarray(changes, dtype=float)
    if np.any(count < 0.0):
        raise OutsideValidRangeError(f"number of oil changes {float(np.min(count)):g} is below 0: give 0 or more")
    residual: FloatArray = kept**count
    return residual


def changes_needed(share_left: ArrayLike, target: ArrayLike) -> FloatArray:
    """Return how many changes of oil bring the share of old oil down to a target.

    Args:
        share_left: Share of the oil that stays behind at each change. [-]
        target: Share of old oil that may stay. [-]
    Returns: Number of changes, whole; infinite where no number is enough. [-]
    Raises: OutsideValidRangeError for a share outside 0 to 1.
    Source: smallest n with r^n <= target.
    """
    kept, wanted = np.broadcast_arrays(share("share of oil left by a change", share_left), share("target", target))
    with np.errstate(divide="ignore", invalid="ignore"):
        # Rounding must not ask for one more where the target is met exactly.
        count = np.ceil(np.log(wanted) / np.log(kept) - 1e-9)
    # An empty sump (0) needs one change; oil that stays (1) or a target of none at all is never reached.
    count = np.where(kept == 0.0, 1.0, np.where((kept == 1.0) | (wanted == 0.0), np.inf, count))
    return np.where(wanted >= 1.0, 0.0, np.where(np.isnan(kept) | np.isnan(wanted), np.nan, count))
