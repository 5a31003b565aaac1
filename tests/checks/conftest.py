"""A solved comparison with nothing missing, to turn single numbers of."""

from dataclasses import replace

import pytest

from retrofit.study import compare

PLANT = {"oil": "polyol ester", "high_side_limit": "28 bar g", "evaporator": "direct expansion"}


@pytest.fixture(scope="session")
def solved(case_of):
    """Return a comparison of R134a in a direct-expansion plant with R513A and R1234yf, not assessed."""
    duty = {"evaporating": "-5 degC", "condensing": "40 degC", "subcooling": "3 K"}
    return compare(case_of("R134a", ["R513A", "R1234yf"], plant=PLANT, duty=duty))


@pytest.fixture(scope="session")
def with_numbers():
    """Return a function that gives a comparison whose first candidate has other numbers."""
    return _with_numbers


def _with_numbers(comparison, *, plant=None, relative=None, compressor=None, **duty):
    """Return the comparison with numbers of the first candidate, or of the plant, replaced."""
    first = comparison.candidates[0]
    entry = replace(
        first,
        duty=replace(first.duty, **duty),
        compressor=replace(first.compressor, **(compressor or {})),
        relative={**first.relative, **(relative or {})},
    )
    case = replace(comparison.case, plant=comparison.case.plant.model_copy(update=plant or {}))
    return replace(comparison, case=case, candidates=(entry, *comparison.candidates[1:]))
