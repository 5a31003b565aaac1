"""Quantities inside sentences: written once where something is found, told in the reader's units where it is shown.

A sentence carries each of its quantities as a token: the SI text as it reads, and behind it, in characters of the
private use area, the kind, the SI value and the format. `told` turns every token into the reader's text. A token
is no text for a reader: whatever leaves the project goes through `told` first.
"""

from __future__ import annotations

import dataclasses
import math
import re
from collections.abc import Mapping
from typing import TypeVar

from retrofit.units.showing import SI, UnitSystem, format_number

_OPEN, _BEHIND, _CLOSE = "\ue000", "\ue001", "\ue002"
_SHIFT = 0xE100  # where the ASCII of the hidden part lies
_TOKEN = re.compile(f"{_OPEN}([^{_OPEN}-{_CLOSE}]*){_BEHIND}([\ue100-\ue17f]*){_CLOSE}")
_SIGNIFICANT = 4  # digits of a figure that is shown as short as it goes

Held = TypeVar("Held")


def quantity(kind: str, value: float, spec: str = "") -> str:
    """Return a quantity for a sentence: number and unit.

    Args:
        kind: A key of the displays of a unit system. [-]
        value: The value. [SI]
        spec: Format of the number in SI, such as ".1f", ".4g" or "g"; other units get as fine a step. Empty for the
            decimals that tables show. [-]
    Returns: A token, for `told`. [-]
    """
    return _token(_with_unit(kind, value, spec, SI), "quantity", kind, repr(float(value)), spec)


def figure(kind: str, value: float, spec: str) -> str:
    """Return the number of a quantity alone, where the unit follows once for several; arguments as `quantity`."""
    return _token(_number(kind, value, spec, SI), "figure", kind, repr(float(value)), spec)


def unit_word(kind: str, word: str = "") -> str:
    """Return the unit of a kind for a sentence.

    Args:
        kind: A key of the displays of a unit system. [-]
        word: How it is written in SI, if not by its label. [-]
    Returns: A token, for `told`. [-]
    """
    return _token(word or SI.label(kind), "unit", kind)


def told(text: str, units: UnitSystem) -> str:
    """Return a text in which every quantity is in the reader's units; a second time it changes nothing.

    Args:
        text: With or without tokens. [-]
        units: The reader's units; with two of them the second stands in brackets. [-]
    """
    return _TOKEN.sub(lambda found: _told(found, units), text) if _OPEN in text else text


def all_told(held: Held, units: UnitSystem) -> Held:
    """Return a record, or data of lists and mappings, in which every text is told.

    Args:
        held: Frozen dataclasses, tuples, lists and mappings; what is none of them stays as it is.
        units: The reader's units.
    """
    if isinstance(held, str):
        return told(held, units)  # type: ignore[return-value]
    if isinstance(held, Mapping):
        return {key: all_told(value, units) for key, value in held.items()}  # type: ignore[return-value]
    if type(held) in (tuple, list):
        return type(held)(all_told(item, units) for item in held)  # type: ignore[call-arg, attr-defined]
    if dataclasses.is_dataclass(held) and not isinstance(held, type):
        values = {item.name: getattr(held, item.name) for item in dataclasses.fields(held) if item.init}
        return dataclasses.replace(held, **{name: all_told(value, units) for name, value in values.items()})
    return held


def _token(shown: str, *hidden: str) -> str:
    payload = "".join(chr(_SHIFT + ord(c)) for c in "|".join(hidden))
    return f"{_OPEN}{shown}{_BEHIND}{payload}{_CLOSE}"


def _told(found: re.Match[str], units: UnitSystem) -> str:
    hidden = "".join(chr(ord(c) - _SHIFT) for c in found[2]).split("|")
    try:
        texts = dict.fromkeys(found[1] if system is SI else _in(system, *hidden) for system in units.systems)
    except (KeyError, OverflowError, TypeError, ValueError):
        return found[1]  # no token of ours: a user's text may hold these characters
    first, *second = texts
    is_other = second and second[0].replace("\N{NO-BREAK SPACE}", " ") != first.replace("\N{NO-BREAK SPACE}", " ")
    return f"{first} ({second[0]})" if is_other else first


def _in(system: UnitSystem, form: str, kind: str, value: str = "", spec: str = "") -> str:
    if form == "unit":
        return system.label(kind)
    return (_with_unit if form == "quantity" else _number)(kind, float(value), spec, system)


def _with_unit(kind: str, value: float, spec: str, system: UnitSystem) -> str:
    if not spec:
        return system.with_unit(kind, value)
    blank = " " if system is SI else "\N{NO-BREAK SPACE}"
    return f"{_number(kind, value, spec, system)}{blank}{system.label(kind)}"


def _number(kind: str, value: float, spec: str, system: UnitSystem) -> str:
    number = float(system.number(kind, value))
    if system is SI:
        return format(number, spec)
    if spec.endswith("g"):
        return _short(number, int(spec[1:-1] or _SIGNIFICANT))
    return format_number(number, _decimals(kind, value, int(spec[1:-1]), system))


def _short(number: float, significant: int) -> str:
    """Return a number with so many digits that count, without zeros behind them."""
    places = significant - 1 - math.floor(math.log10(abs(number))) if number else 0
    text = format_number(round(number, places), max(places, 0))
    return text.rstrip("0").rstrip(".") if places > 0 else text


def _decimals(kind: str, value: float, in_SI: int, system: UnitSystem) -> int:
    """Return the decimals with which a step of the number is about as fine as in SI, and no finer than in tables."""
    display = system.displays[kind]
    coarser = round(math.log10(display.unit.factor / SI.displays[kind].unit.factor))
    places = max(in_SI + coarser, 0)
    return min(places, display.decimals_for([value])) if display.significant else places
