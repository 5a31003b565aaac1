"""What stands on the report besides results: whose it is, who signs, what is recommended, what was revised."""

from __future__ import annotations

import datetime
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated, Any, NamedTuple

from pydantic import Field

from retrofit.case.law import DAY
from retrofit.case.logo import Logo, LogoFile
from retrofit.case.table import Items, Table, key
from retrofit.case.values import FileValue, Refrigerant, Text
from retrofit.errors import QuantityError
from retrofit.units import described, listed, shown

MOST_REVISIONS, MOST_CONDITIONS = 100, 12
_NAME = Text(120)
_SENTENCE = Text(300)
_REFRIGERANT = Refrigerant()


class Revision(NamedTuple):
    """One line of the revision table."""

    rev: str
    date: datetime.date
    what: str
    by: str


@dataclass(frozen=True)
class RevisionValue(FileValue):
    """A list of revision, day, what changed and by whom; or a table of the same."""

    rev = Text(20)
    text = Text(200)

    def sample(self) -> str:
        """Return a revision, as text."""
        return '["A", "2027-01-15", "first issue", "engineer"]'

    def read(self, value: object, p_ambient_Pa: float | None = None) -> Revision:
        """Return the revision."""
        how = {"rev": self.rev, "date": DAY, "what": self.text, "by": self.text}
        parts = zip(how, self._parts(value), strict=True)
        return Revision(**{name: self._of(name, how[name], part) for name, part in parts})

    def _parts(self, value: object) -> list[Any]:
        names = Revision._fields
        if isinstance(value, Mapping):
            if set(value) != set(names):
                keys = listed((shown(str(name), 40) for name in value), "and") or "none"
                raise QuantityError(f"a revision has the keys {listed(names, 'and')}; here are {keys}")
            return [value[name] for name in names]
        if not isinstance(value, list) or len(value) != len(names):
            what = f"a list of {len(value)}" if isinstance(value, list) else described(value)
            raise QuantityError(f"{what} stands where {listed(names, 'and')} are needed, as in {self.sample()}")
        return value

    def _of(self, name: str, how: FileValue, value: object) -> Any:
        try:
            return how.read(value)
        except QuantityError as error:
            raise QuantityError(f"{name}: {error}") from None

    def json_schema(self) -> dict[str, Any]:
        """Return a list of four texts, or a table of the same."""
        text = {"type": "string", "minLength": 1}
        of = {name: DAY.json_schema() if name == "date" else text for name in Revision._fields}
        table = {"type": "object", "properties": of, "required": list(of), "additionalProperties": False}
        row = {"type": "array", "prefixItems": list(of.values()), "minItems": len(of), "maxItems": len(of)}
        return {"anyOf": [row, table]}


_REVISION = RevisionValue()


class Report(Table):
    """What stands on the report besides results; whatever is left out leaves a line to fill in by hand, or nothing."""

    client: Annotated[str | None, _NAME] = key("client", "Whom the report is for.", None)
    site: Annotated[str | None, Text(200)] = key("site", "Where the plant stands.", None)
    system_id: Annotated[str | None, _NAME] = key("system_id", "How the plant is called in the client's lists.", None)
    company: Annotated[str | None, _NAME] = key("company", "Whose report it is.", None)
    logo: Annotated[Logo | None, LogoFile()] = key(
        "logo", "Picture of the company: PNG, JPEG or SVG, its path counted from the case file.", None
    )
    prepared: Annotated[str | None, _NAME] = key("prepared", "Who prepared the report.", None)
    checked: Annotated[str | None, _NAME] = key("checked", "Who checked it.", None)
    approved: Annotated[str | None, _NAME] = key("approved", "Who approved it.", None)
    decide_by: Annotated[datetime.date | None, DAY] = key("decide_by", "Day by which the client has to decide.", None)
    revisions: Annotated[
        tuple[Annotated[Revision, _REVISION], ...],
        Field(max_length=MOST_REVISIONS),
        Items(_REVISION, f"a list of at most {MOST_REVISIONS} revisions, as in [{_REVISION.sample()}]"),
    ] = key("revisions", "Revisions of the report, each with date, what changed, and by whom.", ())
    recommended: Annotated[str | None, _REFRIGERANT] = key(
        "recommended", "Refrigerant that the engineer recommends: a candidate, or today's to keep.", None
    )
    fallback: Annotated[str | None, _REFRIGERANT] = key(
        "fallback", "Refrigerant to fall back on: another candidate, or today's to keep.", None
    )
    conditions: Annotated[
        tuple[Annotated[str, _SENTENCE], ...],
        Field(max_length=MOST_CONDITIONS),
        Items(_SENTENCE, f'a list of at most {MOST_CONDITIONS} sentences, as in ["The cases are cleaned first."]'),
    ] = key("conditions", "The engineer's own conditions of the recommendation, after those found.", ())
