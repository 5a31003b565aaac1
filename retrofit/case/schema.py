"""The JSON Schema of a case file, for editors that complete and check while one types."""

from __future__ import annotations

from typing import Any

from retrofit.case.model import CaseFile
from retrofit.case.table import WHERE

SCHEMA_FILE = "case.schema.json"


def case_schema() -> dict[str, Any]:
    """Return the JSON Schema (draft 2020-12) of a case file, made from the model itself.

    It knows the keys, the form of each value and its unit; ranges and what one key says against
    another are left to `read_case`.
    Returns: The schema, ready for `json.dump`. [-]
    Source: JSON Schema, draft 2020-12.
    """
    schema = CaseFile.model_json_schema(by_alias=True)
    head = {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "Refrigerant changeover case",
    }
    return {**head, **_without_noise(schema)}


def _without_noise(node: Any) -> Any:
    """Drop what pydantic adds and no editor needs: titles made from names, nulls, and defaults of nothing."""
    if isinstance(node, list):
        return [_without_noise(item) for item in node]
    if not isinstance(node, dict):
        return node
    noise = {"default"} if node.get("default", "") is None else set()
    if isinstance(node.get("title"), str):
        noise.add("title")
    if isinstance(node.get(WHERE), str):
        noise.add(WHERE)
        node = {**node, "description": f"{node.get('description', '')} Read it: {node[WHERE]}.".strip()}
    clean = {key: _without_noise(value) for key, value in node.items() if key not in noise}
    return _without_null(clean)


def _without_null(node: dict[str, Any]) -> dict[str, Any]:
    """Drop the choice of nothing, which TOML cannot write: `x or null` becomes `x`."""
    choices = node.get("anyOf", [])
    kept = [choice for choice in choices if choice != {"type": "null"}]
    if len(kept) == len(choices):
        return node
    others = {key: value for key, value in node.items() if key != "anyOf"}
    return {**kept[0], **others} if len(kept) == 1 else {**others, "anyOf": kept}
