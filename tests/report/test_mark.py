"""The mark of a file: found in every form, for the same case only, and for nothing that was not written here."""

import zipfile
from dataclasses import replace

import pytest

from retrofit.report.mark import is_marked, mark_of, marked_page, marked_pdf


def test_a_page_bears_its_mark_after_its_end(tmp_path, case_of):
    """A comment that shows nothing; another title or another file name is another case, other numbers are not."""
    case, path = case_of("R134a", ["R513A"]), tmp_path / "a.html"
    path.write_text(marked_page("<html></html>\n", case))

    assert path.read_text() == f"<html></html>\n<!-- {mark_of(case)} -->\n"
    assert is_marked(path, case)
    assert is_marked(path, case_of("R134a", ["R1234yf"], duty={"cooling": "7 kW"}))
    assert not is_marked(path, replace(case, title="Another plant"))
    assert not is_marked(path, replace(case, path="/elsewhere/other.toml"))


def test_a_pdf_with_its_mark_is_still_a_pdf(tmp_path, case_of):
    """The offset after `startxref` counts from the start to a place before the mark (ISO 32000-2, 7.5.5)."""
    pdf = b"%PDF-1.7\nxref\n0 1\ntrailer << /Size 1 >>\nstartxref\n9\n%%EOF\n"
    case, path = case_of("R134a", ["R513A"]), tmp_path / "a.pdf"
    path.write_bytes(marked_pdf(pdf, case))

    assert path.read_bytes().endswith(b"\nstartxref\n9\n%%EOF\n")
    assert path.read_bytes()[9:13] == b"xref"
    assert is_marked(path, case)


@pytest.mark.parametrize(
    "content",
    [b"", b"<html></html>", b"PK\x03\x04 cut off", b"%PDF-1.7", b"\xff" * 10_000],
    ids=["empty", "page", "broken sheet", "pdf", "noise"],
)
def test_what_others_wrote_bears_no_mark(tmp_path, case_of, content):
    """Nor does a folder, a missing file, or a spreadsheet of others."""
    case, path = case_of("R134a", ["R513A"]), tmp_path / "file"
    path.write_bytes(content)
    book = tmp_path / "book.xlsx"
    with zipfile.ZipFile(book, "w") as made:
        made.writestr("xl/workbook.xml", "<workbook/>")

    assert not any(is_marked(file, case) for file in (path, tmp_path, tmp_path / "none", book))
