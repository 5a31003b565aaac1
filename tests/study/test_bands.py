"""The bands of the model: their figures against published slopes and the models, and which options are alike.

The widening of the band is our own derivation; what it rests on is checked here: the slope of ln p by hand and against
published tables, the steps of capacity, COP and discharge temperature against cycles solved at shifted pressures.
"""

import csv
import math
from dataclasses import replace
from itertools import combinations, pairwise
from pathlib import Path
from types import SimpleNamespace

import pytest

from retrofit.cycle import Settings, solve_cycle
from retrofit.properties import Grade, fluid, grade
from retrofit.refrigerants import find
from retrofit.study import Entry, compare
from retrofit.study.bands import (
    QUANTITIES,
    _table,
    alike,
    band_of,
    bands_of,
    error_parts,
    evidence_of,
    groups_alike,
    is_wider,
    model_band,
    pair_band,
    shared_errors,
)
from retrofit.study.states import Evidence

KELVIN = 273.15
NAMES = ("capacity", "cop", "T_discharge", "pressure")
WORDS = ("close", "fair", "weak", "not checked")
PUBLISHED = Path(__file__).parents[1] / "published" / "property_values.csv"
WEAK = ("R401A", "R402A", "R437A", "R438A", "R453A", "R458A")  # as in tests/properties/test_grade.py, without two
ESTIMATED = (*WEAK, "R406A", "R408A", "R409A", "R424A", "R426A", "R481A")


def entry(word="close", *, bubble=0.0, dew=0.0, pairs=(), name="R448A", graded=True, evidence=Evidence.NEAR):
    """Return a refrigerant with a grade of its model, or none."""
    found = Grade(word, bubble, dew, pairs, word) if graded else None
    return Entry(find(name), "convert", "ok", None, (), grade=found, evidence=evidence)


def test_every_grade_has_four_bands_with_unit_source_and_reason():
    """Nothing stands alone, and the worse the grade the wider every band."""
    for word in WORDS:
        assert tuple(model_band(word)) == NAMES
        assert all(b.value > 0.0 and b.unit and b.source and b.reason for b in model_band(word).values())
    for name in NAMES:
        close, fair, weak, unchecked = (model_band(word)[name].value for word in WORDS)
        assert close < fair < weak == unchecked
    with pytest.raises(KeyError):
        model_band("good")


def test_the_base_bands_are_those_the_project_states():
    """6 % of capacity, 8 % of COP, 8 K of discharge temperature, 2 % of pressure; wider with less evidence."""
    assert [band.value for band in model_band().values()] == [0.06, 0.08, 8.0, 0.02]
    assert [band.value for band in model_band(evidence=Evidence.FAR).values()] == [0.085, 0.095, 8.0, 0.02]
    for evidence in (Evidence.UNTESTED, Evidence.CONSTANT):
        assert [band.value for band in model_band(evidence=evidence).values()] == [0.12, 0.14, 8.0, 0.02]


def test_the_wider_bands_by_hand():
    """In quadrature, rounded up: sqrt(6^2 + (3.5 x 3.5)^2) = 13.6, sqrt(8^2 + 5.25^2) = 9.57 and so on.

    Fair, 1.6 K: sqrt(6^2 + 5.6^2) = 8.21, sqrt(8^2 + 2.4^2) = 8.35, in kelvin the same, sqrt(2^2 + 5.6^2) = 5.95.
    Weak, 3.5 K: 13.64, 9.57, in kelvin the same, sqrt(2^2 + 12.25^2) = 12.41.
    """
    assert [band.value for band in model_band("fair").values()] == [0.09, 0.09, 9.0, 0.06]
    assert [band.value for band in model_band("weak").values()] == [0.14, 0.10, 10.0, 0.13]


def test_the_slope_of_ln_p_by_hand():
    """Clausius and Clapeyron with an ideal vapour, L = 87 J/(mol K) x 230 K by Trouton's rule (from memory).

    L/(R T^2) = 20 010 / (8.314 x 263.15^2) = 3.48 %/K at -10 degC, 4.55 at 230 K and 2.45 at 40 degC.
    """
    slope = 87.0 * 230.0 / (8.314 * 263.15**2)

    assert slope == pytest.approx(0.035, abs=0.0005)  # half its last digit
    assert _table()["base"]["pressure"]["per_K"] == _table()["base"]["capacity"]["per_K"] == 0.035


@pytest.mark.parametrize("name", ["R12", "R134a", "R404A", "R410A"])
def test_the_slope_of_ln_p_in_published_tables(name):
    """Printed dew pressures some 20 K apart: 3.5 %/K to the half per cent between -20 and 0 degC.

    Below it is steeper, above 20 degC flatter, so 3.5 stands for the evaporating pressures of a plant, and is more than
    enough for the condensing ones. These four boil at -52 to -26 degC, as most that fill such plants.
    """
    with PUBLISHED.open(encoding="utf-8", newline="") as file:
        rows = [row for row in csv.DictReader(file) if (row["refrigerant"], row["source"]) == (name, "RefData252")]
    table = {float(row["T_C"]): float(row["printed"]) for row in rows if row["quantity"] == "p_dew_kPa"}
    points = sorted(table)
    slopes = {(a, b): math.log(table[b] / table[a]) / (b - a) for a, b in pairwise(points)}
    evaporating = [slope for (a, b), slope in slopes.items() if b == 0.0]

    assert evaporating == [pytest.approx(_table()["base"]["pressure"]["per_K"], abs=0.005)]
    assert all(slope > 0.035 for (a, b), slope in slopes.items() if b <= -20.0)
    assert all(slope < 0.035 for (a, b), slope in slopes.items() if a >= 0.0)


@pytest.fixture(scope="module", params=["R22", "R404A"])
def shifted(request):
    """Return what a kelvin in both pressures, and in each alone, does to capacity, COP and discharge temperature."""
    behaviour = fluid(request.param)
    settings = Settings(5.0, 0.0, 3.0, 0.7)

    def solve(evaporating, condensing):
        found = solve_cycle(behaviour, behaviour.p_dew(evaporating), behaviour.p_dew(condensing), settings)
        return found.volumetric_capacity_J_per_m3, found.cop, found.T_discharge_K

    start = solve(-10.0 + KELVIN, 40.0 + KELVIN)
    changes = {}
    for name, (evaporating, condensing) in {"both": (1, 1), "evap": (1, 0), "cond": (0, 1)}.items():
        new = solve(-10.0 + KELVIN + evaporating, 40.0 + KELVIN + condensing)
        changes[name] = (new[0] / start[0] - 1.0, new[1] / start[1] - 1.0, new[2] - start[2])
    return {name: tuple(float(value) for value in values) for name, values in changes.items()}


def test_the_steps_lie_between_those_of_cycles_at_shifted_pressures(shifted):
    """Capacity between both pressures off and one; COP between none and 3 %; discharge at most what one can make."""
    step = {name: _table()["base"][name]["per_K"] for name in NAMES}
    (both_q, both_cop, both_T), (evap_q, evap_cop, _), (_, cond_cop, cond_T) = (
        shifted[name] for name in ("both", "evap", "cond")
    )

    assert both_q < step["capacity"] < evap_q + 0.001
    assert abs(both_cop) < 0.005 < step["cop"] < min(evap_cop, -cond_cop)
    assert both_T < step["T_discharge"] < cond_T + 0.35  # R404A 1.2 K, R22 1.6 K, rounded to the half


def test_the_kelvins_counted_off_are_those_of_the_catalogue():
    """Weak blends but two are within 3.5 K; those with estimated pairs have a root mean square of 2.1 K."""
    worst = {}
    for name in ESTIMATED:
        found = grade(fluid(name), find(name))
        assert found.estimated_pairs
        worst[name] = max(abs(found.bubble_difference_K), abs(found.dew_difference_K))

    assert max(worst[name] for name in WEAK) == pytest.approx(_table()["grade"]["weak"]["offset_K"], abs=0.05)
    mean = math.sqrt(sum(value**2 for value in worst.values()) / len(worst))
    assert mean == pytest.approx(_table()["estimated_pairs"]["offset_K"], abs=0.05)


def test_the_band_of_a_refrigerant_is_that_of_its_own_model():
    """Estimated pairs widen a fair grade; one further off than the weak ones counts by its own distance."""
    assert bands_of(entry("close")) == model_band()
    assert bands_of(entry("fair")) == model_band("fair")
    assert bands_of(entry("weak", dew=2.7)) == model_band("weak")
    assert band_of(entry("fair", pairs=(("R22", "R143a"),)), "pressure") == 0.08  # sqrt(2^2 + 7.35^2) = 7.6
    far = entry("weak", bubble=-10.3)
    assert band_of(far, "pressure") == 0.37  # sqrt(2^2 + 36.05^2) = 36.1
    assert "own distance" in bands_of(far)["pressure"].reason
    unknown = entry(graded=False)
    assert [band_of(unknown, name) for name in NAMES] == [model_band("weak")[name].value for name in NAMES]
    assert "no graded model" in bands_of(unknown)["cop"].reason
    assert [is_wider(item) for item in (entry(), entry("fair"), far, unknown)] == [False, True, True, True]


def test_the_band_against_the_existing_refrigerant_is_that_of_the_ratio():
    """The existing one has none of its own; of the two models the worse one counts, either way round."""
    today, close, weak = entry(name="R404A", evidence=Evidence.SAME), entry(), entry("weak")
    weak_today = entry("weak", name="R404A", evidence=Evidence.SAME)

    for name in NAMES:
        assert pair_band(today, weak, name) == pair_band(weak, today, name) == band_of(weak, name)
        assert pair_band(weak_today, close, name) == band_of(weak, name)
        assert pair_band(today, close, name) == band_of(close, name)
    assert pair_band(today, today, "cop") == 0.0


def test_candidates_share_a_part_of_their_errors():
    """By hand: without a common component the correlation is 0.5, so the band of the difference is that of each.

    sqrt(6^2 + 6^2 - 2 x 0.5 x 36) = 6. R32 with R410A, half of it R32: 0.5 + 0.4 sqrt(0.5) = 0.783, and the band
    6 sqrt(2 (1 - 0.783)) = 3.95. Sister blends are told apart better still, and a refrigerant from itself wholly.
    """
    one, other, half = (entry(name=name) for name in ("R32", "R134a", "R410A"))

    assert shared_errors(one, other) == pytest.approx(0.5)
    assert pair_band(one, other, "capacity") == pytest.approx(0.06)
    assert shared_errors(one, half) == pytest.approx(0.5 + 0.4 * math.sqrt(0.5))
    assert pair_band(one, half, "capacity") == pytest.approx(0.06 * math.sqrt(2.0 * (0.5 - 0.4 * math.sqrt(0.5))))
    assert pair_band(entry(), entry(name="R449A"), "capacity") < 0.03
    for name in ("R448A", "R134a", "R455A"):
        assert sum(weight**2 for weight in error_parts(find(name)).values()) == pytest.approx(1.0)


def solved(name, T_isentropic_K):
    """Return a refrigerant solved at a duty."""
    return replace(entry(name=name), duty=SimpleNamespace(T_discharge_isentropic_K=T_isentropic_K))


@pytest.mark.parametrize(
    ("kind", "name", "change_K", "expected"),
    [
        ("piston", "R448A", 10.0, Evidence.NEAR),
        ("scroll", "R448A", -25.0, Evidence.NEAR),
        ("piston", "R448A", 26.0, Evidence.FAR),
        ("piston", "R448A", 43.0, Evidence.UNTESTED),  # the pairs end at 41.5 K
        ("piston", "R404A", 0.0, Evidence.SAME),
        ("piston", "R1234yf", 5.0, Evidence.UNTESTED),
        ("piston", "R454C", 5.0, Evidence.UNTESTED),  # 78.5 % R1234yf
        ("piston", "R717", 5.0, Evidence.UNTESTED),
        ("piston", "R290", 5.0, Evidence.UNTESTED),
        ("unknown", "R448A", 10.0, Evidence.CONSTANT),
        ("centrifugal", "R448A", 10.0, Evidence.CONSTANT),
        ("rotary", "R448A", 10.0, Evidence.CONSTANT),
        ("screw", "R448A", 10.0, Evidence.CONSTANT),
    ],
)
def test_evidence_of_a_change(case_of, kind, name, change_K, expected):
    """By kind of machine, refrigerant and change of the isentropic discharge temperature, as the table says."""
    case = case_of(compressor={"kind": kind})

    assert evidence_of(case, solved("R404A", 330.0), solved(name, 330.0 + change_K)) == expected


def test_a_screw_with_its_own_curve_has_the_narrow_band(case_of):
    """The pairs of screws hold the band only with a curve of the machine."""
    case = case_of(compressor={"kind": "screw", "efficiency_points": [[2, 0.7, 0.9], [8, 0.6, 0.8]]})

    assert evidence_of(case, solved("R404A", 330.0), solved("R448A", 340.0)) == Evidence.NEAR


APART = ("R32", "R125", "R134a", "R143a", "R152a", "R22", "R12")  # no component in common: correlation 0.5


def with_cop(value, word="close", name="R448A", plant=None):
    """Return a computed refrigerant with a COP at the same duty."""
    return replace(entry(word, name=name), duty=SimpleNamespace(cop=value), plant=plant)


def test_alike_is_not_chained():
    """1.00, 1.05 and 1.10 differ by 5 % step by step and by 10 % over all: two groups, and no third."""
    a, b, c = (with_cop(value, name=name) for value, name in zip((1.00, 1.05, 1.10), APART, strict=False))

    assert (alike(a, b, "cop"), alike(b, c, "cop"), alike(a, c, "cop")) == (True, True, False)
    groups = groups_alike((a, b, c), "cop")
    assert [[item.duty.cop for item in group] for group in groups] == [[1.00, 1.05], [1.05, 1.10]]


def test_groups_hold_every_pair_and_no_other():
    """Whatever the values and grades: two share a group just when they are alike; no group lies inside another."""
    words = ("close", "weak", "close", "fair", "close", "not checked", "close")
    entries = [with_cop(1.0 + 0.031 * i, word, APART[i]) for i, word in enumerate(words)]
    places = [[entries.index(item) for item in group] for group in groups_alike(entries, "cop")]
    paired = {pair for group in places for pair in combinations(group, 2)}

    assert paired == {(i, j) for i, j in combinations(range(7), 2) if alike(entries[i], entries[j], "cop")}
    assert not any(set(a) < set(b) for a in places for b in places)


def test_a_weak_model_makes_alike_what_would_differ():
    """9 % apart in COP, 8.6 % of their mean: more than 8 % of close ones, less than the 10 % of a weak one."""
    assert not alike(with_cop(1.0), with_cop(1.09, name="R32"), "cop")
    assert alike(with_cop(1.0, name="R134a"), with_cop(1.09, "weak", "R32"), "cop")


def test_values_given_and_the_part_that_is_uncertain():
    """Costs of 100 and 110 differ by 10; if 50 of each is electricity, the band of 8 % is 4, not 8.4."""
    a, b = entry(name="R32"), entry(name="R134a")

    assert alike(a, b, "energy", (100.0, 105.0))
    assert not alike(a, b, "energy", (100.0, 110.0))
    assert alike(a, b, "cost", (100.0, 105.0))
    assert not alike(a, b, "cost", (100.0, 105.0), (50.0, 50.0))
    assert alike(a, b, "emissions", (-2.0, 1.0), (50.0, 50.0))
    with pytest.raises(ValueError, match="give its values"):
        alike(a, b, "emissions")


def test_one_that_is_not_computed_is_like_none():
    """It stands in no group, and the others in theirs."""
    missing = entry()

    assert (
        groups_alike((with_cop(1.0, name="R32"), missing, with_cop(1.01, name="R134a")), "cop")[0][1].duty.cop == 1.01
    )
    assert not alike(with_cop(1.0), missing, "cop")


def test_groups_are_on_one_basis():
    """On the plant where every one balances there; else all at the same duty."""
    installed = SimpleNamespace(same_cooling=SimpleNamespace(cop=2.0))
    other = SimpleNamespace(same_cooling=SimpleNamespace(cop=2.5))

    assert not alike(with_cop(1.0, plant=installed), with_cop(1.0, plant=other), "cop")
    assert alike(with_cop(1.0, plant=installed), with_cop(1.0, name="R32"), "cop")
    assert {band for band, _, _ in QUANTITIES.values()} == set(NAMES)


def test_a_single_substance_has_the_base_band(case_of):
    """R744 has no boiling point at one atmosphere to be checked by, and no mixing that could be off."""
    entry = compare(case_of(candidates=("R744",), duty={"condensing": "20 degC"})).candidates[0]

    assert entry.grade.word == "not checked"
    assert {name: band_of(entry, name) for name in model_band()} == {
        name: b.value for name, b in model_band(evidence=Evidence.CONSTANT).items()
    }


def test_groups_of_many_refrigerants_are_found_at_once():
    """Forty within one band are one group; by brute force each group of some is complete and can take nobody else."""
    entries = [Entry(find("R134a"), "convert", "ok", None, ()) for _ in range(40)]
    near = [1000.0 + 0.5 * i for i in range(40)]
    far = [1000.0 * 1.06**i for i in range(12)]

    assert len(groups_alike(entries, "energy", near)) == 1
    groups = groups_alike(entries[:12], "energy", far)
    for group in groups:
        assert all(
            alike(a, b, "energy", (far[_at(entries, a)], far[_at(entries, b)])) for a, b in combinations(group, 2)
        )


def _at(entries, entry):
    """Return the place of the very entry given."""
    return next(place for place, each in enumerate(entries) if each is entry)
