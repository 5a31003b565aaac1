"""The catalogue as text and as the JSON contract `retrofit.refrigerants/1`."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from typing import Any

from retrofit.refrigerants import GWP_BASES, Refrigerant, Value, cautions_for, source, with_hyphens
from retrofit.report.text_table import Column, paragraph, text_table
from retrofit.units import ZERO_C_K

NOT_STATED = "not stated"
# What a person reads for each field, and how its number is written.
FIELDS = (
    ("safety_class", "Safety class, ASHRAE 34", "{}"),
    ("composition_mass_pct", "Composition, mass %", "{}"),
    ("tolerances_mass_pct", "Tolerances, mass %", "{}"),
    ("molar_mass_kg_per_mol", "Molar mass, g/mol", "{:.3f}"),
    ("bubble_1atm_K", "Bubble point at 1 atm, °C", "{:.5g}"),
    ("dew_1atm_K", "Dew point at 1 atm, °C", "{:.5g}"),
    ("lfl_kg_per_m3", "Lower flammability limit, kg/m³", "{:g}"),
    ("lfl_vol_pct", "Lower flammability limit, vol %", "{:.1f}"),
    ("rcl_ppm", "RCL, ppm", "{:.0f}"),
    ("rcl_kg_per_m3", "RCL, kg/m³", "{:g}"),
    ("oel_ppm", "OEL, ppm", "{:.0f}"),
    ("practical_limit_kg_per_m3", "Practical limit, kg/m³", "{:g}"),
    ("atel_odl_kg_per_m3", "ATEL/ODL, kg/m³", "{:g}"),
    ("autoignition_K", "Autoignition temperature, °C", "{:.0f}"),
    ("odp", "ODP", "{:g}"),
    *((basis, f"GWP, {label}", "") for basis, label in GWP_BASES.items()),
    ("lubricants", "Usual lubricants", "{}"),
)


def catalogue_json(refrigerants: Sequence[Refrigerant]) -> dict[str, Any]:
    """Return refrigerants as the JSON object of the contract; what is not known is None."""
    return {"schema": "retrofit.refrigerants/1", "refrigerants": [_as_json(item) for item in refrigerants]}


def _as_json(item: Refrigerant) -> dict[str, Any]:
    numbers = (
        "lfl_kg_per_m3",
        "lfl_vol_pct",
        "rcl_ppm",
        "rcl_kg_per_m3",
        "oel_ppm",
        "practical_limit_kg_per_m3",
        "atel_odl_kg_per_m3",
        "autoignition_K",
        "odp",
        "molar_mass_kg_per_mol",
        *GWP_BASES,
        "bubble_1atm_K",
        "dew_1atm_K",
    )
    return {
        "designation": item.designation,
        "kind": item.kind,
        "chemical_name": item.chemical_name or None,
        "cas": item.cas or None,
        "composition_mass_pct": {name: round(100.0 * share, 6) for name, share in item.composition},
        "safety_class": item.safety_class.value,
        **{name: getattr(item, name).number for name in numbers},
        "lubricants": list(item.lubricant_list),
        "typical_use": item.typical_use.value,
        "sources": {name: _provenance(value) for name, value in item.values().items()},
        "disputes": [
            {"field": dispute.field, "status": dispute.status, "text": dispute.text} for dispute in item.disputes
        ],
        "cautions": [
            {"code": caution.code, "level": caution.level, "title": caution.title, "text": caution.text}
            for caution in cautions_for(item)
        ],
    }


def _provenance(value: Value) -> dict[str, Any]:
    return {
        "source": value.source or None,
        "basis": value.basis or None,
        "confidence": value.confidence or None,
        "status": value.status or None,
        "note": value.note or None,
    }


def catalogue_text(refrigerants: Iterable[Refrigerant], strong: Callable[[str], str]) -> str:
    """Return the catalogue as one table.

    Args:
        refrigerants: What to list.
        strong: How a heading is set off.
    """
    heads = [
        Column("", "", is_words=True),
        Column("Class", "", is_words=True),
        Column("GWP", "AR4"),
        Column("GWP", "AR5"),
        Column("GWP", "AR6"),
        Column("Bubble", "°C, 1 atm"),
        Column("Dew", "°C, 1 atm"),
        Column("Composition", "mass %", is_words=True),
    ]
    chosen = list(refrigerants)
    heading = strong("Catalogue: ASHRAE 34 class, GWP over 100 years by IPCC edition, boiling points at 1 atm")
    table = text_table(heads, [_list_row(item) for item in chosen])
    note = f"{MARK_MEANS}.\nretrofit refrigerants NAME shows source, basis, disputes and cautions of each."
    return f"{_class_cautions(chosen, strong)}\n\n{heading}\n{table}\n\n{note}"


def _class_cautions(chosen: Sequence[Refrigerant], strong: Callable[[str], str]) -> str:
    """Return what each class in a list means, a line each, and who decides."""
    titles = dict.fromkeys((first.level.upper(), first.title) for first in (cautions_for(item)[0] for item in chosen))
    lines = [f"{level:<8} {title}" for level, title in sorted(titles, key=lambda pair: pair[1])]
    decides = (
        "ASHRAE 34 and 15, ISO 817 and 5149 or EN 378, local code and licensed practice decide whether and how a\n"
        "refrigerant is used; nothing here replaces them."
    )
    return "\n".join([strong("Cautions"), *lines, decides])


def _list_row(item: Refrigerant) -> list[str]:
    composition = _composition(item)
    return [
        item.designation,
        class_text(item),
        *(gwp_text(getattr(item, basis)) for basis in list(GWP_BASES)[:3]),
        _celsius(item.bubble_1atm_K),
        _celsius(item.dew_1atm_K),
        marked(composition, item.composition_mass_pct) if composition else "",
    ]


def _composition(item: Refrigerant) -> str:
    """Return components and mass per cent of a blend as the trade writes them; empty for a single substance."""
    names, shares = zip(*item.composition, strict=True)
    return f"{'/'.join(names)} {'/'.join(f'{100 * share:.4g}' for share in shares)}" if len(names) > 1 else ""


MARK = "*"
MARK_MEANS = f"{MARK} from memory, in dispute, or with a component that has no value counted as 0"


def marked(text: str, value: Value) -> str:
    """Return a text with a mark where the value behind it must not be taken for read."""
    return text + MARK if value.basis == "memory" or value.status in ("incomplete", "unresolved") else text


def class_text(item: Refrigerant) -> str:
    """Return the safety class, marked if it is from memory, or "not stated"."""
    return marked(item.safety_class.text, item.safety_class) if item.safety_class.text else NOT_STATED


def gwp_text(value: Value) -> str:
    """Return a GWP as a whole number, a small one with two digits, marked where due, or "not stated"."""
    if value.number is None:
        return NOT_STATED
    return marked(f"{value.number:.0f}" if value.number >= 10.0 else f"{value.number:.2g}", value)


def _celsius(value: Value) -> str:
    """Return a boiling point with the digits its source prints."""
    if value.number is None:
        return "–"
    return marked(f"{round(value.number - ZERO_C_K, 2):g}".replace("-", "−"), value)


def refrigerant_text(item: Refrigerant, columns: int, strong: Callable[[str], str]) -> str:
    """Return everything known of one refrigerant, each value with source, basis and what is disputed.

    Args:
        item: The refrigerant.
        columns: Width to wrap prose to. [characters]
        strong: How a heading is set off.
    """
    what = item.chemical_name or with_hyphens(_composition(item))
    title = strong("  ".join(part for part in (item.display_name, what) if part))
    cautions = [
        paragraph(f"{caution.level.upper()}  {caution.title}. {caution.text}", columns, indent="  ", first="")
        for caution in cautions_for(item)
    ]
    heads = [Column("", "", True), Column("Value", "", True), Column("Basis", "", True), Column("Source", "", True)]
    rows = [_detail_row(label, getattr(item, name), form) for name, label, form in FIELDS]
    notes = [
        paragraph(f"{label}: {getattr(item, name).note}", columns, indent="  ", first="")
        for name, label, _ in FIELDS
        if getattr(item, name).note
    ]
    _, use, use_basis, use_source = _detail_row("Typical use", item.typical_use, "{}")
    named = [*(row[3] for row in rows), use_source]
    keys = sorted({part.strip() for keys in named for part in keys.split(";") if part.strip()})
    sources = [paragraph(f"{key}: {_source_text(key)}", columns, indent="  ", first="") for key in keys]
    origin = f" ({use_basis}; {use_source})" if use_source else ""
    use = f"Typical use: {use}{origin}"
    parts = [title, *cautions, "", text_table(heads, rows), "", paragraph(use, columns, indent="  ", first="")]
    parts += ["", strong("Notes and disputes"), *notes] if notes else []
    return "\n".join([*parts, "", strong("Sources"), *sources])


def _detail_row(label: str, value: Value, form: str) -> list[str]:
    if value.value is None:
        shown = value.status or NOT_STATED
    elif value.number is not None:
        in_celsius = "°C" in label
        number = value.number - ZERO_C_K if in_celsius else value.number * (1e3 if "g/mol" in label else 1.0)
        shown = form.format(number).replace("-", "−") if form else gwp_text(value)
        shown += f" ({value.status})" if value.status else ""
    else:
        shown = value.text
    basis = f"{value.basis}, {value.confidence} confidence" if value.confidence else value.basis
    return [label, shown, basis, value.source]


def _source_text(key: str) -> str:
    entry = source(key)
    return ", ".join(part for part in (entry.title, entry.edition, entry.publisher) if part)
