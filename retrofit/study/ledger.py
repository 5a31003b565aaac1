"""Readings and what is made from them: which value rests on which reading, and which readings are in doubt.

A value made from several readings is known only as long as none of them is in doubt. What restates a single
reading, as a saturation temperature restates a pressure, stays: it is what a doubt is about.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace

from retrofit.errors import RetrofitError
from retrofit.study.result import Derived, Finding
from retrofit.units import listed


@dataclass(frozen=True)
class _Made:
    """A value, and how it was made."""

    value: float
    how: str


@dataclass
class Ledger:
    """Everything known of a running plant while its baseline is worked out.

    Attributes:
        given: Readings and values of the case by their keys, in SI.
        names: Name and kind of quantity of every derived value that is shown, by code.
        doubts: Reading in doubt, and the title of the problem that says so.
        struck: Problems that put readings in doubt, and what explains them.
        notes: Problems that do not.
        vouched: Readings that went together with another one: a later disagreement doubts the others first.
    """

    given: Mapping[str, float]
    names: Mapping[str, tuple[str, str]]
    doubts: dict[str, str] = field(default_factory=dict)
    struck: list[Finding] = field(default_factory=list)
    notes: list[Finding] = field(default_factory=list)
    vouched: set[str] = field(default_factory=set)
    _made: dict[str, _Made] = field(default_factory=dict)
    _roots: dict[str, frozenset[str]] = field(default_factory=dict)

    def roots(self, code: str) -> frozenset[str]:
        """Return the readings and values of the case that a value is made from; of a reading, itself."""
        return self._roots.get(code, frozenset((code,)))

    def value(self, code: str) -> float | None:
        """Return a reading or a derived value in SI, None if it is not known or rests on a doubt."""
        if code in self.given:
            return None if code in self.doubts else self.given[code]
        return self._made[code].value if code in self._made and self._is_sound(self.roots(code)) else None

    def values(self, *codes: str) -> tuple[float, ...] | None:
        """Return several values, None unless all of them are known."""
        found = [self.value(code) for code in codes]
        known = tuple(value for value in found if value is not None)
        return known if len(known) == len(codes) else None

    def _is_sound(self, roots: frozenset[str]) -> bool:
        return len(roots) == 1 or not roots & self.doubts.keys()

    def derive(self, code: str, needs: tuple[str, ...], compute: Callable[..., object], how: str = "") -> None:
        """Derive a value if everything it needs is known.

        Args:
            code: Its code.
            needs: Codes of what it is computed from.
            compute: Takes these in SI and gives the value in SI; a state outside the model of the refrigerant
                puts the readings in doubt.
            how: How it is made, in words; nothing for a value that is not shown.
        """
        roots: frozenset[str] = frozenset().union(*(self.roots(need) for need in needs))
        self._roots[code] = roots
        known = self._inputs(needs, roots)
        if known is None:
            return
        try:
            value = float(compute(*known))  # type: ignore[arg-type]
        except RetrofitError as error:
            self.contradict(_outside_model(error.message), *roots)
            return
        if math.isfinite(value):
            self._made[code] = _Made(value, how)

    def _inputs(self, needs: tuple[str, ...], roots: frozenset[str]) -> tuple[float, ...] | None:
        """Return what a derivation starts from: a single reading even in doubt, several only without a doubt."""
        if len(needs) == 1 and needs[0] in self.given:
            return (self.given[needs[0]],)
        return self.values(*needs) if self._is_sound(roots) else None

    def choose(self, code: str, options: Mapping[str, str]) -> None:
        """Take the first of several values that is known.

        Args:
            code: Code of the value taken.
            options: Codes to choose from, best first, each with the words that say it was this one.
        """
        self._roots[code] = self.roots(next(iter(options)))
        for option, how in options.items():
            value = self.value(option)
            if value is not None:
                self._roots[code], self._made[code] = self.roots(option), _Made(value, how)
                return

    def agree(self, *codes: str) -> None:
        """Note that these readings go together."""
        for code in codes:
            self.vouched |= self.roots(code) - self.doubts.keys()

    def contradict(self, finding: Finding, *codes: str) -> None:
        """Note that these readings do not go together: those in doubt that have not gone together with another one.

        Args:
            finding: What is wrong.
            codes: Codes that take part in it; all are in doubt if each has been vouched for.
        """
        taking_part = {root for code in codes for root in self.roots(code) if root in self.given}
        doubted = taking_part - self.vouched or taking_part
        for root in doubted:
            self.doubts.setdefault(root, finding.title)
        keys = (root if "." in root else f"readings.{root}" for root in self.given if root in doubted)
        self.struck.append(replace(finding, missing=tuple(keys)))

    def remark(self, goes_with_doubt: bool, finding: Finding) -> None:
        """Note something that puts no reading in doubt; it stays with the doubt that it explains, if with one."""
        (self.struck if goes_with_doubt else self.notes).append(finding)

    # -- what comes out ----------------------------------------------------------------------------

    def derived(self) -> tuple[Derived, ...]:
        """Return what is derived, in the order of `names`."""
        return tuple(self._shown(code, value) for code in self.names if (value := self.value(code)) is not None)

    def _shown(self, code: str, value: float) -> Derived:
        name, kind = self.names[code]
        return Derived(code, name, kind, value, f"{self._made[code].how}; from {self._in_order(self.roots(code))}")

    def missing(self, order: Mapping[str, object]) -> tuple[str, ...]:
        """Return what is not derived, each with what it would need or why not.

        Args:
            order: Every key that can be given, in the order to name them.
        """
        return tuple(self._reason(code, order) for code in self.names if self.value(code) is None)

    def _reason(self, code: str, order: Mapping[str, object]) -> str:
        name, roots = self.names[code][0], self.roots(code)
        doubted = [key for key in order if key in roots and key in self.doubts]
        if doubted:
            titles = dict.fromkeys(self.doubts[key] for key in doubted)
            verb = "is" if len(doubted) == 1 else "are"
            return f"{name}: not derived, {listed(doubted, 'and')} {verb} in doubt ({'; '.join(titles)})"
        absent = [key for key in order if key in roots and key not in self.given]
        return f"{name}: needs {listed(absent, 'and')}" if absent else f"{name}: has no finite value"

    def _in_order(self, roots: frozenset[str]) -> str:
        return listed([key for key in self.given if key in roots], "and")


def _outside_model(message: str) -> Finding:
    return Finding(
        "reading-outside-model",
        "unknown",
        "Readings outside what the refrigerant can be",
        f"{message}.",
        "Check the reading, its unit, gauge or absolute, and which refrigerant is in the plant.",
        "range of the model of this refrigerant",
    )
