"""The thresholds file: complete, sourced, and the only place the limits come from."""

import tomllib
from importlib.resources import files

import pytest

from retrofit.checks import Threshold, assess, threshold, thresholds
from retrofit.errors import QuantityError

TEXT = files("retrofit.checks").joinpath("thresholds.toml").read_text(encoding="utf-8")
TABLE = tomllib.loads(TEXT)
NAMES = sorted(TABLE)


@pytest.fixture
def limits(monkeypatch):
    """Return a function that puts other limits in the file, as if it had been edited."""
    changed = tomllib.loads(TEXT)
    monkeypatch.setattr(thresholds, "_table", lambda: changed)

    def set_limits(name, **figures):
        changed[name] |= figures
        threshold.cache_clear()

    yield set_limits
    threshold.cache_clear()


@pytest.mark.parametrize("name", NAMES)
def test_a_threshold_has_a_level_a_unit_a_source_and_its_basis(name):
    """No figure stands alone, and what is from memory or practice says so."""
    limit = threshold(name)

    assert any(value is not None for value in (limit.note, limit.work, limit.stop))
    assert limit.unit
    assert limit.source
    assert limit.basis in ("read", "practice", "memory")
    assert (limit.basis == "memory") == ("from memory" in limit.source)


def test_discharge_limits_are_those_of_the_trade_press():
    """225 and 250 degF, to the degree."""
    limit = threshold("discharge_temperature")

    assert (limit.work, limit.stop) == (round((225 - 32) / 1.8), round((250 - 32) / 1.8))


def test_levels_of_a_value_that_is_worse_the_larger_it_is():
    """At a limit itself the milder level holds."""
    limit = Threshold("K", "by hand", "practice", note=1.0, work=4.0, stop=9.0)

    assert [limit.level(value) for value in (1.0, 1.1, 4.0, 4.1, 9.0, 9.1)] == [
        None,
        *["note"] * 2,
        *["work"] * 2,
        "stop",
    ]


def test_levels_of_a_value_that_is_worse_the_smaller_it_is():
    """The same the other way round."""
    limit = Threshold("K", "by hand", "practice", work=15.0, stop=8.0)

    assert [limit.level_below(value) for value in (15.0, 14.9, 8.0, 7.9)] == [None, "work", "work", "stop"]


@pytest.mark.parametrize(
    ("name", "figures", "code"),
    [
        ("discharge_temperature", {"work": -50.0, "stop": -40.0}, "discharge-temperature"),
        ("pressure_ratio", {"work": 0.1, "stop": 0.2}, "pressure-ratio"),
        ("high_side", {"work": 0.01, "stop": 0.02}, "high-side"),
        ("critical_distance", {"work": 900.0, "stop": 800.0}, "near-critical"),
        ("capacity", {"work": 9.0, "stop": 8.0}, "capacity"),
        ("heat_rejected", {"work": 0.01, "stop": 0.02}, "condenser"),
        ("glide", {"note": -2.0, "work": -1.0}, "glide"),
        ("motor_power", {"work": 0.01}, "motor"),
    ],
)
def test_gates_take_their_limits_from_the_file(solved, limits, name, figures, code):
    """With another figure in the file, a candidate that passed is caught, and the other way round."""
    before = {finding.code for finding in assess(solved).candidates[0].findings}
    limits(name, **figures)
    after = {finding.code: finding for finding in assess(solved).candidates[0].findings}

    assert code not in before
    assert after[code].level == ("stop" if "stop" in figures else "work")
    assert after[code].source == TABLE[name]["source"]


def test_every_threshold_can_be_set_with_the_words_its_message_gives():
    """A figure with a unit is refused without; written as the message says, it is the figure of the file again."""
    for name in thresholds._table():
        limit = threshold(name)
        for level, figure in limit.figures.items():
            if not limit.kind:
                assert limit.read(level, figure) == figure
                continue
            with pytest.raises(QuantityError) as caught:
                limit.read(level, figure)
            written = str(caught.value).rpartition(" = ")[2].strip('"')
            assert limit.read(level, written) == pytest.approx(figure), name
