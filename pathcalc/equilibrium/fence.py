"""States beyond the ends of an equation in pressure: inside the solid, or denser than it is used for."""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import Model
from pathcalc.equilibrium import reasons
from pathcalc.equilibrium.points import NONE, Points

_ROUNDING = 1e-9


def fenced(model: Model, points: Points) -> Points:
    """The points with those above the melting or the highest pressure marked and blanked."""
    limits = model.residual.limits
    if limits is None:
        return points
    with np.errstate(invalid="ignore"):
        one = (points.reason == 0) & ~(points.x == points.x)
        high = one & (points.p > limits.p_max * (1.0 + _ROUNDING))
        solid = one & ~high & (points.p > limits.melting_pressure(points.T) * (1.0 + _ROUNDING))
    for beyond, reason in ((high, reasons.ABOVE_PRESSURE), (solid, reasons.INSIDE_SOLID)):
        if beyond.any():
            points.reason[beyond] = reason
            points.phase[beyond] = NONE
            for a in (points.T, points.p, points.v):
                a[beyond] = np.nan
    return points
