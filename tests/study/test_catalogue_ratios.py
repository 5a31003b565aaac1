"""Capacity ratios of the same compressor with two refrigerants, against compressor catalogues.

Source: EnergyPlus data set RefrigerationCompressorCurves.idf, release 25.2, makers' catalogue polynomials; median
and quartiles over all models listed with both refrigerants, return gas at 18.3 degC, no subcooling. The catalogues
are met within their quartiles widened by the model's own band of capacity, with a volumetric efficiency that knows
nothing of a compressor but 4 % of clearance: R22 at high pressure ratio lies at the lower edge. Two upper quartiles
are not carried, their print is damaged; the median stands for them.
"""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from retrofit.cycle import Settings, solve_cycle
from retrofit.properties import fluid
from retrofit.study.bands import model_band

TABLE = Path(__file__).resolve().parents[1] / "published" / "compressor_ratios.csv"
RETURN_GAS_C = 18.3


def rows() -> list[dict[str, str]]:
    """Return the rows of the table."""
    with TABLE.open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def capacity(name: str, T_evap_C: float, T_cond_C: float) -> float:
    """Return the cooling of each cubic metre swept by a compressor with 4 % of clearance, all superheat counted."""
    refrigerant = fluid(name)
    p_evap, p_cond = (float(refrigerant.p_dew(T + 273.15)) for T in (T_evap_C, T_cond_C))
    volumetric = 1.0 - 0.04 * ((p_cond / p_evap) ** (1 / 1.12) - 1.0)
    cycle = solve_cycle(refrigerant, p_evap, p_cond, Settings(useful_superheat_K=RETURN_GAS_C - T_evap_C))
    return float(cycle.volumetric_capacity_J_per_m3) * volumetric


@pytest.mark.parametrize("row", rows(), ids=lambda row: row["id"])
def test_capacity_ratio_of_catalogues(row: dict[str, str]) -> None:
    """The ratio lies within the catalogues' quartiles, widened by the band stated for capacity."""
    at = float(row["T_evap_C"]), float(row["T_cond_C"])
    found = capacity(row["candidate"], *at) / capacity(row["existing"], *at)

    band = model_band()["capacity"].value
    lowest, median = float(row["lowest_quartile"]), float(row["capacity_ratio"])
    highest = float(row["highest_quartile"]) if row["highest_quartile"] else median
    assert lowest <= median <= highest
    assert lowest * (1.0 - band) <= found <= highest * (1.0 + band)
