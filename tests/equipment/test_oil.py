"""Changes of oil: by hand, against each other, and at the ends."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.equipment.oil import changes_needed, residual_oil
from retrofit.errors import OutsideValidRangeError


def test_residual_by_hand():
    """Three tenths left by each of three changes: 0.3, 0.09, 0.027."""
    np.testing.assert_allclose(residual_oil(0.3, [0, 1, 2, 3]), [1.0, 0.3, 0.09, 0.027], rtol=1e-12)


def test_published_experience():
    """Where draining leaves 20 to 50 %, two to four changes reach 5 % (UNEP guide of 2010, read), or nearly."""
    least, most = changes_needed([0.20, 0.50], 0.05)

    assert least == 2.0
    assert most == 5.0
    assert residual_oil(0.50, 4) == pytest.approx(0.0625)  # four changes at the worst drain: 6 %


def test_needed_by_hand():
    """0.3^2 = 0.09 and 0.3^3 = 0.027 around 5 %; a tenth twice is 1 % exactly, and needs no third change."""
    np.testing.assert_array_equal(changes_needed([0.3, 0.1, 0.2, 0.1], [0.05, 0.01, 0.04, 0.001]), [3, 2, 2, 3])


def test_ends():
    """An empty sump needs one change, oil that stays is never out, and without a target nothing is to do."""
    np.testing.assert_array_equal(
        changes_needed([0.0, 1.0, 0.3, 0.3, 1.0, 0.0], [0.05, 0.05, 0.0, 1.0, 1.0, 0.0]),
        [1.0, np.inf, np.inf, 0.0, 0.0, 1.0],
    )


def test_unknown_stays_unknown():
    """A share that is not known leaves the answer unknown."""
    assert np.isnan(residual_oil(np.nan, 2))
    assert np.isnan(changes_needed(np.nan, 0.05))
    assert np.isnan(changes_needed(0.3, np.nan))


@given(left=st.floats(0.01, 0.95), target=st.floats(0.001, 0.5))
def test_needed_is_just_enough(left, target):
    """The number needed reaches the target, and one fewer does not."""
    count = changes_needed(left, target)

    assert residual_oil(left, count) <= target * (1.0 + 1e-6)
    assert count == 0.0 or residual_oil(left, count - 1.0) > target * (1.0 - 1e-6)


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: residual_oil(1.2, 2), r"share of oil left by a change 1\.2 is outside 0 to 1"),
        (lambda: residual_oil([0.3, -0.1], 2), r"share of oil left by a change -0\.1 is outside 0 to 1"),
        (lambda: residual_oil(0.3, -1), r"number of oil changes -1 is below 0"),
        (lambda: changes_needed(0.3, 5.0), r"target 5 is outside 0 to 1 \(0 % to 100 %\)"),
    ],
)
def test_impossible_shares(call, message):
    """A share or a number that cannot be is refused with its value and what is allowed."""
    with pytest.raises(OutsideValidRangeError, match=message):
        call()
