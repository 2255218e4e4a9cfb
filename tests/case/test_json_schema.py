"""The exported JSON Schema: valid itself, and of one mind with the loader on the examples."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import jsonschema
import pytest
import yaml

from pathcalc.case.json_schema import case_json_schema, settings_json_schema

HERE = Path(__file__).parent
SCHEMA = case_json_schema()
VALIDATOR = jsonschema.Draft7Validator(SCHEMA)


class CoreLoader(yaml.SafeLoader):
    """YAML without dates, as the core schema of YAML 1.2 has none."""


CoreLoader.yaml_implicit_resolvers = {
    first: [(tag, pattern) for tag, pattern in resolvers if not tag.endswith((":timestamp", ":bool"))]
    for first, resolvers in yaml.SafeLoader.yaml_implicit_resolvers.items()
}


def parsed(file: Path) -> Any:
    text = file.read_text(encoding="utf-8").replace("cycle: true", "cycle: !!bool true")
    return yaml.load(text, CoreLoader)


def test_the_schema_is_a_schema() -> None:
    jsonschema.Draft7Validator.check_schema(SCHEMA)


@pytest.mark.parametrize("file", sorted((HERE / "accepted").glob("*.yaml")), ids=lambda f: f.stem)
def test_accepted_examples_are_valid(file: Path) -> None:
    assert [e.json_path + ": " + e.message[:200] for e in VALIDATOR.iter_errors(parsed(file))] == []


REFUSED = [
    "unknown-top-key",
    "no-unit",
    "unit-coulomb",
    "wrong-dimension",
    "path-unknown",
    "unknown-leg-key",
    "to-a-text",
    "equation-unknown",
    "difference-in-degc",
    "diagram-unknown",
    "units-unit",
    "repeat-zero",
    "version-2",
]


@pytest.mark.parametrize("name", REFUSED)
def test_rejected_examples_are_not(name: str) -> None:
    assert not VALIDATOR.is_valid(parsed(HERE / "rejected" / f"{name}.yaml"))


def nodes(schema: Any) -> list[dict[str, Any]]:
    if isinstance(schema, dict):
        return [schema] + [n for v in schema.values() for n in nodes(v)]
    return [n for v in schema for n in nodes(v)] if isinstance(schema, list) else []


def keys(schema: Any) -> list[tuple[str, dict[str, Any]]]:
    """Every key of every mapping, in definitions and in what they hold."""
    found = []
    for node in nodes(schema):
        properties = node.get("properties")
        if isinstance(properties, dict) and "const" not in str(node.get("if", properties)):
            found += [(key, prop) for key, prop in properties.items() if isinstance(prop, dict)]
    return found


@pytest.mark.parametrize("schema", [SCHEMA, settings_json_schema()], ids=["case", "settings"])
def test_every_key_is_described_and_has_an_example(schema: dict[str, Any]) -> None:
    described = [(key, prop) for key, prop in keys(schema) if "const" not in prop or "description" in prop]
    assert len(described) > 15
    for key, prop in described:
        assert prop.get("description"), (key, prop)
        assert prop.get("examples"), (key, prop)


def test_examples_are_valid() -> None:
    """Where a key stands in a definition, its own example is what it allows."""
    for name, definition in SCHEMA["definitions"].items():
        for key, prop in definition.get("properties", {}).items():
            whole = {**prop, "definitions": SCHEMA["definitions"]}
            for example in prop["examples"]:
                errors = [e.message for e in jsonschema.Draft7Validator(whole).iter_errors(example)]
                assert errors == [], (name, key, example)


def test_every_reference_leads_somewhere() -> None:
    references = {n["$ref"] for n in nodes(SCHEMA) if isinstance(n.get("$ref"), str)}
    assert references
    assert {r.removeprefix("#/definitions/") for r in references} <= SCHEMA["definitions"].keys()


def test_nothing_stands_beside_a_reference() -> None:
    """Draft 7, section 8.3: all other keys of an object with $ref are ignored."""
    assert [n for n in nodes(SCHEMA) if isinstance(n.get("$ref"), str) and len(n) > 1] == []
    assert SCHEMA["$schema"] == "http://json-schema.org/draft-07/schema#"


def test_substances_and_paths_are_proposed() -> None:
    from pathcalc.case.leg_registry import leg_models
    from pathcalc.substances import names

    (proposed, _) = SCHEMA["definitions"]["fluid"]["properties"]["substance"]["anyOf"]
    assert proposed["enum"] == sorted(names())
    assert SCHEMA["definitions"]["legs"]["items"]["properties"]["path"]["enum"] == list(leg_models())


def test_a_leg_is_held_to_its_own_keys() -> None:
    """One message about the one kind of leg that was meant, not one a kind."""
    case = yaml.safe_load((HERE / "accepted" / "whole.yaml").read_text(encoding="utf-8"))
    case["legs"][0]["colour"] = "red"
    found = [e.message for e in VALIDATOR.iter_errors(case) if "colour" in e.message]
    assert len(found) == 1
