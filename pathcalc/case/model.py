"""The case as the solver reads it."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Literal

from pathcalc.case.leg_model import LegModel
from pathcalc.case.nodes import Mark
from pathcalc.case.sections import Fluid, Limit, Record, Report
from pathcalc.quantities.values import Quantity

T_SURROUNDINGS = 298.15
P_SURROUNDINGS = 101325.0
T_DEFAULT = Quantity(T_SURROUNDINGS, "temperature", "K", "298.15 K")
P_DEFAULT = Quantity(P_SURROUNDINGS, "pressure", "bar", "1.01325 bar")


@dataclass(frozen=True)
class CaseSurroundings:
    """Gauge zero and dead state, by default 298.15 K and 1.01325 bar; the flags say what the case gives."""

    T: Quantity = T_DEFAULT
    p: Quantity = P_DEFAULT
    T_given: bool = False
    p_given: bool = False


@dataclass(frozen=True)
class Case:
    """A valid case. ``positions`` has the place of every value by its path of keys and list indices."""

    id: str
    title: str
    path: Path | None
    sha256: str
    text: str
    includes: tuple[tuple[str, str], ...]
    record: Record
    fluid: Fluid
    boundary: Literal["flow", "closed"]
    amount: Quantity | None
    surroundings: CaseSurroundings
    start: dict[str, Quantity | str]
    legs: tuple[LegModel, ...]
    cycle: bool
    limits: tuple[Limit, ...]
    units: dict[str, str]
    report: Report
    positions: dict[tuple[str | int, ...], Mark] = field(repr=False)
    user: dict[tuple[str | int, ...], Any] = field(repr=False)
    """What stands under the user's own keys (those that begin with ``x-``), by path."""
