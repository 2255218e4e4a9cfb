"""What the term forms share: the place they are evaluated at, and the two factors of a separable term.

Every term but the non-analytic one is a product n A(δ) B(τ) with A = δ^d e^f(δ), B = τ^t e^g(τ). With the
operator θ = δ ∂/∂δ (which is ∂/∂ ln δ) the scaled derivatives of A follow from a1 = d + θf:

    δ A'/A = a1      δ² A''/A = a1(a1 − 1) + θ²f      δ³ A'''/A = a1(a1 − 1)(a1 − 2) + 3(a1 − 1) θ²f + θ³f

and those of B in the same way from t + θg with θ = τ ∂/∂τ. So a form only has to tell f and g and their
derivatives with respect to ln δ and ln τ; :mod:`pathcalc.equations.helmholtz.bank` does the rest.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, NamedTuple, TypeAlias

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array

Real: TypeAlias = type[np.floating[Any]]
"""The precision of an evaluation: float64, or an extended type where expansions are fitted."""


class Place(NamedTuple):
    """Reduced density δ = ρ/ρ_r and inverse reduced temperature τ = T_r/T with their logarithms, each (m,)."""

    delta: Array
    tau: Array
    log_delta: Array
    log_tau: Array


class Factor(NamedTuple):
    """f and θf, θ²f, θ³f of a factor e^f, each (k, m); ``third`` is None where it was not asked for."""

    log: Array
    first: Array
    second: Array
    third: Array | None = None


def columns(rows: Sequence[Sequence[float]], width: int, dtype: Real = np.float64) -> list[Array]:
    """The columns of a table of coefficients, each of shape (k, 1), in the precision ``dtype``."""
    table = np.array(rows, dtype=dtype).reshape(-1, width)
    return [np.ascontiguousarray(table[:, i : i + 1]) for i in range(width)]


class Separable:
    """n δ^d τ^t e^f(δ) e^g(τ): k terms of one form, coefficients as columns of shape (k, 1).

    A form overrides :meth:`in_delta` or :meth:`in_tau` and says so in ``has_delta_factor`` and
    ``has_tau_factor``.
    """

    has_delta_factor = False
    has_tau_factor = False

    def __init__(self, n: Array, d: Array, t: Array) -> None:
        self.n, self.d, self.t = n, d, t

    def in_delta(self, x: Place, order: int) -> Factor:
        """f(δ) and its derivatives up to ``order`` (2 or 3) with respect to ln δ; zero here."""
        return Factor(*(np.zeros((1, 1)),) * 4)

    def in_tau(self, x: Place, order: int) -> Factor:
        """g(τ) and its derivatives up to ``order`` (2) with respect to ln τ; zero here."""
        return Factor(*(np.zeros((1, 1)),) * 4)


def power_factor(weight: Array, exponent: Array, rows: NDArray[np.intp], log_x: Array, order: int) -> Factor:
    """The factor exp(−g x^l) for columns g = ``weight``, l = ``exponent``[``rows``] at ln x.

    Each distinct exponent is raised once.
    """
    f = np.exp(exponent * log_x)[rows] * -weight
    each = exponent[rows]
    first = each * f
    second = each * first
    return Factor(f, first, second, each * second if order > 2 else None)


def square_factor(weight: Array, centre: Array, x: Array, order: int) -> Factor:
    """The factor exp(−w (x − c)²) for columns w = ``weight`` and c = ``centre``."""
    off = x - centre
    slope = weight * off
    f = -(slope * off)
    slope *= -2.0 * x
    twist = (-2.0 * weight) * (x * x)
    second = slope + twist
    return Factor(f, slope, second, second + 2.0 * twist if order > 2 else None)
