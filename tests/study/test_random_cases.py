"""Any refrigerant against any others at any temperatures: an answer or a reason, and physics that holds."""

from dataclasses import astuple
from math import isfinite

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from retrofit.refrigerants import designations
from retrofit.study import compare
from retrofit.study.compare import RATIOS

# Rounding of the tables, five digits of an entropy of about 2000 J/(kg K).
ENTROPY_J_PER_KGK = 0.05


@st.composite
def cases(draw):
    """Draw the tables of a case, from a freezer in the cold to a heat pump in the heat."""
    evaporating = draw(st.floats(-60.0, 20.0))
    lift = draw(st.floats(5.0, 90.0))
    superheat, line, subcooling = (draw(st.floats(0.0, high)) for high in (25.0, 25.0, 20.0))
    duty = {
        "evaporating": f"{evaporating:.3f} degC",
        "condensing": f"{evaporating + lift:.3f} degC",
        "useful_superheat": f"{superheat:.3f} K",
        "line_superheat": f"{line:.3f} K",
        "subcooling": f"{subcooling:.3f} K",
        "reading": draw(st.sampled_from(("dew", "mean"))),
    }
    names = draw(st.lists(st.sampled_from(designations()), min_size=2, max_size=4, unique=True))
    efficiencies = {
        "isentropic_efficiency": draw(st.floats(0.3, 1.0)),
        "volumetric_efficiency": draw(st.floats(0.3, 1.0)),
    }
    match = draw(st.sampled_from(("dew", "mean")))
    return {"existing": names[0], "candidates": names[1:], "duty": duty, "compressor": efficiencies, "match": match}


def state(entry, name):
    """Return a state point of an entry by its name."""
    return next(point for point in entry.points if point.name == name)


@settings(max_examples=200, deadline=None, derandomize=True, suppress_health_check=[HealthCheck.too_slow])
@given(case=cases())
def test_every_row_is_numbers_or_a_reason(case_of, case):
    """Nothing raises; a row has all its numbers, finite, or none of them and the reason."""
    found = compare(case_of(**case))

    for entry in found.entries:
        assert entry.cautions
        if entry.status == "ok":
            assert entry.reason is None
            numbers = [*astuple(entry.duty), *astuple(entry.compressor), *entry.relative.values()]
            assert all(isfinite(number) for number in numbers)
            assert set(entry.relative) == {name for name, _, _ in RATIOS}
            assert len(entry.points) == 8
            _check_laws(entry)
        else:
            assert entry.status == "not computed"
            assert entry.reason
            assert (entry.duty, entry.compressor, entry.grade, entry.points) == (None, None, None, ())
    if found.existing.status != "ok":
        assert {entry.status for entry in found.candidates} == {"not computed"}


def _check_laws(entry):
    """Check both laws of thermodynamics on an entry."""
    duty = entry.duty
    assert duty.heat_rejected_W == pytest.approx(duty.cooling_W + duty.line_heat_W + duty.power_W, rel=1e-9)
    gained = state(entry, "discharge").s_J_per_kgK - state(entry, "compressor inlet").s_J_per_kgK
    in_valve = state(entry, "evaporator inlet").s_J_per_kgK - state(entry, "expansion valve inlet").s_J_per_kgK
    assert gained > -ENTROPY_J_PER_KGK
    assert in_valve > -ENTROPY_J_PER_KGK
    # No heat enters hotter than the suction gas, none leaves colder than the liquid.
    hot, cold = state(entry, "expansion valve inlet").T_K, state(entry, "compressor inlet").T_K
    if hot > cold:
        assert duty.cop < cold / (hot - cold)
    assert duty.power_W > 0.0
    assert duty.p_cond_Pa > duty.p_evap_Pa
