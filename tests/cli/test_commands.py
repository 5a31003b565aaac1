"""Each command: what it prints, its exit status, and what it says of wrong input."""

import csv
import io
import json
import re
from pathlib import Path

import jsonschema
import pytest

from retrofit import __version__
from retrofit.cli.group import COMMANDS
from retrofit.refrigerants import designations

NAMES = {
    "new", "check", "compare", "year", "report", "rerun", "meeting", "commission", "refrigerants", "pt",
}  # fmt: skip


# The whole


def test_every_command_has_a_help_that_begins_with_what_it_does(run):
    """The list of commands is there, and each help is a sentence."""
    assert set(COMMANDS) == NAMES
    for name in COMMANDS:
        result = run(name, "--help")
        first = " ".join(result.stdout.split("\n\n")[1].split())

        assert result.exit_code == 0
        assert re.fullmatch(r"[A-Z].*\.", first), first


def test_help_says_the_exit_statuses_and_defers_to_standards(run):
    """Who calls the tool from a script finds 0, 1 and 2 explained."""
    text = " ".join(run("--help").stdout.split())

    for words in ("0 done", "1 an error", "2 wrong usage", "ASHRAE 34 and 15", "local code and licensed practice"):
        assert words in text
    assert run("-h").stdout == run("--help").stdout


def test_a_name_that_is_nearly_a_command_finds_it(run):
    """A slip of the finger is answered with the command meant, and status 2."""
    result = run("comapre", "plant.toml")

    assert result.exit_code == 2
    assert "'compare'" in result.stderr


def test_version(run):
    """The version is that of the package."""
    assert run("--version").stdout == f"retrofit, version {__version__}\n"


@pytest.mark.parametrize(
    "arguments",
    [
        ("bogus",),
        ("compare",),
        ("compare", "a.toml", "b.toml"),
        ("compare", "a.toml", "--bogus"),
        ("compare", "a.toml", "--units", "cgs"),
        ("compare", "a.toml", "--json", "--csv"),
        ("check",),
        ("new",),
        ("pt",),
        ("report", "a.toml", "--output"),
    ],
)
def test_wrong_usage_exits_with_2_and_says_so_on_the_error_stream(run, arguments):
    """Nothing is printed where results go."""
    result = run(*arguments)

    assert result.exit_code == 2
    assert result.stdout == ""
    assert "Error: " in result.stderr


def test_json_and_csv_exclude_each_other(run, good):
    """The message names both."""
    assert "--json and --csv exclude each other" in run("compare", good, "--json", "--csv").stderr


# new


def test_new_writes_a_case_that_passes_check_and_its_schema(run, tmp_path):
    """The case can be used as it stands, and the schema beside it accepts it."""
    import tomllib

    path = tmp_path / "plant.toml"
    result = run("new", path)
    schema = json.loads((tmp_path / "case.schema.json").read_text())

    assert result.exit_code == 0
    assert str(path) in result.stdout
    assert sorted(item.name for item in tmp_path.iterdir()) == ["case.schema.json", "plant.toml"]
    assert run("check", path).exit_code == 0
    assert path.read_text().startswith("#:schema ./case.schema.json")
    jsonschema.validate(tomllib.loads(path.read_text()), schema, cls=jsonschema.Draft202012Validator)


def test_new_never_overwrites_a_case_unless_forced(run, good):
    """The work in a case file is not lost to a slip; --force is needed."""
    before = good.read_text()
    refused = run("new", good)

    assert refused.exit_code == 1
    assert "is there already" in refused.stderr
    assert "--force" in refused.stderr
    assert good.read_text() == before
    assert not (good.parent / "case.schema.json").exists()
    assert run("new", "--force", good).exit_code == 0
    assert good.read_text() != before


def test_a_second_case_in_the_same_folder_is_no_problem(run, tmp_path):
    """Cases of one folder share the schema."""
    assert [run("new", tmp_path / name).exit_code for name in ("a.toml", "b.toml")] == [0, 0]


def test_new_does_not_let_the_schema_overwrite_the_case(run, tmp_path):
    """The name of the schema is taken."""
    result = run("new", tmp_path / "case.schema.json")

    assert result.exit_code == 2
    assert "choose another name" in result.stderr
    assert list(tmp_path.iterdir()) == []


def test_new_into_a_folder_that_is_not_there_is_our_error(run, tmp_path):
    """One line, no traceback."""
    result = run("new", tmp_path / "missing" / "plant.toml")

    assert result.exit_code == 1
    assert re.fullmatch(r"retrofit: \S+missing cannot be written: .*; choose another folder\n", result.stderr)


# check


def test_check_says_what_can_be_used_and_what_is_assumed(run, good):
    """Candidates and every default taken, with why."""
    result = run("check", good)

    assert (result.exit_code, result.stderr) == (0, "")
    assert "can be used. Candidates: R-513A, R-290." in result.stdout
    assert "assumed: duty.reading = dew (" in result.stdout
    assert "assumed: compressor.isentropic_efficiency = 0.70 (" in result.stdout


@pytest.mark.parametrize("command", ["check", "compare", "report"])
def test_every_problem_of_a_case_is_named_with_its_line_and_key(run, bad, command):
    """All at once on the error stream, clickable, with a close match for what is misspelt."""
    result = run(command, bad)
    lines = result.stderr.splitlines()
    found = {tuple(re.match(rf"{re.escape(str(bad))}:(\d+): ([\w.\[\]]+): .", line).groups()) for line in lines}

    assert (result.exit_code, result.stdout) == (2, "")
    assert found == {
        ("3", "plant.refrigerant"),
        ("4", "duty.cooling"),
        ("5", "duty.coolinq"),
        ("6", "duty.evaporating"),
        ("9", "compare.candidates[2]"),
    }
    assert 'did you mean "cooling"?' in result.stderr
    assert "R134a" in lines[0]


@pytest.mark.parametrize("command", ["check", "compare", "report"])
def test_a_case_that_is_not_there_or_no_text_exits_with_2(run, tmp_path, command):
    """A missing file, a folder, bytes that are no text, no TOML: one line each, no traceback."""
    (tmp_path / "bytes.toml").write_bytes(b"\xff\xfe\x00")
    (tmp_path / "no.toml").write_text("title = ")
    for name in ("missing.toml", ".", "bytes.toml", "no.toml"):
        result = run(command, tmp_path / name)

        assert (result.exit_code, result.stdout) == (2, ""), name
        assert result.stderr.count("\n") == 1
        assert str(tmp_path) in result.stderr


def test_a_case_name_that_a_terminal_would_obey_is_shown_escaped(run, tmp_path):
    """No escape sequence of a file name reaches the terminal."""
    result = run("check", tmp_path / "a\x1b[2Jb.toml")

    assert "\x1b" not in result.stderr
    assert "a\\x1b[2Jb.toml" in result.stderr


# compare


def test_compare_prints_the_text_for_people(run, good):
    """The title first, then the answer, cautions and tables."""
    result = run("compare", good)

    assert result.exit_code == 0
    assert result.stdout.startswith("Corner shop\nR-134a today: ")
    assert result.stdout.index("\nCautions\n") < result.stdout.index("Same duty, 20.0\N{NO-BREAK SPACE}kW")


def test_compare_in_inch_pound_units(run, good):
    """The same in the other units."""
    assert "condensing 104.0\N{NO-BREAK SPACE}°F" in run("compare", good, "--units", "ip").stdout


def test_compare_json_and_csv_are_one_result_in_si_whatever_the_units_shown(run, good):
    """JSON and CSV carry the same numbers, and --units changes neither."""
    read = json.loads(run("compare", good, "--json").stdout)
    rows = list(csv.DictReader(io.StringIO(run("compare", good, "--csv").stdout)))

    assert [entry["refrigerant"] for entry in (read["existing"], *read["candidates"])] == ["R134a", "R513A", "R290"]
    assert [row["refrigerant"] for row in rows] == ["R134a", "R513A", "R290"]
    assert float(rows[1]["duty.cop"]) == read["candidates"][0]["duty"]["cop"]
    assert json.loads(run("compare", good, "--json", "--units", "ip").stdout) == read
    assert read["case_file"] == str(good)


def test_compare_with_rows_that_cannot_be_computed_is_done(run, tmp_path):
    """A candidate or even the existing refrigerant without numbers is an answer, not an error."""
    path = tmp_path / "case.toml"
    text = '[plant]\nrefrigerant = "{}"\n[duty]\ncooling = "9 kW"\nevaporating = "-5 degC"\ncondensing = "40 degC"\n'
    for old, new in (("R134a", "R744"), ("R744", "R134a")):
        path.write_text(text.format(old) + f'[compare]\ncandidates = ["{new}"]\n')
        result = run("compare", path)

        assert result.exit_code == 0
        assert "31.0 degC" in result.stdout


# report


@pytest.fixture
def page(monkeypatch):
    """Stand in for the drawing of a report, which has tests of its own, and return what it was asked for."""
    asked = {}

    def render(comparison, units, template_folder, **options):
        asked.update(options, title=comparison.case.title, units=units, template_folder=template_folder)
        return "<!doctype html>"

    monkeypatch.setattr("retrofit.report.html.render_html", render)
    return asked


def test_report_writes_the_file_asked_for(run, good, page, tmp_path):
    """Units and templates are passed on, and the path is printed."""
    path = tmp_path / "out.html"
    result = run("report", good, "-o", path, "--units", "ip", "--templates", tmp_path)

    assert result.exit_code == 0
    assert result.stdout.startswith(f"Wrote {path}.")
    assert path.read_text() == "<!doctype html>"
    assert (page["title"], page["units"], page["template_folder"]) == ("Corner shop", "ip", tmp_path)


def test_report_takes_the_name_of_the_case(run, good, page, tmp_path, monkeypatch):
    """Left out, the file has the case's name and lies where one stands."""
    monkeypatch.chdir(tmp_path)

    assert run("report", good).exit_code == 0
    assert page["units"] == "si"
    assert Path("shop.html").exists()


@pytest.mark.parametrize("name", ["missing/out.html", "."])
@pytest.mark.usefixtures("page")
def test_report_that_cannot_be_written_is_our_error(run, good, tmp_path, name):
    """One line on the error stream, exit status 1."""
    result = run("report", good, "-o", tmp_path / name)

    assert (result.exit_code, result.stdout) == (1, "")
    assert re.fullmatch(r"retrofit: .*\n", result.stderr)


# commission


@pytest.fixture
def site_copy(monkeypatch):
    """Stand in for the drawing of a site copy, which has tests of its own, and return what it was asked for."""
    asked = {}

    def render(comparison, refrigerant, units, folder, **options):
        asked.update(options, refrigerant=refrigerant, units=units, folder=folder)
        return "<!doctype html>"

    monkeypatch.setattr("retrofit.report.render_site_copy", render)
    return asked


def test_commission_writes_the_sheet_of_one_candidate(run, good, site_copy, tmp_path, monkeypatch):
    """Refrigerant, units and the day's temperature are passed on; left out, the file is named for both."""
    monkeypatch.chdir(tmp_path)
    result = run("commission", good, "r-448a", "--units", "ip", "--inlet", "27 degC")

    assert result.exit_code == 0
    assert result.stdout.startswith("Wrote shop-R448A.html.")
    assert Path("shop-R448A.html").read_text() == "<!doctype html>"
    assert (site_copy["refrigerant"], site_copy["units"], site_copy["T_inlet_today_K"]) == ("R448A", "ip", 300.15)


@pytest.mark.parametrize(
    ("arguments", "status", "word"),
    [
        (["R4448A"], 2, "did you mean R-448A"),
        (["R22"], 1, "R-22 is no candidate of this case; its candidates are"),
        (["R448A", "--inlet", "-400 degC"], 2, "-100 degC to 150 degC"),
        (["R448A", "--inlet", "5 bar"], 2, "a temperature is needed"),
    ],
)
def test_commission_says_what_is_wrong(run, good, tmp_path, arguments, status, word):
    """One line on the error stream, and no file."""
    result = run("commission", good, *arguments, "-o", tmp_path / "sheet.html")

    assert (result.exit_code, result.stdout) == (status, "")
    assert re.fullmatch(rf"retrofit: .*{word}.*\n", result.stderr)
    assert not (tmp_path / "sheet.html").exists()


# refrigerants and pt


def test_refrigerants_lists_all_or_shows_those_named(run):
    """A row for each of the catalogue; with names, everything known of these."""
    everything, two = run("refrigerants").stdout, run("refrigerants", "r-404a", "R744").stdout
    rows = [line.split(" ")[0] for line in everything.splitlines() if re.match(r"R-E?\d", line)]

    assert rows == [f"R-{name[1:]}" for name in designations()]
    assert two.startswith("R-404A")
    assert "\nR-744  carbon dioxide\n" in two
    assert [
        item["designation"] for item in json.loads(run("refrigerants", "--json", "R32").stdout)["refrigerants"]
    ] == ["R32"]


@pytest.mark.parametrize("command", ["refrigerants", "pt"])
def test_an_unknown_refrigerant_exits_with_2_and_a_close_match(run, command):
    """One line that helps."""
    result = run(command, "R4448A")

    assert (result.exit_code, result.stdout) == (2, "")
    assert re.fullmatch(r'retrofit: no refrigerant "R4448A": .*did you mean R-448A.*\n', result.stderr)


def test_what_was_typed_is_not_obeyed_by_the_terminal(run):
    """An escape sequence in an argument is shown escaped."""
    assert "\x1b" not in run("refrigerants", "R\x1b[2J").stderr


def test_pt_prints_a_table_of_the_steps_asked_for(run):
    """From first to last by step, in the units asked for."""
    read = json.loads(run("pt", "R407C", "--from", "-10 degC", "--to", "10 degC", "--step", "10 K", "--json").stdout)

    assert read["schema"] == "retrofit.saturation/1"
    assert [row["T_K"] for row in read["rows"]] == pytest.approx([263.15, 273.15, 283.15])
    assert "psig" in run("pt", "R407C", "--units", "ip").stdout
    assert len([line for line in run("pt", "R407C").stdout.splitlines() if re.match(r" *−?\d+\.0 ", line)]) == 21


def test_pt_rows_outside_the_range_are_null_with_a_reason(run):
    """The table goes on; a script finds nulls and the reason in the row."""
    read = json.loads(run("pt", "R134a", "--from", "0 degC", "--to", "200 degC", "--step", "100 K", "--json").stdout)
    inside, hot, hotter = read["rows"]

    assert inside.get("reason") is None
    for row in (hot, hotter):
        assert "outside the range of its model" in row["reason"]
        assert {value for key, value in row.items() if key not in ("T_K", "reason")} == {None}


@pytest.mark.parametrize(
    ("options", "why"),
    [
        (("--step", "0 K"), "is not above 0 K"),
        (("--step", "1"), "has no unit"),
        (("--step", "1 degC"), "is a point on a temperature scale"),
        (("--step", "1e-9 K"), "more than the 5000 rows"),
        (("--from", "80 degC"), "give the lower temperature with --from"),
        (("--from", "warm"), "does not begin with a number"),
        (("--to", "60 bar g"), "is a pressure, but a temperature is needed"),
        (("--to", "\x1b[2J"), "does not begin with a number"),
    ],
)
def test_pt_refuses_what_makes_no_table(run, options, why):
    """Wrong usage, one line, exit status 2."""
    result = run("pt", "R134a", *options)

    assert (result.exit_code, result.stdout) == (2, "")
    assert why in result.stderr
    assert "\x1b" not in result.stderr


def test_pt_of_a_refrigerant_without_a_model_is_our_error(run):
    """The catalogue knows it, the property library does not: exit status 1."""
    result = run("pt", "R468A")

    assert (result.exit_code, result.stdout) == (1, "")
    assert "no equation of state for R-1132a" in result.stderr


def test_an_interrupt_ends_quietly_with_130(run, good, monkeypatch):
    """Ctrl-C is no error of ours: one line, no traceback, the status that shells expect."""

    def interrupted(path):
        raise KeyboardInterrupt

    monkeypatch.setattr("retrofit.case.read_case", interrupted)
    result = run("compare", good)

    assert (result.exit_code, result.stdout) == (130, "")
    assert result.stderr.count("\n") == 1


def test_a_fault_of_ours_stays_loud(run, good, monkeypatch):
    """An exception that nobody foresaw is not swallowed."""

    def faulty(path):
        raise ZeroDivisionError("a fault")

    monkeypatch.setattr("retrofit.case.read_case", faulty)

    with pytest.raises(ZeroDivisionError, match="a fault"):
        run("compare", good)
