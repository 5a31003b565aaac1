"""Tables on disk: one file a refrigerant, written whole or not at all, and read only if it proves itself.

A file is a first line that names the format, a digest of everything after it, and the arrays. Its name
carries a key of everything the tables depend on: the composition, the version of the property library and
the version of this format. The digest is keyed with it too. So another version never meets a file, and one
that was cut short, changed, renamed or made by something else does not match its digest and is built again.
"""

from __future__ import annotations

import contextlib
import hashlib
import io
import json
import os
import re
import stat
import tempfile
import time
from functools import cache
from importlib.metadata import version
from pathlib import Path

import numpy as np

from retrofit.properties.components import Mixture
from retrofit.properties.fluid import Fluid
from retrofit.properties.table import Tables

FORMAT = 5  # raise it when anything about the tables or how they are made changes
MAGIC = b"retrofit tables\n"
FOLDER_VARIABLE = "RETROFIT_STORE"
STALE_SECONDS = 3600.0


def store_folder() -> Path:
    """Return the folder of the store: $RETROFIT_STORE, else the user's cache folder."""
    given = os.environ.get(FOLDER_VARIABLE)
    if given:
        return Path(given)
    from platformdirs import user_cache_path

    return Path(user_cache_path("retrofit", appauthor=False)) / "tables"


@cache
def library_version() -> str:
    """Return the version of the property library, without loading it."""
    return version("CoolProp")


def store_key(mixture: Mixture) -> str:
    """Return a key of everything the tables of a mixture depend on."""
    parts = [FORMAT, library_version(), mixture.library_names, mixture.mass_fractions]
    return hashlib.blake2b(json.dumps(parts).encode(), digest_size=10).hexdigest()


def store_path(mixture: Mixture, folder: Path) -> Path:
    """Return where the tables of a mixture are kept."""
    readable = re.sub(r"[^A-Za-z0-9]", "-", mixture.designation)
    return folder / f"{readable}.{store_key(mixture)}.tables"


def read_fluid(mixture: Mixture, folder: Path) -> Fluid | None:
    """Return the stored fluid, or None if there is no file or it does not prove itself.

    Args:
        mixture: What the fluid is made of.
        folder: Folder of the store.
    """
    path = store_path(mixture, folder)
    try:
        if not stat.S_ISREG(os.stat(path).st_mode):
            return None  # a pipe would wait for ever; writing puts a file in its place
        content = path.read_bytes()
    except OSError:
        return None
    magic, digest, payload = (
        content[: len(MAGIC)],
        content[len(MAGIC) : len(MAGIC) + 32],
        content[len(MAGIC) + 32 :],
    )
    if magic != MAGIC or digest != _digest(mixture, payload):
        return None
    with np.load(io.BytesIO(payload), allow_pickle=False) as arrays:
        found = {name: arrays[name] for name in arrays.files}
    pairs = tuple(tuple(pair) for pair in found.pop("estimated_pairs").tolist())
    gaps = tuple(found.pop("viscosity_gaps").tolist())
    return Fluid(mixture.designation, Tables.from_arrays(found), pairs, gaps)


def write_fluid(mixture: Mixture, fluid: Fluid, folder: Path) -> bool:
    """Store a fluid; return whether it could be stored. A store that cannot be written costs time, not results.

    Args:
        mixture: What the fluid is made of.
        fluid: The fluid, built and checked.
        folder: Folder of the store, made if it does not exist.
    """
    buffer = io.BytesIO()
    pairs = np.array(fluid.estimated_pairs, dtype="U16").reshape(-1, 2)
    gaps = np.array(fluid.viscosity_gaps, dtype=str)
    np.savez(buffer, estimated_pairs=pairs, viscosity_gaps=gaps, **fluid.tables.arrays())  # type: ignore[arg-type]
    payload = buffer.getvalue()
    try:
        folder.mkdir(parents=True, exist_ok=True)
        _sweep(folder)
        _write_whole(store_path(mixture, folder), MAGIC + _digest(mixture, payload) + payload)
    except OSError:
        return False
    return True


def _digest(mixture: Mixture, payload: bytes) -> bytes:
    return hashlib.blake2b(payload, digest_size=32, key=store_key(mixture).encode()).digest()


def _write_whole(path: Path, content: bytes) -> None:
    """Write under a temporary name in the same folder, then rename: readers see the old file or the new one."""
    handle, name = tempfile.mkstemp(prefix=".half-", dir=path.parent)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(content)
        os.replace(name, path)
    except BaseException:
        with contextlib.suppress(OSError):
            os.unlink(name)
        raise


def _sweep(folder: Path) -> None:
    """Remove what writers killed half way have left, once it is old enough not to be in use."""
    for path in folder.glob(".half-*"):
        with contextlib.suppress(OSError):
            if time.time() - path.stat().st_mtime > STALE_SECONDS:
                path.unlink()
