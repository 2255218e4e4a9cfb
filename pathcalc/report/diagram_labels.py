"""Where the state numbers and the arrowheads of a diagram go, in points on the page."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

_TOGETHER = 9.0
_DISTANCES = (13.0, 19.0, 26.0)
_DIRECTIONS = np.deg2rad([45, 135, 315, 225, 90, 270, 0, 180])
_MARGIN = 7.0


@dataclass(frozen=True)
class Label:
    """The numbers of the states that stand at one place, and where they are written."""

    text: str
    at: tuple[float, float]


def _pixels(axes: Any, xs: Any, ys: Any) -> Array:
    points = np.column_stack([np.atleast_1d(xs), np.atleast_1d(ys)]).astype(float)
    return np.asarray(axes.transData.transform(points), dtype=float)


def arrow(axes: Any, xs: Array, ys: Array) -> tuple[tuple[float, float], tuple[float, float]] | None:
    """Tail and tip of an arrowhead halfway along a line; None for a line too short to carry one."""
    if xs.size < 2:
        return None
    path = _pixels(axes, xs, ys)
    length = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(path, axis=0).T))])
    if length[-1] < 26.0:
        return None
    spots = 0.5 * length[-1] + np.array([-6.0, 6.0])
    ends = [tuple(float(np.interp(s, length, path[:, i])) for i in (0, 1)) for s in spots]
    return (ends[0][0], ends[0][1]), (ends[1][0], ends[1][1])


def place(axes: Any, lines: list[tuple[Array, Array]], points: list[tuple[int, Any]]) -> list[Label]:
    """A label for each group of states that fall together, as far from the lines as it can be."""
    box = axes.get_window_extent()
    inked = [_along(_pixels(axes, xs, ys)) for xs, ys in lines if xs.size]
    obstacles = np.concatenate(inked) if inked else np.empty((0, 2))
    labels: list[Label] = []
    for numbers, centre in _groups(axes, points):
        text = ", ".join(str(n) for n in numbers)
        best, best_score = centre, -np.inf
        taken = np.array([label.at for label in labels], dtype=float).reshape(-1, 2)
        for distance in _DISTANCES:
            reach = distance + 2.2 * (len(text) - 1)
            for angle in _DIRECTIONS:
                spot = centre + np.array([reach * np.cos(angle), distance * np.sin(angle)])
                if not (box.x0 + _MARGIN < spot[0] < box.x1 and box.y0 + _MARGIN < spot[1] < box.y1):
                    continue
                clear = min(_nearest(obstacles, spot), 0.6 * _nearest(taken, spot), 14.0)
                score = clear - 0.15 * distance
                if score > best_score + 1e-9:
                    best, best_score = spot, score
        labels.append(Label(text, (float(best[0]), float(best[1]))))
    return labels


def _along(path: Array) -> Array:
    """Points at most six points apart along a line, so that straight stretches count as well."""
    if len(path) < 2:
        return path
    length = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(path, axis=0).T))])
    spots = np.linspace(0.0, length[-1], int(min(400, length[-1] / 6.0)) + 2)
    return np.column_stack([np.interp(spots, length, path[:, i]) for i in (0, 1)])


def _nearest(points: Array, spot: Array) -> float:
    return float(np.min(np.hypot(*(points - spot).T))) if len(points) else np.inf


def _groups(axes: Any, points: list[tuple[int, Any]]) -> list[tuple[list[int], Array]]:
    groups: list[tuple[list[int], Array]] = []
    for number, (x, y) in points:
        spot = _pixels(axes, x, y)[0]
        for numbers, centre in groups:
            if np.hypot(*(centre - spot)) < _TOGETHER:
                numbers.append(number)
                break
        else:
            groups.append(([number], spot))
    return groups
