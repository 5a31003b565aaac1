"""The look of figures: colours that can be told from the page and refrigerants that can be told from each other."""

import pytest

from retrofit.figures import COLOURS, INK, mark_of

LIGHT, DARK = "#ffffff", "#121212"
LEAST = 3.0  # WCAG 2.2, 1.4.11: graphical objects
OKABE_ITO = {"#0072B2", "#D55E00", "#009E73", "#CC79A7"}  # Okabe and Ito, Color Universal Design, 2008


def luminance(colour):
    """Return the relative luminance, by WCAG 2.2."""
    parts = [int(colour[i : i + 2], 16) / 255 for i in (1, 3, 5)]
    linear = [part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def contrast(one, other):
    """Return the contrast ratio, by WCAG 2.2."""
    light, dark = sorted((luminance(one), luminance(other)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


def test_the_contrast_formula_gives_the_known_ends():
    """Black on white is 21 to 1 and grey #767676 on white 4.54 to 1 (WCAG 2.2 and its techniques)."""
    assert contrast("#000000", "#ffffff") == pytest.approx(21.0)
    assert contrast("#767676", "#ffffff") == pytest.approx(4.54, abs=0.005)


@pytest.mark.parametrize("page", [LIGHT, DARK])
@pytest.mark.parametrize("colour", COLOURS)
def test_every_colour_stands_out_on_a_light_and_on_a_dark_page(colour, page):
    """Each colour has at least 3 to 1 against the page in both modes."""
    assert contrast(colour, page) >= LEAST


def test_the_colours_are_of_a_palette_made_for_colour_blind_readers():
    """All colours but the page's own ink are of Okabe and Ito's eight."""
    assert set(COLOURS) == OKABE_ITO


def test_the_existing_refrigerant_is_drawn_in_ink_and_thickest():
    """It comes first, solid, and thicker than any candidate."""
    today = mark_of(0)

    assert today.colour == INK
    assert today.dash == "solid"
    assert all(mark_of(place).width < today.width for place in range(1, 41))


def test_no_two_candidates_share_colour_marker_and_dash():
    """Up to 36 candidates differ in at least one of the three, and the first four in all."""
    marks = [(m.colour, m.marker, str(m.dash)) for m in map(mark_of, range(37))]

    assert len(set(marks)) == 37
    for kind in zip(*marks[:5], strict=True):
        assert len(set(kind)) == 5
