"""Heating or cooling without shaft work and with a pressure drop, flow only."""

from __future__ import annotations

from typing import TYPE_CHECKING, ClassVar, Literal

from pydantic import Field, model_validator

from pathcalc.case.fields import (
    HeatOrWork,
    PressureDrop,
    Superheat,
    TargetEnergy,
    TargetP,
    TargetT,
    TargetX,
    Temperature,
    raise_problems,
)
from pathcalc.case.leg_model import LegModel, OneOf
from pathcalc.quantities.parse import Problem

if TYPE_CHECKING:
    from pathcalc.legs.integration.segments import Integrals
    from pathcalc.legs.run import Exchange, LegRun, Outcome


class WorklessTo(OneOf):
    """Where the leg ends."""

    beside: ClassVar[frozenset[str]] = frozenset({"p"})

    T: TargetT | None = Field(
        default=None,
        description="Temperature at the end.",
        examples=["35 degC", {"rise": "40 K"}],
    )
    h: TargetEnergy | None = Field(
        default=None,
        description="Enthalpy at the end.",
        examples=["310 kJ/kg", {"rise": "50 kJ/kg"}],
    )
    x: TargetX | None = Field(
        default=None,
        description="Vapour quality by mass at the end, 0 to 1.",
        examples=[0.9],
    )
    superheat: Superheat | None = Field(
        default=None,
        description="Temperature at the end above saturation at its pressure.",
        examples=["5 K"],
    )
    subcooling: Superheat | None = Field(
        default=None,
        description="Temperature at the end below saturation at its pressure.",
        examples=["3 K"],
    )
    heat: HeatOrWork | None = Field(
        default=None,
        description="Heat into the fluid: specific, or total where the case has an amount.",
        examples=["120 kJ/kg", "35 kW"],
    )
    p: TargetP | None = Field(
        default=None,
        description="Pressure at the end; absolute unless the unit says gauge.",
        examples=["4.5 barg", {"ratio": 3.1}],
    )


class Workless(LegModel):
    """Heating or cooling without shaft work and with a pressure drop, flow only."""

    boundaries: ClassVar[frozenset[str]] = frozenset({"flow"})

    path: Literal["workless"] = Field(
        description="Kind of the leg: heat without shaft work, with a pressure drop; flow only."
    )
    to: WorklessTo = Field(description="Where the leg ends.")
    pressure_drop: PressureDrop | None = Field(
        default=None,
        description="Pressure at the inlet less pressure at the end.",
        examples=["0.15 bar"],
    )
    reservoir: Temperature | None = Field(
        default=None,
        description="Temperature of the body the heat comes from or goes to; the fluid's own if left out.",
        examples=["20 degC"],
    )

    @model_validator(mode="after")
    def _one_pressure(self) -> Workless:
        if self.to.p is not None and self.pressure_drop is not None:
            text = "give pressure_drop or the key p of `to`, not both"
            raise_problems(Problem("one-of", text, ("pressure_drop",), True))
        return self


MODEL = Workless

FORMULAS = {
    "holds": r"w=0,\ \mathrm{d}p\propto\mathrm{d}h",
    "work_flow": r"w=0",
    "work_closed": r"w=0",
    "boundary": r"\int\frac{\mathrm{d}h}{T}",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Workless, run: LegRun) -> Outcome:
    """End state from the outlet pressure and the target; heat is the change of enthalpy.

    A pressure drop is spread in proportion to the heat. Without a reservoir heat is taken to cross at the fluid's
    own temperature, so that the entropy generated is that of the friction alone.
    """
    from pathcalc.legs.run import Exchange, Outcome
    from pathcalc.legs.ways import heated

    a = run.inlet
    targets = run.targets(leg.to)
    drop = run.value("pressure_drop")
    p = targets.pop("p", a.p) if drop is None else a.p - drop
    run.wrong_side(
        p <= 0.0, "the pressure drop is larger than the pressure at the inlet", "give a smaller pressure drop"
    )
    run.wrong_side(
        p > a.p * (1.0 + 1e-12),
        "the pressure cannot rise along a leg without work",
        "give an outlet pressure at or below that of the inlet",
    )
    if "heat" in targets:
        targets = {"h": a.h + targets["heat"]}
    b = run.reach(p=p, **targets)

    def exchange(i: Integrals) -> Exchange:
        reservoir = run.value("reservoir")
        heat = i["dh"]
        return Exchange(0.0 * heat, heat, i["dh_over_T"] if reservoir is None else heat / reservoir)

    return Outcome(b, heated(a, b), exchange, reversible=False)
