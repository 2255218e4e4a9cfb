"""A leg at constant temperature."""

from __future__ import annotations

from typing import TYPE_CHECKING, ClassVar, Literal

from pydantic import Field

from pathcalc.case.fields import (
    Efficiency,
    Pressure,
    TargetEntropy,
    TargetP,
    TargetRho,
    TargetV,
    TargetX,
    Temperature,
)
from pathcalc.case.leg_model import LegModel, OneOf

if TYPE_CHECKING:
    from pathcalc.legs.integration.segments import Integrals
    from pathcalc.legs.run import Exchange, LegRun, Outcome


class IsothermalTo(OneOf):
    """Where the leg ends."""

    p: TargetP | None = Field(
        default=None,
        description="Pressure at the end; absolute unless the unit says gauge.",
        examples=["4.5 barg", {"ratio": 3.1}],
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


class Isothermal(LegModel):
    """A leg at constant temperature."""

    flow_only: ClassVar[frozenset[str]] = frozenset({"efficiency"})
    closed_only: ClassVar[frozenset[str]] = frozenset({"against"})

    path: Literal["isothermal"] = Field(description="Kind of the leg: a leg at constant temperature.")
    to: IsothermalTo = Field(description="Where the leg ends.")
    against: Pressure | None = Field(
        default=None,
        description="Constant pressure the fluid works against; closed only.",
        examples=["1 bar"],
    )
    efficiency: Efficiency | None = Field(
        default=None,
        description="Work of the reversible leg to that of this one where the machine takes work; "
        "the other way round where it gives work.",
        examples=[0.76, "80 %"],
    )
    reservoir: Temperature | None = Field(
        default=None,
        description="Temperature of the body the heat comes from or goes to; the fluid's own if left out.",
        examples=["20 degC"],
    )


MODEL = Isothermal

FORMULAS = {
    "holds": r"T=T_1",
    "ds": r"\Delta s=\int_{v_1}^{v_2}\left(\frac{\partial p}{\partial T}\right)_v\mathrm{d}v",
    "du": r"\Delta u=\int_{v_1}^{v_2}\left[T\left(\frac{\partial p}{\partial T}\right)_v-p\right]\mathrm{d}v",
    "work_flow": r"w=\int_{p_1}^{p_2}v\,\mathrm{d}p",
    "work_closed": r"w=-\int_{v_1}^{v_2}p\,\mathrm{d}v",
    "boundary": r"\frac{q}{T_1}",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Isothermal, run: LegRun) -> Outcome:
    """End state from the temperature and the target; work by the integral of p dv or v dp, heat by the balance."""
    from pathcalc.legs.run import Exchange, Outcome, machine_work
    from pathcalc.legs.ways import isotherm

    a = run.inlet
    b = run.reach(T=a.T, **run.targets(leg.to))
    against, efficiency = run.value("against"), run.value("efficiency")

    def exchange(i: Integrals) -> Exchange:
        if run.flow:
            work = machine_work(i["v_dp"], efficiency)
            heat = i["dh"] - work
        else:
            work = -i["p_dv"] if against is None else -against * (b.v - a.v)
            heat = i["du"] - work
        reservoir = run.value("reservoir")
        return Exchange(work, heat, heat / (a.T if reservoir is None else reservoir))

    reversible = against is None and efficiency is None
    return Outcome(b, [isotherm(a, b)], exchange, reversible)
