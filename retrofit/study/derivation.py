"""What readings on a running plant say, formula by formula; `retrofit.study.doubts` says where they disagree."""

from __future__ import annotations

from collections.abc import Mapping

from retrofit.case import Case
from retrofit.equipment.compressor import shaft_and_electric
from retrofit.properties import Fluid
from retrofit.study.efficiencies import efficiency_model
from retrofit.study.ledger import Ledger
from retrofit.units import SI

# Name and kind of quantity of everything derived, in the order it is shown.
NAMES: Mapping[str, tuple[str, str]] = {
    "suction_dew_temperature": ("Dew temperature at the suction pressure", "temperature"),
    "discharge_dew_temperature": ("Dew temperature at the discharge pressure", "temperature"),
    "discharge_bubble_temperature": ("Bubble temperature at the discharge pressure", "temperature"),
    "liquid_bubble_temperature": ("Bubble temperature at the liquid pressure", "temperature"),
    "pressure_ratio": ("Pressure ratio", "ratio"),
    "evaporator_superheat": ("Superheat at the evaporator outlet", "temperature difference"),
    "line_superheat": ("Superheat picked up in the suction line", "temperature difference"),
    "compressor_superheat": ("Superheat at the compressor inlet", "temperature difference"),
    "subcooling": ("Subcooling before the expansion valve", "temperature difference"),
    "evaporator_difference_in": ("What enters the evaporator above evaporating (dew)", "temperature difference"),
    "evaporator_difference_out": ("What leaves the evaporator above evaporating (dew)", "temperature difference"),
    "condenser_difference_in": ("Condensing (mean) above what enters the condenser", "temperature difference"),
    "condenser_difference_out": ("Condensing (mean) above what leaves the condenser", "temperature difference"),
    "isentropic_discharge_temperature": ("Discharge temperature of an isentropic compression", "temperature"),
    "isentropic_efficiency": ("Apparent isentropic efficiency", "fraction"),
    "power_from_current": ("Electrical power by the current", "power"),
    "electric_power": ("Electrical power", "power"),
    "shaft_power": ("Power at the compressor shaft", "power"),
    "mass_flow_from_power": ("Mass flow by power and enthalpy rise", "mass flow"),
    "mass_flow_from_swept_volume": ("Mass flow by swept volume", "mass flow"),
    "mass_flow": ("Mass flow of refrigerant", "mass flow"),
    "volumetric_efficiency": ("Apparent volumetric efficiency", "fraction"),
    "capacity": ("Cooling capacity by the refrigerant", "cooling"),
    "capacity_secondary": ("Cooling capacity by air, water or brine", "cooling"),
    "heat_rejected": ("Heat rejected by the refrigerant", "heat flow"),
    "heat_rejected_secondary": ("Heat rejected by air, water or brine", "heat flow"),
    "heat_balance_error": ("Heat balance: heat taken in less heat given off, over heat given off", "fraction"),
    "cop": ("COP on electrical power", "ratio"),
    "cooling_day_mean": ("Cooling, mean over the day", "cooling"),
    "power_day_mean": ("Electrical power, mean over the day", "power"),
}  # fmt: skip
HOURS_OF_A_DAY = 24.0


def saturation(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive saturation temperatures and the pressure ratio."""
    book.derive("suction_dew_temperature", ("suction_pressure",), lambda p: existing.dew(p).T_K, "dew line")
    book.derive("suction_bubble_temperature", ("suction_pressure",), lambda p: existing.bubble(p).T_K)
    book.derive("discharge_dew_temperature", ("discharge_pressure",), lambda p: existing.dew(p).T_K, "dew line")
    book.derive(
        "discharge_bubble_temperature", ("discharge_pressure",), lambda p: existing.bubble(p).T_K, "bubble line"
    )
    book.derive("liquid_bubble_temperature", ("liquid_pressure",), lambda p: existing.bubble(p).T_K, "bubble line")
    book.derive("liquid_dew_temperature", ("liquid_pressure",), lambda p: existing.dew(p).T_K)
    air = f"air pressure {case.plant.ambient_pressure_Pa / 1e5:.3f} bar at {case.plant.altitude_m:g} m"
    how = f"discharge over suction pressure, both absolute, gauge readings counted from an {air}"
    book.derive("pressure_ratio", ("discharge_pressure", "suction_pressure"), lambda high, low: high / low, how)


def superheats(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive superheat, on the dew line, and subcooling, on the bubble line."""
    drop = case.evaporator.pressure_drop_K if case.evaporator else 0.0
    less = f", less {drop:g} K of pressure drop of the case" if drop else ""
    dew, bubble = "suction_dew_temperature", "liquid_bubble_temperature"
    outlet, suction = "evaporator_outlet_temperature", "suction_temperature"
    how = f"pipe temperature less dew temperature at the suction pressure{less}"
    book.derive("evaporator_superheat", (outlet, dew), lambda T, T_dew: T - T_dew - drop, how)
    how = "pipe temperature at the compressor less dew temperature at the suction pressure"
    book.derive("compressor_superheat", (suction, dew), lambda T, T_dew: T - T_dew, how)
    book.derive("line_superheat_measured", (suction, outlet), lambda T, T_out: T - T_out)
    useful = case.duty.useful_superheat_K
    book.derive("line_superheat_left", ("compressor_superheat",), lambda heat: _or_nothing(heat - drop - useful))
    ways = {
        "line_superheat_measured": "pipe temperature at the compressor less that at the evaporator outlet",
        "line_superheat_left": f"superheat at the compressor less the useful superheat {useful:g} K, "
        f"{_origin(case, 'duty.useful_superheat')}{less}",
    }
    book.choose("line_superheat", ways)
    how = "bubble temperature at the liquid pressure less pipe temperature"
    book.derive("subcooling", (bubble, "liquid_temperature"), lambda T_bubble, T: T_bubble - T, how)
    book.derive(
        "discharge_superheat", ("discharge_temperature", "discharge_dew_temperature"), lambda T, T_dew: T - T_dew
    )


def _or_nothing(superheat_K: float) -> float:
    """Return a superheat, NaN for one below zero: then the case assumes more inside the evaporator than there is."""
    return superheat_K if superheat_K >= 0.0 else float("nan")


def _origin(case: Case, key: str) -> str:
    return "assumed" if any(default.key == key for default in case.defaults) else "of the case"


def exchangers(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive what drives the heat in evaporator and condenser."""
    mean = ("discharge_dew_temperature", "discharge_bubble_temperature")
    book.derive("condensing_mean_temperature", mean, lambda dew, bubble: 0.5 * (dew + bubble))
    for way in ("in", "out"):
        how = "its temperature less dew temperature at the suction pressure"
        needs = (f"evaporator_{way}", "suction_dew_temperature")
        book.derive(f"evaporator_difference_{way}", needs, lambda T, T_dew: T - T_dew, how)
        how = "mean of dew and bubble temperature at the discharge pressure less its temperature"
        needs = ("condensing_mean_temperature", f"condenser_{way}")
        book.derive(f"condenser_difference_{way}", needs, lambda T_mean, T: T_mean - T, how)


def states(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive the states of the refrigerant around the plant, none of them shown."""
    suction, low = ("suction_pressure", "compressor_superheat"), case.evaporator
    drop = low.pressure_drop_K if low else 0.0
    for quantity in ("h_J_per_kg", "s_J_per_kgK", "density_kg_per_m3"):
        book.derive(
            f"suction_{quantity}", suction, lambda p, heat, q=quantity: getattr(existing.vapour(p, max(heat, 0.0)), q)
        )
    discharge = ("discharge_pressure", "discharge_superheat")
    book.derive("discharge_h", discharge, lambda p, heat: existing.vapour(p, max(heat, 0.0)).h_J_per_kg)
    liquid = ("liquid_pressure", "subcooling")
    book.derive("liquid_h", liquid, lambda p, cooling: existing.liquid(p, max(cooling, 0.0)).h_J_per_kg)

    def leaving(p: float, heat: float) -> object:
        p_evap = existing.p_dew(existing.dew(p).T_K + drop) if drop else p
        return existing.vapour(p_evap, max(heat, 0.0)).h_J_per_kg

    book.derive("evaporator_outlet_h", ("suction_pressure", "evaporator_superheat"), leaving)


def compression(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive what the compressor adds to each kilogram, and would add without losses."""
    book.derive("isentropic_h", ("discharge_pressure", "suction_s_J_per_kgK"), lambda p, s: existing.h_at_entropy(p, s))
    how = "entropy of the suction gas kept up to the discharge pressure"
    book.derive(
        "isentropic_discharge_temperature",
        ("discharge_pressure", "isentropic_h"),
        lambda p, h: existing.T_at_enthalpy(p, h),
        how,
    )
    book.derive("isentropic_rise", ("isentropic_h", "suction_h_J_per_kg"), lambda high, low: high - low)
    book.derive("enthalpy_rise", ("discharge_h", "suction_h_J_per_kg"), lambda high, low: high - low)


def heat_loss(case: Case) -> float:
    """Return the share of the compressor power that leaves through the shell; none if the case gives none. [-]"""
    return case.compressor.heat_loss or 0.0


def _loss_in_words(case: Case) -> str:
    if case.compressor.heat_loss is None:
        return "no heat loss of the compressor counted, as the case gives none"
    return f"with {100.0 * case.compressor.heat_loss:g} % of the power lost through the shell, as the case says"


def efficiency(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive the apparent isentropic efficiency. Source: eta = isentropic rise (1 - heat loss) / enthalpy rise."""
    keeps = 1.0 - heat_loss(case)
    how = f"isentropic over measured rise of enthalpy by the discharge temperature, {_loss_in_words(case)}"
    needs = ("isentropic_rise", "enthalpy_rise")
    book.derive("isentropic_efficiency", needs, lambda ideal, real: ideal * keeps / real, how)


def power(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive electrical and shaft power. Source: P = sqrt(phases) U I cos(phi), U between phases."""
    needs = ("current", "voltage", "phases", "power_factor")
    how = "square root of the number of phases x voltage x current x power factor"
    book.derive("power_from_current", needs, lambda i, u, n, factor: n**0.5 * u * i * factor, how)
    book.choose("electric_power", {"power": "as read", "power_from_current": "by the current"})
    how = "electrical power x motor efficiency"
    motor = ("electric_power", "compressor.motor_efficiency")
    book.derive("shaft_power", motor, lambda p, share: shaft_and_electric(p, share, "electric")[0], how)


def flows(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive mass flow and apparent volumetric efficiency."""
    keeps = 1.0 - heat_loss(case)
    how = f"shaft power over rise of enthalpy, {_loss_in_words(case)}"
    needs = ("shaft_power", "enthalpy_rise")
    book.derive("mass_flow_from_power", needs, lambda p, rise: p * keeps / rise, how)
    drawn_in = ("compressor.swept_volume", "suction_density_kg_per_m3")

    def by_volume(volume: float, density: float, ratio: float, p: float) -> float:
        return volume * density * float(efficiency_model(case, existing).at(ratio, p)[1])

    how = f"swept volume x density of the suction gas x volumetric efficiency {_volumetric_in_words(case)}"
    book.derive("mass_flow_from_swept_volume", (*drawn_in, "pressure_ratio", "suction_pressure"), by_volume, how)
    ways = {"mass_flow_from_power": "by power and enthalpy rise", "mass_flow_from_swept_volume": "by swept volume"}
    book.choose("mass_flow", ways)
    how = "mass flow by power over swept volume x density of the suction gas"
    both = ("mass_flow_from_power", *drawn_in)
    book.derive("volumetric_efficiency", both, lambda flow, volume, density: flow / (volume * density), how)


def _volumetric_in_words(case: Case) -> str:
    if case.compressor.polynomial is not None:
        return "by the polynomial of the case"
    if case.compressor.efficiency_points is not None:
        return "by the points of the case"
    return f"{case.compressor.volumetric_efficiency:g}, {_origin(case, 'compressor.volumetric_efficiency')}"


def heats(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive cooling and heat rejected, by the refrigerant and by what flows opposite."""
    effect = ("mass_flow", "evaporator_outlet_h", "liquid_h")
    how = "mass flow x rise of enthalpy from liquid line to evaporator outlet"
    book.derive("capacity", effect, lambda flow, out, liquid: flow * (out - liquid), how)
    how = "mass flow x fall of enthalpy from discharge to liquid line"
    given_off = ("mass_flow", "discharge_h", "liquid_h")
    book.derive("heat_rejected", given_off, lambda flow, hot, liquid: flow * (hot - liquid), how)
    how = "flow x specific heat x difference of temperature"
    for code, way, sign in (("capacity_secondary", "evaporator", 1.0), ("heat_rejected_secondary", "condenser", -1.0)):
        needs = tuple(f"{way}_{name}" for name in ("flow", "specific_heat", "in", "out"))
        book.derive(code, needs, lambda flow, cp, T_in, T_out, sign=sign: sign * flow * cp * (T_in - T_out), how)
    book.derive(
        "line_heat",
        ("mass_flow", "suction_h_J_per_kg", "evaporator_outlet_h"),
        lambda flow, suction, out: flow * (suction - out),
    )


def balance(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive the heat balance of the sides of air, water or brine. Source: first law over the refrigerant."""
    keeps, line = 1.0 - heat_loss(case), book.value("line_heat")
    taken_up = "cooling + shaft power" if line is None else "cooling + heat of the suction line + shaft power"
    how = f"({taken_up} - heat rejected) / heat rejected, {_loss_in_words(case)}"
    needs: tuple[str, ...] = ("capacity_secondary", "shaft_power", "heat_rejected_secondary")
    needs = needs if line is None else (*needs, "line_heat")

    def error(cooling: float, shaft: float, rejected: float, line_heat: float = 0.0) -> float:
        return (cooling + line_heat + shaft * keeps - rejected) / rejected if rejected else float("nan")

    book.derive("heat_balance_error", needs, error, how)


def outcome(book: Ledger, case: Case, existing: Fluid) -> None:
    """Derive COP, and cooling and energy of a day."""
    cooling = {"capacity": "by the refrigerant", "capacity_secondary": "by air, water or brine"}
    book.choose("cooling", cooling)
    how = "cooling over electrical power"
    book.derive("cop", ("cooling", "electric_power"), lambda heat, p: heat / p if p else float("nan"), how)
    for code, what in (("cooling_day_mean", "cooling"), ("power_day_mean", "electric_power")):
        found = book.values(what, "hours_per_day")
        amount = (
            f": {SI.with_unit('power', found[0])} for {found[1]:g} h, {found[0] * found[1] / 1e3:.4g} kWh a day"
            if found
            else ""
        )
        how = f"as during the readings over the hours run, of 24 h{amount}"
        book.derive(code, (what, "hours_per_day"), lambda x, hours: x * hours / HOURS_OF_A_DAY, how)
