"""All separable terms of an equation, evaluated together in blocks of terms × lanes.

One exponential a term and lane carries the whole term, n exp(d ln δ + t ln τ + f + g); derivatives are that
value times small factors (see :mod:`pathcalc.equations.helmholtz.term`). Sums go term after term: a matrix
product would let the number of lanes choose the order of summation, and so the last digits.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equations.helmholtz.term import Factor, Place, Separable

Getter = Callable[[Place, int], Factor]


class Bank:
    """The terms of ``forms``, merged."""

    def __init__(self, forms: Sequence[Separable]) -> None:
        self.n = np.concatenate([f.n for f in forms])
        self.d = np.concatenate([f.d for f in forms])
        self.t = np.concatenate([f.t for f in forms])
        self._in_delta: list[tuple[slice, Getter]] = []
        self._in_tau: list[tuple[slice, Getter]] = []
        start = 0
        for form in forms:
            here = slice(start, start + form.n.size)
            if form.has_delta_factor:
                self._in_delta.append((here, form.in_delta))
            if form.has_tau_factor:
                self._in_tau.append((here, form.in_tau))
            start = here.stop

    def sums(self, x: Place, wanted: Sequence[tuple[int, int]]) -> Array:
        """Σ τ^i δ^j ∂^(i+j)/∂τ^i∂δ^j for each (i, j) of ``wanted``, shape (len(wanted), m); i ≤ 2, j ≤ 3.

        ``x`` must hold two lanes or more: numpy adds up a single column in another order.
        """
        most_tau = max(i for i, _ in wanted)
        most_delta = max(j for _, j in wanted)
        term = self.d * x.log_delta
        term += self.t * x.log_tau
        a = _steps(self.d, self._in_delta, x, most_delta, term)
        b = _steps(self.t, self._in_tau, x, most_tau, term)
        np.exp(term, out=term)
        term *= self.n
        out = np.empty((len(wanted), term.shape[1]), dtype=term.dtype)
        row = np.empty_like(term)
        partial: list[Array | None] = [term, *[None] * most_delta]
        for total, (i, j) in zip(out, wanted, strict=True):
            base = partial[j]
            if base is None:
                base = partial[j] = term * a[j]
            np.add.reduce(np.multiply(base, b[i], out=row) if i else base, axis=0, out=total)
        return out


def _steps(
    exponent: Array, getters: Sequence[tuple[slice, Getter]], x: Place, most: int, log_term: Array
) -> list[Array]:
    """x^k A^(k)/A for k = 0 … ``most`` of the factors A = x^exponent e^f; adds f to ``log_term``."""
    if not getters:
        out = [np.ones_like(exponent), exponent, exponent * (exponent - 1.0)]
        out.append(out[2] * (exponent - 2.0))
        return out[: most + 1]
    first = np.empty_like(log_term)
    first[:] = exponent
    second = np.zeros_like(log_term) if most > 1 else None
    third = np.zeros_like(log_term) if most > 2 else None
    for here, getter in getters:
        factor = getter(x, most)
        log_term[here] += factor.log
        first[here] += factor.first
        if second is not None:
            second[here] = factor.second
        if third is not None:
            third[here] = factor.third
    out = [first, first]
    if second is not None:
        less = first - 1.0
        out.append(first * less + second)
        if third is not None:
            out.append(first * less * (first - 2.0) + 3.0 * less * second + third)
    return out[: most + 1]
