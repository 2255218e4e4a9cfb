"""A start for the saturation pressure of a two-constant cubic: its error does not reach a result.

The reduced saturation pressure π = p b/(R T) of such an equation depends on θ = a/(R T b) alone. Near the
critical point ln(π/π_c) = t F(√(1 + t)), t = θ/θ_c − 1, with a polynomial F fitted to the equation's own
saturation states (t ≤ 3.6; within 0.0001 for van der Waals and Redlich–Kwong, 0.001 for Peng–Robinson in ln
π). At lower temperature the liquid is taken at zero pressure and the vapour to first order in density.
"""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import Array

_FIT = {
    (0.0, 0.0): (-5.06857939, 3.96043191, -2.22654139, 0.21359151, 0.15605886, -0.03493103),
    (1.0, 0.0): (-5.59973533, 5.25616839, -3.60563359, 0.95206135, -0.04312295, -0.0132973626),
    (2.0, -1.0): (-9.65959737, 15.84126061, -15.35372825, 7.50053182, -1.87575092, 0.19242870),
}
_T_FIT = 3.6


def critical_slope(u: float, w: float) -> float:
    """d ln π/dt at the critical point, by the fit."""
    return sum(_FIT[(round(u, 9), round(w, 9))])


def saturation_start(theta: Array, theta_c: float, eta_c: float, u: float, w: float) -> Array:
    """π = p b/(R T) at saturation for θ > θ_c, NaN elsewhere; shape (n,)."""
    fit = _FIT[(round(u, 9), round(w, 9))]
    pi_c = eta_c / (1.0 - eta_c) - theta_c * eta_c**2 / (1.0 + u * eta_c + w * eta_c**2)
    t = theta / theta_c - 1.0
    with np.errstate(all="ignore"):
        s = np.sqrt(1.0 + np.minimum(t, _T_FIT))
        f = ((((fit[5] * s + fit[4]) * s + fit[3]) * s + fit[2]) * s + fit[1]) * s + fit[0]
        log_pi = float(np.log(pi_c)) + t * f
        cold = t > _T_FIT
        if cold.any():
            log_pi = np.where(cold, _cold(theta, u, w), log_pi)
        return np.where(t >= 0.0, np.exp(log_pi), np.nan)


def _cold(theta: Array, u: float, w: float) -> Array:
    """ln π from ln φ_liquid(p → 0) = ln φ_vapour ≈ (1 − θ)π."""
    half = theta - u
    eta = (half + np.sqrt(np.abs(half * half - 4.0 * (w + theta)))) / (2.0 * (w + theta))
    root = np.sqrt(u * u - 4.0 * w)
    length = eta if root == 0.0 else np.log1p(root * eta / (1.0 + 0.5 * (u - root) * eta)) / root
    log_pi = -np.log1p(-eta) - theta * length - 1.0 + np.log(eta)
    return log_pi + (1.0 - theta) * np.exp(log_pi)
