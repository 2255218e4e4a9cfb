"""Root finders for many lanes at once; a lane that is done leaves, and none sees another.

All operations are elementwise, so a lane's result is the same to the last bit alone or among thousands.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equilibrium.points import Mask

Slope = Callable[..., tuple[Array, Array]]

_EPS = float(np.finfo(np.float64).eps)


class Root(NamedTuple):
    """``x`` and where it is a root; elsewhere ``x`` ended at the end of the bracket that it ran into."""

    x: Array
    ok: Mask


def guarded_newton(
    fun: Slope,
    x: Array,
    low: Array,
    high: Array,
    args: tuple[Array, ...] = (),
    *,
    falling: bool = False,
    unit: float | None = None,
    tolerance: float = 1e-9,
    steps: int = 120,
) -> Root:
    """Newton's method held inside [low, high], halving the interval where a step leaves it or does not halve.

    ``fun(x, *args) -> (f, f')`` with f rising (or ``falling``) in x. A lane is done when a step is below
    ``tolerance`` times |x| (or times ``unit``); that step is still taken, so the error left is of its square.
    ``ok`` needs the last step to have been a small one: a bracket that closed on no root is told apart.
    """
    n = x.size
    out, ok = x.copy(), np.zeros(n, dtype=np.bool_)
    lane = np.arange(n)
    last = high - low
    with np.errstate(all="ignore"):
        x = np.where((x > low) & (x < high), x, 0.5 * (low + high))
        for _ in range(steps):
            f, slope = fun(x, *args)
            below = f > 0.0 if falling else f < 0.0
            low, high = np.where(below, x, low), np.where(below, high, x)
            step = f / slope
            new = x - step
            size = np.abs(step)
            held = ~((new > low) & (new < high) & (size < 0.7 * last))
            scale = np.abs(x) if unit is None else np.full_like(x, unit)
            small = size <= tolerance * scale
            done = small | (high - low <= 4.0 * _EPS * np.maximum(np.abs(x), scale)) | (f != f)
            halved = 0.5 * (low + high)
            new = np.where(held & ~(small & (new >= low) & (new <= high)), halved, new)
            last = np.where(held, high - low, size)
            if done.any():
                here = lane[done]
                out[here] = np.where(small, np.clip(new, low, high), x)[done]
                ok[here] = (size <= 1e-6 * scale)[done]
                if done.all():
                    return Root(out, ok)
                go = ~done
                lane, new, low, high, last = lane[go], new[go], low[go], high[go], last[go]
                args = tuple(a[go] for a in args)
            x = new
    out[lane] = x
    return Root(out, ok)


def bracketed(
    fun: Callable[..., Array],
    low: Array,
    high: Array,
    f_low: Array,
    f_high: Array,
    args: tuple[Array, ...] = (),
    *,
    unit: float | None = None,
    tolerance: float = 1e-14,
    steps: int = 80,
) -> Root:
    """Root of ``fun(x, *args)`` between ends of opposite sign, without slopes.

    Inverse quadratic interpolation held in by halving (T. R. Chandrupatla, Adv. Eng. Softw. 28 (1997) 145).
    """
    n = low.size
    out, ok = 0.5 * (low + high), np.zeros(n, dtype=np.bool_)
    lane = np.arange(n)
    a, b, fa, fb = high, low, f_high, f_low
    c, fc = a, fa
    t = np.full(n, 0.5)
    with np.errstate(all="ignore"):
        for _ in range(steps):
            x = a + t * (b - a)
            f = fun(x, *args)
            same = np.sign(f) == np.sign(fa)
            c, fc = np.where(same, a, b), np.where(same, fa, fb)
            b, fb = np.where(same, b, a), np.where(same, fb, fa)
            a, fa = x, f
            near_a = np.abs(fa) < np.abs(fb)
            best = np.where(near_a, a, b)
            tol = tolerance * (np.abs(best) if unit is None else unit) + 2.0 * _EPS * np.abs(best)
            t_min = tol / np.abs(b - a)
            done = (t_min > 0.5) | (f == 0.0) | (f != f)
            xi = (a - b) / (c - b)
            phi = (fa - fb) / (fc - fb)
            good = (phi * phi < xi) & ((1.0 - phi) * (1.0 - phi) < 1.0 - xi)
            t = fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (fc - fb)
            t = np.where(good & np.isfinite(t), np.clip(t, t_min, 1.0 - t_min), 0.5)
            if done.any():
                here = lane[done]
                out[here] = best[done]
                ok[here] = (f == f)[done]
                if done.all():
                    return Root(out, ok)
                go = ~done
                lane, a, b, c, fa, fb, fc, t = (q[go] for q in (lane, a, b, c, fa, fb, fc, t))
                args = tuple(q[go] for q in args)
    out[lane] = a
    return Root(out, ok)
