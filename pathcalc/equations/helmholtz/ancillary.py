"""Ancillary equations: properties at saturation and melting pressures as functions of temperature alone.

Forms as in R. Span, Multiparameter Equations of State (Springer, Berlin 2000), section 2.3; the melting
curve of F. E. Simon and G. Glatzel, Z. anorg. allg. Chem. 178 (1929) 309. The forms are told in
:mod:`pathcalc.substances.reference`.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equations.helmholtz.term import columns
from pathcalc.substances.reference import Ancillary, MeltingPart


def saturated(equation: Ancillary, T: Array) -> Array:
    """The property (Pa or mol/m3) at ``T`` (K, shape (m,)); NaN above ``equation.T_r``.

    Below ``equation.T_min`` it is extrapolated: a start for a solution, not a result.
    """
    n, t = columns(equation.rows, 2)
    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        theta = 1.0 - T / equation.T_r
        total = np.add.reduce(n * np.exp(t * np.log(theta)), axis=0)
        if equation.form == "linear":
            value = equation.value_r * (1.0 + total)
        elif equation.form == "exponential":
            value = equation.value_r * np.exp(total)
        else:
            value = equation.value_r * np.exp(total * equation.T_r / T)
    return np.asarray(np.where(theta >= 0.0, value, np.nan))


def melting_pressure(parts: Sequence[MeltingPart], T: Array) -> Array:
    """The melting pressure (Pa) at ``T`` (K, shape (m,)) from the first stretch that holds it; else NaN."""
    out = np.full(np.shape(T), np.nan)
    for part in reversed(parts):
        a, t = columns(part.rows, 2)
        x = np.asarray(T, dtype=np.float64) / part.T_0
        with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
            if part.form == "simon":
                p = part.p_0 + np.add.reduce(a * (x**t - 1.0), axis=0)
            elif part.form == "powers-of-ratio":
                p = part.p_0 * (1.0 + np.add.reduce(a * (x**t - 1.0), axis=0))
            else:
                p = part.p_0 * (1.0 + np.add.reduce(a * (x - 1.0) ** t, axis=0))
        inside = (part.T_min <= T) & (part.T_max >= T)
        out = np.where(inside, p, out)
    return out
