"""The exceptions of this project.

RetrofitError
├── CaseFileError             the case file cannot be used; carries every problem found
├── QuantityError             a text is not a quantity of the kind wanted (also ValueError)
├── UnknownRefrigerantError   no such designation in the catalogue (also KeyError)
├── NoModelError              the catalogue knows it, the property library cannot model it
├── OutsideValidRangeError    a state lies outside the stated range of a model (also ValueError)
├── NoSolutionError           an equation has no solution for the values given
├── ModelFaultError           the property model gave an answer that fails its own checks
├── ReportError               the report cannot be written
├── TargetError               a file is to be written under a name that is not for it
├── MissingPartError          an optional part of the installation is not there
└── PortError                 the meeting page cannot have its port

StoreWarning: property tables are right, but cannot be kept for the next run.

A message says what is wrong, the value and unit given, what is allowed, and what to do next.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass


class RetrofitError(Exception):
    """Base of every error this project raises on purpose."""

    slug = "error"
    exit_code = 1

    def __init__(self, message: str) -> None:
        super().__init__(message)
        self.message = message

    def __str__(self) -> str:
        return self.message


@dataclass(frozen=True)
class Problem:
    """One thing wrong in a case file, or in a file it names: where it stands, which key, and what to do.

    `path` is the file named by the case; empty if the problem stands in the case file itself.
    """

    line: int
    key: str
    text: str
    path: str = ""

    def located(self, path: str) -> str:
        """Return the problem as `file:line: key: text`, the form editors make clickable; `path` is the case file."""
        file = self.path or path
        where = f"{file}:{self.line}: " if self.line else f"{file}: "
        return where + (f"{self.key}: " if self.key else "") + self.text


class CaseFileError(RetrofitError):
    """The case file, or a file it names, cannot be used; problems are in the order of files and lines."""

    slug = "case-file"
    exit_code = 2

    def __init__(self, path: str, problems: Sequence[Problem]) -> None:
        self.path = path
        self.problems = tuple(sorted(problems, key=lambda problem: (problem.path, problem.line)))
        super().__init__("\n".join(problem.located(path) for problem in self.problems))


class QuantityError(RetrofitError, ValueError):
    """A text is not a quantity of the kind wanted."""

    slug = "quantity"
    exit_code = 2


class UnknownRefrigerantError(RetrofitError, KeyError):
    """No such designation in the catalogue; `close` holds the nearest ones."""

    slug = "unknown-refrigerant"
    exit_code = 2

    def __init__(self, message: str, close: Sequence[str] = ()) -> None:
        super().__init__(message)
        self.close = tuple(close)


class NoModelError(RetrofitError):
    """The catalogue knows the refrigerant, but the property library cannot model it."""

    slug = "no-model"


class OutsideValidRangeError(RetrofitError, ValueError):
    """A state lies outside the stated range of a model; the message carries the range."""

    slug = "outside-range"


class NoSolutionError(RetrofitError):
    """An equation has no solution for the values given."""

    slug = "no-solution"


class ModelFaultError(RetrofitError):
    """The property model gave an answer that fails its own checks: an error, never a number."""

    slug = "model-fault"


class ReportError(RetrofitError):
    """The report cannot be written."""

    slug = "report"


class TargetError(RetrofitError):
    """A file is to be written under a name that is not for it."""

    slug = "target"
    exit_code = 2


class MissingPartError(RetrofitError):
    """An optional part of the installation is not there; the message says how to add it."""

    slug = "missing-part"
    exit_code = 2


class PortError(RetrofitError):
    """The meeting page cannot have its port."""

    slug = "port"


class StoreWarning(UserWarning):
    """Property tables are right, but cannot be kept for the next run."""
