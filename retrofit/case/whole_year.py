"""What the keys of a year and of its options say against one another and against the plant."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from retrofit.case.positions import KeyPath
from retrofit.case.values import designation_of
from retrofit.case.written import Written, path_of
from retrofit.case.year import HOURS_OF_A_YEAR
from retrofit.errors import QuantityError
from retrofit.refrigerants import with_hyphens
from retrofit.units import close_to, listed, quoted

Complaints = Iterator[tuple[KeyPath, str]]

WAYS = ("weather", "bins", "climate")
HOURS_TOLERANCE = 0.5  # of a sum of bins, which are rounded


def problems_of_year(written: Written) -> Complaints:
    """Yield every fault of the table of the year that needs two keys to be seen.

    Args:
        written: The file.
    Returns: Path of a key and the complaint, one after another. [-]
    """
    if not isinstance(written.raw("year"), dict):
        return
    yield from _one_way(written)
    yield from _bins(written)
    yield from _exchangers(written)
    yield from _base_above_duty(written)
    yield from _approach_to_nothing(written)
    if written.value("year.serves") == "heating" and not written.has("year.peak_load"):
        yield (
            path_of("year.serves"),
            "the duty is cooling and says no heat; add peak_load, the largest heat of the year",
        )


def _one_way(written: Written) -> Complaints:
    given = [way for way in WAYS if written.has(f"year.{way}")]
    if not given:
        yield path_of("year"), f"nothing says how warm it is; add one of {listed(WAYS)} to [year]"
    for way in given[1:]:
        yield path_of(f"year.{way}"), f"{listed(given, 'and')} all say how warm it is; keep one of them"


def _bins(written: Written) -> Complaints:
    bins = written.value("year.bins") or []
    raw = written.raw("year.bins")
    times = Counter(found.T_air_K for found in bins if found is not None)
    seen: set[float] = set()
    for index, found in enumerate(bins):
        if found is not None and times[found.T_air_K] > 1 and found.T_air_K in seen:
            yield (*path_of("year.bins"), index), f"{quoted(str(raw[index][0]))} is in the list twice; add up its hours"
        seen |= {found.T_air_K} if found is not None else set()
    if len({found.night_hours is None for found in bins if found is not None}) > 1:
        yield path_of("year.bins"), "some bins tell day and night apart and others do not; write all of them alike"
    hours = sum(found.hours for found in bins if found is not None)
    if bins and None not in bins and abs(hours - HOURS_OF_A_YEAR) > HOURS_TOLERANCE:
        off = abs(hours - HOURS_OF_A_YEAR)
        what = f"{off:g} are {'missing' if hours < HOURS_OF_A_YEAR else 'too many'}; correct the hours"
        yield path_of("year.bins"), f"the bins have {hours:g} hours and a year has {HOURS_OF_A_YEAR}: {what}"


def _exchangers(written: Written) -> Complaints:
    """A year runs the plant as installed, which takes both of its exchangers."""
    absent = [f"[{way}]" for way in ("evaporator", "condenser") if not written.has(f"{way}.inlet")]
    if absent:
        tables = listed(absent, "and")
        yield (
            path_of("year"),
            f"a year needs to know what the exchangers meet at the duty; add {tables} with inlet, outlet and "
            "arrangement, or leave out [year]",
        )


def _base_above_duty(written: Written) -> Complaints:
    """The peak is the duty if it is left out; of a plant that heats the duty is not the load."""
    base_W, duty_W = written.value("year.base_load"), written.value("duty.cooling")
    if written.has("year.peak_load") or written.value_or_default("year.serves") != "cooling":
        return
    if base_W is not None and duty_W is not None and base_W > duty_W:
        base, duty = (quoted(str(written.raw(key))) for key in ("year.base_load", "duty.cooling"))
        yield path_of("year.base_load"), f"{base} is above the peak, duty.cooling {duty}; lower it, or add peak_load"


def _approach_to_nothing(written: Written) -> Complaints:
    for way in ("condenser", "evaporator"):
        key = f"year.{way}_approach"
        if written.value(key) and written.value_or_default(f"year.{way}_follows") == "constant":
            what = f"{way}_follows is constant, and its inlet is that of [{way}]"
            yield path_of(key), f"{what}; leave the approach out, or say what the inlet follows"


def problems_of_options(written: Written) -> Complaints:
    """Yield every option that belongs to no refrigerant of the case, or to one that has an option already.

    Args:
        written: The file.
    Returns: Path of a table and the complaint, one after another. [-]
    """
    options = written.raw("options")
    compared = [written.value("plant.refrigerant"), *(written.value("compare.candidates") or [])]
    known = [name for name in compared if name is not None]
    seen: dict[str, str] = {}
    for name in options if isinstance(options, dict) else ():
        try:
            designation = designation_of(name)
        except QuantityError as error:
            yield ("options", name), str(error)
            continue
        if known and None not in compared and designation not in known:
            what = f"{with_hyphens(designation)} is neither in the plant nor a candidate{close_to(designation, known)}"
            yield ("options", name), f"{what}; add it to compare.candidates, or leave this out"
        elif designation in seen:
            yield (
                ("options", name),
                f"{with_hyphens(designation)} has options twice, here and as {quoted(seen[designation])}; keep one",
            )
        seen.setdefault(designation, name)
