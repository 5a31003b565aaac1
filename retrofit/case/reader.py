"""Read a case file, or say everything that is wrong with it at once.

The bytes become text, the text TOML (`retrofit.case.source`), the TOML a model (here). A fault in an
early step hides the later ones; within the model every fault is found. Each carries the line of its key.
"""

from __future__ import annotations

import os
from collections.abc import Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any

from pydantic import ValidationError
from pydantic_core import ErrorDetails

from retrofit.case.model import MOST_CANDIDATES, TABLES, Case, CaseFile, Default, Table, WhyDefault
from retrofit.case.positions import KeyPath
from retrofit.case.source import parsed, text_of
from retrofit.case.values import FileValue, designation_of
from retrofit.errors import CaseFileError, Problem, QuantityError
from retrofit.units import close_to, described, listed, parse_quantity, quoted, shown

LONGEST_GIVEN = 1000  # characters
LONGEST_PATH = 4096  # characters


def read_case(path: str | os.PathLike[str]) -> Case:
    """Return the case a file describes.

    Args:
        path: A TOML file in UTF-8, with or without a byte order mark, at most 1 MB. [-]
    Returns: The case in SI, with what was written and every default taken.
    Raises: CaseFileError with every problem found and its line; nothing else for any file.
    """
    name = shown(os.fspath(path), LONGEST_PATH)
    text = text_of(os.fspath(path), name)
    data, lines = parsed(text, name)
    problems = list(_problems_between_keys(data))
    try:
        model = CaseFile.model_validate(data)
    except ValidationError as error:
        found = error.errors(include_url=False)
        problems += [(_where(detail), _complaint(detail)) for detail in found]
        model = None
    if problems or model is None:
        raise CaseFileError(name, [_located(where, text, lines) for where, text in problems])
    return _case(model, data, name, text)


def _case(model: CaseFile, data: Mapping[str, Any], name: str, text: str) -> Case:
    return Case(
        title=model.title or Path(name).stem,
        about=model.about,
        plant=model.plant,
        duty=model.duty,
        compressor=model.compressor,
        compare=model.compare,
        path=name,
        text=text,
        given=dict(_given(data)),
        defaults=tuple(_defaults(model)),
    )


def _given(data: Mapping[str, Any], table: str = "") -> Iterator[tuple[str, str]]:
    for key, value in data.items():
        if isinstance(value, dict):
            yield from _given(value, f"{key}.")
        elif isinstance(value, list):
            yield table + key, ", ".join(shown(str(item)) for item in value)
        else:
            yield table + key, shown(str(value), LONGEST_GIVEN)


def _defaults(model: CaseFile) -> Iterator[Default]:
    for name, table_class in TABLES.items():
        written = getattr(model, name).model_fields_set
        for field_name, field in table_class.model_fields.items():
            why = next((extra.text for extra in field.metadata if isinstance(extra, WhyDefault)), None)
            if why is not None and field_name not in written:
                yield Default(f"{name}.{field.alias}", str(field.default), why)


# TOML to model


def _where(detail: ErrorDetails) -> KeyPath:
    return tuple(detail["loc"])


def _located(where: KeyPath, text: str, lines: Mapping[KeyPath, int]) -> Problem:
    """Give a problem the line of its key, or of the nearest table around it that is there."""
    for length in range(len(where), 0, -1):
        if where[:length] in lines:
            return Problem(lines[where[:length]], _written(where), text)
    return Problem(0, _written(where), text)


def _written(where: KeyPath) -> str:
    """Return a path as a user counts: `compare.candidates[1]` is the first."""
    parts = [f"[{part + 1}]" if isinstance(part, int) else f".{shown(part)}" for part in where]
    return "".join(parts).removeprefix(".")


def _complaint(detail: ErrorDetails) -> str:
    """Return a fault that the model found in our own words."""
    kind, where = detail["type"], _where(detail)
    if kind == "value_error":
        return str(detail["ctx"]["error"])
    if kind == "missing":
        return _missing(where)
    if kind == "extra_forbidden":
        return _unknown_key(where, detail["input"])
    if kind == "model_type":
        return f"{described(detail['input'])} stands where a table is needed; begin it with [{where[0]}]"
    return _not_candidates(detail["input"])


def _missing(where: KeyPath) -> str:
    if len(where) > 1:
        return f"is missing; add {where[-1]} to [{where[0]}]{_sample(where)}"
    needed = [
        field.alias or "" for field in TABLES[str(where[0])].model_fields.values() if field.is_required()
    ]
    return f"the table [{where[0]}] is missing; add it with {listed(needed, 'and')}"


def _sample(where: KeyPath) -> str:
    table = TABLES[str(where[0])]
    field = next(field for field in table.model_fields.values() if field.alias == where[-1])
    value = next((extra for extra in field.metadata if isinstance(extra, FileValue)), None)
    if value is None:
        return ', as in candidates = ["R448A", "R449A"]'
    return f', as in {where[-1]} = "{value.sample()}"'


def _unknown_key(where: KeyPath, value: object) -> str:
    key, is_top = str(where[-1]), len(where) == 1
    home = next((f"in [{name}]" for name, other in TABLES.items() if key in _keys(other)), None)
    if key in _keys(CaseFile):
        home = f"in a table of its own, [{key}]" if key in TABLES else "at the top of the file, above [plant]"
    place = "at the top of the file" if is_top else f"in [{where[0]}]"
    if home is not None:
        return f"{key} belongs {home}, not {place}; move it there"
    known = _keys(CaseFile if is_top else TABLES[str(where[0])])
    thing = "table" if isinstance(value, dict) else "key"
    return (
        f"there is no {thing} {quoted(key)} {place}{close_to(key, known)}; known are {listed(known, 'and')}"
    )


def _keys(table: type[Table]) -> list[str]:
    return [field.alias or name for name, field in table.model_fields.items()]


def _not_candidates(value: object) -> str:
    how = f'write a list of 1 to {MOST_CANDIDATES} refrigerants, as in ["R448A", "R449A"]'
    if isinstance(value, list):
        return f"the list has {len(value)} items; {how}"
    return f"{described(value)} stands where a list is needed; {how}"


# What one key says against another


def _problems_between_keys(data: Mapping[str, Any]) -> Iterator[tuple[KeyPath, str]]:
    """Yield the faults that need two keys; keys that cannot be read by themselves are passed over."""
    duty, compare = data.get("duty"), data.get("compare")
    if isinstance(duty, dict):
        yield from _evaporating_above_condensing(duty)
    if isinstance(compare, dict) and isinstance(compare.get("candidates"), list):
        plant = data.get("plant")
        existing = plant.get("refrigerant") if isinstance(plant, dict) else None
        yield from _repeated(compare["candidates"], _designation(existing))


def _evaporating_above_condensing(duty: Mapping[str, Any]) -> Iterator[tuple[KeyPath, str]]:
    try:
        T_evap_K = parse_quantity(duty.get("evaporating"), "temperature")
        T_cond_K = parse_quantity(duty.get("condensing"), "temperature")
    except QuantityError:
        return
    if T_evap_K >= T_cond_K:
        given = f"{quoted(duty['evaporating'])} is not below condensing {quoted(duty['condensing'])}"
        yield ("duty", "evaporating"), f"{given}; the evaporating temperature lies below the condensing one"


def _repeated(candidates: Sequence[object], existing: str | None) -> Iterator[tuple[KeyPath, str]]:
    seen: set[str] = set()
    for index, item in enumerate(candidates):
        name = _designation(item)
        if name is None:
            continue
        where = ("compare", "candidates", index)
        if name == existing:
            yield (
                where,
                f"{name} is the refrigerant in the plant, which is always compared; leave it out here",
            )
        elif name in seen:
            yield where, f"{name} is in the list twice; leave one out"
        seen.add(name)


def _designation(value: object) -> str | None:
    if not isinstance(value, str):
        return None
    try:
        return designation_of(value)
    except QuantityError:
        return None
