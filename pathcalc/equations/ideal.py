"""The ideal gas as a residual part: nothing deviates.

p v = R T (B. P. E. Clapeyron, J. de l'Ecole Polytechnique 14 (1834) 153).
"""

from __future__ import annotations

import numpy as np

from pathcalc.equations.contract import R_CODATA, Array, PressureLimits, PressureTerms, Reduced, SaturationLine


class NoResidual:
    """Zero residual Helmholtz energy; every derivative is exactly zero at every density."""

    coexistence: SaturationLine | None = None
    limits: PressureLimits | None = None

    def __init__(self, R: float = R_CODATA) -> None:
        self.R = R

    def reduced(self, T: Array, rho: Array) -> Reduced:
        """Zeros of the broadcast shape of ``T`` (K) and ``rho`` (mol/m3)."""
        zero = np.zeros(np.broadcast_shapes(np.shape(T), np.shape(rho)))
        return Reduced(zero, zero, zero, zero, zero, zero)

    def pressure(self, T: Array, v: Array) -> PressureTerms:
        """p = R T/v (Pa) and its derivatives."""
        p_T = self.R / v + 0.0 * T
        p = p_T * T
        return PressureTerms(p, p_T, -p / v, np.zeros_like(p))

    def pressure_curvature(self, T: Array, v: Array) -> Array:
        """(d2p/dT2)_v = 0, Pa/K2."""
        return np.zeros(np.broadcast_shapes(np.shape(T), np.shape(v)))

    def volume_roots(self, T: Array, p: Array) -> Array:
        """The one volume R T/p (m3/mol), in the vapour row; shape (2, n)."""
        v = self.R * T / p
        return np.stack([np.full_like(v, np.nan), v])

    def v_min(self, T: Array) -> Array:
        """Zero: an ideal gas has no co-volume."""
        return np.zeros(np.shape(T))

    def saturation_start(self, T: Array) -> Array:
        """NaN: an ideal gas does not condense."""
        return np.full(np.shape(T), np.nan)

    def volume_of(self, T: Array, p: Array, branch: Array | None = None) -> tuple[Array, Array] | None:
        """None: volumes follow from ``volume_roots``."""
        return None
