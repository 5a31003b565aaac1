"""How much of its charge a plant loses in a year: from its log, from the case, or a range by type of equipment."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import cache
from importlib.resources import files

from retrofit.case import Case, TopUp
from retrofit.study.result import Entry
from retrofit.study.spread import Spread, single

DAYS_PER_YEAR = 365.25
SHORTEST_LOG_DAYS = 365  # less than a year of top-ups says little: common practice
_LOG = "log of top-ups: all added after the first entry, over the charge and the years from first to last entry"
_WANTED = "`leak_log` or `leak_rate` in [emissions], or `equipment` in [law] for a range by type"


@dataclass(frozen=True)
class LeakRate:
    """Refrigerant lost in a year, as a share of the full charge.

    Attributes:
        key: The input it comes from, by its key in the case file.
        spread: Low, base and high; None where `missing` says what to give.
        source: Where it comes from, in words.
        basis: "log", "case", "default", or "" if not known.
        missing: What to give for it, or for a better one; may be empty.
    """

    key: str
    spread: Spread | None
    source: str
    basis: str
    missing: str = ""


def leak_rate(case: Case, entry: Entry, existing: Entry) -> LeakRate:
    """Return the leak rate of the plant with an option.

    Args:
        case: The case.
        entry: The option; the refrigerant in the plant stands for keeping the plant with its repairs.
        existing: The refrigerant in the plant.
    Returns: The rate that the option itself gives; else, after a change, the one the case gives for every candidate;
        else today's.
    """
    name = entry.refrigerant.designation
    option = case.options.by_refrigerant.get(name) if case.options else None
    if option and option.leak_rate is not None:
        return _given(f"options.{name}.leak_rate", option.leak_rate)
    after = case.emissions.leak_rate_after if case.emissions else None
    if entry is not existing and after is not None:
        return _given("emissions.leak_rate_after", after)
    today = leak_rate_today(case)
    if entry is existing or today.spread is None:
        return today
    return replace(today, source=f"as today: {today.source}")


def leak_rate_today(case: Case) -> LeakRate:
    """Return the leak rate of the plant as it is: its log first, then the case, then a range by type of equipment.

    Args:
        case: The case.
    """
    log = case.emissions.leak_log if case.emissions else None
    found, problem = _from_log(log, case.plant.charge_kg) if log else (None, "")
    found = found or _from_case(case) or _by_equipment(case) or LeakRate("", None, "", "", _WANTED)
    return replace(found, missing="; ".join(part for part in (problem, found.missing) if part))


def _from_log(log: tuple[TopUp, ...], charge_kg: float | None) -> tuple[LeakRate | None, str]:
    """Return the rate of a log, and what is wrong with it."""
    ordered = sorted(log, key=lambda entry: entry.day)
    days = (ordered[-1].day - ordered[0].day).days
    if charge_kg is None:
        return None, "the log of top-ups counts once `charge` in [plant] is given"
    if days <= 0:
        return None, "the log of top-ups lies within one day; give entries of other days"
    # The first entry fills up what was lost before the count begins.
    added_kg = sum(entry.mass_kg for entry in ordered[1:])
    rate = added_kg / charge_kg / (days / DAYS_PER_YEAR)
    source = f"{_LOG}: {added_kg:g} kg / {charge_kg:g} kg / {days / DAYS_PER_YEAR:.2f} years"
    short = f"the log covers {days} days; a year or more says it better" if days < SHORTEST_LOG_DAYS else ""
    return LeakRate("emissions.leak_log", single(rate), source, "log"), short


def _from_case(case: Case) -> LeakRate | None:
    in_emissions = case.emissions.leak_rate if case.emissions else None
    in_law = case.law.annual_leak_rate if case.law else None
    if in_emissions is not None:
        return _given("emissions.leak_rate", in_emissions)
    return None if in_law is None else _given("law.annual_leak_rate", in_law)


def _given(key: str, rate: float) -> LeakRate:
    return LeakRate(key, single(rate), f"`{key}` of the case", "case")


def _by_equipment(case: Case) -> LeakRate | None:
    kind = case.law.equipment if case.law else None
    row = default_rates().get(kind) if kind else None
    if row is None:
        return None
    spread, source = row
    return LeakRate("law.equipment", spread, source, "default", "a log of top-ups goes before a range by type")


@cache
def default_rates() -> Mapping[str, tuple[Spread, str]]:
    """Return the default spread and its source, by kind of equipment; a kind of no default is not in it."""
    text = files("retrofit.study").joinpath("leak_rates.toml").read_text(encoding="utf-8")
    table = tomllib.loads(text)
    about = table.pop("sources")
    found = {}
    for kind, row in table.items():
        ours = "; that this kind belongs there is our own choice" if row.get("taken_for") else ""
        source = f"default for {row['type']}{ours}; {about['range']}; {about['base']}; {about['basis']}"
        found[kind] = (Spread(row["low"] / 100.0, row["base"] / 100.0, row["high"] / 100.0), source)
    return found
