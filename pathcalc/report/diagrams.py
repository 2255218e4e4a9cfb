"""State diagrams as deterministic SVG: the legs' own curves, numbered states, arrows, the two-phase region.

Drawn with figure objects alone (no global plotting state), text as outlines of the font that ships with the
drawing library, a fixed salt for identifiers and no date, so that the same results give the same bytes.
"""

from __future__ import annotations

import io
from typing import Any

import numpy as np
from numpy.typing import NDArray

from pathcalc.report import diagram_labels, svg
from pathcalc.report.context import Context
from pathcalc.report.numbers import short
from pathcalc.report.textsafe import clean
from pathcalc.report.words import SYMBOLS, say

AXES = {"T-s": ("s", "T"), "p-v": ("v", "p"), "p-h": ("h", "p"), "h-s": ("s", "h")}
"""Diagram name → (abscissa, ordinate)."""

_KINDS = {"T": "T", "p": "dp", "v": "v", "h": "e", "s": "s"}
"""Kinds of the axes; pressure always absolute, since a gauge pressure has no logarithm."""

COLOURS = ("#1f4e8c", "#b3471d", "#0f7a6c", "#7a3b86", "#6f6212", "#4a5560")
"""Six inks, at least 4.5 to 1 against white, apart in lightness and in the red–green dimension."""
DASHES: tuple[Any, ...] = (
    "-",
    (0, (6, 2)),
    (0, (2, 1.4)),
    (0, (7, 2, 1.5, 2)),
    (0, (4, 1.4, 1, 1.4, 1, 1.4)),
)
_INK, _GRID, _DOME = "#1c242c", "#d5dade", "#5b6670"
_WIDTH, _AXES_HEIGHT = 7.0, 3.9
_LEFT, _RIGHT, _TOP, _BOTTOM = 0.82, 0.18, 0.14, 0.56
_ROW, _MOST_NAMED = 0.19, 18
_LOG_FROM = 3.0
_MOST_POINTS = 160

Array = NDArray[np.float64]
_QUALITIES = (0.2, 0.4, 0.6, 0.8)


class Drawing:
    """One diagram of a solution; ``x`` and ``y`` are state keys (s, v, h; T, p, h)."""

    def __init__(self, ctx: Context, x: str, y: str) -> None:
        self.ctx = ctx
        self.x, self.y = x, y
        self.lines = [self._line(curve) for curve in ctx.solution.curves]
        self.points = [(self._scaled(x, s[x]), self._scaled(y, s[y])) for s in ctx.states]
        self.log_x, self.log_y = self._is_log(x, 0), self._is_log(y, 1)
        self.limits = (self._limits(0, self.log_x), self._limits(1, self.log_y))
        self.dome_shown = self._dome_in_view()

    # data

    def _scaled(self, key: str, si: Any) -> Any:
        scale = self.ctx.units[_KINDS[key]]
        return np.asarray(si, dtype=float) * scale.factor + scale.offset if si is not None else np.nan

    def _line(self, curve: Any) -> tuple[Array, Array]:
        xs = np.concatenate(
            [_thin(self._scaled(self.x, getattr(p, self.x)).ravel()) for p in curve.pieces] or [np.empty(0)]
        )
        ys = np.concatenate(
            [_thin(self._scaled(self.y, getattr(p, self.y)).ravel()) for p in curve.pieces] or [np.empty(0)]
        )
        good = np.isfinite(xs) & np.isfinite(ys)
        return xs[good], ys[good]

    def _dome(self) -> tuple[Array, Array, tuple[float, float]] | None:
        dome = self.ctx.solution.dome
        if dome is None:
            return None
        sides = []
        for key in (self.x, self.y):
            low = getattr(dome, key if key in "Tp" else f"{key}_l")
            high = getattr(dome, key if key in "Tp" else f"{key}_v")
            top = getattr(dome, f"{key}_c")
            sides.append(self._scaled(key, np.concatenate([low, [top], high[::-1]])))
        critical = (float(self._scaled(self.x, getattr(dome, f"{self.x}_c"))),
                    float(self._scaled(self.y, getattr(dome, f"{self.y}_c"))))  # fmt: skip
        return sides[0], sides[1], critical

    def _quality_lines(self) -> list[tuple[Array, Array]]:
        """Lines of constant quality, where a leg passes through the two-phase region."""
        dome = self.ctx.solution.dome
        if dome is None or not self._two_phase():
            return []

        def at(key: str, quality: float) -> Array:
            if key in "Tp":
                return np.asarray(self._scaled(key, getattr(dome, key)))
            low, high = getattr(dome, f"{key}_l"), getattr(dome, f"{key}_v")
            return np.asarray(self._scaled(key, low + quality * (high - low)))

        return [(at(self.x, quality), at(self.y, quality)) for quality in _QUALITIES]

    def _two_phase(self) -> bool:
        return any("two" in str(p.phase) for c in self.ctx.solution.curves for p in c.pieces)

    def _touches(self) -> bool:
        phases = [str(p.phase) for c in self.ctx.solution.curves for p in c.pieces]
        return any("liquid" in p or "two" in p for p in phases)

    def _values(self, axis: int) -> Array:
        parts = [line[axis] for line in self.lines] + [np.array([p[axis] for p in self.points], dtype=float)]
        dome = self._dome()
        if dome is not None and self._touches():
            lowest = min(float(np.nanmin(p.p)) for c in self.ctx.solution.curves for p in c.pieces if p.p.size)
            keep = np.asarray(self.ctx.solution.dome.p) >= lowest  # type: ignore[union-attr]
            mask = np.concatenate([keep, [True], keep[::-1]])
            parts.append(dome[axis][mask])
        values: Array = np.concatenate(parts)
        return np.asarray(values[np.isfinite(values)])

    def _is_log(self, key: str, axis: int) -> bool:
        values = self._values(axis)
        return key in "pv" and values.size > 0 and values.min() > 0 and values.max() / values.min() > _LOG_FROM

    def _limits(self, axis: int, log: bool) -> tuple[float, float]:
        values = self._values(axis)
        if not values.size:
            return 0.0, 1.0
        low, high = float(values.min()), float(values.max())
        if log:
            gap = 0.07 * np.log10(high / low)
            return low / 10**gap, high * 10**gap
        gap = 0.09 * (high - low)
        if gap <= 1e-9 * max(abs(low), abs(high)):
            gap = 0.05 * max(abs(low), abs(high), 1e-12)
        return low - gap, high + gap

    def _dome_in_view(self) -> bool:
        dome = self._dome()
        if dome is None:
            return False
        (x0, x1), (y0, y1) = self.limits
        return bool(np.any((dome[0] > x0) & (dome[0] < x1) & (dome[1] > y0) & (dome[1] < y1)))

    # drawing

    def svg(self, name: str, title: str, description: str) -> str:
        """The diagram as an SVG element with a title and a description; identifiers begin with ``name``."""
        import matplotlib
        from matplotlib.backends.backend_svg import FigureCanvasSVG
        from matplotlib.figure import Figure

        with matplotlib.rc_context(svg.settings()):
            rows = self._legend_rows()
            height = _TOP + _AXES_HEIGHT + _BOTTOM + rows * _ROW
            figure = Figure(figsize=(_WIDTH, height), dpi=72)
            FigureCanvasSVG(figure)
            axes = figure.add_axes(
                (
                    _LEFT / _WIDTH,
                    (_BOTTOM + rows * _ROW) / height,
                    (_WIDTH - _LEFT - _RIGHT) / _WIDTH,
                    _AXES_HEIGHT / height,
                )
            )
            self._frame(axes)
            self._draw_dome(axes)
            self._draw_legs(axes)
            self._draw_states(axes)
            if rows:
                self._legend(axes)
            out = io.StringIO()
            figure.savefig(out, format="svg", metadata={"Date": None, "Creator": None})
        return svg.finish(out.getvalue(), f"d-{name}", title, description)

    def _frame(self, axes: Any) -> None:
        axes.set_xscale("log" if self.log_x else "linear")
        axes.set_yscale("log" if self.log_y else "linear")
        axes.set_xlim(*self.limits[0])
        axes.set_ylim(*self.limits[1])
        for axis, key, log in ((axes.xaxis, self.x, self.log_x), (axes.yaxis, self.y, self.log_y)):
            svg.ticks(axis, log, short)
            unit = self.ctx.units[_KINDS[key]].unit
            if key == "p" and self.ctx.units.gauge:
                unit = say("diagrams.absolute", unit=unit)
            axis.set_label_text(f"{say(f'q.{key}')}  {SYMBOLS[key]}, {unit}", fontsize=9, color=_INK)
        axes.grid(True, which="major", color=_GRID, linewidth=0.6)
        axes.set_axisbelow(True)
        for side in ("top", "right"):
            axes.spines[side].set_visible(False)

    def _draw_dome(self, axes: Any) -> None:
        dome = self._dome()
        if dome is None or not self.dome_shown:
            return
        axes.plot(dome[0], dome[1], color=_DOME, linewidth=0.9)
        axes.fill(dome[0], dome[1], color=_DOME, alpha=0.07, linewidth=0)
        for xs, ys in self._quality_lines():
            axes.plot(xs, ys, color=_DOME, linewidth=0.45, linestyle=(0, (6, 4)))
        (x0, x1), (y0, y1) = self.limits
        cx, cy = dome[2]
        if x0 < cx < x1 and y0 < cy < y1:
            axes.plot([cx], [cy], marker="+", color=_DOME, markersize=7, linestyle="none")

    def _style(self, i: int) -> dict[str, Any]:
        return {"color": COLOURS[i % len(COLOURS)], "linestyle": DASHES[i % len(DASHES)], "linewidth": 1.7}

    def _draw_legs(self, axes: Any) -> None:
        for i, (xs, ys) in enumerate(self.lines):
            axes.plot(xs, ys, **self._style(i))
            arrow = diagram_labels.arrow(axes, xs, ys)
            if arrow is not None:
                tail, tip = arrow
                head = {"arrowstyle": "-|>", "color": COLOURS[i % len(COLOURS)], "mutation_scale": 16,
                        "linewidth": 0.0, "shrinkA": 0, "shrinkB": 0}  # fmt: skip
                axes.annotate("", xy=tip, xytext=tail, xycoords="figure pixels", arrowprops=head)

    def _draw_states(self, axes: Any) -> None:
        finite = [(i, p) for i, p in enumerate(self.points, 1) if np.isfinite(p[0]) and np.isfinite(p[1])]
        for label in diagram_labels.place(axes, self.lines, finite):
            axes.annotate(
                label.text, xy=label.at, xycoords="figure pixels", ha="center", va="center", fontsize=8.5,
                fontweight="bold", color=_INK, zorder=6,
                bbox={"boxstyle": "round,pad=0.12", "facecolor": "white", "edgecolor": "none", "alpha": 0.85},
            )  # fmt: skip
        xy = np.array([p for _, p in finite], dtype=float).reshape(-1, 2)
        axes.plot(xy[:, 0], xy[:, 1], linestyle="none", marker="o", markersize=4.6, markerfacecolor="white",
                  markeredgecolor=_INK, markeredgewidth=1.1, zorder=5)  # fmt: skip

    def _names(self) -> list[str]:
        names = []
        for leg in self.ctx.legs:
            way = f"{self.ctx.state_number(leg['from'])} → {self.ctx.state_number(leg['to'])}"
            name = svg.drawable(clean(leg["name"]))
            names.append(f"{way}  {name if len(name) <= 26 else name[:25] + '…'}")
        return names

    def _legend_columns(self) -> int:
        return 3 if max((len(n) for n in self._names()), default=0) <= 28 else 2

    def _legend_rows(self) -> int:
        entries = len(self.lines) + self.dome_shown
        return 0 if len(self.lines) > _MOST_NAMED else -(-entries // self._legend_columns())

    def _legend(self, axes: Any) -> None:
        from matplotlib.lines import Line2D

        handles = [
            Line2D([], [], label=name, **self._style(i)) for i, name in enumerate(self._names()[: len(self.lines)])
        ]
        if self.dome_shown:
            handles.append(
                Line2D(
                    [],
                    [],
                    label=say("diagrams.dome.quality" if self._two_phase() else "diagrams.dome"),
                    color=_DOME,
                    linewidth=0.9,
                )
            )
        axes.legend(handles=handles, loc="upper left", bbox_to_anchor=(0.0, -(_BOTTOM - 0.06) / _AXES_HEIGHT),
                    ncols=self._legend_columns(), fontsize=8, frameon=False, borderaxespad=0,
                    handlelength=3.4, columnspacing=1.6, labelspacing=0.45, borderpad=0)  # fmt: skip


def _thin(values: Array) -> Array:
    if values.size <= _MOST_POINTS:
        return values
    return np.asarray(values[np.linspace(0, values.size - 1, _MOST_POINTS).round().astype(int)])
