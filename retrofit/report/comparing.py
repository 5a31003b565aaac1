"""The comparison table: what stands in it, in the reader's units, each group with its basis in the heading."""

from __future__ import annotations

from collections.abc import Iterable

from retrofit.report.assumed import legend, marked
from retrofit.report.plant import plant_groups
from retrofit.report.rows import change_row, near, quantity_row
from retrofit.report.table import Group, Notes, Row, Table, number_row, word_row
from retrofit.report.values import gwp_rows, value_row
from retrofit.study import Comparison, Entry
from retrofit.study.bands import pair_band
from retrofit.units import UnitSystem

SAME = "the same at same duty and same compressor"


def convention(comparison: Comparison) -> str:
    """Return the temperature convention of a comparison in one sentence, as it stands on every table."""
    reading, match = comparison.case.duty.reading, comparison.case.compare.match
    read = {"dew": "dew points", "mean": "mean temperatures"}[reading]
    matched = {"dew": "equal dew points", "mean": "equal mean temperatures"}[match]
    return (
        f"Convention: the evaporating and condensing temperatures of the case are read as {read}; "
        f"candidates are matched to the existing refrigerant at {matched}."
    )


def comparison_table(comparison: Comparison, units: UnitSystem) -> Table:
    """Return the comparison table.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    Returns: The table with its notes.
    """
    notes = Notes()
    entries = comparison.entries
    groups = (
        Group("is", "What each refrigerant is", _identity(entries, units, notes)),
        Group("pressures", f"Pressures at the plant's temperatures; {SAME}", _pressures(comparison, units)),
        Group("temperatures", f"Temperatures; {SAME}", _temperatures(comparison, units)),
        Group("efficiency", f"Each kilowatt and each cubic metre; {SAME}", _specific(comparison, units)),
        Group("duty", duty_heading(comparison, units), _duty(comparison, units)),
        Group("compressor", compressor_heading(comparison, units), _compressor(comparison, units)),
        *plant_groups(comparison, units, notes),
    )
    caption = "Comparison on three bases: same duty, same compressor and same plant"
    _reasons(entries, notes)
    return Table(
        "comparison",
        caption,
        convention(comparison),
        columns(entries),
        marked(comparison, groups),
        notes.listed(),
        legend(comparison, groups, units),
    )


def columns(entries: Iterable[Entry]) -> tuple[str, ...]:
    """Return the names of the refrigerants as column headings; the first is the existing one."""
    return tuple(entry.refrigerant.display_name for entry in entries)


def duty_heading(comparison: Comparison, units: UnitSystem) -> str:
    """Return the heading of the basis `duty`."""
    return f"Basis: same duty, {units.with_unit('cooling', comparison.case.duty.cooling_W)} of cooling"


def compressor_heading(comparison: Comparison, units: UnitSystem) -> str:
    """Return the heading of the basis `compressor`, which says where the swept volume comes from."""
    swept = units.with_unit("volume flow", comparison.swept_volume_m3_per_s)
    origin = "given in the case" if comparison.swept_volume_from == "case" else "not given: what today's duty needs"
    return f"Basis: same compressor, swept volume {swept} ({origin})"


def _reasons(entries: tuple[Entry, ...], notes: Notes) -> None:
    for entry in entries:
        if entry.reason:
            notes.mark(entry.refrigerant.display_name, f"not computed: {entry.reason}")


def _identity(entries: tuple[Entry, ...], units: UnitSystem, notes: Notes) -> tuple[Row, ...]:
    verdicts = word_row("Verdict", (entry.verdict or "not judged" for entry in entries))
    return (
        verdicts,
        value_row("Safety class", "", entries, "safety_class", notes, str),
        *gwp_rows(entries, ("gwp_100yr_ar4", "gwp_100yr_ar5", "gwp_100yr_ar6"), notes),
    )


def _pressures(comparison: Comparison, units: UnitSystem) -> tuple[Row, ...]:
    rows = []
    ambient = comparison.case.plant.ambient_pressure_Pa
    for label, name in (("Evaporating", "p_evap"), ("Condensing", "p_cond")):
        values = _values(comparison, "duty", f"{name}_Pa")
        gauge = [None if value is None else value - ambient for value in values]
        rows += [
            quantity_row(f"{label} pressure, absolute", "pressure", values, units),
            quantity_row(f"{label} pressure, gauge", "gauge pressure", gauge, units),
            change_row(f"{label} pressure against today", comparison, name, "pressure"),
        ]
    rows.append(quantity_row("Pressure ratio", "ratio", _values(comparison, "duty", "pressure_ratio"), units))
    return tuple(rows)


def _temperatures(comparison: Comparison, units: UnitSystem) -> tuple[Row, ...]:
    names = (
        ("Evaporator inlet, after the expansion valve", "temperature", "T_evap_inlet_K"),
        ("Evaporator dew point", "temperature", "T_evap_dew_K"),
        ("Evaporator mean", "temperature", "T_evap_mean_K"),
        ("Condenser dew point", "temperature", "T_cond_dew_K"),
        ("Condenser bubble point", "temperature", "T_cond_bubble_K"),
        ("Condenser mean", "temperature", "T_cond_mean_K"),
        ("Glide in the evaporator", "temperature difference", "glide_evap_K"),
        ("Glide in the condenser", "temperature difference", "glide_cond_K"),
        ("Discharge temperature", "temperature", "T_discharge_K"),
    )
    rows = [quantity_row(label, kind, _values(comparison, "duty", name), units) for label, kind, name in names]
    return (*rows, _discharge_change(comparison, units))


def _discharge_change(comparison: Comparison, units: UnitSystem) -> Row:
    texts, rises, bands = [], [], []
    for entry in comparison.entries:
        rise = None if entry is comparison.existing else entry.T_discharge_difference_K
        text = units.text("temperature difference", rise, decimals=0, signed=True)
        band = pair_band(comparison.existing, entry, "T_discharge")
        texts.append(near(text) if rise is not None and abs(rise) <= band else text)
        rises.append(rise)
        bands.append(band)
    kind = "temperature difference"
    return number_row("Discharge against today", units.label(kind), texts, kind, rises, bands)


def _specific(comparison: Comparison, units: UnitSystem) -> tuple[Row, ...]:
    names = (
        ("Refrigerating effect", "specific enthalpy", "refrigerating_effect_J_per_kg"),
        ("Volumetric capacity", "volumetric capacity", "volumetric_capacity_J_per_m3"),
        ("COP, cooling over compressor power", "ratio", "cop"),
    )
    rows = [quantity_row(label, kind, _values(comparison, "duty", name), units) for label, kind, name in names]
    return (*rows, change_row("COP against today", comparison, "cop", "cop"))


def _duty(comparison: Comparison, units: UnitSystem) -> tuple[Row, ...]:
    names = (
        ("Mass flow", "mass flow", "mass_flow_kg_per_s"),
        ("Displacement needed (swept volume)", "volume flow", "swept_volume_m3_per_s"),
        ("Compressor power", "power", "power_W"),
        ("Heat rejected", "heat flow", "heat_rejected_W"),
    )
    rows = [quantity_row(label, kind, _values(comparison, "duty", name), units) for label, kind, name in names]
    rows.insert(2, change_row("Displacement against today", comparison, "swept_volume_same_duty", "capacity"))
    rows.insert(4, change_row("Power against today", comparison, "power_same_duty", "cop"))
    return tuple(rows)


def _compressor(comparison: Comparison, units: UnitSystem) -> tuple[Row, ...]:
    names = (
        ("Cooling", "cooling", "cooling_W"),
        ("Compressor power", "power", "power_W"),
        ("Heat rejected", "heat flow", "heat_rejected_W"),
        ("Mass flow", "mass flow", "mass_flow_kg_per_s"),
    )
    rows = [quantity_row(label, kind, _values(comparison, "compressor", name), units) for label, kind, name in names]
    rows.insert(1, change_row("Cooling against today", comparison, "capacity", "capacity"))
    rows.insert(3, change_row("Power against today", comparison, "power", "capacity"))
    return tuple(rows)


def _values(comparison: Comparison, basis: str, name: str) -> list[float | None]:
    found = [getattr(entry, basis) for entry in comparison.entries]
    return [None if item is None else float(getattr(item, name)) for item in found]
