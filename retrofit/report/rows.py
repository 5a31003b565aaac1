"""Rows of the report's tables: quantities in the reader's units, and changes against today with their band."""

from __future__ import annotations

from retrofit.report.table import Row, number_row
from retrofit.study import Comparison
from retrofit.study.bands import pair_band
from retrofit.units import MISSING, UnitSystem, format_number, stacked

PERCENT = "%"


def quantity_row(label: str, kind: str, values: list[float | None], units: UnitSystem) -> Row:
    """Return a row of quantities.

    Args:
        label: What they are.
        kind: Their kind of quantity.
        values: One for each refrigerant; None if not known. [SI]
        units: The reader's units.
    """
    if kind == "heat flow":  # in Btu/h its usual form has six digits, of which the model knows two
        texts = [_four_digits(kind, value, units) for value in values]
        return number_row(label, units.label(kind), texts, kind, values)
    return number_row(label, units.label(kind), units.column(kind, values), kind, values)


def _four_digits(kind: str, value: float | None, units: UnitSystem) -> str:
    if value is None:
        return MISSING
    numbers = [float(f"{float(system.number(kind, value)):.4g}") for system in units.systems]
    return stacked(*(format_number(number, 0 if abs(number) >= 1000.0 else 1) for number in numbers))


def change_row(label: str, comparison: Comparison, ratio: str, band: str) -> Row:
    """Return a row of changes against today.

    Args:
        label: What changes.
        comparison: The result.
        ratio: Name of the ratio to today.
        band: Name of the band of the model that it is held against, the wider of today's and the refrigerant's own.
    """
    ratios = [entry.relative.get(ratio) for entry in comparison.entries]
    bands = [pair_band(comparison.existing, entry, band) for entry in comparison.entries]
    texts = [change_text(found, width) for found, width in zip(ratios, bands, strict=True)]
    return number_row(label, PERCENT, texts, "change", ratios, bands)


def change_text(ratio: float | None, band: float) -> str:
    """Return a ratio to today as a change in percent; a change inside the band begins with the sign ≈.

    Args:
        ratio: New over old; None if not known. [-]
        band: Half the band of the model. [-]
    """
    if ratio is None or ratio == 1.0:  # today against itself is no finding
        return MISSING
    text = format_number(100.0 * (ratio - 1.0), 0, signed=True)
    return near(text) if abs(ratio - 1.0) <= band else text


def near(text: str) -> str:
    """Return a difference inside the band of the model, with its sign."""
    return f"≈\N{NARROW NO-BREAK SPACE}{text}"
