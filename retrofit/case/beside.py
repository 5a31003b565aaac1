"""The weather of a case's year: a file beside the case, or what the case itself says."""

from __future__ import annotations

import os
from dataclasses import replace
from pathlib import Path, PureWindowsPath
from typing import TYPE_CHECKING

from retrofit.case.hourly import weather_of_file
from retrofit.case.positions import KeyPath
from retrofit.case.written import Written, path_of
from retrofit.case.year import Year
from retrofit.errors import CaseFileError, Problem, QuantityError
from retrofit.units import quoted, shown

if TYPE_CHECKING:
    from retrofit.case.weather import Weather

LONGEST_NAME = 4096  # characters
COLUMNS = {"wet bulb": ("wet_bulb", "T_wet_bulb_K"), "water": ("water", "T_water_K")}


def weather_of(year: Year | None) -> Weather | None:
    """Return the weather of a year's bins or climate; None if it has neither.

    Args:
        year: The year of a case.
    """
    if year is None or (year.bins is None and year.climate is None):
        return None
    from retrofit.case.weather import weather_of_bins, weather_of_climate  # needs numpy, which takes a while to load

    return weather_of_climate(year.climate) if year.climate is not None else weather_of_bins(year.bins or ())


class Outdoors:
    """The file of hours that a case names, read; and what is wrong with it.

    Attributes:
        weather: What the file gives; None if the case names none, or it cannot be used.
        complaints: About keys of the case: path and text. [-]
        problems: Of the file itself, with its name.
    """

    def __init__(self, written: Written, case_path: str) -> None:
        self.weather: Weather | None = None
        self.problems: list[Problem] = []
        self.complaints: list[tuple[KeyPath, str]] = []
        if written.value("year.weather"):
            self._read(written.value("year.weather"), case_path)
        self.complaints += self._columns(written)

    def _read(self, file: str, case_path: str) -> None:
        key = path_of("year.weather")
        try:
            path = file_beside(case_path, file)
            # Where the case stands is no part of what it says.
            self.weather = replace(weather_of_file(path, shown(path, LONGEST_NAME)), source=shown(file, LONGEST_NAME))
        except QuantityError as error:
            self.complaints.append((key, str(error)))
        except CaseFileError as error:
            # A file that cannot be read at all is a fault of the key that names it.
            self.complaints += [(key, f"{quoted(file)}: {found.text}") for found in error.problems if not found.line]
            self.problems += [replace(found, path=error.path) for found in error.problems if found.line]

    def _columns(self, written: Written) -> list[tuple[KeyPath, str]]:
        """Return complaints about what an exchanger follows and no column tells."""
        found = []
        for key in ("year.condenser_follows", "year.evaporator_follows"):
            follows = written.value(key)
            column, attribute = COLUMNS.get(follows, ("", ""))
            if not column:
                continue
            if not written.has("year.weather"):
                what = f"bins and a climate have no {follows}; give a weather file with the column {column}"
                found.append((path_of(key), f'{what}, or write "dry bulb" and an approach'))
            elif self.weather and getattr(self.weather, attribute) is None:
                found.append((path_of(key), f"the weather file has no column {column}; add it, with its unit"))
        return found


def file_beside(case_path: str, file: str) -> str:
    """Return the path of a file that a case names.

    Args:
        case_path: The case file. [-]
        file: The name in it: beside the case, or in a folder there. [-]
    Returns: The path, from where the case's own path starts. [-]
    Raises: QuantityError if it leads out of the case's folder.
    """
    allowed = "name a file beside the case, as in coast.csv"
    if "\\" in file:
        raise QuantityError(f"{quoted(file)} has a backslash; {allowed}, with / after a folder")
    if PureWindowsPath(file).anchor or ".." in file.split("/"):
        raise QuantityError(f"{quoted(file)} leads out of the folder of the case; {allowed}")
    folder = Path(case_path).parent
    try:
        is_inside = (folder / file).resolve().is_relative_to(folder.resolve())
    except (OSError, ValueError, RuntimeError):
        is_inside = True  # reading it says what is wrong
    if not is_inside:
        raise QuantityError(f"{quoted(file)} is a link out of the folder of the case; {allowed}")
    return os.path.join(os.path.dirname(case_path), file)
