"""Pressures against limits: whatever the two are, a limit that bears nothing is never held by anything."""

import math
import re
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.checks import assess
from retrofit.checks.gauge import share_of_limit, share_text, times_below
from retrofit.checks.thresholds import threshold
from retrofit.study import compare

AIR_PA = 101_325.0
PRESSURES = st.floats(min_value=0.0, max_value=3e7)
PLANT = {
    "high_side_limit": "28 bar g",
    "low_side_limit": "19 bar g",
    "relief_setting": "27 bar g",
    "highest_ambient": "35 degC",
}


@given(p_Pa=st.one_of(PRESSURES, st.just(math.nan), st.just(math.inf)), limit_Pa=st.floats(0.0, AIR_PA), air=PRESSURES)
def test_a_limit_not_above_the_air_is_always_passed(p_Pa, limit_Pa, air):
    """No gauge shows less than nothing in a part that may bear nothing: every threshold stops, on either side of it."""
    share = share_of_limit(p_Pa, min(limit_Pa, air), air)

    assert share == math.inf
    assert threshold("high_side").level(share) == "stop"
    assert threshold("relief_margin").level_below(times_below(share)) == "stop"


@given(limit_Pa=PRESSURES)
def test_a_pressure_that_is_no_number_is_no_small_one(limit_Pa):
    """What could not be computed is above every threshold."""
    assert share_of_limit(math.nan, limit_Pa, AIR_PA) == math.inf


def test_shares_by_hand():
    """(11 - 1)/(21 - 1) bar = 0.5, so the limit is twice the pressure; below the air nothing is asked of a limit."""
    assert share_of_limit(11e5, 21e5, 1e5) == pytest.approx(0.5)
    assert times_below(0.5) == pytest.approx(2.0)
    assert times_below(share_of_limit(0.5e5, 21e5, 1e5)) == math.inf
    assert [share_text(share) for share in (0.876, math.inf, -0.04)] == ["88%", "more than all", "none"]


# Limits that the reading of a case refuses, put in behind its back: the air itself, below it, and half a pascal above.
@pytest.mark.parametrize("limit_Pa", [AIR_PA, AIR_PA - 1e4, AIR_PA - 1.0, 0.0, AIR_PA + 0.5])
@pytest.mark.parametrize(
    ("table", "key", "code"),
    [
        ("plant", "high_side_limit_Pa", "high-side"),
        ("plant", "high_side_limit_Pa", "standstill"),
        ("plant", "low_side_limit_Pa", "standstill"),
        ("plant", "relief_setting_Pa", "relief"),
        ("controls", "high_pressure_cut_out_Pa", "high-pressure-switch"),
    ],
)
def test_no_component_is_kept_at_a_limit_that_bears_nothing(case_with, table, key, code, limit_Pa):
    """Condensing at some 10 bar g passes any such limit: the row says adjust or replace, never keep."""
    tables = {"plant": PLANT, "controls": {"high_pressure_cut_out": "22 bar g"}}
    case = case_with("R134a", ["R513A"], **tables)
    comparison = compare(_with_limit(case, table, key, limit_Pa))
    for entry in assess(comparison).entries:
        (row,) = [item for item in entry.hardware if item.code == code]
        assert row.verdict == ("adjust" if code == "high-pressure-switch" else "replace")
        assert not re.search(r"[-\N{MINUS SIGN}][0-9.]+ ?%|[-\N{MINUS SIGN}][0-9.]+ times", row.reason)
        if key == "high_side_limit_Pa":
            assert "stop" in [item.level for item in entry.findings if item.code == "high-side"]


def _with_limit(case, table, key, limit_Pa):
    return replace(case, **{table: getattr(case, table).model_copy(update={key: limit_Pa})})
