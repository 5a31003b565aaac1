"""Changes laid over a case: single keys with another text, candidates more, before the case is read."""

from __future__ import annotations

import json
import re
import tomllib
from collections.abc import Iterable, Mapping
from typing import Any


def laid_over(data: Mapping[str, Any], changes: Mapping[str, str], added: Iterable[str] = ()) -> dict[str, Any]:
    """Return the data of a case file with changes laid over it; the data itself stays as it is.

    Args:
        data: The parsed TOML. [-]
        changes: Text by full key such as "duty.cooling", as in a case file but without quotation marks; an empty
            text leaves the key out. [-]
        added: Refrigerants to compare besides those of the file. [-]
    """
    whole: dict[str, Any] = dict(data)
    for key, text in changes.items():
        *tables, last = key.split(".")
        table = whole
        for name in tables:
            inner = table.get(name)
            table[name] = dict(inner) if isinstance(inner, dict) else {}
            table = table[name]
        if text.strip():
            table[last] = as_value(text)
        else:
            table.pop(last, None)
    more = list(added)
    if more:
        compare = dict(whole.get("compare", {}))
        whole["compare"] = {**compare, "candidates": [*compare.get("candidates", []), *more]}
    return whole


def as_value(text: str) -> Any:
    """Return what a text stands for: a number, true or false, a list, or itself without its quotation marks.

    Args:
        text: The text. [-]
    """
    try:
        value = tomllib.loads(f"x = {text.strip()}")["x"] if "\n" not in text else text
    except (ValueError, RecursionError):
        return text.strip()
    return value if isinstance(value, str | int | float | bool | list) else text.strip()


def as_text(value: object) -> str:
    """Return a value as a text that `as_value` reads again; quotation marks stand only within lists and tables.

    Args:
        value: What stands in a parsed case file. [-]
    """
    return value if isinstance(value, str) else as_toml(value)


def as_toml(value: object) -> str:
    """Return a value as TOML writes it.

    Args:
        value: Text, number, true or false, or a list or table of them. [-]
    """
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, int | float):
        return repr(value)
    if isinstance(value, Mapping):
        return "{" + ", ".join(f"{as_key(name)} = {as_toml(item)}" for name, item in value.items()) + "}"
    if isinstance(value, list | tuple):
        return "[" + ", ".join(as_toml(item) for item in value) + "]"
    # TOML's basic strings take JSON's escapes; JSON leaves DEL as it is, and TOML does not allow it.
    return json.dumps(str(value), ensure_ascii=False).replace("\x7f", "\\u007f")


def as_key(name: str) -> str:
    """Return a key as TOML writes it, in quotation marks where it needs them.

    Args:
        name: The key. [-]
    """
    return name if re.fullmatch("[A-Za-z0-9_-]+", name) else as_toml(name)
