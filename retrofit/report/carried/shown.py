"""What computing a report again has found, as text for people and as JSON for machines."""

from __future__ import annotations

import textwrap
from collections.abc import Callable, Iterator, Mapping
from dataclasses import asdict
from typing import Any

from retrofit.report.carried.differences import TOLERANCE, TOLERANCE_WORDS, Difference, count_of
from retrofit.report.carried.rerun import NAMES, Rerun
from retrofit.units import MINUS, shown

SCHEMA = "retrofit.rerun/1"
MOST_SHOWN = 60
LONGEST_WORDS = 60  # characters of an old and a new text
MEANING = (
    "That a result comes out again says that it is what this tool computes from the case, not that it is right for the "
    "plant. The cautions of the report hold as before; ASHRAE 34 and 15, local code and licensed practice decide."
)


def rerun_json(found: Rerun) -> dict[str, Any]:
    """Return what was found as plain data: every difference, every reason.

    Args:
        found: A report computed again.
    """
    carried = found.carried
    return {
        "schema": SCHEMA,
        "report": carried.name,
        "case_file": carried.case_name,
        "made_at": carried.made_at.isoformat(),
        "law_read_for": carried.on.isoformat(),
        "differs": found.differs,
        "tolerance": TOLERANCE,
        "fingerprint": {"carried": carried.fingerprint, "now": found.fingerprint},
        "versions": {"carried": dict(carried.versions), "now": dict(found.versions)},
        "altered": list(carried.altered),
        "reasons": list(found.reasons),
        "differences": [asdict(item) for item in found.differences],
        "meaning": MEANING,
    }


def rerun_text(found: Rerun, columns: int, strong: Callable[[str], str]) -> str:
    """Return what was found as text: what differs, the weightiest first, and why.

    Args:
        found: A report computed again.
        columns: Width of the terminal. [-]
        strong: How a heading is set off.
    """
    carried = found.carried
    title = carried.result.get("title")
    lines = [
        strong(shown(str(title), 200)),
        *_wrapped(f"Made {carried.made_at:%Y-%m-%d %H:%M %Z} with {_versions(carried.versions)}.", columns),
        *_wrapped(f"Now {_versions(found.versions)}. Tables of law read for {carried.on}, as then.", columns),
        "",
        *_verdict(found, columns, strong),
    ]
    if found.differences:
        lines += ["", *_listed(found.differences, columns, strong)]
    return "\n".join([*lines, "", *_wrapped(TOLERANCE_WORDS, columns), *_wrapped(MEANING, columns)])


def _verdict(found: Rerun, columns: int, strong: Callable[[str], str]) -> Iterator[str]:
    numbers, words = count_of(found.carried.result)
    count = len(found.differences)
    if not found.differs:
        yield strong("Nothing differs.")
        yield from _wrapped(
            f"All {numbers} numbers and {words} words and gaps come out again. Fingerprint {found.fingerprint[:16]}.",
            columns,
        )
        for text in found.changed:
            yield from _wrapped(f"Changed since, without effect here: {shown(text, 1000)}.", columns)
        return
    yield strong(
        f"{count} of {numbers + words} numbers and words differ." if count else "The file is not as it was written."
    )
    if not count:
        yield from _wrapped(
            f"The result it carries comes out again: {numbers} numbers and {words} words and gaps.", columns
        )
    yield strong("Why")
    for text in found.reasons:
        yield from _wrapped(f"  {shown(text, 1000)}.", columns, "    ")


def _listed(found: tuple[Difference, ...], columns: int, strong: Callable[[str], str]) -> Iterator[str]:
    yield strong("What differs: by refrigerant, the weightiest first; kept, then now, in SI units")
    groups: dict[str, list[Difference]] = {}
    for item in found[:MOST_SHOWN]:
        groups.setdefault(item.refrigerant, []).append(item)
    for refrigerant, items in groups.items():
        yield strong(shown(refrigerant))
        for item in items:
            yield from _wrapped(f"  {_line(item)}", columns, "      ")
    if len(found) > MOST_SHOWN:
        yield f"and {len(found) - MOST_SHOWN} more; --json lists them all"


def _line(item: Difference) -> str:
    relative = "" if item.relative is None else f" ({_percent(item.relative)})"
    return f"{shown(item.quantity, 200)}: {_value(item.old)} → {_value(item.new)}{relative}"


def _percent(relative: float) -> str:
    return f"{100.0 * relative:+.2g} %".replace("-", MINUS, 1)


def _value(value: object) -> str:
    if value is None:
        return "not known"
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, int | float):
        return f"{value:.7g}".replace("-", MINUS, 1)
    return shown(str(value), LONGEST_WORDS)


def _versions(versions: Mapping[str, str]) -> str:
    return ", ".join(f"{NAMES.get(name, shown(name))} {shown(version)}" for name, version in versions.items())


def _wrapped(text: str, columns: int, indent: str = "") -> list[str]:
    return textwrap.wrap(text, columns, subsequent_indent=indent, break_on_hyphens=False) or [""]
