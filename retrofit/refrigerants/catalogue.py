"""Build every refrigerant from the tables once, and find one by any common spelling of its designation."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from functools import cache

from retrofit.errors import UnknownRefrigerantError
from retrofit.refrigerants import blends, limits
from retrofit.refrigerants.records import Dispute, Refrigerant, Source, Value
from retrofit.refrigerants.safety import is_flammable
from retrofit.refrigerants.tables import Table, read_disputes, read_sources, read_table

RCL_AGREEMENT = 0.07  # two figures of two printed digits each may differ by this much and still agree


def designations() -> tuple[str, ...]:
    """Return the designation of every refrigerant of the catalogue, singles first. [-]"""
    return (*read_table("substances").rows, *read_table("blends").rows)


def source(key: str) -> Source:
    """Return the bibliography entry of a source key.

    Args:
        key: Key as a Value carries it. [-]
    Returns: The entry.
    Raises: KeyError if there is no such key.
    """
    return read_sources()[key]


def find(name: str) -> Refrigerant:
    """Return the refrigerant of that designation; spelling with or without R, hyphen, blanks or capitals.

    Args:
        name: Designation such as "R404A", "r-404a" or "404a". [-]
    Returns: The refrigerant.
    Raises: UnknownRefrigerantError, with close matches, if the catalogue has none of that name.
    >>> find(" r-404a ").designation
    'R404A'
    """
    designation = _spellings().get(_plain(name))
    if designation is None:
        raise _unknown(name)
    return _build(designation)


def _unknown(name: str) -> UnknownRefrigerantError:
    close = _close(str(name))
    hint = f"did you mean {' or '.join(close)}?" if close else "list them with 'retrofit refrigerants'"
    known = f"the catalogue holds {len(designations())} ASHRAE designations such as R404A"
    return UnknownRefrigerantError(f'no refrigerant "{name}": {known}; {hint}', close)


def _close(name: str) -> tuple[str, ...]:
    from difflib import get_close_matches  # only a misspelt name needs it

    chemical = name.strip().casefold()
    rows = read_table("substances").rows
    named = [designation for designation, row in rows.items() if chemical in _names(row["chemical_name"])]
    near = get_close_matches(_plain(name), _spellings(), n=3, cutoff=0.6)
    return tuple(dict.fromkeys([*named, *(_spellings()[spelling] for spelling in near)]))


def _names(chemical_name: str) -> list[str]:
    return [part.strip("() ") for part in chemical_name.casefold().split(" (")]


def _plain(name: str) -> str:
    kept = "".join(letter for letter in str(name).casefold() if letter.isalnum())
    return kept.removeprefix("r")


@cache
def _spellings() -> dict[str, str]:
    return {_plain(designation): designation for designation in designations()}


@cache
def _build(name: str) -> Refrigerant:
    disputes = read_disputes().get(name, ())
    values = {**_identity(name), **_safety(name), **_boiling(name), **_environment(name), **_use(name)}
    for dispute in disputes:
        values[dispute.field] = _disputed(values[dispute.field], dispute)
    values["lfl_vol_pct"] = _lfl_vol_pct(values)
    values["rcl_kg_per_m3"] = _checked_rcl(values)
    row = read_table("substances").rows.get(name, {})
    return Refrigerant(
        designation=name,
        kind=row.get("kind", "blend"),
        substance_group=row.get("substance_group", "blend"),
        composition=_composition(name),
        chemical_name=row.get("chemical_name", ""),
        cas=row.get("cas", ""),
        disputes=disputes,
        **values,
    )


def _composition(name: str) -> tuple[tuple[str, float], ...]:
    row = read_table("blends").rows.get(name)
    if row is None:
        return ((name, 1.0),)
    shares = (round(float(share) / 100.0, 6) for share in row["shares"].split("/"))
    return tuple(zip(row["components"].split("/"), shares, strict=True))


def _identity(name: str) -> dict[str, Value]:
    table = read_table("blends")
    if name not in table.rows:
        return {
            "composition_mass_pct": Value("100", "mass %", "Definition", "computed"),
            "tolerances_mass_pct": Value(None, "mass %", status="not applicable"),
            "molar_mass_kg_per_mol": read_table("substances").value(name, "molar_mass"),
        }
    shares = table.value(name, "shares")
    mass = blends.molar_mass(_components(name, read_table("substances"), "molar_mass"))
    return {
        "composition_mass_pct": shares,
        "tolerances_mass_pct": table.value(name, "tolerances"),
        "molar_mass_kg_per_mol": blends.remembered(mass, shares),
    }


def _components(name: str, table: Table, column: str) -> list[blends.Component]:
    groups = read_table("substances").rows
    return [
        blends.Component(part, fraction, groups[part]["substance_group"], table.value(part, column))
        for part, fraction in _composition(name)
    ]


def _safety(name: str) -> dict[str, Value]:
    columns = {
        "safety_class": "safety_class",
        "lfl_kg_per_m3": "lfl_mass",
        "lfl_vol_pct": "lfl_volume",
        "rcl_ppm": "rcl_volume",
        "rcl_kg_per_m3": "rcl_mass",
        "oel_ppm": "oel",
        "practical_limit_kg_per_m3": "practical_limit",
        "atel_odl_kg_per_m3": "atel_odl",
        "autoignition_K": "autoignition",
    }
    table = read_table("safety")
    values = {field: table.value(name, column) for field, column in columns.items()}
    if values["lfl_kg_per_m3"].source == "":
        values["lfl_kg_per_m3"] = _lfl_by_class(values["lfl_kg_per_m3"], values["safety_class"])
    return values


def _lfl_by_class(blank: Value, safety_class: Value) -> Value:
    if is_flammable(safety_class.value) is not False:
        return blank
    note = f"no lower limit: no flame propagation in the test, by its class {safety_class.value}"
    return replace(safety_class, value=None, unit=blank.unit, note=note, status="not applicable")


def _lfl_vol_pct(values: dict[str, Value]) -> Value:
    stated, by_mass = values["lfl_vol_pct"], values["lfl_kg_per_m3"]
    molar_mass = values["molar_mass_kg_per_mol"].number
    if by_mass.status == "not applicable":
        return replace(by_mass, unit=stated.unit)
    if stated.value is not None or by_mass.number is None or molar_mass is None:
        return stated
    share = limits.kg_per_m3_to_vol_pct(by_mass.number, molar_mass)
    note = "from the mass limit at 25 °C and 101.325 kPa"
    return Value(share, stated.unit, "Computed", "computed", note=_join(note, by_mass.note))


def _checked_rcl(values: dict[str, Value]) -> Value:
    """Add to the RCL by mass what its own ppm figure, ATEL/ODL and LFL say, where they disagree with it."""
    rcl = values["rcl_kg_per_m3"]
    if rcl.number is None:
        return rcl
    notes = [
        f"{label} gives {other:.2g} kg/m³"
        for label, other in _rcl_comparisons(values)
        if abs(other / rcl.number - 1.0) > RCL_AGREEMENT
    ]
    return replace(rcl, note=_join(rcl.note, *notes))


def _rcl_comparisons(values: dict[str, Value]) -> Iterable[tuple[str, float]]:
    ppm, molar_mass = values["rcl_ppm"].number, values["molar_mass_kg_per_mol"].number
    if ppm is not None and molar_mass is not None:
        yield "its own ppm figure", limits.ppm_to_kg_per_m3(ppm, molar_mass)
    lfl, atel_odl = values["lfl_kg_per_m3"].number, values["atel_odl_kg_per_m3"].number
    if atel_odl is not None:
        quarter_lfl = 0.25 * lfl if lfl is not None else atel_odl
        yield "the smaller of ATEL/ODL and a quarter of the LFL", min(atel_odl, quarter_lfl)


def _boiling(name: str) -> dict[str, Value]:
    table = read_table("boiling")
    bubble = table.value(name, "bubble_1atm")
    is_blend = name in read_table("blends").rows
    return {"bubble_1atm_K": bubble, "dew_1atm_K": table.value(name, "dew_1atm") if is_blend else bubble}


def _environment(name: str) -> dict[str, Value]:
    table, blend_table = read_table("environment"), read_table("blends")
    if name not in blend_table.rows:
        return {column: table.value(name, column) for column in ("odp", *blends.GWP_BASES)}
    values = {basis: blends.gwp(_components(name, table, basis), basis) for basis in blends.GWP_BASES}
    values["odp"] = blends.odp(_components(name, table, "odp"))
    shares = blend_table.value(name, "shares")
    return {field: blends.remembered(value, shares) for field, value in values.items()}


def _use(name: str) -> dict[str, Value]:
    table = read_table("use")
    return {column: table.value(name, column) for column in ("lubricants", "typical_use")}


def _disputed(value: Value, dispute: Dispute) -> Value:
    status = value.status or ("unresolved" if dispute.status == "unresolved" else "")
    return replace(value, note=_join(value.note, dispute.text), status=status)


def _join(*notes: str) -> str:
    return "; ".join(note for note in notes if note)
