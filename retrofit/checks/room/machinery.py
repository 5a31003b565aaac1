"""The machinery room: ventilation by charge, set points of detectors, relief discharge; as questions with numbers."""

from __future__ import annotations

import math

from retrofit.case import MachineryRoom
from retrofit.checks.room.lists import read
from retrofit.checks.room.working import class_of, concentration, mass, room_volume, value_flags
from retrofit.refrigerants import Refrigerant, ppm_to_kg_per_m3
from retrofit.study.room import Question
from retrofit.units import SI, listed
from retrofit.units.table import CUBIC_FOOT_M3, FOOT_M, MINUTE_S, POUND_KG

CFM_M3_PER_S = CUBIC_FOOT_M3 / MINUTE_S
VENTILATION_M3_PER_S = 0.07  # by the square root of the charge in kg
VENTILATION_CFM = 100.0  # by the square root of the charge in lb
NORMAL_M_PER_S = 0.0025  # m3/s of air by m2 of floor
QUARTER_OF_LFL = 0.25
HALF_OF_ATEL = 0.5
SURFACE_MARGIN_K = 100.0
ABOVE_GRADE_M, FROM_OPENINGS_M = 15.0 * FOOT_M, 20.0 * FOOT_M
MANAGED_AMMONIA_KG = 10_000.0 * POUND_KG
WEAKNESS = "the rule looks at the charge alone, not at refrigerant, density of its vapour or size of the room"


def ventilation_m3_per_s(charge_kg: float) -> float:
    """Return the emergency ventilation of a machinery room by ASHRAE 15, classes A1 and B1. [m3/s]

    Args:
        charge_kg: Charge of the largest system in the room. [kg]
    Source: model codes after ASHRAE 15, Q = 0.07 sqrt(G), read; known weakness: ASHRAE research project 1448.
    """
    return VENTILATION_M3_PER_S * math.sqrt(charge_kg)


def ventilation_cfm(charge_lb: float) -> float:
    """Return the same in the inch-pound form, Q = 100 sqrt(G). [cfm]

    Args:
        charge_lb: Charge of the largest system in the room. [lb]
    Source: model codes after ASHRAE 15, read.
    """
    return VENTILATION_CFM * math.sqrt(charge_lb)


def ventilation_en378_m3_per_s(charge_kg: float) -> float:
    """Return the emergency ventilation of a machinery room by EN 378-3. [m3/s]

    Args:
        charge_kg: Charge of the largest system in the room. [kg]
    Source: EN 378-3, V = 0.014 m^(2/3), from memory (high confidence).
    """
    return float(0.014 * charge_kg ** (2.0 / 3.0))


def machinery_questions(
    refrigerant: Refrigerant,
    machinery: MachineryRoom | None,
    charge_kg: float | None,
    p_standstill_Pa: float | None,
    families: tuple[str, ...],
) -> tuple[Question, ...]:
    """Return what is asked of a machinery room with a refrigerant, with numbers where a source gives a formula.

    Args:
        refrigerant: The refrigerant.
        machinery: The room, None if the case has none.
        charge_kg: Charge of the largest system, None if not known. [kg]
        p_standstill_Pa: Pressure at rest at the highest ambient temperature, None if not known. [Pa]
        families: The code families.
    """
    room = machinery or MachineryRoom.model_validate({})
    found = []
    if "ASHRAE 15" in families:
        found.append(_ventilation_ashrae(refrigerant, room, charge_kg))
    if set(families) & {"EN 378", "ISO 5149"}:
        found.append(_ventilation_en378(room, charge_kg))
    detection = _levels(refrigerant, room, charge_kg, families) or _detection(refrigerant, room, families)
    found += [_normal_ventilation(room), *detection, *_relief(), *_own(refrigerant, charge_kg)]
    return (*found, _standstill(refrigerant, p_standstill_Pa))


def _ventilation_ashrae(refrigerant: Refrigerant, room: MachineryRoom, charge_kg: float | None) -> Question:
    parsed = class_of(refrigerant)
    missing = [] if charge_kg is not None else ["charge of the largest system"]
    if parsed is None or parsed.flammability != "1":
        name = refrigerant.safety_class.text or "not stated"
        missing.append(
            f"the table of the standard for class {name}, which is not held here: this rule is for A1 and B1"
        )
    lines: list[str] = []
    flow = None
    if charge_kg is not None and not missing:
        flow, pounds = ventilation_m3_per_s(charge_kg), charge_kg / POUND_KG
        lines += [
            f"Q = 0.07 · ({mass(charge_kg)})^(1/2) = {flow:.3g} m³/s",
            f"Q = 100 · ({pounds:.4g} lb)^(1/2) = {ventilation_cfm(pounds):.4g} cfm "
            f"= {ventilation_cfm(pounds) * CFM_M3_PER_S:.3g} m³/s",
            WEAKNESS,
        ]
        lines += _against_fan(room, flow)
    missing += [] if room.ventilation_m3_per_s is not None else ["`ventilation` in [machinery_room]"]
    text = "Does the emergency ventilation reach what ASHRAE 15 asks by charge, and does the detector start it?"
    source = "model codes after ASHRAE 15 (MC 1105.6.3.2 and 1106.2), read; weakness: ASHRAE RP-1448, abstract read"
    return Question("ventilation", text, tuple(lines), "volume flow", flow, tuple(missing), source, "read")


def _ventilation_en378(room: MachineryRoom, charge_kg: float | None) -> Question:
    missing = [] if charge_kg is not None else ["charge of the largest system"]
    missing += [] if room.ventilation_m3_per_s is not None else ["`ventilation` in [machinery_room]"]
    flow, lines = None, []
    if charge_kg is not None:
        flow = ventilation_en378_m3_per_s(charge_kg)
        lines = [f"V = 0.014 · ({mass(charge_kg)})^(2/3) = {flow:.3g} m³/s", WEAKNESS, *_against_fan(room, flow)]
        if room.volume_m3 is not None:
            lines.append(f"15 changes an hour of {room_volume(room.volume_m3)}: {15 * room.volume_m3 / 3600:.3g} m³/s")
    text = "Does the emergency ventilation reach what EN 378-3 asks by charge, at most 15 changes an hour?"
    source = "EN 378-3, from memory (high confidence)"
    return Question("ventilation", text, tuple(lines), "volume flow", flow, tuple(missing), source, "memory")


def _against_fan(room: MachineryRoom, flow: float) -> list[str]:
    if room.ventilation_m3_per_s is None:
        return []
    word = "not below" if room.ventilation_m3_per_s >= flow else "below"
    return [f"given: {room.ventilation_m3_per_s:.3g} m³/s, {word} that"]


def _normal_ventilation(room: MachineryRoom) -> Question:
    flow = None if room.area_m2 is None else NORMAL_M_PER_S * room.area_m2
    lines = [] if flow is None else [f"0.0025 m³/s m² · {room.area_m2:.4g} m² = {flow:.3g} m³/s"]
    missing = () if flow is not None else ("`area` in [machinery_room]",)
    text = "Is there normal ventilation while people are in: by area, by person (20 cfm) or by a rise of 10 K?"
    source = "city code after ASHRAE 15 (US), read as one local example"
    return Question("normal ventilation", text, tuple(lines), "volume flow", flow, missing, source, "read")


def _levels(
    refrigerant: Refrigerant, room: MachineryRoom, charge_kg: float | None, families: tuple[str, ...]
) -> list[Question]:
    """Return the set points that a refrigerant has of its own; nothing for one without."""
    fitted, stands = _fitted(room)
    found = []
    for row in read("detectors")["level"]:
        if row["refrigerant"] != refrigerant.designation or not set(row["families"]) & set(families):
            continue
        if charge_kg is not None and not row.get("above_kg", -1.0) < charge_kg <= row.get("up_to_kg", math.inf):
            continue
        molar = refrigerant.molar_mass_kg_per_mol.number
        limit = None if molar is None else ppm_to_kg_per_m3(row["ppm"], molar)
        by_mass = "" if limit is None else f" = {concentration(limit)}"
        lines = (f"{row['ppm']:.5g} ppm of {refrigerant.designation}{by_mass}",)
        found.append(
            Question(
                "detection",
                f"By {listed(row['families'], 'and')}: {row['text'][:1].lower()}{row['text'][1:]}{stands}",
                lines,
                "density",
                limit,
                fitted,
                row["source"],
                row["basis"],
            )
        )
    return found


def _fitted(room: MachineryRoom) -> tuple[tuple[str, ...], str]:
    """Return what is missing on the detector, and what the case says of it in words."""
    if room.detector is None:
        return ("`detector` in [machinery_room]",), ""
    return (), " One is fitted." if room.detector else " None is fitted."


def _detection(refrigerant: Refrigerant, room: MachineryRoom, families: tuple[str, ...]) -> list[Question]:
    fitted, stands = _fitted(room)
    found = []
    parsed = class_of(refrigerant)
    if parsed is None or parsed.flammability != "1":
        value = refrigerant.lfl_kg_per_m3
        lfl = value.number
        lines = [] if lfl is None else [
            f"0.25 · {concentration(lfl)} = {concentration(QUARTER_OF_LFL * lfl)}",
            *value_flags("LFL", value, refrigerant),
        ]  # fmt: skip
        missing = fitted if lfl is not None else (*fitted, f"LFL of {refrigerant.designation}")
        found.append(
            Question(
                "detection",
                f"Does a detector act no later than at a quarter of the LFL, within 30 s?{stands}",
                tuple(lines),
                "density",
                None if lfl is None else QUARTER_OF_LFL * lfl,
                missing,
                "A2L in the US: trade press on ASHRAE 15 addenda, read; 30 s: model code, read; other classes: memory",
                "read" if refrigerant.safety_class.text == "A2L" else "memory",
            )
        )
    found.append(_exposure(refrigerant, fitted, stands))
    if set(families) & {"EN 378", "ISO 5149"}:
        found.append(_half_atel(refrigerant, fitted))
    return found


def _exposure(refrigerant: Refrigerant, fitted: tuple[str, ...], stands: str) -> Question:
    value, molar = refrigerant.oel_ppm, refrigerant.molar_mass_kg_per_mol.number
    limit, lines = None, []
    if value.number is not None:
        limit = None if molar is None else ppm_to_kg_per_m3(value.number, molar)
        by_mass = "" if limit is None else f" = {concentration(limit)}"
        lines.append(f"OEL of {refrigerant.designation} = {value.number:.4g} ppm{by_mass} ({value.source})")
        lines += value_flags("OEL", value, refrigerant)
    return Question(
        "detection",
        f"Does an alarm act no later than at the exposure limit, within 30 s, inside and outside the door?{stands}",
        tuple(lines),
        "density",
        limit,
        fitted if lines else (*fitted, f"OEL of {refrigerant.designation}"),
        "ASHRAE 15, from memory (high confidence); 30 s: model code, read",
        "memory",
    )


def _half_atel(refrigerant: Refrigerant, fitted: tuple[str, ...]) -> Question:
    value = refrigerant.atel_odl_kg_per_m3
    lines = [] if value.number is None else [
        f"0.5 · {concentration(value.number)} = {concentration(HALF_OF_ATEL * value.number)}",
        *value_flags("ATEL/ODL", value, refrigerant),
    ]  # fmt: skip
    return Question(
        "detection",
        "By EN 378-3: does the detector act no later than at half the ATEL/ODL?",
        tuple(lines),
        "density",
        None if value.number is None else HALF_OF_ATEL * value.number,
        fitted if value.number is not None else (*fitted, f"ATEL/ODL of {refrigerant.designation}"),
        "EN 378-3, from memory (medium confidence)",
        "memory",
    )


def _relief() -> list[Question]:
    source = "city code (US), read as one local example"
    return [
        Question("relief", f"Does the relief line end outdoors, {what}?", (line,), "length", value, (), source, "read")
        for what, line, value in (
            ("high enough above the ground", f"15 ft = {ABOVE_GRADE_M:.3g} m above grade", ABOVE_GRADE_M),
            ("far enough from openings", f"20 ft = {FROM_OPENINGS_M:.3g} m from openings", FROM_OPENINGS_M),
        )
    ] + [
        Question(
            "relief",
            "Do capacity of the relief valve and length of its line suit the new refrigerant and vessel? Where "
            "does what it lets out go, with people, fresh air and sources of ignition near?",
            (),
            "",
            None,
            ("capacity factor of the refrigerant in the standard, which is not held here",),
            "ASHRAE 15 and EN 13136, from memory (high confidence)",
            "memory",
        )
    ]


def _own(refrigerant: Refrigerant, charge_kg: float | None) -> list[Question]:
    """Return what ammonia, carbon dioxide and flammable vapour ask beyond the rest."""
    found = []
    if refrigerant.designation == "R717":
        lines = [] if charge_kg is None else [f"{mass(charge_kg)} against 10 000 lb = {mass(MANAGED_AMMONIA_KG)} (US)"]
        text = (
            "Ammonia is toxic: who is near, where does the wind carry a release, is there breathing protection, a "
            "shower and a plan? From 10 000 lb the US asks for process safety management; other countries have limits "
            "of their own."
        )
        missing = () if charge_kg is not None else ("charge of the largest system",)
        found.append(
            Question("toxic", text, tuple(lines), "mass", MANAGED_AMMONIA_KG, missing, "trade text (US), read", "read")
        )
    if any(name == "R744" for name, _ in refrigerant.composition):
        text = (
            "Carbon dioxide suffocates and acts on breathing from a few per cent, without smell, and gathers low: is "
            "every pit, cold room and cellar that a leak can reach watched, with alarm outside too?"
        )
        found.append(Question("asphyxiant", text, (), "", None, (), "common knowledge of the trade", "practice"))
    ignition = refrigerant.autoignition_K.number
    parsed = class_of(refrigerant)
    if parsed is None or parsed.flammability != "1":
        surface = None if ignition is None else ignition - SURFACE_MARGIN_K
        lines = [] if surface is None else [
            f"{SI.with_unit('temperature', ignition, decimals=0)} − 100 K = "
            f"{SI.with_unit('temperature', surface, decimals=0)}"
        ]  # fmt: skip
        missing = () if surface is not None else (f"auto-ignition temperature of {refrigerant.designation}",)
        text = "Does every surface within reach of a leak stay at least 100 K below the auto-ignition temperature?"
        source = "handbook on hydrocarbon equipment and common practice"
        found.append(Question("hot surfaces", text, tuple(lines), "temperature", surface, missing, source, "practice"))
    return found


def _standstill(refrigerant: Refrigerant, p_standstill_Pa: float | None) -> Question:
    lines = [] if p_standstill_Pa is None else [f"at the highest ambient: {SI.with_unit('pressure', p_standstill_Pa)}"]
    missing = () if lines else ("standstill pressure: `highest_ambient` in [plant], or the model gives none there",)
    text = "Does every part bear the pressure of the stopped plant at the hottest ambient, or what holds it down?"
    if any(name == "R744" for name, _ in refrigerant.composition):
        text += (
            " Pure carbon dioxide passes its critical point at 31 °C: at rest its pressure follows charge and volume."
        )
    return Question(
        "standstill pressure", text, tuple(lines), "pressure", p_standstill_Pa, missing, "physics", "physics"
    )
