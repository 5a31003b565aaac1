"""Designations in running text are printed as ASHRAE 34 writes them; what is to be typed stays a code."""

import pytest

from retrofit.refrigerants import designations, find, with_hyphens


@pytest.mark.parametrize(
    ("text", "printed"),
    [
        ("R404A, R1234ze(E) and R-448A", "R-404A, R-1234ze(E) and R-448A"),
        ("R32/R125 50/50 (R410A).", "R-32/R-125 50/50 (R-410A)."),
        ('write "R404A" or `R448A`', 'write "R404A" or `R448A`'),
        ("options.R454C.charge and [options.R454C]", "options.R454C.charge and [options.R454C]"),
        ("R404A.toml is there already", "R404A.toml is there already"),
        ("class A1, 4R12, R and Rack 3", "class A1, 4R12, R and Rack 3"),
    ],
)
def test_only_what_is_read_is_hyphenated(text, printed):
    """Running text has the hyphen of the standard; quotes, keys and file names have not."""
    assert with_hyphens(text) == printed
    assert with_hyphens(printed) == printed


def test_every_designation_of_the_catalogue_is_printed_as_its_display_name():
    """Both ways of printing a designation agree."""
    for name in designations():
        assert with_hyphens(f"{name}: x") == f"{find(name).display_name}: x"
