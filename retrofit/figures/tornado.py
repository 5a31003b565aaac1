"""Which inputs move a result of an option most: each alone from its low to its high limit."""

from __future__ import annotations

from typing import Any

from retrofit.checks.outlook import RATIOS, TOLD, currency, input_words, result_text, rounded_text
from retrofit.checks.prospects import Prospect
from retrofit.figures.drawing import Drawing, canvas, to_svg
from retrofit.figures.labels import label_of, thousands
from retrofit.figures.style import HAIRLINE, INK, LABEL_PT, SMALL_PT, THIN
from retrofit.study import Comparison
from retrofit.study.life import Swing
from retrofit.units import UnitSystem

ROW_IN, FRAME_IN = 0.3, 0.76
MOST = 8
HEIGHT, PALE = 0.5, 0.3
LONGEST = 48  # characters of a label


def tornado_chart(comparison: Comparison, option: Prospect, result: str, units: UnitSystem) -> Drawing | None:
    """Draw how far each input moves a result: down to its low limit hatched, up to its high limit plain.

    Args:
        comparison: A result with its remaining life.
        option: The option.
        result: A key of `TOLD`. [-]
        units: The reader's units.
    Returns: The chart; None if nothing moves it.
    """
    swings = option.certainty.swings.get(result, ())[:MOST] if option.certainty else ()
    if not swings:
        return None
    with canvas(FRAME_IN + ROW_IN * max(3, len(swings)), 2.75, 0.35, 0.26, 0.46) as figure:
        axes = figure.subplots()
        axes.set_ylim(len(swings) - 0.4, -0.6)
        axes.set_yticks([])
        axes.spines["left"].set_visible(False)
        base = _number(units, result, swings[0].base)
        for place, swing in enumerate(swings):
            _bar(axes, place, swing, base, units, result)
            _label(axes, place, swing, units, currency(comparison))
        axes.axvline(base, color=INK, linewidth=THIN)
        axes.annotate(f"base {result_text(comparison, units, result, swings[0].base)}", (base, 1.0), (0, 3),
                      xycoords=("data", "axes fraction"), textcoords="offset points", ha="center", va="bottom",
                      fontsize=SMALL_PT)  # fmt: skip
        axes.margins(x=0.16)
        thousands(axes.xaxis)
        told = f"{TOLD[result][:1].upper()}{TOLD[result][1:]}"
        axes.set_xlabel(f"{told}, {label_of(option)} [{_unit(comparison, units, result)}]")
        words = "; ".join(_words(comparison, swing, result, units) for swing in swings)
        name = f"tornado-{option.entry.refrigerant.designation.lower()}"
        svg = to_svg(figure, name, f"What moves {TOLD[result]} of {label_of(option)}", words)
    caption = (
        f"What moves the answer most: {TOLD[result]} of {label_of(option)} with each input alone at its low limit "
        "(hatched) and at its high limit (plain), the others at their base. Limits stand beside each input; where they "
        "come from stands in the annex."
    )
    return Drawing(name, svg, caption, words)


def _unit(comparison: Comparison, units: UnitSystem, result: str) -> str:
    if result in RATIOS:
        return "% against today"
    return {"energy_saving_J": units.label("energy"), "avoided_t": "t CO2e"}.get(result, currency(comparison))


def _number(units: UnitSystem, result: str, value: float) -> float:
    if result in RATIOS:
        return 100.0 * (value - 1.0)
    return float(units.number("energy", value)) if result == "energy_saving_J" else value


def _bar(axes: Any, place: int, swing: Swing, base: float, units: UnitSystem, result: str) -> None:
    if place:
        axes.axhline(place - 0.5, color=INK, linewidth=HAIRLINE, alpha=0.18)  # between rows: it strikes no number
    for value, style in (
        (swing.at_low, {"color": "none", "edgecolor": INK, "hatch": "////", "linewidth": THIN}),
        (swing.at_high, {"color": INK, "alpha": PALE, "linewidth": 0}),
    ):
        axes.barh(place, _number(units, result, value) - base, HEIGHT, base, **style)
    ends = sorted(_number(units, result, value) for value in (swing.at_low, swing.at_high))
    for end, side in zip(ends, (-1, 1), strict=True):
        axes.annotate(rounded_text(end), (end, place), (4 * side, 0), textcoords="offset points", va="center",
                      ha="left" if side > 0 else "right", fontsize=LABEL_PT)  # fmt: skip


def _label(axes: Any, place: int, swing: Swing, units: UnitSystem, money: str) -> None:
    """Name an input and its limits in the left margin."""
    name = input_words(swing)
    short = name if len(name) <= LONGEST else f"{name[: LONGEST - 1].rstrip()}…"
    texts = (f"{short[:1].upper()}{short[1:]}", limits_text(swing, units, money))
    for text, up in zip(texts, (1, -1), strict=True):
        axes.annotate(text, (0.0, place), (-8, up), xycoords=("axes fraction", "data"), textcoords="offset points",
                      ha="right", va="bottom" if up > 0 else "top", fontsize=SMALL_PT,
                      annotation_clip=False)  # fmt: skip


def limits_text(swing: Swing, units: UnitSystem, money: str) -> str:
    """Return low and high limit of an input with their unit.

    Args:
        swing: What the input does.
        units: The reader's units.
        money: Currency of the case. [-]
    """
    low, _, high = swing.input.spread
    kind = swing.input.kind
    if not kind:
        return f"{rounded_text(low)} to {rounded_text(high)} {money}"
    decimals = 1 if kind == "fraction" else None
    numbers = [units.text(kind, value, decimals=decimals) for value in (low, high)]
    return f"{numbers[0]} to {numbers[1]} {units.label(kind)}".rstrip()


def _words(comparison: Comparison, swing: Swing, result: str, units: UnitSystem) -> str:
    low, high = (result_text(comparison, units, result, value) for value in (swing.at_low, swing.at_high))
    return f"{input_words(swing)} {limits_text(swing, units, currency(comparison))}: {low} to {high}"
