"""The sheet of the year: months and outdoor temperatures of every option, one below the other."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.checks.prospects import KEPT, Prospect, life_of_result, prospects
from retrofit.report.spreadsheet.table import GAPS, Column, Content, Sheet, as_rows, in_units, quantity_column
from retrofit.study import Comparison
from retrofit.study.year import AirBins
from retrofit.units import UnitSystem

BY_MONTH, BY_AIR = "month", "outdoor temperature"
ENERGIES = {"energy_J": "Electricity", "load_J": "Load", "unmet_J": "Unmet load"}
AIR, HOURS = "Outdoor temperature, middle of 2 K", "Hours"
ONLY_SUM = "the maker's seasonal COP tells the sum of the year only, see Results"
NOT_BY_MONTH = "by month only the electricity is kept"
Row = dict[str, Content]


def year_sheet(comparison: Comparison, units: UnitSystem) -> Sheet | None:
    """Return the sheet; None without a year. Keeping the plant with its repairs has the year of the plant as it is.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    if comparison.life is None or life_of_result(comparison).asked is None:
        return None
    options = [option for option in prospects(comparison) if option.deed != KEPT]
    rows = [row for option in options for row in _rows(option, units)]
    bins = [option.year.by_air for option in options if option.year and option.year.by_air]
    columns = (
        Column("Refrigerant"),
        Column("What is done", width=14),
        Column("Sorted by", width=14),
        Column("Month", decimals=0, width=8),
        Column(AIR, units.label("temperature"), 1),
        Column(HOURS, "h", 0),
        *(
            quantity_column(
                heading, "energy", [float(value) for found in bins for value in getattr(found, name)], units
            )
            for name, heading in ENERGIES.items()
        ),
        Column(GAPS, width=50),
    )
    return Sheet("Year", 3, columns, as_rows(columns, rows))


def _rows(option: Prospect, units: UnitSystem) -> Iterator[Row]:
    named: Row = {"Refrigerant": option.entry.refrigerant.display_name, "What is done": option.deed}
    run = option.year
    if run is None or (run.monthly_J is None and run.by_air is None):
        yield named | {GAPS: option.no_year if run is None else ONLY_SUM}
        return
    for month, energy_J in enumerate(() if run.monthly_J is None else run.monthly_J, start=1):
        energy = in_units("energy", float(energy_J), units)
        yield named | {"Sorted by": BY_MONTH, "Month": float(month), "Electricity": energy, GAPS: NOT_BY_MONTH}
    if run.by_air is not None:
        yield from (named | row for row in _by_air(run.by_air, units))


def _by_air(bins: AirBins, units: UnitSystem) -> Iterator[Row]:
    for place, T_air_K in enumerate(bins.T_air_K):
        energies = {
            heading: in_units("energy", float(getattr(bins, name)[place]), units) for name, heading in ENERGIES.items()
        }
        air = in_units("temperature", float(T_air_K), units)
        yield {"Sorted by": BY_AIR, AIR: air, HOURS: float(bins.hours[place]), **energies}
