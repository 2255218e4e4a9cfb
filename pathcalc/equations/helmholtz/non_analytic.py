"""Non-analytic terms of the critical region: n Δ^b δ ψ.

    Δ = θ² + B |δ − 1|^(2a)      θ = (1 − τ) + A |δ − 1|^(1/β)      ψ = exp(−C(δ − 1)² − D(τ − 1)²)

R. Span and W. Wagner, J. Phys. Chem. Ref. Data 25 (1996) 1509, eq. 6.1 (carbon dioxide); W. Wagner and
A. Pruß, J. Phys. Chem. Ref. Data 31 (2002) 387, eq. 6.6 (water). At the critical point itself Δ is zero and
c_v infinite; Δ is held at :data:`DELTA_LEAST` there, which makes c_v very large instead.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import comb

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equations.helmholtz.term import Place, Real, columns

REACH = 60.0
"""Lanes where ψ is below e^−60 are left out: the terms and their derivatives are below 1e-18 there."""

DELTA_LEAST = 1e-120
"""Δ is not let below this; it is 1e-107 where δ differs from 1 by the last bit, at τ = 1."""


class NonAnalyticTerms:
    """n Δ^b δ ψ; rows of n, a, b, β, A, B, C, D."""

    def __init__(self, rows: Sequence[Sequence[float]], dtype: Real = np.float64) -> None:
        self.n, self.a, self.b, self.beta, self.A, self.B, self.C, self.D = columns(rows, 8, dtype)
        self._least = (float(self.C.min()), float(self.D.min()))

    def near(self, x: Place) -> Array:
        """The places (m,) at which the terms count."""
        C, D = self._least
        e, s = x.delta - 1.0, x.tau - 1.0
        return np.asarray(C * (e * e) + D * (s * s) < REACH)

    def sums(self, x: Place, wanted: Sequence[tuple[int, int]]) -> Array:
        """Σ τ^i δ^j ∂^(i+j)/∂τ^i∂δ^j for each (i, j) of ``wanted``, shape (len(wanted), m); i ≤ 2, j ≤ 3."""
        delta, tau = x.delta, x.tau
        most_tau = max(i for i, _ in wanted)
        most_delta = max(j for _, j in wanted)
        P = self._in_delta(delta, most_delta)
        H = self._in_tau(tau, most_tau)
        W = self._core(delta - 1.0, tau, most_tau, most_delta)
        rows = np.empty((len(wanted), self.n.size, delta.size), dtype=delta.dtype)
        for row, (i, j) in zip(rows, wanted, strict=True):
            row[:] = 0.0
            for p in range(i + 1):
                for q in range(j + 1):
                    if (p, q) in W:
                        row += (comb(i, p) * comb(j, q)) * H[i - p] * (P[j - q] * W[p, q])
            row *= self.n * (tau**i * delta**j)
        return np.asarray(np.add.reduce(rows, axis=1))

    def _in_delta(self, delta: Array, most: int) -> list[Array]:
        """Derivatives of δ exp(−C(δ − 1)²) with respect to δ."""
        e, C = delta - 1.0, self.C
        E = np.exp(-C * (e * e))
        slope = -2.0 * C * e
        shape = [E, slope * E, (slope * slope - 2.0 * C) * E, slope * (slope * slope - 6.0 * C) * E]
        return [delta * E] + [j * shape[j - 1] + delta * shape[j] for j in range(1, most + 1)]

    def _in_tau(self, tau: Array, most: int) -> list[Array]:
        """Derivatives of exp(−D(τ − 1)²) with respect to τ."""
        s, D = tau - 1.0, self.D
        E = np.exp(-D * (s * s))
        slope = -2.0 * D * s
        return [E, slope * E, (slope * slope - 2.0 * D) * E][: most + 1]

    def _core(self, e: Array, tau: Array, most_tau: int, most_delta: int) -> dict[tuple[int, int], Array]:
        """Derivatives of Δ^b with respect to (τ, δ), by the chain rule; e = δ − 1."""
        size = np.abs(e)
        with np.errstate(divide="ignore"):
            log_size = np.log(size)

        def power(factor: Array, exponent: Array, order: int) -> Array:
            """The derivative of ``order`` of factor |e|^exponent; finite as every exponent here exceeds 3."""
            for k in range(order):
                factor = factor * (exponent - k)
            value = factor * np.exp((exponent - order) * log_size)
            return value * np.sign(e) if order % 2 else value

        t = [power(self.A, 1.0 / self.beta, k) for k in range(most_delta + 1)]
        s = [power(self.B, 2.0 * self.a, k) for k in range(most_delta + 1)]
        theta = (1.0 - tau) + t[0]
        big = np.maximum(theta * theta + s[0], DELTA_LEAST)
        b = self.b
        w0 = np.exp(b * np.log(big))
        w1 = b * w0 / big
        w2 = (b - 1.0) * w1 / big
        w3 = (b - 2.0) * w2 / big
        by_tau = -2.0 * theta
        W = {(0, 0): w0}
        if most_tau > 0:
            W[1, 0] = w1 * by_tau
        if most_tau > 1:
            W[2, 0] = 2.0 * w1 + w2 * by_tau * by_tau
        if most_delta > 0:
            d1 = 2.0 * theta * t[1] + s[1]
            mixed = -2.0 * t[1]
            W[0, 1] = w1 * d1
            if most_tau > 0:
                W[1, 1] = w1 * mixed + w2 * d1 * by_tau
            if most_tau > 1:
                W[2, 1] = 2.0 * w2 * (d1 + by_tau * mixed) + w3 * by_tau * by_tau * d1
        if most_delta > 1:
            d2 = 2.0 * (t[1] * t[1] + theta * t[2]) + s[2]
            W[0, 2] = w1 * d2 + w2 * d1 * d1
            if most_tau > 0:
                W[1, 2] = -2.0 * w1 * t[2] + w2 * (d2 * by_tau + 2.0 * d1 * mixed) + w3 * d1 * d1 * by_tau
        if most_delta > 2:
            d3 = 2.0 * (3.0 * t[1] * t[2] + theta * t[3]) + s[3]
            W[0, 3] = w1 * d3 + 3.0 * w2 * d1 * d2 + w3 * d1 * d1 * d1
        return W
