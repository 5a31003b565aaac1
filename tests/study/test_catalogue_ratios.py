"""Capacity and COP of the same compressor with two refrigerants, against medians of compressor catalogues.

Source: EnergyPlus data set RefrigerationCompressorCurves.idf, release 25.2, makers' catalogue polynomials: median and
quartiles over the listings with both refrigerants, one kind of machine and one rating condition each, every listing
with its own curves. Listings of R507A that are a flat factor of those of R404A are no evidence and not among them.
"""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from retrofit.case import Case
from retrofit.study import Comparison, compare
from retrofit.study.bands import compressor_part
from retrofit.study.states import Evidence

TABLE = Path(__file__).resolve().parents[1] / "published" / "compressor_ratios.csv"
EFFICIENCIES = {"isentropic_efficiency": 0.6, "volumetric_efficiency": 0.7}


def rows() -> list[dict[str, str]]:
    """Return the rows of the table."""
    with TABLE.open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


@pytest.fixture(params=rows(), ids=lambda row: row["id"])
def rated(request, case_of) -> tuple[dict[str, str], Comparison]:
    """Return a row, and the comparison at its rating: dew temperatures, all superheat counted as cooling."""
    row = request.param
    superheat = float(row["return_gas_C"]) - float(row["T_evap_C"])
    case: Case = case_of(
        row["existing"],
        (row["candidate"],),
        duty={
            "evaporating": f"{row['T_evap_C']} degC",
            "condensing": f"{row['T_cond_C']} degC",
            "useful_superheat": f"{superheat} K",
            "line_superheat": "0 K",
            "subcooling": f"{row['subcooling_K']} K",
        },
        compressor=EFFICIENCIES | {"kind": row["kind"]},
        match="dew",
    )
    return row, compare(case)


@pytest.mark.parametrize("name", ["capacity", "cop"])
def test_ratios_of_catalogues(rated: tuple[dict[str, str], Comparison], name: str) -> None:
    """The median of the catalogues lies inside the band stated for the change."""
    row, found = rated
    candidate = found.candidates[0]

    assert candidate.evidence in (Evidence.NEAR, Evidence.FAR)
    band = compressor_part(name, candidate.evidence)[0]
    low, median, high = (float(row[f"{name}_{which}"]) for which in ("lowest_quartile", "ratio", "highest_quartile"))
    assert low <= median <= high
    assert median / candidate.relative[name] == pytest.approx(1.0, abs=band)
