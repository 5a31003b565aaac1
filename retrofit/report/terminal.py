"""A result as text for a terminal: the answer, the cautions, the three bases, and what stands against whom."""

from __future__ import annotations

from collections.abc import Sequence

from retrofit.checks import LEVELS, Answer, answer, not_checked
from retrofit.refrigerants import GWP_BASES, Caution
from retrofit.report.banding import bands_text, wider_texts
from retrofit.report.catalogue import MARK, MARK_MEANS, class_text, gwp_text
from retrofit.report.terminal_plant import (
    NEAR,
    Emphasis,
    absent,
    baseline_text,
    change_cell,
    hardware_text,
    plant_text,
    row_names,
)
from retrofit.report.terminal_site import law_text, room_text
from retrofit.report.text_table import Column, paragraph, text_table
from retrofit.study import Comparison, Entry
from retrofit.study.bands import model_band
from retrofit.units import UnitSystem, listed, shown, told

INDENT = " " * 9
CONVENTIONS = {
    "dew": "equal dew temperatures",
    "mean": "equal mean temperatures",
}


def comparison_text(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis = str) -> str:
    """Return a result as text.

    Args:
        comparison: An assessed result.
        units: The reader's units.
        columns: Width to wrap prose to. [characters]
        strong: How a heading is set off; plain if left out.
    Returns: The text. The cautions stand above the numbers and cannot be left out.
    """
    found = answer(comparison, units)
    parts = [
        _head(comparison, units, columns, strong),
        _answer(found, columns),
        *cautions_text(comparison, columns, strong),
        baseline_text(comparison, units, columns, strong),
        *_tables(comparison, units, columns, strong),
        _findings(comparison, units, columns, strong),
        _small_print(comparison, units, columns, strong),
    ]
    return "\n\n".join(part for part in parts if part)


def _head(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis) -> str:
    duty, plant = comparison.case.duty, comparison.case.plant
    line = (
        f"{plant.refrigerant} today: evaporating {units.with_unit('temperature', duty.T_evap_K)}, "
        f"condensing {units.with_unit('temperature', duty.T_cond_K)} ({duty.reading}), "
        f"cooling {units.with_unit('cooling', duty.cooling_W)}"
    )
    basis = paragraph(f"{convention(comparison).capitalize()}.", columns)
    return "\n".join([strong(shown(comparison.case.title, 200)), paragraph(line, columns), basis])


def _answer(found: Answer, columns: int) -> str:
    lines = [paragraph(found.headline, columns)]
    if found.contradictions:
        lines += ["", *(paragraph(text, columns) for text in found.contradictions)]
    for matter in found.matters:
        lines.append("")
        lines.append(paragraph(matter.about, columns))
        lines += [
            paragraph(f"{words}: {', '.join(names)}", columns, indent="    ", first="  ")
            for words, names in matter.groups
        ]
    for remark in found.remarks:
        lines += ["", paragraph(remark, columns)]
    return "\n".join(lines)


def cautions_text(comparison: Comparison, columns: int, strong: Emphasis) -> list[str]:
    """Return the cautions as one block, each with the refrigerants it is about.

    Args:
        comparison: The result.
        columns: Width to wrap prose to. [characters]
        strong: How a heading is set off.
    """
    by_caution: dict[Caution, list[str]] = {}
    for entry in comparison.entries:
        for caution in entry.cautions:
            by_caution.setdefault(caution, []).append(entry.refrigerant.designation)
    found = [strong("Cautions")]
    for caution, names in by_caution.items():
        title = f"{caution.level.upper()}  {caution.title} ({', '.join(names)})"
        found.append(paragraph(title, columns) + "\n" + paragraph(caution.text, columns, indent="  "))
    return ["\n".join([found[0], *found[1:]])]


def _tables(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis) -> list[str]:
    solved = [entry for entry in comparison.entries if entry.duty is not None]
    refrigerants = _refrigerants(comparison.entries, strong)
    site = [room_text(comparison, units, columns, strong), law_text(comparison, units, columns, strong)]
    if not solved:
        return [refrigerants, *site]
    return [
        _duty(comparison, solved, units, strong),
        _compressor(comparison, solved, units, columns, strong),
        plant_text(comparison, units, columns, strong),
        refrigerants,
        hardware_text(comparison, columns, strong),
        *site,
    ]


def convention(comparison: Comparison) -> str:
    """Return how candidates are matched and what the existing temperatures are, for a heading."""
    case = comparison.case
    return f"candidates matched at {CONVENTIONS[case.compare.match]}; today's temperatures read as {case.duty.reading}"


def _duty(comparison: Comparison, solved: Sequence[Entry], units: UnitSystem, strong: Emphasis) -> str:
    cooling = units.with_unit("cooling", comparison.case.duty.cooling_W)
    heading = strong(f"Same duty, {cooling}: displacement and power follow") + f"\n{convention(comparison)}"
    kinds = (
        ("Evap.", "pressure", "p_evap_Pa"),
        ("Cond.", "pressure", "p_cond_Pa"),
        ("Ratio", "ratio", "pressure_ratio"),
        ("Discharge", "temperature", "T_discharge_K"),
        ("Power", "power", "power_W"),
        ("COP", "ratio", "cop"),
        ("Flow", "mass flow", "mass_flow_kg_per_s"),
        ("Swept", "volume flow", "swept_volume_m3_per_s"),
        ("Glide", "temperature difference", "glide_evap_K"),
    )
    columns = [
        Column("", "", is_words=True),
        *(Column(title, units.label(kind)) for title, kind, _ in kinds),
        Column("COP vs", "today"),
    ]
    cells = [units.column(kind, [getattr(entry.duty, name) for entry in solved]) for _, kind, name in kinds]
    ratios = [change_cell(entry, comparison.existing, "cop") for entry in solved]
    rows = [list(row) for row in zip(row_names(solved), *cells, ratios, strict=True)]
    return f"{heading}\n{text_table(columns, rows)}"


def _compressor(
    comparison: Comparison, entries: Sequence[Entry], units: UnitSystem, width: int, strong: Emphasis
) -> str:
    swept = units.with_unit("volume flow", comparison.swept_volume_m3_per_s)
    origin = "" if comparison.swept_volume_from == "case" else "; swept volume not in the case: what today's duty needs"
    heading = strong(f"Same compressor, {swept}: cooling and power follow") + f"\n{convention(comparison)}{origin}"
    kinds = (
        ("Cooling", "cooling", "cooling_W"),
        ("Power", "power", "power_W"),
        ("Heat out", "heat flow", "heat_rejected_W"),
        ("Flow", "mass flow", "mass_flow_kg_per_s"),
    )
    columns = [
        Column("", "", is_words=True),
        *(Column(title, units.label(kind)) for title, kind, _ in kinds),
        Column("Cooling vs", "today"),
        Column("Power vs", "today"),
    ]
    solved = [entry for entry in entries if entry.compressor is not None]
    without = [paragraph(absent(comparison, entry), width) for entry in entries if entry.compressor is None]
    cells = [units.column(kind, [getattr(entry.compressor, name) for entry in solved]) for _, kind, name in kinds]
    ratios = [[change_cell(entry, comparison.existing, name) for entry in solved] for name in ("capacity", "power")]
    rows = [list(row) for row in zip(row_names(solved), *cells, *ratios, strict=True)]
    return "\n".join([heading, text_table(columns, rows), *without])


def _refrigerants(entries: Sequence[Entry], strong: Emphasis) -> str:
    columns = [
        Column("", "", is_words=True),
        Column("Family", "", is_words=True),
        Column("Class", "", is_words=True),
        *(Column("GWP", label) for label in ("AR4", "AR5", "AR6")),
        Column("Model", "", is_words=True),
        Column("Verdict", "", is_words=True),
    ]
    rows = [
        [
            name,
            entry.family,
            class_text(entry.refrigerant),
            *(gwp_text(getattr(entry.refrigerant, basis)) for basis in list(GWP_BASES)[:3]),
            entry.grade.word if entry.grade else "none",
            entry.verdict,
        ]
        for name, entry in zip(row_names(entries), entries, strict=True)
    ]
    heading = strong("Refrigerants: ASHRAE 34 class, GWP over 100 years by IPCC edition, grade of the model")
    table = text_table(columns, rows)
    return f"{heading}\n{table}" + (f"\n{MARK_MEANS}" if MARK in table else "")


def _findings(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis) -> str:
    """Return the findings, worst first, each with the refrigerants it was found in."""
    groups: dict[tuple[str, str, str, str], list[str]] = {}
    for entry in comparison.entries:
        for finding in entry.findings:
            key = (finding.level, finding.code, finding.title, finding.advice)
            fact = f"{entry.refrigerant.designation}: {finding.fact}" if finding.fact else entry.refrigerant.designation
            groups.setdefault(key, []).append(told(fact, units))
    lines = [strong("What the checks found")]
    for (level, _, title, advice), facts in sorted(groups.items(), key=lambda item: LEVELS.index(item[0][0])):
        if not any(": " in fact for fact in facts):
            facts = [", ".join(facts)]
        lines.append(paragraph(f"{title}. {advice}".strip(), columns, indent=INDENT, first=f"{level:<9}"))
        lines += [paragraph(fact, columns, indent=INDENT + "    ", first=INDENT + "  ") for fact in facts]
    return "\n".join(lines)


def _small_print(comparison: Comparison, units: UnitSystem, columns: int, strong: Emphasis) -> str:
    case = comparison.case
    assumed = [f"{item.key} = {item.shown_text}" for item in case.defaults]
    parts = [
        f"Accuracy: {bands_text(model_band(), units)}; {NEAR} marks a difference inside the band: no meaningful "
        "difference.",
        *wider_texts(comparison, units),
        f"Assumed, not in the case: {listed(assumed, 'and')}." if assumed else "",
        "Not checked: " + "; ".join(not_checked(comparison)) + ".",
        "Versions: " + ", ".join(f"{name} {number}" for name, number in comparison.versions.items()) + ".",
    ]
    return "\n".join([strong("Limits"), *(paragraph(part, columns) for part in parts if part)])
