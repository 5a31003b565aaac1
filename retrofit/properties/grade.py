"""How good the model of a refrigerant is, as far as published boiling points can tell.

The model's bubble and dew temperatures at one atmosphere are compared with the published ones of the
catalogue. Pairs of components whose interaction is not fitted but estimated are named, whatever the result.
"""

from __future__ import annotations

from dataclasses import dataclass

from retrofit.errors import OutsideValidRangeError
from retrofit.properties.fluid import Fluid
from retrofit.refrigerants import Refrigerant
from retrofit.refrigerants.records import Value
from retrofit.units import ZERO_C_K

ATMOSPHERE_PA = 101_325.0
# Differences up to these are called close and fair. Our own division, after the spread of 80 blends.
CLOSE_K = 0.7
FAIR_K = 1.6


@dataclass(frozen=True)
class Grade:
    """The grade of a model and what it rests on.

    Attributes:
        word: "close", "fair", "weak", or "not checked" where there is nothing published to check against.
        bubble_difference_K, dew_difference_K: Model minus published at one atmosphere, None if not known.
        estimated_pairs: Component pairs without a fitted interaction.
        text: One sentence for the reader.
    """

    word: str
    bubble_difference_K: float | None
    dew_difference_K: float | None
    estimated_pairs: tuple[tuple[str, str], ...]
    text: str


def grade(fluid: Fluid, refrigerant: Refrigerant) -> Grade:
    """Return the grade of a fluid's model against the catalogue's published boiling points.

    Args:
        fluid: The model.
        refrigerant: The catalogue entry of the same refrigerant.
    Returns: The grade.
    """
    bubble = _difference(fluid, refrigerant.bubble_1atm_K, dew=False)
    dew = _difference(fluid, refrigerant.dew_1atm_K, dew=True)
    rounding = _rounding(refrigerant.bubble_1atm_K, refrigerant.dew_1atm_K)
    known = [max(0.0, abs(difference) - rounding) for difference in (bubble, dew) if difference is not None]
    word = _word(max(known)) if known else "not checked"
    if fluid.estimated_pairs and word == "close":
        word = "fair"
    return Grade(word, bubble, dew, fluid.estimated_pairs, _text(word, bubble, dew, fluid.estimated_pairs))


def _difference(fluid: Fluid, published: Value, *, dew: bool) -> float | None:
    if published.number is None or published.basis == "computed":
        return None
    try:
        state = (fluid.dew if dew else fluid.bubble)(ATMOSPHERE_PA)
    except OutsideValidRangeError:
        return None
    return float(state.T_K) - published.number


def _rounding(*published: Value) -> float:
    """Return half a unit of the last digit printed: whole degrees only where every one of the points is whole."""
    celsius = [value.number - ZERO_C_K for value in published if value.number is not None]
    return 0.5 if all(abs(point - round(point)) < 1e-6 for point in celsius) else 0.05


def _word(difference: float) -> str:
    return "close" if difference <= CLOSE_K else "fair" if difference <= FAIR_K else "weak"


def _text(word: str, bubble: float | None, dew: float | None, pairs: tuple[tuple[str, str], ...]) -> str:
    parts = [
        f"{name} {difference:+.1f} K"
        for name, difference in (("bubble point", bubble), ("dew point", dew))
        if difference is not None
    ]
    text = f"{word}: " + (
        "at 1 atm, model minus published, " + ", ".join(parts)
        if parts
        else "no published boiling point to compare with"
    )
    if pairs:
        text += "; interaction estimated, not fitted, for " + ", ".join(f"{a}/{b}" for a, b in pairs)
    return text
