"""Scales of the pressure-enthalpy charts: enthalpy on its reference, log pressure, temperatures, limits."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from retrofit.figures.style import INK, SMALL_PT, THIN
from retrofit.study import ChartLines, Comparison
from retrofit.units import UnitSystem

MOST_TICKS = 12
SHORT_SCALE = 40.0  # largest over smallest pressure
LABEL_WIDTH = 0.09  # of the axis
LABEL_SHARE = 0.03, 0.075  # of the axis: half a label, and a label with a point number
STEPS = {"si": (10.0, 20.0, 40.0), "ip": (20.0, 40.0, 80.0)}


def enthalpies(lines: ChartLines, h_J_per_kg: Any, units: UnitSystem) -> Any:
    """Return enthalpies on the reference of the reader's units, as numbers in them.

    Args:
        lines: Lines of the refrigerant; they carry the reference.
        h_J_per_kg: Enthalpy as the model counts it. [J/kg]
        units: The reader's units.
    Returns: Enthalpy. [kJ/kg or Btu/lb]
    """
    return units.number("specific enthalpy", h_J_per_kg - lines.zeros[units.name].h_J_per_kg)


def log_ticks(axes: Any, limits: tuple[float, float]) -> None:
    """Put ticks at round pressures within the limits, written plainly: more of them on a short scale."""
    factors = (1, 2, 3, 4, 5, 6, 8) if limits[1] / limits[0] < SHORT_SCALE else (1, 2, 5)
    decades = [factor * 10.0**power for power in range(-3, 5) for factor in factors]
    ticks = [tick for tick in decades if limits[0] <= tick <= limits[1]]
    axes.set_yticks(ticks, [f"{tick:g}" for tick in ticks])
    minor = [factor * 10.0**power for power in range(-3, 5) for factor in range(1, 10)]
    axes.set_yticks([tick for tick in minor if limits[0] <= tick <= limits[1]], minor=True)
    axes.tick_params(axis="y", which="minor", length=1.8, width=0.4, labelleft=False)


def temperature_ticks(
    axes: Any,
    lines: ChartLines,
    units: UnitSystem,
    isobars: list[float],
    limit: float | None,
    others: Sequence[ChartLines] = (),
) -> None:
    """Mark round temperatures along both saturation lines, so that a log pressure can be read by them.

    Args:
        axes: Axes of a pressure-enthalpy chart.
        lines: Saturation lines of the refrigerant.
        units: The reader's units.
        isobars: Pressures where the cycle runs; a label that would lie on one is left out. [units of the axis]
        limit: Pressure of a limit line, kept clear too; None for none. [units of the axis]
        others: Saturation lines of what else stands in the chart. With some, only the bubble line is labelled, left of
            all of theirs: within the domes a label would lie on lines.
    """
    low, high = axes.get_ylim()
    T = units.number("temperature", lines.T_K)
    h_bubble = enthalpies(lines, lines.h_bubble_J_per_kg, units)
    room = LABEL_WIDTH * (axes.get_xlim()[1] - axes.get_xlim()[0])
    for h_line, p_line in ((lines.h_bubble_J_per_kg, lines.p_bubble_Pa), (lines.h_dew_J_per_kg, lines.p_dew_Pa)):
        h, p = enthalpies(lines, h_line, units), units.number("pressure", p_line)
        for value in _round_temperatures(T[(p > low) & (p < high)], units.name):
            at_h, at_p = float(np.interp(value, T, h)), float(np.exp(np.interp(value, T, np.log(p))))
            axes.plot([at_h], [at_p], "_", color=INK, markersize=4, markeredgewidth=THIN)
            on_limit = limit is not None and abs(np.log(at_p / limit) / np.log(high / low)) < LABEL_SHARE[0]
            # A dew label stands inside the dome, if there is room for it.
            is_narrow = h_line is lines.h_dew_J_per_kg and at_h - float(np.interp(value, T, h_bubble)) < room
            is_crossed = bool(others) and h_line is lines.h_dew_J_per_kg
            if (
                not on_limit
                and not is_narrow
                and not is_crossed
                and _is_free(np.log(at_p / np.asarray(isobars)) / np.log(high / low))
            ):
                text = f"{value:g}".replace("-", "\N{MINUS SIGN}")
                at = (_leftmost(at_h, at_p, others, units), at_p)
                axes.annotate(text, at, (-5, 0), textcoords="offset points", ha="right", va="center",
                              fontsize=SMALL_PT)  # fmt: skip


def _leftmost(at_h: float, at_p: float, others: Sequence[ChartLines], units: UnitSystem) -> float:
    """Return the smallest of an enthalpy and those of other bubble lines at its pressure."""
    found = [at_h]
    for lines in others:
        p = np.asarray(units.number("pressure", lines.p_bubble_Pa))
        if p[0] <= at_p <= p[-1]:
            found.append(float(np.interp(at_p, p, enthalpies(lines, lines.h_bubble_J_per_kg, units))))
    return min(found)


def _is_free(heights: Any) -> bool:
    """Say whether a label this far above each isobar, rising, touches neither them nor their point numbers."""
    near, far = LABEL_SHARE
    below_lowest = heights[0] < 0
    return bool(
        np.all(np.abs(heights) > near) and not (below_lowest and heights[0] > -far) and not 0 < heights[-1] < far
    )


def _round_temperatures(T: Any, system: str) -> list[float]:
    if not len(T):
        return []
    first, last = float(np.min(T)), float(np.max(T))
    step = next((step for step in STEPS[system] if (last - first) / step <= MOST_TICKS), STEPS[system][-1])
    return [step * i for i in range(int(np.ceil(first / step)), int(np.floor(last / step)) + 1)]


def limit_line(axes: Any, comparison: Comparison, units: UnitSystem, box: Any) -> float | None:
    """Draw the pressure of the nameplate, if the case gives it and the chart reaches it, and return it."""
    plant = comparison.case.plant
    if plant.high_side_limit_Pa is None:
        return None
    limit = float(units.number("pressure", plant.high_side_limit_Pa))
    if not box[1][0] < limit < box[1][1]:
        return None
    gauge = units.with_unit("gauge pressure", plant.high_side_limit_Pa - plant.ambient_pressure_Pa, decimals=1)
    axes.axhline(limit, color=INK, linewidth=THIN, linestyle=(0, (2, 2)))
    axes.annotate(
        f"nameplate {gauge}", (0.005, limit), (0, 2), xycoords=("axes fraction", "data"),
        textcoords="offset points", fontsize=SMALL_PT, va="bottom", ha="left",
    )  # fmt: skip
    return limit
