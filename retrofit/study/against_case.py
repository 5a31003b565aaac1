"""Where readings on a running plant do not go together with what the case says; the study uses the case."""

from __future__ import annotations

from retrofit.case import Case
from retrofit.cycle import Temperatures, matched_pressures
from retrofit.errors import RetrofitError
from retrofit.properties import Fluid
from retrofit.study.efficiencies import efficiency_model
from retrofit.study.ledger import Ledger
from retrofit.study.result import Finding
from retrofit.units import SI, quantity

# Thresholds, common practice of the trade and ours: no single authority states them.
DIFFERENT_K = 3.0  # what gauges, clamps and a steady plant can hold
DIFFERENT_EFFICIENCY = 0.10  # relative
PRACTICE = "common practice of the trade"
# What a reading can give for a key of the case.
TAKEN_OVER = {
    "duty.useful_superheat": "evaporator_superheat",
    "duty.line_superheat": "line_superheat",
    "duty.subcooling": "subcooling",
    "compressor.isentropic_efficiency": "isentropic_efficiency",
    "compressor.volumetric_efficiency": "volumetric_efficiency",
}


def ran_in_part(case: Case) -> bool:
    """Return whether only a part of the swept volume may have run during the readings. [-]

    Args:
        case: The case.
    """
    load = case.readings.load if case.readings else None
    return load is not None and load < 1.0 and case.compressor.speed != "fixed"


def part_load(book: Ledger, case: Case) -> None:
    """Doubt the swept volume if only a part of it may have run."""
    load = case.readings.load if case.readings else None
    if load is None or not ran_in_part(case):
        return
    title = "Readings at part load"
    book.doubts["compressor.swept_volume"] = title
    at = SI.with_unit("fraction", load)
    fact = f"The readings were taken at {at} load; which part of the swept volume ran is not known."
    advice = "Read again with all compressors at full speed, or give the speed as fixed if they only start and stop."
    book.notes.append(Finding("reading-part-load", "note", title, fact, advice, "definition of volumetric efficiency"))


def duty(book: Ledger, case: Case, existing: Fluid) -> None:
    """Check saturation by the gauges against the temperatures of the case, both as dew temperatures."""
    given = case.duty
    temperatures = Temperatures(given.T_evap_K, given.T_cond_K, given.reading)
    try:
        pair = [float(existing.dew(p).T_K) for p in matched_pressures(existing, temperatures, given.subcooling_K)]
    except RetrofitError:
        return  # the comparison itself says why the duty cannot be computed
    pair[0] -= case.evaporator.pressure_drop_K if case.evaporator else 0.0
    pair[1] += case.condenser.pressure_drop_K if case.condenser else 0.0
    sides = (("evaporating", "suction"), ("condensing", "discharge"))
    for (what, side), expected in zip(sides, pair, strict=True):
        found = book.value(f"{side}_dew_temperature")
        if found is None:
            continue
        if abs(found - expected) <= DIFFERENT_K:
            book.agree(f"{side}_pressure")
        else:
            book.notes.append(_not_the_duty(case, what, side, expected, found))


def _not_the_duty(case: Case, what: str, side: str, expected_K: float, found_K: float) -> Finding:
    readings = case.readings
    at = f", read at {SI.with_unit('fraction', readings.load)} load" if readings and readings.load is not None else ""
    expected, found = (quantity("temperature", T_K) for T_K in (expected_K, found_K))
    return Finding(
        f"reading-against-case-{what}",
        "work",
        f"The {what} temperature of the case is not what the gauge says",
        f"The case says {what} at a dew temperature of {expected} at the compressor, the {side} gauge {found}{at}.",
        f"Read again at the duty of the case, or correct `{what}` in [duty]: the study uses the value of the case.",
        f"{PRACTICE}: more than {DIFFERENT_K:g} K apart",
    )


def written(book: Ledger, case: Case, existing: Fluid) -> None:
    """Note where a value written in the case is not what the readings say; the case is used."""
    for key, code in TAKEN_OVER.items():
        found, given = book.value(code), _of_the_file(book, case, existing, key)
        if found is None or given is None:
            continue
        is_kelvin = key.startswith("duty.")
        limit = DIFFERENT_K if is_kelvin else DIFFERENT_EFFICIENCY * given
        if abs(found - given) <= limit:
            continue
        shown = [quantity("temperature difference" if is_kelvin else "fraction", value) for value in (given, found)]
        name = key.partition(".")[2].replace("_", " ")
        book.notes.append(
            Finding(
                f"reading-against-case-{key.partition('.')[2].replace('_', '-')}",
                "work",
                f"The {name} of the case is not what the readings say",
                f"The case says {shown[0]}, the readings say {shown[1]}.",
                f"Read again, correct it in [{key.partition('.')[0]}], or leave it out to use the readings: the study "
                "uses the value of the case.",
                f"{PRACTICE}: more than {f'{DIFFERENT_K:g} K' if is_kelvin else f'{DIFFERENT_EFFICIENCY:.0%}'} apart",
            )
        )


def _of_the_file(book: Ledger, case: Case, existing: Fluid, key: str) -> float | None:
    """Return what the file itself says for a key, by number, points or polynomial; None if it says nothing."""
    table, _, end = key.partition(".")
    if table == "duty":
        return float(getattr(case.duty, f"{end}_K")) if key in case.given else None
    ways = (key, "compressor.efficiency_points", "compressor.polynomial")
    found = book.values("pressure_ratio", "suction_pressure")
    if found is None or not any(name.startswith(ways) for name in case.given):
        return None
    try:
        isentropic, volumetric = efficiency_model(case, existing).at(*found)
    except RetrofitError:
        return None  # the comparison itself says what is wrong with them
    return float(isentropic if end == "isentropic_efficiency" else volumetric)
