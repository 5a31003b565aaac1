"""What is missing, key by key: what each key is, where to read it, how to write it, and what it would settle.

Every unknown of a result names the keys that settle it: components, findings (law and room among them), readings in
doubt, and of the remaining life year, emissions and money. Here they are gathered by key, the most decisive first.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from enum import StrEnum

from retrofit.case import Case, KeyFacts, facts_of
from retrofit.case.model import field_of
from retrofit.study import Comparison, Entry, Family, Level
from retrofit.study.accounts import Account
from retrofit.study.hardware.conditions import CANDIDATES
from retrofit.study.life import Life

WEATHER, GRID, LEAK, LIFE = "year.weather", "emissions.grid_factor", "emissions.leak_rate", "law.remaining_life"


class Part(StrEnum):
    """What part of a result is not known."""

    FINDING = "finding"
    COMPONENT = "component"
    READING = "reading"
    YEAR = "year"
    EMISSIONS = "emissions"
    MONEY = "money"


@dataclass(frozen=True)
class Unknown:
    """Something of one refrigerant that is not known.

    Attributes:
        part: Part of the result that it is in.
        refrigerant: Designation.
        code, name: Of the component, the finding or the quantity.
        keys: Keys that would settle it.
        decisive: Whether no verdict can be in favour before.
    """

    part: Part
    refrigerant: str
    code: str
    name: str
    keys: tuple[str, ...]
    decisive: bool = False


@dataclass(frozen=True)
class OpenKey:
    """A key that the case leaves out, with what it would settle."""

    facts: KeyFacts
    settles: tuple[Unknown, ...]

    @property
    def decisive(self) -> bool:
        """Return whether a verdict waits for it."""
        return any(unknown.decisive for unknown in self.settles)

    @property
    def components(self) -> int:
        """Return of how many components it settles what is not known."""
        return len({unknown.code for unknown in self.settles if unknown.part == Part.COMPONENT})

    @property
    def names(self) -> tuple[str, ...]:
        """Return the names of what it settles, each once, the decisive first."""
        ordered = sorted(self.settles, key=lambda unknown: not unknown.decisive)
        return tuple(dict.fromkeys(unknown.name for unknown in ordered))

    @property
    def refrigerants(self) -> tuple[str, ...]:
        """Return the refrigerants that it is asked for, in the order of the case."""
        return tuple(dict.fromkeys(unknown.refrigerant for unknown in self.settles))


def unknowns(comparison: Comparison) -> tuple[Unknown, ...]:
    """Return everything of a result that is not known, refrigerant by refrigerant.

    Args:
        comparison: An assessed result, with or without its remaining life.
    """
    of_entries = (unknown for entry in comparison.entries for unknown in _of_entry(comparison, entry))
    return (*_of_readings(comparison), *of_entries)


def survey(comparison: Comparison) -> tuple[OpenKey, ...]:
    """Return the keys that would settle what is not known, the most decisive first.

    First what verdicts wait for, then by how many options wait, and by how much each key settles.

    Args:
        comparison: An assessed result, with or without its remaining life.
    """
    by_key: dict[str, list[Unknown]] = {}
    for unknown in unknowns(comparison):
        for key in unknown.keys:
            by_key.setdefault(key, []).append(unknown)
    found = [OpenKey(facts_of(key), tuple(settles)) for key, settles in by_key.items()]
    return tuple(sorted(found, key=_rank))


def _rank(item: OpenKey) -> tuple[bool, int, int]:
    decided = sum(unknown.decisive for unknown in item.settles)
    return not item.decisive, -decided, -len(item.settles)


def _of_readings(comparison: Comparison) -> Iterator[Unknown]:
    """Yield what contradicts itself in the readings: to be read again, or left out."""
    name = comparison.existing.refrigerant.designation
    for finding in comparison.baseline.problems if comparison.baseline is not None else ():
        if finding.level == Level.UNKNOWN and finding.missing:
            yield Unknown(Part.READING, name, finding.code, finding.title, finding.missing)


def _of_entry(comparison: Comparison, entry: Entry) -> Iterator[Unknown]:
    name = entry.refrigerant.designation
    for finding in entry.findings:
        if finding.level == Level.UNKNOWN:
            yield Unknown(Part.FINDING, name, finding.code, finding.title, finding.missing, finding.decisive)
    for row in entry.hardware:
        if row.verdict == "unknown":
            yield Unknown(Part.COMPONENT, name, row.code, row.name, row.missing)
    if comparison.life is not None and entry.is_computed:
        yield from _of_life(comparison.case, comparison.life, entry)


# The remaining life


def _of_life(case: Case, life: Life, entry: Entry) -> Iterator[Unknown]:
    name, account = entry.refrigerant.designation, life.accounts.options.get(entry.refrigerant.designation)
    keys = () if name in life.years else _year_keys(case, life)
    if keys:
        yield Unknown(Part.YEAR, name, "year", "Year: energy and peak", keys)
    if account is None:
        return
    if case.emissions is not None and account.tewi.total_kg is None:
        yield Unknown(Part.EMISSIONS, name, "tewi", "Emissions over the remaining life", _emission_keys(account, keys))
    if case.money is not None:
        yield from _of_money(case, account, name, keys)


def _year_keys(case: Case, life: Life) -> tuple[str, ...]:
    """Return the keys that a year needs: weather, and what describes both exchangers."""
    found = [WEATHER] if life.asked is None else []
    for way in ("evaporator", "condenser"):
        table = getattr(case, way)
        outlet = None if table is None else table.outlet_K if table.outlet_K is not None else table.flow_kg_per_s
        given = {"inlet": table and table.inlet_K, "outlet": outlet, "arrangement": table and table.arrangement}
        found += [f"{way}.{name}" for name, value in given.items() if value is None]
    return tuple(found) or (CANDIDATES,)


def _emission_keys(account: Account, year_keys: tuple[str, ...]) -> tuple[str, ...]:
    found = [LIFE] if account.tewi.life_years is None else []
    found += _charge_keys(account)
    if account.tewi.indirect_kg is None:
        found += year_keys or (GRID,)
    return tuple(dict.fromkeys(found)) or (CANDIDATES,)


def _charge_keys(account: Account) -> list[str]:
    """Return the keys that the refrigerant lost in a year needs."""
    plan = account.plan
    key = f"options.{plan.refrigerant.designation}.charge" if plan.family == Family.REPLACE else "plant.charge"
    found = [key] if plan.charge_kg is None else []
    return found + ([LEAK] if account.plan.leak.spread is None else [])


def _law_keys(case: Case) -> tuple[str, ...]:
    """Return the keys that the tables of law ask for and the case leaves out."""
    law = case.law
    given = {
        "law.equipment": law and law.equipment,
        "law.date_of_change": law and law.date_of_change,
        LIFE: law and (law.remaining_life_years or law.end),
        "law.annual_leak_rate": law and law.annual_leak_rate,
    }
    return tuple(key for key, value in given.items() if value is None)


def _of_money(case: Case, account: Account, name: str, year_keys: tuple[str, ...]) -> Iterator[Unknown]:
    for kind, sums in (("First cost", account.first_cost), ("Annual cost", account.yearly_cost)):
        for item in sums.sum.missing if sums is not None else ():
            given = tuple(_whole(key) for key in item.keys[:1])
            keys = given or _keys_beside_prices(case, account, item.code, year_keys)
            label = f"{kind}: {item.code.replace('_', ' ')}"
            yield Unknown(Part.MONEY, name, f"{kind.lower().replace(' ', '-')}-{item.code}", label, keys)
    if account.tewi.life_years is None:
        yield Unknown(Part.MONEY, name, "life-cost", "Cost over the remaining life", (LIFE,))


def _whole(key: str) -> str:
    """Return a key of the case file: of a price in a table by refrigerant the table, of a year its weather."""
    if key == "year":
        return WEATHER
    return key if field_of(key) is not None else key.rpartition(".")[0]


def _keys_beside_prices(case: Case, account: Account, code: str, year_keys: tuple[str, ...]) -> tuple[str, ...]:
    """Return the keys that an item of money needs whose price is known: of the year, the charge, the leaks or law."""
    if code in ("energy", "demand"):
        return year_keys or (CANDIDATES,)
    charge = tuple(_charge_keys(account))
    if code == "leak_checks":
        law = ("law.jurisdiction",) if account.plan.law is None else _law_keys(case)
        return (*law, *charge) or (CANDIDATES,)
    return charge or (CANDIDATES,)
