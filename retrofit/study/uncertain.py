"""Inputs that may be off, and draws of them: what the case says with plus or minus, and what is usual where it does not.

An input lies somewhere within its limits, nowhere more likely than elsewhere: a rectangular distribution, as the
Guide to the expression of uncertainty in measurement (JCGM 100:2008, 4.3.7) takes where only limits are known. A sum
of money with low, base and high is triangular about its base.
"""

from __future__ import annotations

import tomllib
import zlib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

import numpy as np
from numpy.typing import NDArray

from retrofit.case import Case, Range, meaning
from retrofit.case.model import FIELDS
from retrofit.study.result import FloatArray

CLIMATE = "year.climate"  # the weather of the year as a whole, warmer or colder
LEAK_RATE = "leak_rate"  # whatever it was taken from
# Keys of the case whose numbers the study takes as arrays.
DRAWN = (
    "duty.cooling", "duty.evaporating", "duty.condensing", "duty.useful_superheat", "duty.line_superheat",
    "duty.subcooling", "compressor.isentropic_efficiency", "compressor.volumetric_efficiency",
    "compressor.swept_volume", "compressor.motor_efficiency", "evaporator.inlet", "evaporator.outlet",
    "evaporator.flow", "condenser.inlet", "condenser.outlet", "condenser.flow", "year.peak_load", "year.base_load",
    "year.condenser_fans", "year.evaporator_fans", "year.pumps", "year.defrost_power", "plant.charge",
    "emissions.recovery_at_end", "emissions.lost_at_change", "emissions.grid_factor", "money.tariff",
    "money.demand_charge", "money.leak_check", "money.levy",
)  # fmt: skip
EFFICIENCIES = ("compressor.isentropic_efficiency", "compressor.volumetric_efficiency")
NOT_BELOW_ZERO = ("temperature difference", "fraction")


@dataclass(frozen=True)
class Uncertain:
    """An input and the limits that it lies within.

    Attributes:
        key: Its key in the case, or a name of ours.
        name: What it is, for a reader.
        kind: Its kind of quantity, as unit systems name it; empty for money.
        base, low, high: The value of the case, and its limits. [SI]
        origin: "case" or "assumed".
        why: Where the limits come from.
        shape: "rectangular" or "triangular".
    """

    key: str
    name: str
    kind: str
    base: float
    low: float
    high: float
    origin: str
    why: str
    shape: str = "rectangular"

    def at(self, share: FloatArray) -> FloatArray:
        """Return the value below which a share of the distribution lies.

        Args:
            share: Shares from 0 to 1, of any shape. [-]
        Source: inverse of the distribution function; of the triangular one see any handbook of statistics.
        """
        if self.shape == "rectangular":
            return self.low + share * (self.high - self.low)
        width = max(self.high - self.low, np.finfo(float).tiny)
        turn = (self.base - self.low) / width
        rising = self.low + np.sqrt(share * width * (self.base - self.low))
        falling = self.high - np.sqrt((1.0 - share) * width * (self.high - self.base))
        return np.where(share < turn, rising, falling)


@dataclass(frozen=True)
class Sample:
    """Values of the inputs, row by row: the base, the draws, and each input at its limits with the others at base.

    Attributes:
        inputs: The inputs.
        values: Shape (inputs, rows).
        draws: Number of draws.
        seed: What the draws follow from.
    """

    inputs: tuple[Uncertain, ...]
    values: FloatArray
    draws: int
    seed: int

    @property
    def rows(self) -> int:
        """Return the number of rows. [-]"""
        return int(self.values.shape[1])

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

    def of(self, key: str) -> FloatArray | None:
        """Return the values of an input, shape (rows,), or None if it is not uncertain.

        Args:
            key: Its key.
        """
        places = [place for place, item in enumerate(self.inputs) if item.key == key]
        return self.values[places[0]] if places else None


def uncertain_inputs(case: Case) -> tuple[Uncertain, ...]:
    """Return the inputs of a case that may be off, with the limits of the case or those that are usual.

    Args:
        case: The case.
    """
    return tuple(item for key in (*DRAWN, CLIMATE, LEAK_RATE) for item in _input(case, key))


@cache
def _usual() -> Mapping[str, dict[str, object]]:
    return tomllib.loads(files("retrofit.study").joinpath("inputs.toml").read_text(encoding="utf-8"))


def _input(case: Case, key: str) -> Iterator[Uncertain]:
    base = _value(case, key)
    if isinstance(base, Range):
        if base.low < base.high:
            why = "low, base and high of the case"
            yield Uncertain(key, meaning(key), "", base.base, base.low, base.high, "case", why, "triangular")
        return
    if base is None:
        return
    own, usual = case.widths.get(key), _usual().get(key)
    if own is None and usual is None:
        return
    if own is not None:
        half, origin, why = own, "case", "plus or minus of the case"
    else:
        assert usual is not None
        half, origin, why = float(usual["plus_minus"]), "assumed", str(usual["why"])  # type: ignore[arg-type]
        half *= base if usual["by"] == "share" else 1.0
    kind, name = _named(case, key)
    low, high = base - half, base + half
    low = max(low, 0.0) if kind in NOT_BELOW_ZERO else low
    high = min(high, 1.0) if kind == "fraction" else high
    if low < high:
        yield Uncertain(key, name, kind, base, low, high, origin, why)


def has_curve(case: Case) -> bool:
    """Say whether the compressor of a case has efficiency points or a polynomial, which are off by a factor.

    Args:
        case: The case.
    """
    return case.compressor.efficiency_points is not None or case.compressor.polynomial is not None


def _named(case: Case, key: str) -> tuple[str, str]:
    if key in EFFICIENCIES:
        return "ratio" if has_curve(case) else "fraction", meaning(key).rstrip(".")
    if key == CLIMATE:
        return "temperature shift", "Outdoor temperature of the year"
    if key == LEAK_RATE:
        return "ratio", "Leak rate, today and after"
    how = next((extra for extra in FIELDS[key][1].metadata if hasattr(extra, "shown_kind")), None)
    return how.shown_kind() if how else "", meaning(key).rstrip(".")


def _value(case: Case, key: str) -> float | Range | None:
    """Return the value of an input; for those that stand for many numbers, the factor or shift that leaves them."""
    if key == CLIMATE:
        return None if case.weather is None else 0.0
    if key == LEAK_RATE:
        return None if case.emissions is None else 1.0
    table, _, _ = key.partition(".")
    value = getattr(getattr(case, table), FIELDS[key][0], None)
    if key in EFFICIENCIES and has_curve(case):
        return 1.0
    return value if isinstance(value, int | float | Range) else None


def sample(inputs: tuple[Uncertain, ...], draws: int, seed: int) -> Sample:
    """Return draws of inputs, each input's range divided into as many equal shares as there are draws.

    Args:
        inputs: The inputs.
        draws: Number of draws. [-]
        seed: The same seed gives the same draws. [-]
    Source: Latin hypercube sampling, McKay, Beckman and Conover (1979).
    """
    base = np.array([item.base for item in inputs])
    values = np.repeat(base[:, None], 1 + draws + 2 * len(inputs), axis=1)
    shares = latin_hypercube(len(inputs), draws, seed)
    for place, item in enumerate(inputs):
        values[place, 1 : 1 + draws] = item.at(shares[place])
        start = 1 + draws + 2 * place
        values[place, start], values[place, start + 1] = item.low, item.high
    return Sample(inputs, values, draws, seed)


def latin_hypercube(count: int, draws: int, seed: int) -> FloatArray:
    """Return shares between 0 and 1, each row with one value in each of as many equal parts as there are draws.

    Args:
        count: Number of inputs. [-]
        draws: Number of draws. [-]
        seed: The same seed gives the same shares. [-]
    Returns: Shares, shape (count, draws). [-]
    """
    from scipy.stats.qmc import LatinHypercube

    if count == 0:
        return np.empty((0, draws))
    return np.asarray(LatinHypercube(d=count, rng=np.random.default_rng(seed)).random(draws).T)


def own_seed(seed: int, name: str) -> int:
    """Return a seed for what belongs to one refrigerant alone, so that others do not change its draws.

    Args:
        seed: The seed of the study. [-]
        name: Its designation.
    """
    return seed * 1_000_003 + zlib.crc32(name.encode())
