"""Pressure-enthalpy charts: the cycles on shared axes, and each refrigerant by itself with numbered points."""

from __future__ import annotations

from typing import Any

import numpy as np

from retrofit.figures.drawing import Drawing, canvas, to_svg
from retrofit.figures.labels import spread
from retrofit.figures.scales import enthalpies, limit_line, log_ticks, temperature_ticks
from retrofit.figures.style import HAIRLINE, INK, LABEL_PT, THIN, mark_at
from retrofit.study import ChartLines, Comparison, Entry
from retrofit.units import UnitSystem

TOGETHER = 6  # candidates in one chart; more are spread over several
WIDER = 3.5  # times the refrigerating effect: on shared axes the other cycles would be too narrow to read
Placed = tuple[int, Entry]


def overlay_charts(comparison: Comparison, units: UnitSystem) -> tuple[Drawing, ...]:
    """Draw the cycle of the existing refrigerant with those of the candidates, on the same axes.

    Args:
        comparison: The result.
        units: The reader's units.
    Returns: One chart for up to six candidates, else several, each with the existing one; candidates whose cycles
            are far wider have one of their own; none if nothing was computed.
    """
    return tuple(_overlay(comparison, group, units, number) for number, group in enumerate(_groups(comparison)))


def overlay_count(comparison: Comparison) -> int:
    """Return how many charts `overlay_charts` draws of a result, without drawing them. [-]

    Args:
        comparison: The result.
    """
    return len(_groups(comparison))


def _groups(comparison: Comparison) -> list[list[Placed]]:
    """Return what stands in each chart: the existing refrigerant with some candidates."""
    solved = [(place, entry) for place, entry in enumerate(comparison.entries) if entry.lines is not None]
    if not solved:
        return []
    existing, candidates = solved[:1], solved[1:]
    if existing[0][0] != 0:
        existing, candidates = [], solved
    return [existing + part for part in _parts(candidates, existing)] or [existing]


def _parts(candidates: list[Placed], existing: list[Placed]) -> list[list[Placed]]:
    """Return the candidates in parts that share axes: a few each, and those with far wider cycles by themselves."""
    if not candidates:
        return []
    usual = (existing or candidates)[0][1]
    parts = []
    for is_wide in (False, True):
        kind = [item for item in candidates if (_effect(item[1]) > WIDER * _effect(usual)) == is_wide]
        count = -(-len(kind) // TOGETHER)
        share = -(-len(kind) // count) if count else 1
        parts += [kind[i : i + share] for i in range(0, len(kind), share)]
    return parts


def _effect(entry: Entry) -> float:
    assert entry.duty is not None
    return entry.duty.refrigerating_effect_J_per_kg


def _overlay(comparison: Comparison, group: list[Placed], units: UnitSystem, number: int) -> Drawing:
    box = _limits([entry for _, entry in group], units)
    names = ", ".join(entry.refrigerant.display_name for _, entry in group)
    with canvas(3.7, 0.56, 1.12, 0.08, 0.44) as figure:
        axes = _axes(figure, units, box)
        for place, entry in group:
            mark = mark_at(comparison, place)
            assert entry.lines is not None
            _dome(axes, entry.lines, units, mark.colour, HAIRLINE if place else THIN)
            h, p = _closed(entry, units)
            axes.plot(h, p, color=mark.colour, linestyle=mark.dash, linewidth=mark.width)
            axes.plot(h[:8], p[:8], mark.marker, color=mark.colour, markersize=3.6)
        limit = limit_line(axes, comparison, units, box)
        if group[0][0] == 0:
            assert group[0][1].lines is not None
            others = [entry.lines for _, entry in group[1:] if entry.lines is not None]
            temperature_ticks(axes, group[0][1].lines, units, _pressures(group[0][1], units), limit, others)
        _end_labels(axes, comparison, group, units)
        name = f"overlay-{number + 1}"
        title = f"Pressure-enthalpy chart with the cycles of {names}"
        described = "; ".join(_cycle_words(entry, units) for _, entry in group)
        svg = to_svg(figure, name, title, described)
    caption = (
        f"Cycles of {names} on the same axes, pressure on a logarithmic scale. The thick cycle is today's; the "
        f"small numbers are its temperatures in {units.label('temperature')}, along its bubble line"
        if group[0][0] == 0
        else f"Cycles of {names} on the same axes, pressure on a logarithmic scale"
    )
    return Drawing(name, svg, caption + ".", described)


def cycle_chart(comparison: Comparison, place: int, units: UnitSystem, height_in: float = 3.4) -> Drawing | None:
    """Draw the cycle of one refrigerant with the numbers of its state table.

    Args:
        comparison: The result.
        place: 0 for the existing refrigerant, then the candidates in order. [-]
        units: The reader's units.
        height_in: Height of the chart. [in]
    Returns: The chart, None if the refrigerant was not computed.
    """
    entry = comparison.entries[place]
    if entry.lines is None:
        return None
    mark, label, box = mark_at(comparison, place), entry.refrigerant.display_name, _limits([entry], units)
    with canvas(height_in, 0.56, 0.08, 0.08, 0.44) as figure:
        axes = _axes(figure, units, box)
        _dome(axes, entry.lines, units, mark.colour, THIN)
        h, p = _closed(entry, units)
        axes.plot(h, p, color=mark.colour, linewidth=mark.width)
        axes.plot(h[:8], p[:8], mark.marker, color=mark.colour, markersize=4.2)
        limit = limit_line(axes, comparison, units, box)
        temperature_ticks(axes, entry.lines, units, _pressures(entry, units), limit)
        _number_points(axes, h, p)
        name, described = f"cycle-{place}", _cycle_words(entry, units)
        svg = to_svg(figure, name, f"Pressure-enthalpy chart of {label} with its cycle", described)
    caption = (
        f"{label}: bubble line (left) and dew line (right) with temperatures in {units.label('temperature')}, and the "
        "cycle with the point numbers of the table."
    )
    return Drawing(name, svg, caption, described)


def _axes(figure: Any, units: UnitSystem, box: tuple[tuple[float, float], tuple[float, float]]) -> Any:
    axes = figure.subplots()
    axes.set_yscale("log")
    axes.set_xlim(*box[0])
    axes.set_ylim(*box[1])
    axes.set_xlabel(f"Specific enthalpy [{units.label('specific enthalpy')}]")
    axes.set_ylabel(f"Pressure, absolute [{units.label('pressure')}]")
    log_ticks(axes, box[1])
    axes.grid(axis="y", linewidth=HAIRLINE, alpha=0.18, color=INK)
    return axes


def _limits(entries: list[Entry], units: UnitSystem) -> tuple[tuple[float, float], tuple[float, float]]:
    """Return the limits of both axes: all cycles, their condensing side up to the critical points."""
    lowest = min(point.p_Pa for entry in entries for point in entry.points) / 1.7
    highest = max(entry.lines.p_critical_Pa for entry in entries if entry.lines) * 1.3
    highest = max(highest, max(point.p_Pa for entry in entries for point in entry.points) * 1.3)
    left, right = [], []
    for entry in entries:
        lines, h = entry.lines, _closed(entry, units)[0]
        assert lines is not None
        left.append(float(np.interp(lowest, lines.p_bubble_Pa, enthalpies(lines, lines.h_bubble_J_per_kg, units))))
        right += [max(h), float(np.max(enthalpies(lines, lines.h_dew_J_per_kg, units)))]
    width = max(right) - min(left)
    h_limits = (min(left) - 0.07 * width, max(right) + 0.04 * width)
    return h_limits, (float(units.number("pressure", lowest)), float(units.number("pressure", highest)))


def _closed(entry: Entry, units: UnitSystem) -> tuple[list[float], list[float]]:
    assert entry.lines is not None
    h = [float(enthalpies(entry.lines, point.h_J_per_kg, units)) for point in entry.points]
    p = [float(units.number("pressure", point.p_Pa)) for point in entry.points]
    return [*h, h[0]], [*p, p[0]]


def _pressures(entry: Entry, units: UnitSystem) -> list[float]:
    return sorted({float(units.number("pressure", point.p_Pa)) for point in entry.points})


def _dome(axes: Any, lines: ChartLines, units: UnitSystem, colour: str, width: float) -> None:
    for h, p in ((lines.h_bubble_J_per_kg, lines.p_bubble_Pa), (lines.h_dew_J_per_kg, lines.p_dew_Pa)):
        axes.plot(enthalpies(lines, h, units), units.number("pressure", p), color=colour, linewidth=width)


def _number_points(axes: Any, h: list[float], p: list[float]) -> None:
    """Write the number of each point beside it, clear of the saturation lines; close points share one label."""
    width = axes.get_xlim()[1] - axes.get_xlim()[0]
    for level in sorted(set(p)):
        on_top = level == max(p)
        here = sorted((h[i], i + 1) for i in range(len(h) - 1) if p[i] == level)
        clusters = _clusters(here, 0.028 * width)
        for place, cluster in enumerate(clusters):
            alone = place == (len(clusters) - 1 if on_top else 0)  # discharge or evaporator inlet: no line there
            anchor, shift = ("center", 0) if alone else ("right", -4) if on_top else ("left", 3)
            x = cluster[-1][0] if on_top else cluster[0][0]
            text = ", ".join(str(number) for _, number in cluster)
            axes.annotate(
                text, (x, level), (shift, 6 if on_top else -6), textcoords="offset points",
                ha=anchor, va="bottom" if on_top else "top", weight="bold",
            )  # fmt: skip


def _clusters(items: list[tuple[float, int]], near: float) -> list[list[tuple[float, int]]]:
    """Return sorted items in groups whose neighbours lie nearer than a distance."""
    clusters: list[list[tuple[float, int]]] = []
    for item in items:
        if clusters and item[0] - clusters[-1][-1][0] < near:
            clusters[-1].append(item)
        else:
            clusters.append([item])
    return clusters


def _end_labels(axes: Any, comparison: Comparison, group: list[Placed], units: UnitSystem) -> None:
    """Name each cycle in the margin, with a hairline to its discharge point; spread so that no two touch."""
    ends = []
    for place, entry in group:
        h, p = _closed(entry, units)
        ends.append((p[1], h[1], place, entry.refrigerant.display_name))
    ends.sort(key=lambda end: (-end[0], end[1]))
    low, high = (np.log(value) for value in axes.get_ylim())
    wanted = [(np.log(p) - low) / (high - low) for p, *_ in ends]
    heights = spread(wanted, 0.055)
    for (p_end, h_end, place, label), height in zip(ends, heights, strict=True):
        mark = mark_at(comparison, place)
        leader = {"arrowstyle": "-", "linewidth": HAIRLINE, "color": mark.colour, "shrinkA": 0, "shrinkB": 3}
        axes.annotate("", (h_end, p_end), (1.004, height), textcoords="axes fraction", arrowprops=leader,
                      annotation_clip=False)  # fmt: skip
        axes.annotate(label, (1.03, height), xycoords="axes fraction", va="center", ha="left", fontsize=LABEL_PT,
                      weight="bold" if place == 0 else "normal", annotation_clip=False)  # fmt: skip
        axes.plot(
            [1.015], [height], mark.marker, color=mark.colour, markersize=5, transform=axes.transAxes, clip_on=False
        )


def _cycle_words(entry: Entry, units: UnitSystem) -> str:
    assert entry.duty is not None
    low, high = (units.with_unit("pressure", p) for p in (entry.duty.p_evap_Pa, entry.duty.p_cond_Pa))
    discharge = units.with_unit("temperature", entry.duty.T_discharge_K)
    return f"{entry.refrigerant.display_name}: from {low} to {high}, discharge at {discharge}"
