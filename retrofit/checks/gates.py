"""The gates: each looks at one refrigerant of a result and says what it found, with threshold and source.

Numbers in the texts carry both the value and the limit, and are told in the reader's units; a source keeps the
units it was published in. No gate changes a number, and none says that a thing may be done.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

from retrofit.checks.at_rest import relief, standstill
from retrofit.checks.operating import (
    condenser,
    discharge_temperature,
    high_side,
    hottest_day,
    limit_of,
    motor,
    near_critical,
    pressure_ratio,
    vacuum,
)
from retrofit.checks.room.change import asked_text
from retrofit.refrigerants import change_cautions, parse_safety_class
from retrofit.study import Comparison, Entry, Family, Finding, Level, Performance
from retrofit.study.bands import pair_band, percent_text
from retrofit.units import listed, quantity

# The catalogue's short names of oil families, and the words of the case file.
OIL_FAMILIES = {
    "MO": "mineral",
    "AB": "alkylbenzene",
    "POE": "polyol ester",
    "PVE": "polyvinyl ether",
    "PAG": "polyalkylene glycol",
    "PAO": "polyalphaolefin",
}
UNSEEN = 5e-4  # a shortfall that no printed digit shows is none
NO_SOURCE = "catalogue, which states none"
Gate = Callable[[Comparison, Entry], Iterator[Finding]]


def capacity_needed_W(comparison: Comparison) -> float:
    """Return the cooling a candidate has to reach with the existing compressor. [W]

    That is the duty of the case; or what the existing refrigerant reaches by the same numbers, if that is
    less, since the plant is taken to carry its duty today.
    """
    today = comparison.existing.compressor
    duty = comparison.case.duty.cooling_W
    return min(duty, today.cooling_W) if today else duty


def cooling_reached(comparison: Comparison, entry: Entry) -> tuple[float, float, str] | None:
    """Return the cooling a refrigerant reaches, the cooling needed, and on which machine. [W]

    On the plant as installed where today's refrigerant and this one both balance there; else with the existing
    compressor at the temperatures of the case. None if nothing is known.
    """
    if entry.plant and comparison.existing.plant:
        return entry.plant.full.cooling_W, entry.plant.operation.cooling_needed_W, "on the plant as installed"
    if entry.compressor is None:
        return None
    return entry.compressor.cooling_W, capacity_needed_W(comparison), "with the existing compressor"


def class_change(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Stop a conversion to a more hazardous safety class, or to pressures that the plant was not built for."""
    if entry is comparison.existing:
        return
    old, new = comparison.existing.refrigerant, entry.refrigerant
    classes = [parse_safety_class(item.safety_class.value) for item in (old, new)]
    if None in classes:
        yield Finding(
            "safety-class",
            Level.UNKNOWN,
            "Safety class not stated",
            f"The safety class of {old.designation} or {new.designation} is not stated, so the step from one to the "
            "other cannot be judged.",
            "Look it up in ASHRAE 34 or ISO 817 before anything else.",
            new.safety_class.source or NO_SOURCE,
            decisive=True,
        )
    elif change_cautions(old, new):
        law = comparison.case.law
        yield Finding(
            "safety-class",
            Level.STOP,
            "More hazardous safety class than the plant was designed for",
            f"class {new.safety_class.text}; the plant was designed for {old.designation}, class "
            f"{old.safety_class.text}.",
            "Not a conversion: the whole system would have to meet the standard for the new class, with owner and "
            "authority informed and the nameplate changed. Give `new_plant` and `charge` in "
            f"[options.{new.designation}] to have it judged as a new plant. "
            f"{asked_text(law.jurisdiction if law else None)}",
            "ASHRAE 15 and EN 378 as summarised in trade guidance (from memory); equipment listings",
        )
    elif entry.family == Family.REPLACE:
        yield Finding(
            "pressure-class",
            Level.STOP,
            "Pressures beyond what the plant was designed for",
            f"{new.designation} needs a plant built for its pressures; this one was designed for {old.designation}.",
            f"Not a conversion. Give `new_plant` and `charge` in [options.{new.designation}] to have it judged as a "
            "new plant.",
            "common practice: refrigerants that boil below -55 degC at 1 atm go into plants built for them",
        )


def new_plant(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Say what holds of every new plant: its makers design it, and only duty, charge, room and law are judged here."""
    if not entry.is_new_plant:
        return
    yield Finding(
        "new-plant",
        Level.WORK,
        "New plant to be designed for its refrigerant",
        f"class {entry.refrigerant.safety_class.text or 'not stated'}.",
        "Judged here: the refrigerant at the same duty, its charge against the room, and law for new equipment. The "
        "maker of the plant answers for its pressures, materials, controls and protection.",
        "ASHRAE 15, ISO 5149 and EN 378: a new system meets the standard for its refrigerant and charge",
    )
    if parse_safety_class(entry.refrigerant.safety_class.value) is None:
        yield from class_change(comparison, entry)


def capacity(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the cooling on the existing machine with the cooling needed."""
    if entry is comparison.existing:
        if entry.compressor:
            yield from _today_against_duty(comparison, entry.compressor)
        return
    found = cooling_reached(comparison, entry)
    limit, band = limit_of(comparison, "capacity"), pair_band(comparison.existing, entry, "capacity")
    if found is None:
        return
    reached, needed, machine = found
    share = reached / needed
    level = limit.level_below(share + UNSEEN)
    if level is None:
        return
    doubt = f" The shortfall lies within the ±{percent_text(band)} of the model." if share > 1.0 - band else ""
    yield Finding(
        "capacity",
        level,
        f"Less cooling than needed {machine}",
        f"{quantity('cooling', reached, '.4g')}, {share:.0%} of the {quantity('cooling', needed, '.4g')} "
        f"needed.{doubt}",
        "Reduce the load, add displacement or choose another refrigerant.",
        limit.source,
    )


def compressor_data(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Note where a refrigerant leaves the range that the data of the compressor cover."""
    point = entry.plant.full if entry.plant else entry.duty
    if entry.is_covered is not False or point is None:
        return
    yield Finding(
        "compressor-data",
        "note",
        "Outside the data of the compressor",
        f"pressure ratio {point.pressure_ratio:.1f}, evaporating at {quantity('pressure', point.p_evap_Pa, '.2f')}.",
        "The efficiencies there are carried on from the nearest data; ask the maker for data with this refrigerant.",
        "range of the points or of the polynomial in the case",
    )


def _today_against_duty(comparison: Comparison, today: Performance[float]) -> Iterator[Finding]:
    """Note where swept volume and duty of the case do not describe one plant: a slip in either shows here."""
    duty = comparison.case.duty.cooling_W
    share = today.cooling_W / duty
    short, ample = limit_of(comparison, "displacement_short"), limit_of(comparison, "displacement_ample")
    level = short.level_below(share) or ample.level(share)
    if level is None:
        return
    measured = "what it reaches" if share < 1.0 else "the duty"
    yield Finding(
        "inputs-disagree",
        level,
        "Displacement and duty of the case do not quite agree",
        "with the displacement and efficiencies given, today's compressor reaches "
        f"{quantity('cooling', today.cooling_W, '.4g')}, {share:.0%} of the duty of "
        f"{quantity('cooling', duty, '.4g')}.",
        f"Candidates are measured against {measured}; check swept volume, speed and volumetric efficiency.",
        (short if share < 1.0 else ample).source,
    )


def glide(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Set the glide against the way the evaporators are fed."""
    if entry.duty is None:
        return
    found, feed = entry.duty.glide_evap_K, comparison.case.plant.evaporator
    flooded, high = limit_of(comparison, "glide_flooded"), limit_of(comparison, "glide")
    level, shown = flooded.level(found), quantity("temperature difference", found, ".1f")
    if level is not None and feed in ("flooded", "pumped"):
        yield Finding(
            "glide",
            level,
            f"Glide in a {feed} evaporator",
            f"{shown} of glide in the evaporator, against {flooded.figure_of('stop')}.",
            "The liquid pool takes another composition than what circulates.",
            flooded.source,
        )
    elif level is not None and feed is None:
        yield Finding(
            "glide",
            "unknown",
            "Glide, and the evaporator's feed is not stated",
            f"{shown} of glide in the evaporator.",
            "In a flooded or pumped evaporator that rules a refrigerant out. Give `evaporator` in [plant].",
            flooded.source,
            ("plant.evaporator",),
            decisive=True,
        )
    elif (mild := high.level(found)) is not None:
        yield Finding(
            "glide",
            mild,
            "Glide in the evaporator",
            f"{shown} between expansion valve and dew point.",
            "Superheat is counted from the dew point, subcooling from the bubble point; set points and valve settings "
            "move.",
            high.source,
        )


def oil(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Compare the oil in the plant with the oils usual for a candidate."""
    if entry is comparison.existing:
        return
    here = comparison.case.plant.oil
    usual = entry.refrigerant.lubricants
    families = [word for code, word in OIL_FAMILIES.items() if code in usual.text]
    if not families or here in (None, "unknown", "mixed"):
        yield Finding(
            "oil",
            "unknown",
            "Oil not known" if families else "Usual oil of the refrigerant not stated",
            f"usual {listed(families) if families else 'oil not stated'}; in the plant {here or 'not stated'}.",
            "Take a sample and ask the maker.",
            usual.source or NO_SOURCE,
            ("plant.oil",) if families else (),
        )
    elif here not in families:
        yield Finding(
            "oil",
            "work",
            "Another oil is usual",
            f"usual {listed(families)}; in the plant {here}.",
            "Expect oil changes until little of the old oil is left, and ask the maker for grade and limit.",
            usual.source,
        )


def model(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Say where the model of a refrigerant is not good enough to decide on."""
    if entry.grade is None:
        return
    if entry.grade.word in ("weak", "not checked"):
        yield Finding(
            "model-grade",
            "unknown",
            "Model of the refrigerant weak or not checked",
            f"{entry.grade.text[0].upper()}{entry.grade.text[1:]}.",
            "Get figures from the refrigerant's own tables.",
            "comparison with the catalogue's boiling points",
            decisive=True,
        )


def ozone(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """Stop a candidate that depletes the ozone layer; note a potential smaller than that of any controlled one."""
    depletion, limit = entry.refrigerant.odp, limit_of(comparison, "ozone")
    level = None if depletion.number is None else limit.level(depletion.number)
    if entry is comparison.existing or level is None:
        return
    advice = {
        "stop": "Charging a plant with such a refrigerant is banned or bound to conditions almost everywhere; ask the "
        "authority.",
        "note": "That is less than any substance the Montreal Protocol controls; ask the authority all the same.",
    }
    yield Finding(
        "ozone",
        level,
        "Depletes the ozone layer" if level == "stop" else "Very small ozone depletion potential",
        f"ozone depletion potential {depletion.number:.2g}, against {limit.stop:g} ({limit.unit}).",
        advice[level],
        f"{limit.source}; {depletion.source}",
    )


def always_work(comparison: Comparison, entry: Entry) -> Iterator[Finding]:
    """List what every conversion needs, whatever the numbers say."""
    if entry is comparison.existing or entry.status != "ok":
        return
    yield Finding(
        "conversion",
        "work",
        "Work that every conversion needs",
        "",
        "Recover and weigh the old charge, new filter driers, tightness test, evacuation, charge by weight, check of "
        "expansion valves, controls and switches, new label and log, written approval of the compressor maker.",
        "common practice; changeover procedures of the trade",
    )


GATES: tuple[Gate, ...] = (
    class_change,
    ozone,
    high_side,
    standstill,
    relief,
    hottest_day,
    near_critical,
    discharge_temperature,
    pressure_ratio,
    capacity,
    compressor_data,
    glide,
    vacuum,
    motor,
    condenser,
    oil,
    model,
    always_work,
)
# Of a new plant nothing of the existing machine counts.
GATES_OF_NEW_PLANT: tuple[Gate, ...] = (new_plant, ozone, model)
