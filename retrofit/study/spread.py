"""From low, base and high to numbers: three at once, one, or one for each draw.

Whoever computes emissions or money hands in a `Pick`. It is asked for each input by its key in the case file, so
that one draw of an input is the same draw wherever that input counts: options are compared like with like.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]


class Spread(NamedTuple):
    """Lowest, base and highest value of an input, rising."""

    low: float
    base: float
    high: float


Pick = Callable[[str, Spread], FloatArray]
"""Key of an input and its spread -> its numbers: shape () or (n,), the same n for every input."""


def single(value: float) -> Spread:
    """Return the spread of an input of one value.

    Args:
        value: The value. [its own unit]
    """
    return Spread(value, value, value)


def low_base_high(key: str, spread: Spread) -> FloatArray:
    """Return low, base and high, shape (3,): all inputs low, all base, all high; no bounds of a result.

    Args:
        key: Key of the input; every one is treated alike. [-]
        spread: Its spread.
    """
    return np.array(spread, dtype=float)


def base_only(key: str, spread: Spread) -> FloatArray:
    """Return the base value, shape ().

    Args:
        key: Key of the input; every one is treated alike. [-]
        spread: Its spread.
    """
    return np.asarray(spread.base, dtype=float)


def triangular(spread: Spread, share: ArrayLike) -> FloatArray:
    """Return the value below which a share of a triangular distribution lies, its peak at the base.

    Args:
        spread: Low, base and high.
        share: Share between 0 and 1, such as one column of a Latin hypercube. [-]
    Returns: The values, in the shape of `share`; the base throughout if the spread has no width.
    Source: inverse of the triangular distribution's cumulative function.
    """
    low, base, high = spread
    u, width = np.asarray(share, dtype=float), high - low
    if width <= 0.0:
        return np.full(u.shape, base)
    rising = low + np.sqrt(u * width * (base - low))
    falling = high - np.sqrt((1.0 - u) * width * (high - base))
    return np.where(u * width < base - low, rising, falling)


def at(values: FloatArray, index: int) -> float:
    """Return one of the values of a result; one that is the same throughout stands for all.

    Args:
        values: Values, shape () or (n,). [any]
        index: Which of them. [-]
    """
    flat = np.asarray(values).ravel()
    return float(flat[0] if flat.size == 1 else flat[index])
