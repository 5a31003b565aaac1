"""The basis same plant: what the existing compressor and exchangers do with each refrigerant, as rows of a table."""

from __future__ import annotations

from operator import attrgetter

from retrofit.equipment.heat_transfer import KINDS
from retrofit.report.rows import change_row, change_text, near, quantity_row
from retrofit.report.table import Cell, Group, Notes, Row
from retrofit.study import Comparison, Entry
from retrofit.study.bands import pair_band
from retrofit.study.performance import capped_superheat_K
from retrofit.study.result import UAFactor
from retrofit.units import MISSING, UnitSystem, stacked

HELD = "existing compressor and exchangers, same air, water or brine; pressures float"
# Why a COP is compared at the same cooling, where the two stand side by side.
WHY_SAME_COOLING = (
    "COP at full compares unlike things: a refrigerant that cools less loads the exchangers less, its pressures move "
    "together, and the smaller capacity looks like a better COP. At the same cooling, with whatever displacement that "
    "takes, the exchangers carry the same load, and what is left is the refrigerant."
)


def has_plant(comparison: Comparison) -> bool:
    """Say whether the basis same plant could be computed for any refrigerant."""
    return any(entry.plant for entry in comparison.entries)


def plant_reason(comparison: Comparison, entry: Entry) -> str:
    """Return why a refrigerant has no numbers on the basis same plant; empty if it has.

    Args:
        comparison: The result.
        entry: One of its refrigerants.
    """
    if entry.plant is not None:
        return ""
    case, reason = comparison.case, entry.plant_reason or entry.reason or "today's refrigerant is not computed"
    if entry.plant_reason and not entry.is_new_plant and (case.evaporator is None or case.condenser is None):
        absent = " and ".join(f"[{name}]" for name in ("evaporator", "condenser") if getattr(case, name) is None)
        return f"the case does not describe the exchangers: give {absent}"
    return reason


def plant_groups(comparison: Comparison, units: UnitSystem, notes: Notes) -> tuple[Group, ...]:
    """Return the groups of rows of the basis same plant; one with the reason if nothing could be computed.

    Args:
        comparison: An assessed result.
        units: The reader's units.
        notes: Takes the reason of each refrigerant that is not computed.
    """
    if not has_plant(comparison):
        return (Group("plant", f"Basis: same plant, {HELD}", (_not_computed(comparison, notes),)),)
    _mark_reasons(comparison, notes)
    return (
        Group("plant-settled", f"Basis: same plant, {HELD}; where it settles, at full", _settled(comparison, units)),
        Group("plant-full", "Basis: same plant, at full, and at the same cooling", _full(comparison, units)),
        Group("plant-run", _run_heading(comparison, units), _run(comparison, units, notes)),
    )


def _not_computed(comparison: Comparison, notes: Notes) -> Row:
    cells = [
        Cell("not computed", is_number=False, marks=(notes.mark(entry.refrigerant.display_name, _reason_note(reason)),))
        for entry in comparison.entries
        for reason in [plant_reason(comparison, entry)]
    ]
    return Row("Cooling, power, pressures", "", tuple(cells))


def _mark_reasons(comparison: Comparison, notes: Notes) -> None:
    for entry in comparison.entries:
        if entry.duty is not None and (reason := plant_reason(comparison, entry)):
            notes.mark(entry.refrigerant.display_name, _reason_note(reason))


def _reason_note(reason: str) -> str:
    return f"not computed on the basis same plant: {reason}"


def _values(comparison: Comparison, name: str) -> list[float | None]:
    """Return a number of every refrigerant on this basis by its dotted name, None where there is none."""
    return [None if entry.plant is None else float(attrgetter(name)(entry.plant)) for entry in comparison.entries]


def _settled(comparison: Comparison, units: UnitSystem) -> tuple[Row, ...]:
    ambient = comparison.case.plant.ambient_pressure_Pa
    temperatures = (
        ("Evaporating, dew point", "T_evap_dew_K"),
        ("Evaporating, mean", "T_evap_mean_K"),
        ("Condensing, dew point", "T_cond_dew_K"),
        ("Condensing, mean", "T_cond_mean_K"),
    )
    rows = [
        quantity_row(label, "temperature", _values(comparison, f"full.{name}"), units) for label, name in temperatures
    ]
    for label, name in (("Evaporating", "p_evap_Pa"), ("Condensing", "p_cond_Pa")):
        gauge = [None if p is None else p - ambient for p in _values(comparison, f"full.{name}")]
        rows.append(quantity_row(f"{label} pressure, gauge", "gauge pressure", gauge, units))
    covered = [None if entry.plant is None else entry.plant.is_covered for entry in comparison.entries]
    words = {None: MISSING, True: "yes", False: "no"}
    return (
        *rows,
        quantity_row("Pressure ratio", "ratio", _values(comparison, "full.pressure_ratio"), units),
        quantity_row("Discharge temperature", "temperature", _values(comparison, "full.T_discharge_K"), units),
        *_superheat_rows(comparison, units),
        Row("Inside the compressor's data", "", tuple(Cell(words[is_in], is_number=False) for is_in in covered)),
    )


def _superheat_rows(comparison: Comparison, units: UnitSystem) -> tuple[Row, ...]:
    """Return the row of the superheat that the evaporator really gives, if for any refrigerant it is less than set."""
    capped = [
        capped_superheat_K(comparison.case, entry.plant.full) if entry.plant else None for entry in comparison.entries
    ]
    if all(superheat is None for superheat in capped):
        return ()
    set_K = comparison.case.duty.useful_superheat_K
    used = [
        None if entry.plant is None else set_K if superheat is None else superheat
        for entry, superheat in zip(comparison.entries, capped, strict=True)
    ]
    return (quantity_row("Useful superheat that the evaporator gives", "temperature difference", used, units),)


def _full(comparison: Comparison, units: UnitSystem) -> tuple[Row, ...]:
    return (
        quantity_row("Cooling at full", "cooling", _values(comparison, "full.cooling_W"), units),
        change_row("Cooling against today", comparison, "plant_capacity", "capacity"),
        quantity_row("Compressor power at full", "power", _values(comparison, "full.power_W"), units),
        *_electric_rows(comparison, units, "Electrical power at full", "electric_W"),
        change_row("Power against today", comparison, "plant_power", "capacity"),
        quantity_row("COP at full", "ratio", _values(comparison, "full.cop"), units),
        change_row("COP at full against today", comparison, "plant_cop", "cop"),
        quantity_row("COP at the same cooling", "ratio", _values(comparison, "same_cooling.cop"), units),
        change_row("COP at the same cooling against today", comparison, "plant_cop_same_cooling", "cop"),
        *_ua_rows(comparison),
    )


def _electric_rows(comparison: Comparison, units: UnitSystem, label: str, name: str) -> tuple[Row, ...]:
    """Return the row of an electrical power, if losses of motor and drive are known: else it is the power above."""
    if comparison.case.compressor.motor_and_drive is None:
        return ()
    return (quantity_row(label, "power", _values(comparison, name), units),)


UA_NOT_MEASURED = "calculated, not measured"
UA_ORIGINS = {"given": "as the case gives it", "new plant": "new plant, as today's", "unknown": "not known, taken as 1"}


def _ua_rows(comparison: Comparison) -> tuple[Row, ...]:
    """Return the factors on both conductances, what they rest on, and what they do to the cooling, if any is not 1."""
    plants = [entry.plant for entry in comparison.entries]
    if all(plant is None or all(one.factor == one.high == 1.0 for one in plant.ua_factors) for plant in plants):
        return ()
    rows = []
    for i, name in enumerate(("evaporator", "condenser")):
        both = [None if plant is None else plant.ua_factors[i] for plant in plants]
        rows += [
            Row(f"UA factor of the {name}, {UA_NOT_MEASURED}", "", tuple(Cell(ua_text(one)) for one in both)),
            Row(
                f"Flow, share of the film: {name}",
                "",
                tuple(Cell(_ua_basis(one), is_number=False) for one in both),
            ),
        ]
    effect = [None if p is None else p.full.cooling_W / p.cooling_with_equal_ua_W for p in plants]
    cells = tuple(Cell(change_text(value, 0.0)) for value in effect)
    return (*rows, Row("What the UA factors do to the cooling", "%", cells))


def ua_text(one: UAFactor | None) -> str:
    """Return a factor on a conductance with its band, as text.

    Args:
        one: The factor; None where the refrigerant has none.
    """
    if one is None:
        return MISSING
    if one.low == one.high:
        return f"{one.factor:g}"
    return f"{one.factor:.2f} ({one.low:.2f} to {one.high:.2f})"


def _ua_basis(one: UAFactor | None) -> str:
    if one is None or one.origin == "today":
        return MISSING
    if one.origin in UA_ORIGINS or one.flow is None or one.share is None:
        return UA_ORIGINS[one.origin]
    kind = KINDS[one.kind]
    low, share, high = (f"{100.0 * value:.0f}" for value in (kind.low, one.share, kind.high))
    return f"flow × {one.flow:.2f}; {share} % ({low} to {high} %)"


def _run_heading(comparison: Comparison, units: UnitSystem) -> str:
    return f"Basis: same plant, delivering {cooling_needed_text(comparison, units)}"


def cooling_needed_text(comparison: Comparison, units: UnitSystem) -> str:
    """Return the cooling that the plant has to deliver, and why it is less than that of the case if it is.

    Args:
        comparison: A result with the basis same plant.
        units: The reader's units.
    """
    needed = next(entry.plant.operation.cooling_needed_W for entry in comparison.entries if entry.plant)
    duty, text = comparison.case.duty.cooling_W, units.with_unit("cooling", needed)
    if needed < duty * (1.0 - 1e-9):
        asked = units.with_unit("cooling", duty)
        return f"{text}, all that today's plant gives by the same numbers (the case asks for {asked})"
    return f"the {text} of the case"


def _run(comparison: Comparison, units: UnitSystem, notes: Notes) -> tuple[Row, ...]:
    def operation(name: str) -> list[float | None]:
        return _values(comparison, f"operation.{name}")

    rows = [
        quantity_row("Running, share of the time", "fraction", operation("run_time_fraction"), units),
        *speed_rows(comparison, units, operation("speed_fraction")),
        quantity_row("Compressor power, mean over the time", "power", operation("mean_power_W"), units),
        *_electric_rows(comparison, units, "Electrical power, mean over the time", "mean_electric_W"),
        change_row("Mean power against today", comparison, "plant_mean_power", "capacity"),
        Row("Cooling it lacks though it runs all the time", units.label("cooling"), _unmet_cells(comparison, units)),
    ]
    for entry in comparison.entries:
        if entry.plant and entry.plant.operation.unmet_W > 0.0:
            notes.mark(
                entry.refrigerant.display_name,
                "on the basis same plant it lacks cooling: its mean power buys less cooling than today's",
            )
    return tuple(rows)


def speed_rows(comparison: Comparison, units: UnitSystem, speeds: list[float | None]) -> tuple[Row, ...]:
    """Return the row of speeds if any refrigerant runs slower than full."""
    if all(speed is None or speed == 1.0 for speed in speeds):
        return ()
    return (quantity_row("Speed while it runs, share of full", "fraction", speeds, units),)


def _unmet_cells(comparison: Comparison, units: UnitSystem) -> tuple[Cell, ...]:
    return tuple(Cell(unmet_text(entry, comparison.existing, units, "none")) for entry in comparison.entries)


def unmet_text(entry: Entry, today: Entry, units: UnitSystem, nothing: str) -> str:
    """Return the cooling a refrigerant lacks; one inside the band of the model begins with the sign ≈.

    Args:
        entry: A refrigerant.
        today: The existing one, whose cooling is what it has to reach.
        units: The reader's units.
        nothing: What stands for lacking none. [-]
    """
    if entry.plant is None:
        return MISSING
    lacks, needed = entry.plant.operation.unmet_W, entry.plant.operation.cooling_needed_W
    if lacks <= 0.0:
        return nothing
    text = stacked(
        *(
            system.text("cooling", lacks, decimals=system.displays["cooling"].decimals_for([needed]))
            for system in units.systems
        )
    )
    return near(text) if lacks <= pair_band(today, entry, "capacity") * needed else text
