"""Models of the sections of a case file other than its legs."""

from __future__ import annotations

import re
from collections.abc import Mapping as AnyMapping
from dataclasses import dataclass
from typing import Annotated, Any, ClassVar

from pydantic import Field, PrivateAttr, model_validator
from pydantic_core import core_schema

from pathcalc.case.fields import (
    ChoiceField,
    Density,
    Pressure,
    Quality,
    QuantityField,
    SourceId,
    SpecificEnergy,
    SpecificEntropy,
    SpecificVolume,
    Superheat,
    Temperature,
    Text,
    WholeField,
    _Field,
    raise_problems,
)
from pathcalc.case.leg_model import OneOf, Strict
from pathcalc.case.names import AMOUNTS, DATUMS, DIAGRAMS, EQUATIONS, EQUATIONS_LATER, MAX_REPEAT, PHASES, RESULT_KINDS
from pathcalc.quantities.parse import Problem, QuantityError, difference_of, nearest, parse, words
from pathcalc.quantities.values import Quantity


@dataclass(frozen=True)
class DateField(_Field):
    """A day as ISO 8601 writes it."""

    def read(self, value: Any, info: core_schema.ValidationInfo) -> str:
        """The text, checked."""
        from datetime import date

        try:
            if not re.fullmatch(r"[0-9]{4}-[0-9]{2}-[0-9]{2}", value):
                raise ValueError
            date.fromisoformat(value)
        except (ValueError, TypeError):
            raise_problems(Problem("bad-date", "write the day as year-month-day, such as 2026-03-02"))
        return str(value)

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        return {"type": "string", "pattern": r"^[0-9]{4}-[0-9]{2}-[0-9]{2}$"}


@dataclass(frozen=True)
class EquationField(_Field):
    """Name of an equation that this version has."""

    def read(self, value: Any, info: core_schema.ValidationInfo) -> str:
        """The name, or a problem that tells a name to come from one that is not known."""
        if not isinstance(value, str):
            raise_problems(Problem("wrong-type", f"write one of {words(EQUATIONS)}"))
        if value in EQUATIONS_LATER and value not in EQUATIONS:
            known = ", ".join(EQUATIONS)
            text = f"equation {str(value)!r} is not available in this version; available are {known}"
            raise_problems(Problem("not-available", text))
        if value not in EQUATIONS:
            text = f"unknown equation {str(value)!r}; {nearest(value, EQUATIONS)}"
            raise_problems(Problem("unknown-name", text))
        return str(value)

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        return {"enum": list(EQUATIONS)}


Equation = Annotated[str, EquationField()]


@dataclass(frozen=True)
class HeatCapacity:
    """Ideal-gas heat capacity: constant as given, a named correlation, or, both None, constant at start.T."""

    value: Quantity | None = None
    correlation: str | None = None


@dataclass(frozen=True)
class HeatCapacityField(_Field):
    """``constant``, a quantity, or ``{correlation: name}``."""

    def read(self, value: Any, info: core_schema.ValidationInfo) -> HeatCapacity:
        """What is written, as a HeatCapacity."""
        if isinstance(value, HeatCapacity):
            return value
        if isinstance(value, str) and value == "constant":
            return HeatCapacity()
        if isinstance(value, AnyMapping) and "correlation" in value:
            other = [k for k in value if k != "correlation"]
            if other:
                raise_problems(Problem("one-of", f"correlation stands alone; remove {other[0]!r}", (other[0],), True))
            if not isinstance(value["correlation"], str):
                raise_problems(Problem("wrong-type", "correlation holds a name", ("correlation",)))
            return HeatCapacity(correlation=str(value["correlation"]))
        if isinstance(value, str) and not re.match(r"\s*[-+.0-9]", value):
            such = "write constant, a value such as 29.1 J/(mol K), or {correlation: name}"
            text = f"unknown heat capacity {str(value)!r}; {such}"
            raise_problems(Problem("unknown-name", text))
        field = QuantityField(("specific-entropy",), low=0.0, above=True)
        return HeatCapacity(value=field.read(value, info))

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        from pathcalc.case.json_quantities import quantity_schema

        named = {
            "type": "object",
            "properties": {
                "correlation": {
                    "type": "string",
                    "description": "A correlation of the substance's card, by its name.",
                    "examples": ["wide-range"],
                }
            },
            "required": ["correlation"],
            "additionalProperties": False,
        }
        return {"anyOf": [{"const": "constant"}, named, quantity_schema(("specific-entropy",))]}


@dataclass(frozen=True)
class SeriesField(_Field):
    """One quantity, or a list of quantities: the coefficients of a series. All per mole."""

    dimension: str

    def read(self, value: Any, info: core_schema.ValidationInfo) -> tuple[Quantity, ...]:
        """The coefficients."""
        single = not isinstance(value, (list, tuple))
        items = [value] if single else list(value)
        problems: list[Problem] = []
        read: list[Quantity] = []
        for i, item in enumerate(items):
            at: tuple[Any, ...] = () if single else (i,)
            try:
                context = info.context if isinstance(info.context, dict) else {}
                q = parse(item, (self.dimension,), any_sign=True, sources=context.get("sources"))
                if q.per == "mass":
                    problems.append(Problem("wrong-dimension", "write it per mole, such as -4.5 cm3/mol", at))
                read.append(q)
            except QuantityError as error:
                problems += [Problem(p.code, p.message, (*at, *p.at), p.key) for p in error.problems]
        if not items:
            problems.append(Problem("missing-key", "the list is empty; give at least one coefficient"))
        if problems:
            raise_problems(*problems)
        return tuple(read)

    def json(self) -> dict[str, Any]:
        """JSON Schema of the field."""
        from pathcalc.case.json_quantities import quantity_schema

        one = quantity_schema((self.dimension,))
        return {"anyOf": [one, {"type": "array", "items": one, "minItems": 1}]}


class Revision(Strict):
    """An entry of the revision history."""

    revision: Text = Field(description="Mark of the revision.", examples=["A"])
    date: Annotated[str, DateField()] | None = Field(
        default=None, description="Day, year-month-day.", examples=["2026-03-02"]
    )
    text: Text = Field(description="What changed, and why.", examples=["First issue."])


ALLOWED_DIFFERENCES = (
    "temperature-difference", "pressure-difference", "specific-volume", "density", "specific-energy",
    "specific-entropy", "speed", "expansivity", "compressibility", "joule-thomson", "energy", "power", "entropy",
    "entropy-rate", "mass", "mass-flow", "volume", "volume-flow", "fraction",
)  # fmt: skip


class Tolerance(Strict):
    """How far a result may be from the stored one in a regression, other than by default, and why."""

    quantity: Text | None = Field(
        default=None,
        description="Address of the result, such as first stage.T; * stands for any characters.",
        examples=["*.joule_thomson"],
    )
    kind: Annotated[str, ChoiceField(tuple(RESULT_KINDS))] | None = Field(
        default=None, description="Kind of results, instead of an address.", examples=["heat-capacity"]
    )
    relative: Annotated[Quantity, QuantityField(("fraction",), low=0.0, high=1.0)] | None = Field(
        default=None, description="Part of the stored value.", examples=[1e-6]
    )
    absolute: Annotated[Quantity, QuantityField(ALLOWED_DIFFERENCES, low=0.0, any_sign=True)] | None = Field(
        default=None, description="Difference that is allowed whatever the value is.", examples=["0.01 K"]
    )
    reason: Text = Field(description="Why the default will not do.", examples=["close to the critical point"])

    @model_validator(mode="after")
    def _form(self) -> Tolerance:
        if (self.quantity is None) == (self.kind is None):
            raise_problems(Problem("one-of", "give one of quantity or kind", key=True))
        if self.relative is None and self.absolute is None:
            raise_problems(Problem("missing-key", "give relative, absolute or both", key=True))
        q = self.absolute
        if q is not None and q.per == "mole":
            raise_problems(Problem("wrong-dimension", f"{q.text} is per mole; results are per kg", ("absolute",)))
        if q is not None and self.kind is not None and q.dimension != difference_of(RESULT_KINDS[self.kind]):
            raise_problems(Problem("wrong-dimension", f"{q.text} is no difference of a {self.kind}", ("absolute",)))
        return self


class Record(Strict):
    """What a checker needs beside the numbers."""

    number: Text | None = Field(default=None, description="Number of the calculation.", examples=["C-2041-07"])
    revision: Text | None = Field(default=None, description="Revision of the calculation.", examples=["B"])
    date: Annotated[str, DateField()] | None = Field(
        default=None, description="Day, year-month-day.", examples=["2026-03-02"]
    )
    author: Text | None = Field(default=None, description="Who wrote the calculation.", examples=["A. Writer"])
    checker: Text | None = Field(default=None, description="Who checked it.", examples=["C. Checker"])
    approver: Text | None = Field(default=None, description="Who approved it.", examples=["D. Approver"])
    project: Text | None = Field(default=None, description="Project or plant it belongs to.", examples=["Unit 20"])
    purpose: Text | None = Field(
        default=None, description="What the result is for.", examples=["Shaft power of the booster."]
    )
    assumptions: list[Text] | None = Field(
        default=None, description="Assumptions, one text each.", examples=[["Steady flow."]]
    )
    unconfirmed: list[Text] | None = Field(
        default=None,
        description="Assumptions that are yet to be confirmed, one text each; the report shows them up front.",
        examples=[["Inlet pressure, until the pipework is measured."]],
    )
    conclusions: list[Text] | None = Field(
        default=None, description="What the author concludes, one text each.", examples=[["The booster will do."]]
    )
    revisions: list[Revision] | None = Field(
        default=None,
        description="History of the revisions, oldest first.",
        examples=[[{"revision": "A", "date": "2026-03-02", "text": "First issue."}]],
    )
    notes: list[Text] | None = Field(default=None, description="Notes, one text each.", examples=[["See revision A."]])
    sources: dict[Text, Text] | None = Field(
        default=None,
        description="Citations by id; any quantity, leg or limit may name one.",
        examples=[{"vendor": "Booster data sheet D-118, revision 2"}],
    )
    tolerances: list[Tolerance] | None = Field(
        default=None,
        description="Tolerances of this case in a regression, where the defaults will not do.",
        examples=[[{"quantity": "*.cp", "relative": 1e-6, "reason": "close to the critical point"}]],
    )


class Virial(Strict):
    """The user's own virial coefficients: B(T) = sum of b_k (T_ref/T)^k, k from 0, and the same for C(T)."""

    B: Annotated[tuple[Quantity, ...], SeriesField("specific-volume")] = Field(
        description="Second virial coefficient: one value, or the list b_0, b_1, … of the series in T_ref/T.",
        examples=["-4.5 cm3/mol", ["38 cm3/mol", "-43 cm3/mol"]],
    )
    C: Annotated[tuple[Quantity, ...], SeriesField("third-virial")] | None = Field(
        default=None,
        description="Third virial coefficient: one value, or the list c_0, c_1, … of the series in T_ref/T.",
        examples=["1500 cm6/mol2"],
    )
    T_ref: Temperature | None = Field(
        default=None,
        description="Temperature of the series; needed where a list has two or more.",
        examples=["300 K"],
    )

    @model_validator(mode="after")
    def _reference(self) -> Virial:
        if self.T_ref is None and (len(self.B) > 1 or len(self.C or ()) > 1):
            raise_problems(Problem("missing-key", "a series of two or more coefficients needs T_ref", key=True))
        return self


KIJ = Annotated[Quantity, QuantityField(("fraction",), low=-1.0, high=1.0)]
Fraction = Annotated[Quantity, QuantityField(("fraction",), low=0.0)]


class Fluid(Strict):
    """The fluid: a substance or the user's own card, and its equation of state."""

    substance: Text | None = Field(default=None, description="Name of a built-in substance.", examples=["nitrogen"])
    card: Text | None = Field(
        default=None,
        description="Path of the user's own substance card, relative to this file.",
        examples=["../shared/fluids/my-gas.yaml"],
    )
    mixture: dict[Text, Fraction] | None = Field(
        default=None,
        description="Fractions by substance, summing to 1.",
        examples=[{"methane": 0.93, "nitrogen": 0.07}],
    )
    basis: Annotated[str, ChoiceField(("mole", "mass"))] | None = Field(
        default=None, description="What the fractions of a mixture are of.", examples=["mole"]
    )
    equation: Equation = Field(description="Equation of state.", examples=["peng-robinson"])
    datum: Annotated[str, ChoiceField(DATUMS)] = Field(
        default="ideal-gas-298", description="Zero of u, h and s.", examples=["ideal-gas-298"]
    )
    heat_capacity: Annotated[HeatCapacity, HeatCapacityField()] | None = Field(
        default=None,
        description="Ideal-gas heat capacity: constant (at start.T), a value, or a correlation of the card "
        "by name; the card's first correlation if left out.",
        examples=["constant", "29.1 J/(mol K)", {"correlation": "wide-range"}],
    )
    volume_shift: Annotated[Quantity, QuantityField(("specific-volume",), any_sign=True)] | None = Field(
        default=None,
        description="Volume taken off that of a cubic equation, v = v_equation - c (Péneloux); may be negative.",
        examples=["-2.1 cm3/mol"],
    )
    k_ij: dict[Text, dict[Text, KIJ]] | None = Field(
        default=None,
        description="Interaction parameters of a mixture, by pair of substances.",
        examples=[{"methane": {"nitrogen": 0.03}}],
    )
    virial: Virial | None = Field(
        default=None, description="The user's own virial coefficients.", examples=[{"B": "-4.5 cm3/mol"}]
    )

    _card_path: str | None = PrivateAttr(default=None)

    @property
    def card_path(self) -> str | None:
        """File of the user's own card, resolved; None for a built-in substance."""
        return self._card_path


class Surroundings(Strict):
    """Gauge zero, and the dead state of exergy."""

    T: Temperature | None = Field(default=None, description="Temperature; 298.15 K if left out.", examples=["20 degC"])
    p: Pressure | None = Field(
        default=None, description="Pressure, absolute; 1.01325 bar if left out.", examples=["1.013 bar"]
    )


class Start(OneOf):
    """The first state: two independent properties."""

    needs: ClassVar[tuple[int, int]] = (2, 2)

    T: Temperature | None = Field(default=None, description="Temperature.", examples=["15 degC"])
    p: Pressure | None = Field(
        default=None, description="Pressure; absolute unless the unit says gauge.", examples=["1.2 barg"]
    )
    v: SpecificVolume | None = Field(default=None, description="Specific volume.", examples=["0.8 m3/kg"])
    rho: Density | None = Field(default=None, description="Density.", examples=["1.2 kg/m3"])
    u: SpecificEnergy | None = Field(default=None, description="Internal energy.", examples=["220 kJ/kg"])
    h: SpecificEnergy | None = Field(default=None, description="Enthalpy.", examples=["310 kJ/kg"])
    s: SpecificEntropy | None = Field(default=None, description="Entropy.", examples=["6.8 kJ/(kg K)"])
    x: Quality | None = Field(default=None, description="Vapour quality by mass, 0 to 1.", examples=[0.9])
    superheat: Superheat | None = Field(
        default=None, description="Temperature above that of saturation at the same pressure.", examples=["5 K"]
    )
    subcooling: Superheat | None = Field(
        default=None, description="Temperature below that of saturation at the same pressure.", examples=["3 K"]
    )
    phase: Annotated[str, ChoiceField(PHASES)] | None = Field(
        default=None, description="Saturated liquid or vapour, with one other property.", examples=["saturated-vapour"]
    )


AnyQuantity = Annotated[
    Quantity,
    QuantityField(
        ("specific-energy", "specific-entropy", "pressure", "temperature", "specific-volume", "density",
         "fraction", "energy", "power", "entropy", "entropy-rate", "speed", "expansivity", "compressibility",
         "joule-thomson"),
    ),
]  # fmt: skip


class Limit(Strict):
    """Acceptance: a bound on one result."""

    quantity: Text = Field(
        description="Address of the result: <state or leg>.<key>, or totals.<key>.",
        examples=["first stage.T"],
    )
    min: AnyQuantity | None = Field(default=None, description="Least value that is accepted.", examples=["1 barg"])
    max: AnyQuantity | None = Field(default=None, description="Greatest value that is accepted.", examples=["160 degC"])
    note: Text | None = Field(default=None, description="Anything a reader should know.", examples=["seal rating"])
    source: SourceId | None = Field(default=None, description="Id of a source in record.sources.", examples=["vendor"])

    _origin: tuple[int, int] = PrivateAttr(default=(0, 0))

    @property
    def line(self) -> int:
        """Line where the limit begins; 0 for one that does not come from a file."""
        return self._origin[0]

    @property
    def column(self) -> int:
        """Column where the limit begins."""
        return self._origin[1]


class Report(Strict):
    """What the report shows beside the results."""

    diagrams: list[Annotated[str, ChoiceField(DIAGRAMS)]] = Field(
        default_factory=list, description="Diagrams to draw.", examples=[["T-s", "p-v"]]
    )
    compare_with: list[Equation] = Field(
        default_factory=list,
        description="Other equations to solve the same path with, in one table.",
        examples=[["ideal-gas", "peng-robinson"]],
    )


AMOUNT_DIMENSIONS = (*AMOUNTS["flow"], *AMOUNTS["closed"])
RepeatCount = Annotated[int, WholeField(1, MAX_REPEAT)]
