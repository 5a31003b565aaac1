"""Measured drop-ins against the model: row by row, with its band, and the share inside. Nothing is fitted to them.

    python tests/bench/measured.py

tests/published/measured_drop_ins.csv holds what open abstracts say of one machine that ran on two refrigerants; only
abstracts were read. Rows whose refrigerants the catalogue does not have, and those of rebuilt plants, are not among
them. A row is run as the same plant (air on both sides, exchangers from the existing refrigerant's point) and as the
same compressor, at the temperatures stated or, where the abstract states none, at assumed ones that its remark names.
What is measured counts as inside where it lies within the band of the model, or where the band reaches the range or the
limit that is measured.
"""

from __future__ import annotations

import csv
import sys
import tempfile
from collections.abc import Iterator
from dataclasses import dataclass
from itertools import product
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from retrofit.case import read_case
from retrofit.study import Entry, compare
from retrofit.study.bands import pair_band

TABLE = Path(__file__).parents[1] / "published" / "measured_drop_ins.csv"
CASE = """
[plant]
refrigerant = "{existing}"
[duty]
cooling = "10 kW"
evaporating = "{evap} degC"
condensing = "{cond} degC"
useful_superheat = "6 K"
line_superheat = "4 K"
subcooling = "3 K"
[compressor]
kind = "{kind}"
isentropic_efficiency = 0.65
volumetric_efficiency = 0.80
[evaporator]
medium = "air"
inlet = "{air_in} degC"
outlet = "{air_out} degC"
arrangement = "crossflow"
[condenser]
medium = "air"
inlet = "{sink_in} degC"
outlet = "{sink_out} degC"
arrangement = "crossflow"
[compare]
candidates = ["{candidate}"]
"""
# Quantity: ratio on the same plant and with the same compressor, and the band that it is held against.
RATIOS = {
    "capacity": ("plant_capacity", "capacity", "capacity"),
    "cop": ("plant_cop", "cop", "cop"),
    "power": ("plant_power", "power", "capacity"),
    "pressure_ratio": ("", "pressure_ratio", "pressure"),
}


@dataclass(frozen=True)
class Found:
    """A measured row beside the model: ratios on the same plant and with the same compressor, and their band."""

    row: dict[str, str]
    plant: float
    compressor: float
    band: float

    def is_inside(self, model: float) -> bool:
        """Return whether what is measured lies within the band of the model."""
        low, high = float(self.row["low"]), float(self.row["high"])
        reach = model * (1.0 - self.band), model * (1.0 + self.band)
        if self.row["what"] == "most":
            return reach[0] <= high
        if self.row["what"] == "least":
            return reach[1] >= low
        return reach[0] <= high and reach[1] >= low


def entries(row: dict[str, str]) -> Iterator[tuple[Entry, Entry]]:
    """Yield the existing refrigerant and the candidate at each pair of temperatures of a row."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "row.toml"
        for evap, cond in product(map(float, row["T_evap_C"].split()), map(float, row["T_cond_C"].split())):
            path.write_text(
                CASE.format(
                    **row,
                    evap=evap,
                    cond=cond,
                    air_in=evap + 10,
                    air_out=evap + 5,
                    sink_in=cond - 12,
                    sink_out=cond - 6,
                ),
                encoding="utf-8",
            )
            found = compare(read_case(path))
            yield found.existing, found.candidates[0]


def _ratio(pair: tuple[Entry, Entry], name: str) -> float:
    existing, candidate = pair
    if name:
        return candidate.relative.get(name, np.nan)
    if existing.plant is None or candidate.plant is None:
        return np.nan
    return candidate.plant.full.pressure_ratio / existing.plant.full.pressure_ratio


def measured() -> list[Found]:
    """Return every row beside the model, ratios as means over its temperatures."""
    with TABLE.open(encoding="utf-8", newline="") as file:
        rows = list(csv.DictReader(file))
    known: dict[tuple[str, ...], list[tuple[Entry, Entry]]] = {}
    found = []
    for row in rows:
        key = tuple(row[name] for name in ("existing", "candidate", "kind", "T_evap_C", "T_cond_C"))
        pairs = known.setdefault(key, []) or known[key]
        if not pairs:
            pairs.extend(entries(row))
        plant, compressor, band = RATIOS[row["quantity"]]
        widths = [pair_band(*pair, band) for pair in pairs]
        means = [float(np.mean([_ratio(pair, name) for pair in pairs])) for name in (plant, compressor)]
        found.append(Found(row, *means, max(widths)))
    return found


def main() -> None:
    """Print the rows and the share inside on each basis."""
    found = measured()
    print(
        f"{'row':<15}{'change':<17}{'quantity':<16}{'measured':>13}{'same plant':>20}{'same compressor':>20}{'band':>8}"
    )
    for item in found:
        row, low, high = item.row, float(item.row["low"]), float(item.row["high"])
        text = {"most": f"up to {high:g}", "least": f"down to {low:g}", "range": f"{low:g} to {high:g}"}
        cells = [
            f"{value:.3f} {'inside' if item.is_inside(value) else 'OUTSIDE'}" for value in (item.plant, item.compressor)
        ]
        print(
            f"{row['id']:<15}{row['existing'] + ' to ' + row['candidate']:<17}{row['quantity']:<16}"
            f"{text.get(row['what'], f'{low:g}'):>13}{cells[0]:>20}{cells[1]:>20}{100 * item.band:>6.1f} %"
        )
    for name in ("plant", "compressor"):
        inside = sum(item.is_inside(getattr(item, name)) for item in found)
        print(f"same {name}: {inside} of {len(found)} inside")


if __name__ == "__main__":
    main()
