"""A fault that the model finds, in our own words."""

from __future__ import annotations

from pydantic.fields import FieldInfo
from pydantic_core import ErrorDetails

from retrofit.case.model import FIELDS, TABLES, CaseFile
from retrofit.case.money import Option
from retrofit.case.positions import KeyPath
from retrofit.case.table import Items, Table
from retrofit.case.thresholds import Threshold
from retrofit.case.values import FileValue
from retrofit.units import close_to, described, listed, quoted, shown

RENAMED = {"film_factor": "ua_factor"}


def complaint(detail: ErrorDetails) -> str:
    """Return what is wrong, what is allowed and what to do about it.

    Args:
        detail: The fault as pydantic has it. [-]
    """
    kind, where = detail["type"], tuple(detail["loc"])
    if kind == "value_error":
        return str(detail["ctx"]["error"])
    if kind == "missing":
        return _missing(where)
    if kind == "extra_forbidden":
        return _unknown_key(where, detail["input"])
    if kind == "model_type":
        return _not_a_table(where, detail["input"])
    return _not_the_list(where, detail["input"])


def _name(where: KeyPath) -> str:
    return ".".join(shown(str(part)) for part in where)


def _table_at(where: KeyPath) -> type[Table]:
    if not where:
        return CaseFile
    return TABLES.get(_name(where), Option if where[0] == "options" else Threshold)


def _missing(where: KeyPath) -> str:
    name = _name(where)
    if name not in TABLES:
        return f"is missing; add {where[-1]} to [{_name(where[:-1])}]{_sample(FIELDS[name][1])}"
    needed = [field.alias or "" for field in TABLES[name].model_fields.values() if field.is_required()]
    return f"the table [{name}] is missing; add it with {listed(needed, 'and')}"


def _sample(field: FieldInfo) -> str:
    for extra in field.metadata:
        if isinstance(extra, FileValue):
            return f', as in {field.alias} = "{extra.sample()}"'
        if isinstance(extra, Items):
            return f", as in {field.alias} = [{extra.how.rpartition('[')[2]}"
    return ""


def _not_a_table(where: KeyPath, value: object) -> str:
    what = f"{described(value)} stands where a table is needed"
    if where[0] == "thresholds" and len(where) > 1:
        return f"{what}; write it as {_name(where[1:])} = {{work = 0.95, stop = 0.85}}"
    if isinstance(value, str) and f"plant.{where[0]}" in FIELDS:
        return f"{what}; begin it with [{_name(where)}], or move this line to [plant]"
    return f"{what}; begin it with [{_name(where)}]"


def _unknown_key(where: KeyPath, value: object) -> str:
    key, place = str(where[-1]), "at the top of the file" if len(where) == 1 else f"in [{_name(where[:-1])}]"
    table = _table_at(where[:-1])
    known = _keys(table)
    # A key of this table that says more is nearer than the same name in another one.
    fuller = [field for field in table.model_fields.values() if key in (field.alias or "").split("_")]
    if fuller:
        meant = listed((f"{field.alias} ({(field.description or '').rstrip('.')})" for field in fuller), "or")
        return f"there is no key {quoted(key)} {place}; write {meant}"
    home = _home(key, value)
    if home and home != place:
        return f"{key} belongs {home}, not {place}; move it there"
    if key in RENAMED and RENAMED[key] in known:
        return f"{key} is called {RENAMED[key]} now; write {RENAMED[key]} {place}"
    thing = "table" if isinstance(value, dict) else "key"
    return f"there is no {thing} {quoted(key)} {place}{close_to(key, known)}; known are {listed(known, 'and')}"


def _home(key: str, value: object) -> str:
    """Return where a key belongs, or nothing; one name may be a table and a key of another table."""
    homes = [f"[{full.rpartition('.')[0]}]" for full in FIELDS if full.rpartition(".")[2] == key]
    own = [name for name in TABLES if name.rpartition(".")[2] == key]
    if own and (isinstance(value, dict) or not homes):
        return f"in a table of its own, {listed(f'[{name}]' for name in own)}"
    if homes:
        return f"in {listed(homes)}"
    return "at the top of the file, above [plant]" if key in _keys(CaseFile) else ""


def _keys(table: type[Table]) -> list[str]:
    return [field.alias or name for name, field in table.model_fields.items()]


def _not_the_list(where: KeyPath, value: object) -> str:
    name = _name(tuple(part for part in where if isinstance(part, str)))
    how = next(extra.how for extra in FIELDS[name][1].metadata if isinstance(extra, Items))
    if isinstance(value, list):
        return f"the list has {len(value)} items; write {how}"
    return f"{described(value)} stands where a list is needed; write {how}"
