"""The canonical form of a result: rounded, in one order, and its fingerprint."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping
from typing import Any

from retrofit.report.machine import comparison_json
from retrofit.study import Comparison

DIGITS = 9  # the property tables are good to five or six
# Where the file stood and what it was computed with are no part of the result.
LIFE = "remaining_life"  # there if it was computed
NOT_PART = ("case_file", "versions")


def result_of(comparison: Comparison) -> dict[str, Any]:
    """Return a result as rounded plain data: the JSON contract without what is no part of the result.

    Args:
        comparison: An assessed result.
    """
    found = {key: rounded(value) for key, value in comparison_json(comparison).items() if key not in NOT_PART}
    if comparison.life is None:
        return found
    # Page one names the versions that this room gives, and the tables of the year take their words from page one.
    from retrofit.report.machine_year import year_json

    return {**found, LIFE: {key: rounded(value) for key, value in year_json(comparison).items() if key not in NOT_PART}}


def rounded(value: Any) -> Any:
    """Return plain data with every number rounded to nine significant digits.

    Args:
        value: Data as JSON has it. [-]
    """
    if isinstance(value, float):
        return float(f"{value:.{DIGITS}g}") + 0.0  # -0.0 becomes 0.0
    if isinstance(value, str):
        return str(value)  # a state becomes its word, as it is read back
    if isinstance(value, Mapping):
        return {str(key): rounded(item) for key, item in value.items()}
    return [rounded(item) for item in value] if isinstance(value, list | tuple) else value


def canonical_text(value: Any) -> str:
    """Return plain data as JSON in ASCII with sorted keys and no blanks: equal data give equal texts.

    Args:
        value: Data as JSON has it. [-]
    Raises: ValueError for a number that is not finite.
    """
    return json.dumps(value, sort_keys=True, separators=(",", ":"), allow_nan=False)


def digest(value: Any) -> str:
    """Return the SHA-256 of plain data in its canonical text, in hexadecimal digits."""
    return hashlib.sha256(canonical_text(value).encode("ascii")).hexdigest()


def fingerprint(comparison: Comparison) -> str:
    """Return the fingerprint of a result: the digest of its canonical form."""
    return digest(result_of(comparison))
