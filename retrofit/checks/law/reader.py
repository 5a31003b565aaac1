"""Read tables of law: those that come with the tool, and the user's own in the folder `law` beside a case file.

A file of the user's replaces one of the same name and otherwise adds to them. Everything wrong with a file is
named with its line at once; a table that cannot be read whole is not used at all.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, fields
from functools import cache
from importlib.resources import files
from pathlib import Path
from typing import Any

from retrofit.case import ARRANGEMENTS, EQUIPMENT, JURISDICTIONS
from retrofit.case.dates import Day, YesNo
from retrofit.case.law import DAY
from retrofit.case.numbers import Number
from retrofit.case.positions import KeyPath
from retrofit.case.source import parsed, text_of
from retrofit.case.values import Choice, FileValue, Refrigerant, Text
from retrofit.checks.law.rows import GROUPS, MEASURES, SUBJECTS, TRANSFERS, Row, Table
from retrofit.errors import CaseFileError, Problem, QuantityError
from retrofit.refrigerants import GWP_BASES
from retrofit.study.law import Limit
from retrofit.units import close_to, described, listed, quoted, shown

FOLDER = "law"
MOST_FILES = 60
LONGEST_PATH = 4096  # characters
CLASSES = ("A1", "A2L", "A2", "A3", "B1", "B2L", "B2", "B3")
WEIGHED = ("GWP", "t CO2e")  # measures that need a basis of GWP


@dataclass(frozen=True)
class Many:
    """A list of values of one kind."""

    item: FileValue


_ID = Text(80)
_SENTENCE = Text(600)
_CHECKED = Day("2000-01-01", "2100-12-31", "tables of law were checked within it")
_GROUPS, _KINDS = Many(Choice(GROUPS)), Many(Choice(EQUIPMENT))
_HEAD: Mapping[str, FileValue | Many] = {
    "title": _SENTENCE,
    "jurisdictions": Many(Choice(JURISDICTIONS)),
    "review_by": _CHECKED,
    "history": YesNo(),
    "document": _SENTENCE,
    "edition": _SENTENCE,
    "address": _SENTENCE,
    "not_held": Many(_SENTENCE),
}
_ROW: Mapping[str, FileValue | Many] = {
    "id": _ID,
    "subject": Choice(SUBJECTS),
    "text": _SENTENCE,
    "value": Number(0.0, 1e12, "figures of law lie within it"),
    "unit": Text(40),
    "gas": Choice(("new", "any")),
    "equipment": _KINDS,
    "not_equipment": _KINDS,
    "gases": _GROUPS,
    "with": _GROUPS,
    "without": _GROUPS,
    "components": Many(Refrigerant()),
    "refrigerants": Many(Refrigerant()),
    "safety_classes": Many(Choice(CLASSES)),
    "hermetically_sealed": YesNo(),
    "leak_detection_system": YesNo(),
    "product_below_minus_50": YesNo(),
    "arrangement": Many(Choice(ARRANGEMENTS)),
    "chiller": YesNo(),
    "transfer": Choice(TRANSFERS),
    "cascade_primary": YesNo(),
    "safety_exception": YesNo(),
    "safety_gwp": Number(0.0, 1e5, "limits of law lie within it"),
    "condition": _SENTENCE,
    "not_read": _SENTENCE,
    "applies_from": DAY,
    "applies_until": DAY,
    "series": _ID,
    "exceptions": _SENTENCE,
    "gwp_basis": Choice((*GWP_BASES, "none")),
    "source": _SENTENCE,
    "clause": _SENTENCE,
    "edition": _SENTENCE,
    "address": _SENTENCE,
    "review_by": _CHECKED,
    "date_checked": _CHECKED,
    "basis": Choice(("read", "extract", "memory")),
    "confidence": Choice(("high", "medium", "low")),
}
_BOUND = Number(0.0, 1e12, "limits of law lie within it")
_LIMIT: Mapping[str, FileValue | Many] = {
    "measure": Choice(MEASURES),
    "from": _BOUND,
    "above": _BOUND,
    "below": _BOUND,
    "to": _BOUND,
}
_INHERITED = ("document", "edition", "address", "review_by")  # what the head says for rows that do not
_NEEDED_HEAD = ("title", "jurisdictions", "review_by")
_NEEDED_ROW = ("id", "subject", "text", "gwp_basis", "date_checked", "basis")
Faults = list[tuple[KeyPath, str]]


def tables_for(case_path: str) -> tuple[Table, ...]:
    """Return every table of law for a case, by the name of its file.

    Args:
        case_path: The case file; its folder may hold a folder `law`. [-]
    Raises: CaseFileError with every fault of the first of the user's files that cannot be used.
    """
    own = {shown(path.name): _own_table(path) for path in own_files(case_path)}
    return tuple(table for _, table in sorted({**shipped(), **own}.items()))


def _own_table(path: Path) -> Table:
    name = shown(str(path), LONGEST_PATH)
    return read_table(shown(path.name), text_of(str(path), name), name)


@cache
def shipped() -> Mapping[str, Table]:
    """Return the tables that come with the tool, by the name of the file."""
    found = (entry for entry in files("retrofit.checks.law").iterdir() if entry.name.endswith(".toml"))
    return {entry.name: read_table(entry.name, entry.read_text(encoding="utf-8")) for entry in found}


def own_files(case_path: str) -> tuple[Path, ...]:
    """Return the user's tables beside a case file.

    Args:
        case_path: The case file. [-]
    Raises: CaseFileError if the folder cannot be listed or holds too many.
    """
    folder = Path(case_path).parent / FOLDER
    try:
        if not folder.is_dir():
            return ()
        found = sorted(path for path in folder.iterdir() if path.suffix == ".toml")
    except (OSError, ValueError):
        problem = "this folder of tables of law cannot be listed; check its permissions"
        raise CaseFileError(str(folder), [Problem(0, "", problem)]) from None
    if len(found) > MOST_FILES:
        problem = f"the folder holds {len(found)} tables of law; allowed are {MOST_FILES}"
        raise CaseFileError(str(folder), [Problem(0, "", problem)])
    return tuple(found)


def read_table(file: str, text: str, own_path: str = "") -> Table:
    """Return one table.

    Args:
        file: Name of its file. [-]
        text: Its TOML. [-]
        own_path: Where it stands if it is the user's own; empty for one that comes with the tool. [-]
    Raises: CaseFileError with every fault and its line.
    """
    data, lines = parsed(text, own_path or file)
    faults: Faults = []
    head = _values(data, _HEAD, (), _NEEDED_HEAD, faults, other=("row",))
    inherited: dict[str, Any] = {
        key: head[key] for key in ("document", "edition", "address", "review_by") if key in head
    }
    rows = tuple(_rows(data.get("row"), inherited, faults))
    if faults:
        raise CaseFileError(own_path or file, [_located(where, text, lines) for where, text in faults])
    head.pop("document", None)
    is_history = bool(head.pop("history", False))
    return Table(file=file, is_own=bool(own_path), is_history=is_history, rows=rows, **head)


def _rows(found: object, inherited: Mapping[str, Any], faults: Faults) -> Iterator[Row]:
    if not isinstance(found, list) or not found:
        faults.append((("row",) if found else (), "the table has no rows; begin each with [[row]]"))
        return
    seen: set[str] = set()
    for index, data in enumerate(found):
        where: KeyPath = ("row", index)
        if not isinstance(data, dict):
            faults.append((where, f"{described(data)} stands where a row is needed; begin it with [[row]]"))
            continue
        row = _row(data, where, inherited, faults)
        if row and row.id in seen:
            faults.append(((*where, "id"), f"{quoted(row.id)} is the name of a row above; give each its own"))
        if row:
            seen.add(row.id)
            yield row


def _row(data: Mapping[str, Any], where: KeyPath, inherited: Mapping[str, Any], faults: Faults) -> Row | None:
    """Return one row; what it does not say of its document, the head of the table says."""
    before = len(faults)
    needed = _NEEDED_ROW if "document" in inherited else (*_NEEDED_ROW, "source")
    values = _values(data, _ROW, where, needed, faults, other=("when",))
    if "source" in values:
        values["document"] = values.pop("source")
    values = {**inherited, **values}
    values["when"] = tuple(_limits(data.get("when", []), (*where, "when"), faults))
    if len(faults) == before:
        faults += [((*where, key), text) for key, text in _between(values)]
    if len(faults) > before or "review_by" not in values:
        return None
    names = {field.name for field in fields(Row)}
    return Row(**{name if name in names else f"{name}_": value for name, value in values.items()})


def _limits(found: object, where: KeyPath, faults: Faults) -> Iterator[Limit]:
    how = 'write when = [{ measure = "t CO2e", from = 5, below = 50 }]'
    if not isinstance(found, list):
        faults.append((where, f"{described(found)} stands where a list of limits is needed; {how}"))
        return
    for index, data in enumerate(found):
        here = (*where, index)
        if not isinstance(data, dict):
            faults.append((here, f"{described(data)} stands where a limit is needed; {how}"))
            continue
        before = len(faults)
        values = _values(data, _LIMIT, here, ("measure",), faults)
        if len(faults) == before:
            yield from _limit(values, here, faults)


def _limit(values: dict[str, Any], where: KeyPath, faults: Faults) -> Iterator[Limit]:
    low = [values[key] for key in ("from", "above") if key in values]
    high = [values[key] for key in ("below", "to") if key in values]
    if len(low) > 1 or len(high) > 1 or not low + high:
        faults.append((where, "a limit has from or above, or below or to, or one of each pair"))
    elif low and high and low[0] >= high[0]:
        faults.append((where, f"the limit begins at {low[0]:g} and ends at {high[0]:g}: it holds nothing"))
    else:
        yield Limit(**{"from_" if key == "from" else key: value for key, value in values.items()})


def _between(values: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    """Yield what one key of a row says against another: the key and the complaint."""
    weighed = any(limit.measure in WEIGHED for limit in values["when"])
    if weighed and values["gwp_basis"] == "none":
        yield "gwp_basis", f"a limit counts GWP; name its basis: {listed(GWP_BASES)}"
    if values["basis"] == "memory" and "confidence" not in values:
        yield "basis", "what is from memory has a confidence; add high, medium or low"
    if values["subject"] != "proposal" and "applies_from" not in values:
        yield "subject", "a row has a first day unless it is a proposal; add applies_from"
    begin, end = values.get("applies_from"), values.get("applies_until")
    if begin and end and end < begin:
        yield "applies_until", f"the last day {end} lies before the first, {begin}"
    if values["subject"] == "service ban" and "gas" not in values:
        yield "subject", 'a service ban names its gas; add gas = "new" if reclaimed gas is left, else "any"'
    if ("value" in values) != ("unit" in values):
        yield "value" if "value" in values else "unit", "value and unit go together; add the other"
    if "safety_gwp" in values and not values.get("safety_exception"):
        yield "safety_gwp", "it says from which GWP a safety exception does not help; add safety_exception = true"
    yield from _wrong_unit(values)


def _wrong_unit(values: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    wanted = {"leak check": "months", "leak rate": "% per year"}.get(values["subject"])
    if wanted and "unit" in values and values["unit"] != wanted:
        yield "unit", f'{quoted(values["unit"])} is no unit of a {values["subject"]}; write "{wanted}"'


def _values(
    data: Mapping[str, Any],
    known: Mapping[str, FileValue | Many],
    where: KeyPath,
    needed: tuple[str, ...],
    faults: Faults,
    other: tuple[str, ...] = (),
) -> dict[str, Any]:
    """Return the values of a table of TOML that can be read, adding what is wrong to the faults."""
    found: dict[str, Any] = {}
    for key, value in data.items():
        if key in other:
            continue
        try:
            found[key] = _value(key, value, known, (*known, *other))
        except QuantityError as fault:
            faults.append(((*where, key), fault.message))
    faults += [(where, f"{key} is missing; add it") for key in needed if key not in data]
    return found


def _value(key: str, value: object, known: Mapping[str, FileValue | Many], allowed: tuple[str, ...]) -> Any:
    if key not in known:
        names = listed(allowed, "and")
        raise QuantityError(f"there is no key {quoted(key)} here{close_to(key, allowed)}; known are {names}")
    how = known[key]
    if isinstance(how, FileValue):
        return how.read(value)
    if not isinstance(value, list) or not value:
        raise QuantityError(f"{described(value)} stands where a list with one or more items is needed")
    return tuple(how.item.read(item) for item in value)


def _located(where: KeyPath, text: str, lines: Mapping[KeyPath, int]) -> Problem:
    line = next((lines[where[:length]] for length in range(len(where), -1, -1) if where[:length] in lines), 0)
    names = [f"[{part + 1}]" if isinstance(part, int) else f".{part}" for part in where]
    return Problem(line, "".join(names).removeprefix("."), text)
