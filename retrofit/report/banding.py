"""The bands of the model in words: the base ones, and the wider ones of refrigerants whose model is worse."""

from __future__ import annotations

from collections.abc import Mapping

from retrofit.report.judging import spelled
from retrofit.study import Comparison
from retrofit.study.bands import Band, bands_of, is_wider, model_band
from retrofit.units import UnitSystem


def bands_text(bands: Mapping[str, Band], units: UnitSystem) -> str:
    """Return bands as running text, such as "capacity ±7%, COP ±6%, discharge temperature ±8 K, pressures ±2%".

    Args:
        bands: The four bands.
        units: The reader's units.
    """
    discharge = units.with_unit("temperature difference", bands["T_discharge"].value, decimals=0)
    return (
        f"capacity ±{bands['capacity'].value:.0%}, COP ±{bands['cop'].value:.0%}, discharge temperature ±{discharge}, "
        f"pressures ±{bands['pressure'].value:.0%}"
    )


def wider_texts(comparison: Comparison, units: UnitSystem) -> tuple[str, ...]:
    """Return one sentence for each wider band, with the refrigerants that have it and the reason.

    Args:
        comparison: The result.
        units: The reader's units.
    """
    found: dict[str, list[str]] = {}
    for entry in comparison.entries:
        if entry.duty is not None and is_wider(entry):
            bands = bands_of(entry)
            offset = units.with_unit("temperature difference", bands["pressure"].offset_K, decimals=1)
            sentence = f"{bands_text(bands, units)}: {bands['pressure'].reason}, {offset} at the boiling point."
            found.setdefault(sentence, []).append(entry.refrigerant.designation)
    return tuple(f"Wider for {', '.join(names)}: {sentence}" for sentence, names in found.items())


def band_text(comparison: Comparison, units: UnitSystem) -> str:
    """Return the bands of the model in a few sentences, the wider ones with their reason.

    Args:
        comparison: The result.
        units: The reader's units.
    """
    sentences = (
        f"Band of the model: {bands_text(model_band(), units)}.",
        *wider_texts(comparison, units),
        "A difference inside the band is no meaningful difference; in the tables it carries the sign ≈.",
    )
    return spelled(" ".join(sentences))
