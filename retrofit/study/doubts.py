"""Where readings on a running plant do not go together.

Each check looks at what is derived so far. Readings that contradict one another are put in doubt, and those
that have gone together with others are vouched for: a later disagreement doubts the others first.
"""

from __future__ import annotations

from retrofit.case import Case
from retrofit.case.model import FIELDS
from retrofit.case.values import Quantity
from retrofit.properties import Fluid
from retrofit.properties.fluid import DEW_SLACK_K
from retrofit.study.derivation import heat_loss
from retrofit.study.ledger import Ledger
from retrofit.study.result import Finding
from retrofit.units import SI, parse_quantity, quantity

# Thresholds, all common practice of the trade and ours: no single authority states them.
DIFFERENT_HEAT = 0.10  # relative: what flow meters and small temperature differences can hold
DIFFERENT_POWER = 0.10  # relative, between a meter and the current: an estimated power factor can be that far off
LOWEST_ISENTROPIC = 0.30
LOWEST_VOLUMETRIC = 0.40
ORDINARY_SUPERHEAT_K = (3.0, 15.0)  # of an expansion valve that works
ORDINARY_SUBCOOLING_K = (1.0, 15.0)
VOUCHING_SUPERHEAT_K = 40.0  # above, a superheat is possible but speaks for no reading
LOW_GLIDE_K = 1.0  # below, bubble and dew column hardly differ
ROUNDING = 1e-9
FIRST_LAW = "definition; heat flows from the warmer side to the colder"
SECOND_LAW = "second law: no compression takes less than the isentropic one"
SUPERHEAT_RULE = "definition: superheat counts from the dew, subcooling from the bubble temperature"
PRACTICE = "common practice of the trade"


def _degC(T_K: float) -> str:
    return quantity("temperature", T_K)


def _kelvin(difference_K: float, spec: str = "") -> str:
    return quantity("temperature difference", difference_K, spec)


def _percent(share: float) -> str:
    return SI.with_unit("fraction", share)


def _strike(book: Ledger, code: str, title: str, fact: str, advice: str, source: str, *codes: str) -> None:
    book.contradict(Finding(code, "unknown", title, fact, advice, source), *codes)


def pressures(book: Ledger, case: Case, existing: Fluid) -> None:
    """Check pressures against one another."""
    ratio = book.value("pressure_ratio")
    if ratio is not None and ratio <= 1.0:
        fact = f"Discharge over suction pressure is {ratio:.2f}: nothing would be compressed."
        _strike(
            book,
            "reading-pressure-ratio",
            "Pressure ratio not above 1",
            fact,
            "Read both gauges again on the running plant.",
            FIRST_LAW,
            "suction_pressure",
            "discharge_pressure",
        )
    found = book.values("liquid_pressure", "discharge_pressure")
    if found and found[0] > found[1] * (1.0 + ROUNDING):
        ambient = case.plant.ambient_pressure_Pa
        liquid, discharge = (quantity("gauge pressure", p - ambient, ".2f") for p in found)
        fact = f"Liquid pressure {liquid} is above discharge pressure {discharge}; the condenser can only lower it."
        advice = "Compare both gauges on one connection; a liquid column below the condenser adds some tenths of a bar."
        title = "Liquid pressure above discharge pressure"
        codes = ("liquid_pressure", "discharge_pressure")
        _strike(book, "reading-liquid-pressure", title, fact, advice, FIRST_LAW, *codes)


def _highest(key: str) -> float:
    """Return the largest value that the case allows for a key, in SI."""
    _, field = FIELDS[key]
    limits = next(extra for extra in field.metadata if isinstance(extra, Quantity))
    return parse_quantity(limits.high, limits.kind)


def superheats(book: Ledger, case: Case, existing: Fluid) -> None:
    """Check superheat, line superheat, subcooling and the superheat at the discharge."""
    highest = _highest("duty.useful_superheat")
    for code, where, reading in (
        ("evaporator_superheat", "at the evaporator outlet", "evaporator_outlet_temperature"),
        ("compressor_superheat", "at the compressor inlet", "suction_temperature"),
    ):
        _superheat(book, code, where, reading, highest)
    line = book.value("line_superheat")
    if line is not None and not -DEW_SLACK_K <= line <= highest:
        fact = f"The suction gas would be warmed by {_kelvin(line)} between evaporator and compressor."
        advice = (
            f"Plausible is 0 to {_kelvin(highest, 'g')}: put both thermometers on clean pipe, "
            "under insulation, and read again."
        )
        title = "Suction line not plausible"
        codes = ("suction_temperature", "evaporator_outlet_temperature")
        _strike(book, "reading-line-superheat", title, fact, advice, PRACTICE, *codes)
    _subcooling(book)
    discharge = book.value("discharge_superheat")
    if discharge is not None and discharge < -DEW_SLACK_K:
        _too_cold(
            book, f"The discharge pipe is {_kelvin(-discharge)} below the dew temperature at the discharge pressure"
        )


def _superheat(book: Ledger, code: str, where: str, reading: str, highest_K: float) -> None:
    superheat = book.value(code)
    if superheat is None:
        return
    dew_K, bubble_K = book.value("suction_dew_temperature"), book.value("suction_bubble_temperature")
    glide = dew_K - bubble_K if dew_K is not None and bubble_K is not None else 0.0
    by_bubble = superheat + glide
    if code == "evaporator_superheat" and superheat < ORDINARY_SUPERHEAT_K[0] <= by_bubble and glide > LOW_GLIDE_K:
        if by_bubble <= ORDINARY_SUPERHEAT_K[1]:
            book.remark(
                superheat < -DEW_SLACK_K, _wrong_column("superheat", "dew", "bubble", where, superheat, by_bubble)
            )
    if superheat < -DEW_SLACK_K:
        fact = f"The superheat {where} is {_kelvin(superheat)}: the gas would be colder than its dew temperature."
        advice = (
            "Measure pressure and temperature at the same place with a clamp thermometer under insulation; if it "
            "stays, liquid reaches the compressor or another refrigerant is in the plant."
        )
        _strike(
            book, "reading-superheat", "Negative superheat", fact, advice, SUPERHEAT_RULE, reading, "suction_pressure"
        )
    elif superheat > highest_K:
        fact = f"The superheat {where} is {_kelvin(superheat)}, above {_kelvin(highest_K, 'g')}."
        advice = "Check the unit of the gauge, the thermometer, and which refrigerant is in the plant."
        title = "Superheat too high to be one"
        _strike(book, "reading-superheat", title, fact, advice, PRACTICE, reading, "suction_pressure")
    elif superheat <= VOUCHING_SUPERHEAT_K:
        book.agree(reading, "suction_pressure")


def _wrong_column(what: str, right: str, wrong: str, where: str, found_K: float, by_wrong_K: float) -> Finding:
    return Finding(
        f"reading-{what}-column",
        "note",
        f"The {what} may have been read on the {wrong} column",
        f"The {what} {where} is {_kelvin(found_K)} on the {right} line; on the {wrong} line it would be a usual "
        f"{_kelvin(by_wrong_K)}.",
        f"Of a refrigerant with glide, read {what} against the {right} column and set valve and charge by it.",
        f"{SUPERHEAT_RULE}; usual values are {PRACTICE}",
    )


def _subcooling(book: Ledger) -> None:
    subcooling, highest = book.value("subcooling"), _highest("duty.subcooling")
    if subcooling is None:
        return
    dew_K, bubble_K = book.value("liquid_dew_temperature"), book.value("liquid_bubble_temperature")
    glide = dew_K - bubble_K if dew_K is not None and bubble_K is not None else 0.0
    by_dew, (low, high) = subcooling + glide, ORDINARY_SUBCOOLING_K
    if subcooling < low <= by_dew <= high and glide > LOW_GLIDE_K:
        where = "before the expansion valve"
        book.remark(subcooling < -DEW_SLACK_K, _wrong_column("subcooling", "bubble", "dew", where, subcooling, by_dew))
    codes = ("liquid_pressure", "liquid_temperature")
    if subcooling < -DEW_SLACK_K:
        fact = f"The subcooling is {_kelvin(subcooling)}: the liquid would be warmer than its bubble temperature."
        advice = (
            "Measure pressure and temperature of the liquid at the same place; bubbles in the sight glass would be "
            "real flash gas, air in the plant or another refrigerant mislead the gauge."
        )
        _strike(book, "reading-subcooling", "Negative subcooling", fact, advice, SUPERHEAT_RULE, *codes)
    elif subcooling > highest:
        fact = f"The subcooling is {_kelvin(subcooling)}, above {_kelvin(highest, 'g')}."
        advice = "Check gauge and thermometer, and where on the liquid line they sit."
        _strike(book, "reading-subcooling", "Subcooling too high to be one", fact, advice, PRACTICE, *codes)
    else:
        book.agree(*codes)


def crossings(book: Ledger, case: Case, existing: Fluid) -> None:
    """Check that air, water or brine is warmer than what it evaporates, and colder than what it condenses."""
    gauge = {way: f"at the {side} pressure" for way, side in (("evaporator", "suction"), ("condenser", "discharge"))}
    condenser = case.condenser
    reaches_gas = condenser is not None and condenser.arrangement == "counterflow"
    hottest = "discharge_temperature" if reaches_gas else "discharge_dew_temperature"
    for warm, cold in (
        ("evaporator_in", "suction_dew_temperature"),
        ("evaporator_out", "suction_bubble_temperature"),
        ("evaporator_in", "evaporator_out"),
        ("discharge_bubble_temperature", "condenser_in"),
        (hottest, "condenser_out"),
        ("condenser_out", "condenser_in"),
    ):
        found = book.values(warm, cold)
        if found is None or found[0] > found[1]:
            continue
        way = "evaporator" if "evaporator_in" in (warm, cold) or warm == "evaporator_out" else "condenser"
        names = [code.replace("_", " ") for code in (warm, cold)]
        fact = (
            f"{names[0]} {_degC(found[0])} is not above {names[1]} {_degC(found[1])}; pressures are read {gauge[way]}."
        )
        advice = f"Read the temperatures in and out of the {way} and the pressure again, at the same time."
        title = f"Temperatures cross in the {way}"
        _strike(book, f"reading-{way}-crossing", title, fact[0].upper() + fact[1:], advice, FIRST_LAW, warm, cold)


def _too_cold(book: Ledger, fact: str) -> None:
    advice = (
        "Measure on the discharge pipe 10 to 15 cm from the compressor, insulated; oil cooling, liquid injection or "
        "liquid in the suction gas make it colder, and then it tells no efficiency."
    )
    codes = ("discharge_temperature", "discharge_pressure", "suction_temperature", "suction_pressure")
    title = "Discharge colder than an isentropic compression"
    _strike(book, "reading-discharge-cold", title, f"{fact}.", advice, SECOND_LAW, *codes)


def compression(book: Ledger, case: Case, existing: Fluid) -> None:
    """Check that the discharge temperature gives an isentropic efficiency that a compressor can have."""
    needs = ("isentropic_rise", "enthalpy_rise", "isentropic_discharge_temperature", "discharge_temperature")
    found = book.values(*needs)
    if found is None:
        return
    ideal, real, T_ideal, T_real = found
    ideal *= 1.0 - heat_loss(case)
    codes = ("discharge_temperature", "discharge_pressure", "suction_temperature", "suction_pressure")
    fact = f"The discharge pipe reads {_degC(T_real)}, an isentropic compression would reach {_degC(T_ideal)}"
    if ideal > real * (1.0 + ROUNDING):
        _too_cold(book, f"{fact}: the isentropic efficiency would be above 100 %")
    elif ideal < LOWEST_ISENTROPIC * real:
        fact = f"{fact}: the isentropic efficiency would be {_percent(ideal / real)}."
        advice = (
            f"Below {LOWEST_ISENTROPIC:.0%} a compressor hardly runs: check thermometer, pressures and suction "
            "temperature; if they hold, look for broken valves."
        )
        title = "Discharge hotter than a working compressor makes it"
        _strike(book, "reading-discharge-hot", title, fact, advice, PRACTICE, *codes)
    else:
        book.agree(*codes)


def power(book: Ledger, case: Case, existing: Fluid) -> None:
    """Check the power read against that of the current."""
    found = book.values("power", "power_from_current")
    if found is None:
        return
    metered, by_current = found
    if abs(metered - by_current) <= DIFFERENT_POWER * metered:
        book.agree("power", "power_from_current")
        return
    fact = f"Power reads {quantity('power', metered)}; current, voltage and power factor make "
    fact += f"{quantity('power', by_current)}."
    advice = (
        "Measure the power factor instead of taking the nameplate's, on every phase, and the power at the same time."
    )
    title, source = "Power and current disagree", f"{PRACTICE}: more than {DIFFERENT_POWER:.0%} apart"
    _strike(book, "reading-power", title, fact, advice, source, "power", "power_from_current")


def flows(book: Ledger, case: Case, existing: Fluid) -> None:
    """Check that the mass flow by power fits into the swept volume."""
    found = book.value("volumetric_efficiency")
    if found is None:
        return
    if LOWEST_VOLUMETRIC <= found <= 1.0 + ROUNDING:
        book.agree("shaft_power", "compressor.swept_volume")
        return
    fact = f"The mass flow by power would need a volumetric efficiency of {_percent(found)}."
    advice = (
        f"Plausible is {LOWEST_VOLUMETRIC:.0%} to 100 %: check power, motor efficiency and swept volume, and how many "
        "compressors ran."
    )
    title = "Volumetric efficiency not plausible"
    codes = ("volumetric_efficiency",)
    _strike(book, "reading-volumetric-efficiency", title, fact, advice, PRACTICE, *codes)


def balance(book: Ledger, case: Case, existing: Fluid) -> None:
    """Check the heat balance, and both sides of each exchanger against one another."""
    error = book.value("heat_balance_error")
    source = f"first law; {PRACTICE}: more than {DIFFERENT_HEAT:.0%} apart"
    if error is not None and abs(error) <= DIFFERENT_HEAT:
        book.agree("capacity_secondary", "shaft_power", "heat_rejected_secondary")
    elif error is not None:
        fact = f"Cooling and power differ from the heat rejected by {SI.text('fraction', error, signed=True)} % of it."
        advice = "Measure flows and temperatures of evaporator and condenser again, at the same time on a steady plant."
        _strike(book, "reading-heat-balance", "Heat balance off", fact, advice, source, "heat_balance_error")
    for code, way in (("capacity", "evaporator"), ("heat_rejected", "condenser")):
        found = book.values(code, f"{code}_secondary")
        if found is None or abs(found[0] - found[1]) <= DIFFERENT_HEAT * max(abs(side) for side in found):
            continue
        both = [quantity("cooling", side) for side in found]
        fact = f"In the {way} the refrigerant makes {both[0]}, air, water or brine makes {both[1]}."
        advice = f"Measure flow and both temperatures at the {way} again; then power, swept volume and pressures."
        title = f"Two sides of the {way} disagree"
        _strike(book, f"reading-{way}-sides", title, fact, advice, source, code, f"{code}_secondary")
