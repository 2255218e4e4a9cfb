"""Power terms: n δ^d τ^t.

The oldest form of the reduced Helmholtz energy as a sum of terms; its selection among candidate terms:
R. Span, Multiparameter Equations of State (Springer, Berlin 2000), section 3.3 and table 3.10.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from pathcalc.equations.helmholtz.term import Real, Separable, columns


class PowerTerms(Separable):
    """n δ^d τ^t; rows of n, d, t."""

    def __init__(self, rows: Sequence[Sequence[float]], dtype: Real = np.float64) -> None:
        super().__init__(*columns(rows, 3, dtype))
