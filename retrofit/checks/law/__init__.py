"""What dated tables of law say to a refrigerant in a plant.

The tables are data in TOML; a folder `law` beside a case file replaces or adds to them. Nothing here is legal
advice, and nothing here says that a thing is allowed.
"""

from retrofit.checks.law.check import end_of_life, law_for, leak_check_months, with_law
from retrofit.checks.law.findings import law_findings
from retrofit.checks.law.reader import read_table, shipped, tables_for
from retrofit.checks.law.rows import SUBJECTS, Row, Table

__all__ = [
    "SUBJECTS",
    "Row",
    "Table",
    "end_of_life",
    "law_findings",
    "law_for",
    "leak_check_months",
    "read_table",
    "shipped",
    "tables_for",
    "with_law",
]
