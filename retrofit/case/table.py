"""What every table of a case file is made of: the base class, a key, a list, and a default with its reason."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from pydantic import BaseModel, ConfigDict, Field

from retrofit.case.values import FileValue


class Table(BaseModel):
    """A table of the case file: frozen, and without keys that it does not know."""

    # Built when a file is read: the command line loads many tables that it may never use.
    model_config = ConfigDict(frozen=True, extra="forbid", defer_build=True)


@dataclass(frozen=True)
class WhyDefault:
    """Why the default of a field is what it is: a sentence for the list of assumptions.

    The default is taken only if the key `beside` is there and none of `unless` is, and tells something only
    if the key `moot_if[0]` has another value than `moot_if[1]`.
    """

    text: str
    beside: str = ""
    unless: tuple[str, ...] = ()
    moot_if: tuple[str, str] = ("", "")


@dataclass(frozen=True)
class Items:
    """What a list holds, and how one is written."""

    item: FileValue
    how: str


WHERE = "where"


def key(alias: str, meaning: str, default: Any = ..., *, where: str = "") -> Any:
    """Return the pydantic field of a key.

    Args:
        alias: The key in the file. [-]
        meaning: A sentence that an editor and the report show. [-]
        default: As a user would write it; None if the key may be left out and nothing is assumed. [-]
        where: Where it is read on site, or who knows it; for the list of what is missing. [-]
    """
    checked = default is not None and default is not ...
    extra: dict[str, Any] | None = {WHERE: where} if where else None
    return Field(default, alias=alias, description=meaning, validate_default=checked, json_schema_extra=extra)
