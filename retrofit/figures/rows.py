"""Charts with one row for each refrigerant: pressures, discharge temperature, COP and capacity against today."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from retrofit.checks import threshold
from retrofit.figures.drawing import Drawing, canvas, to_svg
from retrofit.figures.style import HAIRLINE, INK, LABEL_PT, SMALL_PT, THIN, mark_at
from retrofit.study import Comparison, Entry
from retrofit.study.bands import band_of, base_bands, pair_band
from retrofit.units import ZERO_C_K, UnitSystem, format_number, listed

ROW_IN, FRAME_IN = 0.2, 0.74
MARGINS_IN = (0.9, 0.5, 0.26, 0.46)  # left, right, top, bottom
ZONE = 0.42  # half the height of a row's own band [rows]
PAIR = (30, 64)  # where two columns in the right margin end [pt]


def pressure_chart(comparison: Comparison, units: UnitSystem) -> Drawing:
    """Draw evaporating and condensing pressure of each refrigerant, as a gauge at the plant shows them.

    Args:
        comparison: The result.
        units: The reader's units.
    Returns: The chart, with the nameplate pressure if the case gives it.
    """
    plant, label = comparison.case.plant, units.label("gauge pressure")

    def gauge(p_Pa: float) -> float:
        return float(units.number("gauge pressure", p_Pa - plant.ambient_pressure_Pa))

    left, right, top, bottom = MARGINS_IN
    with canvas(_height(comparison), left, right + 0.5, top, bottom) as figure:
        axes = figure.subplots()
        for place, entry in _rows(axes, comparison):
            if entry.duty is None:
                continue
            mark, ends = mark_at(comparison, place), (gauge(entry.duty.p_evap_Pa), gauge(entry.duty.p_cond_Pa))
            axes.plot(ends, (place, place), color=mark.colour, linewidth=mark.width * 0.7)
            axes.plot(ends, (place, place), mark.marker, color=mark.colour, markersize=5.5, linestyle="none")
            for value, column in zip(ends, PAIR, strict=True):
                _margin_value(axes, place, _short(value), column)
        values = [gauge(p) for entry in _solved(comparison) for p in (entry.duty.p_evap_Pa, entry.duty.p_cond_Pa)]
        if plant.high_side_limit_Pa is not None:
            limit = gauge(plant.high_side_limit_Pa)
            values.append(limit)
            _limit(axes, limit, f"nameplate {_short(limit)}", "center")
        for word, column in zip(("evap.", "cond."), PAIR, strict=True):
            _margin_value(axes, -0.95, word, column)
        axes.axvline(0.0, color=INK, linewidth=HAIRLINE)
        _wide(axes, values, 0.12)
        axes.set_xlabel(f"Evaporating (left) and condensing (right) pressure, gauge [{label}]")
        words = _words(comparison, lambda e: f"{_short(gauge(e.duty.p_evap_Pa))} and {_short(gauge(e.duty.p_cond_Pa))}")
        svg = to_svg(figure, "pressures", "Evaporating and condensing pressures", f"In {label}: {words}")
    caption = "Evaporating and condensing pressure as a gauge at the plant shows them"
    caption += ", with the maximum pressure of the nameplate." if plant.high_side_limit_Pa is not None else "."
    return Drawing("pressures", svg, caption, words)


def discharge_chart(comparison: Comparison, units: UnitSystem) -> Drawing:
    """Draw the discharge temperature of each refrigerant with the band of the model and the levels of the checks.

    Args:
        comparison: The result.
        units: The reader's units.
    Returns: The chart.
    """
    limits = threshold("discharge_temperature")
    solved = _solved(comparison)

    def number(T_K: float) -> float:
        return float(units.number("temperature", T_K))

    with canvas(_height(comparison), *MARGINS_IN) as figure:
        axes = figure.subplots()
        values = [
            number(entry.duty.T_discharge_K + sign * _discharge_band(entry)) for entry in solved for sign in (-1, 1)
        ]
        for level, side in ((limits.work, "right"), (limits.stop, "left")):
            if level is not None:
                values.append(number(level + ZERO_C_K))
                word = "ask the maker above" if side == "right" else "stop above"
                _limit(axes, values[-1], f"{word} {number(level + ZERO_C_K):.0f}", side)
        if comparison.existing.duty is not None:
            axes.axvline(number(comparison.existing.duty.T_discharge_K), color=INK, linewidth=HAIRLINE)
        for place, entry in _rows(axes, comparison):
            if entry.duty is None:
                continue
            mark, T, band = mark_at(comparison, place), entry.duty.T_discharge_K, _discharge_band(entry)
            axes.plot((number(T - band), number(T + band)), (place, place), color=mark.colour, linewidth=THIN)
            axes.plot([number(T)], [place], mark.marker, color=mark.colour, markersize=6)
            _margin_value(axes, place, f"{number(T):.0f}")
        _wide(axes, values, 0.06)
        axes.set_xlabel(f"Discharge temperature [{units.label('temperature')}]")
        words = _words(comparison, lambda e: f"{number(e.duty.T_discharge_K):.0f}")
        described = f"In {units.label('temperature')}: {words}"
        svg = to_svg(figure, "discharge", "Discharge temperatures", described)
    caption = (
        f"Discharge temperature; the line through each mark is the band of the model, {_widths(solved, units)}. "
        "The thin vertical line is today's. The dashed lines are the levels of the checks, not a maker's limits: the "
        "maker's written limit goes before them."
    )
    return Drawing("discharge", svg, caption, described)


def _discharge_band(entry: Entry) -> float:
    return band_of(entry, "T_discharge")


def _widths(solved: Sequence[Entry], units: UnitSystem) -> str:
    """Return the bands of the discharge temperature in words, the narrowest first."""
    found: dict[float, list[str]] = {}
    for entry in sorted(solved, key=_discharge_band):
        found.setdefault(_discharge_band(entry), []).append(entry.refrigerant.display_name)
    (common, _), *others = [
        (f"±{units.with_unit('temperature difference', band, decimals=0)}", names) for band, names in found.items()
    ] or [("", [])]
    return common + "".join(f", {width} of {listed(names, 'and')}" for width, names in others)


@dataclass(frozen=True)
class Panel:
    """One ratio to today's refrigerant: its name in the result, the band it is held against, and its axis."""

    ratio: str
    band: str
    label: str


SAME_COMPRESSOR = Panel("capacity", "capacity", "Cooling, same compressor, against today [%]")
SAME_PLANT = Panel("plant_capacity", "capacity", "Cooling, same plant, against today [%]")
SAME_DUTY = Panel("cop", "cop", "COP, same duty, against today [%]")
SAME_COOLING = Panel("plant_cop_same_cooling", "cop", "COP, same plant and cooling, against today [%]")
INSIDE = "Inside the grey band the difference is smaller than what the model can tell: no meaningful difference."


def change_charts(comparison: Comparison) -> tuple[Drawing, ...]:
    """Draw cooling and COP against today with the band of the model, on every basis that there is.

    Args:
        comparison: The result.
    Returns: One chart of cooling and COP; with the basis same plant one of each. Without the existing
        refrigerant's numbers their rows stay empty.
    """
    if not any(entry.plant for entry in comparison.entries):
        caption = f"Cooling with the existing compressor, and COP, against today's refrigerant. {INSIDE}"
        return (
            _changes(comparison, "change", "Capacity and COP against today", (SAME_COMPRESSOR, SAME_DUTY), caption),
        )
    cooling = (
        "Cooling against today's refrigerant: with the existing compressor at the plant's temperatures (left), and "
        f"with compressor and exchangers as installed, pressures floating (right). {INSIDE}"
    )
    cop = (
        "COP against today's refrigerant: at the plant's temperatures (left), and with compressor and exchangers as "
        f"installed, at the same cooling (right). {INSIDE}"
    )
    return (
        _changes(comparison, "change", "Cooling against today", (SAME_COMPRESSOR, SAME_PLANT), cooling),
        _changes(comparison, "change-cop", "COP against today", (SAME_DUTY, SAME_COOLING), cop),
    )


def _changes(comparison: Comparison, name: str, title: str, panels: tuple[Panel, Panel], caption: str) -> Drawing:
    bands = [100.0 * base_bands(comparison)[panel.band].value for panel in panels]
    caption += _wider_words(comparison, panels)
    with canvas(_height(comparison), *MARGINS_IN) as figure:
        both = figure.subplots(1, 2, sharey=True, gridspec_kw={"wspace": 0.1})
        found = [
            [-1.3 * band, 1.3 * band, *_panel(axes, comparison, panel, band)]
            for axes, panel, band in zip(both, panels, bands, strict=True)
        ]
        if panels[0].band == panels[1].band:  # the same thing on two bases: on one scale
            found = [found[0] + found[1]] * 2
        for axes, values in zip(both, found, strict=True):
            _wide(axes, values, 0.16)
            axes.xaxis.get_major_locator().set_params(integer=True, nbins=7)
        words = _words(comparison, lambda entry: _change_words(entry, panels))
        described = f"In %, {panels[0].label.split(' [')[0]} and {panels[1].label.split(' [')[0]}: {words}"
        svg = to_svg(figure, name, title, described)
    return Drawing(name, svg, caption, words)


def _panel(axes: Any, comparison: Comparison, panel: Panel, band: float) -> list[float]:
    """Draw one panel and return the values in it. [%]"""
    axes.axvspan(-band, band, color=INK, alpha=0.09, linewidth=0)
    axes.axvline(0.0, color=INK, linewidth=THIN)
    values = []
    for place, entry in _rows(axes, comparison):
        if panel.ratio in entry.relative:
            values += _own_zone(axes, place, 100.0 * _panel_band(comparison, entry, panel), band)
            mark, value = mark_at(comparison, place), 100 * (entry.relative[panel.ratio] - 1.0)
            values.append(value)
            axes.plot([value], [place], mark.marker, color=mark.colour, markersize=6)
            _value(axes, value, place, format_number(value, 0, signed=True), -1 if value < 0 else 1)
        elif entry.duty is not None:
            _not_computed(axes, place)
    axes.set_xlabel(panel.label)
    text = f"±{band:.3g} %: no meaningful difference"
    axes.annotate(text, (0.0, 1.0), (0, 3), xycoords=("data", "axes fraction"), textcoords="offset points",
                  ha="center", va="bottom", fontsize=SMALL_PT)  # fmt: skip
    return values


def _panel_band(comparison: Comparison, entry: Entry, panel: Panel) -> float:
    """Return the band of a row; the existing refrigerant, which is the zero line, has none of its own."""
    today = comparison.existing
    return base_bands(comparison)[panel.band].value if entry is today else pair_band(today, entry, panel.band)


def _own_zone(axes: Any, place: int, band: float, base: float) -> list[float]:
    """Widen the grey band in one row where the model of a refrigerant is worse, and return the ends. [%]"""
    if band <= base:
        return []
    for low, high in ((-band, -base), (base, band)):
        axes.fill_between((low, high), place - ZONE, place + ZONE, color=INK, alpha=0.09, linewidth=0)
    return [-band, band]


def _wider_words(comparison: Comparison, panels: tuple[Panel, Panel]) -> str:
    """Return the sentence of the caption on rows with a wider band; empty if there is none."""
    found: dict[str, list[str]] = {}
    for entry in comparison.candidates:
        bands = {
            panel.label.split(",")[0].replace("Cooling", "cooling"): _panel_band(comparison, entry, panel)
            for panel in panels
        }
        if entry.duty is not None and any(
            _panel_band(comparison, entry, p) > base_bands(comparison)[p.band].value for p in panels
        ):
            words = " and ".join(f"{name} ±{100.0 * band:.3g} %" for name, band in bands.items())
            found.setdefault(words, []).append(entry.refrigerant.display_name)
    rows = "; ".join(f"{listed(names, 'and')}: {words}" for words, names in found.items())
    return (
        f" Wider in its row where the model of a refrigerant, or of the compressor with it, is less certain: {rows}."
        if rows
        else ""
    )


def _change_words(entry: Entry, panels: tuple[Panel, Panel]) -> str:
    return " and ".join(
        format_number(100 * (entry.relative[panel.ratio] - 1.0), 0, signed=True)
        if panel.ratio in entry.relative
        else "not known"
        for panel in panels
    )


def _solved(comparison: Comparison) -> list[Any]:
    return [entry for entry in comparison.entries if entry.duty is not None]


def _height(comparison: Comparison) -> float:
    return FRAME_IN + ROW_IN * max(3, len(comparison.entries))


def _rows(axes: Any, comparison: Comparison) -> list[tuple[int, Entry]]:
    """Set up one row for each refrigerant, the existing one on top, and return them."""
    entries = comparison.entries
    names = [entry.refrigerant.display_name for entry in entries]
    axes.set_yticks(range(len(entries)), names)
    for today in axes.get_yticklabels()[:1]:
        today.set_fontweight("bold")
    axes.set_ylim(len(entries) - 0.4, -0.6)
    axes.tick_params(axis="y", length=0)
    axes.spines["left"].set_visible(False)
    for place, entry in enumerate(entries):
        axes.axhline(place, color=INK, linewidth=HAIRLINE, alpha=0.18)
        if entry.duty is None:
            _not_computed(axes, place)
    return list(enumerate(entries))


def _not_computed(axes: Any, place: int) -> None:
    axes.annotate("not computed", (0.02, place), xycoords=("axes fraction", "data"), va="center",
                  fontsize=SMALL_PT, style="italic")  # fmt: skip


def _value(axes: Any, x: float, y: float, text: str, side: int) -> None:
    axes.annotate(text, (x, y), (7 * side, 0), textcoords="offset points", va="center",
                  ha="left" if side > 0 else "right", fontsize=LABEL_PT)  # fmt: skip


def _margin_value(axes: Any, y: float, text: str, right_pt: float = 28) -> None:
    """Write a value in the right margin, where no limit line runs through it."""
    axes.annotate(text, (1.0, y), (right_pt, 0), xycoords=("axes fraction", "data"), textcoords="offset points",
                  va="center", ha="right", fontsize=LABEL_PT, annotation_clip=False)  # fmt: skip


def _limit(axes: Any, x: float, text: str, side: str) -> None:
    axes.axvline(x, color=INK, linewidth=THIN, linestyle=(0, (3, 2)))
    shift = {"right": 3, "left": -3, "center": 0}[side]
    axes.annotate(text, (x, 1.0), (shift, 3), xycoords=("data", "axes fraction"), textcoords="offset points",
                  ha=side, va="bottom", fontsize=SMALL_PT)  # fmt: skip


def _wide(axes: Any, values: Sequence[float], room: float) -> None:
    """Set the limits of the horizontal axis so that every value and its label has room."""
    if not values:
        return
    low, high = min(values), max(values)
    margin = room * max(high - low, 1e-6)
    axes.set_xlim(low - margin, high + margin)


def _short(value: float) -> str:
    return format_number(value, 1 if abs(value) < 100 else 0)


def _words(comparison: Comparison, amount: Any) -> str:
    return "; ".join(
        f"{entry.refrigerant.display_name} {amount(entry) if entry.duty else 'not computed'}"
        for entry in comparison.entries
    )
