"""One case with all its candidates, solved once into one frozen result that everything else shows."""

from retrofit.study.compare import compare
from retrofit.study.result import ChartLines, Comparison, EnthalpyZero, Entry, Finding, Performance, Point

__all__ = ["ChartLines", "Comparison", "EnthalpyZero", "Entry", "Finding", "Performance", "Point", "compare"]
