"""The keys of [report]: texts, a logo that a report can carry, revisions, and what is recommended."""

import base64
import datetime
import io
import os
import struct
import time
import zlib

import pytest
from hypothesis import given
from hypothesis import strategies as st
from PIL import Image

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


def png(width=2, height=2, pixels=b"\x00" * 6):
    """Return a grey picture that claims a size, with its rows packed (PNG, third edition, 7.2 and 11.2.1)."""
    head = chunk(b"IHDR", struct.pack(">II", width, height) + b"\x08\x00\x00\x00\x00")
    return b"\x89PNG\r\n\x1a\n" + head + chunk(b"IDAT", zlib.compress(pixels)) + chunk(b"IEND", b"")


def drawn(kind, width=3, height=2):
    """Return a picture as a library of others writes it."""
    buffer = io.BytesIO()
    Image.new("RGB", (width, height), (0, 90, 120)).save(buffer, kind)
    return buffer.getvalue()


def svg(inside, **attributes):
    """Return a drawing with something in it."""
    more = "".join(f' {name}="{value}"' for name, value in attributes.items())
    return f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 8 8"{more}>{inside}</svg>'.encode()


def nested(how, levels=10, times=10):
    """Return a drawing of some kilobytes whose parts repeat each other: ten of ten of ten, ten levels up."""
    parts = "".join(how(level, times) for level in range(1, levels))
    return svg(f'<defs><g id="p0"><rect width="1" height="1"/></g>{parts}</defs><use href="#p{levels - 1}"/>')


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
    "png of a library": (drawn("PNG"), "image/png"),
    "jpeg": (drawn("JPEG"), "image/jpeg"),
    "svg that uses a part": (svg('<g id="a"><path d="M0 0h1"/></g><use href="#a" x="2"/>'), "image/svg+xml"),
    "svg with colours for every part": (
        svg(
            '<style>.a{fill:url(#c)}</style><linearGradient id="c"><stop/><stop/></linearGradient>'
            + '<path class="a" d="M0 0h1"/>' * 900
        ),
        "image/svg+xml",
    ),
    "svg with a picture": (
        svg(f'<image href="data:image/png;base64,{base64.b64encode(drawn("PNG")).decode()}"/>'),
        "image/svg+xml",
    ),
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
    "png with noise for pixels": png().replace(zlib.compress(b"\x00" * 6), b"\x07" * len(zlib.compress(b"\x00" * 6))),
    "png cut in its pixels": drawn("PNG", 300, 300)[:60],
    "png that unpacks to gigabytes": png(4000, 4001, b"\0" * 1000),
    "png of noise after its head": drawn("PNG")[:60] + b"\7" * 40,
    "cut jpeg": drawn("JPEG", 40, 40)[:-40],
    "jpeg without its picture": drawn("JPEG", 40, 40)[:200],
    "huge jpeg": drawn("JPEG", 4001, 1),
    "jpeg that runs in circles": b"\xff\xd8\xff\xe0\x00\x00" * 9,
    "svg with entities": b'<!DOCTYPE svg [<!ENTITY a "b">]>' + SVG,
    "svg cut": SVG[:-4],
    "svg in two bytes a letter": SVG.decode().encode("utf-16"),
    "svg without its name space": b"<svg/>",
    "svg with a doctype": b"<!doctype svg>" + SVG,
    "svg of another name space": b'<svg xmlns="urn:x"/>',
    "svg that repeats by use": nested(
        lambda level, times: f'<g id="p{level}">{f"""<use href="#p{level - 1}"/>""" * times}</g>'
    ),
    "svg that repeats by links": nested(
        lambda level, times: (
            f'<g id="p{level}">'
            + f"""<use xmlns:l="http://www.w3.org/1999/xlink" l:href="#p{level - 1}"/>""" * times
            + "</g>"
        )
    ),
    "svg that repeats by patterns": nested(
        lambda level, times: f'<pattern id="p{level}">{f"""<rect fill="url(#p{level - 1})"/>""" * times}</pattern>'
    ),
    "svg that repeats by masks": nested(
        lambda level, times: (
            f'<mask id="p{level}"><g style="mask:url(\'#p{level - 1}\')">{"<rect/>" * times}</g></mask>'
        )
    ),
    "svg that repeats by its style sheet": svg(
        f'<style>rect{{fill:url(#p)}}</style><pattern id="p">{"<circle/>" * 200}</pattern>{"<rect/>" * 200}'
    ),
    "svg that repeats itself": svg('<g id="a"><use href="#a"/></g>'),
    "svg that repeats itself in turns": svg('<g id="a"><use href="#b"/></g><g id="b"><use href="#a"/></g>'),
    "svg with marks at every point": svg('<marker id="m"><rect/></marker><path marker-mid="url(#m)" d="M0 0"/>'),
    "svg with too many parts": svg("<rect/>" * 6000),
    "svg with parts in parts": svg("<g>" * 200 + "</g>" * 200),
    "svg that fetches": svg('<image href="http://127.0.0.1/x.png"/>'),
    "svg that fetches a file": svg('<use href="other.svg#a"/>'),
    "svg with a drawing in it": svg('<image href="data:image/svg+xml;base64,AAAA"/>'),
    "svg with a broken picture": svg('<image href="data:image/png;base64,AAAA"/>'),
    "svg with half a picture": svg('<image href="data:image/png;base64,A"/>'),
    "svg with a huge picture": svg(
        f'<image href="data:image/png;base64,{base64.b64encode(png(100_000, 100_000)).decode()}"/>'
    ),
    "too large": SVG + b" " * LARGEST_LOGO_BYTES,
}


@pytest.mark.parametrize("content", NO_PICTURES.values(), ids=NO_PICTURES)
def test_what_cannot_be_shown_is_refused(content, tmp_path):
    """The complaint names the file, and comes in a moment."""
    (tmp_path / "logo").write_bytes(content)
    begun = time.perf_counter()

    with pytest.raises(QuantityError, match='"logo" is'):
        logo_at(tmp_path, "logo")
    assert time.perf_counter() - begun < 20.0  # drawing one of them takes over a minute


def test_a_link_out_of_the_folder_is_no_logo(tmp_path):
    """Neither a link nor a folder that is one; a link within the folder is."""
    folder = tmp_path / "case"
    folder.mkdir()
    (tmp_path / "secret.svg").write_bytes(SVG)
    (folder / "mine.svg").write_bytes(SVG)
    (folder / "out.svg").symlink_to(tmp_path / "secret.svg")
    (folder / "up").symlink_to(tmp_path)
    (folder / "in.svg").symlink_to(folder / "mine.svg")

    for name in ("out.svg", "up/secret.svg"):
        with pytest.raises(QuantityError, match="is a link out of the folder"):
            logo_at(folder, name)
    assert logo_at(folder, "in.svg").content == SVG


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
