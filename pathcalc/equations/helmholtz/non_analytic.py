"""Non-analytic terms of the critical region: n Δ^b δ ψ.

    Δ = θ² + B |δ − 1|^(2a)      θ = (1 − τ) + A |δ − 1|^(1/β)      ψ = exp(−C(δ − 1)² − D(τ − 1)²)

R. Span and W. Wagner, J. Phys. Chem. Ref. Data 25 (1996) 1509, eq. 6.1 (carbon dioxide); W. Wagner and
A. Pruß, J. Phys. Chem. Ref. Data 31 (2002) 387, eq. 6.6 (water). At the critical point itself Δ is zero and
c_v infinite; Δ is held at :data:`DELTA_LEAST` there, which makes c_v very large instead.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import comb
from typing import Any

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array
from pathcalc.equations.helmholtz.term import Place, Real, columns

REACH = 60.0
"""Lanes where ψ is below e^−60 are left out: the terms and their derivatives are below 1e-18 there."""

DELTA_LEAST = 1e-100
"""Δ is not let below this, nor |δ − 1| below its square: that touches the last bits about the critical point."""

Orders = Sequence[tuple[int, int]]


class NonAnalyticTerms:
    """n Δ^b δ ψ; rows of n, a, b, β, A, B, C, D.

    All derivatives are formed as factors of the term without its δ, G = n Δ^b ψ.
    """

    def __init__(self, rows: Sequence[Sequence[float]], dtype: Real = np.float64) -> None:
        self.n, self.a, self.b, self.beta, self.A, self.B, self.C, self.D = columns(rows, 8, dtype)
        self._least = (float(self.C.min()), float(self.D.min()))
        self._k = self.n.size
        self._weights = np.concatenate([self.A, self.B])
        exponents = np.concatenate([1.0 / self.beta, 2.0 * self.a])
        self._exponents = [exponents - k for k in range(3)]
        self._two_C, self._two_D = -2.0 * self.C, -2.0 * self.D

    def near(self, x: Place) -> NDArray[np.bool_]:
        """The places (m,) at which the terms count."""
        C, D = self._least
        e, s = x.delta - 1.0, x.tau - 1.0
        return np.asarray(C * (e * e) + D * (s * s) < REACH)

    def sums(self, x: Place, wanted: Orders) -> Array:
        """Σ τ^i δ^j ∂^(i+j)/∂τ^i∂δ^j for each (i, j) of ``wanted``, shape (len(wanted), m); i ≤ 2, j ≤ 3."""
        most_tau, most_delta = max(i for i, _ in wanted), max(j for _, j in wanted)
        e, s = x.delta - 1.0, x.tau - 1.0
        powers = self._powers(e, most_delta)
        theta = powers[0][: self._k] - s
        big = np.maximum(theta * theta + powers[0][self._k :], DELTA_LEAST)
        size = self.n * np.exp(self.b * np.log(big) - (self.C * (e * e) + self.D * (s * s)))
        W = self._core(theta, big, powers, wanted)
        P = self._in_delta(x.delta, e, most_delta)
        H = self._in_tau(s, most_tau)
        along: dict[tuple[int, int], Array] = {}
        out = np.empty((len(wanted), x.delta.size), dtype=x.delta.dtype)
        for total, (i, j) in zip(out, wanted, strict=True):
            row: Any = 0.0
            for p in range(i + 1):
                if (p, j) not in along:
                    along[p, j] = sum(_times(comb(j, q), P[j - q], W.get((p, q))) for q in range(j + 1))
                row = row + _times(comb(i, p), H[i - p], along[p, j])
            np.add.reduce(size * row, axis=0, out=total)
            for factor in (x.tau,) * i + (x.delta,) * j:
                total *= factor
        return out

    def _powers(self, e: Array, most: int) -> list[Array]:
        """A |e|^(1/β) above B |e|^(2a), shape (2 k, m), and derivatives with respect to e."""
        floor = DELTA_LEAST * DELTA_LEAST
        e = np.where(np.abs(e) < floor, floor, e)
        values = [self._weights * np.exp(self._exponents[0] * np.log(np.abs(e)))]
        over = 1.0 / e
        for k in range(most):
            values.append(self._exponents[k] * over * values[k])
        return values

    def _in_delta(self, delta: Array, e: Array, most: int) -> list[Array]:
        """Derivatives of δ exp(−C e²) with respect to δ, over the exponential."""
        slope = self._two_C * e
        shape: list[Any] = [1.0, slope]
        if most > 1:
            shape.append(slope * slope + self._two_C)
        if most > 2:
            shape.append(slope * (slope * slope + 3.0 * self._two_C))
        return [delta] + [j * shape[j - 1] + delta * shape[j] for j in range(1, most + 1)]

    def _in_tau(self, s: Array, most: int) -> list[Any]:
        """Derivatives of exp(−D s²) with respect to τ, over the exponential."""
        slope = self._two_D * s
        return [1.0, slope, slope * slope + self._two_D] if most > 1 else [1.0, slope]

    def _core(self, theta: Array, big: Array, powers: list[Array], wanted: Orders) -> dict[tuple[int, int], Any]:
        """Derivatives of Δ^b with respect to (τ, δ) over Δ^b, by the chain rule."""
        most_delta = max(j for _, j in wanted)
        most_tau = max(i for i, _ in wanted)
        mixed_order = max((j for i, j in wanted if i), default=0)
        curved_order = max((j for i, j in wanted if i > 1), default=0)
        t = [value[: self._k] for value in powers]
        s = [value[self._k :] for value in powers]
        over = 1.0 / big
        r1 = self.b * over
        r2 = (self.b - 1.0) * over * r1
        r3 = (self.b - 2.0) * over * r2
        W: dict[tuple[int, int], Any] = {(0, 0): 1.0}
        by_tau = -2.0 * theta
        if most_tau > 0:
            W[1, 0] = r1 * by_tau
        if most_tau > 1:
            W[2, 0] = 2.0 * r1 + r2 * by_tau * by_tau
        if most_delta > 0:
            d1 = s[1] - by_tau * t[1]
            W[0, 1] = r1 * d1
            mixed = -2.0 * t[1]
            if mixed_order > 0:
                W[1, 1] = r1 * mixed + r2 * d1 * by_tau
            if curved_order > 0:
                W[2, 1] = 2.0 * r2 * (d1 + by_tau * mixed) + r3 * by_tau * by_tau * d1
        if most_delta > 1:
            d2 = s[2] - mixed * t[1] - by_tau * t[2]
            square = d1 * d1
            W[0, 2] = r1 * d2 + r2 * square
            if mixed_order > 1:
                W[1, 2] = r2 * (d2 * by_tau + 2.0 * d1 * mixed) - 2.0 * r1 * t[2] + r3 * square * by_tau
        if most_delta > 2:
            d3 = s[3] - 3.0 * mixed * t[2] - by_tau * t[3]
            W[0, 3] = r1 * d3 + 3.0 * r2 * d1 * d2 + r3 * square * d1
        return W


def _times(count: int, left: Any, right: Any) -> Any:
    """``count`` times a product, where the factor 1.0 costs nothing; a derivative that is not there counts as zero."""
    if right is None:
        return 0.0
    product = right if isinstance(left, float) else left if isinstance(right, float) else left * right
    return product if count == 1 else count * product
