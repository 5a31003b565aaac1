"""Smooth interpolation on fixed nodes: cubic curves and bicubic surfaces, on arrays, with NumPy alone.

A curve or surface is held as node values and node derivatives (Hermite form). The derivatives come from
a cubic spline when the grid is built, so the interpolant is the spline itself, but evaluating it needs
no more than a node search and a weighted sum, whatever the spacing of the nodes.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]


def node_derivatives(x: FloatArray, values: FloatArray, axis: int) -> FloatArray:
    """Return the derivatives at the nodes of the cubic spline through them.

    Args:
        x: Node positions, rising, shape (n,). [any]
        values: Node values; `axis` has length n. [any]
        axis: Axis of `values` that runs along `x`. [-]
    Returns: Derivatives, shaped like `values`. [unit of values / unit of x]
    Source: cubic spline with not-a-knot ends (de Boor), as in scipy.interpolate.CubicSpline.
    """
    from scipy.interpolate import CubicSpline

    slopes = CubicSpline(x, values, axis=axis)(x, 1)
    return np.ascontiguousarray(slopes, dtype=np.float64)


def cell(nodes: FloatArray, x: FloatArray) -> tuple[NDArray[np.intp], FloatArray, FloatArray]:
    """Return for each position its cell, its place in the cell and the width of the cell.

    Args:
        nodes: Node positions, rising, shape (n,). [any]
        x: Positions. [unit of nodes]
    Returns: Number of the node on the left [-], place from 0 to 1 [-], width [unit of nodes], shaped like `x`.
    """
    left = np.searchsorted(nodes[1:-1], x, side="right")
    start = nodes[left]
    width = nodes[left + 1] - start
    return left, (x - start) / width, width


def hermite_weights(t: FloatArray, width: FloatArray) -> tuple[FloatArray, ...]:
    """Return the weights of left value, left slope, right value and right slope.

    Args:
        t: Place in the cell, 0 to 1. [-]
        width: Width of the cell. [any]
    Returns: Weights of the values [-] and of the slopes [unit of width].
    """
    t2 = t * t
    right = t2 * (3.0 - 2.0 * t)
    right_slope = t2 * (t - 1.0)
    left_slope = right_slope - t2 + t
    return 1.0 - right, left_slope * width, right, right_slope * width


def hermite_slope_weights(t: FloatArray, width: FloatArray) -> tuple[FloatArray, ...]:
    """Return the weights of the same four for the first derivative.

    Args:
        t: Place in the cell, 0 to 1. [-]
        width: Width of the cell. [any]
    Returns: Weights of the values [1 / unit of width] and of the slopes [-].
    """
    bow = 6.0 * t * (1.0 - t) / width
    return -bow, 1.0 - t * (4.0 - 3.0 * t), bow, t * (3.0 * t - 2.0)


Weights = Callable[[FloatArray, FloatArray], tuple[FloatArray, ...]]


@dataclass(frozen=True)
class Curve:
    """Several quantities along one axis.

    Attributes:
        x: Node positions, shape (n,).
        nodes: Values and derivatives, shape (quantities, 2, n).
    """

    x: FloatArray
    nodes: FloatArray

    @classmethod
    def through(cls, x: FloatArray, values: FloatArray) -> Curve:
        """Return the cubic spline through values.

        Args:
            x: Node positions, rising, shape (n,). [any]
            values: Node values, shape (quantities, n). [any]
        """
        return cls(x, np.stack([values, node_derivatives(x, values, axis=1)], axis=1))

    def __call__(self, x: FloatArray, *quantities: int, weights: Weights = hermite_weights) -> list[FloatArray]:
        """Return the asked quantities, which lie beside each other, at `x`."""
        left, t, width = cell(self.x, x)
        a, b, c, d = weights(t, width)
        # All quantities at once: for few positions the number of steps in Python is what takes time.
        nodes = self.nodes[quantities[0] : quantities[-1] + 1]
        near, far = nodes.take(left, axis=-1), nodes.take(left + 1, axis=-1)
        return list(a * near[:, 0] + b * near[:, 1] + c * far[:, 0] + d * far[:, 1])

    def slope(self, x: FloatArray, quantity: int) -> FloatArray:
        """Return the first derivative of one quantity. [unit of the quantity / unit of x]

        Args:
            x: Positions. [unit of the nodes]
            quantity: Which quantity. [-]
        """
        return self(x, quantity, weights=hermite_slope_weights)[0]


@dataclass(frozen=True)
class Surface:
    """Several quantities over two axes.

    Attributes:
        x, y: Node positions, shapes (n,) and (m,).
        nodes: Value, x, y and xy derivatives, shape (quantities, 4, n * m).
    """

    x: FloatArray
    y: FloatArray
    nodes: FloatArray

    @classmethod
    def through(cls, x: FloatArray, y: FloatArray, values: FloatArray) -> Surface:
        """Return the bicubic spline through values.

        Args:
            x: Node positions along the first axis, rising, shape (n,). [any]
            y: Node positions along the second axis, rising, shape (m,). [any]
            values: Node values, shape (quantities, n, m). [any]
        """
        along_x = node_derivatives(x, values, axis=1)
        along_y = node_derivatives(y, values, axis=2)
        twist = node_derivatives(y, along_x, axis=2)
        nodes = np.stack([values, along_x, along_y, twist], axis=1)
        return cls(x, y, nodes.reshape(len(values), 4, x.size * y.size))

    def __call__(self, x: FloatArray, y: FloatArray, *quantities: int) -> list[FloatArray]:
        """Return the asked quantities, which lie beside each other, at the points (x, y), which broadcast together."""
        i, t, width_x = cell(self.x, x)
        j, u, width_y = cell(self.y, y)
        a0, a1, a2, a3 = hermite_weights(t, width_x)
        b0, b1, b2, b3 = hermite_weights(u, width_y)
        nodes = self.nodes[quantities[0] : quantities[-1] + 1]
        at = i * self.y.size + j
        total: FloatArray | float = 0.0
        for beside, value, slope in ((at, b0, b1), (at + 1, b2, b3)):  # the nodes on either side along y
            near, far = nodes.take(beside, axis=-1), nodes.take(beside + self.y.size, axis=-1)
            total = total + value * (a0 * near[:, 0] + a1 * near[:, 1] + a2 * far[:, 0] + a3 * far[:, 1])
            total = total + slope * (a0 * near[:, 2] + a1 * near[:, 3] + a2 * far[:, 2] + a3 * far[:, 3])
        return list(np.asarray(total))
