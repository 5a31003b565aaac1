"""TEWI: a published example, fractional years and stepping grids by hand, and physics that cannot turn round."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from retrofit.refrigerants import find
from retrofit.study.emissions import co2e_t, gwp_of, tewi, year_ends
from retrofit.study.leaks import LeakRate
from retrofit.study.plan import Plan, Use, life_years, start_year
from retrofit.study.spread import base_only, low_base_high, single

KWH = 3.6e6


def plan(name="R134a", charge=10.0, rate=0.1, family="as is"):
    """Return a plan of given charge and leak rate."""
    leak = LeakRate("leak", None if rate is None else single(rate), "", "case", "" if rate else "leak rate")
    charge_kg = None if charge is None else single(charge)
    return Plan(find(name), family, "charge", charge_kg, "" if charge else "charge", leak, None, None)


@pytest.fixture(scope="module")
def ordinary(case_with):
    """Return a case with all that a TEWI needs."""
    return case_with(
        plant={"charge": "10 kg"},
        law={"remaining_life": "15 years", "date_of_change": "2027-01-01"},
        emissions={"gwp_edition": "AR5", "recovery_at_end": "75 %", "grid_factor": "0.6 kg/kWh"},
    )


def test_a_published_example(ordinary):
    """A compressor maker's textbook example of TEWI; its inputs from memory, its sums worked here.

    R134a, GWP 1300, 10 kg, leaks 1 kg a year, 15 years, recovery 75 %, 5 kW for 5000 hours a year, 0.6 kg/kWh:
    1300 x 1 x 15 = 19 500; 1300 x 10 x 0.25 = 3 250; 15 x 25 000 x 0.6 = 225 000; in all 247 750 kg.
    """
    found = tewi(ordinary, plan(), plan(), Use(25_000 * KWH), base_only)

    assert found.gwp.value == 1300.0
    assert found.leaks_kg == pytest.approx(19_500)
    assert found.end_of_life_kg == pytest.approx(3_250)
    assert found.change_kg == 0.0
    assert found.indirect_kg == pytest.approx(225_000)
    assert found.total_kg == pytest.approx(247_750)
    assert found.missing == ()


def test_the_change_is_counted(case_with):
    """A conversion adds GWP x old charge x loss; a released charge counts in full. GWP of AR4 by AR4's own list.

    By hand: R404A 3922 (published, 3921.6 by mass) x 260 kg x 5 % = 50 981 kg; released: 1 019 616 kg.
    """
    law = {"remaining_life": "8 years"}
    careful = case_with(law=law, emissions={"gwp_edition": "AR4", "lost_at_change": "5 %"})
    released = case_with(law=law, emissions={"gwp_edition": "AR4", "old_charge": "released"})
    old, new = plan("R404A", 260.0, 0.15), plan("R448A", 278.0, 0.15, "convert")

    # The printed GWP has four digits.
    assert tewi(careful, new, old, Use(), base_only).change_kg == pytest.approx(3922 * 260 * 0.05, rel=2e-4)
    assert tewi(released, new, old, Use(), base_only).change_kg == pytest.approx(3922 * 260, rel=2e-4)
    assert tewi(released, replace(old, family="keep"), old, Use(), base_only).change_kg == 0.0
    # Printed: 260 kg of R404A are 1020 t, 278 kg of R448A are 386 t, three digits each (GWP 3922 and 1387).
    assert co2e_t(old, "AR4").base == pytest.approx(1020, rel=5e-4)
    assert co2e_t(new, "AR4").base == pytest.approx(386, rel=2e-3)


def test_a_part_of_a_year_counts_as_that(case_with):
    """By hand: 2.5 years at 100 kWh and 0.5 kg/kWh are 125 kg; leaks by year 1, 1 and a half of a year's."""
    case = case_with(law={"remaining_life": "2.5 years"}, emissions={"grid_factor": "0.5 kg/kWh"})

    found = tewi(case, plan(), plan(), Use(100 * KWH), base_only)

    assert found.years.tolist() == [0.0, 1.0, 2.0, 2.5]
    assert found.indirect_by_year_kg == pytest.approx([0.0, 50.0, 50.0, 25.0])
    assert found.indirect_kg == pytest.approx(125.0)
    # 1300 x 1 kg a year; the end, 1300 x 10 x (1 - 85 %) = 1950, falls into the last part.
    assert found.direct_by_year_kg == pytest.approx([0.0, 1300.0, 1300.0, 650.0 + 1950.0])
    assert found.direct_by_year_kg.sum() == pytest.approx(found.direct_kg)


def test_a_grid_that_steps(case_with):
    """By hand, from 2027-07-01 (181 of 365 days gone) for 2 years: 184/365 at 0.4, 1 at 0.3, 181/365 at 0.1."""
    case = case_with(
        law={"remaining_life": "2 years", "date_of_change": "2027-07-01"},
        emissions={"grid_factor": "0.4 kg/kWh", "grid_years": [[2028, "0.3 kg/kWh"], [2029, "0.1 kg/kWh"]]},
    )

    found = tewi(case, plan(), plan(), Use(1000 * KWH), base_only)

    gone = 181 / 365
    assert start_year(case) == pytest.approx(2027 + gone)
    assert found.indirect_kg == pytest.approx(1000 * ((1 - gone) * 0.4 + 0.3 + gone * 0.1))
    assert found.indirect_by_year_kg == pytest.approx(
        [0.0, 1000 * ((1 - gone) * 0.4 + gone * 0.3), 1000 * ((1 - gone) * 0.3 + gone * 0.1)]
    )


def test_grid_years_need_a_day(case_with):
    """Without a day of change factors by year cannot be placed: unknown, with the key to give; a day given places."""
    import datetime

    emissions = {"grid_years": [[2028, "0.3 kg/kWh"]]}
    case = case_with(law={"remaining_life": "2 years"}, emissions=emissions)

    assert tewi(case, plan(), plan(), Use(KWH)).indirect_kg is None
    assert any("date_of_change" in words for words in tewi(case, plan(), plan(), Use(KWH)).missing)
    on = datetime.date(2026, 1, 1)
    assert tewi(case, plan(), plan(), Use(KWH), base_only, on).indirect_kg == pytest.approx(0.6)


@pytest.mark.parametrize(
    ("part", "lacking"),
    [({"charge": None}, "charge"), ({"rate": None}, "leak rate")],
)
def test_unknown_is_never_zero(ordinary, part, lacking):
    """Without charge or leak rate there is no direct part and no sum, and the words say what is missing."""
    found = tewi(ordinary, plan(**part), plan(), Use(25_000 * KWH))

    assert found.direct_kg is None
    assert found.total_kg is None
    assert found.indirect_kg is not None
    assert lacking in found.missing


def test_no_energy_no_sum(ordinary, case_with):
    """Without electricity there is a direct part and no sum; without [emissions] nothing but what leaks."""
    direct = tewi(ordinary, plan(), plan(), Use())
    nothing = tewi(case_with(law={"remaining_life": "3 years"}), plan(), plan(), Use(KWH))

    assert direct.direct_kg is not None
    assert direct.total_kg is None
    assert "electricity of a year" in direct.missing
    assert (nothing.direct_kg, nothing.indirect_kg, nothing.leaks_kg) == (None, None, None)
    assert nothing.leak_kg_per_year == pytest.approx([1.0] * 3)


def test_the_edition_is_named():
    """The edition asked for counts; where it lists none another's value comes with a word."""
    assert gwp_of(find("R404A"), "AR4").value == pytest.approx(3922, abs=0.5)
    assert gwp_of(find("R404A"), "AR5").value == pytest.approx(3943, abs=0.5)
    ammonia = gwp_of(find("R717"), "AR5")
    assert (ammonia.value, ammonia.edition) == (0.0, "AR4")
    assert "AR5 gives none" in ammonia.doubt


def test_life_from_dates(case_with):
    """A day of change and an end make a life: 2027-01-01 to 2029-01-01 are 731 days."""
    case = case_with(law={"date_of_change": "2027-01-01", "end": "2029-01-01"})

    assert life_years(case) == pytest.approx(731 / 365.25)


def test_arrays_equal_single_numbers(ordinary):
    """Draws in one array give what each draw gives alone, lives of different lengths too."""
    rates, lives, energy = np.array([0.05, 0.1, 0.3]), np.array([2.0, 7.25, 15.0]), np.array([1.0, 2.0, 3.0]) * 1e13
    drawn = {"leak": rates, "law.remaining_life": lives}
    together = tewi(ordinary, plan(), plan(), Use(energy), lambda key, s: drawn.get(key, np.asarray(s.base)))

    for i in range(3):
        one = {key: values[i] for key, values in drawn.items()}
        alone = tewi(ordinary, plan(), plan(), Use(energy[i]), lambda key, s, one=one: np.asarray(one.get(key, s.base)))
        for name in ("leaks_kg", "end_of_life_kg", "indirect_kg", "total_kg"):
            assert np.broadcast_to(getattr(together, name), 3)[i] == pytest.approx(float(getattr(alone, name)))
        assert together.direct_by_year_kg[i].sum() == pytest.approx(float(alone.direct_kg))
        assert together.indirect_by_year_kg[i].sum() == pytest.approx(float(alone.indirect_kg))
    assert year_ends([0.5, 2.0]).tolist() == [[0.0, 0.5, 0.5], [0.0, 1.0, 2.0]]
    assert tewi(ordinary, plan(), plan(), Use(1e13), low_base_high).total_kg.shape == (3,)


@settings(max_examples=60, deadline=None, derandomize=True)
@given(
    rate=st.floats(0.001, 0.9),
    more=st.floats(0.001, 0.1),
    charge=st.floats(1.0, 1e4),
    energy=st.floats(0.0, 1e14),
    name=st.sampled_from(["R404A", "R22", "R454C", "R290", "R744"]),
)
def test_leakier_and_hungrier_emits_more(ordinary, rate, more, charge, energy, name):
    """More leaks, more charge or more electricity never emit less."""

    def total(rate, charge, energy):
        found = tewi(ordinary, plan(name, charge, rate), plan(), Use(energy), base_only)
        assert found.total_kg == pytest.approx(float(found.direct_kg + found.indirect_kg))
        return float(found.total_kg)

    base = total(rate, charge, energy)
    assert total(rate + more, charge, energy) > base
    assert total(rate, charge * (1.0 + more), energy) > base
    assert total(rate, charge, energy + 1e12) > base
