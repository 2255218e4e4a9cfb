"""Field types of the schema: quantities, targets, flags, numbers, source ids.

Each is an ``Annotated`` type whose annotation reads the value and describes itself for the JSON Schema. The
validation context may hold ``ambient`` (Pa, zero of gauge pressures) and ``sources`` (ids of the record).
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Annotated, Any

from pydantic import GetCoreSchemaHandler, GetJsonSchemaHandler
from pydantic_core import CoreSchema, PydanticCustomError, core_schema

from pathcalc.case.nodes import Scalar, mark_of
from pathcalc.quantities.parse import (
    Problem,
    QuantityError,
    parse,
    unknown_source,
)
from pathcalc.quantities.relative import RELATIVE_KEYS, parse_relative
from pathcalc.quantities.units import ATM
from pathcalc.quantities.values import Quantity, Relative


def raise_problems(*problems: Problem) -> None:
    """Hand problems to pydantic; the translator turns each into a finding at its own place."""
    first = problems[0]
    raise PydanticCustomError("problems", "{text}", {"text": first.message, "problems": list(problems)})


def _context(info: core_schema.ValidationInfo) -> dict[str, Any]:
    context = info.context if isinstance(info.context, dict) else {}
    return {"ambient": context.get("ambient", ATM), "sources": context.get("sources")}


class _Field:
    """Base: a plain validator function with the validation context."""

    def read(self, value: Any, info: core_schema.ValidationInfo) -> Any:
        raise AssertionError("a field type reads and describes itself")

    def json(self) -> dict[str, Any]:
        raise AssertionError("a field type reads and describes itself")

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        def described(_schema: CoreSchema, _handler: GetJsonSchemaHandler) -> dict[str, Any]:
            return self.json()

        return core_schema.with_info_plain_validator_function(
            self.read, metadata={"pydantic_js_functions": [described]}
        )


@dataclass(frozen=True)
class QuantityField(_Field):
    """A quantity of one of ``dimensions``, ``low`` to ``high`` in SI; ``above`` excludes the low end."""

    dimensions: tuple[str, ...]
    low: float | None = None
    high: float | None = None
    above: bool = False
    any_sign: bool = False

    def read(self, value: Any, info: core_schema.ValidationInfo) -> Quantity:
        """Quantity of a text or mapping; every problem is handed on."""
        try:
            q = parse(value, self.dimensions, any_sign=self.any_sign, **_context(info))
        except QuantityError as error:
            raise_problems(*error.problems)
        self.check_range(q)
        mark = mark_of(value)
        return replace(q, line=mark.line, column=mark.column) if mark else q

    def check_range(self, q: Quantity) -> None:
        """Raise where the value is outside the field's own range."""
        low, high = self.low, self.high
        if (low is not None and (q.value < low or (self.above and q.value == low))) or (
            high is not None and q.value > high
        ):
            raise_problems(Problem("out-of-range", f"{q.text} is out of range; must be {self.range_text()}"))

    def range_text(self) -> str:
        """``above 0 and at most 1``."""
        parts = []
        if self.low is not None:
            parts.append(f"{'above' if self.above else 'at least'} {self.low:g}")
        if self.high is not None:
            parts.append(f"at most {self.high:g}")
        return " and ".join(parts)

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        from pathcalc.case.json_quantities import quantity_schema

        return quantity_schema(self.dimensions)


@dataclass(frozen=True)
class TargetField(QuantityField):
    """A quantity, or one relative to the inlet or an earlier state; ``ratio``: whether ratios make sense."""

    ratio: bool = True

    def read(self, value: Any, info: core_schema.ValidationInfo) -> Any:
        """Quantity or Relative."""
        if isinstance(value, Relative):
            return value
        if isinstance(value, Mapping) and any(k in RELATIVE_KEYS for k in value) and "value" not in value:
            try:
                relative = parse_relative(value, self.dimensions, self.ratio, **_context(info))
            except QuantityError as error:
                raise_problems(*error.problems)
            mark = mark_of(value)
            return replace(relative, line=mark.line, column=mark.column) if mark else relative
        return super().read(value, info)

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        from pathcalc.case.json_quantities import target_schema

        return target_schema(self.dimensions, self.ratio)


class FlagField(_Field):
    """true or false, as YAML 1.2 writes them."""

    def read(self, value: Any, info: core_schema.ValidationInfo) -> bool:
        """Truth value of a plain scalar."""
        if isinstance(value, bool):
            return value
        if isinstance(value, Scalar) and value.plain and value.lower() in ("true", "false"):
            return value.lower() == "true"
        shown = repr(str(value)) if isinstance(value, str) else "a mapping or a list"
        raise_problems(Problem("bad-boolean", f"{shown} is no truth value; write true or false"))
        return False

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        return {"type": "boolean"}


@dataclass(frozen=True)
class WholeField(_Field):
    """A whole number in a range."""

    low: int
    high: int

    def read(self, value: Any, info: core_schema.ValidationInfo) -> int:
        """Whole number of a plain scalar."""
        if isinstance(value, str) and re.fullmatch(r"[-+]?[0-9]{1,9}", value):
            value = int(value)
        if not isinstance(value, int) or isinstance(value, bool):
            shown = repr(str(value)) if isinstance(value, (str, float)) else "a mapping or a list"
            raise_problems(Problem("bad-number", f"{shown} is no whole number"))
        if not self.low <= value <= self.high:
            raise_problems(Problem("out-of-range", f"{value} is out of range; must be {self.low} to {self.high}"))
        return int(value)

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        return {"type": "integer", "minimum": self.low, "maximum": self.high}


class TextField(_Field):
    """Any text that is not empty."""

    def read(self, value: Any, info: core_schema.ValidationInfo) -> str:
        """Text of a scalar."""
        if isinstance(value, Mapping) or not isinstance(value, (str, int, float)):
            raise_problems(Problem("wrong-type", "write a text, not a mapping or a list"))
        if not str(value).strip():
            raise_problems(Problem("empty-value", "the text is empty; write one, or leave the key out"))
        return str(value)

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        return {"type": ["string", "number", "boolean"]}


class SourceField(TextField):
    """An id of record.sources."""

    def read(self, value: Any, info: core_schema.ValidationInfo) -> str:
        """Id, checked against the record where the context knows it."""
        text = super().read(value, info)
        sources = _context(info)["sources"]
        if sources is not None and text not in sources:
            raise_problems(unknown_source(text, sources))
        return text

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        return {"type": ["string", "number"], "minLength": 1}


@dataclass(frozen=True)
class ChoiceField(_Field):
    """One of a few names."""

    choices: tuple[str, ...]

    def read(self, value: Any, info: core_schema.ValidationInfo) -> str:
        """The name."""
        from pathcalc.quantities.parse import nearest, words

        if not isinstance(value, str):
            raise_problems(Problem("wrong-type", f"write one of {words(self.choices)}"))
        if value not in self.choices:
            raise_problems(Problem("unknown-name", f"unknown name {str(value)!r}; {nearest(value, self.choices)}"))
        return str(value)

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        return {"enum": list(self.choices)}


Text = Annotated[str, TextField()]
SourceId = Annotated[str, SourceField()]
Flag = Annotated[bool, FlagField()]

Temperature = Annotated[Quantity, QuantityField(("temperature",))]
Pressure = Annotated[Quantity, QuantityField(("pressure",))]
PressureDrop = Annotated[Quantity, QuantityField(("pressure-difference",), low=0.0)]
Superheat = Annotated[Quantity, QuantityField(("temperature-difference",), low=0.0)]
SpecificVolume = Annotated[Quantity, QuantityField(("specific-volume",))]
Density = Annotated[Quantity, QuantityField(("density",))]
SpecificEnergy = Annotated[Quantity, QuantityField(("specific-energy",))]
SpecificEntropy = Annotated[Quantity, QuantityField(("specific-entropy",))]
Quality = Annotated[Quantity, QuantityField(("fraction",), low=0.0, high=1.0)]
Efficiency = Annotated[Quantity, QuantityField(("fraction",), low=0.0, high=1.0, above=True)]
Number = Annotated[Quantity, QuantityField(("fraction",))]
HeatOrWork = Annotated[Quantity, QuantityField(("specific-energy", "energy", "power"))]

TargetT = Annotated[Quantity | Relative, TargetField(("temperature",))]
TargetP = Annotated[Quantity | Relative, TargetField(("pressure",))]
TargetV = Annotated[Quantity | Relative, TargetField(("specific-volume",))]
TargetRho = Annotated[Quantity | Relative, TargetField(("density",))]
TargetEnergy = Annotated[Quantity | Relative, TargetField(("specific-energy",), ratio=False)]
TargetEntropy = Annotated[Quantity | Relative, TargetField(("specific-entropy",), ratio=False)]
TargetX = Annotated[Quantity | Relative, TargetField(("fraction",), low=0.0, high=1.0, ratio=False)]
