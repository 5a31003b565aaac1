"""Catalogue values in the report: each with what is doubtful about it, and the sources behind them."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass

from retrofit.refrigerants import GWP_BASES, Refrigerant, Source, Value, source
from retrofit.report.table import NOT_STATED, Cell, Group, Notes, Row, Table
from retrofit.study import Comparison, Entry
from retrofit.units import UnitSystem, format_number, stacked

FIELDS = {
    "composition_mass_pct": "composition",
    "safety_class": "safety class",
    "gwp_100yr_ar4": "GWP AR4",
    "gwp_100yr_ar5": "GWP AR5",
    "gwp_100yr_ar6": "GWP AR6",
    "gwp_eu_2024_573": "GWP EU 2024/573",
    "gwp_us_aim": "GWP US AIM Act",
    "odp": "ODP",
    "lfl_kg_per_m3": "LFL",
    "rcl_kg_per_m3": "RCL",
    "practical_limit_kg_per_m3": "practical limit",
    "atel_odl_kg_per_m3": "ATEL/ODL",
    "oel_ppm": "OEL",
    "bubble_1atm_K": "bubble point at 1 atm",
    "dew_1atm_K": "dew point at 1 atm",
    "autoignition_K": "auto-ignition temperature",
    "molar_mass_kg_per_mol": "molar mass",
    "lubricants": "usual oils",
}


BELONGS = "These figures belong to the refrigerants, whatever the plant, basis and convention."


def environment_table(comparison: Comparison, units: UnitSystem) -> Table:
    """Return the table of composition, limits by concentration, ODP and GWP on each basis by name.

    Args:
        comparison: The result.
        units: The reader's units.
    Returns: The table; a value not known reads "not stated".
    """
    notes, entries = Notes(), comparison.entries
    density = concentration_unit(units)

    def mass_per_volume(number: object) -> str:
        return concentration(float(number), units)  # type: ignore[arg-type]

    limits = (
        value_row("Safety class", "", entries, "safety_class", notes, str),
        value_row("LFL, lower flammability limit", density, entries, "lfl_kg_per_m3", notes, mass_per_volume),
        value_row("RCL, refrigerant concentration limit", density, entries, "rcl_kg_per_m3", notes, mass_per_volume),
        value_row("Practical limit of EN 378", density, entries, "practical_limit_kg_per_m3", notes, mass_per_volume),
        value_row("OEL, occupational exposure limit", "ppm", entries, "oel_ppm", notes, _plain),
        value_row("Usual oils", "", entries, "lubricants", notes, str),
    )
    potentials = (
        value_row("ODP, ozone depletion potential", "", entries, "odp", notes, _plain),
        *gwp_rows(entries, tuple(GWP_BASES), notes),
    )
    groups = (
        Group("limits", "Safety class and limits by concentration", limits),
        Group("potentials", "Environment: each GWP by its own edition or law", potentials),
    )
    names = tuple(entry.refrigerant.display_name for entry in entries)
    return Table("environment", "Safety and environment", BELONGS, names, groups, notes.listed())


def concentration(value: float, units: UnitSystem) -> str:
    """Return a concentration in air as a number, up to three digits.

    Args:
        value: The concentration. [kg/m3]
        units: The reader's units.
    """
    numbers = (1000.0 * float(system.number("density", value)) for system in units.systems)
    return stacked(*map(three_digits, numbers))


def concentration_unit(units: UnitSystem) -> str:
    """Return the unit of `concentration`: the thousandth part of a usual one of density."""
    return units.each({"si": "g/m³", "ip": "lb/1000 ft³"})


def concentration_text(value: float, units: UnitSystem) -> str:
    """Return a concentration in air with its unit.

    Args:
        value: The concentration. [kg/m3]
        units: The reader's units.
    """
    parts = [
        f"{concentration(value, system)}\N{NO-BREAK SPACE}{concentration_unit(system)}" for system in units.systems
    ]
    return stacked(*parts).replace("\n", " ")


def gwp_rows(entries: Sequence[Entry], bases: Iterable[str], notes: Notes) -> tuple[Row, ...]:
    """Return one row for each GWP basis, named by it."""
    return tuple(value_row(f"GWP, {GWP_BASES[basis]}", "", entries, basis, notes, potential_text) for basis in bases)


def value_row(
    label: str, unit: str, entries: Sequence[Entry], field: str, notes: Notes, show: Callable[[object], str]
) -> Row:
    """Return a row of catalogue values; what is doubtful about one goes to a note beside it."""
    cells = tuple(_cell(entry.refrigerant, field, notes, show) for entry in entries)
    return Row(label, unit, cells, f"catalogue {field}")


def _cell(refrigerant: Refrigerant, field: str, notes: Notes, show: Callable[[object], str]) -> Cell:
    value: Value = getattr(refrigerant, field)
    marks = tuple(notes.mark(refrigerant.display_name, text) for text in doubts(value))
    if value.value is None:
        return Cell(
            "none" if value.status == "not applicable" else NOT_STATED.replace(" ", "\N{NO-BREAK SPACE}"),
            is_number=False,
            marks=marks,
        )
    text = show(value.value) + (" ?" if value.status == "unresolved" else "")
    return Cell(text, is_number=isinstance(value.value, float), marks=marks)


def doubts(value: Value) -> list[str]:
    """Return what a reader has to know about a value besides its figure: notes, status, and recall."""
    texts = [value.note] if value.note and not value.note.startswith("also in ") else []
    if value.status == "unresolved" and "unresolved" not in value.note:
        texts.append("unresolved: sources contradict each other, look it up before use")
    if value.basis == "memory" and value.value is not None:
        texts.append(f"from memory, {value.confidence or 'no stated'} confidence: look it up before use")
    return texts


def three_digits(value: float) -> str:
    """Return a number as sources print it: up to three digits, no zeros added behind.

    Args:
        value: The number. [-]
    """
    return format_number(value, 0) if value >= 1000.0 else f"{value:.3g}"


def potential_text(number: object) -> str:
    """Return a warming potential as sources print it.

    Args:
        number: The potential. [-]
    """
    value = float(number)  # type: ignore[arg-type]
    return format_number(value, 0) if value >= 10.0 else three_digits(value)


def _plain(number: object) -> str:
    value = float(number)  # type: ignore[arg-type]
    return format_number(value, 0) if value == int(value) else format_number(value, 3)


def composition_text(refrigerant: Refrigerant) -> str:
    """Return the composition of a blend in words, empty for a single substance."""
    if len(refrigerant.composition) < 2:
        return ""
    parts = (f"R-{name[1:]} {100 * share:.4g}\N{NO-BREAK SPACE}%" for name, share in refrigerant.composition)
    return ", ".join(parts)


@dataclass(frozen=True)
class UsedSource:
    """An entry of the bibliography with what it was used for."""

    source: Source
    document: str
    used_for: str


def used_sources(comparison: Comparison) -> tuple[UsedSource, ...]:
    """Return the sources of every catalogue value and caution in the report, by key, with what each gave."""
    uses: dict[str, dict[str, list[str]]] = {}
    for entry in comparison.entries:
        for field, label in FIELDS.items():
            value: Value = getattr(entry.refrigerant, field)
            if value.source:
                names = uses.setdefault(value.source, {}).setdefault(label, [])
                _once(names, entry.refrigerant.display_name)
        for caution in entry.cautions:
            for key in caution.source.split("; "):
                uses.setdefault(key, {}).setdefault("cautions", [])
    return tuple(
        UsedSource(source(key), _document(source(key)), _uses(found, len(comparison.entries)))
        for key, found in sorted(uses.items())
    )


def _once(names: list[str], name: str) -> None:
    if name not in names:
        names.append(name)


def _document(entry: Source) -> str:
    return ", ".join(part for part in (entry.title, entry.publisher, entry.edition) if part and part != "none")


def _uses(found: dict[str, list[str]], count: int) -> str:
    """Return what a source gave, labels with the same refrigerants taken together."""
    by_names: dict[str, list[str]] = {}
    for label, names in found.items():
        words = "all refrigerants here" if len(names) == count else ", ".join(names)
        by_names.setdefault(words, []).append(label)
    return "; ".join(
        f"{', '.join(labels)}: {names}" if names else ", ".join(labels) for names, labels in by_names.items()
    )
