"""Liquid-like and vapour-like roots of a cubic equation of state in the reduced density η = b/v.

With θ = a/(R T b), π = p b/(R T), u = δ1 + δ2, w = δ1 δ2, the equation p(T, v) = p becomes

    (θ + w + wπ) η³ − (θ − u + (w − u)π) η² + (1 + (1 − u)π) η − π = 0.

In η (not in Z or v) the small vapour root at tiny pressure and the large liquid root are both well
conditioned for Newton's method: near zero the cubic is almost linear, and near the liquid root its slope is
of order θ.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array

_POLISH = 2
_SQRT3 = float(np.sqrt(3.0))
_TINY = 1e-9
_NEARLY_QUADRATIC = 1e-4


def density_roots(theta: Array, pi: Array, u: float, w: float) -> tuple[Array, Array, NDArray[np.bool_]]:
    """(η_vapour, η_liquid, three) of shape (n,): the least and the greatest root in (0, 1).

    Closed form by Cardano and Viète, then Newton steps on the cubic itself. There are one or three roots in
    (0, 1), as the cubic is negative at 0 and positive at 1; where ``three`` is False both arrays hold the
    one root.
    """
    c3 = theta + (w + w * pi)
    c2 = (theta - u) + (w - u) * pi
    c1 = 1.0 + (1.0 - u) * pi
    with np.errstate(all="ignore"):
        m = c2 / (3.0 * c3)
        k = m * m - c1 / (3.0 * c3)
        h = 0.5 * (m * c1 - pi) / c3 - m * m * m  # half the value of the monic cubic at its inflexion m
        k3 = k * k * k
        real = h * h < k3
        three = real & (c3 > 0.0) & (c2 > 0.0) & (c1 > 0.0)
        if three.all():
            low, high = _three(m, k, h)
            return _polish(low, c3, c2, c1, pi), _polish(high, c3, c2, c1, pi), three
        e = np.sqrt(np.abs(h * h - k3))
        big = np.cbrt(np.abs(h) + e)
        low = m - np.copysign(np.where(big > 0.0, big + k / big, 0.0), h)
        odd = (real & ~three) | ~(np.abs(c3) > _NEARLY_QUADRATIC * np.abs(c2))
        if odd.any():
            low[odd] = _one_of_three(c3[odd], c2[odd], c1[odd], pi[odd], m[odd], k[odd], h[odd])
        if not three.any():
            low = _polish(low, c3, c2, c1, pi)
            return low, low, three
        high = low.copy()
        low[three], high[three] = _three(m[three], k[three], h[three])
        low = _polish(low, c3, c2, c1, pi)
        high = _polish(high, c3, c2, c1, pi)
        return low, np.where(three, high, low), three


def _angle(k: Array, h: Array) -> tuple[Array, Array, Array]:
    """√k, cos φ and √3 sin φ of Viète's solution, φ in [0, π/3]."""
    root = np.sqrt(np.abs(k))
    c = np.cos(np.arccos(np.clip(-h / (root * root * root), -1.0, 1.0)) / 3.0)
    return root, c, _SQRT3 * np.sqrt(np.maximum(1.0 - c * c, 0.0))


def _three(m: Array, k: Array, h: Array) -> tuple[Array, Array]:
    root, c, s = _angle(k, h)
    return m - root * (c + s), m + 2.0 * root * c


def _one_of_three(c3: Array, c2: Array, c1: Array, pi: Array, m: Array, k: Array, h: Array) -> Array:
    """The one root in (0, 1) where others lie outside: the greatest if c3 > 0, else the middle one."""
    root, c, s = _angle(k, h)
    eta = np.where(c3 > 0.0, m + 2.0 * root * c, m - root * (c - s))
    flat = ~(np.abs(c3) > _NEARLY_QUADRATIC * np.abs(c2))
    return np.where(flat, 2.0 * pi / (c1 + np.sqrt(np.abs(c1 * c1 - 4.0 * c2 * pi))), eta)


def _polish(eta: Array, c3: Array, c2: Array, c1: Array, pi: Array) -> Array:
    """Newton on the cubic; a root lost by cancellation starts from the ideal gas, η = π."""
    eta = np.where(eta > _TINY, eta, pi)
    for _ in range(_POLISH):
        value = ((c3 * eta - c2) * eta + c1) * eta - pi
        slope = (3.0 * c3 * eta - 2.0 * c2) * eta + c1
        step = value / slope
        eta = eta - np.where(np.abs(step) <= 0.5 * eta, step, 0.0)
    return eta
