"""The user's own thresholds of the checks; the checks know names and kinds of quantity, this room does not."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated

from pydantic import ConfigDict

from retrofit.case.numbers import Level
from retrofit.case.table import Table, key

_LEVEL = Annotated[float | str | None, Level()]


class Threshold(Table):
    """Where one check begins to speak, by level: a number, or a quantity as text, which the checks read."""

    note: _LEVEL = key("note", "From here the check leaves a note.", None)
    work: _LEVEL = key("work", "From here the check asks for work.", None)
    stop: _LEVEL = key("stop", "From here the check says stop.", None)


class Thresholds(Table):
    """The user's own thresholds, by the name of each."""

    model_config = ConfigDict(frozen=True, extra="allow", defer_build=True)
    __pydantic_extra__: dict[str, Threshold]

    @property
    def by_name(self) -> Mapping[str, Threshold]:
        """The thresholds given, by name."""
        return self.__pydantic_extra__
