"""A leg at constant enthalpy through a restriction, flow only."""

from __future__ import annotations

from typing import TYPE_CHECKING, ClassVar, Literal

from pydantic import Field

from pathcalc.case.fields import TargetP, TargetT
from pathcalc.case.leg_model import LegModel, OneOf

if TYPE_CHECKING:
    from pathcalc.equations.contract import Array
    from pathcalc.legs.run import LegRun, Outcome


class ThrottlingTo(OneOf):
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


class Throttling(LegModel):
    """A leg at constant enthalpy through a restriction, flow only."""

    boundaries: ClassVar[frozenset[str]] = frozenset({"flow"})

    path: Literal["throttling"] = Field(
        description="Kind of the leg: a leg at constant enthalpy through a restriction, flow only."
    )
    to: ThrottlingTo = Field(description="Where the leg ends.")


MODEL = Throttling

FORMULAS = {
    "holds": r"h=h_1",
    "work_flow": r"w=0",
    "work_closed": r"w=0",
    "boundary": r"0",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Throttling, run: LegRun) -> Outcome:
    """End state from the enthalpy and the target; the state change is integrated along the isenthalp.

    Of several states with the target temperature the one is taken that is reached first as the pressure falls.
    """
    import numpy as np

    from pathcalc.equilibrium.flash import flash
    from pathcalc.legs.integration.bracket import scanned_root
    from pathcalc.legs.run import Outcome, nothing
    from pathcalc.legs.ways import constant

    a = run.inlet
    targets = run.targets(leg.to)
    if "T" in targets:

        def miss(log_p: Array) -> Array:
            return np.asarray(flash(run.model, {"p": np.exp(log_p), "h": a.h}).T / targets["T"] - 1.0)

        log_p = scanned_root(miss, np.log(a.p), -np.sinh(np.linspace(0.0, 4.2, 43))[::-1] / 2.0)
        run.wrong_side(
            np.isnan(log_p) & np.isfinite(a.p),
            "throttling does not lead to the target temperature",
            "give a pressure, or a temperature on the way (an ideal gas keeps its temperature)",
        )
        targets = {"p": np.exp(log_p)}
    b = run.reach(h=a.h, **targets)
    run.wrong_side(
        b.p > a.p * (1.0 + 1e-12),
        "a throttling leg cannot raise the pressure",
        "give a target at a lower pressure, or use an adiabatic leg with work",
    )
    return Outcome(b, [constant("h", a, b, own=False)], nothing, reversible=False)
