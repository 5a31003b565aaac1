"""The keys of [report]: texts, a logo that a report can carry, revisions, and what is recommended."""

import datetime
import os
import struct
import zlib

import pytest
from hypothesis import given
from hypothesis import strategies as st

from retrofit.case.logo import LARGEST_LOGO_BYTES, logo_at
from retrofit.case.paper import Revision
from retrofit.errors import QuantityError

START = """\
[plant]
refrigerant = "R404A"
[duty]
cooling = "120 kW"
evaporating = "-8 degC"
condensing = "42 degC"
[compare]
candidates = ["R448A", "R449A"]
[report]
"""
LINE = START.count("\n") + 1  # where a key added to [report] stands
SVG = b'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 8 8"><path d="M0 0h8v8z"/></svg>'


def chunk(kind, body):
    """Return a chunk of a PNG file: length, kind, body, check sum (PNG, third edition, 5.3)."""
    return struct.pack(">I", len(body)) + kind + body + struct.pack(">I", zlib.crc32(kind + body))


def png(width=2, height=2, ihdr=b"\x08\x00\x00\x00\x00"):
    """Return a grey picture of the size asked for, its rows as short as they may be."""
    pixels = zlib.compress(b"\x00" * 8)
    head = chunk(b"IHDR", struct.pack(">II", width, height) + ihdr)
    return b"\x89PNG\r\n\x1a\n" + head + chunk(b"IDAT", pixels) + chunk(b"IEND", b"")


def jpeg(width=2, height=3):
    """Return start, an application segment, and a frame header (ITU-T T.81, B.2.2)."""
    app = b"\xff\xe0" + struct.pack(">H", 4) + b"ab"
    frame = b"\xff\xc0" + struct.pack(">HBHHB", 11, 8, height, width, 1) + b"\x01\x11\x00"
    return b"\xff\xd8" + app + frame + b"\xff\xd9"


def test_a_report_as_written(case, tmp_path):
    """Each key is held as what it is; the logo as the picture beside the case file."""
    (tmp_path / "pictures").mkdir()
    (tmp_path / "pictures" / "mark.svg").write_bytes(SVG)
    report = case(
        START
        + 'client = "A client"\nsite = "A site"\nsystem_id = "P1"\ncompany = "A company"\nlogo = "pictures/mark.svg"\n'
        'prepared = "P"\nchecked = "C"\napproved = "A"\ndecide_by = 2027-01-31\nrecommended = "r-448a"\n'
        'fallback = "R404A"\nconditions = ["First.", "Second."]\n'
        'revisions = [["A", "2026-12-01", "first issue", "P"], {rev = "B", date = 2026-12-05, what = "w", by = "C"}]\n'
    ).report

    assert (report.client, report.site, report.system_id, report.company) == ("A client", "A site", "P1", "A company")
    assert (report.prepared, report.checked, report.approved) == ("P", "C", "A")
    assert report.decide_by == datetime.date(2027, 1, 31)
    assert (report.recommended, report.fallback) == ("R448A", "R404A")
    assert report.conditions == ("First.", "Second.")
    assert report.revisions == (
        Revision("A", datetime.date(2026, 12, 1), "first issue", "P"),
        Revision("B", datetime.date(2026, 12, 5), "w", "C"),
    )
    assert (report.logo.media_type, report.logo.content) == ("image/svg+xml", SVG)


def test_nothing_of_it_is_needed(case):
    """Without the table there is none; an empty one assumes nothing."""
    assert case(START.removesuffix("[report]\n")).report is None
    read = case(START)
    assert read.report.revisions == ()
    assert not [default for default in read.defaults if default.key.startswith("report.")]


FAULTS = {
    "a refrigerant not compared": ('recommended = "R290"', "report.recommended", "R-290 is not compared here"),
    "no refrigerant": ('recommended = "R4040"', "report.recommended", "not in the catalogue"),
    "twice the same": ('recommended = "R448A"\nfallback = "R448A"', "report.fallback", "is what is recommended"),
    "no text": ("client = 7", "report.client", "a text is needed"),
    "hidden characters": ('client = "a\\u202eb"', "report.client", "hidden character"),
    "no day": ('decide_by = "31.1.2027"', "report.decide_by", "is no date"),
    "no list": ('conditions = "One."', "report.conditions", "a list is needed"),
    "too many": (f"conditions = {['a'] * 13}", "report.conditions", "the list has 13 items"),
    "half a revision": ('revisions = [["A", "2026-12-01"]]', "report.revisions[1]", "a list of 2 stands where"),
    "a revision without its day": (
        'revisions = [{rev = "A", what = "w", by = "b"}]', "report.revisions[1]", "has the keys rev, date, what and by",
    ),
    "a revision on no day": ('revisions = [["A", "soon", "w", "b"]]', "report.revisions[1]", "date: "),
    "an unknown key": ('phone = "1"', "report.phone", 'there is no key "phone" in [report]'),
    "a missing logo": ('logo = "no.png"', "report.logo", 'there is no file "no.png"'),
    "a folder for a logo": ('logo = "."', "report.logo", "is not an ordinary file"),
    "an absolute path": ('logo = "/etc/hostname"', "report.logo", "leads out of the folder"),
    "a path that climbs": ('logo = "a/../../b.png"', "report.logo", "leads out of the folder"),
    "an empty path": ('logo = ""', "report.logo", "is no path"),
    "a number for a logo": ("logo = 3", "report.logo", "a path is needed"),
    "a text for a logo": ('logo = "plant.toml"', "report.logo", "neither PNG nor JPEG nor"),
}  # fmt: skip


@pytest.mark.parametrize(("lines", "key", "words"), FAULTS.values(), ids=FAULTS)
def test_a_fault_is_told_with_its_line(lines, key, words, complaints):
    """The complaint stands at the line of the key and says what is wrong."""
    (line, found, text), *others = complaints(START + lines + "\n")

    assert (line, found) == (LINE + lines.count("\n"), key)
    assert words in text
    assert others == []


PICTURES = {
    "png": (png(), "image/png"),
    "jpeg": (jpeg(), "image/jpeg"),
    "svg": (SVG, "image/svg+xml"),
    "svg with a head": (b'\xef\xbb\xbf<?xml version="1.0" encoding="UTF-8"?>\n<!-- a -->' + SVG, "image/svg+xml"),
    # Its script cannot run: it is shown as a picture only.
    "svg with a script": (SVG.replace(b"<path", b"<script>alert(1)</script><path"), "image/svg+xml"),
}


@pytest.mark.parametrize(("content", "media_type"), PICTURES.values(), ids=PICTURES)
def test_the_kind_of_a_picture_is_found_from_its_bytes(content, media_type, tmp_path):
    """Whatever its name says."""
    (tmp_path / "logo.dat").write_bytes(content)

    logo = logo_at(tmp_path, "logo.dat")

    assert (logo.path, logo.media_type, logo.content) == ("logo.dat", media_type, content)


NO_PICTURES = {
    "empty": b"",
    "html": b"<html><body>logo</body></html>",
    "gif": b"GIF89a\x01\x00\x01\x00",
    "cut png": png()[:-9],
    "png without pixels": b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", bytes(13)) + chunk(b"IEND", b""),
    "damaged png": png().replace(b"IDAT", b"IDAX"),
    "huge png": png(100_000, 100_000),
    "flat png": png(0, 5),
    "png that claims a long chunk": b"\x89PNG\r\n\x1a\n\xff\xff\xff\xffIHDR",
    "cut jpeg": jpeg()[:8],
    "huge jpeg": jpeg(65_000, 65_000),
    "jpeg that runs in circles": b"\xff\xd8\xff\xe0\x00\x00" * 9,
    "svg with entities": b'<!DOCTYPE svg [<!ENTITY a "b">]>' + SVG,
    "svg cut": SVG[:-4],
    "svg in two bytes a letter": SVG.decode().encode("utf-16"),
    "svg without its name space": b"<svg/>",
    "too large": SVG + b" " * LARGEST_LOGO_BYTES,
}


@pytest.mark.parametrize("content", NO_PICTURES.values(), ids=NO_PICTURES)
def test_what_cannot_be_shown_is_refused(content, tmp_path):
    """The complaint names the file."""
    (tmp_path / "logo").write_bytes(content)

    with pytest.raises(QuantityError, match='"logo" is'):
        logo_at(tmp_path, "logo")


@given(content=st.binary(max_size=80), start=st.sampled_from([b"", b"\x89PNG\r\n\x1a\n", b"\xff\xd8\xff", b"<svg"]))
def test_no_bytes_end_in_anything_but_a_picture_or_a_complaint(content, start, tmp_path_factory):
    """A picture or our complaint, whatever the bytes."""
    folder = tmp_path_factory.getbasetemp()
    (folder / "any-logo").write_bytes(start + content)
    complaint, logo = "", None
    try:
        logo = logo_at(folder, "any-logo")
    except QuantityError as error:
        complaint = str(error)

    assert logo.content == start + content if logo else '"any-logo"' in complaint


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="needs named pipes")
def test_a_pipe_in_place_of_a_logo_does_not_wait(tmp_path):
    """Only ordinary files are opened."""
    os.mkfifo(tmp_path / "logo")

    with pytest.raises(QuantityError, match="not an ordinary file"):
        logo_at(tmp_path, "logo")
