"""A report with the remaining life carries it, and computing again covers it: same draws, same seed, same numbers."""

import pytest

from retrofit.report.carried import rerun
from retrofit.report.carried.differences import differences
from retrofit.report.carried.reader import read_carried
from retrofit.report.carried.result import LIFE, result_of
from retrofit.report.html import render_html
from retrofit.study.life import with_life


@pytest.fixture(scope="module")
def carried(lived, made_at, tmp_path_factory):
    """Return what the report of a shipped case with its remaining life, of few draws, carries."""
    path = tmp_path_factory.mktemp("life") / "report.html"
    path.write_text(render_html(lived("coast-heat-pump"), made_at=made_at), encoding="utf-8")
    return read_carried(path)


def test_the_remaining_life_comes_out_again(carried):
    """Every number of it is there and none differs; the draws are as many as the report says."""
    found = rerun(carried)

    assert carried.result[LIFE]["draws"]["number"] == 60
    assert found.result[LIFE]["options"]
    assert found.differences == ()


def test_another_seed_would_be_seen(carried, assessed):
    """By another seed the quantiles differ, so a difference there is one that is found."""
    other = result_of(with_life(assessed("coast-heat-pump"), draws=60, seed=3))

    assert other[LIFE]["inputs"] == carried.result[LIFE]["inputs"]
    assert differences(carried.result, other)
