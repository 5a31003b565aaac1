"""Charts of a year: electricity by month or outdoor temperature, and what the plant does as it gets hotter outside."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from retrofit.checks.prospects import KEPT, Prospect, life_of_result, prospects
from retrofit.figures.drawing import Drawing, canvas, to_svg
from retrofit.figures.labels import end_labels, label_of, mark_in, thousands, upright
from retrofit.figures.style import HAIRLINE, INK, SMALL_PT, THIN
from retrofit.study import Comparison
from retrofit.study.bands import base_bands, percent_text
from retrofit.study.result import FloatArray
from retrofit.study.year import PlantMap, YearConditions, YearRun, load_W
from retrofit.units import UnitSystem, format_number

MONTHS = ("Jan", "Feb", "Mar", "Apr", "May", "June", "July", "Aug", "Sept", "Oct", "Nov", "Dec")
MARGINS_IN = (0.75, 1.15)  # left and right
FILL, PALE = 0.09, 0.3


@dataclass(frozen=True)
class Steps:
    """A year in steps: middles and width along the axis, its label, and the electricity of a year in each step."""

    middle: FloatArray
    width: float
    label: str
    of: Callable[[YearRun], FloatArray | None]


def energy_chart(comparison: Comparison, units: UnitSystem) -> Drawing | None:
    """Draw the electricity of the plant as it is over the year, and what each option takes more or less.

    Args:
        comparison: A result with its remaining life.
        units: The reader's units.
    Returns: The chart by month, or by outdoor temperature where the year has no months; None if today's plant has
        no year.
    """
    options = [option for option in prospects(comparison) if option.deed != KEPT]
    today = options[0].year
    steps = None if today is None else _steps(today, units)
    if today is None or steps is None:
        return None
    base = units.number("energy", _known(steps.of(today)))
    drawn = [(option, steps.of(option.year)) for option in options[1:] if option.year is not None]
    found = [(option, units.number("energy", values) - base) for option, values in drawn if values is not None]
    band = base_bands(comparison)["cop"].value
    label, name = units.label("energy"), label_of(options[0])
    left, right = MARGINS_IN
    with canvas(3.2, left, right, 0.26, 0.46 if steps.label else 0.26) as figure:
        upper, lower = figure.subplots(2, 1, sharex=True, gridspec_kw={"hspace": 0.2, "height_ratios": (2, 3)})
        upper.bar(steps.middle, base, 0.8 * steps.width, color=INK, alpha=PALE, linewidth=0)
        upper.set_ylabel(f"{name} [{label}]")
        lower.bar(steps.middle, 2 * band * base, steps.width, -band * base, color=INK, alpha=FILL, linewidth=0)
        lower.axhline(0.0, color=INK, linewidth=THIN)
        _lines(comparison, lower, steps.middle, found)
        lower.set_ylabel(f"against {name} [{label}]")
        _ticks(lower, steps)
        words = "; ".join(f"{label_of(o)} {format_number(float(v.sum()), 0, signed=True)}" for o, v in found)
        described = (
            f"In {label}, {name} {format_number(float(base.sum()), 0)} in the year; against it: {words or 'none'}"
        )
        thousands(upper.yaxis)
        thousands(lower.yaxis)
        svg = to_svg(figure, "year-energy", "Electricity over the year", described)
    return Drawing("year-energy", svg, _energy_caption(options, name, steps, band, len(found)), described)


def _energy_caption(options: Sequence[Prospect], name: str, steps: Steps, band: float, drawn: int) -> str:
    by = "month" if steps.label == "" else "outdoor temperature"
    left_out = [label_of(option) for option in options[1:] if option.year is None or option.year.by_air is None]
    more = f" Not drawn, not known step by step: {', '.join(left_out)}." if left_out else ""
    return (
        f"Electricity by {by}: with {name} as it is (above), and what each option takes more or less (below). Inside "
        f"the grey band, ±{percent_text(band)} of the bar above, the difference is smaller than what the model can "
        f"tell.{more}"
    ).replace("%", "\N{NO-BREAK SPACE}%")


def _known(values: FloatArray | None) -> FloatArray:
    assert values is not None
    return values


def _steps(today: YearRun, units: UnitSystem) -> Steps | None:
    if today.monthly_J is not None:
        return Steps(np.arange(12.0), 1.0, "", lambda run: run.monthly_J)
    if today.by_air is None:
        return None
    middle = np.asarray(units.number("temperature", today.by_air.T_air_K))
    width = float(np.min(np.diff(middle))) if middle.size > 1 else 1.0
    label = f"Outdoor temperature [{units.label('temperature')}]"
    return Steps(middle, width, label, lambda run: run.by_air.energy_J if run.by_air else None)


def _ticks(axes: Any, steps: Steps) -> None:
    if steps.label:
        axes.set_xlabel(steps.label)
    else:
        axes.set_xticks(range(12), MONTHS)
    axes.set_xlim(steps.middle[0] - 0.6 * steps.width, steps.middle[-1] + 0.6 * steps.width)


def _lines(comparison: Comparison, axes: Any, x: FloatArray, lines: Sequence[tuple[Prospect, FloatArray]]) -> None:
    """Draw lines with their marks and name them in the right margin."""
    for option, values in lines:
        mark = mark_in(comparison, option)
        every = max(1, x.size // 12)
        axes.plot(x, values, color=mark.colour, linestyle=mark.dash, linewidth=mark.width, marker=mark.marker,
                  markersize=3.5, markevery=every)  # fmt: skip
    axes.margins(y=0.12)
    axes.set_ylim(axes.get_ylim())
    ends = [(_last(values), mark_in(comparison, option), label_of(option)) for option, values in lines]
    end_labels(axes, [end for end in ends if np.isfinite(end[0])])


def _last(values: FloatArray) -> float:
    known = values[np.isfinite(values)]
    return float(known[-1]) if known.size else np.nan


# As it gets hotter outside


@dataclass(frozen=True)
class Axis:
    """Which of a map's axes the outdoors moves.

    Attributes:
        label: Of the axis, without its unit.
        shift_K: From the inlet to the outdoor temperature.
        T_year_K: Coldest and hottest of the year.
        hottest_K: Hottest day that the plant is to stand; None if not given.
        is_outdoors: Whether the axis is the outdoor air.
        is_sink: Whether it is the condenser's inlet.
        held_K: The other inlet, held at its design value.
    """

    label: str
    shift_K: float
    T_year_K: tuple[float, float]
    hottest_K: float | None
    is_outdoors: bool
    is_sink: bool
    held_K: float


def axis_of(comparison: Comparison, asked: YearConditions) -> Axis:
    """Return along which axis the plant is drawn: the inlet that follows the outdoors, the condenser's first.

    Args:
        comparison: The result.
        asked: What the year asks.
    """
    case = comparison.case
    assert case.year is not None
    assert case.condenser is not None
    assert case.evaporator is not None
    year = case.year
    is_sink = year.condenser_follows != "constant" or year.evaporator_follows == "constant"
    follows = year.condenser_follows if is_sink else year.evaporator_follows
    approach = year.condenser_approach_K if is_sink else year.evaporator_approach_K
    T_K = asked.T_cond_in_K if is_sink else asked.T_evap_in_K
    held = case.evaporator.inlet_K if is_sink else case.condenser.inlet_K
    other = asked.T_evap_in_K if is_sink else asked.T_cond_in_K
    is_outdoors = follows == "dry bulb"
    where = "condenser" if is_sink else "evaporator"
    shift = -approach if is_outdoors else 0.0
    return Axis(
        label="Outdoor temperature" if is_outdoors else f"Temperature at the inlet of the {where} ({follows})",
        shift_K=shift,
        T_year_K=(float(T_K.min()) + shift, float(T_K.max()) + shift),
        hottest_K=case.plant.highest_ambient_K if is_outdoors and is_sink else None,
        is_outdoors=is_outdoors,
        is_sink=is_sink,
        held_K=float(np.mean(other)) if held is None else held,
    )


def along(found: PlantMap, values: FloatArray, axis: Axis) -> FloatArray:
    """Return values of a map along one axis, the other inlet held; linear between its nodes.

    Args:
        found: The map.
        values: One of its arrays. [any]
        axis: Which axis, and where the other inlet is held.
    """
    if axis.is_sink:
        return np.array([np.interp(axis.held_K, found.T_source_K, row) for row in values])
    return np.array([np.interp(axis.held_K, found.T_sink_K, row) for row in values.T])


def ambient_chart(comparison: Comparison, units: UnitSystem) -> Drawing | None:
    """Draw capacity and discharge temperature of each option at full against the outdoors.

    Args:
        comparison: A result with its remaining life.
        units: The reader's units.
    Returns: The chart, with the band of the model around today's lines; None if today's plant has no map.
    """
    asked = life_of_result(comparison).asked
    options = [option for option in prospects(comparison) if option.deed != KEPT]
    maps = [(option, option.year.map) for option in options if option.year is not None and option.year.map is not None]
    if asked is None or not maps or maps[0][0] is not options[0]:
        return None
    axis = axis_of(comparison, asked)
    left, right = MARGINS_IN
    with canvas(3.8, left, right, 0.26, 0.46) as figure:
        upper, lower = figure.subplots(2, 1, sharex=True, gridspec_kw={"hspace": 0.12, "height_ratios": (6, 5)})
        x = _outdoors(maps[0][1], axis, units)
        capacity = [(option, _capacity(found, asked.serves, axis, units)) for option, found in maps]
        _load(comparison, upper, axis, x, units)
        _with_band(comparison, upper, x, capacity, base_bands(comparison)["capacity"].value, is_share=True)
        upper.set_ylabel(f"{'Heat' if asked.serves == 'heating' else 'Cooling'} at full [{units.label('cooling')}]")
        hot = [(option, np.asarray(units.number("temperature", along(f, f.T_discharge_K, axis)))) for option, f in maps]
        band_K = base_bands(comparison)["T_discharge"].value
        step = float(units.number("temperature difference", band_K))
        _with_band(comparison, lower, x, hot, step, is_share=False)
        lower.set_ylabel(f"Discharge [{units.label('temperature')}]")
        lower.set_xlabel(f"{axis.label} [{units.label('temperature')}]")
        _marked(upper, lower, axis, units)
        words = _ambient_words(capacity, hot, x, units)
        svg = to_svg(figure, "year-ambient", "Capacity and discharge temperature against the outdoors", words)
    return Drawing("year-ambient", svg, _ambient_caption(comparison, options, axis, units, asked.serves), words)


def _outdoors(found: PlantMap, axis: Axis, units: UnitSystem) -> FloatArray:
    nodes = found.T_sink_K if axis.is_sink else found.T_source_K
    return np.asarray(units.number("temperature", nodes + axis.shift_K))


def _capacity(found: PlantMap, serves: str, axis: Axis, units: UnitSystem) -> FloatArray:
    delivered = found.cop * found.power_W if serves == "heating" else found.cooling_W
    return np.asarray(units.number("cooling", along(found, delivered, axis)))


def _load(comparison: Comparison, axes: Any, axis: Axis, x: FloatArray, units: UnitSystem) -> None:
    """Draw the load by day, where the outdoors decides it."""
    if not axis.is_outdoors:
        return
    T_air = np.linspace(axis.T_year_K[0], max(axis.T_year_K[1], axis.hottest_K or axis.T_year_K[1]), 60)
    load = units.number("cooling", load_W(comparison.case, T_air, np.ones(T_air.size)))
    at = np.asarray(units.number("temperature", T_air))
    axes.plot(at, load, color=INK, linewidth=THIN, linestyle=(0, (1, 1.5)))
    place = at.size // 2
    axes.annotate("load by day", (at[place], load[place]), (4, -3), textcoords="offset points", ha="left", va="top",
                  fontsize=SMALL_PT, style="italic")  # fmt: skip


def _with_band(
    comparison: Comparison, axes: Any, x: FloatArray, lines: Sequence[tuple[Prospect, FloatArray]], band: float, *,
    is_share: bool,
) -> None:  # fmt: skip
    today = lines[0][1]
    half = today * band if is_share else np.full(today.shape, band)
    axes.fill_between(x, today - half, today + half, color=INK, alpha=FILL, linewidth=0)
    axes.set_xlim(x[0], x[-1])
    _lines(comparison, axes, x, lines)


def _marked(upper: Any, lower: Any, axis: Axis, units: UnitSystem) -> None:
    """Mark the range of the year, and the hottest day."""
    low, high = (float(units.number("temperature", T)) for T in axis.T_year_K)
    hottest = None if axis.hottest_K is None else float(units.number("temperature", axis.hottest_K))
    for axes in (upper, lower):
        if high > low:
            words = ("coldest of the year", "hottest of the year") if axes is upper else ("", "")
            upright(axes, low, words[0], "left", (0, (1, 2)))
            upright(axes, high, words[1], "right", (0, (1, 2)))
        if hottest is not None:
            upright(axes, hottest, f"hottest day {hottest:.0f}" if axes is upper else "", "left")
    lower.axhline(lower.get_ylim()[0], color=INK, linewidth=HAIRLINE)


def _ambient_words(
    capacity: Sequence[tuple[Prospect, FloatArray]], hot: Sequence[tuple[Prospect, FloatArray]], x: FloatArray,
    units: UnitSystem,
) -> str:  # fmt: skip
    ends = "; ".join(
        f"{label_of(option)} {_first_and_last(cooling)} {units.label('cooling')} and {_first_and_last(T)} "
        f"{units.label('temperature')}"
        for (option, cooling), (_, T) in zip(capacity, hot, strict=True)
    )
    return f"From {x[0]:.0f} to {x[-1]:.0f} {units.label('temperature')}, at full and at discharge: {ends}"


def _first_and_last(values: FloatArray) -> str:
    known = values[np.isfinite(values)]
    return f"{known[0]:.0f} to {known[-1]:.0f}" if known.size else "not known"


def _ambient_caption(
    comparison: Comparison, options: Sequence[Prospect], axis: Axis, units: UnitSystem, serves: str
) -> str:
    band, held = base_bands(comparison), units.with_unit("temperature", axis.held_K)
    difference = units.with_unit("temperature difference", band["T_discharge"].value, decimals=0)
    new = [label_of(option) for option in options if option.deed == "new plant" and option.year and option.year.map]
    sized = f" {', '.join(new)}: a new plant of today's size." if new else ""
    absent = [label_of(option) for option in options if option.year is None or option.year.map is None]
    left_out = f" Not drawn: {', '.join(absent)}." if absent else ""
    other = "evaporator" if axis.is_sink else "condenser"
    load = " The dotted line is the load by day." if axis.is_outdoors else ""
    return (
        f"What the plant does at full as it gets hotter outside, with {held} at the inlet of the {other}: "
        f"{'heat' if serves == 'heating' else 'cooling'} (above) and discharge temperature (below). The grey band "
        f"around today's line, ±{percent_text(band['capacity'].value)} and ±{difference}, is as far as the model can "
        f"tell two lines apart.{load}{sized}{left_out}"
    ).replace("%", "\N{NO-BREAK SPACE}%")
