"""The charts of the page: each a request of its own, drawn when asked for, one at a time, and kept."""

from __future__ import annotations

import hashlib
import re
import threading
import time
from collections import OrderedDict
from collections.abc import Callable
from dataclasses import dataclass

from retrofit.figures import (
    Drawing,
    change_charts,
    cycle_chart,
    discharge_chart,
    overlay_charts,
    overlay_count,
    pressure_chart,
)
from retrofit.meeting.state import State
from retrofit.study import Comparison
from retrofit.units import UNIT_SYSTEMS

MOST_VIEWS, MOST_DRAWN = 12, 80
YIELD_S = 3.0  # how long a picture lets numbers go first
# A picture is a document of its own: it has its own ink, light or dark, and the fonts of the page.
LOOK = (
    "<style>:root{color:#16181a;font-family:'Segoe UI','Helvetica Neue','Noto Sans','Liberation Sans',Arial,sans-serif}"
    "@media (prefers-color-scheme:dark){:root{color:#e8e6e1}}</style>"
)
_ROOT = re.compile(r"<svg\b[^>]*>")


@dataclass(frozen=True)
class View:
    """What charts are drawn of: the candidates in sight, in their order, in some units."""

    comparison: Comparison
    units: str


@dataclass(frozen=True)
class Picture:
    """A chart on the page: name, address, what it shows, and its caption."""

    name: str
    href: str
    alt: str
    caption: str


class Pictures:
    """Draws charts and keeps them; a view that is too old is drawn no more."""

    def __init__(self, is_idle: Callable[[], bool]) -> None:
        self._is_idle = is_idle
        self._lock = threading.Lock()
        self._pen = threading.Lock()
        self._views: OrderedDict[str, View] = OrderedDict()
        self._newest = ""
        self._drawn: OrderedDict[tuple[str, str], str] = OrderedDict()

    def pictures(self, state: State, view: View) -> tuple[Picture, ...]:
        """Return the charts of a view with their addresses; nothing is drawn yet.

        Args:
            state: The state it belongs to.
            view: What is in sight.
        """
        if not any(entry.duty for entry in view.comparison.entries):
            return ()
        names = tuple(entry.refrigerant.designation for entry in view.comparison.entries)
        key = hashlib.sha256(repr((state.physics, names, view.units)).encode()).hexdigest()[:20]
        with self._lock:
            self._views[key], self._newest = view, key
            self._views.move_to_end(key)
            while len(self._views) > MOST_VIEWS:
                self._views.popitem(last=False)
        return tuple(Picture(name, f"/picture/{key}/{name}.svg", *words) for name, *words in _chosen(view.comparison))

    def cycle(self, state: State, view: View, place: int) -> str:
        """Return the address of the chart of one refrigerant.

        Args:
            state: The state it belongs to.
            view: What is in sight.
            place: 0 for the existing refrigerant, then the candidates in order. [-]
        """
        found = self.pictures(state, view)
        return f"{found[0].href.rpartition('/')[0]}/cycle-{place}.svg" if found else ""

    def svg(self, key: str, name: str) -> str | None:
        """Return a chart as an SVG document, None if there is none of that name or its view is overtaken.

        Args:
            key: Of the view. [-]
            name: Of the chart. [-]
        """
        with self._lock:
            view, ready = self._views.get(key), self._drawn.get((key, name))
        if ready or view is None:
            return ready
        until = time.monotonic() + YIELD_S
        while not self._is_idle() and time.monotonic() < until and self._newest == key:
            time.sleep(0.01)
        with self._pen:
            if self._newest != key:
                return None
            drawing = _draw(view, name)
        if drawing is None:
            return None
        svg = _ROOT.sub(lambda match: match[0] + LOOK, drawing.svg, count=1)
        with self._lock:
            self._drawn[key, name] = svg
            while len(self._drawn) > MOST_DRAWN:
                self._drawn.popitem(last=False)
        return svg


BAND = "Inside the grey band the difference is smaller than what the model can tell."


def _chosen(comparison: Comparison) -> list[tuple[str, str, str]]:
    """Return name, alternative text and caption of each chart that a result has."""
    found = [("change-0", "Chart: cooling and COP against today.", f"Cooling and COP against today. {BAND}")]
    if any(entry.plant for entry in comparison.entries):
        bases = "left at the plant’s temperatures, right with the plant as installed"
        found = [
            ("change-0", "Chart: cooling against today.", f"Cooling against today, {bases}. {BAND}"),
            ("change-1", "Chart: COP against today.", f"COP against today, {bases}, at the same cooling. {BAND}"),
        ]
    levels = "The dashed lines are the levels of the checks, not a maker’s limits."
    found.append(
        (
            "discharge",
            "Chart: discharge temperature of each refrigerant.",
            f"Discharge temperature, with the band of the model. {levels}",
        )
    )
    gauge = "Evaporating and condensing pressure as a gauge at the plant shows them."
    found.append(("pressures", "Chart: evaporating and condensing pressure of each refrigerant.", gauge))
    cycles = "Cycles on the same axes, pressure on a logarithmic scale; the thick cycle is today’s."
    for number in range(overlay_count(comparison)):
        alt = f"Chart {number + 1} of cycles on pressure and enthalpy."
        found.append((f"overlay-{number}", alt, cycles))
    return found


def _draw(view: View, name: str) -> Drawing | None:
    units, comparison = UNIT_SYSTEMS[view.units], view.comparison
    kind, _, text = name.partition("-")
    number = int(text) if text.isdigit() and len(text) < 3 else 0
    drawn: tuple[Drawing | None, ...] = ()
    if kind == "change":
        drawn = change_charts(comparison)
    elif kind == "overlay":
        drawn = overlay_charts(comparison, units)
    elif name in ("discharge", "pressures"):
        return (discharge_chart if name == "discharge" else pressure_chart)(comparison, units)
    elif kind == "cycle" and number < len(comparison.entries):
        return cycle_chart(comparison, number, units)
    return drawn[number] if number < len(drawn) else None
