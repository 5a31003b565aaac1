"""What holding the readings and the duty against the model gave, in words."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from retrofit.checks.readings import Cause, Duty, Held, Outcome, Side, differing, duty_held, readings_held
from retrofit.study import Comparison
from retrofit.study.agreement import Beside, Calibration, Compared, Reason, WhyNot
from retrofit.units import UnitSystem, listed, quantity, told

MOST_CAUSES = 3  # named beside the answer; the table of the readings has all of them
NAMES = {
    Compared.POWER: "power",
    Compared.CURRENT: "current",
    Compared.DISCHARGE: "discharge temperature",
    Compared.COP: "COP on electrical power",
    Compared.CAPACITY: "cooling",
    Compared.HEAT_REJECTED: "heat rejected",
    Compared.HEAT_BALANCE: "heat balance, rejected against taken up",
}
WHY_NOT = {
    WhyNot.NOT_READ: "needs",
    WhyNot.KEY_MISSING: "also needs",
    WhyNot.IN_DOUBT: "in doubt",
    WhyNot.PART_LOAD: "read at part load: which part of the swept volume ran is not known",
    WhyNot.IN_THE_MODEL: "taken into the model, so it cannot test it",
    WhyNot.BY_THE_MODEL: "derived with the model's own volumetric efficiency, so it cannot test it; to test it, read",
    WhyNot.NOT_SOLVED: "the model has no solution at the readings",
    WhyNot.BELOW_RANGE: "less power than the model needs: a motor gives no more than it takes",
    WhyNot.ABOVE_RANGE: "more than motor and drive lose",
}
# Why losses are not taken where there is no ratio to take them from.
NO_RATIO = {
    WhyNot.NOT_READ: "no power was read, nor a current with voltage, phases and power factor",
    WhyNot.KEY_MISSING: "the power of the current is not known",
    WhyNot.IN_DOUBT: "the power read is in doubt",
    WhyNot.PART_LOAD: "the power was read at part load, and which part of the swept volume ran is not known",
    WhyNot.IN_THE_MODEL: "the volumetric efficiency of the model is already made from the power read",
    WhyNot.NOT_SOLVED: "the model has no solution at the readings",
}
ABSOLUTE = (Compared.POWER, Compared.CURRENT, Compared.COP)
RATIOS_STAND = (
    "Until that is settled, power, energy and money of every option may be off as much; COP against today is not."
)
HOT = "Until that is settled, the discharge temperatures of all candidates may be off as much."
COOLS = "Until that is settled, the cooling of every option may be off as much."


def duty_words(comparison: Comparison) -> str:
    """Return what belongs into the answer of a duty that is not what the plant can give; empty if it is.

    Args:
        comparison: A result.
    """
    held = duty_held(comparison)
    if not held.is_named or held.given_W is None or held.share is None:
        return ""
    both = f"{quantity('cooling', held.duty_W, '.4g')}, is {held.share:.0%} of the "
    both += f"{quantity('cooling', held.given_W, '.4g')} that today's plant gives"
    follows = {
        Duty.ABOVE: "correct `swept_volume` or `cooling`; until then candidates are measured against what it gives",
        Duty.BELOW: "correct `cooling` or `swept_volume`, or expect the plant to stand most of the time",
    }
    return f"The duty of the case, {both}: {follows[held.state]}."


def contradiction_words(comparison: Comparison, units: UnitSystem) -> tuple[str, ...]:
    """Return what the readings say against the model of today's plant, sentence by sentence, for beside the answer.

    Args:
        comparison: A result.
        units: The reader's units.
    Returns: The sentences; none if nothing differs, nothing is in doubt and nothing is calibrated.
    """
    held = readings_held(comparison)
    return tuple(told(text, units) for text in (*_differences(held), *_doubts(held), *calibration_words(comparison)))


def _differences(held: tuple[Held, ...]) -> Iterator[str]:
    apart = differing(held)
    if not apart:
        return
    parts = "; ".join(_difference(item) for item in apart)
    yield f"The readings do not agree with the model of today's plant: {parts}."
    likely = likely_causes(apart)[:MOST_CAUSES]
    if likely:
        yield f"Likely causes: {'; '.join(cause.text for cause in likely)}."
        yield f"{likely[0].todo[:1].upper()}{likely[0].todo[1:]}."
    found = {item.beside.quantity for item in apart}
    if found & set(ABSOLUTE):
        yield RATIOS_STAND
    if Compared.DISCHARGE in found:
        yield HOT
    if found & {Compared.CAPACITY, Compared.HEAT_REJECTED}:
        yield COOLS


def likely_causes(held: Iterable[Held]) -> tuple[Cause, ...]:
    """Return what likely makes quantities differ: first what explains each of them best, each cause once.

    Args:
        held: Quantities held against the model.
    """
    ranks = [item.causes for item in held]
    longest = max((len(causes) for causes in ranks), default=0)
    return tuple(dict.fromkeys(causes[place] for place in range(longest) for causes in ranks if place < len(causes)))


def _difference(item: Held) -> str:
    beside = item.beside
    assert beside.read is not None
    assert beside.modelled is not None
    read, modelled = shown(beside, beside.read), shown(beside, beside.modelled)
    modelled_words = "from cooling and power" if beside.quantity == Compared.HEAT_BALANCE else "by the model"
    name = "heat rejected" if beside.quantity == Compared.HEAT_BALANCE else NAMES[beside.quantity]
    return f"{name} {read} read, {modelled} {modelled_words} ({by_words(beside)})"


def shown(beside: Beside, value: float) -> str:
    """Return a value of a quantity for a sentence.

    Args:
        beside: The quantity.
        value: As read or modelled. [SI]
    """
    spec = {"temperature": ".0f", "ratio": ".2f"}.get(beside.kind, ".3g")
    return f"{value:{spec}}" if beside.kind == "ratio" else quantity(beside.kind, value, spec)


def by_words(beside: Beside) -> str:
    """Return how far a reading lies from the model, with its sign; empty if the two cannot be compared.

    Args:
        beside: The quantity.
    """
    difference = beside.difference
    if difference is None:
        return ""
    is_kelvin = beside.kind == "temperature"
    seen = round(difference, 0 if is_kelvin else 2)
    sign = "+" if seen > 0.0 else "−" if seen < 0.0 else ""
    return sign + (quantity("temperature difference", abs(seen), ".0f") if is_kelvin else f"{abs(seen):.0%}")


def expected_words(comparison: Comparison) -> tuple[str, ...]:
    """Return how far readings that the model expects after a change may be off, as today's are.

    Args:
        comparison: A result.
    """
    apart = differing(readings_held(comparison))
    return tuple(
        f"Today's {NAMES[item.beside.quantity]} reads {by_words(item.beside)} against the model: expect as much off "
        "what stands here."
        for item in apart
        if item.beside.quantity in (Compared.POWER, Compared.DISCHARGE)
    )


def _doubts(held: tuple[Held, ...]) -> Iterator[str]:
    doubted = [item for item in held if item.beside.reason is not None and item.beside.reason.why == WhyNot.IN_DOUBT]
    if doubted:
        names = listed([NAMES[item.beside.quantity] for item in doubted], "and")
        titles = "; ".join(dict.fromkeys(item.beside.reason.text for item in doubted if item.beside.reason))
        yield f"Not held against the model, as readings contradict one another: {names}{f' ({titles})' * bool(titles)}."


def outcome_words(held: Held) -> str:
    """Return the outcome of a comparison, with its limit if there was one.

    Args:
        held: The quantity held against the model.
    """
    if held.outcome in (Outcome.AGREES, Outcome.DIFFERS):
        unit = quantity("temperature difference", held.limit, "g") if held.beside.kind == "temperature" else ""
        within = unit or f"{held.limit:.0%}"
        beyond = "" if held.side is None else f", {'above' if held.side == Side.ABOVE else 'below'} the model"
        return f"{held.outcome}{beyond} (limit ±{within})"
    return str(held.outcome)


def reason_words(reason: Reason) -> str:
    """Return why two numbers are not compared.

    Args:
        reason: The reason.
    """
    words = WHY_NOT[reason.why]
    if reason.why in (WhyNot.NOT_READ, WhyNot.KEY_MISSING, WhyNot.BY_THE_MODEL):
        return f"{words} {_keys(reason)}"
    if reason.why == WhyNot.IN_DOUBT:
        return f"{words}: {_keys(reason)}{f' ({reason.text})' * bool(reason.text)}"
    return f"{words}{f': {reason.text}' * bool(reason.text)}"


def _keys(reason: Reason) -> str:
    return listed([key.rpartition(".")[2] for key in reason.keys], "and")


def calibration_words(comparison: Comparison) -> tuple[str, ...]:
    """Return what is calibrated by the power read, or why it is not; empty if the case does not ask for it.

    Args:
        comparison: A result.
    """
    found = comparison.calibration
    if found is None:
        return ()
    if found.is_applied and found.ratio is not None and found.efficiency is not None:
        return (
            f"Calibrated: {_powers(found)}, {found.ratio:.2f} times as much. Motor and drive count as "
            f"{found.efficiency:.1%} efficient for every option, in electrical power, energy, emissions and money; COP "
            f"against today is unaffected.{_kept_by_makers(comparison)}",
        )
    return (f"Not calibrated, though the case asks for it: {_why_not_calibrated(found)}.",)


def _kept_by_makers(comparison: Comparison) -> str:
    """Say whose year keeps the seasonal COP of its maker, which has the losses of its own motors in it."""
    options = comparison.case.options.by_refrigerant if comparison.case.options else {}
    names = [name for name, option in options.items() if option.seasonal_cop is not None]
    return f" A new plant for {listed(names, 'and')} keeps the seasonal COP of its maker." if names else ""


def _powers(found: Calibration) -> str:
    assert found.read_W is not None
    assert found.modelled_W is not None
    read, modelled = (quantity("power", power, ".4g") for power in (found.read_W, found.modelled_W))
    return f"power {read} read, {modelled} by the model"


def _why_not_calibrated(found: Calibration) -> str:
    reason, (low, high) = found.reason, found.allowed
    if reason is None or found.ratio is None:
        return NO_RATIO[reason.why if reason else WhyNot.NOT_READ] + (
            f" ({reason.text})" if reason and reason.text else ""
        )
    return (
        f"{_powers(found)}, {found.ratio:.3f} times as much, is {WHY_NOT[reason.why]}. Allowed are {low:g} to "
        f"{high:g} times the power at the shaft"
    )
