"""The remaining life with all its draws: the base is the plain study, seeds decide, physics holds in each draw."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from retrofit.checks import assess
from retrofit.checks.prospects import difference, is_alike, prospects
from retrofit.properties import fluid
from retrofit.study import compare
from retrofit.study.bands import band_of, model_band
from retrofit.study.draws import ModelError, design_rows, today_rows, year_by_map, year_rows
from retrofit.study.life import Life, life_of, lived
from retrofit.study.losses import Loss
from retrofit.study.spread import single
from retrofit.study.sums import ComparisonState
from retrofit.study.today import today_of
from retrofit.study.uncertain import physical_inputs, sample
from retrofit.study.year import lowest_condensing_K, run_year, year_conditions, year_plant

DRAWS = 80
TWO = '"R448A", "R452A"'
SPEEDS = ["", 'speed = "variable"\nlowest_speed = "40 %"']


@pytest.fixture(scope="module")
def result(rack_of, usual_year, money):
    """Return the assessed comparison of the rack with its year and money."""
    return assess(compare(rack_of(usual_year, money, candidates=TWO)))


@pytest.fixture(scope="module")
def life(result) -> Life:
    """Return its remaining life."""
    return life_of(result, DRAWS, 1)


def no_error(rows) -> ModelError:
    """Return a model without an error of its own."""
    return ModelError(np.ones(rows.rows), np.ones(rows.rows))


@pytest.mark.parametrize("control", SPEEDS)
def test_the_base_row_is_the_plain_study(rack_of, usual_year, control):
    """Without any plus or minus the rows are the numbers of the comparison and of the year."""
    case = rack_of(usual_year, compressor=control)
    entry = compare(case).candidates[0].plant
    existing, candidate = fluid("R404A"), fluid("R448A")
    rows = sample([], 0, 1)
    today = today_rows(case, existing, rows)
    design = design_rows(today, candidate, no_error(rows))
    asked = year_conditions(case)
    plain = year_plant(today_of(case, existing).plant, candidate, lowest_condensing_K(case, existing))
    run = run_year(plain, asked)
    mapped = year_rows(
        replace(plain, plant=today.plant), plain, year_by_map(today, asked, rows), no_error(rows), run.energy_J
    )

    assert design.cooling_W[0] == pytest.approx(entry.full.cooling_W, rel=1e-6)
    assert design.cop[0] == pytest.approx(entry.same_cooling.cop, rel=1e-6)
    assert design.T_discharge_K[0] == pytest.approx(entry.full.T_discharge_K, abs=1e-4)
    assert mapped.energy_J[0] == pytest.approx(run.energy_J)
    assert mapped.peak_W[0] == pytest.approx(run.peak_W, rel=0.03)  # the mean of like hours, not the highest one


@pytest.mark.parametrize("control", SPEEDS)
def test_a_year_by_map_follows_the_hourly_year(rack_of, usual_year, control):
    """With an input at its limit, a row's year is the hourly year within a tenth of the model's band, on its side."""
    case = rack_of(usual_year, compressor=control)
    existing, candidate = fluid("R404A"), fluid("R448A")
    inputs = [item for item in physical_inputs(case) if item.key in ("year.peak_load", "duty.condensing")]
    rows = sample(inputs, 0, 1)
    today, asked = today_rows(case, existing, rows), year_conditions(case)
    plain = year_plant(today_of(case, existing).plant, candidate, lowest_condensing_K(case, existing))
    base = run_year(plain, asked).energy_J
    mapped = year_rows(
        replace(plain, plant=today.plant), plain, year_by_map(today, asked, rows), no_error(rows), base
    ).energy_J

    attributes = {"year.peak_load": ("year", "peak_load_W"), "duty.condensing": ("duty", "T_cond_K")}
    tenth_of_band = 0.1 * model_band()["cop"].value * base
    for place, item in enumerate(inputs):
        table, attribute = attributes[item.key]
        for row, value in zip(rows.limits(place), (item.spread.low, item.spread.high), strict=True):
            moved = replace(case, **{table: getattr(case, table).model_copy(update={attribute: value})})
            plant = year_plant(today_of(moved, existing).plant, candidate, lowest_condensing_K(moved, existing))
            hourly = run_year(plant, year_conditions(moved)).energy_J
            assert mapped[row] == pytest.approx(hourly, abs=tenth_of_band)
            assert np.sign(mapped[row] - base) == np.sign(hourly - base)


def test_today_against_itself_has_no_spread(life):
    """Today's refrigerant is drawn with the same rows: against itself nothing changes in any draw."""
    today = life.certainty["R404A"]

    assert set(vars(today.quantiles["capacity_ratio"]).values()) == {1.0}
    assert set(vars(today.quantiles["energy_ratio"]).values()) == {1.0}
    assert (today.uses_less, today.cheaper, today.cleaner) == (0.0, 0.0, 0.0)
    assert today.quantiles["energy_J"].p10 < life.years["R404A"].energy_J < today.quantiles["energy_J"].p90


def test_quantiles_stand_around_the_base(life, result):
    """What a draw changes lies about the base; a capacity ratio spreads by the band of the model and little more."""
    found = life.certainty["R448A"].quantiles
    band = band_of(result.candidates[0], "capacity")

    for key in ("cooling_W", "cop", "energy_J", "tewi_kg", "yearly_saving"):
        assert found[key].p10 < found[key].p50 < found[key].p90
    assert found["energy_J"].p10 < life.years["R448A"].energy_J < found["energy_J"].p90
    # By hand: of a normal distribution with 90 % within b, 80 % lie within 1.2816 / 1.6449 b = 0.779 b of its middle.
    ratio = found["capacity_ratio"]
    assert 0.779 * band == pytest.approx(0.5 * (ratio.p90 - ratio.p10) / ratio.p50, rel=0.15)


def test_probabilities_are_shares_of_the_draws(life):
    """Certain outcomes have 0 or 1, doubtful ones something between; R448A leaks less warming than R404A throughout."""
    found = life.certainty["R448A"]

    assert found.cleaner == 1.0
    assert 0.0 < found.carries < 1.0
    assert 0.0 < found.uses_less < 1.0
    assert found.solved > 0.9


def test_swings_are_the_limits_of_one_input(life):
    """The strongest come first; the model's own band leads where two refrigerants are compared."""
    swings = life.certainty["R448A"].swings
    widths = [swing.width for swing in swings["energy_saving_J"]]

    assert widths == sorted(widths, reverse=True)
    assert swings["energy_saving_J"][0].input.key == "model.cop.R448A"
    assert swings["tewi_kg"][0].input.key in ("law.annual_leak_rate", "emissions.grid_factor")
    best = swings["energy_saving_J"][0]
    assert best.at_low < best.base < best.at_high


def test_same_seed_same_numbers_and_no_option_touches_another(life, result, rack_of, usual_year, money):
    """Everything is equal to the last bit with the same seed, also when a candidate is left out; not with another."""
    again = life_of(result, DRAWS, 1)
    alone = life_of(assess(compare(rack_of(usual_year, money))), DRAWS, 1)
    other = life_of(result, DRAWS, 2)

    assert again.certainty == life.certainty
    assert alone.certainty["R448A"].quantiles == life.certainty["R448A"].quantiles
    assert other.certainty["R448A"].quantiles != life.certainty["R448A"].quantiles


def test_a_leakier_plant_emits_more_in_every_quantile(life, result):
    """Twice the leak rate, and the warming of every option rises."""
    law = result.case.law.model_copy(update={"annual_leak_rate": 0.30})
    leaky = life_of(replace(result, case=replace(result.case, law=law)), DRAWS, 1)

    for name, found in leaky.certainty.items():
        usual = life.certainty[name].quantiles["tewi_kg"]
        leaking = found.quantiles["tewi_kg"]
        assert leaking.p10 > usual.p10
        assert leaking.p50 > usual.p50
        assert leaking.p90 > usual.p90


def test_without_exchangers_the_design_point_is_drawn_at_equal_temperatures(case_of):
    """A case that names neither year nor exchangers still tells how sure capacity and COP are, and what is missing."""
    life = life_of(assess(compare(case_of())), DRAWS, 1)
    found = life.certainty["R448A"]

    assert "energy_J" not in found.quantiles
    assert found.uses_less is None
    assert found.quantiles["cop_ratio"].p10 < found.quantiles["cop_ratio"].p90
    assert "no [year]" in life.no_year["R448A"]


def test_one_candidate_that_cannot_be_computed_stops_no_other(rack_of, usual_year, money):
    """A refrigerant without a model has its reason and no numbers."""
    life = life_of(assess(compare(rack_of(usual_year, money, candidates='"R448A", "R473A"'))), DRAWS, 1)

    assert "R473A" not in life.years
    assert life.no_year["R473A"]
    assert life.certainty.keys() == {"R404A", "R448A"}
    assert "R473A" not in life.accounts.options  # what is not computed is not priced


def test_a_new_plant_is_sized_or_reckoned_by_its_maker(rack_of, usual_year, money):
    """A flammable candidate needs a new plant: of today's cooling, or with the seasonal COP its maker states."""
    sized = life_of(assess(compare(rack_of(usual_year, money, candidates='"R454C"'))), 0)
    stated = money + "[options.R454C]\nnew_plant = 90000\nseasonal_cop = 3.0\n"
    by_maker = life_of(assess(compare(rack_of(usual_year, stated, candidates='"R454C"'))), 20)

    assert "today's size" in sized.years["R454C"].machine
    assert sized.years["R454C"].unmet_J == pytest.approx(sized.years["R404A"].unmet_J, abs=1e-3 * 1e12)
    assert by_maker.years["R454C"].energy_J == pytest.approx(by_maker.asked.load_J / 3.0)
    assert by_maker.certainty["R454C"].quantiles["energy_J"].p10 < by_maker.years["R454C"].energy_J


def test_a_makers_figure_is_compared_only_where_both_years_count_the_same_losses(rack_of, usual_year, money):
    """A maker's seasonal COP counts drive, fans, defrosting, starting and stopping; an ideal year of today does not.

    By hand: the usual year gives no motor efficiency and starts and stops, so energy, warming and money are not set
    against each other; with a motor and any speed the compressors run all the time, every loss is counted and all is
    compared. The new plant's own numbers stand either way: load / seasonal COP.
    """
    stated = money + '[options.R454C]\nnew_plant = 90000\nseasonal_cop = 3.0\ncharge = "60 kg"\n'
    motor, any_speed = "motor_efficiency = 0.9\n", 'speed = "variable"\n'
    found = {
        keys: assess(compare(rack_of(usual_year, stated, compressor=keys, candidates='"R454C"')))
        for keys in ("", motor, any_speed, motor + any_speed)
    }
    one_sided = {}
    for keys, result in found.items():
        options = prospects(lived(result, life_of(result, 20, hourly=False)))
        change, warming = (difference(options[0], options[1], name) for name in ("energy", "emissions"))
        one_sided[keys] = change.one_sided
        is_compared = change.amount is not None
        assert options[1].year.energy_J == pytest.approx(options[1].year.delivered_J / 3.0)
        assert is_compared == (not change.one_sided)
        assert is_compared != change.missing.startswith("not comparable")
        assert warming.one_sided == change.one_sided
        assert not is_alike(options[0], options[1], "saving") or is_compared
        assert (options[1].account.saving.state is not ComparisonState.UNKNOWN) == is_compared
        assert (options[1].certainty.uses_less is not None) == is_compared

    assert one_sided[""] == (Loss.DRIVE, Loss.CYCLING)
    assert one_sided[motor] == (Loss.CYCLING,)
    assert one_sided[any_speed] == (Loss.DRIVE,)
    assert one_sided[motor + any_speed] == ()


def test_single_values_need_no_draws(result):
    """With no draws asked for there are none, and the base stands."""
    plain = life_of(result, 0)

    assert plain.certainty == {}
    assert plain.years["R448A"].energy_J > 0
    assert single(1.0) == (1.0, 1.0, 1.0)
