"""What a case is: its tables put together.

One class per table of the file. A field's alias is the key in the file; the field's own name carries the
SI unit it holds. Defaults are written as a user would write them, so that the list of assumptions, the
schema and the value used cannot differ. A table that only some plants need is None when left out.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from dataclasses import field as a_field
from typing import TYPE_CHECKING, Annotated, get_args

from pydantic import Field
from pydantic.fields import FieldInfo

from retrofit.case.approvals import Approvals
from retrofit.case.compressor import Compressor
from retrofit.case.emissions import Emissions
from retrofit.case.exchangers import Condenser, Evaporator
from retrofit.case.law import Law
from retrofit.case.money import Money, Option, Options
from retrofit.case.paper import Report
from retrofit.case.pipework import Lines, Receiver, Valve
from retrofit.case.plant import Compare, Duty, Plant
from retrofit.case.plus_minus import PlusMinus
from retrofit.case.readings import Controls, Readings
from retrofit.case.room import MachineryRoom, Room
from retrofit.case.table import Table, key
from retrofit.case.thresholds import Thresholds
from retrofit.case.values import Text
from retrofit.case.year import Year

if TYPE_CHECKING:
    from retrofit.case.weather import Weather


class CaseFile(Table):
    """The whole file."""

    title: Annotated[str | None, Text(200)] = key("title", "Name of the plant, for headings.", None)
    about: Annotated[str | None, Text(1000)] = key("about", "A sentence on whose plant it is.", None)
    plant: Plant = key("plant", "The plant as found.")
    duty: Duty = key("duty", "What the plant has to do.")
    compressor: Compressor = Field(
        default_factory=lambda: Compressor.model_validate({}),
        alias="compressor",
        description="The existing compressors taken together.",
    )
    compare: Compare = key("compare", "The refrigerants to compare.")
    readings: Readings | None = key("readings", "What was measured on the running plant.", None)
    evaporator: Evaporator | None = key("evaporator", "Air, water or brine that the evaporator cools.", None)
    condenser: Condenser | None = key("condenser", "Air, water or brine that the condenser warms.", None)
    lines: Lines | None = key("lines", "The refrigerant lines.", None)
    valve: Valve | None = key("valve", "The expansion valves.", None)
    receiver: Receiver | None = key("receiver", "The liquid receiver of the high side.", None)
    controls: Controls | None = key("controls", "Settings of the controls today.", None)
    approvals: Approvals | None = key("approvals", "What makers and engineers have answered in writing.", None)
    room: Room | None = key("room", "The room that a leak would fill.", None)
    machinery_room: MachineryRoom | None = key("machinery_room", "The machinery room.", None)
    law: Law | None = key("law", "Where the plant stands in law, and for how long.", None)
    year: Year | None = key("year", "A year of the plant: weather, load and what runs beside the compressors.", None)
    emissions: Emissions | None = key("emissions", "Leaks, the grid, and what becomes of the charge.", None)
    money: Money | None = key("money", "Prices, in the user's currency.", None)
    options: Options | None = key("options", "What each option costs, and how it differs.", None)
    plus_minus: PlusMinus | None = key("plus_minus", "How far inputs may be off, by their keys.", None)
    report: Report | None = key("report", "What stands on the report besides results.", None)
    thresholds: Thresholds | None = key("thresholds", "The user's own thresholds of the checks.", None)


def _tables(table: type[Table], above: str = "") -> Iterator[tuple[str, type[Table]]]:
    """Yield name and class of every table within a table, however deep."""
    for field in table.model_fields.values():
        inner = _table_of(field)
        if inner is not None:
            yield f"{above}{field.alias}", inner
            yield from _tables(inner, f"{above}{field.alias}.")


def _table_of(field: FieldInfo) -> type[Table] | None:
    kinds = (field.annotation, *get_args(field.annotation))
    return next((kind for kind in kinds if isinstance(kind, type) and issubclass(kind, Table)), None)


TABLES: Mapping[str, type[Table]] = dict(_tables(CaseFile))
"""Every table of the file by its name there: "plant", "lines", "lines.suction"."""

FIELDS: Mapping[str, tuple[str, FieldInfo]] = {
    f"{name}.{field.alias}": (attribute, field)
    for name, table in TABLES.items()
    for attribute, field in table.model_fields.items()
    if f"{name}.{field.alias}" not in TABLES
}
"""Attribute and field of every key of a table, by its full name: "lines.suction.diameter"."""

OPTION_FIELDS: Mapping[str, tuple[str, FieldInfo]] = {
    field.alias or attribute: (attribute, field) for attribute, field in Option.model_fields.items()
}
"""The same of every key of one option, by its last name: its table is named by the user's refrigerants."""


def field_of(key: str) -> tuple[str, FieldInfo] | None:
    """Return attribute and field of a key, of an option's too; None if there is no such key.

    Args:
        key: Its full name, such as "duty.cooling" or "options.R454C.leak_rate". [-]
    """
    table, _, name = key.rpartition(".")
    is_option = table.startswith("options.") and table.count(".") == 1
    return OPTION_FIELDS.get(name) if is_option else FIELDS.get(key)


@dataclass(frozen=True)
class Default:
    """A value that the file left out: its key, what was taken (as text), and why that."""

    key: str
    shown_text: str
    why: str


@dataclass(frozen=True)
class Case:
    """A case as read: SI values in its tables, and what was written and what was assumed.

    `given` maps each key of the file ("duty.cooling") to the text written there; `defaults` are the
    values taken for keys left out; `path` is the file as named by the user and `text` its content.
    Tables from `readings` on are None when the file has none; `weather` is None without a year.
    `widths` holds half the width of each input under `plus_minus`, in SI, by its full key.
    """

    title: str
    about: str | None
    plant: Plant
    duty: Duty
    compressor: Compressor
    compare: Compare
    path: str
    text: str
    given: Mapping[str, str]
    defaults: tuple[Default, ...]
    readings: Readings | None = None
    evaporator: Evaporator | None = None
    condenser: Condenser | None = None
    lines: Lines | None = None
    valve: Valve | None = None
    receiver: Receiver | None = None
    controls: Controls | None = None
    law: Law | None = None
    approvals: Approvals | None = None
    room: Room | None = None
    machinery_room: MachineryRoom | None = None
    report: Report | None = None
    thresholds: Thresholds | None = None
    year: Year | None = None
    emissions: Emissions | None = None
    money: Money | None = None
    options: Options | None = None
    plus_minus: PlusMinus | None = None
    weather: Weather | None = None
    widths: Mapping[str, float] = a_field(default_factory=dict)
