"""JSON Schema of quantities and targets: a text of number and unit, or a mapping with its uncertainty."""

from __future__ import annotations

import re
from collections.abc import Collection
from typing import Any

from pathcalc.quantities.parse import difference_of
from pathcalc.quantities.units import spellings

NUMBER = r"[-+]?([0-9]+(\.[0-9]*)?|\.[0-9]+)([eE][-+]?[0-9]+)?"


_SEPARATOR = "--"
_PREFIX = "quantity--"


def quantity_name(dimensions: Collection[str]) -> str:
    """Name of the definition of a quantity of these dimensions."""
    return _PREFIX + _SEPARATOR.join(dimensions)


def dimensions_of(name: str) -> list[str] | None:
    """Dimensions of a definition's name; None for another definition."""
    return name.removeprefix(_PREFIX).split(_SEPARATOR) if name.startswith(_PREFIX) else None


MARKER = "$quantity"


def quantity_schema(dimensions: Collection[str]) -> dict[str, Any]:
    """Stands for a reference to the definition, which the schema library could not follow: see ``refer``."""
    return {MARKER: quantity_name(dimensions)}


def refer(schema: dict[str, Any]) -> dict[str, Any]:
    """The schema with the marker turned into a reference."""
    if MARKER not in schema:
        return schema
    return {"$ref": f"#/$defs/{schema[MARKER]}"} | {k: v for k, v in schema.items() if k != MARKER}


BESIDE: dict[str, Any] = {
    "source": {
        "description": "Id of a source in record.sources.",
        "examples": ["vendor"],
        "type": ["string", "number"],
    },
    "note": {
        "description": "Anything a reader should know.",
        "examples": ["per vendor sheet"],
        "type": ["string", "number", "boolean"],
    },
}


def example_of(dimensions: Collection[str]) -> str | float:
    """A value with a unit of the first dimension."""
    first = next(iter(dimensions))
    return 0.5 if first == "fraction" else f"1 {spellings(first)[0]}"


def target_schema(dimensions: Collection[str], ratio: bool) -> dict[str, Any]:
    """A quantity, or one of ratio, rise, drop, same_as."""
    step = quantity_schema([difference_of(d) for d in dimensions])
    such = example_of([difference_of(d) for d in dimensions])
    kinds: dict[str, Any] = {
        "rise": {**step, "description": "So much above the leg's inlet.", "examples": [such]},
        "drop": {**step, "description": "So much below the leg's inlet.", "examples": [such]},
        "same_as": {"type": "string", "description": "Name of an earlier state.", "examples": ["start"]},
    }
    if ratio:
        times = quantity_schema(("fraction",))
        kinds = {"ratio": {**times, "description": "So many times the leg's inlet.", "examples": [3.1]}} | kinds
    relative = {
        "type": "object",
        "properties": {**kinds, **BESIDE},
        "patternProperties": {"^x-": {}},
        "additionalProperties": False,
        "oneOf": [{"required": [kind]} for kind in kinds],
    }
    return {"anyOf": [quantity_schema(dimensions), relative]}


def definitions(name: str) -> dict[str, dict[str, Any]]:
    """Definition of a quantity by its name, and those it refers to: texts of numbers and units."""
    dimensions = dimensions_of(name)
    if dimensions is None:
        return {}
    spread = [difference_of(d) for d in dimensions]
    such = example_of(spread)
    mapping = {
        "type": "object",
        "properties": {
            "value": {"description": "The value.", "examples": [example_of(dimensions)], **_text_ref(dimensions)},
            "u": {"description": "Standard uncertainty.", "examples": [such], **_text_ref(spread)},
            "U": {"description": "Expanded uncertainty; k goes with it.", "examples": [such], **_text_ref(spread)},
            "k": {"description": "Coverage factor of U.", "examples": [2], "type": ["number", "string"]},
            "half_width": {
                "description": "Half the width of the interval of all values; shape goes with it.",
                "examples": [such],
                **_text_ref(spread),
            },
            "shape": {
                "enum": ["rectangular", "triangular"],
                "description": "Distribution over the interval of half_width.",
                "examples": ["rectangular"],
            },
            **BESIDE,
        },
        "patternProperties": {"^x-": {}},
        "required": ["value"],
        "additionalProperties": False,
    }
    return {
        name: {"anyOf": [_text_ref(dimensions), mapping]},
        _text_name(dimensions): _text(dimensions),
        _text_name(spread): _text(spread),
    }


def _text_name(dimensions: Collection[str]) -> str:
    return "text--" + _SEPARATOR.join(dimensions)


def _text_ref(dimensions: Collection[str]) -> dict[str, Any]:
    return {"$ref": f"#/$defs/{_text_name(dimensions)}"}


def _text(dimensions: Collection[str]) -> dict[str, Any]:
    """Number, space and unit; a bare number too where the quantity may be one."""
    if len(dimensions) > _MANY:
        return {"type": ["number", "string"]}
    units = "|".join(re.escape(u).replace("\\ ", " ") for d in dimensions for u in spellings(d))
    with_unit = {"type": "string", "pattern": rf"^{NUMBER} +({units})$"}
    if "fraction" not in dimensions:
        return with_unit
    return {"anyOf": [{"type": "number"}, {"type": "string", "pattern": rf"^{NUMBER}( *(%|ppm))?$"}, with_unit]}


_MANY = 6
