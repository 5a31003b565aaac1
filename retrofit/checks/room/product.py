"""Charge factors of the product standard of air conditioners and heat pumps, IEC 60335-2-40."""

from __future__ import annotations

from retrofit.case import Room
from retrofit.checks.room.lfl import M1_M3, M2_M3, M3_M3
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


def limits(refrigerant: Refrigerant, room: Room) -> tuple[WorkedLimit, ...]:
    """Return the charge factors of a flammable refrigerant in comfort use; they are no limit by themselves.

    Args:
        refrigerant: The refrigerant.
        room: The room.
    Returns: One working, or nothing where the standard is not about such a plant.
    """
    parsed = class_of(refrigerant)
    if parsed is None or parsed.flammability == "1" or room.comfort is not True:
        return ()
    work = Work(flags=[*class_flags(refrigerant), "the factors are from memory: look up the edition in force"])
    lfl = work.number("LFL", refrigerant.lfl_kg_per_m3, refrigerant)
    if lfl is not None:
        volumes = VOLUMES_M3[parsed.flammability]
        work.lines += [
            f"{name} = {volume:g} m³ · {concentration(lfl)} = {mass(found)}"
            for name, volume, found in zip(
                ("m1", "m2", "m3"), volumes, factors_kg(lfl, parsed.flammability), strict=True
            )
        ]
    work.missing.append(
        "rules by area, airflow and tightness of the edition in force, which are not held here: up to m1 no room is "
        "asked for, above m3 the standard ends"
    )
    return (work.limit(RULE, None, "", "a factory-built air conditioner or heat pump with a flammable refrigerant"),)
