"""A result drawn: pressure-enthalpy charts and charts against today, each as SVG text that stands in a page."""

from retrofit.figures.cycles import cycle_chart, overlay_charts, overlay_count
from retrofit.figures.drawing import Drawing
from retrofit.figures.rows import change_charts, discharge_chart, pressure_chart
from retrofit.figures.style import COLOURS, INK, Mark, mark_of

__all__ = [
    "COLOURS",
    "INK",
    "Drawing",
    "Mark",
    "change_charts",
    "cycle_chart",
    "discharge_chart",
    "mark_of",
    "overlay_charts",
    "overlay_count",
    "pressure_chart",
]
