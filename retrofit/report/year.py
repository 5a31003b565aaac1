"""The year in the report: electricity, peak, seasonal COP, run time and unmet load of every option."""

from __future__ import annotations

from collections.abc import Callable

from retrofit.checks.outlook import capacity_words, rounded_text
from retrofit.checks.prospects import Prospect, life_of_result
from retrofit.report.plain import plain
from retrofit.report.prospect_rows import Options, missing_of
from retrofit.report.table import Group, Row, Table
from retrofit.study import Comparison
from retrofit.study.year import YearConditions, YearRun
from retrofit.units import UnitSystem, format_number

BY_MAKER_ONLY = "more than the maker's seasonal COP"
HEATED = {"cooling": "cooling", "heating": "heat"}


def year_basis(comparison: Comparison, units: UnitSystem) -> str:
    """Return basis and convention of the tables of a year in sentences.

    Args:
        comparison: A result with its remaining life.
        units: The reader's units.
    """
    asked = life_of_result(comparison).asked
    if asked is None:
        return ""
    balanced = "every hour balanced for itself" if asked.hours.max() <= 1.0 else "like hours balanced together"
    return plain(
        f"Basis: the plant as installed over a year, {balanced}, pressures floating; "
        f"{HEATED[asked.serves]} to deliver {_energy(units, asked.load_J)} {units.label('energy')}, with what "
        f"defrosting adds. Weather: {asked.source}. A new plant is sized for today's cooling at the same exchangers, "
        "or goes by the seasonal COP of its maker."
    )


def year_table(comparison: Comparison, options: Options, units: UnitSystem) -> Table | None:
    """Return the table of the year; None without a year in the case.

    Args:
        comparison: A result with its remaining life.
        options: The options.
        units: The reader's units.
    """
    asked = life_of_result(comparison).asked
    if asked is None:
        return None
    energy, power = units.label("energy"), units.label("power")
    rows = (
        options.words("What is done", _done),
        _row(options, "Electricity of a year", energy, lambda year: year.energy_J, lambda v: _energy(units, v)),
        options.changes("Electricity against the plant as it is", "energy"),
        options.ranges("Electricity: 8 of 10 draws within", energy, "energy_J", lambda v: _number(units, v)),
        _row(options, "Peak power, mean of an hour", power, lambda year: year.peak_W, lambda v: units.text("power", v)),
        _row(options, _seasonal(asked), "", lambda year: year.seasonal_cop, lambda v: format_number(v, 2)),
        _row(options, "Compressors run", "%", lambda year: year.run_time_fraction, lambda v: format_number(100 * v, 0)),
        _row(options, "Hours with unmet load", "h", lambda year: year.unmet_h, _whole, _unmet),
        _row(options, "Unmet load", energy, lambda year: year.unmet_J, lambda v: _energy(units, v)),
    )
    groups = (Group("year", f"Basis: same plant, a year, weather {plain(asked.source)}", rows),)
    caption = "A year of every option"
    return Table("year", caption, year_basis(comparison, units), options.names, groups, options.notes.listed())


def _done(option: Prospect) -> str:
    """Return what is done, and of a new plant which one: every other option keeps the plant that there is."""
    return option.year.machine if option.year and option.deed == "new plant" else option.deed


def _seasonal(asked: YearConditions) -> str:
    return f"Seasonal COP, {HEATED[asked.serves]} over all electricity"


def year_parts(comparison: Comparison, options: Options, units: UnitSystem) -> Table | None:
    """Return the annex's table of a year: parts of the electricity, and the extremes; None without a year.

    Args:
        comparison: A result with its remaining life.
        options: The options.
        units: The reader's units.
    """
    if life_of_result(comparison).asked is None:
        return None
    energy = units.label("energy")
    ambient = comparison.case.plant.ambient_pressure_Pa
    parts = (
        ("Compressors", "compressor_J"),
        ("Fans or pumps at the condenser", "condenser_fans_J"),
        ("Running all hours: fans or pumps at the evaporators, pumps", "steady_J"),
        ("Defrosting", "defrost_J"),
    )
    rows = [_row(options, label, energy, _part(name), lambda v: _energy(units, v)) for label, name in parts]
    rows += [
        _row(
            options,
            "Seasonal COP of the compressors alone",
            "",
            lambda y: y.compressor_cop,
            lambda v: format_number(v, 2),
        ),
        _row(
            options,
            "Highest discharge temperature of the year",
            units.label("temperature"),
            lambda y: y.T_discharge_highest_K,
            lambda v: units.text("temperature", v),
        ),
        _row(
            options,
            "Highest condensing pressure of the year, gauge",
            units.label("gauge pressure"),
            lambda y: y.p_cond_highest_Pa,
            lambda v: units.gauge_text(v, ambient),
        ),
        _row(options, "Hours without a solution", "h", lambda y: y.not_solved_h, _whole, _unsolved),
    ]
    groups = (Group("parts", "Basis: same plant, the same year as in the main part", tuple(rows)),)
    basis = year_basis(comparison, units)
    return Table("year-parts", "Parts of a year", basis, options.names, groups, options.notes.listed())


def _part(name: str) -> Callable[[YearRun], float | None]:
    def read(year: YearRun) -> float | None:
        value: float = getattr(year, name)
        return None if year.by_air is None else value  # a maker's seasonal COP has no parts

    return read


def _row(
    options: Options,
    label: str,
    unit: str,
    read: Callable[[YearRun], float | None],
    show: Callable[[float], str],
    note: Callable[[Prospect], str] = lambda option: "",
) -> Row:
    """Return a row of numbers of the year; what a year by its maker leaves open reads unknown."""

    def value(option: Prospect) -> float | None:
        return None if option.year is None else read(option.year)

    def why(option: Prospect) -> str:
        return missing_of("energy")(option) or BY_MAKER_ONLY

    return options.row(label, unit, value, show, why, note)


def _unmet(option: Prospect) -> str:
    if option.year is None or not option.year.unmet_h:
        return ""
    beside = capacity_words(option)
    words = "part of its load is unmet, so its electricity buys less than that of an option that meets it"
    return f"{words}; {beside}" if beside else words


def _unsolved(option: Prospect) -> str:
    if option.year is None or not option.year.not_solved_h:
        return ""
    return f"they count as unmet{f': {option.year.reason}' if option.year.reason else ''}"


def _whole(value: float) -> str:
    return format_number(value, 0)


def _number(units: UnitSystem, energy_J: float) -> float:
    return float(units.number("energy", energy_J))


def _energy(units: UnitSystem, energy_J: float) -> str:
    return rounded_text(_number(units, energy_J))
