"""A bracketed root of one function per lane.

T. R. Chandrupatla, "A new hybrid quadratic/bisection algorithm for finding the zero of a nonlinear function
without using derivatives", Advances in Engineering Software 28 (1997) 145.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from pathcalc.equations.contract import Array

LIMIT = 120
FLAT = 1e-13
"""Magnitude below which a function counts as zero where the search begins."""


def bracketed_root(f: Callable[[Array], Array], low: Array, high: Array, rtol: float = 4e-16) -> Array:
    """Roots of ``f`` between ``low`` and ``high``, arrays (n,); NaN where the ends do not enclose one.

    A lane is frozen as soon as it has converged, so that lanes do not influence each other.
    """
    b, a = low.astype(float), high.astype(float)
    fa, fb = f(a), f(b)
    enclosed = np.isfinite(fa) & np.isfinite(fb) & ((fa * fb <= 0.0) | (np.signbit(fa) != np.signbit(fb)))
    c, fc = a.copy(), fa.copy()
    t = np.full(a.shape, 0.5)
    best = np.where(np.abs(fa) < np.abs(fb), a, b)
    done = ~enclosed
    for _ in range(LIMIT):
        if done.all():
            break
        x = a + t * (b - a)
        fx = f(np.where(done, best, x))
        same = np.signbit(fx) == np.signbit(fa)
        c, fc = np.where(same, a, b), np.where(same, fa, fb)
        b, fb = np.where(same, b, a), np.where(same, fb, fa)
        a, fa = x, fx
        closest = np.where(np.abs(fa) < np.abs(fb), a, b)
        size = np.abs(b - a)
        tolerance = rtol * np.abs(closest) + 1e-300
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            limit = 0.5 * tolerance / size
            finished = (limit > 0.5) | (fa == 0.0)
            xi, phi = (a - b) / (c - b), (fa - fb) / (fc - fb)
            smooth = (phi * phi < xi) & ((1.0 - phi) ** 2 < 1.0 - xi)
            quadratic = fa / (fb - fa) * (fc / (fb - fc)) + (c - a) / (b - a) * (fa / (fc - fa)) * (fb / (fc - fb))
        best = np.where(done, best, closest)
        done = done | finished
        t = np.where(smooth & np.isfinite(quadratic), quadratic, 0.5)
        t = np.clip(t, np.minimum(limit, 0.5), np.maximum(1.0 - limit, 0.5))
        t = np.where(np.isfinite(t), t, 0.5)
    return np.where(enclosed, best, np.nan)


def scanned_root(f: Callable[[Array], Array], start: Array, offsets: Array, rtol: float = 4e-16) -> Array:
    """Root of ``f`` nearest to ``start`` (n,), looked for at ``start + offsets`` outwards; NaN where none is met.

    ``offsets`` ascend and hold 0. A value of ``f`` that is not finite ends the search of its lane on that side. Where
    ``f`` is zero all about the start, every point would do: NaN.
    """
    middle = int(np.argmin(np.abs(offsets)))
    here = f(start)
    at_start = np.abs(here) <= FLAT
    flat = at_start.copy()
    edges = {True: (here, np.isfinite(here)), False: (here, np.isfinite(here))}
    low, high = np.full(start.shape, np.nan), np.full(start.shape, np.nan)
    for k in range(1, max(middle, offsets.size - 1 - middle) + 1):
        for up in (True, False):
            inner, outer = (middle + k - 1, middle + k) if up else (middle - k + 1, middle - k)
            last, open_ = edges[up]
            if not 0 <= outer < offsets.size or not (open_ & np.isnan(low)).any():
                continue
            value = f(start + offsets[outer])
            open_ = open_ & np.isfinite(value)
            if k == 1:
                flat &= np.abs(value) <= FLAT
            hit = open_ & (last * value <= 0.0) & np.isnan(low)
            low = np.where(hit, start + offsets[inner], low)
            high = np.where(hit, start + offsets[outer], high)
            edges[up] = (value, open_)
    missing = np.isnan(low)
    root = bracketed_root(f, np.where(missing, start, low), np.where(missing, start, high), rtol)
    root = np.where(at_start, start, np.where(missing, np.nan, root))
    return np.where(flat, np.nan, root)
