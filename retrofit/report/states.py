"""State points of each refrigerant, and how to check them by hand on a pressure-enthalpy chart."""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.figures import Drawing, cycle_chart
from retrofit.report.values import composition_text
from retrofit.study import Comparison, Entry, Point
from retrofit.units import UnitSystem

CHART_IN = 1.95  # two refrigerants on a printed page
KINDS = (
    ("Pressure, absolute", "pressure", "p_Pa"),
    ("Temperature", "temperature", "T_K"),
    ("Enthalpy", "specific enthalpy", "h_J_per_kg"),
    ("Entropy", "specific entropy", "s_J_per_kgK"),
    ("Density", "density", "density_kg_per_m3"),
    ("Vapour, by mass", "fraction", "quality"),
)


@dataclass(frozen=True)
class StateTable:
    """State points as texts: headings with units, and one row for each point."""

    headings: tuple[tuple[str, str], ...]
    rows: tuple[tuple[str, tuple[str, ...]], ...]
    reference: str


@dataclass(frozen=True)
class Portrait:
    """Everything about one refrigerant by itself; without states it carries the reason.

    The first that is computed has the check by hand step by step; the others have what their state points do not tell.
    """

    place: int
    name: str
    composition: str
    reason: str
    states: StateTable | None
    steps: tuple[str, ...]
    by_hand: str
    chart: Drawing | None


def portraits(comparison: Comparison, units: UnitSystem) -> tuple[Portrait, ...]:
    """Return the portrait of each refrigerant, the existing one first.

    Args:
        comparison: The result.
        units: The reader's units.
    """
    solved = [place for place, entry in enumerate(comparison.entries) if entry.lines is not None]
    return tuple(
        _portrait(comparison, place, units, is_worked=place in solved[:1]) for place in range(len(comparison.entries))
    )


def _portrait(comparison: Comparison, place: int, units: UnitSystem, *, is_worked: bool) -> Portrait:
    entry = comparison.entries[place]
    name, composition = entry.refrigerant.display_name, composition_text(entry.refrigerant)
    if entry.lines is None:
        return Portrait(place, name, composition, entry.reason or "", None, (), "", None)
    points = on_reference(entry, units)
    steps = hand_check(comparison, entry, points, units) if is_worked else ()
    by_hand = "" if is_worked else _by_hand(entry, units)
    chart = cycle_chart(comparison, place, units, CHART_IN)
    return Portrait(place, name, composition, "", _table(entry, points, units), steps, by_hand, chart)


def _by_hand(entry: Entry, units: UnitSystem) -> str:
    """Return what a check by hand meets beside the state points, in a sentence."""
    assert entry.duty is not None
    ideal = units.with_unit("temperature", entry.duty.T_discharge_isentropic_K)
    effect = units.with_unit("specific enthalpy", entry.duty.refrigerating_effect_J_per_kg)
    flow = units.with_unit("mass flow", entry.duty.mass_flow_kg_per_s)
    return (
        f"By hand, with the steps of the first refrigerant: the line of constant entropy from point 1 meets {ideal}; "
        f"cooling of each unit of mass {effect}; mass flow {flow} for the duty of the case; "
        f"COP {units.text('ratio', entry.duty.cop)}."
    )


def state_table(entry: Entry, units: UnitSystem) -> StateTable:
    """Return the state points of a refrigerant that was computed, as texts.

    Args:
        entry: The refrigerant.
        units: The reader's units.
    """
    return _table(entry, on_reference(entry, units), units)


def on_reference(entry: Entry, units: UnitSystem) -> tuple[dict[str, float | None], ...]:
    """Return the points with enthalpy and entropy counted from the reference of the reader's units."""
    assert entry.lines is not None
    zero = entry.lines.zeros[units.name]
    found = []
    for point in entry.points:
        values: dict[str, float | None] = {name: getattr(point, name) for _, _, name in KINDS}
        values["h_J_per_kg"] = point.h_J_per_kg - zero.h_J_per_kg
        values["s_J_per_kgK"] = point.s_J_per_kgK - zero.s_J_per_kgK
        found.append(values)
    return tuple(found)


def _table(entry: Entry, points: tuple[dict[str, float | None], ...], units: UnitSystem) -> StateTable:
    assert entry.lines is not None
    columns = [_column(units, kind, [point[name] for point in points]) for _, kind, name in KINDS]
    rows = tuple((_name(point), tuple(column[i] for column in columns)) for i, point in enumerate(entry.points))
    headings = tuple((label, units.label(kind)) for label, kind, _ in KINDS)
    return StateTable(headings, rows, entry.lines.zeros[units.name].name)


def _column(units: UnitSystem, kind: str, values: list[float | None]) -> list[str]:
    if kind == "fraction":
        return [units.text(kind, value, decimals=1) for value in values]
    if kind == "density":  # liquid and vapour side by side: digits by the value, not by the column
        return [units.text(kind, value, decimals=_density_decimals(units.number(kind, value))) for value in values]  # type: ignore[type-var]
    return units.column(kind, values)


def _density_decimals(value: float | None) -> int:
    if value is None:
        return 0
    return next((decimals for limit, decimals in ((100.0, 1), (10.0, 2), (1.0, 3)) if abs(value) >= limit), 4)


def _name(point: Point) -> str:
    return point.name[0].upper() + point.name[1:]


def hand_check(
    comparison: Comparison, entry: Entry, points: tuple[dict[str, float | None], ...], units: UnitSystem
) -> tuple[str, ...]:
    """Return the steps by which a reader finds the state points on a printed chart, with the numbers to expect.

    Args:
        comparison: The result.
        entry: The refrigerant; it has been computed.
        points: Its points on the reference of the reader's units.
        units: The reader's units.
    Source: the ordinary construction of a single-stage cycle on a pressure-enthalpy chart.
    """
    assert entry.duty is not None
    case = comparison.case

    def T(number: int) -> str:
        return units.with_unit("temperature", points[number - 1]["T_K"])

    def p(number: int) -> str:
        return units.with_unit("pressure", points[number - 1]["p_Pa"])

    def h(number: int) -> str:
        return units.with_unit("specific enthalpy", points[number - 1]["h_J_per_kg"])

    efficiency = units.with_unit("fraction", case.compressor.isentropic_efficiency, decimals=1)
    effect = units.with_unit("specific enthalpy", entry.duty.refrigerating_effect_J_per_kg)
    flow = units.with_unit("mass flow", entry.duty.mass_flow_kg_per_s)
    quality = units.with_unit("fraction", points[5]["quality"], decimals=0)
    ideal = units.with_unit("temperature", entry.duty.T_discharge_isentropic_K)
    return (
        f"Evaporating pressure: find {T(7)} on the dew line (point 7) and read {p(7)}. The scale is logarithmic: read "
        "it by the temperature lines, going between two of them by temperature, and not by dividing the space evenly.",
        f"Superheat: go horizontally to the right, at constant pressure, to {T(8)} at the evaporator outlet (point 8) "
        f"and on to {T(1)} at the compressor inlet (point 1). From each go vertically to the enthalpy scale: {h(8)} "
        f"and {h(1)}.",
        f"Compression: from point 1 follow the line of constant entropy up to {p(2)}; it meets {ideal} there. Divide "
        f"the rise in enthalpy so far by the isentropic efficiency, {efficiency}, and add it to that of point 1: point "
        f"2 has {h(2)} and {T(2)}.",
        f"Condenser: {p(4)} belongs to {T(3)} on the dew line (point 3) and {T(4)} on the bubble line (point 4). From "
        f"point 4 go horizontally to the left to {T(5)} at the expansion valve (point 5), and vertically to the "
        f"enthalpy scale: {h(5)}.",
        f"Expansion: from point 5 go straight down, at constant enthalpy, to {p(6)}. Point 6 lies between the two "
        f"lines; {quality} of the mass is vapour and the temperature is {T(6)}.",
        f"Cooling of each unit of mass: enthalpy of point 8 minus that of point 6, {effect}. Cooling divided by it is "
        f"the mass flow, {flow} for the duty of the case; divided by the rise from point 1 to point 2 it is the COP, "
        f"{units.text('ratio', entry.duty.cop)}.",
    )


def enthalpy_note(units: UnitSystem) -> str:
    """Return what has to be known about the zero of the enthalpy scale."""
    reference = {
        "si": "the IIR reference, h = 200 kJ/kg and s = 1 kJ/(kg K) for saturated liquid at 0 °C",
        "ip": "h = 0 and s = 0 for saturated liquid at \N{MINUS SIGN}40 °F",
    }[units.name]
    return (
        f"Enthalpies are counted from {reference}, for each refrigerant by itself. Only differences along one "
        "refrigerant mean anything: that one cycle stands further right than another says nothing. A chart with "
        "another reference shows every enthalpy shifted by the same amount."
    )
