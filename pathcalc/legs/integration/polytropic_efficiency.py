"""Adiabatic curves of constant polytropic (small-stage) efficiency: dh = c v dp.

c is 1/eta_p in compression and eta_p in expansion. With k = c - 1 and y = ln p, in one phase

    dT/dy = p [k v (dp/dv)_T - T (dp/dT)_v]/D      dv/dy = p [c_v - k v (dp/dT)_v]/D
    D = c_v (dp/dv)_T - T (dp/dT)_v^2

(from dh = T ds + v dp and T ds = c_v dT + T (dp/dT)_v dv), and dh/dy = c p v inside the dome. Both are solved
by collocation at the nodes of the 15-point Kronrod rule on equal panels of ln p.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, fields
from functools import lru_cache

import numpy as np
from numpy.polynomial import legendre
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium.saturation import saturation_at_p
from pathcalc.legs.integration.families import Coordinate, Ends, Family, Lanes, Nodes
from pathcalc.legs.integration.quadrature import GAUSS_WEIGHTS, KRONROD_WEIGHTS, NODES, over_nodes
from pathcalc.legs.integration.saturation_line import Side, side_of

PANELS = 4
ITERATIONS = 60
TOLERANCE = 2e-13
ACCURACY = 2e-12
"""Relative accuracy asked of the end of a stretch; a rougher one is taken in shorter stretches."""

Slopes = Callable[[Array, Array], Array]
"""From y = ln p (nodes, n) and unknowns (m, nodes, n) to their slopes by y, (m, nodes, n)."""


@lru_cache(maxsize=1)
def _integration_matrix() -> tuple[Array, Array]:
    """Integrals of the Lagrange polynomials of the nodes from 0 to each node, and barycentric weights."""
    z = 2.0 * NODES - 1.0
    size = z.size
    vandermonde = legendre.legvander(z, size - 1)
    integrals = np.empty((size, size))
    for k in range(size):
        unit = np.zeros(size)
        unit[k] = 1.0
        integrals[:, k] = legendre.legval(z, legendre.legint(unit, lbnd=-1)) / 2.0
    matrix = np.linalg.solve(vandermonde.T, integrals.T).T
    gaps = z[:, None] - z[None, :]
    np.fill_diagonal(gaps, 1.0)
    weights: Array = 1.0 / gaps.prod(axis=1)
    return np.asarray(matrix, dtype=np.float64), weights


def _accumulate(matrix: Array, values: Array) -> Array:
    """``matrix`` applied to the nodes of ``values`` (nodes, n), one term after the other in every lane."""
    total: Array = matrix[:, :1] * values[0]
    for j in range(1, values.shape[0]):
        total = total + matrix[:, j : j + 1] * values[j]
    return total


@dataclass(frozen=True)
class Solution:
    """Values of m unknowns along y = ln p from ``y_a`` to ``y_b`` (n,): nodes (m, PANELS, 15, n), ends (m, n).

    ``first`` and ``last`` are the values at the two ends.

    ``error`` (m, n) is the estimate of the end values; ``converged`` (n,).
    """

    y_a: Array
    y_b: Array
    values: Array
    last: Array
    error: Array
    converged: NDArray[np.bool_]
    first: Array

    @property
    def rough(self) -> NDArray[np.bool_]:
        """Lanes whose end values are not accurate to ACCURACY, or that did not converge."""
        with np.errstate(invalid="ignore"):
            accurate = np.all(self.error <= ACCURACY * np.abs(self.last), axis=0)
        return np.asarray(~(self.converged & accurate), dtype=np.bool_)

    def replaced(self, lanes: Lanes, by: Solution) -> Solution:
        """A copy in which the given lanes are those of ``by``."""
        changed = {}
        for item in fields(self):
            values = getattr(self, item.name).copy()
            values[..., lanes] = getattr(by, item.name)
            changed[item.name] = values
        return Solution(**changed)

    @property
    def first_volume(self) -> Array:
        """The second unknown (v, where the unknowns are T and v) at ``y_a``, (n,)."""
        volume: Array = self.first[1]
        return volume

    def at(self, y: Array, lanes: Lanes) -> Array:
        """Unknowns (m, nodes, k) at ``y`` (nodes, k) of ``lanes`` (k,), by barycentric interpolation."""
        span = (self.y_b - self.y_a)[lanes]
        with np.errstate(divide="ignore", invalid="ignore"):
            x = np.where(span != 0.0, (y - self.y_a[lanes]) / span, 0.0) * PANELS
        panel = np.clip(np.floor(np.nan_to_num(x)), 0, PANELS - 1).astype(np.intp)
        local = x - panel
        weights = _integration_matrix()[1]
        top = np.zeros((self.values.shape[0], *y.shape))
        bottom = np.zeros(y.shape)
        for j in range(NODES.size):
            gap = local - NODES[j]
            gap = np.where(gap == 0.0, 1e-300, gap)
            share = weights[j] / gap
            top = top + share * self.values[:, panel, j, lanes]
            bottom = bottom + share
        result: Array = top / bottom
        return result


def solve(slopes: Slopes, y_a: Array, y_b: Array, start: Array) -> Solution:
    """Solve du/dy = slopes(y, u) from ``start`` (m, n) at ``y_a`` to ``y_b`` (n,), lane by lane."""
    matrix, _ = _integration_matrix()
    unknowns, lanes = start.shape
    width = (y_b - y_a) / PANELS
    values = np.empty((unknowns, PANELS, NODES.size, lanes))
    error = np.zeros_like(start)
    converged = np.ones(lanes, dtype=bool)
    here = start
    rate = slopes(y_a[None, :], here[:, None, :])
    for panel in range(PANELS):
        y = y_a + width * (panel + NODES[:, None])
        guess = here[:, None, :] + rate[:, -1:, :] * width * NODES[:, None]
        done = np.zeros(lanes, dtype=bool)
        for _ in range(ITERATIONS):
            rate = slopes(y, guess)
            better = here[:, None, :] + np.stack([_accumulate(matrix, r) for r in rate]) * width
            size = np.abs(here)[:, None, :]
            change = (np.abs(better - guess) > TOLERANCE * size).any(axis=(0, 1))
            guess = np.where(done, guess, better)
            done |= ~change
            if done.all():
                break
        converged &= done & np.isfinite(guess).all(axis=(0, 1))
        rate = slopes(y, guess)
        values[:, panel] = guess
        end = np.stack([over_nodes(KRONROD_WEIGHTS[:, None] * r) for r in rate]) * width
        low = np.stack([over_nodes(GAUSS_WEIGHTS[:, None] * r) for r in rate]) * width
        error += 4.0 * np.abs(end - low)
        here = here + end
    return Solution(y_a, y_b, values, here, error, converged, start)


def one_phase_slopes(model: Model, factor: Array) -> Slopes:
    """Slopes of (T, v) in one phase; ``factor`` c (n,)."""
    k = factor - 1.0

    def slopes(y: Array, unknown: Array) -> Array:
        T, v = unknown
        with np.errstate(invalid="ignore", over="ignore", divide="ignore"):
            t = thermal(model, T, v)
            p = np.exp(y)
            D = t.cv * t.p_v - T * t.p_T * t.p_T
            dT = p * (k * v * t.p_v - T * t.p_T) / D
            dv = p * (t.cv - k * v * t.p_T) / D
        return np.stack([dT, dv])

    return slopes


def dome_slopes(model: Model, factor: Array) -> Slopes:
    """Slope of h inside the dome; ``factor`` c (n,). The saturated states of one set of nodes are kept."""
    kept: list[tuple[Array, Side, Side]] = []

    def slopes(y: Array, unknown: Array) -> Array:
        if not kept or kept[0][0] is not y:
            sat = saturation_at_p(model, np.exp(y).reshape(-1))
            sides = (side_of(model, sat, vapour) for vapour in (False, True))
            liquid, vapour = (Side(*(a.reshape(y.shape) for a in side)) for side in sides)
            kept[:] = [(y, liquid, vapour)]
        _, liquid, vapour = kept[0]
        quality = (unknown[0] - liquid.h) / (vapour.h - liquid.h)
        v = liquid.v + quality * (vapour.v - liquid.v)
        return np.asarray((factor * np.exp(y) * v)[None])

    return slopes


@dataclass(frozen=True)
class OnePhaseCurve:
    """The one-phase stretch of such a curve, ln p linear in x; ``solution`` holds T and v, ``factor`` c."""

    solution: Solution
    factor: Array

    @property
    def coordinate(self) -> Coordinate:
        """See :class:`Family`."""
        return "p"

    @property
    def level_in_dome(self) -> bool:
        """See :class:`Family`."""
        return False

    def nodes(self, model: Model, ends: Ends, x: Array, lanes: Lanes) -> Nodes:
        """See :class:`Family`."""
        y_a, y_b = self.solution.y_a[lanes], self.solution.y_b[lanes]
        y = y_a + x * (y_b - y_a)
        T, v = self.solution.at(y, lanes)
        dT, dv = one_phase_slopes(model, self.factor[lanes])(y, np.stack([T, v]))
        return Nodes(T, v, dT * (y_b - y_a), dv * (y_b - y_a))

    def mismatch(self, side: Side, lanes: Lanes | None) -> Array:
        """See :class:`Family`; the curve is cut while it is solved, not afterwards."""
        return np.ones_like(side.T)

    def dome_volume(self, liquid: Side, vapour: Side, lanes: Lanes) -> Array:
        """See :class:`Family`."""
        raise AssertionError("this stretch lies in one phase")

    def middle(self, model: Model, ends: Ends, lanes: Lanes) -> dict[str, Array]:
        """See :class:`Family`."""
        return {"T": ends.T_a, "v": ends.v_a}


def end_mismatch(model: Model, curve: Family, ends: Ends, lanes: Lanes) -> Array:
    """What the integrals along a curve owe to its ends being solved for, in the order of QUANTITIES, (7, k).

    A curve ends where its equation was solved to, which need not be the end state to the last digit.
    """
    nodes = curve.nodes(model, ends, np.array([0.0, 1.0])[:, None] + np.zeros(lanes.size), lanes)
    total = np.zeros((7, lanes.size))
    for k, (T, v) in enumerate(((ends.T_a, ends.v_a), (ends.T_b, ends.v_b))):
        t = thermal(model, T, v)
        dT, dv = 2.0 * np.abs(nodes.T[k] - T), 2.0 * np.abs(nodes.v[k] - v)
        if k == 1 and isinstance(curve, OnePhaseCurve):
            dT, dv = dT + curve.solution.error[0, lanes], dv + curve.solution.error[1, lanes]
        heat = t.cv * dT + T * t.p_T * dv
        push = v * (t.p_T * dT + np.abs(t.p_v) * dv)
        p_dv = t.p * dv
        total += np.stack([heat / T, heat + p_dv, heat + push, p_dv, push, heat, (heat + push) / T])
    return total


@dataclass(frozen=True)
class DomeCurve:
    """The stretch of such a curve inside the dome; ``solution`` holds h."""

    solution: Solution

    @property
    def coordinate(self) -> Coordinate:
        """See :class:`Family`."""
        return "p"

    @property
    def level_in_dome(self) -> bool:
        """See :class:`Family`."""
        return False

    def nodes(self, model: Model, ends: Ends, x: Array, lanes: Lanes) -> Nodes:
        """See :class:`Family`."""
        raise AssertionError("this stretch lies in the dome")

    def mismatch(self, side: Side, lanes: Lanes | None) -> Array:
        """See :class:`Family`."""
        return np.ones_like(side.T)

    def dome_volume(self, liquid: Side, vapour: Side, lanes: Lanes) -> Array:
        """See :class:`Family`."""
        (h,) = self.solution.at(np.log(liquid.p), lanes)
        v: Array = liquid.v + (h - liquid.h) / (vapour.h - liquid.h) * (vapour.v - liquid.v)
        return v

    def middle(self, model: Model, ends: Ends, lanes: Lanes) -> dict[str, Array]:
        """See :class:`Family`."""
        return {"T": ends.T_a, "v": ends.v_a}
