"""`retrofit rerun`: a report computed again from the command line, and its case written out."""

import json


def _report(run, good):
    path = good.with_suffix(".html")
    assert run("report", good, "-o", path).exit_code == 0
    return path


def test_nothing_differs_ends_with_0_and_something_with_1(run, good):
    """And JSON says the same."""
    path = _report(run, good)
    same = run("rerun", path)
    path.write_text(path.read_text(encoding="utf-8").replace("Corner shop", "Corner shed", 1), encoding="utf-8")
    other, as_json = run("rerun", path), run("rerun", path, "--json")

    assert (same.exit_code, other.exit_code, as_json.exit_code) == (0, 1, 1)
    assert "Nothing differs." in same.stdout
    assert "the page is not as it was written" in other.stdout
    assert json.loads(as_json.stdout)["differs"] is True


def test_the_statuses_stand_in_its_help(run):
    """0, 1 and 2, for scripts."""
    assert "0 nothing differs; 1 something differs" in " ".join(run("rerun", "--help").stdout.split())


def test_what_is_no_report_ends_with_1_and_one_line(run, good):
    """A case instead of a report."""
    found = run("rerun", good)

    assert (found.exit_code, found.stdout) == (1, "")
    assert found.stderr.count("\n") == 1
    assert "it is no report in HTML" in found.stderr


def test_the_case_is_written_out_and_nothing_overwritten(run, good, tmp_path):
    """Letter by letter; a file that is there needs --force."""
    path, out = _report(run, good), tmp_path / "out.toml"

    assert run("rerun", path, "--case", out).exit_code == 0
    assert out.read_bytes() == good.read_bytes()
    out.write_text("kept")
    refused = run("rerun", path, "--case", out)
    assert (refused.exit_code, out.read_text()) == (1, "kept")
    assert "--force" in refused.stderr
    assert run("rerun", path, "--case", out, "--force").exit_code == 0
    assert out.read_bytes() == good.read_bytes()
