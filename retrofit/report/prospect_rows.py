"""Rows of the tables of the remaining life: a cell for each option, `unknown` with a note where a datum is missing."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from retrofit.checks.outlook import UNKNOWN, percent, rounded_text
from retrofit.checks.prospects import Prospect, difference, missing_words, quantile
from retrofit.report.judging import spelled
from retrofit.report.rows import near
from retrofit.report.table import Cell, Notes, Row
from retrofit.units import MISSING

Read = Callable[[Prospect], float | None]
# Results that the plant as it is has against itself.
AGAINST_AS_IS = (
    "energy_saving_J", "avoided_t", "first_cost", "yearly_saving", "payback_years", "npv", "cost_per_t",
)  # fmt: skip
SAME = {"as it is": "", "kept, with its repairs": " kept"}


@dataclass(frozen=True)
class Options:
    """Options side by side in one table, and the notes that its cells make."""

    all: tuple[Prospect, ...]
    notes: Notes

    @property
    def names(self) -> tuple[str, ...]:
        """Return the headings of the columns; the first is the plant as it is."""
        return tuple(shown_name(option) for option in self.all)

    def row(
        self,
        label: str,
        unit: str,
        read: Read,
        show: Callable[[float], str],
        why: Callable[[Prospect], str],
        note: Callable[[Prospect], str] = lambda option: "",
    ) -> Row:
        """Return a row of numbers; one that is not known reads so, with what is missing in a note.

        Args:
            label: What they are.
            unit: Their unit.
            read: The number of an option.
            show: Its text.
            why: What is missing if there is none.
            note: What is to be said of a number that there is; empty for nothing.
        """

        def cell(option: Prospect) -> Cell:
            value = read(option)
            if value is None:
                return self.unknown(option, why(option))
            text = note(option)
            return Cell(show(value), marks=(self.notes.mark(shown_name(option), text),) if text else ())

        return Row(label, unit, tuple(cell(option) for option in self.all))

    def unknown(self, option: Prospect, why: str) -> Cell:
        """Return a cell of what is not known, with what is missing in a note if that can be said."""
        own = f"[options.{option.entry.refrigerant.designation}]"
        # So that options that lack the same share a note.
        told = why.replace(own, "its table in [options]")
        text = spelled(told)
        marks = (self.notes.mark(shown_name(option), f"unknown: missing {text}"),) if why else ()
        return Cell(UNKNOWN, is_number=False, marks=marks)

    def changes(self, label: str, quantity: str) -> Row:
        """Return a row of differences from the plant as it is; one that the model cannot tell carries the sign ≈.

        Args:
            label: What they are.
            quantity: "energy" or "emissions".
        """

        def cell(option: Prospect) -> Cell:
            if option is self.all[0]:
                return Cell(MISSING)
            found = difference(self.all[0], option, quantity)
            if found.one_sided:
                return Cell(MISSING, marks=(self.notes.mark(shown_name(option), found.missing),))
            if found.ratio is None:
                return self.unknown(option, found.missing)
            text = percent(found.ratio).removesuffix("\N{NO-BREAK SPACE}%")
            is_modelled = found.is_alike and option.entry is not self.all[0].entry
            return Cell(near(text) if is_modelled else text)

        return Row(label, "%", tuple(cell(option) for option in self.all))

    def ranges(self, label: str, unit: str, name: str, to_number: Callable[[float], float]) -> Row:
        """Return a row of the range in which 8 of 10 draws lie, from the value that 10 % stay below to that of 90 %.

        Args:
            label: What they are.
            unit: Their unit.
            name: Name of the result.
            to_number: From its unit to that of the row; it may turn the sign round.
        """

        def cell(option: Prospect) -> Cell:
            found = self._known(option, name)
            if found is None:
                return Cell(MISSING)
            low, high = sorted((found[0], found[2]), key=to_number)
            return Cell(f"{range_end(low, to_number)} to {range_end(high, to_number)}")

        return Row(label, unit, tuple(cell(option) for option in self.all))

    def three_quantiles(
        self, label: str, unit: str, name: str, to_number: Callable[[float], float], signed: bool = False
    ) -> Row:
        """Return a row of the values that 10, 50 and 90 % of the draws stay below, together in a cell.

        Args:
            label: What they are.
            unit: Their unit.
            name: Name of the result.
            to_number: From its unit to that of the row.
            signed: Whether a plus sign stands before what is above 0. [-]
        """

        def cell(option: Prospect) -> Cell:
            found = self._known(option, name)
            return Cell(MISSING if found is None else " · ".join(range_end(end, to_number, signed) for end in found))

        return Row(label, unit, tuple(cell(option) for option in self.all))

    def quantiles(self, label: str, unit: str, name: str, place: int, to_number: Callable[[float], float]) -> Row:
        """Return a row of one of the three quantiles of the draws.

        Args:
            label: What they are.
            unit: Their unit.
            name: Name of the result.
            place: 0 for 10 per cent, 1 for 50, 2 for 90. [-]
            to_number: From its unit to that of the row.
        """

        def cell(option: Prospect) -> Cell:
            found = self._known(option, name)
            return Cell(MISSING if found is None else range_end(found[place], to_number))

        return Row(label, unit, tuple(cell(option) for option in self.all))

    def _known(self, option: Prospect, name: str) -> tuple[float, float, float] | None:
        """Return the three quantiles; None where there are none, and of the plant as it is against itself."""
        return None if option is self.all[0] and name in AGAINST_AS_IS else quantile(option, name)

    def words(self, label: str, say: Callable[[Prospect], str]) -> Row:
        """Return a row of words."""
        return Row(label, "", tuple(Cell(say(option), is_number=False) for option in self.all))


def range_end(value: float, to_number: Callable[[float], float], signed: bool = False) -> str:
    """Return an end of a range of draws; a payback that never comes reads so.

    Args:
        value: The end. [unit of the result]
        to_number: From that unit to the one shown.
        signed: Whether a plus sign stands before what is above 0. [-]
    """
    return rounded_text(to_number(value), signed) if math.isfinite(value) else "never"


def shown_name(option: Prospect) -> str:
    """Return the name of an option for a heading: its refrigerant, and whether the plant is kept with repairs."""
    return f"{option.entry.refrigerant.display_name}{SAME.get(option.deed, '')}"


def missing_of(quantity: str) -> Callable[[Prospect], str]:
    """Return what says what is missing for a quantity of an option."""
    return lambda option: missing_words(option, quantity)
