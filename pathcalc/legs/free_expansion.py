"""An expansion into a vacuum at constant internal energy, closed only."""

from __future__ import annotations

from typing import TYPE_CHECKING, ClassVar, Literal

from pydantic import Field

from pathcalc.case.fields import TargetP, TargetRho, TargetV
from pathcalc.case.leg_model import LegModel, OneOf

if TYPE_CHECKING:
    from pathcalc.legs.run import LegRun, Outcome


class FreeExpansionTo(OneOf):
    """Where the leg ends."""

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
    p: TargetP | None = Field(
        default=None,
        description="Pressure at the end; absolute unless the unit says gauge.",
        examples=["4.5 barg", {"ratio": 3.1}],
    )


class FreeExpansion(LegModel):
    """An expansion into a vacuum at constant internal energy, closed only."""

    boundaries: ClassVar[frozenset[str]] = frozenset({"closed"})

    path: Literal["free-expansion"] = Field(
        description="Kind of the leg: an expansion into a vacuum at constant internal energy, closed only."
    )
    to: FreeExpansionTo = Field(description="Where the leg ends.")


MODEL = FreeExpansion

FORMULAS = {
    "holds": r"u=u_1",
    "work_flow": r"w=0",
    "work_closed": r"w=0",
    "boundary": r"0",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: FreeExpansion, run: LegRun) -> Outcome:
    """End state from the internal energy and the target; integrated along the line of constant energy."""
    from pathcalc.legs.run import Outcome, nothing
    from pathcalc.legs.ways import constant

    a = run.inlet
    b = run.reach(u=a.u, **run.targets(leg.to))
    run.wrong_side(
        b.v < a.v * (1.0 - 1e-12),
        "a free expansion cannot make the volume smaller",
        "give a larger volume or a lower pressure, or use an adiabatic leg with work",
    )
    return Outcome(b, [constant("u", a, b, own=False)], nothing, reversible=False)
