"""Gaussian bell-shaped terms: n δ^d τ^t exp(−η(δ − ε)² − β(τ − γ)²).

U. Setzmann and W. Wagner, J. Phys. Chem. Ref. Data 20 (1991) 1061, eq. 4.3: first used for methane, to
follow the critical region; since then also with broad bells in place of high powers of δ and τ.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from pathcalc.equations.helmholtz.term import Factor, Place, Real, Separable, columns, square_factor


class GaussianTerms(Separable):
    """n δ^d τ^t exp(−η(δ − ε)² − β(τ − γ)²); rows of n, d, t, η, β, γ, ε."""

    has_delta_factor = True
    has_tau_factor = True

    def __init__(self, rows: Sequence[Sequence[float]], dtype: Real = np.float64) -> None:
        n, d, t, self.eta, self.beta, self.gamma, self.epsilon = columns(rows, 7, dtype)
        super().__init__(n, d, t)

    def in_delta(self, x: Place, order: int) -> Factor:
        """f = −η(δ − ε)²."""
        return square_factor(self.eta, self.epsilon, x.delta, order)

    def in_tau(self, x: Place, order: int) -> Factor:
        """g = −β(τ − γ)²."""
        return square_factor(self.beta, self.gamma, x.tau, order)
