"""A leg at constant pressure."""

from __future__ import annotations

from typing import TYPE_CHECKING, Literal

from pydantic import Field

from pathcalc.case.fields import (
    HeatOrWork,
    Superheat,
    TargetEnergy,
    TargetEntropy,
    TargetRho,
    TargetT,
    TargetV,
    TargetX,
    Temperature,
)
from pathcalc.case.leg_model import LegModel, OneOf

if TYPE_CHECKING:
    from pathcalc.legs.integration.segments import Integrals
    from pathcalc.legs.run import Exchange, LegRun, Outcome


class IsobaricTo(OneOf):
    """Where the leg ends."""

    T: TargetT | None = Field(
        default=None,
        description="Temperature at the end.",
        examples=["35 degC", {"rise": "40 K"}],
    )
    v: TargetV | None = Field(
        default=None,
        description="Specific volume at the end.",
        examples=["0.8 m3/kg", {"ratio": 2}],
    )
    rho: TargetRho | None = Field(
        default=None,
        description="Density at the end.",
        examples=["1.2 kg/m3"],
    )
    h: TargetEnergy | None = Field(
        default=None,
        description="Enthalpy at the end.",
        examples=["310 kJ/kg", {"rise": "50 kJ/kg"}],
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


class Isobaric(LegModel):
    """A leg at constant pressure."""

    path: Literal["isobaric"] = Field(description="Kind of the leg: a leg at constant pressure.")
    to: IsobaricTo = Field(description="Where the leg ends.")
    reservoir: Temperature | None = Field(
        default=None,
        description="Temperature of the body the heat comes from or goes to; the fluid's own if left out.",
        examples=["20 degC"],
    )


MODEL = Isobaric

FORMULAS = {
    "holds": r"p=p_1",
    "ds": r"\Delta s=\int_{T_1}^{T_2}\frac{c_p}{T}\,\mathrm{d}T",
    "du": r"\Delta u=\int_{T_1}^{T_2}\left[c_p-p\left(\frac{\partial v}{\partial T}\right)_p\right]\mathrm{d}T",
    "work_flow": r"w=\int_{p_1}^{p_2}v\,\mathrm{d}p=0",
    "work_closed": r"w=-p_1\,(v_2-v_1)",
    "boundary": r"\int\frac{\mathrm{d}q}{T}",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Isobaric, run: LegRun) -> Outcome:
    """End state from the pressure and the target (heat is the change of enthalpy); work -p dv, or none in flow."""
    from pathcalc.legs.run import Exchange, Outcome
    from pathcalc.legs.ways import isobar

    a = run.inlet
    targets = run.targets(leg.to)
    if "heat" in targets:
        targets = {"h": a.h + targets["heat"]}
    b = run.reach(p=a.p, **targets)

    def exchange(i: Integrals) -> Exchange:
        if run.flow:
            work, heat = 0.0 * i["dh"], i["dh"]
        else:
            work = -i["p_dv"]
            heat = i["du"] - work
        return Exchange(work, heat, run.heat_boundary(i, heat))

    return Outcome(b, [isobar(a, b)], exchange, reversible=True)
