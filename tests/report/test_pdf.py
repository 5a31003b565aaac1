"""The PDF read back: tagged, its language and title, every font in it, every sign there, nothing fetched."""

import io
import os
import re
import sys

import pytest

from retrofit.errors import MissingPartError
from retrofit.report.pdf import render_pdf, require_pdf

SIGNS = "−≈°²³–±·"


def made(html, comparison):
    """Return the PDF; without the setter's libraries skip, unless the machine is required to have all."""
    try:
        return render_pdf(html, comparison)
    except MissingPartError as error:
        if os.environ.get("RETROFIT_REQUIRE_BROWSER") == "1":
            raise
        pytest.skip(error.message)


@pytest.fixture(scope="module")
def small(assessed):
    """Return the result of a case with few candidates."""
    return assessed("bottle-cooler")


@pytest.fixture(scope="module")
def reader(small, page_of):
    """Return the PDF of it as pypdf reads it."""
    import pypdf

    return pypdf.PdfReader(io.BytesIO(made(page_of("bottle-cooler", "si"), small)))


@pytest.fixture(scope="module")
def texts(reader):
    """Return the text of each page."""
    return [page.extract_text() for page in reader.pages]


def test_it_is_tagged_and_says_language_and_title(reader, small):
    """What a screen reader needs (ISO 32000-1, 14.7 to 14.9): marked content, a tree, a language, a title."""
    root = reader.trailer["/Root"]

    assert root["/MarkInfo"]["/Marked"]
    assert root["/StructTreeRoot"]["/K"]
    assert root["/Lang"] == "en"
    assert reader.metadata.title == f"{small.case.title}: refrigerant changeover"


def test_figures_have_words_and_tables_have_heads(reader):
    """What the tags are for: every figure says what it shows, tables have heading cells, one heading is the first."""
    found, left = [], [reader.trailer["/Root"]["/StructTreeRoot"]["/K"]]
    while left:
        node = left.pop().get_object() if hasattr(left[-1], "get_object") else left.pop()
        if isinstance(node, list):
            left += node
        elif isinstance(node, dict):
            found.append(node)
            left += [node["/K"]] if "/K" in node else []
    kinds = [node.get("/S") for node in found]

    assert kinds.count("/H1") == 1
    assert kinds.count("/TH") > kinds.count("/Table") > 10
    assert all(node["/Alt"] for node in found if node.get("/S") == "/Figure")
    assert "/Figure" in kinds


def test_no_page_is_left_with_a_heading_alone(texts):
    """A table longer than a page begins under its heading: two lines at least besides head and foot, two lines too."""
    assert [text for text in texts if len(text.strip().splitlines()) < 4] == []


def test_every_font_is_in_the_file(reader):
    """No page relies on a font of the reader's machine, and each can be turned back into text."""
    fonts = [font.get_object() for page in reader.pages for font in page["/Resources"]["/Font"].values()]

    assert fonts
    for font in fonts:
        descriptor = font["/DescendantFonts"][0].get_object()["/FontDescriptor"]
        assert {"/FontFile2", "/FontFile3"} & set(descriptor)
        assert "/ToUnicode" in font


def test_every_sign_of_the_page_is_set(texts, page_of):
    """Each sign that is no plain letter, as far as the page has it; and no box in place of one."""
    html, text = page_of("bottle-cooler", "si"), "".join(texts)
    used = {sign for sign in SIGNS if sign in re.sub(r"<style.*?</style>", "", html, flags=re.DOTALL)}

    assert used >= set("−°³")
    assert {sign for sign in used if sign not in text} == set()
    assert not set(text) & set("\0\ufffd")


def test_greek_letters_and_marks_have_a_font(small):
    """Signs that texts of a case or of figures may bring: they come back as text, so a font had them."""
    import pypdf

    signs = "ΔηρλΩµ√≤≥→⅓½×"
    page = f"<!DOCTYPE html><html lang='en'><head><title>t</title></head><body><p>{signs}</p></body></html>"
    text = pypdf.PdfReader(io.BytesIO(made(page, small))).pages[0].extract_text()

    assert set(signs) - set(text) == set()


def test_pages_are_a4_and_numbered(reader, texts):
    """Every page says which it is of how many, and where the cautions stand."""
    count = len(texts)

    for number, (page, text) in enumerate(zip(reader.pages, texts, strict=True), start=1):
        assert [round(float(side)) for side in page.mediabox[2:]] == [595, 842]
        assert f"Page {number} of {count}" in text
        assert "Cautions: section" in text


def test_every_caution_is_printed(texts, small):
    """Word for word, over all breaks."""
    printed = re.sub(r"\s+", "", "".join(texts))

    for entry in small.entries:
        for caution in entry.cautions:
            assert re.sub(r"\s+", "", caution.title) in printed


def test_the_block_of_data_is_not_printed_and_the_case_is_attached(reader, texts, small):
    """Nothing of what travels in the page is seen; the case file comes along by its name."""
    assert not any("retrofit.carried" in text or "zlib" in text for text in texts)
    assert reader.attachments == {"bottle-cooler.toml": [small.case.text.encode("utf-8")]}


def test_nothing_is_fetched(small, tmp_path):
    """A picture of a file or a server is left out; one in the page itself is shown."""
    import pypdf

    dot = "iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mNk+M9QDwADhgGAWjR9awAAAABJRU5ErkJggg=="
    picture = tmp_path / "dot.png"
    picture.write_bytes(__import__("base64").b64decode(dot))
    form = (
        "<!DOCTYPE html><html lang='en'><head><title>t</title></head><body><p>x</p><img src='{}' alt='a'></body></html>"
    )
    counts = []
    for source in (f"file://{picture}", "http://127.0.0.1:9/a.png", f"data:image/png;base64,{dot}"):
        pages = pypdf.PdfReader(io.BytesIO(made(form.format(source), small))).pages
        counts.append(len(pages[0].images))

    assert counts == [0, 0, 1]


@pytest.mark.parametrize("missing", ["part", "library"])
def test_without_the_optional_part_there_is_advice(missing, monkeypatch):
    """Not a traceback, and the way that needs nothing; so too if only a library that it needs is missing."""
    if missing == "part":
        monkeypatch.setattr("retrofit.report.pdf.find_spec", lambda name: None)
    else:
        monkeypatch.setattr("retrofit.report.pdf.find_spec", lambda name: True)
        monkeypatch.setitem(sys.modules, "weasyprint", None)

    with pytest.raises(MissingPartError, match=r"pip install '\.\[pdf\]'.*libpango.*browser"):
        require_pdf()
