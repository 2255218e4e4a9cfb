"""The bell of ammonia's critical region: n δ^d τ^t exp(−η(δ − ε)² + 1/(β(τ − γ)² + b)).

K. Gao, J. Wu, I. H. Bell, A. H. Harvey and E. W. Lemmon, J. Phys. Chem. Ref. Data 52 (2023) 013102.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from pathcalc.equations.helmholtz.term import Factor, Place, Real, Separable, columns, square_factor


class GaoTerms(Separable):
    """n δ^d τ^t exp(−η(δ − ε)² + 1/(β(τ − γ)² + b)); rows of n, d, t, η, β, γ, ε, b."""

    has_delta_factor = True
    has_tau_factor = True

    def __init__(self, rows: Sequence[Sequence[float]], dtype: Real = np.float64) -> None:
        n, d, t, self.eta, self.beta, self.gamma, self.epsilon, self.b = columns(rows, 8, dtype)
        super().__init__(n, d, t)

    def in_delta(self, x: Place, order: int) -> Factor:
        """f = −η(δ − ε)²."""
        return square_factor(self.eta, self.epsilon, x.delta, order)

    def in_tau(self, x: Place, order: int) -> Factor:
        """g = 1/q with q = β(τ − γ)² + b; dg = −q'/q², d²g = (2 q'²/q − q'')/q²."""
        off = x.tau - self.gamma
        slope = self.beta * off
        g = 1.0 / (slope * off + self.b)
        slope *= 2.0 * x.tau
        square = g * g
        first = -slope * square
        curve = (2.0 * self.beta) * (x.tau * x.tau)
        return Factor(g, first, first + square * (2.0 * slope * slope * g - curve))
