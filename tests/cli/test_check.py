"""`check` refuses whatever `compare` would refuse, and names the defaults that `compare` takes."""

import csv
import importlib.util
import random
import re
import shutil
from pathlib import Path

import pytest

from retrofit.case import facts_of, read_case
from retrofit.checks import assess, thresholds_for
from retrofit.checks.survey import survey
from retrofit.study import compare

ROOT = Path(__file__).resolve().parents[2]
CASES = sorted((ROOT / "cases").glob("*.toml"))
OWN_LAW = 'title = "Own"\njurisdictions = ["EU"]\nreview_by = "2027-01-01"\n'


def broken_cases():
    """Return the script that breaks case files at random; its faults are the ones tried here."""
    spec = importlib.util.spec_from_file_location("broken_cases", ROOT / "tests" / "bench" / "broken_cases.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def with_lines(path, case, *lines):
    """Write a shipped case with lines at its end, and return its path."""
    path.write_text("\n".join([case.read_text(encoding="utf-8"), *lines, ""]), encoding="utf-8")
    return path


@pytest.mark.parametrize(
    ("line", "words"),
    [
        ("discharge_temprature = {stop = 1}", 'mean "discharge_temperature"'),
        ("discharge_temperature = {stop = 115}", 'has no unit; write it with one, as in stop = "121 degC"'),
        ('discharge_temperature = {stop = "115 kW"}', "discharge_temperature: stop: "),
        ('glide = {work = "5 degC"}', "glide: work: "),
        ('capacity = {work = "0.95 kW"}', "has a unit, and this threshold has none"),
        ("capacity = {work = 0.5}", "run the other way"),
        ("motor_power = {stop = 2.0}", "no level stop"),
    ],
)
def test_check_refuses_thresholds_with_the_words_of_compare(run, tmp_path, line, words):
    """A name, a level or a unit that a threshold does not have is a problem of the file, in both commands alike."""
    path = with_lines(tmp_path / "case.toml", CASES[0], "[thresholds]", line)
    checked, compared = run("check", path), run("compare", path)

    assert (checked.exit_code, checked.stdout) == (2, "")
    assert words in checked.stderr
    assert checked.stderr == compared.stderr


def test_a_threshold_in_a_unit_of_the_user_counts_in_its_own(run, tmp_path):
    """239 degF is 115 degC: (239 - 32) / 1.8, by hand."""
    path = with_lines(
        tmp_path / "case.toml",
        CASES[0],
        "[thresholds]",
        'discharge_temperature = {work = "212 degF", stop = "239 degF"}',
    )

    assert run("check", path).exit_code == 0
    case = read_case(path)
    limit = thresholds_for(case)["discharge_temperature"]
    assert (limit.work, limit.stop) == (pytest.approx(100.0), pytest.approx(115.0))


def test_check_refuses_a_table_of_law_beside_the_case(run, tmp_path):
    """A folder `law` beside the case that cannot be used stops both commands."""
    case = next(case for case in CASES if "jurisdiction" in case.read_text(encoding="utf-8"))
    path = with_lines(tmp_path / case.name, case)
    for hours in (ROOT / "cases").glob("*.csv"):
        shutil.copy(hours, tmp_path)
    (tmp_path / "law").mkdir()
    (tmp_path / "law" / "own.toml").write_text(OWN_LAW + "nonsense = 1\n", encoding="utf-8")
    checked, compared = run("check", path), run("compare", path)

    assert (checked.exit_code, compared.exit_code) == (2, 2)
    assert checked.stderr == compared.stderr


@pytest.mark.parametrize("case", CASES, ids=lambda case: case.stem)
def test_check_names_the_defaults_that_compare_takes(run, tmp_path, case):
    """Where the duty leaves out what the readings tell, both commands take it from the readings."""
    for hours in (ROOT / "cases").glob("*.csv"):
        shutil.copy(hours, tmp_path)
    text = re.sub(r"(?m)^(line_superheat|useful_superheat|subcooling) = .*\n", "", case.read_text(encoding="utf-8"))
    path = tmp_path / case.name
    path.write_text(text, encoding="utf-8")
    taken = {(default.key, default.shown_text) for default in compare(read_case(path)).case.defaults}
    listed = set(re.findall(r"assumed: (\S+) = (.*?) \(", run("check", path).stdout))

    assert {key for key, _ in taken} >= {"duty.line_superheat"}
    assert listed == taken


def test_whatever_check_accepts_compare_does_not_refuse(run, tmp_path):
    """Over shipped cases with random faults: exit 0 of `check` means that `compare` does not end with 2.

    The faults are those of the script that breaks files, and thresholds and jurisdictions as users mistake them.
    """
    script, draw = broken_cases(), random.Random(20261201)
    shipped = [path.read_bytes() for path in CASES]
    more = (
        b"[thresholds]\nglide = {work = 4.0}\n",
        b'[thresholds]\nglide = {work = "4.5 K"}\n',
        b"[thresholds]\nheat_rejected = {stop = 1.2}\n",
        b"[thresholds]\nnonsense = {stop = 1.2}\n",
    )
    for hours in (ROOT / "cases").glob("*.csv"):
        shutil.copy(hours, tmp_path)
    accepted = refused = 0
    for number in range(360):
        path = tmp_path / f"case-{number}.toml"
        data = script.broken_case(shipped, draw)
        if draw.random() < 0.3:
            data += b"\n" + draw.choice(more)
        if draw.random() < 0.3:
            data = re.sub(rb'(?m)^jurisdiction = "[^"]*"', b'jurisdiction = "Germany"', data)
        path.write_bytes(data)
        if run("check", path).exit_code == 0:
            accepted += 1
            result = run("compare", path, "--csv")
            assert result.exit_code != 2, result.stderr
        else:
            refused += 1
        path.unlink()

    assert accepted > 10
    assert refused > 15


# The sheet of what is missing


def test_the_open_list_says_of_each_key_what_where_how_and_why(run):
    """Every key of the survey is printed with its meaning, place, form and a blank; what verdicts wait for is first."""
    path = next(case for case in CASES if case.stem == "cold-store")
    comparison = assess(compare(read_case(path)))
    text = run("check", path, "--open").stdout
    flat = " ".join(text.split())
    keys = [item.facts for item in survey(comparison)]

    assert len(keys) > 20
    assert re.findall(r"(?m)^ *\d+  (\S+) = _{10,}$", text) == [facts.key for facts in keys]
    for facts in keys:
        assert facts == facts_of(facts.key)
        assert f"Find {' '.join(facts.meaning.split())}" in flat
        assert f"Write {' '.join(facts.form.split())}" in flat
    assert flat.index("A verdict waits for these:") < flat.index(
        "These make components, room, law, year or money known:"
    )


def test_the_open_list_as_a_table_has_a_line_a_key(run):
    """The same keys in the same order, with a column left to fill in."""
    path = next(case for case in CASES if case.stem == "cold-store")
    rows = list(csv.DictReader(run("check", path, "--open", "--csv").stdout.splitlines()))
    found = survey(assess(compare(read_case(path))))

    assert [row["key"] for row in rows] == [item.facts.key for item in found]
    assert [int(row["components"]) for row in rows] == [item.components for item in found]
    assert [row["decisive"] == "yes" for row in rows] == [item.decisive for item in found]
    assert {row["value"] for row in rows} == {""}


def test_csv_alone_is_wrong_usage(run, good):
    """A table of nothing is not printed."""
    assert run("check", good, "--csv").exit_code == 2
