"""A result drawn: pressure-enthalpy charts and charts against today, each as SVG text that stands in a page."""

from retrofit.figures.cycles import cycle_chart, overlay_charts, overlay_count
from retrofit.figures.drawing import Drawing
from retrofit.figures.maps import map_chart
from retrofit.figures.payback import payback_chart
from retrofit.figures.rows import change_charts, discharge_chart, pressure_chart
from retrofit.figures.style import COLOURS, INK, Mark, mark_at, mark_of
from retrofit.figures.tornado import tornado_chart
from retrofit.figures.warming import warming_chart
from retrofit.figures.year import ambient_chart, energy_chart

__all__ = [
    "COLOURS",
    "INK",
    "Drawing",
    "Mark",
    "ambient_chart",
    "change_charts",
    "cycle_chart",
    "discharge_chart",
    "energy_chart",
    "map_chart",
    "mark_at",
    "mark_of",
    "overlay_charts",
    "overlay_count",
    "payback_chart",
    "pressure_chart",
    "tornado_chart",
    "warming_chart",
]
