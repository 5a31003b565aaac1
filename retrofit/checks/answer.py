"""The question and the answer in plain words, made from a result."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from retrofit.checks.gates import capacity_needed_W
from retrofit.checks.reading_words import contradiction_words, duty_words
from retrofit.checks.readings import Duty, duty_held
from retrofit.refrigerants import change_cautions
from retrofit.study import Comparison, Entry, Family, Finding, Verdict
from retrofit.study.bands import groups_alike, on_the_plant, pair_band, percent_text
from retrofit.units import UnitSystem, listed, told

# In the order of the headline: what may be done comes before what may not.
VERDICT_WORDS = {
    Verdict.SUITABLE: ("is suitable", "are suitable"),
    Verdict.MODIFICATIONS: ("is suitable with modifications", "are suitable with modifications"),
    Verdict.OPEN: ("is open: decisive facts are missing", "are open: decisive facts are missing"),
    Verdict.NOT_SUITABLE: ("is not suitable", "are not suitable"),
}
NOT_COMPUTED = ("is not computed", "are not computed")
READ_FIRST = "Read the cautions and the open points before deciding."


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
        matters: What stands behind it: capacity, discharge temperature, pressure, COP, which candidates are alike.
        remarks: Sentences on safety classes and on what could not be computed.
        duty: What of the headline is on a duty that is not what the plant can give; empty if it is.
        contradictions: Sentences on what the readings say against the model, and what is calibrated by them.
    """

    question: str
    headline: str
    matters: tuple[Matter, ...]
    remarks: tuple[str, ...]
    duty: str = ""
    contradictions: tuple[str, ...] = ()

    @property
    def sentences(self) -> tuple[str, ...]:
        """Return matters and remarks as sentences."""
        return (*(matter.text for matter in self.matters), *self.remarks)


def answer(comparison: Comparison, units: UnitSystem) -> Answer:
    """Return question and answer in plain words.

    Args:
        comparison: An assessed result.
        units: The reader's units.
    Returns: Question, headline and sentences.
    """
    old = comparison.existing.refrigerant.designation
    question = question_of(comparison)
    if comparison.existing.duty is None:
        headline = f"Nothing can be compared: {old}, the refrigerant in the plant, cannot be computed here."
        return Answer(question, headline, _open(comparison), (f"{comparison.existing.reason}.",))
    solved = [entry for entry in comparison.candidates if entry.duty is not None]
    matters = (*_open(comparison), *(_matters(comparison, solved, units) if solved else ()))
    missing = [
        f"{entry.refrigerant.designation} is not computed, so it is not priced, ranked or recommended: {entry.reason}."
        for entry in comparison.candidates
        if entry.duty is None
    ]
    return Answer(
        question,
        " ".join(filter(None, (duty := told(duty_words(comparison), units), _headline(comparison)))),
        matters,
        (*_class(comparison), *missing),
        duty,
        contradiction_words(comparison, units),
    )


def question_of(comparison: Comparison) -> str:
    """Return the question that a case asks: keep, convert or replace.

    Args:
        comparison: A result.
    """
    old = comparison.existing.refrigerant.designation
    parts = [f"keep {old}"]
    for family, words in ((Family.CONVERT, "convert the plant to"), (Family.REPLACE, "replace it by a new one for")):
        names = [entry.refrigerant.designation for entry in comparison.candidates if entry.family == family]
        parts += [f"{words} {listed(names)}"] if names else []
    return (
        f"The plant runs on {old}. What is to be done: {', '.join(parts[:-1])}{' or ' * (len(parts) > 1)}{parts[-1]}?"
    )


def _open(comparison: Comparison) -> tuple[Matter, ...]:
    """Return the decisive facts that are missing, each with the keys that settle it and the options it holds open."""
    groups: dict[str, list[str]] = {}
    for entry in comparison.entries:
        if entry.verdict == Verdict.OPEN:
            for words in dict.fromkeys(open_words(finding) for finding in entry.open_facts):
                groups.setdefault(words, []).append(entry.refrigerant.designation)
    if not groups:
        return ()
    return (Matter("Decisive facts missing", tuple((words, tuple(names)) for words, names in groups.items())),)


def open_words(finding: Finding) -> str:
    """Return a decisive fact that is missing in a few words, with the keys that settle it.

    Args:
        finding: A finding of level "unknown".
    """
    keys = f" ({', '.join(finding.missing)})" if finding.missing else ""
    return f"{finding.title[:1].lower()}{finding.title[1:]}{keys}"


def _matters(comparison: Comparison, solved: Sequence[Entry], units: UnitSystem) -> tuple[Matter, ...]:
    here = [entry for entry in solved if entry.compressor is not None]  # a new plant is another machine
    found = (
        *((_capacity(comparison, here), _installed(comparison, here, units)) if here else ()),
        _discharge(comparison, solved, units),
        _pressure(comparison, solved, units),
        _cop(comparison, solved),
        _among(here),
        _hardware(comparison, here),
    )
    return tuple(matter for matter in found if matter.groups)


def option_name(entry: Entry) -> str:
    """Return an option in a few words: keep, convert to or a new plant for its refrigerant.

    Args:
        entry: The option.
    """
    name = entry.refrigerant.designation
    if entry.family == Family.KEEP:
        return f"keeping {name}"
    return f"a new plant for {name}" if entry.is_new_plant else name


def _headline(comparison: Comparison) -> str:
    """Return the verdicts, keeping today's refrigerant among them; what is not computed stands apart."""
    parts = []
    computed = [entry for entry in comparison.entries if entry.is_computed or entry.stops]
    for verdict, (one, several) in VERDICT_WORDS.items():
        names = [option_name(entry) for entry in computed if entry.verdict == verdict]
        if names:
            parts.append(f"{listed(names, 'and')} {one if len(names) == 1 else several}")
    if missing := [option_name(entry) for entry in comparison.entries if entry not in computed]:
        parts.append(f"{listed(missing, 'and')} {NOT_COMPUTED[len(missing) > 1]}")
    text = "; ".join(parts)
    return " ".join((f"{text[:1].upper()}{text[1:]}.", *left_words(comparison), READ_FIRST))


def left_words(comparison: Comparison) -> tuple[str, ...]:
    """Return what is left where no conversion passes the checks: keep, replace, or nothing; nothing otherwise.

    Args:
        comparison: An assessed result.
    """
    conversions = [entry for entry in comparison.candidates if not entry.is_new_plant]
    if not conversions or any(entry.can_be_chosen for entry in conversions):
        return ()
    left = [option_name(entry) for entry in comparison.entries if entry.can_be_chosen]
    if not any(entry.is_new_plant for entry in comparison.entries if entry.can_be_chosen):
        left.append("a new plant, which [options] can describe by new_plant and charge")
    return (f"No conversion passes the checks. What is left: {listed(left)}.",)


def _capacity(comparison: Comparison, solved: Sequence[Entry]) -> Matter:
    """Return the matter of cooling: on the plant as installed where that could be computed, and saying which."""
    old, needed = comparison.existing.refrigerant.designation, capacity_needed_W(comparison)
    held = Held(comparison, solved, "capacity")
    band, within = held.band, percent_text(held.narrowest)
    # What is needed is at most what the plant gives: a duty beyond that is not met by a candidate that gives as much.
    measure = "today's plant gives" if duty_held(comparison).state == Duty.ABOVE else "needed"
    is_mixed = len({entry.plant is None for entry in solved}) > 1

    def share(entry: Entry) -> float:
        if entry.plant is not None:
            return entry.plant.full.cooling_W / entry.plant.operation.cooling_needed_W
        assert entry.compressor is not None
        return entry.compressor.cooling_W / needed

    def change(entry: Entry) -> str:
        name = "capacity" if entry.plant is None else "plant_capacity"
        basis = ", same compressor" if is_mixed and entry.plant is None else ""
        return _percent(entry.relative[name]) + basis + held.own(entry)

    groups = (
        (lambda e: share(e) >= 1.0 + band(e), f"more than {measure}, beyond the ±{within} of the model"),
        (
            lambda e: 1.0 - band(e) < share(e) < 1.0 + band(e),
            f"as much as {measure}, within the ±{within} of the model",
        ),
        (lambda e: share(e) <= 1.0 - band(e), f"less than {measure}, beyond the ±{within} of the model"),
    )
    basis = (
        "Cooling with the existing compressor"
        if all(entry.plant is None for entry in solved)
        else "Cooling with the existing compressor and heat exchangers (same plant)"
    )
    return Matter(f"{basis}, against {old}", _grouped(solved, groups, change))


def _percent(ratio: float) -> str:
    """Return a ratio to today as a change in whole percent; none has no sign."""
    text = f"{ratio - 1.0:+.0%}".replace("-", "−")
    return "0%" if text[1:] == "0%" else text


def _installed(comparison: Comparison, solved: Sequence[Entry], units: UnitSystem) -> Matter:
    """Return how the plant as installed meets the cooling it has to deliver; no groups without that basis."""
    operations = [entry.plant.operation for entry in solved if entry.plant is not None]
    if not operations:
        return Matter("The plant as installed", ())
    needed, held = operations[0].cooling_needed_W, Held(comparison, solved, "capacity")
    band, within = held.band, percent_text(held.narrowest)

    def lacks(entry: Entry) -> float:
        return entry.plant.operation.unmet_W / needed if entry.plant else -1.0

    groups = (
        (lambda e: lacks(e) == 0.0, "meets it"),
        (lambda e: 0.0 < lacks(e) <= band(e), f"lacks less than the ±{within} of the model, running all the time"),
        (lambda e: lacks(e) > band(e), "lacks cooling, running all the time"),
        (lambda e: lacks(e) < 0.0, "not computed on this basis"),
    )
    delivered = units.with_unit("cooling", needed)
    if duty_held(comparison).state == Duty.ABOVE:
        delivered = f"{delivered}, all that today's plant gives,"
    about = f"The plant as installed, {delivered} to deliver; COP against today at the same cooling"
    return Matter(about, _grouped(solved, groups, lambda entry: _running(comparison, entry)))


def _running(comparison: Comparison, entry: Entry) -> str:
    """Return how a refrigerant runs in the plant as installed, and its COP there; empty without that basis."""
    if entry.plant is None:
        return ""
    run, cop = entry.plant.operation, entry.relative["plant_cop_same_cooling"]
    band = pair_band(comparison.existing, entry, "cop")
    near = "≈\N{NO-BREAK SPACE}" if abs(cop - 1.0) <= band else ""
    share = run.unmet_W / run.cooling_needed_W
    of = "of its steps" if run.control == "steps" else "speed"
    parts = [f"at {run.speed_fraction:.0%} {of}"] if run.speed_fraction < 1.0 else []
    if run.run_time_fraction < 1.0 or not parts:
        parts.insert(0, f"{run.run_time_fraction:.0%} of the time")
    amount = " ".join(parts)
    if share > 0.0:
        amount = f"−{share:.0%}" if share >= 0.01 else "less than 1%"
    return f"{amount}, COP {near}{_percent(cop)}"


def _hardware(comparison: Comparison, solved: Sequence[Entry]) -> Matter:
    """Return what has to be done to the hardware: candidates that need the same stand together.

    What today's refrigerant would need just as well is told of it, and not of the candidates again.
    """
    today = comparison.existing
    groups: dict[str, list[str]] = {}
    for verdict, deed in (("replace", "replace"), ("adjust", "adjust or prove")):
        already = _with_verdict(today, verdict)
        if already:
            groups[f"{deed}, already today: {_short(already)}"] = [today.refrigerant.designation]
        for entry in solved:
            if names := [name for name in _with_verdict(entry, verdict) if name not in already]:
                groups.setdefault(f"{deed} {_short(names)}", []).append(entry.refrigerant.designation)
    for entry in solved:
        if count := len(_with_verdict(entry, "unknown")):
            words = f"{count} component{'s' if count > 1 else ''} not known for lack of data"
            groups.setdefault(words, []).append(entry.refrigerant.designation)
    return Matter("Hardware", tuple((words, tuple(names)) for words, names in groups.items()))


def _with_verdict(entry: Entry, verdict: str) -> list[str]:
    return [item.name for item in entry.hardware if item.verdict == verdict]


def _short(components: Sequence[str]) -> str:
    """Return names of components as running text: each with a small first letter."""
    return "; ".join(f"{name[:1].lower()}{name[1:]}" for name in components)


def _discharge(comparison: Comparison, solved: Sequence[Entry], units: UnitSystem) -> Matter:
    held, today = Held(comparison, solved, "T_discharge"), comparison.existing.duty
    band = held.band
    assert today is not None

    def amount(entry: Entry) -> str:
        assert entry.duty is not None
        by = units.with_unit("temperature difference", entry.T_discharge_difference_K, decimals=0, signed=True)
        to = units.with_unit("temperature", entry.duty.T_discharge_K, decimals=0)
        return f"{by}, to {to}{held.own(entry, kelvin)}"

    def kelvin(difference_K: float) -> str:
        return units.with_unit("temperature difference", difference_K, decimals=0)

    def rise(entry: Entry) -> float:
        return entry.T_discharge_difference_K or 0.0

    groups = (
        (lambda e: rise(e) > band(e), "hotter"),
        (lambda e: abs(rise(e)) <= band(e), f"no meaningful difference ({held.within(kelvin)})"),
        (lambda e: rise(e) < -band(e), "cooler"),
    )
    start = units.with_unit("temperature", today.T_discharge_K, decimals=0)
    return Matter(f"Discharge temperature, {start} today", _grouped(solved, groups, amount))


def _pressure(comparison: Comparison, solved: Sequence[Entry], units: UnitSystem) -> Matter:
    held, today = Held(comparison, solved, "pressure"), comparison.existing.duty
    assert today is not None
    base = today.p_cond_Pa

    def amount(entry: Entry) -> str:
        assert entry.duty is not None
        by = units.with_unit("pressure difference", entry.duty.p_cond_Pa - base, decimals=1, signed=True)
        return f"{by}{held.own(entry)}"

    def ratio(entry: Entry) -> float:
        return entry.relative["p_cond"]

    about = f"Condensing pressure, {units.with_unit('pressure', base)} today"
    return Matter(about, _grouped(solved, held.groups(ratio), amount))


def _cop(comparison: Comparison, solved: Sequence[Entry]) -> Matter:
    held = Held(comparison, solved, "cop")

    def change(entry: Entry) -> str:
        return _percent(entry.relative["cop"]) + held.own(entry)

    def ratio(entry: Entry) -> float:
        return entry.relative["cop"]

    return Matter("COP at the same duty", _grouped(solved, held.groups(ratio), change))


def _among(solved: Sequence[Entry]) -> Matter:
    """Return which candidates show no meaningful difference among themselves in cooling and in COP."""
    installed = on_the_plant(solved)
    kinds = (
        ("capacity", "cooling, same plant" if installed else "cooling, same compressor"),
        ("cop", "COP, same plant and cooling" if installed else "COP, same duty"),
    )
    found = []
    for quantity, words in kinds:
        groups = groups_alike(solved, quantity)
        names = tuple(" / ".join(entry.refrigerant.designation for entry in group) for group in groups)
        everyone = tuple(entry.refrigerant.designation for entry in solved)
        alike, apart = f"no meaningful difference in {words}", f"every two differ in {words}"
        found.append((alike, names) if names else (apart, everyone))
    return Matter("Among the candidates", tuple(found) if len(solved) > 1 else ())


def _class(comparison: Comparison) -> list[str]:
    old = comparison.existing.refrigerant.safety_class.text
    names = [
        f"{entry.refrigerant.designation} ({entry.refrigerant.safety_class.text})"
        for entry in comparison.candidates
        if entry.family == Family.REPLACE and change_cautions(comparison.existing.refrigerant, entry.refrigerant)
    ]
    if not names:
        return []
    verb = "has" if len(names) == 1 else "have"
    return [
        f"{listed(names, 'and')} {verb} a more hazardous safety class than the plant was designed for ({old}): a "
        "new, purpose-built plant, not a conversion of this one."
    ]


@dataclass(frozen=True)
class Held:
    """The band that each candidate's difference from today is held against."""

    comparison: Comparison
    solved: Sequence[Entry]
    name: str

    def band(self, entry: Entry) -> float:
        """Return the band of a candidate against today's refrigerant. [- or K]"""
        return pair_band(self.comparison.existing, entry, self.name)

    @property
    def narrowest(self) -> float:
        """Return the narrowest of these bands, which the words of a group state. [- or K]"""
        return min(self.band(entry) for entry in self.solved)

    def own(self, entry: Entry, show: Callable[[float], str] = percent_text) -> str:
        """Return what follows the amount of a candidate whose band is wider than the one stated."""
        band = self.band(entry)
        return f", its band ±{show(band)}" if band > self.narrowest else ""

    def within(self, show: Callable[[float], str] = percent_text) -> str:
        """Return inside of what there is no meaningful difference, in words."""
        is_one = all(self.band(entry) == self.narrowest for entry in self.solved)
        return f"within ±{show(self.narrowest)}{'' if is_one else ', or the band named'}"

    def groups(self, ratio: Callable[[Entry], float]) -> tuple[Group, ...]:
        """Return the groups of a ratio to today: above the band, inside and below."""
        return (
            (lambda e: ratio(e) > 1.0 + self.band(e), "higher"),
            (lambda e: abs(ratio(e) - 1.0) <= self.band(e), f"no meaningful difference ({self.within()})"),
            (lambda e: ratio(e) < 1.0 - self.band(e), "lower"),
        )


Group = tuple[Callable[[Entry], bool], str]


def _grouped(
    entries: Sequence[Entry], groups: Sequence[Group], amount: Callable[[Entry], str]
) -> tuple[tuple[str, tuple[str, ...]], ...]:
    """Return the groups that have a member: their words, and each member with its amount."""
    found = ((words, tuple(_named(e, amount(e)) for e in entries if belongs(e))) for belongs, words in groups)
    return tuple((words, names) for words, names in found if names)


def _named(entry: Entry, amount: str) -> str:
    return entry.refrigerant.designation + (f" ({amount})" if amount else "")
