"""`retrofit year`: text and JSON of a case, with what is missing in words, and faults of its options named."""

import json

import pytest

MONEY = """
[money]
currency = "$"
tariff = 0.2
[money.change]
labour = 4000
"""


@pytest.fixture
def with_money(good):
    """Return the path of a case with money and no year."""
    good.write_text(good.read_text(encoding="utf-8") + MONEY, encoding="utf-8")
    return good


def test_text_says_what_is_missing(run, with_money):
    """Without a year the saving is unknown for want of it, and no zero stands in its place."""
    result = run("year", str(with_money), "--draws", "10")
    text = " ".join(result.stdout.split())

    assert result.exit_code == 0
    assert "Money in $" in text
    assert "needs" in text
    assert "electricity of a year" in text


def test_json_is_one_object_and_reproducible(run, with_money):
    """Twice the same bytes, with its schema; a seed that differs is told."""
    first, again = (run("year", str(with_money), "--json", "--draws", "10") for _ in range(2))
    other = run("year", str(with_money), "--json", "--draws", "10", "--seed", "7")

    assert first.stdout == again.stdout
    assert json.loads(first.stdout)["schema"] == "retrofit.year/1"
    assert json.loads(other.stdout)["draws"]["seed"] == 7


@pytest.mark.parametrize("wrong", [("--draws", "-1"), ("--draws", "many"), ("--seed", "-2"), ("--units", "cgs")])
def test_wrong_options_are_usage(wrong, run, with_money):
    """A number outside its range, or no number, ends with status 2."""
    assert run("year", str(with_money), *wrong).exit_code == 2


def test_report_tells_money_where_the_case_has_it(run, with_money, tmp_path):
    """The report of a case with [money] has its section; one without has none."""
    out = tmp_path / "plant.html"

    assert run("report", str(with_money), "-o", str(out)).exit_code == 0
    assert 'id="money"' in out.read_text(encoding="utf-8")


def test_csv_has_a_line_an_option(run, with_money):
    """A heading and one line for each option; it excludes JSON."""
    result = run("year", str(with_money), "--csv", "--draws", "0")
    heading, *lines = result.stdout.splitlines()

    assert result.exit_code == 0
    assert heading.startswith("refrigerant,deed,safety_class,cautions,currency,")
    assert [line.partition(",")[0] for line in lines] == ["R134a", "R513A", "R290"]
    assert run("year", str(with_money), "--csv", "--json").exit_code == 2
