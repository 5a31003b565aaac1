"""The answer on the plant as installed: on which basis cooling is told, how it runs, what the hardware needs."""

from dataclasses import replace

import pytest

from retrofit.checks import answer, assess
from retrofit.study import Component, Installed, Operation, compare
from retrofit.units import IP, SI


@pytest.fixture(scope="module")
def bare(case_of):
    """Return an assessed comparison of three candidates without a basis same plant."""
    return assess(compare(case_of("R404A", ["R448A", "R452A", "R454C"], compressor={"kind": "piston"})))


def installed(entry, capacity, cop=1.0, run=1.0, speed=1.0, needed=100e3):
    """Return an entry on the basis same plant: capacity and COP against today, run time and speed."""
    full = replace(entry.compressor, cooling_W=capacity * needed)
    unmet = max(0.0, (1.0 - capacity) * needed)
    how = Operation("fixed", needed, unmet, run, speed, full.power_W)
    plant = Installed(full, full, how, True, (1.0, 1.0), full.cooling_W, (1e4, 2e4), 0.0)
    return replace(
        entry, plant=plant, relative={**entry.relative, "plant_capacity": capacity, "plant_cop_same_cooling": cop}
    )


@pytest.fixture(scope="module")
def plant(bare):
    """Return it with the basis: one candidate meets the cooling, one nearly, one does not."""
    first, second, third = bare.candidates
    found = (
        installed(first, 1.10, cop=1.09, run=0.91),
        installed(second, 0.97, cop=1.02),
        installed(third, 0.80, cop=0.90),
    )
    return replace(bare, existing=installed(bare.existing, 1.0), candidates=found)


def matter(comparison, start, units=SI):
    """Return the matter that begins with some words, its groups as a mapping; None if there is none."""
    found = next((item for item in answer(comparison, units).matters if item.about.startswith(start)), None)
    return found and (found.about, dict(found.groups))


def test_cooling_is_told_on_the_basis_that_there_is(bare, plant):
    """With exchangers it is that of the same plant, without that of the same compressor, and the words say which."""
    assert matter(bare, "Cooling")[0] == "Cooling with the existing compressor, against R404A"
    about, groups = matter(plant, "Cooling")

    assert "(same plant), against R404A" in about
    assert groups == {
        "more than needed, beyond the ±6% of the model": ("R448A (+10%)",),
        "as much as needed, within the ±6% of the model": ("R452A (−3%)",),
        "less than needed, beyond the ±6% of the model": ("R454C (−20%, its band ±12%)",),
    }


def test_a_candidate_that_the_plant_could_not_be_balanced_with_says_its_own_basis(bare, plant):
    """Its cooling is that of the same compressor, and says so; the others do not repeat theirs."""
    mixed = replace(plant, candidates=(bare.candidates[0], *plant.candidates[1:]))
    told = [name for names in matter(mixed, "Cooling")[1].values() for name in names]

    assert [name.endswith(", same compressor)") for name in told if name.startswith("R448A")] == [True]
    assert not [name for name in told if "same compressor" in name and not name.startswith("R448A")]
    assert matter(mixed, "The plant as installed")[1]["not computed on this basis"] == ("R448A",)


def test_how_the_plant_runs_is_told(plant):
    """Running time where the cooling is met, the share that is lacking where not, and COP at the same cooling."""
    about, groups = matter(plant, "The plant as installed")

    assert "100.0\N{NO-BREAK SPACE}kW to deliver" in about
    assert "at the same cooling" in about
    assert groups == {
        "meets it": ("R448A (91% of the time, COP +9%)",),
        "lacks less than the ±6% of the model, running all the time": ("R452A (−3%, COP ≈\N{NO-BREAK SPACE}+2%)",),
        "lacks cooling, running all the time": ("R454C (−20%, COP ≈\N{NO-BREAK SPACE}−10%)",),
    }


@pytest.mark.parametrize(
    ("run", "speed", "words"),
    [
        (1.0, 1.0, "100% of the time"),
        (0.5, 1.0, "50% of the time"),
        (1.0, 0.8, "at 80% speed"),
        (0.6, 0.3, "60% of the time at 30% speed"),
    ],
)
def test_time_and_speed_are_told_as_the_machine_is_controlled(plant, run, speed, words):
    """Full time is not worth a word where a speed is told."""
    first = installed(plant.candidates[0], 1.1, cop=1.09, run=run, speed=speed)
    groups = matter(replace(plant, candidates=(first,)), "The plant as installed")[1]

    assert groups["meets it"] == (f"R448A ({words}, COP +9%)",)


def test_lacking_less_than_a_percent_is_no_zero(plant):
    """0.3 % reads as less than 1 %, since it is not nothing."""
    first = installed(plant.candidates[0], 0.997)

    assert "less than 1%" in str(matter(replace(plant, candidates=(first,)), "The plant as installed")[1])


def test_without_exchangers_there_is_no_matter_of_the_plant(bare):
    """No empty heading."""
    assert matter(bare, "The plant as installed") is None


def test_the_readers_units_are_used(plant):
    """100 kW are 28.4 tons of refrigeration (12 000 Btu/h each)."""
    assert "28.4\N{NO-BREAK SPACE}ton to deliver" in matter(plant, "The plant as installed", IP)[0]


def component(name, verdict):
    """Return a component with a verdict."""
    return Component(name, name, verdict, (), "Why.", "a threshold", "a source", "")


def with_hardware(comparison, *rows):
    """Return the comparison with components for today's refrigerant and each candidate, as pairs."""
    made = [tuple(component(name, verdict) for name, verdict in row) for row in rows]
    entries = [replace(entry, hardware=parts) for entry, parts in zip(comparison.entries, made, strict=True)]
    return replace(comparison, existing=entries[0], candidates=tuple(entries[1:]))


def test_hardware_is_told_by_what_has_to_be_done(bare):
    """Candidates that need the same stand together; replace comes before adjust, and unknown is counted last."""
    same = [("Expansion valve", "replace"), ("Relief valve", "adjust"), ("Metals", "unknown"), ("Motor", "keep")]
    result = with_hardware(bare, [], same, same, [("Expansion valve", "adjust"), ("Metals", "unknown")])

    assert list(matter(result, "Hardware")[1].items()) == [
        ("replace expansion valve", ("R448A", "R452A")),
        ("adjust or prove relief valve", ("R448A", "R452A")),
        ("adjust or prove expansion valve", ("R454C",)),
        ("1 component not known for lack of data", ("R448A", "R452A", "R454C")),
    ]


def test_what_today_s_refrigerant_needs_as_well_is_told_of_it(bare):
    """A receiver too small already is no consequence of the change, but is not passed over either."""
    receiver = [("Receiver", "adjust")]
    result = with_hardware(bare, receiver, receiver, [*receiver, ("Charge", "adjust")], [("Receiver", "replace")])

    assert matter(result, "Hardware")[1] == {
        "adjust or prove, already today: receiver": ("R404A",),
        "replace receiver": ("R454C",),
        "adjust or prove charge": ("R452A",),
    }


def test_without_components_there_is_no_matter_of_hardware(bare):
    """Nothing is said where nothing was judged."""
    assert matter(with_hardware(bare, [], [], [], []), "Hardware") is None
