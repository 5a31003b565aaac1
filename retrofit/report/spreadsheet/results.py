"""The sheet of results: a row for each refrigerant and basis, a year and the remaining life with them."""

from __future__ import annotations

from collections.abc import Mapping

from retrofit.checks.prospects import DEEDS
from retrofit.refrigerants import GWP_BASES
from retrofit.report.cautioning import DEFERENCE
from retrofit.report.judging import FAMILY_WORDS, LEVEL_WORDS, spelled
from retrofit.report.spreadsheet.options import BASE, option_columns, option_rows
from retrofit.report.spreadsheet.table import GAPS, Column, Content, Sheet, as_rows, in_units, quantity_column
from retrofit.study import Comparison, Entry, Performance
from retrofit.units import UnitSystem

# Every quantity of a performance: heading and kind, by its name in the result.
QUANTITIES: Mapping[str, tuple[str, str]] = {
    "cooling_W": ("Cooling", "cooling"),
    "power_W": ("Compressor power", "power"),
    "cop": ("COP", "ratio"),
    "heat_rejected_W": ("Heat rejected", "heat flow"),
    "p_evap_Pa": ("Evaporating pressure", "pressure"),
    "p_cond_Pa": ("Condensing pressure", "pressure"),
    "pressure_ratio": ("Pressure ratio", "ratio"),
    "T_evap_inlet_K": ("Evaporator inlet", "temperature"),
    "T_evap_dew_K": ("Evaporator dew point", "temperature"),
    "T_evap_mean_K": ("Evaporator mean", "temperature"),
    "T_cond_dew_K": ("Condenser dew point", "temperature"),
    "T_cond_bubble_K": ("Condenser bubble point", "temperature"),
    "T_cond_mean_K": ("Condenser mean", "temperature"),
    "glide_evap_K": ("Glide in the evaporator", "temperature difference"),
    "glide_cond_K": ("Glide in the condenser", "temperature difference"),
    "T_suction_K": ("Suction temperature", "temperature"),
    "T_discharge_K": ("Discharge temperature", "temperature"),
    "T_discharge_isentropic_K": ("Discharge temperature, isentropic", "temperature"),
    "refrigerating_effect_J_per_kg": ("Refrigerating effect", "specific enthalpy"),
    "volumetric_capacity_J_per_m3": ("Volumetric capacity", "volumetric capacity"),
    "mass_flow_kg_per_s": ("Mass flow", "mass flow"),
    "suction_volume_flow_m3_per_s": ("Suction volume flow", "volume flow"),
    "swept_volume_m3_per_s": ("Swept volume", "volume flow"),
    "line_heat_W": ("Heat picked up in the suction line", "heat flow"),
}
# How the plant as installed meets the cooling it has to deliver; stands with the basis FULL.
FULL = "same plant, at full"
OPERATION: Mapping[str, tuple[str, str]] = {
    "run_time_fraction": ("Run time", "fraction"),
    "unmet_W": ("Cooling lacking", "cooling"),
    "mean_power_W": ("Mean compressor power", "power"),
}
# With the losses of motor and drive; without a motor efficiency the same as the compressor power.
ELECTRIC: Mapping[str, tuple[str, str]] = {
    "electric_W": ("Electrical power", "power"),
    "mean_electric_W": ("Mean electrical power", "power"),
}
# By basis: which ratio of the result stands under which heading. On the same plant a COP is compared at the same
# cooling only: one that cools less loads its exchangers less, which would look like a better COP.
RATIOS: Mapping[str, Mapping[str, str]] = {
    "same duty": {
        "COP": "cop",
        "Power": "power_same_duty",
        "Mass flow": "mass_flow_same_duty",
        "Swept volume": "swept_volume_same_duty",
    },
    "same compressor": {
        "Cooling": "capacity",
        "Power": "power",
        "Heat rejected": "heat_rejected",
        "Mass flow": "mass_flow",
    },
    FULL: {
        "Cooling": "plant_capacity",
        "Power": "plant_power",
        "Heat rejected": "plant_heat_rejected",
    },
    "same plant, at today's cooling": {"COP": "plant_cop_same_cooling"},
}
RATIO_HEADINGS = ("Cooling", "Power", "COP", "Heat rejected", "Mass flow", "Swept volume")
NO_PLANT = "the case does not describe the exchangers: give [evaporator] and [condenser]"
NOT_SET = "columns that do not belong to this basis"
Row = dict[str, Content]


def results_sheet(comparison: Comparison, units: UnitSystem) -> Sheet:
    """Return the sheet.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    """
    found = [
        (entry, basis, performance) for entry in comparison.entries for basis, performance in _bases(entry).items()
    ]
    performances = [performance for _, _, performance in found]
    shared = {heading for heading, _ in OPERATION.values()}
    columns = (
        *_identity(),
        *_quantities(performances, units),
        *_operation(comparison, units),
        *_ratios(),
        *(column for column in option_columns(comparison, units) if column.name not in shared),
        *_words(),
    )
    rows = [_row(comparison, entry, basis, performance, units) for entry, basis, performance in found]
    rows += [
        {**_common(row.entry), **row.cells, GAPS: "; ".join([*_common_gaps(row.entry), *row.gaps, NOT_SET])}
        for row in option_rows(comparison, units)
    ]
    return Sheet("Results", 4, columns, as_rows(columns, rows))


def _bases(entry: Entry) -> dict[str, Performance[float] | None]:
    plant = entry.plant
    installed = (plant.full, plant.same_cooling) if plant else (None, None)
    return dict(zip(RATIOS, (entry.duty, entry.compressor, *installed), strict=True))


def _identity() -> tuple[Column, ...]:
    return (
        Column("Refrigerant"),
        Column("Basis", width=20),
        Column("What is done", width=14),
        Column("Value", width=12),
        Column("Family", width=22),
        Column("Verdict", width=16),
        Column("Cautions", width=60),
        Column("Safety class", width=10),
        *(Column(f"GWP, {name}", decimals=1) for name in GWP_BASES.values()),
        Column("Model", width=10),
    )


def _quantities(found: list[Performance[float] | None], units: UnitSystem) -> tuple[Column, ...]:
    return tuple(
        quantity_column(heading, kind, [getattr(item, name) if item else None for item in found], units)
        for name, (heading, kind) in QUANTITIES.items()
    )


def _operation(comparison: Comparison, units: UnitSystem) -> tuple[Column, ...]:
    plants = [entry.plant for entry in comparison.entries if entry.plant]
    return tuple(
        quantity_column(heading, kind, [getattr(plant.operation, name) for plant in plants], units)
        for name, (heading, kind) in OPERATION.items()
    ) + tuple(
        quantity_column(heading, kind, [getattr(plant, name) for plant in plants], units)
        for name, (heading, kind) in ELECTRIC.items()
    )


def _ratios() -> tuple[Column, ...]:
    return tuple(Column(_ratio(heading), decimals=3) for heading in RATIO_HEADINGS)


def _ratio(heading: str) -> str:
    return f"{heading}, ratio to today"


def _words() -> tuple[Column, ...]:
    return Column("Findings", width=60), Column(GAPS, width=60), Column("Who decides", width=60)


def _common(entry: Entry) -> Row:
    """Return what stands in every row of a refrigerant, whatever the basis."""
    refrigerant = entry.refrigerant
    return {
        "Refrigerant": refrigerant.display_name,
        "Family": FAMILY_WORDS[entry.family],
        "Verdict": entry.verdict,
        "Cautions": "; ".join(caution.title for caution in entry.cautions),
        "Safety class": refrigerant.safety_class.value,
        **{f"GWP, {name}": getattr(refrigerant, key).number for key, name in GWP_BASES.items()},
        "Model": entry.grade.word if entry.grade else None,
        "Findings": "; ".join(f"{LEVEL_WORDS[item.level]}: {spelled(item.title)}" for item in entry.findings),
        "Who decides": DEFERENCE,
    }


def _row(comparison: Comparison, entry: Entry, basis: str, found: Performance[float] | None, units: UnitSystem) -> Row:
    deed = DEEDS["as is" if entry is comparison.existing else entry.family]
    row = _common(entry) | {"Basis": basis, "What is done": deed, "Value": BASE, GAPS: _gaps(entry, found, basis)}
    if found is not None:
        for name, (heading, kind) in QUANTITIES.items():
            row[heading] = in_units(kind, getattr(found, name), units)
        for heading, ratio in RATIOS[basis].items():
            row[_ratio(heading)] = entry.relative.get(ratio)
    if entry.plant and basis == FULL:
        for name, (heading, kind) in OPERATION.items():
            row[heading] = in_units(kind, getattr(entry.plant.operation, name), units)
        for name, (heading, kind) in ELECTRIC.items():
            row[heading] = in_units(kind, getattr(entry.plant, name), units)
    return row


def _gaps(entry: Entry, found: Performance[float] | None, basis: str) -> str:
    """Return why cells of a row are empty, in words."""
    gaps = _common_gaps(entry)
    return "; ".join([*gaps, NOT_SET if found is not None else _why_not(entry, basis)])


def _why_not(entry: Entry, basis: str) -> str:
    if entry.is_new_plant or "plant" in basis:
        return entry.reason or entry.plant_reason or NO_PLANT
    return entry.reason or "not computed"


def _common_gaps(entry: Entry) -> list[str]:
    refrigerant = entry.refrigerant
    blank = [name for key, name in GWP_BASES.items() if getattr(refrigerant, key).number is None]
    gaps = [f"GWP, {name}: not stated" for name in blank]
    gaps += [] if refrigerant.safety_class.value else ["safety class: not stated"]
    return gaps + ([] if entry.grade else ["model: none"])
