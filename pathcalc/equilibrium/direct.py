"""States of given pressure and one of h, s, u by Newton's method in T and ln v at once.

With ln p − ln p(T, v) (p − p(T, v) at more than the critical density) and the missing part of X, one call of the
equation gives a step in both; the start is that of :mod:`pathcalc.equilibrium.start_grid`. Lanes that do not settle
in a few steps are handed back.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium import quantity
from pathcalc.equilibrium.start_grid import start

_STEPS = 9
_SETTLED = 1e-9
_PREDICTED = 1e-13
_LARGEST = 0.4
_MARGIN = 1e-9
_CLOSE = 1e-5
"""Larger steps than this are never the last, however fast they shrink."""


def at_pressure(
    model: Model, key: str, p: Array, target: Array, side: Array, low: Array, high: Array, edge: Array
) -> tuple[Array, Array, NDArray[np.bool_]]:
    """T (K), v (m3/mol) and where they were found: ``key`` is ``target`` at ``p`` (Pa), low ≤ T ≤ high.

    ``side`` is −1 for liquid, 1 for vapour, 0 where there is no dome at this pressure; ``edge`` the volume of that
    phase on the dome, which the lane does not cross; arrays (n,).
    """
    n = p.size
    T_out, v_out, ok = np.full(n, np.nan), np.full(n, np.nan), np.zeros(n, dtype=np.bool_)
    with np.errstate(all="ignore"):
        T, y = start(model, key, p, target, side)
        T = np.minimum(np.maximum(T, low), high)
        known = edge == edge
        least = np.where((side > 0.0) & known, np.log(edge) - _MARGIN, -np.inf)
        most = np.where((side < 0.0) & known, np.log(edge) + _MARGIN, np.inf)
        lane = np.arange(n)
        last = np.full(n, np.inf)
        for _ in range(_STEPS):
            y = np.minimum(np.maximum(y, least), most)
            v = np.exp(y)
            t = thermal(model, T, v)
            X, X_T, X_v = quantity.of(key, t, T, v)
            miss = target - X
            stretch = v * t.p_v
            # p of a gas is nearly linear in 1/v on logarithmic scales, p of a liquid in v itself
            short = np.where((v > model.v_c) & (t.p > 0.0), t.p * np.log(p / t.p), p - t.p)
            slope = X_v * v / stretch
            dT = (miss - slope * short) / (X_T - slope * t.p_T)
            dy = (short - t.p_T * dT) / stretch
            size = np.maximum(np.abs(dT) / T, np.abs(dy))
            scale = np.minimum(1.0, _LARGEST / size)
            T, y = T + scale * dT, y + scale * dy
            ratio = size / last
            stable = t.p_v < 0.0
            done = stable & (
                (size < _SETTLED) | ((size * ratio * ratio < _PREDICTED) & (size < _CLOSE) & (last < 0.05))
            )
            lost = ~(size < np.inf) | (0.2 * low >= T) | (3.0 * high < T)
            leave = done | lost
            if leave.any():
                here = lane[done]
                T_out[here], v_out[here], ok[here] = T[done], np.exp(y[done]), True
                if leave.all():
                    break
                go = np.flatnonzero(~leave)
                lane = lane[go]
                T, y, p, target, side, low, high, size, least, most = (
                    a.take(go) for a in (T, y, p, target, side, low, high, size, least, most)
                )
            last = size
    return T_out, v_out, ok
