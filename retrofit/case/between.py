"""What one key of a case file says against another.

Each function yields the path of a key and the complaint about it. Keys that cannot be read by themselves
are passed over: they have a complaint of their own.
"""

from __future__ import annotations

import datetime
import math
import re
from collections.abc import Iterator

from retrofit.case.positions import KeyPath
from retrofit.case.rules import DIFFER, GIVEN_ONCE, NEEDS, NOT_BOTH, ORDERS, RISING, Order
from retrofit.case.whole_year import problems_of_options, problems_of_year
from retrofit.case.written import Written, path_of
from retrofit.refrigerants import with_hyphens
from retrofit.units import SI, listed, quoted

Complaints = Iterator[tuple[KeyPath, str]]

LOWEST_ROOM_M, HIGHEST_ROOM_M = 1.5, 100.0
LARGEST_POWER_RATIO = 1.25  # electrical power read over that of the current read, or the other way round
_THRESHOLD_NAME = re.compile(r"[A-Za-z0-9_-]{1,60}")


def problems_between_keys(written: Written) -> Complaints:
    """Yield every fault of a file that needs two keys to be seen.

    Args:
        written: The file. [-]
    Returns: Path of a key and the complaint, one after another. [-]
    """
    for order in ORDERS:
        yield from _out_of_order(written, order)
    for key in RISING:
        yield from _not_rising(written, key)
    for key, other, why in DIFFER:
        yield from _the_same(written, key, other, why)
    yield from _given_twice_or_not(written)
    yield from _needed(written)
    for way in ("evaporator", "condenser"):
        yield from _capacity_rate(written, way)
    yield from _superheat_above_inlet(written)
    yield from _feeding(written)
    yield from _room_height(written)
    yield from _speed(written)
    yield from _current_alone(written)
    yield from _power_against_current(written)
    yield from _repeated(written, "plant.metals")
    yield from _repeated(written, "compare.candidates", written.value("plant.refrigerant"))
    yield from _chosen(written)
    yield from _thresholds(written)
    yield from problems_of_year(written)
    yield from problems_of_options(written)


def _short(key: str, beside: str) -> str:
    """Return a key as a complaint about another one names it: without a table that both stand in."""
    table = key.rpartition(".")[0]
    return key.rpartition(".")[2] if table == beside.rpartition(".")[0] else key


def _out_of_order(written: Written, order: Order) -> Complaints:
    value, other = written.value(order.key), written.value(order.other)
    if value is None or other is None:
        return
    holds, fault = {
        "below": (value < other, "is not below"),
        "above": (value > other, "is not above"),
        "at most": (value <= other, "is above"),
        "at least": (value >= other, "is below"),
    }[order.relation]
    if not holds:
        here, there = (quoted(str(written.raw(key))) for key in (order.key, order.other))
        yield path_of(order.key), f"{here} {fault} {_short(order.other, order.key)} {there}; {order.why}"


def _not_rising(written: Written, key: str) -> Complaints:
    values, raw = written.value(key) or [], written.raw(key)
    for index in range(1, len(values)):
        before, here = values[index - 1], values[index]
        if isinstance(here, tuple) and isinstance(before, tuple):
            before, here = before[0], here[0]
        if before is not None and here is not None and before >= here:
            texts = (quoted(str(raw[place])) for place in (index, index - 1))
            relation = "after" if isinstance(here, datetime.date) else "above"
            yield (
                (*path_of(key), index),
                f"{next(texts)} is not {relation} the one before, {next(texts)}; the list rises",
            )


def _the_same(written: Written, key: str, other: str, why: str) -> Complaints:
    value = written.value(key)
    if value is not None and value == written.value(other):
        yield path_of(key), f"{quoted(str(written.raw(key)))} is {_short(other, key)} too; {why}: make them differ"


def _given_twice_or_not(written: Written) -> Complaints:
    for first, second in GIVEN_ONCE:
        table, _, name = first.rpartition(".")
        other = _short(second, first)
        if written.has(first) and written.has(second):
            yield path_of(second), f"{name} and {other} are both given; keep one of them"
        elif isinstance(written.raw(table), dict) and not written.has(first) and not written.has(second):
            yield path_of(table), f"{name} or {other} is missing; add one of them to [{table}]"
    for kept, key, why in NOT_BOTH:
        if written.has(kept) and written.has(key):
            yield path_of(key), f"{_short(kept, key)} is given too; {why}"


def _needed(written: Written) -> Complaints:
    for key, needed, why in NEEDS:
        absent = [name.rpartition(".")[2] for name in needed if not written.has(name)]
        if written.has(key) and absent:
            table = key.rpartition(".")[0]
            yield path_of(key), f"{why}; add {listed(absent, 'and')} to [{table}]"


def _capacity_rate(written: Written, way: str) -> Complaints:
    """An inlet needs a second number: the outlet, or the flow; and a flow the specific heat of its medium."""
    if written.has(f"{way}.inlet") and not written.has(f"{way}.outlet") and not written.has(f"{way}.flow"):
        yield path_of(f"{way}.inlet"), f"the inlet alone gives no heat; add outlet, or flow, to [{way}]"
    for table, start in ((way, ""), ("readings", f"{way}_")):
        heat, flow = f"{table}.{start}specific_heat", f"{table}.{start}flow"
        if written.has(flow) and not written.has(heat) and written.value(f"{way}.medium") not in ("air", "water"):
            why = "the specific heat of what flows is not known"
            yield (
                path_of(flow),
                f'{why}; add {start}specific_heat to [{table}], or medium = "water" or "air" to [{way}]',
            )


def _superheat_above_inlet(written: Written) -> Complaints:
    T_inlet_K, T_evap_K = written.value("evaporator.inlet"), written.value("duty.evaporating")
    superheat_K = written.value_or_default("duty.useful_superheat")
    is_dew = written.value_or_default("duty.reading") == "dew"
    if not is_dew or None in (T_inlet_K, T_evap_K, superheat_K) or T_inlet_K <= T_evap_K:
        return
    if T_evap_K + superheat_K > T_inlet_K + 1e-6:
        T_gas = SI.text("temperature", T_evap_K + superheat_K)
        inlet = quoted(str(written.raw("evaporator.inlet")))
        yield (
            path_of("duty.useful_superheat"),
            f"the gas would leave the evaporator at {T_gas} degC, warmer than what it cools enters, "
            f"evaporator.inlet {inlet}; lower it, and count what is picked up outside as line_superheat",
        )


def _feeding(written: Written) -> Complaints:
    feed, arrangement = written.value("plant.evaporator"), written.value("evaporator.arrangement")
    if feed is None or arrangement is None or feed == "pumped":
        return
    if (feed == "flooded") != (arrangement == "flooded"):
        yield (
            path_of("evaporator.arrangement"),
            f'"{arrangement}" does not go with plant.evaporator "{feed}"; '
            "a flooded evaporator is flooded in both places, one with direct expansion in neither",
        )


def _room_height(written: Written) -> Complaints:
    """A room lower than a person or higher than a tower is a slip in volume or area."""
    for table in ("room", "machinery_room"):
        volume_m3, area_m2 = written.value(f"{table}.volume"), written.value(f"{table}.area")
        if volume_m3 is None or area_m2 is None or LOWEST_ROOM_M <= volume_m3 / area_m2 <= HIGHEST_ROOM_M:
            continue
        volume, area = (quoted(str(written.raw(f"{table}.{key}"))) for key in ("volume", "area"))
        yield (
            path_of(f"{table}.volume"),
            f"{volume} over the area {area} makes a room {volume_m3 / area_m2:.3g} m high; correct one of the two "
            f"(allowed: {LOWEST_ROOM_M:g} m to {HIGHEST_ROOM_M:g} m)",
        )


def _speed(written: Written) -> Complaints:
    if written.raw("compressor.speed") == "steps" and not written.has("compressor.steps"):
        yield path_of("compressor.speed"), 'how many steps is not said; add steps to [compressor], or write "fixed"'
    for name, wanted in (("steps", "steps"), ("own_condensers", "steps"), ("lowest_speed", "variable")):
        if written.has(f"compressor.{name}") and written.raw("compressor.speed") != wanted:
            yield path_of(f"compressor.{name}"), f'{name} goes with speed = "{wanted}"; write that, or leave {name} out'


def _current_alone(written: Written) -> Complaints:
    names = ("voltage", "phases", "power_factor")
    absent = [name for name in names if not written.has(f"readings.{name}")]
    if written.has("readings.current") and not written.has("readings.power") and 0 < len(absent) < len(names):
        yield (
            path_of("readings.current"),
            f"the power of this current is not known; add {listed(absent, 'and')} to [readings], or power",
        )


def _power_against_current(written: Written) -> Complaints:
    names = ("power", "current", "voltage", "phases", "power_factor")
    power_W, current_A, voltage_V, phases, power_factor = (written.value(f"readings.{name}") for name in names)
    if None in (power_W, current_A, voltage_V, phases, power_factor):
        return
    expected_W = math.sqrt(phases) * voltage_V * current_A * power_factor
    if not 1.0 / LARGEST_POWER_RATIO <= power_W / expected_W <= LARGEST_POWER_RATIO:
        yield (
            path_of("readings.power"),
            f"{quoted(str(written.raw('readings.power')))} does not go with current, voltage, phases and power_factor, "
            f"which make {SI.text('power', expected_W)} kW; correct one, or leave out what was not measured",
        )


def _repeated(written: Written, key: str, existing: str | None = None) -> Complaints:
    seen: set[str] = set()
    for index, name in enumerate(written.value(key) or []):
        where = (*path_of(key), index)
        if name is not None and name == existing:
            told = f"{with_hyphens(name)} is the refrigerant in the plant, which is always compared"
            yield where, f"{told}; leave it out here"
        elif name is not None and name in seen:
            yield where, f"{with_hyphens(name)} is in the list twice; leave one out"
        seen.add(name)


def _chosen(written: Written) -> Complaints:
    """What the report recommends and falls back on are refrigerants of the comparison, and two."""
    existing, candidates = written.value("plant.refrigerant"), written.value("compare.candidates") or []
    if existing is None or not candidates or None in candidates:
        return
    known = list(dict.fromkeys((existing, *candidates)))
    chosen = {name: written.value(f"report.{name}") for name in ("recommended", "fallback")}
    for name, refrigerant in chosen.items():
        if refrigerant is not None and refrigerant not in known:
            yield (
                path_of(f"report.{name}"),
                f"{with_hyphens(refrigerant)} is not compared here; write {listed(map(quoted, known))}, or add it to "
                "compare.candidates",
            )
    if chosen["fallback"] is not None and chosen["fallback"] == chosen["recommended"]:
        same = with_hyphens(chosen["fallback"])
        yield path_of("report.fallback"), f"{same} is what is recommended; name another, or leave it out"


def _thresholds(written: Written) -> Complaints:
    own = written.raw("thresholds")
    for name, levels in own.items() if isinstance(own, dict) else ():
        if not _THRESHOLD_NAME.fullmatch(name):
            yield ("thresholds", name), "the name of a threshold has letters, digits, - and _, at most 60 of them"
        elif isinstance(levels, dict) and not levels:
            yield ("thresholds", name), "it holds no number; add note, work or stop, as in {work = 0.95, stop = 0.85}"
