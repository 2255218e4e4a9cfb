"""Isobars and isotherms through the states of a path, for diagrams, SI per kilogram."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.saturation import saturation_at_p, saturation_at_T
from pathcalc.path.steps import CurvePiece, Isoline

if TYPE_CHECKING:
    from pathcalc.path.solution import Solution

POINTS = 48
MOST = 7
"""Lines of one kind; of more distinct values those are left out that stand closest to a neighbour."""

_BEYOND_T, _BEYOND_P = 0.5, 4.0
_SAME = 0.012


def isolines_of(solution: Solution) -> list[Isoline]:
    """The isobars, then the isotherms, ascending; lane 0. States that share a value share a line.

    The lines reach beyond the path: by half its range of temperature, by a factor of four in pressure. Where the
    equation has no state the line ends.
    """
    model = solution.path.model
    states = solution.states.values()
    T = np.array([float(s["T"]) for s in states])
    p = np.array([float(s["p"]) for s in states])
    along_T = np.concatenate([T, *(piece.T for c in solution.curves for piece in c.pieces)])
    along_p = np.concatenate([p, *(piece.p for c in solution.curves for piece in c.pieces)])
    low_T, high_T = float(np.nanmin(along_T)), float(np.nanmax(along_T))
    low_p, high_p = float(np.nanmin(along_p)), float(np.nanmax(along_p))
    if model.has_dome and any(np.isfinite(np.array([float(s["x"]) for s in states]))):
        high_T, high_p = max(high_T, model.T_c), max(high_p, model.p_c)
    gap = _BEYOND_T * max(high_T - low_T, 0.02 * high_T)
    grid_T = np.linspace(max(low_T - gap, 0.5 * low_T), high_T + gap, POINTS)
    grid_p = np.geomspace(low_p / _BEYOND_P, high_p * _BEYOND_P, POINTS)
    isobars = distinct(np.log(p), max(_SAME * float(np.log(high_p / low_p)), 0.01))
    isotherms = distinct(T, max(_SAME * (high_T - low_T), 0.1))
    with np.errstate(all="ignore"):
        return _lines(model, "p", p[isobars], grid_T) + _lines(model, "T", T[isotherms], grid_p)


def distinct(values: Array, apart: float) -> list[int]:
    """Indices of values that differ by more than ``apart``, ascending by value, at most MOST of them."""
    chosen: list[int] = []
    for i in np.argsort(values, kind="stable"):
        if np.isfinite(values[i]) and (not chosen or values[i] - values[chosen[-1]] > apart):
            chosen.append(int(i))
    while len(chosen) > MOST:
        gaps = np.diff(values[chosen])
        chosen.pop(int(np.argmin(gaps[:-1] + gaps[1:])) + 1)
    return chosen


def _lines(model: Model, key: str, values: Array, grid: Array) -> list[Isoline]:
    """One line a value: ``grid`` holds temperatures of isobars, pressures of isotherms."""
    if not values.size:
        return []
    held, running = np.repeat(values, grid.size), np.tile(grid, values.size)
    other = "T" if key == "p" else "p"
    points = flash(model, {key: held, other: running})
    v = points.v.reshape(values.size, grid.size)
    sat_v = _coexisting(model, key, values)
    return [
        Isoline(key, float(value), _pieces(model, key, value, grid, v[k], sat_v[:, k]))
        for k, value in enumerate(values)
    ]


def _coexisting(model: Model, key: str, values: Array) -> Array:
    """T or p of saturation, volume of the liquid and of the vapour at each value, (3, n); NaN where there are none."""
    if not model.has_dome:
        return np.full((3, values.size), np.nan)
    sat = saturation_at_p(model, values) if key == "p" else saturation_at_T(model, values)
    return np.stack([sat.T if key == "p" else sat.p, sat.v_liquid, sat.v_vapour])


def _pieces(model: Model, key: str, value: float, grid: Array, v: Array, sat: Array) -> tuple[CurvePiece, ...]:
    level, v_l, v_v = (float(x) for x in sat)
    if not np.isfinite(level):
        return _drawn(model, [("one-phase", key, value, grid, v)])
    below, above = grid < level, grid > level
    first, last = ("liquid", "vapour") if key == "p" else ("vapour", "liquid")
    ends = (v_l, v_v) if key == "p" else (v_v, v_l)
    return _drawn(
        model,
        [
            (first, key, value, np.append(grid[below], level), np.append(v[below], ends[0])),
            ("two-phase", key, value, np.array([level, level]), np.array(ends)),
            (last, key, value, np.append(level, grid[above]), np.append(ends[1], v[above])),
        ],
    )


def _drawn(model: Model, parts: list[tuple[str, str, float, Array, Array]]) -> tuple[CurvePiece, ...]:
    M = model.M
    pieces = []
    for phase, key, value, running, v in parts:
        held = np.full(running.size, value)
        T, p = (running, held) if key == "p" else (held, running)
        t = thermal(model, T, v)
        good = np.isfinite(v) & np.isfinite(t.s) & np.isfinite(t.h)
        if good.sum() > 1:
            pieces.append(CurvePiece(phase, *(x[good] for x in (T, p, v / M, t.s / M, t.h / M, t.u / M))))
    return tuple(pieces)
