"""Whether an SVG drawing is a plain one: what it draws, counted with everything that it repeats, stays small.

A drawing of 3 kB can repeat a part that repeats a part, and so on, until nothing can draw it. Its elements are
therefore counted as often as they would be drawn, before anything draws them.
"""

from __future__ import annotations

import base64
import binascii
import re
from collections.abc import Callable
from dataclasses import dataclass, field
from xml.parsers import expat

MOST_DRAWN = 5000  # elements, as often as they are drawn; a logo has some hundreds
DEEPEST = 60
SVG_SPACE = "http://www.w3.org/2000/svg"
_REFERENCE = re.compile(r"url\(\s*['\"]?\s*#([^'\")\s]+)", re.IGNORECASE)
_PICTURE = re.compile(r"data:image/(?:png|jpe?g);base64,(.*)", re.IGNORECASE | re.DOTALL)
# Colours alone: nothing is drawn again for them.
_COLOURS = ("linearGradient", "radialGradient")
# They repeat what they hold at every point of a line, or hold what is no drawing.
_REFUSED = ("marker", "foreignObject", "feImage")


@dataclass
class _Element:
    name: str
    attributes: dict[str, str]
    children: list[_Element] = field(default_factory=list)


class _Reader:
    """The elements of a drawing as a tree, those with a name by it, and the text of its style sheets."""

    def __init__(self) -> None:
        self.root: _Element | None = None
        self.by_id: dict[str, _Element] = {}
        self.styles: list[str] = []
        self._open: list[_Element] = []
        self._count = 0

    def read(self, content: bytes) -> _Element:
        parser = expat.ParserCreate("utf-8", namespace_separator=" ")
        parser.StartDoctypeDeclHandler = self._doctype
        parser.StartElementHandler = self._start
        parser.EndElementHandler = lambda name: self._open.pop()
        parser.CharacterDataHandler = self._text
        try:
            parser.Parse(content.decode("utf-8-sig").encode("utf-8"), True)
        except (expat.ExpatError, UnicodeError):
            raise ValueError("it is neither PNG nor JPEG nor well-formed SVG in UTF-8") from None
        if self.root is None or self.root.name != f"{SVG_SPACE} svg":
            raise ValueError("it is neither PNG nor JPEG nor SVG")
        return self.root

    def _doctype(self, *parts: object) -> None:
        raise ValueError("the SVG file has a DOCTYPE; take that line out, drawing programs call it plain SVG")

    def _start(self, name: str, attributes: dict[str, str]) -> None:
        self._count += 1
        if self._count > MOST_DRAWN or len(self._open) >= DEEPEST:
            raise ValueError(f"the SVG file has more than {MOST_DRAWN} elements, or more than {DEEPEST} in one another")
        element = _Element(name, attributes)
        if self._open:
            self._open[-1].children.append(element)
        else:
            self.root = element
        self._open.append(element)
        if "id" in attributes:
            self.by_id.setdefault(attributes["id"], element)

    def _text(self, text: str) -> None:
        if self._open and self._open[-1].name == f"{SVG_SPACE} style":
            self.styles.append(text)


def check_drawing(content: bytes, check_picture: Callable[[bytes], object]) -> None:
    """Do nothing if bytes are an SVG drawing that anything can draw in a moment.

    Args:
        content: The bytes. [-]
        check_picture: Raises ValueError for a PNG or JPEG inside the drawing that cannot be shown. [-]
    Raises: ValueError saying why not.
    """
    reader = _Reader()
    root = reader.read(content)
    counter = _Counter(reader.by_id, check_picture)
    drawn = counter.count(root)
    for name in _REFERENCE.findall("".join(reader.styles)):
        drawn += counter.named(name) * drawn  # a rule of a style sheet may hold for every element
    _check(drawn)


class _Counter:
    """Counts elements as often as they are drawn."""

    def __init__(self, by_id: dict[str, _Element], check_picture: Callable[[bytes], object]) -> None:
        self._by_id, self._check_picture = by_id, check_picture
        self._known: dict[int, int] = {}
        self._under_way: set[int] = set()

    def named(self, name: str) -> int:
        """Return how many elements are drawn for one that is named; none for colours and for what is not there."""
        element = self._by_id.get(name)
        return 0 if element is None or element.name.rpartition(" ")[2] in _COLOURS else self.count(element)

    def count(self, element: _Element) -> int:
        """Return how many elements are drawn for one, itself included."""
        place = id(element)
        if place in self._known:
            return self._known[place]
        if place in self._under_way:
            raise ValueError("a part of the SVG file repeats itself")
        self._under_way.add(place)
        kind = element.name.rpartition(" ")[2]
        if kind in _REFUSED:
            raise ValueError(f"the SVG file has an element {kind}; save the logo without it")
        drawn = 1
        for child in element.children:
            drawn += self.count(child)
            _check(drawn)
        repeated = 0
        for name, value in element.attributes.items():
            if name.rpartition(" ")[2] == "href":
                repeated += self._linked(kind, value.strip())
            # What is drawn for a property of a group is drawn for each of its parts.
            repeated += sum(self.named(found) for found in _REFERENCE.findall(value)) * drawn
            _check(drawn + repeated)
        self._under_way.discard(place)
        self._known[place] = drawn + repeated
        return drawn + repeated

    def _linked(self, kind: str, value: str) -> int:
        if value.startswith("#"):
            return self.named(value[1:])
        if kind == "a":
            return 0
        picture = _PICTURE.fullmatch(value)
        if kind != "image" or picture is None:
            raise ValueError("the SVG file fetches something from outside, or holds a picture that is no PNG or JPEG")
        try:
            self._check_picture(base64.b64decode("".join(picture[1].split()), validate=True))
        except binascii.Error:
            raise ValueError("the SVG file holds a damaged picture") from None
        return 0


def _check(drawn: int) -> None:
    if drawn > MOST_DRAWN:
        raise ValueError(
            f"the SVG file draws more than {MOST_DRAWN} elements, counting what it repeats; save a simpler drawing"
        )
