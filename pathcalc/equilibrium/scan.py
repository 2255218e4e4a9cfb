"""All roots of a function of one variable between given nodes, for many lanes at once."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from pathcalc.equations.contract import Array
from pathcalc.equilibrium.iterate import Root, bracketed

_TURNS = 12
_HALVINGS = 50
_MOST_TURNS = 3


def scanned(
    fun: Callable[..., Array], nodes: Array, args: tuple[Array, ...], *, unit: float | None = None
) -> tuple[Root, Root, Array]:
    """Every sign change of ``fun(x, *args)`` between the ``nodes`` (k, n): first root, second root, their
    number.

    A pair of roots between two neighbouring nodes shows as a turning point: those nearest to zero are
    sought by parabolas and added to the nodes. Where ``fun`` is NaN at an end of the nodes, the edge of its
    domain is found by halving and taken for the end.
    """
    k, n = nodes.shape
    flat = tuple(np.tile(a, k) for a in args)
    with np.errstate(all="ignore"):
        f = fun(nodes.ravel(), *flat).reshape(k, n)
        nodes = nodes.copy()
        defined = f == f
        first = np.argmax(defined, axis=0)
        last = k - 1 - np.argmax(defined[::-1], axis=0)
        for inner, step in ((first, -1), (last, 1)):
            at = np.flatnonzero(defined[inner, np.arange(n)] & (inner + step >= 0) & (inner + step < k))
            if at.size:
                i, o = inner[at], inner[at] + step
                nodes[o, at], f[o, at] = _edge(fun, nodes[i, at], nodes[o, at], f[i, at], tuple(a[at] for a in args))
        nodes, f = _with_turning_points(fun, nodes, f, args)
        change = (f[:-1] * f[1:] < 0.0) | ((f[:-1] == 0.0) & (f[1:] == f[1:]) & (nodes[:-1] < nodes[1:]))
        change[-1] |= f[-1] == 0.0
    count = np.add.reduce(change, axis=0, dtype=np.intp)
    roots = []
    for order in (1, 2):
        x, ok = np.full(n, np.nan), np.zeros(n, dtype=np.bool_)
        has = np.flatnonzero(count >= order)
        if has.size:
            at = np.argmax(np.cumsum(change, axis=0)[:, has] >= order, axis=0)
            low, high = nodes[at, has], nodes[at + 1, has]
            found = bracketed(fun, low, high, f[at, has], f[at + 1, has], tuple(a[has] for a in args), unit=unit)
            x[has], ok[has] = found.x, found.ok
        roots.append(Root(x, ok))
    return roots[0], roots[1], count.astype(np.float64)


def _edge(
    fun: Callable[..., Array], inside: Array, outside: Array, f: Array, args: tuple[Array, ...]
) -> tuple[Array, Array]:
    """The last point towards ``outside`` where ``fun`` is defined, with its value there."""
    for _ in range(_HALVINGS):
        middle = 0.5 * (inside + outside)
        value = fun(middle, *args)
        good = value == value
        inside, f = np.where(good, middle, inside), np.where(good, value, f)
        outside = np.where(good, outside, middle)
    return inside, f


def _with_turning_points(
    fun: Callable[..., Array], nodes: Array, f: Array, args: tuple[Array, ...]
) -> tuple[Array, Array]:
    """Some nodes more a lane: the turning points towards zero where there are any, else the last node again."""
    size = np.abs(f)
    turns = (size[1:-1] <= size[:-2]) & (size[1:-1] <= size[2:])
    turns &= (f[1:-1] * f[:-2] > 0.0) & (f[1:-1] * f[2:] > 0.0)
    height = np.where(turns, size[1:-1], np.inf)
    extra_x, extra_f = nodes[-1:].repeat(_MOST_TURNS, axis=0), f[-1:].repeat(_MOST_TURNS, axis=0)
    for more_x, more_f in zip(extra_x, extra_f, strict=True):
        at = np.flatnonzero(np.isfinite(height).any(axis=0))
        if at.size == 0:
            break
        inner = np.argmin(height[:, at], axis=0)
        height[inner, at] = np.inf
        x = np.stack([nodes[inner + 1 + d, at] for d in (-1, 0, 1)])
        y = np.stack([f[inner + 1 + d, at] for d in (-1, 0, 1)])
        more_x[at], more_f[at] = _turning_point(fun, x, y, tuple(a[at] for a in args))
    nodes, f = np.concatenate([nodes, extra_x]), np.concatenate([f, extra_f])
    order = np.argsort(nodes, axis=0, kind="stable")
    return np.take_along_axis(nodes, order, 0), np.take_along_axis(f, order, 0)


def _turning_point(fun: Callable[..., Array], x: Array, y: Array, args: tuple[Array, ...]) -> tuple[Array, Array]:
    """The least |f| inside three nodes (3, n) of one sign, or the first point met where the sign differs."""
    (a, b, c), (fa, fb, fc) = x, y
    settled = np.zeros(b.size, dtype=np.bool_)
    for _ in range(_TURNS):
        r, q = (b - a) * (fb - fc), (b - c) * (fb - fa)
        new = b - 0.5 * ((b - a) * r - (b - c) * q) / (r - q)
        wider = np.where(c - b > b - a, b + 0.25 * (c - b), b - 0.25 * (b - a))
        new = np.where((new > a) & (new < c) & (np.abs(new - b) > 1e-12 * (c - a)), new, wider)
        f = fun(new, *args)
        settled |= f != f
        crossed = f * fb < 0.0
        better = (crossed | (np.abs(f) < np.abs(fb))) & ~settled
        worse = ~better & ~settled
        right = new > b
        a, fa = (
            np.where(better & right, old, np.where(worse & ~right, tried, kept))
            for old, tried, kept in ((b, new, a), (fb, f, fa))
        )
        c, fc = (
            np.where(better & ~right, old, np.where(worse & right, tried, kept))
            for old, tried, kept in ((b, new, c), (fb, f, fc))
        )
        b, fb = np.where(better, new, b), np.where(better, f, fb)
        settled |= crossed
        if settled.all():
            break
    return b, fb
