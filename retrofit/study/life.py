"""The remaining life of every option: its year, its emissions, its money, and how sure all of it is."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, fields, replace

import numpy as np

from retrofit.case import Case
from retrofit.errors import RetrofitError
from retrofit.properties import fluid
from retrofit.study.accounts import Account, Accounts, accounts
from retrofit.study.bands import band_of
from retrofit.study.draws import (
    DesignRows,
    ModelError,
    YearByMap,
    YearRows,
    design_rows,
    today_rows,
    year_by_map,
    year_rows,
)
from retrofit.study.money import Appraisal
from retrofit.study.plan import Use
from retrofit.study.result import Comparison, Entry, FloatArray, Installed
from retrofit.study.spread import Spread, base_only, single
from retrofit.study.states import Family
from retrofit.study.today import Today, today_of
from retrofit.study.uncertain import Sample, Uncertain, counted_inputs, physical_inputs, sample
from retrofit.study.year import (
    HOUR_S,
    YearConditions,
    YearPlant,
    YearRun,
    lowest_condensing_K,
    run_year,
    together,
    year_by_maker,
    year_conditions,
    year_plant,
)

DRAWS, SEED = 1000, 1
MOST_DRAWS = 20_000  # at once, for the memory that they take
MOST_SWINGS = 10
QUANTILES = (0.1, 0.5, 0.9)
ROUNDING = 1e-9
CAPACITY = "capacity"  # code of the finding on what the plant delivers at its design point
NO_UNMET = "In the year computed every hour meets its load."
OUTCOMES = ("carries", "pays_back")  # 1 where it does, 0 where not: a share and no quantiles
NO_YEAR = "the case has no [year]"
MODEL = ("capacity", "cop")
# What is drawn on the existing machine, and so is not told of a new plant.
OF_MACHINE = frozenset((*(item.name for item in fields(DesignRows)), "capacity_ratio", "cop_ratio", "carries"))
SWUNG = ("capacity_ratio", "cop_ratio", "energy_J", "energy_saving_J", "yearly_saving", "npv", "tewi_kg", "avoided_t")


@dataclass(frozen=True)
class Quantiles:
    """Values that 10, 50 and 90 per cent of the draws stay below."""

    p10: float
    p50: float
    p90: float


@dataclass(frozen=True)
class Swing:
    """What one input does to a result, the others at their base.

    Attributes:
        input: The input.
        at_low, at_high: The result with the input at its low and at its high limit.
        base: The result with every input at its base.
    """

    input: Uncertain
    at_low: float
    at_high: float
    base: float

    @property
    def width(self) -> float:
        """Return how far the input moves the result. [unit of the result]"""
        return abs(self.at_high - self.at_low)


@dataclass(frozen=True)
class Certainty:
    """How sure the numbers of one refrigerant are.

    Attributes:
        quantiles: By quantity; of a new plant none on the existing machine.
        carries: Share of the draws in which it carries the cooling needed; None of a new plant.
        uses_less, cheaper, cleaner: Share of the draws in which a year takes less electricity, the remaining life
            costs less, discounted, and it warms less than with the plant as it is; None where that is not known.
        pays_back: Share of the draws in which the simple payback lies within the remaining life.
        solved: Share of the draws that have a solution; the others are in none of these numbers.
        swings: By quantity, the inputs that move it most, the strongest first.
    """

    quantiles: Mapping[str, Quantiles]
    carries: float | None
    uses_less: float | None
    cheaper: float | None
    cleaner: float | None
    pays_back: float | None
    solved: float
    swings: Mapping[str, tuple[Swing, ...]]


@dataclass(frozen=True)
class Life:
    """The remaining life of every option.

    Attributes:
        asked: What a year asks; None without [year] in the case.
        years: The year by designation; one that is not there has its reason in `no_year`.
        no_year: Why a refrigerant has no year, by designation.
        accounts: Emissions and money with every input at its base.
        three: The same thrice, shape (3,): every input low, at its base, and high at once; no bounds of a result.
        inputs: What may be off.
        draws, seed: Number of draws, and what they follow from.
        certainty: By designation, only of refrigerants that are computed.
        as_is: How sure the numbers of the plant as it is are; None without draws.
    """

    asked: YearConditions | None
    years: Mapping[str, YearRun]
    no_year: Mapping[str, str]
    accounts: Accounts
    three: Accounts
    inputs: tuple[Uncertain, ...]
    draws: int
    seed: int
    certainty: Mapping[str, Certainty]
    as_is: Certainty | None = None


def with_life(comparison: Comparison, draws: int = DRAWS, seed: int = SEED) -> Comparison:
    """Return a result with the remaining life of every option.

    Args:
        comparison: An assessed result.
        draws: Number of draws of the inputs; 0 for none. [-]
        seed: The same seed gives the same numbers. [-]
    Returns: The same numbers, with `life`; an option that cannot be computed has its reason there.
    """
    return lived(comparison, life_of(comparison, draws, seed))


def lived(comparison: Comparison, life: Life) -> Comparison:
    """Return a result with its remaining life, each finding on its capacity beside the unmet load of its year.

    Args:
        comparison: An assessed result.
        life: Its remaining life.
    """
    candidates = tuple(_beside_year(entry, life) for entry in comparison.candidates)
    return replace(comparison, life=life, candidates=candidates)


def _beside_year(entry: Entry, life: Life) -> Entry:
    year = life.years.get(entry.refrigerant.designation)
    if year is None or entry.is_new_plant:
        return entry
    told = f"In the year computed {year.unmet_h:.0f} h have unmet load." if year.unmet_h else NO_UNMET
    findings = tuple(
        replace(finding, fact=f"{finding.fact} {told}")
        if finding.code == CAPACITY and told not in finding.fact
        else finding
        for finding in entry.findings
    )
    return replace(entry, findings=findings)


@dataclass(frozen=True)
class _Way:
    """How an option spends its year: a plant to balance, or its maker's seasonal COP; or why it has none."""

    entry: Entry
    plant: YearPlant | None = None
    seasonal_cop: float | None = None
    reason: str = ""


def life_of(
    comparison: Comparison,
    draws: int = DRAWS,
    seed: int = SEED,
    *,
    hourly: bool = True,
    before_each: Callable[[], None] = lambda: None,
) -> Life:
    """Return the remaining life of every option of a result.

    Args:
        comparison: An assessed result.
        draws: Number of draws of the inputs; 0 for none. [-]
        seed: The same seed gives the same numbers. [-]
        hourly: Whether each hour is solved for itself; else like hours together, which takes a twentieth of the time.
        before_each: Called before the year of each option; what it raises ends the work.
    Returns: The remaining life; what cannot be computed has its reason.
    """
    case = comparison.case
    asked = year_conditions(case)
    if asked is not None and not hourly:
        asked = together(asked)
    today = None if comparison.existing.duty is None else today_of(case, fluid(case.plant.refrigerant))
    ways = [_way(today, entry) for entry in comparison.entries]
    years: dict[str, YearRun] = {}
    no_year: dict[str, str] = {}
    for way in ways:
        before_each()
        name, found = way.entry.refrigerant.designation, NO_YEAR if asked is None else _year(case, way, asked)
        if isinstance(found, str):
            no_year[name] = found
        else:
            years[name] = found
    uses = {name: Use(year.energy_J, year.peak_W) for name, year in years.items()}
    base, three = accounts(comparison, uses, base_only), accounts(comparison, uses)
    life = Life(asked, years, no_year, base, three, (), 0, seed, {})
    return life if today is None or draws < 1 else _drawn(comparison, life, ways, draws)


def _way(today: Today | None, entry: Entry) -> _Way:
    """Return how an option spends its year."""
    if today is None or entry.duty is None:
        return _Way(entry, reason=entry.reason or "it is not computed")
    case, name = today.case, entry.refrigerant.designation
    option = case.options.by_refrigerant.get(name) if case.options else None
    if entry.family == Family.REPLACE and option is not None and option.seasonal_cop is not None:
        return _Way(entry, seasonal_cop=option.seasonal_cop)
    if today.plant is None or _balanced(entry) is None:
        return _Way(entry, reason=today.plant_reason or entry.plant_reason or "it does not run on the plant")
    try:
        return _Way(entry, _plant(today, entry))
    except RetrofitError as error:
        return _Way(entry, reason=error.message)


def _balanced(entry: Entry) -> Installed | None:
    """Return the balance that a year starts from: of the plant as installed, or of a new one like it."""
    return entry.plant or entry.like_today


def _plant(today: Today, entry: Entry) -> YearPlant:
    """Return the plant of an option: the existing one, or for a new plant one with the displacement it needs."""
    balanced = _balanced(entry)
    assert today.plant is not None
    assert balanced is not None
    lowest = lowest_condensing_K(today.case, fluid(today.case.plant.refrigerant))
    size = balanced.same_cooling.swept_volume_m3_per_s / balanced.full.swept_volume_m3_per_s
    factor = size if entry.family == Family.REPLACE else 1.0
    return year_plant(today.plant, fluid(entry.refrigerant.designation), lowest, factor)


def _year(case: Case, way: _Way, asked: YearConditions) -> YearRun | str:
    """Return a year, or why there is none."""
    if way.seasonal_cop is not None:
        option = case.options.by_refrigerant[way.entry.refrigerant.designation] if case.options else None
        return replace(year_by_maker(case, asked, way.seasonal_cop), peak_W=option.peak_power_W if option else None)
    if way.plant is None:
        return way.reason
    try:
        return run_year(way.plant, asked)
    except RetrofitError as error:
        return error.message


# How sure


def _drawn(comparison: Comparison, life: Life, ways: list[_Way], draws: int) -> Life:
    """Return the remaining life with every draw of its inputs."""
    rows = sample(_inputs(comparison, life), draws, life.seed)
    existing = fluid(comparison.case.plant.refrigerant)
    try:
        today = today_rows(comparison.case, existing, rows)
    except RetrofitError:
        return life
    years = None if life.asked is None or today.plant is None else year_by_map(today, life.asked, rows)
    designs: dict[str, DesignRows] = {}
    uses: dict[str, Use] = {}
    for way in ways:
        if way.entry.duty is None:
            continue
        name = way.entry.refrigerant.designation
        error = ModelError(*(rows.pick(f"model.{quantity}.{name}", single(1.0)) for quantity in MODEL))
        designs[name] = design_rows(today, fluid(name), error)
        if years is not None and name in life.years:
            uses[name] = _use(today, way, years, error, life.years[name])
    money = accounts(comparison, uses, rows.pick)
    new = {way.entry.refrigerant.designation for way in ways if way.entry.is_new_plant}
    certainty = {
        name: _certainty(
            rows,
            _results(comparison, name, designs, uses, money, money.options[name]),
            OF_MACHINE if name in new else frozenset(),
        )
        for name in designs
    }
    name = comparison.case.plant.refrigerant
    as_is = _certainty(rows, _results(comparison, name, designs, uses, money, money.as_is))
    return replace(life, inputs=rows.inputs, draws=draws, certainty=certainty, as_is=as_is)


def _inputs(comparison: Comparison, life: Life) -> Iterator[Uncertain]:
    """Yield every input that may be off: of the plant, of emissions and money, and the model's own."""
    yield from physical_inputs(comparison.case)
    counted: dict[str, Spread] = {}

    def note(key: str, spread: Spread) -> FloatArray:
        counted.setdefault(key, spread)
        return base_only(key, spread)

    uses = {name: Use(year.energy_J, year.peak_W) for name, year in life.years.items()}
    accounts(comparison, uses, note)
    yield from counted_inputs(comparison.case, counted)
    for entry in comparison.candidates:
        if entry.duty is None:
            continue
        for quantity in MODEL:
            band = band_of(entry, quantity)
            name = entry.refrigerant
            yield Uncertain(
                key=f"model.{quantity}.{name.designation}",
                name=f"Model: {'COP' if quantity == 'cop' else quantity} of {name.display_name}",
                kind="ratio",
                spread=Spread(1.0 - band, 1.0, 1.0 + band),
                origin="model",
                why="band of the model against today's refrigerant",
            )


def _use(today: Today, way: _Way, years: YearByMap, error: ModelError, base: YearRun) -> Use:
    """Return the electricity of a year and its peak for every row."""
    if way.plant is None:
        load_J = years.cells.hours @ years.load_W * HOUR_S
        return Use(load_J / base.seasonal_cop, base.peak_W)
    assert today.plant is not None
    ready = replace(way.plant, plant=today.plant)
    found: YearRows = year_rows(ready, way.plant, years, error, base.energy_J)
    return Use(found.energy_J, found.peak_W)


def _results(
    comparison: Comparison,
    name: str,
    designs: Mapping[str, DesignRows],
    uses: Mapping[str, Use],
    money: Accounts,
    account: Account,
) -> dict[str, FloatArray]:
    """Return every quantity of an option that is known, shape (rows,)."""
    today, own = comparison.case.plant.refrigerant, designs[name]
    found: dict[str, object] = {
        **{item.name: getattr(own, item.name) for item in fields(DesignRows)},
        "capacity_ratio": own.cooling_W / designs[today].cooling_W,
        "cop_ratio": own.cop / designs[today].cop,
        "carries": np.where(np.isnan(own.cooling_W), np.nan, own.cooling_W >= own.needed_W * (1.0 - ROUNDING)),
    }
    if name in uses and today in uses:
        energy, as_is = np.asarray(uses[name].electricity_J), np.asarray(uses[today].electricity_J)
        found |= {"energy_J": energy, "energy_saving_J": as_is - energy, "energy_ratio": energy / as_is}
    found |= {"tewi_kg": account.tewi.total_kg, "direct_kg": account.tewi.direct_kg}
    appraisal = account.appraisal
    if appraisal is not None:
        found |= _money(account, appraisal)
    elif account.tewi.total_kg is not None and money.as_is.tewi.total_kg is not None:
        found["avoided_t"] = (money.as_is.tewi.total_kg - account.tewi.total_kg) / 1000.0
    return {key: np.asarray(value, dtype=float) for key, value in found.items() if value is not None}


def _money(account: Account, appraisal: Appraisal) -> dict[str, FloatArray | None]:
    """Return the money of an option; of a lower bound and of an incomplete comparison nothing."""
    assert account.first_cost is not None
    assert account.yearly_cost is not None
    assert account.saving is not None
    back, life = appraisal.payback_years, appraisal.life_years
    return {
        "first_cost": account.first_cost.total,
        "yearly_cost": account.yearly_cost.total,
        "yearly_saving": account.saving.total,
        "life_cost": appraisal.life_cost.total,
        "payback_years": back,
        "pays_back": None if back is None or life is None else np.asarray(back <= life, dtype=float),
        "npv": appraisal.npv,
        "cost_per_t": appraisal.cost_per_t,
        "avoided_t": appraisal.avoided_t,
    }


def _certainty(rows: Sample, results: Mapping[str, FloatArray], hidden: frozenset[str] = frozenset()) -> Certainty:
    """Return quantiles, probabilities and swings of an option's results, those hidden left out."""
    full = {key: np.broadcast_to(values, rows.rows) for key, values in results.items()}
    solved = ~np.isnan(full["cooling_W"][rows.drawn])
    full = {key: values for key, values in full.items() if key not in hidden}

    def share(key: str, level: float = 0.0) -> float | None:
        values = full[key][rows.drawn][solved] if key in full else np.array([])
        return float(np.mean(values > level)) if values.size else None

    quantiles = {
        key: found
        for key, values in full.items()
        if key not in OUTCOMES
        for found in _quantiles(values[rows.drawn][solved])
    }
    swings = {key: _swings(rows, full[key]) for key in SWUNG if key in full}
    return Certainty(
        quantiles=quantiles,
        carries=share("carries", 0.5),
        uses_less=share("energy_saving_J"),
        cheaper=share("npv"),
        cleaner=share("avoided_t"),
        pays_back=share("pays_back", 0.5),
        solved=float(np.mean(solved)),
        swings=swings,
    )


def _quantiles(values: FloatArray) -> Iterator[Quantiles]:
    """Yield the quantiles of what is known, of a sorted sample, so that a value without end may be among it."""
    known = values[~np.isnan(values)]
    if known.size:
        yield Quantiles(*(float(value) for value in np.quantile(known, QUANTILES, method="inverted_cdf")))


def _swings(rows: Sample, values: FloatArray) -> tuple[Swing, ...]:
    """Return what each input does to a result, the strongest first."""
    found = []
    for place, item in enumerate(rows.inputs):
        low, high = (float(values[row]) for row in rows.limits(place))
        if np.isfinite(low) and np.isfinite(high) and low != high:
            found.append(Swing(item, low, high, float(values[0])))
    return tuple(sorted(found, key=lambda swing: -swing.width)[:MOST_SWINGS])
