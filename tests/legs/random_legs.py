"""Random single legs for the property tests: an equation, a substance, a start, a leg of a given kind."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from hypothesis import strategies as st
from solving import solve

from pathcalc.errors import NoSolutionError
from pathcalc.substances import read_card

SUBSTANCES = ("propane", "carbon-dioxide", "water", "r-134a", "ammonia", "nitrogen", "heptane")
CUBICS = ("van-der-waals", "redlich-kwong", "soave", "peng-robinson")
REGIONS = ("vapour", "supercritical", "dense", "two-phase")

HONEST_REASONS = {
    "above-range", "below-range", "below-triple-point", "no-root", "target-not-reached", "wrong-side",
    "above-critical", "quality-out-of-range", "not-a-state", "at-saturation", "path-not-followed",
    "integral-not-converged",
}  # fmt: skip
"""Reasons that a random leg may have to end in; anything else is a fault of the solver."""


@dataclass(frozen=True)
class RandomLeg:
    """A drawn leg; ``T_c`` and ``p_c`` scale it."""

    substance: str
    equation: str
    region: str
    T: float
    second: float
    leg: str
    boundary: str

    @property
    def fluid(self) -> str:
        """The fluid's keys."""
        return f"substance: {self.substance}, equation: {self.equation}"

    @property
    def start(self) -> str:
        """The start's keys."""
        second = f"x: {self.second!r}" if self.region == "two-phase" else f"p: {self.second!r} Pa"
        return f"T: {self.T!r} K, {second}"

    def solve(self, *more_legs: str) -> Any:
        """Solution, or None where the case honestly has none."""
        try:
            return solve(self.fluid, self.start, f"name: a, {self.leg}", *more_legs, boundary=self.boundary)
        except NoSolutionError as error:
            trouble = error.trouble
        assert trouble.code in HONEST_REASONS, trouble
        assert trouble.remedy
        return None


def _leg(draw: st.DrawFn, kind: str) -> tuple[str, str]:
    """Text of a leg of the kind, and a boundary it goes with."""
    either = draw(st.sampled_from(["flow", "closed"]))
    ratio = round(2.0 ** draw(st.floats(-2.0, 2.0)), 4)
    by = draw(st.sampled_from(["p", "v"]))
    if kind in ("isothermal", "adiabatic"):
        return f"path: {kind}, to: {{{by}: {{ratio: {ratio}}}}}", either
    if kind == "isobaric":
        return f"path: isobaric, to: {{v: {{ratio: {ratio}}}}}", either
    if kind == "isochoric":
        return f"path: isochoric, to: {{T: {{ratio: {round(0.75 + ratio / 4.0, 4)}}}}}", either
    if kind == "polytropic":
        n = draw(st.sampled_from([0.6, 1.0, 1.15, 1.4]))
        return f"path: polytropic, exponent: {n}, to: {{v: {{ratio: {ratio}}}}}", either
    if kind == "efficiency":
        eta = draw(st.sampled_from([0.5, 0.75, 0.95]))
        return f"path: adiabatic, to: {{p: {{ratio: {ratio}}}}}, efficiency: {eta}", "flow"
    if kind == "polytropic-efficiency":
        eta = draw(st.sampled_from([0.6, 0.8, 0.95]))
        return f"path: adiabatic, to: {{p: {{ratio: {ratio}}}}}, polytropic_efficiency: {eta}", "flow"
    if kind == "throttling":
        return f"path: throttling, to: {{p: {{ratio: {round(ratio / 4.2, 4)}}}}}", "flow"
    if kind == "free-expansion":
        return f"path: free-expansion, to: {{v: {{ratio: {5.0 * ratio}}}}}", "closed"
    assert kind == "workless"
    drop = draw(st.sampled_from([0.98, 0.9]))
    T_ratio = round(0.75 + ratio / 4.0, 4)
    return f"path: workless, to: {{T: {{ratio: {T_ratio}}}, p: {{ratio: {drop}}}}}", "flow"


REVERSIBLE = ("isothermal", "isobaric", "isochoric", "adiabatic", "polytropic")
KINDS = (*REVERSIBLE, "efficiency", "polytropic-efficiency", "throttling", "free-expansion", "workless")


@st.composite
def legs(draw: st.DrawFn, kinds: tuple[str, ...] = KINDS, regions: tuple[str, ...] = REGIONS) -> RandomLeg:
    """A random leg of one of the kinds from a start in one of the regions."""
    substance, equation = draw(st.sampled_from(SUBSTANCES)), draw(st.sampled_from(CUBICS))
    region = draw(st.sampled_from(regions))
    card = read_card(substance)
    T_c, p_c = card.T_c.value, card.p_c.value
    fraction = draw(st.floats(0.0, 1.0))
    if region == "vapour":
        T, second = T_c * (0.8 + 0.5 * fraction), p_c * 10.0 ** draw(st.floats(-3.0, -1.2))
    elif region == "supercritical":
        T, second = T_c * (1.1 + 0.7 * fraction), p_c * 10.0 ** draw(st.floats(-0.5, 0.6))
    elif region == "dense":
        T, second = T_c * (0.75 + 0.2 * fraction), p_c * draw(st.floats(1.2, 4.0))
    else:
        T, second = T_c * (0.75 + 0.2 * fraction), draw(st.sampled_from([0.0, 0.1, 0.5, 0.95, 1.0]))
    leg, boundary = _leg(draw, draw(st.sampled_from(kinds)))
    return RandomLeg(substance, equation, region, round(T, 3), float(f"{second:.5g}"), leg, boundary)
