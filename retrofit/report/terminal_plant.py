"""The plant as installed as text for a terminal: the basis same plant, the hardware, and the baseline."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence

from retrofit.checks.readings import Outcome
from retrofit.report.agreeing import agreements
from retrofit.report.found import derived_text
from retrofit.report.hardware import component_names, verdict_words
from retrofit.report.plant import UA_NOT_MEASURED, cooling_needed_text, has_plant, plant_reason, ua_text, unmet_text
from retrofit.report.text_table import GAP, Column, paragraph, text_table, width
from retrofit.study import Comparison, Entry
from retrofit.study.bands import pair_band
from retrofit.study.performance import capped_superheat_K
from retrofit.units import UnitSystem, format_number, told

Emphasis = Callable[[str], str]
Words = tuple[str, tuple[str, ...]]  # heading of a column, and its cells
NEAR = "≈"
NOTHING = "·"
OUTSIDE = "*"


def row_names(entries: Sequence[Entry]) -> list[str]:
    """Return the names of refrigerants at the beginning of their rows."""
    return [f"{entry.refrigerant.designation}{' (today)' if entry.family == 'keep' else ''}" for entry in entries]


def change_cell(entry: Entry, today: Entry, ratio: str) -> str:
    """Return a ratio to today as a change, with a sign before it where it lies inside the band of the model.

    Args:
        entry: A refrigerant.
        today: The existing one.
        ratio: Name of the ratio.
    """
    if entry.family == "keep" or ratio not in entry.relative:
        return NOTHING
    change = entry.relative[ratio] - 1.0
    band = pair_band(today, entry, "cop" if "cop" in ratio else "capacity")
    near = f"{NEAR} " if abs(change) <= band else ""
    return f"{near}{format_number(100.0 * change, 1, signed=True)} %"


def plant_text(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis) -> str:
    """Return the table of the basis same plant, or why there is none.

    Args:
        comparison: An assessed result.
        units: The reader's units.
        columns: Width to wrap prose to. [characters]
        strong: How a heading is set off.
    """
    heading = strong("Same plant: existing machine, same media; pressures float")
    without = [entry for entry in comparison.entries if entry.duty is not None and entry.plant is None]
    if not has_plant(comparison):
        return "\n".join([heading, *(paragraph(text, columns) for text in _nowhere(comparison, without))])
    convention = f"same air, water or brine; to deliver: {cooling_needed_text(comparison, units)}"
    lines = [heading, paragraph(convention, columns), _plant_table(comparison, units)]
    lines += [paragraph(text, columns) for text in (*_capped(comparison, units), *_ua_lines(comparison))]
    if any(entry.plant and not entry.plant.is_covered for entry in comparison.entries):
        lines.append(paragraph(f"{OUTSIDE} outside the data of the compressor: carried on beyond them.", columns))
    lines += [paragraph(absent(comparison, entry), columns) for entry in without]
    return "\n".join(lines)


def absent(comparison: Comparison, entry: Entry) -> str:
    """Return in a sentence that a refrigerant has no numbers on the existing machine, and why.

    Args:
        comparison: The result.
        entry: The refrigerant.
    """
    return f"{entry.refrigerant.designation} not computed: {plant_reason(comparison, entry)}."


def _nowhere(comparison: Comparison, without: Sequence[Entry]) -> list[str]:
    """Return why nothing is computed on this basis: what the case lacks, and each new plant by its name."""
    reasons = dict.fromkeys(plant_reason(comparison, entry) for entry in without if not entry.is_new_plant)
    new = [absent(comparison, entry) for entry in without if entry.is_new_plant]
    return [*(f"Not computed: {reason}." for reason in reasons), *new]


def _capped(comparison: Comparison, units: UnitSystem) -> Iterator[str]:
    """Yield for which refrigerants the evaporator gives less superheat than is set, if there are any."""
    kind, unit = "temperature difference", units.label("temperature difference")
    found = []
    for entry in comparison.entries:
        used = capped_superheat_K(comparison.case, entry.plant.full) if entry.plant else None
        if used is not None:
            found.append(f"{entry.refrigerant.display_name} {units.text(kind, used)}")
    if found:
        wanted = units.text(kind, comparison.case.duty.useful_superheat_K)
        told = f"Useful superheat below the {wanted} {unit} set, all that the evaporator gives"
        yield f"{told}: {', '.join(found)} {unit}."


def _ua_lines(comparison: Comparison) -> list[str]:
    """Return what each candidate does to the conductances, if it is calculated or given for any."""
    found = [
        f"{entry.refrigerant.designation} {ua_text(entry.plant.ua_factors[0])} and {ua_text(entry.plant.ua_factors[1])}"
        for entry in comparison.candidates
        if entry.plant and any(one.high != 1.0 for one in entry.plant.ua_factors)
    ]
    if not found:
        return []
    head = f"UA of evaporator and condenser over today's, {UA_NOT_MEASURED}, with 90 % band: "
    return [f"{head}{'; '.join(found)}."]


def _plant_table(comparison: Comparison, units: UnitSystem) -> str:
    entries = [entry for entry in comparison.entries if entry.plant is not None]
    plants = [entry.plant for entry in entries if entry.plant is not None]
    names = [
        f"{name}{'' if plant.is_covered else OUTSIDE}" for name, plant in zip(row_names(entries), plants, strict=True)
    ]
    T, kW = units.label("temperature"), units.label("cooling")
    today = comparison.existing
    table = [
        (Column("", "", is_words=True), names),
        (Column("Evap.", T), units.column("temperature", [plant.full.T_evap_dew_K for plant in plants])),
        (Column("Cond.", T), units.column("temperature", [plant.full.T_cond_dew_K for plant in plants])),
        (Column("Discharge", T), units.column("temperature", [plant.full.T_discharge_K for plant in plants])),
        (Column("Cooling", kW), units.column("cooling", [plant.full.cooling_W for plant in plants])),
        (Column("Cooling vs", "today"), [change_cell(entry, today, "plant_capacity") for entry in entries]),
        (Column("COP vs", "today"), [change_cell(entry, today, "plant_cop_same_cooling") for entry in entries]),
        (Column("Runs", "%"), units.column("fraction", [plant.operation.run_time_fraction for plant in plants])),
        (Column("Speed", "%"), units.column("fraction", [plant.operation.speed_fraction for plant in plants])),
        (Column("Lacks", kW), [unmet_text(entry, today, units, NOTHING) for entry in entries]),
    ]
    if all(plant.operation.speed_fraction == 1.0 for plant in plants):
        table = [item for item in table if item[0].heading != "Speed"]
    rows = [list(row) for row in zip(*(cells for _, cells in table), strict=True)]
    text = text_table([column for column, _ in table], rows)
    return f"{text}\nEvap., cond.: dew points, at full. COP at the same cooling."


def hardware_text(comparison: Comparison, columns: int, strong: Emphasis) -> str:
    """Return the verdicts on the components, as many refrigerants side by side as there is room for.

    Args:
        comparison: An assessed result.
        columns: Width to keep to, if one refrigerant fits. [characters]
        strong: How a heading is set off.
    Returns: The text; empty if no component was judged.
    """
    names = component_names(comparison)
    if not names:
        return ""
    entries = [entry for entry in comparison.entries if entry.hardware]
    refrigerants = [
        ("today" if entry.family == "keep" else entry.refrigerant.designation, verdict_words(entry, list(names)))
        for entry in entries
    ]
    tables = []
    for part in _side_by_side(refrigerants, columns - max(map(len, names.values()))):
        heads = [Column("", "", is_words=True), *(Column(head, "", is_words=True) for head, _ in part)]
        rows = list(zip(names.values(), *(words for _, words in part), strict=True))
        tables.append(text_table(heads, rows))
    heading = strong("Hardware: keep, adjust, replace, or unknown for lack of data (numbers in the report)")
    return "\n".join([heading, "\n\n".join(tables)])


def _side_by_side(refrigerants: Sequence[Words], room: int) -> list[list[Words]]:
    """Return columns of words in parts that fit into some room, at least one in each. [characters]"""
    parts: list[list[Words]] = [[]]
    left = room
    for item in refrigerants:
        wide = len(GAP) + max(width(text) for text in (item[0], *item[1]))
        if parts[-1] and wide > left:
            parts.append([])
            left = room
        parts[-1].append(item)
        left -= wide
    return parts


def baseline_text(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis) -> str:
    """Return what the readings say, in a few lines; empty if the case has none.

    Args:
        comparison: The result.
        units: The reader's units.
        columns: Width to wrap to. [characters]
        strong: How a heading is set off.
    """
    found = comparison.baseline
    if found is None:
        return ""
    lines = [strong("The plant as found, from its readings")]
    if found.derived:
        values = [f"{item.name[:1].lower()}{item.name[1:]} {derived_text(item, units)}" for item in found.derived]
        text = "; ".join(values)
        lines.append(paragraph(f"{text[:1].upper()}{text[1:]}.", columns))
    lines += [
        paragraph(f"{item.level:<9}{item.title}. {told(item.text, units)}", columns, indent=" " * 9, first="")
        for item in found.problems
    ]
    lines += _agreement_lines(comparison, units, columns)
    if found.missing:
        count = len(found.missing)
        lines.append(paragraph(f"{count} more quantities need readings that are not there: see the report.", columns))
    return "\n".join(lines)


def _agreement_lines(comparison: Comparison, units: UnitSystem, columns: int) -> list[str]:
    """Return the readings beside the model, and what likely makes those differ that do."""
    found = agreements(comparison, units)
    lines = ["Readings against the model of today's plant at the same point:"] if found else []
    for item in found:
        if item.state == Outcome.NOT_COMPARABLE:
            lines.append(f"{item.name}: {item.outcome}: {item.reason}.")
        elif item.state != Outcome.NOT_READ:
            causes = "; ".join(f"{cause} ({todo})" for cause, todo in item.causes)
            likely = f". Likely causes: {causes}" if causes else ""
            both = f"{item.read} read, {item.modelled} by the model, {item.difference}"
            lines.append(f"{item.name}: {both}: {item.outcome}{likely}.")
    absent = [
        item.name if item.name[:2].isupper() else item.name[:1].lower() + item.name[1:]
        for item in found
        if item.state == Outcome.NOT_READ
    ]
    lines += [f"Not read: {'; '.join(absent)}."] if absent else []
    return [paragraph(line, columns, indent="  ", first="  " if place else "") for place, line in enumerate(lines)]
