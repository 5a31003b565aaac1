"""The case file: a plant as found, its duty, and the refrigerants to compare.

Read one with `read_case`; every complaint arrives at once in a `CaseFileError`. In Python a case is SI.
"""

from retrofit.case.model import Case, Compare, Compressor, Default, Duty, Plant
from retrofit.case.reader import read_case
from retrofit.case.schema import SCHEMA_FILE, case_schema
from retrofit.case.template import new_case_text

__all__ = [
    "SCHEMA_FILE",
    "Case",
    "Compare",
    "Compressor",
    "Default",
    "Duty",
    "Plant",
    "case_schema",
    "new_case_text",
    "read_case",
]
