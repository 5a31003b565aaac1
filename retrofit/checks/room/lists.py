"""Lists and questions of the room checks, read from classes.toml and questions.toml."""

from __future__ import annotations

import tomllib
from functools import cache
from importlib.resources import files
from typing import Any

from retrofit.checks.room.places import holds_there
from retrofit.refrigerants import Refrigerant
from retrofit.study.room import ClassList, Question

NOT_STATED = "not stated"
TOPICS = ("ignition sources", "electrical", "ventilation", "detection", "signage")


@cache
def read(name: str) -> dict[str, Any]:
    """Return one TOML file of this room.

    Args:
        name: Its name without ending.
    """
    return tomllib.loads(files("retrofit.checks.room").joinpath(f"{name}.toml").read_text(encoding="utf-8"))


def class_lists(safety_class: str) -> tuple[ClassList, ...]:
    """Return what a safety class asks to look at: ignition sources, electrical, ventilation, detection, signage.

    Args:
        safety_class: Such as "A2L"; empty if not stated, which is treated as flammable and toxic.
    """
    name = safety_class or NOT_STATED
    entries = [entry for topic in TOPICS for entry in read("classes")["list"] if entry["topic"] == topic]
    return tuple(
        ClassList(entry["topic"], tuple(entry["items"]), entry["source"], entry["basis"])
        for entry in entries
        if name in entry["classes"]
    )


def questions(
    refrigerant: Refrigerant, families: tuple[str, ...], jurisdiction: str | None = None
) -> tuple[Question, ...]:
    """Return what code families ask about where a charge meets a room.

    Args:
        refrigerant: The refrigerant.
        families: The code families.
        jurisdiction: Whose law, None if not stated.
    """
    name = refrigerant.safety_class.text
    return tuple(
        asked(entry)
        for entry in read("questions")["question"]
        if (not entry["families"] or set(entry["families"]) & set(families))
        and holds_there(tuple(entry.get("jurisdictions", ())), jurisdiction)
        and (not entry["classes"] or not name or name in entry["classes"])
    )


def asked(entry: dict[str, Any]) -> Question:
    """Return an entry of a file as a question without a number.

    Args:
        entry: The entry: topic, text, source and basis.
    """
    return Question(entry["topic"], entry["text"], (), "", None, (), entry["source"], entry["basis"])
