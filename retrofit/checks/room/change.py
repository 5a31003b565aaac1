"""The change of safety class: which steps it takes, why that is a gate, and what is asked where."""

from __future__ import annotations

from retrofit.case import areas
from retrofit.checks.room.lists import asked, read
from retrofit.refrigerants import parse_safety_class
from retrofit.refrigerants.safety import FLAMMABILITY_RANK, TOXICITY_RANK, SafetyClass
from retrofit.study.room import ClassChange, Question

LEVELS = ("stop", "unknown", "work", "note", "")


def class_change(old: str, new: str, jurisdiction: str | None) -> ClassChange:
    """Return a change of safety class with its reasons.

    Args:
        old: Class of the refrigerant the plant was built for; empty if not stated.
        new: Class of the candidate; empty if not stated.
        jurisdiction: Whose law, None if not stated.
    """
    names = steps(parse_safety_class(old), parse_safety_class(new))
    table = [read("change")["step"][name] for name in names]
    worst = min(table, key=lambda step: LEVELS.index(step["level"]))
    return ClassChange(
        old=old,
        new=new,
        step=", ".join(names),
        level=worst["level"],
        title="; ".join(step["title"] for step in table),
        reasons=tuple(reason for step in table for reason in step["reasons"]),
        asked=what_is_asked(jurisdiction) if worst["level"] else (),
    )


def steps(old: SafetyClass | None, new: SafetyClass | None) -> tuple[str, ...]:
    """Return the steps from one class to another, by their names in change.toml; "none" alone if there is none.

    Args:
        old: Class of the refrigerant the plant was built for, None if not stated.
        new: Class of the candidate, None if not stated.
    """
    if old is None or new is None:
        return ("unknown",)
    holds = {
        "more-flammable": FLAMMABILITY_RANK[new.flammability] > FLAMMABILITY_RANK[old.flammability],
        "more-toxic": TOXICITY_RANK[new.toxicity] > TOXICITY_RANK[old.toxicity],
        "flammable-to-flammable": old.flammability != "1" and new.flammability != "1",
        "from-toxic": old.toxicity == "B",
        "flammable-to-not": old.flammability != "1" and new.flammability == "1",
    }
    return tuple(name for name, is_so in holds.items() if is_so) or ("none",)


def what_is_asked(jurisdiction: str | None) -> tuple[Question, ...]:
    """Return what standard, listing and law ask on a change of class: everywhere, and in a jurisdiction.

    Args:
        jurisdiction: Whose law; None if not stated: then of every one held here.
    """
    rows = read("change")["asked"]
    held = sorted({name for row in rows for name in row["jurisdictions"]})
    names = held if jurisdiction is None else [name for name in held if name in areas(jurisdiction)]
    found = [asked(row) for row in rows if not row["jurisdictions"] or set(row["jurisdictions"]) & set(names)]
    if jurisdiction is not None and names:
        return tuple(found)
    which = (
        "`jurisdiction` in [law] is not given" if jurisdiction is None else f"nothing is held here for {jurisdiction}"
    )
    text = f"Look up law and listing rules at the place of the plant: {which}; rows are held for {' and '.join(held)}."
    return (*found, Question("jurisdiction", text, (), "", None, (which,), "limits of this tool", "practice"))


def asked_text(jurisdiction: str | None) -> str:
    """Return what is asked in a jurisdiction beyond what is asked everywhere, for the advice of a finding.

    Args:
        jurisdiction: Whose law, None if not stated.
    """
    everywhere = {row["text"] for row in read("change")["asked"] if not row["jurisdictions"]}
    return " ".join(question.text for question in what_is_asked(jurisdiction) if question.text not in everywhere)
