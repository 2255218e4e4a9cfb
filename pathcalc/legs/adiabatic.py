"""A leg without heat."""

from __future__ import annotations

from typing import TYPE_CHECKING, ClassVar, Literal

from pydantic import Field

from pathcalc.case.fields import Efficiency, HeatOrWork, Pressure, TargetP, TargetRho, TargetT, TargetV
from pathcalc.case.leg_model import LegModel, OneOf

if TYPE_CHECKING:
    from pathcalc.legs.run import LegRun, Outcome


class AdiabaticTo(OneOf):
    """Where the leg ends."""

    p: TargetP | None = Field(
        default=None,
        description="Pressure at the end; absolute unless the unit says gauge.",
        examples=["4.5 barg", {"ratio": 3.1}],
    )
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
    work: HeatOrWork | None = Field(
        default=None,
        description="Work into the fluid: specific, or total where the case has an amount.",
        examples=["90 kJ/kg", "-1.2 MW"],
    )


class Adiabatic(LegModel):
    """A leg without heat."""

    flow_only: ClassVar[frozenset[str]] = frozenset({"polytropic_efficiency"})
    closed_only: ClassVar[frozenset[str]] = frozenset({"against"})
    exclusive: ClassVar[tuple[str, ...]] = ("efficiency", "polytropic_efficiency", "against")

    path: Literal["adiabatic"] = Field(description="Kind of the leg: a leg without heat.")
    to: AdiabaticTo = Field(description="Where the leg ends.")
    efficiency: Efficiency | None = Field(
        default=None,
        description="Work of the reversible leg to that of this one where the machine takes work; "
        "the other way round where it gives work.",
        examples=[0.76, "80 %"],
    )
    polytropic_efficiency: Efficiency | None = Field(
        default=None,
        description="Efficiency of every small step of the leg.",
        examples=[0.82],
    )
    against: Pressure | None = Field(
        default=None,
        description="Constant pressure the fluid works against; closed only.",
        examples=["1 bar"],
    )


MODEL = Adiabatic

FORMULAS = {
    "holds": r"q=0",
    "work_flow": r"w=\Delta h-q=\Delta h",
    "work_closed": r"w=\Delta u-q=\Delta u",
    "boundary": r"0",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Adiabatic, run: LegRun) -> Outcome:
    """Reversible, with an isentropic or a polytropic efficiency, or against a constant pressure."""
    from pathcalc.legs import adiabatic_ways as ways

    targets = run.targets(leg.to)
    if leg.efficiency is not None:
        return ways.isentropic_efficiency(run, targets)
    if leg.polytropic_efficiency is not None:
        return ways.polytropic_efficiency(run, targets)
    if leg.against is not None:
        return ways.against_pressure(run, targets)
    return ways.reversible(run, targets)
