"""The question and the answer in plain words, made from a result."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from retrofit.checks.gates import capacity_needed_W
from retrofit.checks.thresholds import model_band
from retrofit.study import Comparison, Entry
from retrofit.units import UnitSystem, listed

NOT_CHECKED = (
    "what the heat exchangers do: evaporating and condensing temperatures are held, not found from air or water",
    "motor current, expansion valves, distributors, pipes, oil return, receiver, relief valves and seals",
    "standstill pressure at the highest ambient temperature, and the hottest day beyond the temperatures of the case",
    "charge against room volume, ventilation, detection and electrical equipment",
    "law, listings and permits at the place of the plant, now and over its remaining life",
    "a year of operation: energy, emissions and cost",
)


VERDICT_WORDS = {
    "suits": ("suits", "suit"),
    "suits with work": ("suits with work", "suit with work"),
    "cannot be said": ("cannot be judged with the data given",) * 2,
    "does not suit": ("does not suit this plant", "do not suit this plant"),
    "not computed": ("is not computed", "are not computed"),
}


@dataclass(frozen=True)
class Matter:
    """One matter of the answer: what it is about, and the candidates in groups.

    Attributes:
        about: Heading, for example "Discharge temperature, 73 degC today".
        groups: Pairs of words and candidates with their amounts.
    """

    about: str
    groups: tuple[tuple[str, tuple[str, ...]], ...]

    @property
    def text(self) -> str:
        """Return the matter as one sentence."""
        parts = [f"{words}: {', '.join(names)}" for words, names in self.groups]
        return f"{self.about}: {'; '.join(parts)}."


@dataclass(frozen=True)
class Answer:
    """What a reader wants to know first.

    Attributes:
        question: The question the case asks.
        headline: The answer in one sentence.
        matters: What stands behind it: capacity, discharge temperature, pressure, COP.
        remarks: Sentences on safety classes and on what could not be computed.
    """

    question: str
    headline: str
    matters: tuple[Matter, ...]
    remarks: tuple[str, ...]

    @property
    def sentences(self) -> tuple[str, ...]:
        """Return matters and remarks as sentences."""
        return (*(matter.text for matter in self.matters), *self.remarks)


def not_checked() -> tuple[str, ...]:
    """Return what this comparison does not look at, for the reader to have looked at."""
    return NOT_CHECKED


def answer(comparison: Comparison, units: UnitSystem) -> Answer:
    """Return question and answer in plain words.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    Returns: Question, headline and sentences.
    """
    old = comparison.existing.refrigerant.designation
    names = listed([entry.refrigerant.designation for entry in comparison.candidates])
    question = f"The plant runs on {old}. Can it go on with {names} in the same compressors at the same temperatures?"
    if comparison.existing.duty is None:
        headline = f"Nothing can be compared: {old}, the refrigerant in the plant, cannot be computed here."
        return Answer(question, headline, (), (f"{comparison.existing.reason}.",))
    solved = [entry for entry in comparison.candidates if entry.duty is not None]
    matters = _matters(comparison, solved, units) if solved else ()
    missing = [
        f"{entry.refrigerant.designation} is not computed: {entry.reason}."
        for entry in comparison.candidates
        if entry.duty is None
    ]
    return Answer(question, _headline(comparison), matters, (*_class(comparison), *missing))


def _matters(comparison: Comparison, solved: Sequence[Entry], units: UnitSystem) -> tuple[Matter, ...]:
    return (
        _capacity(comparison, solved),
        _discharge(comparison, solved, units),
        _pressure(comparison, solved, units),
        _cop(solved),
    )


def _headline(comparison: Comparison) -> str:
    parts = []
    for verdict, (one, several) in VERDICT_WORDS.items():
        names = [
            entry.refrigerant.designation
            for entry in comparison.candidates
            if verdict == (entry.verdict if entry.status == "ok" else "not computed")
        ]
        if names:
            parts.append(f"{listed(names, 'and')} {one if len(names) == 1 else several}")
    return f"{'; '.join(parts)}. The cautions and the matters not checked here come before any decision."


def _capacity(comparison: Comparison, solved: Sequence[Entry]) -> Matter:
    old, band = comparison.existing.refrigerant.designation, model_band()["capacity"].value
    needed = capacity_needed_W(comparison)

    def share(entry: Entry) -> float:
        assert entry.compressor is not None
        return entry.compressor.cooling_W / needed

    def change(entry: Entry) -> str:
        return f"{entry.relative['capacity'] - 1.0:+.0%}".replace("-", "−")

    groups = (
        (lambda e: share(e) >= 1.0 + band, f"more than needed, beyond the ±{band:.0%} of the model"),
        (lambda e: 1.0 - band < share(e) < 1.0 + band, f"as much as needed, within the ±{band:.0%} of the model"),
        (lambda e: share(e) <= 1.0 - band, f"less than needed, beyond the ±{band:.0%} of the model"),
    )
    return Matter(f"Cooling with the existing compressor, against {old}", _grouped(solved, groups, change))


def _discharge(comparison: Comparison, solved: Sequence[Entry], units: UnitSystem) -> Matter:
    band, today = model_band()["T_discharge"].value, comparison.existing.duty
    assert today is not None

    def amount(entry: Entry) -> str:
        assert entry.duty is not None
        by = units.with_unit("temperature difference", entry.T_discharge_difference_K, decimals=0, signed=True)
        return f"{by}, to {units.with_unit('temperature', entry.duty.T_discharge_K, decimals=0)}"

    def rise(entry: Entry) -> float:
        return entry.T_discharge_difference_K or 0.0

    within = units.with_unit("temperature difference", band, decimals=0)
    groups = (
        (lambda e: rise(e) > band, "hotter"),
        (lambda e: abs(rise(e)) <= band, f"no meaningful difference (within ±{within})"),
        (lambda e: rise(e) < -band, "cooler"),
    )
    start = units.with_unit("temperature", today.T_discharge_K, decimals=0)
    return Matter(f"Discharge temperature, {start} today", _grouped(solved, groups, amount))


def _pressure(comparison: Comparison, solved: Sequence[Entry], units: UnitSystem) -> Matter:
    band, today = model_band()["pressure"].value, comparison.existing.duty
    assert today is not None
    base = today.p_cond_Pa

    def amount(entry: Entry) -> str:
        assert entry.duty is not None
        by = units.text("gauge pressure", entry.duty.p_cond_Pa - base, decimals=1, signed=True)
        label = units.label("pressure").split()[0].replace("psia", "psi")
        return f"{by}\N{NO-BREAK SPACE}{label}"

    def ratio(entry: Entry) -> float:
        return entry.relative["p_cond"]

    groups = (
        (lambda e: ratio(e) > 1.0 + band, "higher"),
        (lambda e: abs(ratio(e) - 1.0) <= band, f"no meaningful difference (within ±{band:.0%})"),
        (lambda e: ratio(e) < 1.0 - band, "lower"),
    )
    return Matter(f"Condensing pressure, {units.with_unit('pressure', base)} today", _grouped(solved, groups, amount))


def _cop(solved: Sequence[Entry]) -> Matter:
    band = model_band()["cop"].value

    def change(entry: Entry) -> str:
        return f"{entry.relative['cop'] - 1.0:+.0%}".replace("-", "−")

    def ratio(entry: Entry) -> float:
        return entry.relative["cop"]

    groups = (
        (lambda e: ratio(e) > 1.0 + band, "higher"),
        (lambda e: abs(ratio(e) - 1.0) <= band, f"no meaningful difference (within ±{band:.0%})"),
        (lambda e: ratio(e) < 1.0 - band, "lower"),
    )
    return Matter("COP at the same duty", _grouped(solved, groups, change))


def _class(comparison: Comparison) -> list[str]:
    old = comparison.existing.refrigerant.safety_class.text
    names = [
        f"{entry.refrigerant.designation} ({entry.refrigerant.safety_class.text})"
        for entry in comparison.candidates
        if entry.family == "replace"
    ]
    if not names:
        return []
    verb = "is" if len(names) == 1 else "are"
    return [
        f"{listed(names, 'and')} {verb} of a less mild safety class than the plant was built for ({old}): by default a "
        "new, purpose-built plant, not a conversion of this one."
    ]


Group = tuple[Callable[[Entry], bool], str]


def _grouped(
    entries: Sequence[Entry], groups: Sequence[Group], amount: Callable[[Entry], str]
) -> tuple[tuple[str, tuple[str, ...]], ...]:
    """Return the groups that have a member: their words, and each member with its amount."""
    found = (
        (words, tuple(f"{e.refrigerant.designation} ({amount(e)})" for e in entries if belongs(e)))
        for belongs, words in groups
    )
    return tuple((words, names) for words, names in found if names)
