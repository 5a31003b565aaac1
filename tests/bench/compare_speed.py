"""Time `retrofit compare --json` on 12 candidates against the same states asked of the high-level interface.

Run by hand: python tests/bench/compare_speed.py [runs]
Both run as processes of their own, in turn, from the same pressures; the store is warm. What counts is the
ratio of the medians within one run, since machines differ. Exit status 1 if it is above a tenth.
"""

from __future__ import annotations

import json
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
CASE = """
title = "Twelve candidates"
[plant]
refrigerant = "R404A"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
useful_superheat = "7 K"
line_superheat = "8 K"
subcooling = "3 K"
[compressor]
isentropic_efficiency = 0.68
[compare]
candidates = ["R448A", "R449A", "R407A", "R407C", "R407H", "R452A",
              "R454A", "R454C", "R455A", "R513A", "R134a", "R290"]
"""
# The same states with PropsSI: saturation at both pressures, suction and evaporator outlet, isentropic and
# real discharge, liquid, and the temperature after expansion. A call that fails is counted and passed over.
SCRIPTED = """
import json, sys
from CoolProp.CoolProp import PropsSI
failed = 0
def ask(*inputs):
    global failed
    try:
        return PropsSI(*inputs)
    except ValueError:
        failed += 1
        return float("nan")
for name, p_e, p_c in json.load(sys.stdin):
    T_dew, T_e_bubble = ask("T", "P", p_e, "Q", 1, name), ask("T", "P", p_e, "Q", 0, name)
    T_c_dew, T_c_bubble = ask("T", "P", p_c, "Q", 1, name), ask("T", "P", p_c, "Q", 0, name)
    h_out = ask("H", "P", p_e, "T", T_dew + 7, name)
    h, s, rho = (ask(key, "P", p_e, "T", T_dew + 15, name) for key in "HSD")
    h_is = ask("H", "P", p_c, "S", s, name)
    h_d = h + (h_is - h) / 0.68
    T_is, T_d = ask("T", "P", p_c, "S", s, name), ask("T", "P", p_c, "H", h_d, name)
    h_liquid = ask("H", "P", p_c, "T", T_c_bubble - 3, name)
    T_inlet, quality = ask("T", "P", p_e, "H", h_liquid, name), ask("Q", "P", p_e, "H", h_liquid, name)
    print(name[:20], (h_out - h_liquid) / (h_d - h), T_d, T_inlet, quality)
print("failed calls:", failed)
"""


def library_name(designation: str) -> str:
    """Return the name by which the high-level interface knows a refrigerant, with mole fractions."""
    from retrofit.properties.components import mixture_of
    from retrofit.properties.equation import EquationModel

    mixture = mixture_of(designation)
    if mixture.is_pure:
        return mixture.library_names[0]
    shares = zip(mixture.library_names, EquationModel(mixture).z, strict=True)
    return "HEOS::" + "&".join(f"{name}[{share:.12f}]" for name, share in shares)


def timed(command: list[str], text: str = "") -> tuple[float, str]:
    """Return the wall time of a command [s] and what it printed."""
    begin = time.perf_counter()
    done = subprocess.run(command, input=text, capture_output=True, text=True, check=True, cwd=ROOT)
    return time.perf_counter() - begin, done.stdout


def main(runs: int) -> int:
    """Time both in turn and print every run."""
    with tempfile.TemporaryDirectory() as folder:
        case = Path(folder) / "twelve.toml"
        case.write_text(CASE, encoding="utf-8")
        ours = [sys.executable, "-m", "retrofit", "compare", str(case), "--json"]
        result = json.loads(timed(ours)[1])
        entries = [result["existing"], *result["candidates"]]
        asked = [[library_name(e["refrigerant"]), e["duty"]["p_evap_Pa"], e["duty"]["p_cond_Pa"]] for e in entries]
        pairs = []
        for run in range(runs):
            own, _ = timed(ours)
            scripted, printed = timed([sys.executable, "-c", SCRIPTED], json.dumps(asked))
            pairs.append((own, scripted))
            print(f"run {run + 1}: compare {own:.2f} s, scripted {scripted:.2f} s ({printed.splitlines()[-1]})")
    own, scripted = (statistics.median(column) for column in zip(*pairs, strict=True))
    print(f"median: {own:.2f} s against {scripted:.2f} s, ratio {own / scripted:.3f} (at most 0.1)")
    return int(own / scripted > 0.1)


if __name__ == "__main__":
    sys.path.insert(0, str(ROOT))
    sys.exit(main(int(sys.argv[1]) if len(sys.argv) > 1 else 5))
