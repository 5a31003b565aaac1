"""Rows on set points that move: old gauge value to new gauge value."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.checks.hardware.rows import Bound, Matter, View, stated
from retrofit.study import Component, Measure
from retrofit.study.gaps import Gap, not_given
from retrofit.study.hardware.numbers import Setting
from retrofit.study.hardware.settings import SET_POINTS
from retrofit.units import quantity

HELD = {
    "dew": "the same dew temperature",
    "mean evaporating": "the same mean temperature of the coil",
    "mean condensing": "the same mean of dew and bubble temperature",
}
SOURCE = "common practice; compressor maker's changeover guideline: regulators are set anew because of glide"


def settings(view: View) -> Iterator[Component]:
    """Yield a row for each set point given, and one for those that are not."""
    given = view.numbers.settings
    steps = [item for item in given if item.key == "fan_steps"]
    for item in given:
        yield _row(view, item, steps.index(item) + 1 if item in steps else 0)
    controls = view.case.controls
    keys = (*(key for key, _, _ in SET_POINTS), "fan_steps")
    absent = [f"controls.{key}" for key in keys if controls is None or getattr(controls, f"{key}_Pa") is None]
    if absent:
        ask = "Every pressure setting of the plant, read before the change."
        yield stated(Matter("set-points", "Other set points", "", ask=ask), "unknown", [not_given(*absent)], SOURCE)


def _row(view: View, item: Setting, step: int) -> Component:
    bound = Bound(view.limits["set_point_shift"])
    old, new = view.gauge(item.p_Pa.old), view.gauge(item.p_Pa.new)
    measures = (
        view.pressures("Setting", item.p_Pa),
        Measure("Temperature held", "temperature", item.T_K, item.T_K if new is not None else None),
    )
    code = f"set-point-{item.key.replace('_', '-')}" + (f"-{step}" if step else "")
    if old is None or new is None:
        return stated(
            Matter(code, item.name, "", measures, (bound,)),
            "unknown",
            [Gap(item.reason, (f"controls.{item.key}",))],
            SOURCE,
        )
    before, after = (quantity("gauge pressure", p_Pa, ".2f") for p_Pa in (old, new))
    fact = f"{before} becomes {after} at {HELD[item.held]}."
    verdict = "adjust" if bound.level_of(abs(new - old)) else "keep"
    return stated(Matter(code, item.name, fact, measures, (bound,), "Range of the control."), verdict, (), SOURCE)


ROWS = (settings,)
