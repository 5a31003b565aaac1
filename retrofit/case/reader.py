"""Read a case file, or say everything that is wrong with it at once.

The bytes become text, the text TOML (`retrofit.case.source`), the TOML a model (here). A fault in an
early step hides the later ones; within the model every fault is found, by itself
(`retrofit.case.complaints`), between keys (`retrofit.case.between`), in a plus or minus (`retrofit.case.widths`)
and in the weather beside the case (`retrofit.case.beside`). Each carries the line of its key.
"""

from __future__ import annotations

import os
from collections.abc import Iterator, Mapping
from dataclasses import replace
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from retrofit.case.beside import Outdoors, weather_of
from retrofit.case.between import problems_between_keys
from retrofit.case.complaints import complaint
from retrofit.case.exchangers import MEDIUM_HEATS
from retrofit.case.model import FIELDS, TABLES, Case, CaseFile, Default
from retrofit.case.money import PLANT_LIFE_WHY, Money
from retrofit.case.positions import KeyPath
from retrofit.case.source import parsed, text_of
from retrofit.case.table import Table, WhyDefault
from retrofit.case.widths import problems_of_widths, widths
from retrofit.case.written import Written, path_of
from retrofit.errors import CaseFileError, Problem
from retrofit.units import listed, shown

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
    return case_from_data(data, path, text, lines)


def case_from_data(
    data: Mapping[str, Any], path: str | os.PathLike[str], text: str, lines: Mapping[KeyPath, int] | None = None
) -> Case:
    """Return the case that parsed TOML describes: of a file, or of one with changes laid over it.

    Args:
        data: The parsed TOML. [-]
        path: The file: what it names stands beside it. [-]
        text: Its content. [-]
        lines: The line of each path, as `key_lines` gives them; None if there are none to name. [-]
    Returns: The case in SI, with what was written and every default taken.
    Raises: CaseFileError with every problem found; each names its key.
    """
    name = shown(os.fspath(path), LONGEST_PATH)
    written = Written(data)
    heats = tuple(_medium_heats(written))
    context = {"p_ambient_Pa": written.p_ambient_Pa, "folder": Path(path).parent}
    outdoors = Outdoors(written, os.fspath(path))
    problems = [*problems_between_keys(written), *problems_of_widths(written), *outdoors.complaints]
    try:
        model = CaseFile.model_validate(_completed(data, heats), context=context)
    except ValidationError as error:
        problems += [(tuple(found["loc"]), complaint(found)) for found in error.errors(include_url=False)]
        model = None
    if problems or outdoors.problems or model is None:
        found = [_located(where, said, lines or {}) for where, said in problems]
        raise CaseFileError(name, [*found, *outdoors.problems])
    defaults = (*_defaults(model), *heats)
    return replace(
        _case(model, data, name, text, defaults),
        weather=outdoors.weather or weather_of(model.year),
        widths=widths(written),
    )


def _case(model: CaseFile, data: Mapping[str, Any], name: str, text: str, defaults: tuple[Default, ...]) -> Case:
    tables = {table: getattr(model, table) for table in TABLES if "." not in table}
    return Case(
        title=model.title or Path(name).stem,
        about=model.about,
        path=name,
        text=text,
        given=dict(_given(data)),
        defaults=defaults,
        **tables,
    )


# What was written, and what was assumed


def _given(data: Mapping[str, Any], table: str = "") -> Iterator[tuple[str, str]]:
    for key, value in data.items():
        name = f"{table}{key}"
        if isinstance(value, dict) and name not in FIELDS:
            yield from _given(value, f"{name}.")
        else:
            yield name, shown(_as_text(value), LONGEST_GIVEN)


def _as_text(value: object) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, dict):
        return ", ".join(f"{key} = {item}" for key, item in value.items())
    return ", ".join(str(item) for item in value) if isinstance(value, list) else str(value)


def _medium_heats(written: Written) -> Iterator[Default]:
    """Yield the specific heats that a flow needs and the file leaves to its medium."""
    for way in ("evaporator", "condenser"):
        heat = MEDIUM_HEATS.get(written.value(f"{way}.medium") or "")
        for start in (f"{way}.", f"readings.{way}_"):
            if heat and written.has(f"{start}flow") and not written.has(f"{start}specific_heat"):
                yield Default(f"{start}specific_heat", heat.shown_text, heat.why)


def _completed(data: Mapping[str, Any], heats: tuple[Default, ...]) -> dict[str, Any]:
    """Return the data of a file with the specific heats of its media; the data itself stays as it is."""
    whole = dict(data)
    for heat in heats:
        table, key = path_of(heat.key)
        whole[str(table)] = {**whole[str(table)], key: heat.shown_text}
    return whole


def _defaults(model: CaseFile) -> Iterator[Default]:
    for name in TABLES:
        table: Any = model
        for part in name.split("."):
            table = getattr(table, part, None)
        if table is not None:
            yield from _defaults_of(name, table)
    for way, exchanger in (("evaporator", model.evaporator), ("condenser", model.condenser)):
        factors = exchanger.ua_factor.by_refrigerant if exchanger else ()
        others = [name for name in model.compare.candidates if name not in dict(factors)]
        if factors and others:
            why = "not in the table of the case; calculated, not measured"
            yield Default(f"{way}.ua_factor", f"calculated for {listed(others, 'and')}", why)
    if model.money is not None and "new_plant_life_years" not in model.money.model_fields_set:
        yield from _plant_life(model)


def _plant_life(model: CaseFile) -> Iterator[Default]:
    """Yield the life of a new plant if the residual value of one rests on it."""
    options = model.options.by_refrigerant.values() if model.options else ()
    shared = model.money.change.new_plant if model.money and model.money.change else None
    is_bought = [option for option in options if (option.new_plant or shared) is not None]
    if any(option.plant_life_years is None and option.residual_value is None for option in is_bought):
        field = Money.model_fields["new_plant_life_years"]
        yield Default("money.new_plant_life", str(field.default), PLANT_LIFE_WHY)


def _written_keys(table: Table) -> set[str | None]:
    return {type(table).model_fields[name].alias for name in table.model_fields_set & set(type(table).model_fields)}


def _defaults_of(name: str, table: Table) -> Iterator[Default]:
    written = _written_keys(table)
    for field in type(table).model_fields.values():
        why = next((extra for extra in field.metadata if isinstance(extra, WhyDefault)), None)
        if why is None or field.alias in written or getattr(table, why.moot_if[0], None) == why.moot_if[1]:
            continue
        if (not why.beside or why.beside in written) and not written & set(why.unless):
            yield Default(f"{name}.{field.alias}", _as_text(field.default), why.text)


# Where a problem stands


def _located(where: KeyPath, text: str, lines: Mapping[KeyPath, int]) -> Problem:
    """Give a problem the line of its key, or of the nearest table around it that is there."""
    for length in range(len(where), 0, -1):
        if where[:length] in lines:
            return Problem(lines[where[:length]], _as_user_counts(where), text)
    return Problem(0, _as_user_counts(where), text)


def _as_user_counts(where: KeyPath) -> str:
    """Return a path as a user counts: `compare.candidates[1]` is the first."""
    parts = [f"[{part + 1}]" if isinstance(part, int) else f".{shown(part)}" for part in where]
    return "".join(parts).removeprefix(".")
