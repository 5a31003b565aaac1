"""A report is written whole or not at all."""

import os

import pytest

from retrofit.errors import ReportError
from retrofit.report import write_report


def test_a_report_is_written_and_replaces_an_older_one(tmp_path):
    """The file holds the text in UTF-8, and nothing else is left in the folder."""
    path = tmp_path / "report.html"
    write_report(path, "<p>old</p>")
    write_report(str(path), "<p>−8 °C</p>")

    assert path.read_text(encoding="utf-8") == "<p>−8 °C</p>"
    assert os.listdir(tmp_path) == ["report.html"]


def test_a_folder_is_refused(tmp_path):
    """A path that is a folder is named in the error."""
    with pytest.raises(ReportError, match="is a folder"):
        write_report(tmp_path, "<p></p>")


def test_a_missing_folder_is_refused(tmp_path):
    """A path in a folder that is not there is an error of ours."""
    with pytest.raises(ReportError, match="cannot be written"):
        write_report(tmp_path / "nowhere" / "report.html", "<p></p>")


def test_a_failed_write_leaves_the_old_report(tmp_path, monkeypatch):
    """If the last step fails, the old file is as it was and no half of a new one is left."""
    path = tmp_path / "report.html"
    write_report(path, "<p>old</p>")

    def fail(source, target):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "replace", fail)
    with pytest.raises(ReportError, match="No space left"):
        write_report(path, "<p>new</p>")

    assert path.read_text(encoding="utf-8") == "<p>old</p>"
    assert os.listdir(tmp_path) == ["report.html"]
