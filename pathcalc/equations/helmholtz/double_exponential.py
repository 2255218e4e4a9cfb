"""Terms damped in density and in temperature: n δ^d τ^t exp(−g δ^l) exp(−h τ^m).

With g = h = 1: E. W. Lemmon and R. T Jacobsen, J. Phys. Chem. Ref. Data 34 (2005) 69, eq. 12 (R-125). With
fitted g and h the expanded association terms of methanol: K. M. de Reuck and R. J. B. Craven, Methanol:
International Thermodynamic Tables of the Fluid State, vol. 12 (IUPAC, Blackwell, London 1993).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from pathcalc.equations.helmholtz.term import Factor, Place, Real, Separable, columns, power_factor


class DoubleExponentialTerms(Separable):
    """n δ^d τ^t exp(−g δ^l − h τ^m); rows of n, d, t, g, l, h, m."""

    has_delta_factor = True
    has_tau_factor = True

    def __init__(self, rows: Sequence[Sequence[float]], dtype: Real = np.float64) -> None:
        n, d, t, self.g, l, self.h, m = columns(rows, 7, dtype)  # noqa: E741
        super().__init__(n, d, t)
        distinct, self._rows_delta = np.unique(l[:, 0], return_inverse=True)
        self._exponents_delta = distinct[:, None]
        distinct, self._rows_tau = np.unique(m[:, 0], return_inverse=True)
        self._exponents_tau = distinct[:, None]

    def in_delta(self, x: Place, order: int) -> Factor:
        """f = −g δ^l."""
        return power_factor(self.g, self._exponents_delta, self._rows_delta, x.log_delta, order)

    def in_tau(self, x: Place, order: int) -> Factor:
        """g = −h τ^m."""
        return power_factor(self.h, self._exponents_tau, self._rows_tau, x.log_tau, order)
