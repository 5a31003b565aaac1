"""A picture beside the case file: what it is, found from its bytes, and whether a report can carry it."""

from __future__ import annotations

import os
import stat
import struct
import zlib
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path, PurePath
from typing import Any
from xml.etree import ElementTree

from pydantic import GetCoreSchemaHandler, ValidationInfo
from pydantic_core import CoreSchema, core_schema

from retrofit.case.values import FileValue, is_hidden
from retrofit.errors import QuantityError
from retrofit.units import described, quoted, shown

LARGEST_LOGO_BYTES = 300_000
LARGEST_SIDE = 4000  # pixels
_SVG = "{http://www.w3.org/2000/svg}svg"
_PNG = b"\x89PNG\r\n\x1a\n"
_WANTED = "write the path of a PNG, JPEG or SVG file in the folder of the case file or below it"


@dataclass(frozen=True)
class Logo:
    """A picture: its path as written, its media type, and its bytes."""

    path: str
    media_type: str
    content: bytes


@dataclass(frozen=True)
class LogoFile(FileValue):
    """The path of a picture, counted from the folder of the case file; held as the picture."""

    def sample(self) -> str:
        """Return a path, as text."""
        return "logo.svg"

    def read(self, value: object, p_ambient_Pa: float | None = None) -> Logo:
        """Return the picture, its path counted from the working folder."""
        return logo_at(Path(), value)

    def json_schema(self) -> dict[str, Any]:
        """Return the type of the path."""
        return {"type": "string", "minLength": 1}

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        def read(value: object, info: ValidationInfo) -> Logo:
            return logo_at((info.context or {}).get("folder", Path()), value)

        return core_schema.with_info_plain_validator_function(read)


def logo_at(folder: Path, value: object) -> Logo:
    """Return a picture.

    Args:
        folder: The folder that its path is counted from. [-]
        value: What stands in the file: a path within that folder. [-]
    Raises: QuantityError if it is no such path, cannot be read, is too large, or is no picture of the three kinds.
    """
    if not isinstance(value, str):
        raise QuantityError(f"{described(value)} stands where a path is needed; {_WANTED}")
    if not value or len(value) > 200 or any(is_hidden(character) for character in value):
        raise QuantityError(f"{quoted(value)} is no path; {_WANTED}")
    if os.path.isabs(value) or ".." in PurePath(value).parts:
        raise QuantityError(f"{quoted(value)} leads out of the folder of the case file; {_WANTED}")
    content = _bytes_of(folder / value, value)
    return Logo(value, _media_type(content, value), content)


def _bytes_of(path: Path, name: str) -> bytes:
    try:
        if not stat.S_ISREG(os.stat(path).st_mode):
            raise QuantityError(f"{quoted(name)} is not an ordinary file; {_WANTED}")
        with open(path, "rb") as file:
            content = file.read(LARGEST_LOGO_BYTES + 1)
    except FileNotFoundError:
        raise QuantityError(f"there is no file {quoted(name)}; {_WANTED}") from None
    except (OSError, ValueError) as error:
        reason = shown(str(getattr(error, "strerror", None) or error))
        raise QuantityError(f"{quoted(name)} cannot be read ({reason}); {_WANTED}") from None
    if len(content) > LARGEST_LOGO_BYTES:
        raise QuantityError(
            f"{quoted(name)} is larger than {LARGEST_LOGO_BYTES // 1000} kB; save the picture smaller, or as SVG"
        )
    return content


def _media_type(content: bytes, name: str) -> str:
    """Return the media type of a picture, refusing what a browser could not show or what hides more than it shows."""
    try:
        if content.startswith(_PNG):
            _check_sides(*_png_sides(content))
            return "image/png"
        if content.startswith(b"\xff\xd8\xff"):
            _check_sides(*_jpeg_sides(content))
            return "image/jpeg"
        _check_svg(content)
    except (ValueError, struct.error, IndexError) as error:
        raise QuantityError(f"{quoted(name)} is no picture that can be shown: {error}") from None
    return "image/svg+xml"


def _check_sides(width: int, height: int) -> None:
    if not (0 < width <= LARGEST_SIDE and 0 < height <= LARGEST_SIDE):
        raise ValueError(f"it has {width} by {height} pixels; allowed are 1 to {LARGEST_SIDE} each way")


def _png_sides(content: bytes) -> tuple[int, int]:
    """Return width and height of a PNG picture whose chunks are whole. Source: PNG, third edition (W3C), 5.3."""
    chunks = list(_png_chunks(content))
    kinds = [kind for kind, _ in chunks]
    if kinds[:1] != [b"IHDR"] or b"IDAT" not in kinds or kinds[-1] != b"IEND":
        raise ValueError("the PNG file is not whole; save it again")
    width, height = struct.unpack(">II", chunks[0][1][:8])
    return width, height


def _png_chunks(content: bytes) -> Iterator[tuple[bytes, bytes]]:
    at = len(_PNG)
    while at < len(content):
        (length,) = struct.unpack(">I", content[at : at + 4])
        body = content[at + 4 : at + 8 + length]
        (digest,) = struct.unpack(">I", content[at + 8 + length : at + 12 + length])
        if zlib.crc32(body) != digest:
            raise ValueError("the PNG file is damaged; save it again")
        yield body[:4], body[4:]
        if body[:4] == b"IEND":
            return
        at += 12 + length


def _jpeg_sides(content: bytes) -> tuple[int, int]:
    """Return width and height of a JPEG picture from its frame header. Source: ITU-T T.81, B.1.1 and B.2.2."""
    at = 2
    while at + 9 < len(content):
        if content[at] != 0xFF:
            break
        marker = content[at + 1]
        if 0xC0 <= marker <= 0xCF and marker not in (0xC4, 0xC8, 0xCC):
            height, width = struct.unpack(">HH", content[at + 5 : at + 9])
            return width, height
        (length,) = struct.unpack(">H", content[at + 2 : at + 4])
        at += 1 if marker == 0xFF else 2 + length
    raise ValueError("the JPEG file is not whole; save it again")


def _check_svg(content: bytes) -> None:
    """Refuse what is no SVG drawing, and one with declarations: they can make a small file a huge one."""
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise ValueError("it is neither PNG nor JPEG nor SVG in UTF-8") from None
    if "<!DOCTYPE" in text.upper() or "<!ENTITY" in text.upper():
        raise ValueError("the SVG file has a DOCTYPE; take that line out, drawing programs call it plain SVG")
    try:
        root = ElementTree.fromstring(text.encode())
    except (ElementTree.ParseError, RecursionError, LookupError):
        raise ValueError("it is neither PNG nor JPEG nor well-formed SVG") from None
    if root.tag != _SVG:
        raise ValueError("it is neither PNG nor JPEG nor SVG")
