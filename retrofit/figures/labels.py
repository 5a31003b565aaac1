"""Labels that stand beside what they name, spread so that no two touch."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from retrofit.checks.prospects import KEPT, Prospect
from retrofit.figures.style import HAIRLINE, INK, LABEL_PT, SMALL_PT, THIN, Mark, mark_at
from retrofit.study import Comparison
from retrofit.units import format_number

POINTS_PER_IN = 72.0
APART_PT = 1.25 * LABEL_PT  # from one name to the next


def spread(wanted: Sequence[float], least: float) -> list[float]:
    """Return heights, falling, at least some way apart and centred on the wanted ones.

    Args:
        wanted: Heights wanted, falling, as shares of the axis. [-]
        least: Smallest distance. [-]
    """
    heights: list[float] = []
    for value in wanted:
        heights.append(min(value, heights[-1] - least) if heights else value)
    if not heights:
        return heights
    shift = (sum(wanted) - sum(heights)) / len(heights)
    shift = max(0.02 - heights[-1], min(shift, 0.99 - heights[0]))
    return [height + shift for height in heights]


def label_of(option: Prospect) -> str:
    """Return the name of an option in a figure."""
    name = option.entry.refrigerant.display_name
    return f"{name} kept" if option.deed == KEPT else name


def mark_in(comparison: Comparison, option: Prospect) -> Mark:
    """Return the mark of an option: that of its refrigerant, keeping the plant with repairs broken.

    Args:
        comparison: The result.
        option: The option.
    """
    found = mark_at(comparison, comparison.entries.index(option.entry))
    return Mark(found.colour, "X", (0, (2, 1.5)), THIN) if option.deed == KEPT else found


def end_labels(axes: Any, ends: Sequence[tuple[float, Mark, str]]) -> None:
    """Name lines in the right margin, each with its marker and a hairline to its end.

    Args:
        axes: Axes whose limits are set.
        ends: Height of each line at the right edge, its mark and its name. [units of the axis]
    """
    low, high = axes.get_ylim()
    height_pt = axes.bbox.height * POINTS_PER_IN / axes.figure.dpi
    least = min(APART_PT / height_pt, 0.97 / max(1, len(ends) - 1))
    ordered = sorted(ends, key=lambda end: -end[0])
    heights = spread([(value - low) / (high - low) for value, _, _ in ordered], least)
    for (value, mark, text), height in zip(ordered, heights, strict=True):
        axes.annotate(
            text, (1.0, (value - low) / (high - low)), (1.075, height), xycoords="axes fraction",
            textcoords="axes fraction", va="center", ha="left", fontsize=LABEL_PT, annotation_clip=False,
            weight="bold" if mark.colour == INK and mark.marker == "o" else "normal",
            arrowprops={"arrowstyle": "-", "linewidth": HAIRLINE, "color": mark.colour, "shrinkA": 16, "shrinkB": 0,
                        "relpos": (0.0, 0.5)},
        )  # fmt: skip
        axes.plot([1.055], [height], mark.marker, color=mark.colour, markersize=4.5, transform=axes.transAxes,
                  clip_on=False)  # fmt: skip


def thousands(axis: Any) -> None:
    """Write the numbers of an axis as everywhere else: marked thousands, a true minus.

    Args:
        axis: The x or y axis.
    """
    axis.set_major_formatter(lambda value, _: format_number(value, 0) if abs(value) >= 10.0 else _short(value))


def _short(value: float) -> str:
    return f"{value:g}".replace("-", "\N{MINUS SIGN}")


def upright(axes: Any, x: float, text: str, side: str = "left", dash: Any = (0, (3, 2))) -> None:
    """Draw a vertical line through the axes with a word above it.

    Args:
        axes: The axes.
        x: Where. [units of the axis]
        text: The word; empty for none. [-]
        side: Which side of the word stands at the line: "left", "center" or "right". [-]
        dash: How the line is broken.
    """
    axes.axvline(x, color=INK, linewidth=THIN, linestyle=dash)
    if text:
        shift = {"left": 2, "center": 0, "right": -2}[side]
        axes.annotate(text, (x, 1.0), (shift, 3), xycoords=("data", "axes fraction"), textcoords="offset points",
                      ha=side, va="bottom", fontsize=SMALL_PT)  # fmt: skip
