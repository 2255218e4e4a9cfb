"""Adiabatic mixing with another stream of the same fluid, flow only."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated, ClassVar, Literal

from pydantic import Field

from pathcalc.case.fields import QuantityField
from pathcalc.case.leg_model import LegModel, Strict
from pathcalc.case.sections import Start
from pathcalc.quantities.values import Quantity

if TYPE_CHECKING:
    from pathcalc.legs.run import LegRun, Outcome


class Stream(Strict):
    """The stream that joins."""

    state: Start = Field(
        description="Its state by two independent properties, as in `start`.",
        examples=[{"T": "15 degC", "p": "4.5 barg"}],
    )
    amount: Annotated[Quantity, QuantityField(("mass-flow", "mole-flow"), low=0.0, above=True)] = Field(
        description="Its amount a time.", examples=["0.1 kg/s"]
    )


class Mixing(LegModel):
    """Adiabatic mixing with another stream of the same fluid, flow only."""

    boundaries: ClassVar[frozenset[str]] = frozenset({"flow"})
    needs_amount: ClassVar[bool] = True

    path: Literal["mixing"] = Field(
        description="Kind of the leg: adiabatic mixing with another stream of the same fluid; flow only. "
        "The outlet has the lower of the two pressures."
    )
    other: Stream = Field(
        alias="with",
        description="The stream that joins.",
        examples=[{"state": {"T": "15 degC", "p": "4.5 barg"}, "amount": "0.1 kg/s"}],
    )


MODEL = Mixing

FORMULAS = {
    "holds": r"\sum \dot m h",
    "work_flow": r"w=0",
    "work_closed": r"w=0",
    "boundary": r"0",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Mixing, run: LegRun) -> Outcome:
    """Outlet from the mean enthalpy at the lower of the two pressures; results count per amount leaving.

    With the share f of the joining stream, h_out − h_inlet = f (h_joining − h_inlet).
    """
    import numpy as np

    from pathcalc.legs.run import Outcome, nothing
    from pathcalc.legs.ways import heated

    assert run.moles is not None
    a, at = run.inlet, f"{leg.name}.with"
    joining = run.reach(**run.setting.pair(leg.other.state.given(), f"{at}.state"))
    extra = run.setting.amount(leg.other.amount, f"{at}.amount")
    share = extra / (run.moles + extra)
    b = run.reach(p=np.minimum(a.p, joining.p), h=a.h + share * (joining.h - a.h))
    return Outcome(
        b,
        heated(a, b, own=False),
        nothing,
        reversible=False,
        moles=run.moles + extra,
        other=joining,
        other_share=share,
    )
