"""Quantities as the case keeps them: a value in SI with all that was written about it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal


@dataclass(frozen=True)
class Quantity:
    """A value in SI (absolute pressure, K; per mole: SI per mol), and how it was written.

    ``u`` is the standard uncertainty in SI; ``line`` and ``column`` are 0 where it does not come from a file.
    """

    value: float
    dimension: str
    unit: str = ""
    text: str = ""
    per: Literal["mass", "mole"] | None = None
    gauge: bool = False
    u: float | None = None
    shape: Literal["normal", "rectangular", "triangular"] | None = None
    k: float | None = None
    source: str | None = None
    note: str | None = None
    line: int = 0
    column: int = 0


@dataclass(frozen=True)
class Relative:
    """A target that leans on a state: the leg's own inlet, or for ``same_as`` an earlier state by name."""

    kind: Literal["ratio", "rise", "drop", "same_as"]
    amount: Quantity | None = None
    state: str | None = None
    line: int = 0
    column: int = 0
