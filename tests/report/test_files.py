"""Writing files whole or not at all."""

import os
import stat

import pytest

from retrofit.errors import ReportError
from retrofit.report.files import write_whole


def test_a_file_is_written_in_utf_8_with_plain_line_ends(tmp_path):
    """What is written is exactly the text, and nothing else is left in the folder."""
    path = tmp_path / "report.html"
    write_whole(path, "−8 °C\n")

    assert path.read_bytes() == "−8 °C\n".encode()
    assert os.listdir(tmp_path) == ["report.html"]


def test_a_file_that_is_there_is_replaced(tmp_path):
    """Longer by shorter, without a rest of the old one."""
    path = tmp_path / "report.html"
    path.write_text("a much longer text than the new one")
    write_whole(path, "new")

    assert path.read_text() == "new"


def test_the_file_gets_the_mode_of_any_new_file(tmp_path):
    """Others may read it, as the mask of the process says; a temporary file's own mode does not stick."""
    before = os.umask(0o027)
    try:
        write_whole(tmp_path / "a", "text")
    finally:
        os.umask(before)

    assert stat.S_IMODE((tmp_path / "a").stat().st_mode) == 0o640
    assert os.umask(before) == before


def test_a_link_stays_a_link(tmp_path):
    """The file it points to is replaced."""
    target, link = tmp_path / "target", tmp_path / "link"
    target.write_text("old")
    link.symlink_to(target)
    write_whole(link, "new")

    assert link.is_symlink()
    assert target.read_text() == "new"


@pytest.mark.parametrize(
    ("name", "why"),
    [
        ("missing/report.html", "cannot be written: No such file or directory; choose another folder"),
        (".", "is a folder; name a file"),
        ("a-file/report.html", "cannot be written: Not a directory"),
        ("x" * 300, "cannot be written: File name too long"),
        ("pipe", "is no ordinary file"),
    ],
)
def test_a_path_that_cannot_be_written_is_refused_and_nothing_is_left(tmp_path, name, why):
    """The message names the path and what to do; no half file stays behind."""
    (tmp_path / "a-file").write_text("kept")
    os.mkfifo(tmp_path / "pipe")
    before = sorted(os.listdir(tmp_path))

    with pytest.raises(ReportError, match=why):
        write_whole(tmp_path / name, "text")
    assert sorted(os.listdir(tmp_path)) == before
    assert (tmp_path / "a-file").read_text() == "kept"


def test_a_disk_that_fills_up_keeps_the_old_file(tmp_path, monkeypatch):
    """A failure while renaming leaves what was there, and no temporary file."""
    path = tmp_path / "report.html"
    path.write_text("old")

    def full(source, target):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("os.replace", full)

    with pytest.raises(ReportError, match="No space left on device"):
        write_whole(path, "new")
    assert os.listdir(tmp_path) == ["report.html"]
    assert path.read_text() == "old"
