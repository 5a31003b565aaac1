"""What the rows of the hardware table share: what they look at, and how levels and gaps become a verdict."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, replace

from retrofit.case import Case
from retrofit.checks.gauge import share_of_limit
from retrofit.checks.thresholds import Threshold
from retrofit.study import Comparison, Component, Entry, Finding, Measure
from retrofit.study.gaps import Gap
from retrofit.study.hardware.conditions import CANDIDATES
from retrofit.study.hardware.numbers import HardwareNumbers, OldNew

ANSWERED = {True: "Approved in writing, by the case.", False: "Not approved, by the case."}
VERDICTS: Mapping[str | None, str] = {"stop": "replace", "work": "adjust", "note": "keep", None: "keep"}
PHYSICS = "physics"


@dataclass(frozen=True)
class View:
    """What a row looks at.

    Attributes:
        comparison: The result.
        entry: The refrigerant.
        limits: Thresholds by name.
        findings: What the gates found of it.
    """

    comparison: Comparison
    entry: Entry
    limits: Mapping[str, Threshold]
    findings: Sequence[Finding]

    @property
    def case(self) -> Case:
        """Return the case."""
        return self.comparison.case

    @property
    def numbers(self) -> HardwareNumbers:
        """Return the numbers of the hardware; rows that need them are asked for solved refrigerants only."""
        assert self.entry.hardware_numbers is not None
        return self.entry.hardware_numbers

    @property
    def is_today(self) -> bool:
        """Return whether this is the refrigerant in the plant."""
        return self.entry is self.comparison.existing

    def gap(self, name: str) -> Gap:
        """Return what a number of the new refrigerant is wanting for; false if it is known."""
        numbers = self.entry.hardware_numbers
        if numbers:
            return numbers.new.missing[name]
        return Gap(f"{self.entry.refrigerant.designation} is not computed", (CANDIDATES,))

    def answered(self, name: str) -> bool | None:
        """Return the answer in writing that the case holds for this refrigerant; None if it holds none.

        Args:
            name: A key of [approvals].
        """
        approvals = self.case.approvals
        return approvals.of(name, self.entry.refrigerant.designation) if approvals else None

    def level(self, code: str) -> str | None:
        """Return the level of the gates' finding with a code, None if they found nothing."""
        return next((finding.level for finding in self.findings if finding.code == code), None)

    def fact(self, code: str, otherwise: str) -> str:
        """Return what the gates found, or what to say if they found nothing."""
        return next((finding.fact for finding in self.findings if finding.code == code and finding.fact), otherwise)

    def gauge(self, p_Pa: float | None) -> float | None:
        """Return an absolute pressure as a gauge at the plant shows it.

        Args:
            p_Pa: Pressure, absolute. [Pa]
        """
        return None if p_Pa is None else p_Pa - self.case.plant.ambient_pressure_Pa

    def share(self, p_Pa: float | None, limit_Pa: float | None) -> float | None:
        """Return a pressure as part of a limit, as gauges at the plant show both; None if one is not known. [-]

        Args:
            p_Pa, limit_Pa: Pressure and limit, absolute. [Pa]
        """
        if p_Pa is None or limit_Pa is None:
            return None
        return share_of_limit(p_Pa, limit_Pa, self.case.plant.ambient_pressure_Pa)

    def pressures(self, name: str, p: OldNew) -> Measure:
        """Return a measure of two pressures as gauges show them."""
        return Measure(name, "gauge pressure", self.gauge(p.old), self.gauge(p.new))


@dataclass(frozen=True)
class Bound:
    """A threshold and the side on which a value is bad."""

    limit: Threshold
    side: str = "above"

    @property
    def text(self) -> str:
        """Return the threshold in words."""
        return self.limit.words(self.side)

    def level(self, value: float | None) -> str | None:
        """Return the level of a value; one that is not known has none."""
        if value is None:
            return None
        return self.limit.level(value) if self.side == "above" else self.limit.level_below(value)

    def level_of(self, value: float) -> str | None:
        """Return the level of a value in SI, where the figures of the threshold are in another unit. [SI]"""
        return self.level(self.limit.number(value))


@dataclass(frozen=True)
class Matter:
    """What a row is about, before it is judged.

    Attributes:
        code, name: Of the component.
        fact: The deciding number, as a sentence; may be empty.
        measures: The numbers.
        bounds: The thresholds.
        ask: What to ask.
        words: The threshold, where it is no number of the file.
    """

    code: str
    name: str
    fact: str
    measures: tuple[Measure, ...] = ()
    bounds: tuple[Bound, ...] = ()
    ask: str = ""
    words: str = "no number: a matter of material or approval"


def judged(matter: Matter, levels: Iterable[str | None], missing: Iterable[Gap] = (), source: str = "") -> Component:
    """Return a row: its worst level decides, then what is missing, and only then is there nothing to do.

    Args:
        matter: What the row is about.
        levels: Levels found.
        missing: What is not known; false ones do not count.
        source: Where the threshold comes from, if no bound says so.
    """
    found, gaps = set(levels), [gap for gap in missing if gap]
    worst = next((level for level in ("stop", "work") if level in found), None)
    verdict = "unknown" if worst is None and (gaps or "unknown" in found) else VERDICTS[worst]
    return stated(matter, verdict, gaps, source)


def stated(matter: Matter, verdict: str, missing: Sequence[Gap] = (), source: str = "") -> Component:
    """Return a row with a verdict that is already known; arguments as for `judged`."""
    words = dict.fromkeys(gap.words for gap in missing if gap)
    gaps = f"Not known: {'; '.join(words)}." if words else ""
    sources = dict.fromkeys(bound.limit.source for bound in matter.bounds)
    return Component(
        code=matter.code,
        name=matter.name,
        verdict=verdict,
        measures=matter.measures,
        reason=f"{matter.fact} {gaps}".strip(),
        threshold="; ".join(bound.text for bound in matter.bounds) or matter.words,
        source=source or "; ".join(sources) or PHYSICS,
        ask=matter.ask,
        missing=tuple(dict.fromkeys(key for gap in missing for key in gap.keys)),
    )


def answered(view: View, matter: Matter, name: str, otherwise: Component) -> Component:
    """Return a row as the answer of a maker or engineer settles it; the row as it is without an answer.

    Args:
        view: What the row looks at.
        matter: What the row is about.
        name: A key of [approvals].
        otherwise: The row without an answer.
    """
    answer = view.answered(name)
    if answer is None:
        return replace(otherwise, missing=tuple(dict.fromkeys((*otherwise.missing, f"approvals.{name}"))))
    told = replace(matter, fact=f"{matter.fact} {ANSWERED[answer]}".strip())
    return stated(told, "keep" if answer else "replace", source="answer in writing, by the case")


def performance_measure(view: View, name: str, kind: str, quantity: str, condition: str = "design") -> Measure:
    """Return a measure of one quantity of the performance at a condition, old and new."""
    if view.entry.hardware_numbers is None:
        return Measure(name, kind, None, None)
    sides = (getattr(side, condition) for side in (view.numbers.old, view.numbers.new))
    old, new = (None if side is None else float(getattr(side, quantity)) for side in sides)
    if kind == "gauge pressure":
        old, new = view.gauge(old), view.gauge(new)
    return Measure(name, kind, old, new)
