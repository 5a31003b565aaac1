"""A picture beside the case file: what it is, found from its bytes, and whether a report can carry it."""

from __future__ import annotations

import io
import os
import stat
import warnings
from dataclasses import dataclass
from pathlib import Path, PurePath
from typing import Any

from pydantic import GetCoreSchemaHandler, ValidationInfo
from pydantic_core import CoreSchema, core_schema

from retrofit.case.drawing import check_drawing
from retrofit.case.values import FileValue, is_hidden
from retrofit.errors import QuantityError
from retrofit.units import described, quoted, shown

LARGEST_LOGO_BYTES = 300_000
LARGEST_SIDE = 4000  # pixels
_PNG, _JPEG = b"\x89PNG\r\n\x1a\n", b"\xff\xd8\xff"
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
    if not _is_inside(folder, value):
        raise QuantityError(f"{quoted(value)} is a link out of the folder of the case file; {_WANTED}")
    content = _bytes_of(folder / value, value)
    return Logo(value, _media_type(content, value), content)


def _is_inside(folder: Path, value: str) -> bool:
    try:
        return (folder / value).resolve().is_relative_to(folder.resolve())
    except (OSError, ValueError, RuntimeError):
        return True  # reading it says what is wrong


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
        if content.startswith((_PNG, _JPEG)):
            return _check_picture(content)
        check_drawing(content, _check_picture)
    except ValueError as error:
        raise QuantityError(f"{quoted(name)} is no picture that can be shown: {error}") from None
    return "image/svg+xml"


def _check_picture(content: bytes) -> str:
    """Return the media type of a PNG or JPEG picture that can be decoded to its last pixel, and is not too large."""
    from PIL import Image

    try:
        with warnings.catch_warnings():
            warnings.simplefilter("error")  # of a picture that would unpack to gigabytes
            with Image.open(io.BytesIO(content), formats=("PNG", "JPEG")) as picture:
                _check_sides(*picture.size)
                kind = str(picture.format)
                picture.verify()
            with Image.open(io.BytesIO(content), formats=("PNG", "JPEG")) as picture:
                picture.load()
    except _SizeError:
        raise
    except Exception as error:  # of a damaged file the library says it in many ways
        raise ValueError(
            f"the picture is damaged or is no PNG or JPEG ({shown(str(error), 80)}); save it again"
        ) from None
    return f"image/{kind.lower()}"


class _SizeError(ValueError):
    """A picture has more pixels than a report may carry."""


def _check_sides(width: int, height: int) -> None:
    if not (0 < width <= LARGEST_SIDE and 0 < height <= LARGEST_SIDE):
        raise _SizeError(f"it has {width} by {height} pixels; allowed are 1 to {LARGEST_SIDE} each way")
