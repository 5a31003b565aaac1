"""Limits by volume and by mass of the same refrigerant, each computed from the other."""

from __future__ import annotations

# Volume of one mole of ideal gas at 25 degC and 101.325 kPa, rounded as ASHRAE 34 and occupational
# hygiene use it (R T / p gives 24.465 L/mol).
MOLAR_VOLUME_25C_m3_per_mol = 0.02445


def ppm_to_kg_per_m3(concentration_ppm: float, molar_mass_kg_per_mol: float) -> float:
    """Return a concentration by volume as mass in a cubic metre of air at 25 °C and 101.325 kPa.

    Args:
        concentration_ppm: Volume of vapour in a million volumes of air. [ppm]
        molar_mass_kg_per_mol: Molar mass of the refrigerant. [kg/mol]
    Returns: Mass concentration. [kg/m³]
    Source: ideal gas; molar volume as ASHRAE 34 uses it.
    >>> round(ppm_to_kg_per_m3(36_000.0, 0.052024), 4)
    0.0766
    """
    return concentration_ppm * 1e-6 * molar_mass_kg_per_mol / MOLAR_VOLUME_25C_m3_per_mol


def kg_per_m3_to_vol_pct(concentration_kg_per_m3: float, molar_mass_kg_per_mol: float) -> float:
    """Return a mass concentration as share of the volume at 25 °C and 101.325 kPa.

    Args:
        concentration_kg_per_m3: Mass of vapour in a cubic metre of air. [kg/m³]
        molar_mass_kg_per_mol: Molar mass of the refrigerant. [kg/mol]
    Returns: Share of the volume. [vol %]
    Source: ideal gas; molar volume as ASHRAE 34 uses it.
    >>> round(kg_per_m3_to_vol_pct(0.307, 0.052024), 1)
    14.4
    """
    return 100.0 * concentration_kg_per_m3 * MOLAR_VOLUME_25C_m3_per_mol / molar_mass_kg_per_mol
