"""`retrofit report` in several forms at once: names, refusals, and whole files only."""

import pytest


@pytest.fixture
def here(good, monkeypatch):
    """Work in the folder of the case; return the folder."""
    monkeypatch.chdir(good.parent)
    return good.parent


def test_all_forms_at_once(run, here):
    """Each under the name given."""
    found = run("report", "shop.toml", "-o", "a.html", "--xlsx", "c.xlsx", "--units", "ip")

    assert found.exit_code == 0
    assert sorted(path.name for path in here.iterdir()) == ["a.html", "c.xlsx", "shop.toml"]
    assert (here / "a.html").read_bytes().startswith(b"<!DOCTYPE html>")
    assert (here / "c.xlsx").read_bytes().startswith(b"PK")
    assert "Wrote a.html." in found.stdout
    assert "Wrote c.xlsx." in found.stdout


def test_a_form_without_a_name_takes_that_of_the_case(run, here):
    """And no HTML is written that nobody asked for."""
    assert run("report", "shop.toml", "--xlsx").exit_code == 0
    assert sorted(path.name for path in here.iterdir()) == ["shop.toml", "shop.xlsx"]


def test_a_pdf_is_written_or_refused_with_advice(run, here):
    """With the optional part a PDF; without it status 2, the advice, and no file."""
    found = run("report", "shop.toml", "--pdf")
    path = here / "shop.pdf"

    assert (found.exit_code, path.exists()) in ((0, True), (2, False))
    assert path.read_bytes().startswith(b"%PDF-") if path.exists() else "print to PDF" in found.stderr


def test_a_missing_part_is_said_before_anything_is_computed(run, here, monkeypatch):
    """Status 2, the advice, and no file at all though HTML could be made."""
    monkeypatch.setattr("retrofit.report.pdf.find_spec", lambda name: None)
    monkeypatch.setattr("retrofit.report.spreadsheet.workbook.find_spec", lambda name: None)
    for form in ("--pdf", "--xlsx"):
        found = run("report", "shop.toml", "-o", "a.html", form)

        assert (found.exit_code, found.stdout) == (2, "")
        assert "which is not installed: install" in found.stderr
    assert [path.name for path in here.iterdir()] == ["shop.toml"]


@pytest.mark.parametrize(
    "options",
    [("-o", "shop.toml"), ("--xlsx", "./shop.toml"), ("-o", "a", "--xlsx", "a")],
    ids=["html over case", "sheet over case", "one over another"],
)
def test_no_file_is_written_over_the_case_or_another(options, run, here, good):
    """Wrong usage, and the case is what it was."""
    before = good.read_text()
    found = run("report", "shop.toml", *options)

    assert found.exit_code == 2
    assert "differ from each other and from the case" in found.stderr
    assert good.read_text() == before
    assert [path.name for path in here.iterdir()] == ["shop.toml"]
