"""Maps of an option: cooling and COP at full over the temperatures at the inlets of condenser and evaporator."""

from __future__ import annotations

from typing import Any

import numpy as np

from retrofit.checks.prospects import Prospect
from retrofit.figures.drawing import Drawing, canvas, to_svg
from retrofit.figures.labels import label_of
from retrofit.figures.style import HAIRLINE, INK, SMALL_PT, THIN
from retrofit.study.result import FloatArray
from retrofit.study.year import PlantMap, YearConditions
from retrofit.units import UnitSystem

LEVELS = 7


def map_chart(option: Prospect, asked: YearConditions, units: UnitSystem) -> Drawing | None:
    """Draw the map of an option as two panels of lines of equal cooling and equal COP.

    Args:
        option: The option.
        asked: What the year asks, whose range is framed.
        units: The reader's units.
    Returns: The chart; None if the option has no map, or one of which too little is solved.
    """
    found = option.year.map if option.year else None
    if found is None or np.isfinite(found.cop).sum() < 0.25 * found.cop.size:
        return None
    heating = asked.serves == "heating"
    delivered = found.cop * found.power_W if heating else found.cooling_W
    what, label = "Heat" if heating else "Cooling", units.label("cooling")
    with canvas(2.1, 0.65, 0.15, 0.26, 0.46) as figure:
        left, right = figure.subplots(1, 2, sharey=True, gridspec_kw={"wspace": 0.08})
        _panel(left, found, np.asarray(units.number("cooling", delivered)), f"{what} at full [{label}]", units, "%.0f")
        _panel(right, found, found.cop, "COP at full", units, "%.1f")
        for axes in (left, right):
            _frame(axes, asked, units)
        left.set_ylabel(f"Into the evaporator [{units.label('temperature')}]")
        name = f"map-{option.entry.refrigerant.designation.lower()}"
        words = _words(option, found, delivered, units)
        svg = to_svg(figure, name, f"Map of {label_of(option)}", words)
    caption = (
        f"{label_of(option)}, {option.year.machine if option.year else ''}: lines of equal {what.lower()} at full "
        "(left) and of equal COP (right). The dashed frame is the range of the year."
    )
    return Drawing(name, svg, caption, words)


def _panel(axes: Any, found: PlantMap, values: FloatArray, title: str, units: UnitSystem, form: str) -> None:
    x = np.asarray(units.number("temperature", found.T_sink_K))
    y = np.asarray(units.number("temperature", found.T_source_K))
    lines = axes.contour(x, y, np.ma.masked_invalid(values).T, LEVELS, colors=INK, linewidths=THIN)
    axes.clabel(lines, fmt=form, fontsize=SMALL_PT, inline_spacing=2)
    axes.set_title(title, fontsize=SMALL_PT, pad=4)
    axes.set_xlabel(f"Into the condenser [{units.label('temperature')}]")


def _frame(axes: Any, asked: YearConditions, units: UnitSystem) -> None:
    """Frame the range of the year; a line where one of the two does not vary."""
    x, y = (
        [float(units.number("temperature", end(T))) for end in (np.min, np.max)]
        for T in (asked.T_cond_in_K, asked.T_evap_in_K)
    )
    axes.plot([x[0], x[1], x[1], x[0], x[0]], [y[0], y[0], y[1], y[1], y[0]], color=INK, linewidth=THIN + HAIRLINE,
              linestyle=(0, (3, 2)))  # fmt: skip


def _words(option: Prospect, found: PlantMap, delivered: FloatArray, units: UnitSystem) -> str:
    kW, cop = units.number("cooling", delivered), found.cop
    x, y = units.number("temperature", found.T_sink_K), units.number("temperature", found.T_source_K)
    label = units.label("temperature")
    return (
        f"{label_of(option)}, into the condenser {x[0]:.0f} to {x[-1]:.0f} {label}, into the evaporator {y[0]:.0f} to "
        f"{y[-1]:.0f} {label}: {np.nanmin(kW):.0f} to {np.nanmax(kW):.0f} {units.label('cooling')}, COP "
        f"{np.nanmin(cop):.1f} to {np.nanmax(cop):.1f}"
    )
