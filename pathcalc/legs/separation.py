"""Separation of coexisting phases: one is kept, the other leaves; flow only."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated, ClassVar, Literal

from pydantic import Field

from pathcalc.case.fields import ChoiceField
from pathcalc.case.leg_model import LegModel

if TYPE_CHECKING:
    from pathcalc.legs.run import LegRun, Outcome


class Separation(LegModel):
    """Separation of coexisting phases: one is kept, the other leaves; flow only."""

    boundaries: ClassVar[frozenset[str]] = frozenset({"flow"})
    needs_saturation: ClassVar[bool] = True

    path: Literal["separation"] = Field(
        description="Kind of the leg: one of the coexisting phases is kept, the other leaves; flow only."
    )
    keep: Annotated[str, ChoiceField(("vapour", "liquid"))] = Field(
        description="The phase that goes on along the path; the amount becomes its share.",
        examples=["vapour"],
    )


MODEL = Separation

FORMULAS = {
    "holds": r"T=T_1,\ p=p_1",
    "work_flow": r"w=0",
    "work_closed": r"w=0",
    "boundary": r"0",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Separation, run: LegRun) -> Outcome:
    """The kept phase at the temperature and pressure of the inlet; results count per amount kept.

    With the share k kept, h_kept − h_inlet = (1 − k)/k (h_inlet − h_other): what the leaving phase carries off.
    """
    import numpy as np

    from pathcalc.legs.run import Outcome, nothing
    from pathcalc.legs.ways import isobar

    a = run.inlet
    vapour = leg.keep == "vapour"
    run.wrong_side(
        ~((a.points.x > 0.0) & (a.points.x < 1.0)) & np.isfinite(a.T),
        "the inlet does not hold two phases, so there is nothing to separate",
        "cool, throttle or expand the fluid into the two-phase region first, or leave the separation out",
    )
    quality = np.full(run.n, 1.0 if vapour else 0.0)
    kept, other = run.reach(T=a.T, x=quality), run.reach(T=a.T, x=1.0 - quality)
    share = a.points.x if vapour else 1.0 - a.points.x
    with np.errstate(divide="ignore", invalid="ignore"):
        weight = (1.0 - share) / share
    return Outcome(
        kept,
        [isobar(a, kept, own=False)],
        nothing,
        reversible=False,
        moles=None if run.moles is None else run.moles * share,
        other=other,
        other_share=-weight,
    )
