"""The warming of each option over the remaining life: refrigerant and electricity apart, and the range of the draws."""

from __future__ import annotations

from typing import Any

from retrofit.checks.prospects import Prospect, prospects, quantile
from retrofit.figures.drawing import Drawing, canvas, to_svg
from retrofit.figures.labels import label_of, mark_in, thousands
from retrofit.figures.style import HAIRLINE, INK, LABEL_PT, SMALL_PT, THIN
from retrofit.study import Comparison
from retrofit.units import format_number

ROW_IN, FRAME_IN = 0.23, 0.72
KG_PER_T = 1000.0
PALE, HEIGHT = 0.3, 0.56


def warming_chart(comparison: Comparison) -> Drawing | None:
    """Draw the warming of each option: refrigerant hatched, electricity plain, the range of 8 of 10 draws as a line.

    Args:
        comparison: A result with its remaining life.
    Returns: The chart in tonnes of CO2e; None if no total is known.
    """
    options = prospects(comparison)
    totals = [option.account.tewi.total_kg for option in options]
    if all(total is None for total in totals):
        return None
    with canvas(FRAME_IN + ROW_IN * max(3, len(options)), 1.05, 0.7, 0.24, 0.46) as figure:
        axes = figure.subplots()
        axes.set_yticks(range(len(options)), [label_of(option) for option in options])
        axes.get_yticklabels()[0].set_fontweight("bold")
        axes.set_ylim(len(options) - 0.4, -0.6)
        axes.tick_params(axis="y", length=0)
        for place, option in enumerate(options):
            _row(comparison, axes, place, option)
        axes.set_xlim(0.0, axes.get_xlim()[1])
        axes.set_xlabel("Warming over the remaining life [t CO2e]")
        thousands(axes.xaxis)
        _key(axes, options)
        words = "; ".join(_words(option) for option in options)
        svg = to_svg(figure, "warming", "Warming over the remaining life", f"In t CO2e: {words}")
    drawn = any(quantile(option, "tewi_kg") for option in options)
    lines = " The line across the end of a bar reaches over 8 of 10 draws of the inputs." if drawn else ""
    caption = (
        "Warming over the remaining life (TEWI): refrigerant lost, hatched, and electricity, plain, with the sum at "
        f"the right.{lines} A part that is not known is left out of the bar, and its sum reads unknown."
    )
    return Drawing("warming", svg, caption, words)


def _row(comparison: Comparison, axes: Any, place: int, option: Prospect) -> None:
    warming, mark = option.account.tewi, mark_in(comparison, option)
    direct, indirect = _t(warming.direct_kg), _t(warming.indirect_kg)
    if direct is not None:
        axes.barh(place, direct, HEIGHT, color="none", edgecolor=INK, hatch="////", linewidth=THIN)
    if indirect is not None:
        axes.barh(place, indirect, HEIGHT, direct or 0.0, color=INK, alpha=PALE, linewidth=0)
    total, ends = _t(warming.total_kg), quantile(option, "tewi_kg")
    if ends is not None:
        axes.plot((ends[0] / KG_PER_T, ends[2] / KG_PER_T), (place, place), color=INK, linewidth=THIN)
        axes.plot((ends[0] / KG_PER_T, ends[2] / KG_PER_T), (place, place), "|", color=INK, markersize=6)
    if total is not None:
        axes.plot([total], [place], mark.marker, color=mark.colour, markersize=5)
    text = "unknown" if total is None else format_number(total, 0 if total >= 100.0 else 1)
    axes.annotate(text, (1.0, place), (44, 0), xycoords=("axes fraction", "data"), textcoords="offset points",
                  va="center", ha="right", fontsize=LABEL_PT, annotation_clip=False)  # fmt: skip


def _key(axes: Any, options: tuple[Prospect, ...]) -> None:
    """Name the two parts above the first bar that has both."""
    for place, option in enumerate(options):
        direct, indirect = _t(option.account.tewi.direct_kg), _t(option.account.tewi.indirect_kg)
        if direct is not None and indirect is not None:
            for start, width, word in ((0.0, direct, "refrigerant"), (direct, indirect, "electricity")):
                axes.annotate(word, (start + 0.5 * width, place - 0.5 * HEIGHT), (0, 3), textcoords="offset points",
                              ha="center", va="bottom", fontsize=SMALL_PT, style="italic")  # fmt: skip
            break
    axes.axvline(0.0, color=INK, linewidth=HAIRLINE)


def _t(mass_kg: Any) -> float | None:
    return None if mass_kg is None else float(mass_kg) / KG_PER_T


def _words(option: Prospect) -> str:
    warming = option.account.tewi
    parts = [
        f"{word} {'unknown' if value is None else format_number(value, 0)}"
        for word, value in (("refrigerant", _t(warming.direct_kg)), ("electricity", _t(warming.indirect_kg)))
    ]
    return f"{label_of(option)} {' and '.join(parts)}"
