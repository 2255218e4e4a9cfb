"""A leg along the coexistence of liquid and vapour, at constant quality."""

from __future__ import annotations

from typing import TYPE_CHECKING, ClassVar, Literal

from pydantic import Field

from pathcalc.case.fields import TargetP, TargetT, Temperature
from pathcalc.case.leg_model import LegModel, OneOf

if TYPE_CHECKING:
    from pathcalc.legs.integration.segments import Integrals
    from pathcalc.legs.run import Exchange, LegRun, Outcome


class SaturationTo(OneOf):
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


class Saturation(LegModel):
    """A leg along the coexistence of liquid and vapour, at constant quality."""

    needs_saturation: ClassVar[bool] = True

    path: Literal["saturation"] = Field(
        description="Kind of the leg: along the coexistence of liquid and vapour, at the quality of the inlet."
    )
    to: SaturationTo = Field(description="Where the leg ends.")
    reservoir: Temperature | None = Field(
        default=None,
        description="Temperature of the body the heat comes from or goes to; the fluid's own if left out.",
        examples=["20 degC"],
    )


MODEL = Saturation

FORMULAS = {
    "holds": r"x=x_1",
    "work_flow": r"w=\int_{p_1}^{p_2}v\,\mathrm{d}p",
    "work_closed": r"w=-\int_{v_1}^{v_2}p\,\mathrm{d}v",
    "boundary": r"\int\frac{\mathrm{d}q}{T}",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Saturation, run: LegRun) -> Outcome:
    """End state from the inlet's quality and the target; work by the integral along the coexistence line."""
    import numpy as np

    from pathcalc.legs.integration.families import ConstantQuality
    from pathcalc.legs.integration.segments import Segment
    from pathcalc.legs.run import Exchange, Outcome

    a = run.inlet
    run.wrong_side(
        np.isnan(a.points.x) & np.isfinite(a.T),
        "the inlet is not saturated, so there is no coexistence to follow",
        "bring the fluid to saturation first, such as by an isobaric leg to a quality x",
    )
    b = run.reach(x=a.points.x, **run.targets(leg.to))

    def exchange(i: Integrals) -> Exchange:
        work = i["v_dp"] if run.flow else -i["p_dv"]
        heat = (i["dh"] if run.flow else i["du"]) - work
        return Exchange(work, heat, run.heat_boundary(i, heat))

    way = Segment(ConstantQuality(a.points.x), a.points, b.points, region="dome")
    return Outcome(b, [way], exchange, reversible=True)
