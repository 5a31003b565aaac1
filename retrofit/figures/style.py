"""How every figure looks: sizes, line weights, and the colour, marker and dash that a refrigerant keeps."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from retrofit.study import Comparison

# Black stands for the colour of the page's own text, light or dark; see drawing.py.
INK = "#000000"
# Blue, vermillion, bluish green and reddish purple of Okabe and Ito, "Color Universal Design" (2002, 2008): the
# four of their eight that keep 3:1 on white and on a dark page alike.
COLOURS = ("#0072B2", "#D55E00", "#009E73", "#CC79A7")
MARKERS = ("s", "^", "D", "v", "P", "X", "<", ">", "h")
DASHES: tuple[Any, ...] = ((0, (5.5, 1.8)), (0, (7, 1.8, 1.3, 1.8)), (0, (1.3, 1.5)), (0, (9, 1.5, 1.3, 1.5, 1.3, 1.5)))

PAGE_WIDTH_IN = 7.2
LABEL_PT, SMALL_PT = 8.5, 7.5
HAIRLINE, THIN, LINE, THICK = 0.45, 0.8, 1.5, 2.3

LOOK: dict[str, Any] = {
    "font.family": "sans-serif",
    "font.sans-serif": ["DejaVu Sans"],  # measured with; the page puts its own font in its place
    "font.size": LABEL_PT,
    "axes.labelsize": LABEL_PT,
    "axes.linewidth": HAIRLINE,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.edgecolor": INK,
    "text.color": INK,
    "axes.labelcolor": INK,
    "xtick.color": INK,
    "ytick.color": INK,
    "xtick.labelsize": LABEL_PT,
    "ytick.labelsize": LABEL_PT,
    "xtick.major.width": HAIRLINE,
    "ytick.major.width": HAIRLINE,
    "xtick.major.size": 3.0,
    "ytick.major.size": 3.0,
    "lines.solid_capstyle": "butt",
    "svg.fonttype": "none",
    "svg.hashsalt": "retrofit",
    "axes.unicode_minus": True,
    "text.parse_math": False,  # a currency may be a dollar sign
    "path.simplify": True,
}


@dataclass(frozen=True)
class Mark:
    """What tells a refrigerant from the others in every figure."""

    colour: str
    marker: str
    dash: Any
    width: float


def mark_of(position: int) -> Mark:
    """Return the mark of a refrigerant by its place in the comparison.

    Args:
        position: 0 for the existing refrigerant, then the candidates in order. [-]
    Returns: Its colour, marker, dash and line width; no two among 36 candidates share all of them.
    """
    if position == 0:
        return Mark(INK, "o", "solid", THICK)
    turn, place = divmod(position - 1, len(COLOURS))
    dash = DASHES[(place + turn) % len(DASHES)]
    return Mark(COLOURS[place], MARKERS[(position - 1) % len(MARKERS)], dash, LINE)


def mark_at(comparison: Comparison, place: int) -> Mark:
    """Return the mark of a refrigerant of a result, the same in every part of one comparison.

    Args:
        comparison: The result.
        place: 0 for the existing refrigerant, then the candidates in order. [-]
    """
    return mark_of(comparison.places.get(comparison.entries[place].refrigerant.designation, place))
