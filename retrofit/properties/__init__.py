"""How a refrigerant behaves: the only room that calls the property library.

`fluid(name)` gives a refrigerant's states on arrays, from tables on disk if they are there, else built and
checked first. `grade(fluid, refrigerant)` says how far its model can be trusted.
"""

from __future__ import annotations

import warnings
from collections.abc import Callable
from pathlib import Path

from retrofit.errors import StoreWarning
from retrofit.properties.components import mixture_of
from retrofit.properties.fluid import Fluid, State
from retrofit.properties.grade import Grade, grade
from retrofit.properties.store import read_fluid, store_folder, store_path, write_fluid

__all__ = ["Fluid", "Grade", "State", "fluid", "grade"]


NOT_KEPT = (
    "the property tables cannot be kept in {folder}, so they are built again each time; name a folder that can be "
    "written in RETROFIT_STORE"
)
_loaded: dict[Path, Fluid] = {}


def fluid(designation: str, on_build: Callable[[str], None] | None = None) -> Fluid:
    """Return a refrigerant's behaviour, from the store if it is there.

    Args:
        designation: Catalogue designation.
        on_build: Called with the designation before tables are built, which takes a second or so.
    Returns: The fluid.
    Raises: UnknownRefrigerantError, NoModelError, ModelFaultError.
    """
    mixture, folder = mixture_of(designation), store_folder()
    place = store_path(mixture, folder)
    if place not in _loaded:
        found = read_fluid(mixture, folder)
        if found is None:
            if on_build is not None:
                on_build(mixture.designation)
            from retrofit.properties.build import build_fluid

            found = build_fluid(mixture)
            if not write_fluid(mixture, found, folder):
                warnings.warn(StoreWarning(NOT_KEPT.format(folder=folder)), stacklevel=2)
        _loaded[place] = found
    return _loaded[place]
