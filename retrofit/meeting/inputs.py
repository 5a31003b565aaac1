"""The inputs a meeting offers: keys of the case that mean something for its plant, and steps for each."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal, InvalidOperation
from typing import TYPE_CHECKING, Any

from retrofit.case import Case, meaning, quantity
from retrofit.case.model import FIELDS
from retrofit.meeting.desk import Source
from retrofit.meeting.refused import RefusedError
from retrofit.meeting.state import State
from retrofit.units import MINUS, THOUSANDS_MARK, UnitSystem

if TYPE_CHECKING:
    from retrofit.meeting.session import Moment

ALWAYS = ("plant", "duty", "compressor")  # tables that every case has, written or not
# Groups of keys with short labels; a key is offered if the case file's model has it and the case its table.
GROUPS: tuple[tuple[str, str, tuple[tuple[str, str], ...]], ...] = (
    (
        "source",
        "Source: what is cooled",
        (
            ("evaporator.inlet", "Medium in"),
            ("evaporator.outlet", "Medium out"),
            ("duty.evaporating", "Evaporating"),
        ),
    ),
    (
        "sink",
        "Sink: where the heat goes",
        (
            ("condenser.inlet", "Medium in"),
            ("condenser.outlet", "Medium out"),
            ("duty.condensing", "Condensing"),
            ("plant.highest_ambient", "Hottest air"),
        ),
    ),
    (
        "cycle",
        "Duty and cycle",
        (
            ("duty.cooling", "Cooling"),
            ("duty.useful_superheat", "Superheat, useful"),
            ("duty.line_superheat", "Superheat, line"),
            ("duty.subcooling", "Subcooling"),
        ),
    ),
    (
        "compressor",
        "Compressor",
        (
            ("compressor.isentropic_efficiency", "Isentropic eff."),
            ("compressor.volumetric_efficiency", "Volumetric eff."),
            ("compressor.swept_volume", "Swept volume"),
        ),
    ),
    (
        "charge",
        "Charge and leaks",
        (
            ("plant.charge", "Charge"),
            ("emissions.leak_rate", "Leak rate"),
            ("emissions.leak_rate_after", "Leaks after"),
            ("law.annual_leak_rate", "Leaks, for law"),
        ),
    ),
    (
        "later",
        "Years, money, climate",
        (
            ("law.remaining_life", "Life"),
            ("money.tariff", "Tariff"),
            ("money.discount_rate", "Discount rate"),
            ("emissions.grid_factor", "Grid factor"),
            ("year.lowest_condensing", "Head floor"),
        ),
    ),
)
LABELS = {key: label for _, _, keys in GROUPS for key, label in keys}
SIDES = {"source": ("evaporator.inlet", "evaporator.outlet", "duty.evaporating"),
         "sink": ("condenser.inlet", "condenser.outlet", "duty.condensing")}  # fmt: skip
EFFICIENCIES = ("compressor.isentropic_efficiency", "compressor.volumetric_efficiency")
LONGEST_INPUT = 120  # characters
# One step up or down by the unit a value is written in; others go by about a twentieth of the value.
STEPS = {"degC": "1", "°C": "1", "degF": "2", "°F": "2", "K": "1", "R": "2", "": "0.01", "%": "1", "years": "1"}
NO_VALUE = "there is no value to step from; write one with its unit"
_WRITTEN = re.compile(r"^\s*([+\u2212-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+))\s*(.*?)\s*$", re.DOTALL)


@dataclass(frozen=True)
class Input:
    """One input of the page.

    Attributes:
        key, label, meaning: Full key of the case file, its name here, and the sentence on it.
        text: What stands in it.
        hint: What counts while it is empty: the default, or that nothing is stated.
        used: The value in the reader's units; empty if there is none, or if what is written says the same.
        origin: "case", "default", "meeting" or "not stated".
        was: What the case file says, where the meeting says something else.
        why: Why what is written was not taken; empty if it was.
    """

    key: str
    label: str
    meaning: str
    text: str
    hint: str
    used: str
    origin: str
    was: str
    why: str


@dataclass(frozen=True)
class Group:
    """Inputs under a heading; `can_shift` where all temperatures of a side can be moved together."""

    name: str
    heading: str
    inputs: tuple[Input, ...]
    can_shift: bool


def offered(data: Mapping[str, Any]) -> tuple[str, ...]:
    """Return the keys a meeting may change for a case.

    Args:
        data: The parsed TOML of the case. [-]
    """
    has_curve = any(name in data.get("compressor", {}) for name in ("efficiency_points", "polynomial"))
    return tuple(
        key
        for key in LABELS
        if key in FIELDS
        and (key.rpartition(".")[0] in ALWAYS or isinstance(data.get(key.partition(".")[0]), dict))
        and not (has_curve and key in EFFICIENCIES)
    )


def input_groups(
    moment: Moment, case: Case, source: Source, keys: tuple[str, ...], units: UnitSystem
) -> tuple[Group, ...]:
    """Return the inputs with what stands in them.

    Args:
        moment: What the page shows.
        case: The case that the shown result was made from.
        source: The case as the file has it.
        keys: The keys offered. [-]
        units: The reader's units.
    """
    found = []
    for name, heading, members in GROUPS:
        inputs = tuple(_input(moment, case, source, key, label, units) for key, label in members if key in keys)
        if inputs:
            found.append(Group(name, heading, inputs, set(SIDES.get(name, ("",))) <= set(keys)))
    return tuple(found)


def _input(moment: Moment, case: Case, source: Source, key: str, label: str, units: UnitSystem) -> Input:
    written, given = dict(moment.state.changes), source.text_of(key)
    refused = moment.refused.get(key)
    default = next((item.shown_text for item in case.defaults if item.key == key), "")
    value = quantity(case, key)
    used = units.with_unit(*value, decimals=1 if value[0] == "fraction" else None) if value else ""
    text = refused.text if refused else written.get(key, given)
    return Input(
        key=key,
        label=label,
        meaning=meaning(key),
        text=text,
        hint=f"{default} (default)" if default else "not stated",
        used="" if _says_the_same(text, used) else used,
        origin=origin(moment.state, case, key),
        was=(given or "left out") if key in written else "",
        why=refused.why if refused else "",
    )


def _says_the_same(written: str, used: str) -> bool:
    """Say whether a value in the reader's units reads like what is written, but for signs and digits."""
    parts = [_WRITTEN.match(_typed(text)) for text in (written, used)]
    if parts[0] is None or parts[1] is None or parts[0][2] != parts[1][2]:
        return False
    return float(parts[0][1]) == float(parts[1][1])


SIGNS = {"°": "deg", "³": "3", "²": "2", MINUS: "-", THOUSANDS_MARK: "", "\N{NO-BREAK SPACE}": " "}


def _typed(text: str) -> str:
    """Return a text with the signs that a keyboard has."""
    return "".join(SIGNS.get(sign, sign) for sign in text)


def origin(state: State, case: Case, key: str) -> str:
    """Return where the value of a key comes from: "meeting", "case", "default" or "not stated".

    Args:
        state: The state.
        case: The case with the changes of the meeting.
        key: Full key. [-]
    """
    if key in dict(state.changes):
        return "meeting"
    if any(item.key == key for item in case.defaults):
        return "default"
    is_given = key in case.given or any(name.startswith(f"{key}.") for name in case.given)
    return "case" if is_given else "not stated"


def text_now(state: State, source: Source, key: str) -> str:
    """Return what stands for a key: the meeting's text, the case's, or the default.

    Args:
        state: The state.
        source: The case as the file has it.
        key: Full key. [-]
    """
    found = dict(state.changes).get(key)
    if found is None:
        found = source.text_of(key)
    if found:
        return found
    default = FIELDS[key][1].default
    return str(default) if isinstance(default, str | float | int) and not isinstance(default, bool) else ""


def nudged(text: str, sign: int) -> str:
    """Return a value one step up or down, in the unit and with the digits it is written with.

    Args:
        text: Number and unit as written; of [low, base, high] all three go the step of the base. [-]
        sign: +1 or -1. [-]
    Raises: RefusedError if there is no number to begin with.
    """
    if text.startswith("[") and text.endswith("]"):
        return _all_nudged(text, sign)
    found = _WRITTEN.match(text)
    if found is None:
        raise RefusedError(NO_VALUE)
    value, unit = _decimal(found), found[2]
    return f"{value + sign * _step(value, unit):f} {unit}".strip()


def _all_nudged(text: str, sign: int) -> str:
    """Return low, base and high, each by the step of the base, so that their distances stay."""
    parts = [part.strip() for part in text[1:-1].split(",")]
    found = [_WRITTEN.match(part.strip('"')) for part in parts]
    if len(parts) != 3 or found[1] is None:
        raise RefusedError(NO_VALUE)
    step = _step(_decimal(found[1]), found[1][2])
    stepped = []
    for part, number in zip(parts, found, strict=True):
        if number is None:
            raise RefusedError(NO_VALUE)
        plain = f"{_decimal(number) + sign * step:f} {number[2]}".strip()
        stepped.append(f'"{plain}"' if part.startswith('"') else plain)
    return f"[{', '.join(stepped)}]"


def _decimal(number: re.Match[str]) -> Decimal:
    try:
        return Decimal(number[1].replace(MINUS, "-"))
    except InvalidOperation:
        raise RefusedError(NO_VALUE) from None


def _step(value: Decimal, unit: str) -> Decimal:
    return Decimal(STEPS[unit]) if unit in STEPS else _twentieth(value)


def _twentieth(value: Decimal) -> Decimal:
    """Return about a twentieth of a value, as 1, 2 or 5 times a power of ten."""
    wanted = abs(value) / 20 or Decimal("0.1")
    power = Decimal(10) ** wanted.adjusted()
    lead = wanted / power
    return (Decimal(5) if lead >= 5 else Decimal(2) if lead >= 2 else Decimal(1)) * power
