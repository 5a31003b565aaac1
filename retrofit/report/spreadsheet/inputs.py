"""The sheet of inputs: every key of the case, given, assumed or left out, and how far it may be off."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from retrofit.case import Case, meaning, quantity, sum_of_money
from retrofit.checks.outlook import currency
from retrofit.report.certainty import ORIGINS
from retrofit.report.inputs import missing
from retrofit.report.judging import spelled
from retrofit.report.spreadsheet.table import GAPS, Column, Content, Sheet, as_rows, in_units
from retrofit.study import Comparison
from retrofit.study.uncertain import Uncertain
from retrofit.units import UnitSystem

LOW, HIGH = "Low", "High"
COLUMNS = (
    Column("Key", width=34),
    Column("Meaning", width=60),
    Column("Number", width=14),
    Column("Unit", width=10),
    Column("As written or assumed", width=34),
    Column("Origin", width=12),
    Column("Why assumed", width=50),
    Column(LOW, width=14),
    Column(HIGH, width=14),
    Column("Distribution", width=14),
    Column("Origin of the limits", width=14),
    Column("Why these limits", width=40),
    Column(GAPS, width=40),
)
WORDS_ONLY = "the value is a text or a list"
HALF_WIDTH = "its limits stand with {key}"
LEFT_OUT = "not given in the case, and nothing is assumed for it"
EXACT = "low and high: no plus or minus, so taken as it stands"
PRICES, WIDTHS = "money.refrigerant_price", "plus_minus."
# What a sum of money is for, by its key; the others are once, for the whole.
PER = {
    "money.tariff": "/kWh",
    "money.demand_charge": "/(kW year)",
    "money.levy": "/t CO2e",
    "money.yearly_service": "/year",
    PRICES: "/kg",
}
Row = dict[str, Content]


def inputs_sheet(comparison: Comparison, units: UnitSystem) -> Sheet:
    """Return the sheet; an input that is off as a whole or by the model has a row of its own.

    Args:
        comparison: A result.
        units: The reader's units.
    """
    case, life = comparison.case, comparison.life
    limits = {item.key: item for item in life.inputs} if life else {}
    rows = [_row(comparison, row, limits, units) for row in _written(case)]
    left_out = list(_left_out(case))
    numbered = {row["Key"] for row in rows if row["Number"] is not None}
    taken = {row["Key"] for row in (*rows, *left_out)}
    off = [_off(comparison, item, key in taken, units) for key, item in limits.items() if key not in numbered]
    return Sheet("Inputs", 1, COLUMNS, as_rows(COLUMNS, (*rows, *off, *left_out)))


def _written(case: Case) -> Iterator[Row]:
    """Yield key, text and origin of everything given or assumed, each price of a refrigerant for itself."""
    for key, written in case.given.items():
        if "." in key:
            yield {"Key": key, "Meaning": meaning(key), "As written or assumed": written, "Origin": "given"}
        if key == PRICES and case.money:
            for name, _ in case.money.refrigerant_price or ():
                yield {"Key": f"{key}.{name}", "Meaning": f"Price of a kilogram of {spelled(name)}.", "Origin": "given"}
    for item in case.defaults:
        text = item.shown_text
        yield {"Key": item.key, "Meaning": meaning(item.key), "As written or assumed": text, "Origin": "assumed",
               "Why assumed": item.why}  # fmt: skip


def _row(comparison: Comparison, row: Row, limits: Mapping[str, Uncertain], units: UnitSystem) -> Row:
    """Return a row with its number and limits, as far as there are any."""
    key = str(row["Key"])
    amount, found, item = sum_of_money(comparison.case, key), quantity(comparison.case, key), limits.get(key)
    if amount is not None:
        row |= {"Number": amount.base, "Unit": _per(comparison, key)}
        if item is not None:
            low, _, high = item.spread
            row |= _limits(item, *((0.0 - high, 0.0 - low) if low < 0.0 else (low, high)))  # taken off the first cost
    elif found is not None:
        kind, value = found
        row |= {"Number": in_units(kind, value, units), "Unit": units.label(kind)}
        if item is not None and item.kind == kind:
            row |= _limits(item, *(in_units(kind, end, units) for end in (item.spread.low, item.spread.high)))
    else:
        about = key.removeprefix(WIDTHS)
        return row | {"Number": None, GAPS: HALF_WIDTH.format(key=about) if about != key else WORDS_ONLY}
    return row | ({GAPS: EXACT} if LOW not in row and comparison.life else {})


def _per(comparison: Comparison, key: str) -> str:
    return currency(comparison) + PER.get(PRICES if key.startswith(f"{PRICES}.") else key, "")


def _limits(item: Uncertain, low: float | None, high: float | None) -> Row:
    return {
        LOW: low,
        HIGH: high,
        "Distribution": item.distribution,
        "Origin of the limits": ORIGINS[item.origin],
        "Why these limits": spelled(item.why),
    }


def _off(comparison: Comparison, item: Uncertain, is_whole: bool, units: UnitSystem) -> Row:
    """Return the row of an input that the case holds no number for: off as a whole, reckoned, or of the model."""
    is_given = item.key in comparison.case.given
    low, base, high = (in_units(item.kind, value, units) if item.kind else value for value in item.spread)
    return {
        "Key": f"{item.key}, as a whole" if is_whole else item.key,
        "Meaning": spelled(item.name),
        "Number": base,
        "Unit": units.label(item.kind) if item.kind else currency(comparison),
        "Origin": "model" if item.origin == "model" else "given" if is_given else "reckoned",
        **_limits(item, low, high),
    }


def _left_out(case: Case) -> Iterator[Row]:
    for table in missing(case):
        for key in table.keys or ("",):
            name = f"{table.table}.{key}".rstrip(".")
            yield {
                "Key": name,
                "Meaning": meaning(name) if key else "a whole table",
                "Origin": "left out",
                GAPS: LEFT_OUT,
            }
