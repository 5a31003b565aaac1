"""Measured drop-ins: which rows the bands miss is what the README says, no more and no fewer.

Source of the rows: open abstracts, named in tests/published/measured_drop_ins.csv.
"""

from __future__ import annotations

import importlib.util
import re
import sys
from pathlib import Path

TOP = Path(__file__).parents[2]
SCRIPT = TOP / "tests" / "bench" / "measured.py"


def test_the_rows_that_miss_are_those_of_the_readme() -> None:
    """The README names each change whose measured value lies outside the band on the same plant, and the share."""
    spec = importlib.util.spec_from_file_location("measured", SCRIPT)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module
    spec.loader.exec_module(module)
    found = module.measured()
    readme = " ".join((TOP / "README.md").read_text(encoding="utf-8").split())

    missed = [item for item in found if not item.is_inside(item.plant)]
    stated = re.search(r"(\d+) of (\d+) measured values lie inside", readme)
    assert stated is not None
    assert stated.groups() == (str(len(found) - len(missed)), str(len(found)))
    assert {item.row["id"] for item in missed} == {"NAV13-2", "FAL18-407C-2"}
    for text in ("COP of R134a to R1234yf", "pressure ratio of R22 to R407C"):
        assert text in readme
