"""The vapour-liquid boundary of a model as a table, and where a path meets it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from pathcalc.equations.contract import Array, Model
from pathcalc.equations.properties import thermal
from pathcalc.equilibrium.saturation import NEAR_CRITICAL, Saturation, saturation_at_T
from pathcalc.legs.integration.bracket import bracketed_root

POINTS = 96
MARGIN = 1e-9
"""A cut closer to an end of a path than this part of it is left out."""


class Side(NamedTuple):
    """Saturated states on one side of the dome; arrays of one shape, molar SI. ``dp_dT`` by Clapeyron."""

    T: Array
    p: Array
    v: Array
    s: Array
    h: Array
    u: Array
    dp_dT: Array


@dataclass(frozen=True)
class Cuts:
    """Where the paths of n lanes meet the boundary, up to K times each, in order along the path.

    ``progress`` (K, n) is the coordinate of the cut, infinite where there is none; ``T``, ``p``, ``v`` the
    state there; ``count`` (n,) the number of cuts of each lane.
    """

    progress: Array
    T: Array
    p: Array
    v: Array
    vapour: NDArray[np.bool_]
    count: NDArray[np.intp]


def side_of(model: Model, sat: Saturation, vapour: bool) -> Side:
    """The saturated liquid or vapour of ``sat`` with its entropy, enthalpy and internal energy."""
    v = sat.v_vapour if vapour else sat.v_liquid
    state = thermal(model, sat.T, v)
    return Side(sat.T, sat.p, v, state.s, state.h, state.u, sat.dp_dT)


class SaturationLine:
    """Saturated states from the triple point to the critical point, denser towards the latter."""

    def __init__(self, model: Model) -> None:
        self.model = model
        low = model.T_triple * (1.0 + 1e-9)
        knee = low + 0.9 * (model.T_c - low)
        far = np.linspace(low, knee, POINTS // 2, endpoint=False)
        near = model.T_c - (model.T_c - knee) * np.geomspace(1.0, 1e-6, POINTS // 2)
        T = np.concatenate([far, near])
        sat = saturation_at_T(model, T)
        known = sat.reason == 0
        T = T[known]
        sat = saturation_at_T(model, T)
        self.T_low = float(T[0])
        self.liquid = self._closed(side_of(model, sat, False))
        self.vapour = self._closed(side_of(model, sat, True))

    def _closed(self, side: Side) -> Side:
        T_c, v_c = np.array([self.model.T_c]), np.array([self.model.v_c])
        state = thermal(self.model, T_c, v_c)
        last = Side(T_c, state.p, v_c, state.s, state.h, state.u, state.p_T)
        return Side(*(np.concatenate([a, b]) for a, b in zip(side, last, strict=True)))

    def temperature(self, log_p: Array) -> Array:
        """Saturation temperature read off the table (1/T linear in ln p); NaN below the triple point."""
        table = self.vapour
        return np.asarray(1.0 / np.interp(log_p, np.log(table.p), 1.0 / table.T, left=np.nan))

    def cuts(
        self,
        lanes: int,
        mismatch: Callable[[Side, NDArray[np.intp] | None], Array],
        progress: Callable[[Side, NDArray[np.intp]], Array],
        inside: Callable[[Side, Side, NDArray[np.intp]], Array],
        parity: NDArray[np.int8],
    ) -> Cuts:
        """Cuts of the paths with the boundary.

        ``mismatch(side, lane)`` is zero where the boundary meets the path of a lane: arrays (G, 1) of a side
        against all lanes when ``lane`` is None, else arrays (k,) against those lanes. ``progress`` is the
        coordinate of a boundary state along the path; ``parity`` is that of :func:`sorted_cuts`. Where a path
        passes the critical point itself, no saturated state lies on it in floating point: it is cut at the last
        temperature that has a saturation, at the overall volume that ``inside`` gives there.
        """
        found: list[tuple[NDArray[np.intp], Array, Side, bool]] = []
        for vapour, table in ((False, self.liquid), (True, self.vapour)):
            column = Side(*(a[:, None] for a in table))
            miss = np.broadcast_to(mismatch(column, None), (table.T.size, lanes))
            change = np.signbit(miss[:-1]) != np.signbit(miss[1:])
            cell, lane = np.nonzero(change & np.isfinite(miss[:-1]) & np.isfinite(miss[1:]))
            if lane.size == 0:
                continue
            side = self._refine(vapour, table.T[cell], table.T[cell + 1], lane.astype(np.intp), mismatch)
            side = self._at_critical_point(side, cell == table.T.size - 2, lane.astype(np.intp), inside)
            along = progress(side, lane.astype(np.intp))
            keep = np.isfinite(along)
            kept = Side(*(a[keep] for a in side))
            found.append((lane[keep].astype(np.intp), along[keep], kept, vapour))
        return sorted_cuts(lanes, found, parity)

    def _refine(
        self,
        vapour: bool,
        low: Array,
        high: Array,
        lane: NDArray[np.intp],
        mismatch: Callable[[Side, NDArray[np.intp] | None], Array],
    ) -> Side:
        """Boundary states at the zeros of the mismatch between ``low`` and ``high``."""

        def at(T: Array) -> Side:
            return side_of(self.model, saturation_at_T(self.model, T), vapour)

        def miss(T: Array) -> Array:
            return np.broadcast_to(mismatch(at(T), lane), T.shape)

        return at(bracketed_root(miss, low, np.minimum(high, self._ceiling)))

    @property
    def _ceiling(self) -> float:
        """The highest temperature at which saturation is solved for."""
        return self.model.T_c * (1.0 - 2.0 * NEAR_CRITICAL)

    def _at_critical_point(
        self,
        side: Side,
        last_cell: NDArray[np.bool_],
        lane: NDArray[np.intp],
        inside: Callable[[Side, Side, NDArray[np.intp]], Array],
    ) -> Side:
        lost = np.isnan(side.T) & last_cell
        if not lost.any():
            return side
        sat = saturation_at_T(self.model, np.full(int(lost.sum()), self._ceiling))
        liquid, gas = side_of(self.model, sat, False), side_of(self.model, sat, True)
        v = inside(liquid, gas, lane[lost])
        x = np.clip((v - liquid.v) / (gas.v - liquid.v), 0.0, 1.0)
        merged = [np.array(a) for a in side]
        for k, (low, high) in enumerate(zip(liquid, gas, strict=True)):
            merged[k][lost] = (1.0 - x) * low + x * high
        return Side(*merged)


def sorted_cuts(lanes: int, found: list[tuple[NDArray[np.intp], Array, Side, bool]], parity: NDArray[np.int8]) -> Cuts:
    """Cuts of all lanes from lists of (lanes, coordinates, states, vapour or liquid), in order along each path.

    A cut within MARGIN of an end is taken only where the phases of the ends ask for it: ``parity`` (n,) is 1 where
    one end lies inside the dome and the other outside, 0 where both lie on the same side, -1 where an end is itself
    a saturated state.
    """
    count = np.zeros(lanes, dtype=np.intp)
    if not found:
        empty = np.empty((0, lanes))
        return Cuts(empty, empty, empty, empty, np.empty((0, lanes), dtype=bool), count)
    lane = np.concatenate([item[0] for item in found])
    along = np.concatenate([item[1] for item in found])
    keep = (along > MARGIN) & (along < 1.0 - MARGIN)
    np.add.at(count, lane[keep], 1)
    from_end = np.minimum(np.abs(along), np.abs(along - 1.0))
    for k in np.flatnonzero(~keep & (from_end <= MARGIN))[np.argsort(from_end[~keep & (from_end <= MARGIN)])]:
        here = lane[k]
        if parity[here] >= 0 and count[here] % 2 != parity[here]:
            keep[k] = True
            count[here] += 1
    T, p, v = (np.concatenate([getattr(item[2], key) for item in found]) for key in ("T", "p", "v"))
    vapour = np.concatenate([np.full(item[0].size, item[3]) for item in found])
    kept = np.flatnonzero(keep)
    order = kept[np.lexsort((along[kept], lane[kept]))]
    column = lane[order]
    row = np.arange(column.size) - np.searchsorted(column, column)

    def table(values: Array, empty: float) -> Array:
        filled = np.full((int(count.max(initial=0)), lanes), empty)
        filled[row, column] = values[order]
        return filled

    return Cuts(
        table(along, np.inf),
        table(T, np.nan),
        table(p, np.nan),
        table(v, np.nan),
        table(vapour.astype(float), 0.0) > 0.5,
        count,
    )
