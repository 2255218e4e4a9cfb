"""Polylines on the sheet: thinned, measured, cut to the view. Points are arrays (n, 2)."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Box = tuple[float, float, float, float]
"""Left, top, right, bottom."""


def thinned(points: Array, tolerance: float = 0.15) -> Array:
    """The fewest of the points whose line stays within the tolerance of all (Douglas and Peucker, 1973)."""
    points = points[np.isfinite(points).all(axis=1)]
    if len(points) < 3:
        return points
    keep = np.zeros(len(points), dtype=bool)
    keep[[0, -1]] = True
    spans = [(0, len(points) - 1)]
    while spans:
        a, b = spans.pop()
        if b - a < 2:
            continue
        chord = points[b] - points[a]
        inner = points[a + 1 : b] - points[a]
        length = float(np.hypot(*chord))
        if length < 1e-9:
            away = np.hypot(inner[:, 0], inner[:, 1])
        else:
            along = np.clip(inner @ chord / length**2, 0.0, 1.0)
            away = np.hypot(*(inner - along[:, None] * chord).T)
        k = int(np.argmax(away))
        if away[k] > tolerance:
            keep[a + 1 + k] = True
            spans += [(a, a + 1 + k), (a + 1 + k, b)]
    return points[keep]


def measured(points: Array) -> Array:
    """Length of the line up to each point."""
    if len(points) < 2:
        return np.zeros(len(points))
    return np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(points, axis=0).T))])


def at(points: Array, length: Array, spot: float) -> Array:
    """The point at a length along the line."""
    return np.array([np.interp(spot, length, points[:, i]) for i in (0, 1)])


def dots(points: Array, apart: float = 4.0, most: int = 400) -> Array:
    """Points evenly along a line, so that straight stretches count as well."""
    points = points[np.isfinite(points).all(axis=1)]
    if len(points) < 2:
        return points
    length = measured(points)
    spots = np.linspace(0.0, length[-1], int(min(most, length[-1] / apart)) + 2)
    return np.column_stack([np.interp(spots, length, points[:, i]) for i in (0, 1)])


def within(points: Array, box: Box, gap: float = 0.0) -> NDArray[np.bool_]:
    """Which points lie inside the box."""
    x, y = points[:, 0], points[:, 1]
    return (x >= box[0] - gap) & (x <= box[2] + gap) & (y >= box[1] - gap) & (y <= box[3] + gap)


def cut(points: Array, box: Box, gap: float = 0.0) -> list[Array]:
    """The stretches of a line inside the box (made wider by ``gap`` all round), in order (Liang and Barsky, 1984)."""
    points = points[np.isfinite(points).all(axis=1)]
    if len(points) < 2:
        return []
    if within(points, box, gap).all():
        return [points]
    a, way = points[:-1], np.diff(points, axis=0)
    low, high = np.array(box[:2]) - gap, np.array(box[2:]) + gap
    with np.errstate(all="ignore"):
        one, two = (low - a) / way, (high - a) / way
    still = way == 0.0
    outside = (still & ((a < low) | (a > high))).any(axis=1)
    enter = np.where(still, 0.0, np.minimum(one, two)).max(axis=1).clip(0.0, None)
    leave = np.where(still, 1.0, np.maximum(one, two)).min(axis=1).clip(None, 1.0)
    runs: list[list[Array]] = []
    before = -2
    for i in np.flatnonzero((enter < leave) & ~outside).tolist():
        if before == i - 1 and enter[i] == 0.0 and leave[before] == 1.0:
            runs[-1].append(a[i] + leave[i] * way[i])
        else:
            runs.append([a[i] + enter[i] * way[i], a[i] + leave[i] * way[i]])
        before = i
    return [np.array(run) for run in runs]


def visible(points: Array, box: Box) -> Array:
    """The longest stretch of the line inside the box, as even points."""
    runs = cut(points, box)
    if not runs:
        return points[:0]
    return dots(runs[int(np.argmax([measured(run)[-1] for run in runs]))], 2.0, 900)


def joined(runs: list[Array]) -> Array:
    """Stretches as one array, a row of NaN between them."""
    gap = np.full((1, 2), np.nan)
    return np.concatenate([part for run in runs for part in (run, gap)]) if runs else np.empty((0, 2))


def polygon_cut(points: Array, box: Box, gap: float) -> Array:
    """The part of a closed outline inside the box (Sutherland and Hodgman, 1974)."""
    for axis, limit, sign in (
        (0, box[0] - gap, 1.0),
        (0, box[2] + gap, -1.0),
        (1, box[1] - gap, 1.0),
        (1, box[3] + gap, -1.0),
    ):
        kept: list[Array] = []
        side = sign * (points[:, axis] - limit)
        for i in range(len(points)):
            j = i - 1
            if (side[i] >= 0.0) != (side[j] >= 0.0):
                share = side[j] / (side[j] - side[i])
                kept.append(points[j] + share * (points[i] - points[j]))
            if side[i] >= 0.0:
                kept.append(points[i])
        if not kept:
            return np.empty((0, 2))
        points = np.array(kept)
    return points


def inside_outline(points: Array, outline: Array) -> NDArray[np.bool_]:
    """Which points a closed outline holds (even–odd rule)."""
    x, y = points[:, :1], points[:, 1:]
    ax, ay = outline[:, 0], outline[:, 1]
    bx, by = np.roll(ax, -1), np.roll(ay, -1)
    crosses = (ay > y) != (by > y)
    with np.errstate(all="ignore"):
        left = x < (bx - ax) * (y - ay) / (by - ay) + ax
    return np.asarray((crosses & left).sum(axis=1) % 2 == 1)


def arrowhead(points: Array, length: Array, spot: float, size: float = 9.0) -> Array:
    """The triangle of an arrowhead whose middle stands at a length along the line, pointing on."""
    tip, tail = at(points, length, spot + 0.5 * size), at(points, length, spot - 0.5 * size)
    way = tip - tail
    way = way / max(float(np.hypot(*way)), 1e-9)
    across = np.array([-way[1], way[0]])
    middle = at(points, length, spot)
    front, back = middle + 0.55 * size * way, middle - 0.45 * size * way
    return np.array([front, back + 0.42 * size * across, back - 0.42 * size * across])
