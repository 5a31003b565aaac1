"""The commissioning sheet of one changeover as texts: what a technician takes to the plant and fills in by hand."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

from retrofit.case import FIXED, present
from retrofit.case.values import NOTHING
from retrofit.checks.operating import discharge_limit, limit_of
from retrofit.checks.reading_words import expected_words
from retrofit.equipment.vessels import co2_equivalent_t
from retrofit.refrigerants import GWP_BASES, is_flammable
from retrofit.report.agreeing import calibration_text
from retrofit.report.jobcard import UNKNOWN, Job, span
from retrofit.report.judging import spelled
from retrofit.report.values import potential_text
from retrofit.study.bands import QUANTITIES, pair_bands, percent_text
from retrofit.study.changeover import DRAWS, Expected, PressureRow, Window, operating_span, pressure_rows
from retrofit.study.hardware.settings import SET_POINTS
from retrofit.study.practice import practice
from retrofit.units import MISSING, ZERO_C_K, listed, told

MOST_ROWS, COLUMNS = 96, 4  # rows of the pressure-temperature table, and how many parts stand side by side
STEPS = {"si": (1.0, 2.0, 5.0), "ip": (2.0, 4.0, 10.0)}  # in the reader's degrees
FEW_DIGITS, FEWER_DIGITS = 20.0, 2.0  # from here on a window of a tenth needs no decimals, or one
NO_GLIDE = 0.01  # of the pressure, our own: bubble and dew columns closer than this are one for a gauge
MARGIN_K = 6.0  # beyond the operating range
WHEN = ("Start", "1 h", "24 h", "1 week", "1 month", "Hot day")
INLETS = {
    "milder": "milder",
    "design": "design point",
    "hottest": "hottest day",
    "hotter": "hotter",
    "today": "on the day",
}


@dataclass(frozen=True)
class Target:
    """What to trim to: a quantity, its target, and what the calculation took."""

    name: str
    target: str
    taken: str


@dataclass(frozen=True)
class Windows:
    """What the gauges should show: headings of the columns, rows of texts, notes; `reason` if nothing is computed."""

    headings: tuple[tuple[str, str], ...]
    rows: tuple[tuple[str, str, tuple[str, ...]], ...]
    notes: tuple[str, ...]
    reason: str


@dataclass(frozen=True)
class PressureCell:
    """One pressure; `is_target` marks where the plant is expected at the design point."""

    text: str
    is_target: bool


@dataclass(frozen=True)
class PressureTable:
    """Pressures over temperature, in parts that stand side by side.

    Attributes:
        units: Unit of temperature and of gauge pressure.
        headings: Names of the pressure columns: one where bubble and dew point are closer than `NO_GLIDE`.
        parts: Parts of rows: temperature and its cells.
        reason: Why there is no table; empty otherwise.
    """

    units: tuple[str, str]
    headings: tuple[str, ...]
    parts: tuple[tuple[tuple[str, tuple[PressureCell, ...]], ...], ...]
    reason: str


@dataclass(frozen=True)
class Change:
    """A set point: its name, old and new as gauges show them, and what is held equal; empty where not known."""

    name: str
    old: str
    new: str
    held: str


@dataclass(frozen=True)
class Sheet:
    """The commissioning sheet of one candidate.

    Attributes:
        key, name, old: Of the candidate, and the refrigerant before.
        facts: Facts of the plant known from the case, by name.
        blanks: What the head leaves to be filled in.
        targets: What to trim to.
        windows: What the gauges should show.
        pressures: The pressure-temperature table.
        changes: Set points, old to new.
        pressure_unit: Unit of the set points.
        charge: Charge expected, and the first charge.
        mass_unit: Unit of mass.
        label: Lines of the label.
        when: Columns of the readings to take.
        readings: Rows of them: name and unit.
    """

    key: str
    name: str
    old: str
    facts: tuple[tuple[str, str], ...]
    blanks: tuple[str, ...]
    targets: tuple[Target, ...]
    windows: Windows
    pressures: PressureTable
    changes: tuple[Change, ...]
    pressure_unit: str
    charge: tuple[tuple[str, str], ...]
    mass_unit: str
    label: tuple[str, ...]
    when: tuple[str, ...]
    readings: tuple[tuple[str, str], ...]


def sheets(job: Job) -> tuple[Sheet, ...]:
    """Return a sheet of a changeover for each system of units that is shown.

    Args:
        job: The changeover.
    """
    first, *others = (sheet(replace(job, units=system)) for system in job.units.systems)
    return (first, *(replace(other, key=f"{other.key}-ip") for other in others))


def sheet(job: Job) -> Sheet:
    """Return the commissioning sheet of a changeover.

    Args:
        job: The changeover.
    """
    return Sheet(
        key=job.key,
        name=job.new,
        old=job.old,
        facts=_facts(job),
        blanks=("Date", "Technician", "Instruments, last checked", "Air at the condenser", "Load", "Compressor no."),
        targets=_targets(job),
        windows=_windows(job),
        pressures=_pressures(job),
        changes=_changes(job),
        pressure_unit=job.units.label("gauge pressure"),
        charge=_charge(job),
        mass_unit=job.units.label("mass"),
        label=_label(job),
        when=WHEN,
        readings=_readings(job),
    )


def _facts(job: Job) -> tuple[tuple[str, str], ...]:
    plant, compressor = job.comparison.case.plant, job.comparison.case.compressor
    rated = compressor.rated_current_A
    return (
        ("Refrigerant", f"{job.old} to {job.new}"),
        ("Safety class", job.entry.refrigerant.safety_class.text or "not stated"),
        ("Oil in the plant", plant.oil or UNKNOWN),
        ("Rated current", UNKNOWN if rated is None else job.units.with_unit("current", rated)),
        ("Nameplate, high side", job.gauge(plant.high_side_limit_Pa)),
        ("Nameplate, low side", job.gauge(plant.low_side_limit_Pa)),
    )


# -- targets and windows -----------------------------------------------------------------------------


def _range(job: Job, name: str) -> str:
    figure = practice(name)
    ends = [job.units.text("temperature difference", end, decimals=0) for end in figure.ends]
    return f"{span(*ends)}\N{NO-BREAK SPACE}{job.units.label('temperature difference')}"


def _targets(job: Job) -> tuple[Target, ...]:
    case, units = job.comparison.case, job.units
    duty, limit = case.duty, limit_of(job.comparison, discharge_limit(job.comparison))
    work, stop = (units.text("temperature", (end or 0.0) + ZERO_C_K, decimals=0) for end in (limit.work, limit.stop))
    taken = [
        units.with_unit("temperature difference", value)
        for value in (duty.useful_superheat_K, duty.useful_superheat_K + duty.line_superheat_K, duty.subcooling_K)
    ]
    at_bulb = _range(job, "superheat_bulb")
    if case.plant.evaporator in ("flooded", "pumped"):
        at_bulb = f"none: {case.plant.evaporator} evaporator, hold its level"
    elif case.valve and case.valve.kind in FIXED:
        at_bulb = f"follows from the charge: {case.valve.kind}"
    glass = "" if case.plant.sight_glass == NOTHING else ", sight glass clear"
    with_receiver = f"{_range(job, 'subcooling_receiver')} with a receiver{glass}"
    without = f"{_range(job, 'subcooling_critical')} without a receiver"
    subcooling = f"{with_receiver}; {without}"
    if case.receiver is not None:
        subcooling = with_receiver if case.receiver.is_there else without
    return (
        Target("Superheat, evaporator outlet, from dew", at_bulb, taken[0]),
        Target("Superheat, compressor inlet, from dew", f"{_range(job, 'superheat_compressor')} at least", taken[1]),
        Target("Subcooling at the valve, from bubble", subcooling, taken[2]),
        Target(
            "Discharge line, near the compressor",
            f"below {work}, never above {stop}\N{NO-BREAK SPACE}{units.label('temperature')}",
            _discharge(job),
        ),
    )


def _discharge(job: Job) -> str:
    numbers = job.entry.hardware_numbers
    if numbers is None:
        return MISSING
    T_K = numbers.new.design.T_discharge_K
    past = ", above the limit" if T_K > _discharge_stop_K(job) else ""
    return f"{job.units.with_unit('temperature', T_K, decimals=0)}{past}"


def _windows(job: Job) -> Windows:
    changing, units = job.changing, job.units
    if not changing.expected:
        return Windows((), (), (), spelled(changing.expected_reason))
    ambient = job.comparison.case.plant.ambient_pressure_Pa

    def gauge(window: Window, decimals: int | None) -> str:
        return _ends(window, lambda p: units.text("gauge pressure", p - ambient, decimals=decimals))

    kinds: tuple[tuple[str, str, str, Callable[[Window], str]], ...] = (
        ("Suction (evaporating)", "gauge pressure", "p_evap_Pa", lambda w: gauge(w, None)),
        ("Discharge (condensing)", "gauge pressure", "p_cond_Pa", lambda w: gauge(w, 1)),
        ("Discharge line", "temperature", "T_discharge_K", lambda w: _below_limit(job, w)),
        ("Current", "current", "current_A", lambda w: _shown(job, "current", w, _decimals(w))),
        ("Electrical power", "power", "power_W", lambda w: _shown(job, "power", w, _decimals(w, 1000.0))),
    )
    rows = tuple(
        (name, units.label(kind), tuple(_cell(getattr(item, field), show) for item in changing.expected))
        for name, kind, field, show in kinds
    )
    headings = tuple(
        (INLETS[item.name], units.with_unit("temperature", item.T_inlet_K, decimals=0)) for item in changing.expected
    )
    return Windows(headings, rows, _window_notes(job, changing.expected), "")


def _cell(window: Window | None, show: Callable[[Window], str]) -> str:
    return MISSING if window is None else show(window)


def _shown(job: Job, kind: str, window: Window, decimals: int | None) -> str:
    return _ends(window, lambda value: job.units.text(kind, value, decimals=decimals))


def _discharge_stop_K(job: Job) -> float:
    """Return the discharge temperature that is never passed. [K]"""
    return (limit_of(job.comparison, discharge_limit(job.comparison)).stop or math.inf) + ZERO_C_K


def _below_limit(job: Job, window: Window) -> str:
    """Return what the discharge line may show: the limit goes before what is expected."""
    stop = _discharge_stop_K(job)
    if window.high <= stop:
        return _shown(job, "temperature", window, 0)
    limit = job.units.text("temperature", stop, decimals=0)
    if window.low >= stop:
        return f"above the limit, {limit}"
    return f"{span(job.units.text('temperature', window.low, decimals=0), limit)}, the limit"


def _limit_note(job: Job, expected: Sequence[Expected]) -> str:
    """Return at which inlets the discharge line may pass its limit, and that the limit holds; empty if at none."""
    stop = _discharge_stop_K(job)
    passing = [item for item in expected if item.T_discharge_K is not None and item.T_discharge_K.high > stop]
    if not passing:
        return ""
    highest = max(item.T_discharge_K.high for item in passing if item.T_discharge_K is not None)
    limit, reached = (job.units.with_unit("temperature", T_K, decimals=0) for T_K in (stop, highest))
    return (
        f"The limit of the discharge line, {limit}, goes before the window: at {listed(_at(passing), 'and')} up to "
        f"{reached} is calculated. Do not run at full there until the discharge is kept below {limit}: settle "
        "head cooling, injection or less lift with the compressor's maker first. Shut down at the limit."
    )


def _at(expected: Sequence[Expected]) -> list[str]:
    return [f"the {INLETS[item.name]} inlet" if item.name != "today" else "the inlet of the day" for item in expected]


def _decimals(window: Window, unit: float = 1.0) -> int:
    """Return decimals that do not pretend more than the band allows."""
    return 0 if window.low / unit >= FEW_DIGITS else 1 if window.low / unit >= FEWER_DIGITS else 2


def _ends(window: Window, show: Callable[[float], str]) -> str:
    return span(show(window.low), show(window.high))


def _window_notes(job: Job, expected: Sequence[Expected]) -> tuple[str, ...]:
    band, numbers = pair_bands(job.comparison.existing, job.entry), job.entry.hardware_numbers
    discharge = job.units.with_unit("temperature difference", band["T_discharge"].value, decimals=0)
    notes = [
        _limit_note(job, expected),
        spelled(
            f"Existing compressor and exchangers balanced at full load. A window holds the 10th to 90th percentile of "
            f"{DRAWS} samples of the inputs within their limits, and the band of the model: pressure "
            f"±{percent_text(band['pressure'].value)}, discharge ±{discharge}, power and current "
            f"±{percent_text(band[QUANTITIES['power'][0]].value)}."
        ),
        "Part load, dirt, stopped fans and line losses move readings further.",
    ]
    held = [INLETS[item.name] for item in expected if item.is_held]
    if held:
        notes.append(f"Held up by the control of head pressure: {', '.join(held)}.")
    notes += [f"{INLETS[item.name].capitalize()}: {spelled(item.reason)}." for item in expected if item.reason]
    if numbers is not None and numbers.missing.get("current"):
        notes.append(f"Current not computed: {spelled(numbers.missing['current'].words)}.")
    if calibrated := calibration_text(job.comparison, job.units):
        notes.append(spelled(calibrated))
    notes += [spelled(told(text, job.units)) for text in expected_words(job.comparison)]
    return tuple(note for note in notes if note)


# -- the pressure-temperature table ------------------------------------------------------------------


def _pressures(job: Job) -> PressureTable:
    units = job.units.label("temperature"), job.units.label("gauge pressure")
    reach = operating_span(job.comparison, job.changing)
    if reach is None:
        return PressureTable(units, (), (), spelled(job.entry.reason or "it is not computed"))
    rows = [row for row in pressure_rows(job.entry.refrigerant.designation, _grid(job, reach)) if row.p_dew_Pa]
    lines = _lines(job, rows)
    is_one = all((row.p_bubble_Pa or 0.0) < (1.0 + NO_GLIDE) * (row.p_dew_Pa or 0.0) for row in rows)
    if is_one:
        lines = [(T, (PressureCell(cells[-1].text, any(cell.is_target for cell in cells)),)) for T, cells in lines]
    size = -(-len(lines) // COLUMNS)
    parts = tuple(tuple(lines[start : start + size]) for start in range(0, len(lines), size))
    return PressureTable(units, ("Pressure",) if is_one else ("Bubble", "Mean", "Dew"), parts, "")


def _grid(job: Job, reach: tuple[float, float]) -> list[float]:
    """Return temperatures on whole steps of the reader's degrees that hold the operating range. [K]"""
    low, high = (job.units.number("temperature", T_K) for T_K in (reach[0] - MARGIN_K, reach[1] + MARGIN_K))
    step = next((step for step in STEPS[job.units.name] if (high - low) / step <= MOST_ROWS), STEPS[job.units.name][-1])
    unit = job.units.displays["temperature"].unit
    first, last = math.floor(low / step), math.ceil(high / step)
    return [float(unit.to_SI(step * count)) for count in range(first, last + 1)]


def _lines(job: Job, rows: Sequence[PressureRow]) -> list[tuple[str, tuple[PressureCell, ...]]]:
    ambient, units = job.comparison.case.plant.ambient_pressure_Pa, job.units
    marked = _marked(job, rows)
    lines = []
    for row in rows:
        cells = tuple(
            PressureCell(units.gauge_text(getattr(row, f"p_{name}_Pa"), ambient), marked.get(name) == row.T_K)
            for name in ("bubble", "mean", "dew")
        )
        lines.append((units.text("temperature", row.T_K, decimals=0), cells))
    return lines


def _marked(job: Job, rows: Sequence[PressureRow]) -> dict[str, float]:
    """Return the row nearest to the design point in each column: where a gauge of the plant is read."""
    numbers = job.entry.hardware_numbers
    if numbers is None or not rows:
        return {}
    design = numbers.new.design
    wanted = {"dew": design.T_evap_dew_K, "bubble": design.T_cond_bubble_K, "mean": design.T_cond_mean_K}
    return {name: min((row.T_K for row in rows), key=lambda T: abs(T - at)) for name, at in wanted.items()}


# -- settings, charge, label, readings ---------------------------------------------------------------


def _changes(job: Job) -> tuple[Change, ...]:
    """Return every set point a plant may have: with its pressures where the case gives it, else blank."""
    numbers, controls = job.entry.hardware_numbers, job.comparison.case.controls
    given = numbers.settings if numbers else ()
    found = [Change(item.name, _bare(job, item.p_Pa.old), _bare(job, item.p_Pa.new), item.held) for item in given]
    known = {item.key for item in given}
    found += [Change(name, "", "", held) for key, name, held in SET_POINTS if key not in known]
    if "fan_steps" not in known:
        found.append(Change("Condenser fans, steps", "", "", "mean condensing"))
    cut_out = present(controls.high_pressure_cut_out_Pa) if controls else None
    return (Change("High-pressure switch, cut-out", _bare(job, cut_out), "", "stays with the vessel"), *found)


def _bare(job: Job, p_Pa: float | None) -> str:
    return job.units.gauge_text(p_Pa, job.comparison.case.plant.ambient_pressure_Pa) if p_Pa is not None else ""


def _charge(job: Job) -> tuple[tuple[str, str], ...]:
    numbers, first = job.entry.hardware_numbers, job.changing.first_charge_kg
    filling = numbers.filling if numbers else None
    ends = [f"{end:.0%}" for end in practice("first_charge").ends]
    if filling is None or first is None:
        why = numbers.missing["filling"].words if numbers else ""
        return (("Expected", UNKNOWN + (f" ({why})" if why else "")), (spelled(f"First, {span(*ends)}"), UNKNOWN))
    mass = job.units.column("mass", [filling.expected_kg, filling.lowest_kg, filling.highest_kg, *first])
    label = job.units.label("mass")
    return (
        ("Expected", f"{mass[0]} {label} ({mass[1]} to {mass[2]})"),
        (spelled(f"First, {span(*ends)}"), f"{span(mass[3], mass[4])} {label}"),
    )


def _label(job: Job) -> tuple[str, ...]:
    refrigerant = job.entry.refrigerant
    lines = [f"Refrigerant {job.new}, class {refrigerant.safety_class.text or 'not stated'}. Before: {job.old}."]
    for weight in job.changing.weights:
        if weight.gwp is None:
            lines.append(f"GWP not stated ({GWP_BASES[weight.basis]}).")
            continue
        expected = "" if weight.co2e_t is None else f" ({weight.co2e_t:.1f} t with the charge expected)"
        unit, each_t = (
            job.units.label("mass"),
            float(co2_equivalent_t(job.units.displays["mass"].unit.to_SI(1.0), weight.gwp)),
        )
        lines.append(
            f"GWP {potential_text(weight.gwp)} ({GWP_BASES[weight.basis]}). CO2 equivalent: {unit} charged × "
            f"{each_t:.4g} = ________ t{expected}."
        )
    if is_flammable(refrigerant.safety_class.text) is not False:
        lines.append("Warning sign for flammable gas, by the standard that applies.")
    if len(job.changing.weights) > 1:
        lines.append("Which GWP the label states is set by the law of the place.")
    return tuple(lines)


def _readings(job: Job) -> tuple[tuple[str, str], ...]:
    p, T = job.units.label("gauge pressure"), job.units.label("temperature")
    K = job.units.label("temperature difference")
    return (
        ("Date, time", ""),
        ("Suction pressure", p),
        ("Discharge pressure", p),
        ("Liquid pressure", p),
        ("Evaporator outlet, pipe", T),
        ("Compressor inlet, pipe", T),
        ("Discharge line", T),
        ("Liquid at the valve, pipe", T),
        ("Superheat, evaporator outlet", K),
        ("Superheat, compressor inlet", K),
        ("Subcooling", K),
        ("Current", "A"),
        ("Power", "kW"),
        ("Condenser, in and out", T),
        ("Evaporator, in and out", T),
        ("Goods or process", T),
        ("Oil level", ""),
        ("Signed", ""),
    )
