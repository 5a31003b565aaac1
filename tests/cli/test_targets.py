"""Outputs never take the place of inputs, nor of what others wrote: every command that writes, every kind of file."""

import os
import shutil
from dataclasses import replace
from pathlib import Path

import pytest

from retrofit.case import read_case
from retrofit.errors import ReportError
from retrofit.report.targets import check_outputs

ROOT = Path(__file__).resolve().parents[2]
CASE = """\
title = "Corner shop"
[plant]
refrigerant = "R134a"
[duty]
cooling = "20 kW"
evaporating = "-5 degC"
condensing = "40 degC"
[evaporator]
medium = "air"
inlet = "4 degC"
outlet = "0 degC"
arrangement = "crossflow"
[condenser]
medium = "air"
inlet = "28 degC"
outlet = "33 degC"
arrangement = "crossflow"
[year]
weather = "hours.csv"
[report]
logo = "logo.svg"
[compare]
candidates = ["R513A"]
"""
LOGO = '<svg xmlns="http://www.w3.org/2000/svg" width="4" height="4"><rect width="4" height="4"/></svg>'
INPUTS = ("shop.toml", "hours.csv", "logo.svg", "case.schema.json", "law/own.toml", "words/report.html")


@pytest.fixture
def shop(tmp_path, monkeypatch):
    """Work in a folder with a case, its weather, logo, law and schema, and a folder of templates; return it."""
    (tmp_path / "law").mkdir()
    (tmp_path / "words").mkdir()
    (tmp_path / "shop.toml").write_text(CASE)
    (tmp_path / "logo.svg").write_text(LOGO)
    (tmp_path / "law" / "own.toml").write_text('title = "Own"\njurisdictions = ["X"]\nreview_by = 2099-01-01\n')
    (tmp_path / "case.schema.json").write_text("{}")
    (tmp_path / "words" / "report.html").write_text("mine")
    shutil.copy(ROOT / "cases" / "coast.csv", tmp_path / "hours.csv")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def commands(target):
    """Return every command that writes what is made of a case, with a name to write to."""
    return [
        ("report", "shop.toml", "--templates", "words", "-o", target),
        ("report", "shop.toml", "--templates", "words", "--pdf", target),
        ("report", "shop.toml", "--templates", "words", "--xlsx", target),
        ("commission", "shop.toml", "R513A", "--templates", "words", "-o", target),
    ]


@pytest.mark.parametrize("force", [(), ("--force",)], ids=["", "forced"])
@pytest.mark.parametrize("name", INPUTS)
@pytest.mark.parametrize("link", ["itself", "symbolic link", "hard link"])
def test_no_input_is_ever_overwritten(run, shop, name, link, force):
    """Under its own name, through a link with the ending of the form, and through a second name; also with --force."""
    before = {path: (shop / path).read_bytes() for path in INPUTS}
    for number, ending in enumerate((".html", ".pdf", ".xlsx", ".html")):
        target = shop / name
        if link != "itself":
            target = shop / f"out{number}{ending}"
            (os.symlink if link == "symbolic link" else os.link)(shop / name, target)
        found = run(*commands(target)[number], *force)

        assert found.exit_code in (1, 2), found.stdout
        assert found.stdout == ""
        assert "overwritten" in found.stderr or "ends in" in found.stderr or "differ from" in found.stderr
    assert {path: (shop / path).read_bytes() for path in INPUTS} == before


def test_a_file_of_others_is_replaced_only_with_force(run, shop):
    """A page of another case, or of nobody here, stays; with --force it goes."""
    target = shop / "page.html"
    target.write_text("<html>somebody's</html>")
    for command in (("report", "shop.toml"), ("commission", "shop.toml", "R513A")):
        refused = run(*command, "-o", target)

        assert refused.exit_code == 1
        assert "page.html is there already and was not written here for this case" in refused.stderr
        assert "--force" in refused.stderr
        assert target.read_text() == "<html>somebody's</html>"
    assert run("report", "shop.toml", "-o", target, "--force").exit_code == 0
    assert b"Corner shop" in target.read_bytes()


def test_a_report_is_simply_made_again(run, good):
    """Each form in the place of the one before, after the case was changed; another case's is kept."""
    folder = good.parent
    forms = ("-o", folder / "a.html", "--xlsx", folder / "a.xlsx")
    assert run("report", good, *forms).exit_code == 0
    good.write_text(good.read_text().replace("20 kW", "21 kW"))
    assert run("report", good, *forms).exit_code == 0
    assert run("commission", good, "R513A", "-o", folder / "a.html").exit_code == 0
    other = folder / "other.toml"
    other.write_text(good.read_text())
    kept = (folder / "a.html").read_bytes()

    assert run("report", other, "-o", folder / "a.html").exit_code == 1
    assert run("report", other, "--xlsx", folder / "a.xlsx").exit_code == 1
    assert (folder / "a.html").read_bytes() == kept


def test_a_pdf_is_simply_made_again(run, good):
    """Its mark stands in it, and it can still be read."""
    pypdf = pytest.importorskip("pypdf")
    pytest.importorskip("weasyprint")
    target = good.parent / "a.pdf"
    assert run("report", good, "--pdf", target).exit_code == 0
    check_outputs([target], read_case(good))
    with pytest.raises(ReportError, match="not written here for this case"):
        check_outputs([target], replace(read_case(good), title="Another shop"))
    assert len(pypdf.PdfReader(target, strict=True).pages) > 1


def test_an_empty_file_holds_nothing_to_lose(run, good):
    """As a program makes one to have a free name."""
    target = good.parent / "a.html"
    target.touch()

    assert run("report", good, "-o", target).exit_code == 0


@pytest.mark.parametrize(
    ("options", "words"),
    [
        (("-o", "x.pdf", "--pdf"), "let it end in .html or .htm, or write --pdf and the name"),
        (("-o", "x.xlsx"), "or write --xlsx and the name"),
        (("-o", "x.csv"), "let it end in .html or .htm"),
        (("--pdf", "x.html"), "let it end in .pdf"),
        (("--xlsx", "x.PDF"), "let it end in .xlsx"),
    ],
)
def test_a_form_is_not_written_under_the_name_of_another(run, good, options, words, monkeypatch):
    """Wrong usage, told before anything is computed."""
    monkeypatch.chdir(good.parent)
    found = run("report", good, *options)

    assert (found.exit_code, found.stdout) == (2, "")
    assert words in found.stderr
    assert [path.name for path in good.parent.iterdir()] == ["shop.toml"]


def test_the_case_written_out_of_a_report_never_takes_its_place(run, good):
    """Neither by its name nor through a link, and not what a link points to; also with --force."""
    folder = good.parent
    assert run("report", good, "-o", folder / "a.html").exit_code == 0
    before = (folder / "a.html").read_bytes(), good.read_bytes()
    (folder / "report.toml").symlink_to(folder / "a.html")
    (folder / "link.toml").symlink_to(good)
    for name in ("a.html", "report.toml", "link.toml", "weather.csv"):
        assert run("rerun", folder / "a.html", "--case", folder / name, "--force").exit_code in (1, 2), name
    assert ((folder / "a.html").read_bytes(), good.read_bytes()) == before


def test_new_keeps_what_its_schema_would_replace(run, tmp_path):
    """A schema written here is renewed; anything else of that name, and what a link points to, is not."""
    schema, case = tmp_path / "case.schema.json", tmp_path / "plant.toml"
    schema.write_text('{"mine": 1}')
    refused = run("new", case)

    assert refused.exit_code == 1
    assert "is not a schema of case files" in refused.stderr
    assert not case.exists()
    schema.unlink()
    (tmp_path / "weather.csv").write_text("hour")
    schema.symlink_to(tmp_path / "weather.csv")
    assert run("new", case, "--force").exit_code == 1
    (tmp_path / "mine.toml").symlink_to(tmp_path / "weather.csv")
    assert run("new", tmp_path / "mine.toml", "--force").exit_code in (1, 2)
    assert run("new", tmp_path / "weather.csv", "--force").exit_code == 2
    assert (tmp_path / "weather.csv").read_text() == "hour"
