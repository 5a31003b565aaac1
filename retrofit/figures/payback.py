"""What each option has cost by then more than the plant as it is, year by year, with its payback."""

from __future__ import annotations

from typing import Any

import numpy as np

from retrofit.checks.outlook import currency
from retrofit.checks.prospects import Prospect, prospects
from retrofit.figures.drawing import Drawing, canvas, to_svg
from retrofit.figures.labels import end_labels, label_of, mark_in, thousands, upright
from retrofit.figures.style import INK, SMALL_PT, THIN
from retrofit.study import Comparison
from retrofit.units import format_number

ROOM_BELOW = 0.1  # for the words under the line, as a share of the axis above it
OFF_SCALE = 3.0  # times what most options cost


def payback_chart(comparison: Comparison) -> Drawing | None:
    """Draw what each option has cost more than the plant as it is against the years, and mark its payback.

    Args:
        comparison: A result with its remaining life.
    Returns: The chart in the currency of the case; None if nothing of it is known.
    """
    options, beyond = _on_scale([option for option in prospects(comparison)[1:] if _extra(option) is not None])
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
        axes.set_ylim(min(low, -ROOM_BELOW * high), high)
        thousands(axes.yaxis)
        upright(axes, life, f"end of the remaining life, {life:g} years", "right")
        named = [(o, f"{label_of(o)}{_after(o)}") for o in options]
        ends = [(float(y[-1]), mark_in(comparison, o), text) for (o, text), (_, y) in zip(named, lines, strict=True)]
        end_labels(axes, ends)
        axes.annotate(
            "dearer so far", (0.0, 0.0), (4, 3), textcoords="offset points", fontsize=SMALL_PT, style="italic"
        )
        axes.annotate("paid back", (0.0, 0.0), (4, -3), textcoords="offset points", fontsize=SMALL_PT, va="top",
                      style="italic")  # fmt: skip
        axes.set_xlabel("Years from the change")
        axes.set_ylabel(f"Cost so far, less as it is [{currency(comparison)}]")
        words = "; ".join(_words(option) for option in (*options, *beyond))
        svg = to_svg(figure, "payback", "Cost over the years", f"In {currency(comparison)}: {words}")
    left_out = [label_of(option) for option in prospects(comparison)[1:] if _extra(option) is None]
    far = f" Far above the scale: {'; '.join(_words(option) for option in beyond)}." if beyond else ""
    more = f" Not drawn, since first cost, saving or life is unknown: {', '.join(left_out)}." if left_out else ""
    caption = (
        "What each option has cost more than the plant as it is, first cost and every year since. Where its line "
        f"comes down to zero it has paid back (ring, and years beside its name); prices as today, nothing "
        f"discounted.{far}{more}"
    )
    return Drawing("payback", svg, caption, words)


def _on_scale(options: list[Prospect]) -> tuple[list[Prospect], list[Prospect]]:
    """Return the options of one scale, and those so dear that the others would lie flat beside them."""
    highest = {id(option): float(np.max(_extra(option))) for option in options}
    if not options:
        return [], []
    limit = OFF_SCALE * max(float(np.median(list(highest.values()))), 0.0)
    far = [option for option in options if 0.0 < limit < highest[id(option)]]
    return [option for option in options if option not in far], far


def _after(option: Prospect) -> str:
    appraisal = option.account.appraisal
    payback = None if appraisal is None or appraisal.payback_years is None else float(appraisal.payback_years)
    is_within = payback and appraisal and appraisal.life_years is not None and payback <= float(appraisal.life_years)
    return f", {payback:.1f} y" if is_within else ""


def _extra(option: Prospect) -> Any:
    return option.account.appraisal.extra_cost if option.account.appraisal else None


def _line(comparison: Comparison, axes: Any, option: Prospect) -> tuple[Any, Any]:
    mark, appraisal = mark_in(comparison, option), option.account.appraisal
    assert appraisal is not None
    x, y = np.asarray(appraisal.years), np.asarray(appraisal.extra_cost)
    axes.plot(x, y, color=mark.colour, linestyle=mark.dash, linewidth=mark.width, marker=mark.marker, markersize=3.5)
    payback = None if appraisal.payback_years is None else float(appraisal.payback_years)
    if payback and payback <= float(x[-1]):
        axes.plot([payback], [0.0], "o", markersize=8, markerfacecolor="none", markeredgecolor=mark.colour)
    return x, y


def _words(option: Prospect) -> str:
    extra, appraisal = np.asarray(_extra(option)), option.account.appraisal
    payback = appraisal.payback_years if appraisal else None
    years = None if payback is None or not np.isfinite(payback) else float(payback)
    back = f"payback after {years:.1f} years" if years else "no payback" if years is None else "nothing to pay back"
    first, last = (format_number(float(value), 0) for value in (extra[0], extra[-1]))
    return f"{label_of(option)} from {first} to {last}, {back}"
