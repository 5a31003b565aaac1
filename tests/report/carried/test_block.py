"""The block that a report carries: what is in it, that it survives any text, and how a broken one is refused."""

import base64
import json
import time
import zlib
from dataclasses import replace
from pathlib import Path

import pytest

from retrofit.errors import ReportError
from retrofit.report import render_html
from retrofit.report.carried import read_carried
from retrofit.report.carried.block import END, START
from retrofit.report.carried.reader import LARGEST_RESULT_BYTES
from retrofit.report.carried.result import digest, fingerprint, result_of, rounded
from retrofit.report.carried.strict import MOST_VALUES
from retrofit.report.machine import comparison_json

ROOT = Path(__file__).resolve().parents[3]


# What is in it


@pytest.mark.parametrize("name", ["harbour-market", "office-chiller"])
def test_case_options_and_result_come_back(name, page_of, assessed, written, made_at):
    """The case is there letter by letter, with units, day and time, and the result to nine digits."""
    kept = read_carried(written(page_of(name, "ip")))
    result = comparison_json(assessed(name))

    assert kept.case_text == (ROOT / "cases" / f"{name}.toml").read_text(encoding="utf-8")
    assert (kept.case_name, kept.units, kept.made_at) == (f"{name}.toml", "ip", made_at)
    assert kept.on.isoformat() == (result["law"]["on"] if result["law"] else "2026-12-01")
    assert kept.result["candidates"][0]["duty"]["cop"] == pytest.approx(
        result["candidates"][0]["duty"]["cop"], rel=1e-9
    )
    assert kept.fingerprint == fingerprint(assessed(name))
    assert kept.altered == ()


def test_versions_and_data_tables_are_named(page_of, written):
    """Library versions, and a digest of each table of the catalogue, of law and of thresholds, and of the program."""
    kept = read_carried(written(page_of("harbour-market", "si")))

    assert set(kept.versions) == {"retrofit", "coolprop", "numpy"}
    assert {"refrigerants/safety.csv", "refrigerants/cautions.toml", "checks/law/eu-2024-573.toml"} <= set(kept.data)
    assert {"checks/thresholds.toml", "program"} <= set(kept.data)
    assert len(set(kept.data.values())) == len(kept.data)


def test_units_do_not_change_the_fingerprint(page_of, written):
    """The result is one, however it is shown."""
    metric, other = (
        read_carried(written(page_of("harbour-market", units), f"{units}.html")).fingerprint for units in ("si", "ip")
    )

    assert metric == other


def test_own_tables_of_law_travel_with_the_case(made_at, tmp_path, written):
    """What stands in the folder `law` beside a case was used, so it is kept."""
    from retrofit.case import read_case
    from retrofit.checks import assess
    from retrofit.study import compare

    table = (ROOT / "retrofit" / "checks" / "law" / "eu-2024-573.toml").read_bytes()
    (tmp_path / "law").mkdir()
    (tmp_path / "law" / "eu-2024-573.toml").write_bytes(table + b"# ours\n")
    case = tmp_path / "plant.toml"
    case.write_text((ROOT / "cases" / "harbour-market.toml").read_text(encoding="utf-8"), encoding="utf-8")
    html = render_html(assess(compare(read_case(case))), made_at=made_at)

    assert read_carried(written(html)).files == {"law/eu-2024-573.toml": table + b"# ours\n"}


def test_the_weather_of_a_year_travels_with_the_case(made_at, tmp_path, written):
    """The file of hours that the case names, and a result that does not depend on where the case stands."""
    from retrofit.case import read_case
    from retrofit.checks import assess
    from retrofit.report.carried import rerun
    from retrofit.study import compare

    weather = "hour,dry_bulb [degC]\n" + "".join(f"{hour},{hour % 24}\n" for hour in range(1, 8761))
    text = (ROOT / "cases" / "process-chiller.toml").read_text(encoding="utf-8")
    (tmp_path / "data").mkdir()
    (tmp_path / "data" / "coast.csv").write_text(weather, encoding="utf-8")
    (tmp_path / "plant.toml").write_text(text + '\n[year]\nweather = "./data/coast.csv"\n', encoding="utf-8")
    result = assess(compare(read_case(tmp_path / "plant.toml")))
    kept = read_carried(written(render_html(result, made_at=made_at)))

    assert result.case.weather.source == "./data/coast.csv"
    assert kept.files == {"data/coast.csv": weather.encode()}
    assert not rerun(kept).differs


# The canonical form


def test_the_canonical_form_keeps_nine_digits_and_no_sign_of_zero():
    """By hand: 1/3 to nine digits; minus zero is zero; words, truths and gaps stay."""
    assert rounded({"a": 1 / 3, "b": -0.0, "c": [True, None, "x", 7], "d": (1e-20,)}) == {
        "a": 0.333333333, "b": 0.0, "c": [True, None, "x", 7], "d": [1e-20],
    }  # fmt: skip
    assert str(rounded(-0.0)) == "0.0"


def test_equal_data_have_equal_digests_whatever_their_order():
    """The digest is that of a known text: SHA-256 of `{"a":1.5,"b":[]}` by the library."""
    import hashlib

    assert digest({"b": [], "a": 1.5}) == hashlib.sha256(b'{"a":1.5,"b":[]}').hexdigest()


def test_where_a_case_stands_is_no_part_of_the_result(assessed):
    """The same case in another folder has the same fingerprint."""
    here = assessed("harbour-market")
    there = replace(here, case=replace(here.case, path="/elsewhere/harbour-market.toml"))

    assert result_of(here) == result_of(there)


# Not seen, not run, not lost

HOSTILE = ["</template><script>alert(1)</script>", "</body>--><!-- & &lt; \\u003c", "\x1b[2J\u202e\u2028", START]


@pytest.mark.parametrize("text", HOSTILE)
def test_no_text_ends_the_block(text, assessed, made_at, written):
    """Titles that look like markup come back as they were, and bring no element into the page."""
    plain = assessed("harbour-market")
    hostile = replace(plain, case=replace(plain.case, title=text, text=f"# {text}", path=text.replace("/", "")))
    html = render_html(hostile, made_at=made_at)
    kept = read_carried(written(html))

    assert kept.case_text == f"# {text}"
    assert kept.result["title"] == text
    assert kept.altered == ()
    assert html.count(END) == html.count("<template") == 1
    assert "<script" not in html


@pytest.mark.browser
def test_a_browser_shows_and_runs_nothing_of_it(page_of, browser):
    """The page has the height it has without the block, and no element inside it."""
    html = page_of("harbour-market", "si")
    bare = html[: html.rindex(START)] + html[html.rindex(END) + len(END) :]
    page = browser.new_page(viewport={"width": 1000, "height": 800})
    heights = []
    for content in (html, bare):
        page.set_content(content)
        heights.append(page.evaluate("document.documentElement.scrollHeight"))
    page.set_content(html)
    found = page.evaluate(
        "[...document.querySelectorAll('template')].map(t => [t.content.childElementCount, t.innerText])"
    )
    page.close()

    assert heights[0] == heights[1]
    assert found == [[0, ""]]


def test_no_template_of_the_reader_can_leave_it_out(assessed, made_at, tmp_path, written):
    """A page without an end of its body carries its case all the same."""
    from retrofit.report.templates import built_in_folder

    text = (built_in_folder() / "report.html").read_text(encoding="utf-8")
    (tmp_path / "report.html").write_text(text.replace("</body>\n</html>", ""), encoding="utf-8")
    html = render_html(assessed("harbour-market"), template_folder=tmp_path, made_at=made_at)

    assert "</body>" not in html
    assert read_carried(written(html, "own.html")).altered == ()


def test_other_line_ends_are_no_alteration(page_of, written):
    """A page that went through a mail as text."""
    html = page_of("harbour-market", "si").replace("\n", "\r\n")

    assert read_carried(written(html)).altered == ()


# What is altered is named

ALTERATIONS = {
    "case": lambda data, result: data["case"].update(text=data["case"]["text"].replace("120 kW", "130 kW")),
    "files": lambda data, result: data["files"].update({"law/x.toml": [""]}),
    "options": lambda data, result: data["options"].update(on="2030-01-01"),
    "made_with": lambda data, result: data["made_with"]["versions"].update(retrofit="9.9"),
    "result": lambda data, result: result["existing"]["duty"].update(cop=9.0),
}


@pytest.mark.parametrize("part", ALTERATIONS)
def test_an_edited_part_is_named(part, page_of, edited, written):
    """Each part by itself, and no other."""
    html = edited(page_of("harbour-market", "si"), ALTERATIONS[part])

    assert read_carried(written(html)).altered == (part,)


def test_an_edited_page_is_named(page_of, written):
    """A number in the visible page, with the data left alone."""
    html = page_of("harbour-market", "si").replace("73.3", "63.3", 1)

    assert read_carried(written(html)).altered == ("page",)


# What cannot be read is refused

PNG = b"\x89PNG\r\n\x1a\n\0\0\0\rIHDR"


@pytest.mark.parametrize(
    ("content", "why"),
    [
        (b"", "it is empty"),
        (PNG, "no report in HTML"),
        (b"title = 'a case'", "no report in HTML"),
        (b"<!DOCTYPE html><html><body>Hello</body></html>", "carries no case"),
        (b"<!DOCTYPE html><html><body>Hello", "cut off before the data"),
        (b"<html>" + START.encode() + b'{"format": ', "cut off within the data"),
        (b"<html>" + START.encode() + b"{]" + END.encode(), "damaged"),
        (b"<html>" + START.encode() + b"[" * 100_000 + END.encode(), "damaged"),
        (b"<html>" + START.encode() + b'{"format": NaN}' + END.encode(), "damaged"),
        (b"<html>" + START.encode() + b'{"format": "retrofit.carried/7"}' + END.encode(), "reads retrofit.carried/1"),
        (b"<html>" + START.encode() + b'{"format": "retrofit.carried/1"}' + END.encode(), "case is missing"),
    ],
    ids=["empty", "png", "text", "other html", "cut", "cut in block", "json", "deep", "nan", "later", "no parts"],
)
def test_a_file_that_is_no_whole_report_is_refused(content, why, written):
    """What is wrong, and the file's name."""
    path = written(content)

    with pytest.raises(ReportError, match=why) as found:
        read_carried(path)
    assert str(path) in found.value.message


def test_what_is_no_file_is_refused(tmp_path):
    """Nothing there, or a folder."""
    for path, why in ((tmp_path / "none.html", "No such file"), (tmp_path, "no ordinary file")):
        with pytest.raises(ReportError, match=why):
            read_carried(path)


def test_a_huge_file_is_refused_unread(tmp_path):
    """A sparse file of a gigabyte costs no more than the limit."""
    path = tmp_path / "huge.html"
    with path.open("wb") as file:
        file.truncate(10**9)

    with pytest.raises(ReportError, match="larger than 30 MB"):
        read_carried(path)


def _packed(content):
    return [base64.b64encode(content).decode()]


BROKEN = {
    "no base64": (lambda data: data.update(result=["!!!"]), "no base64"),
    "cut base64": (lambda data: data.update(result=data["result"][:-3]), "no base64|cut off"),
    "no zlib": (lambda data: data.update(result=_packed(b"abc")), "damaged"),
    "no object": (lambda data: data.update(result=_packed(zlib.compress(b"[]"))), "no JSON object"),
    "wrong type": (lambda data: data.update(case="text"), "case is missing or of the wrong kind"),
    "half a letter": (lambda data: data["case"].update(text="\ud800"), "damaged"),
    "no day": (lambda data: data["options"].update(on="yesterday"), "damaged"),
    "no units": (lambda data: data["options"].update(units="cgs"), "no units cgs"),
    "long case": (lambda data: data["case"].update(text="#" * 1_000_001), "larger than 1 MB"),
}


@pytest.mark.parametrize(("break_it", "why"), BROKEN.values(), ids=BROKEN)
def test_a_damaged_part_is_refused(break_it, why, page_of, block_of, written):
    """One sentence with what is wrong and what to do."""
    html = page_of("harbour-market", "si")
    data = block_of(html)
    break_it(data)
    broken = html[: html.rindex(START)] + START + json.dumps(data) + html[html.rindex(END) :]

    with pytest.raises(ReportError, match=why) as found:
        read_carried(written(broken))
    assert "retrofit report" in found.value.message


def test_a_result_that_unpacks_without_end_is_refused(page_of, block_of, written, monkeypatch):
    """Packed data say how small they are, not how large they become."""
    monkeypatch.setattr("retrofit.report.carried.reader.LARGEST_RESULT_BYTES", 10_000)

    with pytest.raises(ReportError, match=r"larger than 0\.01 MB"):
        read_carried(written(page_of("harbour-market", "si")))


# What no report holds, put where a number stood: digits, depth, size, kind; each with a digest that fits.
COP = '"cop":'
NONSENSE = {
    "beyond floating point": (lambda text: text.replace(COP, '"cop":1e999,"x":', 1), "too large"),
    "large": (lambda text: text.replace(COP, '"cop":1e31,"x":', 1), "too large"),
    "4000 digits": (lambda text: text.replace(COP, f'"cop":{"9" * 4000},"x":', 1), "4000 digits"),
    "5000 digits": (lambda text: text.replace(COP, f'"cop":-{"9" * 5000},"x":', 1), "5001 digits"),
    "lists in lists": (lambda text: text.replace(COP, f'"cop":{"[" * 500}{"]" * 500},"x":', 1), "nested"),
    "objects in objects": (
        lambda text: text.replace(COP, '"cop":' + '{"a":' * 900 + "1" + "}" * 900 + ',"x":', 1),
        "nested",
    ),
    "deeper than the reader goes": (lambda text: text[:-1] + f',"x":{"[" * 100_000}{"]" * 100_000}}}', "nested"),
    "a long list": (lambda text: text[:-1] + ',"x":[' + "1," * 600_000 + "1]}", "more than 500000 values"),
    "a huge list": (lambda text: text[:-1] + ',"x":[' + "1," * 30_000_000 + "1]}", "larger than 10 MB"),
    "no number": (lambda text: text.replace(COP, '"cop":Infinity,"x":', 1), "no number"),
    "a key twice": (lambda text: text[:-1] + ',"existing":5}', "a key twice"),
    "true draws": (
        lambda text: text[:-1] + ',"remaining_life":{"draws":{"number":true,"seed":true}}}',
        "remaining_life.draws.number is missing or of the wrong kind",
    ),
    "too many draws": (
        lambda text: text[:-1] + ',"remaining_life":{"draws":{"number":20001,"seed":1}}}',
        "remaining_life.draws.number",
    ),
    "a negative seed": (
        lambda text: text[:-1] + ',"remaining_life":{"draws":{"number":9,"seed":-1}}}',
        "remaining_life.draws.seed",
    ),
    "no refrigerant": (lambda text: text.replace('"existing":', '"existing":[],"x":', 1), "existing is missing"),
    "letters beyond ASCII": (lambda text: text[:-1] + ',"x":"\xe9"}', "no JSON in ASCII"),
}


@pytest.mark.parametrize(("change", "why"), NONSENSE.values(), ids=NONSENSE)
def test_a_result_that_no_report_holds_is_refused_before_anything_is_computed(change, why, page_of, block_of, written):
    """In a moment, and in a sentence."""
    html = page_of("harbour-market", "si")
    data = block_of(html)
    text = zlib.decompress(base64.b64decode("".join(data["result"]))).decode()
    data["result"] = _packed(zlib.compress(change(text).encode(), 1))
    path = written(html[: html.rindex(START)] + START + json.dumps(data) + html[html.rindex(END) :])
    begun = time.perf_counter()

    with pytest.raises(ReportError, match=why) as found:
        read_carried(path)
    assert time.perf_counter() - begun < 20.0  # reading a list of 60 MB takes over a minute, refusing it a second
    assert len(found.value.message) < 600


@pytest.mark.parametrize(
    ("more", "why"),
    [
        (f'"x":{"9" * 4000}', "4000 digits"),
        ('"x":1e999', "too large"),
        (f'"x":{"[" * 900}{"]" * 900}', "nested"),
        ('"format":"retrofit.carried/1"', "a key twice"),
        (f'"x":[{"1," * 600_000}1]', "values"),
        ('"case":{"name":"' + "n" * 300 + '","text":""}', "a key twice"),
    ],
)
def test_a_block_that_no_report_holds_is_refused(more, why, page_of, written):
    """The data around the result are held to the same bounds."""
    html = page_of("harbour-market", "si")
    end = html.rindex("}", 0, html.rindex(END))

    with pytest.raises(ReportError, match=why):
        read_carried(written(f"{html[:end]},{more}{html[end:]}"))


def test_a_whole_report_is_far_from_every_bound(page_of, block_of):
    """Seven refrigerants; a case may have forty-one, and then with its remaining life."""
    data = block_of(page_of("harbour-market", "si"))
    text = zlib.decompress(base64.b64decode("".join(data["result"])))

    assert len(text) < LARGEST_RESULT_BYTES / 20
    assert text.count(b",") < MOST_VALUES / 20


@pytest.mark.parametrize(
    "name",
    [
        "../x.toml",
        "/etc/x",
        "law/../../x",
        "a/b/c/d/e/f/g/h/i",
        "law//x",
        "..",
        ".",
        "law/\x1b",
        "a\\..\\b",
        "",
        "x" * 300,
    ],
)
def test_a_name_that_leads_out_of_the_folder_is_refused(name, page_of, edited, written):
    """However it is written, and though its digest fits."""
    html = edited(page_of("harbour-market", "si"), lambda data, result: data["files"].update({name: []}), sealed=True)

    with pytest.raises(ReportError, match="outside the folder"):
        read_carried(written(html))
