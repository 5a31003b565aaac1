"""Reading the block back out of a report. Nothing in it is trusted: sizes bounded, names checked, nothing run."""

from __future__ import annotations

import base64
import binascii
import datetime
import os
import stat
import zlib
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated, Any, NoReturn

from pydantic import BaseModel, ConfigDict, Field, ValidationError

from retrofit.case.plant import MOST_CANDIDATES
from retrofit.case.source import LARGEST_FILE_BYTES
from retrofit.case.values import is_hidden
from retrofit.errors import ReportError
from retrofit.report.carried.block import END, FORMAT, PARTS, START, page_digest
from retrofit.report.carried.result import digest
from retrofit.report.carried.strict import strict_json
from retrofit.study.life import MOST_DRAWS
from retrofit.units import UNIT_SYSTEMS, shown

LARGEST_REPORT_BYTES = 30_000_000
LARGEST_BLOCK_BYTES = 20_000_000
LARGEST_RESULT_BYTES = 10_000_000  # one of forty candidates with their remaining life has some 3 MB
MOST_SEED = 2**32 - 1
MOST_FILES = 100
LONGEST_NAME = 255  # characters; no file system has longer ones
DEEPEST = 8  # folders
AGAIN = "take the file as it was written, or write it again with `retrofit report`"


@dataclass(frozen=True)
class Carried:
    """What a report carries.

    Attributes:
        name, case_name, case_text: The report, and its case.
        files: Further files of the case by their path from it.
        units, on, made_at: Units shown, day of the tables of law, and time it was made.
        versions, data: What it was made with: versions by name, short digests of data tables by path.
        fingerprint: As it stands in the file.
        result: The result in canonical form.
        altered: Parts whose digest does not fit: "case", "files", "options", "made_with", "result" or "page".
    """

    name: str
    case_name: str
    case_text: str
    files: Mapping[str, bytes]
    units: str
    on: datetime.date
    made_at: datetime.datetime
    versions: Mapping[str, str]
    data: Mapping[str, str]
    fingerprint: str
    result: Mapping[str, Any]
    altered: tuple[str, ...]


class _Part(BaseModel):
    model_config = ConfigDict(strict=True, extra="ignore")


class _CasePart(_Part):
    name: Annotated[str, Field(max_length=LONGEST_NAME)]
    text: str


class _Options(_Part):
    units: str
    on: str
    made_at: str


class _MadeWith(_Part):
    versions: dict[str, str]
    data: dict[str, str]


class _Draws(_Part):
    number: Annotated[int, Field(ge=0, le=MOST_DRAWS)]
    seed: Annotated[int, Field(ge=0, le=MOST_SEED)]


class _Life(_Part):
    draws: _Draws | None = None


class _Entry(_Part):
    refrigerant: str


class _Result(_Part):
    """What is read of a result before it is set against another, number by number."""

    title: str
    existing: _Entry
    candidates: Annotated[list[_Entry], Field(max_length=MOST_CANDIDATES)]
    remaining_life: _Life | None = None


class _Block(_Part):
    format: str
    case: _CasePart
    files: dict[str, list[str]]
    options: _Options
    made_with: _MadeWith
    digests: dict[str, str]
    result: list[str]


def read_carried(path: str | os.PathLike[str]) -> Carried:
    """Return what a report carries.

    Args:
        path: A report as `retrofit report` wrote it. [-]
    Raises: ReportError saying what is wrong: no such file, no report, cut off, damaged, too large or of a later format.
    """
    name = shown(os.fspath(path), 500)
    raw = _bytes_of(os.fspath(path), name)
    start = raw.rfind(START.encode("ascii"))
    if start < 0:
        _refuse(name, _no_block(raw))
    end = raw.find(END.encode("ascii"), start)
    if end < 0:
        _refuse(name, f"it is cut off within the data it carries; {AGAIN}")
    data = _json(raw[start + len(START) : end], name)
    rest = raw[:start] + raw[end + len(END) :].removeprefix(b"\r").removeprefix(b"\n")
    return _carried(name, data, page_digest(rest.decode("utf-8", "replace")))


def _bytes_of(path: str, name: str) -> bytes:
    try:
        if not stat.S_ISREG(os.stat(path).st_mode):
            _refuse(name, "it is no ordinary file; name a report")
        with open(path, "rb") as file:
            raw = file.read(LARGEST_REPORT_BYTES + 1)
    except (OSError, ValueError) as error:
        reason = error.strerror if isinstance(error, OSError) else str(error)
        _refuse(name, f"it cannot be read ({shown(str(reason))}); check the path")
    if not raw:
        _refuse(name, f"it is empty; {AGAIN}")
    if len(raw) > LARGEST_REPORT_BYTES:
        _refuse(name, f"it is larger than {LARGEST_REPORT_BYTES / 1e6:g} MB; a report has one or two")
    return raw


def _no_block(raw: bytes) -> str:
    if b"\0" in raw[:4096] or b"<html" not in raw[:100_000].lower():
        return "it is no report in HTML; name a file that `retrofit report` wrote"
    if b"</html>" not in raw[-2000:].lower():
        return f"it is cut off before the data that a report carries; {AGAIN}"
    return f"it carries no case: no report of this tool, or one that was stripped; {AGAIN}"


def _json(raw: bytes, name: str) -> dict[str, Any]:
    try:
        data = strict_json(raw, LARGEST_BLOCK_BYTES)
    except ValueError as error:
        _damaged(name, str(error))
    found = data.get("format")
    if found != FORMAT:
        _refuse(
            name, f"the data it carries are of the format {shown(str(found))}, this version reads {FORMAT}; use the "
            "version that stands at the report's end",
        )  # fmt: skip
    return data


def _carried(name: str, data: dict[str, Any], page: str) -> Carried:
    try:
        block = _Block.model_validate(data)
        on = datetime.date.fromisoformat(block.options.on)
        made_at = datetime.datetime.fromisoformat(block.options.made_at)
        digests = {part: digest(data[part]) for part in PARTS}
        files = {_checked(file, name): _decoded(lines) for file, lines in block.files.items()}
        result = _result(block.result, name)
        block.case.text.encode("utf-8")
    except ValidationError as error:
        _damaged(name, f"{'.'.join(map(str, error.errors()[0]['loc']))} is missing or of the wrong kind")
    except (ValueError, zlib.error) as error:
        _damaged(name, str(error))
    if len(block.case.text.encode("utf-8")) > LARGEST_FILE_BYTES or len(files) > MOST_FILES:
        _refuse(name, f"its case is larger than 1 MB, or has more than {MOST_FILES} files; no case is; {AGAIN}")
    if block.options.units not in UNIT_SYSTEMS:
        _damaged(name, f"there are no units {shown(block.options.units)}")
    digests |= {"page": page, "result": digest(result)}
    return Carried(
        name, block.case.name, block.case.text, files, block.options.units, on, made_at,
        block.made_with.versions, block.made_with.data, block.digests.get("result", ""), result,
        tuple(part for part, found in digests.items() if block.digests.get(part) != found),
    )  # fmt: skip


def _result(lines: list[str], name: str) -> dict[str, Any]:
    unpacker = zlib.decompressobj()
    text = unpacker.decompress(_decoded(lines), LARGEST_RESULT_BYTES)
    if unpacker.unconsumed_tail:
        _refuse(name, f"the result it carries is larger than {LARGEST_RESULT_BYTES / 1e6:g} MB; no result is; {AGAIN}")
    if not unpacker.eof:
        raise ValueError("the result is cut off")
    result = strict_json(text, LARGEST_RESULT_BYTES)
    _Result.model_validate(result)
    return result


def _decoded(lines: list[str]) -> bytes:
    try:
        return base64.b64decode("".join(lines), validate=True)
    except binascii.Error:
        raise ValueError("a part is no base64") from None


def _checked(file: str, name: str) -> str:
    """Return the path of a file beside the case if it stays there: plain names, a few folders down."""
    parts = file.split("/")
    if len(parts) > DEEPEST or len(file) > LONGEST_NAME or not all(_is_plain(part) for part in parts):
        _refuse(name, f'it carries a file named "{shown(file)}", which could stand outside the folder of its case')
    return file


def _is_plain(part: str) -> bool:
    refused = "\\:" if os.name == "nt" else "\\"
    return part.strip() not in ("", ".", "..") and not any(sign in refused or is_hidden(sign) for sign in part)


def _damaged(name: str, why: str) -> NoReturn:
    _refuse(name, f"the data it carries are damaged ({shown(why, 200)}); {AGAIN}")


def _refuse(name: str, why: str) -> NoReturn:
    raise ReportError(f"{name}: {why}")
