"""What each option has saved against the plant as it is, first cost paid, year by year, with its payback."""

from __future__ import annotations

from typing import Any

import numpy as np

from retrofit.checks.money_words import payback_words
from retrofit.checks.outlook import currency
from retrofit.checks.prospects import Prospect, compared, payback, prospects
from retrofit.figures.drawing import Drawing, canvas, to_svg
from retrofit.figures.labels import end_labels, label_of, mark_in, thousands, upright
from retrofit.figures.style import INK, SMALL_PT, THIN
from retrofit.study import Comparison
from retrofit.study.money import PaybackState
from retrofit.study.sums import ComparisonState
from retrofit.units import format_number

ROOM_ABOVE = 0.1  # for the words over the line, as a share of the axis below it
OFF_SCALE = 3.0  # times what most options cost


def payback_chart(comparison: Comparison) -> Drawing | None:
    """Draw what each option has saved against the plant as it is, first cost paid, and mark its payback.

    Args:
        comparison: A result with its remaining life.
    Returns: The chart in the currency of the case, above 0 where an option has saved money by then; None if nothing of
        it is known. An option whose comparison is incomplete is not drawn.
    """
    options, beyond = _on_scale([option for option in prospects(comparison)[1:] if _saved(option) is not None])
    if not options:
        return None
    with canvas(2.8, 0.85, 1.4, 0.26, 0.46) as figure:
        axes = figure.subplots()
        axes.axhline(0.0, color=INK, linewidth=THIN)
        lines = [_line(comparison, axes, option) for option in options]
        life = max(float(x[-1]) for x, _ in lines)
        axes.set_xlim(0.0, life)
        axes.margins(y=0.08)
        low, high = axes.get_ylim()
        axes.set_ylim(low, max(high, -ROOM_ABOVE * low))
        thousands(axes.yaxis)
        upright(axes, life, f"end of the remaining life, {life:g} years", "right")
        named = [(o, f"{label_of(o)}{_after(o)}") for o in options]
        ends = [(float(y[-1]), mark_in(comparison, o), text) for (o, text), (_, y) in zip(named, lines, strict=True)]
        end_labels(axes, ends)
        axes.annotate("saved", (0.0, 0.0), (4, 3), textcoords="offset points", fontsize=SMALL_PT, style="italic")
        axes.annotate("not yet paid back", (0.0, 0.0), (4, -3), textcoords="offset points", fontsize=SMALL_PT,
                      va="top", style="italic")  # fmt: skip
        axes.set_xlabel("Years from the change")
        axes.set_ylabel(f"Saved so far against as it is [{currency(comparison)}]")
        words = "; ".join(_words(option) for option in (*options, *beyond))
        svg = to_svg(figure, "payback", "Saving over the years", f"In {currency(comparison)}: {words}")
    far = f" Far below the scale: {'; '.join(_words(option) for option in beyond)}." if beyond else ""
    caption = (
        "What each option has saved against the plant as it is, its first cost paid; above zero it saves money. Where "
        "its line crosses zero it has paid back (ring, and years beside its name). Prices as today, not discounted, "
        f"without residual value.{far}{_left_out(comparison)}"
    )
    return Drawing("payback", svg, caption, words)


def _left_out(comparison: Comparison) -> str:
    """Return which options are not drawn, by what their comparison lacks."""
    found: dict[str, list[str]] = {}
    for option in prospects(comparison)[1:]:
        if _saved(option) is None:
            is_short = compared(option, "npv").state is ComparisonState.INCOMPLETE
            why = "an item is known for only one of the two" if is_short else "a cost or the remaining life is unknown"
            found.setdefault(why, []).append(label_of(option))
    return "".join(f" Not drawn, {why}: {', '.join(names)}." for why, names in found.items())


def _on_scale(options: list[Prospect]) -> tuple[list[Prospect], list[Prospect]]:
    """Return the options of one scale, and those so dear that the others would lie flat beside them."""
    dearest = {id(option): float(-np.min(_saved(option))) for option in options}
    if not options:
        return [], []
    limit = OFF_SCALE * max(float(np.median(list(dearest.values()))), 0.0)
    far = [option for option in options if 0.0 < limit < dearest[id(option)]]
    return [option for option in options if option not in far], far


def _after(option: Prospect) -> str:
    found = payback(option)
    return f", {found.years:.1f} y" if found.state is PaybackState.WITHIN else ""


def _saved(option: Prospect) -> Any:
    return option.account.appraisal.saved if option.account.appraisal else None


def _line(comparison: Comparison, axes: Any, option: Prospect) -> tuple[Any, Any]:
    mark, appraisal, back = mark_in(comparison, option), option.account.appraisal, payback(option)
    assert appraisal is not None
    x, y = np.asarray(appraisal.years), np.asarray(appraisal.saved)
    axes.plot(x, y, color=mark.colour, linestyle=mark.dash, linewidth=mark.width, marker=mark.marker, markersize=3.5)
    if back.state is PaybackState.WITHIN:
        axes.plot([back.years], [0.0], "o", markersize=8, markerfacecolor="none", markeredgecolor=mark.colour)
    return x, y


def _words(option: Prospect) -> str:
    saved = np.asarray(_saved(option))
    first, last = (format_number(float(value), 0, signed=True) for value in (saved[0], saved[-1]))
    return f"{label_of(option)} from {first} to {last}, {payback_words(payback(option))}"
