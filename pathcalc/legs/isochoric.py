"""A leg at constant volume."""

from __future__ import annotations

from typing import TYPE_CHECKING, Literal

from pydantic import Field

from pathcalc.case.fields import (
    HeatOrWork,
    TargetEnergy,
    TargetEntropy,
    TargetP,
    TargetT,
    TargetX,
    Temperature,
)
from pathcalc.case.leg_model import LegModel, OneOf

if TYPE_CHECKING:
    from pathcalc.legs.integration.segments import Integrals
    from pathcalc.legs.run import Exchange, LegRun, Outcome


class IsochoricTo(OneOf):
    """Where the leg ends."""

    T: TargetT | None = Field(
        default=None,
        description="Temperature at the end.",
        examples=["35 degC", {"rise": "40 K"}],
    )
    p: TargetP | None = Field(
        default=None,
        description="Pressure at the end; absolute unless the unit says gauge.",
        examples=["4.5 barg", {"ratio": 3.1}],
    )
    u: TargetEnergy | None = Field(
        default=None,
        description="Internal energy at the end.",
        examples=["220 kJ/kg"],
    )
    s: TargetEntropy | None = Field(
        default=None,
        description="Entropy at the end.",
        examples=["6.8 kJ/(kg K)"],
    )
    x: TargetX | None = Field(
        default=None,
        description="Vapour quality by mass at the end, 0 to 1.",
        examples=[0.9],
    )
    heat: HeatOrWork | None = Field(
        default=None,
        description="Heat into the fluid: specific, or total where the case has an amount.",
        examples=["120 kJ/kg", "35 kW"],
    )


class Isochoric(LegModel):
    """A leg at constant volume."""

    path: Literal["isochoric"] = Field(description="Kind of the leg: a leg at constant volume.")
    to: IsochoricTo = Field(description="Where the leg ends.")
    reservoir: Temperature | None = Field(
        default=None,
        description="Temperature of the body the heat comes from or goes to; the fluid's own if left out.",
        examples=["20 degC"],
    )


MODEL = Isochoric

FORMULAS = {
    "holds": r"v=v_1",
    "ds": r"\Delta s=\int_{T_1}^{T_2}\frac{c_v}{T}\,\mathrm{d}T",
    "du": r"\Delta u=\int_{T_1}^{T_2}c_v\,\mathrm{d}T",
    "work_flow": r"w=\int_{p_1}^{p_2}v\,\mathrm{d}p=v_1\,(p_2-p_1)",
    "work_closed": r"w=-\int p\,\mathrm{d}v=0",
    "boundary": r"\int\frac{\mathrm{d}q}{T}",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Isochoric, run: LegRun) -> Outcome:
    """End state from the volume and the target (heat is the change of internal energy); no work by p dv."""
    from pathcalc.legs.run import Exchange, Outcome
    from pathcalc.legs.ways import isochore

    a = run.inlet
    targets = run.targets(leg.to)
    if "heat" in targets:
        targets = {"u": a.u + targets["heat"]}
    b = run.reach(v=a.v, **targets)

    def exchange(i: Integrals) -> Exchange:
        work = i["v_dp"] if run.flow else 0.0 * i["du"]
        heat = (i["dh"] if run.flow else i["du"]) - work
        return Exchange(work, heat, run.heat_boundary(i, heat))

    return Outcome(b, [isochore(a, b)], exchange, reversible=True)
