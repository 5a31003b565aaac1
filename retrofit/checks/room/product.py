"""Charges of the product standards: air conditioners and heat pumps (60335-2-40), commercial cabinets (60335-2-89).

They hold for factory-built equipment that passes their tests. They are shown beside the limits and decide nothing.
"""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.case import Room
from retrofit.checks.room.lfl import M1_M3, M2_M3, M3_M3
from retrofit.checks.room.places import holds_there
from retrofit.checks.room.working import Rule, Work, class_flags, class_of, concentration, mass
from retrofit.refrigerants import Refrigerant
from retrofit.study.room import WorkedLimit

FAMILY = "IEC 60335-2-40"
# Volumes of air that one LFL is multiplied by, for m1, m2 and m3.
VOLUMES_M3 = {"2L": (6.0, 52.0, 260.0), "2": (M1_M3, M2_M3, M3_M3), "3": (M1_M3, M2_M3, M3_M3)}
RULE = Rule(
    "product-factors",
    "Charge factors of the product standard",
    FAMILY,
    "recent editions",
    "m1, m2, m3 = 6, 52 and 260 m³ · LFL in class 2L; 4, 26 and 130 m³ · LFL in classes 2 and 3",
    ("m1, m2, m3: charges from which the standard asks for more [kg]", "LFL: lower flammability limit [kg/m³]"),
    "IEC 60335-2-40, recent editions, from memory (medium confidence)",
    "memory",
    "product standard",
)


def factors_kg(lfl_kg_per_m3: float, flammability: str) -> tuple[float, ...]:
    """Return the charges m1, m2 and m3 of the product standard. [kg]

    Args:
        lfl_kg_per_m3: Lower flammability limit. [kg/m3]
        flammability: "2L", "2" or "3".
    Source: IEC 60335-2-40, recent editions, from memory.
    """
    return tuple(volume * lfl_kg_per_m3 for volume in VOLUMES_M3[flammability])


@dataclass(frozen=True)
class Cabinet:
    """A product standard of commercial cabinets: volume of air by the LFL, and the most. [m3, kg]"""

    method: str
    title: str
    standard: str
    edition: str
    jurisdictions: tuple[str, ...]
    volume_m3: float
    most_kg: float | None
    source: str


CABINETS = (
    Cabinet(
        "cabinet",
        "Commercial cabinet, factory-built",
        "EN IEC 60335-2-89",
        "2022, cited for the Machinery Directive from 2 August 2023",
        ("EU", "NI"),
        13.0,
        1.2,
        "about 500 g of R290 and 1.2 kg: trade press on Decision (EU) 2023/1586, read in extracts; 13 m³ · LFL from "
        "memory (high confidence)",
    ),
    Cabinet(
        "cabinet-doors",
        "Commercial cabinet with doors, factory-built",
        "UL 60335-2-89",
        "second edition",
        ("US",),
        8.0,
        None,
        "300 g of R290: trade press on SNAP Rule 26, read in an extract; 8 m³ · LFL from memory (high confidence)",
    ),
    Cabinet(
        "cabinet-open",
        "Commercial cabinet without doors, factory-built",
        "UL 60335-2-89",
        "second edition",
        ("US",),
        13.0,
        None,
        "500 g of R290: trade press on SNAP Rule 26, read in an extract; 13 m³ · LFL from memory (high confidence)",
    ),
)


def limits(refrigerant: Refrigerant, room: Room, jurisdiction: str | None = None) -> tuple[WorkedLimit, ...]:
    """Return what product standards say of a flammable refrigerant; it is no limit of a room.

    Args:
        refrigerant: The refrigerant.
        room: The room.
        jurisdiction: Whose standards, None if not stated: then of every place held here.
    Returns: In comfort use the charge factors; for a factory-sealed system in another use the charge of a cabinet;
        nothing where no product standard is about such a plant.
    """
    parsed = class_of(refrigerant)
    if parsed is None or parsed.flammability == "1":
        return ()
    if room.comfort:
        return (factors(refrigerant, parsed.flammability),)
    if room.comfort is None or not room.sealed or parsed.toxicity == "B":
        return ()
    return tuple(cabinet(refrigerant, item) for item in CABINETS if holds_there(item.jurisdictions, jurisdiction))


def cabinet(refrigerant: Refrigerant, standard: Cabinet) -> WorkedLimit:
    """Return the charge that a product standard of cabinets takes.

    Args:
        refrigerant: The refrigerant.
        standard: The standard.
    """
    work = Work(flags=[*class_flags(refrigerant), "the standard asks for tests of the product beside the charge"])
    lfl, limit, decided_by = work.number("LFL", refrigerant.lfl_kg_per_m3, refrigerant), None, "LFL"
    if lfl is not None:
        limit = standard.volume_m3 * lfl
        work.lines.append(f"{standard.volume_m3:g} m³ · {concentration(lfl)} = {mass(limit)}")
        if standard.most_kg is not None and standard.most_kg < limit:
            work.lines.append(f"at most {mass(standard.most_kg)}")
            limit, decided_by = standard.most_kg, "most of the standard"
    most = "" if standard.most_kg is None else f", at most {mass(standard.most_kg)}"
    rule = Rule(
        standard.method,
        standard.title,
        standard.standard,
        standard.edition,
        f"m = {standard.volume_m3:g} m³ · LFL{most}",
        ("m: charge [kg]", "LFL: lower flammability limit [kg/m³]"),
        standard.source,
        "memory",
        "product standard",
    )
    return work.limit(
        rule, limit, decided_by, "a factory-sealed system in another use than comfort, if it is a cabinet"
    )


def factors(refrigerant: Refrigerant, flammability: str) -> WorkedLimit:
    """Return the charge factors of a flammable refrigerant in comfort use; they are no limit by themselves.

    Args:
        refrigerant: The refrigerant.
        flammability: "2L", "2" or "3".
    """
    work = Work(flags=[*class_flags(refrigerant), "the factors are from memory: look up the edition in force"])
    lfl = work.number("LFL", refrigerant.lfl_kg_per_m3, refrigerant)
    if lfl is not None:
        volumes = VOLUMES_M3[flammability]
        work.lines += [
            f"{name} = {volume:g} m³ · {concentration(lfl)} = {mass(found)}"
            for name, volume, found in zip(("m1", "m2", "m3"), volumes, factors_kg(lfl, flammability), strict=True)
        ]
    work.missing.append(
        "rules by area, airflow and tightness of the edition in force, which are not held here: up to m1 no room is "
        "asked for, above m3 the standard ends"
    )
    return work.limit(RULE, None, "", "a factory-built air conditioner or heat pump with a flammable refrigerant")
