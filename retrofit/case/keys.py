"""What a key of a case file means, and the quantity a case holds for it: for lists of inputs."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from pydantic.fields import FieldInfo

from retrofit.case.model import Case, field_of
from retrofit.case.money import Options, Range
from retrofit.case.table import WHERE, Items
from retrofit.case.values import FileValue


def meaning(key: str) -> str:
    """Return the sentence on a key of a table.

    Args:
        key: Its full name, such as "duty.cooling" or "lines.suction.diameter". [-]
    Returns: The sentence; of a key that has none (a threshold of the user) its last name.
    """
    _, field = field_of(key) or ("", None)
    return (field and field.description) or key.rpartition(".")[2]


@dataclass(frozen=True)
class KeyFacts:
    """What there is to know of a key of the case file.

    Attributes:
        key: Its full name.
        meaning: What it is.
        where: Where it is read on site, or who knows it; empty if nowhere in particular.
        form: How its value is written.
    """

    key: str
    meaning: str
    where: str
    form: str


def facts_of(key: str) -> KeyFacts:
    """Return what there is to know of a key, as schema, template and the list of what is missing have it.

    Args:
        key: Its full name, such as "plant.charge" or "options.R454C.charge". [-]
    Raises: KeyError if the case file has no such key.
    """
    found = field_of(key)
    if found is None:
        raise KeyError(key)
    field = found[1]
    extra = field.json_schema_extra
    where = extra.get(WHERE, "") if isinstance(extra, dict) else ""
    return KeyFacts(key, field.description or "", str(where), _form(field))


def _form(field: FieldInfo) -> str:
    for extra in field.metadata:
        if isinstance(extra, FileValue):
            return extra.form()
        if isinstance(extra, Items):
            return extra.how
    return "text in quotes"


def quantity(case: Case, key: str) -> tuple[str, float] | None:
    """Return the quantity that a case holds for a key.

    Args:
        case: The case.
        key: Its full name, such as "duty.cooling" or "lines.suction.diameter". [-]
    Returns: Kind of quantity as `UnitSystem.displays` names it, and value [SI]; None if there is no one quantity.
    """
    _, field = field_of(key) or ("", None)
    value = _held(case, key)
    how = next((extra for extra in (field.metadata if field else ()) if isinstance(extra, FileValue)), None)
    is_number = isinstance(value, int | float)
    return (how.shown_kind(), value) if how and how.shown_kind() and is_number else None


def sum_of_money(case: Case, key: str) -> Range | None:
    """Return the sum of money that a case holds for a key.

    Args:
        case: The case.
        key: Its full name, such as "money.tariff" or "money.refrigerant_price.R448A". [-]
    Returns: Lowest, base and highest [currency]; None if the key holds no sum.
    """
    table, _, name = key.rpartition(".")
    prices = dict(case.money.refrigerant_price or ()) if case.money and table == "money.refrigerant_price" else {}
    value = prices.get(name) or _held(case, key)
    return value if isinstance(value, Range) else None


def _held(case: Case, key: str) -> Any:
    """Return what a case holds for a key, whatever it is; None for nothing."""
    attribute, _ = field_of(key) or ("", None)
    value: Any = case
    for part in (*key.split(".")[:-1], attribute):
        value = value.named(part) if isinstance(value, Options) else getattr(value, part, None)
    return value
