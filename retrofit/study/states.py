"""The states that a result speaks in. Words for a reader are made from them at the edge, never the other way round."""

from __future__ import annotations

from enum import StrEnum


class Family(StrEnum):
    """What is done with the plant."""

    KEEP = "keep"
    CONVERT = "convert"
    REPLACE = "replace"


class Level(StrEnum):
    """How grave a finding is, the gravest first."""

    STOP = "stop"
    UNKNOWN = "unknown"
    WORK = "work"
    NOTE = "note"


class Verdict(StrEnum):
    """What the checks say of an option, the worst first; OPEN where a decisive fact is missing."""

    NOT_SUITABLE = "not suitable"
    OPEN = "open"
    MODIFICATIONS = "suitable with modifications"
    SUITABLE = "suitable"
    NOT_JUDGED = ""

    @property
    def is_positive(self) -> bool:
        """Return whether it reads as an answer in favour. [-]"""
        return self in (Verdict.SUITABLE, Verdict.MODIFICATIONS)


class RestState(StrEnum):
    """What is known of the pressure in a plant that stands still at its highest ambient temperature."""

    COMPUTED = "computed"
    NO_AMBIENT = "highest ambient not given"
    ABOVE_CRITICAL = "critical temperature at or below the highest ambient"
    NOT_COMPUTED = "not computed"


class Evidence(StrEnum):
    """How well the model of the compressor is tested for a change of refrigerant, the best first."""

    SAME = "same"
    NEAR = "near"
    FAR = "far"
    UNTESTED = "untested"
    CONSTANT = "constant"
