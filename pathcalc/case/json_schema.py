"""The JSON Schema of a case file (draft 7), for editors: from the same models that load it."""

from __future__ import annotations

from typing import Any

from pydantic import BaseModel

from pathcalc.case import names
from pathcalc.case.expand import Repeat
from pathcalc.case.json_draft7 import as_draft7, by_key
from pathcalc.case.json_quantities import definitions, quantity_schema, refer
from pathcalc.case.leg_registry import leg_models
from pathcalc.case.sections import AMOUNT_DIMENSIONS, Fluid, Limit, Record, Report, Start, Surroundings
from pathcalc.case.substance_check import substance_names
from pathcalc.quantities.units import spellings

_LEG = {"name": "first stage", "path": "adiabatic", "to": {"p": "4.5 barg"}, "efficiency": 0.76}
_UNIT_WORDS = {
    "power": "power",
    "T": "temperatures", "p": "pressures; a gauge unit shows gauge pressures", "energy": "energies", "mass": "masses",
    "time": "times", "volume": "volumes", "amount": "amounts of substance",
}  # fmt: skip
SETTINGS_MODEL = "pathcalc.library.settings_model"
"""The room above this one that has the settings, asked for its model by name."""
USER_KEYS: dict[str, Any] = {"^x-": {}}


def case_json_schema() -> dict[str, Any]:
    """JSON Schema of the format. Keys that begin with ``x-`` are allowed in every mapping."""
    defs: dict[str, Any] = {}
    for path, model in leg_models().items():
        _model(model, f"leg-{path}", defs)
        _describe_leg(defs[f"leg-{path}"], path, defs)
    _model(Repeat, "repeat", defs)
    defs["repeat"]["properties"]["legs"] = _key(
        {"$ref": "#/$defs/legs"}, "The legs of one time through.", [{**_LEG, "name": "stage"}]
    )
    kinds = {path: f"leg-{path}" for path in leg_models()}
    defs["legs"] = {
        "type": "array",
        "minItems": 1,
        "items": by_key("path", kinds, "Kind of the leg: what it holds, or how it goes.", ("repeat", "repeat")),
    }
    fluid = _model(Fluid, "fluid", defs)
    substance = defs["fluid"]["properties"]["substance"]
    substance["anyOf"] = [
        {"enum": substance_names()},
        {"type": "string", "description": "An alias or a formula."},
    ]
    substance.pop("type", None)
    included = {"type": "string", "minLength": 1}
    schema: dict[str, Any] = {
        "title": "pathcalc case",
        "description": "One process path of one fluid, version 1 of the format.",
        "type": "object",
        "properties": {
            "pathcalc": _key({"enum": [1, "1"]}, "Version of the format; the first key of a case.", 1),
            "title": _key({"type": ["string", "number"]}, "Title of the calculation.", "Nitrogen booster"),
            "include": _key(
                {"anyOf": [included, {"type": "array", "items": included}]},
                "Files to merge under this one, this one winning; paths are relative to this file.",
                "../shared/site.yaml",
            ),
            "record": _key(
                _model(Record, "record", defs), "What a checker needs beside the numbers.", {"revision": "B"}
            ),
            "fluid": _key(fluid, "The fluid and its equation.", {"substance": "nitrogen", "equation": "soave"}),
            "boundary": _key(
                {"enum": list(names.AMOUNTS)},
                "flow: steady flow through devices; closed: a fixed mass.",
                "flow",
            ),
            "amount": _key(
                refer(quantity_schema(AMOUNT_DIMENSIONS)),
                "flow: mass, moles or normal volume a time; closed: mass, moles, normal or vessel volume.",
                "0.35 kg/s",
            ),
            "surroundings": _key(
                _model(Surroundings, "surroundings", defs),
                "Gauge zero, and dead state of exergy.",
                {"T": "20 degC"},
            ),
            "start": _key(
                _model(Start, "start", defs),
                "The first state: two properties.",
                {"T": "15 degC", "p": "1.2 barg"},
            ),
            "legs": _key({"$ref": "#/$defs/legs"}, "The legs of the path, in order.", [_LEG]),
            "cycle": _key({"type": "boolean"}, "Says that the last state must be the first again.", True),
            "limits": _key(
                {"type": "array", "items": _model(Limit, "limit", defs)},
                "Acceptance; a miss makes the exit code 1.",
                [{"quantity": "totals.work", "max": "120 kW"}],
            ),
            "units": _key(_units(), "Units of the report; results files are always SI.", {"T": "degC", "p": "bar"}),
            "report": _key(_model(Report, "report", defs), "What the report shows.", {"diagrams": ["T-s"]}),
        },
        "patternProperties": USER_KEYS,
        "required": ["pathcalc"],
        "additionalProperties": False,
    }
    _define(schema, defs)
    schema["$defs"] = dict(sorted(defs.items()))
    return as_draft7(schema)


def settings_json_schema() -> dict[str, Any]:
    """JSON Schema of the settings file of a library."""
    from importlib import import_module

    model: type[BaseModel] = import_module(SETTINGS_MODEL).SettingsModel
    defs: dict[str, Any] = {}
    _model(model, "settings", defs)
    schema = {"title": "pathcalc library settings", **defs.pop("settings")}
    _define(schema, defs)
    schema["$defs"] = dict(sorted(defs.items()))
    return as_draft7(schema)


def _describe_leg(leg: dict[str, Any], path: str, defs: dict[str, Any]) -> None:
    """What the models leave unsaid of the keys that all legs have: where it goes, and examples."""
    properties = leg["properties"]
    properties["path"]["examples"] = [path]
    if "to" in properties:
        targets = defs[properties["to"]["$ref"].rpartition("/")[2]]
        first = next(iter(targets["properties"].items()))
        example = first[1]["examples"][0]
        properties["to"] = _key(properties["to"], "Where the leg ends.", {first[0]: example})
    if "with" in properties:
        properties["with"]["description"] = "The stream that joins."


def _key(schema: dict[str, Any], description: str, example: Any) -> dict[str, Any]:
    return {**schema, "description": description, "examples": [example]}


def _units() -> dict[str, Any]:
    kinds = {}
    for kind, dimensions in names.UNIT_KINDS.items():
        allowed = [u for d in dimensions for u in spellings(d) if u not in names.UNIT_KINDS_REFUSED]
        kinds[kind] = _key({"enum": allowed}, f"Unit of {_UNIT_WORDS[kind]}.", allowed[0])
    mapping = {
        "type": "object",
        "properties": kinds,
        "patternProperties": USER_KEYS,
        "additionalProperties": False,
    }
    return {"anyOf": [{"enum": list(names.UNIT_PRESETS)}, mapping]}


def _model(model: type[BaseModel], name: str, defs: dict[str, Any]) -> dict[str, Any]:
    """Definition of a model and of those in it; a reference to it."""
    made = model.model_json_schema(ref_template="#/$defs/{model}")
    for inner, schema in made.pop("$defs", {}).items():
        defs[inner] = _tidy(schema)
    defs[name] = _tidy(made)
    return {"$ref": f"#/$defs/{name}"}


def _tidy(schema: Any) -> Any:
    """Without the library's titles and without null, which a case never holds; user keys allowed."""
    if isinstance(schema, list):
        return [_tidy(s) for s in schema]
    if not isinstance(schema, dict):
        return schema
    kept = {k: v for k, v in schema.items() if not (k == "title" and isinstance(v, str)) and k != "default"}
    if "anyOf" in kept:
        some = [s for s in kept["anyOf"] if s != {"type": "null"}]
        if len(some) == 1:
            del kept["anyOf"]
            kept = {**some[0], **kept}
        else:
            kept["anyOf"] = some
    tidy = {k: v if k == "examples" else _tidy(v) for k, v in kept.items()}
    if tidy.get("additionalProperties") is False:
        tidy["patternProperties"] = USER_KEYS
    return refer(tidy)


def _define(schema: Any, defs: dict[str, Any]) -> None:
    """Add the definition of every quantity that is referred to."""
    todo: list[Any] = [schema, *defs.values()]
    while todo:
        node = todo.pop()
        if isinstance(node, dict):
            name = str(node.get("$ref", "")).removeprefix("#/$defs/")
            if name not in defs:
                defs.update(definitions(name))
            todo += node.values()
        elif isinstance(node, list):
            todo += node
