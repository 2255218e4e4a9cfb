"""A coarse table of single-phase states from which Newton's method starts where p and one of h, s, u are given.

Rows are isobars, evenly spaced in ln p. On each, nodes run from the lowest temperature up to the boiling point
(above the critical pressure: a line that goes on from it) and from there to the highest temperature, crowding
towards the boundary; node indices then mean the same on neighbouring isobars, and the dome is never interpolated
across. Its errors (some 10^-4, more near the critical point) never reach a result.
"""

from __future__ import annotations

from functools import lru_cache
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium.saturation import saturation_at_p

_ROWS = 64
_SIDE = 40
"""Nodes on each side of the boundary."""

_LOWEST = 1.0
"""Pressure (Pa) below which a vapour is taken for ideal."""


class Grid(NamedTuple):
    """Rows of ln p and, on (rows, 2 · side) nodes, ln v, h, s, u without datum; what places T on a node."""

    ln_p: Array
    ln_v: Array
    values: dict[str, Array]
    slope: float
    """d ln p/d ln T of the saturation line at the critical point."""


@lru_cache(maxsize=32)
def grid_of(model: Model) -> Grid:
    """The table of a model whose residual part knows its saturation line; built when first asked for."""
    line, limits = model.residual.coexistence, model.residual.limits
    assert line is not None
    assert limits is not None
    top = line.at_T(np.array([line.T_top]))
    slope = float(top.dp_dT[0] * top.T[0] / top.p[0])
    ln_p = np.linspace(np.log(min(_LOWEST, line.p_low)), np.log(limits.p_max), _ROWS)
    boundary = boundary_T(model, np.exp(ln_p), slope)
    share = np.arange(_SIDE) / (_SIDE - 1.0)
    T = np.concatenate([_liquid_T(model, boundary, share[::-1]), _vapour_T(model, boundary, share)], axis=0).T
    p = np.exp(ln_p)[:, None] + 0.0 * T
    branch = np.where(np.arange(2 * _SIDE) < _SIDE, -1.0, 1.0) * (p < line.p_top)
    with np.errstate(all="ignore"):
        found = model.residual.volume_of(T.ravel(), p.ravel(), np.ascontiguousarray(branch.ravel()))
        assert found is not None
        v = found[0]
        t = thermal(model, T.ravel(), v)
    raw = {"h": t.h - model.h_offset, "u": t.u - model.h_offset, "s": t.s - model.s_offset}
    values = {key: _filled(value.reshape(T.shape)) for key, value in raw.items()}
    return Grid(ln_p, _filled(np.log(v).reshape(T.shape)), values, slope)


def boundary_T(model: Model, p: Array, slope: float) -> Array:
    """The boiling point at ``p`` (Pa), its continuation above the critical pressure; no lower than the model goes."""
    line = model.residual.coexistence
    assert line is not None
    T = model.T_c * (1.0 + np.log(np.maximum(p / model.p_c, 1.0)) / slope)
    at = np.flatnonzero((p < line.p_top) & (p > line.p_low))
    if at.size:
        T[at] = saturation_at_p(model, p[at]).T
    T[p <= line.p_low] = model.T_limits[0]
    return np.clip(T, model.T_limits[0], model.T_limits[1])


def _liquid_T(model: Model, boundary: Array, share: Array) -> Array:
    return np.asarray(boundary - (boundary - model.T_limits[0]) * (share * share)[:, None])


def _vapour_T(model: Model, boundary: Array, share: Array) -> Array:
    return np.asarray(boundary * np.exp(np.log(model.T_limits[1] / boundary) * (share * share)[:, None]))


def _filled(a: Array) -> Array:
    """Gaps (states denser than the equation goes) take the value of the nearest node on the hot side."""
    for k in range(a.shape[1] - 2, -1, -1):
        gap = ~np.isfinite(a[:, k])
        a[gap, k] = a[gap, k + 1]
    return a


def start(model: Model, key: str, p: Array, target: Array, side: Array) -> tuple[Array, Array]:
    """T (K) and ln v near which ``key`` has the value ``target`` at ``p`` (Pa), each (n,).

    ``side`` is −1 for liquid, 1 for vapour, 0 where there is no dome at this pressure.
    """
    grid = grid_of(model)
    a = grid.values[key]
    columns = a.shape[1]
    ln_p = np.log(p)
    wanted = target - (model.s_offset if key == "s" else model.h_offset)
    low_p = np.minimum(ln_p - grid.ln_p[0], 0.0)
    if key == "s":
        wanted = wanted + model.R * low_p
    place = (ln_p - grid.ln_p[0]) * ((_ROWS - 1.0) / (grid.ln_p[-1] - grid.ln_p[0]))
    place = np.minimum(np.maximum(place, 0.0), _ROWS - 1.0)
    row = np.minimum(place.astype(np.intp), _ROWS - 2)
    flat = np.ascontiguousarray(a).ravel()
    low = np.where(side > 0.0, _SIDE, 0)
    high = np.where(side < 0.0, _SIDE - 1, columns - 1)
    first = row * columns
    part = place - row
    for _ in range(7):
        middle = (low + high) >> 1
        at = first + middle
        value = flat.take(at)
        value += part * (flat.take(at + columns) - value)
        below = value < wanted
        low, high = np.where(below, middle, low), np.where(below, high, middle)
    least = np.where(side > 0.0, _SIDE, 0)
    most = np.where(side < 0.0, _SIDE - 1, columns - 1)
    node = np.minimum(np.maximum(low - 1, least), most - 3)
    base = np.minimum(np.maximum(row - 1, 0), _ROWS - 4)
    across = _lagrange(place - base)
    corner = base * columns + node
    x = [_blended(flat, corner + k, columns, across) for k in range(4)]
    weights = _inverse_weights(x, wanted)
    ln_v_flat = grid.ln_v.ravel()
    ln_v = sum(w * _blended(ln_v_flat, corner + k, columns, across) for k, w in enumerate(weights))
    index = node + (weights[1] + 2.0 * weights[2] + 3.0 * weights[3])
    index = np.minimum(np.maximum(index, least), most)
    return _T_of(model, grid, p, index), np.asarray(ln_v - low_p)


def _T_of(model: Model, grid: Grid, p: Array, index: Array) -> Array:
    boundary = boundary_T(model, p, grid.slope)
    liquid = np.maximum(_SIDE - 1.0 - index, 0.0) / (_SIDE - 1.0)
    vapour = np.maximum(index - _SIDE, 0.0) / (_SIDE - 1.0)
    cold = boundary - (boundary - model.T_limits[0]) * (liquid * liquid)
    hot = boundary * np.exp(np.log(model.T_limits[1] / boundary) * (vapour * vapour))
    return np.asarray(np.where(index < _SIDE - 0.5, cold, hot))


def _lagrange(u: Array) -> tuple[Array, Array, Array, Array]:
    """Weights of the nodes 0, 1, 2, 3 at ``u``."""
    a, b, c = u - 1.0, u - 2.0, u - 3.0
    return -a * b * c / 6.0, 0.5 * u * b * c, -0.5 * u * a * c, u * a * b / 6.0


def _blended(flat: Array, at: NDArray[np.intp], columns: int, weights: tuple[Array, Array, Array, Array]) -> Array:
    out = weights[0] * flat.take(at)
    for k in (1, 2, 3):
        out += weights[k] * flat.take(at + k * columns)
    return np.asarray(out)


def _inverse_weights(x: list[Array], wanted: Array) -> list[Array]:
    """Weights of four nodes where a quantity has the values ``x``, at the value ``wanted``.

    The cubic through the inverse function; the line through the middle nodes where that would run away.
    """
    d = [wanted - value for value in x]
    weights = []
    for k in range(4):
        i, j, m = (q for q in range(4) if q != k)
        below = (x[k] - x[i]) * (x[k] - x[j]) * (x[k] - x[m])
        weights.append(d[i] * d[j] * d[m] / below)
    wild = ~(np.abs(weights[0]) + np.abs(weights[3]) + np.abs(weights[1]) + np.abs(weights[2]) < 4.0)
    if wild.any():
        share = np.clip(d[1] / (x[2] - x[1]), 0.0, 1.0)
        share = np.where(share == share, share, 0.5)
        for k, plain in enumerate((0.0 * share, 1.0 - share, share, 0.0 * share)):
            weights[k] = np.where(wild, plain, weights[k])
    return weights
