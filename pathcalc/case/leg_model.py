"""Bases of the leg models: what every leg has, and targets of which some are to be given."""

from __future__ import annotations

from typing import Annotated, Any, ClassVar

from pydantic import BaseModel, ConfigDict, Field, PrivateAttr, model_validator

from pathcalc.case.fields import SourceId, Text, raise_problems
from pathcalc.quantities.parse import Problem, words


class Strict(BaseModel):
    """Base of all models: unknown keys are refused, values do not change."""

    model_config = ConfigDict(extra="forbid", frozen=True, arbitrary_types_allowed=True, populate_by_name=True)


class OneOf(Strict):
    """A mapping of which ``needs`` (at least, at most) keys are to be given."""

    needs: ClassVar[tuple[int, int]] = (1, 1)
    beside: ClassVar[frozenset[str]] = frozenset()
    """Keys that may stand beside the others and are not counted."""

    @model_validator(mode="after")
    def _count(self) -> OneOf:
        counted = [k for k in type(self).model_fields if k not in self.beside]
        given = [k for k in counted if getattr(self, k) is not None]
        low, high = self.needs
        if not low <= len(given) <= high:
            meant = f"{'one' if low == 1 else low} of" if low == high else f"{low} or {high} of"
            alone = " alone" if len(given) == 1 else ""
            got = f"not {words(given, 'and')}{alone}" if given else "none is given"
            raise_problems(Problem("one-of", f"give {meant} {words(counted)}; {got}", key=True))
        return self

    def given(self) -> dict[str, Any]:
        """Keys that are given with their values, in the order of the model."""
        return {k: v for k in type(self).model_fields if (v := getattr(self, k)) is not None}


LegName = Annotated[
    str,
    Field(
        description="Name of the leg and of the state at its end: letters, digits, spaces, _ and -; unique.",
        examples=["first stage"],
        pattern=r"^[A-Za-z0-9_-]+( [A-Za-z0-9_-]+)*$",
        max_length=80,
    ),
]


class LegModel(Strict):
    """Base of a leg kind. A kind sets ``path`` (a Literal), its fields, and what boundaries it goes with."""

    boundaries: ClassVar[frozenset[str]] = frozenset({"flow", "closed"})
    flow_only: ClassVar[frozenset[str]] = frozenset()
    closed_only: ClassVar[frozenset[str]] = frozenset()
    needs_saturation: ClassVar[bool] = False
    """The kind makes sense only with an equation that has a liquid and a vapour."""
    needs_amount: ClassVar[bool] = False
    """The kind needs the amount of the case."""
    exclusive: ClassVar[tuple[str, ...]] = ()
    """Fields of which at most one may be given."""

    name: LegName
    path: str
    note: Text | None = Field(None, description="Anything a reader should know.", examples=["per vendor sheet"])
    source: SourceId | None = Field(None, description="Id of a source in record.sources.", examples=["vendor"])

    _origin: tuple[int, int] = PrivateAttr(default=(0, 0))
    _origin_file: str = PrivateAttr(default="")

    @property
    def origin(self) -> tuple[int, int]:
        """Line and column where the leg begins; (0, 0) for a leg that does not come from a file."""
        return self._origin

    @property
    def origin_file(self) -> str:
        """File in which the leg is written."""
        return self._origin_file

    @model_validator(mode="after")
    def _at_most_one(self) -> LegModel:
        given = [k for k in self.exclusive if getattr(self, k) is not None]
        if len(given) > 1:
            raise_problems(Problem("one-of", f"give at most one of {words(given, 'and')}", (given[1],), True))
        return self
