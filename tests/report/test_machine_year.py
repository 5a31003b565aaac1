"""The JSON of the remaining life: plain numbers in SI, the same bytes for the same seed, and sums that add up."""

import csv
import io
import json

import numpy as np
import pytest

from retrofit.report.machine_year import SCHEMA, year_json
from retrofit.report.year_lines import year_csv
from retrofit.study.life import with_life

HARBOUR = "harbour-market"


@pytest.fixture(scope="module")
def told(lived):
    """Return the JSON object of a shipped case, having gone through text."""
    return json.loads(json.dumps(year_json(lived(HARBOUR)), allow_nan=False))


def keys(value):
    """Yield every key with its number or text."""
    if isinstance(value, dict):
        for key, item in value.items():
            yield key, item
            yield from keys(item)
    elif isinstance(value, list):
        for item in value:
            yield from keys(item)


def test_it_is_the_contract_with_the_currency_named(told):
    """Schema, currency, seed and number of draws stand there, and money says so by its key."""
    assert told["schema"] == SCHEMA == "retrofit.year/1"
    assert told["currency"] == "EUR"
    assert told["draws"]["number"] == 60
    assert told["draws"]["seed"] == 1
    assert all(
        name.endswith("_currency")
        for name, _ in keys(told)
        if name.startswith(("first_cost_c", "net_present", "cumulative", "life_cost_c"))
    )


def test_the_same_seed_gives_the_same_bytes(assessed, lived):
    """Two computations agree letter by letter; another seed moves the quantiles and leaves the base alone."""
    first = json.dumps(year_json(lived(HARBOUR)))
    other = year_json(with_life(assessed(HARBOUR), draws=60, seed=2))

    assert json.dumps(year_json(with_life(assessed(HARBOUR), draws=60, seed=1))) == first
    assert json.dumps(other) != first
    assert [option["year"] for option in other["options"]] == [
        option["year"] for option in json.loads(first)["options"]
    ]


def test_the_year_adds_up(told):
    """Months, outdoor temperatures and parts each sum to the electricity of the year, hours to 8760 (definition)."""
    for option in told["options"]:
        year = option["year"]
        parts = sum(year[name] for name in ("compressor_J", "condenser_fans_J", "steady_J", "defrost_J"))
        assert sum(year["monthly_J"]) == pytest.approx(year["energy_J"], rel=1e-9)
        assert sum(year["by_air"]["energy_J"]) == pytest.approx(year["energy_J"], rel=1e-9)
        assert parts == pytest.approx(year["energy_J"], rel=1e-9)
        assert sum(year["by_air"]["hours"]) == pytest.approx(8760.0)
        assert year["seasonal_cop"] == pytest.approx(year["delivered_J"] / year["energy_J"])
        assert np.shape(year["map"]["cop"]) == (len(year["map"]["T_sink_K"]), len(year["map"]["T_source_K"]))


def test_warming_adds_up(told):
    """Direct and indirect sum to the total, by year as well (EN 378-1, annex on TEWI; from memory)."""
    for option in told["options"]:
        found = option["emissions"]
        direct, indirect = found["direct_kg"], found["indirect_kg"]
        assert direct == pytest.approx(found["leaks_kg"] + found["end_of_life_kg"] + found["change_kg"])
        assert found["total_kg"] == pytest.approx(direct + indirect)
        assert sum(found["direct_by_year_kg"]) == pytest.approx(direct)
        assert sum(found["indirect_by_year_kg"]) == pytest.approx(indirect)


def test_money_adds_up(told):
    """First cost is the sum of its items, payback first cost over saving, where what is saved crosses 0 (definition).

    The net present value is saving x annuity - first cost + residual value discounted, (1 - 1.06^-8) / 0.06 the annuity
    of the case; it is the life cost of the plant as it is less that of the option, and the cost of a tonne is its
    opposite over the tonnes avoided.
    """
    annuity, today = (1.0 - 1.06**-8) / 0.06, told["options"][0]["money"]["life_cost_currency"]
    for option in told["options"][1:]:
        found, life = option["money"], option["emissions"]["life_years"]
        first, saving = found["first_cost_currency"]["base"], found["yearly_saving_currency"]
        npv, avoided_t = found["net_present_value_currency"], -option["against_as_is"]["emissions_kg"]["amount"] / 1e3
        assert (life, found["discount_rate"]) == (8.0, 0.06)
        assert sum(item["base_currency"] for item in found["first_cost_items"]) == pytest.approx(first)
        assert found["payback_years"] == pytest.approx(first / saving)
        assert found["payback_state"] == ("within" if first / saving <= life else "beyond")
        residual = found["residual_value_currency"] or 0.0
        assert (residual > 0.0) == (option["deed"] == "new plant")
        assert npv == pytest.approx(saving * annuity - first + residual / 1.06**8)
        assert npv == pytest.approx(today - found["life_cost_currency"])
        assert found["cost_per_tonne_CO2e_currency"] == pytest.approx(-npv / avoided_t)
        assert found["abatement_state"] == ("saves" if npv > 0.0 else "costs")
        assert found["comparison_state"] == found["life_cost_state"] == "complete"
        if found["payback_years"] <= life:
            years, saved = option["emissions"]["years"], found["cumulative_saving_by_year_currency"]
            assert np.interp(found["payback_years"], years, saved) == pytest.approx(0.0, abs=1e-6 * first)


def test_quantiles_rise_and_probabilities_are_shares(told):
    """10, 50 and 90 per cent rise; a share lies between 0 and 1; every swing names an input that is listed."""
    known = {item["key"] for item in told["inputs"]}
    for option in told["options"]:
        found = option["certainty"]
        for ends in found["quantiles"].values():
            values = [ends[key] if ends[key] is not None else np.inf for key in ("p10", "p50", "p90")]
            assert values == sorted(values)
        for name, value in found.items():
            if name.endswith(("_probability", "_share")) and value is not None:
                assert 0.0 <= value <= 1.0
        assert {swing["input"] for swings in found["swings"].values() for swing in swings} <= known


def test_no_saving_is_no_number(lived):
    """A payback that never comes is null and says so: the heat pump's new plant uses more than today's."""
    found = {option["refrigerant"]: option for option in year_json(lived("coast-heat-pump"))["options"]}

    assert found["R290"]["money"]["payback_years"] is None
    assert found["R290"]["money"]["payback_state"] == "never"
    assert found["R290"]["money"]["payback_words"] == "never pays back: no annual saving"
    assert found["R290"]["year"]["monthly_J"] is None
    assert found["R290"]["certainty"]["carries_probability"] is None


def test_csv_is_the_json(lived):
    """Each number of the CSV, read back, is that of the JSON; a payback that never comes is empty and said."""
    for name in (HARBOUR, "freezer-store"):
        rows = list(csv.DictReader(io.StringIO(year_csv(lived(name)))))
        options = year_json(lived(name))["options"]

        assert [(row["refrigerant"], row["deed"]) for row in rows] == [(o["refrigerant"], o["deed"]) for o in options]
        checked = 0
        for row, option in zip(rows, options, strict=True):
            assert row["cautions"]
            for column, text in row.items():
                found = option
                for part in column.split("."):
                    found = found.get(part) if isinstance(found, dict) else None
                if isinstance(found, float):
                    assert float(text) == found, column
                    checked += 1
                elif found is None and column not in ("calibration", "cautions", "currency", "safety_class"):
                    assert text == "", column
        assert checked > 60 * len(options)
    worse = next(row for row in rows if row["refrigerant"] == "R452A")
    assert worse["money.payback_years"] == ""
    assert worse["money.payback_state"] == "never"
    assert {"year.energy_J", "emissions.total_kg", "money.first_cost_currency.base"} <= set(worse)
    assert not {"year.monthly_J", "money", "year.map"} & set(worse)
