"""What a state diagram shows, as numbers in the case's units: before it is laid out on a sheet."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from pathcalc.path.steps import Curve
from pathcalc.report.context import Context, pick
from pathcalc.report.drawing.scale import Scale, limits

Array = NDArray[np.float64]

AXES = {"T-s": ("s", "T"), "p-v": ("v", "p"), "p-h": ("h", "p"), "h-s": ("s", "h")}
"""Diagram name → (abscissa, ordinate)."""
KINDS = {"T": "T", "p": "dp", "v": "v", "h": "e", "s": "s"}
"""Kinds of the axes; pressure always absolute, since a gauge pressure has no logarithm."""
ISOLINES = {"T-s": "p", "h-s": "p", "p-h": "T", "p-v": "T"}
"""Diagram name → what the thin lines through the states hold."""
QUALITIES = (0.2, 0.4, 0.6, 0.8)

_LOG_FROM = {"p-h": 1.02, "p-v": 12.0}
"""Ratio of the ends of a p or v axis from which it is logarithmic. p–h diagrams have a logarithmic p axis in the
trade; p–v diagrams a linear one where areas can be read as work. Common practice, no source."""
_OTHERS_REACH = 0.12


@dataclass(frozen=True)
class Line:
    """A line in values of the axes (n, 2); ``two_phase`` holds the stretches inside the dome."""

    points: Array
    two_phase: tuple[Array, ...] = ()


@dataclass(frozen=True)
class Leg:
    """The line of a leg. ``states`` is False where it is no row of states; ``way`` is the way of integration then,

    where that is another line.
    """

    line: Line
    states: bool = True
    way: Array | None = None


class Plane:
    """The contents of one diagram of a solution."""

    def __init__(self, ctx: Context, name: str) -> None:
        self.ctx, self.name = ctx, name
        self.x, self.y = AXES[name]
        self.points = np.array([[self._number(key, s[key]) for key in (self.x, self.y)] for s in ctx.states])
        self._curves = list(ctx.solution.curves)
        self.dome, self.critical, self.qualities = self._dome()
        self.scales = self._scales(self._window())
        self.legs = [self._leg(i, curve) for i, curve in enumerate(self._curves)]
        self.others = self._others()
        self.scales = self._scales(self._window(self._near_others()))
        self.dome_shown = self.in_view(self.dome)
        self.isolines = self._isolines()

    # values

    def _number(self, key: str, si: Any) -> Any:
        scale = self.ctx.units[KINDS[key]]
        if si is None:
            return np.nan
        return np.asarray(si, dtype=float) * scale.factor + scale.offset

    def _of(self, record: Any) -> Array:
        return np.column_stack([np.ravel(self._number(key, getattr(record, key))) for key in (self.x, self.y)])

    def _line(self, pieces: Iterable[Any]) -> Line:
        parts = [(str(piece.phase), self._of(piece)) for piece in pieces]
        whole = np.concatenate([part for _, part in parts]) if parts else np.empty((0, 2))
        return Line(
            whole[np.isfinite(whole).all(axis=1)],
            tuple(part for phase, part in parts if "two" in phase),
        )

    def _leg(self, i: int, curve: Curve) -> Leg:
        line = self._line(curve.pieces)
        if curve.states or curve.steps < 2:
            return Leg(line, curve.states)
        ends = self.points[[self.start_of(i), self.end_of(i)]]
        return Leg(Line(self._chord(ends)), False, line.points)

    def _chord(self, ends: Array) -> Array:
        """A straight line on the sheet between two states, even where an axis is logarithmic."""
        f = np.linspace(0.0, 1.0, 33)
        columns = []
        for (a, b), scale in zip(ends.T, self.scales, strict=True):
            log = scale.log and a > 0 and b > 0
            columns.append(a * (b / a) ** f if log else a + f * (b - a))
        return np.column_stack(columns)

    def start_of(self, i: int) -> int:
        """The index of the state that leg ``i`` begins at."""
        return self.ctx.state_number(self.ctx.legs[i]["from"]) - 1

    def end_of(self, i: int) -> int:
        """The index of the state that leg ``i`` ends at."""
        return self.ctx.state_number(self.ctx.legs[i]["to"]) - 1

    def _dome(self) -> tuple[Array | None, Array | None, list[Array]]:
        dome = self.ctx.solution.dome
        if dome is None:
            return None, None, []

        def side(key: str, quality: float) -> Array:
            if key in "Tp":
                return np.asarray(self._number(key, getattr(dome, key)))
            low, high = getattr(dome, f"{key}_l"), getattr(dome, f"{key}_v")
            return np.asarray(self._number(key, low + quality * (high - low)))

        keys = (self.x, self.y)
        top = np.array([[float(self._number(key, getattr(dome, f"{key}_c"))) for key in keys]])
        left, right = (np.column_stack([side(key, q) for key in keys]) for q in (0.0, 1.0))
        lines = [np.column_stack([side(key, q) for key in keys]) for q in QUALITIES] if self.two_phase else []
        return np.concatenate([left, top, right[::-1]]), top[0], lines

    @property
    def two_phase(self) -> bool:
        """Whether a leg runs through the two-phase region, or a state lies in it."""
        return any("two" in str(piece.phase) for c in self._curves for piece in c.pieces)

    # window

    def _window(self, more: Array | None = None) -> Array:
        parts = [self.points, *(self._line(c.pieces).points for c in self._curves)]
        if self.dome is not None and self._touches_dome():
            dome = self.ctx.solution.dome
            lowest = min(float(np.nanmin(piece.p)) for c in self._curves for piece in c.pieces if piece.p.size)
            keep = np.asarray(dome.p) >= lowest  # type: ignore[union-attr]
            parts.append(self.dome[np.concatenate([keep, [True], keep[::-1]])])
        if more is not None:
            parts.append(more)
        values = np.concatenate(parts)
        known: Array = values[np.isfinite(values).all(axis=1)]
        return known

    def _touches_dome(self) -> bool:
        phases = [str(piece.phase) for c in self._curves for piece in c.pieces]
        return any("liquid" in phase or "two" in phase for phase in phases)

    def _scales(self, window: Array) -> tuple[Scale, Scale]:
        found = []
        for axis, key in enumerate((self.x, self.y)):
            values = window[:, axis]
            reach = _LOG_FROM.get(self.name, np.inf) if key in "pv" else np.inf
            log = bool(values.size and values.min() > 0 and values.max() / values.min() > reach)
            found.append(Scale(*limits(values, log), log))
        return found[0], found[1]

    def _near_others(self) -> Array:
        """The points of other equations' paths that widen the window a little, not those far out of it."""
        points = [line for _, lines in self.others for line in lines if len(line)]
        if not points:
            return np.empty((0, 2))
        cloud = np.concatenate(points)
        near = np.ones(len(cloud), dtype=bool)
        for axis, scale in enumerate(self.scales):
            places = scale(cloud[:, axis])
            near &= (places > -_OTHERS_REACH) & (places < 1.0 + _OTHERS_REACH)
        return cloud[near]

    def in_view(self, points: Array | None) -> bool:
        """Whether any of the points lies within the axes."""
        if points is None or not len(points):
            return False
        places = np.column_stack([scale(points[:, axis]) for axis, scale in enumerate(self.scales)])
        return bool(np.any(((places > 0.0) & (places < 1.0)).all(axis=1)))

    # further lines

    def _others(self) -> list[tuple[str, list[Array]]]:
        found: Mapping[str, Any] = pick(self.ctx.solution, "others", {})
        drawn = []
        for equation, other in found.items():
            if isinstance(other, str):
                continue
            lines = [
                self._line(curve.pieces).points
                if curve.states or curve.steps < 2
                else self._ends(self._line(curve.pieces).points)
                for curve in other.curves
            ]
            drawn.append((equation, lines))
        return drawn

    def _ends(self, points: Array) -> Array:
        return self._chord(points[[0, -1]]) if len(points) > 1 else points

    def _isolines(self) -> list[tuple[float, Array]]:
        key = ISOLINES[self.name]
        return [
            (float(self._number(key, line.value)), self._line(line.pieces).points)
            for line in pick(self.ctx.solution, "isolines", ())
            if line.key == key
        ]
