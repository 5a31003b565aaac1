"""What is not taken, and why."""

from __future__ import annotations

from dataclasses import dataclass


class RefusedError(Exception):
    """A change that is not possible; `field` names the input, `text` what was written there."""

    def __init__(self, message: str, field: str = "", text: str = "") -> None:
        super().__init__(message)
        self.message, self.field, self.text = message, field, text


@dataclass(frozen=True)
class Refused:
    """What stands in an input and why what was written was not taken."""

    text: str
    why: str
