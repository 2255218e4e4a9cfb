"""The exported JSON Schema: valid itself, and of one mind with the loader on the examples."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import jsonschema
import pytest
import yaml

from pathcalc.case.json_schema import case_json_schema

HERE = Path(__file__).parent
SCHEMA = case_json_schema()
VALIDATOR = jsonschema.Draft202012Validator(SCHEMA)


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
    jsonschema.Draft202012Validator.check_schema(SCHEMA)


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


def test_every_key_is_described_and_has_an_example() -> None:
    models = [SCHEMA] + [d for name, d in SCHEMA["$defs"].items() if not name.startswith(("quantity--", "text--"))]
    for model in models:
        for key, prop in model.get("properties", {}).items():
            plain = key in ("name", "path", "to", "legs") or "examples" in prop
            assert plain, (model.get("title"), key)
            described = "description" in prop or "$ref" in prop
            assert described, key


def test_every_reference_leads_somewhere() -> None:
    references = {n["$ref"] for n in nodes(SCHEMA) if isinstance(n.get("$ref"), str)}
    assert references
    assert {r.removeprefix("#/$defs/") for r in references} <= SCHEMA["$defs"].keys()
