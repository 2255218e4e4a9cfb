"""Exponential terms: n δ^d τ^t exp(−g δ^l).

With g = 1 the form of nearly every modern equation (R. Span, Multiparameter Equations of State (Springer,
Berlin 2000), table 3.10); with a fitted g that of K. M. de Reuck and R. J. B. Craven, Methanol:
International Thermodynamic Tables of the Fluid State, vol. 12 (IUPAC, Blackwell, London 1993).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from pathcalc.equations.helmholtz.term import Factor, Place, Real, Separable, columns, power_factor


class ExponentialTerms(Separable):
    """n δ^d τ^t exp(−g δ^l); rows of n, d, t, l and, where it is not 1, g."""

    has_delta_factor = True

    def __init__(self, rows: Sequence[Sequence[float]], dtype: Real = np.float64) -> None:
        n, d, t, l, g = columns([row if len(row) == 5 else (*row, 1.0) for row in rows], 5, dtype)  # noqa: E741
        super().__init__(n, d, t)
        self.g = g
        distinct, self._rows = np.unique(l[:, 0], return_inverse=True)
        self._exponents = distinct[:, None]

    def in_delta(self, x: Place, order: int) -> Factor:
        """f = −g δ^l."""
        return power_factor(self.g, self._exponents, self._rows, x.log_delta, order)
