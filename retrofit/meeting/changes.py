"""What a form asks for, as a change of the state: nothing here computes, and nothing names a file."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import replace

from retrofit.case.values import designation_of, is_hidden
from retrofit.errors import QuantityError
from retrofit.meeting.desk import Source
from retrofit.meeting.inputs import LABELS, LONGEST_INPUT, SIDES, nudged, offered, text_now
from retrofit.meeting.refused import RefusedError
from retrofit.meeting.state import State, with_item
from retrofit.meeting.weighing import HEAVIEST, USUAL
from retrofit.study.criteria import CRITERIA
from retrofit.units import UNIT_SYSTEMS

LONGEST_NOTE = 2000  # characters
MOST_ADDED = 20
MEETING = "meeting"  # what a note is about that is about no refrigerant

Form = Mapping[str, str]
Act = Callable[["Asked", str], tuple[State, str]]


class Asked:
    """One form against a state: what it asks for, and the names and keys it may ask about."""

    def __init__(self, source: Source, form: Form, now: State, seen: State, passed_over: Form) -> None:
        self.source, self.form, self.now, self.seen, self.passed_over = source, form, now, seen, passed_over
        self.keys = offered(source.data)
        self.names = (*source.case.compare.candidates, *now.added)

    def name(self, text: str) -> str:
        """Return a candidate of this meeting by its designation; raises RefusedError for another."""
        if text not in self.names:
            raise RefusedError("this candidate is not in the comparison any more")
        return text


def change_of(source: Source, form: Form) -> Callable[[State, State, Form], tuple[State, str]]:
    """Return the change that a form asks for.

    Args:
        source: The case file.
        form: Its fields; `act` holds a word and what it is done to. [-]
    Returns: A function of the newest state, the one the form was made from, and texts to pass over by input; it
        raises RefusedError or QuantityError for what is not possible.
    """
    word, _, about = form.get("act", "set").partition(" ")
    act = ACTS.get(word)

    def change(now: State, seen: State, passed_over: Form) -> tuple[State, str]:
        if act is None:
            raise RefusedError("the page does not know this; load it again")
        return act(Asked(source, form, now, seen, passed_over), about)

    return change


def _set(asked: Asked, about: str) -> tuple[State, str]:
    """Take every input that the form changes against the page it comes from; others may have changed meanwhile."""
    changes, said = asked.now.changes, []
    for key in asked.keys:
        text = asked.form.get(f"in.{key}")
        if text is None:
            continue
        text = text.strip()
        before = dict(asked.seen.changes).get(key, asked.source.text_of(key))
        if text in (before, asked.passed_over.get(key)):
            continue
        _check_text(text, LONGEST_INPUT, key)
        changes = _with_change(asked.source, changes, key, text)
        said.append(f"{LABELS[key]} {text or 'left out'}")
    return replace(asked.now, changes=changes), ", ".join(said)


def _with_change(
    source: Source, changes: tuple[tuple[str, str], ...], key: str, text: str
) -> tuple[tuple[str, str], ...]:
    """Return the changes with one more; what the file says anyway is none."""
    return with_item(changes, key, None if text == source.text_of(key) else text)


def _check_text(text: str, longest: int, field: str) -> None:
    hidden = [sign for sign in text if is_hidden(sign) and sign not in "\n\r\t"]
    if hidden:
        raise RefusedError("it holds a hidden character; write plain text", field)
    if len(text) > longest:
        raise RefusedError(f"it has {len(text)} characters; allowed are up to {longest}", field, text[:longest])


def _nudge(asked: Asked, about: str) -> tuple[State, str]:
    """Step one input, or all temperatures of a side together, after taking what else the form changes."""
    name, _, sign = about.partition(" ")
    keys = SIDES.get(name, (name,))
    if sign not in ("+1", "-1") or not set(keys) <= set(asked.keys):
        raise RefusedError("the page does not know this step; load it again")
    state, said = _set(asked, "")
    changes = state.changes
    for key in keys:
        try:
            text = nudged(text_now(state, asked.source, key), int(sign))
        except RefusedError as error:
            raise RefusedError(error.message, key) from None
        changes = _with_change(asked.source, changes, key, text)
    words = f"{name} {sign} step, all together" if name in SIDES else f"{LABELS[name]} {text}"
    return replace(state, changes=changes), f"{said}, {words}" if said else words


def _reset(asked: Asked, about: str) -> tuple[State, str]:
    if not about:
        return replace(asked.now, changes=()), "all inputs as in the case"
    return replace(
        asked.now, changes=with_item(asked.now.changes, about, None)
    ), f"{LABELS.get(about, about)} as in the case"


def _add(asked: Asked, about: str) -> tuple[State, str]:
    text = asked.form.get("designation", "").strip()
    try:
        name = designation_of(text)
    except QuantityError as error:
        raise RefusedError(str(error), "designation", text[:LONGEST_INPUT]) from None
    if name in asked.names:
        if name in asked.now.hidden:
            return _show(asked, name)
        raise RefusedError(f"{name} is there already", "designation", text)
    if len(asked.now.added) >= MOST_ADDED:
        raise RefusedError(
            f"at most {MOST_ADDED} candidates are added in a meeting; take one away", "designation", text
        )
    return replace(asked.now, added=(*asked.now.added, name)), f"{name} added"


def _drop(asked: Asked, about: str) -> tuple[State, str]:
    if about not in asked.now.added:
        raise RefusedError("only candidates added here are taken away; hide one of the case")
    kept = {part: _without(getattr(asked.now, part), about) for part in ("added", "hidden", "pinned", "beside")}
    return replace(asked.now, **kept), f"{about} taken away"  # type: ignore[arg-type]


def _without(items: tuple[str, ...], name: str) -> tuple[str, ...]:
    return tuple(item for item in items if item != name)


def _hide(asked: Asked, about: str) -> tuple[State, str]:
    name, now = asked.name(about), asked.now
    return (
        replace(
            now,
            hidden=(*_without(now.hidden, name), name),
            pinned=_without(now.pinned, name),
            beside=_without(now.beside, name),
        ),
        f"{name} hidden",
    )


def _show(asked: Asked, about: str) -> tuple[State, str]:
    name = asked.name(about)
    return replace(asked.now, hidden=_without(asked.now.hidden, name)), f"{name} shown"


def _pin(asked: Asked, about: str) -> tuple[State, str]:
    name = asked.name(about)
    return replace(asked.now, pinned=(*_without(asked.now.pinned, name), name)), f"{name} pinned"


def _unpin(asked: Asked, about: str) -> tuple[State, str]:
    name = asked.name(about)
    return replace(asked.now, pinned=_without(asked.now.pinned, name)), f"{name} unpinned"


def _beside(asked: Asked, about: str) -> tuple[State, str]:
    chosen = [asked.form.get("first", ""), asked.form.get("second", "")]
    names = tuple(dict.fromkeys(asked.name(name) for name in chosen if name))
    hidden = [name for name in names if name in asked.now.hidden]
    if hidden:
        raise RefusedError(f"{hidden[0]} is hidden; show it first")
    return replace(asked.now, beside=names), f"{' and '.join(names) or 'nothing'} side by side"


def _weigh(asked: Asked, about: str) -> tuple[State, str]:
    weights = dict(asked.now.weights)
    for name in CRITERIA:
        text = asked.form.get(f"w.{name}")
        if text is None:
            continue
        text = text.strip()
        is_number = text.isascii() and text.isdigit() and len(text) <= LONGEST_INPUT
        if not is_number or int(text) > HEAVIEST:
            raise RefusedError(f"a weight is a whole number from 0 to {HEAVIEST}", f"w.{name}", text[:LONGEST_INPUT])
        if int(text) != dict(asked.seen.weights).get(name, USUAL):
            weights[name] = int(text)
    return replace(asked.now, weights=tuple(weights.items())), "weights"


def _note(asked: Asked, about: str) -> tuple[State, str]:
    notes = asked.now.notes
    for name in (MEETING, asked.source.case.plant.refrigerant, *asked.names):
        text = asked.form.get(f"n.{name}")
        if text is None:
            continue
        text = text.replace("\r\n", "\n").strip()
        if text == dict(asked.seen.notes).get(name, ""):
            continue
        _check_text(text, LONGEST_NOTE, f"n.{name}")
        notes = with_item(notes, name, text or None)
    return replace(asked.now, notes=notes), "notes"


def _units(asked: Asked, about: str) -> tuple[State, str]:
    if about not in UNIT_SYSTEMS:
        raise RefusedError("units are si or ip")
    return replace(asked.now, units=about), f"units {about.upper()}"


def _type(asked: Asked, about: str) -> tuple[State, str]:
    return replace(asked.now, is_large=about == "large"), f"{'large' if about == 'large' else 'usual'} type"


ACTS: Mapping[str, Act] = {
    "set": _set,
    "nudge": _nudge,
    "reset": _reset,
    "add": _add,
    "drop": _drop,
    "hide": _hide,
    "show": _show,
    "pin": _pin,
    "unpin": _unpin,
    "beside": _beside,
    "weigh": _weigh,
    "note": _note,
    "units": _units,
    "type": _type,
}
