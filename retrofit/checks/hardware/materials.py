"""Rows on what is in the plant: charge and receiver, oil, seals, drier, metals and the controller."""

from __future__ import annotations

from collections.abc import Iterator

from retrofit.checks.hardware.rows import Bound, Matter, View, answered, judged, stated
from retrofit.refrigerants import Refrigerant, find
from retrofit.study import Component, Measure
from retrofit.study.gaps import Gap, not_given
from retrofit.units import quantity

CHLORINATED = ("CFC", "HCFC", "HCFO", "chloroalkene")
AMMONIA, IODIDE = "R717", "R13I1"
COPPERS = ("copper", "brass")


def _parts(refrigerant: Refrigerant) -> dict[str, Refrigerant]:
    return {name: find(name) for name, _ in refrigerant.composition}


def has_chlorine(refrigerant: Refrigerant) -> bool:
    """Return whether a component of a refrigerant holds chlorine, by its group in the catalogue."""
    return any(part.substance_group in CHLORINATED for part in _parts(refrigerant).values())


def charge(view: View) -> Iterator[Component]:
    """Give a first estimate of the charge."""
    filling = view.numbers.filling
    name, ask = "Charge", "Weigh what is recovered; charge 85 to 90 % first, then by sight glass, level or subcooling."
    source = "common practice: the same volume of liquid, within a tenth either way"
    if filling is None:
        yield stated(Matter("charge", name, "", ask=ask), "unknown", [view.numbers.missing["filling"]], source)
        return
    today = filling.old_kg
    measures = (
        Measure("Charge expected", "mass", today, filling.expected_kg),
        Measure("Lowest of the estimate", "mass", None, filling.lowest_kg),
        Measure("Highest of the estimate", "mass", None, filling.highest_kg),
    )
    fact = f"About {filling.expected_kg / today:.2f} times today's charge by the density of the liquid."
    words = "a first estimate, right within a tenth"
    matter = Matter("charge", name, fact, measures[: 1 if view.is_today else 3], (), ask, words)
    yield stated(matter, "keep" if view.is_today else "adjust", source=source)


def receiver(view: View) -> Iterator[Component]:
    """Compare the receiver with the charge pumped down."""
    filling, bound = view.numbers.filling, Bound(view.limits["receiver_fill"])
    name, ask = "Receiver", "How much of the charge is pumped down, and into which vessels."
    if view.case.receiver is not None and not view.case.receiver.is_there:
        yield stated(Matter("receiver", name, "The plant has no receiver."), "keep")
        return
    gaps = [not_given("receiver.volume")] if view.case.receiver is None else []
    gaps += [view.numbers.missing["filling"]]
    if filling is None or view.case.receiver is None or filling.receiver_share.new is None:
        matter = Matter("receiver", name, "", (), (bound,), ask)
        if any(gaps):
            yield judged(matter, [], gaps)
        else:
            no_liquid = judged(matter, [], [Gap("no liquid at that temperature within the model")])
            yield answered(view, matter, "receiver", no_liquid)
        return
    share = filling.receiver_share
    measures = (Measure("Fill with the whole charge", "fraction", share.old, share.new),)
    fact = f"The whole charge fills {share.new:.0%} of it at {quantity('temperature', filling.T_receiver_K, '.0f')}"
    level, today = bound.level(share.new), bound.level(share.old)
    if level == "stop" and today == "stop":
        # It does not hold today's charge either, so another refrigerant is no reason to change it.
        level = "work"
        fact += ", as it does not hold today's either"
    yield judged(Matter("receiver", name, f"{fact}.", measures, (bound,), ask), [level], gaps)


def oil(view: View) -> Iterator[Component]:
    """Say whether the oil has to be changed and how much of the old one would be left."""
    bound, left = Bound(view.limits["residual_oil"]), view.numbers.residual_oil
    here, usual = view.case.plant.oil, view.entry.refrigerant.lubricants
    level = view.level("oil")
    ask = "Oil, grade and viscosity that the maker asks for; a sample of what is inside; the limit of old oil."
    fact = view.fact("oil", f"Usual {usual.text or 'not stated'}; in the plant {here or 'not stated'}.")
    gaps = [Gap("the kind of oil, `oil` in [plant]", ("plant.oil",))] if here in (None, "unknown", "mixed") else []
    source = "; ".join(dict.fromkeys((usual.source or "catalogue, which states none", bound.limit.source)))
    if view.is_today:
        matter = Matter("oil", "Compressor oil", f"In the plant {here or 'not stated'}.", (), (), ask)
        yield judged(matter, [], gaps, usual.source or "catalogue, which states none")
        return
    measures = (Measure("Old oil left", "fraction", 1.0, left),) if level == "work" else ()
    matter = Matter("oil", "Compressor oil", fact, measures, (bound,), ask)
    if level == "unknown" and not gaps:  # the catalogue states no usual oil
        yield answered(view, matter, "oil", judged(matter, [level], gaps, source))
    elif level != "work":
        yield judged(matter, [level], gaps, source)
    elif left is None:
        yield stated(matter, "replace", [view.numbers.missing["residual_oil"]], source)
    else:
        enough = {"stop": "more changes are needed", "work": "often accepted, less is better", None: "within the limit"}
        plan = f"{fact} The changes planned leave {left:.1%} of old oil: {enough[bound.level(left)]}."
        yield stated(Matter("oil", "Compressor oil", plan, measures, (bound,), ask), "replace", source=source)


def elastomers(view: View) -> Iterator[Component]:
    """Say what the change does to seals: they shrink when chlorine goes."""
    old, new = view.comparison.existing.refrigerant, view.entry.refrigerant
    ask = "Material of every seal: shaft, receiver, terminals, valve stems, access valves; the maker's list."
    source = "practice note on elastomer seals after changes of refrigerant"
    fact, verdict = "Materials of the seals are not in the case.", "unknown"
    if view.is_today:
        fact, verdict = "Nothing changes for the seals.", "keep"
    elif has_chlorine(old) and not has_chlorine(new):
        fact = (
            f"Seals swollen by {old.designation}, which holds chlorine, shrink with {new.designation}, which holds "
            "none: change those of receiver, shaft, terminals, valve stems and access valves."
        )
        verdict = "replace"
    matter = Matter("elastomers", "Seals (elastomers)", fact, ask=ask)
    row = stated(matter, verdict, source=source)
    yield answered(view, matter, "seals", row) if verdict == "unknown" else row


def drier(view: View) -> Iterator[Component]:
    """Say that a new filter drier goes in."""
    fact, verdict = "A new filter drier goes in whenever the circuit is opened.", "replace"
    if view.is_today:
        fact, verdict = "The circuit is not opened.", "keep"
    matter = Matter("drier", "Filter drier", fact, ask="A core that suits refrigerant and oil.")
    yield stated(matter, verdict, source="compressor maker's changeover guideline: always a new drier")


def metals(view: View) -> Iterator[Component]:
    """Set the metals of the plant against the refrigerant."""
    found, name = view.case.plant.metals, view.entry.refrigerant.designation
    parts = _parts(view.entry.refrigerant)
    gaps = [not_given("plant.metals")] if found is None else []
    ask = f"Every metal that {name} touches, gaskets, bearings and instruments included."
    source = "material texts: no copper or copper alloys with ammonia; care with zinc and with aluminium-magnesium"

    def row(fact: str, verdict: str) -> Component:
        return stated(Matter("metals", "Metals", fact, ask=ask), verdict, gaps, source)

    here = found or ()
    coppers = [metal for metal in here if metal in COPPERS]
    doubtful = [metal for metal in here if metal in ("zinc", *(("aluminium", "brass") if IODIDE in parts else ()))]
    if AMMONIA in parts and coppers:
        yield row(f"Ammonia attacks copper and its alloys, and the plant has {' and '.join(coppers)}.", "replace")
    elif view.is_today:
        yield row("Nothing changes for the metals.", "keep" if found else "unknown")
    elif found is None:
        yield row("", "unknown")
    elif doubtful:
        doubt = row(f"Whether {name} attacks {' and '.join(doubtful)} is a question to the maker.", "unknown")
        yield answered(view, Matter("metals", "Metals", f"The plant has {' and '.join(doubtful)}."), "metals", doubt)
    else:
        yield row(f"Nothing is known against {', '.join(here)}.", "keep")


def controller(view: View) -> Iterator[Component]:
    """Say what controls and valves that know the refrigerant by software need."""
    kind = view.case.plant.controller
    ask = "Whether the software has this refrigerant, and from which version on."
    facts = {
        "fixed to refrigerant": ("The software holds today's refrigerant: an update or another controller.", "replace"),
        "selectable": ("The refrigerant is chosen in the menu: set it, if it is there.", "adjust"),
        "none": ("No control works with the properties of the refrigerant.", "keep"),
    }
    fact, verdict = facts.get(kind or "", ("", "unknown"))
    if view.is_today and kind is not None:
        fact, verdict = "The software knows today's refrigerant.", "keep"
    gaps = [not_given("plant.controller")] if kind is None else []
    matter = Matter("controller", "Controller software", fact, ask=ask)
    yield stated(matter, verdict, gaps, "notices of makers on changed refrigerants; common practice")


NUMBERED = (charge, receiver, oil)
ALWAYS = (elastomers, drier, metals, controller)
