"""The thresholds of the checks, read from thresholds.toml."""

from __future__ import annotations

import tomllib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from functools import cache
from importlib.resources import files

from retrofit.case import Case
from retrofit.case import Threshold as OwnThreshold
from retrofit.case.source import parsed
from retrofit.errors import CaseFileError, Problem, QuantityError
from retrofit.units import SI, close_to, figure, listed, parse_quantity, quantity, quoted, told, unit_word

LEVELS = ("note", "work", "stop")


@dataclass(frozen=True)
class Threshold:
    """Where a finding begins.

    Attributes:
        unit: What the figures count.
        kind: Kind of quantity of the figures, if they have a unit, which `unit` then begins with; empty if not.
        source, basis: Where they come from: "read", "practice", "memory", or "case" if the user set them.
        note, work, stop: Where a finding of that level begins; None if there is no such level.
    """

    unit: str
    source: str
    basis: str
    note: float | None = None
    work: float | None = None
    stop: float | None = None
    kind: str = ""

    @property
    def figures(self) -> Mapping[str, float]:
        """Return the figures by level, the mildest first."""
        found = {level: getattr(self, level) for level in LEVELS}
        return {level: figure for level, figure in found.items() if figure is not None}

    def figures_in(self, words: str = "") -> str:
        """Return where work and a stop begin, such as "107 °C (work) and 121 °C (stop)".

        Args:
            words: What follows a figure without unit, as a sentence writes it.
        """
        parts = [f"{self.figure_of(level)} {words}".strip() + f" ({level})" for level in self.figures]
        return " and ".join(part for part in parts if not part.endswith("(note)"))

    def figure_of(self, level: str) -> str:
        """Return where a level begins, with its unit if it has one, for a sentence."""
        begin = self.figures[level]
        return quantity(self.kind, self._SI(begin), "g") if self.kind else f"{begin:g}"

    def number(self, value: float) -> float:
        """Return a value in the unit of the figures. [SI]"""
        return float(SI.number(self.kind, value))

    def level_of(self, value: float) -> str | None:
        """Return the level of a value in SI that is worse the larger it is. [SI]"""
        return self.level(self.number(value))

    def read(self, level: str, written: float | str) -> float:
        """Return a figure that the case sets, in the unit of the figures here.

        Args:
            level: The level it is for.
            written: A bare number, or a quantity as text. [unit of the figures, or its own]
        Raises: QuantityError if a figure with a unit is written without, or the other way round.
        """
        if not self.kind:
            if isinstance(written, str):
                raise QuantityError(
                    f"{level} {quoted(written)} has a unit, and this threshold has none ({self.unit}); write {level} = "
                    f"{self.figures[level]:g}"
                )
            return written
        unit = self.unit.split(" ", 1)[0]
        if not isinstance(written, str):
            raise QuantityError(
                f'{level} {written:g} has no unit; write it with one, as in {level} = "{self.figures[level]:g} {unit}"'
            )
        try:
            return self.number(parse_quantity(written, self.kind))
        except QuantityError as error:
            raise QuantityError(f"{level}: {error.message}") from None

    def _SI(self, figure: float) -> float:
        return float(SI.displays[self.kind].unit.to_SI(figure))

    def words(self, side: str = "above") -> str:
        """Return the threshold in words, such as "work above 0.9, stop above 1 of the nameplate pressure".

        Args:
            side: "above" or "below", the side on which a value is bad.
        """
        if not self.kind:
            return f"{', '.join(f'{level} {side} {begin:g}' for level, begin in self.figures.items())} {self.unit}"
        unit, *rest = self.unit.split(" ", 1)
        begins = (f"{level} {side} {figure(self.kind, self._SI(begin), 'g')}" for level, begin in self.figures.items())
        return " ".join([", ".join(begins), unit_word(self.kind, unit), *rest])

    def level(self, value: float) -> str | None:
        """Return the level of a value that is worse the larger it is, None if it is below every level."""
        for level in ("stop", "work", "note"):
            begin = getattr(self, level)
            if begin is not None and value > begin:
                return level
        return None

    def level_below(self, value: float) -> str | None:
        """Return the level of a value that is worse the smaller it is, None if it is above every level."""
        for level in ("stop", "work", "note"):
            begin = getattr(self, level)
            if begin is not None and value < begin:
                return level
        return None


@cache
def _table() -> Mapping[str, dict[str, object]]:
    text = files("retrofit.checks").joinpath("thresholds.toml").read_text(encoding="utf-8")
    return tomllib.loads(text)


@cache
def threshold(name: str) -> Threshold:
    """Return a threshold by its name in thresholds.toml."""
    return Threshold(**_table()[name])  # type: ignore[arg-type]


def thresholds_for(case: Case) -> Mapping[str, Threshold]:
    """Return every threshold by name, the user's own in the case laid over those of the file.

    Args:
        case: The case.
    Raises: CaseFileError for a name or a level that there is not, a figure without its unit, or figures in the
        wrong order.
    """
    table = {name: threshold(name) for name in _table()}
    own = case.thresholds.by_name if case.thresholds else {}
    problems = [problem for name, figures in own.items() for problem in _problems(name, figures, table)]
    if problems:
        lines = parsed(case.text, case.path)[1]
        located = [Problem(lines.get(("thresholds", name), 0), f"thresholds.{name}", text) for name, text in problems]
        raise CaseFileError(case.path, located)
    return {**table, **{name: _laid_over(table[name], figures) for name, figures in own.items()}}


def _problems(name: str, own: OwnThreshold, table: Mapping[str, Threshold]) -> Iterator[tuple[str, str]]:
    """Yield what is wrong with a threshold of the user's: its name, and what to do."""
    if name not in table:
        near = close_to(name, table) or "."
        yield name, f"there is no threshold {quoted(name)}{near} The names are {listed(table, 'and')}"
        return
    known, written = table[name].figures, _written(own)
    unknown = [level for level in written if level not in known]
    if unknown:
        yield name, f"it has no level {listed(unknown)}; its levels are {listed(known, 'and')}"
        return
    try:
        given = _given(table[name], own)
    except QuantityError as error:
        yield name, error.message
        return
    if not _in_order(known, {**known, **given}):
        words = told(table[name].words("beyond"), SI)
        yield name, f"its figures run the other way than {words}; give all levels in that order"


def _written(own: OwnThreshold) -> Mapping[str, float | str]:
    found = {level: getattr(own, level) for level in LEVELS}
    return {level: figure for level, figure in found.items() if figure is not None}


def _given(limit: Threshold, own: OwnThreshold) -> Mapping[str, float]:
    """Return the figures of the user's, in the unit of the threshold."""
    return {level: limit.read(level, figure) for level, figure in _written(own).items()}


def _in_order(known: Mapping[str, float], laid_over: Mapping[str, float]) -> bool:
    """Return whether figures run from level to level the same way as those of the file."""
    file, own = list(known.values()), list(laid_over.values())
    return own == sorted(own, reverse=file != sorted(file))


def _laid_over(limit: Threshold, own: OwnThreshold) -> Threshold:
    given = _given(limit, own)
    instead = ", ".join(f"{level} {limit.figures[level]:g}" for level in given)
    source = f"set in the case, instead of {instead} ({limit.source})"
    figures = {**limit.figures, **given}
    return replace(limit, source=source, basis="case", **figures)  # type: ignore[arg-type]
