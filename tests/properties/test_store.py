"""The store of tables: whatever happens to a file or a folder, the results stay the same."""

import os
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
import pytest

from retrofit import properties
from retrofit.errors import StoreWarning
from retrofit.properties import fluid, store
from retrofit.properties.components import mixture_of

TOP = Path(__file__).parents[2]
NAME = "R134a"
BLEND = "R410A"


def _arrays(f):
    return f.tables.arrays()


def _assert_same(one, other):
    left, right = _arrays(one), _arrays(other)

    assert left.keys() == right.keys()
    for key in left:
        np.testing.assert_array_equal(left[key], right[key])
    assert one.estimated_pairs == other.estimated_pairs


@pytest.fixture
def folder(tmp_path, monkeypatch):
    """A store of this test's own, with nothing loaded from elsewhere."""
    monkeypatch.setenv("RETROFIT_STORE", str(tmp_path / "store"))
    monkeypatch.setattr(properties, "_loaded", {})
    return tmp_path / "store"


@pytest.fixture
def built(folder):
    """The store's one file, written by a build, and the fluid it came from."""
    found = fluid(NAME)
    (path,) = folder.glob("*.tables")
    properties._loaded.clear()
    return path, found


def _builds_again():
    """Return the fluid anew, and the names of what had to be built."""
    told = []
    properties._loaded.clear()
    return fluid(NAME, told.append), told


def test_second_time_is_read(built):
    """A stored fluid is read, not built, and holds the very same numbers."""
    again, told = _builds_again()

    assert told == []
    _assert_same(again, built[1])


def test_reading_does_not_load_the_property_library(folder):
    """A process that finds its tables never imports the property library."""
    fluid(BLEND)
    code = f"""
import sys
from retrofit.properties import fluid
f = fluid({BLEND!r})
print(float(f.p_dew(280.0)) > 0.0, any(name.split(".")[0] == "CoolProp" for name in sys.modules))
"""
    run = subprocess.run(
        [sys.executable, "-c", code], env=_environment(folder), capture_output=True, text=True, check=True
    )

    assert run.stdout.split() == ["True", "False"]


def _environment(folder):
    return os.environ | {"RETROFIT_STORE": str(folder), "PYTHONPATH": str(TOP)}


def _truncated(path):
    path.write_bytes(path.read_bytes()[: path.stat().st_size // 2])


def _cut_in_the_digest(path):
    path.write_bytes(path.read_bytes()[:30])


def _foreign(path):
    path.write_bytes(b"PK\x03\x04 something else altogether" * 50)


def _empty(path):
    path.write_bytes(b"")


def _flipped(path):
    content = bytearray(path.read_bytes())
    content[len(content) // 2] ^= 0x10
    path.write_bytes(bytes(content))


def _flipped_digest(path):
    content = bytearray(path.read_bytes())
    content[len(store.MAGIC) + 3] ^= 0x01
    path.write_bytes(bytes(content))


def _appended(path):
    path.write_bytes(path.read_bytes() + b"\0")


def _other_format(path):
    path.write_bytes(b"Retrofit tables\n" + path.read_bytes()[len(store.MAGIC) :])


DAMAGES = [_truncated, _cut_in_the_digest, _foreign, _empty, _flipped, _flipped_digest, _appended, _other_format]


@pytest.mark.parametrize("damage", DAMAGES, ids=lambda damage: damage.__name__.strip("_"))
def test_damaged_file_is_built_again(built, damage):
    """A file that does not prove itself is built again with the same result, and replaced."""
    path, found = built
    whole = path.read_bytes()
    damage(path)
    again, told = _builds_again()

    assert told == [NAME]
    _assert_same(again, found)
    assert store.read_fluid(mixture_of(NAME), path.parent) is not None
    assert path.stat().st_size == len(whole)


@pytest.mark.parametrize("where", [0, 5, 16, 20, 48, 49, 200, -1, -100])
def test_any_flipped_byte_is_seen(built, where):
    """One changed bit anywhere in the file is seen."""
    path, _ = built
    content = bytearray(path.read_bytes())
    content[where] ^= 0x01
    path.write_bytes(bytes(content))

    assert store.read_fluid(mixture_of(NAME), path.parent) is None


def test_file_of_another_refrigerant(built):
    """A table renamed to another refrigerant's file does not become that refrigerant."""
    path, _ = built
    other = store.store_path(mixture_of("R32"), path.parent)
    other.write_bytes(path.read_bytes())
    found = fluid("R32")

    assert found.T_critical_K == pytest.approx(351.255, abs=0.01)  # Tillner-Roth and Yokozeki 1997


def test_directory_in_place_of_the_file(built):
    """A folder where the file should be costs the store, not the result."""
    path, found = built
    path.unlink()
    path.mkdir()
    with pytest.warns(StoreWarning, match="cannot be kept"):
        again, told = _builds_again()

    assert told == [NAME]
    _assert_same(again, found)
    assert path.is_dir()
    assert not list(path.parent.glob(".half-*"))


def test_file_in_place_of_the_folder(folder, tmp_path, monkeypatch):
    """A store that is a file cannot be written: the result is there all the same."""
    (tmp_path / "store").write_text("not a folder")
    with pytest.warns(StoreWarning, match="cannot be kept"):
        found = fluid(NAME)

    assert float(found.p_dew(280.0)) > 0.0
    assert (tmp_path / "store").read_text() == "not a folder"


def test_a_pipe_in_place_of_a_file_does_not_wait(built):
    """Nobody writes to it; a file takes its place."""
    path, found = built
    path.unlink()
    os.mkfifo(path)
    again, told = _builds_again()

    assert told == [NAME]
    _assert_same(again, found)
    assert path.is_file()


def test_folder_that_cannot_be_written(built, monkeypatch):
    """Where no file can be made, nothing is stored and that is said; the numbers are the same."""
    path, found = built
    path.unlink()

    def refuse(*args, **kwargs):
        raise PermissionError("read-only")

    monkeypatch.setattr(store.tempfile, "mkstemp", refuse)
    with pytest.warns(StoreWarning, match="cannot be kept in .*RETROFIT_STORE"):
        again, told = _builds_again()

    assert told == [NAME]
    _assert_same(again, found)
    assert list(path.parent.iterdir()) == []


@pytest.mark.skipif(os.name != "posix" or os.geteuid() == 0, reason="the superuser may write anywhere")
def test_folder_without_permission(built):
    """A folder without permission to write costs time, not results."""
    path, found = built
    path.unlink()
    path.parent.chmod(0o500)
    try:
        with pytest.warns(StoreWarning, match="cannot be kept"):
            again, _ = _builds_again()
    finally:
        path.parent.chmod(0o700)

    _assert_same(again, found)


def test_disk_full_while_writing(built, monkeypatch):
    """A disk that fills up half way leaves neither a half file nor a wrong one."""
    path, found = built
    path.unlink()

    def full(*args):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(store.os, "replace", full)
    with pytest.warns(StoreWarning, match="cannot be kept"):
        again, _ = _builds_again()

    _assert_same(again, found)
    assert list(path.parent.iterdir()) == []


def test_another_version_of_the_property_library_has_another_file(built, monkeypatch):
    """Tables made with one version of the property library are never met by another."""
    path, _ = built
    cached = getattr(store, "library_version", None)
    monkeypatch.setattr(store, "version", lambda name: "7.9.9")
    if cached is not None:
        cached.cache_clear()
    try:
        other = store.store_path(mixture_of(NAME), path.parent)
        found = store.read_fluid(mixture_of(NAME), path.parent)
    finally:
        monkeypatch.undo()
        if cached is not None:
            cached.cache_clear()

    assert other != path
    assert found is None


def test_another_format_has_another_file(built, monkeypatch):
    """Raising the format number leaves older files alone."""
    path, _ = built
    monkeypatch.setattr(store, "FORMAT", store.FORMAT + 1)

    assert store.store_path(mixture_of(NAME), path.parent) != path


def test_two_processes_build_at_once(folder):
    """Two processes that build into one folder at once both succeed, and leave one good file."""
    code = f"""
import hashlib
from retrofit.properties import fluid
tables = fluid({BLEND!r}).tables.arrays()
print(hashlib.blake2b(b"".join(tables[key].tobytes() for key in sorted(tables))).hexdigest())
"""
    command = [sys.executable, "-c", code]
    two = [
        subprocess.Popen(command, env=_environment(folder), stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
        for _ in range(2)
    ]
    outputs = [process.communicate(timeout=120) for process in two]
    (path,) = folder.iterdir()

    assert [process.returncode for process in two] == [0, 0]
    assert outputs[0] == outputs[1]
    assert path.suffix == ".tables"
    assert store.read_fluid(mixture_of(BLEND), folder) is not None


def test_leftovers_are_swept(folder):
    """A half-written file of a killed writer is removed once it is old, and left while it may be in use."""
    folder.mkdir()
    old, young = folder / ".half-old", folder / ".half-young"
    for path in (old, young):
        path.write_bytes(b"half")
    long_ago = time.time() - store.STALE_SECONDS - 60.0
    os.utime(old, (long_ago, long_ago))
    fluid(NAME)

    assert not old.exists()
    assert young.exists()
    assert len(list(folder.glob("*.tables"))) == 1


def test_default_folder(monkeypatch):
    """Without the variable the store is in the user's cache folder."""
    monkeypatch.delenv("RETROFIT_STORE")

    assert store.store_folder().parts[-2:] == ("retrofit", "tables")
