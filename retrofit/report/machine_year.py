"""The remaining life for machines: the JSON contract `retrofit.year/1`, in SI base units, money in the user's own."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import asdict, fields
from typing import Any

import numpy as np

from retrofit.checks.money_words import payback_words
from retrofit.checks.outlook import outlook
from retrofit.checks.prospects import (
    Prospect,
    difference,
    first_cost_range,
    is_alike,
    life_of_result,
    missing_words,
    payback,
    probability,
    prospects,
    ranked,
)
from retrofit.report.emissions import check_months
from retrofit.report.machine_agreement import agreement_json
from retrofit.study import Comparison, Entry
from retrofit.study.first_cost import FirstCost
from retrofit.study.life import Certainty, Swing
from retrofit.study.money import abatement_of, payback_of
from retrofit.study.spread import Spread, at
from retrofit.study.sums import Missing
from retrofit.study.uncertain import Uncertain
from retrofit.study.year import AirBins, PlantMap, YearRun
from retrofit.units import SI

SCHEMA = "retrofit.year/1"
NOT_NUMBERS = ("machine", "reason", "monthly_J", "by_air", "map", "one_sided")
NUMBERS = [item.name for item in fields(YearRun) if item.name not in NOT_NUMBERS]
# Results by their name here; what is money carries the word currency, what is a time in years or hours keeps its own.
RENAMED = {
    "first_cost": "first_cost_currency",
    "yearly_cost": "yearly_cost_currency",
    "yearly_saving": "yearly_saving_currency",
    "npv": "net_present_value_currency",
    "life_cost": "life_cost_currency",
    "cost_per_t": "cost_per_tonne_CO2e_currency",
    "avoided_t": "avoided_kg",
}
IN_KG = ("avoided_t",)
TABLES = ("year", "emissions", "money", "options")


def year_json(comparison: Comparison) -> dict[str, Any]:
    """Return the remaining life as the JSON object of the contract; what is not known is None.

    Args:
        comparison: An assessed result with its remaining life.
    """
    life, case = life_of_result(comparison), comparison.case
    options = prospects(comparison)
    words = outlook(comparison, SI)
    return {
        "schema": SCHEMA,
        "title": case.title,
        "case_file": case.path,
        "versions": dict(comparison.versions),
        "currency": case.money.currency if case.money else None,
        "conventions": {
            "as_is": "differences, savings and CO2e avoided count against the plant as it is",
            "is_alike": "no meaningful difference: inside the band of the model",
            "quantiles": "values that 10, 50 and 90 per cent of the draws stay below",
            "money": "in the currency of the case, prices as today; keys end in _currency",
            "states": "a sum is complete, at least (a lower bound) or unknown; a comparison complete, incomplete (only "
            "items known for both) or unknown; a payback never, none needed, within, beyond or unknown",
            "signs": "a saving and a net present value are above 0 where the option saves money",
        },
        "asked": _asked(comparison),
        **agreement_json(comparison),
        "draws": {"number": life.draws, "seed": life.seed, "method": "Latin hypercube, inputs independent"},
        "inputs": [_input(item) for item in life.inputs],
        "options": [_option(comparison, options[0], option) for option in options],
        "ranking": _ranking(comparison),
        "answer": [matter.text for matter in words.matters],
        "stopped": words.stopped or None,
        "meter": words.meter or None,
        "what_moves_most": words.swing or None,
        "assumed": [asdict(item) for item in case.defaults if item.key.partition(".")[0] in TABLES],
        "cautions": {entry.refrigerant.designation: _cautions(entry) for entry in comparison.entries},
    }


def _cautions(entry: Entry) -> list[dict[str, Any]]:
    return [asdict(caution) for caution in entry.cautions]


def number(value: Any) -> Any:
    """Return a number or an array as JSON has it; what is not finite as None.

    Args:
        value: A number, an array or None. [any]
    """
    if value is None:
        return None
    found = np.asarray(value, dtype=float)
    if found.ndim:
        return [number(item) for item in found]
    return float(found) if math.isfinite(float(found)) else None


def _asked(comparison: Comparison) -> dict[str, Any] | None:
    asked, year = life_of_result(comparison).asked, comparison.case.year
    if asked is None or year is None:
        return None
    return {
        "weather": asked.source,
        "serves": asked.serves,
        "load_J": asked.load_J,
        "T_air_K": {"lowest": float(asked.T_air_K.min()), "highest": float(asked.T_air_K.max())},
        "metered_J": year.metered_J,
    }


def _input(item: Uncertain) -> dict[str, Any]:
    return {
        "key": item.key,
        "name": item.name,
        "kind": item.kind or "currency",
        **_spread(item.spread),
        "distribution": item.distribution,
        "origin": item.origin,
        "why": item.why,
    }


def _spread(found: Spread) -> dict[str, float]:
    return {"low": found.low, "base": found.base, "high": found.high}


def _option(comparison: Comparison, as_is: Prospect, option: Prospect) -> dict[str, Any]:
    return {
        "refrigerant": option.entry.refrigerant.designation,
        "deed": option.deed,
        "status": option.entry.status,
        "reason": option.entry.reason,
        "verdict": option.entry.verdict,
        "year": _year(option),
        "emissions": _emissions(option),
        "money": _money(comparison, option),
        "against_as_is": _against(as_is, option),
        "certainty": _certainty(option),
    }


def _year(option: Prospect) -> dict[str, Any]:
    run = option.year
    if run is None:
        return {"plant": None, "missing": option.no_year}
    return {
        "plant": run.machine,
        **{name: number(getattr(run, name)) for name in NUMBERS},
        "reason": run.reason or None,
        "monthly_J": number(run.monthly_J),
        "by_air": _by_air(run.by_air),
        "map": _map(run.map),
        "missing": None,
    }


def _by_air(bins: AirBins | None) -> dict[str, Any] | None:
    return None if bins is None else {item.name: number(getattr(bins, item.name)) for item in fields(AirBins)}


def _map(found: PlantMap | None) -> dict[str, Any] | None:
    return None if found is None else {item.name: number(getattr(found, item.name)) for item in fields(PlantMap)}


def _emissions(option: Prospect) -> dict[str, Any]:
    plan, warming = option.account.plan, option.account.tewi
    months, why = check_months(option)
    return {
        "charge_kg": _spread(plan.charge_kg) if plan.charge_kg else None,
        "leak_share_per_year": _spread(plan.leak.spread) if plan.leak.spread else None,
        "leak_source": plan.leak.source,
        "gwp_100yr": warming.gwp.value,
        "gwp_edition": warming.gwp.edition,
        "gwp_doubt": warming.gwp.doubt,
        "leak_check_months": months,
        "leak_check_unknown": why or None,
        "life_years": number(warming.life_years),
        **{name: number(getattr(warming, name)) for name in (
            "leaks_kg", "end_of_life_kg", "change_kg", "direct_kg", "indirect_kg", "total_kg", "years",
            "direct_by_year_kg", "indirect_by_year_kg", "leak_kg_per_year",
        )},
        "left_out": list(warming.left_out),
        "missing": list(warming.missing),
    }  # fmt: skip


def _money(comparison: Comparison, option: Prospect) -> dict[str, Any] | None:
    account, money = option.account, comparison.case.money
    appraisal, yearly, saving, first = account.appraisal, account.yearly_cost, account.saving, option.three.first_cost
    if money is None or appraisal is None or yearly is None or saving is None or first is None:
        return None
    low, base, high = first_cost_range(option) or (None, None, None)
    found = payback(option)
    return {
        "first_cost_currency": {"low": low, "base": base, "high": high},
        "first_cost_state": first.state.value,
        "first_cost_items": _items(first),
        "first_cost_missing": _missing(first.missing),
        "first_cost_not_counted": list(first.not_counted),
        "yearly_cost_currency": {code: number(part) for code, part in yearly.parts.items()},
        "yearly_cost_total_currency": number(yearly.sum.known),
        "yearly_cost_state": yearly.sum.state.value,
        "yearly_cost_missing": _missing(yearly.missing.values()),
        "life_cost_currency": number(appraisal.life_cost.known),
        "life_cost_state": appraisal.life_cost.state.value,
        "life_cost_missing": _missing(appraisal.life_cost.missing),
        "residual_value_currency": number(appraisal.residual),
        "new_plant_life_years": number(account.first_cost.plant_life_years) if account.first_cost else None,
        "discount_rate": money.discount_rate,
        "comparison_state": appraisal.state.value,
        "excluded_items": _missing(appraisal.excluded),
        "yearly_saving_state": saving.state.value,
        "yearly_saving_currency": number(saving.total),
        "yearly_saving_of_known_items_currency": number(saving.of_known),
        "yearly_saving_not_counted": [item.code for item in saving.not_counted],
        "payback_state": found.state.value,
        "payback_years": found.years,
        "payback_words": payback_words(found),
        "net_present_value_currency": number(appraisal.npv),
        "net_present_value_of_known_items_currency": number(appraisal.npv_of_known),
        "abatement_state": abatement_of(appraisal).value,
        "cost_per_tonne_CO2e_currency": number(appraisal.cost_per_t),
        "cumulative_saving_by_year_currency": number(appraisal.saved),
        "missing": missing_words(option, "npv") or None,
    }


def _missing(items: Iterable[Missing]) -> dict[str, dict[str, Any]]:
    """Return items that are missing by their codes, each with the keys that give it and the reason beside prices."""
    return {item.code: {"keys": list(item.keys), "reason": item.reason or None} for item in items}


def _items(first: FirstCost) -> list[dict[str, Any]]:
    return [
        {
            "code": item.code,
            "name": item.name,
            "low_currency": at(item.amount, 0),
            "base_currency": at(item.amount, 1),
            "high_currency": at(item.amount, 2),
            "made_from": item.made_from,
        }
        for item in first.items
    ]


def _against(as_is: Prospect, option: Prospect) -> dict[str, Any] | None:
    if option is as_is:
        return None
    found = {name: difference(as_is, option, name) for name in ("energy", "emissions")}
    unit = {"energy": "J", "emissions": "kg"}
    return {
        **{
            f"{name}_{unit[name]}": {
                "amount": number(change.amount),
                "ratio": number(change.ratio),
                "is_alike": change.is_alike,
                "missing": change.missing or None,
                "losses_on_one_side": [loss.value for loss in change.one_sided],
            }
            for name, change in found.items()
        },
        "saving_is_alike": is_alike(as_is, option, "saving"),
        "npv_is_alike": is_alike(as_is, option, "npv"),
    }


def _certainty(option: Prospect) -> dict[str, Any] | None:
    found = option.certainty
    if found is None:
        return None
    return {
        "solved_share": found.solved,
        "carries_probability": probability(option, "carries"),
        "uses_less_probability": found.uses_less,
        "cheaper_probability": found.cheaper,
        "cleaner_probability": found.cleaner,
        "pays_back_probability": found.pays_back,
        "quantiles": _quantiles(found, payback(option).life_years),
        "swings": {
            RENAMED.get(name, name): [_swing(name, swing) for swing in swings] for name, swings in found.swings.items()
        },
    }


def _quantiles(found: Certainty, life: float | None) -> Mapping[str, Any]:
    result: dict[str, Any] = {}
    for name, values in found.quantiles.items():
        ends: dict[str, Any] = {key: _amount(name, getattr(values, key)) for key in ("p10", "p50", "p90")}
        if name == "payback_years":
            ends |= {
                f"{key}_state": payback_of(getattr(values, key), life).state.value for key in ("p10", "p50", "p90")
            }
        result[RENAMED.get(name, name)] = ends
    return result


def _swing(name: str, swing: Swing) -> dict[str, Any]:
    ends = {key: _amount(name, getattr(swing, key)) for key in ("at_low", "base", "at_high")}
    return {"input": swing.input.key, **ends}


def _amount(name: str, value: float) -> float | None:
    found: float | None = number(value * 1000.0 if name in IN_KG else value)
    return found


def _ranking(comparison: Comparison) -> dict[str, Any]:
    found = ranked(comparison)
    scores, stability = found.scores, found.stability
    return {
        "weights": dict(found.order.weights),
        "order": [
            {"refrigerant": name, "place": place, "score": total}
            for name, place, total in zip(found.order.names, found.order.places, found.order.totals, strict=True)
        ],
        "ties": [list(pair) for pair in found.order.ties],
        "criteria": dict(zip(scores.criteria, scores.measures, strict=True)),
        "not_weighed": list(scores.left_out),
        "counted_as_worst": {name: list(missing) for name, missing in scores.unknown.items()},
        "not_ranked": dict(scores.not_ranked),
        "stability": None
        if stability is None
        else {
            "sets": stability.sets,
            "drawn": stability.drawn,
            "first_share": dict(zip(scores.names, map(float, stability.first), strict=True)),
            "first_alone_share": dict(zip(scores.names, map(float, stability.alone), strict=True)),
        },
        "flip": None if found.flip is None else asdict(found.flip) | {"words": found.flip.words},
    }
