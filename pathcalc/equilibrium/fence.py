"""States beyond the ends of an equation in pressure: inside the solid, or denser than it is used for.

So too those of a mixture which an equation treats as one component (air), between its dew and bubble lines.
"""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import Model
from pathcalc.equilibrium import reasons
from pathcalc.equilibrium.points import NONE, Points

_ROUNDING = 1e-9
SMALL = 1e-11
"""Part of R T/v that the pressure of a cold liquid may be off by: its bulk modulus is some 30 R T/v, and its volume
is known to some 1e-13 of itself."""


def fenced(model: Model, points: Points) -> Points:
    """The points with those above the melting or the highest pressure marked and blanked."""
    limits = model.residual.limits
    if limits is None:
        return points
    lines = limits.dew_and_bubble(points.T)
    with np.errstate(invalid="ignore"):
        one = (points.reason == 0) & ~(points.x == points.x)
        high = one & (points.p > limits.p_max * (1.0 + _ROUNDING))
        slack = SMALL * model.R * points.T / points.v
        solid = one & ~high & (points.p > limits.melting_pressure(points.T) * (1.0 + _ROUNDING) + slack)
        mixed = np.zeros(points.T.size, dtype=np.bool_)
        if lines is not None:
            mixed = (points.reason == 0) & ((points.x == points.x) | ((points.p > lines[0]) & (points.p < lines[1])))
    for beyond, reason in (
        (high, reasons.ABOVE_PRESSURE),
        (solid, reasons.INSIDE_SOLID),
        (mixed, reasons.BETWEEN_DEW_AND_BUBBLE),
    ):
        if beyond.any():
            points.reason[beyond] = reason
            points.phase[beyond] = NONE
            for a in (points.T, points.p, points.v, points.x, points.v_liquid, points.v_vapour):
                a[beyond] = np.nan
    return points
