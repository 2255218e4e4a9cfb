"""A leg along p v^n = const."""

from __future__ import annotations

from typing import TYPE_CHECKING, ClassVar, Literal

from pydantic import Field, model_validator

from pathcalc.case.fields import Number, TargetP, TargetRho, TargetT, TargetV, Temperature, raise_problems
from pathcalc.case.leg_model import LegModel, OneOf
from pathcalc.quantities.parse import Problem

if TYPE_CHECKING:
    from pathcalc.equations.contract import Array
    from pathcalc.legs.integration.segments import Integrals
    from pathcalc.legs.run import Exchange, LegRun, Outcome


class PolytropicTo(OneOf):
    """Where the leg ends."""

    needs: ClassVar[tuple[int, int]] = (1, 2)

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

    @model_validator(mode="after")
    def _independent(self) -> PolytropicTo:
        if self.v is not None and self.rho is not None:
            raise_problems(Problem("dependent-pair", "v and rho say the same; give one of them", ("rho",), True))
        return self


class Polytropic(LegModel):
    """A leg along p v^n = const."""

    path: Literal["polytropic"] = Field(description="Kind of the leg: a leg along p v^n = const.")
    to: PolytropicTo = Field(description="Where the leg ends.")
    exponent: Number | None = Field(
        default=None,
        description="Exponent n of p v^n; where `to` gives one key.",
        examples=[1.3],
    )
    reservoir: Temperature | None = Field(
        default=None,
        description="Temperature of the body the heat comes from or goes to; the fluid's own if left out.",
        examples=["20 degC"],
    )

    @model_validator(mode="after")
    def _exponent(self) -> Polytropic:
        given = self.to.given()
        if len(given) == 2 and self.exponent is not None:
            text = "`to` gives two keys, which fix the exponent; leave one of them out, or the exponent"
            raise_problems(Problem("one-of", text, ("exponent",), True))
        if len(given) == 1 and self.exponent is None:
            raise_problems(
                Problem("missing-key", "`to` gives one key: give the exponent too, or a second key", key=True)
            )
        return self


MODEL = Polytropic

FORMULAS = {
    "holds": r"p\,v^n=p_1\,v_1^n",
    "work_flow": r"w=\int_{p_1}^{p_2}v\,\mathrm{d}p",
    "work_closed": r"w=-\int_{v_1}^{v_2}p\,\mathrm{d}v",
    "boundary": r"\int\frac{\mathrm{d}q}{T}",
}
"""What this kind of leg holds, and how its changes and its work are integrated (LaTeX, for the report)."""


def solve(leg: Polytropic, run: LegRun) -> Outcome:
    """End state on p v^n; work by the integral of p dv or v dp, heat by the balance."""
    import numpy as np

    from pathcalc.legs.run import Exchange, Outcome
    from pathcalc.legs.ways import polytrope

    a = run.inlet
    targets = run.targets(leg.to)
    n = run.value("exponent")
    if n is None:
        b = run.reach(**targets)
        with np.errstate(divide="ignore", invalid="ignore"):
            n = np.where((b.p == a.p) & (b.v == a.v), 1.0, np.log(b.p / a.p) / np.log(a.v / b.v))
        run.wrong_side(
            ~np.isfinite(n) & np.isfinite(b.v),
            "the two ends have the same volume, so that no exponent joins them",
            "use an isochoric leg",
        )
    else:
        b = run.reach(**_end_of(run, targets, n))

    def exchange(i: Integrals) -> Exchange:
        work = i["v_dp"] if run.flow else -i["p_dv"]
        heat = (i["dh"] if run.flow else i["du"]) - work
        return Exchange(work, heat, run.heat_boundary(i, heat))

    return Outcome(b, polytrope(a, b, n), exchange, reversible=True)


def _end_of(run: LegRun, targets: dict[str, Array], n: Array) -> dict[str, Array]:
    """The pair (p, v) of the end from one target and the exponent."""
    import numpy as np

    from pathcalc.equilibrium.flash import flash
    from pathcalc.legs.integration.bracket import scanned_root

    a = run.inlet
    if "v" in targets:
        return {"v": targets["v"], "p": a.p * (a.v / targets["v"]) ** n}
    if "p" in targets:
        run.wrong_side(
            (n == 0.0) & (targets["p"] != a.p),
            "with the exponent 0 the pressure does not change",
            "give the end another way, or another exponent",
        )
        with np.errstate(divide="ignore", invalid="ignore"):
            return {"p": targets["p"], "v": a.v * (a.p / targets["p"]) ** (1.0 / n)}

    def miss(log_v: Array) -> Array:
        points = flash(run.model, {"T": targets["T"], "v": np.exp(log_v)})
        value: Array = np.log(points.p / a.p) + n * (log_v - np.log(a.v))
        return value

    steps = np.sinh(np.linspace(-3.2, 3.2, 65)) / 2.0
    log_v = scanned_root(miss, np.log(a.v), steps)
    run.wrong_side(
        np.isnan(log_v) & np.isfinite(a.v),
        "no state on the polytrope has the target temperature",
        "give another exponent (along an isotherm of a perfect gas n is 1), or the end by pressure or volume",
    )
    v = np.exp(log_v)
    return {"v": v, "p": a.p * (a.v / v) ** n}
