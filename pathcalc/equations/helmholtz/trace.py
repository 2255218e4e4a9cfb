"""Fits the coexistence curve of an equation by piecewise Chebyshev expansions.

The curve is followed from below the critical point outwards: at each temperature both densities come from
Newton's method on equal pressure and equal Gibbs energy. With K = 1 + 2 D01 + D02 of each phase and
F = [ln ρ + D00 + D01] of the liquid less that of the vapour, G = ρ_l (1 + D01_l) − ρ_v (1 + D01_v), a step is

    K_l Δln ρ_l = (ρ_v F − G)/(ρ_l − ρ_v),      K_v Δln ρ_v = K_l Δln ρ_l + F.

All is expanded in θ = √(1 − T/T_x), T_x the critical temperature of the equation itself: an equation that is
analytic at its critical point has ρ_l(θ) = r(θ), ρ_v(θ) = r(−θ) with one analytic function r, so the piece
next to the critical point is fitted on [−w, w] and never needs a state nearer than about w/10. Expansions of
the coexistence curve by pieces follow I. H. Bell, B. K. Alpert, Int. J. Thermophys. 42 (2021) 75
(doi:10.1007/s10765-021-02824-x); the variable θ and the signed piece are our own choice.

The arithmetic is that of the arrays which ``terms`` returns: extended precision gives extended expansions.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

Values = Any
"""An array of float64 or of an extended type."""

Terms = Callable[[Values, Values], tuple[Values, Values, Values, Values]]
"""(T, ρ) → D00, D01, D02, D10."""

FUNCTIONS = (
    "ln_p", "ln_rho_l", "ln_rho_v", "slope", "d10_l", "d10_v", "d00_l", "stiff_l", "stiff_v", "slope_theta",
)  # fmt: skip
"""What is expanded: logarithms of p/p_x and ρ/ρ_x, S = d ln p/d ln T, D10 of both phases, D00 of the liquid, K of both,
and dS/dθ."""

_NODES = 16
_STEP = 0.02
_FIRST_WIDTH = 0.2
_NARROWEST = 4e-4
_LEFT_OUT = 4e-3
"""A piece narrower than this at the critical point may be missing."""

_CLOSE = 0.03
"""Nearer to the critical point than this the tolerance grows as 1/θ², as the conditioning does."""

_NEWTON = 200


class NoCoexistence(ArithmeticError):
    """The curve could not be followed."""


@dataclass(frozen=True)
class Traced:
    """Expansions by pieces: ``edges`` of θ (k + 1,), coefficients (k, 10, degree + 1) on [middle ± half].

    The first piece has its middle at θ = 0 where ``signed``. ``inverse_*`` expand θ in √ln(p_x/p).
    """

    T_x: float
    p_x: float
    rho_x: float
    edges: Values
    middle: Values
    half: Values
    coefficients: Values
    inverse_edges: Values
    inverse: Values


def solve(terms: Terms, T: Values, ln_l: Values, ln_v: Values) -> tuple[Values, Values, Values]:
    """ln ρ_l, ln ρ_v from a start, and where they settled; T is the vapour-liquid temperature."""
    settled = np.zeros(T.shape, dtype=bool)
    floor = 64.0 * np.finfo(T.dtype).eps
    size = np.full(T.shape, np.inf)
    with np.errstate(all="ignore"):
        for _ in range(_NEWTON):
            rho_l, rho_v = np.exp(ln_l), np.exp(ln_v)
            a, b, c, _ = terms(T, rho_l)
            d, e, f, _ = terms(T, rho_v)
            gibbs = ln_l - ln_v + (a - d) + (b - e)
            pressure = rho_l * (1 + b) - rho_v * (1 + e)
            shared = (rho_v * gibbs - pressure) / (rho_l - rho_v)
            move_l, move_v = shared / (1 + 2 * b + c), (shared + gibbs) / (1 + 2 * e + f)
            limit = 0.2 * np.maximum(ln_l - ln_v, floor)
            fraction = np.minimum(1, np.minimum(limit / np.abs(move_l), np.maximum(limit, 1) / np.abs(move_v)))
            move_l, move_v = fraction * move_l, fraction * move_v
            new = np.maximum(np.abs(move_l), np.abs(move_v))
            better = ~settled & (new == new)
            ln_l, ln_v = np.where(better, ln_l + move_l, ln_l), np.where(better, ln_v + move_v, ln_v)
            settled |= (new < floor) | ((new < 1e-7) & (new > 0.3 * size))
            size = new
            if settled.all():
                break
    good = settled & (ln_l > ln_v) & (1 + 2 * b + c > 0) & (1 + 2 * e + f > 0)
    return ln_l, ln_v, good


def critical_point(terms: Terms, T: Values, rho: Values) -> tuple[Values, Values]:
    """(T, ρ) where (∂p/∂ρ)_T and (∂²p/∂ρ²)_T vanish, near the values given (arrays of one value)."""
    # eight-point stencil of the first derivative and its two-point companion across T
    weights = np.array([1 / 280, -4 / 105, 1 / 5, -4 / 5, 0, 4 / 5, -1 / 5, 4 / 105, -1 / 280], dtype=T.dtype)
    h = np.asarray(1e-3, dtype=T.dtype)
    offsets = np.arange(-4, 5).astype(T.dtype) * h

    def stiffness(ln_T: Values, ln_rho: Values) -> tuple[Values, Values]:
        rho = np.exp(ln_rho + offsets)
        _, b, c, _ = terms(np.broadcast_to(np.exp(ln_T), rho.shape), rho)
        K = 1 + 2 * b + c
        return K[4], (weights * K).sum() / h

    x, y = np.log(T), np.log(rho)
    d = np.asarray(1e-4, dtype=T.dtype)
    for _ in range(30):
        K, K1 = stiffness(x, y)
        right, left = stiffness(x, y + d), stiffness(x, y - d)
        hot, cold = stiffness(x + d, y), stiffness(x - d, y)
        a, b = (hot[0] - cold[0]) / (2 * d), (right[0] - left[0]) / (2 * d)
        c, e = (hot[1] - cold[1]) / (2 * d), (right[1] - left[1]) / (2 * d)
        det = a * e - b * c
        dx, dy = (e * K - b * K1) / det, (a * K1 - c * K) / det
        x, y = x - dx, y - dy
        if max(float(np.max(np.abs(dx))), float(np.max(np.abs(dy)))) < 8 * np.finfo(T.dtype).eps:
            break
    return np.exp(x), np.exp(y)


class _Curve:
    """Followed states on a grid of θ, a start for all others."""

    def __init__(self, terms: Terms, T_x: Values, rho_x: Values, theta_max: float) -> None:
        self.terms, self.T_x, self.ln_x = terms, T_x, np.log(rho_x)
        first = 0.2 if theta_max > 0.25 else 0.5 * theta_max
        liquid, vapour = self._begin(first)
        states = {first: (liquid, vapour)}
        for sign in (1.0, -1.0):
            x, step = first, _STEP
            seen = [(first, liquid, vapour)]
            while (x < theta_max) if sign > 0 else (x > 4e-4):
                step = min(step, (theta_max - x) if sign > 0 else 0.5 * x)
                new = x + sign * step
                start = [_extrapolated([(s[0], s[k]) for s in seen[-3:]], new) for k in (1, 2)]
                one, two, good = self.at(np.array([new], dtype=T_x.dtype), *(np.array([q]) for q in start))
                near = abs(float(one[0] - start[0])) < 0.05 and abs(float(two[0] - start[1])) < 0.15
                if not (good[0] and near) and len(seen) > 1:
                    step *= 0.5
                    if sign < 0 and step < 0.05 * x:
                        break  # too near the critical point to tell the phases apart
                    if step < 1e-4:
                        raise NoCoexistence(f"lost at theta = {x:.4f}")
                    continue
                x, step = new, min(1.5 * step, _STEP)
                seen.append((x, one[0], two[0]))
                states[x] = (one[0], two[0])
        self.theta = np.array(sorted(states))
        self.ln_l = np.array([states[t][0] for t in sorted(states)], dtype=T_x.dtype)
        self.ln_v = np.array([states[t][1] for t in sorted(states)], dtype=T_x.dtype)

    def T(self, theta: Values) -> Values:
        return self.T_x * (1 - theta * theta)

    def at(self, theta: Values, ln_l: Values, ln_v: Values) -> tuple[Values, Values, Values]:
        return solve(self.terms, self.T(theta), ln_l, ln_v)

    def _begin(self, theta: float) -> tuple[Values, Values]:
        x = np.array([theta], dtype=self.T_x.dtype)
        for wide in (3.5, 3.0, 4.0, 2.5, 4.5, 2.0, 5.0):
            for lean in (0.5, 0.8, 0.2):
                dense = self.ln_x + np.log(1 + theta * wide * 1.1)
                light = self.ln_x + np.log(np.maximum(1 - theta * wide * lean * 1.2, 0.02))
                one, two, good = self.at(x, np.atleast_1d(dense), np.atleast_1d(light))
                if good[0] and one[0] > self.ln_x + theta and two[0] < self.ln_x - theta:
                    return one[0], two[0]
        raise NoCoexistence("no vapour and liquid found below the critical point")

    def states(self, theta: Values) -> tuple[Values, Values]:
        """ln ρ_l and ln ρ_v at θ > 0."""
        grid = np.concatenate([[0.0], self.theta])
        with_x = [np.concatenate([np.atleast_1d(self.ln_x), a]) for a in (self.ln_l, self.ln_v)]
        start = [np.interp(theta.astype(np.float64), grid, a.astype(np.float64)).astype(theta.dtype) for a in with_x]
        liquid, vapour, good = self.at(theta, *start)
        if not good.all():
            raise NoCoexistence(f"no convergence at theta = {theta[~good][0]}")
        return liquid, vapour


def _extrapolated(seen: list[tuple[float, Values]], x: float) -> Values:
    total = 0 * seen[-1][1]
    for i, (a, value) in enumerate(seen):
        weight = 1.0
        for j, (b, _) in enumerate(seen):
            if j != i:
                weight *= (x - b) / (a - b)
        total = total + weight * value
    return total


def _functions(curve: _Curve, theta: Values, p_x: Values) -> Values:
    """The functions (9, n; all but the last) at θ of either sign; a negative one exchanges the phases."""
    liquid, vapour = curve.states(np.abs(theta))
    swap = theta < 0
    T = curve.T(theta)
    sides = []
    for ln_rho in (liquid, vapour):
        rho = np.exp(ln_rho)
        sides.append((ln_rho, *curve.terms(T, rho)))
    (ln_l, a, b, c, g), (ln_v, d, e, f, k) = sides
    rho_v = np.exp(ln_v)
    ln_p = np.log(T * rho_v * (1 + e) / p_x)
    z_l, z_v = 1 + b, 1 + e
    z_l = z_v * np.exp(ln_v - ln_l)  # the liquid's own is the small difference of large terms
    slope = (g - k + z_l - z_v) / (z_l - z_v)

    def pick(one: Values, two: Values) -> Values:
        return np.where(swap, two, one)

    return np.stack(
        [
            ln_p,
            pick(ln_l, ln_v) - curve.ln_x,
            pick(ln_v, ln_l) - curve.ln_x,
            slope,
            pick(g, k),
            pick(k, g),
            pick(a, d),
            pick(1 + 2 * b + c, 1 + 2 * e + f),
            pick(1 + 2 * e + f, 1 + 2 * b + c),
        ]
    )


def _transform(values: Values) -> Values:
    """Chebyshev coefficients along the last axis from values at the roots of T_n."""
    n = values.shape[-1]
    pi = np.arccos(np.asarray(-1, dtype=values.dtype))
    angle = pi * (np.arange(n).astype(values.dtype) + np.asarray(0.5, dtype=values.dtype)) / n
    out = np.stack([(values * np.cos(k * angle)).sum(-1) * 2 / n for k in range(n)], axis=-1)
    out[..., 0] /= 2
    return out


def _derivative(c: Values) -> Values:
    """Coefficients of the derivative of Σ c_k T_k(u) with respect to u, as many as there are of c."""
    out = np.zeros(c.size + 2, dtype=c.dtype)
    for k in range(c.size - 1, 0, -1):
        out[k - 1] = out[k + 1] + 2 * k * c[k]
    out[0] /= 2
    return out[: c.size]


def roots(n: int, middle: Values, half: Values, dtype: Any) -> Values:
    """The n roots of T_n on middle ± half."""
    pi = np.arccos(np.asarray(-1, dtype=dtype))
    return middle + half * np.cos(pi * (np.arange(n).astype(dtype) + np.asarray(0.5, dtype=dtype)) / n)


def trace(
    terms: Terms,
    T_c: float,
    rho_c: float,
    T_low: float,
    *,
    analytic: bool,
    tolerance: float,
    R: float,
    dtype: Any = np.float64,
) -> Traced:
    """Expansions from ``T_low`` to the critical point; ``analytic`` says that the equation is analytic there."""
    T_x, rho_x = np.array([T_c], dtype=dtype), np.array([rho_c], dtype=dtype)
    if analytic:
        T_x, rho_x = critical_point(terms, T_x, rho_x)
    if not (abs(float(T_x[0]) / T_c - 1.0) < 0.01 and abs(float(rho_x[0]) / rho_c - 1.0) < 0.1):
        raise NoCoexistence("no critical point near the one given")
    T_x, rho_x = T_x[0], rho_x[0]
    aside = 0.0 if analytic else 1e-9  # a non-analytic equation has no derivatives at the point itself
    one = np.ones(1, dtype=dtype)
    p_x = (T_x * rho_x * (1 + terms(T_x * (one - 1e-4 * aside), rho_x * (one + aside))[1]))[0]
    theta_max = float(np.sqrt(1 - T_low / T_x))
    curve = _Curve(terms, T_x, rho_x, theta_max)
    pieces: list[tuple[float, float, float, float, Values]] = []

    def fitted(low: float, high: float) -> None:
        signed = analytic and low == 0.0
        middle, half = (0.0, high) if signed else (0.5 * (low + high), 0.5 * (high - low))
        narrow = half < _NARROWEST
        if not (signed and half > _FIRST_WIDTH):
            try:
                c = _transform(_functions(curve, roots(_NODES, middle, half, dtype), p_x))
            except NoCoexistence:
                if half < _LEFT_OUT:
                    return
                raise
            scale = np.maximum(np.abs(c).max(axis=1), 1.0)
            tail = np.abs(c[:, -3:]).max(axis=1) / scale
            allowed = tolerance * (1.0 + (_CLOSE / (low + 0.1 * half)) ** 2)
            if narrow or bool((tail <= allowed).all()):
                pieces.append((low, high, middle, half, c))
                return
        cut = 0.5 * (low + high)
        fitted(low, cut)
        fitted(cut, high)

    fitted(0.0 if analytic else 1e-4, theta_max)
    edges = np.array([pieces[0][0], *(p[1] for p in pieces)])
    middle, half = np.array([p[2] for p in pieces]), np.array([p[3] for p in pieces])
    coefficients = np.stack([np.concatenate([p[4], _derivative(p[4][3])[None] / p[3]]) for p in pieces])
    inverse_edges, inverse = _inverse(edges, middle, half, coefficients[:, 0], tolerance)
    return Traced(float(T_x), float(p_x * R), float(rho_x), edges, middle, half, coefficients, inverse_edges, inverse)


def _ln_p(edges: Values, middle: Values, half: Values, c: Values, theta: Values) -> Values:
    k = np.clip(np.searchsorted(edges, theta.astype(np.float64), side="right") - 1, 0, len(middle) - 1)
    x = (theta - middle[k]) / half[k]
    a = b = 0 * x
    for j in range(c.shape[-1] - 1, 0, -1):
        a, b = c[k, j] + 2 * x * a - b, a
    return c[k, 0] + x * a - b


def _inverse(edges: Values, middle: Values, half: Values, c: Values, tolerance: float) -> tuple[Values, Values]:
    """θ expanded in φ = √ln(p_x/p); each root by halving, which needs no slope."""
    ends = np.sqrt(np.maximum(-_ln_p(edges, middle, half, c, edges[[0, -1]].astype(c.dtype)), 0))
    pieces: list[tuple[float, float, Values]] = []

    def theta_of(phi: Values) -> Values:
        low, high = np.full(phi.shape, edges[0]).astype(c.dtype), np.full(phi.shape, edges[-1]).astype(c.dtype)
        for _ in range(70):
            mid = (low + high) / 2
            above = -_ln_p(edges, middle, half, c, mid) < phi * phi
            low, high = np.where(above, mid, low), np.where(above, high, mid)
        return (low + high) / 2

    def fitted(low: float, high: float) -> None:
        mid, wide = 0.5 * (low + high), 0.5 * (high - low)
        d = _transform(theta_of(roots(_NODES, mid, wide, c.dtype)))
        if float(np.abs(d[-3:]).max()) <= max(1e-10, tolerance) or wide < 0.01:
            pieces.append((low, high, d))
            return
        fitted(low, mid)
        fitted(mid, high)

    fitted(float(ends[0]), float(ends[1]))
    return np.array([pieces[0][0], *(p[1] for p in pieces)]), np.stack([p[2] for p in pieces])
