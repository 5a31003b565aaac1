"""How far inputs may be off, as numbers: half the width of each, in the unit of its key.

A temperature takes a difference ("1 K"), a pressure a difference without a or g ("0.2 bar"). A fraction takes
points of its own ("0.05" or "5 %" of 0.70 is 0.65 to 0.75); of any other quantity "10 %" is a share of its value.
Some keys hold no single number and are off as a whole (`WHOLES`); of an option's keys the refrigerant may be
spelled in any way.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from contextlib import suppress

from retrofit.case.model import FIELDS, field_of
from retrofit.case.money import PricesValue, RangeValue
from retrofit.case.numbers import Number
from retrofit.case.plus_minus import widths_written
from retrofit.case.positions import KeyPath
from retrofit.case.rules import ORDERS, Order
from retrofit.case.values import AbsolutePressure, FileValue, OrNone, Quantity, designation_of
from retrofit.case.written import Written
from retrofit.errors import QuantityError
from retrofit.units import close_to, parse_quantity, quoted, shown

_DIFFERENCES = {"temperature": "temperature difference", "pressure": "pressure difference"}
_ROUNDING = 1e-9
SAMPLE = 'duty.evaporating = "1 K"'
WHOLES = {
    "year.weather": Quantity("temperature difference", "0 K", "10 K", "the whole year is warmer or colder by it"),
    "emissions.leak_log": Quantity("fraction", "0 %", "100 %", "points of the yearly leak rate that the log gives"),
    "emissions.grid_years": Quantity("fraction", "0 %", "100 %", "a share of the factor of every year"),
}
"""Keys that are off as a whole, and how their width is read."""
_EFFICIENCIES = ("compressor.isentropic_efficiency", "compressor.volumetric_efficiency")
_OF_A_CURVE = Quantity("fraction", "0 %", "50 %", "a share of the efficiency, wherever the compressor runs")


def widths(written: Written) -> Mapping[str, float]:
    """Return half the width of each input that has a plus or minus.

    Args:
        written: A file without faults.
    Returns: Half widths by full key, such as "duty.evaporating". [SI unit of the key]
    """
    return {key: _width(written, key, raw) for key, _, raw in _pairs(written)}


def problems_of_widths(written: Written) -> Iterator[tuple[KeyPath, str]]:
    """Yield every fault of the table of plus and minus.

    Args:
        written: The file.
    Returns: Path of a key and the complaint, one after another. [-]
    """
    found: dict[str, float] = {}
    paths: dict[str, KeyPath] = {}
    for key, path, raw in _pairs(written):
        try:
            if key in paths:
                raise QuantityError(f"{key} has two widths; keep one of them")
            paths[key] = path
            found[key] = _width(written, key, raw)
        except QuantityError as error:
            yield path, str(error)
    for order in ORDERS:
        key = order.key if order.key in found else order.other
        if key in found and _is_turned(written, order, found):
            other = order.other if key == order.key else order.key
            yield paths[key], f"within its width the key can pass {other}, which it may not: {order.why}; narrow it"


def _pairs(written: Written) -> Iterator[tuple[str, KeyPath, object]]:
    """Yield each key with its refrigerant, if it has one, in the normal spelling."""
    raw = written.raw("plus_minus")
    for key, path, value in widths_written(raw) if isinstance(raw, dict) else ():
        table, _, rest = key.partition(".")
        name, _, item = rest.partition(".")
        if table == "options" and item:
            with suppress(QuantityError):
                key = f"options.{designation_of(name)}.{item}"
        yield key, path, value


def _width(written: Written, key: str, raw: object) -> float:
    """Return half the width written for a key. [SI]"""
    whole = _whole(written, key)
    how = whole or _kind_of(key)
    value = 0.0 if whole else _value(written, key)
    if value is None:
        return 0.0  # the key itself has a complaint
    width = whole.read(raw) if whole else _read(how, raw, value)
    if not width > 0.0:
        raise QuantityError(f"{quoted(str(raw))} is no width; write one above 0, or leave the line out")
    low, high = _limits(how, written.p_ambient_Pa)
    inner = _ROUNDING * max(abs(low), abs(high))
    if not whole and (
        value - width < low - inner or value + width > high + inner or (_above_low(how) and value - width <= low)
    ):
        start = f"above {how.low} and up to" if _above_low(how) else f"{how.low} to"
        raise QuantityError(
            f"plus or minus {shown(str(raw))} takes it outside what is allowed: {start} {how.high} ({how.reason}); "
            "narrow it"
        )
    return width


def _whole(written: Written, key: str) -> Quantity | None:
    """Return how the width of a key is read that is off as a whole; None if it is not such a key."""
    if key == "year.weather" and isinstance(written.raw("year"), dict):
        return WHOLES[key]
    if key in WHOLES and written.has(key):
        return WHOLES[key]
    has_curve = written.has("compressor.efficiency_points") or written.has("compressor.polynomial")
    return _OF_A_CURVE if key in _EFFICIENCIES and has_curve else None


def _kind_of(key: str) -> Quantity | Number | AbsolutePressure:
    """Return how a key is read that can have a width."""
    if field_of(key) is None:
        known = [name for name in FIELDS if _can_vary(_how(name))]
        raise QuantityError(f"there is no key {quoted(key)}{close_to(key, known)}; write table and key, as in {SAMPLE}")
    how = _how(key)
    if isinstance(how, RangeValue | PricesValue):
        raise QuantityError(
            "sums of money carry their own width; write [low, base, high] there, as in [900, 1200, 1800]"
        )
    if not isinstance(how, Quantity | Number | AbsolutePressure) or not _can_vary(how):
        raise QuantityError("it is not one number that can be off; leave it out here")
    return how


def _how(key: str) -> FileValue | None:
    found = field_of(key)
    how = next((extra for extra in found[1].metadata if isinstance(extra, FileValue)), None) if found else None
    return how.inner if isinstance(how, OrNone) else how


def _can_vary(how: FileValue | None) -> bool:
    return isinstance(how, Quantity | AbsolutePressure) or (isinstance(how, Number) and not how.whole)


def _value(written: Written, key: str) -> float | None:
    """Return the value that a key has in the file or by default; None if it cannot be read. [SI]"""
    table, _, name = key.rpartition(".")
    place = _as_written(written, table)
    if written.has(f"{place}.{name}"):
        value: float | None = written.value(f"{place}.{name}")
        return value
    found = field_of(key)
    if table != "compressor" and not isinstance(written.raw(place), dict):
        raise QuantityError(f"the file has no table [{table}]; add it with {name}, or leave this out")
    if found is None or found[1].is_required() or found[1].default is None:
        raise QuantityError(f"the file gives no {name} in [{table}]; add it there, or leave this out")
    default: float | None = written.value_or_default(key)
    return default


def _as_written(written: Written, table: str) -> str:
    """Return the name of a table as the file has it: that of an option in the file's spelling of its refrigerant."""
    options = written.raw("options")
    if not table.startswith("options.") or not isinstance(options, dict):
        return table
    for name in options:
        with suppress(QuantityError):
            if f"options.{designation_of(name)}" == table:
                return f"options.{name}"
    return table


def _read(how: Quantity | Number | AbsolutePressure, raw: object, value: float) -> float:
    if isinstance(how, Number):
        return float(Number(0.0, how.high - how.low, "more is all there is", example=how.example).read(raw))
    kind = "pressure" if isinstance(how, AbsolutePressure) else how.kind
    is_share = isinstance(raw, str) and raw.rstrip().endswith("%")
    if is_share and kind not in ("temperature", "pressure", "fraction"):
        return parse_quantity(raw, "fraction") * abs(value)
    return parse_quantity(raw, _DIFFERENCES.get(kind, kind))


def _limits(how: Quantity | Number | AbsolutePressure, p_ambient_Pa: float) -> tuple[float, float]:
    if isinstance(how, Number):
        return how.low, how.high
    if isinstance(how, AbsolutePressure):
        return how.ends_Pa(p_ambient_Pa)
    return parse_quantity(how.low, how.kind), parse_quantity(how.high, how.kind)


def _above_low(how: FileValue) -> bool:
    return isinstance(how, Quantity) and how.above_low


def _is_turned(written: Written, order: Order, found: Mapping[str, float]) -> bool:
    """Say whether two keys that are in order can leave it within their widths."""
    value, other = written.value(order.key), written.value(order.other)
    if value is None or other is None:
        return False
    gap = other - value if order.relation in ("below", "at most") else value - other
    reach = found.get(order.key, 0.0) + found.get(order.other, 0.0)
    return gap >= 0.0 and (gap < reach - _ROUNDING or (gap <= reach and order.relation in ("below", "above")))
