"""The schema in the form that editors read: draft 7 of JSON Schema, every key described, legs told by their path."""

from __future__ import annotations

from typing import Any

DRAFT = "http://json-schema.org/draft-07/schema#"
_OLD, _NEW = "#/$defs/", "#/definitions/"


def as_draft7(schema: dict[str, Any]) -> dict[str, Any]:
    """A schema of a later draft as draft 7: definitions under their old name, nothing beside a reference."""
    definitions = schema["$defs"]
    rest = {key: value for key, value in schema.items() if key not in ("$defs", "$schema")}
    return {"$schema": DRAFT, **_moved(rest), "definitions": {name: _moved(d) for name, d in definitions.items()}}


def _moved(node: Any) -> Any:
    if isinstance(node, list):
        return [_moved(item) for item in node]
    if not isinstance(node, dict):
        return node
    found = {key: value if key in ("examples", "enum", "const") else _moved(value) for key, value in node.items()}
    reference = found.get("$ref")
    if isinstance(reference, str):
        found["$ref"] = reference.replace(_OLD, _NEW)
        if len(found) > 1:  # in draft 7 whatever stands beside a reference is not read
            found["allOf"] = [{"$ref": found.pop("$ref")}]
    return found


def by_key(key: str, kinds: dict[str, str], description: str, otherwise: tuple[str, str]) -> dict[str, Any]:
    """An item whose ``key`` tells which definition it is held to; one with another key instead is held to its own.

    An editor then proposes the values of ``key``, and after that the keys of the one definition, and no other.
    """
    other, other_name = otherwise
    branches = [
        {"if": {"required": [key], "properties": {key: {"const": kind}}}, "then": {"$ref": f"{_OLD}{name}"}}
        for kind, name in kinds.items()
    ]
    branches.append({"if": {"required": [other]}, "then": {"$ref": f"{_OLD}{other_name}"}})
    example = next(iter(kinds))
    return {
        "type": "object",
        "properties": {key: {"enum": list(kinds), "description": description, "examples": [example]}},
        "anyOf": [{"required": [key]}, {"required": [other]}],
        "allOf": branches,
    }
