"""Every unknown has a way out: it names keys that the case file has, and filled in they settle it.

From each shipped case everything but plant, duty and candidates is taken out, which leaves most of it unknown. The
keys that its unknowns name are then filled with what the shipped case says, or with an ordinary value, again and again
until nothing is unknown.
"""

import copy
import shutil
import tomllib
from dataclasses import replace
from pathlib import Path

import pytest

from retrofit.case import facts_of, read_case
from retrofit.case.model import field_of
from retrofit.case.reader import case_from_data
from retrofit.checks import assess
from retrofit.checks.outlook import capacity_words
from retrofit.checks.prospects import prospects
from retrofit.checks.survey import Part, survey, unknowns
from retrofit.errors import CaseFileError
from retrofit.study import Level, compare
from retrofit.study.life import life_of, lived

ROOT = Path(__file__).resolve().parents[2]
CASES = sorted((ROOT / "cases").glob("*.toml"))
LEAVE_OUT = "compare.candidates"
MOST_ROUNDS = 6  # a key filled in may open a further one, such as the material of a joint once metals are known
ORDINARY = {
    "plant.relief_setting": "none",
    "plant.metals": ["copper", "steel"],
    "plant.controller": "none",
    "plant.oil": "polyol ester",
    "plant.highest_ambient": "45 degC",
    "plant.high_side_limit": "45 bar g",
    "plant.evaporator": "direct expansion",
    "plant.charge": "10 kg",
    "receiver.volume": "none",
    "valve.kind": "thermostatic",
    "compressor.rated_current": "100 A",
    "readings.current": "70 A",
    "readings.load": "100 %",
    "controls.fan_steps": [],
    "room.volume": "1500 m3",
    "room.area": "500 m2",
    "room.mounting": "ceiling",
    "room.access": "c",
    "room.location": "III",
    "room.comfort": False,
    "room.below_ground": False,
    "room.ventilation": "natural",
    "room.occupancy": "other",
    "law.jurisdiction": "EU",
    "law.code": "EN 378",
    "law.equipment": "chiller",
    "law.annual_leak_rate": "5 %",
    "law.date_of_change": "2027-06-01",
    "law.remaining_life": "8 years",
    "emissions.leak_rate": "5 %",
    "emissions.grid_factor": "0.3 kg/kWh",
    "condenser.medium": "air",
    "condenser.arrangement": "crossflow",
    "evaporator.arrangement": "crossflow",
}
LINES = {"diameter": "50 mm", "length": "20 m", "riser": "2 m", "lowest_load": "30 %"}


def bare(full):
    """Return the data of a case without everything that may be left out, asking for emissions and money."""
    kept = ("cooling", "evaporating", "condensing", "reading")
    candidates = full["compare"]["candidates"]
    return {
        "title": full["title"],
        "plant": {"refrigerant": full["plant"]["refrigerant"]},
        "duty": {key: value for key, value in full["duty"].items() if key in kept},
        "compare": {"candidates": [*candidates[:2], candidates[-1]]},
        "emissions": {},
        "money": {"currency": "EUR"},
    }


def in_data(data, key):
    """Return what parsed TOML holds under a full key, or None."""
    for part in key.split("."):
        data = data.get(part) if isinstance(data, dict) else None
    return data


def put(data, key, value):
    """Write a value under a full key into parsed TOML."""
    *tables, last = key.split(".")
    for name in tables:
        data = data.setdefault(name, {})
    data[last] = value


def ordinary(key, full):
    """Return what a plant may have under a key: what the shipped case says, or something usual."""
    names = [full["plant"]["refrigerant"], *full["compare"]["candidates"]]
    table, _, last = key.rpartition(".")
    duty = full["duty"]
    by_key = {
        "plant.low_side_limit": in_data(full, "plant.high_side_limit") or ORDINARY["plant.high_side_limit"],
        "room.area": None if in_data(full, "room.volume") is None else f"{number(in_data(full, 'room.volume')) / 3} m2",
        "compressor.highest_suction": duty["evaporating"],
        "condenser.inlet": f"{number(duty['condensing']) - 12} degC",
        "condenser.outlet": f"{number(duty['condensing']) - 6} degC",
        "condenser.highest_inlet": in_data(full, "condenser.inlet") or f"{number(duty['condensing']) - 12} degC",
        "evaporator.inlet": f"{number(duty['evaporating']) + 12} degC",
        "evaporator.outlet": f"{number(duty['evaporating']) + 7} degC",
        "money.refrigerant_price": dict.fromkeys(names, 30),
        "plant.oil": ORDINARY["plant.oil"],
        "room.largest_circuit": in_data(full, "plant.charge") or "10 kg",
    }
    if (found := in_data(full, key)) is not None and key not in ("plant.oil", "money.refrigerant_price"):
        return found
    if by_key.get(key) is not None:
        return by_key[key]
    if key in ORDINARY:
        return ORDINARY[key]
    if table == "approvals":
        return dict.fromkeys(names, "approved")
    if table == "controls":
        return "none"
    if table.startswith("lines"):
        return LINES[last]
    if last in ("charge", "largest_circuit"):
        return "10 kg"
    if table.startswith(("money", "options")):
        return 5
    form = facts_of(key).form  # otherwise the example that the list itself gives
    return False if form == "true or false" else form.split('"')[1]


def number(text):
    """Return the number of a quantity as text."""
    return float(text.split(" ")[0])


def result(data, path):
    """Return the assessed result of parsed TOML with its remaining life."""
    comparison = assess(compare(case_from_data(data, path, "")))
    return replace(comparison, life=life_of(comparison, draws=0, hourly=False))


def fill(data, full, comparison, keys):
    """Fill keys in; a refrigerant that nothing can settle is taken out of the comparison."""
    for key in keys:
        if key == LEAVE_OUT:
            names = {item.refrigerant for item in unknowns(comparison) if LEAVE_OUT in item.keys}
            kept = [name for name in data["compare"]["candidates"] if name not in names]
            data["compare"]["candidates"] = kept
        elif key == "year.weather":
            data["year"] = copy.deepcopy(full.get("year", {"climate": {"mean": "12 degC", "yearly_swing": "10 K"}}))
        else:
            put(data, key, ordinary(key, full))


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.stem)
def test_filling_what_unknowns_name_settles_them_all(path, tmp_path):
    """Each unknown names a key that there is; after a few rounds of filling nothing is unknown any more."""
    for hours in (ROOT / "cases").glob("*.csv"):
        shutil.copy(hours, tmp_path)
    full = tomllib.loads(path.read_text(encoding="utf-8"))
    data, counts = bare(full), []
    for _ in range(MOST_ROUNDS):
        comparison = result(data, tmp_path / path.name)
        found = unknowns(comparison)
        counts.append(len(found))
        assert [item for item in found if not item.keys] == []
        keys = dict.fromkeys(key for item in found for key in item.keys)
        assert [key for key in keys if field_of(key) is None] == []
        if not found:
            break
        fill(data, full, comparison, keys)

    assert counts[0] > 80
    assert counts[-1] == 0, [(item.refrigerant, item.code, item.keys) for item in found]


@pytest.mark.parametrize("path", [CASES[0], CASES[7]], ids=lambda path: path.stem)
def test_a_key_taken_out_is_asked_for_by_what_it_leaves_unknown(path):
    """With any one key taken out of a shipped case, whatever is unknown names keys that there are."""
    full = tomllib.loads(path.read_text(encoding="utf-8"))
    keys = [f"{table}.{key}" for table, held in full.items() if isinstance(held, dict) for key in held]
    tried = 0
    for key in keys:
        data = copy.deepcopy(full)
        del data[key.partition(".")[0]][key.partition(".")[2]]
        try:
            case = case_from_data(data, path, "")
        except CaseFileError:
            continue  # a key that another one needs
        found, tried = unknowns(assess(compare(case))), tried + 1
        assert [item for item in found if not item.keys or any(field_of(key) is None for key in item.keys)] == [], key
    assert tried > 20


def test_the_list_is_the_unknowns_turned_round(case_with):
    """Every unknown finding and component is in the list under each of its keys, and nothing else is."""
    comparison = assess(compare(case_with("R404A", ("R448A", "R454C"))))
    found = survey(comparison)
    unknown = {
        (entry.refrigerant.designation, item.code)
        for entry in comparison.entries
        for item in (
            *(finding for finding in entry.findings if finding.level == Level.UNKNOWN),
            *(row for row in entry.hardware if row.verdict == "unknown"),
        )
    }

    assert {(item.refrigerant, item.code) for key in found for item in key.settles} == unknown
    assert [key.decisive for key in found] == sorted((key.decisive for key in found), reverse=True)
    assert all(key.facts == facts_of(key.facts.key) for key in found)
    nameplate = next(key for key in found if key.facts.key == "plant.high_side_limit")
    every = [row for entry in comparison.entries for row in entry.hardware]
    rows = {row.code for row in every if "plant.high_side_limit" in row.missing and row.verdict == "unknown"}
    assert nameplate.components == len(rows)
    assert {item.part for item in nameplate.settles} == {Part.FINDING, Part.COMPONENT}


def test_none_is_an_answer(case_with):
    """A plant without receiver, relief valve, switch or regulators is not asked for them again."""
    names = ("low_pressure_cut_out", "low_pressure_cut_in", "high_pressure_cut_out", "rack_set_point", "head_pressure")
    controls = {name: "none" for name in (*names, "evaporator_regulator", "crankcase_regulator")}
    case = case_with(
        plant={"relief_setting": "none", "sight_glass": "none"},
        receiver={"volume": "none"},
        controls={**controls, "fan_steps": []},
    )
    asked = {key.facts.key for key in survey(assess(compare(case)))}
    (entry,) = assess(compare(case)).candidates
    verdicts = {row.code: row.verdict for row in entry.hardware}

    assert not asked & {"plant.relief_setting", "receiver.volume", "approvals.relief_capacity"}
    assert not [key for key in asked if key.startswith("controls.")]
    assert (verdicts["receiver"], verdicts["relief"], verdicts["relief-capacity"]) == ("keep", "adjust", "keep")
    assert "set-points" not in verdicts


@pytest.mark.parametrize(("answer", "verdict"), [("approved", "keep"), ("not approved", "replace")])
def test_an_answer_in_writing_settles_a_component(case_with, answer, verdict):
    """What no number tells, the maker's answer does, for the refrigerant that it is about alone."""
    case = case_with("R404A", ("R448A", "R449A"), approvals={"compressor": {"R448A": answer}})
    first, second = assess(compare(case)).candidates
    row, other = (next(row for row in entry.hardware if row.code == "compressor-envelope") for entry in (first, second))

    assert (row.verdict, other.verdict) == (verdict, "unknown")
    assert row.missing == ()
    assert other.missing == ("approvals.compressor",)
    assert "in writing" in row.source


def test_a_fixed_orifice_is_judged_as_what_cannot_be_adjusted(case_with):
    """Within a tenth the charge sets it, beyond it is replaced, as a capillary tube is; a valve would be re-set."""
    verdicts = {}
    for kind in ("capillary", "fixed orifice", "thermostatic"):
        (entry,) = assess(compare(case_with("R22", ("R407C",), valve={"kind": kind}))).candidates
        row = next(row for row in entry.hardware if row.code == "expansion-valve")
        verdicts[kind] = row.verdict
        assert (row.name == "Fixed orifice") is (kind == "fixed orifice")

    assert verdicts["fixed orifice"] == verdicts["capillary"]


def test_unmet_hours_and_the_finding_on_capacity_mention_each_other():
    """R-515B in the office chiller is stopped for its capacity, and its year leaves load unmet: each says so."""
    comparison = assess(compare(read_case(ROOT / "cases" / "office-chiller.toml")))
    living = lived(comparison, life_of(comparison, draws=0, hourly=False))
    entry = next(entry for entry in living.candidates if entry.refrigerant.designation == "R515B")
    finding = next(item for item in entry.findings if item.code == "capacity")
    hours = living.life.years["R515B"].unmet_h
    (option,) = [option for option in prospects(living) if option.entry is entry]

    assert hours > 0.0
    assert f"In the year computed {hours:.0f} h have unmet load." in finding.fact
    assert "stopped for it" in capacity_words(option)
    assert lived(living, living.life).candidates == living.candidates


def test_readings_in_doubt_are_asked_for_again():
    """A discharge colder than an isentropic compression puts readings in doubt, and the list names them."""
    full = tomllib.loads((ROOT / "cases" / "harbour-market.toml").read_text(encoding="utf-8"))
    full["readings"]["discharge_temperature"] = "30 degC"
    comparison = assess(compare(case_from_data(full, ROOT / "cases" / "harbour-market.toml", "")))
    doubted = [key for key in survey(comparison) if any(item.part == Part.READING for item in key.settles)]

    assert "readings.discharge_temperature" in {key.facts.key for key in doubted}
    assert all(key.facts.where for key in doubted)
