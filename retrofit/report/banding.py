"""The bands of the model in words: the base ones, and the wider ones of refrigerants whose model is worse."""

from __future__ import annotations

from collections.abc import Mapping

from retrofit.report.judging import spelled
from retrofit.study import Comparison
from retrofit.study.bands import Band, base_bands, left_out, pair_bands, percent_text
from retrofit.units import UnitSystem


def bands_text(bands: Mapping[str, Band], units: UnitSystem) -> str:
    """Return bands as running text, such as "capacity ±6%, COP ±8%, discharge temperature ±8 K, pressures ±2%".

    Args:
        bands: The four bands.
        units: The reader's units.
    """
    discharge = units.with_unit("temperature difference", bands["T_discharge"].value, decimals=0)
    return (
        f"capacity ±{percent_text(bands['capacity'].value)}, COP ±{percent_text(bands['cop'].value)}, "
        f"discharge temperature ±{discharge}, pressures ±{percent_text(bands['pressure'].value)}"
    )


def wider_texts(comparison: Comparison, units: UnitSystem) -> tuple[str, ...]:
    """Return one sentence for each wider band, with the refrigerants that have it and the reason.

    Args:
        comparison: The result.
        units: The reader's units.
    """
    base, found = base_bands(comparison), dict[str, list[str]]()
    for entry in comparison.candidates:
        if entry.duty is None:
            continue
        bands = pair_bands(comparison.existing, entry)
        if any(band.value > base[name].value for name, band in bands.items()):
            found.setdefault(_wider(bands, base, units), []).append(entry.refrigerant.designation)
    return tuple(f"Wider for {', '.join(names)}: {sentence}" for sentence, names in found.items())


def _wider(bands: Mapping[str, Band], base: Mapping[str, Band], units: UnitSystem) -> str:
    """Return bands with the reasons why they are wider than the base: the compressor's, the blend model's."""
    reasons = [] if bands["cop"].evidence_reason == base["cop"].evidence_reason else [bands["cop"].evidence_reason]
    if bands["pressure"].offset_K:
        offset = units.with_unit("temperature difference", bands["pressure"].offset_K, decimals=1)
        reasons.append(f"{bands['pressure'].reason}, {offset} at the boiling point")
    return f"{bands_text(bands, units)}: {'; '.join(reasons)}."


def band_text(comparison: Comparison, units: UnitSystem) -> str:
    """Return the bands of the model in a few sentences, the wider ones with their reason.

    Args:
        comparison: The result.
        units: The reader's units.
    """
    base = base_bands(comparison)
    sentences = (
        f"Band of the model, 90%: {bands_text(base, units)}; {base['cop'].evidence_reason}; {left_out()}.",
        *wider_texts(comparison, units),
        "A difference inside the band is no meaningful difference; in the tables it carries the sign ≈.",
    )
    return spelled(" ".join(sentences))
