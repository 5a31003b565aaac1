"""What makers and responsible engineers have answered in writing: what no number of the case can settle."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated, Any

from retrofit.case.table import Table, key
from retrofit.case.values import FileValue, designation_of
from retrofit.errors import QuantityError
from retrofit.refrigerants import with_hyphens
from retrofit.units import close_to, described, listed, quoted

ANSWERS: Mapping[str, bool] = {"approved": True, "not approved": False}


@dataclass(frozen=True)
class ApprovalValue(FileValue):
    """A table of designation and answer."""

    def sample(self) -> str:
        """Return a table, as text."""
        return '{R448A = "approved", R449A = "not approved"}'

    def form(self) -> str:
        """Return how a table is written."""
        return self.sample()

    def read(self, value: object, p_ambient_Pa: float | None = None) -> tuple[tuple[str, bool], ...]:
        """Return each designation and whether it is approved."""
        if not isinstance(value, Mapping):
            raise QuantityError(f"{described(value)} stands where a table of answers is needed, as in {self.sample()}")
        found: dict[str, bool] = {}
        for name, answer in value.items():
            designation = designation_of(name)
            if designation in found:
                raise QuantityError(f"{with_hyphens(designation)} is in the table twice; leave one out")
            if not isinstance(answer, str) or answer not in ANSWERS:
                words = listed(f'"{word}"' for word in ANSWERS)
                near = close_to(answer, ANSWERS) if isinstance(answer, str) else ""
                what = quoted(answer) if isinstance(answer, str) else described(answer)
                raise QuantityError(f"{quoted(name)}: {what} is not an answer{near}; write {words}")
            found[designation] = ANSWERS[answer]
        return tuple(found.items())

    def json_schema(self) -> dict[str, Any]:
        """Return a table of answers."""
        return {"type": "object", "additionalProperties": {"enum": list(ANSWERS)}}


_ANSWER = Annotated[tuple[tuple[str, bool], ...] | None, ApprovalValue()]


class Approvals(Table):
    """Answers in writing, by refrigerant; who answered and when belongs beside the case."""

    compressor: _ANSWER = key(
        "compressor",
        "Whether the maker approves the compressor with the refrigerant and oil, every working point in the envelope.",
        None,
        where="maker of the compressor, in writing, with its envelope",
    )
    oil: _ANSWER = key(
        "oil", "Whether the oil in the plant is approved with it.", None, where="maker of the compressor, in writing"
    )
    expansion_valve: _ANSWER = key(
        "expansion_valve",
        "Whether the expansion device as it is has the capacity for it.",
        None,
        where="maker of the valve: capacity at this pressure difference",
    )
    relief_capacity: _ANSWER = key(
        "relief_capacity",
        "Whether the relief valve lets off the flow that the standard asks for with it.",
        None,
        where="flow stamped on the valve, against that of ASHRAE 15 or EN 13136 for the refrigerant",
    )
    receiver: _ANSWER = key(
        "receiver", "Whether the receiver holds its charge.", None, where="engineer in charge, by calculation"
    )
    lines: _ANSWER = key(
        "lines",
        "Whether the refrigerant lines as built suit it, oil return included.",
        None,
        where="engineer in charge, by calculation with the viscosity of the refrigerant's own tables",
    )
    seals: _ANSWER = key(
        "seals",
        "Whether the material of every seal suits it: shaft, receiver, terminals, valve stems, access valves.",
        None,
        where="makers of compressor and valves: lists of materials",
    )
    standstill: _ANSWER = key(
        "standstill",
        "Whether the plant holds the pressure at rest, where no liquid is left and charge and volume set it.",
        None,
        where="maker of the plant",
    )
    room: _ANSWER = key(
        "room",
        "Whether its charge is approved for the room, where the rules held here do not decide.",
        None,
        where="authority or engineer in charge, by the standard in force",
    )
    law: _ANSWER = key(
        "law",
        "Whether law permits it here, where the tables held here leave it open.",
        None,
        where="authority, with the text in force",
    )
    metals: _ANSWER = key(
        "metals", "Whether every metal that it touches suits it.", None, where="makers of compressor, coils and valves"
    )

    def of(self, name: str, refrigerant: str) -> bool | None:
        """Return the answer for a refrigerant; None if there is none.

        Args:
            name: A key of this table.
            refrigerant: Its designation.
        """
        return dict(getattr(self, name) or ()).get(refrigerant)
