"""One case with all its candidates, solved once into one frozen result that everything else shows."""

from retrofit.study.compare import case_as_taken, compare
from retrofit.study.result import (
    AtRest,
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
from retrofit.study.states import Family, Level, RestState, Verdict

__all__ = [
    "AtRest",
    "Baseline",
    "ChartLines",
    "Comparison",
    "Component",
    "Derived",
    "EnthalpyZero",
    "Entry",
    "Family",
    "Finding",
    "Installed",
    "Level",
    "Measure",
    "Operation",
    "Performance",
    "Point",
    "RestState",
    "Verdict",
    "case_as_taken",
    "compare",
]
