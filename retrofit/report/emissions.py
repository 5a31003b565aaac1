"""The warming of every option in the report: refrigerant and electricity apart, and what is left out."""

from __future__ import annotations

from typing import Any

from retrofit.checks.outlook import KG_PER_T, rounded_text
from retrofit.checks.prospects import Prospect, prospects
from retrofit.report.prospect_rows import Options, missing_of, shown_name
from retrofit.report.table import Cell, Group, Row, Table
from retrofit.study import Comparison
from retrofit.study.emissions import edition_of
from retrofit.study.law_words import reason_text
from retrofit.units import UnitSystem, format_number


def emissions_table(comparison: Comparison, options: Options, units: UnitSystem) -> Table:
    """Return the table of the warming over the remaining life.

    Args:
        comparison: A result with its remaining life.
        options: The options.
        units: The reader's units.
    """
    first = options.all[0].account.tewi
    edition = edition_of(comparison.case)
    life = "not given" if first.life_years is None else f"{float(first.life_years):g} years"
    groups = (
        Group("charge", "The charge and its leaks", _charge(options, units, edition)),
        Group("tewi", f"Warming over the remaining life, {life}", _warming(options)),
    )
    basis = (
        f"Basis: TEWI over the remaining life, {life}, GWP over 100 years by {edition}; today's leak rate and, after a "
        f"change, the one the case gives."
    )
    caption = "Warming over the remaining life"
    return Table("emissions", caption, basis, options.names, groups, options.notes.listed())


def _charge(options: Options, units: UnitSystem, edition: str) -> tuple[Row, ...]:
    return (
        options.row(
            "Charge",
            units.label("mass"),
            lambda option: option.account.plan.charge_kg.base if option.account.plan.charge_kg else None,
            lambda value: units.text("mass", value),
            lambda option: option.account.plan.charge_missing,
        ),
        _gwp(options, edition),
        options.row(
            "CO2e of the charge",
            "t CO2e",
            _weight,
            lambda value: rounded_text(value),
            missing_of("emissions"),
        ),
        _leak(options),
        Row("Time between leak checks", "months", tuple(_checks(options, option) for option in options.all)),
    )


def _weight(option: Prospect) -> float | None:
    gwp, charge = option.account.tewi.gwp.value, option.account.plan.charge_kg
    return None if gwp is None or charge is None else gwp * charge.base / KG_PER_T


def _gwp(options: Options, edition: str) -> Row:
    def cell(option: Prospect) -> Cell:
        found = option.account.tewi.gwp
        if found.value is None:
            return options.unknown(option, found.doubt)
        marks = (options.notes.mark(shown_name(option), f"GWP: {found.doubt}"),) if found.doubt else ()
        return Cell(format_number(found.value, 0 if found.value >= 10.0 else 2), marks=marks)

    return Row(f"GWP over 100 years, {edition}", "", tuple(cell(option) for option in options.all))


def _leak(options: Options) -> Row:
    def cell(option: Prospect) -> Cell:
        leak = option.account.plan.leak
        if leak.spread is None:
            return options.unknown(option, leak.missing)
        marks = (options.notes.mark(shown_name(option), f"leak rate: {leak.source}"),)
        return Cell(format_number(100.0 * leak.spread.base, 1), marks=marks)

    return Row("Leaks in a year, share of the charge", "%", tuple(cell(option) for option in options.all))


def _checks(options: Options, option: Prospect) -> Cell:
    """Return the time between leak checks by the tables of law."""
    months, why = check_months(option)
    if months is not None:
        return Cell(format_number(months, 0))
    return Cell("none asked", is_number=False) if not why else options.unknown(option, why)


def check_months(option: Prospect) -> tuple[float | None, str]:
    """Return the months between leak checks that the tables of law ask for; none with a reason if not known.

    Args:
        option: The option.
    """
    law = option.account.plan.law
    if law is None:
        return None, "`jurisdiction` in [law], or a table for it"
    if law.leak_check_months:
        return float(law.leak_check_months), ""
    return None, "; ".join(map(reason_text, law.leak_check_open))


def _warming(options: Options) -> tuple[Row, ...]:
    names = (
        ("Refrigerant leaking in the years", "leaks_kg"),
        ("Refrigerant lost at the end", "end_of_life_kg"),
        ("Old refrigerant lost at the change", "change_kg"),
        ("Direct, all of the refrigerant", "direct_kg"),
        ("Indirect, all of the electricity", "indirect_kg"),
        ("Sum", "total_kg"),
    )
    rows = [options.row(label, "t CO2e", _read(name), rounded_text, missing_of("emissions")) for label, name in names]
    return (
        *rows,
        options.changes("Sum against the plant as it is", "emissions"),
        options.ranges("Sum: 8 of 10 draws within", "t CO2e", "tewi_kg", lambda value: value / KG_PER_T),
    )


def _read(name: str) -> Any:
    def read(option: Prospect) -> float | None:
        value = getattr(option.account.tewi, name)
        return None if value is None else float(value) / KG_PER_T

    return read


def left_out(comparison: Comparison) -> tuple[str, ...]:
    """Return the parts of a life-cycle account that are not counted."""
    return prospects(comparison)[0].account.tewi.left_out
