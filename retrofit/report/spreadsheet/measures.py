"""What the sheet of results holds of an option's year and remaining life: each number, how it is read, and why not."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from dataclasses import dataclass

from retrofit.checks.money_words import INCOMPLETE, INCOMPLETE_WORDS, PAYBACK_WORDS, missing_items_words
from retrofit.checks.outlook import KG_PER_T, currency, money_text
from retrofit.checks.prospects import (
    NO_MONEY,
    Prospect,
    compared,
    difference,
    first_cost_range,
    life_of_result,
    missing_words,
    payback,
    probability,
    prospects,
    sum_of_option,
)
from retrofit.report.emissions import check_months
from retrofit.report.spreadsheet.table import Column
from retrofit.study import Comparison
from retrofit.study.money import AbatementState, PaybackState, abatement_of
from retrofit.study.spread import FloatArray, Spread
from retrofit.study.sums import ComparisonState
from retrofit.units import Display, Unit, UnitSystem

Read = Callable[[Prospect], float | None]
Why = Callable[[Prospect], str]
A_YEAR, REMAINING_LIFE = "a year", "remaining life"
ITSELF = "the others count against it"
BY_MAKER = "the maker's seasonal COP does not tell it"
NO_DRAWS = "no draws were made"
NO_CHECKS = "the tables of law ask for none"
NEVER = PAYBACK_WORDS[PaybackState.NEVER]
NO_RESIDUAL = "no new plant"
SIZED = "a new plant is sized to carry what is needed"
SAME_PLANT = "it is the plant as it is, in its electricity"


@dataclass(frozen=True)
class Measure:
    """A number of an option on one basis.

    Attributes:
        heading, kind: As in a column; the kind is one of a unit system, or one of `scales`.
        read: The number of an option, in SI or as its kind says.
        why: What is missing if there is none.
        drawn: Its name among the results of the draws; empty if they do not keep it.
        against: Whether it counts against the plant as it is, which has none then.
        otherwise: What to say where nothing is missing and there is no number all the same.
    """

    heading: str
    kind: str
    read: Read
    why: Why
    drawn: str = ""
    against: bool = False
    otherwise: str = "not known"


@dataclass(frozen=True)
class Scale:
    """A unit of the sheet: its label, how a number gets there, and how many decimals show it."""

    label: str
    to_number: Callable[[float], float]
    decimals_for: Callable[[Iterable[float | None]], int]


def scale_of(kind: str, comparison: Comparison, units: UnitSystem) -> Scale:
    """Return the unit of a kind of number.

    Args:
        kind: "currency", "currency/year", "currency/t CO2e", "kg CO2e", "t CO2e", "h" or "months", else a kind of the
            unit system. [-]
        comparison: The result, for its currency.
        units: The reader's units.
    """
    if kind in units.displays:
        display = units.displays[kind]
        decimals = (lambda values: 1) if kind == "fraction" else display.decimals_for
        return Scale(display.label, lambda value: float(units.number(kind, value)), decimals)
    label = {"kg CO2e": "t CO2e"}.get(kind, kind.replace("currency", currency(comparison)))
    display = Display(label, Unit(KG_PER_T if kind == "kg CO2e" else 1.0), 0)
    return Scale(label, lambda value: float(display.unit.from_SI(value)), display.decimals_for)


def column_of(measure: Measure, values: Iterable[float | None], comparison: Comparison, units: UnitSystem) -> Column:
    """Return the column of a measure, with the decimals that its values need.

    Args:
        measure: What stands in it.
        values: Its values. [SI, or as its kind says]
        comparison: The result.
        units: The reader's units.
    """
    scale = scale_of(measure.kind, comparison, units)
    return Column(measure.heading, scale.label, scale.decimals_for(values))


def measures(comparison: Comparison) -> dict[str, tuple[Measure, ...]]:
    """Return the numbers of each basis that a case asks for; none without the remaining life.

    Args:
        comparison: A result.
    """
    if comparison.life is None:
        return {}
    case, as_is = comparison.case, prospects(comparison)[0]
    year = (*_energy(as_is), *_year()) if life_of_result(comparison).asked else ()
    climate = _climate(as_is) if case.emissions else ()
    yearly = _yearly(comparison) if case.money else ()
    life = _money(comparison) if case.money else ()
    sure = _sure(as_is) if life_of_result(comparison).certainty else ()
    found = {A_YEAR: (*year, *yearly), REMAINING_LIFE: (*climate, *life, *sure)}
    return {basis: numbers for basis, numbers in found.items() if numbers}


# A year


def _energy(as_is: Prospect) -> tuple[Measure, ...]:
    missing = _missing("energy")
    return (
        Measure("Electricity", "energy", _of_year("energy_J"), missing, "energy_J"),
        Measure("Electricity saved", "energy", _less(as_is, "energy"), missing, "energy_saving_J", True),
        Measure("Electricity saved, share", "fraction", _share(as_is, "energy"), missing, against=True),
    )


def _year() -> tuple[Measure, ...]:
    parts = (
        ("Electricity of compressors", "compressor_J"),
        ("Electricity of fans or pumps at the condenser", "condenser_fans_J"),
        ("Electricity of what runs all hours", "steady_J"),
        ("Electricity of defrosting", "defrost_J"),
    )
    rest = (
        ("Peak power", "power", "peak_W"),
        ("Seasonal COP", "ratio", "seasonal_cop"),
        ("Seasonal COP of compressors", "ratio", "compressor_cop"),
        ("Run time", "fraction", "run_time_fraction"),
        ("Delivered", "energy", "delivered_J"),
        ("Unmet load", "energy", "unmet_J"),
        ("Unmet load, hours", "h", "unmet_h"),
        ("Without a solution", "h", "not_solved_h"),
        ("Highest discharge temperature", "temperature", "T_discharge_highest_K"),
        ("Highest condensing pressure", "pressure", "p_cond_highest_Pa"),
    )
    return (
        *(Measure(heading, "energy", _part(name), _no_year) for heading, name in parts),
        *(Measure(heading, kind, _of_year(name), _no_year) for heading, kind, name in rest),
    )


def _of_year(name: str) -> Read:
    def read(option: Prospect) -> float | None:
        return None if option.year is None else getattr(option.year, name)

    return read


def _part(name: str) -> Read:
    """Return what reads a part of the electricity, which a maker's seasonal COP does not tell."""
    read = _of_year(name)
    return lambda option: read(option) if option.year and option.year.by_air is not None else None


def _no_year(option: Prospect) -> str:
    return BY_MAKER if option.year else option.no_year


def _yearly(comparison: Comparison) -> tuple[Measure, ...]:
    return (
        Measure("Annual cost", "currency/year", _known("yearly_cost"), _why_no_sum("yearly_cost"), "yearly_cost"),
        Measure("Annual saving", "currency/year", *_compared(comparison, "saving"), "yearly_saving", True),
    )


SUMS = {
    A_YEAR: {"annual cost": "yearly_cost"},
    REMAINING_LIFE: {"first cost": "first_cost", "life cost": "life_cost"},
}
"""Sums of each basis that may be lower bounds."""


def _known(name: str) -> Read:
    """Return what reads the known part of a sum: a lower bound where an item is missing."""
    return lambda option: _number(found.known) if (found := sum_of_option(option, name)) else None


def _why_no_sum(name: str) -> Why:
    def why(option: Prospect) -> str:
        found = sum_of_option(option, name)
        if found is None:
            return NO_MONEY
        return _needs(missing_items_words(found.missing)) if found.missing else missing_words(option, "npv")

    return why


def _compared(comparison: Comparison, quantity: str) -> tuple[Read, Why]:
    """Return what reads a saving or net present value against the plant as it is, and what says why there is none."""

    def why(option: Prospect) -> str:
        found, needs = compared(option, quantity), missing_words(option, quantity)
        if found.state is not ComparisonState.INCOMPLETE:
            return _needs(needs)
        known = money_text(comparison, found.of_known, signed=True)
        return f"{INCOMPLETE}, {INCOMPLETE_WORDS}; needs {needs}; the items known for both come to {known}"

    return lambda option: compared(option, quantity).amount, why


def _needs(missing: str) -> str:
    return f"needs {missing}" if missing else ""


# The remaining life


def _climate(as_is: Prospect) -> tuple[Measure, ...]:
    parts = (
        ("Direct: leaks", "leaks_kg", ""),
        ("Direct: at the end", "end_of_life_kg", ""),
        ("Direct: at the change", "change_kg", ""),
        ("Direct", "direct_kg", "direct_kg"),
        ("Indirect", "indirect_kg", ""),
        ("Direct and indirect", "total_kg", "tewi_kg"),
    )
    edition, missing = as_is.account.tewi.gwp.edition, _missing("emissions")
    return (
        Measure("Remaining life", "years", _of_tewi("life_years"), missing),
        Measure("Charge", "mass", lambda o: _base(o.account.plan.charge_kg), _charge_missing),
        Measure(f"GWP counted with, {edition}", "ratio", lambda o: o.account.tewi.gwp.value, _gwp_doubt),
        Measure("Leaks a year", "fraction", lambda o: _base(o.account.plan.leak.spread), _leak_missing),
        Measure(
            "Time between leak checks",
            "months",
            lambda o: check_months(o)[0],
            lambda o: check_months(o)[1],
            otherwise=NO_CHECKS,
        ),
        *(Measure(heading, "kg CO2e", _of_tewi(name), missing, drawn) for heading, name, drawn in parts),
        Measure("Avoided", "t CO2e", _avoided(as_is), missing, "avoided_t", True),
        Measure("Avoided, share", "fraction", _share(as_is, "emissions"), missing, against=True),
    )


def _gwp_doubt(option: Prospect) -> str:
    return option.account.tewi.gwp.doubt


def _charge_missing(option: Prospect) -> str:
    return _lacking(option.account.plan.charge_missing)


def _leak_missing(option: Prospect) -> str:
    return _lacking(option.account.plan.leak.missing)


def _of_tewi(name: str) -> Read:
    return lambda option: _number(getattr(option.account.tewi, name))


def _avoided(as_is: Prospect) -> Read:
    less = _less(as_is, "emissions")

    def read(option: Prospect) -> float | None:
        found = less(option)
        return None if found is None else found / KG_PER_T

    return read


def _money(comparison: Comparison) -> tuple[Measure, ...]:
    npv, not_compared = _compared(comparison, "npv")

    no_first = _why_no_sum("first_cost")

    def payback_years(option: Prospect) -> float | None:
        return payback(option).years

    def no_payback(option: Prospect) -> str:
        state = payback(option).state
        return not_compared(option) if state is PaybackState.UNKNOWN else PAYBACK_WORDS[state]

    def cost_per_t(option: Prospect) -> float | None:
        return _number(option.account.appraisal.cost_per_t) if option.account.appraisal else None

    def no_cost_per_t(option: Prospect) -> str:
        appraisal = option.account.appraisal
        if appraisal is not None and abatement_of(appraisal) is AbatementState.NONE_AVOIDED:
            return "no CO2e is avoided"
        return _missing("emissions")(option) or not_compared(option)

    def residual(option: Prospect) -> float | None:
        return _number(option.account.appraisal.residual) if option.account.appraisal else None

    return (
        Measure("First cost", "currency", _known("first_cost"), no_first, "first_cost"),
        Measure("First cost, every item low", "currency", lambda o: _first(o, 0), no_first),
        Measure("First cost, every item high", "currency", lambda o: _first(o, 2), no_first),
        Measure("Residual value of the new plant", "currency", residual, lambda o: "", otherwise=NO_RESIDUAL),
        Measure("Life cost", "currency", _known("life_cost"), _why_no_sum("life_cost"), "life_cost"),
        Measure("Payback", "years", payback_years, no_payback, "payback_years", True),
        Measure("Net present value", "currency", npv, not_compared, "npv", True),
        Measure("Cost of a tonne avoided", "currency/t CO2e", cost_per_t, no_cost_per_t, "cost_per_t", True),
    )  # fmt: skip


def _first(option: Prospect, place: int) -> float | None:
    found = first_cost_range(option)
    return None if found is None else found[place]


def _sure(as_is: Prospect) -> tuple[Measure, ...]:
    def share(name: str) -> Read:
        def read(option: Prospect) -> float | None:
            is_same = name == "uses_less" and option.entry is as_is.entry
            return None if is_same else probability(option, name)

        return read

    def sized(option: Prospect) -> str:
        return SIZED if option.certainty and option.account.plan.family == "replace" else NO_DRAWS

    rests_on = (
        ("uses less electricity", "uses_less", "energy"),
        ("costs less", "cheaper", "npv"),
        ("pays back within the remaining life", "pays_back", "npv"),
        ("warms less", "cleaner", "emissions"),
    )
    return (
        Measure("Probability: carries the cooling", "fraction", share("carries"), sized),
        *(
            Measure(f"Probability: {text}", "fraction", share(name), _missing(quantity), "", True, SAME_PLANT)
            for text, name, quantity in rests_on
        ),
        Measure("Draws solved", "fraction", lambda o: o.certainty.solved if o.certainty else None, lambda o: NO_DRAWS),
    )


# Numbers and reasons


def known(measure: Measure, option: Prospect) -> float | None:
    """Return the number of an option; None if it is not known, without end, or counts against itself."""
    if is_itself(measure, option):
        return None
    value = measure.read(option)
    return value if value is not None and math.isfinite(value) else None


def is_itself(measure: Measure, option: Prospect) -> bool:
    """Say whether the plant as it is would be counted against itself."""
    return measure.against and option.deed == "as it is"


def reason(measure: Measure, option: Prospect) -> str:
    """Return why an option has no such number."""
    return ITSELF if is_itself(measure, option) else measure.why(option) or measure.otherwise


def _missing(quantity: str) -> Why:
    if quantity == "energy":
        return lambda option: missing_words(option, quantity)  # a sentence by itself
    return lambda option: _lacking(missing_words(option, quantity))


def _lacking(missing: str) -> str:
    """Return what is missing as a reason; nothing if nothing is.

    Args:
        missing: What is missing, in words. [-]
    """
    return f"missing: {missing}" if missing else ""


def _number(value: FloatArray | float | None) -> float | None:
    return None if value is None else float(value)


def _less(as_is: Prospect, quantity: str) -> Read:
    """Return what reads how much less an option has of a quantity than the plant as it is."""
    return lambda option: _minus(difference(as_is, option, quantity).amount)


def _share(as_is: Prospect, quantity: str) -> Read:
    return lambda option: _minus(difference(as_is, option, quantity).ratio)


def _minus(value: float | None) -> float | None:
    return None if value is None else 0.0 - value


def _base(spread: Spread | None) -> float | None:
    return None if spread is None else spread.base
