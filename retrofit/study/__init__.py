"""One case with all its candidates, solved once into one frozen result that everything else shows."""

from retrofit.study.compare import case_as_taken, compare
from retrofit.study.result import (
    Baseline,
    ChartLines,
    Comparison,
    Component,
    Derived,
    EnthalpyZero,
    Entry,
    Finding,
    Installed,
    Measure,
    Operation,
    Performance,
    Point,
)

__all__ = [
    "Baseline",
    "ChartLines",
    "Comparison",
    "Component",
    "Derived",
    "EnthalpyZero",
    "Entry",
    "Finding",
    "Installed",
    "Measure",
    "Operation",
    "Performance",
    "Point",
    "case_as_taken",
    "compare",
]
