"""Why a lane has no state: numbers kept per lane, and what each means to a reader.

| number | code                    |
|--------|-------------------------|
| 0      | converged               |
| 1      | at-saturation           |
| 2      | above-critical          |
| 3      | no-root                 |
| 4      | below-triple-point      |
| 5      | above-range             |
| 6      | below-range             |
| 7      | no-coexistence          |
| 8      | pair-not-independent    |
| 9      | target-not-reached      |
| 10     | not-converged           |
| 11     | two-solutions           |
| 12     | inside-solid            |
| 13     | near-critical           |
| 14     | not-a-state             |
| 15     | quality-out-of-range    |
| 16     | above-pressure-range    |
| 17     | between-dew-and-bubble  |
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from pathcalc.equations.contract import Model
from pathcalc.errors import Trouble

CONVERGED = 0
AT_SATURATION = 1
ABOVE_CRITICAL = 2
NO_ROOT = 3
BELOW_TRIPLE_POINT = 4
ABOVE_RANGE = 5
BELOW_RANGE = 6
NO_COEXISTENCE = 7
PAIR_NOT_INDEPENDENT = 8
TARGET_NOT_REACHED = 9
NOT_CONVERGED = 10
TWO_SOLUTIONS = 11
INSIDE_SOLID = 12
NEAR_CRITICAL = 13
NOT_A_STATE = 14
QUALITY_OUT_OF_RANGE = 15
ABOVE_PRESSURE = 16
BETWEEN_DEW_AND_BUBBLE = 17


@dataclass(frozen=True)
class Reason:
    """A reason code with a sentence and what to try next."""

    code: str
    text: str
    remedy: str


REASONS: dict[int, Reason] = {
    CONVERGED: Reason("converged", "the state was found", "nothing to do"),
    AT_SATURATION: Reason(
        "at-saturation",
        "temperature and pressure lie on the saturation line, where they do not fix how much has evaporated",
        "give the quality x, or a phase, or v, h, s or u with either of them",
    ),
    ABOVE_CRITICAL: Reason(
        "above-critical",
        "there is no vapour-liquid equilibrium above the critical point, so a quality has no meaning there",
        "give two of T, p, v, h, s, u instead, or stay below the critical point",
    ),
    NO_ROOT: Reason(
        "no-root",
        "the equation has no volume that fits: the state is denser than it can describe",
        "lower the pressure or the density, or choose an equation that covers dense states",
    ),
    BELOW_TRIPLE_POINT: Reason(
        "below-triple-point",
        "the state lies below the triple point, or below the lowest temperature the equation is used at",
        "stay above it: there the fluid, or a part of it, would be solid, which this equation does not describe",
    ),
    ABOVE_RANGE: Reason(
        "above-range",
        "the temperature lies above the highest one the equation or its heat capacity is used at",
        "stay below that limit, or choose an equation or heat capacity that reaches further",
    ),
    BELOW_RANGE: Reason(
        "below-range",
        "the saturation pressure there lies below that of the triple point",
        "raise the pressure above the triple-point pressure",
    ),
    NO_COEXISTENCE: Reason(
        "no-coexistence",
        "this equation knows no vapour-liquid equilibrium",
        "choose an equation with a liquid phase, or give the state by two of T, p, v, h, s, u",
    ),
    PAIR_NOT_INDEPENDENT: Reason(
        "pair-not-independent",
        "the two given quantities depend on one another for this equation and do not fix a state",
        "give a pressure, a volume or an entropy in place of one of them",
    ),
    TARGET_NOT_REACHED: Reason(
        "target-not-reached",
        "no state within the limits of the equation has the value asked for",
        "check the value and its unit, and the datum it counts from",
    ),
    NOT_CONVERGED: Reason(
        "not-converged",
        "the iteration did not settle",
        "give the state by another pair, preferably with T or p in it, and report the case",
    ),
    TWO_SOLUTIONS: Reason(
        "two-solutions",
        "two states have the values asked for",
        "give another pair that tells them apart, such as one with the pressure",
    ),
    INSIDE_SOLID: Reason(
        "inside-solid",
        "the state lies where the substance is solid",
        "raise the temperature or lower the pressure or density",
    ),
    NEAR_CRITICAL: Reason(
        "near-critical",
        "the state is too close to the critical point to tell liquid from vapour in floating point",
        "move the temperature or pressure away from the critical point by a millionth part",
    ),
    NOT_A_STATE: Reason(
        "not-a-state",
        "a temperature, pressure or volume is missing, not finite, zero or negative",
        "check the value and its unit",
    ),
    QUALITY_OUT_OF_RANGE: Reason(
        "quality-out-of-range", "a vapour quality lies between 0 and 1", "check the value of x"
    ),
    BETWEEN_DEW_AND_BUBBLE: Reason(
        "between-dew-and-bubble",
        "the substance is a mixture that the equation treats as one component: it gives no states between its dew and "
        "bubble lines, where vapour and liquid differ in composition",
        "stay outside the two lines, or give the fluid as a mixture",
    ),
    ABOVE_PRESSURE: Reason(
        "above-pressure-range",
        "the pressure lies above the highest one the equation is used at",
        "lower the pressure or density, or choose an equation that reaches further",
    ),
}


def limit_text(model: Model, reason: int) -> str:
    """The limit that a state of ``reason`` lies beyond, to stand after the reason; empty where it is no limit."""
    low, high = model.T_limits
    if reason == ABOVE_RANGE:
        return f" ({high:.6g} K)"
    if reason == ABOVE_PRESSURE and model.residual.limits is not None:
        return f" ({model.residual.limits.p_max:.6g} Pa)"
    if reason in (BELOW_TRIPLE_POINT, BELOW_RANGE) and model.has_dome:
        from pathcalc.equilibrium.saturation import saturation_at_T

        p = float(saturation_at_T(model, np.array([model.T_triple])).p[0])
        pressure = f" and {p:.6g} Pa" if math.isfinite(p) else ""
        lowest = f"; lowest temperature {low:.6g} K" if low > model.T_triple * 1.0001 else ""
        return f" (triple point {model.T_triple:.6g} K{pressure}{lowest})"
    return f" ({low:.6g} K)" if reason == BELOW_TRIPLE_POINT else ""


def trouble(reason: int, at: str = "") -> Trouble:
    """The reason as an error record for the place ``at``."""
    r = REASONS[int(reason)]
    return Trouble(r.code, at, r.text, r.remedy)
