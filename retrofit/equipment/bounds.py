"""Numbers that equipment cannot have, refused with value and unit."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from retrofit.errors import OutsideValidRangeError

FloatArray = NDArray[np.float64]


def above_zero(what: str, value: ArrayLike, unit: str) -> FloatArray:
    """Return a number as an array if it is above zero throughout; NaN, not known, passes.

    Args:
        what: What it is, for the message.
        value: The number. [unit]
        unit: Its unit, for the message.
    Returns: The number. [unit]
    Raises: OutsideValidRangeError if it is not.
    """
    given = np.asarray(value, dtype=float)
    if np.any(given <= 0.0):
        raise OutsideValidRangeError(f"{what} {float(np.min(given)):g} {unit} is not above zero: give its real value")
    return given


def share(what: str, value: ArrayLike) -> FloatArray:
    """Return a share as an array if it lies between 0 and 1 throughout; NaN, not known, passes.

    Args:
        what: What it is, for the message.
        value: The share. [-]
    Returns: The share. [-]
    Raises: OutsideValidRangeError if it does not.
    """
    given = np.asarray(value, dtype=float)
    outside = (given < 0.0) | (given > 1.0)
    if np.any(outside):
        raise OutsideValidRangeError(f"{what} {float(given[outside].flat[0]):.4g} is outside 0 to 1 (0 % to 100 %)")
    return given
