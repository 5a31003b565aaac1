"""Which rows and sections rest on values that the case does not give, so that each carries a sign with a legend."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace

from retrofit.case import Case
from retrofit.report.inputs import defaults
from retrofit.report.table import Group, Row, Table
from retrofit.study import Comparison
from retrofit.units import UnitSystem, listed

SIGN = "†"
_CYCLE = ("duty.reading", "compare.match")
_SUPERHEATS = ("duty.useful_superheat", "duty.line_superheat")
_EFFECTS = (*_CYCLE, *_SUPERHEATS, "duty.subcooling")
_MACHINE = (
    "compressor.kind",
    "compressor.isentropic_efficiency",
    "compressor.volumetric_efficiency",
    "compressor.heat_loss",
)
_DRIVE = ("compressor.motor_efficiency", "compressor.drive_efficiency")  # from readings, or not there
_EXCHANGERS = tuple(f"{way}.{key}" for way in ("evaporator", "condenser") for key in ("ua_factor", "pressure_drop"))
_PLANT = (*_EFFECTS, *_MACHINE, *_EXCHANGERS, "evaporator.specific_heat", "condenser.specific_heat")
_ALL = (*_PLANT, *_DRIVE, "year", "emissions", "options")
_LIFE = (*_ALL, "money")
_GWP = ("emissions.gwp_edition",)
# Defaults that the rows of a group of the comparison rest on, by the name of the group; a table of the case stands for
# all of its keys.
GROUPS = {
    "pressures": _CYCLE,
    "temperatures": _CYCLE,
    "efficiency": (*_EFFECTS, *_MACHINE),
    "duty": (*_EFFECTS, *_MACHINE),
    "compressor": (*_EFFECTS, *_MACHINE),
    "plant-settled": _PLANT,
    "plant-full": _PLANT,
    "plant-run": _PLANT,
    "settings": _CYCLE,
    "year": (*_PLANT, *_DRIVE, "year"),
    "parts": (*_PLANT, *_DRIVE, "year"),
    "charge": (),
    "tewi": (),
    "yearly": (),
    "once": ("options",),
    "life": ("options",),
    "shares": _PLANT,
}
# And some rows on more, by a part of their label.
ROWS = {
    "gauge": ("plant.altitude",),
    "Discharge": (*_SUPERHEATS, *_MACHINE),
    "Evaporator inlet": ("duty.subcooling",),
    "Evaporator mean": ("duty.subcooling",),
    "Glide in the evaporator": ("duty.subcooling",),
    "GWP over": _GWP,
    "CO2e of the charge": _GWP,
    "leaking in the years": _GWP,
    "lost at the end": (*_GWP, "emissions.recovery_at_end"),
    "lost at the change": (*_GWP, "emissions.lost_at_change", "emissions.old_charge"),
    "Direct, all": ("emissions",),
    "Electrical power": _DRIVE,
    "Indirect, all": (*_PLANT, *_DRIVE, "year", "emissions"),
    "Sum": _ALL,
    "Energy": (*_PLANT, *_DRIVE, "year"),
    "Demand charge": (*_PLANT, *_DRIVE, "year"),
    "Annual cost": _ALL,
    "Annual saving": _ALL,
    "Residual value": ("money.new_plant_life",),
    "Life cost": _LIFE,
    "Payback": _ALL,
    "payback": _ALL,
    "paying back": _ALL,
    "pays back": _ALL,
    "Net present value": _LIFE,
    "Cost of CO2e": _LIFE,
    "less electricity": (*_PLANT, "year"),
    "costs less": _LIFE,
    "warms less": _ALL,
}
WORDS = ("What is done",)  # rows that rest on nothing
# Tables of the case whose defaults a section rests on.
SECTIONS = {
    "found": ("plant", "readings", "evaporator", "condenser"),
    "hardware": ("plant", "duty", "compressor", "evaporator", "condenser", "lines", "valve", "receiver", "compare"),
    "law": ("law",),
    "room": ("room", "machinery_room"),
}


def marked(comparison: Comparison, groups: Sequence[Group]) -> tuple[Group, ...]:
    """Return the groups of a table with the sign on every row that rests on an assumed value.

    Args:
        comparison: The result.
        groups: Groups of the comparison or of the set points.
    """
    return tuple(
        replace(group, rows=tuple(_marked(row, _rests(comparison, group, row)) for row in group.rows))
        for group in groups
    )


def with_signs(comparison: Comparison, table: Table | None, units: UnitSystem) -> Table | None:
    """Return a table with the sign on every row that rests on an assumed value, and what it stands for.

    Args:
        comparison: The result.
        table: The table, or None.
        units: The reader's units.
    """
    if table is None:
        return None
    return replace(table, groups=marked(comparison, table.groups), assumed=legend(comparison, table.groups, units))


def legend(comparison: Comparison, groups: Iterable[Group], units: UnitSystem) -> str:
    """Return what the sign in a table stands for; empty if no row carries it.

    Args:
        comparison: The result.
        groups: The groups of the table.
        units: The reader's units.
    """
    keys = {key for group in groups for row in group.rows for key in _rests(comparison, group, row)}
    return _legend(comparison.case, keys, units)


def section_legends(case: Case, units: UnitSystem) -> dict[str, str]:
    """Return for each section of `SECTIONS` which assumed values it rests on, in words; empty for none.

    Args:
        case: The case.
        units: The reader's units.
    """
    taken = [default.key for default in case.defaults]
    return {
        name: _legend(case, {key for key in taken if key.split(".")[0] in tables}, units)
        for name, tables in SECTIONS.items()
    }


def _marked(row: Row, keys: Sequence[str]) -> Row:
    return replace(row, sign=SIGN) if keys else row


def _rests(comparison: Comparison, group: Group, row: Row) -> list[str]:
    """Return the keys left out of the case that a row rests on."""
    on = {*GROUPS.get(group.name, ()), *(key for part, keys in ROWS.items() if part in row.label for key in keys)}
    if group.name == "settings":  # as gauges show them
        on.add("plant.altitude")
    if group.name not in GROUPS or row.label in WORDS:
        return []
    return [item.key for item in comparison.case.defaults if item.key in on or item.key.partition(".")[0] in on]


def _legend(case: Case, keys: set[str], units: UnitSystem) -> str:
    texts = [f"`{item.key}` {item.used}" for item in defaults(case, units) if item.key in keys]
    return f"{SIGN} Rests on what was assumed, for the case does not give it: {listed(texts, 'and')}." if texts else ""
