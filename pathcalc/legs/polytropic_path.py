"""A machine of constant polytropic efficiency, followed from the inlet to its end pressure through all phases.

Each stretch in one phase is solved as if there were no dome; where it meets the saturation line it is cut, and
the next stretch begins there. Lanes are cut at their own places.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equilibrium.flash import flash
from pathcalc.equilibrium.points import Points
from pathcalc.equilibrium.saturation import saturation_at_p
from pathcalc.legs.integration.bracket import bracketed_root
from pathcalc.legs.integration.dome_entry import beyond_boundary, first_entry
from pathcalc.legs.integration.families import Lanes
from pathcalc.legs.integration.pick import replace_points, take_points
from pathcalc.legs.integration.polytropic_efficiency import (
    DomeCurve,
    OnePhaseCurve,
    dome_slopes,
    one_phase_slopes,
    solve,
)
from pathcalc.legs.integration.saturation_line import side_of
from pathcalc.legs.integration.segments import Segment
from pathcalc.legs.run import LegRun, Place

MAX_STRETCHES = 80
MAX_HALVINGS = 40
LEAST = 1e-6
"""A stretch of ln p that is shorter and still rough leads nowhere, such as to below the triple point."""


@dataclass(frozen=True)
class Course:
    """Where the machine ends and the stretches on the way."""

    end: Place
    segments: list[Segment]


@dataclass
class _Front:
    """Where each lane has got to."""

    y: Array
    T: Array
    v: Array
    h: Array
    x: Array
    open: NDArray[np.bool_]
    into_dome: NDArray[np.bool_]


def follow(run: LegRun, p: Array, efficiency: Array, *, quiet: bool = False) -> Course:
    """Follow dh = c v dp from the inlet to pressure ``p`` (n,). Lanes that cannot be followed are marked

    (not when ``quiet``: then their end is NaN).
    """
    model, a = run.model, run.inlet
    factor = np.where(p >= a.p, 1.0 / efficiency, efficiency)
    goal = np.log(p)
    x = a.points.x
    front = _Front(
        np.log(a.p), a.T.copy(), a.v.copy(), a.h.copy(), x.copy(), np.isfinite(goal * a.T), _inside(run, p, factor)
    )
    segments: list[Segment] = []
    start = a.points
    for _ in range(MAX_STRETCHES):
        if not front.open.any():
            break
        wet = np.flatnonzero(front.open & front.into_dome).astype(np.intp)
        dry = np.flatnonzero(front.open & ~front.into_dome).astype(np.intp)
        if wet.size:
            segments.append(_in_dome(model, front, goal, factor, wet, start))
        if dry.size:
            segments.append(_in_one_phase(run, front, goal, factor, dry, start))
        start = _points_at(model, front)
    trouble = ~np.isfinite(front.h) | (front.open & np.isfinite(goal * a.T))
    h = np.where(trouble, np.nan, front.h)
    if quiet:
        return Course(run.place(flash(model, {"p": p, "h": h})), segments)
    run.fail(
        trouble & np.isfinite(goal * a.T),
        "path-not-followed",
        "the path of constant polytropic efficiency could not be followed to its end pressure",
        "split the leg in two, or look whether it leaves the range of the equation",
    )
    end = run.reach(p=np.where(trouble, np.nan, p), h=h)
    return Course(end, _with_end(segments, front, end))


def _inside(run: LegRun, p: Array, factor: Array) -> NDArray[np.bool_]:
    """Whether the first stretch of each lane lies in the dome."""
    a = run.inlet
    x = a.points.x
    inside = (x > 0.0) & (x < 1.0)
    edge = (x == 0.0) | (x == 1.0)
    if edge.any():
        lanes = np.flatnonzero(edge)
        nudge = np.where(p[lanes] > a.p[lanes], 1.0, -1.0) * 1e-6
        near_p = a.p[lanes] * (1.0 + nudge)
        near = flash(run.model, {"p": near_p, "h": a.h[lanes] + (factor * a.v)[lanes] * (near_p - a.p[lanes])})
        inside[lanes] = ~np.isnan(near.x)
    return inside


def _in_one_phase(run: LegRun, front: _Front, goal: Array, factor: Array, lanes: Lanes, start: Points) -> Segment:
    model = run.model
    y_a, y_b = front.y[lanes], goal[lanes].copy()
    initial = np.stack([front.T[lanes], front.v[lanes]])
    slopes = one_phase_slopes(model, factor[lanes])
    solution = solve(slopes, y_a, y_b, initial)
    line = run.setting.boundary.line() if model.has_dome else None
    entry = first_entry(model, line, solution)
    for _ in range(MAX_HALVINGS):
        again = np.flatnonzero((entry.lost | solution.rough) & (np.abs(y_b - y_a) > LEAST))
        if again.size == 0:
            break
        y_b[again] = 0.5 * (y_a[again] + y_b[again])
        shorter = solve(one_phase_slopes(model, factor[lanes][again]), y_a[again], y_b[again], initial[:, again])
        solution = solution.replaced(again, shorter)
        entry = first_entry(model, line, solution)
    meets = np.isfinite(entry.low)
    if meets.any():
        every = np.arange(lanes.size, dtype=np.intp)
        root = bracketed_root(
            lambda y: beyond_boundary(model, solution, y, entry.liquid, every),
            np.where(meets, entry.low, y_a),
            np.where(meets, entry.high, y_a),
        )
        y_b = np.where(meets, root, y_b)
        solution = solve(slopes, y_a, y_b, initial)
    short = ~meets & (np.abs(y_b - goal[lanes]) > 1e-12)
    T, v = solution.last
    stuck = short & (np.abs(y_b - y_a) <= LEAST)
    bad = ~solution.converged | ~np.isfinite(T + v) | stuck
    h = _enthalpy(model, T, v)
    front.y[lanes], front.T[lanes], front.v[lanes] = y_b, T, v
    front.h[lanes] = np.where(bad, np.nan, h)
    front.x[lanes] = np.where(meets, np.where(entry.liquid, 0.0, 1.0), np.nan)
    front.open[lanes] = (meets | short) & ~bad
    front.into_dome[lanes] = meets
    return Segment(
        OnePhaseCurve(solution, factor[lanes]),
        take_points(start, lanes),
        take_points(start, lanes),
        own=True,
        lanes=lanes,
        region="one-phase",
    )


def _enthalpy(model: Model, T: Array, v: Array) -> Array:
    from pathcalc.equations.properties import thermal

    with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
        h: Array = thermal(model, T, v).h
    return h


def _in_dome(model: Model, front: _Front, goal: Array, factor: Array, lanes: Lanes, start: Points) -> Segment:
    y_a, y_b = front.y[lanes], goal[lanes].copy()
    ceiling = np.log(model.p_c * (1.0 - 1e-6))
    y_b = np.minimum(y_b, np.maximum(ceiling, y_a))
    initial = front.h[lanes][None]
    slopes = dome_slopes(model, factor[lanes])
    solution = solve(slopes, y_a, y_b, initial)
    for _ in range(MAX_HALVINGS):
        again = np.flatnonzero(solution.rough & (np.abs(y_b - y_a) > LEAST))
        if again.size == 0:
            break
        y_b[again] = 0.5 * (y_a[again] + y_b[again])
        shorter = solve(dome_slopes(model, factor[lanes][again]), y_a[again], y_b[again], initial[:, again])
        solution = solution.replaced(again, shorter)

    def quality(y: Array) -> Array:
        sat = saturation_at_p(model, np.exp(y).reshape(-1))
        liquid, vapour = (side_of(model, sat, gas).h.reshape(y.shape) for gas in (False, True))
        h = solution.at(y, np.arange(lanes.size))[0]
        return np.asarray((h - liquid) / (vapour - liquid))

    y = y_a + (y_b - y_a) * np.linspace(0.0, 1.0, 41)[1:, None]
    x = quality(y)
    outside = (x < 0.0) | (x > 1.0)
    leaves = outside.any(axis=0)
    dry = np.zeros(lanes.size, dtype=bool)
    if leaves.any():
        first = np.where(leaves, outside.argmax(axis=0), 0)
        column = np.arange(lanes.size)
        dry = x[first, column] > 1.0
        limit = np.where(dry, 1.0, 0.0)
        before = np.where(first > 0, y[np.maximum(first - 1, 0), column], y_a + 1e-9 * (y_b - y_a))
        root = bracketed_root(
            lambda at: quality(at[None, :])[0] - limit,
            np.where(leaves, before, y_a),
            np.where(leaves, y[first, column], y_a),
        )
        y_b = np.where(leaves, root, y_b)
        solution = solve(slopes, y_a, y_b, initial)
    h = solution.last[0]
    short = ~leaves & (np.abs(y_b - goal[lanes]) > 1e-12)
    bad = ~solution.converged | ~np.isfinite(h) | (short & (np.abs(y_b - y_a) <= LEAST))
    end = flash(model, {"p": np.exp(y_b), "h": h})
    front.y[lanes], front.h[lanes] = y_b, np.where(bad, np.nan, h)
    front.T[lanes] = end.T
    front.v[lanes] = end.v
    front.x[lanes] = np.where(leaves, np.where(dry, 1.0, 0.0), end.x)
    front.open[lanes] = (leaves | short) & ~bad
    front.into_dome[lanes] = short
    return Segment(
        DomeCurve(solution), take_points(start, lanes), take_points(start, lanes), lanes=lanes, region="dome"
    )


def _points_at(model: Model, front: _Front) -> Points:
    """The points at which the next stretches begin; saturated where a lane has met the boundary."""
    p = np.exp(front.y)
    edge = (front.x == 0.0) | (front.x == 1.0)
    points = flash(model, {"p": p, "h": front.h})
    if edge.any():
        lanes = np.flatnonzero(edge)
        points = replace_points(points, lanes, flash(model, {"p": p[lanes], "x": front.x[lanes]}))
    front.T[edge], front.v[edge] = points.T[edge], points.v[edge]
    return points


def _with_end(segments: list[Segment], front: _Front, end: Place) -> list[Segment]:
    """Give every stretch its end: the start of the next stretch in the same lanes, or the end of the leg."""
    finished: list[Segment] = []
    following = end.points
    for segment in reversed(segments):
        assert segment.lanes is not None
        b = take_points(following, segment.lanes)
        finished.append(Segment(segment.family, segment.a, b, own=True, lanes=segment.lanes, region=segment.region))
        following = replace_points(following, segment.lanes, segment.a)
    return finished[::-1]
