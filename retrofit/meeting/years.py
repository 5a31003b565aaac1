"""The years that remain, on the page: the report's own tables of year, warming and money, each cell with its origin."""

from __future__ import annotations

from dataclasses import replace

from retrofit.checks.prospects import prospects
from retrofit.meeting.how import From, How, formulas, input_from, slug
from retrofit.meeting.state import State
from retrofit.report.emissions import emissions_table
from retrofit.report.money import money_table
from retrofit.report.prospect_rows import Options
from retrofit.report.table import Notes, Table
from retrofit.report.year import year_table
from retrofit.study import Comparison
from retrofit.study.emissions import FORMULA
from retrofit.study.money import FORMULAS
from retrofit.units import MISSING, UnitSystem

OPTION = "option-"  # begins the name of an option in addresses; a candidate that is hidden changes no other's
WORDS = {
    "year": "Power times hours, summed over the year: the plant as installed is balanced at the weather and load "
    "of each group of like hours, with what fans, pumps and defrosting take.",
    "emissions": FORMULA,
    "money": "; ".join(f"{name}: {text}" for name, text in FORMULAS.items()),
}


def life_tables(view: Comparison, units: UnitSystem) -> tuple[Table, ...]:
    """Return the tables of the remaining life; none while it is not worked out.

    Args:
        view: What is in sight.
        units: The reader's units.
    """
    if view.life is None:
        return ()
    found = (
        year_table(view, _options(view), units),
        emissions_table(view, _options(view), units) if view.case.emissions else None,
        money_table(view, _options(view)),
    )
    names = _names(view)
    return tuple(_linked(table, names) for table in found if table is not None)


def _names(view: Comparison) -> tuple[str, ...]:
    """Return the name of each option, as it stands in addresses."""
    return tuple(OPTION + option.name.replace(" ", "-") for option in prospects(view))


def _options(view: Comparison) -> Options:
    return Options(prospects(view), Notes())


def _linked(table: Table, names: tuple[str, ...]) -> Table:
    """Return a table without rows that say nothing, its numbers with where their origin is told."""
    groups = []
    for group in table.groups:
        rows = []
        for row in group.rows:
            if all(cell.text == MISSING for cell in row.cells):
                continue
            cells = tuple(
                replace(cell, href=f"/how/{name}/{slug(group, row)}")
                if cell.is_number and cell.text != MISSING
                else cell
                for name, cell in zip(names, row.cells, strict=True)
            )
            rows.append(replace(row, cells=cells))
        groups.append(replace(group, rows=tuple(rows)))
    return replace(table, groups=tuple(groups))


def how_of_option(view: Comparison, name: str, quantity: str, units: UnitSystem, state: State) -> How | None:
    """Return how a number of the remaining life comes about; None if there is no such number.

    Args:
        view: What is in sight.
        name: "option-" and the name of the option. [-]
        quantity: Name of the row as `slug` gives it. [-]
        units: The reader's units.
        state: The state, for where an input comes from.
    """
    names = _names(view) if view.life else ()
    if name not in names:
        return None
    place = names.index(name)
    for table in life_tables(view, units):
        for group in table.groups:
            for row in group.rows:
                if slug(group, row) == quantity:
                    inputs: tuple[From, ...] = tuple(
                        input_from(view, key, units, state) for key in formulas()["inputs"][table.name]
                    )
                    value = f"{row.cells[place].text}\N{NO-BREAK SPACE}{row.unit}".strip()
                    words = f"{WORDS[table.name]} {table.convention}"
                    return How(row.label, table.columns[place], group.heading, value, (), words, inputs, None, "")
    return None
