"""From a figure to SVG text that can stand in a page: unique ids, text as text, black as the page's own ink."""

from __future__ import annotations

import io
import re
import threading
import xml.etree.ElementTree as ET
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from typing import Any

from retrofit.figures.style import INK, LOOK, PAGE_WIDTH_IN

SVG = "http://www.w3.org/2000/svg"
XLINK_HREF = "{http://www.w3.org/1999/xlink}href"
_DRAWING = threading.Lock()  # the settings of the drawing library belong to the whole process
_FAMILY = re.compile(r"font-family:[^;]*;?\s*")
_FONT = re.compile(r"font:\s*(?P<style>(?:[a-z]+ |[0-9]{3} )*)(?P<size>[0-9.]+px)[^;]*")


@dataclass(frozen=True)
class Drawing:
    """A figure ready for a page: SVG text, its caption, and what it shows in words."""

    name: str
    svg: str
    caption: str
    description: str

    def __html__(self) -> str:
        """Return the SVG for a template that escapes what it is given: it is made here, its texts escaped."""
        return self.svg


@contextmanager
def canvas(height_in: float, left_in: float, right_in: float, top_in: float, bottom_in: float) -> Iterator[Any]:
    """Give a figure to draw on, alone: one drawing at a time in the whole process.

    Args:
        height_in: Height of the figure. [in]
        left_in, right_in, top_in, bottom_in: Margins around the axes, given here because finding them costs as
            much time as the drawing. [in]
    Returns: A context with the matplotlib Figure; it has to be turned into SVG inside of it.
    """
    from matplotlib import rc_context
    from matplotlib.figure import Figure

    settings: Any = LOOK
    with _DRAWING, rc_context(settings):
        figure = Figure(figsize=(PAGE_WIDTH_IN, height_in))
        figure.subplots_adjust(
            left=left_in / PAGE_WIDTH_IN,
            right=1.0 - right_in / PAGE_WIDTH_IN,
            top=1.0 - top_in / height_in,
            bottom=bottom_in / height_in,
        )
        figure.patch.set_alpha(0.0)
        yield figure


def to_svg(figure: Any, name: str, title: str, description: str) -> str:
    """Return a figure as SVG text with the same bytes each time.

    Args:
        figure: A matplotlib Figure.
        name: Prefix of every id; it has to be unique in the page. [-]
        title, description: The figure in words, for those who do not see it. [-]
    Returns: One `svg` element without size, metadata and style sheet. [-]
    """
    from matplotlib.backends.backend_svg import FigureCanvasSVG

    for axes in figure.axes:
        axes.patch.set_alpha(0.0)
    buffer = io.BytesIO()
    svg_canvas: Any = FigureCanvasSVG(figure)
    svg_canvas.print_svg(buffer, metadata={"Date": None})
    root = ET.fromstring(buffer.getvalue())
    _tidy(root, name)
    _describe(root, name, title, description)
    ET.register_namespace("", SVG)
    return ET.tostring(root, encoding="unicode")


def _tidy(root: ET.Element, name: str) -> None:
    parents = {child: parent for parent in root.iter() for child in parent}
    for element, parent in parents.items():
        if element.tag.endswith("}metadata") or element.tag.endswith("}style"):
            parent.remove(element)
    for dropped in ("width", "height", "version"):
        root.attrib.pop(dropped, None)
    for element in root.iter():
        _tidy_attributes(element, name)
    root.set("fill", "currentColor")  # the library leaves black fills out


def _tidy_attributes(element: ET.Element, name: str) -> None:
    if XLINK_HREF in element.attrib:
        element.set("href", element.attrib.pop(XLINK_HREF))
    if "id" in element.attrib:
        element.set("id", f"{name}-{element.attrib['id']}")
    for key, value in list(element.attrib.items()):
        value = re.sub(r"url\(#", f"url(#{name}-", value)
        value = re.sub(r"^#(?=.)", f"#{name}-", value) if key == "href" else value
        value = value.replace(INK, "currentColor")
        element.set(key, _FAMILY.sub("", _FONT.sub(_plain_font, value)))


def _plain_font(match: re.Match[str]) -> str:
    """Return size, weight and slant without the family, which the page gives."""
    weight = "font-weight: bold; " if re.search("bold|[6-9]00", match["style"]) else ""
    slant = "font-style: italic; " if "italic" in match["style"] else ""
    return f"{weight}{slant}font-size: {match['size']}"


def _describe(root: ET.Element, name: str, title: str, description: str) -> None:
    for place, (tag, text) in enumerate((("title", title), ("desc", description))):
        element = ET.Element(f"{{{SVG}}}{tag}", {"id": f"{name}-{tag}"})
        element.text = text
        root.insert(place, element)
    root.set("role", "img")
    root.set("aria-labelledby", f"{name}-title {name}-desc")
