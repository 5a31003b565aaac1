"""Saying less never yields more: no key that is deleted turns a verdict in favour, over every shipped case."""

import datetime
from pathlib import Path

import pytest
import tomlkit

from retrofit.case import read_case
from retrofit.checks import assess
from retrofit.errors import CaseFileError
from retrofit.study import compare

CASES = Path(__file__).resolve().parents[2] / "cases"
DAY = datetime.date(2026, 12, 1)
MOST_CANDIDATES = 2
# Nothing of these tables is read by a check; each is deleted whole.
WHOLE = ("year", "emissions", "money", "plus_minus", "report")
ROOM = {
    "volume": "8000 m3",
    "area": "2000 m2",
    "location": "II",
    "access": "c",
    "occupancy": "other",
    "below_ground": False,
    "comfort": False,
}
# What a case does not give of the decisive facts is laid under it, so that something is in favour; and with a hot
# ambient, so that what stops at rest would pass if it were left out.
FACTS = {
    "mild": {"highest_ambient": "33 degC", "low_side_limit": "15 bar g"},
    "hot": {"highest_ambient": "62 degC", "low_side_limit": "14 bar g"},
}


def completed(path, facts):
    """Return the text of a case as a document, with the decisive facts it lacks and few candidates."""
    case = tomlkit.parse(path.read_text(encoding="utf-8"))
    for key, value in facts.items():
        case["plant"].setdefault(key, value)
    case["plant"].setdefault("relief_setting", case["plant"]["high_side_limit"])
    case["plant"].setdefault("charge", "40 kg")
    case.setdefault("room", ROOM)
    for name in WHOLE:
        case.pop(name, None)
    described = [name for name in case.get("options", {}) if name != case["plant"]["refrigerant"]]
    names = dict.fromkeys([*described, *case["compare"]["candidates"]])
    case["compare"]["candidates"] = list(names)[:MOST_CANDIDATES]
    return case


def verdicts(case, path):
    """Return the verdict of each option of a document; none if the case cannot be used."""
    path.write_text(tomlkit.dumps(case), encoding="utf-8")
    try:
        result = assess(compare(read_case(path)), DAY)
    except CaseFileError:
        return {}
    return {entry.refrigerant.designation: entry.verdict for entry in result.entries}


def keys(table, before=()):
    """Yield the place of every key of a document, tables included."""
    for name, value in table.items():
        yield (*before, name)
        if isinstance(value, dict):
            yield from keys(value, (*before, name))


def without(case, place):
    """Return a document without one key."""
    shorter = tomlkit.parse(tomlkit.dumps(case))
    table = shorter
    for name in place[:-1]:
        table = table[name]
    del table[place[-1]]
    return shorter


@pytest.mark.parametrize("facts", FACTS)
@pytest.mark.parametrize("path", sorted(CASES.glob("*.toml")), ids=lambda path: path.stem)
def test_no_key_left_out_turns_a_verdict_in_favour(path, facts, tmp_path):
    """Whatever is deleted, an option that was open or not suitable stays so."""
    case, file = completed(path, FACTS[facts]), tmp_path / path.name
    full = verdicts(case, file)
    assert full
    turned = {}
    for place in keys(case):
        for name, verdict in verdicts(without(case, place), file).items():
            if verdict.is_positive and name in full and not full[name].is_positive:
                turned[".".join(place), name] = full[name]
    assert turned == {}


def test_the_completed_cases_have_something_in_favour(tmp_path):
    """So that the test above has something to turn."""
    found = [
        verdict
        for path in sorted(CASES.glob("*.toml"))
        for verdict in verdicts(completed(path, FACTS["mild"]), tmp_path / path.name).values()
    ]

    assert sum(verdict.is_positive for verdict in found) >= 5
    assert sum(not verdict.is_positive for verdict in found) >= 5
