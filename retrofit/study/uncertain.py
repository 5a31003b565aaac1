"""Inputs that may be off, and draws of them: within the plus or minus of the case, or a usual one where it has none.

An input with plus or minus lies somewhere within its limits, nowhere more likely than elsewhere: a rectangular
distribution, as the Guide to the expression of uncertainty in measurement (JCGM 100:2008, 4.3.7) takes where only the
limits are known. One with low, base and high is triangular about its base. The error of the model is normal, its limits
those that hold 90 % of it; what several refrigerants have of it in common is drawn once (`parts`). Inputs that are one
thing in the plant, such as its leak rate today and after a change, move together (`moves_with`).
"""

from __future__ import annotations

import tomllib
import zlib
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

import numpy as np

from retrofit.case import Case, meaning
from retrofit.case.model import FIELDS
from retrofit.case.values import FileValue
from retrofit.study.efficiencies import has_curve as compressor_has_curve
from retrofit.study.spread import FloatArray, Spread, single, triangular

WEATHER = "year.weather"  # the weather of the year as a whole: a shift
EFFICIENCIES = ("compressor.isentropic_efficiency", "compressor.volumetric_efficiency")
# Keys of the case whose numbers the plant is solved with as arrays, and what they are for a reader.
PHYSICAL = {
    "duty.cooling": "Cooling needed",
    "duty.evaporating": "Evaporating temperature today",
    "duty.condensing": "Condensing temperature today",
    "duty.useful_superheat": "Useful superheat",
    "duty.line_superheat": "Superheat of the suction line",
    "duty.subcooling": "Subcooling",
    "compressor.isentropic_efficiency": "Isentropic efficiency",
    "compressor.volumetric_efficiency": "Volumetric efficiency",
    "compressor.swept_volume": "Swept volume",
    "compressor.motor_efficiency": "Motor efficiency",
    "compressor.drive_efficiency": "Efficiency of the drive",
    "compressor.heat_loss": "Heat loss of the compressor",
    "evaporator.inlet": "Medium into the evaporator",
    "evaporator.outlet": "Medium out of the evaporator",
    "evaporator.flow": "Flow through the evaporator",
    "condenser.inlet": "Medium into the condenser",
    "condenser.outlet": "Medium out of the condenser",
    "condenser.flow": "Flow through the condenser",
    "year.peak_load": "Peak load",
    "year.base_load": "Base load",
    "year.condenser_fans": "Condenser fans",
    "year.evaporator_fans": "Evaporator fans",
    "year.pumps": "Pumps",
    "year.defrost_power": "Defrosting",
}
NAMES = {
    **PHYSICAL,
    WEATHER: "Outdoor temperature of the year, shifted",
    "plant.charge": "Charge today",
    "law.annual_leak_rate": "Leak rate",
    "law.equipment": "Leak rate, by type of equipment",
    "law.remaining_life": "Remaining life",
    "emissions.leak_rate": "Leak rate",
    "emissions.leak_rate_after": "Leak rate after a change",
    "emissions.leak_log": "Leak rate, by the log of top-ups",
    "emissions.grid_factor": "Grid factor",
    "emissions.grid_years": "Grid factor of every year, times",
    "emissions.recovery_at_end": "Recovery at the end of life",
    "emissions.lost_at_change": "Loss at the change",
    "money.tariff": "Price of electricity",
    "money.demand_charge": "Demand charge",
    "money.discount_rate": "Discount rate",
    "money.new_plant_life": "Life of a new plant",
    "money.leak_check": "Cost of a leak check",
    "money.levy": "Levy on refrigerant",
    "money.yearly_service": "Yearly service",
}
LEAK_RATES = ("emissions.leak_rate", "emissions.leak_rate_after", "law.annual_leak_rate", "law.equipment")
CHARGE = "plant.charge"
HOLDS_90 = 1.6448536269514722  # standard normal quantile of 95 %: as much to either side holds 90 %
OPTION_KINDS = {"charge": "mass", "leak_rate": "fraction", "contingency": "fraction", "plant_life": "years"}
OWN_KINDS = {
    WEATHER: "temperature difference",
    "law.equipment": "fraction",
    "emissions.leak_log": "fraction",
    "emissions.grid_years": "ratio",
}
NOT_BELOW_ZERO = ("temperature difference", "fraction")


@dataclass(frozen=True)
class Uncertain:
    """An input and the limits that it lies within.

    Attributes:
        key: Its key in the case, or a name of ours.
        name: What it is, for a reader.
        kind: Its kind of quantity, as unit systems name it; empty for money.
        spread: Its limits, and the value of the case. [SI]
        origin: "case", "assumed" or "model".
        why: Where the limits come from.
        is_triangular: Whether it is the likelier the nearer to the value of the case.
        moves_with: Key of the input that it is drawn with, its own if empty.
        parts: For a normal distribution: keys of independent normal draws and their weights, whose squares sum up to
            1; `spread` then holds 90 % of it.
    """

    key: str
    name: str
    kind: str
    spread: Spread
    origin: str
    why: str
    is_triangular: bool = False
    moves_with: str = ""
    parts: tuple[tuple[str, float], ...] = ()

    @property
    def distribution(self) -> str:
        """Return the name of its distribution."""
        return "normal" if self.parts else "triangular" if self.is_triangular else "rectangular"

    def drawn(self, draws: int, seed: int) -> FloatArray:
        """Return draws of it, shape (draws,).

        Args:
            draws: Number of draws. [-]
            seed: The same seed gives the same draws. [-]
        Source: a sum of independent normal numbers is normal, its variance the sum of theirs.
        """
        if not self.parts:
            return self.at(stratified(draws, seed, self.moves_with or self.key))
        total = np.zeros(draws)
        for key, weight in self.parts:
            total += weight * normal(draws, seed, key)
        half = 0.5 * (self.spread.high - self.spread.low)
        return self.spread.base + half / HOLDS_90 * total

    def at(self, share: FloatArray) -> FloatArray:
        """Return the value below which a share of the distribution lies.

        Args:
            share: Shares from 0 to 1, of any shape. [-]
        Source: inverse of the distribution function.
        """
        low, _, high = self.spread
        return triangular(self.spread, share) if self.is_triangular else low + share * (high - low)


@dataclass(frozen=True)
class Sample:
    """Values of inputs, row by row: the base, the draws, then each input at its limits with the others at their base.

    Attributes:
        inputs: The inputs.
        values: By key, each of shape (rows,).
        draws: Number of draws.
        seed: What the draws follow from.
    """

    inputs: tuple[Uncertain, ...]
    values: Mapping[str, FloatArray]
    draws: int
    seed: int

    @property
    def rows(self) -> int:
        """Return the number of rows. [-]"""
        return 1 + self.draws + 2 * len(self.inputs)

    @property
    def drawn(self) -> slice:
        """Return where the draws stand."""
        return slice(1, 1 + self.draws)

    def limits(self, place: int) -> tuple[int, int]:
        """Return the rows with an input at its low and at its high limit.

        Args:
            place: Which input, from 0. [-]
        """
        start = 1 + self.draws + 2 * place
        return start, start + 1

    def pick(self, key: str, spread: Spread) -> FloatArray:
        """Return the values of an input, its base throughout if it is not uncertain.

        Args:
            key: Its key. [-]
            spread: Its spread, for the base.
        Returns: Values, shape (rows,).
        """
        found = self.values.get(key)
        return np.full(self.rows, spread.base) if found is None else found


def physical_inputs(case: Case) -> Iterator[Uncertain]:
    """Yield the inputs of plant and year that may be off.

    Args:
        case: The case.
    """
    for key in PHYSICAL:
        if key in EFFICIENCIES and has_curve(case):
            yield from _within_limits(case, key, single(1.0))  # points and polynomials are off by a factor
            continue
        value = getattr(getattr(case, key.partition(".")[0]), FIELDS[key][0], None)
        if value is not None:
            yield from _within_limits(case, key, single(float(value)))
    if case.weather is not None:
        yield from _within_limits(case, WEATHER, single(0.0))


def counted_inputs(case: Case, counted: Mapping[str, Spread]) -> Iterator[Uncertain]:
    """Yield the inputs of emissions and money that may be off.

    Args:
        case: The case.
        counted: The spread of each input that counts, by its key.
    """
    for key, spread in counted.items():
        if spread.low < spread.high:
            why = "low, base and high of the case" if key in FIELDS or "." in key else "a range"
            kind, name = named(case, key)
            together = moves_with(case, key)
            yield Uncertain(key, name, kind, spread, "case", why, is_triangular=True, moves_with=together)
        else:
            yield from _within_limits(case, key, spread)


def has_curve(case: Case) -> bool:
    """Say whether the compressor of a case has efficiency points or a polynomial.

    Args:
        case: The case.
    """
    return compressor_has_curve(case.compressor)


@cache
def _usual() -> Mapping[str, dict[str, object]]:
    return tomllib.loads(files("retrofit.study").joinpath("inputs.toml").read_text(encoding="utf-8"))


def _within_limits(case: Case, key: str, spread: Spread) -> Iterator[Uncertain]:
    """Yield an input with the plus or minus of the case, or the usual one; nothing if there is neither."""
    base, own = spread.base, case.widths.get(key)
    usual = _usual().get("leak_rate" if key in LEAK_RATES or key.endswith(".leak_rate") else key)
    if own is not None:
        half, origin, why = own, "case", "plus or minus of the case"
    elif usual is not None:
        half, origin, why = float(str(usual["plus_minus"])), "assumed", str(usual["why"])
        half *= base if usual["by"] == "share" else 1.0
    else:
        return
    kind, name = named(case, key)
    is_bounded = kind in NOT_BELOW_ZERO and key != WEATHER  # a year may be colder too
    low = max(base - half, 0.0) if is_bounded else base - half
    high = min(base + half, 1.0) if kind == "fraction" else base + half
    if low < high:
        yield Uncertain(key, name, kind, Spread(low, base, high), origin, why, moves_with=moves_with(case, key))


def moves_with(case: Case, key: str) -> str:
    """Return the key of the input that another is drawn with: its own, unless both are one thing in the plant.

    The leak rate after a change goes with that of today, and a charge after it with today's; those of a new plant are
    its own.

    Args:
        case: The case.
        key: Key of the input.
    """
    table, _, rest = key.partition(".")
    name, _, item = rest.rpartition(".")
    if table == "options":
        option = case.options.by_refrigerant.get(name) if case.options else None
        if option is not None and (option.new_plant is not None or option.seasonal_cop is not None):
            return key
        return {"leak_rate": LEAK_RATES[0], "charge": CHARGE}.get(item, key)
    return LEAK_RATES[0] if key in (*LEAK_RATES, "emissions.leak_log") else key


def named(case: Case, key: str) -> tuple[str, str]:
    """Return the kind of quantity of an input, and what it is for a reader.

    Args:
        case: The case.
        key: Its key.
    """
    table, _, rest = key.partition(".")
    if table == "options" or key.startswith("money.change."):
        name, _, item = rest.rpartition(".")
        words = item.replace("_", " ").capitalize()
        return OPTION_KINDS.get(item, ""), words if name == "change" else f"{words} of {name}"
    if key.startswith("money.refrigerant_price."):
        return "", f"Price of {key.rpartition('.')[2]}"
    if key in OWN_KINDS or (key in EFFICIENCIES and has_curve(case)):
        return OWN_KINDS.get(key, "ratio"), NAMES[key]
    _, field = FIELDS.get(key, ("", None))
    how = next((extra for extra in (field.metadata if field else ()) if isinstance(extra, FileValue)), None)
    kind = "fraction" if key in EFFICIENCIES else how.shown_kind() if how else ""
    return kind, NAMES.get(key, meaning(key).rstrip("."))


def sample(inputs: Iterable[Uncertain], draws: int, seed: int) -> Sample:
    """Return draws of inputs, each input's distribution divided into as many equal shares as there are draws.

    An input's draws follow from the seed and its key alone: an option more or less leaves those of the others.

    Args:
        inputs: The inputs.
        draws: Number of draws. [-]
        seed: The same seed gives the same draws. [-]
    Source: Latin hypercube sampling, McKay, Beckman and Conover (1979).
    """
    known = tuple(inputs)
    values = {}
    for place, item in enumerate(known):
        column = np.full(1 + draws + 2 * len(known), item.spread.base)
        column[1 : 1 + draws] = item.drawn(draws, seed)
        start = 1 + draws + 2 * place
        column[start], column[start + 1] = item.spread.low, item.spread.high
        values[item.key] = column
    return Sample(known, values, draws, seed)


def stratified(draws: int, seed: int, key: str) -> FloatArray:
    """Return shares between 0 and 1, one in each of as many equal parts as there are draws, in random order.

    Args:
        draws: Number of draws. [-]
        seed: The same seed and key give the same shares. [-]
        key: Key of the input. [-]
    Returns: One column of a Latin hypercube, shape (draws,). [-]
    """
    from scipy.stats.qmc import LatinHypercube

    generator = np.random.default_rng([seed, zlib.crc32(key.encode())])
    return np.asarray(LatinHypercube(d=1, rng=generator).random(draws)[:, 0])


def normal(draws: int, seed: int, key: str) -> FloatArray:
    """Return standard normal numbers, one in each of as many equal shares of the distribution as there are draws.

    Args:
        draws: Number of draws. [-]
        seed: The same seed and key give the same numbers. [-]
        key: Key of what is drawn. [-]
    Returns: The numbers, shape (draws,). [-]
    """
    from scipy.special import ndtri

    return np.asarray(ndtri(stratified(draws, seed, key)))
